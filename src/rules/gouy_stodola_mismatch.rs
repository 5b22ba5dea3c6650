//! gouy-stodola-mismatch

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Test};

/// The exergy balance and the entropy balance of the tool itself disagree.
///
/// Exergy lost is T0 σ by an identity; a difference beyond rounding is a fault of the tool, and its
/// figures for this place are not to be trusted.
pub struct GouyStodolaMismatch;

static INFO: RuleInfo = RuleInfo {
    name: "gouy-stodola-mismatch",
    title: "Exergy against entropy",
    authority: Authority::SelfCheck,
    severity: Severity::Internal,
    aspect: Aspect::Tool,
    inequality: "|E in − E out − energy residual − T0 σ| ≤ 1e-9 of the exergy throughput",
    applies_to: "every component and the plant",
    needs: "both balances",
    typical_cause: "a fault of this tool: two environments or two datums mixed",
    source: "identity of Gouy (1889) and Stodola (1910)",
    breaking: Case::None("only a fault of the tool itself can break it"),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "40.0 bar", "temperature": "400.0 degC", "mass_flow": "2 kg/s"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "10.0 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for GouyStodolaMismatch {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        for (i, &(scope, mismatch, throughput)) in evaluation.exergy_mismatch.iter().flatten().enumerate() {
            out.push(Margin {
                test: Test::Zero { allowance: SHARE * throughput },
                detail: i,
                // The allowance is the whole of what rounding may do.
                ..measure::lower_bound(me, scope, Dual::constant(mismatch), 0.0)
            });
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let dimension = phrase::energy_dimension(evaluation);
        let throughput =
            evaluation.exergy_mismatch.iter().flatten().nth(margin.detail).map_or(0.0, |entry| entry.2);
        Explanation {
            statement: format!(
                "For {}, the exergy balance and T0 σ differ by {} of {}: a fault of this tool, please report it.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(decision.value, dimension),
                phrase::figure(throughput, dimension),
            ),
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: SHARE * throughput, dimension }),
            ..Explanation::default()
        }
    }
}

/// Share of the exergy throughput that rounding may make up.
const SHARE: f64 = 1e-9;
