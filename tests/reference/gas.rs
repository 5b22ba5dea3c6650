//! Ideal gases, perfect gases and incompressible media against published tables and against the
//! identities that any property formulation obeys.

use serde_json::Value;
use sigmadot::fluid::heat_capacity::Term;
use sigmadot::fluid::ideal_gas::{IdealGas, Species, SpeciesDefinition, all_species, find_species};
use sigmadot::fluid::incompressible::{Incompressible, LISTED};
use sigmadot::fluid::perfect_gas::PerfectGas;
use sigmadot::fluid::{Engine, Pair, Property, PropertyError};

pub fn json(text: &str) -> Value {
    serde_json::from_str(text).unwrap()
}

/// A small generator for test inputs (splitmix64): uniform in [0, 1).
pub struct Draw(pub u64);

impl Draw {
    pub fn unit(&mut self) -> f64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64
    }

    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.unit()
    }
}

const SOLVED: [Pair; 3] = [Pair::PressureEnthalpy, Pair::PressureEntropy, Pair::EnthalpyEntropy];

/// du = T ds − p dv, derivatives against central differences, and round trips through every pair.
pub fn check_identities(engine: &dyn Engine, t: f64, p: f64, c: f64) {
    let at = |p: f64, t: f64, c: f64| engine.state(Pair::PressureTemperature, p, t, c).unwrap();
    let s = at(p, t, c);
    let steps = [p * 1e-4, t * 1e-4, 1e-5];
    for (column, step) in steps.iter().enumerate() {
        let mut x = [p, t, c];
        x[column] += step;
        let up = at(x[0], x[1], x[2]);
        x[column] -= 2.0 * step;
        let down = at(x[0], x[1], x[2]);
        for q in [Property::Enthalpy, Property::Entropy, Property::Volume] {
            let difference = (up.get(q) - down.get(q)) / (2.0 * step);
            let analytic = s.gradient[q as usize][column];
            // Truncation (1e-8 relative) and rounding of the difference.
            let floor = 1e-12 * up.get(q).abs() / step;
            assert!(
                (difference - analytic).abs() <= 3e-7 * analytic.abs() + floor,
                "{q:?} column {column} at {t} K {p} Pa: {difference} against {analytic}"
            );
        }
    }
    // Gibbs: along T and along p at constant composition.
    let (h, en, v) = (Property::Enthalpy as usize, Property::Entropy as usize, Property::Volume as usize);
    for column in 0..2 {
        let dp = if column == 0 { 1.0 } else { 0.0 };
        let du = s.gradient[h][column] - p * s.gradient[v][column] - s.volume * dp;
        let tds = s.gradient[en][column] * t - p * s.gradient[v][column];
        let scale = s.gradient[h][column].abs() + p * s.gradient[v][column].abs() + s.volume * dp;
        assert!((du - tds).abs() <= 1e-12 * scale, "du - (T ds - p dv) = {}", du - tds);
    }
    for pair in SOLVED {
        let (a, b) = pair.properties();
        let back = engine.state(pair, s.get(a), s.get(b), c).unwrap();
        assert!((back.temperature - t).abs() < 1e-9 * t, "{pair}: {} against {t} K", back.temperature);
        // Through (h, s) the pressure carries the rounding of s/R, or of h/v.
        let loose =
            1e-9 * p + if pair == Pair::EnthalpyEntropy { 1e-12 * s.enthalpy.abs() / s.volume } else { 0.0 };
        assert!((back.pressure - p).abs() < loose, "{pair}: {} against {p} Pa", back.pressure);
    }
}

