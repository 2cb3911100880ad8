//! Thin microstrip, static: exact values (method of moments with edge functions, independent code, good to the printed digits), the problem of
//! T. G. Bryant, J. A. Weiss, "Parameters of microstrip transmission lines and of coupled pairs", IEEE Trans. MTT-16, 1968.

use stripwright::line::Strip;
use stripwright::line::width_for_impedance;

use crate::rows::Table;
use crate::rows::thin;

/// er, w/h, Z0, effective permittivity.
const EXACT: &[(f64, f64, f64, f64)] = &[
    (1.0, 0.5, 166.699799, 1.0),
    (1.0, 1.0, 126.423868, 1.0),
    (1.0, 2.0, 89.028750, 1.0),
    (2.2, 3.0, 50.887902, 1.8803233),
    (3.0, 1.0, 83.668495, 2.2831489),
    (3.0, 2.5, 50.162176, 2.4261309),
    (4.2, 2.0, 49.706549, 3.2079923),
    (6.15, 1.5, 49.479644, 4.4182305),
    (9.8, 0.3, 79.596355, 6.1278052),
    (9.8, 1.0, 49.305817, 6.5744863),
    (10.2, 0.9, 50.899260, 6.7691918),
    (10.8, 3.15, 23.724131, 8.1276961),
    (2.2, 0.1, 202.57840, 1.682391),
    (2.2, 0.25, 159.21544, 1.705332),
    (2.2, 1.0, 94.90815, 1.774398),
    (2.2, 4.0, 41.72532, 1.913563),
    (2.2, 8.0, 24.56349, 1.992669),
    (9.8, 0.1, 107.90249, 5.929941),
    (9.8, 0.25, 84.28132, 6.085785),
    (9.8, 0.5, 66.54652, 6.275083),
    (9.8, 2.0, 33.57951, 7.029294),
    (9.8, 4.0, 20.91925, 7.612898),
    (9.8, 8.0, 12.09679, 8.216286),
    (1.0, 0.05, 304.304450, 1.0),
    (1.0, 0.1, 262.758430, 1.0),
    (1.0, 0.2, 221.254363, 1.0),
    (1.0, 5.0, 49.365708, 1.0),
    (1.0, 10.0, 29.020885, 1.0),
    (1.0, 20.0, 16.125318, 1.0),
];

/// er, then w/h for 30, 50, 70 and 100 ohm.
const WIDTHS: &[(f64, [f64; 4])] = &[
    (2.2, [6.22120, 3.08008, 1.79424, 0.89261]),
    (2.94, [5.25086, 2.54724, 1.44482, 0.68199]),
    (3.0, [5.18797, 2.51262, 1.42210, 0.66845]),
    (3.5, [4.72710, 2.25867, 1.25562, 0.57005]),
    (3.66, [4.59958, 2.18832, 1.20956, 0.54315]),
    (4.2, [4.22347, 1.98073, 1.07394, 0.46497]),
    (4.4, [4.10180, 1.91354, 1.03018, 0.44014]),
    (6.15, [3.30206, 1.47216, 0.74564, 0.28504]),
    (9.8, [2.38724, 0.97169, 0.43651, 0.13583]),
    (9.9, [2.36960, 0.96216, 0.43087, 0.13338]),
    (10.2, [2.31824, 0.93446, 0.41456, 0.12636]),
    (10.8, [2.22207, 0.88278, 0.38444, 0.11365]),
];

pub fn impedance_and_permittivity() -> Result<usize, String> {
    let mut table = Table::new("thin microstrip, exact");
    for (er, u, z0_ohm, eps_eff) in EXACT {
        let strip = Strip::new(&thin(*er, 1e-3), u * 1e-3);
        // Hammerstad & Jensen 1980 claim 0.2 % for the permittivity and 0.03 % for the air impedance; half of the first and the second make 0.12 %.
        table.relative(&format!("er {er} u {u} Z0"), strip.static_z0_ohm(), *z0_ohm, 1.2e-3);
        table.relative(&format!("er {er} u {u} eps_eff"), strip.static_eps_eff(), *eps_eff, 2e-3);
    }
    table.finish()
}

pub fn widths() -> Result<usize, String> {
    let mut table = Table::new("thin microstrip, exact widths");
    for (er, widths) in WIDTHS {
        for (z0_ohm, u) in [30.0, 50.0, 70.0, 100.0].into_iter().zip(widths) {
            let width_m = width_for_impedance(&thin(*er, 1e-3), z0_ohm, 0.0).unwrap();
            // 0.12 % of impedance is up to 0.3 % of width: d ln w / d ln Z0 is 2 to 2.5 for the narrow strips of this table.
            table.relative(&format!("er {er} {z0_ohm} ohm"), width_m * 1e3, *u, 3e-3);
        }
    }
    // D. M. Pozar, *Microwave Engineering*, microstrip example: er 2.20, h 0.127 cm, 50 ohm -> W 0.391 cm (printed digits of an older closed form: 0.4 %).
    table.relative("er 2.2, 0.127 cm", width_for_impedance(&thin(2.2, 1.27e-3), 50.0, 0.0).unwrap(), 3.91e-3, 4e-3);
    table.finish()
}
