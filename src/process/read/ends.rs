//! Flows that are described by their two ends: pipes with balances of their own.

use super::states::STATE_MEMBERS;
use super::values::Class;
use super::*;

impl<'t> Reader<'t> {
    /// Both ends of a flow; the state where it arrives is the one that others may share.
    pub(super) fn two_ends(
        &mut self,
        f: FlowId,
        node: Node<'t>,
        ends: Node<'t>,
        fluid: FluidId,
    ) -> Option<StateId> {
        let name = self.flow_nodes[f].0;
        let own = node.members().find(|(m, _)| STATE_MEMBERS.contains(m)).map(|(_, n)| n);
        if let Some(extra) = own {
            self.fault(
                extra
                    .fault(Code::Conflict, format!("\"{name}\" is described by its two ends"))
                    .hint("move the figure into \"from\" or \"to\" under \"ends\""),
            );
        }
        let near =
            self.state(ends.get("from")?, fluid, &format!("\"{name}\" where it leaves"), false, None)?;
        let far = self.state(ends.get("to")?, fluid, &format!("\"{name}\" where it arrives"), false, None)?;
        self.two_ended.push(TwoEnded { flow: f, near, far: None });
        Some(far)
    }

    /// Makes the pipes of the flows that are described by two ends: the flow enters the pipe, and
    /// a flow of its own leaves it.
    pub(super) fn pipes(&mut self) {
        for i in 0..self.two_ended.len() {
            let TwoEnded { flow: f, near, .. } = self.two_ended[i];
            let (name, node) = self.flow_nodes[f];
            let Carried::Material(arriving) = self.process.flows[f].carried.clone() else { continue };
            if self.component_ids.contains_key(name) {
                self.fault(
                    node.fault(
                        Code::Conflict,
                        format!("\"{name}\" has two ends and is named like a component"),
                    )
                    .hint("rename the flow: its pipe is reported as a component of that name"),
                );
                continue;
            }
            let Some(ends) = node.get("ends") else { continue };
            let mut motion = |end: Option<Node<'t>>, member: &str, dimension| {
                end.and_then(|n| self.var(n, member, dimension, Class::State, 1.0))
            };
            let (first, last) = (ends.get("from"), ends.get("to"));
            let velocities = (
                motion(first, "velocity", Dimension::Velocity),
                motion(last, "velocity", Dimension::Velocity),
            );
            let elevations =
                (motion(first, "elevation", Dimension::Length), motion(last, "elevation", Dimension::Length));
            // A volume belongs to the end where the flow leaves; at the other one it differs.
            let amount = if arriving.form == AmountForm::Volume {
                self.assume(node.pointer(), "the volume of a flow with two ends is that where it leaves");
                self.unknown(
                    format!("mass flow of \"{name}\" where it arrives"),
                    Nature::Mass,
                    node.pointer(),
                )
            } else {
                arriving.amount
            };
            let form = if arriving.form == AmountForm::Volume { AmountForm::Mass } else { arriving.form };
            let pipe = self.process.components.len();
            let far = self.process.flows.len();
            let to = self.process.flows[f].to;
            self.process.flows.push(Flow {
                name: format!("{name}.to"),
                pointer: ends.pointer_to("to"),
                from: Some(pipe),
                to,
                carried: Carried::Material(Material {
                    amount,
                    form,
                    velocity: velocities.1.or(arriving.velocity),
                    elevation: elevations.1.or(arriving.elevation),
                    ..arriving.clone()
                }),
                role: if to.is_none() { self.process.flows[f].role } else { None },
                implied: true,
            });
            if let Some(k) = to {
                for inlet in &mut self.process.components[k].inlets {
                    if *inlet == f {
                        *inlet = far;
                    }
                }
            }
            let flow = &mut self.process.flows[f];
            flow.to = Some(pipe);
            if flow.from.is_some() {
                flow.role = None;
            }
            flow.carried = Carried::Material(Material {
                state: near,
                velocity: velocities.0.or(arriving.velocity),
                elevation: elevations.0.or(arriving.elevation),
                ..arriving
            });
            let varies = {
                let fluid = self.process.states[near].fluid;
                self.process.fluids[fluid].engine.elements_vary()
            };
            self.process.components.push(Component {
                name: name.to_owned(),
                pointer: node.pointer(),
                kind: Kind::Pipe,
                inlets: vec![f],
                outlets: vec![far],
                sides: vec![Side { inlets: vec![f], outlets: vec![far], pool: varies, ..Side::default() }],
                arrangement: Arrangement::Unknown,
                given: Given { heat_loss: true, ..Given::default() },
                stated: Vec::new(),
                holdup: None,
                ports: Vec::new(),
                purpose: None,
                throat_area: None,
                implied: true,
            });
            // What heat passes the wall follows from the balance.
            let loss = self.unknown(format!("heat loss of \"{name}\""), Nature::Energy, ends.pointer());
            let heat = self.process.flows.len();
            self.process.flows.push(Flow {
                name: format!("{name}.heat_loss"),
                pointer: ends.pointer(),
                from: Some(pipe),
                to: None,
                carried: Carried::Heat(loss, Boundary::Unknown),
                role: Some(Role::Loss),
                implied: true,
            });
            self.process.components[pipe].outlets.push(heat);
            self.two_ended[i].far = Some(far);
        }
    }
}
