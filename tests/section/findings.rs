//! What cannot be solved is said, by code.

use stripwright::line::section::{CoatOf, CopperOf, CrossSection, HousingOf, LayerOf, STRIPS_AT_MOST, Stackup, StripOf, solve};

fn good() -> CrossSection {
    let copper = CopperOf { thickness_m: 35e-6, undercut_m: 5e-6 };
    CrossSection::pair(
        vec![LayerOf::isotropic(3.0, 0.001, 0.5e-3)],
        copper,
        1e-3,
        0.2e-3,
        HousingOf { lid_m: Some(5e-3), wall_m: Some(4e-3) },
    )
}

type Change = (&'static str, fn(&mut CrossSection));

#[test]
fn every_fault_has_its_code() {
    assert_eq!(good().check(), vec![]);
    let faults: Vec<Change> = vec![
        ("layer-missing", |s| s.layers.clear()),
        ("layer-thickness", |s| s.layers[0].thickness_m = 0.0),
        ("layer-thickness", |s| s.layers[0].thickness_m = f64::NAN),
        ("layer-permittivity", |s| s.layers[0].permittivity = 0.5),
        ("layer-permittivity", |s| s.layers[0].in_plane_permittivity = f64::INFINITY),
        ("layer-loss-tangent", |s| s.layers[0].loss_tangent = -0.1),
        ("strip-missing", |s| s.strips.clear()),
        ("strip-count", |s| s.strips = vec![StripOf { width_m: 1e-4, gap_before_m: 1e-4 }; STRIPS_AT_MOST + 1]),
        ("strip-width", |s| s.strips[0].width_m = 0.0),
        ("strip-overlap", |s| s.strips[1].gap_before_m = -0.1e-3),
        ("strip-overlap", |s| s.strips[1].gap_before_m = 0.0),
        ("strip-overlap", |s| s.strips[1].gap_before_m = f64::NAN),
        ("copper-thickness", |s| s.copper.thickness_m = -1e-6),
        ("undercut-exceeds-strip", |s| s.copper.undercut_m = 0.6e-3),
        ("lid-below-strip", |s| s.housing.lid_m = Some(30e-6)),
        ("strip-outside-wall", |s| s.housing.wall_m = Some(-1e-3)),
        ("coat-size", |s| s.coat = Some(CoatOf { permittivity: 3.5, loss_tangent: 0.02, on_laminate_m: 0.0, on_copper_m: 15e-6 })),
        ("coat-fills-gap", |s| s.coat = Some(CoatOf { permittivity: 3.5, loss_tangent: 0.02, on_laminate_m: 25e-6, on_copper_m: 110e-6 })),
        ("coat-reaches-housing", |s| {
            s.coat = Some(CoatOf { permittivity: 3.5, loss_tangent: 0.02, on_laminate_m: 6e-3, on_copper_m: 15e-6 })
        }),
        ("section-aspect", |s| s.layers[0].thickness_m = 1e-8),
        ("section-aspect", |s| s.housing.wall_m = Some(10.0)),
        ("section-aspect", |s| s.housing.lid_m = Some(35.0001e-6)),
    ];
    for (code, change) in faults {
        let mut section = good();
        change(&mut section);
        let problems = section.check();
        assert!(problems.iter().any(|problem| problem.code == code && problem.is_error()), "{code}: {problems:?}");
        assert!(solve(&section, 1e-3).is_err(), "{code} must not be solved");
    }
}

#[test]
fn an_accuracy_that_cannot_be_had_is_refused() {
    assert_eq!(solve(&good(), 1e-9).unwrap_err().code, "accuracy");
    assert_eq!(solve(&good(), f64::NAN).unwrap_err().code, "accuracy");
    // Wide strips 1 um apart, 35 um thick: all charge sits in the slot, where the panels are few.
    let mut hard = good();
    hard.strips = vec![StripOf { width_m: 4e-3, gap_before_m: 0.2e-6 }; 2];
    hard.copper.undercut_m = 0.0;
    match solve(&hard, 1e-5) {
        Ok(solved) => assert!(solved.error_estimate <= 1e-5),
        Err(problem) => assert_eq!(problem.code, "section-not-converged"),
    }
}

#[test]
fn impossible_impedances_are_refused() {
    let stackup = Stackup::new(&[LayerOf::isotropic(3.0, 0.0, 0.5e-3)], CopperOf { thickness_m: 35e-6, undercut_m: 5e-6 }, None).unwrap();
    for (even, odd) in [(50.0, 50.0), (40.0, 60.0), (f64::NAN, 50.0), (1e5, 10.0), (51.0, 0.0), (900.0, 800.0)] {
        assert_eq!(stackup.pair_for(even, odd, None).unwrap_err().code, "impedances-unreachable", "{even} {odd}");
    }
    for z0 in [0.0, -1.0, f64::NAN, 1e4, 0.01] {
        assert_eq!(stackup.width_for(z0, None).unwrap_err().code, "impedances-unreachable", "{z0}");
    }
    assert_eq!(stackup.symmetric_pair(1e-3, -1e-3).unwrap_err().code, "strip-overlap");
    assert_eq!(stackup.symmetric_pair(f64::NAN, 1e-3).unwrap_err().code, "strip-width");
    assert_eq!(stackup.single(5e-6).unwrap_err().code, "undercut-exceeds-strip");
    assert_eq!(stackup.single(1e3).unwrap_err().code, "section-aspect");
}
