//! The cogeneration plant of Bejan, Tsatsaronis & Moran (1996), from its description to its report,
//! with the book's own polynomials and with the nine-coefficient ones.

use super::gas::json;
use serde_json::Value;
use sigmadot::pipeline::{Cancel, check_bytes};
use sigmadot::process::ReadLimits;
use sigmadot::quantity::UnitSystem;
use std::fmt::Write;

pub fn report(description: &str) -> Value {
    let report =
        check_bytes(description.as_bytes(), &ReadLimits::default(), UnitSystem::Metric, &Cancel::new());
    let report = report.unwrap_or_else(|failure| panic!("{failure:?}\n{description}"));
    serde_json::from_slice(&report.to_json()).unwrap()
}

fn data() -> Value {
    json(include_str!("../data/cogeneration-1996.json"))
}

fn f(v: &Value) -> f64 {
    v.as_f64().unwrap_or_else(|| panic!("{v} is no number"))
}

/// The book's species as own species of a description.
fn species(data: &Value) -> String {
    let mut out = String::new();
    let molar_masses =
        [("N2", 28.0134), ("O2", 31.9988), ("CO2", 44.0095), ("H2O", 18.01528), ("CH4", 16.04246)];
    let elements =
        [r#"{"N": 2}"#, r#"{"O": 2}"#, r#"{"C": 1, "O": 2}"#, r#"{"H": 2, "O": 1}"#, r#"{"C": 1, "H": 4}"#];
    for ((name, molar_mass), elements) in molar_masses.into_iter().zip(elements) {
        let k: Vec<f64> = data["coefficients"][name].as_array().unwrap().iter().map(f).collect();
        let [h0, s0, a, b, c, d] = k[..] else { panic!() };
        let t: f64 = 298.15;
        let y = t / 1000.0;
        let h = 1000.0 * (h0 + a * y + b * y * y / 2.0 - c / y + d * y.powi(3) / 3.0);
        let s = s0 + a * t.ln() + b * y - c / (2.0 * y * y) + d * y * y / 2.0;
        let comma = if out.is_empty() { "" } else { ", " };
        write!(
            out,
            r#"{comma}"{name}": {{"molar_mass": "{molar_mass} g/mol", "elements": {elements},
                "heat_capacity": [{{"coefficient": {a}, "exponent": 0}}, {{"coefficient": {}, "exponent": 1}},
                                  {{"coefficient": {}, "exponent": -2}}, {{"coefficient": {}, "exponent": 2}}],
                "formation_enthalpy": "{h} J/mol", "standard_entropy": "{s} J/(mol K)"}}"#,
            b * 1e-3,
            c * 1e6,
            d * 1e-6
        )
        .unwrap();
    }
    format!(r#", "species": {{{out}}}"#)
}

