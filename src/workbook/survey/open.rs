//! Opening a file and reading its cells once.

use std::fs::File;
use std::io::{BufReader, Read, Seek, SeekFrom};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::Path;
use std::sync::Once;

use calamine::{Data, DataRef, ExcelDateTime, Ods, Reader, SheetType, SheetVisible, Xls, Xlsb, Xlsx};

use super::cells::{Cells, Packed};
use super::error::Error;
use super::text_table::{is_text, read_text};

/// The most filled cells that are read: at 8 bytes each they take up to 160 MB, dates up to twice as much.
pub const MOST_CELLS: usize = 20_000_000;

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
    if is_text(&head) { Ok(Format::Text) } else { Err(Error::Kind) }
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
    result.unwrap_or(Err(Error::Unreadable("workbook")))
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

pub fn pack_text(text: &str, cells: &mut Cells) -> Packed {
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
