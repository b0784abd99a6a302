//! The integration tests, in one binary.

mod independent;
mod proofs;
mod properties;
mod reference;
mod support;
