//! The saturation line as piecewise polynomials through converged points.
//!
//! The variable is x = √(1 − T/Tc), in which the densities of an analytic equation, its liquid and
//! vapour being one curve through the critical point, are smooth. Every node solves the
//! equilibrium conditions of the equation itself (for a blend treated as one substance: its
//! published bubble and dew pressures); between nodes the polynomials repeat those conditions to
//! about 1e-9. Nothing here is fitted or stored beforehand.

use super::equation::{PressureLine, SaturationData};
use super::point::Helmholtz;
use super::residual::{Isotherm, order};

/// Coefficients of a segment.
const N: usize = 16;
/// Curves of a segment, see [`Curve`].
const CURVES: usize = 8;

/// Half width in x of the narrowest polynomial through the critical point: 4 mK at 400 K.
const NARROWEST: f64 = 0.003;

/// What a curve gives.
#[derive(Clone, Copy, Debug, PartialEq)]
#[repr(usize)]
pub(super) enum Curve {
    /// ln of the bubble pressure in Pa
    LnBubble = 0,
    /// ln of the dew pressure in Pa
    LnDew = 1,
    /// δ of the saturated liquid
    DeltaLiquid = 2,
    /// ln δ of the saturated vapour
    LnDeltaVapour = 3,
    /// J/kg
    EnthalpyLiquid = 4,
    /// J/kg
    EnthalpyVapour = 5,
    /// J/(kg K)
    EntropyLiquid = 6,
    /// J/(kg K)
    EntropyVapour = 7,
}

/// Polynomials in u = (x − centre)/half; the curves of one power of u stand together.
#[derive(Debug)]
struct Segment {
    centre: f64,
    half: f64,
    coefficients: [[f64; CURVES]; N],
}

impl Segment {
    fn new(centre: f64, half: f64, curves: &[[f64; N]; CURVES]) -> Segment {
        let coefficients = std::array::from_fn(|power| std::array::from_fn(|curve| curves[curve][power]));
        Segment { centre, half, coefficients }
    }
}

/// x² as polynomials in u = (ln p − centre)/half: ln p is smooth in x² through the critical point.
#[derive(Debug, Default)]
struct Inverse {
    /// ln p at the upper ends of the pieces, descending, and at the last lower end.
    ends: Vec<f64>,
    /// Centre, half, coefficients.
    pieces: Vec<(f64, f64, [f64; N])>,
}

impl Inverse {
    fn value(&self, ln_p: f64) -> f64 {
        let k = self.ends.partition_point(|end| *end > ln_p).clamp(1, self.pieces.len().max(1)) - 1;
        self.pieces.get(k).map_or(0.0, |(centre, half, coefficients)| {
            let u = (ln_p - centre) / half;
            let w = u * u;
            let (mut even, mut odd) = (0.0, 0.0);
            for pair in coefficients.chunks_exact(2).rev() {
                if let [a, b] = pair {
                    even = even * w + a;
                    odd = odd * w + b;
                }
            }
            even + u * odd
        })
    }
}

/// All curves at one x.
#[derive(Clone, Copy, Debug)]
pub(super) struct Line {
    values: [f64; CURVES],
    /// d/dx
    slopes: [f64; CURVES],
}

impl Line {
    /// A curve's value.
    pub fn value(&self, curve: Curve) -> f64 {
        self.values[curve as usize]
    }

    /// A curve's derivative with respect to x.
    pub fn slope(&self, curve: Curve) -> f64 {
        self.slopes[curve as usize]
    }
}

/// A saturated pair: pressures in Pa, reduced densities.
#[derive(Clone, Copy, Debug)]
struct Node {
    x: f64,
    t: f64,
    bubble: f64,
    dew: f64,
    liquid: f64,
    vapour: f64,
}

