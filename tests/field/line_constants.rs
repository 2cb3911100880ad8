//! Lines of which the constants are known: homogeneous, stripline, full-wave microstrip, coupled pairs.

use num_complex::Complex64;
use stripwright::field::{Axis, FAR_LID_HEIGHTS, FAR_WALL_HEIGHTS, Patch, Solver, Source, Split, Stack, Structure, Top};

use crate::sample::{layer, line, stack, through};

#[test]
fn a_filled_box_has_the_permittivity_of_its_filling() {
    // Exact: TEM line. Cells of 0.5 mm lower it by (beta d)^2/12 = 1e-5 relative.
    let filled = Stack { below: vec![layer(3.5, 0.508)], above: vec![layer(3.5, 8.0)], top: Top::Lid };
    let found = line(&through(filled, 1.13, 10.0, 24.0), 1e9, 4e9, 1.0);
    assert!((found.eps_eff(1e9) / 3.5 - 1.0).abs() < 1e-4, "{}", found.eps_eff(1e9));
    assert!(found.residual < 1e-4, "{}", found.residual);
}

#[test]
fn a_centred_stripline_has_the_impedance_of_the_elliptic_integrals() {
    // S. B. Cohn, IRE Trans. MTT-3, 1955: Z0 sqrt(er) = 65.35362515 ohm for w/b = 1, 100.4324508 ohm for 0.5.
    // Side walls at 5 b add less than exp(-5 pi) = 2e-7.
    for (w_over_b, exact) in [(0.5, 100.4324508), (1.0, 65.35362515)] {
        let b = 2.0;
        let centred = Stack { below: vec![layer(2.2, 0.5 * b)], above: vec![layer(2.2, 0.5 * b)], top: Top::Lid };
        let error = [1.0, 2.0].map(|refine| {
            let found = line(&through(centred.clone(), w_over_b * b, 10.0 * b, 24.0), 2e9, 4e9, refine);
            found.impedance_ohm.re * 2.2f64.sqrt() / exact - 1.0
        });
        // The plain mesh has four cells across a wide strip: 1 %; halving it must bring a method of second order to a third or better.
        assert!(error[0].abs() < 1e-2 && error[1].abs() < 2e-3 && error[1].abs() < error[0].abs() / 2.0, "{w_over_b}: {error:?}");
    }
}

#[test]
fn dielectric_loss_of_a_filled_box_is_half_the_loss_tangent_a_radian() {
    // Exact for TEM: alpha/beta = tan(d)/2 to first order (second order 1e-6 here).
    let mut filled = Stack { below: vec![layer(3.0, 0.762)], above: vec![layer(3.0, 6.0)], top: Top::Lid };
    for l in filled.below.iter_mut().chain(&mut filled.above) {
        l.loss_tangent = 2e-3;
    }
    let found = line(&through(filled, 1.9, 10.0, 24.0), 2e9, 4e9, 1.0);
    assert!((found.gamma_per_m.re / found.gamma_per_m.im / 1e-3 - 1.0).abs() < 1e-3, "{:?}", found.gamma_per_m);
}

#[test]
fn microstrip_has_its_full_wave_permittivity() {
    // Spectral-domain solutions of the open line (zero thickness, six digits). The mesh has some ten cells across: 0.1 %; walls and lid as an open board's:
    // 0.1 %.
    for (er, u, h, f_ghz, exact) in [
        (2.2, 3.0, 0.787, 2.0, 1.882975),
        (3.0, 2.5, 0.762, 2.0, 2.431536),
        (6.15, 1.5, 1.27, 2.0, 4.463488),
        (9.8, 1.0, 0.635, 2.0, 6.604783),
    ] {
        let width = u * h + 2.0 * FAR_WALL_HEIGHTS * h;
        let found = line(&through(stack(er, h, FAR_LID_HEIGHTS * h), u * h, width, 1.1 * width), f_ghz * 1e9, f_ghz * 1e9, 2.0);
        let error = found.eps_eff(f_ghz * 1e9) / exact - 1.0;
        println!("er {er} u {u} h {h}: {error:.2e}");
        assert!(error.abs() < 2e-3, "er {er} u {u}: {error}");
    }
}

