//! The catalogue of rules holds what it promises.

use sigmadot::pipeline::{Cancel, check_bytes};
use sigmadot::process::ReadLimits;
use sigmadot::quantity::UnitSystem;
use sigmadot::report::Report;
use sigmadot::rules::{ALL, Authority, Case};
use std::collections::BTreeSet;

fn check(description: &str, rule: &str) -> Report {
    check_bytes(description.as_bytes(), &ReadLimits::default(), UnitSystem::Metric, &Cancel::new())
        .unwrap_or_else(|e| panic!("the case of {rule} is refused: {e:?}"))
}

/// Names of the rules that speak in a report, covered ones included.
fn spoken(report: &Report) -> BTreeSet<String> {
    report
        .violations
        .iter()
        .chain(&report.warnings)
        .flat_map(|f| std::iter::once(f.rule).chain(f.covers.iter().copied()))
        .map(str::to_owned)
        .collect()
}

#[test]
fn every_rule_is_documented_once() {
    let mut names = BTreeSet::new();
    for rule in ALL {
        let info = rule.info();
        assert!(names.insert(info.name), "{} stands twice", info.name);
        assert!(info.name.chars().all(|c| c.is_ascii_lowercase() || c == '-'), "{}", info.name);
        for (what, text) in [
            ("title", info.title),
            ("inequality", info.inequality),
            ("applies_to", info.applies_to),
            ("needs", info.needs),
            ("typical_cause", info.typical_cause),
            ("source", info.source),
        ] {
            assert!(!text.trim().is_empty(), "{}: {what} is empty", info.name);
        }
        let file = format!("src/rules/{}.rs", info.name.replace('-', "_"));
        let path = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join(&file);
        assert!(path.exists(), "{} has no file {file}", info.name);
    }
}

#[test]
fn every_breaking_case_breaks_its_rule() {
    for rule in ALL {
        let info = rule.info();
        let Case::Description(text) = info.breaking else { continue };
        let report = check(text, info.name);
        assert!(spoken(&report).contains(info.name), "{}: {}", info.name, report.to_text());
        if info.authority == Authority::Law {
            assert!(
                matches!(report.verdict, "violated" | "suspect"),
                "{}: verdict {}",
                info.name,
                report.verdict
            );
        }
    }
}

#[test]
fn no_keeping_case_breaks_its_rule() {
    for rule in ALL {
        let info = rule.info();
        let Case::Description(text) = info.keeping else { continue };
        let report = check(text, info.name);
        assert!(!spoken(&report).contains(info.name), "{}: {}", info.name, report.to_text());
        if info.authority == Authority::Law {
            assert!(!matches!(report.verdict, "violated" | "suspect"), "{}: {}", info.name, report.to_text());
        }
    }
}

/// One defect, one finding: the case that breaks a law is not reported from several sides.
#[test]
fn a_breaking_case_of_a_law_yields_one_law_finding() {
    for rule in ALL.iter().filter(|r| r.info().authority == Authority::Law) {
        let info = rule.info();
        let Case::Description(text) = info.breaking else { continue };
        let report = check(text, info.name);
        assert_eq!(report.violations.len(), 1, "{}: {}", info.name, report.to_text());
    }
}
