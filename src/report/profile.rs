//! The interior of an exchanger as it is reported.

use super::Figure;
use super::assemble::Assembler;
use super::figure::plain;
use crate::process::{Arrangement, Basis};
use crate::quantity::{Dimension, display};
use serde::Serialize;
#[cfg(feature = "server")]
use utoipa::ToSchema;

/// Temperatures inside an exchanger.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ProfileReport {
    /// `counterflow`, `parallel`, `shell_1_2`, `crossflow` or `unknown`, as described.
    pub arrangement: &'static str,
    /// `duty`: `duty` of the points is in the unit of `duty`; `fraction`: it is a share of each
    /// curve's own duty, because the two differ.
    pub axis: &'static str,
    /// What the cold streams take in.
    pub duty: Figure,
    /// What the hot streams give off, where that differs.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub given_off: Option<Figure>,
    /// At most 200 points from the cold end, or from the inlet end in parallel flow; temperatures
    /// in the unit of `pinch.hot`.
    pub points: Vec<ProfilePoint>,
    /// The smallest temperature difference.
    pub pinch: PinchReport,
    /// The section in which heat would run uphill.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub crossed: Option<CrossedReport>,
    /// Conductance U A = ∫ dq/ΔT of a counterflow (or parallel-flow) exchanger with this profile.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub conductance: Option<Figure>,
    /// Log-mean of the differences at the two ends.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub log_mean_difference: Option<Figure>,
    /// Duty as share of that of infinite area between the same streams.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub effectiveness: Option<f64>,
    /// How it is to be read.
    pub note: String,
}

/// One place of a profile.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ProfilePoint {
    /// Duty passed, or its share.
    pub duty: f64,
    /// Temperature of what gives heat.
    pub hot: f64,
    /// Temperature of what takes heat.
    pub cold: f64,
}

/// The smallest temperature difference.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct PinchReport {
    /// Hot minus cold.
    pub difference: Figure,
    /// Duty passed up to there, or its share.
    pub duty: Figure,
    /// Temperature of what gives heat.
    pub hot: Figure,
    /// Temperature of what takes heat.
    pub cold: Figure,
}

/// The section in which heat would run uphill.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct CrossedReport {
    /// Where it begins.
    pub from: Figure,
    /// Where it ends.
    pub to: Figure,
    /// Its entropy generation.
    pub generation: Figure,
}

const fn word(arrangement: Arrangement) -> &'static str {
    match arrangement {
        Arrangement::Counterflow => "counterflow",
        Arrangement::Parallel => "parallel",
        Arrangement::Shell12 => "shell_1_2",
        Arrangement::Crossflow => "crossflow",
        Arrangement::Unknown => "unknown",
    }
}

impl Assembler<'_, '_> {
    /// The interior of a component; `None` where it has none or it cannot be had (which is listed
    /// among what was not checked).
    pub(super) fn profile(&mut self, k: usize) -> Option<ProfileReport> {
        let evaluation = self.evaluation;
        let profile = evaluation.profile(k).ok()??;
        let drawing = profile.draw(evaluation.view).ok()?;
        let (_, _, energy, entropy) = self.dimensions();
        let (axis, scale) =
            if profile.balanced { (energy, profile.duty.value) } else { (Dimension::Fraction, 1.0) };
        let at = |x: f64| self.bare(x * scale, axis);
        let temperature = display(Dimension::Temperature, self.units());
        let points = drawing
            .points
            .iter()
            .map(|&(x, hot, cold)| ProfilePoint {
                duty: plain(at(x).value),
                hot: plain(temperature.from_si(hot)),
                cold: plain(temperature.from_si(cold)),
            })
            .collect();
        let place = at(profile.pinch.place);
        let section = profile.crossing.as_ref().map(|c| (at(c.from), at(c.to)));
        let rate = evaluation.view.model.process.basis == Basis::Rate;
        let mut note = if profile.is_composite() {
            "Composite curves of all hot and all cold streams.".to_owned()
        } else if profile.parallel {
            "Both streams run the same way.".to_owned()
        } else if profile.arrangement == Arrangement::Counterflow {
            "The streams run against each other.".to_owned()
        } else {
            "Judged as counterflow, the kindest arrangement; any other needs larger differences.".to_owned()
        };
        if !profile.balanced {
            note.push_str(
                " The duties of the hot and the cold streams differ (a heat loss, or readings that are not \
                 reconciled): each runs over its own share.",
            );
        }
        let pinch = PinchReport {
            difference: self.figure(&profile.pinch.difference, Dimension::TemperatureDifference),
            duty: place,
            hot: self.bare(profile.pinch.hot, Dimension::Temperature),
            cold: self.bare(profile.pinch.cold, Dimension::Temperature),
        };
        let crossed = profile.crossing.as_ref().zip(section).map(|(c, (from, to))| CrossedReport {
            from,
            to,
            generation: self.figure(&c.generation, entropy),
        });
        let given_off = (!profile.balanced).then(|| self.figure(&profile.given_off, energy));
        Some(ProfileReport {
            arrangement: word(profile.arrangement),
            axis: if profile.balanced { "duty" } else { "fraction" },
            duty: self.figure(&profile.duty, energy),
            given_off,
            points,
            pinch,
            crossed,
            conductance: drawing
                .conductance
                .filter(|_| rate)
                .map(|c| self.bare(c, Dimension::ThermalConductance)),
            log_mean_difference: drawing
                .log_mean_difference
                .map(|d| self.bare(d, Dimension::TemperatureDifference)),
            effectiveness: drawing.effectiveness.map(plain),
            note,
        })
    }
}