/// The saturation line of one fluid.
#[derive(Debug)]
pub(super) struct Saturation {
    /// Critical temperature of the equation (for a blend: of its pressure lines), K.
    pub t_c: f64,
    /// Pressure there, Pa.
    pub p_c: f64,
    /// Above this temperature (K) an isotherm has one density for each pressure: the critical
    /// temperature of the equation itself, for a blend a little below `t_c`.
    pub t_loop: f64,
    /// Lowest temperature, K. A blend's line is traced a little further, to where the bubble
    /// pressure is the dew pressure at this temperature.
    pub t_min: f64,
    /// Bubble pressure there, Pa.
    pub bubble_min: f64,
    /// Dew pressure there, Pa.
    pub dew_min: f64,
    /// Whether bubble and dew pressures differ.
    pub is_blend: bool,
    /// Lower ends of the segments in x, ascending, the first being 0.
    starts: Vec<f64>,
    /// x² over ln p of the bubble and the dew line, segment by segment.
    inverses: [Inverse; 2],
    x_max: f64,
    segments: Vec<Segment>,
}

/// Newton's method for equal pressure and Gibbs energy (Akasaka, J. Therm. Sci. Technol. 3 (2008)
/// 442, from memory) in the logarithms of the densities. `None` where it leaves the stable branches.
fn equilibrium(model: &Helmholtz, iso: &Isotherm, guess: (f64, f64)) -> Option<(f64, f64)> {
    let (mut l, mut v) = guess;
    let mut last = f64::INFINITY;
    for round in 0..60 {
        let a = model.residual.values::<{ order::ALONG }>(iso, l);
        let b = model.residual.values::<{ order::ALONG }>(iso, v);
        let pressure = l * (1.0 + a.d) - v * (1.0 + b.d);
        let gibbs = (a.d + a.f + l.ln()) - (b.d + b.f + v.ln());
        let (sa, sb) = (1.0 + 2.0 * a.d + a.dd, 1.0 + 2.0 * b.d + b.dd);
        if !(sa > 0.0 && sb > 0.0) || l <= v {
            return None;
        }
        let step_l = (v * gibbs - pressure) / (l - v) / sa;
        let step_v = (l * gibbs - pressure) / (l - v) / sb;
        if !(step_l.is_finite() && step_v.is_finite()) {
            return None;
        }
        let damp = 1.0f64.min(0.1 / step_l.abs()).min(0.5 / step_v.abs());
        l *= (damp * step_l).exp();
        v *= (damp * step_v).exp();
        let size = step_l.abs().max(step_v.abs());
        // Close to the critical point rounding is all that is left of the steps.
        let rounding = size >= 0.5 * last && (size < 1e-7 || (round > 12 && size < 1e-5));
        if size < 1e-11 || rounding {
            return (l > v).then_some((l, v));
        }
        last = size;
    }
    None
}

/// Equal Gibbs energy by bisection in pressure between the spinodals, for a start where nothing
/// is known but the critical density.
fn bracketed_equilibrium(model: &Helmholtz, iso: &Isotherm, delta_c: f64) -> Option<(f64, f64)> {
    let at = |delta: f64| {
        let v = model.residual.values::<{ order::ALONG }>(iso, delta);
        (delta * (1.0 + v.d), 1.0 + 2.0 * v.d + v.dd, v.d + v.f + delta.ln())
    };
    // The outermost ends of the unstable stretch: some equations are wavy within it.
    let edge = |from: f64, factor: f64| {
        let mut stable = from * delta_c;
        let steps = ((1.0 / from).ln() / factor.ln()) as usize;
        let mut unstable = (1..steps).map(|k| from * delta_c * factor.powi(k as i32)).find(|delta| {
            let inside = at(*delta).1 < 0.0;
            stable = if inside { stable } else { *delta };
            inside
        })?;
        for _ in 0..60 {
            let middle = 0.5 * (stable + unstable);
            if at(middle).1 > 0.0 { stable = middle } else { unstable = middle }
        }
        Some(stable)
    };
    let (vapour_end, liquid_end) = (edge(0.05, 1.01)?, edge(2.5, 0.99)?);
    let scale = model.rho_r * model.r * model.t_r / iso.tau;
    let (mut low, mut high) = (at(liquid_end).0.max(0.0), at(vapour_end).0);
    let mut found = None;
    for _ in 0..60 {
        let p = 0.5 * (low + high);
        let v = model.density(iso, p * scale, 0.5 * vapour_end, 0.0, vapour_end)?;
        let l = model.density(iso, p * scale, 1.1 * liquid_end, liquid_end, f64::INFINITY)?;
        if at(l).2 < at(v).2 {
            high = p
        } else {
            low = p
        }
        found = Some((l, v));
    }
    found.and_then(|pair| equilibrium(model, iso, pair))
}

