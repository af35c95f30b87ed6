//! Opening a file and reading its cells once.

use std::borrow::Cow;
use std::fs::File;
use std::io::{BufReader, Cursor, Read, Seek, SeekFrom};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::Path;
use std::sync::Once;

use calamine::{Data, DataRef, ExcelDateTime, Ods, Reader, SheetType, SheetVisible, Xls, Xlsb, Xlsx};

use super::cells::{Cells, Packed};
use super::error::Error;

/// The most filled cells that are read: at 8 bytes each they take up to 160 MB, dates up to twice as much.
const MOST_CELLS: usize = 20_000_000;
/// The largest text table that is read.
const LARGEST_TEXT: u64 = 256 << 20;

/// What a file is, told from its contents.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Format {
    /// Office Open XML, to which sheets can be added.
    Package,
    /// The older binary form.
    Xls,
    /// The binary package.
    Xlsb,
    /// OpenDocument.
    Ods,
    /// A table as text.
    Text,
}

/// Tells what a file is from its contents; its name does not matter.
pub fn format(path: &Path) -> Result<Format, Error> {
    let mut file = BufReader::new(File::open(path)?);
    let mut head = Vec::new();
    file.by_ref().take(4096).read_to_end(&mut head)?;
    if head.is_empty() {
        return Err(Error::Empty);
    }
    if head.starts_with(&[0xD0, 0xCF, 0x11, 0xE0]) {
        return if is_encrypted(&mut file)? { Err(Error::Encrypted) } else { Ok(Format::Xls) };
    }
    if matches!(head[..], [0x09, 0x00 | 0x02 | 0x04 | 0x08, ..]) && head.get(1) != Some(&b' ') && head.contains(&0) {
        return Ok(Format::Xls);
    }
    if head.starts_with(b"PK") {
        if head.windows(MIMETYPE.len()).any(|window| window == MIMETYPE) {
            return Ok(Format::Ods);
        }
        file.seek(SeekFrom::Start(0))?;
        return Ok(if names_binary_workbook(&mut file)? { Format::Xlsb } else { Format::Package });
    }
    let begins = |mark: &[u8]| head.trim_ascii_start().get(..mark.len()).is_some_and(|start| start.eq_ignore_ascii_case(mark));
    if [&b"%PDF"[..], b"{\\rtf", b"<!doctype", b"<html", b"<?xml"].iter().any(|mark| begins(mark)) {
        return Err(Error::Kind);
    }
    if wide_encoding(&head).is_some() || four_byte_units(&head).is_some() || !head.contains(&0) {
        Ok(Format::Text)
    } else {
        Err(Error::Kind)
    }
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

const MIMETYPE: &[u8] = b"application/vnd.oasis.opendocument.spreadsheet";

/// An encrypted workbook is a compound file with a stream of this name.
fn is_encrypted(file: &mut (impl Read + Seek)) -> Result<bool, Error> {
    const NAME: &str = "EncryptedPackage";
    let wide: Vec<u8> = NAME.encode_utf16().flat_map(u16::to_le_bytes).collect();
    file.seek(SeekFrom::Start(0))?;
    let mut bytes = Vec::new();
    file.take(64 << 20).read_to_end(&mut bytes)?;
    Ok(bytes.windows(wide.len()).any(|window| window == wide))
}

/// The zip's directory at the end of the file names the parts.
fn names_binary_workbook(file: &mut (impl Read + Seek)) -> Result<bool, Error> {
    let length = file.seek(SeekFrom::End(0))?;
    file.seek(SeekFrom::Start(length.saturating_sub(1 << 20)))?;
    let mut tail = Vec::new();
    file.take(1 << 20).read_to_end(&mut tail)?;
    Ok(tail.windows(12).any(|window| window == b"workbook.bin"))
}

/// Reads all cells of a file. Sheets named in `skip` are left out. `progress` gets sheets read and sheets in all.
pub fn read(path: &Path, format: Format, skip: &[String], progress: &mut dyn FnMut(u64, u64)) -> Result<Cells, Error> {
    let length = std::fs::metadata(path)?.len();
    if length == 0 {
        return Err(Error::Empty);
    }
    // The reading library may panic on damaged files; such a file is refused like any other that cannot be read.
    let result = quietly(|| match format {
        Format::Package => read_xlsx(path, skip, progress),
        Format::Xlsb => whole::<Xlsb<_>>(path, skip),
        Format::Xls => whole::<Xls<_>>(path, skip),
        Format::Ods => whole::<Ods<_>>(path, skip),
        Format::Text => read_text(path, length),
    });
    result.unwrap_or_else(|_| Err(Error::Unreadable("workbook")))
}

thread_local! {
    static QUIET: std::cell::Cell<bool> = const { std::cell::Cell::new(false) };
}

/// Catches a panic without the usual lines on the terminal; panics of other threads are shown as ever.
fn quietly<T>(work: impl FnOnce() -> T) -> std::thread::Result<T> {
    static HOOK: Once = Once::new();
    HOOK.call_once(|| {
        let usual = std::panic::take_hook();
        std::panic::set_hook(Box::new(move |panic| {
            if !QUIET.get() {
                usual(panic);
            }
        }));
    });
    QUIET.set(true);
    let result = catch_unwind(AssertUnwindSafe(work));
    QUIET.set(false);
    result
}

fn damaged<E>(_: E) -> Error {
    Error::Unreadable("workbook")
}

/// Which sheets are read; what is said of the others.
fn chosen(sheets: &[calamine::Sheet], skip: &[String], remarks: &mut Vec<String>) -> Vec<String> {
    let mut names = Vec::new();
    for sheet in sheets {
        let why = match (sheet.typ, sheet.visible) {
            _ if skip.contains(&sheet.name) => continue,
            (SheetType::WorkSheet, SheetVisible::Visible) => {
                names.push(sheet.name.clone());
                continue;
            }
            (SheetType::WorkSheet, _) => "it is hidden",
            (SheetType::ChartSheet, _) => "it is a chart",
            _ => "it is a macro or dialog sheet",
        };
        remarks.push(format!("The sheet {} was not looked at: {why}.", sheet.name));
    }
    names
}

fn read_xlsx(path: &Path, skip: &[String], progress: &mut dyn FnMut(u64, u64)) -> Result<Cells, Error> {
    let mut book: Xlsx<_> = Xlsx::new(BufReader::new(File::open(path)?)).map_err(damaged)?;
    let mut cells = Cells::default();
    let names = chosen(book.sheets_metadata(), skip, &mut cells.remarks);
    for (done, name) in names.iter().enumerate() {
        progress(done as u64, names.len() as u64);
        cells.begin_sheet(name);
        match read_sheet(&mut book, name, &mut cells) {
            Err(Error::Unreadable(_)) => cells.remarks.push(unread_sheet(name)),
            read => read?,
        }
    }
    Ok(cells)
}

fn read_sheet(book: &mut Xlsx<BufReader<File>>, name: &str, cells: &mut Cells) -> Result<(), Error> {
    let mut reader = book.worksheet_cells_reader(name).map_err(damaged)?;
    let percentages: Vec<bool> = reader.styles().iter().map(shows_percentage).collect();
    while let Some((cell, style)) = reader.next_cell_with_style_id().map_err(damaged)? {
        let (row, column) = cell.get_position();
        let packed = pack_ref(cell.get_value(), cells);
        cells.add(row, column, packed);
        if percentages.get(style) == Some(&true) && matches!(packed, Packed::Number(_)) {
            cells.note_percentage(column);
        }
        if cells.count() > MOST_CELLS {
            return Err(Error::TooManyCells(MOST_CELLS));
        }
    }
    Ok(())
}

fn unread_sheet(name: &str) -> String {
    format!(
        "The cells of the sheet {name} cannot be read; open the workbook in the spreadsheet program, save it anew, and send that."
    )
}

/// Whether numbers in a style are shown as percentages.
fn shows_percentage(style: &calamine::Style) -> bool {
    style.number_format.as_ref().is_some_and(|format| format.format_code.contains('%'))
}

fn whole<R>(path: &Path, skip: &[String]) -> Result<Cells, Error>
where
    R: Reader<BufReader<File>>,
{
    let mut book = R::new(BufReader::new(File::open(path)?)).map_err(damaged)?;
    let mut cells = Cells::default();
    for name in chosen(book.sheets_metadata(), skip, &mut cells.remarks) {
        cells.begin_sheet(&name);
        let range = book.worksheet_range(&name);
        add_range(&mut cells, &name, range.map_err(damaged))?;
    }
    Ok(cells)
}

fn add_range(cells: &mut Cells, name: &str, range: Result<calamine::Range<Data>, Error>) -> Result<(), Error> {
    match range {
        Err(_) => cells.remarks.push(unread_sheet(name)),
        Ok(range) => {
            let (top, left) = range.start().unwrap_or_default();
            for (row, column, value) in range.used_cells() {
                let packed = pack(value, cells);
                cells.add(top + row as u32, left + column as u32, packed);
                if cells.count() > MOST_CELLS {
                    return Err(Error::TooManyCells(MOST_CELLS));
                }
            }
        }
    }
    Ok(())
}

fn pack_ref(value: &DataRef<'_>, cells: &mut Cells) -> Packed {
    match value {
        DataRef::Empty => Packed::Empty,
        DataRef::Int(integer) => Packed::Number(*integer as f64),
        DataRef::Float(number) => Packed::Number(*number),
        DataRef::String(text) => pack_text(text, cells),
        DataRef::SharedString(text) => pack_text(text, cells),
        DataRef::Bool(truth) => Packed::Truth(*truth),
        DataRef::DateTime(date) => pack_date(date, cells),
        DataRef::DateTimeIso(text) | DataRef::DurationIso(text) => pack_text(text, cells),
        DataRef::Error(error) => Packed::Error(cells.keep(&error.to_string())),
    }
}

fn pack(value: &Data, cells: &mut Cells) -> Packed {
    match value {
        Data::Empty => Packed::Empty,
        Data::Int(integer) => Packed::Number(*integer as f64),
        Data::Float(number) => Packed::Number(*number),
        Data::String(text) => pack_text(text, cells),
        Data::Bool(truth) => Packed::Truth(*truth),
        Data::DateTime(date) => pack_date(date, cells),
        Data::DateTimeIso(text) | Data::DurationIso(text) => pack_text(text, cells),
        Data::Error(error) => Packed::Error(cells.keep(&error.to_string())),
        #[allow(unreachable_patterns, reason = "the library may add kinds of cells")]
        _ => Packed::Empty,
    }
}

fn pack_text(text: &str, cells: &mut Cells) -> Packed {
    match text.trim() {
        "" => Packed::Empty,
        text => Packed::Text(cells.keep(text)),
    }
}

/// A serial number below 1 formatted as a date is a time of day, which is a span like a duration.
fn pack_date(date: &ExcelDateTime, cells: &mut Cells) -> Packed {
    let serial = date.as_f64();
    if !cells.date_1904 && serial >= 1.0 {
        let from_1900 = ExcelDateTime::new(serial, calamine::ExcelDateTimeType::DateTime, false);
        cells.date_1904 = date.to_ymd_hms_milli() != from_1900.to_ymd_hms_milli();
    }
    if date.is_duration() || (0.0..1.0).contains(&serial) { Packed::Duration(serial) } else { Packed::Date(serial) }
}

/// Reads a text table: encoding from its mark or its bytes, separator from its first lines.
fn read_text(path: &Path, length: u64) -> Result<Cells, Error> {
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
