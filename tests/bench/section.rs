//! How fast is the cross-section, beside its limits and beside the slow, plain judge on the same case? And how accurate, over shape and permittivity?
//!
//! `cargo bench --bench section`; times are the best of many on one thread, in the build as it is by default.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, clippy::needless_range_loop, missing_docs)]

#[path = "../section/reference.rs"]
mod reference;

use std::hint::black_box;
use std::time::Instant;

use stripwright::line::section::{CopperOf, CrossSection, HousingOf, LayerOf, Stackup, StripOf, solve};
use stripwright::line::{Array, ArrayTarget, AsBuilt, StaticsModel, array_for};

const H: f64 = 0.508e-3;
const COPPER: CopperOf = CopperOf { thickness_m: 35e-6, undercut_m: 0.0 };

fn board() -> AsBuilt {
    AsBuilt {
        permittivity: 3.0,
        in_plane_permittivity: 3.0,
        loss_tangent: 0.001,
        thickness_m: H,
        copper_thickness_m: COPPER.thickness_m,
        undercut_m: COPPER.undercut_m,
        roughness_m: 0.0,
        ten_point_height_m: None,
        conductivity_s_per_m: 5.8e7,
        plating: None,
        hole_plating_m: 25e-6,
        lid_m: None,
        walls_m: None,
        coat: None,
        widening_m: 0.0,
        lossless: false,
        statics: StaticsModel::Numerical,
    }
}

fn best<T>(count: usize, mut run: impl FnMut(usize) -> T) -> f64 {
    let mut best = f64::INFINITY;
    for index in 0..count {
        let start = Instant::now();
        black_box(run(index));
        best = best.min(start.elapsed().as_secs_f64());
    }
    best
}

fn print(name: &str, seconds: f64, limit: Option<f64>) {
    match limit {
        Some(limit) => println!("{name:<58} {:>10.4} ms   limit {:>7.3} ms   ratio {:.2}", seconds * 1e3, limit * 1e3, seconds / limit),
        None => println!("{name:<58} {:>10.4} ms", seconds * 1e3),
    }
}

