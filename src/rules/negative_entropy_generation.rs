//! negative-entropy-generation

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, family, phrase};
use crate::balance::{Evaluation, RegionBalances, leniency};
use crate::model::{Decision, Margin, Scope, Test};

/// A component destroys entropy.
///
/// This is the primary test of the second law: everything that a component may do is bounded by
/// an entropy generation that is not negative. Where a boundary temperature is not given, the
/// value that is kindest to the component decides.
pub struct NegativeEntropyGeneration;

static INFO: RuleInfo = RuleInfo {
    name: "negative-entropy-generation",
    title: "Component entropy generation",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "σ = Σ(m s)out − Σ(m s)in + Σ Qout/T − Σ Qin/T + ΔS ≥ 0",
    applies_to: "every component whose streams and heats are known",
    needs: "amounts, two properties a stream, heats with boundary temperatures",
    typical_cause: "swapped readings, wrong phase, a missing stream, a unit or gauge error",
    source: "second law; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 6",
    breaking: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "10 bar", "temperature": "376.5 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "40 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for NegativeEntropyGeneration {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        for (k, balances) in evaluation.components.iter().enumerate() {
            out.push(generation_margin(me, Scope::Component(k), evaluation, balances, &[k]));
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        explain_generation(evaluation, margin, decision)
    }
}

/// The margin shared by component, group and plant: σ with what an open balance could explain.
pub(super) fn generation_margin(
    me: usize,
    scope: Scope,
    evaluation: &Evaluation<'_>,
    balances: &RegionBalances,
    members: &[usize],
) -> Margin {
    let generation = balances.generation();
    let throughput = generation.as_ref().map_or(0.0, |g| g.1);
    let form = generation.and_then(|(sigma, _)| {
        Ok(match leniency::of(evaluation, members)? {
            Some(explained) => sigma.plus(&explained),
            None => sigma,
        })
    });
    Margin {
        rule: me,
        scope,
        family: family(&INFO),
        test: Test::NonNegative,
        form,
        throughput,
        pointer: None,
        detail: 0,
    }
}

/// The explanation shared by component, group and plant.
pub(super) fn explain_generation(
    evaluation: &Evaluation<'_>,
    margin: &Margin,
    decision: &Decision,
) -> Explanation {
    let dimension = phrase::entropy_dimension(evaluation);
    let subject = phrase::subject(evaluation, margin.scope);
    let spread = if decision.u > 0.0 {
        format!(", standard uncertainty {}", phrase::figure(decision.u, dimension))
    } else {
        String::new()
    };
    let verb = if decision.value < 0.0 { "would have to destroy" } else { "generates" };
    Explanation {
        statement: phrase::sentence(format!(
            "{subject} {verb} entropy: σ = {}{spread} (z = {}; probability that σ < 0: {}).",
            phrase::figure(decision.value, dimension),
            phrase::number(decision.z),
            phrase::probability(decision.probability_negative),
        )),
        value: Some(Figure { value: decision.value, dimension }),
        limit: Some(Figure { value: 0.0, dimension }),
        ..Explanation::default()
    }
}
