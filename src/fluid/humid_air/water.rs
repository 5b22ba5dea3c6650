//! Condensed water: saturation and sublimation pressure, and liquid water of IAPWS-IF97 region 1.

use super::dual::Dual;
use crate::fluid::{Datum, Element};

/// Triple-point temperature of water, K.
pub(in crate::fluid) const T_TRIPLE: f64 = 273.16;
/// Upper end of region 1 and of the humid-air range, K.
pub(in crate::fluid) const T_MAX: f64 = 623.15;

/// Specific gas constant of IAPWS-IF97, J/(kg K).
const R: f64 = 461.526;

/// (I, J, n) of the basic equation of region 1: IAPWS R7-97(2012), Table 2.
const REGION_1: [(i32, i32, f64); 34] = [
    (0, -2, 0.14632971213167),
    (0, -1, -0.84548187169114),
    (0, 0, -0.37563603672040e1),
    (0, 1, 0.33855169168385e1),
    (0, 2, -0.95791963387872),
    (0, 3, 0.15772038513228),
    (0, 4, -0.16616417199501e-1),
    (0, 5, 0.81214629983568e-3),
    (1, -9, 0.28319080123804e-3),
    (1, -7, -0.60706301565874e-3),
    (1, -1, -0.18990068218419e-1),
    (1, 0, -0.32529748770505e-1),
    (1, 1, -0.21841717175414e-1),
    (1, 3, -0.52838357969930e-4),
    (2, -3, -0.47184321073267e-3),
    (2, 0, -0.30001780793026e-3),
    (2, 1, 0.47661393906987e-4),
    (2, 3, -0.44141845330846e-5),
    (2, 17, -0.72694996297594e-15),
    (3, -4, -0.31679644845054e-4),
    (3, 0, -0.28270797985312e-5),
    (3, 6, -0.85205128120103e-9),
    (4, -5, -0.22425281908000e-5),
    (4, -2, -0.65171222895601e-6),
    (4, 10, -0.14341729937924e-12),
    (5, -8, -0.40516996860117e-6),
    (8, -11, -0.12734301741641e-8),
    (8, -6, -0.17424871230634e-9),
    (21, -29, -0.68762131295531e-18),
    (23, -31, 0.14478307828521e-19),
    (29, -38, 0.26335781662795e-22),
    (30, -39, -0.11947622640071e-22),
    (31, -40, 0.18228094581404e-23),
    (32, -41, -0.93537087292458e-25),
];

/// Specific Gibbs energy of liquid water and its derivatives in SI, with h = 0 and s = 0 near the
/// triple point as IAPWS-IF97 has them.
#[derive(Clone, Copy, Debug)]
pub(in crate::fluid) struct Gibbs {
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

/// Liquid water at `p` (Pa) and `t` (K); region 1 reaches 273.15 to 623.15 K and 100 MPa.
pub(in crate::fluid) fn liquid(p: f64, t: f64) -> Gibbs {
    let (p_star, t_star) = (16.53e6, 1386.0);
    let a = 7.1 - p / p_star;
    let tau = t_star / t;
    let b = tau - 1.222;
    let (mut f, mut fp, mut ft, mut fpp, mut fpt, mut ftt) = (0.0, 0.0, 0.0, 0.0, 0.0, 0.0);
    for (i, j, n) in REGION_1 {
        let term = n * power(a, i) * power(b, j);
        let (i, j) = (f64::from(i), f64::from(j));
        f += term;
        fp -= i * term / a;
        ft += j * term / b;
        fpp += i * (i - 1.0) * term / (a * a);
        fpt -= i * j * term / (a * b);
        ftt += j * (j - 1.0) * term / (b * b);
    }
    Gibbs {
        g: R * t * f,
        t: R * (f - tau * ft),
        p: R * t * fp / p_star,
        tt: R * tau * tau * ftt / t,
        tp: R * (fp - tau * fpt) / p_star,
        pp: R * t * fpp / (p_star * p_star),
    }
}

/// Integer power by repeated squaring.
fn power(x: f64, n: i32) -> f64 {
    let (mut base, mut left, mut out) = (if n < 0 { 1.0 / x } else { x }, n.unsigned_abs(), 1.0);
    while left > 0 {
        if left & 1 == 1 {
            out *= base;
        }
        base *= base;
        left >>= 1;
    }
    out
}

/// Saturation pressure over liquid water in Pa and its slope: IAPWS R7-97(2012), eq. 30.
pub(in crate::fluid) fn saturation_liquid(t: f64) -> (f64, f64) {
    const N: [f64; 10] = [
        0.11670521452767e4,
        -0.72421316703206e6,
        -0.17073846940092e2,
        0.12020824702470e5,
        -0.32325550322333e7,
        0.14915108613530e2,
        -0.48232657361591e4,
        0.40511340542057e6,
        -0.23855557567849,
        0.65017534844798e3,
    ];
    let [n1, n2, n3, n4, n5, n6, n7, n8, n9, n10] = N;
    let theta = t + n9 / (t - n10);
    let slope = 1.0 - n9 / ((t - n10) * (t - n10));
    let a = theta * theta + n1 * theta + n2;
    let b = n3 * theta * theta + n4 * theta + n5;
    let c = n6 * theta * theta + n7 * theta + n8;
    let beta = 2.0 * c / (-b + (b * b - 4.0 * a * c).sqrt());
    // The quadratic a beta² + b beta + c = 0 differentiated by theta.
    let da = 2.0 * theta + n1;
    let db = 2.0 * n3 * theta + n4;
    let dc = 2.0 * n6 * theta + n7;
    let d_beta = -(da * beta * beta + db * beta + dc) / (2.0 * a * beta + b) * slope;
    let b3 = beta * beta * beta;
    (1e6 * b3 * beta, 4e6 * b3 * d_beta)
}

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
