//! Two-phase states: the ends of the saturation line at a pressure, and what lies between them.

use super::RealFluid;
use super::flash::{SLACK, finite, out_of_range};
use super::point::Point;
use super::saturation::{Curve, Saturation};
use crate::fluid::{Phase, PropertyError, State};

/// One end of a two-phase state with its derivatives along the saturation line.
pub(super) struct Edge {
    pub t: f64,
    pub t_p: f64,
    pub h: f64,
    pub h_p: f64,
    pub s: f64,
    pub s_p: f64,
    pub v: f64,
    pub v_p: f64,
}

impl RealFluid {
    /// The ends of the two-phase region at `p`, which must lie on both lines.
    pub(super) fn edges(&self, sat: &Saturation, p: f64) -> Result<(Edge, Edge), PropertyError> {
        if sat.is_blend {
            return Ok((self.blend_edge(sat, p, Curve::LnBubble)?, self.blend_edge(sat, p, Curve::LnDew)?));
        }
        // At the critical point the slopes along the line are infinite; there they are those at x = 1e-6.
        let (x, line) = sat.line_at_pressure(p);
        let x_p = 1.0 / (p * line.slope(Curve::LnBubble));
        let (t, t_p) = (sat.temperature(x), -2.0 * x.max(1e-6) * sat.t_c * x_p);
        let edge = |h: Curve, s: Curve, delta: f64, delta_x: f64| {
            let v = 1.0 / (delta * self.model.rho_r);
            Edge {
                t,
                t_p,
                h: line.value(h),
                h_p: line.slope(h) * x_p,
                s: line.value(s),
                s_p: line.slope(s) * x_p,
                v,
                v_p: -v * delta_x / delta * x_p,
            }
        };
        let liquid = line.value(Curve::DeltaLiquid);
        let vapour = line.value(Curve::LnDeltaVapour).exp();
        Ok((
            edge(Curve::EnthalpyLiquid, Curve::EntropyLiquid, liquid, line.slope(Curve::DeltaLiquid)),
            edge(
                Curve::EnthalpyVapour,
                Curve::EntropyVapour,
                vapour,
                vapour * line.slope(Curve::LnDeltaVapour),
            ),
        ))
    }

    fn blend_edge(&self, sat: &Saturation, p: f64, line: Curve) -> Result<Edge, PropertyError> {
        let x = sat.x_of_pressure(line, p);
        let t = sat.temperature(x);
        let found = if line == Curve::LnBubble { self.liquid(sat, p, t) } else { self.vapour(sat, p, t) };
        let point = found.ok_or(PropertyError::NoConvergence)?;
        Ok(along(&point, sat.dt_dp(line, x)))
    }

    /// Whether `p` lies on both lines; the error names the limits.
    fn check_saturation_pressure(&self, sat: &Saturation, p: f64) -> Result<f64, PropertyError> {
        let min = sat.dew_min;
        if p < min * (1.0 - SLACK) || p > sat.p_c * (1.0 + SLACK) {
            return Err(out_of_range("saturation pressure", "Pa", p, min, sat.p_c));
        }
        Ok(p.clamp(min, sat.p_c))
    }

    pub(super) fn state_px(&self, p: f64, quality: f64) -> Result<State, PropertyError> {
        check_quality(quality)?;
        let (sat, _) = self.tables()?;
        let p = self.check_saturation_pressure(sat, p)?;
        self.wet(sat, p, |_, _| quality)
    }

    /// The two-phase state at `p` with the quality that `choose` makes of the two edges.
    pub(super) fn wet(
        &self,
        sat: &Saturation,
        p: f64,
        choose: impl Fn(&Edge, &Edge) -> f64,
    ) -> Result<State, PropertyError> {
        let (liquid, vapour) = self.edges(sat, p)?;
        let state = two_phase(p, choose(&liquid, &vapour), &liquid, &vapour)?;
        // A blend's bubble temperature may lie below the range where its dew temperature does not.
        self.check_temperature(state.temperature)?;
        Ok(state)
    }

