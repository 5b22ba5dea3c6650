//! Heat capacity at constant pressure as a function of temperature, with its integrals: the one
//! curve behind ideal and perfect gases, incompressible media and fuels.

use super::{Pair, Phase, PropertyError, State};

/// Standard pressure p° of entropies, Pa.
pub const STANDARD_PRESSURE: f64 = 1e5;
/// Standard temperature of formation data, K.
pub const STANDARD_TEMPERATURE: f64 = 298.15;
/// Molar gas constant of the NASA nine-coefficient set, J/(mol K) (NASA/TP-2002-211556). It is
/// used in every term of the ideal-gas engines, so that one constant closes all identities; it
/// differs from the 2019 SI value by 5.7e-6.
pub const GAS_CONSTANT: f64 = 8.314510;

/// Lowest and highest pressure taken by gases and incompressible media, Pa.
const PRESSURES: (f64, f64) = (1e-3, 1e10);

/// Range of temperature (K) assumed for a heat capacity that is given without one.
pub const ASSUMED_RANGE: (f64, f64) = (200.0, 2500.0);

/// One term c·Tⁿ of a heat capacity.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Term {
    /// c, in the unit of the heat capacity divided by Kⁿ.
    pub coefficient: f64,
    /// n
    pub exponent: f64,
}

/// Heat capacity and its integrals at one temperature, in the curve's unit of amount.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Caloric {
    /// cp, J/K per unit of amount.
    pub cp: f64,
    /// h, J per unit of amount.
    pub h: f64,
    /// s at the standard pressure, J/K per unit of amount.
    pub s: f64,
}

impl Caloric {
    const ZERO: Caloric = Caloric { cp: 0.0, h: 0.0, s: 0.0 };
}

/// One temperature interval: cp = Σ aᵢ T^(i−2), i = 0..6, plus terms of other powers.
#[derive(Clone, Debug, PartialEq)]
struct Segment {
    t_max: f64,
    a: [f64; 7],
    b: [f64; 2],
    extra: Vec<Term>,
}

impl Segment {
    fn at(&self, t: f64) -> Caloric {
        const THIRD: f64 = 1.0 / 3.0;
        let [a0, a1, a2, a3, a4, a5, a6] = self.a;
        let inv = 1.0 / t;
        let ln = t.ln();
        let mut out = Caloric {
            cp: inv * (a1 + inv * a0) + a2 + t * (a3 + t * (a4 + t * (a5 + t * a6))),
            h: a1 * ln - a0 * inv
                + t * (a2 + t * (a3 * 0.5 + t * (a4 * THIRD + t * (a5 * 0.25 + t * (a6 * 0.2)))))
                + self.b[0],
            s: a2 * ln - inv * (a1 + inv * (a0 * 0.5))
                + t * (a3 + t * (a4 * 0.5 + t * (a5 * THIRD + t * (a6 * 0.25))))
                + self.b[1],
        };
        for term in &self.extra {
            let power = term.coefficient * t.powf(term.exponent);
            out.cp += power;
            out.h += power * t / (term.exponent + 1.0);
            out.s += power / term.exponent;
        }
        out
    }
}

/// Nine coefficients over one temperature interval, in the form of NASA/TP-2002-211556 but
/// already multiplied by the gas constant.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NineCoefficients {
    /// Upper end of the interval, K.
    pub t_max: f64,
    /// a₁ … a₇ (cp = Σ aᵢ T^(i−3)).
    pub a: [f64; 7],
    /// Integration constants of h and s.
    pub b: [f64; 2],
}

/// A piecewise heat-capacity curve over a range of temperature, with h and s.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    t_min: f64,
    t_max: f64,
    segments: Vec<Segment>,
    lowest_cp: f64,
    ends: (Caloric, Caloric),
}

/// A heat capacity with its integrals over a range of temperature; h and s rise with T.
pub trait Calorics {
    /// Lowest and highest temperature, K.
    fn range(&self) -> (f64, f64);

    /// cp, h and s at `t` without a check of the range (the nearest interval is used).
    fn at(&self, t: f64) -> Caloric;

    /// The figures at the lowest and at the highest temperature.
    fn ends(&self) -> (Caloric, Caloric) {
        let (low, high) = self.range();
        (self.at(low), self.at(high))
    }

