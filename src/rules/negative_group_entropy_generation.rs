//! negative-group-entropy-generation

use super::negative_entropy_generation::{explain_generation, generation_margin};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};

/// A declared group of components destroys entropy.
///
/// σ is additive, so a violation can hide inside a larger boundary but not be made by drawing one:
/// a group whose σ is negative holds at least one component that breaks the law, even where none can
/// be judged by itself because a reading between them is missing.
pub struct NegativeGroupEntropyGeneration;

static INFO: RuleInfo = RuleInfo {
    name: "negative-group-entropy-generation",
    title: "Group entropy generation",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "σ of any union of components ≥ 0; σ is additive",
    applies_to: "declared groups whose boundary flows are known",
    needs: "amounts, two properties a stream, heats with boundary temperatures, across the boundary of the group",
    typical_cause: "a violation masked by another component, a missing stream",
    source: "second law; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 5 and 6",
    breaking: Case::Description(
        r#"{"groups": {"train": ["first", "second"]},
            "components": {"first": {"kind": "valve"}, "second": {"kind": "valve"}},
            "flows": {
              "high": {"kind": "material", "to": "first", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"},
              "middle": {"kind": "material", "from": "first", "to": "second", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"},
              "low": {"kind": "material", "from": "second", "fluid": "water", "pressure": "50.0 bar", "temperature": "407.4 degC", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"groups": {"train": ["first", "second"]},
            "components": {"first": {"kind": "valve"}, "second": {"kind": "valve"}},
            "flows": {
              "high": {"kind": "material", "to": "first", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"},
              "middle": {"kind": "material", "from": "first", "to": "second", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"},
              "low": {"kind": "material", "from": "second", "fluid": "water", "pressure": "2.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for NegativeGroupEntropyGeneration {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let groups = &evaluation.view.model.process.groups;
        for (g, balances) in evaluation.groups.iter().enumerate() {
            out.push(generation_margin(me, Scope::Group(g), evaluation, balances, &groups[g].members));
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        explain_generation(evaluation, margin, decision)
    }
}
