//! From margins to verdicts: one-sided tests at the limit, adjusted for the family (Sidak, stepped
//! down after Holm).
//!
//! Sources: JCGM 106:2012 (decisions at a limit); Holm, Scand. J. Statist. 6 (1979) 65; Sidak,
//! J. Amer. Statist. Assoc. 62 (1967) 626.

use super::Sensitivity;
use crate::model::{Decision, Family, Margin, Model, Test, Verdict};
use statrs::function::erf;

/// Relative size below which a figure is rounding: a margin and its uncertainty both below this
/// share of the throughput are identically zero.
pub const ROUNDING: f64 = 1e-9;

/// Upper bound at which a likely but unproven violation is called suspect.
pub const SUSPECT: f64 = 0.05;

/// One-sided 95 % point of the normal distribution: above it a margin holds.
pub const HOLDS_ABOVE: f64 = 1.645;

/// Distribution function of the standard normal distribution.
pub fn normal_cdf(z: f64) -> f64 {
    0.5 * erf::erfc(-z / std::f64::consts::SQRT_2)
}

/// Quantile of the standard normal distribution; `p` in (0, 1).
pub fn normal_quantile(p: f64) -> f64 {
    -std::f64::consts::SQRT_2 * erf::erfc_inv(2.0 * p)
}

/// What a family of tests amounts to.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FamilySummary {
    /// Number of tests among which the false-alarm probability is shared.
    pub tests: usize,
    /// Accepted probability of any false alarm.
    pub false_alarm: f64,
    /// |z| beyond which the first step of the procedure calls a violation.
    pub critical_z: f64,
}

/// The families with at least one test.
pub type Families = Vec<(Family, FamilySummary)>;

/// Decides every margin that could be computed. The answer runs parallel to `margins`; `None`
/// where the margin is blocked.
pub fn decide(
    model: &Model,
    margins: &[Margin],
    sensitivity: &mut Sensitivity,
    false_alarm: f64,
) -> (Vec<Option<Decision>>, Families) {
    let mut decisions: Vec<Option<Decision>> = Vec::with_capacity(margins.len());
    for margin in margins {
        decisions.push(margin.form.as_ref().ok().map(|form| {
            let u = sensitivity.uncertainty(model, form);
            first_look(form.value, u, margin)
        }));
    }
    let mut families = Vec::new();
    for family in [Family::Entropy, Family::Closure] {
        let mut members: Vec<usize> = (0..margins.len())
            .filter(|&i| margins[i].family == family && decisions[i].is_some_and(|d| !d.at_limit))
            .collect();
        if members.is_empty() {
            let any = (0..margins.len()).any(|i| margins[i].family == family && decisions[i].is_some());
            if any {
                families.push((family, summary(family, 0, false_alarm)));
            }
            continue;
        }
        let summary = summary(family, members.len(), false_alarm);
        members.sort_by(|&a, &b| {
            let p = |i: usize| decisions[i].map_or(1.0, |d| d.p_adjusted);
            p(a).total_cmp(&p(b)).then(a.cmp(&b))
        });
        let mut running: f64 = 0.0;
        let count = members.len();
        for (rank, &i) in members.iter().enumerate() {
            if let Some(d) = &mut decisions[i] {
                let left = (count - rank) as f64;
                let adjusted = -(left * (-d.p_adjusted).ln_1p()).exp_m1();
                running = running.max(adjusted.min(1.0));
                d.p_adjusted = running;
                judge(d, margins[i].test, summary.critical_z, false_alarm);
            }
        }
        families.push((family, summary));
    }
    let critical_z = normal_quantile(1.0 - false_alarm);
    for (i, margin) in margins.iter().enumerate() {
        if margin.family == Family::None
            && let Some(d) = &mut decisions[i]
            && !d.at_limit
        {
            judge(d, margin.test, critical_z, false_alarm);
        }
    }
    (decisions, families)
}

fn summary(family: Family, tests: usize, false_alarm: f64) -> FamilySummary {
    let each = (1.0 - false_alarm).powf(1.0 / tests.max(1) as f64);
    let critical_z = match family {
        Family::Closure => normal_quantile(0.5 + 0.5 * each),
        _ => normal_quantile(each),
    };
    FamilySummary { tests, false_alarm, critical_z }
}

/// The unadjusted figures of one margin.
fn first_look(value: f64, u: f64, margin: &Margin) -> Decision {
    let rounding = ROUNDING * margin.throughput;
    let at_limit = value.abs() <= rounding && u <= rounding;
    // Figures are far from where their squares leave the range of numbers.
    let scale = (u * u + rounding * rounding).sqrt().max(f64::MIN_POSITIVE);
    let (tested, z) = match margin.test {
        Test::NonNegative => (value, value / scale),
        Test::Zero { allowance } => {
            let excess = (value.abs() - allowance).max(0.0);
            (value, excess.copysign(value) / scale)
        }
    };
    let z = if z.is_finite() { z.clamp(-1e6, 1e6) } else { 0.0 };
    let probability_negative = normal_cdf(-value / scale);
    let p = match margin.test {
        // The distribution is symmetric; what is lost of this probability, near one, decides nothing.
        Test::NonNegative if value > 0.0 => 1.0 - probability_negative,
        Test::NonNegative => normal_cdf(z),
        Test::Zero { .. } => 2.0 * normal_cdf(-z.abs()),
    };
    Decision {
        verdict: Verdict::Holds,
        at_limit,
        value: tested,
        u,
        z,
        p_adjusted: p.min(1.0),
        probability_negative,
        detectable: 0.0,
    }
}

fn judge(d: &mut Decision, test: Test, critical_z: f64, false_alarm: f64) {
    // Power of nine in ten.
    d.detectable = (critical_z + 1.281_551_565_545) * d.u;
    d.verdict = if d.p_adjusted <= false_alarm {
        Verdict::Violated
    } else if d.p_adjusted <= SUSPECT {
        Verdict::Suspect
    } else {
        match test {
            Test::NonNegative if d.z <= HOLDS_ABOVE => Verdict::Undecided,
            _ => Verdict::Holds,
        }
    };
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Critical values of the one-sided Sidak test, methods of JCGM 106 and Sidak (1967): 2.326 for
    /// one test, 3.089 for ten, 3.402 for thirty at a family-wise 1 %.
    #[test]
    fn critical_values_follow_sidak() {
        for (tests, want) in [(1, 2.326), (10, 3.089), (30, 3.402)] {
            let got = summary(Family::Entropy, tests, 0.01).critical_z;
            assert!((got - want).abs() < 6e-4, "{tests}: {got}");
        }
    }

    #[test]
    fn quantile_inverts_the_distribution() {
        for p in [1e-9, 0.01, 0.3, 0.5, 0.975, 0.999] {
            assert!((normal_cdf(normal_quantile(p)) / p - 1.0).abs() < 1e-9);
        }
    }
}
