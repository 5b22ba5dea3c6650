//! What each component spends, what it is for, and what it throws away: fuel, product and loss in
//! exergy by its kind.
//!
//! Source of the definitions: Lazzaretto & Tsatsaronis, Energy 31 (2006) 1257; Bejan, Tsatsaronis &
//! Moran, Thermal Design and Optimization, 1996, ch. 3.
//!
//! Every exergy that crosses the boundary is entered once, with its sign, as fuel, product or
//! loss; therefore E_F − E_P − E_L = E_in − E_out, which is T0 σ and what open balances carry. The
//! thermal part of a stream is entered by itself, since it changes its sense at T0: what warms a
//! stream above T0 takes from it below.

use super::exergy::{Parts, Surroundings};
use super::passage::{compressed_side, enthalpy_rise, is_empty, is_fuel, mean_level};
use super::{Region, shares::formulation_uncertainty};
use crate::fluid::Property;
use crate::model::{Blocked, Dual, View};
use crate::process::kinds::{Kind, Purposeful};
use crate::process::{Boundary, Carried, Component, ComponentId, FlowId, FluidId, Process, Role, Side};

/// Fuel below this many of its standard uncertainties makes no efficiency.
const CLEAR_OF_ZERO: f64 = 5.0;

/// Fuel, product and loss of a component or the plant, W or J.
#[derive(Clone, Debug, Default)]
pub struct Account {
    /// Exergy spent.
    pub fuel: Dual,
    /// Exergy wanted.
    pub product: Dual,
    /// Exergy thrown away across the plant boundary.
    pub loss: Dual,
    /// Why there is no efficiency; `None` for what serves a purpose.
    pub reason: Option<&'static str>,
    /// Sum of magnitudes, the scale of rounding.
    pub throughput: f64,
    formulation: Vec<(FluidId, [f64; 3], f64)>,
    productive: bool,
}

/// Where an exergy is entered.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Entry {
    Fuel,
    Product,
    Loss,
}

impl Account {
    /// Product over fuel.
    ///
    /// # Errors
    /// Why there is none; `u_fuel` is the standard uncertainty of the fuel.
    pub fn efficiency(&self, u_fuel: f64) -> Result<Dual, &'static str> {
        if let Some(reason) = self.reason {
            return Err(reason);
        }
        if self.fuel.value <= CLEAR_OF_ZERO * u_fuel.max(1e-9 * self.throughput) {
            return Err("the fuel is not more than five standard uncertainties from zero");
        }
        if self.product.value <= 0.0 {
            return Err("the product is not positive: the component does not serve its purpose");
        }
        Ok(self.product.times(&self.fuel.reciprocal()))
    }

    /// Enters an exergy that crosses the boundary inwards (`sign` +1) or outwards (−1).
    pub(super) fn enter(&mut self, entry: Entry, sign: f64, exergy: &Dual) {
        self.throughput += exergy.value.abs();
        match entry {
            Entry::Fuel => self.fuel.add_scaled(sign, exergy),
            Entry::Product => {
                self.productive = true;
                self.product.add_scaled(-sign, exergy);
            }
            Entry::Loss => self.loss.add_scaled(-sign, exergy),
        }
    }

    /// Notes what the formulation of a fluid leaves uncertain in an entry: a relative error of
    /// enthalpy and entropy differences is one of the physical exergy, common to all states of the
    /// fluid in a component.
    fn note(&mut self, entry: Entry, sign: f64, fluid: FluidId, physical: f64, relative: f64) {
        let (at, signed) = match entry {
            Entry::Fuel => (0, sign * physical),
            Entry::Product => (1, -sign * physical),
            Entry::Loss => (2, -sign * physical),
        };
        let slot = match self.formulation.iter_mut().position(|f| f.0 == fluid) {
            Some(i) => &mut self.formulation[i],
            None => {
                self.formulation.push((fluid, [0.0; 3], 0.0));
                let last = self.formulation.len() - 1;
                &mut self.formulation[last]
            }
        };
        slot.1[at] += signed;
        slot.2 = slot.2.max(relative);
    }

    fn close(&mut self, view: View<'_>, k: ComponentId) {
        for (fluid, sums, relative) in std::mem::take(&mut self.formulation) {
            let Some(&source) = view.model.formulation.get(&(k, fluid)) else { continue };
            let slot = view.model.source_slot(source);
            for (form, sum) in [&mut self.fuel, &mut self.product, &mut self.loss].into_iter().zip(sums) {
                if sum != 0.0 {
                    form.terms.push((slot, sum * relative));
                }
            }
        }
        if self.reason.is_none() && !self.productive {
            self.reason = Some("at these temperatures nothing in it gains exergy");
        }
    }
}

