//! Values under evaluation: variables, and states computed on demand.

use super::{Dual, Model, Scale, Slot};
use crate::fluid::{CompositionForm, Datum, Pair, Property, PropertyError, State, state::PROPERTIES};
use crate::process::{AmountForm, FlowId, Inputs, SourceId, StateForm, StateId, Var, VarId};
use std::cell::OnceCell;

/// Why a figure cannot be had.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Blocked {
    /// A variable is unknown and could not be solved for.
    Unknown(VarId),
    /// A state could not be computed.
    State(StateId),
    /// Something else is missing.
    Missing(&'static str),
}

/// A state with its derivatives over its own variables.
#[derive(Clone, Debug)]
pub struct StateValue {
    /// The state on the engine's datum.
    pub state: State,
    /// Derivatives of each property with respect to the variables a, b and c of its description.
    pub jacobian: [[f64; 3]; PROPERTIES],
    /// The engine's composition coordinate.
    pub composition: f64,
    /// Its derivatives with respect to the variables a, b and c.
    pub composition_gradient: [f64; 3],
    /// Relative standard uncertainty of the formulation here.
    pub uncertainty: f64,
}

/// Reusable room for one evaluation.
#[derive(Debug, Default)]
pub struct Workspace {
    sources: Vec<f64>,
    vars: Vec<f64>,
    known: Vec<bool>,
    states: Vec<OnceCell<Result<StateValue, PropertyError>>>,
}

impl Workspace {
    /// Takes new inputs: given variables get their values, unknown ones are forgotten.
    pub fn bind(&mut self, model: &Model, inputs: &Inputs) {
        let process = &model.process;
        self.sources.clone_from(&inputs.values);
        self.vars.clear();
        self.known.clear();
        for var in &process.vars {
            match var {
                Var::Given(affine) => {
                    self.vars.push(affine.value(inputs));
                    self.known.push(true);
                }
                Var::Unknown { .. } => {
                    self.vars.push(0.0);
                    self.known.push(false);
                }
            }
        }
        self.states.resize_with(process.states.len(), OnceCell::new);
        for cell in &mut self.states {
            cell.take();
        }
    }

    /// Sets a variable and forgets the states that depend on it.
    pub fn set(&mut self, model: &Model, var: VarId, value: f64) {
        self.vars[var] = value;
        self.known[var] = true;
        for &s in &model.dependents[var] {
            self.states[s].take();
        }
    }

    /// Declares a variable unknown again.
    pub fn forget(&mut self, model: &Model, var: VarId) {
        self.known[var] = false;
        for &s in &model.dependents[var] {
            self.states[s].take();
        }
    }

    /// The value of a source, as bound.
    pub fn source(&self, source: SourceId) -> f64 {
        self.sources.get(source).copied().unwrap_or(0.0)
    }

    /// Whether a variable has a value.
    pub fn is_known(&self, var: VarId) -> bool {
        self.known[var]
    }

    /// The value of a variable, meaningful only if it is known.
    pub fn value(&self, var: VarId) -> f64 {
        self.vars[var]
    }

    /// A variable with its gradient.
    ///
    /// # Errors
    /// `Blocked::Unknown` if it has no value.
    pub fn var(&self, var: VarId) -> Result<Dual, Blocked> {
        self.known(var).map(|value| Dual::slot(var as Slot, value))
    }

    /// The value of a variable.
    ///
    /// # Errors
    /// `Blocked::Unknown` if it has none.
    pub fn known(&self, var: VarId) -> Result<f64, Blocked> {
        if self.known[var] { Ok(self.vars[var]) } else { Err(Blocked::Unknown(var)) }
    }

    /// A state.
    ///
    /// # Errors
    /// `Blocked` with the unknown variable, or with the state whose property engine refused.
    pub fn state(&self, model: &Model, id: StateId) -> Result<&StateValue, Blocked> {
        // What is in the cell was computed from figures that are still known: forgetting one empties it.
        if self.states[id].get().is_none() {
            let spec = &model.process.states[id];
            if let Some(unknown) = spec.vars().find(|&v| !self.known[v]) {
                return Err(Blocked::Unknown(unknown));
            }
        }
        self.states[id].get_or_init(|| self.compute(model, id)).as_ref().map_err(|_| Blocked::State(id))
    }

