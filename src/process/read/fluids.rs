//! Fluids: by name, by key of `fluids`, or inline.

use super::*;
use crate::fluid::heat_capacity::Term;
use crate::fluid::ideal_gas::{CompositionError, IdealGas, Species, SpeciesDefinition, find_species};
use crate::fluid::incompressible::Incompressible;
use crate::fluid::perfect_gas::PerfectGas;
use crate::fluid::stated::Stated;
use crate::fluid::steam::Steam;
use crate::fluid::{Element, Phase, PropertyError};

/// Mole and mass fractions may miss one by this much, as rounding of printed digits; more is
/// reported.
const SUM_TOLERANCE: f64 = 5e-4;

/// A fluid as read: what it is, its engine, and the composition coordinate that all its states
/// share, where there is one.
pub(super) type Medium = (Substance, Arc<dyn Engine>, Option<VarId>);

impl<'t> Reader<'t> {
    /// The fluid of a material flow: its own, or that of its only possible neighbour.
    pub(super) fn flow_fluid(&mut self, f: FlowId) -> Option<FluidId> {
        if let Some(id) = self.flow_fluids[f] {
            return Some(id);
        }
        let (name, node) = self.flow_nodes[f];
        let id = match node.get("fluid") {
            Some(n) => self.fluid(n)?,
            None => {
                let Some(id) = self.neighbour_fluid(f) else {
                    self.fault(
                        node.fault(Code::MissingField, format!("\"{name}\" needs a \"fluid\""))
                            .hint("for instance \"water\", \"air\", \"humid air\", or an object"),
                    );
                    return None;
                };
                id
            }
        };
        self.flow_fluids[f] = Some(id);
        Some(id)
    }

    /// A flow that leaves a component of one substance has the substance that entered.
    fn neighbour_fluid(&mut self, f: FlowId) -> Option<FluidId> {
        let k = self.process.flows[f].from?;
        let component = &self.process.components[k];
        if component.kind.info().sorting != kinds::Sorting::Single {
            return None;
        }
        let inlets: Vec<FlowId> = component.inlets.clone();
        let mut found = None;
        for inlet in inlets {
            if let Some(n) = self.flow_nodes[inlet].1.get("fluid") {
                let id = self.fluid(n)?;
                if found.is_some_and(|other| other != id) {
                    return None;
                }
                found = Some(id);
            }
        }
        found
    }

    /// Reads a fluid where it stands.
    pub(super) fn fluid(&mut self, node: Node<'t>) -> Option<FluidId> {
        let key = node.source().trim().to_owned();
        if let Some(&id) = self.fluid_ids.get(&key) {
            return Some(id);
        }
        if self.open_fluids.contains(&key) {
            self.fault(node.fault(Code::CircularReference, "the fluid refers back to itself"));
            return None;
        }
        self.open_fluids.push(key.clone());
        let id = self.fluid_unread(node);
        self.open_fluids.pop();
        if let Some(id) = id {
            self.fluid_ids.insert(key, id);
        }
        id
    }

    fn fluid_unread(&mut self, node: Node<'t>) -> Option<FluidId> {
        let (name, (substance, engine, coordinate)) = match node.text() {
            Some(text) => {
                let own = self.root.get("fluids").and_then(|fluids| fluids.get(text));
                match own {
                    Some(n) if n.text() == Some(text) => self.named_fluid(n, text)?,
                    Some(n) => {
                        let id = self.fluid(n)?;
                        if self.process.fluids[id].name.starts_with('/') {
                            text.clone_into(&mut self.process.fluids[id].name);
                        }
                        return Some(id);
                    }
                    None => self.named_fluid(node, text)?,
                }
            }
            None => {
                let kind = node.get("kind").and_then(Node::text).unwrap_or_default();
                (node.pointer(), self.fluid_object(node, kind)?)
            }
        };
        let id = self.process.fluids.len();
        self.process.fluids.push(Fluid { name, engine, substance });
        if let Some(var) = coordinate {
            self.shared_composition.insert(id, var);
        }
        Some(id)
    }

    fn named_fluid(&mut self, node: Node<'t>, text: &str) -> Option<(String, Medium)> {
        match crate::fluid::by_name(text) {
            Ok((substance, engine)) => Some((text.to_owned(), (substance, engine, None))),
            Err(near) => {
                self.fault(super::references::unknown_fluid(self.root, node, text, near));
                None
            }
        }
    }

