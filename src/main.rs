//! The restpoint program; see the library.

use std::process::ExitCode;

fn main() -> ExitCode {
    restpoint::cli::main()
}
