//! `/openapi.json`: the document is whole, and what it says is true of the running service.

use std::collections::HashSet;

use risefall::method::METHODS;
use serde_json::Value;

use crate::helpers::TestService;

fn document(service: &TestService) -> Value {
    service.get("/openapi.json").good().json()
}

/// Follows a reference within the document.
fn resolve<'a>(document: &'a Value, value: &'a Value) -> &'a Value {
    match value["$ref"].as_str() {
        Some(reference) => {
            document.pointer(reference.trim_start_matches('#')).unwrap_or_else(|| panic!("{reference} leads nowhere"))
        }
        None => value,
    }
}

fn each<'a>(value: &'a Value, visit: &mut impl FnMut(&'a Value)) {
    visit(value);
    match value {
        Value::Array(items) => items.iter().for_each(|item| each(item, visit)),
        Value::Object(members) => members.values().for_each(|member| each(member, visit)),
        _ => {}
    }
}

#[test]
fn every_reference_leads_somewhere_and_every_operation_has_its_own_name() {
    let document = document(&TestService::start());
    assert_eq!(document["openapi"], "3.1.0");
    let mut references = 0;
    each(&document, &mut |value| {
        if value["$ref"].is_string() {
            resolve(&document, value);
            references += 1;
        }
    });
    assert!(references > 20);
    let mut names = HashSet::new();
    for (path, verbs) in document["paths"].as_object().unwrap() {
        for (verb, operation) in verbs.as_object().unwrap() {
            assert!(names.insert(operation["operationId"].as_str().unwrap()), "{verb} {path}");
        }
    }
}

#[test]
fn every_test_is_there_with_every_parameter() {
    let document = document(&TestService::start());
    for method in METHODS {
        let path = &document["paths"][format!("/trend/{}", method.card.key)];
        for verb in ["get", "post"] {
            let listed = path[verb]["parameters"].as_array().unwrap();
            let names: Vec<&str> = listed.iter().map(|one| resolve(&document, one)["name"].as_str().unwrap()).collect();
            for parameter in method
                .parameters
                .iter()
                .map(|parameter| parameter.name)
                .chain(["readings", "moments", "seek", "risk", "reply", "give", "fault"])
            {
                assert!(names.contains(&parameter), "{verb} {}: {parameter}", method.card.key);
            }
        }
        let body = &path["post"]["requestBody"]["content"]["application/json"]["schema"]["properties"];
        assert!(method.parameters.iter().all(|parameter| body[parameter.name].is_object()));
    }
}

/// What the document gives as an example is answered, and the answer is the one that stands beside it.
#[test]
fn every_example_is_true() {
    let service = TestService::start();
    let document = document(&service);
    let mut tried = 0;
    for (path, verbs) in
        document["paths"].as_object().unwrap().iter().filter(|(path, _)| path.starts_with("/trend/") || *path == "/adjust")
    {
        let query: Vec<String> = verbs["get"]["parameters"]
            .as_array()
            .unwrap()
            .iter()
            .filter_map(|one| Some(format!("{}={}", one["name"].as_str()?, one["example"].as_str()?)))
            .collect();
        let answered = &verbs["get"]["responses"]["200"]["content"]["application/json"]["example"];
        assert!(answered.is_object(), "{path} has no example");
        assert_eq!(&service.get(&format!("{path}?{}", query.join("&"))).good().json(), answered, "{path}");
        let sent = &verbs["post"]["requestBody"]["content"]["application/json"]["example"];
        let posted = service.post(path, "application/json", sent.to_string()).good().json();
        // The echo tells numbers from numbers written as text; all else is the same.
        assert_eq!(posted["p"], answered["p"], "{path}");
        tried += 1;
    }
    assert_eq!(tried, METHODS.len() + 1);
}

#[test]
fn every_path_of_the_document_answers() {
    let service = TestService::start();
    for (path, verbs) in document(&service)["paths"].as_object().unwrap() {
        let path = path.replace("{name}", "cox-stuart").replace("{code}", "json");
        for verb in verbs.as_object().unwrap().keys().filter(|verb| *verb == "get") {
            let status = service.ask(&verb.to_uppercase(), &path, "", b"").status;
            assert!(status == 200 || path.starts_with("/trend") || path == "/adjust", "{verb} {path}: {status}");
            assert_ne!(status, 404);
        }
    }
}

/// A report against the schema that the document has for it, as far as names and presence go.
#[test]
fn a_report_has_the_members_that_the_schema_says() {
    let service = TestService::start();
    let document = document(&service);
    let report = service.get("/trend/cox-stuart?readings=3;4;2;5;6;5;7;8").good().json();
    check_members(&document, &document["components"]["schemas"]["Report"], &report);
    let problem = service.get("/trend/cox-stuart").json();
    check_members(&document, &document["components"]["schemas"]["Problem"], &problem);
}

fn check_members(document: &Value, schema: &Value, value: &Value) {
    let schema = resolve(document, schema);
    if let Some(choices) = schema["anyOf"].as_array() {
        return check_members(document, &choices[usize::from(value.is_null())], value);
    }
    if let (Some(properties), Some(members)) = (schema["properties"].as_object(), value.as_object()) {
        for (name, member) in members {
            check_members(document, properties.get(name).unwrap_or_else(|| panic!("{name} is not in the schema")), member);
        }
        for name in schema["required"].as_array().into_iter().flatten() {
            assert!(members.contains_key(name.as_str().unwrap()), "{name} is missing");
        }
    }
    if let (true, Some(items)) = (schema["items"].is_object(), value.as_array()) {
        items.iter().for_each(|item| check_members(document, &schema["items"], item));
    }
}

#[test]
fn the_document_is_packed_for_who_asks() {
    let service = TestService::start();
    let packed = service.ask("GET", "/openapi.json", "Accept-Encoding: gzip\r\n", b"").good();
    assert_eq!(packed.header("content-encoding"), Some("gzip"));
    assert!(packed.body.starts_with(&[0x1f, 0x8b]));
    assert!(packed.body.len() < service.get("/openapi.json").body.len() / 3);
}
