//! Claims as flat parameters, one mapping drawn from the shapes.

use super::shape::CLAIM;
use crate::diagnostic::{Code, Diagnostic, nearest};
use crate::document::{FAULT_LIMIT, Field, ObjectShape, Shape};
use serde_json::{Map, Value};

/// The member whose own members stand without its name.
const BARE: &str = "claim";

/// A parameter of the query form.
#[derive(Clone, Debug)]
pub struct Parameter {
    /// Its name; where members of free naming follow, the part before them, ending in `_`.
    pub name: String,
    /// Names of the members that lead to it.
    pub path: Vec<&'static str>,
    /// What it holds.
    pub shape: Shape,
    /// Whether the claim needs it.
    pub required: bool,
    /// What it means.
    pub doc: &'static str,
}

/// The parameters of a kind; `None` for an unknown kind.
pub fn parameters(kind: &str) -> Option<Vec<Parameter>> {
    let variant = CLAIM.variants.iter().find(|v| v.word == kind)?;
    let mut out = Vec::new();
    gather(variant.shape, &mut Vec::new(), true, &mut out);
    Some(out)
}

fn gather(
    object: &'static ObjectShape,
    path: &mut Vec<&'static str>,
    needed: bool,
    out: &mut Vec<Parameter>,
) {
    for field in object.all_fields() {
        path.push(field.name);
        leaf(field, &field.shape, path, needed && field.required, out);
        path.pop();
    }
}

fn leaf(
    field: &Field,
    shape: &Shape,
    path: &mut Vec<&'static str>,
    required: bool,
    out: &mut Vec<Parameter>,
) {
    match shape {
        Shape::Object(object) => gather(object, path, required, out),
        Shape::OneOf(shapes) => {
            for shape in *shapes {
                // None of several forms is needed by itself.
                leaf(field, shape, path, false, out);
            }
        }
        _ => {
            let mut name = joined(path.iter().copied());
            if matches!(shape, Shape::Map { .. }) {
                name.push('_');
            }
            out.push(Parameter { name, path: path.clone(), shape: *shape, required, doc: field.doc });
        }
    }
}

fn joined<'a>(parts: impl Iterator<Item = &'a str>) -> String {
    parts.enumerate().filter(|(i, p)| *i > 0 || *p != BARE).map(|(_, p)| p).collect::<Vec<_>>().join("_")
}

/// The parameter's name for a JSON Pointer.
pub fn parameter_of(pointer: &str) -> String {
    joined(pointer.split('/').skip(1))
}

/// The parameter of a name, with the free member after it. A declared name goes before a free one.
fn find<'a, 'b>(known: &'a [Parameter], name: &'b str) -> Option<(&'a Parameter, Option<&'b str>)> {
    let is_free = |p: &Parameter| matches!(p.shape, Shape::Map { .. });
    known.iter().find(|p| p.name == name && !is_free(p)).map(|p| (p, None)).or_else(|| {
        known.iter().filter(|p| is_free(p)).find_map(|p| {
            name.strip_prefix(p.name.as_str()).filter(|rest| !rest.is_empty()).map(|rest| (p, Some(rest)))
        })
    })
}

/// The claim as JSON.
pub fn body(kind: &str, params: &[(String, String)]) -> Result<String, Vec<Diagnostic>> {
    let Some(known) = parameters(kind) else {
        let words = CLAIM.variants.iter().map(|v| v.word);
        let near = nearest(kind, words.clone());
        let otherwise = format!("known: {}", words.collect::<Vec<_>>().join(", "));
        let shown: String = kind.chars().take(40).collect();
        let message = format!("\"{shown}\" is not a kind of claim");
        let fault = Diagnostic::new(Code::UnknownChoice, CLAIM.member, message);
        return Err(vec![fault.suggest(&near, &otherwise)]);
    };
    let mut faults = Vec::new();
    let mut root = Map::new();
    root.insert(CLAIM.member.to_owned(), Value::from(kind));
    for (name, value) in params {
        if faults.len() >= FAULT_LIMIT {
            break;
        }
        let Some((parameter, free)) = find(&known, name) else {
            let shown: String = name.chars().take(40).collect();
            let fault = Diagnostic::new(
                Code::BadParameter,
                &shown,
                format!("\"{shown}\" is not a parameter of {kind}"),
            );
            let near = nearest(name, known.iter().map(|p| p.name.as_str()));
            let all: Vec<&str> = known.iter().map(|p| p.name.as_str()).collect();
            faults.push(fault.suggest(&near, &format!("known: {}", all.join(", "))));
            continue;
        };
        let value = match (parameter.shape, value.as_str()) {
            (Shape::Boolean, "true") => Value::Bool(true),
            (Shape::Boolean, "false") => Value::Bool(false),
            (Shape::Number, text) => text.parse::<f64>().ok().map_or_else(|| Value::from(text), Value::from),
            (_, text) => Value::from(text),
        };
        if let Err(why) = insert(&mut root, parameter.path.iter().copied().chain(free), value) {
            faults.push(Diagnostic::new(Code::BadParameter, name, format!("\"{name}\" {why}")));
        }
    }
    if !root.contains_key(BARE) {
        // The claim's own absence is told by what it lacks.
        root.insert(BARE.to_owned(), Value::Object(Map::new()));
    }
    if faults.is_empty() { Ok(Value::Object(root).to_string()) } else { Err(faults) }
}

fn insert<'a>(
    root: &mut Map<String, Value>,
    path: impl Iterator<Item = &'a str>,
    value: Value,
) -> Result<(), &'static str> {
    let mut path = path.peekable();
    let mut at = root;
    while let Some(name) = path.next() {
        if path.peek().is_none() {
            if at.contains_key(name) {
                return Err("is given twice, or both as a whole and by its parts");
            }
            at.insert(name.to_owned(), value);
            return Ok(());
        }
        let next = at.entry(name.to_owned()).or_insert_with(|| Value::Object(Map::new()));
        let Value::Object(inner) = next else {
            return Err("is given both as a whole and by its parts");
        };
        at = inner;
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::collections::BTreeSet;

    #[test]
    fn parameters_are_told_apart_by_their_names() {
        for variant in CLAIM.variants {
            let all = parameters(variant.word).unwrap();
            let names: BTreeSet<&str> = all.iter().map(|p| p.name.as_str()).collect();
            assert_eq!(names.len(), all.len(), "{}", variant.word);
        }
        let all = parameters("separation").unwrap();
        assert_eq!(find(&all, "feed_CO2").unwrap().1, Some("CO2"));
        assert_eq!(find(&all, "feed_pressure").unwrap().1, None);
    }

    #[test]
    fn pointers_become_parameters() {
        assert_eq!(parameter_of("/claim/cop"), "cop");
        assert_eq!(parameter_of("/source/inlet"), "source_inlet");
        assert_eq!(parameter_of("/claim"), "");
        assert_eq!(parameter_of(""), "");
    }
}
