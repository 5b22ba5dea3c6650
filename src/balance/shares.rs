//! What flows carry of energy and entropy, and what the property formulations leave uncertain in it.

use super::Balance;
use super::region::{Bracket, GRAVITY, Region, sum_energy, sum_entropy};
use crate::fluid::Property;
use crate::model::{Blocked, Dual, Slot, View};
use crate::process::{Carried, ComponentId, FlowId, FluidId, Material, StateId, VarId};
use smallvec::SmallVec;
use std::borrow::Cow;

/// What a flow carries of energy on the datum of the balances, W or J.
///
/// # Errors
/// `Blocked`.
pub fn flow_energy(view: View<'_>, f: FlowId) -> Result<Dual, Blocked> {
    match &view.model.process.flows[f].carried {
        Carried::Material(m) => {
            Ok(view.mass(f)?.times(&specific_energy(view, m.state, m.velocity, m.elevation)?))
        }
        Carried::Heat(q, _) | Carried::Work(q, _) | Carried::Radiation(q, _) => view.var(*q),
    }
}

/// h + w²/2 + g z, J/kg.
fn specific_energy(
    view: View<'_>,
    state: usize,
    velocity: Option<VarId>,
    elevation: Option<VarId>,
) -> Result<Dual, Blocked> {
    let mut theta = view.enthalpy(state)?;
    if let Some(w) = velocity {
        let w = view.var(w)?;
        theta.add_scaled(1.0, &w.map(0.5 * w.value * w.value, w.value));
    }
    if let Some(z) = elevation {
        theta.add_scaled(GRAVITY, &view.var(z)?);
    }
    Ok(theta)
}

/// What a flow carries of a quantity, and how much that is beside the reference state: the scale
/// of closure.
pub type Share = (Dual, f64);

/// What one relative error of a property formulation adds: its slot and the derivative.
pub(super) type FormulationTerm = (Slot, f64);

/// The same for several quantities at once.
type FormulationTerms<const N: usize> = SmallVec<[(Slot, [f64; N]); 4]>;

/// What crosses boundaries of a quantity: what each flow carries, and what the property
/// formulations leave uncertain in each component.
pub(super) trait Ledger {
    fn flow(&self, f: FlowId) -> Result<Cow<'_, Share>, Blocked>;
    fn formulation(&self, k: ComponentId) -> impl Iterator<Item = FormulationTerm>;
}

