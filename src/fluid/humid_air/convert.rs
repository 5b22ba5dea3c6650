//! Psychrometric conversions with their derivatives.

use super::dual::Dual;
use super::virial::R;
use super::{
    HUMIDITY_RATIO_RANGE, HumidAir, TEMPERATURE_RANGE, check_humidity_ratio, check_pressure,
    check_temperature, water,
};
use crate::fluid::PropertyError;
use crate::fluid::numeric::{finite, root, within};

/// Lowest temperature of the saturation line, K (the cross coefficients end there).
const SATURATION_MIN: f64 = 173.15;

/// A value and its partial derivatives with respect to the arguments of the function that made
/// it, in their order (pressure, temperature, third argument; zero where there is no such
/// argument).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Derived {
    /// The value, SI.
    pub value: f64,
    /// ∂/∂p in 1/Pa, ∂/∂T in 1/K, and with respect to the third argument.
    pub by: [f64; 3],
}

impl Derived {
    fn from(dual: Dual) -> Result<Derived, PropertyError> {
        let fine = dual.v.is_finite() && dual.d.iter().all(|x| x.is_finite());
        if fine { Ok(Derived { value: dual.v, by: dual.d }) } else { Err(PropertyError::NoConvergence) }
    }
}

impl HumidAir {
    /// Humidity ratio at saturation over liquid water, or over ice below 273.16 K, at `p` (Pa)
    /// and `t` (K, 173.15 to 623.15).
    ///
    /// # Errors
    /// `NoSaturation` where water alone would boil (its saturation pressure reaches `p`); input
    /// outside the range.
    pub fn saturation_humidity_ratio(&self, p: f64, t: f64) -> Result<Derived, PropertyError> {
        finite(&[p, t])?;
        check_pressure(p)?;
        within("temperature", "K", t, (SATURATION_MIN, water::T_MAX))?;
        let y = self.saturation_fraction(Dual::coordinate(p, 0), Dual::coordinate(t, 1))?;
        Derived::from(self.humidity_ratio(y))
    }

    /// Enhancement factor: partial pressure of water y p of saturated air over the pressure of
    /// pure saturated water at `t` (K); `p` in Pa.
    ///
    /// # Errors
    /// As [`HumidAir::saturation_humidity_ratio`].
    pub fn enhancement_factor(&self, p: f64, t: f64) -> Result<Derived, PropertyError> {
        finite(&[p, t])?;
        check_pressure(p)?;
        within("temperature", "K", t, (SATURATION_MIN, water::T_MAX))?;
        let (p, t) = (Dual::coordinate(p, 0), Dual::coordinate(t, 1));
        Derived::from(self.saturation_fraction(p, t)? * p / water::saturation_pressure(t))
    }

    /// Humidity ratio from the relative humidity `rh` (0 to 1): the mole fraction of water over
    /// its value at saturation; above the boiling point of water at `p`, the partial pressure
    /// y p over the saturation pressure. Below 273.16 K saturation is over ice.
    ///
    /// # Errors
    /// Input outside the range.
    pub fn humidity_ratio_from_relative_humidity(
        &self,
        p: f64,
        t: f64,
        rh: f64,
    ) -> Result<Derived, PropertyError> {
        finite(&[p, t, rh])?;
        check_pressure(p)?;
        check_temperature(t)?;
        within("relative humidity", "1", rh, (0.0, 1.0))?;
        let full = self.full_fraction(Dual::coordinate(p, 0), Dual::coordinate(t, 1))?;
        let y = full * Dual::coordinate(rh, 2);
        // The fraction that the largest humidity ratio has; beyond it there is next to no air.
        let most = self.water_fraction(Dual::constant(HUMIDITY_RATIO_RANGE.1)).v;
        within("mole fraction of water", "1", y.v, (0.0, most))?;
        Derived::from(self.humidity_ratio(y))
    }

    /// Relative humidity (0 to 1, or above in fog) from humidity ratio `w`; inverse of
    /// [`HumidAir::humidity_ratio_from_relative_humidity`].
    ///
    /// # Errors
    /// Input outside the range.
    pub fn relative_humidity(&self, p: f64, t: f64, w: f64) -> Result<Derived, PropertyError> {
        finite(&[p, t, w])?;
        check_pressure(p)?;
        check_temperature(t)?;
        check_humidity_ratio(w)?;
        let full = self.full_fraction(Dual::coordinate(p, 0), Dual::coordinate(t, 1))?;
        Derived::from(self.water_fraction(Dual::coordinate(w, 2)) / full)
    }

