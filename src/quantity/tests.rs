use super::*;
use crate::diagnostic::Code;

fn si(text: &str, dimension: Dimension) -> f64 {
    match read_text(text, dimension, Bounds::Physical) {
        Ok(literal) => literal.value,
        Err(fault) => panic!("{text}: {fault}"),
    }
}

fn code(text: &str, dimension: Dimension) -> Code {
    match read_text(text, dimension, Bounds::Physical) {
        Ok(literal) => panic!("{text} was read as {}", literal.value),
        Err(fault) => fault.code,
    }
}

fn hint(text: &str, dimension: Dimension) -> String {
    read_text(text, dimension, Bounds::Physical).unwrap_err().hint.unwrap_or_default().into_owned()
}

#[track_caller]
fn close(got: f64, wanted: f64) {
    assert!((got - wanted).abs() <= 1e-6 * wanted.abs().max(1e-12), "{got} is not {wanted}");
}

/// Expected values: NIST SP 811 (2008), appendix B, and definitions.
#[test]
fn published_conversions() {
    use Dimension::*;
    for (text, dimension, wanted) in [
        ("150 degC", Temperature, 423.15),
        ("150 °C", Temperature, 423.15),
        ("150 C", Temperature, 423.15),
        ("150 Cel", Temperature, 423.15),
        ("150°C", Temperature, 423.15),
        ("212 F", Temperature, 373.15),
        ("32 [degF]", Temperature, 273.15),
        ("491.67 R", Temperature, 273.15),
        ("-40 degF", Temperature, 233.15),
        ("9 delta degF", TemperatureDifference, 5.0),
        ("9 R", TemperatureDifference, 5.0),
        ("5 ΔK", TemperatureDifference, 5.0),
        ("42 bar(g)", Pressure, 42e5),
        ("42 bar (g)", Pressure, 42e5),
        ("42 barg", Pressure, 42e5),
        ("42 bar(a)", Pressure, 42e5),
        ("1 psig", Pressure, 6894.757),
        ("1 ata", Pressure, 98_066.5),
        ("1 kgf/cm²", Pressure, 98_066.5),
        ("760 mmHg", Pressure, 101_325.0),
        ("1 inHg", Pressure, 3386.389),
        ("10 inH2O", PressureDifference, 2490.889),
        ("1 t/h", MassFlow, 1000.0 / 3600.0),
        ("1 [lb_av]/h", MassFlow, 1.259_979e-4),
        ("1 gpm", VolumeFlow, 6.309_020e-5),
        ("1 cfm", VolumeFlow, 4.719_474e-4),
        ("3600 Nm³/h", VolumeFlow, 1.0),
        ("3600 Nm3 / h", VolumeFlow, 1.0),
        ("1 MMBtu/h", Power, 2.930_711e5),
        ("1 hp", Power, 745.6999),
        ("1 TR", Power, 3516.853),
        ("1 kcal/h", Power, 1.163),
        ("1 Btu", Energy, 1055.056),
        ("1 kWh", Energy, 3.6e6),
        ("1 Btu/lb", SpecificEnergy, 2326.0),
        ("1 kWh/kg", SpecificEnergy, 3.6e6),
        ("1 Btu/(lb F)", SpecificEntropy, 4186.8),
        ("1 kJ/kg/K", SpecificEntropy, 1000.0),
        ("1 kJ/kg.K", SpecificEntropy, 1000.0),
        ("1 kJ/(kg·K)", SpecificEntropy, 1000.0),
        ("1 kJ/(kg*K)", SpecificEntropy, 1000.0),
        ("1 kJ kg-1 K-1", SpecificEntropy, 1000.0),
        ("1 kJ.kg-1.K-1", SpecificEntropy, 1000.0),
        ("1 lb/ft^3", Density, 16.018_46),
        ("10 kWh/Nm3", EnergyPerVolume, 3.6e7),
        ("50 mg/Nm3", MassConcentration, 5e-5),
        ("28.97 kg/kmol", MolarMass, 0.028_97),
        ("8 g/kg", HumidityRatio, 0.008),
        ("0.008", HumidityRatio, 0.008),
        ("85 %", Fraction, 0.85),
        ("0.85", Fraction, 0.85),
        ("400 ppm", Fraction, 4e-4),
        ("-9.5e3 kJ/h", Power, -9.5e6 / 3600.0),
        ("−5 kW", Power, -5000.0),
        ("35 EUR/MWh", PricePerEnergy, 35.0 / 3.6e9),
        ("1.5 kEUR/h", CostRate, 1500.0 / 3600.0),
        ("2 MEUR", Money, 2e6),
        ("300 USD/t", PricePerMass, 0.3),
        ("56.1 kg/GJ", EmissionPerEnergy, 56.1e-9),
    ] {
        close(si(text, dimension), wanted);
    }
}

