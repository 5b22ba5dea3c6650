//! Water and steam by the IAPWS Industrial Formulation 1997.
//!
//! Source: IAPWS R7-97(2012), Revised Release on the IAPWS Industrial Formulation 1997 for the
//! Thermodynamic Properties of Water and Steam. Range: 273.15 K to 1073.15 K up to 100 MPa and to
//! 2273.15 K up to 50 MPa. Every answer is a root of the basic equations of regions 1, 2, 3 and 5
//! and of the saturation equation, to rounding, with analytic derivatives; backward equations serve
//! as first estimates only.
//!
//! Decisions:
//! - The saturation line is the release's saturation equation everywhere, also between 623.15 K
//!   and the critical point; there the saturated densities are the outer roots of the equation of
//!   region 3 at that pressure and temperature.
//! - At a pressure and temperature on the saturation line, `T <= Tsat(p)` is liquid and anything
//!   above it vapour, without a tolerance band.
//! - At a pressure and enthalpy or entropy, saturated states (x = 0 and x = 1) count as two-phase.
//! - Below the saturation pressure at 273.15 K (611.2 Pa) there is only gas, down to 0.001 Pa; ice and
//!   sublimation are outside the formulation.
//! - On the boundaries between regions the basic equations differ a little (by up to 0.14 kJ/kg in
//!   h and 0.02 % in v). An enthalpy or entropy that falls between them is answered by one region's
//!   equation slightly past the boundary; one that both regions hold, by the colder region.
//! - At the critical point cp and the compressibility have no finite value; there the derivatives
//!   are large but finite.

mod backward;
mod basic;
mod flash;
mod saturation;
mod tables;

use super::{Datum, Element, Elements, Engine, Pair, Phase, PropertyError, Provenance, State};
use basic::{CRITICAL_PRESSURE, CRITICAL_TEMPERATURE, Point, Region};
use flash::{
    Found, GREATEST_PRESSURE, GREATEST_TEMPERATURE, Key, LEAST_PRESSURE, LEAST_TEMPERATURE,
    REGION_2_TEMPERATURE, REGION_5_PRESSURE, Saturated, Spot, limits,
};
use std::sync::OnceLock;

/// Molar mass of water, kg/mol (IAPWS R6-95(2018)). R7-97 states 18.015257 g/mol for the older molar
/// gas constant; its specific gas constant is what its equations use.
const MOLAR_MASS: f64 = 18.015268e-3;

/// Relative room at the ends of the ranges for the rounding of unit conversions.
const ROUNDING: f64 = 1e-9;

/// Relative standard uncertainty of differences of h and s in liquid (common practice).
const LIQUID_UNCERTAINTY: f64 = 0.0003;
/// The same in steam (common practice).
const STEAM_UNCERTAINTY: f64 = 0.001;

/// Water and steam, IAPWS-IF97.
#[derive(Clone, Copy, Debug, Default)]
pub struct Steam;

impl Steam {
    /// Saturation pressure (Pa) at `t` (K) and dp/dT (Pa/K), for 273.15 K <= `t` <= 647.096 K.
    /// Source: IAPWS R7-97(2012), eq. (30).
    ///
    /// # Errors
    /// `NotFinite`; `NoSaturation` above the critical temperature; `OutOfRange` below 273.15 K.
    pub fn saturation_pressure(&self, t: f64) -> Result<(f64, f64), PropertyError> {
        finite(&[t])?;
        if t > CRITICAL_TEMPERATURE * (1.0 + ROUNDING) {
            return Err(PropertyError::NoSaturation);
        }
        within("temperature", "K", t, LEAST_TEMPERATURE, CRITICAL_TEMPERATURE)?;
        Ok(saturation::pressure(t.min(CRITICAL_TEMPERATURE)))
    }
}

/// Specific Gibbs energy of liquid water and its derivatives in SI, with h = 0 and s = 0 near the
/// triple point: what mixtures with liquid water are built on.
#[derive(Clone, Copy, Debug)]
pub(in crate::fluid) struct LiquidWater {
    /// g, J/kg.
    pub g: f64,
    /// (∂g/∂T)p, J/(kg K).
    pub t: f64,
    /// (∂g/∂p)T, m³/kg.
    pub p: f64,
    /// (∂²g/∂T²)p, J/(kg K²).
    pub tt: f64,
    /// ∂²g/∂T∂p, m³/(kg K).
    pub tp: f64,
    /// (∂²g/∂p²)T, m³/(kg Pa).
    pub pp: f64,
}

/// Liquid water at `p` (Pa) and `t` (K) by the equation of region 1, which reaches from 273.15 to
/// 623.15 K and to 100 MPa. The caller keeps to that range.
pub(in crate::fluid) fn liquid(p: f64, t: f64) -> LiquidWater {
    let at = Region::One.at(p, t);
    LiquidWater { g: at.h - t * at.s, t: -at.s, p: at.v, tt: -at.cp / t, tp: at.v_t, pp: at.v_p }
}

