//! state-outside-formulation

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, humidity_above_saturation, humidity_ratio_above_saturation, measure, phrase, quality_out_of_range};
use crate::balance::Evaluation;
use crate::fluid::PropertyError;
use crate::model::{Blocked, Decision, Margin};
use crate::quantity::Dimension;

/// A state cannot be: it lies outside the range of the property formulation, or its equations have no
/// solution there.
///
/// Nothing that hangs on such a state can be tested; everything else still is. A figure that the
/// description leaves open is not meant here, nor a quality that is itself out of range.
pub struct StateOutsideFormulation;

static INFO: RuleInfo = RuleInfo {
    name: "state-outside-formulation",
    title: "State outside the formulation",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::State,
    inequality: "the state lies within the range of its formulation",
    applies_to: "every state",
    needs: "what fixes the state",
    typical_cause: "a unit error, a misread tag",
    source: "the range published with the formulation",
    breaking: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "2500 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "450.0 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for StateOutsideFormulation {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (s, spec) in view.model.process.states.iter().enumerate() {
            if !matches!(view.state(s), Err(Blocked::State(_)))
                || matches!(view.workspace.state_error(s), None | Some(PropertyError::Unstated(_)))
            {
                continue;
            }
            // What another rule names better is left to it.
            if quality_out_of_range::is_broken(view, s)
                || humidity_above_saturation::is_broken(view, s)
                || humidity_ratio_above_saturation::is_broken(view, s)
            {
                continue;
            }
            let scope = measure::scope_of_state(&view.model.process, s);
            out.push(Margin { detail: s, ..measure::fact(me, scope, spec.pointer.clone()) });
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, _: &Decision) -> Explanation {
        let view = evaluation.view;
        let s = margin.detail;
        let Some(error) = view.workspace.state_error(s) else { return Explanation::default() };
        let fluid = &view.model.process.fluids[view.model.process.states[s].fluid];
        let mut explanation = Explanation {
            statement: format!(
                "The state of {} cannot be had from {}: {error}.",
                phrase::state(evaluation, s),
                fluid.engine.provenance().formulation,
            ),
            ..Explanation::default()
        };
        if let PropertyError::OutOfRange { unit, value, min, max, .. } = *error
            && let Some(dimension) = dimension(unit)
        {
            explanation.value = Some(Figure { value, dimension });
            explanation.limit = Some(Figure { value: if value < min { min } else { max }, dimension });
        }
        explanation
    }
}

/// What is measured in an SI unit of a range.
fn dimension(unit: &str) -> Option<Dimension> {
    Some(match unit {
        "K" => Dimension::Temperature,
        "Pa" => Dimension::Pressure,
        "J/kg" => Dimension::SpecificEnergy,
        "J/(kg K)" => Dimension::SpecificEntropy,
        _ => return None,
    })
}
