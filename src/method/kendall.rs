//! What the tests of Kendall's family have in common: S and how it behaves without a trend.
//!
//! S is the number of pairs of an earlier and a later reading that rise, less the number that fall. Without a trend every
//! order of the readings is equally probable. The exact null distribution of S allows for readings that are equal (the
//! q-multinomial of Kendall's generating function) and for moments with several readings (a recursion over the table of
//! moments and distinct values). Beyond the exact range S is referred to the normal distribution with its variance corrected
//! for both kinds of ties, and moved half a step, which is 1, towards 0.

use std::borrow::Cow;
use std::cell::OnceCell;

use super::Refusal;
use super::question::PBy;
use crate::comparison::groups::places;
use crate::comparison::{Order, Signs, rises};
use crate::null_distribution::ordered_table::{self, MOST_PRODUCTS};
use crate::null_distribution::{Attained, By, Lattice};
use crate::reading::moment::MomentKind;
use crate::reading::{Series, Value};

/// Up to which size the null distribution of S is exact, for the cards.
pub const EXACT: &str = "Up to 500 million additions: 1,000 readings without ties, 250 to 400 with ties among them; with several readings at a moment too, fewer, such as 50 readings in three grades.";

/// What becomes of limits, for the cards.
pub const MISSING: &str = "Gaps are closed up. Limits such as <0.5 are compared where the order is certain and tie where it is not; limits at several levels leave the normal approximation only.";

/// Readings in time order, with their moments.
pub struct Ordered {
    /// The index of each reading, the earliest first.
    pub indices: Vec<usize>,
    /// Their values.
    pub values: Vec<Value>,
    /// How many readings each moment has.
    pub moment_sizes: Vec<usize>,
}

impl Ordered {
    /// Those of the given readings of a series.
    pub fn new(series: &Series, mut indices: Vec<usize>) -> Self {
        let moment_sizes = if series.moments.kind() == MomentKind::Position {
            vec![1; indices.len()]
        } else {
            let places = places(series);
            indices.sort_by_key(|&index| places[index]);
            indices.chunk_by(|&a, &b| places[a] == places[b]).map(<[usize]>::len).collect()
        };
        let values = indices.iter().map(|&index| series.values[index]).collect();
        Ordered { indices, values, moment_sizes }
    }

    /// All readings of a series that have a value.
    pub fn of(series: &Series) -> Self {
        Ordered::new(series, series.present().map(|(index, _)| index).collect())
    }
}

/// Kendall's S with all that its null distribution needs.
#[derive(Clone, Debug)]
pub struct Score {
    /// Pairs from different moments that rise.
    pub rises: u64,
    /// Pairs from different moments that fall.
    pub falls: u64,
    /// How many readings each moment has.
    pub moment_sizes: Vec<usize>,
    /// How many readings share each value, the lowest first; `None` where limits leave no order in which ties carry over.
    pub tie_sizes: Option<Vec<usize>>,
    signs: Signs,
    variance: f64,
    null: OnceCell<Lattice>,
}

impl Score {
    /// Counts the pairs of readings.
    pub fn of(ordered: &Ordered) -> Self {
        let Ordered { values, moment_sizes, .. } = ordered;
        let plain: Option<Vec<f64>> = values.iter().map(|value| value.number()).collect();
        let comparable = plain.or_else(|| Some(Order::of_values(values)?.places.iter().map(|&place| place as f64).collect()));
        let moment_sizes = moment_sizes.clone();
        match comparable {
            Some(numbers) => {
                let rises::Rises { rises, falls, tie_sizes } = rises::count(&moment_sizes, numbers);
                let signs = Signs::of_sizes(&tie_sizes);
                let variance = signs.variance_with(&Signs::of_sizes(&moment_sizes));
                Score { rises, falls, moment_sizes, tie_sizes: Some(tie_sizes), signs, variance, null: OnceCell::new() }
            }
            None => {
                let (rises, falls) = pair_by_pair(values, &moment_sizes);
                let signs = Signs::of_values(values);
                let variance = signs.variance_with(&Signs::of_sizes(&moment_sizes));
                Score { rises, falls, moment_sizes, tie_sizes: None, signs, variance, null: OnceCell::new() }
            }
        }
    }

    /// Rises less falls.
    pub fn s(&self) -> i64 {
        self.rises as i64 - self.falls as i64
    }

    /// How many readings there are.
    pub fn readings(&self) -> usize {
        self.moment_sizes.iter().sum()
    }

    /// Pairs of readings from different moments.
    pub fn pairs(&self) -> u64 {
        rises::pairs(self.readings()) - rises::tied_pairs(&self.moment_sizes)
    }

    /// The variance of S without a trend.
    pub fn variance(&self) -> f64 {
        self.variance
    }

    /// Kendall's tau-b: S over the geometric mean of the pairs that differ in moment and the pairs that differ in value.
    pub fn tau_b(&self) -> Option<f64> {
        let (moments, values) = (self.pairs() as f64, self.signs.differing / 2.0);
        (moments * values > 0.0).then(|| (self.s() as f64 / (moments * values).sqrt()).clamp(-1.0, 1.0))
    }

