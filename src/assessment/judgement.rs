//! From margins to verdicts.

use super::{Counts, DataVerdict, Judgement, Overall};
use crate::balance::Evaluation;
use crate::evidence::{Sensitivity, decide};
use crate::model::{Decision, Family, Margin, Scope, Verdict};
use crate::process::Process;
use crate::rules::{self, Aspect, Authority, Severity};

/// Decides the margins.
pub fn judge(evaluation: &Evaluation<'_>, margins: &[Margin], sensitivity: &mut Sensitivity) -> Judgement {
    let model = evaluation.view.model;
    let process = &model.process;
    let (mut decisions, families) = decide(model, margins, sensitivity, process.policy.false_alarm);
    let primaries = primaries(margins, &decisions);
    for (decision, primary) in decisions.iter_mut().zip(&primaries) {
        // A view never says more than the test it follows from: the probability of a false alarm
        // was shared out among the primary tests.
        if let (Some(own), Some(primary)) = (decision, primary) {
            own.verdict = own.verdict.min(primary.verdict);
        }
    }
    let mut out = Judgement {
        verdict: Overall::Unchecked,
        complete: true,
        data: DataVerdict::Unchecked,
        counts: Counts::default(),
        families,
        components: vec![(Overall::Unchecked, false); process.components.len()],
        groups: vec![(Overall::Unchecked, false); process.groups.len()],
        plant: (Overall::Unchecked, false),
        decisions,
        primaries,
    };
    for (i, (margin, decision)) in margins.iter().zip(&out.decisions).enumerate() {
        let info = rules::ALL[margin.rule].info();
        match (&margin.form, decision) {
            (Ok(_), Some(d)) => {
                if info.authority == Authority::Law && out.primaries[i].is_none() {
                    let verdict = Overall::of(d.verdict);
                    out.verdict = out.verdict.max(verdict);
                    match d.verdict {
                        Verdict::Violated => out.counts.violated += 1,
                        Verdict::Suspect => out.counts.suspect += 1,
                        Verdict::Undecided => out.counts.undecided += 1,
                        Verdict::Holds => out.counts.holds += 1,
                    }
                    let slot = match margin.scope {
                        Scope::Component(k) => out.components.get_mut(k),
                        Scope::Group(g) => out.groups.get_mut(g),
                        Scope::Plant => Some(&mut out.plant),
                        Scope::Flow(_) | Scope::Description => None,
                    };
                    if let Some(slot) = slot {
                        let whole = margin.family == Family::Entropy && margin.detail == 0;
                        if whole && info.aspect == Aspect::Entropy {
                            slot.1 = d.at_limit;
                        }
                        slot.0 = slot.0.max(verdict);
                    }
                } else if info.authority == Authority::Data && info.severity >= Severity::Minor {
                    let broken = d.verdict == Verdict::Violated;
                    out.data = match (out.data, broken) {
                        (_, true) | (DataVerdict::Contradictory, _) => DataVerdict::Contradictory,
                        _ => DataVerdict::Consistent,
                    };
                }
            }
            (Err(_), _) if info.authority == Authority::Law => {
                out.complete = false;
                out.counts.unchecked += 1;
            }
            _ => {}
        }
    }
    let disabled = disabled_laws(process).count();
    if disabled > 0 {
        out.complete = false;
        out.counts.unchecked += disabled;
    }
    out
}

/// The rules of law that the policy has switched off.
pub(super) fn disabled_laws(process: &Process) -> impl Iterator<Item = &'static str> + '_ {
    let infos = process.policy.disable.iter().filter_map(|rule| Some(rules::ALL[rules::find(rule)?].info()));
    infos.filter(|info| info.authority == Authority::Law).map(|info| info.name)
}

/// For each margin that sees the same defect as its component's entropy balance, or as its
/// smallest temperature difference, from another side: the decision on that primary test. A view
/// whose primary test was not made stands for itself.
fn primaries(margins: &[Margin], decisions: &[Option<Decision>]) -> Vec<Option<Decision>> {
    let aspect = |i: usize| rules::ALL[margins[i].rule].info().aspect;
    // By place: the entropy balance, and the smallest temperature difference.
    let mut first: Vec<[Option<Decision>; 2]> = Vec::new();
    let components = margins.iter().filter_map(|m| match m.scope {
        Scope::Component(k) => Some(k + 1),
        _ => None,
    });
    let after = components.max().unwrap_or(0);
    let place = |scope: Scope| match scope {
        Scope::Component(k) => Some(k),
        Scope::Plant => Some(after),
        Scope::Group(g) => Some(after + 1 + g),
        Scope::Flow(_) | Scope::Description => None,
    };
    for (i, margin) in margins.iter().enumerate() {
        // A test over nothing that flows bounds nothing.
        let idle = margin.throughput == 0.0 && decisions[i].is_some_and(|d| d.at_limit);
        if margin.family == Family::Entropy
            && !idle
            && (aspect(i) == Aspect::Interior || margin.detail == 0)
            && let Some(decision) = decisions[i]
        {
            let Some(at) = place(margin.scope) else { continue };
            if first.len() <= at {
                first.resize(at + 1, [None; 2]);
            }
            first[at][usize::from(aspect(i) == Aspect::Interior)].get_or_insert(decision);
        }
    }
    let primary = |(i, margin): (usize, &Margin)| {
        let view = margin.family == Family::None
            && (aspect(i) == Aspect::Interior || aspect(i) == Aspect::Entropy && margin.detail == 0);
        let at = place(margin.scope).filter(|_| view)?;
        first.get(at)?[usize::from(aspect(i) == Aspect::Interior)]
    };
    margins.iter().enumerate().map(primary).collect()
}
