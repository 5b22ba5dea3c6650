//! From the text of a quantity to its SI value.

use super::dimension::Dimension;
use super::number::{self, Decimal};
use super::uncertainty::Uncertainty;
use super::unit::{self, Currency, Reference, Scale, shown, with_article};
use crate::diagnostic::{Code, Diagnostic};

/// Which values a field can hold.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Bounds {
    /// A value of something real: temperatures above 0 K, absolute pressures above vacuum.
    Physical,
    /// Any finite number, for the ends of an instrument's range.
    Finite,
}

/// A number with its unit, read but not yet bound to a place in a document.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Literal<'a> {
    /// What it measures.
    pub dimension: Dimension,
    /// The value in SI units; a gauge pressure as gauge.
    pub value: f64,
    /// Half a unit of the last written digit, in SI units.
    pub half_digit: f64,
    /// What its unit means.
    pub scale: Scale,
    /// The digits as written.
    pub number: &'a str,
}

/// A quantity of a description: a value in SI units with all that was said about it.
#[derive(Clone, Debug, PartialEq)]
pub struct Quantity {
    /// What it measures.
    pub dimension: Dimension,
    /// The value in SI units ([`Dimension::si_unit`]); a gauge pressure is still gauge.
    pub value: f64,
    /// What its unit means; `scale.reference` tells gauge from absolute and normal from actual.
    pub scale: Scale,
    /// The stated uncertainty, in SI units; `None` where nothing was stated.
    pub uncertainty: Option<Uncertainty>,
    /// Half the resolution, in SI units: half a unit of the last written digit, or half of the
    /// stated `resolution`.
    pub half_digit: f64,
    /// The digits as written: `4.80` is not `4.8`.
    pub number: String,
    /// Number and unit as written.
    pub text: String,
    /// The calibration group whose error this value shares.
    pub calibration: Option<String>,
    /// JSON Pointer of the value in the document.
    pub pointer: String,
}

impl Quantity {
    /// What a pressure or a gas volume is referred to.
    pub fn reference(&self) -> Reference {
        self.scale.reference
    }

    /// The currency of a price or a sum of money.
    pub fn currency(&self) -> Option<Currency> {
        self.scale.currency
    }

    /// The stated standard uncertainty in SI units, if any.
    pub fn u(&self) -> Option<f64> {
        self.uncertainty.map(|u| u.u)
    }
}

/// Reads a text such as `"150 degC"`; a plain number is complete for a dimensionless quantity.
///
/// # Errors
/// A [`Diagnostic`] with an empty pointer.
pub fn read_text(text: &str, dimension: Dimension, bounds: Bounds) -> Result<Literal<'_>, Diagnostic> {
    let (number, unit) = number::split(text)?;
    if unit.is_empty() {
        return bare(number, dimension);
    }
    with_unit(number, unit, dimension, bounds).map_err(|fault| {
        if !(unit.contains('±') || unit.contains("+/-")) {
            return fault;
        }
        Diagnostic::new(
            Code::BadQuantity,
            "",
            format!("\"{}\" has an uncertainty within the text", shown(text)),
        )
        .hint("write {\"value\": 150, \"unit\": \"degC\", \"uncertainty\": \"±0.5 K\"}")
    })
}

/// Reads a number given apart from its unit, as an object gives it.
///
/// # Errors
/// A [`Diagnostic`] with an empty pointer.
pub fn read_number<'a>(
    number: &'a str,
    unit: &str,
    dimension: Dimension,
    bounds: Bounds,
) -> Result<Literal<'a>, Diagnostic> {
    with_unit(whole(number)?, unit, dimension, bounds)
}

/// Reads a number without a unit, which only a dimensionless quantity can do without.
///
/// # Errors
/// [`Code::BareNumber`] for any other dimension, with an empty pointer.
pub fn read_bare(number: &str, dimension: Dimension) -> Result<Literal<'_>, Diagnostic> {
    bare(whole(number)?, dimension)
}

/// Reads a `resolution`: a number in the object's own unit, or a text with a unit of difference.
/// Returns half of it, in SI units.
///
/// # Errors
/// A [`Diagnostic`] with an empty pointer.
pub fn read_resolution(text: &str, dimension: Dimension, scale: &Scale) -> Result<f64, Diagnostic> {
    let (number, unit) = number::split(text)?;
    let full = if unit.is_empty() {
        number.value * scale.scale
    } else {
        with_unit(number, unit, dimension.difference(), Bounds::Finite)?.value
    };
    if full >= 0.0 && full.is_finite() {
        Ok(full / 2.0)
    } else {
        Err(Diagnostic::new(
            Code::OutOfBounds,
            "",
            format!("the resolution is {}; it cannot be negative", shown(text)),
        ))
    }
}

/// The largest magnitude that is taken, in SI units: far beyond anything real, and small enough that
/// no product or square of figures overflows, which a report could not show.
pub(super) const LARGEST: f64 = 1e30;
/// The smallest magnitude but zero that is taken, in SI units, for the same reason.
const SMALLEST: f64 = 1e-30;

fn whole(text: &str) -> Result<Decimal<'_>, Diagnostic> {
    match number::split(text)? {
        (number, "") => Ok(number),
        _ => Err(Diagnostic::new(Code::BadNumber, "", format!("\"{}\" is not a number", shown(text)))),
    }
}

fn bare(number: Decimal<'_>, dimension: Dimension) -> Result<Literal<'_>, Diagnostic> {
    if dimension.is_dimensionless() {
        return with_unit(number, "1", dimension, Bounds::Physical);
    }
    Err(Diagnostic::new(
        Code::BareNumber,
        "",
        format!("{} has no unit; {} is expected", shown(number.text), with_article(dimension)),
    )
    .hint(format!("write the unit with the number, for instance \"{}\"", dimension.example())))
}

fn with_unit<'a>(
    number: Decimal<'a>,
    unit: &str,
    dimension: Dimension,
    bounds: Bounds,
) -> Result<Literal<'a>, Diagnostic> {
    let scale = unit::find(unit, dimension)?;
    let value = scale.to_si(number.value);
    let tiny = value.abs() < SMALLEST && number.value != 0.0 && scale.offset == 0.0;
    if value.is_nan() || value.abs() > LARGEST || tiny {
        let size = if tiny { "small" } else { "large" };
        return Err(Diagnostic::new(
            Code::BadNumber,
            "",
            format!("{} {} is too {size} to be computed with", shown(number.text), shown(unit)),
        ));
    }
    if bounds == Bounds::Physical {
        let what = match dimension {
            // -273.15 degC and -459.67 degF are 0 K up to rounding.
            Dimension::Temperature if value <= 1e-9 => Some("0 K"),
            Dimension::Pressure if scale.reference == Reference::Absolute && value <= 0.0 => {
                Some("absolute vacuum")
            }
            _ => None,
        };
        if let Some(what) = what {
            let fault = Diagnostic::new(
                Code::BelowAbsoluteZero,
                "",
                format!("{} {} is at or below {what}", shown(number.text), shown(unit)),
            );
            return Err(if dimension == Dimension::Pressure {
                fault.hint("write a gauge pressure with (g): \"-0.2 bar(g)\"")
            } else {
                fault
            });
        }
    }
    Ok(Literal {
        dimension,
        value,
        half_digit: number.half_digit * scale.scale.abs(),
        scale,
        number: number.text,
    })
}