/// Solves nodes near nodes that are already known.
struct Tracer<'a> {
    model: &'a Helmholtz,
    t_c: f64,
    known: Vec<Node>,
    lines: Option<(&'a PressureLine, &'a PressureLine)>,
}

impl Tracer<'_> {
    /// Extrapolation variable: x near the critical point, 1/T away from it.
    fn abscissa(&self, x: f64) -> f64 {
        if x < 0.3 { x } else { 0.3 + (1.0 / (1.0 - x * x) - 1.0 / (1.0 - 0.09)) }
    }

    fn x_of_abscissa(&self, z: f64) -> f64 {
        if z < 0.3 { z } else { (1.0 - 1.0 / (z - 0.3 + 1.0 / (1.0 - 0.09))).sqrt() }
    }

    /// Densities expected at `x` from the two nearest known nodes.
    fn guess(&self, x: f64) -> Option<(f64, f64)> {
        let z = self.abscissa(x);
        let (mut a, mut b) = (self.known.first()?, self.known.first()?);
        let distance = |node: &Node| (node.x - x).abs();
        for node in self.known.iter().skip(1) {
            if distance(node) < distance(a) {
                (a, b) = (node, a);
            } else if std::ptr::eq(a, b) || distance(node) < distance(b) {
                b = node;
            }
        }
        let (za, zb) = (self.abscissa(a.x), self.abscissa(b.x));
        let w = if za == zb { 0.0 } else { (z - za) / (zb - za) };
        let liquid = a.liquid + w * (b.liquid - a.liquid);
        let vapour = (a.vapour.ln() + w * (b.vapour.ln() - a.vapour.ln())).exp();
        Some((liquid, vapour))
    }

    fn solve(&mut self, x: f64) -> Option<Node> {
        if let Some(node) = self.known.iter().find(|n| (n.x - x).abs() < 1e-15) {
            return Some(*node);
        }
        let t = self.t_c * (1.0 - x * x);
        let iso = self.model.isotherm(t);
        let node = match self.lines {
            None => {
                let (liquid, vapour) = equilibrium(self.model, &iso, self.guess(x)?)?;
                // The vapour side fixes the pressure: the liquid's is lost in rounding at low p.
                let p = self.model.point_without_entropy(&iso, vapour).p;
                Node { x, t, bubble: p, dew: p, liquid, vapour }
            }
            Some((bubble, dew)) => {
                let (bubble, dew) = (bubble.ln_pressure(t).exp(), dew.ln_pressure(t).exp());
                let (guess_l, guess_v) = self.guess(x)?;
                let liquid = self.model.density(&iso, bubble, guess_l, 0.7 * guess_l, 1.5 * guess_l)?;
                let vapour = self.model.density(&iso, dew, guess_v, 0.0, 1.5 * guess_v)?;
                Node { x, t, bubble, dew, liquid, vapour }
            }
        };
        self.known.push(node);
        Some(node)
    }

    /// The curves' values at a node.
    fn curves(&self, node: &Node) -> [f64; CURVES] {
        let iso = self.model.isotherm(node.t);
        let l = self.model.point(&iso, node.liquid);
        let v = self.model.point(&iso, node.vapour);
        [node.bubble.ln(), node.dew.ln(), node.liquid, node.vapour.ln(), l.h, v.h, l.s, v.s]
    }
}

