//! Pettitt's test against a published change, tables and enumeration.

use risefall::method::{Datum, Outcome};
use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, file, oracle, published};

fn splits(outcome: &Outcome) -> Vec<u64> {
    let risefall::method::Evidence::Table(table) = &outcome.evidence[0] else { panic!("no table") };
    let best = |row: &&Vec<Datum>| row.last() == Some(&Datum::Text("fits best".into()));
    (1..).zip(&table.rows).filter(|(_, row)| best(row)).map(|(place, _)| place).collect()
}

fn numbers(list: &Value) -> Vec<u64> {
    list.as_array().unwrap().iter().filter_map(Value::as_u64).collect()
}

/// G. W. Cobb (1978), annual flow of the Nile at Aswan: the level fell near 1898, the last year of the old level.
#[test]
fn nile() {
    let case = published("pettitt", "nile_change");
    let years: Vec<u32> = (1871..=1970).collect();
    let (_, outcome) = ask("pettitt", json!({ "readings": data(&case), "moments": years }));
    let outcome = outcome.unwrap();
    let text = |key: &str| outcome.facts.iter().find(|fact| fact.key == key).map(|fact| fact.value.clone());
    assert_eq!(text("last_before"), Some(Datum::Text("1898".into())));
    assert_eq!(text("first_after"), Some(Datum::Text("1899".into())));
    let recomputed = &case["recomputed"]["pettitt"];
    assert_eq!(outcome.statistic.value, recomputed["K"].as_f64().unwrap());
    assert_eq!(outcome.p.by.to_string(), "Pettitt's approximation");
    close(outcome.p.value, &recomputed["p_approx"], 1e-12, "p");
    // Medians of the first 28 and the last 72 flows: NumPy 2.4.6.
    assert_eq!((fact(&outcome, "level_before"), fact(&outcome, "level_after")), (1130.0, 842.5));
}

/// Reference values by enumeration; `made_by` in the file says with what they were cross-checked.
#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("pettitt") {
        let id = case["id"].as_str().unwrap();
        let expected = &case["expected"];
        let ask = |p_by: &str, seek: &str| ask("pettitt", json!({ "readings": data(&case), "p_by": p_by, "seek": seek })).1;
        if expected["K"] == 0.0 {
            assert_eq!(ask("best", "either").unwrap_err().code(), "all-tied", "{id}");
            continue;
        }
        let approximate = ask("approximation", "either").unwrap();
        for (key, name) in [("k", "K"), ("k_falling", "K_plus"), ("k_rising", "K_minus")] {
            assert_eq!(fact(&approximate, key), expected[name].as_f64().unwrap(), "{id} {key}");
        }
        assert_eq!(splits(&approximate), numbers(&expected["last_index_of_first_segment"]), "{id}");
        close(approximate.p.value, &expected["p_approx"], 1e-12, id);
        close(fact(&approximate, "approximation"), &expected["p_approx_unclipped"], 1e-12, id);
        let to_higher = expected["K_minus"].as_f64() > expected["K_plus"].as_f64();
        let one_sided = ask("approximation", if to_higher { "rising" } else { "falling" }).unwrap();
        close(one_sided.p.value, &expected["p_one_sided_approx"], 1e-12, id);
        if !expected["p_exact"].is_null() {
            close(ask("exact", "either").unwrap().p.value, &expected["p_exact"], 1e-11, id);
        }
        checked += 1;
    }
    assert!(checked >= 13, "only {checked} reference values were found");
}

/// P(K >= k) for 3 to 8 readings, by enumeration of all permutations.
#[test]
fn table_of_tails() {
    use risefall::null_distribution::rank_walk::{Barriers, strays};
    let table = file("tables.json")["pettitt_exact"]["table"].clone();
    let mut checked = 0;
    for (n, row) in table.as_object().unwrap() {
        let classes = (1..=n.parse().unwrap()).map(|rank| (2 * rank, 1)).collect();
        for (k, entry) in row.as_object().unwrap() {
            let k: i64 = k.parse().unwrap();
            let got = strays(&classes, Barriers { up: k, down: k, either: k });
            close(got.either, &entry["p_exact"], 1e-12, &format!("n {n}, K {k}"));
            checked += 1;
        }
    }
    assert!(checked > 30, "only {checked} entries of the table were checked");
}

/// Grades take few different ranks, so that a long graded series is judged exactly; for two grades the exact p agrees with
/// carrying the difference of two counts from reading to reading.
#[test]
fn long_graded_series_is_exact() {
    let words = |ups: [usize; 2]| -> Vec<&str> {
        (0..60).map(|i| if (i * 7 + i / 3) % 10 < if i < 30 { ups[0] } else { ups[1] } { "good" } else { "poor" }).collect()
    };
    let (_, outcome) = ask("pettitt", json!({ "readings": words([3, 6]), "grades": "poor < good" }));
    let outcome = outcome.unwrap();
    assert_eq!(outcome.p.by.to_string(), "exact");
    let good = words([3, 6]).iter().filter(|word| **word == "good").count();
    // A walk with `good` steps up of size `poor` and `poor` steps down of size `good`, doubled mid-ranks being n apart.
    let (poor, k) = (60 - good, outcome.statistic.value as i64);
    let mut chances = std::collections::HashMap::from([((0_usize, 0_usize), 1.0)]);
    let mut reached = 0.0;
    for step in 0..60 {
        let mut next = std::collections::HashMap::new();
        for ((a, b), chance) in chances {
            let left = (60 - step) as f64;
            let steps = [((a + 1, b), (good - a) as f64 / left), ((a, b + 1), (poor - b) as f64 / left)];
            for (state, share) in steps.into_iter().filter(|(_, share)| *share > 0.0) {
                let position = (state.0 * poor) as i64 - (state.1 * good) as i64;
                let target = if position.abs() >= k { &mut reached } else { next.entry(state).or_insert(0.0) };
                *target += share * chance;
            }
        }
        chances = next;
    }
    assert!((outcome.p.value - reached).abs() < 1e-12 * reached, "{} {reached}", outcome.p.value);
}
