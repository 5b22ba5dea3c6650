//! The units, each declared once.
//!
//! Factors are exact by definition where that is said; others are from NIST SP 811 (2008),
//! appendix B. Spellings in brackets are case-sensitive codes of the Unified Code for Units of
//! Measure (UCUM). Calories and British thermal units are those of the International Table.

use super::dimension::Dimension::{self, *};
use super::unit::{Reference, Unit};

const DEFINITION: &str = "exact by definition (SI brochure, 9th edition)";
const SP811: &str = "NIST SP 811 (2008), appendix B";
const INTERNATIONAL: &str =
    "exact: international yard and pound (1959), conversion as in NIST SP 811 (2008), appendix B";
const TABLE_CALORIE: &str =
    "International Table: 1 cal = 4.1868 J, 1 Btu/lb = 2.326 kJ/kg, exact (NIST SP 811, 2008)";
const NORMAL: &str = "volume at 0 degC and 101.325 kPa (DIN 1343)";
const STANDARD: &str = "volume at 15 degC and 101.325 kPa (ISO 13443:1996)";
const SCFM: &str = "volume at 60 degF and 14.696 psi (common practice in the United States)";

/// Pound, kg.
const LB: f64 = 0.453_592_37;
/// Foot, m.
const FT: f64 = 0.3048;
/// Cubic foot, m3.
const FT3: f64 = FT * FT * FT;
/// United States gallon (231 cubic inches), m3.
const GAL: f64 = 3.785_411_784e-3;
/// British thermal unit (International Table), J.
const BTU: f64 = 1_055.055_852_62;
/// Kilocalorie (International Table), J.
const KCAL: f64 = 4186.8;
/// Kelvins in one degree Rankine.
const RANKINE: f64 = 5.0 / 9.0;
/// Minute, hour, day, s.
const MIN: f64 = 60.0;
const H: f64 = 3600.0;
const DAY: f64 = 86_400.0;
/// Pound-force per square inch, Pa.
const PSI: f64 = 6_894.757_293_168_361;
/// Technical atmosphere, kgf/cm2, Pa.
const AT: f64 = 98_066.5;

/// A unit that is proportional to the SI unit.
const fn unit(
    dimensions: &'static [Dimension],
    spellings: &'static [&'static str],
    scale: f64,
    source: &'static str,
) -> Unit {
    Unit { dimensions, spellings, scale, offset: 0.0, reference: Reference::None, source }
}

/// A unit of a gas volume at stated conditions.
const fn at(reference: Reference, base: Unit) -> Unit {
    Unit { reference, ..base }
}

/// A scale of temperature with its own zero.
const fn temperature(
    spellings: &'static [&'static str],
    scale: f64,
    offset: f64,
    source: &'static str,
) -> Unit {
    Unit { dimensions: &[Temperature], spellings, scale, offset, reference: Reference::None, source }
}

/// A unit of pressure: as it stands (absolute, or a difference), marked absolute, and gauge.
macro_rules! pressure {
    ($code:literal $(, $alias:literal)* => $scale:expr, $source:expr) => {
        [
            Unit {
                reference: Reference::Absolute,
                ..unit(&[Pressure, PressureDifference], &[$code $(, $alias)*], $scale, $source)
            },
            Unit {
                reference: Reference::Absolute,
                ..unit(&[Pressure], &[concat!($code, "(a)"), concat!($code, "(abs)") $(, concat!($alias, "(a)"))*], $scale, $source)
            },
            Unit {
                reference: Reference::Gauge,
                ..unit(&[Pressure], &[concat!($code, "(g)"), concat!($code, "(gauge)") $(, concat!($alias, "(g)"))*], $scale, $source)
            },
        ]
    };
}

