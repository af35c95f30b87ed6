//! Numbers as text that reads back as the same number.

use crate::method::Datum;

/// The fewest digits that read back as the same number; very small and very large ones as powers of ten. The decimal
/// sign is a point in every language. What is not finite has no digits and is left blank.
pub fn number(value: f64) -> String {
    let size = value.abs();
    if !value.is_finite() {
        String::new()
    } else if size == 0.0 || (1e-5..1e15).contains(&size) {
        format!("{}", value + 0.0)
    } else {
        format!("{value:e}")
    }
}

/// A value as bare text; nothing is an empty text.
pub fn datum(value: &Datum) -> String {
    match value {
        Datum::Nothing => String::new(),
        Datum::Integer(count) => count.to_string(),
        Datum::Number(value) => number(*value),
        Datum::Text(text) => text.clone(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_read_back_identically() {
        let mut value: f64 = 1.234_567_890_123_456_7e-300;
        while value < 1e300 {
            for signed in [value, -value, value.floor()] {
                assert_eq!(number(signed).parse::<f64>().unwrap(), signed, "{signed:e}");
            }
            value *= 7.1;
        }
    }

    #[test]
    fn numbers_are_short() {
        for (value, text) in [
            (0.0078125, "0.0078125"),
            (1e-40, "1e-40"),
            (0.000025, "0.000025"),
            (2.5e-9, "2.5e-9"),
            (37.0, "37"),
            (-0.0, "0"),
            (0.1 + 0.2, "0.30000000000000004"),
            (1e15, "1e15"),
            (f64::NAN, ""),
        ] {
            assert_eq!(number(value), text);
        }
    }
}
