//! Workbooks are drawn row by row; what was found is compared with what a person marked.

use risefall::workbook::PlanRow;
use risefall::workbook::survey::{self, Cells, Error, Survey};
use rust_xlsxwriter::{ExcelDateTime, Format as Look, Workbook, Worksheet};

/// A cell to be written.
#[derive(Clone, Debug)]
pub enum Put {
    Nothing,
    Text(String),
    Number(f64),
    Percent(f64),
    Date(u16, u8, u8),
    /// A span of time in days, shown as hours and minutes.
    Span(f64),
    Truth(bool),
    /// A formula and its stored result.
    Formula(&'static str, &'static str),
}

impl From<&str> for Put {
    fn from(text: &str) -> Put {
        if text.is_empty() { Put::Nothing } else { Put::Text(text.to_owned()) }
    }
}

impl From<String> for Put {
    fn from(text: String) -> Put {
        text.as_str().into()
    }
}

impl From<f64> for Put {
    fn from(number: f64) -> Put {
        Put::Number(number)
    }
}

impl From<i32> for Put {
    fn from(number: i32) -> Put {
        Put::Number(number.into())
    }
}

/// One row of cells.
macro_rules! row {
    ($($cell:expr),* $(,)?) => { vec![$($crate::helpers::Put::from($cell)),*] };
}
pub(crate) use row;

/// Rows of a sheet.
pub type Rows = Vec<Vec<Put>>;

/// Writes rows on a sheet from a cell on.
pub fn draw(sheet: &mut Worksheet, first_row: u32, first_column: u16, rows: &Rows) {
    let (date, percent, span) =
        (Look::new().set_num_format("yyyy-mm-dd"), Look::new().set_num_format("0.0%"), Look::new().set_num_format("[h]:mm"));
    for (row, cells) in (first_row..).zip(rows) {
        for (column, cell) in (first_column..).zip(cells) {
            match cell {
                Put::Nothing => continue,
                Put::Text(text) => sheet.write_string(row, column, text),
                Put::Number(number) => sheet.write_number(row, column, *number),
                Put::Percent(number) => sheet.write_number_with_format(row, column, *number, &percent),
                Put::Date(year, month, day) => {
                    let day = ExcelDateTime::from_ymd(*year, *month, *day).unwrap();
                    sheet.write_datetime_with_format(row, column, &day, &date)
                }
                Put::Span(days) => sheet.write_number_with_format(row, column, *days, &span),
                Put::Truth(truth) => sheet.write_boolean(row, column, *truth),
                Put::Formula(formula, result) => {
                    sheet.write_formula(row, column, rust_xlsxwriter::Formula::new(*formula).set_result(*result))
                }
            }
            .unwrap();
        }
    }
}

/// A workbook of one sheet.
pub fn book(sheet: &str, rows: Rows) -> Vec<u8> {
    book_of(&[(sheet, rows)])
}

/// A workbook of several sheets.
pub fn book_of(sheets: &[(&str, Rows)]) -> Vec<u8> {
    let mut book = Workbook::new();
    for (name, rows) in sheets {
        draw(book.add_worksheet().set_name(*name).unwrap(), 0, 0, rows);
    }
    book.save_to_buffer().unwrap()
}

/// An indicator as a person marks it.
#[derive(Clone, Debug, PartialEq)]
pub struct Marked {
    pub name: String,
    pub cells: String,
    pub moments: String,
    pub count: usize,
    pub missing: usize,
    pub unit: String,
}

/// Marks an indicator: name, cells, moments or nothing, how many readings, how many of them missing, unit or nothing.
pub fn marked(name: &str, cells: &str, moments: &str, count: usize, missing: usize, unit: &str) -> Marked {
    Marked { name: name.into(), cells: cells.into(), moments: moments.into(), count, missing, unit: unit.into() }
}

/// Reads a workbook from its bytes, without the sheets named in `skip`; a text table's sheet is named `Data`.
pub fn read(bytes: &[u8], skip: &[String]) -> Result<Cells, Error> {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("Data.bin");
    std::fs::write(&path, bytes).unwrap();
    survey::read(&path, survey::format(&path)?, skip, &mut |_, _| {})
}

/// Reads a workbook from its bytes.
pub fn cells(bytes: &[u8]) -> Cells {
    read(bytes, &[]).unwrap()
}

/// Surveys a workbook from its bytes.
pub fn survey(bytes: &[u8]) -> Survey {
    survey::survey(&cells(bytes))
}

/// What was found, in the form in which a person marks.
pub fn found(survey: &Survey) -> Vec<Marked> {
    let text = |range: Option<risefall::workbook::Range>| range.map(|range| range.to_string()).unwrap_or_default();
    survey
        .indicators
        .iter()
        .map(|indicator| Marked {
            name: indicator.series.name.clone(),
            cells: text(indicator.place.range()),
            moments: text(indicator.place.moments_range()),
            count: indicator.series.len(),
            missing: indicator.understood.missing.len(),
            unit: indicator.series.unit.clone().unwrap_or_default(),
        })
        .collect()
}

/// Surveys a workbook and compares what was found with what a person marked. What was found must also be what a row of the
/// plan with the same references leads to.
pub fn check(bytes: &[u8], expected: &[Marked]) -> Survey {
    let cells = cells(bytes);
    let survey = survey::survey(&cells);
    assert_eq!(found(&survey), expected, "remarks: {:#?}", survey.remarks);
    let text = |range: Option<risefall::workbook::Range>| range.map(|range| range.to_string()).unwrap_or_default();
    for indicator in &survey.indicators {
        let row = PlanRow {
            indicator: indicator.series.name.clone(),
            cells: text(indicator.place.range()),
            moments: text(indicator.place.moments_range()),
            names: text(indicator.place.names_range()),
            ..PlanRow::default()
        };
        let stated = survey::indicator_at(&cells, &row).unwrap();
        assert_eq!((&stated.place.rows, &stated.series.moments), (&indicator.place.rows, &indicator.series.moments), "{row:?}");
        assert_eq!((&stated.series.values, &stated.series.scale), (&indicator.series.values, &indicator.series.scale), "{row:?}");
    }
    survey
}

/// Whether some remark holds all of the given words.
pub fn says(remarks: &[String], words: &[&str]) -> bool {
    remarks.iter().any(|remark| words.iter().all(|word| remark.contains(word)))
}

/// Numbers that waver about a level, the same each time: a plain generator, so that the tests need no data files.
pub fn readings(count: usize, level: f64, spread: f64) -> Vec<f64> {
    let mut state = 20_250_301_u64;
    let mut next = || {
        state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (state >> 40) as f64 / (1_u64 << 24) as f64
    };
    (0..count).map(|_| ((level + spread * (next() - 0.5)) * 10.0).round() / 10.0).collect()
}