#[test]
fn species_table_matches_published_values() {
    let data = json(include_str!("../data/ideal-gas.json"));
    let mut points = 0;
    for (name, row) in data["species"].as_object().unwrap() {
        let species = find_species(name).unwrap();
        assert!((species.molar_mass() * 1e3 - row["M_g_mol"].as_f64().unwrap()).abs() < 1e-9);
        for point in row["table"].as_array().unwrap() {
            let f = |k: &str| point[k].as_f64().unwrap();
            let Ok(s) = species.standard(f("T_K")) else { panic!("{name} at {} K", f("T_K")) };
            // Relative 1e-6 and half a digit of the printed figure.
            for (got, printed) in
                [(s.cp, f("cp_J_molK")), (s.h * 1e-3, f("h_kJ_mol")), (s.s, f("s_J_molK_1bar"))]
            {
                assert!(
                    (got - printed).abs() < 1e-6 * printed.abs() + 5.1e-5,
                    "{name}: {got} against {printed}"
                );
            }
            points += 1;
        }
        let s = species.standard(298.15).unwrap();
        for (key, got) in [("CODATA_S298", s.s), ("CODATA_Hf298", s.h * 1e-3)] {
            if let Some(codata) = row.get(key) {
                let (value, u) = (codata["value"].as_f64().unwrap(), codata["u"].as_f64().unwrap());
                assert!((got - value).abs() <= 2.0 * u, "{name} {key}: {got} against {value} ± {u}");
            }
        }
    }
    assert!(points > 250, "{points} points");
    for row in data["janaf"]["rows"].as_array().unwrap() {
        let species = find_species(row["species"].as_str().unwrap()).unwrap();
        let t = row["T_K"].as_f64().unwrap();
        let (s, s0) = (species.standard(t).unwrap(), species.standard(298.15).unwrap());
        let (dh, entropy) = (row["printed_dh"].as_f64().unwrap(), row["printed_s"].as_f64().unwrap());
        assert!(((s.h - s0.h) * 1e-3 - dh).abs() < 1e-3 * dh, "{row}");
        assert!((s.s - entropy).abs() < 2e-4 * entropy, "{row}");
    }
}

/// Reference data: cantera 3.2.0 with the nine-coefficient polynomials at a standard pressure of
/// 1 bar and R = 8.314510 J/(mol K).
#[test]
fn random_mixtures_match_an_independent_evaluation() {
    let text = include_str!("../data/ideal-gas-mixtures.csv");
    let mut lines = text.lines();
    let header: Vec<&str> = lines.next().unwrap().split(',').collect();
    let mut rows = 0;
    for line in lines {
        let row: Vec<f64> = line.split(',').map(|x| x.parse().unwrap()).collect();
        let composition: Vec<(&str, f64)> =
            header.iter().zip(&row).filter_map(|(h, x)| h.strip_prefix("x_").map(|n| (n, *x))).collect();
        let gas = IdealGas::from_names(&composition).unwrap();
        let [t, p, m, h, s, cp] = row[..6] else { panic!() };
        let molar = m * 1e-3;
        assert!((gas.molar_mass(0.0).unwrap() - molar).abs() < 1e-9 * molar);
        let state = gas.state(Pair::PressureTemperature, p, t, 0.0).unwrap();
        assert!((state.enthalpy - h / molar).abs() < 1.0, "{t} K: {} against {}", state.enthalpy, h / molar);
        assert!((state.entropy - s / molar).abs() < 1e-3, "{t} K: {} against {}", state.entropy, s / molar);
        assert!((state.heat_capacity().unwrap() - cp / molar).abs() < 1e-3);
        rows += 1;
    }
    assert!(rows > 30);
}

#[test]
fn identities_hold_for_every_engine() {
    let mut draw = Draw(1);
    let mut engines: Vec<Box<dyn Engine>> = vec![
        Box::new(IdealGas::dry_air().unwrap()),
        Box::new(IdealGas::from_names(&[("CO2", 0.1), ("H2O", 0.2), ("N2", 0.7)]).unwrap()),
        Box::new(PerfectGas::with_constant(0.004, 5200.0).unwrap()),
        Box::new(
            PerfectGas::new(
                0.044,
                &[Term { coefficient: 500.0, exponent: 0.0 }, Term { coefficient: 1.0, exponent: 1.0 }],
                Some((200.0, 1500.0)),
            )
            .unwrap(),
        ),
    ];
    engines.extend(
        all_species()
            .iter()
            .filter_map(|s| IdealGas::new(&[(s, 1.0)]).ok())
            .map(|g| Box::new(g) as Box<dyn Engine>),
    );
    assert_eq!(engines.len(), 4 + 26, "the condensed species are refused");
    for engine in &engines {
        for _ in 0..20 {
            // Clear of the joint of the intervals, where cp has a small step.
            let t = if draw.unit() < 0.5 { draw.between(205.0, 990.0) } else { draw.between(1010.0, 1490.0) };
            check_identities(engine.as_ref(), t, 10f64.powf(draw.between(2.0, 7.0)), 0.0);
        }
    }
    for row in LISTED {
        let medium = Incompressible::listed(row.name).unwrap();
        let (low, high) = medium.temperature_range();
        for _ in 0..5 {
            check_identities(&medium, draw.between(low * 1.001, high * 0.999), draw.between(1e4, 1e7), 0.0);
        }
    }
}

