//! The `halfcell` program: arguments in, reports and exit status out.

use std::process::ExitCode;

fn main() -> ExitCode {
    halfcell::cli::run()
}
