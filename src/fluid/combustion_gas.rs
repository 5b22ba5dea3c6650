//! Combustion gas of a fuel and an oxidant, with the air ratio as its composition coordinate.
//!
//! Cautions: flue gas is hot, may hold carbon monoxide and suffocates. Figures from here serve
//! balances; plant safety belongs to local codes and licensed practice.

use super::chemistry::complete_combustion;
use super::heat_capacity::{
    Caloric, Calorics, Curve, GAS_CONSTANT, STANDARD_PRESSURE, gas_state, in_range, supports,
};
use super::ideal_gas::{CompositionError, IdealGas, PseudoCritical, Species, find_species};
use super::{Datum, Element, Elements, Engine, Pair, Property, PropertyError, Provenance, State};
use std::fmt;

/// The species that combustion gas is made of, in the order of every composition here.
pub const SPECIES: [&str; N] = ["N2", "O2", "CO2", "H2O", "CO", "SO2", "Ar", "He"];
const N: usize = 8;
const O2: usize = 1;
const CO2: usize = 2;
const H2O: usize = 3;
const CO: usize = 4;

/// Highest air ratio taken.
const AIR_RATIO_MAX: f64 = 1000.0;
/// Relative standard uncertainty (k = 1) of enthalpy and entropy differences, common practice.
const UNCERTAINTY: f64 = 5e-4;
/// Smallest mole fraction in a logarithm, whose derivative is unbounded at zero.
const TRACE: f64 = 1e-12;

/// The figure that fixes the air ratio.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Reading {
    /// O2 in the dry gas, mole fraction.
    OxygenDry(f64),
    /// O2 in the wet gas, mole fraction.
    OxygenWet(f64),
    /// CO2 in the dry gas, mole fraction.
    CarbonDioxideDry(f64),
    /// Oxidant beyond the stoichiometric amount, as a fraction of that amount.
    ExcessAir(f64),
}

/// Why a combustion gas cannot be had.
#[derive(Clone, Debug, PartialEq)]
pub enum CombustionError {
    /// A figure is not finite.
    NotFinite,
    /// The fuel needs no oxygen, or holds an element outside C, H, O, N, S, Ar, He.
    NotAFuel,
    /// The oxidant has no free oxygen, or holds such an element.
    NotAnOxidant,
    /// A reading that no air ratio gives with this fuel and oxidant.
    ImpossibleReading {
        /// What was read, for instance `O2 in dry gas`.
        what: &'static str,
        /// The reading, a mole fraction or an excess.
        value: f64,
        /// Lowest figure that is possible.
        min: f64,
        /// Highest figure that is possible (reached only with unlimited oxidant, for O2).
        max: f64,
    },
    /// With this fuel and oxidant the reading is the same at every air ratio.
    Undetermined(&'static str),
    /// The species table failed.
    Property(PropertyError),
}

impl fmt::Display for CombustionError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NotFinite => f.write_str("an input is not a finite number"),
            Self::NotAFuel => {
                f.write_str("the fuel needs no oxygen, or holds elements other than C, H, O, N, S, Ar and He")
            }
            Self::NotAnOxidant => f.write_str(
                "the oxidant has no free oxygen, or holds elements other than C, H, O, N, S, Ar and He",
            ),
            Self::ImpossibleReading { what, value, min, max } => write!(
                f,
                "{what} of {value:.5} cannot occur with this fuel and oxidant: possible are {min:.5} to {max:.5}"
            ),
            Self::Undetermined(what) => {
                write!(f, "{what} is the same at every air ratio with this fuel and oxidant")
            }
            Self::Property(e) => e.fmt(f),
        }
    }
}

impl std::error::Error for CombustionError {}

impl From<PropertyError> for CombustionError {
    fn from(e: PropertyError) -> Self {
        CombustionError::Property(e)
    }
}

/// a + b·λ
#[derive(Clone, Copy, Debug, PartialEq)]
struct Line {
    a: f64,
    b: f64,
}

impl Line {
    fn at(self, lambda: f64) -> f64 {
        self.a + self.b * lambda
    }
}

