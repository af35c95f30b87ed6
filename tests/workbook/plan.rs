//! Edits in the plan are read back and obeyed.

use std::io::{Cursor, Read, Write};

use risefall::finding::Word;

use crate::helpers::{Desk, weekly};

/// Replaces text in the cells of the plan's sheet, as a person would edit them.
fn edit_plan(desk: &Desk, from: &str, to: &str, edits: &[(&str, &str)]) {
    let mut archive = zip::ZipArchive::new(Cursor::new(std::fs::read(desk.path(from)).unwrap())).unwrap();
    let mut out = zip::ZipWriter::new(Cursor::new(Vec::new()));
    for index in 0..archive.len() {
        let mut file = archive.by_index(index).unwrap();
        let name = file.name().unwrap().into_owned();
        let mut bytes = Vec::new();
        file.read_to_end(&mut bytes).unwrap();
        let mut text = String::from_utf8_lossy(&bytes).into_owned();
        if name.starts_with("xl/worksheets/sheet") && text.contains("Judged together by") {
            for (old, new) in edits {
                assert!(text.contains(old), "{old} is not on the plan: {text}");
                text = text.replace(old, new);
            }
            bytes = text.into_bytes();
        }
        out.start_file(name, zip::write::SimpleFileOptions::default()).unwrap();
        out.write_all(&bytes).unwrap();
    }
    desk.put(to, &out.finish().unwrap().into_inner());
}

#[test]
fn edits_are_obeyed() {
    let desk = Desk::new();
    desk.put("ward.xlsx", &weekly());
    desk.annotate("ward.xlsx", "once.xlsx", &[]).unwrap();
    let shorter = [(">Falls reported<", ">Falls on the ward<"), (">'Ward data'!B4:B23<", ">'Ward data'!B4:B13<")];
    edit_plan(&desk, "once.xlsx", "edited.xlsx", &shorter);
    let annotated = desk.annotate("edited.xlsx", "again.xlsx", &[]).unwrap();
    let falls = &annotated.conclusions[0];
    assert_eq!(falls.indicator, "Falls on the ward");
    assert_eq!(falls.word, Word::Declined, "moments that do not stand beside the readings are answered: {}", falls.sentence);
    assert!(falls.sentence.contains("do not stand beside"), "{}", falls.sentence);
    assert_eq!(annotated.conclusions[1].word, Word::NotShown, "the other rows are still judged");
    let both = [shorter[0], shorter[1], (">'Ward data'!A4:A23<", ">'Ward data'!A4:A13<")];
    edit_plan(&desk, "once.xlsx", "edited.xlsx", &both);
    let annotated = desk.annotate("edited.xlsx", "again.xlsx", &[]).unwrap();
    // Five rises in five pairs: two-sided 2/32.
    assert_eq!((annotated.conclusions[0].p, annotated.conclusions[0].word), (Some(0.0625), Word::TooFew));
}

#[test]
fn a_wrong_word_is_answered_in_its_row() {
    let desk = Desk::new();
    desk.put("ward.xlsx", &weekly());
    desk.annotate("ward.xlsx", "once.xlsx", &[("seek", "rising")]).unwrap();
    edit_plan(&desk, "once.xlsx", "edited.xlsx", &[(">rising<", ">upwards<")]);
    let annotated = desk.annotate("edited.xlsx", "again.xlsx", &[]).unwrap();
    let falls = &annotated.conclusions[0];
    assert!(falls.sentence.contains("seek: expected one of either, rising, falling, got `upwards`"), "{}", falls.sentence);
    let plan = desk.sheet("again.xlsx", "Trend plan");
    let remark = plan.rows().find(|row| row[1] == *"Falls reported").unwrap()[12].to_string();
    assert!(remark.contains("upwards"), "{remark}");
}

#[test]
fn an_indicator_can_be_left_out_and_its_readings_can_be_graded() {
    let desk = Desk::new();
    let mut workbook = rust_xlsxwriter::Workbook::new();
    let sheet = workbook.add_worksheet();
    sheet.write(0, 0, "Week").unwrap().write(0, 1, "Noise level").unwrap().write(0, 2, "Visitors").unwrap();
    for week in 0..16_u32 {
        sheet.write(1 + week, 0, format!("Week {}", week + 1)).unwrap();
        sheet.write(1 + week, 1, if week < 8 { "calm" } else { "lively" }).unwrap();
        sheet.write(1 + week, 2, week % 3).unwrap();
    }
    desk.put("hall.xlsx", &workbook.save_to_buffer().unwrap());
    let first = desk.annotate("hall.xlsx", "once.xlsx", &[]).unwrap();
    assert_eq!(first.conclusions[0].word, Word::Declined);
    assert!(first.conclusions[0].sentence.contains("write the grades into the plan"), "{}", first.conclusions[0].sentence);
    let rows = desk.sheet("once.xlsx", "Trend plan");
    let noise = rows.rows().position(|row| row[1] == *"Noise level").unwrap() as u32 + rows.start().unwrap().0 + 1;
    let blank = regex_free_cell(&desk, noise);
    let graded = blank.replace("/>", " t=\"inlineStr\"><is><t>calm &lt; lively</t></is></c>");
    edit_plan(&desk, "once.xlsx", "edited.xlsx", &[(blank.as_str(), graded.as_str())]);
    let again = desk.annotate("edited.xlsx", "again.xlsx", &[]).unwrap();
    assert_eq!(again.conclusions[0].word, Word::Rising, "{}", again.conclusions[0].sentence);
}

/// The XML of the blank grades cell in a row of the plan.
fn regex_free_cell(desk: &Desk, row: u32) -> String {
    let parts = desk.parts("once.xlsx");
    let plan =
        parts.values().map(|bytes| String::from_utf8_lossy(bytes)).find(|text| text.contains("Judged together by")).unwrap();
    let start = plan.find(&format!("<c r=\"F{row}\"")).unwrap();
    let end = plan[start..].find("/>").unwrap() + start + 2;
    plan[start..end].to_owned()
}
