//! The command line: it reads arguments, calls what computes, prints, and ends with an exit code.

mod annotate;
mod exit;
mod methods;
mod progress;
mod serve;
mod table;

use std::ffi::OsString;
use std::process::ExitCode;

use clap::{Parser, Subcommand};

pub use exit::Exit;

/// Judges whether repeated readings rise, fall or only fluctuate, beside your spreadsheet.
#[derive(Parser)]
#[command(name = "risefall", version, arg_required_else_help = true, after_help = exit::EXIT_CODES)]
struct Line {
    #[command(subcommand)]
    command: Command,
}

#[derive(Subcommand)]
enum Command {
    /// Starts the local service that cells, macros and the page ask.
    Serve(serve::Serve),
    /// Gives a workbook back with new sheets of conclusions, statistics, pairings and charts.
    Annotate(annotate::Annotate),
    /// Lists the published tests, or explains one.
    Methods(methods::Methods),
}

/// Runs the program with its arguments, its own name first.
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> ExitCode {
    let line = match Line::try_parse_from(arguments) {
        Ok(line) => line,
        Err(error) => {
            let wrong = error.use_stderr();
            let _ = error.print();
            return if wrong { Exit::WrongRequest } else { Exit::Done }.into();
        }
    };
    let result = match line.command {
        Command::Serve(serve) => serve.run(),
        Command::Annotate(annotate) => annotate.run(),
        Command::Methods(methods) => methods.run(),
    };
    match result {
        Ok(exit) => exit.into(),
        Err(problem) => {
            eprintln!("risefall: {problem}");
            Exit::of(&problem).into()
        }
    }
}