/// Gas from the combustion of a fuel, complete but for a stated share of CO in the dry gas.
///
/// Datum: absolute. The composition coordinate c is the air ratio λ: oxidant supplied over the
/// oxidant for stoichiometric combustion to CO2, H2O and SO2. All amounts are linear in it.
#[derive(Clone, Debug, PartialEq)]
pub struct CombustionGas {
    /// Moles per kg of fuel of each of [`SPECIES`] against λ.
    moles: [Line; N],
    molar_masses: [f64; N],
    atoms: [Elements; N],
    /// H, S and cp per kg of fuel at `lambda_min`, and their growth with λ.
    base: Curve,
    slope: Curve,
    lambda_min: f64,
    lambda_max: f64,
    lambda: f64,
    sensitivity: f64,
    oxidant_per_ratio: f64,
    /// At the air ratio of the reading.
    critical: Option<PseudoCritical>,
}

/// H, S and cp of the blend per kg of gas at one air ratio, S with its mixing term.
struct Blend<'a> {
    gas: &'a CombustionGas,
    excess: f64,
    mass: f64,
    mixing: f64,
}

impl Calorics for Blend<'_> {
    fn range(&self) -> (f64, f64) {
        self.gas.base.range()
    }

    fn at(&self, t: f64) -> Caloric {
        let (base, slope) = (self.gas.base.at(t), self.gas.slope.at(t));
        let per_mass = |b: f64, s: f64| (b + self.excess * s) / self.mass;
        Caloric {
            cp: per_mass(base.cp, slope.cp),
            h: per_mass(base.h, slope.h),
            s: per_mass(base.s, slope.s) + self.mixing / self.mass,
        }
    }
}

