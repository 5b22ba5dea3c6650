//! States from pairs of coordinates: which region holds them, and the root of its basic equation.
//!
//! The backward equations of the release only start the iteration; each answer is the converged
//! root of a basic equation. Where the equations of two regions differ on their common boundary
//! (by up to the release's consistency tolerance), an enthalpy or entropy that falls between them
//! is answered by one region's equation slightly beyond the boundary, so that there is no gap; one
//! that both regions hold is answered by the colder region.

use super::basic::{
    CRITICAL_DENSITY, CRITICAL_PRESSURE, CRITICAL_TEMPERATURE, Dense, Point, Region, Side, density, region_3,
};
use super::{backward, saturation};
use std::sync::OnceLock;

/// Lowest temperature of the formulation, K.
pub(super) const LEAST_TEMPERATURE: f64 = 273.15;
/// Highest temperature of regions 1 to 4, K.
pub(super) const REGION_2_TEMPERATURE: f64 = 1073.15;
/// Highest temperature of region 5, K.
pub(super) const GREATEST_TEMPERATURE: f64 = 2273.15;
/// Highest pressure up to 1073.15 K, Pa.
pub(super) const GREATEST_PRESSURE: f64 = 100e6;
/// Highest pressure of region 5, Pa.
pub(super) const REGION_5_PRESSURE: f64 = 50e6;
/// Lowest pressure answered, Pa. The release allows any pressure above zero; its logarithm and the
/// specific volume are well-behaved down to here.
pub(super) const LEAST_PRESSURE: f64 = 1e-3;
/// Temperature between regions 1 and 3, K.
const REGION_1_TEMPERATURE: f64 = 623.15;
/// Saturation temperature above which the saturated states are those of region 3, K. A hair above
/// the boundary, so that 623.15 K and its saturation pressure, whose temperature comes back with a
/// rounding error, are on the same side of it.
const SATURATION_3_TEMPERATURE: f64 = REGION_1_TEMPERATURE + 1e-9;
/// Temperature above which region 2 reaches up to the highest pressure, K.
const REGION_3_TEMPERATURE: f64 = 863.15;
/// How far below the lowest temperature the root is followed, K, so that an isentrope of cold water,
/// which dips below 273.15 K at some pressures, can be followed from one end to the other.
const FOLLOWED_TEMPERATURE: f64 = 255.0;
/// How far past a boundary between two regions a root is sought, K.
const PAST_BOUNDARY: f64 = 1.0;
/// The same in density, relative, for region 3.
const PAST_DENSITY: f64 = 0.005;
/// The same at saturation, where the bracket's end is a root already.
const PAST_SATURATION: f64 = 1e-9;

/// The second coordinate beside pressure.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Key {
    Enthalpy,
    Entropy,
}

impl Key {
    #[inline]
    pub fn of(self, point: &Point) -> f64 {
        match self {
            Key::Enthalpy => point.h,
            Key::Entropy => point.s,
        }
    }

    /// Derivative with respect to T at constant p.
    #[inline]
    fn slope(self, point: &Point) -> f64 {
        match self {
            Key::Enthalpy => point.cp,
            Key::Entropy => point.cp / point.t,
        }
    }

    /// Value at the critical point.
    fn critical(self) -> f64 {
        self.of(&limits().critical)
    }

    fn estimate_1(self, p: f64, y: f64) -> f64 {
        match self {
            Key::Enthalpy => backward::enthalpy_1(p, y),
            Key::Entropy => backward::entropy_1(p, y),
        }
    }

    fn estimate_2(self, p: f64, y: f64) -> f64 {
        // Below the range of the backward equations steam is an ideal gas.
        let floor = limits().least_saturation.p;
        match self {
            Key::Enthalpy => backward::enthalpy_2(p.max(floor), y),
            Key::Entropy if p < floor => backward::entropy_2(floor, y + super::basic::R * (p / floor).ln()),
            Key::Entropy => backward::entropy_2(p, y),
        }
    }
}

/// States that bound the ranges, from the basic equations.
pub(super) struct Limits {
    /// Saturated vapour at 273.15 K.
    pub least_saturation: Point,
    critical: Point,
    /// Region 2 at its highest temperature and pressure.
    hot_dense: Point,
    /// Region 2 at 1073.15 K and 50 MPa.
    hot: Point,
    /// Region 5 at its highest temperature and pressure.
    hottest: Point,
}

