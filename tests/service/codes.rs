//! The table of problem codes against the source: every code that can be met stands in it, once.

use std::path::Path;

use risefall::method::Refusal;
use risefall::service::codes::{CODES, find};

/// The codes that are written in the source as `Problem::new(ProblemKind::.., "code"`, except for those of the command
/// line and of starting the service, which no client meets.
fn written_in(folder: &Path, found: &mut Vec<String>) {
    for entry in std::fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            if path.file_name().unwrap() != "command" && path.file_name().unwrap() != "workbook" {
                written_in(&path, found);
            }
            continue;
        }
        let text = std::fs::read_to_string(&path).unwrap();
        for after in text.split("#[cfg(test)]").next().unwrap().split("Problem::new(").skip(1) {
            let mut arguments = after.splitn(3, ',');
            let (_, code) = (arguments.next(), arguments.next().unwrap_or_default().trim());
            if let Some(code) = code.strip_prefix('"').and_then(|code| code.strip_suffix('"')) {
                found.push(code.to_owned());
            }
        }
    }
}

#[test]
fn every_code_of_the_source_stands_in_the_table() {
    let mut found = Vec::new();
    written_in(&Path::new(env!("CARGO_MANIFEST_DIR")).join("src"), &mut found);
    assert!(found.len() > 20, "{found:?}");
    for code in found.iter().filter(|code| !["port", "service"].contains(&code.as_str())) {
        assert!(find(code).is_some(), "{code} is not in the table");
    }
}

#[test]
fn every_refusal_stands_in_the_table() {
    for refusal in [
        Refusal::TooFewReadings { have: 1, need: 2 },
        Refusal::AllTied { compared: 2 },
        Refusal::BeyondExact { what: "pairs", have: 2, most: 1 },
        Refusal::Scale { test: "a", needs: "b", are: "c" },
        Refusal::Because("because".into()),
    ] {
        assert_eq!(find(refusal.code()).map(|row| row.status), Some(422), "{}", refusal.code());
    }
}

#[test]
fn each_code_stands_once_and_reads_well() {
    for (index, row) in CODES.iter().enumerate() {
        assert!(!CODES[..index].iter().any(|earlier| earlier.code == row.code), "{} stands twice", row.code);
        assert!(row.code.bytes().all(|byte| byte.is_ascii_lowercase() || byte == b'-'), "{}", row.code);
        assert!(row.title.ends_with('.') && row.title.starts_with(char::is_uppercase), "{}", row.title);
    }
}
