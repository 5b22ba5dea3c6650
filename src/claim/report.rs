//! The judgement of a claim, as it is answered.

use crate::report::{AssumptionReport, Figure, Formulation, Named, SHORT_WIDTH, wrapped_at};
use serde::Serialize;
#[cfg(feature = "server")]
use utoipa::ToSchema;

/// The judgement of one claim.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ClaimReport {
    /// Kind of the claim.
    pub kind: &'static str,
    /// `possible`, `at_limit`, `impossible` or `undecided`.
    #[cfg_attr(feature = "server", schema(value_type = ClaimVerdictWord))]
    pub verdict: &'static str,
    /// The judgement as a paragraph that can stand in a letter.
    pub statement: String,
    /// What is claimed.
    pub claimed: ClaimedFigure,
    /// The limit that decides; absent where the law sets none.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub limit: Option<Figure>,
    /// Every limit, by what it rests on.
    pub limits: Named<ClaimLimit>,
    /// Between what the limit lies, where a rating leaves a temperature open.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub bracket: Option<ClaimBracket>,
    /// Entropy generation of the claim as stated; negative is against the second law.
    pub entropy_generation: ClaimEntropy,
    /// Share of what the deciding limit allows.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub second_law_efficiency: Option<Figure>,
    /// Further figures by name.
    #[serde(skip_serializing_if = "Named::is_empty")]
    pub figures: Named<Figure>,
    /// Contradictions within what is stated.
    pub contradictions: Vec<ClaimRemark>,
    /// Where practice would ask for evidence.
    pub practice: Vec<ClaimRemark>,
    /// What usually lies behind a claim that is impossible or cannot be told from its limit.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub causes: Vec<&'static str>,
    /// What would decide better.
    pub missing: Vec<ClaimMissing>,
    /// What was assumed because it was not given.
    pub assumptions: Vec<AssumptionReport>,
    /// Cautions that apply to such equipment.
    pub cautions: Vec<&'static str>,
    /// Where the numbers come from.
    pub provenance: ClaimProvenance,
}

/// The verdict over a claim.
#[cfg(feature = "server")]
#[derive(ToSchema)]
#[schema(rename_all = "snake_case")]
#[allow(dead_code, reason = "only its schema is used")]
pub enum ClaimVerdictWord {
    /// The law allows it.
    Possible,
    /// The limit lies within the rounding of the claimed figure.
    AtLimit,
    /// The law forbids it, beyond the accepted probability of a false alarm.
    Impossible,
    /// What is stated cannot decide it.
    Undecided,
}

/// What is claimed.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ClaimedFigure {
    /// Which figure: `cop`, `efficiency`, `specific_work` and the like.
    pub name: &'static str,
    /// Its value, in the unit in which it was claimed where it has one; the uncertainty is that of
    /// its printed digits and what was stated.
    pub figure: Figure,
    /// Half the interval that its printed digits stand for, in the figure's unit.
    pub half_width: f64,
}

/// One limit.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ClaimLimit {
    /// What is limited.
    pub of: &'static str,
    /// The claimed value of it.
    pub claimed: Figure,
    /// The limit.
    pub figure: Figure,
    /// `at_most` or `at_least`.
    pub sense: &'static str,
    /// `law` where no device can pass it, `reference` where only some designs are bound by it.
    pub authority: &'static str,
    /// What it assumes.
    pub assumes: String,
    /// How the claim stands against this limit: `possible`, `at_limit`, `impossible` or
    /// `undecided` for a law; `within`, `at_limit`, `beyond` or `undecided` for a reference.
    pub standing: &'static str,
    /// Distance to it in standard uncertainties; negative beyond it. Absent where the figures have
    /// no uncertainty.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub z: Option<f64>,
}

/// Between what a limit lies.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ClaimBracket {
    /// Strictest limit that the open temperatures admit.
    pub strict: Figure,
    /// Most lenient one; the verdict of impossible rests on it. Absent where there is none.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub lenient: Option<Figure>,
    /// What the ends assume.
    pub assumes: String,
}

/// Entropy generation of a claim.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ClaimEntropy {
    /// Per what is named in `per`.
    pub figure: Figure,
    /// What it is counted for, for instance `kW of heat delivered`.
    pub per: &'static str,
    /// Distance from zero in standard uncertainties; absent where the figures have no uncertainty.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub z: Option<f64>,
}

/// A remark beside the law.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ClaimRemark {
    /// The rule's name.
    pub rule: &'static str,
    /// One sentence with its numbers.
    pub statement: String,
}

/// What would decide better.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ClaimMissing {
    /// JSON Pointer, or name of the parameter, of what is missing.
    pub r#where: String,
    /// What it would decide.
    pub statement: String,
}

/// Where the numbers come from.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ClaimProvenance {
    /// Name and version of the tool.
    pub tool: String,
    /// Edition of rules and defaults.
    pub edition: &'static str,
    /// SHA-256 of the claim in canonical form.
    pub claim_sha256: String,
    /// `metric`, `si` or `us`.
    pub units: &'static str,
    /// Property formulations by fluid.
    pub formulations: Named<Formulation>,
    /// The law that the limit follows from, with its source.
    pub law: &'static str,
    /// How the verdict was made.
    pub method: String,
}

impl ClaimReport {
    /// The report as plain text.
    pub fn to_text(&self) -> String {
        let wrapped = |text: &str| wrapped_at(SHORT_WIDTH, text, 0, 2);
        let mut lines = vec![
            format!("Claim    {}", self.kind.replace('_', " ")),
            format!("Verdict  {}", self.verdict.replace('_', " ").to_uppercase()),
            String::new(),
            wrapped_at(SHORT_WIDTH, &self.statement, 0, 0),
        ];
        if !self.limits.is_empty() {
            lines.push("\nLimits".to_owned());
        }
        for (name, l) in &self.limits.0 {
            let side = l.sense.replace('_', " ");
            let line = format!(
                "{} {side} {} ({}, {}); claimed {}: {}",
                l.of.replace('_', " "),
                l.figure.in_words(),
                name.replace('_', " "),
                l.authority,
                l.claimed.in_words(),
                l.standing.replace('_', " ")
            );
            lines.push(wrapped_at(SHORT_WIDTH, &line, 2, 4));
        }
        if !self.figures.is_empty() {
            lines.push("\nFigures".to_owned());
        }
        for (name, figure) in &self.figures.0 {
            lines.push(format!("  {}: {}", name.replace('_', " "), figure.in_words()));
        }
        if !self.cautions.is_empty() {
            lines.push("\nCautions".to_owned());
        }
        lines.extend(self.cautions.iter().map(|c| wrapped(&format!("! {c}"))));
        lines.push(format!("\n{}, edition {}", self.provenance.tool, self.provenance.edition));
        let text = lines.join("\n");
        // What the claimant wrote is not to steer a terminal.
        text.chars().map(|c| if c.is_control() && c != '\n' { '\u{fffd}' } else { c }).chain(['\n']).collect()
    }

    /// The report as JSON, without a final line break.
    pub fn to_json(&self) -> Vec<u8> {
        // A report holds no map with other than text keys, so this cannot fail.
        serde_json::to_vec(self).unwrap_or_default()
    }
}