/// The plant as described by its design figures; what follows from them is left out.
pub fn plant(column: &str) -> String {
    let data = data();
    let own = if column == "book" { species(&data) } else { String::new() };
    let c = &data[column];
    let p = |i: usize| f(&c["p_bar"][i - 1]);
    let (air, products, fuel) = (f(&c["air_kg_s"]), f(&c["products_kg_s"]), f(&c["fuel_kg_s"]));
    let loss = 0.02 * f(&data["lower_heating_value_kJ_kmol"]) * fuel / 16.04246;
    let fractions = |x: &Value| x.to_string();
    format!(
        r#"{{"name": "cogeneration plant",
          "environment": {{"temperature": "298.15 K", "pressure": "1.013 bar", "chemistry": "ahrendts"}},
          "fluids": {{
            "intake": {{"kind": "ideal_gas", "mole_fractions": {}{own}}},
            "flue": {{"kind": "ideal_gas", "mole_fractions": {}{own}}},
            "methane": {{"kind": "ideal_gas", "mole_fractions": {{"CH4": 1}}{own}}}}},
          "components": {{
            "compressor": {{"kind": "compressor", "given": {{"isentropic_efficiency": 0.86}}}},
            "preheater": {{"kind": "heat_exchanger", "sides": [{{"in": ["2"], "out": ["3"]}}, {{"in": ["5"], "out": ["6"]}}]}},
            "combustor": {{"kind": "combustor", "heat_loss": "{loss} kW"}},
            "turbine": {{"kind": "turbine", "given": {{"isentropic_efficiency": 0.86}}}},
            "shaft": {{"kind": "shaft"}},
            "boiler": {{"kind": "hrsg", "sides": [{{"in": ["6"], "out": ["7"]}}, {{"in": ["8"], "out": ["9"]}}]}}}},
          "flows": {{
            "1": {{"kind": "material", "to": "compressor", "fluid": "intake", "temperature": "298.15 K", "pressure": "1.013 bar", "mass_flow": "{air} kg/s", "role": "free"}},
            "2": {{"kind": "material", "from": "compressor", "to": "preheater", "fluid": "intake", "pressure": "{} bar"}},
            "3": {{"kind": "material", "from": "preheater", "to": "combustor", "fluid": "intake", "pressure": "{} bar", "temperature": "850.00 K"}},
            "10": {{"kind": "material", "to": "combustor", "fluid": "methane", "pressure": "12.00 bar", "temperature": "298.15 K", "mass_flow": "{fuel} kg/s", "role": "fuel"}},
            "4": {{"kind": "material", "from": "combustor", "to": "turbine", "fluid": "flue", "pressure": "{} bar", "temperature": "1520.00 K", "mass_flow": "{products} kg/s"}},
            "5": {{"kind": "material", "from": "turbine", "to": "preheater", "fluid": "flue", "pressure": "{} bar"}},
            "6": {{"kind": "material", "from": "preheater", "to": "boiler", "fluid": "flue", "pressure": "{} bar"}},
            "7": {{"kind": "material", "from": "boiler", "fluid": "flue", "pressure": "{} bar", "role": "loss"}},
            "8": {{"kind": "material", "to": "boiler", "fluid": "water", "pressure": "20.00 bar", "temperature": "298.15 K", "mass_flow": "14.000 kg/s", "role": "fuel"}},
            "9": {{"kind": "material", "from": "boiler", "fluid": "water", "pressure": "20.00 bar", "quality": 1, "role": "product"}},
            "expansion": {{"kind": "work", "from": "turbine", "to": "shaft", "form": "shaft"}},
            "11": {{"kind": "work", "from": "shaft", "to": "compressor", "form": "shaft"}},
            "12": {{"kind": "work", "from": "shaft", "form": "electric", "role": "product"}}}}}}"#,
        fractions(&data["air"]),
        fractions(&c["products"]),
        p(2),
        p(3),
        p(4),
        p(5),
        p(6),
        p(7),
    )
}

#[track_caller]
fn near(what: &str, got: f64, want: f64, tolerance: f64) {
    eprintln!("{what:30} {got:12.5} {want:12.5} {:+.5}", got - want);
    assert!((got - want).abs() <= tolerance, "{what}: {got} instead of {want}");
}

fn value(report: &Value, path: &str) -> f64 {
    f(report.pointer(path).unwrap_or_else(|| panic!("no {path}")))
}

