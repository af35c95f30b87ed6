//! The trend test of the military handbook on reliability growth, for the rate of events of one item.
//!
//! An item is observed from time 0 to time T. If the rate of events is constant, then twice the sum of ln(T / t) over the m
//! event times follows the chi-square distribution with 2 m degrees of freedom, exactly. Late events make it small, which
//! means that the rate rises.
//!
//! # Choices
//! With `end`, observation stopped at that time (time-truncated), and all n events count: m = n. Without, it stopped with
//! the last event (failure-truncated), which then is T, and m = n - 1.
//!
//! # Which way is which
//! `rising` means that events come more often: deterioration of a repairable item; it is the lower tail of the chi-square.
//! `falling` means that they come less often: improvement.
//!
//! # Effect
//! The shape b of a rate proportional to t^(b - 1), against which the test is uniformly most powerful: above 1 the rate
//! rises, below 1 it falls. Its maximum-likelihood estimate is n over the sum of logarithms; the interval is exact, since
//! chi-square times b does not depend on b.
//!
//! # When another test fits better
//! The test weighs early events heavily: one event soon after the start has a large logarithm. Where the start is not the
//! item's birth, or times near 0 are uncertain, `laplace` fits better; where gaps are not exponential,
//! `reverse-arrangements`.

use super::choices::ReadingsAre;
use super::declaration::Proportion;
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::{Events, Truncation};
use crate::null_distribution::{Attained, By, ChiSquare, Tails};
use crate::reading::{Scale, Series};

