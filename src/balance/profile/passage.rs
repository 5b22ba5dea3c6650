//! One stream on its way through an exchanger: temperature and entropy over its own share of duty.

use crate::fluid::{Engine, Pair, Phase, Property, State, Substance, state::PROPERTIES};
use crate::model::{Blocked, Dual, View};
use crate::process::{FlowId, FluidId};

/// What is said where the interior cannot be computed though the ends can.
pub(super) const BEYOND: Blocked =
    Blocked::Missing("a property formulation that covers every state inside the exchanger");

/// A place at which the temperature has a kink: saturated liquid or saturated vapour.
#[derive(Clone, Debug)]
pub(super) struct Kink {
    /// Share of the stream's duty passed from its inlet, 0 to 1, exclusive.
    pub y: f64,
    /// The saturated state there.
    saturated: State,
}

impl Kink {
    /// Its temperature, K.
    pub fn temperature(&self) -> f64 {
        self.saturated.temperature
    }
}

#[derive(Clone, Debug)]
struct End {
    t: Dual,
    p: Dual,
    h: Dual,
    s: Dual,
}

#[derive(Clone, Debug)]
enum Way {
    Material {
        fluid: FluidId,
        composition: Dual,
        mass: Dual,
        inlet: Box<End>,
        outlet: Box<End>,
        phases: [Phase; 2],
        qualities: [Option<f64>; 2],
    },
    /// A body at the boundary between two temperatures (equal for a reservoir).
    Body { inlet: Dual, outlet: Dual },
}

/// A stream, or a body at the boundary that takes the part of one.
#[derive(Clone, Debug)]
pub(super) struct Passage {
    /// Heat given off (hot) or taken in (cold), positive, W or J.
    pub duty: Dual,
    pub hot: bool,
    pub kinks: Vec<Kink>,
    way: Way,
}

impl Passage {
    /// A stream from an inlet to an outlet; `None` where it exchanges no heat.
    ///
    /// # Errors
    /// What blocks its states, or a composition that changes on the way.
    pub fn material(
        view: View<'_>,
        amount: FlowId,
        inlet: FlowId,
        outlet: FlowId,
    ) -> Result<Option<Passage>, Blocked> {
        let process = &view.model.process;
        let state = |f: FlowId| {
            process.flows[f].material().map(|m| m.state).ok_or(Blocked::Missing("material on every side"))
        };
        let (mut first, mut last) = (state(inlet)?, state(outlet)?);
        let fluid = process.states[first].fluid;
        let changes =
            Blocked::Missing("the way along which a mixture that changes composition gives off heat");
        if process.states[last].fluid != fluid {
            return Err(changes);
        }
        let mut composition = Dual::default();
        if process.states[first].c.is_some() {
            composition = view.composition(first)?;
            let after = view.composition(last)?.value;
            if (composition.value - after).abs() > 1e-6 * (composition.value.abs() + 1e-6) {
                return Err(changes);
            }
        }
        let mut mass = view.mass(amount)?;
        // A stream that runs against its declared direction is judged the way it runs.
        if mass.value < 0.0 {
            mass = mass.scaled(-1.0);
            (first, last) = (last, first);
        }
        let end = |s| -> Result<End, Blocked> {
            Ok(End {
                t: view.property(s, Property::Temperature)?,
                p: view.property(s, Property::Pressure)?,
                h: view.property(s, Property::Enthalpy)?,
                s: view.property(s, Property::Entropy)?,
            })
        };
        let (a, b) = (end(first)?, end(last)?);
        let given_off = mass.times(&a.h.clone().minus(&b.h));
        let scale = mass.value * (a.h.value.abs() + b.h.value.abs());
        if given_off.value.abs() <= 1e-9 * scale {
            return Ok(None);
        }
        let hot = given_off.value > 0.0;
        let ends = [&view.state(first)?.state, &view.state(last)?.state];
        let phases = ends.map(|s| s.phase);
        let qualities = ends.map(|s| s.quality);
        let mut out = Passage {
            duty: if hot { given_off } else { given_off.scaled(-1.0) },
            hot,
            kinks: Vec::new(),
            way: Way::Material {
                fluid,
                composition,
                mass,
                inlet: Box::new(a),
                outlet: Box::new(b),
                phases,
                qualities,
            },
        };
        // A stream that stays vapour or stays liquid crosses no saturation line.
        if phases[0] != phases[1] || phases[0] == Phase::TwoPhase {
            out.find_kinks(view);
        }
        Ok(Some(out))
    }

