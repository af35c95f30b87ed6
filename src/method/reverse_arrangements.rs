//! The reverse arrangements test for a trend in the gaps between events of one item.
//!
//! R counts the pairs of gaps of which the later one is longer (a reversal, as reliability handbooks have it). If the gaps
//! come in no order, all orders of them are equally probable, whatever the distribution of gaps: R follows the null
//! distribution of Kendall's S, exactly. Many reversals mean that gaps grow, so that events come less often.
//!
//! # Which way is which
//! `rising` means that events come more often (few reversals): deterioration of a repairable item. `falling` means that
//! they come less often (many reversals): improvement.
//!
//! # Choices
//! Tied gaps stay ties (default): R less the contrary pairs is referred to all orders of gaps tied in the same way. Or they
//! count against the direction sought, and handbook tables for gaps without ties apply.
//!
//! # Effect
//! Kendall's tau between the gaps and their order, minus 1 to 1, negative where gaps shorten, with the interval of Hollander
//! and Wolfe (1999), section 8.3, for at least four gaps.
//!
//! # When another test fits better
//! Exponential gaps: `laplace` and `military-handbook` find trends sooner and use the open gap at the end.

use super::choices::ReadingsAre;
use super::declaration::Proportion;
use super::question::PBy;
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::order::later_higher;
use crate::comparison::{Events, Order};
use crate::null_distribution::q_multinomial::{MOST_ADDITIONS, effort, rises_less_falls};
use crate::null_distribution::{Attained, By, Tails, normal};
use crate::reading::{Scale, Series};

crate::choices! {
    /// What becomes of tied gaps.
    pub enum Ties {
        /// They stay ties, and the null distribution is that of gaps tied in the same way.
        Keep = "keep",
        /// They count against the direction sought, and the null distribution is that of gaps without ties, as in handbook tables.
        Against = "against",
    }
}

