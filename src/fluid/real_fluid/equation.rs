//! The published equation as its data file gives it.

use serde::Deserialize;
use std::collections::BTreeMap;

/// Where an equation was published.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Citation {
    /// Authors, in the order of the title page.
    pub authors: String,
    /// Title.
    pub title: String,
    /// Journal, series or publisher.
    pub journal: String,
    /// Volume and issue, empty where there is none.
    pub volume: String,
    /// Pages or article number, empty where not known.
    pub pages: String,
    /// Year of publication.
    pub year: u16,
    /// Whether the bibliographic details are from memory.
    pub recalled: bool,
}

impl std::fmt::Display for Citation {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{}, {}, {}", self.authors, self.title, self.journal)?;
        if !self.volume.is_empty() {
            write!(f, " {}", self.volume)?;
        }
        if !self.pages.is_empty() {
            write!(f, ", {}", self.pages)?;
        }
        write!(f, " ({})", self.year)?;
        if self.recalled {
            f.write_str(" [bibliographic details from memory]")?;
        }
        Ok(())
    }
}

/// How sure the equation is, as its source says.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Uncertainty {
    /// The source's statement, or why a default stands here.
    pub text: String,
    /// Relative standard uncertainty (k = 1) of enthalpy and entropy differences.
    pub enthalpy_difference: f64,
}

/// Range of validity.
#[derive(Clone, Copy, Debug, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Range {
    /// Lowest temperature, K: the triple point or the lower limit of the equation.
    pub temperature_min: f64,
    /// Highest temperature, K.
    pub temperature_max: f64,
    /// Highest pressure, Pa.
    pub pressure_max: f64,
}

#[derive(Clone, Copy, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct Reducing {
    /// K
    pub temperature: f64,
    /// mol/m³
    pub molar_density: f64,
}

/// A fluid's critical point as its source states it.
#[derive(Clone, Copy, Debug, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct CriticalPoint {
    /// K
    pub temperature: f64,
    /// Pa
    pub pressure: f64,
    /// mol/m³
    pub molar_density: f64,
}

/// A published equation ln(p/p_r) = (T_r/T) Σ n θ^t with θ = 1 − T/T_r.
#[derive(Clone, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct PressureLine {
    /// T_r, K
    pub temperature: f64,
    /// p_r, Pa
    pub pressure: f64,
    /// n, t
    pub terms: Vec<[f64; 2]>,
}

impl PressureLine {
    /// ln p at temperature `t` (K, not above T_r).
    pub fn ln_pressure(&self, t: f64) -> f64 {
        let theta = (1.0 - t / self.temperature).max(0.0);
        let sum: f64 = self.terms.iter().map(|[n, e]| n * theta.powf(*e)).sum();
        self.pressure.ln() + self.temperature / t * sum
    }

    /// The temperature (K) at or below `t` where the pressure is that of `ln_pressure`.
    pub fn temperature_at(&self, ln_pressure: f64, t: f64) -> f64 {
        let (mut low, mut high) = (0.8 * t, t);
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if self.ln_pressure(middle) > ln_pressure { high = middle } else { low = middle }
        }
        high
    }
}

/// How a piece of a melting line depends on θ = T/T0.
#[derive(Clone, Copy, Debug, Deserialize)]
#[serde(rename_all = "snake_case")]
pub(super) enum MeltingForm {
    /// p0 + Σ a (θ^t − 1)
    Power,
    /// p0 + Σ a (θ − 1)^t
    Difference,
}

/// One piece of a melting line.
#[derive(Clone, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct MeltingPiece {
    pub form: MeltingForm,
    /// T0, K
    pub temperature: f64,
    /// p0, Pa
    pub pressure: f64,
    /// Upper end of the piece, K; the last one is continued.
    pub temperature_max: f64,
    /// a in Pa, t
    pub terms: Vec<[f64; 2]>,
}

/// A published melting line: above its pressure the substance is solid.
#[derive(Clone, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct Melting {
    pub citation: String,
    pub pieces: Vec<MeltingPiece>,
}

impl Melting {
    /// Highest pressure (Pa) of the liquid at `t` (K), with a margin for the line's own scatter.
    pub fn highest_pressure(&self, t: f64) -> f64 {
        let piece = self.pieces.iter().find(|p| t <= p.temperature_max).or(self.pieces.last());
        let line = piece.map_or(f64::INFINITY, |piece| {
            let theta = (t / piece.temperature).max(1.0);
            let term = |[a, e]: &[f64; 2]| match piece.form {
                MeltingForm::Power => a * (theta.powf(*e) - 1.0),
                MeltingForm::Difference => a * (theta - 1.0).powf(*e),
            };
            piece.pressure + piece.terms.iter().map(term).sum::<f64>()
        });
        1.01 * line.max(0.0) + 1e5
    }

