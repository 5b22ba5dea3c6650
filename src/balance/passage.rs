//! How material passes through a component.

use super::by_pressure;
use crate::model::View;
use crate::process::{Carried, Component, FlowId, Process};

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
    view.var(var).is_ok_and(|x| x.value < 0.0)
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
