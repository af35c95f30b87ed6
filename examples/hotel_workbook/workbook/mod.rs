//! The workbook of an invented hotel group, as its guest-service coordinator would keep it.

mod houses;
mod notes;
pub mod readings;
mod style;
mod summary;
mod vba_compression;
pub mod vba_project;
mod weekly;

use rust_xlsxwriter::{DocProperties, ExcelDateTime, Workbook, Worksheet, XlsxError};

use readings::Week;
use style::Style;
use vba_project::{Kind, Module};

/// The sheets in their order, each with the name by which a macro project knows it.
pub const SHEETS: [(&str, &str); 4] =
    [(summary::NAME, "SummarySheet"), (weekly::NAME, "WeeklySheet"), (houses::NAME, "HousesSheet"), (notes::NAME, "NotesSheet")];

/// Writes a sheet.
type Filler = fn(&mut Worksheet, &[Week], &Style) -> Result<(), XlsxError>;

/// Builds the workbook. The time of its creation is fixed, so that the same readings give the same bytes.
///
/// # Errors
/// A limit of the file format is crossed; none is by these readings.
pub fn build(weeks: &[Week]) -> Result<Workbook, XlsxError> {
    let style = Style::new();
    let mut workbook = Workbook::new();
    let properties = DocProperties::new()
        .set_title("Ternfield Hotels: guest service, weekly readings")
        .set_subject("An invented example")
        .set_author("Guest service")
        .set_creation_datetime(&ExcelDateTime::from_ymd(2025, 12, 29)?);
    workbook.set_properties(&properties);
    let fillers: [Filler; 4] = [summary::fill, weekly::fill, houses::fill, notes::fill];
    for ((name, code_name), fill) in SHEETS.into_iter().zip(fillers) {
        let sheet = workbook.add_worksheet();
        sheet.set_name(name)?.set_vba_name(code_name)?;
        fill(sheet, weeks, &style)?;
        style::print_setup(sheet);
    }
    workbook.define_name("Grades", &notes::grades_range())?;
    workbook.define_name("Response_target", &notes::target_cell())?;
    workbook.define_name("House_names", &houses::names_range())?;
    Ok(workbook)
}

/// The modules of the macro-enabled copy: those that every workbook and sheet has, and the client.
pub fn modules(client: &str) -> Vec<Module<'_>> {
    let document = |kind, name| Module { name, kind, source: "" };
    let mut modules = vec![document(Kind::Workbook, "ThisWorkbook")];
    modules.extend(SHEETS.map(|(_, code_name)| document(Kind::Sheet, code_name)));
    modules.push(Module { name: "Risefall", kind: Kind::Plain, source: client });
    modules
}
