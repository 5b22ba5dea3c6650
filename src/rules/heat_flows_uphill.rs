//! heat-flows-uphill

use super::measure::is_passive;
use crate::balance::reservoir::Reservoirs;
use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};
use crate::process::kinds::Kind;
use crate::quantity::Dimension;

/// Heat passes from cold to hot and nothing drives it.
///
/// A device without work, material or contents can only let heat run down. The temperatures compared
/// are entropic means, so several heats on one side are judged together; where their shares are not
/// known, the hottest source and the coldest sink decide. An absorption machine is driven by heat and
/// judged by its own limit.
pub struct HeatFlowsUphill;

static INFO: RuleInfo = RuleInfo {
    name: "heat-flows-uphill",
    title: "Heat against its gradient",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "T of heat in ≥ T of heat out (entropic means) for a device without work",
    applies_to: "components with heat in and heat out, and neither work nor material",
    needs: "boundary temperatures of the heats",
    typical_cause: "reversed direction of a heat, swapped temperatures",
    source: "second law, statement of Clausius; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 5",
    breaking: Case::Description(
        r#"{"components": {"wall": {"kind": "control_volume"}},
            "flows": {
              "in": {"kind": "heat", "to": "wall", "rate": "5 kW", "temperature": "20.0 degC"},
              "out": {"kind": "heat", "from": "wall", "rate": "5 kW", "temperature": "60.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"wall": {"kind": "control_volume"}},
            "flows": {
              "in": {"kind": "heat", "to": "wall", "rate": "5 kW", "temperature": "60.0 degC"},
              "out": {"kind": "heat", "from": "wall", "rate": "5 kW", "temperature": "20.0 degC"}}}"#,
    ),
};

impl Rule for HeatFlowsUphill {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        for (k, component) in evaluation.view.model.process.components.iter().enumerate() {
            if component.kind == Kind::AbsorptionMachine || !is_passive(evaluation, k) {
                continue;
            }
            let Some(reservoirs) = Reservoirs::of(evaluation.view, k) else { continue };
            if let (Some(source), Some(sink)) = (reservoirs.source_temperature(), reservoirs.sink_temperature()) {
                let throughput = source.value + sink.value;
                out.push(measure::lower_bound(me, Scope::Component(k), source.minus(&sink), throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let ends = Reservoirs::of(evaluation.view, k)
            .and_then(|r| Some((r.source_temperature()?.value, r.sink_temperature()?.value)));
        let Some((source, sink)) = ends else { return Explanation::default() };
        let comparison = if decision.at_limit {
            "which is the same".to_owned()
        } else {
            let size = phrase::figure(decision.value.abs(), Dimension::TemperatureDifference);
            format!("{size} {}", if decision.value < 0.0 { "hotter" } else { "colder" })
        };
        Explanation {
            statement: format!(
                "Without work, {} passes heat from {} to {}, {comparison}{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(source, Dimension::Temperature),
                phrase::figure(sink, Dimension::Temperature),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: decision.value, dimension: Dimension::TemperatureDifference }),
            limit: Some(Figure { value: 0.0, dimension: Dimension::TemperatureDifference }),
            ..Explanation::default()
        }
    }
}
