//! What tests for repeated looks have in common: each reading's part in S when it came, and what equal readings count.
//!
//! The newest of t readings exceeds some of the earlier ones. Without a trend, and if no two readings are equal, how many it
//! exceeds is uniform on 0 to t - 1 and independent of all that went before; both tests rest on that alone. Equal
//! readings are therefore drawn apart with a seed, or they count against the direction sought, which is safe and blunt.
//!
//! A draw says how many of the earlier equal ones a reading exceeds. It depends on the seed and on how this reading and the
//! earlier ones stand to each other, and on nothing else. So a later look breaks earlier ties as before, another unit changes
//! nothing, and different series with one seed get different draws: were the draws the same for all, a seed that happens to
//! draw a rise would do so in all of them. Over all seeds the risk is exact.

use super::kendall::{Ordered, Score};
use super::{Fact, Refusal, dependence};
use crate::comparison::Order;
use crate::comparison::order::earlier_lower_and_higher;
use crate::null_distribution::draws::Draws;
use crate::reading::{Series, Value};

crate::choices! {
    /// What becomes of equal readings.
    pub enum Ties {
        /// A seeded draw says which of them is the higher one; the risk stays exact.
        Seeded = "seeded",
        /// They count as falls where a rise is sought, and as rises where a fall is sought; the risk is kept, with less power.
        Against = "against",
    }
}

/// What becomes of equal readings, for the cards.
pub const TIES: &str = "A seeded draw tells equal readings apart (ties=seeded), which keeps the risk exact over all seeds; or they count against the direction sought (ties=against), which is safe and blunt.";

/// What becomes of gaps and limits, for the cards.
pub const MISSING: &str =
    "Gaps are closed up. Limits such as <0.5 tie where their order is not certain; limits at several levels need ties=against.";

/// Readings as they came, one after another.
pub struct Successive {
    /// The index of each reading that has a value.
    pub indices: Vec<usize>,
    /// For each, the earlier readings that it exceeds less those that exceed it, as counted where a rise is sought.
    pub rising: Vec<i64>,
    /// The same as counted where a fall is sought; it differs from `rising` only where ties count against the direction.
    pub falling: Vec<i64>,
    /// How many pairs of readings are equal.
    pub tied_pairs: u64,
}

impl Successive {
    /// The first `most` readings of a series that have a value.
    ///
    /// # Errors
    /// All readings are equal, or equal readings cannot be put in an order.
    pub fn of(series: &Series, most: usize, ties: Ties, seed: u32) -> Result<Self, Refusal> {
        let (indices, values): (Vec<usize>, Vec<Value>) = series.present().take(most).unzip();
        let counts = earlier_lower_and_higher(&values, &vec![1; values.len()]);
        let earlier = |(number, &(lower, higher)): (usize, &(u64, u64))| number as u64 - lower - higher;
        let tied_pairs = counts.iter().enumerate().map(earlier).sum();
        let pairs = (values.len() as u64) * (values.len() as u64).saturating_sub(1) / 2;
        if tied_pairs == pairs {
            return Err(Refusal::AllTied { compared: pairs as usize });
        }
        let part = |number: usize, exceeded: u64| 2 * exceeded as i64 - number as i64;
        let (rising, falling) = match ties {
            Ties::Against => {
                counts.iter().enumerate().map(|(number, &(lower, higher))| (part(number, lower), -part(number, higher))).unzip()
            }
            Ties::Seeded => {
                let exceeded = drawn_apart(&values, &counts, seed)?;
                let parts: Vec<i64> = exceeded.into_iter().enumerate().map(|(number, exceeded)| part(number, exceeded)).collect();
                (parts.clone(), parts)
            }
        };
        Ok(Successive { indices, rising, falling, tied_pairs })
    }

    /// How many pairs of readings are equal.
    pub fn fact(&self) -> Fact {
        Fact::new("tied_pairs", "Pairs of equal readings", self.tied_pairs)
    }

    /// What to bear in mind about equal readings and about readings that resemble their neighbours.
    pub fn cautions(&self, series: &Series, ties: Ties) -> Vec<String> {
        [self.caution_on_ties(ties), self.caution_on_dependence(series)].into_iter().flatten().collect()
    }

    fn caution_on_dependence(&self, series: &Series) -> Option<String> {
        let ordered = Ordered::new(series, self.indices.clone());
        let r1 = dependence::of_neighbours(series, &ordered, &Score::of(&ordered)).ok().flatten()?;
        dependence::caution(
            r1,
            self.indices.len(),
            "repeated looks do not allow for it, but readings further apart may be free of it",
        )
    }

    fn caution_on_ties(&self, ties: Ties) -> Option<String> {
        let how = match ties {
            Ties::Seeded => {
                "a seeded draw told them apart. Another seed gives another p, so the seed is declared before looking and kept"
            }
            Ties::Against => "they count against the direction sought, so that p is an upper limit",
        };
        (self.tied_pairs > 0).then(|| format!("{} pairs of readings are equal; {how}.", self.tied_pairs))
    }
}

/// For each reading, how many earlier ones it exceeds when a draw says how many of the equal ones it does; `counts` says how
/// many earlier ones are lower and higher. Where being equal carries over from one reading to the next, all numbers of them are
/// equally probable, as if each reading had been drawn its place among its equals.
fn drawn_apart(values: &[Value], counts: &[(u64, u64)], seed: u32) -> Result<Vec<u64>, Refusal> {
    if Order::of_values(values).is_none() {
        return Err(Refusal::Because(
            "limits at several levels leave no order in which equal readings could be drawn apart; ask for ties=against".into(),
        ));
    }
    let mut state = u64::from(seed);
    let exceeded = (0..).zip(counts).map(|(number, &(lower, higher)): (u64, _)| {
        let mut draws = Draws::seeded(state ^ (lower << 32 | higher));
        state = draws.below(u64::MAX);
        lower + draws.below(number - lower - higher + 1)
    });
    Ok(exceeded.collect())
}
