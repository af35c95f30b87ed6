//! A workbook comes in, and goes back with new sheets and everything in it untouched.
//!
//! - [`survey`] finds the indicators; the only user of calamine.
//! - [`render`] makes the new sheets as a workbook of their own; the only user of rust_xlsxwriter.
//! - [`graft`] moves them into the user's package; the only user of zip and XML events.
//! - [`annotate`] is the way through the three.

pub mod annotate;
pub mod course;
pub mod graft;
pub mod indicator;
pub mod judge;
pub mod log;
pub mod package_kind;
pub mod plan;
pub mod reference;
pub mod render;
pub mod settings;
pub mod survey;

pub use indicator::{Indicator, Judged};
pub use plan::{Plan, PlanRow};
pub use reference::{CellRef, Range};