impl CombustionGas {
    /// The gas of a fuel with `fuel` moles of each element per kg, burnt with `oxidant`; `reading`
    /// fixes the air ratio, `co_dry` is the mole fraction of CO in the dry gas (0 for complete
    /// combustion). What of a fuel has no elements (ash) does not enter the gas.
    ///
    /// # Errors
    /// See [`CombustionError`].
    pub fn new(
        fuel: &Elements,
        oxidant: &IdealGas,
        reading: Reading,
        co_dry: f64,
    ) -> Result<CombustionGas, CombustionError> {
        let (Reading::OxygenDry(value)
        | Reading::OxygenWet(value)
        | Reading::CarbonDioxideDry(value)
        | Reading::ExcessAir(value)) = reading;
        if !(value.is_finite() && co_dry.is_finite()) || fuel.iter().any(|n| !(n.is_finite() && *n >= 0.0)) {
            return Err(CombustionError::NotFinite);
        }
        let possible = |what, value, min, max| {
            if value < min || value > max {
                return Err(CombustionError::ImpossibleReading { what, value, min, max });
            }
            Ok(())
        };
        possible("CO in dry gas", co_dry, 0.0, 0.3)?;
        let burnt = complete_combustion(fuel).filter(|b| b.oxygen > 0.0).ok_or(CombustionError::NotAFuel)?;
        let (oxidant_atoms, _) = oxidant.elements(0.0).ok_or(CombustionError::NotAnOxidant)?;
        let air = complete_combustion(&oxidant_atoms)
            .filter(|a| a.oxygen < 0.0)
            .ok_or(CombustionError::NotAnOxidant)?;
        // Oxidant in kg per kg of fuel for λ = 1.
        let oxidant_per_ratio = burnt.oxygen / -air.oxygen;
        let amounts = |c: &super::chemistry::Combustion| {
            [c.nitrogen, -c.oxygen, c.carbon_dioxide, c.water, 0.0, c.sulfur_dioxide, c.argon, c.helium]
        };
        let (a, b) = (amounts(&burnt), amounts(&air));
        let mut moles = [Line { a: 0.0, b: 0.0 }; N];
        for ((line, a), b) in moles.iter_mut().zip(a).zip(b) {
            *line = Line { a, b: oxidant_per_ratio * b };
        }
        // Each mole of CO leaves half a mole of O2: y (D + n/2) = n for the dry amount D.
        let sum = |skip_water: bool| {
            moles
                .iter()
                .enumerate()
                .filter(|(i, _)| !(skip_water && *i == H2O))
                .fold(Line { a: 0.0, b: 0.0 }, |total, (_, m)| Line { a: total.a + m.a, b: total.b + m.b })
        };
        let (complete_dry, share) = (sum(true), co_dry / (1.0 - 0.5 * co_dry));
        let co = Line { a: share * complete_dry.a, b: share * complete_dry.b };
        for (i, factor) in [(CO, 1.0), (CO2, -1.0), (O2, 0.5)] {
            if let Some(m) = moles.get_mut(i) {
                *m = Line { a: m.a + factor * co.a, b: m.b + factor * co.b };
            }
        }
        let [_, oxygen, carbon_dioxide, water, ..] = moles;
        let dry = Line { a: complete_dry.a + 0.5 * co.a, b: complete_dry.b + 0.5 * co.b };
        let wet = Line { a: dry.a + water.a, b: dry.b + water.b };
        // No negative oxygen below, no negative CO2 above.
        let lambda_min = (-oxygen.a / oxygen.b).max(0.0);
        let lambda_max = if carbon_dioxide.b < 0.0 {
            AIR_RATIO_MAX.min(-carbon_dioxide.a / carbon_dioxide.b)
        } else {
            AIR_RATIO_MAX
        };
        if !(lambda_max > lambda_min && carbon_dioxide.at(lambda_min) >= 0.0) {
            let max = if dry.at(lambda_min) > 0.0 {
                (carbon_dioxide.at(lambda_min) + co.at(lambda_min)).max(0.0) / dry.at(lambda_min)
            } else {
                0.0
            };
            return Err(CombustionError::ImpossibleReading {
                what: "CO in dry gas",
                value: co_dry,
                min: 0.0,
                max,
            });
        }
        let solve = |what, upper: Line, lower: Line| {
            let at = |l: f64| upper.at(l) / lower.at(l);
            let (first, last) = (at(lambda_min), at(lambda_max));
            // A monotone ratio of two lines, so that its ends bound it.
            possible(what, value, first.min(last), first.max(last))?;
            let slope = upper.b - value * lower.b;
            let spread = (first - last).abs();
            if spread.is_nan() || spread < 1e-9 || slope == 0.0 {
                // The reading does not depend on the air ratio: no dry gas but oxygen, say.
                return Err(CombustionError::Undetermined(what));
            }
            let lambda = ((value * lower.a - upper.a) / slope).clamp(lambda_min, lambda_max);
            Ok((lambda, lower.at(lambda) / slope))
        };
        let (lambda, sensitivity) = match reading {
            Reading::OxygenDry(_) => solve("O2 in dry gas", oxygen, dry)?,
            Reading::OxygenWet(_) => solve("O2 in wet gas", oxygen, wet)?,
            Reading::CarbonDioxideDry(_) => solve("CO2 in dry gas", carbon_dioxide, dry)?,
            Reading::ExcessAir(x) => {
                possible("excess air", x, lambda_min - 1.0, lambda_max - 1.0)?;
                (1.0 + x, 1.0)
            }
        };
        let mut table: Vec<&Species> = Vec::with_capacity(N);
        for name in SPECIES {
            table.push(find_species(name).ok_or(PropertyError::Unstated("species data of combustion gas"))?);
        }
        let weighted = |amount: &dyn Fn(&Line) -> f64| {
            let parts: Vec<(&Curve, f64)> =
                table.iter().zip(&moles).map(|(s, m)| (s.curve(), amount(m))).collect();
            Curve::weighted(&parts).ok_or(CombustionError::NotAnOxidant)
        };
        let base = weighted(&|m| m.at(lambda_min))?;
        let slope = weighted(&|m| m.b)?;
        let critical = PseudoCritical::new(table.iter().zip(&moles).map(|(s, m)| (*s, m.at(lambda))));
        let mut molar_masses = [0.0; N];
        let mut atoms = [[0.0; Element::COUNT]; N];
        for ((mass, atom), species) in molar_masses.iter_mut().zip(&mut atoms).zip(&table) {
            *mass = species.molar_mass();
            *atom = *species.elements().ok_or(CombustionError::NotAnOxidant)?;
        }
        Ok(CombustionGas {
            moles,
            molar_masses,
            atoms,
            base,
            slope,
            lambda_min,
            lambda_max,
            lambda,
            sensitivity,
            oxidant_per_ratio,
            critical,
        })
    }

    /// The air ratio λ that the reading gives.
    pub fn air_ratio(&self) -> f64 {
        self.lambda
    }

    /// dλ/d(reading) at that air ratio.
    pub fn air_ratio_sensitivity(&self) -> f64 {
        self.sensitivity
    }