/// Saturation pressure over liquid water in Pa and its slope, eq. (30); the caller keeps to its range.
pub(in crate::fluid) fn saturation_liquid(t: f64) -> (f64, f64) {
    saturation::pressure(t)
}

fn finite(values: &[f64]) -> Result<(), PropertyError> {
    if values.iter().all(|v| v.is_finite()) { Ok(()) } else { Err(PropertyError::NotFinite) }
}

/// Refuses a value outside a range, with room for rounding at its ends.
fn within(
    quantity: &'static str,
    unit: &'static str,
    value: f64,
    min: f64,
    max: f64,
) -> Result<(), PropertyError> {
    let room = |end: f64| end.abs() * ROUNDING;
    if value >= min - room(min) && value <= max + room(max) {
        Ok(())
    } else {
        Err(PropertyError::OutOfRange { quantity, unit, value, min, max })
    }
}

fn pressure_within(p: f64) -> Result<(), PropertyError> {
    within("pressure", "Pa", p, LEAST_PRESSURE, GREATEST_PRESSURE)
}

/// The highest temperature at a pressure, K.
fn greatest_temperature(p: f64) -> f64 {
    if p > REGION_5_PRESSURE * (1.0 + ROUNDING) { REGION_2_TEMPERATURE } else { GREATEST_TEMPERATURE }
}

fn temperature_within(t: f64, p: f64) -> Result<(), PropertyError> {
    within("temperature", "K", t, LEAST_TEMPERATURE, greatest_temperature(p))
}

fn quality_within(x: f64) -> Result<(), PropertyError> {
    within("quality", "1", x, 0.0, 1.0)
}

/// The state at (p, h) or (p, s).
fn by_pressure(p: f64, key: Key, y: f64) -> Result<State, PropertyError> {
    pressure_within(p)?;
    if let Some(spot) = flash::by_pressure(p, key, y)
        && temperature_within(spot.temperature(), p).is_ok()
    {
        return Ok(state(&spot));
    }
    let (quantity, unit) = match key {
        Key::Enthalpy => ("enthalpy", "J/kg"),
        Key::Entropy => ("entropy", "J/(kg K)"),
    };
    let end = |t| match flash::by_temperature(p, t) {
        Spot::Gibbs(_, point) | Spot::Helmholtz(point) => key.of(&point),
        Spot::TwoPhase(line, _) => key.of(&line.vapour),
    };
    let (min, max) = (end(LEAST_TEMPERATURE), end(greatest_temperature(p)));
    within(quantity, unit, y, min, max)?;
    Err(PropertyError::NoConvergence)
}

/// The state at (h, s).
fn by_enthalpy_entropy(h: f64, s: f64) -> Result<State, PropertyError> {
    let coldest = Region::One.at(GREATEST_PRESSURE, LEAST_TEMPERATURE);
    let thinnest = Region::Five.at(LEAST_PRESSURE, GREATEST_TEMPERATURE);
    within("entropy", "J/(kg K)", s, coldest.s, thinnest.s)?;
    match flash::by_enthalpy_entropy(h, s) {
        Found::At(spot) => {
            pressure_within(spot.pressure())?;
            temperature_within(spot.temperature(), spot.pressure())?;
            Ok(state(&spot))
        }
        Found::Outside(min, max) => {
            within("enthalpy", "J/kg", h, min, max)?;
            Err(PropertyError::NoConvergence)
        }
        Found::Nowhere => Err(PropertyError::NoConvergence),
    }
}

fn state(spot: &Spot) -> State {
    match spot {
        Spot::Gibbs(_, point) | Spot::Helmholtz(point) => one_phase(point),
        Spot::TwoPhase(line, x) => two_phase(line, *x),
    }
}

fn one_phase(point: &Point) -> State {
    let Point { t, p, v, h, s, cp, v_t, v_p } = *point;
    let phase = if t > CRITICAL_TEMPERATURE {
        if p > CRITICAL_PRESSURE { Phase::Supercritical } else { Phase::Vapour }
    } else if p >= CRITICAL_PRESSURE || (p >= limits().least_saturation.p && is_liquid(point)) {
        Phase::Liquid
    } else {
        Phase::Vapour
    };
    State::one_phase(t, p, h, s, v, phase, cp, v_t, v_p)
}

/// Tells liquid from vapour below the critical point by the side of the critical density that
/// saturated states keep to.
fn is_liquid(point: &Point) -> bool {
    point.v < 1.0 / basic::CRITICAL_DENSITY
}

