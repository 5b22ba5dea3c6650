//! unusual-turbine-efficiency

use super::practice::{self, Judged};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};
use crate::process::kinds::Kind;
use crate::process::Basis;
use crate::fluid::Substance;

/// The isentropic efficiency of a steam turbine is outside what is usual.
///
/// The whole of a turbine with extractions is judged, not its sections.
pub struct UnusualTurbineEfficiency;

/// Isentropic efficiency of large steam turbines, and of those below [`SMALL`] (common practice).
const LARGE_RANGE: (f64, f64) = (0.70, 0.93);
/// See [`LARGE_RANGE`].
const SMALL_RANGE: (f64, f64) = (0.60, 0.93);
/// Power below which a turbine counts as small, W (common practice).
const SMALL: f64 = 1e6;

static INFO: RuleInfo = RuleInfo {
    name: "unusual-turbine-efficiency",
    title: "Steam turbine efficiency",
    authority: Authority::Practice,
    severity: Severity::Advice,
    aspect: Aspect::Practice,
    inequality: "0.70 ≤ isentropic efficiency ≤ 0.93, from 0.60 below 1 MW",
    applies_to: "adiabatic steam turbines",
    needs: "states at inlet and outlets",
    typical_cause: "fouling, a wrong reading",
    source: "common practice",
    breaking: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine"}},
            "flows": {
              "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.00 bar", "temperature": "310.0 degC", "mass_flow": "5 kg/s"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine"}},
            "flows": {
              "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.00 bar", "temperature": "240.0 degC", "mass_flow": "5 kg/s"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
};

impl Rule for UnusualTurbineEfficiency {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        practice::margins(me, judged(evaluation), out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        practice::explain(evaluation, margin, decision, judged(evaluation))
    }
}

fn judged(evaluation: &Evaluation<'_>) -> Vec<Judged> {
    let process = &evaluation.view.model.process;
    let turbines = process.components.iter().enumerate().filter(|(_, c)| c.kind == Kind::Turbine);
    let steam = turbines.filter(|&(k, _)| {
        matches!(practice::substance(evaluation, k), Some(Substance::Water | Substance::Pure))
    });
    steam
        .filter_map(|(k, component)| {
            let value = practice::metric(evaluation, k, "isentropic_efficiency")?;
            let power = super::measure::net_work_out(evaluation.view, component).map_or(0.0, |w| w.0.value);
            let small = process.basis == Basis::Rate && power < SMALL;
            let range = if small { SMALL_RANGE } else { LARGE_RANGE };
            Some(Judged { scope: Scope::Component(k), what: "isentropic efficiency", value, range })
        })
        .collect()
}
