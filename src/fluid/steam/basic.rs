//! Basic equations of the one-phase regions: the specific Gibbs function g(p, T) in regions 1, 2
//! and 5 and the specific Helmholtz function f(ρ, T) in region 3, with analytic derivatives.
//!
//! Source: IAPWS R7-97(2012), eqs. (7), (15) to (17), (28), (32) to (34).

use super::tables::{
    REGION_1, REGION_2_IDEAL, REGION_2_RESIDUAL, REGION_3, REGION_3_LOG, REGION_5_IDEAL, REGION_5_RESIDUAL,
    Row,
};

/// Specific gas constant of the formulation, J/(kg K) (R7-97, eq. (1)).
pub(super) const R: f64 = 461.526;
/// Critical temperature, K (R7-97, eq. (2)).
pub(super) const CRITICAL_TEMPERATURE: f64 = 647.096;
/// Critical pressure, Pa (R7-97, eq. (3)).
pub(super) const CRITICAL_PRESSURE: f64 = 22.064e6;
/// Critical density, kg/m³ (R7-97, eq. (4)).
pub(super) const CRITICAL_DENSITY: f64 = 322.0;

/// The smallest (∂p/∂ρ)T over R T that is divided by. It keeps cp and the compressibility finite
/// at the critical point itself, where they have no finite value.
const LEAST_STIFFNESS: f64 = 1e-12;

/// One-phase properties at a point, SI units.
#[derive(Clone, Copy, Debug)]
pub(super) struct Point {
    pub t: f64,
    pub p: f64,
    pub v: f64,
    pub h: f64,
    pub s: f64,
    pub cp: f64,
    /// (∂v/∂T)p
    pub v_t: f64,
    /// (∂v/∂p)T
    pub v_p: f64,
}

impl Point {
    /// The same state a small way along the isobar, to first order. For steps so short that the
    /// second order is below the rounding error.
    pub fn shifted(self, dt: f64) -> Point {
        Point {
            t: self.t + dt,
            v: self.v + self.v_t * dt,
            h: self.h + self.cp * dt,
            s: self.s + self.cp / self.t * dt,
            ..self
        }
    }
}

/// The regions whose basic equation is g(p, T).
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Region {
    One,
    Two,
    Five,
}

impl Region {
    /// Properties at `p` (Pa) and `t` (K) by this region's equation, in its range or not.
    #[inline]
    pub fn at(self, p: f64, t: f64) -> Point {
        match self {
            Region::One => region_1(p, t),
            Region::Two => region_2(p, t),
            Region::Five => region_5(p, t),
        }
    }
}

/// Slots of a table of powers, a power of two: an index is masked, so that it cannot be out of
/// bounds and is not checked.
const SLOTS: usize = 64;
type Powers = [f64; SLOTS];

/// One term n x^i y^j with the slots of its powers.
#[derive(Clone, Copy)]
pub(super) struct Term {
    n: f64,
    i: f64,
    j: f64,
    at_x: u8,
    at_y: u8,
}

/// A sum Σ n x^i y^j over rows of the release.
#[derive(Clone, Copy)]
pub(super) struct Terms<const N: usize> {
    terms: [Term; N],
    x: Chain,
    y: Chain,
}

impl<const N: usize> Terms<N> {
    /// The power zero of x stands in slot `zero_x`, that of y in slot `zero_y`.
    pub(super) const fn of(rows: &[Row; N], zero_x: i8, zero_y: i8) -> Terms<N> {
        let mut terms = [Term { n: 0.0, i: 0.0, j: 0.0, at_x: 0, at_y: 0 }; N];
        let (mut needed_x, mut needed_y) = ([false; SLOTS], [false; SLOTS]);
        let mut k = 0;
        while k < N {
            let (i, j, n) = rows[k];
            assert!(i + zero_x >= 0 && j + zero_y >= 0, "a power lies below the table");
            assert!((i + zero_x) < SLOTS as i8 && (j + zero_y) < SLOTS as i8, "a power lies above the table");
            let (at_x, at_y) = ((i + zero_x) as u8, (j + zero_y) as u8);
            needed_x[at_x as usize] = true;
            needed_y[at_y as usize] = true;
            terms[k] = Term { n, i: i as f64, j: j as f64, at_x, at_y };
            k += 1;
        }
        Terms { terms, x: Chain::of(needed_x, zero_x as usize), y: Chain::of(needed_y, zero_y as usize) }
    }

