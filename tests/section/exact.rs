//! Against exact solutions: elliptic integrals for stripline, and quasi-static tables computed outside this project by other methods.

use stripwright::line::section::{CopperOf, CrossSection, HousingOf, LayerOf, Stackup, solve};

const SHEET: CopperOf = CopperOf { thickness_m: 0.0, undercut_m: 0.0 };
const H: f64 = 1e-3;

fn layer(permittivity: f64) -> Vec<LayerOf> {
    vec![LayerOf::isotropic(permittivity, 0.0, H)]
}

fn copper(ratio: f64) -> CopperOf {
    CopperOf { thickness_m: ratio * H, undercut_m: 0.0 }
}

fn near(what: &str, got: f64, wanted: f64, tolerance: f64) {
    let error = (got / wanted - 1.0).abs();
    assert!(error <= tolerance, "{what}: {got}, exact {wanted}, off by {error:.2e}, allowed {tolerance:.0e}");
}

/// Complete elliptic integral of the first kind by the arithmetic-geometric mean.
fn elliptic(modulus: f64) -> f64 {
    let (mut a, mut b) = (1.0, (1.0 - modulus * modulus).sqrt());
    for _ in 0..40 {
        (a, b) = (0.5 * (a + b), (a * b).sqrt());
    }
    std::f64::consts::FRAC_PI_2 / a
}

/// eta0/4 K(k')/K(k).
fn stripline_ohm(modulus: f64) -> f64 {
    376.730_313_668 / 4.0 * elliptic((1.0 - modulus * modulus).sqrt()) / elliptic(modulus)
}

fn stripline(width: f64, gap: Option<f64>, thickness: f64) -> CrossSection {
    // Plate distance 1 mm, strip in the middle, air throughout.
    let copper = CopperOf { thickness_m: thickness * H, undercut_m: 0.0 };
    let height = 0.5 * (1.0 - thickness) * H;
    let housing = HousingOf { lid_m: Some(0.5 * (1.0 + thickness) * H), wall_m: None };
    let layers = vec![LayerOf::isotropic(1.0, 0.0, height)];
    match gap {
        None => CrossSection::single(layers, copper, width * H, housing),
        Some(gap) => CrossSection::pair(layers, copper, width * H, gap * H, housing),
    }
}

/// S. B. Cohn, "Problems in strip transmission lines", IRE Trans. MTT-3, March 1955: exact for the sheet in the middle.
#[test]
fn the_centred_sheet_has_the_impedance_of_elliptic_integrals() {
    for width in [0.05, 0.1, 0.35, 0.7, 1.4423896, 3.0, 10.0] {
        let exact = stripline_ohm((0.5 * std::f64::consts::PI * width).tanh());
        let solved = solve(&stripline(width, None, 0.0), 1e-5).unwrap();
        // The accuracy asked for.
        near("sheet", solved.single().unwrap().z0_ohm(), exact, 1e-5);
    }
}

/// S. B. Cohn, "Shielded coupled-strip transmission line", IRE Trans. MTT-3, October 1955: exact even and odd mode.
#[test]
fn coupled_sheets_have_the_impedances_of_elliptic_integrals() {
    let half = 0.5 * std::f64::consts::PI;
    for (width, gap) in [(0.1, 0.05), (0.3, 0.02), (0.5, 0.2), (0.75, 0.1), (1.0, 0.02), (1.0, 0.5), (1.5, 0.25), (0.8, 1.5)] {
        let (own, both) = ((half * width).tanh(), (half * (width + gap)).tanh());
        let solved = solve(&stripline(width, Some(gap), 0.0), 2e-5).unwrap().pair().unwrap();
        // The accuracy asked for is that of C; Z0 in air is its inverse.
        near("even", solved.even.z0_ohm(), stripline_ohm(own * both), 2e-5);
        near("odd", solved.odd.z0_ohm(), stripline_ohm(own / both), 2e-5);
        let height = 0.5 * H;
        let fast =
            Stackup::new(&[LayerOf::isotropic(1.0, 0.0, height)], SHEET, Some(height)).unwrap().symmetric_pair(width * H, gap * H).unwrap();
        // The fast path's promise; its estimate must cover the error.
        for (got, exact) in [(fast.even, stripline_ohm(own * both)), (fast.odd, stripline_ohm(own / both))] {
            near("fast", got.z0_ohm(), exact, fast.error_estimate.min(5e-4));
        }
    }
}

