//! Risefall judges whether repeated readings rise, fall or only fluctuate.
//!
//! The folders, each named after an idea of the reader, and what each may import (arrows go left only):
//!
//! ```text
//! reading <- comparison <- null_distribution <- method <- finding
//!         <- { query, reply, catalogue, workbook } <- { service, command } <- main
//! ```
//!
//! - [`reading`]: what was recorded; no statistics, no files.
//! - [`comparison`]: what can be said of readings before any test: pairs, ranks, ties, runs, seasons.
//! - [`null_distribution`]: how a statistic behaves when there is no trend.
//! - [`method`]: the published tests, one file each, one declaration each.
//! - [`finding`]: from outcomes to words.
//! - [`query`]: requests as text and JSON, turned into valid requests.
//! - [`reply`]: a report as JSON, text, CSV or XML.
//! - [`catalogue`]: the methods' declarations as help, OpenAPI and lists.
//! - [`workbook`]: indicators found in a workbook, sheets made, sheets grafted into the user's package.
//! - [`service`]: the HTTP service.
//! - [`command`]: the command line.
//! - [`problem`]: an error as a person meets it; importable from anywhere.

#![forbid(unsafe_code)]

pub mod catalogue;
pub mod command;
pub mod comparison;
pub mod finding;
pub mod method;
pub mod null_distribution;
pub mod problem;
pub mod query;
pub mod reading;
pub mod reply;
pub mod service;
pub mod workbook;
