//! `/trend/{name}`. The expected p-values follow from counting fair coins: of four pairs that all rise, 2 / 2^4.

use std::io::{BufReader, Write};

use crate::helpers::{Answer, TestService, fact};

/// Four pairs, all rising.
const EIGHT: &str = "3;4;2;5;6;5;7;8";

#[test]
fn get_answers_the_report() {
    let service = TestService::start();
    let answer = service.get(&format!("/trend/cox-stuart?readings={EIGHT}&name=Visits")).good();
    assert_eq!(answer.header("content-type"), Some("application/json"));
    let report = answer.json();
    assert_eq!(report["method"], "cox-stuart");
    assert_eq!(report["indicator"], "Visits");
    assert_eq!(report["p"], 0.125);
    assert_eq!(report["p_by"], "exact");
    assert_eq!(report["statistic"]["value"], 4.0);
    assert_eq!((fact(&report, "rises"), fact(&report, "pairs")), (4.into(), 4.into()));
    let pairs = report["evidence"][0]["rows"].as_array().unwrap();
    let compared: Vec<_> = pairs.iter().map(|row| (row[1].clone(), row[4].clone(), row[7].clone())).collect();
    let expected: Vec<_> = (1..=4).map(|i| (i.into(), (i + 4).into(), 1.into())).collect();
    assert_eq!(compared, expected);
}

#[test]
fn a_number_reads_back_as_the_same_number() {
    let service = TestService::start();
    let readings: Vec<String> = (1..=200).map(|week| week.to_string()).collect();
    let path = format!("/trend/cox-stuart?seek=rising&readings={}", readings.join(","));
    // A hundred pairs that all rise.
    let p = 0.5_f64.powi(100);
    assert_eq!(service.get(&path).good().json()["p"].as_f64(), Some(p));
    let bare = service.get(&format!("{path}&reply=text&give=p")).good();
    assert_eq!(bare.text().parse(), Ok(p));
    let xml = service.get(&format!("{path}&reply=xml&give=p")).good();
    let inner = xml.text().strip_prefix("<risefall><p>").and_then(|rest| rest.strip_suffix("</p></risefall>"));
    assert_eq!(inner.and_then(|p| p.parse().ok()), Some(p));
}

#[test]
fn every_form_can_be_asked_for() {
    let service = TestService::start();
    let path = format!("/trend/cox-stuart?readings={EIGHT}&give=p");
    for (reply, accept, shown) in [
        ("json", "application/json", "200 application/json\n{\"p\":0.125}"),
        ("text", "text/plain", "200 text/plain; charset=utf-8\n0.125"),
        ("csv", "text/csv", "200 text/csv; charset=utf-8\np\r\n0.125\r\n"),
        ("xml", "application/xml", "200 application/xml; charset=utf-8\n<risefall><p>0.125</p></risefall>"),
    ] {
        assert_eq!(service.get(&format!("{path}&reply={reply}")).shown(), shown);
        assert_eq!(service.ask("GET", &path, &format!("Accept: {accept}\r\n"), b"").shown(), shown);
    }
}

