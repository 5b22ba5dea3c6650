//! From a claim's physics to its judgement: propagation of uncertainty, limits, verdict, words.

use super::desk::{Computed, Desk, Input};
use super::report::{
    ClaimBracket, ClaimEntropy, ClaimLimit, ClaimProvenance, ClaimRemark, ClaimReport, ClaimedFigure,
};
use crate::diagnostic::{Code, Diagnostic};
use crate::evidence::{normal_cdf, normal_quantile};
use crate::quantity::{Dimension, Scale, UnitSystem, display};
use crate::report::{Figure, Named};
use crate::rules::phrase;
use std::rc::Rc;

/// A figure as function of the inputs.
pub type Physics = Box<dyn Fn(&[f64]) -> Computed<f64>>;

/// A figure that several closures use.
pub type Shared = Rc<dyn Fn(&[f64]) -> Computed<f64>>;

/// Relative rounding of a computed limit.
const ROUNDING: f64 = 1e-9;
/// One-sided 95 % point of the normal distribution: above it a claim keeps its limit.
const HOLDS_ABOVE: f64 = 1.645;
/// Accepted probability of calling a lawful claim impossible.
pub const FALSE_ALARM: f64 = 0.01;

/// On which side of its limit a claim must stay.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sense {
    /// The claim may not exceed it.
    AtMost,
    /// The claim may not fall short of it.
    AtLeast,
}

/// A limit of a claim.
pub struct Limit {
    /// Name in the answer.
    pub name: &'static str,
    /// The name of what is limited, its claimed value and dimension; the claim's figure if absent.
    pub of: Option<(&'static str, Physics, Dimension)>,
    /// The side to stay on.
    pub sense: Sense,
    /// The limit; infinite where there is none.
    pub value: Physics,
    /// What it assumes.
    pub assumes: String,
    /// Whether no device can pass it.
    pub law: bool,
}

/// The unit in which the claimant speaks, where the physics counts otherwise.
pub struct Shown {
    /// SI value in that unit's dimension per SI value of the physics.
    pub factor: Physics,
    /// The unit.
    pub scale: Scale,
}

/// Entropy generation of a claim.
pub struct Entropy {
    /// Its value in SI.
    pub value: Physics,
    /// Its dimension.
    pub dimension: Dimension,
    /// What it is counted for.
    pub per: &'static str,
}

/// A claim ready to be judged.
pub struct Case {
    /// Kind.
    pub kind: &'static str,
    /// A sentence that says what is claimed.
    pub subject: String,
    /// The law, with its source.
    pub law: &'static str,
    /// Name of the claimed figure, and its words in a sentence.
    pub figure: (&'static str, &'static str),
    /// The claimed figure.
    pub claimed: Physics,
    /// Its dimension.
    pub dimension: Dimension,
    /// The unit it is stated in.
    pub shown: Option<Shown>,
    /// Limits; the first one of law decides first.
    pub limits: Vec<Limit>,
    /// Strict end of a bracket and what it assumes.
    pub strict: Option<(Physics, String)>,
    /// Entropy generation.
    pub entropy: Entropy,
    /// Whether the ratio to the limit means anything.
    pub relative: bool,
    /// Share of the limit from which practice asks for evidence.
    pub practice: Option<f64>,
    /// Further figures.
    pub figures: Vec<(&'static str, Physics, Dimension)>,
    /// Two sides of an equality that the data should keep, with rule and words.
    pub contradictions: Vec<(&'static str, Physics, Dimension, &'static str)>,
    /// Sentences about what the figures mean, added to the statement.
    pub notes: Vec<String>,
    /// What the figure leaves out, for the statement.
    pub not_included: Vec<&'static str>,
    /// What usually lies behind a claim beyond the limit.
    pub causes: &'static [&'static str],
    /// Cautions.
    pub cautions: Vec<&'static str>,
}

/// A figure with its standard uncertainty and rounding half width.
#[derive(Clone, Copy, Debug)]
struct Known {
    value: f64,
    u: f64,
    half: f64,
}

fn beyond_computing() -> Diagnostic {
    Diagnostic::new(
        Code::BadClaim,
        "/claim",
        "the figures of the claim are too large or small to compute with",
    )
}

/// Value and uncertainty by half differences over one standard uncertainty each
/// (JCGM 100:2008, 5.1.3, note 2).
fn propagate(inputs: &[Input], f: &dyn Fn(&[f64]) -> Computed<f64>) -> Computed<Known> {
    let mut x: Vec<f64> = inputs.iter().map(|i| i.value).collect();
    let value = f(&x)?;
    if value.is_nan() {
        return Err(beyond_computing());
    }
    if value.is_infinite() {
        return Ok(Known { value, u: 0.0, half: 0.0 });
    }
    let (mut variance, mut half) = (0.0, 0.0);
    for (i, input) in inputs.iter().enumerate() {
        let mut spread = |step: f64| -> Computed<f64> {
            let mut at = |x_i: f64| {
                let Some(slot) = x.get_mut(i) else { return Ok(value) };
                *slot = x_i;
                let y = f(&x);
                if let Some(slot) = x.get_mut(i) {
                    *slot = input.value;
                }
                y
            };
            // Beyond a formulation's range one side has to do.
            match (at(input.value + step), at(input.value - step)) {
                (Ok(a), Ok(b)) if a.is_finite() && b.is_finite() => Ok(0.5 * (a - b).abs()),
                (Ok(a), _) if a.is_finite() => Ok((a - value).abs()),
                (_, Ok(b)) if b.is_finite() => Ok((b - value).abs()),
                (Err(e), _) | (_, Err(e)) => Err(e),
                _ => Ok(0.0),
            }
        };
        if input.u > 0.0 {
            variance += spread(input.u)?.powi(2);
        }
        if input.half > 0.0 {
            half += spread(input.half)?;
        }
    }
    Ok(Known { value, u: variance.sqrt(), half })
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
enum Standing {
    Possible,
    AtLimit,
    Undecided,
    Impossible,
}

impl Standing {
    const fn text(self) -> &'static str {
        match self {
            Standing::Possible => "possible",
            Standing::AtLimit => "at_limit",
            Standing::Undecided => "undecided",
            Standing::Impossible => "impossible",
        }
    }

    const fn beside_a_reference(self) -> &'static str {
        match self {
            Standing::Possible => "within",
            Standing::Impossible => "beyond",
            other => other.text(),
        }
    }
}

