//! The conditional score test for a trend in the rate of Poisson counts.
//!
//! At each of k moments events are counted over an exposure: complaints over calls, accidents over working hours, or
//! simply events a month. With scores x (1, 2, 3, ... unless others are sent) the statistic is the total score of the
//! events. Given how many events there are, and if the rate is the same at all moments, each event falls on a moment with
//! a chance proportional to its exposure (multinomial), from which the exact p is counted.
//!
//! The score test divides the total score, less its mean, by its standard deviation: z. It is the uniformly most powerful
//! test against a rate of the form exp(a + b x).
//!
//! # Effect
//! The rate ratio per unit of score, exp(b). Within the exact range its interval inverts the exact tails (Cox and Lewis
//! 1966, section 3.2), beyond it the score test.
//!
//! # Dispersion
//! Counts often scatter more than Poisson counts, because events come in clusters or conditions change. Then p is too
//! small. The chi-square that the trend leaves over is given with its p, and its ratio to the degrees of freedom.
//!
//! # When another test fits better
//! Events among a known number of trials: `cochran-armitage`. Counts that scatter too widely: `mann-kendall` on the rates.
//! Times of single events: `laplace`.

use super::choices::{NO_COMMON_STEP, ScoreBy, TwoSided, scores};
use super::declaration::{List, Proportion};
use super::question::PBy;
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::Rates;
use crate::comparison::counts::{Steps, whole_steps};
use crate::null_distribution::score_total::{MOST_PRODUCTS, independent, independent_effort};
use crate::null_distribution::{Attained, By, ChiSquare, Lattice, Tilted, crossing, normal};
use crate::reading::{Scale, Series};