fn main() {
    let layers = vec![LayerOf::isotropic(3.0, 0.001, H)];
    print(
        "stackup: first pair, tables included",
        best(30, |_| Stackup::new(&layers, COPPER, None).unwrap().symmetric_pair(1.2e-3, 0.2e-3)),
        None,
    );
    let stackup = Stackup::new(&layers, COPPER, None).unwrap();
    let vary = |index: usize| 1.0 + 1e-6 * index as f64;
    print(
        "pair, thick: even and odd, dielectric and air",
        best(3000, |i| stackup.symmetric_pair_anew(1.2e-3 * vary(i), 0.2e-3)),
        Some(0.3e-3),
    );
    print("pair asked for again", best(3000, |_| stackup.symmetric_pair(1.2e-3, 0.2e-3)), None);
    let trapezoid = Stackup::new(&layers, CopperOf { thickness_m: 35e-6, undercut_m: 10e-6 }, Some(6.6e-3)).unwrap();
    print("pair, trapezoid under a lid", best(3000, |i| trapezoid.symmetric_pair_anew(1.2e-3 * vary(i), 0.2e-3)), Some(0.3e-3));
    let mut worst: f64 = 0.0;
    let mut sum = 0.0;
    let wanted = [(70.61, 39.24), (56.64, 44.77), (82.9367, 37.6092), (61.16, 42.3705), (58.1839, 43.8661), (52.0, 48.0)];
    for (even, odd) in wanted {
        let seconds = best(50, |i| stackup.pair_for(even * vary(i + 1), odd, None).unwrap());
        worst = worst.max(seconds);
        sum += seconds;
    }
    print("(Z0e, Z0o) to (w, s), no start given: mean of 6", sum / wanted.len() as f64, Some(1.5e-3));
    print("(Z0e, Z0o) to (w, s), no start given: slowest of 6", worst, Some(1.5e-3));
    let (w, s) = stackup.pair_for(70.61, 39.24, None).unwrap();
    print(
        "(Z0e, Z0o) to (w, s), from a neighbour 1 % away",
        best(50, |i| stackup.pair_for(71.3 * vary(i), 39.4, Some((w, s))).unwrap()),
        Some(1.5e-3),
    );
    print("Z0 to w", best(50, |i| stackup.width_for(50.0 * vary(i), None).unwrap()), None);
    let strips: Vec<StripOf> = (0..9).map(|i| StripOf { width_m: (1.0 + 0.1 * i as f64) * 1e-3, gap_before_m: 0.5e-3 }).collect();
    print("array of 9 unequal strips", best(60, |_| stackup.array(&strips).unwrap()), Some(30e-3));
    let built = board();
    let (widths, gaps): (Vec<f64>, Vec<f64>) = strips.iter().map(|strip| (strip.width_m, strip.gap_before_m)).unzip();
    let fresh = |i: usize| Array::new(&built.without_loss(), &widths.iter().map(|w| w * vary(i)).collect::<Vec<_>>(), &gaps[1..]);
    print("modes of 9 unequal strips, cold but for the tables", best(60, |i| fresh(i).at(2e9)), Some(30e-3));
    let array = fresh(0);
    print("modes of 9 unequal strips at another frequency", best(1000, |i| array.at(2e9 * vary(i))), None);
    print(
        "loss of 9 unequal strips, once a geometry",
        best(6, |i| Array::new(&built, &widths.iter().map(|w| w * vary(i + 100)).collect::<Vec<_>>(), &gaps[1..]).at(2e9)),
        None,
    );
    let target = ArrayTarget::of(&array);
    print(
        "N = 9: impedances and couplings to widths and gaps",
        best(5, |i| {
            let own_ohm = target.own_ohm.iter().map(|ohm| ohm * vary(i + 1)).collect();
            array_for(&built, &ArrayTarget { own_ohm, couplings: target.couplings.clone() }).unwrap()
        }),
        None,
    );
    print("loss of a pair", best(20, |i| stackup.pair_loss(1.2e-3 * vary(i), 0.2e-3).unwrap()), None);

    let section = CrossSection::pair(layers, COPPER, 1.2e-3, 0.2e-3, HousingOf::default());
    let fast = stackup.symmetric_pair(1.2e-3, 0.2e-3).unwrap();
    let mut difference: f64 = 0.0;
    let slow = best(1, |_| {
        for (plane, mode) in [(reference::Plane::Even, fast.even), (reference::Plane::Odd, fast.odd)] {
            for (with_dielectric, got) in [(true, mode.capacitance_f_per_m), (false, mode.air_capacitance_f_per_m)] {
                let judged = reference::capacitance(&section, plane, with_dielectric, 8.0) * 8.854_187_812_8e-12;
                difference = difference.max((got / judged - 1.0).abs());
            }
        }
    });
    print("the same pair by finite differences (the judge)", slow, None);
    println!("  largest difference of the four capacitances: {:.1e}", difference);

    println!("\nFast pair against grids of up to six times as many panels: largest error of C and C0 (even, odd), and of k, in %");
    println!("  er    t/h    | w/h 0.5           1                 2.5               8");
    for permittivity in [2.2, 10.2] {
        for thickness in [0.0, 0.01, 0.1, 0.5] {
            for gap in [0.05, 0.2, 1.0, 4.0] {
                let copper = CopperOf { thickness_m: thickness * H, undercut_m: 0.0 };
                let layers = vec![LayerOf::isotropic(permittivity, 0.0, H)];
                let stackup = Stackup::new(&layers, copper, None).unwrap();
                let mut line = format!("  {permittivity:<5} {thickness:<5} s/h {gap:<4}|");
                for width in [0.5, 1.0, 2.5, 8.0] {
                    let fast = stackup.symmetric_pair(width * H, gap * H).unwrap();
                    let section = CrossSection::pair(layers.clone(), copper, width * H, gap * H, HousingOf::default());
                    let Some(fine) =
                        [2e-5, 4e-5, 1e-4].into_iter().find_map(|accuracy| solve(&section, accuracy).ok()).and_then(|solved| solved.pair())
                    else {
                        line += "  not converged";
                        continue;
                    };
                    let off = |a: f64, b: f64| 100.0 * (a / b - 1.0).abs();
                    let c = [(fast.even, fine.even), (fast.odd, fine.odd)]
                        .into_iter()
                        .map(|(a, b)| {
                            off(a.capacitance_f_per_m, b.capacitance_f_per_m).max(off(a.air_capacitance_f_per_m, b.air_capacitance_f_per_m))
                        })
                        .fold(0.0, f64::max);
                    line += &format!("  C {c:.3} k {:.3}  ", off(fast.coupling(), fine.coupling()));
                }
                println!("{line}");
            }
        }
    }
}
