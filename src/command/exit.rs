//! What the exit code says.

use std::process::ExitCode;

use crate::problem::{Problem, ProblemKind};

/// Shown under the help text.
pub const EXIT_CODES: &str = "Exit codes: 0 done; 1 done, and a trend in the direction that is not wanted needs attention;\n2 the request was wrong; 3 we failed.";

/// How the program ends.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Exit {
    /// Done.
    Done = 0,
    /// Done, and something needs attention.
    Attention = 1,
    /// The request was wrong.
    WrongRequest = 2,
    /// The fault is ours or the machine's.
    Failed = 3,
}

impl Exit {
    /// The exit code for a problem.
    pub fn of(problem: &Problem) -> Self {
        match problem.kind {
            ProblemKind::Malformed | ProblemKind::NotFound | ProblemKind::TooLarge | ProblemKind::Unsupported => {
                Exit::WrongRequest
            }
            ProblemKind::Busy | ProblemKind::Broken => Exit::Failed,
        }
    }
}

impl From<Exit> for ExitCode {
    fn from(exit: Exit) -> Self {
        ExitCode::from(exit as u8)
    }
}
