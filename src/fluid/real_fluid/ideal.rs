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

#[cfg(test)]
mod tests {
    use crate::fluid::real_fluid::catalogue;

    #[test]
    fn derivatives_are_those_of_the_function() {
        for fluid in catalogue() {
            let ideal = &fluid.model.ideal;
            for tau in [0.3, 0.7, 1.0, 1.7, 3.0] {
                let h = 1e-5;
                let (up, at, down) =
                    (ideal.values(tau * (1.0 + h)), ideal.values(tau), ideal.values(tau * (1.0 - h)));
                let first = (up.value - down.value) / (2.0 * h);
                let second = (up.first - down.first) / (2.0 * h) - at.first;
                assert!((first - at.first).abs() < 1e-7 * (1.0 + at.first.abs()), "{} {tau}", fluid.name());
                assert!(
                    (second - at.second).abs() < 1e-6 * (1.0 + at.second.abs()),
                    "{} {tau}",
                    fluid.name()
                );
                let short = ideal.derivatives(tau);
                assert!(short.first == at.first && short.second == at.second);
            }
        }
    }

    /// Ideal-gas heat capacities at 298.15 K in units of R: common knowledge to two digits, so that
    /// a slip in one of the published forms shows.
    #[test]
    fn heat_capacities_are_known() {
        for (name, ratio) in [
            ("argon", 2.5),
            ("helium", 2.5),
            ("nitrogen", 3.503),
            ("oxygen", 3.534),
            ("hydrogen", 3.468),
            ("carbon monoxide", 3.505),
            ("carbon dioxide", 4.466),
            ("ammonia", 4.29),
            ("methane", 4.29),
            ("methanol", 5.3),
            ("propane", 8.85),
            ("R22", 6.7),
        ] {
            let fluid = crate::fluid::real_fluid::by_name(name).unwrap();
            let own = fluid.ideal_part(298.15).heat_capacity / fluid.model.r;
            assert!((own / ratio - 1.0).abs() < 0.012, "{name}: {own}");
        }
        assert!(catalogue().iter().all(|f| f.ideal_part(300.0).heat_capacity > 2.4 * f.model.r));
    }
}
