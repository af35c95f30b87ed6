//! Events among trials at scored moments.

use super::counts::{CountError, beside, counts};
use crate::reading::{Cell, Series};

/// The events among the trials of one moment.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Share {
    /// The index of the reading.
    pub reading: usize,
    /// Trials with an event.
    pub events: u64,
    /// All trials.
    pub trials: u64,
    /// The score of the moment.
    pub score: f64,
}

impl Share {
    /// The share of trials with an event.
    pub fn value(&self) -> f64 {
        self.events as f64 / self.trials as f64
    }
}

/// Events among trials at several moments, those without trials left out.
#[derive(Clone, Debug, PartialEq)]
pub struct Shares {
    /// One for each moment with trials.
    pub rows: Vec<Share>,
    /// Moments without trials, which say nothing.
    pub without_trials: usize,
}

/// Why readings and trials make no shares.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum ShareError {
    /// A count, a number of trials or a score is none.
    #[error(transparent)]
    Count(#[from] CountError),
    /// Trials are not counted in whole numbers.
    #[error("trials: position {position} holds {shown}; trials are counted in whole numbers, none negative")]
    NotWhole { position: usize, shown: f64 },
    /// More events than trials.
    #[error("reading {position}: there are {events} events among {trials} trials; events cannot outnumber trials")]
    TooMany { position: usize, events: u64, trials: u64 },
}

impl Shares {
    /// Sets the readings against their trials. `score` gives the score of each reading by its index.
    ///
    /// # Errors
    /// Readings or trials are not counts, or events outnumber trials.
    pub fn of(series: &Series, trials: &[Cell], score: impl Fn(usize) -> f64) -> Result<Self, ShareError> {
        let counted = counts(series)?;
        let indices: Vec<usize> = counted.iter().map(|&(index, _)| index).collect();
        let trials = beside("trials", trials, series.len(), &indices)?;
        let mut rows = Vec::with_capacity(counted.len());
        for ((reading, events), size) in counted.into_iter().zip(trials) {
            if !(size >= 0.0 && size.fract() == 0.0 && size < 1e15) {
                return Err(ShareError::NotWhole { position: reading + 1, shown: size });
            }
            let trials = size as u64;
            if events > trials {
                return Err(ShareError::TooMany { position: reading + 1, events, trials });
            }
            rows.push(Share { reading, events, trials, score: score(reading) });
        }
        let all = rows.len();
        rows.retain(|row| row.trials > 0);
        Ok(Shares { without_trials: all - rows.len(), rows })
    }

    /// All trials.
    pub fn trials(&self) -> u64 {
        self.rows.iter().map(|row| row.trials).sum()
    }

    /// All events.
    pub fn events(&self) -> u64 {
        self.rows.iter().map(|row| row.events).sum()
    }

    /// The share of events among all trials.
    pub fn overall(&self) -> f64 {
        self.events() as f64 / self.trials() as f64
    }

    /// The mean score of a trial.
    pub fn mean_score(&self) -> f64 {
        self.rows.iter().map(|row| row.trials as f64 * row.score).sum::<f64>() / self.trials() as f64
    }

    /// The sum over all trials of the squared distance of their score from the mean score.
    pub fn spread(&self) -> f64 {
        let mean = self.mean_score();
        self.rows.iter().map(|row| row.trials as f64 * (row.score - mean).powi(2)).sum()
    }

    /// How much the total score of the events exceeds what the overall share would give.
    pub fn excess(&self) -> f64 {
        let (mean, overall) = (self.mean_score(), self.overall());
        self.rows.iter().map(|row| (row.score - mean) * (row.events as f64 - row.trials as f64 * overall)).sum()
    }

    /// The range of that excess over all ways to place as many events among the trials.
    pub fn excess_range(&self) -> (f64, f64) {
        let mut rows: Vec<&Share> = self.rows.iter().collect();
        rows.sort_by(|a, b| a.score.total_cmp(&b.score));
        let mean = self.mean_score();
        let fill = |rows: &mut dyn Iterator<Item = &&Share>| {
            let mut left = self.events();
            rows.map(|row| {
                let here = left.min(row.trials);
                left -= here;
                here as f64 * (row.score - mean)
            })
            .sum::<f64>()
        };
        (fill(&mut rows.iter()), fill(&mut rows.iter().rev()))
    }

    /// Pearson's chi-square of the table of events and non-events.
    pub fn chi_square(&self) -> f64 {
        let overall = self.overall();
        self.rows.iter().map(|row| (row.events as f64 - row.trials as f64 * overall).powi(2) / row.trials as f64).sum::<f64>()
            / (overall * (1.0 - overall))
    }

    /// The slope of the share per unit of score, and its standard error when the shares differ.
    pub fn slope(&self) -> (f64, f64) {
        let (mean, spread) = (self.mean_score(), self.spread());
        let variance: f64 =
            self.rows.iter().map(|row| row.trials as f64 * (row.score - mean).powi(2) * row.value() * (1.0 - row.value())).sum();
        (self.excess() / spread, variance.sqrt() / spread)
    }
}
