//! The slopes between all pairs of readings from different moments, and those at given places when the slopes are sorted.
//!
//! Up to a thousand readings all slopes are computed. Beyond that the wanted one is closed in on: a slope lies below a cut if
//! the two readings change their order when that much slope is taken off, so the slopes below a cut are counted while
//! sorting, in n log n steps, and slopes drawn at random among those still in question give the next cuts.
//!
//! Sources: P. K. Sen (1968), Estimates of the regression coefficient based on Kendall's tau, *Journal of the American
//! Statistical Association* 63, 1379-1389. J. Matoušek (1991), Randomized optimal algorithm for slope selection, *Information
//! Processing Letters* 39, 183-187. M. B. Dillencourt, D. M. Mount and N. S. Netanyahu (1992), A randomized algorithm for
//! slope selection, *International Journal of Computational Geometry and Applications* 2, 1-27.

/// Readings as points, those of one block apart from those of another; only points of one block are joined.
#[derive(Clone, Debug, PartialEq)]
pub struct Slopes {
    blocks: Vec<Vec<Point>>,
    pairs: u64,
    /// The rounding error of a residual, and the least distance in time.
    error: f64,
    least_distance: f64,
}

/// A reading at a time.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Point {
    pub time: f64,
    pub value: f64,
}

/// Up to so many pairs, all slopes are computed at once.
const FEW_PAIRS: u64 = 500_000;
/// How many slopes are drawn at random in each round.
const DRAWN: u64 = 20_000;

impl Slopes {
    /// Slopes within one block.
    pub fn new(points: Vec<Point>) -> Self {
        Slopes::within(vec![points])
    }

    /// Slopes within several blocks.
    pub fn within(mut blocks: Vec<Vec<Point>>) -> Self {
        let mut pairs = 0;
        let (mut reach, mut least_distance) = (0.0_f64, f64::INFINITY);
        for block in &mut blocks {
            block.sort_by(|a, b| a.time.total_cmp(&b.time).then(a.value.total_cmp(&b.value)));
            // Slopes stay the same when a point of the block becomes the origin, and residuals are then rounded less.
            let origin = block.get(block.len() / 2).copied().unwrap_or(Point { time: 0.0, value: 0.0 });
            for point in block.iter_mut() {
                point.time -= origin.time;
                point.value -= origin.value;
                reach = reach.max(point.value.abs());
            }
            for pair in block.windows(2).filter(|pair| pair[1].time > pair[0].time) {
                least_distance = least_distance.min(pair[1].time - pair[0].time);
            }
            let at_one_moment = block.chunk_by(|a, b| a.time == b.time).map(|points| super::rises::pairs(points.len()));
            pairs += super::rises::pairs(block.len()) - at_one_moment.sum::<u64>();
        }
        Slopes { blocks, pairs, error: 16.0 * f64::EPSILON * reach, least_distance }
    }

    /// How many slopes there are.
    pub fn count(&self) -> u64 {
        self.pairs
    }

    /// The median slope: the mean of the two middle ones where their number is even.
    pub fn median(&self) -> Option<f64> {
        if self.pairs == 0 {
            return None;
        }
        let (low, high) = (self.pairs.div_ceil(2), self.pairs / 2 + 1);
        let middle = self.at_ranks(&[low, high]);
        Some(middle[0] + (middle[1] - middle[0]) / 2.0)
    }

    /// The slopes at ranks, 1 being the lowest. Ranks outside 1 to [`count`](Self::count) give minus or plus infinity.
    pub fn at_ranks(&self, ranks: &[u64]) -> Vec<f64> {
        let outside = |rank: u64| if rank == 0 { Some(f64::NEG_INFINITY) } else { (rank > self.pairs).then_some(f64::INFINITY) };
        if self.pairs <= FEW_PAIRS {
            let mut all = Vec::with_capacity(self.pairs as usize);
            self.each_between(f64::NEG_INFINITY, f64::INFINITY, &mut |slope| all.push(slope));
            let mut select = |rank: u64| *all.select_nth_unstable_by(rank as usize - 1, f64::total_cmp).1;
            return ranks.iter().map(|&rank| outside(rank).unwrap_or_else(|| select(rank))).collect();
        }
        let mut found: Vec<f64> = Vec::with_capacity(ranks.len());
        for (place, &rank) in ranks.iter().enumerate() {
            // The slope next to one that was just closed in on lies among the same few.
            let slope = match outside(rank) {
                Some(infinite) => infinite,
                None if place > 0 && ranks[place - 1] == rank => found[place - 1],
                None if ranks.get(place + 1) == Some(&(rank + 1)) && rank < self.pairs => {
                    let both = self.closed_in(rank, 2);
                    found.extend(both);
                    continue;
                }
                None if found.len() > place => continue,
                None => self.closed_in(rank, 1)[0],
            };
            if found.len() == place {
                found.push(slope);
            }
        }
        found
    }

