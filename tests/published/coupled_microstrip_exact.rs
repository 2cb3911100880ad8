//! Thin coupled microstrip, static: exact values (method of moments with edge functions, independent code, good to the printed digits), the problem of
//! T. G. Bryant, J. A. Weiss, IEEE Trans. MTT-16, 1968.

use stripwright::line::Pair;

use crate::rows::Table;
use crate::rows::thin;

/// er, w/h, s/h, Z0e, Z0o, even and odd effective permittivity.
const EXACT: &[(f64, f64, f64, f64, f64, f64, f64)] = &[
    (1.0, 1.0, 0.5, 159.31083, 89.35688, 1.0, 1.0),
    (2.2, 2.4, 0.2, 71.01354, 40.28341, 1.938721, 1.690353),
    (2.2, 3.0, 1.0, 56.32593, 44.64254, 1.962364, 1.767257),
    (3.0, 2.0, 0.2, 70.38658, 38.86396, 2.524330, 2.120780),
    (3.0, 2.4, 1.0, 57.14817, 45.06379, 2.557853, 2.233197),
    (3.0, 1.0, 0.1, 112.02685, 44.31681, 2.394118, 2.038696),
    (4.2, 1.6, 0.25, 69.72087, 38.84762, 3.366255, 2.754789),
    (6.15, 1.2, 0.3, 69.44109, 38.53625, 4.668375, 3.757427),
    (9.8, 0.8, 0.4, 68.46537, 38.97403, 6.984607, 5.612368),
    (9.8, 1.0, 1.0, 55.60242, 42.50524, 7.144227, 5.867323),
    (10.2, 0.6, 0.25, 80.53343, 37.97630, 7.038695, 5.718119),
    (10.8, 0.9, 0.05, 67.28640, 23.20784, 7.644325, 6.029282),
];

pub fn rows() -> Result<usize, String> {
    let mut table = Table::new("coupled microstrip, exact");
    for (er, u, g, z_even, z_odd, eps_even, eps_odd) in EXACT {
        let pair = Pair::new(&thin(*er, 1e-3), u * 1e-3, g * 1e-3);
        let (z, eps) = (pair.static_z0_ohm(), pair.static_eps_eff());
        let row = format!("er {er} u {u} g {g}");
        // Kirschning & Jansen 1984 claim 0.6 % (impedance), 0.7 % and 0.5 % (permittivity); seen up to 0.83 % odd impedance by an independent program.
        // One row lies at s/h = 0.05, outside the claim.
        let outside = if *g < 0.1 { 2.0 } else { 1.0 };
        table.relative(&format!("{row} Z0e"), z.even, *z_even, 8e-3 * outside);
        table.relative(&format!("{row} Z0o"), z.odd, *z_odd, 9e-3 * outside);
        table.relative(&format!("{row} even"), eps.even, *eps_even, 7e-3);
        table.relative(&format!("{row} odd"), eps.odd, *eps_odd, 5e-3);
    }
    table.finish()
}
