//! States from pairs of coordinates.

use super::RealFluid;
use super::grid::{Grid, Target};
use super::point::Point;
use super::residual::Isotherm;
use super::saturation::{Curve, Saturation};
use crate::fluid::{Phase, PropertyError, State};

/// Lowest pressure that is taken, Pa: below it nothing is left to be called a fluid.
const P_MIN: f64 = 1e-6;
/// Slack at the ends of a range, relative, for states that come back from another pair.
pub(super) const SLACK: f64 = 1e-9;

/// Where one-phase iterations may move.
struct Region {
    t_low: f64,
    t_high: f64,
    /// Start: K and reduced density.
    start: (f64, f64),
    /// Which end, if any, lies on the saturation line rather than at the end of the range.
    edge: Option<Side>,
}

/// Side of the saturation line.
#[derive(Clone, Copy, PartialEq)]
enum Side {
    Liquid,
    Vapour,
}

pub(super) fn out_of_range(
    quantity: &'static str,
    unit: &'static str,
    value: f64,
    min: f64,
    max: f64,
) -> PropertyError {
    PropertyError::OutOfRange { quantity, unit, value, min, max }
}

impl Target {
    fn of(self, point: &Point) -> f64 {
        if self == Target::Enthalpy { point.h } else { point.s }
    }

    /// Derivatives with respect to T at constant ρ and to ρ at constant T.
    fn slopes(self, point: &Point) -> (f64, f64) {
        match self {
            Target::Enthalpy => (point.h_t(), point.h_rho()),
            Target::Entropy => (point.cv / point.t, point.s_rho()),
        }
    }

    /// Size against which a residual is small.
    fn scale(self, point: &Point, r: f64) -> f64 {
        if self == Target::Enthalpy { r * point.t } else { r }
    }

    fn range_error(self, value: f64, min: f64, max: f64) -> PropertyError {
        match self {
            Target::Enthalpy => out_of_range("enthalpy", "J/kg", value, min, max),
            Target::Entropy => out_of_range("entropy", "J/(kg K)", value, min, max),
        }
    }
}

impl RealFluid {
    fn check_pressure(&self, p: f64) -> Result<(), PropertyError> {
        let max = self.equation.range.pressure_max;
        if (P_MIN..=max * (1.0 + SLACK)).contains(&p) {
            Ok(())
        } else {
            Err(out_of_range("pressure", "Pa", p, P_MIN, max))
        }
    }

    pub(super) fn check_temperature(&self, t: f64) -> Result<(), PropertyError> {
        let range = self.equation.range;
        if t >= range.temperature_min * (1.0 - SLACK) && t <= range.temperature_max * (1.0 + SLACK) {
            Ok(())
        } else {
            Err(out_of_range("temperature", "K", t, range.temperature_min, range.temperature_max))
        }
    }

    /// Refuses the solid.
    fn check_melting(&self, p: f64, t: f64) -> Result<(), PropertyError> {
        if let Some(line) = &self.equation.melting
            && t < self.t_melt_max
        {
            let max = line.highest_pressure(t);
            if p > max {
                return Err(out_of_range("pressure, above the melting line,", "Pa", p, P_MIN, max));
            }
        }
        Ok(())
    }

    /// Lowest temperature of the fluid at `p`: the range's, or where it freezes.
    fn lowest_temperature(&self, p: f64) -> f64 {
        let low = self.equation.range.temperature_min;
        self.equation.melting.as_ref().map_or(low, |m| m.lowest_temperature(p, low, self.t_melt_max.max(low)))
    }

    fn phase(&self, sat: &Saturation, p: f64, t: f64, dense: bool) -> Phase {
        match (t > sat.t_c, p > sat.p_c) {
            (true, true) => Phase::Supercritical,
            (true, false) => Phase::Vapour,
            (false, true) => Phase::Liquid,
            (false, false) => {
                if dense {
                    Phase::Liquid
                } else {
                    Phase::Vapour
                }
            }
        }
    }

    /// Vapour density expected at `p` and `x` on the saturation line, from Z falling with p.
    fn vapour_guess(&self, sat: &Saturation, x: f64, t: f64, p: f64, dew: f64) -> f64 {
        let scale = self.model.rho_r * self.model.r * t;
        let z = dew / (scale * sat.at(Curve::LnDeltaVapour, x).exp());
        p / (scale * (1.0 + (z - 1.0) * p / dew))
    }

