//! Against published closed forms, inside the accuracy that each states.
//!
//! The printed tables of T. G. Bryant and J. A. Weiss ("Parameters of microstrip transmission lines and of coupled pairs of microstrip lines", IEEE Trans.
//! MTT-16, 1968) could not be had; they solve the sheet on a slab, for which `exact.rs` has more digits.

use stripwright::line::section::{
    CopperOf, CrossSection, HousingOf, LayerOf, Plating, Roughness, Stackup, Surface, Surfaces, loss, skin_depth_m, solve,
};

const H: f64 = 1e-3;
const SHEET: CopperOf = CopperOf { thickness_m: 0.0, undercut_m: 0.0 };

/// E. Hammerstad, O. Jensen, "Accurate models for microstrip computer-aided design", IEEE MTT-S Digest 1980: Z01(u) and eps_eff(u).
fn hammerstad_jensen(u: f64, permittivity: f64) -> (f64, f64) {
    let f = 6.0 + (2.0 * std::f64::consts::PI - 6.0) * (-(30.666 / u).powf(0.7528)).exp();
    let air = 376.730_313_668 / (2.0 * std::f64::consts::PI) * (f / u + (1.0 + 4.0 / (u * u)).sqrt()).ln();
    let a = 1.0 + ((u.powi(4) + (u / 52.0).powi(2)) / (u.powi(4) + 0.432)).ln() / 49.0 + (1.0 + (u / 18.1).powi(3)).ln() / 18.7;
    let b = 0.564 * ((permittivity - 0.9) / (permittivity + 3.0)).powf(0.053);
    (air, 0.5 * (permittivity + 1.0) + 0.5 * (permittivity - 1.0) * (1.0 + 10.0 / u).powf(-a * b))
}

#[test]
fn single_sheets_stay_within_hammerstad_and_jensens_accuracy() {
    for permittivity in [1.0, 2.2, 4.2, 9.8, 20.0] {
        let stackup = Stackup::new(&[LayerOf::isotropic(permittivity, 0.0, H)], SHEET, None).unwrap();
        for u in [0.05, 0.2, 0.7, 1.5, 4.0, 12.0, 40.0] {
            let mode = stackup.single(u * H).unwrap().mode;
            let (air, effective) = hammerstad_jensen(u, permittivity);
            let solved_air = mode.z0_ohm() * mode.eps_eff().sqrt();
            // Stated: 0.03 % up to u = 1000; and the fast path's 0.01 % of Z0.
            assert!((solved_air / air - 1.0).abs() < 4e-4, "u {u}: Z01 {solved_air} against {air}");
            // Stated: 0.2 %.
            assert!((mode.eps_eff() / effective - 1.0).abs() < 2.1e-3, "er {permittivity} u {u}: {} against {effective}", mode.eps_eff());
        }
    }
}

/// M. Kirschning, R. H. Jansen, "Accurate wide-range design equations for the frequency-dependent characteristic of parallel coupled
/// microstrip lines", IEEE Trans. MTT-32, 1984: static outputs of the formulas (permittivity, u, g, Z0e, Z0o, eps_eff even, odd).
#[test]
fn coupled_sheets_stay_within_kirschning_and_jansens_accuracy() {
    let table = [
        (2.2, 2.43, 0.175, 70.8759, 39.2458, 1.93715, 1.68961),
        (2.2, 2.98, 0.988, 56.7164, 44.7593, 1.95972, 1.76573),
        (3.0, 1.987, 0.208, 70.8698, 39.1886, 2.51883, 2.12156),
        (4.2, 1.57, 0.252, 70.7604, 39.1496, 3.35481, 2.75330),
        (6.15, 1.164, 0.309, 70.6675, 39.1614, 4.64978, 3.75834),
        (9.8, 0.76, 0.379, 70.5251, 39.1654, 6.94337, 5.60896),
        (9.8, 1.0, 0.2, 63.5211, 30.8182, 7.09185, 5.61936),
        (9.8, 1.0, 1.0, 55.7130, 42.4440, 7.13267, 5.87345),
        (2.2, 1.0, 0.5, 117.1698, 69.5618, 1.84827, 1.64665),
    ];
    for (permittivity, u, g, even, odd, effective_even, effective_odd) in table {
        let pair = Stackup::new(&[LayerOf::isotropic(permittivity, 0.0, H)], SHEET, None).unwrap().symmetric_pair(u * H, g * H).unwrap();
        // Stated: impedances 0.6 %, eps_eff 0.7 % even and 0.5 % odd; and 0.05 % of ours.
        for (name, got, formula, tolerance) in [
            ("Z0e", pair.even.z0_ohm(), even, 6.5e-3),
            ("Z0o", pair.odd.z0_ohm(), odd, 6.5e-3),
            ("even", pair.even.eps_eff(), effective_even, 7.5e-3),
            ("odd", pair.odd.eps_eff(), effective_odd, 5.5e-3),
        ] {
            assert!((got / formula - 1.0).abs() < tolerance, "er {permittivity} u {u} g {g} {name}: {got} against {formula}");
        }
    }
}

