//! More than two streams: composite curves.

use super::passage::{BEYOND, Passage};
use super::{BALANCED, Crossing, Pinch};
use crate::model::{Blocked, Dual, View};

/// How far a straight piece may be off the temperature of its stream, K.
const STRAIGHT: f64 = 0.02;
/// How often a piece is halved at most.
const DEPTH: u32 = 5;

/// A stream as pieces, from its cold end: share of its own duty, and a temperature that does not
/// fall.
#[derive(Clone, Debug)]
struct Course<'p> {
    passage: &'p Passage,
    points: Vec<(f64, f64)>,
}

impl<'p> Course<'p> {
    fn new(view: View<'_>, passage: &'p Passage) -> Result<Course<'p>, Blocked> {
        let turned = |u: f64| if passage.hot { 1.0 - u } else { u };
        let mut nodes: Vec<f64> = vec![0.0, 1.0];
        nodes.extend(passage.kinks.iter().map(|k| turned(k.y)));
        nodes.sort_by(f64::total_cmp);
        let mut points = Vec::new();
        let at = |u: f64| Ok::<_, Blocked>((u, passage.at(view, turned(u))?));
        for (&a, &b) in nodes.iter().zip(nodes.iter().skip(1)) {
            let (first, last) = (at(a)?, at(b)?);
            points.push(first);
            refine(&at, first, last, DEPTH, &mut points)?;
        }
        points.push(at(1.0)?);
        // A pressure drop can bend the temperature of two phases back: the kinder level counts.
        if passage.hot {
            let mut level = f64::NEG_INFINITY;
            for p in &mut points {
                level = level.max(p.1);
                p.1 = level;
            }
        } else {
            let mut level = f64::INFINITY;
            for p in points.iter_mut().rev() {
                level = level.min(p.1);
                p.1 = level;
            }
        }
        Ok(Course { passage, points })
    }

    fn lowest(&self) -> f64 {
        self.points.first().map_or(0.0, |p| p.1)
    }

    fn highest(&self) -> f64 {
        self.points.last().map_or(0.0, |p| p.1)
    }

    /// The shares at which the temperature is reached and left: they differ on a plateau.
    fn shares(&self, t: f64) -> (f64, f64) {
        if t < self.lowest() {
            return (0.0, 0.0);
        }
        if t > self.highest() {
            return (1.0, 1.0);
        }
        let reached = self.points.partition_point(|p| p.1 < t);
        let left = self.points.partition_point(|p| p.1 <= t);
        let between = |i: usize| match (self.points.get(i.wrapping_sub(1)), self.points.get(i)) {
            (Some(a), Some(b)) if b.1 > a.1 => a.0 + (b.0 - a.0) * (t - a.1) / (b.1 - a.1),
            (None, Some(b)) => b.0,
            (Some(a), _) => a.0,
            (None, None) => 0.0,
        };
        let low = between(reached);
        let high = match self.points.get(left.wrapping_sub(1)) {
            Some(p) if p.1 == t => p.0,
            _ => low,
        };
        (low, high.max(low))
    }

    fn turned(&self, u: f64) -> f64 {
        if self.passage.hot { 1.0 - u } else { u }
    }

    /// dT/du, K.
    fn slope(&self, view: View<'_>, u: f64) -> Result<f64, Blocked> {
        let s = self.passage.slope(view, self.turned(u))?;
        Ok(if self.passage.hot { -s } else { s })
    }

    fn duty(&self) -> f64 {
        self.passage.duty.value
    }

    fn temperature(&self, view: View<'_>, u: f64) -> Result<Dual, Blocked> {
        self.passage.temperature_at(view, &Dual::constant(self.turned(u)))
    }
}

fn refine(
    at: &impl Fn(f64) -> Result<(f64, f64), Blocked>,
    a: (f64, f64),
    b: (f64, f64),
    depth: u32,
    out: &mut Vec<(f64, f64)>,
) -> Result<(), Blocked> {
    if depth == 0 || b.0 - a.0 < 1e-9 {
        return Ok(());
    }
    let middle = at(0.5 * (a.0 + b.0))?;
    if (middle.1 - 0.5 * (a.1 + b.1)).abs() > STRAIGHT {
        refine(at, a, middle, depth - 1, out)?;
        out.push(middle);
        refine(at, middle, b, depth - 1, out)?;
    }
    Ok(())
}

