//! The Laplace test for a trend in the rate of events of one item.
//!
//! An item is observed from time 0 to time T: a pump and its failures, a site and its incidents. If the rate of events is
//! constant, then, given how many there are, their times are spread evenly over (0, T). The statistic U compares the mean
//! time of the m events with the midpoint T/2: U = (mean - T/2) / (T / sqrt(12 m)). Late events, a positive U, mean that the
//! rate rises. The sum of the times over T is a sum of m uniform variables, from which p is exact.
//!
//! # Choices
//! With `end`, observation stopped at that time, whether or not an event happened then (time-truncated), and all events
//! count. Without, it stopped with the last event (failure-truncated), which then is T, and m is one less.
//!
//! # Which way is which
//! `rising` means that events come more often: deterioration of a repairable item. `falling` means that they come less
//! often: improvement.
//!
//! # Effect
//! The growth g of a rate of the form exp(a + g t), against which the test is uniformly most powerful, with the interval
//! that inverts the test's normal form, and the ratio of the rates at T and at 0.
//!
//! # When another test fits better
//! A rate that follows a power of time: `military-handbook`. Gaps with an unknown distribution other than the
//! exponential: `reverse-arrangements`. Counts a month: `poisson-trend`.

use super::choices::ReadingsAre;
use super::declaration::Proportion;
use super::question::PBy;
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::{Events, Truncation};
use crate::null_distribution::sum_of_uniforms::{self, MOST_UNIFORMS};
use crate::null_distribution::{Attained, By, Tails, crossing, normal, truncated_exponential};
use crate::reading::{Scale, Series};

