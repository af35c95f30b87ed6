//! Every method against published worked examples and reference values made outside Risefall.
//!
//! The files under `reference/` hold one JSON object a method: `published` (worked examples as printed, with their
//! source, and what an independent computation gives) and `oracle` (values by enumeration, high-precision arithmetic,
//! SciPy, statsmodels and R's base `stats`; `made_by` says which). `datasets.json` holds open series that they name,
//! `tables.json` critical values and tail tables, each verified by enumeration.

mod buishand_range;
mod cochran_armitage;
mod cox_stuart;
mod difference_signs;
mod event_trend;
mod family;
mod far_tails;
mod jonckheere_terpstra;
mod kendall_enumerated;
mod mann_kendall;
mod normal_homogeneity;
mod open_data;
mod order_laws;
mod page;
mod pettitt;
mod planned_looks;
mod poisson_trend;
mod rank_von_neumann;
mod reference;
mod runs_about_median;
mod seasonal_kendall;
mod spearman;
mod theil_sen;
mod turning;
mod watch;
mod wired;
