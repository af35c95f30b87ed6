//! Pettitt's test for a change of level at an unknown moment.
//!
//! U after k readings is the number of pairs of one of them and one of the later ones in which the earlier is higher, less the
//! number in which it is lower. If the level rose at some moment, U is lowest there; if it fell, U is highest there. K is
//! the largest distance of U from 0, and the moment where it is reached is where the change fits best.
//!
//! # What is sought
//! With `seek=rising` only a change to a higher level counts (the largest -U), with `seek=falling` only one to a lower level
//! (the largest U). What is claimed is a change of level, not a trend.
//!
//! # Choices of p
//! `exact` counts all arrangements of these very readings, ties among them, by following which ranks have been taken: 2^n sets
//! without ties, far fewer with many ties. `approximation` is the published 2 exp(-6K²/(n³ + n²)), for one direction
//! exp(-6K²/(n³ + n²)). For small K it exceeds 1 and is cut there; it is too large for few readings (by a factor of 2 to 5 for
//! 8), and gets better as readings are added. `best` is exact where that is feasible.
//!
//! # Effect
//! The medians before and after the moment that fits best, and their difference. Because the moment was picked for its
//! difference, the difference is too large on average, and no honest interval for it is known.
//!
//! # When another test fits better
//! A steady drift also makes this test claim a change: look at the chart, and prefer `mann-kendall` for a drift. Readings from
//! a normal distribution: `normal-homogeneity` (changes near the ends) or `buishand-range` (changes near the middle) find
//! smaller changes. Readings that remember their predecessor make the test claim changes that are not there.
//!
//! # Source
//! A. N. Pettitt (1979), A non-parametric approach to the change-point problem, *Applied Statistics* 28, 126-135, sections 2
//! and 3 (the statistic and its approximate p).

use super::change::{Change, direction, sought};
use super::{Card, Claim, Column, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Seek, Source, Statistic};
use crate::comparison::median::median;
use crate::comparison::midranks::{Classes, classes, doubled_midranks};
use crate::null_distribution::rank_walk::{Barriers, MOST_STATES, states, strays, walk};
use crate::null_distribution::{Attained, By, Tails};
use crate::reading::{Series, Value};

crate::choices! {
    /// Which form of the p-value is wanted.
    pub enum PBy {
        /// Exact where feasible, else the published approximation; the reply says which.
        Best = "best",
        /// Exact, or a refusal that states the largest size.
        Exact = "exact",
        /// The published approximation, cut at 1.
        Approximation = "approximation",
    }
}

crate::parameters! {
    /// What Pettitt's test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
    }
}

/// The test itself.
pub struct Pettitt;

const APPROXIMATION: By = By::Approximation("Pettitt's approximation");

