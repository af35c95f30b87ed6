//! The rank version of von Neumann's test against a published example, tables and enumeration.

use risefall::comparison::midranks::Classes;
use risefall::null_distribution::rank_steps;
use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, file, oracle, published};

fn body(case: &Value, extra: Value) -> Value {
    let mut body = json!({ "readings": data(case) });
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    body
}

/// R. Bartels (1982), changes in stock levels 1968-69 to 1977-78: NM = 169, RVN = 2.05.
#[test]
fn changes_in_stock_levels() {
    let case = published("rank_von_neumann", "bartels1982_stocks");
    let (_, outcome) = ask("rank-von-neumann", body(&case, json!({ "toward": "smooth", "p_by": "beta" })));
    let outcome = outcome.unwrap();
    assert_eq!(fact(&outcome, "squared_steps"), case["published"]["NM"].as_f64().unwrap());
    assert!((outcome.statistic.value - case["published"]["RVN"].as_f64().unwrap()).abs() < 0.005);
    let recomputed = &case["recomputed"];
    close(fact(&outcome, "z"), &recomputed["z"], 1e-11, "z");
    close(outcome.p.value, &recomputed["p_trend_beta"], 1e-9, "beta");
    let (_, normal) = ask("rank-von-neumann", body(&case, json!({ "toward": "smooth", "p_by": "normal" })));
    close(normal.unwrap().p.value, &recomputed["p_trend"], 1e-9, "normal");
}

/// Reference values by enumeration and high-precision arithmetic; `made_by` in the file says with what they were cross-checked.
/// They take the variance for ranks without ties, as `ties=ignored` does.
#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("rank_von_neumann") {
        let id = case["id"].as_str().unwrap();
        let expected = &case["expected"];
        let outcome = |p_by: &str| ask("rank-von-neumann", body(&case, json!({ "ties": "ignored", "p_by": p_by }))).1.unwrap();
        let best = outcome("best");
        close(fact(&best, "squared_steps"), &expected["NM"], 1e-15, id);
        close(fact(&best, "spread"), &expected["denominator"], 1e-15, id);
        close(best.statistic.value, &expected["RVN"], 1e-14, id);
        if !expected["p_exact_trend"].is_null() {
            close(fact(&best, "p_smooth"), &expected["p_exact_trend"], 1e-11, id);
            close(fact(&best, "p_alternating"), &expected["p_exact_alternating"], 1e-11, id);
        }
        if !expected["var"].is_null() {
            close(fact(&best, "variance"), &expected["var"], 1e-12, id);
            close(fact(&best, "z"), &expected["z"], 1e-11, id);
            let (normal, beta) = (outcome("normal"), outcome("beta"));
            close(fact(&normal, "p_smooth"), &expected["p_trend"], 1e-9, id);
            close(normal.p.value, &expected["p_two"], 1e-9, id);
            close(fact(&beta, "p_smooth"), &expected["p_trend_beta"], 1e-9, id);
            close(beta.p.value, &expected["p_two_beta"], 1e-9, id);
        }
        checked += 1;
    }
    assert!(checked >= 12, "only {checked} reference values were found");
}

/// P(NM <= v) for 4 to 9 readings, by enumeration of all permutations.
#[test]
fn table_of_squared_steps() {
    let table = file("tables.json")["rank_von_neumann_NM"]["table"].clone();
    let mut checked = 0;
    for (n, row) in table.as_object().unwrap() {
        let classes: Classes = (1..=n.parse().unwrap()).map(|rank| (2 * rank, 1)).collect();
        let null = rank_steps::sum_of_squared_steps(&classes);
        for (value, chance) in row.as_object().unwrap() {
            let got = null.tails(4 * value.parse::<i64>().unwrap()).lower;
            close(got, chance, 1e-12, &format!("n {n}, NM {value}"));
            checked += 1;
        }
    }
    assert!(checked > 300, "only {checked} entries of the table were checked");
}

/// With ties the variance is that over all arrangements: the exact distribution has the same one.
#[test]
fn variance_with_ties_is_that_of_the_exact_distribution() {
    let readings = [1, 2, 2, 3, 1, 2, 3, 3, 3, 1, 2, 2];
    let (_, outcome) = ask("rank-von-neumann", json!({ "readings": readings }));
    let outcome = outcome.unwrap();
    // Doubled mid-ranks of three readings of 1, five of 2 and four of 3.
    let null = rank_steps::sum_of_squared_steps(&vec![(4, 3), (12, 5), (21, 4)]);
    let scale = 4.0 * fact(&outcome, "spread");
    let (mut mean, mut square) = (0.0, 0.0);
    for (value, mass) in null.points() {
        mean += value as f64 / scale * mass;
        square += (value as f64 / scale - 2.0).powi(2) * mass;
    }
    assert!((mean - 2.0).abs() < 1e-12 && (fact(&outcome, "variance") - square).abs() < 1e-12);
}

#[test]
fn exact_beyond_its_size_is_refused_before_working() {
    let readings: Vec<u32> = (1..=40).collect();
    let (_, refused) = ask("rank-von-neumann", json!({ "readings": readings, "p_by": "exact" }));
    assert_eq!(refused.unwrap_err().code(), "beyond-exact");
}
