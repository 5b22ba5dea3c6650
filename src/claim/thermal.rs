//! Machines between two bodies: heat engine, refrigerator, heat pump, and plain heat transfer.

use super::body::{Body, Side, View};
use super::case::{Case, Entropy, Limit, Physics, Sense, Shared};
use super::desk::{Computed, Desk, Given, Role};
use crate::quantity::Dimension as D;
use std::rc::Rc;

const LAW: &str = "the entropy balance of a cyclic machine, sum of Q/T over its boundary plus the entropy generated \
                   is zero, and entropy is never destroyed (Moran and Shapiro, Fundamentals of Engineering \
                   Thermodynamics, chapters 5 and 6)";

const SLIDING: &str = "streams at their entropic mean temperatures: any number of stages";
const CONSTANT: &str = "bodies large enough to keep their temperature";
const OPEN: &str = "open temperatures taken in favour of the claim";
const ENDS: &str = "all heat taken and given at the outlet temperatures of the streams, as a single cycle with \
                    evaporation and condensation at constant temperature and no temperature difference would";

/// Which machine.
#[derive(Clone, Copy, PartialEq, Eq)]
pub enum Machine {
    /// Heat engine.
    Engine,
    /// Refrigerator.
    Refrigerator,
    /// Heat pump.
    HeatPump,
}

/// The two bodies; the answer is (beta of the source, beta of the sink).
pub struct Two {
    source: Body,
    sink: Body,
}

impl Two {
    /// Inverse mean temperatures of source and sink, 1/K.
    pub fn betas(&self, x: &[f64], view: View) -> Computed<(f64, f64)> {
        let (a, b) = (self.source.near(x), self.sink.near(x));
        Ok((self.source.beta(x, view, b)?, self.sink.beta(x, view, a)?))
    }

    fn assumes(&self) -> &'static str {
        if self.source.is_open() || self.sink.is_open() {
            OPEN
        } else if self.source.slides() || self.sink.slides() {
            SLIDING
        } else {
            CONSTANT
        }
    }

    fn is_open(&self) -> bool {
        self.source.is_open() || self.sink.is_open()
    }
}

/// Two claimed amounts whose ratio is the claimed figure, or the figure itself.
fn ratio(desk: &mut Desk<'_>, figure: &'static str, over: bool) -> Option<(Physics, Option<(Given, D)>)> {
    // Work over heat for an engine, heat over work for a heat mover.
    const FORMS: [&[&str]; 2] = [&["heat_flow", "power"], &["heat", "work"]];
    let first: &'static [&'static str] = if over { &["efficiency"] } else { &["cop"] };
    let claim = desk.claim();
    match desk.one_of(&[first, FORMS[0], FORMS[1]])? {
        0 => {
            let most = over.then_some(1e3);
            let g = desk.positive(claim, figure, D::Fraction, Role::Claimed, most)?;
            Some((Box::new(move |x| Ok(g.at(x))), None))
        }
        form => {
            let (heat, work, dimension) =
                if form == 1 { ("heat_flow", "power", D::Power) } else { ("heat", "work", D::Energy) };
            let q = desk.positive(claim, heat, dimension, Role::Claimed, None)?;
            let w = desk.positive(claim, work, dimension, Role::Claimed, None)?;
            let total = Some((q.clone(), dimension));
            Some((Box::new(move |x| Ok(if over { w.at(x) / q.at(x) } else { q.at(x) / w.at(x) })), total))
        }
    }
}

/// Infinite where the denominator is not positive: no limit.
fn unless(denominator: f64, value: f64) -> f64 {
    if denominator <= 0.0 { f64::INFINITY } else { value }
}

/// The limit of a machine at inverse mean temperatures of source and sink.
fn limit(machine: Machine, source: f64, sink: f64) -> f64 {
    match machine {
        Machine::Engine => 1.0 - source / sink,
        Machine::HeatPump => unless(source - sink, source / (source - sink)),
        Machine::Refrigerator => unless(source - sink, sink / (source - sink)),
    }
}

/// Entropy generated per unit of heat taken in (engine), delivered (heat pump) or removed
/// (refrigerator), 1/K.
fn generation(machine: Machine, source: f64, sink: f64, figure: f64) -> f64 {
    match machine {
        Machine::Engine => (1.0 - figure) * sink - source,
        Machine::HeatPump => sink - (1.0 - 1.0 / figure) * source,
        Machine::Refrigerator => (1.0 + 1.0 / figure) * sink - source,
    }
}