/// Values at the N Chebyshev nodes u_k = cos(π (k + ½)/N) to coefficients of powers of u.
fn powers_of(values: &[f64; N]) -> [f64; N] {
    let n = N as f64;
    let mut chebyshev = [0.0; N];
    for (j, c) in chebyshev.iter_mut().enumerate() {
        let sum: f64 = values
            .iter()
            .enumerate()
            .map(|(k, v)| v * (std::f64::consts::PI * j as f64 * (k as f64 + 0.5) / n).cos())
            .sum();
        *c = sum * if j == 0 { 1.0 } else { 2.0 } / n;
    }
    // Σ c_j T_j(u) with T_{j+1} = 2 u T_j − T_{j−1}.
    let mut out = [0.0; N];
    let (mut before, mut now) = ([0.0; N], [0.0; N]);
    before[0] = 1.0;
    now[1] = 1.0;
    for (j, c) in chebyshev.iter().enumerate() {
        let polynomial = if j == 0 { &before } else { &now };
        out.iter_mut().zip(polynomial).for_each(|(o, p)| *o += c * p);
        if j >= 1 {
            let mut next = before.map(|b| -b);
            next.iter_mut().skip(1).zip(&now).for_each(|(x, p)| *x += 2.0 * p);
            before = std::mem::replace(&mut now, next);
        }
    }
    out
}

fn chebyshev_node(k: usize) -> f64 {
    (std::f64::consts::PI * (k as f64 + 0.5) / N as f64).cos()
}

impl Saturation {
    /// Traces the line from the critical point to `t_min` (K). `critical` is the stated critical
    /// point: temperature in K, reduced density. `None` where the equation has no such line.
    pub fn trace(
        model: &Helmholtz,
        data: &SaturationData,
        critical: (f64, f64),
        t_min: f64,
    ) -> Option<Saturation> {
        let own = model.critical_point(critical.0, critical.1);
        let lines = match data {
            SaturationData::Maxwell => None,
            SaturationData::BubbleAndDew { bubble, dew } => Some((bubble, dew)),
        };
        let (t_loop, delta_c) = own?;
        let t_c = lines.map_or(t_loop, |(bubble, _)| bubble.temperature);
        let p_c = match lines {
            None => model.point_without_entropy(&model.isotherm(t_c), delta_c).p,
            Some((bubble, _)) => bubble.pressure,
        };
        let mut tracer = Tracer { model, t_c, known: Vec::new(), lines };
        let t_end = lines.map_or(t_min, |(bubble, dew)| bubble.temperature_at(dew.ln_pressure(t_min), t_min));
        let x_max = (1.0 - t_end / t_c).sqrt();
        // Close to the critical point, where the isotherm's loop is a simple one.
        let x_first = 0.1;
        let t_first = t_c * (1.0 - x_first * x_first);
        let iso = model.isotherm(t_first);
        let (liquid, vapour) = bracketed_equilibrium(model, &iso, delta_c)?;
        tracer.known.push(Node {
            x: x_first * (1.0 + 1e-9),
            t: t_first,
            bubble: 0.0,
            dew: 0.0,
            liquid,
            vapour,
        });
        tracer.solve(x_first)?;
        tracer.known.remove(0);
        // Down to the lowest temperature in even steps of the abscissa, up to the critical point in x.
        let (z_first, z_last) = (tracer.abscissa(x_first), tracer.abscissa(x_max));
        let steps = ((z_last - z_first) / 0.02).ceil().max(1.0);
        for k in 1..=steps as usize {
            let z = z_first + (z_last - z_first) * k as f64 / steps;
            tracer.solve(tracer.x_of_abscissa(z).min(x_max))?;
        }
        let smooth = model.residual.is_analytic() && lines.is_none();
        let x_near = if smooth { 2e-3 } else { 3e-4 };
        let mut x = x_first;
        while x > x_near {
            x *= 0.8;
            tracer.solve(x)?;
        }
        let mut out = Saturation {
            t_c,
            p_c,
            t_loop,
            t_min,
            bubble_min: 0.0,
            dew_min: 0.0,
            is_blend: lines.is_some(),
            starts: Vec::new(),
            inverses: [Inverse::default(), Inverse::default()],
            x_max,
            segments: Vec::new(),
        };
        let near = if smooth {
            // As wide as one polynomial through the critical point carries.
            let widths = [0.12, 0.06, 0.03, 0.015, 0.008, 0.004, NARROWEST];
            *widths.iter().find(|w| out.push_critical_segment(&mut tracer, **w).is_some())?
        } else {
            out.push_last_segment(&mut tracer, 5e-4, delta_c)?;
            5e-4
        };
        // Segments that grow away from the critical point, then even ones.
        let mut from = near;
        while from < x_max * (1.0 - 1e-12) {
            let to = (2.0 * from).min(from + 0.06).min(x_max);
            out.push_segments(&mut tracer, from, to, 4)?;
            from = to;
        }
        out.inverses = [out.invert(Curve::LnBubble), out.invert(Curve::LnDew)];
        let x_min = out.x_of_temperature(t_min);
        out.bubble_min = out.at(Curve::LnBubble, x_min).exp();
        out.dew_min = out.at(Curve::LnDew, x_min).exp();
        Some(out)
    }

