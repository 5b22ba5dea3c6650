//! A declared phase against the saturation temperature.

use super::{Explanation, Figure, measure, phrase};
use crate::balance::Evaluation;
use crate::fluid::{Pair, Phase};
use crate::model::{Decision, Dual, Margin};
use crate::process::{StateForm, StateId};
use crate::quantity::Dimension;

/// Temperature and saturation temperature of a state that is given by pressure and temperature and
/// declared to be in `phase`. `None` where it is not, and above the critical pressure.
fn temperatures(evaluation: &Evaluation<'_>, s: StateId, phase: Phase) -> Option<(Dual, Dual)> {
    let view = evaluation.view;
    let spec = &view.model.process.states[s];
    if spec.phase != Some(phase) || spec.form != StateForm::Pair(Pair::PressureTemperature) {
        return None;
    }
    let (p, t) = (view.var(spec.a).ok()?, view.var(spec.b).ok()?);
    let engine = &view.model.process.fluids[spec.fluid].engine;
    let quality = if phase == Phase::Vapour { 1.0 } else { 0.0 };
    let (saturation, slope) = engine.saturation_temperature(p.value, quality).ok()?;
    Some((t, p.map(saturation, slope)))
}

/// One margin for each state declared to be in `phase`: vapour above its saturation temperature,
/// liquid below.
pub(super) fn margins(phase: Phase, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    let process = &evaluation.view.model.process;
    for (s, spec) in process.states.iter().enumerate() {
        let Some((t, saturation)) = temperatures(evaluation, s, phase) else { continue };
        let throughput = t.value + saturation.value;
        let above = t.minus(&saturation);
        let form = if phase == Phase::Vapour { above } else { above.scaled(-1.0) };
        out.push(Margin {
            pointer: Some(spec.pointer.clone()),
            detail: s,
            ..measure::lower_bound(me, measure::scope_of_state(process, s), form, throughput)
        });
    }
}

/// The explanation with both temperatures.
pub(super) fn explain(
    phase: Phase,
    evaluation: &Evaluation<'_>,
    margin: &Margin,
    decision: &Decision,
) -> Explanation {
    let Some((t, saturation)) = temperatures(evaluation, margin.detail, phase) else {
        return Explanation::default();
    };
    let relation = if t.value < saturation.value { "below" } else { "above" };
    Explanation {
        statement: phrase::sentence(format!(
            "{} counts as {} (declared, or by the machine it touches); at {} it is {} {relation} saturation, {}{}.",
            phrase::state(evaluation, margin.detail),
            phase.text(),
            phrase::figure(t.value, Dimension::Temperature),
            phrase::figure((t.value - saturation.value).abs(), Dimension::TemperatureDifference),
            phrase::figure(saturation.value, Dimension::Temperature),
            phrase::sureness(decision),
        )),
        value: Some(Figure { value: t.value, dimension: Dimension::Temperature }),
        limit: Some(Figure { value: saturation.value, dimension: Dimension::Temperature }),
        ..Explanation::default()
    }
}
