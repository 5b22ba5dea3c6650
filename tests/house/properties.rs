//! What must hold for every process, whatever it is.

use serde_json::{Map, Value, json};
use sigmadot::balance::{Balance, Bracket, region};
use sigmadot::model::Blocked;
use sigmadot::pipeline::{Bound, Cancel, Room, check_bytes};
use sigmadot::process::{ReadLimits, read};
use sigmadot::quantity::UnitSystem;
use sigmadot::rules::names;
use std::collections::BTreeMap;

const GAS_TURBINE: &str = include_str!("../../benches/data/gas-turbine.json");

fn check(description: &Value) -> Value {
    let report = check_bytes(
        description.to_string().as_bytes(),
        &ReadLimits::default(),
        UnitSystem::Si,
        &Cancel::new(),
    )
    .unwrap_or_else(|e| panic!("refused: {e:?}"));
    serde_json::from_slice(&report.to_json()).unwrap()
}

fn plant() -> Value {
    serde_json::from_str(GAS_TURBINE).unwrap()
}

fn sigma(report: &Value, component: &str) -> f64 {
    report["components"][component]["entropy_balance"]["generation"]["value"].as_f64().unwrap()
}

fn sigmas(report: &Value) -> Vec<(String, f64)> {
    let components = report["components"].as_object().unwrap();
    components.keys().map(|k| (k.clone(), sigma(report, k))).collect()
}

fn assert_close(a: f64, b: f64, relative: f64, what: &str) {
    assert!((a - b).abs() <= relative * a.abs().max(b.abs()).max(1e-9), "{what}: {a} and {b}");
}

#[test]
fn entropy_generation_knows_no_environment() {
    let grouped = || {
        let mut description = plant();
        description["groups"] = json!({"hot": ["combustor", "turbine"]});
        description
    };
    let union = |report: &Value| {
        ["/groups/hot", "/plant"].map(|region| {
            let pointer = format!("{region}/entropy_balance/generation/value");
            report.pointer(&pointer).and_then(Value::as_f64).unwrap()
        })
    };
    let base = check(&grouped());
    for environment in [
        json!({"temperature": "35 degC", "pressure": "0.95 bar"}),
        json!({"temperature": "-15 degC", "pressure": "1.04 bar", "relative_humidity": 0.3}),
        json!({"temperature": "25 degC", "pressure": "1.013 bar", "chemistry": "ahrendts"}),
    ] {
        let mut other = grouped();
        other["environment"] = environment.clone();
        let report = check(&other);
        assert_eq!(report["verdict"], base["verdict"]);
        for (a, b) in union(&base).into_iter().zip(union(&report)) {
            assert_close(a, b, 1e-11, &format!("unions in {environment}"));
        }
        for ((name, a), (_, b)) in sigmas(&base).iter().zip(sigmas(&report)) {
            assert_close(*a, b, 1e-12, &format!("{name} in {environment}"));
        }
    }
}

#[test]
fn entropy_generation_is_additive() {
    let mut description = plant();
    description["groups"] = json!({"hot": ["combustor", "turbine"]});
    let report = check(&description);
    let sum: f64 = sigmas(&report).iter().map(|s| s.1).sum();
    let whole = report["plant"]["entropy_balance"]["generation"]["value"].as_f64().unwrap();
    assert_close(sum, whole, 1e-9, "plant");
    let group = report["groups"]["hot"]["entropy_balance"]["generation"]["value"].as_f64().unwrap();
    assert_close(sigma(&report, "combustor") + sigma(&report, "turbine"), group, 1e-9, "group");
}

/// Multiplies every amount of a description by a factor.
fn scaled(mut description: Value, factor: f64) -> Value {
    for flow in description["flows"].as_object_mut().unwrap().values_mut() {
        for member in ["mass_flow", "power", "rate"] {
            if let Some(text) = flow.get(member).and_then(Value::as_str) {
                let (number, unit) = text.split_once(' ').unwrap();
                flow[member] = json!(format!("{} {unit}", number.parse::<f64>().unwrap() * factor));
            }
        }
    }
    description
}

#[test]
fn entropy_generation_scales_with_the_amounts() {
    let base = check(&plant());
    for factor in [1e-3, 2.0, 250.0] {
        let report = check(&scaled(plant(), factor));
        assert_eq!(report["verdict"], base["verdict"], "factor {factor}");
        for ((name, a), (_, b)) in sigmas(&base).iter().zip(sigmas(&report)) {
            assert_close(a * factor, b, 1e-9, name);
        }
    }
}