    /// Why a state could not be computed.
    pub fn state_error(&self, id: StateId) -> Option<&PropertyError> {
        self.states[id].get().and_then(|r| r.as_ref().err())
    }

    fn compute(&self, model: &Model, id: StateId) -> Result<StateValue, PropertyError> {
        let spec = &model.process.states[id];
        let engine = &*model.process.fluids[spec.fluid].engine;
        let (a, b) = (self.vars[spec.a], self.vars[spec.b]);
        if let Some((form, var)) = spec.c {
            let figure = self.vars[var];
            if form == CompositionForm::Direct {
                let StateForm::Pair(pair) = spec.form else {
                    return Err(PropertyError::NoSaturation);
                };
                let state = engine.state(pair, a, b, figure)?;
                let jacobian = state.jacobian(pair).ok_or(PropertyError::UnsupportedPair(pair))?;
                return Ok(StateValue {
                    uncertainty: engine.relative_uncertainty(&state),
                    state,
                    jacobian,
                    composition: figure,
                    composition_gradient: [0.0, 0.0, 1.0],
                });
            }
            let pair = Pair::PressureTemperature;
            if spec.form != StateForm::Pair(pair) {
                return Err(PropertyError::Unstated("pressure and temperature beside the humidity"));
            }
            let (composition, gradient) = engine.composition(form, a, b, figure)?;
            let state = engine.state(pair, a, b, composition)?;
            let mut jacobian = state.jacobian(pair).ok_or(PropertyError::UnsupportedPair(pair))?;
            for row in &mut jacobian {
                let along = row[2];
                row[0] += along * gradient[0];
                row[1] += along * gradient[1];
                row[2] = along * gradient[2];
            }
            return Ok(StateValue {
                uncertainty: engine.relative_uncertainty(&state),
                state,
                jacobian,
                composition,
                composition_gradient: gradient,
            });
        }
        let (state, jacobian) = match spec.form {
            StateForm::Pair(pair) => {
                let state = engine.state(pair, a, b, 0.0)?;
                let jacobian = state.jacobian(pair).ok_or(PropertyError::UnsupportedPair(pair))?;
                (state, jacobian)
            }
            StateForm::PressureSuperheat => offset_from_saturation(engine, a, b, 1.0)?,
            StateForm::PressureSubcooling => offset_from_saturation(engine, a, -b, 0.0)?,
            StateForm::TemperatureSuperheat => offset_at_temperature(engine, a, b, 1.0)?,
            StateForm::TemperatureSubcooling => offset_at_temperature(engine, a, -b, 0.0)?,
        };
        Ok(StateValue {
            uncertainty: engine.relative_uncertainty(&state),
            state,
            jacobian,
            composition: 0.0,
            composition_gradient: [0.0; 3],
        })
    }
}

type StateAndJacobian = (State, [[f64; 3]; PROPERTIES]);

/// The state `offset` kelvins above saturation at pressure `p`; the second column is the
/// derivative with respect to the magnitude of the offset.
fn offset_from_saturation(
    engine: &dyn crate::fluid::Engine,
    p: f64,
    offset: f64,
    quality: f64,
) -> Result<StateAndJacobian, PropertyError> {
    let (saturation, slope) = engine.saturation_temperature(p, quality)?;
    let sign = if quality > 0.5 { 1.0 } else { -1.0 };
    if offset == 0.0 {
        let state = engine.state(Pair::PressureQuality, p, quality, 0.0)?;
        let mut jacobian = state
            .jacobian(Pair::PressureQuality)
            .ok_or(PropertyError::UnsupportedPair(Pair::PressureQuality))?;
        for row in &mut jacobian {
            row[1] = 0.0;
        }
        return Ok((state, jacobian));
    }
    let pair = Pair::PressureTemperature;
    let state = engine.state(pair, p, saturation + offset, 0.0)?;
    let mut jacobian = state.jacobian(pair).ok_or(PropertyError::UnsupportedPair(pair))?;
    for row in &mut jacobian {
        row[0] += row[1] * slope;
        row[1] *= sign;
    }
    Ok((state, jacobian))
}

