//! What a drawn profile shows beyond the figures that decide.

use super::Profile;
use super::composite::{self, Curve};
use super::pair::{Pair, Place};
use crate::model::{Blocked, Dual, Slot, View};

/// Most points of a drawn profile.
pub const MOST_POINTS: usize = 200;

/// A drawn profile.
#[derive(Clone, Debug, Default)]
pub struct Drawing {
    /// Share of the duty, temperature of what gives heat, of what takes it (K), in order of the
    /// share.
    pub points: Vec<(f64, f64, f64)>,
    /// ∫ dq/ΔT, W/K or J/K, where heat runs downhill all along and the duties agree.
    pub conductance: Option<f64>,
    /// Log-mean of the differences at the two ends, K, where both are positive.
    pub log_mean_difference: Option<f64>,
    /// Duty as share of that of an exchanger of infinite area with the same streams at their
    /// inlets, two streams only.
    pub effectiveness: Option<f64>,
}

impl Profile {
    fn pair<'a>(&'a self, view: View<'a>) -> Option<Pair<'a>> {
        match (&self.hot[..], &self.cold[..]) {
            ([hot], [cold]) => Some(Pair { view, hot, cold, parallel: self.parallel }),
            _ => None,
        }
    }

    /// The profile refined for drawing: between its points straight lines are off by less than a
    /// tenth of the temperature difference, at most 0.1 K, as far as [`MOST_POINTS`] allows.
    ///
    /// # Errors
    /// A state outside a formulation's range.
    pub fn draw(&self, view: View<'_>) -> Result<Drawing, Blocked> {
        let points = match self.pair(view) {
            Some(pair) => refined(&pair)?,
            None => {
                let (hot, cold) = (Curve::new(view, &self.hot)?, Curve::new(view, &self.cold)?);
                let mut points = Vec::new();
                for x in composite::bends(&hot, &cold) {
                    let (h, c) = (hot.at(x), cold.at(x));
                    points.push((x, h.0, c.0));
                    if h.1 > h.0 || c.1 > c.0 {
                        points.push((x, h.1, c.1));
                    }
                }
                thinned(points)
            }
        };
        let mut conductance = (self.balanced && !points.is_empty()).then_some(0.0);
        for (a, b) in points.iter().zip(points.iter().skip(1)) {
            let (d0, d1) = (a.1 - a.2, b.1 - b.2);
            let downhill = d0 > 0.0 && d1 > 0.0;
            conductance = conductance
                .filter(|_| downhill)
                .map(|sum| sum + self.duty.value * (b.0 - a.0) / log_mean(d0, d1));
        }
        let ends = points.first().zip(points.last()).map(|(a, b)| (a.1 - a.2, b.1 - b.2));
        let log_mean_difference = ends.filter(|d| d.0 > 0.0 && d.1 > 0.0).map(|d| log_mean(d.0, d.1));
        let effectiveness = self.room(view).map(|factor| 1.0 / factor.value);
        Ok(Drawing { points, conductance, log_mean_difference, effectiveness })
    }

