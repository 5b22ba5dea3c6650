//! The interface's own description: generated, committed, and true.

use crate::support::Server;
use serde_json::Value;
use sigmadot::api::openapi::document_text;
use sigmadot::api::routes::ROUTES;
use sigmadot::api::state::GET_STATE;
use sigmadot::process::shape::STATE_QUESTION;

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
fn the_examples_show_what_their_names_promise() {
    let server = Server::start();
    for (name, verdict) in [
        ("laundry-let-down", "holds"),
        ("laundry-back-pressure-turbine", "violated"),
        ("harbour-heat-engine", "violated"),
    ] {
        let example = server.get(&format!("/v1/examples/{name}"));
        let report = server.post("/v1/checks", &example.body);
        assert_eq!(report.header("verdict"), Some(verdict), "{name}: {}", report.text());
    }
}

#[test]
fn every_fault_of_a_description_is_told_at_once_and_located() {
    let body = br#"{"components": {"v": {"kind": "vlave"}}, "flows": {
        "a": {"kind": "material", "to": "v", "fluid": "water", "pressure": 40, "temperature": "400 degX"},
        "b": {"kind": "material", "from": "w", "fluid": "water", "pressure": "10 bar", "colour": "red"}}}"#;
    let problem = Server::start().post("/v1/checks", body);
    assert_eq!(problem.status, 422);
    let problem = problem.json();
    let errors = problem["errors"].as_array().unwrap();
    for (pointer, code) in [
        ("/components/v/kind", "unknown-choice"),
        ("/flows/a/pressure", "bare-number"),
        ("/flows/a/temperature", "unknown-unit"),
        ("/flows/b/colour", "unknown-field"),
    ] {
        assert!(errors.iter().any(|e| e["pointer"] == pointer && e["code"] == code), "{pointer}: {problem}");
    }
}

#[test]
fn the_query_of_a_state_takes_what_its_body_takes() {
    let declared: Vec<&str> = STATE_QUESTION.all_fields().map(|f| f.name).collect();
    let taken = GET_STATE.parameters.iter().map(|p| p.name.split('.').next().unwrap());
    let taken: Vec<&str> = taken.filter(|n| !["units", "deadline"].contains(n)).collect();
    for name in &taken {
        assert!(declared.contains(name), "{name} is no member of a question");
    }
    // Own fluids are objects, and exergy is stated for them alone: both need a body.
    for name in declared.iter().filter(|n| !["fluids", "exergy"].contains(*n)) {
        assert!(taken.contains(name), "{name} is missing from the query");
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

#[test]
fn the_catalogue_of_fluids_has_spellings_ranges_sources_and_species() {
    let list = Server::start().get("/v1/fluids").json();
    let fluids = list["fluids"].as_array().unwrap();
    assert!(fluids.len() > 50, "{}", fluids.len());
    for entry in fluids.iter().chain(list["species"].as_array().unwrap()) {
        assert!(entry["source"].as_str().is_some_and(|s| !s.is_empty()), "{entry}");
    }
    for fluid in fluids {
        assert!(fluid["range"].as_str().is_some_and(|s| !s.is_empty()), "{fluid}");
    }
    let refrigerant = fluids.iter().find(|f| f["name"] == "R134a").unwrap();
    assert_eq!(refrigerant["kind"], "pure");
    // Every spelling is taken as it stands.
    let server = Server::start();
    for alias in refrigerant["aliases"].as_array().unwrap() {
        let fluid = alias.as_str().unwrap().replace(' ', "+");
        let answer = server.get(&format!("/v1/states?fluid={fluid}&pressure=1+bar&temperature=20+degC"));
        assert_eq!(answer.status, 200, "{alias}: {}", answer.text());
    }
    let species = list["species"].as_array().unwrap();
    assert!(species.len() >= 26, "{}", species.len());
    let methane = species.iter().find(|s| s["name"] == "CH4").unwrap();
    assert!((methane["molar_mass"].as_f64().unwrap() - 0.016043).abs() < 1e-6);
    assert!(methane["lowest_temperature"].as_f64() < methane["highest_temperature"].as_f64());
}

#[test]
fn claims_and_states_come_as_text_too() {
    let server = Server::start();
    for (path, word) in [
        ("/v1/claims/heat_pump?source=-7+degC&sink=35+degC&cop=4.2", "POSSIBLE"),
        ("/v1/states?fluid=water&temperature=300+degC&pressure=10+bar", "enthalpy"),
    ] {
        let answer = server.call("GET", path, &[("accept", "text/plain")], b"");
        let text = answer.text();
        assert!(text.contains(word), "{text}");
        assert!(text.lines().all(|line| line.chars().count() <= 96), "{text}");
    }
}
