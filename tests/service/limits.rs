//! Every limit, set low and then passed.

use std::io::{BufReader, Read, Write};
use std::sync::Arc;
use std::sync::mpsc;
use std::time::{Duration, Instant};

use risefall::service::{AnnotatedSummary, Annotation};

use crate::helpers::{Answer, TestService};

#[test]
fn a_body_beyond_the_limit_is_refused() {
    let service = TestService::start_with(|settings| settings.limits.body = 100);
    let list = "1;".repeat(100);
    let details = service.post("/trend/cox-stuart", "text/plain", &list).problem(413, "too-large");
    assert_eq!(details["detail"], "the body is larger than 100 bytes, the most that is read here");
    let chunked = format!(
        "POST /trend/cox-stuart HTTP/1.1\r\nHost: {}\r\nContent-Type: text/plain\r\nTransfer-Encoding: chunked\r\n\r\nc8\r\n{list}\r\n0\r\n\r\n",
        service.address
    );
    service.send(chunked.as_bytes(), false).problem(413, "too-large");
    service.post("/trend/cox-stuart", "text/plain", "1;2").good();
}

#[test]
fn too_many_readings_are_refused() {
    let service = TestService::start_with(|settings| settings.limits.readings = 10);
    let details = service.get("/trend/cox-stuart?readings=1,2,3,4,5,6,7,8,9,10,11").problem(413, "too-many-readings");
    assert_eq!(details["detail"], "readings: 11 values are more than the 10 that one request may hold");
    service
        .post("/trend/cox-stuart", "application/json", r#"{"readings":[[1,2,3,4,5,6],[1,2,3,4,5,6]]}"#)
        .problem(413, "too-many-readings");
    service.get("/trend/cox-stuart?readings=1,2,3,4,5,6,7,8,9,10").good();
}

#[test]
fn a_body_that_does_not_arrive_is_not_waited_for() {
    let service = TestService::start_with(|settings| settings.limits.body_time = Duration::from_millis(300));
    let head = format!(
        "POST /trend/cox-stuart HTTP/1.1\r\nHost: {}\r\nContent-Type: text/plain\r\nContent-Length: 100\r\n\r\n1;2;",
        service.address
    );
    let start = Instant::now();
    service.send(head.as_bytes(), false).problem(408, "slow");
    assert!(start.elapsed() < Duration::from_secs(5));
}

#[test]
fn a_head_that_does_not_arrive_is_not_waited_for() {
    let service = TestService::start_with(|settings| settings.limits.head_time = Duration::from_millis(300));
    let mut stream = service.connect();
    stream.write_all(b"GET /health HT").unwrap();
    let start = Instant::now();
    let mut rest = Vec::new();
    stream.read_to_end(&mut rest).unwrap();
    assert!(start.elapsed() < Duration::from_secs(10), "{:?}", start.elapsed());
}

#[test]
fn a_body_of_an_unknown_type_is_refused() {
    let service = TestService::start();
    let details = service.post("/trend/cox-stuart", "image/png", "1;2").problem(415, "media-type");
    assert_eq!(details["detail"], "a body of type `image/png` is not read here");
    let packed = service.ask("POST", "/trend/cox-stuart", "Content-Encoding: gzip\r\nContent-Length: 3\r\n", b"1;2");
    packed.problem(415, "media-type");
}

#[test]
fn the_head_of_a_request_is_bounded() {
    let service = TestService::start();
    let long = service.get(&format!("/trend/cox-stuart?readings={}", "1;".repeat(40_000)));
    assert!((400..500).contains(&long.status), "{}", long.status);
    service.get(&format!("/trend/cox-stuart?readings={}&give=p", "1;2;3;4;5;6;7;".repeat(4_501))).good();
}

/// One request computes until it is let go, one waits, and the third is sent away.
#[test]
fn who_finds_the_queue_full_is_told_to_come_again() {
    let (let_go, wait) = mpsc::channel::<()>();
    let wait = std::sync::Mutex::new(wait);
    let (started, is_started) = mpsc::channel();
    let annotate = move |input: &std::path::Path, output: &std::path::Path, _: &_| {
        started.send(()).unwrap();
        wait.lock().unwrap().recv_timeout(Duration::from_secs(20)).unwrap();
        std::fs::copy(input, output).unwrap();
        Ok(AnnotatedSummary::default())
    };
    let service = TestService::start_with(|settings| {
        settings.limits.computing = 1;
        settings.limits.waiting = 1;
        settings.annotation = Some(Annotation { annotate: Arc::new(annotate), parameters: Vec::new() });
    });
    let start = |service: &TestService| {
        let mut stream = service.connect();
        let request = format!("POST /annotate HTTP/1.1\r\nHost: {}\r\nContent-Length: 3\r\n\r\nabc", service.address);
        stream.write_all(request.as_bytes()).unwrap();
        BufReader::new(stream)
    };
    let mut first = start(&service);
    is_started.recv_timeout(Duration::from_secs(20)).unwrap();
    let mut second = start(&service);
    let deadline = Instant::now() + Duration::from_secs(20);
    while service.get("/health").json()["waiting"] != 1 {
        assert!(Instant::now() < deadline, "the second request does not wait");
        std::thread::sleep(Duration::from_millis(5));
    }
    let third = Answer::read(&mut start(&service), false);
    assert_eq!(third.header("retry-after"), Some("1"));
    third.problem(503, "busy");
    // Small requests are answered all the same.
    service.get("/trend/cox-stuart?readings=1;2").good();
    let_go.send(()).unwrap();
    assert_eq!(Answer::read(&mut first, false).good().text(), "abc");
    let_go.send(()).unwrap();
    assert_eq!(Answer::read(&mut second, false).good().text(), "abc");
}

#[test]
fn nobody_waits_for_ever() {
    let annotate = |_: &std::path::Path, _: &std::path::Path, _: &_| {
        std::thread::sleep(Duration::from_secs(2));
        Ok(AnnotatedSummary::default())
    };
    let service = TestService::start_with(|settings| {
        settings.limits.computing = 1;
        settings.limits.patience = Duration::from_millis(200);
        settings.annotation = Some(Annotation { annotate: Arc::new(annotate), parameters: Vec::new() });
    });
    let mut stream = service.connect();
    let request = format!("POST /annotate HTTP/1.1\r\nHost: {}\r\nContent-Length: 3\r\n\r\nabc", service.address);
    stream.write_all(request.as_bytes()).unwrap();
    let deadline = Instant::now() + Duration::from_secs(20);
    while service.get("/health").json()["places_free"] != 0 {
        assert!(Instant::now() < deadline, "the first request does not compute");
        std::thread::sleep(Duration::from_millis(5));
    }
    service.post("/annotate", "application/octet-stream", "abc").problem(503, "busy");
}