    /// Humidity ratio from the dew point, or the frost point below 273.16 K, `dew` (K). The
    /// second derivative is with respect to `dew`.
    ///
    /// # Errors
    /// As [`HumidAir::saturation_humidity_ratio`].
    pub fn humidity_ratio_from_dew_point(&self, p: f64, dew: f64) -> Result<Derived, PropertyError> {
        self.saturation_humidity_ratio(p, dew)
    }

    /// Dew point, or frost point below 273.16 K, in K, of humidity ratio `w` at `p`; derivatives
    /// by p (first) and w (third).
    ///
    /// # Errors
    /// Air drier than saturation at 173.15 K, or input outside the range.
    pub fn dew_point(&self, p: f64, w: f64) -> Result<Derived, PropertyError> {
        finite(&[p, w])?;
        check_pressure(p)?;
        check_humidity_ratio(w)?;
        let driest = self.saturation_humidity_ratio(p, SATURATION_MIN)?.value;
        within("humidity ratio", "kg/kg", w, (driest, HUMIDITY_RATIO_RANGE.1))?;
        let target = libm::log(self.water_fraction(Dual::constant(w)).v);
        let p = Dual::coordinate(p, 0);
        let t = root(SATURATION_MIN, water::T_MAX, 300.0, |t| {
            match self.saturation_fraction(p, Dual::coordinate(t, 1)) {
                Ok(y) => {
                    let [_, slope, _] = y.d;
                    Ok((target - libm::log(y.v), -slope / y.v))
                }
                // Above boiling: any humidity is below saturation.
                Err(PropertyError::NoSaturation) => Ok((f64::NEG_INFINITY, f64::NAN)),
                Err(error) => Err(error),
            }
        })?;
        let ws = self.humidity_ratio(self.saturation_fraction(p, Dual::coordinate(t, 1))?);
        let [by_p, by_t, _] = ws.d;
        Derived::from(Dual { v: t, d: [-by_p / by_t, 0.0, 1.0 / by_t] })
    }

    /// Humidity ratio from the thermodynamic wet-bulb temperature `wet_bulb` (K): the adiabatic
    /// saturation of air at `p` (Pa) and `t` (K) by liquid water of that temperature, or by ice
    /// below 273.16 K.
    ///
    /// # Errors
    /// A wet bulb above the dry bulb, or so low that the air would hold less than no water; input
    /// outside the range.
    pub fn humidity_ratio_from_wet_bulb(
        &self,
        p: f64,
        t: f64,
        wet_bulb: f64,
    ) -> Result<Derived, PropertyError> {
        finite(&[p, t, wet_bulb])?;
        check_pressure(p)?;
        check_temperature(t)?;
        within("wet-bulb temperature", "K", wet_bulb, (TEMPERATURE_RANGE.0, t))?;
        let p = Dual::coordinate(p, 0);
        let t_dry = Dual::coordinate(t, 1);
        let bulb = Dual::coordinate(wet_bulb, 2);
        let end = self.saturated(p, bulb, water::is_ice(wet_bulb))?;
        // Newton in W on the balance of adiabatic saturation, from the saturated end.
        let mut w = end.w.v;
        let slope = |w: f64| -> Result<Dual, PropertyError> {
            self.saturation_balance(
                Dual::constant(p.v),
                Dual::constant(t),
                Dual::coordinate(w, 0),
                &end.constant(),
            )
        };
        for _ in 0..50 {
            let miss = slope(w)?;
            let [gradient, _, _] = miss.d;
            let step = miss.v / gradient;
            w -= step;
            if !(w > -0.5 && w.is_finite()) {
                break;
            }
            if step.abs() <= 1e-15 + 1e-13 * w.abs() {
                // A saturated state may come out below zero by rounding only.
                let limit = if w > -1e-9 { w.max(0.0) } else { w };
                within("humidity ratio", "kg/kg", limit, (0.0, HUMIDITY_RATIO_RANGE.1))?;
                let miss = self.saturation_balance(p, t_dry, Dual::constant(w), &end)?;
                return Derived::from(Dual { v: limit, d: miss.d.map(|d| -d / gradient) });
            }
        }
        Err(PropertyError::NoConvergence)
    }

