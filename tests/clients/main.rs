//! What stands in `examples`: the workbook is what its program builds, the macros ask what the service understands, and a
//! real office runs them.

#[path = "../../examples/hotel_workbook/workbook/mod.rs"]
mod workbook;

mod basic;
mod office;
mod projects;
mod serving;

/// The folder of the examples.
const EXAMPLES: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/examples");
/// The module for LibreOffice Basic.
const BASIC: &str = include_str!("../../examples/clients/risefall-libreoffice.bas");
/// The module for VBA.
const VBA: &str = include_str!("../../examples/clients/risefall-excel.bas");
