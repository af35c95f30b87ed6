//! How the readings are taken, and the settings that other sheets refer to.

use rust_xlsxwriter::{Worksheet, XlsxError};

use super::readings::{GRADES, Week};
use super::style::Style;

pub const NAME: &str = "Notes";

const GRADES_AT: u32 = 4;
const MEANINGS: [&str; 4] = [
    "Two or more faults that a guest would complain about",
    "One such fault, or many small ones",
    "Small faults only, put right the same day",
    "Nothing to put right",
];
const TARGET_AT: u32 = 10;
const TARGET: u32 = 18;

const HOW: [(&str, &str); 7] = [
    ("Inspection grade", "One unannounced visit a week, the houses in turn, always by the same checklist of forty points."),
    ("Guest nights, complaints", "From the booking system; a complaint counts in the week in which it was made."),
    ("Response to requests", "From the call log: minutes from the request to the answer, averaged over the week."),
    ("Check-in wait", "Measured at the desk on Friday evening, ten parties each time. New desks since 24 February 2025."),
    ("Laundry to rewash", "Weighed on return. n/a: the scale was out of order."),
    ("Energy", "Meter readings of all houses on Monday morning, divided by the guest nights."),
    ("Breakfast score", "From the cards on the tables, since 1 December 2025."),
];

pub fn fill(sheet: &mut Worksheet, _: &[Week], style: &Style) -> Result<(), XlsxError> {
    sheet.set_column_width(0, 28)?.set_column_width(1, 92)?;
    sheet.set_row_height(0, 26)?.write_with_format(0, 0, "Ternfield Hotels: notes", &style.title)?;
    sheet.write_with_format(1, 0, "The group, its houses and all readings are invented.", &style.remark)?;
    sheet.write_with_format(GRADES_AT - 1, 0, "Grades, lowest first", &style.heading_left)?;
    sheet.write_with_format(GRADES_AT - 1, 1, "Meaning", &style.heading_left)?;
    for (row, (grade, meaning)) in (GRADES_AT..).zip(GRADES.into_iter().zip(MEANINGS)) {
        sheet.write_with_format(row, 0, grade, &style.text)?.write_with_format(row, 1, meaning, &style.text)?;
    }
    sheet.write_with_format(TARGET_AT - 1, 0, "Promised response (min)", &style.heading_left)?;
    sheet.write_with_format(TARGET_AT - 1, 1, "Where it shows", &style.heading_left)?;
    sheet.write_number_with_format(TARGET_AT, 0, TARGET, &style.number("0").set_align(rust_xlsxwriter::FormatAlign::Left))?;
    sheet.write_with_format(TARGET_AT, 1, "Slower weeks are bold in the weekly readings.", &style.text)?;
    let how_at = TARGET_AT + 3;
    sheet.write_with_format(how_at - 1, 0, "How it is recorded", &style.heading_left)?;
    sheet.write_blank(how_at - 1, 1, &style.heading_left)?;
    for (row, (what, how)) in (how_at..).zip(HOW) {
        sheet.write_with_format(row, 0, what, &style.wrapped)?.write_with_format(row, 1, how, &style.wrapped)?;
    }
    Ok(())
}

/// The grades, as a reference.
pub fn grades_range() -> String {
    format!("={NAME}!$A${}:$A${}", GRADES_AT + 1, GRADES_AT as usize + GRADES.len())
}

/// The promised response, as a reference.
pub fn target_cell() -> String {
    format!("={NAME}!$A${}", TARGET_AT + 1)
}
