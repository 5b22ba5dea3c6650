//! Forward differentiation: a value with its derivatives by the three coordinates (p, T, third).

use std::ops::{Add, Div, Mul, Neg, Sub};

/// A value and its gradient with respect to pressure, temperature and one further coordinate.
#[derive(Clone, Copy, Debug)]
pub(super) struct Dual {
    pub v: f64,
    pub d: [f64; 3],
}

impl Dual {
    /// A constant.
    pub const fn constant(v: f64) -> Dual {
        Dual { v, d: [0.0; 3] }
    }

    /// The coordinate with index `i` itself.
    pub fn coordinate(v: f64, i: usize) -> Dual {
        let mut d = [0.0; 3];
        if let Some(slot) = d.get_mut(i) {
            *slot = 1.0;
        }
        Dual { v, d }
    }

    /// A function of this value: its value `v` and its derivative `slope`.
    pub fn chain(self, v: f64, slope: f64) -> Dual {
        Dual { v, d: self.d.map(|d| slope * d) }
    }

    pub fn ln(self) -> Dual {
        self.chain(libm::log(self.v), 1.0 / self.v)
    }

    pub fn exp(self) -> Dual {
        let v = libm::exp(self.v);
        self.chain(v, v)
    }

    pub fn powf(self, exponent: f64) -> Dual {
        let v = libm::pow(self.v, exponent);
        self.chain(v, exponent * v / self.v)
    }

    fn zip(self, other: Dual, v: f64, a: f64, b: f64) -> Dual {
        let [x, y, z] = self.d;
        let [p, q, r] = other.d;
        Dual { v, d: [a * x + b * p, a * y + b * q, a * z + b * r] }
    }
}

impl Add for Dual {
    type Output = Dual;
    fn add(self, o: Dual) -> Dual {
        self.zip(o, self.v + o.v, 1.0, 1.0)
    }
}

impl Sub for Dual {
    type Output = Dual;
    fn sub(self, o: Dual) -> Dual {
        self.zip(o, self.v - o.v, 1.0, -1.0)
    }
}

impl Mul for Dual {
    type Output = Dual;
    fn mul(self, o: Dual) -> Dual {
        self.zip(o, self.v * o.v, o.v, self.v)
    }
}

impl Div for Dual {
    type Output = Dual;
    fn div(self, o: Dual) -> Dual {
        let v = self.v / o.v;
        self.zip(o, v, 1.0 / o.v, -v / o.v)
    }
}

impl Neg for Dual {
    type Output = Dual;
    fn neg(self) -> Dual {
        self.chain(-self.v, -1.0)
    }
}

impl Add<f64> for Dual {
    type Output = Dual;
    fn add(self, o: f64) -> Dual {
        self.chain(self.v + o, 1.0)
    }
}

impl Sub<f64> for Dual {
    type Output = Dual;
    fn sub(self, o: f64) -> Dual {
        self.chain(self.v - o, 1.0)
    }
}

impl Mul<f64> for Dual {
    type Output = Dual;
    fn mul(self, o: f64) -> Dual {
        self.chain(self.v * o, o)
    }
}
