//! Who may come in: a page elsewhere must not reach the service through the browser of the person at this machine.

use crate::helpers::TestService;

fn ask(service: &TestService, host: &str, headers: &str) -> crate::helpers::Answer {
    let request = format!("GET /trend/cox-stuart?readings=1;2&give=p HTTP/1.1\r\nHost: {host}\r\n{headers}\r\n");
    service.send(request.as_bytes(), false)
}

#[test]
fn a_name_that_was_bent_to_this_machine_is_refused() {
    let service = TestService::start();
    let port = service.address.port();
    for host in
        ["evil.example".to_owned(), format!("evil.example:{port}"), format!("127.0.0.1.evil.example:{port}"), String::new()]
    {
        ask(&service, &host, "").problem(421, "host");
    }
    let absolute = format!("GET http://evil.example/health HTTP/1.1\r\nHost: {}\r\n\r\n", service.address);
    service.send(absolute.as_bytes(), false).problem(421, "host");
    assert_eq!(service.send(b"GET /health HTTP/1.1\r\n\r\n", false).status, 400);
}

#[test]
fn the_names_of_this_machine_are_let_in() {
    let service = TestService::start();
    let port = service.address.port();
    for host in [format!("127.0.0.1:{port}"), format!("localhost:{port}"), "LOCALHOST".into(), format!("[::1]:{port}")] {
        ask(&service, &host, "").good();
    }
    service.send(b"GET /health HTTP/1.0\r\n\r\n", false).good();
}

#[test]
fn a_page_elsewhere_is_refused() {
    let service = TestService::start();
    let host = service.address.to_string();
    for headers in [
        "Origin: https://elsewhere.example\r\n".to_owned(),
        "Origin: null\r\n".into(),
        format!("Origin: https://{host}\r\n"),
        "Origin: http://127.0.0.1:1\r\n".into(),
        "Sec-Fetch-Site: cross-site\r\nSec-Fetch-Mode: no-cors\r\n".into(),
        "Sec-Fetch-Site: same-site\r\nSec-Fetch-Mode: cors\r\n".into(),
    ] {
        ask(&service, &host, &headers).problem(403, "origin");
    }
    let preflight = service.ask(
        "OPTIONS",
        "/trend/cox-stuart",
        "Origin: https://elsewhere.example\r\nAccess-Control-Request-Method: POST\r\n",
        b"",
    );
    assert!(!preflight.headers.iter().any(|(name, _)| name.starts_with("access-control")), "{preflight:?}");
    preflight.problem(403, "origin");
}

#[test]
fn our_own_page_and_a_followed_link_are_let_in() {
    let service = TestService::start();
    let host = service.address.to_string();
    ask(&service, &host, &format!("Origin: http://{host}\r\nSec-Fetch-Site: same-origin\r\n")).good();
    ask(&service, &host, "Sec-Fetch-Site: cross-site\r\nSec-Fetch-Mode: navigate\r\n").good();
    ask(&service, &host, "Sec-Fetch-Site: none\r\nSec-Fetch-Mode: navigate\r\n").good();
}

#[test]
fn every_answer_carries_the_headers_that_keep_it_here() {
    let service = TestService::start();
    let host = service.address.to_string();
    let answers = [ask(&service, &host, ""), ask(&service, "evil.example", ""), service.get("/nowhere"), service.get("/")];
    for answer in answers {
        for (name, value) in [
            ("x-content-type-options", "nosniff"),
            ("cache-control", "no-store"),
            ("cross-origin-resource-policy", "same-origin"),
            ("referrer-policy", "no-referrer"),
        ] {
            assert_eq!(answer.header(name), Some(value));
        }
        assert!(answer.header("content-security-policy").unwrap().contains("frame-ancestors 'none'"));
        assert!(answer.header("access-control-allow-origin").is_none());
    }
}
