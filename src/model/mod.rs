//! The compiled process: what depends on structure only, made once and shared by every evaluation.
//!
//! Values live in [`Inputs`]; a [`Workspace`] takes them and holds states and solved unknowns. A
//! balance or a margin is a [`Dual`]: its value and its gradient over variables. The equations
//! that solve for unknowns are [`Rows`], which the balances supply.

pub mod dual;
pub mod margin;
mod solve;
mod workspace;

pub use dual::{Dual, Slot};
pub use margin::{Decision, Family, Margin, Scope, Test, Verdict};
pub use solve::{Plan, Rows, Step, invert};
pub use workspace::{Blocked, StateValue, View, Workspace};

use crate::fluid::{Datum, Elements, Pair};
use crate::process::{Affine, Component, FluidId, Inputs, Process, Side, SourceId, StateSpec, Var, VarId};
use std::collections::BTreeMap;

/// Temperature and pressure of the datum that the balances of non-reacting fluids use, so that no
/// verdict depends on the declared environment.
pub const REFERENCE_TEMPERATURE: f64 = 298.15;
/// See [`REFERENCE_TEMPERATURE`].
pub const REFERENCE_PRESSURE: f64 = 1e5;

/// How enthalpy and entropy of a fluid enter the balances.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Scale {
    /// On the absolute datum: the fluid meets other substances somewhere in the process.
    Absolute,
    /// Relative to its own reference state.
    Own,
}

/// What the model knows of one fluid.
#[derive(Clone, Debug)]
pub struct FluidScale {
    /// Which datum the balances use.
    pub scale: Scale,
    /// Added to the engine's enthalpy and entropy in balances (composition-independent part).
    pub offset: Datum,
    /// The engine's own enthalpy and entropy at the reference state, J/kg and J/(kg K).
    pub reference: (f64, f64),
    /// Whether the composition varies, so that the offset follows `Engine::datum_at`.
    pub variable: bool,
    /// Moles of each element per kg, where they are known and do not vary.
    pub elements: Option<Elements>,
}

/// The compiled process.
#[derive(Clone, Debug)]
pub struct Model {
    /// The validated process.
    pub process: Process,
    /// One entry a fluid.
    pub scales: Vec<FluidScale>,
    /// Sources of formulation uncertainty by component and fluid.
    pub formulation: BTreeMap<(usize, FluidId), SourceId>,
    /// Whether a component turns a substance without formation data into another one, so that its
    /// energy and entropy have no common datum.
    pub groundless: Vec<bool>,
    /// Variables to be solved for.
    pub unknowns: Vec<VarId>,
    /// The states that depend on each variable.
    pub dependents: Vec<Vec<usize>>,
}

impl Model {
    /// Compiles a validated process: chooses the datum of each fluid, adds the sources of
    /// formulation uncertainty, and links variables to states.
    ///
    /// Returns the model and the inputs completed by the sources it added.
    pub fn compile(mut process: Process, mut inputs: Inputs) -> (Model, Inputs) {
        let scales = scales(&process);
        let mut formulation = BTreeMap::new();
        for (k, component) in process.components.iter().enumerate() {
            for fluid in fluids_in(&process, component) {
                process.sources.push(crate::process::Source {
                    pointer: component.pointer.clone(),
                    kind: crate::process::SourceKind::Formulation,
                    // The relative figure is part of the gradient.
                    u: 1.0,
                    half_digit: 0.0,
                });
                inputs.values.push(0.0);
                formulation.insert((k, fluid), process.sources.len() - 1);
            }
        }
        let groundless = process.components.iter().map(|c| is_groundless(&process, &scales, c)).collect();
        let unknowns = process
            .vars
            .iter()
            .enumerate()
            .filter(|(_, v)| matches!(v, Var::Unknown { .. }))
            .map(|(i, _)| i)
            .collect();
        let mut dependents = vec![Vec::new(); process.vars.len()];
        for (s, spec) in process.states.iter().enumerate() {
            for v in spec.vars() {
                if !dependents[v].contains(&s) {
                    dependents[v].push(s);
                }
            }
        }
        (Model { process, scales, formulation, groundless, unknowns, dependents }, inputs)
    }

    /// The gradient slot of a source.
    pub fn source_slot(&self, source: SourceId) -> Slot {
        (self.process.vars.len() + source) as Slot
    }
}

impl StateSpec {
    /// The variables that the state depends on.
    pub fn vars(&self) -> impl Iterator<Item = VarId> + '_ {
        [self.a, self.b].into_iter().chain(self.c.map(|(_, v)| v))
    }
}

