//! The plant that the benches check.

use serde_json::{Map, Value};

/// Five components, thirteen flows.
pub const PLANT: &str = include_str!("gas-turbine.json");

/// The plant without its two exchangers: what enters and leaves them crosses the boundary.
pub fn without_exchangers() -> String {
    let gone = |component: &Value| component == "preheater" || component == "recovery";
    let mut plant: Map<String, Value> = serde_json::from_str(PLANT).unwrap_or_default();
    if let Some(components) = plant.get_mut("components").and_then(Value::as_object_mut) {
        components.retain(|name, _| !gone(&Value::from(name.as_str())));
    }
    if let Some(flows) = plant.get_mut("flows").and_then(Value::as_object_mut) {
        for flow in flows.values_mut().filter_map(Value::as_object_mut) {
            flow.retain(|name, end| !(matches!(name.as_str(), "from" | "to") && gone(end)));
        }
        flows.retain(|_, flow| flow.get("from").is_some() || flow.get("to").is_some());
    }
    Value::from(plant).to_string()
}
