//! Interiors of exchangers: worked cases (IAPWS-IF97 water, gas of constant specific heat), and
//! exchangers whose profile has a closed form.

use sigmadot::pipeline::{Cancel, check_bytes};
use sigmadot::process::ReadLimits;
use sigmadot::quantity::UnitSystem;
use sigmadot::report::{ProfileReport, Report};

fn check(description: &str) -> Report {
    check_bytes(description.as_bytes(), &ReadLimits::default(), UnitSystem::Metric, &Cancel::new())
        .unwrap_or_else(|e| panic!("{e:?}\n{description}"))
}

fn profile<'r>(report: &'r Report, name: &str) -> &'r ProfileReport {
    report.components.get(name).unwrap().profile.as_ref().unwrap()
}

fn near(got: f64, want: f64, tolerance: f64) {
    // Reported uncertainties have three digits.
    assert!((got - want).abs() <= tolerance, "{got} is not {want} within {tolerance}");
}

/// Duty in kW whatever the unit of the figure.
fn kilowatts(f: sigmadot::report::Figure) -> f64 {
    match f.unit {
        "kW" => f.value,
        "MW" => 1e3 * f.value,
        unit => panic!("{unit}"),
    }
}

fn material(name: &str, way: &str, fluid: &str, pressure: &str, rest: &str) -> String {
    format!(
        r#""{name}": {{"kind": "material", "{way}": "x", "fluid": "{fluid}", "pressure": "{pressure}", {rest}}}"#
    )
}

fn exchanger(kind: &str, arrangement: &str, sides: &str, flows: &[String]) -> String {
    format!(
        r#"{{"fluids": {{"gas": {{"kind": "perfect_gas", "molar_mass": "28.6 g/mol", "specific_heat": "1.08 kJ/(kg K)"}},
                       "oil": {{"kind": "incompressible", "specific_heat": "2.0 kJ/(kg K)", "density": "850 kg/m3"}}}},
            "components": {{"x": {{"kind": "{kind}", "arrangement": "{arrangement}", "sides": {sides}}}}},
            "flows": {{{}}}}}"#,
        flows.join(",\n")
    )
}

const TWO: &str = r#"[{"in": ["hot-in"], "out": ["hot-out"]}, {"in": ["cold-in"], "out": ["cold-out"]}]"#;

