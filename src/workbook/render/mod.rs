//! The new sheets as a workbook of their own.
//!
//! The workbook also holds placeholder sheets that carry the user's sheet names, with the readings at the very same
//! cells, so that the charts on the user's own cells get filled caches. They stay behind when the new sheets are moved
//! into the user's package.

mod charts;
mod conclusions;
mod live;
mod log_sheet;
mod look;
mod pairings;
mod plan_sheet;
mod statistics;
mod values;
mod wording;

use jiff::civil::DateTime;
use rust_xlsxwriter::{DocProperties, ExcelDateTime, Workbook, Worksheet, XlsxError};

pub use log_sheet::read_back as read_log;
pub use plan_sheet::read_back;
pub use values::values_only;

use super::indicator::Judged;
use crate::finding::Adjustment;
use crate::problem::{Problem, ProblemKind};

/// Making the sheets failed; the fault is ours.
#[derive(Debug, thiserror::Error)]
#[error("the new sheets could not be made: {0}")]
pub struct Error(#[from] XlsxError);

impl From<Error> for Problem {
    fn from(error: Error) -> Self {
        Problem::new(ProblemKind::Broken, "workbook-write", error.to_string())
    }
}

/// The names of the new sheets in the workbook.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SheetNames {
    pub conclusions: String,
    pub statistics: String,
    pub pairings: String,
    pub charts: String,
    pub plan: String,
    pub log: String,
}

impl SheetNames {
    /// The usual names, each with a number behind it where the user has a sheet of that name.
    pub fn beside(users: &[String]) -> Self {
        let free = |name: &str| {
            let taken = |name: &str| users.iter().any(|user| user.to_lowercase() == name.to_lowercase());
            let numbered = (2..).map(|number| format!("{name} {number}"));
            std::iter::once(name.to_owned()).chain(numbered).find(|name| !taken(name)).unwrap_or_default()
        };
        SheetNames {
            conclusions: free(wording::CONCLUSIONS),
            statistics: free(wording::STATISTICS),
            pairings: free(wording::PAIRINGS),
            charts: free(wording::CHARTS),
            plan: free(wording::PLAN),
            log: free(wording::LOG),
        }
    }

    /// Whether a name is the plan's, with or without a number behind it.
    pub fn is_plan(name: &str) -> bool {
        name.starts_with(wording::PLAN)
    }

    /// Whether a name is the log's, with or without a number behind it.
    pub fn is_log(name: &str) -> bool {
        name.starts_with(wording::LOG)
    }

    fn list(&self) -> Vec<String> {
        [&self.conclusions, &self.statistics, &self.pairings, &self.charts, &self.plan, &self.log].map(String::clone).to_vec()
    }
}

/// What the sheets are made from.
pub struct Input<'a> {
    /// The indicators with their findings, in the order of the workbook.
    pub judged: &'a [Judged],
    /// How p-values were adjusted.
    pub adjustment: Adjustment,
    /// The names of the new sheets.
    pub names: &'a SheetNames,
    /// What was noticed in the workbook, in whole sentences.
    pub remarks: &'a [String],
    /// Rows of the plan that are not judged.
    pub unjudged: &'a [super::PlanRow],
    /// The rows that the log already has.
    pub earlier_log: &'a [super::log::LogRow],
    /// Whether the workbook counts its dates from 1904.
    pub date_1904: bool,
    /// When this is made.
    pub made_on: DateTime,
}

/// The new sheets' workbook.
pub struct Donor {
    /// The file's bytes.
    pub bytes: Vec<u8>,
    /// The sheets to take over, in order.
    pub sheets: Vec<String>,
}

/// The program's name and version, as the sheets state it.
pub const PROGRAM: &str = concat!("Risefall ", env!("CARGO_PKG_VERSION"));

/// Makes the new sheets.
pub fn render(input: &Input) -> Result<Donor, Error> {
    let mut workbook = Workbook::new();
    workbook.set_properties(&DocProperties::new().set_creation_datetime(&ExcelDateTime::from_ymd(2000, 1, 1)?));
    let look = look::Look::new();
    let layout = pairings::lay_out(input.judged);
    let family = statistics::family(input, &layout);

    let mut sheets: Vec<Worksheet> = Vec::new();
    sheets.push(conclusions::sheet(input, &look, &family)?);
    sheets.push(statistics::sheet(input, &look, &layout, &family)?);
    sheets.push(pairings::sheet(input, &look, &layout)?);
    let (charts, placeholders) = charts::sheets(input, &look)?;
    sheets.push(charts);
    sheets.push(plan_sheet::sheet(input, &look)?);
    sheets.push(log_sheet::sheet(input, &look)?);
    for sheet in sheets.into_iter().chain(placeholders) {
        workbook.push_worksheet(sheet);
    }
    Ok(Donor { bytes: workbook.save_to_buffer()?, sheets: input.names.list() })
}

/// The serial number of a moment that is a date, in the workbook's own system.
fn serial(input: &Input, days_since_1970: f64) -> f64 {
    /// Days from the end of 1899 to the start of 1970, and from there to the start of 1904.
    const FROM_1900: f64 = 25_569.0;
    const BETWEEN_SYSTEMS: f64 = 1_462.0;
    days_since_1970 + FROM_1900 - if input.date_1904 { BETWEEN_SYSTEMS } else { 0.0 }
}

/// A sheet set up for a landscape page as wide as the table, with a repeated heading and page numbers.
fn page(sheet: &mut Worksheet, name: &str, heading_row: u32) -> Result<(), Error> {
    sheet.set_name(name)?;
    sheet.set_landscape().set_paper_size(9).set_print_fit_to_pages(1, 0).set_margins(0.4, 0.4, 0.6, 0.6, 0.3, 0.3);
    sheet.set_footer("&L&A&RPage &P of &N").set_screen_gridlines(false);
    sheet.set_repeat_rows(heading_row, heading_row)?;
    sheet.set_freeze_panes(heading_row + 1, 1)?;
    sheet.set_row_height(heading_row, 32)?;
    Ok(())
}

/// Text no longer than a cell can hold.
fn fitting(text: &str) -> String {
    const LONGEST: usize = 32_767;
    text.chars().take(LONGEST).collect()
}