    /// Lowest temperature (K) between `low` and `high` at which `p` (Pa) is still liquid.
    pub fn lowest_temperature(&self, p: f64, low: f64, high: f64) -> f64 {
        if self.highest_pressure(low) >= p {
            return low;
        }
        let (mut low, mut high) = (low, high);
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if self.highest_pressure(middle) >= p { high = middle } else { low = middle }
        }
        high
    }
}

#[derive(Clone, Debug, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub(super) enum SaturationData {
    /// Phase equilibrium from the equation itself (equal pressure and Gibbs energy).
    Maxwell,
    /// A blend treated as one substance: published bubble and dew pressures.
    BubbleAndDew { bubble: PressureLine, dew: PressureLine },
}

/// Terms of the ideal-gas part; the columns of each row in the order given.
#[derive(Clone, Debug, Deserialize)]
#[serde(tag = "form", content = "terms", rename_all = "snake_case")]
pub(super) enum IdealTerms {
    /// a1 + a2 τ
    Lead(Vec<[f64; 2]>),
    /// a1 + a2 τ, which only sets the datum of h and s
    Datum(Vec<[f64; 2]>),
    /// a ln τ
    Logarithm(Vec<[f64; 1]>),
    /// n τ^t
    Power(Vec<[f64; 2]>),
    /// n ln(1 − exp(−t τ))
    PlanckEinstein(Vec<[f64; 2]>),
    /// n ln(1 − exp(−v/T)), v in K
    PlanckEinsteinTemperature(Vec<[f64; 2]>),
    /// n ln(c + d exp(t τ))
    PlanckEinsteinGeneral(Vec<[f64; 4]>),
    /// c T^t in cp0/R, integrated from T0: c, t, T0
    HeatCapacityPower(Vec<[f64; 3]>),
}

/// Terms of the residual part; the columns of each row in the order given.
#[derive(Clone, Debug, Deserialize)]
#[serde(tag = "form", content = "terms")]
pub(super) enum ResidualTerms {
    /// n, t, d, l: n τ^t δ^d exp(−δ^l), without the exponential where l = 0
    #[serde(rename = "power")]
    Power(Vec<[f64; 4]>),
    /// n, t, d, l, g: n τ^t δ^d exp(−g δ^l)
    #[serde(rename = "exponential")]
    Exponential(Vec<[f64; 5]>),
    /// n, t, d, ld, gd, lt, gt: n τ^t δ^d exp(−gd δ^ld − gt τ^lt)
    #[serde(rename = "double_exponential")]
    DoubleExponential(Vec<[f64; 7]>),
    /// n, t, d, l, m: n τ^t δ^d exp(−δ^l − τ^m), without a part whose exponent is 0
    #[serde(rename = "lemmon_2005")]
    Lemmon2005(Vec<[f64; 5]>),
    /// n, t, d, η, ε, β, γ: n τ^t δ^d exp(−η(δ−ε)² − β(τ−γ)²)
    #[serde(rename = "gaussian")]
    Gaussian(Vec<[f64; 7]>),
    /// n, t, d, η, ε, β, γ, b: n τ^t δ^d exp(η(δ−ε)² + 1/(β(τ−γ)² + b))
    #[serde(rename = "gao_b")]
    GaoB(Vec<[f64; 8]>),
    /// n, a, b, β, A, B, C, D: the non-analytic critical terms of Span and Wagner (1996)
    #[serde(rename = "non_analytic")]
    NonAnalytic(Vec<[f64; 8]>),
}

/// One data file.
#[derive(Clone, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct Equation {
    pub fluid: String,
    pub names: Vec<String>,
    pub cas: Option<String>,
    pub elements: BTreeMap<String, f64>,
    pub citation: Citation,
    pub uncertainty: Uncertainty,
    /// J/(mol K), the equation's own
    pub gas_constant: f64,
    /// kg/mol
    pub molar_mass: f64,
    pub range: Range,
    pub reducing: Reducing,
    pub critical: CriticalPoint,
    /// Where it is published; without it the liquid is followed to the equation's own limits.
    pub melting: Option<Melting>,
    pub saturation: SaturationData,
    pub ideal: Vec<IdealTerms>,
    pub residual: Vec<ResidualTerms>,
}
