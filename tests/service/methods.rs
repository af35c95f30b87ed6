//! `/methods` and `/methods/{name}`.

use risefall::method::METHODS;

use crate::helpers::TestService;

#[test]
fn every_registered_test_is_listed_with_all_that_is_declared_of_it() {
    let service = TestService::start();
    let listed = service.get("/methods").good().json();
    let listed = listed["methods"].as_array().unwrap();
    assert_eq!(listed.len(), METHODS.len());
    for (method, card) in METHODS.iter().zip(listed) {
        assert_eq!((&card["key"], &card["title"]), (&method.card.key.into(), &method.card.title.into()));
        assert_eq!(card["sources"].as_array().unwrap().len(), method.card.sources.len());
        let names: Vec<&str> = card["parameters"].as_array().unwrap().iter().map(|one| one["name"].as_str().unwrap()).collect();
        assert_eq!(names, method.parameters.iter().map(|parameter| parameter.name).collect::<Vec<_>>());
    }
}

#[test]
fn a_parameter_is_told_with_its_form_and_its_default() {
    let service = TestService::start();
    let card = service.get("/methods/cox-stuart").good().json();
    let own = |name: &str| card["parameters"].as_array().unwrap().iter().find(|one| one["name"] == name).unwrap().clone();
    let ties = own("ties");
    assert_eq!((&ties["kind"], &ties["default"]), (&"choice".into(), &"drop".into()));
    assert_eq!(ties["choices"][0]["word"], "drop");
    let most = own("most_pairs");
    assert_eq!((&most["kind"], &most["least"], &most["default"]), (&"integer".into(), &10.into(), &10_000.into()));
    let notice = own("notice");
    assert_eq!((&notice["kind"], &notice["above"], &notice["default"]), (&"number".into(), &0.0.into(), &0.75.into()));
}

#[test]
fn people_get_lines() {
    let service = TestService::start();
    let list = service.get("/methods?reply=text").good();
    assert!(list.text().lines().any(|line| line.starts_with("cox-stuart  ")), "{}", list.text());
    let card = service.ask("GET", "/methods/cox-stuart", "Accept: text/plain\r\n", b"").good();
    assert!(card.text().starts_with("Cox-Stuart sign test for trend\n===="), "{}", card.text());
    assert!(card.text().lines().all(|line| line.chars().count() <= 96));
    for words in ["risk = between 0 and 1 [default: 0.05]", "ties = drop | against | split [default: drop]", "Biometrika 42"] {
        assert!(card.text().contains(words), "{words} is not in:\n{}", card.text());
    }
}

#[test]
fn a_list_that_the_client_has_is_not_sent_again() {
    let service = TestService::start();
    let first = service.get("/methods").good();
    let tag = first.header("etag").unwrap().to_owned();
    let again = service.ask("GET", "/methods", &format!("If-None-Match: {tag}\r\n"), b"");
    assert_eq!((again.status, again.body.len()), (304, 0));
    let other = service.ask("GET", "/methods?reply=text", &format!("If-None-Match: {tag}\r\n"), b"");
    assert_eq!(other.status, 200);
}

#[test]
fn what_is_not_there_is_a_problem() {
    let service = TestService::start();
    service.get("/methods/cox-stuat").problem(404, "method-unknown");
    service.get("/methods?reply=csv").problem(400, "parameter-value");
    service.get("/methods?colour=red").problem(400, "parameter-unknown");
    assert_eq!(service.ask("POST", "/methods", "", b"").problem(405, "verb")["help"], "It takes GET, HEAD, OPTIONS.");
}
