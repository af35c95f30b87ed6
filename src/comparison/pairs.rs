//! Earlier and later readings set against each other.

use std::cmp::Ordering;

use crate::reading::{Blocks, Series};

/// An earlier and a later reading, and how they compare.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Pairing {
    /// Index of the earlier reading in the series, from 0.
    pub earlier: u32,
    /// Index of the later reading in the series, from 0.
    pub later: u32,
    /// +1 for a rise, -1 for a fall, 0 for a tie.
    pub sign: i8,
    /// How much the sign counts.
    pub weight: u32,
}

/// The pairings of a series and what they add up to.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Pairings {
    /// The pairings block by block, each in the order of the earlier reading.
    pub list: Vec<Pairing>,
    /// Readings that no pairing uses although they have a value, as indices from 0.
    pub left_out: Vec<u32>,
    /// Pairings that fell out because a partner is missing.
    pub incomplete: usize,
}

impl Pairings {
    /// How many pairings have a given sign.
    pub fn count(&self, sign: i8) -> u64 {
        self.list.iter().filter(|pairing| pairing.sign == sign).count() as u64
    }

    /// How much the pairings with a given sign weigh together.
    pub fn weight(&self, sign: i8) -> u64 {
        self.list.iter().filter(|pairing| pairing.sign == sign).map(|pairing| u64::from(pairing.weight)).sum()
    }
}

/// How the readings in time order are paired: given how many there are, the pairs of places from 0 and their weights.
pub type Pattern = fn(usize) -> Vec<(usize, usize, u32)>;

/// Each reading of the first half with the reading c later, c being n/2 or (n+1)/2. The middle of an odd number stays out.
pub fn halves(n: usize) -> Vec<(usize, usize, u32)> {
    let lag = n.div_ceil(2);
    (0..n / 2).map(|i| (i, i + lag, 1)).collect()
}

/// Each reading of the first third with its partner in the last third, the third rounded down.
pub fn thirds_down(n: usize) -> Vec<(usize, usize, u32)> {
    first_and_last(n, n / 3)
}

/// The same with the third rounded up.
pub fn thirds_up(n: usize) -> Vec<(usize, usize, u32)> {
    first_and_last(n, n.div_ceil(3).min(n / 2))
}

fn first_and_last(n: usize, size: usize) -> Vec<(usize, usize, u32)> {
    (0..size).map(|i| (i, n - size + i, 1)).collect()
}

/// The first reading with the last, the second with the last but one, and so on, each weighing its distance.
pub fn weighted_ends(n: usize) -> Vec<(usize, usize, u32)> {
    (0..n / 2).map(|i| (i, n - 1 - i, (n - 1 - 2 * i) as u32)).collect()
}

/// Pairs a series by a pattern, within each block where the series has blocks.
///
/// With `close_gaps`, missing readings are taken out before pairing; without, the pattern is laid over all places and a
/// pair whose partner is missing falls out.
pub fn pair(series: &Series, pattern: Pattern, close_gaps: bool) -> Pairings {
    let whole = || vec![(0..series.len()).collect()];
    let blocks: Vec<Vec<usize>> = series.blocks.as_ref().map_or_else(whole, Blocks::members);
    let mut used = vec![false; series.len()];
    let mut pairings = Pairings::default();
    for members in blocks {
        let places: Vec<usize> = members.into_iter().filter(|&index| !close_gaps || !series.values[index].is_missing()).collect();
        for (earlier, later, weight) in pattern(places.len()) {
            let (earlier, later) = (places[earlier], places[later]);
            let Some(order) = series.values[earlier].compare(series.values[later]) else {
                pairings.incomplete += 1;
                continue;
            };
            let sign = match order {
                Ordering::Less => 1,
                Ordering::Equal => 0,
                Ordering::Greater => -1,
            };
            used[earlier] = true;
            used[later] = true;
            pairings.list.push(Pairing { earlier: earlier as u32, later: later as u32, sign, weight });
        }
    }
    pairings.left_out = series.present().map(|(index, _)| index as u32).filter(|&index| !used[index as usize]).collect();
    pairings
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn halves_leave_the_middle_out() {
        assert_eq!(halves(5), [(0, 3, 1), (1, 4, 1)]);
        assert_eq!(halves(4), [(0, 2, 1), (1, 3, 1)]);
        assert!(halves(1).is_empty() && halves(0).is_empty());
    }

    #[test]
    fn thirds_round_either_way() {
        assert_eq!(thirds_down(19).len(), 6);
        assert_eq!(thirds_up(19).len(), 7);
        assert_eq!(thirds_up(19)[0], (0, 12, 1));
        assert_eq!(thirds_up(1).len(), 0);
    }

    #[test]
    fn ends_weigh_their_distance() {
        assert_eq!(weighted_ends(6), [(0, 5, 5), (1, 4, 3), (2, 3, 1)]);
        assert_eq!(weighted_ends(5), [(0, 4, 4), (1, 3, 2)]);
    }

    #[test]
    fn pairs_are_made_within_blocks() {
        let mut series = Series::of_numbers(&[1.0, 10.0, 2.0, 9.0, 3.0, 8.0, 0.0]);
        series.blocks = Some(Blocks::of_labels(["a", "b", "a", "b", "a", "b", "a"]));
        let pairings = pair(&series, halves, true);
        let found: Vec<(u32, u32, i8)> = pairings.list.iter().map(|pair| (pair.earlier, pair.later, pair.sign)).collect();
        assert_eq!(found, [(0, 4, 1), (2, 6, -1), (1, 5, -1)]);
        assert_eq!(pairings.left_out, [3]);
    }
}
