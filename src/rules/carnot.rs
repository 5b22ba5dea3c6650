//! What the three rules about reversible cycles share: an efficiency or coefficient of performance
//! against its limit between entropic mean temperatures.

use super::reservoir::Reservoirs;
use super::{Explanation, Figure, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::kinds::Kind;
use crate::process::{ComponentId, StatedFigure};
use crate::quantity::Dimension;

/// A cyclic machine between two reservoirs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Machine {
    /// η = W / Qin ≤ 1 − Tc/Th.
    Engine,
    /// COP = Qin / W ≤ Tc / (Th − Tc).
    Refrigerator,
    /// COP = Qout / W ≤ Th / (Th − Tc).
    HeatPump,
}

impl Machine {
    /// Every machine.
    pub(super) const ALL: [Machine; 3] = [Machine::Engine, Machine::Refrigerator, Machine::HeatPump];

    /// The share of the limit that built machines rarely pass (common practice).
    const fn usual_share(self) -> f64 {
        match self {
            Machine::Engine => 0.85,
            Machine::Refrigerator | Machine::HeatPump => 0.75,
        }
    }

    const fn kind(self) -> Kind {
        match self {
            Machine::Engine => Kind::HeatEngine,
            Machine::Refrigerator => Kind::Refrigerator,
            Machine::HeatPump => Kind::HeatPump,
        }
    }

    const fn claimed(self) -> StatedFigure {
        match self {
            Machine::Engine => StatedFigure::Efficiency,
            Machine::Refrigerator | Machine::HeatPump => StatedFigure::Cop,
        }
    }

    const fn word(self) -> &'static str {
        match self {
            Machine::Engine => "efficiency",
            Machine::Refrigerator | Machine::HeatPump => "coefficient of performance",
        }
    }

    /// The reversible limit; `None` where the temperatures set none.
    fn limit(self, reservoirs: &Reservoirs) -> Option<Dual> {
        let source = reservoirs.source_temperature()?;
        let sink = reservoirs.sink_temperature()?;
        if self == Machine::Engine {
            // Below zero when heat is rejected hotter than it is taken in: any work is too much.
            return Some(Dual::constant(1.0).minus(&sink.times(&source.reciprocal())));
        }
        let lift = sink.clone().minus(&source);
        if lift.value <= 0.0 {
            return None;
        }
        let useful = if self == Machine::Refrigerator { source } else { sink };
        Some(useful.times(&lift.reciprocal()))
    }

    /// What the machine achieves by its own flows; `None` where it is not known or it does not run
    /// as what it is.
    fn actual(self, evaluation: &Evaluation<'_>, k: ComponentId, reservoirs: &Reservoirs) -> Option<Dual> {
        let component = &evaluation.view.model.process.components[k];
        let (work, _) = measure::net_work_out(evaluation.view, component).ok()?;
        let (benefit, cost) = match self {
            Machine::Engine => (work, reservoirs.heat_in()?),
            Machine::Refrigerator => (reservoirs.heat_in()?, work.scaled(-1.0)),
            Machine::HeatPump => (reservoirs.heat_out()?, work.scaled(-1.0)),
        };
        (benefit.value > 0.0 && cost.value > 0.0).then(|| benefit.times(&cost.reciprocal()))
    }
}

/// One margin for the machine's own flows (detail 0) and one for each claim (its index + 1).
pub(super) fn margins(machine: Machine, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    let process = &evaluation.view.model.process;
    for (k, component) in process.components.iter().enumerate() {
        if component.kind != machine.kind() {
            continue;
        }
        let Some(reservoirs) = Reservoirs::of(evaluation, k) else { continue };
        let Some(limit) = machine.limit(&reservoirs) else { continue };
        let scale = |figure: f64| figure.abs() + limit.value.abs();
        if let Some(actual) = machine.actual(evaluation, k, &reservoirs) {
            let throughput = scale(actual.value);
            out.push(measure::lower_bound(me, Scope::Component(k), limit.clone().minus(&actual), throughput));
        }
        for (i, stated) in component.stated.iter().enumerate() {
            if stated.what != machine.claimed() {
                continue;
            }
            let Ok(claim) = evaluation.view.var(stated.var) else { continue };
            let throughput = scale(claim.value);
            let form = limit.clone().minus(&claim);
            // At the limit: the limit lies within the rounding interval of the claimed figure.
            let within = form.value.abs() <= measure::half_digit(process, stated.var);
            let form = if within { Dual::constant(0.0) } else { form };
            out.push(Margin {
                pointer: Some(stated.pointer.clone()),
                detail: i + 1,
                ..measure::lower_bound(me, Scope::Component(k), form, throughput)
            });
        }
    }
}

