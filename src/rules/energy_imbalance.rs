//! energy-imbalance

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, family, measure, phrase};
use crate::balance::{Evaluation, Row};
use crate::model::{Decision, Margin, Scale, Scope, Test};
use crate::process::Component;
use crate::process::kinds::{Kind, Purposeful};

/// More energy enters than leaves, or less.
///
/// Design data may be open by the closure tolerance, counted on the throughput of energy above 25 °C
/// and 1 bar. A verdict of the second law is conditional on this balance: energy that is missing
/// carries entropy that is missing. A balance that was spent on an unknown is no test.
pub struct EnergyImbalance;

static INFO: RuleInfo = RuleInfo {
    name: "energy-imbalance",
    title: "Energy balance",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::Closure,
    inequality: "|Σ E in − Σ E out| ≤ tolerance + k u",
    applies_to: "every component whose flows are all known",
    needs: "amounts, enthalpies, heats and powers",
    typical_cause: "a wrong sign or unit, a heat left out",
    source: "first law; VDI 2048",
    breaking: Case::Description(
        r#"{"components": {"heater": {"kind": "heater"}},
            "flows": {
              "cold": {"kind": "material", "to": "heater", "fluid": "water", "pressure": "3.0 bar", "temperature": "20.0 degC", "mass_flow": "1.00 kg/s"},
              "warm": {"kind": "material", "from": "heater", "fluid": "water", "pressure": "3.0 bar", "mass_flow": "1.00 kg/s", "temperature": "60.0 degC"},
              "mains": {"kind": "work", "to": "heater", "form": "electric", "power": "100 kW"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"heater": {"kind": "heater"}},
            "flows": {
              "cold": {"kind": "material", "to": "heater", "fluid": "water", "pressure": "3.0 bar", "temperature": "20.0 degC", "mass_flow": "1.00 kg/s"},
              "warm": {"kind": "material", "from": "heater", "fluid": "water", "pressure": "3.0 bar", "mass_flow": "1.00 kg/s"},
              "mains": {"kind": "work", "to": "heater", "form": "electric", "power": "100 kW"}}}"#,
    ),
};

impl Rule for EnergyImbalance {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (index, row) in measure::unspent(evaluation) {
            let Row::Energy(k) = row else { continue };
            let Ok((residual, throughput)) = evaluation.components[k].energy_residual() else { continue };
            out.push(Margin {
                family: family(&INFO),
                test: Test::Zero { allowance: measure::allowance(&view.model.process, throughput) },
                detail: index,
                ..measure::lower_bound(me, Scope::Component(k), residual.clone(), throughput)
            });
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let Ok(balance) = &evaluation.components[k].energy else { return Explanation::default() };
        let dimension = phrase::energy_dimension(evaluation);
        let sums = (balance.inflow, balance.outflow, balance.throughput);
        let mut statement =
            phrase::imbalance(evaluation, decision, margin.scope, "energy", sums, dimension);
        if on_formation_scale(evaluation, k) {
            statement.push_str(" Enthalpies include those of formation.");
        } else if measure::has_material(
            &evaluation.view.model.process,
            &evaluation.view.model.process.components[k],
        ) {
            statement.push_str(" Enthalpies are counted from 25 degC and 1 bar.");
        }
        Explanation {
            statement,
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            causes: causes(&evaluation.view.model.process.components[k], decision.value > 0.0),
            ..Explanation::default()
        }
    }
}

/// What usually opens the balance of a component of some kinds (common practice).
/// Heat can be lost only where less leaves than enters.
fn causes(component: &Component, less_leaves: bool) -> Option<&'static str> {
    let purpose = component.kind.info().purpose;
    Some(match (component.kind, less_leaves) {
        (Kind::Valve, true) => "the quality of wet steam, a pressure or temperature reading, heat lost",
        (Kind::Valve, false) => "the quality of wet steam, a pressure or temperature reading",
        (kind, true) if kind.is_exchanger() => {
            "a flow meter, leakage between the sides, a temperature reading, heat lost"
        }
        (kind, false) if kind.is_exchanger() => {
            "a flow meter, leakage between the sides, a temperature reading"
        }
        _ if !matches!(purpose, Purposeful::Compression | Purposeful::Expansion) => return None,
        (_, true) => {
            "heat lost through the casing or to cooling (heat_loss is not given), the power reading, a flow meter"
        }
        (_, false) => "the power reading, a flow meter, a temperature reading",
    })
}

fn on_formation_scale(evaluation: &Evaluation<'_>, k: usize) -> bool {
    let model = evaluation.view.model;
    let fluids = crate::model::fluids_in(&model.process, &model.process.components[k]);
    fluids.iter().any(|&f| model.scales[f].scale == Scale::Absolute)
}
