//! internal-temperature-cross

use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, family, interior};
use crate::balance::{Evaluation, Profile};
use crate::model::{Decision, Margin};

/// Somewhere inside an exchanger the stream that is heated is hotter than the one that heats it.
///
/// The total entropy generation and both ends may look lawful while the inside is impossible. The
/// smallest difference over ends, saturation points and what lies between decides. Any arrangement
/// but parallel flow is judged as counterflow, the kindest.
pub struct InternalTemperatureCross;

static INFO: RuleInfo = RuleInfo {
    name: "internal-temperature-cross",
    title: "Temperature cross inside an exchanger",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Interior,
    inequality: "min over q of Th(q) − Tc(q) ≥ 0",
    applies_to: "exchangers in which one stream heats another, or a surface of known temperature",
    needs: "the states at every inlet and outlet, one amount",
    typical_cause: "an overlooked pinch, a wrong amount or duty, a wrong pressure of evaporation",
    source: "second law, statement of Clausius; Linnhoff & Flower, AIChE J. 24 (1978) 633",
    breaking: Case::Description(interior::CROSSED),
    keeping: Case::Description(interior::UNCROSSED),
};

impl Rule for InternalTemperatureCross {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let pair = |p: &Profile| !p.is_composite();
        interior::margins(pair, true, me, family(&INFO), evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        interior::explain(evaluation, margin, decision)
    }
}
