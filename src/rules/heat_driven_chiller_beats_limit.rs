//! heat-driven-chiller-beats-limit

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::balance::reservoir::Reservoirs;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::kinds::Kind;
use crate::process::{ComponentId, StatedFigure};
use crate::quantity::Dimension;

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
                "The coefficient of performance {} of {} {} the limit {} of a reversible machine (driven at {a}, cooling at {b}, giving off at {c}){}.",
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
    /// Reversible coefficient of performance.
    limit: Dual,
    /// What its own flows amount to, where they are known.
    actual: Option<Dual>,
    /// Of the drive, the cooled body and what takes the heat, K.
    temperatures: [f64; 3],
}

impl Machine {
    fn of(evaluation: &Evaluation<'_>, k: ComponentId) -> Option<Machine> {
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
}
