//! The ideal-gas part of the Helmholtz energy, without ln δ.

use super::equation::IdealTerms;

/// φ0 (without ln δ) and its logarithmic derivatives.
#[derive(Clone, Copy, Debug)]
pub(super) struct IdealValues {
    /// φ0
    pub value: f64,
    /// τ φ0_τ
    pub first: f64,
    /// τ² φ0_ττ
    pub second: f64,
}

/// All published forms, brought to a1 + a2 τ + a ln τ + Σ n τ^t + Σ n ln(d + c exp(−t τ)).
#[derive(Debug, Default)]
pub(super) struct Ideal {
    constant: f64,
    slope: f64,
    logarithm: f64,
    /// n, t
    powers: Vec<[f64; 2]>,
    /// n, t, c, d
    oscillators: Vec<[f64; 4]>,
}

impl Ideal {
    /// The compiled form; `t_r` is the reducing temperature in K.
    pub fn new(terms: &[IdealTerms], t_r: f64) -> Ideal {
        let mut out = Ideal::default();
        for group in terms {
            match group {
                IdealTerms::Lead(rows) | IdealTerms::Datum(rows) => {
                    for [a1, a2] in rows {
                        out.constant += a1;
                        out.slope += a2;
                    }
                }
                IdealTerms::Logarithm(rows) => rows.iter().for_each(|[a]| out.logarithm += a),
                IdealTerms::Power(rows) => out.powers.extend(rows),
                IdealTerms::PlanckEinstein(rows) => {
                    out.oscillators.extend(rows.iter().map(|[n, t]| [*n, *t, -1.0, 1.0]));
                }
                IdealTerms::PlanckEinsteinTemperature(rows) => {
                    out.oscillators.extend(rows.iter().map(|[n, v]| [*n, v / t_r, -1.0, 1.0]));
                }
                IdealTerms::PlanckEinsteinGeneral(rows) => {
                    // ln(c + d e^{tτ}) = tτ + ln(d + c e^{−tτ}), which does not overflow.
                    for [n, t, c, d] in rows {
                        out.slope += n * t;
                        out.oscillators.push([*n, *t, *c, *d]);
                    }
                }
                IdealTerms::HeatCapacityPower(rows) => {
                    for [c, t, t0] in rows {
                        let tau0 = t_r / t0;
                        if *t == 0.0 {
                            out.constant += c * (1.0 - tau0.ln());
                            out.slope -= c / tau0;
                            out.logarithm += c;
                        } else {
                            out.powers.push([-c * t_r.powf(*t) / (t * (t + 1.0)), -t]);
                            out.slope -= c * t0.powf(t + 1.0) / (t_r * (t + 1.0));
                            out.constant += c * t0.powf(*t) / t;
                        }
                    }
                }
            }
        }
        out
    }

    /// Derivatives only; `value` is left at zero.
    #[inline]
    pub fn derivatives(&self, tau: f64) -> IdealValues {
        self.evaluate::<false>(tau, tau.ln())
    }

    /// Value and derivatives.
    #[inline]
    pub fn values(&self, tau: f64) -> IdealValues {
        self.evaluate::<true>(tau, tau.ln())
    }

    #[inline(always)]
    fn evaluate<const VALUE: bool>(&self, tau: f64, ln_tau: f64) -> IdealValues {
        let mut value = self.constant + self.slope * tau + self.logarithm * ln_tau;
        let mut first = self.slope * tau + self.logarithm;
        let mut second = -self.logarithm;
        for [n, t] in &self.powers {
            let y = n * (t * ln_tau).exp();
            value += y;
            first += t * y;
            second += t * (t - 1.0) * y;
        }
        for [n, t, c, d] in &self.oscillators {
            let z = t * tau;
            let e = c * (-z).exp();
            let sum = d + e;
            let share = e / sum;
            if VALUE {
                value += n * sum.ln();
            }
            first -= n * z * share;
            second += n * z * z * share * (d / sum);
        }
        if !VALUE {
            value = 0.0;
        }
        IdealValues { value, first, second }
    }
}
