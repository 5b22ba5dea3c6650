//! Components: ports, sides, what is given, claimed and held.

use super::kinds::{Direction, Sorting, Stuff};
use super::values::Class;
use super::*;

impl<'t> Reader<'t> {
    /// Reads what is left of every component, after all flows are known.
    pub(super) fn components_rest(&mut self) {
        let Some(root) = self.root.get("components") else { return };
        for (name, node) in root.members() {
            let Some(&k) = self.component_ids.get(name) else { continue };
            self.losses(k, node);
            self.ash(k, node);
            self.check_ports(k, node);
            self.ports(k, node);
            self.holdup(k, node);
            self.sides(k, node);
            self.given(k, node);
            self.stated(k, node);
            self.purpose(k, node);
            if let Some(geometry) = node.get("geometry") {
                let area = self.var(geometry, "throat_area", Dimension::Area, Class::State, 1.0);
                self.process.components[k].throat_area = area;
            }
        }
    }

    fn stuff(&self, f: FlowId) -> Stuff {
        match self.process.flows[f].carried {
            Carried::Material(_) => Stuff::Material,
            Carried::Heat(..) | Carried::Radiation(..) => Stuff::Heat,
            Carried::Work(..) => Stuff::Work,
        }
    }

    fn check_ports(&mut self, k: ComponentId, node: Node<'t>) {
        let component = &self.process.components[k];
        let kind = component.kind;
        let mut found = Vec::new();
        for (flows, direction) in [(&component.inlets, Direction::In), (&component.outlets, Direction::Out)] {
            for stuff in [Stuff::Material, Stuff::Heat, Stuff::Work] {
                let names: Vec<String> = flows
                    .iter()
                    .filter(|&&f| self.described_stuff(f) == stuff)
                    .map(|&f| self.process.flows[f].name.clone())
                    .collect();
                found.push((stuff, direction, names));
            }
        }
        let name = component.name.clone();
        for (stuff, direction, names) in found {
            let port = kind.info().ports.iter().find(|p| p.stuff == stuff && p.direction == direction);
            let (min, max) = port.map_or((0, 0), |p| (p.min, p.max));
            let what = match (stuff, direction) {
                (Stuff::Material, Direction::In) => "material inlet",
                (Stuff::Material, Direction::Out) => "material outlet",
                (Stuff::Heat, Direction::In) => "heat inlet",
                (Stuff::Heat, Direction::Out) => "heat outlet",
                (Stuff::Work, Direction::In) => "work inlet",
                (Stuff::Work, Direction::Out) => "work outlet",
            };
            if names.len() < min {
                self.fault(
                    node.fault(
                        Code::MissingPort,
                        format!("{} \"{name}\" has {} {what}, it needs {min}", kind.name(), names.len()),
                    )
                    .hint("a flow names its component in \"from\" or \"to\""),
                );
            }
            if names.len() > max {
                self.fault(
                    node.fault(
                        Code::TooManyPorts,
                        format!(
                            "{} \"{name}\" takes at most {max} {what}, but has {}: \"{}\"",
                            kind.name(),
                            names.len(),
                            names.join("\", \"")
                        ),
                    )
                    .hint("a control_volume takes any flows"),
                );
            }
        }
    }

    /// What a flow is said to carry, whether or not it could be read.
    fn described_stuff(&self, f: FlowId) -> Stuff {
        match self.flow_nodes.get(f).and_then(|(_, n)| n.get("kind")).and_then(Node::text) {
            Some("heat" | "radiation") => Stuff::Heat,
            Some("work") => Stuff::Work,
            Some(_) => Stuff::Material,
            None => self.stuff(f),
        }
    }

    fn ports(&mut self, k: ComponentId, node: Node<'t>) {
        let Some(map) = node.get("ports") else { return };
        let kind = self.process.components[k].kind;
        for (role, n) in map.members() {
            let Some(&known) = kind.info().roles.iter().find(|r| **r == role) else {
                let hint = if kind.info().roles.is_empty() {
                    "this kind has no named ports".to_owned()
                } else {
                    format!("this kind has the ports {}", kind.info().roles.join(", "))
                };
                self.fault(
                    n.fault(Code::UnknownChoice, format!("{} has no port \"{role}\"", kind.name()))
                        .hint(hint),
                );
                continue;
            };
            let items: Vec<Node<'t>> = if n.text().is_some() { vec![n] } else { n.items().collect() };
            for item in items {
                if let Some(f) = self.own_flow(k, item) {
                    self.process.components[k].ports.push((known, f));
                }
            }
        }
    }

