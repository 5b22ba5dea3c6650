//! pipe-against-entropy

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::Property;
use crate::model::{Decision, Margin, Scope};
use crate::process::kinds::Kind;
use crate::quantity::Dimension;

/// Between the two ends of a pipe entropy is destroyed.
///
/// A pipe does no work, so that what passes it can only lose pressure, and its temperature changes
/// only by heat, by the drop of pressure, or by height and speed.
pub struct PipeAgainstEntropy;

static INFO: RuleInfo = RuleInfo {
    name: "pipe-against-entropy",
    title: "Pipe between two readings",
    authority: Authority::Law,
    severity: Severity::Major,
    aspect: Aspect::Entropy,
    inequality: "σ = m (s2 − s1) + Q/T ≥ 0",
    applies_to: "pipes, and flows described by two ends",
    needs: "two properties at both ends, the amount",
    typical_cause: "a biased reading at one end, a gauge pressure read as absolute",
    source: "second law; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 6",
    breaking: Case::Description(
        r#"{"components": {"line": {"kind": "pipe"}},
            "flows": {
              "near": {"kind": "material", "to": "line", "fluid": "water", "pressure": "10.00 bar", "temperature": "250.0 degC", "mass_flow": "3 kg/s"},
              "far": {"kind": "material", "from": "line", "fluid": "water", "pressure": "11.00 bar", "temperature": "251.9 degC", "mass_flow": "3 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"line": {"kind": "pipe"}},
            "flows": {
              "near": {"kind": "material", "to": "line", "fluid": "water", "pressure": "11.00 bar", "temperature": "251.9 degC", "mass_flow": "3 kg/s"},
              "far": {"kind": "material", "from": "line", "fluid": "water", "pressure": "10.00 bar", "mass_flow": "3 kg/s"}}}"#,
    ),
};

impl Rule for PipeAgainstEntropy {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            if component.kind != Kind::Pipe {
                continue;
            }
            if let Some((sigma, throughput)) = physics::generation(evaluation, k) {
                out.push(measure::lower_bound(me, Scope::Component(k), sigma, throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let view = evaluation.view;
        let component = &view.model.process.components[k];
        let ends = measure::single_passage(view, component);
        let pair = |property: Property, dimension: Dimension| {
            let (first, second) = ends?;
            let at = |f: usize| {
                let state = view.model.process.flows[f].material()?.state;
                view.property(state, property).ok().map(|x| phrase::figure(x.value, dimension))
            };
            Some(format!("{} to {}", at(first)?, at(second)?))
        };
        let changes = match (
            pair(Property::Pressure, Dimension::Pressure),
            pair(Property::Temperature, Dimension::Temperature),
        ) {
            (Some(p), Some(t)) => format!(" from {p} and from {t}"),
            _ => String::new(),
        };
        let dimension = phrase::entropy_dimension(evaluation);
        Explanation {
            statement: format!(
                "What passes {}{changes} would {} entropy, σ = {}{}.",
                phrase::subject(evaluation, margin.scope),
                if decision.value < 0.0 { "destroy" } else { "generate" },
                phrase::figure(decision.value, dimension),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            ..Explanation::default()
        }
    }
}