/// A material flow at the boundary of a component.
struct Stream<'s> {
    fluid: FluidId,
    sign: f64,
    mass: Dual,
    parts: &'s Parts,
    /// At or above T0.
    warm: bool,
    relative: f64,
}

struct Book<'a, 's> {
    view: View<'a>,
    surroundings: &'s Surroundings,
    region: &'s Region,
    component: &'a Component,
    account: Account,
}

/// The account of one component.
///
/// # Errors
/// What blocks an exergy that it needs.
pub fn account(
    view: View<'_>,
    surroundings: &Surroundings,
    region: &Region,
    k: ComponentId,
) -> Result<Account, Blocked> {
    let component = &view.model.process.components[k];
    let mut book = Book { view, surroundings, region, component, account: Account::default() };
    if component.holdup.is_some() {
        book.account.reason = Some("its contents change: fuel and product are not defined for its kind");
        return Ok(book.account);
    }
    if component.purpose.is_some() {
        book.declared()?;
    } else {
        match component.kind.info().purpose {
            Purposeful::Compression => book.compression()?,
            Purposeful::Expansion => book.expansion()?,
            Purposeful::Exchange => book.exchange()?,
            Purposeful::Combustion => book.combustion()?,
            Purposeful::Firing => book.firing()?,
            Purposeful::Conversion => book.every(Entry::Fuel, Entry::Product)?,
            Purposeful::Mixing => book.joining(None)?,
            Purposeful::Ejection => book.ejection()?,
            Purposeful::Dividing => book.without("one state is divided: nothing is spent or gained")?,
            Purposeful::Dissipation if component.kind == Kind::Valve => book.throttling()?,
            Purposeful::Dissipation => {
                book.without("a component of this kind only dissipates: it serves the others")?;
            }
            Purposeful::Engine => book.engine()?,
            Purposeful::HeatMover => book.heat_mover()?,
            Purposeful::Chemistry => book.chemistry()?,
            Purposeful::ElectricHeating => book.exchange()?,
            Purposeful::Declared => {
                book.without("what this kind is for can only be declared: give its \"purpose\"")?;
            }
        }
    }
    book.account.close(view, k);
    Ok(book.account)
}

