//! How material passes through a component: which side it is on, in which order, and whether it burns.

use super::by_pressure;
use super::performance::{COMBUSTIBLE, heating_values};
use crate::fluid::{Property, Substance};
use crate::model::{Blocked, View};
use crate::process::{Carried, Component, FlowId, Process, Side};

/// Whether no heat crosses the boundary of the fluid in a component: a loss in bearings, which
/// the reader makes of a given mechanical loss, leaves the fluid adiabatic.
pub fn is_adiabatic(process: &Process, component: &Component) -> bool {
    component.inlets.iter().chain(&component.outlets).all(|&f| {
        let flow = &process.flows[f];
        match flow.carried {
            Carried::Heat(..) => flow.implied && !component.given.heat_loss,
            Carried::Radiation(..) => false,
            Carried::Material(_) | Carried::Work(..) => true,
        }
    })
}

/// Whether the amount of a flow is known and negative.
pub fn is_reversed(view: View<'_>, flow: FlowId) -> bool {
    let var = match &view.model.process.flows[flow].carried {
        Carried::Material(m) => m.amount,
        Carried::Heat(v, _) | Carried::Work(v, _) | Carried::Radiation(v, _) => *v,
    };
    view.workspace.known(var).is_ok_and(|x| x < 0.0)
}

/// The sections of a machine with one inlet, in the order in which the fluid passes them; none
/// where other streams pass through beside it, or a flow runs against its declared direction.
pub fn sections(view: View<'_>, component: &Component) -> Vec<(FlowId, FlowId)> {
    let mut sides = component.sides.iter().filter(|s| !(s.inlets.is_empty() && s.outlets.is_empty()));
    let (Some(side), None) = (sides.next(), sides.next()) else { return Vec::new() };
    let [inlet] = side.inlets[..] else { return Vec::new() };
    if side.inlets.iter().chain(&side.outlets).any(|&f| is_reversed(view, f)) {
        return Vec::new();
    }
    let outlets = by_pressure(view.model, view.workspace, &side.outlets, component.kind);
    let mut before = inlet;
    outlets.into_iter().map(|after| (std::mem::replace(&mut before, after), after)).collect()
}

/// Whether a side carries nothing.
pub fn is_empty(side: &Side) -> bool {
    side.inlets.is_empty() && side.outlets.is_empty()
}

/// Mass-weighted mean of the specific enthalpy (one fluid) or of the temperature.
pub(super) fn mean_level(view: View<'_>, flows: &[FlowId], by_enthalpy: bool) -> Result<f64, Blocked> {
    let (mut sum, mut mass) = (0.0, 0.0);
    for &f in flows {
        let m = view.model.process.flows[f].material().ok_or(Blocked::Missing("material"))?;
        let level = if by_enthalpy {
            view.enthalpy(m.state)?.value
        } else {
            view.property_value(m.state, Property::Temperature)?
        };
        let kg = view.mass(f)?.value;
        sum += kg * level;
        mass += kg;
    }
    Ok(if mass == 0.0 { 0.0 } else { sum / mass })
}

/// Rise of the mean specific enthalpy along a side, J/kg.
///
/// # Errors
/// `Blocked`.
pub(super) fn enthalpy_rise(view: View<'_>, side: &Side) -> Result<f64, Blocked> {
    Ok(mean_level(view, &side.outlets, true)? - mean_level(view, &side.inlets, true)?)
}

/// The side of a compressor, pump or fan whose pressure rises most.
pub fn compressed_side(view: View<'_>, component: &Component) -> Option<usize> {
    let pressure = |f: Option<&FlowId>| {
        let state = view.model.process.flows[*f?].material()?.state;
        view.property_value(state, Property::Pressure).ok()
    };
    let ratio = |side: &Side| {
        let (before, after) = (pressure(side.inlets.first())?, pressure(side.outlets.first())?);
        Some(after / before)
    };
    let sides = component.sides.iter().enumerate().filter(|(_, s)| !is_empty(s));
    sides
        .map(|(i, s)| (i, ratio(s).unwrap_or(0.0)))
        .max_by(|a, b| a.1.total_cmp(&b.1).then(b.0.cmp(&a.0)))
        .map(|(i, _)| i)
}

/// Whether an inlet of a firing component is its fuel: it is said to be, or it can burn.
pub(super) fn is_fuel(process: &Process, component: &Component, f: FlowId) -> bool {
    let named: Vec<FlowId> = component.ports.iter().filter(|p| p.0 == "fuel").map(|p| p.1).collect();
    if !named.is_empty() {
        return named.contains(&f);
    }
    let Some(m) = process.flows[f].material() else { return false };
    let fluid = &process.fluids[process.states[m.state].fluid];
    match &fluid.substance {
        Substance::Fuel(_) => true,
        substance => heating_values(substance).is_some_and(|v| v.lower > COMBUSTIBLE),
    }
}
