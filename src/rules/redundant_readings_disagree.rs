//! redundant-readings-disagree

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, family, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Scope, Test};
use crate::process::Affine;
use crate::quantity::Dimension;

/// Readings of one and the same quantity differ by more than their uncertainties explain.
///
/// Their mean, weighted by their uncertainties, is used; each is held against it.
pub struct RedundantReadingsDisagree;

static INFO: RuleInfo = RuleInfo {
    name: "redundant-readings-disagree",
    title: "Redundant readings",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::Closure,
    inequality: "|reading − reading| ≤ k u",
    applies_to: "quantities given by several readings",
    needs: "the readings and their uncertainties",
    typical_cause: "a sensor that drifted, readings of different places or times",
    source: "VDI 2048",
    breaking: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": ["400.0 degC", "388.0 degC"], "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": [{"value": 400.0, "unit": "degC", "uncertainty": "1 K"}, {"value": 400.6, "unit": "degC", "uncertainty": "1 K"}], "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for RedundantReadingsDisagree {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for (i, (var, affine, pointer)) in process.redundant.iter().enumerate() {
            // Of two readings, each deviates from the mean as much as the other: one test.
            let mut of_same = process.redundant.iter().enumerate().filter(|(_, r)| r.0 == *var);
            if let (Some(_), Some((second, _)), None) = (of_same.next(), of_same.next(), of_same.next())
                && second == i
            {
                continue;
            }
            let Ok(used) = evaluation.view.var(*var) else { continue };
            let reading = reading(evaluation, affine);
            let throughput = reading.value.abs() + used.value.abs();
            let scope = measure::owner(process, *var).map_or(Scope::Description, |(f, _)| Scope::Flow(f));
            out.push(Margin {
                family: family(&INFO),
                test: Test::Zero { allowance: 0.0 },
                pointer: Some(pointer.clone()),
                detail: i,
                ..measure::lower_bound(me, scope, reading.minus(&used), throughput)
            });
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let process = &evaluation.view.model.process;
        let Some((var, affine, _)) = process.redundant.get(margin.detail) else {
            return Explanation::default();
        };
        let Ok(used) = evaluation.view.var(*var) else { return Explanation::default() };
        let reading = reading(evaluation, affine);
        let dimension = measure::owner(process, *var).map_or(Dimension::Fraction, |(_, d)| d);
        Explanation {
            statement: format!(
                "One of the readings for {} says {} where their mean, {}, is used: {} {}{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(reading.value, dimension),
                phrase::figure(used.value, dimension),
                phrase::figure(decision.value.abs(), dimension.difference()),
                if decision.value < 0.0 { "less" } else { "more" },
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: reading.value, dimension }),
            limit: Some(Figure { value: used.value, dimension }),
            ..Explanation::default()
        }
    }
}

/// A reading with its gradient over its sources.
fn reading(evaluation: &Evaluation<'_>, affine: &Affine) -> Dual {
    let view = evaluation.view;
    let mut out = Dual::constant(affine.constant);
    for &(source, weight) in &affine.terms {
        let slot = Dual::slot(view.model.source_slot(source), view.workspace.source(source));
        out.add_scaled(weight, &slot);
    }
    out
}
