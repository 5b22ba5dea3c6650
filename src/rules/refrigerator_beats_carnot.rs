//! refrigerator-beats-carnot

use super::carnot::{self, Machine};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};

/// A refrigerator needs less work for its cold than a reversible one would.
///
/// Where the heat is given off at or below the temperature of the cold body no limit exists, and
/// nothing is tested. A stated coefficient of performance is judged as well, and needs temperatures
/// only.
pub struct RefrigeratorBeatsCarnot;

static INFO: RuleInfo = RuleInfo {
    name: "refrigerator-beats-carnot",
    title: "Refrigerator against Carnot",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "COP = Qc/W ≤ Tc/(Th − Tc) (entropic mean temperatures)",
    applies_to: "refrigerators, and coefficients of performance claimed for them",
    needs: "temperatures of the heats; heat taken in and work, or a claim",
    typical_cause: "temperatures of the working fluid taken for those of the bodies, fans and pumps left out",
    source: "second law, theorem of Carnot; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 5.9 to 5.10",
    breaking: Case::Description(
        r#"{"components": {"chiller": {"kind": "refrigerator"}},
            "flows": {
              "store": {"kind": "heat", "to": "chiller", "rate": "30 kW", "temperature": "-20.0 degC"},
              "air": {"kind": "heat", "from": "chiller", "rate": "35 kW", "temperature": "35.0 degC"},
              "drive": {"kind": "work", "to": "chiller", "form": "electric", "power": "5 kW"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"chiller": {"kind": "refrigerator"}},
            "flows": {
              "store": {"kind": "heat", "to": "chiller", "rate": "30 kW", "temperature": "-20.0 degC"},
              "air": {"kind": "heat", "from": "chiller", "rate": "42 kW", "temperature": "35.0 degC"},
              "drive": {"kind": "work", "to": "chiller", "form": "electric", "power": "12 kW"}}}"#,
    ),
};

impl Rule for RefrigeratorBeatsCarnot {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        carnot::margins(Machine::Refrigerator, me, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        carnot::explain(Machine::Refrigerator, evaluation, margin, decision)
    }
}