#[test]
fn inversion_is_sound_at_the_joints_and_the_ends() {
    let air = IdealGas::dry_air().unwrap();
    for t in [200.0, 200.000001, 999.999999, 1000.0, 1000.000001, 5999.999, 6000.0] {
        let s = air.state(Pair::PressureTemperature, 1e5, t, 0.0).unwrap();
        for pair in SOLVED {
            let (a, b) = pair.properties();
            let back = air.state(pair, s.get(a), s.get(b), 0.0).unwrap();
            // The published intervals meet within 4e-8 of h.
            assert!((back.temperature - t).abs() < 1e-6 * t, "{pair} at {t}: {}", back.temperature);
        }
    }
    for t in [199.9, 6000.1] {
        let e = air.state(Pair::PressureTemperature, 1e5, t, 0.0).unwrap_err();
        assert!(
            matches!(e, PropertyError::OutOfRange { quantity: "temperature", min: 200.0, max: 6000.0, .. }),
            "{e}"
        );
    }
}

#[test]
fn any_input_gives_a_finite_state_or_an_error() {
    let mut draw = Draw(7);
    let engines: [Box<dyn Engine>; 3] = [
        Box::new(IdealGas::dry_air().unwrap()),
        Box::new(PerfectGas::with_constant(0.029, 1000.0).unwrap()),
        Box::new(Incompressible::listed("milk").unwrap()),
    ];
    let special = [
        0.0,
        -0.0,
        1.0,
        -1.0,
        f64::NAN,
        f64::INFINITY,
        f64::NEG_INFINITY,
        f64::MAX,
        f64::MIN_POSITIVE,
        5e-324,
        -1e308,
    ];
    let mut answered = 0;
    for engine in &engines {
        for pair in Pair::ALL {
            for _ in 0..4000 {
                let mut figure = || match draw.unit() {
                    x if x < 0.2 => special[(draw.unit() * special.len() as f64) as usize],
                    x if x < 0.6 => 10f64.powf(draw.between(-12.0, 12.0)),
                    _ => draw.between(-1e6, 1e6),
                };
                let (a, b, c) = (figure(), figure(), figure());
                if let Ok(s) = engine.state(pair, a, b, c) {
                    assert!(engine.supports(pair));
                    let finite = s.gradient.iter().flatten().all(|x| x.is_finite())
                        && [s.temperature, s.pressure, s.enthalpy, s.entropy, s.volume]
                            .iter()
                            .all(|x| x.is_finite());
                    assert!(finite, "{pair} {a} {b}: {s:?}");
                    assert!(s.temperature > 0.0 && s.pressure > 0.0 && s.volume > 0.0);
                    answered += 1;
                }
            }
        }
    }
    assert!(answered > 500, "{answered}");
}

/// The gas polynomials of the benchmark as species of the caller's own.
pub fn book_species(name: &str) -> Species {
    let data = json(include_str!("../data/gas-benchmark-1996.json"));
    let k: Vec<f64> =
        data["coefficients"][name].as_array().unwrap().iter().map(|x| x.as_f64().unwrap()).collect();
    let [h, s, a, b, c, d] = k[..] else { panic!() };
    let y = 0.29815;
    let table = find_species(name).unwrap();
    Species::define(&SpeciesDefinition {
        name: name.to_owned(),
        molar_mass: table.molar_mass(),
        elements: table.elements().copied(),
        heat_capacity: vec![
            Term { coefficient: a, exponent: 0.0 },
            Term { coefficient: b * 1e-3, exponent: 1.0 },
            Term { coefficient: c * 1e6, exponent: -2.0 },
            Term { coefficient: d * 1e-6, exponent: 2.0 },
        ],
        temperature_range: None,
        formation_enthalpy: 1e6 * (h + a * y + b * y * y / 2.0 - c / y + d * y * y * y / 3.0),
        standard_entropy: s + a * 298.15f64.ln() + b * y - c / (2.0 * y * y) + d * y * y / 2.0,
        chemical_exergy: None,
    })
    .unwrap()
}

