//! One defect, one finding: over every example and every worked case.

use serde_json::Value;
use sigmadot::pipeline::{Cancel, check_bytes};
use sigmadot::process::ReadLimits;
use sigmadot::quantity::UnitSystem;
use sigmadot::report::Report;
use std::collections::BTreeSet;
use std::fs;
use std::path::Path;

/// Descriptions by name: the examples, and the worked cases.
pub(super) fn descriptions() -> Vec<(String, String)> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut out = Vec::new();
    for folder in ["openapi/examples", "tests/cases"] {
        for entry in fs::read_dir(root.join(folder)).unwrap() {
            let path = entry.unwrap().path();
            if path.extension().is_none_or(|e| e != "json") {
                continue;
            }
            let text = fs::read_to_string(&path).unwrap();
            let value: Value = serde_json::from_str(&text).unwrap();
            let name = path.strip_prefix(root).unwrap().display().to_string();
            match value.get("description") {
                Some(description) => out.push((name, description.to_string())),
                None => out.push((name, text)),
            }
        }
    }
    out.sort();
    assert!(out.len() >= 50, "only {}", out.len());
    out
}

fn check(name: &str, description: &str) -> Report {
    check_bytes(description.as_bytes(), &ReadLimits::default(), UnitSystem::Metric, &Cancel::new())
        .unwrap_or_else(|e| panic!("{name}: {e:?}"))
}

#[test]
fn each_defect_is_one_finding() {
    for (name, description) in descriptions() {
        let report = check(&name, &description);
        let places: BTreeSet<_> = report.violations.iter().map(|f| f.component.clone()).collect();
        assert_eq!(places.len(), report.violations.len(), "{name}: {}", report.to_text());
        assert!(report.violations.len() <= 1, "{name}: {}", report.to_text());
    }
}

#[test]
fn counts_agree_with_what_is_listed() {
    for (name, description) in descriptions() {
        let report = check(&name, &description);
        let c = report.counts;
        assert_eq!(c.undecided, report.undecided.len(), "{name}");
        assert_eq!(c.warnings, report.warnings.len(), "{name}");
        assert_eq!(c.violated + c.suspect > 0, !report.violations.is_empty(), "{name}");
        assert_eq!(report.complete, c.unchecked == 0, "{name}");
        let worst = match c {
            _ if c.violated > 0 => "violated",
            _ if c.suspect > 0 => "suspect",
            _ if c.undecided > 0 => "undecided",
            _ if c.holds > 0 => "holds",
            _ => "unchecked",
        };
        assert_eq!(report.verdict, worst, "{name}");
        for finding in report.violations.iter().chain(&report.warnings).chain(&report.undecided) {
            assert!(!finding.statement.is_empty(), "{name}: {}", finding.rule);
            assert!(!finding.covers.contains(&finding.rule), "{name}: {}", finding.rule);
        }
        if name.starts_with("openapi") {
            assert_ne!(report.data_verdict, "contradictory", "{name}: {}", report.to_text());
        }
        // The tool's own check of the exergy balance against T0 σ was made and passed.
        let own = |rule: &str| rule == "gouy-stodola-mismatch";
        assert!(!report.warnings.iter().any(|f| own(f.rule)), "{name}");
        assert!(!report.unchecked.iter().any(|u| own(u.what) && u.reason != "state"), "{name}");
    }
}
