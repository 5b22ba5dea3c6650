//! negative-plant-entropy-generation

use super::negative_entropy_generation::{explain_generation, generation_margin};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};

/// The plant as a whole destroys entropy.
///
/// The boundary around everything needs only what crosses it: the plant can be impossible although no
/// single component can be judged. A plant of one component is that component, and is not tested
/// twice; pipes that stand for a flow with two measured ends do not count as components here.
pub struct NegativePlantEntropyGeneration;

static INFO: RuleInfo = RuleInfo {
    name: "negative-plant-entropy-generation",
    title: "Plant entropy generation",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "σ of the plant = Σ σ of its components and connections ≥ 0",
    applies_to: "plants of two or more components",
    needs: "every flow across the boundary of the plant",
    typical_cause: "a missing boundary stream, one counted twice",
    source: "second law; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 5 and 6",
    breaking: Case::Description(
        r#"{"components": {"first": {"kind": "valve"}, "second": {"kind": "valve"}},
            "flows": {
              "high": {"kind": "material", "to": "first", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"},
              "middle": {"kind": "material", "from": "first", "to": "second", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"},
              "low": {"kind": "material", "from": "second", "fluid": "water", "pressure": "50.0 bar", "temperature": "407.4 degC", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"first": {"kind": "valve"}, "second": {"kind": "valve"}},
            "flows": {
              "high": {"kind": "material", "to": "first", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"},
              "middle": {"kind": "material", "from": "first", "to": "second", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"},
              "low": {"kind": "material", "from": "second", "fluid": "water", "pressure": "2.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for NegativePlantEntropyGeneration {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let components = &evaluation.view.model.process.components;
        if components.iter().filter(|c| !c.implied).count() >= 2 {
            let members = &evaluation.equations.plant.members;
            out.push(generation_margin(me, Scope::Plant, evaluation, &evaluation.plant, members));
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        explain_generation(evaluation, margin, decision)
    }
}
