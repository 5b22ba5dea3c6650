//! Seawater, sodium chloride and glycol solutions against published and reference values.

use crate::reference::{Random, central, rows};
use sigmadot::fluid::solution::{Glycol, GlycolKind, Salt, Solution, dilute_separation_work};
use sigmadot::fluid::{Element, Engine, Pair, PropertyError, State};

const PT: Pair = Pair::PressureTemperature;
const ATM: f64 = 101_325.0;

/// With the same water (IF97) the saline part is exact to rounding; against TEOS-10, whose water
/// is another formulation, within that water's difference.
#[test]
fn seawater_states() {
    let sea = Solution::seawater();
    let mut worst = [[0.0_f64; 5]; 2];
    for row in rows(include_str!("../data/seawater.csv")) {
        let [library, t, p, c, h, s, v, cp, potential] = row[..9] else { panic!("short row") };
        let state = sea.state(PT, p, t, c).unwrap();
        let deviations = [
            (state.enthalpy - h).abs(),
            (state.entropy - s).abs(),
            (state.volume / v - 1.0).abs(),
            (state.heat_capacity().unwrap() - cp).abs(),
            (sea.water_potential(p, t, c).unwrap() - potential).abs(),
        ];
        let limits =
            if library == 0.0 { [10.0, 0.04, 1e-5, 1.0, 1.0] } else { [1e-7, 1e-9, 1e-12, 1e-7, 1e-7] };
        for ((d, limit), w) in deviations.iter().zip(limits).zip(&mut worst[library as usize]) {
            assert!(*d <= limit, "{d:e} > {limit:e} in {row:?}");
            *w = w.max(*d);
        }
    }
    println!(
        "largest deviations (h, s, v, cp, water potential): TEOS-10 {:?}, IF97 {:?}",
        worst[0], worst[1]
    );
}

/// Osmotic coefficients of sodium chloride at 25 °C: R. A. Robinson, R. H. Stokes, Electrolyte
/// Solutions, 2nd ed. 1965 (from memory; they agree with Pitzer's published fit within 0.003).
#[test]
fn sodium_chloride_at_25_degrees() {
    let salt = Solution::sodium_chloride();
    let (p, t) = (ATM, 298.15);
    for (m, phi) in [
        (0.1, 0.9324),
        (0.5, 0.9209),
        (1.0, 0.9355),
        (2.0, 0.9833),
        (3.0, 1.0453),
        (4.0, 1.1158),
        (6.0, 1.2706),
    ] {
        let c = m * 0.05844 / (1.0 + m * 0.05844);
        let drop = salt.water_potential(p, t, 0.0).unwrap() - salt.water_potential(p, t, c).unwrap();
        let got = drop / (8.314462618 * t * 2.0 * m);
        assert!((got - phi).abs() < 0.003, "{got} {phi} at {m} mol/kg");
    }
    // Specific heat and density of brine after Melinder 2010 (PyPI CoolProp 8.0.0, INCOMP::MNA).
    for (c, rho, cp, slack) in
        [(0.05, 1032.45, 3932.7, 0.002), (0.1, 1068.71, 3729.4, 0.006), (0.2, 1145.37, 3415.2, 0.018)]
    {
        let state = salt.state(PT, p, t, c).unwrap();
        assert!((state.volume * rho - 1.0).abs() < 4e-4, "{} {rho}", 1.0 / state.volume);
        assert!(
            (state.heat_capacity().unwrap() / cp - 1.0).abs() < slack,
            "{:?} {cp}",
            state.heat_capacity()
        );
    }
}

