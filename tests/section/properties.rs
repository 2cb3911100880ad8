//! What must hold for any cross-section.

use proptest::prelude::*;
use stripwright::line::section::{CoatOf, CopperOf, CrossSection, HousingOf, LayerOf, Stackup, StripOf, loss, solve};

fn random_strips() -> impl Strategy<Value = CrossSection> {
    let strip = (0.05_f64..3.0, 0.04_f64..1.5).prop_map(|(width, gap)| StripOf { width_m: width * 1e-3, gap_before_m: gap * 1e-3 });
    let housing = (prop::option::of(0.5_f64..8.0), prop::option::of(0.3_f64..5.0))
        .prop_map(|(lid, wall)| HousingOf { lid_m: lid.map(|lid| lid * 1e-3), wall_m: wall.map(|wall| wall * 1e-3) });
    (
        prop::collection::vec(strip, 1..5),
        1.0_f64..11.0,
        1.0_f64..1.4,
        0.1_f64..1.6,
        prop::sample::select(vec![0.0, 18e-6, 35e-6, 70e-6]),
        0.0_f64..0.3,
        housing,
    )
        .prop_map(|(strips, permittivity, anisotropy, height, thickness_m, undercut, housing)| {
            let layer =
                LayerOf { permittivity, in_plane_permittivity: permittivity * anisotropy, loss_tangent: 0.001, thickness_m: height * 1e-3 };
            CrossSection {
                layers: vec![layer],
                copper: CopperOf { thickness_m, undercut_m: undercut * thickness_m },
                strips,
                coat: None,
                housing,
            }
        })
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 48, ..ProptestConfig::default() })]

    /// Energy is positive, induced charges are negative, ground takes the rest: a Maxwell matrix is diagonally dominant.
    #[test]
    fn the_capacitance_matrix_is_that_of_a_passive_network(section in random_strips()) {
        let solved = solve(&section, 2e-3).unwrap();
        let count = section.strips.len();
        for (with, matrix) in [(true, &solved.capacitance_f_per_m), (false, &solved.air_capacitance_f_per_m)] {
            for i in 0..count {
                // Off-diagonals far from each other may be as small as the error of the diagonal.
                let slack = 4e-3 * matrix[i][i];
                let others: f64 = (0..count).filter(|&j| j != i).map(|j| matrix[i][j]).sum();
                prop_assert!(matrix[i][i] + others > -slack, "row {i}");
                for j in 0..count {
                    prop_assert!((matrix[i][j] - matrix[j][i]).abs() <= 1e-12 * matrix[i][i]);
                    prop_assert!(i == j || matrix[i][j] < slack * 1e-1, "{i} {j} {} dielectric {with}", matrix[i][j]);
                }
            }
        }
        for i in 0..count {
            // Dielectric only adds.
            prop_assert!(solved.capacitance_f_per_m[i][i] >= solved.air_capacitance_f_per_m[i][i] * (1.0 - 1e-9));
            // L C0 = 1/c^2.
            for j in 0..count {
                let product: f64 = (0..count).map(|k| solved.inductance_h_per_m[i][k] * solved.air_capacitance_f_per_m[k][j]).sum::<f64>() * 299_792_458.0_f64.powi(2);
                let wanted = if i == j { 1.0 } else { 0.0 };
                prop_assert!((product - wanted).abs() < 1e-9);
            }
        }
    }

    /// All sizes times one factor: the same capacitance per length.
    #[test]
    fn capacitance_depends_on_shape_alone(section in random_strips(), factor in 0.1_f64..10.0) {
        let mut scaled = section.clone();
        for layer in &mut scaled.layers { layer.thickness_m *= factor; }
        for strip in &mut scaled.strips { strip.width_m *= factor; strip.gap_before_m *= factor; }
        scaled.copper.thickness_m *= factor;
        scaled.copper.undercut_m *= factor;
        scaled.housing = HousingOf { lid_m: section.housing.lid_m.map(|lid| lid * factor), wall_m: section.housing.wall_m.map(|wall| wall * factor) };
        let (one, other) = (solve(&section, 0.01).unwrap(), solve(&scaled, 0.01).unwrap());
        for (one, other) in one.capacitance_f_per_m.iter().flatten().zip(other.capacitance_f_per_m.iter().flatten()) {
            // Rounding only: same panels, same table cells.
            prop_assert!((one - other).abs() < 1e-9 * solve(&section, 0.01).unwrap().capacitance_f_per_m[0][0]);
        }
    }

    /// The array read from the right gives the matrix read from the right.
    #[test]
    fn a_mirrored_array_has_the_mirrored_matrix(section in random_strips()) {
        let mut mirrored = section.clone();
        mirrored.strips.reverse();
        let count = section.strips.len();
        for i in (1..count).rev() { mirrored.strips[i].gap_before_m = section.strips[count - i].gap_before_m; }
        let (one, other) = (solve(&section, 0.01).unwrap(), solve(&mirrored, 0.01).unwrap());
        for i in 0..count {
            for j in 0..count {
                let (a, b) = (one.capacitance_f_per_m[i][j], other.capacitance_f_per_m[count - 1 - i][count - 1 - j]);
                prop_assert!((a - b).abs() < 1e-9 * one.capacitance_f_per_m[i][i]);
            }
        }
    }

    /// Two equal strips by the fast path and by the general one; a wider gap couples less.
    #[test]
    fn the_fast_path_agrees_and_coupling_falls_with_the_gap(width in 0.1_f64..3.0, gap in 0.05_f64..1.5, permittivity in 1.5_f64..10.5, thick in any::<bool>(), lid in prop::option::of(1.0_f64..6.0)) {
        let copper = CopperOf { thickness_m: if thick { 35e-6 } else { 0.0 }, undercut_m: if thick { 8e-6 } else { 0.0 } };
        let layers = vec![LayerOf::isotropic(permittivity, 0.0, 0.508e-3)];
        let lid_m = lid.map(|lid| lid * 1e-3);
        let stackup = Stackup::new(&layers, copper, lid_m).unwrap();
        let (w, s) = (width * 1e-3, gap * 1e-3);
        let pair = stackup.symmetric_pair(w, s).unwrap();
        let general = solve(&CrossSection::pair(layers, copper, w, s, HousingOf { lid_m, wall_m: None }), 1e-4).unwrap().pair().unwrap();
        for (one, other) in [(pair.even, general.even), (pair.odd, general.odd)] {
            // The promise of the fast path, and what it says of itself.
            let error = (one.capacitance_f_per_m / other.capacitance_f_per_m - 1.0).abs();
            prop_assert!(error < 5e-4 && error < pair.error_estimate + 1e-4, "{error:e}");
        }
        prop_assert!((pair.coupling() / general.coupling() - 1.0).abs() < 5e-3);
        let farther = stackup.symmetric_pair(w, 1.02 * s).unwrap();
        prop_assert!(farther.coupling() < pair.coupling());
        prop_assert!(farther.odd.z0_ohm() > pair.odd.z0_ohm());
        prop_assert!(pair.even.z0_ohm() > pair.odd.z0_ohm());
        // A line alone lies between its modes.
        let line = stackup.single(w).unwrap().mode;
        prop_assert!(pair.odd.z0_ohm() < line.z0_ohm() && line.z0_ohm() < pair.even.z0_ohm() * (1.0 + 1e-4));
    }

    /// What was found by inversion gives what was asked for.
    #[test]
    fn inversion_returns_what_was_asked(width in 0.2_f64..4.0, gap in 0.08_f64..3.0, permittivity in 2.0_f64..10.5) {
        let stackup = Stackup::new(&[LayerOf::isotropic(permittivity, 0.0, 0.508e-3)], CopperOf { thickness_m: 35e-6, undercut_m: 5e-6 }, Some(8e-3)).unwrap();
        let pair = stackup.symmetric_pair(width * 0.508e-3, gap * 0.508e-3).unwrap();
        let (w, s) = stackup.pair_for(pair.even.z0_ohm(), pair.odd.z0_ohm(), None).unwrap();
        let again = stackup.symmetric_pair(w, s).unwrap();
        prop_assert!((again.even.z0_ohm() / pair.even.z0_ohm() - 1.0).abs() < 3e-5);
        prop_assert!((again.odd.z0_ohm() / pair.odd.z0_ohm() - 1.0).abs() < 3e-5);
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 40, ..ProptestConfig::default() })]

    /// Any shape, sensible or not, is solved to sane numbers or refused with a code; nothing panics.
    #[test]
    fn extreme_shapes_are_solved_or_refused(
        sizes in prop::collection::vec((-6.5_f64..-1.0, -6.5_f64..-1.5), 1..4),
        layers in prop::collection::vec((1.0_f64..50.0, 0.5_f64..2.0, -5.5_f64..-1.5), 1..4),
        thickness in prop::option::of(-7.5_f64..-2.5),
        undercut in 0.0_f64..0.5,
        lid in prop::option::of(-5.0_f64..-1.0),
        wall in prop::option::of(-6.0_f64..-1.0),
    ) {
        let power = |exponent: f64| 10.0_f64.powf(exponent);
        let thickness_m = thickness.map_or(0.0, power);
        let section = CrossSection {
            layers: layers.iter().map(|&(permittivity, ratio, height)| LayerOf { permittivity, in_plane_permittivity: permittivity * ratio, loss_tangent: 0.0, thickness_m: power(height) }).collect(),
            copper: CopperOf { thickness_m, undercut_m: undercut * thickness_m },
            strips: sizes.iter().map(|&(width, gap)| StripOf { width_m: power(width), gap_before_m: power(gap) }).collect(),
            coat: None,
            housing: HousingOf { lid_m: lid.map(power), wall_m: wall.map(power) },
        };
        match solve(&section, 0.02) {
            Err(problem) => prop_assert!(problem.is_error() && !problem.code.is_empty()),
            Ok(solved) => {
                prop_assert!(section.check().is_empty());
                prop_assert!(solved.error_estimate <= 0.02);
                for (i, row) in solved.capacitance_f_per_m.iter().enumerate() {
                    prop_assert!(row[i].is_finite() && row[i] > 0.0);
                    prop_assert!(row.iter().enumerate().all(|(j, value)| j == i || (value.is_finite() && *value < 0.04 * row[i])));
                    // More than the strip's own parallel plates to the ground through the series of layers, within the error.
                    let series: f64 = section.layers.iter().map(|layer| layer.thickness_m / layer.permittivity).sum();
                    let plates = 8.854e-12 * section.strips[i].width_m / series;
                    prop_assert!(row[i] > 0.96 * plates, "{} plates {plates}", row[i]);
                }
            }
        }
    }
}

