//! Open end, gap and step of microstrip: formula outputs of independent programs, and a static three-dimensional solution (panels on the laminate).

use stripwright::line::Strip;
use stripwright::line::gap;
use stripwright::line::open_end;
use stripwright::line::step;

use crate::rows::Table;
use crate::rows::thin;

/// er, w/h, extension over height by Kirschning, Jansen & Koster 1981 (product form), the same by the three-dimensional solution.
const OPEN_END: &[(f64, f64, f64, Option<f64>)] = &[
    (2.2, 0.5, 0.32076, Some(0.335)),
    (2.2, 1.0, 0.38826, Some(0.411)),
    (2.2, 2.0, 0.46396, Some(0.494)),
    (2.2, 4.0, 0.55133, Some(0.577)),
    (3.0, 1.0, 0.36690, Some(0.386)),
    (3.0, 2.0, 0.43482, Some(0.460)),
    (4.2, 1.0, 0.34829, None),
    (4.2, 2.0, 0.40955, None),
    (6.15, 1.0, 0.33194, Some(0.349)),
    (9.8, 0.5, 0.26534, Some(0.278)),
    (9.8, 1.0, 0.31725, Some(0.335)),
    (9.8, 2.0, 0.36722, Some(0.391)),
    (10.8, 1.0, 0.31478, Some(0.333)),
    (10.8, 4.0, 0.40532, Some(0.433)),
];
/// At er 9.6: w/h, s/w, then shunt and series capacitance per width in pF/m, three-dimensional and by the formula of Garg & Bahl 1978.
const GAPS: &[(f64, f64, f64, f64, f64, f64)] = &[
    (0.5, 0.1, 5.98, 106.4, 5.34, 103.2),
    (0.5, 0.5, 24.0, 55.6, 24.1, 54.8),
    (0.5, 1.0, 38.9, 32.9, 40.5, 34.6),
    (1.0, 0.1, 7.96, 81.3, 6.28, 82.8),
    (1.0, 0.2, 14.6, 60.1, 11.5, 60.1),
    (1.0, 0.5, 29.7, 32.0, 28.2, 32.1),
    (1.0, 1.0, 43.8, 13.9, 41.8, 14.5),
    (2.0, 0.2, 20.4, 38.8, 13.7, 36.5),
    (2.0, 1.0, 46.5, 3.9, 42.4, 1.7),
];
/// er, h, wide and narrow width in mm; pF, nH wide side, nH narrow side.
const STEPS: &[(f64, f64, f64, f64, f64, f64, f64)] = &[
    (10.8, 1.27, 4.0, 0.2, 0.18365, 0.14210, 0.49485),
    (4.2, 1.58, 11.3, 0.428, 0.21546, 0.16213, 0.87059),
    (2.2, 0.787, 4.0, 1.0, 0.03891, 0.07565, 0.17525),
    (9.8, 0.635, 1.2, 0.3, 0.04304, 0.04644, 0.08592),
];

pub fn open_end() -> Result<usize, String> {
    let mut table = Table::new("open end");
    for (er, u, formula, solved) in OPEN_END {
        let ours = open_end::extension_m(&Strip::new(&thin(*er, 1e-3), u * 1e-3)) * 1e3;
        // The same formula: 0.6 of the last printed digit.
        table.absolute(&format!("er {er} u {u}"), ours, *formula, 6e-6);
        if let Some(solved) = solved {
            // All published laws sit 4 to 7 % below this solution, which is good to 1 %.
            table.relative(&format!("er {er} u {u} solved"), ours, *solved, 0.08);
        }
    }
    // Hong & Lancaster, stub low-pass: er 10.8, h 1.27, W 4.0 mm: 0.5 mm printed, one digit.
    let strip = Strip::new(&thin(10.8, 1.27e-3), 4e-3);
    table.absolute("printed 0.5 mm", open_end::extension_m(&strip) * 1e3, 0.5, 0.05);
    // F of Lewin 1960, arithmetic by an independent program: the permittivity is printed to 5e-5, and F changes by half as much.
    for (eps_eff, factor) in [(1.8810, 1.25278), (2.4243, 1.00298), (6.5633, 0.39363), (7.1362, 0.36299)] {
        table.absolute(&format!("radiation factor {eps_eff}"), open_end::radiation_factor(eps_eff), factor, 3e-5);
    }
    table.finish()
}

pub fn gaps() -> Result<usize, String> {
    let mut table = Table::new("gap");
    for (u, share, solved_shunt, solved_series, shunt, series) in GAPS {
        let strip = Strip::new(&thin(9.6, 1e-3), u * 1e-3);
        let ours = gap::gap(&strip, share * u * 1e-3);
        let per_width = 1e12 / (u * 1e-3);
        let row = format!("u {u} s/w {share}");
        // The same formula: 0.6 of the last printed digit.
        table.absolute(&format!("{row} shunt"), ours.shunt_f * per_width, *shunt, if *shunt < 10.0 { 6e-3 } else { 0.06 });
        table.absolute(&format!("{row} series"), ours.series_f * per_width, *series, 0.06);
        // Against the solution (2 %) only where the source claims 7 %: the narrower strips with gaps up to half a width, and there the series part.
        if *u <= 1.0 && *share <= 0.5 {
            table.relative(&format!("{row} series, solved"), ours.series_f * per_width, *solved_series, 0.10);
            assert!(*solved_shunt > 0.0);
        }
    }
    table.finish()
}

pub fn steps() -> Result<usize, String> {
    let mut table = Table::new("step");
    for (er, h_mm, wide, narrow, pf, nh_wide, nh_narrow) in STEPS {
        let board = thin(*er, h_mm * 1e-3);
        let (wide, narrow) = (Strip::new(&board, wide * 1e-3), Strip::new(&board, narrow * 1e-3));
        // The same formula, printed to five decimals.
        for ours in [step(&wide, &narrow), step(&narrow, &wide)] {
            table.absolute(&format!("er {er} C"), ours.capacitance_f * 1e12, *pf, 6e-6);
            table.absolute(&format!("er {er} L wide"), ours.wide_inductance_h * 1e9, *nh_wide, 6e-6);
            table.absolute(&format!("er {er} L narrow"), ours.narrow_inductance_h * 1e9, *nh_narrow, 6e-6);
        }
    }
    table.finish()
}
