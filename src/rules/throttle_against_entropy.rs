//! throttle-against-entropy

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};
use crate::fluid::Property;
use crate::process::kinds::Kind;
use crate::quantity::Dimension;

/// The entropy of a fluid falls across a throttle.
///
/// A throttle takes neither heat nor work, so that the entropy of what passes can only rise; at equal
/// enthalpy that means that the pressure falls.
pub struct ThrottleAgainstEntropy;

static INFO: RuleInfo = RuleInfo {
    name: "throttle-against-entropy",
    title: "Throttle",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "s2 ≥ s1; with h2 = h1 this is p2 ≤ p1",
    applies_to: "valves without heat",
    needs: "two properties before and after",
    typical_cause: "swapped readings before and after, a gauge pressure read as absolute",
    source: "second law; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 6",
    breaking: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "12.0 bar", "temperature": "250.0 degC", "mass_flow": "1.5 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "30.0 bar", "temperature": "277.6 degC", "mass_flow": "1.5 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "30.0 bar", "temperature": "277.6 degC", "mass_flow": "1.5 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "12.0 bar", "mass_flow": "1.5 kg/s"}}}"#,
    ),
};

impl Rule for ThrottleAgainstEntropy {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            if component.kind != Kind::Valve || !measure::is_adiabatic(process, component) {
                continue;
            }
            let Some((before, after)) = measure::single_passage(evaluation.view, component) else { continue };
            if let Some((rise, throughput)) = measure::entropy_rise(evaluation.view, k, before, after) {
                out.push(measure::lower_bound(me, Scope::Component(k), rise, throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let process = &evaluation.view.model.process;
        let pressure = |f: usize| {
            let state = process.flows[f].material()?.state;
            evaluation.view.property(state, Property::Pressure).ok().map(|p| p.value)
        };
        let ends = measure::single_passage(evaluation.view, &process.components[k])
            .and_then(|(before, after)| Some((pressure(before)?, pressure(after)?)));
        let pressures = match ends {
            Some((p1, p2)) => format!(
                ", while its pressure {} from {} to {}",
                if p2 > p1 { "rises" } else { "falls" },
                phrase::figure(p1, Dimension::Pressure),
                phrase::figure(p2, Dimension::Pressure)
            ),
            None => String::new(),
        };
        Explanation {
            statement: format!(
                "The entropy of what passes {} {} by {}{pressures}; without heat it cannot fall{}.",
                phrase::subject(evaluation, margin.scope),
                if decision.value < 0.0 { "falls" } else { "rises" },
                phrase::figure(decision.value.abs(), Dimension::SpecificEntropy),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: decision.value, dimension: Dimension::SpecificEntropy }),
            limit: Some(Figure { value: 0.0, dimension: Dimension::SpecificEntropy }),
            ..Explanation::default()
        }
    }
}
