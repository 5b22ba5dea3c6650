//! work-from-one-reservoir

use crate::balance::reservoir::Reservoirs;
use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};
use crate::process::kinds::Kind;
use crate::quantity::Dimension;

/// A device turns the heat of a single reservoir into work.
///
/// With one temperature to exchange heat at, or with nothing to give heat off to, a device that works
/// in a cycle or steadily can only consume work.
pub struct WorkFromOneReservoir;

static INFO: RuleInfo = RuleInfo {
    name: "work-from-one-reservoir",
    title: "Work from one reservoir",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "net work out ≤ 0 if heat is exchanged at one temperature only",
    applies_to: "cyclic kinds and control volumes without material",
    needs: "heats with boundary temperatures, powers",
    typical_cause: "a rejected heat left out",
    source: "second law, statement of Kelvin and Planck; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 5",
    breaking: Case::Description(
        r#"{"components": {"engine": {"kind": "heat_engine"}},
            "flows": {
              "sea": {"kind": "heat", "to": "engine", "rate": "50 kW", "temperature": "15.0 degC"},
              "shaft": {"kind": "work", "from": "engine", "form": "shaft", "power": "50 kW"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"brake": {"kind": "control_volume"}},
            "flows": {
              "shaft": {"kind": "work", "to": "brake", "form": "shaft", "power": "50 kW"},
              "air": {"kind": "heat", "from": "brake", "rate": "50 kW", "temperature": "40.0 degC"}}}"#,
    ),
};

impl Rule for WorkFromOneReservoir {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            let steady = matches!(
                component.kind,
                Kind::HeatEngine
                    | Kind::Refrigerator
                    | Kind::HeatPump
                    | Kind::AbsorptionMachine
                    | Kind::ControlVolume
            );
            if !steady || measure::has_material(process, component) {
                continue;
            }
            let Ok((work, true)) = measure::net_work_out(evaluation.view, component) else { continue };
            let Some(reservoirs) = Reservoirs::of(evaluation.view, k) else { continue };
            let has_sources = reservoirs.source_temperature().is_some();
            if work.value > 0.0 && !has_sources {
                // Work from nothing is a matter of the energy balance.
                continue;
            }
            let only_in = has_sources && !reservoirs.has_sinks();
            if only_in || reservoirs.single_temperature().is_some() {
                let throughput = work.value.abs();
                out.push(measure::lower_bound(me, Scope::Component(k), work.scaled(-1.0), throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let dimension = phrase::energy_dimension(evaluation);
        let reservoirs = Reservoirs::of(evaluation.view, k);
        let place = match reservoirs.and_then(|r| r.single_temperature()) {
            Some(t) => {
                format!("exchanges heat at {} only", phrase::figure(t, Dimension::Temperature))
            }
            None => "takes heat in and gives none off".to_owned(),
        };
        let work = -decision.value;
        let verb = if work > 0.0 { "delivers" } else { "consumes" };
        Explanation {
            statement: phrase::sentence(format!(
                "{} {place} and {verb} {} of work; from one reservoir no work can be had{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(work.abs(), dimension),
                phrase::sureness(decision),
            )),
            value: Some(Figure { value: work, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            ..Explanation::default()
        }
    }
}