/// Rectangular bar in the middle between plates: boundary elements of another author, printed to 1e-4 (w/b, t/b, ohm).
#[test]
fn the_thick_bar_between_plates_agrees_with_the_table() {
    for (width, thickness, z0) in [
        (0.3, 0.02, 121.8255),
        (0.5, 0.01, 97.7561),
        (0.5, 0.05, 90.2755),
        (0.8, 0.02, 72.8120),
        (1.0, 0.01, 64.0057),
        (1.0, 0.05, 59.9227),
        (1.0, 0.1, 55.6999),
        (2.0, 0.05, 35.8866),
    ] {
        let solved = solve(&stripline(width, None, thickness), 1e-4).unwrap();
        near("bar", solved.single().unwrap().z0_ohm(), z0, 1.5e-4);
    }
}

/// Sheet on a slab: image series with Chebyshev-Galerkin, all digits printed are good (permittivity, w/h, Z0, eps_eff).
#[test]
fn the_sheet_on_a_slab_agrees_with_the_galerkin_table() {
    let table = [
        (1.0, 0.5, 166.699799, 1.0),
        (1.0, 1.0, 126.423868, 1.0),
        (1.0, 2.0, 89.028750, 1.0),
        (1.0, 0.05, 304.304450, 1.0),
        (1.0, 20.0, 16.125318, 1.0),
        (2.2, 3.0, 50.887902, 1.8803233),
        (2.2, 0.1, 202.57840, 1.682391),
        (2.2, 8.0, 24.56349, 1.992669),
        (3.0, 1.0, 83.668495, 2.2831489),
        (3.0, 2.5, 50.162176, 2.4261309),
        (4.2, 2.0, 49.706549, 3.2079923),
        (6.15, 1.5, 49.479644, 4.4182305),
        (9.8, 0.3, 79.596355, 6.1278052),
        (9.8, 1.0, 49.305817, 6.5744863),
        (9.8, 8.0, 12.09679, 8.216286),
        (10.2, 0.9, 50.899260, 6.7691918),
        (10.8, 3.15, 23.724131, 8.1276961),
    ];
    for (permittivity, width, z0, effective) in table {
        let solved =
            solve(&CrossSection::single(layer(permittivity), SHEET, width * H, HousingOf::default()), 1e-5).unwrap().single().unwrap();
        near("Z0", solved.z0_ohm(), z0, 1e-5);
        near("eps_eff", solved.eps_eff(), effective, 1e-5);
    }
}

/// The same method's inverse table (permittivity, then w/h for 30, 50, 70, 100 ohm).
#[test]
fn widths_for_impedances_agree_with_the_galerkin_table() {
    let table = [
        (2.2, [6.22120, 3.08008, 1.79424, 0.89261]),
        (3.0, [5.18797, 2.51262, 1.42210, 0.66845]),
        (3.66, [4.59958, 2.18832, 1.20956, 0.54315]),
        (6.15, [3.30206, 1.47216, 0.74564, 0.28504]),
        (9.8, [2.38724, 0.97169, 0.43651, 0.13583]),
        (10.8, [2.22207, 0.88278, 0.38444, 0.11365]),
    ];
    for (permittivity, widths) in table {
        let stackup = Stackup::new(&layer(permittivity), SHEET, None).unwrap();
        for (z0, width) in [30.0, 50.0, 70.0, 100.0].into_iter().zip(widths) {
            // Residual 2e-5 and the fast path's error in Z0, over the slope d ln Z0 / d ln w of at least 0.2.
            near("w/h", stackup.width_for(z0, None).unwrap() / H, width, 3e-4);
        }
    }
}

/// Strip with thickness on a slab: boundary elements of another author, good to about 1e-4 (permittivity, w/h, t/h, Z0, eps_eff).
#[test]
fn the_thick_strip_on_a_slab_agrees_with_the_table() {
    let table = [
        (1.0, 1.0, 0.01, 125.190, 1.0),
        (1.0, 1.0, 0.03, 123.363, 1.0),
        (1.0, 1.0, 0.10, 118.681, 1.0),
        (2.2, 0.5, 0.01, 125.040, 1.7247),
        (2.2, 2.0, 0.10, 63.495, 1.8135),
        (3.0, 0.5, 0.03, 108.787, 2.1799),
        (3.0, 2.0, 0.10, 55.832, 2.3454),
        (4.2, 1.0, 0.03, 71.189, 3.0030),
        (9.8, 0.5, 0.10, 62.776, 5.8464),
        (9.8, 1.0, 0.03, 48.565, 6.4523),
        (9.8, 4.0, 0.01, 20.872, 7.5911),
        (9.8, 4.0, 0.10, 20.614, 7.4711),
    ];
    for (permittivity, width, thickness, z0, effective) in table {
        let line = Stackup::new(&layer(permittivity), copper(thickness), None).unwrap().single(width * H).unwrap();
        near("Z0", line.mode.z0_ohm(), z0, 1.5e-4);
        near("eps_eff", line.mode.eps_eff(), effective, 1.5e-4);
    }
}

