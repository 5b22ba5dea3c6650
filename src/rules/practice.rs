//! What the rules of common practice share: a figure against a usual range.

use super::{Explanation, Figure, measure, phrase};
use crate::balance::Evaluation;
use crate::fluid::Substance;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::ComponentId;
use crate::quantity::Dimension;

/// A figure and the range that practice knows for it.
pub(super) struct Judged {
    /// What it is about.
    pub scope: Scope,
    /// What it is, for a sentence.
    pub what: &'static str,
    /// The figure.
    pub value: Dual,
    /// Usual range.
    pub range: (f64, f64),
}

/// One margin a figure: its distance to the nearer end of the range. What no law allows, and the
/// ideal machine that a calculation assumes, is not for practice to judge.
pub(super) fn margins(me: usize, judged: Vec<Judged>, out: &mut Vec<Margin>) {
    for (i, j) in judged.into_iter().enumerate() {
        if !(j.value.value > 0.0 && j.value.value < 1.0 - 1e-9) {
            continue;
        }
        let (low, high) = (Dual::constant(j.range.0), Dual::constant(j.range.1));
        let below = j.value.clone().minus(&low);
        let above = high.minus(&j.value);
        let form = if below.value < above.value { below } else { above };
        out.push(Margin { detail: i, ..measure::lower_bound(me, j.scope, form, 1.0) });
    }
}

/// The explanation: the figure and its range.
pub(super) fn explain(
    evaluation: &Evaluation<'_>,
    margin: &Margin,
    decision: &Decision,
    judged: Vec<Judged>,
) -> Explanation {
    let Some(j) = judged.into_iter().nth(margin.detail) else { return Explanation::default() };
    let (low, high) = j.range;
    let value = j.value.value;
    let (relation, limit) = if value < low {
        ("below", low)
    } else if value > high {
        ("above", high)
    } else {
        ("within", if value - low < high - value { low } else { high })
    };
    Explanation {
        statement: format!(
            "The {} of {} is {}, {relation} the usual range from {} to {}{}.",
            j.what,
            phrase::subject(evaluation, j.scope),
            phrase::number(value),
            phrase::number(low),
            phrase::number(high),
            phrase::sureness(decision),
        ),
        value: Some(Figure { value, dimension: Dimension::Fraction }),
        limit: Some(Figure { value: limit, dimension: Dimension::Fraction }),
        ..Explanation::default()
    }
}

/// A figure of merit of a component by name, where they are derived.
pub(super) fn metric(evaluation: &Evaluation<'_>, k: ComponentId, name: &str) -> Option<Dual> {
    let metrics = evaluation.exergies.as_ref()?.metrics.get(k)?;
    metrics.iter().find(|m| m.name == name).map(|m| m.value.clone())
}

/// The substance of the first material flow into a component.
pub(super) fn substance<'e>(evaluation: &'e Evaluation<'_>, k: ComponentId) -> Option<&'e Substance> {
    let process = &evaluation.view.model.process;
    let inlets = &process.components.get(k)?.inlets;
    let state = inlets.iter().find_map(|&f| process.flows[f].material())?.state;
    Some(&process.fluids[process.states[state].fluid].substance)
}

/// Whether a substance is a gas that does not condense in a machine.
pub(super) fn is_gas(substance: &Substance) -> bool {
    matches!(substance, Substance::Gas(_) | Substance::CombustionGas(_) | Substance::HumidAir)
}
