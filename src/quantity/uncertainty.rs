//! How an uncertainty is written, and the standard uncertainty that it means.

use std::fmt;

use super::dimension::Dimension;
use super::instrument::Instrument;
use super::number::{self, Decimal};
use super::read::LARGEST;
use super::unit::{self, Reference, Scale, shown};
use crate::diagnostic::{Code, Diagnostic, nearest};

/// How an uncertainty was read. The report says it, since the forms differ by up to a factor two.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum How {
    /// `"0.5 K"`: a standard uncertainty.
    Standard,
    /// `"1 %"`: a standard uncertainty relative to the value.
    Relative,
    /// An expanded uncertainty, divided by its coverage factor.
    Expanded {
        /// The coverage factor k.
        coverage_factor: f64,
    },
    /// The half width of a rectangular distribution, divided by √3 (JCGM 100:2008, 4.3.7).
    HalfWidth,
    /// A tolerance class, read as the half width of a rectangular distribution.
    Instrument(&'static Instrument),
    /// `u` as a report gives it: a standard uncertainty in the object's own unit.
    Reported,
}

impl fmt::Display for How {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            How::Standard => f.write_str("standard uncertainty"),
            How::Relative => f.write_str("relative standard uncertainty"),
            How::Expanded { coverage_factor } => {
                write!(f, "expanded uncertainty with coverage factor {coverage_factor}")
            }
            How::HalfWidth => f.write_str("half width of a rectangular distribution"),
            How::Instrument(class) => {
                write!(f, "tolerance class {} as half width of a rectangular distribution", class.name())
            }
            How::Reported => f.write_str("standard uncertainty of a reported figure"),
        }
    }
}

/// The size of a standard uncertainty, before the value it belongs to is known.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Amount {
    /// In SI units.
    Absolute(f64),
    /// As a fraction of the value.
    Relative(f64),
    /// By a tolerance class, from the temperature.
    Class(&'static Instrument),
}

/// An uncertainty as it was stated, apart from the value: what a tag carries for its readings.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Spread {
    /// The size of the standard uncertainty.
    pub amount: Amount,
    /// How it was read.
    pub how: How,
}

/// A standard uncertainty of a value.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Uncertainty {
    /// The standard uncertainty, in SI units of the dimension's difference.
    pub u: f64,
    /// How it was read.
    pub how: How,
}

