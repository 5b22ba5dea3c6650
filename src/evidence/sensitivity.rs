//! Gradients over independent sources: the implicit function theorem applied step by step,
//! backwards, to what was solved.

use crate::model::{Dual, Model, Plan, Rows, Slot, View, invert};
use crate::process::{SourceId, Var};
use std::collections::BinaryHeap;

/// The gradients of one solved step: as many rows as unknowns.
#[derive(Clone, Debug)]
struct StepGradient {
    unknowns: Vec<usize>,
    rows: Vec<Dual>,
    /// Inverse of the square Jacobian, row-major; unknown by row.
    inverse: Vec<f64>,
}

/// Where the derivative with respect to a slot goes.
#[derive(Clone, Copy, Debug)]
struct Route {
    /// The one source that the slot depends on, or one of the words below.
    to: u32,
    /// The derivative of the slot with respect to that source.
    weight: f64,
}

impl Route {
    /// To no source or to several, as the affine form of the variable has it.
    const SPREAD: u32 = u32::MAX;
    /// To the rows of the step that solved for the variable.
    const SOLVED: u32 = u32::MAX - 1;
}

/// Gradients of the solved steps and room to propagate through them.
#[derive(Debug, Default)]
pub struct Sensitivity {
    steps: Vec<Option<StepGradient>>,
    step_of: Vec<Option<usize>>,
    /// One a slot.
    routes: Vec<Route>,
    /// Derivatives with respect to the variables of steps.
    by_variable: Vec<f64>,
    by_source: Vec<f64>,
    touched: Vec<SourceId>,
    queue: BinaryHeap<usize>,
    queued: Vec<bool>,
}

impl Sensitivity {
    /// Takes the gradients of every solved step at the current values.
    pub fn take(&mut self, view: View<'_>, rows: &impl Rows, plan: &Plan) {
        let process = &view.model.process;
        self.by_variable.clear();
        self.by_variable.resize(process.vars.len(), 0.0);
        self.by_source.clear();
        self.by_source.resize(process.sources.len(), 0.0);
        self.touched.clear();
        self.routes.clear();
        self.routes.extend(process.vars.iter().map(|var| match var {
            Var::Given(affine) if affine.terms.len() == 1 => {
                let (source, weight) = affine.terms[0];
                Route { to: source as u32, weight }
            }
            _ => Route { to: Route::SPREAD, weight: 0.0 },
        }));
        self.routes.extend((0..process.sources.len()).map(|s| Route { to: s as u32, weight: 1.0 }));
        self.queue.clear();
        self.queued.clear();
        self.queued.resize(plan.steps.len(), false);
        self.steps.clear();
        self.step_of.clear();
        self.step_of.resize(process.vars.len(), None);
        for (i, step) in plan.steps.iter().enumerate() {
            let gradient = step_gradient(view, rows, step);
            if gradient.is_some() {
                for &v in &step.unknowns {
                    self.routes[v].to = Route::SOLVED;
                    self.step_of[v] = Some(i);
                }
            }
            self.steps.push(gradient);
        }
    }

    #[inline]
    fn add(&mut self, model: &Model, slot: Slot, d: f64) {
        let route = self.routes[slot as usize];
        if route.to < Route::SOLVED {
            self.add_source(route.to as usize, d * route.weight);
        } else {
            self.add_apart(model, slot as usize, d);
        }
    }

    fn add_apart(&mut self, model: &Model, slot: usize, d: f64) {
        if let Some(step) = self.step_of[slot] {
            self.by_variable[slot] += d;
            if !self.queued[step] {
                self.queued[step] = true;
                self.queue.push(step);
            }
        } else if let Var::Given(affine) = &model.process.vars[slot] {
            for &(source, weight) in &affine.terms {
                self.add_source(source, d * weight);
            }
        }
    }

    #[inline]
    fn add_source(&mut self, source: SourceId, d: f64) {
        let sum = &mut self.by_source[source];
        if *sum == 0.0 {
            self.touched.push(source);
        }
        *sum += d;
    }

    /// The gradient of a figure over sources: calls `each` once for every source it depends on.
    pub fn over_sources(&mut self, model: &Model, form: &Dual, mut each: impl FnMut(SourceId, f64)) {
        for &(slot, d) in &form.terms {
            self.add(model, slot, d);
        }
        // Later steps depend on earlier ones only, so the largest index comes first.
        while let Some(i) = self.queue.pop() {
            self.queued[i] = false;
            let Some(step) = self.steps[i].take() else { continue };
            let n = step.unknowns.len();
            for r in 0..n {
                let weight: f64 =
                    (0..n).map(|j| self.by_variable[step.unknowns[j]] * step.inverse[j * n + r]).sum();
                if weight != 0.0 {
                    for &(slot, d) in &step.rows[r].terms {
                        if !step.unknowns.contains(&(slot as usize)) {
                            self.add(model, slot, -weight * d);
                        }
                    }
                }
            }
            for &v in &step.unknowns {
                self.by_variable[v] = 0.0;
            }
            self.steps[i] = Some(step);
        }
        for &source in &self.touched {
            // A source whose sum passed through zero was touched twice.
            let d = std::mem::take(&mut self.by_source[source]);
            if d != 0.0 {
                each(source, d);
            }
        }
        self.touched.clear();
    }

    /// The standard uncertainty of a figure.
    pub fn uncertainty(&mut self, model: &Model, form: &Dual) -> f64 {
        let mut variance = 0.0;
        self.over_sources(model, form, |source, d| {
            let part = d * model.process.sources[source].u;
            variance += part * part;
        });
        variance.sqrt()
    }
}

fn step_gradient(view: View<'_>, rows: &impl Rows, step: &crate::model::Step) -> Option<StepGradient> {
    let n = step.unknowns.len();
    let forms: Vec<Dual> =
        step.rows.iter().map(|&r| rows.residual(view, r)).collect::<Result<_, _>>().ok()?;
    let mut jacobian = vec![0.0; n * n];
    for (i, form) in forms.iter().enumerate() {
        for &(slot, d) in &form.terms {
            if let Some(j) = step.unknowns.iter().position(|&v| v as Slot == slot) {
                jacobian[i * n + j] += d;
            }
        }
    }
    let inverse = invert(&jacobian, n)?;
    Some(StepGradient { unknowns: step.unknowns.clone(), rows: forms, inverse })
}
