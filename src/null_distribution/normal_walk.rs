//! How far the standardised partial sums of normal readings stray, when mean and standard deviation are estimated.
//!
//! The deviations of n normal readings from their mean, divided by the root of their sum of squares, point in a random
//! direction of n - 1 dimensions. Each statistic is the largest of a family of contrasts, sums over some neighbouring readings.
//! The square of one contrast follows a beta distribution, so the chance that one given contrast reaches a size is known,
//! and the sum of these chances is an upper bound for the chance that the largest does.
//!
//! Small chances are simulated from this bound: a contrast is drawn by its share of the bound, a direction is drawn in which
//! that contrast reaches the size, and the share of the bound that is not counted twice is the mean of one over the number of
//! contrasts that reach it. The relative error then stays small however small the chance is. Where the bound exceeds 1,
//! directions are drawn and those in which the largest contrast reaches the size are counted.
//!
//! Sources: K. J. Worsley (1979), On the likelihood ratio test for a shift in location of normal populations, *Journal of the
//! American Statistical Association* 74, 365-367 (the bound). A. B. Owen, Y. Maximov and M. Chertkov (2019), Importance
//! sampling the union of rare events, *Electronic Journal of Statistics* 13, 231-254 (the simulation).

use super::beta;
use super::draws::Draws;

/// Which family of contrasts is meant. All sizes are in units of the root of the sum of squares about the mean.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Family {
    /// The partial sums.
    PartialSums,
    /// The differences between two partial sums, the empty one among them; the largest is their range.
    Differences,
    /// The partial sums, each divided by its own standard deviation; sizes lie between 0 and 1.
    Standardised,
}

/// The largest contrast of a family, in absolute value or towards one side.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct LargestContrast {
    /// The family.
    pub family: Family,
    /// How many readings there are, at least 3.
    pub readings: usize,
    /// Whether only one sign counts. Differences always count with both signs.
    pub one_sided: bool,
}

/// A simulated chance and its standard error.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Simulated {
    /// The chance.
    pub chance: f64,
    /// Its standard error.
    pub error: f64,
}

/// The fewest readings for which small chances are simulated from the bound.
const FEWEST_FOR_BOUND: usize = 8;

impl LargestContrast {
    /// An upper bound for the chance that the largest contrast reaches `size`. The empty sum is among the contrasts, so that a
    /// size of 0 is always reached.
    pub fn upper_bound(&self, size: f64) -> f64 {
        if size > 0.0 { self.weights(size).iter().sum::<f64>().min(1.0) } else { 1.0 }
    }

    /// The chance itself by `rounds` draws.
    pub fn simulate(&self, size: f64, rounds: u32, draws: &mut Draws) -> Simulated {
        if size <= 0.0 {
            return Simulated { chance: 1.0, error: 0.0 };
        }
        let weights = self.weights(size);
        let bound: f64 = weights.iter().sum();
        if bound <= 1.0 && self.readings >= FEWEST_FOR_BOUND {
            self.simulate_from_bound(size, &weights, bound, rounds, draws)
        } else {
            self.simulate_plainly(size, rounds, draws)
        }
    }

    /// The chances that contrasts over 1, 2, ... readings reach the size, all contrasts over as many readings together.
    fn weights(&self, size: f64) -> Vec<f64> {
        (1..self.readings).map(|length| self.contrasts(length) as f64 * self.chance_of_one(size, length)).collect()
    }

    /// How many contrasts there are over `length` readings.
    fn contrasts(&self, length: usize) -> usize {
        if self.family == Family::Differences { self.readings - length } else { 1 }
    }

    /// The standard deviation of a sum over `length` readings.
    fn deviation(&self, length: usize) -> f64 {
        let (n, length) = (self.readings as f64, length as f64);
        (length * (n - length) / n).sqrt()
    }

    /// The size that a contrast over `length` readings has to reach, in its own standard deviations.
    fn height(&self, size: f64, length: usize) -> f64 {
        if self.family == Family::Standardised { size } else { size / self.deviation(length) }
    }

    fn is_one_sided(&self) -> bool {
        self.one_sided && self.family != Family::Differences
    }

    fn chance_of_one(&self, size: f64, length: usize) -> f64 {
        let height = self.height(size, length);
        if height >= 1.0 {
            return 0.0;
        }
        let square = height * height;
        let both = beta::upper_tail(0.5, (self.readings as f64 - 2.0) / 2.0, square, 1.0 - square);
        if self.is_one_sided() { both / 2.0 } else { both }
    }

