//! The path of Kendall's S from look to look, and the chance that it ever crosses a boundary.
//!
//! The newest of t readings exceeds some number of the earlier ones. Without a trend that number is uniform on 0 to t - 1 and
//! independent of all that went before, so S, the pairs that rise less those that fall, is a sum of independent steps. Its
//! distribution is carried from reading to reading; at each look the paths that cross are taken out and counted. The
//! chance of ever crossing any boundary is therefore exact. Only positive numbers are added, and what crosses is summed from
//! its far end.
//!
//! Sources: M. G. Kendall (1975), *Rank Correlation Methods*, 4th ed., chapter 5 (the steps). K. K. G. Lan and D. L. DeMets
//! (1983), Discrete sequential boundaries for clinical trials, *Biometrika* 70, 659-663 (boundaries that spend a risk).

use super::q_multinomial::first_sums_with_uniform;

/// The most readings that a path may have; time grows with their cube. One judging takes about a second in a build for tests.
pub const MOST_READINGS: u32 = 520;

/// Which excursions cross a boundary.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sides {
    /// Those above 0. For those below 0 turn the signs of S.
    One,
    /// Those to either side.
    Two,
}

/// A look at the readings so far.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Look {
    /// How many readings there are.
    pub readings: usize,
    /// The variance of S by now, as a share of that at the last look.
    pub information: f64,
    /// The least S that crosses, at least 1; `None` if no path could cross at this look.
    pub least: Option<i64>,
    /// The chance of having crossed by now.
    pub spent: f64,
}

/// A boundary for S at each look.
#[derive(Clone, Debug, PartialEq)]
pub struct Boundary {
    sides: Sides,
    looks: Vec<Look>,
}

/// How far a path has come in terms of a boundary: S at some look as a multiple of the boundary there.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Reach {
    /// S.
    pub score: i64,
    /// The boundary, positive.
    pub least: i64,
}

impl Reach {
    /// S as a multiple of the boundary.
    pub fn multiple(self) -> f64 {
        self.score as f64 / self.least as f64
    }

    /// Whether this is further than another reach.
    fn exceeds(self, other: Reach) -> bool {
        self.score * other.least > other.score * self.least
    }

    /// The least S that comes as far where the boundary is `least`.
    fn at(self, least: i64) -> i64 {
        -(-self.score * least).div_euclid(self.least)
    }
}

impl Boundary {
    /// The lowest boundary by which the chance of having crossed never exceeds the allowance, which is a function of the
    /// information; it is at least 1 everywhere. `looks` are numbers of readings in ascending order.
    pub fn spending(looks: &[usize], sides: Sides, allowance: impl Fn(f64) -> f64) -> Self {
        let whole = looks.last().map_or(1.0, |&last| variance(last));
        let mut paths = Paths::start();
        let mut spent = 0.0;
        let look = |&readings: &usize| {
            paths.advance_to(readings);
            let information = if whole > 0.0 { variance(readings) / whole } else { 1.0 };
            let least = paths.least_within(allowance(information) * (1.0 + 1e-14) - spent, sides);
            if let Some(least) = least {
                spent += paths.absorb(least, sides);
            }
            Look { readings, information, least, spent }
        };
        Boundary { sides, looks: looks.iter().map(look).collect() }
    }

    /// The looks with their boundaries.
    pub fn looks(&self) -> &[Look] {
        &self.looks
    }

    /// The furthest that S comes at the looks for which it is given, in the order of the looks; `None` if there was no
    /// boundary at any of them.
    pub fn reach(&self, scores: &[i64]) -> Option<Reach> {
        let reaches = self.looks.iter().zip(scores).filter_map(|(look, &score)| Some(Reach { score, least: look.least? }));
        reaches.reduce(|furthest, reach| if reach.exceeds(furthest) { reach } else { furthest })
    }

    /// The chance that a path comes as far at any of the looks, those to come included.
    pub fn chance(&self, reach: Reach) -> f64 {
        let mut paths = Paths::start();
        let mut chance = 0.0;
        for look in &self.looks {
            paths.advance_to(look.readings);
            if let Some(least) = look.least {
                chance += paths.absorb(reach.at(least), self.sides);
            }
        }
        chance.min(1.0)
    }
}

/// The variance of S without a trend and without ties.
fn variance(readings: usize) -> f64 {
    let n = readings as f64;
    n * (n - 1.0) * (2.0 * n + 5.0) / 18.0
}

/// The paths that have not crossed yet: the chance of each number of pairs that rise.
struct Paths {
    readings: usize,
    rises: Vec<f64>,
}

impl Paths {
    fn start() -> Self {
        Paths { readings: 1, rises: vec![1.0] }
    }

    fn pairs(&self) -> usize {
        self.readings * (self.readings - 1) / 2
    }

    fn advance_to(&mut self, readings: usize) {
        while self.readings < readings {
            self.readings += 1;
            let sums = self.rises.len() + self.readings - 1;
            self.rises = first_sums_with_uniform(&self.rises, self.readings, sums);
        }
    }

