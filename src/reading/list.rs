//! Readings that arrive as text: lists separated by commas, semicolons, tabs or newlines.

use super::Cell;

/// What was understood of a list's form.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct ListForm {
    /// The character between items, if there was more than one item.
    pub separator: Option<char>,
    /// Whether `,` was read as the decimal sign.
    pub decimal_comma: bool,
}

/// Splits a list into cells.
///
/// The separator is the first of newline, tab and semicolon that occurs, else the comma. When the comma does not
/// separate, a comma between digits is the decimal sign. Where numbers and commas alone leave both readings open
/// (`1,5,2,5`), the comma separates.
pub fn split(text: &str) -> (Vec<Cell>, ListForm) {
    let text = text.trim_matches(['\r', '\n', '\u{feff}']);
    let separator = ['\n', '\t', ';', ','].into_iter().find(|&separator| text.contains(separator));
    let cells: Vec<Cell> = match separator {
        None if text.trim().is_empty() => Vec::new(),
        None => vec![Cell::text(text)],
        Some(separator) => {
            let count = text.bytes().filter(|&byte| char::from(byte) == separator).count() + 1;
            let mut cells = Vec::with_capacity(count);
            cells.extend(text.split(separator).map(|item| Cell::text(unquote(item.trim()))));
            cells
        }
    };
    let decimal_comma = separator != Some(',') && cells.iter().any(|cell| matches!(cell, Cell::Text(text) if text.contains(',')));
    (cells, ListForm { separator, decimal_comma })
}

fn unquote(item: &str) -> &str {
    item.strip_prefix('"').and_then(|rest| rest.strip_suffix('"')).unwrap_or(item)
}

/// A number as people write it: decimal point or comma, thousands marks, a sign, a percentage, a currency sign.
/// A percentage is its fraction. `None` if the text is not a number.
pub fn number(text: &str) -> Option<f64> {
    plain_number(text).or_else(|| decorated_number(text))
}

/// Digits with at most a sign, a point and an exponent: nearly all numbers, and nothing in them needs to be rewritten.
fn plain_number(text: &str) -> Option<f64> {
    let plain = text.bytes().all(|byte| byte.is_ascii_digit() || matches!(byte, b'.' | b'-' | b'+' | b'e' | b'E'));
    if plain { text.parse().ok().filter(|number: &f64| number.is_finite()) } else { None }
}

fn decorated_number(text: &str) -> Option<f64> {
    let text = text.trim().replace(['\u{a0}', '\u{202f}', ' ', '\'', '’'], "").replace('\u{2212}', "-");
    let (text, negative) = match text.strip_prefix('(').and_then(|rest| rest.strip_suffix(')')) {
        Some(inner) => (inner.to_owned(), true),
        None => (text, false),
    };
    let (text, percent) = match text.strip_suffix('%') {
        Some(rest) => (rest.to_owned(), true),
        None => (text, false),
    };
    let text = text.trim_start_matches(['€', '£', '$', '¥']).trim_end_matches(['€', '£', '$', '¥']);
    if text.is_empty() || !text.chars().all(|c| c.is_ascii_digit() || "+-.,eE".contains(c)) {
        return None;
    }
    let plain = plain_decimal(text)?;
    let number: f64 = plain.parse().ok().filter(|number: &f64| number.is_finite())?;
    let number = if percent { number / 100.0 } else { number };
    Some(if negative { -number } else { number })
}

/// Turns decimal commas into points and drops thousands marks; `None` where the marks make no sense.
fn plain_decimal(text: &str) -> Option<String> {
    let commas = text.matches(',').count();
    let points = text.matches('.').count();
    let grouped = |mark: char| {
        let mut groups = text.split(mark);
        let first = groups.next().unwrap_or("").trim_start_matches(['+', '-']);
        (1..=3).contains(&first.len()) && groups.all(|group| group.len() == 3 && group.bytes().all(|b| b.is_ascii_digit()))
    };
    Some(match (commas, points) {
        (0, 0 | 1) => text.to_owned(),
        (1, 0) => text.replace(',', "."),
        (0, _) if grouped('.') => text.replace('.', ""),
        (_, 0) if grouped(',') => text.replace(',', ""),
        (_, 1) if text.rfind('.') > text.rfind(',') => text.replace(',', ""),
        (1, _) if text.rfind(',') > text.rfind('.') => text.replace('.', "").replace(',', "."),
        _ => return None,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn each_separator_is_found() {
        for (text, count) in [
            ("1,2,3", 3),
            ("1;2;3", 3),
            ("1\t2\t3", 3),
            ("1\n2\n3\n", 3),
            ("1\r\n2\r\n", 2),
            ("", 0),
            ("4", 1),
            ("1,,3", 3),
            ("1;;", 3),
        ] {
            assert_eq!(split(text).0.len(), count, "{text:?}");
        }
    }

    #[test]
    fn a_comma_is_decimal_when_something_else_separates() {
        let (cells, form) = split("1,5;2,25");
        assert_eq!((cells.len(), form.separator, form.decimal_comma), (2, Some(';'), true));
        assert_eq!(number("1,5"), Some(1.5));
    }

    #[test]
    fn numbers_as_people_write_them() {
        for (text, expected) in [
            ("1.5", 1.5),
            ("-3", -3.0),
            ("\u{2212}3", -3.0),
            ("1e-3", 1e-3),
            ("12 %", 0.12),
            ("1,234.5", 1234.5),
            ("1.234,5", 1234.5),
            ("1 234", 1234.0),
            ("1,234,567", 1_234_567.0),
            ("1.234.567", 1_234_567.0),
            ("€ 4.20", 4.2),
            ("(3)", -3.0),
            ("1'234", 1234.0),
        ] {
            assert_eq!(number(text), Some(expected), "{text:?}");
        }
        for text in ["", "good", "1,2,3", "1.2.3", "--", "12a", "inf", "nan", "e"] {
            assert_eq!(number(text), None, "{text:?}");
        }
    }
}
