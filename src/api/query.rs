//! Query strings: read once, strictly, against the parameters that a route declares.

use std::time::Duration;

use serde_json::{Map, Value};

use super::problem::Problem;
use super::route::{Parameter, Route};
use crate::diagnostic::nearest;
use crate::quantity::UnitSystem;

/// Names and values of a query that are known to the route, each at most once.
#[derive(Debug, Default)]
pub struct Query(Vec<(String, String)>);

impl Query {
    /// Reads the text after `?`.
    pub fn parse(text: &str, route: &Route) -> Result<Query, Problem> {
        let mut pairs: Vec<(String, String)> = Vec::new();
        for piece in text.split('&').filter(|p| !p.is_empty()) {
            let (name, value) = piece.split_once('=').unwrap_or((piece, ""));
            let (Some(name), Some(value)) = (decode(name), decode(value)) else {
                return Err(Problem::parameter("", format!("{piece:?} is not percent-encoded UTF-8"), None));
            };
            let known = || route.parameters.iter().filter(|p| !p.in_path).map(|p| p.name);
            match route.parameters.iter().find(|p| !p.in_path && p.name == name) {
                Some(parameter) => parameter.check(&value)?,
                None if route.further.is_some() => {}
                None => {
                    let hint = match nearest(&name, known()).first() {
                        Some(close) => format!("did you mean {close:?}?"),
                        None => format!("this call takes: {}", known().collect::<Vec<_>>().join(", ")),
                    };
                    let detail = format!("the parameter {name:?} is not known here");
                    return Err(Problem::parameter(&name, detail, Some(hint.into())));
                }
            }
            if pairs.iter().any(|(n, _)| *n == name) {
                return Err(Problem::parameter(&name, format!("the parameter {name:?} stands twice"), None));
            }
            pairs.push((name, value));
        }
        for parameter in route.parameters.iter().filter(|p| p.required && !p.in_path) {
            if !pairs.iter().any(|(n, _)| n == parameter.name) {
                let detail = format!("the parameter {:?} is missing", parameter.name);
                let hint = format!("for instance {}={}", parameter.name, parameter.example);
                return Err(Problem::parameter(parameter.name, detail, Some(hint.into())));
            }
        }
        Ok(Query(pairs))
    }

    fn get(&self, name: &str) -> Option<&str> {
        self.0.iter().find(|(n, _)| n == name).map(|(_, v)| v.as_str())
    }

    /// Names and values but for those of the call itself.
    pub fn further(&self, skip: &[&str]) -> Vec<(String, String)> {
        self.0.iter().filter(|(n, _)| !skip.contains(&n.as_str())).cloned().collect()
    }

    /// The units that `?units=` asks for.
    pub fn units(&self) -> UnitSystem {
        self.get("units").and_then(UnitSystem::read).unwrap_or_default()
    }

    /// The time that `?deadline=` asks for, at most `longest`.
    pub fn deadline(&self, default: Duration, longest: Duration) -> Result<Duration, Problem> {
        let Some(text) = self.get("deadline") else { return Ok(default) };
        let refuse = |detail: String| {
            let hint = "whole seconds or milliseconds, for instance 5, 5s or 500ms";
            Err(Problem::parameter("deadline", detail, Some(hint.into())))
        };
        let (number, unit) = match text.strip_suffix("ms") {
            Some(number) => (number, 1),
            None => (text.strip_suffix('s').unwrap_or(text), 1_000),
        };
        let written = number.starts_with(|c: char| ('1'..='9').contains(&c));
        let milliseconds = number.parse::<u64>().ok().filter(|_| written).and_then(|n| n.checked_mul(unit));
        match milliseconds.map(Duration::from_millis) {
            Some(deadline) if deadline <= longest => Ok(deadline),
            Some(_) => {
                refuse(format!("{text:?} is longer than the longest deadline, {} s", longest.as_secs_f64()))
            }
            None => refuse(format!("{text:?} is not a time above zero")),
        }
    }

