//! Fluids that are more than a name: combustion gas, fuels by analysis, solutions.

use super::fluids::Medium;
use super::values::Class;
use super::*;
use crate::fluid::combustion_gas::{CombustionError, CombustionGas, Reading};
use crate::fluid::fuel::{Fuel, FuelError, FuelKind, GivenHeatingValue, UltimateAnalysis};
use crate::fluid::humid_air::HumidAir;
use crate::fluid::ideal_gas::{IdealGas, Species, find_species};
use crate::fluid::solution::{Glycol, GlycolKind, Solution};
use crate::fluid::{Elements, Engine};

type MakeReading = fn(f64) -> Reading;

/// Excess of oxidant at which a gas is set up whose air ratio is left to be solved for.
const FIRST_EXCESS: f64 = 0.2;

impl<'t> Reader<'t> {
    /// A combustion gas: its air ratio is one variable that every flow of it shares. A reading
    /// fixes it, linearised about its value; without one the balances solve for it.
    pub(super) fn combustion_gas(&mut self, node: Node<'t>) -> Option<Medium> {
        let fuel = self.burnt_fuel(node.get("fuel")?)?;
        let oxidant = self.oxidant(node.get("oxidant")?)?;
        let kinds: [(&str, MakeReading); 4] = [
            ("o2_dry", Reading::OxygenDry),
            ("o2_wet", Reading::OxygenWet),
            ("co2_dry", Reading::CarbonDioxideDry),
            ("excess_air", Reading::ExcessAir),
        ];
        let mut readings = Vec::new();
        for (member, make) in kinds {
            let Some(n) = node.get(member) else { continue };
            let var = self.var(node, member, Dimension::Fraction, Class::State, 1.0)?;
            readings.push((member, n, var, make));
        }
        let second =
            match readings[..] {
                [] | [_] => None,
                [("o2_dry", ..), ("co2_dry", n, var, _)] => Some((n, var)),
                [_, (_, n, ..), ..] => {
                    self.fault(n.fault(Code::Conflict, "the air ratio is given twice").hint(
                        "only \"o2_dry\" and \"co2_dry\" may stand together; each then checks the other",
                    ));
                    return None;
                }
            };
        let co = match node.get("co_dry") {
            Some(n) => {
                let q = n.quantity(Dimension::Fraction, &mut self.faults)?;
                self.assume(n.pointer(), "the share of carbon monoxide is taken as exact");
                q.value
            }
            None => 0.0,
        };
        let first = readings.first().copied();
        let reading = match first {
            Some((_, _, var, make)) => make(self.given_value(var)?),
            None => Reading::ExcessAir(FIRST_EXCESS),
        };
        let gas = match CombustionGas::new(&fuel, &oxidant, reading, co) {
            Ok(gas) => Arc::new(gas),
            Err(error) => {
                let about_co = matches!(
                    &error,
                    CombustionError::ImpossibleReading { what, .. } if what.starts_with("CO ")
                );
                let at = if about_co { node.get("co_dry") } else { first.map(|f| f.1) };
                let at = match error {
                    CombustionError::NotAFuel => node.get("fuel"),
                    CombustionError::NotAnOxidant => node.get("oxidant"),
                    _ => at,
                };
                self.fault(at.unwrap_or(node).fault(Code::OutOfBounds, error.to_string()));
                return None;
            }
        };
        let ratio = match first {
            Some((_, _, var, _)) => self.air_ratio(&gas, var)?,
            None => self.unknown(
                "air ratio of the combustion gas".to_owned(),
                Nature::Composition,
                node.pointer(),
            ),
        };
        if let (Some((n, carbon_dioxide)), Some((_, _, oxygen, _))) = (second, first) {
            self.process.flue_gas.push(FlueGas {
                // The fluid takes the next place, once it has been made.
                fluid: self.process.fluids.len(),
                oxygen,
                carbon_dioxide,
                pointer: n.pointer(),
            });
        }
        Some((Substance::CombustionGas(gas.clone()), gas, Some(ratio)))
    }

