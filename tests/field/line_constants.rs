use stripwright::field::Split;
use stripwright::field::{Axis, Calibration, Feed, Patch, Solver, Source, Structure};
use stripwright::field::{Dielectric, Stack, Top};

pub fn layer(permittivity: f64, thickness_mm: f64) -> Dielectric {
    Dielectric { permittivity, loss_tangent: 0.0, thickness_m: thickness_mm * 1e-3 }
}

#[test]
fn microstrip() {
    let (w, b) = (1.13, 20.0);
    let stack = Stack { below: vec![layer(3.5, 0.508)], above: vec![layer(1.0, 12.0)], top: Top::Lid };
    for n in [4usize, 8, 16] {
        let widths: Vec<f64> = (0..n)
            .map(|i| {
                let x = (i as f64 + 0.5) / n as f64;
                (std::f64::consts::PI * x).sin().max(0.3)
            })
            .collect();
        let total: f64 = widths.iter().sum();
        let mut lines = vec![(b - w) / 2.0];
        for v in &widths {
            lines.push(lines.last().unwrap() + v / total * w);
        }
        let k = lines.len() - 1;
        let (d0, d1) = (0.125 * (lines[1] - lines[0]), 0.125 * (lines[k] - lines[k - 1]));
        lines[0] -= d0;
        lines[k] += d1;
        let feed = Feed {
            across_m: lines.iter().map(|y| y * 1e-3).collect(),
            along_m: (0..=12).map(|i| i as f64 * 1e-3).collect(),
            box_across_m: b * 1e-3,
        };
        let t = std::time::Instant::now();
        let c = Calibration::new(&feed, &stack, None, 2e9, Split::default()).unwrap();
        let t1 = t.elapsed();
        let p = c.unchecked(1e9).unwrap();
        for refl in [false] {
            let across = 0..feed.across_m.len() - 1;
            let last = feed.along_m.len() - 1;
            let st = Structure {
                stack: stack.clone(),
                size_m: [0.012, 0.02],
                patches: vec![Patch::full(feed.along_m.clone(), feed.across_m.clone())],
                sources: vec![
                    Source { patch: 0, axis: Axis::X, line: 0, across: across.clone(), reversed: false },
                    Source { patch: 0, axis: Axis::X, line: last, across, reversed: true },
                ],
                sheet: None,
            };
            for split in [Split::default(), Split { layer_decay: 12.0, gaussian: 4.5 }] {
                let s = Solver::new(st.clone(), 2e9, split).unwrap();
                println!("{refl} N {} Y {:.6?}", s.count(), s.admittance(1e9).unwrap());
                let (re, _) = s.matrix(1e9);
                let n = s.count();
                println!("diag {:.6e} {:.6e} {:.6e} {:.6e} {:.6e}", re[0], re[1], re[n + 1], re[n * n - 1], re[3 * n + 2]);
            }
        }
        println!(
            "n {n} N {} eps {:.5} Z {:.4} residual {:.1e} prep {t1:?} solve {:?}",
            c.count(),
            p.eps_eff(1e9),
            p.impedance_ohm,
            p.residual,
            t.elapsed() - t1
        );
    }
}