    /// The flow, or the half of it that arrives, if it touches the component.
    fn end_at(&self, k: ComponentId, f: FlowId) -> Option<FlowId> {
        let component = &self.process.components[k];
        let far = self.two_ended.iter().find(|t| t.flow == f).and_then(|t| t.far);
        let touches = |f: &FlowId| component.inlets.contains(f) || component.outlets.contains(f);
        [Some(f), far].into_iter().flatten().find(touches)
    }

    /// A flow of this component by the name that stands at a place.
    fn own_flow(&mut self, k: ComponentId, node: Node<'t>) -> Option<FlowId> {
        let name = node.text().unwrap_or_default();
        let component = &self.process.components[k];
        match self.flow_ids.get(name).copied() {
            Some(f) if self.end_at(k, f).is_some() => self.end_at(k, f),
            Some(_) => {
                let message = format!("flow \"{name}\" does not touch \"{}\"", component.name);
                self.fault(node.fault(Code::DanglingReference, message));
                None
            }
            None => {
                self.faults.push(references::dangling(node, "flow", name, self.flow_ids.keys().copied()));
                None
            }
        }
    }

    /// Heat loss and mechanical loss as flows of their own.
    fn losses(&mut self, k: ComponentId, node: Node<'t>) {
        let given = node.get("given");
        let sources = [(Some(node), "heat_loss"), (given, "heat_loss"), (given, "mechanical_loss")];
        let mut described = false;
        for (holder, member) in sources {
            let Some(holder) = holder.filter(|h| h.get(member).is_some()) else { continue };
            let instead = "the heat as a flow with its \"energy\"";
            let Some(factor) = self.rate_factor(holder, member, instead) else { continue };
            let Some(v) = self.var(holder, member, Dimension::Power, Class::Amount, factor) else { continue };
            described |= member == "heat_loss";
            let name = self.process.components[k].name.clone();
            let flow = self.process.flows.len();
            self.process.flows.push(Flow {
                name: format!("{name}.{member}"),
                pointer: holder.pointer_to(member),
                from: Some(k),
                to: None,
                carried: Carried::Heat(v, Boundary::Unknown),
                role: Some(Role::Loss),
                implied: true,
            });
            self.process.components[k].outlets.push(flow);
        }
        let component = &self.process.components[k];
        let has_heat =
            component.inlets.iter().chain(&component.outlets).any(|&f| {
                matches!(self.process.flows[f].carried, Carried::Heat(..) | Carried::Radiation(..))
            });
        let known = |f: &FlowId| match self.process.flows[*f].carried {
            Carried::Work(v, _) => matches!(self.process.vars.get(v), Some(Var::Given(_))),
            _ => true,
        };
        let flows = || component.inlets.iter().chain(&component.outlets);
        let closed = flows().all(known);
        let converts = component.kind.info().purpose == kinds::Purposeful::Conversion;
        self.process.components[k].given.heat_loss = described;
        if converts && !has_heat && (closed || given.is_some_and(|g| g.get("efficiency").is_some())) {
            // What a converter does not pass on it gives off as heat.
            let name = self.process.components[k].name.clone();
            let loss = self.unknown(format!("heat loss of \"{name}\""), Nature::Energy, node.pointer());
            let flow = self.process.flows.len();
            self.process.flows.push(Flow {
                name: format!("{name}.heat_loss"),
                pointer: node.pointer(),
                from: Some(k),
                to: None,
                carried: Carried::Heat(loss, Boundary::Unknown),
                role: Some(Role::Loss),
                implied: true,
            });
            self.process.components[k].outlets.push(flow);
            self.process.components[k].given.heat_loss = true;
        } else if !described && !has_heat {
            let pointer = node.pointer_to("heat_loss");
            self.assume(pointer, "heat loss not given: adiabatic");
        }
    }