    /// Lowest and highest air ratio that this gas can be had at.
    pub fn air_ratio_range(&self) -> (f64, f64) {
        (self.lambda_min, self.lambda_max)
    }

    /// kg of oxidant per kg of fuel at an air ratio.
    pub fn oxidant_per_fuel(&self, lambda: f64) -> f64 {
        self.oxidant_per_ratio * lambda
    }

    /// kg of gas per kg of fuel at an air ratio.
    pub fn gas_per_fuel(&self, lambda: f64) -> f64 {
        self.amounts(lambda).0
    }

    /// Mole fractions of [`SPECIES`] in the wet gas at an air ratio, and their derivatives with
    /// respect to it.
    ///
    /// # Errors
    /// An air ratio outside [`CombustionGas::air_ratio_range`].
    pub fn composition(&self, lambda: f64) -> Result<([f64; N], [f64; N]), PropertyError> {
        self.fractions(lambda, false)
    }

    /// As [`CombustionGas::composition`] for the dry gas; water reads 0.
    ///
    /// # Errors
    /// An air ratio outside [`CombustionGas::air_ratio_range`].
    pub fn dry_composition(&self, lambda: f64) -> Result<([f64; N], [f64; N]), PropertyError> {
        self.fractions(lambda, true)
    }

    /// The gas at an air ratio as a mixture of fixed composition.
    ///
    /// # Errors
    /// An air ratio outside [`CombustionGas::air_ratio_range`] (`InvalidFraction`).
    pub fn mixture(&self, lambda: f64) -> Result<IdealGas, CompositionError> {
        let (x, _) = self
            .composition(lambda)
            .map_err(|_| CompositionError::InvalidFraction("combustion gas".to_owned()))?;
        let parts: Vec<(&str, f64)> = SPECIES.into_iter().zip(x).collect();
        IdealGas::from_names(&parts)
    }

    fn fractions(&self, lambda: f64, dry: bool) -> Result<([f64; N], [f64; N]), PropertyError> {
        self.check(lambda)?;
        let mut lines = self.moles;
        if dry && let Some(water) = lines.get_mut(H2O) {
            *water = Line { a: 0.0, b: 0.0 };
        }
        let total = lines.iter().map(|m| m.at(lambda)).sum::<f64>();
        let growth = lines.iter().map(|m| m.b).sum::<f64>();
        let x = lines.map(|m| m.at(lambda).max(0.0) / total);
        let mut dx = [0.0; N];
        for ((d, x), m) in dx.iter_mut().zip(x).zip(&lines) {
            *d = (m.b - x * growth) / total;
        }
        Ok((x, dx))
    }

    /// CO2 in the dry gas that belongs to a share of O2 in it, for this fuel, oxidant and CO: the
    /// line on which a consistent pair of readings lies. Its value at no O2 is the highest CO2.
    ///
    /// # Errors
    /// An O2 share that cannot occur.
    pub fn carbon_dioxide_for_oxygen(&self, oxygen_dry: f64) -> Result<f64, PropertyError> {
        let [first, last] = [self.lambda_min, self.lambda_max].map(|l| self.dry_composition(l));
        let (first, last) = (first?.0, last?.0);
        let ([_, x0, y0, ..], [_, x1, y1, ..]) = (first, last);
        in_range("O2 in dry gas", "1", oxygen_dry, x0, x1)?;
        // Both are a ratio of lines in λ over the same denominator, so one is linear in the other.
        Ok(y0 + (y1 - y0) * (oxygen_dry - x0) / (x1 - x0))
    }

    /// The gas that leaves an adiabatic flame without dissociation, from absolute enthalpies of
    /// fuel and oxidant (J/kg). Ash, where there is any, is taken to leave at the datum.
    ///
    /// # Errors
    /// As [`Engine::state`]: above 6000 K there are no data, and above some 1800 K dissociation,
    /// which is left out, lowers the temperature.
    pub fn adiabatic_flame(
        &self,
        lambda: f64,
        fuel_enthalpy: f64,
        oxidant_enthalpy: f64,
        p: f64,
    ) -> Result<State, PropertyError> {
        self.check(lambda)?;
        let h =
            (fuel_enthalpy + self.oxidant_per_fuel(lambda) * oxidant_enthalpy) / self.gas_per_fuel(lambda);
        self.state(Pair::PressureEnthalpy, p, h, lambda)
    }