    /// A body at the boundary: `hot` where it gives heat. `None` where no heat passes.
    pub fn body(duty: Dual, hot: bool, a: Dual, b: Dual) -> Option<Passage> {
        if duty.value == 0.0 {
            return None;
        }
        let (duty, hot) = if duty.value < 0.0 { (duty.scaled(-1.0), !hot) } else { (duty, hot) };
        let (low, high) = if a.value <= b.value { (a, b) } else { (b, a) };
        let (inlet, outlet) = if hot { (high, low) } else { (low, high) };
        Some(Passage { duty, hot, kinks: Vec::new(), way: Way::Body { inlet, outlet } })
    }

    /// The same stream from the same inlet with its duty multiplied; `None` where it leaves the
    /// formulation.
    pub fn with_duty(&self, view: View<'_>, factor: &Dual) -> Option<Passage> {
        let duty = self.duty.times(factor);
        let way = match &self.way {
            Way::Body { inlet, outlet } => {
                let outlet = mix(inlet, outlet, factor);
                (outlet.value > 0.0).then_some(())?;
                Way::Body { inlet: inlet.clone(), outlet }
            }
            Way::Material { fluid, composition, mass, inlet, outlet, phases, qualities } => {
                let h = mix(&inlet.h, &outlet.h, factor);
                let p = outlet.p.clone();
                let engine = &view.model.process.fluids[*fluid].engine;
                let state = engine.state(Pair::PressureEnthalpy, p.value, h.value, composition.value).ok()?;
                let jacobian = state.jacobian(Pair::PressureEnthalpy)?;
                let follow = |property| follow(&state, &jacobian, property, &p, &h, composition);
                let (t, s) = (follow(Property::Temperature), follow(Property::Entropy));
                let end = End { t, s, p, h };
                Way::Material {
                    fluid: *fluid,
                    composition: composition.clone(),
                    mass: mass.clone(),
                    inlet: inlet.clone(),
                    outlet: Box::new(end),
                    phases: [phases[0], state.phase],
                    qualities: [qualities[0], state.quality],
                }
            }
        };
        let mut out = Passage { duty, hot: self.hot, kinks: Vec::new(), way };
        out.find_kinks(view);
        Some(out)
    }

    fn find_kinks(&mut self, view: View<'_>) {
        for quality in [0.0, 1.0] {
            self.kinks.extend(self.kink(view, quality));
        }
        self.kinks.sort_by(|a, b| a.y.total_cmp(&b.y));
    }

    /// The share of duty at which saturation is crossed, by Newton's method along the linear
    /// course of enthalpy and pressure.
    fn kink(&self, view: View<'_>, quality: f64) -> Option<Kink> {
        let Way::Material { fluid, inlet, outlet, qualities, .. } = &self.way else { return None };
        // A stream that begins or ends just saturated has its kink there, not on the way, unless the
        // saturation line itself moves.
        if qualities.contains(&Some(quality)) && self.is_isobaric() {
            return None;
        }
        let engine = &*view.model.process.fluids[*fluid].engine;
        let (dp, dh) = (outlet.p.value - inlet.p.value, outlet.h.value - inlet.h.value);
        let mut y = 0.5;
        let mut found = saturation(engine, inlet.p.value + y * dp, quality)?;
        for _ in 0..30 {
            let error = inlet.h.value + y * dh - found.enthalpy;
            let slope = dh - along(&found, Property::Enthalpy)? * dp;
            let step = error / slope;
            if !step.is_finite() {
                return None;
            }
            let next = y - step;
            // Off the way by far: the saturation line is not crossed.
            if !(-2.0..=3.0).contains(&next) {
                return None;
            }
            y = next;
            if dp == 0.0 {
                break;
            }
            found = saturation(engine, inlet.p.value + y * dp, quality)?;
            if step.abs() < 1e-13 {
                break;
            }
        }
        (1e-12..=1.0 - 1e-12).contains(&y).then_some(Kink { y, saturated: found })
    }

