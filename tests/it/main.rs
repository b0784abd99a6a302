//! The integration tests, in one binary.

mod cli_bad_input;
mod cli_place;
mod cli_proof;
mod independent;
mod program;
mod proofs;
mod properties;
mod reference;
mod seeded;
mod support;
mod sweep;
mod sweep_setbacks;
mod tidy;
