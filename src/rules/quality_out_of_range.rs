//! quality-out-of-range

use super::remark;
use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::fluid::{Pair, Property};
use crate::model::{Decision, Dual, Margin, View};
use crate::process::{StateForm, StateId, StateSpec};
use crate::quantity::Dimension;

/// A quality is given that is below zero or above one.
///
/// The quality is the share of vapour in the mass; nothing has less than none or more than all.
pub struct QualityOutOfRange;

static INFO: RuleInfo = RuleInfo {
    name: "quality-out-of-range",
    title: "Quality out of range",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::State,
    inequality: "0 ≤ x ≤ 1",
    applies_to: "states whose quality is given",
    needs: "the quality",
    typical_cause: "an energy balance behind the figure that does not close, per cent taken for a fraction",
    source: "definition of the quality",
    breaking: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "5.00 bar", "mass_flow": "2 kg/s", "quality": 1.08},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "3.00 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "5.00 bar", "mass_flow": "2 kg/s", "quality": 0.92},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "3.00 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for QualityOutOfRange {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        let process = &view.model.process;
        for (s, spec) in process.states.iter().enumerate() {
            let Some(quality) = given(view, spec) else { continue };
            if remark::covers(INFO.name, evaluation, &spec.pointer) {
                continue;
            }
            let x = quality.value;
            let form = if x < 0.0 {
                quality
            } else if x > 1.0 {
                Dual::constant(1.0).minus(&quality)
            } else {
                // Saturated states are exactly at the limit, whatever their digits.
                Dual::constant(x.min(1.0 - x))
            };
            out.push(Margin {
                pointer: Some(spec.pointer.clone()),
                detail: s,
                ..measure::lower_bound(me, measure::scope_of_state(process, s), form, 1.0)
            });
        }
        remark::margins(me, INFO.name, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        if let Some(explanation) = remark::explain(INFO.name, evaluation, margin) {
            return explanation;
        }
        let view = evaluation.view;
        let s = margin.detail;
        let Some(quality) = view.model.process.states.get(s).and_then(|spec| given(view, spec)) else {
            return Explanation::default();
        };
        let x = quality.value;
        Explanation {
            statement: format!(
                "The quality of {} is given as {}; it lies between 0 and 1 by definition{}.",
                phrase::state(evaluation, s),
                phrase::number(x),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: x, dimension: Dimension::Fraction }),
            limit: Some(Figure { value: if x < 0.5 { 0.0 } else { 1.0 }, dimension: Dimension::Fraction }),
            ..Explanation::default()
        }
    }
}

/// The quality that a state is given by, or that is given for it beyond need.
fn given(view: View<'_>, spec: &StateSpec) -> Option<Dual> {
    let coordinate = matches!(
        spec.form,
        StateForm::Pair(Pair::PressureQuality) | StateForm::Pair(Pair::TemperatureQuality)
    );
    let var = if coordinate {
        spec.b
    } else {
        spec.surplus.iter().find(|s| s.property == Property::Quality)?.var
    };
    view.var(var).ok()
}

/// Whether a state is given by a quality that no state can have.
pub(super) fn is_broken(view: View<'_>, s: StateId) -> bool {
    given(view, &view.model.process.states[s]).is_some_and(|x| !(0.0..=1.0).contains(&x.value))
}
