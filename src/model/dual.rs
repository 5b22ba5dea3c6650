//! A value that carries its gradient: sparse, over variables and sources.

use smallvec::SmallVec;

/// What a gradient entry refers to: a variable of the process or, above the variables, a source.
pub type Slot = u32;

/// Entries that are held without an allocation. What one flow carries has about as many; sums over
/// a region have more, and every figure is as large as this makes it.
const INLINE: usize = 4;

/// A figure and its partial derivatives. Slots may repeat; the entries of a slot add up.
#[derive(Clone, Debug, Default)]
pub struct Dual {
    /// The value, SI.
    pub value: f64,
    /// Partial derivatives.
    pub terms: SmallVec<[(Slot, f64); INLINE]>,
}

impl Dual {
    /// A constant.
    pub fn constant(value: f64) -> Dual {
        Dual { value, terms: SmallVec::new() }
    }

    /// Zero, with room for the entries of a sum of figures of single flows.
    pub fn with_room(flows: usize) -> Dual {
        Dual { value: 0.0, terms: SmallVec::with_capacity(INLINE * flows) }
    }

    /// A slot by itself.
    pub fn slot(slot: Slot, value: f64) -> Dual {
        let mut terms = SmallVec::new();
        terms.push((slot, 1.0));
        Dual { value, terms }
    }

    /// Adds the gradient of another figure, multiplied by a factor, but not its value: the chain rule.
    pub fn follow(&mut self, factor: f64, other: &Dual) {
        self.terms.extend(other.terms.iter().map(|&(s, d)| (s, factor * d)));
    }

    /// Adds `factor · other`.
    pub fn add_scaled(&mut self, factor: f64, other: &Dual) {
        self.value += factor * other.value;
        self.follow(factor, other);
    }

    /// `self · factor`.
    #[must_use]
    pub fn scaled(mut self, factor: f64) -> Dual {
        self.value *= factor;
        for (_, d) in &mut self.terms {
            *d *= factor;
        }
        self
    }

    /// `self + other`.
    #[must_use]
    pub fn plus(mut self, other: &Dual) -> Dual {
        self.add_scaled(1.0, other);
        self
    }

    /// `self − other`.
    #[must_use]
    pub fn minus(mut self, other: &Dual) -> Dual {
        self.add_scaled(-1.0, other);
        self
    }

    /// `self · other`.
    #[must_use]
    pub fn times(&self, other: &Dual) -> Dual {
        let mut out = Dual::constant(self.value * other.value);
        out.follow(other.value, self);
        out.follow(self.value, other);
        out
    }

    /// A function of this figure, by its value and derivative there.
    #[must_use]
    pub fn map(&self, value: f64, derivative: f64) -> Dual {
        let mut out = Dual::constant(value);
        out.follow(derivative, self);
        out
    }

    /// `1 / self`.
    #[must_use]
    pub fn reciprocal(&self) -> Dual {
        let r = 1.0 / self.value;
        self.map(r, -r * r)
    }
}

/// Log-mean of two positive figures, (b − a) / ln(b / a): the entropic mean temperature of a
/// stream of constant heat capacity between `a` and `b`.
pub fn log_mean(a: &Dual, b: &Dual) -> Dual {
    let (x, y) = (a.value, b.value);
    let d = (y - x) / x;
    let (value, da, db) = if d.abs() < 1e-5 {
        // Series about the arithmetic mean: exact to 1e-15 here.
        let mean = 0.5 * (x + y);
        (mean * (1.0 - d * d / 12.0), 0.5, 0.5)
    } else {
        let l = (y / x).ln();
        let value = (y - x) / l;
        (value, (value / x - 1.0) / l, (1.0 - value / y) / l)
    };
    let mut out = Dual::constant(value);
    out.follow(da, a);
    out.follow(db, b);
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn products_follow_the_product_rule() {
        let a = Dual::slot(0, 3.0);
        let b = Dual::slot(1, 4.0);
        let p = a.times(&b);
        assert_eq!(p.value, 12.0);
        assert_eq!(p.terms.as_slice(), [(0, 4.0), (1, 3.0)]);
    }

    #[test]
    fn log_mean_derivatives_match_differences() {
        for (x, y) in [(280.0, 300.0), (300.0, 300.001), (300.0, 300.0), (500.0, 300.0)] {
            let m = |x: f64, y: f64| log_mean(&Dual::constant(x), &Dual::constant(y)).value;
            let g = log_mean(&Dual::slot(0, x), &Dual::slot(1, y));
            let h = 1e-3;
            let dx = (m(x + h, y) - m(x - h, y)) / (2.0 * h);
            let dy = (m(x, y + h) - m(x, y - h)) / (2.0 * h);
            assert!((g.terms[0].1 - dx).abs() < 1e-5 && (g.terms[1].1 - dy).abs() < 1e-5, "{x} {y}");
        }
    }
}
