//! From verdicts to findings: what is wrong, and what was not tested, in words.

use super::judgement::disabled_laws;
use super::{Finding, Findings, Judgement, Unchecked};
use crate::balance::{Evaluation, Row};
use crate::model::{Blocked, Margin, Model, Scope, Verdict};
use crate::process::{StateForm, Var};
use crate::rules::{self, Aspect, Authority, Severity};

/// Puts a judgement on these margins into words.
pub fn explain(evaluation: &Evaluation<'_>, margins: &[Margin], judgement: &Judgement) -> Findings {
    let mut out = Findings::default();
    for margin in margins {
        if let Err(blocked) = &margin.form {
            out.unchecked.push(unchecked(evaluation, margin, blocked));
        }
    }
    gather(evaluation, margins, judgement, &mut out);
    for what in disabled_laws(&evaluation.view.model.process) {
        out.unchecked.push(Unchecked {
            pointer: "/policy/disable".to_owned(),
            what,
            reason: "disabled",
            detail: "the rule was switched off by the policy".to_owned(),
            would_need: "switching it on".to_owned(),
        });
    }
    untested(evaluation, margins, &mut out);
    spent(evaluation, &mut out);
    out
}

/// Claims that no rule could test.
fn untested(evaluation: &Evaluation<'_>, margins: &[Margin], out: &mut Findings) {
    for component in &evaluation.view.model.process.components {
        for stated in &component.stated {
            if margins.iter().all(|m| m.pointer.as_ref() != Some(&stated.pointer)) {
                out.unchecked.push(Unchecked {
                    pointer: stated.pointer.clone(),
                    what: "stated_performance",
                    reason: "missing",
                    detail: format!(
                        "no rule of law bounds this claim for a {} as it is described",
                        component.kind.name().replace('_', " ")
                    ),
                    would_need:
                        "the temperatures and streams that bound it, or a kind of machine that it is made for"
                            .to_owned(),
                });
            }
        }
    }
}

/// Where a scope is described.
pub fn pointer(evaluation: &Evaluation<'_>, scope: Scope) -> String {
    let process = &evaluation.view.model.process;
    match scope {
        Scope::Component(k) => process.components[k].pointer.clone(),
        Scope::Group(g) => process.groups[g].pointer.clone(),
        Scope::Flow(f) => process.flows[f].pointer.clone(),
        Scope::Plant | Scope::Description => String::new(),
    }
}

