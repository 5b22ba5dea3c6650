//! What several rules measure in the same way.

use crate::balance::{Evaluation, Row};
use crate::fluid::{CompositionForm, Property};
use crate::model::{Dual, Family, Margin, Scope, Slot, Test, View};
use crate::process::{
    AmountForm, Basis, Boundary, Carried, Component, ComponentId, FlowId, Literals, Process, StateForm,
    StateId, Stated, Var, VarId,
};
use crate::quantity::Dimension;

pub(super) use crate::balance::passage::{is_adiabatic, is_reversed};
pub(super) use crate::balance::reservoir::net_work_out;
pub(super) use crate::balance::shares::formulation_uncertainty as formulation;

/// A margin that must not be negative, outside every family.
pub(super) fn lower_bound(me: usize, scope: Scope, form: Dual, throughput: f64) -> Margin {
    Margin {
        rule: me,
        scope,
        family: Family::None,
        test: Test::NonNegative,
        form: Ok(form),
        throughput,
        pointer: None,
        detail: 0,
    }
}

/// A claim of a component against its upper limit. It is at the limit where that lies within the
/// rounding interval of the claimed figure.
pub(super) fn claim(
    me: usize,
    view: View<'_>,
    k: ComponentId,
    stated: &Stated,
    limit: &Dual,
    detail: usize,
) -> Option<Margin> {
    let claim = view.var(stated.var).ok()?;
    let throughput = claim.value.abs() + limit.value.abs();
    let form = limit.clone().minus(&claim);
    let within = form.value.abs() <= half_digit(&view.model.process, stated.var);
    let form = if within { Dual::constant(0.0) } else { form };
    let pointer = Some(stated.pointer.clone());
    Some(Margin { pointer, detail, ..lower_bound(me, Scope::Component(k), form, throughput) })
}

/// Something that is simply so: a margin without uncertainty that does not hold.
pub(super) fn fact(me: usize, scope: Scope, pointer: String) -> Margin {
    Margin { pointer: Some(pointer), ..lower_bound(me, scope, Dual::constant(-1.0), 0.0) }
}

/// What a balance of this throughput may be open without question.
pub(super) fn allowance(process: &Process, throughput: f64) -> f64 {
    match process.policy.literals {
        Literals::Design => process.policy.closure_tolerance * throughput,
        Literals::Measured => 0.0,
    }
}

/// The rows that have power as tests, with their indices.
pub(super) fn unspent(evaluation: &Evaluation<'_>) -> impl Iterator<Item = (usize, Row)> {
    let rows = evaluation.equations.rows().iter().copied().enumerate();
    rows.filter(|&(i, _)| evaluation.spent_on(i).is_none())
}

/// Whether a component can be passive: no work, no material, no contents.
pub(super) fn is_passive(evaluation: &Evaluation<'_>, k: ComponentId) -> bool {
    let process = &evaluation.view.model.process;
    let component = &process.components[k];
    !has_material(process, component)
        && !component
            .inlets
            .iter()
            .chain(&component.outlets)
            .any(|&f| matches!(process.flows[f].carried, Carried::Work(..)))
}

/// Whether a component has a flow of material, or contents.
pub(super) fn has_material(process: &Process, component: &Component) -> bool {
    component.holdup.is_some()
        || component.inlets.iter().chain(&component.outlets).any(|&f| process.flows[f].material().is_some())
}

/// The only inlet and the only outlet of the only side that carries material, in the order in
/// which it really passes: negative amounts run against their declared direction.
pub(super) fn single_passage(view: View<'_>, component: &Component) -> Option<(FlowId, FlowId)> {
    let mut sides = component.sides.iter().filter(|s| !(s.inlets.is_empty() && s.outlets.is_empty()));
    let (side, None) = (sides.next()?, sides.next()) else { return None };
    match (&side.inlets[..], &side.outlets[..]) {
        ([inlet], [outlet]) if is_reversed(view, *inlet) || is_reversed(view, *outlet) => {
            Some((*outlet, *inlet))
        }
        ([inlet], [outlet]) => Some((*inlet, *outlet)),
        _ => None,
    }
}

