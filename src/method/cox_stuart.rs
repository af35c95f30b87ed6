//! The Cox-Stuart sign test for trend.
//!
//! Of n readings in time order, each of the first half is compared with the reading c later, c being n/2, or (n+1)/2 for
//! odd n, whose middle reading stays out. Without a trend a rise is as probable as a fall, so the number T of rises among
//! the m untied pairs follows the fair binomial distribution. The size of the sign test is the number of comparisons.
//!
//! Variants of the 1955 paper: the last third against the first third (S3 there), and the sum of signs weighted by
//! distance (S1 there), whose exact null distribution counts the subsets of the weights.
//!
//! Where readings come in blocks, of several places, seasons or persons, pairs are made within each block and their signs
//! are counted together: the blocks' numbers of rises are independent binomials with the same chance, so their sum is one.
//!
//! # Which variant
//! Halves use all readings and are the usual form. Thirds compare readings that lie further apart: fewer pairs, but
//! each more telling. The weighted sum is the most powerful of the three against a steady drift.
//!
//! # Sources
//! D. R. Cox and A. Stuart (1955), Some quick sign tests for trend in location and dispersion, *Biometrika* 42, 80-95.
//! W. J. Conover (1999), *Practical Nonparametric Statistics*, 3rd ed., section 3.5.

use super::declaration::{Count, Proportion};
use super::question::PBy;
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Seek, Source,
    Statistic, Table,
};
use crate::comparison::pairs::{self, Pairings};
use crate::null_distribution::binomial::{Binomial, CarriedTail, exact_interval};
use crate::null_distribution::signed_weights::{MOST_WEIGHTS, SignedWeights};
use crate::null_distribution::{By, Tails, normal};
use crate::reading::{Blocks, Series};

crate::choices! {
    /// Which readings are compared.
    pub enum PairBy {
        /// The second half with the first half.
        Halves = "halves",
        /// The last third with the first third; the middle third stays out.
        Thirds = "thirds",
        /// The last reading with the first, the last but one with the second, and so on, each weighted by its distance.
        Weighted = "weighted",
    }
}

crate::choices! {
    /// How a third is rounded when n is not divisible by three.
    pub enum Rounding {
        /// Down: fewer pairs, further apart.
        Down = "down",
        /// Up: more pairs, nearer together.
        Up = "up",
    }
}

crate::choices! {
    /// What becomes of pairs whose readings are equal.
    pub enum Ties {
        /// They are left out, and the test has as many pairs fewer.
        Drop = "drop",
        /// They count as evidence against the direction sought; for either direction, against the stronger side.
        Against = "against",
        /// Half of each counts as a rise and half as a fall.
        Split = "split",
    }
}

crate::choices! {
    /// What becomes of missing readings.
    pub enum Gaps {
        /// The readings that are there close up before they are paired.
        Close = "close",
        /// Readings keep their places; a pair whose partner is missing falls out.
        Keep = "keep",
    }
}

crate::parameters! {
    /// What the Cox-Stuart test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Which readings are compared: halves, thirds, or the weighted sum of signs.
        pairs: PairBy = PairBy::Halves,
        /// For thirds: how a third is rounded when the number of readings is not divisible by three.
        third: Rounding = Rounding::Down,
        /// What becomes of pairs whose readings are equal.
        ties: Ties = Ties::Drop,
        /// What becomes of missing readings.
        gaps: Gaps = Gaps::Close,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// Confidence of the interval around the share of rises.
        confidence: Proportion = Proportion(0.95),
        /// The share of rises that should not be missed, as a number between 0 and 1 other than one half.
        notice: Proportion = Proportion(0.75),
        /// The chance with which that share should be noticed; it decides how many readings are advised.
        power: Proportion = Proportion(0.8),
        /// The most pairs that are considered when readings are advised.
        most_pairs: Count<10, 100_000> = Count(10_000),
    }
}

/// The test itself.
pub struct CoxStuart;