    /// Ash that a fuel brings along and no flow takes away, as a flow of its own.
    fn ash(&mut self, k: ComponentId, node: Node<'t>) {
        let component = &self.process.components[k];
        if component.kind.info().sorting != Sorting::Pool {
            return;
        }
        let substance = |f: &FlowId| self.fluid_of(*f).map(|x| self.process.fluids[x].substance.clone());
        let brings = component
            .inlets
            .iter()
            .any(|f| matches!(substance(f), Some(Substance::Fuel(fuel)) if fuel.ash() > 0.0));
        let entering: Vec<Option<FluidId>> = component.inlets.iter().map(|&f| self.fluid_of(f)).collect();
        let takes = component.outlets.iter().any(|f| {
            matches!(substance(f), Some(Substance::Inert | Substance::Stated | Substance::Fuel(_)))
                && !entering.contains(&self.fluid_of(*f))
        });
        if !brings || takes {
            return;
        }
        let Ok(ash) = crate::fluid::incompressible::Incompressible::ash() else { return };
        let name = format!("{}.ash", component.name);
        let fluid = self.process.fluids.len();
        self.process.fluids.push(Fluid {
            name: "ash".to_owned(),
            engine: Arc::new(ash),
            substance: Substance::Inert,
        });
        // The state in which the ash of a fuel has neither enthalpy nor entropy.
        let (p, t) = (self.constant(1e5), self.constant(298.15));
        let amount = self.unknown(format!("mass flow of \"{name}\""), Nature::Mass, node.pointer());
        self.process.states.push(StateSpec {
            fluid,
            form: StateForm::Pair(Pair::PressureTemperature),
            a: p,
            b: t,
            c: None,
            surplus: Vec::new(),
            phase: None,
            pointer: node.pointer(),
            ambient: false,
            wet_ambiguous: false,
        });
        let state = self.process.states.len() - 1;
        self.assume(node.pointer(), "the ash of the fuel leaves at 25 degC");
        let flow = self.process.flows.len();
        self.process.flows.push(Flow {
            name,
            pointer: node.pointer(),
            from: Some(k),
            to: None,
            carried: Carried::Material(Material {
                state,
                amount,
                form: AmountForm::Mass,
                velocity: None,
                elevation: None,
                stated_exergy: None,
            }),
            role: Some(Role::Loss),
            implied: true,
        });
        self.process.components[k].outlets.push(flow);
    }

    fn material_flows(&self, k: ComponentId) -> (Vec<FlowId>, Vec<FlowId>) {
        let component = &self.process.components[k];
        let pick = |flows: &[FlowId]| -> Vec<FlowId> {
            flows.iter().copied().filter(|&f| self.stuff(f) == Stuff::Material).collect()
        };
        (pick(&component.inlets), pick(&component.outlets))
    }

    pub(super) fn fluid_of(&self, f: FlowId) -> Option<FluidId> {
        self.process.flows[f].material().map(|m| self.process.states[m.state].fluid)
    }

    /// Sorts the material flows of a component into sides.
    fn sides(&mut self, k: ComponentId, node: Node<'t>) {
        let kind = self.process.components[k].kind;
        self.process.components[k].arrangement = match node.get("arrangement").and_then(Node::text) {
            Some("counterflow") => Arrangement::Counterflow,
            Some("parallel") => Arrangement::Parallel,
            Some("shell_1_2") => Arrangement::Shell12,
            Some("crossflow") => Arrangement::Crossflow,
            _ => Arrangement::Unknown,
        };
        let (mut inlets, mut outlets) = self.material_flows(k);
        let mut sides = Vec::new();
        if let Some(list) = node.get("sides") {
            for (i, n) in list.items().enumerate() {
                let mut side = Side::default();
                for (member, left, taken) in
                    [("in", &mut inlets, &mut side.inlets), ("out", &mut outlets, &mut side.outlets)]
                {
                    for item in n.get(member).into_iter().flat_map(Node::items) {
                        let Some(f) = self.own_flow(k, item) else { continue };
                        match left.iter().position(|&x| x == f) {
                            Some(at) => {
                                left.remove(at);
                                taken.push(f);
                            }
                            None => self.faults.push(item.fault(
                                Code::Conflict,
                                format!(
                                    "\"{}\" is not a free material flow in this direction",
                                    item.text().unwrap_or_default()
                                ),
                            )),
                        }
                    }
                }
                if let Some(v) =
                    self.var(n, "pressure_loss", Dimension::PressureDifference, Class::Parameter, 1.0)
                {
                    self.process.components[k].given.pressure_loss.push((i, PressureLoss::Difference(v)));
                }
                sides.push(side);
            }
        }
        let own_sides = !sides.is_empty();
        match kind.info().sorting {
            Sorting::Single => {
                if !inlets.is_empty() || !outlets.is_empty() {
                    sides.push(Side { inlets, outlets, ..Side::default() });
                }
            }
            Sorting::Sides => self.infer_sides(k, node, &mut sides, inlets, outlets, own_sides),
            Sorting::Pool => self.infer_pool(kind, &mut sides, inlets, outlets),
        }
        self.place_contents(k, &mut sides);
        for side in &mut sides {
            let flows = side.inlets.iter().chain(&side.outlets).filter_map(|&f| self.fluid_of(f));
            let contents = side.contents.iter().map(|&s| self.process.states[s].fluid);
            let mut fluids: Vec<FluidId> = flows.chain(contents).collect();
            fluids.sort_unstable();
            fluids.dedup();
            side.pool =
                fluids.len() > 1 || fluids.iter().any(|&f| self.process.fluids[f].engine.elements_vary());
        }
        self.process.components[k].sides = sides;
    }