    /// The sum.
    #[inline(always)]
    pub(super) fn sum(&self, x: f64, y: f64) -> f64 {
        let (x, y) = (self.x.powers(x), self.y.powers(y));
        self.terms.iter().map(|t| t.of(&x, &y)).sum()
    }

    /// The sum with its derivatives.
    #[inline(always)]
    fn sums(&self, x: f64, y: f64) -> Sums {
        let (x, y) = (self.x.powers(x), self.y.powers(y));
        let mut out = Sums::default();
        for t in &self.terms {
            let f = t.of(&x, &y);
            let fx = t.i * f;
            let fy = t.j * f;
            out.f += f;
            out.x += fx;
            out.xx += (t.i - 1.0) * fx;
            out.y += fy;
            out.yy += (t.j - 1.0) * fy;
            out.xy += t.i * fy;
        }
        out
    }
}

impl Term {
    #[inline(always)]
    fn of(&self, x: &Powers, y: &Powers) -> f64 {
        self.n * x[usize::from(self.at_x) & (SLOTS - 1)] * y[usize::from(self.at_y) & (SLOTS - 1)]
    }
}

/// How the powers of one variable that some terms need are made: each is the product of two of half
/// its exponent, so that the chain of dependent products stays short.
#[derive(Clone, Copy)]
struct Chain {
    /// The slot of the power zero.
    zero: usize,
    /// Whether powers below zero are needed.
    falls: bool,
    /// Slots of a product and of its two factors, in order.
    steps: [[u8; 3]; SLOTS],
    count: usize,
}

impl Chain {
    /// The power zero stands in slot `zero`.
    const fn of(mut needed: [bool; SLOTS], zero: usize) -> Chain {
        let mut out = Chain { zero, falls: false, steps: [[0; 3]; SLOTS], count: 0 };
        let mut n = SLOTS - 1;
        while n >= 2 {
            let (half, rest) = (n / 2, n - n / 2);
            if zero + n < SLOTS && needed[zero + n] {
                needed[zero + half] = true;
                needed[zero + rest] = true;
            }
            if n <= zero && needed[zero - n] {
                needed[zero - half] = true;
                needed[zero - rest] = true;
            }
            n -= 1;
        }
        out.falls = zero >= 1 && needed[zero - 1];
        n = 2;
        while n < SLOTS {
            let (half, rest) = (n / 2, n - n / 2);
            if zero + n < SLOTS && needed[zero + n] {
                out.steps[out.count] = [(zero + n) as u8, (zero + half) as u8, (zero + rest) as u8];
                out.count += 1;
            }
            if n <= zero && needed[zero - n] {
                out.steps[out.count] = [(zero - n) as u8, (zero - half) as u8, (zero - rest) as u8];
                out.count += 1;
            }
            n += 1;
        }
        out
    }

    /// The powers of `x`, each in its slot.
    #[inline(always)]
    fn powers(&self, x: f64) -> Powers {
        let mut out = [0.0; SLOTS];
        out[self.zero & (SLOTS - 1)] = 1.0;
        out[(self.zero + 1) & (SLOTS - 1)] = x;
        if self.falls {
            out[self.zero.wrapping_sub(1) & (SLOTS - 1)] = 1.0 / x;
        }
        for &[product, a, b] in &self.steps[..self.count] {
            out[usize::from(product) & (SLOTS - 1)] =
                out[usize::from(a) & (SLOTS - 1)] * out[usize::from(b) & (SLOTS - 1)];
        }
        out
    }
}

/// A sum F = Σ n x^i y^j and its derivatives, each multiplied by the powers of x and y that it
/// lacks: `x` = x F_x, `xx` = x² F_xx, `xy` = x y F_xy …
#[derive(Clone, Copy, Default)]
struct Sums {
    f: f64,
    x: f64,
    xx: f64,
    y: f64,
    yy: f64,
    xy: f64,
}