    /// Density expected above the critical temperature or pressure.
    fn outer_guess(&self, sat: &Saturation, grid: &Grid, p: f64, t: f64) -> f64 {
        if p >= sat.p_c {
            return grid.delta(p, t);
        }
        let scale = self.model.rho_r * self.model.r * t;
        let z = sat.p_c / (scale * grid.delta(sat.p_c, t));
        p / (scale * (1.0 + (z - 1.0) * p / sat.p_c))
    }

    /// Greatest reduced density of the vapour at `t` (K), whose saturated one is `edge`; rounding of
    /// the line must not shut the root out.
    fn most_density(&self, sat: &Saturation, t: f64, edge: f64) -> f64 {
        if t < sat.t_loop { edge * (1.0 + 1e-6) } else { f64::INFINITY }
    }

    /// The liquid below the critical point at `p` (Pa) and `t` (K).
    pub(super) fn liquid(&self, sat: &Saturation, p: f64, t: f64) -> Option<Point> {
        let iso = self.model.isotherm(t);
        let edge = sat.at(Curve::DeltaLiquid, sat.x_of_temperature(t));
        let found = self.model.density(&iso, p, edge, sat.least_density(t), f64::INFINITY);
        found.map(|delta| self.model.point(&iso, delta)).or_else(|| self.edge_point(sat, &iso, p, edge))
    }

    /// The vapour below the critical point at `p` (Pa) and `t` (K).
    pub(super) fn vapour(&self, sat: &Saturation, p: f64, t: f64) -> Option<Point> {
        let iso = self.model.isotherm(t);
        let x = sat.x_of_temperature(t);
        let dew = sat.at(Curve::LnDew, x).exp();
        let edge = sat.at(Curve::LnDeltaVapour, x).exp();
        let guess = self.vapour_guess(sat, x, t, p.min(dew), dew);
        let found = self.model.density(&iso, p, guess, 0.0, self.most_density(sat, t, edge));
        found.map(|delta| self.model.point(&iso, delta)).or_else(|| self.edge_point(sat, &iso, p, edge))
    }

    /// The saturated point itself where `p` is its pressure to rounding: next to the critical point
    /// the isotherm is so flat that no other density can be told from it. A blend's pressure lines
    /// may miss the loop of its equation there: then whatever density has that pressure.
    fn edge_point(&self, sat: &Saturation, iso: &Isotherm, p: f64, edge: f64) -> Option<Point> {
        if sat.is_blend {
            let delta = self.model.density(iso, p, edge, 0.0, f64::INFINITY)?;
            return Some(self.model.point(iso, delta));
        }
        let point = self.model.point(iso, edge);
        ((point.p / p - 1.0).abs() < 1e-6).then_some(point)
    }

    /// The stable one-phase point at (p, T); in a blend's two-phase gap the nearer edge.
    fn point_pt(
        &self,
        sat: &Saturation,
        grid: &Grid,
        p: f64,
        t: f64,
    ) -> Result<(Point, bool), PropertyError> {
        let (found, dense) = if t >= sat.t_c || p >= sat.p_c {
            let iso = self.model.isotherm(t);
            let guess = self.outer_guess(sat, grid, p, t);
            let found = self.model.density(&iso, p, guess, sat.least_density(t), f64::INFINITY);
            let point = found.map(|delta| self.model.point(&iso, delta));
            (point.or_else(|| self.edge_point(sat, &iso, p, sat.least_density(t))), t < sat.t_c)
        } else if p >= sat.at(Curve::LnBubble, sat.x_of_temperature(t)).exp() {
            (self.liquid(sat, p, t), true)
        } else {
            (self.vapour(sat, p, t), false)
        };
        found.map(|point| (point, dense)).ok_or(PropertyError::NoConvergence)
    }

    /// The state of a found one-phase point, with the coordinate that was asked for put exactly.
    fn one_phase(
        &self,
        sat: &Saturation,
        point: &Point,
        p: f64,
        dense: bool,
    ) -> Result<State, PropertyError> {
        let mut state = point.state(self.phase(sat, p, point.t, dense));
        state.pressure = p;
        finite(state)
    }

