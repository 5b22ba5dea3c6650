//! Cautions and other fixed sentences of claims.

/// For every claim.
pub const JUDGES: &str = "This report judges figures, not equipment. Follow local codes and have design, operation and \
                          changes of plant answered for by licensed practice.";
/// Hot media.
pub const HOT: &str = "Hot surfaces, steam and hot water burn and scald.";
/// Stored pressure.
pub const PRESSURE: &str = "Stored pressure can burst vessels and pipes: relief and inspection come first.";
/// Refrigerants.
pub const REFRIGERANT: &str =
    "Refrigerants and working fluids can be toxic, flammable or displace air, and liquid frostbites.";
/// Hydrogen and oxygen.
pub const HYDROGEN: &str = "Hydrogen ignites easily and escapes through the smallest gap; oxygen makes almost anything \
                            burn: ventilation, detection and clean materials come first.";
/// Electricity.
pub const ELECTRIC: &str = "Cells and stacks stay under voltage when switched off.";
/// Asphyxiating gases.
pub const GASES: &str = "Separated gases can displace air, and enriched oxygen makes almost anything burn.";

/// Pointer of the member that tells whether auxiliaries are included.
pub const AUXILIARIES: &str = "/includes_auxiliaries";

impl super::desk::Desk<'_> {
    /// What the figure leaves out, by what the claim says of auxiliaries.
    pub fn auxiliaries(&mut self, what: &'static str) -> Vec<&'static str> {
        if self.root.get("includes_auxiliaries").and_then(crate::document::Node::boolean) == Some(true) {
            return Vec::new();
        }
        self.lacks(AUXILIARIES, format!("{what}; the figure with it can only be worse"));
        vec![what]
    }
}
