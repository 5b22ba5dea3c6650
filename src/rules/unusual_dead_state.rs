//! unusual-dead-state

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::Environment;
use crate::quantity::Dimension;

/// The environment is one that no plant stands in.
///
/// Exergy is counted from the environment; one that was mistyped shifts every figure. No verdict of
/// the law depends on it.
pub struct UnusualDeadState;

static INFO: RuleInfo = RuleInfo {
    name: "unusual-dead-state",
    title: "Unusual environment",
    authority: Authority::Practice,
    severity: Severity::Minor,
    aspect: Aspect::Practice,
    inequality: "230 K < T0 < 330 K, 0.5 bar < p0 < 1.1 bar",
    applies_to: "every description",
    needs: "the environment",
    typical_cause: "a mistyped temperature or unit, a gauge pressure",
    source: "common practice",
    breaking: Case::Description(
        r#"{"environment": {"temperature": "85 degC", "pressure": "1.010 bar"},
            "components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"environment": {"temperature": "12 degC", "pressure": "1.010 bar"},
            "components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for UnusualDeadState {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let environment = &evaluation.view.model.process.environment;
        for (i, figure) in FIGURES.iter().enumerate() {
            let value = (figure.of)(environment);
            let inside = (value - figure.low).min(figure.high - value);
            out.push(Margin {
                pointer: Some(figure.pointer.to_owned()),
                detail: i,
                ..measure::lower_bound(me, Scope::Description, Dual::constant(inside), value.abs())
            });
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, _: &Decision) -> Explanation {
        let Some(figure) = FIGURES.get(margin.detail) else { return Explanation::default() };
        let value = (figure.of)(&evaluation.view.model.process.environment);
        let limit = if value - figure.low < figure.high - value { figure.low } else { figure.high };
        Explanation {
            statement: format!(
                "The {} of the environment is {}; usual is {} to {}.",
                figure.word,
                phrase::figure(value, figure.dimension),
                phrase::figure(figure.low, figure.dimension),
                phrase::figure(figure.high, figure.dimension),
            ),
            value: Some(Figure { value, dimension: figure.dimension }),
            limit: Some(Figure { value: limit, dimension: figure.dimension }),
            ..Explanation::default()
        }
    }
}

/// One figure of the environment with its usual range, SI.
struct Usual {
    word: &'static str,
    pointer: &'static str,
    dimension: Dimension,
    low: f64,
    high: f64,
    of: fn(&Environment) -> f64,
}

/// Usual ranges: common practice.
static FIGURES: [Usual; 2] = [
    Usual {
        word: "temperature",
        pointer: "/environment/temperature",
        dimension: Dimension::Temperature,
        low: 230.0,
        high: 330.0,
        of: |e| e.temperature,
    },
    Usual {
        word: "pressure",
        pointer: "/environment/pressure",
        dimension: Dimension::Pressure,
        low: 0.5e5,
        high: 1.1e5,
        of: |e| e.pressure,
    },
];
