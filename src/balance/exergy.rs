//! Exergy of flows and contents, and the exergy balance over a region.
//!
//! Specific flow exergy is e = (h − h0) − T0 (s − s0) + w²/2 + g z + e_ch, with (h0, s0) of the
//! stable state at (T0, p0) and e_ch of that state. On the absolute datum the physical and
//! chemical parts sum to h − T0 s − Σ n λ, with λ the potentials of the elements in equilibrium
//! with the surroundings, whichever way they are split (Kotas 1985; Bejan, Tsatsaronis & Moran
//! 1996, ch. 3).

use super::Evaluation;
use super::region::{self, Bracket, Region};
use crate::fluid::chemistry::{Environment, ReferenceState};
use crate::fluid::steam::Steam;
use crate::fluid::{CompositionForm, Engine, Pair, PropertyError, Substance};
use crate::model::{Blocked, Dual, Scale, View};
use crate::process::{Boundary, Carried, Content, FlowId, Process, StateId};
use std::cell::OnceCell;

/// Specific exergy by its parts, J/kg, each with its gradient.
#[derive(Clone, Debug, Default)]
pub struct Parts {
    /// Part due to T ≠ T0 at the state's own pressure.
    pub thermal: Option<Dual>,
    /// Part due to p ≠ p0 at T0.
    pub mechanical: Option<Dual>,
    /// Thermal and mechanical together.
    pub physical: Dual,
    /// Chemical; `None` where the substance has no chemistry here.
    pub chemical: Option<f64>,
    /// w²/2
    pub kinetic: Option<Dual>,
    /// g z
    pub potential: Option<Dual>,
    /// The sum.
    pub total: Dual,
}

/// The dead state of a fluid at fixed composition, on the engine's datum.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Dead {
    enthalpy: f64,
    entropy: f64,
    /// Chemical exergy, J/kg.
    chemical: Option<f64>,
}

/// The surroundings as seen by every fluid of a process, at one set of values: what they say of a
/// flow is kept.
#[derive(Debug)]
pub struct Surroundings {
    /// Chemical potentials of the elements; the error if the environment is out of their range.
    pub reference: Result<ReferenceState, PropertyError>,
    t0: f64,
    p0: f64,
    dead: Vec<Option<Dead>>,
    flows: Vec<OnceCell<Result<Parts, Blocked>>>,
}

/// Saturation pressure of water at T0, continued below the triple point over supercooled liquid by
/// the Clausius-Clapeyron relation with 2.501 MJ/kg and 461.5 J/(kg K) (common practice).
fn saturation_pressure(t0: f64) -> f64 {
    match Steam.saturation_pressure(t0) {
        Ok((p, _)) => p,
        Err(_) => 611.213 * (2.501e6 / 461.5 * (1.0 / 273.15 - 1.0 / t0)).exp(),
    }
}

/// Liquid water at (T0, p0), continued below 0 degC as supercooled liquid with 4.22 kJ/(kg K).
fn ambient_water(t0: f64, p0: f64) -> Option<(f64, f64)> {
    if let Ok(s) = Steam.state(Pair::PressureTemperature, p0, t0, 0.0) {
        return Some((s.enthalpy, s.entropy));
    }
    let s = Steam.state(Pair::PressureTemperature, p0, 273.15, 0.0).ok()?;
    Some((s.enthalpy + 4220.0 * (t0 - 273.15), s.entropy + 4220.0 * (t0 / 273.15).ln()))
}

impl Surroundings {
    /// The surroundings of a process.
    pub fn new(process: &Process) -> Surroundings {
        let env = &process.environment;
        let (t0, p0) = (env.temperature, env.pressure);
        let reference = ReferenceState::new(
            Environment {
                temperature: t0,
                pressure: p0,
                relative_humidity: env.relative_humidity,
                set: env.chemistry,
            },
            saturation_pressure(t0),
        );
        let mut out = Surroundings { reference, t0, p0, dead: Vec::new(), flows: Vec::new() };
        out.flows.resize_with(process.flows.len(), OnceCell::new);
        out.dead = process.fluids.iter().map(|f| out.dead_state(f)).collect();
        out
    }

