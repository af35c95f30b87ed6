//! Annotating a workbook of 52,000 rows and 30 columns, as ratios to openpyxl (load, add a sheet, save) and to
//! calamine's bare streaming read of the same sheets, all in one run.
//!
//! `cargo bench --bench annotate` (needs Python with openpyxl; RISEFALL_PYTHON names it, else `python3`).

use std::path::Path;
use std::process::Command;

use calamine::{DataRef, Reader, Xlsx, open_workbook};
use rust_xlsxwriter::{ExcelDateTime, Format, Workbook};

const ROWS: u32 = 52_000;
const COLUMNS: u16 = 30;

fn main() {
    let arguments: Vec<String> = std::env::args().collect();
    if let [_, flag, book, ..] = arguments.as_slice()
        && flag == "--read"
    {
        println!("{}", stream(Path::new(book)));
        return;
    }
    let folder = tempfile::tempdir().expect("a temporary folder");
    let book = folder.path().join("readings.xlsx");
    write_book(&book);
    let python = std::env::var("RISEFALL_PYTHON").unwrap_or_else(|_| "python3".into());
    let script = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/bench/annotate.py");
    let status = Command::new(python)
        .arg(script)
        .arg(&book)
        .arg(env!("CARGO_BIN_EXE_risefall"))
        .arg(&arguments[0])
        .status()
        .expect("Python with openpyxl is needed");
    assert!(status.success(), "the measuring script failed");
}

/// Dates in the first column, random walks and noise in the others.
fn write_book(path: &Path) {
    let mut workbook = Workbook::new();
    let sheet = workbook.add_worksheet();
    let date = Format::new().set_num_format("yyyy-mm-dd hh:mm");
    sheet.write(0, 0, "Taken").expect("a cell");
    for column in 1..COLUMNS {
        sheet.write(0, column, format!("Sensor {column}")).expect("a cell");
    }
    let mut state = 7_u64;
    let start = ExcelDateTime::from_ymd(2020, 1, 1).expect("a date").to_excel();
    for row in 1..ROWS {
        sheet.write_with_format(row, 0, start + f64::from(row) / 24.0, &date).expect("a cell");
        for column in 1..COLUMNS {
            state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            let noise = (state >> 11) as f64 / (1_u64 << 53) as f64;
            sheet.write(row, column, (noise * 100_000.0).round() / 1000.0).expect("a cell");
        }
    }
    workbook.save(path).expect("the workbook is written");
}

/// calamine's streaming read of every cell of every sheet.
fn stream(book: &Path) -> u64 {
    let mut workbook: Xlsx<_> = open_workbook(book).expect("the workbook opens");
    let mut numbers = 0;
    for name in workbook.sheet_names() {
        let mut cells = workbook.worksheet_cells_reader(&name).expect("the sheet opens");
        while let Some(cell) = cells.next_cell().expect("a cell") {
            numbers += u64::from(matches!(cell.get_value(), DataRef::Float(_)));
        }
    }
    numbers
}
