//! What can be said of readings before any test: pairs, ranks, ties, runs, seasons.

pub mod counts;
pub mod events;
pub mod groups;
pub mod order;
pub mod pairs;
pub mod ranked_blocks;
pub mod rates;
pub mod shares;

pub use events::{Events, Truncation};
pub use groups::{Concordance, Groups};
pub use order::Order;
pub use pairs::{Pairing, Pairings};
pub use rates::{Rate, Rates};
pub use shares::{Share, Shares};