    fn dead_state(&self, fluid: &crate::process::Fluid) -> Option<Dead> {
        let engine = &fluid.engine;
        if engine.elements_vary() {
            return None;
        }
        match &fluid.substance {
            Substance::Stated => None,
            Substance::Gas(gas) => {
                if let Ok(reference) = &self.reference
                    && let Ok(d) = reference.dead_state(gas)
                {
                    return Some(Dead {
                        enthalpy: d.enthalpy,
                        entropy: d.entropy,
                        chemical: Some(d.chemical_exergy),
                    });
                }
                self.plain_dead_state(engine.as_ref())
            }
            Substance::Water => {
                let (enthalpy, entropy) = ambient_water(self.t0, self.p0)?;
                let chemical = self.chemical(engine.as_ref(), enthalpy, entropy);
                Some(Dead { enthalpy, entropy, chemical })
            }
            _ => self.plain_dead_state(engine.as_ref()),
        }
    }

    fn plain_dead_state(&self, engine: &dyn Engine) -> Option<Dead> {
        let s = engine.state(Pair::PressureTemperature, self.p0, self.t0, 0.0).ok()?;
        let chemical = self.chemical(engine, s.enthalpy, s.entropy);
        Some(Dead { enthalpy: s.enthalpy, entropy: s.entropy, chemical })
    }

    /// g0 − Σ n λ of a dead state on the engine's datum.
    fn chemical(&self, engine: &dyn Engine, h: f64, s: f64) -> Option<f64> {
        let datum = engine.datum()?;
        let (elements, _) = engine.elements(0.0)?;
        let reference = self.reference.as_ref().ok()?;
        reference.flow_exergy(h + datum.enthalpy, s + datum.entropy, &elements)
    }

    /// h0 and s0 at the composition of a state, on the engine's datum, and the chemical exergy
    /// there.
    fn dead_of(&self, view: View<'_>, state: StateId) -> Result<Dead, Blocked> {
        let missing = Blocked::Missing("the dead state of the fluid");
        let fluid_id = view.model.process.states[state].fluid;
        if let Some(dead) = self.dead.get(fluid_id).copied().flatten() {
            return Ok(dead);
        }
        let fluid = &view.model.process.fluids[fluid_id];
        if !fluid.engine.elements_vary() {
            return Err(missing);
        }
        let c = view.state(state)?.composition;
        let engine = &fluid.engine;
        let (datum, _) = engine.datum_at(c).ok_or(missing.clone())?;
        let (h, s) = match engine.state(Pair::PressureTemperature, self.p0, self.t0, c) {
            Ok(at) => (at.enthalpy, at.entropy),
            Err(_) => self.condensed(engine.as_ref(), c).ok_or(missing.clone())?,
        };
        let (elements, _) = engine.elements(c).ok_or(missing.clone())?;
        let reference = self.reference.as_ref().map_err(|_| missing)?;
        let chemical = reference.flow_exergy(h + datum.enthalpy, s + datum.entropy, &elements);
        Ok(Dead { enthalpy: h, entropy: s, chemical })
    }

    /// Air with more water than it can hold at (T0, p0): saturated air and liquid water, on the
    /// engine's datum at composition `c`.
    fn condensed(&self, engine: &dyn Engine, c: f64) -> Option<(f64, f64)> {
        let (held, _) = engine.composition(CompositionForm::RelativeHumidity, self.p0, self.t0, 1.0).ok()?;
        let air = engine.state(Pair::PressureTemperature, self.p0, self.t0, held).ok()?;
        let (h_water, s_water) = ambient_water(self.t0, self.p0)?;
        let water_datum = Steam.datum()?;
        let (held_datum, _) = engine.datum_at(held)?;
        let (own_datum, _) = engine.datum_at(c)?;
        let gas = (1.0 + held) / (1.0 + c);
        let liquid = (c - held) / (1.0 + c);
        Some((
            gas * (air.enthalpy + held_datum.enthalpy) + liquid * (h_water + water_datum.enthalpy)
                - own_datum.enthalpy,
            gas * (air.entropy + held_datum.entropy) + liquid * (s_water + water_datum.entropy)
                - own_datum.entropy,
        ))
    }

