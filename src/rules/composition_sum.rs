//! composition-sum

use super::remark;
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};

/// The shares of a composition do not add up to one, or one of them is negative.
///
/// It is seen while the description is read; shares that add up within their printed digits are
/// normalised without a word.
pub struct CompositionSum;

static INFO: RuleInfo = RuleInfo {
    name: "composition-sum",
    title: "Composition",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::State,
    inequality: "Σ x = 1 and x ≥ 0",
    applies_to: "fluids given by mole or mass fractions",
    needs: "the fractions",
    typical_cause: "wet and dry basis mixed up, a substance left out",
    source: "definition of a fraction",
    breaking: Case::Description(
        r#"{"fluids": {"product": {"kind": "ideal_gas", "mole_fractions": {"N2": 0.88, "O2": 0.02}}},
            "components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "product", "pressure": "8.0 bar", "temperature": "30.0 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "product", "pressure": "3.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"fluids": {"product": {"kind": "ideal_gas", "mole_fractions": {"N2": 0.98, "O2": 0.02}}},
            "components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "product", "pressure": "8.0 bar", "temperature": "30.0 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "product", "pressure": "3.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for CompositionSum {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        remark::margins(me, INFO.name, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, _: &Decision) -> Explanation {
        remark::explain(INFO.name, evaluation, margin).unwrap_or_default()
    }
}
