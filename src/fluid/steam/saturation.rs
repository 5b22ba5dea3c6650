//! The saturation line (region 4) and the boundary between regions 2 and 3.
//!
//! Source: IAPWS R7-97(2012), eqs. (5), (6), (29) to (31). Both directions of the saturation line
//! are explicit roots of one equation, quadratic in each variable, so they invert each other.

use super::tables::{BOUNDARY_23, SATURATION};

/// Saturation pressure (Pa) at `t` (K) and dp/dT (Pa/K), eq. (30).
pub(super) fn pressure(t: f64) -> (f64, f64) {
    let [n1, n2, n3, n4, n5, n6, n7, n8, n9, n10] = SATURATION;
    let theta = t + n9 / (t - n10);
    let a = (theta + n1) * theta + n2;
    let b = (n3 * theta + n4) * theta + n5;
    let c = (n6 * theta + n7) * theta + n8;
    let beta = 2.0 * c / (-b + (b * b - 4.0 * a * c).sqrt());
    let beta2 = beta * beta;
    (beta2 * beta2 * 1e6, 4e6 * beta2 * beta * slope(beta, theta, t))
}

/// Saturation temperature (K) at `p` (Pa) and dT/dp (K/Pa), eq. (31).
pub(super) fn temperature(p: f64) -> (f64, f64) {
    let [n1, n2, n3, n4, n5, n6, n7, n8, n9, n10] = SATURATION;
    let beta2 = (p * 1e-6).sqrt();
    let beta = beta2.sqrt();
    let e = beta2 + n3 * beta + n6;
    let f = n1 * beta2 + n4 * beta + n7;
    let g = n2 * beta2 + n5 * beta + n8;
    let theta = 2.0 * g / (-f - (f * f - 4.0 * e * g).sqrt());
    let sum = n10 + theta;
    let t = 0.5 * (sum - (sum * sum - 4.0 * (n9 + n10 * theta)).sqrt());
    (t, 1.0 / (4e6 * beta2 * beta * slope(beta, theta, t)))
}

/// dβ/dT along eq. (29), the implicit quadratic equation, with θ(T) of eq. (29b).
fn slope(beta: f64, theta: f64, t: f64) -> f64 {
    let [n1, n2, n3, n4, n5, n6, n7, _, n9, n10] = SATURATION;
    let by_beta = 2.0 * beta * ((theta + n1) * theta + n2) + (n3 * theta + n4) * theta + n5;
    let by_theta = beta * (beta * (2.0 * theta + n1) + 2.0 * n3 * theta + n4) + 2.0 * n6 * theta + n7;
    let distance = t - n10;
    -by_theta / by_beta * (1.0 - n9 / (distance * distance))
}

/// Pressure (Pa) on the boundary between regions 2 and 3 at `t` (K), eq. (5).
pub(super) fn boundary_pressure(t: f64) -> f64 {
    let [n1, n2, n3, _, _] = BOUNDARY_23;
    (n1 + (n2 + n3 * t) * t) * 1e6
}

/// Temperature (K) on the boundary between regions 2 and 3 at `p` (Pa), eq. (6).
pub(super) fn boundary_temperature(p: f64) -> f64 {
    let [_, _, n3, n4, n5] = BOUNDARY_23;
    n4 + ((p * 1e-6 - n5) / n3).sqrt()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// R7-97(2012), section 4: p = 16.5291643 MPa at 623.15 K, and back.
    #[test]
    fn boundary_between_regions_2_and_3() {
        assert!((boundary_pressure(623.15) / 16.529_164_3e6 - 1.0).abs() < 5e-9);
        assert!((boundary_temperature(16.529_164_252_6e6) - 623.15).abs() < 1e-8);
        for t in [623.15, 700.0, 863.15] {
            assert!((boundary_temperature(boundary_pressure(t)) - t).abs() < 1e-8);
        }
    }
}
