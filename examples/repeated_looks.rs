//! Prints, as Markdown tables, what becomes of series that are looked at every week.
//!
//! `cargo run --release --example repeated_looks -- [SERIES]`; the tables are kept in `src/method/looks.md`.

use risefall::method::declaration::{Arguments, Proportion};
use risefall::method::kendall::{Ordered, Score};
use risefall::method::planned_looks::Spending;
use risefall::method::question::{PBy, Question};
use risefall::method::successive::{Successive, Ties};
use risefall::method::watch::STAKES;
use risefall::method::{Judge, Seek, find};
use risefall::null_distribution::capital::{Starts, ln_capital};
use risefall::null_distribution::draws::Draws;
use risefall::null_distribution::score_path::{Boundary, Sides};
use risefall::reading::Series;

const RISK: f64 = 0.05;
const FIRST_LOOK: usize = 10;

/// Where the readings come from if there is no trend.
#[derive(Clone, Copy)]
enum Noise {
    Normal,
    /// Student's distribution with two degrees of freedom.
    HeavyTailed,
    /// Five grades, the middle one in 40 % of the weeks, its neighbours in 20 % each, the outer ones in 10 % each.
    Grades,
    /// Normal readings that remember their predecessors: autocorrelation 0.3.
    Remembering,
}

impl Noise {
    fn draw(self, draws: &mut Draws) -> f64 {
        match self {
            Noise::Normal | Noise::Remembering => draws.normal(),
            Noise::HeavyTailed => draws.normal() / (-(1.0 - draws.unit()).ln()).sqrt(),
            Noise::Grades => {
                let share = draws.unit();
                [0.1, 0.3, 0.7, 0.9].iter().filter(|&&below| share >= below).count() as f64
            }
        }
    }
}

/// One way to look again and again: the number of readings at the first claim of a rise, if there is one.
type Procedure<'a> = (&'static str, Box<dyn Fn(&[f64]) -> Option<usize> + 'a>);

fn looks(horizon: usize) -> Vec<usize> {
    (FIRST_LOOK..=horizon).collect()
}

fn cox_stuart() -> Box<dyn Judge> {
    find("cox-stuart").and_then(|test| test.read(&Arguments::default()).ok()).expect("the test is registered")
}

fn repeated_cox_stuart(test: &dyn Judge, readings: &[f64]) -> Option<usize> {
    let question = Question { seek: Seek::Rising, risk: Proportion(RISK) };
    looks(readings.len()).into_iter().find(|&look| {
        let outcome = test.judge(&Series::of_numbers(&readings[..look]), &question);
        outcome.is_ok_and(|outcome| question.allows(outcome.p.value))
    })
}

fn mann_kendall(readings: &[f64]) -> bool {
    let score = Score::of(&Ordered::of(&Series::of_numbers(readings)));
    score.attained(PBy::Normal, true).is_ok_and(|attained| attained.tails.upper <= RISK)
}

/// The earlier readings that each reading exceeds, less those that exceed it; ties are drawn apart.
fn parts(readings: &[f64]) -> Vec<i64> {
    Successive::of(&Series::of_numbers(readings), readings.len(), Ties::Seeded, 1)
        .map(|readings| readings.rising)
        .unwrap_or_default()
}

fn planned(boundary: &Boundary, readings: &[f64]) -> Option<usize> {
    let (mut s, parts) = (0, parts(readings));
    let mut after = parts.iter().map(|part| {
        s += part;
        s
    });
    let mut passed = 0;
    boundary.looks().iter().find_map(|look| {
        let s = after.nth(look.readings - passed - 1)?;
        passed = look.readings;
        look.least.filter(|&least| s >= least).map(|_| look.readings)
    })
}

fn watch(starts: Starts, readings: &[f64]) -> Option<usize> {
    let advantage = |(number, part): (usize, i64)| part as f64 / (number as f64).max(1.0);
    let advantages: Vec<f64> = parts(readings).into_iter().enumerate().map(advantage).collect();
    ln_capital(&advantages, &STAKES, starts).into_iter().position(|capital| capital >= -RISK.ln()).map(|number| number + 1)
}

fn boundary(horizon: usize, spending: Spending) -> Boundary {
    Boundary::spending(&looks(horizon), Sides::One, |information| spending.allowance(RISK, information, Sides::One))
}

