//! reaction-against-affinity

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::Property;
use crate::model::{Decision, Dual, Margin, Scope, View};
use crate::process::kinds::Kind;
use crate::process::{ComponentId, FlowId};

/// At constant temperature and pressure a reaction runs against its affinity.
///
/// What reacts spontaneously at one temperature and pressure loses Gibbs energy: h − T s of what enters
/// is at least that of what leaves, beyond the work that is put in.
pub struct ReactionAgainstAffinity;

static INFO: RuleInfo = RuleInfo {
    name: "reaction-against-affinity",
    title: "Affinity",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Reaction,
    inequality: "Σ A ξ = G_in − G_out + W_in ≥ 0",
    applies_to: "reactors whose streams enter and leave at one temperature and pressure",
    needs: "compositions, temperature, pressure, work",
    typical_cause: "swapped analysers, wet and dry basis mixed up",
    source: "De Donder, T., Van Rysselberghe, P.: Thermodynamic Theory of Affinity, Stanford, 1936",
    breaking: Case::Description(
        r#"{"fluids": {"before": {"kind": "ideal_gas", "mole_fractions": {"CO": 0.20, "H2O": 0.30, "CO2": 0.20, "H2": 0.30}}, "after": {"kind": "ideal_gas", "mole_fractions": {"CO": 0.3500, "H2O": 0.4500, "CO2": 0.0500, "H2": 0.1500}}},
             "components": {"reformer": {"kind": "reactor"}},
            "flows": {
              "in": {"kind": "material", "to": "reformer", "fluid": "before", "temperature": "700.0 K", "pressure": "1.000 bar", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "reformer", "fluid": "after", "temperature": "700.0 K", "pressure": "1.000 bar", "mass_flow": "1 kg/s"},
              "heat": {"kind": "heat", "to": "reformer", "temperature": "700.0 K"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"fluids": {"before": {"kind": "ideal_gas", "mole_fractions": {"CO": 0.20, "H2O": 0.30, "CO2": 0.20, "H2": 0.30}}, "after": {"kind": "ideal_gas", "mole_fractions": {"CO": 0.1600, "H2O": 0.2600, "CO2": 0.2400, "H2": 0.3400}}},
             "components": {"reformer": {"kind": "reactor"}},
            "flows": {
              "in": {"kind": "material", "to": "reformer", "fluid": "before", "temperature": "700.0 K", "pressure": "1.000 bar", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "reformer", "fluid": "after", "temperature": "700.0 K", "pressure": "1.000 bar", "mass_flow": "1 kg/s"},
              "heat": {"kind": "heat", "from": "reformer", "temperature": "700.0 K"}}}"#,
    ),
};

impl Rule for ReactionAgainstAffinity {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for k in 0..process.components.len() {
            if let Some((fall, throughput)) = fall(evaluation, k) {
                out.push(measure::lower_bound(me, Scope::Component(k), fall, throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let dimension = phrase::energy_dimension(evaluation);
        Explanation {
            statement: format!(
                "The reaction in {} {} {} of Gibbs energy at constant temperature and pressure{}.",
                phrase::subject(evaluation, margin.scope),
                if decision.value < 0.0 { "gains" } else { "loses" },
                phrase::figure(decision.value.abs(), dimension),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            ..Explanation::default()
        }
    }
}

/// Largest difference of pressure (share) that still counts as constant (our choice).
const SAME_PRESSURE: f64 = 0.01;

/// The fall of Gibbs energy and the work put in, W or J, with its throughput, where all streams of
/// a reactor have one temperature and pressure.
fn fall(evaluation: &Evaluation<'_>, k: ComponentId) -> Option<(Dual, f64)> {
    let view = evaluation.view;
    let process = &view.model.process;
    let component = &process.components[k];
    let pool = component.sides.iter().any(|s| s.pool);
    if component.kind != Kind::Reactor || !pool || component.holdup.is_some() || view.model.groundless[k] {
        return None;
    }
    let (work, _) = measure::net_work_out(view, component).ok()?;
    let mut out = work.scaled(-1.0);
    let mut first: Option<(f64, f64)> = None;
    let mut throughput = 0.0;
    for (flows, sign) in [(&component.inlets, 1.0), (&component.outlets, -1.0)] {
        for &f in flows.iter().filter(|&&f| process.flows[f].material().is_some()) {
            let (t, p) = conditions(view, f)?;
            let (t0, p0) = *first.get_or_insert((t.value, p));
            if (t.value - t0).abs() > physics::SAME_TEMPERATURE || (p / p0 - 1.0).abs() > SAME_PRESSURE {
                return None;
            }
            let m = process.flows[f].material()?;
            let mass = view.mass(f).ok()?;
            let g = view.enthalpy(m.state).ok()?.minus(&t.times(&view.entropy(m.state).ok()?));
            throughput += (mass.value * g.value).abs();
            out.add_scaled(sign, &mass.times(&g));
        }
    }
    first.map(|_| (out, throughput))
}

fn conditions(view: View<'_>, f: FlowId) -> Option<(Dual, f64)> {
    let state = view.model.process.flows[f].material()?.state;
    let p = view.property(state, Property::Pressure).ok()?.value;
    Some((view.property(state, Property::Temperature).ok()?, p))
}
