//! Bends, tees, vias and radial stubs: published formulas in independent arithmetic, and printed values.

use stripwright::line::Strip;
use stripwright::line::gap;
use stripwright::line::optimum_cut;
use stripwright::line::post_inductance_h;
use stripwright::line::radial_line_reactance_ohm;

use crate::rows::Table;
use crate::rows::thin;

/// Height and radius in mm, inductance in pH: Goldfarb & Pucel 1991, by an independent program.
const VIAS: &[(f64, f64, f64)] = &[
    (0.1, 0.05, 10.332),
    (0.254, 0.10, 32.536),
    (0.254, 0.15, 22.414),
    (0.508, 0.15, 82.601),
    (0.508, 0.25, 53.263),
    (0.635, 0.15, 122.282),
    (0.635, 0.25, 81.340),
    (0.787, 0.20, 143.603),
    (1.0, 0.30, 160.570),
    (1.27, 0.30, 244.565),
    (1.524, 0.25, 375.957),
    (1.6, 0.40, 295.535),
];
/// w/h and optimum cut in per cent: Douville & James 1978, by an independent program.
const CUTS: &[(f64, f64)] = &[
    (0.25, 98.3809),
    (0.5, 85.0952),
    (0.75, 75.6151),
    (1.0, 68.8506),
    (1.5, 60.5796),
    (2.0, 56.3684),
    (2.5, 54.2242),
    (3.0, 53.1325),
    (4.0, 52.2936),
];
/// Inner and outer radius in mm, angle in degrees, height in mm, permittivity; reactance in ohm at 0.5, 1, 2, 3, 4 GHz: Vinding 1967, by an independent program.
const SECTORS: &[(f64, f64, f64, f64, f64, [f64; 5])] = &[
    (0.3, 4.0, 60.0, 0.635, 9.8, [-275.156, -130.857, -51.877, -19.261, 2.092]),
    (0.5, 8.0, 90.0, 0.787, 2.2, [-252.811, -120.332, -47.934, -18.158, 1.216]),
    (0.4, 5.0, 90.0, 0.762, 3.0, [-464.594, -227.105, -103.127, -57.072, -30.382]),
];
/// At er 9.6: w/h, s/w, shunt and series capacitance per width in pF/m: Kirschning, Jansen & Koster 1983, by an independent program.
const GAPS: &[(f64, f64, f64, f64)] = &[
    (0.5, 0.1, 6.72, 68.8),
    (0.5, 0.5, 25.3, 47.4),
    (0.5, 1.0, 38.1, 29.8),
    (1.0, 0.1, 9.40, 60.9),
    (1.0, 0.2, 16.5, 50.5),
    (1.0, 0.5, 30.1, 28.9),
    (1.0, 1.0, 41.9, 11.4),
    (2.0, 0.2, 21.5, 34.1),
    (2.0, 1.0, 44.6, 1.7),
];

pub fn vias() -> Result<usize, String> {
    let mut table = Table::new("via");
    for (h, r, ph) in VIAS {
        // The same formula: 0.6 of the last printed digit.
        table.absolute(&format!("h {h} r {r}"), post_inductance_h(h * 1e-3, r * 1e-3) * 1e12, *ph, 6e-4);
    }
    table.finish()
}

pub fn optimum_cuts() -> Result<usize, String> {
    let mut table = Table::new("optimum cut");
    for (u, percent) in CUTS {
        table.absolute(&format!("u {u}"), 100.0 * optimum_cut(&Strip::new(&thin(9.8, 1e-3), u * 1e-3)), *percent, 6e-5);
    }
    table.finish()
}

pub fn sectors() -> Result<usize, String> {
    let mut table = Table::new("radial line");
    for (ri, ro, degrees, h, er, printed) in SECTORS {
        for (f_ghz, x) in [0.5, 1.0, 2.0, 3.0, 4.0].iter().zip(printed) {
            let ours = radial_line_reactance_ohm(*er, h * 1e-3, ri * 1e-3, ro * 1e-3, degrees.to_radians(), f_ghz * 1e9);
            table.absolute(&format!("er {er} at {f_ghz} GHz"), ours, *x, 6e-4);
        }
    }
    table.finish()
}

pub fn equal_gaps_by_the_unequal_law() -> Result<usize, String> {
    let mut table = Table::new("unequal gap");
    for (u, share, shunt, series) in GAPS {
        let strip = Strip::new(&thin(9.6, 1e-3), u * 1e-3);
        let ours = gap::published_unequal_gap(&strip, &strip, share * u * 1e-3);
        let per_width = 1e12 / (u * 1e-3);
        // The same formula: 0.6 of the last printed digit. In the shunt part the circulating copies differ in one coefficient: 3 %.
        table.absolute(&format!("u {u} s/w {share} series"), ours.series_f * per_width, *series, 0.06);
        table.relative(&format!("u {u} s/w {share} shunt"), ours.shunt_one_f * per_width, *shunt, 0.03);
    }
    table.finish()
}

/// At er 9.6: w/h, s/w, shunt and series capacitance per width in pF/m by another static three-dimensional solution (Galerkin panels, finite strips).
const SOLVED_GAPS: &[(f64, f64, f64, f64)] = &[
    (0.5, 0.1, 5.98, 106.4),
    (0.5, 0.5, 24.0, 55.6),
    (0.5, 1.0, 38.9, 32.9),
    (1.0, 0.1, 7.96, 81.3),
    (1.0, 0.2, 14.6, 60.1),
    (1.0, 0.5, 29.7, 32.0),
    (1.0, 1.0, 43.8, 13.9),
    (2.0, 0.2, 20.4, 38.8),
    (2.0, 1.0, 46.5, 3.9),
];

pub fn solved_gaps() -> Result<usize, String> {
    let mut table = Table::new("solved gap");
    for (u, share, shunt, series) in SOLVED_GAPS {
        let strip = Strip::new(&thin(9.6, 1e-3), u * 1e-3);
        let ours = gap::unequal_gap(&strip, &strip, share * u * 1e-3);
        let per_width = 1e12 / (u * 1e-3);
        // Errors are shares of the end's own capacitance, the sum of both: some 2 % there, 1 % here.
        let tolerance = 0.03 * (shunt + series);
        table.absolute(&format!("u {u} s/w {share} shunt"), ours.shunt_one_f * per_width, *shunt, tolerance);
        table.absolute(&format!("u {u} s/w {share} series"), ours.series_f * per_width, *series, tolerance);
    }
    table.finish()
}
