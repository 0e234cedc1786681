//! The program: see the library's `cli`.

use std::process::ExitCode;

fn main() -> ExitCode {
    ExitCode::from(gainsay::cli::run())
}
