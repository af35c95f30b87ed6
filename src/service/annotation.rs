//! How the service hands a workbook on: the seam to whatever annotates it.

use std::path::Path;
use std::sync::Arc;

use crate::method::declaration::{Arguments, Parameter};
use crate::problem::Problem;
use crate::workbook::package_kind::PackageKind;

/// Reads the workbook at the first path and writes the annotated one to the second, as the arguments ask. It checks the
/// arguments' names and values itself.
pub type Annotator = dyn Fn(&Path, &Path, &Arguments) -> Result<AnnotatedSummary, Problem> + Send + Sync;

/// What is told of an annotated workbook beside the workbook itself.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct AnnotatedSummary {
    /// How many indicators were judged.
    pub indicators: usize,
    /// How many of them show a trend in the direction that is not wanted.
    pub attention: usize,
    /// What kind of workbook it is.
    pub kind: PackageKind,
}

/// An annotator with the parameters that it takes.
#[derive(Clone)]
pub struct Annotation {
    /// Does the work; called on a thread of its own.
    pub annotate: Arc<Annotator>,
    /// What it takes, for the OpenAPI document.
    pub parameters: Vec<Parameter>,
}