crate::parameters! {
    /// What the reverse arrangements test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// What the readings are: times of events since the start of observation, or gaps between events.
        readings_are: ReadingsAre = ReadingsAre::Times,
        /// The end of observation, if it was not the last event. The test does not use the gap that was still open then.
        end: Option<f64> = None,
        /// What becomes of tied gaps: keep or against.
        ties: Ties = Ties::Keep,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// Confidence of the interval around tau.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct ReverseArrangements;

impl Method for ReverseArrangements {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "reverse-arrangements",
        title: "Reverse arrangements test for a trend in the gaps between events",
        question: "Do the gaps between events shorten, so that events come more often, or lengthen?",
        null_hypothesis: "The gaps between events are independent with one distribution, so that all their orders are equally probable.",
        claim: Claim::Trend,
        scale: ScaleNeeded::EventTimes,
        least_readings: 2,
        exact: "Up to 1,000 gaps without ties; fewer with large groups of ties, 350 in two halves.",
        assumes: &[
            "All events of one item were recorded from the start of observation.",
            "The gaps are independent of each other; their distribution may be any.",
            "Seek and risk were declared before looking, and the events are judged once.",
        ],
        ties: "Tied gaps stay ties, with an exact null distribution that has the same ties, or count against the direction sought.",
        missing: "A blank among times is no event. A missing gap is refused, since its place in the order would be lost. A last gap such as >120 was still open and is not used; other limits are refused.",
        cost: "n cubed within the exact range, else n log n",
        fits_better: &[
            ("laplace", "gaps without a trend are exponential, and the rate is thought to grow exponentially"),
            ("military-handbook", "gaps without a trend are exponential, and the rate is thought to follow a power of time"),
        ],
        sources: &[
            Source {
                authors: "M. G. Kendall",
                year: 1975,
                title: "Rank Correlation Methods, 4th edition",
                place: "Griffin, chapters 4 and 5",
            },
            Source { authors: "NIST/SEMATECH", year: 2012, title: "e-Handbook of Statistical Methods", place: "section 8.2.3.4" },
            Source {
                authors: "M. Hollander and D. A. Wolfe",
                year: 1999,
                title: "Nonparametric Statistical Methods, 2nd edition",
                place: "Wiley, section 8.3",
            },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        if series.scale != Scale::Numeric {
            return Err(Refusal::Scale { test: Self::CARD.title, needs: "times of events", are: "words" });
        }
        let events = parameters.readings_are.events(series, parameters.end)?;
        let n = events.gaps.len();
        if n < 2 {
            return Err(Refusal::TooFewReadings { have: n, need: 2 });
        }
        let gaps = Gaps::of(events);
        if gaps.ties == gaps.pairs() {
            return Err(Refusal::AllTied { compared: gaps.pairs() as usize });
        }
        let attained = gaps.attained(parameters)?;
        let (p, smallest) = question.judge(&attained);
        let z = gaps.excess() as f64 / gaps.variance_of_s(parameters.ties).sqrt();
        let mut facts = vec![
            Fact::new("gaps", "Gaps between events", n),
            Fact::new("reversals", "Reversals: pairs of gaps of which the later one is longer", gaps.reversals),
            Fact::new("shorter", "Pairs of gaps of which the later one is shorter", gaps.pairs() - gaps.reversals - gaps.ties),
            Fact::new("tied", "Tied pairs of gaps", gaps.ties),
            Fact::new("expected", "Reversals expected without a trend", (gaps.pairs() - gaps.ties) as f64 / 2.0),
            Fact::new("variance", "Variance of the reversals without a trend", gaps.variance_of_s(parameters.ties) / 4.0),
            Fact::new("z", "Reversals, standardised, without continuity correction", z),
        ];
        facts.extend(question.p_facts(&attained));
        facts.extend(gaps.tau_facts(parameters.confidence.0));
        Ok(Outcome {
            statistic: Statistic { name: "R", value: gaps.reversals as f64 },
            p,
            direction: Direction::of(-(gaps.excess() as f64)),
            smallest_p: Some(smallest),
            readings_used: n,
            facts,
            evidence: vec![Evidence::Table(gaps.table(series))],
            cautions: gaps.cautions(parameters.ties),
        })
    }
}

/// The gaps and how they compare.
struct Gaps {
    events: Events,
    order: Order,
    longer_later: Vec<u64>,
    reversals: u64,
    ties: u64,
}

impl Gaps {
    fn of(events: Events) -> Self {
        let order = Order::of_numbers(&events.gaps);
        let longer_later = later_higher(&order);
        Gaps { reversals: longer_later.iter().sum(), ties: order.tied_pairs(), events, order, longer_later }
    }

    fn pairs(&self) -> u64 {
        let n = self.events.gaps.len() as u64;
        n * (n - 1) / 2
    }

    /// Reversals less contrary pairs: Kendall's S.
    fn excess(&self) -> i64 {
        (2 * self.reversals + self.ties) as i64 - self.pairs() as i64
    }

    /// The variance of S: n (n - 1) (2 n + 5) / 18, less the same for each group of ties that are kept.
    fn variance_of_s(&self, ties: Ties) -> f64 {
        let term = |size: usize| (size * (size - 1)) as f64 * (2 * size + 5) as f64 / 18.0;
        let tied: f64 = self.order.sizes.iter().map(|&size| term(size)).sum();
        term(self.events.gaps.len()) - if ties == Ties::Keep { tied } else { 0.0 }
    }

    /// Upper tails are those of a rising rate, which is few reversals.
    fn attained(&self, parameters: &Parameters) -> Result<Attained, Refusal> {
        let n = self.events.gaps.len();
        let sizes = match parameters.ties {
            Ties::Keep => self.order.sizes.clone(),
            Ties::Against => vec![1; n],
        };
        let (pairs, tied) = (self.pairs() as i64, self.ties as i64);
        let (for_longer, for_shorter) = match parameters.ties {
            Ties::Keep => (self.excess(), self.excess()),
            Ties::Against => (self.excess() - tied, self.excess() + tied),
        };
        let exact = parameters.p_by.is_exact("additions", effort(&sizes) as usize, MOST_ADDITIONS as usize)?;
        let (longer, shorter, extremes, by) = if exact {
            let null = rises_less_falls(&sizes);
            (null.tails(for_longer).upper, null.tails(for_shorter).lower, null.extremes(), By::Exact)
        } else {
            let variance = self.variance_of_s(parameters.ties);
            let tails = |s: i64| normal::corrected_tails(s as f64, 0.0, variance, 2.0);
            let most = if parameters.ties == Ties::Keep { pairs - tied } else { pairs };
            let extremes = Tails { lower: tails(-most).lower, upper: tails(most).upper };
            (tails(for_longer).upper, tails(for_shorter).lower, extremes, By::NORMAL)
        };
        let of_rate = |longer: f64, shorter: f64| Tails { lower: longer, upper: shorter };
        Ok(Attained::doubled(of_rate(longer, shorter), of_rate(extremes.upper, extremes.lower), by))
    }

    /// Tau with the interval of Hollander and Wolfe, section 8.3: the variance comes from how the readings' own sums of
    /// signs scatter.
    fn tau_facts(&self, confidence: f64) -> [Fact; 3] {
        let n = self.events.gaps.len() as f64;
        let untied = (self.pairs() as f64 * (self.pairs() - self.ties) as f64).sqrt();
        let tau = self.excess() as f64 / untied;
        let sums = self.sums_of_signs();
        let mean = sums.iter().sum::<f64>() / n;
        let scatter: f64 = sums.iter().map(|sum| (sum - mean).powi(2)).sum();
        let variance = 2.0 / (n * (n - 1.0)) * (2.0 * (n - 2.0) / (n * (n - 1.0).powi(2)) * scatter + 1.0 - tau * tau);
        let reach = normal::upper_quantile((1.0 - confidence) / 2.0) * variance.max(0.0).sqrt();
        let known = n >= 4.0 && variance > 0.0;
        [
            Fact::new("tau", "Kendall's tau of the gaps with time", tau),
            Fact::new("tau_low", "Tau, lower limit (approximate)", known.then(|| (tau - reach).max(-1.0))),
            Fact::new("tau_high", "Tau, upper limit (approximate)", known.then(|| (tau + reach).min(1.0))),
        ]
    }

    /// For each gap, how many other gaps it agrees with in order and length, less how many it disagrees with.
    fn sums_of_signs(&self) -> Vec<f64> {
        let n = self.events.gaps.len();
        let longer_later = &self.longer_later;
        let mut backwards = self.order.clone();
        backwards.places.reverse();
        let longer_earlier: Vec<u64> = later_higher(&backwards).into_iter().rev().collect();
        let mut above = vec![0; self.order.sizes.len()];
        for place in (1..above.len()).rev() {
            above[place - 1] = above[place] + self.order.sizes[place] as u64;
        }
        let mut seen = vec![0; self.order.sizes.len()];
        (0..n)
            .map(|index| {
                let place = self.order.places[index];
                let tied_earlier: u64 = seen[place];
                seen[place] += 1;
                let tied_later = self.order.sizes[place] as u64 - 1 - tied_earlier;
                let shorter_later = (n - 1 - index) as u64 - longer_later[index] - tied_later;
                let shorter_earlier = index as u64 - longer_earlier[index] - tied_earlier;
                (longer_later[index] + shorter_earlier) as f64 - (shorter_later + longer_earlier[index]) as f64
            })
            .collect()
    }

    fn table(&self, series: &Series) -> Table {
        let columns = [
            ("event", "Event"),
            ("moment", "Its moment"),
            ("time", "Time"),
            ("gap", "Gap before it"),
            ("longer_later", "Later gaps that are longer"),
        ];
        let rows = self.events.readings.iter().enumerate().map(|(event, &reading)| -> Vec<Datum> {
            vec![
                (event + 1).into(),
                series.moments.label(reading).into(),
                self.events.times[event].into(),
                self.events.gaps[event].into(),
                self.longer_later[event].into(),
            ]
        });
        Table {
            caption: "Gaps between events, and how many later gaps are longer".into(),
            rows: rows.collect(),
            columns: columns.map(|(key, label)| Column { key, label }).to_vec(),
        }
    }

    fn cautions(&self, ties: Ties) -> Vec<String> {
        if self.ties == 0 {
            return Vec::new();
        }
        let treatment = match ties {
            Ties::Keep => "the null distribution has the same ties",
            Ties::Against => "they were counted against a trend",
        };
        vec![format!("{} of {} pairs of gaps are tied; {treatment}.", self.ties, self.pairs())]
    }
}