    /// One side a fluid, where that is unambiguous.
    fn infer_sides(
        &mut self,
        k: ComponentId,
        node: Node<'t>,
        sides: &mut Vec<Side>,
        inlets: Vec<FlowId>,
        outlets: Vec<FlowId>,
        own_sides: bool,
    ) {
        let mut fluids: Vec<FluidId> = Vec::new();
        for &f in inlets.iter().chain(&outlets) {
            if let Some(fluid) = self.fluid_of(f)
                && !fluids.contains(&fluid)
            {
                fluids.push(fluid);
            }
        }
        for fluid in fluids {
            let of = |flows: &[FlowId]| -> Vec<FlowId> {
                flows.iter().copied().filter(|&f| self.fluid_of(f) == Some(fluid)).collect()
            };
            let side = Side { inlets: of(&inlets), outlets: of(&outlets), ..Side::default() };
            let name = self.process.components[k].name.clone();
            let quoted = |flows: &[FlowId]| -> String {
                let names: Vec<&str> = flows.iter().map(|&f| self.process.flows[f].name.as_str()).collect();
                format!("\"{}\"", names.join("\", \""))
            };
            if side.inlets.is_empty() || side.outlets.is_empty() {
                let lone = quoted(if side.inlets.is_empty() { &side.outlets } else { &side.inlets });
                self.fault(
                    node.fault(
                        Code::MissingPort,
                        format!("{lone} at \"{name}\" has no counterpart of the same fluid"),
                    )
                    .hint("name the sides: \"sides\": [{\"in\": [\"…\"], \"out\": [\"…\"]}, …]"),
                );
            } else if side.inlets.len() > 1 && side.outlets.len() > 1 && !own_sides {
                let message = format!(
                    "the sides of \"{name}\" cannot be told apart: {} enter and {} leave",
                    quoted(&side.inlets),
                    quoted(&side.outlets)
                );
                self.fault(
                    node.fault(Code::AmbiguousPort, message)
                        .hint("name the sides: \"sides\": [{\"in\": [\"…\"], \"out\": [\"…\"]}, …]"),
                );
            }
            sides.push(side);
        }
    }

    /// Fluids that pass through unchanged keep to themselves; everything else is one pool.
    fn infer_pool(&self, kind: Kind, sides: &mut Vec<Side>, inlets: Vec<FlowId>, outlets: Vec<FlowId>) {
        let mut pool = Side { pool: true, ..Side::default() };
        let through = matches!(
            kind,
            Kind::ControlVolume | Kind::Boiler | Kind::Engine | Kind::Storage | Kind::CoolingCoil
        );
        let varies =
            |f: FlowId| self.fluid_of(f).is_some_and(|x| self.process.fluids[x].engine.elements_vary());
        let humid = |f: FlowId| {
            self.fluid_of(f).is_some_and(|x| matches!(self.process.fluids[x].substance, Substance::HumidAir))
        };
        let any_air = inlets.iter().chain(&outlets).any(|&f| humid(f));
        let mut done: Vec<FluidId> = Vec::new();
        for &f in inlets.iter().chain(&outlets) {
            let Some(fluid) = self.fluid_of(f) else { continue };
            if done.contains(&fluid) {
                continue;
            }
            done.push(fluid);
            let of = |flows: &[FlowId]| -> Vec<FlowId> {
                flows.iter().copied().filter(|&x| self.fluid_of(x) == Some(fluid)).collect()
            };
            let (i, o) = (of(&inlets), of(&outlets));
            let meets_air = any_air && matches!(self.process.fluids[fluid].substance, Substance::Water);
            // A substance without formation data can only pass.
            let inert = matches!(self.process.fluids[fluid].substance, Substance::Inert)
                && self.process.fluids[fluid].engine.elements(0.0).is_none();
            let passes = !i.is_empty() && !o.is_empty() && !varies(f) && !meets_air;
            if passes && (through || inert) {
                sides.push(Side { inlets: i, outlets: o, ..Side::default() });
            } else {
                pool.inlets.extend(i);
                pool.outlets.extend(o);
            }
        }
        if !pool.inlets.is_empty() || !pool.outlets.is_empty() {
            sides.push(pool);
        }
    }

