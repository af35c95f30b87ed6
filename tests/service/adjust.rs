//! `/adjust`. Holm's values for three p-values by hand: 3 x 0.01, then 2 x 0.03, then the larger of that and 0.04.

use crate::helpers::TestService;

#[test]
fn a_family_is_adjusted_in_its_own_order() {
    let service = TestService::start();
    let family = service.get("/adjust?p=0.01;0.04;;0.03").good().json();
    assert_eq!(family["by"], "holm");
    assert_eq!(family["family"], 3);
    assert_eq!(family["adjusted"].as_array().unwrap().len(), 4);
    assert!(family["adjusted"][2].is_null() && family["p"][2].is_null());
    for (place, expected) in [(0, 0.03), (1, 0.06), (3, 0.06)] {
        let got = family["adjusted"][place].as_f64().unwrap();
        assert!((got - expected).abs() < 1e-15, "{got}");
    }
}

#[test]
fn every_form_can_be_asked_for() {
    let service = TestService::start();
    let path = "/adjust?p=0.25;0.5&by=none";
    for (reply, shown) in [
        ("json", r#"{"by":"none","family":2,"p":[0.25,0.5],"adjusted":[0.25,0.5]}"#),
        ("text", "0.25\n0.5\n"),
        ("csv", "p,adjusted\r\n0.25,0.25\r\n0.5,0.5\r\n"),
        ("xml", "<risefall><by>none</by><family>2</family><adjusted>0.25</adjusted><adjusted>0.5</adjusted></risefall>"),
    ] {
        assert_eq!(service.get(&format!("{path}&reply={reply}")).good().text(), shown);
    }
    assert_eq!(service.get(&format!("{path}&reply=text&give=2")).good().text(), "0.5");
}

#[test]
fn a_range_can_be_sent() {
    let service = TestService::start();
    let body = r#"{"p":[[0.25],[0.5],[null]],"by":"none","reply":"text"}"#;
    assert_eq!(service.post("/adjust", "application/json", body).good().text(), "0.25\n0.5\n\n");
}

#[test]
fn what_is_no_p_value_is_named_with_its_place() {
    let service = TestService::start();
    let details = service.get("/adjust?p=0.01;1.5").problem(400, "p-value");
    assert_eq!(details["detail"], "p, position 2: expected a number from 0 to 1 or blank, got `1.5`");
    service.get("/adjust").problem(400, "parameter-absent");
    service.get("/adjust?p=0.01&q=1").problem(400, "parameter-unknown");
    service.get("/adjust?p=0.01&give=2").problem(400, "give-unknown");
    assert_eq!(service.ask("PUT", "/adjust", "", b"").problem(405, "verb")["help"], "It takes GET, HEAD, POST, OPTIONS.");
}
