//! What the three rules about reversible cycles share: an efficiency or coefficient of performance
//! against its limit between entropic mean temperatures.

use super::{Explanation, Figure, measure, phrase};
use crate::balance::Evaluation;
use crate::balance::reservoir::Reservoirs;
use crate::model::{Decision, Margin, Scope};
use crate::process::StatedFigure;
use crate::quantity::Dimension;

pub(super) use crate::balance::reservoir::Cycle as Machine;

const fn claimed(machine: Machine) -> StatedFigure {
    match machine {
        Machine::Engine => StatedFigure::Efficiency,
        Machine::Refrigerator | Machine::HeatPump => StatedFigure::Cop,
    }
}

const fn word(machine: Machine) -> &'static str {
    match machine {
        Machine::Engine => "efficiency",
        Machine::Refrigerator | Machine::HeatPump => "coefficient of performance",
    }
}

/// The share of the limit that built machines rarely pass (common practice).
const fn usual_share(machine: Machine) -> f64 {
    match machine {
        Machine::Engine => 0.85,
        Machine::Refrigerator | Machine::HeatPump => 0.75,
    }
}

/// One margin for the machine's own flows (detail 0) and one for each claim (its index + 1).
pub(super) fn margins(machine: Machine, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    let process = &evaluation.view.model.process;
    for (k, component) in process.components.iter().enumerate() {
        if Machine::of(component.kind) != Some(machine) {
            continue;
        }
        let Some(reservoirs) = Reservoirs::of(evaluation.view, k) else { continue };
        let Some(limit) = machine.limit(&reservoirs) else { continue };
        if let Some(actual) = machine.actual(evaluation.view, k, &reservoirs) {
            let throughput = actual.value.abs() + limit.value.abs();
            out.push(measure::lower_bound(me, Scope::Component(k), limit.clone().minus(&actual), throughput));
        }
        for (i, stated) in component.stated.iter().enumerate() {
            if stated.what != claimed(machine) {
                continue;
            }
            out.extend(measure::claim(me, evaluation.view, k, stated, &limit, i + 1));
        }
    }
}

/// One margin for each claim (its index + 1) that keeps its limit: the share of the limit from which
/// practice asks for evidence, over the claim.
pub(super) fn closeness(machine: Machine, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    let process = &evaluation.view.model.process;
    for (k, component) in process.components.iter().enumerate() {
        if Machine::of(component.kind) != Some(machine) {
            continue;
        }
        let Some(limit) = Reservoirs::of(evaluation.view, k).and_then(|r| machine.limit(&r)) else {
            continue;
        };
        for (i, stated) in component.stated.iter().enumerate() {
            let Ok(claim) = evaluation.view.var(stated.var) else { continue };
            // Beyond its limit a claim is a matter of law.
            if stated.what != claimed(machine) || claim.value > limit.value {
                continue;
            }
            let usual = limit.clone().scaled(usual_share(machine));
            let throughput = claim.value.abs() + limit.value.abs();
            out.push(Margin {
                pointer: Some(stated.pointer.clone()),
                detail: i + 1,
                ..measure::lower_bound(me, Scope::Component(k), usual.minus(&claim), throughput)
            });
        }
    }
}

/// The explanation with the share of the limit that is claimed.
pub(super) fn explain_closeness(evaluation: &Evaluation<'_>, margin: &Margin) -> Option<Explanation> {
    let Scope::Component(k) = margin.scope else { return None };
    let component = evaluation.view.model.process.components.get(k)?;
    let machine = Machine::of(component.kind)?;
    let limit = Reservoirs::of(evaluation.view, k).and_then(|r| machine.limit(&r))?.value;
    let stated = component.stated.get(margin.detail.checked_sub(1)?)?;
    let claim = evaluation.view.var(stated.var).ok()?.value;
    Some(Explanation {
        statement: format!(
            "The claimed {} {} of {} is {} % of the limit {} of a reversible cycle; built machines rarely pass {} %, \
             so ask for the test report, its temperatures and what it includes.",
            word(machine),
            phrase::number(claim),
            phrase::subject(evaluation, margin.scope),
            phrase::number(100.0 * claim / limit),
            phrase::number(limit),
            phrase::number(100.0 * usual_share(machine)),
        ),
        value: Some(Figure { value: claim, dimension: Dimension::Fraction }),
        limit: Some(Figure { value: usual_share(machine) * limit, dimension: Dimension::Fraction }),
        ..Explanation::default()
    })
}

/// The explanation with both figures and the temperatures behind the limit.
pub(super) fn explain(
    machine: Machine,
    evaluation: &Evaluation<'_>,
    margin: &Margin,
    decision: &Decision,
) -> Explanation {
    let Scope::Component(k) = margin.scope else { return Explanation::default() };
    let process = &evaluation.view.model.process;
    let Some(reservoirs) = Reservoirs::of(evaluation.view, k) else { return Explanation::default() };
    let claim = margin.detail.checked_sub(1).and_then(|i| process.components[k].stated.get(i));
    let figure = match claim {
        Some(stated) => evaluation.view.var(stated.var).ok(),
        None => machine.actual(evaluation.view, k, &reservoirs),
    };
    let (Some(figure), Some(limit), Some(source), Some(sink)) =
        (figure, machine.limit(&reservoirs), reservoirs.source_temperature(), reservoirs.sink_temperature())
    else {
        return Explanation::default();
    };
    let relation = if decision.at_limit {
        "is at"
    } else if figure.value > limit.value {
        "exceeds"
    } else {
        "stays below"
    };
    Explanation {
        statement: format!(
            "The {}{} {} of {} {relation} the limit {} of a reversible cycle that takes heat in at {} and \
             gives it off at {} (entropic means){}.",
            if claim.is_some() { "claimed " } else { "" },
            word(machine),
            phrase::number(figure.value),
            phrase::subject(evaluation, margin.scope),
            phrase::number(limit.value),
            phrase::figure(source.value, Dimension::Temperature),
            phrase::figure(sink.value, Dimension::Temperature),
            phrase::sureness(decision),
        ),
        value: Some(Figure { value: figure.value, dimension: Dimension::Fraction }),
        limit: Some(Figure { value: limit.value, dimension: Dimension::Fraction }),
        ..Explanation::default()
    }
}
