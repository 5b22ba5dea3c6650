//! section-entropy-negative

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, interior, measure, phrase};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};

/// A section of an exchanger destroys entropy.
///
/// Cut at equal duty, every section is an exchanger of its own. The section with the least entropy
/// generation is the one in which the curves are crossed; where they are not, no section can
/// destroy any, so that this speaks only beside a temperature cross.
pub struct SectionEntropyNegative;

static INFO: RuleInfo = RuleInfo {
    name: "section-entropy-negative",
    title: "Entropy generation of a section",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Interior,
    inequality: "σ(q1, q2) = Σ m Δs between any two places of equal duty ≥ 0",
    applies_to: "exchangers whose temperature curves are crossed",
    needs: "the temperature profile",
    typical_cause: "as of internal-temperature-cross",
    source: "second law for a section as a system of its own",
    breaking: Case::Description(interior::CROSSED),
    keeping: Case::Description(interior::UNCROSSED),
};

impl Rule for SectionEntropyNegative {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        for k in 0..evaluation.components.len() {
            if let Ok(Some(profile)) = evaluation.profile(k)
                && let Some(crossing) = &profile.crossing
            {
                let form = crossing.generation.clone();
                out.push(measure::lower_bound(me, Scope::Component(k), form, crossing.throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Some((profile, crossing)) =
            interior::of(evaluation, margin).and_then(|p| Some((p, p.crossing.as_ref()?)))
        else {
            return Explanation::default();
        };
        let dimension = phrase::entropy_dimension(evaluation);
        Explanation {
            statement: format!(
                "The section of {} from {} to {} from {} generates {}{}.",
                phrase::subject(evaluation, margin.scope),
                interior::place(evaluation, profile, crossing.from),
                interior::place(evaluation, profile, crossing.to),
                interior::origin(profile),
                phrase::figure(decision.value, dimension),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            ..Explanation::default()
        }
    }
}
