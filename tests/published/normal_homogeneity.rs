//! The standard normal homogeneity test against simulated levels and the formula as it is printed.

use risefall::null_distribution::draws::Draws;
use risefall::null_distribution::normal_walk::{Family, LargestContrast};
use serde_json::json;

use crate::reference::{ask, fact, file};

include!("../reference/homogeneity_levels.rs");

/// T0 as H. Alexandersson (1986) states it, step by step.
fn naive(readings: &[f64]) -> (f64, usize) {
    let n = readings.len() as f64;
    let mean = readings.iter().sum::<f64>() / n;
    let deviation = (readings.iter().map(|reading| (reading - mean).powi(2)).sum::<f64>() / (n - 1.0)).sqrt();
    let z: Vec<f64> = readings.iter().map(|reading| (reading - mean) / deviation).collect();
    let average = |part: &[f64]| part.iter().sum::<f64>() / part.len() as f64;
    let t = |k: usize| k as f64 * average(&z[..k]).powi(2) + (n - k as f64) * average(&z[k..]).powi(2);
    (1..readings.len()).map(|k| (t(k), k)).max_by(|a, b| a.0.total_cmp(&b.0)).unwrap()
}

#[test]
fn statistic_as_printed() {
    for name in ["Nile", "LakeHuron", "lynx", "sunspot_year", "nottem"] {
        let readings = file("datasets.json")[name]["values"].clone();
        let numbers: Vec<f64> = readings.as_array().unwrap().iter().filter_map(|value| value.as_f64()).collect();
        let outcome = ask("normal-homogeneity", json!({ "readings": readings, "draws": 1000 })).1.unwrap();
        let (t0, split) = naive(&numbers);
        assert!((outcome.statistic.value - t0).abs() < 1e-10 * t0, "{name}");
        assert_eq!(fact(&outcome, "readings_before"), split as f64, "{name}");
        let mean = |part: &[f64]| part.iter().sum::<f64>() / part.len() as f64;
        assert!((fact(&outcome, "level_before") - mean(&numbers[..split])).abs() < 1e-9, "{name}");
        assert!((fact(&outcome, "level_after") - mean(&numbers[split..])).abs() < 1e-9, "{name}");
    }
}

/// The chance of exceeding levels that were simulated elsewhere is the stated one. H. Alexandersson and A. Moberg (1997) print for
/// 5 % (from memory) 6.95 for 20, 7.65 for 30, 8.45 for 50 and 9.15 for 100 readings; they agree with the levels to 0.15.
#[test]
fn critical_values() {
    for (n, level, point) in HOMOGENEITY_LEVELS {
        let largest = LargestContrast { family: Family::Standardised, readings: n, one_sided: false };
        let size = (point / (n as f64 - 1.0)).sqrt();
        let got = largest.simulate(size, 10_000, &mut Draws::seeded(12));
        let error = got.error.hypot((level * (1.0 - level) / 400_000.0_f64).sqrt());
        assert!((got.chance - level).abs() < 4.0 * error, "{n} {level}: {got:?}");
        assert!(largest.upper_bound(size) > got.chance - 4.0 * error);
    }
    for (n, printed) in [(20, 6.95), (30, 7.65), (50, 8.45), (100, 9.15)] {
        let (.., point) = HOMOGENEITY_LEVELS.into_iter().find(|&(size, level, _)| size == n && level == 0.05).unwrap();
        assert!((point - printed).abs() < 0.15, "{n}: {point} {printed}");
    }
}

/// Limits and words have no size; the refusals say what to do instead.
#[test]
fn readings_without_a_size_are_refused() {
    let limits = ask("normal-homogeneity", json!({ "readings": "1.2, <0.5, 2.0, 1.7" })).1.unwrap_err();
    assert!(limits.to_string().contains("pettitt"));
    let words =
        ask("normal-homogeneity", json!({ "readings": ["poor", "good", "fair", "good"], "grades": "poor < fair < good" }));
    assert_eq!(words.1.unwrap_err().code(), "scale");
}

/// The same seed gives the same p, and a shifted and rescaled series has the same one.
#[test]
fn shift_and_scale_change_nothing() {
    let readings = [3.1, 2.9, 3.4, 3.3, 3.0, 3.6, 4.6, 4.2, 4.7, 4.5, 4.4, 4.1];
    let moved: Vec<f64> = readings.iter().map(|reading| 1000.0 + 8.0 * reading).collect();
    let p = |readings: &[f64]| ask("normal-homogeneity", json!({ "readings": readings })).1.unwrap();
    let (first, second) = (p(&readings), p(&moved));
    assert!((first.p.value - second.p.value).abs() < 1e-9 * first.p.value);
    assert_eq!(first.p, p(&readings).p);
}