/// The findings: one a defect.
fn gather(evaluation: &Evaluation<'_>, margins: &[Margin], judgement: &Judgement, out: &mut Findings) {
    let Judgement { decisions, primaries, .. } = judgement;
    let process = &evaluation.view.model.process;
    let broken = |i: usize| decisions[i].is_some_and(|d| d.verdict >= Verdict::Suspect);
    // The components inside a scope.
    let inside = |scope: Scope| -> Vec<usize> {
        match scope {
            Scope::Component(k) => vec![k],
            Scope::Group(g) => process.groups[g].members.clone(),
            Scope::Plant => (0..process.components.len()).collect(),
            Scope::Flow(_) | Scope::Description => Vec::new(),
        }
    };
    let aspect = |i: usize| rules::ALL[margins[i].rule].info().aspect;
    let name = |i: usize| rules::ALL[margins[i].rule].info().name;
    let order = |a: Aspect| match a {
        Aspect::Entropy => 0,
        Aspect::Interior => 1,
        Aspect::Reaction => 2,
        Aspect::Closure => 3,
        Aspect::Claim => 4,
        Aspect::State => 5,
        Aspect::Practice => 6,
        Aspect::Tool => 7,
    };
    // Component findings first, so that unions are covered by what happens inside them.
    let mut sequence: Vec<usize> = (0..margins.len()).filter(|&i| broken(i)).collect();
    let rank = |s: Scope| match s {
        Scope::Component(_) => 0,
        Scope::Flow(_) => 1,
        Scope::Group(_) => 2,
        Scope::Plant => 3,
        Scope::Description => 4,
    };
    // Of several margins of one rule at one place the largest comes first and stands for all.
    let size = |i: usize| decisions[i].map_or(0, |d| d.z.abs().to_bits());
    sequence.sort_by_key(|&i| {
        let m = &margins[i];
        (rank(m.scope), order(aspect(i)), m.rule, m.scope, std::cmp::Reverse(size(i)), i)
    });
    let mut findings: Vec<(usize, Finding)> = Vec::new();
    // Findings of entropy generation that a more specific rule has put into plain words.
    let mut worded: Vec<usize> = Vec::new();
    for i in sequence {
        let Some(decision) = decisions[i] else { continue };
        let margin = &margins[i];
        let info = rules::ALL[margin.rule].info();
        let members = inside(margin.scope);
        // Is the defect already reported?
        let known = findings.iter_mut().enumerate().find(|(_, (j, f))| {
            let other = aspect(*j);
            let same_place = f.scope == margin.scope;
            let contained = match f.scope {
                Scope::Component(k) => members.contains(&k),
                _ => false,
            };
            let same_kind = other == info.aspect && margins[*j].pointer == margin.pointer
                || matches!(
                    (other, info.aspect),
                    (
                        Aspect::Entropy,
                        Aspect::Entropy | Aspect::Interior | Aspect::Reaction | Aspect::Closure
                    ) | (Aspect::Interior, Aspect::Interior)
                        | (Aspect::Reaction, Aspect::Reaction)
                        | (Aspect::Closure, Aspect::Closure)
                );
            match info.aspect {
                Aspect::Entropy | Aspect::Interior | Aspect::Reaction | Aspect::Closure => {
                    same_kind && (same_place || contained && margin.scope != f.scope)
                }
                _ => same_place && same_kind && name(*j) == info.name && margin.pointer == f_pointer(f),
            }
        });
        if let Some((n, (_, finding))) = known {
            if finding.scope == margin.scope
                && rules::only_counts_entropy(rules::ALL[finding.rule].info().name)
                && rules::names_the_defect(info)
                && !worded.contains(&n)
            {
                let sentence = rules::ALL[margin.rule].explain(evaluation, margin, &decision).statement;
                if !sentence.is_empty() {
                    finding.explanation.statement.push(' ');
                    finding.explanation.statement.push_str(&sentence);
                    worded.push(n);
                }
            }
            if !finding.covers.contains(&info.name) && rules::ALL[finding.rule].info().name != info.name {
                finding.covers.push(info.name);
            }
            if info.aspect == Aspect::Closure
                && rules::ALL[finding.rule].info().aspect == Aspect::Entropy
                && !finding.conditional_on.contains(&info.name)
            {
                finding.conditional_on.push(info.name);
                if finding.scope == margin.scope {
                    let sentence = rules::ALL[margin.rule].explain(evaluation, margin, &decision).statement;
                    finding.explanation.statement.push_str(" It is conditional on this: ");
                    finding.explanation.statement.push_str(&sentence);
                }
            }
            continue;
        }
        let explanation = rules::ALL[margin.rule].explain(evaluation, margin, &decision);
        findings.push((
            i,
            Finding {
                rule: margin.rule,
                scope: margin.scope,
                severity: explanation.severity.unwrap_or(info.severity),
                pointer: margin.pointer.clone().unwrap_or_else(|| pointer(evaluation, margin.scope)),
                decision,
                covers: explanation.covers.clone(),
                explanation,
                conditional_on: Vec::new(),
            },
        ));
    }
    for (_, finding) in findings {
        if rules::ALL[finding.rule].info().authority == Authority::Law {
            out.violations.push(finding);
        } else {
            out.warnings.push(finding);
        }
    }
    let worst = |f: &Finding| (std::cmp::Reverse(f.decision.verdict), std::cmp::Reverse(f.severity));
    out.violations.sort_by_key(worst);
    out.warnings.sort_by_key(|f| std::cmp::Reverse(f.severity));
    for (i, margin) in margins.iter().enumerate() {
        let info = rules::ALL[margin.rule].info();
        if let Some(d) = decisions[i]
            && d.verdict == Verdict::Undecided
            && info.authority == Authority::Law
            && primaries[i].is_none()
        {
            let explanation = rules::ALL[margin.rule].explain(evaluation, margin, &d);
            out.undecided.push(Finding {
                rule: margin.rule,
                scope: margin.scope,
                severity: Severity::Minor,
                pointer: margin.pointer.clone().unwrap_or_else(|| pointer(evaluation, margin.scope)),
                decision: d,
                explanation,
                covers: Vec::new(),
                conditional_on: Vec::new(),
            });
        }
    }
}

