#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]
#[path = "../tests/artwork/sample.rs"]
mod sample;
use std::fmt::Write;
use stripwright::artwork::*;
use stripwright::order::*;
fn svg(name: &str, b: &Board) {
    let (w, h) = (b.outline.outer[2].x.mm(), b.outline.outer[2].y.mm());
    let mut s = format!(
        "<svg xmlns='http://www.w3.org/2000/svg' viewBox='-1 -1 {} {}' width='{}' height='{}'><rect x='-1' y='-1' width='300' height='300' fill='white'/><g transform='translate(0,{h}) scale(1,-1)'>",
        w + 2.,
        h + 2.,
        (w + 2.) * 20.,
        (h + 2.) * 20.
    );
    let path = |sh: &Shape| {
        let mut d = String::new();
        for r in std::iter::once(&sh.outer).chain(&sh.voids) {
            for (i, p) in r.iter().enumerate() {
                write!(d, "{}{:.6} {:.6}", if i == 0 { "M" } else { "L" }, p.x.mm(), p.y.mm()).unwrap();
            }
            d.push('Z');
        }
        d
    };
    let mut put = |sh: &Shape, fill: &str| {
        writeln!(s, "<path d='{}' fill='{fill}' fill-rule='evenodd'/>", path(sh)).unwrap();
    };
    put(&b.outline, "#e8e0c8");
    for (layer, colour) in [
        (Layer::Copper(2), "#dcc9a0"),
        (Layer::Mask(Face::Top), "#b7e0b0"),
        (Layer::Copper(1), "#b5651d"),
        (Layer::Legend(Face::Top), "#000"),
    ] {
        for sh in b.layers.get(&layer).into_iter().flatten() {
            put(sh, if sh.role == Role::Ground && layer == Layer::Copper(1) { "#8a6d3b" } else { colour });
        }
    }
    for hole in &b.holes {
        writeln!(
            s,
            "<circle cx='{}' cy='{}' r='{}' fill='#fc8'/><circle cx='{}' cy='{}' r='{}' fill='#fff' stroke='#000' stroke-width='.05'/>",
            hole.at.x.mm(),
            hole.at.y.mm(),
            hole.pad.mm() / 2.,
            hole.at.x.mm(),
            hole.at.y.mm(),
            hole.diameter.mm() / 2.
        )
        .unwrap();
    }
    for l in &b.lands {
        writeln!(
            s,
            "<rect x='{}' y='{}' width='{}' height='{}' fill='none' stroke='#00f' stroke-width='.06'/>",
            l.at.x.mm() - l.size[0].mm() / 2.,
            l.at.y.mm() - l.size[1].mm() / 2.,
            l.size[0].mm(),
            l.size[1].mm()
        )
        .unwrap();
    }
    for c in &b.callouts {
        writeln!(
            s,
            "<line x1='{}' y1='{}' x2='{}' y2='{}' stroke='red' stroke-width='.08'/>",
            c.from.x.mm(),
            c.from.y.mm(),
            c.to.x.mm(),
            c.to.y.mm()
        )
        .unwrap();
    }
    for p in &b.ports {
        for (n, c) in [(p.edge, "#f0f"), (p.plane, "#0a0")] {
            writeln!(
                s,
                "<line x1='{}' y1='{}' x2='{}' y2='{}' stroke='{c}' stroke-width='.1'/>",
                n.left.x.mm(),
                n.left.y.mm(),
                n.right.x.mm(),
                n.right.y.mm()
            )
            .unwrap();
        }
    }
    s += "</g></svg>";
    std::fs::write(format!("/tmp/art/{name}.svg"), s).unwrap();
}
fn show(name: &str, o: &Order, l: &stripwright::layout::Layout) {
    let t = std::time::Instant::now();
    let r = board(o, l);
    let e = t.elapsed();
    match r {
        Ok((b, w)) => {
            println!(
                "{name}: {e:?} {} x {} mm, circuit {:?} turn {} holes {}",
                b.outline.outer[2].x.mm(),
                b.outline.outer[2].y.mm(),
                b.circuit,
                b.turn_deg,
                b.holes.len()
            );
            for w in w {
                println!("   {w}");
            }
            svg(name, &b);
        }
        Err(w) => {
            println!("{name}: refused {e:?}");
            for w in w {
                println!("   {w}");
            }
        }
    }
}
fn main() {
    std::fs::create_dir_all("/tmp/art").unwrap();
    let mut o = sample::order();
    show("plain", &o, &sample::degree_3());
    show("seven", &o, &sample::degree_7());
    o.board.level = true;
    o.board.mask = Mask::ClearOfFilter;
    show("level", &o, &sample::degree_3());
    o.board.level = false;
    o.board.text = TextOn::Copper;
    o.board.port_side = [Side::Bottom, Side::Top];
    o.board.mounting_holes = vec![MountingHole { at_m: [4e-3, 4e-3], diameter_m: 3.2e-3 }];
    show("upright", &o, &sample::degree_3());
    let mut o = sample::order();
    o.housing = Some(Housing { lid_m: Some(10e-3), inside_m: Some([72e-3, 30e-3]) });
    o.board.mask = Mask::ClearOfFilter;
    show("housing", &o, &sample::degree_3());
    let mut o = sample::order();
    o.board.outline = false;
    show("noedge", &o, &sample::degree_3());
    o.board.launch = Launch { class: "open".into(), about: String::new(), shape: LaunchShape::Open };
    show("open-inside", &o, &sample::degree_3());
    o.board.outline = true;
    o.board.size = BoardSize::Fixed([90e-3, 20e-3]);
    show("open", &o, &sample::degree_3());
    o.board.launch =
        Launch { class: "pads".into(), about: String::new(), shape: LaunchShape::Pads { pad_length_m: 3e-3, pad_width_m: 2.5e-3 } };
    o.board.size = BoardSize::Fixed([80e-3, 20e-3]);
    o.board.port_offset_m = 2e-3;
    show("pads", &o, &sample::degree_3());
    o.board.size = BoardSize::Fixed([70e-3, 20e-3]);
    show("small", &o, &sample::degree_3());
}