crate::parameters! {
    /// What the Laplace test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// What the readings are: times of events since the start of observation, or gaps between events.
        readings_are: ReadingsAre = ReadingsAre::Times,
        /// The end of observation, in the same unit as the readings; if it is not sent, observation ended with the last event.
        end: Option<f64> = None,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// Confidence of the interval around the growth of the rate.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct Laplace;

impl Method for Laplace {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "laplace",
        title: "Laplace test for a trend in the rate of events",
        question: "Do events come more often, or less often, as time goes on?",
        null_hypothesis: "Events happen at a constant rate, independently of each other (a homogeneous Poisson process).",
        claim: Claim::Trend,
        scale: ScaleNeeded::EventTimes,
        least_readings: 1,
        exact: "Up to 5,000 events.",
        assumes: &[
            "All events of one item were recorded from the start to the end of observation.",
            "Without a trend the gaps between events are independent and exponential.",
            "Seek and risk were declared before looking, and the events are judged once.",
        ],
        ties: "Events at the same time each count; they need no special treatment.",
        missing: "A blank among times is no event. A missing gap is refused, since later events would have no time. A last gap such as >120 was still open when observation ended; other limits are refused.",
        cost: "n squared within the exact range, else n",
        fits_better: &[
            ("military-handbook", "the rate is thought to follow a power of time, as in reliability growth"),
            ("reverse-arrangements", "the gaps are not exponential, or only their order is trusted"),
            ("poisson-trend", "only the number of events in each period is known"),
        ],
        sources: &[
            Source {
                authors: "D. R. Cox and P. A. W. Lewis",
                year: 1966,
                title: "The Statistical Analysis of Series of Events",
                place: "Methuen, section 3.3",
            },
            Source {
                authors: "H. Ascher and H. Feingold",
                year: 1984,
                title: "Repairable Systems Reliability",
                place: "Marcel Dekker, chapter 5",
            },
            Source { authors: "NIST/SEMATECH", year: 2012, title: "e-Handbook of Statistical Methods", place: "section 8.2.3.4" },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let events = events(series, parameters)?;
        let free = events.free_times();
        let m = free.len();
        let sum: f64 = free.iter().map(|time| time / events.end).sum();
        let below_top: f64 = free.iter().map(|time| (events.end - time) / events.end).sum();
        let deviation = free.iter().map(|time| (time - events.end / 2.0) / events.end).sum::<f64>();
        let variance = m as f64 / 12.0;
        let u = deviation / variance.sqrt();
        let attained = if parameters.p_by.is_exact("events", m, MOST_UNIFORMS)? {
            let never = Tails { lower: 0.0, upper: 0.0 };
            Attained::doubled(sum_of_uniforms::tails(m, sum, below_top), never, By::Exact)
        } else {
            let range = (-(m as f64) / 2.0, m as f64 / 2.0);
            Attained::normal(deviation, range, variance, 0.0, By::Approximation("normal"))
        };
        let (p, smallest) = question.judge(&attained);
        let mut facts = vec![
            Fact::new("events", "Events", events.times.len()),
            Fact::new("events_used", "Events whose time is left to chance", m),
            Fact::new("end", "End of observation", events.end),
            Fact::new("ended_by", "What ended the observation", events.truncation.word()),
            Fact::new("mean_time", "Mean time of these events", sum / m as f64 * events.end),
            Fact::new("midpoint", "Middle of the observation", events.end / 2.0),
            Fact::new("u", "Laplace statistic", u),
        ];
        facts.extend(question.p_facts(&attained));
        facts.extend(growth_facts(sum / m as f64, m, events.end, parameters.confidence.0));
        Ok(Outcome {
            statistic: Statistic { name: "U", value: u },
            p,
            direction: Direction::of(u),
            smallest_p: Some(smallest),
            readings_used: events.times.len(),
            facts,
            evidence: vec![Evidence::Table(table(&events, series))],
            cautions: cautions(&events, m, attained.by),
        })
    }
}

/// The events, or why there is nothing to judge.
fn events(series: &Series, parameters: &Parameters) -> Result<Events, Refusal> {
    if series.scale != Scale::Numeric {
        return Err(Refusal::Scale { test: Laplace::CARD.title, needs: "times of events", are: "words" });
    }
    let events = parameters.readings_are.events(series, parameters.end)?;
    if events.free_times().is_empty() {
        let need = if events.truncation == Truncation::Failure { 2 } else { 1 };
        return Err(Refusal::TooFewReadings { have: events.times.len(), need });
    }
    Ok(events)
}

/// The growth of an exponentially growing rate: the mean time gives the estimate, the normal form of the test its limits.
fn growth_facts(mean: f64, m: usize, end: f64, confidence: f64) -> [Fact; 5] {
    let reach = normal::upper_quantile((1.0 - confidence) / 2.0);
    let solve = |shift: f64| {
        crossing::of_rising(1.0, 1e6, |growth| {
            let (expected, variance) = truncated_exponential::moments(growth);
            (expected - mean) / (variance / m as f64).sqrt() + shift
        })
    };
    let (growth, low, high) = (solve(0.0), solve(reach), solve(-reach));
    let known = |number: f64| Some(number).filter(|number| number.is_finite());
    [
        Fact::new("growth", "Growth g of a rate exp(a + g t), per unit of time", known(growth / end)),
        Fact::new("growth_low", "Growth, lower limit (approximate); none where blank", known(low / end)),
        Fact::new("growth_high", "Growth, upper limit (approximate); none where blank", known(high / end)),
        Fact::new("rate_ratio", "Rate at the end over rate at the start", known(growth.exp())),
        Fact::new("rate_at_end", "Events per unit of time at the end, with this growth", known(rate_at_end(growth, m) / end)),
    ]
}

/// The rate at the end, in events per whole observation, if m events follow a growing rate.
fn rate_at_end(growth: f64, m: usize) -> f64 {
    if growth.abs() < 1e-12 { m as f64 } else { m as f64 * growth / -(-growth).exp_m1() }
}

fn table(events: &Events, series: &Series) -> Table {
    let columns = [
        ("event", "Event"),
        ("moment", "Its moment"),
        ("time", "Time"),
        ("gap", "Gap before it"),
        ("part", "Part of the observation"),
    ];
    let rows = events.times.iter().zip(&events.gaps).zip(&events.readings).enumerate();
    let rows = rows.map(|(event, ((&time, &gap), &reading))| -> Vec<Datum> {
        vec![(event + 1).into(), series.moments.label(reading).into(), time.into(), gap.into(), (time / events.end).into()]
    });
    Table {
        caption: "Events in the order in which they happened".into(),
        rows: rows.collect(),
        columns: columns.map(|(key, label)| Column { key, label }).to_vec(),
    }
}

fn cautions(events: &Events, m: usize, by: By) -> Vec<String> {
    let mut cautions = Vec::new();
    if events.truncation == Truncation::Failure {
        cautions.push("No end of observation was stated, so the last event is taken to have ended it.".into());
    }
    if by != By::Exact && m < 4 {
        cautions.push("There are fewer than 4 events; the normal approximation is rough.".into());
    }
    cautions
}