    pub(super) fn state_pt(&self, p: f64, t: f64) -> Result<State, PropertyError> {
        self.check_pressure(p)?;
        self.check_temperature(t)?;
        self.check_melting(p, t)?;
        let (sat, grid) = self.tables()?;
        if sat.is_blend && t < sat.t_c && p < sat.p_c {
            let x = sat.x_of_temperature(t);
            if p < sat.at(Curve::LnBubble, x).exp() && p > sat.at(Curve::LnDew, x).exp() {
                return self.wet(sat, p, |l, v| ((t - l.t) / (v.t - l.t)).clamp(0.0, 1.0));
            }
        }
        let (point, dense) = self.point_pt(sat, grid, p, t)?;
        let mut state = self.one_phase(sat, &point, p, dense)?;
        state.temperature = t;
        Ok(state)
    }

    /// (p, h) and (p, s).
    pub(super) fn state_py(&self, p: f64, target: Target, value: f64) -> Result<State, PropertyError> {
        self.check_pressure(p)?;
        let (sat, grid) = self.tables()?;
        let range = self.equation.range;
        let (t_min, t_max) = (range.temperature_min, range.temperature_max);
        if p >= sat.p_c {
            let start = grid.guess(p, target, value);
            let region = Region { t_low: t_min, t_high: t_max, start, edge: None };
            let point = self.solve_one_phase(sat, grid, p, target, value, &region)?;
            return self.finish(sat, &point, p, target, value, point.t < sat.t_c);
        }
        let (h_l, h_v) = match target {
            Target::Enthalpy => (Curve::EnthalpyLiquid, Curve::EnthalpyVapour),
            Target::Entropy => (Curve::EntropyLiquid, Curve::EntropyVapour),
        };
        let mut vapour_from = t_min;
        let mut edge = None;
        if p >= sat.dew_min {
            let xd = sat.x_of_pressure(Curve::LnDew, p);
            if value <= sat.at(h_v, xd) {
                let xb = if sat.is_blend { sat.x_of_pressure(Curve::LnBubble, p) } else { xd };
                if value >= sat.at(h_l, xb) {
                    return self.wet(sat, p, |liquid, vapour| {
                        let (a, b) = match target {
                            Target::Enthalpy => (liquid.h, vapour.h),
                            Target::Entropy => (liquid.s, vapour.s),
                        };
                        if b > a { ((value - a) / (b - a)).clamp(0.0, 1.0) } else { 0.0 }
                    });
                }
                let t_b = sat.temperature(xb);
                if t_b < t_min * (1.0 - SLACK) {
                    return Err(target.range_error(value, sat.at(h_l, xb), sat.at(h_v, xd)));
                }
                let region = Region {
                    t_low: t_min,
                    t_high: t_b,
                    start: (t_b, sat.at(Curve::DeltaLiquid, xb)),
                    edge: Some(Side::Liquid),
                };
                let point = self.solve_one_phase(sat, grid, p, target, value, &region)?;
                return self.finish(sat, &point, p, target, value, true);
            }
            vapour_from = sat.temperature(xd);
            edge = Some(Side::Vapour);
        }
        let start = self.vapour_start(sat, p, target, value, vapour_from, t_max);
        let region = Region { t_low: vapour_from, t_high: t_max, start, edge };
        let point = self.solve_one_phase(sat, grid, p, target, value, &region)?;
        self.finish(sat, &point, p, target, value, false)
    }

    /// Temperature and density expected of superheated vapour.
    fn vapour_start(
        &self,
        sat: &Saturation,
        p: f64,
        target: Target,
        value: f64,
        from: f64,
        t_max: f64,
    ) -> (f64, f64) {
        let model = &self.model;
        let scale = |t: f64| model.rho_r * model.r * t;
        let x = sat.x_of_temperature(from);
        let dew = sat.at(Curve::LnDew, x).exp();
        let delta = sat.at(Curve::LnDeltaVapour, x).exp();
        let departure = dew / (scale(from) * delta) - 1.0;
        let (h, s) = (sat.at(Curve::EnthalpyVapour, x), sat.at(Curve::EntropyVapour, x));
        let mut t = from;
        // At p < dew the gas is nearly ideal: h as on the dew line, s shifted by R ln(dew/p).
        let s = s + model.r * (dew / p).ln();
        for _ in 0..2 {
            let ideal = model.ideal.derivatives(model.t_r / (0.5 * (from + t)));
            // A real vapour's heat capacity exceeds the ideal one by about its departure.
            let cp = model.r * (1.0 - ideal.second) * (1.0 - 0.7 * departure * p / dew);
            t = match target {
                Target::Enthalpy => from + (value - h) / cp,
                Target::Entropy => from * ((value - s) / cp).clamp(-5.0, 5.0).exp(),
            }
            .clamp(from, t_max);
        }
        let z = 1.0 + departure * (p / dew) * (from / t).powi(4);
        (t, p / (scale(t) * z.max(0.2)))
    }

