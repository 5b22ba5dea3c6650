//! Property engines: one file an engine, all over the [`Engine`] trait.
//!
//! Inside, everything is SI: K, Pa absolute, J/kg, J/(kg K), m³/kg. An engine takes finite input
//! and returns a finite [`State`] with its first partial derivatives, or a [`PropertyError`] with
//! the limit that was broken. It never panics and has no mutable state.

pub mod catalogue;
pub mod chemistry;
pub mod combustion_gas;
pub mod element;
mod error;
pub mod fuel;
pub mod heat_capacity;
pub mod humid_air;
pub mod ideal_gas;
pub mod incompressible;
mod numeric;
pub mod perfect_gas;
pub mod real_fluid;
pub mod solution;
pub mod state;
pub mod stated;
pub mod steam;

pub use catalogue::{Substance, by_name, names};
pub use element::{Element, Elements};
pub use error::PropertyError;
pub use state::{CompositionForm, Pair, Phase, Property, State};

/// Where a formulation comes from, for the report and the catalogue.
#[derive(Clone, Debug, PartialEq)]
pub struct Provenance {
    /// Short name, for instance `IAPWS-IF97`.
    pub formulation: String,
    /// Full citation of the published source, or `common practice` where there is none.
    pub source: String,
    /// Range of validity in words with figures.
    pub range: String,
}

/// What joins an engine's own datum to the absolute one (elements at 298.15 K and 1 bar for
/// enthalpy, third law for entropy): add these to the engine's `h` and `s`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Datum {
    /// J/kg to add to the engine's enthalpy.
    pub enthalpy: f64,
    /// J/(kg K) to add to the engine's entropy.
    pub entropy: f64,
}

/// A property formulation for one substance or mixture.
///
/// Coordinates: a pair `(a, b)` in the order of its [`Pair`] name, and a composition coordinate
/// `c` that only variable mixtures use (humid air: humidity ratio in kg of water per kg of dry
/// air); the others ignore it and report a zero derivative.
pub trait Engine: Send + Sync + std::fmt::Debug {
    /// Source, name and range.
    fn provenance(&self) -> Provenance;

    /// Whether the engine takes this pair.
    fn supports(&self, pair: Pair) -> bool;

    /// The state at a pair of coordinates.
    ///
    /// # Errors
    /// Non-finite input, a state outside the range, an unsupported pair, or an equation that did
    /// not converge.
    fn state(&self, pair: Pair, a: f64, b: f64, c: f64) -> Result<State, PropertyError>;

    /// Saturation temperature (K) at pressure `p` (Pa) and its derivative dT/dp (K/Pa). For a
    /// pseudo-pure blend this is the bubble line unless `quality` is above one half.
    ///
    /// # Errors
    /// `NoSaturation` for a fluid that has none in its formulation, or above its critical point.
    fn saturation_temperature(&self, p: f64, quality: f64) -> Result<(f64, f64), PropertyError> {
        let _ = (p, quality);
        Err(PropertyError::NoSaturation)
    }

    /// Molar mass in kg/mol at composition `c`, where the fluid has one.
    fn molar_mass(&self, c: f64) -> Option<f64>;

    /// Moles of each element per kg at composition `c`, and their derivatives with respect to
    /// `c`; `None` where the make-up is not known.
    fn elements(&self, c: f64) -> Option<(Elements, Elements)>;

    /// The way to the absolute datum; `None` where the formulation has no formation data.
    fn datum(&self) -> Option<Datum>;

    /// The way to the absolute datum at composition `c`, and its derivative with respect to `c`.
    fn datum_at(&self, c: f64) -> Option<(Datum, Datum)> {
        let _ = c;
        self.datum().map(|d| (d, Datum { enthalpy: 0.0, entropy: 0.0 }))
    }

    /// The composition coordinate from the figure that is given, at pressure `p` (Pa) and
    /// temperature `t` (K), with its derivatives with respect to p, T and the figure.
    ///
    /// # Errors
    /// A figure outside its range, or a form that the engine does not know.
    fn composition(
        &self,
        form: CompositionForm,
        p: f64,
        t: f64,
        figure: f64,
    ) -> Result<(f64, [f64; 3]), PropertyError> {
        let _ = (p, t);
        match form {
            CompositionForm::Direct => Ok((figure, [0.0, 0.0, 1.0])),
            _ => Err(PropertyError::Unstated("a composition in this form")),
        }
    }

    /// Whether the composition is a coordinate (`c`) rather than fixed.
    fn elements_vary(&self) -> bool {
        false
    }

    /// Relative standard uncertainty of enthalpy and entropy *differences* by this formulation at
    /// a state (k = 1), as its source gives it.
    fn relative_uncertainty(&self, state: &State) -> f64;
}
