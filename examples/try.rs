use std::collections::BTreeMap;
use stripwright::order::*;
fn order(from: f64, to: f64, n: usize, er: f64, h: f64, shape: ResponseShape, ports: [f64; 2]) -> Order {
    Order {
        name: "x".into(),
        title: "x".into(),
        part_number: None,
        contact: None,
        acceptance_class: 2,
        revision: "A".into(),
        date: None,
        classes: None,
        filter: Filter {
            family: "edge-coupled".into(),
            response: shape,
            band: Band::BandPass { from_hz: from, to_hz: to },
            degree: Some(n),
            ports_ohm: ports,
            own: BTreeMap::new(),
        },
        requirements: vec![],
        laminate: Laminate {
            class: "x".into(),
            about: "".into(),
            kind: LaminateKind::Ptfe,
            permittivity: er,
            permittivity_tolerance: 0.04,
            in_plane_permittivity: None,
            loss_tangent: 0.0013,
            thickness_m: h,
            thickness_tolerance_m: 0.03e-3,
            copper: Copper { base_m: 18e-6, plating_m: 17e-6, roughness_m: 1.8e-6, conductivity_s_per_m: 5.8e7 },
            finish: "bare".into(),
        },
        shop: Shop {
            class: "x".into(),
            about: "".into(),
            line_m: 0.1e-3,
            gap_m: 0.1e-3,
            hole_m: 0.3e-3,
            annular_ring_m: 0.15e-3,
            hole_to_hole_m: 0.3e-3,
            edge_clearance_m: 0.3e-3,
            aspect_ratio: 8.,
            grid_m: 1e-6,
            registration_m: 0.1e-3,
            line_tolerance_m: 0.02e-3,
            hole_tolerance_m: 0.1e-3,
            outline_tolerance_m: 0.1e-3,
            text_stroke_m: 0.15e-3,
            text_height_m: 1e-3,
            mask_dam_m: 0.1e-3,
            mask_clearance_m: 0.05e-3,
            undercut_m: 0.0,
            compensation: Compensation::ByTheShop,
            panel_m: [0.4, 0.3],
        },
        board: BoardRequest {
            launch: Launch { class: "open".into(), about: "".into(), shape: LaunchShape::Open },
            mask: Mask::None,
            size: BoardSize::Margin(8e-3),
            outline: true,
            port_side: [Side::Left, Side::Right],
            port_offset_m: 0.,
            level: false,
            text: TextOn::Legend,
            mounting_holes: vec![],
            keep_outs: vec![],
        },
        housing: None,
        defaults: vec![],
    }
}
fn main() {
    if std::env::args().nth(1).as_deref() == Some("sweep") {
        let o = order(3.4e9, 3.8e9, 5, 3.0, 0.762e-3, ResponseShape::EqualRipple { ripple_db: 0.1 }, [50., 50.]);
        let fam = stripwright::family::of(&o).unwrap();
        let (g, _) = fam.first_guess(&o, 5).unwrap();
        let layout = fam.layout(&g).unwrap();
        let f: Vec<f64> = (0..4000).map(|i| 1e9 + 2.5e6 * i as f64).collect();
        for _ in 0..5 {
            let book = stripwright::line::Book::new(stripwright::line::AsBuilt::nominal(&o));
            let t = std::time::Instant::now();
            let c = stripwright::network::Circuit::new(&layout, &book, [50., 50.], stripwright::network::Planes::Feed).unwrap();
            let t1 = t.elapsed();
            let r = c.sweep(&f);
            println!("plan {:?} sweep {:.3} us/point {}", t1, t.elapsed().as_secs_f64() * 1e6 / 4000., r.s[0][0]);
            let t = std::time::Instant::now();
            for x in &f[..400] {
                c.sweep(&[*x]);
            }
            println!("single {:.3} us/point", t.elapsed().as_secs_f64() * 1e6 / 400.);
        }
        return;
    }
    let mut s = 1u64;
    let mut r = || {
        s = s.wrapping_add(0x9E3779B97F4A7C15);
        let mut z = s;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58476D1CE4E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D049BB133111EB);
        ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64
    };
    let count: usize = std::env::args().nth(1).map_or(60, |a| a.parse().unwrap());
    let (mut met, mut refused, mut bad) = (0, 0, 0);
    for i in 0..count {
        let fc = 1e9 * 12f64.powf(r());
        let fbw = 0.03 + 0.17 * r();
        let n = 2 + (6.0 * r()) as usize;
        let er = 2.2 + 8.0 * r();
        let hs = [0.254e-3, 0.508e-3, 0.762e-3, 1.27e-3, 1.524e-3];
        let h = hs[(5.0 * r()) as usize];
        let shape =
            if r() < 0.25 { ResponseShape::MaximallyFlat } else { ResponseShape::EqualRipple { ripple_db: 0.01 * 50f64.powf(r()) } };
        let ports = if r() < 0.15 { [50., 75.] } else { [50., 50.] };
        let o = order(fc * (1. - fbw / 2.), fc * (1. + fbw / 2.), n, er, h, shape, ports);
        let fam = stripwright::family::of(&o).unwrap();
        let t = std::time::Instant::now();
        let head = format!("{i:3} fc {:.2} fbw {:.3} n {n} er {er:.1} h {:.3} {:?} {:?}", fc / 1e9, fbw, h * 1e3, shape, ports);
        match fam.first_guess(&o, n) {
            Err(p) => {
                refused += 1;
                println!("{head}: REFUSED {}", p[0])
            }
            Ok((g, _)) => match stripwright::refine::refine(fam, &g) {
                Ok(x) => {
                    met += 1;
                    println!(
                        "{head}: ok {:.3} -> {:.3} in {:.0} ms, min gap {:.3}",
                        x.before_snapping.worst_ratio,
                        x.after_snapping.worst_ratio,
                        t.elapsed().as_secs_f64() * 1e3,
                        g.list.iter().filter(|d| d.name.ends_with("gap")).map(|d| d.value_m).fold(1., f64::min) * 1e3
                    )
                }
                Err(p) => {
                    bad += 1;
                    println!(
                        "{head}: FAILED {} ({:.0} ms) gaps {:?}",
                        p[0],
                        t.elapsed().as_secs_f64() * 1e3,
                        g.list.iter().filter(|d| d.name.ends_with("gap")).map(|d| (d.value_m * 1e6).round()).collect::<Vec<_>>()
                    )
                }
            },
        }
    }
    println!("met {met} refused {refused} failed {bad}");
}
