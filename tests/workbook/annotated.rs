//! What an annotated copy holds.

use std::collections::BTreeMap;

use risefall::finding::Word;

use crate::helpers::{Desk, row, weekly};

const NEW_SHEETS: [&str; 6] =
    ["Trend conclusions", "Trend statistics", "Trend pairings", "Trend charts", "Trend plan", "Trend log"];

#[test]
fn the_indicators_are_found_and_judged_together() {
    let desk = Desk::new();
    desk.put("ward.xlsx", &weekly());
    let annotated = desk.annotate("ward.xlsx", "out.xlsx", &[("wanted", "lower")]).unwrap();
    let words: Vec<_> = annotated.conclusions.iter().map(|row| (row.indicator.as_str(), row.cells.as_str(), row.word)).collect();
    assert_eq!(
        words,
        [
            ("Falls reported", "'Ward data'!B4:B23", Word::Rising),
            ("Mood", "'Ward data'!C4:C23", Word::NotShown),
            ("Beds", "'Ward data'!D4:D23", Word::Declined),
        ]
    );
    let falls = &annotated.conclusions[0];
    // Ten rises in ten pairs: two-sided 2/1024; two indicators have a p-value, so Holm doubles the smaller one.
    assert_eq!((falls.p, falls.p_adjusted), (Some(2.0 / 1024.0), Some(4.0 / 1024.0)));
    assert!(falls.needs_attention);
    assert_eq!(desk.sheets("out.xlsx"), [&["Ward data"], &NEW_SHEETS[..]].concat());
}

#[test]
fn every_part_of_the_original_but_four_is_untouched() {
    let desk = Desk::new();
    desk.put("ward.xlsx", &weekly());
    desk.annotate("ward.xlsx", "out.xlsx", &[]).unwrap();
    let (before, after) = (desk.parts("ward.xlsx"), desk.parts("out.xlsx"));
    for (name, bytes) in &before {
        let edited =
            ["[Content_Types].xml", "xl/workbook.xml", "xl/_rels/workbook.xml.rels", "xl/styles.xml"].contains(&name.as_str());
        assert!(edited || after[name] == *bytes, "{name} changed");
    }
}

#[test]
fn the_sheets_say_what_was_found() {
    let desk = Desk::new();
    desk.put("ward.xlsx", &weekly());
    desk.annotate("ward.xlsx", "out.xlsx", &[("wanted", "lower")]).unwrap();
    let conclusions = desk.sheet("out.xlsx", "Trend conclusions");
    let falls = row(&conclusions, "Falls reported");
    assert_eq!((falls[1].to_string(), falls[2].to_string()), ("rising".into(), "not wanted".into()));
    assert!(falls[3].to_string().contains("of 10 pairs of an earlier and a later reading 10 rise, 0 fall"));
    // One more each week, without exception.
    assert_eq!(falls[9].to_string(), "52.18 (52.18 to 52.18) count a year");
    let pairings = desk.sheet("out.xlsx", "Trend pairings");
    let first = row(&pairings, "Falls reported");
    let shown: Vec<String> = [1, 2, 4, 5, 7, 8].iter().map(|&column: &usize| first[column].to_string()).collect();
    assert_eq!(shown, ["1", "1", "2", "11", "12", "1"], "pair, earlier, its value, later, its value, sign");
}

#[test]
fn annotating_again_replaces_and_does_not_pile_up() {
    let desk = Desk::new();
    desk.put("ward.xlsx", &weekly());
    desk.annotate("ward.xlsx", "once.xlsx", &[]).unwrap();
    desk.annotate("once.xlsx", "twice.xlsx", &[]).unwrap();
    let (once, twice) = (desk.parts("once.xlsx"), desk.parts("twice.xlsx"));
    assert_eq!(once.keys().collect::<Vec<_>>(), twice.keys().collect::<Vec<_>>());
    let log = log_part(&once);
    // What is kept to undo the annotation names what was written, and so follows the log; it does not grow.
    let undo = "xl/risefall/before.bin";
    assert_eq!(once[undo].len(), twice[undo].len());
    for (name, bytes) in &once {
        assert!(twice[name] == *bytes || [log.as_str(), undo].contains(&name.as_str()), "{name} differs after the second time");
    }
}

/// The part of the sheet that grows.
fn log_part(parts: &BTreeMap<String, Vec<u8>>) -> String {
    let is_log = |(_, bytes): &(&String, &Vec<u8>)| bytes.windows(8).any(|window| window == b"Checksum");
    parts.iter().filter(|(name, _)| name.starts_with("xl/worksheets/")).find(is_log).unwrap().0.clone()
}

