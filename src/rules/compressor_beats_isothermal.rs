//! compressor-beats-isothermal

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::balance::passage::{compressed_side, is_empty};
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::Carried;
use crate::process::kinds::Kind;

/// A cooled compressor takes less work than the exergy that its fluid gains.
///
/// The work of a reversible isothermal compression bounds it only where the suction is at ambient
/// temperature; the rise of flow exergy bounds it always. What a coolant below ambient temperature
/// brings in is counted with the work.
pub struct CompressorBeatsIsothermal;

static INFO: RuleInfo = RuleInfo {
    name: "compressor-beats-isothermal",
    title: "Cooled compressor",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "W ≥ m (e2 − e1); the isothermal work m R T0 ln(p2/p1) only where T1 = T0",
    applies_to: "compressors with cooling",
    needs: "suction, delivery, power",
    typical_cause: "a flow at normal conditions taken for an actual one, a wrong power",
    source: "Bejan, Tsatsaronis & Moran, Thermal Design and Optimization, 1996, ch. 3",
    breaking: Case::Description(
        r#"{"components": {"compressor": {"kind": "compressor"}},
            "flows": {
              "suction": {"kind": "material", "to": "compressor", "fluid": "air", "pressure": "1.00 bar", "temperature": "25.0 degC", "mass_flow": "1.00 kg/s"},
              "delivery": {"kind": "material", "from": "compressor", "fluid": "air", "pressure": "8.00 bar", "temperature": "40.0 degC", "mass_flow": "1.00 kg/s"},
              "shaft": {"kind": "work", "to": "compressor", "form": "shaft", "power": "150 kW"},
              "cooling": {"kind": "heat", "from": "compressor", "temperature": "25.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"compressor": {"kind": "compressor"}},
            "flows": {
              "suction": {"kind": "material", "to": "compressor", "fluid": "air", "pressure": "1.00 bar", "temperature": "25.0 degC", "mass_flow": "1.00 kg/s"},
              "delivery": {"kind": "material", "from": "compressor", "fluid": "air", "pressure": "8.00 bar", "temperature": "40.0 degC", "mass_flow": "1.00 kg/s"},
              "shaft": {"kind": "work", "to": "compressor", "form": "shaft", "power": "250 kW"},
              "cooling": {"kind": "heat", "from": "compressor", "temperature": "25.0 degC"}}}"#,
    ),
};

impl Rule for CompressorBeatsIsothermal {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        for k in 0..evaluation.components.len() {
            if let Some((work, gain, throughput)) = cooled(evaluation, k) {
                let form = work.minus(&gain);
                out.push(measure::lower_bound(me, Scope::Component(k), form, throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let Some((work, gain, _)) = cooled(evaluation, k) else { return Explanation::default() };
        let dimension = phrase::energy_dimension(evaluation);
        let relation = if decision.value < 0.0 { "less than" } else { "no less than" };
        Explanation {
            statement: phrase::sentence(format!(
                "{} takes {} of work, {relation} the {} of exergy that its fluid gains{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(work.value, dimension),
                phrase::figure(gain.value, dimension),
                phrase::sureness(decision),
            )),
            value: Some(Figure { value: work.value, dimension }),
            limit: Some(Figure { value: gain.value, dimension }),
            ..Explanation::default()
        }
    }
}

/// What a cooled compressor is given (work, and the exergy of a cold coolant), what its fluid gains,
/// and the scale of rounding.
fn cooled(evaluation: &Evaluation<'_>, k: usize) -> Option<(Dual, Dual, f64)> {
    let view = evaluation.view;
    let process = &view.model.process;
    let component = process.components.get(k)?;
    let sides = component.sides.iter().filter(|s| !is_empty(s));
    if component.kind != Kind::Compressor
        || measure::is_adiabatic(process, component) && sides.count() < 2
    {
        return None;
    }
    let exergies = evaluation.exergies.as_ref()?;
    let region = evaluation.equations.components.get(k)?;
    let main = component.sides.get(compressed_side(view, component)?)?;
    let (mut work, mut gain, mut other) = (Dual::default(), Dual::default(), Dual::default());
    let mut throughput = 0.0;
    for (f, _, sign) in region.crossings() {
        let e = exergies.surroundings.flow(view, f, region, sign).ok()?;
        throughput += e.value.abs();
        if matches!(process.flows[f].carried, Carried::Work(..)) {
            work.add_scaled(sign, &e);
        } else if main.inlets.contains(&f) || main.outlets.contains(&f) {
            gain.add_scaled(-sign, &e);
        } else {
            other.add_scaled(sign, &e);
        }
    }
    if other.value > 0.0 {
        work.add_scaled(1.0, &other);
    }
    Some((work, gain, throughput))
}
