//! A probability and how it was got.

use std::fmt;

/// How a probability was got.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum By {
    /// From the exact null distribution.
    Exact,
    /// From the named approximation.
    Approximation(&'static str),
}

impl By {
    /// The normal approximation with continuity correction.
    pub const NORMAL: By = By::Approximation("normal, continuity-corrected");
}

impl fmt::Display for By {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            By::Exact => "exact",
            By::Approximation(name) => name,
        })
    }
}

/// A p-value with its origin.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Probability {
    /// Between 0 and 1.
    pub value: f64,
    /// How it was got.
    pub by: By,
}

impl Probability {
    /// An exact probability.
    pub fn exact(value: f64) -> Self {
        Probability { value: value.min(1.0), by: By::Exact }
    }
}

/// The two tails of an observed statistic, the observed value included in both.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tails {
    /// The chance of a statistic at most as large: evidence for falling.
    pub lower: f64,
    /// The chance of a statistic at least as large: evidence for rising.
    pub upper: f64,
}

impl Tails {
    /// The two-sided p: twice the smaller tail, at most 1.
    pub fn doubled(self) -> f64 {
        (2.0 * self.lower.min(self.upper)).min(1.0)
    }
}
