//! ideal-gas-far-from-ideal

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::{Pair, Substance};
use crate::model::{Decision, Dual, Margin};
use crate::quantity::Dimension;

/// Departure of the compressibility factor from one that is still taken as ideal, common practice.
const LIMIT: f64 = 0.05;

/// A gas is treated as ideal where it is not.
///
/// The second virial coefficient puts its compressibility factor more than 5 % from one (common
/// practice). The formulation's uncertainty carries that departure; a pure fluid by its own equation
/// would not need it.
pub struct IdealGasFarFromIdeal;

static INFO: RuleInfo = RuleInfo {
    name: "ideal-gas-far-from-ideal",
    title: "Ideal gas far from ideal",
    authority: Authority::Data,
    severity: Severity::Advice,
    aspect: Aspect::State,
    inequality: "|Z − 1| ≤ 0.05",
    applies_to: "ideal gases with critical data",
    needs: "temperature and pressure",
    typical_cause: "high pressure, or a temperature near saturation",
    source: "Abbott's form of the second virial coefficient in Smith, Van Ness & Abbott, Introduction to Chemical Engineering Thermodynamics",
    breaking: Case::Description(
        r#"{"fluids": {"carbon-dioxide": {"kind": "ideal_gas", "mole_fractions": {"CO2": 1}}},
             "components": {"letdown": {"kind": "valve"}},
            "flows": {
              "before": {"kind": "material", "to": "letdown", "fluid": "carbon-dioxide", "pressure": "60.00 bar", "temperature": "310.0 K", "mass_flow": "1 kg/s"},
              "after": {"kind": "material", "from": "letdown", "fluid": "carbon-dioxide", "pressure": "1.000 bar", "temperature": "310.0 K"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"fluids": {"carbon-dioxide": {"kind": "ideal_gas", "mole_fractions": {"CO2": 1}}},
             "components": {"letdown": {"kind": "valve"}},
            "flows": {
              "before": {"kind": "material", "to": "letdown", "fluid": "carbon-dioxide", "pressure": "2.00 bar", "temperature": "310.0 K", "mass_flow": "1 kg/s"},
              "after": {"kind": "material", "from": "letdown", "fluid": "carbon-dioxide", "pressure": "1.000 bar", "temperature": "310.0 K"}}}"#,
    ),
};

impl Rule for IdealGasFarFromIdeal {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (s, spec) in view.model.process.states.iter().enumerate() {
            let fluid = &view.model.process.fluids[spec.fluid];
            if !matches!(fluid.substance, Substance::Gas(_) | Substance::CombustionGas(_)) {
                continue;
            }
            let departure = measure::formulation(view, s);
            if departure > LIMIT {
                let scope = measure::scope_of_state(&view.model.process, s);
                // By differences where the composition is fixed; a variable one counts as it stands.
                let form = physics::by_state(view, s, |engine, p, h| {
                    let at = engine.state(Pair::PressureEnthalpy, p, h, 0.0).ok()?;
                    Some(LIMIT - engine.relative_uncertainty(&at))
                })
                .unwrap_or_else(|| Dual::constant(LIMIT - departure));
                out.push(Margin {
                    pointer: Some(spec.pointer.clone()),
                    detail: s,
                    ..measure::lower_bound(me, scope, form, 1.0)
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let departure = LIMIT - decision.value;
        Explanation {
            statement: format!(
                "{} is treated as an ideal gas where its compressibility factor is some {} % from one.",
                phrase::sentence(phrase::state(evaluation, margin.detail)),
                phrase::number((100.0 * departure).round()),
            ),
            value: Some(Figure { value: departure, dimension: Dimension::Fraction }),
            limit: Some(Figure { value: LIMIT, dimension: Dimension::Fraction }),
            ..Explanation::default()
        }
    }
}
