//! exergy-efficiency-above-one

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::balance::purpose::Account;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::StatedFigure;
use crate::quantity::Dimension;

/// A component's product carries more exergy than its fuel.
///
/// A product that is not positive breaks no law: the component does not serve its purpose, and the
/// report says so. A claimed exergy efficiency is held against one.
pub struct ExergyEfficiencyAboveOne;

static INFO: RuleInfo = RuleInfo {
    name: "exergy-efficiency-above-one",
    title: "Exergy efficiency",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "E product ≤ E fuel",
    applies_to: "components that serve a purpose by their kind or by their own \"purpose\"",
    needs: "the exergy of every flow",
    typical_cause: "a wrong definition of fuel and product, a stream missing from them, swapped readings",
    source: "Lazzaretto & Tsatsaronis, Energy 31 (2006) 1257",
    breaking: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine"}},
            "flows": {
              "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.00 bar", "temperature": "190.0 degC", "mass_flow": "5 kg/s"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine"}},
            "flows": {
              "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.00 bar", "temperature": "225.0 degC", "mass_flow": "5 kg/s"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
};

impl Rule for ExergyEfficiencyAboveOne {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (k, component) in view.model.process.components.iter().enumerate() {
            if let Some(account) = serving(evaluation, k) {
                let form = account.fuel.clone().minus(&account.product);
                out.push(measure::lower_bound(me, Scope::Component(k), form, account.throughput));
            }
            for (i, stated) in component.stated.iter().enumerate() {
                if stated.what == StatedFigure::ExergyEfficiency {
                    out.extend(measure::claim(me, view, k, stated, &Dual::constant(1.0), i + 1));
                }
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let subject = phrase::subject(evaluation, margin.scope);
        let sureness = phrase::sureness(decision);
        let claim = margin.detail.checked_sub(1).and_then(|i| {
            let stated = evaluation.view.model.process.components[k].stated.get(i)?;
            evaluation.view.var(stated.var).ok()
        });
        if let Some(claim) = claim {
            let relation = if claim.value > 1.0 { "exceeds" } else { "does not exceed" };
            return Explanation {
                statement: format!(
                    "The exergy efficiency {} claimed for {subject} {relation} 1{sureness}.",
                    phrase::number(claim.value),
                ),
                value: Some(Figure { value: claim.value, dimension: Dimension::Fraction }),
                limit: Some(Figure { value: 1.0, dimension: Dimension::Fraction }),
                ..Explanation::default()
            };
        }
        let Some(account) = serving(evaluation, k) else { return Explanation::default() };
        let dimension = phrase::energy_dimension(evaluation);
        let relation = if decision.value < 0.0 { "more than" } else { "no more than" };
        Explanation {
            statement: format!(
                "The product of {subject} carries {} of exergy, {relation} the {} spent on it{sureness}.",
                phrase::figure(account.product.value, dimension),
                phrase::figure(account.fuel.value, dimension),
            ),
            value: Some(Figure { value: account.product.value, dimension }),
            limit: Some(Figure { value: account.fuel.value, dimension }),
            ..Explanation::default()
        }
    }
}

/// The account of a component that delivers a product.
fn serving<'e>(evaluation: &'e Evaluation<'_>, k: usize) -> Option<&'e Account> {
    let account = evaluation.exergies.as_ref()?.accounts.get(k)?.as_ref().ok()?;
    (account.reason.is_none() && account.product.value > 0.0).then_some(account)
}