    /// λ as an affine function of the sources of its reading.
    fn air_ratio(&mut self, gas: &CombustionGas, reading: VarId) -> Option<VarId> {
        let Var::Given(affine) = &self.process.vars[reading] else { return None };
        let slope = gas.air_ratio_sensitivity();
        let constant = gas.air_ratio() - slope * (affine.value(&self.inputs) - affine.constant);
        let terms = affine.terms.iter().map(|&(s, w)| (s, w * slope)).collect();
        self.process.vars.push(Var::Given(Affine { constant, terms }));
        Some(self.process.vars.len() - 1)
    }

    fn given_value(&self, var: VarId) -> Option<f64> {
        match &self.process.vars[var] {
            Var::Given(affine) => Some(affine.value(&self.inputs)),
            Var::Unknown { .. } => None,
        }
    }

    /// A material flow that is named at a place, and its fluid.
    fn named_flow(&mut self, node: Node<'t>) -> Option<(FlowId, FluidId)> {
        let name = node.text()?;
        let Some(&f) = self.flow_ids.get(name) else {
            self.faults.push(references::dangling(node, "flow", name, self.flow_ids.keys().copied()));
            return None;
        };
        if self.flow_nodes[f].1.get("kind").and_then(Node::text) != Some("material") {
            self.fault(node.fault(Code::Conflict, format!("\"{name}\" carries no material")));
            return None;
        }
        Some((f, self.flow_fluid(f)?))
    }

    /// Moles of each element per kg of the fuel that a flow carries.
    fn burnt_fuel(&mut self, node: Node<'t>) -> Option<Elements> {
        let (_, fluid) = self.named_flow(node)?;
        let engine = &self.process.fluids[fluid].engine;
        let known = if engine.elements_vary() { None } else { engine.elements(0.0) };
        if known.is_none() {
            let name = self.process.fluids[fluid].name.clone();
            self.fault(
                node.fault(Code::Conflict, format!("the elements of \"{name}\" are not known"))
                    .hint("burn an ideal_gas of species, or a fuel with its ultimate analysis"),
            );
        }
        known.map(|k| k.0)
    }

    /// The oxidant that a flow carries, as a mixture of fixed composition.
    fn oxidant(&mut self, node: Node<'t>) -> Option<IdealGas> {
        let (f, fluid) = self.named_flow(node)?;
        match &self.process.fluids[fluid].substance {
            Substance::Gas(gas) => Some(gas.as_ref().clone()),
            Substance::CombustionGas(gas) => {
                let gas = gas.clone();
                match gas.mixture(gas.air_ratio()) {
                    Ok(mixture) => Some(mixture),
                    Err(error) => {
                        self.fault(node.fault(Code::OutOfBounds, error.to_string()));
                        None
                    }
                }
            }
            Substance::HumidAir => {
                let ratio = self.humidity_ratio(f);
                let mixture = ratio.and_then(moist_air);
                if mixture.is_none() {
                    self.fault(
                        node.fault(Code::MissingField, "the humidity of the oxidant is not known").hint(
                            "give it with pressure and temperature, for instance \"relative_humidity\"",
                        ),
                    );
                }
                mixture
            }
            _ => {
                self.fault(node.fault(Code::Conflict, "an oxidant is air, humid air or an ideal gas"));
                None
            }
        }
    }

    /// The humidity ratio of a flow of humid air, from what is given.
    fn humidity_ratio(&mut self, f: FlowId) -> Option<f64> {
        let state = self.flow_state(f)?;
        let spec = &self.process.states[state];
        let (form, figure) = spec.c?;
        if form == crate::fluid::CompositionForm::Direct {
            return self.given_value(figure);
        }
        if spec.form != StateForm::Pair(Pair::PressureTemperature) {
            return None;
        }
        let (p, t) = (self.given_value(spec.a)?, self.given_value(spec.b)?);
        let engine = &self.process.fluids[spec.fluid].engine;
        engine.composition(form, p, t, self.given_value(figure)?).ok().map(|c| c.0)
    }