    /// The least positive S that is reached or exceeded with no more than the given chance.
    fn least_within(&self, chance: f64, sides: Sides) -> Option<i64> {
        let pairs = self.pairs();
        let at = |rises: usize| self.rises.get(rises).copied().unwrap_or(0.0);
        let (mut sum, mut least) = (0.0, None);
        for rises in (pairs / 2 + 1..=pairs).rev() {
            sum += at(rises) + if sides == Sides::Two { at(pairs - rises) } else { 0.0 };
            if sum > chance {
                break;
            }
            least = Some(2 * rises as i64 - pairs as i64);
        }
        least
    }

    /// Takes out the paths whose S is at least `least`, with `Sides::Two` also those whose S is at most -`least`, and
    /// gives their chance.
    fn absorb(&mut self, least: i64, sides: Sides) -> f64 {
        let pairs = self.pairs() as i64;
        let first = ((least + pairs + 1).div_euclid(2)).clamp(0, self.rises.len() as i64) as usize;
        let mut taken: f64 = self.rises.drain(first..).rev().sum();
        if sides == Sides::Two {
            let beyond = ((pairs - least).div_euclid(2) + 1).clamp(0, self.rises.len() as i64) as usize;
            let lowest = &mut self.rises[..beyond];
            taken += lowest.iter().sum::<f64>();
            lowest.fill(0.0);
        }
        taken
    }
}

#[cfg(test)]
mod tests {
    use super::super::arrangements::for_each;
    use super::*;

    /// S after each reading.
    fn path(order: &[usize]) -> Vec<i64> {
        let mut s = 0;
        let mut after = |newest: usize| {
            s += order[..newest].iter().map(|&earlier| (order[newest] as i64 - earlier as i64).signum()).sum::<i64>();
            s
        };
        (0..order.len()).map(&mut after).collect()
    }

    /// The share of all orders of `n` readings whose path is picked out.
    fn share(n: usize, picked: impl Fn(&[i64]) -> bool) -> f64 {
        let (mut all, mut counted) = (0.0, 0.0);
        for_each(&vec![1; n], |order| {
            all += 1.0;
            counted += f64::from(u8::from(picked(&path(order))));
        });
        counted / all
    }

    /// All orders of up to eight readings, their crossings counted one by one, for looks at every reading and at some.
    #[test]
    fn crossings_agree_with_all_orders() {
        for (n, looks) in [(4, vec![2, 3, 4]), (6, vec![3, 5, 6]), (7, vec![4, 7]), (8, (3..=8).collect())] {
            for sides in [Sides::One, Sides::Two] {
                for risk in [0.05, 0.2, 0.4] {
                    let boundary = Boundary::spending(&looks, sides, |information| risk * information);
                    let scores = |path: &[i64]| -> Vec<i64> {
                        let side = |s: i64| if sides == Sides::Two { s.abs() } else { s };
                        looks.iter().map(|&readings| side(path[readings - 1])).collect()
                    };
                    for (number, look) in boundary.looks().iter().enumerate() {
                        let crossed = |path: &[i64]| {
                            let so_far = boundary.looks()[..=number].iter().zip(scores(path));
                            so_far.into_iter().any(|(look, s)| look.least.is_some_and(|least| s >= least))
                        };
                        let expected = share(n, crossed);
                        assert!((look.spent - expected).abs() < 1e-13, "{n} {sides:?} {look:?}: {expected}");
                        assert!(look.spent <= risk * look.information * (1.0 + 1e-12));
                    }
                    for reach in [Reach { score: 1, least: 1 }, Reach { score: 5, least: 7 }, Reach { score: 9, least: 8 }] {
                        let as_far = |path: &[i64]| boundary.reach(&scores(path)).is_some_and(|other| !reach.exceeds(other));
                        let expected = share(n, as_far);
                        assert!((boundary.chance(reach) - expected).abs() < 1e-13, "{n} {sides:?} {reach:?}: {expected}");
                    }
                }
            }
        }
    }

    /// A boundary one lower at any look would spend more than is allowed.
    #[test]
    fn the_boundary_is_the_lowest_allowed() {
        let looks: Vec<usize> = (4..=12).collect();
        let boundary = Boundary::spending(&looks, Sides::One, |information| 0.1 * information);
        for (number, look) in boundary.looks().iter().enumerate() {
            let mut paths = Paths::start();
            let mut spent = 0.0;
            for (index, before) in boundary.looks()[..=number].iter().enumerate() {
                paths.advance_to(before.readings);
                let lower = before.least.map_or((before.readings * (before.readings - 1) / 2) as i64, |least| least - 2);
                let least = if index == number { Some(lower) } else { before.least };
                spent += least.map_or(0.0, |least| paths.absorb(least, Sides::One));
            }
            assert!(spent > 0.1 * look.information, "{look:?} {spent}");
        }
    }
}
