//! The residual part of the Helmholtz energy, compiled for speed.
//!
//! Every analytic term is a function of τ times a function of δ. So an isotherm is compiled once:
//! terms that share their function of δ are summed into one coefficient, and a density iteration
//! runs over those coefficients alone. All derivatives are logarithmic (δ φ_δ, τ φ_τ …).

use super::equation::ResidualTerms;

/// Most functions of δ that an equation may have.
const SLOTS: usize = 64;
/// Highest power of δ.
const POWERS: usize = 32;

/// Function of δ besides δ^d.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Shape {
    /// 1
    One,
    /// exp(−g δ^l)
    Exponential { g: f64, l: usize },
    /// exp(−η (δ−ε)²)
    Gaussian { eta: f64, epsilon: f64 },
}

/// Function of τ besides τ^t.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Factor {
    /// exp(−β (τ−γ)²)
    Gaussian { beta: f64, gamma: f64 },
    /// exp(1/(β (τ−γ)² + b))
    Reciprocal { beta: f64, gamma: f64, b: f64 },
    /// exp(−g τ^m)
    Exponential { g: f64, m: f64 },
}

/// One function δ^d W(δ).
#[derive(Clone, Copy, Debug)]
struct Slot {
    d: f64,
    power: usize,
}

#[derive(Debug)]
struct Group {
    shape: Shape,
    slots: std::ops::Range<usize>,
}

/// n τ^t for one slot.
#[derive(Debug)]
struct PowerTerm {
    n: f64,
    nt: f64,
    ntt: f64,
    /// Index into the distinct exponents.
    exponent: usize,
    slot: usize,
}

/// n τ^t F(τ) for one slot.
#[derive(Debug)]
struct FactorTerm {
    n: f64,
    t: f64,
    factor: Factor,
    slot: usize,
}

/// A term of the form of Span and Wagner (1996), eqs. (6.1) and following.
#[derive(Debug)]
struct NonAnalytic {
    n: f64,
    a: f64,
    b: f64,
    beta: f64,
    big_a: f64,
    big_b: f64,
    big_c: f64,
    big_d: f64,
}

/// φ^r and its logarithmic derivatives at a point; those that were not asked for are zero.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Values {
    /// φ
    pub f: f64,
    /// δ φ_δ
    pub d: f64,
    /// δ² φ_δδ
    pub dd: f64,
    /// δ³ φ_δδδ, analytic terms only
    pub ddd: f64,
    /// τ φ_τ
    pub t: f64,
    /// τ² φ_ττ
    pub tt: f64,
    /// δ τ φ_δτ
    pub dt: f64,
}

/// What to evaluate.
pub(super) mod order {
    /// Along the isotherm: φ, δ φ_δ, δ² φ_δδ.
    pub const ALONG: u8 = 0;
    /// The same and the third derivative.
    pub const THIRD: u8 = 1;
    /// All first and second derivatives.
    pub const FULL: u8 = 2;
}

/// The equation at one temperature: coefficients of each slot, for φ, τ φ_τ and τ² φ_ττ.
#[derive(Clone, Debug)]
pub(super) struct Isotherm {
    /// τ
    pub tau: f64,
    a: [f64; SLOTS],
    b: [f64; SLOTS],
    c: [f64; SLOTS],
}

#[derive(Debug)]
pub(super) struct Residual {
    slots: Vec<Slot>,
    groups: Vec<Group>,
    exponents: Vec<f64>,
    powers: Vec<PowerTerm>,
    factors: Vec<FactorTerm>,
    non_analytic: Vec<NonAnalytic>,
    highest_power: usize,
}

/// A term before grouping.
struct Raw {
    n: f64,
    t: f64,
    d: f64,
    shape: Shape,
    factor: Option<Factor>,
}

fn exponential(g: f64, l: f64) -> Result<Shape, String> {
    if l == 0.0 || g == 0.0 { Ok(Shape::One) } else { Ok(Shape::Exponential { g, l: whole(l)? }) }
}

fn whole(x: f64) -> Result<usize, String> {
    if x.fract() == 0.0 && x >= 0.0 && x < POWERS as f64 {
        Ok(x as usize)
    } else {
        Err(format!("exponent of density {x} is not a whole number below {POWERS}"))
    }
}

