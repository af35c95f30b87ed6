//! The HTTP service; the only user of actix-web. It computes nothing itself: a request becomes arguments, these go
//! through [`query`](crate::query) and [`examine`](crate::finding::examine), and [`reply`](crate::reply) writes the answer.
//!
//! - [`application`]: settings in, a running service out; all wiring.
//! - `route`: one file a path.
//! - [`limit`]: every limit with its unit and its reason; `admission` keeps to those on how much runs at once.
//! - `door`: who may come in, the headers that every answer carries, and what becomes of a panic.
//! - `body`, `negotiate`: what came in, and which form is wanted back.
//! - `respond`, `codes`: answers and problems as HTTP responses.

mod admission;
pub mod annotation;
pub mod application;
mod body;
pub mod codes;
mod compute;
mod document;
mod door;
pub mod limit;
mod negotiate;
mod respond;
mod route;
mod upload;

pub use annotation::{AnnotatedSummary, Annotation, Annotator};
pub use application::{Application, Settings};
pub use limit::Limits;
