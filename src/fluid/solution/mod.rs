//! Liquid solutions in water: seawater, sodium chloride, and water with glycol.
//!
//! A salt solution is the Gibbs energy of liquid water (IAPWS-IF97 region 1) plus a published
//! saline part, so that at zero salinity it is the fluid `water` exactly, and pure permeate and
//! brine can stand in one balance. Enthalpy, entropy, volume, the chemical potential of water and
//! the osmotic pressure all come from that one function.

mod glycol;
mod sea_salt;
mod sodium_chloride;

pub use glycol::{Glycol, GlycolKind};

use super::humid_air::water;
use super::numeric::{finite, root, within};
use super::{Datum, Element, Elements, Engine, Pair, Phase, PropertyError, Provenance, State};

/// The salt of a [`Solution`].
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Salt {
    /// Sea salt of reference composition.
    Sea,
    /// Sodium chloride.
    SodiumChloride,
}

impl Salt {
    /// Range of temperature in K, of pressure in Pa and of the mass fraction of salt.
    pub const fn range(self) -> [(f64, f64); 3] {
        match self {
            Salt::Sea => [(273.15, 353.15), (1e3, 2e7), (0.0, 0.12)],
            Salt::SodiumChloride => [(273.15, 373.15), (1e3, 2e7), (0.0, 0.26)],
        }
    }
}

/// Saline part of the specific Gibbs energy per kg of solution and its derivatives, SI.
#[derive(Clone, Copy, Debug, Default)]
struct Saline {
    g: f64,
    t: f64,
    p: f64,
    tt: f64,
    tp: f64,
    pp: f64,
    c: f64,
    tc: f64,
    pc: f64,
}

/// Salinity that stands in for zero in the derivatives with respect to salinity, which are
/// infinite there.
const TRACE: f64 = 1e-9;

/// An aqueous salt solution; the composition coordinate is the mass fraction of salt, kg per kg
/// of solution. Immutable.
///
/// Datum: water as IAPWS-IF97. Sea salt as IAPWS R13-08 has it; sodium chloride h = 0 and s = 0 at
/// infinite dilution (1 mol/kg standard state) at 298.15 K and 0.1 MPa. The salt's datum drops out
/// wherever salt is conserved.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Solution {
    salt: Salt,
}

impl Solution {
    /// Seawater and brine of sea salt.
    pub const fn seawater() -> Solution {
        Solution { salt: Salt::Sea }
    }

    /// Sodium chloride solution.
    pub const fn sodium_chloride() -> Solution {
        Solution { salt: Salt::SodiumChloride }
    }

    /// Which salt.
    pub const fn salt(&self) -> Salt {
        self.salt
    }

    /// Gibbs energy of the solution and its derivatives; input is checked.
    fn gibbs(&self, p: f64, t: f64, c: f64) -> Result<Saline, PropertyError> {
        finite(&[p, t, c])?;
        let [by_t, by_p, by_c] = self.salt.range();
        within("temperature", "K", t, by_t)?;
        within("pressure", "Pa", p, by_p)?;
        within("mass fraction of salt", "kg/kg", c, by_c)?;
        let boiling = water::saturation_liquid(t).0;
        within("pressure", "Pa", p, (boiling.min(by_p.1), by_p.1))?;
        Ok(self.gibbs_unchecked(p, t, c))
    }

    fn gibbs_unchecked(&self, p: f64, t: f64, c: f64) -> Saline {
        let w = water::liquid(p, t);
        let trace = c.max(TRACE);
        let part = match self.salt {
            Salt::Sea => sea_salt::saline(p, t, trace),
            Salt::SodiumChloride => sodium_chloride::saline(p, t, trace, [w.g, w.t, w.p, w.tt, w.tp, w.pp]),
        };
        if c < TRACE {
            // Pure water exactly; only the derivatives with respect to c come from the trace.
            return Saline { c: part.c, tc: part.tc, pc: part.pc, ..pure(w) };
        }
        Saline {
            g: w.g + part.g,
            t: w.t + part.t,
            p: w.p + part.p,
            tt: w.tt + part.tt,
            tp: w.tp + part.tp,
            pp: w.pp + part.pp,
            ..part
        }
    }