fn raw_terms(
    group: &ResidualTerms,
    out: &mut Vec<Raw>,
    critical: &mut Vec<NonAnalytic>,
) -> Result<(), String> {
    match group {
        ResidualTerms::Power(rows) => {
            for &[n, t, d, l] in rows {
                out.push(Raw { n, t, d, shape: exponential(1.0, l)?, factor: None });
            }
        }
        ResidualTerms::Exponential(rows) => {
            for &[n, t, d, l, g] in rows {
                out.push(Raw { n, t, d, shape: exponential(g, l)?, factor: None });
            }
        }
        ResidualTerms::DoubleExponential(rows) => {
            for &[n, t, d, ld, gd, lt, gt] in rows {
                let factor = Some(Factor::Exponential { g: gt, m: lt });
                out.push(Raw { n, t, d, shape: exponential(gd, ld)?, factor });
            }
        }
        ResidualTerms::Lemmon2005(rows) => {
            for &[n, t, d, l, m] in rows {
                let factor = (m != 0.0).then_some(Factor::Exponential { g: 1.0, m });
                out.push(Raw { n, t, d, shape: exponential(1.0, l)?, factor });
            }
        }
        ResidualTerms::Gaussian(rows) => {
            for &[n, t, d, eta, epsilon, beta, gamma] in rows {
                let factor = Some(Factor::Gaussian { beta, gamma });
                out.push(Raw { n, t, d, shape: Shape::Gaussian { eta, epsilon }, factor });
            }
        }
        ResidualTerms::GaoB(rows) => {
            for &[n, t, d, eta, epsilon, beta, gamma, b] in rows {
                let factor = Some(Factor::Reciprocal { beta, gamma, b });
                out.push(Raw { n, t, d, shape: Shape::Gaussian { eta: -eta, epsilon }, factor });
            }
        }
        ResidualTerms::NonAnalytic(rows) => {
            for &[n, a, b, beta, big_a, big_b, big_c, big_d] in rows {
                critical.push(NonAnalytic { n, a, b, beta, big_a, big_b, big_c, big_d });
            }
        }
    }
    Ok(())
}

impl Residual {
    /// The compiled equation, or what in it cannot be compiled.
    pub fn new(terms: &[ResidualTerms]) -> Result<Residual, String> {
        let mut raw = Vec::new();
        let mut non_analytic = Vec::new();
        for group in terms {
            raw_terms(group, &mut raw, &mut non_analytic)?;
        }
        let mut shapes: Vec<Shape> = Vec::new();
        for term in &raw {
            if !shapes.contains(&term.shape) {
                shapes.push(term.shape);
            }
        }
        let mut out = Residual {
            slots: Vec::new(),
            groups: Vec::new(),
            exponents: Vec::new(),
            powers: Vec::new(),
            factors: Vec::new(),
            non_analytic,
            highest_power: 1,
        };
        for shape in shapes {
            let first = out.slots.len();
            if let Shape::Exponential { l, .. } = shape {
                out.highest_power = out.highest_power.max(l);
            }
            for term in raw.iter().filter(|term| term.shape == shape) {
                let power = whole(term.d)?;
                out.highest_power = out.highest_power.max(power);
                let known = (first..out.slots.len()).find(|&k| out.slots[k].power == power);
                let slot = known.unwrap_or_else(|| {
                    out.slots.push(Slot { d: term.d, power });
                    out.slots.len() - 1
                });
                let (n, t) = (term.n, term.t);
                if let Some(factor) = term.factor {
                    out.factors.push(FactorTerm { n, t, factor, slot });
                } else {
                    let exponent = out.exponents.iter().position(|&e| e == t).unwrap_or_else(|| {
                        out.exponents.push(t);
                        out.exponents.len() - 1
                    });
                    out.powers.push(PowerTerm { n, nt: n * t, ntt: n * t * (t - 1.0), exponent, slot });
                }
            }
            out.groups.push(Group { shape, slots: first..out.slots.len() });
        }
        if out.slots.len() > SLOTS || out.exponents.len() > SLOTS {
            return Err(format!("more than {SLOTS} distinct functions"));
        }
        Ok(out)
    }

    /// Whether the equation has terms that are not analytic at the critical point.
    pub fn is_analytic(&self) -> bool {
        self.non_analytic.is_empty()
    }

