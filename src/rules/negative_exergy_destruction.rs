//! negative-exergy-destruction

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};

/// A component or the plant makes exergy.
///
/// Destruction is T0 σ: the same defect as a negative entropy generation, as a power. What an open
/// energy balance carries is not counted.
pub struct NegativeExergyDestruction;

static INFO: RuleInfo = RuleInfo {
    name: "negative-exergy-destruction",
    title: "Exergy destruction",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "E destroyed = T0 σ = E fuel − E product − E lost ≥ 0",
    applies_to: "every component and the plant",
    needs: "the exergy balance",
    typical_cause: "swapped readings, wrong phase, a missing stream, a unit or gauge error",
    source: "Bejan, Tsatsaronis & Moran, Thermal Design and Optimization, 1996, ch. 3",
    breaking: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "10.0 bar", "temperature": "376.5 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "temperature": "376.5 degC", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for NegativeExergyDestruction {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let Some(exergies) = &evaluation.exergies else { return };
        let components = exergies.components.iter().enumerate().map(|(k, b)| (Scope::Component(k), b));
        // The plant of one component is that component.
        let plant = (exergies.components.len() > 1).then_some((Scope::Plant, &exergies.plant));
        for (scope, balance) in components.chain(plant) {
            if let Ok(b) = balance {
                out.push(measure::lower_bound(me, scope, b.destruction.clone(), b.throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let dimension = phrase::energy_dimension(evaluation);
        let verb = if decision.value < 0.0 { "makes" } else { "destroys" };
        Explanation {
            statement: phrase::sentence(format!(
                "{} {verb} {} of exergy{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(decision.value.abs(), dimension),
                phrase::sureness(decision),
            )),
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            ..Explanation::default()
        }
    }
}
