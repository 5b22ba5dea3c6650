//! Looking up what a unit's text means where a certain dimension is expected.

use std::collections::HashMap;
use std::fmt;
use std::sync::OnceLock;

use super::dimension::Dimension;
use super::table;
use crate::diagnostic::{Code, Diagnostic, nearest};

/// What a pressure or a gas volume is referred to.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Reference {
    /// The unit needs no reference.
    None,
    /// Pressure above vacuum.
    Absolute,
    /// Pressure above the barometric pressure.
    Gauge,
    /// Volume at the flow's own temperature and pressure.
    Actual,
    /// Volume at 0 degC and 101.325 kPa.
    Normal,
    /// Volume at 15 degC and 101.325 kPa.
    Standard,
    /// Volume at 60 degF and 14.696 psi, as `scfm` counts it.
    StandardCubicFoot,
}

impl Reference {
    /// The word for the catalogue; empty where the unit needs no reference.
    pub const fn text(self) -> &'static str {
        match self {
            Reference::None => "",
            Reference::Absolute => "absolute",
            Reference::Gauge => "gauge",
            Reference::Actual => "actual",
            Reference::Normal => "normal: 0 degC, 101.325 kPa",
            Reference::Standard => "standard: 15 degC, 101.325 kPa",
            Reference::StandardCubicFoot => "standard: 60 degF, 14.696 psi",
        }
    }

    /// Temperature (K) and pressure (Pa) at which a gas volume is counted; `None` for the actual
    /// volume and for pressures. Sources: ISO 13443 for 15 degC, DIN 1343 for 0 degC; 60 degF and
    /// 14.696 psi is common practice in the United States.
    pub fn conditions(self) -> Option<(f64, f64)> {
        match self {
            Reference::Normal => Some((273.15, 101_325.0)),
            Reference::Standard => Some((288.15, 101_325.0)),
            // 60 degF = 519.67 R; 14.696 psi with 1 psi = 6894.757293168 Pa.
            Reference::StandardCubicFoot => Some((519.67 / 1.8, 14.696 * 6_894.757_293_168_361)),
            Reference::None | Reference::Absolute | Reference::Gauge | Reference::Actual => None,
        }
    }
}

/// One row of the table of units. A value in SI is `value * scale + offset`.
#[derive(Clone, Copy, Debug)]
pub struct Unit {
    /// What it can measure.
    pub dimensions: &'static [Dimension],
    /// The spellings; the first is the one that reports use.
    pub spellings: &'static [&'static str],
    /// SI units in one of this unit.
    pub scale: f64,
    /// The SI value of this unit's zero.
    pub offset: f64,
    /// What a pressure or a gas volume is referred to.
    pub reference: Reference,
    /// Where the factor is from.
    pub source: &'static str,
}

impl Unit {
    /// The preferred spelling.
    pub fn code(&self) -> &'static str {
        self.spellings.first().copied().unwrap_or_default()
    }
}

/// Every unit, in the order of the table, for the catalogue.
pub fn catalogue() -> impl Iterator<Item = &'static Unit> {
    table::rows()
}

/// A currency: three capital letters, otherwise opaque.
#[derive(Clone, Copy, PartialEq, Eq, Hash)]
pub struct Currency([u8; 3]);

impl Currency {
    /// Reads three capital letters, for instance `EUR`.
    pub fn read(text: &str) -> Option<Currency> {
        match *text.as_bytes() {
            [a, b, c] if [a, b, c].iter().all(u8::is_ascii_uppercase) => Some(Currency([a, b, c])),
            _ => None,
        }
    }

    /// The three letters.
    pub fn as_str(&self) -> &str {
        std::str::from_utf8(&self.0).unwrap_or_default()
    }
}

impl fmt::Debug for Currency {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.as_str())
    }
}

/// What a unit's text means for one dimension. A value in SI is `value * scale + offset`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Scale {
    /// Preferred spelling of the unit; for a price, of what is paid for.
    pub code: &'static str,
    /// SI units in one of this unit.
    pub scale: f64,
    /// The SI value of this unit's zero.
    pub offset: f64,
    /// What a pressure or a gas volume is referred to.
    pub reference: Reference,
    /// The currency of a price.
    pub currency: Option<Currency>,
}

