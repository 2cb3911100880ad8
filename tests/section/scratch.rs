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
#[test]
#[ignore]
fn speed_pair() {
    let st = Stackup::new(&[LayerOf::isotropic(3.0, 0.0, 0.508e-3)], CopperOf { thickness_m: 35e-6, undercut_m: 0.0 }, None).unwrap();
    let mut best = f64::INFINITY;
    for i in 0..20000 {
        let t = Instant::now();
        std::hint::black_box(st.symmetric_pair_anew(1.2e-3 * (1.0 + 1e-6 * i as f64), 0.2e-3).unwrap());
        best = best.min(t.elapsed().as_secs_f64());
    }
    println!("pair best {:.1} us", best * 1e6);
}
#[test]
#[ignore]
fn speed_nine() {
    let layers = vec![LayerOf::isotropic(3.0, 0.0, 0.508e-3)];
    let copper = CopperOf { thickness_m: 35e-6, undercut_m: 0.0 };
    let n9 = CrossSection { layers, copper, strips: (0..9).map(|i| StripOf { width_m: (1.0 + 0.1 * i as f64) * 1e-3, gap_before_m: 0.5e-3 }).collect(), coat: None, housing: HousingOf::default() };
    let mut best = f64::INFINITY;
    for _ in 0..100 {
        let t0 = Instant::now();
        let g = solve(&n9, 1e-3).unwrap();
        std::hint::black_box(g);
        best = best.min(t0.elapsed().as_secs_f64());
    }
    println!("N9 {} ms", best * 1e3);
}
#[test]
#[ignore]
fn random_errors() {
    let mut seed = 12345u64;
    let mut next = || { seed = seed.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407); (seed >> 11) as f64 / (1u64 << 53) as f64 };
    let (mut sg, mut so) = (vec![], vec![]); let (mut e6, mut e8, mut r6, mut r8, mut k8, mut z) = (vec![], vec![], vec![], vec![], vec![], vec![]);
    for _ in 0..300 {
        let h = [0.127e-3, 0.254e-3, 0.508e-3, 0.762e-3, 1.575e-3][(next() * 5.0) as usize];
        let t: f64 = [18e-6, 35e-6, 70e-6][(next() * 3.0) as usize];
        let w = (h * 0.1 * 100f64.powf(next())).max(0.05e-3);
        let s = (h * 0.05 * 80f64.powf(next())).max(0.04e-3);
        let er = 2.2 + 8.0 * next();
        let under: f64 = if next() < 0.5 { 0.0 } else { (0.3 * t as f64).min(0.2 * w) };
        let layers = vec![LayerOf::isotropic(er, 0.0, h)];
        let copper = CopperOf { thickness_m: t, undercut_m: under };
        let sec = CrossSection::pair(layers.clone(), copper, w, s, HousingOf::default());
        let best = match solve(&sec, 1.2e-5) { Ok(b) => b, Err(p) => { println!("{p}"); continue } };
        let b = best.pair().unwrap();
        let st = Stackup::new(&layers, copper, None).unwrap();
        let p8 = st.symmetric_pair(w, s).unwrap();
        let s6 = solve(&sec, 0.9).unwrap();
        let p6 = s6.pair().unwrap();
        let err = |p: &Pair| [(p.even, b.even), (p.odd, b.odd)].iter().map(|(x, y)| (x.capacitance_f_per_m / y.capacitance_f_per_m - 1.0).abs().max((x.air_capacitance_f_per_m / y.air_capacitance_f_per_m - 1.0).abs())).fold(0.0, f64::max);
        e6.push(err(&p6)); e8.push(err(&p8)); r6.push(err(&p6) / p6.error_estimate); r8.push(err(&p8) / p8.error_estimate); sg.push((p8.even.air_capacitance_f_per_m / b.even.air_capacitance_f_per_m - 1.0)/1e-4); so.push((p8.odd.capacitance_f_per_m / b.odd.capacitance_f_per_m - 1.0)/(p8.error_estimate - 2e-6)*0.4);
        k8.push((p8.coupling() / b.coupling() - 1.0).abs());
        z.push((p8.even.z0_ohm() / b.even.z0_ohm() - 1.0).abs().max((p8.odd.z0_ohm() / b.odd.z0_ohm() - 1.0).abs()));
        if err(&p8) > 5e-4 || err(&p8) > p8.error_estimate { println!("h {h} t {t} w {w} s {s} er {er} u {under}: {:.2e} est {:.2e} ref est {:.2e}", err(&p8), p8.error_estimate, best.error_estimate); }
    }
    for (name, v) in [("signed even", &mut sg), ("signed odd per correction", &mut so), ("C 6/12", &mut e6), ("C 8/16", &mut e8), ("ratio6", &mut r6), ("ratio8", &mut r8), ("k", &mut k8), ("Z", &mut z)] {
        v.sort_by(|a, b| a.total_cmp(b));
        println!("{name}: min {:.2e} 5% {:.2e} median {:.2e} 95% {:.2e} max {:.2e}", v[0], v[v.len()/20], v[v.len() / 2], v[v.len() * 95 / 100], v[v.len() - 1]);
    }
}
#[test]
#[ignore]
fn loss_scratch() {
    for (w, s, lid, wall, h, t, under) in [(1.2e-3, None, None, None, 0.508e-3, 35e-6, 0.0), (1.2e-3, Some(0.2e-3), None, None, 0.508e-3, 35e-6, 0.0), (1.2e-3, Some(0.2e-3), Some(1e-3), None, 0.508e-3, 35e-6, 0.0), (0.2e-3, None, Some(1e-3), Some(0.3e-3), 0.2e-3, 35e-6, 0.0), (0.2e-3, None, None, Some(0.3e-3), 0.2e-3, 35e-6, 0.0), (1.2e-3, Some(0.2e-3), None, None, 0.508e-3, 35e-6, 10e-6)] {
        let sec = |dn: f64| {
            let layers = vec![LayerOf::isotropic(1.0, 0.0, h + 2.0 * dn)];
            let theta = (t as f64).atan2(under);
            let foot_shrink = dn / theta.sin() - dn * (1.0/theta.tan());
            // foot moved up by dn on a side that itself moved inward by dn along its normal
            let foot = dn / theta.sin() + dn / theta.tan();
            let _ = foot_shrink;
            let top = (w - 2.0 * under) - 2.0 * (dn / theta.sin() - dn / theta.tan());
            let w2 = w - 2.0 * foot;
            let copper = CopperOf { thickness_m: t - 2.0 * dn, undercut_m: 0.5 * (w2 - top) };
            let housing = HousingOf { lid_m: lid, wall_m: wall.map(|x: f64| x + dn + foot) };
            match s { None => CrossSection::single(layers, copper, w2, housing), Some(s) => CrossSection::pair(layers, copper, w2, s + 2.0 * foot, housing) }
        };
        let l = |dn: f64| { let v = solve(&sec(dn), 1.0e-5).or_else(|_| solve(&sec(dn), 3e-5)).unwrap(); match v.pair() { Some(p) => vec![p.even.inductance_h_per_m(), p.odd.inductance_h_per_m()], None => vec![v.single().unwrap().inductance_h_per_m()] } };
        let dn = 0.02 * t;
        let d = |dn: f64| l(dn).iter().zip(l(-dn)).map(|(a, b)| (a - b) / (2.0 * dn) / 1.25663706e-6).collect::<Vec<_>>();
        let (a, b) = (d(dn), d(dn / 2.0));
        let t0 = Instant::now();
        let got = loss(&sec(0.0)).unwrap();
        println!("{:?}", t0.elapsed());
        if std::env::var("N").is_ok() { for i in 0..got.len() { println!("{} {:.3}", i, got[i].shares.total_per_m()); } continue; } for (i, g) in got.iter().enumerate() {
            let r = b[i] + (b[i] - a[i]) / 3.0;
            println!("{w} {s:?} {lid:?} {wall:?}: {:.3} recession {:.3} ratio {:+.2e} est {:.1e} {:?}", g.shares.total_per_m(), r, g.shares.total_per_m() / r - 1.0, g.error_estimate, g.shares);
        }
    }
}
#[test]
#[ignore]
fn inverse_scratch() {
    for er in [2.2, 3.0, 6.15, 10.2] { for t in [0.0, 35e-6] {
        let st = Stackup::new(&[LayerOf::isotropic(er, 0.0, 0.508e-3)], CopperOf { thickness_m: t, undercut_m: 0.0 }, None).unwrap();
        for (e, o) in [(70.61, 39.24), (56.64, 44.77), (82.9367, 37.6092), (52.0, 48.0), (50.2, 49.8), (120.0, 60.0), (30.0, 22.0), (100.0, 95.0)] {
            let t0 = Instant::now();
            let r = st.pair_for(e, o, None);
            let el = t0.elapsed();
            let t1 = Instant::now();
            let warm = r.as_ref().ok().map(|&(w, s)| Stackup::pair_for(&st, e * 1.02, o * 1.01, Some((w, s))));
            println!("er {er} t {t} {e}/{o}: {:?} in {el:?}; warm {:?} {:?}", r.as_ref().map(|r| (r.0 / 0.508e-3, r.1 / 0.508e-3)).map_err(|p| &p.message), t1.elapsed(), warm.map(|w| w.is_ok()));
        }
        for z in [20.0, 50.0, 75.0, 100.0, 150.0] {
            let t0 = Instant::now();
            let r = st.width_for(z, None);
            println!("  z {z} {:?} {:?}", r.map(|w| w / 0.508e-3).map_err(|p| p.message), t0.elapsed());
        }
    } }
}
#[test]
#[ignore]
fn speed_array() {
    let st = Stackup::new(&[LayerOf::isotropic(3.0, 0.0, 0.508e-3)], CopperOf { thickness_m: 35e-6, undercut_m: 0.0 }, None).unwrap();
    let strips: Vec<_> = (0..9).map(|i| StripOf { width_m: (1.0 + 0.1 * i as f64) * 1e-3, gap_before_m: 0.5e-3 }).collect();
    let mut best = f64::INFINITY;
    for _ in 0..100 {
        let t0 = Instant::now();
        std::hint::black_box(st.array(&strips).unwrap());
        best = best.min(t0.elapsed().as_secs_f64());
    }
    println!("N9 array {} ms est {}", best * 1e3, st.array(&strips).unwrap().error_estimate);
}
#[test]
#[ignore]
fn coat_scratch() {
    for (w, s, er, h, t, u, lid, wall) in [(1.2e-3, 0.2e-3, 3.0, 0.508e-3, 35e-6, 0.0, None, None), (1.2e-3, 0.2e-3, 3.0, 0.508e-3, 35e-6, 10e-6, None, None), (0.3e-3, 0.15e-3, 4.2, 0.2e-3, 35e-6, 10e-6, Some(2e-3), Some(0.5e-3)), (1.2e-3, 0.2e-3, 3.0, 0.508e-3, 0.0, 0.0, None, None), (1.2e-3, 0.2e-3, 3.0, 0.508e-3, 1e-6, 0.0, None, None)] {
        for (cl, cc) in [(25e-6, 15e-6), (60e-6, 15e-6), (100e-6, 15e-6)] {
        let mut sec = CrossSection::pair(vec![LayerOf::isotropic(er, 0.0, h)], CopperOf { thickness_m: t, undercut_m: u }, w, s, HousingOf { lid_m: lid, wall_m: wall });
        let bare = solve(&sec, 1e-4).unwrap().pair().unwrap();
        sec.coat = Some(CoatOf { permittivity: 3.5, loss_tangent: 0.02, on_laminate_m: cl, on_copper_m: cc });
        let t0 = Instant::now();
        match solve(&sec, 1e-4) { Ok(c) => { let p = c.pair().unwrap(); println!("coat t {t} cl {cl} even ratio {:.5} odd {:.5} k {:.5} -> {:.5} est {:.1e} {:?}", p.even.eps_eff() / bare.even.eps_eff(), p.odd.eps_eff() / bare.odd.eps_eff(), bare.coupling(), p.coupling(), c.error_estimate, t0.elapsed()) }, Err(p) => println!("{p}") }
        }
    }
}
