//! The one word that a judging ends in, and its sentence.

use std::fmt;

use crate::method::{Claim, Direction, Outcome, Question};

/// What is concluded.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Word {
    /// A rise is shown.
    Rising,
    /// A fall is shown.
    Falling,
    /// The slope is shown to lie within a stated margin.
    Level,
    /// The level changed at some moment.
    Changed,
    /// The order of the readings is not random.
    NotRandom,
    /// Nothing is shown; that does not show that there is nothing.
    NotShown,
    /// No data of this length could have reached the risk.
    TooFew,
    /// The test does not apply, with the reason.
    Declined,
}

impl Word {
    /// The word as it is written.
    pub fn as_str(self) -> &'static str {
        match self {
            Word::Rising => "rising",
            Word::Falling => "falling",
            Word::Level => "level",
            Word::Changed => "changed",
            Word::NotRandom => "not random",
            Word::NotShown => "not shown",
            Word::TooFew => "too few",
            Word::Declined => "declined",
        }
    }

    /// Whether something is shown: a trend, a change, or an order that is not random.
    pub fn shows_something(self) -> bool {
        matches!(self, Word::Rising | Word::Falling | Word::Changed | Word::NotRandom)
    }

    /// The direction that is claimed, if one is.
    pub fn direction(self) -> Direction {
        match self {
            Word::Rising => Direction::Rising,
            Word::Falling => Direction::Falling,
            _ => Direction::Neither,
        }
    }
}

impl fmt::Display for Word {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.as_str())
    }
}

/// The word and the sentence.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Conclusion {
    /// The word.
    pub word: Word,
    /// One or two plain sentences that say no more than the numbers.
    pub sentence: String,
}

/// The word for an outcome, judged by `p`, which may have been adjusted for other indicators.
pub fn word(outcome: &Outcome, claim: Claim, question: &Question, p: f64) -> Word {
    if question.allows(p) {
        return match (claim, outcome.direction) {
            (Claim::Trend, Direction::Rising) => Word::Rising,
            (Claim::Trend, Direction::Falling) => Word::Falling,
            (Claim::Trend, Direction::Neither) => Word::NotShown,
            (Claim::Change, _) => Word::Changed,
            (Claim::Pattern, _) => Word::NotRandom,
        };
    }
    match outcome.smallest_p {
        Some(smallest) if !question.allows(smallest) => Word::TooFew,
        _ => Word::NotShown,
    }
}