/// A saturated mixture; its local basis is (p, x).
fn two_phase(line: &Saturated, x: f64) -> State {
    let Saturated { p, t, t_p, liquid, vapour } = line;
    // Derivatives with respect to p along the saturation line.
    let along = |point: &Point| {
        (
            point.v - point.t * point.v_t + point.cp * t_p,
            -point.v_t + point.cp / point.t * t_p,
            point.v_p + point.v_t * t_p,
        )
    };
    let (liquid_h, liquid_s, liquid_v) = along(liquid);
    let (vapour_h, vapour_s, vapour_v) = along(vapour);
    let mix = |a: f64, b: f64| a + x * (b - a);
    State {
        temperature: *t,
        pressure: *p,
        enthalpy: mix(liquid.h, vapour.h),
        entropy: mix(liquid.s, vapour.s),
        volume: mix(liquid.v, vapour.v),
        quality: Some(x),
        phase: Phase::TwoPhase,
        gradient: [
            [*t_p, 0.0, 0.0],
            [1.0, 0.0, 0.0],
            [mix(liquid_h, vapour_h), vapour.h - liquid.h, 0.0],
            [mix(liquid_s, vapour_s), vapour.s - liquid.s, 0.0],
            [mix(liquid_v, vapour_v), vapour.v - liquid.v, 0.0],
            [0.0, 1.0, 0.0],
        ],
    }
}

impl Engine for Steam {
    fn provenance(&self) -> Provenance {
        Provenance {
            formulation: "IAPWS-IF97".to_owned(),
            source: "IAPWS R7-97(2012), Revised Release on the IAPWS Industrial Formulation 1997 for the \
                     Thermodynamic Properties of Water and Steam"
                .to_owned(),
            range:
                "273.15 K to 1073.15 K up to 100 MPa; to 2273.15 K up to 50 MPa; liquid and vapour, no ice"
                    .to_owned(),
        }
    }

    fn supports(&self, _pair: Pair) -> bool {
        true
    }

    fn state(&self, pair: Pair, a: f64, b: f64, _c: f64) -> Result<State, PropertyError> {
        finite(&[a, b])?;
        match pair {
            Pair::PressureTemperature => {
                pressure_within(a)?;
                temperature_within(b, a)?;
                Ok(state(&flash::by_temperature(a, b)))
            }
            Pair::PressureQuality => {
                quality_within(b)?;
                within("pressure", "Pa", a, limits().least_saturation.p, CRITICAL_PRESSURE)?;
                Ok(two_phase(&flash::saturated_at_pressure(a.min(CRITICAL_PRESSURE)), b.clamp(0.0, 1.0)))
            }
            Pair::TemperatureQuality => {
                quality_within(b)?;
                within("temperature", "K", a, LEAST_TEMPERATURE, CRITICAL_TEMPERATURE)?;
                Ok(two_phase(
                    &flash::saturated_at_temperature(a.min(CRITICAL_TEMPERATURE)),
                    b.clamp(0.0, 1.0),
                ))
            }
            Pair::PressureEnthalpy => by_pressure(a, Key::Enthalpy, b),
            Pair::PressureEntropy => by_pressure(a, Key::Entropy, b),
            Pair::EnthalpyEntropy => by_enthalpy_entropy(a, b),
        }
    }

    fn saturation_temperature(&self, p: f64, _quality: f64) -> Result<(f64, f64), PropertyError> {
        finite(&[p])?;
        if p > CRITICAL_PRESSURE * (1.0 + ROUNDING) {
            return Err(PropertyError::NoSaturation);
        }
        within("pressure", "Pa", p, limits().least_saturation.p, CRITICAL_PRESSURE)?;
        Ok(saturation::temperature(p.min(CRITICAL_PRESSURE)))
    }

    fn molar_mass(&self, _c: f64) -> Option<f64> {
        Some(MOLAR_MASS)
    }

    fn elements(&self, _c: f64) -> Option<(Elements, Elements)> {
        // From the atomic masses, so that mass and elements agree.
        let molar_mass = 2.0 * Element::H.molar_mass() + Element::O.molar_mass();
        let mut elements = [0.0; Element::COUNT];
        elements[Element::H as usize] = 2.0 / molar_mass;
        elements[Element::O as usize] = 1.0 / molar_mass;
        Some((elements, [0.0; Element::COUNT]))
    }

    /// Joins liquid water at 298.15 K and 0.1 MPa to h = −285.830 kJ/mol and s = 69.95 J/(mol K)
    /// (CODATA Key Values for Thermodynamics, 1989).
    fn datum(&self) -> Option<Datum> {
        static DATUM: OnceLock<Datum> = OnceLock::new();
        Some(*DATUM.get_or_init(|| {
            let liquid = Region::One.at(0.1e6, 298.15);
            Datum { enthalpy: -285_830.0 / MOLAR_MASS - liquid.h, entropy: 69.95 / MOLAR_MASS - liquid.s }
        }))
    }

    fn relative_uncertainty(&self, state: &State) -> f64 {
        let vapour = match (state.quality, state.phase) {
            (Some(x), _) => x,
            (None, Phase::Liquid) => 0.0,
            (None, _) => 1.0,
        };
        LIQUID_UNCERTAINTY + vapour * (STEAM_UNCERTAINTY - LIQUID_UNCERTAINTY)
    }
}
