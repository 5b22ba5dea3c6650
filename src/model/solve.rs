//! Solving for what is unknown.
//!
//! Rows are taken in order of priority. A row with one unknown left is solved at once; what stays
//! coupled is solved as a block by Newton's method with a rank-revealing choice of rows. A row
//! spent on an unknown has no power as a test any more; every other row that can be computed has.

use super::workspace::View;
use super::{Blocked, Dual, Model, Workspace};
use crate::fluid::{Pair, Property};
use crate::process::{Nature, StateForm, Var, VarId};

/// The equations of a process, each the residual of something that should be zero.
pub trait Rows {
    /// Number of rows, in order of priority.
    fn len(&self) -> usize;
    /// Whether there are none.
    fn is_empty(&self) -> bool {
        self.len() == 0
    }
    /// Priority class of a row; lower classes are spent first.
    fn class(&self, row: usize) -> u8;
    /// What a unit of the row weighs against others of its class, for rows that are alike but for
    /// their importance (an element: its molar mass); rows without one weigh alike.
    fn weight(&self, row: usize) -> Option<f64> {
        let _ = row;
        None
    }
    /// The unknown variables that a row depends on.
    fn unknowns(&self, row: usize) -> &[VarId];
    /// The residual and its gradient.
    ///
    /// # Errors
    /// `Blocked`.
    fn residual(&self, view: View<'_>, row: usize) -> Result<Dual, Blocked>;
}

/// One step of a solution: as many rows as unknowns.
#[derive(Clone, Debug, PartialEq)]
pub struct Step {
    /// Rows spent.
    pub rows: Vec<usize>,
    /// Unknowns found.
    pub unknowns: Vec<VarId>,
    /// Starting values that led to the solution.
    pub start: Vec<f64>,
}

/// How the unknowns are found.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Plan {
    /// Steps in order.
    pub steps: Vec<Step>,
    /// Unknowns that cannot be determined.
    pub undetermined: Vec<VarId>,
    /// For each row, the step it is spent on.
    pub spent: Vec<Option<usize>>,
}

const MAX_ITERATIONS: usize = 60;

/// Asked now and then whether to give up.
pub type Stop<'a> = &'a dyn Fn() -> bool;

impl Plan {
    /// Finds an order in which the unknowns can be solved, and solves them in the workspace. Once
    /// `stop` says so it gives up, and the plan is not complete.
    pub fn make(model: &Model, rows: &impl Rows, workspace: &mut Workspace, stop: Stop<'_>) -> Plan {
        let mut plan = Plan { spent: vec![None; rows.len()], ..Plan::default() };
        let mut open: Vec<Vec<VarId>> = (0..rows.len()).map(|r| rows.unknowns(r).to_vec()).collect();
        let mut touching: Vec<Vec<usize>> = vec![Vec::new(); model.process.vars.len()];
        for (r, unknowns) in open.iter().enumerate() {
            for &v in unknowns {
                touching[v].push(r);
            }
        }
        let mut ready: std::collections::BTreeSet<usize> =
            (0..rows.len()).filter(|&r| open[r].len() == 1).collect();
        let mut refused = vec![false; rows.len()];
        loop {
            while let Some(row) = ready.pop_first() {
                if stop() {
                    return plan;
                }
                let [unknown] = open[row][..] else { continue };
                if refused[row] {
                    continue;
                }
                match solve_step(model, rows, workspace, &[row], &[unknown], None, stop) {
                    Some(start) => {
                        plan.spent[row] = Some(plan.steps.len());
                        plan.steps.push(Step { rows: vec![row], unknowns: vec![unknown], start });
                        settle(unknown, &mut open, &touching, &mut ready);
                    }
                    None => {
                        workspace.forget(model, unknown);
                        refused[row] = true;
                    }
                }
            }
            let Some(found) = solve_block(model, rows, workspace, &open, &touching, &mut refused, stop)
            else {
                break;
            };
            for step in found {
                for &row in &step.rows {
                    plan.spent[row] = Some(plan.steps.len());
                }
                for &v in &step.unknowns {
                    settle(v, &mut open, &touching, &mut ready);
                }
                plan.steps.push(step);
            }
        }
        plan.undetermined = model.unknowns.iter().copied().filter(|&v| !workspace.is_known(v)).collect();
        plan
    }

