//! Sodium chloride in water by Pitzer's equations.

use super::Saline;

/// Molar mass of NaCl from the atomic masses of this package, kg/mol.
pub(super) const MOLAR_MASS: f64 = 58.44e-3;

/// Molar gas constant, J/(mol K) (CODATA 2018).
const R: f64 = 8.314_462_618;

/// Temperature of the parameters' reference, K.
const T_REF: f64 = 298.15;

/// Pressure at which the parameters hold, Pa.
const P_REF: f64 = 1e5;

/// Value, first and second temperature derivative.
type Curve = [f64; 3];

/// The three ion-interaction parameters as functions of temperature: L. F. Silvester, K. S.
/// Pitzer, Thermodynamics of electrolytes. 8. High-temperature properties, including enthalpy and
/// heat capacity, with application to sodium chloride, J. Phys. Chem. 81 (1977) 1822-1828.
/// q1 + q2 (1/T - 1/Tr) + q3 ln(T/Tr) + q4 (T - Tr) + q5 (T² - Tr²).
const BETA_0: [f64; 5] = [0.0765, -777.03, -4.4706, 0.008946, -3.3158e-6];
const BETA_1: [f64; 5] = [0.2664, 0.0, 0.0, 6.1608e-5, 1.0715e-6];
const C_PHI: [f64; 5] = [0.00127, 33.317, 0.09421, -4.655e-5, 0.0];

fn parameter(q: [f64; 5], t: f64) -> Curve {
    let [q1, q2, q3, q4, q5] = q;
    [
        q1 + q2 * (1.0 / t - 1.0 / T_REF)
            + q3 * libm::log(t / T_REF)
            + q4 * (t - T_REF)
            + q5 * (t * t - T_REF * T_REF),
        -q2 / (t * t) + q3 / t + q4 + 2.0 * q5 * t,
        2.0 * q2 / (t * t * t) - q3 / (t * t) + 2.0 * q5,
    ]
}

/// Debye-Hückel slope for the osmotic coefficient, (kg/mol)^1/2: N. Møller, The prediction of
/// mineral solubilities in natural waters: a chemical equilibrium model for the
/// Na-Ca-Cl-SO4-H2O system, Geochim. Cosmochim. Acta 52 (1988) 821-837.
fn debye_hueckel(t: f64) -> Curve {
    let (cold, hot) = (t - 263.0, 680.0 - t);
    [
        3.36901532e-1 - 6.32100430e-4 * t + 9.14252359 / t - 1.35143986e-2 * libm::log(t)
            + 2.26089488e-3 / cold
            + 1.92118597e-6 * t * t
            + 4.52586464e1 / hot,
        -6.32100430e-4 - 9.14252359 / (t * t) - 1.35143986e-2 / t - 2.26089488e-3 / (cold * cold)
            + 2.0 * 1.92118597e-6 * t
            + 4.52586464e1 / (hot * hot),
        2.0 * 9.14252359 / (t * t * t)
            + 1.35143986e-2 / (t * t)
            + 2.0 * 2.26089488e-3 / (cold * cold * cold)
            + 2.0 * 1.92118597e-6
            + 2.0 * 4.52586464e1 / (hot * hot * hot),
    ]
}

/// Chemical potential of the salt at infinite dilution (1 mol/kg standard state) relative to
/// 298.15 K, J/mol: from its heat capacity, which is that of the crystal (45.94 + 0.01632 T, K. K.
/// Kelley, US Bureau of Mines Bull. 584, 1960) plus the one of solution of Silvester & Pitzer.
fn standard_potential(t: f64) -> Curve {
    let cal = 4.184;
    let (a, b, d) = (45.94 - 315.90 * cal, 0.01632 + 2.0 * 0.8514 * cal, -3.0 * 8.3637e-4 * cal);
    let cp = a + b * t + d * t * t;
    let h =
        a * (t - T_REF) + b / 2.0 * (t * t - T_REF * T_REF) + d / 3.0 * (t * t * t - T_REF * T_REF * T_REF);
    let s = a * libm::log(t / T_REF) + b * (t - T_REF) + d / 2.0 * (t * t - T_REF * T_REF);
    [h - t * s, -s, -cp / t]
}