crate::parameters! {
    /// What the test for a trend in Poisson counts takes beyond readings, seek and risk.
    pub struct Parameters {
        /// What the events of each moment were counted over: time, calls, persons. Equal if none are sent.
        exposures: List = List::default(),
        /// The score of each moment; if none are sent, see score_by.
        scores: List = List::default(),
        /// What the scores are where none are sent: positions or moments.
        score_by: ScoreBy = ScoreBy::Positions,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// For an exact p when a change in either direction is sought: doubled or distance.
        two_sided: TwoSided = TwoSided::Doubled,
        /// Confidence of the interval around the rate ratio.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct PoissonTrend;

impl Method for PoissonTrend {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "poisson-trend",
        title: "Conditional score test for a trend in Poisson counts",
        question: "Does the rate of counted events rise or fall over time?",
        null_hypothesis: "The counts are independent Poisson counts with the same rate per unit of exposure at all moments.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Counts,
        least_readings: 2,
        exact: "Up to 500 million products of chances: about 2,700 events in 12 moments, 300 in 100.",
        assumes: &[
            "Events happen one by one and independently of each other, so that counts scatter as Poisson counts do.",
            "The exposures are known.",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Moments with the same score count together. Equal counts need no special treatment.",
        missing: "A moment without a reading is left out, with its exposure; scores keep their places. Limits such as <5 are refused: a count is needed.",
        cost: "n times the square of the number of events times the largest score, within the exact range; else n",
        fits_better: &[
            ("cochran-armitage", "events are counted among a known number of trials"),
            ("mann-kendall", "the rates scatter more than Poisson counts would"),
            ("laplace", "the time of each event is known"),
        ],
        sources: &[
            Source {
                authors: "D. R. Cox and P. A. W. Lewis",
                year: 1966,
                title: "The Statistical Analysis of Series of Events",
                place: "Methuen, sections 3.2 and 3.3",
            },
            Source {
                authors: "P. Armitage",
                year: 1955,
                title: "Tests for linear trends in proportions and frequencies",
                place: "Biometrics 11, 375-386",
            },
            Source {
                authors: "P. McCullagh and J. A. Nelder",
                year: 1989,
                title: "Generalized Linear Models, 2nd edition",
                place: "Chapman and Hall, section 6.2",
            },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let rates = rates(series, parameters)?;
        let (mean, variance_of_one) = rates.score_moments(0.0);
        let events = rates.events() as f64;
        let (excess, variance) = (rates.excess(0.0), events * variance_of_one);
        let z = excess / variance.sqrt();
        let exact = Exact::of(&rates, mean, parameters.p_by)?;
        let attained = match (&exact, parameters.two_sided) {
            (Some(exact), TwoSided::Doubled) => Attained::exact(&exact.null, exact.observed),
            (Some(exact), TwoSided::Distance) => Attained::by_distance(&exact.null, exact.observed, exact.mean),
            (None, _) => {
                let ends = rates
                    .rows
                    .iter()
                    .map(|row| row.score)
                    .fold((mean, mean), |(low, high), score| (score.min(low), score.max(high)));
                let range = (events * (ends.0 - mean), events * (ends.1 - mean));
                Attained::normal(excess, range, variance, 0.0, By::Approximation("normal score test"))
            }
        };
        let (p, smallest) = question.judge(&attained);
        let dispersion = Dispersion::of(&rates, z);
        let mut facts = vec![
            Fact::new("moments", "Moments with exposure", rates.rows.len()),
            Fact::new("events", "Events", rates.events()),
            Fact::new("exposure", "Exposure", rates.exposure()),
            Fact::new("rate", "Events per unit of exposure", events / rates.exposure()),
            Fact::new("score_excess", "Total score of the events, less its mean without a trend", excess),
            Fact::new("score_variance", "Variance of the total score without a trend", variance),
            Fact::new("z", "Score test, standardised", z),
            Fact::new("chi2_trend", "Chi-square for trend, 1 degree of freedom", z * z),
        ];
        facts.extend(question.p_facts(&attained));
        facts.extend(ratio_facts(&rates, exact.as_ref(), parameters.confidence.0));
        facts.extend(dispersion.facts());
        Ok(Outcome {
            statistic: Statistic { name: "z", value: z },
            p,
            direction: Direction::of(z),
            smallest_p: Some(smallest),
            readings_used: rates.rows.len(),
            facts,
            evidence: vec![Evidence::Table(table(&rates, series))],
            cautions: cautions(&rates, series, &dispersion, attained.by),
        })
    }
}

/// The counts, exposures and scores, or why they cannot be judged.
fn rates(series: &Series, parameters: &Parameters) -> Result<Rates, Refusal> {
    if series.scale != Scale::Numeric {
        return Err(Refusal::Scale { test: PoissonTrend::CARD.title, needs: "counts of events", are: "words" });
    }
    let scores = scores(series, &parameters.scores, parameters.score_by)?;
    let rates = Rates::of(series, parameters.exposures.cells.as_deref(), |reading| scores[reading])
        .map_err(|error| Refusal::Because(error.to_string()))?;
    if !rates.rows.windows(2).any(|pair| pair[0].score != pair[1].score) {
        return Err(Refusal::Because("a trend needs counts at two moments with different scores".into()));
    }
    if rates.events() == 0 {
        return Err(Refusal::Because("no event was counted, so the rates do not differ".into()));
    }
    let (mean, variance) = rates.score_moments(0.0);
    if !(mean.is_finite() && variance.is_finite() && variance > 0.0 && rates.exposure().is_finite()) {
        return Err(Refusal::Because("the scores or exposures are too large to compute with".into()));
    }
    Ok(rates)
}

/// The conditional null distribution of the total score, in whole steps of the scores.
struct Exact {
    null: Lattice,
    observed: i64,
    mean: f64,
    step: f64,
}

impl Exact {
    /// `None` where the exact p is not wanted or not feasible. `mean` is the mean score of one event without a trend.
    fn of(rates: &Rates, mean: f64, p_by: PBy) -> Result<Option<Self>, Refusal> {
        let scores: Vec<f64> = rates.rows.iter().map(|row| row.score).collect();
        let Some(Steps { above_lowest, size }) = whole_steps(&scores).filter(|_| p_by != PBy::Normal) else {
            return if p_by == PBy::Exact { Err(Refusal::Because(NO_COMMON_STEP.into())) } else { Ok(None) };
        };
        let effort = independent_effort(rates.events(), &above_lowest);
        if !p_by.is_exact("products of chances", effort as usize, MOST_PRODUCTS as usize)? {
            return Ok(None);
        }
        let exposures: Vec<f64> = rates.rows.iter().map(|row| row.exposure).collect();
        let lowest = scores.iter().copied().fold(f64::INFINITY, f64::min);
        Ok(Some(Exact {
            null: independent(rates.events(), &above_lowest, &exposures),
            observed: rates.rows.iter().zip(&above_lowest).map(|(row, &steps)| (row.events * steps) as i64).sum(),
            mean: rates.events() as f64 * (mean - lowest) / size,
            step: size,
        }))
    }
}

/// The rate ratio per unit of score with its interval: from the exact tails, or from the score test.
fn ratio_facts(rates: &Rates, exact: Option<&Exact>, confidence: f64) -> [Fact; 4] {
    let (growth, low, high, by) = match exact {
        Some(exact) => {
            let tilted = Tilted::new(&exact.null);
            let (low, high) = tilted.interval(exact.observed, confidence);
            let growth = |tilt: f64| tilt / exact.step;
            (growth(tilted.estimate(exact.observed)), growth(low), growth(high), By::Exact)
        }
        None => {
            let (_, variance) = rates.score_moments(0.0);
            let reach = normal::upper_quantile((1.0 - confidence) / 2.0);
            let solve = |shift: f64| {
                crossing::of_rising(0.1 / variance.sqrt(), 700.0 / variance.sqrt(), |growth| {
                    let (_, variance) = rates.score_moments(growth);
                    shift - rates.excess(growth) / (rates.events() as f64 * variance).sqrt()
                })
            };
            (solve(0.0), solve(reach), solve(-reach), By::Approximation("score test"))
        }
    };
    let ratio = |growth: f64| Some(growth.exp()).filter(|ratio| ratio.is_finite());
    [
        Fact::new("rate_ratio", "Rate ratio per unit of score", ratio(growth)),
        Fact::new("rate_ratio_low", "Rate ratio, lower limit", ratio(low)),
        Fact::new("rate_ratio_high", "Rate ratio, upper limit; none where blank", ratio(high)),
        Fact::new("rate_ratio_by", "How the interval was got", by.to_string()),
    ]
}

/// How widely the counts scatter.
struct Dispersion {
    total: f64,
    freedom: usize,
    left_over: f64,
}

impl Dispersion {
    fn of(rates: &Rates, z: f64) -> Self {
        let total = rates.chi_square();
        Dispersion { total, freedom: rates.rows.len() - 1, left_over: (total - z * z).max(0.0) }
    }

    /// The chi-square left over by the trend, relative to its degrees of freedom; 1 is expected of Poisson counts.
    fn ratio(&self) -> Option<f64> {
        (self.freedom > 1).then(|| self.left_over / (self.freedom - 1) as f64)
    }

    fn p_left_over(&self) -> Option<f64> {
        (self.freedom > 1).then(|| ChiSquare::new(self.freedom as u64 - 1).upper_tail(self.left_over))
    }

    fn facts(&self) -> [Fact; 6] {
        [
            Fact::new("chi2_total", "Chi-square of the counts against an equal rate", self.total),
            Fact::new("df_total", "Its degrees of freedom", self.freedom),
            Fact::new("chi2_departure", "Chi-square left over by the trend", self.left_over),
            Fact::new("df_departure", "Its degrees of freedom", self.freedom - 1),
            Fact::new("p_departure", "p for scatter beyond the trend", self.p_left_over()),
            Fact::new("dispersion", "Scatter around the trend; 1 is expected of Poisson counts", self.ratio()),
        ]
    }
}

fn table(rates: &Rates, series: &Series) -> Table {
    let columns = [
        ("moment", "Moment"),
        ("score", "Score"),
        ("events", "Events"),
        ("exposure", "Exposure"),
        ("rate", "Events per unit of exposure"),
        ("expected", "Events expected without a trend"),
    ];
    let rows = rates.rows.iter().map(|row| -> Vec<Datum> {
        vec![
            series.moments.label(row.reading).into(),
            row.score.into(),
            row.events.into(),
            row.exposure.into(),
            (row.events as f64 / row.exposure).into(),
            rates.expected(row).into(),
        ]
    });
    Table {
        caption: "Events counted at each moment".into(),
        rows: rows.collect(),
        columns: columns.map(|(key, label)| Column { key, label }).to_vec(),
    }
}

fn cautions(rates: &Rates, series: &Series, dispersion: &Dispersion, by: By) -> Vec<String> {
    let mut cautions = Vec::new();
    let left_out = series.len() - series.count_present() + rates.without_exposure;
    if left_out > 0 {
        cautions.push(format!("{left_out} moments without a reading or without exposure were left out."));
    }
    if let (Some(ratio), Some(p)) = (dispersion.ratio(), dispersion.p_left_over())
        && p < 0.05
    {
        cautions.push(format!(
            "The counts scatter {ratio:.1} times as widely around the trend as Poisson counts would (p = {p:.2e}); the p of the trend is then too small. A rank test of the rates makes no such assumption."
        ));
    }
    if by != By::Exact && rates.events() < 20 {
        cautions.push("There are fewer than 20 events; the normal approximation is rough.".into());
    }
    cautions
}