    /// Temperature at a share `y` of the way, K.
    ///
    /// # Errors
    /// A state outside the formulation's range.
    pub fn at(&self, view: View<'_>, y: f64) -> Result<f64, Blocked> {
        match &self.way {
            Way::Body { inlet, outlet } => Ok(inlet.value + y * (outlet.value - inlet.value)),
            Way::Material { inlet, .. } if y <= 0.0 => Ok(inlet.t.value),
            Way::Material { outlet, .. } if y >= 1.0 => Ok(outlet.t.value),
            Way::Material { .. } => Ok(self.state(view, y)?.temperature),
        }
    }

    fn is_isobaric(&self) -> bool {
        match &self.way {
            Way::Material { inlet, outlet, .. } => inlet.p.value == outlet.p.value,
            Way::Body { .. } => true,
        }
    }

    /// Whether the temperature surely rises all along between two nodes, or falls: at constant pressure,
    /// and where it depends on the enthalpy alone. A pressure drop can bend any other.
    pub fn runs_one_way(&self, view: View<'_>) -> bool {
        let ideal = || {
            let substance = self.fluid().map(|fluid| &view.model.process.fluids[fluid].substance);
            matches!(substance, Some(Substance::Gas(_) | Substance::CombustionGas(_)))
        };
        self.is_isobaric() || ideal()
    }

    fn sign(&self) -> f64 {
        if self.hot { -1.0 } else { 1.0 }
    }

    fn state(&self, view: View<'_>, y: f64) -> Result<State, Blocked> {
        let Way::Material { fluid, composition, inlet, outlet, .. } = &self.way else { return Err(BEYOND) };
        let p = inlet.p.value + y * (outlet.p.value - inlet.p.value);
        let h = inlet.h.value + y * (outlet.h.value - inlet.h.value);
        let engine = &view.model.process.fluids[*fluid].engine;
        engine.state(Pair::PressureEnthalpy, p, h, composition.value).map_err(|_| BEYOND)
    }

    /// ∫ dq/T of a body from its inlet to a share `y`, with its gradient.
    fn body_entropy(&self, y: f64) -> Dual {
        let Way::Body { inlet, outlet } = &self.way else { return Dual::default() };
        let mut here = inlet.clone().scaled(1.0 - y);
        here.add_scaled(y, outlet);
        let mean = crate::model::dual::log_mean(inlet, &here);
        self.duty.clone().scaled(y).times(&mean.reciprocal())
    }

    /// The phase at a share `y` of a stream's way.
    pub fn phase(&self, view: View<'_>, y: f64) -> Option<Phase> {
        match &self.way {
            Way::Body { .. } => None,
            Way::Material { phases, .. } if y <= 0.0 => Some(phases[0]),
            Way::Material { .. } => self.state(view, y.min(1.0 - 1e-9)).ok().map(|s| s.phase),
        }
    }

    /// The fluid of a stream.
    pub fn fluid(&self) -> Option<FluidId> {
        match &self.way {
            Way::Material { fluid, .. } => Some(*fluid),
            Way::Body { .. } => None,
        }
    }

    /// Whether an end lies above the critical point, so that the heat capacity may have a sharp
    /// peak on the way.
    pub fn is_supercritical(&self) -> bool {
        let Way::Material { phases, .. } = &self.way else { return false };
        phases.contains(&Phase::Supercritical)
    }

    /// Temperature (K) with its gradient at a share `y` that itself depends on the inputs.
    ///
    /// # Errors
    /// A state outside the formulation's range.
    pub fn temperature_at(&self, view: View<'_>, y: &Dual) -> Result<Dual, Blocked> {
        match &self.way {
            Way::Body { inlet, outlet } => Ok(inlet.clone().plus(&y.times(&outlet.clone().minus(inlet)))),
            Way::Material { .. } => self.property_at(view, y, Property::Temperature, |end| &end.t),
        }
    }

    /// What the whole stream carries of entropy (W/K or J/K, on a datum of its own) at a share `y`
    /// that is fixed, with its gradient.
    ///
    /// # Errors
    /// A state outside the formulation's range.
    pub fn entropy_at(&self, view: View<'_>, y: f64) -> Result<Dual, Blocked> {
        match &self.way {
            Way::Body { .. } => Ok(self.body_entropy(y).scaled(self.sign())),
            Way::Material { mass, .. } => {
                let s = self.property_at(view, &Dual::constant(y), Property::Entropy, |end| &end.s)?;
                Ok(mass.times(&s))
            }
        }
    }