/// H. A. Wheeler, "Transmission-line properties of a strip on a dielectric sheet on a plane", IEEE Trans. MTT-25, 1977, gives the slope with thickness;
/// here the tabulated Z0 of thick strips in air, differenced: receding walls change w, t and h.
#[test]
fn conductor_loss_agrees_with_receded_walls_of_a_scaled_strip() {
    // Only sizes relative to h count: Z01(w/h, t/h). dL/dn by differences over the accurate solver on receded geometry, made here by hand.
    let (width, thickness, height) = (1.0 * H, 0.05 * H, H);
    let inductance = |step: f64| {
        let layers = vec![LayerOf::isotropic(1.0, 0.0, height + 2.0 * step)];
        let copper = CopperOf { thickness_m: thickness - 2.0 * step, undercut_m: 0.0 };
        solve(&CrossSection::single(layers, copper, width - 2.0 * step, HousingOf::default()), 1.2e-5).unwrap().inductance_h_per_m[0][0]
    };
    let step = 0.01 * thickness;
    let by_hand = (inductance(step) - inductance(-step)) / (2.0 * step) / 1.256_637_062_12e-6;
    let section = CrossSection::single(
        vec![LayerOf::isotropic(1.0, 0.0, height)],
        CopperOf { thickness_m: thickness, undercut_m: 0.0 },
        width,
        HousingOf::default(),
    );
    let shares = loss(&section).unwrap()[0].shares;
    assert!(
        (shares.total_per_m() / by_hand - 1.0).abs() < 1e-3,
        "{} against {by_hand}: the loss's own estimate is 1e-3",
        shares.total_per_m()
    );
    // All but the strips' contour is an integral of smooth charge: the ground alone must be the derivative with respect to the height.
    let with_height = |height: f64| {
        solve(&CrossSection::single(vec![LayerOf::isotropic(1.0, 0.0, height)], section.copper, width, HousingOf::default()), 1.2e-5)
            .unwrap()
            .inductance_h_per_m[0][0]
    };
    let step = 0.005 * height;
    let ground = (with_height(height + step) - with_height(height - step)) / (2.0 * step) / 1.256_637_062_12e-6;
    // Difference step 0.5 % (its square is 2.5e-5) and C to 1.2e-5 over a 1 % change of height.
    assert!((shares.ground_per_m / ground - 1.0).abs() < 4e-3, "{} against {ground}", shares.ground_per_m);
}