#[test]
fn references_are_kept() {
    use Dimension::*;
    let reference = |text, dimension| read_text(text, dimension, Bounds::Physical).unwrap().scale.reference;
    assert_eq!(reference("1 bar", Pressure), Reference::Absolute);
    assert_eq!(reference("1 psi(g)", Pressure), Reference::Gauge);
    assert_eq!(reference("1 kPag", Pressure), Reference::Gauge);
    assert_eq!(reference("1 ati", Pressure), Reference::Gauge);
    assert_eq!(reference("1 m3/h", VolumeFlow), Reference::Actual);
    assert_eq!(reference("1 Nm3/h", VolumeFlow), Reference::Normal);
    assert_eq!(reference("1 Sm3/h", VolumeFlow), Reference::Standard);
    assert_eq!(reference("1 scfm", VolumeFlow), Reference::StandardCubicFoot);
    let (t, p) = Reference::StandardCubicFoot.conditions().unwrap();
    close(t, 288.705_556);
    close(p, 101_325.353);
    let price = read_text("35 EUR/MWh", PricePerEnergy, Bounds::Physical).unwrap();
    assert_eq!(price.scale.currency.unwrap().as_str(), "EUR");
}

#[test]
fn faults_are_told_apart() {
    use Dimension::*;
    assert_eq!(code("150", Temperature), Code::BareNumber);
    assert_eq!(code("5 degC", TemperatureDifference), Code::WrongDimension);
    assert_eq!(code("5 F", TemperatureDifference), Code::WrongDimension);
    assert_eq!(code("5 delta degC", Temperature), Code::WrongDimension);
    assert_eq!(code("5 bar(g)", PressureDifference), Code::WrongDimension);
    assert_eq!(code("5 kW", MassFlow), Code::WrongDimension);
    assert_eq!(code("5 EUR/MWh", Power), Code::WrongDimension);
    assert_eq!(code("5 kW", PricePerEnergy), Code::WrongDimension);
    assert_eq!(code("5 eur/MWh", PricePerEnergy), Code::UnknownUnit);
    assert_eq!(code("5 furlong", Length), Code::UnknownUnit);
    assert_eq!(code("5 kj/kg", SpecificEnergy), Code::UnknownUnit);
    for text in
        ["1,5 bar", "1,000 bar", "1 000 bar", "1'000 bar", "1_000 bar", "1.000.000 bar", "1\u{a0}000 bar"]
    {
        assert_eq!(code(text, Pressure), Code::BadQuantity, "{text}");
        assert!(!hint(text, Pressure).is_empty());
    }
    for text in ["", " ", "bar", "±5 bar", "+ 5 bar", "- 5 bar", ". bar", "e5 bar", "--5 bar"] {
        assert_eq!(code(text, Pressure), Code::BadQuantity, "{text}");
    }
    assert_eq!(code("150 degC ± 2 K", Temperature), Code::BadQuantity);
    for text in [
        "NaN bar",
        "inf bar",
        "-Infinity bar",
        "1e999 bar",
        "-1e999 bar",
        "1e-999 bar",
        "1e308 MPa",
        "1e30 bar",
        "-1e26 bar",
    ] {
        assert_eq!(code(text, Pressure), Code::BadNumber, "{text}");
    }
    assert_eq!(code("1e99999999999999999999 bar", Pressure), Code::BadNumber);
    assert_eq!(code("1e-99999999999999999999 bar", Pressure), Code::BadNumber);
    assert_eq!(code("0e999 W", Power), Code::BadNumber);
    for text in ["0 K", "-273.15 degC", "-459.67 degF", "-300 degC", "0 R"] {
        assert_eq!(code(text, Temperature), Code::BelowAbsoluteZero, "{text}");
    }
    assert_eq!(code("0 bar", Pressure), Code::BelowAbsoluteZero);
    assert_eq!(code("-0.2 bar", Pressure), Code::BelowAbsoluteZero);
    close(si("-0.2 bar(g)", Pressure), -2e4);
    assert_eq!(read_text("0 bar", Pressure, Bounds::Finite).unwrap().value, 0.0);
}

