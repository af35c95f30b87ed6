//! Choices that several tests share, and what they come to.

use super::Refusal;
use super::declaration::List;
use crate::comparison::Events;
use crate::comparison::counts::beside;
use crate::reading::Series;

crate::choices! {
    /// What the readings of an item under observation are.
    pub enum ReadingsAre {
        /// Times of events, counted from the start of observation.
        Times = "times",
        /// Gaps between events, the first one counted from the start of observation.
        Gaps = "gaps",
    }
}

impl ReadingsAre {
    /// The events that the readings tell of.
    ///
    /// # Errors
    /// The readings are no times or gaps, and why.
    pub fn events(self, series: &Series, end: Option<f64>) -> Result<Events, Refusal> {
        let events = match self {
            ReadingsAre::Times => Events::of_times(series, end),
            ReadingsAre::Gaps => Events::of_gaps(series, end),
        };
        events.map_err(|error| Refusal::Because(error.to_string()))
    }
}

crate::choices! {
    /// What the scores of the moments are, where none are sent.
    pub enum ScoreBy {
        /// The places 1, 2, 3, ... of the readings.
        Positions = "positions",
        /// The moments themselves: numbers as they are, dates in days.
        Moments = "moments",
    }
}

crate::choices! {
    /// What counts as at least as extreme when a change in either direction is sought.
    pub enum TwoSided {
        /// Twice the smaller tail, at most 1.
        Doubled = "doubled",
        /// All outcomes at least as far from what is expected without a trend.
        Distance = "distance",
    }
}

crate::choices! {
    /// Whether equal readings are allowed for in the null distribution.
    pub enum TieCorrection {
        /// The null distribution is that of readings tied in the same way: conditional on the ties, or with a smaller variance.
        Corrected = "corrected",
        /// The null distribution is that of as many readings without ties, as in published tables.
        Ignored = "ignored",
    }
}

/// Why an exact p cannot be counted for some scores.
pub const NO_COMMON_STEP: &str = "the scores are not whole multiples of a common step, so outcomes cannot be counted exactly; ask for p_by=best or p_by=normal, or send whole scores";

/// The score of each reading: as sent, or by position or moment.
///
/// # Errors
/// There is not one number for each reading that has a value.
pub fn scores(series: &Series, sent: &List, by: ScoreBy) -> Result<Vec<f64>, Refusal> {
    let default = |index: usize| match by {
        ScoreBy::Positions => index as f64 + 1.0,
        ScoreBy::Moments => series.moments.axis(index),
    };
    let mut scores: Vec<f64> = (0..series.len()).map(default).collect();
    if let Some(cells) = &sent.cells {
        let indices: Vec<usize> = series.present().map(|(index, _)| index).collect();
        let sent = beside("scores", cells, series.len(), &indices).map_err(|error| Refusal::Because(error.to_string()))?;
        for (index, score) in indices.into_iter().zip(sent) {
            scores[index] = score;
        }
    }
    Ok(scores)
}