    /// The query as the JSON body of the same call by POST: `a.b=c` becomes `{"a": {"b": "c"}}`. A
    /// value that is a JSON number or boolean becomes one. Parameters of the call itself are left
    /// out.
    pub fn fields(&self, skip: &[&str]) -> Result<Map<String, Value>, Problem> {
        let mut root = Map::new();
        for (name, value) in self.0.iter().filter(|(n, _)| !skip.contains(&n.as_str())) {
            let clash = || Problem::parameter(name, format!("{name:?} is both a value and a group"), None);
            let mut tokens: Vec<&str> = name.split('.').collect();
            let leaf = tokens.pop().unwrap_or_default();
            if leaf.is_empty() || tokens.iter().any(|t| t.is_empty()) || tokens.len() > 8 {
                return Err(Problem::parameter(name, format!("{name:?} is not a dotted name"), None));
            }
            let mut place = &mut root;
            for token in tokens {
                let next = place.entry(token).or_insert_with(|| Value::Object(Map::new()));
                place = next.as_object_mut().ok_or_else(clash)?;
            }
            if place.contains_key(leaf) {
                return Err(clash());
            }
            place.insert(leaf.to_owned(), literal(value));
        }
        Ok(root)
    }
}

/// A number or boolean stays one; everything else is text.
fn literal(text: &str) -> Value {
    match serde_json::from_str::<Value>(text) {
        Ok(value @ (Value::Number(_) | Value::Bool(_))) => value,
        _ => Value::String(text.to_owned()),
    }
}

impl Parameter {
    /// Whether the value is one of the choices, where there are choices.
    fn check(&self, value: &str) -> Result<(), Problem> {
        if self.choices.is_empty() || self.choices.contains(&value) {
            return Ok(());
        }
        let detail = format!("{:?} is not a value of {:?}", value, self.name);
        Err(Problem::parameter(self.name, detail, Some(format!("one of {}", self.choices.join(", ")).into())))
    }
}

/// Undoes percent-encoding, with `+` for a space as HTML forms write it.
fn decode(text: &str) -> Option<String> {
    let mut bytes = Vec::with_capacity(text.len());
    let mut rest = text.bytes();
    while let Some(byte) = rest.next() {
        bytes.push(match byte {
            b'+' => b' ',
            b'%' => {
                let high = char::from(rest.next()?).to_digit(16)?;
                let low = char::from(rest.next()?).to_digit(16)?;
                u8::try_from(high * 16 + low).ok()?
            }
            other => other,
        });
    }
    String::from_utf8(bytes).ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn query(pairs: &[(&str, &str)]) -> Query {
        Query(pairs.iter().map(|(n, v)| ((*n).to_owned(), (*v).to_owned())).collect())
    }

    #[test]
    fn percent_encoding_is_undone_or_refused() {
        assert_eq!(decode("10+bar%28g%29").as_deref(), Some("10 bar(g)"));
        assert_eq!(decode("%C2%B0C").as_deref(), Some("°C"));
        for bad in ["%", "%4", "%zz", "%ff", "%+1"] {
            assert_eq!(decode(bad), None, "{bad}");
        }
    }

    #[test]
    fn deadlines_are_read_with_and_without_a_unit() {
        let read =
            |text| query(&[("deadline", text)]).deadline(Duration::from_secs(2), Duration::from_secs(30));
        assert_eq!(read("5").unwrap(), Duration::from_secs(5));
        assert_eq!(read("30s").unwrap(), Duration::from_secs(30));
        assert_eq!(read("500ms").unwrap(), Duration::from_millis(500));
        for bad in [
            "0",
            "-1",
            "+1",
            "05",
            "31",
            "30001ms",
            "1e2",
            "2.5",
            "99999999999999999999",
            "",
            "s",
            "5 s",
            "nan",
        ] {
            assert!(read(bad).is_err(), "{bad}");
        }
        assert_eq!(
            query(&[]).deadline(Duration::from_secs(2), Duration::ZERO).unwrap(),
            Duration::from_secs(2)
        );
    }

    #[test]
    fn dotted_names_become_groups() {
        let fields =
            query(&[("units", "si"), ("source.inlet", "8 degC"), ("claim.cop", "4.9")]).fields(&["units"]);
        let expected = serde_json::json!({"source": {"inlet": "8 degC"}, "claim": {"cop": 4.9}});
        assert_eq!(Value::Object(fields.unwrap()), expected);
        assert!(query(&[("a", "1"), ("a.b", "2")]).fields(&[]).is_err());
        assert!(query(&[("a.b", "1"), ("a", "2")]).fields(&[]).is_err());
        assert!(query(&[("a..b", "1")]).fields(&[]).is_err());
        assert_eq!(query(&[("x", "1e999")]).fields(&[]).unwrap()["x"], Value::from("1e999"));
    }
}