pub(super) fn limits() -> &'static Limits {
    static LIMITS: OnceLock<Limits> = OnceLock::new();
    LIMITS.get_or_init(|| Limits {
        least_saturation: Region::Two.at(saturation::pressure(LEAST_TEMPERATURE).0, LEAST_TEMPERATURE),
        critical: region_3(CRITICAL_DENSITY, CRITICAL_TEMPERATURE).point(CRITICAL_PRESSURE),
        hot_dense: Region::Two.at(GREATEST_PRESSURE, REGION_2_TEMPERATURE),
        hot: Region::Two.at(REGION_5_PRESSURE, REGION_2_TEMPERATURE),
        hottest: Region::Five.at(REGION_5_PRESSURE, GREATEST_TEMPERATURE),
    })
}

/// Saturated liquid and vapour at one pressure.
#[derive(Clone, Copy, Debug)]
pub(super) struct Saturated {
    pub p: f64,
    pub t: f64,
    /// dT/dp along the line, K/Pa
    pub t_p: f64,
    pub liquid: Point,
    pub vapour: Point,
}

/// Where a state lies.
#[derive(Clone, Copy, Debug)]
pub(super) enum Spot {
    /// In the region of a Gibbs function.
    Gibbs(Region, Point),
    /// In region 3.
    Helmholtz(Point),
    /// On the saturation line, with the quality.
    TwoPhase(Saturated, f64),
}

impl Spot {
    pub fn temperature(&self) -> f64 {
        match self {
            Spot::Gibbs(_, point) | Spot::Helmholtz(point) => point.t,
            Spot::TwoPhase(line, _) => line.t,
        }
    }

    pub fn pressure(&self) -> f64 {
        match self {
            Spot::Gibbs(_, point) | Spot::Helmholtz(point) => point.p,
            Spot::TwoPhase(line, _) => line.p,
        }
    }

    /// Enthalpy and volume.
    fn enthalpy_and_volume(&self) -> (f64, f64) {
        match self {
            Spot::Gibbs(_, point) | Spot::Helmholtz(point) => (point.h, point.v),
            Spot::TwoPhase(line, x) => (
                line.liquid.h + x * (line.vapour.h - line.liquid.h),
                line.liquid.v + x * (line.vapour.v - line.liquid.v),
            ),
        }
    }
}

/// The saturated pair on the line at `p`, `t`.
fn saturated(p: f64, t: f64, t_p: f64) -> Saturated {
    let (liquid, vapour) = (saturated_side(p, t, Side::Dense), saturated_side(p, t, Side::Light));
    Saturated { p, t, t_p, liquid, vapour }
}

fn saturated_side(p: f64, t: f64, side: Side) -> Point {
    if t > SATURATION_3_TEMPERATURE {
        region_3_at(p, t, side)
    } else if side == Side::Dense {
        Region::One.at(p, t)
    } else {
        Region::Two.at(p, t)
    }
}

pub(super) fn saturated_at_pressure(p: f64) -> Saturated {
    let (t, t_p) = saturation::temperature(p);
    saturated(p, t, t_p)
}

pub(super) fn saturated_at_temperature(t: f64) -> Saturated {
    let (p, p_t) = saturation::pressure(t);
    saturated(p, t, 1.0 / p_t)
}

fn region_3_at(p: f64, t: f64, side: Side) -> Point {
    region_3(density(p, t, side), t).point(p)
}

/// The branch of p(ρ) in region 3 that is stable at (p, T).
fn stable_side(p: f64, t: f64) -> Side {
    if t >= CRITICAL_TEMPERATURE {
        Side::Only
    } else if p >= CRITICAL_PRESSURE || t <= saturation::temperature(p).0 {
        Side::Dense
    } else {
        Side::Light
    }
}

/// The region that holds (p, T); `None` for region 3. A point on the saturation line is liquid.
fn region(p: f64, t: f64) -> Option<Region> {
    if t > REGION_2_TEMPERATURE {
        Some(Region::Five)
    } else if t > REGION_3_TEMPERATURE {
        Some(Region::Two)
    } else if t > REGION_1_TEMPERATURE {
        (p <= saturation::boundary_pressure(t)).then_some(Region::Two)
    } else if p < CRITICAL_PRESSURE && (p < limits().least_saturation.p || t > saturation::temperature(p).0) {
        Some(Region::Two)
    } else {
        Some(Region::One)
    }
}