    /// One segment, or its halves where its polynomials miss what lies between their nodes.
    fn push_segments(&mut self, tracer: &mut Tracer<'_>, from: f64, to: f64, depth: u32) -> Option<()> {
        let (centre, half) = (0.5 * (from + to), 0.5 * (to - from));
        let mut values = [[0.0; N]; CURVES];
        for k in 0..N {
            let node = tracer.solve(centre + half * chebyshev_node(k))?;
            for (row, v) in values.iter_mut().zip(tracer.curves(&node)) {
                row[k] = v;
            }
        }
        self.starts.push(from);
        self.segments.push(Segment::new(centre, half, &values.map(|v| powers_of(&v))));
        if depth > 0 && !self.last_is_accurate(tracer, from, to)? {
            self.starts.pop();
            self.segments.pop();
            self.push_segments(tracer, from, centre, depth - 1)?;
            self.push_segments(tracer, centre, to, depth - 1)?;
        }
        Some(())
    }

    /// Whether the last segment repeats the densities and pressures that are solved between its nodes.
    fn last_is_accurate(&self, tracer: &mut Tracer<'_>, from: f64, to: f64) -> Option<bool> {
        let mut accurate = true;
        for part in [0.31, 0.57, 0.86] {
            let x = from + part * (to - from);
            let c = tracer.solve(x).map(|node| tracer.curves(&node))?;
            let miss = |curve: Curve| (self.at(curve, x) - c[curve as usize]).abs();
            // Rounding alone moves a density by the reciprocal of the isotherm's slope, which is as x².
            let rounding = 3e-10 + 1e-15 / (x * x);
            let (r, t) = (tracer.model.r, self.temperature(x));
            let curves = [Curve::DeltaLiquid, Curve::LnDeltaVapour].map(|c| (c, rounding));
            let energies = [Curve::EnthalpyLiquid, Curve::EnthalpyVapour].map(|c| (c, rounding * r * t));
            let entropies = [Curve::EntropyLiquid, Curve::EntropyVapour].map(|c| (c, rounding * r));
            let pressures = [Curve::LnBubble, Curve::LnDew].map(|c| (c, 1e-11));
            let all = [curves, energies, entropies, pressures];
            accurate &= all.iter().flatten().all(|(curve, limit)| miss(*curve) < *limit);
        }
        Some(accurate)
    }

    /// Liquid and vapour as one curve through the critical point, the vapour at negative x. `None`
    /// where one polynomial does not carry that far.
    fn push_critical_segment(&mut self, tracer: &mut Tracer<'_>, to: f64) -> Option<()> {
        let mut values = [[0.0; N]; CURVES];
        for k in 0..N / 2 {
            let node = tracer.solve(to * chebyshev_node(k))?;
            let c = tracer.curves(&node);
            let mirror = N - 1 - k;
            for (curve, row) in values.iter_mut().enumerate() {
                row[k] = c[curve];
                // Curves 2 and 3 hold δ and ln δ; the other pairs the same quantity twice.
                row[mirror] = match curve {
                    0 | 1 => c[curve],
                    2 => c[3].exp(),
                    3 => c[2].ln(),
                    4 | 6 => c[curve + 1],
                    _ => c[curve - 1],
                };
            }
        }
        self.starts.push(0.0);
        self.segments.push(Segment::new(0.0, to, &values.map(|v| powers_of(&v))));
        if to > NARROWEST && !self.last_is_accurate(tracer, 0.0, to)? {
            self.starts.pop();
            self.segments.pop();
            return None;
        }
        Some(())
    }

