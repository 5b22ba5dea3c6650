//! What the rules about adiabatic machines share: entropy over each section, and claims.

use super::{Explanation, Figure, measure, phrase};
use crate::balance::Evaluation;
use crate::balance::passage::sections;
use crate::balance::performance::isentropic_efficiency;
use crate::model::{Decision, Dual, Family, Margin, Scope};
use crate::process::kinds::Kind;
use crate::process::{Component, Stated, StatedFigure};
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
        let sections = sections(evaluation.view, component);
        for (i, &(before, after)) in sections.iter().enumerate() {
            if let Some((rise, throughput)) = measure::entropy_rise(view, k, before, after) {
                out.push(Margin {
                    pointer: Some(process.flows[after].pointer.clone()),
                    detail: if sections.len() == 1 { 0 } else { i + 1 },
                    family: if sections.len() == 1 { Family::None } else { Family::Entropy },
                    ..measure::lower_bound(me, Scope::Component(k), rise, throughput)
                });
            }
        }
        for (i, stated) in claims(component) {
            out.extend(measure::claim(me, view, k, stated, &Dual::constant(1.0), sections.len() + i + 1));
        }
    }
}

/// The explanation with the isentropic efficiency of the section or the claim.
pub(super) fn explain(evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
    let Scope::Component(k) = margin.scope else { return Explanation::default() };
    let process = &evaluation.view.model.process;
    let component = &process.components[k];
    let subject = phrase::subject(evaluation, margin.scope);
    let sections = sections(evaluation.view, component);
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
    let efficiency = match isentropic_efficiency(evaluation.view, before, after) {
        Some(e) => format!(", an isentropic efficiency of {}", phrase::number(e.value)),
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