impl Method for CoxStuart {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "cox-stuart",
        title: "Cox-Stuart sign test for trend",
        question: "Are later readings mostly higher, or mostly lower, than earlier ones?",
        null_hypothesis: "In each pair of an earlier and a later reading, a rise is as probable as a fall, independently of the other pairs.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 2,
        exact: "Halves and thirds: always. Weighted: up to 1,000 untied pairs.",
        assumes: &[
            "The readings are independent of each other, apart from a trend; with blocks, also between blocks.",
            "Readings can be ordered; their differences need not mean anything.",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Equal pairs are dropped, counted against the direction sought, or split; how many there were is always said.",
        missing: "Gaps are closed before pairing, or kept so that incomplete pairs fall out. Limits such as <0.5 are compared where the order is certain and tie where it is not.",
        cost: "n; weighted: n cubed within the exact range",
        fits_better: &[
            ("page", "the same places or persons are read at every one of a few moments"),
            ("jonckheere-terpstra", "there are several independent readings at each moment"),
        ],
        sources: &[
            Source {
                authors: "D. R. Cox and A. Stuart",
                year: 1955,
                title: "Some quick sign tests for trend in location and dispersion",
                place: "Biometrika 42, 80-95",
            },
            Source {
                authors: "W. J. Conover",
                year: 1999,
                title: "Practical Nonparametric Statistics, 3rd edition",
                place: "Wiley, section 3.5",
            },
            Source {
                authors: "C. J. Clopper and E. S. Pearson",
                year: 1934,
                title: "The use of confidence or fiducial limits illustrated in the case of the binomial",
                place: "Biometrika 26, 404-413",
            },
        ],
        repeated_moments: false,
        blocks: true,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let pattern: pairs::Pattern = match (parameters.pairs, parameters.third) {
            (PairBy::Halves, _) => pairs::halves,
            (PairBy::Thirds, Rounding::Down) => pairs::thirds_down,
            (PairBy::Thirds, Rounding::Up) => pairs::thirds_up,
            (PairBy::Weighted, _) => pairs::weighted_ends,
        };
        let pairings = pairs::pair(series, pattern, parameters.gaps == Gaps::Close);
        let signs = Signs::of(&pairings);
        if pairings.list.is_empty() {
            return Err(no_pairs(series, parameters, &pairings));
        }
        if signs.rises + signs.falls == 0 {
            return Err(Refusal::AllTied { compared: pairings.list.len() });
        }
        let judged =
            if parameters.pairs == PairBy::Weighted { weighted(&pairings, parameters)? } else { unweighted(&signs, parameters) };
        let p = question.p(judged.tails, judged.by);
        let mut facts = vec![
            Fact::new("pairs", "Pairs compared", pairings.list.len()),
            Fact::new("rises", "Rises", signs.rises),
            Fact::new("falls", "Falls", signs.falls),
            Fact::new("ties", "Ties", signs.ties),
        ];
        let (low, high) = exact_interval(signs.rises, signs.rises + signs.falls, parameters.confidence.0);
        facts.extend([
            Fact::new(
                "share_of_rises",
                "Share of rises among untied pairs",
                signs.rises as f64 / (signs.rises + signs.falls) as f64,
            ),
            Fact::new("share_low", "Share of rises, lower limit", low),
            Fact::new("share_high", "Share of rises, upper limit", high),
            Fact::new("p_rising", "p if only a rise had been sought", judged.tails.upper),
            Fact::new("p_falling", "p if only a fall had been sought", judged.tails.lower),
            Fact::new("p_either", "p for either direction", judged.tails.doubled()),
            Fact::new("smallest_p", "Smallest p these pairs could have given", judged.smallest(question.seek)),
        ]);
        if parameters.pairs != PairBy::Weighted {
            facts.extend(planning(&signs, question, parameters));
        }
        let used = 2 * pairings.list.len();
        let cautions = cautions(&signs, &pairings, series, parameters);
        let by_block = series.blocks.as_ref().map(|blocks| by_block(&pairings, blocks));
        Ok(Outcome {
            statistic: Statistic { name: if parameters.pairs == PairBy::Weighted { "S" } else { "T" }, value: judged.statistic },
            p,
            direction: judged.direction,
            smallest_p: Some(judged.smallest(question.seek)),
            readings_used: used,
            facts,
            evidence: by_block.into_iter().map(Evidence::Table).chain([Evidence::Pairings(pairings)]).collect(),
            cautions,
        })
    }
}

