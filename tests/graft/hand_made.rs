//! Packages made in the test itself; Rust alone is needed.

use std::collections::BTreeMap;
use std::io::{Cursor, Read, Write};

use calamine::{Reader, Xlsx};
use risefall::workbook::graft::{Error, Limits, Plan, Workbook};
use rust_xlsxwriter::{Chart, ChartType, Formula};

use crate::donor;

fn users_workbook() -> Vec<u8> {
    let mut workbook = rust_xlsxwriter::Workbook::new();
    let sheet = workbook.add_worksheet();
    sheet.set_name("Readings").unwrap();
    for row in 0..10_u32 {
        sheet.write(row, 0, f64::from(row * row)).unwrap();
        sheet.write(row, 1, "a shared string").unwrap();
        sheet.write(row, 2, Formula::new(format!("A{}+1", row + 1)).set_result((row * row + 1).to_string())).unwrap();
    }
    let mut chart = Chart::new(ChartType::Column);
    chart.add_series().set_values(("Readings", 0, 0, 9, 0));
    sheet.insert_chart(2, 4, &chart).unwrap();
    workbook.define_name("Total", "=Readings!$A$10").unwrap();
    workbook.save_to_buffer().unwrap()
}

fn annotate(host: &[u8]) -> Result<Vec<u8>, Error> {
    let book = Workbook::open(Cursor::new(host), Limits::default())?;
    let donor = donor::build(Some("Readings"));
    let mut out = Cursor::new(Vec::new());
    let sheets = donor::SHEETS.map(str::to_owned);
    book.graft(&Plan { donor: &donor, sheets: &sheets }, &mut out, &mut |_, _| {})?;
    Ok(out.into_inner())
}

fn parts(package: &[u8]) -> BTreeMap<String, Vec<u8>> {
    let mut archive = zip::ZipArchive::new(Cursor::new(package)).unwrap();
    let mut parts = BTreeMap::new();
    for index in 0..archive.len() {
        let mut file = archive.by_index(index).unwrap();
        let mut bytes = Vec::new();
        file.read_to_end(&mut bytes).unwrap();
        parts.insert(file.name().unwrap().into_owned(), bytes);
    }
    parts
}

#[test]
fn every_part_but_the_named_ones_stays() {
    let host = users_workbook();
    let (before, after) = (parts(&host), parts(&annotate(&host).unwrap()));
    let edited = ["[Content_Types].xml", "xl/workbook.xml", "xl/_rels/workbook.xml.rels", "xl/styles.xml"];
    for (name, bytes) in &before {
        if !edited.contains(&name.as_str()) {
            assert!(after[name] == *bytes, "{name} changed");
        }
    }
    assert!(after.len() > before.len());
}

#[test]
fn the_result_reads_as_one_workbook() {
    let annotated = annotate(&users_workbook()).unwrap();
    let mut book: Xlsx<_> = calamine::open_workbook_from_rs(Cursor::new(annotated)).unwrap();
    assert_eq!(book.sheet_names(), ["Readings", "Trend one", "Trend two"]);
    let one = book.worksheet_range("Trend one").unwrap();
    assert_eq!(one.get_value((0, 0)).unwrap().to_string(), "Heading & <more>");
    assert_eq!(one.get_value((3, 3)).unwrap().to_string(), "text 3");
    let two = book.worksheet_range("Trend two").unwrap();
    assert_eq!(two.get_value((0, 0)).unwrap().to_string(), "Rich text");
}

#[test]
fn annotating_again_gives_the_same_package() {
    let once = annotate(&users_workbook()).unwrap();
    let twice = annotate(&once).unwrap();
    assert_eq!(parts(&once).keys().collect::<Vec<_>>(), parts(&twice).keys().collect::<Vec<_>>());
    for (name, bytes) in parts(&once) {
        assert!(name == "docProps/core.xml" || parts(&twice)[&name] == bytes, "{name} differs");
    }
}

#[test]
fn removing_gives_the_original_parts_back() {
    let host = users_workbook();
    let annotated = annotate(&host).unwrap();
    let mut out = Cursor::new(Vec::new());
    Workbook::open(Cursor::new(&annotated), Limits::default()).unwrap().remove(&mut out).unwrap();
    assert!(parts(&out.into_inner()) == parts(&host));
    let refused = Workbook::open(Cursor::new(&host), Limits::default()).unwrap().remove(Cursor::new(Vec::new()));
    assert!(matches!(refused, Err(Error::NothingToRemove)));
}

/// As after an office program has saved the workbook: the edited parts have changed, and what stood there before is lost.
#[test]
fn sheets_are_found_by_their_marker_after_a_resave() {
    let annotated = parts(&annotate(&users_workbook()).unwrap());
    let mut resaved = zip::ZipWriter::new(Cursor::new(Vec::new()));
    for (name, bytes) in &annotated {
        resaved.start_file(name.as_str(), zip::write::SimpleFileOptions::default()).unwrap();
        let text = String::from_utf8_lossy(bytes);
        match name.as_str() {
            "xl/workbook.xml" => resaved.write_all(text.replace("<sheets>", "<!-- saved --><sheets>").as_bytes()).unwrap(),
            _ => resaved.write_all(bytes).unwrap(),
        }
    }
    let resaved = resaved.finish().unwrap().into_inner();
    let again = annotate(&resaved).unwrap();
    let mut book: Xlsx<_> = calamine::open_workbook_from_rs(Cursor::new(&again)).unwrap();
    assert_eq!(book.sheet_names(), ["Readings", "Trend one", "Trend two"]);
    assert_eq!(book.worksheet_range("Trend one").unwrap().get_value((3, 3)).unwrap().to_string(), "text 3");
    let names: Vec<String> = parts(&again).into_keys().collect();
    assert_eq!(names.iter().filter(|name| name.contains("worksheets/sheet")).count(), 3, "{names:?}");
}

#[test]
fn what_is_no_workbook_is_refused_in_one_sentence() {
    let host = users_workbook();
    let cases: [(&[u8], &str); 5] = [
        (b"", "empty"),
        (b"name,value\n1,2\n", "not an Excel workbook"),
        (&[0xD0, 0xCF, 0x11, 0xE0, 0xA1, 0xB1, 0x1A, 0xE1], "encrypted or of the older binary format"),
        (&host[..host.len() / 2], "damaged"),
        (b"PK\x03\x04", "damaged"),
    ];
    for (bytes, expected) in cases {
        let error = annotate(bytes).map(|_| ()).unwrap_err().to_string();
        assert!(error.contains(expected) && !error.contains('\n'), "{error}");
    }
}

#[test]
fn a_zip_bomb_is_refused() {
    let mut bomb = zip::ZipWriter::new(Cursor::new(Vec::new()));
    bomb.start_file("xl/worksheets/sheet1.xml", zip::write::SimpleFileOptions::default()).unwrap();
    let zeros = vec![b' '; 1 << 20];
    for _ in 0..80 {
        bomb.write_all(&zeros).unwrap();
    }
    let bomb = bomb.finish().unwrap().into_inner();
    assert!(matches!(annotate(&bomb), Err(Error::TooLarge { .. })));
}

/// Damage anywhere gives a result or a sentence, never a panic.
#[test]
fn damaged_packages_never_panic() {
    let host = users_workbook();
    let mut state = 1_u64;
    for _ in 0..300 {
        let mut damaged = host.clone();
        for _ in 0..3 {
            state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1);
            let at = (state >> 33) as usize % damaged.len();
            damaged[at] = (state >> 20) as u8;
        }
        if let Err(error) = annotate(&damaged) {
            assert!(!error.to_string().contains('\n'));
        }
    }
}
