//! The interior of exchangers: temperatures of what gives heat and what takes it over the duty,
//! the smallest difference (pinch) and its place, and the section in which heat would run uphill.
//!
//! Pressure and enthalpy of a stream are taken as linear in its own duty. The figures that decide
//! come from the ends, the saturation points and the smallest difference between them; a drawn
//! profile is refined on demand ([`Profile::draw`]). Two streams are compared place by place;
//! more than two by their composite curves, the sum of what flows of one kind give or take by
//! temperature (Linnhoff & Flower, AIChE J. 24 (1978) 633).
//!
//! Where the duties of the two curves differ (a heat loss, unreconciled readings), each curve runs
//! over its own share of duty.

mod composite;
mod draw;
mod pair;
mod passage;

pub use draw::{Drawing, MOST_POINTS};

use crate::fluid::Phase;
use crate::model::{Blocked, Dual, View};
use crate::process::{Arrangement, Boundary, Carried, ComponentId, FluidId};
use passage::Passage;

/// Duties that agree within this share are one duty.
const BALANCED: f64 = 1e-6;

/// The smallest temperature difference.
#[derive(Clone, Debug)]
pub struct Pinch {
    /// Th − Tc, K, with its gradient.
    pub difference: Dual,
    /// Temperature of what gives heat, K.
    pub hot: f64,
    /// Temperature of what takes heat, K.
    pub cold: f64,
    /// Place as share of the duty, from the cold end (from the inlet end in parallel flow).
    pub place: f64,
}

/// The section in which the curves are crossed.
#[derive(Clone, Debug)]
pub struct Crossing {
    /// Beginning and end as shares of the duty.
    pub from: f64,
    /// See `from`.
    pub to: f64,
    /// Entropy generation of the section, W/K or J/K, with its gradient.
    pub generation: Dual,
    /// The scale of its rounding, W/K or J/K.
    pub throughput: f64,
}

/// The interior of one exchanger.
#[derive(Clone, Debug)]
pub struct Profile {
    /// Arrangement as described.
    pub arrangement: Arrangement,
    /// Whether the two curves run the same way: parallel flow of two streams.
    pub parallel: bool,
    /// Whether the duties of the two curves agree, so that the duty is the common axis.
    pub balanced: bool,
    /// What the cold curve takes in, W or J.
    pub duty: Dual,
    /// What the hot curve gives off, W or J.
    pub given_off: Dual,
    /// The smallest temperature difference.
    pub pinch: Pinch,
    /// The crossed section, where there is one.
    pub crossing: Option<Crossing>,
    hot: Vec<Passage>,
    cold: Vec<Passage>,
}

impl Profile {
    /// The profile of a component; `None` where it has none: another kind, or no heat passes.
    ///
    /// # Errors
    /// What blocks it: an unknown figure, a state, or something that the profile lacks.
    pub fn of(view: View<'_>, k: ComponentId) -> Result<Option<Profile>, Blocked> {
        let component = &view.model.process.components[k];
        if !component.kind.is_exchanger() {
            return Ok(None);
        }
        let passages = passages(view, k)?;
        if passages.is_empty() {
            return Ok(None);
        }
        let (hot, cold): (Vec<_>, Vec<_>) = passages.into_iter().partition(|p| p.hot);
        if hot.is_empty() || cold.is_empty() {
            return Err(Blocked::Missing(if hot.is_empty() {
                "a side that gives off heat"
            } else {
                "a side that takes in heat"
            }));
        }
        let total = |side: &[Passage]| {
            let mut sum = Dual::default();
            side.iter().for_each(|p| sum.add_scaled(1.0, &p.duty));
            sum
        };
        let (duty, given_off) = (total(&cold), total(&hot));
        let balanced = (duty.value - given_off.value).abs() <= BALANCED * given_off.value;
        let two = hot.len() == 1 && cold.len() == 1;
        let parallel = two && component.arrangement == Arrangement::Parallel;
        let (pinch, crossing) = match (&hot[..], &cold[..]) {
            ([h], [c]) => pair::Pair { view, hot: h, cold: c, parallel }.judge()?,
            _ => composite::judge(view, &hot, &cold)?,
        };
        Ok(Some(Profile {
            arrangement: component.arrangement,
            parallel,
            balanced,
            duty,
            given_off,
            pinch,
            crossing,
            hot,
            cold,
        }))
    }

