//! Thermodynamic properties from the Helmholtz energy at one temperature and density.

use super::equation::Equation;
use super::ideal::Ideal;
use super::residual::{Isotherm, Residual, Values, order};
use crate::fluid::{Phase, State};

/// The compiled equation with its reducing constants, all per kilogram.
#[derive(Debug)]
pub(super) struct Helmholtz {
    pub residual: Residual,
    pub ideal: Ideal,
    /// Reducing temperature, K.
    pub t_r: f64,
    /// Reducing density, kg/m³.
    pub rho_r: f64,
    /// Specific gas constant, J/(kg K).
    pub r: f64,
}

/// One point of the surface.
#[derive(Clone, Copy, Debug)]
pub(super) struct Point {
    /// K
    pub t: f64,
    /// kg/m³
    pub rho: f64,
    /// Pa
    pub p: f64,
    /// J/kg
    pub h: f64,
    /// J/(kg K); zero where the ideal part was evaluated without its value
    pub s: f64,
    /// J/(kg K)
    pub cv: f64,
    /// (∂p/∂ρ)_T, Pa m³/kg
    pub p_rho: f64,
    /// (∂p/∂T)_ρ, Pa/K
    pub p_t: f64,
}

impl Helmholtz {
    /// Compiles an equation, or says what in it cannot be.
    pub fn new(equation: &Equation) -> Result<Helmholtz, String> {
        Ok(Helmholtz {
            residual: Residual::new(&equation.residual)?,
            ideal: Ideal::new(&equation.ideal, equation.reducing.temperature),
            t_r: equation.reducing.temperature,
            rho_r: equation.reducing.molar_density * equation.molar_mass,
            r: equation.gas_constant / equation.molar_mass,
        })
    }

    /// The isotherm at `t` (K).
    pub fn isotherm(&self, t: f64) -> Isotherm {
        self.residual.isotherm(self.t_r / t)
    }

    /// The ideal gas at `t` (K) and `p` (Pa): h in J/kg, s and cp in J/(kg K).
    pub fn ideal_gas(&self, t: f64, p: f64) -> (f64, f64, f64) {
        let ideal = self.ideal.values(self.t_r / t);
        let delta = p / (self.r * t * self.rho_r);
        let s = self.r * (ideal.first - ideal.value - delta.ln());
        (self.r * t * (1.0 + ideal.first), s, self.r * (1.0 - ideal.second))
    }

    /// All properties on an isotherm at reduced density `delta`.
    pub fn point(&self, iso: &Isotherm, delta: f64) -> Point {
        self.evaluate::<true>(iso, delta)
    }

    /// The same without the entropy, a little faster.
    pub fn point_without_entropy(&self, iso: &Isotherm, delta: f64) -> Point {
        self.evaluate::<false>(iso, delta)
    }

    #[inline(always)]
    fn evaluate<const ENTROPY: bool>(&self, iso: &Isotherm, delta: f64) -> Point {
        let Values { f, d, dd, t: ft, tt, dt, .. } = self.residual.values::<{ order::FULL }>(iso, delta);
        let ideal = if ENTROPY { self.ideal.values(iso.tau) } else { self.ideal.derivatives(iso.tau) };
        let t = self.t_r / iso.tau;
        let rho = self.rho_r * delta;
        let rt = self.r * t;
        let u = ideal.first + ft;
        Point {
            t,
            rho,
            p: rho * rt * (1.0 + d),
            h: rt * (1.0 + u + d),
            s: if ENTROPY { self.r * (u - ideal.value - delta.ln() - f) } else { 0.0 },
            cv: -self.r * (ideal.second + tt),
            p_rho: rt * (1.0 + 2.0 * d + dd),
            p_t: rho * self.r * (1.0 + d - dt),
        }
    }