const PRESSURES: &[[Unit; 3]] = &[
    pressure!("Pa" => 1.0, DEFINITION),
    pressure!("hPa" => 100.0, DEFINITION),
    pressure!("kPa" => 1e3, DEFINITION),
    pressure!("MPa" => 1e6, DEFINITION),
    pressure!("mbar" => 100.0, DEFINITION),
    pressure!("bar" => 1e5, DEFINITION),
    pressure!("psi", "[psi]", "lbf/in2" => PSI, SP811),
    pressure!("atm" => 101_325.0, DEFINITION),
    pressure!("kgf/cm2", "kg/cm2" => AT, "exact: technical atmosphere, 9.80665 N/cm2 (NIST SP 811, 2008)"),
    pressure!("mmHg", "mm[Hg]", "Torr" => 133.322_4, "conventional millimetre of mercury (NIST SP 811, 2008)"),
    pressure!("inHg", "[in_i'Hg]" => 3_386.389, "conventional inch of mercury (NIST SP 811, 2008)"),
    pressure!("inH2O", "[in_i'H2O]", "inWC", "inwg" => 249.088_9, "conventional inch of water (NIST SP 811, 2008)"),
    pressure!("mmH2O", "mm[H2O]", "mmWC", "mmWS" => 9.806_65, "conventional millimetre of water (NIST SP 811, 2008)"),
    pressure!("mH2O", "m[H2O]", "mWC", "mWS" => 9_806.65, "conventional metre of water (NIST SP 811, 2008)"),
];

