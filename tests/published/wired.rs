//! Every published example, reference value and table at hand is used by a test of this folder.

use std::path::Path;

use crate::reference::file;

/// What waits for its use: the number of independent readings that dependent ones are worth.
const WAITING: [&str; 1] = ["effective_sample_size"];

/// Names of the files under a folder with an ending, without it.
fn names(folder: &Path, ending: &str) -> Vec<String> {
    let mut names: Vec<String> = std::fs::read_dir(folder)
        .unwrap()
        .filter_map(|entry| entry.unwrap().file_name().to_str()?.strip_suffix(ending).map(str::to_owned))
        .collect();
    names.sort();
    names
}

#[test]
fn every_reference_is_used() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/published");
    let sources: String = names(&folder, ".rs")
        .iter()
        .filter(|name| *name != "wired")
        .map(|name| std::fs::read_to_string(folder.join(name).with_extension("rs")).unwrap())
        .collect();
    let mut unused = Vec::new();
    for name in names(&folder.join("reference"), ".json") {
        let content = file(&format!("{name}.json"));
        let examples = content["published"].as_array().into_iter().flatten().filter_map(|case| case["id"].as_str());
        let tables = content.as_object().into_iter().flatten().map(|(key, _)| key.as_str()).filter(|_| name == "tables");
        let used = |key: &str| sources.contains(&format!("\"{key}\"")) || sources.contains(&format!("\"{key}.json\""));
        unused.extend(examples.chain(tables).filter(|key| !used(key)).map(str::to_owned));
        if !used(&name) {
            unused.push(name);
        }
    }
    unused.retain(|name| !WAITING.contains(&name.as_str()));
    assert!(unused.is_empty(), "no test names {unused:?}");
}
