//! The published schema (JSON Schema 2020-12, as OpenAPI 3.1 uses it), drawn from the shapes.

use std::collections::{BTreeMap, BTreeSet};

use serde_json::{Map, Value, json};

use super::quantity::{QUANTITY_FIELDS, UNCERTAINTY_FIELDS};
use super::shape::{Key, ObjectShape, Shape, Union};
use crate::quantity::Dimension;

/// Where components stand in the OpenAPI document.
pub const REFERENCE_PREFIX: &str = "#/components/schemas/";

const NAME_PATTERN: &str = "^[A-Za-z0-9][A-Za-z0-9_.-]{0,63}$";

/// The components that an object needs, itself included, by name.
pub fn json_schema(shape: &'static ObjectShape) -> Value {
    Value::Object(components(&[shape]))
}

/// The components that some objects need, themselves included, by name.
pub fn components(roots: &[&'static ObjectShape]) -> Map<String, Value> {
    gather(objects(roots)).0.into_iter().collect()
}

/// Names under which two different components were declared; there must be none.
pub fn clashing_names(roots: &[&'static ObjectShape]) -> Vec<String> {
    gather(objects(roots)).1.into_iter().collect()
}

/// The components that a union needs, itself included, by name.
pub fn union_components(union: &'static Union) -> Map<String, Value> {
    gather(vec![Component::Union(union)]).0.into_iter().collect()
}

fn objects(roots: &[&'static ObjectShape]) -> Vec<Component> {
    roots.iter().map(|root| Component::Object(root)).collect()
}

fn gather(waiting: Vec<Component>) -> (BTreeMap<String, Value>, BTreeSet<String>) {
    let mut drawer = Drawer { waiting };
    let mut done = BTreeMap::new();
    let mut clashes = BTreeSet::new();
    while let Some(component) = drawer.waiting.pop() {
        let name = component.name();
        let known = done.contains_key(&name);
        // Drawing a known component again finds clashes; its own needs are met already.
        let depth = drawer.waiting.len();
        let drawn = drawer.draw(&component);
        if known {
            if done.get(&name) != Some(&drawn) {
                clashes.insert(name);
            }
            drawer.waiting.truncate(depth);
        } else {
            done.insert(name, drawn);
        }
    }
    (done, clashes)
}

/// What becomes a named component.
#[derive(Clone, Copy)]
enum Component {
    Object(&'static ObjectShape),
    Union(&'static Union),
    Variant(&'static Union, &'static str, &'static ObjectShape),
    Quantity(Dimension),
    Quantities(Dimension),
    QuantityObject { plain: bool },
    Uncertainty,
    Tag,
}

impl Component {
    fn name(&self) -> String {
        match self {
            Component::Object(shape) => shape.name.to_owned(),
            Component::Union(union) => union.name.to_owned(),
            Component::Variant(union, word, _) => format!("{}{}", union.name, camel(word)),
            Component::Quantity(d) => format!("Quantity{}", d.ident()),
            Component::Quantities(d) => format!("Quantities{}", d.ident()),
            Component::QuantityObject { plain: false } => "QuantityObject".to_owned(),
            Component::QuantityObject { plain: true } => "PlainQuantityObject".to_owned(),
            Component::Uncertainty => "Uncertainty".to_owned(),
            Component::Tag => "TagReference".to_owned(),
        }
    }
}

/// `heat_exchanger` → `HeatExchanger`
fn camel(word: &str) -> String {
    word.split(|c: char| !c.is_ascii_alphanumeric())
        .filter_map(|part| {
            let mut chars = part.chars();
            chars.next().map(|first| first.to_ascii_uppercase().to_string() + chars.as_str())
        })
        .collect()
}

fn described(mut schema: Value, doc: &str) -> Value {
    if let Some(object) = schema.as_object_mut()
        && !doc.is_empty()
    {
        let text = match object.get("description").and_then(Value::as_str) {
            Some(own) => format!("{doc} {own}"),
            None => doc.to_owned(),
        };
        object.insert("description".to_owned(), Value::String(text));
    }
    schema
}

struct Drawer {
    waiting: Vec<Component>,
}

impl Drawer {
    fn refer(&mut self, component: Component) -> Value {
        let reference = format!("{REFERENCE_PREFIX}{}", component.name());
        self.waiting.push(component);
        json!({ "$ref": reference })
    }

    fn draw(&mut self, component: &Component) -> Value {
        match *component {
            Component::Object(shape) => self.object(shape, None),
            Component::Union(union) => self.union(union),
            Component::Variant(union, word, shape) => self.object(shape, Some((union.member, word))),
            Component::Quantity(dimension) => self.quantity(dimension),
            Component::Quantities(dimension) => {
                let one = self.refer(Component::Quantity(dimension));
                let tag = self.refer(Component::Tag);
                json!({
                    "description": format!("{} One value, a tag, or a list of redundant measurements.", dimension.doc()),
                    "oneOf": [one.clone(), tag.clone(), {
                        "type": "array",
                        "items": { "oneOf": [one, tag] },
                        "minItems": 1,
                    }],
                })
            }
            Component::QuantityObject { plain } => self.quantity_object(plain),
            Component::Uncertainty => uncertainty(),
            Component::Tag => json!({
                "type": "object",
                "description": "The value comes from a reading of this tag.",
                "properties": { "tag": { "type": "string", "minLength": 1, "maxLength": 128 } },
                "required": ["tag"],
                "additionalProperties": false,
            }),
        }
    }

    fn object(&mut self, shape: &'static ObjectShape, telling: Option<(&str, &str)>) -> Value {
        let mut properties = Map::new();
        let mut required = Vec::new();
        if let Some((member, word)) = telling {
            properties.insert(member.to_owned(), json!({ "type": "string", "enum": [word] }));
            required.push(member);
        }
        for field in shape.all_fields() {
            let schema = self.shape(&field.shape);
            properties.insert(field.name.to_owned(), described(schema, field.doc));
            if field.required {
                required.push(field.name);
            }
        }
        let mut schema = json!({
            "type": "object",
            "description": shape.doc,
            "properties": properties,
            "additionalProperties": false,
        });
        if !required.is_empty() {
            schema["required"] = json!(required);
        }
        schema
    }

    fn union(&mut self, union: &'static Union) -> Value {
        let mut alternatives = Vec::new();
        let mut mapping = Map::new();
        for variant in union.variants {
            let reference = self.refer(Component::Variant(union, variant.word, variant.shape));
            mapping.insert(variant.word.to_owned(), reference["$ref"].clone());
            alternatives.push(reference);
        }
        json!({
            "description": union.doc,
            "type": "object",
            "oneOf": alternatives,
            "discriminator": { "propertyName": union.member, "mapping": mapping },
        })
    }

    fn shape(&mut self, shape: &Shape) -> Value {
        match *shape {
            Shape::Quantity(dimension) => self.refer(Component::Quantity(dimension)),
            Shape::Quantities(dimension) => self.refer(Component::Quantities(dimension)),
            Shape::AnyQuantity => json!({
                "oneOf": [{ "type": "string" }, { "type": "number" }],
                "description": "A number with its unit, or a number in the unit given beside it.",
            }),
            Shape::Unit => json!({ "type": "string", "description": "GET /v1/units lists the units." }),
            Shape::Uncertainty => {
                let stated = self.refer(Component::Uncertainty);
                json!({ "oneOf": [{ "type": "number", "minimum": 0 }, stated] })
            }
            Shape::Any => json!({}),
            Shape::Number => json!({ "type": "number" }),
            Shape::Integer => json!({ "type": "integer" }),
            Shape::Boolean => json!({ "type": "boolean" }),
            Shape::Text => json!({ "type": "string" }),
            Shape::Name => json!({ "type": "string", "pattern": NAME_PATTERN }),
            Shape::Choice(words) => {
                let names: Vec<&str> = words.iter().map(|(word, _)| *word).collect();
                let meanings: Vec<String> = words
                    .iter()
                    .filter(|(_, doc)| !doc.is_empty())
                    .map(|(word, doc)| format!("`{word}`: {}", doc.trim_end_matches('.')))
                    .collect();
                let schema = json!({ "type": "string", "enum": names });
                let text =
                    if meanings.is_empty() { String::new() } else { format!("{}.", meanings.join("; ")) };
                described(schema, &text)
            }
            Shape::Object(object) => self.refer(Component::Object(object)),
            Shape::Map { key, value } => {
                let names = match key {
                    Key::Name(_) => json!({ "pattern": NAME_PATTERN }),
                    Key::Text(_) => json!({ "minLength": 1 }),
                };
                let member = self.shape(value);
                json!({
                    "type": "object",
                    "description": format!("Each member is named by {}.", key.doc()),
                    "additionalProperties": member,
                    "propertyNames": names,
                })
            }
            Shape::List { item, max } => {
                let mut schema = json!({ "type": "array", "items": self.shape(item) });
                if max != usize::MAX {
                    schema["maxItems"] = json!(max);
                }
                schema
            }
            Shape::Tagged(union) => self.refer(Component::Union(union)),
            Shape::OneOf(shapes) => {
                let alternatives: Vec<Value> = shapes.iter().map(|s| self.shape(s)).collect();
                json!({ "oneOf": alternatives })
            }
        }
    }

    fn quantity(&mut self, dimension: Dimension) -> Value {
        let plain = dimension.is_dimensionless();
        let object = self.refer(Component::QuantityObject { plain });
        let text = json!({ "type": "string", "examples": [dimension.example()] });
        let alternatives =
            if plain { json!([{ "type": "number" }, text, object]) } else { json!([text, object]) };
        json!({ "description": dimension.doc(), "oneOf": alternatives })
    }

    fn quantity_object(&mut self, plain: bool) -> Value {
        let stated = self.refer(Component::Uncertainty);
        let mut properties = Map::new();
        for (name, doc) in QUANTITY_FIELDS {
            let schema = match *name {
                "value" => json!({ "type": "number" }),
                "u" => json!({ "type": "number", "minimum": 0 }),
                "resolution" => {
                    json!({ "oneOf": [{ "type": "number", "minimum": 0 }, { "type": "string" }] })
                }
                "uncertainty" if plain => json!({ "oneOf": [{ "type": "number", "minimum": 0 }, stated] }),
                "uncertainty" => stated.clone(),
                "calibration" => json!({ "type": "string", "pattern": NAME_PATTERN }),
                _ => json!({ "type": "string" }),
            };
            properties.insert((*name).to_owned(), described(schema, doc));
        }
        let required = if plain { json!(["value"]) } else { json!(["value", "unit"]) };
        json!({
            "type": "object",
            "description": "A value with what is known of it.",
            "properties": properties,
            "required": required,
            "additionalProperties": false,
        })
    }
}

fn uncertainty() -> Value {
    let form = |names: &[&str]| {
        let mut properties = Map::new();
        for (name, doc) in UNCERTAINTY_FIELDS.iter().filter(|(name, _)| names.contains(name)) {
            let schema = match *name {
                "coverage_factor" => json!({ "type": "number", "exclusiveMinimum": 0 }),
                "instrument" => json!({ "type": "string" }),
                _ => json!({ "oneOf": [{ "type": "string" }, { "type": "number", "minimum": 0 }] }),
            };
            properties.insert((*name).to_owned(), described(schema, doc));
        }
        json!({
            "type": "object",
            "properties": properties,
            "required": names,
            "additionalProperties": false,
        })
    };
    json!({
        "description": "A text such as \"0.5 K\" or \"1 %\" is a standard uncertainty; \"±0.5 K\" is the half width of a rectangular distribution.",
        "oneOf": [
            { "type": "string", "examples": ["0.5 K", "1 %", "±0.5 K"] },
            form(&["expanded", "coverage_factor"]),
            form(&["half_width"]),
            form(&["instrument"]),
        ],
    })
}