/// Region 1, eq. (7).
fn region_1(p: f64, t: f64) -> Point {
    const TERMS: Terms<34> = Terms::of(&REGION_1, 0, 41);
    const REDUCING_PRESSURE: f64 = 16.53e6;
    let tau = 1386.0 / t;
    let x = 7.1 - p / REDUCING_PRESSURE;
    let y = tau - 1.222;
    let g = TERMS.sums(x, y);
    let g_pi = -g.x / x;
    let g_pi_pi = g.xx / (x * x);
    let g_tau = g.y / y;
    let g_tau_tau = g.yy / (y * y);
    let g_pi_tau = -g.xy / (x * y);
    Point {
        t,
        p,
        v: R * t / REDUCING_PRESSURE * g_pi,
        h: R * 1386.0 * g_tau,
        s: R * (tau * g_tau - g.f),
        cp: -R * tau * tau * g_tau_tau,
        v_t: R / REDUCING_PRESSURE * (g_pi - tau * g_pi_tau),
        v_p: R * t / (REDUCING_PRESSURE * REDUCING_PRESSURE) * g_pi_pi,
    }
}

/// Region 2, eqs. (15) to (17).
fn region_2(p: f64, t: f64) -> Point {
    const IDEAL: Terms<9> = Terms::of(&REGION_2_IDEAL, 0, 5);
    const TERMS: Terms<43> = Terms::of(&REGION_2_RESIDUAL, 0, 0);
    let pi = p * 1e-6;
    let tau = 540.0 / t;
    let y = tau - 0.5;
    // The ideal-gas part has τ alone.
    let o = IDEAL.sums(1.0, tau);
    let r = TERMS.sums(pi, y);
    // τ/y carries the residual's derivatives over from y = τ − 0.5 to τ.
    let ratio = tau / y;
    let tau_g_tau = o.y + r.y * ratio;
    from_reduced(
        p,
        t,
        o.f + pi.ln() + r.f,
        tau_g_tau,
        o.yy + r.yy * ratio * ratio,
        Pressured { first: r.x, second: r.xx, mixed: r.xy * ratio },
    )
}

/// Region 5, eqs. (32) to (34).
fn region_5(p: f64, t: f64) -> Point {
    const IDEAL: Terms<6> = Terms::of(&REGION_5_IDEAL, 0, 3);
    const TERMS: Terms<6> = Terms::of(&REGION_5_RESIDUAL, 0, 3);
    let pi = p * 1e-6;
    let tau = 1000.0 / t;
    // The ideal-gas part has τ alone.
    let o = IDEAL.sums(1.0, tau);
    let r = TERMS.sums(pi, tau);
    from_reduced(
        p,
        t,
        o.f + pi.ln() + r.f,
        o.y + r.y,
        o.yy + r.yy,
        Pressured { first: r.x, second: r.xx, mixed: r.xy },
    )
}

/// π γr_π, π² γr_ππ and π τ γr_πτ of the residual part of a gas equation.
struct Pressured {
    first: f64,
    second: f64,
    mixed: f64,
}

/// A gas state from γ, τ γ_τ, τ² γ_ττ and the residual's pressure derivatives.
#[inline(always)]
fn from_reduced(p: f64, t: f64, g: f64, tau_g_tau: f64, tau2_g_tau_tau: f64, r: Pressured) -> Point {
    Point {
        t,
        p,
        v: R * t / p * (1.0 + r.first),
        h: R * t * tau_g_tau,
        s: R * (tau_g_tau - g),
        cp: -R * tau2_g_tau_tau,
        v_t: R / p * (1.0 + r.first - r.mixed),
        v_p: R * t / (p * p) * (r.second - 1.0),
    }
}

/// A state of region 3 at a density and a temperature, with the derivatives that its own
/// variables give.
#[derive(Clone, Copy, Debug)]
pub(super) struct Dense {
    pub rho: f64,
    pub t: f64,
    pub p: f64,
    pub h: f64,
    pub s: f64,
    pub cv: f64,
    /// (∂p/∂ρ)T
    pub p_rho: f64,
    /// (∂p/∂T)ρ
    pub p_t: f64,
}

const TERMS_3: Terms<39> = Terms::of(&REGION_3, 0, 0);