fn check(column: &str) -> Value {
    let data = data();
    let c = &data[column];
    let report = report(&plant(column));
    for i in 1..=7 {
        let t = value(&report, &format!("/flows/{i}/temperature/value")) + 273.15;
        near(&format!("T{i}"), t, f(&c["T_K"][i - 1]), 0.11);
        let m = value(&report, &format!("/flows/{i}/mass_flow/value"));
        let physical = m * value(&report, &format!("/flows/{i}/exergy/physical/value")) * 1e-3;
        near(&format!("physical E{i}"), physical, f(&c["physical_MW"][i - 1]), 0.03);
    }
    // The book counts the chemical exergy of the intake as zero.
    for i in 4..=10 {
        let e = value(&report, &format!("/flows/{i}/exergy/rate/value")) * 1e-3;
        near(&format!("E{i}"), e, f(&c["exergy_MW"][i.to_string()]), 0.03);
    }
    near("E11", value(&report, "/flows/11/power/value") * 1e-3, f(&c["compressor_MW"]), 0.03);
    near("E12", value(&report, "/flows/12/power/value") * 1e-3, 30.0, 0.03);
    for (name, key) in [
        ("compressor", "AC"),
        ("preheater", "APH"),
        ("combustor", "CC"),
        ("turbine", "GT"),
        ("boiler", "HRSG"),
    ] {
        let at = format!("/components/{name}/exergy_balance");
        let tolerance = if key == "CC" { 0.05 } else { 0.03 };
        let want = &c["components"][key];
        let destroyed = value(&report, &format!("{at}/destruction/value")) * 1e-3;
        near(&format!("E_D {key}"), destroyed, f(&want["ED"]), tolerance);
        let efficiency = value(&report, &format!("{at}/efficiency/value")) * 100.0;
        near(&format!("efficiency {key}"), efficiency, f(&want["eps_pct"]), 0.2);
        let line =
            report["plant"]["ranking"].as_array().unwrap().iter().find(|r| r["component"] == name).unwrap();
        near(
            &format!("y_D {key}"),
            100.0 * f(&line["share_of_fuel"]),
            f(&c["components"]["PLANT"]["yD_pct"][key]),
            0.1,
        );
    }
    let want = &c["components"]["PLANT"];
    let at = "/plant/exergy_balance";
    near("E_D plant", value(&report, &format!("{at}/destruction/value")) * 1e-3, f(&want["ED"]), 0.05);
    near("E_L plant", value(&report, &format!("{at}/loss/value")) * 1e-3, f(&want["EL"]), 0.03);
    near("E_F plant", value(&report, &format!("{at}/fuel/value")) * 1e-3, f(&want["F"]), 0.03);
    near(
        "efficiency plant",
        value(&report, &format!("{at}/efficiency/value")) * 100.0,
        f(&want["eps_pct_book"]),
        0.2,
    );
    report
}

#[test]
fn the_book_s_plant_with_its_own_polynomials() {
    let report = check("book");
    // The printed tables, to the level at which they are reproduced.
    let printed = &data()["printed"];
    for (name, key) in [
        ("compressor", "AC"),
        ("preheater", "APH"),
        ("combustor", "CC"),
        ("turbine", "GT"),
        ("boiler", "HRSG"),
    ] {
        let destroyed = value(&report, &format!("/components/{name}/exergy_balance/destruction/value"));
        near(&format!("printed E_D {key}"), destroyed * 1e-3, f(&printed["destruction_MW"][key]), 0.05);
    }
    let efficiency = value(&report, "/plant/performance/exergy_efficiency/value");
    near("printed efficiency", efficiency * 100.0, f(&printed["plant"]["eps_pct"]), 0.2);
    assert_eq!(report["plant"]["ranking"][0]["component"], "combustor");
    // 30 MW of 50.01 MJ/kg.
    let electric = value(&report, "/plant/performance/electric_efficiency_lower/value");
    near("electric efficiency", electric, 30e3 / (1.6420571 * 802_361.0 / 16.04246), 2e-4);
    let rate = value(&report, "/plant/performance/heat_rate_lower/value");
    assert!((rate * electric - 1.0).abs() < 1e-9);
    // Methane: 890.6/802.6 = 1.110 (heating values at 298.15 K).
    let ratio = value(&report, "/plant/performance/heat_rate_higher/value") / rate;
    near("HHV/LHV", ratio, 1.1097, 1e-3);
    // 14 kg/s from 25 degC water to saturated steam at 20 bar: 2798.4 − 106.6 kJ/kg (IAPWS-IF97).
    let used = value(&report, "/plant/performance/fuel_utilisation_lower/value");
    near("fuel utilisation", used, electric * (1.0 + 14.0 * 2691.8 / 30e3), 1e-3);
}

#[test]
fn the_same_plant_with_accurate_heat_capacities() {
    check("nasa9");
}