/// A specific figure of material with its gradient, and how far it is from the reference state.
struct Specific {
    figure: fn(View<'_>, &Material) -> Result<Dual, Blocked>,
    relative: fn(View<'_>, StateId) -> Result<f64, Blocked>,
}

const ENERGY: Specific = Specific {
    figure: |view, m| specific_energy(view, m.state, m.velocity, m.elevation),
    relative: relative_enthalpy,
};
const ENTROPY: Specific = Specific { figure: |view, m| view.entropy(m.state), relative: relative_entropy };

/// Energy or entropy, found where it is asked for.
pub(super) struct Direct<'a> {
    view: View<'a>,
    specific: Specific,
    /// What other flows carry.
    other: fn(View<'_>, FlowId) -> Result<Share, Blocked>,
}

impl<'a> Direct<'a> {
    pub(super) const fn energy(view: View<'a>) -> Direct<'a> {
        Direct { view, specific: ENERGY, other: other_energy }
    }

    pub(super) const fn entropy(view: View<'a>) -> Direct<'a> {
        // Their entropy depends on the region.
        Direct { view, specific: ENTROPY, other: |_, _| Ok(Share::default()) }
    }
}

impl Ledger for Direct<'_> {
    fn flow(&self, f: FlowId) -> Result<Cow<'_, Share>, Blocked> {
        let view = self.view;
        let share = match view.model.process.flows[f].material() {
            Some(m) => {
                let relative = (self.specific.relative)(view, m.state);
                share(&view.mass(f), (self.specific.figure)(view, m), &relative)
            }
            None => (self.other)(view, f),
        };
        share.map(Cow::Owned)
    }

    fn formulation(&self, k: ComponentId) -> impl Iterator<Item = FormulationTerm> {
        let view = self.view;
        let error = |state, mass| StateError::of(view, state, mass, [&(self.specific.relative)(view, state)]);
        let terms = formulation_terms(
            view,
            k,
            |f| {
                let m = view.model.process.flows[f].material()?;
                Some(error(m.state, view.mass_value(m.state, m.amount, m.form).ok()?))
            },
            error,
        );
        terms.into_iter().map(|(slot, [d])| (slot, d))
    }
}

/// What material carries, from its mass and a specific figure.
fn share(
    mass: &Result<Dual, Blocked>,
    figure: Result<Dual, Blocked>,
    relative: &Result<f64, Blocked>,
) -> Result<Share, Blocked> {
    let mass = mass.as_ref().map_err(Clone::clone)?;
    let figure = figure?;
    let relative = *relative.as_ref().map_err(Clone::clone)?;
    Ok((mass.times(&figure), (mass.value * relative).abs()))
}

fn other_energy(view: View<'_>, f: FlowId) -> Result<Share, Blocked> {
    let energy = flow_energy(view, f)?;
    let size = energy.value.abs();
    Ok((energy, size))
}

/// Energy and entropy of every flow and component, found once: each flow bounds several regions.
pub struct Shares<'a> {
    view: View<'a>,
    flows: Vec<FlowShares>,
    formulations: Vec<FormulationTerms<2>>,
}

/// What one flow carries.
struct FlowShares {
    /// Energy and entropy.
    shares: [Result<Share, Blocked>; 2],
    /// What is uncertain in them.
    error: Option<StateError<2>>,
}

impl FlowShares {
    fn of(view: View<'_>, f: FlowId) -> FlowShares {
        let Some(m) = view.model.process.flows[f].material() else {
            return FlowShares { shares: [other_energy(view, f), Ok(Share::default())], error: None };
        };
        let mass = view.mass(f);
        let relative = [relative_enthalpy(view, m.state), relative_entropy(view, m.state)];
        let [h, s] = &relative;
        let error = mass.as_ref().ok().map(|mass| StateError::of(view, m.state, mass.value, [h, s]));
        let shares = [share(&mass, (ENERGY.figure)(view, m), h), share(&mass, (ENTROPY.figure)(view, m), s)];
        FlowShares { shares, error }
    }
}

/// The quantities of [`Shares`], in the order of their arrays.
#[derive(Clone, Copy)]
enum Quantity {
    Energy,
    Entropy,
}

/// One of them.
struct Column<'a> {
    shares: &'a Shares<'a>,
    quantity: Quantity,
}

impl Ledger for Column<'_> {
    fn flow(&self, f: FlowId) -> Result<Cow<'_, Share>, Blocked> {
        self.shares.flows[f].shares[self.quantity as usize].as_ref().map(Cow::Borrowed).map_err(Clone::clone)
    }

    fn formulation(&self, k: ComponentId) -> impl Iterator<Item = FormulationTerm> {
        self.shares.formulations[k].iter().map(|(slot, d)| (*slot, d[self.quantity as usize]))
    }
}

