//! What is refused, each with one plain sentence.

use risefall::problem::Problem;

use crate::helpers::{book, read, row};

fn refusal(bytes: &[u8]) -> Problem {
    match read(bytes, &[]) {
        Ok(_) => panic!("accepted"),
        Err(error) => error.into(),
    }
}

#[test]
fn files_that_are_no_workbooks_are_refused() {
    for (bytes, code) in [
        (&b""[..], "workbook-empty"),
        (b"%PDF-1.7\n%\xE2", "workbook-kind"),
        (b"<!DOCTYPE html><html><table>", "workbook-kind"),
        (b"<?xml version=\"1.0\"?><Workbook/>", "workbook-kind"),
        (b"\x89PNG\r\n\x1a\n\0\0\0\rIHDR", "workbook-kind"),
        (b"PK\x03\x04\x14\0\0\0", "workbook-damaged"),
    ] {
        assert_eq!(refusal(bytes).code, code, "{bytes:?}");
    }
}

#[test]
fn a_damaged_workbook_is_refused_in_plain_words() {
    let whole = book("Data", vec![row!["Week", "Score"], row![1, 2], row![2, 3], row![3, 4]]);
    let problem = refusal(&whole[..whole.len() / 2]);
    assert_eq!(problem.code, "workbook-damaged");
    assert_eq!(
        problem.message,
        "the cells of the workbook cannot be read; open it in the spreadsheet program, save it anew, and send that"
    );
    // Any single byte may be damaged: the answer is a workbook or a sentence.
    for position in (0..whole.len()).step_by(7) {
        let mut bytes = whole.clone();
        bytes[position] ^= 0x55;
        if let Err(error) = read(&bytes, &[]) {
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
