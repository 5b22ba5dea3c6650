//! What a description is promised: nothing that is given is ignored, every fault has its place, and
//! a verdict counts what it stands on.

use serde_json::{Value, json};
use sigmadot::diagnostic::Code;
use sigmadot::pipeline::{Cancel, Failure, check_bytes};
use sigmadot::process::ReadLimits;
use sigmadot::quantity::UnitSystem;
use sigmadot::report::Report;

fn attempt(description: &Value) -> Result<Report, Failure> {
    let body = description.to_string();
    check_bytes(body.as_bytes(), &ReadLimits::default(), UnitSystem::Metric, &Cancel::new())
}

fn check(description: &Value) -> Report {
    attempt(description).unwrap_or_else(|e| panic!("refused: {e:?}"))
}

/// Code, place and hint of every fault.
fn faults(description: &Value) -> Vec<(Code, String, String)> {
    match attempt(description) {
        Err(Failure::Rejected(faults)) => faults
            .into_iter()
            .map(|f| (f.code, f.pointer.to_string(), f.hint.map(|h| h.to_string()).unwrap_or_default()))
            .collect(),
        other => panic!("not refused: {other:?}"),
    }
}

/// An engine that takes 100 kW at 500 degC, rejects 35 kW at 30 degC and delivers 65 kW.
fn engine() -> Value {
    json!({
        "components": {"engine": {"kind": "heat_engine"}},
        "flows": {
            "hot": {"kind": "heat", "to": "engine", "rate": "100 kW", "temperature": "500.0 degC"},
            "cold": {"kind": "heat", "from": "engine", "rate": "35 kW", "temperature": "30.0 degC"},
            "shaft": {"kind": "work", "from": "engine", "form": "shaft", "power": "65 kW"}
        }
    })
}

#[test]
fn a_finding_says_in_plain_words_what_is_wrong() {
    let report = check(&engine());
    let finding = &report.violations[0];
    assert_eq!(finding.rule, "negative-entropy-generation");
    // 1 − 303.15/773.15 = 0.6079.
    for part in ["efficiency 0.65", "exceeds the limit 0.6079", "σ = "] {
        assert!(finding.statement.contains(part), "{}", finding.statement);
    }
    assert!(report.statement.contains("exceeds the limit 0.6079"), "{}", report.statement);
    assert!(report.to_text().contains("engine: engine beats carnot (1 below)"), "{}", report.to_text());
}

#[test]
fn a_policy_names_rules_that_exist() {
    let mut description = engine();
    description["policy"] =
        json!({"disable": ["engine-beats-carno"], "enable": ["mass-imbalance", "nonsense"]});
    let found = faults(&description);
    assert_eq!(found.len(), 2, "{found:?}");
    assert_eq!(found[0].0, Code::UnknownChoice);
    assert_eq!(found[0].1, "/policy/disable/0");
    assert!(found[0].2.contains("engine-beats-carnot"), "{}", found[0].2);
    assert_eq!(found[1].1, "/policy/enable/1");
}

#[test]
fn a_law_that_is_switched_off_is_unchecked_and_the_others_still_count() {
    let mut description = engine();
    description["policy"] = json!({"disable": ["negative-entropy-generation"]});
    let report = check(&description);
    assert_eq!((report.verdict, report.complete), ("violated", false));
    assert_eq!(report.violations.len(), 1);
    assert!(report.violations[0].covers.contains(&"engine-beats-carnot"));
    assert_eq!(report.counts.unchecked, 1);
    assert_eq!(report.unchecked[0].reason, "disabled");
    description["policy"]["enable"] = json!(["negative-entropy-generation"]);
    assert!(check(&description).complete);
}

#[test]
fn states_without_amounts_are_judged_by_their_entropies() {
    let turbine = |temperature: &str| {
        check(&json!({
            "components": {"turbine": {"kind": "turbine"}},
            "flows": {
                "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC"},
                "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.0 bar", "temperature": temperature},
                "shaft": {"kind": "work", "from": "turbine"}
            }
        }))
    };
    // Steam tables: 6.771 kJ/(kg K) before; 6.737 at 180 degC and 6.975 at 230 degC after.
    let report = turbine("180.0 degC");
    assert_eq!((report.verdict, report.complete), ("violated", false));
    assert_eq!(report.violations[0].rule, "expander-beats-isentropic");
    assert_eq!(turbine("230.0 degC").verdict, "holds");
}

