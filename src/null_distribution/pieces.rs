//! Random orders built from pieces: values enter from the lowest to the highest and lengthen, begin or join pieces.
//!
//! The state is the number of pieces and how many of the two ends of the order are settled; a [`Tally`] carries what is
//! counted. Weights are counts of arrangements up to a common factor that falls out at the end.

use super::turns::Counted;

/// What is carried along with each state: a distribution of counts, or sums that stand for it.
pub trait Tally: Clone + Default {
    /// The count 0 with weight 1.
    fn one() -> Self;
    /// The sum of all weights.
    fn total(&self) -> f64;
    /// Adds `factor` times the weights of `other`, each count raised by `shift`.
    fn add(&mut self, other: &Self, shift: usize, factor: f64);
}

/// The states by settled ends (0 to 2) and number of pieces.
pub struct Pieces<T> {
    states: [Vec<T>; 3],
}

/// How the copies of one value go into an order: what changes, how often it counts, and the logarithm of the number of ways.
struct Entry {
    pieces: usize,
    settled: usize,
    count: usize,
    ln_ways: f64,
}

impl<T: Tally> Pieces<T> {
    /// The tally over all arrangements, up to a common factor; `None` if there are fewer than two different values.
    pub fn of(sizes: &[usize], counted: Counted) -> Option<T> {
        let (&lowest, higher) = sizes.split_first().filter(|(_, higher)| !higher.is_empty())?;
        let ways = Ways::new(sizes.iter().sum(), counted);
        let mut left: usize = higher.iter().sum();
        let mut pieces = Pieces { states: [Vec::new(), Vec::new(), Vec::new()] };
        for entry in ways.first(lowest) {
            pieces.add(&T::one(), &entry, left, 0.0);
        }
        for &copies in higher {
            left -= copies;
            let ln_scale = pieces.total().ln();
            let mut next = Pieces { states: [Vec::new(), Vec::new(), Vec::new()] };
            for (settled, by_pieces) in pieces.states.iter().enumerate() {
                for (count, tally) in by_pieces.iter().enumerate().filter(|(_, tally)| tally.total() > 0.0) {
                    ways.each(count, settled, copies, &mut |entry| next.add(tally, entry, left, ln_scale));
                }
            }
            pieces = next;
        }
        pieces.states[2].get(1).cloned()
    }

    /// About how many transitions between states there are.
    pub fn transitions(sizes: &[usize], counted: Counted) -> f64 {
        let all: usize = sizes.iter().sum();
        let (mut placed, mut transitions) = (0_usize, 0.0);
        for &copies in sizes {
            let pieces = placed.min(all - placed + 1) as f64;
            let m = copies as f64;
            let ways = (m + 1.0).min(pieces + 1.0) * (m + 1.0);
            transitions += 6.0 * pieces * ways * if counted == Counted::Turns { 1.0 } else { m + 1.0 };
            placed += copies;
        }
        transitions
    }

    fn total(&self) -> f64 {
        self.states.iter().flatten().map(Tally::total).sum()
    }

    /// Adds a state, unless the readings that are left are too few to join its pieces and settle its ends.
    fn add(&mut self, tally: &T, entry: &Entry, left: usize, ln_scale: f64) {
        if entry.pieces == 0 || entry.pieces - 1 + 2 - entry.settled > left {
            return;
        }
        let by_pieces = &mut self.states[entry.settled];
        if by_pieces.len() <= entry.pieces {
            by_pieces.resize(entry.pieces + 1, T::default());
        }
        by_pieces[entry.pieces].add(tally, entry.count, (entry.ln_ways - ln_scale).exp());
    }
}

/// The ways in which the copies of a value can enter.
struct Ways {
    ln_factorial: Vec<f64>,
    counted: Counted,
}

impl Ways {
    fn new(readings: usize, counted: Counted) -> Self {
        let (mut sum, mut lost) = (0.0_f64, 0.0);
        let ln_factorial = (0..=3 * readings + 3).map(|n| {
            let term = if n > 1 { (n as f64).ln() } else { 0.0 } - lost;
            let next = sum + term;
            lost = (next - sum) - term;
            sum = next;
            sum
        });
        Ways { ln_factorial: ln_factorial.collect(), counted }
    }

