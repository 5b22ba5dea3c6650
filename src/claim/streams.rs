//! Devices without work or heat: ejector and hot/cold splitter.

use super::case::{Case, Entropy, Limit, Physics, Sense};
use super::desk::{Computed, Desk, Given, Medium, Role, StreamState};
use super::words;
use crate::diagnostic::{Code, Diagnostic};
use crate::fluid::{Pair, State};
use crate::quantity::Dimension as D;
use std::rc::Rc;

const LAW: &str = "the energy and entropy balances of a steady adiabatic device without work, where entropy is never \
                   destroyed (Moran and Shapiro, Fundamentals of Engineering Thermodynamics, chapter 6)";

/// The pressure between `low` and `high` (Pa) at which a falling function of it is zero, by
/// bisection of its logarithm; `None` where both ends have one sign or the function has no value.
/// Where it has no value within, the part towards `low` is searched.
fn pressure_at_zero(low: f64, high: f64, f: impl Fn(f64) -> Computed<f64>) -> Option<f64> {
    let (mut a, mut b) = (low.ln(), high.ln());
    let start = f(low).ok()?;
    if start.is_nan() || start < 0.0 {
        return None;
    }
    if let Ok(top) = f(high)
        && top > 0.0
    {
        return None;
    }
    for _ in 0..100 {
        let m = 0.5 * (a + b);
        match f(m.exp()) {
            Ok(y) if y >= 0.0 => a = m,
            _ => b = m,
        }
        if b - a < 1e-13 {
            break;
        }
    }
    let found = (0.5 * (a + b)).exp();
    // An end of the formulation's range is no root.
    let here = f(a.exp()).ok()?;
    let scale = start.abs().max(1.0);
    (here.abs() <= 1e-6 * scale).then_some(found)
}

struct Ejector {
    medium: Medium,
    motive: StreamState,
    suction: StreamState,
    ratio: Given,
    pressure: Given,
}

impl Ejector {
    /// Enthalpy and entropy per mass of the mixture that would leave without losses.
    fn mixed(&self, x: &[f64]) -> Computed<(f64, f64, State, State)> {
        let (m, s, w) = (self.motive.at(x)?, self.suction.at(x)?, self.ratio.at(x));
        Ok(((m.enthalpy + w * s.enthalpy) / (1.0 + w), (m.entropy + w * s.entropy) / (1.0 + w), m, s))
    }

    fn generation_at(&self, x: &[f64], p: f64) -> Computed<f64> {
        let (h, s, ..) = self.mixed(x)?;
        Ok(self.medium.state(Pair::PressureEnthalpy, p, h, "/claim/outlet_pressure")?.entropy - s)
    }

    /// The outlet pressure without entropy generation.
    fn reversible_pressure(&self, x: &[f64]) -> Computed<f64> {
        let (.., m, s) = self.mixed(x)?;
        let (low, high) = (m.pressure.min(s.pressure), m.pressure.max(s.pressure));
        pressure_at_zero(low, high, |p| self.generation_at(x, p)).ok_or_else(|| {
            Diagnostic::new(
                Code::BadClaim,
                "/motive",
                "no outlet pressure between suction and motive pressure closes the entropy balance",
            )
            .hint("are motive and suction interchanged?")
        })
    }
}

/// An ejector.
pub fn ejector(desk: &mut Desk<'_>) -> Option<Case> {
    let medium = desk.fluid(Some(desk.root), "fluid")?;
    let motive = desk.stream("motive", &medium, Role::Condition);
    let suction = desk.stream("suction", &medium, Role::Condition);
    let claim = desk.claim();
    let ratio = desk.positive(claim, "entrainment_ratio", D::Fraction, Role::Claimed, Some(1e3));
    let pressure = desk.member(claim, "outlet_pressure", D::Pressure, Role::Claimed);
    let ejector =
        Rc::new(Ejector { medium, motive: motive?, suction: suction?, ratio: ratio?, pressure: pressure? });
    let subject = format!(
        "An ejector for {} with motive fluid at {}, suction at {} and an entrainment ratio of {} is claimed to reach {}.",
        ejector.medium.name,
        ejector.motive.text(),
        ejector.suction.text(),
        ejector.ratio.text,
        ejector.pressure.text
    );
    let (a, b, c) = (ejector.clone(), ejector.clone(), ejector);
    Some(Case {
        kind: "ejector",
        subject,
        law: LAW,
        figure: ("outlet_pressure", "outlet pressure"),
        claimed: Box::new(move |x| Ok(a.pressure.at(x))),
        dimension: D::Pressure,
        shown: None,
        limits: vec![Limit {
            name: "reversible",
            of: None,
            sense: Sense::AtMost,
            value: Box::new(move |x| b.reversible_pressure(x)),
            assumes: "mixing and lifting without any entropy generation, which real ejectors, that mix at unequal speed, \
                      stay far from"
                .to_owned(),
            law: true,
        }],
        strict: None,
        entropy: Entropy {
            value: Box::new(move |x| c.generation_at(x, c.pressure.at(x))),
            dimension: D::SpecificEntropy,
            per: "kg of mixture",
        },
        relative: false,
        practice: None,
        figures: Vec::new(),
        contradictions: Vec::new(),
        notes: Vec::new(),
        not_included: Vec::new(),
        causes: &["a gauge pressure taken for an absolute one", "motive flow that was not counted"],
        cautions: vec![words::JUDGES, words::PRESSURE, words::HOT],
    })
}

