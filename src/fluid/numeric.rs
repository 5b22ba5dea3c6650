//! Checks of input and the bracketed root finder that several engines share.

use super::PropertyError;

/// Refuses NaN and infinity.
pub(super) fn finite(values: &[f64]) -> Result<(), PropertyError> {
    if values.iter().all(|x| x.is_finite()) { Ok(()) } else { Err(PropertyError::NotFinite) }
}

/// Refuses a value outside [min, max], both included.
pub(super) fn within(
    quantity: &'static str,
    unit: &'static str,
    value: f64,
    (min, max): (f64, f64),
) -> Result<(), PropertyError> {
    if value >= min && value <= max {
        Ok(())
    } else {
        Err(PropertyError::OutOfRange { quantity, unit, value, min, max })
    }
}

/// Root of a falling function on [low, high] by Newton's method kept in its bracket; `f` gives
/// value and slope, and may give an infinity (with any slope) where only the side is known.
pub(super) fn root(
    mut low: f64,
    mut high: f64,
    start: f64,
    f: impl Fn(f64) -> Result<(f64, f64), PropertyError>,
) -> Result<f64, PropertyError> {
    let mut x = start.max(low).min(high);
    for _ in 0..120 {
        let (value, slope) = f(x)?;
        if value > 0.0 {
            low = x;
        } else {
            high = x;
        }
        let step = value / slope;
        let next = x - step;
        if step.abs() <= 1e-13 * x || high - low <= 1e-13 * x {
            return Ok(next.max(low).min(high));
        }
        x = if next > low && next < high { next } else { 0.5 * (low + high) };
    }
    Err(PropertyError::NoConvergence)
}
