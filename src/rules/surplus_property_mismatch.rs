//! surplus-property-mismatch

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::{Evaluation, Row};
use crate::fluid::{Phase, Property};
use crate::model::{Decision, Dual, Family, Margin, Test};
use crate::process::StateId;

/// A property given beyond need is not that of the state.
///
/// What fixes a state fixes every other property of it. One that was given as well is held against the
/// formulation, whose own uncertainty counts. A surplus property that was spent on an unknown is no
/// test.
pub struct SurplusPropertyMismatch;

static INFO: RuleInfo = RuleInfo {
    name: "surplus-property-mismatch",
    title: "Property given beyond need",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::State,
    inequality: "|property of the state − given| ≤ k u",
    applies_to: "states with more properties given than fix them",
    needs: "the surplus property",
    typical_cause: "a reading, a wrong phase, a table with another datum",
    source: "definition of a state; the property formulation of the fluid",
    breaking: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s", "enthalpy": "3100 kJ/kg"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s", "enthalpy": "3214.4 kJ/kg"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for SurplusPropertyMismatch {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        margins_where(false, me, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        explain_surplus(evaluation, margin, decision)
    }
}

/// Whether a surplus property of a state says again what saturation says: a temperature or
/// pressure in two phases.
fn repeats_saturation(evaluation: &Evaluation<'_>, s: StateId, property: Property) -> bool {
    matches!(property, Property::Temperature | Property::Pressure)
        && evaluation.view.state(s).is_ok_and(|v| v.state.phase == Phase::TwoPhase)
}

/// The margins of the surplus properties that repeat saturation, or of all others.
pub(super) fn margins_where(
    saturation: bool,
    me: usize,
    evaluation: &Evaluation<'_>,
    out: &mut Vec<Margin>,
) {
        let view = evaluation.view;
        let process = &view.model.process;
        for (s, spec) in process.states.iter().enumerate() {
            for (i, surplus) in spec.surplus.iter().enumerate() {
                let row = evaluation.equations.find(Row::Surplus(s, i));
                if row.is_some_and(|row| evaluation.spent_on(row).is_some()) {
                    continue;
                }
                if repeats_saturation(evaluation, s, surplus.property) != saturation {
                    continue;
                }
                if let (Some(own), Ok(given)) = (own(evaluation, s, surplus.property), view.var(surplus.var)) {
                    let throughput = own.value.abs() + given.value.abs();
                    out.push(Margin {
                        family: Family::Closure,
                        test: Test::Zero { allowance: 0.0 },
                        pointer: Some(surplus.pointer.clone()),
                        ..measure::lower_bound(
                            me,
                            measure::scope_of_state(process, s),
                            own.minus(&given),
                            throughput,
                        )
                    });
                }
            }
        }
    }


/// What a surplus property says and what the state says of it.
pub(super) fn explain_surplus(
    evaluation: &Evaluation<'_>,
    margin: &Margin,
    decision: &Decision,
) -> Explanation {
        let view = evaluation.view;
        let found = view.model.process.states.iter().enumerate().find_map(|(s, spec)| {
            let surplus = spec.surplus.iter().find(|x| Some(&x.pointer) == margin.pointer.as_ref())?;
            Some((s, surplus))
        });
        let Some((s, surplus)) = found else { return Explanation::default() };
        let (Some(own), Ok(given)) = (own(evaluation, s, surplus.property), view.var(surplus.var)) else {
            return Explanation::default();
        };
        let dimension = measure::property_dimension(surplus.property);
        Explanation {
            statement: format!(
                "The {} given for {} is {}; by its other properties it is {}, {} {}{}.",
                measure::property_name(surplus.property),
                phrase::state(evaluation, s),
                phrase::figure(given.value, dimension),
                phrase::figure(own.value, dimension),
                phrase::figure(decision.value.abs(), dimension.difference()),
                if decision.value < 0.0 { "less" } else { "more" },
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: given.value, dimension }),
            limit: Some(Figure { value: own.value, dimension }),
            ..Explanation::default()
        }
}

/// A property of a state on the engine's datum; enthalpy and entropy with the uncertainty of the
/// formulation.
fn own(evaluation: &Evaluation<'_>, s: StateId, property: Property) -> Option<Dual> {
    let view = evaluation.view;
    let process = &view.model.process;
    let mut own = view.property(s, property).ok()?;
    let fluid = process.states[s].fluid;
    let reference = &view.model.scales[fluid].reference;
    let above = match property {
        Property::Enthalpy => own.value - reference.0,
        Property::Entropy => own.value - reference.1,
        _ => return Some(own),
    };
    let touching = measure::flow_of_state(process, s).and_then(|f| process.flows[f].to.or(process.flows[f].from));
    if let Some(source) = touching.and_then(|k| view.model.formulation.get(&(k, fluid))) {
        own.terms.push((view.model.source_slot(*source), above * measure::formulation(view, s)));
    }
    Some(own)
}
