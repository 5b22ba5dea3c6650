//! What the rules about adiabatic machines share: entropy over each section, and claims.

use super::{Explanation, Figure, measure, phrase};
use crate::balance::{Evaluation, by_pressure, isentropic_enthalpy};
use crate::fluid::Property;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::kinds::Kind;
use crate::process::{Component, FlowId, Stated, StatedFigure};
use crate::quantity::Dimension;

/// A machine in which a fluid exchanges work and no heat.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Machine {
    /// Delivers work.
    Expander,
    /// Takes work.
    Compressor,
}

impl Machine {
    const fn takes(self, kind: Kind) -> bool {
        match self {
            Machine::Expander => matches!(kind, Kind::Turbine),
            Machine::Compressor => matches!(kind, Kind::Compressor | Kind::Pump | Kind::Fan),
        }
    }
}

/// The sections of a machine with one inlet, in the order in which the fluid passes them; none
/// where other streams pass through beside it, or a flow runs against its declared direction.
fn sections(evaluation: &Evaluation<'_>, component: &Component) -> Vec<(FlowId, FlowId)> {
    let mut sides = component.sides.iter().filter(|s| !(s.inlets.is_empty() && s.outlets.is_empty()));
    let (Some(side), None) = (sides.next(), sides.next()) else { return Vec::new() };
    let [inlet] = side.inlets[..] else { return Vec::new() };
    let view = evaluation.view;
    if side.inlets.iter().chain(&side.outlets).any(|&f| measure::is_reversed(view, f)) {
        return Vec::new();
    }
    let outlets = by_pressure(view.model, view.workspace, &side.outlets, component.kind);
    let mut before = inlet;
    outlets.into_iter().map(|after| (std::mem::replace(&mut before, after), after)).collect()
}

fn claims(component: &Component) -> impl Iterator<Item = (usize, &Stated)> {
    let claims = component.stated.iter().enumerate();
    claims.filter(|(_, s)| s.what == StatedFigure::IsentropicEfficiency)
}

/// One margin for each section and one for each claimed isentropic efficiency.
///
/// The only section of a machine is its entropy balance seen from another side (detail 0); each of
/// several sections is a test of its own (detail: its index + 1), and so is each claim (detail:
/// number of sections + index of the claim + 1).
pub(super) fn margins(machine: Machine, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    let view = evaluation.view;
    let process = &view.model.process;
    for (k, component) in process.components.iter().enumerate() {
        if !machine.takes(component.kind) || !measure::is_adiabatic(process, component) {
            continue;
        }
        let sections = sections(evaluation, component);
        for (i, &(before, after)) in sections.iter().enumerate() {
            if let Some((rise, throughput)) = measure::entropy_rise(view, k, before, after) {
                out.push(Margin {
                    pointer: Some(process.flows[after].pointer.clone()),
                    detail: if sections.len() == 1 { 0 } else { i + 1 },
                    ..measure::lower_bound(me, Scope::Component(k), rise, throughput)
                });
            }
        }
        for (i, stated) in claims(component) {
            let Ok(claim) = view.var(stated.var) else { continue };
            let form = Dual::constant(1.0).minus(&claim);
            // At the limit: the limit lies within the rounding interval of the claimed figure.
            let within = form.value.abs() <= measure::half_digit(process, stated.var);
            let form = if within { Dual::constant(0.0) } else { form };
            out.push(Margin {
                pointer: Some(stated.pointer.clone()),
                detail: sections.len() + i + 1,
                ..measure::lower_bound(me, Scope::Component(k), form, 1.0 + claim.value.abs())
            });
        }
    }
}

/// The explanation with the isentropic efficiency of the section or the claim.
pub(super) fn explain(
    machine: Machine,
    evaluation: &Evaluation<'_>,
    margin: &Margin,
    decision: &Decision,
) -> Explanation {
    let Scope::Component(k) = margin.scope else { return Explanation::default() };
    let process = &evaluation.view.model.process;
    let component = &process.components[k];
    let subject = phrase::subject(evaluation, margin.scope);
    let sections = sections(evaluation, component);
    let Some(&(before, after)) = sections.get(margin.detail.saturating_sub(1)) else {
        let stated = margin.detail.checked_sub(sections.len() + 1).and_then(|i| component.stated.get(i));
        let Some(claim) = stated.and_then(|s| evaluation.view.var(s.var).ok()) else {
            return Explanation::default();
        };
        let relation = if decision.at_limit {
            "is at"
        } else if claim.value > 1.0 {
            "exceeds"
        } else {
            "stays below"
        };
        return Explanation {
            statement: format!(
                "The isentropic efficiency {} claimed for {subject} {relation} that of a reversible adiabatic \
                 machine, which is 1{}.",
                phrase::number(claim.value),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: claim.value, dimension: Dimension::Fraction }),
            limit: Some(Figure { value: 1.0, dimension: Dimension::Fraction }),
            ..Explanation::default()
        };
    };
    let efficiency = match efficiency(machine, evaluation, before, after) {
        Some(e) => format!(", an isentropic efficiency of {}", phrase::number(e)),
        None => String::new(),
    };
    Explanation {
        statement: format!(
            "From \"{}\" to \"{}\" in {subject}, the entropy of the fluid {} by {}{efficiency}; without heat it \
             cannot fall{}.",
            process.flows[before].name,
            process.flows[after].name,
            if decision.value < 0.0 { "falls" } else { "rises" },
            phrase::figure(decision.value.abs(), Dimension::SpecificEntropy),
            phrase::sureness(decision),
        ),
        value: Some(Figure { value: decision.value, dimension: Dimension::SpecificEntropy }),
        limit: Some(Figure { value: 0.0, dimension: Dimension::SpecificEntropy }),
        ..Explanation::default()
    }
}

/// Isentropic efficiency of a section; `None` where it is not defined, because the enthalpy does
/// not move the way of the machine.
fn efficiency(machine: Machine, evaluation: &Evaluation<'_>, before: FlowId, after: FlowId) -> Option<f64> {
    let view = evaluation.view;
    let process = &view.model.process;
    let enthalpy = |f: FlowId| {
        let state = process.flows[f].material()?.state;
        Some(view.property(state, Property::Enthalpy).ok()?.value)
    };
    let h1 = enthalpy(before)?;
    let actual = enthalpy(after)? - h1;
    let ideal = isentropic_enthalpy(view, before, after).ok()?.value - h1;
    match machine {
        Machine::Expander => (actual < 0.0 && ideal < 0.0).then(|| actual / ideal),
        Machine::Compressor => (actual > 0.0 && ideal > 0.0).then(|| ideal / actual),
    }
}