/// Seawater of 35 g/kg: osmotic pressure near 25.8 bar, and the least work of desalination of
/// about 0.72 kWh/m³ at no recovery and 1.02 at one half (TEOS-10); by van 't Hoff's law at
/// 27.4 bar 0.76 and 1.06, as printed by M. Elimelech, W. A. Phillip, The future of seawater
/// desalination, Science 333 (2011) 712-717.
#[test]
fn least_work_of_desalination() {
    let kwh = 3.6e6;
    for (recovery, want) in [(0.0, 0.76), (0.25, 0.88), (0.5, 1.06), (0.75, 1.41)] {
        let work = dilute_separation_work(27.4e5, recovery).unwrap() / kwh;
        assert!((work - want).abs() < 0.006, "{work} {want}");
    }
    let sea = Solution::seawater();
    let t = 298.15;
    let osmotic = sea.osmotic_pressure(ATM, t, 0.035).unwrap();
    assert!((25.5e5..26.1e5).contains(&osmotic), "{osmotic}");
    let volume = sea.state(PT, ATM, t, 0.0).unwrap().volume;
    let per_cubic_metre =
        |recovery: f64| sea.separation_work(ATM, t, 0.035, 0.0, recovery).unwrap() / volume / kwh;
    // At vanishing recovery the work per volume is the osmotic pressure (0.1 % of compression apart).
    assert!((per_cubic_metre(1e-5) * kwh / osmotic - 1.0).abs() < 1.5e-3);
    let half = per_cubic_metre(0.5);
    assert!((half - 1.02).abs() < 0.01, "{half}");
    // The ideal law with the true osmotic pressure is within 5 % of the real solution.
    assert!((dilute_separation_work(osmotic, 0.5).unwrap() / kwh / half - 1.0).abs() < 0.05);
    // The same as entropy generation of remixing: T sigma = work, heat exchanged at T.
    let (feed, brine) = (sea.state(PT, ATM, t, 0.035).unwrap(), sea.state(PT, ATM, t, 0.07).unwrap());
    let product = sea.state(PT, ATM, t, 0.0).unwrap();
    let mix = |f: fn(&State) -> f64| f(&feed) - 0.5 * f(&brine) - 0.5 * f(&product);
    let sigma = mix(|s| s.entropy) - mix(|s| s.enthalpy) / t;
    let work = 0.5 * sea.separation_work(ATM, t, 0.035, 0.0, 0.5).unwrap();
    assert!(sigma > 0.0 && (t * sigma - work).abs() < 1e-6, "{} {work}", t * sigma);
}

#[test]
fn glycol_tables() {
    for row in rows(include_str!("../data/glycol.csv")) {
        let [kind, x, t, rho, cp, h, s, freezing] = row[..8] else { panic!("short row") };
        let kind = if kind == 0.0 { GlycolKind::Ethylene } else { GlycolKind::Propylene };
        let glycol = Glycol::new(kind, x).unwrap();
        let state = glycol.state(PT, ATM, t, 0.0).unwrap();
        let reference = glycol.state(PT, ATM, 293.15, 0.0).unwrap();
        assert!((state.volume * rho - 1.0).abs() < 1e-12);
        assert!((state.heat_capacity().unwrap() / cp - 1.0).abs() < 1e-12);
        assert!((state.enthalpy - reference.enthalpy - h).abs() < 1e-4 * h.abs() + 1e-6, "{row:?}");
        assert!((state.entropy - reference.entropy - s).abs() < 1e-4 * s.abs() + 1e-9, "{row:?}");
        assert!((glycol.freezing_temperature() - freezing).abs() < 1e-3);
    }
    assert!(Glycol::new(GlycolKind::Ethylene, 0.7).is_err());
    // Datum and an isentropic pump: dh = v dp.
    let glycol = Glycol::new(GlycolKind::Ethylene, 0.3).unwrap();
    let zero = glycol.state(PT, ATM, 273.15, 0.0).unwrap();
    assert!(zero.enthalpy.abs() < 1e-9 && zero.entropy.abs() < 1e-9);
    let out = glycol.state(Pair::PressureEntropy, 6e5, zero.entropy, 0.0).unwrap();
    let work = zero.volume * (6e5 - ATM);
    assert!((out.enthalpy / work - 1.0).abs() < 1e-4, "{} {work}", out.enthalpy);
}

/// Gradients against differences, Maxwell relations, inverse pairs.
#[test]
fn derivatives_and_identities() {
    let glycols =
        [Glycol::new(GlycolKind::Ethylene, 0.35).unwrap(), Glycol::new(GlycolKind::Propylene, 0.25).unwrap()];
    let (sea, salt) = (Solution::seawater(), Solution::sodium_chloride());
    let engines: [&dyn Engine; 4] = [&sea, &salt, &glycols[0], &glycols[1]];
    for engine in engines {
        for (p, t, c) in [(ATM, 285.0, 0.035), (60e5 * 0.8, 310.0, 0.07), (1e5, 340.0, 0.01)] {
            let state = engine.state(PT, p, t, c).unwrap();
            let g = state.gradient;
            assert!((g[2][0] - (state.volume - t * g[4][1])).abs() < 1e-12 * state.volume);
            assert!((g[3][0] + g[4][1]).abs() < 1e-12 * g[4][1].abs());
            let pick = |s: State| [s.enthalpy, s.entropy, s.volume];
            for k in 0..3 {
                let scale = [4e3 * t, 4e3, state.volume][k];
                let by_t = central(t, |x| pick(engine.state(PT, p, x, c).unwrap())[k]);
                assert!((g[2 + k][1] - by_t).abs() < 1e-7 * scale / t * 10.0, "{engine:?} {k} by T");
                let by_p = central(p, |x| pick(engine.state(PT, x, t, c).unwrap())[k]);
                assert!((g[2 + k][0] - by_p).abs() < 2e-7 * scale / p, "{engine:?} {k} by p");
                let by_c = central(c, |x| pick(engine.state(PT, p, t, x).unwrap())[k]);
                assert!(
                    (g[2 + k][2] - by_c).abs() < 1e-6 * scale,
                    "{engine:?} {k} by c: {} {by_c}",
                    g[2 + k][2]
                );
            }
            for (pair, value) in
                [(Pair::PressureEnthalpy, state.enthalpy), (Pair::PressureEntropy, state.entropy)]
            {
                let back = engine.state(pair, p, value, c).unwrap();
                assert!((back.temperature - t).abs() < 1e-9, "{engine:?} {pair}");
            }
            let (elements, slope) = engine.elements(c).unwrap();
            let mass = |e: &[f64]| Element::ALL.iter().map(|x| e[*x as usize] * x.molar_mass()).sum::<f64>();
            assert!((mass(&elements) - 1.0).abs() < 1e-4, "{}", mass(&elements));
            assert!(mass(&slope).abs() < 1e-4);
        }
    }
}

