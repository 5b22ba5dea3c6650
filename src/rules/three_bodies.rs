//! What the two rules about heat-driven machines share: a figure of merit against that of a reversible
//! machine between three reservoirs.

use super::{Explanation, Figure, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::{ComponentId, StatedFigure};
use crate::quantity::Dimension;

/// A machine between three reservoirs.
pub(super) struct Machine {
    /// Reversible figure of merit.
    pub limit: Dual,
    /// What its own flows amount to, where they are known.
    pub actual: Option<Dual>,
    /// Of the heat that drives, the heat that is wanted and what takes the rest, K.
    pub temperatures: [f64; 3],
}

/// How a sentence speaks of a machine.
pub(super) struct Words {
    /// The figure of merit.
    pub figure: &'static str,
    /// What each of the three temperatures is.
    pub roles: [&'static str; 3],
}

/// Finds the machine that a component is, if it is of the kind in question.
type Find = fn(&Evaluation<'_>, ComponentId) -> Option<Machine>;

/// One margin for the machine's own flows (detail 0) and one for each claimed coefficient of
/// performance (its index + 1).
pub(super) fn margins(me: usize, find: Find, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    let view = evaluation.view;
    for (k, component) in view.model.process.components.iter().enumerate() {
        let Some(machine) = find(evaluation, k) else { continue };
        if let Some(actual) = &machine.actual {
            let throughput = actual.value.abs() + machine.limit.value.abs();
            let form = machine.limit.clone().minus(actual);
            out.push(measure::lower_bound(me, Scope::Component(k), form, throughput));
        }
        for (i, stated) in component.stated.iter().enumerate() {
            if stated.what == StatedFigure::Cop {
                out.extend(measure::claim(me, view, k, stated, &machine.limit, i + 1));
            }
        }
    }
}

/// The explanation with both figures and the three temperatures.
pub(super) fn explain(
    find: Find,
    evaluation: &Evaluation<'_>,
    margin: &Margin,
    decision: &Decision,
    words: &Words,
) -> Explanation {
    let Scope::Component(k) = margin.scope else { return Explanation::default() };
    let Some(machine) = find(evaluation, k) else { return Explanation::default() };
    let component = &evaluation.view.model.process.components[k];
    let claim = margin.detail.checked_sub(1).and_then(|i| component.stated.get(i));
    let figure = match claim {
        Some(stated) => evaluation.view.var(stated.var).ok(),
        None => machine.actual,
    };
    let Some(figure) = figure else { return Explanation::default() };
    let [a, b, c] = machine.temperatures.map(|t| phrase::figure(t, Dimension::Temperature));
    let [drive, want, rest] = words.roles;
    Explanation {
        statement: format!(
            "The {}{} {} of {} {} the limit {} of a reversible machine ({drive} {a}, {want} {b}, {rest} {c}){}.",
            if claim.is_some() { "claimed " } else { "" },
            words.figure,
            phrase::number(figure.value),
            phrase::subject(evaluation, margin.scope),
            if decision.value < 0.0 { "exceeds" } else { "does not exceed" },
            phrase::number(machine.limit.value),
            phrase::sureness(decision),
        ),
        value: Some(Figure { value: figure.value, dimension: Dimension::Fraction }),
        limit: Some(Figure { value: machine.limit.value, dimension: Dimension::Fraction }),
        ..Explanation::default()
    }
}