    /// Temperature (K) at which the enthalpy is `h`.
    ///
    /// # Errors
    /// `h` outside what the range of temperature reaches.
    fn temperature_of_enthalpy(&self, h: f64) -> Result<f64, PropertyError> {
        let (t_min, t_max) = self.range();
        let (low, high) = self.ends();
        let (low, high) = (low.h, high.h);
        check_reached("enthalpy", "J/kg", h, low, high)?;
        if h <= low || h >= high {
            return Ok(if h <= low { t_min } else { t_max });
        }
        let share = (h - low) / (high - low);
        solve_rising((t_min, t_max), t_min + share * (t_max - t_min), |t| {
            let value = self.at(t);
            (value.h - h, value.cp)
        })
    }

    /// Temperature (K) at which the entropy at the standard pressure is `s`.
    ///
    /// # Errors
    /// `s` outside what the range of temperature reaches.
    fn temperature_of_entropy(&self, s: f64) -> Result<f64, PropertyError> {
        let (t_min, t_max) = self.range();
        let (low, high) = self.ends();
        let (low, high) = (low.s, high.s);
        check_reached("entropy at 1 bar", "J/(kg K)", s, low, high)?;
        if s <= low || s >= high {
            return Ok(if s <= low { t_min } else { t_max });
        }
        let share = (s - low) / (high - low);
        solve_rising((t_min, t_max), t_min * (t_max / t_min).powf(share), |t| {
            let value = self.at(t);
            (value.s - s, value.cp / t)
        })
    }
}

/// Refuses a target outside the values at the two ends, which themselves must come back in spite
/// of rounding.
fn check_reached(
    quantity: &'static str,
    unit: &'static str,
    target: f64,
    low: f64,
    high: f64,
) -> Result<(), PropertyError> {
    let slack = 1e-12 * (low.abs() + high.abs());
    in_range(quantity, unit, target, low - slack, high + slack)
}

/// The root of a rising function of temperature by Newton's method inside a shrinking bracket;
/// `gap` gives value and slope, and is negative at the lower end and positive at the upper.
fn solve_rising(
    (mut below, mut above): (f64, f64),
    start: f64,
    gap: impl Fn(f64) -> (f64, f64),
) -> Result<f64, PropertyError> {
    let mut t = start;
    for _ in 0..120 {
        let (value, slope) = gap(t);
        if value > 0.0 {
            above = t;
        } else {
            below = t;
        }
        let newton = t - value / slope;
        let inside = newton >= below && newton <= above;
        if inside && (newton - t).abs() <= 1e-9 * t {
            // Quadratic convergence: the step after this one is below rounding.
            return Ok(newton);
        }
        t = if inside { newton } else { 0.5 * (below + above) };
        if above - below <= 4.0 * f64::EPSILON * above {
            return Ok(t);
        }
    }
    Err(PropertyError::NoConvergence)
}

impl Calorics for Curve {
    fn range(&self) -> (f64, f64) {
        (self.t_min, self.t_max)
    }

    fn at(&self, t: f64) -> Caloric {
        self.segment(t).map_or(Caloric::ZERO, |s| s.at(t))
    }

    fn ends(&self) -> (Caloric, Caloric) {
        self.ends
    }
}

impl Curve {
    fn checked(t_min: f64, segments: Vec<Segment>) -> Option<Curve> {
        let last = segments.last()?;
        let t_max = last.t_max;
        let rising = segments.windows(2).all(|w| matches!(w, [a, b] if a.t_max < b.t_max));
        let first_above = segments.first().is_some_and(|s| s.t_max > t_min);
        if !(t_min >= 1.0 && t_max <= 1e5 && rising && first_above) {
            return None;
        }
        let mut curve =
            Curve { t_min, t_max, lowest_cp: f64::INFINITY, ends: (Caloric::ZERO, Caloric::ZERO), segments };
        // A heat capacity must be positive over its whole range, or h(T) has no inverse.
        let samples = 400;
        for i in 0..=samples {
            let t = t_min + (t_max - t_min) * f64::from(i) / f64::from(samples);
            let value = curve.at(t);
            if !(value.cp > 0.0 && value.cp.is_finite() && value.h.is_finite() && value.s.is_finite()) {
                return None;
            }
            curve.lowest_cp = curve.lowest_cp.min(value.cp);
        }
        curve.ends = (curve.at(t_min), curve.at(t_max));
        Some(curve)
    }

