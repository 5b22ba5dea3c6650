//! heat-transformer-beats-limit

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::balance::reservoir::Reservoirs;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::kinds::Kind;
use crate::process::{ComponentId, StatedFigure};
use crate::quantity::Dimension;

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
        let view = evaluation.view;
        let process = &view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            let Some(machine) = Machine::of(evaluation, k) else { continue };
            if let Some(actual) = &machine.actual {
                let throughput = actual.value.abs() + machine.limit.value.abs();
                let form = machine.limit.clone().minus(actual);
                out.push(measure::lower_bound(me, Scope::Component(k), form, throughput));
            }
            for (i, stated) in component.stated.iter().enumerate() {
                let Ok(claim) = view.var(stated.var) else { continue };
                if stated.what != StatedFigure::Cop {
                    continue;
                }
                let form = machine.limit.clone().minus(&claim);
                // At the limit: the limit lies within the rounding interval of the claimed figure.
                let within = form.value.abs() <= measure::half_digit(process, stated.var);
                let form = if within { Dual::constant(0.0) } else { form };
                out.push(Margin {
                    pointer: Some(stated.pointer.clone()),
                    detail: i + 1,
                    ..measure::lower_bound(me, Scope::Component(k), form, 1.0 + claim.value.abs())
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let Some(machine) = Machine::of(evaluation, k) else { return Explanation::default() };
        let component = &evaluation.view.model.process.components[k];
        let claim = margin.detail.checked_sub(1).and_then(|i| component.stated.get(i));
        let figure = match claim {
            Some(stated) => evaluation.view.var(stated.var).ok(),
            None => machine.actual,
        };
        let Some(figure) = figure else { return Explanation::default() };
        let [a, b, c] = machine.temperatures.map(|t| phrase::figure(t, Dimension::Temperature));
        Explanation {
            statement: format!(
                "The lifted share {} of {} {} the limit {} of a reversible machine (heat taken in at {a}, lifted to {b}, rest given off at {c}){}.",
                phrase::number(figure.value),
                phrase::subject(evaluation, margin.scope),
                if decision.value < 0.0 { "exceeds" } else { "does not exceed" },
                phrase::number(machine.limit.value),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: figure.value, dimension: Dimension::Fraction }),
            limit: Some(Figure { value: machine.limit.value, dimension: Dimension::Fraction }),
            ..Explanation::default()
        }
    }
}

/// A machine between three reservoirs.
struct Machine {
    /// Reversible share of the heat that is lifted.
    limit: Dual,
    /// What its own flows amount to, where they are known.
    actual: Option<Dual>,
    /// Of the heat taken in, the heat lifted and what takes the rest, K.
    temperatures: [f64; 3],
}

impl Machine {
    fn of(evaluation: &Evaluation<'_>, k: ComponentId) -> Option<Machine> {
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
}
