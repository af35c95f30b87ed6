//! The number of turning points, and of runs up and down, when readings stand in random order, equal readings among them.
//!
//! Without equal readings, André's recursion: the highest of n readings is put into the order of the others, and
//! n P(n, r) = r P(n-1, r) + 2 P(n-1, r-1) + (n - r) P(n-1, r-2), where P(n, r) is the chance of r runs up and down.
//!
//! With equal readings, values enter from the lowest to the highest, and what has entered is kept as pieces that higher
//! values will later join. Equal neighbours form a block. A block between two pieces joins them and is a peak; a block
//! that stands alone begins a piece and is a trough; a block beside one piece lengthens it and is passed through; a block
//! may also begin or end the order. Only positive products are added.
//!
//! Sources: D. André (1884), Étude sur les maxima, minima et séquences des permutations, *Annales scientifiques de l'École
//! Normale Supérieure* (3) 1, 121-134. W. A. Wallis and G. H. Moore (1941), A significance test for time series analysis,
//! *Journal of the American Statistical Association* 36, 401-409. The recursion with equal readings was derived for this
//! program and is checked against all arrangements of up to eight readings.

use super::Lattice;
use super::pieces::{Pieces, Tally};
use super::strip::Strip;

/// What is counted, which matters only where neighbours are equal.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Counted {
    /// Turning points, equal neighbours taken as one reading. Runs up and down are one more.
    Turns,
    /// Turning points at a single reading.
    SharpTurns,
    /// Runs up and down less one, where a level step ends a run.
    UnbrokenRuns,
}

/// The most readings without ties for which the distribution is made; time grows with their square.
pub const MOST_UNTIED: usize = 2_000;

/// The most products that the distribution with equal readings may take; at most half a second on one core.
pub const MOST_PRODUCTS: f64 = 5e8;

/// The most steps that mean and variance with equal readings may take; about half a second on one core.
pub const MOST_STEPS: f64 = 2e7;

/// The number of turning points among `n` readings without ties, `n` at least 2.
pub fn untied(n: usize) -> Lattice {
    let mut mass = vec![1.0];
    for readings in 3..=n {
        let at = |turns: usize| mass.get(turns).copied().unwrap_or(0.0);
        let next = (0..readings - 1).map(|turns| {
            let runs = turns + 1;
            let stays = runs as f64 * at(turns);
            let one_more = if turns >= 1 { 2.0 * at(turns - 1) } else { 0.0 };
            let two_more = if turns >= 2 { (readings - runs) as f64 * at(turns - 2) } else { 0.0 };
            (stays + one_more + two_more) / readings as f64
        });
        mass = next.collect();
    }
    Lattice::new(0, 1, mass)
}

/// Mean and variance of the number of turning points among `n` readings without ties.
pub fn untied_moments(n: usize) -> (f64, f64) {
    let n = n as f64;
    (2.0 * (n - 2.0) / 3.0, if n > 2.0 { (16.0 * n - 29.0) / 90.0 } else { 0.0 })
}

/// The distribution of what is counted; `sizes` says how many readings have the lowest value, the next higher, and so on.
pub fn tied(sizes: &[usize], counted: Counted) -> Lattice {
    Pieces::<Strip>::of(sizes, counted).map_or_else(|| Lattice::constant(0), |strip| scaled_to_one(strip.into()))
}

/// About how many products [`tied`] takes.
pub fn effort(sizes: &[usize], counted: Counted) -> f64 {
    steps(sizes, counted) * sizes.iter().sum::<usize>() as f64 / 2.0
}

/// About how many steps [`tied_moments`] takes.
pub fn steps(sizes: &[usize], counted: Counted) -> f64 {
    Pieces::<Strip>::transitions(sizes, counted)
}

/// Mean and variance of what is counted.
pub fn tied_moments(sizes: &[usize], counted: Counted) -> (f64, f64) {
    let Some(sums) = Pieces::<PowerSums>::of(sizes, counted) else { return (0.0, 0.0) };
    let mean = sums.first / sums.total;
    (mean, sums.second / sums.total - mean * mean)
}

