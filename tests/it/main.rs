//! The integration tests: the program driven as a planner would drive it.

mod cli_bad_input;
mod cli_place;
mod cli_proof;
mod program;
mod sweep;