impl Affine {
    /// The value under given inputs.
    pub fn value(&self, inputs: &Inputs) -> f64 {
        self.terms.iter().fold(self.constant, |sum, &(s, w)| sum + w * inputs.values[s])
    }
}

/// Distinct fluids of a side, its contents included.
pub fn fluids_of<'a>(process: &'a Process, side: &'a Side) -> Vec<FluidId> {
    let mut out = Vec::new();
    let flows = side.inlets.iter().chain(&side.outlets);
    let states = flows.filter_map(|f| process.flows[*f].material().map(|m| m.state));
    for state in states.chain(side.contents.iter().copied()) {
        let fluid = process.states[state].fluid;
        if !out.contains(&fluid) {
            out.push(fluid);
        }
    }
    out
}

/// Every fluid of a component, holdup included.
pub fn fluids_in(process: &Process, component: &Component) -> Vec<FluidId> {
    let mut out: Vec<FluidId> = component.sides.iter().flat_map(|s| fluids_of(process, s)).collect();
    if let Some(h) = &component.holdup {
        out.extend(h.initial.iter().chain(&h.r#final).map(|c| process.states[c.state].fluid));
    }
    out.sort_unstable();
    out.dedup();
    out
}

/// Whether a substance without formation data enters a pool and does not leave it, or the other
/// way round. Figures that are taken at their word are taken to be on the absolute datum.
fn is_groundless(process: &Process, scales: &[FluidScale], component: &Component) -> bool {
    component.sides.iter().filter(|s| s.pool).any(|side| {
        let fluid_at = |f: &usize| process.flows[*f].material().map(|m| process.states[m.state].fluid);
        let holdup = component.holdup.as_ref();
        let held = |contents: Option<&Vec<crate::process::Content>>, fluid: FluidId| {
            contents.is_some_and(|all| {
                all.iter().any(|c| side.contents.contains(&c.state) && process.states[c.state].fluid == fluid)
            })
        };
        fluids_of(process, side).into_iter().any(|fluid| {
            let before = side.inlets.iter().any(|f| fluid_at(f) == Some(fluid))
                || held(holdup.map(|h| &h.initial), fluid);
            let after = side.outlets.iter().any(|f| fluid_at(f) == Some(fluid))
                || held(holdup.map(|h| &h.r#final), fluid);
            scales[fluid].scale == Scale::Own
                && !matches!(process.fluids[fluid].substance, crate::fluid::Substance::Stated)
                && before != after
        })
    })
}

/// A composition at which a fluid of variable composition surely exists.
pub fn sample_composition(fluid: &crate::process::Fluid) -> f64 {
    match &fluid.substance {
        crate::fluid::Substance::CombustionGas(gas) => gas.air_ratio(),
        _ => 0.01,
    }
}

fn scales(process: &Process) -> Vec<FluidScale> {
    let mut absolute = vec![false; process.fluids.len()];
    for component in &process.components {
        for side in component.sides.iter().filter(|s| s.pool) {
            let fluids = fluids_of(process, side);
            if fluids.len() > 1 || fluids.iter().any(|&f| process.fluids[f].engine.elements_vary()) {
                for f in fluids {
                    absolute[f] = true;
                }
            }
        }
    }
    process
        .fluids
        .iter()
        .zip(absolute)
        .map(|(fluid, absolute)| {
            let variable = fluid.engine.elements_vary();
            let elements = if variable { None } else { fluid.engine.elements(0.0).map(|(moles, _)| moles) };
            let reference = if matches!(fluid.substance, crate::fluid::Substance::Stated) {
                (0.0, 0.0)
            } else {
                let c = match fluid.substance {
                    crate::fluid::Substance::CombustionGas(_) => sample_composition(fluid),
                    _ => 0.0,
                };
                fluid
                    .engine
                    .state(Pair::PressureTemperature, REFERENCE_PRESSURE, REFERENCE_TEMPERATURE, c)
                    .map_or((0.0, 0.0), |s| (s.enthalpy, s.entropy))
            };
            match fluid.engine.datum().or_else(|| Some(fluid.engine.datum_at(sample_composition(fluid))?.0)) {
                Some(datum) if absolute => {
                    FluidScale { scale: Scale::Absolute, offset: datum, reference, variable, elements }
                }
                _ => FluidScale {
                    scale: Scale::Own,
                    offset: Datum { enthalpy: -reference.0, entropy: -reference.1 },
                    reference,
                    variable,
                    elements,
                },
            }
        })
        .collect()
}
