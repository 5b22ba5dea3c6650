//! exchanger-effectiveness-above-one

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, interior, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};
use crate::quantity::Dimension;

/// An exchanger transfers more than one of infinite area could between the same streams.
///
/// The bound is the duty at which the curves of the streams, entering as they do and leaving at
/// the same pressures, just touch; without a change of phase that is the familiar smaller capacity
/// rate times the difference of the inlet temperatures. Curves that are not crossed stay below it,
/// so that this speaks only beside a temperature cross.
pub struct ExchangerEffectivenessAboveOne;

static INFO: RuleInfo = RuleInfo {
    name: "exchanger-effectiveness-above-one",
    title: "Effectiveness of an exchanger",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Interior,
    inequality: "Q / Q∞ ≤ 1, Q∞ of the same streams with infinite area",
    applies_to: "exchangers of two streams whose temperature curves are crossed",
    needs: "the temperature profile",
    typical_cause: "a wrong amount or duty",
    source: "Kays & London, Compact Heat Exchangers, ch. 2, with the pinch in place of the smaller capacity rate",
    breaking: Case::Description(interior::CROSSED),
    keeping: Case::Description(interior::UNCROSSED),
};

impl Rule for ExchangerEffectivenessAboveOne {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        for k in 0..evaluation.components.len() {
            if let Ok(Some(profile)) = evaluation.profile(k)
                && profile.crossing.is_some()
                && let Some(room) = profile.room(evaluation.view)
            {
                // 1 − Q/Q∞, where Q∞ = room · Q.
                let form = room.map(1.0 - 1.0 / room.value, 1.0 / (room.value * room.value));
                out.push(measure::lower_bound(me, Scope::Component(k), form, 1.0));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Some(profile) = interior::of(evaluation, margin) else { return Explanation::default() };
        let effectiveness = 1.0 - decision.value;
        let energy = phrase::energy_dimension(evaluation);
        Explanation {
            statement: format!(
                "{} in {} is {} of what infinite area could transfer between the same streams, {}{}.",
                phrase::figure(profile.duty.value, energy),
                phrase::subject(evaluation, margin.scope),
                phrase::number(effectiveness),
                phrase::figure(profile.duty.value / effectiveness, energy),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: effectiveness, dimension: Dimension::Fraction }),
            limit: Some(Figure { value: 1.0, dimension: Dimension::Fraction }),
            ..Explanation::default()
        }
    }
}
