//! Claims against published and hand-worked cases.

use serde_json::{Value, json};
use sigmadot::claim::{CLAIM, catalogue, judge_bytes, judge_query};
use sigmadot::diagnostic::Diagnostic;
use sigmadot::document::Limits;
use sigmadot::pipeline::{Cancel, Failure};
use sigmadot::quantity::UnitSystem;

fn judged(claim: &Value, units: UnitSystem) -> Result<Value, Failure> {
    judge_bytes(claim.to_string().as_bytes(), &Limits::default(), units, &Cancel::new())
        .map(|r| serde_json::from_slice(&r.to_json()).unwrap())
}

fn judge(claim: Value) -> Value {
    judged(&claim, UnitSystem::Si).unwrap_or_else(|e| panic!("{claim}: {e:?}"))
}

fn refused(claim: Value) -> Vec<Diagnostic> {
    match judged(&claim, UnitSystem::Si) {
        Err(Failure::Rejected(faults)) => faults,
        other => panic!("{claim}: {other:?}"),
    }
}

fn query(kind: &str, text: &str) -> Result<Value, Vec<Diagnostic>> {
    let params: Vec<(String, String)> = text
        .split('&')
        .filter(|p| !p.is_empty())
        .map(|p| p.split_once('=').map(|(a, b)| (a.to_owned(), b.to_owned())).unwrap())
        .collect();
    match judge_query(kind, &params, &Limits::default(), UnitSystem::Metric, &Cancel::new()) {
        Ok(r) => Ok(serde_json::from_slice(&r.to_json()).unwrap()),
        Err(Failure::Rejected(faults)) => Err(faults),
        Err(other) => panic!("{other:?}"),
    }
}

#[test]
fn every_example_is_judged() {
    assert_eq!(catalogue().count(), CLAIM.variants.len());
    for kind in catalogue() {
        let claim: Value = serde_json::from_str(kind.example).unwrap();
        assert_eq!(claim["kind"], kind.kind);
        let report = judged(&claim, UnitSystem::Metric).unwrap_or_else(|e| panic!("{}: {e:?}", kind.kind));
        println!("{}\n", serde_json::to_string_pretty(&report).unwrap());
        assert_eq!(report["verdict"], "possible", "{report}");
    }
}
