//! What the library returns: a finished assessment, in SI units, from which every report is drawn.

pub use crate::balance::Exergies;
use crate::balance::{Evaluation, Row};
use crate::evidence::{Families, Sensitivity, decide};
use crate::model::{Blocked, Decision, Family, Margin, Model, Scope, Verdict, View};
use crate::process::{StateForm, Var};
use crate::rules::{self, Aspect, Authority, Explanation, Severity};

/// The verdict of a component, a group, the plant or the whole, over tests of law.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Overall {
    /// No test could be made.
    Unchecked,
    /// Every test that was made holds.
    Holds,
    /// At least one cannot be told from its limit.
    Undecided,
    /// At least one is likely violated.
    Suspect,
    /// At least one is violated.
    Violated,
}

impl Overall {
    /// The word in reports.
    pub const fn text(self) -> &'static str {
        match self {
            Overall::Unchecked => "unchecked",
            Overall::Holds => "holds",
            Overall::Undecided => "undecided",
            Overall::Suspect => "suspect",
            Overall::Violated => "violated",
        }
    }

    const fn of(verdict: Verdict) -> Overall {
        match verdict {
            Verdict::Holds => Overall::Holds,
            Verdict::Undecided => Overall::Undecided,
            Verdict::Suspect => Overall::Suspect,
            Verdict::Violated => Overall::Violated,
        }
    }
}

/// Whether the data contradict each other.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum DataVerdict {
    /// Every test of the data that was made passed.
    Consistent,
    /// At least one contradiction.
    Contradictory,
    /// No test of the data could be made.
    Unchecked,
}

impl DataVerdict {
    /// The word in reports.
    pub const fn text(self) -> &'static str {
        match self {
            DataVerdict::Consistent => "consistent",
            DataVerdict::Contradictory => "contradictory",
            DataVerdict::Unchecked => "unchecked",
        }
    }
}

/// One defect.
#[derive(Clone, Debug)]
pub struct Finding {
    /// Index of the rule in [`rules::ALL`].
    pub rule: usize,
    /// What it is about.
    pub scope: Scope,
    /// Severity, which may be milder than the rule's.
    pub severity: Severity,
    /// JSON Pointer into the description.
    pub pointer: String,
    /// The decision behind it.
    pub decision: Decision,
    /// The rule's explanation.
    pub explanation: Explanation,
    /// Other rules that see the same defect.
    pub covers: Vec<&'static str>,
    /// What the finding is conditional on.
    pub conditional_on: Vec<&'static str>,
}

/// A test that was not made.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Unchecked {
    /// JSON Pointer into the description.
    pub pointer: String,
    /// The rule or balance.
    pub what: &'static str,
    /// Why not: `unknown`, `spent-on`, `state`, `missing` or `disabled`.
    pub reason: &'static str,
    /// The reason in a sentence.
    pub detail: String,
    /// What would make it possible.
    pub would_need: String,
}

/// Counts of decisions over tests of law.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Counts {
    /// Violated tests.
    pub violated: usize,
    /// Suspect tests.
    pub suspect: usize,
    /// Undecided tests.
    pub undecided: usize,
    /// Tests that hold.
    pub holds: usize,
    /// Tests that could not be made.
    pub unchecked: usize,
}

/// A finished assessment.
#[derive(Debug)]
pub struct Judgement {
    /// Verdict over tests of law.
    pub verdict: Overall,
    /// Whether every test of law that applies was made.
    pub complete: bool,
    /// Verdict over the data.
    pub data: DataVerdict,
    /// Counts over tests of law.
    pub counts: Counts,
    /// Families of tests.
    pub families: Families,
    /// Law findings that are violated or suspect, worst first.
    pub violations: Vec<Finding>,
    /// Contradictions in the data, unusual practice, advice.
    pub warnings: Vec<Finding>,
    /// Law tests that cannot be told from their limit.
    pub undecided: Vec<Finding>,
    /// Tests that were not made.
    pub unchecked: Vec<Unchecked>,
    /// Verdict of each component.
    pub components: Vec<(Overall, bool)>,
    /// Verdict of each group.
    pub groups: Vec<(Overall, bool)>,
    /// Verdict of the plant.
    pub plant: (Overall, bool),
}

/// Collects the margins of every rule that is switched on. Advice of practice belongs to a full report
/// only: without the exergy view the rules of practice are left out, as they decide nothing.
pub fn margins(evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    let disabled = &evaluation.view.model.process.policy.disable;
    for (i, rule) in rules::ALL.iter().enumerate() {
        let info = rule.info();
        let advice = info.authority == Authority::Practice && evaluation.exergies.is_none();
        if !advice && !disabled.contains(&info.name) {
            rule.margins(i, evaluation, out);
        }
    }
}

/// Decides the margins and gathers the findings.
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
        violations: Vec::new(),
        warnings: Vec::new(),
        undecided: Vec::new(),
        unchecked: Vec::new(),
        components: vec![(Overall::Unchecked, false); process.components.len()],
        groups: vec![(Overall::Unchecked, false); process.groups.len()],
        plant: (Overall::Unchecked, false),
    };
    for (i, (margin, decision)) in margins.iter().zip(&decisions).enumerate() {
        let info = rules::ALL[margin.rule].info();
        match (&margin.form, decision) {
            (Ok(_), Some(d)) => {
                if info.authority == Authority::Law && primaries[i].is_none() {
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
            (Err(blocked), _) => {
                if info.authority == Authority::Law {
                    out.complete = false;
                    out.counts.unchecked += 1;
                }
                out.unchecked.push(unchecked(evaluation, margin, blocked));
            }
            (Ok(_), None) => {}
        }
    }
    gather(evaluation, margins, &decisions, &primaries, &mut out);
    for rule in &process.policy.disable {
        let info = rules::find(rule).map(|i| rules::ALL[i].info());
        if let Some(info) = info.filter(|i| i.authority == Authority::Law) {
            out.complete = false;
            out.counts.unchecked += 1;
            out.unchecked.push(Unchecked {
                pointer: "/policy/disable".to_owned(),
                what: info.name,
                reason: "disabled",
                detail: "the rule was switched off by the policy".to_owned(),
                would_need: "switching it on".to_owned(),
            });
        }
    }
    untested(evaluation, margins, &mut out);
    spent(evaluation, &mut out);
    out
}

/// Claims that no rule could test.
fn untested(evaluation: &Evaluation<'_>, margins: &[Margin], out: &mut Judgement) {
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
fn gather(
    evaluation: &Evaluation<'_>,
    margins: &[Margin],
    decisions: &[Option<Decision>],
    primaries: &[Option<Decision>],
    out: &mut Judgement,
) {
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
fn spent(evaluation: &Evaluation<'_>, out: &mut Judgement) {
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

/// Whether a figure was given, solved for or assumed; `unknown` where none of these could be done.
/// A given figure whose uncertainty alone was assumed is given.
pub fn origin(view: View<'_>, var: usize) -> &'static str {
    if !view.workspace.is_known(var) {
        return "unknown";
    }
    match &view.model.process.vars[var] {
        Var::Unknown { .. } => "solved",
        Var::Given(affine) if affine.terms.is_empty() => "assumed",
        Var::Given(_) => "given",
    }
}
