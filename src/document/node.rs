//! A place in the tree, with typed access.

use std::fmt;

use super::tree::{Data, Tree, Value};
use crate::diagnostic::{Code, Diagnostic, push_token};

/// The JSON type of a value.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum JsonType {
    /// `null`
    Null,
    /// `true` or `false`
    Boolean,
    /// A number.
    Number,
    /// A string.
    Text,
    /// An array.
    List,
    /// An object.
    Object,
}

impl fmt::Display for JsonType {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            JsonType::Null => "null",
            JsonType::Boolean => "a boolean",
            JsonType::Number => "a number",
            JsonType::Text => "a text",
            JsonType::List => "a list",
            JsonType::Object => "an object",
        })
    }
}

/// A value at its place in a document. Cheap to copy; its pointer is built when it is asked for.
///
/// The accessors answer `None` for a value of another type; after [`super::check`] passed, that
/// means an absent or differently shaped alternative.
#[derive(Clone, Copy)]
pub struct Node<'t> {
    pub(super) tree: &'t Tree<'t>,
    pub(super) value: &'t Value<'t>,
}

impl<'t> Node<'t> {
    /// The JSON Pointer (RFC 6901) of this value.
    pub fn pointer(self) -> String {
        self.tree.pointer(self.value.start, self.value.end)
    }

    /// The JSON Pointer of a member of this value, whether it exists or not.
    pub fn pointer_to(self, member: &str) -> String {
        let mut pointer = self.pointer();
        push_token(&mut pointer, member);
        pointer
    }

    /// A fault at this place.
    pub fn fault(self, code: Code, message: impl Into<String>) -> Diagnostic {
        Diagnostic::new(code, self.pointer(), message)
    }

    /// The JSON type; `None` for a value that was refused while reading.
    pub fn json_type(self) -> Option<JsonType> {
        match self.value.data {
            Data::Null => Some(JsonType::Null),
            Data::Bool(_) => Some(JsonType::Boolean),
            Data::Number(_) => Some(JsonType::Number),
            Data::Text(_) => Some(JsonType::Text),
            Data::List(_) => Some(JsonType::List),
            Data::Object(_) => Some(JsonType::Object),
            Data::Refused => None,
        }
    }

    /// The value as it was written.
    pub fn source(self) -> &'t str {
        self.tree.text().get(self.value.start as usize..self.value.end as usize).unwrap_or_default()
    }

    /// The member of this name.
    pub fn get(self, name: &str) -> Option<Node<'t>> {
        match &self.value.data {
            Data::Object(members) => members.iter().find(|m| m.key == name).map(|m| self.at(&m.value)),
            _ => None,
        }
    }

    /// The members in the order of the document; none for another type.
    pub fn members(self) -> impl ExactSizeIterator<Item = (&'t str, Node<'t>)> {
        let members = match &self.value.data {
            Data::Object(members) => members.as_slice(),
            _ => &[],
        };
        members.iter().map(move |m| (m.key.as_ref(), self.at(&m.value)))
    }

    /// The items of a list; none for another type.
    pub fn items(self) -> impl ExactSizeIterator<Item = Node<'t>> {
        let items = match &self.value.data {
            Data::List(items) => items.as_slice(),
            _ => &[],
        };
        items.iter().map(move |item| self.at(item))
    }

    /// The text.
    pub fn text(self) -> Option<&'t str> {
        match &self.value.data {
            Data::Text(text) => Some(text),
            _ => None,
        }
    }

    /// The number as written.
    pub fn number_text(self) -> Option<&'t str> {
        match self.value.data {
            Data::Number(text) => Some(text),
            _ => None,
        }
    }

    /// The number, where it is finite.
    pub fn number(self) -> Option<f64> {
        self.number_text().and_then(|text| text.parse().ok()).filter(|x: &f64| x.is_finite())
    }

    /// The number, where it is written as an integer and fits.
    pub fn integer(self) -> Option<i64> {
        self.number_text().and_then(|text| text.parse().ok())
    }

    /// The boolean.
    pub fn boolean(self) -> Option<bool> {
        match self.value.data {
            Data::Bool(value) => Some(value),
            _ => None,
        }
    }

    fn at(self, value: &'t Value<'t>) -> Node<'t> {
        Node { tree: self.tree, value }
    }
}

impl fmt::Debug for Node<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}: {}", self.pointer(), self.source())
    }
}
