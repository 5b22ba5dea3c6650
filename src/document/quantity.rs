//! Quantities at their place in a document.

use super::faults::Faults;
use super::node::{JsonType, Node};
use super::shape::{Shape, is_name};
use crate::diagnostic::{Code, Diagnostic, nearest};
use crate::quantity::{
    self, Bounds, Dimension, Literal, Quantity, Scale, Spread, Uncertainty, UncertaintyText,
};

/// The most characters of a tag's name.
const TAG_CHARS: usize = 128;

/// The members of a quantity that is written as an object, and what each means. The published
/// schema draws on this list.
pub(super) const QUANTITY_FIELDS: &[(&str, &str)] = &[
    ("value", "The number, in the unit."),
    ("unit", "The unit; GET /v1/units lists them."),
    ("uncertainty", "How far the value may be off; a plain text is a standard uncertainty."),
    ("resolution", "The smallest step that the value can show, in the unit or with a unit of difference."),
    ("calibration", "The calibration group whose error this value shares."),
    ("u", "Standard uncertainty in the unit, as the figures of a report give it."),
];

/// The objects that state an uncertainty.
pub(super) const UNCERTAINTY_FIELDS: &[(&str, &str)] = &[
    ("expanded", "Expanded uncertainty, for instance \"1 K\" or \"2 %\"."),
    ("coverage_factor", "The coverage factor of the expanded uncertainty, for instance 2."),
    ("half_width", "Half width of a rectangular distribution, for instance \"0.5 K\"."),
    ("instrument", "Tolerance class of IEC 60751 or IEC 60584-1, for instance \"iec-60751-b\"."),
];

/// One measurement of a variable: its value, or the tag that will bring it.
#[allow(
    clippy::large_enum_variant,
    reason = "nearly every reading is a value; a box would cost each an allocation"
)]
#[derive(Clone, Debug, PartialEq)]
pub enum Reading {
    /// A value.
    Value(Quantity),
    /// The value comes from a reading.
    Tag {
        /// The tag's name.
        name: String,
        /// JSON Pointer of the object that names it.
        pointer: String,
    },
}

/// A quantity that was read but not copied.
struct Parsed<'t> {
    literal: Literal<'t>,
    half_digit: f64,
    uncertainty: Option<Uncertainty>,
    calibration: Option<&'t str>,
}

impl<'t> Node<'t> {
    /// The quantity here, which must be something physical: above 0 K, above vacuum. Faults are
    /// recorded with their pointers.
    pub fn quantity(self, dimension: Dimension, faults: &mut Faults) -> Option<Quantity> {
        let parsed = parse(self, dimension, Bounds::Physical, faults)?;
        Some(self.owned(dimension, &parsed))
    }

    /// The same without the physical bounds: an end of an instrument's range, `"0 bar"`.
    pub fn bound(self, dimension: Dimension, faults: &mut Faults) -> Option<Quantity> {
        let parsed = parse(self, dimension, Bounds::Finite, faults)?;
        Some(self.owned(dimension, &parsed))
    }

    /// The redundant measurements here: a single quantity or tag counts as one.
    pub fn quantities(self, dimension: Dimension, faults: &mut Faults) -> Vec<Reading> {
        let one = |node: Node<'t>, faults: &mut Faults| match tag(node, faults) {
            Some(Some(name)) => Some(Reading::Tag { name: name.to_owned(), pointer: node.pointer() }),
            Some(None) => None,
            None => node.quantity(dimension, faults).map(Reading::Value),
        };
        if self.json_type() == Some(JsonType::List) {
            self.items().filter_map(|item| one(item, faults)).collect()
        } else {
            one(self, faults).into_iter().collect()
        }
    }

    /// The meaning of the unit whose text stands here.
    pub fn unit(self, dimension: Dimension, faults: &mut Faults) -> Option<Scale> {
        let text = self.text().or_else(|| wrong_type(self, &Shape::Unit, faults))?;
        located(self, quantity::find(text, dimension), faults)
    }

    /// The uncertainty here, of a quantity of this dimension that is written in the unit `scale`.
    pub fn uncertainty(self, dimension: Dimension, scale: &Scale, faults: &mut Faults) -> Option<Spread> {
        let text = uncertainty_text(self, faults)?;
        located(self, Spread::read(text, dimension, scale), faults)
    }

    fn owned(self, dimension: Dimension, parsed: &Parsed<'t>) -> Quantity {
        let text = match self.text() {
            Some(text) => text.trim().to_owned(),
            None => match self.get("unit").and_then(Node::text) {
                Some(unit) => format!("{} {unit}", parsed.literal.number),
                None => parsed.literal.number.to_owned(),
            },
        };
        Quantity {
            dimension,
            value: parsed.literal.value,
            scale: parsed.literal.scale,
            uncertainty: parsed.uncertainty,
            half_digit: parsed.half_digit,
            number: parsed.literal.number.to_owned(),
            text,
            calibration: parsed.calibration.map(str::to_owned),
            pointer: self.pointer(),
        }
    }
}

