//! From a checked document to a process. Structural faults are collected, each at its place.

mod components;
mod ends;
mod fluids;
mod holdup;
mod media;
mod references;
mod states;
mod values;

use super::shape::{DESCRIPTION, STATE_QUESTION};
use super::*;
use crate::diagnostic::{Code, Diagnostic, nearest};
use crate::document::{self, Faults, Node, Tree};
use crate::fluid::chemistry::ReferenceSet;
use crate::quantity::Dimension;
use std::collections::HashMap;

/// What a description may not exceed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct ReadLimits {
    /// Size of the tree.
    pub tree: document::Limits,
    /// Components.
    pub components: usize,
    /// Flows.
    pub flows: usize,
    /// Species of one mixture.
    pub species: usize,
    /// Groups.
    pub groups: usize,
}

impl Default for ReadLimits {
    fn default() -> Self {
        ReadLimits { tree: document::Limits::default(), components: 200, flows: 500, species: 40, groups: 64 }
    }
}

/// Reads a description. `rules` are the names that its policy can switch off.
///
/// # Errors
/// Every fault that was found, located (at most [`document::FAULT_LIMIT`] of them).
pub fn read(
    body: &[u8],
    limits: &ReadLimits,
    rules: &[&'static str],
) -> Result<(Process, Inputs), Vec<Diagnostic>> {
    let mut faults = Faults::new();
    let Some(tree) = Tree::read(body, &limits.tree, &mut faults) else {
        return Err(faults.into_vec());
    };
    document::check(&tree, &DESCRIPTION, &mut faults);
    let root = tree.root();
    for (member, most) in
        [("components", limits.components), ("flows", limits.flows), ("groups", limits.groups)]
    {
        if let Some(node) = root.get(member)
            && node.members().len() > most
        {
            let count = node.members().len();
            faults.push(
                node.fault(Code::LimitExceeded, format!("{count} {member} exceed the limit of {most}")),
            );
        }
    }
    if !faults.is_empty() {
        references::check(root, &mut faults);
        return Err(faults.into_vec());
    }
    let mut reader = Reader::new(root, limits, faults);
    reader.run(rules);
    if reader.faults.is_empty() { Ok((reader.process, reader.inputs)) } else { Err(reader.faults.into_vec()) }
}

/// Reads a question for one state: a process that holds this state only.
///
/// # Errors
/// Every fault that was found, located.
pub fn read_state(body: &[u8], limits: &ReadLimits) -> Result<(Process, Inputs), Vec<Diagnostic>> {
    let mut faults = Faults::new();
    let Some(tree) = Tree::read(body, &limits.tree, &mut faults) else {
        return Err(faults.into_vec());
    };
    document::check(&tree, &STATE_QUESTION, &mut faults);
    if !faults.is_empty() {
        return Err(faults.into_vec());
    }
    let root = tree.root();
    let mut reader = Reader::new(root, limits, faults);
    reader.environment();
    if let Some(n) = root.get("fluid")
        && let Some(fluid) = reader.fluid(n)
        && reader.state(root, fluid, "the state", false, None).is_some()
    {
        reader.mark_wetness();
        let open = reader.process.vars.iter().find_map(|v| match v {
            Var::Unknown { what, .. } => Some(what.clone()),
            Var::Given(_) => None,
        });
        if reader.process.states[0].wet_ambiguous {
            reader.fault(
                Diagnostic::new(
                    Code::Unsolvable,
                    "",
                    "pressure and temperature lie at saturation within their digits: the wetness is not known",
                )
                .hint("give \"quality\", or \"phase\": \"saturated-vapour\" or \"saturated-liquid\""),
            );
        } else if let Some(what) = open {
            reader.fault(
                Diagnostic::new(Code::Unsolvable, "", format!("the {what} is not given"))
                    .hint("a state is fixed by two properties, for instance pressure and temperature"),
            );
        }
    }
    if reader.faults.is_empty() { Ok((reader.process, reader.inputs)) } else { Err(reader.faults.into_vec()) }
}

/// The process under construction.
struct Reader<'t> {
    root: Node<'t>,
    limits: &'t ReadLimits,
    faults: Faults,
    process: Process,
    inputs: Inputs,
    component_ids: HashMap<&'t str, ComponentId>,
    flow_ids: HashMap<&'t str, FlowId>,
    flow_nodes: Vec<(&'t str, Node<'t>)>,
    calibrations: HashMap<&'t str, SourceId>,
    fluid_ids: HashMap<String, FluidId>,
    /// Fluids that are being read, innermost last.
    open_fluids: Vec<String>,
    /// Composition coordinates that every state of a fluid shares.
    shared_composition: HashMap<FluidId, VarId>,
    /// Flows that are described by two ends: the flow and its state at the far one.
    two_ended: Vec<TwoEnded>,
    flow_fluids: Vec<Option<FluidId>>,
    flow_states: Vec<Progress>,
    ambient: Option<(VarId, VarId)>,
    /// The barometric pressure is not given, and no gauge reading has made use of it yet.
    barometer_assumed: bool,
}