/// A composite curve.
#[derive(Clone, Debug)]
pub(super) struct Curve<'p> {
    courses: Vec<Course<'p>>,
    /// Heat from the cold end (W or J) and temperature (K), neither of which falls.
    vertices: Vec<(f64, f64)>,
    total: f64,
}

impl<'p> Curve<'p> {
    pub fn new(view: View<'_>, passages: &'p [Passage]) -> Result<Curve<'p>, Blocked> {
        let courses: Vec<Course<'p>> =
            passages.iter().map(|p| Course::new(view, p)).collect::<Result<_, _>>()?;
        let mut levels: Vec<f64> = courses.iter().flat_map(|c| c.points.iter().map(|p| p.1)).collect();
        levels.sort_by(f64::total_cmp);
        levels.dedup();
        let mut vertices = Vec::with_capacity(levels.len() + 8);
        for t in levels {
            let (mut low, mut high) = (0.0, 0.0);
            for c in &courses {
                let (a, b) = c.shares(t);
                low += c.duty() * a;
                high += c.duty() * b;
            }
            vertices.push((low, t));
            if high > low {
                vertices.push((high, t));
            }
        }
        let total = courses.iter().map(Course::duty).sum();
        Ok(Curve { courses, vertices, total })
    }

    /// Shares of the heat at which the curve bends.
    pub fn bends(&self) -> impl Iterator<Item = f64> + '_ {
        self.vertices.iter().map(|v| (v.0 / self.total).clamp(0.0, 1.0))
    }

    /// The temperatures just before and just after a share of the heat: they differ where no
    /// stream bridges two levels.
    pub fn at(&self, x: f64) -> (f64, f64) {
        let q = x * self.total;
        let slack = 1e-12 * self.total;
        let before = self.vertices.partition_point(|v| v.0 < q - slack);
        let after = self.vertices.partition_point(|v| v.0 <= q + slack);
        let on = |i: usize| match (self.vertices.get(i.wrapping_sub(1)), self.vertices.get(i)) {
            (Some(a), Some(b)) if b.0 > a.0 => a.1 + (b.1 - a.1) * (q - a.0) / (b.0 - a.0),
            (_, Some(b)) => b.1,
            (Some(a), None) => a.1,
            (None, None) => 0.0,
        };
        if before < after {
            // Vertices lie here: the first and the last of them bound the jump.
            let first = self.vertices.get(before).map_or(0.0, |v| v.1);
            let last = self.vertices.get(after - 1).map_or(first, |v| v.1);
            return (first, last);
        }
        let t = on(before);
        (t, t)
    }

    /// The share that each stream has passed where the whole has passed a share `x` and is at `t`.
    fn shares(&self, x: f64, t: f64) -> Vec<f64> {
        let bounds: Vec<(f64, f64)> = self.courses.iter().map(|c| c.shares(t)).collect();
        let low: f64 = self.courses.iter().zip(&bounds).map(|(c, b)| c.duty() * b.0).sum();
        let room: f64 = self.courses.iter().zip(&bounds).map(|(c, b)| c.duty() * (b.1 - b.0)).sum();
        let part = if room > 0.0 { ((x * self.total - low) / room).clamp(0.0, 1.0) } else { 0.0 };
        bounds.iter().map(|b| b.0 + part * (b.1 - b.0)).collect()
    }

    /// The heat below the temperature of an end or kink, and that temperature, with gradients, if
    /// one lies at this share and temperature.
    fn node(&self, view: View<'_>, x: f64, t: f64) -> Result<Option<(Dual, Dual)>, Blocked> {
        for (j, course) in self.courses.iter().enumerate() {
            let ends = [course.turned(0.0), course.turned(1.0)].map(|y| (y, None));
            let kinks = course.passage.kinks.iter().map(|k| (k.y, Some(k)));
            for (y, kink) in ends.into_iter().chain(kinks) {
                let u = course.turned(y);
                let level = kink.map_or_else(
                    || if u <= 0.5 { course.lowest() } else { course.highest() },
                    |k| k.temperature(),
                );
                if (level - t).abs() > 1e-7 {
                    continue;
                }
                let others = self.courses.iter().enumerate().filter(|(i, _)| *i != j);
                let below: f64 = others.map(|(_, c)| c.duty() * c.shares(level).0).sum();
                if (below + course.duty() * u - x * self.total).abs() > 1e-7 * self.total {
                    continue;
                }
                let (y, temperature) = match kink {
                    Some(k) => course.passage.dual_kink(k)?,
                    None => (Dual::constant(y), course.temperature(view, u)?),
                };
                let own = if course.passage.hot { y.map(1.0 - y.value, -1.0) } else { y };
                let mut heat = course.passage.duty.times(&own);
                for (i, c) in self.courses.iter().enumerate() {
                    if i != j {
                        heat.add_scaled(1.0, &c.heat_below(view, &temperature)?);
                    }
                }
                return Ok(Some((heat, temperature)));
            }
        }
        Ok(None)
    }

    /// The temperature at a given heat from the cold end, with its gradient, near a temperature
    /// that the pieces gave.
    fn temperature(&self, view: View<'_>, heat: &Dual, t: f64) -> Result<Dual, Blocked> {
        let mut balance = heat.clone().scaled(-1.0);
        let mut capacity = 0.0;
        let mut slopes = Dual::default();
        let shares = self.shares(heat.value / self.total, t);
        for (course, &share) in self.courses.iter().zip(&shares) {
            if t > course.highest() + 1e-9 {
                balance.add_scaled(1.0, &course.passage.duty);
                continue;
            }
            if t < course.lowest() - 1e-9 {
                continue;
            }
            let (low, high) = course.shares(t);
            let slope = course.slope(view, share)?;
            if high - low > 1e-9 || slope <= 0.0 {
                // A plateau: the other streams have no say.
                return course.temperature(view, share);
            }
            let own = course.temperature(view, share)?;
            let weight = course.duty() / slope;
            balance.add_scaled(share, &course.passage.duty);
            slopes.add_scaled(weight, &own);
            capacity += weight;
        }
        if capacity <= 0.0 {
            return Ok(Dual::constant(t));
        }
        // Σ Qᵢ (uᵢ + (T − Tᵢ(uᵢ))/Tᵢ′) = heat, linear in T.
        Ok(slopes.minus(&balance).scaled(1.0 / capacity))
    }

    /// Entropy rise of all streams from one share of the heat to another, along the axis.
    fn rise(&self, view: View<'_>, from: f64, to: f64) -> Result<Dual, Blocked> {
        let mut out = Dual::default();
        for (x, t, sign) in [(from, self.at(from).1, -1.0), (to, self.at(to).0, 1.0)] {
            let shares = self.shares(x, t);
            for (course, &u) in self.courses.iter().zip(&shares) {
                out.add_scaled(sign, &course.passage.entropy_at(view, course.turned(u))?);
                // The share of the whole is fixed, not that of each stream: what lacks passes at
                // the temperature of the place.
                out.add_scaled(sign * (x - u) / t, &course.passage.duty);
            }
        }
        Ok(out)
    }
}

