//! What is refused, each with one sentence.

use std::io::Cursor;

use risefall::problem::Problem;
use risefall::workbook::survey::{Format, read_from};

use crate::helpers::{book, row};

fn refusal(bytes: &[u8]) -> Problem {
    let mut source = Cursor::new(bytes);
    match Format::detect(&mut source).and_then(|format| read_from(source, "Data", format, &[], &mut |_, _| {})) {
        Ok(_) => panic!("accepted"),
        Err(error) => error.into(),
    }
}

#[test]
fn files_that_are_no_workbooks_are_named() {
    for (bytes, words) in [
        (&b""[..], "an empty file"),
        (b"%PDF-1.7\n%\xE2", "a PDF file"),
        (b"<!DOCTYPE html><html><table>", "a web page"),
        (b"<?xml version=\"1.0\"?><Workbook/>", "an XML file"),
        (b"\x89PNG\r\n\x1a\n\0\0\0\rIHDR", "some other kind"),
        (b"PK\x03\x04\x14\0\0\0", "cut short"),
    ] {
        let problem = refusal(bytes);
        assert!(problem.message.contains(words), "{problem}");
    }
}

#[test]
fn a_damaged_workbook_is_refused_and_never_panics() {
    let whole = book("Data", vec![row!["Week", "Score"], row![1, 2], row![2, 3], row![3, 4]]);
    assert_eq!(Format::detect(&mut Cursor::new(&whole)).unwrap(), Format::Package);
    let half = &whole[..whole.len() / 2];
    assert_eq!(refusal(half).code, "workbook-unreadable");
    // Any single byte may be damaged: the answer is a workbook or a sentence.
    for position in (0..whole.len()).step_by(7) {
        let mut bytes = whole.clone();
        bytes[position] ^= 0x55;
        let mut source = Cursor::new(bytes);
        let answer = Format::detect(&mut source).and_then(|format| read_from(source, "Data", format, &[], &mut |_, _| {}));
        if let Err(error) = answer {
            assert!(!Problem::from(error).message.is_empty());
        }
    }
}

#[test]
fn an_encrypted_workbook_is_named_as_such() {
    let mut bytes = b"\xD0\xCF\x11\xE0\xA1\xB1\x1A\xE1".to_vec();
    bytes.resize(2048, 0);
    bytes.extend("EncryptedPackage".encode_utf16().flat_map(u16::to_le_bytes));
    assert_eq!(refusal(&bytes).code, "workbook-encrypted");
}