/// Specific entropy after minus before a passage through component `k`, J/(kg K), with the
/// uncertainty of the formulation, and the scale of rounding. `None` where a state is not known or
/// the two are not states of one substance.
pub(super) fn entropy_rise(
    view: View<'_>,
    k: ComponentId,
    before: FlowId,
    after: FlowId,
) -> Option<(Dual, f64)> {
    let process = &view.model.process;
    let first = process.flows[before].material()?.state;
    let second = process.flows[after].material()?.state;
    let fluid = process.states[first].fluid;
    if process.states[second].fluid != fluid {
        return None;
    }
    if process.states[first].c.is_some() {
        let (a, b) = (view.composition(first).ok()?.value, view.composition(second).ok()?.value);
        if (a - b).abs() > 1e-9 * (1.0 + a.abs()) {
            return None;
        }
    }
    let (s1, s2) =
        (view.property(first, Property::Entropy).ok()?, view.property(second, Property::Entropy).ok()?);
    let reference = view.model.scales[fluid].reference.1;
    let (r1, r2) = (s1.value - reference, s2.value - reference);
    let mut rise = s2.minus(&s1);
    // One relative error is common to both, as in the balances, so that it cancels for equal states.
    let derivative = formulation(view, first).max(formulation(view, second)) * (r2 - r1);
    if let Some(&source) = view.model.formulation.get(&(k, fluid)) {
        rise.terms.push((view.model.source_slot(source), derivative));
    }
    Some((rise, r1.abs() + r2.abs()))
}

/// The first flow that has a state.
pub(super) fn flow_of_state(process: &Process, state: StateId) -> Option<FlowId> {
    process.flows.iter().position(|f| f.material().is_some_and(|m| m.state == state))
}

