//! Electrolyser and fuel cell: electric work against the Gibbs energy of water.

use super::case::{Case, Entropy, Limit, Physics, Sense, Shown};
use super::desk::{Computed, Desk, Given, Role, trouble};
use super::words;
use crate::diagnostic::{Code, Diagnostic};
use crate::document::Node;
use crate::fluid::heat_capacity::{GAS_CONSTANT, STANDARD_PRESSURE, STANDARD_TEMPERATURE};
use crate::fluid::ideal_gas::{DRY_AIR, Species, find_species};
use crate::quantity::{self, Dimension as D};
use crate::report::Formulation;
use std::rc::Rc;

const LAW: &str = "the Gibbs energy of H2 + 1/2 O2 = H2O at the cell's temperature and pressures, which bounds the \
                   electric work (properties of the species by McBride, Zehe and Gordon, NASA/TP-2002-211556)";

/// Faraday constant, C/mol: exact by the SI of 2019.
const FARADAY: f64 = 96_485.332_12;
/// Molar volume of liquid water at 25 degC, m3/mol (IAPWS-95: 997.05 kg/m3).
const LIQUID_VOLUME: f64 = 18.015_28e-3 / 997.05;

/// Liquid water in the table of species.
const LIQUID_WATER: &str = "H2O(L)";

struct Cell {
    hydrogen: &'static Species,
    oxygen: &'static Species,
    water: &'static Species,
    liquid: bool,
    temperature: Option<Given>,
    pressure: Option<Given>,
    oxygen_pressure: Option<Given>,
    water_pressure: Option<Given>,
    /// Mole fraction of oxygen in the oxidant.
    oxygen_share: f64,
}

/// Enthalpy and Gibbs energy of the splitting of one mole of water, J/mol, at standard pressure.
fn splitting(h2: &Species, o2: &Species, water: &Species, t: f64) -> Computed<(f64, f64)> {
    let fault = |e| trouble("/temperature", "the cell", &e);
    let boiled = |e| {
        let fault = fault(e);
        if water.name() == LIQUID_WATER { fault.hint("a hot cell takes steam: water=vapour") } else { fault }
    };
    let (a, b, c) =
        (h2.standard(t).map_err(fault)?, o2.standard(t).map_err(fault)?, water.standard(t).map_err(boiled)?);
    let h = a.h + 0.5 * b.h - c.h;
    Ok((h, h - t * (a.s + 0.5 * b.s - c.s)))
}

impl Cell {
    fn temperature(&self, x: &[f64]) -> f64 {
        self.temperature.as_ref().map_or(STANDARD_TEMPERATURE, |t| t.at(x))
    }

    fn pressure(&self, x: &[f64]) -> f64 {
        self.pressure.as_ref().map_or(STANDARD_PRESSURE, |p| p.at(x))
    }

    fn enthalpy(&self, x: &[f64]) -> Computed<f64> {
        splitting(self.hydrogen, self.oxygen, self.water, self.temperature(x)).map(|(h, _)| h)
    }

    /// Gibbs energy of splitting at the cell's temperature and pressures, J per mole of hydrogen.
    fn gibbs(&self, x: &[f64]) -> Computed<f64> {
        let t = self.temperature(x);
        let (_, g) = splitting(self.hydrogen, self.oxygen, self.water, t)?;
        let p = self.pressure(x);
        let own = |g: &Option<Given>, otherwise: f64| g.as_ref().map_or(otherwise, |g| g.at(x));
        let oxygen = own(&self.oxygen_pressure, self.oxygen_share * p);
        let rt = GAS_CONSTANT * t;
        let gases = rt * ((p / STANDARD_PRESSURE).ln() + 0.5 * (oxygen / STANDARD_PRESSURE).ln());
        let water = if self.liquid {
            LIQUID_VOLUME * (p - STANDARD_PRESSURE)
        } else {
            rt * (own(&self.water_pressure, p) / STANDARD_PRESSURE).ln()
        };
        Ok(g + gases - water)
    }
}

fn species(desk: &mut Desk<'_>, name: &'static str) -> Option<&'static Species> {
    let found = find_species(name);
    if found.is_none() {
        desk.faults.push(Diagnostic::new(
            Code::UnknownSpecies,
            "",
            format!("{name} is not in the table of species"),
        ));
    }
    found
}