impl Course<'_> {
    /// The heat of one stream below a temperature, with gradient.
    fn heat_below(&self, view: View<'_>, t: &Dual) -> Result<Dual, Blocked> {
        if t.value >= self.highest() {
            return Ok(self.passage.duty.clone());
        }
        if t.value <= self.lowest() {
            return Ok(Dual::default());
        }
        let mut u = self.shares(t.value).0;
        let mut slope = self.slope(view, u)?;
        if slope <= 0.0 {
            return Ok(self.passage.duty.clone().scaled(u));
        }
        // The pieces come close; two steps of Newton's method settle it.
        for _ in 0..2 {
            let next = u + (t.value - self.temperature(view, u)?.value) / slope;
            if (next - u).abs() > 0.02 || !(0.0..=1.0).contains(&next) {
                break;
            }
            u = next;
            slope = self.slope(view, u)?;
        }
        if slope <= 0.0 {
            return Ok(self.passage.duty.clone().scaled(u));
        }
        let shift = t.clone().minus(&self.temperature(view, u)?);
        Ok(self.passage.duty.times(&shift.map(u, 1.0 / slope)))
    }
}

/// Differences just before and just after a share.
fn differences(hot: &Curve<'_>, cold: &Curve<'_>, x: f64) -> [(f64, f64); 2] {
    let (h, c) = (hot.at(x), cold.at(x));
    [(h.0, c.0), (h.1, c.1)]
}

