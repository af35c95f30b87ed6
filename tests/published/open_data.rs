//! Open series, read from their files and judged as a request would, against values from base R.
//!
//! `tests/reference/open_data.R` writes both the files under `examples/open_data` and `reference/open_data.json`.

use std::collections::HashSet;
use std::path::Path;

use risefall::method::METHODS;
use serde_json::{Value, json};

use crate::reference::{ask, close, fact, file};

/// The cells of a column, blanks included, and those of the first column, which holds the moments.
fn columns(name: &str, wanted: &str) -> (Vec<String>, Vec<String>) {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples/open_data").join(name);
    let text = std::fs::read_to_string(path).unwrap();
    let mut rows = text.lines().map(|line| line.split(',').map(str::to_owned).collect::<Vec<String>>());
    let place = rows.next().unwrap().iter().position(|title| title == wanted).unwrap();
    rows.map(|row| (row[0].clone(), row[place].clone())).unzip()
}

#[test]
fn open_series_give_the_values_of_base_r() {
    let mut judged = HashSet::new();
    let cases = file("open_data.json").as_array().unwrap().clone();
    for case in &cases {
        let text = |key: &str| case[key].as_str().unwrap();
        let (moments, readings) = columns(text("file"), text("column"));
        let mut body = json!({ "readings": readings, "moments": moments });
        body.as_object_mut().unwrap().extend(case["parameters"].as_object().unwrap().clone());
        let what = format!("{} {} {} by {}", text("file"), text("method"), text("key"), text("made_by"));
        let outcome = ask(text("method"), body).1.unwrap_or_else(|refusal| panic!("{what}: {refusal}"));
        let got = if text("key") == "p" { outcome.p.value } else { fact(&outcome, text("key")) };
        close(got, &case["value"], 1e-9, &what);
        judged.insert(text("method").to_owned());
    }
    assert!(cases.len() > 100 && judged.len() >= 10, "{} values of {} tests", cases.len(), judged.len());
    assert!(judged.iter().all(|key| METHODS.iter().any(|method| method.card.key == key)));
}

/// The Nile's flow fell at the end of the century, as is well known (G. W. Cobb 1978, *Biometrika* 65, 243-251, finds 1898).
#[test]
fn the_nile_changed_in_1898() {
    let (moments, readings) = columns("nile.csv", "flow");
    let body = json!({ "readings": readings, "moments": moments, "seek": "falling" });
    for method in ["pettitt", "buishand-range", "normal-homogeneity"] {
        let outcome = ask(method, body.clone()).1.unwrap();
        let last = outcome.facts.iter().find(|fact| fact.key == "last_before").unwrap();
        assert_eq!(Value::from(format!("{:?}", last.value)), "Text(\"1898\")", "{method}");
        assert!(outcome.p.value < 1e-4, "{method}: {}", outcome.p.value);
    }
}