/// The stable one-phase state at pressure and temperature.
pub(super) fn by_temperature(p: f64, t: f64) -> Spot {
    match region(p, t) {
        Some(region) => Spot::Gibbs(region, region.at(p, t)),
        None => Spot::Helmholtz(region_3_at(p, t, stable_side(p, t))),
    }
}

/// The state at pressure and enthalpy or entropy. Its temperature may lie outside the range of
/// the formulation, which the caller checks. `None`: there is none anywhere near the range.
pub(super) fn by_pressure(p: f64, key: Key, y: f64) -> Option<Spot> {
    if p < limits().least_saturation.p {
        return gas(p, key, y, FOLLOWED_TEMPERATURE, key.estimate_2(p, y));
    }
    if p >= CRITICAL_PRESSURE {
        return above_critical(p, key, y);
    }
    let (t, t_p) = saturation::temperature(p);
    let dense = t > SATURATION_3_TEMPERATURE;
    if y < key.critical() {
        let guess = key.estimate_1(p, y);
        let boundary = if dense { REGION_1_TEMPERATURE } else { t };
        if guess < boundary - PAST_BOUNDARY
            && let Some(spot) = liquid(p, key, y, boundary, guess)
            && spot.temperature() <= boundary
        {
            return Some(spot);
        }
        if dense && y <= key.of(&Region::One.at(p, boundary)) {
            return liquid(p, key, y, boundary + PAST_BOUNDARY, guess);
        }
        let saturated_liquid = saturated_side(p, t, Side::Dense);
        if y < key.of(&saturated_liquid) {
            return if dense {
                let cold = region_3_at(p, REGION_1_TEMPERATURE, Side::Dense);
                within_region_3(p, key, y, (&saturated_liquid, PAST_SATURATION), (&cold, PAST_DENSITY))
            } else {
                liquid(p, key, y, boundary + PAST_BOUNDARY, guess)
            };
        }
        let vapour = saturated_side(p, t, Side::Light);
        Some(two_phase(Saturated { p, t, t_p, liquid: saturated_liquid, vapour }, key, y))
    } else {
        let guess = key.estimate_2(p, y);
        let boundary = if dense { saturation::boundary_temperature(p) } else { t };
        if guess > boundary + PAST_BOUNDARY
            && let Some(spot) = gas(p, key, y, boundary, guess)
            && spot.temperature() >= boundary
        {
            return Some(spot);
        }
        if dense && y >= key.of(&Region::Two.at(p, boundary)) {
            return gas(p, key, y, boundary - PAST_BOUNDARY, guess);
        }
        let vapour = saturated_side(p, t, Side::Light);
        if y > key.of(&vapour) {
            return if dense {
                let hot = region_3_at(p, boundary, stable_side(p, boundary));
                within_region_3(p, key, y, (&hot, PAST_DENSITY), (&vapour, PAST_SATURATION))
            } else {
                gas(p, key, y, boundary - PAST_BOUNDARY, guess)
            };
        }
        let liquid = saturated_side(p, t, Side::Dense);
        Some(two_phase(Saturated { p, t, t_p, liquid, vapour }, key, y))
    }
}

fn above_critical(p: f64, key: Key, y: f64) -> Option<Spot> {
    let cold_guess = key.estimate_1(p, y);
    if cold_guess < REGION_1_TEMPERATURE - PAST_BOUNDARY
        && let Some(spot) = liquid(p, key, y, REGION_1_TEMPERATURE, cold_guess)
    {
        return Some(spot);
    }
    if y <= key.of(&Region::One.at(p, REGION_1_TEMPERATURE)) {
        return liquid(p, key, y, REGION_1_TEMPERATURE + PAST_BOUNDARY, cold_guess);
    }
    let boundary = saturation::boundary_temperature(p);
    if y >= key.of(&Region::Two.at(p, boundary)) {
        return gas(p, key, y, boundary - PAST_BOUNDARY, key.estimate_2(p, y));
    }
    let cold = region_3_at(p, REGION_1_TEMPERATURE, Side::Dense);
    let hot = region_3_at(p, boundary, stable_side(p, boundary));
    within_region_3(p, key, y, (&hot, PAST_DENSITY), (&cold, PAST_DENSITY))
}

