//! filling-hotter-than-limit

use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, hottest, measure, physics};
use crate::balance::Evaluation;
use crate::fluid::{Pair, Property, Substance};
use crate::model::{Decision, Dual, Margin};
use crate::process::{Carried, ComponentId};

/// The gas in a vessel that was filled is hotter than filling without heat loss can make it.
///
/// What enters brings its enthalpy along. In a rigid vessel without heat and work it all becomes
/// internal energy, which for an evacuated vessel means γ times the temperature of the line; heat to
/// the wall only lowers it.
pub struct FillingHotterThanLimit;

static INFO: RuleInfo = RuleInfo {
    name: "filling-hotter-than-limit",
    title: "Temperature after filling",
    authority: Authority::Law,
    severity: Severity::Major,
    aspect: Aspect::Closure,
    inequality: "u2 ≤ (Σ m h + U1) / m2; for an evacuated vessel T2 ≤ γ T_line",
    applies_to: "rigid vessels with one gas in the end, without work and without heat entering",
    needs: "amounts and temperatures",
    typical_cause: "a reading in the jet, heat taken up from the wall",
    source: "Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 4",
    breaking: Case::Description(
        r#"{"basis": "amount", "components": {"tank": {"kind": "storage", "holdup": {
              "initial": [],
              "final": [{"fluid": "air", "volume": "0.500 m3", "pressure": "8.00 bar", "temperature": "480.0 K"}]}}},
            "flows": {
              "line": {"kind": "material", "to": "tank", "fluid": "air", "pressure": "10.00 bar", "temperature": "300.0 K"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"basis": "amount", "components": {"tank": {"kind": "storage", "holdup": {
              "initial": [],
              "final": [{"fluid": "air", "volume": "0.500 m3", "pressure": "8.00 bar", "temperature": "419.2 K"}]}}},
            "flows": {"line": {"kind": "material", "to": "tank", "fluid": "air", "pressure": "10.00 bar", "temperature": "300.0 K"}}}"#,
    ),
};

impl Rule for FillingHotterThanLimit {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        hottest::margins(me, temperatures, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let words = ["The gas in", "ends at", "filling without heat loss gives at most"];
        hottest::explain(temperatures, evaluation, margin, decision, words)
    }
}

/// The temperature that the energy brought along would give the final gas, with what a balance of
/// design data may be open, and its temperature as given.
fn temperatures(evaluation: &Evaluation<'_>, k: ComponentId) -> Option<(Dual, Dual)> {
    let view = evaluation.view;
    let process = &view.model.process;
    let component = &process.components[k];
    let heated =
        component.inlets.iter().any(|&f| matches!(process.flows[f].carried, Carried::Heat(..) | Carried::Radiation(..)));
    if heated || physics::has_work(process, component) {
        return None;
    }
    let holdup = component.holdup.as_ref()?;
    let [content] = &holdup.r#final[..] else { return None };
    let fluid = &process.fluids[process.states[content.state].fluid];
    let gas = matches!(fluid.substance, Substance::Gas(_));
    let fills = component.inlets.iter().any(|&f| process.flows[f].material().is_some());
    if !gas || !fills || holdup.boundary_pressure.is_some() {
        return None;
    }
    let (surplus, throughput) = physics::energy_surplus(evaluation, k)?;
    let mass = view.mass_of(content.state, content.amount, content.form).ok()?;
    if mass.value <= 0.0 {
        return None;
    }
    let open = Dual::constant(measure::allowance(process, throughput));
    let p = view.property(content.state, Property::Pressure).ok()?;
    let v = view.property(content.state, Property::Volume).ok()?;
    let actual = view.property(content.state, Property::Temperature).ok()?;
    let mut u = view.property(content.state, Property::Enthalpy).ok()?.minus(&p.times(&v));
    u.add_scaled(1.0, &open.plus(surplus).times(&mass.reciprocal()));
    // u of an ideal gas depends on T alone.
    let mut t = actual.value;
    for _ in 0..50 {
        let at = fluid.engine.state(Pair::PressureTemperature, p.value, t, 0.0).ok()?;
        let cv = at.heat_capacity()? - p.value * at.volume / t;
        let step = (u.value - at.internal_energy()) / cv;
        t += step;
        if step.abs() <= 1e-10 * t {
            return Some((u.map(t, 1.0 / cv), actual));
        }
    }
    None
}
