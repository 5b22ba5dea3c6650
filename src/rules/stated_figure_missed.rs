//! stated-figure-missed

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::{Evaluation, performance};
use crate::model::{Decision, Dual, Family, Margin, Scope, Test};
use crate::process::{ComponentId, Stated, StatedFigure};
use crate::quantity::Dimension;

/// A figure under `stated_performance` is not what the flows give.
///
/// A claim is never used to solve. Where the flows are known it is compared with what they give; that
/// the claim also keeps the law is tested by other rules.
pub struct StatedFigureMissed;

static INFO: RuleInfo = RuleInfo {
    name: "stated-figure-missed",
    title: "Stated performance against the readings",
    authority: Authority::Data,
    severity: Severity::Minor,
    aspect: Aspect::Claim,
    inequality: "|figure from the flows − stated figure| ≤ k u, half a printed digit of the stated figure allowed",
    applies_to: "isentropic efficiencies, efficiencies and coefficients of performance under `stated_performance`",
    needs: "the flows from which the figure follows",
    typical_cause: "another operating point, fouling or wear, a reading, another definition of the figure",
    source: "definition of the figure",
    breaking: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine", "stated_performance": {"isentropic_efficiency": 0.95}}},
            "flows": {
              "inlet": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "40.00 bar", "temperature": "400.0 degC", "mass_flow": "3.0 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.000 bar", "temperature": "230.0 degC"},
              "shaft": {"kind": "work", "from": "turbine"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine", "stated_performance": {"isentropic_efficiency": 0.775}}},
            "flows": {
              "inlet": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "40.00 bar", "temperature": "400.0 degC", "mass_flow": "3.0 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.000 bar", "temperature": "230.0 degC"},
              "shaft": {"kind": "work", "from": "turbine"}}}"#,
    ),
};

/// What the flows give for a stated figure, and what it measures.
fn actual(evaluation: &Evaluation<'_>, k: ComponentId, stated: &Stated) -> Option<(Dual, Dimension)> {
    let name = match stated.what {
        StatedFigure::IsentropicEfficiency => "isentropic_efficiency",
        StatedFigure::Efficiency => "efficiency",
        StatedFigure::Cop => "cop",
        StatedFigure::ExergyEfficiency => return None,
    };
    performance::component(evaluation.view, k)
        .into_iter()
        .find(|m| m.name == name)
        .map(|m| (m.value, m.dimension))
}

const fn word(what: StatedFigure) -> &'static str {
    match what {
        StatedFigure::IsentropicEfficiency => "isentropic efficiency",
        StatedFigure::Efficiency => "efficiency",
        StatedFigure::Cop => "coefficient of performance",
        StatedFigure::ExergyEfficiency => "exergy efficiency",
    }
}

impl Rule for StatedFigureMissed {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let process = &evaluation.view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            for (i, stated) in component.stated.iter().enumerate() {
                let Some((actual, _)) = actual(evaluation, k, stated) else { continue };
                let Ok(claim) = evaluation.view.var(stated.var) else { continue };
                let throughput = actual.value.abs() + claim.value.abs();
                out.push(Margin {
                    family: Family::None,
                    test: Test::Zero { allowance: measure::half_digit(process, stated.var) },
                    pointer: Some(stated.pointer.clone()),
                    detail: i + 1,
                    ..measure::lower_bound(me, Scope::Component(k), actual.minus(&claim), throughput)
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let component = &evaluation.view.model.process.components[k];
        let stated = margin.detail.checked_sub(1).and_then(|i| component.stated.get(i));
        let found = stated.and_then(|s| Some((s, actual(evaluation, k, s)?)));
        let Some((stated, (actual, dimension))) = found else { return Explanation::default() };
        let Ok(claim) = evaluation.view.var(stated.var) else { return Explanation::default() };
        Explanation {
            statement: format!(
                "The stated {} of {} is {}; its flows give {}{}.",
                word(stated.what),
                phrase::subject(evaluation, margin.scope),
                phrase::figure(claim.value, dimension),
                phrase::figure(actual.value, dimension),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: actual.value, dimension }),
            limit: Some(Figure { value: claim.value, dimension }),
            ..Explanation::default()
        }
    }
}
