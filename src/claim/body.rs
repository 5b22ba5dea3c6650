//! The bodies that heat is taken from and given to.

use super::desk::{Computed, Desk, Given, Medium, Role};
use crate::diagnostic::{Code, Diagnostic};
use crate::document::JsonType;
use crate::fluid::Pair;
use crate::quantity::Dimension;

/// How far a stream whose glide nothing else bounds is taken to slide at the strict end of a
/// bracket, K: wider than machines of one stage use (common practice).
pub const WIDE_GLIDE: f64 = 50.0;

/// Whether the body gives heat to the machine or takes it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// It gives heat: a stream cools.
    Gives,
    /// It takes heat: a stream warms.
    Takes,
}

/// How an open temperature is completed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum View {
    /// In favour of the claim.
    Lenient,
    /// Against it.
    Strict,
    /// All heat at the outlet temperature.
    Outlet,
}

#[derive(Clone, Debug)]
enum Temperatures {
    Constant(Given),
    Sliding(Given, Given, Option<Box<(Medium, Given)>>),
    Inlet(Given),
    Outlet(Given),
}

/// A body.
#[derive(Clone, Debug)]
pub struct Body {
    side: Side,
    temperatures: Temperatures,
    pointer: String,
}

/// Inverse of the entropic mean temperature of a stream of constant heat capacity:
/// ln(b/a)/(b − a), 1/K.
fn inverse_log_mean(a: f64, b: f64) -> f64 {
    let d = (b - a) / a;
    if d.abs() < 1e-7 { 1.0 / (0.5 * (a + b)) } else { libm::log1p(d) / (b - a) }
}

impl Body {
    /// Inverse entropic mean temperature, 1/K. `other` is the temperature of the body that bounds
    /// an open glide.
    pub fn beta(&self, x: &[f64], view: View, other: f64) -> Computed<f64> {
        match (&self.temperatures, view) {
            (Temperatures::Constant(t), _) | (Temperatures::Sliding(_, t, _), View::Outlet) => {
                Ok(1.0 / t.at(x))
            }
            (Temperatures::Sliding(a, b, None), _) => Ok(inverse_log_mean(a.at(x), b.at(x))),
            (Temperatures::Sliding(a, b, Some(real)), _) => {
                let (medium, p) = real.as_ref();
                let state = |t: f64| medium.state(Pair::PressureTemperature, p.at(x), t, &self.pointer);
                let (one, two) = (state(a.at(x))?, state(b.at(x))?);
                let dh = two.enthalpy - one.enthalpy;
                if dh.abs() <= 1e-9 * one.enthalpy.abs().max(1.0) {
                    return Ok(inverse_log_mean(a.at(x), b.at(x)));
                }
                Ok((two.entropy - one.entropy) / dh)
            }
            (Temperatures::Inlet(t), View::Strict) => {
                let t = t.at(x);
                let end = match self.side {
                    Side::Gives if t > other => other,
                    Side::Gives => (t - WIDE_GLIDE).max(0.5 * t),
                    Side::Takes if t < other => other,
                    Side::Takes => t + WIDE_GLIDE,
                };
                Ok(inverse_log_mean(t, end))
            }
            (Temperatures::Outlet(t), View::Lenient) => {
                let t = t.at(x);
                Ok(if self.bounds_an_outlet(t, other) { inverse_log_mean(other, t) } else { 1.0 / t })
            }
            (Temperatures::Inlet(t) | Temperatures::Outlet(t), _) => Ok(1.0 / t.at(x)),
        }
    }

    /// Whether heat can be had from, or given to, the other body until this stream's outlet.
    fn bounds_an_outlet(&self, t: f64, other: f64) -> bool {
        match self.side {
            Side::Gives => t < other,
            Side::Takes => t > other,
        }
    }

    /// The temperature that bounds another body's open glide.
    pub fn near(&self, x: &[f64]) -> f64 {
        match &self.temperatures {
            Temperatures::Constant(t) | Temperatures::Inlet(t) | Temperatures::Outlet(t) => t.at(x),
            Temperatures::Sliding(a, _, _) => a.at(x),
        }
    }

    /// The temperature at the end where the body is hottest (`true`) or coldest.
    pub fn extreme(&self, x: &[f64], hottest: bool) -> f64 {
        match &self.temperatures {
            Temperatures::Sliding(a, b, _) if hottest => a.at(x).max(b.at(x)),
            Temperatures::Sliding(a, b, _) => a.at(x).min(b.at(x)),
            Temperatures::Constant(t) | Temperatures::Inlet(t) | Temperatures::Outlet(t) => t.at(x),
        }
    }

    /// Refuses an outlet alone where nothing bounds the inlet.
    pub fn refuse_unbounded(&self, desk: &mut Desk<'_>, other: &Body) {
        let x: Vec<f64> = desk.inputs.iter().map(|i| i.value).collect();
        if let Temperatures::Outlet(t) = &self.temperatures
            && !self.bounds_an_outlet(t.at(&x), other.near(&x))
        {
            desk.needs(
                &self.pointer,
                "the member \"inlet\" is missing",
                "an outlet alone leaves the mean temperature of this stream without bound",
            );
        }
    }

