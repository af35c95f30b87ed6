//! A watch without a horizon: a bettor's capital against the hypothesis that there is no trend.
//!
//! A bettor stakes a share L of his capital on each new reading exceeding the earlier ones: if it exceeds them all, his capital
//! is multiplied by 1 + L, if it exceeds none, by 1 - L, and by 1 + L(2r - t - 1)/(t - 1) if its rank among t readings is r.
//! Without a trend every rank is equally probable whatever went before, so the game is fair, and by Ville's inequality the
//! chance that the capital ever reaches 1/risk is at most the risk, however often and for however long one looks. p is one over
//! the largest capital so far.
//!
//! # Choices
//! `stakes`: the capital is the mean of several bettors', one for each stake. Small stakes find slow trends, large ones steep
//! trends soon. `starts`: with `first` all of them bet from the second reading on; with `spread` a share of 1/(k(k + 1)) begins
//! after reading k, which finds a trend that begins late far sooner and one that is there from the start about as soon.
//!
//! # What is sought
//! With `seek=rising` the bets are on rises, with `seek=falling` on falls, with `seek=either` half the capital is bet on each.
//!
//! # What p means
//! An upper limit: the chance, without a trend, that the capital would ever have become as large is at most p. It never
//! rises from one reading to the next. It may be adjusted for other indicators.
//!
#![doc = include_str!("looks.md")]
//!
//! # Sources
//! J. Ville (1939), *Étude critique de la notion de collectif*, Gauthier-Villars, chapter V (the inequality). M. G. Kendall
//! (1975), *Rank Correlation Methods*, 4th ed., chapter 5 (ranks of the newest reading are independent).

use super::declaration::{Count, List};
use super::successive::{MISSING, Successive, TIES, Ties};
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Seek, Source,
    Statistic, Table,
};
use crate::null_distribution::capital::{Starts as Begin, ln_capital, ln_sum};
use crate::null_distribution::{Attained, By, Tails};
use crate::reading::{Cell, Series, list};

crate::choices! {
    /// When the bettors begin.
    pub enum Starts {
        /// All of them with the second reading.
        First = "first",
        /// Some after each reading, so that a trend that begins late is found too.
        Spread = "spread",
    }
}

crate::parameters! {
    /// What a watch takes beyond readings, seek and risk.
    pub struct Parameters {
        /// The shares of the capital that are staked, each above 0 and below 1; by default 0.2, 0.3, 0.4, 0.5 and 0.6.
        stakes: List = List::default(),
        /// When the bettors begin: first or spread.
        starts: Starts = Starts::Spread,
        /// What becomes of equal readings.
        ties: Ties = Ties::Seeded,
        /// For ties=seeded: the seed; the same seed breaks the same ties at every look.
        seed: Count<0, 4_294_967_295> = Count(1),
    }
}

/// The stakes where none are sent.
pub const STAKES: [f64; 5] = [0.2, 0.3, 0.4, 0.5, 0.6];

/// How p is got.
const VILLE: By = By::Approximation("upper limit by Ville's inequality");

/// Up to so many readings, the evidence is listed.
const MOST_LISTED: usize = 2_000;

/// The test itself.
pub struct Watch;

impl Method for Watch {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "watch",
        title: "Watch by a bettor's capital",
        question: "Has a series that is looked at again and again, without a planned end, shown a trend by now?",
        null_hypothesis: "Every order of the readings is equally probable, those still to come among them.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 2,
        exact: "Never: p is an upper limit, which holds for any number of readings and of looks.",
        assumes: &[
            "Apart from a trend, the readings are independent and come from one distribution; there is no season.",
            "Readings can be ordered; their differences need not mean anything.",
            "Stakes, starts, seed, seek and risk were declared before the first look and are never changed.",
            "A claim stands once it is made, whatever later readings show.",
        ],
        ties: TIES,
        missing: MISSING,
        cost: "n log n, times the number of stakes",
        fits_better: &[
            ("planned-looks", "the number of readings can be planned: it finds smaller trends"),
            ("mann-kendall", "the series is judged once, or the readings remember their predecessors"),
        ],
        sources: &[
            Source {
                authors: "J. Ville",
                year: 1939,
                title: "Étude critique de la notion de collectif",
                place: "Gauthier-Villars, chapter V",
            },
            Source {
                authors: "M. G. Kendall",
                year: 1975,
                title: "Rank Correlation Methods, 4th edition",
                place: "Griffin, chapter 5",
            },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let stakes = stakes(&parameters.stakes)?;
        let readings = Successive::of(series, usize::MAX, parameters.ties, parameters.seed.0)?;
        let starts = match parameters.starts {
            Starts::First => Begin::First,
            Starts::Spread => Begin::Spread,
        };
        let bet = |parts: &[i64], sign: f64| {
            let advantage = |(number, &part): (usize, &i64)| sign * part as f64 / (number as f64).max(1.0);
            ln_capital(&parts.iter().enumerate().map(advantage).collect::<Vec<f64>>(), &stakes, starts)
        };
        let steepest: Vec<i64> = (0..readings.indices.len() as i64).collect();
        let capitals = Capitals::new(bet(&readings.rising, 1.0), bet(&readings.falling, -1.0));
        let best = Capitals::new(bet(&steepest, 1.0), bet(&steepest, -1.0));
        let attained = Attained {
            tails: Tails { upper: p(&capitals.rising), lower: p(&capitals.falling) },
            either: p(&capitals.either),
            extremes: Tails { upper: p(&best.rising), lower: p(&best.rising) },
            least_either: p(&best.either),
            by: VILLE,
        };
        let (p, smallest) = question.judge(&attained);
        let sought = capitals.sought(question.seek);
        let first = sought.iter().position(|&ln_capital| question.allows(one_over(ln_capital)));
        let label = |number: usize| series.moments.label(readings.indices[number]);
        let latest = sought.last().copied().unwrap_or(0.0);
        let mut facts = vec![
            Fact::new("capital", "Capital now", amount(latest)),
            Fact::new("largest_capital", "Largest capital so far", amount(largest(sought))),
            Fact::new("needed_capital", "Capital that a claim needs", 1.0 / question.risk.0),
            Fact::new("first_claim", "Moment of the first claim", first.map(label)),
            Fact::new("claimed_after", "Readings at the first claim", first.map(|number| number + 1)),
            Fact::new("s", "S: rises less falls", readings.rising.iter().sum::<i64>()),
            readings.fact(),
        ];
        facts.extend(question.p_facts(&attained));
        let listed = (readings.indices.len() <= MOST_LISTED).then(|| table(series, &readings, &capitals, question.seek));
        Ok(Outcome {
            statistic: Statistic { name: "capital", value: amount(largest(sought)) },
            p,
            direction: match (question.seek, first) {
                (Seek::Rising, Some(_)) => Direction::Rising,
                (Seek::Falling, Some(_)) => Direction::Falling,
                (_, first) => capitals.direction(first.unwrap_or(readings.indices.len() - 1)),
            },
            smallest_p: Some(smallest),
            readings_used: readings.indices.len(),
            facts,
            evidence: listed.map(Evidence::Table).into_iter().collect(),
            cautions: readings.cautions(series, parameters.ties),
        })
    }
}

