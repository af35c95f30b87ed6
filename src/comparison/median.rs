//! The median of readings, some of which may be known only as limits.

use crate::reading::{Scale, Value};

/// The median of the readings that have a value, the mean of the two middle ones for an even number.
///
/// A limit such as `<0.5` may stand for any number below it. `None` if there are no readings, or if the median depends on
/// which numbers the limits stand for.
pub fn median(values: impl IntoIterator<Item = Value>) -> Option<f64> {
    let (mut least, mut most) = (Vec::new(), Vec::new());
    for value in values {
        let (low, high) = match value {
            Value::Number(number) => (number, number),
            Value::Below(limit) => (f64::NEG_INFINITY, limit),
            Value::Above(limit) => (limit, f64::INFINITY),
            Value::Missing(_) => continue,
        };
        least.push(low);
        most.push(high);
    }
    let (low, high) = (middle(&mut least)?, middle(&mut most)?);
    (low == high).then_some(low)
}

/// The median of numbers; `None` if there are none.
pub fn of_numbers(numbers: &[f64]) -> Option<f64> {
    middle(&mut numbers.to_vec())
}

fn middle(numbers: &mut [f64]) -> Option<f64> {
    numbers.sort_unstable_by(f64::total_cmp);
    let upper = *numbers.get(numbers.len() / 2)?;
    if numbers.len() % 2 == 1 {
        return Some(upper);
    }
    let lower = numbers[numbers.len() / 2 - 1];
    Some(if lower == upper { lower } else { lower / 2.0 + upper / 2.0 })
}

/// The median as a person would write it: for grades the word, or the two words that it lies between.
pub fn shown(median: f64, scale: &Scale) -> String {
    let Some(grades) = scale.grades() else { return median.to_string() };
    match (grades.word(median), grades.word(median.floor()), grades.word(median.ceil())) {
        (Some(word), ..) => word.to_owned(),
        (None, Some(lower), Some(upper)) => format!("between {lower} and {upper}"),
        _ => median.to_string(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::reading::Grades;

    #[test]
    fn middle_of_odd_and_even() {
        let numbers = |list: &[f64]| median(list.iter().map(|&number| Value::Number(number)));
        assert_eq!(numbers(&[3.0, 1.0, 2.0]), Some(2.0));
        assert_eq!(numbers(&[3.0, 1.0, 2.0, 4.0]), Some(2.5));
        assert_eq!(numbers(&[]), None);
    }

    #[test]
    fn limits_matter_only_if_they_reach_the_middle() {
        use Value::{Below, Number};
        assert_eq!(median([Below(0.5), Number(0.7), Number(0.9)]), Some(0.7));
        assert_eq!(median([Below(0.5), Below(0.5), Number(0.9)]), None);
        assert_eq!(median([Below(0.5), Number(0.3), Number(0.9)]), None);
    }

    #[test]
    fn grades_are_shown_as_words() {
        let scale = Scale::Graded(Grades::parse("poor < fair < good").unwrap());
        assert_eq!(shown(2.0, &scale), "fair");
        assert_eq!(shown(2.5, &scale), "between fair and good");
        assert_eq!(shown(2.5, &Scale::Numeric), "2.5");
    }
}
