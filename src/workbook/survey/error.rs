//! Why a workbook cannot be read.

use crate::problem::{Problem, ProblemKind};

/// What went wrong while reading a workbook.
#[derive(Debug, thiserror::Error)]
pub enum Error {
    /// The file is empty.
    #[error("the file is empty; a workbook or a text table was expected")]
    Empty,
    /// The file's kind is not known.
    #[error("the file is neither a workbook (.xlsx, .xlsm, .xltx, .xltm, .xls, .xlsb, .ods) nor a text table (.csv, .tsv)")]
    Kind,
    /// The workbook is encrypted.
    #[error("the workbook is encrypted; save it without a password and send that")]
    Encrypted,
    /// The cells cannot be read; what the file is.
    #[error("the cells of the {0} cannot be read; open it in the spreadsheet program, save it anew, and send that")]
    Unreadable(&'static str),
    /// There are more cells than are accepted.
    #[error("the workbook has more than {0} filled cells, which is more than is accepted")]
    TooManyCells(usize),
    /// Reading failed.
    #[error("reading failed: {0}")]
    Io(#[from] std::io::Error),
}

impl From<Error> for Problem {
    fn from(error: Error) -> Self {
        let (kind, code) = match &error {
            Error::Empty => (ProblemKind::Malformed, "workbook-empty"),
            Error::Kind => (ProblemKind::Malformed, "workbook-kind"),
            Error::Encrypted => (ProblemKind::Unsupported, "workbook-encrypted"),
            Error::Unreadable(_) => (ProblemKind::Malformed, "workbook-damaged"),
            Error::TooManyCells(_) => (ProblemKind::TooLarge, "workbook-too-large"),
            Error::Io(_) => (ProblemKind::Broken, "workbook-read"),
        };
        Problem::new(kind, code, error.to_string())
    }
}
