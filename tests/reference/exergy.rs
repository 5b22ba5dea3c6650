//! The exergy view as a whole: identities over plants of every kind, and accounts against figures
//! worked out from the published definitions.

use super::Random;
use super::cogeneration::{plant, report};
use sigmadot::balance::Exergies;
use sigmadot::model::Scope;
use sigmadot::pipeline::{Bound, Cancel, Room};
use sigmadot::process::{ReadLimits, read};
use sigmadot::rules::names;
use std::fmt::Write;

/// Checks both identities over every region of a description, to 1e-9 of the throughput:
/// E_in − E_out − energy residual = T0 σ, and E_F − E_P − E_L = E_in − E_out. Returns how many
/// balances and accounts there were.
#[track_caller]
fn identities(description: &str) -> (usize, usize) {
    let (process, inputs) = read(description.as_bytes(), &ReadLimits::default(), &names())
        .unwrap_or_else(|faults| panic!("{faults:?}\n{description}"));
    let mut room = Room::default();
    let bound = Bound::compile(process, inputs, &mut room, &Cancel::new());
    let inputs = bound.inputs.clone();
    let evaluation = bound.evaluate(&inputs, &mut room);
    let exergies = Exergies::derive(&evaluation);
    let mismatches = exergies.mismatches();
    for (scope, mismatch, throughput) in &mismatches {
        assert!(mismatch.abs() <= 1e-9 * throughput, "{scope:?}: {mismatch} of {throughput}\n{description}");
    }
    let mut accounts = 0;
    let every = exergies.components.iter().zip(&exergies.accounts);
    for (k, (balance, account)) in every.enumerate() {
        let component = &bound.model.process.components[k];
        if let (Ok(b), Ok(a)) = (balance, account)
            && component.holdup.is_none()
        {
            let left = a.fuel.value - a.product.value - a.loss.value;
            let through = b.inflow.value - b.outflow.value;
            assert!((left - through).abs() <= 1e-9 * b.throughput, "{}: {left} {through}", component.name);
            accounts += 1;
        }
    }
    if let (Ok(b), Some(a)) = (&exergies.plant, &exergies.performance.account) {
        let left = a.fuel.value + exergies.performance.free.value - a.product.value - a.loss.value;
        let through = b.inflow.value - b.outflow.value;
        assert!((left - through).abs() <= 1e-9 * b.throughput, "plant: {left} {through}");
    }
    assert!(mismatches.iter().any(|m| matches!(m.0, Scope::Component(_))) || description.len() < 200);
    (mismatches.len(), accounts)
}

struct Builder<'r> {
    random: &'r mut Random,
    components: Vec<String>,
    flows: Vec<String>,
    fluids: Vec<String>,
    count: usize,
}