    fn check(&self, lambda: f64) -> Result<(), PropertyError> {
        in_range("air ratio", "1", lambda, self.lambda_min, self.lambda_max)
    }

    /// Mass and moles of gas per kg of fuel, and their growth with λ.
    fn amounts(&self, lambda: f64) -> (f64, f64, f64, f64) {
        self.moles.iter().zip(&self.molar_masses).fold((0.0, 0.0, 0.0, 0.0), |s, (m, mass)| {
            (s.0 + m.at(lambda) * mass, s.1 + m.b * mass, s.2 + m.at(lambda), s.3 + m.b)
        })
    }
}

impl Engine for CombustionGas {
    fn provenance(&self) -> Provenance {
        let (low, high) = self.base.range();
        Provenance {
            formulation: "combustion gas, ideal mixture, NASA nine-coefficient polynomials".to_owned(),
            source: find_species("CO2").map_or_else(String::new, |s| s.source().to_owned()),
            range: format!(
                "{low:.2} to {high:.2} K, air ratio {:.4} to {:.0}, no dissociation, no condensation",
                self.lambda_min, self.lambda_max
            ),
        }
    }

    fn supports(&self, pair: Pair) -> bool {
        supports(pair)
    }

    fn state(&self, pair: Pair, a: f64, b: f64, c: f64) -> Result<State, PropertyError> {
        self.check(c)?;
        let (mass, mass_growth, moles, moles_growth) = self.amounts(c);
        // −R Σ N ln x, and its growth: Σ N d(ln x) vanishes.
        let (mut mixing, mut mixing_growth) = (0.0, 0.0);
        for line in &self.moles {
            let n = line.at(c).max(0.0);
            let ln = (n / moles).max(TRACE).ln();
            mixing -= GAS_CONSTANT * n * ln;
            mixing_growth -= GAS_CONSTANT * line.b * ln;
        }
        let blend = Blend { gas: self, excess: c - self.lambda_min, mass, mixing };
        let mut state = gas_state(&blend, GAS_CONSTANT * moles / mass, pair, a, b)?;
        let slope = self.slope.at(state.temperature);
        let pressure_term = GAS_CONSTANT * moles_growth * (state.pressure / STANDARD_PRESSURE).ln();
        for (property, growth) in [
            (Property::Enthalpy, slope.h - state.enthalpy * mass_growth),
            (Property::Entropy, slope.s + mixing_growth - pressure_term - state.entropy * mass_growth),
            (Property::Volume, state.volume * (moles_growth * mass / moles - mass_growth)),
        ] {
            if let Some(row) = state.gradient.get_mut(property as usize) {
                row[2] = growth / mass;
            }
        }
        Ok(state)
    }

    fn molar_mass(&self, c: f64) -> Option<f64> {
        self.check(c).ok()?;
        let (mass, _, moles, _) = self.amounts(c);
        Some(mass / moles)
    }

    fn elements(&self, c: f64) -> Option<(Elements, Elements)> {
        self.check(c).ok()?;
        let (mass, mass_growth, ..) = self.amounts(c);
        let mut n = [0.0; Element::COUNT];
        let mut dn = [0.0; Element::COUNT];
        for (line, atoms) in self.moles.iter().zip(&self.atoms) {
            for ((n, dn), atom) in n.iter_mut().zip(&mut dn).zip(atoms) {
                *n += line.at(c) * atom / mass;
                *dn += line.b * atom / mass;
            }
        }
        for (n, dn) in n.iter().zip(&mut dn) {
            *dn -= n * mass_growth / mass;
        }
        Some((n, dn))
    }

    fn datum(&self) -> Option<Datum> {
        Some(Datum { enthalpy: 0.0, entropy: 0.0 })
    }

    /// That of the polynomials, and |Z − 1| for the pressure effect that the model neglects.
    fn elements_vary(&self) -> bool {
        true
    }

    fn relative_uncertainty(&self, state: &State) -> f64 {
        let neglected = self.critical.map_or(0.0, |c| c.departure(state.temperature, state.pressure));
        (UNCERTAINTY * UNCERTAINTY + neglected * neglected).sqrt()
    }
}