fn procedures(horizon: usize) -> Vec<Procedure<'static>> {
    let (late, even) = (boundary(horizon, Spending::OBrienFleming), boundary(horizon, Spending::Pocock));
    let test = cox_stuart();
    vec![
        ("Cox-Stuart, repeated", Box::new(move |readings| repeated_cox_stuart(&*test, readings))),
        (
            "Mann-Kendall, repeated",
            Box::new(move |readings| looks(horizon).into_iter().find(|&look| mann_kendall(&readings[..look]))),
        ),
        ("`planned-looks`, o-brien-fleming", Box::new(move |readings| planned(&late, readings))),
        ("`planned-looks`, pocock", Box::new(move |readings| planned(&even, readings))),
        ("`watch`, starts=first", Box::new(|readings| watch(Starts::First, readings))),
        ("`watch`, starts=spread", Box::new(|readings| watch(Starts::Spread, readings))),
    ]
}

/// In how many per cent of the series there was a claim, and the median number of readings at the first claim.
fn claims(procedure: &Procedure, series: &[Vec<f64>]) -> (f64, Option<usize>) {
    let mut first: Vec<usize> = series.iter().filter_map(|readings| procedure.1(readings)).collect();
    first.sort_unstable();
    (100.0 * first.len() as f64 / series.len() as f64, first.get(first.len() / 2).copied())
}

fn simulate(noise: Noise, seed: u64, count: usize, readings: usize, drift: impl Fn(usize) -> f64) -> Vec<Vec<f64>> {
    let mut draws = Draws::seeded(seed);
    let memory: f64 = if matches!(noise, Noise::Remembering) { 0.3 } else { 0.0 };
    let mut one = || {
        let mut before = noise.draw(&mut draws);
        let reading = |week: usize| {
            let reading = before + drift(week);
            before = memory * before + (1.0 - memory * memory).sqrt() * noise.draw(&mut draws);
            reading
        };
        (0..readings).map(reading).collect()
    };
    (0..count).map(|_| one()).collect()
}

fn without_a_trend(count: usize) {
    println!("Claims of a rise at any look, in per cent of {count} series without a trend; risk 5 %.\n");
    let kinds = [
        ("normal", Noise::Normal),
        ("heavy-tailed", Noise::HeavyTailed),
        ("five grades", Noise::Grades),
        ("autocorrelated", Noise::Remembering),
    ];
    let horizons = [104, 260];
    let headings: Vec<String> =
        horizons.iter().flat_map(|weeks| kinds.map(|(name, _)| format!("{weeks} weeks, {name}"))).collect();
    println!("| Procedure | {} |\n| --- |{}", headings.join(" | "), " --- |".repeat(headings.len()));
    let columns: Vec<Vec<String>> = horizons
        .iter()
        .flat_map(|&weeks| kinds.iter().enumerate().map(move |(seed, kind)| (weeks, seed, kind.1)))
        .map(|(weeks, seed, noise)| {
            let series = simulate(noise, seed as u64 + 1, count, weeks, |_| 0.0);
            procedures(weeks).iter().map(|procedure| format!("{:.1}", claims(procedure, &series).0)).collect()
        })
        .collect();
    for (row, (name, _)) in procedures(104).iter().enumerate() {
        let cells: Vec<&str> = columns.iter().map(|column| column[row].as_str()).collect();
        println!("| {name} | {} |", cells.join(" | "));
    }
}

fn with_a_drift(count: usize) {
    const WEEKS: usize = 104;
    println!(
        "\nClaims of a rise by week {WEEKS}, in per cent of {count} normal series that drift; in brackets the median week of the first claim.\n"
    );
    let steady = |drift: f64| move |week: usize| drift * week as f64;
    let series: Vec<(String, Vec<Vec<f64>>)> = [0.005, 0.01, 0.02, 0.03]
        .into_iter()
        .map(|drift| (format!("{drift} a week"), simulate(Noise::Normal, 11, count, WEEKS, steady(drift))))
        .chain([(
            "0.04 a week from week 53 on".to_owned(),
            simulate(Noise::Normal, 11, count, WEEKS, |week| 0.04 * (week as f64 - 51.0).max(0.0)),
        )])
        .collect();
    let headings: Vec<&str> = series.iter().map(|(name, _)| name.as_str()).collect();
    println!("| Procedure | {} |\n| --- |{}", headings.join(" | "), " --- |".repeat(headings.len()));
    let once: Procedure = ("Mann-Kendall, once in week 104", Box::new(|readings| mann_kendall(readings).then_some(WEEKS)));
    let procedures = procedures(WEEKS);
    for procedure in [&once].into_iter().chain(&procedures[2..]) {
        let cell = |(_, series): &(String, Vec<Vec<f64>>)| match claims(procedure, series) {
            (share, Some(week)) => format!("{share:.1} ({week})"),
            (share, None) => format!("{share:.1}"),
        };
        println!("| {} | {} |", procedure.0, series.iter().map(cell).collect::<Vec<_>>().join(" | "));
    }
}

fn main() {
    let count = std::env::args().nth(1).and_then(|count| count.parse().ok()).unwrap_or(4_000);
    without_a_trend(count);
    with_a_drift(count);
}
