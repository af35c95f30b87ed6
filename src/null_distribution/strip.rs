//! Chances over a run of whole numbers that widens as outcomes are added: the workpiece of counting recursions.

use super::Lattice;
use super::lattice::add_scaled;

/// The chance of each whole number from `lowest` on.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Strip {
    lowest: i64,
    mass: Vec<f64>,
}

impl Strip {
    /// The number 0 with certainty.
    pub fn zero() -> Self {
        Strip { lowest: 0, mass: vec![1.0] }
    }

    /// Whether no number has been given a chance.
    pub fn is_empty(&self) -> bool {
        self.mass.is_empty()
    }

    /// The sum of all chances.
    pub fn total(&self) -> f64 {
        self.mass.iter().sum()
    }

    /// Adds `factor` times the chances of `other`, each number moved up by `shift`.
    pub fn add(&mut self, other: &Strip, shift: i64, factor: f64) {
        let first = other.lowest + shift;
        if self.mass.is_empty() {
            self.lowest = first;
        }
        if first < self.lowest {
            let missing = (self.lowest - first) as usize;
            self.mass.splice(0..0, std::iter::repeat_n(0.0, missing));
            self.lowest = first;
        }
        let start = (first - self.lowest) as usize;
        self.mass.resize(self.mass.len().max(start + other.mass.len()), 0.0);
        add_scaled(&mut self.mass[start..], &other.mass, factor);
    }
}

impl From<Strip> for Lattice {
    fn from(strip: Strip) -> Self {
        Lattice::new(strip.lowest, 1, strip.mass)
    }
}
