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

use crate::fluid::{Datum, Pair};
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
            for flow in component.inlets.iter().chain(&component.outlets) {
                if let Some(m) = process.flows[*flow].material() {
                    let fluid = process.states[m.state].fluid;
                    formulation.entry((k, fluid)).or_insert_with(|| {
                        process.sources.push(crate::process::Source {
                            pointer: component.pointer.clone(),
                            kind: crate::process::SourceKind::Formulation,
                            // The relative figure is part of the gradient.
                            u: 1.0,
                            half_digit: 0.0,
                        });
                        inputs.values.push(0.0);
                        process.sources.len() - 1
                    });
                }
            }
        }
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
        (Model { process, scales, formulation, unknowns, dependents }, inputs)
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

/// Distinct fluids of a side.
pub fn fluids_of<'a>(process: &'a Process, side: &'a Side) -> Vec<FluidId> {
    let mut out = Vec::new();
    for f in side.inlets.iter().chain(&side.outlets) {
        if let Some(m) = process.flows[*f].material() {
            let fluid = process.states[m.state].fluid;
            if !out.contains(&fluid) {
                out.push(fluid);
            }
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
            let reference = if matches!(fluid.substance, crate::fluid::Substance::Stated) {
                (0.0, 0.0)
            } else {
                fluid
                    .engine
                    .state(Pair::PressureTemperature, REFERENCE_PRESSURE, REFERENCE_TEMPERATURE, 0.0)
                    .map_or((0.0, 0.0), |s| (s.enthalpy, s.entropy))
            };
            match fluid.engine.datum().or_else(|| Some(fluid.engine.datum_at(0.01)?.0)) {
                Some(datum) if absolute => {
                    FluidScale { scale: Scale::Absolute, offset: datum, reference, variable }
                }
                _ => FluidScale {
                    scale: Scale::Own,
                    offset: Datum { enthalpy: -reference.0, entropy: -reference.1 },
                    reference,
                    variable,
                },
            }
        })
        .collect()
}