    /// Chemical potential of the water in the solution, J per kg of water, on the datum of
    /// IAPWS-IF97, at `p` (Pa), `t` (K) and mass fraction of salt `c`.
    ///
    /// # Errors
    /// Input outside the range, or a pressure below boiling.
    pub fn water_potential(&self, p: f64, t: f64, c: f64) -> Result<f64, PropertyError> {
        let g = self.gibbs(p, t, c)?;
        Ok(if c < TRACE { g.g } else { g.g - c * g.c })
    }

    /// Osmotic pressure in Pa against pure water at `p` (Pa) and `t` (K): the excess pressure at
    /// which the water of the solution has the chemical potential of pure water at `p`.
    ///
    /// # Errors
    /// As [`Solution::water_potential`].
    pub fn osmotic_pressure(&self, p: f64, t: f64, c: f64) -> Result<f64, PropertyError> {
        self.gibbs(p, t, c)?;
        let target = water::liquid(p, t).g;
        let mut excess = 0.0_f64;
        for _ in 0..30 {
            let g = self.gibbs_unchecked(p + excess, t, c);
            let (potential, volume) = if c < TRACE { (g.g, g.p) } else { (g.g - c * g.c, g.p - c * g.pc) };
            let step = (target - potential) / volume;
            excess += step;
            if !excess.is_finite() || excess.abs() > 1e8 {
                break;
            }
            if step.abs() <= 1e-3 {
                return Ok(excess);
            }
        }
        Err(PropertyError::NoConvergence)
    }

    /// Least work of separation at constant `p` and `t`, J per kg of product: the rise in Gibbs
    /// energy when a feed of mass fraction `feed` becomes the share `recovery` (mass of product
    /// per mass of feed, above 0) of a product of mass fraction `product`, and brine.
    ///
    /// # Errors
    /// A brine or any other figure outside the range of the formulation.
    pub fn separation_work(
        &self,
        p: f64,
        t: f64,
        feed: f64,
        product: f64,
        recovery: f64,
    ) -> Result<f64, PropertyError> {
        finite(&[recovery])?;
        within("recovery", "kg/kg", recovery, (1e-6, 1.0 - 1e-6))?;
        let brine = (feed - recovery * product) / (1.0 - recovery);
        let g = |c: f64| self.gibbs(p, t, c).map(|g| g.g);
        Ok((recovery * g(product)? + (1.0 - recovery) * g(brine)? - g(feed)?) / recovery)
    }

    /// Temperature at which enthalpy (row 2) or entropy (row 3) takes `target`.
    fn temperature_at(&self, p: f64, target: f64, row: usize, c: f64) -> Result<f64, PropertyError> {
        finite(&[target])?;
        let [(low, top), ..] = self.salt.range();
        // Below its boiling point; the water's saturation temperature caps the range.
        let mut high = top;
        if p.is_finite() && p < water::saturation_liquid(top).0 {
            high = boiling_temperature(p, low, top);
        }
        let value = |t: f64| {
            self.gibbs(p, t, c).map(|g| if row == 2 { (g.g - t * g.t, -t * g.tt) } else { (-g.t, -g.tt) })
        };
        let names = if row == 2 { ("enthalpy", "J/kg") } else { ("entropy", "J/(kg K)") };
        solve_temperature(value, target, names, low, high)
    }
}

/// Saturation temperature of pure water at `p`, kept in [low, high].
fn boiling_temperature(p: f64, low: f64, high: f64) -> f64 {
    let (mut a, mut b) = (low, high);
    for _ in 0..60 {
        let m = 0.5 * (a + b);
        if water::saturation_liquid(m).0 <= p { a = m } else { b = m }
    }
    a
}

/// Temperature in [low, high] at which a rising function of it, that gives value and slope, takes
/// `target`.
fn solve_temperature(
    value: impl Fn(f64) -> Result<(f64, f64), PropertyError>,
    target: f64,
    (quantity, unit): (&'static str, &'static str),
    low: f64,
    high: f64,
) -> Result<f64, PropertyError> {
    let (min, max) = (value(low)?.0, value(high)?.0);
    // Rounding of a state at the very end of the range.
    let slack = 1e-10 * (max - min);
    within(quantity, unit, target, (min - slack, max + slack))?;
    let start = low + (high - low) * ((target - min) / (max - min)).clamp(0.0, 1.0);
    root(low, high, start, |t| value(t).map(|(f, slope)| (target - f, -slope)))
}