    /// Specific exergy of a state by its parts.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn parts(&self, view: View<'_>, state: StateId) -> Result<Parts, Blocked> {
        let dead = self.dead_of(view, state)?;
        let h = view.property(state, crate::fluid::Property::Enthalpy)?;
        let s = view.property(state, crate::fluid::Property::Entropy)?;
        let mut physical = h;
        physical.value -= dead.enthalpy;
        physical.add_scaled(-self.t0, &s);
        physical.value += self.t0 * dead.entropy;
        let fluid = &view.model.process.fluids[view.model.process.states[state].fluid];
        // e_M from the state at (T0, p): its derivative with respect to p is v there.
        let mut mechanical = None;
        if let Ok(p) = view.property(state, crate::fluid::Property::Pressure)
            && let Ok(value) = view.state(state)
            && let Ok(cold) =
                fluid.engine.state(Pair::PressureTemperature, p.value, self.t0, value.composition)
        {
            let e = cold.enthalpy - dead.enthalpy - self.t0 * (cold.entropy - dead.entropy);
            mechanical = Some(p.map(e, cold.volume));
        }
        let thermal = mechanical.as_ref().map(|m| physical.clone().minus(m));
        let mut total = physical.clone();
        total.value += dead.chemical.unwrap_or(0.0);
        Ok(Parts { thermal, mechanical, physical, chemical: dead.chemical, total, ..Parts::default() })
    }

    /// Specific exergy of a material flow by its parts, motion and height included.
    ///
    /// # Errors
    /// `Blocked`; `Missing` for a flow that carries no material.
    pub fn flow_parts(&self, view: View<'_>, f: FlowId) -> Result<&Parts, Blocked> {
        let kept = self.flows[f].get_or_init(|| self.compute_flow_parts(view, f));
        kept.as_ref().map_err(Clone::clone)
    }

    fn compute_flow_parts(&self, view: View<'_>, f: FlowId) -> Result<Parts, Blocked> {
        let m = view.model.process.flows[f].material().ok_or(Blocked::Missing("material"))?;
        if let Some(e) = m.stated_exergy {
            return Ok(Parts { physical: Dual::constant(e), total: Dual::constant(e), ..Parts::default() });
        }
        let mut parts = self.parts(view, m.state)?;
        if let Some(w) = m.velocity {
            let w = view.var(w)?;
            let e = w.map(0.5 * w.value * w.value, w.value);
            parts.total.add_scaled(1.0, &e);
            parts.kinetic = Some(e);
        }
        if let Some(z) = m.elevation {
            let e = view.var(z)?.scaled(region::GRAVITY);
            parts.total.add_scaled(1.0, &e);
            parts.potential = Some(e);
        }
        Ok(parts)
    }

    /// Exergy that a flow carries, W or J. Heat is seen from the components that it touches, with
    /// the lenient end of an open bracket.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn flow(&self, view: View<'_>, f: FlowId, region: &Region, sign: f64) -> Result<Dual, Blocked> {
        match &view.model.process.flows[f].carried {
            Carried::Material(_) => Ok(view.mass(f)?.times(&self.flow_parts(view, f)?.total)),
            Carried::Work(w, _) => view.var(*w),
            Carried::Heat(q, boundary) => {
                let s = region::heat_entropy(view, *q, *boundary, sign, Bracket::Lenient, &region.members)?;
                let mut e = view.var(*q)?;
                e.add_scaled(-self.t0, &s);
                Ok(e)
            }
            Carried::Radiation(q, t) => {
                let q = view.var(*q)?;
                let t = view.var(*t)?;
                let r = self.t0 / t.value;
                let factor = 1.0 - 4.0 / 3.0 * r + r.powi(4) / 3.0;
                let slope = (4.0 / 3.0 * r - 4.0 / 3.0 * r.powi(4)) / t.value;
                Ok(q.times(&t.map(factor, slope)))
            }
        }
    }

    /// Exergy of a content, J: (u − h0) + p0 v − T0 (s − s0) + e_ch.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn content(&self, view: View<'_>, c: &Content) -> Result<Dual, Blocked> {
        let mass = view.mass_of(c.state, c.amount, c.form)?;
        let p = view.property(c.state, crate::fluid::Property::Pressure)?;
        let v = view.property(c.state, crate::fluid::Property::Volume)?;
        let mut x = self.parts(view, c.state)?.total;
        x.add_scaled(-1.0, &p.times(&v));
        x.add_scaled(self.p0, &v);
        Ok(mass.times(&x))
    }

    /// What the exergy of a unit of mass holds beyond h − T0 s on the datum of the balances: the
    /// part that an imbalance of mass or elements carries.
    fn ground(&self, view: View<'_>, state: StateId) -> Result<f64, Blocked> {
        let missing = Blocked::Missing("the dead state of the fluid");
        let process = &view.model.process;
        let fluid_id = process.states[state].fluid;
        let scale = &view.model.scales[fluid_id];
        if scale.scale == Scale::Absolute {
            let reference = self.reference.as_ref().map_err(|_| missing.clone())?;
            if let Substance::Gas(gas) = &process.fluids[fluid_id].substance {
                return reference.gas_ground(gas).map(|g| -g).map_err(|_| missing);
            }
            let c = if scale.variable { view.state(state)?.composition } else { 0.0 };
            let engine = &process.fluids[fluid_id].engine;
            let (elements, _) = engine.elements(c).ok_or(missing.clone())?;
            return reference.ground(&elements).map(|g| -g).ok_or(missing);
        }
        let dead = self.dead_of(view, state)?;
        let offset = view.offset(state)?;
        Ok(dead.chemical.unwrap_or(0.0)
            - (dead.enthalpy + offset.0.value)
            - self.t0 * -(dead.entropy + offset.1.value))
    }
}