    /// Solves the unknowns again in a freshly bound workspace. Unknowns whose step fails stay
    /// unknown.
    pub fn execute(&self, model: &Model, rows: &impl Rows, workspace: &mut Workspace) {
        for step in &self.steps {
            let start = Some(&step.start[..]);
            if solve_step(model, rows, workspace, &step.rows, &step.unknowns, start, &|| false).is_none() {
                for &v in &step.unknowns {
                    workspace.forget(model, v);
                }
            }
        }
    }
}

fn settle(
    var: VarId,
    open: &mut [Vec<VarId>],
    touching: &[Vec<usize>],
    ready: &mut std::collections::BTreeSet<usize>,
) {
    for &r in &touching[var] {
        open[r].retain(|&v| v != var);
        if open[r].len() == 1 {
            ready.insert(r);
        } else {
            ready.remove(&r);
        }
    }
}

/// The size that an unknown usually has.
fn scale(model: &Model, var: VarId) -> f64 {
    match nature(model, var) {
        Nature::Mass => 1.0,
        Nature::Energy => 1e5,
        Nature::Enthalpy => 1e5,
        Nature::Pressure => 1e5,
        Nature::Temperature => 300.0,
        Nature::Composition => composition_guess(model, var),
    }
}

/// A composition that the fluid of a variable surely takes.
fn composition_guess(model: &Model, var: VarId) -> f64 {
    let state = model.dependents[var].first();
    state.map_or(0.01, |&s| {
        let process = &model.process;
        super::sample_composition(&process.fluids[process.states[s].fluid])
    })
}

fn nature(model: &Model, var: VarId) -> Nature {
    match &model.process.vars[var] {
        Var::Unknown { nature, .. } => *nature,
        Var::Given(_) => Nature::Mass,
    }
}

/// For a property of what a vessel holds in the end: its value in the beginning.
fn earlier(model: &Model, workspace: &Workspace, var: VarId) -> Option<f64> {
    let property = match nature(model, var) {
        Nature::Enthalpy => Property::Enthalpy,
        Nature::Pressure => Property::Pressure,
        Nature::Temperature => Property::Temperature,
        Nature::Mass | Nature::Energy | Nature::Composition => return None,
    };
    let process = &model.process;
    let view = View { model, workspace };
    process.components.iter().filter_map(|c| c.holdup.as_ref()).find_map(|h| {
        let last = h.r#final.iter().find(|c| model.dependents[var].contains(&c.state))?;
        let fluid = process.states[last.state].fluid;
        let first = h.initial.iter().find(|c| process.states[c.state].fluid == fluid)?;
        view.state(first.state).ok().map(|s| s.state.get(property))
    })
}

/// A starting value: near a like state of the same component's neighbourhood where there is one.
fn guess(model: &Model, workspace: &Workspace, var: VarId) -> f64 {
    if let Some(value) = earlier(model, workspace, var) {
        return value;
    }
    match nature(model, var) {
        Nature::Mass => 1.0,
        Nature::Energy => 1e5,
        Nature::Temperature => 350.0,
        Nature::Composition => composition_guess(model, var),
        Nature::Pressure => 2e5,
        Nature::Enthalpy => {
            for &s in &model.dependents[var] {
                let spec = &model.process.states[s];
                let engine = &model.process.fluids[spec.fluid].engine;
                if let StateForm::Pair(Pair::PressureEnthalpy) = spec.form {
                    let p = if workspace.is_known(spec.a) { workspace.value(spec.a) } else { 1e5 };
                    let c = spec.c.map_or(0.0, |(_, v)| workspace.value(v));
                    for t in [400.0, 320.0, 293.15, 600.0, 900.0, 220.0, 150.0, 90.0] {
                        if let Ok(state) = engine.state(Pair::PressureTemperature, p, t, c) {
                            return state.enthalpy;
                        }
                    }
                }
            }
            3e5
        }
    }
}