/// Region 3, eq. (28), at `rho` (kg/m³) and `t` (K).
pub(super) fn region_3(rho: f64, t: f64) -> Dense {
    let delta = rho / CRITICAL_DENSITY;
    let tau = CRITICAL_TEMPERATURE / t;
    let f = TERMS_3.sums(delta, tau);
    let first = REGION_3_LOG + f.x;
    let second = f.xx - REGION_3_LOG;
    Dense {
        rho,
        t,
        p: rho * R * t * first,
        h: R * t * (f.y + first),
        s: R * (f.y - f.f - REGION_3_LOG * delta.ln()),
        cv: -R * f.yy,
        p_rho: R * t * (2.0 * first + second),
        p_t: rho * R * (first - f.xy),
    }
}

impl Dense {
    /// The state in the variables (p, T), at the pressure `p` for which the density was sought.
    pub fn point(&self, p: f64) -> Point {
        let p_rho = self.p_rho.max(LEAST_STIFFNESS * R * self.t);
        let rho2 = self.rho * self.rho;
        let v_t = self.p_t / (p_rho * rho2);
        Point {
            t: self.t,
            p,
            v: 1.0 / self.rho,
            h: self.h,
            s: self.s,
            cp: self.cv + self.t * self.p_t * v_t,
            v_t,
            v_p: -1.0 / (p_rho * rho2),
        }
    }
}

/// Which root of p(ρ) = p is wanted.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Side {
    /// The largest, liquid.
    Dense,
    /// The smallest, vapour.
    Light,
    /// The only one, at or above the critical temperature.
    Only,
}

/// Bounds that hold every density of region 3, kg/m³: 113 (T = 623.15 K on the boundary to
/// region 2) to 763 (T = 623.15 K, 100 MPa), with some room.
const LEAST_DENSITY: f64 = 100.0;
const GREATEST_DENSITY: f64 = 800.0;

/// Saturated densities of region 3: ρ/322 − 1 = Σ c_k u^k, k = 1 … 5, u = √(1 − T/647.096), for
/// liquid and for vapour. Fitted here to the densities of equal pressure and Gibbs function of eq.
/// (28), to 0.5 kg/m³. They only bound and start the iteration.
const SATURATED_LIQUID: [f64; 5] = [7.6581, -57.2224, 427.522, -1694.49, 2682.07];
const SATURATED_VAPOUR: [f64; 5] = [-7.9695, 69.2976, -492.596, 1897.92, -2927.53];
/// The part of the way from the critical to the saturated density where the bracket ends: outside
/// the stability limit, which lies at 1/√3 near the critical point and nearer to it elsewhere.
const INNER_END: f64 = 0.65;

fn saturated_difference(coefficients: &[f64; 5], t: f64) -> f64 {
    let u = (1.0 - t / CRITICAL_TEMPERATURE).max(0.0).sqrt();
    CRITICAL_DENSITY * u * coefficients.iter().rev().fold(0.0, |sum, c| sum * u + c)
}

/// The density of region 3 at `p` (Pa) and `t` (K) on one side, kg/m³.
///
/// Newton's method on p(ρ), which is a polynomial in ρ at fixed T, kept in a bracket on the stable
/// side of the isotherm. Where the isotherm does not reach `p` there, the bracket's inner end is the
/// answer: that happens within 1e-4 K of the critical point alone, where the saturation equation and
/// eq. (28) differ by more (0.01 Pa) than the isotherm's loop is high.
pub(super) fn density(p: f64, t: f64, side: Side) -> f64 {
    let y = TERMS_3.y.powers(CRITICAL_TEMPERATURE / t);
    let mut polynomial = [0.0; 16];
    for term in &TERMS_3.terms {
        polynomial[usize::from(term.at_x) & 15] += term.n * term.i * y[usize::from(term.at_y) & (SLOTS - 1)];
    }
    let rt = R * t;
    let pressure = |rho: f64| {
        let delta = rho / CRITICAL_DENSITY;
        // Horner's scheme for F = Σ a δ^k and δ dF/dδ.
        let (mut value, mut slope) = (0.0, 0.0);
        for a in polynomial.iter().take(12).rev() {
            slope = slope * delta + value;
            value = value * delta + a;
        }
        let z = REGION_3_LOG + value;
        (rho * rt * z, rt * (z + slope * delta))
    };
    let (mut lo, mut hi, mut rho) = match side {
        Side::Dense => {
            let inner = CRITICAL_DENSITY + INNER_END * saturated_difference(&SATURATED_LIQUID, t);
            // From above, where p(ρ) is convex, each step stays above the root.
            (inner, GREATEST_DENSITY, GREATEST_DENSITY)
        }
        Side::Light => {
            let difference = saturated_difference(&SATURATED_VAPOUR, t);
            (LEAST_DENSITY, CRITICAL_DENSITY + INNER_END * difference, CRITICAL_DENSITY + difference)
        }
        Side::Only if pressure(CRITICAL_DENSITY).0 > p => (LEAST_DENSITY, CRITICAL_DENSITY, p / rt),
        Side::Only => (CRITICAL_DENSITY, GREATEST_DENSITY, GREATEST_DENSITY),
    };
    rho = rho.clamp(lo, hi);
    for _ in 0..100 {
        let (value, slope) = pressure(rho);
        let excess = value - p;
        if excess > 0.0 {
            hi = rho
        } else {
            lo = rho
        }
        let next = rho - excess / slope;
        let next = if slope > 0.0 && next > lo && next < hi { next } else { 0.5 * (lo + hi) };
        let step = next - rho;
        rho = next;
        if step.abs() <= 1e-14 * rho || hi - lo <= 1e-14 * rho {
            break;
        }
    }
    rho
}

