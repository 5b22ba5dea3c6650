//! given-figure-contradicted

use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, family, measure, phrase};
use crate::balance::{Evaluation, Row};
use crate::model::{Decision, Dual, Margin, Rows, Scope, Test};
use crate::process::Literals;

/// A figure under `given` that was not needed to solve is not what the readings give.
///
/// An efficiency, a coefficient of performance or a pressure loss is an equation. Where everything it
/// links is known anyway it is a check, and a contradiction must not pass in silence.
pub struct GivenFigureContradicted;

static INFO: RuleInfo = RuleInfo {
    name: "given-figure-contradicted",
    title: "Given figure against the readings",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::State,
    inequality: "|equation of the given figure| ≤ k u",
    applies_to: "efficiencies, coefficients of performance and pressure losses under `given` that were not used to solve",
    needs: "everything that the given figure links",
    typical_cause: "a figure of a data sheet at another load, a reading, a wrong unit",
    source: "definition of the figure",
    breaking: Case::Description(
        r#"{"components": {"generator": {"kind": "generator", "given": {"efficiency": 0.98}}},
            "flows": {
              "shaft": {"kind": "work", "to": "generator", "power": "1000 kW"},
              "grid": {"kind": "work", "from": "generator", "form": "electric", "power": "900 kW"},
              "warmth": {"kind": "heat", "from": "generator", "rate": "100 kW", "temperature": "60 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"generator": {"kind": "generator", "given": {"efficiency": 0.90}}},
            "flows": {
              "shaft": {"kind": "work", "to": "generator", "power": "1000 kW"},
              "grid": {"kind": "work", "from": "generator", "form": "electric", "power": "900 kW"},
              "warmth": {"kind": "heat", "from": "generator", "rate": "100 kW", "temperature": "60 degC"}}}"#,
    ),
};

/// The component of an equation that stands under `given`, and what the figure is called.
fn figure_of(row: Row) -> Option<(usize, &'static str)> {
    match row {
        Row::Isentropic(k, ..) => Some((k, "isentropic efficiency")),
        Row::Efficiency(k) => Some((k, "efficiency")),
        Row::Cop(k) => Some((k, "coefficient of performance")),
        Row::PressureLoss(k, _) => Some((k, "pressure loss")),
        _ => None,
    }
}

/// The magnitudes that an equation weighs against each other: each variable by its share.
fn scale(evaluation: &Evaluation<'_>, form: &Dual) -> f64 {
    let known = evaluation.view.model.process.vars.len();
    form.terms
        .iter()
        .filter(|(slot, _)| (*slot as usize) < known)
        .map(|(slot, d)| (d * evaluation.view.workspace.value(*slot as usize)).abs())
        .fold(0.0, f64::max)
}

impl Rule for GivenFigureContradicted {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for (i, row) in evaluation.equations.rows().iter().enumerate() {
            let Some((k, _)) = figure_of(*row) else { continue };
            if evaluation.spent_on(i).is_some() {
                continue;
            }
            let Ok(form) = evaluation.equations.residual(evaluation.view, i) else { continue };
            let throughput = scale(evaluation, &form);
            let allowance = match process.policy.literals {
                Literals::Design => process.policy.closure_tolerance * throughput,
                Literals::Measured => 0.0,
            };
            out.push(Margin {
                family: family(&INFO),
                test: Test::Zero { allowance },
                pointer: Some(format!("{}/given", process.components[k].pointer)),
                detail: i,
                ..measure::lower_bound(me, Scope::Component(k), form, throughput)
            });
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let row = evaluation.equations.rows().get(margin.detail).copied();
        let Some((_, word)) = row.and_then(figure_of) else { return Explanation::default() };
        let share = if margin.throughput > 0.0 { decision.value / margin.throughput } else { 0.0 };
        Explanation {
            statement: format!(
                "The {word} given for {} is not what its flows give: they differ by {} % of the figures it \
                 links{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::number(100.0 * share.abs()),
                phrase::sureness(decision),
            ),
            ..Explanation::default()
        }
    }
}