    fn fluid_object(&mut self, node: Node<'t>, kind: &str) -> Option<Medium> {
        match kind {
            "water" => Some((Substance::Water, Arc::new(Steam), None)),
            "humid_air" => self.named_fluid(node, "humid air").map(|named| named.1),
            "pure" => {
                let n = node.get("name")?;
                let name = n.text().unwrap_or_default();
                match crate::fluid::real_fluid::by_name(name) {
                    Ok(fluid) => Some((Substance::Pure, fluid.clone(), None)),
                    Err(_) => self.named_fluid(n, name).map(|named| named.1),
                }
            }
            "ideal_gas" => {
                let gas = Arc::new(self.ideal_gas(node)?);
                Some((Substance::Gas(gas.clone()), gas, None))
            }
            "combustion_gas" => self.combustion_gas(node),
            "fuel" => self.fuel(node),
            "solution" => self.solution(node),
            "perfect_gas" => {
                let molar_mass =
                    node.get("molar_mass")?.quantity(Dimension::MolarMass, &mut self.faults)?.value;
                let terms = self.heat_capacity(node.get("specific_heat")?)?;
                let gas = PerfectGas::new(molar_mass, &terms, Some((50.0, 6000.0)));
                let gas = self.engine(node, gas)?;
                Some((Substance::Inert, Arc::new(gas), None))
            }
            "incompressible" => self.incompressible(node),
            "stated" => Some((Substance::Stated, Arc::new(Stated::default()), None)),
            _ => {
                self.fault(
                    node.fault(Code::UnknownFluid, format!("a fluid of kind \"{kind}\" cannot be used here")),
                );
                None
            }
        }
    }

    pub(super) fn engine<T>(&mut self, node: Node<'t>, result: Result<T, PropertyError>) -> Option<T> {
        match result {
            Ok(engine) => Some(engine),
            Err(error) => {
                self.fault(node.fault(Code::OutOfRange, error.to_string()));
                None
            }
        }
    }

    /// A specific heat: one figure, or coefficients of a polynomial in T.
    fn heat_capacity(&mut self, node: Node<'t>) -> Option<Vec<Term>> {
        if node.json_type() == Some(document::JsonType::List) {
            let terms: Vec<Term> = node
                .items()
                .enumerate()
                .filter_map(|(i, n)| Some(Term { coefficient: n.number()?, exponent: i as f64 }))
                .collect();
            if terms.is_empty() {
                self.fault(node.fault(Code::OutOfBounds, "a polynomial needs a coefficient"));
                return None;
            }
            return Some(terms);
        }
        let q = node.quantity(Dimension::SpecificEntropy, &mut self.faults)?;
        Some(vec![Term { coefficient: q.value, exponent: 0.0 }])
    }

    fn incompressible(&mut self, node: Node<'t>) -> Option<Medium> {
        if let Some(n) = node.get("name")
            && node.get("specific_heat").is_none()
        {
            let name = n.text().unwrap_or_default();
            let listed = Incompressible::listed(name).or_else(|| Incompressible::species(name));
            let Some(medium) = listed else {
                let known = crate::fluid::incompressible::LISTED.iter().map(|m| m.name);
                let fault = n.fault(Code::UnknownFluid, format!("there is no listed medium \"{name}\""));
                self.fault(fault.suggest(&nearest(name, known), ""));
                return None;
            };
            return Some((Substance::Inert, Arc::new(medium), None));
        }
        let Some(heat) = node.get("specific_heat") else {
            self.fault(
                node.fault(Code::MissingField, "an incompressible medium needs a name or a specific heat"),
            );
            return None;
        };
        let terms = self.heat_capacity(heat)?;
        let density = match node.get("density") {
            Some(n) => n.quantity(Dimension::Density, &mut self.faults)?.value,
            None => {
                self.assume(node.pointer(), "density of an incompressible medium not given: 1000 kg/m3");
                1000.0
            }
        };
        let phase = if node.get("solid").and_then(Node::boolean) == Some(true) {
            Phase::Solid
        } else {
            Phase::Liquid
        };
        let name = node.get("name").and_then(Node::text).unwrap_or("incompressible");
        let medium = Incompressible::new(name, phase, density, &terms, Some((50.0, 3000.0)));
        Some((Substance::Inert, Arc::new(self.engine(node, medium)?), None))
    }

    fn ideal_gas(&mut self, node: Node<'t>) -> Option<IdealGas> {
        let own = self.own_species(node)?;
        let (list, by_mass) = match (node.get("mole_fractions"), node.get("mass_fractions")) {
            (Some(n), None) => (n, false),
            (None, Some(n)) => (n, true),
            _ => {
                self.fault(node.fault(
                    Code::Conflict,
                    "an ideal gas has either \"mole_fractions\" or \"mass_fractions\"",
                ));
                return None;
            }
        };
        if list.members().len() > self.limits.species {
            self.fault(list.fault(
                Code::LimitExceeded,
                format!("{} species exceed the limit of {}", list.members().len(), self.limits.species),
            ));
            return None;
        }
        let mut parts: Vec<(&Species, f64)> = Vec::new();
        let (mut good, mut stated) = (true, false);
        for (name, n) in list.members() {
            let Some(species) = own.iter().find(|s| s.name() == name).or_else(|| find_species(name)) else {
                let known = crate::fluid::ideal_gas::all_species().iter().map(Species::name);
                let fault = n.fault(Code::UnknownSpecies, format!("there is no species \"{name}\""));
                self.fault(fault.suggest(&nearest(name, known), ""));
                good = false;
                continue;
            };
            let fraction = n.quantity(Dimension::Fraction, &mut self.faults);
            stated |= fraction.as_ref().is_some_and(|q| q.u().is_some());
            match fraction {
                Some(q) if q.value >= 0.0 => parts.push((species, q.value)),
                Some(q) => {
                    self.process.remarks.push(Remark {
                        rule: "composition-sum",
                        pointer: n.pointer(),
                        statement: format!("the fraction of {name} is negative ({}).", q.value),
                        figure: Some((q.value, 0.0, "1")),
                    });
                    parts.push((species, 0.0));
                }
                None => good = false,
            }
        }
        if !good {
            return None;
        }
        if stated {
            self.assume(
                list.pointer(),
                "the composition is taken as exact; its stated uncertainty is left out",
            );
        }
        let sum: f64 = parts.iter().map(|p| p.1).sum();
        if (sum - 1.0).abs() > SUM_TOLERANCE {
            self.process.remarks.push(Remark {
                rule: "composition-sum",
                pointer: list.pointer(),
                statement: format!("the fractions sum to {sum:.5}, not to 1; they were normalised."),
                figure: Some((sum, 1.0, "1")),
            });
        }
        let gas = if by_mass { IdealGas::from_mass(&parts) } else { IdealGas::new(&parts) };
        let gas = self.mixture(list, gas)?;
        self.moisten(node, gas)
    }

