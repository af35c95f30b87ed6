//! From cells as they came to values, and an account of what was understood.

use super::{Cell, Grades, Missing, Scale, Value, list};

/// A reading that has no value.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct MissingReading {
    /// Its index in the series, from 0.
    pub index: usize,
    /// Why it has no value.
    pub why: Missing,
    /// What stood there.
    pub text: String,
}

/// What was made of the cells, for echoing back.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Understood {
    /// How many readings came, missing ones included.
    pub readings: usize,
    /// The readings without a value, in order.
    pub missing: Vec<MissingReading>,
    /// How many are known only as below or above a limit.
    pub censored: usize,
    /// How many were percentages, kept as fractions.
    pub percentages: usize,
    /// How many were numbers written as text.
    pub text_numbers: usize,
    /// The grades, where the readings are words.
    pub grades: Option<Grades>,
    /// Whether the order of the grades was assumed rather than stated.
    pub grades_assumed: bool,
}

/// The readings are words whose order nobody stated.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("the readings are words ({}) whose order is not stated; give the grades, lowest first, such as `poor < fair < good`", .words.join(", "))]
pub struct UnorderedGrades {
    /// The first few different words, quoted.
    pub words: Vec<String>,
}

/// Makes values of cells.
///
/// With grades, each cell must be one of the words. Without, cells are numbers; if no cell is a number and all words
/// belong to one usual scale, that scale is assumed and said to be so.
///
/// # Errors
/// The readings are words, no grades were given and no usual scale has them all.
pub fn understand(cells: &[Cell], grades: Option<&Grades>) -> Result<(Vec<Value>, Scale, Understood), UnorderedGrades> {
    let mut understood = Understood { readings: cells.len(), ..Understood::default() };
    let assumed = match grades {
        Some(_) => None,
        None => assumed_grades(cells)?,
    };
    understood.grades_assumed = assumed.is_some();
    understood.grades = grades.cloned().or(assumed);
    let mut values = Vec::with_capacity(cells.len());
    for (index, cell) in cells.iter().enumerate() {
        let value = match &understood.grades {
            Some(grades) => graded(cell, grades),
            None => numeric(cell, &mut understood.percentages, &mut understood.text_numbers),
        };
        if let Value::Missing(why) = value {
            understood.missing.push(MissingReading { index, why, text: cell.quote() });
        }
        understood.censored += usize::from(value.is_censored());
        values.push(value);
    }
    let scale = understood.grades.clone().map_or(Scale::Numeric, Scale::Graded);
    Ok((values, scale, understood))
}

fn graded(cell: &Cell, grades: &Grades) -> Value {
    match cell {
        Cell::Empty => Value::Missing(Missing::Blank),
        Cell::Error(_) => Value::Missing(Missing::ErrorValue),
        other => match grades.place(&other.quote()) {
            Some(place) => Value::Number(place as f64),
            None if is_not_available(&other.quote()) => Value::Missing(Missing::NotAvailable),
            None => Value::Missing(Missing::NotUnderstood),
        },
    }
}

fn numeric(cell: &Cell, percentages: &mut usize, text_numbers: &mut usize) -> Value {
    match cell {
        Cell::Empty => Value::Missing(Missing::Blank),
        Cell::Number(number) | Cell::Duration(number) if number.is_finite() => Value::Number(*number),
        Cell::Truth(truth) => Value::Number(f64::from(u8::from(*truth))),
        Cell::Error(_) => Value::Missing(Missing::ErrorValue),
        Cell::Text(text) => {
            if let Some(number) = list::number(text) {
                *text_numbers += 1;
                *percentages += usize::from(text.trim_end().ends_with('%'));
                Value::Number(number)
            } else if is_not_available(text) {
                Value::Missing(Missing::NotAvailable)
            } else {
                limit(text).unwrap_or(Value::Missing(Missing::NotUnderstood))
            }
        }
        Cell::Number(_) | Cell::Duration(_) | Cell::Date(_) => Value::Missing(Missing::NotUnderstood),
    }
}

/// `<0.5`, `≤ 0.5`, `>200`: known only to lie beyond a limit.
fn limit(text: &str) -> Option<Value> {
    let below = text.strip_prefix(['<', '≤', '＜']).map(|rest| (rest, true));
    let (rest, is_below) = below.or_else(|| text.strip_prefix(['>', '≥', '＞']).map(|rest| (rest, false)))?;
    let number = list::number(rest.trim_start_matches('='))?;
    Some(if is_below { Value::Below(number) } else { Value::Above(number) })
}