    /// The equation at one reduced temperature.
    pub fn isotherm(&self, tau: f64) -> Isotherm {
        let ln_tau = tau.ln();
        let mut value = [0.0; SLOTS];
        for (v, &t) in value.iter_mut().zip(&self.exponents) {
            *v = (t * ln_tau).exp();
        }
        let mut iso = Isotherm { tau, a: [0.0; SLOTS], b: [0.0; SLOTS], c: [0.0; SLOTS] };
        for term in &self.powers {
            // The masks change nothing (both are below SLOTS) and spare the bounds checks.
            let v = value[term.exponent & (SLOTS - 1)];
            let k = term.slot & (SLOTS - 1);
            iso.a[k] += term.n * v;
            iso.b[k] += term.nt * v;
            iso.c[k] += term.ntt * v;
        }
        for term in &self.factors {
            let t = term.t;
            // ln F, τ (ln F)' and τ² (ln F)''.
            let (ln_f, u, w) = match term.factor {
                Factor::Gaussian { beta, gamma } => {
                    let y = tau - gamma;
                    (-beta * y * y, -2.0 * beta * tau * y, -2.0 * beta * tau * tau)
                }
                Factor::Reciprocal { beta, gamma, b } => {
                    let y = tau - gamma;
                    let r = 1.0 / (beta * y * y + b);
                    let slope = -2.0 * beta * y * r * r;
                    (
                        r,
                        tau * slope,
                        tau * tau * (-2.0 * beta * r * r + 8.0 * beta * beta * y * y * r * r * r),
                    )
                }
                Factor::Exponential { g, m } => {
                    let z = g * (m * ln_tau).exp();
                    (-z, -m * z, -m * (m - 1.0) * z)
                }
            };
            let y = term.n * (t * ln_tau + ln_f).exp();
            let first = t + u;
            let k = term.slot & (SLOTS - 1);
            iso.a[k] += y;
            iso.b[k] += first * y;
            iso.c[k] += (first * first - t + w) * y;
        }
        iso
    }

    /// φ^r and derivatives of the chosen order on an isotherm.
    pub fn values<const ORDER: u8>(&self, iso: &Isotherm, delta: f64) -> Values {
        let mut power = [1.0; POWERS];
        power[1] = delta;
        for k in 2..=self.highest_power.min(POWERS - 1) {
            // Halving keeps the chain of multiplications short.
            power[k] = power[k / 2] * power[k - k / 2];
        }
        let mut out = Values::default();
        for group in &self.groups {
            let (mut g0, mut g1, mut g2, mut g3) = (0.0, 0.0, 0.0, 0.0);
            let (mut b0, mut b1, mut c0) = (0.0, 0.0, 0.0);
            for k in group.slots.clone() {
                let (Some(slot), k) = (self.slots.get(k), k & (SLOTS - 1)) else { continue };
                let x = power[slot.power & (POWERS - 1)];
                let y0 = iso.a[k] * x;
                let y1 = slot.d * y0;
                let y2 = (slot.d - 1.0) * y1;
                g0 += y0;
                g1 += y1;
                g2 += y2;
                if ORDER == order::THIRD {
                    g3 += (slot.d - 2.0) * y2;
                }
                if ORDER == order::FULL {
                    let yb = iso.b[k] * x;
                    b0 += yb;
                    b1 += slot.d * yb;
                    c0 += iso.c[k] * x;
                }
            }
            // W, δ W'/W, δ² W''/W, δ³ W'''/W.
            let (w, w1, w2, w3) = match group.shape {
                Shape::One => (1.0, 0.0, 0.0, 0.0),
                Shape::Exponential { g, l } => {
                    let z = g * power[l & (POWERS - 1)];
                    let l = l as f64;
                    let lz = l * z;
                    let third = if ORDER == order::THIRD {
                        -lz * ((l - 1.0) * (l - 2.0) - 3.0 * (l - 1.0) * lz + lz * lz)
                    } else {
                        0.0
                    };
                    ((-z).exp(), -lz, lz * (lz - (l - 1.0)), third)
                }
                Shape::Gaussian { eta, epsilon } => {
                    let y = delta - epsilon;
                    let slope = -2.0 * eta * delta * y;
                    let curve = -2.0 * eta * delta * delta;
                    (
                        (-eta * y * y).exp(),
                        slope,
                        slope * slope + curve,
                        slope * (slope * slope + 3.0 * curve),
                    )
                }
            };
            out.f += w * g0;
            out.d += w * (g1 + w1 * g0);
            out.dd += w * (g2 + 2.0 * w1 * g1 + w2 * g0);
            if ORDER == order::THIRD {
                out.ddd += w * (g3 + 3.0 * w1 * g2 + 3.0 * w2 * g1 + w3 * g0);
            }
            if ORDER == order::FULL {
                out.t += w * b0;
                out.dt += w * (b1 + w1 * b0);
                out.tt += w * c0;
            }
        }
        for term in &self.non_analytic {
            term.add(delta, iso.tau, &mut out);
        }
        out
    }
}

