//! The finished assessment and its exporters.

pub use crate::quantity::UnitSystem;

/// A finished assessment.
#[derive(Debug)]
pub struct Report {
    pub(crate) name: String,
}

impl Report {
    /// The verdict over all law tests.
    pub fn verdict(&self) -> &'static str {
        "unchecked"
    }
    /// Whether every law test that applies was made.
    pub fn complete(&self) -> bool {
        false
    }
    /// Whether the data agree with each other.
    pub fn data_verdict(&self) -> &'static str {
        "unchecked"
    }
    /// The report as JSON.
    pub fn to_json(&self, _units: UnitSystem) -> Vec<u8> {
        format!("{{\"verdict\":\"unchecked\",\"name\":{:?}}}", self.name).into_bytes()
    }
    /// The report as text.
    pub fn to_text(&self, _units: UnitSystem) -> String {
        format!("unchecked {}\n", self.name)
    }
    /// The report as CSV.
    pub fn to_csv(&self, _units: UnitSystem) -> String {
        format!("verdict\nunchecked {}\n", self.name)
    }
    /// The report as a page.
    pub fn to_html(&self, _units: UnitSystem) -> String {
        format!("<!doctype html><title>{}</title>", self.name)
    }
}