/// An electrolyser, or a fuel cell where `delivers`.
pub fn cell(desk: &mut Desk<'_>, delivers: bool) -> Option<Case> {
    let root = Some(desk.root);
    let liquid = desk.root.get("water").and_then(Node::text).is_none_or(|word| word == "liquid");
    let water = species(desk, if liquid { LIQUID_WATER } else { "H2O" })?;
    let (hydrogen, oxygen) = (species(desk, "H2")?, species(desk, "O2")?);
    let temperature = desk.member(root, "temperature", D::Temperature, Role::Condition);
    let pressure = desk.member(root, "pressure", D::Pressure, Role::Condition);
    let oxygen_pressure = desk.member(root, "oxygen_pressure", D::Pressure, Role::Condition);
    let water_pressure = desk.member(root, "water_pressure", D::Pressure, Role::Condition);
    if liquid && water_pressure.is_some() {
        let fault =
            Diagnostic::new(Code::Conflict, "/water_pressure", "liquid water has no partial pressure here");
        desk.faults.push(fault.hint("write \"water\": \"vapour\""));
    }
    if temperature.is_none() {
        desk.assume("/temperature", "the cell is at 25 degC");
    }
    if pressure.is_none() {
        desk.assume("/pressure", "hydrogen and oxygen are at 1 bar");
    }
    let air = desk.root.get("oxidant").and_then(Node::text) == Some("air");
    let oxygen_share =
        if air { DRY_AIR.iter().find(|(n, _)| *n == "O2").map_or(1.0, |(_, x)| *x) } else { 1.0 };
    if delivers && desk.root.get("oxidant").is_none() {
        desk.assume("/oxidant", "the oxidant is pure oxygen, the more lenient limit");
    }
    let formulation = Formulation {
        formulation: "ideal gases, NASA nine-coefficient polynomials".to_owned(),
        source: hydrogen.source().to_owned(),
        range: "the gases as ideal; liquid water incompressible".to_owned(),
    };
    desk.formulations.push("hydrogen, oxygen, water", formulation);
    let cell = Rc::new(Cell {
        hydrogen,
        oxygen,
        water,
        liquid,
        temperature,
        pressure,
        oxygen_pressure,
        water_pressure,
        oxygen_share,
    });
    let (claimed, shown, spoken) = claimed(desk, &cell, delivers)?;
    let claimed = Rc::new(claimed);
    let physics = |f: fn(&Cell, &[f64]) -> Computed<f64>| -> Physics {
        let cell = cell.clone();
        Box::new(move |x| f(&cell, x))
    };
    let sense = if delivers { Sense::AtMost } else { Sense::AtLeast };
    let mut limits = vec![Limit {
        name: "reversible",
        of: None,
        sense,
        value: physics(Cell::gibbs),
        assumes: if delivers {
            "a reversible cell that gives off heat at its own temperature"
        } else {
            "a reversible cell that takes up the heat it needs at its own temperature"
        }
        .to_owned(),
        law: true,
    }];
    if !delivers {
        limits.push(Limit {
            name: "thermoneutral",
            of: None,
            sense,
            value: physics(Cell::enthalpy),
            assumes: "no heat taken up from outside; below it the cell needs heat".to_owned(),
            law: false,
        });
    }
    let sigma = {
        let (cell, claimed) = (cell.clone(), claimed.clone());
        let sign = if delivers { -1.0 } else { 1.0 };
        move |x: &[f64]| Ok(sign * (claimed(x)? - cell.gibbs(x)?) / cell.temperature(x))
    };
    let voltage: Physics = {
        let cell = cell.clone();
        Box::new(move |x| Ok(cell.gibbs(x)? / (2.0 * FARADAY)))
    };
    let heat: Physics = {
        let (cell, claimed) = (cell.clone(), claimed.clone());
        Box::new(move |x| Ok(cell.enthalpy(x)? - claimed(x)?))
    };
    let x: Vec<f64> = desk.inputs.iter().map(|i| i.value).collect();
    let mut notes = Vec::new();
    if let (false, Ok(q)) = (delivers, heat(&x))
        && q > 0.0
    {
        let text = crate::rules::phrase::figure(q, D::MolarEnergy);
        notes.push(format!(
            "With so little work the cell has to take up {text} of heat per mole of hydrogen."
        ));
    }
    let (kind, subject) =
        if delivers { ("fuel_cell", "A fuel cell") } else { ("electrolyser", "An electrolyser") };
    let at = |g: &Option<Given>, otherwise: &str| g.as_ref().map_or(otherwise.to_owned(), |g| g.text.clone());
    let subject = format!(
        "{subject} for hydrogen at {} and {} with {} water is claimed.",
        at(&cell.temperature, "25 degC"),
        at(&cell.pressure, "1 bar"),
        if liquid { "liquid" } else { "gaseous" }
    );
    Some(Case {
        kind,
        subject,
        law: LAW,
        figure: spoken,
        claimed: Box::new(move |x| claimed(x)),
        dimension: D::MolarEnergy,
        shown: Some(shown),
        limits,
        strict: None,
        entropy: Entropy { value: Box::new(sigma), dimension: D::MolarEntropy, per: "mol of hydrogen" },
        relative: true,
        practice: None,
        figures: vec![
            ("reversible_voltage", voltage, D::ElectricPotential),
            ("gibbs_energy", physics(Cell::gibbs), D::MolarEnergy),
            ("reaction_enthalpy", physics(Cell::enthalpy), D::MolarEnergy),
            (if delivers { "heat_given_off" } else { "heat_taken_up" }, heat, D::MolarEnergy),
        ],
        contradictions: Vec::new(),
        notes,
        not_included: desk
            .auxiliaries("rectifier or inverter, water treatment, compression, drying, pumps and cooling"),
        causes: &["higher and lower heating value mixed up", "heat supplied from outside left out"],
        cautions: vec![words::JUDGES, words::HYDROGEN, words::ELECTRIC, words::PRESSURE],
    })
}

