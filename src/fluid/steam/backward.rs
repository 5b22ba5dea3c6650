//! First estimates of temperature from (p, h) and (p, s) in regions 1 and 2.
//!
//! Source: IAPWS R7-97(2012), backward equations (11), (13) and (20) to (27). They are within
//! 25 mK of the basic equations; the flash takes them from there to the basic equations' own root.

use super::basic::Terms;
use super::tables::{BOUNDARY_2BC, T_PH_1, T_PH_2A, T_PH_2B, T_PH_2C, T_PS_1, T_PS_2A, T_PS_2B, T_PS_2C};

/// Highest pressure of subregion 2a, MPa.
const PRESSURE_2A: f64 = 4.0;
/// Entropy on the boundary between subregions 2b and 2c, kJ/(kg K).
const ENTROPY_2BC: f64 = 5.85;

/// Region 1: T (K) from `p` (Pa) and `h` (J/kg), eq. (11).
pub(super) fn enthalpy_1(p: f64, h: f64) -> f64 {
    const TERMS: Terms<20> = Terms::of(&T_PH_1, 0, 0);
    TERMS.sum(p * 1e-6, h * 1e-3 / 2500.0 + 1.0)
}

/// Region 1: T (K) from `p` (Pa) and `s` (J/(kg K)), eq. (13).
pub(super) fn entropy_1(p: f64, s: f64) -> f64 {
    const TERMS: Terms<20> = Terms::of(&T_PS_1, 0, 0);
    TERMS.sum(p * 1e-6, s * 1e-3 + 2.0)
}

/// Region 2: T (K) from `p` (Pa) and `h` (J/kg), eqs. (20) to (24).
pub(super) fn enthalpy_2(p: f64, h: f64) -> f64 {
    const TERMS_A: Terms<34> = Terms::of(&T_PH_2A, 0, 0);
    const TERMS_B: Terms<38> = Terms::of(&T_PH_2B, 0, 0);
    const TERMS_C: Terms<23> = Terms::of(&T_PH_2C, 7, 0);
    let pi = p * 1e-6;
    let h = h * 1e-3;
    let eta = h / 2000.0;
    if pi <= PRESSURE_2A {
        return TERMS_A.sum(pi, eta - 2.1);
    }
    let [n3, n4, n5] = BOUNDARY_2BC;
    if pi < n5 || h >= n4 + ((pi - n5) / n3).sqrt() {
        TERMS_B.sum(pi - 2.0, eta - 2.6)
    } else {
        TERMS_C.sum(pi + 25.0, eta - 1.8)
    }
}

/// Region 2: T (K) from `p` (Pa) and `s` (J/(kg K)), eqs. (25) to (27).
#[allow(clippy::approx_constant, reason = "0.7853 kJ/(kg K) is a reducing entropy and not a part of pi")]
pub(super) fn entropy_2(p: f64, s: f64) -> f64 {
    const TERMS_A: Terms<46> = Terms::of(&T_PS_2A, 6, 27);
    const TERMS_B: Terms<44> = Terms::of(&T_PS_2B, 6, 0);
    const TERMS_C: Terms<30> = Terms::of(&T_PS_2C, 2, 0);
    let pi = p * 1e-6;
    let s = s * 1e-3;
    if pi <= PRESSURE_2A {
        TERMS_A.sum(pi.sqrt().sqrt(), s / 2.0 - 2.0)
    } else if s >= ENTROPY_2BC {
        TERMS_B.sum(pi, 10.0 - s / 0.7853)
    } else {
        TERMS_C.sum(pi, 2.0 - s / 2.9251)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(estimate: fn(f64, f64) -> f64, printed: &[(f64, f64, f64)]) {
        for &(p, y, t) in printed {
            let found = estimate(p * 1e6, y * 1e3);
            let ninth = 10f64.powf(t.log10().floor() - 8.0);
            assert!((found - t).abs() <= 0.5001 * ninth, "{p} {y}: {found} {t}");
        }
    }

    /// R7-97(2012), Table 7: p (MPa), h (kJ/kg), T (K).
    #[test]
    fn region_1_from_enthalpy() {
        check(enthalpy_1, &[(3.0, 500.0, 391.798509), (80.0, 500.0, 378.108626), (80.0, 1500.0, 611.041229)]);
    }

    /// R7-97(2012), Table 9: p (MPa), s (kJ/(kg K)), T (K).
    #[test]
    fn region_1_from_entropy() {
        check(entropy_1, &[(3.0, 0.5, 307.842258), (80.0, 0.5, 309.979785), (80.0, 3.0, 565.899909)]);
    }

    /// R7-97(2012), Table 24: p (MPa), h (kJ/kg), T (K).
    #[test]
    fn region_2_from_enthalpy() {
        check(
            enthalpy_2,
            &[
                (0.001, 3000.0, 534.433241),
                (3.0, 3000.0, 575.37337),
                (3.0, 4000.0, 1010.77577),
                (5.0, 3500.0, 801.299102),
                (5.0, 4000.0, 1015.31583),
                (25.0, 3500.0, 875.279054),
                (40.0, 2700.0, 743.056411),
                (60.0, 2700.0, 791.137067),
                (60.0, 3200.0, 882.75686),
            ],
        );
    }

    /// R7-97(2012), Table 29: p (MPa), s (kJ/(kg K)), T (K).
    #[test]
    fn region_2_from_entropy() {
        check(
            entropy_2,
            &[
                (0.1, 7.5, 399.517097),
                (0.1, 8.0, 514.127081),
                (2.5, 8.0, 1039.84917),
                (8.0, 6.0, 600.48404),
                (8.0, 7.5, 1064.95556),
                (90.0, 6.0, 1038.01126),
                (20.0, 5.75, 697.992849),
                (80.0, 5.25, 854.011484),
                (80.0, 5.75, 949.017998),
            ],
        );
    }
}