fn two_phase(line: Saturated, key: Key, y: f64) -> Spot {
    let (low, high) = (key.of(&line.liquid), key.of(&line.vapour));
    let x = if high > low { ((y - low) / (high - low)).clamp(0.0, 1.0) } else { 0.0 };
    Spot::TwoPhase(line, x)
}

fn liquid(p: f64, key: Key, y: f64, hottest: f64, guess: f64) -> Option<Spot> {
    within(Region::One, p, key, y, (FOLLOWED_TEMPERATURE, hottest), guess)
}

/// Regions 2 and 5 from the temperature `coldest` up.
fn gas(p: f64, key: Key, y: f64, coldest: f64, guess: f64) -> Option<Spot> {
    let top = REGION_2_TEMPERATURE;
    if guess < top - PAST_BOUNDARY
        && let Some(spot) = within(Region::Two, p, key, y, (coldest, top), guess)
        && spot.temperature() <= top
    {
        return Some(spot);
    }
    if y <= key.of(&Region::Two.at(p, top)) || p > REGION_5_PRESSURE * (1.0 + super::ROUNDING) {
        return within(Region::Two, p, key, y, (coldest, top + PAST_BOUNDARY), guess);
    }
    let range = (top - PAST_BOUNDARY, GREATEST_TEMPERATURE + PAST_BOUNDARY);
    within(Region::Five, p, key, y, range, guess)
}

/// Newton's method in T on one region's equation, kept in a bracket. `None`: no root there.
fn within(region: Region, p: f64, key: Key, y: f64, range: (f64, f64), guess: f64) -> Option<Spot> {
    let (mut lo, mut hi) = range;
    let mut t = if guess.is_finite() { guess.clamp(lo, hi) } else { 0.5 * (lo + hi) };
    for round in 0..60 {
        let point = region.at(p, t);
        let excess = key.of(&point) - y;
        let step = -excess / key.slope(&point);
        if step.abs() <= 1e-8 * t {
            return Some(Spot::Gibbs(region, point.shifted(step)));
        }
        if excess > 0.0 {
            if t <= lo {
                return None;
            }
            hi = t;
        } else {
            if t >= hi {
                return None;
            }
            lo = t;
        }
        let next = t + step;
        t = if next > lo && next < hi {
            next
        } else if round < 8 && next.is_finite() {
            next.clamp(lo, hi)
        } else {
            0.5 * (lo + hi)
        };
    }
    None
}

/// Region 3 at a pressure between two densities, each with how far it may be passed (relative).
///
/// The unknown is density and not temperature: along an isobar enthalpy, entropy and temperature
/// are smooth functions of density even through the critical point, where cp has no bound. The
/// temperature follows in the same steps from p(ρ, T) = p, which is nearly linear in T.
fn within_region_3(p: f64, key: Key, y: f64, light: (&Point, f64), dense: (&Point, f64)) -> Option<Spot> {
    let (mut lo, mut hi) = ((1.0 - light.1) / light.0.v, (1.0 + dense.1) / dense.0.v);
    let (y_light, y_dense) = (key.of(light.0), key.of(dense.0));
    let part = if y_light > y_dense { ((y - y_dense) / (y_light - y_dense)).clamp(0.0, 1.0) } else { 0.5 };
    let mut rho = 1.0 / (dense.0.v + part * (light.0.v - dense.0.v));
    let mut t = dense.0.t + part * (light.0.t - dense.0.t);
    for _ in 0..100 {
        let mut state = region_3(rho, t);
        for _ in 0..20 {
            if (state.p - p).abs() <= 1e-5 * p {
                break;
            }
            t += ((p - state.p) / state.p_t).clamp(-0.1 * t, 0.1 * t);
            state = region_3(rho, t);
        }
        let (value, by_rho, by_t) = dense_key(key, &state);
        // To first order on the isobar.
        let dt = (p - state.p) / state.p_t;
        let excess = value + by_t * dt - y;
        let slope = by_rho - by_t * state.p_rho / state.p_t;
        if excess > 0.0 {
            lo = lo.max(rho)
        } else {
            hi = hi.min(rho)
        }
        let mut next = rho - excess / slope;
        if !(next >= lo && next <= hi) || slope >= 0.0 {
            next = 0.5 * (lo + hi);
        }
        let step = next - rho;
        let t_next = t + dt - state.p_rho / state.p_t * step;
        rho = next;
        t = t_next;
        if step.abs() <= 1e-9 * rho && dt.abs() <= 1e-9 * t {
            return Some(Spot::Helmholtz(region_3(rho, t).point(p)));
        }
    }
    None
}