    /// S if the readings stood in ascending order.
    pub fn most(&self) -> i64 {
        let Some(tie_sizes) = &self.tie_sizes else { return self.pairs() as i64 };
        if self.moment_sizes.len() == self.readings() {
            return (rises::pairs(self.readings()) - rises::tied_pairs(tie_sizes)) as i64;
        }
        let sorted: Vec<f64> =
            tie_sizes.iter().enumerate().flat_map(|(place, &size)| std::iter::repeat_n(place as f64, size)).collect();
        rises::count(&self.moment_sizes, sorted).rises as i64
    }

    /// About how many products the exact null distribution takes; infinite where it cannot be counted.
    pub fn effort(&self) -> f64 {
        self.tie_sizes.as_ref().map_or(f64::INFINITY, |tie_sizes| ordered_table::effort(&self.moment_sizes, tie_sizes))
    }

    /// The exact null distribution of S. Only to be asked for where [`effort`](Self::effort) is finite.
    pub fn null(&self) -> &Lattice {
        self.null.get_or_init(|| match &self.tie_sizes {
            Some(tie_sizes) => ordered_table::rises_less_falls(&self.moment_sizes, tie_sizes),
            None => Lattice::constant(self.s()),
        })
    }

    /// About how many products the null distribution takes that S would have if all readings differed.
    pub fn effort_if_untied(&self) -> f64 {
        ordered_table::effort(&self.moment_sizes, &vec![1; self.readings()])
    }

    /// The null distribution that S would have if all readings differed.
    pub fn null_if_untied(&self) -> Cow<'_, Lattice> {
        match &self.tie_sizes {
            Some(tie_sizes) if tie_sizes.len() == self.readings() => Cow::Borrowed(self.null()),
            _ => Cow::Owned(ordered_table::rises_less_falls(&self.moment_sizes, &vec![1; self.readings()])),
        }
    }

    /// What S attains, in the form that is wanted.
    ///
    /// # Errors
    /// The exact p was asked for where it cannot be counted.
    pub fn attained(&self, p_by: PBy, continuity: bool) -> Result<Attained, Refusal> {
        if is_exact(p_by, self.effort())? {
            return Ok(Attained::exact(self.null(), self.s()));
        }
        Ok(by_normal(self.s(), self.most(), self.variance(), continuity))
    }

    /// A caution about ties, if there are many of them.
    pub fn caution_on_ties(&self) -> Option<String> {
        let (pairs, tied) = (self.pairs(), self.pairs() - self.rises - self.falls);
        (4 * tied >= pairs && tied > 0)
            .then(|| format!("{tied} of {pairs} pairs are ties; the null distribution has the same ties."))
    }
}

/// Whether the exact null distribution is used, `effort` being what it takes.
///
/// # Errors
/// The exact p was asked for where it cannot be counted.
pub fn is_exact(p_by: PBy, effort: f64) -> Result<bool, Refusal> {
    if effort.is_infinite() && p_by == PBy::Exact {
        return Err(Refusal::Because(
            "limits at several levels, or more than 1,000 readings, leave no null distribution that can be counted exactly; ask for p_by=best or p_by=normal".into(),
        ));
    }
    let millions = |products: f64| (products / 1e6).min(1e15).ceil() as usize;
    p_by.is_exact("million products of chances (1,000 readings without ties)", millions(effort), millions(MOST_PRODUCTS))
}

/// What S attains by the normal approximation; `most` is its largest value.
pub fn by_normal(s: i64, most: i64, variance: f64, continuity: bool) -> Attained {
    let (correction, by) = if continuity { (1.0, By::NORMAL) } else { (0.0, By::Approximation("normal")) };
    Attained::normal(s as f64, (-most as f64, most as f64), variance, correction, by)
}

/// S over its standard deviation, moved 1 towards 0 if `continuity`; `None` if S cannot vary.
pub fn standardised(s: i64, variance: f64, continuity: bool) -> Option<f64> {
    let moved = if continuity { s - s.signum() } else { s };
    (variance > 0.0).then(|| moved as f64 / variance.sqrt())
}

fn pair_by_pair(values: &[Value], moment_sizes: &[usize]) -> (u64, u64) {
    let (mut rises, mut falls, mut start) = (0, 0, 0);
    for &size in moment_sizes {
        for later in &values[start..start + size] {
            for earlier in &values[..start] {
                match earlier.compare(*later) {
                    Some(std::cmp::Ordering::Less) => rises += 1,
                    Some(std::cmp::Ordering::Greater) => falls += 1,
                    _ => {}
                }
            }
        }
        start += size;
    }
    (rises, falls)
}

/// A probability in a sentence.
pub fn short(p: f64) -> String {
    if p >= 0.001 { format!("{p:.3}") } else { format!("{p:.1e}") }
}
