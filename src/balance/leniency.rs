//! What an open balance could still explain: entropy that an unseen stream or an unseen heat loss would
//! carry. Entropy generation of a region whose mass does not close depends on the datum of entropy,
//! and that of a machine which was only assumed adiabatic depends on that assumption; the law is
//! judged with the explanation that is kindest, and the open balance is reported as such.

use super::Evaluation;
use super::region;
use crate::fluid::Property;
use crate::model::{Blocked, Dual};
use crate::process::{Carried, ComponentId, Literals, Var};

/// A mass balance closes if it is open by less than this share of the throughput.
const CLOSED: f64 = 1e-9;

/// An energy balance that is open by more than this share of the throughput may hide a heat loss;
/// less is rounding of design figures (the default closure tolerance).
const OPEN: f64 = 1e-3;

/// What is to be added to the entropy generation of a set of components before it is judged, W/K or
/// J/K; `None` where their balances leave nothing open.
///
/// # Errors
/// What blocks it; `Missing` where a flow was solved to run against its declared direction, so that
/// nothing can be said of the process as described.
pub fn of(evaluation: &Evaluation<'_>, members: &[ComponentId]) -> Result<Option<Dual>, Blocked> {
    let mut sum: Option<Dual> = None;
    for &k in members {
        if let Some(part) = evaluation.unseen(k).map_err(Clone::clone)? {
            sum = Some(match sum {
                Some(sum) => sum.plus(part),
                None => part.clone(),
            });
        }
    }
    Ok(sum)
}

/// The part of one component.
///
/// # Errors
/// See [`of`].
pub(super) fn of_component(evaluation: &Evaluation<'_>, k: ComponentId) -> Result<Option<Dual>, Blocked> {
    runs_as_declared(evaluation, k)?;
    // Heat is looked for only where the masses close.
    match unseen_stream(evaluation, k)? {
        Some(stream) => Ok(Some(stream)),
        None => unseen_heat(evaluation, k),
    }
}

fn runs_as_declared(evaluation: &Evaluation<'_>, k: ComponentId) -> Result<(), Blocked> {
    let view = evaluation.view;
    let process = &view.model.process;
    let component = &process.components[k];
    let flows = || component.inlets.iter().chain(&component.outlets);
    let amount = |f: usize| process.flows[f].material().map(|m| m.amount);
    let solved = |v: usize| matches!(process.vars[v], Var::Unknown { .. }) && view.workspace.is_known(v);
    let largest = flows()
        .filter_map(|&f| amount(f))
        .filter(|&v| view.workspace.is_known(v))
        .fold(0.0, |most: f64, v| most.max(view.workspace.value(v).abs()));
    let backwards =
        flows().filter_map(|&f| amount(f)).any(|v| solved(v) && view.workspace.value(v) < -CLOSED * largest);
    if backwards { Err(Blocked::Missing("a solution in which every flow runs as declared")) } else { Ok(()) }
}

/// The entropy of the stream that would close the mass of each set: what is missing leaves at the
/// highest entropy of the set, what is too much came in at the lowest. `None` where all close.
fn unseen_stream(evaluation: &Evaluation<'_>, k: ComponentId) -> Result<Option<Dual>, Blocked> {
    let view = evaluation.view;
    let process = &view.model.process;
    let mut sum: Option<Dual> = None;
    for (i, side) in process.components[k].sides.iter().enumerate() {
        let (inward, outward) = region::set_mass_values(view, k, i)?;
        if (inward - outward).abs() <= CLOSED * inward.abs().max(outward.abs()) {
            continue;
        }
        let gap = region::set_mass(view, k, i)?.into_residual();
        let mut extreme: Option<Dual> = None;
        for &f in side.inlets.iter().chain(&side.outlets) {
            let Some(m) = process.flows[f].material() else { continue };
            let s = view.entropy(m.state)?;
            let kinder = match &extreme {
                Some(other) if gap.value > 0.0 => s.value > other.value,
                Some(other) => s.value < other.value,
                None => true,
            };
            if kinder {
                extreme = Some(s);
            }
        }
        if let Some(s) = extreme {
            let part = gap.times(&s);
            sum = Some(match sum {
                Some(sum) => sum.plus(&part),
                None => part,
            });
        }
    }
    Ok(sum)
}

/// The entropy of the heat that would close the energy balance of a component which was only assumed
/// adiabatic: it goes to the surroundings, or to what is colder.
fn unseen_heat(evaluation: &Evaluation<'_>, k: ComponentId) -> Result<Option<Dual>, Blocked> {
    let view = evaluation.view;
    let process = &view.model.process;
    let component = &process.components[k];
    let heats = |f: &usize| matches!(process.flows[*f].carried, Carried::Heat(..) | Carried::Radiation(..));
    if component.given.heat_loss || component.inlets.iter().chain(&component.outlets).any(heats) {
        return Ok(None);
    }
    let Ok((open, throughput)) = evaluation.components[k].energy_residual() else { return Ok(None) };
    let tolerance = match process.policy.literals {
        Literals::Design => process.policy.closure_tolerance.max(OPEN),
        Literals::Measured => OPEN,
    };
    if open.value <= tolerance * throughput {
        return Ok(None);
    }
    let mut coldest = process.environment.temperature;
    let mut hottest: Option<f64> = None;
    for f in component.inlets.iter().chain(&component.outlets) {
        if let Some(m) = process.flows[*f].material()
            && let Ok(t) = view.property(m.state, Property::Temperature)
        {
            hottest = Some(hottest.map_or(t.value, |h: f64| h.max(t.value)));
        }
    }
    if let Some(hottest) = hottest {
        coldest = coldest.min(hottest);
    }
    Ok(Some(open.clone().scaled(1.0 / coldest)))
}