    /// Thermodynamic wet-bulb temperature in K; inverse of
    /// [`HumidAir::humidity_ratio_from_wet_bulb`]. Where both a liquid and an iced bulb would
    /// balance, the liquid one is given.
    ///
    /// # Errors
    /// Fog, a wet bulb below 213 K, or input outside the range.
    pub fn wet_bulb(&self, p: f64, t: f64, w: f64) -> Result<Derived, PropertyError> {
        finite(&[p, t, w])?;
        check_pressure(p)?;
        check_temperature(t)?;
        check_humidity_ratio(w)?;
        self.check_fog(p, t, w)?;
        let dry = (Dual::constant(p), Dual::constant(t), Dual::constant(w));
        let balance = |bulb: f64, ice: bool| match self.saturated(dry.0, Dual::coordinate(bulb, 1), ice) {
            Ok(end) => {
                let f = self.saturation_balance(dry.0, dry.1, dry.2, &end)?;
                let [_, slope, _] = f.d;
                Ok((f.v, slope))
            }
            Err(PropertyError::NoSaturation) => Ok((f64::NEG_INFINITY, f64::NAN)),
            Err(error) => Err(error),
        };
        let warm = t > water::T_TRIPLE && balance(water::T_TRIPLE, false)?.0 >= 0.0;
        let bulb = if warm {
            root(water::T_TRIPLE, t, 0.5 * (t + water::T_TRIPLE), |x| balance(x, false))?
        } else {
            let high = t.min(water::T_TRIPLE);
            let low = TEMPERATURE_RANGE.0;
            if balance(low, true)?.0 < 0.0 {
                return Err(PropertyError::OutOfRange {
                    quantity: "wet-bulb temperature",
                    unit: "K",
                    value: low,
                    min: low,
                    max: high,
                });
            }
            root(low, high, high, |x| balance(x, true))?
        };
        let (p, t, w) = (Dual::coordinate(p, 0), Dual::coordinate(t, 1), Dual::coordinate(w, 2));
        let end = self.saturated(p, Dual::constant(bulb), !warm)?;
        let miss = self.saturation_balance(p, t, w, &end)?;
        let (_, slope) = balance(bulb, !warm)?;
        Derived::from(Dual { v: bulb, d: miss.d.map(|d| -d / slope) })
    }

    /// Mole fraction of water in saturated air.
    fn saturation_fraction(&self, p: Dual, t: Dual) -> Result<Dual, PropertyError> {
        self.saturation_fraction_over(p, t, water::is_ice(t.v))
    }

    /// The same with the condensed phase given (they differ at the triple point only).
    fn saturation_fraction_over(&self, p: Dual, t: Dual, ice: bool) -> Result<Dual, PropertyError> {
        let p_sat = water::saturation_pressure(t);
        if p_sat.v >= p.v {
            return Err(PropertyError::NoSaturation);
        }
        let one = Dual::constant(1.0);
        // ln f of the pure condensed phase at p: saturated vapour, then its compression to p.
        let vapour = self.gas(p_sat, t, one)?.ln_fugacity;
        let (lift, henry) = if ice {
            ((p - p_sat) * water::ice_volume(t) * self.water_mass / (t * R), None)
        } else {
            let at = |p: Dual| {
                let g = water::liquid(p.v, t.v);
                let (by_p, by_t) = (p.chain(g.g, g.p), t.chain(0.0, g.t));
                by_p + by_t
            };
            let work = (at(p) - at(p_sat)) * self.water_mass;
            (work / (t * R), Some(water::henry(t, p_sat)))
        };
        let condensed = vapour + lift;
        let miss = |p: Dual, t: Dual, y: Dual, condensed: Dual, henry: Option<Dual>| {
            let dissolved = match henry {
                Some(k) => (-((-y + 1.0) * p / k) + 1.0).ln(),
                None => Dual::constant(0.0),
            };
            self.gas(p, t, y).map(|gas| gas.ln_fugacity - condensed - dissolved)
        };
        let frozen = |x: Dual| Dual::constant(x.v);
        let (pc, tc, cc, kc) = (frozen(p), frozen(t), frozen(condensed), henry.map(frozen));
        let mut y = p_sat.v / p.v;
        for _ in 0..60 {
            let f = miss(pc, tc, Dual::coordinate(y, 0), cc, kc)?;
            let [slope, _, _] = f.d;
            let step = f.v / slope;
            if step.abs() <= 1e-14 * y {
                let f = miss(p, t, Dual::constant(y), condensed, henry)?;
                return Ok(Dual { v: y, d: f.d.map(|d| -d / slope) });
            }
            // Newton with y kept between 0 and 1.
            y = (y - step).max(0.5 * y).min(0.5 * (1.0 + y));
        }
        // The last digits may alternate.
        let f = miss(pc, tc, Dual::coordinate(y, 0), cc, kc)?;
        let [slope, _, _] = f.d;
        if f.v.abs() > 1e-10 {
            return Err(PropertyError::NoConvergence);
        }
        let f = miss(p, t, Dual::constant(y), condensed, henry)?;
        Ok(Dual { v: y, d: f.d.map(|d| -d / slope) })
    }

