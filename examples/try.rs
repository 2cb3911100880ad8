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
fn svg(b: &stripwright::artwork::Board) -> String {
    use stripwright::artwork::*;
    let w = b.outline.outer.iter().map(|p| p.x.mm()).fold(0., f64::max);
    let h = b.outline.outer.iter().map(|p| p.y.mm()).fold(0., f64::max);
    let mut o = format!(
        "<svg xmlns='http://www.w3.org/2000/svg' width='{}' height='{}' viewBox='0 0 {w} {h}'><rect width='{w}' height='{h}' fill='#eee'/>",
        w * 30.,
        h * 30.
    );
    let path = |s: &Shape| {
        let mut d = String::new();
        for r in std::iter::once(&s.outer).chain(&s.voids) {
            for (i, p) in r.iter().enumerate() {
                d += &format!("{}{} {} ", if i == 0 { "M" } else { "L" }, p.x.mm(), h - p.y.mm());
            }
            d += "Z ";
        }
        d
    };
    for (l, shapes) in &b.layers {
        if *l == Layer::Copper(2) {
            continue;
        }
        for s in shapes {
            let c = match (l, s.role) {
                (Layer::Copper(_), Role::Ground) => "#888",
                (Layer::Copper(_), _) => "#c73",
                (Layer::Legend(_), _) => "#06c",
                _ => "none",
            };
            o += &format!(
                "<path d='{}' fill='{c}' fill-rule='evenodd' stroke='{}' stroke-width='0.03'/>",
                path(s),
                if matches!(l, Layer::Mask(_)) { "#0a0" } else { "none" }
            );
        }
    }
    for x in &b.holes {
        o += &format!("<circle cx='{}' cy='{}' r='{}' fill='#fff'/>", x.at.x.mm(), h - x.at.y.mm(), x.diameter.mm() / 2.);
    }
    o + "</svg>"
}
fn main() {
    if std::env::args().nth(1).as_deref() == Some("draw") {
        let mut o = order(3.4e9, 3.8e9, 4, 3.0, 0.762e-3, ResponseShape::EqualRipple { ripple_db: 0.1 }, [50., 50.]);
        o.title = "Receive preselector, mooring-buoy telemetry".into();
        o.name = "buoy-preselector".into();
        o.board.level = std::env::args().nth(2).is_some();
        o.board.launch = Launch {
            class: "c".into(),
            about: "".into(),
            shape: LaunchShape::EdgeCoax {
                pad_length_m: 4e-3,
                pad_width_m: 1.27e-3,
                pull_back_m: 0.1e-3,
                ground_gap_m: 0.5e-3,
                ground_length_m: 4e-3,
                ground_width_m: 3.5e-3,
                taper_length_m: 1e-3,
                via_hole_m: 0.4e-3,
                via_pad_m: 0.8e-3,
                via_pitch_m: 1.2e-3,
                board_thickness_m: [0.5e-3, 1.8e-3],
                up_to_hz: 12e9,
            },
        };
        let t = std::time::Instant::now();
        let (made, chosen) = stripwright::make(&o).unwrap();
        println!("{:?}", t.elapsed());
        for f in &made.findings {
            println!("{f}");
        }
        println!("{:#?}", made.figures);
        println!("{:?} {:?}", chosen.refined.before_snapping, chosen.refined.after_snapping);
        for d in &made.dimensions.list {
            println!("{} {:.4} {:.4} {:?}", d.name, d.value_m * 1e3, d.first_guess_m * 1e3, d.corrections_m);
        }
        std::fs::write("/tmp/b.svg", svg(&made.board)).unwrap();
        return;
    }
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
