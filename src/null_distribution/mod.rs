//! How a statistic behaves when there is no trend.
//!
//! A small tail is never one minus a large one: each tail is summed from its own far end inwards, so that a
//! probability of 1e-40 keeps its digits.

pub mod binomial;
pub mod normal;
pub mod probability;
pub mod signed_weights;

pub use probability::{By, Probability, Tails};