    /// The slopes at a rank and at the `count` - 1 ranks after it, by closing in on them.
    fn closed_in(&self, rank: u64, count: u64) -> Vec<f64> {
        let (mut low, mut high) = (f64::NEG_INFINITY, f64::INFINITY);
        let (mut below, mut inside) = (0, self.pairs);
        let mut draws = Draws(rank ^ self.pairs);
        while inside > FEW_PAIRS {
            let mut drawn = self.drawn(low, high, inside, &mut draws);
            drawn.sort_unstable_by(f64::total_cmp);
            let Some(last) = drawn.len().checked_sub(1) else { break };
            // Where the rank falls among the drawn slopes, give or take five standard deviations.
            let share = (rank - below) as f64 / inside as f64;
            let centre = share * drawn.len() as f64;
            let margin = 5.0 * (drawn.len() as f64 * share * (1.0 - share)).sqrt() + 2.0;
            let at = |place: f64| drawn[(place.max(0.0) as usize).min(last)];
            let (first, second) = (at(centre - margin), at(centre + margin));
            let cut_low = if centre - margin < 0.0 { low } else { (first - self.slack(first)).max(low) };
            let cut_high = if centre + margin > last as f64 { high } else { (second + self.slack(second)).min(high) };
            let (below_low, below_high) = (self.below(cut_low), self.below(cut_high));
            let last_rank = rank + count - 1;
            if last_rank <= below_low {
                (high, inside) = (cut_low, below_low - below);
            } else if rank > below_high {
                inside = below + inside - below_high;
                (low, below) = (cut_high, below_high);
            } else if rank <= below_low || last_rank > below_high {
                // The ranks lie on both sides of a cut; the next slopes drawn cut elsewhere.
                continue;
            } else if first == second && cut_low > low && cut_high < high {
                return vec![first; count as usize];
            } else if cut_low == low && cut_high == high {
                break;
            } else {
                (low, high, below, inside) = (cut_low, cut_high, below_low, below_high - below_low);
            }
        }
        let mut all = Vec::with_capacity(inside as usize);
        self.each_between(low, high, &mut |slope| all.push(slope));
        if all.is_empty() {
            return vec![low.max(f64::MIN); count as usize];
        }
        let mut place = |rank: u64| {
            let place = ((rank - below).saturating_sub(1) as usize).min(all.len() - 1);
            *all.select_nth_unstable_by(place, f64::total_cmp).1
        };
        (rank..rank + count).map(&mut place).collect()
    }

    /// How far a cut must lie from a slope to be on the same side of it for all pairs, whatever is rounded.
    fn slack(&self, slope: f64) -> f64 {
        let times = self.blocks.iter().flat_map(|block| [block.first(), block.last()]).flatten().map(|point| point.time.abs());
        let residual_error = self.error + 16.0 * f64::EPSILON * slope.abs() * times.fold(0.0, f64::max);
        residual_error / self.least_distance + 4.0 * f64::EPSILON * slope.abs()
    }

    /// How many slopes lie below a cut.
    fn below(&self, cut: f64) -> u64 {
        if cut == f64::NEG_INFINITY {
            return 0;
        }
        if cut == f64::INFINITY {
            return self.pairs;
        }
        self.blocks
            .iter()
            .map(|block| {
                let mut residuals: Vec<f64> = block.iter().map(|point| point.value - cut * point.time).collect();
                super::rises::sort_counting(&mut residuals)
            })
            .sum()
    }

    /// Slopes drawn at random among the `inside` ones between two cuts; each pair may be drawn several times.
    fn drawn(&self, low: f64, high: f64, inside: u64, draws: &mut Draws) -> Vec<f64> {
        let mut wanted: Vec<u64> = (0..DRAWN).map(|_| draws.below(inside)).collect();
        wanted.sort_unstable();
        let mut drawn = Vec::with_capacity(wanted.len());
        let (mut passed, mut next) = (0, 0);
        self.each_run_between(low, high, &mut |points, one, others| {
            let end = passed + others.len() as u64;
            while next < wanted.len() && wanted[next] < end {
                drawn.extend(slope(points[one], points[others[(wanted[next] - passed) as usize].index as usize]));
                next += 1;
            }
            passed = end;
        });
        drawn
    }

    fn each_between(&self, low: f64, high: f64, found: &mut dyn FnMut(f64)) {
        self.each_run_between(low, high, &mut |points, one, others| {
            others.iter().filter_map(|other| slope(points[one], points[other.index as usize])).for_each(&mut *found);
        });
    }

    /// Hands over every point together with the points to which its slope lies between two cuts.
    fn each_run_between(&self, low: f64, high: f64, found: &mut Runs) {
        for block in &self.blocks {
            if low == f64::NEG_INFINITY && high == f64::INFINITY {
                let all: Vec<Keyed> = (0..block.len() as u32).map(|index| Keyed { key: 0.0, index }).collect();
                for one in 0..block.len() {
                    let after = block[one..].partition_point(|other| other.time == block[one].time);
                    found(block, one, &all[one + after..]);
                }
                continue;
            }
            // In the order at the low cut, a pair with a slope between the cuts stands the other way round at the high one.
            let mut order: Vec<Keyed> =
                (0..).zip(block).map(|(index, point)| Keyed { key: point.value - low * point.time, index }).collect();
            if low != f64::NEG_INFINITY {
                order.sort_by(|a, b| a.key.total_cmp(&b.key));
            }
            for keyed in &mut order {
                let point = block[keyed.index as usize];
                keyed.key = if high == f64::INFINITY { -point.time } else { point.value - high * point.time };
            }
            merge_pairs(order, &mut |one, others| found(block, one, others));
        }
    }
}