/// Residuals and the dense block of the Jacobian; `None` if a row cannot be computed here.
fn assemble(
    rows: &impl Rows,
    view: View<'_>,
    chosen: &[usize],
    unknowns: &[VarId],
) -> Option<(Vec<f64>, Vec<f64>)> {
    let n = unknowns.len();
    let mut residuals = Vec::with_capacity(chosen.len());
    let mut jacobian = vec![0.0; chosen.len() * n];
    for (i, &row) in chosen.iter().enumerate() {
        let form = rows.residual(view, row).ok()?;
        residuals.push(form.value);
        for (slot, d) in &form.terms {
            if let Some(j) = unknowns.iter().position(|&v| v as u32 == *slot) {
                jacobian[i * n + j] += d;
            }
        }
    }
    Some((residuals, jacobian))
}

/// Newton's method on a square step. Returns the starting values that led to the solution.
fn solve_step(
    model: &Model,
    rows: &impl Rows,
    workspace: &mut Workspace,
    chosen: &[usize],
    unknowns: &[VarId],
    start: Option<&[f64]>,
    stop: Stop<'_>,
) -> Option<Vec<f64>> {
    let first: Vec<f64> = match start {
        Some(s) => s.to_vec(),
        None => unknowns.iter().map(|&v| guess(model, workspace, v)).collect(),
    };
    if newton(model, rows, workspace, chosen, unknowns, &first, stop) {
        return Some(first);
    }
    if let ([row], [unknown]) = (chosen, unknowns) {
        let candidate = scan(model, rows, workspace, *row, *unknown)?;
        if newton(model, rows, workspace, chosen, unknowns, &[candidate], stop) {
            return Some(vec![candidate]);
        }
    }
    None
}

fn newton(
    model: &Model,
    rows: &impl Rows,
    workspace: &mut Workspace,
    chosen: &[usize],
    unknowns: &[VarId],
    start: &[f64],
    stop: Stop<'_>,
) -> bool {
    let n = unknowns.len();
    let mut x = start.to_vec();
    for (&v, &value) in unknowns.iter().zip(&x) {
        workspace.set(model, v, value);
    }
    let Some(mut current) = assemble(rows, View { model, workspace }, chosen, unknowns) else {
        return false;
    };
    for _ in 0..MAX_ITERATIONS {
        if stop() {
            return false;
        }
        let (residuals, jacobian) = &current;
        let Some(step) = solve_dense(jacobian, residuals, n) else {
            return false;
        };
        if !step.iter().all(|d| d.is_finite()) {
            return false;
        }
        let small = step
            .iter()
            .zip(&x)
            .zip(unknowns)
            .all(|((d, x), &v)| d.abs() <= 1e-12 * (x.abs() + scale(model, v)));
        let mut damping = 1.0;
        // Keep pressures and temperatures positive, and steps into refused states short.
        for ((d, x), &v) in step.iter().zip(&x).zip(unknowns) {
            if matches!(nature(model, v), Nature::Pressure | Nature::Temperature) && x - d <= 0.0 {
                damping = f64::min(damping, 0.5 * x / d);
            }
        }
        let mut accepted = None;
        for _ in 0..40 {
            for ((&v, x), d) in unknowns.iter().zip(&x).zip(&step) {
                workspace.set(model, v, x - damping * d);
            }
            accepted = assemble(rows, View { model, workspace }, chosen, unknowns);
            if accepted.is_some() {
                break;
            }
            damping *= 0.5;
        }
        let Some(next) = accepted else { return false };
        for (x, d) in x.iter_mut().zip(&step) {
            *x -= damping * d;
        }
        current = next;
        if small && damping == 1.0 {
            return states_exist(model, workspace, unknowns);
        }
    }
    false
}