/// D. M. Pozar, "Microwave Engineering", stripline example: b 3.2 mm, permittivity 2.20, 50 ohm, t 0.01 mm, 10 GHz, Rs 0.026 ohm:
/// 0.122 Np/m. The book's formula is the incremental-inductance rule on an approximate Z0; it is good to some per cent.
#[test]
fn stripline_loss_agrees_with_the_handbook_example() {
    let (plates, thickness) = (3.2e-3, 0.01e-3);
    let section = CrossSection::single(
        vec![LayerOf::isotropic(1.0, 0.0, 0.5 * (plates - thickness))],
        CopperOf { thickness_m: thickness, undercut_m: 0.0 },
        2.66e-3,
        HousingOf { lid_m: Some(0.5 * (plates + thickness)), wall_m: None },
    );
    let z0_air = solve(&section, 1e-4).unwrap().single().unwrap().z0_ohm();
    let z0 = z0_air / 2.2_f64.sqrt();
    let shares = loss(&section).unwrap()[0].shares;
    let attenuation = 0.026 * shares.total_per_m() / (2.0 * z0);
    assert!((z0 / 50.0 - 1.0).abs() < 0.01, "{z0}");
    assert!((attenuation / 0.122 - 1.0).abs() < 0.05, "{attenuation}");
    // Symmetric about the middle.
    assert!((shares.ground_per_m / shares.lid_per_m - 1.0).abs() < 1e-3);
    assert!((shares.foot_per_m / shares.top_per_m - 1.0).abs() < 1e-3);
}

/// Skin depth and resistance of copper, 5.8e7 S/m (any handbook), and both roughness laws at figures worked out by hand from their formulas.
#[test]
fn surfaces_have_handbook_resistances() {
    for (frequency, depth, resistance) in [(1e9, 2.0898e-6, 8.2504e-3), (1e10, 0.6609e-6, 26.090e-3)] {
        assert!((skin_depth_m(frequency, 5.8e7, 1.0) / depth - 1.0).abs() < 1e-4);
        assert!((Surface::smooth(5.8e7).resistance_ohm(frequency) / resistance - 1.0).abs() < 1e-4);
    }
    let depth = skin_depth_m(1e10, 5.8e7, 1.0);
    for (rq, factor) in [(0.3e-6, 1.1788), (0.5e-6, 1.4301), (1.8e-6, 1.9389)] {
        assert!((Roughness::HammerstadJensen { rq_m: rq }.factor(depth) - factor).abs() < 2e-4);
    }
    for (rz, factor) in [(1.5e-6, 1.2077), (3e-6, 1.6424), (5e-6, 2.3022)] {
        assert!((Roughness::Cannonball { rz_m: rz }.factor(depth) - factor).abs() < 2e-4);
    }
    // A plating far thicker than its skin depth is all that the field sees; a vanishing one is not seen.
    let plated = |thickness_m: f64| Surface {
        plating: Some(Plating { conductivity_s_per_m: 1.4e7, permeability: 5.0, thickness_m }),
        ..Surface::smooth(5.8e7)
    };
    let alone = 1.0 / (1.4e7 * skin_depth_m(1e10, 1.4e7, 5.0));
    assert!((plated(20e-6).resistance_ohm(1e10) / alone - 1.0).abs() < 1e-9);
    assert!((plated(1e-12).resistance_ohm(1e10) / Surface::smooth(5.8e7).resistance_ohm(1e10) - 1.0).abs() < 1e-4);
}

/// Dielectric loss of a sheet on one layer against the closed form k0 er (ee-1) tan d / (2 sqrt(ee) (er-1)), which assumes that ee is linear in er.
#[test]
fn dielectric_loss_agrees_with_the_linear_closed_form() {
    let section = CrossSection::single(
        vec![LayerOf::isotropic(9.9, 1e-3, 0.5e-3)],
        CopperOf { thickness_m: 5e-6, undercut_m: 0.0 },
        0.483e-3,
        HousingOf::default(),
    );
    let mode = solve(&section, 1e-4).unwrap().single().unwrap();
    let attenuation = loss(&section).unwrap()[0].dielectric_np_per_m(1e10, mode.eps_eff());
    let (ee, er) = (mode.eps_eff(), 9.9);
    let closed = 2.0 * std::f64::consts::PI * 1e10 / 299_792_458.0 * er * (ee - 1.0) * 1e-3 / (2.0 * ee.sqrt() * (er - 1.0));
    // Handbook: 0.255 Np/m. The linear law is within 2 %: ee bends a little with er.
    assert!((attenuation / closed - 1.0).abs() < 0.02, "{attenuation} against {closed}");
    let _ = Surfaces::uniform(Surface::smooth(5.8e7));
}