    /// A curve from nine-coefficient intervals in rising order; `None` where they are not in
    /// order, not finite, or give a heat capacity that is not positive.
    pub fn from_intervals(t_min: f64, intervals: &[NineCoefficients]) -> Option<Curve> {
        let segments =
            intervals.iter().map(|i| Segment { t_max: i.t_max, a: i.a, b: i.b, extra: Vec::new() }).collect();
        Curve::checked(t_min, segments)
    }

    /// A curve from cp = Σ c·Tⁿ between `t_min` and `t_max` (K), with h and s given at 298.15 K.
    /// `None` where a figure is not finite or the heat capacity is not positive over the range.
    pub fn from_terms(
        terms: &[Term],
        t_min: f64,
        t_max: f64,
        h_standard: f64,
        s_standard: f64,
    ) -> Option<Curve> {
        let mut segment = Segment { t_max, a: [0.0; 7], b: [0.0; 2], extra: Vec::new() };
        for term in terms {
            let slot = segment.a.iter_mut().zip(-2i8..).find(|(_, n)| f64::from(*n) == term.exponent);
            match slot {
                Some((a, _)) => *a += term.coefficient,
                None => segment.extra.push(*term),
            }
        }
        let at = segment.at(STANDARD_TEMPERATURE);
        segment.b = [h_standard - at.h, s_standard - at.s];
        Curve::checked(t_min, vec![segment])
    }

    /// Σ wᵢ·curveᵢ over the range that all share; `None` where there is none, or the sum has no
    /// positive heat capacity.
    pub fn weighted(parts: &[(&Curve, f64)]) -> Option<Curve> {
        let (t_min, segments) = Curve::checked_sum(parts)?;
        if !parts.iter().all(|(_, weight)| *weight > 0.0 && weight.is_finite()) {
            return Curve::checked(t_min, segments);
        }
        // Sums of positive heat capacities are positive, and no lower than the sum of the lowest.
        let t_max = segments.last()?.t_max;
        let lowest_cp = parts.iter().map(|(curve, weight)| weight * curve.lowest_cp).sum();
        let mut curve = Curve { t_min, t_max, lowest_cp, ends: (Caloric::ZERO, Caloric::ZERO), segments };
        curve.ends = (curve.at(t_min), curve.at(t_max));
        Some(curve)
    }

    fn checked_sum(parts: &[(&Curve, f64)]) -> Option<(f64, Vec<Segment>)> {
        let t_min = parts.iter().map(|(c, _)| c.t_min).fold(0.0, f64::max);
        let t_max = parts.iter().map(|(c, _)| c.t_max).fold(f64::INFINITY, f64::min);
        if parts.is_empty() || t_min >= t_max {
            return None;
        }
        let mut ends: Vec<f64> = parts.iter().flat_map(|(c, _)| c.segments.iter().map(|s| s.t_max)).collect();
        ends.retain(|&t| t > t_min && t <= t_max);
        ends.push(t_max);
        ends.sort_by(f64::total_cmp);
        ends.dedup();
        let mut from = t_min;
        let mut segments = Vec::with_capacity(ends.len());
        for end in ends {
            let middle = 0.5 * (from + end);
            let mut sum = Segment { t_max: end, a: [0.0; 7], b: [0.0; 2], extra: Vec::new() };
            for (curve, weight) in parts {
                let part = curve.segment(middle)?;
                for (to, a) in sum.a.iter_mut().zip(&part.a) {
                    *to += weight * a;
                }
                for (to, b) in sum.b.iter_mut().zip(&part.b) {
                    *to += weight * b;
                }
                sum.extra.extend(
                    part.extra
                        .iter()
                        .map(|t| Term { coefficient: weight * t.coefficient, exponent: t.exponent }),
                );
            }
            segments.push(sum);
            from = end;
        }
        Some((t_min, segments))
    }