#[test]
fn hints_help() {
    use Dimension::*;
    assert!(hint("5 degC", TemperatureDifference).contains("delta degC"));
    assert!(hint("5 kj/kg", SpecificEnergy).contains("\"kJ/kg\""));
    assert!(hint("5 Bar", Pressure).contains("\"bar\""));
    assert!(hint("150", Temperature).contains("150 degC"));
    assert!(hint("1,5 bar", Pressure).contains("1.5"));
    let wrong = read_text("5 kW", MassFlow, Bounds::Physical).unwrap_err();
    assert!(wrong.message.contains("power") && wrong.message.contains("mass flow"), "{wrong}");
}

#[test]
fn half_a_unit_of_the_last_digit() {
    let half = |text, dimension| read_text(text, dimension, Bounds::Physical).unwrap().half_digit;
    assert_eq!(half("530 degC", Dimension::Temperature), 0.5);
    assert_eq!(half("530.0 degC", Dimension::Temperature), 0.05);
    assert_eq!(half("1.20e3 K", Dimension::Temperature), 5.0);
    assert_eq!(half("4.8 kW", Dimension::Power), 50.0);
    assert_eq!(half("4.80 kW", Dimension::Power), 5.0);
    close(half("68 degF", Dimension::Temperature), 0.5 / 1.8);
    assert_eq!(half("3.20", Dimension::Fraction), 0.005);
    assert!((half("1e-20 W", Dimension::Power) / 0.5e-20 - 1.0).abs() < 1e-12);
}

fn spread(text: UncertaintyText<'_>, value: &str, dimension: Dimension) -> Result<Uncertainty, Code> {
    let literal = read_text(value, dimension, Bounds::Physical).unwrap();
    Spread::read(text, dimension, &literal.scale)
        .and_then(|s| s.checked_at(literal.value))
        .map_err(|fault| fault.code)
}

