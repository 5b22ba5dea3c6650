//! batch-entropy-negative

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};

/// The contents of a vessel end with less entropy than the batch can leave them.
///
/// What entropy the contents lose must have gone with heat or with material; what is left over is
/// generated and cannot be negative.
pub struct BatchEntropyNegative;

static INFO: RuleInfo = RuleInfo {
    name: "batch-entropy-negative",
    title: "Entropy of a batch",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "S2 − S1 ≥ Σ Qin/T − Σ Qout/T + Σ (m s)in − Σ (m s)out",
    applies_to: "components with a holdup",
    needs: "contents before and after, heats with their temperatures",
    typical_cause: "contents that are not uniform, swapped readings before and after",
    source: "second law; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 6",
    breaking: Case::Description(
        r#"{"basis": "amount", "fluids": {"block": {"kind": "incompressible", "specific_heat": "0.45 kJ/(kg K)", "density": "7870 kg/m3", "solid": true}, "bath": {"kind": "incompressible", "specific_heat": "4.18 kJ/(kg K)", "density": "1000 kg/m3"}},
            "components": {"tank": {"kind": "storage", "holdup": {
              "initial": [{"fluid": "block", "mass": "5 kg", "pressure": "1.00 bar", "temperature": "31.0 degC"}, {"fluid": "bath", "mass": "20 kg", "pressure": "1.00 bar", "temperature": "30.0 degC"}],
              "final": [{"fluid": "block", "mass": "5 kg", "pressure": "1.00 bar", "temperature": "120.0 degC"}, {"fluid": "bath", "mass": "20 kg", "pressure": "1.00 bar", "temperature": "27.6 degC"}]}}},
            "flows": {}}"#,
    ),
    keeping: Case::Description(
        r#"{"basis": "amount", "fluids": {"block": {"kind": "incompressible", "specific_heat": "0.45 kJ/(kg K)", "density": "7870 kg/m3", "solid": true}, "bath": {"kind": "incompressible", "specific_heat": "4.18 kJ/(kg K)", "density": "1000 kg/m3"}},
            "components": {"tank": {"kind": "storage", "holdup": {
              "initial": [{"fluid": "block", "mass": "5 kg", "pressure": "1.00 bar", "temperature": "120.0 degC"}, {"fluid": "bath", "mass": "20 kg", "pressure": "1.00 bar", "temperature": "30.0 degC"}],
              "final": [{"fluid": "block", "mass": "5 kg", "pressure": "1.00 bar"}, {"fluid": "bath", "mass": "20 kg", "pressure": "1.00 bar"}]}}},
            "flows": {}}"#,
    ),
};

impl Rule for BatchEntropyNegative {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            if component.holdup.is_none() {
                continue;
            }
            if let Some((sigma, throughput)) = physics::generation(evaluation, k) {
                out.push(measure::lower_bound(me, Scope::Component(k), sigma, throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let dimension = phrase::entropy_dimension(evaluation);
        Explanation {
            statement: format!(
                "Between before and after, the contents of {} and what passed its boundary {} {} of entropy{}.",
                phrase::subject(evaluation, margin.scope),
                if decision.value < 0.0 { "lost" } else { "gained" },
                phrase::figure(decision.value.abs(), dimension),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            ..Explanation::default()
        }
    }
}
