//! The query string of an address, or the body of a form, turned into arguments.
//!
//! Decoded as the WHATWG URL standard (section `application/x-www-form-urlencoded` parsing) says: `+` is a space, and a
//! percent sign that no two hexadecimal digits follow stands for itself, so that `12%;15%` typed into a formula survives.
//! Decoding therefore never fails; bytes that are not UTF-8 become U+FFFD and are answered where they are used.

use crate::method::declaration::{Argument, Arguments};

/// Reads `name=value&name=value`. A name without `=` has an empty value; empty pieces are skipped.
pub fn arguments(query: &str) -> Arguments {
    pairs(query.as_bytes())
}

/// Reads the body of a form, which has the same form as a query string.
pub fn form(body: &[u8]) -> Arguments {
    pairs(body)
}

fn pairs(bytes: &[u8]) -> Arguments {
    let pieces = bytes.split(|&byte| byte == b'&').filter(|piece| !piece.is_empty());
    pieces
        .map(|piece| {
            let equals = piece.iter().position(|&byte| byte == b'=').unwrap_or(piece.len());
            let value = piece.get(equals + 1..).unwrap_or_default();
            (decode(&piece[..equals]), Argument::Text(decode(value)))
        })
        .collect()
}

fn decode(bytes: &[u8]) -> String {
    let mut decoded = Vec::with_capacity(bytes.len());
    let mut rest = bytes;
    while let [first, tail @ ..] = rest {
        (rest, _) = match (first, tail) {
            (b'%', [high, low, after @ ..]) if high.is_ascii_hexdigit() && low.is_ascii_hexdigit() => {
                (after, decoded.push(hexadecimal(*high) << 4 | hexadecimal(*low)))
            }
            (b'+', _) => (tail, decoded.push(b' ')),
            (other, _) => (tail, decoded.push(*other)),
        };
    }
    String::from_utf8(decoded).unwrap_or_else(|error| String::from_utf8_lossy(error.as_bytes()).into_owned())
}

fn hexadecimal(digit: u8) -> u8 {
    (digit as char).to_digit(16).unwrap_or_default() as u8
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(query: &str, expected: &[(&str, &str)]) {
        let expected: Arguments = expected.iter().map(|&(name, value)| (name, Argument::Text(value.into()))).collect();
        assert_eq!(arguments(query), expected, "{query}");
    }

    #[test]
    fn names_and_values_are_decoded() {
        check("readings=1%3B2;3&seek=rising", &[("readings", "1;2;3"), ("seek", "rising")]);
        check("name=Front+desk%20visits%C3%A9", &[("name", "Front desk visits\u{e9}")]);
        check("a=1&&b&c=&=d", &[("a", "1"), ("b", ""), ("c", ""), ("", "d")]);
        check("grades=poor%3Cfair<good", &[("grades", "poor<fair<good")]);
        check("", &[]);
    }

    #[test]
    fn a_lone_percent_sign_stands_for_itself() {
        check("readings=12%;15%;9%25", &[("readings", "12%;15%;9%")]);
        check("readings=%", &[("readings", "%")]);
        check("readings=%4", &[("readings", "%4")]);
    }

    #[test]
    fn bytes_that_are_not_text_are_marked() {
        check("name=%FF", &[("name", "\u{fffd}")]);
    }
}
