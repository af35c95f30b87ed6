//! The Cochran-Armitage test for a linear trend in shares.
//!
//! At each of k moments, e events happened in n trials: complaints among calls, failures among inspections. With scores x
//! (1, 2, 3, ... unless others are sent) the statistic is the total score of the events, T = sum of x e. Given the
//! trials and the number of all events, and if the share of events is the same at all moments, the events are drawn
//! without replacement from all trials (multivariate hypergeometric), from which the exact p is counted.
//!
//! The score test divides T, less its mean, by its standard deviation: z. Its square is one degree of freedom of the
//! chi-square of the k x 2 table; the rest, k - 2 degrees of freedom, measures departure from a straight line.
//!
//! # Choices
//! Cochran's and Armitage's variance divides by N, the number of all trials; dividing by N - 1 gives the variance under
//! the conditional distribution and agrees with the Mantel extension test. The exact p needs neither.
//!
//! # Effect
//! The slope of the share per unit of score with an approximate interval (Armitage 1955, section 2), and the odds ratio
//! per unit of score with an exact one, from the conditional distribution under a linear logistic model (Cox 1970,
//! section 4.2).
//!
//! # When another test fits better
//! Counts without trials: `poisson-trend`. Shares that scatter more than chance allows, because trials of one moment
//! resemble each other: `mann-kendall` on the shares.

use super::choices::{NO_COMMON_STEP, ScoreBy, TwoSided, scores};
use super::declaration::{List, Proportion};
use super::question::PBy;
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::counts::{Steps, whole_steps};
use crate::comparison::{Share, Shares};
use crate::null_distribution::score_total::{MOST_PRODUCTS, without_replacement, without_replacement_effort};
use crate::null_distribution::{Attained, By, ChiSquare, Lattice, Tilted, normal};
use crate::reading::{Scale, Series};

crate::choices! {
    /// What the variance of the score test is divided by.
    pub enum Divisor {
        /// The number of all trials, N, as Cochran and Armitage have it.
        Trials = "n",
        /// N - 1, as the conditional distribution has it.
        TrialsLessOne = "n-1",
    }
}