impl Method for Pettitt {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "pettitt",
        title: "Pettitt's test for a change of level",
        question: "Did the level change at some moment, and when?",
        null_hypothesis: "Every order of the readings is equally probable, so that no moment separates a lower from a higher level.",
        claim: Claim::Change,
        scale: ScaleNeeded::Ordered,
        least_readings: 2,
        exact: "Up to 262,144 sets of taken ranks: 18 readings without ties, 180 in three grades, or 50 in five; fewer with more distinct values.",
        assumes: &[
            "Apart from one change of level, the readings are independent and come from one distribution.",
            "Readings can be ordered; their differences need not mean anything.",
            "There is no drift; a steady drift is claimed as a change too.",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Equal readings share the mean of their ranks; the exact null distribution has the same ties. The approximation does not allow for them.",
        missing: "Gaps are closed up. A limit such as <0.5 is ranked by the readings to which its order is certain, and counts half for each of the others.",
        cost: "n log n beyond the exact range",
        fits_better: &[
            ("mann-kendall", "the readings drift rather than jump"),
            ("buishand-range", "the readings are measured and about normal, and the change may be near the middle"),
        ],
        sources: &[Source {
            authors: "A. N. Pettitt",
            year: 1979,
            title: "A non-parametric approach to the change-point problem",
            place: "Applied Statistics 28, 126-135, sections 2 and 3",
        }],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let (indices, values): (Vec<usize>, Vec<Value>) = series.present().unzip();
        let ranks = doubled_midranks(&values);
        let classes = classes(&ranks);
        if classes.len() < 2 {
            return Err(Refusal::AllTied { compared: ranks.len() });
        }
        let reached = Barriers::reached_by(&ranks);
        let attained = attained(&ranks, &classes, reached, parameters.p_by)?;
        let (p, smallest) = question.judge(&attained);
        let u: Vec<f64> = walk(&ranks).into_iter().map(|position| position as f64).collect();
        let change = Change::at_largest(series, &indices, &sought(question.seek, &u));
        let k = match question.seek {
            Seek::Either => reached.either,
            Seek::Rising => reached.down,
            Seek::Falling => reached.up,
        };
        let approximate = approximate(ranks.len(), k, question.seek);
        let mut facts = vec![
            Fact::new("k", "K: largest distance of U from 0", reached.either),
            Fact::new("k_rising", "Largest distance of U below 0, for a change to a higher level", reached.down),
            Fact::new("k_falling", "Largest distance of U above 0, for a change to a lower level", reached.up),
        ];
        facts.extend(change.facts("median", |values| median(values.iter().copied())));
        facts.extend(question.p_facts(&attained));
        facts.push(Fact::new("approximation", "The published approximation of p, before it is cut at 1", approximate));
        let mut cautions = change.cautions();
        if attained.by == APPROXIMATION && approximate > 1.0 {
            cautions.push("The published approximation exceeds 1 for so small a K; p was cut at 1.".into());
        }
        if attained.by == APPROXIMATION && classes.len() < ranks.len() {
            cautions.push("Some readings are equal, for which the published approximation does not allow.".into());
        }
        if values.iter().any(|value| value.is_censored()) {
            cautions.push(
                "Some readings are known only as limits; each counts half for readings to which its order is not certain.".into(),
            );
        }
        Ok(Outcome {
            statistic: Statistic { name: "K", value: k as f64 },
            p,
            direction: direction(reached.down as f64, reached.up as f64),
            smallest_p: Some(smallest),
            readings_used: ranks.len(),
            facts,
            evidence: vec![Evidence::Table(change.table(
                "U after each reading",
                Column { key: "u", label: "U after this reading" },
                &u,
            ))],
            cautions,
        })
    }
}

fn attained(ranks: &[u64], classes: &Classes, reached: Barriers, p_by: PBy) -> Result<Attained, Refusal> {
    let mut sorted = ranks.to_vec();
    sorted.sort_unstable();
    let rising = Barriers::reached_by(&sorted);
    let farthest = Barriers { up: rising.down, ..rising };
    let states = states(classes).unwrap_or(usize::MAX);
    let exact = match p_by {
        PBy::Approximation => false,
        PBy::Exact if states > MOST_STATES => {
            let what = "sets of taken ranks (18 readings without ties)";
            return Err(Refusal::BeyondExact { what, have: states, most: MOST_STATES });
        }
        PBy::Best | PBy::Exact => states <= MOST_STATES,
    };
    let tails = |barriers: Barriers| {
        if exact {
            let strays = strays(classes, barriers);
            return (Tails { upper: strays.down, lower: strays.up }, strays.either);
        }
        let cut = |k, seek| approximate(ranks.len(), k, seek).min(1.0);
        let tails = Tails { upper: cut(barriers.down, Seek::Rising), lower: cut(barriers.up, Seek::Falling) };
        (tails, cut(barriers.either, Seek::Either))
    };
    let ((tails, either), (extremes, least_either)) = (tails(reached), tails(farthest));
    Ok(Attained { tails, either, extremes, least_either, by: if exact { By::Exact } else { APPROXIMATION } })
}

/// The published approximation, not yet cut at 1.
fn approximate(readings: usize, k: i64, seek: Seek) -> f64 {
    let (n, k) = (readings as f64, k as f64);
    let one_side = (-6.0 * k * k / (n * n * n + n * n)).exp();
    if seek == Seek::Either { 2.0 * one_side } else { one_side }
}
