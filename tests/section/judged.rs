//! Against the slow, plain judge: finite differences, where no closed form reaches.

use stripwright::line::section::{CoatOf, CopperOf, CrossSection, HousingOf, LayerOf, solve};

use crate::reference::{Plane, capacitance};

const EPSILON_0: f64 = 8.854_187_812_8e-12;
/// At this fineness the judge still moves by up to 4.5e-4 (a strip between near walls) when it is refined further, towards the solver:
/// with 14 cells the worst difference over these cases is 2.5e-4, in one case with 16 cells 3e-5.
const CELLS: f64 = 10.0;
const JUDGE: f64 = 6e-4;

fn copper(thickness_m: f64) -> CopperOf {
    CopperOf { thickness_m, undercut_m: 0.0 }
}

fn compare(name: &str, section: &CrossSection, tolerance: f64) {
    let solved = solve(section, 1e-4).unwrap();
    let modes = match solved.pair() {
        Some(pair) => vec![(Plane::Even, pair.even), (Plane::Odd, pair.odd)],
        None => vec![(Plane::Even, solved.single().unwrap())],
    };
    for (plane, mode) in modes {
        for (with_dielectric, got) in [(true, mode.capacitance_f_per_m), (false, mode.air_capacitance_f_per_m)] {
            let judged = capacitance(section, plane, with_dielectric, CELLS) * EPSILON_0;
            let error = (got / judged - 1.0).abs();
            assert!(error < tolerance, "{name}, dielectric {with_dielectric}: {got:e} against {judged:e}, off by {error:.1e}");
        }
    }
}

#[test]
fn a_uniaxial_pair_under_a_lid() {
    let layers = vec![LayerOf { permittivity: 3.0, in_plane_permittivity: 3.6, loss_tangent: 0.0, thickness_m: 0.508e-3 }];
    let housing = HousingOf { lid_m: Some(1.5e-3), wall_m: None };
    compare("uniaxial", &CrossSection::pair(layers, copper(35e-6), 1.2e-3, 0.2e-3, housing), JUDGE);
}

#[test]
fn a_pair_on_two_layers_between_near_walls() {
    let layers = vec![
        LayerOf::isotropic(4.2, 0.0, 0.3e-3),
        LayerOf { permittivity: 2.5, in_plane_permittivity: 2.9, loss_tangent: 0.0, thickness_m: 0.1e-3 },
    ];
    let housing = HousingOf { lid_m: Some(0.8e-3), wall_m: Some(0.25e-3) };
    compare("layers", &CrossSection::pair(layers, copper(50e-6), 0.4e-3, 0.15e-3, housing), JUDGE);
}

#[test]
fn one_strip_between_walls_without_a_lid() {
    let housing = HousingOf { lid_m: None, wall_m: Some(0.2e-3) };
    compare("walls", &CrossSection::single(vec![LayerOf::isotropic(10.2, 0.0, 0.254e-3)], copper(18e-6), 0.3e-3, housing), JUDGE);
}

#[test]
fn thick_copper_on_a_thin_laminate() {
    compare(
        "thick",
        &CrossSection::pair(vec![LayerOf::isotropic(3.0, 0.0, 0.127e-3)], copper(70e-6), 0.25e-3, 0.08e-3, HousingOf::default()),
        JUDGE,
    );
}

#[test]
fn a_coated_pair_in_a_housing() {
    let coat = Some(CoatOf { permittivity: 3.5, loss_tangent: 0.02, on_laminate_m: 25e-6, on_copper_m: 15e-6 });
    let housing = HousingOf { lid_m: Some(1e-3), wall_m: Some(0.5e-3) };
    let pair = CrossSection::pair(vec![LayerOf::isotropic(4.2, 0.0, 0.2e-3)], copper(35e-6), 0.3e-3, 0.15e-3, housing);
    // The coat's own panels: estimate 6e-4 on top of the judge's error.
    compare("coat", &CrossSection { coat, ..pair }, 1.2e-3);
}

#[test]
fn a_coated_sheet_and_a_buried_strip() {
    let coat = |on_laminate_m: f64| Some(CoatOf { permittivity: 4.0, loss_tangent: 0.02, on_laminate_m, on_copper_m: 20e-6 });
    let housing = HousingOf { lid_m: Some(1e-3), wall_m: Some(1e-3) };
    let single = |thickness: f64| CrossSection::single(vec![LayerOf::isotropic(3.0, 0.0, 0.254e-3)], copper(thickness), 0.5e-3, housing);
    compare("sheet", &CrossSection { coat: coat(30e-6), ..single(0.0) }, 1.2e-3);
    compare("buried", &CrossSection { coat: coat(80e-6), ..single(35e-6) }, 1.2e-3);
}
