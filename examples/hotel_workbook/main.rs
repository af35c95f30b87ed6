//! Rebuilds the example workbook of an invented hotel group, without macros and with them.
//!
//! ```text
//! cargo run --example hotel_workbook            writes into examples/hotel
//! cargo run --example hotel_workbook -- FOLDER  writes there
//! ```
//!
//! What is to be found in the readings is stated in `workbook/readings.rs`. The same source gives the same bytes.

use std::error::Error;
use std::io::Write;
use std::path::PathBuf;

mod workbook;

fn main() -> Result<(), Box<dyn Error>> {
    let usual = || PathBuf::from(concat!(env!("CARGO_MANIFEST_DIR"), "/examples/hotel"));
    let folder = std::env::args_os().nth(1).map_or_else(usual, PathBuf::from);
    let weeks = workbook::readings::draw();
    workbook::build(&weeks)?.save(folder.join("visits.xlsx"))?;
    let client = include_str!("../clients/risefall-excel.bas");
    let mut project = tempfile::NamedTempFile::new()?;
    project.write_all(&workbook::vba_project::build(&workbook::modules(client))?)?;
    let mut with_macros = workbook::build(&weeks)?;
    with_macros.add_vba_project(project.path())?.set_vba_name("ThisWorkbook")?;
    with_macros.save(folder.join("visits-macros.xlsm"))?;
    println!("The workbook is rebuilt in {}, without macros and with them.", folder.display());
    Ok(())
}
