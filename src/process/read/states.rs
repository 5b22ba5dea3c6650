//! States of flows and contents: which pair fixes them, what is unknown, what is surplus.

use super::values::Class;
use super::*;
use crate::fluid::Phase;

/// The figures of one state, by property.
#[derive(Default)]
struct Figures {
    pressure: Option<VarId>,
    temperature: Option<VarId>,
    enthalpy: Option<VarId>,
    entropy: Option<VarId>,
    quality: Option<VarId>,
    superheat: Option<VarId>,
    subcooling: Option<VarId>,
    phase: Option<Phase>,
}

impl<'t> Reader<'t> {
    /// Reads what flow `f` carries.
    pub(super) fn carried(&mut self, f: FlowId) {
        let (name, node) = self.flow_nodes[f];
        let carried = match node.get("kind").and_then(Node::text) {
            Some("heat") => {
                let rate = self.transfer(node, name, "rate");
                Carried::Heat(rate, self.boundary(node))
            }
            Some("work") => {
                let power = self.transfer(node, name, "power");
                let form = match node.get("form").and_then(Node::text) {
                    Some("electric") => WorkForm::Electric,
                    _ => WorkForm::Shaft,
                };
                Carried::Work(power, form)
            }
            Some("radiation") => {
                let rate = self.transfer(node, name, "rate");
                let t = self.var(node, "temperature", Dimension::Temperature, Class::State, 1.0);
                let Some(t) = t else { return };
                Carried::Radiation(rate, t)
            }
            _ => {
                let Some(state) = self.flow_state(f) else { return };
                let (amount, form) = self.amount(node, name, "mass flow");
                let velocity = self.var(node, "velocity", Dimension::Velocity, Class::State, 1.0);
                let elevation = self.var(node, "elevation", Dimension::Length, Class::State, 1.0);
                let stated_exergy = node
                    .get("exergy")
                    .and_then(|n| n.quantity(Dimension::SpecificEnergy, &mut self.faults))
                    .map(|q| q.value);
                Carried::Material(Material { state, amount, form, velocity, elevation, stated_exergy })
            }
        };
        self.process.flows[f].carried = carried;
    }

    fn boundary(&mut self, node: Node<'t>) -> Boundary {
        let Some(t) = node.get("temperature") else { return Boundary::Unknown };
        let slides = t.get("inlet").is_some() || t.get("outlet").is_some();
        if !slides {
            return match self.temperature_here(t) {
                Some(v) => Boundary::Isothermal(v),
                None => Boundary::Unknown,
            };
        }
        let inlet = self.var(t, "inlet", Dimension::Temperature, Class::State, 1.0);
        let outlet = self.var(t, "outlet", Dimension::Temperature, Class::State, 1.0);
        match (inlet, outlet) {
            (Some(a), Some(b)) => Boundary::Sliding(a, b),
            _ => {
                self.fault(
                    t.fault(Code::MissingField, "a sliding temperature needs both \"inlet\" and \"outlet\""),
                );
                Boundary::Unknown
            }
        }
    }

    /// The state of a material flow, read once; flows may share it.
    pub(super) fn flow_state(&mut self, f: FlowId) -> Option<StateId> {
        match self.flow_states[f] {
            Progress::Done(state) => return state,
            Progress::Reading => {
                let (name, node) = self.flow_nodes[f];
                let at = node.get("same_state_as").unwrap_or(node);
                self.fault(at.fault(
                    Code::CircularReference,
                    format!("the state of \"{name}\" refers back to itself"),
                ));
                return None;
            }
            Progress::Unread => {}
        }
        self.flow_states[f] = Progress::Reading;
        let state = self.flow_state_unread(f);
        self.flow_states[f] = Progress::Done(state);
        state
    }