/// Records what a reader found, at the place of the node.
fn located<T>(node: Node<'_>, result: Result<T, Diagnostic>, faults: &mut Faults) -> Option<T> {
    match result {
        Ok(value) => Some(value),
        Err(fault) => {
            faults.push(Diagnostic { pointer: node.pointer(), ..fault });
            None
        }
    }
}

pub(super) fn wrong_type<T>(node: Node<'_>, shape: &Shape, faults: &mut Faults) -> Option<T> {
    // A refused value has its fault already.
    if let Some(json) = node.json_type() {
        let mut fault = node.fault(Code::WrongType, format!("{} is expected, not {json}", shape.expected()));
        if json == JsonType::Null {
            fault = fault.hint("leave the member out where it is unknown");
        }
        faults.push(fault);
    }
    None
}

pub(super) fn unknown_field<'a>(
    node: Node<'_>,
    name: &str,
    known: impl IntoIterator<Item = &'a str> + Clone,
    faults: &mut Faults,
) {
    // Looking for what was meant is dear, and an object may have many members.
    if faults.stops() {
        return;
    }
    let fault = Diagnostic::new(
        Code::UnknownField,
        node.pointer_to(name),
        format!("the member \"{name}\" is not known here"),
    );
    let near = nearest(name, known.clone());
    let known: Vec<&str> = known.into_iter().collect();
    let otherwise = match known.len() {
        0 => "nothing is expected here".to_owned(),
        1..=40 => format!("known here: {}", known.join(", ")),
        _ => "GET /openapi.json lists what is known".to_owned(),
    };
    faults.push(fault.suggest(&near, &otherwise));
}

fn refuse_unknown(node: Node<'_>, known: &[(&str, &str)], faults: &mut Faults) {
    for (name, _) in node.members() {
        if !known.iter().any(|(k, _)| *k == name) {
            unknown_field(node, name, known.iter().map(|(k, _)| *k), faults);
        }
    }
}

/// Checks one quantity or a list of them, tags included.
pub(super) fn check_quantities(node: Node<'_>, dimension: Dimension, faults: &mut Faults) {
    if node.json_type() == Some(JsonType::List) {
        if node.items().len() == 0 {
            faults.push(
                node.fault(Code::BadQuantity, "the list of measurements is empty")
                    .hint("leave the member out where it is unknown"),
            );
        }
        for item in node.items() {
            if faults.stops() {
                return;
            }
            if tag(item, faults).is_none() {
                check_quantity(item, dimension, faults);
            }
        }
    } else if tag(node, faults).is_none() {
        check_quantity(node, dimension, faults);
    }
}

/// Checks one quantity.
pub(super) fn check_quantity(node: Node<'_>, dimension: Dimension, faults: &mut Faults) {
    parse(node, dimension, Bounds::Physical, faults);
}

/// Checks a quantity whose dimension is not known yet.
pub(super) fn check_any_quantity(node: Node<'_>, faults: &mut Faults) {
    if let Some(text) = node.number_text() {
        located(node, quantity::read_bare(text, Dimension::Fraction), faults);
        return;
    }
    let Some(text) = node.text() else {
        return wrong_type(node, &Shape::AnyQuantity, faults).unwrap_or_default();
    };
    if let Some((_, unit)) = located(node, quantity::split(text), faults)
        && !unit.is_empty()
    {
        check_any_unit(node, unit, faults);
    }
}