fn f_pointer(f: &Finding) -> Option<String> {
    Some(f.pointer.clone())
}

/// Why a test was not made, in words.
fn unchecked(evaluation: &Evaluation<'_>, margin: &Margin, blocked: &Blocked) -> Unchecked {
    let what = rules::ALL[margin.rule].info().name;
    let pointer = margin.pointer.clone().unwrap_or_else(|| pointer(evaluation, margin.scope));
    let (reason, detail, would_need) = reason(evaluation.view.model, evaluation, blocked);
    Unchecked { pointer, what, reason, detail, would_need }
}

/// Word, sentence and remedy for what blocks a figure.
pub fn reason(
    model: &Model,
    evaluation: &Evaluation<'_>,
    blocked: &Blocked,
) -> (&'static str, String, String) {
    let process = &model.process;
    match blocked {
        Blocked::Unknown(v) => match &process.vars[*v] {
            Var::Unknown { what, .. } => (
                "unknown",
                format!("the {what} is not given and cannot be solved for"),
                format!("the {what}, or another figure from which it follows"),
            ),
            Var::Given(_) => ("unknown", "a figure is unknown".to_owned(), "that figure".to_owned()),
        },
        Blocked::State(s) => {
            let spec = &process.states[*s];
            let error = evaluation
                .view
                .workspace
                .state_error(*s)
                .map_or_else(|| "the state cannot be computed".to_owned(), ToString::to_string);
            let fluid = &process.fluids[spec.fluid];
            let pair = match spec.form {
                StateForm::Pair(pair) => pair.to_string(),
                _ => "pressure or temperature and the distance from saturation".to_owned(),
            };
            (
                "state",
                format!("the state at {} cannot be computed from {pair}: {error}", spec.pointer),
                format!("figures within the range of {}", fluid.engine.provenance().formulation),
            )
        }
        Blocked::Missing(what) => ("missing", format!("{what} is missing"), (*what).to_owned()),
    }
}

/// Balances that were spent on an unknown have no power as tests.
fn spent(evaluation: &Evaluation<'_>, out: &mut Findings) {
    let process = &evaluation.view.model.process;
    for (i, row) in evaluation.equations.rows().iter().enumerate() {
        let Some(unknowns) = evaluation.spent_on(i) else { continue };
        let (pointer, what) = match row {
            Row::Mass(k, _) => (process.components[*k].pointer.clone(), "mass-imbalance"),
            Row::Element(k, ..) => (process.components[*k].pointer.clone(), "element-imbalance"),
            Row::Energy(k) => (process.components[*k].pointer.clone(), "energy-imbalance"),
            _ => continue,
        };
        let names: Vec<&str> = unknowns
            .iter()
            .map(|&v| match &process.vars[v] {
                Var::Unknown { what, .. } => what.as_str(),
                Var::Given(_) => "",
            })
            .collect();
        let names = names.join(", ");
        out.unchecked.push(Unchecked {
            pointer,
            what,
            reason: "spent-on",
            detail: format!("the balance was used to find the {names}"),
            would_need: format!("a reading of the {names}"),
        });
    }
}