#[test]
fn post_takes_json_forms_and_lists() {
    let service = TestService::start();
    let path = "/trend/cox-stuart?give=p&reply=text";
    for (media_type, body) in [
        ("application/json", r#"{"readings":[3,4,2,5,6,5,7,8]}"#),
        ("application/json; charset=utf-8", r#"{"readings":[[3],[4],[2],[5],[6],[5],[7],[8]]}"#),
        ("application/json", "\u{feff}{\"readings\":\"3,4,2,5,6,5,7,8\"}"),
        ("application/x-www-form-urlencoded", "readings=3%3B4%3B2%3B5%3B6%3B5%3B7%3B8"),
        ("application/x-www-form-urlencoded", r#"{"readings":[3,4,2,5,6,5,7,8]}"#),
        ("text/plain", "3\n4\n2\n5\n6\n5\n7\n8\n"),
        ("text/plain", r#"{"readings":[3,4,2,5,6,5,7,8]}"#),
        ("text/csv", "3,4,2,5,6,5,7,8"),
        ("application/octet-stream", "3;4;2;5;6;5;7;8"),
    ] {
        assert_eq!(service.post(path, media_type, body).good().text(), "0.125", "{media_type} {body}");
    }
}

#[test]
fn what_stands_in_the_body_counts_before_what_stands_in_the_address() {
    let service = TestService::start();
    let answer = service.post(
        "/trend/cox-stuart?give=p&reply=text&seek=either",
        "application/json",
        r#"{"readings":[1,2],"seek":"rising"}"#,
    );
    assert_eq!(answer.good().text(), "0.5");
}

#[test]
fn a_body_in_chunks_after_an_expectation_is_taken() {
    let service = TestService::start();
    let mut stream = service.connect();
    let head = format!(
        "POST /trend/cox-stuart?give=p&reply=text HTTP/1.1\r\nHost: {}\r\nContent-Type: application/json\r\n\
         Transfer-Encoding: chunked\r\nExpect: 100-continue\r\n\r\n",
        service.address
    );
    stream.write_all(head.as_bytes()).unwrap();
    let mut reader = BufReader::new(stream.try_clone().unwrap());
    assert_eq!(Answer::read(&mut reader, true).status, 100);
    for piece in [r#"{"readings":[3,4,2"#, r#",5,6,5,7,8]}"#] {
        stream.write_all(format!("{:x}\r\n{piece}\r\n", piece.len()).as_bytes()).unwrap();
    }
    stream.write_all(b"0\r\n\r\n").unwrap();
    assert_eq!(Answer::read(&mut reader, false).good().text(), "0.125");
}

#[test]
fn a_connection_is_kept_for_the_next_request() {
    let service = TestService::start();
    let mut stream = service.connect();
    let mut reader = BufReader::new(stream.try_clone().unwrap());
    for _ in 0..3 {
        let request = format!("GET /trend/cox-stuart?readings={EIGHT}&give=p HTTP/1.1\r\nHost: {}\r\n\r\n", service.address);
        stream.write_all(request.as_bytes()).unwrap();
        assert_eq!(Answer::read(&mut reader, false).good().text(), r#"{"p":0.125}"#);
    }
}

#[test]
fn head_and_options_do_not_compute() {
    let service = TestService::start();
    // Readings that cannot be read show that nobody looked at them.
    let path = "/trend/cox-stuart?readings=good;windy&reply=text";
    let head = service.ask("HEAD", path, "", b"");
    assert_eq!(
        (head.status, head.header("content-type"), head.header("content-length")),
        (200, Some("text/plain; charset=utf-8"), None)
    );
    let options = service.ask("OPTIONS", path, "", b"");
    assert_eq!((options.status, options.header("allow")), (204, Some("GET, HEAD, POST, OPTIONS")));
    assert_eq!(service.ask("HEAD", "/trend/cox-stuat", "", b"").status, 404);
}

#[test]
fn another_verb_is_told_which_there_are() {
    let service = TestService::start();
    let answer = service.ask("DELETE", "/trend/cox-stuart", "", b"");
    assert_eq!(answer.header("allow"), Some("GET, HEAD, POST, OPTIONS"));
    assert_eq!(
        answer.shown(),
        concat!(
            "405 application/problem+json\n",
            r#"{"type":"/problems/verb","title":"The address does not take this HTTP method.","status":405,"#,
            r#""detail":"/trend/cox-stuart does not take DELETE","code":"verb","value":"DELETE","#,
            r#""help":"It takes GET, HEAD, POST, OPTIONS."}"#,
        )
    );
}

#[test]
fn an_unknown_test_is_answered_with_the_nearest() {
    let service = TestService::start();
    let details = service.get(&format!("/trend/cox-stuat?readings={EIGHT}")).problem(404, "method-unknown");
    assert_eq!(details["detail"], "there is no test named `cox-stuat`");
    assert!(details["help"].as_str().unwrap().starts_with("Did you mean `cox-stuart`? The tests are: "));
}

#[test]
fn a_wrong_parameter_is_quoted_with_what_was_expected() {
    let service = TestService::start();
    let answer = service.get(&format!("/trend/cox-stuart?readings={EIGHT}&risk=5"));
    assert_eq!(
        answer.shown(),
        concat!(
            "400 application/problem+json\n",
            r#"{"type":"/problems/parameter-value","title":"A parameter's value is not of the expected kind or not in its range.","#,
            r#""status":400,"detail":"risk: expected a number above 0 and below 1, got `5`","code":"parameter-value","#,
            r#""place":"risk","value":"5"}"#,
        )
    );
}

#[test]
fn each_wrong_request_has_its_code() {
    let service = TestService::start();
    for (query, code) in [
        ("", "parameter-absent"),
        ("readings=1;2&perid=12", "parameter-unknown"),
        ("readings=1;2&seek=up", "parameter-value"),
        ("readings=1;2&reply=html", "parameter-value"),
        ("readings=1;2;x", "reading"),
        ("readings=calm;windy", "grades-unordered"),
        ("readings=1;2&moments=2025", "moments-count"),
        ("readings=1;2&moments=2025;", "moment-blank"),
        ("readings=1;2&moments=2025;2024", "moments-out-of-order"),
        ("readings=1;2&moments=2025;2025", "moments-repeated"),
        ("readings=1;2&blocks=a", "blocks-count"),
        ("readings=1;2&give=slope_of_rises", "give-unknown"),
    ] {
        service.get(&format!("/trend/cox-stuart?{query}")).problem(400, code);
    }
    for (body, code) in [
        ("{\"readings\":[1,2", "json"),
        ("[1,2]", "json"),
        ("{\"readings\":{}}", "json-value"),
        ("{\"readings\":[[1,2],[3]]}", "ragged-range"),
    ] {
        service.post("/trend/cox-stuart", "application/json", body).problem(400, code);
    }
    service.post("/trend/cox-stuart", "text/plain", b"3;4;\xff").problem(400, "encoding");
}

#[test]
fn a_series_that_cannot_be_judged_is_refused_with_the_reason() {
    let service = TestService::start();
    let details = service.get("/trend/cox-stuart?readings=4").problem(422, "too-few-readings");
    assert_eq!(details["detail"], "there are too few readings to compare: 1 with a value, at least 2 are needed");
    service.get("/trend/cox-stuart?readings=4;4;4;4").problem(422, "all-tied");
}

#[test]
fn a_cell_gets_the_sentence_with_status_200() {
    let service = TestService::start();
    let path = "/trend/cox-stuart?readings=1;2;x&fault=text";
    let sentence = "readings: reading 3, `x`, is not understood; expected a number, a limit such as <0.5, or blank. \
                    Correct it, or leave it blank to count it as missing.";
    assert_eq!(service.get(path).shown(), format!("200 text/plain; charset=utf-8\n{sentence}"));
    assert_eq!(service.get(&format!("{path}&give=p")).good().text(), sentence);
    let xml = service.get(&format!("{path}&reply=xml")).good();
    assert!(xml.text().starts_with("<risefall><fault>readings: reading 3"), "{}", xml.text());
    let misspelt = service.get("/trend/cox-stuat?fault=text").good();
    assert!(misspelt.text().starts_with("there is no test named `cox-stuat`. Did you mean"), "{}", misspelt.text());
    let in_body = service.post("/trend/cox-stuart", "application/json", r#"{"readings":[1,"x"],"fault":"text"}"#).good();
    assert!(in_body.text().starts_with("readings: reading 2, `x`"), "{}", in_body.text());
}

#[test]
fn long_series_are_judged_as_short_ones_are() {
    let service = TestService::start();
    let readings: Vec<String> = (1..=5000).map(|week| week.to_string()).collect();
    let path = "/trend/cox-stuart?give=rises&reply=text";
    assert_eq!(service.post(path, "text/plain", readings.join("\n")).good().text(), "2500");
}