/// A solution for an enthalpy or a pressure counts only if the state exists.
fn states_exist(model: &Model, workspace: &Workspace, unknowns: &[VarId]) -> bool {
    unknowns.iter().all(|&v| {
        model.dependents[v].iter().all(|&s| !matches!(workspace.state(model, s), Err(Blocked::State(_))))
    }) || unknowns.iter().all(|&v| matches!(nature(model, v), Nature::Mass | Nature::Energy))
}

/// Looks for a change of sign over the range of a scalar unknown and halves it down.
fn scan(
    model: &Model,
    rows: &impl Rows,
    workspace: &mut Workspace,
    row: usize,
    unknown: VarId,
) -> Option<f64> {
    let grid: Vec<f64> = match nature(model, unknown) {
        Nature::Pressure => (0..60).map(|i| 1e2 * 10f64.powf(f64::from(i) * 0.1)).collect(),
        Nature::Temperature => (0..60).map(|i| 100.0 + 40.0 * f64::from(i)).collect(),
        Nature::Enthalpy => {
            let mut out = Vec::new();
            for &s in &model.dependents[unknown] {
                let spec = &model.process.states[s];
                if spec.form != StateForm::Pair(Pair::PressureEnthalpy) || !workspace.is_known(spec.a) {
                    continue;
                }
                let engine = &model.process.fluids[spec.fluid].engine;
                let c = spec.c.map_or(0.0, |(_, v)| workspace.value(v));
                for i in 0..80 {
                    let t = 60.0 * 1.05f64.powi(i);
                    if let Ok(state) = engine.state(Pair::PressureTemperature, workspace.value(spec.a), t, c)
                    {
                        out.push(state.get(Property::Enthalpy));
                    }
                }
            }
            out
        }
        Nature::Mass | Nature::Energy | Nature::Composition => return None,
    };
    let eval = |workspace: &mut Workspace, x: f64| {
        workspace.set(model, unknown, x);
        rows.residual(View { model, workspace }, row).ok().map(|f| f.value)
    };
    let mut last: Option<(f64, f64)> = None;
    for x in grid {
        let Some(f) = eval(workspace, x) else {
            last = None;
            continue;
        };
        if let Some((x0, f0)) = last
            && f0 * f <= 0.0
        {
            let (mut lo, mut hi, mut flo) = (x0, x, f0);
            for _ in 0..60 {
                let mid = 0.5 * (lo + hi);
                let Some(fm) = eval(workspace, mid) else { break };
                if flo * fm <= 0.0 {
                    hi = mid;
                } else {
                    lo = mid;
                    flo = fm;
                }
            }
            return Some(0.5 * (lo + hi));
        }
        last = Some((x, f));
    }
    None
}

/// Solves J x = r by Gaussian elimination with scaled partial pivoting; `None` if singular.
fn solve_dense(jacobian: &[f64], rhs: &[f64], n: usize) -> Option<Vec<f64>> {
    if n == 1 {
        return (jacobian[0] != 0.0).then(|| vec![rhs[0] / jacobian[0]]);
    }
    let inverse = invert(jacobian, n)?;
    Some((0..n).map(|i| (0..n).map(|j| inverse[i * n + j] * rhs[j]).sum()).collect())
}