#[test]
fn a_given_figure_stays_given_when_its_uncertainty_is_assumed() {
    let mut description = engine();
    description["policy"] = json!({"literals": "measured"});
    let report = check(&description);
    assert!(report.flows.0.iter().all(|(_, flow)| flow.origin == "given"));
    assert!(report.assumptions.iter().any(|a| a.r#where == "/flows/hot/rate"));
}

#[test]
fn the_barometer_is_listed_as_assumed_where_a_gauge_needs_it() {
    let valve = |pressure: &str, environment: Value| {
        let report = check(&json!({
            "environment": environment,
            "components": {"valve": {"kind": "valve"}},
            "flows": {
                "in": {"kind": "material", "to": "valve", "fluid": "water", "mass_flow": "2 kg/s", "pressure": pressure, "temperature": "250.0 degC"},
                "out": {"kind": "material", "from": "valve", "pressure": "3.000 bar"}
            }
        }));
        report.assumptions.iter().filter(|a| a.r#where == "/environment/barometric_pressure").count()
    };
    assert_eq!(valve("9.0 bar(g)", json!({"temperature": "10 degC"})), 1);
    assert_eq!(valve("10.0 bar", json!({"temperature": "10 degC"})), 0);
    assert_eq!(valve("9.0 bar(g)", json!({"barometric_pressure": "1.008 bar"})), 0);
}

#[test]
fn a_loss_in_a_batch_needs_its_duration() {
    let mut description = json!({
        "basis": "amount",
        "components": {"vessel": {"kind": "storage", "heat_loss": "2 kW"}},
        "flows": {"hot": {"kind": "heat", "to": "vessel", "energy": "100 kJ", "temperature": "90.0 degC"}}
    });
    let found = faults(&description);
    assert_eq!((found[0].0, found[0].1.as_str()), (Code::Conflict, "/components/vessel/heat_loss"));
    description["duration"] = json!("60 s");
    let report = check(&description);
    let loss = report.flows.0.iter().find(|(name, _)| name == "vessel.heat_loss").unwrap();
    let figures = serde_json::to_value(&loss.1).unwrap();
    assert_eq!(figures["rate"]["value"], 120.0);
    assert_eq!(figures["rate"]["unit"], "kJ");
}

#[test]
fn a_claim_that_nothing_bounds_is_said_to_be_untested() {
    let mut description = engine();
    description["components"]["engine"]["stated_performance"] = json!({"efficiency": 0.5, "cop": 3});
    let report = check(&description);
    let untested: Vec<&str> = report
        .unchecked
        .iter()
        .filter(|u| u.what == "stated_performance")
        .map(|u| u.r#where.as_str())
        .collect();
    assert_eq!(untested, ["/components/engine/stated_performance/cop"]);
}

#[test]
fn faults_of_form_do_not_hide_references_to_nothing() {
    let mut description = engine();
    description["flows"]["hot"]["rate"] = json!("100 bananas");
    description["flows"]["cold"]["from"] = json!("engin");
    description["flows"]["shaft"]["colour"] = json!("red");
    description["groups"] = json!({"all": ["engine", "pump"]});
    let found = faults(&description);
    let places: Vec<&str> = found.iter().map(|f| f.1.as_str()).collect();
    for place in ["/flows/hot/rate", "/flows/cold/from", "/flows/shaft/colour", "/groups/all/1"] {
        assert_eq!(places.iter().filter(|p| **p == place).count(), 1, "{place} in {places:?}");
    }
}

#[test]
fn what_is_not_used_is_said_to_be_unused() {
    let mut description = engine();
    description["economics"] = json!({});
    let silent = check(&description);
    description["economics"] = json!({"currency": "EUR", "annual_hours": 8000});
    let report = check(&description);
    let said =
        |report: &Report| report.assumptions.iter().any(|a| a.statement.contains("no costs are computed"));
    assert!(said(&report) && !said(&silent));
    description["economics"] = json!({"curency": "EUR"});
    assert_eq!(faults(&description)[0].0, Code::UnknownField);
}

/// Every member that a description may have, most of them empty.
#[test]
fn a_description_with_every_member_is_taken() {
    let report = check(&json!({
        "name": "Harbour laundry, steam let-down",
        "basis": "rate",
        "environment": {"temperature": "10 degC", "pressure": "1.013 bar", "relative_humidity": 0.70,
                        "barometric_pressure": "1.008 bar", "chemistry": "szargut-1986"},
        "policy": {}, "fluids": {}, "groups": {}, "calibrations": {}, "economics": {},
        "components": {"letdown": {"kind": "valve"}},
        "flows": {
            "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40 bar", "temperature": "400 degC", "mass_flow": "2 kg/s"},
            "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10 bar", "temperature": "376.5 degC", "mass_flow": "2 kg/s"}
        }
    }));
    assert_eq!((report.verdict, report.data_verdict), ("holds", "consistent"));
}

#[test]
fn redundant_readings_calibrations_and_resolutions_move_the_uncertainty() {
    let u = |temperature: Value| {
        let report = check(&json!({
            "calibrations": {"loop": {"uncertainty": "0.3 K"}},
            "components": {"valve": {"kind": "valve"}},
            "flows": {
                "in": {"kind": "material", "to": "valve", "fluid": "water", "mass_flow": "2 kg/s", "pressure": "10.0 bar", "temperature": temperature},
                "out": {"kind": "material", "from": "valve", "pressure": "3.000 bar"}
            }
        }));
        let flows = serde_json::to_value(&report.flows).unwrap();
        flows["in"]["temperature"]["u"].as_f64().unwrap()
    };
    let reading = |extra: Value| {
        let mut one = json!({"value": 250, "unit": "degC"});
        one.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
        one
    };
    let close = |got: f64, want: f64| assert!((got - want).abs() < 2e-3 * want, "{got} against {want}");
    close(u(reading(json!({"uncertainty": "0.5 K"}))), 0.5);
    close(
        u(json!([reading(json!({"uncertainty": "0.5 K"})), reading(json!({"uncertainty": "0.5 K"}))])),
        0.5 / 2f64.sqrt(),
    );
    let common = reading(json!({"uncertainty": "0.4 K", "calibration": "loop"}));
    close(u(common.clone()), 0.5);
    // The common part does not average out.
    close(u(json!([common, common])), (0.16f64 / 2.0 + 0.09).sqrt());
    close(u(reading(json!({"resolution": 0.2}))), 0.1 / 3f64.sqrt());
}

#[test]
fn a_tag_in_a_single_check_is_told_that_it_has_no_reading() {
    let mut description = engine();
    description["flows"]["hot"]["temperature"] = json!({"tag": "TT-101"});
    let found = faults(&description);
    assert_eq!((found[0].0, found[0].1.as_str()), (Code::DanglingReference, "/flows/hot/temperature"));
}

#[test]
fn each_section_of_a_turbine_is_a_test_of_its_family() {
    let report = check(&json!({
        "components": {"turbine": {"kind": "turbine"}},
        "flows": {
            "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
            "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "0.100 bar", "quality": 0.920, "mass_flow": "4 kg/s"},
            "bleed": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.00 bar", "temperature": "190.0 degC", "mass_flow": "1 kg/s"},
            "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}
        }
    }));
    // The turbine as a whole, and its two sections.
    assert_eq!(report.families.0[0].1.tests, 3);
    assert_eq!(report.verdict, "violated");
    assert_eq!(report.violations.len(), 1);
    assert_eq!(report.violations[0].r#where, "/flows/bleed");
    assert!(!report.components.0[0].1.region.at_limit);
}

#[test]
fn the_ports_of_an_ejector_can_be_named_from_either_side() {
    let product = |ports: Value| {
        let report = check(&json!({
            "components": {"ejector": {"kind": "ejector", "ports": ports}},
            "flows": {
                "steam": {"kind": "material", "to": "ejector", "fluid": "water", "pressure": "10.0 bar", "temperature": "200.0 degC", "mass_flow": "1 kg/s"},
                "vapour": {"kind": "material", "to": "ejector", "fluid": "water", "pressure": "0.100 bar", "quality": 1, "mass_flow": "0.35 kg/s"},
                "mixed": {"kind": "material", "from": "ejector", "fluid": "water", "pressure": "0.400 bar", "mass_flow": "1.35 kg/s"}
            }
        }));
        let report = serde_json::to_value(&report).unwrap();
        report["components"]["ejector"]["exergy_balance"]["product"]["value"].as_f64().unwrap()
    };
    let inferred = product(json!({}));
    for ports in [
        json!({"motive": "steam"}),
        json!({"suction": "vapour"}),
        json!({"motive": "steam", "suction": ["vapour"]}),
    ] {
        assert_eq!(product(ports), inferred);
    }
    // Named the other way round, the roles change places.
    assert!((product(json!({"motive": "vapour"})) - inferred).abs() > 1.0);
}
