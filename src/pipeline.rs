//! The one place that composes the phases.

use crate::assessment::{Exergies, Judgement, explain, judge, margins};
use crate::balance::{Equations, Evaluation};
use crate::diagnostic::Diagnostic;
use crate::document::{canonical, sha256_hex};
use crate::evidence::Sensitivity;
use crate::model::{Margin, Model, Plan, View, Workspace};
use crate::process::{self, Inputs, ReadLimits};
use crate::quantity::UnitSystem;
use crate::report::{Report, StateReport};
use crate::rules;
use std::rc::Rc;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

/// A request to stop, shared between whoever waits and whoever computes.
#[derive(Clone, Debug, Default)]
pub struct Cancel(Arc<AtomicBool>);

impl Cancel {
    /// A request that has not been made yet.
    pub fn new() -> Cancel {
        Cancel::default()
    }

    /// Makes the request.
    pub fn cancel(&self) {
        self.0.store(true, Ordering::Relaxed);
    }

    /// Whether the request was made.
    pub fn is_cancelled(&self) -> bool {
        self.0.load(Ordering::Relaxed)
    }

    /// # Errors
    /// `Failure::Cancelled` if the request was made.
    pub fn check(&self) -> Result<(), Failure> {
        if self.is_cancelled() { Err(Failure::Cancelled) } else { Ok(()) }
    }
}

/// Why there is no report.
#[derive(Clone, Debug, PartialEq)]
pub enum Failure {
    /// The description cannot be checked: every fault that was found.
    Rejected(Vec<Diagnostic>),
    /// It was cancelled before it finished.
    Cancelled,
}

/// A compiled process, ready to be evaluated with any inputs: what a stored plant keeps.
#[derive(Debug)]
pub struct Bound {
    /// Structure.
    pub model: Model,
    /// Equations and regions.
    pub equations: Equations,
    /// How the unknowns are found.
    pub plan: Plan,
    /// The inputs that the plan was made with.
    pub inputs: Inputs,
}

/// Room for one evaluation after another.
#[derive(Debug, Default)]
pub struct Room {
    /// Values.
    pub workspace: Workspace,
    /// Gradients.
    pub sensitivity: Sensitivity,
    margins: Vec<Margin>,
}

impl Bound {
    /// Compiles a process and finds how its unknowns are solved. The room holds the solution
    /// afterwards. Once cancelled it comes to an end soon, with a plan that is not complete.
    pub fn compile(process: process::Process, inputs: Inputs, room: &mut Room, cancel: &Cancel) -> Bound {
        let (model, inputs) = Model::compile(process, inputs);
        room.workspace.bind(&model, &inputs);
        let equations = Equations::compile(&model, &room.workspace);
        let plan = Plan::make(&model, &equations, &mut room.workspace, &|| cancel.is_cancelled());
        Bound { model, equations, plan, inputs }
    }

    /// Evaluates the balances at given inputs.
    pub fn evaluate<'a>(&'a self, inputs: &Inputs, room: &'a mut Room) -> Evaluation<'a> {
        room.workspace.bind(&self.model, inputs);
        self.plan.execute(&self.model, &self.equations, &mut room.workspace);
        let view = View { model: &self.model, workspace: &room.workspace };
        Evaluation::new(view, &self.equations, &self.plan)
    }
}

/// Evaluates and decides: the hot path of repeated checks of one process. What is found is put into
/// words only for a report.
pub fn evaluate_and_decide(bound: &Bound, inputs: &Inputs, room: &mut Room) -> Judgement {
    room.workspace.bind(&bound.model, inputs);
    bound.plan.execute(&bound.model, &bound.equations, &mut room.workspace);
    let view = View { model: &bound.model, workspace: &room.workspace };
    let evaluation = Evaluation::new(view, &bound.equations, &bound.plan);
    room.sensitivity.take(view, &bound.equations, &bound.plan);
    room.margins.clear();
    margins(&evaluation, &mut room.margins);
    judge(&evaluation, &room.margins, &mut room.sensitivity)
}

/// From the bytes of a description to a report.
///
/// # Errors
/// See [`Failure`].
pub fn check_bytes(
    body: &[u8],
    limits: &ReadLimits,
    units: UnitSystem,
    cancel: &Cancel,
) -> Result<Report, Failure> {
    let (process, inputs) = process::read(body, limits, &rules::names()).map_err(Failure::Rejected)?;
    cancel.check()?;
    let mut room = Room::default();
    let bound = Bound::compile(process, inputs, &mut room, cancel);
    cancel.check()?;
    let view = View { model: &bound.model, workspace: &room.workspace };
    let mut evaluation = Evaluation::new(view, &bound.equations, &bound.plan);
    room.sensitivity.take(view, &bound.equations, &bound.plan);
    let exergies = Rc::new(Exergies::derive(&evaluation));
    evaluation.exergy_mismatch = Some(exergies.mismatches());
    evaluation.exergies = Some(Rc::clone(&exergies));
    cancel.check()?;
    let mut all = Vec::new();
    margins(&evaluation, &mut all);
    cancel.check()?;
    let judgement = judge(&evaluation, &all, &mut room.sensitivity);
    let findings = explain(&evaluation, &all, &judgement);
    cancel.check()?;
    let hash = sha256_hex(canonical(std::str::from_utf8(body).unwrap_or_default()).as_bytes());
    Ok(Report::assemble(&evaluation, (&judgement, &findings), &exergies, &mut room.sensitivity, units, hash))
}

/// From the bytes of a question to one state.
///
/// # Errors
/// See [`Failure`]; a state outside the range of its formulation is rejected here.
pub fn state_bytes(
    body: &[u8],
    limits: &ReadLimits,
    units: UnitSystem,
    cancel: &Cancel,
) -> Result<StateReport, Failure> {
    let (process, inputs) = process::read_state(body, limits).map_err(Failure::Rejected)?;
    cancel.check()?;
    let mut room = Room::default();
    let bound = Bound::compile(process, inputs, &mut room, cancel);
    let view = View { model: &bound.model, workspace: &room.workspace };
    room.sensitivity.take(view, &bound.equations, &bound.plan);
    cancel.check()?;
    StateReport::assemble(view, &mut room.sensitivity, units).map_err(|fault| Failure::Rejected(vec![fault]))
}
