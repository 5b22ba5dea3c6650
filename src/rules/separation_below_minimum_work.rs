//! separation-below-minimum-work

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};
use crate::process::kinds::Kind;

/// A separation is done with less work than a reversible one.
///
/// Work, and the exergy of heat, must at least raise the exergy of what enters to that of what leaves.
pub struct SeparationBelowMinimumWork;

static INFO: RuleInfo = RuleInfo {
    name: "separation-below-minimum-work",
    title: "Least work of separation",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "W + Σ Q (1 − T0/T) ≥ E_out − E_in",
    applies_to: "separations",
    needs: "compositions and amounts of the parts, work, heats with temperatures",
    typical_cause: "a claim that leaves out pretreatment or recovered energy",
    source: "Gibbs energy of mixing; Kotas, The Exergy Method of Thermal Plant Analysis, 1985",
    breaking: Case::Description(
        r#"{"environment": {"temperature": "25 degC", "pressure": "1 bar", "relative_humidity": 0.6},
             "components": {"membranes": {"kind": "separation"}},
            "flows": {
              "feed": {"kind": "material", "to": "membranes", "fluid": "seawater", "temperature": "25.0 degC", "pressure": "1.000 bar", "salinity": "0.0350", "mass_flow": "20 kg/s"},
              "permeate": {"kind": "material", "from": "membranes", "fluid": "water", "temperature": "25.0 degC", "pressure": "1.000 bar", "mass_flow": "10 kg/s"},
              "brine": {"kind": "material", "from": "membranes", "fluid": "seawater", "temperature": "25.0 degC", "pressure": "1.000 bar"},
              "power": {"kind": "work", "to": "membranes", "form": "electric", "power": "20.0 kW"},
              "loss": {"kind": "heat", "from": "membranes", "temperature": "25.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"environment": {"temperature": "25 degC", "pressure": "1 bar", "relative_humidity": 0.6},
             "components": {"membranes": {"kind": "separation"}},
            "flows": {
              "feed": {"kind": "material", "to": "membranes", "fluid": "seawater", "temperature": "25.0 degC", "pressure": "1.000 bar", "salinity": "0.0350", "mass_flow": "20 kg/s"},
              "permeate": {"kind": "material", "from": "membranes", "fluid": "water", "temperature": "25.0 degC", "pressure": "1.000 bar", "mass_flow": "10 kg/s"},
              "brine": {"kind": "material", "from": "membranes", "fluid": "seawater", "temperature": "25.0 degC", "pressure": "1.000 bar"},
              "power": {"kind": "work", "to": "membranes", "form": "electric", "power": "90.0 kW"},
              "loss": {"kind": "heat", "from": "membranes", "temperature": "25.0 degC"}}}"#,
    ),
};

impl Rule for SeparationBelowMinimumWork {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            if component.kind != Kind::Separation || component.holdup.is_some() {
                continue;
            }
            if let Some((sigma, throughput)) = physics::generation(evaluation, k) {
                let t0 = process.environment.temperature;
                out.push(measure::lower_bound(me, Scope::Component(k), sigma.scaled(t0), t0 * throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let component = &evaluation.view.model.process.components[k];
        let dimension = phrase::energy_dimension(evaluation);
        let work = measure::net_work_out(evaluation.view, component).map_or(0.0, |w| -w.0.value);
        let least = work - decision.value;
        Explanation {
            statement: format!(
                "The work put into {} is {}; a reversible device with the same heats needs {}{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(work, dimension),
                phrase::figure(least, dimension),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: work, dimension }),
            limit: Some(Figure { value: least, dimension }),
            ..Explanation::default()
        }
    }
}
