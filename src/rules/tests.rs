//! The catalogue as a whole, and what single rules measure, against figures worked out by hand.

use super::*;
use crate::balance::{Equations, Evaluation};
use crate::model::{Dual, Model, Plan, Scope, Test, Verdict, View, Workspace};
use crate::process::{Inputs, ReadLimits, SourceKind, Var, read};

/// Reads, solves and evaluates a description.
fn evaluated<R>(description: &str, ask: impl FnOnce(&mut Evaluation<'_>) -> R) -> R {
    let (process, inputs) = read(description.as_bytes(), &ReadLimits::default())
        .unwrap_or_else(|faults| panic!("{}", faults.iter().map(|f| format!("{f}\n")).collect::<String>()));
    let (model, inputs) = Model::compile(process, inputs);
    let mut workspace = Workspace::default();
    workspace.bind(&model, &inputs);
    let equations = Equations::compile(&model, &workspace);
    let plan = Plan::make(&model, &equations, &mut workspace);
    let view = View { model: &model, workspace: &workspace };
    ask(&mut Evaluation::new(view, &equations, &plan))
}

fn rule(name: &str) -> (usize, &'static dyn Rule) {
    let me = find(name).unwrap();
    (me, ALL[me])
}

/// A decision at three standard uncertainties, in which what was solved counts as exact.
fn decide(model: &Model, margin: &Margin) -> Decision {
    let form = margin.form.as_ref().unwrap();
    let mut by_source = std::collections::BTreeMap::new();
    for &(slot, d) in &form.terms {
        match model.process.vars.get(slot as usize) {
            Some(Var::Given(affine)) => {
                for &(source, weight) in &affine.terms {
                    *by_source.entry(source).or_insert(0.0) += d * weight;
                }
            }
            Some(Var::Unknown { .. }) => {}
            None => *by_source.entry(slot as usize - model.process.vars.len()).or_insert(0.0) += d,
        }
    }
    let variance: f64 = by_source.iter().map(|(&s, d)| (d * model.process.sources[s].u).powi(2)).sum();
    let (value, u) = (form.value, variance.sqrt());
    let rounding = 1e-9 * margin.throughput;
    let at_limit = value.abs() <= rounding && u <= rounding;
    let tested = match margin.test {
        Test::NonNegative => value,
        Test::Zero { allowance } => -(value.abs() - allowance).max(0.0),
    };
    let z = if at_limit { 0.0 } else { (tested / (u + rounding).max(1e-300)).clamp(-1e6, 1e6) };
    Decision {
        verdict: if z < -3.0 { Verdict::Violated } else { Verdict::Holds },
        at_limit,
        value,
        u,
        z,
        p_adjusted: 0.5,
        probability_negative: 0.5,
        detectable: 0.0,
    }
}

/// What one rule says of a description: margin, decision and explanation of each figure it has.
fn findings(name: &str, description: &str) -> Vec<(Margin, Decision, Explanation)> {
    evaluated(description, |evaluation| {
        let (me, rule) = rule(name);
        let mut margins = Vec::new();
        rule.margins(me, evaluation, &mut margins);
        let computed = margins.into_iter().filter(|m| m.form.is_ok());
        computed
            .map(|m| {
                let decision = decide(evaluation.view.model, &m);
                let explanation = rule.explain(evaluation, &m, &decision);
                (m, decision, explanation)
            })
            .collect()
    })
}

fn violated(name: &str, description: &str) -> Vec<(Margin, Decision, Explanation)> {
    findings(name, description).into_iter().filter(|f| f.1.verdict == Verdict::Violated).collect()
}

fn only(name: &str, description: &str) -> (Margin, Decision, Explanation) {
    let mut all = findings(name, description);
    assert_eq!(all.len(), 1, "{name}: {all:?}");
    all.remove(0)
}

#[track_caller]
fn near(got: f64, want: f64, tolerance: f64) {
    assert!((got - want).abs() <= tolerance, "{got} instead of {want}");
}

fn breaking(name: &str) -> &'static str {
    match rule(name).1.info().breaking {
        Case::Description(d) => d,
        Case::None(why) => panic!("{name}: {why}"),
    }
}

fn keeping(name: &str) -> &'static str {
    match rule(name).1.info().keeping {
        Case::Description(d) => d,
        Case::None(why) => panic!("{name}: {why}"),
    }
}