/// Takes the points of a block, the place of one of them, and those to which its slope is wanted.
type Runs<'a> = dyn FnMut(&[Point], usize, &[Keyed]) + 'a;

/// A point of a block, and by what it is sorted.
#[derive(Clone, Copy)]
struct Keyed {
    key: f64,
    index: u32,
}

/// Hands over each point with the run of points before it whose key is higher.
fn merge_pairs(mut from: Vec<Keyed>, found: &mut dyn FnMut(usize, &[Keyed])) {
    let mut to = from.clone();
    let mut width = 1;
    while width < from.len() {
        for (from, to) in from.chunks(2 * width).zip(to.chunks_mut(2 * width)) {
            let (left, right) = from.split_at(width.min(from.len()));
            let (mut i, mut j) = (0, 0);
            for place in to {
                if j == right.len() || i < left.len() && left[i].key <= right[j].key {
                    *place = left[i];
                    i += 1;
                } else {
                    found(right[j].index as usize, &left[i..]);
                    *place = right[j];
                    j += 1;
                }
            }
        }
        std::mem::swap(&mut from, &mut to);
        width *= 2;
    }
}

/// The slope between two points of different times.
fn slope(a: Point, b: Point) -> Option<f64> {
    (a.time != b.time).then(|| (b.value - a.value) / (b.time - a.time))
}

/// Draws that decide only how fast the answer is found, not which one (D. E. Knuth's MMIX constants).
struct Draws(u64);

impl Draws {
    fn below(&mut self, limit: u64) -> u64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        ((u128::from(self.0) * u128::from(limit)) >> 64) as u64
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn all_slopes(points: &[Point]) -> Vec<f64> {
        let mut all = Vec::new();
        for (index, &a) in points.iter().enumerate() {
            all.extend(points[index + 1..].iter().filter_map(|&b| slope(a, b)));
        }
        all.sort_by(f64::total_cmp);
        all
    }

    fn points(n: usize, value: impl Fn(f64, f64) -> f64, time: impl Fn(usize) -> f64) -> Vec<Point> {
        let mut draws = Draws(9);
        (0..n)
            .map(|i| Point { time: time(i), value: value(i as f64, draws.below(1 << 40) as f64 / (1_u64 << 40) as f64) })
            .collect()
    }

    /// Against all slopes computed and sorted: drifting, heavily tied, two-valued, irregular and repeated times.
    #[test]
    fn closing_in_finds_the_same_slopes() {
        for points in [
            points(1500, |i, u| 0.01 * i + u, |i| i as f64),
            points(1500, |_, u| (4.0 * u).floor(), |i| i as f64),
            points(1500, |_, u| (2.0 * u).floor(), |i| (i / 3) as f64),
            points(1500, |i, u| 1e6 + 1e-3 * i + u, |i| 45_000.0 + (i * i % 7919) as f64),
            points(1500, |i, _| i, |i| i as f64),
        ] {
            let all = all_slopes(&points);
            let slopes = Slopes::new(points);
            assert_eq!(slopes.count(), all.len() as u64);
            for rank in [1, 2, all.len() / 3, all.len() / 2, all.len() / 2 + 1, all.len() - 5, all.len()] {
                let (got, expected) = (slopes.closed_in(rank as u64, 1)[0], all[rank - 1]);
                assert!((got - expected).abs() <= 1e-10 * expected.abs().max(1e-6), "{rank}: {got} {expected}");
            }
            let middle = all.len() / 2;
            let around: Vec<f64> = slopes.at_ranks(&[3, middle as u64, middle as u64 + 1, middle as u64 + 1, 9]);
            for (got, expected) in around.iter().zip([all[2], all[middle - 1], all[middle], all[middle], all[8]]) {
                assert!((got - expected).abs() <= 1e-10 * expected.abs().max(1e-6), "{got} {expected}");
            }
            assert_eq!(slopes.at_ranks(&[0, all.len() as u64 + 1]), [f64::NEG_INFINITY, f64::INFINITY]);
        }
    }

    #[test]
    fn only_points_of_one_block_are_joined() {
        let block = |values: [f64; 3]| (0..3).map(|i| Point { time: f64::from(i), value: values[i as usize] }).collect();
        let slopes = Slopes::within(vec![block([1.0, 2.0, 3.0]), block([100.0, 100.0, 100.0])]);
        assert_eq!((slopes.count(), slopes.at_ranks(&[1, 2, 3, 4, 5, 6])), (6, vec![0.0, 0.0, 0.0, 1.0, 1.0, 1.0]));
        assert_eq!(slopes.median(), Some(0.5));
    }
}
