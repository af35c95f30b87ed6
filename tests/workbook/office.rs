//! Annotated workbooks in a real spreadsheet program, and under the outside checker.

use std::path::{Path, PathBuf};
use std::process::Command;

use crate::helpers::{Desk, weekly};

fn shared() -> PathBuf {
    match std::env::var_os("RISEFALL_SHARED") {
        Some(path) => path.into(),
        None => Path::new(env!("CARGO_MANIFEST_DIR")).join("../shared"),
    }
}

fn recalculated(books: &[PathBuf]) -> String {
    let script = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/workbook/recalculate.py");
    let output = Command::new("/usr/bin/python3").arg(script).arg(shared().join("tools")).args(books).output().unwrap();
    let text = String::from_utf8_lossy(&output.stdout).into_owned();
    assert!(output.status.success(), "{text}{}", String::from_utf8_lossy(&output.stderr));
    text
}

/// Every treatment of ties, every form of pairs, gaps kept and closed, each direction sought: all formula cells agree.
#[test]
#[ignore = "needs LibreOffice with python3-uno and the shared tools"]
fn a_hard_recalculation_gives_the_same_numbers() {
    let desk = Desk::new();
    desk.put("ward.xlsx", &weekly());
    let example = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples/hotel/visits.xlsx");
    std::fs::copy(example, desk.path("hotel.xlsx")).unwrap();
    let mut books = Vec::new();
    for (number, values) in [
        vec![],
        vec![("ties", "against"), ("seek", "rising")],
        vec![("ties", "split"), ("seek", "falling")],
        vec![("pairs", "thirds"), ("third", "up")],
        vec![("pairs", "weighted")],
        vec![("gaps", "keep"), ("adjust", "benjamini-hochberg")],
    ]
    .iter()
    .enumerate()
    {
        for book in ["ward", "hotel"] {
            let out = format!("{book}-{number}.xlsx");
            desk.annotate(&format!("{book}.xlsx"), &out, values).unwrap();
            books.push(desk.path(&out));
        }
    }
    let text = recalculated(&books);
    println!("{text}");
    let cells: u32 = text.lines().last().unwrap().split(' ').next().unwrap().parse().unwrap();
    assert!(cells > 2_000 && text.contains("in 12 workbooks, 0 disagree"), "{text}");
}

/// Each workbook of the corpus is annotated and valid, or refused in one sentence.
#[test]
#[ignore = "needs the shared workbooks and Python with lxml"]
fn the_corpus_is_annotated_or_refused() {
    let command = format!("{} annotate {{in}} -o {{out}} --quiet", env!("CARGO_BIN_EXE_risefall"));
    let output = Command::new("python3")
        .arg(shared().join("tools/run_corpus.py"))
        .arg("--xsd")
        .arg(shared().join("xsd"))
        .arg("--cmd")
        .arg(command)
        .arg(shared().join("workbooks"))
        .output()
        .unwrap();
    let text = String::from_utf8_lossy(&output.stdout);
    println!("{text}");
    assert!(output.status.success(), "{text}{}", String::from_utf8_lossy(&output.stderr));
}