/// One margin for each claim (its index + 1) that keeps its limit: the share of the limit from which
/// practice asks for evidence, over the claim.
pub(super) fn closeness(machine: Machine, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    let process = &evaluation.view.model.process;
    for (k, component) in process.components.iter().enumerate() {
        if component.kind != machine.kind() {
            continue;
        }
        let Some(limit) = Reservoirs::of(evaluation, k).and_then(|r| machine.limit(&r)) else { continue };
        for (i, stated) in component.stated.iter().enumerate() {
            let Ok(claim) = evaluation.view.var(stated.var) else { continue };
            // Beyond its limit a claim is a matter of law.
            if stated.what != machine.claimed() || claim.value > limit.value {
                continue;
            }
            let usual = limit.clone().scaled(machine.usual_share());
            let throughput = claim.value.abs() + limit.value.abs();
            out.push(Margin {
                pointer: Some(stated.pointer.clone()),
                detail: i + 1,
                ..measure::lower_bound(me, Scope::Component(k), usual.minus(&claim), throughput)
            });
        }
    }
}

/// The machine of a component's kind.
pub(super) fn machine_of(kind: Kind) -> Option<Machine> {
    Machine::ALL.into_iter().find(|m| m.kind() == kind)
}

/// The explanation with the share of the limit that is claimed.
pub(super) fn explain_closeness(evaluation: &Evaluation<'_>, margin: &Margin) -> Option<Explanation> {
    let Scope::Component(k) = margin.scope else { return None };
    let component = evaluation.view.model.process.components.get(k)?;
    let machine = machine_of(component.kind)?;
    let limit = Reservoirs::of(evaluation, k).and_then(|r| machine.limit(&r))?.value;
    let stated = component.stated.get(margin.detail.checked_sub(1)?)?;
    let claim = evaluation.view.var(stated.var).ok()?.value;
    Some(Explanation {
        statement: format!(
            "The claimed {} {} of {} is {} % of the limit {} of a reversible cycle; built machines rarely pass {} %, \
             so ask for the test report, its temperatures and what it includes.",
            machine.word(),
            phrase::number(claim),
            phrase::subject(evaluation, margin.scope),
            phrase::number(100.0 * claim / limit),
            phrase::number(limit),
            phrase::number(100.0 * machine.usual_share()),
        ),
        value: Some(Figure { value: claim, dimension: Dimension::Fraction }),
        limit: Some(Figure { value: machine.usual_share() * limit, dimension: Dimension::Fraction }),
        ..Explanation::default()
    })
}

/// The explanation with both figures and the temperatures behind the limit.
pub(super) fn explain(
    machine: Machine,
    evaluation: &Evaluation<'_>,
    margin: &Margin,
    decision: &Decision,
) -> Explanation {
    let Scope::Component(k) = margin.scope else { return Explanation::default() };
    let process = &evaluation.view.model.process;
    let Some(reservoirs) = Reservoirs::of(evaluation, k) else { return Explanation::default() };
    let claim = margin.detail.checked_sub(1).and_then(|i| process.components[k].stated.get(i));
    let figure = match claim {
        Some(stated) => evaluation.view.var(stated.var).ok(),
        None => machine.actual(evaluation, k, &reservoirs),
    };
    let (Some(figure), Some(limit), Some(source), Some(sink)) =
        (figure, machine.limit(&reservoirs), reservoirs.source_temperature(), reservoirs.sink_temperature())
    else {
        return Explanation::default();
    };
    let relation = if decision.at_limit {
        "is at"
    } else if figure.value > limit.value {
        "exceeds"
    } else {
        "stays below"
    };
    Explanation {
        statement: format!(
            "The {}{} {} of {} {relation} the limit {} of a reversible cycle that takes heat in at {} and \
             gives it off at {} (entropic means){}.",
            if claim.is_some() { "claimed " } else { "" },
            machine.word(),
            phrase::number(figure.value),
            phrase::subject(evaluation, margin.scope),
            phrase::number(limit.value),
            phrase::figure(source.value, Dimension::Temperature),
            phrase::figure(sink.value, Dimension::Temperature),
            phrase::sureness(decision),
        ),
        value: Some(Figure { value: figure.value, dimension: Dimension::Fraction }),
        limit: Some(Figure { value: limit.value, dimension: Dimension::Fraction }),
        ..Explanation::default()
    }
}