    fn flow_state_unread(&mut self, f: FlowId) -> Option<StateId> {
        let (name, node) = self.flow_nodes[f];
        if let Some(n) = node.get("same_state_as") {
            let target = n.text().unwrap_or_default();
            let Some(&other) = self.flow_ids.get(target) else {
                self.faults.push(references::dangling(n, "flow", target, self.flow_ids.keys().copied()));
                return None;
            };
            if self.flow_nodes[other].1.get("kind").and_then(Node::text) != Some("material") {
                self.fault(n.fault(Code::Conflict, format!("\"{target}\" carries no material")));
                return None;
            }
            for member in ["temperature", "enthalpy", "entropy", "quality", "superheat", "subcooling"] {
                if let Some(extra) = node.get(member) {
                    self.fault(
                        extra
                            .fault(Code::Conflict, format!("\"{name}\" shares its state with \"{target}\""))
                            .hint("only \"pressure\" may be given beside \"same_state_as\""),
                    );
                }
            }
            let state = self.flow_state(other)?;
            self.flow_fluids[f] = Some(self.process.states[state].fluid);
            return match self.var(node, "pressure", Dimension::Pressure, Class::State, 1.0) {
                Some(p) => Some(self.share_but_pressure(state, p, node.pointer())),
                None => Some(state),
            };
        }
        // A branch of a splitter that says nothing of its state has the inlet's.
        if node.get("state").is_none() && !has_state(node) {
            let from = self.process.flows[f].from;
            let splitter = from.filter(|&k| self.process.components[k].kind == Kind::Splitter);
            if let Some(k) = splitter
                && let [inlet] = self.process.components[k].inlets[..]
                && self.flow_nodes[inlet].1.get("kind").and_then(Node::text) == Some("material")
            {
                let state = self.flow_state(inlet)?;
                self.flow_fluids[f] = Some(self.process.states[state].fluid);
                return Some(state);
            }
        }
        let fluid = self.flow_fluid(f)?;
        if let Some(ends) = node.get("ends") {
            return self.two_ends(f, node, ends, fluid);
        }
        let ambient = node.get("state").is_some();
        self.state(node, fluid, &format!("\"{name}\""), ambient, Some(f))
    }

    /// A copy of a state with another pressure: the coordinate that is not the pressure is shared.
    fn share_but_pressure(&mut self, state: StateId, p: VarId, pointer: String) -> StateId {
        let mut spec = self.process.states[state].clone();
        spec.pointer = pointer;
        spec.surplus.clear();
        spec.ambient = false;
        match spec.form {
            StateForm::Pair(Pair::TemperatureQuality) => {
                spec.form = StateForm::Pair(Pair::PressureQuality);
                spec.a = p;
            }
            StateForm::Pair(Pair::EnthalpyEntropy) => {
                spec.form = StateForm::Pair(Pair::PressureEnthalpy);
                spec.b = spec.a;
                spec.a = p;
            }
            StateForm::TemperatureSuperheat | StateForm::TemperatureSubcooling => {
                spec.form = StateForm::Pair(Pair::PressureTemperature);
                spec.b = spec.a;
                spec.a = p;
            }
            _ => spec.a = p,
        }
        self.process.states.push(spec);
        self.process.states.len() - 1
    }

