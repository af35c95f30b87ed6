//! What can be said of readings before any test: pairs, ranks, ties, runs, seasons.

pub mod counts;
pub mod events;
pub mod groups;
pub mod median;
pub mod midranks;
pub mod order;
pub mod pairs;
pub mod ranked_blocks;
pub mod rates;
pub mod rises;
pub mod runs;
pub mod shares;
pub mod signs;
pub mod slopes;
pub mod steps;

pub use events::{Events, Truncation};
pub use groups::{Concordance, Groups};
pub use order::Order;
pub use pairs::{Pairing, Pairings};
pub use rates::{Rate, Rates};
pub use runs::Run;
pub use shares::{Share, Shares};
pub use signs::Signs;
pub use slopes::{Point, Slopes};
pub use steps::Steps;
