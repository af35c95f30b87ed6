//! How far the running sum of ranks strays when the ranks stand in random order.
//!
//! After each reading the walk stands at U, the sum of the ranks so far less its mean, doubled. Which ranks have been taken
//! decides where the walk stands and how it can go on, so orders that have taken the same ranks are carried forward
//! together. A walk that reaches the barrier is taken out and counted. Only positive products are added.
//!
//! Source: A. N. Pettitt (1979), A non-parametric approach to the change-point problem, *Applied Statistics* 28, 126-135,
//! section 2.

use crate::comparison::midranks::Classes;

/// The most sets of taken ranks that may be followed: 18 readings without ties; some hundredths of a second on one core.
pub const MOST_STATES: usize = 1 << 18;

/// A walk strays at least this far: up, down, and to either side.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Barriers {
    /// How far the walk goes above 0 at most, which it does if the earlier readings are the higher ones.
    pub up: i64,
    /// How far the walk goes below 0 at most, which it does if the earlier readings are the lower ones.
    pub down: i64,
    /// The larger of both.
    pub either: i64,
}

/// The chances that a random walk strays as far.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Strays {
    /// Up.
    pub up: f64,
    /// Down.
    pub down: f64,
    /// To either side.
    pub either: f64,
}

impl Barriers {
    /// The barriers that the walk of these ranks just reaches, the ranks doubled.
    pub fn reached_by(ranks: &[u64]) -> Self {
        let mut reached = Barriers { up: 0, down: 0, either: 0 };
        for position in walk(ranks) {
            reached.up = reached.up.max(position);
            reached.down = reached.down.max(-position);
        }
        reached.either = reached.up.max(reached.down);
        reached
    }
}

/// Where the walk stands after each reading, the last one excepted, where it is back at 0; the ranks are doubled.
pub fn walk(ranks: &[u64]) -> Vec<i64> {
    let mean = ranks.len() as i64 + 1;
    let mut position = 0;
    let steps = ranks.iter().take(ranks.len().saturating_sub(1));
    steps
        .map(|&rank| {
            position += rank as i64 - mean;
            position
        })
        .collect()
}

/// How many sets of taken ranks there are; `None` for more than can be counted.
pub fn states(classes: &Classes) -> Option<usize> {
    classes.iter().try_fold(1_usize, |states, &(_, size)| states.checked_mul(size + 1))
}

/// The chances that a walk through all ranks in random order reaches the barriers.
///
/// Time grows with the number of states times the number of different ranks, memory with 24 bytes a state.
pub fn strays(classes: &Classes, barriers: Barriers) -> Strays {
    let mean = classes.iter().map(|&(_, size)| size).sum::<usize>() as i64 + 1;
    let readings = (mean - 1) as usize;
    let mut strides = Vec::with_capacity(classes.len());
    let mut states = 1;
    for &(_, size) in classes {
        strides.push(states);
        states *= size + 1;
    }
    // The chance of each set of taken ranks without having reached the barrier before: up, down, either.
    let mut chances = vec![[0.0; 3]; states];
    chances[0] = [1.0; 3];
    let mut reached = [0.0; 3];
    let mut taken = vec![0_usize; classes.len()];
    let (mut count, mut position) = (0_usize, 0_i64);
    for state in 0..states {
        let mut chance = chances[state];
        let beyond = [position >= barriers.up, -position >= barriers.down, position.abs() >= barriers.either];
        for side in 0..3 {
            if beyond[side] {
                reached[side] += chance[side];
                chance[side] = 0.0;
            }
        }
        if chance != [0.0; 3] {
            let left = (readings - count) as f64;
            for (class, &(_, size)) in classes.iter().enumerate().filter(|(class, entry)| taken[*class] < entry.1) {
                let share = (size - taken[class]) as f64 / left;
                for (target, chance) in chances[state + strides[class]].iter_mut().zip(chance) {
                    *target += share * chance;
                }
            }
        }
        // Count on to the next set, the first class fastest.
        for (class, &(rank, size)) in classes.iter().enumerate() {
            let step = rank as i64 - mean;
            if taken[class] < size {
                taken[class] += 1;
                count += 1;
                position += step;
                break;
            }
            taken[class] = 0;
            count -= size;
            position -= step * size as i64;
        }
    }
    Strays { up: reached[0].min(1.0), down: reached[1].min(1.0), either: reached[2].min(1.0) }
}

#[cfg(test)]
mod tests {
    use super::super::arrangements::{for_each, sizes_to_try};
    use super::*;

    /// All arrangements of up to eight readings, with and without equal ones, counted one by one.
    #[test]
    fn agrees_with_all_arrangements() {
        for sizes in sizes_to_try(8) {
            let mut below = 0;
            let classes: Classes = sizes
                .iter()
                .map(|&size| {
                    below += size;
                    ((2 * below + 1 - size) as u64, size)
                })
                .collect();
            let mut seen: Vec<Barriers> = Vec::new();
            for_each(&sizes, |order| {
                seen.push(Barriers::reached_by(&order.iter().map(|&value| classes[value].0).collect::<Vec<_>>()));
            });
            for barriers in [seen[0], seen[seen.len() / 2], seen[seen.len() / 3]] {
                let share =
                    |counts: &dyn Fn(&Barriers) -> bool| seen.iter().filter(|one| counts(one)).count() as f64 / seen.len() as f64;
                let got = strays(&classes, barriers);
                assert!((got.up - share(&|one| one.up >= barriers.up)).abs() < 1e-13, "{sizes:?} {barriers:?}");
                assert!((got.down - share(&|one| one.down >= barriers.down)).abs() < 1e-13, "{sizes:?} {barriers:?}");
                assert!((got.either - share(&|one| one.either >= barriers.either)).abs() < 1e-13, "{sizes:?} {barriers:?}");
            }
        }
    }
}