/// The state at temperature `t` whose pressure is the saturation pressure at `t − offset`.
fn offset_at_temperature(
    engine: &dyn crate::fluid::Engine,
    t: f64,
    offset: f64,
    quality: f64,
) -> Result<StateAndJacobian, PropertyError> {
    let sign = if quality > 0.5 { 1.0 } else { -1.0 };
    let saturated = engine.state(Pair::TemperatureQuality, t - offset, quality, 0.0)?;
    let slope = saturated
        .jacobian(Pair::TemperatureQuality)
        .map(|j| j[Property::Pressure as usize][0])
        .ok_or(PropertyError::NoSaturation)?;
    if offset == 0.0 {
        let mut jacobian = saturated.jacobian(Pair::TemperatureQuality).ok_or(PropertyError::NoSaturation)?;
        for row in &mut jacobian {
            row[1] = 0.0;
        }
        return Ok((saturated, jacobian));
    }
    let pair = Pair::PressureTemperature;
    let state = engine.state(pair, saturated.pressure, t, 0.0)?;
    let by_pt = state.jacobian(pair).ok_or(PropertyError::UnsupportedPair(pair))?;
    let mut jacobian = by_pt;
    for (row, pt) in jacobian.iter_mut().zip(&by_pt) {
        row[0] = pt[1] + pt[0] * slope;
        row[1] = -pt[0] * slope * sign;
    }
    Ok((state, jacobian))
}

/// A model and a workspace together: everything that a balance or a rule can ask.
#[derive(Clone, Copy, Debug)]
pub struct View<'a> {
    /// Structure.
    pub model: &'a Model,
    /// Values.
    pub workspace: &'a Workspace,
}

impl<'a> View<'a> {
    /// See [`Workspace::var`].
    ///
    /// # Errors
    /// `Blocked::Unknown`.
    pub fn var(&self, var: VarId) -> Result<Dual, Blocked> {
        self.workspace.var(var)
    }

