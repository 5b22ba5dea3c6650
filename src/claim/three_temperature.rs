//! Heat-driven machines between three temperatures: absorption machine and heat transformer.

use super::body::{Body, Side, View};
use super::case::{Case, Entropy, Limit, Physics, Sense};
use super::desk::{Computed, Desk, Role};
use super::words;
use crate::quantity::Dimension as D;
use std::rc::Rc;

const LAW: &str = "the entropy balance over the three bodies, sum of Q/T plus the entropy generated is zero, and entropy \
                   is never destroyed (Herold, Radermacher and Klein, Absorption Chillers and Heat Pumps, chapter 2)";

/// Three bodies; the third is where the rest of the heat is rejected.
struct Three([Body; 3]);

impl Three {
    fn betas(&self, x: &[f64], view: View) -> Computed<[f64; 3]> {
        let [a, b, c] = &self.0;
        let (near, far) = (c.near(x), b.near(x));
        Ok([a.beta(x, view, near)?, b.beta(x, view, near)?, c.beta(x, view, far)?])
    }
}

/// Limit and entropy generation per unit of heat taken in at the first body, of inverse mean
/// temperatures and the claimed ratio.
type Formula = fn([f64; 3]) -> f64;
type Generation = fn([f64; 3], f64) -> f64;

/// Cooling per driving heat: (1 − T0/Tg) Tl/(T0 − Tl).
fn cooling([driving, cooled, rejected]: [f64; 3]) -> f64 {
    let lift = cooled - rejected;
    if lift <= 0.0 { f64::INFINITY } else { (rejected - driving) / lift }
}

fn cooling_generation([driving, cooled, rejected]: [f64; 3], cop: f64) -> f64 {
    (1.0 + cop) * rejected - driving - cop * cooled
}

/// Heat delivered per heat taken in: (1 − T0/Tm)/(1 − T0/Th).
fn lifting([source, sink, rejected]: [f64; 3]) -> f64 {
    let rise = rejected - sink;
    if rise <= 0.0 { f64::INFINITY } else { (rejected - source) / rise }
}

fn lifting_generation([source, sink, rejected]: [f64; 3], ratio: f64) -> f64 {
    ratio * sink + (1.0 - ratio) * rejected - source
}

struct Design {
    kind: &'static str,
    subject: String,
    bodies: [Body; 3],
    ratio: (&'static str, &'static str, Physics),
    /// What the claimed figure exceeds the ratio of the formulas by.
    offset: f64,
    limit: Formula,
    generation: Generation,
    per: &'static str,
}

fn case(desk: &mut Desk<'_>, design: Design) -> Case {
    let Design { kind, subject, bodies, ratio: (name, spoken, claimed), offset, limit, generation, per } =
        design;
    for body in &bodies {
        body.note_missing(desk);
    }
    let open = bodies.iter().any(Body::is_open);
    let sliding = bodies.iter().any(Body::slides);
    let three = Rc::new(Three(bodies));
    let claimed = Rc::new(claimed);
    let at = |view: View| -> Physics {
        let three = three.clone();
        Box::new(move |x| Ok(limit(three.betas(x, view)?) + offset))
    };
    let mut limits = vec![Limit {
        name: if open {
            "lenient_temperatures"
        } else if sliding {
            "sliding_temperatures"
        } else {
            "constant_temperatures"
        },
        of: None,
        sense: Sense::AtMost,
        value: at(View::Lenient),
        assumes: if open {
            "open temperatures taken in favour of the claim"
        } else if sliding {
            "streams at their entropic mean temperatures: any number of stages"
        } else {
            "bodies large enough to keep their temperature"
        }
        .to_owned(),
        law: true,
    }];
    if sliding {
        limits.push(Limit {
            name: "end_temperatures",
            of: None,
            sense: Sense::AtMost,
            value: at(View::Outlet),
            assumes: "all heat taken and given at the outlet temperatures of the streams".to_owned(),
            law: false,
        });
    }
    let strict = open.then(|| {
        let text = "an open outlet taken as far from the inlet as the other bodies let it, or 50 K where nothing \
                    bounds it (common practice), and a stream with only its outlet stated taken as constant";
        (at(View::Strict), text.to_owned())
    });
    let sigma = {
        let (three, claimed) = (three.clone(), claimed.clone());
        move |x: &[f64]| Ok(1e3 * generation(three.betas(x, View::Lenient)?, claimed(x)? - offset))
    };
    Case {
        kind,
        subject,
        law: LAW,
        figure: (name, spoken),
        claimed: Box::new(move |x| claimed(x)),
        dimension: D::Fraction,
        shown: None,
        limits,
        strict,
        entropy: Entropy { value: Box::new(sigma), dimension: D::EntropyRate, per },
        relative: true,
        practice: Some(0.75),
        figures: Vec::new(),
        contradictions: Vec::new(),
        notes: Vec::new(),
        not_included: desk.auxiliaries("the power of solution pumps, other pumps and fans"),
        causes: &["a second source of heat or the pumping power left out", "a rejected stream left out"],
        cautions: vec![words::JUDGES, words::HOT, words::REFRIGERANT, words::PRESSURE],
    }
}

