//! Sea salt: the saline part of the Gibbs energy of seawater.

use super::Saline;

/// Salinity at which the reduced square root is 1, kg/kg: 35.165 04 g/kg times 40/35.
const S_UNIT: f64 = 0.035_165_04 * 40.0 / 35.0;

/// (i, j, k, g_ijk in J/kg) of the saline part: IAPWS R13-08, Release on the IAPWS Formulation
/// 2008 for the Thermodynamic Properties of Seawater, Table 2; R. Feistel, A Gibbs function for
/// seawater thermodynamics for -6 to 80 degC and salinity up to 120 g/kg, Deep-Sea Res. I 55
/// (2008) 1639-1671.
const COEFFICIENTS: [(usize, usize, usize, f64); 64] = [
    (1, 0, 0, 0.581281456626732e4),
    (2, 0, 0, 0.141627648484197e4),
    (3, 0, 0, -0.243214662381794e4),
    (4, 0, 0, 0.202580115603697e4),
    (5, 0, 0, -0.109166841042967e4),
    (6, 0, 0, 0.374601237877840e3),
    (7, 0, 0, -0.485891069025409e2),
    (1, 1, 0, 0.851226734946706e3),
    (2, 1, 0, 0.168072408311545e3),
    (3, 1, 0, -0.493407510141682e3),
    (4, 1, 0, 0.543835333000098e3),
    (5, 1, 0, -0.196028306689776e3),
    (6, 1, 0, 0.367571622995805e2),
    (2, 2, 0, 0.880031352997204e3),
    (3, 2, 0, -0.430664675978042e2),
    (4, 2, 0, -0.685572509204491e2),
    (2, 3, 0, -0.225267649263401e3),
    (3, 3, 0, -0.100227370861875e2),
    (4, 3, 0, 0.493667694856254e2),
    (2, 4, 0, 0.914260447751259e2),
    (3, 4, 0, 0.875600661808945),
    (4, 4, 0, -0.171397577419788e2),
    (2, 5, 0, -0.216603240875311e2),
    (4, 5, 0, 0.249697009569508e1),
    (2, 6, 0, 0.213016970847183e1),
    (2, 0, 1, -0.331049154044839e4),
    (3, 0, 1, 0.199459603073901e3),
    (4, 0, 1, -0.547919133532887e2),
    (5, 0, 1, 0.360284195611086e2),
    (2, 1, 1, 0.729116529735046e3),
    (3, 1, 1, -0.175292041186547e3),
    (4, 1, 1, -0.226683558512829e2),
    (2, 2, 1, -0.860764303783977e3),
    (3, 2, 1, 0.383058066002476e3),
    (2, 3, 1, 0.694244814133268e3),
    (3, 3, 1, -0.460319931801257e3),
    (2, 4, 1, -0.297728741987187e3),
    (3, 4, 1, 0.234565187611355e3),
    (2, 0, 2, 0.384794152978599e3),
    (3, 0, 2, -0.522940909281335e2),
    (4, 0, 2, -0.408193978912261e1),
    (2, 1, 2, -0.343956902961561e3),
    (3, 1, 2, 0.831923927801819e2),
    (2, 2, 2, 0.337409530269367e3),
    (3, 2, 2, -0.541917262517112e2),
    (2, 3, 2, -0.204889641964903e3),
    (2, 4, 2, 0.747261411387560e2),
    (2, 0, 3, -0.965324320107458e2),
    (3, 0, 3, 0.680444942726459e2),
    (4, 0, 3, -0.301755111971161e2),
    (2, 1, 3, 0.124687671116248e3),
    (3, 1, 3, -0.294830643494290e2),
    (2, 2, 3, -0.178314556207638e3),
    (3, 2, 3, 0.256398487389914e2),
    (2, 3, 3, 0.113561697840594e3),
    (2, 4, 3, -0.364872919001588e2),
    (2, 0, 4, 0.158408172766824e2),
    (3, 0, 4, -0.341251932441282e1),
    (2, 1, 4, -0.316569643860730e2),
    (2, 2, 4, 0.442040358308000e2),
    (2, 3, 4, -0.111282734326413e2),
    (2, 0, 5, -0.262480156590992e1),
    (2, 1, 5, 0.704658803315449e1),
    (2, 2, 5, -0.792001547211682e1),
];

