//! The worked cases of `tests/cases`, each with its published source, through the library alone.
//!
//! Tolerances: 0.1 % of the answers recomputed from the sources' own inputs, or what the printed
//! digits allow. The cooling tower is the exception, for the reason that its source states.

use serde_json::Value;
use sigmadot::pipeline::{Cancel, check_bytes};
use sigmadot::quantity::UnitSystem;
use std::path::Path;

fn report(description: &Value) -> Value {
    let body = description.to_string();
    let report = check_bytes(body.as_bytes(), &Default::default(), UnitSystem::Metric, &Cancel::new());
    serde_json::from_slice(&report.unwrap().to_json()).unwrap()
}

#[test]
fn every_case_gives_the_answers_of_its_source() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/cases");
    let mut wrong = Vec::new();
    let mut figures = 0;
    for entry in std::fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        let name = path.file_stem().unwrap().to_string_lossy().into_owned();
        let case: Value = serde_json::from_slice(&std::fs::read(&path).unwrap()).unwrap();
        let answer = report(&case["description"]);
        let expect = &case["expect"];
        if answer["verdict"] != expect["verdict"] {
            wrong.push(format!("{name}: verdict {} instead of {}", answer["verdict"], expect["verdict"]));
        }
        for (pointer, want) in expect["figures"].as_object().unwrap() {
            figures += 1;
            let (value, tolerance) = (want[0].as_f64().unwrap(), want[1].as_f64().unwrap());
            match answer.pointer(pointer).and_then(Value::as_f64) {
                Some(got) if (got - value).abs() <= tolerance => {}
                got => wrong.push(format!("{name}: {pointer} is {got:?}, not {value} ± {tolerance}")),
            }
        }
        for rule in expect["covers"].as_array().into_iter().flatten() {
            let seen = answer["violations"].as_array().unwrap().iter().any(|finding| {
                finding["rule"] == *rule || finding["covers"].as_array().unwrap().contains(rule)
            });
            if !seen {
                wrong.push(format!("{name}: {rule} is not among the findings"));
            }
        }
    }
    assert!(figures > 80, "only {figures} figures");
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
