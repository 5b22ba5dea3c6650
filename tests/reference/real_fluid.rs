//! Real fluids against states from an independent implementation of the same equations.

use sigmadot::fluid::real_fluid::{RealFluid, by_name, catalogue};
use sigmadot::fluid::{Engine, Pair, PropertyError, State};

const STATES: &str = include_str!("../data/real_fluid/states.csv");

struct Row {
    kind: &'static str,
    t: f64,
    p: f64,
    rho: f64,
    h: f64,
    s: f64,
    q: f64,
}

fn rows(fluid: &RealFluid) -> Vec<Row> {
    let rows: Vec<Row> = STATES
        .lines()
        .filter(|line| line.split(',').next() == Some(fluid.name()))
        .map(|line| {
            let cells: Vec<&str> = line.split(',').collect();
            let x = |k: usize| cells[k].parse::<f64>().unwrap();
            Row { kind: cells[1], t: x(2), p: x(3), rho: x(4), h: x(5), s: x(6), q: x(7) }
        })
        .collect();
    assert!(rows.len() >= 80, "{} has {} rows", fluid.name(), rows.len());
    rows
}

fn answer(fluid: &RealFluid, row: &Row) -> Result<State, PropertyError> {
    if row.q < 0.0 {
        fluid.state(Pair::PressureTemperature, row.p, row.t, 0.0)
    } else {
        fluid.state(Pair::TemperatureQuality, row.t, row.q, 0.0)
    }
}

#[derive(Default)]
struct Worst {
    rho: (f64, f64, f64),
    h: (f64, f64, f64),
    s: (f64, f64, f64),
    p_sat: (f64, f64, f64),
}

#[test]
fn states_agree() {
    let mut failures = Vec::new();
    for fluid in catalogue() {
        let rows = rows(fluid);
        let span = |f: fn(&Row) -> f64| {
            rows.iter().map(f).fold(f64::MIN, f64::max) - rows.iter().map(f).fold(f64::MAX, f64::min)
        };
        let (h_span, s_span) = (span(|r| r.h), span(|r| r.s));
        // The common state: the first row in one phase.
        let base = rows.iter().find(|r| r.kind == "PT").unwrap();
        let own = answer(fluid, base).unwrap();
        let (dh, ds) = (own.enthalpy - base.h, own.entropy - base.s);
        let mut worst = Worst::default();
        let keep = |slot: &mut (f64, f64, f64), x: f64, row: &Row| {
            if x > slot.0 || x.is_nan() {
                *slot = (x, row.t, row.p);
            }
        };
        for row in &rows {
            match answer(fluid, row) {
                Ok(state) => {
                    keep(&mut worst.rho, (1.0 / state.volume / row.rho - 1.0).abs(), row);
                    keep(&mut worst.h, ((state.enthalpy - dh - row.h) / h_span).abs(), row);
                    keep(&mut worst.s, ((state.entropy - ds - row.s) / s_span).abs(), row);
                    if row.q >= 0.0 {
                        keep(&mut worst.p_sat, (state.pressure / row.p - 1.0).abs(), row);
                    }
                }
                Err(e) => failures.push(format!(
                    "{} {} T {} p {} q {}: {e}",
                    fluid.name(),
                    row.kind,
                    row.t,
                    row.p,
                    row.q
                )),
            }
        }
        println!(
            "{:22} rho {:.1e} h {:.1e} s {:.1e} psat {:.1e}   ({} K, {} Pa)",
            fluid.name(),
            worst.rho.0,
            worst.h.0,
            worst.s.0,
            worst.p_sat.0,
            worst.rho.1,
            worst.rho.2
        );
        for (what, (x, t, p), limit) in [
            ("density", worst.rho, 1e-6),
            ("enthalpy", worst.h, 1e-6),
            ("entropy", worst.s, 1e-6),
            ("saturation pressure", worst.p_sat, 1e-5),
        ] {
            if !(x <= limit) {
                failures.push(format!("{} {what} off by {x:.2e} at {t} K, {p} Pa", fluid.name()));
            }
        }
    }
    assert!(failures.is_empty(), "\n{}", failures.join("\n"));
}
