//! The total of the scores of events that fall on scored moments, given how many events there are.
//!
//! Two null distributions: events that fall on moments with stated chances, independently of each other (the conditional
//! distribution of Poisson counts, multinomial), and events that are drawn without replacement from trials (the
//! conditional distribution of binomial counts, multivariate hypergeometric). Only positive products are added.
//!
//! Sources: P. Armitage (1955), Tests for linear trends in proportions and frequencies, *Biometrics* 11, 375-386;
//! D. R. Cox and P. A. W. Lewis (1966), *The Statistical Analysis of Series of Events*, chapter 3.

use super::Lattice;
use super::binomial::Binomial;
use super::lattice::add_scaled;

/// The most products that an exact null distribution of this kind may need; less than a second on one core.
pub const MOST_PRODUCTS: f64 = 5e8;

/// How many products [`independent`] adds up.
pub fn independent_effort(events: u64, scores: &[u64]) -> f64 {
    let span = scores.iter().max().copied().unwrap_or(0) as f64;
    let events = events as f64;
    distinct(scores).len() as f64 * events * (0.5 * events * span + 1.0)
}

/// The null distribution of the score total of `events` events, each of which falls on a moment with a chance
/// proportional to its weight. One score a moment, from 0; the weights are not negative and not all zero.
pub fn independent(events: u64, scores: &[u64], weights: &[f64]) -> Lattice {
    let total: f64 = weights.iter().sum();
    let chances: Vec<(usize, f64)> = distinct(scores)
        .into_iter()
        .map(|score| {
            let weight: f64 = scores.iter().zip(weights).filter(|(s, _)| **s == score).map(|(_, w)| w).sum();
            (score as usize, weight / total)
        })
        .collect();
    let span = chances.iter().map(|&(score, _)| score).max().unwrap_or(0);
    let mut mass = vec![1.0];
    for _ in 0..events {
        let mut next = vec![0.0; mass.len() + span];
        for &(score, chance) in &chances {
            add_scaled(&mut next[score..], &mass, chance);
        }
        mass = next;
    }
    Lattice::new(0, 1, mass)
}

/// How many products [`without_replacement`] adds up.
pub fn without_replacement_effort(events: u64, scores: &[u64], trials: &[u64]) -> f64 {
    let all: u64 = trials.iter().sum();
    let drawn = events.min(all - events);
    let span = scores.iter().max().copied().unwrap_or(0) as f64;
    let mut effort = 0.0;
    let mut before = 0;
    for &size in trials {
        for already in 0..=drawn.min(before) {
            effort += (already as f64 * span + 1.0) * (size.min(drawn - already) + 1) as f64;
            if effort > 1e3 * MOST_PRODUCTS {
                return effort;
            }
        }
        before += size;
    }
    effort
}

/// The null distribution of the score total of `events` events drawn without replacement from all trials.
/// One score and one number of trials a moment; at most as many events as trials.
pub fn without_replacement(events: u64, scores: &[u64], trials: &[u64]) -> Lattice {
    let all: u64 = trials.iter().sum();
    let others = all - events;
    if others < events {
        let highest: u64 = scores.iter().zip(trials).map(|(score, size)| score * size).sum();
        let drawn = without_replacement(others, scores, trials);
        let mass: Vec<f64> = drawn.points().rev().map(|(_, mass)| mass).collect();
        return Lattice::new(highest as i64 - drawn.highest(), 1, mass);
    }
    let drawn = events as usize;
    let share = ((events as f64 / all as f64 * 64.0).round() / 64.0).clamp(1.0 / 64.0, 0.5);
    let mut by_events: Vec<Vec<f64>> = vec![Vec::new(); drawn + 1];
    by_events[0] = vec![1.0];
    for (&score, &size) in scores.iter().zip(trials) {
        let here = Binomial::new(size, share);
        let most = (size as usize).min(drawn);
        let chances: Vec<f64> = (0..=most as u64).map(|count| here.mass(count)).collect();
        for total in (0..=drawn).rev() {
            let mut sum: Vec<f64> = Vec::new();
            for (count, &chance) in chances.iter().enumerate().take(total + 1) {
                let source = &by_events[total - count];
                if source.is_empty() {
                    continue;
                }
                let shift = count * score as usize;
                sum.resize(sum.len().max(shift + source.len()), 0.0);
                add_scaled(&mut sum[shift..], source, chance);
            }
            by_events[total] = sum;
        }
    }
    let given = Binomial::new(all, share).mass(events);
    let mass = by_events.swap_remove(drawn).into_iter().map(|chance| chance / given).collect();
    Lattice::new(0, 1, mass)
}

