//! The configuration of every property test: one fixed seed, so that a run here fails or passes as it does anywhere.
//!
//! Nothing is kept of a failure but what the test prints; a find worth keeping is frozen as a literal beside its test.

use proptest::test_runner::{Config, RngSeed};

/// Any number would do.
const SEED: u64 = 1;

/// For `#![proptest_config(..)]`. `PROPTEST_CASES` still asks for more cases than usual.
pub fn config() -> Config {
    Config {
        rng_seed: RngSeed::Fixed(SEED),
        failure_persistence: None,
        ..Config::default()
    }
}