#[test]
fn a_process_without_amounts_generates_nothing() {
    let report = check(&scaled(plant(), 0.0));
    for (name, s) in sigmas(&report) {
        assert_eq!(s, 0.0, "{name}");
    }
    assert_eq!(report["counts"]["violated"], 0);
}

fn turbine(from: &str, to: &str, pressure: [&str; 2], temperature: [&str; 2]) -> Value {
    json!({
        "components": {"machine": {"kind": "control_volume"}},
        "flows": {
            "a": {"kind": "material", from: "machine", "fluid": "water", "mass_flow": "3.0 kg/s",
                  "pressure": pressure[0], "temperature": temperature[0]},
            "b": {"kind": "material", to: "machine", "fluid": "water", "mass_flow": "3.0 kg/s",
                  "pressure": pressure[1], "temperature": temperature[1]},
        }
    })
}

#[test]
fn a_process_run_backwards_has_the_opposite_sign() {
    let states = (["40.0 bar", "8.0 bar"], ["400.0 degC", "250.0 degC"]);
    let forward = sigma(&check(&turbine("to", "from", states.0, states.1)), "machine");
    let backward = sigma(&check(&turbine("from", "to", states.0, states.1)), "machine");
    assert!(forward > 0.0);
    assert_close(forward, -backward, 1e-12, "reversed");
}

fn reversed_order(map: &Map<String, Value>) -> Value {
    Value::Object(map.iter().rev().map(|(k, v)| (k.clone(), v.clone())).collect())
}

#[test]
fn the_order_of_a_description_has_no_effect() {
    let base = check(&plant());
    let mut other = plant();
    for member in ["components", "flows"] {
        other[member] = reversed_order(other[member].as_object().unwrap());
    }
    let report = check(&other);
    assert_eq!(report["verdict"], base["verdict"]);
    assert_eq!(report["counts"], base["counts"]);
    for (name, a) in sigmas(&base) {
        assert_close(a, sigma(&report, &name), 1e-12, &name);
    }
}

/// From certain to vague: once a test is no longer violated it never is again.
#[test]
fn verdicts_are_monotone_in_uncertainty() {
    let rank = |verdict: &str| match verdict {
        "violated" => 3,
        "suspect" => 2,
        "undecided" => 1,
        "holds" => 0,
        other => panic!("{other}"),
    };
    let mut last = 3;
    for u in ["0.1 K", "0.5 K", "1 K", "2 K", "4 K", "8 K", "20 K"] {
        let report = check(&json!({
            "components": {"turbine": {"kind": "turbine"}},
            "flows": {
                "in": {"kind": "material", "to": "turbine", "fluid": "water", "mass_flow": "3 kg/s",
                       "pressure": "40.00 bar", "temperature": {"value": 400, "unit": "degC", "uncertainty": u}},
                "out": {"kind": "material", "from": "turbine", "fluid": "water", "phase": "vapour",
                        "pressure": "8.000 bar", "temperature": {"value": 180, "unit": "degC", "uncertainty": u}},
                "work": {"kind": "work", "from": "turbine"}
            }
        }));
        let now = rank(report["verdict"].as_str().unwrap());
        assert!(now <= last, "a larger uncertainty of {u} made the verdict worse");
        last = now;
    }
    assert_eq!(last, 1, "the vaguest reading cannot decide");
}

#[test]
fn gauge_and_absolute_readings_agree() {
    let with = |pressure: Value| {
        check(&json!({
            "environment": {"temperature": "10 degC", "pressure": "1.013 bar", "barometric_pressure": "1.008 bar"},
            "components": {"valve": {"kind": "valve"}},
            "flows": {
                "in": {"kind": "material", "to": "valve", "fluid": "water", "mass_flow": "2 kg/s",
                       "pressure": pressure, "temperature": "250.0 degC"},
                "out": {"kind": "material", "from": "valve", "pressure": "3.000 bar"}
            }
        }))
    };
    let gauge = with(json!("9.000 bar(g)"));
    let absolute = with(json!("10.008 bar"));
    assert_close(sigma(&gauge, "valve"), sigma(&absolute, "valve"), 1e-9, "valve");
}

#[test]
fn the_same_description_gives_the_same_bytes() {
    let bytes = || {
        check_bytes(GAS_TURBINE.as_bytes(), &ReadLimits::default(), UnitSystem::Metric, &Cancel::new())
            .unwrap()
            .to_json()
    };
    assert_eq!(bytes(), bytes());
}