/// Checks the text of a unit of any dimension.
pub(super) fn check_any_unit(node: Node<'_>, unit: &str, faults: &mut Faults) {
    if quantity::dimensions_of(unit).is_empty() {
        let unit: String = unit.chars().take(40).collect();
        let spellings = quantity::catalogue().flat_map(|u| u.spellings.iter().copied());
        let hint = match nearest(&unit, spellings).first() {
            Some(near) => format!("did you mean \"{near}\"?"),
            None => "GET /v1/units lists the units".to_owned(),
        };
        faults.push(node.fault(Code::UnknownUnit, format!("\"{unit}\" is not a known unit")).hint(hint));
    }
}

/// Checks an uncertainty whose dimension is not known yet.
pub(super) fn check_uncertainty(node: Node<'_>, faults: &mut Faults) {
    uncertainty_text(node, faults);
    if let Some(text) = node.number_text() {
        located(node, quantity::split(text), faults);
    }
}

/// `{"tag": …}`: `None` where this is no tag, `Some(None)` where it is a faulty one.
fn tag<'t>(node: Node<'t>, faults: &mut Faults) -> Option<Option<&'t str>> {
    let named = node.get("tag")?;
    refuse_unknown(node, &[("tag", "")], faults);
    let Some(name) = named.text() else {
        return Some(wrong_type(named, &Shape::Text, faults));
    };
    if name.trim().is_empty() || name.chars().count() > TAG_CHARS {
        faults.push(named.fault(Code::BadName, format!("a tag's name has 1 to {TAG_CHARS} characters")));
        return Some(None);
    }
    Some(Some(name))
}

fn parse<'t>(
    node: Node<'t>,
    dimension: Dimension,
    bounds: Bounds,
    faults: &mut Faults,
) -> Option<Parsed<'t>> {
    let plain = |literal: Literal<'t>| Parsed {
        half_digit: literal.half_digit,
        literal,
        uncertainty: None,
        calibration: None,
    };
    match node.json_type()? {
        JsonType::Text => {
            located(node, quantity::read_text(node.text()?, dimension, bounds), faults).map(plain)
        }
        JsonType::Number => {
            located(node, quantity::read_bare(node.number_text()?, dimension), faults).map(plain)
        }
        JsonType::Object => parse_object(node, dimension, bounds, faults),
        _ => wrong_type(node, &Shape::Quantity(dimension), faults),
    }
}

fn parse_object<'t>(
    node: Node<'t>,
    dimension: Dimension,
    bounds: Bounds,
    faults: &mut Faults,
) -> Option<Parsed<'t>> {
    if node.get("tag").is_some() {
        faults.push(
            node.fault(Code::WrongType, "a tag cannot stand here; a value is expected")
                .hint(format!("for instance \"{}\"", dimension.example())),
        );
        return None;
    }
    refuse_unknown(node, QUANTITY_FIELDS, faults);
    let Some(value) = node.get("value") else {
        faults.push(node.fault(Code::MissingField, "the member \"value\" is missing").hint(format!(
            "write {{\"value\": …, \"unit\": …}}, or a text such as \"{}\"",
            dimension.example()
        )));
        return None;
    };
    let Some(number) = value.number_text() else {
        if value.json_type() == Some(JsonType::Text) {
            faults.push(
                value
                    .fault(Code::WrongType, "a number is expected, not a text")
                    .hint("write the number here and its unit as \"unit\""),
            );
            return None;
        }
        return wrong_type(value, &Shape::Number, faults);
    };
    let literal = match node.get("unit") {
        None => located(value, quantity::read_bare(number, dimension), faults),
        Some(unit) => match unit.text() {
            Some(text) => match quantity::read_number(number, text, dimension, bounds) {
                Ok(literal) => Some(literal),
                Err(fault) => {
                    let place = match fault.code {
                        Code::UnknownUnit | Code::WrongDimension => unit,
                        _ => value,
                    };
                    located(place, Err(fault), faults)
                }
            },
            None => wrong_type(unit, &Shape::Unit, faults),
        },
    };
    let calibration = node.get("calibration").and_then(|name| match name.text() {
        Some(text) if is_name(text) => Some(text),
        Some(_) => {
            faults.push(bad_name(name));
            None
        }
        None => wrong_type(name, &Shape::Name, faults),
    });
    let stated = node.get("uncertainty").and_then(|n| uncertainty_text(n, faults).map(|text| (n, text)));
    let reported = node.get("u").and_then(|n| match n.number_text() {
        Some(text) => Some((n, UncertaintyText::Reported(text))),
        None => wrong_type(n, &Shape::Number, faults),
    });
    if let (Some(_), Some((place, _))) = (&stated, &reported) {
        faults.push(
            place
                .fault(Code::Conflict, "\"u\" and \"uncertainty\" both state the uncertainty")
                .hint("keep one of them"),
        );
    }
    let resolution = node.get("resolution").and_then(|n| match n.text().or(n.number_text()) {
        Some(text) => Some((n, text)),
        None => wrong_type(n, &Shape::Number, faults),
    });
    // What follows needs the unit and the value.
    let literal = literal?;
    let uncertainty = stated.or(reported).and_then(|(place, text)| {
        let read = Spread::read(text, dimension, &literal.scale).and_then(|s| s.checked_at(literal.value));
        located(place, read, faults)
    });
    let half_digit = match resolution {
        Some((place, text)) => {
            located(place, quantity::read_resolution(text, dimension, &literal.scale), faults)?
        }
        None => literal.half_digit,
    };
    Some(Parsed { literal, half_digit, uncertainty, calibration })
}

