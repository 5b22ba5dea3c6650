//! Separation: the least work by the Gibbs energy of mixing.

use super::body::{Body, Side, View};
use super::case::{Case, Entropy, Limit, Physics, Sense, Shared, Shown};
use super::desk::{Computed, Desk, Given, Role, trouble};
use super::words;
use crate::diagnostic::{Code, Diagnostic, nearest};
use crate::document::Node;
use crate::fluid::heat_capacity::GAS_CONSTANT;
use crate::fluid::ideal_gas::find_species;
use crate::fluid::solution::{Solution, dilute_separation_work};
use crate::fluid::{Engine, Pair};
use crate::quantity::{Dimension as D, Reference};
use crate::report::Formulation;
use std::rc::Rc;

const LAW: &str = "the rise of the Gibbs energy (with pressure, of the flow exergy) from feed to products, which no \
                   separation at this temperature can undercut (Bejan, Tsatsaronis and Moran, Thermal Design and \
                   Optimization, 1996, chapter 3)";

/// Where the feed stands in for an infinite one: the share that is won, kg/kg.
const NEAR_ZERO: f64 = 1e-5;
/// Atmospheric pressure, Pa: that of a salt solution.
const ATMOSPHERE: f64 = 101_325.0;

/// A temperature of the inputs, K.
type Kelvin = Rc<dyn Fn(&[f64]) -> f64>;
/// Amount of product per volume, where the reference counts it.
type PerVolume = Box<dyn Fn(&[f64], Reference) -> Computed<f64>>;

fn temperature(desk: &mut Desk<'_>) -> Option<Kelvin> {
    let root = Some(desk.root);
    if desk.root.get("temperature").is_some() {
        let t = desk.member(root, "temperature", D::Temperature, Role::Condition)?;
        return Some(Rc::new(move |x| t.at(x)));
    }
    desk.assume("/temperature", "the separation is at 25 degC");
    Some(Rc::new(|_| 298.15))
}

/// An ideal mixture, with a product of one substance.
struct Mixture {
    /// Mole fractions of the feed; the product's substance first.
    feed: Vec<Given>,
    molar_masses: Vec<Option<f64>>,
    purity: Option<Given>,
    recovery: Option<Given>,
    feed_pressure: Option<Given>,
    product_pressure: Option<Given>,
}

fn xlnx(x: f64) -> f64 {
    if x > 0.0 { x * x.ln() } else { 0.0 }
}

impl Mixture {
    /// Normalised feed and composition of the product.
    fn compositions(&self, x: &[f64]) -> (Vec<f64>, Vec<f64>) {
        let raw: Vec<f64> = self.feed.iter().map(|g| g.at(x)).collect();
        let sum: f64 = raw.iter().sum();
        let feed: Vec<f64> = raw.iter().map(|f| f / sum).collect();
        let own = feed.first().copied().unwrap_or(f64::NAN);
        let purity = self.purity.as_ref().map_or(1.0, |g| g.at(x));
        // Impurities come with the product in the proportions of the feed.
        let product = feed
            .iter()
            .enumerate()
            .map(|(i, f)| if i == 0 { purity } else { (1.0 - purity) * f / (1.0 - own) })
            .collect();
        (feed, product)
    }

    /// Least work over R T, per mole of product.
    fn reduced_work(&self, x: &[f64]) -> Computed<f64> {
        let (feed, product) = self.compositions(x);
        let pressure = match (&self.feed_pressure, &self.product_pressure) {
            (Some(a), Some(b)) => (b.at(x) / a.at(x)).ln(),
            _ => 0.0,
        };
        let Some(recovery) = &self.recovery else {
            let mixing: f64 =
                product.iter().zip(&feed).map(|(y, f)| if *y > 0.0 { y * (y / f).ln() } else { 0.0 }).sum();
            return Ok(mixing + pressure);
        };
        let (own, purity) =
            (feed.first().copied().unwrap_or(f64::NAN), product.first().copied().unwrap_or(f64::NAN));
        let amount = recovery.at(x) * own / purity;
        let rest: Vec<f64> = feed.iter().zip(&product).map(|(f, y)| f - amount * y).collect();
        let left: f64 = rest.iter().sum();
        if rest.iter().any(|r| *r < -1e-12) || left < -1e-12 {
            let text = "purity and recovery would take more of the other substances than the feed holds";
            return Err(Diagnostic::new(Code::BadClaim, "/purity", text));
        }
        let mixing = |n: &[f64]| -> f64 { n.iter().map(|v| xlnx(*v)).sum() };
        let residue = if left > 0.0 { mixing(&rest) - xlnx(left) } else { 0.0 };
        Ok((amount * mixing(&product) + residue - mixing(&feed)) / amount + pressure)
    }

