//! An error as a person meets it, before it becomes an HTTP status or an exit code.

use std::fmt;

/// What sort of thing went wrong; the service maps it to a status, the command to an exit code.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ProblemKind {
    /// The request cannot be read as it stands.
    Malformed,
    /// What was asked for is not there.
    NotFound,
    /// The input is larger than the stated limit.
    TooLarge,
    /// All places are taken; the same request may succeed later.
    Busy,
    /// The request is well formed, but cannot be answered for this input.
    Unsupported,
    /// The fault is ours; nothing internal is shown.
    Broken,
}

/// One clear sentence about what went wrong, where, and what to do.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Problem {
    /// The sort of problem.
    pub kind: ProblemKind,
    /// A stable code in kebab case, listed in the OpenAPI document.
    pub code: &'static str,
    /// The sentence: what, where, and what was expected.
    pub message: String,
    /// What to do about it, if the sentence does not say so already.
    pub help: Option<String>,
    /// The parameter, cell address or position that the problem is at.
    pub place: Option<String>,
    /// The offending value, quoted as it came.
    pub value: Option<String>,
}

impl Problem {
    /// A problem with a sentence and nothing else yet.
    pub fn new(kind: ProblemKind, code: &'static str, message: impl Into<String>) -> Self {
        Problem { kind, code, message: message.into(), help: None, place: None, value: None }
    }

    /// Adds what to do.
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// Adds where it is.
    pub fn at(mut self, place: impl Into<String>) -> Self {
        self.place = Some(place.into());
        self
    }

    /// Adds the offending value.
    pub fn value(mut self, value: impl Into<String>) -> Self {
        self.value = Some(value.into());
        self
    }
}

impl fmt::Display for Problem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let stop = if self.message.ends_with(['.', '!', '?']) { "" } else { "." };
        match &self.help {
            Some(help) => write!(f, "{}{stop} {help}", self.message),
            None => f.write_str(&self.message),
        }
    }
}

impl std::error::Error for Problem {}
