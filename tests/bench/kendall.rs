//! Kendall's S, its exact p, and the Theil-Sen slope with its limits, as ratios to SciPy on the same readings in one run.
//!
//! `cargo bench --bench kendall` (needs Python with SciPy and 10 GB of memory for SciPy's slopes; RISEFALL_PYTHON names it, else
//! `python3`).

use std::path::Path;
use std::process::Command;
use std::time::Instant;

use risefall::method::declaration::Declared;
use risefall::method::{Datum, Outcome, Question, find};
use risefall::query::json::arguments;
use risefall::reading::Series;

fn main() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let save = |name: &str, readings: &[f64]| {
        let bytes: Vec<u8> = readings.iter().flat_map(|reading| reading.to_ne_bytes()).collect();
        std::fs::write(folder.path().join(name), bytes).expect("the readings are written");
    };
    let (million, thousand, many) = (noise(1_000_000), noise(1_000), noise(20_000));
    let tied: Vec<f64> = thousand[..250].iter().map(|reading| (reading * 20.0).floor()).collect();
    save("s", &million);
    save("exact", &thousand);
    save("slope", &many);

    let s = measure("mann-kendall", r#"{"p_by": "normal"}"#, &million, 3);
    let exact = measure("mann-kendall", r#"{"p_by": "exact"}"#, &thousand, 3);
    let exact_tied = measure("mann-kendall", r#"{"p_by": "exact"}"#, &tied, 3);
    let slope = measure("theil-sen", "{}", &many, 3);
    let longer = measure("theil-sen", "{}", &noise(100_000), 3);

    let python = std::env::var("RISEFALL_PYTHON").unwrap_or_else(|_| "python3".into());
    let script = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/bench/kendall.py");
    let output = Command::new(python).arg(script).arg(folder.path()).output().expect("Python with SciPy is needed");
    let text = String::from_utf8_lossy(&output.stdout);
    let scipy = |name: &str| -> Option<(f64, f64)> {
        let line = text.lines().find_map(|line| line.strip_prefix(&format!("{name} ")))?;
        let (seconds, answer) = line.split_once(' ')?;
        Some((seconds.parse().ok()?, answer.parse().ok()?))
    };
    report("S of 1,000,000 readings", &s, fact(&s.1, "tau"), scipy("s"), 3.0);
    report("exact p of 1,000 readings", &exact, exact.1.p.value, scipy("exact"), 10.0);
    println!("exact p of 250 readings with ties: {:.4} s by {}; SciPy refuses ties", exact_tied.0, exact_tied.1.p.by);
    report("slope and limits of 20,000 readings", &slope, fact(&slope.1, "slope"), scipy("slope"), 1_000.0);
    println!("slope and limits of 100,000 readings: {:.4} s", longer.0);
    assert!(output.status.success(), "SciPy's part failed: {}", String::from_utf8_lossy(&output.stderr));
}

/// Uniform noise between 0 and 1.
fn noise(count: usize) -> Vec<f64> {
    let mut state = 7_u64;
    let mut next = || {
        state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (state >> 11) as f64 / (1_u64 << 53) as f64
    };
    (0..count).map(|_| next()).collect()
}

/// The median seconds of some runs, and what the test found.
fn measure(key: &str, parameters: &str, readings: &[f64], runs: usize) -> (f64, Outcome) {
    let arguments = arguments(parameters.as_bytes()).expect("parameters");
    let test = find(key).unwrap_or_else(|| panic!("{key} is not registered")).read(&arguments).expect("parameters");
    let question = Question::read(&arguments).expect("a question");
    let series = Series::of_numbers(readings);
    let mut seconds = Vec::new();
    let mut outcome = None;
    for _ in 0..runs {
        let start = Instant::now();
        outcome = Some(test.judge(&series, &question).expect("the test applies"));
        seconds.push(start.elapsed().as_secs_f64());
    }
    seconds.sort_by(f64::total_cmp);
    (seconds[runs / 2], outcome.expect("one run at least"))
}

fn fact(outcome: &Outcome, key: &str) -> f64 {
    match outcome.facts.iter().find(|fact| fact.key == key).map(|fact| &fact.value) {
        Some(Datum::Number(number)) => *number,
        other => panic!("fact {key}: {other:?}"),
    }
}

fn report(what: &str, ours: &(f64, Outcome), value: f64, scipy: Option<(f64, f64)>, goal: f64) {
    let Some((seconds, answer)) = scipy else {
        println!("{what}: {:.4} s; SciPy gave no answer", ours.0);
        return;
    };
    assert!((value - answer).abs() <= 1e-9 * answer.abs(), "{what}: {value:e}, SciPy has {answer:e}");
    println!("{what}: {:.4} s, SciPy {seconds:.3} s: {:.1} times faster, goal at least {goal}", ours.0, seconds / ours.0);
}
