//! What is asked of every test: which change counts as evidence, and the accepted risk.

use super::Direction;
use super::declaration::Proportion;
use crate::null_distribution::{By, Probability, Tails};

crate::choices! {
    /// Which change counts as evidence. It is declared before looking.
    pub enum Seek {
        /// A change in either direction counts; p is two-sided.
        Either = "either",
        /// Only a rise counts; p is one-sided.
        Rising = "rising",
        /// Only a fall counts; p is one-sided.
        Falling = "falling",
    }
}

crate::choices! {
    /// Which form of the p-value is wanted.
    pub enum PBy {
        /// Exact where feasible, else the normal approximation; the reply says which.
        Best = "best",
        /// Exact, or a refusal that states the largest size.
        Exact = "exact",
        /// The normal approximation with continuity correction.
        Normal = "normal",
    }
}

crate::parameters! {
    /// What is asked of every test.
    pub struct Question {
        /// Which change counts as evidence: either, rising or falling. Declared before looking.
        seek: Seek = Seek::Either,
        /// The accepted chance of claiming a trend where there is none (significance level).
        risk: Proportion = Proportion(0.05),
    }
}

impl Question {
    /// The p-value for what is sought: the tail, or twice the smaller tail.
    pub fn p(&self, tails: Tails, by: By) -> Probability {
        let value = match self.seek {
            Seek::Either => tails.doubled(),
            Seek::Rising => tails.upper.min(1.0),
            Seek::Falling => tails.lower.min(1.0),
        };
        Probability { value, by }
    }

    /// Whether a direction is among those sought.
    pub fn seeks(&self, direction: Direction) -> bool {
        match self.seek {
            Seek::Either => direction != Direction::Neither,
            Seek::Rising => direction == Direction::Rising,
            Seek::Falling => direction == Direction::Falling,
        }
    }
}
