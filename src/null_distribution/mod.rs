//! How a statistic behaves when there is no trend.
//!
//! A small tail is never one minus a large one: each tail is summed from its own far end inwards, so that a
//! probability of 1e-40 keeps its digits.

#[cfg(test)]
mod arrangements;
pub mod attained;
pub mod beta;
pub mod binomial;
pub mod draws;
pub mod hypergeometric;
pub mod lattice;
pub mod normal;
pub mod normal_walk;
mod pieces;
pub mod probability;
pub mod rank_products;
pub mod rank_steps;
pub mod rank_walk;
pub mod rises;
pub mod runs_of_two;
pub mod signed_weights;
pub mod strip;
pub mod turns;

pub use attained::Attained;
pub use lattice::Lattice;
pub use probability::{By, Probability, Tails};