/// Words and marks by which people say that there is no reading.
fn is_not_available(text: &str) -> bool {
    const WORDS: [&str; 18] = [
        "n/a",
        "na",
        "#n/a",
        "n.a.",
        "nan",
        "null",
        "none",
        "nil",
        "-",
        "--",
        "\u{2013}",
        "\u{2014}",
        ".",
        "?",
        "missing",
        "no data",
        "not recorded",
        "not available",
    ];
    WORDS.contains(&text.trim().to_lowercase().as_str())
}

/// Scales in common use, lowest first. Common practice, not a standard; that one was assumed is always said.
const USUAL_SCALES: [&[&str]; 9] = [
    &["very poor", "poor", "fair", "good", "very good", "excellent"],
    &["unsatisfactory", "satisfactory", "good", "very good", "excellent", "outstanding"],
    &["very low", "low", "medium", "high", "very high"],
    &["very low", "low", "moderate", "high", "very high"],
    &["never", "rarely", "sometimes", "often", "always"],
    &["strongly disagree", "disagree", "neutral", "agree", "strongly agree"],
    &["very dissatisfied", "dissatisfied", "neutral", "satisfied", "very satisfied"],
    &["none", "mild", "moderate", "severe"],
    &["no", "yes"],
];

/// Decides whether the cells are words, and if so whether a usual scale has them all.
fn assumed_grades(cells: &[Cell]) -> Result<Option<Grades>, UnorderedGrades> {
    let mut words: Vec<&str> = Vec::new();
    let mut only_words = true;
    for cell in cells {
        let Cell::Text(text) = cell else {
            only_words &= matches!(cell, Cell::Empty | Cell::Error(_));
            continue;
        };
        if list::number(text).is_some() || limit(text).is_some() {
            only_words = false;
        } else if !is_not_available(text) && !words.iter().any(|word| word.eq_ignore_ascii_case(text)) {
            words.push(text);
        }
        if !only_words {
            return Ok(None);
        }
    }
    if words.is_empty() || !only_words {
        return Ok(None);
    }
    let has_all = |scale: &[&str]| words.iter().all(|word| scale.contains(&word.to_lowercase().as_str()));
    match USUAL_SCALES.iter().find(|scale| has_all(scale)) {
        Some(scale) => Ok(Grades::new(scale.iter().copied()).ok()),
        None => Err(UnorderedGrades { words: words.iter().take(5).map(|word| format!("`{word}`")).collect() }),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn cells(text: &str) -> Vec<Cell> {
        list::split(text).0
    }

    #[test]
    fn numbers_limits_and_gaps_are_told_apart() {
        let (values, scale, understood) = understand(&cells("1,5;<0,5;;n/a;12 %;oops"), None).unwrap();
        assert_eq!(scale, Scale::Numeric);
        assert_eq!(values[..2], [Value::Number(1.5), Value::Below(0.5)]);
        assert_eq!(values[4], Value::Number(0.12));
        let missing: Vec<_> = understood.missing.iter().map(|reading| (reading.index, reading.why)).collect();
        assert_eq!(missing, [(2, Missing::Blank), (3, Missing::NotAvailable), (5, Missing::NotUnderstood)]);
        assert_eq!((understood.censored, understood.percentages), (1, 1));
    }

    #[test]
    fn stated_grades_are_places_in_their_order() {
        let grades = Grades::parse("poor < fair < good").unwrap();
        let (values, _, understood) = understand(&cells("Good,poor,fair,excellent"), Some(&grades)).unwrap();
        assert_eq!(values[..3], [Value::Number(3.0), Value::Number(1.0), Value::Number(2.0)]);
        assert_eq!(understood.missing[0].text, "excellent");
    }

    #[test]
    fn a_usual_scale_is_assumed_and_said() {
        let (values, _, understood) = understand(&cells("good,fair,good,poor"), None).unwrap();
        assert!(understood.grades_assumed);
        assert!(values[0].number() > values[1].number() && values[1].number() > values[3].number());
    }

    #[test]
    fn words_without_an_order_are_asked_about() {
        let error = understand(&cells("calm,windy,calm"), None).unwrap_err();
        assert!(error.to_string().contains("`calm`, `windy`"));
    }

    #[test]
    fn a_limit_is_compared_only_where_the_order_is_certain() {
        use std::cmp::Ordering::{Equal, Less};
        assert_eq!(Value::Below(0.5).compare(Value::Number(0.7)), Some(Less));
        assert_eq!(Value::Below(0.5).compare(Value::Number(0.3)), Some(Equal));
        assert_eq!(Value::Below(0.5).compare(Value::Below(0.1)), Some(Equal));
        assert_eq!(Value::Below(0.5).compare(Value::Missing(Missing::Blank)), None);
    }
}