/// The error that is promised, over the range that synthesis uses: 0.05 % of C, 0.5 % of k, against grids four times as fine.
#[test]
fn the_promised_accuracy_holds_over_a_sweep() {
    let mut rows = 0;
    for (h, t) in [(0.127e-3, 70e-6), (0.254e-3, 35e-6), (0.508e-3, 35e-6), (1.575e-3, 18e-6)] {
        for permittivity in [2.2, 10.2] {
            let layers = vec![LayerOf::isotropic(permittivity, 0.0, h)];
            let copper = CopperOf { thickness_m: t, undercut_m: 0.25 * t };
            let stackup = Stackup::new(&layers, copper, None).unwrap();
            for (u, g) in [(0.5, 0.4), (1.0, 0.1), (2.0, 0.2), (2.5, 1.0), (3.0, 4.0), (8.0, 0.5)] {
                let (w, s): (f64, f64) = (u * h, (g * h).max(40e-6));
                let fast = stackup.symmetric_pair(w.max(60e-6), s).unwrap();
                let fine = solve(&CrossSection::pair(layers.clone(), copper, w.max(60e-6), s, HousingOf::default()), 2e-5)
                    .unwrap()
                    .pair()
                    .unwrap();
                for (one, other) in [(fast.even, fine.even), (fast.odd, fine.odd)] {
                    for (a, b) in
                        [(one.capacitance_f_per_m, other.capacitance_f_per_m), (one.air_capacitance_f_per_m, other.air_capacitance_f_per_m)]
                    {
                        let error = (a / b - 1.0).abs();
                        assert!(
                            error < 5e-4 && error < fast.error_estimate,
                            "h {h} t {t} er {permittivity} u {u} g {g}: {error:e}, said {:e}",
                            fast.error_estimate
                        );
                    }
                }
                assert!((fast.coupling() / fine.coupling() - 1.0).abs() < 5e-3, "k at h {h} u {u} g {g}");
                rows += 1;
            }
        }
    }
    assert_eq!(rows, 48);
}

