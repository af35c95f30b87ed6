//! The houses, as a table that other sheets refer to.

use rust_xlsxwriter::{Formula, Table, TableColumn, TableStyle, Worksheet, XlsxError};

use super::readings::{HOUSES, Inspection, WEEKS, Week};
use super::style::{Style, computed};
use super::weekly::outside;

pub const NAME: &str = "Houses";

const FIRST: u32 = 4;
const HEADINGS: [&str; 7] = ["House", "Place", "Rooms", "Opened", "Visits", "Good or better", "Last visit"];

pub fn fill(sheet: &mut Worksheet, weeks: &[Week], style: &Style) -> Result<(), XlsxError> {
    for (column, width) in (0..).zip([18.0, 18.0, 10.0, 15.0, 10.0, 16.0, 15.0]) {
        sheet.set_column_width(column, width)?;
    }
    sheet.set_row_height(0, 26)?.write_with_format(0, 0, "Ternfield Hotels: the houses", &style.title)?;
    sheet.write_with_format(1, 0, "Visits are counted from the weekly readings.", &style.remark)?;
    for (index, house) in HOUSES.iter().enumerate() {
        let row = FIRST + index as u32;
        sheet.write_with_format(row, 0, house.name, &style.text)?;
        sheet.write_with_format(row, 1, house.place, &style.text)?;
        sheet.write_number_with_format(row, 2, house.rooms, &style.number("0"))?;
        sheet.write_number_with_format(row, 3, house.opened, &style.date)?;
        visits(sheet, row, index, weeks, style)?;
    }
    let columns: Vec<TableColumn> = (0..)
        .zip(HEADINGS)
        .map(|(column, heading)| {
            let right = matches!(column, 2 | 4 | 5);
            TableColumn::new().set_header(heading).set_header_format(if right { &style.heading } else { &style.heading_left })
        })
        .collect();
    let table = Table::new().set_name("Houses").set_columns(&columns).set_style(TableStyle::None).set_autofilter(false);
    sheet.add_table(FIRST - 1, 0, FIRST + HOUSES.len() as u32 - 1, HEADINGS.len() as u16 - 1, &table)?;
    rooms(sheet, style)
}

/// How often a house was graded, how often well, and when last.
fn visits(sheet: &mut Worksheet, row: u32, house: usize, weeks: &[Week], style: &Style) -> Result<(), XlsxError> {
    let graded: Vec<(u32, usize)> = weeks
        .iter()
        .filter(|week| week.house == house)
        .filter_map(|week| match week.inspection {
            Inspection::Graded(place) => Some((week.monday, place)),
            _ => None,
        })
        .collect();
    let count = graded.len() as f64;
    let well = graded.iter().filter(|(_, place)| *place >= 2).count() as f64;
    let last = graded.last().map_or(0, |(monday, _)| *monday);
    let [dates, houses, grades] = ['A', 'B', 'C'].map(|letter| outside(letter, 0, WEEKS));
    let name = format!("A{}", row + 1);
    let formulas: [(Formula, _); 3] = [
        (computed(format!("SUMPRODUCT(COUNTIFS({houses},{name},{grades},Grades))"), count), style.number("0")),
        (
            computed(
                format!("SUMPRODUCT(COUNTIFS({houses},{name},{grades},{{\"good\";\"very good\"}}))/E{}", row + 1),
                well / count,
            ),
            style.number("0%"),
        ),
        (
            computed(format!("SUMPRODUCT(MAX(({houses}={name})*({grades}<>\"\")*({grades}<>\"n/a\")*{dates}))"), last.into()),
            style.date.clone(),
        ),
    ];
    for (column, (formula, format)) in (4..).zip(formulas) {
        sheet.write_formula_with_format(row, column, formula, &format)?;
    }
    Ok(())
}

/// The total of the rooms, below the table.
fn rooms(sheet: &mut Worksheet, style: &Style) -> Result<(), XlsxError> {
    let (row, last) = (FIRST + HOUSES.len() as u32, FIRST + HOUSES.len() as u32);
    for column in 0..HEADINGS.len() as u16 {
        sheet.write_blank(row, column, &style.label_below)?;
    }
    sheet.write_with_format(row, 0, "All houses", &style.label_below)?;
    let total: u32 = HOUSES.iter().map(|house| house.rooms).sum();
    let sum = computed(format!("SUM(C{}:C{last})", FIRST + 1), total.into());
    sheet.write_formula_with_format(row, 2, sum, &style.number_below("0"))?;
    Ok(())
}

/// The names of the houses, as a reference.
pub fn names_range() -> String {
    format!("={NAME}!$A${}:$A${}", FIRST + 1, FIRST as usize + HOUSES.len())
}
