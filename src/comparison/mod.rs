//! What can be said of readings before any test: pairs, ranks, ties, runs, seasons.

pub mod median;
pub mod midranks;
pub mod pairs;
pub mod runs;
pub mod steps;

pub use pairs::{Pairing, Pairings};
pub use runs::Run;
pub use steps::Steps;