/// The inverse of a dense row-major n×n matrix; `None` if it is singular to working precision.
pub fn invert(matrix: &[f64], n: usize) -> Option<Vec<f64>> {
    let mut a = matrix.to_vec();
    let mut inv = vec![0.0; n * n];
    for i in 0..n {
        inv[i * n + i] = 1.0;
    }
    let scales: Vec<f64> =
        (0..n).map(|i| a[i * n..(i + 1) * n].iter().fold(0.0, |m: f64, v| m.max(v.abs()))).collect();
    if scales.iter().any(|s| s.is_nan() || *s <= 0.0) {
        return None;
    }
    let mut order: Vec<usize> = (0..n).collect();
    for col in 0..n {
        let (best, size) = (col..n)
            .map(|i| (i, a[i * n + col].abs() / scales[order[i]]))
            .fold((col, 0.0), |m, c| if c.1 > m.1 { c } else { m });
        if size.is_nan() || size <= 1e-13 {
            return None;
        }
        if best != col {
            for k in 0..n {
                a.swap(best * n + k, col * n + k);
                inv.swap(best * n + k, col * n + k);
            }
            order.swap(best, col);
        }
        let pivot = a[col * n + col];
        for k in 0..n {
            a[col * n + k] /= pivot;
            inv[col * n + k] /= pivot;
        }
        for i in 0..n {
            let factor = a[i * n + col];
            if i != col && factor != 0.0 {
                for k in 0..n {
                    a[i * n + k] -= factor * a[col * n + k];
                    inv[i * n + k] -= factor * inv[col * n + k];
                }
            }
        }
    }
    Some(inv)
}

/// Finds coupled sets of rows and unknowns and solves what they determine.
fn solve_block(
    model: &Model,
    rows: &impl Rows,
    workspace: &mut Workspace,
    open: &[Vec<VarId>],
    touching: &[Vec<usize>],
    refused: &mut [bool],
    stop: Stop<'_>,
) -> Option<Vec<Step>> {
    let mut seen_rows = vec![false; open.len()];
    for first in 0..open.len() {
        if seen_rows[first] || refused[first] || open[first].len() < 2 {
            continue;
        }
        if stop() {
            return None;
        }
        // The connected set.
        let mut block_rows = vec![first];
        let mut unknowns: Vec<VarId> = Vec::new();
        seen_rows[first] = true;
        let mut i = 0;
        while i < block_rows.len() {
            for &v in &open[block_rows[i]] {
                if !unknowns.contains(&v) {
                    unknowns.push(v);
                    for &r in &touching[v] {
                        if !seen_rows[r] && !refused[r] {
                            seen_rows[r] = true;
                            block_rows.push(r);
                        }
                    }
                }
            }
            i += 1;
        }
        block_rows.sort_unstable_by_key(|&r| (rows.class(r), r));
        let start: Vec<f64> = unknowns.iter().map(|&v| guess(model, workspace, v)).collect();
        for (&v, &x) in unknowns.iter().zip(&start) {
            workspace.set(model, v, x);
        }
        // Rows that cannot be computed here drop out.
        let mut usable = Vec::new();
        let mut matrix = Vec::new();
        for &r in &block_rows {
            if let Some((_, j)) = assemble(rows, View { model, workspace }, &[r], &unknowns) {
                usable.push(r);
                matrix.push(j);
            }
        }
        let natures: Vec<f64> = unknowns.iter().map(|&v| scale(model, v)).collect();
        let ranks: Vec<Rank> =
            usable.iter().map(|&r| Rank { class: rows.class(r), weight: rows.weight(r) }).collect();
        let (picked, determined) = reduce(&mut matrix, &ranks, &natures, stop);
        let chosen_unknowns: Vec<VarId> = determined.iter().map(|&(_, j)| unknowns[j]).collect();
        let chosen_rows: Vec<usize> = determined.iter().map(|&(i, _)| usable[picked[i]]).collect();
        for &v in &unknowns {
            workspace.forget(model, v);
        }
        if chosen_unknowns.is_empty() {
            for &r in &block_rows {
                refused[r] = true;
            }
            continue;
        }
        if let Some(start) = solve_step(model, rows, workspace, &chosen_rows, &chosen_unknowns, None, stop) {
            return Some(vec![Step { rows: chosen_rows, unknowns: chosen_unknowns, start }]);
        }
        for &v in &chosen_unknowns {
            workspace.forget(model, v);
        }
        for &r in &block_rows {
            refused[r] = true;
        }
    }
    None
}