#[cfg(test)]
mod tests {
    use super::*;

    /// R7-97(2012), Table 33: (ρ, T) and p (MPa), h, u (kJ/kg), s, cp (kJ/(kg K)), w (m/s).
    #[test]
    fn region_3_to_every_printed_digit() {
        for (rho, t, printed) in [
            (500.0, 650.0, [25.5837018, 1863.43019, 1812.26279, 4.05427273, 13.8935717, 502.005554]),
            (200.0, 650.0, [22.2930643, 2375.12401, 2263.65868, 4.85438792, 44.6579342, 383.444594]),
            (500.0, 750.0, [78.3095639, 2258.68845, 2102.06932, 4.46971906, 6.34165359, 760.696041]),
        ] {
            let state = region_3(rho, t);
            let point = state.point(state.p);
            let w2 = state.p_rho + t * state.p_t * state.p_t / (rho * rho * state.cv);
            let found = [
                state.p / 1e6,
                state.h / 1e3,
                (state.h - state.p / rho) / 1e3,
                state.s / 1e3,
                point.cp / 1e3,
                w2.sqrt(),
            ];
            for (found, printed) in found.into_iter().zip(printed) {
                let ninth: f64 = 10f64.powf(f64::log10(printed).floor() - 8.0);
                assert!((found - printed).abs() <= 0.5001 * ninth, "{rho} {t}: {found} {printed}");
            }
            let side = if t >= CRITICAL_TEMPERATURE { Side::Only } else { Side::Dense };
            assert!((density(state.p, t, side) / rho - 1.0).abs() < 1e-12);
        }
    }

    #[test]
    fn powers_are_those_of_the_library() {
        const TERMS: Terms<34> = Terms::of(&REGION_1, 0, 41);
        let table = TERMS.y.powers(1.7);
        for (_, k, _) in REGION_1 {
            let found = table[(41 + k) as usize];
            assert!((found / 1.7f64.powi(i32::from(k)) - 1.0).abs() < 1e-14, "{k}");
        }
    }

    /// Every root is on its own side of the critical density, on a stable branch, at the pressure
    /// asked for.
    #[test]
    fn densities_lie_on_the_side_asked_for() {
        for t in [623.2, 630.0, 640.0, 646.0, 647.0, 647.09] {
            let (p, _) = super::super::saturation::pressure(t);
            for (side, part) in
                [(Side::Dense, 1.0), (Side::Dense, 1.2), (Side::Light, 1.0), (Side::Light, 0.999)]
            {
                let rho = density(part * p, t, side);
                let state = region_3(rho, t);
                assert_eq!(rho > CRITICAL_DENSITY, side == Side::Dense, "{t} {side:?}");
                assert!(state.p_rho > 0.0, "{t} {side:?}");
                assert!((state.p / (part * p) - 1.0).abs() < 1e-11, "{t} {side:?}");
            }
        }
    }
}
