//! below-acid-dew-point

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::{Substance, combustion_gas};
use crate::model::{Decision, Dual, Margin, View};
use crate::process::StateId;
use crate::quantity::Dimension;

/// Share of the sulphur dioxide that is oxidised further, common practice.
const TRIOXIDE_SHARE: f64 = 0.02;
/// Least share of sulphur dioxide in the gas that is looked at: less is a trace.
const TRACE: f64 = 1e-5;
/// Pa in a millimetre of mercury.
const MMHG: f64 = 133.322;

/// Flue gas with sulphur leaves colder than sulphuric acid would condense from it.
///
/// Two per cent of the sulphur dioxide are taken to be sulphur trioxide (common practice is 1 to 5 %);
/// a measured share would be better. Surfaces are colder still than the gas.
pub struct BelowAcidDewPoint;

static INFO: RuleInfo = RuleInfo {
    name: "below-acid-dew-point",
    title: "Acid dew point",
    authority: Authority::Practice,
    severity: Severity::Advice,
    aspect: Aspect::Practice,
    inequality: "T ≥ T_adp(p_H2O, p_SO3)",
    applies_to: "combustion gases with sulphur",
    needs: "fuel with sulphur, temperature and pressure of the gas",
    typical_cause: "low load, cold feedwater, air drawn in",
    source: "Verhoff, F. H., Banchero, J. T.: Chem. Eng. Progress 70 (1974) no. 8, 71-72 (from memory)",
    breaking: Case::Description(
        r#"{"fluids": {"oil": {"kind": "fuel", "state": "liquid", "ultimate": {"carbon": 0.855, "hydrogen": 0.110, "sulphur": 0.030, "oxygen": 0.005}, "lower_heating_value": "40.6 MJ/kg"}, "flue": {"kind": "combustion_gas", "fuel": "oil", "oxidant": "air", "o2_dry": "3.00 %"}},
             "components": {"economiser": {"kind": "heat_exchanger"}, "boiler": {"kind": "combustor"}},
            "flows": {
              "oil": {"kind": "material", "to": "boiler", "fluid": "oil", "temperature": "25.0 degC", "pressure": "1.050 bar", "mass_flow": "1 kg/s"},
              "air": {"kind": "material", "to": "boiler", "fluid": "air", "temperature": "25.0 degC", "pressure": "1.050 bar"},
              "heat": {"kind": "heat", "from": "boiler", "temperature": "300 degC"},
              "hot": {"kind": "material", "from": "boiler", "to": "economiser", "fluid": "flue", "temperature": "350.0 degC", "pressure": "1.020 bar"},
              "cold": {"kind": "material", "from": "economiser", "fluid": "flue", "temperature": "95.0 degC", "pressure": "1.013 bar"},
              "feed": {"kind": "material", "to": "economiser", "fluid": "water", "temperature": "60.0 degC", "pressure": "20.00 bar"},
              "feed-out": {"kind": "material", "from": "economiser", "fluid": "water", "temperature": "90.0 degC", "pressure": "19.50 bar"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"fluids": {"oil": {"kind": "fuel", "state": "liquid", "ultimate": {"carbon": 0.855, "hydrogen": 0.110, "sulphur": 0.030, "oxygen": 0.005}, "lower_heating_value": "40.6 MJ/kg"}, "flue": {"kind": "combustion_gas", "fuel": "oil", "oxidant": "air", "o2_dry": "3.00 %"}},
             "components": {"economiser": {"kind": "heat_exchanger"}, "boiler": {"kind": "combustor"}},
            "flows": {
              "oil": {"kind": "material", "to": "boiler", "fluid": "oil", "temperature": "25.0 degC", "pressure": "1.050 bar", "mass_flow": "1 kg/s"},
              "air": {"kind": "material", "to": "boiler", "fluid": "air", "temperature": "25.0 degC", "pressure": "1.050 bar"},
              "heat": {"kind": "heat", "from": "boiler", "temperature": "300 degC"},
              "hot": {"kind": "material", "from": "boiler", "to": "economiser", "fluid": "flue", "temperature": "350.0 degC", "pressure": "1.020 bar"},
              "cold": {"kind": "material", "from": "economiser", "fluid": "flue", "temperature": "170.0 degC", "pressure": "1.013 bar"},
              "feed": {"kind": "material", "to": "economiser", "fluid": "water", "temperature": "60.0 degC", "pressure": "20.00 bar"},
              "feed-out": {"kind": "material", "from": "economiser", "fluid": "water", "temperature": "90.0 degC", "pressure": "19.50 bar"}}}"#,
    ),
};

impl Rule for BelowAcidDewPoint {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for s in 0..view.model.process.states.len() {
            if let Some((t, limit)) = temperatures(view, s) {
                let scope = measure::scope_of_state(&view.model.process, s);
                let throughput = t.value + limit.value;
                out.push(Margin {
                    pointer: Some(view.model.process.states[s].pointer.clone()),
                    detail: s,
                    ..measure::lower_bound(me, scope, t.minus(&limit), throughput)
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Some((t, limit)) = temperatures(evaluation.view, margin.detail) else {
            return Explanation::default();
        };
        Explanation {
            statement: format!(
                "{} is at {}; if 2 % of its sulphur dioxide is trioxide, acid condenses below {}{}.",
                phrase::sentence(phrase::state(evaluation, margin.detail)),
                phrase::figure(t.value, Dimension::Temperature),
                phrase::figure(limit.value, Dimension::Temperature),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: t.value, dimension: Dimension::Temperature }),
            limit: Some(Figure { value: limit.value, dimension: Dimension::Temperature }),
            ..Explanation::default()
        }
    }
}

/// The temperature of a gas with sulphur, and its acid dew point.
fn temperatures(view: View<'_>, s: StateId) -> Option<(Dual, Dual)> {
    let process = &view.model.process;
    let Substance::CombustionGas(gas) = &process.fluids[process.states[s].fluid].substance else {
        return None;
    };
    let c = view.composition(s).ok()?;
    let (x, dx) = gas.composition(c.value).ok()?;
    let share = |name: &str| {
        let i = combustion_gas::SPECIES.iter().position(|n| *n == name)?;
        Some((*x.get(i)?, *dx.get(i)?))
    };
    let (water, sulphur) = (share("H2O")?, share("SO2")?);
    if water.0 <= 0.0 || sulphur.0 < TRACE {
        return None;
    }
    let p = view.property(s, crate::fluid::Property::Pressure).ok()?;
    let w = (water.0 * p.value / MMHG).ln();
    let a = (TRIOXIDE_SHARE * sulphur.0 * p.value / MMHG).ln();
    // 1000/T = 2.276 − 0.0294 ln pH2O − 0.0858 ln pSO3 + 0.0062 ln pH2O ln pSO3 (mmHg, K).
    let inverse = 1e-3 * (2.276 - 0.0294 * w - 0.0858 * a + 0.0062 * w * a);
    let t = 1.0 / inverse;
    let (by_w, by_a) = (1e-3 * (-0.0294 + 0.0062 * a), 1e-3 * (-0.0858 + 0.0062 * w));
    let by_p = -t * t * (by_w + by_a) / p.value;
    let by_c = -t * t * (by_w * water.1 / water.0 + by_a * sulphur.1 / sulphur.0);
    let limit = physics::combine(t, &[(&p, by_p), (&c, by_c)]);
    Some((view.property(s, crate::fluid::Property::Temperature).ok()?, limit))
}
