//! What the rules about a gas that is hotter than energy allows share: its temperature against the
//! one that the energy brought along would give it.

use super::{Explanation, Figure, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::ComponentId;
use crate::quantity::Dimension;

/// The highest temperature of the gas of a component and the one given, K; `None` where the rule
/// does not apply.
type Find = fn(&Evaluation<'_>, ComponentId) -> Option<(Dual, Dual)>;

/// How a sentence speaks of the gas, of its temperature and of the limit.
pub(super) type Words = [&'static str; 3];

/// One margin for each component to which the rule applies.
pub(super) fn margins(me: usize, find: Find, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    for k in 0..evaluation.view.model.process.components.len() {
        if let Some((limit, actual)) = find(evaluation, k) {
            let throughput = limit.value + actual.value;
            out.push(measure::lower_bound(me, Scope::Component(k), limit.minus(&actual), throughput));
        }
    }
}

/// The explanation with both temperatures.
pub(super) fn explain(
    find: Find,
    evaluation: &Evaluation<'_>,
    margin: &Margin,
    decision: &Decision,
    [gas, has, limit_is]: Words,
) -> Explanation {
    let Scope::Component(k) = margin.scope else { return Explanation::default() };
    let Some((limit, actual)) = find(evaluation, k) else { return Explanation::default() };
    Explanation {
        statement: format!(
            "{gas} {} {has} {}; {limit_is} {}{}.",
            phrase::subject(evaluation, margin.scope),
            phrase::figure(actual.value, Dimension::Temperature),
            phrase::figure(limit.value, Dimension::Temperature),
            phrase::sureness(decision),
        ),
        value: Some(Figure { value: actual.value, dimension: Dimension::Temperature }),
        limit: Some(Figure { value: limit.value, dimension: Dimension::Temperature }),
        ..Explanation::default()
    }
}