/// How a row stands to the others in the choice of pivots.
#[derive(Clone, Copy)]
struct Rank {
    class: u8,
    weight: Option<f64>,
}

/// What must be left of a row after elimination, as share of its largest entry.
const INDEPENDENT: f64 = 1e-9;
/// The same for weighted rows: what is left of an element balance of which less remains is the
/// rounding of a stated composition, not an equation.
const INDEPENDENT_WEIGHTED: f64 = 1e-3;

/// Gauss-Jordan elimination with rows accepted in order of class (within a class, the largest
/// pivot first). Returns the accepted rows, and for each unknown that is determined by rows that
/// involve determined unknowns only, the pair (index of its accepted row, unknown).
fn reduce(
    matrix: &mut [Vec<f64>],
    ranks: &[Rank],
    scales: &[f64],
    stop: Stop<'_>,
) -> (Vec<usize>, Vec<(usize, usize)>) {
    let n = scales.len();
    let originals: Vec<Vec<bool>> =
        matrix.iter().map(|row| row.iter().map(|v| *v != 0.0).collect()).collect();
    let mut weights = vec![1.0; matrix.len()];
    for ((row, rank), weight) in matrix.iter_mut().zip(ranks).zip(&mut weights) {
        for (v, s) in row.iter_mut().zip(scales) {
            *v *= s;
        }
        let size = row.iter().fold(0.0, |m: f64, v| m.max(v.abs()));
        if size > 0.0 {
            row.iter_mut().for_each(|v| *v /= size);
        }
        if let Some(unit) = rank.weight {
            *weight = unit * size;
        }
    }
    let floor = |i: usize| if ranks[i].weight.is_some() { INDEPENDENT_WEIGHTED } else { INDEPENDENT };
    let mut left: Vec<usize> = (0..matrix.len()).collect();
    let mut picked = Vec::new();
    let mut pivots = Vec::new();
    let mut is_pivot = vec![false; n];
    while let Some(class) = left.iter().map(|&i| ranks[i].class).min() {
        if stop() {
            return (Vec::new(), Vec::new());
        }
        // The best pivot among the rows of the lowest class.
        let mut best: Option<(usize, usize, f64)> = None;
        for &i in left.iter().filter(|&&i| ranks[i].class == class) {
            for (j, v) in matrix[i].iter().enumerate() {
                let size = weights[i] * v.abs();
                if !is_pivot[j] && v.abs() > floor(i) && size > best.map_or(0.0, |b| b.2) {
                    best = Some((i, j, size));
                }
            }
        }
        let Some((i, j, _)) = best else {
            left.retain(|&i| ranks[i].class != class);
            continue;
        };
        left.retain(|&r| r != i);
        let pivot = matrix[i][j];
        matrix[i].iter_mut().for_each(|v| *v /= pivot);
        let pivot_row = matrix[i].clone();
        for (r, row) in matrix.iter_mut().enumerate() {
            let factor = row[j];
            if r != i && factor != 0.0 {
                for (v, p) in row.iter_mut().zip(&pivot_row) {
                    *v -= factor * p;
                }
            }
        }
        picked.push(i);
        pivots.push(j);
        is_pivot[j] = true;
    }
    // An unknown is determined if its reduced row has no free column.
    let mut determined: Vec<(usize, usize)> = (0..picked.len())
        .filter(|&k| (0..n).all(|j| is_pivot[j] || matrix[picked[k]][j].abs() < 1e-9))
        .map(|k| (k, pivots[k]))
        .collect();
    // Newton works on the original rows: keep only rows all of whose unknowns are determined.
    loop {
        let mut known = vec![false; n];
        determined.iter().for_each(|d| known[d.1] = true);
        let before = determined.len();
        determined.retain(|&(k, _)| (0..n).all(|j| !originals[picked[k]][j] || known[j]));
        if determined.len() == before {
            break;
        }
    }
    (picked, determined)
}
