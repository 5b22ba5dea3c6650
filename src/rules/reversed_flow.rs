//! reversed-flow

use super::remark;
use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::{FlowId, Var};
use crate::quantity::Dimension;

/// A flow has a negative amount: it runs against its declared direction.
///
/// Directions are structure here, not signs. A negative figure is taken at its word and balanced as
/// it stands; one that came out of solving says that the direction may be declared the wrong way
/// round, or that another figure is wrong.
pub struct ReversedFlow;

static INFO: RuleInfo = RuleInfo {
    name: "reversed-flow",
    title: "Reversed flow",
    authority: Authority::Data,
    severity: Severity::Minor,
    aspect: Aspect::Closure,
    inequality: "every declared amount, heat and power ≥ 0",
    applies_to: "amounts of material, heats, powers",
    needs: "the amount",
    typical_cause: "inlet and outlet readings swapped, a reversed direction, the sign convention of another program, a meter wired backwards",
    source: "definition of a directed flow",
    breaking: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "10.0 bar", "temperature": "376.5 degC", "mass_flow": "-2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "-2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "temperature": "376.5 degC", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for ReversedFlow {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        remark::margins(me, INFO.name, evaluation, out);
        let process = &evaluation.view.model.process;
        let mut seen = Vec::new();
        for (f, flow) in process.flows.iter().enumerate() {
            let (var, dimension, _) = measure::extent(process, f);
            let Some(extent) = negative(evaluation, f) else { continue };
            // Flows that share an amount are one finding.
            // What the reader made and the balances solved for has no declared direction.
            let free = flow.implied && matches!(process.vars[var], Var::Unknown { .. });
            if free || seen.contains(&var) || remark::covers(INFO.name, evaluation, &flow.pointer) {
                continue;
            }
            // What a backward flow through a component carries on is the same defect.
            let solved = |f: &usize| {
                let (v, _, _) = measure::extent(process, *f);
                matches!(process.vars[v], Var::Unknown { .. }) && negative(evaluation, *f).is_some()
            };
            let carried_on = flow.material().is_some()
                && solved(&f)
                && flow.from.is_some_and(|k| process.components[k].inlets.iter().any(solved));
            seen.push(var);
            if carried_on {
                continue;
            }
            out.push(Margin {
                pointer: Some(flow.pointer.clone()),
                detail: f,
                ..measure::lower_bound(me, Scope::Flow(f), extent, largest(evaluation, dimension))
            });
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        if let Some(explanation) = remark::explain(INFO.name, evaluation, margin) {
            return explanation;
        }
        let process = &evaluation.view.model.process;
        let Scope::Flow(f) = margin.scope else { return Explanation::default() };
        let (var, dimension, word) = measure::extent(process, f);
        let figure = phrase::figure(decision.value, dimension);
        let flow = &process.flows[f].name;
        let statement = match process.vars[var] {
            Var::Given(_) => format!(
                "The {word} of flow \"{flow}\" is given as {figure}: it runs against its declared direction{}.",
                phrase::sureness(decision),
            ),
            Var::Unknown { .. } => format!(
                "The solved {word} of flow \"{flow}\" is negative, {figure}: the direction may be reversed{}.",
                phrase::sureness(decision),
            ),
        };
        Explanation {
            statement,
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            severity: (matches!(process.vars[var], Var::Unknown { .. })
                && process.flows[f].material().is_some())
            .then_some(Severity::Major),
            ..Explanation::default()
        }
    }
}

/// The amount of a flow, if it is negative.
fn negative(evaluation: &Evaluation<'_>, flow: FlowId) -> Option<Dual> {
    let (var, _, _) = measure::extent(&evaluation.view.model.process, flow);
    evaluation.view.var(var).ok().filter(|x| x.value < 0.0)
}

/// The largest amount of this dimension: what rounding in a solved amount is measured by.
fn largest(evaluation: &Evaluation<'_>, dimension: Dimension) -> f64 {
    let process = &evaluation.view.model.process;
    (0..process.flows.len())
        .map(|f| measure::extent(process, f))
        .filter(|e| e.1 == dimension)
        .filter_map(|e| evaluation.view.var(e.0).ok())
        .fold(0.0, |most, x| most.max(x.value.abs()))
}
