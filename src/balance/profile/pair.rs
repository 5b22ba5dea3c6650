//! Two streams, compared place by place.

use super::passage::{BEYOND, Passage};
use super::{Crossing, Pinch};
use crate::model::{Blocked, Dual, View};

/// What lies at a place.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Origin {
    End,
    /// A kink of the hot stream.
    Hot(usize),
    /// A kink of the cold stream.
    Cold(usize),
    /// Between kinks.
    Free,
}

/// The two temperatures at one place.
#[derive(Clone, Copy, Debug)]
pub(super) struct Place {
    /// Share of the duty.
    pub x: f64,
    /// Th, K.
    pub hot: f64,
    /// Tc, K.
    pub cold: f64,
    origin: Origin,
}

impl Place {
    fn gap(&self) -> f64 {
        self.hot - self.cold
    }
}

/// A hot and a cold stream.
#[derive(Clone, Copy)]
pub(super) struct Pair<'a> {
    pub view: View<'a>,
    pub hot: &'a Passage,
    pub cold: &'a Passage,
    pub parallel: bool,
}

impl Pair<'_> {
    /// The share of the hot stream's way at a place, and back: the map is its own inverse.
    fn turned(&self, x: f64) -> f64 {
        if self.parallel { x } else { 1.0 - x }
    }

    /// The temperatures at a place.
    ///
    /// # Errors
    /// A state outside the formulation's range.
    pub fn at(&self, x: f64) -> Result<Place, Blocked> {
        Ok(Place {
            x,
            hot: self.hot.at(self.view, self.turned(x))?,
            cold: self.cold.at(self.view, x)?,
            origin: Origin::Free,
        })
    }

    /// The temperatures half way between two nodes or places between them. One that runs one way and is
    /// equal on both sides is the same all along.
    ///
    /// # Errors
    /// A state outside the formulation's range.
    pub fn middle(&self, left: &Place, right: &Place) -> Result<Place, Blocked> {
        let x = left.x + 0.5 * (right.x - left.x);
        let between = |a: f64, b: f64, stream: &Passage, y: f64| {
            if a == b && stream.runs_one_way(self.view) { Ok(a) } else { stream.at(self.view, y) }
        };
        Ok(Place {
            x,
            hot: between(left.hot, right.hot, self.hot, self.turned(x))?,
            cold: between(left.cold, right.cold, self.cold, x)?,
            origin: Origin::Free,
        })
    }

    /// Ends and kinks, in order of the duty.
    ///
    /// # Errors
    /// A state outside the formulation's range.
    pub fn nodes(&self) -> Result<Vec<Place>, Blocked> {
        let mut out = Vec::with_capacity(16);
        for x in [0.0, 1.0] {
            out.push(Place { origin: Origin::End, ..self.at(x)? });
        }
        for (i, kink) in self.hot.kinks.iter().enumerate() {
            let x = self.turned(kink.y);
            let cold = self.cold.at(self.view, x)?;
            out.push(Place { x, hot: kink.temperature(), cold, origin: Origin::Hot(i) });
        }
        for (i, kink) in self.cold.kinks.iter().enumerate() {
            let hot = self.hot.at(self.view, self.turned(kink.y))?;
            out.push(Place { x: kink.y, hot, cold: kink.temperature(), origin: Origin::Cold(i) });
        }
        // Above the critical pressure the heat capacity may peak anywhere: look closely.
        if self.hot.is_supercritical() || self.cold.is_supercritical() {
            for i in 1..16 {
                out.push(self.at(f64::from(i) / 16.0)?);
            }
        }
        out.sort_by(|a, b| a.x.total_cmp(&b.x));
        Ok(out)
    }

    /// Nodes, and between them the middle and, where the difference has a minimum inside, that.
    fn places(&self) -> Result<Vec<Place>, Blocked> {
        let nodes = self.nodes()?;
        let lowest = nodes.iter().map(Place::gap).fold(f64::INFINITY, f64::min);
        let one_way = self.hot.runs_one_way(self.view) && self.cold.runs_one_way(self.view);
        let mut out = Vec::with_capacity(3 * nodes.len());
        for (left, right) in nodes.iter().zip(nodes.iter().skip(1)) {
            out.push(*left);
            let width = right.x - left.x;
            // Where both temperatures run one way between two nodes, this bounds the difference.
            let least = left.hot.min(right.hot) - left.cold.max(right.cold);
            if width <= 1e-9 || one_way && least >= lowest.max(0.0) {
                continue;
            }
            let middle = self.middle(left, right)?;
            let (a, b, c) = (left.gap(), middle.gap(), right.gap());
            let bend = a - 2.0 * b + c;
            // Vertex of the parabola through the three differences.
            let vertex = 0.5 + 0.25 * (a - c) / bend;
            let depth = b - (a - c) * (a - c) / (8.0 * bend);
            let inside = bend > 0.0 && vertex > 0.0 && vertex < 1.0;
            out.push(middle);
            if inside && depth < a.min(c) - 1e-6 && depth < lowest + 1e-3 * lowest.abs().max(1.0) {
                let found = self.minimum(left.x, middle.x, right.x)?;
                out.push(found);
                if found.x < middle.x {
                    let n = out.len();
                    out.swap(n - 2, n - 1);
                }
            }
        }
        out.extend(nodes.last());
        Ok(out)
    }

    /// The least difference near three places, by golden sections.
    fn minimum(&self, left: f64, middle: f64, right: f64) -> Result<Place, Blocked> {
        const GOLDEN: f64 = 0.381_966_011_250_105_1;
        let (mut a, mut b) = (left, right);
        let mut best = self.at(middle)?;
        for _ in 0..40 {
            if b - a < 1e-6 * (right - left) {
                break;
            }
            let wide_right = b - best.x > best.x - a;
            let x = if wide_right { best.x + GOLDEN * (b - best.x) } else { best.x - GOLDEN * (best.x - a) };
            let new = self.at(x)?;
            let (inner, outer) = if new.gap() < best.gap() { (new, best) } else { (best, new) };
            if outer.x < inner.x {
                a = outer.x;
            } else {
                b = outer.x;
            }
            best = inner;
        }
        Ok(best)
    }

    /// The pinch and the crossed section.
    ///
    /// # Errors
    /// A state outside the formulation's range.
    pub fn judge(&self) -> Result<(Pinch, Option<Crossing>), Blocked> {
        let places = self.places()?;
        let lowest =
            places.iter().enumerate().min_by(|a, b| a.1.gap().total_cmp(&b.1.gap())).map(|(i, p)| (i, *p));
        let Some((index, place)) = lowest else { return Err(BEYOND) };
        let difference = self.difference(&place)?;
        let pinch = Pinch { difference, hot: place.hot, cold: place.cold, place: place.x };
        let crossing = if place.gap() < 0.0 { Some(self.crossing(&places, index)?) } else { None };
        Ok((pinch, crossing))
    }

    /// The least difference over nodes and between them, without gradient.
    ///
    /// # Errors
    /// A state outside the formulation's range.
    pub fn least(&self) -> Result<f64, Blocked> {
        Ok(self.places()?.iter().map(Place::gap).fold(f64::INFINITY, f64::min))
    }

    /// The difference at a place with its gradient, the motion of a kink included.
    fn difference(&self, place: &Place) -> Result<Dual, Blocked> {
        let view = self.view;
        let turn = |y: &Dual| if self.parallel { y.clone() } else { y.map(1.0 - y.value, -1.0) };
        let (hot, cold) = match place.origin {
            Origin::Hot(i) => {
                let kink = self.hot.kinks.get(i).ok_or(BEYOND)?;
                let (y, t) = self.hot.dual_kink(kink)?;
                (t, self.cold.temperature_at(view, &turn(&y))?)
            }
            Origin::Cold(i) => {
                let kink = self.cold.kinks.get(i).ok_or(BEYOND)?;
                let (y, t) = self.cold.dual_kink(kink)?;
                (self.hot.temperature_at(view, &turn(&y))?, t)
            }
            // Between kinks the difference is stationary, at the ends the place is fixed.
            Origin::End | Origin::Free => {
                let x = Dual::constant(place.x);
                (self.hot.temperature_at(view, &turn(&x))?, self.cold.temperature_at(view, &x)?)
            }
        };
        Ok(hot.minus(&cold))
    }

    /// The section around the least difference in which the curves are crossed.
    fn crossing(&self, places: &[Place], lowest: usize) -> Result<Crossing, Blocked> {
        let left = places[..lowest].iter().rposition(|p| p.gap() >= 0.0);
        let right = places[lowest..].iter().position(|p| p.gap() >= 0.0).map(|i| lowest + i);
        let from = match left {
            Some(i) => self.root(&places[i], &places[i + 1])?,
            None => 0.0,
        };
        let to = match right {
            Some(i) => self.root(&places[i - 1], &places[i])?,
            None => 1.0,
        };
        let (generation, throughput) = self.section(from, to)?;
        Ok(Crossing { from, to, generation, throughput })
    }

    /// Where the difference vanishes between two places of opposite sign, by regula falsi with
    /// halved weights (Illinois).
    fn root(&self, a: &Place, b: &Place) -> Result<f64, Blocked> {
        let (mut x0, mut f0, mut x1, mut f1) = (a.x, a.gap(), b.x, b.gap());
        for _ in 0..60 {
            if (x1 - x0).abs() < 1e-12 || f1 == f0 {
                break;
            }
            let x = x1 - f1 * (x1 - x0) / (f1 - f0);
            let f = self.at(x)?.gap();
            if f.signum() != f1.signum() {
                (x0, f0) = (x1, f1);
            } else {
                f0 *= 0.5;
            }
            (x1, f1) = (x, f);
            if f.abs() < 1e-9 {
                break;
            }
        }
        Ok(x1)
    }

    /// Entropy generation between two places. Where the duties differ, the hot stream counts with
    /// the share of its heat that the cold one takes.
    fn section(&self, from: f64, to: f64) -> Result<(Dual, f64), Blocked> {
        let weight = self.cold.duty.value / self.hot.duty.value;
        let weight = if (weight - 1.0).abs() <= super::BALANCED { 1.0 } else { weight };
        let at = |p: &Passage, y: f64| p.entropy_at(self.view, y);
        let (y0, y1) = (self.turned(from), self.turned(to));
        let hot = at(self.hot, y0.max(y1))?.minus(&at(self.hot, y0.min(y1))?);
        let cold = at(self.cold, to)?.minus(&at(self.cold, from)?);
        let throughput = cold.value.abs() + weight * hot.value.abs();
        Ok((cold.plus(&hot.scaled(weight)), throughput))
    }
}
