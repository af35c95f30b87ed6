//! What was asked of a series, already valid.

use crate::method::{Direction, Judge, Question};

crate::choices! {
    /// Which direction is good for an indicator. It never changes a p-value.
    pub enum Wanted {
        /// Higher readings are better.
        Higher = "higher",
        /// Lower readings are better.
        Lower = "lower",
        /// Neither direction is better.
        Neither = "neither",
    }
}

impl Wanted {
    /// Whether a trend in this direction is wanted; `None` if it is neither good nor bad.
    pub fn welcomes(self, direction: Direction) -> Option<bool> {
        match (self, direction) {
            (Wanted::Neither, _) | (_, Direction::Neither) => None,
            (Wanted::Higher, direction) => Some(direction == Direction::Rising),
            (Wanted::Lower, direction) => Some(direction == Direction::Falling),
        }
    }
}

crate::parameters! {
    /// What the conclusion takes account of beyond the test.
    pub struct Aim {
        /// Which direction is good: higher, lower or neither. It never changes a p-value.
        wanted: Wanted = Wanted::Neither,
    }
}

/// A test with its parameters, the question, and which direction is wanted.
pub struct Request {
    /// The test, its own parameters read.
    pub test: Box<dyn Judge>,
    /// What is sought, and the accepted risk.
    pub question: Question,
    /// Which direction is good.
    pub wanted: Wanted,
}