    /// Molar mass of the product, kg/mol.
    fn molar_mass(&self, x: &[f64]) -> Computed<f64> {
        let (_, product) = self.compositions(x);
        let mut sum = 0.0;
        for (y, m) in product.iter().zip(&self.molar_masses) {
            match m {
                Some(m) => sum += y * m,
                None if *y > 0.0 => {
                    let text =
                        "a substance of the product is not in the table of species, so its mass is not known";
                    return Err(Diagnostic::new(Code::UnknownSpecies, "/feed", text)
                        .hint("claim `molar_work` instead"));
                }
                None => {}
            }
        }
        Ok(sum)
    }
}

fn mixture(desk: &mut Desk<'_>, feed: Node<'_>) -> Option<Mixture> {
    let root = desk.root;
    let Some(product) = root.get("product").and_then(Node::text) else {
        desk.needs("", "the member \"product\" is missing", "name the substance of the feed that is won");
        return None;
    };
    let names: Vec<String> = root.get("feed")?.members().map(|(n, _)| n.to_owned()).collect();
    if !names.iter().any(|n| n == product) {
        let near = nearest(product, names.iter().map(String::as_str));
        let hint = near.first().map_or_else(
            || format!("the feed holds {}", names.join(", ")),
            |n| format!("did you mean \"{n}\"?"),
        );
        desk.faults.push(
            Diagnostic::new(Code::UnknownSpecies, "/product", "the product is not a substance of the feed")
                .hint(hint),
        );
        return None;
    }
    let mut given = Vec::new();
    let mut molar_masses = Vec::new();
    for name in std::iter::once(product).chain(names.iter().map(String::as_str).filter(|n| *n != product)) {
        let fraction = desk.positive(root.get("feed"), name, D::Fraction, Role::Condition, Some(1.0));
        given.push(fraction);
        molar_masses.push(find_species(name).map(|s| s.molar_mass()));
    }
    let given: Vec<Given> = given.into_iter().collect::<Option<_>>()?;
    let x: Vec<f64> = desk.inputs.iter().map(|i| i.value).collect();
    let sum: f64 = given.iter().map(|g| g.at(&x)).sum();
    // Analyses are printed to a few digits; 1 % of rounding is brought to one.
    if (sum - 1.0).abs() > 0.01 || given.len() < 2 {
        let pointer = feed.pointer();
        let message = if given.len() < 2 {
            "a feed of one substance is no mixture".to_owned()
        } else {
            format!("the mole fractions of the feed sum to {sum:.4}, not 1")
        };
        desk.faults.push(Diagnostic::new(Code::OutOfBounds, pointer, message));
        return None;
    }
    let purity = desk.positive(Some(root), "purity", D::Fraction, Role::Condition, Some(1.0));
    let recovery = desk.positive(Some(root), "recovery", D::Fraction, Role::Condition, Some(1.0));
    if recovery.is_none() {
        desk.assume("/recovery", "next to nothing of the feed is won, the most lenient case");
        desk.lacks("/recovery", "the share of the product's substance that is won");
    }
    if purity.is_none() {
        desk.assume("/purity", format!("the product is pure {product}"));
    }
    let feed_pressure = desk.member(Some(root), "feed_pressure", D::Pressure, Role::Condition);
    let product_pressure = desk.member(Some(root), "product_pressure", D::Pressure, Role::Condition);
    if product_pressure.is_some() && feed_pressure.is_none() {
        desk.needs("", "the member \"feed_pressure\" is missing", "it goes with \"product_pressure\"");
        return None;
    }
    let formulation = Formulation {
        formulation: "ideal mixture".to_owned(),
        source: "entropy of mixing −R Σ x ln x per mole".to_owned(),
        range: "gases at low pressure, liquids of alike molecules".to_owned(),
    };
    desk.formulations.push("feed", formulation);
    desk.assume("/feed", "feed and products are ideal mixtures");
    Some(Mixture { feed: given, molar_masses, purity, recovery, feed_pressure, product_pressure })
}

