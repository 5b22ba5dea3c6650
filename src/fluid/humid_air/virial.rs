//! Ideal-gas parts and virial coefficients of dry air, of water and of their pairs and triples.
//!
//! The virial coefficients of the pure substances are the zero-density limits of their published
//! equations of state; the cross coefficients are those of the humid-air model.

use super::dual::Dual;

/// A function of temperature: value, first and second derivative.
pub(super) type Curve = [f64; 3];

/// Molar gas constant, J/(mol K) (CODATA 2018, exact).
pub(super) const R: f64 = 8.314_462_618;

/// Reference pressure of the ideal-gas entropies, Pa.
pub(super) const P_REF: f64 = 1e5;

/// Dry air: E. W. Lemmon, R. T. Jacobsen, S. G. Penoncello, D. G. Friend, Thermodynamic
/// properties of air and mixtures of nitrogen, argon, and oxygen from 60 to 2000 K at pressures
/// to 2000 MPa, J. Phys. Chem. Ref. Data 29 (2000) 331-385. Maxcondentherm temperature in K and
/// density in mol/m³ reduce the equation; pairs (n, t) of its terms in the first and second power
/// of density, with the exponentials expanded at zero density.
mod air {
    pub const T: f64 = 132.631_2;
    pub const RHO: f64 = 10_447.7;
    pub const SECOND: [(f64, f64); 6] = [
        (0.118_160_747_229, 0.0),
        (0.713_116_392_079, 0.33),
        (-1.618_241_920_67, 1.01),
        (-0.101_365_037_912, 1.6),
        (-0.146_629_609_713, 3.6),
        (0.014_828_789_197_8, 3.5),
    ];
    pub const THIRD: [(f64, f64); 2] = [(0.071_414_017_897_1, 0.0), (0.101_365_037_912, 1.6)];
    /// Powers of the ideal part.
    pub const IDEAL: [(f64, f64); 6] = [
        (0.605_719_4e-7, -3.0),
        (-0.210_274_769e-4, -2.0),
        (-0.158_860_716e-3, -1.0),
        (-13.841_928_076, 0.0),
        (17.275_266_575, 1.0),
        (-0.195_363_42e-3, 1.5),
    ];
    pub const LOG: f64 = 2.490_888_032;
    /// (a, theta) of a ln(1 - exp(-theta tau)).
    pub const EINSTEIN: [(f64, f64); 2] = [(0.791_309_509, 25.363_65), (0.212_236_768, 16.907_41)];
    /// (a, theta) of a ln(2/3 + exp(theta tau)).
    pub const LAST: (f64, f64) = (-0.197_938_904, 87.312_79);
}

/// Water: W. Wagner, A. Pruss, The IAPWS formulation 1995 for the thermodynamic properties of
/// ordinary water substance for general and scientific use, J. Phys. Chem. Ref. Data 31 (2002)
/// 387-535. As for dry air; the two non-analytic terms add less than 1e-12 to the second
/// coefficient below 640 K and are left out.
mod water {
    pub const T: f64 = 647.096;
    /// 322 kg/m³ over 0.018015268 kg/mol.
    pub const RHO: f64 = 322.0 / 0.018_015_268;
    pub const SECOND: [(f64, f64); 7] = [
        (0.012_533_547_935_523, -0.5),
        (7.895_763_472_282_8, 0.875),
        (-8.780_320_330_356_1, 1.0),
        (-0.668_565_723_079_65, 4.0),
        (0.204_338_109_509_65, 6.0),
        (-6.621_260_503_968_7e-5, 12.0),
        (-0.107_936_009_089_32, 7.0),
    ];
    pub const THIRD: [(f64, f64); 10] = [
        (0.318_025_093_454_18, 0.5),
        (-0.261_455_338_593_58, 0.75),
        (-0.192_327_211_560_02, 1.0),
        (-0.257_090_430_034_38, 5.0),
        (0.017_611_491_008_752, 1.0),
        (0.221_322_951_675_46, 9.0),
        (-0.402_476_697_635_28, 10.0),
        (0.668_565_723_079_65, 4.0),
        (-0.204_338_109_509_65, 6.0),
        (6.621_260_503_968_7e-5, 12.0),
    ];
    /// n1 and n2 put u = 0 and s = 0 at the liquid at the triple point.
    pub const LEAD: (f64, f64) = (-8.320_446_483_749_7, 6.683_210_527_593_2);
    pub const LOG: f64 = 3.006_32;
    pub const EINSTEIN: [(f64, f64); 5] = [
        (0.012_436, 1.287_289_67),
        (0.973_15, 3.537_342_22),
        (1.279_50, 7.740_737_08),
        (0.969_56, 9.244_377_96),
        (0.248_73, 27.507_510_5),
    ];
}