impl Scale {
    fn of(unit: &'static Unit) -> Scale {
        Scale {
            code: unit.code(),
            scale: unit.scale,
            offset: unit.offset,
            reference: unit.reference,
            currency: None,
        }
    }

    /// The SI value of `value` of this unit.
    pub fn to_si(&self, value: f64) -> f64 {
        value * self.scale + self.offset
    }

    /// The value in this unit of an SI value.
    pub fn from_si(&self, si: f64) -> f64 {
        (si - self.offset) / self.scale
    }

    /// An uncertainty or another difference of SI values, in this unit.
    pub fn difference_from_si(&self, si: f64) -> f64 {
        si / self.scale
    }
}

struct Index {
    by_spelling: HashMap<&'static str, Vec<&'static Unit>>,
    by_normal_form: HashMap<String, Vec<&'static Unit>>,
}

fn index() -> &'static Index {
    static INDEX: OnceLock<Index> = OnceLock::new();
    INDEX.get_or_init(|| {
        let mut index = Index { by_spelling: HashMap::new(), by_normal_form: HashMap::new() };
        for unit in table::rows() {
            for spelling in unit.spellings {
                index.by_spelling.entry(spelling).or_default().push(unit);
                let slot = index.by_normal_form.entry(normal_form(spelling)).or_default();
                if !slot.iter().any(|u| std::ptr::eq(*u, unit)) {
                    slot.push(unit);
                }
            }
        }
        index
    })
}

/// Brings the spellings of one unit together: `kJ/(kg·K)`, `kJ/kg/K`, `kJ/kg K` and `kJ.kg-1.K-1`
/// all become `kJ/kg/K`; `bar (g)` becomes `barg`; `m³` and `m^3` become `m3`.
fn normal_form(text: &str) -> String {
    let mut above = String::with_capacity(text.len());
    let mut below = String::new();
    let mut token = String::new();
    let mut under = false;
    let mut flush = |token: &mut String, under: bool| {
        let inverse = token.find('-').filter(|&i| i > 0);
        match inverse {
            Some(at) if !under => {
                below.push('/');
                below.push_str(&token[..at]);
                if &token[at + 1..] != "1" {
                    below.push_str(&token[at + 1..]);
                }
            }
            _ if token.is_empty() => {}
            _ if under => {
                below.push('/');
                below.push_str(token);
            }
            _ => above.push_str(token),
        }
        token.clear();
    };
    for c in text.chars() {
        match c {
            '/' => {
                flush(&mut token, under);
                under = true;
            }
            '·' | '⋅' | '×' | '*' | '.' => flush(&mut token, under),
            c if c.is_whitespace() => flush(&mut token, under),
            // A parenthesis groups (`/(kg K)`) or marks (`bar(g)`); both read the same without it.
            '(' | ')' | '^' => {}
            '°' | 'º' => token.push_str("deg"),
            '℃' => token.push_str("degC"),
            '℉' => token.push_str("degF"),
            'Δ' | '∆' => token.push_str("delta"),
            '²' => token.push('2'),
            '³' => token.push('3'),
            c => token.push(c),
        }
    }
    flush(&mut token, under);
    above + &below
}

fn candidates(text: &str) -> &'static [&'static Unit] {
    let index = index();
    if let Some(found) = index.by_spelling.get(text) {
        return found;
    }
    // No spelling is longer than this; a longer text is not worth the work.
    if text.len() > 64 {
        return &[];
    }
    index.by_normal_form.get(&normal_form(text)).map_or(&[], Vec::as_slice)
}

/// At most 40 characters of a user's text, for a message.
pub(super) fn shown(text: &str) -> String {
    match text.char_indices().nth(40) {
        Some((end, _)) => format!("{}…", &text[..end]),
        None => text.to_owned(),
    }
}

