//! Condensed water: what the steam formulation says of the liquid and its saturation, and ice.

use super::dual::Dual;
pub(in crate::fluid) use crate::fluid::steam::{LiquidWater, liquid, saturation_liquid};
use crate::fluid::{Datum, Element};

/// Triple-point temperature of water, K.
pub(in crate::fluid) const T_TRIPLE: f64 = 273.16;
/// Upper end of region 1 and of the humid-air range, K.
pub(in crate::fluid) const T_MAX: f64 = 623.15;

/// Sublimation pressure over ice in Pa and its slope: IAPWS R14-08(2011), eq. 6.
fn sublimation(t: f64) -> (f64, f64) {
    let theta = t / T_TRIPLE;
    let (mut sum, mut slope) = (0.0, 0.0);
    for (a, b) in [(-21.2144006, 0.00333333333), (27.3203819, 1.20666667), (-6.1059813, 1.70333333)] {
        let term = a * libm::pow(theta, b - 1.0);
        sum += term;
        slope += term * (b - 1.0) / t;
    }
    let p = 611.657 * libm::exp(sum);
    (p, p * slope)
}

/// Whether the condensed phase in equilibrium at `t` is ice.
pub(super) fn is_ice(t: f64) -> bool {
    t < T_TRIPLE
}

/// Pressure of pure saturated vapour over liquid water, or over ice below the triple point.
pub(super) fn saturation_pressure(t: Dual) -> Dual {
    let (p, slope) = if is_ice(t.v) { sublimation(t.v) } else { saturation_liquid(t.v) };
    t.chain(p, slope)
}

/// Specific volume of ice in m³/kg, linear about the triple point with the values of IAPWS
/// R10-06(2009): 1.0909e-3 m³/kg and an expansion of 1.59e-4 1/K (compression neglected: 1e-4 at
/// 1 MPa).
pub(super) fn ice_volume(t: Dual) -> Dual {
    (t - T_TRIPLE) * (1.0909e-3 * 1.59e-4) + 1.0909e-3
}

/// Henry's constant of dry air in liquid water in Pa: R. Fernandez-Prini, J. L. Alvarez, A. H.
/// Harvey, Henry's constants and vapor-liquid distribution constants for gaseous solutes in H2O
/// and D2O at high temperatures, J. Phys. Chem. Ref. Data 32 (2003) 903-916, nitrogen, oxygen and
/// argon weighted by the composition of air.
pub(super) fn henry(t: Dual, p_sat: Dual) -> Dual {
    let tr = t * (1.0 / 647.096);
    let tau = -tr + 1.0;
    let warm = tau.powf(0.355);
    let cold = tr.powf(-0.41) * tau.exp();
    let share = |x: f64, a: f64, b: f64, c: f64| {
        let exponent = (warm * b + a) / tr + cold * c;
        (-exponent).exp() * x
    };
    let sum = share(0.7812, -9.67578, 4.72162, 11.70585)
        + share(0.2095, -9.44833, 4.43822, 11.42005)
        + share(0.0093, -8.40954, 4.29587, 10.52779);
    p_sat / sum
}

/// What joins liquid water of IAPWS-IF97 to the absolute datum: -285.830 kJ/mol and
/// 69.95 J/(mol K) at 298.15 K and 0.1 MPa (CODATA key values, 1989).
pub(in crate::fluid) fn absolute_offset() -> Datum {
    let molar_mass = 2.0 * Element::H.molar_mass() + Element::O.molar_mass();
    let t = 298.15;
    let liquid = liquid(1e5, t);
    Datum {
        enthalpy: -285_830.0 / molar_mass - (liquid.g - t * liquid.t),
        entropy: 69.95 / molar_mass + liquid.t,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// IAPWS R7-97(2012), Tables 5 and 35; IAPWS R14-08(2011), section 3.
    #[test]
    fn published_values() {
        let g = liquid(3e6, 300.0);
        assert!((g.p - 0.100215168e-2).abs() < 5e-12);
        assert!((g.g - 300.0 * g.t - 0.115331273e6).abs() < 5e-4);
        assert!((-g.t - 0.392294792e3).abs() < 5e-7);
        assert!((-300.0 * g.tt - 0.417301218e4).abs() < 5e-6);
        for (t, p) in [(300.0, 0.353658941e4), (500.0, 0.263889776e7), (600.0, 0.123443146e8)] {
            assert!((saturation_liquid(t).0 / p - 1.0).abs() < 2e-9);
        }
        assert!((sublimation(230.0).0 - 8.94735).abs() < 5e-6);
    }

    #[test]
    fn slopes() {
        let h = 1e-3;
        for (f, t) in [
            (saturation_liquid as fn(f64) -> (f64, f64), 280.0),
            (saturation_liquid, 450.0),
            (sublimation, 230.0),
        ] {
            let slope = (f(t + h).0 - f(t - h).0) / (2.0 * h);
            assert!((slope / f(t).1 - 1.0).abs() < 1e-7);
        }
        let (p, t) = (4e6, 330.0);
        let g = liquid(p, t);
        let (a, b) = (liquid(p, t - h), liquid(p, t + h));
        assert!(((b.p - a.p) / (2.0 * h) / g.tp - 1.0).abs() < 1e-6);
        let (a, b) = (liquid(p - 1e3, t), liquid(p + 1e3, t));
        assert!(((b.p - a.p) / 2e3 / g.pp - 1.0).abs() < 1e-4);
    }
}