/// Value, slope and curvature of sum n tau^k, tau = `t_red`/`t`, times `scale`.
fn powers(terms: &[(f64, f64)], t_red: f64, t: f64, scale: f64) -> Curve {
    let tau = t_red / t;
    let mut out = [0.0; 3];
    for &(n, k) in terms {
        let f = scale * n * libm::pow(tau, k);
        out[0] += f;
        out[1] -= k * f / t;
        out[2] += k * (k + 1.0) * f / (t * t);
    }
    out
}

/// The virial coefficients at one temperature, m³/mol and m⁶/mol² (a = dry air, w = water).
#[derive(Clone, Copy, Debug)]
pub(super) struct Virial {
    second: [Curve; 3],
    third: [Curve; 4],
}

impl Virial {
    /// At temperature `t` in K. Cross coefficients: A. H. Harvey, P. H. Huang, First-principles
    /// calculation of the air-water second virial coefficient, Int. J. Thermophys. 28 (2007)
    /// 556-565 (B_aw); R. W. Hyland, A. Wexler, Formulations for the thermodynamic properties of
    /// the saturated phases of H2O from 173.15 K to 473.15 K, ASHRAE Trans. 89 (1983) 500-535
    /// (C_aaw, C_aww), in the form of S. Herrmann, H.-J. Kretzschmar, D. P. Gatley,
    /// Thermodynamic properties of real moist air, dry air, steam, water, and ice, ASHRAE
    /// RP-1485 (2009) and IAPWS G9-12.
    pub fn at(t: f64) -> Virial {
        let aa = powers(&air::SECOND, air::T, t, 1.0 / air::RHO);
        let aw = powers(&[(66.5687, 0.237), (-238.834, 1.048), (-176.755, 3.183)], 100.0, t, 1e-6);
        let ww = powers(&water::SECOND, water::T, t, 1.0 / water::RHO);
        let aaa = powers(&air::THIRD, air::T, t, 2.0 / (air::RHO * air::RHO));
        let aaw = powers(
            &[
                (0.482737e-3, 0.0),
                (0.105678e-2, 1.0),
                (-0.656394e-2, 2.0),
                (0.294442e-1, 3.0),
                (-0.319317e-1, 4.0),
            ],
            100.0,
            t,
            1e-6,
        );
        let [e, e1, e2] =
            powers(&[(-10.728876, 0.0), (34.7802, 1.0), (-38.3383, 2.0), (33.406, 3.0)], 100.0, t, 1.0);
        let f = -1e-6 * libm::exp(e);
        let aww = [f, f * e1, f * (e2 + e1 * e1)];
        let www = powers(&water::THIRD, water::T, t, 2.0 / (water::RHO * water::RHO));
        Virial { second: [aa, aw, ww], third: [aaa, aaw, aww, www] }
    }

    /// Second coefficients aa, aw, ww, or their first temperature derivatives (`order` 1).
    fn second(&self, t: Dual, order: usize) -> [Dual; 3] {
        self.second.map(|c| lift(c, t, order))
    }

    /// Third coefficients aaa, aaw, aww, www, or their first temperature derivatives.
    fn third(&self, t: Dual, order: usize) -> [Dual; 4] {
        self.third.map(|c| lift(c, t, order))
    }

    /// B of the mixture with mole fraction `y` of water.
    pub fn b(&self, t: Dual, y: Dual, order: usize) -> Dual {
        let x = -y + 1.0;
        let [aa, aw, ww] = self.second(t, order);
        x * x * aa + x * y * aw * 2.0 + y * y * ww
    }

    /// C of the mixture.
    pub fn c(&self, t: Dual, y: Dual, order: usize) -> Dual {
        let x = -y + 1.0;
        let [aaa, aaw, aww, www] = self.third(t, order);
        x * x * x * aaa + x * x * y * aaw * 3.0 + x * y * y * aww * 3.0 + y * y * y * www
    }

    /// Sum over j of y_j B_wj.
    pub fn b_water(&self, t: Dual, y: Dual) -> Dual {
        let [_, aw, ww] = self.second(t, 0);
        (-y + 1.0) * aw + y * ww
    }

    /// Sum over j and k of y_j y_k C_wjk.
    pub fn c_water(&self, t: Dual, y: Dual) -> Dual {
        let x = -y + 1.0;
        let [_, aaw, aww, www] = self.third(t, 0);
        x * x * aaw + x * y * aww * 2.0 + y * y * www
    }
}

/// A curve as a function of `t`: its value, or its first derivative.
fn lift(curve: Curve, t: Dual, order: usize) -> Dual {
    let [f, f1, f2] = curve;
    if order == 0 { t.chain(f, f1) } else { t.chain(f1, f2) }
}

/// Ideal-gas enthalpy in J/mol, entropy at [`P_REF`] in J/(mol K), heat capacity in J/(mol K).
#[derive(Clone, Copy, Debug)]
pub(super) struct Ideal {
    pub h: f64,
    pub s: f64,
    pub cp: f64,
}