impl Builder<'_> {
    fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.random.next()
    }

    fn pick<'t>(&mut self, list: &[&'t str]) -> &'t str {
        list[((self.random.next() * list.len() as f64) as usize).min(list.len() - 1)]
    }

    fn name(&mut self) -> String {
        self.count += 1;
        format!("x{}", self.count)
    }

    /// A flow into (`to`) or out of (`from`) a component; the motion of some is known.
    fn flow(&mut self, end: &str, component: &str, rest: &str) -> String {
        let name = self.name();
        let motion = if rest.contains("material") && self.random.next() < 0.2 {
            format!(
                r#", "velocity": "{:.1} m/s", "elevation": "{:.1} m""#,
                self.between(0.0, 80.0),
                self.between(-20.0, 40.0)
            )
        } else {
            String::new()
        };
        self.flows.push(format!(r#""{name}": {{"{end}": "{component}", {rest}{motion}}}"#));
        name
    }

    fn material(&mut self, fluid: &str, p: f64, state: &str, amount: Option<f64>) -> String {
        let amount = amount.map(|m| format!(r#", "mass_flow": "{m:.4} kg/s""#)).unwrap_or_default();
        format!(r#""kind": "material", "fluid": "{fluid}", "pressure": "{p:.3} bar", {state}{amount}"#)
    }

    fn state(&mut self, fluid: &str) -> String {
        match fluid {
            "water" => {
                if self.random.next() < 0.3 {
                    format!(r#""quality": {:.3}"#, self.random.next())
                } else {
                    format!(r#""temperature": "{:.2} degC""#, self.between(1.0, 550.0))
                }
            }
            _ => format!(r#""temperature": "{:.2} degC""#, self.between(-60.0, 900.0)),
        }
    }

    fn heat(&mut self, component: &str) {
        if self.random.next() < 0.4 {
            let temperature = match self.pick(&["named", "sliding", "open"]) {
                "named" => format!(r#", "temperature": "{:.1} degC""#, self.between(-40.0, 600.0)),
                "sliding" => format!(
                    r#", "temperature": {{"inlet": "{:.1} degC", "outlet": "{:.1} degC"}}"#,
                    self.between(-40.0, 100.0),
                    self.between(-40.0, 600.0)
                ),
                _ => String::new(),
            };
            let end = self.pick(&["from", "to"]);
            let rate = self.between(1.0, 300.0);
            self.flow(end, component, &format!(r#""kind": "heat", "rate": "{rate:.2} kW"{temperature}"#));
        }
    }

    fn component(&mut self) {
        let name = self.name();
        let fluid = self.pick(&["water", "air", "wet", "glycol"]);
        let kind = self.pick(&[
            "valve",
            "pipe",
            "turbine",
            "compressor",
            "pump",
            "fan",
            "mixer",
            "splitter",
            "heat_exchanger",
            "condenser",
            "heater",
            "combustor",
            "boiler",
            "control_volume",
            "ejector",
            "deaerator",
            "heat_pump",
            "refrigerator",
            "heat_engine",
            "separation",
            "reactor",
            "engine",
        ]);
        let m = self.between(0.1, 20.0);
        let mut extra = String::new();
        let pressure = |b: &mut Self| b.between(0.3, 40.0);
        match kind {
            "valve" | "pipe" | "fan" | "pump" | "control_volume" => {
                self.through(&name, fluid, m);
                if matches!(kind, "fan" | "pump") {
                    self.work("to", &name);
                }
            }
            "turbine" | "compressor" => {
                let outlets = if kind == "turbine" && self.random.next() < 0.4 { 2 } else { 1 };
                let (p, state) = (pressure(self), self.state(fluid));
                let inlet = self.material(fluid, p, &state, Some(m));
                self.flow("to", &name, &inlet);
                for i in 0..outlets {
                    let (p, state) = (pressure(self), self.state(fluid));
                    let share = if i + 1 < outlets { Some(0.3 * m) } else { None };
                    let outlet = self.material(fluid, p, &state, share);
                    self.flow("from", &name, &outlet);
                }
                self.work(if kind == "turbine" { "from" } else { "to" }, &name);
            }
            "mixer" | "ejector" | "deaerator" => {
                for _ in 0..2 {
                    let (p, state, m) = (pressure(self), self.state(fluid), self.between(0.1, 5.0));
                    let inlet = self.material(fluid, p, &state, Some(m));
                    self.flow("to", &name, &inlet);
                }
                let (p, state) = (pressure(self), self.state(fluid));
                let outlet = self.material(fluid, p, &state, None);
                self.flow("from", &name, &outlet);
            }
            "splitter" => {
                let (p, state) = (pressure(self), self.state(fluid));
                let inlet = self.material(fluid, p, &state, Some(m));
                let inlet = self.flow("to", &name, &inlet);
                for share in [Some(0.4 * m), None] {
                    let amount =
                        share.map(|m| format!(r#", "mass_flow": "{m:.4} kg/s""#)).unwrap_or_default();
                    let branch = format!(r#""kind": "material", "same_state_as": "{inlet}"{amount}"#);
                    self.flow("from", &name, &branch);
                }
            }
            "heat_exchanger" | "condenser" | "heat_pump" | "refrigerator" | "heat_engine" => {
                let mut sides = Vec::new();
                for _ in 0..2 {
                    let fluid = self.pick(&["water", "air", "wet", "glycol"]);
                    let m = self.between(0.1, 20.0);
                    let (inlet, outlet) = self.through(&name, fluid, m);
                    sides.push(format!(r#"{{"in": ["{inlet}"], "out": ["{outlet}"]}}"#));
                }
                extra = format!(r#", "sides": [{}]"#, sides.join(", "));
                match kind {
                    "heat_engine" => self.work("from", &name),
                    "heat_pump" | "refrigerator" => self.work("to", &name),
                    _ => {}
                }
            }
            "heater" => {
                self.through(&name, fluid, m);
                self.work("to", &name);
            }
            _ => {
                for (fluid, m) in [("methane", 0.05 * m), ("wet", m)] {
                    let p = pressure(self);
                    let state = format!(r#""temperature": "{:.2} degC""#, self.between(-20.0, 300.0));
                    let inlet = self.material(fluid, p, &state, Some(m));
                    self.flow("to", &name, &inlet);
                }
                let p = pressure(self);
                let state = format!(r#""temperature": "{:.2} degC""#, self.between(100.0, 1500.0));
                let open = self.random.next() < 0.3;
                let amount = if open { Some(self.between(0.5, 20.0)) } else { None };
                let outlet = self.material("flue", p, &state, amount);
                self.flow("from", &name, &outlet);
                if kind == "boiler" {
                    let (p, m) = (pressure(self), self.between(0.1, 5.0));
                    let inlet = self.material("water", p, r#""temperature": "60.0 degC""#, Some(m));
                    self.flow("to", &name, &inlet);
                    let outlet = self.material("water", p, r#""quality": 1"#, None);
                    self.flow("from", &name, &outlet);
                }
                if kind == "engine" {
                    self.work("from", &name);
                }
            }
        }
        self.heat(&name);
        if self.random.next() < 0.3 {
            write!(extra, r#", "heat_loss": "{:.2} kW""#, self.between(0.5, 50.0)).unwrap();
        }
        self.components.push(format!(r#""{name}": {{"kind": "{kind}"{extra}}}"#));
    }

    fn through(&mut self, component: &str, fluid: &str, m: f64) -> (String, String) {
        let (p, state) = (self.between(0.3, 40.0), self.state(fluid));
        let inlet = self.material(fluid, p, &state, Some(m));
        let inlet = self.flow("to", component, &inlet);
        // A leak now and then: what open balances carry belongs to the identity.
        let amount = if self.random.next() < 0.2 { Some(m * self.between(0.9, 1.1)) } else { None };
        let (p, state) = (self.between(0.3, 40.0), self.state(fluid));
        let outlet = self.material(fluid, p, &state, amount);
        (inlet, self.flow("from", component, &outlet))
    }

    fn work(&mut self, end: &str, component: &str) {
        let power = self.between(1.0, 3000.0);
        let form = self.pick(&["shaft", "electric"]);
        self.flow(end, component, &format!(r#""kind": "work", "form": "{form}", "power": "{power:.2} kW""#));
    }
}

/// A plant of one to five components with random states, amounts and surroundings; most are
/// unlawful, which the identities do not mind.
fn random_plant(seed: u64) -> String {
    let mut random = Random::new(seed);
    let mut b = Builder { random: &mut random, components: vec![], flows: vec![], fluids: vec![], count: 0 };
    b.fluids.push(r#""wet": {"kind": "ideal_gas", "mole_fractions": {"N2": 0.7748, "O2": 0.2059, "CO2": 0.0003, "H2O": 0.019}}"#.to_owned());
    b.fluids.push(r#""methane": {"kind": "ideal_gas", "mole_fractions": {"CH4": 1}}"#.to_owned());
    let x = b.between(0.02, 0.15);
    b.fluids.push(format!(
        r#""flue": {{"kind": "ideal_gas", "mole_fractions": {{"N2": {:.4}, "O2": 0.12, "CO2": 0.04, "H2O": {x:.4}}}}}"#,
        0.84 - x
    ));
    b.fluids.push(
        r#""glycol": {"kind": "incompressible", "specific_heat": "3.6 kJ/(kg K)", "density": "1040 kg/m3"}"#
            .to_owned(),
    );
    let parts = 1 + (b.random.next() * 5.0) as usize;
    for _ in 0..parts {
        b.component();
    }
    let (t0, p0) = (b.between(-10.0, 40.0), b.between(0.8, 1.05));
    let chemistry = b.pick(&["szargut-1986", "szargut-2007", "ahrendts"]);
    let humidity = if b.random.next() < 0.5 {
        format!(r#", "relative_humidity": {:.2}"#, b.between(0.1, 1.0))
    } else {
        String::new()
    };
    format!(
        r#"{{"environment": {{"temperature": "{t0:.2} degC", "pressure": "{p0:.4} bar", "chemistry": "{chemistry}"{humidity}}},
            "fluids": {{{}}}, "components": {{{}}}, "flows": {{{}}}}}"#,
        b.fluids.join(", "),
        b.components.join(", "),
        b.flows.join(", ")
    )
}

#[test]
fn exergy_and_entropy_agree_over_random_plants() {
    let plants = std::env::var("PLANTS").ok().and_then(|n| n.parse().ok()).unwrap_or(300);
    let (mut balances, mut accounts) = (0, 0);
    for seed in 1..=plants {
        let (b, a) = identities(&random_plant(seed));
        balances += b;
        accounts += a;
    }
    eprintln!("{plants} plants, {balances} balances, {accounts} accounts");
    assert!(balances > 2 * plants as usize && accounts > 3 * plants as usize / 2, "{balances} {accounts}");
}

#[test]
fn exergy_and_entropy_agree_over_the_cogeneration_plant() {
    for column in ["book", "nasa9"] {
        assert_eq!(identities(&plant(column)), (7, 6));
    }
}

fn f(v: &serde_json::Value, path: &str) -> f64 {
    v.pointer(path).and_then(serde_json::Value::as_f64).unwrap_or_else(|| panic!("no {path} in {v}"))
}

/// A perfect gas with cp = 1 kJ/(kg K) and 29 g/mol, T0 = 300 K, p0 = 1 bar: e^T = cp (T − T0 −
/// T0 ln T/T0), e^M = R T0 ln p/p0.
fn thermal(t: f64) -> f64 {
    t - 300.0 - 300.0 * (t / 300.0).ln()
}

fn mechanical(p: f64) -> f64 {
    8.314510 / 29.0 * 300.0 * p.ln()
}

fn gas_component(component: &str, flows: &[(&str, &str, f64, f64)], others: &str) -> serde_json::Value {
    let mut all = String::new();
    for (name, end, t, p) in flows {
        write!(
            all,
            r#"{}"{name}": {{"kind": "material", "{end}": "unit", "fluid": "gas", "temperature": "{t:.3} K", "pressure": "{p:.4} bar", "mass_flow": "1.000 kg/s"}}"#,
            if all.is_empty() { "" } else { ", " }
        )
        .unwrap();
    }
    let report = report(&format!(
        r#"{{"environment": {{"temperature": "300 K", "pressure": "1 bar"}},
            "fluids": {{"gas": {{"kind": "perfect_gas", "molar_mass": "29 g/mol", "specific_heat": "1.0 kJ/(kg K)"}}}},
            "components": {{"unit": {component}}}, "flows": {{{all}{others}}}}}"#
    ));
    report["components"]["unit"]["exergy_balance"].clone()
}

#[track_caller]
fn account(got: &serde_json::Value, fuel: f64, product: f64) {
    let (f1, p1) = (f(got, "/fuel/value"), f(got, "/product/value"));
    assert!(
        (f1 - fuel).abs() < 1e-6 && (p1 - product).abs() < 1e-6,
        "fuel {f1} {fuel}, product {p1} {product}"
    );
    let parts = p1 + f(got, "/destruction/value") + f(got, "/residual/value");
    assert!((f1 - parts).abs() < 1e-6);
}

/// The table of fuel and product by kind, above, across and below ambient temperature: Lazzaretto
/// & Tsatsaronis, Energy 31 (2006) 1257.
#[test]
fn fuel_and_product_follow_the_definitions_at_every_temperature() {
    let (te, me) = (thermal, mechanical);
    // Compressor.
    let drive = r#", "w": {"kind": "work", "to": "unit", "form": "shaft", "power": "250.0 kW"}"#;
    let unit = r#"{"kind": "compressor"}"#;
    for (t1, t2) in [(310.0, 550.0), (200.0, 420.0), (150.0, 280.0)] {
        let got = gas_component(unit, &[("a", "to", t1, 1.0), ("b", "from", t2, 5.0)], drive);
        let rise = me(5.0);
        let (fuel, product) = if t1 > 300.0 {
            (250.0, te(t2) - te(t1) + rise)
        } else if t2 > 300.0 {
            (250.0 + te(t1), te(t2) + rise)
        } else {
            (250.0 + te(t1) - te(t2), rise)
        };
        account(&got, fuel, product);
    }
    // Turbine.
    let shaft = r#", "w": {"kind": "work", "from": "unit", "form": "shaft", "power": "90.0 kW"}"#;
    for (t1, t2) in [(900.0, 650.0), (330.0, 240.0), (280.0, 190.0)] {
        let got =
            gas_component(r#"{"kind": "turbine"}"#, &[("a", "to", t1, 5.0), ("b", "from", t2, 1.0)], shaft);
        let fall = me(5.0);
        let (fuel, product) = if t2 > 300.0 {
            (te(t1) - te(t2) + fall, 90.0)
        } else if t1 > 300.0 {
            (te(t1) + fall, 90.0 + te(t2))
        } else {
            (fall, 90.0 + te(t2) - te(t1))
        };
        account(&got, fuel, product);
    }
    // Exchanger: cold 1 to 2 from 2 to 1.9 bar, hot 3 to 4 from 1.5 to 1.4 bar.
    let unit =
        r#"{"kind": "heat_exchanger", "sides": [{"in": ["a"], "out": ["b"]}, {"in": ["c"], "out": ["d"]}]}"#;
    for t in [
        [320.0, 400.0, 500.0, 420.0],
        [260.0, 350.0, 450.0, 360.0],
        [200.0, 240.0, 290.0, 250.0],
        [200.0, 240.0, 320.0, 280.0],
    ] {
        let flows = [
            ("a", "to", t[0], 2.0),
            ("b", "from", t[1], 1.9),
            ("c", "to", t[2], 1.5),
            ("d", "from", t[3], 1.4),
        ];
        let got = gas_component(unit, &flows, "");
        let e = |t: f64, p: f64| te(t) + me(p);
        let hot_drop = me(1.5) - me(1.4);
        let (fuel, product) = if t[0] > 300.0 {
            (e(t[2], 1.5) - e(t[3], 1.4), e(t[1], 1.9) - e(t[0], 2.0))
        } else if t[1] > 300.0 {
            (te(t[0]) + e(t[2], 1.5) - e(t[3], 1.4) + me(2.0) - me(1.9), te(t[1]))
        } else if t[2] < 300.0 {
            (e(t[0], 2.0) - e(t[1], 1.9) + hot_drop, te(t[3]) - te(t[2]))
        } else {
            (te(t[2]) + e(t[0], 2.0) - e(t[1], 1.9) + hot_drop, te(t[3]))
        };
        account(&got, fuel, product);
    }
    // Hot above and cold below ambient: nothing gains.
    let flows = [
        ("a", "to", 200.0, 2.0),
        ("b", "from", 280.0, 2.0),
        ("c", "to", 400.0, 2.0),
        ("d", "from", 320.0, 2.0),
    ];
    let got = gas_component(unit, &flows, "");
    assert!(got.get("fuel").is_none() && got.get("efficiency").is_none());
    assert!(got["no_efficiency"].as_str().unwrap().contains("nothing in it gains"), "{got}");
    // Throttle.
    let valve = r#"{"kind": "valve"}"#;
    let got = gas_component(valve, &[("a", "to", 320.0, 5.0), ("b", "from", 280.0, 1.0)], "");
    account(&got, te(320.0) + me(5.0), te(280.0));
    let got = gas_component(valve, &[("a", "to", 320.0, 5.0), ("b", "from", 320.0, 1.0)], "");
    assert!(got["no_efficiency"].as_str().unwrap().contains("only dissipates"), "{got}");
}

#[test]
fn streams_that_meet_gain_and_give() {
    let report = report(
        r#"{"environment": {"temperature": "300 K", "pressure": "1 bar"},
            "fluids": {"gas": {"kind": "perfect_gas", "molar_mass": "29 g/mol", "specific_heat": "1.0 kJ/(kg K)"}},
            "components": {"mixer": {"kind": "mixer"}},
            "flows": {
              "hot": {"kind": "material", "to": "mixer", "fluid": "gas", "temperature": "600.0 K", "pressure": "2.000 bar", "mass_flow": "1.000 kg/s"},
              "cold": {"kind": "material", "to": "mixer", "fluid": "gas", "temperature": "320.0 K", "pressure": "2.000 bar", "mass_flow": "3.000 kg/s"},
              "out": {"kind": "material", "from": "mixer", "fluid": "gas", "pressure": "2.000 bar"}}}"#,
    );
    let balance = &report["components"]["mixer"]["exergy_balance"];
    // 390 K by the energy balance.
    account(balance, thermal(600.0) - thermal(390.0), 3.0 * (thermal(390.0) - thermal(320.0)));
    let causes = &report["components"]["mixer"]["decomposition"];
    let sigma = (390.0_f64 / 600.0).ln() + 3.0 * (390.0_f64 / 320.0).ln();
    assert!((f(causes, "/temperature_difference/value") - sigma).abs() < 1e-7, "{causes}");
    assert!(f(causes, "/remainder/value").abs() < 1e-9);
}

fn cyclic(kind: &str, flows: &str) -> serde_json::Value {
    let report = report(&format!(
        r#"{{"environment": {{"temperature": "300 K", "pressure": "1 bar"}},
            "components": {{"unit": {{"kind": "{kind}"}}}}, "flows": {{{flows}}}}}"#
    ));
    report["components"]["unit"].clone()
}

#[test]
fn cyclic_machines_are_accounted_for_by_their_heats() {
    let factor = |t: f64| 1.0 - 300.0 / t;
    let flows = |useful: &str, hot: f64, cold: f64| {
        format!(
            r#""cold": {{"kind": "heat", "to": "unit", "rate": "10.000 kW", "temperature": "{cold:.2} K"}},
               "hot": {{"kind": "heat", "from": "unit", "rate": "14.000 kW", "temperature": "{hot:.2} K"{useful}}},
               "drive": {{"kind": "work", "to": "unit", "form": "electric", "power": "4.000 kW"}}"#
        )
    };
    // A refrigerator's product is the exergy that flows into what it cools.
    let unit = cyclic("refrigerator", &flows("", 310.0, 260.0));
    let balance = &unit["exergy_balance"];
    assert!((f(balance, "/product/value") + 10.0 * factor(260.0)).abs() < 1e-6, "{balance}");
    assert!((f(balance, "/fuel/value") - 4.0).abs() < 1e-6);
    assert!((f(balance, "/loss/value") - 14.0 * factor(310.0)).abs() < 1e-6);
    assert!((f(&unit, "/performance/cop/value") - 2.5).abs() < 1e-9);
    assert!((f(&unit, "/performance/reversible_limit/value") - 5.2).abs() < 1e-9);
    // A heat pump's is that of the heat it delivers; a source below ambient costs.
    let unit = cyclic("heat_pump", &flows(r#", "role": "product""#, 330.0, 280.0));
    let balance = &unit["exergy_balance"];
    assert!((f(balance, "/product/value") - 14.0 * factor(330.0)).abs() < 1e-6, "{balance}");
    assert!((f(balance, "/fuel/value") - (4.0 + 10.0 * factor(280.0))).abs() < 1e-6);
    assert!((f(&unit, "/performance/share_of_reversible_limit/value") - 3.5 / 6.6).abs() < 1e-9);
    // An engine's is its work.
    let unit = cyclic(
        "heat_engine",
        r#""hot": {"kind": "heat", "to": "unit", "rate": "100.00 kW", "temperature": "800.0 K"},
           "cold": {"kind": "heat", "from": "unit", "rate": "65.00 kW", "temperature": "320.0 K"},
           "shaft": {"kind": "work", "from": "unit", "form": "shaft", "power": "35.00 kW"}"#,
    );
    let balance = &unit["exergy_balance"];
    assert!((f(balance, "/efficiency/value") - 35.0 / (100.0 * factor(800.0))).abs() < 1e-9, "{balance}");
    assert!((f(balance, "/loss/value") - 65.0 * factor(320.0)).abs() < 1e-6);
    assert!((f(&unit, "/performance/efficiency/value") - 0.35).abs() < 1e-9);
}

#[test]
fn an_own_purpose_counts_and_a_wrong_sign_is_refused() {
    let description = |fuel: &str| {
        format!(
            r#"{{"environment": {{"temperature": "300 K", "pressure": "1 bar"}},
                "fluids": {{"gas": {{"kind": "perfect_gas", "molar_mass": "29 g/mol", "specific_heat": "1.0 kJ/(kg K)"}}}},
                "components": {{"unit": {{"kind": "control_volume", "purpose": {{"fuel": {fuel}, "product": ["w"]}}}}}},
                "flows": {{
                  "a": {{"kind": "material", "to": "unit", "fluid": "gas", "temperature": "600.0 K", "pressure": "3.000 bar", "mass_flow": "1.000 kg/s"}},
                  "b": {{"kind": "material", "from": "unit", "fluid": "gas", "temperature": "500.0 K", "pressure": "1.000 bar", "mass_flow": "1.000 kg/s"}},
                  "w": {{"kind": "work", "from": "unit", "form": "shaft", "power": "100.0 kW"}}}}}}"#
        )
    };
    let report = report(&description(r#"["a", "-b"]"#));
    let balance = &report["components"]["unit"]["exergy_balance"];
    account(balance, thermal(600.0) + mechanical(3.0) - thermal(500.0), 100.0);
    let faults = read(description(r#"["a", "b"]"#).as_bytes(), &ReadLimits::default(), &names()).unwrap_err();
    assert_eq!(faults.len(), 1, "{faults:?}");
    assert_eq!(faults[0].pointer, "/components/unit/purpose/fuel/1");
    assert!(faults[0].hint.as_deref().unwrap().contains("\"-b\""), "{faults:?}");
}

/// Fuel that is not clear of zero makes no efficiency: chilled water near the ambient
/// temperature has next to no exergy.
#[test]
fn an_efficiency_needs_a_fuel_that_is_clear_of_zero() {
    let chilled = |u: &str| {
        let report = report(&format!(
            r#"{{"environment": {{"temperature": "8.5 degC", "pressure": "1 bar"}},
                "components": {{"unit": {{"kind": "heat_exchanger", "sides": [{{"in": ["a"], "out": ["b"]}}, {{"in": ["c"], "out": ["d"]}}]}}}},
                "flows": {{
                  "a": {{"kind": "material", "to": "unit", "fluid": "water", "temperature": {{"value": 12, "unit": "degC", "uncertainty": "{u}"}}, "pressure": "2.00 bar", "mass_flow": "1 kg/s"}},
                  "b": {{"kind": "material", "from": "unit", "fluid": "water", "temperature": {{"value": 11, "unit": "degC", "uncertainty": "{u}"}}, "pressure": "2.00 bar"}},
                  "c": {{"kind": "material", "to": "unit", "fluid": "water", "temperature": {{"value": 7, "unit": "degC", "uncertainty": "{u}"}}, "pressure": "2.00 bar"}},
                  "d": {{"kind": "material", "from": "unit", "fluid": "water", "temperature": {{"value": 9, "unit": "degC", "uncertainty": "{u}"}}, "pressure": "2.00 bar"}}}}}}"#
        ));
        report["components"]["unit"]["exergy_balance"].clone()
    };
    let vague = chilled("0.5 K");
    assert!(vague.get("efficiency").is_none(), "{vague}");
    assert!(vague["no_efficiency"].as_str().unwrap().contains("zero"), "{vague}");
    let sharp = chilled("0.01 K");
    assert!(f(&sharp, "/efficiency/value") > 0.0, "{sharp}");
}

/// −dp and dT parts by hand: m cp ln(T2/T1) and m R ln(p1/p2) of a perfect gas.
#[test]
fn entropy_generation_of_an_exchanger_by_its_causes() {
    let report = report(
        r#"{"environment": {"temperature": "300 K", "pressure": "1 bar"},
            "fluids": {"gas": {"kind": "perfect_gas", "molar_mass": "29 g/mol", "specific_heat": "1.0 kJ/(kg K)"}},
            "components": {"unit": {"kind": "heat_exchanger", "heat_loss": "10 kW", "sides": [{"in": ["a"], "out": ["b"]}, {"in": ["c"], "out": ["d"]}]}},
            "flows": {
              "a": {"kind": "material", "to": "unit", "fluid": "gas", "temperature": "320.0 K", "pressure": "2.000 bar", "mass_flow": "1.000 kg/s"},
              "b": {"kind": "material", "from": "unit", "fluid": "gas", "temperature": "400.0 K", "pressure": "1.900 bar"},
              "c": {"kind": "material", "to": "unit", "fluid": "gas", "temperature": "500.0 K", "pressure": "1.500 bar", "mass_flow": "1.000 kg/s"},
              "d": {"kind": "material", "from": "unit", "fluid": "gas", "temperature": "410.0 K", "pressure": "1.400 bar"}}}"#,
    );
    let unit = &report["components"]["unit"];
    let causes = &unit["decomposition"];
    let r = 8.314510 / 29.0;
    let near = |path: &str, want: f64| {
        let got = f(causes, path);
        assert!((got - want).abs() < 1e-7, "{path}: {got} {want}");
    };
    let cold = (400.0_f64 / 320.0).ln();
    let hot = (410.0_f64 / 500.0).ln();
    let mean = -90.0 / hot;
    near("/pressure_drop.a/value", r * (2.0_f64 / 1.9).ln());
    near("/pressure_drop.c/value", r * (1.5_f64 / 1.4).ln());
    near("/temperature_difference/value", cold + hot + 10.0 / mean);
    near("/heat_loss/value", 10.0 / 300.0 - 10.0 / mean);
    near("/remainder/value", 0.0);
    let dt = cold + hot + 10.0 / mean;
    let dp = r * (2.0_f64 / 1.9).ln() + r * (1.5_f64 / 1.4).ln();
    near("/bejan_number/value", dt / (dt + dp));
    assert!((f(unit, "/performance/duty.c/value") - 90.0).abs() < 1e-6);
    assert!((f(unit, "/performance/pressure_loss.a/value") - 0.1).abs() < 1e-9, "{unit}");
}

/// The parts of combustion add up to σ.
#[test]
fn entropy_generation_of_combustion_by_its_causes() {
    let report = report(&plant("nasa9"));
    let unit = &report["components"]["combustor"];
    let causes = &unit["decomposition"];
    let sigma = f(unit, "/entropy_balance/generation/value");
    let parts: f64 =
        ["temperature_difference", "pressure_drop.3", "pressure_drop.10", "heat_loss", "mixing", "reaction"]
            .iter()
            .map(|part| f(causes, &format!("/{part}/value")))
            .sum();
    let remainder = f(causes, "/remainder/value");
    assert!((sigma - parts - remainder).abs() < 1e-6 * sigma && remainder.abs() < 1e-3 * sigma, "{causes}");
    // −R Σ n ln x of 1.646 kg/s methane in 90.948 kg/s air.
    let (n1, n2): (f64, f64) = (1.6460089 / 16.04246, 90.947898 / 28.6486);
    let mixing = -8.314510 * (n1 * (n1 / (n1 + n2)).ln() + n2 * (n2 / (n1 + n2)).ln());
    assert!((f(causes, "/mixing/value") / mixing - 1.0).abs() < 1e-3, "{causes} {mixing}");
    assert!(f(causes, "/reaction/value") > 0.6 * sigma);
}
