//! The declarations of what objects can hold.
//!
//! Each object of the interface is declared once as a static [`ObjectShape`]; the reader, the
//! published schema and the documentation are drawn from it.

use super::node::JsonType;
use crate::quantity::Dimension;

/// An object with known members.
#[derive(Debug)]
pub struct ObjectShape {
    /// Name of the component in the published schema, in camel case.
    pub name: &'static str,
    /// What the object is.
    pub doc: &'static str,
    /// Its members, in groups, so that kinds can share some.
    pub fields: &'static [&'static [Field]],
}

impl ObjectShape {
    /// Every field.
    pub fn all_fields(&self) -> impl Iterator<Item = &'static Field> + Clone + use<> {
        self.fields.iter().flat_map(|group| group.iter())
    }

    /// The field of this name.
    pub fn field(&self, name: &str) -> Option<&'static Field> {
        self.all_fields().find(|f| f.name == name)
    }
}

/// A member of an object.
#[derive(Debug)]
pub struct Field {
    /// The member's name.
    pub name: &'static str,
    /// What it holds.
    pub shape: Shape,
    /// Whether it must be there.
    pub required: bool,
    /// What it means.
    pub doc: &'static str,
}

impl Field {
    /// A member that must be there.
    pub const fn required(name: &'static str, shape: Shape, doc: &'static str) -> Field {
        Field { name, shape, required: true, doc }
    }

    /// A member that may be left out.
    pub const fn optional(name: &'static str, shape: Shape, doc: &'static str) -> Field {
        Field { name, shape, required: false, doc }
    }
}

/// What a value can be.
#[derive(Clone, Copy, Debug)]
pub enum Shape {
    /// One quantity of a dimension: a text, an object, or a number where it has no dimension.
    Quantity(Dimension),
    /// One quantity or tag, or a list of redundant ones.
    Quantities(Dimension),
    /// A quantity whose dimension follows from elsewhere, as text, or as number in a unit that is
    /// given elsewhere.
    AnyQuantity,
    /// The text of a unit of any dimension.
    Unit,
    /// An uncertainty of a value given elsewhere.
    Uncertainty,
    /// A finite number without a unit.
    Number,
    /// A whole number.
    Integer,
    /// `true` or `false`.
    Boolean,
    /// Any JSON at all, to be judged later.
    Any,
    /// Any text.
    Text,
    /// A name: `^[A-Za-z0-9][A-Za-z0-9_.-]{0,63}$`.
    Name,
    /// One of some words, each with its meaning.
    Choice(&'static [(&'static str, &'static str)]),
    /// An object with known members.
    Object(&'static ObjectShape),
    /// An object with members of free naming and one shape.
    Map {
        /// How members are named.
        key: Key,
        /// What each member holds.
        value: &'static Shape,
    },
    /// A list.
    List {
        /// What each item is.
        item: &'static Shape,
        /// The most items taken.
        max: usize,
    },
    /// Objects told apart by the word of one member.
    Tagged(&'static Union),
    /// Alternatives told apart by their JSON type; among those that are objects, the one that knows
    /// most of the members, and of equals the first.
    OneOf(&'static [Shape]),
}

/// How the members of a map are named.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Key {
    /// A name of the user's choice: `^[A-Za-z0-9][A-Za-z0-9_.-]{0,63}$`; with what it names.
    Name(&'static str),
    /// Any text; with what it names.
    Text(&'static str),
}

impl Key {
    /// What the members' names name.
    pub const fn doc(self) -> &'static str {
        match self {
            Key::Name(doc) | Key::Text(doc) => doc,
        }
    }
}

/// Objects told apart by the word of one member.
#[derive(Debug)]
pub struct Union {
    /// Name of the component in the published schema, in camel case.
    pub name: &'static str,
    /// What the objects have in common.
    pub doc: &'static str,
    /// The member that tells, for instance `kind`. The variants' shapes do not declare it.
    pub member: &'static str,
    /// The objects.
    pub variants: &'static [Variant],
}

/// One of the objects of a union.
#[derive(Clone, Copy, Debug)]
pub struct Variant {
    /// The word of the telling member.
    pub word: &'static str,
    /// The other members.
    pub shape: &'static ObjectShape,
}

/// Whether a text is a name: `^[A-Za-z0-9][A-Za-z0-9_.-]{0,63}$`.
pub fn is_name(text: &str) -> bool {
    let bytes = text.as_bytes();
    bytes.len() <= 64
        && bytes.first().is_some_and(u8::is_ascii_alphanumeric)
        && bytes.iter().all(|b| b.is_ascii_alphanumeric() || matches!(b, b'_' | b'.' | b'-'))
}

impl Shape {
    /// Whether some value of this JSON type can have the shape.
    pub fn takes(&self, json: JsonType) -> bool {
        use JsonType as J;
        match self {
            Shape::Quantity(d) => match json {
                J::Text | J::Object => true,
                J::Number => d.is_dimensionless(),
                _ => false,
            },
            Shape::Quantities(d) => json == J::List || Shape::Quantity(*d).takes(json),
            Shape::Any => true,
            Shape::AnyQuantity => matches!(json, J::Text | J::Number),
            Shape::Uncertainty => matches!(json, J::Text | J::Number | J::Object),
            Shape::Number | Shape::Integer => json == J::Number,
            Shape::Boolean => json == J::Boolean,
            Shape::Unit | Shape::Text | Shape::Name | Shape::Choice(_) => json == J::Text,
            Shape::Object(_) | Shape::Map { .. } | Shape::Tagged(_) => json == J::Object,
            Shape::List { .. } => json == J::List,
            Shape::OneOf(shapes) => shapes.iter().any(|s| s.takes(json)),
        }
    }

    /// What is expected, in words.
    pub fn expected(&self) -> String {
        match self {
            Shape::Quantity(d) if d.is_dimensionless() => "a number".to_owned(),
            Shape::Quantity(d) => format!("a quantity such as \"{}\"", d.example()),
            Shape::Quantities(d) => format!("a quantity such as \"{}\", or a list of them", d.example()),
            Shape::AnyQuantity => "a number with its unit".to_owned(),
            Shape::Unit => "a unit".to_owned(),
            Shape::Uncertainty => "an uncertainty such as \"0.5 K\"".to_owned(),
            Shape::Any => "a value".to_owned(),
            Shape::Number => "a number".to_owned(),
            Shape::Integer => "a whole number".to_owned(),
            Shape::Boolean => "true or false".to_owned(),
            Shape::Text => "a text".to_owned(),
            Shape::Name => "a name".to_owned(),
            Shape::Choice(words) => {
                let words: Vec<String> = words.iter().map(|(w, _)| format!("\"{w}\"")).collect();
                format!("one of {}", words.join(", "))
            }
            Shape::Object(_) | Shape::Map { .. } => "an object".to_owned(),
            Shape::Tagged(union) => format!("an object with \"{}\"", union.member),
            Shape::List { .. } => "a list".to_owned(),
            Shape::OneOf(shapes) => {
                let parts: Vec<String> = shapes.iter().map(Shape::expected).collect();
                parts.join(", or ")
            }
        }
    }
}