    /// Whether a temperature is open.
    pub fn is_open(&self) -> bool {
        matches!(self.temperatures, Temperatures::Inlet(_) | Temperatures::Outlet(_))
    }

    /// Whether the temperature slides.
    pub fn slides(&self) -> bool {
        matches!(self.temperatures, Temperatures::Sliding(..))
    }

    /// In words.
    pub fn text(&self) -> String {
        let verb = if self.side == Side::Gives { "cooled" } else { "warmed" };
        match &self.temperatures {
            Temperatures::Constant(t) => format!("at {}", t.text),
            Temperatures::Sliding(a, b, _) => format!("{verb} from {} to {}", a.text, b.text),
            Temperatures::Inlet(t) => format!("arriving at {}", t.text),
            Temperatures::Outlet(t) => format!("{verb} to {}", t.text),
        }
    }

    /// What is open, noted as missing.
    pub fn note_missing(&self, desk: &mut Desk<'_>) {
        let (name, text) = match self.temperatures {
            Temperatures::Inlet(_) => ("outlet", "the temperature at which the stream leaves"),
            Temperatures::Outlet(_) => ("inlet", "the temperature at which the stream arrives"),
            _ => return,
        };
        let what = self.pointer.trim_start_matches('/').to_owned();
        desk.lacks(format!("{}/{name}", self.pointer), format!("{text} ({what})"));
    }
}

impl Desk<'_> {
    /// The body of a member, or the ambient where it may stand in.
    pub fn body(&mut self, name: &'static str, side: Side, ambient: bool) -> Option<Body> {
        let pointer = format!("/{name}");
        let Some(node) = self.root.get(name) else {
            if !ambient {
                return None;
            }
            let Some(given) =
                self.member(Some(self.root), "ambient", Dimension::Temperature, Role::Condition)
            else {
                if self.root.get("ambient").is_none() {
                    self.needs(
                        "",
                        &format!("neither \"{name}\" nor \"ambient\" is given"),
                        "for instance \"20 degC\"",
                    );
                }
                return None;
            };
            self.assume(&pointer, format!("the {name} is the ambient at {}", given.text));
            return Some(Body { side, temperatures: Temperatures::Constant(given), pointer });
        };
        let plain = node.json_type() == Some(JsonType::Text) || node.get("value").is_some();
        if plain {
            let t = self.quantity(node, Dimension::Temperature, Role::Condition)?;
            return Some(Body { side, temperatures: Temperatures::Constant(t), pointer });
        }
        let of =
            |desk: &mut Self, m: &str| desk.member(Some(node), m, Dimension::Temperature, Role::Condition);
        let (constant, inlet, outlet) = (of(self, "temperature"), of(self, "inlet"), of(self, "outlet"));
        let medium = self.fluid(Some(node), "fluid");
        let pressure = self.member(Some(node), "pressure", Dimension::Pressure, Role::Condition);
        if node.get("fluid").is_some() != node.get("pressure").is_some() {
            let fault = node.fault(Code::Conflict, "\"fluid\" and \"pressure\" of a stream go together");
            self.faults.push(fault.hint("leave both out for a stream of constant heat capacity"));
            return None;
        }
        let temperatures = match (constant, inlet, outlet) {
            (Some(t), None, None) => Temperatures::Constant(t),
            (None, Some(a), Some(b)) => Temperatures::Sliding(a, b, medium.zip(pressure).map(Box::new)),
            (None, Some(t), None) => Temperatures::Inlet(t),
            (None, None, Some(t)) => Temperatures::Outlet(t),
            (None, None, None) => {
                if self.faults.is_empty() {
                    self.needs(
                        &pointer,
                        "no temperature is given",
                        "\"temperature\", or \"inlet\" and \"outlet\"",
                    );
                }
                return None;
            }
            (Some(_), ..) => {
                let fault =
                    node.fault(Code::Conflict, "a constant temperature and a sliding one are both given");
                self.faults.push(fault.hint("\"temperature\", or \"inlet\" and \"outlet\""));
                return None;
            }
        };
        let body = Body { side, temperatures, pointer };
        if let Temperatures::Sliding(a, b, _) = &body.temperatures {
            let x: Vec<f64> = self.inputs.iter().map(|i| i.value).collect();
            let warms = b.at(&x) - a.at(&x);
            let wrong = match side {
                Side::Gives => warms > 0.0,
                Side::Takes => warms < 0.0,
            };
            if wrong {
                let (does, should) = if side == Side::Gives {
                    ("warms", "gives heat and cools")
                } else {
                    ("cools", "takes heat and warms")
                };
                let message = format!("the {name} {does} from {} to {}, but it {should}", a.text, b.text);
                self.faults.push(
                    Diagnostic::new(Code::BadClaim, &body.pointer, message)
                        .hint("are inlet and outlet, or source and sink, interchanged?"),
                );
                return None;
            }
        }
        Some(body)
    }
}