/// The written forms of an uncertainty.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum UncertaintyText<'a> {
    /// A text: `"0.5 K"`, `"1 %"`, `"±0.5 K"`.
    Plain(&'a str),
    /// `{"expanded": "1 K", "coverage_factor": 2}`.
    Expanded(&'a str, f64),
    /// `{"half_width": "0.5 K"}`.
    HalfWidth(&'a str),
    /// `{"instrument": "iec-60751-b"}`.
    Instrument(&'a str),
    /// `"u": 0.5`, in the object's own unit.
    Reported(&'a str),
}

impl Spread {
    /// The standard uncertainty of a value given in SI units.
    pub fn at(&self, value: f64) -> Uncertainty {
        let u = match self.amount {
            Amount::Absolute(u) => u,
            Amount::Relative(fraction) => fraction * value.abs(),
            Amount::Class(class) => class.tolerance(value) / 3_f64.sqrt(),
        };
        Uncertainty { u, how: self.how }
    }

    /// The same, refusing a temperature outside the range for which a tolerance class is defined.
    ///
    /// # Errors
    /// [`Code::BadUncertainty`] with an empty pointer.
    pub fn checked_at(&self, value: f64) -> Result<Uncertainty, Diagnostic> {
        if let Amount::Class(class) = self.amount {
            let (low, high) = class.range();
            // A millikelvin of slack, so that the range's own ends are inside.
            if value < low - 1e-3 || value > high + 1e-3 {
                return Err(Diagnostic::new(
                    Code::BadUncertainty,
                    "",
                    format!(
                        "{} is defined from {:.0} to {:.0} degC, not at {:.1} degC",
                        class.name(),
                        low - 273.15,
                        high - 273.15,
                        value - 273.15
                    ),
                ));
            }
        }
        Ok(self.at(value))
    }

    /// Reads an uncertainty of a quantity of `dimension` that is written in the unit `scale`.
    ///
    /// # Errors
    /// A [`Diagnostic`] with an empty pointer: [`Code::BadUncertainty`], or the fault of the unit.
    pub fn read(
        text: UncertaintyText<'_>,
        dimension: Dimension,
        scale: &Scale,
    ) -> Result<Spread, Diagnostic> {
        match text {
            UncertaintyText::Plain(text) => {
                let stripped = without_sign(text);
                let amount = amount(stripped.unwrap_or(text), dimension, scale)?;
                Ok(match (stripped, amount) {
                    (Some(_), amount) => {
                        Spread { amount: divided(amount, 3_f64.sqrt()), how: How::HalfWidth }
                    }
                    (None, Amount::Relative(_)) => Spread { amount, how: How::Relative },
                    (None, _) => Spread { amount, how: How::Standard },
                })
            }
            UncertaintyText::HalfWidth(text) => {
                let amount = amount(without_sign(text).unwrap_or(text), dimension, scale)?;
                Ok(Spread { amount: divided(amount, 3_f64.sqrt()), how: How::HalfWidth })
            }
            UncertaintyText::Expanded(text, coverage_factor) => {
                if !(0.01..=100.0).contains(&coverage_factor) {
                    let message =
                        format!("the coverage factor is {coverage_factor}; it lies between 0.01 and 100");
                    return Err(bad(message).hint("a coverage factor of 2 stands for about 95 %"));
                }
                let amount = amount(without_sign(text).unwrap_or(text), dimension, scale)?;
                Ok(Spread {
                    amount: divided(amount, coverage_factor),
                    how: How::Expanded { coverage_factor },
                })
            }
            UncertaintyText::Instrument(name) => {
                let Some(class) = Instrument::find(name) else {
                    let near = nearest(name, Instrument::all().iter().map(Instrument::name));
                    let hint = match near.first() {
                        Some(near) => format!("did you mean \"{near}\"?"),
                        None => "known are iec-60751-aa, -a, -b, -c and iec-60584-1-k, -2-k, -3-k with the \
                                 types t, e, j, k, n, r, s, b"
                            .to_owned(),
                    };
                    return Err(bad(format!("\"{}\" is not a known tolerance class", shown(name))).hint(hint));
                };
                if dimension.difference() != Dimension::TemperatureDifference {
                    return Err(bad(format!(
                        "{} is a class of thermometers and does not fit a {dimension}",
                        class.name()
                    )));
                }
                if dimension != Dimension::Temperature {
                    return Err(bad(format!(
                        "the tolerance of {} depends on the temperature and does not fit a difference",
                        class.name()
                    ))
                    .hint("state the uncertainty in K"));
                }
                Ok(Spread { amount: Amount::Class(class), how: How::Instrument(class) })
            }
            UncertaintyText::Reported(text) => match number::split(text)? {
                (number, "") => {
                    let u = not_negative(number, text)? * scale.scale;
                    Ok(Spread { amount: Amount::Absolute(finite(u, text)?), how: How::Reported })
                }
                _ => Err(bad(format!(
                    "\"u\" is \"{}\"; a number in the object's own unit is expected",
                    shown(text)
                ))),
            },
        }
    }
}

fn bad(message: String) -> Diagnostic {
    Diagnostic::new(Code::BadUncertainty, "", message)
}

fn without_sign(text: &str) -> Option<&str> {
    let text = text.trim();
    text.strip_prefix('±').or_else(|| text.strip_prefix("+/-")).or_else(|| text.strip_prefix("+-"))
}

fn divided(amount: Amount, by: f64) -> Amount {
    match amount {
        Amount::Absolute(u) => Amount::Absolute(u / by),
        Amount::Relative(u) => Amount::Relative(u / by),
        Amount::Class(class) => Amount::Class(class),
    }
}

fn not_negative(number: Decimal<'_>, text: &str) -> Result<f64, Diagnostic> {
    if number.value < 0.0 {
        return Err(bad(format!("the uncertainty \"{}\" is negative", shown(text))));
    }
    Ok(number.value)
}

fn finite(u: f64, text: &str) -> Result<f64, Diagnostic> {
    if u <= LARGEST {
        Ok(u)
    } else {
        Err(bad(format!("the uncertainty \"{}\" is too large to be computed with", shown(text))))
    }
}

/// A size with its unit, or a percentage of the value. A percentage is relative for fractions too;
/// percentage points are written `pp`.
fn amount(text: &str, dimension: Dimension, scale: &Scale) -> Result<Amount, Diagnostic> {
    let (number, unit) =
        number::split(text).map_err(|fault| Diagnostic { code: Code::BadUncertainty, ..fault })?;
    let size = not_negative(number, text)?;
    let difference = dimension.difference();
    if matches!(unit, "%" | "percent" | "pct") {
        if scale.offset != 0.0 {
            return Err(bad(format!("a percentage of a temperature in {} means nothing", scale.code))
                .hint("state the uncertainty in K"));
        }
        if scale.reference == Reference::Gauge {
            return Err(bad("a percentage of a gauge pressure means nothing".to_owned())
                .hint("state the uncertainty in a unit of pressure, or the pressure as absolute"));
        }
        return Ok(Amount::Relative(finite(size / 100.0, text)?));
    }
    if unit.is_empty() && !difference.is_dimensionless() {
        return Err(Diagnostic::new(
            Code::BareNumber,
            "",
            format!("the uncertainty {} has no unit", shown(number.text)),
        )
        .hint(format!("write its unit with it, for instance \"0.5 {}\"", difference.si_unit())));
    }
    let own = unit::find(if unit.is_empty() { "1" } else { unit }, difference)?;
    if own.currency != scale.currency {
        return Err(bad(format!(
            "the uncertainty \"{}\" is in another currency than the value",
            shown(text)
        )));
    }
    if difference != Dimension::PressureDifference && own.reference != scale.reference {
        return Err(bad(format!(
            "the uncertainty \"{}\" counts volume at other conditions than the value",
            shown(text)
        ))
        .hint("state it in the unit of the value, or in %"));
    }
    Ok(Amount::Absolute(finite(size * own.scale, text)?))
}