/// Refuses an open outlet that nothing bounds, over all bodies.
fn bounded(desk: &mut Desk<'_>, bodies: &[Body; 3]) {
    let [a, b, c] = bodies;
    a.refuse_unbounded(desk, c);
    b.refuse_unbounded(desk, c);
    c.refuse_unbounded(desk, b);
}

/// An absorption or other heat-driven chiller or heat pump.
pub fn absorption(desk: &mut Desk<'_>) -> Option<Case> {
    let driving = desk.body("driving", Side::Gives, false);
    let cooled = desk.body("source", Side::Gives, false);
    let rejected = desk.body("sink", Side::Takes, true);
    let claim = desk.claim();
    let form = desk.one_of(&[&["cop"], &["heating_cop"]])?;
    let (name, spoken, offset) =
        if form == 0 { ("cop", "COP", 0.0) } else { ("heating_cop", "COP for heating", 1.0) };
    let given = desk.positive(claim, name, D::Fraction, Role::Claimed, None);
    let bodies = [driving?, cooled?, rejected?];
    bounded(desk, &bodies);
    let given = given?;
    let [g, c, r] = &bodies;
    let subject = format!(
        "A heat-driven machine with a driving source {}, that takes heat from a body {} and gives heat to a sink {}, is \
         claimed.",
        g.text(),
        c.text(),
        r.text()
    );
    let ratio: (_, _, Physics) = (name, spoken, Box::new(move |x| Ok(given.at(x))));
    let design = Design {
        kind: "absorption_machine",
        subject,
        bodies,
        ratio,
        offset,
        limit: cooling,
        generation: cooling_generation,
        per: "kW of driving heat",
    };
    Some(case(desk, design))
}

/// A heat transformer.
pub fn transformer(desk: &mut Desk<'_>) -> Option<Case> {
    let source = desk.body("source", Side::Gives, false);
    let sink = desk.body("sink", Side::Takes, false);
    let rejected = desk.body("rejected", Side::Takes, true);
    let claim = desk.claim();
    let given = desk.positive(claim, "cop", D::Fraction, Role::Claimed, None);
    let bodies = [source?, sink?, rejected?];
    bounded(desk, &bodies);
    let given = given?;
    let [m, h, r] = &bodies;
    let subject = format!(
        "A heat transformer that takes heat from a source {}, delivers part of it to a sink {} and rejects the rest to a \
         body {} is claimed.",
        m.text(),
        h.text(),
        r.text()
    );
    let ratio: (_, _, Physics) =
        ("cop", "ratio of heat delivered to heat taken in", Box::new(move |x| Ok(given.at(x))));
    let design = Design {
        kind: "heat_transformer",
        subject,
        bodies,
        ratio,
        offset: 0.0,
        limit: lifting,
        generation: lifting_generation,
        per: "kW of heat taken in",
    };
    Some(case(desk, design))
}
