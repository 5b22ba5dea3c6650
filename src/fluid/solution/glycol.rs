//! Water with ethylene or propylene glycol at a fixed mass fraction.

use super::{Saline, liquid_state, solve_temperature};
use crate::fluid::numeric::{finite, within};
use crate::fluid::{Datum, Element, Elements, Engine, Pair, PropertyError, Provenance, State};

/// Which glycol.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum GlycolKind {
    /// Ethane-1,2-diol, C2H6O2.
    Ethylene,
    /// Propane-1,2-diol, C3H8O2.
    Propylene,
}

/// Upper end of the temperature range, K.
const T_MAX: f64 = 373.15;
/// Datum temperature (h = 0 and s = 0) in K and pressure in Pa.
const T_REF: f64 = 273.15;
const P_REF: f64 = 101_325.0;
/// Range of pressure, Pa.
const PRESSURE: (f64, f64) = (1e3, 5e6);

/// Coefficients of one property in the order of Melinder's tables: powers (i of x - xm, j of
/// T - Tm) (0,0) (0,1) (0,2) (0,3) (1,0) … (1,3) (2,0) … (2,3) (3,0) … (3,2) (4,0) (4,1) (5,0).
type Table = [f64; 18];

/// Å. Melinder, Properties of Secondary Working Fluids for Indirect Systems, International
/// Institute of Refrigeration, Paris 2010: base temperature in degC and mass fraction in per cent,
/// freezing temperature in degC (its dependence on T is rounding), density in kg/m³, specific
/// heat in J/(kg K).
struct Melinder {
    t: f64,
    x: f64,
    freezing: [f64; 6],
    density: Table,
    heat: Table,
}

const ETHYLENE: Melinder = Melinder {
    t: 31.728,
    x: 30.8462,
    freezing: [-15.25, -0.808, -0.01334, -0.00007293, 0.000001006, 0.00000000114],
    density: [
        1034.0,
        -0.4781,
        -0.002692,
        0.000004725,
        1.311,
        -0.006876,
        0.00004805,
        0.0000000169,
        0.0000749,
        0.00007855,
        -0.0000003995,
        0.000000004982,
        -0.0001062,
        0.000001229,
        -0.00000001153,
        -0.0000009623,
        -0.00000007211,
        0.00000004891,
    ],
    heat: [
        3737.0,
        2.93,
        -0.004675,
        -0.00001389,
        -17.99,
        0.1046,
        -0.0004147,
        0.0000001847,
        -0.09933,
        0.0003516,
        0.000005109,
        -0.00000007138,
        0.00261,
        -0.000001189,
        -0.0000001643,
        0.00001537,
        -0.0000004272,
        -0.000001618,
    ],
};

const PROPYLENE: Melinder = Melinder {
    t: 32.7083,
    x: 30.7031,
    freezing: [-13.25, -0.6631, -0.01094, -0.0002283, -0.000003409, 0.00000001465],
    density: [
        1018.0,
        -0.5406,
        -0.002666,
        0.00001347,
        0.7604,
        -0.00945,
        0.00005541,
        -0.0000001343,
        -0.002498,
        0.000027,
        -0.0000004018,
        0.000000003376,
        -0.000155,
        0.000002829,
        -0.000000007175,
        -0.000001131,
        -0.00000002221,
        0.00000002342,
    ],
    heat: [
        3882.0,
        2.699,
        -0.001659,
        -0.00001032,
        -13.04,
        0.0507,
        -0.00004752,
        0.000001522,
        -0.1598,
        0.00009534,
        0.00001167,
        -0.0000000487,
        0.0003539,
        0.00003102,
        -0.000000295,
        0.00005,
        -0.0000007135,
        -0.0000004959,
    ],
};

/// Aqueous glycol as a liquid of given composition. Immutable.
///
/// Specific heat and density depend on temperature; pressure enters through the volume alone, in
/// the way that one Gibbs energy demands: h = ∫cp dT + (v - T ∂v/∂T)(p - p0),
/// s = ∫cp/T dT - ∂v/∂T (p - p0). Datum h = 0 and s = 0 at 0 °C and 101.325 kPa.
#[derive(Clone, Debug, PartialEq)]
pub struct Glycol {
    kind: GlycolKind,
    fraction: f64,
    /// Polynomials in T - Tm (in K): density, and specific heat.
    density: [f64; 4],
    heat: [f64; 4],
    base: f64,
    freezing: f64,
}

impl Glycol {
    /// The mixture with mass fraction `fraction` (0 to 0.6) of glycol.
    ///
    /// # Errors
    /// A mass fraction outside the range or not finite.
    pub fn new(kind: GlycolKind, fraction: f64) -> Result<Glycol, PropertyError> {
        finite(&[fraction])?;
        within("mass fraction of glycol", "kg/kg", fraction, (0.0, 0.6))?;
        let table = match kind {
            GlycolKind::Ethylene => &ETHYLENE,
            GlycolKind::Propylene => &PROPYLENE,
        };
        let x = 100.0 * fraction - table.x;
        let freezing = table.freezing.iter().rev().fold(0.0, |sum, c| sum * x + c);
        Ok(Glycol {
            kind,
            fraction,
            density: collapse(&table.density, x),
            heat: collapse(&table.heat, x),
            base: table.t + 273.15,
            freezing: freezing + 273.15,
        })
    }

    /// Freezing temperature in K, the lower end of the range.
    pub const fn freezing_temperature(&self) -> f64 {
        self.freezing
    }

    /// Mass fraction of glycol.
    pub const fn mass_fraction(&self) -> f64 {
        self.fraction
    }

