//! Why a package is not annotated.

use super::tree::XmlError;
use crate::problem::{Problem, ProblemKind};

/// What is wrong with a package, or with what was asked of it.
#[derive(Debug, thiserror::Error)]
pub enum Error {
    /// The file is empty.
    #[error("the file is empty; a workbook was expected")]
    Empty,
    /// The file is no zip.
    #[error("the file is not an Excel workbook: it does not begin as .xlsx and .xlsm files do")]
    NotAZip,
    /// The file is an encrypted workbook, or one of the older binary format.
    #[error("the workbook is encrypted or of the older binary format; save it without a password as .xlsx and send that")]
    Compound,
    /// A part is encrypted.
    #[error("the part {0} is encrypted; save the workbook without a password and send that")]
    EncryptedPart(String),
    /// The zip is damaged.
    #[error("the file is damaged: {0}; open it in the spreadsheet program, let it repair the file, and save it anew")]
    Damaged(String),
    /// It is a zip, but not a workbook of the supported kind.
    #[error("the file is {0}, not an .xlsx, .xlsm, .xltx or .xltm workbook")]
    OtherKind(&'static str),
    /// Two parts of one name.
    #[error("the file holds two parts named {0}, so programs would disagree about its contents; save it anew and send that")]
    Twice(String),
    /// A limit is exceeded.
    #[error("the workbook is larger than is accepted: {what} {have}, at most {most}")]
    TooLarge { what: &'static str, have: u64, most: u64 },
    /// A part cannot be read.
    #[error("the part {part} {error}; save the workbook anew in the spreadsheet program and send that")]
    Part { part: String, error: XmlError },
    /// The structure is protected.
    #[error("the workbook's structure is protected, so no sheet may be added; unprotect it, or allow it with allow_protected")]
    Protected,
    /// A digital signature would become void.
    #[error("the workbook carries a digital signature, which any change makes void; allow it with allow_signed")]
    Signed,
    /// There is nothing to take out.
    #[error("the workbook has no sheets that were made by Risefall")]
    NothingToRemove,
    /// The sheets that were to be added cannot be read; the fault is ours.
    #[error("the new sheets could not be made: {0}")]
    Donor(String),
    /// Reading or writing failed.
    #[error("reading or writing failed: {0}")]
    Io(#[from] std::io::Error),
}

impl From<zip::result::ZipError> for Error {
    fn from(error: zip::result::ZipError) -> Self {
        match error {
            zip::result::ZipError::Io(io) if io.kind() == std::io::ErrorKind::StorageFull => Error::Io(io),
            other => Error::Damaged(other.to_string()),
        }
    }
}

impl From<Error> for Problem {
    fn from(error: Error) -> Self {
        use ProblemKind::{Broken, Malformed, TooLarge, Unsupported};
        let (kind, code) = match &error {
            Error::Empty => (Malformed, "workbook-empty"),
            Error::NotAZip | Error::OtherKind(_) => (Malformed, "workbook-kind"),
            Error::Compound | Error::EncryptedPart(_) => (Unsupported, "workbook-encrypted"),
            Error::Damaged(_) | Error::Twice(_) | Error::Part { .. } => (Malformed, "workbook-damaged"),
            Error::TooLarge { .. } => (TooLarge, "workbook-too-large"),
            Error::Protected => (Unsupported, "workbook-protected"),
            Error::Signed => (Unsupported, "workbook-signed"),
            Error::NothingToRemove => (Unsupported, "workbook-not-annotated"),
            Error::Donor(_) | Error::Io(_) => (Broken, "workbook-write"),
        };
        Problem::new(kind, code, error.to_string())
    }
}