/// Enthalpy or entropy with its derivatives in ρ and T.
fn dense_key(key: Key, state: &Dense) -> (f64, f64, f64) {
    let Dense { rho, t, h, s, cv, p_rho, p_t, .. } = *state;
    match key {
        Key::Enthalpy => (h, (p_rho - t * p_t / rho) / rho, cv + p_t / rho),
        Key::Entropy => (s, -p_t / (rho * rho), cv / t),
    }
}

/// Lowest and highest pressure that the formulation reaches at an entropy, Pa.
fn pressure_range(s: f64) -> (f64, f64) {
    let limits = limits();
    let lo = if s <= limits.least_saturation.s {
        limits.least_saturation.p
    } else {
        pressure_on_isotherm(Region::Two, s, &limits.least_saturation)
    };
    let hi = if s <= limits.hot_dense.s {
        GREATEST_PRESSURE
    } else if s <= limits.hot.s {
        pressure_on_isotherm(Region::Two, s, &limits.hot)
    } else if s <= limits.hottest.s {
        REGION_5_PRESSURE
    } else {
        pressure_on_isotherm(Region::Five, s, &limits.hottest)
    };
    (lo.max(LEAST_PRESSURE), hi.clamp(LEAST_PRESSURE, GREATEST_PRESSURE))
}

/// The pressure at which a gas isotherm through `start` has the entropy `s`: Newton's method in
/// ln p, in which the entropy of a gas is nearly linear.
fn pressure_on_isotherm(region: Region, s: f64, start: &Point) -> f64 {
    let mut point = *start;
    for _ in 0..20 {
        let step = (point.s - s) / (point.v_t * point.p);
        point = region.at(point.p * step.clamp(-20.0, 20.0).exp(), point.t);
        if step.abs() <= 1e-12 {
            break;
        }
    }
    point.p
}

/// What came of a pair (h, s).
pub(super) enum Found {
    /// The state, not yet checked against the range of temperature.
    At(Spot),
    /// The enthalpy lies outside these bounds at this entropy.
    Outside(f64, f64),
    /// There is no state of this entropy, or the iteration failed.
    Nowhere,
}

/// The state at enthalpy and entropy.
///
/// Along an isentrope h rises with p at the rate v through every region, so the pressure is
/// bracketed and followed by Newton's method; then (p, T) or (ρ, T) are polished together on the
/// region's equation.
pub(super) fn by_enthalpy_entropy(h: f64, s: f64) -> Found {
    let (mut lo, mut hi) = pressure_range(s);
    if lo > hi {
        return Found::Nowhere;
    }
    let (bottom, top) = (lo, hi);
    let mut p = first_pressure(h, s).clamp(lo, hi);
    let (mut seen_lo, mut seen_hi) = (false, false);
    for round in 0..200 {
        let Some(spot) = by_pressure(p, Key::Entropy, s) else { return Found::Nowhere };
        let (value, v) = spot.enthalpy_and_volume();
        let excess = value - h;
        if excess.abs() <= 1e-14 * h.abs().max(1e3) {
            return Found::At(spot);
        }
        if excess > 0.0 {
            hi = p;
            seen_hi = true;
        } else {
            lo = p;
            seen_lo = true;
        }
        // A step in p for liquids and in ln p for gases: in these h is nearly linear.
        let ratio = excess / (p * v);
        let next =
            if v < 1.0 / CRITICAL_DENSITY { p - excess / v } else { p * (-ratio).clamp(-3.0, 3.0).exp() };
        let near = (next - p).abs() <= 1e-3 * p || hi - lo <= 1e-6 * hi;
        let collapsed = hi - lo <= 4.0 * f64::EPSILON * hi;
        if near || collapsed {
            if let Some(polished) = polish(&spot, h, s)
                && (collapsed || in_own_region(&polished))
            {
                return Found::At(polished);
            }
            if collapsed {
                // The ends of the range, or a two-phase state resolved as far as p can be.
                return if excess.abs() <= 1e-9 * h.abs().max(1e5) {
                    Found::At(spot)
                } else {
                    outside(bottom, top, s)
                };
            }
        }
        p = if next > lo && next < hi {
            next
        } else if next >= hi && !seen_hi {
            hi
        } else if next <= lo && !seen_lo {
            lo
        } else if round % 2 == 0 {
            (lo * hi).sqrt()
        } else {
            0.5 * (lo + hi)
        };
        if (p == hi && seen_hi) || (p == lo && seen_lo) {
            // An end of the range was evaluated already and h lies beyond it.
            return outside(bottom, top, s);
        }
    }
    Found::Nowhere
}

