//! A statistic that takes evenly spaced values, each with its chance.

use super::Tails;

/// The null distribution of a whole-number statistic with values `first`, `first + step`, and so on.
#[derive(Clone, Debug, PartialEq)]
pub struct Lattice {
    first: i64,
    step: i64,
    mass: Vec<f64>,
}

impl Lattice {
    /// `step` is at least 1, and `mass` holds the chance of each value in turn. Values at the ends that have no chance
    /// are taken off.
    pub fn new(first: i64, step: i64, mut mass: Vec<f64>) -> Self {
        let step = step.max(1);
        let leading = mass.iter().take_while(|&&chance| chance == 0.0).count();
        mass.drain(..leading);
        mass.truncate(mass.len() - mass.iter().rev().take_while(|&&chance| chance == 0.0).count());
        Lattice { first: first + leading as i64 * step, step, mass }
    }

    /// A statistic that has one value only.
    pub fn constant(value: i64) -> Self {
        Lattice::new(value, 1, vec![1.0])
    }

    /// The chance of exactly `value`.
    pub fn mass(&self, value: i64) -> f64 {
        let offset = value - self.first;
        if offset < 0 || offset % self.step != 0 {
            return 0.0;
        }
        self.mass.get((offset / self.step) as usize).copied().unwrap_or(0.0)
    }

    /// All values with their chances, the lowest first.
    pub fn points(&self) -> impl DoubleEndedIterator<Item = (i64, f64)> + ExactSizeIterator + '_ {
        self.mass.iter().enumerate().map(|(index, &mass)| (self.first + index as i64 * self.step, mass))
    }

    /// The lowest value.
    pub fn lowest(&self) -> i64 {
        self.first
    }

    /// The highest value.
    pub fn highest(&self) -> i64 {
        self.first + (self.mass.len() as i64 - 1) * self.step
    }

    /// Both tails of an observed value, which need not be one of the lattice's own. Each is summed from its far end.
    pub fn tails(&self, value: i64) -> Tails {
        let lower: f64 = self.points().take_while(|&(point, _)| point <= value).map(|(_, mass)| mass).sum();
        let upper: f64 = self.points().rev().take_while(|&(point, _)| point >= value).map(|(_, mass)| mass).sum();
        Tails { lower: lower.min(1.0), upper: upper.min(1.0) }
    }

    /// Both tails of a value, on the safe side where it lies between two points: each tail then includes the point beyond it.
    pub fn safe_tails(&self, value: i64) -> Tails {
        let past = (value - self.first).rem_euclid(self.step);
        let (below, above) = (value - past, if past == 0 { value } else { value - past + self.step });
        Tails { lower: self.tails(above).lower, upper: self.tails(below).upper }
    }

    /// The chances of the lowest and of the highest value: the smallest tails that can be reached.
    pub fn extremes(&self) -> Tails {
        let chance = |end: Option<&f64>| end.map_or(1.0, |mass| mass.min(1.0));
        Tails { lower: chance(self.mass.first()), upper: chance(self.mass.last()) }
    }

    /// The chance of all values for which `counts` says yes.
    pub fn chance_of(&self, counts: impl Fn(i64) -> bool) -> f64 {
        self.points().filter(|&(point, _)| counts(point)).map(|(_, mass)| mass).sum::<f64>().min(1.0)
    }

    /// The distribution of the statistic times a positive whole number.
    pub fn times(self, factor: i64) -> Lattice {
        Lattice { first: self.first * factor, step: self.step * factor, mass: self.mass }
    }

    /// The distribution of the sum of this statistic and an independent one.
    pub fn plus(&self, other: &Lattice) -> Lattice {
        if self.step != other.step {
            let step = common_step(self.step, other.step);
            return self.with_step(step).plus(&other.with_step(step));
        }
        Lattice { first: self.first + other.first, step: self.step, mass: convolve(&self.mass, &other.mass) }
    }

    /// The same distribution with a step of which its own is a multiple.
    fn with_step(&self, step: i64) -> Lattice {
        let apart = (self.step / step) as usize;
        let mut mass = vec![0.0; self.mass.len().saturating_sub(1) * apart + 1];
        for (index, &chance) in self.mass.iter().enumerate() {
            mass[index * apart] = chance;
        }
        Lattice { first: self.first, step, mass }
    }
}

/// The largest step of which both are multiples.
fn common_step(a: i64, b: i64) -> i64 {
    if b == 0 { a } else { common_step(b, a % b) }
}

/// The chances of the sum of two independent counts from 0; only positive products are added.
pub fn convolve(a: &[f64], b: &[f64]) -> Vec<f64> {
    let (long, short) = if a.len() >= b.len() { (a, b) } else { (b, a) };
    let mut sum = vec![0.0; (long.len() + short.len()).saturating_sub(1)];
    for (shift, &factor) in short.iter().enumerate().filter(|(_, factor)| **factor != 0.0) {
        add_scaled(&mut sum[shift..], long, factor);
    }
    sum
}

/// Adds `factor` times each of `chances` to the targets in turn.
pub fn add_scaled(targets: &mut [f64], chances: &[f64], factor: f64) {
    for (target, &chance) in targets.iter_mut().zip(chances) {
        *target += factor * chance;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Two dice: 36 equally probable outcomes, counted by hand.
    #[test]
    fn two_dice() {
        let die = Lattice::new(1, 1, vec![1.0 / 6.0; 6]);
        let dice = die.plus(&die);
        assert_eq!((dice.lowest(), dice.highest()), (2, 12));
        assert!((dice.tails(10).upper - 6.0 / 36.0).abs() < 1e-15);
        assert!((dice.tails(4).lower - 6.0 / 36.0).abs() < 1e-15);
        assert!((dice.mass(7) - 6.0 / 36.0).abs() < 1e-15);
        assert!((dice.chance_of(|sum| (sum - 7).abs() >= 5) - 2.0 / 36.0).abs() < 1e-15);
    }

    /// A coin that counts 0 or 6 and one that counts 0 or 4.
    #[test]
    fn steps_may_differ() {
        let coins = Lattice::new(0, 6, vec![0.5, 0.5]).plus(&Lattice::new(0, 4, vec![0.5, 0.5]));
        let points: Vec<_> = coins.points().filter(|(_, mass)| *mass > 0.0).collect();
        assert_eq!(points, [(0, 0.25), (4, 0.25), (6, 0.25), (10, 0.25)]);
    }

    #[test]
    fn values_between_the_points_belong_to_no_point() {
        let coin = Lattice::new(-1, 2, vec![0.5, 0.5]);
        assert_eq!((coin.tails(0).lower, coin.tails(0).upper, coin.mass(0)), (0.5, 0.5, 0.0));
        assert_eq!((coin.safe_tails(0).lower, coin.safe_tails(0).upper, coin.safe_tails(1).upper), (1.0, 1.0, 0.5));
    }
}