    /// What the duty would have to be multiplied by for the curves to touch: the exchanger of
    /// infinite area whose streams enter as they do here and leave at the same pressures. With
    /// its gradient. `None` for more than two streams, for duties that differ, and where it cannot
    /// be had within the range of the formulations.
    pub fn room(&self, view: View<'_>) -> Option<Dual> {
        let pair = self.pair(view)?;
        if !self.balanced {
            return None;
        }
        let changed =
            |factor: &Dual| Some((pair.hot.with_duty(view, factor)?, pair.cold.with_duty(view, factor)?));
        // `None` where a state leaves its formulation.
        let least = |factor: f64| -> Option<f64> {
            let (hot, cold) = changed(&Dual::constant(factor))?;
            Pair { hot: &hot, cold: &cold, ..pair }.least().ok()
        };
        let own = self.pinch.difference.value;
        let (mut low, mut high) = (None, None);
        if own >= 0.0 {
            low = Some((1.0, own))
        } else {
            high = Some((1.0, Some(own)))
        }
        let mut factor = if own >= 0.0 { 2.0 } else { 0.5 };
        for _ in 0..60 {
            match least(factor) {
                Some(gap) if gap >= 0.0 => low = Some((factor, gap)),
                gap => high = Some((factor, gap)),
            }
            let last = factor;
            factor = match (low, high) {
                (Some((a, f)), Some((b, Some(g)))) => {
                    // A secant kept off the ends of the bracket, so that both of them move.
                    let secant = a + (b - a) * f / (f - g);
                    secant.clamp(a + 0.01 * (b - a), b - 0.01 * (b - a))
                }
                (Some((a, _)), Some((b, None))) => 0.5 * (a + b),
                (Some((a, _)), None) => 2.0 * a,
                (None, _) => 0.5 * factor,
            };
            if (factor - last).abs() <= 1e-10 * factor || !(1e-6..=1e6).contains(&factor) {
                break;
            }
        }
        // A bound by the range of a formulation is no bound by a law; nor is there room where the
        // streams enter crossed.
        let ((low, f), (high, g)) = (low?, high?);
        let g = g?;
        let touching = if f > g { low + (high - low) * f / (f - g) } else { low };
        // D(factor, inputs) = 0 fixes the factor; it goes by a slot of its own.
        let (hot, cold) = changed(&Dual::slot(Slot::MAX, touching))?;
        let (pinch, _) = Pair { hot: &hot, cold: &cold, ..pair }.judge().ok()?;
        let (own, mut others): (Vec<_>, Vec<_>) =
            pinch.difference.terms.into_iter().partition(|t| t.0 == Slot::MAX);
        let slope: f64 = own.iter().map(|t| t.1).sum();
        others.iter_mut().for_each(|t| t.1 /= -slope);
        slope.is_normal().then(|| Dual { value: touching, terms: others.into() })
    }
}

fn log_mean(a: f64, b: f64) -> f64 {
    let r = (b - a) / a;
    if r.abs() < 1e-5 { 0.5 * (a + b) } else { (b - a) / (b / a).ln() }
}

/// Nodes of a pair, halved until straight.
fn refined(pair: &Pair<'_>) -> Result<Vec<(f64, f64, f64)>, Blocked> {
    let nodes = pair.nodes()?;
    let mut out: Vec<Place> = nodes;
    // Breadth first, so that a bound on the number of points is shared fairly.
    let mut rough: Vec<bool> = vec![true; out.len().saturating_sub(1)];
    while rough.iter().any(|&r| r) && out.len() < MOST_POINTS {
        let mut next = Vec::with_capacity(2 * out.len());
        let mut still = Vec::with_capacity(2 * out.len());
        let mut room = MOST_POINTS - out.len();
        for (i, place) in out.iter().enumerate() {
            next.push(*place);
            let Some(b) = out.get(i + 1) else { continue };
            let halve = rough.get(i).copied().unwrap_or(false) && room > 0 && b.x - place.x > 1e-6;
            if !halve {
                still.push(false);
                continue;
            }
            let middle = pair.middle(place, b)?;
            let allowed = 0.1 * (middle.hot - middle.cold).abs().clamp(0.01, 1.0);
            let off = (middle.hot - 0.5 * (place.hot + b.hot))
                .abs()
                .max((middle.cold - 0.5 * (place.cold + b.cold)).abs());
            if off > allowed {
                next.push(middle);
                still.extend([true, true]);
                room -= 1;
            } else {
                still.push(false);
            }
        }
        (out, rough) = (next, still);
    }
    Ok(out.iter().map(|p| (p.x, p.hot, p.cold)).collect())
}

/// Every so many points of a long list, its ends included.
fn thinned(points: Vec<(f64, f64, f64)>) -> Vec<(f64, f64, f64)> {
    let n = points.len();
    if n <= MOST_POINTS {
        return points;
    }
    (0..MOST_POINTS).filter_map(|i| points.get(i * (n - 1) / (MOST_POINTS - 1)).copied()).collect()
}
