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

/// Gradients of the solved steps and room to propagate through them.
#[derive(Debug, Default)]
pub struct Sensitivity {
    steps: Vec<Option<StepGradient>>,
    step_of: Vec<Option<usize>>,
    by_slot: Vec<f64>,
    touched: Vec<usize>,
    queue: BinaryHeap<usize>,
    queued: Vec<bool>,
    variables: usize,
}

impl Sensitivity {
    /// Takes the gradients of every solved step at the current values.
    pub fn take(&mut self, view: View<'_>, rows: &impl Rows, plan: &Plan) {
        let process = &view.model.process;
        self.variables = process.vars.len();
        self.by_slot.clear();
        self.by_slot.resize(self.variables + process.sources.len(), 0.0);
        self.touched.clear();
        self.step_of.clear();
        self.step_of.resize(self.variables, None);
        self.queue.clear();
        self.queued.clear();
        self.queued.resize(plan.steps.len(), false);
        self.steps.clear();
        for (i, step) in plan.steps.iter().enumerate() {
            let gradient = step_gradient(view, rows, step);
            if gradient.is_some() {
                for &v in &step.unknowns {
                    self.step_of[v] = Some(i);
                }
            }
            self.steps.push(gradient);
        }
    }

    fn add(&mut self, slot: usize, value: f64) {
        if self.by_slot[slot] == 0.0 {
            self.touched.push(slot);
        }
        self.by_slot[slot] += value;
        if slot < self.variables
            && let Some(step) = self.step_of[slot]
            && !self.queued[step]
        {
            self.queued[step] = true;
            self.queue.push(step);
        }
    }

    /// The gradient of a figure over sources: calls `each` once for every source it depends on.
    pub fn over_sources(&mut self, model: &Model, form: &Dual, mut each: impl FnMut(SourceId, f64)) {
        for &(slot, d) in &form.terms {
            self.add(slot as usize, d);
        }
        // Later steps depend on earlier ones only, so the largest index comes first.
        while let Some(i) = self.queue.pop() {
            self.queued[i] = false;
            let Some(step) = self.steps[i].take() else { continue };
            let n = step.unknowns.len();
            for r in 0..n {
                let weight: f64 =
                    (0..n).map(|j| self.by_slot[step.unknowns[j]] * step.inverse[j * n + r]).sum();
                if weight != 0.0 {
                    for &(slot, d) in &step.rows[r].terms {
                        if !step.unknowns.contains(&(slot as usize)) {
                            self.add(slot as usize, -weight * d);
                        }
                    }
                }
            }
            for &v in &step.unknowns {
                self.by_slot[v] = 0.0;
            }
            self.steps[i] = Some(step);
        }
        // Variables to sources; a slot may have been touched more than once.
        let mut i = 0;
        while i < self.touched.len() {
            let slot = self.touched[i];
            i += 1;
            if slot >= self.variables {
                continue;
            }
            let d = std::mem::take(&mut self.by_slot[slot]);
            if d != 0.0
                && let Var::Given(affine) = &model.process.vars[slot]
            {
                for &(source, weight) in &affine.terms {
                    let at = self.variables + source;
                    if self.by_slot[at] == 0.0 {
                        self.touched.push(at);
                    }
                    self.by_slot[at] += d * weight;
                }
            }
        }
        for i in 0..self.touched.len() {
            let slot = self.touched[i];
            let d = std::mem::take(&mut self.by_slot[slot]);
            if slot >= self.variables && d != 0.0 {
                each(slot - self.variables, d);
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
