//! How a column of numbers runs from top to bottom.

use super::table::is_year;
use super::view::View;

/// How a column of numbers runs from top to bottom.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Course {
    numbers: Vec<f64>,
}

impl Course {
    /// The course of a column's numbers in some rows; `None` if anything else stands among them.
    pub fn of(view: View<'_>, column: u32, rows: impl Iterator<Item = u32>) -> Option<Course> {
        let mut numbers = Vec::new();
        for row in rows {
            match view.number(row, column) {
                Some(number) => numbers.push(number),
                None if view.kind(row, column).is_absent() => {}
                None => return None,
            }
        }
        (!numbers.is_empty()).then_some(Course { numbers })
    }

    /// How many numbers there are.
    pub fn count(&self) -> usize {
        self.numbers.len()
    }

    /// How many different numbers there are.
    pub fn distinct(&self) -> usize {
        let mut sorted = self.numbers.clone();
        sorted.sort_by(f64::total_cmp);
        sorted.dedup();
        sorted.len()
    }

    /// Whether all are whole numbers.
    pub fn is_whole(&self) -> bool {
        self.numbers.iter().all(|number| number.fract() == 0.0)
    }

    /// Whether all lie within bounds.
    pub fn is_within(&self, low: f64, high: f64) -> bool {
        self.numbers.iter().all(|number| (low..=high).contains(number))
    }

    /// Whether all may be years.
    pub fn is_years(&self) -> bool {
        self.numbers.iter().all(|&number| is_year(number))
    }

    /// Whether each is larger than the one above, or each smaller.
    pub fn runs_one_way(&self) -> bool {
        self.steps().all(|step| step > 0.0) || self.steps().all(|step| step < 0.0)
    }

    /// The step from each to the next, where it is always the same and not zero.
    pub fn step(&self) -> Option<f64> {
        let step = self.steps().next().filter(|step| *step != 0.0)?;
        self.steps().all(|other| other == step).then_some(step)
    }

    /// Whether they count the rows, up or down.
    pub fn counts_rows(&self) -> bool {
        self.is_whole() && self.count() >= 3 && self.step().is_some_and(|step| step.abs() == 1.0)
    }

    /// Whether they are whole numbers of one length, and so long that they are codes.
    pub fn is_as_long_as_codes(&self) -> bool {
        let digits = |number: f64| number.abs().log10().floor();
        let first = self.numbers.first().copied().unwrap_or_default();
        self.count() >= 3 && self.is_whole() && first >= 1e9 && self.numbers.iter().all(|&number| digits(number) == digits(first))
    }

    fn steps(&self) -> impl Iterator<Item = f64> + '_ {
        self.numbers.windows(2).map(|pair| pair[1] - pair[0])
    }
}
