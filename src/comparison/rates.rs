//! Counts of events over exposures at scored moments.

use super::counts::{CountError, beside, counts};
use crate::reading::{Cell, Series};

/// The events counted at one moment, and over how much.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rate {
    /// The index of the reading.
    pub reading: usize,
    /// Events.
    pub events: u64,
    /// Time, length, calls, persons: whatever the events were counted over.
    pub exposure: f64,
    /// The score of the moment.
    pub score: f64,
}

/// Counts at several moments, those without exposure left out.
#[derive(Clone, Debug, PartialEq)]
pub struct Rates {
    /// One for each moment with an exposure.
    pub rows: Vec<Rate>,
    /// Moments without exposure, which say nothing.
    pub without_exposure: usize,
}

/// Why readings and exposures make no rates.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum RateError {
    /// A count, an exposure or a score is none.
    #[error(transparent)]
    Count(#[from] CountError),
    /// A negative exposure.
    #[error("exposures: position {position} holds {shown}; an exposure cannot be negative")]
    Negative { position: usize, shown: f64 },
    /// Events without exposure.
    #[error("reading {position}: there are {events} events over an exposure of 0")]
    NoExposure { position: usize, events: u64 },
}

impl Rates {
    /// Sets the readings against their exposures; without any, each exposure is 1. `score` gives the score of each
    /// reading by its index.
    ///
    /// # Errors
    /// Readings are not counts, or exposures are negative or absent where events were counted.
    pub fn of(series: &Series, exposures: Option<&[Cell]>, score: impl Fn(usize) -> f64) -> Result<Self, RateError> {
        let counted = counts(series)?;
        let indices: Vec<usize> = counted.iter().map(|&(index, _)| index).collect();
        let exposures = match exposures {
            Some(cells) => beside("exposures", cells, series.len(), &indices)?,
            None => vec![1.0; indices.len()],
        };
        let mut rows = Vec::with_capacity(counted.len());
        for ((reading, events), exposure) in counted.into_iter().zip(exposures) {
            let position = reading + 1;
            if exposure < 0.0 {
                return Err(RateError::Negative { position, shown: exposure });
            }
            if exposure == 0.0 && events > 0 {
                return Err(RateError::NoExposure { position, events });
            }
            rows.push(Rate { reading, events, exposure, score: score(reading) });
        }
        let all = rows.len();
        rows.retain(|row| row.exposure > 0.0);
        Ok(Rates { without_exposure: all - rows.len(), rows })
    }

    /// All events.
    pub fn events(&self) -> u64 {
        self.rows.iter().map(|row| row.events).sum()
    }

    /// The whole exposure.
    pub fn exposure(&self) -> f64 {
        self.rows.iter().map(|row| row.exposure).sum()
    }

    /// The events expected at a moment if the rate is the same at all.
    pub fn expected(&self, row: &Rate) -> f64 {
        self.events() as f64 * row.exposure / self.exposure()
    }

    /// Mean and variance of one event's score if the rate follows exp(`growth` times the score).
    pub fn score_moments(&self, growth: f64) -> (f64, f64) {
        let largest = self.rows.iter().map(|row| growth * row.score).fold(f64::NEG_INFINITY, f64::max);
        let weighted = |of: &dyn Fn(f64) -> f64| -> f64 {
            self.rows.iter().map(|row| row.exposure * (growth * row.score - largest).exp() * of(row.score)).sum()
        };
        let total = weighted(&|_| 1.0);
        let mean = weighted(&|score| score) / total;
        (mean, weighted(&|score| (score - mean).powi(2)) / total)
    }

    /// How much the total score of the events exceeds what a rate following exp(`growth` times the score) would give.
    pub fn excess(&self, growth: f64) -> f64 {
        let (mean, _) = self.score_moments(growth);
        self.rows.iter().map(|row| row.events as f64 * (row.score - mean)).sum()
    }

    /// Pearson's chi-square of the counts against an equal rate.
    pub fn chi_square(&self) -> f64 {
        self.rows.iter().map(|row| (row.events as f64 - self.expected(row)).powi(2) / self.expected(row)).sum()
    }
}