fn scaled_to_one(lattice: Lattice) -> Lattice {
    let total: f64 = lattice.points().map(|(_, mass)| mass).sum();
    Lattice::new(lattice.lowest(), 1, lattice.points().map(|(_, mass)| mass / total).collect())
}

/// The total of the chances, and the sums of the count and of its square weighted by them.
#[derive(Clone, Copy, Debug, Default)]
struct PowerSums {
    total: f64,
    first: f64,
    second: f64,
}

impl Tally for PowerSums {
    fn one() -> Self {
        PowerSums { total: 1.0, first: 0.0, second: 0.0 }
    }
    fn total(&self) -> f64 {
        self.total
    }
    fn add(&mut self, other: &Self, shift: usize, factor: f64) {
        let shift = shift as f64;
        self.total += factor * other.total;
        self.first += factor * (other.first + shift * other.total);
        self.second += factor * (other.second + shift * (2.0 * other.first + shift * other.total));
    }
}

impl Tally for Strip {
    fn one() -> Self {
        Strip::zero()
    }
    fn total(&self) -> f64 {
        Strip::total(self)
    }
    fn add(&mut self, other: &Self, shift: usize, factor: f64) {
        Strip::add(self, other, shift as i64, factor);
    }
}

#[cfg(test)]
mod tests {
    use super::super::arrangements::{for_each, sizes_to_try};
    use super::*;

    fn count(order: &[usize], counted: Counted) -> usize {
        let steps: Vec<i32> = order.windows(2).map(|pair| (pair[1] as i32 - pair[0] as i32).signum()).collect();
        match counted {
            Counted::Turns => {
                let sloped: Vec<&i32> = steps.iter().filter(|&&step| step != 0).collect();
                sloped.windows(2).filter(|pair| pair[0] != pair[1]).count()
            }
            Counted::SharpTurns => steps.windows(2).filter(|pair| pair[0] * pair[1] < 0).count(),
            Counted::UnbrokenRuns => {
                let begins = |i: usize| steps[i] != 0 && (i == 0 || steps[i - 1] != steps[i]);
                (0..steps.len()).filter(|&i| begins(i)).count() - 1
            }
        }
    }

    /// All arrangements of up to eight readings, with and without equal ones, counted one by one.
    #[test]
    fn agrees_with_all_arrangements() {
        for sizes in sizes_to_try(8) {
            for counted in [Counted::Turns, Counted::SharpTurns, Counted::UnbrokenRuns] {
                let mut counts = [0.0; 9];
                for_each(&sizes, |order| counts[count(order, counted)] += 1.0);
                let all: f64 = counts.iter().sum();
                let null = tied(&sizes, counted);
                for (value, count) in counts.iter().enumerate() {
                    let got = null.mass(value as i64);
                    assert!((got - count / all).abs() < 1e-13, "{sizes:?} {counted:?} {value}: {got} {}", count / all);
                }
                let mean = counts.iter().enumerate().map(|(value, count)| value as f64 * count / all).sum::<f64>();
                let square =
                    counts.iter().enumerate().map(|(value, count)| (value as f64 - mean).powi(2) * count / all).sum::<f64>();
                let got = tied_moments(&sizes, counted);
                assert!((got.0 - mean).abs() < 1e-12 && (got.1 - square).abs() < 1e-11, "{sizes:?} {counted:?}");
            }
        }
    }

    /// With all values different, both recursions give the same chances, the far tails included.
    #[test]
    fn both_recursions_agree_without_ties() {
        for n in [2, 3, 10, 60, 150] {
            let (recursion, pieces) = (untied(n), tied(&vec![1; n], Counted::Turns));
            for (value, mass) in recursion.points().filter(|(_, mass)| *mass > 1e-240) {
                assert!((pieces.mass(value) - mass).abs() <= 1e-11 * mass, "{n} {value}: {:e} {mass:e}", pieces.mass(value));
            }
        }
    }
}