#[test]
fn walls_and_lid_of_an_open_board_move_the_permittivity_by_less_than_a_tenth_of_a_percent() {
    let (h, w) = (0.762, 1.9);
    let at = |walls: f64, lid: f64| {
        let width = w + 2.0 * walls * h;
        // A low frequency, so that the standards stand in the box itself.
        line(&through(stack(3.0, h, lid * h), w, width, 1.1 * width), 0.5e9, 0.5e9, 1.0).eps_eff(0.5e9)
    };
    // Twice as far in all directions stands for no walls at all; what is left there is a fourth.
    let moved = at(FAR_WALL_HEIGHTS, FAR_LID_HEIGHTS) / at(2.0 * FAR_WALL_HEIGHTS, 2.0 * FAR_LID_HEIGHTS) - 1.0;
    println!("open board: {moved:.2e}");
    assert!(moved.abs() < 1e-3, "{moved}");
}

/// `cosh` of the extra length, from the through standards of a structure fed at both ends.
fn eps_eff_of_pair(er: f64, h: f64, [w, gap]: [f64; 2], odd: bool, f_hz: f64) -> f64 {
    // Even: both strips in phase. Odd: one strip beside a wall in the middle of the gap.
    // Below the box's first cut-off.
    let width = (2.0 * FAR_WALL_HEIGHTS * h).min(0.7 * 150e9 / f_hz);
    let cells = |from: f64, w: f64| -> Vec<f64> {
        let n = 14;
        // Cosine spacing: fine at both edges; each edge out by an eighth of its cell.
        let mut lines: Vec<f64> =
            (0..=n).map(|i| from + 0.5 * w * (1.0 - (std::f64::consts::PI * f64::from(i) / f64::from(n)).cos())).collect();
        let d = 0.125 * (lines[1] - lines[0]);
        lines[0] -= d;
        lines[n as usize] += d;
        lines
    };
    let (lines, gap_row, box_across) = if odd {
        (cells(0.5 * gap, w), None, 0.5 * gap + w + 0.5 * width)
    } else {
        let middle = 0.5 * (width + gap + 2.0 * w);
        let mut lines = cells(middle - 0.5 * gap - w, w);
        let row = lines.len() - 1;
        lines.extend(cells(middle + 0.5 * gap, w));
        (lines, Some(row), 2.0 * middle)
    };
    let across: Vec<f64> = lines.iter().map(|y| y * 1e-3).collect();
    let chain = |length_mm: f64| {
        let n = (length_mm / 0.4).round();
        let x: Vec<f64> = (0..=n as usize).map(|i| length_mm * i as f64 / n * 1e-3).collect();
        let mut patch = Patch::full(x, across.clone());
        if let Some(row) = gap_row {
            let columns = patch.columns();
            patch.copper[row * columns..(row + 1) * columns].fill(false);
        }
        let source = |line: usize, reversed| Source { patch: 0, axis: Axis::X, line, across: 0..across.len() - 1, reversed };
        let sources = vec![source(0, false), source(patch.columns(), true)];
        let size_m = [length_mm * 1e-3, box_across * 1e-3];
        let structure = Structure { stack: stack(er, h, FAR_LID_HEIGHTS * h), size_m, patches: vec![patch], sources, sheet: None };
        let y = Solver::new(structure, f_hz, Split::default()).unwrap().admittance(f_hz).unwrap();
        let determinant = y[0] * y[3] - y[1] * y[2];
        [-y[3] / y[2], -y[2].inv(), -determinant / y[2], -y[0] / y[2]]
    };
    let (thru, extra) = (24.0, 6.0);
    let (t, l): ([Complex64; 4], [Complex64; 4]) = (chain(thru), chain(thru + extra));
    // Trace of L T^-1 with det T = 1.
    let cosh = 0.5 * (l[0] * t[3] - l[1] * t[2] - l[2] * t[1] + l[3] * t[0]);
    let beta = cosh.re.acos() / (extra * 1e-3);
    (beta * 299_792_458.0 / (2.0 * std::f64::consts::PI * f_hz)).powi(2)
}

#[test]
fn coupled_pairs_have_their_full_wave_permittivities() {
    // Spectral-domain solutions of the open pair, good to 3e-5; mesh and walls as above.
    for (er, u, g, h, f_ghz, even, odd) in [(9.8, 0.8, 0.4, 0.635, 5.0, 7.16127, 5.63426), (6.15, 1.2, 0.3, 1.27, 2.0, 4.73050, 3.76459)] {
        for (is_odd, exact) in [(false, even), (true, odd)] {
            let found = eps_eff_of_pair(er, h, [u * h, g * h], is_odd, f_ghz * 1e9);
            println!("er {er} odd {is_odd}: {:.2e}", found / exact - 1.0);
            assert!((found / exact - 1.0).abs() < 3e-3, "er {er} odd {is_odd}: {found} {exact}");
        }
    }
}