fn distinct(scores: &[u64]) -> Vec<u64> {
    let mut distinct = scores.to_vec();
    distinct.sort_unstable();
    distinct.dedup();
    distinct
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Calls `visit` with every way to put `events` on places that hold at most `room` each.
    fn all_ways(events: u64, room: &[u64], counts: &mut Vec<u64>, visit: &mut dyn FnMut(&[u64])) {
        if counts.len() == room.len() {
            if events == 0 {
                visit(counts);
            }
            return;
        }
        for count in 0..=events.min(room[counts.len()]) {
            counts.push(count);
            all_ways(events - count, room, counts, visit);
            counts.pop();
        }
    }

    fn choose(n: u64, k: u64) -> f64 {
        (0..k).map(|i| (n - i) as f64 / (i + 1) as f64).product()
    }

    /// Every table with the given margins, weighted by products of binomial coefficients.
    #[test]
    fn drawing_agrees_with_every_table() {
        let cases: [(u64, &[u64], &[u64]); 5] = [
            (4, &[0, 1, 2], &[3, 4, 2]),
            (7, &[0, 1, 3, 4], &[2, 3, 3, 2]),
            (8, &[0, 2, 2], &[3, 3, 3]),
            (1, &[5, 0], &[1, 1]),
            (3, &[0, 1, 2], &[2, 0, 4]),
        ];
        for (events, scores, trials) in cases {
            let null = without_replacement(events, scores, trials);
            let all = choose(trials.iter().sum(), events);
            for value in null.lowest()..=null.highest() {
                let mut expected = 0.0;
                all_ways(events, trials, &mut Vec::new(), &mut |counts| {
                    let total: u64 = counts.iter().zip(scores).map(|(count, score)| count * score).sum();
                    if total as i64 >= value {
                        expected += counts.iter().zip(trials).map(|(&count, &size)| choose(size, count)).product::<f64>() / all;
                    }
                });
                let got = null.tails(value).upper;
                assert!((got - expected).abs() <= 1e-13 * expected, "{trials:?} {value}: {got} {expected}");
            }
        }
    }

    /// Every way to place the events, weighted by the multinomial chance.
    #[test]
    fn placing_agrees_with_every_outcome() {
        let (events, scores, weights) = (6_u64, [0_u64, 1, 1, 4], [2.5, 1.0, 0.5, 3.0]);
        let null = independent(events, &scores, &weights);
        let total: f64 = weights.iter().sum();
        for value in null.lowest()..=null.highest() {
            let mut expected = 0.0;
            all_ways(events, &[events; 4], &mut Vec::new(), &mut |counts| {
                if counts.iter().zip(scores).map(|(count, score)| count * score).sum::<u64>() as i64 >= value {
                    let mut left = events;
                    expected += counts.iter().zip(weights).fold(1.0, |chance, (&count, weight)| {
                        let ways = choose(left, count);
                        left -= count;
                        chance * ways * (weight / total).powi(count as i32)
                    });
                }
            });
            let got = null.tails(value).upper;
            assert!((got - expected).abs() <= 1e-13 * expected, "{value}: {got} {expected}");
        }
    }

    /// The most extreme outcome has a chance in closed form: all events on the last moment.
    #[test]
    fn far_tails_keep_their_digits() {
        let null = independent(200, &[0, 1, 2], &[1.0, 2.0, 1.0]);
        let expected = 0.25f64.powi(200);
        assert!((null.tails(400).upper - expected).abs() <= 1e-12 * expected);
        let drawn = without_replacement(30, &[0, 1, 2], &[40, 40, 30]);
        let expected = 1.0 / choose(110, 30);
        assert!((drawn.tails(60).upper - expected).abs() <= 1e-12 * expected);
    }
}