    fn finish(
        &self,
        sat: &Saturation,
        point: &Point,
        p: f64,
        target: Target,
        value: f64,
        dense: bool,
    ) -> Result<State, PropertyError> {
        let mut state = self.one_phase(sat, point, p, dense)?;
        match target {
            Target::Enthalpy => state.enthalpy = value,
            Target::Entropy => state.entropy = value,
        }
        Ok(state)
    }

    /// One-phase point at a pressure and an enthalpy or entropy: Newton in both unknowns, and where
    /// it strays a bracketed search in T along the isobar.
    fn solve_one_phase(
        &self,
        sat: &Saturation,
        grid: &Grid,
        p: f64,
        target: Target,
        value: f64,
        region: &Region,
    ) -> Result<Point, PropertyError> {
        if let Some(point) = self.newton(p, target, value, region)
            && self.check_melting(p, point.t).is_ok()
        {
            return Ok(point);
        }
        self.search_along_isobar(sat, grid, p, target, value, region)
    }

    fn newton(&self, p: f64, target: Target, value: f64, region: &Region) -> Option<Point> {
        let (mut t, mut delta) = region.start;
        let mut last = f64::INFINITY;
        for _ in 0..12 {
            let iso = self.model.isotherm(t);
            let point = match target {
                Target::Enthalpy => self.model.point_without_entropy(&iso, delta),
                Target::Entropy => self.model.point(&iso, delta),
            };
            let (y_t, y_rho) = target.slopes(&point);
            let dp = p - point.p;
            let dy = value - target.of(&point);
            // Along the isobar dy = (y_t − y_ρ p_t/p_ρ) dT + y_ρ dp/p_ρ.
            let along = y_t - y_rho * point.p_t / point.p_rho;
            let dt = (dy - y_rho * dp / point.p_rho) / along;
            let drho = (dp - point.p_t * dt) / point.p_rho;
            let (rt, rd) = (dt / t, drho / point.rho);
            if !(point.p_rho > 0.0 && along > 0.0 && rt.abs() < 0.6 && rd.abs() < 3.0) {
                return None;
            }
            t += dt;
            // In ln ρ for long steps, which keeps the density positive.
            delta *= if rd.abs() < 1e-4 { 1.0 + rd } else { rd.exp() };
            if t < region.t_low * (1.0 - SLACK) || t > region.t_high * (1.0 + SLACK) {
                // Let the bracketed search decide whether this is the range's end or an overshoot.
                return None;
            }
            let size = rt.abs().max(0.1 * rd.abs());
            if size < 1e-8 || (size < 1e-6 && size >= 0.5 * last) {
                let point = self.model.point(&self.model.isotherm(t), delta);
                let good = (target.of(&point) - value).abs() <= 1e-9 * target.scale(&point, self.model.r);
                return good.then_some(point);
            }
            last = size;
        }
        None
    }

    fn search_along_isobar(
        &self,
        sat: &Saturation,
        grid: &Grid,
        p: f64,
        target: Target,
        value: f64,
        region: &Region,
    ) -> Result<Point, PropertyError> {
        let mut low = region.t_low.max(self.lowest_temperature(p)).min(region.t_high);
        let inside = |t: f64| t.clamp(region.t_low, region.t_high);
        let mut high = region.t_high;
        let at = |t: f64| -> Result<Point, PropertyError> {
            let t = inside(t);
            let found = if region.edge == Some(Side::Liquid) {
                self.liquid(sat, p, t)
            } else if region.edge == Some(Side::Vapour) && t < sat.t_c {
                self.vapour(sat, p, t)
            } else {
                return self.point_pt(sat, grid, p, t).map(|(point, _)| point);
            };
            found.ok_or(PropertyError::NoConvergence)
        };
        let (first, last) = (at(low)?, at(high)?);
        let slack = SLACK * target.scale(&last, self.model.r);
        let (min, max) = (target.of(&first), target.of(&last));
        // Near the critical point rounding of p alone moves the ends on the saturation line.
        let below = value < min - slack && region.edge != Some(Side::Vapour);
        let above = value > max + slack && region.edge != Some(Side::Liquid);
        if below || above {
            return Err(target.range_error(value, min, max));
        }
        if value <= min {
            return Ok(first);
        }
        if value >= max {
            return Ok(last);
        }
        let mut t = inside(region.start.0);
        if !(t > low && t < high) {
            t = low + (high - low) * (value - min) / (max - min);
        }
        for round in 0..120 {
            let point = at(t)?;
            let error = target.of(&point) - value;
            if error > 0.0 {
                high = t
            } else {
                low = t
            }
            let slope = if target == Target::Enthalpy { point.cp() } else { point.cp() / point.t };
            let mut next = t - error / slope;
            // Where rounding outweighs the slope Newton's steps wander: halve.
            if !(next > low && next < high) || round > 50 {
                next = 0.5 * (low + high);
            }
            let step = (next - t).abs();
            if step <= 1e-13 * t || high - low <= 1e-14 * high {
                return Ok(point);
            }
            t = next;
        }
        Err(PropertyError::NoConvergence)
    }