/// How many pairs rise, fall and tie.
struct Signs {
    rises: u64,
    falls: u64,
    ties: u64,
}

impl Signs {
    fn of(pairings: &Pairings) -> Self {
        Signs { rises: pairings.count(1), falls: pairings.count(-1), ties: pairings.count(0) }
    }
}

/// The statistic with its tails under the null hypothesis.
struct Judged {
    statistic: f64,
    direction: Direction,
    tails: Tails,
    by: By,
    /// The chance of the most extreme outcome on one side.
    extreme: f64,
}

impl Judged {
    fn smallest(&self, seek: Seek) -> f64 {
        match seek {
            Seek::Either => (2.0 * self.extreme).min(1.0),
            Seek::Rising | Seek::Falling => self.extreme,
        }
    }
}

/// A sum of fair signs: its total weight, its variance, the step between its values, and its exact tails where feasible.
struct Null<'a> {
    total: f64,
    variance: f64,
    step: f64,
    extreme: f64,
    exact_tails: Option<Box<dyn Fn(u64) -> Tails + 'a>>,
}

impl Null<'_> {
    /// The tails of the rises' weight, with tied weight treated as asked for. All weights are whole numbers.
    fn judge(&self, rises: u64, falls: u64, ties: u64, treatment: Ties) -> Judged {
        let (for_upper, for_lower) = match treatment {
            Ties::Drop | Ties::Against => (rises, self.total as u64 - falls),
            Ties::Split => (rises + ties.div_ceil(2), rises + ties / 2),
        };
        let for_lower = if treatment == Ties::Drop { rises } else { for_lower };
        let tails_at = |statistic: u64| match &self.exact_tails {
            Some(exact) => exact(statistic),
            None => normal::corrected_tails(statistic as f64, self.total / 2.0, self.variance, self.step),
        };
        Judged {
            statistic: rises as f64 + if treatment == Ties::Split { ties as f64 / 2.0 } else { 0.0 },
            direction: match rises.cmp(&falls) {
                std::cmp::Ordering::Greater => Direction::Rising,
                std::cmp::Ordering::Less => Direction::Falling,
                std::cmp::Ordering::Equal => Direction::Neither,
            },
            tails: Tails { upper: tails_at(for_upper).upper, lower: tails_at(for_lower).lower },
            by: if self.exact_tails.is_some() { By::Exact } else { By::NORMAL },
            extreme: self.extreme,
        }
    }
}

fn unweighted(signs: &Signs, parameters: &Parameters) -> Judged {
    let trials = signs.rises + signs.falls + if parameters.ties == Ties::Drop { 0 } else { signs.ties };
    let null = Null {
        total: trials as f64,
        variance: trials as f64 / 4.0,
        step: 1.0,
        extreme: 0.5f64.powi(trials as i32),
        exact_tails: (parameters.p_by != PBy::Normal)
            .then(|| Box::new(move |rises| Binomial::fair(trials).tails(rises)) as Box<dyn Fn(u64) -> Tails>),
    };
    null.judge(signs.rises, signs.falls, signs.ties, parameters.ties)
}

