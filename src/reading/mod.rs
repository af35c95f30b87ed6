//! What was recorded: values in time order, their scale and their moments. No statistics, no files.

pub mod blocks;
pub mod cell;
pub mod list;
pub mod moment;
pub mod scale;
pub mod series;
pub mod understand;
pub mod value;

pub use blocks::Blocks;
pub use cell::Cell;
pub use moment::Moments;
pub use scale::{Grades, Scale};
pub use series::Series;
pub use understand::{Understood, understand};
pub use value::{Missing, Value};