crate::parameters! {
    /// What the Cochran-Armitage test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// The number of trials at each moment; the readings are the events among them.
        trials: List = List::default(),
        /// The score of each moment; if none are sent, see score_by.
        scores: List = List::default(),
        /// What the scores are where none are sent: positions or moments.
        score_by: ScoreBy = ScoreBy::Positions,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// What the variance of the score test is divided by: n or n-1.
        divisor: Divisor = Divisor::Trials,
        /// For an exact p when a change in either direction is sought: doubled or distance.
        two_sided: TwoSided = TwoSided::Doubled,
        /// Confidence of the intervals around slope and odds ratio.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct CochranArmitage;

impl Method for CochranArmitage {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "cochran-armitage",
        title: "Cochran-Armitage test for trend in shares",
        question: "Does the share of trials with an event rise or fall over time?",
        null_hypothesis: "At every moment each trial has the same chance of an event, independently of the other trials.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Counts,
        least_readings: 2,
        exact: "Up to 500 million products of chances: about 300 events, or 300 trials without one, at 12 moments; 140 at 52 moments.",
        assumes: &[
            "Trials are independent of each other: one trial's event makes no other more or less probable.",
            "The trials of each moment are all counted, with or without an event.",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Moments with the same score count together. Equal shares need no special treatment.",
        missing: "A moment without a reading is left out, with its trials; scores keep their places. Limits such as <5 are refused: a count is needed.",
        cost: "n times the square of the rarer outcome's count times the largest score, within the exact range; else n",
        fits_better: &[
            ("poisson-trend", "events are counted over a time or an exposure, not among trials"),
            ("mann-kendall", "the shares scatter more than independent trials would"),
        ],
        sources: &[
            Source {
                authors: "W. G. Cochran",
                year: 1954,
                title: "Some methods for strengthening the common chi-square tests",
                place: "Biometrics 10, 417-451, section 6",
            },
            Source {
                authors: "P. Armitage",
                year: 1955,
                title: "Tests for linear trends in proportions and frequencies",
                place: "Biometrics 11, 375-386",
            },
            Source { authors: "D. R. Cox", year: 1970, title: "Analysis of Binary Data", place: "Methuen, section 4.2" },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let shares = shares(series, parameters)?;
        let n = shares.trials() as f64;
        let by_trials = shares.overall() * (1.0 - shares.overall()) * shares.spread();
        let variance = match parameters.divisor {
            Divisor::Trials => by_trials,
            Divisor::TrialsLessOne => by_trials * n / (n - 1.0),
        };
        let z = shares.excess() / variance.sqrt();
        let exact = Exact::of(&shares, parameters.p_by)?;
        let attained = match (&exact, parameters.two_sided) {
            (Some(exact), TwoSided::Doubled) => Attained::exact(&exact.null, exact.observed),
            (Some(exact), TwoSided::Distance) => Attained::by_distance(&exact.null, exact.observed, exact.mean),
            (None, _) => {
                let by = parameters.divisor.approximation();
                Attained::normal(shares.excess(), shares.excess_range(), variance, 0.0, by)
            }
        };
        let (p, smallest) = question.judge(&attained);
        let departure = Departure::of(&shares, shares.excess().powi(2) / by_trials);
        let mut facts = vec![
            Fact::new("moments", "Moments with trials", shares.rows.len()),
            Fact::new("events", "Events", shares.events()),
            Fact::new("trials", "Trials", shares.trials()),
            Fact::new("share", "Share of trials with an event", shares.overall()),
            Fact::new("z", "Score test, standardised", z),
            Fact::new("chi2_trend", "Chi-square for trend, 1 degree of freedom", z * z),
        ];
        facts.extend(question.p_facts(&attained));
        facts.extend(departure.facts());
        facts.extend(slope_facts(&shares, parameters.confidence.0));
        facts.extend(exact.iter().flat_map(|exact| exact.odds_ratio_facts(parameters.confidence.0)));
        Ok(Outcome {
            statistic: Statistic { name: "z", value: z },
            p,
            direction: Direction::of(z),
            smallest_p: Some(smallest),
            readings_used: shares.rows.len(),
            facts,
            evidence: vec![Evidence::Table(table(&shares, series))],
            cautions: cautions(&shares, series, &departure, question, attained.by),
        })
    }
}

impl Divisor {
    fn approximation(self) -> By {
        match self {
            Divisor::Trials => By::Approximation("normal score test, variance by N"),
            Divisor::TrialsLessOne => By::Approximation("normal score test, variance by N - 1"),
        }
    }
}

/// The events, trials and scores, or why they cannot be judged.
fn shares(series: &Series, parameters: &Parameters) -> Result<Shares, Refusal> {
    if series.scale != Scale::Numeric {
        return Err(Refusal::Scale { test: CochranArmitage::CARD.title, needs: "counts of events", are: "words" });
    }
    let Some(trials) = &parameters.trials.cells else {
        return Err(Refusal::Because("trials: the number of trials at each moment is needed beside the events".into()));
    };
    let scores = scores(series, &parameters.scores, parameters.score_by)?;
    let shares = Shares::of(series, trials, |reading| scores[reading]).map_err(|error| Refusal::Because(error.to_string()))?;
    let differ = shares.rows.windows(2).any(|pair| pair[0].score != pair[1].score);
    if !differ {
        return Err(Refusal::Because("a trend needs trials at two moments with different scores".into()));
    }
    if shares.events() == 0 || shares.events() == shares.trials() {
        let what = if shares.events() == 0 { "no trial" } else { "every trial" };
        return Err(Refusal::Because(format!("{what} had an event, so the shares do not differ")));
    }
    if !shares.spread().is_finite() {
        return Err(Refusal::Because("the scores are too large to compute with".into()));
    }
    Ok(shares)
}

/// The conditional null distribution of the total score, in whole steps of the scores.
struct Exact {
    null: Lattice,
    observed: i64,
    mean: f64,
    step: f64,
}

impl Exact {
    /// `None` where the exact p is not wanted or not feasible.
    fn of(shares: &Shares, p_by: PBy) -> Result<Option<Self>, Refusal> {
        let scores: Vec<f64> = shares.rows.iter().map(|row| row.score).collect();
        let Some(Steps { above_lowest, size }) = whole_steps(&scores).filter(|_| p_by != PBy::Normal) else {
            return if p_by == PBy::Exact { Err(Refusal::Because(NO_COMMON_STEP.into())) } else { Ok(None) };
        };
        let trials: Vec<u64> = shares.rows.iter().map(|row| row.trials).collect();
        let effort = without_replacement_effort(shares.events(), &above_lowest, &trials);
        if !p_by.is_exact("products of chances", effort as usize, MOST_PRODUCTS as usize)? {
            return Ok(None);
        }
        let total = |count: &dyn Fn(&Share) -> f64| -> f64 {
            shares.rows.iter().zip(&above_lowest).map(|(row, &steps)| count(row) * steps as f64).sum()
        };
        Ok(Some(Exact {
            null: without_replacement(shares.events(), &above_lowest, &trials),
            observed: total(&|row| row.events as f64) as i64,
            mean: total(&|row| row.trials as f64) * shares.overall(),
            step: size,
        }))
    }

    /// The odds ratio per unit of score under a linear logistic model, with its exact interval.
    fn odds_ratio_facts(&self, confidence: f64) -> [Fact; 3] {
        let tilted = Tilted::new(&self.null);
        let (low, high) = tilted.interval(self.observed, confidence);
        let ratio = |tilt: f64| Some((tilt / self.step).exp()).filter(|ratio| ratio.is_finite());
        [
            Fact::new("odds_ratio", "Odds ratio per unit of score", ratio(tilted.estimate(self.observed))),
            Fact::new("odds_ratio_low", "Odds ratio, lower limit", ratio(low)),
            Fact::new("odds_ratio_high", "Odds ratio, upper limit; none where blank", ratio(high)),
        ]
    }
}

/// How far the shares are from a straight line.
struct Departure {
    total: f64,
    departure: f64,
    freedom: usize,
}

impl Departure {
    fn of(shares: &Shares, trend: f64) -> Self {
        let total = shares.chi_square();
        Departure { total, departure: (total - trend).max(0.0), freedom: shares.rows.len() - 2 }
    }

    fn p(&self) -> Option<f64> {
        (self.freedom > 0).then(|| ChiSquare::new(self.freedom as u64).upper_tail(self.departure))
    }

    fn facts(&self) -> [Fact; 4] {
        [
            Fact::new("chi2_total", "Chi-square of the whole table", self.total),
            Fact::new("chi2_departure", "Chi-square for departure from a straight line", self.departure),
            Fact::new("df_departure", "Its degrees of freedom", self.freedom),
            Fact::new("p_departure", "p for departure from a straight line", self.p()),
        ]
    }
}

fn slope_facts(shares: &Shares, confidence: f64) -> [Fact; 3] {
    let (slope, error) = shares.slope();
    let reach = normal::upper_quantile((1.0 - confidence) / 2.0) * error;
    let known = error > 0.0;
    [
        Fact::new("slope", "Change of the share per unit of score", slope),
        Fact::new("slope_low", "Change of the share, lower limit", known.then_some(slope - reach)),
        Fact::new("slope_high", "Change of the share, upper limit", known.then_some(slope + reach)),
    ]
}

fn table(shares: &Shares, series: &Series) -> Table {
    let columns = [
        ("moment", "Moment"),
        ("score", "Score"),
        ("events", "Events"),
        ("trials", "Trials"),
        ("share", "Share"),
        ("expected", "Events expected without a trend"),
    ];
    let rows = shares.rows.iter().map(|row| -> Vec<Datum> {
        vec![
            series.moments.label(row.reading).into(),
            row.score.into(),
            row.events.into(),
            row.trials.into(),
            row.value().into(),
            (row.trials as f64 * shares.overall()).into(),
        ]
    });
    Table {
        caption: "Events among trials at each moment".into(),
        rows: rows.collect(),
        columns: columns.map(|(key, label)| Column { key, label }).to_vec(),
    }
}

fn cautions(shares: &Shares, series: &Series, departure: &Departure, question: &Question, by: By) -> Vec<String> {
    let mut cautions = Vec::new();
    let missing = series.len() - series.count_present();
    if missing + shares.without_trials > 0 {
        cautions.push(format!("{} moments without a reading or without trials were left out.", missing + shares.without_trials));
    }
    if let Some(p) = departure.p().filter(|p| question.allows(*p)) {
        cautions.push(format!(
            "The shares depart from a straight line (p = {p:.2e}): they may bend, or scatter more than independent trials would, and then p is too small."
        ));
    }
    let rarer = shares.overall().min(1.0 - shares.overall());
    if by != By::Exact && shares.rows.iter().any(|row| row.trials as f64 * rarer < 5.0) {
        cautions
            .push("At some moments fewer than 5 events or non-events are expected; the normal approximation is rough.".into());
    }
    cautions
}