/// A flow that is described by its two ends.
struct TwoEnded {
    flow: FlowId,
    /// The state where it leaves.
    near: StateId,
    /// The half that arrives, once it has been made.
    far: Option<FlowId>,
}

/// How far the state of a flow has been read.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Progress {
    Unread,
    Reading,
    Done(Option<StateId>),
}

/// Standard uncertainty of the barometric pressure where it is not given: the spread of weather
/// and of plant elevation, common practice.
const BAROMETER_U: f64 = 3e3;
const ATMOSPHERE: f64 = 101_325.0;

impl<'t> Reader<'t> {
    fn new(root: Node<'t>, limits: &'t ReadLimits, faults: Faults) -> Reader<'t> {
        let process = Process {
            name: root.get("name").and_then(Node::text).unwrap_or("unnamed").to_owned(),
            basis: match root.get("basis").and_then(Node::text) {
                Some("amount") => Basis::Amount,
                _ => Basis::Rate,
            },
            duration: None,
            environment: Environment {
                temperature: 298.15,
                pressure: ATMOSPHERE,
                relative_humidity: None,
                chemistry: ReferenceSet::Szargut1986,
                barometer: 0,
            },
            policy: Policy {
                edition: "2026",
                false_alarm: 0.01,
                literals: Literals::Design,
                closure_tolerance: 1e-3,
                minimum_approach: None,
                disable: Vec::new(),
            },
            fluids: Vec::new(),
            components: Vec::new(),
            flows: Vec::new(),
            states: Vec::new(),
            vars: Vec::new(),
            sources: Vec::new(),
            groups: Vec::new(),
            redundant: Vec::new(),
            flue_gas: Vec::new(),
            remarks: Vec::new(),
            assumptions: Vec::new(),
        };
        Reader {
            root,
            limits,
            faults,
            process,
            inputs: Inputs::default(),
            component_ids: HashMap::new(),
            flow_ids: HashMap::new(),
            flow_nodes: Vec::new(),
            calibrations: HashMap::new(),
            fluid_ids: HashMap::new(),
            open_fluids: Vec::new(),
            shared_composition: HashMap::new(),
            two_ended: Vec::new(),
            flow_fluids: Vec::new(),
            flow_states: Vec::new(),
            ambient: None,
            barometer_assumed: false,
        }
    }

    fn run(&mut self, rules: &[&'static str]) {
        self.policy(rules);
        self.environment();
        if let Some(node) = self.root.get("duration") {
            self.process.duration = node.quantity(Dimension::Duration, &mut self.faults).map(|q| q.value);
            if self.process.basis == Basis::Rate {
                self.faults.push(
                    node.fault(Code::Conflict, "a duration needs \"basis\": \"amount\"")
                        .hint("with \"basis\": \"rate\" every figure is a rate already"),
                );
            }
        }
        if let Some(node) = self.root.get("economics")
            && node.members().len() > 0
        {
            self.assume(node.pointer(), "prices and costs were given, but no costs are computed");
        }
        self.calibrations();
        self.names();
        self.links();
        for f in 0..self.flow_nodes.len() {
            self.carried(f);
        }
        self.pipes();
        self.components_rest();
        self.groups();
        self.mark_wetness();
    }

    fn fault(&mut self, fault: Diagnostic) {
        self.faults.push(fault);
    }

    fn assume(&mut self, pointer: impl Into<String>, statement: impl Into<String>) {
        self.process.assumptions.push(Assumption { pointer: pointer.into(), statement: statement.into() });
    }

    fn policy(&mut self, rules: &[&'static str]) {
        let Some(node) = self.root.get("policy") else { return };
        let mut policy = self.process.policy.clone();
        if let Some(n) = node.get("false_alarm") {
            match n.number() {
                Some(a) if (1e-9..=0.5).contains(&a) => policy.false_alarm = a,
                _ => self.fault(n.fault(
                    Code::OutOfBounds,
                    "the accepted probability of a false alarm lies between 1e-9 and 0.5",
                )),
            }
        }
        if node.get("literals").and_then(Node::text) == Some("measured") {
            policy.literals = Literals::Measured;
        }
        if let Some(n) = node.get("closure_tolerance")
            && let Some(q) = n.quantity(Dimension::Fraction, &mut self.faults)
        {
            if (0.0..=0.5).contains(&q.value) {
                policy.closure_tolerance = q.value;
            } else {
                self.fault(n.fault(Code::OutOfBounds, "a closure tolerance lies between 0 and 0.5"));
            }
        }
        if let Some(n) = node.get("minimum_approach") {
            policy.minimum_approach =
                n.quantity(Dimension::TemperatureDifference, &mut self.faults).map(|q| q.value);
        }
        policy.disable = self.rule_names(node, "disable", rules);
        let enable = self.rule_names(node, "enable", rules);
        policy.disable.retain(|name| !enable.contains(name));
        self.process.policy = policy;
    }

    /// The rules that a list of the policy names, each once.
    fn rule_names(&mut self, policy: Node<'t>, member: &str, rules: &[&'static str]) -> Vec<&'static str> {
        let mut out = Vec::new();
        for item in policy.get(member).into_iter().flat_map(|list| list.items()) {
            let name = item.text().unwrap_or_default();
            match rules.iter().find(|rule| **rule == name) {
                Some(rule) if !out.contains(rule) => out.push(*rule),
                Some(_) => {}
                None => {
                    let fault = item.fault(Code::UnknownChoice, format!("there is no rule \"{name}\""));
                    let near = nearest(name, rules.iter().copied());
                    self.fault(
                        fault.suggest(&near, "GET /v1/rules lists them, and so does `sigmadot rules`"),
                    );
                }
            }
        }
        out
    }

    fn environment(&mut self) {
        let node = self.root.get("environment");
        let pressure = |reader: &mut Self, n: Node<'t>| {
            let q = n.quantity(Dimension::Pressure, &mut reader.faults)?;
            if q.reference() == crate::quantity::Reference::Gauge {
                reader.fault(
                    n.fault(Code::Conflict, "the pressure of the environment cannot be a gauge pressure")
                        .hint("write it absolute, for instance \"1.013 bar\""),
                );
                return None;
            }
            Some(q)
        };
        match node.and_then(|n| n.get("barometric_pressure")) {
            Some(n) => {
                if let Some(q) = pressure(self, n) {
                    let u = q.u().unwrap_or(q.half_digit / 3f64.sqrt());
                    self.process.environment.barometer =
                        self.source(n.pointer(), SourceKind::Barometer, q.value, u, q.half_digit);
                } else {
                    self.source(n.pointer(), SourceKind::Barometer, ATMOSPHERE, BAROMETER_U, 0.0);
                }
            }
            None => {
                self.barometer_assumed = true;
                self.process.environment.barometer = self.source(
                    "/environment/barometric_pressure".to_owned(),
                    SourceKind::Barometer,
                    ATMOSPHERE,
                    BAROMETER_U,
                    0.0,
                );
            }
        }
        let Some(node) = node else {
            self.process.environment.relative_humidity = Some(0.6);
            self.assume(
                "/environment",
                "environment not given: 25 degC, 1.01325 bar, 60 % relative humidity",
            );
            return;
        };
        match node.get("temperature") {
            Some(n) => {
                if let Some(q) = n.quantity(Dimension::Temperature, &mut self.faults) {
                    self.process.environment.temperature = q.value;
                }
            }
            None => self.assume("/environment/temperature", "ambient temperature not given: 25 degC"),
        }
        match node.get("pressure") {
            Some(n) => {
                if let Some(q) = pressure(self, n) {
                    self.process.environment.pressure = q.value;
                }
            }
            None => self.assume("/environment/pressure", "ambient pressure not given: 1.01325 bar"),
        }
        if let Some(n) = node.get("relative_humidity")
            && let Some(q) = n.quantity(Dimension::Fraction, &mut self.faults)
        {
            if (0.0..=1.0).contains(&q.value) {
                self.process.environment.relative_humidity = Some(q.value);
            } else {
                self.fault(n.fault(Code::OutOfBounds, "a relative humidity lies between 0 and 1"));
            }
        }
        self.process.environment.chemistry = match node.get("chemistry").and_then(Node::text) {
            Some("szargut-2007") => ReferenceSet::Szargut2007,
            Some("ahrendts") => ReferenceSet::Ahrendts,
            _ => ReferenceSet::Szargut1986,
        };
    }

    fn calibrations(&mut self) {
        let Some(node) = self.root.get("calibrations") else { return };
        for (name, group) in node.members() {
            // The unit of the common error is that of its members' dimension; differences only.
            let Some(n) = group.get("uncertainty") else { continue };
            let Some(u) = self.common_uncertainty(n) else { continue };
            let id = self.source(group.pointer(), SourceKind::Calibration, 0.0, u, 0.0);
            self.calibrations.insert(name, id);
        }
    }

    fn names(&mut self) {
        if let Some(node) = self.root.get("components") {
            for (name, n) in node.members() {
                let kind = n.get("kind").and_then(Node::text).and_then(Kind::from_name);
                // An unknown kind has its fault; the name is known all the same.
                let kind = kind.unwrap_or(Kind::ControlVolume);
                self.component_ids.insert(name, self.process.components.len());
                self.process.components.push(Component {
                    name: name.to_owned(),
                    pointer: n.pointer(),
                    kind,
                    inlets: Vec::new(),
                    outlets: Vec::new(),
                    sides: Vec::new(),
                    arrangement: Arrangement::Unknown,
                    given: Given::default(),
                    stated: Vec::new(),
                    holdup: None,
                    ports: Vec::new(),
                    purpose: None,
                    throat_area: None,
                    implied: false,
                });
            }
            if self.process.components.is_empty() {
                self.fault(node.fault(Code::MissingField, "there is no component to check"));
            }
        }
        if let Some(node) = self.root.get("flows") {
            self.flow_nodes = node.members().collect();
        }
        for (i, (name, _)) in self.flow_nodes.iter().enumerate() {
            self.flow_ids.insert(name, i);
        }
        self.flow_fluids = vec![None; self.flow_nodes.len()];
        self.flow_states = vec![Progress::Unread; self.flow_nodes.len()];
    }

    /// Connects flows to components.
    fn links(&mut self) {
        for f in 0..self.flow_nodes.len() {
            let (name, node) = self.flow_nodes[f];
            let mut end = |member: &str| -> Option<ComponentId> {
                let n = node.get(member)?;
                let target = n.text()?;
                let found = self.component_ids.get(target).copied();
                if found.is_none() {
                    let known = self.component_ids.keys().copied();
                    self.faults.push(references::dangling(n, "component", target, known));
                }
                found
            };
            let (from, to) = (end("from"), end("to"));
            if node.get("from").is_none() && node.get("to").is_none() {
                self.fault(
                    node.fault(Code::NotConnected, format!("flow \"{name}\" touches no component"))
                        .hint("give it \"from\", \"to\" or both"),
                );
            }
            if let Some(k) = from {
                self.process.components[k].outlets.push(f);
            }
            if let Some(k) = to {
                self.process.components[k].inlets.push(f);
            }
            let role = match node.get("role").and_then(Node::text) {
                Some("fuel") => Some(Role::Fuel),
                Some("product") => Some(Role::Product),
                Some("loss") => Some(Role::Loss),
                Some("free") => Some(Role::Free),
                _ => None,
            };
            if let (Some(_), Some(n)) = (role, node.get("role"))
                && from.is_some()
                && to.is_some()
            {
                self.fault(n.fault(Code::Conflict, "only a flow that crosses the plant boundary has a role"));
            }
            // What it carries is read next; work is only a place-holder of the right size here.
            self.process.flows.push(Flow {
                name: name.to_owned(),
                pointer: node.pointer(),
                from,
                to,
                carried: Carried::Work(0, WorkForm::Shaft),
                role,
                implied: false,
            });
        }
    }

    fn groups(&mut self) {
        let Some(node) = self.root.get("groups") else { return };
        for (name, list) in node.members() {
            let mut members = Vec::new();
            for item in list.items() {
                let target = item.text().unwrap_or_default();
                match self.component_ids.get(target) {
                    Some(&k) if !members.contains(&k) => members.push(k),
                    Some(_) => {}
                    None => {
                        let known = self.component_ids.keys().copied();
                        self.faults.push(references::dangling(item, "component", target, known));
                    }
                }
            }
            self.process.groups.push(Group { name: name.to_owned(), pointer: list.pointer(), members });
        }
    }
}