crate::parameters! {
    /// What the military handbook test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// What the readings are: times of events since the start of observation, or gaps between events.
        readings_are: ReadingsAre = ReadingsAre::Times,
        /// The end of observation, in the same unit as the readings; if it is not sent, observation ended with the last event.
        end: Option<f64> = None,
        /// Confidence of the interval around the shape.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct MilitaryHandbook;

impl Method for MilitaryHandbook {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "military-handbook",
        title: "Military handbook test for a trend in the rate of events",
        question: "Do events come more often, or less often, as time goes on, as a power of time?",
        null_hypothesis: "Events happen at a constant rate, independently of each other (a homogeneous Poisson process).",
        claim: Claim::Trend,
        scale: ScaleNeeded::EventTimes,
        least_readings: 1,
        exact: "Always.",
        assumes: &[
            "All events of one item were recorded from the start to the end of observation.",
            "Time 0 is where the item's life, or its development, began.",
            "Without a trend the gaps between events are independent and exponential.",
            "Seek and risk were declared before looking, and the events are judged once.",
        ],
        ties: "Events at the same time each count; they need no special treatment. An event at time 0 is refused.",
        missing: "A blank among times is no event. A missing gap is refused, since later events would have no time. A last gap such as >120 was still open when observation ended; other limits are refused.",
        cost: "n",
        fits_better: &[
            ("laplace", "the rate is thought to grow exponentially, or early times are uncertain"),
            ("reverse-arrangements", "the gaps are not exponential, or only their order is trusted"),
            ("poisson-trend", "only the number of events in each period is known"),
        ],
        sources: &[
            Source {
                authors: "United States Department of Defense",
                year: 1981,
                title: "MIL-HDBK-189, Reliability Growth Management",
                place: "appendix C",
            },
            Source {
                authors: "L. H. Crow",
                year: 1974,
                title: "Reliability analysis for complex, repairable systems",
                place: "in: Reliability and Biometry, SIAM, 379-410",
            },
            Source { authors: "NIST/SEMATECH", year: 2012, title: "e-Handbook of Statistical Methods", place: "section 8.2.3.4" },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let events = events(series, parameters)?;
        let free = events.free_times();
        let statistic = 2.0 * free.iter().map(|time| log_ratio(events.end, *time)).sum::<f64>();
        let freedom = 2 * free.len() as u64;
        let null = ChiSquare::new(freedom);
        let chi_square = null.tails(statistic);
        let never = Tails { lower: 0.0, upper: 0.0 };
        let attained = Attained::doubled(Tails { lower: chi_square.upper, upper: chi_square.lower }, never, By::Exact);
        let (p, smallest) = question.judge(&attained);
        let shape = Shape { statistic, null, events: events.times.len() as f64 };
        let mut facts = vec![
            Fact::new("events", "Events", events.times.len()),
            Fact::new("events_used", "Events whose time is left to chance", free.len()),
            Fact::new("end", "End of observation", events.end),
            Fact::new("ended_by", "What ended the observation", events.truncation.word()),
            Fact::new("chi2", "Chi-square", statistic),
            Fact::new("df", "Degrees of freedom", freedom),
        ];
        facts.extend(question.p_facts(&attained));
        facts.extend(shape.facts(&events, parameters.confidence.0));
        Ok(Outcome {
            statistic: Statistic { name: "chi-square", value: statistic },
            p,
            direction: Direction::of(chi_square.upper - chi_square.lower),
            smallest_p: Some(smallest),
            readings_used: events.times.len(),
            facts,
            evidence: vec![Evidence::Table(table(&events, series))],
            cautions: cautions(&events),
        })
    }
}

/// ln(end / time), with its digits kept when the time is near the end.
fn log_ratio(end: f64, time: f64) -> f64 {
    ((end - time) / time).ln_1p()
}

/// The events, or why there is nothing to judge.
fn events(series: &Series, parameters: &Parameters) -> Result<Events, Refusal> {
    if series.scale != Scale::Numeric {
        return Err(Refusal::Scale { test: MilitaryHandbook::CARD.title, needs: "times of events", are: "words" });
    }
    let events = parameters.readings_are.events(series, parameters.end)?;
    if events.free_times().is_empty() {
        let need = if events.truncation == Truncation::Failure { 2 } else { 1 };
        return Err(Refusal::TooFewReadings { have: events.times.len(), need });
    }
    if let Some(place) = events.times.iter().position(|&time| !log_ratio(events.end, time).is_finite()) {
        let position = events.readings.get(place).map_or(0, |reading| reading + 1);
        return Err(Refusal::Because(format!(
            "reading {position} is an event at time 0, whose logarithm is infinite; record how long after the start it was, or use laplace"
        )));
    }
    Ok(events)
}

/// The shape b of a rate proportional to t^(b - 1).
struct Shape {
    statistic: f64,
    null: ChiSquare,
    events: f64,
}

impl Shape {
    fn facts(&self, events: &Events, confidence: f64) -> [Fact; 5] {
        let tail = (1.0 - confidence) / 2.0;
        let known = |number: f64| Some(number).filter(|number| number.is_finite());
        let estimate = 2.0 * self.events / self.statistic;
        let limit = |p: f64| known(self.null.lower_quantile(p) / self.statistic);
        [
            Fact::new("shape", "Shape b of a rate proportional to t^(b - 1)", known(estimate)),
            Fact::new("shape_low", "Shape, lower limit (exact)", limit(tail)),
            Fact::new("shape_high", "Shape, upper limit (exact)", limit(1.0 - tail)),
            Fact::new(
                "rate_at_end",
                "Events per unit of time at the end, with this shape",
                known(self.events * estimate / events.end),
            ),
            Fact::new(
                "gap_at_end",
                "Mean gap between events at the end, with this shape",
                known(events.end / self.events / estimate),
            ),
        ]
    }
}

fn table(events: &Events, series: &Series) -> Table {
    let columns = [
        ("event", "Event"),
        ("moment", "Its moment"),
        ("time", "Time"),
        ("gap", "Gap before it"),
        ("log_ratio", "ln(end / time)"),
    ];
    let rows = events.times.iter().zip(&events.gaps).zip(&events.readings).enumerate();
    let rows = rows.map(|(event, ((&time, &gap), &reading))| -> Vec<Datum> {
        let log_ratio = log_ratio(events.end, time);
        vec![(event + 1).into(), series.moments.label(reading).into(), time.into(), gap.into(), log_ratio.into()]
    });
    Table {
        caption: "Events in the order in which they happened".into(),
        rows: rows.collect(),
        columns: columns.map(|(key, label)| Column { key, label }).to_vec(),
    }
}

fn cautions(events: &Events) -> Vec<String> {
    let mut cautions = Vec::new();
    if events.truncation == Truncation::Failure {
        cautions.push("No end of observation was stated, so the last event is taken to have ended it.".into());
    }
    if events.times.first().is_some_and(|&first| first < events.end * 0.001) {
        cautions.push(
            "The first event came within a thousandth of the observation; it weighs heavily, and an error in its time would too."
                .into(),
        );
    }
    cautions
}