/// Where the entropy balance has no answer, a limit that is broken all the same makes the verdict.
#[test]
fn a_defect_that_only_a_secondary_test_sees_is_counted() {
    let report = check(&json!({
        "components": {"engine": {"kind": "heat_engine"}},
        "flows": {
            "hot": {"kind": "heat", "to": "engine", "rate": "1000 kW", "temperature": "500 K"},
            "cold": {"kind": "heat", "from": "engine", "temperature": "300 K"},
            "colder": {"kind": "heat", "from": "engine", "temperature": "300 K"},
            "work": {"kind": "work", "from": "engine", "power": "450 kW"}
        }
    }));
    assert_eq!(report["violations"][0]["rule"], "engine-beats-carnot");
    assert_eq!((&report["verdict"], &report["complete"]), (&json!("violated"), &json!(false)));
    assert!(report["counts"]["violated"].as_u64().unwrap() > 0);
    assert_eq!(report["components"]["engine"]["verdict"], "violated");
}

/// A pressure that changes bends a temperature which is the same at both ends: the smallest difference
/// lies between them.
#[test]
fn a_pressure_change_bends_a_temperature_between_equal_ends() {
    let report = check(&json!({
        "components": {"x": {"kind": "heat_exchanger", "arrangement": "counterflow"}},
        "flows": {
            "a": {"kind": "material", "to": "x", "fluid": "CO2", "pressure": "20.00 bar",
                  "temperature": "60.00 degC", "mass_flow": "1.000 kg/s"},
            "b": {"kind": "material", "from": "x", "fluid": "CO2", "pressure": "60.00 bar",
                  "temperature": "60.00 degC"},
            "q": {"kind": "heat", "from": "x", "temperature": "59.00 degC"}
        }
    }));
    let profile = &report["components"]["x"]["profile"];
    assert!(profile["pinch"]["difference"]["value"].as_f64().unwrap() < -0.3, "{profile}");
    assert!(profile["points"].as_array().unwrap().len() > 10, "{profile}");
}

/// The tables from which many balances are summed hold what each balance finds by itself, in value and
/// in uncertainty; a flow of which only the enthalpy or only the entropy can be had is among the cases.
#[test]
fn balances_from_tables_are_those_found_alone() {
    let valve = |outlet: &str| {
        format!(
            r#"{{"components": {{"v": {{"kind": "valve"}}}}, "flows": {{
            "a": {{"kind": "material", "to": "v", "fluid": "water", "pressure": "40.00 bar",
                  "temperature": "400.00 degC", "mass_flow": "2.000 kg/s"}},
            "b": {{"kind": "material", "from": "v", "fluid": "water", "mass_flow": "2.000 kg/s", {outlet}}}}}}}"#
        )
    };
    let mut all: Vec<(String, String)> = super::defects::descriptions();
    for outlet in [
        r#""enthalpy": "3207.0 kJ/kg""#,
        r#""enthalpy": "3210 kJ/kg", "pressure": "2000 bar""#,
        r#""entropy": "6.762 kJ/(kg K)", "pressure": "2000 bar""#,
    ] {
        all.push((outlet.to_owned(), valve(outlet)));
    }
    let same = |name: &str, a: &Result<Balance, Blocked>, b: &Result<Balance, Blocked>| {
        let (a, b) = match (a, b) {
            (Ok(a), Ok(b)) => (a, b),
            (Err(a), Err(b)) => return assert_eq!(a, b, "{name}"),
            _ => panic!("{name}: {a:?} and {b:?}"),
        };
        assert_eq!((a.inflow, a.outflow, a.throughput), (b.inflow, b.outflow, b.throughput), "{name}");
        let gradient = |balance: &Balance| {
            let mut by_slot = BTreeMap::new();
            for &(slot, d) in &balance.residual().terms {
                *by_slot.entry(slot).or_insert(0.0) += d;
            }
            by_slot
        };
        assert_eq!(gradient(a), gradient(b), "{name}");
    };
    for (name, text) in &all {
        let Ok((process, inputs)) = read(text.as_bytes(), &ReadLimits::default(), &names()) else {
            panic!("{name}");
        };
        let mut room = Room::default();
        let bound = Bound::compile(process, inputs, &mut room, &Cancel::new());
        let evaluation = bound.evaluate(&bound.inputs, &mut room);
        for (region, balances) in bound.equations.components.iter().zip(&evaluation.components) {
            same(name, &balances.energy, &region::energy(evaluation.view, region));
            let entropy = region::entropy(evaluation.view, region, Bracket::Lenient);
            same(name, &balances.entropy, &entropy);
        }
    }
}
