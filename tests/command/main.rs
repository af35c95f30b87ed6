//! The program as a person calls it: what it prints, what it writes, and its exit code.

use std::path::{Path, PathBuf};
use std::process::Command;

use rust_xlsxwriter::Workbook;

struct Ran {
    code: i32,
    printed: String,
    complained: String,
}

fn risefall(folder: &Path, arguments: &[&str]) -> Ran {
    let output = Command::new(env!("CARGO_BIN_EXE_risefall")).args(arguments).current_dir(folder).output().unwrap();
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
    Ran { code: output.status.code().unwrap(), printed: text(output.stdout), complained: text(output.stderr) }
}

/// A folder with `readings.xlsx`: twenty readings that rise without exception under the heading `Waiting`.
fn desk() -> (tempfile::TempDir, PathBuf) {
    let folder = tempfile::tempdir().unwrap();
    let mut workbook = Workbook::new();
    let sheet = workbook.add_worksheet();
    sheet.write(0, 0, "Week").unwrap().write(0, 1, "Waiting").unwrap();
    for week in 1..=20_u32 {
        sheet.write(week, 0, week).unwrap().write(week, 1, 3 * week).unwrap();
    }
    let path = folder.path().join("readings.xlsx");
    workbook.save(&path).unwrap();
    (folder, path)
}

fn files(folder: &Path) -> Vec<String> {
    let mut names: Vec<String> =
        std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().file_name().into_string().unwrap()).collect();
    names.sort();
    names
}

#[test]
fn done_is_0_and_the_conclusions_are_a_table() {
    let (folder, original) = desk();
    let before = std::fs::read(&original).unwrap();
    let ran = risefall(folder.path(), &["annotate", "readings.xlsx"]);
    assert_eq!((ran.code, ran.complained.as_str()), (0, ""));
    let lines: Vec<&str> = ran.printed.lines().collect();
    assert_eq!(lines[0].split_whitespace().collect::<Vec<_>>(), ["Indicator", "Cells", "Conclusion", "p", "p", "adjusted"]);
    // Ten rises in ten pairs: 2 / 2^10.
    assert_eq!(lines[2].split_whitespace().collect::<Vec<_>>(), ["Waiting", "Sheet1!B2:B21", "rising", "0.001953", "0.001953"]);
    assert_eq!(files(folder.path()), ["readings-trends.xlsx", "readings.xlsx"]);
    assert!(std::fs::read(&original).unwrap() == before, "the original is untouched");
}

#[test]
fn an_unwanted_trend_is_1() {
    let (folder, _) = desk();
    let ran = risefall(folder.path(), &["annotate", "readings.xlsx", "--wanted", "lower", "-o", "out.xlsx"]);
    assert_eq!(ran.code, 1);
    assert!(ran.printed.contains("rising (not wanted)"), "{}", ran.printed);
    let ran = risefall(folder.path(), &["annotate", "readings.xlsx", "--wanted", "higher", "-o", "out.xlsx"]);
    assert_eq!(ran.code, 0);
}

#[test]
fn quiet_prints_nothing() {
    let (folder, _) = desk();
    let ran = risefall(folder.path(), &["annotate", "readings.xlsx", "--quiet"]);
    assert_eq!((ran.code, ran.printed.as_str(), ran.complained.as_str()), (0, "", ""));
}

/// Each wrong request: one sentence that names what is wrong and what to do, nothing written.
#[test]
fn a_wrong_request_is_2() {
    let (folder, original) = desk();
    std::fs::write(folder.path().join("torn.xlsx"), &std::fs::read(&original).unwrap()[..900]).unwrap();
    std::fs::write(folder.path().join("empty.xlsx"), b"").unwrap();
    std::fs::write(folder.path().join("picture.xlsx"), b"\x89PNG\r\n\x1a\n\0\0\0\rIHDR").unwrap();
    let before = files(folder.path());
    for (arguments, named) in [
        (&["annotate", "absent.xlsx"][..], "absent.xlsx"),
        (&["annotate", "torn.xlsx"], "damaged"),
        (&["annotate", "empty.xlsx"], "empty"),
        (&["annotate", "picture.xlsx"], "workbook"),
        (&["annotate", "readings.xlsx", "-o", "readings.xlsx"], "original"),
        (&["annotate", "readings.xlsx", "--risk", "1.5"], "1.5"),
        (&["annotate", "readings.xlsx", "--seek", "rizing"], "rising"),
        (&["annotate", "readings.xlsx", "--set", "tise=split"], "tise"),
        (&["annotate", "readings.xlsx", "--set", "ties"], "NAME=VALUE"),
        (&["annotate", "readings.xlsx", "--test", "cox-stewart"], "cox-stuart"),
        (&["annotate", "readings.xlsx", "--adjust", "hulm"], "holm"),
        (&["methods", "cox-stewart"], "cox-stuart"),
        (&["annotate"], "WORKBOOK"),
        (&["anotate", "readings.xlsx"], "annotate"),
    ] {
        let ran = risefall(folder.path(), arguments);
        assert_eq!(ran.code, 2, "{arguments:?}: {}", ran.complained);
        assert!(ran.complained.contains(named), "{arguments:?}: {}", ran.complained);
        assert!(!ran.complained.contains("panicked") && ran.printed.is_empty(), "{arguments:?}: {}", ran.complained);
        assert_eq!(files(folder.path()), before, "{arguments:?}: nothing is written");
    }
}

#[test]
fn a_copy_that_cannot_be_written_is_3() {
    let (folder, _) = desk();
    let ran = risefall(folder.path(), &["annotate", "readings.xlsx", "-o", "no such folder/out.xlsx"]);
    assert_eq!(ran.code, 3);
    assert!(ran.complained.contains("out.xlsx cannot be written"), "{}", ran.complained);
}

#[test]
fn the_sheets_are_taken_out_again() {
    let (folder, _) = desk();
    risefall(folder.path(), &["annotate", "readings.xlsx", "-q"]);
    let ran = risefall(folder.path(), &["annotate", "--remove", "readings-trends.xlsx", "-o", "back.xlsx"]);
    assert_eq!(ran.code, 0, "{}", ran.complained);
    let book: calamine::Xlsx<_> = calamine::open_workbook(folder.path().join("back.xlsx")).unwrap();
    assert_eq!(calamine::Reader::sheet_names(&book), ["Sheet1"]);
}

#[test]
fn methods_lists_every_test_and_explains_one() {
    let folder = tempfile::tempdir().unwrap();
    let list = risefall(folder.path(), &["methods"]);
    assert_eq!(list.code, 0);
    for method in risefall::method::METHODS {
        assert!(list.printed.contains(method.card.key), "{}", method.card.key);
        let one = risefall(folder.path(), &["methods", method.card.key]);
        assert!(one.code == 0 && one.printed.contains(method.card.title), "{}", one.printed);
    }
}