#[test]
fn names_are_unique_and_every_word_is_there() {
    let mut seen = std::collections::BTreeSet::new();
    for rule in ALL {
        let info = rule.info();
        assert!(seen.insert(info.name), "{} twice", info.name);
        assert!(info.name.chars().all(|c| c.is_ascii_lowercase() || c == '-'), "{}", info.name);
        let words =
            [info.title, info.inequality, info.applies_to, info.needs, info.typical_cause, info.source];
        assert!(words.iter().all(|w| !w.trim().is_empty()), "{}", info.name);
        if info.aspect == Aspect::Practice {
            assert_eq!(info.authority, Authority::Practice, "{}", info.name);
        }
    }
}

#[test]
fn breaking_cases_break_and_are_explained() {
    for rule in ALL {
        let info = rule.info();
        let Case::Description(description) = info.breaking else { continue };
        let found = violated(info.name, description);
        assert!(!found.is_empty(), "{} is not broken: {:?}", info.name, findings(info.name, description));
        for (margin, _, explanation) in found {
            let s = &explanation.statement;
            assert!(
                s.ends_with('.') && s.chars().any(|c| c.is_ascii_digit() || c == '"'),
                "{}: {s}",
                info.name
            );
            assert_eq!(margin.rule, find(info.name).unwrap());
        }
    }
}

#[test]
fn keeping_cases_keep_every_rule_but_advice() {
    for kept in ALL {
        let info = kept.info();
        let Case::Description(description) = info.keeping else { continue };
        for rule in ALL {
            let found = violated(rule.info().name, description);
            assert!(found.is_empty(), "case of {} breaks {}: {:?}", info.name, rule.info().name, found);
        }
    }
}

#[test]
fn gradients_follow_the_given_figures() {
    // Each margin's value by the binding of its inputs, one source moved at a time.
    for rule in ALL {
        let info = rule.info();
        let Case::Description(description) = info.breaking else { continue };
        let (process, inputs) = read(description.as_bytes(), &ReadLimits::default()).unwrap();
        let (model, inputs) = Model::compile(process, inputs);
        let value = |inputs: &Inputs| {
            let mut workspace = Workspace::default();
            workspace.bind(&model, inputs);
            let equations = Equations::compile(&model, &workspace);
            let plan = Plan::make(&model, &equations, &mut workspace);
            let view = View { model: &model, workspace: &workspace };
            let evaluation = Evaluation::new(view, &equations, &plan);
            let mut margins = Vec::new();
            rule.margins(find(info.name).unwrap(), &evaluation, &mut margins);
            margins.into_iter().filter_map(|m| m.form.ok()).collect::<Vec<_>>()
        };
        let base = value(&inputs);
        // Solved variables are not followed here: their gradients are the business of the evidence.
        let solved =
            |form: &Dual| form.terms.iter().any(|&(slot, _)| model.unknowns.contains(&(slot as usize)));
        for (s, source) in model.process.sources.iter().enumerate() {
            let x = inputs.values[s];
            if source.kind == SourceKind::Formulation || x == 0.0 {
                continue;
            }
            let step = 1e-5 * x.abs();
            let moved = [1.0, -1.0].map(|sign| {
                let mut inputs = inputs.clone();
                inputs.values[s] = x + sign * step;
                value(&inputs)
            });
            for (i, form) in base.iter().enumerate() {
                if solved(form) {
                    continue;
                }
                let want: f64 = form
                    .terms
                    .iter()
                    .filter_map(|&(slot, d)| match model.process.vars.get(slot as usize) {
                        Some(Var::Given(affine)) => {
                            Some(d * affine.terms.iter().filter(|t| t.0 == s).map(|t| t.1).sum::<f64>())
                        }
                        None if slot == model.source_slot(s) => Some(d),
                        _ => None,
                    })
                    .sum();
                let got = (moved[0][i].value - moved[1][i].value) / (2.0 * step);
                let scale = form.value.abs() / x.abs() + got.abs();
                assert!(
                    (got - want).abs() <= 2e-4 * scale + 1e-12,
                    "{} {}: {got} {want}",
                    info.name,
                    source.pointer
                );
            }
        }
    }
}
