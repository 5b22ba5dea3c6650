//! Humid air as a real gas: virial equation with the second and third coefficients of dry air,
//! water and their pairs and triples.
//!
//! The model is that of ASHRAE RP-1485 in one Helmholtz energy,
//! a/(RT) = ideal parts + ln y terms + B rho + C rho²/2, so that enthalpy, entropy, volume and the
//! chemical potential of water agree with one another exactly. Saturation is the equality of
//! that potential with the one of liquid water (IAPWS-IF97, with dissolved air) or of ice
//! (sublimation pressure); their ratio to the ideal case is the enhancement factor.
//!
//! The composition coordinate is the humidity ratio W, kg of water per kg of dry air, and every
//! value is per kg of *mixture*.
//!
//! # Accuracy
//!
//! Largest deviations from the RP-1485 states (234 states from -20 to 80 °C and 0.7 to 5 bar, dry
//! to saturated):
//!
//! | quantity | W up to 0.06 | all, W up to 1.3 |
//! |---|---|---|
//! | humidity ratio from relative humidity, relative | 2.6e-5 | 2.6e-5 |
//! | specific volume, relative | 1.9e-5 | 1.9e-5 |
//! | enthalpy | 2.6 J/kg | 21 J/kg |
//! | entropy | 0.5 J/(kg K) | 3.2 J/(kg K) |
//! | dew and frost point | 0.0005 K | 0.0005 K |
//! | wet bulb | 0.0005 K | 0.0005 K |
//!
//! The humidity ratio's deviation is that of the molar masses: here they are sums of the atomic
//! masses that the balances of elements use.
//!
//! The entropy of the reference adds a constant of 0.0237 J/(mol K) to the water too and takes its
//! ideal parts at other volumes than its residual part, so that its saturated air is out of
//! equilibrium with liquid water by some 1 to 3 kJ per kg of water. Here the chemical potential of
//! water in saturated air agrees with that of IAPWS-IF97 liquid water within 13 J/kg (most of it
//! the dissolved air), which is what a second-law balance needs.

mod convert;
mod dual;
mod virial;
pub(in crate::fluid) mod water;

pub use convert::Derived;

use super::numeric::{finite, root, within};
use super::{
    CompositionForm, Datum, Element, Elements, Engine, Pair, Phase, PropertyError, Provenance, State,
    state::PROPERTIES,
};
use dual::Dual;
use virial::{P_REF, R, Virial};

/// Range of temperature, K.
pub const TEMPERATURE_RANGE: (f64, f64) = (213.0, water::T_MAX);
/// Range of pressure, Pa.
pub const PRESSURE_RANGE: (f64, f64) = (1e3, 5e6);
/// Range of the humidity ratio, kg/kg of dry air.
pub const HUMIDITY_RATIO_RANGE: (f64, f64) = (0.0, 10.0);

/// Mole fractions of N2, O2, Ar and CO2 in dry air.
const DRY_AIR: [f64; 4] = [0.78084, 0.20946, 0.00934, 0.00036];

/// Relative excess of W over saturation that does not count as fog: what saturation itself is known
/// to, and what a table's last digit may add.
const FOG_TOLERANCE: f64 = 1e-4;

/// kg/mol of dry air, from [`DRY_AIR`] and the atomic masses, so that elements balance exactly.
fn dry_air_molar_mass() -> f64 {
    let [n2, o2, ar, co2] = DRY_AIR;
    2.0 * n2 * Element::N.molar_mass()
        + 2.0 * (o2 + co2) * Element::O.molar_mass()
        + ar * Element::Ar.molar_mass()
        + co2 * Element::C.molar_mass()
}

/// kg/mol of water from the atomic masses.
fn water_molar_mass() -> f64 {
    2.0 * Element::H.molar_mass() + Element::O.molar_mass()
}

