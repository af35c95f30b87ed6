//! What can be said of readings before any test: pairs, ranks, ties, runs, seasons.

pub mod pairs;

pub use pairs::{Pairing, Pairings};
