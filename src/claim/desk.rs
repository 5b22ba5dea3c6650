//! Reading a claim: its figures become inputs with uncertainties, its gaps assumptions.

use super::report::ClaimMissing;
use crate::diagnostic::{Code, Diagnostic};
use crate::document::{Faults, Node};
use crate::fluid::perfect_gas::PerfectGas;
use crate::fluid::{self, Engine, Pair, PropertyError, State};
use crate::quantity::{Dimension, Reference, Scale};
use crate::report::{AssumptionReport, Formulation, Named};
use std::cell::RefCell;
use std::collections::HashMap;
use std::rc::Rc;
use std::sync::Arc;

/// Barometric pressure where it is not given, and its standard uncertainty: the spread of weather
/// and of plant elevation, common practice.
const ATMOSPHERE: f64 = 101_325.0;
const BAROMETER_U: f64 = 3e3;

/// A figure that enters the physics.
#[derive(Clone, Copy, Debug)]
pub struct Input {
    /// SI value.
    pub value: f64,
    /// Standard uncertainty.
    pub u: f64,
    /// Half the interval that the printed digits of a claimed figure stand for; 0 for a condition.
    pub half: f64,
}

/// Whether a figure is what is claimed or the condition that it is claimed for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// Exact unless an uncertainty is stated: the condition that the claim itself names.
    Condition,
    /// Its printed digits stand for an interval.
    Claimed,
}

/// A figure of the claim.
#[derive(Clone, Debug)]
pub struct Given {
    index: usize,
    barometer: Option<usize>,
    /// What its unit means.
    pub scale: Scale,
    /// As written.
    pub text: String,
    /// Where it stands.
    pub pointer: String,
}

impl Given {
    /// Its value among inputs.
    pub fn at(&self, x: &[f64]) -> f64 {
        let of = |i: usize| x.get(i).copied().unwrap_or(f64::NAN);
        of(self.index) + self.barometer.map_or(0.0, of)
    }
}

/// What is wrong with the state of the claim, found while computing.
pub type Computed<T> = Result<T, Diagnostic>;

/// A fluid of the claim.
#[derive(Clone, Debug)]
pub struct Medium {
    /// Its engine.
    pub engine: Arc<dyn Engine>,
    /// Name.
    pub name: String,
    /// States found so far: a claim asks for the same ones again and again.
    known: Known,
}

type Known = Rc<RefCell<HashMap<(Pair, u64, u64), State>>>;

impl Medium {
    /// A state, with faults at `pointer`.
    pub fn state(&self, pair: Pair, a: f64, b: f64, pointer: &str) -> Computed<State> {
        let key = (pair, a.to_bits(), b.to_bits());
        if let Some(state) = self.known.borrow().get(&key) {
            return Ok(*state);
        }
        let state = self.engine.state(pair, a, b, 0.0).map_err(|e| trouble(pointer, &self.name, &e))?;
        self.known.borrow_mut().insert(key, state);
        Ok(state)
    }
}

/// A property error at its place.
pub fn trouble(pointer: &str, fluid: &str, error: &PropertyError) -> Diagnostic {
    let code = match error {
        PropertyError::NotFinite => Code::BadNumber,
        PropertyError::OutOfRange { .. } | PropertyError::NoSaturation => Code::OutOfRange,
        PropertyError::UnsupportedPair(_) | PropertyError::Unstated(_) => Code::UnsupportedPair,
        PropertyError::NoConvergence => Code::NoConvergence,
    };
    Diagnostic::new(code, pointer, format!("{fluid}: {error}"))
}

/// The state of a stream as the claim gives it.
#[derive(Clone, Debug)]
pub struct StreamState {
    medium: Medium,
    temperature: Option<Given>,
    pressure: Option<Given>,
    quality: Option<Given>,
    /// Where it stands.
    pub pointer: String,
}

impl StreamState {
    /// The state at inputs.
    pub fn at(&self, x: &[f64]) -> Computed<State> {
        let of = |g: &Option<Given>| g.as_ref().map_or(f64::NAN, |g| g.at(x));
        let (t, p, q) = (of(&self.temperature), of(&self.pressure), of(&self.quality));
        match (&self.temperature, &self.pressure, &self.quality) {
            (_, Some(_), Some(_)) => self.medium.state(Pair::PressureQuality, p, q, &self.pointer),
            (Some(_), None, Some(_)) => self.medium.state(Pair::TemperatureQuality, t, q, &self.pointer),
            _ => self.medium.state(Pair::PressureTemperature, p, t, &self.pointer),
        }
    }

