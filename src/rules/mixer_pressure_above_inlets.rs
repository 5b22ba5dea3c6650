//! mixer-pressure-above-inlets

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::{Pair, Property};
use crate::model::{Decision, Dual, Margin, Scope, View};
use crate::process::Component;
use crate::quantity::Dimension;

/// Streams that join without work leave at a higher pressure than their entropy allows.
///
/// The highest pressure at which the joint stream could leave is that of a reversible device: its
/// entropy equals what the streams bring along. For streams that are alike this is close to the
/// highest pressure that enters; an ejector may lie above its suction but not above this bound.
pub struct MixerPressureAboveInlets;

static INFO: RuleInfo = RuleInfo {
    name: "mixer-pressure-above-inlets",
    title: "Pressure after joining",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "p_out ≤ p(h = Σ m h / Σ m, s = Σ m s / Σ m)",
    applies_to: "adiabatic mixers, drums, deaerators and ejectors of one fluid",
    needs: "amounts, two properties a stream, the outlet pressure",
    typical_cause: "a gauge pressure read as absolute",
    source: "entropy balance; for ejectors Elrod, J. Appl. Mech. 12 (1945) A170",
    breaking: Case::Description(
        r#"{"components": {"joint": {"kind": "mixer"}},
            "flows": {
              "a": {"kind": "material", "to": "joint", "fluid": "water", "pressure": "2.00 bar", "temperature": "60.0 degC", "mass_flow": "1 kg/s"},
              "b": {"kind": "material", "to": "joint", "fluid": "water", "pressure": "2.00 bar", "temperature": "58.0 degC", "mass_flow": "1 kg/s"},
              "c": {"kind": "material", "from": "joint", "fluid": "water", "pressure": "9.00 bar"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"joint": {"kind": "mixer"}},
            "flows": {
              "a": {"kind": "material", "to": "joint", "fluid": "water", "pressure": "2.00 bar", "temperature": "60.0 degC", "mass_flow": "1 kg/s"},
              "b": {"kind": "material", "to": "joint", "fluid": "water", "pressure": "2.00 bar", "temperature": "58.0 degC", "mass_flow": "1 kg/s"},
              "c": {"kind": "material", "from": "joint", "fluid": "water", "pressure": "1.90 bar"}}}"#,
    ),
};

impl Rule for MixerPressureAboveInlets {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        let process = &view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            if !physics::joins(component.kind) || !measure::is_adiabatic(process, component) {
                continue;
            }
            if let Some((limit, outlet)) = limit(view, component) {
                let throughput = limit.value.abs() + outlet.value.abs();
                out.push(measure::lower_bound(me, Scope::Component(k), limit.minus(&outlet), throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let component = &evaluation.view.model.process.components[k];
        let Some((limit, outlet)) = limit(evaluation.view, component) else { return Explanation::default() };
        Explanation {
            statement: format!(
                "What leaves {} at {} {} the {} at which joining would be reversible{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(outlet.value, Dimension::Pressure),
                if decision.value < 0.0 { "is above" } else { "is not above" },
                phrase::figure(limit.value, Dimension::Pressure),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: outlet.value, dimension: Dimension::Pressure }),
            limit: Some(Figure { value: limit.value, dimension: Dimension::Pressure }),
            ..Explanation::default()
        }
    }
}

/// The reversible pressure of the joint stream, and the pressure at which it leaves.
fn limit(view: View<'_>, component: &Component) -> Option<(Dual, Dual)> {
    let process = &view.model.process;
    let [side] = &component.sides[..] else { return None };
    let [outlet] = side.outlets[..] else { return None };
    let last = process.flows[outlet].material()?;
    let fluid = process.states[last.state].fluid;
    let (mut mass, mut enthalpy, mut entropy) = (Dual::default(), Dual::default(), Dual::default());
    for &f in &side.inlets {
        let m = process.flows[f].material()?;
        let moves = m.velocity.is_some() || m.elevation.is_some();
        if process.states[m.state].fluid != fluid || process.states[m.state].c.is_some() || moves {
            return None;
        }
        let amount = view.mass(f).ok()?;
        enthalpy.add_scaled(1.0, &amount.times(&view.property(m.state, Property::Enthalpy).ok()?));
        entropy.add_scaled(1.0, &amount.times(&view.property(m.state, Property::Entropy).ok()?));
        mass.add_scaled(1.0, &amount);
    }
    if mass.value <= 0.0 {
        return None;
    }
    let h = enthalpy.times(&mass.reciprocal());
    let s = entropy.times(&mass.reciprocal());
    let engine = &process.fluids[fluid].engine;
    let at = engine.state(Pair::EnthalpyEntropy, h.value, s.value, 0.0).ok()?;
    // dh = T ds + v dp.
    let (by_h, by_s) = (1.0 / at.volume, -at.temperature / at.volume);
    Some((
        physics::combine(at.pressure, &[(&h, by_h), (&s, by_s)]),
        view.property(last.state, Property::Pressure).ok()?,
    ))
}
