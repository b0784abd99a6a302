//! The program `roundstead`: its command line.

use std::process::ExitCode;

fn main() -> ExitCode {
    roundstead::cli::run(std::env::args_os())
}
