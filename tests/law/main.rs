//! Laws that every registered test obeys, on random inputs and against full enumeration.
//!
//! A new test is picked up from the registry by itself. If it needs more than plain readings, it gets a line in
//! `inputs.rs`; if a law does not hold for it, a line with the reason in the law's own list.

mod awkward;
mod cards;
mod enumeration;
mod inputs;
mod invariance;
mod random;
mod simulation;
mod size;
mod tails;

use inputs::{Input, Ties};
use random::Random;
use risefall::method::{METHODS, Outcome, Registered, Seek};

/// Judges random inputs of each test and hands the judged ones to a law. Every test must be judged some of the time.
fn for_every_test(sizes: &[usize], rounds: usize, mut law: impl FnMut(&Registered, &Input, &Outcome)) {
    for (number, method) in METHODS.iter().enumerate() {
        let mut random = Random::seeded(number as u64 + 1);
        let mut judged = 0;
        for &n in sizes {
            for ties in [Ties::None, Ties::Heavy] {
                for _ in 0..rounds {
                    let input = Input::random(method, &mut random, n, ties);
                    if let Ok(outcome) = input.judge(method, Seek::Either) {
                        law(method, &input, &outcome);
                        judged += 1;
                    }
                }
            }
        }
        assert!(judged > rounds / 2, "{}: no input could be judged; give it a line in tests/law/inputs.rs", method.card.key);
    }
}
