//! mixed-temperature-out-of-bounds

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::Property;
use crate::model::{Decision, Dual, Margin, Scope, View};
use crate::process::kinds::Kind;
use crate::process::Component;
use crate::quantity::Dimension;

/// A joint stream leaves with more enthalpy than any of the streams that joined, or with less.
///
/// Without heat and work its enthalpy lies between theirs. Temperatures obey the same bound only where
/// the specific heats are equal and constant, so enthalpies are compared.
pub struct MixedTemperatureOutOfBounds;

static INFO: RuleInfo = RuleInfo {
    name: "mixed-temperature-out-of-bounds",
    title: "Enthalpy after joining",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::Closure,
    inequality: "min h_in ≤ h_out ≤ max h_in",
    applies_to: "adiabatic mixers, drums and deaerators of one fluid with one outlet",
    needs: "two properties a stream",
    typical_cause: "a temperature reading, heat that was not declared",
    source: "conservation of energy",
    breaking: Case::Description(
        r#"{"components": {"joint": {"kind": "mixer"}},
            "flows": {
              "a": {"kind": "material", "to": "joint", "fluid": "water", "pressure": "2.00 bar", "temperature": "60.0 degC", "mass_flow": "1 kg/s"},
              "b": {"kind": "material", "to": "joint", "fluid": "water", "pressure": "2.00 bar", "temperature": "30.0 degC", "mass_flow": "1 kg/s"},
              "c": {"kind": "material", "from": "joint", "fluid": "water", "pressure": "1.90 bar", "temperature": "75.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"joint": {"kind": "mixer"}},
            "flows": {
              "a": {"kind": "material", "to": "joint", "fluid": "water", "pressure": "2.00 bar", "temperature": "60.0 degC", "mass_flow": "1 kg/s"},
              "b": {"kind": "material", "to": "joint", "fluid": "water", "pressure": "2.00 bar", "temperature": "30.0 degC", "mass_flow": "1 kg/s"},
              "c": {"kind": "material", "from": "joint", "fluid": "water", "pressure": "1.90 bar"}}}"#,
    ),
};

impl Rule for MixedTemperatureOutOfBounds {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        let process = &view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            let joins = physics::joins(component.kind) && component.kind != Kind::Ejector;
            if !joins || !measure::is_adiabatic(process, component) {
                continue;
            }
            let Some([low, high, after]) = enthalpies(view, component) else { continue };
            let scale = high.value - low.value + (after.value - low.value).abs() + 1.0;
            for (detail, form) in [(0, after.clone().minus(&low)), (1, high.minus(&after))] {
                out.push(Margin { detail, ..measure::lower_bound(me, Scope::Component(k), form, scale) });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let component = &evaluation.view.model.process.components[k];
        let Some([low, high, after]) = enthalpies(evaluation.view, component) else {
            return Explanation::default();
        };
        let bound = if margin.detail == 0 { low.value } else { high.value };
        let figure = |h: f64| phrase::figure(h, Dimension::SpecificEnergy);
        Explanation {
            statement: format!(
                "What leaves {} has an enthalpy of {}; the streams that join have {} to {}{}.",
                phrase::subject(evaluation, margin.scope),
                figure(after.value),
                figure(low.value),
                figure(high.value),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: after.value, dimension: Dimension::SpecificEnergy }),
            limit: Some(Figure { value: bound, dimension: Dimension::SpecificEnergy }),
            ..Explanation::default()
        }
    }
}

/// Lowest and highest enthalpy of the streams that join, and that of the joint stream.
fn enthalpies(view: View<'_>, component: &Component) -> Option<[Dual; 3]> {
    let process = &view.model.process;
    let [side] = &component.sides[..] else { return None };
    let [outlet] = side.outlets[..] else { return None };
    let last = process.flows[outlet].material()?;
    let fluid = process.states[last.state].fluid;
    let mut range: Option<(Dual, Dual)> = None;
    for &f in &side.inlets {
        let m = process.flows[f].material()?;
        if process.states[m.state].fluid != fluid || process.states[m.state].c.is_some() || side.pool {
            return None;
        }
        let h = view.property(m.state, Property::Enthalpy).ok()?;
        range = Some(match range {
            None => (h.clone(), h),
            Some((low, high)) => (
                if h.value < low.value { h.clone() } else { low },
                if h.value > high.value { h } else { high },
            ),
        });
    }
    let (low, high) = range?;
    Some([low, high, view.property(last.state, Property::Enthalpy).ok()?])
}
