//! Checks against published values, one file a topic.

mod chemistry;
mod claims;
mod cogeneration;
mod exchanger;
mod exergy;
mod gas;
mod humid_air;
mod identities;
mod kinds;
mod plants;
mod real_fluid;
mod solution;
mod steam;

/// Rows of numbers of a CSV file: lines with # are its citation, the next one its header.
pub fn rows(text: &str) -> Vec<Vec<f64>> {
    text.lines()
        .filter(|line| !line.starts_with('#'))
        .skip(1)
        .map(|line| line.split(',').map(|x| x.parse().unwrap()).collect())
        .collect()
}

/// Derivative by a central difference of fourth order.
pub fn central(x: f64, f: impl Fn(f64) -> f64) -> f64 {
    let h = 1e-4 * x.abs().max(1e-8);
    (8.0 * (f(x + h) - f(x - h)) - (f(x + 2.0 * h) - f(x - 2.0 * h))) / (12.0 * h)
}

/// Reproducible numbers in 0 to 1 (Marsaglia's xorshift, J. Stat. Softw. 8 (2003) 14).
pub struct Random(u64);

impl Random {
    pub fn new(seed: u64) -> Random {
        Random(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15) | 1)
    }

    pub fn next(&mut self) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 >> 11) as f64 / (1u64 << 53) as f64
    }
}
