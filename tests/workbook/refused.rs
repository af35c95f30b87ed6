//! What is refused: one clear sentence, nothing written, the original untouched.

use risefall::problem::ProblemKind;

use crate::helpers::{Desk, weekly};

#[test]
fn the_original_is_never_written_to() {
    let desk = Desk::new();
    let path = desk.put("ward.xlsx", &weekly());
    let problem = desk.annotate("ward.xlsx", "ward.xlsx", &[]).unwrap_err();
    assert_eq!(problem.code, "output");
    assert_eq!(std::fs::read(path).unwrap(), weekly());
}

#[test]
fn wrong_files_are_refused_with_nothing_written() {
    let whole = weekly();
    let mut flipped = whole.clone();
    let middle = flipped.len() / 2;
    flipped[middle..middle + 200].iter_mut().for_each(|byte| *byte ^= 0xFF);
    let cases: [(&[u8], &str); 5] = [
        (b"", "is empty"),
        (&[0xD0, 0xCF, 0x11, 0xE0, 0xA1, 0xB1, 0x1A, 0xE1, 0, 0], "cannot be read"),
        (&whole[..whole.len() - 400], "is damaged"),
        (&flipped, "is damaged"),
        (b"\x7FELF\0\0\0\0", "neither a workbook"),
    ];
    for (bytes, expected) in cases {
        let desk = Desk::new();
        desk.put("in.xlsx", bytes);
        let problem = desk.annotate("in.xlsx", "out.xlsx", &[]).unwrap_err();
        assert!(problem.message.contains(expected), "{}", problem.message);
        assert!(!problem.message.contains('\n'));
        assert!(!desk.path("out.xlsx").exists());
    }
}

#[test]
fn wrong_settings_are_refused_before_work() {
    let desk = Desk::new();
    desk.put("ward.xlsx", &weekly());
    for (name, value, expected) in [
        ("risk", "1.5", "risk: expected a number above 0 and below 1, got `1.5`"),
        ("seek", "up", "seek: expected one of either, rising, falling, got `up`"),
        ("rsik", "0.05", "there is no parameter `rsik` here; did you mean `risk`?"),
        ("test", "cox-stewart", "test: expected a test's key (did you mean cox-stuart?), got `cox-stewart`"),
        ("ties", "ignore", "ties: expected one of drop, against, split, got `ignore`"),
    ] {
        let problem = desk.annotate("ward.xlsx", "out.xlsx", &[(name, value)]).unwrap_err();
        assert_eq!((problem.message.as_str(), problem.kind), (expected, ProblemKind::Malformed));
        assert!(!desk.path("out.xlsx").exists());
    }
}

#[test]
fn an_absent_file_is_named() {
    let problem = Desk::new().annotate("absent.xlsx", "out.xlsx", &[]).unwrap_err();
    assert!(problem.message.contains("there is no file") && problem.message.contains("absent.xlsx"));
}
