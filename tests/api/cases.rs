//! The worked cases of `tests/cases`, each with its published source, posted over HTTP.

use crate::support::Server;
use serde_json::Value;
use std::fs;
use std::path::Path;

/// Every case file, by name.
fn cases() -> Vec<(String, Value)> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/cases");
    let mut out: Vec<(String, Value)> = fs::read_dir(folder)
        .unwrap()
        .map(|entry| {
            let path = entry.unwrap().path();
            let name = path.file_stem().unwrap().to_string_lossy().into_owned();
            (name, serde_json::from_str(&fs::read_to_string(&path).unwrap()).unwrap())
        })
        .collect();
    out.sort_by(|a, b| a.0.cmp(&b.0));
    assert!(out.len() >= 20, "only {} cases", out.len());
    out
}

#[test]
fn worked_cases_give_their_published_answers() {
    let server = Server::start();
    let mut wrong = Vec::new();
    for (name, case) in cases() {
        assert!(case["source"].as_str().is_some_and(|s| !s.is_empty()), "{name} has no source");
        let answer = server.post("/v1/checks", case["description"].to_string().as_bytes()).json();
        let expect = &case["expect"];
        if let Some(verdict) = expect["verdict"].as_str()
            && answer["verdict"] != verdict
        {
            wrong.push(format!("{name}: verdict {} instead of {verdict}", answer["verdict"]));
        }
        for (pointer, want) in expect["figures"].as_object().unwrap() {
            let (value, tolerance) = (want[0].as_f64().unwrap(), want[1].as_f64().unwrap());
            match answer.pointer(pointer).and_then(Value::as_f64) {
                Some(got) if (got - value).abs() <= tolerance => {}
                got => wrong.push(format!("{name}: {pointer} is {got:?}, not {value} ± {tolerance}")),
            }
        }
        for rule in expect["covers"].as_array().into_iter().flatten() {
            let seen = answer["violations"]
                .as_array()
                .unwrap()
                .iter()
                .any(|v| v["rule"] == *rule || v["covers"].as_array().unwrap().contains(rule));
            if !seen {
                wrong.push(format!("{name}: {rule} is not among the findings"));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