/// What a finding about a state is about.
pub(super) fn scope_of_state(process: &Process, state: StateId) -> Scope {
    if let Some(f) = flow_of_state(process, state) {
        return Scope::Flow(f);
    }
    let holder = process.components.iter().position(|c| {
        c.holdup.iter().flat_map(|h| h.initial.iter().chain(&h.r#final)).any(|c| c.state == state)
    });
    holder.map_or(Scope::Description, Scope::Component)
}

/// What rounding of the printed digits could add to or take off a figure: each variable's sources
/// by their half digits. Solved variables count as they stand.
pub(super) fn rounding(process: &Process, form: &Dual) -> f64 {
    let mut by_source: Vec<(usize, f64)> = Vec::new();
    for &(slot, d) in &form.terms {
        if let Some(Var::Given(affine)) = process.vars.get(slot as usize) {
            for &(source, weight) in &affine.terms {
                match by_source.iter_mut().find(|(s, _)| *s == source) {
                    Some((_, sum)) => *sum += d * weight,
                    None => by_source.push((source, d * weight)),
                }
            }
        }
    }
    by_source.iter().map(|&(s, d)| d.abs() * process.sources[s].half_digit).sum()
}

/// Half a unit of the last printed digit of a given variable.
pub(super) fn half_digit(process: &Process, var: VarId) -> f64 {
    rounding(process, &Dual::slot(var as Slot, 0.0))
}

/// What a property measures.
pub(super) const fn property_dimension(property: Property) -> Dimension {
    match property {
        Property::Temperature => Dimension::Temperature,
        Property::Pressure => Dimension::Pressure,
        Property::Enthalpy => Dimension::SpecificEnergy,
        Property::Entropy => Dimension::SpecificEntropy,
        Property::Volume => Dimension::SpecificVolume,
        Property::Quality => Dimension::Fraction,
    }
}

/// The word for a property.
pub(super) const fn property_name(property: Property) -> &'static str {
    match property {
        Property::Temperature => "temperature",
        Property::Pressure => "pressure",
        Property::Enthalpy => "enthalpy",
        Property::Entropy => "entropy",
        Property::Volume => "specific volume",
        Property::Quality => "quality",
    }
}

/// What an amount measures.
pub(super) const fn amount_dimension(form: AmountForm, basis: Basis) -> Dimension {
    match (form, basis) {
        (AmountForm::Mass | AmountForm::DryAirMass, Basis::Rate) => Dimension::MassFlow,
        (AmountForm::Mass | AmountForm::DryAirMass, Basis::Amount) => Dimension::Mass,
        (AmountForm::Moles, Basis::Rate) => Dimension::MoleFlow,
        (AmountForm::Moles, Basis::Amount) => Dimension::Moles,
        (AmountForm::Volume, Basis::Rate) => Dimension::VolumeFlow,
        (AmountForm::Volume, Basis::Amount) => Dimension::Volume,
    }
}

/// The variable that says how much a flow carries, what it measures, and its word.
pub(super) fn extent(process: &Process, flow: FlowId) -> (VarId, Dimension, &'static str) {
    let energy = match process.basis {
        Basis::Rate => Dimension::Power,
        Basis::Amount => Dimension::Energy,
    };
    match &process.flows[flow].carried {
        Carried::Material(m) => (m.amount, amount_dimension(m.form, process.basis), "amount"),
        Carried::Heat(q, _) => (*q, energy, "heat"),
        Carried::Work(w, _) => (*w, energy, "work"),
        Carried::Radiation(q, _) => (*q, energy, "radiation"),
    }
}

/// The flow that a variable belongs to, and what the variable measures.
pub(super) fn owner(process: &Process, var: VarId) -> Option<(FlowId, Dimension)> {
    for (f, flow) in process.flows.iter().enumerate() {
        let (amount, dimension, _) = extent(process, f);
        if amount == var {
            return Some((f, dimension));
        }
        let dimension = match &flow.carried {
            Carried::Material(m) => {
                if m.velocity == Some(var) {
                    Some(Dimension::Velocity)
                } else if m.elevation == Some(var) {
                    Some(Dimension::Length)
                } else {
                    coordinate_dimension(process, m.state, var)
                }
            }
            Carried::Heat(_, Boundary::Isothermal(t)) if *t == var => Some(Dimension::Temperature),
            Carried::Heat(_, Boundary::Sliding(a, b)) if *a == var || *b == var => {
                Some(Dimension::Temperature)
            }
            Carried::Radiation(_, t) if *t == var => Some(Dimension::Temperature),
            _ => None,
        };
        if let Some(dimension) = dimension {
            return Some((f, dimension));
        }
    }
    None
}

fn coordinate_dimension(process: &Process, state: StateId, var: VarId) -> Option<Dimension> {
    let spec = &process.states[state];
    let (a, b) = match spec.form {
        StateForm::Pair(pair) => {
            let (a, b) = pair.properties();
            (property_dimension(a), property_dimension(b))
        }
        StateForm::PressureSuperheat | StateForm::PressureSubcooling => {
            (Dimension::Pressure, Dimension::TemperatureDifference)
        }
        StateForm::TemperatureSuperheat | StateForm::TemperatureSubcooling => {
            (Dimension::Temperature, Dimension::TemperatureDifference)
        }
    };
    if spec.a == var {
        return Some(a);
    }
    if spec.b == var {
        return Some(b);
    }
    if let Some((form, c)) = spec.c
        && c == var
    {
        return Some(match form {
            CompositionForm::Direct | CompositionForm::RelativeHumidity => Dimension::Fraction,
            CompositionForm::WetBulb | CompositionForm::DewPoint => Dimension::Temperature,
        });
    }
    spec.surplus.iter().find(|s| s.var == var).map(|s| property_dimension(s.property))
}
