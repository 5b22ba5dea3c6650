use crate::reference::rows;
use sigmadot::fluid::solution::*;
use sigmadot::fluid::{Engine, Pair};
const PT: Pair = Pair::PressureTemperature;

#[test]
fn explore() {
    let sea = Solution::seawater();
    let mut worst = [[0.0_f64; 5]; 2];
    for r in rows(include_str!("../data/seawater.csv")) {
        let [lib, t, p, s, h, en, v, cp, mu] = r[..9] else { panic!() };
        let st = sea.state(PT, p, t, s).unwrap();
        let d = [st.enthalpy - h, st.entropy - en, st.volume / v - 1.0, st.heat_capacity().unwrap() - cp, sea.water_potential(p, t, s).unwrap() - mu];
        for (w, d) in worst[lib as usize].iter_mut().zip(d) { *w = w.max(d.abs()); }
    }
    println!("{worst:?}");
    for s in [0.035, 0.03516504, 0.07] {
        println!("pi {s} {}", sea.osmotic_pressure(101325.0, 298.15, s).unwrap());
    }
    for r in [1e-5, 0.25, 0.5, 0.6] {
        println!("sea w {r} {}", sea.separation_work(101325.0, 298.15, 0.035, 0.0, r).unwrap() / 3600.0 );
    }
    let salt = Solution::sodium_chloride();
    for m in [0.1, 0.5, 1.0, 2.0, 3.0, 4.0, 5.0, 6.0] {
        let c = m * 0.05844 / (1.0 + m * 0.05844);
        let (p, t) = (101325.0, 298.15);
        let g0 = salt.water_potential(p, t, 0.0).unwrap();
        let g = salt.water_potential(p, t, c).unwrap();
        let st = salt.state(PT, p, t, c).unwrap();
        println!("m {m} phi {:.4} rho {:.2} cp {:.1} pi {:.2}", (g0 - g) / (8.314462618 * t * 2.0 * m), 1.0 / st.volume, st.heat_capacity().unwrap(), salt.osmotic_pressure(p, t, c).unwrap() / 1e5);
        // apparent relative molar enthalpy
        let w = salt.state(PT, p, t, 0.0).unwrap();
        println!("   L_phi {:.1} J/mol", (st.enthalpy - (1.0 - c) * w.enthalpy) / c * 0.05844);
    }
    for c in [0.05, 0.1, 0.2] { for t in [283.15, 293.15, 298.15, 303.15] {
        let st = salt.state(PT, 101325.0, t, c).unwrap();
        println!("MNA {c} {t} {:.3} {:.2}", 1.0 / st.volume, st.heat_capacity().unwrap());
    }}
    for r in rows(include_str!("../data/glycol.csv")) {
        let g = Glycol::new(if r[0] == 0.0 { GlycolKind::Ethylene } else { GlycolKind::Propylene }, r[1]).unwrap();
        let st = g.state(PT, 101325.0, r[2], 0.0).unwrap();
        let rf = g.state(PT, 101325.0, 293.15, 0.0).unwrap();
        println!("{:?} drho {:.1e} dcp {:.1e} dh {:.2} ds {:.4} dTf {:.2}", &r[..3], st.volume * r[3] - 1.0, st.heat_capacity().unwrap() / r[4] - 1.0,
            st.enthalpy - rf.enthalpy - r[5], st.entropy - rf.entropy - r[6], g.freezing_temperature() - r[7]);
    }
}
