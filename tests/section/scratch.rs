use std::time::Instant;
use stripwright::line::section::*;
#[test]
fn scratch() {
    let er = |e: f64| vec![LayerOf::isotropic(e, 0.0, 1e-3)];
    let c = |t: f64| CopperOf { thickness_m: t * 1e-3, undercut_m: 0.0 };
    for (e, u, z, ee) in [
        (1.0, 1.0, 126.423868, 1.0),
        (3.0, 1.0, 83.668495, 2.2831489),
        (9.8, 1.0, 49.305817, 6.5744863),
        (10.8, 3.15, 23.724131, 8.1276961),
        (9.8, 8.0, 12.09679, 8.216286),
        (9.8, 0.1, 107.90249, 5.929941),
        (1.0, 20.0, 16.125318, 1.0),
    ] {
        let s = Stackup::new(&er(e), c(0.0), None).unwrap();
        let l = s.single(u * 1e-3).unwrap();
        let g = solve(&CrossSection::single(er(e), c(0.0), u * 1e-3, HousingOf::default()), 1e-5);
        println!(
            "er {e} u {u}: {:.6} {:+.2e} {:.6} {:+.2e} est {:.1e}; {:?}",
            l.mode.z0_ohm(),
            l.mode.z0_ohm() / z - 1.0,
            l.mode.eps_eff(),
            l.mode.eps_eff() / ee - 1.0,
            l.error_estimate,
            g.map(|g| (
                g.single().unwrap().z0_ohm() / z - 1.0,
                g.single().unwrap().eps_eff() / ee - 1.0,
                g.error_estimate,
                g.panels_per_width
            ))
            .map_err(|p| p.message)
        );
    }
    for (e, u, t, z, ee) in [
        (2.2, 0.5, 0.01, 125.040, 1.7247),
        (3.0, 2.0, 0.1, 55.832, 2.3454),
        (9.8, 1.0, 0.03, 48.565, 6.4523),
        (9.8, 4.0, 0.1, 20.614, 7.4711),
    ] {
        let s = Stackup::new(&er(e), c(t), None).unwrap();
        let l = s.single(u * 1e-3).unwrap();
        let g = solve(&CrossSection::single(er(e), c(t), u * 1e-3, HousingOf::default()), 1e-5);
        println!(
            "er {e} u {u} t {t}: {:.6} {:+.2e} {:.6} {:+.2e} est {:.1e}; {:?}",
            l.mode.z0_ohm(),
            l.mode.z0_ohm() / z - 1.0,
            l.mode.eps_eff(),
            l.mode.eps_eff() / ee - 1.0,
            l.error_estimate,
            g.map(|g| (g.single().unwrap().z0_ohm() / z - 1.0, g.error_estimate, g.panels_per_width)).map_err(|p| p.message)
        );
    }
    for (e, u, g, ze, zo, ee, eo) in [
        (3.0, 1.0, 0.1, 112.02685, 44.31681, 2.394118, 2.038696),
        (10.8, 0.9, 0.05, 67.28640, 23.20784, 7.644325, 6.029282),
        (9.8, 1.0, 1.0, 55.60242, 42.50524, 7.144227, 5.867323),
    ] {
        let s = Stackup::new(&er(e), c(0.0), None).unwrap();
        let p = s.symmetric_pair(u * 1e-3, g * 1e-3).unwrap();
        println!(
            "pair {:+.2e} {:+.2e} {:+.2e} {:+.2e} est {:.1e}",
            p.even.z0_ohm() / ze - 1.0,
            p.odd.z0_ohm() / zo - 1.0,
            p.even.eps_eff() / ee - 1.0,
            p.odd.eps_eff() / eo - 1.0,
            p.error_estimate
        );
    }
    for (w, s, lid) in [
        (1.2e-3, 0.13e-3, None),
        (1.2e-3, 0.66e-3, None),
        (1.2e-3, 0.13e-3, Some(1.5e-3)),
        (1.2e-3, 0.66e-3, Some(1.5e-3)),
        (1.2e-3, 0.66e-3, Some(6.6e-3)),
        (5e-3, 0.66e-3, None),
    ] {
        let layers = vec![LayerOf::isotropic(3.0, 0.0, 0.508e-3)];
        let copper = CopperOf { thickness_m: 35e-6, undercut_m: 0.0 };
        let t0 = Instant::now();
        let st = Stackup::new(&layers, copper, lid).unwrap();
        let p = st.symmetric_pair(w, s).unwrap();
        let cold = t0.elapsed();
        let mut best = f64::INFINITY;
        for i in 0..100 {
            let t = Instant::now();
            std::hint::black_box(st.symmetric_pair_anew(w * (1.0 + 1e-6 * i as f64), s).unwrap());
            best = best.min(t.elapsed().as_secs_f64());
        }
        let walls = CrossSection::pair(layers.clone(), copper, w, s, HousingOf { lid_m: lid, wall_m: Some(20e-3) });
        let near = CrossSection::pair(layers.clone(), copper, w, s, HousingOf { lid_m: lid, wall_m: Some(1e-3) });
        let g = solve(&CrossSection::pair(layers, copper, w, s, HousingOf { lid_m: lid, wall_m: None }), 3e-5).unwrap();
        let q = g.pair().unwrap();
        println!(
            "k {:.5} ref {:.5} Z {:.4} {:.4} ref {:.4} {:.4} est {:.1e} {:.1e} cold {:?} warm {:.1} us",
            p.coupling(),
            q.coupling(),
            p.even.z0_ohm(),
            p.odd.z0_ohm(),
            q.even.z0_ohm(),
            q.odd.z0_ohm(),
            p.error_estimate,
            g.error_estimate,
            cold,
            best * 1e6
        );
        for s in [walls, near] {
            let t0 = Instant::now();
            let g = solve(&s, 1e-4).unwrap();
            println!(
                "  walls {:?} {:?} {:?}",
                g.pair().map(|p| (p.even.z0_ohm(), p.odd.z0_ohm(), p.coupling())),
                g.error_estimate,
                t0.elapsed()
            );
        }
    }
    let layers = vec![LayerOf::isotropic(3.0, 0.0, 0.508e-3)];
    let copper = CopperOf { thickness_m: 35e-6, undercut_m: 10e-6 };
    let n9 = CrossSection {
        layers,
        copper,
        strips: (0..9).map(|i| StripOf { width_m: (1.0 + 0.1 * i as f64) * 1e-3, gap_before_m: 0.5e-3 }).collect(),
        coat: None,
        housing: HousingOf::default(),
    };
    for _ in 0..3 {
        let t0 = Instant::now();
        let g = solve(&n9, 1e-3).unwrap();
        println!("N9 {:?} {}", t0.elapsed(), g.error_estimate);
    }
}
