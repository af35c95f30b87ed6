//! How a statistic behaves when there is no trend.
//!
//! A small tail is never one minus a large one: each tail is summed from its own far end inwards, so that a
//! probability of 1e-40 keeps its digits.
#[cfg(test)]
mod arrangements;
pub mod attained;
pub mod beta;
pub mod binomial;
pub mod capital;
pub mod chi_square;
pub mod crossing;
pub mod draws;
pub mod hypergeometric;
pub mod lattice;
pub mod normal;
pub mod normal_walk;
pub mod ordered_table;
mod pieces;
pub mod probability;
pub mod q_multinomial;
pub mod rank_products;
pub mod rank_steps;
pub mod rank_walk;
pub mod rises;
pub mod runs_of_two;
pub mod score_path;
pub mod score_total;
pub mod signed_weights;
pub mod strip;
pub mod student;
pub mod sum_of_uniforms;
pub mod tilted;
pub mod truncated_exponential;
pub mod turns;

pub use attained::Attained;
pub use chi_square::ChiSquare;
pub use lattice::Lattice;
pub use probability::{By, Probability, Tails};
pub use tilted::Tilted;
