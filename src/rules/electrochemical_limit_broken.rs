//! electrochemical-limit-broken

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope, View};
use crate::process::kinds::Kind;
use crate::process::{Boundary, Carried, Component};

/// A cell takes less electric work, or delivers more, than the Gibbs energy of its reaction.
///
/// At one temperature an electrolyser takes at least the Gibbs energy that its products gain, and a
/// fuel cell delivers at most what its reactants lose; heat may cover the rest of the enthalpy.
pub struct ElectrochemicalLimitBroken;

static INFO: RuleInfo = RuleInfo {
    name: "electrochemical-limit-broken",
    title: "Electrochemical limit",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "electrolyser: W ≥ ΔG; fuel cell: W ≤ −ΔG",
    applies_to: "electrolysers and fuel cells",
    needs: "amounts, states, power, heat with its temperature",
    typical_cause: "a lower heating value in place of the higher, heat left out",
    source: "CODATA Key Values for Thermodynamics, 1989; second law",
    breaking: Case::Description(
        r#"{"fluids": {"hydrogen": {"kind": "ideal_gas", "mole_fractions": {"H2": 1}}, "oxygen": {"kind": "ideal_gas", "mole_fractions": {"O2": 1}}},
             "components": {"stack": {"kind": "electrolyser"}},
            "flows": {
              "feed": {"kind": "material", "to": "stack", "fluid": "water", "temperature": "25.0 degC", "pressure": "1.000 bar"},
              "hydrogen": {"kind": "material", "from": "stack", "fluid": "hydrogen", "temperature": "25.0 degC", "pressure": "1.000 bar", "mass_flow": "1 kg/h"},
              "oxygen": {"kind": "material", "from": "stack", "fluid": "oxygen", "temperature": "25.0 degC", "pressure": "1.000 bar"},
              "power": {"kind": "work", "to": "stack", "form": "electric", "power": "31.0 kW"},
              "heat": {"kind": "heat", "to": "stack", "temperature": "25.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"fluids": {"hydrogen": {"kind": "ideal_gas", "mole_fractions": {"H2": 1}}, "oxygen": {"kind": "ideal_gas", "mole_fractions": {"O2": 1}}},
             "components": {"stack": {"kind": "electrolyser"}},
            "flows": {
              "feed": {"kind": "material", "to": "stack", "fluid": "water", "temperature": "25.0 degC", "pressure": "1.000 bar"},
              "hydrogen": {"kind": "material", "from": "stack", "fluid": "hydrogen", "temperature": "25.0 degC", "pressure": "1.000 bar", "mass_flow": "1 kg/h"},
              "oxygen": {"kind": "material", "from": "stack", "fluid": "oxygen", "temperature": "25.0 degC", "pressure": "1.000 bar"},
              "power": {"kind": "work", "to": "stack", "form": "electric", "power": "50.0 kW"},
              "heat": {"kind": "heat", "from": "stack", "temperature": "25.0 degC"}}}"#,
    ),
};

impl Rule for ElectrochemicalLimitBroken {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            if !matches!(component.kind, Kind::Electrolyser | Kind::FuelCell) || component.holdup.is_some() {
                continue;
            }
            if let Some((sigma, throughput)) = physics::generation(evaluation, k) {
                let t = temperature(evaluation.view, component);
                out.push(measure::lower_bound(me, Scope::Component(k), sigma.scaled(t), t * throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let component = &evaluation.view.model.process.components[k];
        let dimension = phrase::energy_dimension(evaluation);
        let out = measure::net_work_out(evaluation.view, component).map_or(0.0, |w| w.0.value);
        // What a reversible cell delivers (negative: takes).
        let limit = out + decision.value;
        let (verb, work, bound, word) = if component.kind == Kind::FuelCell {
            ("delivers", out, limit, "at most")
        } else {
            ("takes", -out, -limit, "at least")
        };
        Explanation {
            statement: format!(
                "{} {verb} {}; the reaction allows {word} {}{}.",
                phrase::sentence(phrase::subject(evaluation, margin.scope)),
                phrase::figure(work, dimension),
                phrase::figure(bound, dimension),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: work, dimension }),
            limit: Some(Figure { value: bound, dimension }),
            ..Explanation::default()
        }
    }
}

/// The temperature at which a cell exchanges heat, K: that of its first heat flow, else of the
/// surroundings.
fn temperature(view: View<'_>, component: &Component) -> f64 {
    let process = &view.model.process;
    let heat = component.inlets.iter().chain(&component.outlets).find_map(|&f| match process.flows[f].carried {
        Carried::Heat(_, Boundary::Isothermal(t)) => view.var(t).ok().map(|t| t.value),
        _ => None,
    });
    heat.unwrap_or(process.environment.temperature)
}