/// Apparent specific volume of the salt in m³/kg by temperature and mass fraction: M. Laliberté,
/// W. E. Cooper, Model for calculating the density of aqueous electrolyte solutions, J. Chem.
/// Eng. Data 49 (2004) 1141-1151. Value, ∂/∂T, ∂²/∂T², ∂/∂c and ∂²/∂T∂c.
fn apparent_volume(t: f64, c: f64) -> [f64; 5] {
    let (c0, c1, c2, c3, c4) = (-0.00433, 0.06471, 1.01660, 0.014624, 3315.6);
    let celsius = t - 273.15;
    let top = c + c2 + c3 * celsius;
    let bottom = c0 * c + c1;
    let shift = celsius + c4;
    let scale = libm::exp(-1e-6 * shift * shift) / bottom;
    let v = top * scale;
    // d scale/dT = scale k, with k = -2e-6 shift.
    let k = -2e-6 * shift;
    let by_t = scale * (c3 + top * k);
    let by_tt = scale * (2.0 * c3 * k + top * (k * k - 2e-6));
    let by_c = scale * (1.0 - top * c0 / bottom);
    let by_tc = scale * (k - c0 / bottom * (c3 + top * k));
    [v, by_t, by_tt, by_c, by_tc]
}

/// The saline part (what is added to (1 - c) g of water) at `p`, `t` and mass fraction `c` above
/// zero. `water` is (g, ∂g/∂T, ∂g/∂p, tt, tp, pp) of pure water.
pub(super) fn saline(p: f64, t: f64, c: f64, water: [f64; 6]) -> Saline {
    let m = c / ((1.0 - c) * MOLAR_MASS);
    let root = m.sqrt();
    let e = libm::exp(-2.0 * root);
    let ln_dh = libm::log(1.0 + 1.2 * root);
    // Excess Gibbs energy per kg of water over RT = sum of parameter times form(m).
    let forms = [
        (-4.0 / 1.2 * m * ln_dh, -4.0 / 1.2 * (ln_dh + 0.6 * root / (1.0 + 1.2 * root))),
        (2.0 * m * m, 4.0 * m),
        (m * (1.0 - (1.0 + 2.0 * root) * e), 1.0 - (1.0 + 2.0 * root) * e + 2.0 * m * e),
        (m * m * m, 3.0 * m * m),
    ];
    let parameters = [debye_hueckel(t), parameter(BETA_0, t), parameter(BETA_1, t), parameter(C_PHI, t)];
    // Per kg of water: value, T, TT, and the derivatives of the first two by m.
    let [mu, mu_t, mu_tt] = standard_potential(t);
    let ln_m = libm::log(m);
    let mut f = m * mu + 2.0 * m * R * t * (ln_m - 1.0);
    let mut f_t = m * mu_t + 2.0 * m * R * (ln_m - 1.0);
    let mut f_tt = m * mu_tt;
    let mut f_m = mu + 2.0 * R * t * ln_m;
    let mut f_tm = mu_t + 2.0 * R * ln_m;
    for ([q, q1, q2], (form, slope)) in parameters.into_iter().zip(forms) {
        let (by_t, by_tt) = (R * (q + t * q1), R * (2.0 * q1 + t * q2));
        f += R * t * q * form;
        f_t += by_t * form;
        f_tt += by_tt * form;
        f_m += R * t * q * slope;
        f_tm += by_t * slope;
    }
    // Per kg of solution, with dm/dc = 1/((1 - c)² M).
    let w = 1.0 - c;
    let dm = 1.0 / (w * MOLAR_MASS);
    let [v, v_t, v_tt, v_c, v_tc] = apparent_volume(t, c);
    let dp = p - P_REF;
    let [g_w, t_w, p_w, tt_w, tp_w, pp_w] = water;
    Saline {
        g: w * f + c * dp * v - c * g_w,
        t: w * f_t + c * dp * v_t - c * t_w,
        p: c * v - c * p_w,
        tt: w * f_tt + c * dp * v_tt - c * tt_w,
        tp: c * v_t - c * tp_w,
        pp: -c * pp_w,
        c: -f + f_m * dm + dp * (v + c * v_c) - g_w,
        tc: -f_t + f_tm * dm + dp * (v_t + c * v_tc) - t_w,
        pc: v + c * v_c - p_w,
    }
}