/// Pure water as a solution without salt.
fn pure(w: water::LiquidWater) -> Saline {
    Saline { g: w.g, t: w.t, p: w.p, tt: w.tt, tp: w.tp, pp: w.pp, ..Saline::default() }
}

/// The liquid state of a Gibbs energy.
fn liquid_state(p: f64, t: f64, g: &Saline) -> Result<State, PropertyError> {
    let mut state = State::one_phase(t, p, g.g - t * g.t, -g.t, g.p, Phase::Liquid, -t * g.tt, g.tp, g.pp);
    state.gradient[2][2] = g.c - t * g.tc;
    state.gradient[3][2] = -g.tc;
    state.gradient[4][2] = g.pc;
    let finite = [state.enthalpy, state.entropy, state.volume].iter().all(|x| x.is_finite())
        && state.gradient.iter().flatten().all(|x| x.is_finite());
    if finite { Ok(state) } else { Err(PropertyError::NoConvergence) }
}

/// Ion fractions of reference sea salt by amount and the molar mass of its mixture: F. J. Millero,
/// R. Feistel, D. G. Wright, T. J. McDougall, The composition of standard seawater and the
/// definition of the reference-composition salinity scale, Deep-Sea Res. I 55 (2008) 50-72.
/// Strontium counts as calcium, bromide and fluoride as chloride; boron is left out.
const SEA_SALT: [(Element, f64); 9] = [
    (Element::Na, 0.418_807_1),
    (Element::Mg, 0.047_167_8),
    (Element::Ca, 0.009_182_3 + 0.000_081_0),
    (Element::K, 0.009_115_9),
    (Element::Cl, 0.487_483_9 + 0.000_752_0 + 0.000_061_0),
    (Element::S, 0.025_215_2),
    (Element::C, 0.001_534_0 + 0.000_213_4 + 0.000_008_6),
    (Element::O, 4.0 * 0.025_215_2 + 3.0 * (0.001_534_0 + 0.000_213_4) + 2.0 * 0.000_008_6),
    (Element::H, 0.001_534_0),
];

impl Solution {
    /// Moles of each element per kg of water and per kg of salt.
    fn make_up(&self) -> (Elements, Elements) {
        let (mut w, mut s) = ([0.0; Element::COUNT], [0.0; Element::COUNT]);
        let water_mass = 2.0 * Element::H.molar_mass() + Element::O.molar_mass();
        w[Element::H as usize] = 2.0 / water_mass;
        w[Element::O as usize] = 1.0 / water_mass;
        match self.salt {
            Salt::SodiumChloride => {
                let mass = Element::Na.molar_mass() + Element::Cl.molar_mass();
                s[Element::Na as usize] = 1.0 / mass;
                s[Element::Cl as usize] = 1.0 / mass;
            }
            Salt::Sea => {
                // Normalised to one kg, which the left-out traces would miss.
                let mass: f64 = SEA_SALT.iter().map(|(e, n)| n * e.molar_mass()).sum();
                for (e, n) in SEA_SALT {
                    s[e as usize] = n / mass;
                }
            }
        }
        (w, s)
    }
}

