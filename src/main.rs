//! The program: arguments, a command, an exit code.

#![forbid(unsafe_code)]

use std::process::ExitCode;

fn main() -> ExitCode {
    risefall::command::run(std::env::args_os())
}
