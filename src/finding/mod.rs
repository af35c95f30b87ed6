//! From outcomes to words: what is concluded of a series, and what a person is told.

pub mod conclusion;
pub mod examine;
pub mod family;
pub mod report;
pub mod request;
pub mod sentence;

pub use conclusion::{Conclusion, Word};
pub use examine::{Finding, examine, examine_together};
pub use family::{Adjustment, adjust};
pub use report::Report;
pub use request::{Request, Wanted};
