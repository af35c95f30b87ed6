//! An indicator whose cells a row of the plan states.

use super::cells::Cells;
use super::indicator::{Named, indicator};
use super::kind::{Kind, Kinds};
use super::moments::Timeline;
use super::rows::{Labels, readings};
use super::unit::split_unit;
use super::view::View;
use crate::reading::Grades;
use crate::workbook::indicator::{Indicator, Rows};
use crate::workbook::plan::PlanRow;
use crate::workbook::reference::{CellRef, Range, ReferenceError};

/// Why a row's references do not lead to readings.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum StatedError {
    /// A reference cannot be read.
    #[error("{0}")]
    Reference(#[from] ReferenceError),
    /// A sheet is not there.
    #[error("there is no sheet named `{0}` in the workbook")]
    Sheet(String),
    /// Readings must be part of one column.
    #[error("{0} covers several columns; an indicator's readings stand in one column")]
    SeveralColumns(String),
    /// Moments must stand beside the readings.
    #[error("the moments {moments} do not stand beside the readings {cells}, row by row")]
    Beside { moments: String, cells: String },
    /// No row of a long table has the indicator's name.
    #[error("no row of {names} is named `{name}`; write the indicator's name as it stands there")]
    Name { names: String, name: String },
    /// The grades cannot be read.
    #[error("{0}")]
    Grades(#[from] crate::reading::scale::GradesError),
}

/// Makes an indicator of the cells that a row of the plan states.
pub fn indicator_at(cells: &Cells, row: &PlanRow) -> Result<Indicator, StatedError> {
    let range: Range = row.cells.parse()?;
    let sheet = cells.sheet(&range.sheet).ok_or_else(|| StatedError::Sheet(range.sheet.clone()))?;
    if !range.is_column() {
        return Err(StatedError::SeveralColumns(range.to_string()));
    }
    let beside = |text: &str| -> Result<Option<u32>, StatedError> {
        if text.trim().is_empty() {
            return Ok(None);
        }
        let other: Range = text.parse()?;
        let same = other.sheet == range.sheet
            && other.is_column()
            && other.first.row == range.first.row
            && other.last.row == range.last.row;
        if same {
            Ok(Some(other.first.column))
        } else {
            Err(StatedError::Beside { moments: other.to_string(), cells: range.to_string() })
        }
    };
    let moments = beside(&row.moments)?;
    let names = beside(&row.names)?;
    let kinds = Kinds::default();
    let view = View { cells, sheet, kinds: &kinds };
    let (rows, column) = ((range.first.row, range.last.row), range.first.column);
    let heading = rows.0.checked_sub(1).map(|row| CellRef { row, column });
    let (kept, cell) = match names {
        Some(names) => {
            let rows: Vec<u32> =
                (rows.0..=rows.1).filter(|&at| is_named(&cells.cell(sheet, at, names).quote(), row.indicator.trim())).collect();
            let Some(&first) = rows.first() else {
                return Err(StatedError::Name { names: row.names.clone(), name: row.indicator.clone() });
            };
            (rows, Some(CellRef { row: first, column: names }))
        }
        None => (rows_of_readings(view, column, moments, rows), heading),
    };
    let timeline = Timeline::of(view, moments, kept);
    let cell = cell.filter(|_| names.is_some() || !matches!(timeline.rows, Rows::Listed(_)));
    let grades = if row.grades.trim().is_empty() { None } else { Some(Grades::parse(&row.grades)?) };
    // Above part of a column, and in a long table, stands another reading.
    let unit = heading.filter(|at| names.is_none() && view.kind(at.row, at.column) == Kind::Word);
    let unit = unit.and_then(|at| split_unit(view.text(at.row, at.column)?).1);
    let named = Named { name: row.indicator.trim().to_owned(), unit, cell };
    Ok(indicator(view, column, &timeline, named, grades.as_ref()))
}

/// The rows of a stated range without those that sum up others. All rows are kept where none has a moment.
fn rows_of_readings(view: View<'_>, column: u32, moments: Option<u32>, (first, last): (u32, u32)) -> Vec<u32> {
    match moments {
        Some(_) => readings(view, Labels::beside(column, moments), (first, last)).rows,
        None => (first..=last).collect(),
    }
}

/// Whether a name in a long table is the wanted one: as it stands, without its unit, or before the heading of its values.
fn is_named(text: &str, wanted: &str) -> bool {
    let (text, wanted) = (text.to_lowercase(), wanted.to_lowercase());
    text == wanted || split_unit(&text).0 == wanted || wanted.strip_prefix(&text).is_some_and(|heading| heading.starts_with(": "))
}