/// Ten times: the same sheets and parts, one row more in the log each time for each indicator, the earlier rows as they were.
#[test]
fn the_log_grows_and_nothing_else() {
    let desk = Desk::new();
    desk.put("0.xlsx", &weekly());
    for run in 0..10 {
        desk.annotate(&format!("{run}.xlsx"), &format!("{}.xlsx", run + 1), &[]).unwrap();
    }
    let rows = |name: &str| -> Vec<Vec<String>> {
        let log = desk.sheet(name, "Trend log");
        log.rows().skip(3).map(|row| row.iter().map(ToString::to_string).collect()).collect()
    };
    let (first, last) = (rows("1.xlsx"), rows("10.xlsx"));
    assert_eq!((first.len(), last.len()), (3, 30));
    assert_eq!(last.chunks(3).filter(|run| *run == first).count(), 10, "the same readings, the same rows");
    let falls = &first[0];
    assert_eq!((falls[0].as_str(), falls[1].as_str(), falls[4].as_str()), ("2026-01-05 09:00:00", "Falls reported", "rising"));
    assert_eq!(falls[6].parse::<f64>().unwrap(), 2.0 / 1024.0);
    let sizes = ["1.xlsx", "10.xlsx"].map(|name| desk.parts(name).len());
    assert_eq!(sizes[0], sizes[1]);
}

#[test]
fn nothing_to_judge_is_said_on_a_sheet() {
    let desk = Desk::new();
    let mut workbook = rust_xlsxwriter::Workbook::new();
    workbook.add_worksheet().set_name("Letter").unwrap().write(0, 0, "Dear all,").unwrap();
    desk.put("letter.xlsx", &workbook.save_to_buffer().unwrap());
    let annotated = desk.annotate("letter.xlsx", "out.xlsx", &[]).unwrap();
    assert!(annotated.conclusions.is_empty());
    let conclusions = desk.sheet("out.xlsx", "Trend conclusions");
    let text: Vec<String> = conclusions.rows().map(|row| row[0].to_string()).collect();
    assert!(text.iter().any(|line| line == "No indicator was found to judge."), "{text:?}");
    assert!(text.iter().any(|line| line.starts_with("Looked for: tables")), "{text:?}");
    assert!(text.iter().any(|line| line.contains("the sheet Letter")), "{text:?}");
}

#[test]
fn a_text_table_comes_back_as_a_workbook_that_says_so() {
    let desk = Desk::new();
    let lines: Vec<String> = (1..=16).map(|week| format!("2025-W{week:02};{},5;good", week)).collect();
    desk.put("wait.csv", format!("Week;Wait (min);Grade\n{}\n", lines.join("\n")).as_bytes());
    let annotated = desk.annotate("wait.csv", "out.xlsx", &[]).unwrap();
    assert_eq!(annotated.conclusions[0].indicator, "Wait");
    assert_eq!(annotated.conclusions[0].word, Word::Rising);
    assert!(annotated.notes.iter().any(|note| note.contains("new workbook with its values")));
    assert_eq!(desk.sheets("out.xlsx")[0], "wait");
}

#[test]
fn a_users_sheet_of_our_name_is_left_alone() {
    let desk = Desk::new();
    let mut workbook = rust_xlsxwriter::Workbook::new();
    workbook.add_worksheet().set_name("Trend plan").unwrap().write(0, 0, "mine").unwrap();
    desk.put("mine.xlsx", &workbook.save_to_buffer().unwrap());
    desk.annotate("mine.xlsx", "once.xlsx", &[]).unwrap();
    desk.annotate("once.xlsx", "twice.xlsx", &[]).unwrap();
    assert_eq!(desk.sheets("twice.xlsx").iter().filter(|name| name.starts_with("Trend plan")).count(), 2);
    assert_eq!(desk.sheet("twice.xlsx", "Trend plan").get_value((0, 0)).unwrap().to_string(), "mine");
}

#[test]
fn long_tables_are_judged_by_name() {
    let desk = Desk::new();
    let mut workbook = rust_xlsxwriter::Workbook::new();
    let sheet = workbook.add_worksheet();
    for (column, label) in ["Month", "Measure", "Value"].iter().enumerate() {
        sheet.write(0, column as u16, *label).unwrap();
    }
    for month in 0..24_u32 {
        for (place, name) in ["Listeners", "Streams"].iter().enumerate() {
            let row = 1 + 2 * month + place as u32;
            let label = format!("{}-{:02}", 2024 + month / 12, month % 12 + 1);
            sheet.write(row, 0, label).unwrap();
            sheet.write(row, 1, *name).unwrap();
            sheet.write(row, 2, if place == 0 { month } else { 100 - month }).unwrap();
        }
    }
    desk.put("long.xlsx", &workbook.save_to_buffer().unwrap());
    let annotated = desk.annotate("long.xlsx", "out.xlsx", &[]).unwrap();
    let words: Vec<_> = annotated.conclusions.iter().map(|row| (row.indicator.as_str(), row.word)).collect();
    assert_eq!(words, [("Listeners", Word::Rising), ("Streams", Word::Falling)]);
    let again = desk.annotate("out.xlsx", "again.xlsx", &[]).unwrap();
    assert_eq!(again.conclusions, annotated.conclusions, "the plan leads to the same rows");
}
