//! Compressors and expanders: work against a change of pressure.

use super::case::{Case, Entropy, Limit, Physics, Sense, Shown};
use super::desk::{Computed, Desk, Given, Medium, Role, StreamState};
use super::words;
use crate::diagnostic::{Code, Diagnostic};
use crate::document::Node;
use crate::fluid::heat_capacity::GAS_CONSTANT;
use crate::fluid::{Pair, State};
use crate::quantity::{Dimension as D, Reference};
use std::rc::Rc;

const LAW: &str = "the energy and entropy balances of a steady flow, where entropy is never destroyed (Moran and Shapiro, \
                   Fundamentals of Engineering Thermodynamics, chapters 6 and 7)";

/// Compressor or expander with its states.
struct Flow {
    compresses: bool,
    medium: Medium,
    inlet: StreamState,
    pressure: Given,
    temperature: Option<Given>,
    ambient: Option<Given>,
}

impl Flow {
    /// +1 where work is taken in.
    fn sign(&self) -> f64 {
        if self.compresses { 1.0 } else { -1.0 }
    }

    fn out(&self, pair: Pair, x: &[f64], second: f64) -> Computed<State> {
        self.medium.state(pair, self.pressure.at(x), second, "/outlet")
    }

    fn isentropic(&self, x: &[f64]) -> Computed<f64> {
        let one = self.inlet.at(x)?;
        Ok(self.sign() * (self.out(Pair::PressureEntropy, x, one.entropy)?.enthalpy - one.enthalpy))
    }

    /// Temperature of the surroundings, K; that of the inlet where it is not given.
    fn ambient(&self, x: &[f64]) -> Computed<f64> {
        match &self.ambient {
            Some(t) => Ok(t.at(x)),
            None => Ok(self.inlet.at(x)?.temperature),
        }
    }

    /// Outlet at the temperature that is stated, or at that of the surroundings, where the flow
    /// exergy is least.
    fn exchanged_outlet(&self, x: &[f64]) -> Computed<State> {
        let t = match &self.temperature {
            Some(t) => t.at(x),
            None => self.ambient(x)?,
        };
        self.out(Pair::PressureTemperature, x, t)
    }

    /// Increase (compressor) or decrease (expander) of the flow exergy.
    fn exergy_change(&self, x: &[f64]) -> Computed<f64> {
        let (one, two) = (self.inlet.at(x)?, self.exchanged_outlet(x)?);
        let rise = two.enthalpy - one.enthalpy - self.ambient(x)? * (two.entropy - one.entropy);
        Ok(self.sign() * rise)
    }

    fn isothermal(&self, x: &[f64]) -> Computed<f64> {
        let one = self.inlet.at(x)?;
        let two = self.out(Pair::PressureTemperature, x, one.temperature)?;
        let rise = two.enthalpy - one.enthalpy - one.temperature * (two.entropy - one.entropy);
        Ok(self.sign() * rise)
    }
}

/// Mass per volume at the reference that a unit counts it at, kg/m3.
fn density(flow: &Flow, reference: Reference, x: &[f64], pointer: &str) -> Computed<f64> {
    match reference.conditions() {
        None => Ok(1.0 / flow.inlet.at(x)?.volume),
        Some((t, p)) => {
            let Some(molar_mass) = flow.medium.engine.molar_mass(0.0) else {
                let text = format!("{} has no molar mass to count normal volumes with", flow.medium.name);
                return Err(Diagnostic::new(Code::BadClaim, pointer, text));
            };
            // Normal and standard volumes are counted as those of an ideal gas.
            Ok(p * molar_mass / (GAS_CONSTANT * t))
        }
    }
}