    /// Reads a state from the members of an object.
    pub(super) fn state(
        &mut self,
        node: Node<'t>,
        fluid: FluidId,
        name: &str,
        ambient: bool,
        flow: Option<FlowId>,
    ) -> Option<StateId> {
        let mut figures = Figures {
            pressure: self.var(node, "pressure", Dimension::Pressure, Class::State, 1.0),
            temperature: self.var(node, "temperature", Dimension::Temperature, Class::State, 1.0),
            enthalpy: self.var(node, "enthalpy", Dimension::SpecificEnergy, Class::State, 1.0),
            entropy: self.var(node, "entropy", Dimension::SpecificEntropy, Class::State, 1.0),
            quality: self.var(node, "quality", Dimension::Fraction, Class::State, 1.0),
            superheat: self.var(node, "superheat", Dimension::TemperatureDifference, Class::State, 1.0),
            subcooling: self.var(node, "subcooling", Dimension::TemperatureDifference, Class::State, 1.0),
            phase: None,
        };
        match node.get("phase").and_then(Node::text) {
            Some("liquid") => figures.phase = Some(Phase::Liquid),
            Some("vapour") => figures.phase = Some(Phase::Vapour),
            Some("two-phase") => figures.phase = Some(Phase::TwoPhase),
            Some(word @ ("saturated-liquid" | "saturated-vapour")) => {
                let x = if word == "saturated-liquid" { 0.0 } else { 1.0 };
                if figures.quality.is_some()
                    && let Some(n) = node.get("phase")
                {
                    self.fault(n.fault(Code::Conflict, format!("\"{word}\" and \"quality\" say the same")));
                }
                figures.quality = Some(self.constant(x));
            }
            _ => {}
        }
        if ambient {
            let (t, p) = self.ambient();
            for member in ["temperature", "enthalpy", "entropy", "quality"] {
                if let Some(n) = node.get(member) {
                    self.fault(n.fault(
                        Code::Conflict,
                        "a state of the environment has the environment's temperature and pressure",
                    ));
                }
            }
            figures.temperature = Some(t);
            figures.pressure = figures.pressure.or(Some(p));
        }
        if matches!(self.process.fluids[fluid].substance, Substance::Stated) {
            let (Some(h), Some(s)) = (figures.enthalpy, figures.entropy) else {
                self.fault(node.fault(
                    Code::MissingField,
                    "a flow of a stated fluid gives \"enthalpy\" and \"entropy\"",
                ));
                return None;
            };
            // The pressure tells whether a negative exergy can be that of a vacuum.
            let pressure = figures.pressure.map(|var| Surplus {
                property: Property::Pressure,
                var,
                pointer: node.pointer_to("pressure"),
            });
            return Some(self.push_state(
                node,
                fluid,
                StateForm::Pair(Pair::EnthalpyEntropy),
                (h, s),
                None,
                pressure.into_iter().collect(),
                None,
                false,
            ));
        }
        let composition = self.composition(node, fluid, ambient, name)?;
        if figures.quality.is_none() && figures.phase.is_none() {
            figures.phase = flow.and_then(|f| self.implied_phase(f));
        }
        if figures.pressure.is_none() && figures.temperature.is_some() {
            self.assume_liquid_pressure(node, fluid, &mut figures);
        }
        let (form, a, b) = self.coordinates(node, name, &mut figures);
        if let StateForm::Pair(pair) = form
            && !self.process.fluids[fluid].engine.supports(pair)
        {
            let fluid_name = self.process.fluids[fluid].name.clone();
            self.fault(
                node.fault(Code::UnsupportedPair, format!("\"{fluid_name}\" cannot be fixed by {pair}"))
                    .hint("give pressure and temperature, or pressure and enthalpy"),
            );
            return None;
        }
        let mut surplus = Vec::new();
        for (property, var, member) in [
            (Property::Pressure, figures.pressure, "pressure"),
            (Property::Temperature, figures.temperature, "temperature"),
            (Property::Enthalpy, figures.enthalpy, "enthalpy"),
            (Property::Entropy, figures.entropy, "entropy"),
            (Property::Quality, figures.quality, "quality"),
        ] {
            if let Some(var) = var {
                surplus.push(Surplus { property, var, pointer: node.pointer_to(member) });
            }
        }
        let phase = figures.phase;
        Some(self.push_state(node, fluid, form, (a, b), composition, surplus, phase, ambient))
    }

    #[allow(clippy::too_many_arguments, reason = "the parts of one state")]
    fn push_state(
        &mut self,
        node: Node<'t>,
        fluid: FluidId,
        form: StateForm,
        (a, b): (VarId, VarId),
        c: Option<(CompositionForm, VarId)>,
        surplus: Vec<Surplus>,
        phase: Option<Phase>,
        ambient: bool,
    ) -> StateId {
        self.process.states.push(StateSpec {
            fluid,
            form,
            a,
            b,
            c,
            surplus,
            phase,
            pointer: node.pointer(),
            ambient,
            wet_ambiguous: false,
        });
        self.process.states.len() - 1
    }

    /// The suction of a pump is liquid and that of a compressor is vapour, unless said otherwise.
    fn implied_phase(&self, f: FlowId) -> Option<Phase> {
        let to = self.process.flows[f].to.map(|k| self.process.components[k].kind);
        let from = self.process.flows[f].from.map(|k| self.process.components[k].kind);
        match (from, to) {
            (_, Some(Kind::Pump)) | (Some(Kind::Pump), _) => Some(Phase::Liquid),
            (_, Some(Kind::Compressor)) | (Some(Kind::Compressor), _) => Some(Phase::Vapour),
            _ => None,
        }
    }

