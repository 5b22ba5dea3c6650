//! One thermodynamic state with its first partial derivatives.

use std::fmt;

/// Phase of a state.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Phase {
    /// Liquid below the critical temperature.
    Liquid,
    /// Vapour or gas.
    Vapour,
    /// Saturated mixture of liquid and vapour, 0 <= x <= 1.
    TwoPhase,
    /// Above both critical temperature and critical pressure.
    Supercritical,
    /// Solid.
    Solid,
}

impl Phase {
    /// The word used in reports and descriptions.
    pub const fn text(self) -> &'static str {
        match self {
            Phase::Liquid => "liquid",
            Phase::Vapour => "vapour",
            Phase::TwoPhase => "two-phase",
            Phase::Supercritical => "supercritical",
            Phase::Solid => "solid",
        }
    }
}

/// A property of a state; the index into [`State::gradient`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
#[repr(usize)]
pub enum Property {
    /// K
    Temperature = 0,
    /// Pa absolute
    Pressure = 1,
    /// J/kg
    Enthalpy = 2,
    /// J/(kg K)
    Entropy = 3,
    /// m³/kg
    Volume = 4,
    /// Mass fraction of vapour, 0 to 1 (only in two phases)
    Quality = 5,
}

/// The number of properties in [`Property`].
pub const PROPERTIES: usize = 6;

/// The pair of coordinates that fixes a state, in the order (a, b) of its name.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Pair {
    /// (p, T)
    PressureTemperature,
    /// (p, x)
    PressureQuality,
    /// (T, x)
    TemperatureQuality,
    /// (p, h)
    PressureEnthalpy,
    /// (p, s)
    PressureEntropy,
    /// (h, s)
    EnthalpyEntropy,
}

impl Pair {
    /// Every pair.
    pub const ALL: [Pair; 6] = [
        Pair::PressureTemperature,
        Pair::PressureQuality,
        Pair::TemperatureQuality,
        Pair::PressureEnthalpy,
        Pair::PressureEntropy,
        Pair::EnthalpyEntropy,
    ];

    /// The two properties, in order.
    pub const fn properties(self) -> (Property, Property) {
        match self {
            Pair::PressureTemperature => (Property::Pressure, Property::Temperature),
            Pair::PressureQuality => (Property::Pressure, Property::Quality),
            Pair::TemperatureQuality => (Property::Temperature, Property::Quality),
            Pair::PressureEnthalpy => (Property::Pressure, Property::Enthalpy),
            Pair::PressureEntropy => (Property::Pressure, Property::Entropy),
            Pair::EnthalpyEntropy => (Property::Enthalpy, Property::Entropy),
        }
    }
}

impl fmt::Display for Pair {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Pair::PressureTemperature => "pressure and temperature",
            Pair::PressureQuality => "pressure and quality",
            Pair::TemperatureQuality => "temperature and quality",
            Pair::PressureEnthalpy => "pressure and enthalpy",
            Pair::PressureEntropy => "pressure and entropy",
            Pair::EnthalpyEntropy => "enthalpy and entropy",
        })
    }
}

/// How the composition coordinate of a variable mixture is given.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum CompositionForm {
    /// The engine's own coordinate (humidity ratio, air ratio, salinity).
    Direct,
    /// Relative humidity at the state's T and p, 0 to 1.
    RelativeHumidity,
    /// Thermodynamic wet-bulb temperature at the state's T and p, K.
    WetBulb,
    /// Dew-point (or frost-point) temperature at the state's p, K.
    DewPoint,
}

/// One state of a fluid. Immutable; SI units.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct State {
    /// T, K.
    pub temperature: f64,
    /// p, Pa absolute.
    pub pressure: f64,
    /// h, J/kg, on the engine's own datum.
    pub enthalpy: f64,
    /// s, J/(kg K), on the engine's own datum.
    pub entropy: f64,
    /// v, m³/kg.
    pub volume: f64,
    /// x, mass fraction of vapour, in two phases only (0 and 1 included).
    pub quality: Option<f64>,
    /// Phase.
    pub phase: Phase,
    /// Partial derivatives of each [`Property`] with respect to the *local basis* and to the
    /// composition coordinate: columns are (p, T, c) in one phase and (p, x, c) in two phases.
    pub gradient: [[f64; 3]; PROPERTIES],
}