/// Coupled sheets on a slab, Galerkin (permittivity, w/h, s/h, Z0e, Z0o, eps_eff even and odd).
#[test]
fn coupled_sheets_on_a_slab_agree_with_the_galerkin_table() {
    let table = [
        (1.0, 1.0, 0.5, 159.31083, 89.35688, 1.0, 1.0),
        (2.2, 2.4, 0.2, 71.01354, 40.28341, 1.938721, 1.690353),
        (2.2, 3.0, 1.0, 56.32593, 44.64254, 1.962364, 1.767257),
        (3.0, 2.0, 0.2, 70.38658, 38.86396, 2.524330, 2.120780),
        (3.0, 1.0, 0.1, 112.02685, 44.31681, 2.394118, 2.038696),
        (4.2, 1.6, 0.25, 69.72087, 38.84762, 3.366255, 2.754789),
        (6.15, 1.2, 0.3, 69.44109, 38.53625, 4.668375, 3.757427),
        (9.8, 0.8, 0.4, 68.46537, 38.97403, 6.984607, 5.612368),
        (9.8, 1.0, 1.0, 55.60242, 42.50524, 7.144227, 5.867323),
        (10.2, 0.6, 0.25, 80.53343, 37.97630, 7.038695, 5.718119),
        (10.8, 0.9, 0.05, 67.28640, 23.20784, 7.644325, 6.029282),
    ];
    for (permittivity, width, gap, even, odd, effective_even, effective_odd) in table {
        let section = CrossSection::pair(layer(permittivity), SHEET, width * H, gap * H, HousingOf::default());
        let solved = solve(&section, 2e-5).unwrap().pair().unwrap();
        let fast = Stackup::new(&layer(permittivity), SHEET, None).unwrap().symmetric_pair(width * H, gap * H).unwrap();
        // The accuracy asked for, and the fast path's promise of 0.05 %.
        for (pair, tolerance) in [(solved, 2e-5), (fast, 5e-4)] {
            near("Z0e", pair.even.z0_ohm(), even, tolerance);
            near("Z0o", pair.odd.z0_ohm(), odd, tolerance);
            near("eps_eff even", pair.even.eps_eff(), effective_even, tolerance);
            near("eps_eff odd", pair.odd.eps_eff(), effective_odd, tolerance);
            let k = (even - odd) / (even + odd);
            near("k", pair.coupling(), k, if tolerance < 1e-4 { 1e-4 } else { 5e-3 });
        }
    }
}

/// The inverse of that table (permittivity, then w/h and s/h for three pairs of impedances).
#[test]
fn widths_and_gaps_for_impedances_agree_with_the_galerkin_table() {
    let pairs = [(70.61, 39.24), (56.64, 44.77), (82.9367, 37.6092), (61.16, 42.3705), (58.1839, 43.8661)];
    let table = [
        (2.2, [(2.43025, 0.17498), (2.97958, 0.98784), (1.98021, 0.07604), (2.82079, 0.49487), (2.93076, 0.76336)]),
        (3.0, [(1.98725, 0.20838), (2.43022, 1.00727), (1.61489, 0.09808), (2.30328, 0.53447), (2.39117, 0.79440)]),
        (6.15, [(1.16368, 0.30856), (1.42211, 1.09031), (0.93305, 0.16953), (1.34931, 0.65043), (1.39965, 0.89656)]),
        (10.2, [(0.73011, 0.38418), (0.90053, 1.15484), (0.57295, 0.22564), (0.85289, 0.73367), (0.88580, 0.97156)]),
    ];
    for (permittivity, sizes) in table {
        let stackup = Stackup::new(&layer(permittivity), SHEET, None).unwrap();
        for ((even, odd), (width, gap)) in pairs.into_iter().zip(sizes) {
            let (w, s) = stackup.pair_for(even, odd, None).unwrap();
            // Residual 2e-5 plus the fast path's few 1e-5 in Z0, over slopes of about 0.3 (w) and 0.1 (s); printed to five digits.
            near("w/h", w / H, width, 4e-4);
            near("s/h", s / H, gap, 1e-3);
        }
    }
}