    fn mixture(&mut self, node: Node<'t>, gas: Result<IdealGas, CompositionError>) -> Option<IdealGas> {
        match gas {
            Ok(gas) => Some(gas),
            Err(error) => {
                self.fault(node.fault(Code::OutOfBounds, error.to_string()));
                None
            }
        }
    }

    /// Adds water to a dry composition.
    fn moisten(&mut self, node: Node<'t>, gas: IdealGas) -> Option<IdealGas> {
        let dry = node.get("composition_basis").and_then(Node::text) == Some("dry");
        let water = node.get("water_mole_fraction");
        let saturated = node.get("saturated");
        if !dry {
            if let Some(n) = water.or(saturated) {
                self.fault(
                    n.fault(Code::Conflict, "water is added to a dry composition only")
                        .hint("set \"composition_basis\": \"dry\""),
                );
                return None;
            }
            return Some(gas);
        }
        let parts: Vec<(&Species, f64)> = gas.components().iter().map(|(s, x)| (s, *x)).collect();
        match (water, saturated) {
            (Some(n), None) => {
                let x = n.quantity(Dimension::Fraction, &mut self.faults)?.value;
                let wet = IdealGas::moist(&parts, x);
                self.mixture(n, wet)
            }
            (None, Some(n)) => {
                let t = n.get("temperature")?.quantity(Dimension::Temperature, &mut self.faults)?.value;
                let p = n.get("pressure")?.quantity(Dimension::Pressure, &mut self.faults)?.value;
                let saturation = self.engine(n, Steam.saturation_pressure(t))?;
                let wet = IdealGas::moist(&parts, saturation.0 / p);
                self.mixture(n, wet)
            }
            (None, None) => Some(gas),
            (Some(n), Some(_)) => {
                self.fault(n.fault(Code::Conflict, "the water is given twice"));
                None
            }
        }
    }

    fn own_species(&mut self, node: Node<'t>) -> Option<Vec<Species>> {
        let mut out = Vec::new();
        let Some(list) = node.get("species") else { return Some(out) };
        for (name, n) in list.members() {
            let mut figure = |member: &str, dimension| {
                n.get(member).and_then(|m| m.quantity(dimension, &mut self.faults)).map(|q| q.value)
            };
            let molar_mass = figure("molar_mass", Dimension::MolarMass)?;
            let formation_enthalpy = figure("formation_enthalpy", Dimension::MolarEnergy)?;
            let standard_entropy = figure("standard_entropy", Dimension::MolarEntropy)?;
            let chemical_exergy = figure("chemical_exergy", Dimension::MolarEnergy);
            let mut elements = None;
            if let Some(map) = n.get("elements") {
                let mut counts = [0.0; Element::COUNT];
                for (symbol, count) in map.members() {
                    match (Element::from_symbol(symbol), count.number()) {
                        (Some(e), Some(x)) if x >= 0.0 => counts[e as usize] = x,
                        (None, _) => self.fault(
                            count.fault(Code::UnknownSpecies, format!("there is no element \"{symbol}\"")),
                        ),
                        _ => self.fault(count.fault(Code::OutOfBounds, "a number of atoms is not negative")),
                    }
                }
                elements = Some(counts);
            }
            let heat_capacity = n
                .get("heat_capacity")?
                .items()
                .filter_map(|t| {
                    Some(Term {
                        coefficient: t.get("coefficient")?.number()?,
                        exponent: t.get("exponent")?.number()?,
                    })
                })
                .collect();
            let species = Species::define(&SpeciesDefinition {
                name: name.to_owned(),
                molar_mass,
                elements,
                heat_capacity,
                temperature_range: None,
                formation_enthalpy,
                standard_entropy,
                chemical_exergy,
            });
            match species {
                Ok(s) => out.push(s),
                Err(error) => {
                    self.fault(n.fault(Code::OutOfBounds, error.to_string()));
                    return None;
                }
            }
        }
        Some(out)
    }
}
