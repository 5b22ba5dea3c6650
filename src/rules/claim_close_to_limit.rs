//! claim-close-to-limit

use super::carnot::{self, Machine};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};

/// A stated efficiency or coefficient of performance comes closer to its reversible limit than
/// built machines do.
///
/// The law allows it. Such a figure often leaves out auxiliaries or holds for other temperatures
/// than those beside it, so practice asks for evidence.
pub struct ClaimCloseToLimit;

static INFO: RuleInfo = RuleInfo {
    name: "claim-close-to-limit",
    title: "Claim close to its limit",
    authority: Authority::Practice,
    severity: Severity::Advice,
    aspect: Aspect::Practice,
    inequality: "η ≤ 0.85 (1 − Tc/Th); COP ≤ 0.75 of its reversible limit",
    applies_to: "efficiencies and coefficients of performance that are claimed",
    needs: "a claim, and the temperatures of the heats",
    typical_cause: "auxiliaries left out, other temperatures than stated, optimism",
    source: "common practice",
    breaking: Case::Description(
        r#"{"components": {"pump": {"kind": "heat_pump", "stated_performance": {"cop": 5.80}}},
            "flows": {
              "ground": {"kind": "heat", "to": "pump", "rate": "40 kW", "temperature": "5.0 degC"},
              "floor": {"kind": "heat", "from": "pump", "rate": "50 kW", "temperature": "50.0 degC"},
              "supply": {"kind": "work", "to": "pump", "form": "electric", "power": "10 kW"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"pump": {"kind": "heat_pump", "stated_performance": {"cop": 4.00}}},
            "flows": {
              "ground": {"kind": "heat", "to": "pump", "rate": "37.5 kW", "temperature": "5.0 degC"},
              "floor": {"kind": "heat", "from": "pump", "rate": "50 kW", "temperature": "50.0 degC"},
              "supply": {"kind": "work", "to": "pump", "form": "electric", "power": "12.5 kW"}}}"#,
    ),
};

impl Rule for ClaimCloseToLimit {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        for machine in [Machine::Engine, Machine::Refrigerator, Machine::HeatPump] {
            carnot::closeness(machine, me, evaluation, out);
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, _: &Decision) -> Explanation {
        carnot::explain_closeness(evaluation, margin).unwrap_or_default()
    }
}
