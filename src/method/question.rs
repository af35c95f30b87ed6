//! What is asked of every test: which change counts as evidence, and the accepted risk.

use super::declaration::Proportion;
use super::{Direction, Fact, Refusal};
use crate::null_distribution::{Attained, By, Probability, Tails};

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
        /// The normal approximation; the reply says whether it is corrected for continuity.
        Normal = "normal",
    }
}

impl PBy {
    /// Whether the exact null distribution is used, `have` being the size that it takes and `most` the largest admitted.
    ///
    /// # Errors
    /// The exact p was asked for beyond that size.
    pub fn is_exact(self, what: &'static str, have: usize, most: usize) -> Result<bool, Refusal> {
        match self {
            PBy::Normal => Ok(false),
            PBy::Exact if have > most => Err(Refusal::BeyondExact { what, have, most }),
            PBy::Best | PBy::Exact => Ok(have <= most),
        }
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

    /// The p-value for what is sought, and the smallest one that could have been attained.
    pub fn judge(&self, attained: &Attained) -> (Probability, f64) {
        let pick = |tails: Tails, either: f64| match self.seek {
            Seek::Either => either.min(1.0),
            Seek::Rising => tails.upper.min(1.0),
            Seek::Falling => tails.lower.min(1.0),
        };
        let value = pick(attained.tails, attained.either);
        (Probability { value, by: attained.by }, pick(attained.extremes, attained.least_either))
    }

    /// The p-values for each thing that could have been sought, and the smallest p that could have been attained.
    pub fn p_facts(&self, attained: &Attained) -> [Fact; 4] {
        [
            Fact::new("p_rising", "p if only a rise had been sought", attained.tails.upper.min(1.0)),
            Fact::new("p_falling", "p if only a fall had been sought", attained.tails.lower.min(1.0)),
            Fact::new("p_either", "p for either direction", attained.either.min(1.0)),
            Fact::new("smallest_p", "Smallest p these readings could have given", self.judge(attained).1),
        ]
    }

    /// Whether a p-value reaches the accepted risk. An exact p that equals the risk may miss it in its last digits, for it was
    /// added up from many chances; so a relative difference of 1e-14 is none.
    pub fn allows(&self, p: f64) -> bool {
        p <= self.risk.0 * (1.0 + 1e-14)
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
