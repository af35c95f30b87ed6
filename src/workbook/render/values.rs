//! A new workbook with the values of a file that is no package: the sheets that ours go beside.

use rust_xlsxwriter::{DocProperties, ExcelDateTime, Format, Workbook};

use super::Error;
use crate::reading::Cell;

/// A sheet's name, and its filled cells with row and column from 0.
pub type Sheet<'a> = (&'a str, Box<dyn Iterator<Item = (u32, u32, Cell)> + 'a>);

/// Writes the values of all sheets into a new workbook.
pub fn values_only<'a>(sheets: impl IntoIterator<Item = Sheet<'a>>) -> Result<Vec<u8>, Error> {
    let mut workbook = Workbook::new();
    workbook.set_properties(&DocProperties::new().set_creation_datetime(&ExcelDateTime::from_ymd(2000, 1, 1)?));
    let date = Format::new().set_num_format("yyyy-mm-dd");
    let time = Format::new().set_num_format("yyyy-mm-dd hh:mm");
    let span = Format::new().set_num_format("[h]:mm:ss");
    let mut names: Vec<String> = Vec::new();
    for (name, cells) in sheets {
        let sheet = workbook.add_worksheet();
        let name = legal(name, &names);
        sheet.set_name(&name)?;
        names.push(name);
        for (row, column, cell) in cells {
            let column = column as u16;
            match cell {
                Cell::Empty => continue,
                Cell::Number(number) => sheet.write(row, column, number)?,
                Cell::Text(text) | Cell::Error(text) => sheet.write(row, column, super::fitting(&text))?,
                Cell::Truth(truth) => sheet.write(row, column, truth)?,
                Cell::Duration(days) => sheet.write_with_format(row, column, days, &span)?,
                Cell::Date(moment) => {
                    let (day, clock) = (moment.date(), moment.time());
                    let serial = ExcelDateTime::from_ymd(day.year() as u16, day.month() as u8, day.day() as u8)?.and_hms(
                        clock.hour() as u16,
                        clock.minute() as u8,
                        clock.second() as u8,
                    )?;
                    let format = if clock == jiff::civil::Time::midnight() { &date } else { &time };
                    sheet.write_with_format(row, column, &serial, format)?
                }
            };
        }
    }
    if names.is_empty() {
        workbook.add_worksheet();
    }
    Ok(workbook.save_to_buffer()?)
}

/// A name that a sheet may have: at most 31 characters, none of the forbidden ones, and not taken.
fn legal(name: &str, taken: &[String]) -> String {
    let plain: String = name.chars().map(|c| if "[]:*?/\\".contains(c) { '_' } else { c }).take(28).collect();
    let plain = plain.trim_matches('\'').to_owned();
    let plain = if plain.is_empty() { "Sheet".to_owned() } else { plain };
    let numbered = (2..).map(|number| format!("{plain} {number}"));
    let is_free = |name: &String| !taken.iter().any(|other| other.to_lowercase() == name.to_lowercase());
    std::iter::once(plain.clone()).chain(numbered).find(is_free).unwrap_or(plain)
}
