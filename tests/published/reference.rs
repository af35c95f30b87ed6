//! Reading the reference files and comparing with them.

use std::path::Path;

use risefall::finding::Request;
use risefall::method::declaration::Arguments;
use risefall::method::{Datum, Outcome, Refusal};
use risefall::query::{Asked, read};
use serde_json::Value;

/// A reference file of one method.
pub fn file(name: &str) -> Value {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/published/reference").join(name);
    serde_json::from_str(&std::fs::read_to_string(path).unwrap()).unwrap()
}

/// The reference values of a method.
pub fn oracle(method: &str) -> Vec<Value> {
    file(&format!("{method}.json"))["oracle"].as_array().unwrap().clone()
}

/// The published example with a given id.
pub fn published(method: &str, id: &str) -> Value {
    let cases = file(&format!("{method}.json"))["published"].as_array().unwrap().clone();
    cases.into_iter().find(|case| case["id"] == id).unwrap()
}

/// The readings of a case as a JSON list; a named data set is looked up.
pub fn data(case: &Value) -> Value {
    match case["data"]["dataset"].as_str() {
        Some(name) => file("datasets.json")[name]["values"].clone(),
        None => case["data"].clone(),
    }
}

/// Judges a case as a request would: `parameters` as they are sent.
pub fn ask(method: &str, body: Value) -> (Asked, Result<Outcome, Refusal>) {
    let arguments: Arguments = risefall::query::json::arguments(body.to_string().as_bytes()).unwrap();
    let asked = read(risefall::method::find(method).unwrap(), &arguments, &[]).unwrap_or_else(|problem| panic!("{problem}"));
    let Request { test, question, .. } = &asked.request;
    let result = test.judge(&asked.series, question);
    (asked, result)
}

/// A number among the facts of an outcome.
pub fn fact(outcome: &Outcome, key: &str) -> f64 {
    match outcome.facts.iter().find(|fact| fact.key == key).map(|fact| &fact.value) {
        Some(Datum::Number(number)) => *number,
        Some(Datum::Integer(integer)) => *integer as f64,
        other => panic!("fact {key}: {other:?}"),
    }
}

/// Asserts that two numbers agree to a relative error.
#[track_caller]
pub fn close(got: f64, expected: &Value, relative: f64, what: &str) {
    let expected = expected.as_f64().unwrap_or_else(|| panic!("{what}: no reference value"));
    let error = (got - expected).abs();
    assert!(error <= relative * expected.abs() || got == expected, "{what}: got {got:e}, expected {expected:e}");
}