    /// The reduced density at which the isotherm has the pressure `p` (Pa), by Newton's method
    /// from `guess` within the bracket `low`..`high` (`high` may be infinite); `None` where the
    /// bracket holds no such point.
    pub fn density(&self, iso: &Isotherm, p: f64, guess: f64, low: f64, high: f64) -> Option<f64> {
        let target = p / (self.rho_r * self.r * (self.t_r / iso.tau));
        let (mut low, mut high) = (low, high);
        let mut x = guess.clamp(low, high);
        let mut last = f64::INFINITY;
        // Least |y|, its density, and what rounding makes of y there.
        let mut best = (f64::INFINITY, x, 0.0);
        for _ in 0..80 {
            let v = self.residual.values::<{ order::ALONG }>(iso, x);
            let y = x * (1.0 + v.d) - target;
            let slope = 1.0 + 2.0 * v.d + v.dd;
            if y == 0.0 {
                return Some(x);
            }
            if y.abs() < best.0 {
                best = (y.abs(), x, slope.abs() * x * 1e-13);
            }
            if y < 0.0 {
                low = x;
            } else {
                high = x;
            }
            let mut next = x - y / slope;
            let regular = slope > 0.0 && next > low && next < high && next.is_finite();
            if regular {
                // Far steps into the dense side overshoot a steep isotherm.
                next = next.min(1.25 * x + 0.05);
                let step = (next - x).abs() / x;
                // Newton's error after this step is about the square of it; rounding stops it
                // where the isotherm is flat.
                if step < 1e-9 || (step < 1e-5 && step >= 0.5 * last) {
                    return Some(next);
                }
                last = step;
            } else {
                last = f64::INFINITY;
                next = if high.is_infinite() {
                    1.1 * x
                } else if low <= 0.0 {
                    0.5 * high
                } else if high > 4.0 * low {
                    (low * high).sqrt()
                } else {
                    0.5 * (low + high)
                };
                if high.is_finite() && high - low <= 4.0 * f64::EPSILON * high {
                    break;
                }
            }
            x = next;
            if x > 20.0 {
                break;
            }
        }
        // On a flat isotherm rounding keeps the steps from shrinking though the pressure is met; a
        // bracket may also have closed on an end that is no root.
        (best.0 <= 1e-10 * target + best.2).then_some(best.1)
    }

    /// The isotherm's point where (∂p/∂ρ)_T and (∂²p/∂ρ²)_T vanish: (T in K, δ).
    pub fn critical_point(&self, t: f64, delta: f64) -> Option<(f64, f64)> {
        if !self.residual.is_analytic() {
            return Some((t, delta));
        }
        let conditions = |tau: f64, ln_delta: f64| {
            let v = self.residual.values::<{ order::THIRD }>(&self.residual.isotherm(tau), ln_delta.exp());
            [1.0 + 2.0 * v.d + v.dd, 2.0 * v.d + 4.0 * v.dd + v.ddd]
        };
        let (mut tau, mut x) = (self.t_r / t, delta.ln());
        for _ in 0..40 {
            let h = 1e-6;
            let f = conditions(tau, x);
            let (fp, fm) = (conditions(tau + h, x), conditions(tau - h, x));
            let (gp, gm) = (conditions(tau, x + h), conditions(tau, x - h));
            let a = [[fp[0] - fm[0], gp[0] - gm[0]], [fp[1] - fm[1], gp[1] - gm[1]]]
                .map(|r| r.map(|d| d / (2.0 * h)));
            let det = a[0][0] * a[1][1] - a[0][1] * a[1][0];
            let step = [(f[0] * a[1][1] - f[1] * a[0][1]) / det, (a[0][0] * f[1] - a[1][0] * f[0]) / det];
            if !(step[0].is_finite() && step[1].is_finite()) {
                return None;
            }
            tau -= step[0].clamp(-0.01, 0.01);
            x -= step[1].clamp(-0.05, 0.05);
            if step[0].abs() < 1e-14 && step[1].abs() < 1e-10 {
                break;
            }
        }
        let (tc, dc) = (self.t_r / tau, x.exp());
        // A fit's own critical point lies close to the stated one.
        ((tc / t - 1.0).abs() < 0.02 && (dc / delta - 1.0).abs() < 0.3).then_some((tc, dc))
    }
}

impl Point {
    /// ρ² (∂p/∂ρ)_T, kept above zero: at the critical point itself the derivatives at constant
    /// pressure are infinite, and rounding may turn their sign.
    fn stiffness(&self) -> f64 {
        self.rho * self.rho * self.p_rho.max(1e-13 * self.p / self.rho)
    }

    /// J/(kg K)
    pub fn cp(&self) -> f64 {
        self.cv + self.t * self.p_t * self.v_t()
    }

    /// (∂v/∂T)_p, m³/(kg K)
    pub fn v_t(&self) -> f64 {
        self.p_t / self.stiffness()
    }

    /// (∂v/∂p)_T, m³/(kg Pa)
    pub fn v_p(&self) -> f64 {
        -1.0 / self.stiffness()
    }

    /// (∂h/∂T)_ρ, J/(kg K)
    pub fn h_t(&self) -> f64 {
        self.cv + self.p_t / self.rho
    }

    /// (∂h/∂ρ)_T, J m³/kg²
    pub fn h_rho(&self) -> f64 {
        (self.p_rho - self.t * self.p_t / self.rho) / self.rho
    }

    /// (∂s/∂ρ)_T, J m³/(kg² K)
    pub fn s_rho(&self) -> f64 {
        -self.p_t / (self.rho * self.rho)
    }

    /// The one-phase state.
    pub fn state(&self, phase: Phase) -> State {
        let (cp, v_t, v_p) = (self.cp(), self.v_t(), self.v_p());
        State::one_phase(self.t, self.p, self.h, self.s, 1.0 / self.rho, phase, cp, v_t, v_p)
    }
}
