//! flow-above-choked

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::{Engine, Pair, Phase, Property};
use crate::model::{Decision, Dual, Margin, Scope, View};
use crate::process::Component;

/// More gas passes a throat than its smallest cross-section lets through.
///
/// Isentropic expansion to the speed of sound passes the most; beyond it the entropy would have to
/// fall. Applied where the gas stays a gas down to the throat: liquid that flashes late may pass more.
pub struct FlowAboveChoked;

static INFO: RuleInfo = RuleInfo {
    name: "flow-above-choked",
    title: "Choked flow",
    authority: Authority::Law,
    severity: Severity::Major,
    aspect: Aspect::Entropy,
    inequality: "m ≤ A max ρ √(2 (h0 − h)) along s = s0",
    applies_to: "valves, pipes and control volumes with a throat area and one gas",
    needs: "area, state before, amount",
    typical_cause: "a wrong area or amount, a leak beside",
    source: "isentropic flow; Shapiro, The Dynamics and Thermodynamics of Compressible Fluid Flow, 1953",
    breaking: Case::Description(
        r#"{"components": {"orifice": {"kind": "valve", "geometry": {"throat_area": "5.00 cm2"}}},
            "flows": {
              "before": {"kind": "material", "to": "orifice", "fluid": "air", "pressure": "10.00 bar", "temperature": "300.0 K", "mass_flow": "1.500 kg/s"},
              "after": {"kind": "material", "from": "orifice", "fluid": "air", "pressure": "2.000 bar", "temperature": "300.0 K"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"orifice": {"kind": "valve", "geometry": {"throat_area": "5.00 cm2"}}},
            "flows": {
              "before": {"kind": "material", "to": "orifice", "fluid": "air", "pressure": "10.00 bar", "temperature": "300.0 K", "mass_flow": "1.000 kg/s"},
              "after": {"kind": "material", "from": "orifice", "fluid": "air", "pressure": "2.000 bar", "temperature": "300.0 K"}}}"#,
    ),
};

impl Rule for FlowAboveChoked {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (k, component) in view.model.process.components.iter().enumerate() {
            if let Some((limit, actual)) = flows(view, component) {
                let throughput = limit.value + actual.value.abs();
                out.push(Margin {
                    detail: 1,
                    ..measure::lower_bound(me, Scope::Component(k), limit.minus(&actual), throughput)
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let component = &evaluation.view.model.process.components[k];
        let Some((limit, actual)) = flows(evaluation.view, component) else { return Explanation::default() };
        let dimension = phrase::mass_dimension(evaluation);
        Explanation {
            statement: format!(
                "{} passes {}; its throat lets at most {} through{}.",
                phrase::sentence(phrase::subject(evaluation, margin.scope)),
                phrase::figure(actual.value, dimension),
                phrase::figure(limit.value, dimension),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: actual.value, dimension }),
            limit: Some(Figure { value: limit.value, dimension }),
            ..Explanation::default()
        }
    }
}

/// What the throat lets through at most, and what passes, kg/s.
fn flows(view: View<'_>, component: &Component) -> Option<(Dual, Dual)> {
    let area = view.var(component.throat_area?).ok()?;
    let process = &view.model.process;
    let (before, _) = measure::single_passage(view, component)?;
    let m = process.flows[before].material()?;
    if process.basis == crate::process::Basis::Amount || view.state(m.state).ok()?.state.phase != Phase::Vapour {
        return None;
    }
    let speed = match m.velocity {
        Some(w) => view.var(w).ok()?,
        None => Dual::default(),
    };
    let by_speed = |w: f64| {
        let p = view.property(m.state, Property::Pressure).ok()?.value;
        let h = view.property(m.state, Property::Enthalpy).ok()?.value;
        flux(&*process.fluids[process.states[m.state].fluid].engine, p, h, w)
    };
    let w = speed.value;
    let largest = physics::by_state(view, m.state, |engine, p, h| flux(engine, p, h, w))?;
    let step = 0.01 * w.abs() + 0.01;
    let slope = (by_speed(w + step)? - by_speed((w - step).abs())?) / (2.0 * step);
    let largest = largest.plus(&physics::combine(0.0, &[(&speed, slope)]));
    Some((area.times(&largest), view.mass(before).ok()?))
}

/// The largest mass flux along an isentropic expansion from p, h and speed `w`, kg/(m² s).
fn flux(engine: &dyn Engine, p: f64, h: f64, w: f64) -> Option<f64> {
    let start = engine.state(Pair::PressureEnthalpy, p, h, 0.0).ok()?;
    let total = h + 0.5 * w * w;
    let at = |ratio: f64| {
        let state = engine.state(Pair::PressureEntropy, ratio * p, start.entropy, 0.0).ok()?;
        if state.phase != Phase::Vapour {
            return None;
        }
        Some((2.0 * (total - state.enthalpy).max(0.0)).sqrt() / state.volume)
    };
    // The flux has one maximum between vacuum and the pressure before; golden section.
    let golden = 0.5 * (5.0_f64.sqrt() - 1.0);
    let (mut low, mut high) = (0.3, 1.0);
    for _ in 0..60 {
        let (a, b) = (high - golden * (high - low), low + golden * (high - low));
        if at(a)? > at(b)? { high = b } else { low = a }
    }
    at(0.5 * (low + high))
}