    /// (h, s): along the isentrope h rises with p (dh = v dp), through one and two phases alike,
    /// so the pressure is found in a bracket with (p, s) states.
    pub(super) fn state_hs(&self, h: f64, s: f64) -> Result<State, PropertyError> {
        let (sat, _) = self.tables()?;
        let range = self.equation.range;
        let (mut low, mut high) = (P_MIN, range.pressure_max);
        let mut p = 0.1 * sat.p_c;
        let mut best: Option<State> = None;
        for _ in 0..120 {
            let mut next = f64::NAN;
            let mut step_is_final = false;
            match self.state_py(p, Target::Entropy, s) {
                Ok(state) => {
                    let error = h - state.enthalpy;
                    if error > 0.0 {
                        low = p
                    } else {
                        high = p
                    }
                    next = isentropic_pressure(&state, error);
                    step_is_final = (next - p).abs() <= 1e-12 * p || error == 0.0;
                    best = Some(state);
                }
                // Too cold at this pressure: more is needed; too hot: less.
                Err(PropertyError::OutOfRange { value, min, .. }) if value < min => low = p,
                Err(PropertyError::OutOfRange { .. }) => high = p,
                Err(other) => return Err(other),
            }
            if step_is_final || high / low - 1.0 < 1e-13 {
                break;
            }
            p = if next > low && next < high { next } else { (low * high).sqrt() };
        }
        // Where the search ends without the state, its end is the range's end on this isentrope.
        let liquid = Curve::EnthalpyLiquid;
        let coldest = sat.x_of_temperature(sat.t_min);
        let (h_cold, s_cold) = (sat.at(liquid, coldest), sat.at(Curve::EntropyLiquid, coldest));
        let hottest = self.model.ideal_gas(range.temperature_max, P_MIN);
        let Some(mut state) = best else {
            return Err(out_of_range("entropy", "J/(kg K)", s, s_cold, hottest.1));
        };
        if (state.enthalpy - h).abs() > 1e-7 * self.model.r * state.temperature {
            let (min, max) = if h > state.enthalpy {
                (h_cold.min(state.enthalpy), state.enthalpy)
            } else {
                (state.enthalpy, hottest.0.max(state.enthalpy))
            };
            return Err(out_of_range("enthalpy at this entropy", "J/kg", h, min, max));
        }
        state.enthalpy = h;
        state.entropy = s;
        Ok(state)
    }
}

/// The pressure at which the isentrope through `state` has gained `error` (J/kg) of enthalpy, as a
/// gas of the state's isentropic exponent would.
fn isentropic_pressure(state: &State, error: f64) -> f64 {
    let (p, v) = (state.pressure, state.volume);
    let slope = state
        .jacobian(crate::fluid::Pair::PressureEntropy)
        .map_or(-v / p, |j| j[crate::fluid::Property::Volume as usize][0]);
    // γ = −(v/p)/(∂v/∂p)_s
    let gamma = -v / (p * slope);
    let k = 1.0 - 1.0 / gamma;
    let z = error / (p * v);
    if k.abs() < 1e-6 || !k.is_finite() {
        return p * z.clamp(-50.0, 50.0).exp();
    }
    let base = 1.0 + k * z;
    if base > 0.0 { p * base.powf(1.0 / k) } else { f64::NAN }
}

/// The state, unless a figure in it is not finite.
pub(super) fn finite(state: State) -> Result<State, PropertyError> {
    let figures = [state.temperature, state.pressure, state.enthalpy, state.entropy, state.volume];
    let all = figures.iter().chain(state.gradient.iter().flatten()).all(|x| x.is_finite());
    if all && state.volume > 0.0 { Ok(state) } else { Err(PropertyError::NoConvergence) }
}