impl NonAnalytic {
    /// Adds n Δ^b δ ψ with its derivatives.
    fn add(&self, delta: f64, tau: f64, out: &mut Values) {
        let NonAnalytic { n, a, b, beta, big_a, big_b, big_c, big_d } = *self;
        // The derivatives hold powers of |δ − 1| that have a finite limit only in their sum.
        let y = if (delta - 1.0).abs() < 1e-9 { 1e-9 } else { delta - 1.0 };
        let x = tau - 1.0;
        let y2 = y * y;
        let exponent = -big_c * y2 - big_d * x * x;
        if exponent < -60.0 {
            return;
        }
        let psi = exponent.exp();
        let ln_y2 = y2.ln();
        let k = 0.5 / beta;
        let yk = (k * ln_y2).exp();
        let ya = big_b * (a * ln_y2).exp();
        let theta = -x + big_a * yk;
        let dist = theta * theta + ya;
        let db = (b * dist.ln()).exp();
        // yk/y2 = [(δ−1)²]^{k−1}
        let inner = big_a * theta * (2.0 / beta) * yk / y2 + 2.0 * a * ya / y2;
        let dist_d = y * inner;
        let dist_dd = inner
            + 4.0 * a * (a - 1.0) * ya / y2
            + 2.0 * big_a * big_a / (beta * beta) * yk * yk / y2
            + big_a * theta * (4.0 / beta) * (k - 1.0) * yk / y2;
        let db1 = b * db / dist;
        let db2 = (b - 1.0) * db1 / dist;
        let pd = db1 * dist_d;
        let pdd = db1 * dist_dd + db2 * dist_d * dist_d;
        let pt = -2.0 * theta * db1;
        let ptt = 2.0 * db1 + 4.0 * theta * theta * db2;
        let pdt = -big_a * (2.0 / beta) * db1 * yk / y - 2.0 * theta * db2 * dist_d;
        let qd = -2.0 * big_c * y;
        let qdd = 2.0 * big_c * (2.0 * big_c * y2 - 1.0);
        let qt = -2.0 * big_d * x;
        let qtt = 2.0 * big_d * (2.0 * big_d * x * x - 1.0);
        let m = n * psi * delta;
        out.f += m * db;
        out.d += m * (db * (1.0 + delta * qd) + pd * delta);
        out.dd += m * delta * (db * (2.0 * qd + delta * qdd) + 2.0 * pd * (1.0 + delta * qd) + pdd * delta);
        out.t += m * tau * (pt + db * qt);
        out.tt += m * tau * tau * (ptt + 2.0 * pt * qt + db * qtt);
        out.dt += m
            * tau
            * (db * qt * (1.0 + delta * qd) + delta * pd * qt + pt * (1.0 + delta * qd) + pdt * delta);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fluid::real_fluid::catalogue;

    /// Every derivative against differences of the next lower one, in every fluid.
    #[test]
    fn derivatives_are_those_of_the_function() {
        for fluid in catalogue() {
            let model = &fluid.model.residual;
            let at = |tau: f64, delta: f64| model.values::<{ order::FULL }>(&model.isotherm(tau), delta);
            for (tau, delta) in [(0.8, 0.4), (1.1, 1.6), (1.3, 2.4), (1.02, 0.97), (0.6, 1.3), (1.6, 0.01)] {
                let h = 1e-5;
                let v = at(tau, delta);
                let along = |y: fn(&Values) -> f64| {
                    (y(&at(tau, delta * (1.0 + h))) - y(&at(tau, delta * (1.0 - h)))) / (2.0 * h)
                };
                let across = |y: fn(&Values) -> f64| {
                    (y(&at(tau * (1.0 + h), delta)) - y(&at(tau * (1.0 - h), delta))) / (2.0 * h)
                };
                for (what, difference, value) in [
                    ("d", along(|v| v.f), v.d),
                    ("dd", along(|v| v.d), v.d + v.dd),
                    ("t", across(|v| v.f), v.t),
                    ("tt", across(|v| v.t), v.t + v.tt),
                    ("dt", across(|v| v.d), v.dt),
                    ("dt", along(|v| v.t), v.dt),
                ] {
                    let scale = 1.0 + value.abs();
                    let error = (difference - value).abs() / scale;
                    assert!(error < 1e-5, "{} {what} at {tau} {delta}: {error:e}", fluid.name());
                }
                if model.is_analytic() {
                    let third = model.values::<{ order::THIRD }>(&model.isotherm(tau), delta);
                    let error =
                        (along(|v| v.dd) - (2.0 * third.dd + third.ddd)).abs() / (1.0 + third.ddd.abs());
                    assert!(error < 1e-5, "{} ddd at {tau} {delta}: {error:e}", fluid.name());
                    assert!(third.f == v.f && third.d == v.d && third.dd == v.dd);
                }
            }
        }
    }
}