/// The exergy balance over a region.
#[derive(Clone, Debug, Default)]
pub struct ExergyBalance {
    /// What enters, W or J.
    pub inflow: Dual,
    /// What leaves.
    pub outflow: Dual,
    /// T0 σ.
    pub destruction: Dual,
    /// What is left of E_in − E_out − T0 σ after the residuals of energy, mass and elements: zero
    /// but for rounding.
    pub mismatch: f64,
    /// Sum of magnitudes, the scale of rounding.
    pub throughput: f64,
}

/// The exergy balance over a region whose energy and entropy are known.
///
/// # Errors
/// What blocks it.
pub fn balance(
    evaluation: &Evaluation<'_>,
    surroundings: &Surroundings,
    region: &Region,
    balances: &super::RegionBalances,
) -> Result<ExergyBalance, Blocked> {
    let view = evaluation.view;
    let process = &view.model.process;
    let (sigma, _) = balances.generation()?;
    let mut out = ExergyBalance { destruction: sigma.scaled(surroundings.t0), ..ExergyBalance::default() };
    let mut unbalanced = 0.0;
    let add = |out: &mut ExergyBalance, sign: f64, e: &Dual| {
        out.throughput += e.value.abs();
        if sign > 0.0 {
            out.inflow.add_scaled(1.0, e);
        } else {
            out.outflow.add_scaled(1.0, e);
        }
    };
    for (f, _, sign) in region.crossings() {
        let e = surroundings.flow(view, f, region, sign)?;
        add(&mut out, sign, &e);
        match &process.flows[f].carried {
            Carried::Material(m) => {
                let ground = match m.stated_exergy {
                    Some(e) => {
                        let h = view.enthalpy(m.state)?.value;
                        let s = view.entropy(m.state)?.value;
                        e - h + surroundings.t0 * s
                    }
                    None => surroundings.ground(view, m.state)?,
                };
                let carried = view.mass(f)?.value * ground;
                out.throughput += carried.abs();
                unbalanced += sign * carried;
            }
            Carried::Radiation(q, t) => {
                let r = surroundings.t0 / view.var(*t)?.value;
                unbalanced += sign * view.var(*q)?.value * r.powi(4) / 3.0;
            }
            Carried::Heat(..) | Carried::Work(..) => {}
        }
    }
    for (c, sign) in region.contents(process) {
        let x = surroundings.content(view, c)?;
        add(&mut out, sign, &x);
        let mass = view.mass_of(c.state, c.amount, c.form)?.value;
        let v = view.property(c.state, crate::fluid::Property::Volume)?.value;
        unbalanced += sign * mass * (surroundings.ground(view, c.state)? + surroundings.p0 * v);
    }
    for &k in &region.members {
        if let Some(work) = region::boundary_work(view, k)? {
            // Work against the surroundings' own pressure is not useful.
            let p = process.components[k].holdup.as_ref().and_then(|h| h.boundary_pressure);
            let p = p.map_or(0.0, |v| view.workspace.value(v));
            let useful = work.clone().scaled(if p == 0.0 { 1.0 } else { 1.0 - surroundings.p0 / p });
            add(&mut out, -1.0, &useful);
            unbalanced += work.value - useful.value;
        }
    }
    let energy = balances.energy_residual().map_err(Clone::clone)?.0.value;
    out.mismatch = out.inflow.value - out.outflow.value - energy - out.destruction.value - unbalanced;
    Ok(out)
}

/// Whether the surroundings matter to a region: it has a heat flow without boundary temperature,
/// whose lenient value is the ambient temperature.
pub fn leans_on_ambient(process: &Process, region: &Region) -> bool {
    region.crossings().any(|(f, _, sign)| {
        sign < 0.0 && matches!(process.flows[f].carried, Carried::Heat(_, Boundary::Unknown))
    })
}