/// k down to 0.005 within 0.5 % of itself.
#[test]
fn weak_couplings_keep_their_digits() {
    let layers = vec![LayerOf::isotropic(3.0, 0.0, 0.508e-3)];
    let copper = CopperOf { thickness_m: 35e-6, undercut_m: 0.0 };
    for lid_m in [None, Some(1.5e-3), Some(6.6e-3)] {
        let stackup = Stackup::new(&layers, copper, lid_m).unwrap();
        for gap in [1e-3, 2e-3, 3e-3, 4e-3] {
            let fast = stackup.symmetric_pair(1.2e-3, gap).unwrap().coupling();
            if fast < 0.004 {
                continue;
            }
            let fine = solve(&CrossSection::pair(layers.clone(), copper, 1.2e-3, gap, HousingOf { lid_m, wall_m: None }), 2e-5)
                .unwrap()
                .pair()
                .unwrap()
                .coupling();
            assert!((fast / fine - 1.0).abs() < 5e-3, "lid {lid_m:?} gap {gap}: {fast} against {fine}");
        }
    }
}

/// Difference quotients over steps of 1e-3 and 1e-4 agree: no jumps as panels or tables change.
#[test]
fn results_are_smooth_in_width_and_gap() {
    let stackup =
        Stackup::new(&[LayerOf::isotropic(3.0, 0.0, 0.508e-3)], CopperOf { thickness_m: 35e-6, undercut_m: 5e-6 }, Some(5e-3)).unwrap();
    let slope = |at: &dyn Fn(f64) -> f64, step: f64| (at(step) - at(-step)) / (2.0 * step);
    for index in 0..60 {
        let (w, s) = (0.3e-3 * 1.05_f64.powi(index), 0.1e-3 * 1.06_f64.powi(index));
        let by_width = |x: f64| stackup.symmetric_pair(w * x.exp(), s).unwrap().coupling().ln();
        let by_gap = |x: f64| stackup.symmetric_pair(w, s * x.exp()).unwrap().coupling().ln();
        for at in [&by_width as &dyn Fn(f64) -> f64, &by_gap] {
            let (coarse, fine) = (slope(at, 1e-3), slope(at, 1e-4));
            // The table's cubics have slopes that jump by some 1e-6 of k; over a step of 1e-4 that is up to 1e-3.
            assert!((coarse - fine).abs() < 2e-3 * (1.0 + coarse.abs()), "w {w} s {s}: {coarse} and {fine}");
        }
    }
}

