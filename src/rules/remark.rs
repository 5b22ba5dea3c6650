//! Findings that were made while reading and stand under a rule of their own.

use super::{Explanation, Figure, measure};
use crate::balance::Evaluation;
use crate::model::{Dual, Margin, Scope};
use crate::process::Remark;
use crate::quantity::Dimension;

fn of_rule<'a>(evaluation: &Evaluation<'a>, rule: &'a str) -> impl Iterator<Item = &'a Remark> {
    evaluation.view.model.process.remarks.iter().filter(move |r| r.rule == rule)
}

/// What a remark is about: the flow, component or group within whose description it points.
fn scope(evaluation: &Evaluation<'_>, remark: &Remark) -> Scope {
    let process = &evaluation.view.model.process;
    let within = |pointer: &str| {
        remark.pointer.strip_prefix(pointer).is_some_and(|rest| rest.is_empty() || rest.starts_with('/'))
    };
    if let Some(f) = process.flows.iter().position(|f| within(&f.pointer)) {
        return Scope::Flow(f);
    }
    let component = process.components.iter().position(|c| within(&c.pointer));
    component.map_or(Scope::Description, Scope::Component)
}

/// One margin for each remark under a rule: how far its figure is off, or −1 where it has none.
pub(super) fn margins(me: usize, rule: &'static str, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    for remark in of_rule(evaluation, rule) {
        let off = remark.figure.map_or(1.0, |(value, limit, _)| (value - limit).abs());
        let off = if off > 0.0 && off.is_finite() { off } else { 1.0 };
        out.push(Margin {
            form: Ok(Dual::constant(-off)),
            ..measure::fact(me, scope(evaluation, remark), remark.pointer.clone())
        });
    }
}

/// The explanation of a margin that came of a remark under this rule.
pub(super) fn explain(
    rule: &'static str,
    evaluation: &Evaluation<'_>,
    margin: &Margin,
) -> Option<Explanation> {
    let remark = of_rule(evaluation, rule).find(|r| Some(&r.pointer) == margin.pointer.as_ref())?;
    // A figure in another unit stands in the sentence.
    let plain = remark.figure.filter(|f| f.2 == "1");
    let figure = |value: f64| Figure { value, dimension: Dimension::Fraction };
    Some(Explanation {
        statement: format!("In {}, {}", remark.pointer, remark.statement),
        value: plain.map(|f| figure(f.0)),
        limit: plain.map(|f| figure(f.1)),
        ..Explanation::default()
    })
}

/// Whether a remark under this rule already speaks of something within `pointer`.
pub(super) fn covers(rule: &'static str, evaluation: &Evaluation<'_>, pointer: &str) -> bool {
    of_rule(evaluation, rule)
        .any(|r| r.pointer.strip_prefix(pointer).is_some_and(|rest| rest.is_empty() || rest.starts_with('/')))
}
