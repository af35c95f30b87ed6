//! `/annotate` as far as the service goes: the workbook arrives whole, the arguments are handed on, the output comes back.
//! What annotating itself does is tested where it is done; here an annotator of three lines stands at its place.

use std::path::Path;
use std::sync::Arc;

use risefall::method::declaration::{Argument, Arguments};
use risefall::problem::{Problem, ProblemKind};
use risefall::service::{AnnotatedSummary, Annotation};
use risefall::workbook::package_kind::PackageKind;

use crate::helpers::{Answer, TestService};

type Result = std::result::Result<AnnotatedSummary, Problem>;

fn service(annotate: impl Fn(&Path, &Path, &Arguments) -> Result + Send + Sync + 'static) -> TestService {
    TestService::start_with(|settings| {
        settings.limits.upload = 3 << 20;
        settings.annotation = Some(Annotation { annotate: Arc::new(annotate), parameters: Vec::new() });
    })
}

/// Writes the ending of the input's name, the arguments and the input itself.
fn telling(input: &Path, output: &Path, arguments: &Arguments) -> Result {
    let ending = input.extension().and_then(|ending| ending.to_str()).unwrap_or("none");
    let sent: Vec<String> =
        arguments.names().map(|name| format!("{name}={}", arguments.get(name).map(Argument::quote).unwrap())).collect();
    let told = [format!("{ending} {} ", sent.join(" ")).into_bytes(), std::fs::read(input).unwrap()].concat();
    std::fs::write(output, told).unwrap();
    let kind = PackageKind::ALL.into_iter().find(|kind| kind.ending() == ending).unwrap_or_default();
    Ok(AnnotatedSummary { indicators: 12, attention: 1, kind })
}

fn form(parts: &[(&str, &[u8])]) -> Vec<u8> {
    let mut body = Vec::new();
    for (head, content) in parts {
        body.extend_from_slice(format!("--edge\r\nContent-Disposition: form-data; {head}\r\n\r\n").as_bytes());
        body.extend_from_slice(content);
        body.extend_from_slice(b"\r\n");
    }
    body.extend_from_slice(b"--edge--\r\n");
    body
}

fn post_form(service: &TestService, path: &str, parts: &[(&str, &[u8])]) -> Answer {
    service.post(path, "multipart/form-data; boundary=edge", form(parts))
}

#[test]
fn a_workbook_sent_as_the_body_comes_back() {
    let service = service(telling);
    let answer = service.post("/annotate?risk=0.01&file=Visits%202025.xlsm", "application/octet-stream", "PKcontent").good();
    assert_eq!(answer.text(), "xlsm risk=0.01 PKcontent");
    assert_eq!(answer.header("content-type"), Some("application/vnd.ms-excel.sheet.macroEnabled.12"));
    assert_eq!(answer.header("content-disposition"), Some("attachment; filename=\"Visits 2025-trends.xlsm\""));
    assert_eq!((answer.header("risefall-indicators"), answer.header("risefall-attention")), (Some("12"), Some("1")));
}

#[test]
fn a_workbook_sent_in_a_form_comes_back() {
    let service = service(telling);
    let parts: [(&str, &[u8]); 2] =
        [("name=\"seek\"", b"rising"), ("name=\"workbook\"; filename=\"C:/data/G\u{e4}ste.ods\"", b"PKods")];
    let answer = post_form(&service, "/annotate?adjust=holm", &parts).good();
    assert_eq!(answer.text(), "ods adjust=holm seek=rising PKods");
    assert_eq!(answer.header("content-type"), Some("application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"));
    assert_eq!(
        answer.header("content-disposition"),
        Some("attachment; filename=\"G_ste-trends.xlsx\"; filename*=UTF-8''G%C3%A4ste%2Dtrends.xlsx")
    );
}

#[test]
fn a_large_workbook_arrives_byte_for_byte() {
    let service = service(|input, output, _| {
        std::fs::copy(input, output).unwrap();
        Ok(AnnotatedSummary::default())
    });
    let content: Vec<u8> = (0..2_500_000_u32).map(|i| (i.wrapping_mul(2_654_435_761) >> 13) as u8).collect();
    assert!(service.post("/annotate", "application/octet-stream", &content).good().body == content);
    assert!(post_form(&service, "/annotate", &[("name=\"a\"; filename=\"b.xlsx\"", &content)]).good().body == content);
}