    /// Whether more than two streams are compared by their composite curves.
    pub fn is_composite(&self) -> bool {
        self.hot.len() + self.cold.len() > 2
    }

    /// The phases of the hot and the cold stream at the pinch, where there are just these two.
    /// A stream that begins or ends to boil or condense there counts as both phases; so does a
    /// vapour that boils or condenses elsewhere in the exchanger while the other stream is liquid.
    pub fn phases(&self, view: View<'_>) -> Option<[Phase; 2]> {
        // Beside the pinch, wide enough to leave the kink that it may sit on.
        const BESIDE: f64 = 1e-3;
        let ([hot], [cold]) = (&self.hot[..], &self.cold[..]) else { return None };
        let near = |stream: &Passage, y: f64| {
            let at = |y: f64| stream.phase(view, y.clamp(0.0, 1.0));
            let two = [y - BESIDE, y + BESIDE].into_iter().any(|y| at(y) == Some(Phase::TwoPhase));
            if two { Some(Phase::TwoPhase) } else { at(y) }
        };
        let changes = |stream: &Passage| {
            (1..16).any(|i| stream.phase(view, f64::from(i) / 16.0) == Some(Phase::TwoPhase))
        };
        let x = self.pinch.place;
        let h = near(hot, if self.parallel { x } else { 1.0 - x })?;
        let c = near(cold, x)?;
        Some(match (h, c) {
            (Phase::Vapour, Phase::Liquid) if changes(hot) => [Phase::TwoPhase, c],
            (Phase::Liquid, Phase::Vapour) if changes(cold) => [h, Phase::TwoPhase],
            both => both.into(),
        })
    }

    /// The fluids of the hot and the cold stream, where there are just these two.
    pub fn fluids(&self) -> Option<(FluidId, FluidId)> {
        match (&self.hot[..], &self.cold[..]) {
            ([h], [c]) => Some((h.fluid()?, c.fluid()?)),
            _ => None,
        }
    }
}

/// Every stream through the exchanger, and bodies at its boundary where streams of one kind lack.
fn passages(view: View<'_>, k: ComponentId) -> Result<Vec<Passage>, Blocked> {
    let process = &view.model.process;
    let component = &process.components[k];
    if component.holdup.is_some() {
        return Err(Blocked::Missing("a steady course of temperatures"));
    }
    let mut out = Vec::new();
    for side in &component.sides {
        let ways = match (&side.inlets[..], &side.outlets[..]) {
            ([], []) => Vec::new(),
            ([inlet], [outlet]) => vec![(*inlet, *inlet, *outlet)],
            (inlets, [outlet]) => inlets.iter().map(|&i| (i, i, *outlet)).collect(),
            ([inlet], outlets) => outlets.iter().map(|&o| (o, *inlet, o)).collect(),
            _ => return Err(Blocked::Missing("sides with one inlet or one outlet each")),
        };
        for (amount, inlet, outlet) in ways {
            out.extend(Passage::material(view, amount, inlet, outlet)?);
        }
    }
    // A heat flow is a loss where streams exchange heat among themselves, and the other side
    // where they do not.
    let lone = out.iter().all(|p: &Passage| p.hot) || out.iter().all(|p| !p.hot);
    if lone && !out.is_empty() {
        for (flows, entering) in [(&component.inlets, true), (&component.outlets, false)] {
            for &f in flows {
                let Carried::Heat(q, boundary) = process.flows[f].carried else { continue };
                let q = view.var(q)?;
                let (a, b) = match boundary {
                    Boundary::Isothermal(t) => (view.var(t)?, view.var(t)?),
                    Boundary::Sliding(a, b) => (view.var(a)?, view.var(b)?),
                    Boundary::Unknown if q.value == 0.0 => continue,
                    Boundary::Unknown => {
                        return Err(Blocked::Missing(
                            "the temperature at which the heat crosses the boundary",
                        ));
                    }
                };
                out.extend(Passage::body(q, entering, a, b));
            }
        }
    }
    Ok(out)
}