/// The claimed work per mass, and the unit in which it is stated.
fn claimed(desk: &mut Desk<'_>, flow: &Rc<Flow>) -> Option<(Physics, Option<Shown>)> {
    let claim = desk.claim();
    let groups: [&'static [&'static str]; 5] = [
        &["specific_work"],
        &["energy_per_volume"],
        &["power", "mass_flow"],
        &["power", "volume_flow"],
        &["isentropic_efficiency"],
    ];
    // Power belongs to two forms; which one is meant follows from the flow beside it.
    let has = |name: &str| claim.is_some_and(|c: Node<'_>| c.get(name).is_some());
    let by_mass = has("mass_flow") || !has("volume_flow");
    let [a, b, c, d, e] = groups;
    let form =
        desk.one_of(&if by_mass { [a, b, c, e, &["volume_flow"]] } else { [a, b, d, e, &["mass_flow"]] })?;
    let flow = flow.clone();
    Some(match form {
        0 => {
            let g = desk.positive(claim, "specific_work", D::SpecificEnergy, Role::Claimed, None)?;
            let shown = Shown { factor: Box::new(|_| Ok(1.0)), scale: g.scale };
            (Box::new(move |x| Ok(g.at(x))), Some(shown))
        }
        1 => {
            let g = desk.positive(claim, "energy_per_volume", D::EnergyPerVolume, Role::Claimed, None)?;
            let (scale, pointer) = (g.scale, g.pointer.clone());
            let f = flow.clone();
            let factor: Physics = Box::new(move |x| density(&f, scale.reference, x, &pointer));
            let work: Physics =
                Box::new(move |x| Ok(g.at(x) / density(&flow, scale.reference, x, &g.pointer)?));
            (work, Some(Shown { factor, scale }))
        }
        2 => {
            let p = desk.positive(claim, "power", D::Power, Role::Claimed, None)?;
            if by_mass {
                let m = desk.positive(claim, "mass_flow", D::MassFlow, Role::Claimed, None)?;
                (Box::new(move |x| Ok(p.at(x) / m.at(x))), None)
            } else {
                let v = desk.positive(claim, "volume_flow", D::VolumeFlow, Role::Claimed, None)?;
                let work: Physics = Box::new(move |x| {
                    Ok(p.at(x) / (v.at(x) * density(&flow, v.scale.reference, x, &v.pointer)?))
                });
                (work, None)
            }
        }
        _ => {
            let g = desk.positive(claim, "isentropic_efficiency", D::Fraction, Role::Claimed, Some(1e3))?;
            let power = if flow.compresses { -1 } else { 1 };
            (Box::new(move |x| Ok(flow.isentropic(x)? * g.at(x).powi(power))), None)
        }
    })
}

