//! Tolerance classes of industrial thermometers.

/// A tolerance class that stands for an uncertainty: a half width that depends on temperature.
///
/// The tolerances are those of IEC 60751 (platinum resistance thermometers) and IEC 60584-1
/// (thermocouples), quoted from memory.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Instrument {
    name: &'static str,
    /// Least tolerance, K.
    floor: f64,
    /// Part proportional to the size of the Celsius temperature.
    slope: f64,
    law: Law,
    /// Celsius temperatures for which the class is defined.
    range: (f64, f64),
}

/// How the two numbers of a class combine.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Law {
    /// floor + slope |t|
    Sum,
    /// the larger of floor and slope |t|
    Larger,
    /// floor + slope (t - 1100), at least floor: class 1 of types R and S
    Above1100,
}

const fn class(name: &'static str, law: Law, floor: f64, slope: f64, range: (f64, f64)) -> Instrument {
    Instrument { name, floor, slope, law, range }
}

const CLASSES: &[Instrument] = &[
    class("iec-60751-aa", Law::Sum, 0.1, 0.0017, (-50.0, 250.0)),
    class("iec-60751-a", Law::Sum, 0.15, 0.002, (-100.0, 450.0)),
    class("iec-60751-b", Law::Sum, 0.3, 0.005, (-196.0, 600.0)),
    class("iec-60751-c", Law::Sum, 0.6, 0.01, (-196.0, 600.0)),
    class("iec-60584-1-t", Law::Larger, 0.5, 0.004, (-40.0, 350.0)),
    class("iec-60584-1-e", Law::Larger, 1.5, 0.004, (-40.0, 800.0)),
    class("iec-60584-1-j", Law::Larger, 1.5, 0.004, (-40.0, 750.0)),
    class("iec-60584-1-k", Law::Larger, 1.5, 0.004, (-40.0, 1000.0)),
    class("iec-60584-1-n", Law::Larger, 1.5, 0.004, (-40.0, 1000.0)),
    class("iec-60584-1-r", Law::Above1100, 1.0, 0.003, (0.0, 1600.0)),
    class("iec-60584-1-s", Law::Above1100, 1.0, 0.003, (0.0, 1600.0)),
    class("iec-60584-2-t", Law::Larger, 1.0, 0.0075, (-40.0, 350.0)),
    class("iec-60584-2-e", Law::Larger, 2.5, 0.0075, (-40.0, 900.0)),
    class("iec-60584-2-j", Law::Larger, 2.5, 0.0075, (-40.0, 750.0)),
    class("iec-60584-2-k", Law::Larger, 2.5, 0.0075, (-40.0, 1200.0)),
    class("iec-60584-2-n", Law::Larger, 2.5, 0.0075, (-40.0, 1200.0)),
    class("iec-60584-2-r", Law::Larger, 1.5, 0.0025, (0.0, 1600.0)),
    class("iec-60584-2-s", Law::Larger, 1.5, 0.0025, (0.0, 1600.0)),
    class("iec-60584-2-b", Law::Larger, 0.0, 0.0025, (600.0, 1700.0)),
    class("iec-60584-3-t", Law::Larger, 1.0, 0.015, (-200.0, 40.0)),
    class("iec-60584-3-e", Law::Larger, 2.5, 0.015, (-200.0, 40.0)),
    class("iec-60584-3-k", Law::Larger, 2.5, 0.015, (-200.0, 40.0)),
    class("iec-60584-3-n", Law::Larger, 2.5, 0.015, (-200.0, 40.0)),
    class("iec-60584-3-b", Law::Larger, 4.0, 0.005, (600.0, 1700.0)),
];

impl Instrument {
    /// Every class.
    pub fn all() -> &'static [Instrument] {
        CLASSES
    }

    /// The class of this name, in either case, for instance `iec-60751-b` or `IEC-60584-1-K`.
    pub fn find(name: &str) -> Option<&'static Instrument> {
        CLASSES.iter().find(|c| c.name.eq_ignore_ascii_case(name.trim()))
    }

    /// The name.
    pub fn name(&self) -> &'static str {
        self.name
    }

    /// Lowest and highest temperature for which the class is defined, K.
    pub fn range(&self) -> (f64, f64) {
        (self.range.0 + 273.15, self.range.1 + 273.15)
    }

    /// The half width of the tolerance (K) at a temperature (K).
    pub fn tolerance(&self, temperature: f64) -> f64 {
        let celsius = temperature - 273.15;
        match self.law {
            Law::Sum => self.floor + self.slope * celsius.abs(),
            Law::Larger => self.floor.max(self.slope * celsius.abs()),
            Law::Above1100 => self.floor + self.slope * (celsius - 1100.0).max(0.0),
        }
    }
}