/// In-plane and normal permittivity: the field cannot tell the layer from the isotropic one of permittivity sqrt(a b) and height h sqrt(a/b).
#[test]
fn a_uniaxial_layer_is_its_transformed_isotropic_one() {
    let copper = CopperOf { thickness_m: 35e-6, undercut_m: 0.0 };
    let uniaxial = LayerOf { permittivity: 3.0, in_plane_permittivity: 3.9, loss_tangent: 0.0, thickness_m: 0.5e-3 };
    let isotropic = LayerOf::isotropic((3.0_f64 * 3.9).sqrt(), 0.0, 0.5e-3 * (3.9_f64 / 3.0).sqrt());
    let one = Stackup::new(&[uniaxial], copper, None).unwrap().symmetric_pair(1e-3, 0.2e-3).unwrap();
    let other = Stackup::new(&[isotropic], copper, None).unwrap().symmetric_pair(1e-3, 0.2e-3).unwrap();
    assert!((one.even.capacitance_f_per_m / other.even.capacitance_f_per_m - 1.0).abs() < 1e-12, "the same problem but for rounding");
    assert!((one.odd.capacitance_f_per_m / other.odd.capacitance_f_per_m - 1.0).abs() < 1e-12);
}

/// One layer cut into two of the same permittivity, or nothing but air, changes nothing.
#[test]
fn a_cut_in_a_layer_is_not_seen_and_air_is_air() {
    let copper = CopperOf { thickness_m: 35e-6, undercut_m: 0.0 };
    let housing = HousingOf { lid_m: Some(2e-3), wall_m: None };
    let whole = CrossSection::pair(vec![LayerOf::isotropic(4.2, 0.0, 0.5e-3)], copper, 1e-3, 0.2e-3, housing);
    let cut = CrossSection { layers: vec![LayerOf::isotropic(4.2, 0.0, 0.2e-3), LayerOf::isotropic(4.2, 0.0, 0.3e-3)], ..whole.clone() };
    let (one, other) = (solve(&whole, 1e-4).unwrap(), solve(&cut, 1e-4).unwrap());
    for (a, b) in one.capacitance_f_per_m.iter().flatten().zip(other.capacitance_f_per_m.iter().flatten()) {
        // Only the table's step differs.
        assert!((a / b - 1.0).abs() < 2e-6, "{a:e} {b:e}");
    }
    let air = CrossSection { layers: vec![LayerOf::isotropic(1.0, 0.0, 0.5e-3)], ..whole };
    let pair = solve(&air, 1e-4).unwrap().pair().unwrap();
    assert!((pair.even.eps_eff() - 1.0).abs() < 1e-6 && (pair.odd.eps_eff() - 1.0).abs() < 1e-6);
    // A layer that is all but air goes through the dielectric's own tables.
    let nearly = CrossSection { layers: vec![LayerOf::isotropic(1.0 + 1e-7, 0.0, 0.5e-3)], ..air };
    let pair = solve(&nearly, 1e-4).unwrap().pair().unwrap();
    assert!((pair.even.eps_eff() - 1.0).abs() < 1e-6 && (pair.odd.eps_eff() - 1.0).abs() < 1e-6);
}

