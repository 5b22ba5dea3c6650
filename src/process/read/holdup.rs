//! What components hold before and after a batch.

use super::values::Class;
use super::*;

impl<'t> Reader<'t> {
    /// Reads what a component holds before and after a batch.
    pub(super) fn holdup(&mut self, k: ComponentId, node: Node<'t>) {
        let Some(holdup) = node.get("holdup") else { return };
        if self.process.basis == Basis::Rate {
            self.fault(
                holdup
                    .fault(Code::Conflict, "a holdup needs \"basis\": \"amount\"")
                    .hint("before and after belong to a batch"),
            );
            return;
        }
        let boundary_pressure = self.var(holdup, "boundary_pressure", Dimension::Pressure, Class::State, 1.0);
        let name = self.process.components[k].name.clone();
        // Contents that end in equilibrium share one unknown temperature.
        let mut shared = None;
        let mut read = |reader: &mut Self, member: &str| -> Vec<Content> {
            let mut out = Vec::new();
            for (i, n) in holdup.get(member).into_iter().flat_map(Node::items).enumerate() {
                let Some(fluid) = n.get("fluid").and_then(|f| reader.fluid(f)) else { continue };
                let what = format!("\"{name}\" {member} content {}", i + 1);
                let Some(state) = reader.content_state(n, fluid, &what, &mut shared) else { continue };
                let (amount, form) = reader.content_amount(n, &name, state);
                out.push(Content { state, amount, form });
            }
            out
        };
        let initial = read(self, "initial");
        let r#final = read(self, "final");
        self.process.components[k].holdup = Some(Holdup { initial, r#final, boundary_pressure });
    }

    /// The amount of a content. Mass and volume together fix the specific volume, a further
    /// property of its state.
    fn content_amount(&mut self, node: Node<'t>, name: &str, state: StateId) -> (VarId, AmountForm) {
        let both = node.get("mass").zip(node.get("volume"));
        let Some((_, volume_node)) = both else { return self.amount(node, name, "mass held in") };
        let mass = self.var(node, "mass", Dimension::Mass, Class::Amount, 1.0);
        let volume = self.var(node, "volume", Dimension::Volume, Class::Amount, 1.0);
        let (Some(mass), Some(volume)) = (mass, volume) else {
            return (self.constant(1.0), AmountForm::Mass);
        };
        if let (Var::Given(m), Var::Given(v)) = (&self.process.vars[mass], &self.process.vars[volume]) {
            let (m0, v0) = (m.value(&self.inputs), v.value(&self.inputs));
            if m0 > 0.0 && v0 > 0.0 {
                // V/m, linearised about the figures.
                let mut terms: Vec<(SourceId, f64)> = v.terms.iter().map(|&(s, w)| (s, w / m0)).collect();
                terms.extend(m.terms.iter().map(|&(s, w)| (s, -w * v0 / (m0 * m0))));
                let spread: f64 = terms.iter().map(|&(s, w)| w * self.inputs.values[s]).sum();
                self.process.vars.push(Var::Given(Affine { constant: v0 / m0 - spread, terms }));
                let var = self.process.vars.len() - 1;
                let pointer = volume_node.pointer();
                self.process.states[state].surplus.push(Surplus { property: Property::Volume, var, pointer });
            } else {
                self.fault(volume_node.fault(Code::OutOfBounds, "mass and volume must be positive"));
            }
        }
        (mass, AmountForm::Mass)
    }

    /// The state of a content. A content that gives neither temperature nor another second
    /// property takes the one unknown temperature that all such contents share.
    fn content_state(
        &mut self,
        node: Node<'t>,
        fluid: FluidId,
        what: &str,
        shared: &mut Option<VarId>,
    ) -> Option<StateId> {
        let second = ["temperature", "enthalpy", "entropy", "quality", "superheat", "subcooling", "phase"];
        let rigid = node.get("mass").is_some() && node.get("volume").is_some();
        let dense = !rigid
            && !self.process.fluids[fluid].engine.elements_vary()
            && matches!(self.process.fluids[fluid].substance, Substance::Inert | Substance::Water);
        if second.iter().any(|m| node.get(m).is_some()) || !dense {
            return self.state(node, fluid, what, false, None);
        }
        let p = match self.var(node, "pressure", Dimension::Pressure, Class::State, 1.0) {
            Some(p) => p,
            None => {
                self.assume(node.pointer(), "pressure of a content not given: ambient pressure");
                self.ambient().1
            }
        };
        let t = match *shared {
            Some(t) => t,
            None => {
                let t = self.unknown(format!("temperature of {what}"), Nature::Temperature, node.pointer());
                *shared = Some(t);
                t
            }
        };
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
        Some(self.process.states.len() - 1)
    }

    /// Puts each content to the set that its substance belongs to: that of the flows of its fluid,
    /// a set of its own where it is there before and after, else the pool.
    pub(super) fn place_contents(&self, k: ComponentId, sides: &mut Vec<Side>) {
        let Some(holdup) = &self.process.components[k].holdup else { return };
        let held = |contents: &[Content]| -> Vec<(StateId, FluidId)> {
            contents.iter().map(|c| (c.state, self.process.states[c.state].fluid)).collect()
        };
        let (before, after) = (held(&holdup.initial), held(&holdup.r#final));
        let mut done: Vec<FluidId> = Vec::new();
        let humid = |fluid: FluidId| matches!(self.process.fluids[fluid].substance, Substance::HumidAir);
        let flows = sides.iter().flat_map(|s| s.inlets.iter().chain(&s.outlets));
        let air = before.iter().chain(&after).any(|c| humid(c.1))
            || flows.filter_map(|&f| self.fluid_of(f)).any(humid);
        for &(_, fluid) in before.iter().chain(&after) {
            if done.contains(&fluid) {
                continue;
            }
            done.push(fluid);
            let has = |flows: &[FlowId]| flows.iter().any(|&f| self.fluid_of(f) == Some(fluid));
            let own = sides.iter().position(|s| has(&s.inlets) || has(&s.outlets));
            let kept = before.iter().any(|c| c.1 == fluid) && after.iter().any(|c| c.1 == fluid);
            let meets = self.process.fluids[fluid].engine.elements_vary()
                || air && matches!(self.process.fluids[fluid].substance, Substance::Water);
            let at = match own {
                Some(at) => at,
                None => match sides.iter().position(|s| s.pool) {
                    Some(pool) if !kept || meets => pool,
                    _ => {
                        sides.push(Side { pool: !kept || meets, ..Side::default() });
                        sides.len() - 1
                    }
                },
            };
            let states = before.iter().chain(&after).filter(|c| c.1 == fluid).map(|c| c.0);
            sides[at].contents.extend(states);
        }
    }
}
