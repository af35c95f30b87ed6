//! Requests as text and JSON, turned into valid requests.

pub mod json;
pub mod request;

pub use request::{Asked, read};
