//! Workbooks made in the tests, and looking into packages.

use std::collections::BTreeMap;
use std::io::{Cursor, Read};
use std::path::{Path, PathBuf};

use calamine::{Data, Range, Reader, Xlsx};
use jiff::civil::DateTime;
use risefall::method::declaration::{Argument, Arguments};
use risefall::problem::Problem;
use risefall::workbook::annotate::{Annotated, annotate};
use risefall::workbook::settings::Settings;
use rust_xlsxwriter::{Format, Workbook};

/// A folder of a test's own, with a workbook in it.
pub struct Desk {
    folder: tempfile::TempDir,
}

impl Desk {
    pub fn new() -> Self {
        Desk { folder: tempfile::tempdir().unwrap() }
    }

    pub fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    /// Writes a workbook under a name.
    pub fn put(&self, name: &str, bytes: &[u8]) -> PathBuf {
        let path = self.path(name);
        std::fs::write(&path, bytes).unwrap();
        path
    }

    /// Annotates `from` into `to` with named values.
    pub fn annotate(&self, from: &str, to: &str, values: &[(&str, &str)]) -> Result<Annotated, Problem> {
        let arguments: Arguments = values.iter().map(|(name, value)| (*name, Argument::Text((*value).into()))).collect();
        let settings = Settings::read(&arguments)?;
        annotate(&self.path(from), &self.path(to), &settings, DateTime::constant(2026, 1, 5, 9, 0, 0, 0), &mut |_| {})
    }

    pub fn sheet(&self, name: &str, sheet: &str) -> Range<Data> {
        let mut book: Xlsx<_> = calamine::open_workbook(self.path(name)).unwrap();
        book.worksheet_range(sheet).unwrap()
    }

    pub fn sheets(&self, name: &str) -> Vec<String> {
        let book: Xlsx<_> = calamine::open_workbook(self.path(name)).unwrap();
        book.sheet_names()
    }

    pub fn parts(&self, name: &str) -> BTreeMap<String, Vec<u8>> {
        parts(&self.path(name))
    }
}

/// All parts of a package, unpacked.
pub fn parts(path: &Path) -> BTreeMap<String, Vec<u8>> {
    let mut archive = zip::ZipArchive::new(Cursor::new(std::fs::read(path).unwrap())).unwrap();
    let mut parts = BTreeMap::new();
    for index in 0..archive.len() {
        let mut file = archive.by_index(index).unwrap();
        let mut bytes = Vec::new();
        file.read_to_end(&mut bytes).unwrap();
        parts.insert(file.name().unwrap().into_owned(), bytes);
    }
    parts
}

/// Twenty weeks: a measured indicator that rises without exception, a graded one, and one that is all the same.
pub fn weekly() -> Vec<u8> {
    let mut workbook = Workbook::new();
    let date = Format::new().set_num_format("yyyy-mm-dd");
    let sheet = workbook.add_worksheet();
    sheet.set_name("Ward data").unwrap();
    sheet.write(0, 0, "Weekly checks on the ward").unwrap();
    for (column, label) in ["Week", "Falls reported (count)", "Mood", "Beds"].iter().enumerate() {
        sheet.write(2, column as u16, *label).unwrap();
    }
    let grades = ["poor", "fair", "good"];
    for week in 0..20_u32 {
        let row = 3 + week;
        sheet.write_with_format(row, 0, 45_300.0 + 7.0 * f64::from(week), &date).unwrap();
        sheet.write(row, 1, week + 2).unwrap();
        if week != 4 {
            sheet.write(row, 2, grades[(week as usize * 7 + 1) % 3]).unwrap();
        }
        sheet.write(row, 3, 24).unwrap();
    }
    sheet.write(23, 0, "Total").unwrap();
    sheet.write(23, 1, 999).unwrap();
    workbook.save_to_buffer().unwrap()
}

/// The row of a sheet whose first cell is the given text.
pub fn row<'a>(range: &'a Range<Data>, first: &str) -> Vec<&'a Data> {
    let found = range.rows().find(|row| row[0] == *first);
    found.unwrap_or_else(|| panic!("no row begins with {first}")).iter().collect()
}
