//! The Cox-Stuart test against published examples, tables and enumeration.

use risefall::method::Refusal;
use risefall::method::cox_stuart::least_to_reach;
use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, file, oracle, published};

/// W. J. Conover, *Practical Nonparametric Statistics*, precipitation example (n = 19, middle value left out).
#[test]
fn precipitation_example() {
    let case = published("cox_stuart", "conover_precipitation");
    let (_, outcome) = ask("cox-stuart", json!({ "readings": data(&case) }));
    let outcome = outcome.unwrap();
    assert_eq!(outcome.statistic.value, case["published"]["T"].as_f64().unwrap());
    assert_eq!(fact(&outcome, "pairs"), case["published"]["pairs"].as_f64().unwrap());
    assert_eq!(fact(&outcome, "least_alike"), 8.0, "the printed critical region is T <= 1 or T >= 8");
    close(outcome.p.value, &case["recomputed"]["p_two"], 1e-12, "p");
}

/// A fact of the trade: seven rises in seven pairs give P(T >= 7) = 0.0078.
#[test]
fn seven_rises_in_seven() {
    let readings: Vec<u32> = (1..=14).collect();
    let (_, outcome) = ask("cox-stuart", json!({ "readings": readings, "seek": "rising" }));
    assert_eq!(outcome.unwrap().p.value, 0.0078125);
}

/// Reference values by enumeration; `made_by` in the file says with what they were cross-checked.
#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("cox_stuart") {
        let id = case["id"].as_str().unwrap();
        let version = case["parameters"]["version"].as_str().unwrap();
        let (pairs, third) = match version {
            "halves" => ("halves", "down"),
            "thirds_floor" => ("thirds", "down"),
            "thirds_ceil" => ("thirds", "up"),
            other => panic!("{other}"),
        };
        let gaps = if id.contains("by_position") { "keep" } else { "close" };
        let body = |extra: Value| {
            let mut body = json!({ "readings": data(&case), "pairs": pairs, "third": third, "gaps": gaps });
            body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
            body
        };
        let expected = &case["expected"];
        let (_, result) = ask("cox-stuart", body(json!({})));
        if expected["p_two"].is_null() {
            let refusal = result.unwrap_err();
            let tied = expected["pairs"].as_u64().unwrap() > 0;
            assert!(
                matches!((&refusal, tied), (Refusal::AllTied { .. }, true) | (Refusal::TooFewReadings { .. }, false)),
                "{id}: {refusal}"
            );
        } else {
            let outcome = result.unwrap();
            for (key, name) in [("pairs", "pairs"), ("rises", "plus"), ("falls", "minus"), ("ties", "zero")] {
                assert_eq!(fact(&outcome, key), expected[name].as_f64().unwrap(), "{id} {key}");
            }
            for (key, name) in [("p_rising", "p_increasing"), ("p_falling", "p_decreasing"), ("p_either", "p_two")] {
                close(fact(&outcome, key), &expected[name], 1e-11, &format!("{id} {key}"));
            }
            let (_, normal) = ask("cox-stuart", body(json!({ "p_by": "normal" })));
            close(normal.unwrap().p.value, &expected["p_two_normal_cc"], 1e-9, &format!("{id} normal"));
        }
        checked += 1;
    }
    assert!(checked >= 31, "only {checked} reference values were found");
}

/// Two-sided sign-test p-values by enumeration, confirmed by SciPy's binomial test.
#[test]
fn sign_test_values() {
    for case in oracle("sign_test") {
        let (n, plus) = (case["parameters"]["n"].as_u64().unwrap(), case["parameters"]["plus"].as_u64().unwrap());
        let tails = risefall::null_distribution::binomial::Binomial::fair(n).tails(plus);
        close(tails.upper, &case["expected"]["p_plus_greater"], 1e-11, "upper");
        close(tails.lower, &case["expected"]["p_plus_less"], 1e-11, "lower");
        close(tails.doubled(), &case["expected"]["p_two"], 1e-11, "two-sided");
    }
}