    /// In words.
    pub fn text(&self) -> String {
        let mut parts: Vec<String> = [&self.temperature, &self.pressure]
            .iter()
            .filter_map(|g| g.as_ref().map(|g| g.text.clone()))
            .collect();
        if let Some(q) = &self.quality {
            parts.push(format!("quality {}", q.text));
        }
        parts.join(" and ")
    }
}

/// Reads one claim.
#[derive(Debug)]
pub struct Desk<'t> {
    /// The claim.
    pub root: Node<'t>,
    /// Faults so far.
    pub faults: Faults,
    /// Figures so far.
    pub inputs: Vec<Input>,
    /// Assumptions so far.
    pub assumptions: Vec<AssumptionReport>,
    /// What would decide better.
    pub missing: Vec<ClaimMissing>,
    /// Formulations used.
    pub formulations: Named<Formulation>,
    /// Conditions for which no uncertainty is stated, as written.
    pub exact: Vec<String>,
    barometer: Option<usize>,
}

impl<'t> Desk<'t> {
    /// A desk with nothing on it.
    pub fn new(root: Node<'t>) -> Desk<'t> {
        Desk {
            root,
            faults: Faults::new(),
            inputs: Vec::new(),
            assumptions: Vec::new(),
            missing: Vec::new(),
            formulations: Named::default(),
            exact: Vec::new(),
            barometer: None,
        }
    }

    /// Notes an assumption.
    pub fn assume(&mut self, pointer: impl Into<String>, statement: impl Into<String>) {
        self.assumptions.push(AssumptionReport { r#where: pointer.into(), statement: statement.into() });
    }

    /// Notes a gap.
    pub fn lacks(&mut self, pointer: impl Into<String>, statement: impl Into<String>) {
        self.missing.push(ClaimMissing { r#where: pointer.into(), statement: statement.into() });
    }

    /// The claim's figures.
    pub fn claim(&self) -> Option<Node<'t>> {
        self.root.get("claim")
    }

    /// The quantity at a node.
    pub fn quantity(&mut self, node: Node<'t>, dimension: Dimension, role: Role) -> Option<Given> {
        let q = node.quantity(dimension, &mut self.faults)?;
        let half = if role == Role::Claimed { q.half_digit } else { 0.0 };
        let stated = q.u().unwrap_or(0.0);
        if role == Role::Condition && q.u().is_none() && !self.exact.contains(&q.text) {
            self.exact.push(q.text.clone());
        }
        self.inputs.push(Input { value: q.value, u: stated.hypot(half / 3f64.sqrt()), half });
        let index = self.inputs.len() - 1;
        let gauge = dimension == Dimension::Pressure && q.reference() == Reference::Gauge;
        let barometer = gauge.then(|| self.barometer());
        let given = Given { index, barometer, scale: q.scale, pointer: q.pointer, text: q.text };
        if dimension == Dimension::Pressure {
            let x: Vec<f64> = self.inputs.iter().map(|i| i.value).collect();
            if given.at(&x) <= 0.0 {
                self.faults
                    .push(node.fault(Code::BelowAbsoluteZero, "the pressure is below absolute vacuum"));
                return None;
            }
        }
        Some(given)
    }

    /// The quantity of a member, if it is there.
    pub fn member(
        &mut self,
        of: Option<Node<'t>>,
        name: &str,
        dimension: Dimension,
        role: Role,
    ) -> Option<Given> {
        let node = of?.get(name)?;
        self.quantity(node, dimension, role)
    }

    /// A quantity that must be above zero and, where `most` is given, below or at it.
    pub fn positive(
        &mut self,
        of: Option<Node<'t>>,
        name: &str,
        dimension: Dimension,
        role: Role,
        most: Option<f64>,
    ) -> Option<Given> {
        let given = self.member(of, name, dimension, role)?;
        let value = self.inputs.get(given.index).map_or(f64::NAN, |i| i.value);
        let bad = if value.is_nan() || value <= 0.0 {
            Some("must be above zero".to_owned())
        } else {
            most.filter(|m| value > *m).map(|m| format!("can be at most {m}"))
        };
        if let Some(why) = bad {
            let message = format!("\"{}\": {name} {why}", given.text);
            self.faults.push(Diagnostic::new(Code::OutOfBounds, given.pointer, message));
            return None;
        }
        Some(given)
    }

    fn barometer(&mut self) -> usize {
        if let Some(i) = self.barometer {
            return i;
        }
        let input = match self.root.get("barometric_pressure") {
            Some(node) => {
                let q = node.quantity(Dimension::Pressure, &mut self.faults);
                if q.as_ref().is_some_and(|q| q.reference() == Reference::Gauge) {
                    self.faults.push(
                        node.fault(Code::Conflict, "the barometric pressure cannot be a gauge pressure")
                            .hint("write it absolute, for instance \"1.013 bar\""),
                    );
                }
                q.map(|q| Input { value: q.value, u: q.u().unwrap_or(0.0), half: 0.0 })
            }
            None => {
                self.assume(
                    "/barometric_pressure",
                    "barometric pressure behind gauge readings: 1.01325 bar, standard uncertainty 3 kPa",
                );
                None
            }
        };
        self.inputs.push(input.unwrap_or(Input { value: ATMOSPHERE, u: BAROMETER_U, half: 0.0 }));
        self.barometer = Some(self.inputs.len() - 1);
        self.inputs.len() - 1
    }

    /// The fluid at a member.
    pub fn fluid(&mut self, of: Option<Node<'t>>, name: &str) -> Option<Medium> {
        let node = of?.get(name)?;
        let medium = match node.text() {
            Some(text) => match fluid::by_name(text) {
                Ok((_, engine)) => Medium { engine, name: text.to_owned(), known: Known::default() },
                Err(near) => {
                    let shown: String = text.chars().take(40).collect();
                    let fault = node.fault(Code::UnknownFluid, format!("\"{shown}\" is not a known fluid"));
                    self.faults.push(fault.suggest(&near, "GET /v1/fluids lists the fluids"));
                    return None;
                }
            },
            None => {
                let mut figure = |name: &str, d: Dimension| {
                    node.get(name).and_then(|n| n.quantity(d, &mut self.faults)).map(|q| q.value)
                };
                let molar_mass = figure("molar_mass", Dimension::MolarMass);
                let heat = figure("specific_heat", Dimension::SpecificEntropy);
                let gas = PerfectGas::with_constant(molar_mass?, heat?);
                match gas {
                    Ok(gas) => Medium {
                        engine: Arc::new(gas),
                        name: "perfect gas".to_owned(),
                        known: Known::default(),
                    },
                    Err(e) => {
                        self.faults.push(trouble(&node.pointer(), "perfect gas", &e));
                        return None;
                    }
                }
            }
        };
        let p = medium.engine.provenance();
        if self.formulations.get(&medium.name).is_none() {
            self.formulations.push(
                medium.name.clone(),
                Formulation { formulation: p.formulation, source: p.source, range: p.range },
            );
        }
        Some(medium)
    }

    /// The state of a stream; what is missing of it is a fault.
    pub fn stream(&mut self, name: &str, medium: &Medium, role: Role) -> Option<StreamState> {
        let node = self.root.get(name)?;
        let temperature = self.member(Some(node), "temperature", Dimension::Temperature, role);
        let pressure = self.member(Some(node), "pressure", Dimension::Pressure, role);
        let quality = self.member(Some(node), "quality", Dimension::Fraction, role);
        let stream =
            StreamState { medium: medium.clone(), temperature, pressure, quality, pointer: node.pointer() };
        let given = ["temperature", "pressure", "quality"].iter().filter(|m| node.get(m).is_some()).count();
        if given != 2 {
            let what = if given < 2 { Code::MissingField } else { Code::Conflict };
            self.faults.push(
                node.fault(what, format!("{given} properties are given; two fix the state of {name}"))
                    .hint("pressure and temperature; or quality (1 for saturated vapour) with one of them"),
            );
            return None;
        }
        Some(stream)
    }

    /// A fault for a figure without which nothing can be judged.
    pub fn needs(&mut self, pointer: &str, message: &str, hint: &str) {
        self.faults.push(Diagnostic::new(Code::MissingField, pointer, message).hint(hint.to_owned()));
    }

    /// Refuses more than one, or none, of the figures that say the same thing; says which is there.
    pub fn one_of(&mut self, groups: &[&'static [&'static str]]) -> Option<usize> {
        let claim = self.claim();
        let has = |name: &&str| claim.is_some_and(|c| c.get(name).is_some());
        let touched: Vec<usize> =
            groups.iter().enumerate().filter(|(_, g)| g.iter().any(has)).map(|(i, _)| i).collect();
        let forms = || {
            let forms: Vec<String> = groups.iter().map(|g| format!("\"{}\"", g.join("\" with \""))).collect();
            format!("one of: {}", forms.join("; "))
        };
        match touched.as_slice() {
            [] => {
                self.needs("/claim", "no figure that can be judged is claimed", &forms());
                None
            }
            [one] => {
                let group = groups.get(*one)?;
                if let Some(absent) = group.iter().find(|n| !has(n)) {
                    let message = format!("the member \"{absent}\" is missing");
                    self.needs("/claim", &message, &forms());
                    return None;
                }
                Some(*one)
            }
            _ => {
                let fault = Diagnostic::new(Code::Conflict, "/claim", "more than one figure is claimed");
                self.faults.push(fault.hint(forms()));
                None
            }
        }
    }
}
