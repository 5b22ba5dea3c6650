//! Figures that rules derive from states, with their gradients.

use crate::balance::{Evaluation, Row};
use crate::fluid::{CompositionForm, Engine, Pair, Property, Substance};
use crate::model::{Dual, View};
use crate::process::kinds::Kind;
use crate::process::{Carried, Component, ComponentId, FlowId, Process, StateForm, StateId};

/// Largest difference of temperature along a reactor that still counts as constant, K (our choice:
/// about what two good thermometers may differ by).
pub(super) const SAME_TEMPERATURE: f64 = 0.5;

/// A function by its value and its partial derivatives with respect to figures.
pub(super) fn combine(value: f64, parts: &[(&Dual, f64)]) -> Dual {
    let mut out = Dual::constant(value);
    for (figure, d) in parts {
        out.follow(*d, figure);
    }
    out
}

/// A function of pressure and enthalpy (engine's datum) at a state of fixed composition, with its
/// gradient by central differences.
pub(super) fn by_state(
    view: View<'_>,
    state: StateId,
    f: impl Fn(&dyn Engine, f64, f64) -> Option<f64>,
) -> Option<Dual> {
    let spec = &view.model.process.states[state];
    if spec.c.is_some() {
        return None;
    }
    let engine = &*view.model.process.fluids[spec.fluid].engine;
    let p = view.property(state, Property::Pressure).ok()?;
    let h = view.property(state, Property::Enthalpy).ok()?;
    let (dp, dh) = (1e-4 * p.value, 10.0);
    let value = f(engine, p.value, h.value)?;
    let by_p = (f(engine, p.value + dp, h.value)? - f(engine, p.value - dp, h.value)?) / (2.0 * dp);
    let by_h = (f(engine, p.value, h.value + dh)? - f(engine, p.value, h.value - dh)?) / (2.0 * dh);
    Some(combine(value, &[(&p, by_p), (&h, by_h)]))
}

/// Entropy generation of a component with its gradient, W/K or J/K, and the entropy throughput.
pub(super) fn generation(evaluation: &Evaluation<'_>, k: ComponentId) -> Option<(Dual, f64)> {
    evaluation.components.get(k)?.generation().ok()
}

/// Energy that enters a component beyond what leaves, with its throughput, where the balance was
/// not spent on an unknown.
pub(super) fn energy_surplus<'e>(evaluation: &'e Evaluation<'_>, k: ComponentId) -> Option<(&'e Dual, f64)> {
    let row = evaluation.equations.find(Row::Energy(k))?;
    if evaluation.spent_on(row).is_some() {
        return None;
    }
    evaluation.components.get(k)?.energy_residual().ok()
}

/// Whether a component has a flow of work.
pub(super) fn has_work(process: &Process, component: &Component) -> bool {
    component
        .inlets
        .iter()
        .chain(&component.outlets)
        .any(|&f| matches!(process.flows[f].carried, Carried::Work(..)))
}

/// The only material outlet that the description has, what the reader made left aside.
pub(super) fn only_outlet(process: &Process, component: &Component) -> Option<FlowId> {
    let mut outlets = component
        .outlets
        .iter()
        .copied()
        .filter(|&f| process.flows[f].material().is_some() && !process.flows[f].implied);
    outlets.next().filter(|_| outlets.next().is_none())
}

/// Temperature of a flow of material.
pub(super) fn temperature(view: View<'_>, f: FlowId) -> Option<Dual> {
    view.property(view.model.process.flows[f].material()?.state, Property::Temperature).ok()
}

/// Whether a flow carries humid air.
pub(super) fn is_humid_air(process: &Process, f: FlowId) -> bool {
    process.flows[f].material().is_some_and(|m| {
        matches!(process.fluids[process.states[m.state].fluid].substance, Substance::HumidAir)
    })
}

/// Humidity ratio of saturated air at the pressure and temperature of a state of humid air.
pub(super) fn saturation_ratio(view: View<'_>, state: StateId) -> Option<Dual> {
    let spec = &view.model.process.states[state];
    if spec.form != StateForm::Pair(Pair::PressureTemperature) {
        return None;
    }
    let (p, t) = (view.var(spec.a).ok()?, view.var(spec.b).ok()?);
    let engine = &view.model.process.fluids[spec.fluid].engine;
    let (w, g) = engine.composition(CompositionForm::RelativeHumidity, p.value, t.value, 1.0).ok()?;
    Some(combine(w, &[(&p, g[0]), (&t, g[1])]))
}

/// Thermodynamic wet-bulb temperature of a flow of humid air, K.
pub(super) fn wet_bulb(view: View<'_>, f: FlowId) -> Option<Dual> {
    let state = view.model.process.flows[f].material()?.state;
    let engine = &view.model.process.fluids[view.model.process.states[state].fluid].engine;
    let p = view.property(state, Property::Pressure).ok()?;
    let t = view.property(state, Property::Temperature).ok()?;
    let w = view.composition(state).ok()?;
    let at = |bulb: f64| engine.composition(CompositionForm::WetBulb, p.value, t.value, bulb);
    // The humidity ratio rises with the wet bulb; far below, the form has no answer.
    let (mut low, mut high) = (t.value - 60.0, t.value);
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        match at(middle) {
            Ok((ratio, _)) if ratio > w.value => high = middle,
            _ => low = middle,
        }
    }
    let bulb = 0.5 * (low + high);
    let (ratio, g) = at(bulb).ok()?;
    if (ratio - w.value).abs() > 1e-6 || g[2] <= 0.0 {
        return None;
    }
    Some(combine(bulb, &[(&w, 1.0 / g[2]), (&p, -g[0] / g[2]), (&t, -g[1] / g[2])]))
}

/// Speed of sound in a one-phase fluid at pressure and enthalpy, m/s: c² = −v² (∂p/∂v)s.
pub(super) fn sound_speed(engine: &dyn Engine, p: f64, h: f64) -> Option<f64> {
    let at = engine.state(Pair::PressureEnthalpy, p, h, 0.0).ok()?;
    let slope = at.jacobian(Pair::PressureEntropy)?[Property::Volume as usize][0];
    let square = -at.volume * at.volume / slope;
    (square > 0.0).then(|| square.sqrt())
}

/// Kinds whose material only passes or joins, without work or reaction.
pub(super) const fn joins(kind: Kind) -> bool {
    matches!(kind, Kind::Mixer | Kind::Deaerator | Kind::Drum | Kind::Ejector)
}