/// A heat engine, refrigerator or heat pump.
pub fn machine(desk: &mut Desk<'_>, machine: Machine) -> Option<Case> {
    let engine = machine == Machine::Engine;
    let source = desk.body("source", Side::Gives, machine == Machine::HeatPump);
    let sink = desk.body("sink", Side::Takes, machine != Machine::HeatPump);
    let figure = if engine { "efficiency" } else { "cop" };
    let claimed = ratio(desk, figure, engine);
    let (source, sink) = (source?, sink?);
    source.refuse_unbounded(desk, &sink);
    sink.refuse_unbounded(desk, &source);
    let (claimed, total) = claimed?;
    let claimed: Shared = Rc::from(claimed);
    source.note_missing(desk);
    sink.note_missing(desk);
    let (kind, article, words, per) = match machine {
        Machine::Engine => ("heat_engine", "A heat engine", "efficiency", "kW of heat taken in"),
        Machine::Refrigerator => ("refrigerator", "A refrigerating machine", "COP", "kW of cooling"),
        Machine::HeatPump => ("heat_pump", "A heat pump", "COP", "kW of heat delivered"),
    };
    let subject = format!(
        "{article} that takes heat from a source {} and gives heat to a sink {} is claimed.",
        source.text(),
        sink.text()
    );
    let sliding = source.slides() || sink.slides();
    let two = Rc::new(Two { source, sink });
    let at = |view: View| -> Physics {
        let two = two.clone();
        Box::new(move |x| two.betas(x, view).map(|(a, b)| limit(machine, a, b)))
    };
    let assumes = two.assumes();
    let mut limits = vec![Limit {
        name: if two.is_open() {
            "lenient_temperatures"
        } else if sliding {
            "sliding_temperatures"
        } else {
            "constant_temperatures"
        },
        of: None,
        sense: Sense::AtMost,
        value: at(View::Lenient),
        assumes: assumes.to_owned(),
        law: true,
    }];
    if sliding {
        limits.push(Limit {
            name: "end_temperatures",
            of: None,
            sense: Sense::AtMost,
            value: at(View::Outlet),
            assumes: ENDS.to_owned(),
            law: false,
        });
    }
    let strict = two.is_open().then(|| {
        let text = "an open outlet taken as far from the inlet as the other body lets it, or 50 K where nothing bounds \
                    it (common practice), and a stream with only its outlet stated taken as constant";
        (at(View::Strict), text.to_owned())
    });
    let entropy = |scale: Option<Given>| -> Physics {
        let (two, claimed) = (two.clone(), claimed.clone());
        Box::new(move |x| {
            let (a, b) = two.betas(x, View::Lenient)?;
            Ok(generation(machine, a, b, claimed(x)?) * scale.as_ref().map_or(1e3, |q| q.at(x)))
        })
    };
    let mut figures: Vec<(&'static str, Physics, D)> = Vec::new();
    for (name, first) in [("source_mean_temperature", true), ("sink_mean_temperature", false)] {
        let two = two.clone();
        let mean: Physics =
            Box::new(move |x| two.betas(x, View::Lenient).map(|(a, b)| 1.0 / if first { a } else { b }));
        figures.push((name, mean, D::Temperature));
    }
    let is_ratio = total.is_some();
    if let Some((heat, dimension)) = total {
        let total = if dimension == D::Power { D::EntropyRate } else { D::Entropy };
        figures.push(("entropy_generation_total", entropy(Some(heat)), total));
    }
    let mut notes = Vec::new();
    if machine == Machine::HeatPump {
        notes.push("A COP of 1 is that of an electric heater.".to_owned());
    }
    let x: Vec<f64> = desk.inputs.iter().map(|i| i.value).collect();
    let value = claimed(&x).unwrap_or(f64::NAN);
    if engine && value > 1.0 {
        notes.push(
            "It would deliver more work than the heat it takes in, against the first law too.".to_owned(),
        );
        if !is_ratio && value <= 100.0 {
            let percent = crate::rules::phrase::number(value);
            notes.push(format!("Did you mean {percent} %? A per cent sign is part of the number."));
        }
    }
    if machine == Machine::HeatPump && value < 1.0 {
        notes.push("This one would deliver less heat than the power it takes in.".to_owned());
    }
    if !engine && two.betas(&x, View::Lenient).is_ok_and(|(source, sink)| source < sink) {
        notes.push(
            "The source is hotter than the sink, so that heat would pass by itself: source and sink look swapped."
                .to_owned(),
        );
    }
    let per_heat = entropy(None);
    let subject_figure = claimed.clone();
    Some(Case {
        kind,
        subject,
        law: LAW,
        figure: (figure, words),
        claimed: Box::new(move |x| subject_figure(x)),
        dimension: D::Fraction,
        shown: None,
        limits,
        strict,
        entropy: Entropy { value: per_heat, dimension: D::EntropyRate, per },
        relative: true,
        practice: Some(if engine { 0.85 } else { 0.75 }),
        figures,
        contradictions: Vec::new(),
        notes,
        not_included: desk.auxiliaries(if engine {
            "the power of feed pumps, cooling and controls"
        } else {
            "the power of pumps, fans, defrosting and controls"
        }),
        causes: match machine {
            Machine::Engine => &[
                "temperatures in degrees Celsius used as absolute ones",
                "heat counted by another heating value than the work",
                "a source temperature that is not that of the heat taken in",
            ],
            _ => &[
                "temperatures of the working fluid instead of those of source and sink",
                "power of fans and pumps left out",
                "heat from a second source left out",
            ],
        },
        cautions: cautions(machine),
    })
}

fn cautions(machine: Machine) -> Vec<&'static str> {
    match machine {
        Machine::Engine => vec![super::words::JUDGES, super::words::HOT, super::words::PRESSURE],
        _ => vec![super::words::JUDGES, super::words::REFRIGERANT, super::words::PRESSURE],
    }
}

