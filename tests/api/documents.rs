//! The interface's own description: generated, committed, and true.

use crate::support::Server;
use serde_json::Value;
use sigmadot::api::openapi::document_text;
use sigmadot::api::routes::ROUTES;

#[test]
fn the_committed_openapi_document_is_current() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/openapi/openapi.json");
    let generated = document_text();
    if std::env::var_os("SIGMADOT_REWRITE").is_some() {
        std::fs::write(path, &generated).unwrap();
    }
    let committed = std::fs::read_to_string(path).unwrap_or_default();
    assert!(committed == generated, "openapi/openapi.json is stale; run the tests with SIGMADOT_REWRITE=1");
}

#[test]
fn the_served_document_is_the_committed_one() {
    let served = Server::start().get("/openapi.json");
    assert_eq!(served.header("content-type"), Some("application/json"));
    assert_eq!(served.text(), document_text());
}

#[test]
fn every_plain_get_answers_and_every_catalogue_is_listed() {
    let server = Server::start();
    for route in ROUTES.iter().filter(|r| r.method.key() == "get" && !r.path.contains('{')) {
        if route.parameters.is_empty() {
            let answer = server.get(route.path);
            assert!(answer.status == 200 || answer.status == 308, "{}: {}", route.path, answer.text());
            assert_eq!(answer.header("x-content-type-options"), Some("nosniff"));
        }
    }
    let codes = server.get("/v1/codes").json();
    let unit = codes["codes"].as_array().unwrap().iter().find(|c| c["code"] == "unknown-unit").unwrap();
    assert_eq!(unit["status"], 422);
}

#[test]
fn every_example_is_served_and_can_be_posted_as_it_is() {
    let server = Server::start();
    let list = server.get("/v1/examples").json();
    let examples = list["examples"].as_array().unwrap();
    assert!(examples.len() >= 3);
    for example in examples {
        let text = server.get(example["href"].as_str().unwrap());
        let report = server.post("/v1/checks", &text.body);
        assert_eq!(report.status, 200, "{}: {}", example["name"], report.text());
        assert_eq!(report.json()["verdict"].as_str(), report.header("verdict"));
    }
}

#[test]
fn states_take_the_query_as_they_take_a_body() {
    let server = Server::start();
    let by_query = server.get("/v1/states?fluid=water&pressure=10%20bar&temperature=300+degC");
    let by_body =
        server.post("/v1/states", br#"{"fluid": "water", "pressure": "10 bar", "temperature": "300 degC"}"#);
    assert_eq!((by_query.status, by_query.json()), (200, by_body.json()));
}

#[test]
fn pages_work_offline() {
    let server = Server::start();
    let landing = server.get("/");
    assert!(landing.header("content-security-policy").unwrap().contains("default-src 'none'"));
    let docs = server.get("/docs/");
    assert_eq!(docs.status, 200);
    assert!(!docs.text().contains("https://") && !docs.text().contains("//cdn"));
    for piece in docs.text().split('"').filter(|p| p.ends_with(".js") || p.ends_with(".css")) {
        let file = piece.trim_start_matches("./");
        assert_eq!(server.get(&format!("/docs/{file}")).status, 200, "{file}");
    }
    let start: Value = server.get("/docs/swagger-initializer.js").text().contains("/openapi.json").into();
    assert_eq!(start, true);
    server.get("/docs/..%2f..%2fetc%2fpasswd").assert_problem(404, "not-found");
}