impl Engine for Solution {
    fn provenance(&self) -> Provenance {
        let [(_, t), (_, p), (_, c)] = self.salt.range();
        let range = format!(
            "0 to {:.0} degC, boiling pressure to {:.0} MPa, mass fraction of salt 0 to {c}",
            t - 273.15,
            p / 1e6
        );
        match self.salt {
            Salt::Sea => Provenance {
                formulation: "Seawater, IAPWS-08 saline part on IAPWS-IF97 water".to_owned(),
                source: "IAPWS R13-08, Release on the IAPWS Formulation 2008 for the Thermodynamic \
                         Properties of Seawater; IAPWS AN5-13"
                    .to_owned(),
                range: range
                    + " (above 0.042 or 40 degC the equation is fitted at atmospheric pressure; higher \
                       pressures extrapolate)",
            },
            Salt::SodiumChloride => Provenance {
                formulation: "Sodium chloride solution, Pitzer equations on IAPWS-IF97 water".to_owned(),
                source: "L. F. Silvester, K. S. Pitzer, J. Phys. Chem. 81 (1977) 1822-1828; N. Moller, \
                         Geochim. Cosmochim. Acta 52 (1988) 821-837; M. Laliberte, W. E. Cooper, J. Chem. \
                         Eng. Data 49 (2004) 1141-1151"
                    .to_owned(),
                range,
            },
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
        liquid_state(a, t, &self.gibbs(a, t, c)?)
    }

    fn molar_mass(&self, _c: f64) -> Option<f64> {
        // Ions or formula units: there is no one answer for an electrolyte.
        None
    }

    fn elements(&self, c: f64) -> Option<(Elements, Elements)> {
        if !(0.0..=1.0).contains(&c) {
            return None;
        }
        let (water, salt) = self.make_up();
        let (mut value, mut slope) = ([0.0; Element::COUNT], [0.0; Element::COUNT]);
        for ((v, d), (w, s)) in value.iter_mut().zip(slope.iter_mut()).zip(water.iter().zip(&salt)) {
            *v = (1.0 - c) * w + c * s;
            *d = s - w;
        }
        Some((value, slope))
    }

    fn datum(&self) -> Option<Datum> {
        // The way to the absolute datum depends on composition: see `datum_at`.
        None
    }

    /// Water joins the liquid at 298.15 K and 0.1 MPa (-285.830 kJ/mol, 69.95 J/(mol K)). Sodium
    /// chloride has the values of its ions (-407.42 kJ/mol, 115.05 J/(mol K)): CODATA key values,
    /// 1989. Sea salt keeps its own datum, which drops out as long as the salt does not react.
    fn datum_at(&self, c: f64) -> Option<(Datum, Datum)> {
        if !(0.0..=1.0).contains(&c) {
            return None;
        }
        let water = water::absolute_offset();
        let salt = match self.salt {
            Salt::Sea => Datum { enthalpy: 0.0, entropy: 0.0 },
            Salt::SodiumChloride => Datum {
                enthalpy: -407_420.0 / sodium_chloride::MOLAR_MASS,
                entropy: 115.05 / sodium_chloride::MOLAR_MASS,
            },
        };
        let slope = Datum { enthalpy: salt.enthalpy - water.enthalpy, entropy: salt.entropy - water.entropy };
        let value = Datum {
            enthalpy: water.enthalpy + c * slope.enthalpy,
            entropy: water.entropy + c * slope.entropy,
        };
        Some((value, slope))
    }

    fn elements_vary(&self) -> bool {
        true
    }

    fn relative_uncertainty(&self, _state: &State) -> f64 {
        match self.salt {
            // Heat capacity 0.5 J/(kg K) of 4000 (IAPWS R13-08), doubled for the extrapolated parts.
            Salt::Sea => 3e-4,
            // Heat capacity against published brine tables: within 0.6 % to a mass fraction of 0.1,
            // 2 % at 0.2.
            Salt::SodiumChloride => 1e-2,
        }
    }
}

/// Least work of separation of a dilute feed by van 't Hoff's law, J per m³ of product: the
/// osmotic pressure `feed` (Pa) of the feed at the share `recovery` of it that becomes pure
/// product, (pi/r) ln(1/(1 - r)); pi itself at zero recovery.
///
/// # Errors
/// A recovery outside 0 to 1 (exclusive), or input that is not finite.
pub fn dilute_separation_work(feed: f64, recovery: f64) -> Result<f64, PropertyError> {
    finite(&[feed, recovery])?;
    within("recovery", "1", recovery, (0.0, 1.0 - 1e-9))?;
    within("osmotic pressure", "Pa", feed, (0.0, 1e9))?;
    // -ln(1 - r)/r goes to 1.
    Ok(if recovery < 1e-9 { feed } else { -feed * libm::log1p(-recovery) / recovery })
}