/// Heat that passes from one body to another by itself.
pub fn transfer(desk: &mut Desk<'_>) -> Option<Case> {
    let source = desk.body("source", Side::Gives, false);
    let sink = desk.body("sink", Side::Takes, false);
    let claim = desk.claim();
    let flow = desk.positive(claim, "heat_flow", D::Power, Role::Condition, None);
    let heat = desk.positive(claim, "heat", D::Energy, Role::Condition, None);
    if flow.is_some() && heat.is_some() {
        desk.one_of(&[&["heat_flow"], &["heat"]]);
        return None;
    }
    let (source, sink) = (source?, sink?);
    source.refuse_unbounded(desk, &sink);
    sink.refuse_unbounded(desk, &source);
    source.note_missing(desk);
    sink.note_missing(desk);
    let subject =
        format!("Heat is claimed to pass by itself from a body {} to a body {}.", source.text(), sink.text());
    let (amount, dimension, per) = match (flow, heat) {
        (Some(q), _) => (Some(q), D::EntropyRate, "the heat flow stated"),
        (_, Some(q)) => (Some(q), D::Entropy, "the heat stated"),
        _ => (None, D::EntropyRate, "kW of heat"),
    };
    let two = Rc::new(Two { source, sink });
    let mean = |view: View, first: bool| -> Physics {
        let two = two.clone();
        Box::new(move |x| two.betas(x, view).map(|(a, b)| 1.0 / if first { a } else { b }))
    };
    let hottest = |first: bool| -> Physics {
        let two = two.clone();
        Box::new(move |x| Ok(if first { two.source.extreme(x, true) } else { two.sink.extreme(x, true) }))
    };
    let coldest = |first: bool| -> Physics {
        let two = two.clone();
        Box::new(move |x| Ok(if first { two.source.extreme(x, false) } else { two.sink.extreme(x, false) }))
    };
    let mut limits = vec![Limit {
        name: "mean_temperatures",
        of: None,
        sense: Sense::AtMost,
        value: mean(View::Lenient, true),
        assumes: "that of the source, each the heat passed over the entropy that goes with it".to_owned(),
        law: true,
    }];
    if two.source.slides() || two.sink.slides() {
        limits.push(Limit {
            name: "hottest_end",
            of: Some(("sink_hottest_temperature", hottest(false), D::Temperature)),
            sense: Sense::AtMost,
            value: hottest(true),
            assumes: "nothing heated by the source alone gets hotter than its hottest end".to_owned(),
            law: true,
        });
        limits.push(Limit {
            name: "coldest_end",
            of: Some(("source_coldest_temperature", coldest(true), D::Temperature)),
            sense: Sense::AtLeast,
            value: coldest(false),
            assumes: "nothing cooled by the sink alone gets colder than its coldest end".to_owned(),
            law: true,
        });
    }
    let scale = amount.clone();
    let entropy = {
        let two = two.clone();
        move |x: &[f64]| {
            let (a, b) = two.betas(x, View::Lenient)?;
            Ok((b - a) * scale.as_ref().map_or(1e3, |q| q.at(x)))
        }
    };
    let entropy = Rc::new(entropy);
    let mut figures: Vec<(&'static str, Physics, D)> =
        vec![("source_mean_temperature", mean(View::Lenient, true), D::Temperature)];
    if let Some(ambient) = desk.member(Some(desk.root), "ambient", D::Temperature, Role::Condition) {
        let entropy = entropy.clone();
        let lost = if dimension == D::Entropy { D::Energy } else { D::Power };
        figures.push(("exergy_destruction", Box::new(move |x| Ok(ambient.at(x) * entropy(x)?)), lost));
    }
    Some(Case {
        kind: "heat_transfer",
        subject,
        law: "Clausius' statement: heat does not pass by itself from a colder to a hotter body (Moran and Shapiro, \
              Fundamentals of Engineering Thermodynamics, chapter 5)",
        figure: ("sink_mean_temperature", "mean temperature of the sink"),
        claimed: mean(View::Lenient, false),
        dimension: D::Temperature,
        shown: None,
        limits,
        // Whatever outlet is open can be chosen so that heat still passes.
        strict: None,
        entropy: Entropy { value: Box::new(move |x| entropy(x)), dimension, per },
        relative: false,
        practice: None,
        figures,
        contradictions: Vec::new(),
        notes: Vec::new(),
        not_included: Vec::new(),
        causes: &["source and sink interchanged", "a thermometer off, or at another place"],
        cautions: vec![super::words::JUDGES, super::words::HOT],
    })
}
