//! Adjusted p-values against R's `p.adjust`, statsmodels and the published example.

use risefall::finding::{Adjustment, adjust};
use serde_json::Value;

use crate::reference::{close, oracle, published};

const NAMES: [(&str, Adjustment); 4] = [
    ("holm", Adjustment::Holm),
    ("hochberg", Adjustment::Hochberg),
    ("BH", Adjustment::BenjaminiHochberg),
    ("BY", Adjustment::BenjaminiYekutieli),
];

fn numbers(list: &Value) -> Vec<f64> {
    list.as_array().unwrap().iter().filter_map(Value::as_f64).collect()
}

/// Benjamini and Hochberg (1995), section 4: 15 p-values, 3 claims by Bonferroni, 4 by their procedure.
#[test]
fn benjamini_hochberg_example() {
    let case = published("multiple_testing", "bh1995");
    let p = numbers(&case["data"]);
    for (name, adjustment) in NAMES {
        for (got, expected) in adjust(&p, adjustment).iter().zip(case["recomputed"]["adjusted"][name].as_array().unwrap()) {
            close(*got, expected, 1e-12, name);
        }
    }
    let claims = adjust(&p, Adjustment::BenjaminiHochberg).iter().filter(|p| **p <= 0.05).count();
    assert_eq!(claims, case["published"]["bh_rejects"].as_u64().unwrap() as usize);
}

/// Exact rationals, with which R's `p.adjust` and statsmodels agree.
#[test]
fn reference_values() {
    for case in oracle("multiple_testing") {
        let p = numbers(&case["data"]);
        for (name, adjustment) in NAMES {
            let Some(expected) = case["expected"][name].as_array() else { continue };
            let expected = expected.iter().filter(|value| !value.is_null());
            for (got, expected) in adjust(&p, adjustment).iter().zip(expected) {
                close(*got, expected, 1e-12, &format!("{} {name}", case["id"]));
            }
        }
    }
}
