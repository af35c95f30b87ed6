//! `/problems`.

use crate::helpers::TestService;

#[test]
fn the_type_of_a_problem_leads_to_its_meaning() {
    let service = TestService::start();
    let details = service.get("/trend/cox-stuart").problem(400, "parameter-absent");
    let row = service.get(details["type"].as_str().unwrap()).good().json();
    assert_eq!((&row["status"], &row["title"]), (&details["status"], &details["title"]));
    let all = service.get("/problems").good().json();
    assert!(all["problems"].as_array().unwrap().contains(&row));
    let unknown = service.get("/problems/parameter-absnt").problem(404, "problem-unknown");
    assert!(unknown["help"].as_str().unwrap().starts_with("Did you mean `parameter-absent`?"));
}