pub(super) fn bad_name(node: Node<'_>) -> Diagnostic {
    node.fault(Code::BadName, format!("{} is not a name", shortened(node.source()))).hint(NAME_HINT)
}

pub(super) const NAME_HINT: &str =
    "names begin with a letter or digit and have at most 64 of letters, digits, \"_\", \".\" and \"-\"";

pub(super) fn shortened(text: &str) -> String {
    match text.char_indices().nth(40) {
        Some((end, _)) => format!("{}…", text.get(..end).unwrap_or_default()),
        None => text.to_owned(),
    }
}

/// The written form of an uncertainty; its units are read later, when the dimension is known.
fn uncertainty_text<'t>(node: Node<'t>, faults: &mut Faults) -> Option<UncertaintyText<'t>> {
    match node.json_type()? {
        JsonType::Text => return node.text().map(UncertaintyText::Plain),
        JsonType::Number => return node.number_text().map(UncertaintyText::Plain),
        JsonType::Object => {}
        _ => return wrong_type(node, &Shape::Uncertainty, faults),
    }
    refuse_unknown(node, UNCERTAINTY_FIELDS, faults);
    let member = |name: &str, faults: &mut Faults| {
        let member = node.get(name)?;
        match member.text().or(member.number_text()) {
            Some(text) => Some(text),
            None => wrong_type(member, &Shape::Text, faults),
        }
    };
    let forms = ["expanded", "half_width", "instrument"].iter().filter(|f| node.get(f).is_some()).count();
    if forms != 1 {
        let message = "an uncertainty has exactly one of \"expanded\", \"half_width\" and \"instrument\"";
        faults.push(node.fault(Code::BadUncertainty, message));
        return None;
    }
    let factor = node.get("coverage_factor");
    if let Some(text) = member("expanded", faults) {
        let Some(factor) = factor else {
            faults.push(
                node.fault(Code::MissingField, "the member \"coverage_factor\" is missing")
                    .hint("an expanded uncertainty has a coverage factor, often 2"),
            );
            return None;
        };
        let Some(k) = factor.number() else {
            return wrong_type(factor, &Shape::Number, faults);
        };
        return Some(UncertaintyText::Expanded(text, k));
    }
    if let Some(factor) = factor {
        faults.push(factor.fault(Code::Conflict, "only an expanded uncertainty has a coverage factor"));
    }
    if let Some(text) = member("half_width", faults) {
        return Some(UncertaintyText::HalfWidth(text));
    }
    member("instrument", faults).map(UncertaintyText::Instrument)
}