/// The 1996 cogeneration benchmark: compressor and turbine outlet temperatures and physical
/// exergies with the book's own polynomials. The book rounds the gas constant to 8.314, which is
/// worth 0.03 K and 5 kW here.
#[test]
fn own_species_reproduce_the_cogeneration_benchmark() {
    let data = json(include_str!("../data/gas-benchmark-1996.json"));
    let f = |v: &Value| v.as_f64().unwrap();
    let gas = |x: &Value| {
        let species: Vec<(Species, f64)> =
            x.as_object().unwrap().iter().map(|(n, x)| (book_species(n), x.as_f64().unwrap())).collect();
        IdealGas::new(&species.iter().map(|(s, x)| (s, *x)).collect::<Vec<_>>()).unwrap()
    };
    let air = gas(&data["inputs"]["air_mole_fractions"]);
    let products = gas(&data["x_products"]);
    let state = |g: &IdealGas, i: usize| {
        g.state(Pair::PressureTemperature, f(&data["p_bar"][i]) * 1e5, f(&data["T"][i]), 0.0).unwrap()
    };
    // Compressor with 86 % isentropic efficiency.
    let s1 = state(&air, 0);
    let ideal = air.state(Pair::PressureEntropy, 10.13e5, s1.entropy, 0.0).unwrap();
    let h2 = s1.enthalpy + (ideal.enthalpy - s1.enthalpy) / 0.86;
    let s2 = air.state(Pair::PressureEnthalpy, 10.13e5, h2, 0.0).unwrap();
    assert!((s2.temperature - f(&data["T"][1])).abs() < 0.05, "{}", s2.temperature);
    // Expander with 86 %.
    let s4 = state(&products, 3);
    let p5 = f(&data["p_bar"][4]) * 1e5;
    let ideal = products.state(Pair::PressureEntropy, p5, s4.entropy, 0.0).unwrap();
    let h5 = s4.enthalpy - 0.86 * (s4.enthalpy - ideal.enthalpy);
    let s5 = products.state(Pair::PressureEnthalpy, p5, h5, 0.0).unwrap();
    assert!((s5.temperature - f(&data["T"][4])).abs() < 0.05, "{}", s5.temperature);
    // Physical exergies: air, and products with all water as vapour at the dead state.
    let t0 = 298.15;
    let dead = products.state(Pair::PressureTemperature, 1.013e5, t0, 0.0).unwrap();
    for i in 0..7 {
        let (g, zero, m) =
            if i < 3 { (&air, s1, f(&data["m_air"])) } else { (&products, dead, f(&data["m_products"])) };
        let s = state(g, i);
        let e = m * (s.enthalpy - zero.enthalpy - t0 * (s.entropy - zero.entropy)) * 1e-6;
        let expected = f(&data["physical_exergy_all_vapour_MW"][i]);
        assert!((e - expected).abs() < 0.01, "state {}: {e} against {expected}", i + 1);
    }
}

/// Compressibility factors of air from Helmholtz equations of state (Lemmon et al. 2000): 0.997 at
/// 300 K and 1 MPa, 1.003 at 600 K and 1 MPa. The estimate need only have the size.
#[test]
fn neglected_pressure_effects_enter_the_uncertainty() {
    let air = IdealGas::dry_air().unwrap();
    let u =
        |t: f64, p: f64| air.relative_uncertainty(&air.state(Pair::PressureTemperature, p, t, 0.0).unwrap());
    assert!((u(300.0, 1e5) - 5e-4).abs() < 2e-4);
    assert!((2e-3..5e-3).contains(&u(300.0, 1e6)), "{}", u(300.0, 1e6));
    assert!((2e-3..5e-3).contains(&u(600.0, 1e6)), "{}", u(600.0, 1e6));
    assert!(u(300.0, 1e10) <= 1.001);
}
