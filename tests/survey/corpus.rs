//! Real files that spreadsheet programs wrote: each is read, or refused with a sentence.

use std::path::PathBuf;

use risefall::problem::Problem;
use risefall::workbook::survey::{format, read, survey};

fn shared() -> PathBuf {
    let beside = || PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../shared");
    std::env::var_os("RISEFALL_SHARED").map_or_else(beside, PathBuf::from)
}

#[test]
#[ignore = "needs ../shared/workbooks"]
fn each_file_is_read_or_refused_with_a_sentence() {
    let (mut read_whole, mut refused) = (0, Vec::new());
    for folder in ["workbooks", "workbooks/bad"] {
        for entry in std::fs::read_dir(shared().join(folder)).unwrap() {
            let path = entry.unwrap().path();
            if !path.is_file() || path.ends_with("index.json") {
                continue;
            }
            match format(&path).and_then(|format| read(&path, format, &[], &mut |_, _| {})) {
                Ok(cells) => {
                    let survey = survey(&cells);
                    assert!(survey.remarks.iter().all(|remark| remark.ends_with('.')), "{:?}", survey.remarks);
                    read_whole += 1;
                }
                Err(error) => refused.push(format!("{}: {}", path.display(), Problem::from(error))),
            }
        }
    }
    println!("{read_whole} read, {} refused:\n{}", refused.len(), refused.join("\n"));
    assert!(read_whole >= 290, "{read_whole}");
}