    pub(super) fn state_tx(&self, t: f64, quality: f64) -> Result<State, PropertyError> {
        check_quality(quality)?;
        let (sat, _) = self.tables()?;
        if t < sat.t_min * (1.0 - SLACK) || t > sat.t_c * (1.0 + SLACK) {
            return Err(out_of_range("saturation temperature", "K", t, sat.t_min, sat.t_c));
        }
        let x = sat.x_of_temperature(t);
        let p = if sat.is_blend {
            self.blend_pressure(sat, sat.temperature(x), quality)
        } else {
            sat.at(Curve::LnBubble, x).exp()
        };
        let p = self.check_saturation_pressure(sat, p)?;
        let mut state = self.wet(sat, p, |_, _| quality)?;
        state.temperature = t;
        Ok(state)
    }

    /// The pressure at which (1 − x) T_bubble + x T_dew = `t`.
    fn blend_pressure(&self, sat: &Saturation, t: f64, quality: f64) -> f64 {
        let x = sat.x_of_temperature(t);
        let mut low = sat.at(Curve::LnDew, x).exp();
        let mut high = sat.at(Curve::LnBubble, x).exp();
        let mut p = low + (1.0 - quality) * (high - low);
        for _ in 0..60 {
            let b = sat.x_of_pressure(Curve::LnBubble, p);
            let d = sat.x_of_pressure(Curve::LnDew, p);
            let error = (1.0 - quality) * sat.temperature(b) + quality * sat.temperature(d) - t;
            if error > 0.0 {
                high = p
            } else {
                low = p
            }
            let slope =
                (1.0 - quality) * sat.dt_dp(Curve::LnBubble, b) + quality * sat.dt_dp(Curve::LnDew, d);
            let next = p - error / slope;
            let next = if next >= low && next <= high { next } else { 0.5 * (low + high) };
            let done = (next - p).abs() <= 1e-13 * p;
            p = next;
            if done {
                break;
            }
        }
        p
    }

    pub(super) fn saturation_line(&self, p: f64, quality: f64) -> Result<(f64, f64), PropertyError> {
        if !p.is_finite() || !quality.is_finite() {
            return Err(PropertyError::NotFinite);
        }
        let (sat, _) = self.tables()?;
        let line = if quality > 0.5 { Curve::LnDew } else { Curve::LnBubble };
        if p > sat.p_c * (1.0 + SLACK) {
            return Err(PropertyError::NoSaturation);
        }
        let min = if line == Curve::LnDew { sat.dew_min } else { sat.bubble_min };
        if p < min * (1.0 - SLACK) {
            return Err(out_of_range("saturation pressure", "Pa", p, min, sat.p_c));
        }
        let x = sat.x_of_pressure(line, p.clamp(min, sat.p_c));
        Ok((sat.temperature(x), sat.dt_dp(line, x)))
    }
}

fn check_quality(quality: f64) -> Result<(), PropertyError> {
    if (0.0..=1.0).contains(&quality) { Ok(()) } else { Err(out_of_range("quality", "1", quality, 0.0, 1.0)) }
}

/// A point's values with derivatives along a line of slope `t_p` = dT/dp.
fn along(point: &Point, t_p: f64) -> Edge {
    let v = 1.0 / point.rho;
    let (cp, v_t, v_p) = (point.cp(), point.v_t(), point.v_p());
    Edge {
        t: point.t,
        t_p,
        h: point.h,
        h_p: v - point.t * v_t + cp * t_p,
        s: point.s,
        s_p: -v_t + cp / point.t * t_p,
        v,
        v_p: v_p + v_t * t_p,
    }
}

/// The state between two edges, every property linear in quality at constant pressure.
fn two_phase(p: f64, quality: f64, l: &Edge, v: &Edge) -> Result<State, PropertyError> {
    let mix = |a: f64, b: f64| a + quality * (b - a);
    finite(State {
        temperature: mix(l.t, v.t),
        pressure: p,
        enthalpy: mix(l.h, v.h),
        entropy: mix(l.s, v.s),
        volume: mix(l.v, v.v),
        quality: Some(quality),
        phase: Phase::TwoPhase,
        gradient: [
            [mix(l.t_p, v.t_p), v.t - l.t, 0.0],
            [1.0, 0.0, 0.0],
            [mix(l.h_p, v.h_p), v.h - l.h, 0.0],
            [mix(l.s_p, v.s_p), v.s - l.s, 0.0],
            [mix(l.v_p, v.v_p), v.v - l.v, 0.0],
            [0.0, 1.0, 0.0],
        ],
    })
}
