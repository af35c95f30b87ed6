//! Every workbook of the shared corpus, each annotated copy judged by an outside checker.

use std::io::Cursor;
use std::path::{Path, PathBuf};
use std::process::Command;

use risefall::workbook::graft::{Limits, Plan, Workbook};

use crate::donor;

fn shared() -> PathBuf {
    match std::env::var_os("RISEFALL_SHARED") {
        Some(path) => path.into(),
        None => Path::new(env!("CARGO_MANIFEST_DIR")).join("../shared"),
    }
}

fn graft(bytes: &[u8]) -> Result<Vec<u8>, String> {
    let book = Workbook::open(Cursor::new(bytes), Limits::default()).map_err(|error| error.to_string())?;
    let donor = donor::build(None);
    let mut out = Cursor::new(Vec::new());
    let sheets = donor::SHEETS.map(str::to_owned);
    let plan = Plan { donor: &donor, sheets: &sheets };
    book.graft(&plan, &mut out, &mut |_, _| {}).map_err(|error| error.to_string())?;
    Ok(out.into_inner())
}

#[test]
#[ignore = "needs the shared workbooks and Python with lxml"]
fn grafted_copies_pass_the_outside_checker() {
    let folder = tempfile::tempdir().unwrap();
    let (mut passed, mut refused, mut damaged) = (0, Vec::new(), Vec::new());
    let mut books: Vec<PathBuf> =
        std::fs::read_dir(shared().join("workbooks")).unwrap().map(|entry| entry.unwrap().path()).collect();
    books.sort();
    for path in books {
        let name = path.file_name().unwrap().to_string_lossy().into_owned();
        if std::env::var("RISEFALL_ONLY").is_ok_and(|only| !name.contains(&only)) {
            continue;
        }
        if !["xlsx", "xlsm", "xltx", "xltm"].iter().any(|kind| name.ends_with(kind)) {
            continue;
        }
        match graft(&std::fs::read(&path).unwrap()).and_then(|once| graft(&once).map(|twice| (once, twice))) {
            Err(sentence) => refused.push(format!("{name}: {sentence}")),
            Ok((once, twice)) => {
                let mut complaint = String::new();
                for (round, bytes) in [("once", once), ("twice", twice)] {
                    let copy = folder.path().join(format!("{round}.zip"));
                    std::fs::write(&copy, bytes).unwrap();
                    let check = Command::new("python3")
                        .arg(shared().join("tools/check_annotated.py"))
                        .arg("--xsd")
                        .arg(shared().join("xsd"))
                        .arg(&path)
                        .arg(&copy)
                        .output()
                        .unwrap();
                    if !check.status.success() {
                        let text = String::from_utf8_lossy(&check.stdout);
                        let failed: Vec<&str> = text.lines().filter(|line| line.starts_with("FAIL")).collect();
                        complaint.push_str(&format!("{round}: {}", failed.join(" | ")));
                    }
                }
                if complaint.is_empty() { passed += 1 } else { damaged.push(format!("{name}: {complaint}")) }
            }
        }
    }
    println!("passed {passed}, refused {}, damaged {}", refused.len(), damaged.len());
    refused.iter().chain(&damaged).for_each(|line| println!("{line}"));
    assert!(damaged.is_empty() && passed > 200);
}