/// The humid-air engine. Immutable.
///
/// Datum of the native values: dry air h = 0 and s = 0 at 0 °C and 101.325 kPa; water u = 0 and
/// s = 0 for the liquid at the triple point.
#[derive(Clone, Debug)]
pub struct HumidAir {
    air_mass: f64,
    water_mass: f64,
    /// J/mol and J/(mol K) of dry air on its equation's datum at 0 °C and 101.325 kPa.
    h_air: f64,
    s_air: f64,
    air_offset: Datum,
    water_offset: Datum,
}

/// One gas state: molar values with their gradients.
struct Gas {
    /// Molar density, mol/m³.
    rho: Dual,
    /// J/mol.
    h: Dual,
    /// J/(mol K).
    s: Dual,
    /// ln of the fugacity of water in Pa.
    ln_fugacity: Dual,
}

/// Values per kg of mixture with their gradients.
struct Mass {
    h: Dual,
    s: Dual,
    v: Dual,
}

impl Default for HumidAir {
    fn default() -> HumidAir {
        HumidAir::new()
    }
}

impl HumidAir {
    /// The engine with its datum constants worked out.
    pub fn new() -> HumidAir {
        let (t0, p0) = (273.15, 101_325.0);
        let mut engine = HumidAir {
            air_mass: dry_air_molar_mass(),
            water_mass: water_molar_mass(),
            h_air: 0.0,
            s_air: 0.0,
            air_offset: Datum { enthalpy: 0.0, entropy: 0.0 },
            water_offset: Datum { enthalpy: 0.0, entropy: 0.0 },
        };
        let zero = Dual::constant(0.0);
        if let Ok(dry) = engine.gas(Dual::constant(p0), Dual::constant(t0), zero) {
            engine.h_air = dry.h.v;
            engine.s_air = dry.s.v;
        }
        // Absolute datum of dry air: ideal gas at 298.15 K and 1 bar with the entropy of mixing.
        // Formation enthalpy of CO2 and 1-bar entropies of N2, O2, Ar, CO2: B. J. McBride, M. J.
        // Zehe, S. Gordon, NASA Glenn coefficients, NASA/TP-2002-211556 (nine-coefficient fits).
        let t = 298.15;
        let own = virial::ideal_air(t);
        let standard = [191.60971, 205.14947, 154.84666, 213.78740];
        let entropy: f64 =
            DRY_AIR.iter().zip(standard).map(|(x, s)| x * (s - R * libm::log(*x))).sum::<f64>();
        let [_, _, _, co2] = DRY_AIR;
        engine.air_offset = Datum {
            enthalpy: (co2 * -393_510.0 - (own.h - engine.h_air)) / engine.air_mass,
            entropy: (entropy - (own.s - engine.s_air)) / engine.air_mass,
        };
        engine.water_offset = water::absolute_offset();
        engine
    }

    /// Mole fraction of water at humidity ratio `w`.
    fn water_fraction(&self, w: Dual) -> Dual {
        w / (w + self.water_mass / self.air_mass)
    }

    /// Humidity ratio at mole fraction `y` of water.
    fn humidity_ratio(&self, y: Dual) -> Dual {
        y / (-y + 1.0) * (self.water_mass / self.air_mass)
    }

    /// The gas at pressure, temperature and mole fraction of water.
    fn gas(&self, p: Dual, t: Dual, y: Dual) -> Result<Gas, PropertyError> {
        let virial = Virial::at(t.v);
        let (b, c) = (virial.b(t, y, 0), virial.c(t, y, 0));
        let rt = t * R;
        let rho = density(p, rt, b, c)?;
        let (b1, c1) = (virial.b(t, y, 1), virial.c(t, y, 1));
        let (air, water) = (virial::ideal_air(t.v), virial::ideal_water(t.v));
        let x = -y + 1.0;
        let rho2 = rho * rho;
        let h = x * t.chain(air.h - self.h_air, air.cp)
            + y * t.chain(water.h, water.cp)
            + rt * ((b - t * b1) * rho + (c - t * c1 * 0.5) * rho2);
        let ln_p = (rho * rt * (1.0 / P_REF)).ln();
        let s = x * t.chain(air.s - self.s_air, air.cp / t.v) + y * t.chain(water.s, water.cp / t.v)
            - (y_ln_y(x) + y_ln_y(y) + ln_p + (b + t * b1) * rho + (c + t * c1) * rho2 * 0.5) * R;
        let floor = if y.v > TRACE { y.ln() } else { y.chain(libm::log(TRACE), 1.0 / TRACE) };
        let ln_fugacity =
            floor + (rho * rt).ln() + virial.b_water(t, y) * rho * 2.0 + virial.c_water(t, y) * rho2 * 1.5;
        Ok(Gas { rho, h, s, ln_fugacity })
    }

