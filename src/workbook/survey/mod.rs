//! A workbook file turned into the indicators that a person would have marked.
//!
//! The file is read once into a compact store of cells ([`Cells`]); finding indicators, rows of a plan with stated
//! references, and later questions all read from that store.

mod cells;
mod column;
mod course;
mod error;
mod find;
mod heading;
mod indicator;
mod kind;
mod long;
mod moments;
mod open;
mod rows;
mod stated;
mod table;
mod text_table;
mod unit;
mod view;
mod words;

pub use cells::Cells;
pub use error::Error;
pub use find::{Survey, survey};
pub use open::{Format, format, read};
pub use stated::indicator_at;
