//! Text tables: their encoding, the separator between columns, and their cells.

use std::borrow::Cow;
use std::io::Cursor;
use std::path::Path;

use super::cells::{Cells, Packed};
use super::error::Error;
use super::open::{MOST_CELLS, pack_text};

/// The largest text table that is read.
const LARGEST_TEXT: u64 = 256 << 20;

/// Whether bytes are those of a text rather than of a binary file.
pub fn is_text(head: &[u8]) -> bool {
    wide_encoding(head).is_some() || four_byte_units(head).is_some() || !head.contains(&0)
}

/// UTF-16 by its mark, or by every second byte of the beginning being zero.
fn wide_encoding(bytes: &[u8]) -> Option<&'static encoding_rs::Encoding> {
    const LOOKED_AT: usize = 512;
    let head = &bytes[..bytes.len().min(LOOKED_AT) & !1];
    let zeros = |offset: usize| head.iter().skip(offset).step_by(2).filter(|byte| **byte == 0).count();
    let (even, odd, pairs) = (zeros(0), zeros(1), head.len() / 2);
    match bytes {
        [0xFF, 0xFE, ..] => Some(encoding_rs::UTF_16LE),
        [0xFE, 0xFF, ..] => Some(encoding_rs::UTF_16BE),
        _ if pairs >= 2 && even * 10 >= pairs * 8 && odd * 10 <= pairs => Some(encoding_rs::UTF_16BE),
        _ if pairs >= 2 && odd * 10 >= pairs * 8 && even * 10 <= pairs => Some(encoding_rs::UTF_16LE),
        _ => None,
    }
}

/// The text of a file and the encoding in which it was read: by its mark, by its zeros, UTF-8 if it can be, else
/// windows-1252.
fn decode(bytes: &[u8]) -> (Cow<'_, str>, &'static str) {
    if let Some(in_units) = four_byte_units(bytes) {
        let units = bytes.chunks_exact(4).map(|unit| in_units([unit[0], unit[1], unit[2], unit[3]]));
        let text = units.map(|unit| char::from_u32(unit).unwrap_or(char::REPLACEMENT_CHARACTER));
        return (text.filter(|c| *c != '\u{feff}').collect(), "UTF-32");
    }
    let marked = encoding_rs::Encoding::for_bom(bytes).map(|(encoding, _)| encoding);
    match (marked.or_else(|| wide_encoding(bytes)), std::str::from_utf8(bytes)) {
        (Some(encoding), _) => (encoding.decode(bytes).0, encoding.name()),
        (None, Ok(text)) => (text.into(), "UTF-8"),
        (None, Err(_)) => (encoding_rs::WINDOWS_1252.decode(bytes).0, "windows-1252"),
    }
}

/// How four bytes make a character, if the beginning has the mark of UTF-32 or the zeros that it has everywhere.
fn four_byte_units(bytes: &[u8]) -> Option<fn([u8; 4]) -> u32> {
    const LOOKED_AT: usize = 512;
    let units = || bytes[..bytes.len().min(LOOKED_AT)].chunks_exact(4);
    let everywhere = |zeros: fn(&[u8]) -> bool| units().len() >= 2 && units().all(zeros);
    match bytes {
        [0xFF, 0xFE, 0, 0, ..] => Some(u32::from_le_bytes),
        [0, 0, 0xFE, 0xFF, ..] => Some(u32::from_be_bytes),
        _ if everywhere(|unit| unit[..2] != [0, 0] && unit[2..] == [0, 0]) => Some(u32::from_le_bytes),
        _ if everywhere(|unit| unit[..2] == [0, 0] && unit[2..] != [0, 0]) => Some(u32::from_be_bytes),
        _ => None,
    }
}

/// Reads a text table: encoding from its mark or its bytes, separator from its first lines.
pub fn read_text(path: &Path, length: u64) -> Result<Cells, Error> {
    if length > LARGEST_TEXT {
        return Err(Error::TooManyCells(MOST_CELLS));
    }
    let bytes = std::fs::read(path)?;
    let (text, encoding) = decode(&bytes);
    let (text, stated) = match text.split_once('\n').and_then(|(first, rest)| Some((stated_separator(first)?, rest))) {
        Some((stated, rest)) => (Cow::Borrowed(rest), Some(stated)),
        None => (text, None),
    };
    let separator = stated.unwrap_or_else(|| separator(&text));
    let text = with_blank_lines(&text, separator);
    let mut cells = Cells::default();
    let name = path.file_stem().map(|stem| stem.to_string_lossy().into_owned()).unwrap_or_default();
    cells.begin_sheet(&name);
    let mut reader = csv::ReaderBuilder::new()
        .delimiter(separator)
        .has_headers(false)
        .flexible(true)
        .from_reader(Cursor::new(text.as_bytes()));
    for record in reader.records() {
        let record = record.map_err(|_| Error::Unreadable("text table"))?;
        let row = record.position().map_or(0, |position| position.record()) as u32;
        for (column, field) in record.iter().enumerate() {
            let packed = match field.trim().parse::<f64>() {
                Ok(number)
                    if number.is_finite()
                        && !has_leading_zero(field)
                        && field.trim().bytes().all(|b| b.is_ascii_digit() || b"+-.eE".contains(&b)) =>
                {
                    Packed::Number(number)
                }
                _ => match grouped_number(field).filter(|_| separator == b',') {
                    Some(number) => Packed::Number(number),
                    None => pack_text(field, &mut cells),
                },
            };
            cells.add(row, column as u32, packed);
            if cells.count() > MOST_CELLS {
                return Err(Error::TooManyCells(MOST_CELLS));
            }
        }
    }
    let shown = match separator {
        b'\t' => "tab".to_owned(),
        other => format!("`{}`", other as char),
    };
    cells.remarks.push(format!("The text table was read as {encoding} with {shown} between the columns."));
    Ok(cells)
}