/// From phi = alpha0 - ln delta and its products tau phi', tau² phi'' at `t`.
fn ideal(t: f64, rho_red: f64, phi: f64, phi1: f64, phi2: f64) -> Ideal {
    let delta = P_REF / (R * t * rho_red);
    Ideal { h: R * t * (1.0 + phi1), s: R * (phi1 - phi - libm::log(delta)), cp: R * (1.0 - phi2) }
}

/// Adds n ln(1 - exp(-theta tau)) and its products with tau.
fn einstein(terms: &[(f64, f64)], tau: f64, phi: &mut [f64; 3]) {
    for &(n, theta) in terms {
        let x = theta * tau;
        let e = libm::exp(-x);
        phi[0] += n * libm::log1p(-e);
        phi[1] += n * x * e / (1.0 - e);
        phi[2] -= n * x * x * e / ((1.0 - e) * (1.0 - e));
    }
}

/// Dry air on the equation's own datum.
pub(super) fn ideal_air(t: f64) -> Ideal {
    let tau = air::T / t;
    let mut phi = [air::LOG * libm::log(tau), air::LOG, -air::LOG];
    for (n, k) in air::IDEAL {
        let f = n * libm::pow(tau, k);
        phi[0] += f;
        phi[1] += k * f;
        phi[2] += k * (k - 1.0) * f;
    }
    einstein(&air::EINSTEIN, tau, &mut phi);
    let (n, theta) = air::LAST;
    let x = theta * tau;
    // ln(2/3 + e^x) = x + ln(1 + 2/3 e^-x); e^-x never overflows.
    let e = 2.0 / 3.0 * libm::exp(-x);
    phi[0] += n * (x + libm::log1p(e));
    phi[1] += n * x / (1.0 + e);
    phi[2] += n * x * x * e / ((1.0 + e) * (1.0 + e));
    let [p, p1, p2] = phi;
    ideal(t, air::RHO, p, p1, p2)
}

/// Water with u = 0 and s = 0 for the liquid at the triple point.
pub(super) fn ideal_water(t: f64) -> Ideal {
    let tau = water::T / t;
    let (n1, n2) = water::LEAD;
    let mut phi = [n1 + n2 * tau + water::LOG * libm::log(tau), n2 * tau + water::LOG, -water::LOG];
    einstein(&water::EINSTEIN, tau, &mut phi);
    let [p, p1, p2] = phi;
    ideal(t, water::RHO, p, p1, p2)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// IAPWS G9-12 and G8-10 at 200 K and 300 K, as PyPI iapws 1.5.5 evaluates them.
    #[test]
    fn coefficients() {
        for (t, second, third) in [
            (
                200.0,
                [-3.927_225_668e-5, -7.848_742_778e-5, -1.862_827_370e-2],
                [2.271_130_633e-9, 1.054_935_75e-9, -3.498_726_342e-6, -2.639_597_065e-4],
            ),
            (
                300.0,
                [-7.762_109_771e-6, -2.956_727_474e-5, -1.201_299_281e-3],
                [1.811_666_379e-9, 8.019_777_407e-10, -1.155_527_837e-7, -4.204_191_964e-6],
            ),
        ] {
            let virial = Virial::at(t);
            for (curve, want) in virial.second.iter().chain(&virial.third).zip(second.iter().chain(&third)) {
                // The water coefficients differ by the two molar masses in use (2e-7).
                assert!((curve[0] / want - 1.0).abs() < 2e-6, "{} {want} at {t}", curve[0]);
            }
        }
        let virial = Virial::at(300.0);
        assert!((virial.second[1][1] / 2.800_973_604e-7 - 1.0).abs() < 1e-9);
        assert!((virial.third[2][1] / 2.613_632_778e-9 - 1.0).abs() < 1e-9);
        assert!((virial.third[2][2] / -7.513_345_818e-11 - 1.0).abs() < 1e-9);
    }

    #[test]
    fn curves_and_ideal_parts_are_their_own_derivatives() {
        for t in [230.0, 300.0, 550.0] {
            let h = 1e-3 * t;
            let (low, mid, high) = (Virial::at(t - h), Virial::at(t), Virial::at(t + h));
            let all = |v: &Virial| v.second.into_iter().chain(v.third).collect::<Vec<_>>();
            for ((l, m), u) in all(&low).into_iter().zip(all(&mid)).zip(all(&high)) {
                for k in 0..2 {
                    let slope = (u[k] - l[k]) / (2.0 * h);
                    assert!((slope - m[k + 1]).abs() < 2e-3 * m[k + 1].abs(), "{slope} {}", m[k + 1]);
                }
            }
            for f in [ideal_air, ideal_water] {
                let (l, m, u) = (f(t - h), f(t), f(t + h));
                assert!(((u.h - l.h) / (2.0 * h) / m.cp - 1.0).abs() < 1e-5);
                assert!(((u.s - l.s) / (2.0 * h) * t / m.cp - 1.0).abs() < 1e-5);
            }
        }
    }
}
