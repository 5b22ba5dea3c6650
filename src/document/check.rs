//! The walk that finds every fault.

use super::faults::Faults;
use super::node::Node;
use super::quantity::{
    NAME_HINT, QUANTITY_FIELDS, UNCERTAINTY_FIELDS, bad_name, check_any_quantity, check_any_unit,
    check_quantities, check_quantity, check_uncertainty, shortened, unknown_field, wrong_type,
};
use super::shape::{Field, Key, ObjectShape, Shape, Union, is_name};
use super::tree::Tree;
use crate::diagnostic::{Code, Diagnostic, nearest};

/// Checks a whole document against the shape of its outermost object and records every fault.
pub fn check(tree: &Tree<'_>, shape: &'static ObjectShape, faults: &mut Faults) {
    check_shape(tree.root(), &Shape::Object(shape), faults);
}

/// Checks a part of a document.
pub fn check_shape(node: Node<'_>, shape: &Shape, faults: &mut Faults) {
    // A refused value has its fault already.
    let Some(json) = node.json_type() else { return };
    if faults.stops() {
        return;
    }
    match shape {
        Shape::Quantity(dimension) => check_quantity(node, *dimension, faults),
        Shape::Quantities(dimension) => check_quantities(node, *dimension, faults),
        Shape::AnyQuantity => check_any_quantity(node, faults),
        Shape::Uncertainty => check_uncertainty(node, faults),
        Shape::OneOf(shapes) => {
            // Of equals the first: `max_by_key` would take the last.
            let taken = shapes.iter().rev().filter(|s| s.takes(json)).max_by_key(|s| known_members(node, s));
            match taken {
                Some(taken) => check_shape(node, taken, faults),
                None => wrong_type(node, shape, faults).unwrap_or_default(),
            }
        }
        _ if !shape.takes(json) => wrong_type(node, shape, faults).unwrap_or_default(),
        Shape::Unit => check_any_unit(node, node.text().unwrap_or_default(), faults),
        Shape::Number => {
            if node.number().is_none() {
                let message = format!("{} is too large to be represented", shortened(node.source()));
                faults.push(node.fault(Code::BadNumber, message));
            }
        }
        Shape::Integer => {
            if node.integer().is_none() {
                let message = format!("a whole number is expected, not {}", shortened(node.source()));
                faults.push(node.fault(Code::WrongType, message));
            }
        }
        Shape::Any | Shape::Boolean | Shape::Text => {}
        Shape::Name => {
            if !node.text().is_some_and(is_name) {
                faults.push(bad_name(node));
            }
        }
        Shape::Choice(words) => check_choice(node, words.iter().map(|(word, _)| *word), faults),
        Shape::Object(object) => check_object(node, object, None, faults),
        Shape::Map { key, value } => {
            for (name, member) in node.members() {
                check_key(member, name, *key, faults);
                check_shape(member, value, faults);
            }
        }
        Shape::List { item, max } => {
            let count = node.items().len();
            if count > *max {
                faults.push(node.fault(
                    Code::LimitExceeded,
                    format!("the list has {count} items; at most {max} are taken"),
                ));
            }
            for entry in node.items() {
                check_shape(entry, item, faults);
            }
        }
        Shape::Tagged(union) => check_tagged(node, union, faults),
    }
}

/// How many members of an object an alternative knows.
fn known_members(node: Node<'_>, shape: &Shape) -> usize {
    let count = |known: &dyn Fn(&str) -> bool| node.members().filter(|(name, _)| known(name)).count();
    let quantity = |name: &str| QUANTITY_FIELDS.iter().any(|(known, _)| *known == name);
    match shape {
        Shape::Quantity(_) => count(&quantity),
        Shape::Quantities(_) => count(&|name| name == "tag" || quantity(name)),
        Shape::Uncertainty => count(&|name| UNCERTAINTY_FIELDS.iter().any(|(known, _)| *known == name)),
        Shape::Object(object) => count(&|name| object.field(name).is_some()),
        Shape::Tagged(union) => count(&|name| name == union.member),
        Shape::OneOf(shapes) => shapes.iter().map(|s| known_members(node, s)).max().unwrap_or(0),
        _ => 0,
    }
}

fn check_key(member: Node<'_>, name: &str, key: Key, faults: &mut Faults) {
    let good = match key {
        Key::Name(_) => is_name(name),
        Key::Text(_) => !name.trim().is_empty(),
    };
    if !good {
        let message = format!("\"{}\" is not a name for {}", shortened(name), key.doc());
        faults.push(member.fault(Code::BadName, message).hint(match key {
            Key::Name(_) => NAME_HINT,
            Key::Text(_) => "the name is empty",
        }));
    }
}

fn check_choice(node: Node<'_>, words: impl Iterator<Item = &'static str> + Clone, faults: &mut Faults) {
    let text = node.text().unwrap_or_default();
    if words.clone().any(|word| word == text) {
        return;
    }
    let near = nearest(text, words.clone());
    let quoted: Vec<String> = words.map(|w| format!("\"{w}\"")).collect();
    let message = format!("\"{}\" is not one of the words that stand here", shortened(text));
    let fault = node.fault(Code::UnknownChoice, message);
    faults.push(fault.suggest(&near, &format!("known: {}", quoted.join(", "))));
}

fn check_object(node: Node<'_>, shape: &ObjectShape, telling: Option<&str>, faults: &mut Faults) {
    let mut missing: Vec<&Field> = shape.all_fields().filter(|f| f.required).collect();
    for (name, member) in node.members() {
        if telling == Some(name) {
            continue;
        }
        match shape.field(name) {
            Some(field) => {
                missing.retain(|f| f.name != name);
                check_shape(member, &field.shape, faults);
            }
            None => unknown_field(node, name, shape.all_fields().map(|f| f.name), faults),
        }
    }
    for field in missing {
        faults.push(
            node.fault(Code::MissingField, format!("the member \"{}\" is missing", field.name))
                .hint(format!("{}: {}", field.name, field.doc)),
        );
    }
}

fn check_tagged(node: Node<'_>, union: &Union, faults: &mut Faults) {
    let words = union.variants.iter().map(|v| v.word);
    let Some(telling) = node.get(union.member) else {
        let known: Vec<String> = words.map(|w| format!("\"{w}\"")).collect();
        faults.push(
            Diagnostic::new(
                Code::MissingField,
                node.pointer(),
                format!("the member \"{}\" is missing", union.member),
            )
            .hint(format!("one of {}", known.join(", "))),
        );
        return;
    };
    let Some(word) = telling.text() else {
        return wrong_type(telling, &Shape::Text, faults).unwrap_or_default();
    };
    match union.variants.iter().find(|v| v.word == word) {
        Some(variant) => check_object(node, variant.shape, Some(union.member), faults),
        None => check_choice(telling, words, faults),
    }
}
