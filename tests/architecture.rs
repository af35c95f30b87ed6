//! The arrows between the folders of `src/`, and the one owner of each outside library, read from the source.

use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};

/// What each folder may import from the crate, besides `problem`.
const ARROWS: &[(&str, &[&str])] = &[
    ("reading", &[]),
    ("comparison", &["reading"]),
    ("null_distribution", &["reading", "comparison"]),
    ("method", &["reading", "comparison", "null_distribution"]),
    ("finding", &["reading", "comparison", "null_distribution", "method"]),
    ("query", &["reading", "comparison", "null_distribution", "method", "finding"]),
    ("reply", &["reading", "comparison", "null_distribution", "method", "finding"]),
    ("catalogue", &["reading", "comparison", "null_distribution", "method", "finding", "query", "reply"]),
    ("workbook", &["reading", "comparison", "null_distribution", "method", "finding", "catalogue"]),
    ("service", &["reading", "method", "finding", "query", "reply", "catalogue", "workbook"]),
    ("command", &["reading", "method", "finding", "query", "reply", "catalogue", "workbook", "service"]),
];

/// Which folder alone may name an outside library.
const OWNERS: &[(&str, &str)] = &[
    ("calamine", "workbook/survey"),
    ("encoding_rs", "workbook/survey"),
    ("rust_xlsxwriter", "workbook/render"),
    ("zip", "workbook/graft"),
    ("quick_xml", "workbook/graft"),
    ("actix_web", "service"),
    ("actix_multipart", "service"),
    ("sha2", "workbook"),
    ("clap", "command"),
    ("indicatif", "command"),
    ("statrs", "null_distribution"),
    ("rand_xoshiro", "null_distribution"),
];

/// Files of `method/` that are not tests but what tests share.
const SHARED_BY_METHODS: [&str; 15] = [
    "mod",
    "blocked_kendall",
    "change",
    "choices",
    "declaration",
    "dependence",
    "kendall",
    "normal_change",
    "outcome",
    "question",
    "scores_covariance",
    "screen",
    "slope",
    "successive",
    "turning",
];

fn sources() -> BTreeMap<PathBuf, String> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut found = BTreeMap::new();
    let mut folders = vec![root.clone()];
    while let Some(folder) = folders.pop() {
        for entry in fs::read_dir(folder).unwrap() {
            let path = entry.unwrap().path();
            if path.is_dir() {
                folders.push(path);
            } else if path.extension().is_some_and(|extension| extension == "rs") {
                let text = code_only(&fs::read_to_string(&path).unwrap());
                found.insert(path.strip_prefix(&root).unwrap().to_owned(), text);
            }
        }
    }
    found
}

/// The source without comments and without the unit tests at its end.
fn code_only(text: &str) -> String {
    let bare = text.split("#[cfg(test)]").next().unwrap_or_default();
    bare.lines().map(|line| line.split("//").next().unwrap_or_default()).collect::<Vec<_>>().join("\n")
}

fn folder(path: &Path) -> Option<String> {
    let mut parts = path.components();
    let first = parts.next()?.as_os_str().to_str()?.to_owned();
    parts.next().map(|_| first)
}

/// The folders of the crate that a source file names after `crate::`, grouped imports included.
fn imports(text: &str) -> Vec<String> {
    let mut names = Vec::new();
    for (at, _) in text.match_indices("crate::") {
        let rest = &text[at + "crate::".len()..];
        let listed = match rest.strip_prefix('{') {
            Some(group) => top_level(group),
            None => vec![rest],
        };
        for item in listed {
            names.push(item.trim().chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect());
        }
    }
    names
}

/// The items of a `{a, b::{c, d}}` group, without going into inner groups.
fn top_level(group: &str) -> Vec<&str> {
    let (mut depth, mut start, mut items) = (0, 0, Vec::new());
    for (at, c) in group.char_indices() {
        match c {
            '{' => depth += 1,
            '}' if depth == 0 => {
                items.push(&group[start..at]);
                break;
            }
            '}' => depth -= 1,
            ',' if depth == 0 => {
                items.push(&group[start..at]);
                start = at + 1;
            }
            _ => {}
        }
    }
    items
}

#[test]
fn folders_import_only_to_the_left() {
    let mut checked = 0;
    for (path, text) in sources() {
        let Some(own) = folder(&path) else { continue };
        let (_, allowed) = ARROWS.iter().find(|(name, _)| *name == own).unwrap_or_else(|| panic!("{own} is not on the map"));
        for name in imports(&text) {
            let macros = ["choices", "parameters"].contains(&name.as_str());
            let fine = name.is_empty() || name == own || name == "problem" || macros || allowed.contains(&name.as_str());
            assert!(fine, "{} imports {name}, which lies to its right", path.display());
            checked += 1;
        }
    }
    assert!(checked > 50, "only {checked} imports were found");
}

#[test]
fn methods_do_not_import_each_other() {
    let files = sources();
    let names: Vec<String> = files
        .keys()
        .filter(|path| folder(path).as_deref() == Some("method"))
        .map(|path| path.file_stem().unwrap().to_str().unwrap().to_owned())
        .filter(|name| !SHARED_BY_METHODS.contains(&name.as_str()))
        .collect();
    for (path, text) in files.iter().filter(|(path, _)| folder(path).as_deref() == Some("method")) {
        let own = path.file_stem().unwrap().to_str().unwrap();
        if own == "mod" {
            continue;
        }
        for name in names.iter().filter(|name| *name != own) {
            assert!(!text.contains(&format!("{name}::")), "{} uses {name}", path.display());
        }
    }
}

#[test]
fn each_outside_library_has_one_owner() {
    for (path, text) in sources() {
        for (library, owner) in OWNERS {
            let named = text.contains(&format!("{library}::")) || text.contains(&format!("use {library};"));
            let own = path.starts_with(owner) || path == Path::new(&format!("{owner}.rs"));
            assert!(!named || own, "{} names {library}, which belongs to {owner}", path.display());
        }
    }
}

#[test]
fn every_method_file_is_registered() {
    let registry = &sources()[Path::new("method/mod.rs")];
    for path in sources().keys().filter(|path| folder(path).as_deref() == Some("method")) {
        let name = path.file_stem().unwrap().to_str().unwrap();
        if !SHARED_BY_METHODS.contains(&name) {
            assert!(registry.contains(&format!("::<{name}::")), "method/{name}.rs has no line in METHODS");
        }
    }
}