    /// Values per kg of mixture at p, T and W; saturation is not looked at.
    fn mass(&self, p: Dual, t: Dual, w: Dual) -> Result<Mass, PropertyError> {
        let y = self.water_fraction(w);
        let gas = self.gas(p, t, y)?;
        let m = y * (self.water_mass - self.air_mass) + self.air_mass;
        Ok(Mass { h: gas.h / m, s: gas.s / m, v: Dual::constant(1.0) / (gas.rho * m) })
    }

    /// The gas state at `p` (Pa), `t` (K) and humidity ratio `w`, also beyond saturation
    /// (metastable); for iterations that may pass through fog.
    ///
    /// # Errors
    /// Input outside the range, or no gas root of the virial equation.
    pub fn gas_state(&self, p: f64, t: f64, w: f64) -> Result<State, PropertyError> {
        finite(&[p, t, w])?;
        check_pressure(p)?;
        check_temperature(t)?;
        check_humidity_ratio(w)?;
        let mass = self.mass(Dual::coordinate(p, 0), Dual::coordinate(t, 1), Dual::coordinate(w, 2))?;
        let mut gradient = [[0.0; 3]; PROPERTIES];
        gradient[0] = [0.0, 1.0, 0.0];
        gradient[1] = [1.0, 0.0, 0.0];
        gradient[2] = mass.h.d;
        gradient[3] = mass.s.d;
        gradient[4] = mass.v.d;
        let state = State {
            temperature: t,
            pressure: p,
            enthalpy: mass.h.v,
            entropy: mass.s.v,
            volume: mass.v.v,
            quality: None,
            phase: Phase::Vapour,
            gradient,
        };
        let finite = [state.enthalpy, state.entropy, state.volume].iter().all(|x| x.is_finite())
            && gradient.iter().flatten().all(|x| x.is_finite());
        if finite { Ok(state) } else { Err(PropertyError::NoConvergence) }
    }

    /// The error for fog, where `w` lies above saturation at `p` and `t`.
    fn check_fog(&self, p: f64, t: f64, w: f64) -> Result<(), PropertyError> {
        let y = self.water_fraction(Dual::constant(w)).v;
        // The enhancement factor is hardly below 1, so most states need no saturation solution.
        if y * p < 0.95 * water::saturation_pressure(Dual::constant(t)).v {
            return Ok(());
        }
        match self.saturation_humidity_ratio(p, t) {
            Ok(limit) if w > limit.value * (1.0 + FOG_TOLERANCE) => Err(PropertyError::OutOfRange {
                quantity: "humidity ratio",
                unit: "kg/kg",
                value: w,
                min: 0.0,
                max: limit.value,
            }),
            Ok(_) | Err(PropertyError::NoSaturation) => Ok(()),
            Err(error) => Err(error),
        }
    }