#[test]
fn a_nameless_file_is_known_by_its_first_bytes() {
    let service = service(telling);
    let old = b"\xd0\xcf\x11\xe0rest";
    assert!(service.post("/annotate", "application/octet-stream", "PKrest").good().text().starts_with("xlsx "));
    assert!(service.post("/annotate", "application/octet-stream", "week,visits").good().text().starts_with("csv "));
    assert!(service.post("/annotate", "application/octet-stream", old).good().body.starts_with(b"xls "));
}

#[test]
fn no_name_leads_out_of_the_folder() {
    let service = service(|input, output, _| {
        assert_eq!(input.file_name().unwrap(), "workbook.xlsx");
        assert_eq!(input.parent(), output.parent());
        std::fs::copy(input, output).unwrap();
        Ok(AnnotatedSummary::default())
    });
    for name in ["..%2F..%2Fetc%2Fevil.xlsx", "..%5Cevil.xlsx", "a%00b.xlsx", "x%0D%0ASet-Cookie:1.xlsx"] {
        let answer = service.post(&format!("/annotate?file={name}"), "application/octet-stream", "PK").good();
        let disposition = answer.header("content-disposition").unwrap();
        assert!(!disposition.contains(['/', '\\', '\0']) && answer.header("set-cookie").is_none(), "{disposition}");
    }
}

#[test]
fn what_the_annotator_refuses_is_answered_as_it_says() {
    let service = service(|_, _, _| {
        Err(Problem::new(ProblemKind::Unsupported, "encrypted", "the workbook is encrypted").help("Save it without a password."))
    });
    let details = service.post("/annotate", "application/octet-stream", "PK").problem(422, "encrypted");
    assert_eq!(
        (&details["detail"], &details["help"]),
        (&"the workbook is encrypted".into(), &"Save it without a password.".into())
    );
    let sentence = service.post("/annotate?fault=text", "application/octet-stream", "PK").good();
    assert_eq!(sentence.text(), "the workbook is encrypted. Save it without a password.");
}

#[test]
fn a_panic_is_our_fault_and_the_service_goes_on() {
    let service = service(|_, _, _| panic!("on purpose"));
    let details = service.post("/annotate", "application/octet-stream", "PK").problem(500, "broken");
    assert!(!details.to_string().contains("on purpose"));
    service.get("/health").good();
}

#[test]
fn an_upload_that_cannot_be_taken_is_refused() {
    let service = service(telling);
    service.post("/annotate", "application/octet-stream", "").problem(400, "upload-empty");
    post_form(&service, "/annotate", &[("name=\"seek\"", b"rising")]).problem(400, "upload-empty");
    let two: [(&str, &[u8]); 2] = [("name=\"a\"; filename=\"a.xlsx\"", b"PK"), ("name=\"b\"; filename=\"b.xlsx\"", b"PK")];
    post_form(&service, "/annotate", &two).problem(400, "upload-several");
    service.post("/annotate", "multipart/form-data; boundary=edge", "--edge\r\nno end").problem(400, "body-broken");
    service.post("/annotate", "application/octet-stream", vec![b'x'; (3 << 20) + 1]).problem(413, "too-large");
    assert_eq!(service.get("/annotate").problem(405, "verb")["help"], "It takes POST, OPTIONS.");
}

#[test]
fn without_an_annotator_there_is_no_such_address() {
    TestService::start().post("/annotate", "application/octet-stream", "PK").problem(404, "path-unknown");
}

#[test]
fn nothing_is_left_behind() {
    let (tell, told) = std::sync::mpsc::channel();
    let service = service(move |input, output, _| {
        tell.send(input.parent().unwrap().to_owned()).unwrap();
        std::fs::copy(input, output).unwrap();
        Ok(AnnotatedSummary::default())
    });
    service.post("/annotate", "application/octet-stream", "PK").good();
    let folder = told.recv().unwrap();
    let deadline = std::time::Instant::now() + std::time::Duration::from_secs(10);
    while folder.exists() {
        assert!(std::time::Instant::now() < deadline, "{} is still there", folder.display());
        std::thread::sleep(std::time::Duration::from_millis(5));
    }
}
