//! Steps from each reading to the next one, and where they turn.

use std::cmp::Ordering;

use super::runs::{Run, runs};
use super::{Pairing, Pairings};
use crate::reading::Series;

/// The steps between neighbouring readings, gaps closed up. A step whose direction is not certain is level.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Steps(Pairings);

/// Readings at which the course turns: one, or several equal neighbours.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Turn {
    /// Whether it lies above its neighbours (a peak), or below them (a trough).
    pub peak: bool,
    /// Index of the first reading.
    pub first: usize,
    /// Index of the last reading; the same as `first` unless equal neighbours turn together.
    pub last: usize,
}

impl Steps {
    /// The steps of a series.
    pub fn of(series: &Series) -> Self {
        let present: Vec<usize> = series.present().map(|(index, _)| index).collect();
        let list = present.windows(2).filter_map(|pair| {
            let sign = match series.values[pair[0]].compare(series.values[pair[1]])? {
                Ordering::Less => 1,
                Ordering::Equal => 0,
                Ordering::Greater => -1,
            };
            Some(Pairing { earlier: pair[0] as u32, later: pair[1] as u32, sign, weight: 1 })
        });
        Steps(Pairings { list: list.collect(), ..Pairings::default() })
    }

    /// The steps as pairings of neighbours.
    pub fn pairings(self) -> Pairings {
        self.0
    }

    /// How many steps there are.
    pub fn count(&self) -> usize {
        self.0.list.len()
    }

    /// How many steps go up (+1), down (-1) or are level (0).
    pub fn with_sign(&self, sign: i8) -> usize {
        self.0.count(sign) as usize
    }

    /// Runs of steps in one direction. A level step belongs to the run it stands in, or ends it if `level_ends` is set.
    pub fn runs(&self, level_ends: bool) -> Vec<Run<i8>> {
        let steps = self.0.list.iter().filter(|step| level_ends || step.sign != 0);
        let mut runs = runs(steps.map(|step| (step.earlier as usize, step.later as usize, step.sign)));
        runs.retain(|run| run.kind != 0);
        runs
    }

    /// The readings at which the course turns, equal neighbours taken as one reading.
    pub fn turns(&self) -> Vec<Turn> {
        let runs = self.runs(false);
        runs.windows(2).map(|pair| Turn { peak: pair[0].kind > 0, first: pair[0].last, last: pair[1].first }).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn level_steps_belong_to_a_run_or_end_it() {
        let steps = Steps::of(&Series::of_numbers(&[1.0, 2.0, 2.0, 3.0, 3.0, 2.0]));
        assert_eq!((steps.with_sign(1), steps.with_sign(0), steps.with_sign(-1)), (2, 2, 1));
        assert_eq!(steps.runs(false).iter().map(|run| run.length).collect::<Vec<_>>(), [2, 1]);
        assert_eq!(steps.runs(true).iter().map(|run| run.length).collect::<Vec<_>>(), [1, 1, 1]);
        assert_eq!(steps.turns(), [Turn { peak: true, first: 3, last: 4 }]);
    }
}
