//! The example workbooks are what their program builds, and the macro project holds the client.

use crate::{EXAMPLES, VBA, workbook};

#[test]
fn the_workbook_is_what_its_program_builds() {
    let weeks = workbook::readings::draw();
    let built = workbook::build(&weeks).unwrap().save_to_buffer().unwrap();
    let kept = std::fs::read(format!("{EXAMPLES}/hotel/visits.xlsx")).unwrap();
    assert!(built == kept, "run `cargo run --example hotel_workbook`");
}

#[test]
fn the_macro_enabled_copy_holds_the_client() {
    let book = std::fs::File::open(format!("{EXAMPLES}/hotel/visits-macros.xlsm")).unwrap();
    let mut package = zip::ZipArchive::new(book).unwrap();
    let mut kept = Vec::new();
    std::io::copy(&mut package.by_name("xl/vbaProject.bin").unwrap(), &mut kept).unwrap();
    let built = workbook::vba_project::build(&workbook::modules(VBA)).unwrap();
    assert!(built == kept, "run `cargo run --example hotel_workbook`");
}

/// Read by another library than the one that wrote it: calamine finds every module and its source.
#[test]
fn another_reader_finds_the_modules() {
    let mut book: calamine::Xlsx<_> = calamine::open_workbook(format!("{EXAMPLES}/hotel/visits-macros.xlsm")).unwrap();
    let project = calamine::Reader::vba_project(&mut book).unwrap().expect("a macro project");
    let mut names = project.get_module_names();
    names.sort_unstable();
    assert_eq!(names, ["HousesSheet", "NotesSheet", "Risefall", "SummarySheet", "ThisWorkbook", "WeeklySheet"]);
    let source = project.get_module("Risefall").unwrap().replace("\r\n", "\n");
    assert_eq!(source.trim_end(), VBA.trim_end());
}
