//! work-beats-reversible

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Scope};

/// A component delivers more work than its streams and heats could give reversibly.
///
/// The bound is the fall of flow exergy and the exergy of the heat; conditional on a closed energy
/// balance.
pub struct WorkBeatsReversible;

static INFO: RuleInfo = RuleInfo {
    name: "work-beats-reversible",
    title: "Reversible work",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "W out ≤ −ΔE of the streams + Σ Q (1 − T0/T)",
    applies_to: "components that deliver work",
    needs: "streams, heats, powers",
    typical_cause: "a fuel or extraction stream missing, swapped readings",
    source: "Bejan, Tsatsaronis & Moran, Thermal Design and Optimization, 1996, ch. 3",
    breaking: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine"}},
            "flows": {
              "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.00 bar", "temperature": "190.0 degC", "mass_flow": "5 kg/s"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine"}},
            "flows": {
              "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.00 bar", "temperature": "225.0 degC", "mass_flow": "5 kg/s"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
};

impl Rule for WorkBeatsReversible {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        for k in 0..evaluation.components.len() {
            if let Some((_, excess, throughput)) = work(evaluation, k) {
                out.push(measure::lower_bound(me, Scope::Component(k), excess, throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let Some((delivered, excess, _)) = work(evaluation, k) else { return Explanation::default() };
        let dimension = phrase::energy_dimension(evaluation);
        let bound = delivered.value + excess.value;
        let relation = if decision.value < 0.0 { "more than" } else { "no more than" };
        Explanation {
            statement: phrase::sentence(format!(
                "{} delivers {} of work, {relation} the {} that its streams and heats could give \
                 reversibly{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(delivered.value, dimension),
                phrase::figure(bound, dimension),
                phrase::sureness(decision),
            )),
            value: Some(Figure { value: delivered.value, dimension }),
            limit: Some(Figure { value: bound, dimension }),
            ..Explanation::default()
        }
    }
}

/// Net work of a component that turns something else into work, what it falls short of the
/// reversible one, and the scale of rounding.
fn work(evaluation: &Evaluation<'_>, k: usize) -> Option<(Dual, Dual, f64)> {
    let view = evaluation.view;
    let component = view.model.process.components.get(k)?;
    let from_work = component.inlets.iter().any(|&f| {
        matches!(view.model.process.flows[f].carried, crate::process::Carried::Work(..))
    });
    if from_work && !measure::has_material(&view.model.process, component) {
        return None;
    }
    let (delivered, any) = measure::net_work_out(view, component).ok()?;
    let balance = evaluation.exergies.as_ref()?.components.get(k)?.as_ref().ok()?;
    (any && delivered.value > 0.0).then(|| (delivered, balance.destruction.clone(), balance.throughput))
}