    /// Temperature at which enthalpy or entropy (`row` of the gradient) takes `target`.
    fn temperature_at(&self, p: f64, target: f64, row: usize, w: f64) -> Result<f64, PropertyError> {
        finite(&[p, target, w])?;
        check_pressure(p)?;
        check_humidity_ratio(w)?;
        let (low, high) = TEMPERATURE_RANGE;
        let at = |t: f64| {
            self.mass(Dual::constant(p), Dual::coordinate(t, 1), Dual::constant(w))
                .map(|m| if row == 2 { m.h } else { m.s })
        };
        let (quantity, unit) = if row == 2 { ("enthalpy", "J/kg") } else { ("entropy", "J/(kg K)") };
        // Without a gas root the lower end lies far inside the fog region and bounds nothing.
        let bottom = at(low).map_or(-1e9, |f| f.v);
        within(quantity, unit, target, (bottom, at(high)?.v))?;
        root(low, high, 300.0, |t| {
            // No gas root: look higher.
            Ok(at(t).map_or((f64::INFINITY, f64::NAN), |f| {
                let [_, slope, _] = f.d;
                (target - f.v, -slope)
            }))
        })
    }

    /// What to add to the native enthalpy and entropy per kg of mixture at humidity ratio `c` to
    /// reach the absolute datum, and the derivatives of both with respect to `c`.
    ///
    /// Dry air joins the ideal-gas set (elements at 298.15 K, third-law entropies with mixing at
    /// 1 bar), water joins liquid water at 298.15 K and 0.1 MPa: -285.830 kJ/mol, 69.95 J/(mol K).
    pub fn absolute_offset(&self, c: f64) -> (Datum, Datum) {
        let (a, w, total) = (self.air_offset, self.water_offset, 1.0 + c);
        (
            Datum {
                enthalpy: (a.enthalpy + c * w.enthalpy) / total,
                entropy: (a.entropy + c * w.entropy) / total,
            },
            Datum {
                enthalpy: (w.enthalpy - a.enthalpy) / (total * total),
                entropy: (w.entropy - a.entropy) / (total * total),
            },
        )
    }
}

/// Mole fraction under which the logarithms of composition are cut off (their derivatives would
/// be infinite at zero).
const TRACE: f64 = 1e-12;

/// x ln x, 0 at 0, with a bounded derivative.
fn y_ln_y(x: Dual) -> Dual {
    let ln = libm::log(x.v.max(TRACE));
    x.chain(x.v * ln, ln + 1.0)
}

/// Molar density from p = RT (rho + B rho² + C rho³), the gas root.
fn density(p: Dual, rt: Dual, b: Dual, c: Dual) -> Result<Dual, PropertyError> {
    let mut rho = p.v / rt.v;
    let mut slope = rt.v;
    let mut converged = false;
    for _ in 0..60 {
        let miss = rt.v * rho * (1.0 + rho * (b.v + rho * c.v)) - p.v;
        slope = rt.v * (1.0 + rho * (2.0 * b.v + 3.0 * rho * c.v));
        if slope <= 0.05 * rt.v || slope.is_nan() {
            return Err(PropertyError::NoConvergence);
        }
        if converged {
            break;
        }
        let step = miss / slope;
        rho -= step;
        converged = step.abs() <= 1e-13 * rho;
    }
    if !converged || rho <= 0.0 {
        return Err(PropertyError::NoConvergence);
    }
    let fixed = Dual::constant(rho);
    let miss = rt * fixed * ((c * fixed + b) * fixed + 1.0) - p;
    Ok(Dual { v: rho, d: miss.d.map(|d| -d / slope) })
}

fn check_pressure(p: f64) -> Result<(), PropertyError> {
    within("pressure", "Pa", p, PRESSURE_RANGE)
}

fn check_temperature(t: f64) -> Result<(), PropertyError> {
    within("temperature", "K", t, TEMPERATURE_RANGE)
}

fn check_humidity_ratio(w: f64) -> Result<(), PropertyError> {
    within("humidity ratio", "kg/kg", w, HUMIDITY_RATIO_RANGE)
}

impl Engine for HumidAir {
    fn provenance(&self) -> Provenance {
        Provenance {
            formulation: "Humid air, virial equation after ASHRAE RP-1485".to_owned(),
            source: "S. Herrmann, H.-J. Kretzschmar, D. P. Gatley, Thermodynamic Properties of Real Moist \
                     Air, Dry Air, Steam, Water, and Ice, ASHRAE RP-1485, HVAC&R Research 15 (2009) 961-986"
                .to_owned(),
            range: "-60 to 350 degC, 1 kPa to 5 MPa, humidity ratio 0 to 10 and up to saturation".to_owned(),
        }
    }