    /// The last stretch to the critical point of an equation that is not analytic there: straight
    /// in x² for the pressure and in x for the others.
    fn push_last_segment(&mut self, tracer: &mut Tracer<'_>, to: f64, delta_c: f64) -> Option<()> {
        let node = tracer.solve(to)?;
        let edge = tracer.curves(&node);
        let iso = tracer.model.isotherm(self.t_c);
        let top = if self.is_blend {
            // The lines need not meet in one point of the surface: end them where they are.
            let mut top = edge;
            top[0] = self.p_c.ln();
            top[1] = self.p_c.ln();
            top
        } else {
            let c = tracer.model.point(&iso, delta_c);
            [self.p_c.ln(), self.p_c.ln(), delta_c, delta_c.ln(), c.h, c.h, c.s, c.s]
        };
        let mut coefficients = [[0.0; N]; CURVES];
        for (k, row) in coefficients.iter_mut().enumerate() {
            row[0] = top[k];
            row[if k < 2 { 2 } else { 1 }] = edge[k] - top[k];
        }
        self.starts.push(0.0);
        self.segments.push(Segment::new(0.0, to, &coefficients));
        Some(())
    }

    fn segment(&self, x: f64) -> Option<&Segment> {
        let k = self.starts.partition_point(|s| *s <= x);
        self.segments.get(k.saturating_sub(1))
    }

    /// x = √(1 − T/Tc) at `t` (K), within the line.
    pub fn x_of_temperature(&self, t: f64) -> f64 {
        (1.0 - t / self.t_c).max(0.0).sqrt().min(self.x_max)
    }

    /// Least reduced density of the fluid above the critical pressure at `t` (K): below the critical
    /// temperature that of the saturated liquid, since the isotherm has other roots beneath it.
    pub fn least_density(&self, t: f64) -> f64 {
        if t < self.t_loop {
            self.at(Curve::DeltaLiquid, self.x_of_temperature(t)) * (1.0 - 1e-6)
        } else {
            0.0
        }
    }

    /// T in K at `x`.
    pub fn temperature(&self, x: f64) -> f64 {
        self.t_c * (1.0 - x * x)
    }

    /// A curve's value at `x`.
    #[inline]
    pub fn at(&self, curve: Curve, x: f64) -> f64 {
        self.segment(x).map_or(f64::NAN, |s| {
            let u = (x - s.centre) / s.half;
            let (w, k) = (u * u, curve as usize);
            // Even and odd powers apart: two short chains instead of one long one.
            let (mut even, mut odd) = (0.0, 0.0);
            for pair in s.coefficients.chunks_exact(2).rev() {
                if let [a, b] = pair {
                    even = even * w + a[k];
                    odd = odd * w + b[k];
                }
            }
            even + u * odd
        })
    }

    /// A curve's value and derivative with respect to x.
    #[inline]
    pub fn with_slope(&self, curve: Curve, x: f64) -> (f64, f64) {
        self.segment(x).map_or((f64::NAN, f64::NAN), |s| {
            let u = (x - s.centre) / s.half;
            let (w, k) = (u * u, curve as usize);
            let (mut even, mut odd, mut even_w, mut odd_w) = (0.0, 0.0, 0.0, 0.0);
            for pair in s.coefficients.chunks_exact(2).rev() {
                if let [a, b] = pair {
                    even_w = even_w * w + even;
                    odd_w = odd_w * w + odd;
                    even = even * w + a[k];
                    odd = odd * w + b[k];
                }
            }
            (even + u * odd, (odd + 2.0 * u * (even_w + u * odd_w)) / s.half)
        })
    }

