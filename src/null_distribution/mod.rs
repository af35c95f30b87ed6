//! How a statistic behaves when there is no trend.
//!
//! A small tail is never one minus a large one: each tail is summed from its own far end inwards, so that a
//! probability of 1e-40 keeps its digits.

pub mod attained;
pub mod binomial;
pub mod chi_square;
pub mod crossing;
pub mod lattice;
pub mod normal;
pub mod ordered_table;
pub mod probability;
pub mod q_multinomial;
pub mod rank_products;
pub mod score_total;
pub mod signed_weights;
pub mod strip;
pub mod student;
pub mod sum_of_uniforms;
pub mod tilted;
pub mod truncated_exponential;

pub use attained::Attained;
pub use chi_square::ChiSquare;
pub use lattice::Lattice;
pub use probability::{By, Probability, Tails};
pub use tilted::Tilted;
