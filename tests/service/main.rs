//! The service as a client meets it: the real server on a free port, asked over real connections.
//!
//! One file a route, and one each for the limits, for who may come in, and for the forms of answers, which need no server.

mod adjust;
mod annotate;
mod codes;
mod door;
mod forms;
mod health;
mod helpers;
mod home;
mod limits;
mod methods;
mod openapi;
mod problems;
mod trend;