const OTHERS: &[Unit] = &[
    // temperature and its differences
    unit(&[Temperature, TemperatureDifference], &["K"], 1.0, DEFINITION),
    temperature(&["degC", "Cel", "C", "celsius"], 1.0, 273.15, DEFINITION),
    temperature(&["degF", "[degF]", "F", "fahrenheit"], RANKINE, 459.67 * RANKINE, SP811),
    unit(&[Temperature, TemperatureDifference], &["R", "[degR]", "degR"], RANKINE, SP811),
    unit(&[TemperatureDifference], &["delta degC", "delta C", "delta Cel", "delta K"], 1.0, DEFINITION),
    unit(&[TemperatureDifference], &["delta degF", "delta [degF]", "delta F", "delta R"], RANKINE, SP811),
    // technical atmospheres, whose last letter already tells the reference
    Unit {
        reference: Reference::Absolute,
        ..unit(&[Pressure, PressureDifference], &["at", "att"], AT, SP811)
    },
    Unit { reference: Reference::Absolute, ..unit(&[Pressure], &["ata"], AT, SP811) },
    Unit { reference: Reference::Gauge, ..unit(&[Pressure], &["ati", "at(g)"], AT, SP811) },
    // mass flow
    unit(&[MassFlow], &["kg/s"], 1.0, DEFINITION),
    unit(&[MassFlow], &["kg/min"], 1.0 / MIN, DEFINITION),
    unit(&[MassFlow], &["kg/h", "kg/hr"], 1.0 / H, DEFINITION),
    unit(&[MassFlow], &["kg/d"], 1.0 / DAY, DEFINITION),
    unit(&[MassFlow], &["g/s"], 1e-3, DEFINITION),
    unit(&[MassFlow], &["g/min"], 1e-3 / MIN, DEFINITION),
    unit(&[MassFlow], &["g/h"], 1e-3 / H, DEFINITION),
    unit(&[MassFlow], &["t/h", "tph", "t/hr"], 1e3 / H, DEFINITION),
    unit(&[MassFlow], &["t/d"], 1e3 / DAY, DEFINITION),
    unit(&[MassFlow], &["kt/a"], 1e6 / (365.25 * DAY), DEFINITION),
    unit(&[MassFlow], &["lb/s", "[lb_av]/s"], LB, INTERNATIONAL),
    unit(&[MassFlow], &["lb/min", "[lb_av]/min"], LB / MIN, INTERNATIONAL),
    unit(&[MassFlow], &["lb/h", "[lb_av]/h", "lb/hr", "lbm/h", "pph"], LB / H, INTERNATIONAL),
    unit(&[MassFlow], &["klb/h", "klb/hr", "kpph"], 1e3 * LB / H, INTERNATIONAL),
    // mole flow
    unit(&[MoleFlow], &["mol/s"], 1.0, DEFINITION),
    unit(&[MoleFlow], &["mol/min"], 1.0 / MIN, DEFINITION),
    unit(&[MoleFlow], &["mol/h"], 1.0 / H, DEFINITION),
    unit(&[MoleFlow], &["kmol/s"], 1e3, DEFINITION),
    unit(&[MoleFlow], &["kmol/h", "kmol/hr"], 1e3 / H, DEFINITION),
    unit(&[MoleFlow], &["lbmol/h", "lbmol/hr"], 1e3 * LB / H, INTERNATIONAL),
    unit(&[MoleFlow], &["lbmol/s"], 1e3 * LB, INTERNATIONAL),
    // volume flow
    at(Reference::Actual, unit(&[VolumeFlow], &["m3/s"], 1.0, DEFINITION)),
    at(Reference::Actual, unit(&[VolumeFlow], &["m3/min"], 1.0 / MIN, DEFINITION)),
    at(Reference::Actual, unit(&[VolumeFlow], &["m3/h", "m3/hr", "Am3/h", "cmh"], 1.0 / H, DEFINITION)),
    at(Reference::Actual, unit(&[VolumeFlow], &["m3/d"], 1.0 / DAY, DEFINITION)),
    at(Reference::Actual, unit(&[VolumeFlow], &["L/s", "l/s"], 1e-3, DEFINITION)),
    at(Reference::Actual, unit(&[VolumeFlow], &["L/min", "l/min", "lpm"], 1e-3 / MIN, DEFINITION)),
    at(Reference::Actual, unit(&[VolumeFlow], &["L/h", "l/h"], 1e-3 / H, DEFINITION)),
    at(
        Reference::Actual,
        unit(&[VolumeFlow], &["gpm", "gal/min", "[gal_us]/min", "usgpm"], GAL / MIN, INTERNATIONAL),
    ),
    at(
        Reference::Actual,
        unit(&[VolumeFlow], &["cfm", "acfm", "ft3/min", "[cft_i]/min"], FT3 / MIN, INTERNATIONAL),
    ),
    at(Reference::Actual, unit(&[VolumeFlow], &["ft3/s", "cfs", "[cft_i]/s"], FT3, INTERNATIONAL)),
    at(Reference::Actual, unit(&[VolumeFlow], &["ft3/h", "cfh", "[cft_i]/h"], FT3 / H, INTERNATIONAL)),
    at(Reference::Normal, unit(&[VolumeFlow], &["Nm3/s", "m3(N)/s"], 1.0, NORMAL)),
    at(Reference::Normal, unit(&[VolumeFlow], &["Nm3/min", "m3(N)/min"], 1.0 / MIN, NORMAL)),
    at(Reference::Normal, unit(&[VolumeFlow], &["Nm3/h", "m3(N)/h", "Nm3/hr", "mn3/h"], 1.0 / H, NORMAL)),
    at(Reference::Normal, unit(&[VolumeFlow], &["kNm3/h"], 1e3 / H, NORMAL)),
    at(Reference::Normal, unit(&[VolumeFlow], &["Nm3/d", "m3(N)/d"], 1.0 / DAY, NORMAL)),
    at(Reference::Normal, unit(&[VolumeFlow], &["NL/min", "Nl/min"], 1e-3 / MIN, NORMAL)),
    at(Reference::Standard, unit(&[VolumeFlow], &["Sm3/s", "m3(S)/s"], 1.0, STANDARD)),
    at(Reference::Standard, unit(&[VolumeFlow], &["Sm3/h", "m3(S)/h", "Sm3/hr"], 1.0 / H, STANDARD)),
    at(Reference::Standard, unit(&[VolumeFlow], &["Sm3/d", "m3(S)/d"], 1.0 / DAY, STANDARD)),
    at(Reference::StandardCubicFoot, unit(&[VolumeFlow], &["scfm", "SCFM", "scf/min"], FT3 / MIN, SCFM)),
    at(Reference::StandardCubicFoot, unit(&[VolumeFlow], &["scfh", "SCFH", "scf/h"], FT3 / H, SCFM)),
    at(Reference::StandardCubicFoot, unit(&[VolumeFlow], &["MMSCFD", "MMscf/d"], 1e6 * FT3 / DAY, SCFM)),
    // amounts
    unit(&[Mass], &["kg"], 1.0, DEFINITION),
    unit(&[Mass], &["g"], 1e-3, DEFINITION),
    unit(&[Mass], &["mg"], 1e-6, DEFINITION),
    unit(&[Mass], &["t", "Mg"], 1e3, DEFINITION),
    unit(&[Mass], &["lb", "[lb_av]", "lbm"], LB, INTERNATIONAL),
    unit(&[Mass], &["klb"], 1e3 * LB, INTERNATIONAL),
    unit(&[Moles], &["mol"], 1.0, DEFINITION),
    unit(&[Moles], &["kmol"], 1e3, DEFINITION),
    unit(&[Moles], &["lbmol"], 1e3 * LB, INTERNATIONAL),
    at(Reference::Actual, unit(&[Volume], &["m3"], 1.0, DEFINITION)),
    at(Reference::Actual, unit(&[Volume], &["L", "l", "dm3"], 1e-3, DEFINITION)),
    at(Reference::Actual, unit(&[Volume], &["mL", "ml", "cm3"], 1e-6, DEFINITION)),
    at(Reference::Actual, unit(&[Volume], &["ft3", "[cft_i]"], FT3, INTERNATIONAL)),
    at(Reference::Actual, unit(&[Volume], &["gal", "[gal_us]"], GAL, INTERNATIONAL)),
    at(Reference::Normal, unit(&[Volume], &["Nm3", "m3(N)"], 1.0, NORMAL)),
    at(Reference::Normal, unit(&[Volume], &["NL", "Nl"], 1e-3, NORMAL)),
    at(Reference::Standard, unit(&[Volume], &["Sm3", "m3(S)"], 1.0, STANDARD)),
    at(Reference::StandardCubicFoot, unit(&[Volume], &["scf", "SCF"], FT3, SCFM)),
    // power
    unit(&[Power], &["W", "J/s"], 1.0, DEFINITION),
    unit(&[Power], &["kW", "kJ/s", "kWe", "kWth"], 1e3, DEFINITION),
    unit(&[Power], &["MW", "MJ/s", "MWe", "MWth"], 1e6, DEFINITION),
    unit(&[Power], &["GW"], 1e9, DEFINITION),
    unit(&[Power], &["kJ/h", "kJ/hr"], 1e3 / H, DEFINITION),
    unit(&[Power], &["MJ/h", "MJ/hr"], 1e6 / H, DEFINITION),
    unit(&[Power], &["GJ/h", "GJ/hr"], 1e9 / H, DEFINITION),
    unit(&[Power], &["kcal/h", "kcal/hr", "kcal_IT/h"], KCAL / H, TABLE_CALORIE),
    unit(&[Power], &["Gcal/h", "Gcal/hr"], 1e6 * KCAL / H, TABLE_CALORIE),
    unit(&[Power], &["Btu/h", "Btu/hr", "BTU/h", "BTU/hr", "[Btu_IT]/h"], BTU / H, TABLE_CALORIE),
    unit(&[Power], &["kBtu/h", "kBtu/hr", "MBH"], 1e3 * BTU / H, TABLE_CALORIE),
    unit(&[Power], &["MMBtu/h", "MMBtu/hr", "MMBTU/h", "MMBTU/hr"], 1e6 * BTU / H, TABLE_CALORIE),
    unit(&[Power], &["Btu/s", "BTU/s"], BTU, TABLE_CALORIE),
    unit(&[Power], &["hp", "[HP]", "bhp"], 745.699_871_582_270_2, "exact: 550 ft lbf/s (NIST SP 811, 2008)"),
    unit(&[Power], &["PS"], 735.498_75, "exact: 75 m kgf/s (NIST SP 811, 2008)"),
    unit(
        &[Power],
        &["TR", "RT", "USRT"],
        12_000.0 * BTU / H,
        "ton of refrigeration, 12000 Btu/h (NIST SP 811, 2008)",
    ),
    // energy
    unit(&[Energy], &["J"], 1.0, DEFINITION),
    unit(&[Energy], &["kJ"], 1e3, DEFINITION),
    unit(&[Energy], &["MJ"], 1e6, DEFINITION),
    unit(&[Energy], &["GJ"], 1e9, DEFINITION),
    unit(&[Energy], &["TJ"], 1e12, DEFINITION),
    unit(&[Energy], &["Wh"], H, DEFINITION),
    unit(&[Energy], &["kWh"], 1e3 * H, DEFINITION),
    unit(&[Energy], &["MWh"], 1e6 * H, DEFINITION),
    unit(&[Energy], &["GWh"], 1e9 * H, DEFINITION),
    unit(&[Energy], &["Btu", "BTU", "[Btu_IT]"], BTU, TABLE_CALORIE),
    unit(&[Energy], &["kBtu"], 1e3 * BTU, TABLE_CALORIE),
    unit(&[Energy], &["MMBtu", "MMBTU", "dekatherm"], 1e6 * BTU, TABLE_CALORIE),
    unit(&[Energy], &["therm"], 1e5 * BTU, TABLE_CALORIE),
    unit(&[Energy], &["kcal", "kcal_IT"], KCAL, TABLE_CALORIE),
    unit(&[Energy], &["Gcal"], 1e6 * KCAL, TABLE_CALORIE),
    // specific energy and entropy
    unit(&[SpecificEnergy], &["J/kg"], 1.0, DEFINITION),
    unit(&[SpecificEnergy], &["kJ/kg", "J/g"], 1e3, DEFINITION),
    unit(&[SpecificEnergy], &["MJ/kg", "GJ/t"], 1e6, DEFINITION),
    unit(&[SpecificEnergy], &["MJ/t"], 1e3, DEFINITION),
    unit(&[SpecificEnergy], &["kWh/kg", "MWh/t"], 1e3 * H, DEFINITION),
    unit(&[SpecificEnergy], &["kWh/t", "Wh/kg"], H, DEFINITION),
    unit(&[SpecificEnergy], &["Btu/lb", "BTU/lb", "Btu/lbm", "[Btu_IT]/[lb_av]"], 2326.0, TABLE_CALORIE),
    unit(&[SpecificEnergy], &["kcal/kg", "cal/g"], KCAL, TABLE_CALORIE),
    unit(&[SpecificEntropy], &["J/(kg K)"], 1.0, DEFINITION),
    unit(&[SpecificEntropy], &["kJ/(kg K)", "J/(g K)", "kJ/(kg degC)", "kJ/(kg C)"], 1e3, DEFINITION),
    unit(
        &[SpecificEntropy],
        &[
            "Btu/(lb degF)",
            "Btu/(lb F)",
            "Btu/(lb R)",
            "BTU/(lb F)",
            "BTU/(lb R)",
            "Btu/(lbm R)",
            "Btu/(lbm F)",
        ],
        KCAL,
        TABLE_CALORIE,
    ),
    unit(
        &[SpecificEntropy],
        &["kcal/(kg K)", "kcal/(kg degC)", "kcal/(kg C)", "cal/(g K)"],
        KCAL,
        TABLE_CALORIE,
    ),
    unit(&[MolarEnergy], &["J/mol", "kJ/kmol"], 1.0, DEFINITION),
    unit(&[MolarEnergy], &["kJ/mol", "MJ/kmol"], 1e3, DEFINITION),
    unit(&[MolarEnergy], &["kcal/mol"], KCAL, TABLE_CALORIE),
    unit(&[MolarEnergy], &["Btu/lbmol"], 2.326, TABLE_CALORIE),
    unit(&[MolarEntropy], &["J/(mol K)", "kJ/(kmol K)"], 1.0, DEFINITION),
    unit(&[MolarEntropy], &["kJ/(mol K)"], 1e3, DEFINITION),
    unit(
        &[MolarEntropy],
        &["Btu/(lbmol degF)", "Btu/(lbmol R)", "Btu/(lbmol F)", "cal/(mol K)"],
        KCAL / 1e3,
        TABLE_CALORIE,
    ),
    at(Reference::Actual, unit(&[EnergyPerVolume], &["J/m3"], 1.0, DEFINITION)),
    at(Reference::Actual, unit(&[EnergyPerVolume], &["kJ/m3"], 1e3, DEFINITION)),
    at(Reference::Actual, unit(&[EnergyPerVolume], &["MJ/m3"], 1e6, DEFINITION)),
    at(Reference::Actual, unit(&[EnergyPerVolume], &["kWh/m3"], 1e3 * H, DEFINITION)),
    at(Reference::Actual, unit(&[EnergyPerVolume], &["kW/(m3/min)"], 1e3 * MIN, DEFINITION)),
    at(Reference::Actual, unit(&[EnergyPerVolume], &["MJ/L", "MJ/l"], 1e9, DEFINITION)),
    at(Reference::Normal, unit(&[EnergyPerVolume], &["kJ/Nm3", "kJ/m3(N)"], 1e3, NORMAL)),
    at(Reference::Normal, unit(&[EnergyPerVolume], &["MJ/Nm3", "MJ/m3(N)"], 1e6, NORMAL)),
    at(Reference::Normal, unit(&[EnergyPerVolume], &["kWh/Nm3", "kWh/m3(N)"], 1e3 * H, NORMAL)),
    at(Reference::Normal, unit(&[EnergyPerVolume], &["kcal/Nm3", "kcal/m3(N)"], KCAL, NORMAL)),
    at(Reference::Standard, unit(&[EnergyPerVolume], &["MJ/Sm3", "MJ/m3(S)"], 1e6, STANDARD)),
    at(Reference::Standard, unit(&[EnergyPerVolume], &["kWh/Sm3", "kWh/m3(S)"], 1e3 * H, STANDARD)),
    at(Reference::StandardCubicFoot, unit(&[EnergyPerVolume], &["Btu/scf", "BTU/scf"], BTU / FT3, SCFM)),
    // entropy and conductance
    unit(&[EntropyRate, ThermalConductance], &["W/K", "W/degC"], 1.0, DEFINITION),
    unit(&[EntropyRate, ThermalConductance], &["kW/K", "kW/degC", "kJ/(s K)"], 1e3, DEFINITION),
    unit(&[EntropyRate, ThermalConductance], &["MW/K"], 1e6, DEFINITION),
    unit(&[EntropyRate, ThermalConductance], &["kJ/(h K)"], 1e3 / H, DEFINITION),
    unit(&[EntropyRate, ThermalConductance], &["kcal/(h K)", "kcal/(h degC)"], KCAL / H, TABLE_CALORIE),
    unit(
        &[EntropyRate, ThermalConductance],
        &["Btu/(h degF)", "Btu/(h F)", "Btu/(h R)", "Btu/(hr F)"],
        BTU / H / RANKINE,
        TABLE_CALORIE,
    ),
    unit(&[Entropy], &["J/K"], 1.0, DEFINITION),
    unit(&[Entropy], &["kJ/K"], 1e3, DEFINITION),
    unit(&[Entropy], &["MJ/K"], 1e6, DEFINITION),
    unit(&[Entropy], &["kWh/K"], 1e3 * H, DEFINITION),
    unit(&[Entropy], &["Btu/degF", "Btu/F", "Btu/R"], BTU / RANKINE, TABLE_CALORIE),
    // density and its kin
    unit(&[Density], &["kg/m3", "g/L", "g/l"], 1.0, DEFINITION),
    unit(&[Density], &["kg/L", "kg/l", "g/cm3", "kg/dm3", "g/mL", "t/m3"], 1e3, DEFINITION),
    unit(&[Density], &["lb/ft3", "[lb_av]/[cft_i]", "lbm/ft3"], LB / FT3, INTERNATIONAL),
    unit(&[Density], &["lb/gal"], LB / GAL, INTERNATIONAL),
    unit(&[SpecificVolume], &["m3/kg"], 1.0, DEFINITION),
    unit(&[SpecificVolume], &["L/kg", "l/kg", "dm3/kg", "cm3/g"], 1e-3, DEFINITION),
    unit(&[SpecificVolume], &["ft3/lb", "ft3/lbm"], FT3 / LB, INTERNATIONAL),
    at(Reference::Actual, unit(&[MassConcentration], &["kg/m3", "g/L", "g/l"], 1.0, DEFINITION)),
    at(Reference::Actual, unit(&[MassConcentration], &["g/m3", "mg/L", "mg/l"], 1e-3, DEFINITION)),
    at(Reference::Actual, unit(&[MassConcentration], &["mg/m3"], 1e-6, DEFINITION)),
    at(Reference::Normal, unit(&[MassConcentration], &["g/Nm3", "g/m3(N)"], 1e-3, NORMAL)),
    at(Reference::Normal, unit(&[MassConcentration], &["mg/Nm3", "mg/m3(N)"], 1e-6, NORMAL)),
    at(Reference::Standard, unit(&[MassConcentration], &["mg/Sm3", "mg/m3(S)"], 1e-6, STANDARD)),
    unit(&[MolarMass], &["kg/mol"], 1.0, DEFINITION),
    unit(&[MolarMass], &["g/mol", "kg/kmol", "lb/lbmol"], 1e-3, DEFINITION),
    // pure numbers
    unit(&[Fraction, HumidityRatio], &["1"], 1.0, DEFINITION),
    unit(&[Fraction], &["%", "percent", "pct"], 1e-2, DEFINITION),
    unit(&[Fraction], &["pp", "percentage points"], 1e-2, DEFINITION),
    unit(&[Fraction], &["ppm", "[ppm]", "ppmv", "ppmw"], 1e-6, DEFINITION),
    unit(&[Fraction], &["ppb", "[ppb]"], 1e-9, DEFINITION),
    unit(&[HumidityRatio], &["kg/kg", "lb/lb"], 1.0, DEFINITION),
    unit(&[HumidityRatio], &["g/kg"], 1e-3, DEFINITION),
    unit(
        &[HumidityRatio],
        &["gr/lb", "[gr]/[lb_av]"],
        1.0 / 7000.0,
        "exact: 7000 grains to the pound (NIST SP 811, 2008)",
    ),
    // geometry, motion, time, electricity
    unit(&[Velocity], &["m/s"], 1.0, DEFINITION),
    unit(&[Velocity], &["km/h"], 1e3 / H, DEFINITION),
    unit(&[Velocity], &["ft/s", "[ft_i]/s"], FT, INTERNATIONAL),
    unit(&[Velocity], &["ft/min", "fpm"], FT / MIN, INTERNATIONAL),
    unit(&[Length], &["m"], 1.0, DEFINITION),
    unit(&[Length], &["mm"], 1e-3, DEFINITION),
    unit(&[Length], &["cm"], 1e-2, DEFINITION),
    unit(&[Length], &["km"], 1e3, DEFINITION),
    unit(&[Length], &["ft", "[ft_i]"], FT, INTERNATIONAL),
    unit(&[Length], &["in", "[in_i]"], 0.0254, INTERNATIONAL),
    unit(&[Area], &["m2"], 1.0, DEFINITION),
    unit(&[Area], &["cm2"], 1e-4, DEFINITION),
    unit(&[Area], &["mm2"], 1e-6, DEFINITION),
    unit(&[Area], &["ft2", "[sft_i]"], FT * FT, INTERNATIONAL),
    unit(&[Area], &["in2", "[sin_i]"], 0.0254 * 0.0254, INTERNATIONAL),
    unit(&[Duration], &["s", "sec"], 1.0, DEFINITION),
    unit(&[Duration], &["ms"], 1e-3, DEFINITION),
    unit(&[Duration], &["min"], MIN, DEFINITION),
    unit(&[Duration], &["h", "hr"], H, DEFINITION),
    unit(&[Duration], &["d", "day", "days"], DAY, DEFINITION),
    unit(&[Duration], &["a", "year", "years", "yr"], 365.25 * DAY, "Julian year of 365.25 d (UCUM)"),
    unit(&[ElectricPotential], &["V"], 1.0, DEFINITION),
    unit(&[ElectricPotential], &["mV"], 1e-3, DEFINITION),
    unit(&[ElectricPotential], &["kV"], 1e3, DEFINITION),
    // emissions
    unit(&[EmissionPerEnergy], &["kg/J"], 1.0, DEFINITION),
    unit(&[EmissionPerEnergy], &["kg/MJ"], 1e-6, DEFINITION),
    unit(&[EmissionPerEnergy], &["kg/GJ", "g/MJ", "t/TJ"], 1e-9, DEFINITION),
    unit(&[EmissionPerEnergy], &["g/kWh", "kg/MWh"], 1e-6 / H, DEFINITION),
    unit(&[EmissionPerEnergy], &["kg/kWh", "t/MWh"], 1e-3 / H, DEFINITION),
    unit(&[EmissionPerEnergy], &["lb/MMBtu", "[lb_av]/MMBtu"], LB / (1e6 * BTU), TABLE_CALORIE),
];

/// Every unit, in the order of the table.
pub(super) fn rows() -> impl Iterator<Item = &'static Unit> {
    PRESSURES.as_flattened().iter().chain(OTHERS)
}
