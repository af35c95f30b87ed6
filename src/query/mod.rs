//! Requests as addresses, forms and JSON, turned into valid requests.

pub mod address;
pub mod json;
pub mod request;

pub use request::{Asked, read};