/// The weighted sum of signs against every assignment of signs to the pairs of a short series.
#[test]
fn weighted_sum_against_all_assignments() {
    let readings = [4.0, 1.0, 3.0, 2.0, 6.0, 5.0, 8.0, 2.5, 9.0, 7.0];
    let n = readings.len();
    let weights: Vec<u64> = (0..n / 2).map(|i| (n - 1 - 2 * i) as u64).collect();
    let observed: u64 = (0..n / 2).filter(|&i| readings[n - 1 - i] > readings[i]).map(|i| weights[i]).sum();
    let assignments = 1_u64 << weights.len();
    let reach = (0..assignments)
        .filter(|signs| weights.iter().enumerate().filter(|(i, _)| signs >> i & 1 == 1).map(|(_, w)| w).sum::<u64>() >= observed)
        .count();
    let (_, outcome) = ask("cox-stuart", json!({ "readings": readings, "pairs": "weighted", "seek": "rising" }));
    let outcome = outcome.unwrap();
    assert_eq!(outcome.statistic.value, observed as f64);
    assert!((outcome.p.value - reach as f64 / assignments as f64).abs() < 1e-15);
}

/// The weighted statistic's mean N²/8 and variance N(N²-1)/24 as stated in the 1955 paper (from memory), for even N.
#[test]
fn weighted_null_has_the_published_moments() {
    for n in [4_u64, 10, 26, 60] {
        let weights: Vec<u32> = (0..n / 2).map(|i| (n - 1 - 2 * i) as u32).collect();
        let null = risefall::null_distribution::signed_weights::SignedWeights::new(&weights);
        let mean: f64 = (0..=null.total()).map(|sum| sum as f64 * null.mass(sum)).sum();
        let square: f64 = (0..=null.total()).map(|sum| (sum as f64 - mean).powi(2) * null.mass(sum)).sum();
        let size = n as f64;
        assert!((mean - size * size / 8.0).abs() < 1e-9 * mean);
        assert!((square - size * (size * size - 1.0) / 24.0).abs() < 1e-9 * square);
    }
}

/// The sign-test table (Dixon and Mood; Conover), verified by enumeration: the largest number of contrary signs.
#[test]
fn sign_test_table() {
    let table = file("tables.json")["sign_test_critical"]["table"].clone();
    let mut checked = 0;
    for (n, row) in table.as_object().unwrap() {
        let n: u64 = n.parse().unwrap();
        for (risk, contrary) in row.as_object().unwrap() {
            let expected = contrary.as_u64().map(|contrary| n - contrary);
            assert_eq!(least_to_reach(n, risk.parse().unwrap()), expected, "n {n}, one-sided {risk}");
            checked += 1;
        }
    }
    assert!(checked > 100, "only {checked} entries of the table were checked");
}

/// Blocks as one range and as one list: pairs within blocks, signs pooled, binomial p by Pascal's triangle.
#[test]
fn blocks_are_paired_by_themselves() {
    let range = json!({ "readings": [[1, 30, 7], [2, 20, 7], [3, 40, 8], [4, 50, 5], [9, 60, 9]], "seek": "rising" });
    let (_, outcome) = ask("cox-stuart", range);
    let outcome = outcome.unwrap();
    let signs = ["pairs", "rises", "falls", "ties"].map(|key| fact(&outcome, key));
    assert_eq!(signs, [6.0, 5.0, 1.0, 0.0], "pairs (1, 4) and (2, 5) of each column: 1-4, 2-9, 30-50, 20-60, 7-5, 7-9");
    close(outcome.p.value, &json!(7.0 / 64.0), 1e-14, "p");
    let list = json!({
        "readings": [1, 2, 3, 4, 9, 30, 20, 40, 50, 60, 7, 7, 8, 5, 9], "seek": "rising",
        "blocks": ["a", "a", "a", "a", "a", "b", "b", "b", "b", "b", "c", "c", "c", "c", "c"],
    });
    assert_eq!(ask("cox-stuart", list).1.unwrap().p, outcome.p);
    let single = json!({ "readings": [[1, 2, 3]] });
    assert!(ask("cox-stuart", single).1.is_ok(), "a single row is one series");
    let apart = json!({ "readings": [1, 2], "blocks": ["a", "b"] });
    assert!(ask("cox-stuart", apart).1.unwrap_err().to_string().contains("none of the 2 blocks"));
}
