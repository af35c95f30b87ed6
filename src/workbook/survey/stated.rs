//! An indicator whose cells a row of the plan states.

use super::cells::Cells;
use super::find::{indicator, read_moments};
use super::words;
use crate::reading::Grades;
use crate::workbook::indicator::{Indicator, Place, Rows};
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
    let (first, last) = (range.first.row, range.last.row);
    let mut place = Place {
        sheet: sheet.name.clone(),
        column: range.first.column,
        moments,
        rows: Rows::Down { first, count: last - first + 1 },
        header: first.checked_sub(1).map(|row| CellRef { row, column: range.first.column }),
    };
    if let Some(column) = names {
        let wanted = row.indicator.trim();
        let rows = (first..=last).filter(|&at| {
            let text = cells.cell(sheet, at, column).quote();
            text == wanted || words::name_and_unit(&text).0 == wanted
        });
        place.rows = Rows::Listed(rows.collect());
    }
    let mut read = read_moments(cells, sheet, &place);
    if let (Ok(moments), Rows::Down { count, .. }) = (&read, &place.rows)
        && moments.newest_first()
    {
        let reversed = (**moments).clone().reversed();
        place.rows = Rows::Up { first: last, count: *count };
        read = Ok(std::sync::Arc::new(reversed));
    }
    let grades = if row.grades.trim().is_empty() { None } else { Some(Grades::parse(&row.grades)?) };
    let header = place.header.map(|at| cells.cell(sheet, at.row, at.column).quote()).unwrap_or_default();
    let unit = words::name_and_unit(&header).1;
    Ok(indicator(cells, sheet, place, (row.indicator.trim().to_owned(), unit), grades.as_ref(), read))
}
