//! The sum, over the readings of a block, of place times rank: the null distribution of Page's L.
//!
//! In each block all orders of the ranks are equally probable. A rank is chosen for the first place, then for the second,
//! and so on; what is left of each rank decides how the block goes on, so outcomes with the same ranks left are carried
//! forward together. Blocks are independent, so their distributions are convolved. Only positive products are added.
//!
//! Source: E. B. Page (1963), Ordered hypotheses for multiple treatments, *Journal of the American Statistical
//! Association* 58, 216-230, section 3.

use std::collections::{BTreeMap, HashMap};

use super::Lattice;
use super::strip::Strip;

/// The most products that the distribution may take; less than a second on one core.
pub const MOST_PRODUCTS: f64 = 5e8;

/// The ranks of one block in ascending order, in whole units.
pub type Ranks = Vec<u32>;

/// About how many products [`sum_of_products`] takes, at most.
pub fn effort(blocks: &[Ranks]) -> f64 {
    let mut different: HashMap<&Ranks, f64> = HashMap::new();
    let (mut width, mut effort) = (1.0, 0.0);
    for ranks in blocks {
        let length = *different.entry(ranks).or_insert_with(|| {
            let length = range(ranks);
            let states: f64 = classes(ranks).iter().map(|&(_, size)| (size + 1) as f64).product();
            effort += states * classes(ranks).len() as f64 * length * 0.5;
            length
        });
        effort += width * length;
        width += length - 1.0;
    }
    effort
}

/// The null distribution of the sum of place times rank over all places and blocks.
pub fn sum_of_products(blocks: &[Ranks]) -> Lattice {
    let mut different: HashMap<&Ranks, Lattice> = HashMap::new();
    let mut sum = Lattice::constant(0);
    for ranks in blocks {
        sum = sum.plus(different.entry(ranks).or_insert_with(|| block(ranks)));
    }
    sum
}

/// How many whole numbers lie between the lowest and the highest sum of a block, ends included.
fn range(ranks: &Ranks) -> f64 {
    let places = 1..=ranks.len() as u64;
    let sum = |ordered: &mut dyn Iterator<Item = &u32>| -> u64 {
        places.clone().zip(ordered).map(|(place, &rank)| place * u64::from(rank)).sum()
    };
    (sum(&mut ranks.iter()) - sum(&mut ranks.iter().rev())) as f64 + 1.0
}

/// The different ranks and how often each occurs.
fn classes(ranks: &Ranks) -> Vec<(u32, usize)> {
    let mut classes: Vec<(u32, usize)> = Vec::new();
    for &rank in ranks {
        match classes.last_mut() {
            Some((same, size)) if *same == rank => *size += 1,
            _ => classes.push((rank, 1)),
        }
    }
    classes
}

fn block(ranks: &Ranks) -> Lattice {
    let classes = classes(ranks);
    let all: Vec<usize> = classes.iter().map(|&(_, size)| size).collect();
    let mut states: BTreeMap<Vec<usize>, Strip> = BTreeMap::from([(all, Strip::zero())]);
    for place in 1..=ranks.len() {
        let left = (ranks.len() + 1 - place) as f64;
        let mut next: BTreeMap<Vec<usize>, Strip> = BTreeMap::new();
        for (remaining, strip) in &states {
            for (class, &(rank, _)) in classes.iter().enumerate().filter(|(class, _)| remaining[*class] > 0) {
                let mut state = remaining.clone();
                state[class] -= 1;
                next.entry(state).or_default().add(strip, place as i64 * i64::from(rank), remaining[class] as f64 / left);
            }
        }
        states = next;
    }
    states.into_values().next().unwrap_or_else(Strip::zero).into()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn orders(ranks: &mut Vec<u32>, done: usize, visit: &mut dyn FnMut(&[u32])) {
        if done == ranks.len() {
            return visit(ranks);
        }
        for index in done..ranks.len() {
            ranks.swap(done, index);
            orders(ranks, done + 1, visit);
            ranks.swap(done, index);
        }
    }

    /// All orders of the ranks in two blocks, counted one by one.
    #[test]
    fn agrees_with_all_orders() {
        for (first, second) in
            [(vec![1, 2, 3], vec![1, 2, 3]), (vec![3, 3, 6, 8], vec![2, 4, 6, 8]), (vec![5, 5, 5], vec![2, 5, 5])]
        {
            let mut counts: HashMap<i64, f64> = HashMap::new();
            let sum =
                |ranks: &[u32]| ranks.iter().enumerate().map(|(place, &rank)| (place as i64 + 1) * i64::from(rank)).sum::<i64>();
            orders(&mut first.clone(), 0, &mut |a| {
                orders(&mut second.clone(), 0, &mut |b| *counts.entry(sum(a) + sum(b)).or_default() += 1.0);
            });
            let all: f64 = counts.values().sum();
            let null = sum_of_products(&[first, second]);
            for (value, count) in counts {
                assert!((null.mass(value) - count / all).abs() < 1e-14);
            }
        }
    }

    #[test]
    fn the_only_best_order_has_one_chance_in_all() {
        let null = sum_of_products(&vec![vec![1, 2, 3, 4, 5, 6]; 40]);
        let expected = 720f64.powi(-40);
        assert!((null.extremes().upper - expected).abs() <= 1e-12 * expected);
    }
}
