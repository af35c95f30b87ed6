//! Text files: separators, decimal signs, encodings.

use risefall::reading::Value;
use risefall::workbook::survey::Survey;

use crate::helpers::{check, marked, says};

/// The same table, as the texts of a file in a given form.
fn table(separator: &str, decimal: &str, line_end: &str) -> String {
    let mut lines = vec![["Datum", "Höhe (cm)", "Note"].join(separator)];
    for day in 1..=8 {
        let height = format!("{}{decimal}{}", 1200 + day * 3, day % 4 * 25);
        lines.push([format!("{day:02}.05.2025"), height, "geprüft".into()].join(separator));
    }
    lines.join(line_end) + line_end
}

fn check_heights(bytes: &[u8]) -> Survey {
    let survey = check(bytes, &[marked("Höhe", "Data!B2:B9", "Data!A2:A9", 8, 0, "cm")]);
    assert_eq!(survey.indicators[0].series.values[0], Value::Number(1203.25));
    survey
}

#[test]
fn separators_are_found_and_said() {
    let said = |bytes: &[u8], words: &[&str]| assert!(says(&check_heights(bytes).remarks, words));
    said(table(";", ",", "\r\n").as_bytes(), &["UTF-8", "`;`"]);
    said(table(",", ".", "\n").as_bytes(), &["UTF-8", "`,`"]);
    said(table("\t", ",", "\n").as_bytes(), &["tab"]);
    said(table("|", ".", "\n").as_bytes(), &["`|`"]);
    said(format!("sep=;\r\n{}", table(";", ",", "\r\n")).as_bytes(), &["`;`"]);
}

#[test]
fn encodings_are_found_and_said() {
    let text = table(";", ",", "\r\n");
    let western: Vec<u8> = text.chars().map(|c| u8::try_from(u32::from(c)).unwrap()).collect();
    assert!(says(&check_heights(&western).remarks, &["windows-1252"]));
    let wide: Vec<u8> = "\u{feff}".encode_utf16().chain(text.encode_utf16()).flat_map(u16::to_le_bytes).collect();
    assert!(says(&check_heights(&wide).remarks, &["UTF-16LE"]));
    assert!(says(&check_heights(format!("\u{feff}{text}").as_bytes()).remarks, &["UTF-8"]));
}

#[test]
fn quoted_fields_may_hold_separators_and_lines() {
    let text = "week,remark,\"listeners, total\"\n1,\"quiet; no\nevents\",\"12,480\"\n2,,\"13,010\"\n3,\"fair, dry\",\"987\"\n";
    let survey = check(text.as_bytes(), &[marked("listeners, total", "Data!C2:C4", "Data!A2:A4", 3, 0, "")]);
    assert_eq!(survey.indicators[0].series.values, [12480.0, 13010.0, 987.0].map(Value::Number));
}

#[test]
fn blank_lines_part_tables() {
    let text = "day,a\n1,5\n2,6\n3,5\n\nday,b\n1,15\n2,16\n3,15\n";
    check(
        text.as_bytes(),
        &[marked("a", "Data!B2:B4", "Data!A2:A4", 3, 0, ""), marked("b", "Data!B7:B9", "Data!A7:A9", 3, 0, "")],
    );
}

#[test]
fn codes_stay_text() {
    let text = "date;meter;reading\n2025-01-01;00417;5,5\n2025-01-02;00418;6,25\n2025-01-03;00419;5,75\n";
    check(text.as_bytes(), &[marked("reading", "Data!C2:C4", "Data!A2:A4", 3, 0, "")]);
}
