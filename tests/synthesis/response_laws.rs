//! What any response of a passive, reciprocal two-port must obey, on random orders.

use num_complex::Complex64;
use stripwright::dimensions::Dimensions;
use stripwright::family;
use stripwright::line::{AsBuilt, Book};
use stripwright::network::{Circuit, Planes, Response};

use crate::orders::{Case, Draw};

fn sets(count: usize, seed: u64) -> Vec<Dimensions> {
    let mut draw = Draw(seed);
    (0..count)
        .filter_map(|_| {
            let case = Case::random(&mut draw);
            let order = case.order();
            family::of(&order).unwrap().first_guess(&order, case.degree).ok().map(|(set, _)| set)
        })
        .collect()
}

fn respond(set: &Dimensions, built: AsBuilt, f_hz: &[f64]) -> Response {
    let layout = family::of(&set.order).unwrap().layout(set).unwrap();
    Circuit::new(&layout, &Book::new(built), set.order.filter.ports_ohm, Planes::Feed).unwrap().sweep(f_hz)
}

fn wide_sweep(set: &Dimensions) -> Vec<f64> {
    let [low, high] = stripwright::network::passband_hz(&set.order);
    (1..=300).map(|i| 0.5 * (low + high) * i as f64 / 90.0).collect()
}

#[test]
fn without_loss_all_power_comes_back_or_through() {
    for set in sets(12, 7) {
        let f = wide_sweep(&set);
        for (i, s) in respond(&set, AsBuilt::nominal(&set.order).without_loss(), &f).s.iter().enumerate() {
            // 1e-9: rounding of some thirty joined blocks in double precision, near resonances of high Q.
            assert!((s[0].norm_sqr() + s[1].norm_sqr() - 1.0).abs() < 1e-9, "{} Hz", f[i]);
            assert!((s[3].norm_sqr() + s[2].norm_sqr() - 1.0).abs() < 1e-9);
            assert!((s[0] * s[2].conj() + s[1] * s[3].conj()).norm() < 1e-9, "columns must be orthogonal");
        }
    }
}

#[test]
fn with_loss_the_response_is_passive_and_reciprocal() {
    for set in sets(12, 11) {
        let f = wide_sweep(&set);
        for s in respond(&set, AsBuilt::nominal(&set.order), &f).s {
            assert!((s[1] - s[2]).norm() < 1e-12);
            // Passive: I - S^H S has no negative eigenvalue; of a 2x2 by trace and determinant.
            let (a, d) = (1.0 - s[0].norm_sqr() - s[1].norm_sqr(), 1.0 - s[3].norm_sqr() - s[2].norm_sqr());
            let b: Complex64 = s[0].conj() * s[2] + s[1].conj() * s[3];
            assert!(a + d > 0.0 && a * d - b.norm_sqr() > -1e-12);
        }
    }
}

#[test]
fn a_symmetric_filter_answers_alike_from_both_sides() {
    for set in sets(12, 13).into_iter().filter(|s| s.order.filter.ports_ohm[0] == s.order.filter.ports_ohm[1]) {
        let f = wide_sweep(&set);
        for s in respond(&set, AsBuilt::nominal(&set.order), &f).s {
            assert!((s[0] - s[3]).norm() < 1e-9);
        }
    }
}

/// Maxwell's equations scale: all lengths halved, the lossless response is the same at twice the frequency.
#[test]
fn half_the_size_at_twice_the_frequency_is_the_same_response() {
    for set in sets(8, 17) {
        let mut small = set.clone();
        small.list.iter_mut().for_each(|d| d.value_m *= 0.5);
        let full = AsBuilt::nominal(&set.order).without_loss();
        let half = AsBuilt {
            thickness_m: 0.5 * full.thickness_m,
            copper_thickness_m: 0.5 * full.copper_thickness_m,
            undercut_m: 0.5 * full.undercut_m,
            ..full.clone()
        };
        let f = wide_sweep(&set);
        let doubled: Vec<f64> = f.iter().map(|f| 2.0 * f).collect();
        let (a, b) = (respond(&set, full, &f), respond(&small, half, &doubled));
        for (f, (a, b)) in f.iter().zip(a.s.iter().zip(&b.s)) {
            // Both are drawn in whole nanometres: half a nanometre on a gap of 50 um is 1e-5 of a coupling, and Q magnifies it near the edges.
            assert!((a[1] - b[1]).norm() < 2e-3, "{f} Hz: {} {}", a[1], b[1]);
        }
    }
}

/// Exactly where every section is a half wave long, plain nodal admittances have no value; the joins must give the limit.
#[test]
fn the_exact_half_wave_is_no_special_point() {
    let set = &sets(1, 19)[0];
    let built = AsBuilt::nominal(&set.order).without_loss();
    let [low, high] = stripwright::network::passband_hz(&set.order);
    for harmonic in 1..=6 {
        let exact = 0.5 * (low + high) * harmonic as f64;
        let f: Vec<f64> = [-1e-7, 0.0, 1e-7].iter().map(|d| exact * (1.0 + d)).collect();
        let s = respond(set, built.clone(), &f).s;
        assert!(s.iter().flatten().all(|v| v.is_finite()));
        assert!((s[1][1] - s[0][1]).norm() < 1e-4 && (s[1][1] - s[2][1]).norm() < 1e-4, "{s:?}");
    }
}
