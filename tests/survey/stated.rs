//! Indicators at stated places, as a plan's row has them after a person edited it.

use risefall::workbook::PlanRow;
use risefall::workbook::survey::{indicator_at, survey};

use crate::helpers::{Put, Rows, book, cells, row};

fn inspections() -> Vec<u8> {
    let mut rows: Rows = vec![row!["Week", "Sea state", "Waves (m)"]];
    for week in 1..=12_i32 {
        let state = ["calm", "breezy", "stormy"][(week as usize * 2) % 3];
        rows.push(row![format!("2025-W{week:02}"), state, f64::from(week % 5) / 2.0]);
    }
    rows.push(row!["Average", "", 1.0]);
    book("Coast", rows)
}

fn plan(indicator: &str, cells: &str, moments: &str, grades: &str) -> PlanRow {
    PlanRow {
        indicator: indicator.into(),
        cells: cells.into(),
        moments: moments.into(),
        grades: grades.into(),
        ..PlanRow::default()
    }
}

#[test]
fn stated_places_give_the_indicator_that_was_found_there() {
    let cells = cells(&inspections());
    let found = survey(&cells);
    for indicator in found.indicators.iter().filter(|indicator| indicator.series.count_present() > 0) {
        let reference = |range: Option<risefall::workbook::Range>| range.map(|range| range.to_string()).unwrap_or_default();
        let row =
            plan(&indicator.series.name, &reference(indicator.place.range()), &reference(indicator.place.moments_range()), "");
        let again = indicator_at(&cells, &row).unwrap();
        assert_eq!((&again.series, &again.place), (&indicator.series, &indicator.place));
    }
}

#[test]
fn stated_grades_order_the_words() {
    let cells = cells(&inspections());
    let row = plan("Sea state", "Coast!B2:B13", "Coast!A2:A13", "calm < breezy < stormy");
    let indicator = indicator_at(&cells, &row).unwrap();
    assert_eq!(indicator.series.show(0), "stormy");
    assert_eq!(indicator.series.values[0].number(), Some(3.0));
    assert!(!indicator.understood.grades_assumed);
}

#[test]
fn part_of_a_column_and_a_summary_row_within_the_range() {
    let cells = cells(&inspections());
    let indicator = indicator_at(&cells, &plan("Waves", "Coast!C5:C14", "Coast!A5:A14", "")).unwrap();
    assert_eq!((indicator.series.len(), indicator.series.moments.label(0)), (9, "2025-W04".to_owned()));
    assert_eq!(indicator.place.range().unwrap().to_string(), "Coast!C5:C13");
}

#[test]
fn a_name_in_a_long_table() {
    let mut rows: Rows = vec![row!["Week", "What", "Value"]];
    for week in 1..=6_i32 {
        rows.push(row![week, "Calls", 100 + week]);
        rows.push(row![week, "Complaints", week]);
    }
    let cells = cells(&book("Log", rows));
    let mut row = plan("complaints", "Log!C2:C13", "Log!A2:A13", "");
    row.names = "Log!B2:B13".into();
    let indicator = indicator_at(&cells, &row).unwrap();
    assert_eq!(indicator.series.values.iter().filter_map(|value| value.number()).sum::<f64>(), 21.0);
    assert_eq!(indicator.place.cell(0).to_string(), "C3");
    row.indicator = "Praise".into();
    assert!(indicator_at(&cells, &row).unwrap_err().to_string().contains("is named `Praise`"));
}

#[test]
fn wrong_references_are_answered_with_a_sentence() {
    let cells = cells(&inspections());
    for (row, words) in [
        (plan("x", "nonsense", "", ""), "`nonsense`"),
        (plan("x", "Cost!C2:C13", "", ""), "no sheet named `Cost`"),
        (plan("x", "Coast!B2:C13", "", ""), "several columns"),
        (plan("x", "Coast!C2:C13", "Coast!A3:A13", ""), "do not stand beside"),
        (plan("x", "Coast!B2:B13", "", "calm"), "at least two words"),
    ] {
        let sentence = indicator_at(&cells, &row).unwrap_err().to_string();
        assert!(sentence.contains(words), "{sentence}");
    }
}

#[test]
fn a_sheets_cells_are_given_as_text() {
    let rows = vec![vec!["Judge".into(), "Indicator".into()], vec![], vec![Put::Truth(true), 1.5.into(), Put::Date(2025, 1, 2)]];
    let cells = cells(&book("Trend plan", rows));
    let texts = cells.texts_of("Trend plan");
    assert_eq!(texts, [vec!["Judge", "Indicator", ""], vec!["", "", ""], vec!["TRUE", "1.5", "2025-01-02"]]);
    assert!(cells.texts_of("Absent").is_empty());
}
