//! First estimates of temperature from (p, h) and (p, s) in regions 1 and 2.
//!
//! Source: IAPWS R7-97(2012), backward equations (11), (13) and (20) to (27). They are within
//! 25 mK of the basic equations; the flash takes them from there to the basic equations' own root.

use super::basic::{Term, powers, sum, terms};
use super::tables::{BOUNDARY_2BC, T_PH_1, T_PH_2A, T_PH_2B, T_PH_2C, T_PS_1, T_PS_2A, T_PS_2B, T_PS_2C};

/// Highest pressure of subregion 2a, MPa.
const PRESSURE_2A: f64 = 4.0;
/// Entropy on the boundary between subregions 2b and 2c, kJ/(kg K).
const ENTROPY_2BC: f64 = 5.85;

/// Region 1: T (K) from `p` (Pa) and `h` (J/kg), eq. (11).
pub(super) fn enthalpy_1(p: f64, h: f64) -> f64 {
    const TERMS: [Term; 20] = terms(&T_PH_1, 0, 0);
    sum(&TERMS, &powers(p * 1e-6, 0, 6), &powers(h * 1e-3 / 2500.0 + 1.0, 0, 32))
}

/// Region 1: T (K) from `p` (Pa) and `s` (J/(kg K)), eq. (13).
pub(super) fn entropy_1(p: f64, s: f64) -> f64 {
    const TERMS: [Term; 20] = terms(&T_PS_1, 0, 0);
    sum(&TERMS, &powers(p * 1e-6, 0, 4), &powers(s * 1e-3 + 2.0, 0, 32))
}

/// Region 2: T (K) from `p` (Pa) and `h` (J/kg), eqs. (20) to (24).
pub(super) fn enthalpy_2(p: f64, h: f64) -> f64 {
    const TERMS_A: [Term; 34] = terms(&T_PH_2A, 0, 0);
    const TERMS_B: [Term; 38] = terms(&T_PH_2B, 0, 0);
    const TERMS_C: [Term; 23] = terms(&T_PH_2C, 7, 0);
    let pi = p * 1e-6;
    let h = h * 1e-3;
    let eta = h / 2000.0;
    if pi <= PRESSURE_2A {
        return sum(&TERMS_A, &powers(pi, 0, 7), &powers(eta - 2.1, 0, 44));
    }
    let [n3, n4, n5] = BOUNDARY_2BC;
    if pi < n5 || h >= n4 + ((pi - n5) / n3).sqrt() {
        sum(&TERMS_B, &powers(pi - 2.0, 0, 9), &powers(eta - 2.6, 0, 40))
    } else {
        sum(&TERMS_C, &powers(pi + 25.0, 7, 6), &powers(eta - 1.8, 0, 22))
    }
}

/// Region 2: T (K) from `p` (Pa) and `s` (J/(kg K)), eqs. (25) to (27).
pub(super) fn entropy_2(p: f64, s: f64) -> f64 {
    const TERMS_A: [Term; 46] = terms(&T_PS_2A, 6, 27);
    const TERMS_B: [Term; 44] = terms(&T_PS_2B, 6, 0);
    const TERMS_C: [Term; 30] = terms(&T_PS_2C, 2, 0);
    let pi = p * 1e-6;
    let s = s * 1e-3;
    if pi <= PRESSURE_2A {
        sum(&TERMS_A, &powers(pi.sqrt().sqrt(), 6, 6), &powers(s / 2.0 - 2.0, 27, 18))
    } else if s >= ENTROPY_2BC {
        sum(&TERMS_B, &powers(pi, 6, 5), &powers(10.0 - s / 0.7853, 0, 12))
    } else {
        sum(&TERMS_C, &powers(pi, 2, 7), &powers(2.0 - s / 2.9251, 0, 5))
    }
}
