//! The methods' declarations as lists, help text and an OpenAPI document. There is one text for everything: what a
//! parameter means is written where it is declared, and nowhere else.

pub mod card;
pub mod example;
pub mod help;
pub mod openapi;
pub mod schema;