fn weighted(pairings: &Pairings, parameters: &Parameters) -> Result<Judged, Refusal> {
    let counted = |sign: i8| parameters.ties != Ties::Drop || sign != 0;
    let weights: Vec<u32> = pairings.list.iter().filter(|pairing| counted(pairing.sign)).map(|pairing| pairing.weight).collect();
    let feasible = weights.len() <= MOST_WEIGHTS;
    if parameters.p_by == PBy::Exact && !feasible {
        return Err(Refusal::BeyondExact { what: "weighted pairs", have: weights.len(), most: MOST_WEIGHTS });
    }
    let exact = (feasible && parameters.p_by != PBy::Normal).then(|| SignedWeights::new(&weights));
    let total: u64 = weights.iter().map(|&weight| u64::from(weight)).sum();
    let null = Null {
        total: total as f64,
        variance: weights.iter().map(|&weight| f64::from(weight).powi(2)).sum::<f64>() / 4.0,
        step: if weights.iter().all(|weight| weight % 2 == 0) { 2.0 } else { 1.0 },
        extreme: 0.5f64.powi(weights.len() as i32),
        exact_tails: exact.map(|null| Box::new(move |sum| null.tails(sum)) as Box<dyn Fn(u64) -> Tails>),
    };
    Ok(null.judge(pairings.weight(1), pairings.weight(-1), pairings.weight(0), parameters.ties))
}

/// What would have reached the risk, what would have been noticed, and how many readings would notice it.
fn planning(signs: &Signs, question: &Question, parameters: &Parameters) -> Vec<Fact> {
    let trials = signs.rises + signs.falls + if parameters.ties == Ties::Drop { 0 } else { signs.ties };
    let side = match question.seek {
        Seek::Either => question.risk.0 / 2.0,
        Seek::Rising | Seek::Falling => question.risk.0,
    };
    let needed = least_to_reach(trials, side);
    let (key, label) = match question.seek {
        Seek::Rising => ("least_rises", "Least number of rises to reach the risk"),
        Seek::Falling => ("least_falls", "Least number of falls to reach the risk"),
        Seek::Either => ("least_alike", "Least number of rises, or of falls, to reach the risk"),
    };
    let share = if question.seek == Seek::Falling { 1.0 - parameters.notice.0 } else { parameters.notice.0 };
    let chance = needed.map_or(0.0, |needed| chance_of_as_many(needed, trials, share, question.seek));
    let pairs_advised = pairs_to_notice(share, side, question.seek, parameters.power.0, parameters.most_pairs.0.into());
    let readings_a_pair = if parameters.pairs == PairBy::Thirds { 3 } else { 2 };
    vec![
        Fact::new(key, label, needed),
        Fact::new("notice", "Share of rises that should not be missed", parameters.notice.0),
        Fact::new("chance_to_notice", "Chance that these pairs would have noticed it", chance),
        Fact::new(
            "readings_to_notice",
            "Readings that would notice it with the stated chance",
            pairs_advised.map(|pairs| pairs * readings_a_pair),
        ),
    ]
}

/// The least number of like signs among `trials` whose upper tail is at most `side`; `None` if all alike would not do.
pub fn least_to_reach(trials: u64, side: f64) -> Option<u64> {
    let null = Binomial::fair(trials);
    let (mut low, mut high) = (trials / 2, trials);
    if null.upper_tail(trials) > side {
        return None;
    }
    while low < high {
        let middle = low + (high - low) / 2;
        if null.upper_tail(middle) <= side { high = middle } else { low = middle + 1 }
    }
    Some(low)
}

/// The chance of at least `needed` like signs, of the sort that is sought, when each pair rises with chance `share`.
fn chance_of_as_many(needed: u64, trials: u64, share: f64, seek: Seek) -> f64 {
    let truth = Binomial::new(trials, share);
    match seek {
        Seek::Rising => truth.upper_tail(needed),
        Seek::Falling => truth.lower_tail(trials - needed),
        Seek::Either => truth.upper_tail(needed) + truth.lower_tail(trials - needed),
    }
}

/// How the pairs of each block compare.
fn by_block(pairings: &Pairings, blocks: &Blocks) -> Table {
    let mut counts = vec![[0_u64; 3]; blocks.count()];
    for pairing in &pairings.list {
        counts[blocks.block(pairing.earlier as usize)][(1 - pairing.sign) as usize] += 1;
    }
    let columns = [("block", "Block"), ("pairs", "Pairs compared"), ("rises", "Rises"), ("falls", "Falls"), ("ties", "Ties")];
    let rows = counts.iter().enumerate().map(|(block, &[rises, ties, falls])| -> Vec<Datum> {
        vec![blocks.label(block).into(), (rises + ties + falls).into(), rises.into(), falls.into(), ties.into()]
    });
    Table {
        caption: "Pairs within each block".into(),
        rows: rows.collect(),
        columns: columns.map(|(key, label)| Column { key, label }).to_vec(),
    }
}