/// A compressor (`compresses`) or an expander.
pub fn machine(desk: &mut Desk<'_>, compresses: bool) -> Option<Case> {
    let root = desk.root;
    let medium = desk.fluid(Some(root), "fluid")?;
    let inlet = desk.stream("inlet", &medium, Role::Condition);
    let outlet = root.get("outlet");
    let pressure = desk.member(outlet, "pressure", D::Pressure, Role::Condition);
    let temperature = desk.member(outlet, "temperature", D::Temperature, Role::Condition);
    let ambient = desk.member(Some(root), "ambient", D::Temperature, Role::Condition);
    let exchange = match root.get("heat_exchange").and_then(Node::text) {
        Some(word) => word == "ambient",
        None if compresses => {
            desk.lacks(
                "/heat_exchange",
                "whether the compression is adiabatic; the cooled one needs less work",
            );
            true
        }
        None => {
            desk.assume("/heat_exchange", "the expansion is adiabatic");
            false
        }
    };
    let flow = Rc::new(Flow { compresses, medium, inlet: inlet?, pressure: pressure?, temperature, ambient });
    let (claimed, shown) = claimed(desk, &flow)?;
    if exchange && flow.ambient.is_none() {
        desk.assume("/ambient", "the surroundings have the temperature of the inlet");
    }
    if exchange && flow.temperature.is_none() {
        desk.assume(
            "/outlet/temperature",
            "the outlet has the temperature of the surroundings, the most lenient one",
        );
    }
    let x: Vec<f64> = desk.inputs.iter().map(|i| i.value).collect();
    match flow.inlet.at(&x) {
        Ok(one) => {
            let rises = flow.pressure.at(&x) > one.pressure;
            if rises != compresses {
                let text = if compresses { "does not lie above" } else { "does not lie below" };
                let message = format!("the outlet pressure {} {text} that of the inlet", flow.pressure.text);
                desk.faults.push(Diagnostic::new(Code::BadClaim, "/outlet/pressure", message));
                return None;
            }
        }
        Err(fault) => {
            desk.faults.push(fault);
            return None;
        }
    }
    let name = flow.medium.name.clone();
    let (kind, sense) = if compresses { ("compressor", Sense::AtLeast) } else { ("expander", Sense::AtMost) };
    let physics = |f: fn(&Flow, &[f64]) -> Computed<f64>| -> Physics {
        let flow = flow.clone();
        Box::new(move |x| f(&flow, x))
    };
    let limit = |name, value, assumes: &str, law| Limit {
        name,
        of: None,
        sense,
        value,
        assumes: assumes.to_owned(),
        law,
    };
    let isentropic = limit("isentropic", physics(Flow::isentropic), "no heat passes the casing", !exchange);
    let reversible = limit(
        "reversible_with_ambient",
        physics(Flow::exergy_change),
        "heat is exchanged reversibly with the surroundings: the change of flow exergy",
        exchange,
    );
    let mut limits = if exchange { vec![reversible, isentropic] } else { vec![isentropic] };
    if exchange {
        limits.push(limit(
            "isothermal",
            physics(Flow::isothermal),
            "at the constant temperature of the inlet; it binds only where the surroundings have that temperature",
            false,
        ));
    }
    let claimed = Rc::new(claimed);
    // Entropy per mass: with the surroundings (w − Δe)/T0, or s2 − s1 at the enthalpy that the
    // work leaves the fluid with.
    let sigma: Physics = {
        let (flow, claimed) = (flow.clone(), claimed.clone());
        Box::new(move |x| {
            let w = flow.sign() * claimed(x)?;
            if exchange {
                Ok((w - flow.sign() * flow.exergy_change(x)?) / flow.ambient(x)?)
            } else {
                let one = flow.inlet.at(x)?;
                Ok(flow.out(Pair::PressureEnthalpy, x, one.enthalpy + w)?.entropy - one.entropy)
            }
        })
    };
    let mut contradictions: Vec<(&'static str, Physics, D, &'static str)> = Vec::new();
    if let (false, Some(t)) = (exchange, flow.temperature.clone()) {
        let f = flow.clone();
        limits.push(Limit {
            name: "outlet_temperature",
            of: Some(("outlet_temperature", Box::new(move |x| Ok(t.at(x))), D::Temperature)),
            sense: Sense::AtLeast,
            value: Box::new(move |x| {
                Ok(f.out(Pair::PressureEntropy, x, f.inlet.at(x)?.entropy)?.temperature)
            }),
            assumes: "the outlet temperature of an isentropic change".to_owned(),
            law: true,
        });
        let (f, w) = (flow.clone(), claimed.clone());
        let gap: Physics = Box::new(move |x| {
            let rise = f.exchanged_outlet(x)?.enthalpy - f.inlet.at(x)?.enthalpy;
            Ok(f.sign() * w(x)? - rise)
        });
        contradictions.push((
            "energy-imbalance",
            gap,
            D::SpecificEnergy,
            "The stated outlet temperature and the claimed work do not agree for an adiabatic machine",
        ));
    }
    let efficiency: Physics = {
        let (flow, claimed) = (flow.clone(), claimed.clone());
        Box::new(move |x| {
            let (s, w) = (flow.isentropic(x)?, claimed(x)?);
            Ok(if flow.compresses { s / w } else { w / s })
        })
    };
    let subject = format!(
        "{} of {name} from {} to {} is claimed.",
        if compresses { "A compression" } else { "An expansion" },
        flow.inlet.text(),
        flow.pressure.text
    );
    Some(Case {
        kind,
        subject,
        law: LAW,
        figure: ("specific_work", "specific work"),
        claimed: Box::new(move |x| claimed(x)),
        dimension: D::SpecificEnergy,
        shown,
        limits,
        strict: None,
        entropy: Entropy { value: sigma, dimension: D::SpecificEntropy, per: "kg of fluid" },
        relative: true,
        practice: None,
        figures: vec![("isentropic_efficiency", efficiency, D::Fraction)],
        contradictions,
        notes: Vec::new(),
        not_included: desk.auxiliaries(
            "losses of drive, gearbox, cooling and controls, and pressure losses of filters and dryers",
        ),
        causes: if compresses {
            &[
                "a flow at normal conditions taken for the actual one",
                "a gauge pressure taken for an absolute one",
                "shaft power at part load or without losses",
            ]
        } else {
            &[
                "a wet outlet read as dry",
                "a gauge pressure taken for an absolute one",
                "heat or a second stream left out",
            ]
        },
        cautions: vec![words::JUDGES, words::PRESSURE, words::HOT],
    })
}
