//! Counts of events, and the numbers that stand beside them: trials, exposures, scores.

use crate::reading::{Cell, Series, Value, list};

/// What is wrong with counts or with the numbers beside them.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum CountError {
    /// A reading is not a whole number of events.
    #[error("reading {position} is {shown}; the readings must be counts of events: 0, 1, 2, ...")]
    NotACount { position: usize, shown: String },
    /// A reading is known only as a limit.
    #[error("reading {position} is the limit {shown}; a count is needed; correct it, or leave it blank to judge the others")]
    Limit { position: usize, shown: String },
    /// There is not one number for each reading.
    #[error("{name}: there are {readings} readings but {have} {name}; send one for each reading")]
    Length { name: &'static str, readings: usize, have: usize },
    /// A number is absent or is no number.
    #[error("{name}: position {position} holds `{shown}`; a number is needed wherever there is a reading")]
    NotANumber { name: &'static str, position: usize, shown: String },
}

/// The largest count that a number keeps exactly.
const LARGEST_COUNT: f64 = 9_007_199_254_740_992.0;

/// The readings as counts, each with its index; missing readings are left out.
///
/// # Errors
/// A reading is a limit, negative, or not whole.
pub fn counts(series: &Series) -> Result<Vec<(usize, u64)>, CountError> {
    series
        .present()
        .map(|(index, value)| {
            let (position, shown) = (index + 1, series.show(index));
            match value {
                Value::Number(number) if number >= 0.0 && number.fract() == 0.0 && number <= LARGEST_COUNT => {
                    Ok((index, number as u64))
                }
                Value::Below(_) | Value::Above(_) => Err(CountError::Limit { position, shown }),
                _ => Err(CountError::NotACount { position, shown }),
            }
        })
        .collect()
}

/// The numbers that stand beside the readings with the given indices, one for each reading of the series.
///
/// # Errors
/// There is not one cell for each of `readings` readings, or one of those asked for holds no number.
pub fn beside(name: &'static str, cells: &[Cell], readings: usize, indices: &[usize]) -> Result<Vec<f64>, CountError> {
    if cells.len() != readings {
        return Err(CountError::Length { name, readings, have: cells.len() });
    }
    indices
        .iter()
        .map(|&index| {
            let number = match &cells[index] {
                Cell::Number(number) => Some(*number),
                Cell::Text(text) => list::number(text),
                _ => None,
            };
            let error = || CountError::NotANumber { name, position: index + 1, shown: cells[index].quote() };
            number.filter(|number| number.is_finite()).ok_or_else(error)
        })
        .collect()
}

/// Scores as whole steps above the lowest of them, with the size of a step.
#[derive(Clone, Debug, PartialEq)]
pub struct Steps {
    /// How many steps each score lies above the lowest.
    pub above_lowest: Vec<u64>,
    /// The size of a step.
    pub size: f64,
}

/// The most steps between the lowest and the highest score.
const MOST_STEPS: f64 = 100_000.0;

/// Finds the largest step of which all differences between scores are whole multiples, by Euclid's algorithm.
/// `None` if there is no such step within 100,000 steps from the lowest to the highest score, or if all scores are equal.
pub fn whole_steps(scores: &[f64]) -> Option<Steps> {
    let lowest = scores.iter().copied().fold(f64::INFINITY, f64::min);
    let span = scores.iter().map(|score| score - lowest).fold(0.0, f64::max);
    let least = span / MOST_STEPS;
    let mut size = 0.0;
    for score in scores {
        let (mut a, mut b) = (size, score - lowest);
        while b > least * 0.5 {
            (a, b) = (b, a % b);
        }
        size = a;
    }
    if !(size >= least && span > 0.0 && span.is_finite()) {
        return None;
    }
    size = span / (span / size).round();
    let above_lowest: Vec<u64> = scores.iter().map(|score| ((score - lowest) / size).round() as u64).collect();
    let exact = |(&score, &steps): (&f64, &u64)| (score - lowest - steps as f64 * size).abs() <= 1e-10 * span;
    scores.iter().zip(&above_lowest).all(exact).then_some(Steps { above_lowest, size })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn steps_are_found() {
        for (scores, size, steps) in [
            (vec![1.0, 2.0, 3.0], 1.0, vec![0, 1, 2]),
            (vec![2001.0, 2005.0, 2003.0], 2.0, vec![0, 2, 1]),
            (vec![0.1, 0.2, 0.4, 0.7], 0.1, vec![0, 1, 3, 6]),
            (vec![-1.5, 0.0, 2.5], 0.5, vec![0, 3, 8]),
            (vec![20454.0, 20485.0, 20513.0], 1.0, vec![0, 31, 59]),
            (vec![1e9, 1e9 + 0.25], 0.25, vec![0, 1]),
        ] {
            let found = whole_steps(&scores).unwrap();
            assert!((found.size - size).abs() < 1e-12, "{scores:?}: {}", found.size);
            assert_eq!(found.above_lowest, steps);
        }
    }

    #[test]
    fn irregular_or_equal_scores_have_no_step() {
        for scores in [
            vec![1.0, 1.0],
            vec![0.0, 1.0, std::f64::consts::SQRT_2],
            vec![],
            vec![0.0, 1e-9, 1.0],
            vec![0.0, f64::MAX, -f64::MAX],
        ] {
            assert_eq!(whole_steps(&scores), None, "{scores:?}");
        }
    }
}