    fn simulate_plainly(&self, size: f64, rounds: u32, draws: &mut Draws) -> Simulated {
        let mut deviations = vec![0.0; self.readings];
        let mut hits = 1.0;
        for _ in 0..rounds {
            draw_direction(&mut deviations, draws);
            hits += f64::from(u8::from(self.count(&deviations, size) > 0));
        }
        let rounds = f64::from(rounds);
        let chance = hits / (rounds + 1.0);
        Simulated { chance, error: (chance * (1.0 - chance) / rounds).sqrt() }
    }

    fn simulate_from_bound(&self, size: f64, weights: &[f64], bound: f64, rounds: u32, draws: &mut Draws) -> Simulated {
        if bound == 0.0 {
            return Simulated { chance: 0.0, error: 0.0 };
        }
        let n = self.readings;
        let mut deviations = vec![0.0; n];
        let (mut sum, mut squares) = (0.0, 0.0);
        for _ in 0..rounds {
            let length = pick(weights, draws.unit() * bound) + 1;
            let start = draws.below(self.contrasts(length) as u64) as usize;
            let height = self.height(size, length);
            let along = draw_beyond(height, n, draws) * if self.is_one_sided() || draws.unit() < 0.5 { 1.0 } else { -1.0 };
            // The contrast as a vector of length 1: one value inside, another one outside.
            let scale = 1.0 / self.deviation(length);
            let (inside, outside) = (scale * (1.0 - length as f64 / n as f64), -scale * length as f64 / n as f64);
            let value = |place: usize| if place >= start && place < start + length { inside } else { outside };
            draw_direction(&mut deviations, draws);
            let shared: f64 = deviations.iter().enumerate().map(|(place, deviation)| deviation * value(place)).sum();
            let across = ((1.0 - along * along) / (1.0 - shared * shared)).sqrt();
            for (place, deviation) in deviations.iter_mut().enumerate() {
                *deviation = along * value(place) + across * (*deviation - shared * value(place));
            }
            // The drawn contrast reaches the size, even if rounding hides it.
            let share = 1.0 / self.count(&deviations, size).max(1) as f64;
            sum += share;
            squares += share * share;
        }
        let rounds = f64::from(rounds);
        let mean = sum / rounds;
        let variance = (squares / rounds - mean * mean).max(0.0);
        Simulated { chance: bound * mean, error: bound * (variance / rounds).sqrt() }
    }

    /// How many contrasts reach the size.
    fn count(&self, deviations: &[f64], size: f64) -> usize {
        let mut sums: Vec<f64> = partial_sums(deviations);
        let reaches = |sum: f64, size: f64| sum >= size || !self.one_sided && -sum >= size;
        match self.family {
            Family::PartialSums => sums.iter().filter(|&&sum| reaches(sum, size)).count(),
            Family::Standardised => {
                (1..).zip(&sums).filter(|&(length, &sum)| reaches(sum, size * self.deviation(length))).count()
            }
            Family::Differences => {
                sums.push(0.0);
                sums.sort_unstable_by(f64::total_cmp);
                let mut below = 0;
                sums.iter()
                    .map(|high| {
                        while below < sums.len() && high - sums[below] >= size {
                            below += 1;
                        }
                        below
                    })
                    .sum()
            }
        }
    }
}

/// The sums of the first 1, 2, ... deviations, the sum of all left out.
pub fn partial_sums(deviations: &[f64]) -> Vec<f64> {
    let mut sum = 0.0;
    let first = deviations.iter().take(deviations.len().saturating_sub(1));
    first
        .map(|deviation| {
            sum += deviation;
            sum
        })
        .collect()
}

/// Deviations of normal numbers from their mean, scaled to a sum of squares of 1.
fn draw_direction(deviations: &mut [f64], draws: &mut Draws) {
    loop {
        deviations.fill_with(|| draws.normal());
        let mean = deviations.iter().sum::<f64>() / deviations.len() as f64;
        deviations.iter_mut().for_each(|deviation| *deviation -= mean);
        let length = deviations.iter().map(|deviation| deviation * deviation).sum::<f64>().sqrt();
        if length > 0.0 {
            return deviations.iter_mut().for_each(|deviation| *deviation /= length);
        }
    }
}