fn clamped(z: f64) -> f64 {
    if z.is_finite() { z.clamp(-1e6, 1e6) } else { 0.0 }
}

/// Where a claimed figure stands against a limit, and z.
fn stand(claimed: Known, limit: f64, margin: Known, false_alarm: f64) -> (Standing, f64) {
    let scale = ROUNDING * claimed.value.abs().max(limit.abs());
    let z = clamped(margin.value / margin.u.hypot(scale).max(f64::MIN_POSITIVE));
    let standing = if (limit - claimed.value).abs() <= margin.half * (1.0 + 1e-9) + scale {
        Standing::AtLimit
    } else if z < -normal_quantile(1.0 - false_alarm) {
        Standing::Impossible
    } else if z > HOLDS_ABOVE {
        Standing::Possible
    } else {
        Standing::Undecided
    };
    (standing, z)
}

fn words(value: f64, dimension: Dimension) -> String {
    phrase::figure(value, dimension)
}

/// Four decimals at most of z.
fn rounded(z: f64) -> f64 {
    (z * 1e4).round() / 1e4
}

impl Case {
    /// The judgement.
    pub fn judge(
        self,
        mut desk: Desk<'_>,
        units: UnitSystem,
        false_alarm: f64,
        claim_sha256: String,
    ) -> Computed<ClaimReport> {
        if !desk.exact.is_empty() {
            let text = format!("conditions taken as exact: {}", desk.exact.join(", "));
            desk.assume("", text);
        }
        let inputs = desk.inputs.as_slice();
        let figure = |k: Known, d: Dimension| Figure::new(k.value, k.u, d, units);
        let (factor, scale, metric) = self.speech(inputs, units)?;
        let main = |k: Known| Figure::in_unit(k.value * factor, k.u * factor, &scale);
        let spoken = |value: f64| in_words(value * factor, &metric);
        let finite = |k: Known| {
            if k.value.is_finite() && k.u.is_finite() { Ok(k) } else { Err(beyond_computing()) }
        };
        let claimed = finite(propagate(inputs, &self.claimed)?)?;
        let mut limits = Named::default();
        let mut verdict = Standing::Possible;
        // The deciding limit: the worst standing among the laws, and of equals the first.
        let mut deciding: Option<Deciding> = None;
        let mut sentences = Vec::new();
        for (i, limit) in self.limits.iter().enumerate() {
            let (of, subject, dimension) = match &limit.of {
                Some((of, physics, dimension)) => (*of, physics, Some(*dimension)),
                None => (self.figure.0, &self.claimed, None),
            };
            let show = |k: Known| dimension.map_or_else(|| main(k), |d| figure(k, d));
            let value = propagate(inputs, &limit.value)?;
            if value.value.is_infinite() {
                continue;
            }
            let own = propagate(inputs, subject)?;
            let sign = if limit.sense == Sense::AtMost { 1.0 } else { -1.0 };
            let margin = propagate(inputs, &|x| Ok(sign * ((limit.value)(x)? - subject(x)?)))?;
            let (standing, z) = stand(own, value.value, margin, false_alarm);
            if limit.law {
                if deciding.is_none_or(|d| standing > d.standing) {
                    deciding = Some(Deciding { index: i, limit: value, claimed: own, standing });
                }
                verdict = verdict.max(standing);
            }
            let text = dimension.map_or_else(|| spoken(value.value), |d| words(value.value, d));
            // A reference that is the limit of law itself says nothing new.
            let repeats = !limit.law
                && deciding.is_some_and(|d| (d.limit.value - value.value).abs() <= 1e-6 * value.value.abs());
            if !repeats {
                sentences.push((i, text, standing));
            }
            limits.push(
                limit.name,
                ClaimLimit {
                    of,
                    claimed: show(own),
                    figure: show(value),
                    sense: if limit.sense == Sense::AtMost { "at_most" } else { "at_least" },
                    authority: if limit.law { "law" } else { "reference" },
                    assumes: limit.assumes.clone(),
                    standing: if limit.law { standing.text() } else { standing.beside_a_reference() },
                    z: (margin.u > 0.0).then(|| rounded(z)),
                },
            );
        }
        let mut bracket = None;
        if let Some((physics, assumes)) = &self.strict {
            let strict = propagate(inputs, physics)?;
            let sense = self.limits.first().map_or(Sense::AtMost, |l| l.sense);
            let sign = if sense == Sense::AtMost { 1.0 } else { -1.0 };
            let margin = propagate(inputs, &|x| Ok(sign * (physics(x)? - (self.claimed)(x)?)))?;
            let inside = strict.value.is_infinite()
                || stand(claimed, strict.value, margin, false_alarm).0 <= Standing::AtLimit;
            if !inside && verdict == Standing::Possible {
                verdict = Standing::Undecided;
            }
            let lenient = deciding.map(|d| main(d.limit));
            if strict.value.is_finite() {
                bracket = Some(ClaimBracket { strict: main(strict), lenient, assumes: assumes.clone() });
            }
        }
        let sigma = finite(propagate(inputs, &self.entropy.value)?)?;
        let z_sigma = (sigma.u > 0.0).then(|| clamped(sigma.value / sigma.u));
        let ratio = deciding.filter(|_| self.relative).map(|Deciding { index, limit, .. }| {
            let sense = self.limits.get(index).map_or(Sense::AtMost, |l| l.sense);
            (
                if sense == Sense::AtMost {
                    claimed.value / limit.value
                } else {
                    limit.value / claimed.value
                },
                claimed.u / claimed.value.abs(),
            )
        });
        let ratio = ratio.filter(|(r, _)| r.is_finite() && *r > 0.0);
        let mut practice = Vec::new();
        if let (Some(most), Some((share, _))) = (self.practice, ratio)
            && verdict != Standing::Impossible
            && share > most
        {
            practice.push(ClaimRemark {
                rule: "claim-close-to-limit",
                statement: format!(
                    "The claim is {} % of what the second law allows; built machines rarely pass {} %, so ask for \
                     the test report, its temperatures and what it includes (common practice).",
                    phrase::number(100.0 * share),
                    phrase::number(100.0 * most)
                ),
            });
        }
        let mut contradictions = Vec::new();
        for (rule, physics, dimension, text) in &self.contradictions {
            let gap = propagate(inputs, physics)?;
            let allowed = gap.half.max(normal_quantile(1.0 - 0.5 * false_alarm) * gap.u);
            if gap.value.abs() > allowed {
                contradictions.push(ClaimRemark {
                    rule,
                    statement: format!(
                        "{text}: {} is left over, and the printed digits explain {}.",
                        words(gap.value, *dimension),
                        words(allowed, *dimension)
                    ),
                });
            }
        }
        let mut figures = Named::default();
        for (name, physics, dimension) in &self.figures {
            let known = propagate(inputs, physics)?;
            if known.value.is_finite() {
                figures.push(*name, figure(known, *dimension));
            }
        }
        let mut statement = self.subject.clone();
        // Claimed figure and limit are those of one test: the one that decides.
        let decided = deciding
            .filter(|_| verdict > Standing::Possible)
            .and_then(|d| Some((d.claimed, self.limits.get(d.index)?.of.as_ref()?)));
        let (name, told, own) = match decided {
            Some((own, of)) => (of.0, Some(of.2), own),
            None => (self.figure.0, None, claimed),
        };
        let deciding = match (decided, deciding) {
            (None, Some(d)) => {
                // Of laws that are all kept, the one on the claimed figure itself speaks.
                let of_the_figure = self.limits.get(d.index).is_some_and(|l| l.of.is_none());
                Some(d).filter(|_| of_the_figure)
            }
            (_, d) => d,
        };
        let width = |half: f64| match told {
            Some(d) => in_words(half, &Scale { offset: 0.0, ..display(d, UnitSystem::Metric) }),
            None => in_words(half * factor, &Scale { offset: 0.0, ..metric }),
        };
        let said = Said {
            name: told.map_or_else(|| self.figure.1.to_owned(), |_| spelled(name)),
            figure: told.map_or_else(|| spoken(own.value), |d| words(own.value, d)),
            width: (own.half > 0.0).then(|| width(own.half).replace("degC", "K")),
            coarse: deciding
                .is_some_and(|d| (d.limit.value - d.claimed.value).abs() > 1e-3 * d.limit.value.abs()),
            limited: !sentences.is_empty(),
            verdict,
            sentences,
        };
        self.say_limits(&mut statement, &said, &bracket);
        self.say_entropy(&mut statement, sigma, z_sigma, verdict);
        let mut say = |text: &str| {
            statement.push(' ');
            statement.push_str(text);
        };
        for note in &self.notes {
            say(note);
        }
        for remark in contradictions.iter().chain(&practice) {
            say(&remark.statement);
        }
        if verdict >= Standing::Undecided && !self.causes.is_empty() {
            say(&format!("What usually lies behind such a figure: {}.", self.causes.join("; ")));
        }
        say(&format!("The limit follows from: {}.", self.law));
        let assumed: Vec<&str> = desk.assumptions.iter().map(|a| a.statement.as_str()).collect();
        if !assumed.is_empty() {
            say(&format!("Assumed: {}.", assumed.join("; ")));
        }
        if !self.not_included.is_empty() {
            say(&format!("Not included: {}.", self.not_included.join("; ")));
        }
        // What is not included has been said.
        let gaps = desk.missing.iter().filter(|m| m.r#where != super::words::AUXILIARIES);
        let missing: Vec<&str> = gaps.map(|m| m.statement.as_str()).collect();
        if !missing.is_empty() {
            say(&format!("To decide better: {}.", missing.join("; ")));
        }
        Ok(ClaimReport {
            kind: self.kind,
            verdict: verdict.text(),
            statement,
            claimed: ClaimedFigure {
                name,
                figure: told.map_or_else(|| main(own), |d| figure(own, d)),
                half_width: match told {
                    Some(d) => Figure::in_unit(own.half, 0.0, &Scale { offset: 0.0, ..display(d, units) }),
                    None => Figure::in_unit(own.half * factor, 0.0, &Scale { offset: 0.0, ..scale }),
                }
                .value,
            },
            limit: deciding.map(|d| told.map_or_else(|| main(d.limit), |t| figure(d.limit, t))),
            limits,
            bracket,
            entropy_generation: ClaimEntropy {
                figure: figure(sigma, self.entropy.dimension),
                per: self.entropy.per,
                z: z_sigma.map(rounded),
            },
            second_law_efficiency: ratio.map(|(r, u)| Figure::new(r, r * u, Dimension::Fraction, units)),
            figures,
            contradictions,
            practice,
            causes: if verdict >= Standing::Undecided { self.causes.to_vec() } else { Vec::new() },
            missing: desk.missing,
            assumptions: desk.assumptions,
            cautions: self.cautions,
            provenance: ClaimProvenance {
                tool: concat!("sigmadot ", env!("CARGO_PKG_VERSION")).to_owned(),
                edition: "2026",
                claim_sha256,
                units: units.text(),
                formulations: desk.formulations,
                law: self.law,
                method: format!(
                    "one-sided test at a false-alarm probability of {false_alarm} (JCGM 106:2012), uncertainty by \
                     half differences (JCGM 100:2008, 5.1.3); printed digits of the claimed figure as half width of \
                     a rectangular distribution; at the limit where the limit lies within that half width"
                ),
            },
        })
    }

    /// Factor, unit of the answer and unit of the sentences for the claimed figure.
    fn speech(&self, inputs: &[Input], units: UnitSystem) -> Computed<(f64, Scale, Scale)> {
        match &self.shown {
            Some(shown) => {
                let factor = propagate(inputs, &shown.factor)?.value;
                Ok((factor, shown.scale, shown.scale))
            }
            None => Ok((1.0, display(self.dimension, units), display(self.dimension, UnitSystem::Metric))),
        }
    }

    fn say_limits(&self, out: &mut String, said: &Said, bracket: &Option<ClaimBracket>) {
        let mut say = |text: String| {
            out.push(' ');
            out.push_str(&text);
        };
        let name = self.figure.1;
        if !said.limited {
            say(format!("Under these conditions the second law sets the {name} no limit."));
        }
        for (i, limit, standing) in &said.sentences {
            let Some(l) = self.limits.get(*i) else { continue };
            let side = if l.sense == Sense::AtMost { "at most" } else { "at least" };
            let of = l.of.as_ref().map_or(name.to_owned(), |o| spelled(o.0));
            let label = l.name.replace('_', " ");
            if l.law {
                say(format!("By the second law the {of} is {side} {limit} ({label}: {}).", l.assumes));
            } else {
                let where_it_is = match standing {
                    Standing::Possible => "keeps within that",
                    Standing::AtLimit => "is at that figure",
                    Standing::Undecided => "cannot be told from that figure",
                    Standing::Impossible => "goes beyond it, which some designs can",
                };
                say(format!(
                    "For reference, {side} {limit} ({label}: {}); the claim {where_it_is}.",
                    l.assumes
                ));
            }
        }
        let (name, figure) = (&said.name, &said.figure);
        let rounding =
            said.width.as_ref().map(|w| format!(" (±{w} by its printed digits)")).unwrap_or_default();
        say(match said.verdict {
            Standing::Possible => format!("The claimed {name} of {figure}{rounding} is possible."),
            Standing::AtLimit if said.coarse => format!(
                "Its printed digits cannot tell the claimed {name} of {figure}{rounding} from the limit; a figure \
                 with more digits would decide."
            ),
            Standing::AtLimit => format!(
                "The claimed {name} of {figure}{rounding} is at the limit: only a machine without any loss, friction \
                 or temperature difference would reach it."
            ),
            Standing::Impossible => {
                format!("The claimed {name} of {figure}{rounding} is impossible as stated.")
            }
            Standing::Undecided if bracket.is_some() => {
                format!(
                    "Whether the claimed {name} of {figure}{rounding} is possible depends on what is left open."
                )
            }
            Standing::Undecided => format!(
                "The claimed {name} of {figure}{rounding} cannot be told from the limit with these uncertainties."
            ),
        });
        if let Some(b) = bracket {
            let strict = format!(
                "{} {}",
                phrase::number(b.strict.value),
                if b.strict.unit == "1" { "" } else { b.strict.unit }
            );
            say(format!("The limit may be as strict as {}: {}.", strict.trim(), b.assumes));
        }
    }

    fn say_entropy(&self, out: &mut String, sigma: Known, z: Option<f64>, verdict: Standing) {
        let amount = words(sigma.value, self.entropy.dimension);
        let per = match self.entropy.per {
            whole if whole.starts_with("the ") => format!(" for {whole}"),
            unit => format!(" per {unit}"),
        };
        out.push_str(&format!(" As stated it would generate an entropy of {amount}{per}"));
        if verdict == Standing::Impossible && sigma.value < 0.0 {
            out.push_str(", which no device can have below zero");
            if let Some(z) = z {
                out.push_str(&format!(
                    "; the chance of such a figure at the limit is {}",
                    phrase::probability(normal_cdf(z))
                ));
            }
        } else if verdict == Standing::Impossible {
            out.push_str(", enough as a whole; it is another bound that the claim breaks");
        }
        out.push('.');
    }
}

/// The limit that decides, with the figure it bounds.
#[derive(Clone, Copy)]
struct Deciding {
    index: usize,
    limit: Known,
    claimed: Known,
    standing: Standing,
}

/// The name of a limited figure in words: `sink_hottest_temperature` is the hottest temperature of
/// the sink.
fn spelled(name: &str) -> String {
    let plain = name.replace('_', " ");
    for body in ["sink", "source"] {
        if let Some(rest) = plain.strip_prefix(body).and_then(|r| r.strip_prefix(' ')) {
            return format!("{rest} of the {body}");
        }
    }
    plain
}

/// What the statement says about limits.
struct Said {
    name: String,
    figure: String,
    width: Option<String>,
    /// Whether the limit is another figure, which only the digits do not tell apart.
    coarse: bool,
    /// Whether there is any limit.
    limited: bool,
    verdict: Standing,
    sentences: Vec<(usize, String, Standing)>,
}

/// An SI value in a unit, in words.
fn in_words(value: f64, scale: &Scale) -> String {
    let number = phrase::number(scale.from_si(value));
    if scale.code == "1" { number } else { format!("{number} {}", scale.code) }
}
