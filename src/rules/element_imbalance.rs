//! element-imbalance

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, family, measure, phrase};
use crate::balance::{Balance, Evaluation, Row, region};
use crate::model::{Blocked, Decision, Margin, Scope, Test};
use crate::process::Basis;
use crate::quantity::Dimension;

/// More of a chemical element enters than leaves, or less.
///
/// Where substances react, mass says little: each element has to be conserved. Design data may be open
/// by the closure tolerance, counted on the element's own throughput.
pub struct ElementImbalance;

static INFO: RuleInfo = RuleInfo {
    name: "element-imbalance",
    title: "Element balance",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::Closure,
    inequality: "|Σ n in − Σ n out| ≤ tolerance + k u for each element",
    applies_to: "components in which substances meet",
    needs: "compositions and amounts",
    typical_cause: "an analyser, air drawn in, wet and dry basis mixed up",
    source: "conservation of elements; VDI 2048",
    breaking: Case::Description(
        r#"{"fluids": {
              "methane": {"kind": "ideal_gas", "mole_fractions": {"CH4": 1}},
              "oxidant": {"kind": "ideal_gas", "mole_fractions": {"O2": 0.21, "N2": 0.79}},
              "flue": {"kind": "ideal_gas", "mole_fractions": {"CO2": 0.099762, "H2O": 0.049881, "O2": 0.099762, "N2": 0.750595}}},
            "components": {"burner": {"kind": "combustor"}},
            "flows": {
              "gas": {"kind": "material", "to": "burner", "fluid": "methane", "pressure": "1.20 bar", "temperature": "25.0 degC", "mole_flow": "2.000 mol/s"},
              "air": {"kind": "material", "to": "burner", "fluid": "oxidant", "pressure": "1.20 bar", "temperature": "25.0 degC", "mole_flow": "38.095 mol/s"},
              "flue": {"kind": "material", "from": "burner", "fluid": "flue", "pressure": "1.15 bar", "temperature": "900.0 degC"},
              "duty": {"kind": "heat", "from": "burner", "temperature": "300.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"fluids": {
              "methane": {"kind": "ideal_gas", "mole_fractions": {"CH4": 1}},
              "oxidant": {"kind": "ideal_gas", "mole_fractions": {"O2": 0.21, "N2": 0.79}},
              "flue": {"kind": "ideal_gas", "mole_fractions": {"CO2": 0.049881, "H2O": 0.099762, "O2": 0.099762, "N2": 0.750595}}},
            "components": {"burner": {"kind": "combustor"}},
            "flows": {
              "gas": {"kind": "material", "to": "burner", "fluid": "methane", "pressure": "1.20 bar", "temperature": "25.0 degC", "mole_flow": "2.000 mol/s"},
              "air": {"kind": "material", "to": "burner", "fluid": "oxidant", "pressure": "1.20 bar", "temperature": "25.0 degC", "mole_flow": "38.095 mol/s"},
              "flue": {"kind": "material", "from": "burner", "fluid": "flue", "pressure": "1.15 bar", "temperature": "900.0 degC"},
              "duty": {"kind": "heat", "from": "burner", "temperature": "300.0 degC"}}}"#,
    ),
};

impl Rule for ElementImbalance {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        // The rows of one set of flows follow each other.
        let mut last = None;
        for (index, row) in measure::unspent(evaluation) {
            let Row::Element(k, side, element) = row else { continue };
            let Ok(balance) = balance(evaluation, row) else { continue };
            // A trace whose whole amount is within what the masses may be open by is no test.
            let whole = match last {
                Some((at, whole)) if at == (k, side) => whole,
                _ => region::set_mass(view, k, side).map_or(0.0, |mass| mass.throughput),
            };
            last = Some(((k, side), whole));
            let throughput = balance.throughput;
            let trace = throughput * element.molar_mass();
            if trace <= measure::allowance(&view.model.process, whole) {
                continue;
            }
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
        let Some(row @ Row::Element(_, _, element)) =
            evaluation.equations.rows().get(margin.detail).copied()
        else {
            return Explanation::default();
        };
        let Ok(balance) = balance(evaluation, row) else { return Explanation::default() };
        let dimension = match evaluation.view.model.process.basis {
            Basis::Rate => Dimension::MoleFlow,
            Basis::Amount => Dimension::Moles,
        };
        let sums = (balance.inflow, balance.outflow, balance.throughput);
        let what = format!("element {}", element.symbol());
        Explanation {
            statement: phrase::imbalance(evaluation, decision, margin.scope, &what, sums, dimension),
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            ..Explanation::default()
        }
    }
}

fn balance(evaluation: &Evaluation<'_>, row: Row) -> Result<Balance, Blocked> {
    let Row::Element(k, side, element) = row else { return Err(Blocked::Missing("an element")) };
    let view = evaluation.view;
    region::element(view, k, side, element as usize)
}