    /// All curves at `x`.
    pub fn line(&self, x: f64) -> Line {
        let mut out = Line { values: [f64::NAN; CURVES], slopes: [f64::NAN; CURVES] };
        if let Some(s) = self.segment(x) {
            let u = (x - s.centre) / s.half;
            (out.values, out.slopes) = ([0.0; CURVES], [0.0; CURVES]);
            for row in s.coefficients.iter().rev() {
                for ((y, dy), c) in out.values.iter_mut().zip(&mut out.slopes).zip(row) {
                    *dy = *dy * u + *y;
                    *y = *y * u + c;
                }
            }
            out.slopes.iter_mut().for_each(|dy| *dy /= s.half);
        }
        out
    }

    /// x on the bubble or dew line (`curve`) at pressure `p` (Pa), which lies on it.
    pub fn x_of_pressure(&self, curve: Curve, p: f64) -> f64 {
        if p >= self.p_c {
            return 0.0;
        }
        let target = p.ln();
        let mut w = self.inverses[usize::from(curve == Curve::LnDew)].value(target).max(0.0);
        // One step in x² makes up for what the inverse polynomial leaves.
        let x = w.sqrt();
        if x > 1e-9 {
            let (y, slope) = self.with_slope(curve, x);
            w = (w - (y - target) * 2.0 * x / slope).clamp(0.0, self.x_max * self.x_max);
        }
        w.sqrt()
    }

    /// x and all curves of a pure fluid at pressure `p` (Pa), which lies on the line.
    pub fn line_at_pressure(&self, p: f64) -> (f64, Line) {
        let target = p.ln();
        let x = self.inverses[0].value(target).clamp(0.0, self.x_max * self.x_max).sqrt();
        let mut line = self.line(x.max(1e-6));
        // One step along the slopes makes up for what the inverse polynomial leaves.
        let step = if p >= self.p_c { -x.max(1e-6) } else { (target - line.values[0]) / line.slopes[0] };
        line.values.iter_mut().zip(&line.slopes).for_each(|(y, dy)| *y += dy * step);
        ((x.max(1e-6) + step).clamp(0.0, self.x_max), line)
    }

    /// The inverse of a pressure curve, by bisection at each node.
    fn invert(&self, curve: Curve) -> Inverse {
        let ends: Vec<f64> = self.starts.iter().copied().chain([self.x_max]).collect();
        let mut out = Inverse { ends: ends.iter().map(|x| self.at(curve, *x)).collect(), pieces: Vec::new() };
        for pair in ends.windows(2) {
            let &[from, to] = pair else { continue };
            let (top, bottom) = (self.at(curve, from), self.at(curve, to));
            let (centre, half) = (0.5 * (top + bottom), 0.5 * (top - bottom));
            let values = std::array::from_fn(|k| {
                let target = centre + half * chebyshev_node(k);
                let (mut low, mut high) = (from * from, to * to);
                let mut w = low + (high - low) * (top - target) / (top - bottom);
                for _ in 0..40 {
                    let (y, slope) = self.with_slope(curve, w.sqrt());
                    if y > target {
                        low = w
                    } else {
                        high = w
                    }
                    let next = w - (y - target) * 2.0 * w.sqrt() / slope;
                    let next = if next >= low && next <= high { next } else { 0.5 * (low + high) };
                    let done = (next - w).abs() <= 1e-15 * w;
                    w = next;
                    if done {
                        break;
                    }
                }
                w
            });
            out.pieces.push((centre, half, powers_of(&values)));
        }
        out
    }

    /// dT/dp (K/Pa) along the bubble or dew line at `x`.
    pub fn dt_dp(&self, curve: Curve, x: f64) -> f64 {
        let x = x.max(1e-6);
        let (ln_p, slope) = self.with_slope(curve, x);
        -2.0 * x * self.t_c / (ln_p.exp() * slope)
    }
}