/// The separator in a first line such as `sep=;`, which some programs write.
fn stated_separator(line: &str) -> Option<u8> {
    match line.trim().as_bytes() {
        [b's' | b'S', b'e' | b'E', b'p' | b'P', b'=', separator] => Some(*separator),
        _ => None,
    }
}

/// The text with a separator in each blank line outside quotes, so that it stays a row, which parts tables.
fn with_blank_lines(text: &str, separator: u8) -> Cow<'_, str> {
    if !text.contains("\n\n") && !text.contains("\n\r\n") {
        return text.into();
    }
    let mut kept = String::with_capacity(text.len() + 64);
    let mut in_quotes = false;
    for line in text.split_inclusive('\n') {
        if !in_quotes && line.trim().is_empty() {
            kept.push(separator.into());
        }
        kept.push_str(line);
        in_quotes ^= line.bytes().filter(|byte| *byte == b'"').count() % 2 == 1;
    }
    kept.into()
}

/// `12,480` between commas is a whole number in groups of three, since a comma within a field is no decimal sign there.
fn grouped_number(field: &str) -> Option<f64> {
    let field = field.trim();
    let (whole, rest) = field.split_once('.').map_or((field, None), |(whole, rest)| (whole, Some(rest)));
    let digits = |part: &str| !part.is_empty() && part.bytes().all(|byte| byte.is_ascii_digit());
    let mut groups = whole.strip_prefix('-').unwrap_or(whole).split(',');
    let first = groups.next().filter(|first| digits(first) && first.len() <= 3)?;
    let grouped = whole.len() > first.len() + 1 && groups.all(|group| digits(group) && group.len() == 3);
    if grouped && rest.is_none_or(digits) { field.replace(',', "").parse().ok() } else { None }
}

/// `00417` names something; `0.5` and `0` count.
fn has_leading_zero(field: &str) -> bool {
    field.trim().strip_prefix('0').is_some_and(|rest| rest.starts_with(|c: char| c.is_ascii_digit()))
}

/// The separator that splits the first lines into the same, largest number of columns.
fn separator(text: &str) -> u8 {
    let lines: Vec<&str> = text.lines().filter(|line| !line.trim().is_empty()).take(20).collect();
    let score = |separator: &u8| {
        let counts: Vec<usize> = lines.iter().map(|line| line.bytes().filter(|byte| byte == separator).count()).collect();
        let usual =
            counts.iter().copied().max_by_key(|&count| counts.iter().filter(|&&other| other == count).count()).unwrap_or(0);
        let agreeing = counts.iter().filter(|&&count| count == usual && usual > 0).count();
        (agreeing, usual)
    };
    [b';', b'\t', b',', b'|'].into_iter().max_by_key(score).filter(|separator| score(separator).0 > 0).unwrap_or(b',')
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn text_is_read_in_every_encoding() {
        let text = "Zürich;≤ 5\n1;2";
        let marked = format!("\u{feff}{text}");
        let utf16 = |bytes: fn(u16) -> [u8; 2]| marked.encode_utf16().flat_map(bytes).collect::<Vec<u8>>();
        let utf32 = |bytes: fn(u32) -> [u8; 4]| marked.chars().flat_map(|c| bytes(c.into())).collect::<Vec<u8>>();
        for (bytes, encoding) in [
            (text.as_bytes().to_vec(), "UTF-8"),
            (marked.as_bytes().to_vec(), "UTF-8"),
            (utf16(u16::to_le_bytes), "UTF-16LE"),
            (utf16(u16::to_be_bytes), "UTF-16BE"),
            (utf32(u32::to_le_bytes), "UTF-32"),
            (utf32(u32::to_be_bytes), "UTF-32"),
            (utf32(u32::to_le_bytes)[4..].to_vec(), "UTF-32"),
        ] {
            assert_eq!(decode(&bytes), (text.into(), encoding));
        }
        assert_eq!(decode(b"Z\xFCrich"), ("Zürich".into(), "windows-1252"));
    }
}
