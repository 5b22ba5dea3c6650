//! radiation-exergy-above-limit

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Scope, View};
use crate::process::kinds::Kind;
use crate::process::{Carried, Component, StatedFigure};
use crate::quantity::Dimension;

/// A share of black-body radiation is claimed as work that is above its exergy.
///
/// The exergy of isotropic black-body radiation is a smaller share of its energy than that of heat at
/// the temperature of its source.
pub struct RadiationExergyAboveLimit;

static INFO: RuleInfo = RuleInfo {
    name: "radiation-exergy-above-limit",
    title: "Exergy of radiation",
    authority: Authority::Law,
    severity: Severity::Minor,
    aspect: Aspect::Claim,
    inequality: "η ≤ 1 − 4/3 (T0/T) + 1/3 (T0/T)⁴",
    applies_to: "components that radiation alone drives, with a claimed efficiency",
    needs: "the temperature of the source",
    typical_cause: "1 − T0/T used for radiation",
    source: "Petela, R.: J. Heat Transfer 86 (1964) 187-192",
    breaking: Case::Description(
        r#"{"components": {"receiver": {"kind": "control_volume", "stated_performance": {"efficiency": 0.945}}},
            "flows": {
              "sun": {"kind": "radiation", "to": "receiver", "rate": "10 kW", "temperature": "5770 K"},
              "shaft": {"kind": "work", "from": "receiver"},
              "cold": {"kind": "heat", "from": "receiver", "temperature": "30.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"receiver": {"kind": "control_volume", "stated_performance": {"efficiency": 0.400}}},
            "flows": {
              "sun": {"kind": "radiation", "to": "receiver", "rate": "10 kW", "temperature": "5770 K"},
              "shaft": {"kind": "work", "from": "receiver"},
              "cold": {"kind": "heat", "from": "receiver", "temperature": "30.0 degC"}}}"#,
    ),
};

impl Rule for RadiationExergyAboveLimit {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (k, component) in view.model.process.components.iter().enumerate() {
            let Some(limit) = limit(view, component) else { continue };
            for (i, stated) in component.stated.iter().enumerate() {
                if stated.what == StatedFigure::Efficiency {
                    out.extend(measure::claim(me, view, k, stated, &limit, i));
                }
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let view = evaluation.view;
        let component = &view.model.process.components[k];
        let claim = component.stated.get(margin.detail).and_then(|s| view.var(s.var).ok());
        let (Some(claim), Some(limit)) = (claim, limit(view, component)) else { return Explanation::default() };
        Explanation {
            statement: format!(
                "The claimed efficiency {} of {} {} the exergy of the radiation that drives it, {} of its energy{}.",
                phrase::number(claim.value),
                phrase::subject(evaluation, margin.scope),
                if decision.value < 0.0 { "is above" } else { "does not exceed" },
                phrase::number(limit.value),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: claim.value, dimension: Dimension::Fraction }),
            limit: Some(Figure { value: limit.value, dimension: Dimension::Fraction }),
            ..Explanation::default()
        }
    }
}

/// Petela's factor of the hottest source, where radiation is all that drives the component.
fn limit(view: View<'_>, component: &Component) -> Option<Dual> {
    let process = &view.model.process;
    if component.kind == Kind::HeatEngine {
        // Its claims are held against its own sink.
        return None;
    }
    let t0 = process.environment.temperature;
    let mut hottest: Option<Dual> = None;
    for &f in &component.inlets {
        let Carried::Radiation(_, t) = process.flows[f].carried else { return None };
        let t = view.var(t).ok()?;
        if hottest.as_ref().is_none_or(|h| t.value > h.value) {
            hottest = Some(t);
        }
    }
    let t = hottest?;
    let r = t0 / t.value;
    let slope = (4.0 / 3.0 * r - 4.0 / 3.0 * r.powi(4)) / t.value;
    Some(t.map(1.0 - 4.0 / 3.0 * r + r.powi(4) / 3.0, slope))
}