    /// The mole fraction that counts as 100 % relative humidity; above boiling it exceeds 1.
    fn full_fraction(&self, p: Dual, t: Dual) -> Result<Dual, PropertyError> {
        match self.saturation_fraction(p, t) {
            Err(PropertyError::NoSaturation) => Ok(water::saturation_pressure(t) / p),
            other => other,
        }
    }

    /// Saturated air and the condensed water that saturates it, at the wet bulb.
    fn saturated(&self, p: Dual, bulb: Dual, ice: bool) -> Result<Saturated, PropertyError> {
        let w = self.humidity_ratio(self.saturation_fraction_over(p, bulb, ice)?);
        let h = self.mass(p, bulb, w)?.h * (w + 1.0);
        let h_water = if ice { self.ice_enthalpy(p, bulb)? } else { liquid_enthalpy(p, bulb) };
        Ok(Saturated { w, h, h_water })
    }

    /// Specific enthalpy of ice from the sublimation line: h'' - T (v'' - v) dp/dT, raised to p.
    fn ice_enthalpy(&self, p: Dual, t: Dual) -> Result<Dual, PropertyError> {
        // The slope of the slope of ln p is small: a central difference of the analytic slope
        // gives the heat capacity of ice to five digits.
        let at = |t: f64| -> Result<f64, PropertyError> {
            let p_sub = water::saturation_pressure(Dual::coordinate(t, 1));
            let [_, slope, _] = p_sub.d;
            let gas = self.gas(Dual::constant(p_sub.v), Dual::constant(t), Dual::constant(1.0))?;
            let v = water::ice_volume(Dual::constant(t)).v;
            let vapour = 1.0 / (gas.rho.v * self.water_mass);
            Ok(gas.h.v / self.water_mass - t * (vapour - v) * slope - p_sub.v * v)
        };
        let top = t.v.min(water::T_TRIPLE - 0.02);
        let (low, high) = (at(top - 0.01)?, at(top + 0.01)?);
        let slope = (high - low) / 0.02;
        let value = 0.5 * (low + high) + slope * (t.v - top);
        Ok(t.chain(value, slope) + p * water::ice_volume(t))
    }

    /// Balance of adiabatic saturation per kg of dry air: zero when air at (p, t, w) and
    /// (W' - w) of condensed water make the saturated end.
    fn saturation_balance(&self, p: Dual, t: Dual, w: Dual, end: &Saturated) -> Result<Dual, PropertyError> {
        // A wet bulb below what dry air can reach asks for a slightly negative w: go on linearly.
        let h = if w.v >= 0.0 {
            self.mass(p, t, w)?.h * (w + 1.0)
        } else {
            let zero = self.mass(p, t, Dual::constant(0.0))?.h;
            let vapour = self.mass(Dual::constant(p.v), Dual::constant(t.v), Dual::coordinate(0.0, 0))?;
            let [by_w, _, _] = vapour.h.d;
            zero + w * (by_w + zero.v)
        };
        Ok(h + (end.w - w) * end.h_water - end.h)
    }
}

/// The saturated end of adiabatic saturation, per kg of dry air and per kg of water.
struct Saturated {
    w: Dual,
    h: Dual,
    h_water: Dual,
}

impl Saturated {
    fn constant(&self) -> Saturated {
        let frozen = |x: Dual| Dual::constant(x.v);
        Saturated { w: frozen(self.w), h: frozen(self.h), h_water: frozen(self.h_water) }
    }
}

/// Specific enthalpy of liquid water.
fn liquid_enthalpy(p: Dual, t: Dual) -> Dual {
    let g = water::liquid(p.v, t.v);
    let h = g.g - t.v * g.t;
    p.chain(h, g.p - t.v * g.tp) + t.chain(0.0, -t.v * g.tt)
}
