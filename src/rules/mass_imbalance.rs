//! mass-imbalance

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, family, measure, phrase};
use crate::balance::{Evaluation, Row, region};
use crate::model::{Decision, Margin, Scope, Test};

/// More mass enters than leaves, or less.
///
/// Each set of flows that keeps its substance to itself is balanced apart. Design data may be open by
/// the closure tolerance; beyond it, an imbalance that the printed digits of the amounts could explain
/// is still reported, as minor. A balance that was spent on an unknown amount is no test.
pub struct MassImbalance;

static INFO: RuleInfo = RuleInfo {
    name: "mass-imbalance",
    title: "Mass balance",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::Closure,
    inequality: "|Σ m in − Σ m out| ≤ tolerance + k u",
    applies_to: "every side or pool of a component whose amounts are given",
    needs: "amounts",
    typical_cause: "a leak, a meter, a stream left out",
    source: "conservation of mass; VDI 2048",
    breaking: Case::Description(
        r#"{"components": {"splitter": {"kind": "splitter"}},
            "flows": {
              "main": {"kind": "material", "to": "splitter", "fluid": "water", "pressure": "4.0 bar", "temperature": "60.0 degC", "mass_flow": "3.00 kg/s"},
              "branch-a": {"kind": "material", "from": "splitter", "same_state_as": "main", "mass_flow": "2.00 kg/s"},
              "branch-b": {"kind": "material", "from": "splitter", "same_state_as": "main", "mass_flow": "1.30 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"splitter": {"kind": "splitter"}},
            "flows": {
              "main": {"kind": "material", "to": "splitter", "fluid": "water", "pressure": "4.0 bar", "temperature": "60.0 degC", "mass_flow": "3.00 kg/s"},
              "branch-a": {"kind": "material", "from": "splitter", "same_state_as": "main", "mass_flow": "2.00 kg/s"},
              "branch-b": {"kind": "material", "from": "splitter", "same_state_as": "main", "mass_flow": "1.00 kg/s"}}}"#,
    ),
};

impl Rule for MassImbalance {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (index, row) in measure::unspent(evaluation) {
            let Row::Mass(k, side) = row else { continue };
            let Ok(balance) = region::set_mass(view, k, side) else { continue };
            let throughput = balance.throughput;
            out.push(Margin {
                family: family(&INFO),
                test: Test::Zero {
                    allowance: measure::allowance(&view.model.process, throughput),
                },
                detail: index,
                ..measure::lower_bound(me, Scope::Component(k), balance.into_residual(), throughput)
            });
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let view = evaluation.view;
        let Some(Row::Mass(k, side)) = evaluation.equations.rows().get(margin.detail).copied() else {
            return Explanation::default();
        };
        let Ok(balance) = region::set_mass(view, k, side) else { return Explanation::default() };
        let dimension = phrase::mass_dimension(evaluation);
        let sums = (balance.inflow, balance.outflow, balance.throughput);
        let mut statement =
            phrase::imbalance(evaluation, decision, margin.scope, "mass", sums, dimension);
        let digits = measure::rounding(&view.model.process, balance.residual());
        let explained = !decision.at_limit && decision.value.abs() <= digits * (1.0 + 1e-9);
        if explained {
            statement.push_str(" The printed digits of the amounts could explain it.");
        }
        Explanation {
            statement,
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            severity: explained.then_some(Severity::Minor),
            causes: view.model.process.components[k]
                .kind
                .is_exchanger()
                .then_some("a flow meter, leakage between the sides, a stream left out"),
            ..Explanation::default()
        }
    }
}