    fn supports(&self, pair: Pair) -> bool {
        matches!(pair, Pair::PressureTemperature | Pair::PressureEnthalpy | Pair::PressureEntropy)
    }

    fn state(&self, pair: Pair, a: f64, b: f64, c: f64) -> Result<State, PropertyError> {
        let t = match pair {
            Pair::PressureTemperature => b,
            Pair::PressureEnthalpy => self.temperature_at(a, b, 2, c)?,
            Pair::PressureEntropy => self.temperature_at(a, b, 3, c)?,
            _ => return Err(PropertyError::UnsupportedPair(pair)),
        };
        finite(&[a, t, c])?;
        check_pressure(a)?;
        check_temperature(t)?;
        check_humidity_ratio(c)?;
        self.check_fog(a, t, c)?;
        self.gas_state(a, t, c)
    }

    fn molar_mass(&self, c: f64) -> Option<f64> {
        // Moles per kg of mixture: (1/Ma + W/Mw) / (1 + W).
        let moles = 1.0 / self.air_mass + c / self.water_mass;
        (c >= 0.0).then(|| (1.0 + c) / moles)
    }

    fn elements(&self, c: f64) -> Option<(Elements, Elements)> {
        if !(c >= 0.0 && c.is_finite()) {
            return None;
        }
        let (mut air, mut water) = ([0.0; Element::COUNT], [0.0; Element::COUNT]);
        let [n2, o2, ar, co2] = DRY_AIR;
        air[Element::N as usize] = 2.0 * n2 / self.air_mass;
        air[Element::O as usize] = 2.0 * (o2 + co2) / self.air_mass;
        air[Element::Ar as usize] = ar / self.air_mass;
        air[Element::C as usize] = co2 / self.air_mass;
        water[Element::H as usize] = 2.0 / self.water_mass;
        water[Element::O as usize] = 1.0 / self.water_mass;
        let (mut value, mut slope) = ([0.0; Element::COUNT], [0.0; Element::COUNT]);
        let total = 1.0 + c;
        for ((v, d), (a, w)) in value.iter_mut().zip(slope.iter_mut()).zip(air.iter().zip(&water)) {
            *v = (a + c * w) / total;
            *d = (w - a) / (total * total);
        }
        Some((value, slope))
    }

    fn datum(&self) -> Option<Datum> {
        // The way to the absolute datum depends on composition: see `datum_at`.
        None
    }

    fn datum_at(&self, c: f64) -> Option<(Datum, Datum)> {
        (c >= 0.0 && c.is_finite()).then(|| self.absolute_offset(c))
    }

    fn elements_vary(&self) -> bool {
        true
    }

    fn composition(
        &self,
        form: CompositionForm,
        p: f64,
        t: f64,
        figure: f64,
    ) -> Result<(f64, [f64; 3]), PropertyError> {
        let derived = match form {
            CompositionForm::Direct => return Ok((figure, [0.0, 0.0, 1.0])),
            CompositionForm::RelativeHumidity => self.humidity_ratio_from_relative_humidity(p, t, figure)?,
            CompositionForm::WetBulb => self.humidity_ratio_from_wet_bulb(p, t, figure)?,
            CompositionForm::DewPoint => {
                let at = self.humidity_ratio_from_dew_point(p, figure)?;
                return Ok((at.value, [at.by[0], 0.0, at.by[1]]));
            }
        };
        Ok((derived.value, derived.by))
    }

    fn relative_uncertainty(&self, _state: &State) -> f64 {
        // Caloric properties of dry air below 10 MPa: 0.2 % (k = 2) in the dominant ideal-gas
        // part (Lemmon et al. 2000); water vapour and the cross terms are no worse.
        1e-3
    }
}
