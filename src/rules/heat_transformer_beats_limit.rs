//! heat-transformer-beats-limit

use super::three_bodies::{self, Machine, Words};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, measure};
use crate::balance::Evaluation;
use crate::balance::reservoir::Reservoirs;
use crate::model::{Decision, Dual, Margin};
use crate::process::ComponentId;
use crate::process::kinds::Kind;

/// A heat transformer lifts a larger share of its heat than a reversible one would.
///
/// Part of the heat at a middle temperature falls to the surroundings and drives the rest up.
pub struct HeatTransformerBeatsLimit;

static INFO: RuleInfo = RuleInfo {
    name: "heat-transformer-beats-limit",
    title: "Heat transformer",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "QH/QM ≤ (1 − T0/TM) / (1 − T0/TH)",
    applies_to: "absorption machines that take heat at one temperature and give part of it off hotter",
    needs: "heats, their temperatures",
    typical_cause: "a reject stream left out",
    source: "second law for three reservoirs; Herold, Radermacher & Klein, Absorption Chillers and Heat Pumps, 1996",
    breaking: Case::Description(
        r#"{"components": {"transformer": {"kind": "absorption_machine"}},
            "flows": {
              "waste": {"kind": "heat", "to": "transformer", "rate": "100 kW", "temperature": "85.0 degC"},
              "useful": {"kind": "heat", "from": "transformer", "rate": "70.0 kW", "temperature": "130.0 degC"},
              "reject": {"kind": "heat", "from": "transformer", "temperature": "25.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"transformer": {"kind": "absorption_machine", "stated_performance": {"cop": 0.45}}},
            "flows": {
              "waste": {"kind": "heat", "to": "transformer", "rate": "100 kW", "temperature": "85.0 degC"},
              "useful": {"kind": "heat", "from": "transformer", "rate": "45.0 kW", "temperature": "130.0 degC"},
              "reject": {"kind": "heat", "from": "transformer", "temperature": "25.0 degC"}}}"#,
    ),
};

impl Rule for HeatTransformerBeatsLimit {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        three_bodies::margins(me, machine, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let words = Words {
            figure: "lifted share",
            roles: ["heat taken in at", "lifted to", "rest given off at"],
        };
        three_bodies::explain(machine, evaluation, margin, decision, &words)
    }
}

/// A heat engine and the heat pump that it drives, with the share of the heat that is lifted.
fn machine(evaluation: &Evaluation<'_>, k: ComponentId) -> Option<Machine> {
    let component = &evaluation.view.model.process.components[k];
    let (_, work) = measure::net_work_out(evaluation.view, component).ok()?;
    if component.kind != Kind::AbsorptionMachine || work {
        return None;
    }
    let reservoirs = Reservoirs::of(evaluation.view, k)?;
    let [source] = &reservoirs.sources[..] else { return None };
    let [first, second] = &reservoirs.sinks[..] else { return None };
    let (hot, cold) =
        if first.temperature.value > second.temperature.value { (first, second) } else { (second, first) };
    let middle = source.temperature.value;
    if !(hot.temperature.value > middle && middle > cold.temperature.value) {
        return None;
    }
    let factor = |t: &Dual| Dual::constant(1.0).minus(&cold.temperature.times(&t.reciprocal()));
    let limit = factor(&source.temperature).times(&factor(&hot.temperature).reciprocal());
    let actual = source
        .heat
        .as_ref()
        .zip(hot.heat.as_ref())
        .filter(|(taken, _)| taken.value > 0.0)
        .map(|(taken, lifted)| lifted.times(&taken.reciprocal()));
    let temperatures = [middle, hot.temperature.value, cold.temperature.value];
    Some(Machine { limit, actual, temperatures })
}
