//! Far tails, where one minus the other tail would be 0, against whole-number counts (`tests/reference/far_tails.py`).

use std::collections::HashSet;

use risefall::method::METHODS;
use risefall::null_distribution::By;
use serde_json::Value;

use crate::reference::{ask, close, fact, file};

/// Tests without an exact p, and why.
const NEVER_EXACT: [(&str, &str); 4] = [
    ("buishand-range", "p by simulation or by a bound"),
    ("normal-homogeneity", "p by simulation or by a bound"),
    ("partial-kendall", "p by the normal approximation alone"),
    ("watch", "p is an upper limit"),
];

#[test]
fn far_tails_keep_their_digits() {
    let mut judged = HashSet::new();
    for case in file("far_tails.json").as_array().unwrap() {
        let text = |key: &str| case[key].as_str().unwrap();
        let what = format!("{}, {} readings", text("method"), case["body"]["readings"].as_array().unwrap().len());
        let outcome = ask(text("method"), case["body"].clone()).1.unwrap_or_else(|refusal| panic!("{what}: {refusal}"));
        assert_eq!(outcome.p.by, By::Exact, "{what}");
        let expected: f64 = text("value").parse().unwrap();
        close(fact(&outcome, text("key")), &Value::from(expected), 1e-10, &what);
        judged.insert(text("method").to_owned());
    }
    for method in METHODS.iter().map(|method| method.card.key) {
        let checked = judged.contains(method) || NEVER_EXACT.iter().any(|(key, _)| *key == method);
        assert!(checked, "{method} has no far tail in tests/reference/far_tails.py");
    }
}