/// Walls and lid far away do nothing; moving them away converges to that.
#[test]
fn far_walls_and_lids_do_nothing() {
    let copper = CopperOf { thickness_m: 35e-6, undercut_m: 0.0 };
    let at = |lid: Option<f64>, wall: Option<f64>| {
        let housing = HousingOf { lid_m: lid.map(|lid| lid * 1e-3), wall_m: wall.map(|wall| wall * 1e-3) };
        solve(&CrossSection::pair(vec![LayerOf::isotropic(3.0, 0.0, 0.508e-3)], copper, 1.2e-3, 0.3e-3, housing), 1e-4)
            .unwrap()
            .pair()
            .unwrap()
    };
    let open = at(None, None);
    for (name, near, far, farther) in [
        ("lid", at(Some(2.0), None), at(Some(20.0), None), at(Some(200.0), None)),
        ("wall", at(None, Some(2.0)), at(None, Some(20.0)), at(None, Some(200.0))),
    ] {
        let off = |pair: &stripwright::line::section::Pair| (pair.even.z0_ohm() / open.even.z0_ohm() - 1.0).abs();
        assert!(off(&near) > off(&far) && off(&far) > 0.9 * off(&farther), "{name}");
        // The field of a strip over ground falls with the square of the distance: (0.5 mm / 200 mm)^2 is 6e-6.
        assert!(off(&farther) < 3e-5, "{name} {}", off(&farther));
    }
}