/// The saline part at `p` (Pa), `t` (K) and salinity `c` (kg/kg) above zero.
pub(super) fn saline(p: f64, t: f64, c: f64) -> Saline {
    let x = (c / S_UNIT).sqrt();
    let ln_x = libm::log(x);
    let (y, z) = ((t - 273.15) / 40.0, (p - 101_325.0) / 1e8);
    let (xs, ys, zs) = (powers(x), powers(y), powers(z));
    // n y^(n-1) and n (n-1) y^(n-2) from the table of powers.
    let first = |table: &[f64; 8], n: usize| {
        if n == 0 { 0.0 } else { n as f64 * at(table, n - 1) }
    };
    let second = |table: &[f64; 8], n: usize| {
        if n < 2 { 0.0 } else { (n * (n - 1)) as f64 * at(table, n - 2) }
    };
    let mut out = Saline::default();
    for (i, j, k, g) in COEFFICIENTS {
        // X = x^i (x² ln x for i = 1) and dX/dc; d/dc = 1/(2 S_UNIT x) d/dx.
        let (value, by_c) = if i == 1 {
            (at(&xs, 2) * ln_x, (2.0 * ln_x + 1.0) / (2.0 * S_UNIT))
        } else {
            (at(&xs, i), i as f64 * at(&xs, i - 2) / (2.0 * S_UNIT))
        };
        let (yj, y1, y2) = (at(&ys, j), first(&ys, j) / 40.0, second(&ys, j) / 1600.0);
        let (zk, z1, z2) = (at(&zs, k), first(&zs, k) / 1e8, second(&zs, k) / 1e16);
        out.g += g * value * yj * zk;
        out.t += g * value * y1 * zk;
        out.p += g * value * yj * z1;
        out.tt += g * value * y2 * zk;
        out.tp += g * value * y1 * z1;
        out.pp += g * value * yj * z2;
        out.c += g * by_c * yj * zk;
        out.tc += g * by_c * y1 * zk;
        out.pc += g * by_c * yj * z1;
    }
    out
}

/// x to the powers 0 to 7.
fn powers(x: f64) -> [f64; 8] {
    let mut out = [1.0; 8];
    let mut value = 1.0;
    for slot in &mut out {
        *slot = value;
        value *= x;
    }
    out
}

/// Entry of a table of powers; the exponents of the coefficients reach 7.
fn at(table: &[f64; 8], n: usize) -> f64 {
    table.get(n).copied().unwrap_or(0.0)
}

#[cfg(test)]
mod tests {
    /// IAPWS R13-08, Table 8, saline part: standard seawater at 273.15 K, and 0.1 kg/kg at 353 K,
    /// both at 101325 Pa.
    #[test]
    fn published_values() {
        let near = |got: f64, want: f64| assert!((got / want - 1.0).abs() < 1e-8, "{got} {want}");
        let s = super::saline(101_325.0, 273.15, 0.035_165_04);
        near(s.g, -0.101342742e3);
        near(s.c, 0.639974067e5);
        near(s.t, -0.147643376);
        near(s.p, -0.274957224e-4);
        near(s.tt, 0.852861151);
        near(s.tp, 0.119286787e-6);
        near(s.pp, 0.581535172e-13);
        near(s.pc, -0.759615412e-3);
        let s = super::saline(101_325.0, 353.0, 0.1);
        near(s.g, 0.150871740e5);
        near(s.c, 0.251957276e6);
        near(s.t, 0.156230907e3);
        near(s.p, -0.579227286e-4);
        near(s.tt, 0.127922649e1);
        near(s.tp, 0.803061596e-6);
        near(s.pp, 0.213086154e-12);
        near(s.pc, -0.305957802e-3);
    }
}