    /// See [`Workspace::state`].
    ///
    /// # Errors
    /// `Blocked`.
    pub fn state(&self, id: StateId) -> Result<&'a StateValue, Blocked> {
        self.workspace.state(self.model, id)
    }

    fn dual(&self, id: StateId, value: f64, gradient: &[f64; 3]) -> Dual {
        let spec = &self.model.process.states[id];
        let mut out = Dual::constant(value);
        if gradient[0] != 0.0 {
            out.terms.push((spec.a as Slot, gradient[0]));
        }
        if gradient[1] != 0.0 {
            out.terms.push((spec.b as Slot, gradient[1]));
        }
        if let Some((_, c)) = spec.c
            && gradient[2] != 0.0
        {
            out.terms.push((c as Slot, gradient[2]));
        }
        out
    }

    /// A property of a state on the engine's datum. A property that is itself a coordinate needs
    /// no state: an energy balance is linear in an unknown enthalpy.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn property(&self, id: StateId, property: Property) -> Result<Dual, Blocked> {
        if let Some(v) = self.coordinate(id, property) {
            return self.var(v);
        }
        let s = self.state(id)?;
        Ok(self.dual(id, s.state.get(property), &s.jacobian[property as usize]))
    }

    /// The value of a property, as [`View::property`] has it, without its gradient.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn property_value(&self, id: StateId, property: Property) -> Result<f64, Blocked> {
        match self.coordinate(id, property) {
            Some(v) => self.workspace.known(v),
            None => Ok(self.state(id)?.state.get(property)),
        }
    }

    /// The variable that is itself a property of a state, where one is.
    fn coordinate(&self, id: StateId, property: Property) -> Option<VarId> {
        let spec = &self.model.process.states[id];
        let (first, second) = match spec.form {
            StateForm::Pair(pair) => {
                let (first, second) = pair.properties();
                (first, Some(second))
            }
            StateForm::PressureSuperheat | StateForm::PressureSubcooling => (Property::Pressure, None),
            StateForm::TemperatureSuperheat | StateForm::TemperatureSubcooling => {
                (Property::Temperature, None)
            }
        };
        if property == first { Some(spec.a) } else { (Some(property) == second).then_some(spec.b) }
    }

    /// The composition coordinate of a state; given directly, it needs no state.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn composition(&self, id: StateId) -> Result<Dual, Blocked> {
        if let Some((CompositionForm::Direct, c)) = self.model.process.states[id].c {
            return self.var(c);
        }
        let s = self.state(id)?;
        Ok(self.dual(id, s.composition, &s.composition_gradient))
    }

    /// What is added to the engine's enthalpy and entropy of a state in balances.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn offset(&self, id: StateId) -> Result<(Dual, Dual), Blocked> {
        let (mut enthalpy, mut entropy) = (Dual::default(), Dual::default());
        self.add_offset(id, &mut enthalpy, |datum| datum.enthalpy)?;
        self.add_offset(id, &mut entropy, |datum| datum.entropy)?;
        Ok((enthalpy, entropy))
    }

    /// Adds to the engine's enthalpy or entropy of a state what `part` takes of the way to the
    /// datum of the balances.
    fn add_offset(&self, id: StateId, to: &mut Dual, part: fn(&Datum) -> f64) -> Result<(), Blocked> {
        let fluid = self.model.process.states[id].fluid;
        let scale = &self.model.scales[fluid];
        if scale.variable && scale.scale == Scale::Absolute {
            let c = self.composition(id)?;
            let engine = &self.model.process.fluids[fluid].engine;
            if let Some((datum, slope)) = engine.datum_at(c.value) {
                to.add_scaled(1.0, &c.map(part(&datum), part(&slope)));
                return Ok(());
            }
        }
        to.value += part(&scale.offset);
        Ok(())
    }

    /// Specific enthalpy on the datum of the balances, J/kg.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn enthalpy(&self, id: StateId) -> Result<Dual, Blocked> {
        let mut h = self.property(id, Property::Enthalpy)?;
        self.add_offset(id, &mut h, |datum| datum.enthalpy)?;
        Ok(h)
    }

    /// Specific entropy on the datum of the balances, J/(kg K).
    ///
    /// # Errors
    /// `Blocked`.
    pub fn entropy(&self, id: StateId) -> Result<Dual, Blocked> {
        let mut s = self.property(id, Property::Entropy)?;
        self.add_offset(id, &mut s, |datum| datum.entropy)?;
        Ok(s)
    }

    /// Specific internal energy on the datum of the balances, J/kg.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn internal_energy(&self, id: StateId) -> Result<Dual, Blocked> {
        let p = self.property(id, Property::Pressure)?;
        let v = self.property(id, Property::Volume)?;
        Ok(self.enthalpy(id)?.minus(&p.times(&v)))
    }

    /// The mass (kg/s or kg) of an amount that is counted as `form` at a state.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn mass_of(&self, state: StateId, amount: VarId, form: AmountForm) -> Result<Dual, Blocked> {
        let n = self.var(amount)?;
        match form {
            AmountForm::Mass => Ok(n),
            AmountForm::Volume => Ok(n.times(&self.property(state, Property::Volume)?.reciprocal())),
            AmountForm::DryAirMass => Ok(n.times(&self.composition(state)?.plus(&Dual::constant(1.0)))),
            AmountForm::Moles => {
                let fluid = self.model.process.states[state].fluid;
                let engine = &self.model.process.fluids[fluid].engine;
                let missing = Blocked::Missing("the molar mass of the fluid");
                if !engine.elements_vary() {
                    return Ok(n.scaled(engine.molar_mass(0.0).ok_or(missing)?));
                }
                let c = self.composition(state)?;
                let m = engine.molar_mass(c.value).ok_or(missing.clone())?;
                let step = 1e-6 * (1.0 + c.value.abs());
                let ahead = engine.molar_mass(c.value + step).ok_or(missing)?;
                Ok(n.times(&c.map(m, (ahead - m) / step)))
            }
        }
    }

    /// The value of a mass, as [`View::mass_of`] has it, without its gradient.
    ///
    /// # Errors
    /// `Blocked`.
    pub fn mass_value(&self, state: StateId, amount: VarId, form: AmountForm) -> Result<f64, Blocked> {
        match form {
            AmountForm::Mass => self.workspace.known(amount),
            _ => self.mass_of(state, amount, form).map(|mass| mass.value),
        }
    }

    /// The mass flow (kg/s or kg) of a material flow.
    ///
    /// # Errors
    /// `Blocked`; `Missing` for a flow that carries no material.
    pub fn mass(&self, flow: FlowId) -> Result<Dual, Blocked> {
        match self.model.process.flows[flow].material() {
            Some(m) => self.mass_of(m.state, m.amount, m.form),
            None => Err(Blocked::Missing("material")),
        }
    }
}
