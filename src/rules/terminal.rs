//! Temperature approaches at the ends of an exchanger with two sides.

use super::{Explanation, Figure, measure, phrase};
use crate::balance::Evaluation;
use crate::fluid::Property;
use crate::model::{Decision, Dual, Family, Margin, Scope, View};
use crate::process::{Arrangement, Component, ComponentId, FlowId};
use crate::quantity::Dimension;

/// One end of an exchanger: the flow of the side that heats, the one of the side that is heated.
type End = (FlowId, FlowId);

/// The two ends of an exchanger with two sides, one of which gives off heat and one of which takes
/// it in; `None` for any other, where enthalpies are not known, and where a side runs against its
/// declared direction.
fn ends(view: View<'_>, component: &Component) -> Option<[End; 2]> {
    let passages: Vec<(FlowId, FlowId)> = component
        .sides
        .iter()
        .map(|side| match (&side.inlets[..], &side.outlets[..]) {
            ([inlet], [outlet])
                if !measure::is_reversed(view, *inlet) && !measure::is_reversed(view, *outlet) =>
            {
                Some((*inlet, *outlet))
            }
            _ => None,
        })
        .collect::<Option<_>>()?;
    let [first, second] = passages[..] else { return None };
    let enthalpy = |f: FlowId| {
        let state = view.model.process.flows[f].material()?.state;
        view.property_value(state, Property::Enthalpy).ok()
    };
    let gives = |(inlet, outlet): (FlowId, FlowId)| Some(enthalpy(inlet)? - enthalpy(outlet)?);
    let (a, b) = (gives(first)?, gives(second)?);
    let (hot, cold) = if a > 0.0 && b < 0.0 {
        (first, second)
    } else if a < 0.0 && b > 0.0 {
        (second, first)
    } else {
        return None;
    };
    Some(if component.arrangement == Arrangement::Parallel {
        [(hot.0, cold.0), (hot.1, cold.1)]
    } else {
        [(hot.0, cold.1), (hot.1, cold.0)]
    })
}

fn approach(view: View<'_>, end: End) -> Option<(Dual, f64)> {
    let temperature = |f: FlowId| {
        let state = view.model.process.flows[f].material()?.state;
        view.property(state, Property::Temperature).ok()
    };
    let (hot, cold) = (temperature(end.0)?, temperature(end.1)?);
    let scale = hot.value + cold.value;
    Some((hot.minus(&cold), scale))
}

/// One margin an exchanger whose arrangement is `wanted`: the smaller approach, with its end as
/// detail.
pub(super) fn margins(
    wanted: fn(Arrangement) -> bool,
    me: usize,
    family: Family,
    evaluation: &Evaluation<'_>,
    out: &mut Vec<Margin>,
) {
    let view = evaluation.view;
    for (k, component) in view.model.process.components.iter().enumerate() {
        if component.kind.is_exchanger()
            && wanted(component.arrangement)
            && let Some(ends) = ends(view, component)
            && let (Some(a), Some(b)) = (approach(view, ends[0]), approach(view, ends[1]))
        {
            // Where the interior is known, its smallest difference includes the ends.
            let family = match evaluation.profile(k) {
                Ok(Some(_)) => Family::None,
                _ => family,
            };
            let (detail, (form, throughput)) = if b.0.value < a.0.value { (1, b) } else { (0, a) };
            out.push(Margin {
                family,
                detail,
                ..measure::lower_bound(me, Scope::Component(k), form, throughput)
            });
        }
    }
}

/// The explanation with the two temperatures of the end.
pub(super) fn explain(evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
    let Scope::Component(k) = margin.scope else { return Explanation::default() };
    sentence(evaluation, k, margin, decision).unwrap_or_default()
}

fn sentence(
    evaluation: &Evaluation<'_>,
    k: ComponentId,
    margin: &Margin,
    decision: &Decision,
) -> Option<Explanation> {
    let view = evaluation.view;
    let process = &view.model.process;
    let end = *ends(view, &process.components[k])?.get(margin.detail)?;
    let temperature = |f: FlowId| {
        let state = process.flows[f].material()?.state;
        let t = view.property(state, Property::Temperature).ok()?;
        Some(phrase::figure(t.value, Dimension::Temperature))
    };
    let relation = if decision.value < 0.0 { "hotter" } else { "colder" };
    Some(Explanation {
        statement: format!(
            "At one end of {}, \"{}\" ({}), which is heated, is {} {relation} than \"{}\" ({}), which heats it{}.",
            phrase::subject(evaluation, margin.scope),
            process.flows[end.1].name,
            temperature(end.1)?,
            phrase::figure(decision.value.abs(), Dimension::TemperatureDifference),
            process.flows[end.0].name,
            temperature(end.0)?,
            phrase::sureness(decision),
        ),
        value: Some(Figure { value: decision.value, dimension: Dimension::TemperatureDifference }),
        limit: Some(Figure { value: 0.0, dimension: Dimension::TemperatureDifference }),
        ..Explanation::default()
    })
}
