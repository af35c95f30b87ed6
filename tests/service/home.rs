//! `/`, and addresses where there is nothing.

use crate::helpers::TestService;

#[test]
fn the_page_leads_to_all_that_there_is_and_loads_nothing_from_elsewhere() {
    let service = TestService::start();
    let page = service.get("/").good();
    assert_eq!(page.header("content-type"), Some("text/html; charset=utf-8"));
    let links = page.text().split("href=\"").skip(1).map(|rest| rest.split('"').next().unwrap().replace("&amp;", "&"));
    let links: Vec<String> = links.collect();
    assert!(links.len() >= 4);
    for link in links {
        assert_eq!(service.get(&link).status, 200, "{link}");
    }
    assert!(page.header("content-security-policy").unwrap().starts_with("default-src 'none'"));
    assert!(!page.text().contains("src="));
}

#[test]
fn an_unknown_address_is_a_problem() {
    let service = TestService::start();
    assert_eq!(
        service.get("/trends").shown(),
        concat!(
            "404 application/problem+json\n",
            r#"{"type":"/problems/path-unknown","title":"There is nothing at this address.","status":404,"#,
            r#""detail":"there is nothing at /trends","code":"path-unknown","value":"/trends","help":"See / for what there is."}"#,
        )
    );
    assert_eq!(service.get("/trends?fault=text").good().text(), "there is nothing at /trends. See / for what there is.");
}