/// Waste-heat boiler: 10 kg/s of water at 40 bar from 105 degC to saturated steam.
fn boiler(gas: &str, temperature: &str) -> String {
    exchanger(
        "heat_exchanger",
        "counterflow",
        TWO,
        &[
            material(
                "hot-in",
                "to",
                "gas",
                "1.013 bar",
                &format!(r#""temperature": "{temperature}", "mass_flow": "{gas}""#),
            ),
            r#""hot-out": {"kind": "material", "from": "x", "fluid": "gas", "pressure": "1.013 bar"}"#
                .to_owned(),
            material(
                "cold-in",
                "to",
                "water",
                "40.00 bar",
                r#""temperature": "105.00 degC", "mass_flow": "10 kg/s""#,
            ),
            material("cold-out", "from", "water", "40.00 bar", r#""quality": 1"#),
        ],
    )
}

#[test]
fn a_boiler_with_room_inside_holds() {
    let report = check(&boiler("60 kg/s", "600.00 degC"));
    assert_eq!(report.verdict, "holds", "{}", report.to_text());
    let p = profile(&report, "x");
    assert_eq!((p.arrangement, p.axis), ("counterflow", "duty"));
    near(kilowatts(p.duty), 23_578.13, 0.5);
    near(p.pinch.difference.value, 85.2179, 0.01);
    near(p.pinch.cold.value, 250.3575, 2e-3);
    near(p.pinch.hot.value, 335.5754, 0.01);
    assert!(p.crossed.is_none());
    let (first, last) = (p.points[0], p.points[p.points.len() - 1]);
    near(first.hot - first.cold, 131.1399, 0.01);
    near(last.hot - last.cold, 349.6425, 0.01);
    let sigma = report.components.get("x").unwrap().region.entropy_balance.unwrap().generation;
    near(sigma.value, 12.1638, 2e-3);
    assert!(p.points.len() <= 200 && p.points.windows(2).all(|w| w[0].duty <= w[1].duty));
    // Conductance of two sections of constant differences of slope: economiser and evaporator.
    let mean = |a: f64, b: f64| (b - a) / (b / a).ln();
    let pinch_at = kilowatts(p.pinch.duty);
    let want = pinch_at / mean(131.1399, 85.2179) + (23_578.13 - pinch_at) / mean(85.2179, 349.6425);
    near(p.conductance.unwrap().value / want, 1.0, 0.01);
    let effectiveness = p.effectiveness.unwrap();
    assert!(effectiveness > 0.5 && effectiveness < 1.0, "{effectiveness}");
}

#[test]
fn a_boiler_that_crosses_inside_is_found_though_its_balances_hold() {
    let report = check(&boiler("55.5556 kg/s", "530.00 degC"));
    assert_eq!(report.verdict, "violated");
    assert_eq!(report.violations.len(), 1, "{}", report.to_text());
    let finding = &report.violations[0];
    assert_eq!(finding.rule, "internal-temperature-cross");
    assert!(finding.covers.contains(&"section-entropy-negative"), "{:?}", finding.covers);
    assert!(finding.covers.contains(&"exchanger-effectiveness-above-one"));
    let p = profile(&report, "x");
    near(p.pinch.difference.value, -5.936, 5e-3);
    near(p.pinch.hot.value, 244.4215, 5e-3);
    near(p.pinch.cold.value, 250.3575, 2e-3);
    // 60 kW/K from 137.0311 to 244.4215 degC.
    near(kilowatts(p.pinch.duty), 6_443.42, 1.0);
    let crossed = p.crossed.unwrap();
    // The published ends lie on a grid of a 4000th of the duty; the second one is where the gas is
    // at the temperature of saturation, 60 kW/K from 137.0311 to 250.3575 degC.
    near(kilowatts(crossed.from), 5_116.45, 23_578.13 / 4_000.0);
    near(kilowatts(crossed.to), 6_796.40, 23_578.13 / 4_000.0);
    near(kilowatts(crossed.to), 60.0 * (250.3575 - 137.0311), 0.3);
    near(crossed.generation.value, -0.0196, 1e-4);
    // Both ends and the whole are lawful.
    let (first, last) = (p.points[0], p.points[p.points.len() - 1]);
    near(first.hot - first.cold, 32.0311, 0.01);
    near(last.hot - last.cold, 279.6425, 0.01);
    let sigma = report.components.get("x").unwrap().region.entropy_balance.unwrap().generation;
    near(sigma.value, 6.7803, 2e-3);
    assert!(p.effectiveness.unwrap() > 1.0);
    assert!(p.conductance.is_none());
}

/// The standard uncertainty that one figure alone brings about, against the shift it makes.
/// `figure` stands once in the text; the others are known to their digits.
fn follows(text: &str, figure: (f64, f64, &str, &str), ask: impl Fn(&Report) -> sigmadot::report::Figure) {
    let (value, step, unit, difference) = figure;
    let literal = format!("\"{value:.4} {unit}\"");
    assert_eq!(text.matches(&literal).count(), 1, "{literal}\n{text}");
    let at = |x: f64| ask(&check(&text.replace(&literal, &format!("\"{x:.4} {unit}\"")))).value;
    let stated = format!(
        r#"{{"value": {value:.4}, "unit": "{unit}", "uncertainty": "{} {difference}"}}"#,
        100.0 * step
    );
    let own = ask(&check(&text.replace(&literal, &stated))).u;
    let others = ask(&check(text)).u;
    let want = (50.0 * (at(value + step) - at(value - step))).abs();
    let got = (own * own - others * others).max(0.0).sqrt();
    assert!((got - want).abs() <= 0.01 * want + 0.06 * others, "{literal}: {got} is not {want} ({others})");
}

#[test]
fn the_gradients_of_pinch_and_section_follow_differences() {
    let text = boiler("55.5556 kg/s", "530.0000 degC")
        .replacen("40.00 bar", "40.0100 bar", 1)
        .replacen("40.00 bar", "39.9900 bar", 1)
        .replace("105.00 degC", "105.0000 degC")
        .replace("10 kg/s", "10.0000 kg/s");
    let figures = [
        (530.0, 0.02, "degC", "K"),
        (105.0, 0.02, "degC", "K"),
        (40.01, 0.002, "bar", "bar"),
        (39.99, 0.002, "bar", "bar"),
        (55.5556, 0.002, "kg/s", "kg/s"),
        (10.0, 0.0005, "kg/s", "kg/s"),
    ];
    for figure in figures {
        follows(&text, figure, |r| profile(r, "x").pinch.difference);
        follows(&text, figure, |r| profile(r, "x").crossed.unwrap().generation);
    }
}

#[test]
fn equal_capacity_rates_keep_one_difference() {
    let report = check(&exchanger(
        "heat_exchanger",
        "counterflow",
        TWO,
        &[
            material(
                "hot-in",
                "to",
                "oil",
                "3.0 bar",
                r#""temperature": "90.0 degC", "mass_flow": "5 kg/s""#,
            ),
            material("hot-out", "from", "oil", "3.0 bar", r#""temperature": "50.0 degC""#),
            material(
                "cold-in",
                "to",
                "oil",
                "3.0 bar",
                r#""temperature": "30.0 degC", "mass_flow": "5 kg/s""#,
            ),
            r#""cold-out": {"kind": "material", "from": "x", "fluid": "oil", "pressure": "3.0 bar"}"#
                .to_owned(),
        ],
    ));
    assert_eq!(report.verdict, "holds", "{}", report.to_text());
    let p = profile(&report, "x");
    near(p.pinch.difference.value, 20.0, 1e-6);
    near(p.log_mean_difference.unwrap().value, 20.0, 1e-6);
    near(p.conductance.unwrap().value, 400.0 / 20.0, 1e-6);
    // ε = NTU/(1 + NTU), NTU = 2 (Kays & London, Compact Heat Exchangers, ch. 2).
    near(p.effectiveness.unwrap(), 2.0 / 3.0, 1e-5);
}

#[test]
fn parallel_flow_is_compared_inlet_by_inlet() {
    let oil = |cold_out: &str, arrangement: &str| {
        check(&exchanger(
            "heat_exchanger",
            arrangement,
            TWO,
            &[
                material(
                    "hot-in",
                    "to",
                    "oil",
                    "3.0 bar",
                    r#""temperature": "90.0 degC", "mass_flow": "5 kg/s""#,
                ),
                material("hot-out", "from", "oil", "3.0 bar", r#""temperature": "60.0 degC""#),
                material("cold-in", "to", "oil", "3.0 bar", r#""temperature": "15.0 degC""#),
                material("cold-out", "from", "oil", "3.0 bar", &format!(r#""temperature": "{cold_out}""#)),
            ],
        ))
    };
    let report = oil("55.0 degC", "parallel");
    assert_eq!(report.verdict, "holds", "{}", report.to_text());
    let p = profile(&report, "x");
    near(p.pinch.difference.value, 5.0, 1e-6);
    near(p.pinch.duty.value, p.duty.value, 1e-6);
    let report = oil("65.0 degC", "parallel");
    assert_eq!(report.violations.len(), 1, "{}", report.to_text());
    let finding = &report.violations[0];
    assert!(
        finding.rule == "internal-temperature-cross"
            && finding.covers.contains(&"parallel-flow-outlet-cross"),
        "{finding:?}"
    );
    near(profile(&report, "x").pinch.difference.value, -5.0, 1e-6);
    for arrangement in ["counterflow", "shell_1_2", "crossflow", "unknown"] {
        let report = oil("65.0 degC", arrangement);
        assert_eq!(report.verdict, "holds", "{}", report.to_text());
        near(profile(&report, "x").pinch.difference.value, 25.0, 1e-6);
    }
}

#[test]
fn a_condenser_has_three_zones() {
    let report = check(&exchanger(
        "condenser",
        "counterflow",
        TWO,
        &[
            material(
                "hot-in",
                "to",
                "water",
                "2.00 bar",
                r#""temperature": "200.0 degC", "mass_flow": "1 kg/s""#,
            ),
            material("hot-out", "from", "water", "2.00 bar", r#""temperature": "80.0 degC""#),
            material("cold-in", "to", "water", "4.0 bar", r#""temperature": "20.0 degC""#),
            material("cold-out", "from", "water", "4.0 bar", r#""temperature": "90.0 degC""#),
        ],
    ));
    assert_eq!(report.verdict, "holds", "{}", report.to_text());
    let p = profile(&report, "x");
    // Saturation at 2 bar: 120.21 degC (IAPWS-IF97, region 4).
    near(p.pinch.hot.value, 120.21, 0.01);
    let flat = p.points.iter().filter(|q| (q.hot - 120.21).abs() < 0.01).count();
    assert!(flat >= 2, "{flat}");
    assert!(p.pinch.difference.value > 25.0 && p.pinch.difference.value < 60.0);
}

#[test]
fn a_pressure_drop_moves_the_saturation_points() {
    let report = check(&exchanger(
        "evaporator",
        "counterflow",
        TWO,
        &[
            material(
                "hot-in",
                "to",
                "gas",
                "1.013 bar",
                r#""temperature": "400.0 degC", "mass_flow": "60 kg/s""#,
            ),
            r#""hot-out": {"kind": "material", "from": "x", "fluid": "gas", "pressure": "1.013 bar"}"#
                .to_owned(),
            material(
                "cold-in",
                "to",
                "water",
                "10.50 bar",
                r#""temperature": "105.0 degC", "mass_flow": "5 kg/s""#,
            ),
            material("cold-out", "from", "water", "10.00 bar", r#""temperature": "250.0 degC""#),
        ],
    ));
    let p = profile(&report, "x");
    // Between saturation at 10 bar (179.89 degC) and at 10.5 bar (182.03 degC).
    assert!(p.pinch.cold.value > 179.9 && p.pinch.cold.value < 182.03, "{:?}", p.pinch);
}

fn three(b_out: &str, b_flow: &str) -> String {
    exchanger(
        "heat_exchanger",
        "counterflow",
        r#"[{"in": ["hot-in"], "out": ["hot-out"]}, {"in": ["a-in"], "out": ["a-out"]}, {"in": ["b-in"], "out": ["b-out"]}]"#,
        &[
            material(
                "hot-in",
                "to",
                "oil",
                "3.0 bar",
                r#""temperature": "90.0 degC", "mass_flow": "10 kg/s""#,
            ),
            r#""hot-out": {"kind": "material", "from": "x", "fluid": "oil", "pressure": "3.0 bar"}"#
                .to_owned(),
            material("a-in", "to", "oil", "3.0 bar", r#""temperature": "20.0 degC", "mass_flow": "4 kg/s""#),
            material("a-out", "from", "oil", "3.0 bar", r#""temperature": "80.0 degC""#),
            material(
                "b-in",
                "to",
                "oil",
                "3.0 bar",
                &format!(r#""temperature": "70.0 degC", "mass_flow": "{b_flow}""#),
            ),
            material("b-out", "from", "oil", "3.0 bar", &format!(r#""temperature": "{b_out}""#)),
        ],
    )
}

#[test]
fn three_streams_are_compared_by_their_composite_curves() {
    // Capacity rates 20, 8 and 16 kW/K. Cold composite: 20 to 70 degC at 8 kW/K, to 80 at 24, to
    // 82 at 16; hot: from 90 degC down at 20.
    let report = check(&three("82.0 degC", "8 kg/s"));
    let p = profile(&report, "x");
    near(kilowatts(p.duty), 480.0 + 192.0, 1e-6);
    // At 70 degC of the cold curve 400 kW are passed; the hot curve is at 90 − 272/20 there.
    near(p.pinch.difference.value, 90.0 - 272.0 / 20.0 - 70.0, 1e-6);
    near(kilowatts(p.pinch.duty), 400.0, 1e-6);
    assert_eq!(report.verdict, "holds", "{}", report.to_text());
    // More of the second cold stream: at 70 degC 90 − (80 + 40 · 12)/20 = 62 degC.
    let report = check(&three("82.0 degC", "20 kg/s"));
    let p = profile(&report, "x");
    near(p.pinch.difference.value, -8.0, 1e-6);
    assert_eq!(report.violations.len(), 1, "{}", report.to_text());
    let finding = &report.violations[0];
    assert_eq!(finding.rule, "composite-curves-cross");
    assert!(finding.covers.contains(&"section-entropy-negative"), "{:?}", finding.covers);
    let crossed = p.crossed.unwrap();
    assert!(crossed.generation.value < 0.0);
    // The curves meet before 70 degC where 62 − (400 − q)/20 = 70 − (400 − q)/8, and after it where
    // 62 + d/20 = 70 + d/48.
    near(kilowatts(crossed.from), 400.0 - 8.0 / (1.0 / 8.0 - 1.0 / 20.0), 1e-3);
    near(kilowatts(crossed.to), 400.0 + 8.0 / (1.0 / 20.0 - 1.0 / 48.0), 1e-3);
    // σ = Σ C ln(T2/T1) of the section.
    let (from, to) = (8.0 / (1.0 / 8.0 - 1.0 / 20.0), 8.0 / (1.0 / 20.0 - 1.0 / 48.0));
    let t = |c: f64| c + 273.15;
    let cold = 8.0 * (t(70.0) / t(70.0 - from / 8.0)).ln() + 48.0 * (t(70.0 + to / 48.0) / t(70.0)).ln();
    let hot = 20.0 * (t(62.0 + to / 20.0) / t(62.0 - from / 20.0)).ln();
    near(crossed.generation.value, cold - hot, 1e-6);
}

#[test]
fn the_gradients_of_composite_curves_follow_differences() {
    let text = three("82.0000 degC", "20.0000 kg/s")
        .replace("70.0 degC", "70.0000 degC")
        .replace("90.0 degC", "90.0000 degC")
        .replace("4 kg/s", "4.0000 kg/s")
        .replace("80.0 degC", "80.0000 degC");
    let figures = [
        (90.0, 0.01, "degC", "K"),
        (70.0, 0.01, "degC", "K"),
        (80.0, 0.01, "degC", "K"),
        (82.0, 0.01, "degC", "K"),
        (4.0, 0.002, "kg/s", "kg/s"),
        (20.0, 0.002, "kg/s", "kg/s"),
    ];
    for figure in figures {
        follows(&text, figure, |r| profile(r, "x").pinch.difference);
        follows(&text, figure, |r| profile(r, "x").crossed.unwrap().generation);
    }
}

#[test]
fn without_heat_there_is_no_profile() {
    let report = check(&exchanger(
        "heat_exchanger",
        "counterflow",
        TWO,
        &[
            material(
                "hot-in",
                "to",
                "oil",
                "3.0 bar",
                r#""temperature": "50.0 degC", "mass_flow": "5 kg/s""#,
            ),
            material("hot-out", "from", "oil", "3.0 bar", r#""temperature": "50.0 degC""#),
            material(
                "cold-in",
                "to",
                "oil",
                "3.0 bar",
                r#""temperature": "30.0 degC", "mass_flow": "5 kg/s""#,
            ),
            material("cold-out", "from", "oil", "3.0 bar", r#""temperature": "30.0 degC""#),
        ],
    ));
    assert!(report.components.get("x").unwrap().profile.is_none());
    assert!(report.violations.is_empty(), "{}", report.to_text());
}

#[test]
fn a_side_without_its_amount_is_listed_as_unchecked() {
    let report = check(&exchanger(
        "heat_exchanger",
        "counterflow",
        TWO,
        &[
            material("hot-in", "to", "oil", "3.0 bar", r#""temperature": "90.0 degC""#),
            material("hot-out", "from", "oil", "3.0 bar", r#""temperature": "60.0 degC""#),
            material("cold-in", "to", "oil", "3.0 bar", r#""temperature": "30.0 degC""#),
            material("cold-out", "from", "oil", "3.0 bar", r#""temperature": "50.0 degC""#),
        ],
    ));
    assert!(!report.complete);
    let unchecked = report.unchecked.iter().find(|u| u.what == "internal-temperature-cross").unwrap();
    assert_eq!(unchecked.reason, "unknown", "{unchecked:?}");
}

#[test]
fn duties_that_differ_run_over_their_own_shares() {
    let report = check(&exchanger(
        "heat_exchanger",
        "counterflow",
        TWO,
        &[
            material(
                "hot-in",
                "to",
                "oil",
                "3.0 bar",
                r#""temperature": "90.0 degC", "mass_flow": "5 kg/s""#,
            ),
            material("hot-out", "from", "oil", "3.0 bar", r#""temperature": "50.0 degC""#),
            material(
                "cold-in",
                "to",
                "oil",
                "3.0 bar",
                r#""temperature": "30.0 degC", "mass_flow": "5 kg/s""#,
            ),
            material("cold-out", "from", "oil", "3.0 bar", r#""temperature": "60.0 degC""#),
        ],
    ));
    let p = profile(&report, "x");
    assert_eq!(p.axis, "fraction");
    assert!(p.note.contains("own share") && p.given_off.is_some() && p.conductance.is_none());
    near(p.pinch.difference.value, 20.0, 1e-6);
}

#[test]
fn heat_from_a_surface_takes_the_place_of_a_side() {
    let surface = |temperature: &str| {
        check(&format!(
            r#"{{"components": {{"x": {{"kind": "evaporator"}}}},
                "flows": {{
                  "fire": {{"kind": "heat", "to": "x", {temperature}}},
                  "in": {{"kind": "material", "to": "x", "fluid": "water", "pressure": "10.00 bar", "temperature": "100.0 degC", "mass_flow": "1 kg/s"}},
                  "out": {{"kind": "material", "from": "x", "fluid": "water", "pressure": "10.00 bar", "quality": 1}}}}}}"#
        ))
    };
    let report = surface(r#""temperature": "190.0 degC""#);
    near(profile(&report, "x").pinch.difference.value, 190.0 - 179.886, 5e-3);
    let report = surface(r#""temperature": "175.0 degC""#);
    near(profile(&report, "x").pinch.difference.value, 175.0 - 179.886, 5e-3);
    assert_eq!(report.verdict, "violated", "{}", report.to_text());
    assert_eq!(report.violations.len(), 1, "{}", report.to_text());
}

#[test]
fn hostile_figures_never_panic() {
    let texts = ["0.001 bar", "1000 bar", "220.64 bar", "40 bar", "0 bar"];
    let temperatures = ["0.01 degC", "374 degC", "800 degC", "-50 degC", "2000 degC"];
    for p in texts {
        for t in temperatures {
            for out in [
                r#""quality": 0"#,
                r#""quality": 1"#,
                r#""temperature": "250.0 degC""#,
                r#""temperature": "20.0 degC""#,
            ] {
                for flow in ["1e-300 kg/s", "-3 kg/s", "1e12 kg/s"] {
                    let text = exchanger(
                        "hrsg",
                        "unknown",
                        TWO,
                        &[
                            material(
                                "hot-in",
                                "to",
                                "gas",
                                "1.013 bar",
                                &format!(r#""temperature": "{t}", "mass_flow": "{flow}""#),
                            ),
                            material("hot-out", "from", "gas", "1.2 bar", r#""temperature": "100.0 degC""#),
                            material("cold-in", "to", "water", p, r#""temperature": "105.0 degC""#),
                            material("cold-out", "from", "water", "38.00 bar", out),
                        ],
                    );
                    if let Ok(report) = check_bytes(
                        text.as_bytes(),
                        &ReadLimits::default(),
                        UnitSystem::Metric,
                        &Cancel::new(),
                    ) {
                        let json = String::from_utf8(report.to_json()).unwrap();
                        assert!(!json.is_empty() && !json.contains("null"), "{text}\n{json}");
                    }
                }
            }
        }
    }
}

/// A refrigerant that boils and leaves a little superheated is judged as boiling, also where the pinch
/// lies on its vapour; figures that are read coarsely are told.
#[test]
fn a_boiling_side_is_no_gas() {
    let report = check(
        r#"{"components": {"evap": {"kind": "evaporator", "arrangement": "counterflow",
              "sides": [{"in": ["a"], "out": ["b"]}, {"in": ["c"], "out": ["d"]}]}},
            "flows": {
              "a": {"kind": "material", "to": "evap", "fluid": "R290", "pressure": "3.900 bar", "quality": 0.43, "mass_flow": "35 g/s"},
              "b": {"kind": "material", "from": "evap", "fluid": "R290", "pressure": "3.900 bar", "temperature": "3.00 degC"},
              "c": {"kind": "material", "to": "evap", "fluid": "water", "pressure": "2 bar", "temperature": "4.00 degC"},
              "d": {"kind": "material", "from": "evap", "fluid": "water", "pressure": "1.800 bar", "temperature": "1.00 degC"}}}"#,
    );
    let found = report.warnings.iter().find(|f| f.rule == "unusual-approach").expect("an unusual approach");
    assert!(found.statement.contains("at the hot end"), "{}", found.statement);
    assert!(found.statement.contains("condensation and evaporation"), "{}", found.statement);
    let coarse = report.assumptions.iter().find(|a| a.statement.contains("printed digits")).expect("a note");
    assert_eq!(
        coarse.statement,
        "read as 2 bar ± 0.5 bar by its printed digits; write 2.000 bar if it is meant so"
    );
}
