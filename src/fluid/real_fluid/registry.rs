//! The fluids that the package knows, and their names.

use super::RealFluid;
use crate::diagnostic::nearest;
use std::collections::HashMap;
use std::sync::{Arc, OnceLock};

/// Every data file.
const FILES: &[&str] = &[
    include_str!("../data/AkasakaZhouLemmon2015-R245fa.json"),
    include_str!("../data/BueckerWagner2006-butane.json"),
    include_str!("../data/BueckerWagner2006-ethane.json"),
    include_str!("../data/BueckerWagner2006-isobutane.json"),
    include_str!("../data/GaoWuBellHarveyLemmon2023-ammonia.json"),
    include_str!("../data/GaoWuZhangLemmon2016-sulfur-dioxide.json"),
    include_str!("../data/GedanitzDavilaLemmon2015-cyclopentane.json"),
    include_str!("../data/KameiBeyerleinJacobsen1995-R22.json"),
    include_str!("../data/LeachmanJacobsenPenoncelloLemmon2009-hydrogen.json"),
    include_str!("../data/Lemmon2003-R404A.json"),
    include_str!("../data/Lemmon2003-R407C.json"),
    include_str!("../data/Lemmon2003-R410A.json"),
    include_str!("../data/Lemmon2003-R507A.json"),
    include_str!("../data/LemmonAkasaka2022-R1234yf.json"),
    include_str!("../data/LemmonJacobsen2000-R143a.json"),
    include_str!("../data/LemmonJacobsen2005-R125.json"),
    include_str!("../data/LemmonJacobsenPenoncelloFriend2000-air.json"),
    include_str!("../data/LemmonMcLindenWagner2009-propane.json"),
    include_str!("../data/LemmonOverhoffMcLindenWagner-propylene.json"),
    include_str!("../data/LemmonSpan2006-carbon-monoxide.json"),
    include_str!("../data/LemmonSpan2006-hydrogen-sulfide.json"),
    include_str!("../data/LemmonSpan2006-isopentane.json"),
    include_str!("../data/LemmonSpan2006-toluene.json"),
    include_str!("../data/OrtizVegaHallHolsteArpHarveyLemmon2023-helium.json"),
    include_str!("../data/OutcaltMcLinden1996-R152a.json"),
    include_str!("../data/SchmidtWagner1985-oxygen.json"),
    include_str!("../data/SchroederPenoncelloSchroeder2014-ethanol.json"),
    include_str!("../data/SetzmannWagner1991-methane.json"),
    include_str!("../data/SmukalaSpanWagner2000-ethylene.json"),
    include_str!("../data/SpanLemmonJacobsenWagnerYokozeki2000-nitrogen.json"),
    include_str!("../data/SpanWagner1996-carbon-dioxide.json"),
    include_str!("../data/TegelerSpanWagner1999-argon.json"),
    include_str!("../data/TholDubberkeRutkaiWindmannKoesterSpanVrabec2016-hexamethyldisiloxane.json"),
    include_str!("../data/TholLemmon2016-R1234zeE.json"),
    include_str!("../data/TholUhdeLemmonSpan2019-pentane.json"),
    include_str!("../data/TholWangLemmonSpan2019-hexane.json"),
    include_str!("../data/TillnerRothBaehr1994-R134a.json"),
    include_str!("../data/TillnerRothYokozeki1997-R32.json"),
    include_str!("../data/deReuckCraven1993-methanol.json"),
];

/// Every fluid, in the order of the files. Read once; the package's tests read every file, so none
/// is left out.
pub fn catalogue() -> &'static [Arc<RealFluid>] {
    static FLUIDS: OnceLock<Vec<Arc<RealFluid>>> = OnceLock::new();
    FLUIDS.get_or_init(|| FILES.iter().filter_map(|text| RealFluid::parse(text).ok().map(Arc::new)).collect())
}

/// What is compared of a name: letters and digits, in lower case.
fn fold(name: &str) -> String {
    name.chars().filter(|c| c.is_alphanumeric()).flat_map(char::to_lowercase).collect()
}

/// The fluid of this name. Case, blanks and hyphens do not matter: `R-134a`, `r134A` and
/// `HFC-134a` are one, as are `CO2`, `R744` and `carbon dioxide`.
///
/// # Errors
/// The nearest names that are known, none where nothing is near.
pub fn by_name(name: &str) -> Result<&'static Arc<RealFluid>, Vec<&'static str>> {
    static BY_NAME: OnceLock<HashMap<String, &'static Arc<RealFluid>>> = OnceLock::new();
    let fluids = catalogue();
    let by_name = BY_NAME
        .get_or_init(|| fluids.iter().flat_map(|f| f.names().iter().map(move |n| (fold(n), f))).collect());
    by_name
        .get(&fold(name))
        .copied()
        .ok_or_else(|| nearest(name, fluids.iter().flat_map(|f| f.names().iter().map(String::as_str))))
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::collections::BTreeMap;

    #[test]
    fn every_file_can_be_read() {
        for text in FILES {
            if let Err(e) = RealFluid::parse(text) {
                panic!("{e} in {}", text.lines().nth(1).unwrap_or(""));
            }
        }
        assert_eq!(catalogue().len(), FILES.len());
    }

    #[test]
    fn names_are_unique() {
        let mut seen = BTreeMap::new();
        for fluid in catalogue() {
            for name in fluid.names() {
                let other = seen.insert(fold(name), fluid.name());
                assert!(other.is_none(), "{name} names {other:?} and {}", fluid.name());
            }
        }
    }

    #[test]
    fn people_find_their_fluid() {
        for (written, canonical) in [
            ("R-134a", "R134a"),
            ("hfc 134A", "R134a"),
            ("R717", "ammonia"),
            ("Ammonia", "ammonia"),
            ("CO2", "carbon dioxide"),
            ("R744", "carbon dioxide"),
            ("propane", "propane"),
            ("R290", "propane"),
            ("n-butane", "butane"),
            ("R-600", "butane"),
            ("R600a", "isobutane"),
            ("isopentane", "isopentane"),
            ("Cyclopentane", "cyclopentane"),
            ("R1234ze(E)", "R1234ze(E)"),
            ("r-1234yf", "R1234yf"),
            ("methane", "methane"),
            ("R-507", "R507A"),
            ("sulphur dioxide", "sulfur dioxide"),
        ] {
            assert_eq!(by_name(written).map(|f| f.name()), Ok(canonical), "{written}");
        }
    }

    #[test]
    fn a_miss_offers_the_nearest() {
        assert!(by_name("R134").unwrap_err().contains(&"R134a"));
        assert!(by_name("amonia").unwrap_err().contains(&"ammonia"));
        assert!(by_name("unobtainium").unwrap_err().is_empty());
    }
}