impl<'a> Shares<'a> {
    /// Finds what every flow carries.
    pub fn new(view: View<'a>) -> Shares<'a> {
        let process = &view.model.process;
        let flows: Vec<FlowShares> = (0..process.flows.len()).map(|f| FlowShares::of(view, f)).collect();
        let of_content = |state, mass| {
            let (h, s) = (relative_enthalpy(view, state), relative_entropy(view, state));
            StateError::of(view, state, mass, [&h, &s])
        };
        let formulations = (0..process.components.len())
            .map(|k| formulation_terms(view, k, |f| flows[f].error, of_content))
            .collect();
        Shares { view, flows, formulations }
    }

    /// See [`super::region::energy`].
    ///
    /// # Errors
    /// The first thing that blocks it.
    pub fn energy(&self, region: &Region) -> Result<Balance, Blocked> {
        sum_energy(self.view, region, &Column { shares: self, quantity: Quantity::Energy })
    }

    /// See [`super::region::entropy`].
    ///
    /// # Errors
    /// The first thing that blocks it.
    pub fn entropy(&self, region: &Region, bracket: Bracket) -> Result<Balance, Blocked> {
        sum_entropy(self.view, region, bracket, &Column { shares: self, quantity: Quantity::Entropy })
    }
}

/// The slot of the relative error that all states of a fluid in a component share.
pub(super) fn formulation_slot(view: View<'_>, k: ComponentId, fluid: FluidId) -> Option<Slot> {
    view.model.formulation.get(&(k, fluid)).map(|&source| view.model.source_slot(source))
}

/// What one relative error of its formulation adds to what an amount at a state carries.
#[derive(Clone, Copy)]
struct StateError<const N: usize> {
    fluid: FluidId,
    /// By quantity: amount times what the error is relative to, and its standard uncertainty. Both are
    /// zero for a quantity that is not known there: an enthalpy may be given, or solved for, where the
    /// entropy cannot be had.
    parts: [(f64, f64); N],
}

impl<const N: usize> StateError<N> {
    fn of(view: View<'_>, state: StateId, mass: f64, relative: [&Result<f64, Blocked>; N]) -> StateError<N> {
        StateError {
            fluid: view.model.process.states[state].fluid,
            parts: relative.map(|figure| match figure {
                Ok(figure) => (mass * figure, formulation_uncertainty(view, state)),
                Err(_) => (0.0, 0.0),
            }),
        }
    }
}

/// What the property formulations leave uncertain at the flows and contents of a component. The
/// terms of a union are those of its members, so that balances stay additive in every respect.
///
/// One relative error is common to all states of a fluid in a component, the largest of theirs, so
/// that it cancels for equal states.
fn formulation_terms<const N: usize>(
    view: View<'_>,
    k: ComponentId,
    of_flow: impl Fn(FlowId) -> Option<StateError<N>>,
    of_content: impl Fn(StateId, f64) -> StateError<N>,
) -> FormulationTerms<N> {
    let component = &view.model.process.components[k];
    let mut sums: SmallVec<[StateError<N>; 4]> = SmallVec::new();
    let mut add = |sign: f64, error: StateError<N>| match sums.iter_mut().find(|sum| sum.fluid == error.fluid)
    {
        Some(sum) => {
            for (sum, (figure, u)) in sum.parts.iter_mut().zip(error.parts) {
                *sum = (sum.0 + sign * figure, sum.1.max(u));
            }
        }
        None => sums.push(StateError { parts: error.parts.map(|(figure, u)| (sign * figure, u)), ..error }),
    };
    for (flows, sign) in [(&component.inlets, 1.0), (&component.outlets, -1.0)] {
        flows.iter().filter_map(|&f| of_flow(f)).for_each(|error| add(sign, error));
    }
    if let Some(holdup) = &component.holdup {
        for (contents, sign) in [(&holdup.initial, 1.0), (&holdup.r#final, -1.0)] {
            for c in contents {
                if let Ok(mass) = view.mass_value(c.state, c.amount, c.form) {
                    add(sign, of_content(c.state, mass));
                }
            }
        }
    }
    let term = |sum: StateError<N>| {
        Some((formulation_slot(view, k, sum.fluid)?, sum.parts.map(|(figure, u)| figure * u)))
    };
    sums.into_iter().filter_map(term).collect()
}

/// h − h(298.15 K, 1 bar) of a state, J/kg: independent of the datum of the balances.
pub(super) fn relative_enthalpy(view: View<'_>, state: usize) -> Result<f64, Blocked> {
    let fluid = view.model.process.states[state].fluid;
    let h = view.property_value(state, Property::Enthalpy)?;
    Ok(h - view.model.scales[fluid].reference.0)
}

pub(super) fn relative_entropy(view: View<'_>, state: usize) -> Result<f64, Blocked> {
    let fluid = view.model.process.states[state].fluid;
    let s = view.property_value(state, Property::Entropy)?;
    Ok(s - view.model.scales[fluid].reference.1)
}

/// Relative standard uncertainty of the formulation at a state (zero where it cannot be had).
pub fn formulation_uncertainty(view: View<'_>, state: usize) -> f64 {
    view.state(state).map_or(0.0, |s| s.uncertainty)
}
