//! clausius-inequality-broken

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};
use crate::process::Carried;
use crate::process::kinds::Kind;

/// A cyclic device takes in more entropy with heat than it gives off.
///
/// Over a cycle the device itself does not change, so its heats alone must keep Σ Q/T ≤ 0, heat taken
/// in counted positive. Work does not enter: a device can break this whatever its work is.
pub struct ClausiusInequalityBroken;

static INFO: RuleInfo = RuleInfo {
    name: "clausius-inequality-broken",
    title: "Clausius inequality",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "Σ Q/T ≤ 0 over a cycle, heat in positive",
    applies_to: "heat engines, refrigerators, heat pumps and absorption machines without material",
    needs: "heats with boundary temperatures",
    typical_cause: "wrong direction of a heat, a heat left out",
    source: "second law, inequality of Clausius; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 5.11",
    breaking: Case::Description(
        r#"{"components": {"pump": {"kind": "heat_pump"}},
            "flows": {
              "brine": {"kind": "heat", "to": "pump", "rate": "9 kW", "temperature": "5.0 degC"},
              "floor": {"kind": "heat", "from": "pump", "rate": "10 kW", "temperature": "55.0 degC"},
              "drive": {"kind": "work", "to": "pump", "form": "electric", "power": "1 kW"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"pump": {"kind": "heat_pump"}},
            "flows": {
              "brine": {"kind": "heat", "to": "pump", "rate": "7 kW", "temperature": "5.0 degC"},
              "floor": {"kind": "heat", "from": "pump", "rate": "10 kW", "temperature": "55.0 degC"},
              "drive": {"kind": "work", "to": "pump", "form": "electric", "power": "3 kW"}}}"#,
    ),
};

impl Rule for ClausiusInequalityBroken {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            let cyclic = matches!(
                component.kind,
                Kind::HeatEngine | Kind::Refrigerator | Kind::HeatPump | Kind::AbsorptionMachine
            );
            if !cyclic || measure::has_material(process, component) {
                continue;
            }
            let mut flows = component.inlets.iter().chain(&component.outlets);
            if !flows.any(|&f| matches!(process.flows[f].carried, Carried::Heat(..) | Carried::Radiation(..))) {
                continue;
            }
            if let Ok((generation, throughput)) = evaluation.components[k].generation() {
                out.push(measure::lower_bound(me, Scope::Component(k), generation, throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let dimension = phrase::entropy_dimension(evaluation);
        let (inward, outward) =
            evaluation.components[k].entropy.as_ref().map_or((0.0, 0.0), |b| (b.inflow, b.outflow));
        let total = -decision.value;
        Explanation {
            statement: format!(
                "Over the cycle of {}, Σ Q/T is {} in and {} out, {} in all; it can never be above zero{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(inward, dimension),
                phrase::figure(outward, dimension),
                phrase::figure(total, dimension),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: total, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            ..Explanation::default()
        }
    }
}
