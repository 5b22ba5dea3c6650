//! passive-pressure-rise

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::fluid::Property;
use crate::model::{Decision, Dual, Margin, Scope, View};
use crate::process::kinds::Kind;
use crate::process::{Component, FlowId};
use crate::quantity::Dimension;

/// The pressure rises in a device that does no work on what passes.
///
/// At equal total enthalpy the total pressure falls wherever entropy is generated. Static head is left
/// out: lines with a height given are judged by their entropy alone, as are heated ones.
pub struct PassivePressureRise;

static INFO: RuleInfo = RuleInfo {
    name: "passive-pressure-rise",
    title: "Pressure rise without work",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "p1 + w1²/(2 v1) ≥ p2 + w2²/(2 v2)",
    applies_to: "adiabatic, level valves and pipes",
    needs: "pressures before and after, speeds where they matter",
    typical_cause: "a gauge pressure read as absolute, a static head, static and total pressure mixed up",
    source: "entropy balance: σ = −m ∫ v dp/T at constant total enthalpy",
    breaking: Case::Description(
        r#"{"components": {"strainer": {"kind": "valve"}},
            "flows": {
              "before": {"kind": "material", "to": "strainer", "fluid": "water", "pressure": "3.00 bar", "temperature": "40.00 degC", "mass_flow": "2 kg/s"},
              "after": {"kind": "material", "from": "strainer", "fluid": "water", "pressure": "9.00 bar", "temperature": "39.85 degC", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"strainer": {"kind": "valve"}},
            "flows": {
              "before": {"kind": "material", "to": "strainer", "fluid": "water", "pressure": "9.00 bar", "temperature": "39.85 degC", "mass_flow": "2 kg/s"},
              "after": {"kind": "material", "from": "strainer", "fluid": "water", "pressure": "3.00 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for PassivePressureRise {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        let process = &view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            if !matches!(component.kind, Kind::Valve | Kind::Pipe) || !measure::is_adiabatic(process, component) {
                continue;
            }
            if let Some((before, after)) = ends(view, component) {
                let throughput = before.value.abs() + after.value.abs();
                out.push(measure::lower_bound(me, Scope::Component(k), before.minus(&after), throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let Some((before, after)) = ends(evaluation.view, &evaluation.view.model.process.components[k]) else {
            return Explanation::default();
        };
        let figure = |p: f64| phrase::figure(p, Dimension::Pressure);
        Explanation {
            statement: format!(
                "The total pressure in {} {} from {} to {}, without work or heat{}.",
                phrase::subject(evaluation, margin.scope),
                if decision.value < 0.0 { "rises" } else { "changes" },
                figure(before.value),
                figure(after.value),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: after.value, dimension: Dimension::Pressure }),
            limit: Some(Figure { value: before.value, dimension: Dimension::Pressure }),
            ..Explanation::default()
        }
    }
}

/// Total pressures before and after, where no height is given.
fn ends(view: View<'_>, component: &Component) -> Option<(Dual, Dual)> {
    let (before, after) = measure::single_passage(view, component)?;
    let total = |f: FlowId| {
        let m = view.model.process.flows[f].material()?;
        if m.elevation.is_some() {
            return None;
        }
        let mut p = view.property(m.state, Property::Pressure).ok()?;
        if let Some(w) = m.velocity {
            let w = view.var(w).ok()?;
            let v = view.property(m.state, Property::Volume).ok()?;
            p.add_scaled(1.0, &w.map(0.5 * w.value * w.value, w.value).times(&v.reciprocal()));
        }
        Some(p)
    };
    Some((total(before)?, total(after)?))
}
