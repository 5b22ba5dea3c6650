//! equilibrium-overshot

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::ideal_gas::{IdealGas, Species};
use crate::fluid::{Element, Property, Substance};
use crate::model::{Decision, Dual, Margin, Scope, View};
use crate::process::Component;
use crate::process::kinds::Kind;
use crate::quantity::Dimension;

/// A reaction went beyond its equilibrium.
///
/// A single reaction that is driven forward where the gas enters may reach equilibrium but not cross
/// it. Where several reactions are possible, or the temperature changes, only the sum of their
/// affinities is judged.
pub struct EquilibriumOvershot;

static INFO: RuleInfo = RuleInfo {
    name: "equilibrium-overshot",
    title: "Extent beyond equilibrium",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Reaction,
    inequality: "A(outlet) ≥ 0 for the reaction that took place",
    applies_to: "reactors with one ideal gas in and one out at one temperature, and one independent reaction",
    needs: "compositions, temperature, pressure",
    typical_cause: "a temperature that is not that of the reaction zone, an analyser",
    source: "equilibrium of ideal gases; De Donder 1936",
    breaking: Case::Description(
        r#"{"fluids": {"before": {"kind": "ideal_gas", "mole_fractions": {"CO": 0.20, "H2O": 0.30, "CO2": 0.20, "H2": 0.30}}, "after": {"kind": "ideal_gas", "mole_fractions": {"CO": 0.0300, "H2O": 0.1300, "CO2": 0.3700, "H2": 0.4700}}},
             "components": {"reformer": {"kind": "reactor"}},
            "flows": {
              "in": {"kind": "material", "to": "reformer", "fluid": "before", "temperature": "700.0 K", "pressure": "1.000 bar", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "reformer", "fluid": "after", "temperature": "700.0 K", "pressure": "1.000 bar", "mass_flow": "1 kg/s"},
              "heat": {"kind": "heat", "from": "reformer", "temperature": "700.0 K"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"fluids": {"before": {"kind": "ideal_gas", "mole_fractions": {"CO": 0.20, "H2O": 0.30, "CO2": 0.20, "H2": 0.30}}, "after": {"kind": "ideal_gas", "mole_fractions": {"CO": 0.1700, "H2O": 0.2700, "CO2": 0.2300, "H2": 0.3300}}},
             "components": {"reformer": {"kind": "reactor"}},
            "flows": {
              "in": {"kind": "material", "to": "reformer", "fluid": "before", "temperature": "700.0 K", "pressure": "1.000 bar", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "reformer", "fluid": "after", "temperature": "700.0 K", "pressure": "1.000 bar", "mass_flow": "1 kg/s"},
              "heat": {"kind": "heat", "from": "reformer", "temperature": "700.0 K"}}}"#,
    ),
};

impl Rule for EquilibriumOvershot {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (k, component) in view.model.process.components.iter().enumerate() {
            if let Some([before, after]) = affinities(view, component)
                && before.value > 0.0
            {
                let throughput = before.value + after.value.abs();
                out.push(measure::lower_bound(me, Scope::Component(k), after, throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        Explanation {
            statement: format!(
                "The reaction in {} {} its equilibrium: its affinity at the outlet is {} per mole that reacted{}.",
                phrase::subject(evaluation, margin.scope),
                if decision.value < 0.0 { "went beyond" } else { "did not reach" },
                phrase::figure(decision.value, Dimension::MolarEnergy),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: decision.value, dimension: Dimension::MolarEnergy }),
            limit: Some(Figure { value: 0.0, dimension: Dimension::MolarEnergy }),
            ..Explanation::default()
        }
    }
}

/// Change of an amount, as share of all, that counts as taking part (our choice: above rounding, below any analyser).
const TAKES_PART: f64 = 1e-6;
/// Share of an element that the change of amounts may make or lose by rounding (our choice: analyses of three digits).
const CLOSED: f64 = 1e-3;

/// Affinity at the inlet and at the outlet of the one reaction that took place, J per mole.
fn affinities(view: View<'_>, component: &Component) -> Option<[Dual; 2]> {
    let process = &view.model.process;
    let [side] = &component.sides[..] else { return None };
    let ([inlet], [outlet]) = (&side.inlets[..], &side.outlets[..]) else { return None };
    if component.kind != Kind::Reactor {
        return None;
    }
    let (first, last) = (process.flows[*inlet].material()?.state, process.flows[*outlet].material()?.state);
    let gas = |state: usize| match &process.fluids[process.states[state].fluid].substance {
        Substance::Gas(gas) => Some(gas.as_ref()),
        _ => None,
    };
    let (before, after) = (gas(first)?, gas(last)?);
    let t = view.property(last, Property::Temperature).ok()?;
    if (view.property(first, Property::Temperature).ok()?.value - t.value).abs() > physics::SAME_TEMPERATURE {
        return None;
    }
    let change = changes(before, after)?;
    let at = |gas: &IdealGas, state: usize| {
        let p = view.property(state, Property::Pressure).ok()?;
        let (value, by_t, by_p) = affinity(&change, gas, t.value, p.value)?;
        Some(physics::combine(value, &[(&t, by_t), (&p, by_p)]))
    };
    Some([at(before, first)?, at(after, last)?])
}

/// What reacted, as species and coefficients that sum to one mole in magnitude on each side;
/// `None` where elements are not conserved or more than one reaction is possible.
fn changes(before: &IdealGas, after: &IdealGas) -> Option<Vec<(Species, f64)>> {
    use crate::fluid::Engine;
    // Moles after per mole before: mass is conserved.
    let ratio = before.molar_mass(0.0)? / after.molar_mass(0.0)?;
    let mut out: Vec<(Species, f64)> = Vec::new();
    for (species, _) in before.components().iter().chain(after.components()) {
        if out.iter().any(|(s, _)| s.name() == species.name()) {
            continue;
        }
        let change =
            after.mole_fraction(species.name()) * ratio - before.mole_fraction(species.name());
        if change.abs() > TAKES_PART {
            out.push((species.clone(), change));
        }
    }
    let size = out.iter().map(|(_, n)| n.abs()).sum::<f64>() / 2.0;
    if size <= 0.0 {
        return None;
    }
    let mut rows: Vec<Vec<f64>> = Vec::new();
    for element in Element::ALL {
        let atoms: Option<Vec<f64>> =
            out.iter().map(|(s, _)| s.elements().and_then(|e| e.get(*element as usize).copied())).collect();
        let atoms = atoms?;
        let made: f64 = atoms.iter().zip(&out).map(|(a, (_, n))| a * n).sum();
        let turned: f64 = atoms.iter().zip(&out).map(|(a, (_, n))| (a * n).abs()).sum();
        if made.abs() > CLOSED * turned {
            return None;
        }
        if turned > 0.0 {
            rows.push(atoms);
        }
    }
    if rank(rows) + 1 != out.len() {
        return None;
    }
    out.iter_mut().for_each(|(_, n)| *n /= size);
    Some(out)
}

/// Rank of a matrix of small whole numbers.
fn rank(mut rows: Vec<Vec<f64>>) -> usize {
    let columns = rows.first().map_or(0, Vec::len);
    let mut rank = 0;
    for column in 0..columns {
        let Some(pivot) = (rank..rows.len()).find(|&i| rows[i][column].abs() > 1e-9) else { continue };
        rows.swap(rank, pivot);
        let top = rows[rank].clone();
        for row in rows.iter_mut().skip(rank + 1) {
            let factor = row[column] / top[column];
            for (x, y) in row.iter_mut().zip(&top) {
                *x -= factor * y;
            }
        }
        rank += 1;
    }
    rank
}

/// −Σ ν μ in a gas at `t` (K) and `p` (Pa), and its derivatives with respect to both.
fn affinity(change: &[(Species, f64)], gas: &IdealGas, t: f64, p: f64) -> Option<(f64, f64, f64)> {
    use crate::fluid::heat_capacity::{GAS_CONSTANT, STANDARD_PRESSURE};
    let (mut value, mut by_t, mut by_p) = (0.0, 0.0, 0.0);
    for (species, n) in change {
        let share = gas.mole_fraction(species.name());
        if share <= 0.0 {
            // What is not there yet drives the reaction without bound.
            return None;
        }
        let at = species.standard(t).ok()?;
        let ln = (share * p / STANDARD_PRESSURE).ln();
        value -= n * (at.h - t * at.s + GAS_CONSTANT * t * ln);
        by_t -= n * (-at.s + GAS_CONSTANT * ln);
        by_p -= n * GAS_CONSTANT * t / p;
    }
    Some((value, by_t, by_p))
}