type Claimed = (Physics, Shown, (&'static str, &'static str));

/// Claimed electric work per mole of hydrogen, its unit and its name.
fn claimed(desk: &mut Desk<'_>, cell: &Rc<Cell>, delivers: bool) -> Option<Claimed> {
    let claim = desk.claim();
    let form = desk.one_of(&[
        &["energy_per_volume"],
        &["specific_work"],
        &["voltage"],
        &["efficiency_hhv"],
        &["efficiency_lhv"],
    ])?;
    let molar_mass = cell.hydrogen.molar_mass();
    let (name, spoken, dimension) = match form {
        0 => ("energy_per_volume", "electric work per volume of hydrogen", D::EnergyPerVolume),
        1 => ("specific_work", "electric work per mass of hydrogen", D::SpecificEnergy),
        2 => ("voltage", "cell voltage", D::ElectricPotential),
        3 => ("efficiency_hhv", "efficiency on the higher heating value", D::Fraction),
        _ => ("efficiency_lhv", "efficiency on the lower heating value", D::Fraction),
    };
    let most = (dimension == D::Fraction).then_some(10.0);
    let given = desk.positive(claim, name, dimension, Role::Claimed, most)?;
    let scale = given.scale;
    let plain = |factor: f64| -> Claimed {
        let g = given.clone();
        (
            Box::new(move |x| Ok(g.at(x) / factor)),
            Shown { factor: Box::new(move |_| Ok(factor)), scale },
            (name, spoken),
        )
    };
    Some(match form {
        0 => {
            let cell = cell.clone();
            // Moles per volume of hydrogen as an ideal gas, where the unit counts it.
            let density = Rc::new(move |x: &[f64]| {
                let (t, p) = scale.reference.conditions().unwrap_or((cell.temperature(x), cell.pressure(x)));
                Ok(p / (GAS_CONSTANT * t))
            });
            let (a, b, g) = (density.clone(), density, given.clone());
            let work: Physics = Box::new(move |x| Ok::<f64, Diagnostic>(g.at(x) / a(x)?));
            (work, Shown { factor: Box::new(move |x| b(x)), scale }, (name, spoken))
        }
        1 => plain(1.0 / molar_mass),
        2 => plain(1.0 / (2.0 * FARADAY)),
        _ => {
            let water = species(desk, if form == 3 { LIQUID_WATER } else { "H2O" })?;
            let (heating, _) = splitting(cell.hydrogen, cell.oxygen, water, STANDARD_TEMPERATURE)
                .map_err(|e| desk.faults.push(e))
                .ok()?;
            if delivers {
                plain(1.0 / heating)
            } else {
                // An efficiency of splitting is heating value per work: shown as the work it means.
                let scale =
                    quantity::find("kWh/kg", D::SpecificEnergy).map_err(|e| desk.faults.push(e)).ok()?;
                let work: Physics = Box::new(move |x| Ok(heating / given.at(x)));
                let shown = Shown { factor: Box::new(move |_| Ok(1.0 / molar_mass)), scale };
                (work, shown, ("specific_work", "electric work per mass of hydrogen, from its efficiency,"))
            }
        }
    })
}