    /// A fuel by ultimate analysis.
    pub(super) fn fuel(&mut self, node: Node<'t>) -> Option<Medium> {
        let ultimate = node.get("ultimate")?;
        let mut part = |member: &str| match ultimate.get(member) {
            Some(n) => n.quantity(Dimension::Fraction, &mut self.faults).map(|q| q.value),
            None => Some(0.0),
        };
        let analysis = UltimateAnalysis {
            carbon: part("carbon")?,
            hydrogen: part("hydrogen")?,
            oxygen: part("oxygen")?,
            nitrogen: part("nitrogen")?,
            sulfur: part("sulphur")?,
            ash: part("ash")?,
            moisture: part("moisture")?,
        };
        let mut figure = |member: &str, dimension| match node.get(member) {
            Some(n) => n.quantity(dimension, &mut self.faults).map(|q| Some(q.value)),
            None => Some(None),
        };
        let lower = figure("lower_heating_value", Dimension::SpecificEnergy)?;
        let higher = figure("higher_heating_value", Dimension::SpecificEnergy)?;
        let specific_heat = figure("specific_heat", Dimension::SpecificEntropy)?;
        let heating_value = match (lower, higher) {
            (Some(x), None) => GivenHeatingValue::Lower(x),
            (None, Some(x)) => GivenHeatingValue::Higher(x),
            _ => {
                self.fault(node.fault(
                    Code::MissingField,
                    "a fuel needs either \"lower_heating_value\" or \"higher_heating_value\"",
                ));
                return None;
            }
        };
        let kind = match node.get("state").and_then(Node::text) {
            Some("liquid") => FuelKind::Liquid,
            _ => FuelKind::Solid,
        };
        match Fuel::new(kind, analysis, heating_value, specific_heat) {
            Ok(fuel) => {
                if specific_heat.is_none() {
                    self.assume(
                        node.pointer(),
                        "specific heat of the fuel not given: that of its dry matter, moisture and ash",
                    );
                }
                let fuel = Arc::new(fuel);
                Some((Substance::Fuel(fuel.clone()), fuel, None))
            }
            Err(error) => {
                let at = match error {
                    FuelError::HeatingValue(_) => {
                        node.get("lower_heating_value").or(node.get("higher_heating_value"))
                    }
                    FuelError::Property(_) => None,
                    _ => Some(ultimate),
                };
                self.fault(at.unwrap_or(node).fault(Code::OutOfBounds, error.to_string()));
                None
            }
        }
    }

    /// A listed aqueous solution; a mass fraction fixes its composition once for all its flows.
    pub(super) fn solution(&mut self, node: Node<'t>) -> Option<Medium> {
        let named = node.get("name")?;
        let name = named.text().unwrap_or_default();
        let glycol = match name {
            "ethylene glycol" => GlycolKind::Ethylene,
            "propylene glycol" => GlycolKind::Propylene,
            "seawater" | "sodium chloride" => {
                let engine: Arc<dyn Engine> = Arc::new(if name == "seawater" {
                    Solution::seawater()
                } else {
                    Solution::sodium_chloride()
                });
                let fixed = self.var(node, "mass_fraction", Dimension::Fraction, Class::State, 1.0);
                return Some((Substance::Inert, engine, fixed));
            }
            _ => {
                let known = ["seawater", "sodium chloride", "ethylene glycol", "propylene glycol"];
                let fault =
                    named.fault(Code::UnknownFluid, format!("there is no listed solution \"{name}\""));
                self.fault(fault.suggest(&nearest(name, known), &format!("there are {}", known.join(", "))));
                return None;
            }
        };
        let Some(n) = node.get("mass_fraction") else {
            self.fault(node.fault(Code::MissingField, "a glycol solution needs its \"mass_fraction\""));
            return None;
        };
        let fraction = n.quantity(Dimension::Fraction, &mut self.faults)?.value;
        let engine = Glycol::new(glycol, fraction);
        Some((Substance::Inert, Arc::new(self.engine(n, engine)?), None))
    }
}

/// Humid air at a humidity ratio as a mixture of ideal gases.
fn moist_air(ratio: f64) -> Option<IdealGas> {
    let vapour = find_species("H2O")?.molar_mass();
    let dry = HumidAir::new().molar_mass(0.0)?;
    let water = ratio / vapour / (ratio / vapour + 1.0 / dry);
    let air = IdealGas::dry_air().ok()?;
    let parts: Vec<(&Species, f64)> = air.components().iter().map(|(s, x)| (s, *x)).collect();
    IdealGas::moist(&parts, water).ok()
}