/// What the forms have in common: least work per unit of product.
struct Basis {
    subject: String,
    least: Physics,
    /// SI value of each claimable figure per SI value of the least work: by volume, mass, mole.
    volume: Option<PerVolume>,
    mass: Option<Physics>,
    mole: Option<Physics>,
    entropy: (D, &'static str),
    dimension: D,
}

fn by_mixture(desk: &mut Desk<'_>, feed: Node<'_>, t: &Kelvin) -> Option<Basis> {
    let mixture = Rc::new(mixture(desk, feed)?);
    let product = desk.root.get("product").and_then(Node::text).unwrap_or_default();
    let subject = format!("A separation of {product} from a mixture is claimed.");
    let (a, b) = (mixture.clone(), mixture.clone());
    let (t1, t2) = (t.clone(), t.clone());
    Some(Basis {
        subject,
        least: Box::new(move |x| Ok(GAS_CONSTANT * t1(x) * a.reduced_work(x)?)),
        volume: Some(Box::new(move |x, reference| match (reference.conditions(), &b.product_pressure) {
            (Some((t, p)), _) => Ok(p / (GAS_CONSTANT * t)),
            (None, Some(p)) => Ok(p.at(x) / (GAS_CONSTANT * t2(x))),
            (None, None) => {
                let text = "an actual volume of product needs \"product_pressure\" and \"feed_pressure\"";
                Err(Diagnostic::new(Code::BadClaim, "/claim/energy_per_volume", text)
                    .hint("or state it per Nm3"))
            }
        })),
        mass: Some(Box::new(move |x| Ok(1.0 / mixture.molar_mass(x)?))),
        mole: Some(Box::new(|_| Ok(1.0))),
        entropy: (D::MolarEntropy, "mol of product"),
        dimension: D::MolarEnergy,
    })
}

fn by_solution(desk: &mut Desk<'_>, t: &Kelvin) -> Option<Basis> {
    let root = Some(desk.root);
    let name = desk.root.get("solution").and_then(Node::text).unwrap_or("seawater");
    let solution = if name == "seawater" { Solution::seawater() } else { Solution::sodium_chloride() };
    let Some(salinity) = desk.positive(root, "salinity", D::HumidityRatio, Role::Condition, Some(1.0)) else {
        if desk.root.get("salinity").is_none() {
            desk.needs(
                "",
                "the member \"salinity\" is missing",
                "mass of salt per mass of solution: \"35 g/kg\"",
            );
        }
        return None;
    };
    let product = desk.member(root, "product_salinity", D::HumidityRatio, Role::Condition);
    let recovery = recovery(desk)?;
    let p = solution.provenance();
    let formulation = Formulation { formulation: p.formulation, source: p.source, range: p.range };
    desk.formulations.push(name, formulation);
    let subject = format!(
        "A desalination of {name} of salinity {} with a recovery of {} is claimed.",
        salinity.text,
        recovery.as_ref().map_or("next to nothing", |r| r.text.as_str())
    );
    let (t1, t2) = (t.clone(), t.clone());
    let fresh = move |x: &[f64]| product.as_ref().map_or(0.0, |g| g.at(x));
    let fresh = Rc::new(fresh);
    let fresh_too = fresh.clone();
    let pointer = "/salinity";
    Some(Basis {
        subject,
        least: Box::new(move |x| {
            let share = recovery.as_ref().map_or(NEAR_ZERO, |r| r.at(x));
            solution
                .separation_work(ATMOSPHERE, t1(x), salinity.at(x), fresh(x), share)
                .map_err(|e| trouble(pointer, "the solution", &e))
        }),
        volume: Some(Box::new(move |x, reference| {
            if reference.conditions().is_some() {
                let text = "a liquid is not counted in normal or standard volume";
                return Err(
                    Diagnostic::new(Code::BadClaim, "/claim/energy_per_volume", text).hint("write kWh/m3")
                );
            }
            let state = solution.state(Pair::PressureTemperature, ATMOSPHERE, t2(x), fresh_too(x));
            state.map(|s| 1.0 / s.volume).map_err(|e| trouble(pointer, "the product", &e))
        })),
        mass: Some(Box::new(|_| Ok(1.0))),
        mole: None,
        entropy: (D::SpecificEntropy, "kg of product"),
        dimension: D::SpecificEnergy,
    })
}

fn recovery(desk: &mut Desk<'_>) -> Option<Option<Given>> {
    if desk.root.get("recovery").is_none() {
        desk.assume("/recovery", "next to nothing of the feed is won, the most lenient case");
        desk.lacks("/recovery", "the share of the feed that becomes product");
        return Some(None);
    }
    desk.positive(Some(desk.root), "recovery", D::Fraction, Role::Condition, Some(0.999)).map(Some)
}

fn by_osmotic_pressure(desk: &mut Desk<'_>) -> Option<Basis> {
    let osmotic =
        desk.positive(Some(desk.root), "osmotic_pressure", D::PressureDifference, Role::Condition, None)?;
    let recovery = recovery(desk)?;
    desk.assume("/osmotic_pressure", "the solution is dilute (van 't Hoff) and the product pure");
    let formulation = Formulation {
        formulation: "van 't Hoff".to_owned(),
        source: "least work (π/r) ln(1/(1 − r)) per volume of product; Elimelech and Phillip, Science 333 (2011) 712"
            .to_owned(),
        range: "dilute solutions".to_owned(),
    };
    desk.formulations.push("solution", formulation);
    let subject = format!(
        "A desalination of a solution of osmotic pressure {} with a recovery of {} is claimed.",
        osmotic.text,
        recovery.as_ref().map_or("next to nothing", |r| r.text.as_str())
    );
    Some(Basis {
        subject,
        least: Box::new(move |x| {
            dilute_separation_work(osmotic.at(x), recovery.as_ref().map_or(0.0, |r| r.at(x)))
                .map_err(|e| trouble("/osmotic_pressure", "the solution", &e))
        }),
        volume: Some(Box::new(|_, _| Ok(1.0))),
        mass: None,
        mole: None,
        entropy: (D::Entropy, "m3 of product"),
        dimension: D::EnergyPerVolume,
    })
}

/// A separation.
pub fn separation(desk: &mut Desk<'_>) -> Option<Case> {
    let root = desk.root;
    let t = temperature(desk)?;
    let forms: Vec<&str> =
        ["feed", "solution", "osmotic_pressure"].into_iter().filter(|m| root.get(m).is_some()).collect();
    let basis = match forms.as_slice() {
        ["feed"] => by_mixture(desk, root.get("feed")?, &t)?,
        ["solution"] => by_solution(desk, &t)?,
        [_] => by_osmotic_pressure(desk)?,
        [] if root.get("salinity").is_some() => {
            desk.assume("/solution", "the solution is seawater");
            by_solution(desk, &t)?
        }
        [] => {
            let hint = "\"feed\" for an ideal mixture; \"solution\" with \"salinity\", or \"osmotic_pressure\", for desalination";
            desk.needs("", "nothing says what is separated", hint);
            return None;
        }
        [_, extra, ..] => {
            let fault =
                Diagnostic::new(Code::Conflict, format!("/{extra}"), "what is separated is given twice");
            desk.faults.push(fault.hint("one of \"feed\", \"solution\" and \"osmotic_pressure\""));
            return None;
        }
    };
    let claim = desk.claim();
    let form = desk.one_of(&[
        &["energy_per_volume"],
        &["specific_work"],
        &["molar_work"],
        &["specific_heat_input"],
    ])?;
    let (name, dimension, spoken) = match form {
        0 => ("energy_per_volume", D::EnergyPerVolume, "work per volume of product"),
        1 => ("specific_work", D::SpecificEnergy, "work per mass of product"),
        2 => ("molar_work", D::MolarEnergy, "work per mole of product"),
        _ => ("specific_heat_input", D::SpecificEnergy, "heat per mass of product"),
    };
    let given = desk.positive(claim, name, dimension, Role::Claimed, None)?;
    let scale = given.scale;
    let by_volume = basis.volume;
    let factor: Option<Physics> = match form {
        0 => by_volume.map(|f| -> Physics { Box::new(move |x| f(x, scale.reference)) }),
        2 => basis.mole,
        _ => basis.mass,
    };
    let Some(factor) = factor else {
        let message = format!("\"{name}\" cannot be compared with what is given of the feed");
        desk.faults.push(
            Diagnostic::new(Code::BadClaim, given.pointer, message).hint("claim \"energy_per_volume\""),
        );
        return None;
    };
    let factor = Rc::new(factor);
    // Work that the driving heat could do at most, per heat.
    let worth: Shared = if form == 3 {
        let source = heat_source(desk)?;
        let t = t.clone();
        Rc::new(move |x| {
            let share = 1.0 - t(x) * source.beta(x, View::Lenient, t(x))?;
            if share > 0.0 {
                Ok(share)
            } else {
                let text = "the driving heat is no warmer than the separation, so it can drive nothing";
                Err(Diagnostic::new(Code::BadClaim, "/source", text))
            }
        })
    } else {
        Rc::new(|_| Ok(1.0))
    };
    let least = Rc::new(basis.least);
    let claimed = {
        let factor = factor.clone();
        Rc::new(move |x: &[f64]| Ok(given.at(x) / factor(x)?))
    };
    let sigma = {
        let (least, claimed, worth, t) = (least.clone(), claimed.clone(), worth.clone(), t.clone());
        move |x: &[f64]| Ok((claimed(x)? * worth(x)? - least(x)?) / t(x))
    };
    Some(Case {
        kind: "separation",
        subject: basis.subject,
        law: LAW,
        figure: (name, spoken),
        claimed: Box::new(move |x| claimed(x)),
        dimension: basis.dimension,
        shown: Some(Shown { factor: Box::new(move |x| factor(x)), scale }),
        limits: vec![Limit {
            name: "reversible",
            of: None,
            sense: Sense::AtLeast,
            value: Box::new(move |x| Ok(least(x)? / worth(x)?)),
            assumes: "a reversible separation at constant temperature, heat exchanged at that temperature"
                .to_owned(),
            law: true,
        }],
        strict: None,
        entropy: Entropy { value: Box::new(sigma), dimension: basis.entropy.0, per: basis.entropy.1 },
        relative: true,
        practice: None,
        figures: Vec::new(),
        contradictions: Vec::new(),
        notes: Vec::new(),
        not_included: desk.auxiliaries("intake, pretreatment, compression, drying and controls"),
        causes: &[
            "pretreatment, recovered energy or driving heat left out",
            "another purity or recovery than stated",
        ],
        cautions: vec![words::JUDGES, words::PRESSURE, words::GASES],
    })
}

fn heat_source(desk: &mut Desk<'_>) -> Option<Body> {
    if desk.root.get("source").is_none() {
        desk.needs(
            "",
            "the member \"source\" is missing",
            "the temperature of the driving heat goes with \"specific_heat_input\"",
        );
        return None;
    }
    let source = desk.body("source", Side::Gives, false)?;
    source.note_missing(desk);
    Some(source)
}