    /// Liquids hardly depend on pressure: where only a temperature is given and the fluid is
    /// liquid there at ambient pressure, ambient pressure is taken.
    fn assume_liquid_pressure(&mut self, node: Node<'t>, fluid: FluidId, figures: &mut Figures) {
        let others =
            [figures.enthalpy, figures.entropy, figures.quality, figures.superheat, figures.subcooling];
        if others.iter().any(Option::is_some) {
            return;
        }
        let Some(t) = figures.temperature else { return };
        let Var::Given(affine) = &self.process.vars[t] else { return };
        let t = affine.value(&self.inputs);
        let p0 = self.process.environment.pressure;
        let engine = &self.process.fluids[fluid].engine;
        let dense = engine
            .state(Pair::PressureTemperature, p0, t, 0.0)
            .is_ok_and(|s| matches!(s.phase, Phase::Liquid | Phase::Solid));
        if dense && !engine.elements_vary() {
            let (_, p) = self.ambient();
            figures.pressure = Some(p);
            self.assume(node.pointer(), "pressure of a liquid not given: ambient pressure");
        }
    }

    /// Chooses the pair and takes its figures out; what is missing becomes an unknown.
    fn coordinates(
        &mut self,
        node: Node<'t>,
        name: &str,
        figures: &mut Figures,
    ) -> (StateForm, VarId, VarId) {
        let f = figures;
        let pair = |pair: Pair, a: VarId, b: VarId| (StateForm::Pair(pair), a, b);
        if let Some(p) = f.pressure {
            if let Some(x) = f.quality {
                (f.pressure, f.quality) = (None, None);
                return pair(Pair::PressureQuality, p, x);
            }
            if let Some(d) = f.superheat.take() {
                f.pressure = None;
                return (StateForm::PressureSuperheat, p, d);
            }
            if let Some(d) = f.subcooling.take() {
                f.pressure = None;
                return (StateForm::PressureSubcooling, p, d);
            }
            f.pressure = None;
            if let Some(t) = f.temperature.take() {
                return pair(Pair::PressureTemperature, p, t);
            }
            if let Some(h) = f.enthalpy.take() {
                return pair(Pair::PressureEnthalpy, p, h);
            }
            if let Some(s) = f.entropy.take() {
                return pair(Pair::PressureEntropy, p, s);
            }
            let h = self.unknown(format!("enthalpy of {name}"), Nature::Enthalpy, node.pointer());
            return pair(Pair::PressureEnthalpy, p, h);
        }
        if let Some(t) = f.temperature {
            if let Some(x) = f.quality.take() {
                f.temperature = None;
                return pair(Pair::TemperatureQuality, t, x);
            }
            if let Some(d) = f.superheat.take() {
                f.temperature = None;
                return (StateForm::TemperatureSuperheat, t, d);
            }
            if let Some(d) = f.subcooling.take() {
                f.temperature = None;
                return (StateForm::TemperatureSubcooling, t, d);
            }
            f.temperature = None;
            let p = self.unknown(format!("pressure of {name}"), Nature::Pressure, node.pointer());
            return pair(Pair::PressureTemperature, p, t);
        }
        if let (Some(h), Some(s)) = (f.enthalpy, f.entropy) {
            (f.enthalpy, f.entropy) = (None, None);
            return pair(Pair::EnthalpyEntropy, h, s);
        }
        let p = self.unknown(format!("pressure of {name}"), Nature::Pressure, node.pointer());
        if let Some(x) = f.quality.take() {
            return pair(Pair::PressureQuality, p, x);
        }
        if let Some(d) = f.superheat.take() {
            return (StateForm::PressureSuperheat, p, d);
        }
        if let Some(d) = f.subcooling.take() {
            return (StateForm::PressureSubcooling, p, d);
        }
        if let Some(s) = f.entropy.take() {
            return pair(Pair::PressureEntropy, p, s);
        }
        let h = match f.enthalpy.take() {
            Some(h) => h,
            None => self.unknown(format!("enthalpy of {name}"), Nature::Enthalpy, node.pointer()),
        };
        pair(Pair::PressureEnthalpy, p, h)
    }

