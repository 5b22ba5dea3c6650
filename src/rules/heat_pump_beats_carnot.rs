//! heat-pump-beats-carnot

use super::carnot::{self, Machine};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};

/// A heat pump needs less work for its heat than a reversible one would.
///
/// Sliding temperatures of source and sink count with their entropic means, which is kinder than the
/// end temperatures. A stated coefficient of performance is judged as well, and needs temperatures
/// only.
pub struct HeatPumpBeatsCarnot;

static INFO: RuleInfo = RuleInfo {
    name: "heat-pump-beats-carnot",
    title: "Heat pump against Carnot",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "COP = Qh/W ≤ Th/(Th − Tc) (entropic mean temperatures)",
    applies_to: "heat pumps, and coefficients of performance claimed for them",
    needs: "temperatures of the heats; heat given off and work, or a claim",
    typical_cause: "temperatures of the working fluid taken for those of the bodies, fans and pumps left out",
    source: "second law, theorem of Carnot; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 5.9 to 5.10",
    breaking: Case::Description(
        r#"{"components": {"pump": {"kind": "heat_pump", "stated_performance": {"cop": 7.00}}},
            "flows": {
              "river": {"kind": "heat", "to": "pump", "temperature": {"inlet": "8.0 degC", "outlet": "4.0 degC"}},
              "network": {"kind": "heat", "from": "pump", "temperature": {"inlet": "45.0 degC", "outlet": "75.0 degC"}},
              "drive": {"kind": "work", "to": "pump", "form": "electric"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"pump": {"kind": "heat_pump", "stated_performance": {"cop": 4.90}}},
            "flows": {
              "river": {"kind": "heat", "to": "pump", "temperature": {"inlet": "8.0 degC", "outlet": "4.0 degC"}},
              "network": {"kind": "heat", "from": "pump", "temperature": {"inlet": "45.0 degC", "outlet": "75.0 degC"}},
              "drive": {"kind": "work", "to": "pump", "form": "electric"}}}"#,
    ),
};

impl Rule for HeatPumpBeatsCarnot {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        carnot::margins(Machine::HeatPump, me, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        carnot::explain(Machine::HeatPump, evaluation, margin, decision)
    }
}