#[test]
fn uncertainties() {
    use Dimension::*;
    use UncertaintyText as U;
    let u = |text, value, dimension| spread(text, value, dimension).unwrap().u;
    close(u(U::Plain("0.5 K"), "150 degC", Temperature), 0.5);
    close(u(U::Plain("0.9 delta degF"), "150 degF", Temperature), 0.5);
    close(u(U::Plain("±0.5 K"), "150 degC", Temperature), 0.5 / 3_f64.sqrt());
    close(u(U::HalfWidth("0.5 K"), "150 degC", Temperature), 0.5 / 3_f64.sqrt());
    close(u(U::Expanded("1 K", 2.0), "150 degC", Temperature), 0.5);
    close(u(U::Plain("1 %"), "300 K", Temperature), 3.0);
    close(u(U::Plain("1 %"), "4 bar", Pressure), 4e3);
    close(u(U::Plain("1 %"), "-4 kW", Power), 40.0);
    close(u(U::Plain("±1 %"), "4 kW", Power), 40.0 / 3_f64.sqrt());
    close(u(U::Plain("0.1 bar"), "4 bar(g)", Pressure), 1e4);
    close(u(U::Plain("0.02"), "0.7", Fraction), 0.02);
    close(u(U::Plain("2 pp"), "70 %", Fraction), 0.02);
    close(u(U::Reported("0.01"), "1.2 kJ/(kg K)", SpecificEntropy), 10.0);
    close(u(U::Reported("0.9"), "32 degF", Temperature), 0.5);
    close(u(U::Plain("2 EUR/MWh"), "35 EUR/MWh", PricePerEnergy), 2.0 / 3.6e9);
    // IEC 60751 class B at 100 degC: 0.8 K; IEC 60584-1 class 1 type K at 1000 degC: 4 K.
    close(u(U::Instrument("iec-60751-b"), "100 degC", Temperature), 0.8 / 3_f64.sqrt());
    close(u(U::Instrument("IEC-60584-1-K"), "1000 degC", Temperature), 4.0 / 3_f64.sqrt());
    close(u(U::Instrument("iec-60584-1-s"), "1200 degC", Temperature), 1.3 / 3_f64.sqrt());

    let fault = |text, value, dimension| spread(text, value, dimension).unwrap_err();
    assert_eq!(fault(U::Plain("1 %"), "150 degC", Temperature), Code::BadUncertainty);
    assert_eq!(fault(U::Plain("1 %"), "4 bar(g)", Pressure), Code::BadUncertainty);
    assert_eq!(fault(U::Plain("-1 K"), "150 degC", Temperature), Code::BadUncertainty);
    assert_eq!(fault(U::Plain("nan K"), "150 degC", Temperature), Code::BadUncertainty);
    assert_eq!(fault(U::Plain("1e999 K"), "150 degC", Temperature), Code::BadUncertainty);
    assert_eq!(fault(U::Plain("1 degC"), "150 degC", Temperature), Code::WrongDimension);
    assert_eq!(fault(U::Plain("1"), "150 degC", Temperature), Code::BareNumber);
    assert_eq!(fault(U::Plain("0.1 bar(g)"), "4 bar(g)", Pressure), Code::WrongDimension);
    assert_eq!(fault(U::Plain("1 m3/h"), "4 Nm3/h", VolumeFlow), Code::BadUncertainty);
    assert_eq!(fault(U::Plain("1 USD"), "4 EUR", Money), Code::BadUncertainty);
    assert_eq!(fault(U::Expanded("1 K", 0.0), "150 degC", Temperature), Code::BadUncertainty);
    assert_eq!(fault(U::Expanded("1 K", f64::NAN), "150 degC", Temperature), Code::BadUncertainty);
    assert_eq!(fault(U::Instrument("iec-60751-b"), "700 degC", Temperature), Code::BadUncertainty);
    assert_eq!(fault(U::Instrument("iec-60751-z"), "70 degC", Temperature), Code::BadUncertainty);
    assert_eq!(fault(U::Instrument("iec-60751-b"), "4 bar", Pressure), Code::BadUncertainty);
    assert_eq!(fault(U::Reported("-1"), "4 bar", Pressure), Code::BadUncertainty);
}

#[test]
fn tolerance_laws_are_continuous_where_the_standard_joins_them() {
    // The kinks stated in IEC 60584-1: 375, 333.3, 133.3, 600, -166.7, 800 degC.
    for (name, celsius, wanted) in [
        ("iec-60584-1-k", 375.0, 1.5),
        ("iec-60584-2-n", 1000.0 / 3.0, 2.5),
        ("iec-60584-2-t", 400.0 / 3.0, 1.0),
        ("iec-60584-2-r", 600.0, 1.5),
        ("iec-60584-3-e", -500.0 / 3.0, 2.5),
        ("iec-60584-3-b", 800.0, 4.0),
        ("iec-60584-1-r", 1100.0, 1.0),
    ] {
        close(Instrument::find(name).unwrap().tolerance(celsius + 273.15), wanted);
    }
}

#[test]
fn the_table_is_sound() {
    let mut seen = std::collections::HashMap::new();
    for unit in catalogue() {
        assert!(unit.scale > 0.0 && unit.scale.is_finite() && !unit.source.is_empty());
        assert!(!unit.dimensions.is_empty() && !unit.spellings.is_empty());
        for spelling in unit.spellings {
            for &dimension in unit.dimensions {
                let found = find(spelling, dimension).unwrap();
                assert_eq!((found.scale, found.offset), (unit.scale, unit.offset), "{spelling}");
                assert_eq!(found.reference, unit.reference, "{spelling}");
                if let Some(other) = seen.insert((dimension, *spelling), unit.code()) {
                    panic!("{spelling} means {other} and {} as {dimension}", unit.code());
                }
            }
        }
    }
    for &dimension in Dimension::ALL {
        assert!(read_text(dimension.example(), dimension, Bounds::Physical).is_ok(), "{dimension}");
        if dimension.per().is_none() {
            let own = find(dimension.si_unit(), dimension).unwrap();
            assert_eq!((own.scale, own.offset), (1.0, 0.0), "{dimension}");
        }
    }
}

