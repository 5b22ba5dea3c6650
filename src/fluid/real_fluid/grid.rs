//! A coarse table above the critical pressure that starts iterations near their end.

use super::point::Helmholtz;
use super::saturation::Saturation;

/// Rows in pressure.
const ROWS: usize = 12;
/// Columns in temperature.
const COLUMNS: usize = 30;

#[derive(Clone, Copy, Debug, Default)]
struct Cell {
    ln_delta: f64,
    h: f64,
    s: f64,
}

/// Which energy function fixes a state beside the pressure.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Target {
    /// J/kg
    Enthalpy,
    /// J/(kg K)
    Entropy,
}

/// States from the critical to the highest pressure over the whole range of temperature.
#[derive(Debug)]
pub(super) struct Grid {
    ln_p0: f64,
    ln_step: f64,
    temperatures: [f64; COLUMNS],
    cells: [[Cell; COLUMNS]; ROWS],
}

impl Grid {
    /// Fills the table up to `p_max` (Pa) and `t_max` (K). Cells where the equation
    /// has no state repeat their neighbour's density.
    pub fn fill(model: &Helmholtz, sat: &Saturation, p_max: f64, t_max: f64) -> Grid {
        let (t_c, p_c, t_min) = (sat.t_c, sat.p_c, sat.t_min);
        let temperatures = std::array::from_fn(|k| {
            // A third of the columns on each side of the critical region, a third within it.
            let part = |from: f64, to: f64, k: usize, n: usize| from * (to / from).powf(k as f64 / n as f64);
            let (below, above) = (0.95 * t_c, (1.25 * t_c).min(0.5 * (t_c + t_max)));
            match k {
                0..10 => part(t_min, below, k, 10),
                10..20 => part(below, above, k - 10, 10),
                _ => part(above, t_max, k - 20, COLUMNS - 21),
            }
        });
        let ln_p0 = p_c.ln();
        let ln_step = (p_max.max(1.5 * p_c) / p_c).ln() / (ROWS - 1) as f64;
        let mut grid = Grid { ln_p0, ln_step, temperatures, cells: [[Cell::default(); COLUMNS]; ROWS] };
        // Each row starts from the one below it: from the dilute side the first root met is the fluid's.
        let mut guesses = temperatures.map(|t| {
            let ideal = p_c / (model.rho_r * model.r * t);
            if t < t_c { sat.least_density(t).max(ideal) } else { ideal }
        });
        for (j, row) in grid.cells.iter_mut().enumerate() {
            let p = (ln_p0 + ln_step * j as f64).exp() * (1.0 + 1e-9);
            for ((cell, &t), guess) in row.iter_mut().zip(&temperatures).zip(&mut guesses) {
                let iso = model.isotherm(t);
                if let Some(delta) = model.density(&iso, p, *guess, sat.least_density(t), f64::INFINITY) {
                    *guess = delta;
                }
                let point = model.point(&iso, *guess);
                *cell = Cell { ln_delta: guess.ln(), h: point.h, s: point.s };
            }
        }
        grid
    }

    fn row(&self, p: f64) -> (usize, f64) {
        let z = ((p.ln() - self.ln_p0) / self.ln_step).clamp(0.0, (ROWS - 1) as f64);
        let j = (z as usize).min(ROWS - 2);
        (j, z - j as f64)
    }

    fn cell(&self, row: (usize, f64), column: usize) -> Cell {
        let (j, w) = row;
        let at = |j: usize| self.cells.get(j).and_then(|r| r.get(column)).copied().unwrap_or_default();
        let (a, b) = (at(j), at(j + 1));
        let mix = |a: f64, b: f64| a + w * (b - a);
        Cell { ln_delta: mix(a.ln_delta, b.ln_delta), h: mix(a.h, b.h), s: mix(a.s, b.s) }
    }

    /// Reduced density expected at `p` (Pa) and `t` (K).
    pub fn delta(&self, p: f64, t: f64) -> f64 {
        let row = self.row(p);
        let i = self.temperatures.partition_point(|x| *x <= t).clamp(1, COLUMNS - 1) - 1;
        let (t0, t1) = (self.temperatures[i], self.temperatures[i + 1]);
        let w = ((t - t0) / (t1 - t0)).clamp(0.0, 1.0);
        let (a, b) = (self.cell(row, i).ln_delta, self.cell(row, i + 1).ln_delta);
        (a + w * (b - a)).exp()
    }

    /// Temperature (K) and reduced density expected at `p` (Pa) and an enthalpy or entropy.
    pub fn guess(&self, p: f64, target: Target, value: f64) -> (f64, f64) {
        let row = self.row(p);
        let y = |cell: Cell| if target == Target::Enthalpy { cell.h } else { cell.s };
        let (mut low, mut high) = (0, COLUMNS - 1);
        while high - low > 1 {
            let middle = (low + high) / 2;
            if y(self.cell(row, middle)) <= value { low = middle } else { high = middle }
        }
        let (a, b) = (self.cell(row, low), self.cell(row, low + 1));
        let w = ((value - y(a)) / (y(b) - y(a))).clamp(0.0, 1.0);
        let (t0, t1) = (self.temperatures[low], self.temperatures[low + 1]);
        (t0 + w * (t1 - t0), (a.ln_delta + w * (b.ln_delta - a.ln_delta)).exp())
    }
}
