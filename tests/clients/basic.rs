//! The module for LibreOffice Basic, run by LibreOffice itself against the real service.

use crate::office::Office;
use crate::serving::Serving;
use crate::workbook::readings::{Week, draw};
use crate::{BASIC, EXAMPLES};

/// What the macro wrote down: the lines that begin with a word.
fn lines<'a>(found: &'a str, word: &str) -> Vec<&'a str> {
    found.lines().filter_map(|line| line.strip_prefix(word)?.strip_prefix(' ')).collect()
}

/// Rises and falls of the halves, counted in the plainest way.
fn rises_and_falls(reading: fn(&Week) -> f64) -> (usize, usize) {
    let values: Vec<f64> = draw().iter().map(reading).collect();
    let half = values.len() / 2;
    let count = |wanted: fn(f64, f64) -> bool| (0..half).filter(|&i| wanted(values[i], values[i + half])).count();
    (count(|earlier, later| later > earlier), count(|earlier, later| later < earlier))
}

#[test]
#[ignore = "needs LibreOffice"]
fn cells_and_the_table_hold_what_the_service_answers() {
    let service = Serving::start();
    let folder = tempfile::tempdir().unwrap();
    std::fs::copy(format!("{EXAMPLES}/hotel/visits.xlsx"), folder.path().join("visits.xlsx")).unwrap();
    std::fs::write(folder.path().join("refused.xlsx"), "PK and nothing else").unwrap();
    let module = BASIC.replace("http://127.0.0.1:7373", &service.address);
    let office = Office::with_modules(&[("Risefall", &module), ("Check", include_str!("check.bas"))]);
    office.run_macro("Check.Main", folder.path());
    let found = std::fs::read_to_string(folder.path().join("found.txt")).expect("the macro ran");
    println!("{found}");

    // SciPy 1.17: binomtest(38, 51).pvalue, and the same with alternative="greater". Str writes 14 digits.
    let cells = lines(&found, "cell");
    let number = |index: usize| cells[index].parse::<f64>().unwrap();
    assert!((number(0) - 0.000_621_043_456_227_710_1).abs() < 1e-14, "{}", cells[0]);
    assert!((number(1) - 0.000_310_521_728_113_855_03).abs() < 1e-14, "{}", cells[1]);
    assert_eq!(cells[2], "\"rising\"");
    assert!(cells[4].starts_with("\"give: this answer has no fact `slant`."), "{}", cells[4]);
    assert!((1.0..=2.0).contains(&number(5)), "an answer can be reckoned with: {}", cells[5]);

    // Every kind of cell, written as JSON by hand.
    let body = r##"{"readings":[[0.5,"#N/A","say \"fair\" \\ \u00E9\u22645","<0.5"],[-0.25,null,1234567.891,0.00000125]],"moments":[["2025-04-01"],["2025-04-02T12:00:00"]],"name":"Wait (min)","grades":"poor < fair","seek":"rising"}"##;
    assert_eq!(lines(&found, "body"), [body]);

    let table: Vec<Vec<&str>> = lines(&found, "table").iter().map(|line| line.split('\t').collect()).collect();
    assert_eq!(table.len(), 12);
    let row = |name: &str| table.iter().find(|row| row[0].trim_matches('"').starts_with(name)).unwrap();
    for (name, reading) in [
        ("Guest nights", (|week: &Week| week.guest_nights.into()) as fn(&Week) -> f64),
        ("Response", |week| week.response),
        ("Check-in", |week| week.check_in),
        ("Energy", |week| week.energy),
        ("Linen", |week| week.linen),
    ] {
        let (rises, falls) = rises_and_falls(reading);
        assert_eq!((row(name)[3], row(name)[4]), (&*rises.to_string(), &*falls.to_string()), "{name}");
    }
    assert_eq!((row("Response")[1], row("Guest nights")[1], row("Breakfast")[1]), ("\"rising\"", "\"not shown\"", "\"too few\""));
    assert_eq!(row("House visited")[1], "\"not judged\"");

    let annotated = lines(&found, "annotate");
    for (answer, name) in annotated.iter().zip(["visits-trends.xlsx", "visits-trends-2.xlsx"]) {
        assert!(answer.ends_with(name), "{answer}");
        assert!(std::fs::read(folder.path().join(name)).unwrap().starts_with(b"PK"));
    }
    assert!(annotated[2].starts_with("the file is damaged") && annotated[2].len() < 300, "{}", annotated[2]);
    let original = std::fs::read(format!("{EXAMPLES}/hotel/visits.xlsx")).unwrap();
    assert!(std::fs::read(folder.path().join("visits.xlsx")).unwrap() == original, "the original is untouched");
}

#[test]
fn the_program_prints_where_it_listens_and_how_to_try_it() {
    let service = Serving::start();
    assert!(service.printed[0].contains("for this machine only"), "{:?}", service.printed);
    assert!(service.printed[1].contains(&format!("curl \"{}/trend/", service.address)), "{:?}", service.printed);
    assert!(service.printed[2].contains("=WEBSERVICE("), "{:?}", service.printed);
    let answer = ask(&service.address, "/trend/cox-stuart?readings=3;4;2;5;6;5;7;8&give=sentence");
    assert!(answer.starts_with("HTTP/1.1 200"), "{answer}");
}

/// Sent without a name, the macro-enabled copy comes back as one: under another ending no program would open it.
#[test]
fn a_macro_enabled_workbook_comes_back_as_one() {
    let service = Serving::start();
    let book = std::fs::read(format!("{EXAMPLES}/hotel/visits-macros.xlsm")).unwrap();
    let answer = send(&service.address, "POST", "/annotate", &book);
    let head = String::from_utf8_lossy(&answer[..1000]).to_lowercase();
    assert!(head.contains("content-type: application/vnd.ms-excel.sheet.macroenabled.12"), "{head}");
    assert!(head.contains("filename=\"workbook-trends.xlsm\"") && head.contains("risefall-indicators: 10"), "{head}");
    let package = &answer[answer.windows(4).position(|window| window == b"\r\n\r\n").unwrap() + 4..];
    let mut annotated: calamine::Xlsx<_> = calamine::Reader::new(std::io::Cursor::new(package.to_vec())).unwrap();
    assert!(calamine::Reader::vba_project(&mut annotated).unwrap().is_some());
    assert!(calamine::Reader::sheet_names(&annotated).contains(&"Trend conclusions".to_owned()));
}

fn ask(address: &str, path: &str) -> String {
    String::from_utf8_lossy(&send(address, "GET", path, b"")).into_owned()
}

fn send(address: &str, verb: &str, path: &str, body: &[u8]) -> Vec<u8> {
    use std::io::{Read, Write};
    let host = address.trim_start_matches("http://");
    let mut stream = std::net::TcpStream::connect(host).unwrap();
    let length = body.len();
    write!(stream, "{verb} {path} HTTP/1.1\r\nHost: {host}\r\nConnection: close\r\nContent-Length: {length}\r\n\r\n").unwrap();
    stream.write_all(body).unwrap();
    let mut answer = Vec::new();
    stream.read_to_end(&mut answer).unwrap();
    answer
}
