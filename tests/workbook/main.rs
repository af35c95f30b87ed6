//! The whole way of a workbook: found, judged, annotated, annotated again, read back.

mod helpers;

mod annotated;
mod office;
mod plan;
mod refused;