impl State {
    /// A one-phase state from its values and the usual second derivatives:
    /// `cp` = (∂h/∂T)p in J/(kg K), `v_t` = (∂v/∂T)p in m³/(kg K), `v_p` = (∂v/∂p)T in m³/(kg Pa).
    #[allow(clippy::too_many_arguments, reason = "these are the figures of one state")]
    pub fn one_phase(
        t: f64,
        p: f64,
        h: f64,
        s: f64,
        v: f64,
        phase: Phase,
        cp: f64,
        v_t: f64,
        v_p: f64,
    ) -> State {
        State {
            temperature: t,
            pressure: p,
            enthalpy: h,
            entropy: s,
            volume: v,
            quality: None,
            phase,
            gradient: [
                [0.0, 1.0, 0.0],
                [1.0, 0.0, 0.0],
                [v - t * v_t, cp, 0.0],
                [-v_t, cp / t, 0.0],
                [v_p, v_t, 0.0],
                [0.0, 0.0, 0.0],
            ],
        }
    }

    /// The value of a property; quality is NaN-free and reads 0 outside two phases.
    pub fn get(&self, property: Property) -> f64 {
        match property {
            Property::Temperature => self.temperature,
            Property::Pressure => self.pressure,
            Property::Enthalpy => self.enthalpy,
            Property::Entropy => self.entropy,
            Property::Volume => self.volume,
            Property::Quality => self.quality.unwrap_or(0.0),
        }
    }

    /// Specific internal energy u = h − p v, J/kg.
    pub fn internal_energy(&self) -> f64 {
        self.enthalpy - self.pressure * self.volume
    }

    /// Isobaric heat capacity in J/(kg K); `None` in two phases.
    pub fn heat_capacity(&self) -> Option<f64> {
        self.quality.is_none().then(|| self.gradient[Property::Enthalpy as usize][1])
    }

    /// Partial derivatives of every property with respect to a pair of coordinates (columns 0 and
    /// 1) and to the composition coordinate at constant pair (column 2).
    ///
    /// `None` where the pair does not fix the state locally (p and T in two phases, quality in
    /// one phase).
    pub fn jacobian(&self, pair: Pair) -> Option<[[f64; 3]; PROPERTIES]> {
        let (first, second) = pair.properties();
        let ra = self.gradient[first as usize];
        let rb = self.gradient[second as usize];
        if ra == [1.0, 0.0, 0.0] && rb == [0.0, 1.0, 0.0] {
            // They are the local basis.
            return Some(self.gradient);
        }
        let det = ra[0] * rb[1] - ra[1] * rb[0];
        let scale = (ra[0] * rb[1]).abs() + (ra[1] * rb[0]).abs();
        if det.is_nan() || det.abs() <= 1e-13 * scale {
            return None;
        }
        // Rows of the inverse: d(basis)/d(a, b).
        let inverse = [[rb[1] / det, -ra[1] / det], [-rb[0] / det, ra[0] / det]];
        // d(basis)/dc at constant (a, b).
        let along_c = [
            -(inverse[0][0] * ra[2] + inverse[0][1] * rb[2]),
            -(inverse[1][0] * ra[2] + inverse[1][1] * rb[2]),
        ];
        let mut out = [[0.0; 3]; PROPERTIES];
        for (row, g) in out.iter_mut().zip(&self.gradient) {
            row[0] = g[0] * inverse[0][0] + g[1] * inverse[1][0];
            row[1] = g[0] * inverse[0][1] + g[1] * inverse[1][1];
            row[2] = g[2] + g[0] * along_c[0] + g[1] * along_c[1];
        }
        Some(out)
    }
}