    /// The same curve with constants added to h and s.
    #[must_use]
    pub fn shifted(&self, h: f64, s: f64) -> Curve {
        let mut out = self.clone();
        for segment in &mut out.segments {
            segment.b[0] += h;
            segment.b[1] += s;
        }
        for end in [&mut out.ends.0, &mut out.ends.1] {
            end.h += h;
            end.s += s;
        }
        out
    }

    fn segment(&self, t: f64) -> Option<&Segment> {
        self.segments.iter().find(|s| t <= s.t_max).or(self.segments.last())
    }

    /// The lowest heat capacity over the range.
    pub fn lowest_heat_capacity(&self) -> f64 {
        self.lowest_cp
    }

    /// cp, h and s at `t` (K).
    ///
    /// # Errors
    /// `t` outside the range or not finite.
    pub fn try_at(&self, t: f64) -> Result<Caloric, PropertyError> {
        in_range("temperature", "K", t, self.t_min, self.t_max)?;
        Ok(self.at(t))
    }
}

/// Refuses a figure that is not finite or outside its range.
pub(crate) fn in_range(
    quantity: &'static str,
    unit: &'static str,
    value: f64,
    min: f64,
    max: f64,
) -> Result<(), PropertyError> {
    if !value.is_finite() {
        return Err(PropertyError::NotFinite);
    }
    if value < min || value > max {
        return Err(PropertyError::OutOfRange { quantity, unit, value, min, max });
    }
    Ok(())
}

/// Refuses a pressure (Pa) outside what gases and incompressible media take.
pub(crate) fn check_pressure(p: f64) -> Result<(), PropertyError> {
    in_range("pressure", "Pa", p, PRESSURES.0, PRESSURES.1)
}

/// The pairs of coordinates that fix a gas or an incompressible medium.
pub(crate) fn supports(pair: Pair) -> bool {
    matches!(
        pair,
        Pair::PressureTemperature | Pair::PressureEnthalpy | Pair::PressureEntropy | Pair::EnthalpyEntropy
    )
}

/// The state of a gas with p v = `r` T at (T, p), both in range.
fn gas_at(calorics: &impl Calorics, r: f64, t: f64, p: f64) -> State {
    let value = calorics.at(t);
    let v_t = r / p;
    let v = v_t * t;
    let s = value.s - r * (p / STANDARD_PRESSURE).ln();
    State::one_phase(t, p, value.h, s, v, Phase::Vapour, value.cp, v_t, -v / p)
}

/// The state of a gas that follows p v = `r` T (J/(kg K)) with calorics per kilogram, entropies at
/// 1 bar, at a pair (p, T), (p, h), (p, s) or (h, s).
///
/// # Errors
/// As [`super::Engine::state`].
pub(crate) fn gas_state(
    calorics: &impl Calorics,
    r: f64,
    pair: Pair,
    a: f64,
    b: f64,
) -> Result<State, PropertyError> {
    if !(a.is_finite() && b.is_finite()) {
        return Err(PropertyError::NotFinite);
    }
    let (t, p) = match pair {
        Pair::PressureTemperature => {
            let (low, high) = calorics.range();
            in_range("temperature", "K", b, low, high)?;
            (b, a)
        }
        Pair::PressureEnthalpy => (calorics.temperature_of_enthalpy(b)?, a),
        Pair::PressureEntropy => {
            check_pressure(a)?;
            (calorics.temperature_of_entropy(b + r * (a / STANDARD_PRESSURE).ln())?, a)
        }
        Pair::EnthalpyEntropy => {
            let t = calorics.temperature_of_enthalpy(a)?;
            (t, STANDARD_PRESSURE * ((calorics.at(t).s - b) / r).exp())
        }
        other => return Err(PropertyError::UnsupportedPair(other)),
    };
    if p.is_infinite() {
        // The entropy asks for a pressure beyond any number.
        return Err(PropertyError::OutOfRange {
            quantity: "entropy",
            unit: "J/(kg K)",
            value: b,
            min: gas_at(calorics, r, t, PRESSURES.1).entropy,
            max: gas_at(calorics, r, t, PRESSURES.0).entropy,
        });
    }
    check_pressure(p)?;
    Ok(gas_at(calorics, r, t, p))
}