#[test]
fn reported_units_can_be_read_back() {
    for &dimension in Dimension::ALL {
        for &system in UnitSystem::ALL {
            let shown = display(dimension, system);
            let code = match dimension.per() {
                Some(_) => format!("EUR{}", shown.code),
                None => shown.code.to_owned(),
            };
            let back = find(&code, dimension).unwrap();
            for value in [300.0, 1.25e5, 3.7e-3] {
                close(back.to_si(shown.from_si(value)), value);
            }
            assert_eq!(UnitSystem::read(system.text()), Some(system));
        }
    }
    close(display(Dimension::Temperature, UnitSystem::Metric).from_si(423.15), 150.0);
    close(display(Dimension::Temperature, UnitSystem::Us).difference_from_si(5.0), 9.0);
    assert_eq!(display(Dimension::EntropyRate, UnitSystem::Metric).code, "kW/K");
}

/// A small generator (xorshift64*, Vigna 2016) with a fixed seed.
struct Random(u64);

impl Random {
    fn next(&mut self) -> u64 {
        self.0 ^= self.0 >> 12;
        self.0 ^= self.0 << 25;
        self.0 ^= self.0 >> 27;
        self.0.wrapping_mul(0x2545_F491_4F6C_DD1D)
    }

    fn below(&mut self, n: usize) -> usize {
        usize::try_from(self.next() % n as u64).unwrap()
    }
}

#[test]
fn random_values_survive_a_round_trip_through_every_unit() {
    let mut random = Random(0x5eed_0001);
    for unit in catalogue() {
        for &dimension in unit.dimensions {
            for spelling in unit.spellings {
                let digits = random.below(1_000_000) + 1;
                let exponent = random.below(9) as i32 - 4;
                let number = format!("{digits}e{exponent}");
                let text = format!("{number} {spelling}");
                let literal = read_text(&text, dimension, Bounds::Physical);
                let literal = literal.unwrap_or_else(|f| panic!("{text}: {f}")).value;
                let written = number.parse::<f64>().unwrap();
                let back = find(spelling, dimension).unwrap().from_si(literal);
                let slack = 1e-12 * written.abs() + 1e-12 * unit.offset.abs() / unit.scale;
                assert!((back - written).abs() <= slack, "{number} {spelling} came back as {back}");
            }
        }
    }
}

#[test]
fn no_text_makes_the_reader_panic() {
    let pieces = [
        "1",
        "9",
        "0",
        ".",
        ",",
        "e",
        "E",
        "+",
        "-",
        "−",
        " ",
        "\u{a0}",
        "bar",
        "(",
        ")",
        "g",
        "/",
        "·",
        "³",
        "°",
        "K",
        "C",
        "±",
        "%",
        "EUR",
        "MWh",
        "k",
        "Δ",
        "\u{1F525}",
        "-1",
        "é",
        "'",
        "nan",
        "^",
        "[",
        "\0",
    ];
    let mut random = Random(0x5eed_0002);
    for _ in 0..20_000 {
        let text: String = (0..random.below(9)).map(|_| pieces[random.below(pieces.len())]).collect();
        let dimension = Dimension::ALL[random.below(Dimension::ALL.len())];
        if let Ok(literal) = read_text(&text, dimension, Bounds::Physical) {
            assert!(literal.value.is_finite() && literal.half_digit.is_finite(), "{text}");
            assert!(text.contains(literal.number));
            if let Ok(spread) = Spread::read(UncertaintyText::Plain(&text), dimension, &literal.scale) {
                assert!(spread.at(literal.value).u >= 0.0);
            }
        }
        let _ = dimensions_of(&text);
    }
}