    /// ln of n over k; negative infinity where there is no way.
    fn ln_choose(&self, n: usize, k: usize) -> f64 {
        if k > n { f64::NEG_INFINITY } else { self.ln_factorial[n] - self.ln_factorial[k] - self.ln_factorial[n - k] }
    }

    /// The ways for the copies of the lowest value: blocks side by side, the outer ones of which may be ends.
    fn first(&self, copies: usize) -> Vec<Entry> {
        let mut entries = Vec::new();
        for blocks in 1..=copies {
            for settled in 0..=2.min(blocks) {
                let troughs = blocks - settled;
                let ends = if settled == 1 { 2.0_f64.ln() } else { 0.0 };
                self.shared_out(copies, troughs, settled, 0, &mut |count, ln_ways| {
                    entries.push(Entry { pieces: blocks, settled, count, ln_ways: ends + ln_ways });
                });
            }
        }
        entries
    }

    /// The ways for the copies of a higher value, given how many pieces there are and how many ends are settled.
    fn each(&self, pieces: usize, settled: usize, copies: usize, visit: &mut dyn FnMut(&Entry)) {
        let open = 2 - settled;
        // An open end stays open, becomes the end of the order by a block of its own, or by a block beside the outer piece.
        for (apart, beside) in (0..=open).flat_map(|apart| (0..=open - apart).map(move |beside| (apart, beside))) {
            let ends = apart + beside;
            let ln_ends = self.ln_choose(open, ends) + self.ln_choose(ends, apart);
            for peaks in 0..pieces.min(copies + 1) {
                let gaps_inside = pieces - 1 - peaks;
                let gaps = gaps_inside + open - beside;
                let sides = 2 * gaps_inside + open - beside;
                let ln_joined = ln_ends + self.ln_choose(pieces - 1, peaks);
                let most = if gaps == 0 { 0 } else { copies.saturating_sub(peaks + ends) };
                for troughs in 0..=most {
                    if peaks + troughs + ends > copies {
                        break;
                    }
                    let ln_placed = if troughs == 0 { 0.0 } else { self.ln_choose(troughs + gaps - 1, troughs) };
                    self.shared_out(copies, peaks + troughs, ends, sides, &mut |count, ln_ways| {
                        visit(&Entry {
                            pieces: pieces - peaks + troughs + apart,
                            settled: settled + ends,
                            count,
                            ln_ways: ln_joined + ln_placed + ln_ways,
                        });
                    });
                }
            }
        }
    }

    /// The ways to share out copies among blocks: `turns` peaks and troughs, `ends` ends of the order, and a block beside
    /// a piece at any of `sides` places. Visits each value of what is counted.
    fn shared_out(&self, copies: usize, turns: usize, ends: usize, sides: usize, visit: &mut dyn FnMut(usize, f64)) {
        match self.counted {
            Counted::Turns => {
                let ln_ways = self.ln_choose(sides + copies - 1, copies - turns - ends);
                if ln_ways.is_finite() {
                    visit(turns, ln_ways);
                }
            }
            Counted::SharpTurns => {
                for sharp in 0..=turns {
                    let blunt = turns - sharp;
                    let ln_ways = if copies == turns {
                        if blunt == 0 && ends == 0 { 0.0 } else { f64::NEG_INFINITY }
                    } else {
                        match (copies - turns).checked_sub(blunt + ends) {
                            Some(free) => self.ln_choose(turns, sharp) + self.ln_choose(sides + copies - turns - 1, free),
                            None => f64::NEG_INFINITY,
                        }
                    };
                    if ln_ways.is_finite() {
                        visit(sharp, ln_ways);
                    }
                }
            }
            Counted::UnbrokenRuns => {
                let blocks = turns + ends;
                for broken in 0..=sides.min(copies - blocks) {
                    let ways = (broken..=sides.min(copies - blocks)).map(|passed| {
                        let placed = self.ln_choose(sides - broken, passed - broken);
                        match (copies - passed, broken + blocks) {
                            (0, 0) => placed.exp(),
                            (0, _) | (_, 0) => 0.0,
                            (rest, longer) => (placed + self.ln_choose(rest - 1, longer - 1)).exp(),
                        }
                    });
                    let ln_ways = self.ln_choose(sides, broken) + ways.sum::<f64>().ln();
                    if ln_ways.is_finite() {
                        visit(turns + broken, ln_ways);
                    }
                }
            }
        }
    }
}