    fn given(&mut self, k: ComponentId, node: Node<'t>) {
        let Some(given) = node.get("given") else { return };
        let kind = self.process.components[k].kind;
        for (member, n) in given.members() {
            let base = if member == "pressure_loss_fraction" { "pressure_loss" } else { member };
            if !kind.info().given.contains(&base) {
                let takes = kind.info().given.join(", ");
                self.fault(
                    n.fault(Code::Conflict, format!("{} does not take \"{member}\"", kind.name())).hint(
                        if takes.is_empty() {
                            "this kind takes nothing under \"given\"".to_owned()
                        } else {
                            format!("it takes {takes}")
                        },
                    ),
                );
            }
        }
        for (member, upper) in [("isentropic_efficiency", 1e3), ("efficiency", 1e3), ("cop", 1e4)] {
            let Some(v) = self.var(given, member, Dimension::Fraction, Class::Parameter, 1.0) else {
                continue;
            };
            let value = match &self.process.vars[v] {
                Var::Given(a) => a.value(&self.inputs),
                Var::Unknown { .. } => continue,
            };
            if !(value > 0.0 && value < upper)
                && let Some(n) = given.get(member)
            {
                self.fault(n.fault(Code::OutOfBounds, format!("\"{member}\" must be positive")));
                continue;
            }
            let slot = &mut self.process.components[k].given;
            match member {
                "isentropic_efficiency" => slot.isentropic_efficiency = Some(v),
                "efficiency" => slot.efficiency = Some(v),
                _ => slot.cop = Some(v),
            }
        }
        if self.process.components[k].given.isentropic_efficiency.is_some()
            && self.process.components[k].sides.first().is_none_or(|s| s.inlets.len() != 1)
            && let Some(n) = given.get("isentropic_efficiency")
        {
            self.fault(n.fault(
                Code::Conflict,
                "an isentropic efficiency needs exactly one inlet of the working fluid",
            ));
        }
        if let Some(v) =
            self.var(given, "pressure_loss", Dimension::PressureDifference, Class::Parameter, 1.0)
        {
            self.process.components[k].given.pressure_loss.push((0, PressureLoss::Difference(v)));
        }
        if let Some(v) = self.var(given, "pressure_loss_fraction", Dimension::Fraction, Class::Parameter, 1.0)
        {
            self.process.components[k].given.pressure_loss.push((0, PressureLoss::Fraction(v)));
        }
    }

    fn stated(&mut self, k: ComponentId, node: Node<'t>) {
        let Some(stated) = node.get("stated_performance") else { return };
        for (member, what) in [
            ("isentropic_efficiency", StatedFigure::IsentropicEfficiency),
            ("efficiency", StatedFigure::Efficiency),
            ("cop", StatedFigure::Cop),
            ("exergy_efficiency", StatedFigure::ExergyEfficiency),
        ] {
            if let Some(var) = self.var(stated, member, Dimension::Fraction, Class::Claim, 1.0) {
                let pointer = stated.pointer_to(member);
                self.process.components[k].stated.push(Stated { what, var, pointer });
            }
        }
    }

    fn purpose(&mut self, k: ComponentId, node: Node<'t>) {
        let Some(purpose) = node.get("purpose") else { return };
        let mut lists = [Vec::new(), Vec::new()];
        for (member, list) in ["fuel", "product"].into_iter().zip(&mut lists) {
            for item in purpose.get(member).into_iter().flat_map(Node::items) {
                let text = item.text().unwrap_or_default();
                let (sign, name) = match text.strip_prefix('-') {
                    Some(rest) => (-1.0, rest.trim()),
                    None => (1.0, text),
                };
                let found = self.flow_ids.get(name).copied().and_then(|f| self.end_at(k, f));
                match found {
                    Some(f) => {
                        // Fuel counts what enters, product what leaves; the rest is taken off.
                        let enters = self.process.components[k].inlets.contains(&f);
                        let counts = if enters == (member == "fuel") { 1.0 } else { -1.0 };
                        if sign == counts {
                            list.push((f, sign));
                        } else {
                            let direction = if enters { "enters" } else { "leaves" };
                            let written = if counts < 0.0 { "-" } else { "" };
                            self.fault(
                                item.fault(
                                    Code::Conflict,
                                    format!(
                                        "\"{name}\" {direction}, and {member} counts it the other way round"
                                    ),
                                )
                                .hint(format!("write \"{written}{name}\"")),
                            );
                        }
                    }
                    None => self.fault(item.fault(
                        Code::DanglingReference,
                        format!("there is no flow \"{name}\" at this component"),
                    )),
                }
            }
        }
        let [fuel, product] = lists;
        self.process.components[k].purpose = Some(Purpose { fuel, product });
    }
}
