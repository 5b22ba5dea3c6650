//! Claims: a figure of a brochure against the limit that the second law sets for it.
//!
//! A claim names its kind, the conditions and one figure. Its physics gives limits and the entropy
//! that would be generated; verdict, statement and the rest follow in one way for every kind.

mod body;
mod case;
mod catalogue;
mod cell;
mod desk;
mod machine;
mod query;
mod report;
mod separation;
mod shape;
mod streams;
mod thermal;
mod three_temperature;
mod words;

pub use catalogue::{ClaimKind, catalogue};
pub use query::{Parameter, parameters};
#[cfg(feature = "server")]
pub use report::ClaimVerdictWord;
pub use report::{
    ClaimBracket, ClaimEntropy, ClaimLimit, ClaimMissing, ClaimProvenance, ClaimRemark, ClaimReport,
    ClaimedFigure,
};
pub use shape::CLAIM;

use crate::diagnostic::{Code, Diagnostic};
use crate::document::{Faults, Limits, Node, Shape, Tree, canonical, check_shape, sha256_hex};
use crate::pipeline::{Cancel, Failure};
use crate::quantity::UnitSystem;
use case::Case;
use desk::Desk;
use thermal::Machine;

/// From the bytes of a claim to its judgement.
///
/// # Errors
/// [`Failure::Rejected`] with every fault, located by JSON Pointer; [`Failure::Cancelled`].
pub fn judge_bytes(
    body: &[u8],
    limits: &Limits,
    units: UnitSystem,
    cancel: &Cancel,
) -> Result<ClaimReport, Failure> {
    let mut faults = Faults::new();
    let Some(tree) = Tree::read(body, limits, &mut faults) else {
        return Err(Failure::Rejected(faults.into_vec()));
    };
    check_shape(tree.root(), &Shape::Tagged(&CLAIM), &mut faults);
    if !faults.is_empty() {
        return Err(Failure::Rejected(faults.into_vec()));
    }
    cancel.check()?;
    let hash = sha256_hex(canonical(std::str::from_utf8(body).unwrap_or_default()).as_bytes());
    let mut desk = Desk::new(tree.root());
    let false_alarm = false_alarm(&mut desk);
    let case = case(&mut desk);
    if !desk.faults.is_empty() {
        return Err(Failure::Rejected(desk.faults.into_vec()));
    }
    let Some(case) = case else {
        let fault = Diagnostic::new(Code::BadClaim, "", "the claim cannot be judged as it is stated");
        return Err(Failure::Rejected(vec![fault]));
    };
    cancel.check()?;
    case.judge(desk, units, false_alarm, hash).map_err(|fault| Failure::Rejected(vec![fault]))
}

/// From a kind and flat parameters to a judgement. A parameter is the path of a member joined by
/// `_`, without `claim`: `source_inlet`, `cop`; [`parameters`] lists them.
///
/// # Errors
/// As [`judge_bytes`]; the pointer of a fault is the name of the parameter.
pub fn judge_query(
    kind: &str,
    params: &[(String, String)],
    limits: &Limits,
    units: UnitSystem,
    cancel: &Cancel,
) -> Result<ClaimReport, Failure> {
    let body = query::body(kind, params).map_err(Failure::Rejected)?;
    match judge_bytes(body.as_bytes(), limits, units, cancel) {
        Ok(mut report) => {
            for assumption in &mut report.assumptions {
                assumption.r#where = query::parameter_of(&assumption.r#where);
            }
            for missing in &mut report.missing {
                missing.r#where = query::parameter_of(&missing.r#where);
            }
            Ok(report)
        }
        Err(Failure::Rejected(faults)) => Err(Failure::Rejected(
            faults
                .into_iter()
                .map(|f| Diagnostic { pointer: query::parameter_of(&f.pointer), ..f })
                .collect(),
        )),
        Err(other) => Err(other),
    }
}

fn false_alarm(desk: &mut Desk<'_>) -> f64 {
    let Some(node) = desk.root.get("false_alarm") else { return case::FALSE_ALARM };
    match node.number() {
        Some(alpha) if alpha > 1e-9 && alpha < 0.5 => alpha,
        _ => {
            let fault =
                node.fault(Code::OutOfBounds, "a probability of a false alarm lies above 0 and below 0.5");
            desk.faults.push(fault);
            case::FALSE_ALARM
        }
    }
}

fn case(desk: &mut Desk<'_>) -> Option<Case> {
    match desk.root.get(CLAIM.member).and_then(Node::text)? {
        "heat_engine" => thermal::machine(desk, Machine::Engine),
        "refrigerator" => thermal::machine(desk, Machine::Refrigerator),
        "heat_pump" => thermal::machine(desk, Machine::HeatPump),
        "heat_transfer" => thermal::transfer(desk),
        "heat_transformer" => three_temperature::transformer(desk),
        "absorption_machine" => three_temperature::absorption(desk),
        "compressor" => machine::machine(desk, true),
        "expander" => machine::machine(desk, false),
        "ejector" => streams::ejector(desk),
        "splitter" => streams::splitter(desk),
        "separation" => separation::separation(desk),
        "electrolyser" => cell::cell(desk, false),
        "fuel_cell" => cell::cell(desk, true),
        _ => None,
    }
}