/// A pressure from which the isentrope is followed: that of an ideal gas with cp = 2.1 kJ/(kg K)
/// and 2500 kJ/kg at 273.15 K, good to a factor of a few in steam.
fn first_pressure(h: f64, s: f64) -> f64 {
    let start = &limits().least_saturation;
    let cp = 2100.0;
    let t = (LEAST_TEMPERATURE + (h - start.h) / cp).clamp(LEAST_TEMPERATURE, GREATEST_TEMPERATURE);
    let ratio = (start.s + cp * (t / LEAST_TEMPERATURE).ln() - s) / super::basic::R;
    start.p * ratio.clamp(-20.0, 20.0).exp()
}

fn outside(bottom: f64, top: f64, s: f64) -> Found {
    match (by_pressure(bottom, Key::Entropy, s), by_pressure(top, Key::Entropy, s)) {
        (Some(least), Some(greatest)) => {
            Found::Outside(least.enthalpy_and_volume().0, greatest.enthalpy_and_volume().0)
        }
        _ => Found::Nowhere,
    }
}

/// Whether (p, T) of a one-phase state lie in the region whose equation was used.
fn in_own_region(spot: &Spot) -> bool {
    match spot {
        Spot::Gibbs(own, point) => region(point.p, point.t) == Some(*own),
        Spot::Helmholtz(point) => {
            region(point.p, point.t).is_none()
                && match stable_side(point.p, point.t) {
                    Side::Dense => point.v <= 1.0 / CRITICAL_DENSITY,
                    Side::Light => point.v >= 1.0 / CRITICAL_DENSITY,
                    Side::Only => true,
                }
        }
        Spot::TwoPhase(..) => true,
    }
}

/// Newton's method in two variables on the equation of the region where `spot` lies, to the full
/// accuracy of h and s. `None` in two phases, or where it leaves the neighbourhood.
fn polish(spot: &Spot, h: f64, s: f64) -> Option<Spot> {
    match spot {
        Spot::TwoPhase(..) => None,
        Spot::Gibbs(region, start) => {
            let (mut p, mut t) = (start.p, start.t);
            for _ in 0..12 {
                let point = region.at(p, t);
                let (dh, ds) = (h - point.h, s - point.s);
                // dh − T ds = v dp and ds = cp/T dT − v_T dp.
                let dp = (dh - t * ds) / point.v;
                let dt = (ds + point.v_t * dp) * t / point.cp;
                p += dp;
                t += dt;
                if !((p - start.p).abs() <= 0.05 * start.p && (t - start.t).abs() <= 5.0) {
                    return None;
                }
                if dp.abs() <= 1e-9 * p && dt.abs() <= 1e-10 * t {
                    return Some(Spot::Gibbs(*region, region.at(p, t)));
                }
            }
            None
        }
        Spot::Helmholtz(start) => {
            let (mut rho, mut t) = (1.0 / start.v, start.t);
            for _ in 0..12 {
                let state = region_3(rho, t);
                let (dh, ds) = (h - state.h, s - state.s);
                let (_, h_rho, h_t) = dense_key(Key::Enthalpy, &state);
                let (_, s_rho, s_t) = dense_key(Key::Entropy, &state);
                let det = h_rho * s_t - h_t * s_rho;
                let drho = (dh * s_t - h_t * ds) / det;
                let dt = (h_rho * ds - dh * s_rho) / det;
                rho += drho;
                t += dt;
                if !((rho * start.v - 1.0).abs() <= 0.1 && (t - start.t).abs() <= 5.0) {
                    return None;
                }
                if drho.abs() <= 1e-10 * rho && dt.abs() <= 1e-10 * t {
                    let end = region_3(rho, t);
                    return Some(Spot::Helmholtz(end.point(end.p)));
                }
            }
            None
        }
    }
}