/// The stakes as sent.
fn stakes(sent: &List) -> Result<Vec<f64>, Refusal> {
    let Some(cells) = &sent.cells else { return Ok(STAKES.to_vec()) };
    let stake = |cell: &Cell| {
        let number = match cell {
            Cell::Number(number) => Some(*number),
            Cell::Text(text) => list::number(text),
            _ => None,
        };
        number.filter(|number| *number > 0.0 && *number < 1.0).ok_or_else(|| {
            Refusal::Because(format!("stakes holds `{}`; each stake is a number above 0 and below 1, such as 0.2", cell.quote()))
        })
    };
    let stakes: Vec<f64> = cells.iter().map(stake).collect::<Result<_, _>>()?;
    match stakes.len() {
        1..=100 => Ok(stakes),
        have => Err(Refusal::Because(format!("there are {have} stakes; send from 1 to 100 of them, such as stakes=0.1;0.3"))),
    }
}

/// Logarithms of the capital after each reading, by what is bet on.
struct Capitals {
    rising: Vec<f64>,
    falling: Vec<f64>,
    either: Vec<f64>,
}

impl Capitals {
    fn new(rising: Vec<f64>, falling: Vec<f64>) -> Self {
        let mean = |(&up, &down): (&f64, &f64)| ln_sum([up, down]) - std::f64::consts::LN_2;
        let either = rising.iter().zip(&falling).map(mean).collect();
        Capitals { rising, falling, either }
    }

    fn sought(&self, seek: Seek) -> &[f64] {
        match seek {
            Seek::Rising => &self.rising,
            Seek::Falling => &self.falling,
            Seek::Either => &self.either,
        }
    }

    /// Which bets have won more by a reading.
    fn direction(&self, number: usize) -> Direction {
        Direction::of(self.rising[number] - self.falling[number])
    }
}

fn largest(ln_capital: &[f64]) -> f64 {
    ln_capital.iter().copied().fold(0.0, f64::max)
}

fn one_over(ln_capital: f64) -> f64 {
    (-ln_capital).exp().clamp(f64::MIN_POSITIVE, 1.0)
}

fn p(ln_capital: &[f64]) -> f64 {
    one_over(largest(ln_capital))
}

/// A capital as a number; what no number can hold is given as the largest one.
fn amount(ln_capital: f64) -> f64 {
    ln_capital.exp().min(f64::MAX)
}

fn table(series: &Series, readings: &Successive, capitals: &Capitals, seek: Seek) -> Table {
    let columns = vec![
        Column { key: "reading", label: "Reading" },
        Column { key: "moment", label: "Its moment" },
        Column { key: "value", label: "Its value" },
        Column { key: "rising", label: "Capital of bets on rises" },
        Column { key: "falling", label: "Capital of bets on falls" },
        Column { key: "capital", label: "Capital for what is sought" },
        Column { key: "p", label: "p by then" },
    ];
    let sought = capitals.sought(seek);
    let mut most = 0.0_f64;
    let row = |(number, &index): (usize, &usize)| -> Vec<Datum> {
        most = most.max(sought[number]);
        vec![
            (index + 1).into(),
            series.moments.label(index).into(),
            Datum::of_reading(series, index),
            amount(capitals.rising[number]).into(),
            amount(capitals.falling[number]).into(),
            amount(sought[number]).into(),
            one_over(most).into(),
        ]
    };
    Table {
        caption: "The capital after each reading".into(),
        rows: readings.indices.iter().enumerate().map(row).collect(),
        columns,
    }
}