    /// A property of a material stream at a share `y` of its way; `end` has it at the ends.
    fn property_at(
        &self,
        view: View<'_>,
        y: &Dual,
        property: Property,
        end: fn(&End) -> &Dual,
    ) -> Result<Dual, Blocked> {
        let Way::Material { inlet, outlet, composition, .. } = &self.way else { return Err(BEYOND) };
        if y.terms.is_empty() && (y.value <= 0.0 || y.value >= 1.0) {
            return Ok(end(if y.value <= 0.0 { inlet } else { outlet }).clone());
        }
        let p = mix(&inlet.p, &outlet.p, y);
        let h = mix(&inlet.h, &outlet.h, y);
        let state = self.state(view, y.value)?;
        let jacobian = state.jacobian(Pair::PressureEnthalpy).ok_or(BEYOND)?;
        Ok(follow(&state, &jacobian, property, &p, &h, composition))
    }

    /// Where a kink lies and its temperature, with gradients.
    ///
    /// # Errors
    /// A state outside the formulation's range.
    pub fn dual_kink(&self, kink: &Kink) -> Result<(Dual, Dual), Blocked> {
        let Way::Material { inlet, outlet, .. } = &self.way else { return Err(BEYOND) };
        let (dp, dh) = (outlet.p.value - inlet.p.value, outlet.h.value - inlet.h.value);
        let here = Dual::constant(kink.y);
        let p = mix(&inlet.p, &outlet.p, &here);
        let saturated = &kink.saturated;
        let rise = along(saturated, Property::Enthalpy).ok_or(BEYOND)?;
        // h(y) = h_sat(p(y)) fixes y.
        let error = mix(&inlet.h, &outlet.h, &here).minus(&p.map(saturated.enthalpy, rise));
        let y = error.map(kink.y, -1.0 / (dh - rise * dp));
        let slope = along(saturated, Property::Temperature).ok_or(BEYOND)?;
        let t = mix(&inlet.p, &outlet.p, &y).map(saturated.temperature, slope);
        Ok((y, t))
    }

    /// dT/dy at a share of the way, K.
    ///
    /// # Errors
    /// A state outside the formulation's range.
    pub fn slope(&self, view: View<'_>, y: f64) -> Result<f64, Blocked> {
        match &self.way {
            Way::Body { inlet, outlet } => Ok(outlet.value - inlet.value),
            Way::Material { inlet, outlet, .. } => {
                let inside = y.clamp(1e-9, 1.0 - 1e-9);
                let jacobian = self.state(view, inside)?.jacobian(Pair::PressureEnthalpy).ok_or(BEYOND)?;
                let row = jacobian[Property::Temperature as usize];
                Ok(row[0] * (outlet.p.value - inlet.p.value) + row[1] * (outlet.h.value - inlet.h.value))
            }
        }
    }
}

/// A property by its derivatives with respect to pressure, enthalpy and composition.
fn follow(
    state: &State,
    jacobian: &[[f64; 3]; PROPERTIES],
    property: Property,
    p: &Dual,
    h: &Dual,
    composition: &Dual,
) -> Dual {
    let row = jacobian[property as usize];
    let mut out = p.map(state.get(property), row[0]);
    out.follow(row[1], h);
    if row[2] != 0.0 {
        out.follow(row[2], composition);
    }
    out
}

/// (1 − y) a + y b.
fn mix(a: &Dual, b: &Dual, y: &Dual) -> Dual {
    let mut out = a.clone().scaled(1.0 - y.value);
    out.add_scaled(y.value, b);
    let span = b.value - a.value;
    out.follow(span, y);
    out
}

fn saturation(engine: &dyn Engine, p: f64, quality: f64) -> Option<State> {
    engine.state(Pair::PressureQuality, p, quality, 0.0).ok()
}

/// Derivative along a saturation line with respect to pressure.
fn along(state: &State, property: Property) -> Option<f64> {
    Some(state.jacobian(Pair::PressureQuality)?[property as usize][0])
}