/// The fewest pairs, at most `most`, that reach the risk with chance `power`.
///
/// With each pair the least number of like signs that reaches the risk stays or grows by one, so that the tails can be
/// carried from size to size.
fn pairs_to_notice(share: f64, side: f64, seek: Seek, power: f64, most: u64) -> Option<u64> {
    let first = (1..=most).find(|&pairs| 0.5f64.powi(pairs as i32) <= side)?;
    let [mut null, mut rises, mut falls] = [0.5, share, 1.0 - share].map(|share| CarriedTail::all(first, share));
    (first..=most).find(|&pairs| {
        for tail in [&mut null, &mut rises, &mut falls] {
            if pairs > first {
                tail.add_trial();
            }
        }
        if null.tail() > side {
            [&mut null, &mut rises, &mut falls].into_iter().for_each(CarriedTail::raise_count);
        }
        let chance = match seek {
            Seek::Rising => rises.tail(),
            Seek::Falling => falls.tail(),
            Seek::Either => rises.tail() + falls.tail(),
        };
        chance >= power
    })
}

fn no_pairs(series: &Series, parameters: &Parameters, pairings: &Pairings) -> Refusal {
    let have = series.count_present();
    if pairings.incomplete > 0 {
        return Refusal::Because(format!(
            "each of the {} pairs lacks a reading; with gaps=close the {have} readings that are there would be paired",
            pairings.incomplete
        ));
    }
    if let Some(blocks) = &series.blocks {
        return Refusal::Because(format!("none of the {} blocks has enough readings to make a pair", blocks.count()));
    }
    Refusal::TooFewReadings {
        have,
        need: if parameters.pairs == PairBy::Thirds && parameters.third == Rounding::Down { 3 } else { 2 },
    }
}

fn cautions(signs: &Signs, pairings: &Pairings, series: &Series, parameters: &Parameters) -> Vec<String> {
    let mut cautions = Vec::new();
    let compared = pairings.list.len() as u64;
    if 4 * signs.ties >= compared {
        let treatment = match parameters.ties {
            Ties::Drop => "they were left out",
            Ties::Against => "they were counted against a trend",
            Ties::Split => "half of each was counted as a rise",
        };
        cautions.push(format!("{} of {compared} pairs are ties; {treatment}.", signs.ties));
    }
    if let Some(blocks) = &series.blocks {
        cautions.push(format!(
            "The pairs of {} blocks were counted together; if blocks rise and fall together for other reasons than a trend, p is too small.",
            blocks.count()
        ));
    }
    if pairings.incomplete > 0 {
        cautions.push(format!("{} pairs fell out because a reading is missing.", pairings.incomplete));
    }
    let censored = series.values.iter().filter(|value| value.is_censored()).count();
    if censored > 0 {
        cautions.push(format!("{censored} readings are known only as limits; pairs whose order is not certain count as ties."));
    }
    cautions
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn readings_are_advised_as_a_search_from_scratch_would() {
        for seek in [Seek::Either, Seek::Rising, Seek::Falling] {
            for side in [0.005, 0.025, 0.03125, 0.05, 0.2] {
                for share in [0.1, 0.4, 0.6, 0.75, 0.9] {
                    for power in [0.5, 0.8, 0.95] {
                        let chance = |pairs| {
                            least_to_reach(pairs, side).map_or(0.0, |needed| chance_of_as_many(needed, pairs, share, seek))
                        };
                        let plain = (1..=500).find(|&pairs| chance(pairs) >= power);
                        let carried = pairs_to_notice(share, side, seek, power, 500);
                        assert_eq!(carried, plain, "{seek:?} side {side} share {share} power {power}");
                    }
                }
            }
        }
    }
}