/// The fillings of the layers, and a coat of air that adds nothing.
#[test]
fn fillings_are_shares_and_a_coat_of_air_adds_nothing() {
    let copper = CopperOf { thickness_m: 35e-6, undercut_m: 5e-6 };
    let layers = vec![LayerOf::isotropic(3.0, 0.002, 0.3e-3), LayerOf::isotropic(5.0, 0.01, 0.1e-3)];
    let section = CrossSection::pair(layers.clone(), copper, 0.6e-3, 0.2e-3, HousingOf::default());
    for mode in loss(&section).unwrap() {
        let sum: f64 = mode.filling.iter().sum();
        // The rest of the energy is in the air.
        assert!(mode.filling.iter().all(|share| *share > 0.0) && sum > 0.5 && sum < 1.0, "{:?}", mode.filling);
    }
    let stackup = Stackup::new(&layers, copper, None).unwrap();
    let (fast, slow) = (stackup.pair_loss(0.6e-3, 0.2e-3).unwrap(), loss(&section).unwrap());
    for (one, other) in fast.iter().zip(&slow) {
        for (a, b) in one.filling.iter().zip(&other.filling) {
            // Slopes on slightly different grids.
            assert!((a - b).abs() < 1e-3, "{a} {b}");
        }
    }
    let coat = Some(CoatOf { permittivity: 1.0, loss_tangent: 0.0, on_laminate_m: 20e-6, on_copper_m: 15e-6 });
    let (bare, coated) = (solve(&section, 1e-3).unwrap(), solve(&CrossSection { coat, ..section }, 1e-3).unwrap());
    for (a, b) in bare.capacitance_f_per_m.iter().flatten().zip(coated.capacitance_f_per_m.iter().flatten()) {
        assert!((a / b - 1.0).abs() < 1e-9, "no polarisation, no charge");
    }
}

/// A coat of the top layer's own permittivity, thicker and thicker, takes filling from the air: shares still sum below one, and its own is the last.
#[test]
fn a_coat_has_its_own_filling() {
    let copper = CopperOf { thickness_m: 35e-6, undercut_m: 0.0 };
    let bare = CrossSection::single(vec![LayerOf::isotropic(3.0, 0.002, 0.3e-3)], copper, 0.6e-3, HousingOf::default());
    let mut before = 0.0;
    for thickness in [10e-6, 30e-6, 90e-6] {
        let coat = Some(CoatOf { permittivity: 3.0, loss_tangent: 0.02, on_laminate_m: thickness, on_copper_m: thickness });
        let mode = &loss(&CrossSection { coat, ..bare.clone() }).unwrap()[0];
        let (filling, tangents) = (&mode.filling, &mode.loss_tangents);
        assert_eq!((filling.len(), tangents.as_slice()), (2, [0.002, 0.02].as_slice()));
        assert!(filling[1] > before && filling[0] + filling[1] < 1.0, "{filling:?}");
        before = filling[1];
    }
}

/// Same question, same bits, whatever was asked before.
#[test]
fn answers_do_not_depend_on_what_was_asked_before() {
    let make =
        || Stackup::new(&[LayerOf::isotropic(3.0, 0.0, 0.508e-3)], CopperOf { thickness_m: 35e-6, undercut_m: 0.0 }, Some(4e-3)).unwrap();
    let (fresh, used) = (make(), make());
    used.symmetric_pair(20e-3, 5e-3).unwrap();
    used.single(1e-3).unwrap();
    used.array(&[StripOf { width_m: 1e-3, gap_before_m: 0.0 }; 1]).unwrap();
    assert_eq!(fresh.symmetric_pair(1.2e-3, 0.2e-3).unwrap(), used.symmetric_pair(1.2e-3, 0.2e-3).unwrap());
    assert_eq!(used.symmetric_pair(1.2e-3, 0.2e-3).unwrap(), used.symmetric_pair_anew(1.2e-3, 0.2e-3).unwrap());
}