    /// The composition coordinate of a variable mixture; `Some(None)` for a fixed one.
    #[allow(clippy::option_option, reason = "the outer one is failure, the inner one absence")]
    fn composition(
        &mut self,
        node: Node<'t>,
        fluid: FluidId,
        ambient: bool,
        name: &str,
    ) -> Option<Option<(CompositionForm, VarId)>> {
        const MEMBERS: [(&str, CompositionForm, Dimension); 5] = [
            ("humidity_ratio", CompositionForm::Direct, Dimension::HumidityRatio),
            ("relative_humidity", CompositionForm::RelativeHumidity, Dimension::Fraction),
            ("wet_bulb", CompositionForm::WetBulb, Dimension::Temperature),
            ("dew_point", CompositionForm::DewPoint, Dimension::Temperature),
            ("salinity", CompositionForm::Direct, Dimension::Fraction),
        ];
        let variable = self.process.fluids[fluid].engine.elements_vary();
        let shared = self.shared_composition.get(&fluid).copied();
        let humid = matches!(self.process.fluids[fluid].substance, Substance::HumidAir);
        let mut found = None;
        for (member, form, dimension) in MEMBERS {
            let Some(n) = node.get(member) else { continue };
            if !variable || shared.is_some() || (humid == (member == "salinity")) {
                let fluid_name = self.process.fluids[fluid].name.clone();
                self.fault(n.fault(Code::Conflict, format!("\"{fluid_name}\" has no {member}")));
                return None;
            }
            if found.is_some() {
                self.fault(n.fault(Code::Conflict, "the composition is given twice"));
                continue;
            }
            // A composition counts as exact unless an uncertainty is stated; humidity is a reading.
            let class = if member == "salinity" { Class::Parameter } else { Class::State };
            if let Some(v) = self.var(node, member, dimension, class, 1.0) {
                found = Some((form, v));
            }
        }
        if !variable {
            return Some(None);
        }
        if let Some(v) = shared {
            return Some(Some((CompositionForm::Direct, v)));
        }
        if let Some(c) = found {
            return Some(Some(c));
        }
        if ambient && humid {
            let phi = self.process.environment.relative_humidity.unwrap_or(0.6);
            let v = self.constant(phi);
            return Some(Some((CompositionForm::RelativeHumidity, v)));
        }
        let v = self.unknown(format!("composition of {name}"), Nature::Composition, node.pointer());
        Some(Some((CompositionForm::Direct, v)))
    }

    /// Marks states whose (p, T) lies so close to saturation that the wetness is unknown: they get
    /// an unknown enthalpy, and the temperature becomes a check.
    pub(super) fn mark_wetness(&mut self) {
        for s in 0..self.process.states.len() {
            let spec = &self.process.states[s];
            if spec.form != StateForm::Pair(Pair::PressureTemperature)
                || spec.c.is_some()
                || matches!(spec.phase, Some(Phase::Liquid | Phase::Vapour))
            {
                continue;
            }
            let (Var::Given(p), Var::Given(t)) = (&self.process.vars[spec.a], &self.process.vars[spec.b])
            else {
                continue;
            };
            let (pv, tv) = (p.value(&self.inputs), t.value(&self.inputs));
            let engine = &self.process.fluids[spec.fluid].engine;
            let Ok((saturation, slope)) = engine.saturation_temperature(pv, 1.0) else { continue };
            let mut variance = 0.0;
            for (sources, d) in [(&t.terms, 1.0), (&p.terms, -slope)] {
                for &(source, w) in sources {
                    let part = d * w * self.process.sources[source].u;
                    variance += part * part;
                }
            }
            let near = (tv - saturation).abs() <= 3.0 * variance.sqrt();
            if !near && spec.phase != Some(Phase::TwoPhase) {
                continue;
            }
            let pointer = spec.pointer.clone();
            let temperature = spec.b;
            let h = self.unknown(format!("wetness at {pointer}"), Nature::Enthalpy, pointer.clone());
            let spec = &mut self.process.states[s];
            spec.form = StateForm::Pair(Pair::PressureEnthalpy);
            spec.b = h;
            spec.wet_ambiguous = true;
            spec.surplus.push(Surplus {
                property: Property::Temperature,
                var: temperature,
                pointer: format!("{pointer}/temperature"),
            });
        }
    }
}

/// Members that say something of a state.
pub(super) const STATE_MEMBERS: &[&str] = &[
    "temperature",
    "pressure",
    "enthalpy",
    "entropy",
    "quality",
    "superheat",
    "subcooling",
    "phase",
    "relative_humidity",
    "humidity_ratio",
    "wet_bulb",
    "dew_point",
    "salinity",
];

fn has_state(node: Node<'_>) -> bool {
    node.get("ends").is_some() || STATE_MEMBERS[..8].iter().any(|m| node.get(m).is_some())
}