struct Splitter {
    medium: Medium,
    inlet: StreamState,
    pressures: [Given; 2],
    temperatures: [Given; 2],
    fraction: Given,
}

impl Splitter {
    /// States at the hot and the cold outlet.
    fn outlets(&self, x: &[f64]) -> Computed<[State; 2]> {
        let [ph, pc] = &self.pressures;
        let [th, tc] = &self.temperatures;
        let at =
            |p: &Given, t: &Given| self.medium.state(Pair::PressureTemperature, p.at(x), t.at(x), &t.pointer);
        Ok([at(ph, th)?, at(pc, tc)?])
    }

    /// A property of the outlets together, per mass of inlet.
    fn leaving(&self, x: &[f64], f: fn(&State) -> f64) -> Computed<f64> {
        let [hot, cold] = self.outlets(x)?;
        let y = self.fraction.at(x);
        Ok((1.0 - y) * f(&hot) + y * f(&cold))
    }

    fn generation(&self, x: &[f64]) -> Computed<f64> {
        Ok(self.leaving(x, |s| s.entropy)? - self.inlet.at(x)?.entropy)
    }

    /// What leaves more than enters, J per kg of inlet.
    fn energy_gap(&self, x: &[f64]) -> Computed<f64> {
        Ok(self.leaving(x, |s| s.enthalpy)? - self.inlet.at(x)?.enthalpy)
    }

    /// The least inlet pressure that carries the entropy of the outlets.
    fn least_pressure(&self, x: &[f64]) -> Computed<f64> {
        let (one, out) = (self.inlet.at(x)?, self.leaving(x, |s| s.entropy)?);
        let gap = |p: f64| {
            let s = self.medium.state(Pair::PressureTemperature, p, one.temperature, "/inlet")?.entropy;
            // Entropy falls with pressure: above the root less enters than leaves.
            Ok(s - out)
        };
        let (low, high) = (1e-3 * one.pressure, 1e3 * one.pressure);
        // Where the formulation ends below, less would do.
        let mut low = low;
        while gap(low).is_err() && low < one.pressure {
            low *= 1.5;
        }
        if gap(low)? < 0.0 {
            return Ok(low);
        }
        pressure_at_zero(low, high, gap).ok_or_else(|| {
            Diagnostic::new(
                Code::BadClaim,
                "/inlet/pressure",
                "no inlet pressure in range closes the entropy balance",
            )
        })
    }
}

/// A hot/cold splitter.
pub fn splitter(desk: &mut Desk<'_>) -> Option<Case> {
    let medium = desk.fluid(Some(desk.root), "fluid")?;
    let root = Some(desk.root);
    let inlet = desk.stream("inlet", &medium, Role::Condition);
    let cold_pressure = desk.member(root, "outlet_pressure", D::Pressure, Role::Condition);
    let hot_pressure = match desk.member(root, "hot_pressure", D::Pressure, Role::Condition) {
        Some(p) => Some(p),
        None => cold_pressure.clone(),
    };
    let claim = desk.claim();
    let hot = desk.member(claim, "hot_temperature", D::Temperature, Role::Claimed);
    let cold = desk.member(claim, "cold_temperature", D::Temperature, Role::Claimed);
    let fraction = desk.positive(claim, "cold_fraction", D::Fraction, Role::Claimed, Some(1.0));
    let splitter = Rc::new(Splitter {
        medium,
        inlet: inlet?,
        pressures: [hot_pressure?, cold_pressure?],
        temperatures: [hot?, cold?],
        fraction: fraction?,
    });
    let [hot, cold] = &splitter.temperatures;
    let subject = format!(
        "A splitter that divides {} at {} into a hot stream at {} and a cold stream at {}, the cold one {} of the whole, \
         is claimed.",
        splitter.medium.name,
        splitter.inlet.text(),
        hot.text,
        cold.text,
        splitter.fraction.text
    );
    let physics = |f: fn(&Splitter, &[f64]) -> Computed<f64>| -> Physics {
        let splitter = splitter.clone();
        Box::new(move |x| f(&splitter, x))
    };
    Some(Case {
        kind: "splitter",
        subject,
        law: LAW,
        figure: ("inlet_pressure", "inlet pressure"),
        claimed: physics(|s, x| Ok(s.inlet.at(x)?.pressure)),
        dimension: D::Pressure,
        shown: None,
        limits: vec![Limit {
            name: "reversible",
            of: None,
            sense: Sense::AtLeast,
            value: physics(Splitter::least_pressure),
            assumes: "the least inlet pressure with which the outlets as claimed carry no less entropy than the inlet"
                .to_owned(),
            law: true,
        }],
        strict: None,
        entropy: Entropy {
            value: physics(Splitter::generation),
            dimension: D::SpecificEntropy,
            per: "kg of gas at the inlet",
        },
        relative: false,
        practice: None,
        figures: vec![("energy_surplus_of_outlets", physics(Splitter::energy_gap), D::SpecificEnergy)],
        contradictions: vec![(
            "energy-imbalance",
            physics(Splitter::energy_gap),
            D::SpecificEnergy,
            "The outlets as claimed do not carry the energy of the inlet, and the device has neither work nor heat",
        )],
        notes: Vec::new(),
        not_included: Vec::new(),
        causes: &["a gauge pressure taken for an absolute one", "temperatures at different shares of cold gas"],
        cautions: vec![words::JUDGES, words::PRESSURE],
    })
}
