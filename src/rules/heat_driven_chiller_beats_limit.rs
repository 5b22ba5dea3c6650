//! heat-driven-chiller-beats-limit

use super::three_bodies::{self, Machine, Words};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, measure};
use crate::balance::Evaluation;
use crate::balance::reservoir::Reservoirs;
use crate::model::{Decision, Dual, Margin};
use crate::process::ComponentId;
use crate::process::kinds::Kind;

/// A heat-driven chiller takes up more heat than a reversible one would.
///
/// A heat engine between the driving heat and the surroundings that drives a refrigerator between the
/// cooled body and the surroundings is the bound. Where it also takes work, that adds to the drive.
pub struct HeatDrivenChillerBeatsLimit;

static INFO: RuleInfo = RuleInfo {
    name: "heat-driven-chiller-beats-limit",
    title: "Heat-driven chiller",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "COP ≤ (1 − T0/TG) TL/(T0 − TL)",
    applies_to: "absorption machines that take up heat from a hot and from a cold body",
    needs: "heats, their temperatures",
    typical_cause: "solar heat or pump work left out, end temperatures in place of means",
    source: "second law for three reservoirs; Herold, Radermacher & Klein, Absorption Chillers and Heat Pumps, 1996",
    breaking: Case::Description(
        r#"{"components": {"chiller": {"kind": "absorption_machine"}},
            "flows": {
              "drive": {"kind": "heat", "to": "chiller", "rate": "100 kW", "temperature": "90.0 degC"},
              "cold": {"kind": "heat", "to": "chiller", "rate": "300.0 kW", "temperature": "7.0 degC"},
              "reject": {"kind": "heat", "from": "chiller", "temperature": "32.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"chiller": {"kind": "absorption_machine", "stated_performance": {"cop": 0.70}}},
            "flows": {
              "drive": {"kind": "heat", "to": "chiller", "rate": "100 kW", "temperature": "90.0 degC"},
              "cold": {"kind": "heat", "to": "chiller", "rate": "70.0 kW", "temperature": "7.0 degC"},
              "reject": {"kind": "heat", "from": "chiller", "temperature": "32.0 degC"}}}"#,
    ),
};

impl Rule for HeatDrivenChillerBeatsLimit {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        three_bodies::margins(me, machine, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let words = Words {
            figure: "coefficient of performance",
            roles: ["driven at", "cooling at", "giving off at"],
        };
        three_bodies::explain(machine, evaluation, margin, decision, &words)
    }
}

/// A heat engine and the refrigerator that it drives, with the coefficient of performance of both.
fn machine(evaluation: &Evaluation<'_>, k: ComponentId) -> Option<Machine> {
    let component = &evaluation.view.model.process.components[k];
    if component.kind != Kind::AbsorptionMachine {
        return None;
    }
    let reservoirs = Reservoirs::of(evaluation.view, k)?;
    let [first, second] = &reservoirs.sources[..] else { return None };
    let (drive, cold) =
        if first.temperature.value > second.temperature.value { (first, second) } else { (second, first) };
    let sink = reservoirs.sink_temperature()?;
    let lift = sink.clone().minus(&cold.temperature);
    let carnot = Dual::constant(1.0).minus(&sink.times(&drive.temperature.reciprocal()));
    if lift.value <= 0.0 || carnot.value <= 0.0 {
        return None;
    }
    let cooling = cold.temperature.times(&lift.reciprocal());
    let mut limit = carnot.times(&cooling);
    let (work, any) = measure::net_work_out(evaluation.view, component).ok()?;
    if any {
        let drive = drive.heat.as_ref()?;
        limit = limit.minus(&work.times(&drive.reciprocal()).times(&cooling));
    }
    let actual = drive
        .heat
        .as_ref()
        .zip(cold.heat.as_ref())
        .filter(|(drive, _)| drive.value > 0.0)
        .map(|(drive, cold)| cold.times(&drive.reciprocal()));
    let temperatures = [drive.temperature.value, cold.temperature.value, sink.value];
    Some(Machine { limit, actual, temperatures })
}