/// The dimensions that a unit's text can measure, in the order of the table; empty for an unknown
/// unit. Prices are among them.
pub fn dimensions_of(text: &str) -> Vec<Dimension> {
    let mut found: Vec<Dimension> =
        candidates(text).iter().flat_map(|u| u.dimensions.iter().copied()).collect();
    found.extend(Dimension::ALL.iter().copied().filter(|&d| price(text, d).is_some()));
    found.dedup();
    found
}

/// Reads `EUR/MWh`, `kEUR`, `USD/h`: a currency, with `k` or `M` before it where wished, over what
/// it is paid for.
fn price(text: &str, dimension: Dimension) -> Option<Scale> {
    let per = dimension.per()?;
    let (money, base) = match text.split_once('/') {
        Some((money, base)) => (money.trim(), Some(base.trim())),
        None => (text.trim(), None),
    };
    let (factor, letters) = match money.as_bytes() {
        [b'k', _, _, _] => (1e3, money.get(1..)?),
        [b'M', _, _, _] => (1e6, money.get(1..)?),
        _ => (1.0, money),
    };
    let currency = Some(Currency::read(letters)?);
    match (per, base) {
        (None, None) => {
            Some(Scale { code: "", scale: factor, offset: 0.0, reference: Reference::None, currency })
        }
        (Some(of), Some(base)) => {
            let unit = candidates(base).iter().find(|u| u.dimensions.contains(&of))?;
            Some(Scale { scale: factor / unit.scale, currency, ..Scale::of(unit) })
        }
        _ => None,
    }
}

/// What `text` means where `dimension` is expected.
///
/// # Errors
/// [`Code::UnknownUnit`] with the nearest spellings, or [`Code::WrongDimension`] naming both.
pub fn find(text: &str, dimension: Dimension) -> Result<Scale, Diagnostic> {
    let text = text.trim();
    if dimension.per().is_some() {
        if let Some(scale) = price(text, dimension) {
            return Ok(scale);
        }
    } else if let Some(unit) = candidates(text).iter().find(|u| u.dimensions.contains(&dimension)) {
        return Ok(Scale::of(unit));
    }
    let others = dimensions_of(text);
    if let Some(other) = others.first() {
        let message = if dimension == Dimension::PressureDifference && *other == Dimension::Pressure {
            format!(
                "\"{}\" marks a pressure against a reference; a pressure difference is expected",
                shown(text)
            )
        } else {
            format!(
                "\"{}\" measures {}; {} is expected",
                shown(text),
                with_article(*other),
                with_article(dimension)
            )
        };
        let hint = match (dimension, other) {
            (Dimension::TemperatureDifference, Dimension::Temperature) => {
                "write a temperature difference in K, or as \"delta degC\" or \"delta degF\"".to_owned()
            }
            (Dimension::Temperature, Dimension::TemperatureDifference) => {
                "write the temperature itself, for instance \"150 degC\"".to_owned()
            }
            (Dimension::PressureDifference, Dimension::Pressure) => {
                "leave (a) or (g) out: \"0.3 bar\"".to_owned()
            }
            _ => format!("for instance \"{}\"", dimension.example()),
        };
        return Err(Diagnostic::new(Code::WrongDimension, "", message).hint(hint));
    }
    let spellings =
        table::rows().filter(|u| u.dimensions.contains(&dimension)).flat_map(|u| u.spellings.iter().copied());
    let near = nearest(text, spellings);
    let message = if text.is_empty() {
        format!("the unit is empty; a unit of {} is expected", dimension.name())
    } else {
        format!("\"{}\" is not a known unit of {}", shown(text), dimension.name())
    };
    let otherwise = format!("for instance \"{}\"; GET /v1/units lists the units", dimension.example());
    Err(Diagnostic::new(Code::UnknownUnit, "", message).suggest(&near, &otherwise))
}

pub(super) fn with_article(dimension: Dimension) -> String {
    let name = dimension.name();
    let article = if name.starts_with(['a', 'e', 'i', 'o', 'u']) { "an" } else { "a" };
    format!("{article} {name}")
}