    fn gibbs(&self, p: f64, t: f64) -> Result<Saline, PropertyError> {
        finite(&[p, t])?;
        within("temperature", "K", t, (self.freezing, T_MAX))?;
        within("pressure", "Pa", p, PRESSURE)?;
        let y = t - self.base;
        let [d0, d1, d2, d3] = self.density;
        let rho = d0 + y * (d1 + y * (d2 + y * d3));
        let rho_1 = d1 + y * (2.0 * d2 + y * 3.0 * d3);
        let rho_2 = 2.0 * d2 + 6.0 * d3 * y;
        let v = 1.0 / rho;
        let v_t = -rho_1 * v * v;
        let v_tt = (2.0 * rho_1 * rho_1 * v - rho_2) * v * v;
        let (cp, h, s) = self.caloric(t);
        let dp = p - P_REF;
        Ok(Saline {
            g: h - t * s + v * dp,
            t: -s + v_t * dp,
            p: v,
            tt: -cp / t + v_tt * dp,
            tp: v_t,
            ..Saline::default()
        })
    }

    /// cp, and the integrals of cp and cp/T from the datum, at the datum pressure.
    fn caloric(&self, t: f64) -> (f64, f64, f64) {
        let [c0, c1, c2, c3] = self.heat;
        // The same polynomial in powers of T itself.
        let b = self.base;
        let a0 = c0 - b * (c1 - b * (c2 - b * c3));
        let a1 = c1 - b * (2.0 * c2 - 3.0 * b * c3);
        let a2 = c2 - 3.0 * b * c3;
        let a3 = c3;
        let h = |t: f64| t * (a0 + t * (a1 / 2.0 + t * (a2 / 3.0 + t * a3 / 4.0)));
        let s = |t: f64| a0 * libm::log(t) + t * (a1 + t * (a2 / 2.0 + t * a3 / 3.0));
        (a0 + t * (a1 + t * (a2 + t * a3)), h(t) - h(T_REF), s(t) - s(T_REF))
    }
}

/// The coefficients of the powers of T - Tm at the concentration `x` off the base.
fn collapse(table: &Table, x: f64) -> [f64; 4] {
    let [a0, a1, a2, a3, b0, b1, b2, b3, c0, c1, c2, c3, d0, d1, d2, e0, e1, f0] = *table;
    [
        a0 + x * (b0 + x * (c0 + x * (d0 + x * (e0 + x * f0)))),
        a1 + x * (b1 + x * (c1 + x * (d1 + x * e1))),
        a2 + x * (b2 + x * (c2 + x * d2)),
        a3 + x * (b3 + x * c3),
    ]
}

impl Engine for Glycol {
    fn provenance(&self) -> Provenance {
        Provenance {
            formulation: "Aqueous glycol, polynomials of density and specific heat".to_owned(),
            source:
                "A. Melinder, Properties of Secondary Working Fluids for Indirect Systems, International \
                     Institute of Refrigeration, 2010"
                    .to_owned(),
            range: format!("freezing ({:.1} degC) to 100 degC, 1 kPa to 5 MPa", self.freezing - 273.15),
        }
    }

    fn supports(&self, pair: Pair) -> bool {
        matches!(pair, Pair::PressureTemperature | Pair::PressureEnthalpy | Pair::PressureEntropy)
    }

    fn state(&self, pair: Pair, a: f64, b: f64, _c: f64) -> Result<State, PropertyError> {
        let t = match pair {
            Pair::PressureTemperature => b,
            Pair::PressureEnthalpy | Pair::PressureEntropy if !b.is_finite() => {
                return Err(PropertyError::NotFinite);
            }
            Pair::PressureEnthalpy => solve_temperature(
                |t| self.gibbs(a, t).map(|g| (g.g - t * g.t, -t * g.tt)),
                b,
                ("enthalpy", "J/kg"),
                self.freezing,
                T_MAX,
            )?,
            Pair::PressureEntropy => solve_temperature(
                |t| self.gibbs(a, t).map(|g| (-g.t, -g.tt)),
                b,
                ("entropy", "J/(kg K)"),
                self.freezing,
                T_MAX,
            )?,
            _ => return Err(PropertyError::UnsupportedPair(pair)),
        };
        liquid_state(a, t, &self.gibbs(a, t)?)
    }

    fn molar_mass(&self, _c: f64) -> Option<f64> {
        let (elements, _) = self.elements(0.0)?;
        let carbon = elements.get(Element::C as usize)?;
        let per_mole = match self.kind {
            GlycolKind::Ethylene => 2.0,
            GlycolKind::Propylene => 3.0,
        };
        let glycol = carbon / per_mole;
        let water = (1.0 - self.fraction) / (2.0 * Element::H.molar_mass() + Element::O.molar_mass());
        Some(1.0 / (glycol + water))
    }

    fn elements(&self, _c: f64) -> Option<(Elements, Elements)> {
        let (c, h) = match self.kind {
            GlycolKind::Ethylene => (2.0, 6.0),
            GlycolKind::Propylene => (3.0, 8.0),
        };
        let glycol = self.fraction
            / (c * Element::C.molar_mass() + h * Element::H.molar_mass() + 2.0 * Element::O.molar_mass());
        let water = (1.0 - self.fraction) / (2.0 * Element::H.molar_mass() + Element::O.molar_mass());
        let mut out = [0.0; Element::COUNT];
        out[Element::C as usize] = c * glycol;
        out[Element::H as usize] = h * glycol + 2.0 * water;
        out[Element::O as usize] = 2.0 * glycol + water;
        Some((out, [0.0; Element::COUNT]))
    }

    fn datum(&self) -> Option<Datum> {
        None
    }

    fn relative_uncertainty(&self, _state: &State) -> f64 {
        // Specific heat of the tables: some 2 % at 95 % confidence (common practice).
        1e-2
    }
}
