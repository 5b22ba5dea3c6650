//! humidity-above-saturation

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::fluid::CompositionForm;
use crate::model::{Decision, Dual, Margin, View};
use crate::process::StateId;
use crate::quantity::Dimension;

/// A relative humidity above 100 %.
///
/// Air in equilibrium holds no more vapour than saturation; what is beyond is fog and must be
/// declared as liquid.
pub struct HumidityAboveSaturation;

static INFO: RuleInfo = RuleInfo {
    name: "humidity-above-saturation",
    title: "Relative humidity",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::State,
    inequality: "φ ≤ 1",
    applies_to: "humid air given by its relative humidity",
    needs: "the relative humidity",
    typical_cause: "a sensor, droplets",
    source: "ASHRAE Handbook of Fundamentals, ch. 1",
    breaking: Case::Description(
        r#"{"components": {"duct": {"kind": "valve"}},
            "flows": {
              "in": {"kind": "material", "to": "duct", "fluid": "humid air", "pressure": "1.020 bar", "temperature": "25.0 degC", "relative_humidity": "112 %", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "duct", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "25.0 degC", "humidity_ratio": "0.0100 kg/kg", "mass_flow": "1 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"duct": {"kind": "valve"}},
            "flows": {
              "in": {"kind": "material", "to": "duct", "fluid": "humid air", "pressure": "1.020 bar", "temperature": "25.0 degC", "relative_humidity": "50.0 %", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "duct", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "25.0 degC", "humidity_ratio": "0.00990 kg/kg", "mass_flow": "1 kg/s"}}}"#,
    ),
};

impl Rule for HumidityAboveSaturation {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for s in 0..view.model.process.states.len() {
            if let Some(humidity) = given(view, s) {
                let scope = measure::scope_of_state(&view.model.process, s);
                out.push(Margin {
                    pointer: Some(format!("{}/relative_humidity", view.model.process.states[s].pointer)),
                    detail: s,
                    ..measure::lower_bound(me, scope, Dual::constant(1.0).minus(&humidity), 1.0)
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        Explanation {
            statement: format!(
                "The relative humidity of {} is given as {}{}; beyond 100 % there is fog.",
                phrase::state(evaluation, margin.detail),
                phrase::figure(1.0 - decision.value, Dimension::Fraction),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: 1.0 - decision.value, dimension: Dimension::Fraction }),
            limit: Some(Figure { value: 1.0, dimension: Dimension::Fraction }),
            ..Explanation::default()
        }
    }
}

fn given(view: View<'_>, s: StateId) -> Option<Dual> {
    match view.model.process.states[s].c {
        Some((CompositionForm::RelativeHumidity, v)) => view.var(v).ok(),
        _ => None,
    }
}

/// Whether a state is given with a relative humidity above 100 %.
pub(super) fn is_broken(view: View<'_>, s: StateId) -> bool {
    given(view, s).is_some_and(|humidity| humidity.value > 1.0)
}