/// One coordinate of a random direction in `readings` - 1 dimensions, given that it exceeds `height`, for at least 5 readings.
///
/// Its density falls with (1 - v²)^((readings - 4)/2), which lies below an exponential that touches it at `height`.
fn draw_beyond(height: f64, readings: usize, draws: &mut Draws) -> f64 {
    let power = (readings as f64 - 4.0) / 2.0;
    let rest = 1.0 - height * height;
    let rate = 2.0 * power * height / rest;
    loop {
        let excess = -(1.0 - draws.unit()).ln() / rate;
        let value = height + excess;
        if value < 1.0 && draws.unit() < (power * ((1.0 - value * value) / rest).ln() + rate * excess).exp() {
            return value;
        }
    }
}

/// The place at which the running total of the weights passes `target`.
fn pick(weights: &[f64], target: f64) -> usize {
    let mut total = 0.0;
    for (place, weight) in weights.iter().enumerate() {
        total += weight;
        if target < total {
            return place;
        }
    }
    weights.iter().rposition(|weight| *weight > 0.0).unwrap_or(0)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn largest(family: Family, readings: usize, one_sided: bool) -> LargestContrast {
        LargestContrast { family, readings, one_sided }
    }

    /// Where both are possible, drawing from the bound and counting agree within their errors.
    #[test]
    fn both_simulations_agree() {
        for (contrast, size) in [
            (largest(Family::PartialSums, 20, false), 1.25),
            (largest(Family::PartialSums, 20, true), 1.2),
            (largest(Family::Differences, 20, false), 1.55),
            (largest(Family::Standardised, 20, false), 0.62),
            (largest(Family::Standardised, 20, true), 0.6),
        ] {
            let weights = contrast.weights(size);
            let bound: f64 = weights.iter().sum();
            assert!(bound < 1.0, "{contrast:?} {bound}");
            let drawn = contrast.simulate_from_bound(size, &weights, bound, 20_000, &mut Draws::seeded(3));
            let counted = contrast.simulate_plainly(size, 60_000, &mut Draws::seeded(4));
            let error = drawn.error.hypot(counted.error);
            assert!((drawn.chance - counted.chance).abs() < 4.0 * error, "{contrast:?}: {drawn:?} {counted:?}");
            assert!(drawn.chance <= bound);
        }
    }

    /// Near the largest possible size only one contrast can reach it, so that the bound is the chance itself.
    #[test]
    fn far_out_the_bound_is_the_chance() {
        for contrast in [largest(Family::Standardised, 10, false), largest(Family::Standardised, 10, true)] {
            let bound = contrast.upper_bound(0.98);
            let drawn = contrast.simulate(0.98, 1_000, &mut Draws::seeded(5));
            assert!((drawn.chance - bound).abs() < 1e-12 * bound && bound < 1e-3, "{drawn:?} {bound:e}");
        }
    }

    /// Three readings: the deviations point in a random direction of a plane, and the larger of two partial sums reaches a
    /// size on four arcs, which overlap for small sizes.
    #[test]
    fn three_readings() {
        let contrast = largest(Family::Standardised, 3, false);
        let size: f64 = 0.95;
        let expected = 4.0 * size.acos() / std::f64::consts::PI;
        assert!((contrast.upper_bound(size) - expected).abs() < 1e-12);
        let drawn = contrast.simulate(size, 40_000, &mut Draws::seeded(6));
        assert!((drawn.chance - expected).abs() < 4.0 * drawn.error, "{drawn:?} {expected}");
    }

    #[test]
    fn the_empty_sum_is_always_reached() {
        let contrast = largest(Family::PartialSums, 12, true);
        assert_eq!((contrast.upper_bound(0.0), contrast.simulate(0.0, 1_000, &mut Draws::seeded(7)).chance), (1.0, 1.0));
    }

    /// Every pair of partial sums against every other one.
    #[test]
    fn differences_are_counted_pair_by_pair() {
        let deviations = [0.3, -0.5, 0.1, 0.4, -0.2, -0.1];
        let mut sums = partial_sums(&deviations);
        sums.push(0.0);
        let contrast = largest(Family::Differences, 6, false);
        for size in [0.05, 0.21, 0.3, 0.45, 0.6] {
            let pairs = (0..6).flat_map(|i| (0..i).map(move |j| (i, j)));
            let naive = pairs.filter(|&(i, j)| (sums[i] - sums[j]).abs() >= size).count();
            assert_eq!(contrast.count(&deviations, size), naive, "{size}");
        }
    }
}