/// Every share at which one of the curves bends.
pub(super) fn bends(hot: &Curve<'_>, cold: &Curve<'_>) -> Vec<f64> {
    let mut out: Vec<f64> = hot.bends().chain(cold.bends()).chain([0.0, 1.0]).collect();
    out.sort_by(f64::total_cmp);
    out.dedup_by(|b, a| *b - *a < 1e-12);
    out
}

/// The pinch of the composite curves and the section in which they are crossed.
pub(super) fn judge(
    view: View<'_>,
    hot: &[Passage],
    cold: &[Passage],
) -> Result<(Pinch, Option<Crossing>), Blocked> {
    let (hot, cold) = (Curve::new(view, hot)?, Curve::new(view, cold)?);
    // In order of place: before and after every bend, the outer sides of the ends left out.
    let mut places: Vec<(f64, f64, f64)> = Vec::new();
    for x in bends(&hot, &cold) {
        let [before, after] = differences(&hot, &cold, x);
        if x > 0.0 {
            places.push((x, before.0, before.1));
        }
        if x < 1.0 {
            places.push((x, after.0, after.1));
        }
    }
    let difference = |p: &(f64, f64, f64)| p.1 - p.2;
    let lowest = (0..places.len()).min_by(|&a, &b| difference(&places[a]).total_cmp(&difference(&places[b])));
    let Some(lowest) = lowest else { return Err(BEYOND) };
    let (x, th, tc) = places[lowest];
    let (t_hot, t_cold) = if let Some((heat, t)) = cold.node(view, x, tc)? {
        let other = heat.scaled(hot.total / cold.total);
        (hot.temperature(view, &other, th)?, t)
    } else if let Some((heat, t)) = hot.node(view, x, th)? {
        let other = heat.scaled(cold.total / hot.total);
        (t, cold.temperature(view, &other, tc)?)
    } else {
        let at = |curve: &Curve<'_>, t| curve.temperature(view, &Dual::constant(x * curve.total), t);
        (at(&hot, th)?, at(&cold, tc)?)
    };
    let pinch = Pinch { difference: t_hot.minus(&t_cold), hot: th, cold: tc, place: x };
    if difference(&places[lowest]) >= 0.0 {
        return Ok((pinch, None));
    }
    // Between two bends both curves are straight.
    let zero = |a: &(f64, f64, f64), b: &(f64, f64, f64)| {
        let (f, g) = (difference(a), difference(b));
        if f == g { a.0 } else { a.0 + (b.0 - a.0) * f / (f - g) }
    };
    let left = places[..lowest].iter().rposition(|p| difference(p) >= 0.0);
    let right = places[lowest..].iter().position(|p| difference(p) >= 0.0).map(|i| lowest + i);
    let from = left.map_or(0.0, |i| zero(&places[i], &places[i + 1]));
    let to = right.map_or(1.0, |i| zero(&places[i - 1], &places[i]));
    let weight = cold.total / hot.total;
    let weight = if (weight - 1.0).abs() <= BALANCED { 1.0 } else { weight };
    let (s_hot, s_cold) = (hot.rise(view, from, to)?, cold.rise(view, from, to)?);
    let throughput = s_cold.value.abs() + weight * s_hot.value.abs();
    // Along the axis the entropy of the hot streams rises as they give off heat backwards.
    let generation = s_cold.minus(&s_hot.scaled(weight));
    Ok((pinch, Some(Crossing { from, to, generation, throughput })))
}