/// Brine without salt is the water of IAPWS-IF97: Table 5 of the release, T = 300 K, p = 3 MPa.
#[test]
fn no_salt_is_pure_water() {
    for solution in [Solution::seawater(), Solution::sodium_chloride()] {
        let state = solution.state(PT, 3e6, 300.0, 0.0).unwrap();
        assert!((state.volume - 0.100215168e-2).abs() < 5e-12);
        assert!((state.enthalpy - 0.115331273e6).abs() < 5e-4);
        assert!((state.entropy - 0.392294792e3).abs() < 5e-7);
        assert!((state.heat_capacity().unwrap() - 0.417301218e4).abs() < 5e-6);
        let near = solution.state(PT, 3e6, 300.0, 1e-8).unwrap();
        assert!((near.enthalpy - state.enthalpy).abs() < 0.01 && (near.entropy - state.entropy).abs() < 1e-3);
        let osmotic = solution.osmotic_pressure(3e6, 300.0, 0.0).unwrap();
        assert!(osmotic.abs() < 1e-3, "{osmotic}");
        let (datum, _) = solution.datum_at(0.0).unwrap();
        let state = solution.state(PT, 1e5, 298.15, 0.0).unwrap();
        assert!(((state.enthalpy + datum.enthalpy) * 0.01801528 + 285_830.0).abs() < 1e-6);
        assert!(((state.entropy + datum.entropy) * 0.01801528 - 69.95).abs() < 1e-9);
    }
}

#[test]
fn adversarial_input() {
    let mut random = Random::new(11);
    let glycol = Glycol::new(GlycolKind::Propylene, 0.5).unwrap();
    let (sea, salt) = (Solution::seawater(), Solution::sodium_chloride());
    let engines: [&dyn Engine; 3] = [&sea, &salt, &glycol];
    let odd = [0.0, -1.0, 1.0, 1e-300, 1e300, f64::NAN, f64::INFINITY, 273.15, 353.15, 0.12, 1e3];
    let mut answered = 0;
    for i in 0..6000 {
        let mut x = [1e3 * 2e4_f64.powf(random.next()), 260.0 + 120.0 * random.next(), 0.3 * random.next()];
        if i % 4 == 0 {
            let place = (random.next() * 3.0) as usize % 3;
            x[place] = odd[(random.next() * odd.len() as f64) as usize % odd.len()];
        }
        let [p, t, c] = x;
        for engine in engines {
            if let Ok(state) = engine.state(PT, p, t, c) {
                answered += 1;
                assert!(state.gradient.iter().flatten().all(|v| v.is_finite()), "{engine:?} {x:?}");
                let back = engine.state(Pair::PressureEnthalpy, p, state.enthalpy, c);
                assert!(
                    back.as_ref().is_ok_and(|b| (b.temperature - t).abs() < 1e-6),
                    "{engine:?} {x:?} {back:?}"
                );
            }
            for pair in Pair::ALL {
                if let Ok(state) = engine.state(pair, p, 1e6 * (random.next() - 0.3), c) {
                    assert!(state.enthalpy.is_finite());
                }
            }
        }
        for solution in [sea, salt] {
            for value in
                [solution.osmotic_pressure(p, t, c), solution.separation_work(p, t, c, 0.0, random.next())]
            {
                assert!(value.map_or(true, |v| v.is_finite() && v > -1e-6), "{x:?}");
            }
        }
    }
    assert!(answered > 4000, "{answered}");
    assert_eq!(sea.state(PT, f64::NAN, 300.0, 0.0), Err(PropertyError::NotFinite));
    assert!(matches!(
        sea.state(PT, ATM, 300.0, 0.2),
        Err(PropertyError::OutOfRange { quantity: "mass fraction of salt", max: 0.12, .. })
    ));
    assert_eq!(sea.salt(), Salt::Sea);
}
