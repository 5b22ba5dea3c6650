//! The catalogue as a whole, and what single rules measure, against figures worked out by hand.

use super::*;
use crate::balance::{Equations, Evaluation, Exergies};
use crate::model::{Dual, Model, Plan, Scope, Test, Verdict, View, Workspace};
use crate::process::{Inputs, ReadLimits, SourceKind, Var, read};
use std::rc::Rc;

/// Reads, solves and evaluates a description.
fn evaluated<R>(description: &str, ask: impl FnOnce(&mut Evaluation<'_>) -> R) -> R {
    let (process, inputs) = read(description.as_bytes(), &ReadLimits::default(), &names())
        .unwrap_or_else(|faults| panic!("{}", faults.iter().map(|f| format!("{f}\n")).collect::<String>()));
    let (model, inputs) = Model::compile(process, inputs);
    let mut workspace = Workspace::default();
    workspace.bind(&model, &inputs);
    let equations = Equations::compile(&model, &workspace);
    let plan = Plan::make(&model, &equations, &mut workspace, &|| false);
    let view = View { model: &model, workspace: &workspace };
    let mut evaluation = Evaluation::new(view, &equations, &plan);
    evaluation.exergies = Some(Rc::new(Exergies::derive(&evaluation)));
    ask(&mut evaluation)
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
        let speaks = |r: &&&dyn Rule| r.info().severity != Severity::Advice || r.info().name == info.name;
        for rule in ALL.iter().filter(speaks) {
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
        let (process, inputs) = read(description.as_bytes(), &ReadLimits::default(), &names()).unwrap();
        let (model, inputs) = Model::compile(process, inputs);
        let value = |inputs: &Inputs| {
            let mut workspace = Workspace::default();
            workspace.bind(&model, inputs);
            let equations = Equations::compile(&model, &workspace);
            let plan = Plan::make(&model, &equations, &mut workspace, &|| false);
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
                // An amount that is moved alone opens a balance, which entropy generation is then
                // judged with: a kink where it was closed.
                let opens = info.name.ends_with("-entropy-generation")
                    && ["_flow", "/mass", "/moles", "/volume", "/power", "/rate", "/energy"]
                        .iter()
                        .any(|end| source.pointer.ends_with(end));
                if solved(form) || opens {
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

#[test]
fn only_the_primary_tests_are_listed_when_blocked_and_count_in_the_entropy_family() {
    for rule in ALL {
        let info = rule.info();
        for case in [info.breaking, info.keeping] {
            let Case::Description(description) = case else { continue };
            evaluated(description, |evaluation| {
                for (me, rule) in ALL.iter().enumerate() {
                    let mut margins = Vec::new();
                    rule.margins(me, evaluation, &mut margins);
                    let info = rule.info();
                    let interior =
                        ["internal-temperature-cross", "composite-curves-cross"].contains(&info.name);
                    let primary = info.name.ends_with("-entropy-generation") || interior;
                    for m in margins {
                        assert!(primary || m.form.is_ok(), "{} is blocked", info.name);
                        // The ends of an exchanger stand in for an interior that is not known.
                        let ends = info.aspect == Aspect::Interior
                            && matches!(m.scope, Scope::Component(k) if evaluation.profile(k).is_err());
                        let counts = primary || ends;
                        assert_eq!(m.family == crate::model::Family::Entropy, counts, "{}", info.name);
                    }
                }
            });
        }
    }
    let blocked = evaluated(breaking("heat-pump-beats-carnot"), |evaluation| {
        let mut margins = Vec::new();
        rule("negative-entropy-generation").1.margins(0, evaluation, &mut margins);
        margins.iter().filter(|m| m.form.is_err()).count()
    });
    assert_eq!(blocked, 1);
}

#[test]
fn one_component_is_not_tested_again_as_a_plant() {
    assert!(
        findings("negative-plant-entropy-generation", breaking("negative-entropy-generation")).is_empty()
    );
}

fn heat_pump(cop: &str) -> String {
    keeping("heat-pump-beats-carnot").replace("4.90", cop)
}

#[test]
fn a_claim_is_held_against_sliding_temperatures() {
    let name = "heat-pump-beats-carnot";
    // Log means of 45 to 75 degC and 8 to 4 degC: 332.925 K and 279.145 K.
    let (margin, _, explanation) = only(name, &heat_pump("4.90"));
    near(explanation.limit.unwrap().value, 332.9247543518 / (332.9247543518 - 279.1452235301), 1e-6);
    near(margin.form.unwrap().value, 6.1905477653 - 4.90, 1e-6);
    assert_eq!(margin.pointer.as_deref(), Some("/components/pump/stated_performance/cop"));
    // The limit, 6.1905, lies within the rounding interval of 6.19 and not of 6.20.
    let (_, decision, explanation) = only(name, &heat_pump("6.19"));
    assert!(decision.at_limit);
    assert!(explanation.statement.contains("is at the limit"), "{}", explanation.statement);
    let (margin, decision, _) = only(name, &heat_pump("6.20"));
    assert!(!decision.at_limit);
    near(margin.form.unwrap().value, 6.1905477653 - 6.20, 1e-6);
}

fn engine(hot: [&str; 2], claim: &str) -> String {
    format!(
        r#"{{"components": {{"engine": {{"kind": "heat_engine", "heat_loss": "5 kW", "stated_performance": {{"efficiency": {claim}}}}}}},
            "flows": {{
              "flame": {{"kind": "heat", "to": "engine", {}"temperature": "500.0 degC"}},
              "jacket": {{"kind": "heat", "to": "engine", {}"temperature": "300.0 degC"}},
              "cold": {{"kind": "heat", "from": "engine", "rate": "50 kW", "temperature": "30.0 degC"}},
              "shaft": {{"kind": "work", "from": "engine", "form": "shaft"}}}}}}"#,
        hot[0], hot[1]
    )
}

#[test]
fn several_reservoirs_count_with_their_entropic_mean_or_with_the_kindest() {
    // The loss goes to the surroundings at 25 degC.
    let sink = 55.0 / (50.0 / 303.15 + 5.0 / 298.15);
    let known =
        findings("engine-beats-carnot", &engine([r#""rate": "60 kW", "#, r#""rate": "40 kW", "#], "0.30"));
    assert_eq!(known.len(), 2, "its own flows and the claim");
    let source = 100.0 / (60.0 / 773.15 + 40.0 / 573.15);
    near(known[0].2.value.unwrap().value, 0.45, 1e-9);
    for found in &known {
        near(found.2.limit.unwrap().value, 1.0 - sink / source, 1e-9);
    }
    let unknown = only("engine-beats-carnot", &engine(["", ""], "0.30"));
    near(unknown.2.limit.unwrap().value, 1.0 - sink / 773.15, 1e-9);
}

#[test]
fn a_stream_is_a_reservoir_at_its_entropic_mean() {
    // A perfect gas cooled from 600 K to 400 K at constant pressure: (600 − 400)/ln(600/400) K.
    let description = r#"{
        "fluids": {"gas": {"kind": "perfect_gas", "molar_mass": "29 g/mol", "specific_heat": "1.0 kJ/(kg K)"}},
        "components": {"engine": {"kind": "heat_engine", "stated_performance": {"efficiency": 0.45}}},
        "flows": {
          "in": {"kind": "material", "to": "engine", "fluid": "gas", "pressure": "1.000 bar", "temperature": "600.0 K"},
          "out": {"kind": "material", "from": "engine", "fluid": "gas", "pressure": "1.000 bar", "temperature": "400.0 K"},
          "cold": {"kind": "heat", "from": "engine", "temperature": "300.0 K"},
          "shaft": {"kind": "work", "from": "engine", "form": "shaft"}}}"#;
    let (_, decision, explanation) = only("engine-beats-carnot", description);
    near(explanation.limit.unwrap().value, 1.0 - 300.0 / (200.0 / 1.5_f64.ln()), 1e-6);
    assert_eq!(decision.verdict, Verdict::Violated);
}

#[test]
fn heat_between_equal_temperatures_is_at_the_limit() {
    let same = keeping("heat-flows-uphill").replace("60.0 degC", "20.0 degC");
    let (margin, _, _) = only("heat-flows-uphill", &same);
    assert_eq!(margin.form.unwrap().value, 0.0);
}

#[test]
fn a_heat_driven_machine_is_not_passive() {
    let description = r#"{
        "components": {"chiller": {"kind": "absorption_machine", "ports": {"driving": "gas", "cooled": "store", "rejected": "air"}}},
        "flows": {
          "gas": {"kind": "heat", "to": "chiller", "rate": "10 kW", "temperature": "150.0 degC"},
          "store": {"kind": "heat", "to": "chiller", "rate": "6 kW", "temperature": "5.0 degC"},
          "air": {"kind": "heat", "from": "chiller", "rate": "16 kW", "temperature": "35.0 degC"}}}"#;
    assert!(findings("heat-flows-uphill", description).is_empty());
    // 10/423.15 + 6/278.15 − 16/308.15 = −0.0067193 kW/K.
    let (margin, _, _) = only("clausius-inequality-broken", description);
    near(margin.form.unwrap().value, 16e3 / 308.15 - 10e3 / 423.15 - 6e3 / 278.15, 1e-9);
}

#[test]
fn work_from_nothing_is_left_to_the_energy_balance() {
    let description = r#"{"components": {"box": {"kind": "control_volume"}},
        "flows": {
          "shaft": {"kind": "work", "from": "box", "form": "shaft", "power": "5 kW"},
          "warmth": {"kind": "heat", "from": "box", "rate": "1 kW", "temperature": "40.0 degC"}}}"#;
    assert!(findings("work-from-one-reservoir", description).is_empty());
    let (margin, decision, _) = only("energy-imbalance", description);
    near(margin.form.unwrap().value, -6e3, 1e-9);
    assert_eq!(decision.verdict, Verdict::Violated);
}

#[test]
fn an_impossible_section_shows_although_the_whole_machine_is_sound() {
    let description = r#"{"components": {"turbine": {"kind": "turbine", "given": {"mechanical_loss": "20 kW"}, "stated_performance": {"isentropic_efficiency": 1.02}}},
        "flows": {
          "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
          "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "0.100 bar", "quality": 0.920, "mass_flow": "4 kg/s"},
          "bleed": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.00 bar", "temperature": "190.0 degC", "mass_flow": "1 kg/s"},
          "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#;
    assert!(violated("negative-entropy-generation", description).is_empty());
    let all = findings("expander-beats-isentropic", description);
    assert_eq!(all.len(), 3);
    // Steam tables (IAPWS-IF97): 6.8198 kJ/(kg K) at the inlet, 6.7678 at the bleed, 7.5489 at the exhaust.
    near(all[0].0.form.as_ref().unwrap().value, -51.975, 0.01);
    near(all[1].0.form.as_ref().unwrap().value, 781.10, 0.02);
    assert_eq!(all[0].0.pointer.as_deref(), Some("/flows/bleed"));
    // None is the balance of the whole from another side.
    assert!(all.iter().all(|f| f.0.detail > 0));
    assert_eq!(only("expander-beats-isentropic", breaking("expander-beats-isentropic")).0.detail, 0);
    assert!(all[0].2.statement.contains("1.046"), "{}", all[0].2.statement);
    // A bearing loss leaves the fluid adiabatic; a claim above one is impossible.
    near(all[2].0.form.as_ref().unwrap().value, -0.02, 1e-12);
    assert!(all[2].2.statement.contains("claimed"), "{}", all[2].2.statement);
    let cooled = description.replace("mechanical_loss", "heat_loss");
    assert!(findings("expander-beats-isentropic", &cooled).is_empty());
}

#[test]
fn a_view_from_another_side_is_as_sure_as_the_balance() {
    for (name, mass) in [
        ("expander-beats-isentropic", 5.0),
        ("compressor-beats-isentropic", 12.0),
        ("throttle-against-entropy", 1.5),
    ] {
        let primary = only("negative-entropy-generation", breaking(name)).1;
        let other = only(name, breaking(name)).1;
        near(other.value * mass, primary.value, 1e-9 * primary.value.abs());
        near(other.u * mass, primary.u, 1e-9 * primary.u);
    }
}

#[test]
fn what_runs_backwards_is_judged_the_way_it_runs() {
    let backwards = breaking("reversed-flow");
    let (margin, _, explanation) = only("throttle-against-entropy", backwards);
    assert!(margin.form.unwrap().value > 0.0);
    assert!(explanation.statement.contains("falls from 40 bar to 10 bar"), "{}", explanation.statement);
    assert_eq!(violated("reversed-flow", backwards).len(), 2);
}

#[test]
fn a_solved_amount_that_is_negative_is_said_to_be_solved() {
    let description = keeping("mass-imbalance")
        .replace("3.00 kg/s", "1.50 kg/s")
        .replace(r#", "mass_flow": "1.00 kg/s""#, "");
    let (margin, _, explanation) = only("reversed-flow", &description);
    near(margin.form.unwrap().value, -0.5, 1e-12);
    assert!(
        explanation.statement.contains("solved amount of flow \"branch-b\""),
        "{}",
        explanation.statement
    );
}

#[test]
fn a_mass_imbalance_within_the_printed_digits_is_minor() {
    // 3.00 − 2.00 − 1.01 kg/s; three figures of ±0.005 could make up 0.015.
    let description = keeping("mass-imbalance").replace("1.00 kg/s", "1.01 kg/s");
    let (margin, decision, explanation) = only("mass-imbalance", &description);
    near(margin.form.unwrap().value, -0.01, 1e-12);
    assert_eq!(decision.verdict, Verdict::Violated);
    assert_eq!(explanation.severity, Some(Severity::Minor));
    assert_eq!(only("mass-imbalance", breaking("mass-imbalance")).2.severity, None);
    // Within the closure tolerance of 0.1 % nothing is said.
    let close = keeping("mass-imbalance").replace("1.00 kg/s", "1.002 kg/s");
    assert_eq!(only("mass-imbalance", &close).1.verdict, Verdict::Holds);
    let measured = close.replacen('{', r#"{"policy": {"literals": "measured"}, "#, 1);
    let (margin, _, _) = only("mass-imbalance", &measured);
    assert_eq!(margin.test, Test::Zero { allowance: 0.0 });
}

#[test]
fn two_readings_are_one_test_and_three_are_three() {
    let two = breaking("redundant-readings-disagree");
    let (margin, _, _) = only("redundant-readings-disagree", two);
    near(margin.form.unwrap().value, 6.0, 1e-9);
    let three = two.replace(r#""388.0 degC""#, r#""400.0 degC", "388.0 degC""#);
    assert_eq!(findings("redundant-readings-disagree", &three).len(), 3);
}

#[test]
fn each_exchanger_is_tested_at_its_ends_once() {
    let parallel = breaking("parallel-flow-outlet-cross");
    assert!(findings("terminal-temperature-cross", parallel).is_empty());
    assert_eq!(findings("parallel-flow-outlet-cross", parallel).len(), 1);
    let counter = breaking("terminal-temperature-cross");
    assert!(findings("parallel-flow-outlet-cross", counter).is_empty());
    near(only("terminal-temperature-cross", counter).0.form.unwrap().value, -5.0, 1e-9);
}

#[test]
fn an_unknown_wetness_is_bracketed() {
    // Saturated at 0.1 bar: 0.6492 and 8.1488 kJ/(kg K); 5 kg/s enter with 6.8198 kJ/(kg K).
    let (_, _, explanation) = only("wetness-unknown", breaking("wetness-unknown"));
    let statement = explanation.statement;
    assert!(statement.contains("-30.85 kW/K") && statement.contains("6.645 kW/K"), "{statement}");
}

#[test]
fn a_saturated_state_is_at_the_limit_of_its_quality() {
    for x in ["0", "1"] {
        let description = keeping("quality-out-of-range").replace("0.92", x);
        assert!(only("quality-out-of-range", &description).1.at_limit);
    }
    // What the quality breaks is not reported a second time.
    assert!(findings("state-outside-formulation", breaking("quality-out-of-range")).is_empty());
}

#[test]
fn the_tool_finds_its_own_mismatch() {
    for (mismatch, count) in [(2e-3, 1), (0.5e-3, 0), (0.0, 0)] {
        let broken = evaluated(keeping("gouy-stodola-mismatch"), |evaluation| {
            evaluation.exergy_mismatch = Some(vec![(Scope::Component(0), mismatch, 1e6)]);
            let (me, rule) = rule("gouy-stodola-mismatch");
            let mut margins = Vec::new();
            rule.margins(me, evaluation, &mut margins);
            assert_eq!(margins.len(), 1);
            let decision = decide(evaluation.view.model, &margins[0]);
            let statement = rule.explain(evaluation, &margins[0], &decision).statement;
            assert!(statement.contains("letdown"), "{statement}");
            usize::from(decision.verdict == Verdict::Violated)
        });
        assert_eq!(broken, count, "{mismatch}");
    }
}
