//! All faults at once: the walk's and those of structure, each located.

use crate::support::Server;
use serde_json::json;

#[test]
fn faults_of_form_and_of_structure_come_together() {
    let server = Server::start();
    let body = json!({
        "components": {"a": {"kind": "valv"}, "b": {"kind": "pump"}},
        "flows": {
            "x": {"kind": "material", "to": "c", "fluid": "watr", "pressure": 40, "temperature": "4 bar"},
            "y": {"kind": "material", "from": "a", "to": "b", "same_state_as": "z"},
        }
    });
    let problem =
        server.post("/v1/checks", body.to_string().as_bytes()).assert_problem(422, "unknown-choice");
    let found: Vec<(&str, &str)> = problem["errors"]
        .as_array()
        .unwrap()
        .iter()
        .map(|e| (e["pointer"].as_str().unwrap(), e["code"].as_str().unwrap()))
        .collect();
    for expected in [
        ("/components/a/kind", "unknown-choice"),
        ("/flows/x/pressure", "bare-number"),
        ("/flows/x/temperature", "wrong-dimension"),
        ("/flows/x/to", "dangling-reference"),
        ("/flows/x/fluid", "unknown-fluid"),
        ("/flows/y/same_state_as", "dangling-reference"),
    ] {
        assert!(found.contains(&expected), "{expected:?} is not in {found:?}");
    }
    assert!(!found.iter().any(|f| f.0 == "/flows/y/from"), "a kind that is unknown is still a component");
}