impl<'a, 's> Book<'a, 's> {
    fn process(&self) -> &'a Process {
        &self.view.model.process
    }

    fn stream(&self, f: FlowId, sign: f64) -> Result<Stream<'s>, Blocked> {
        let m = self.process().flows[f].material().ok_or(Blocked::Missing("material"))?;
        let t0 = self.process().environment.temperature;
        Ok(Stream {
            fluid: self.process().states[m.state].fluid,
            sign,
            mass: self.view.mass(f)?,
            parts: self.surroundings.flow_parts(self.view, f)?,
            // A figure of the kind that states its exergy need not state a temperature.
            warm: self.view.property(m.state, Property::Temperature).map_or(true, |t| t.value >= t0),
            relative: formulation_uncertainty(self.view, m.state),
        })
    }

    fn streams(&self, flows: &[FlowId], sign: f64) -> Result<Vec<Stream<'s>>, Blocked> {
        flows.iter().map(|&f| self.stream(f, sign)).collect()
    }

    /// The streams of a side, in and out.
    fn side(&self, side: &Side) -> Result<Vec<Stream<'s>>, Blocked> {
        let mut out = self.streams(&side.inlets, 1.0)?;
        out.extend(self.streams(&side.outlets, -1.0)?);
        Ok(out)
    }

    /// Enters a share of a stream: its thermal part and the rest.
    fn enter(&mut self, s: &Stream<'_>, share: f64, thermal: Entry, rest: Entry) -> Result<(), Blocked> {
        let fluid = s.fluid;
        if thermal == rest {
            let e = s.mass.times(&s.parts.total).scaled(share);
            self.account.enter(rest, s.sign, &e);
            let physical = share * s.mass.value * s.parts.physical.value;
            self.account.note(rest, s.sign, fluid, physical, s.relative);
            return Ok(());
        }
        let part = s.parts.thermal.as_ref();
        let part =
            part.ok_or(Blocked::Missing("the state at ambient temperature and the flow's own pressure"))?;
        let e = s.mass.times(part).scaled(share);
        let physical = share * s.mass.value * (s.parts.physical.value - part.value);
        self.account.note(thermal, s.sign, fluid, e.value, s.relative);
        self.account.note(rest, s.sign, fluid, physical, s.relative);
        self.account.enter(thermal, s.sign, &e);
        let other = s.mass.times(&s.parts.total.clone().minus(part)).scaled(share);
        self.account.enter(rest, s.sign, &other);
        Ok(())
    }

    fn enter_all(&mut self, streams: &[Stream<'_>], entry: Entry) -> Result<(), Blocked> {
        streams.iter().try_for_each(|s| self.enter(s, 1.0, entry, entry))
    }

    /// Flows that are not material, with their sign.
    fn transfers(&self) -> Vec<(FlowId, f64)> {
        let process = self.process();
        let crossings = self.region.crossings().map(|(f, _, sign)| (f, sign));
        crossings.filter(|&(f, _)| process.flows[f].material().is_none()).collect()
    }

    fn transfer(&self, f: FlowId, sign: f64) -> Result<Dual, Blocked> {
        self.surroundings.flow(self.view, f, self.region, sign)
    }

    /// Whether a flow that leaves is thrown away: it goes outside, and is not said to be wanted.
    fn is_lost(&self, f: FlowId) -> bool {
        let flow = &self.process().flows[f];
        flow.to.is_none() && flow.role != Some(Role::Product)
    }

    /// Enters work as given, and heat and radiation: what enters is spent, what leaves is lost or,
    /// inside the plant, given back. Where heat can be useful, it is wanted inside the plant, and
    /// outside where its temperature is named and it is not said to be lost.
    fn transfers_with(&mut self, work: Entry, useful_heat: bool) -> Result<(), Blocked> {
        for (f, sign) in self.transfers() {
            let e = self.transfer(f, sign)?;
            let flow = &self.process().flows[f];
            let named = !matches!(flow.carried, Carried::Heat(_, Boundary::Unknown));
            let entry = match flow.carried {
                Carried::Work(..) => work,
                _ if sign > 0.0 => Entry::Fuel,
                _ if flow.role == Some(Role::Product) => Entry::Product,
                _ if useful_heat && named && flow.role.is_none() => Entry::Product,
                _ if self.is_lost(f) => Entry::Loss,
                _ if useful_heat => Entry::Product,
                _ => Entry::Fuel,
            };
            self.account.enter(entry, sign, &e);
        }
        Ok(())
    }

    /// Everything that enters as one, everything that leaves as another; what is lost is lost.
    fn every(&mut self, entering: Entry, leaving: Entry) -> Result<(), Blocked> {
        for (f, _, sign) in self.region.crossings() {
            let flow = &self.process().flows[f];
            let lost = match flow.carried {
                Carried::Heat(..) | Carried::Radiation(..) => self.is_lost(f),
                Carried::Material(_) | Carried::Work(..) => flow.role == Some(Role::Loss),
            };
            let entry = if sign > 0.0 {
                entering
            } else if lost {
                Entry::Loss
            } else {
                leaving
            };
            if flow.material().is_some() {
                let s = self.stream(f, sign)?;
                self.enter(&s, 1.0, entry, entry)?;
            } else {
                let e = self.transfer(f, sign)?;
                self.account.enter(entry, sign, &e);
            }
        }
        Ok(())
    }

    /// No product: what is thrown away is lost, the rest is spent.
    fn without(&mut self, reason: &'static str) -> Result<(), Blocked> {
        self.account.reason = Some(reason);
        self.every(Entry::Fuel, Entry::Fuel)
    }

    /// The user's own lists. What is in neither is spent on the way in and lost on the way out.
    fn declared(&mut self) -> Result<(), Blocked> {
        let Some(purpose) = &self.component.purpose else { return Ok(()) };
        for (f, _, sign) in self.region.crossings() {
            let entry = if purpose.product.iter().any(|p| p.0 == f) {
                Entry::Product
            } else if sign > 0.0 || purpose.fuel.iter().any(|p| p.0 == f) {
                Entry::Fuel
            } else {
                Entry::Loss
            };
            if self.process().flows[f].material().is_some() {
                let s = self.stream(f, sign)?;
                self.enter(&s, 1.0, entry, entry)?;
            } else {
                let e = self.transfer(f, sign)?;
                self.account.enter(entry, sign, &e);
            }
        }
        Ok(())
    }

    /// P = E2 − E1, F = W; below T0 the thermal parts are spent instead.
    fn compression(&mut self) -> Result<(), Blocked> {
        let component = self.component;
        let main = compressed_side(self.view, component);
        for (i, side) in component.sides.iter().enumerate() {
            let streams = self.side(side)?;
            if Some(i) != main {
                // What a coolant gains is not what the machine is for.
                self.enter_all(&streams, Entry::Fuel)?;
                continue;
            }
            for s in &streams {
                self.enter(s, 1.0, if s.warm { Entry::Product } else { Entry::Fuel }, Entry::Product)?;
            }
        }
        self.transfers_with(Entry::Fuel, false)
    }

    /// P = W, F = E1 − ΣE2; below T0 the thermal parts are gained instead.
    fn expansion(&mut self) -> Result<(), Blocked> {
        let component = self.component;
        for side in &component.sides {
            if component.kind == Kind::Engine && side.pool {
                let streams = self.side(side)?;
                self.enter_all(&streams, Entry::Fuel)?;
            } else if component.kind == Kind::Engine {
                self.exchanging(side)?;
            } else {
                self.spending(side)?;
            }
        }
        self.transfers_with(Entry::Product, component.kind == Kind::Engine)
    }

    /// A side whose exergy is spent, but for what it gains by getting colder below T0.
    fn spending(&mut self, side: &Side) -> Result<(), Blocked> {
        for s in &self.side(side)? {
            self.enter(s, 1.0, if s.warm { Entry::Fuel } else { Entry::Product }, Entry::Fuel)?;
        }
        Ok(())
    }

    /// One side of an exchanger. A heated side gains above T0 and is spent below, a cooled side the
    /// other way round; pressure is spent, but by a side that is heated above T0 altogether.
    fn exchanging(&mut self, side: &Side) -> Result<(), Blocked> {
        let heated = self.is_heated(side)?;
        let streams = self.side(side)?;
        let above = streams.iter().all(|s| s.warm);
        let rest = if heated && above { Entry::Product } else { Entry::Fuel };
        for s in &streams {
            let thermal = if heated == s.warm { Entry::Product } else { Entry::Fuel };
            self.enter(s, 1.0, thermal, rest)?;
        }
        Ok(())
    }

    /// Whether a side takes up heat: its specific enthalpy rises.
    fn is_heated(&self, side: &Side) -> Result<bool, Blocked> {
        Ok(enthalpy_rise(self.view, side)? > 0.0)
    }

    /// Exchangers and electric heaters: P is what the sides gain, F what they lose.
    fn exchange(&mut self) -> Result<(), Blocked> {
        let component = self.component;
        let mut heated = false;
        for side in &component.sides {
            heated |= !is_empty(side) && self.is_heated(side)?;
            self.exchanging(side)?;
        }
        for (f, sign) in self.transfers() {
            let e = self.transfer(f, sign)?;
            let flow = &self.process().flows[f];
            let entry = match flow.carried {
                Carried::Work(..) => Entry::Fuel,
                // Heat is a side of its own; its exergy runs against it below T0.
                _ if sign > 0.0 => self.by_temperature(f, &e, Entry::Fuel, Entry::Product),
                _ => {
                    let wanted = flow.role == Some(Role::Product)
                        || flow.to.is_some()
                        || !heated && !flow.implied && flow.role.is_none();
                    let warm = if wanted { Entry::Product } else { Entry::Loss };
                    self.by_temperature(f, &e, warm, Entry::Fuel)
                }
            };
            self.account.enter(entry, sign, &e);
        }
        Ok(())
    }

    /// Chooses by whether heat crosses above or below T0, which shows in the sense of its exergy.
    fn by_temperature(&self, f: FlowId, exergy: &Dual, warm: Entry, cold: Entry) -> Entry {
        let heat = match self.process().flows[f].carried {
            Carried::Heat(q, _) | Carried::Radiation(q, _) => self.view.var(q).map_or(0.0, |q| q.value),
            _ => 0.0,
        };
        if exergy.value * heat < 0.0 { cold } else { warm }
    }

    /// P = E_gas − E_oxidant, F = E_fuel.
    fn combustion(&mut self) -> Result<(), Blocked> {
        let component = self.component;
        for side in &component.sides {
            for (flows, sign) in [(&side.inlets, 1.0), (&side.outlets, -1.0)] {
                for &f in flows {
                    let fuel = sign > 0.0 && side.pool && is_fuel(self.process(), component, f);
                    let entry = if fuel { Entry::Fuel } else { Entry::Product };
                    let s = self.stream(f, sign)?;
                    self.enter(&s, 1.0, entry, entry)?;
                }
            }
        }
        self.transfers_with(Entry::Fuel, true)
    }

    /// P = what the heated sides gain, F = fuel and air less flue gas and ash.
    fn firing(&mut self) -> Result<(), Blocked> {
        let component = self.component;
        for side in &component.sides {
            if side.pool {
                let streams = self.side(side)?;
                self.enter_all(&streams, Entry::Fuel)?;
            } else {
                self.exchanging(side)?;
            }
        }
        self.transfers_with(Entry::Fuel, true)
    }

    /// P = E2^T, F = the rest, where the outlet is colder than T0.
    fn throttling(&mut self) -> Result<(), Blocked> {
        let component = self.component;
        let mut cold = false;
        for side in &component.sides {
            cold |= self.side(side)?.iter().any(|s| !s.warm);
        }
        if !cold {
            return self.without("a throttle above ambient temperature only dissipates");
        }
        for side in &component.sides {
            self.spending(side)?;
        }
        self.transfers_with(Entry::Fuel, false)
    }

    /// Streams that meet: P = m2 (e3 − e2) of those that are heated, F = m1 (e1 − e3) of the
    /// others; `favoured` inlets gain instead, where that is what the component is for.
    fn joining(&mut self, favoured: Option<&[FlowId]>) -> Result<(), Blocked> {
        let component = self.component;
        let view = self.view;
        for side in &component.sides {
            let inlets = self.streams(&side.inlets, 1.0)?;
            // A vent is thrown away; what is left is what the inlets became.
            let vents = side.outlets.len() > 1;
            let (lost, kept): (Vec<FlowId>, Vec<FlowId>) = side
                .outlets
                .iter()
                .partition(|&&f| vents && self.process().flows[f].role == Some(Role::Loss));
            let lost = self.streams(&lost, -1.0)?;
            self.enter_all(&lost, Entry::Loss)?;
            let outlets = self.streams(&kept, -1.0)?;
            let total: f64 = inlets.iter().map(|s| s.mass.value).sum();
            let first = inlets.first().map(|s| s.fluid);
            let one_fluid = inlets.iter().chain(&outlets).all(|s| Some(s.fluid) == first);
            let above = inlets.iter().chain(&outlets).all(|s| s.warm);
            let end = mean_level(view, &kept, one_fluid)?;
            for (&f, s) in side.inlets.iter().zip(&inlets) {
                let (gains, rest_gains) = match favoured {
                    Some(list) => (list.contains(&f), list.contains(&f)),
                    None => {
                        let heated = mean_level(view, &[f], one_fluid)? < end;
                        (heated, heated && above && one_fluid)
                    }
                };
                let share = if total == 0.0 { 0.0 } else { s.mass.value / total };
                let rest = if rest_gains { Entry::Product } else { Entry::Fuel };
                let thermal = |warm: bool| {
                    if favoured.is_some() {
                        rest
                    } else if gains == warm {
                        Entry::Product
                    } else {
                        Entry::Fuel
                    }
                };
                self.enter(s, 1.0, thermal(s.warm), rest)?;
                for o in &outlets {
                    self.enter(o, share, thermal(o.warm), rest)?;
                }
            }
        }
        self.transfers_with(Entry::Fuel, false)
    }

    /// P = m_s (e_out − e_s), F = m_m (e_m − e_out).
    fn ejection(&mut self) -> Result<(), Blocked> {
        let component = self.component;
        let named = |role: &str| -> Vec<FlowId> {
            component.ports.iter().filter(|p| p.0 == role).map(|p| p.1).collect()
        };
        let (suction, motive) = (named("suction"), named("motive"));
        if !suction.is_empty() {
            return self.joining(Some(&suction));
        }
        let inlets: Vec<FlowId> = component.sides.iter().flat_map(|s| s.inlets.iter().copied()).collect();
        if !motive.is_empty() {
            let others: Vec<FlowId> = inlets.into_iter().filter(|f| !motive.contains(f)).collect();
            return self.joining(Some(&others));
        }
        // The stream of the highest pressure is the motive one.
        let pressure = |f: FlowId| {
            let state = self.process().flows[f].material().map(|m| m.state)?;
            self.view.property(state, Property::Pressure).ok().map(|p| p.value)
        };
        let motive = inlets
            .iter()
            .copied()
            .max_by(|&a, &b| pressure(a).unwrap_or_default().total_cmp(&pressure(b).unwrap_or_default()));
        let suction: Vec<FlowId> = inlets.into_iter().filter(|&f| Some(f) != motive).collect();
        self.joining(Some(&suction))
    }

    /// P = net work, F = what heat and streams give.
    fn engine(&mut self) -> Result<(), Blocked> {
        let component = self.component;
        for side in &component.sides {
            let streams = self.side(side)?;
            self.enter_all(&streams, Entry::Fuel)?;
        }
        for (f, sign) in self.transfers() {
            let e = self.transfer(f, sign)?;
            let flow = &self.process().flows[f];
            let entry = match flow.carried {
                Carried::Work(..) => Entry::Product,
                _ if sign > 0.0 => Entry::Fuel,
                _ if flow.role == Some(Role::Product) => Entry::Product,
                // Heat given to something colder than T0 spends that something's exergy.
                _ if self.is_lost(f) => self.by_temperature(f, &e, Entry::Loss, Entry::Fuel),
                _ => Entry::Fuel,
            };
            self.account.enter(entry, sign, &e);
        }
        Ok(())
    }

    /// P = exergy of the useful heat, F = drive and source.
    fn heat_mover(&mut self) -> Result<(), Blocked> {
        let component = self.component;
        let port = |name: &str| component.ports.iter().find(|p| p.0 == name).map(|p| p.1);
        let heats = component.kind == Kind::HeatPump;
        for side in &component.sides {
            let streams = self.side(side)?;
            if is_empty(side) {
                continue;
            }
            let driving = port("driving").is_some_and(|f| side.inlets.contains(&f));
            if !driving && self.is_heated(side)? == heats {
                self.exchanging(side)?;
            } else {
                self.enter_all(&streams, Entry::Fuel)?;
            }
        }
        for (f, sign) in self.transfers() {
            let e = self.transfer(f, sign)?;
            let flow = &self.process().flows[f];
            let driving = port("driving") == Some(f);
            let entry = match flow.carried {
                Carried::Work(..) => Entry::Fuel,
                _ if sign > 0.0 && (heats || driving) => Entry::Fuel,
                _ if sign > 0.0 => self.by_temperature(f, &e, Entry::Fuel, Entry::Product),
                _ if component.ports.contains(&("rejected", f)) => {
                    self.by_temperature(f, &e, Entry::Loss, Entry::Fuel)
                }
                _ if flow.role == Some(Role::Product) => Entry::Product,
                _ if heats && !flow.implied && flow.role.is_none() => {
                    self.by_temperature(f, &e, Entry::Product, Entry::Fuel)
                }
                _ if self.is_lost(f) => self.by_temperature(f, &e, Entry::Loss, Entry::Fuel),
                _ => Entry::Fuel,
            };
            self.account.enter(entry, sign, &e);
        }
        Ok(())
    }

    /// Reactors, separations, electrolysers and fuel cells.
    fn chemistry(&mut self) -> Result<(), Blocked> {
        let component = self.component;
        match component.kind {
            Kind::FuelCell => {
                for side in &component.sides {
                    let streams = self.side(side)?;
                    self.enter_all(&streams, Entry::Fuel)?;
                }
                return self.transfers_with(Entry::Product, true);
            }
            Kind::Electrolyser => {
                for side in &component.sides {
                    let streams = self.side(side)?;
                    self.enter_all(&streams, Entry::Product)?;
                }
                return self.transfers_with(Entry::Fuel, false);
            }
            _ => {}
        }
        let mut streams = Vec::new();
        for side in &component.sides {
            streams.extend(self.side(side)?);
        }
        let missing = Blocked::Missing("the chemical exergy of a stream");
        let mut gain = 0.0;
        for s in &streams {
            gain -= s.sign * s.mass.value * s.parts.chemical.ok_or(missing.clone())?;
        }
        // What is made or separated is the purpose; where chemical exergy falls, the heat is.
        let (chemical, physical) =
            if gain > 0.0 { (Entry::Product, Entry::Fuel) } else { (Entry::Fuel, Entry::Product) };
        for s in &streams {
            let e = s.mass.clone().scaled(s.parts.chemical.unwrap_or_default());
            self.account.enter(chemical, s.sign, &e);
            let rest = s.mass.times(&s.parts.total).minus(&e);
            self.account.enter(physical, s.sign, &rest);
            let warmth = s.mass.value * s.parts.physical.value;
            self.account.note(physical, s.sign, s.fluid, warmth, s.relative);
        }
        let work = if gain > 0.0 { Entry::Fuel } else { Entry::Product };
        self.transfers_with(work, gain <= 0.0)
    }
}
