//! A hand-made edge-coupled layout and a plain order, so that the tests do not depend on synthesis.

use std::collections::BTreeMap;

use stripwright::artwork::Board;
use stripwright::base::{Nm, Outcome, Point};
use stripwright::layout::{Layout, Node, Part, Placed};
use stripwright::order::*;

/// A vertical mouth from `y` upwards.
fn mouth(x: i64, y: i64, width: i64) -> Node {
    Node { left: Point::new(x, y + width), right: Point::new(x, y) }
}

/// A stepped stagger: feed of 5 mm, one section for each width and gap (micrometres), feed of 5 mm. The narrower strip of a step keeps the
/// edge that faces the wider strip's gap.
pub fn staircase(feed_um: i64, widths_um: &[i64], gaps_um: &[i64], length_um: i64) -> Layout {
    let (um, n) = (1000, widths_um.len());
    let mut layout = Layout { nodes: vec![], parts: vec![], ports: vec![], turn_deg: 0.0, expected_nets: n + 1 };
    let add = |layout: &mut Layout, node: Node| {
        layout.nodes.push(node);
        layout.nodes.len() - 1
    };
    let (mut x, mut y, mut width) = (0, 0, feed_um * um);
    let port = add(&mut layout, mouth(x, y, width));
    layout.ports.push(port);
    layout.parts.push(Placed {
        part: Part::Launch { port: 1, shape: edge_coax().shape, run: Nm::ZERO },
        nodes: vec![port],
        serves: vec!["launch 1 ground gap".into()],
    });
    x += 5_000_000;
    let mut before = add(&mut layout, mouth(x, y, width));
    layout.parts.push(Placed {
        part: Part::Lines { widths: vec![Nm(width)], gaps: vec![], length: Nm(5_000_000) },
        nodes: vec![port, before],
        serves: vec!["feed width".into()],
    });
    for (k, (&w_um, &gap_um)) in widths_um.iter().zip(gaps_um).enumerate() {
        let (w, gap, length) = (w_um * um, gap_um * um, length_um * um);
        // Narrow after wide: tops in line; wide after narrow: bottoms in line.
        if w < width {
            y += width - w;
        }
        let upper = y + w + gap;
        let lower_near = add(&mut layout, mouth(x, y, w));
        let upper_near = add(&mut layout, mouth(x, upper, w));
        let lower_far = add(&mut layout, mouth(x + length, y, w));
        let upper_far = add(&mut layout, mouth(x + length, upper, w));
        layout.parts.push(Placed { part: Part::Step, nodes: vec![before, lower_near], serves: vec![] });
        layout.parts.push(Placed { part: Part::OpenEnd, nodes: vec![upper_near], serves: vec![] });
        layout.parts.push(Placed { part: Part::OpenEnd, nodes: vec![lower_far], serves: vec![] });
        let name = |what: &str| format!("section {} {what}", k + 1);
        layout.parts.push(Placed {
            part: Part::Lines { widths: vec![Nm(w); 2], gaps: vec![Nm(gap)], length: Nm(length) },
            nodes: vec![lower_near, upper_near, lower_far, upper_far],
            serves: vec![name("width"), name("gap"), name("length")],
        });
        (x, y, width, before) = (x + length, upper, w, upper_far);
    }
    let feed = feed_um * um;
    if feed < width {
        y += width - feed;
    }
    let start = add(&mut layout, mouth(x, y, feed));
    let end = add(&mut layout, mouth(x + 5_000_000, y, feed));
    layout.parts.push(Placed { part: Part::Step, nodes: vec![before, start], serves: vec![] });
    layout.parts.push(Placed {
        part: Part::Lines { widths: vec![Nm(feed)], gaps: vec![], length: Nm(5_000_000) },
        nodes: vec![start, end],
        serves: vec!["feed width".into()],
    });
    layout.parts.push(Placed { part: Part::Launch { port: 2, shape: edge_coax().shape, run: Nm::ZERO }, nodes: vec![end], serves: vec![] });
    layout.ports.push(end);
    layout
}

/// The board of a layout whose launches are of the order's class, as a family makes it.
pub fn board(order: &Order, layout: &Layout) -> Outcome<Board> {
    stripwright::artwork::board(order, &launched(order, layout))
}

/// The layout with launches of the order's class.
pub fn launched(order: &Order, layout: &Layout) -> Layout {
    let mut layout = layout.clone();
    for placed in &mut layout.parts {
        if let Part::Launch { shape, .. } = &mut placed.part {
            *shape = order.board.launch.shape;
        }
    }
    layout
}

/// Degree 3 near 3 GHz on the laminate of [`order`].
pub fn degree_3() -> Layout {
    staircase(1900, &[1600, 1800, 1800, 1600], &[150, 600, 600, 150], 15_000)
}

/// Degree 7.
pub fn degree_7() -> Layout {
    staircase(1900, &[1500, 1700, 1800, 1850, 1850, 1800, 1700, 1500], &[150, 500, 700, 750, 750, 700, 500, 150], 15_000)
}

pub fn edge_coax() -> Launch {
    Launch {
        class: "edge-coax-pin-1.27mm".into(),
        about: "edge-clamped coaxial connector, pin 1.27 mm".into(),
        shape: LaunchShape::EdgeCoax {
            pad_length_m: 4.0e-3,
            pad_width_m: 1.5e-3,
            pull_back_m: 0.1e-3,
            ground_gap_m: 0.5e-3,
            ground_length_m: 4.5e-3,
            ground_width_m: 3.5e-3,
            taper_length_m: 1.0e-3,
            via_hole_m: 0.4e-3,
            via_pad_m: 0.9e-3,
            via_pitch_m: 1.5e-3,
            board_thickness_m: [0.7e-3, 1.7e-3],
            up_to_hz: 12e9,
        },
    }
}

/// An invented order for a degree-3 band-pass from 2.9 to 3.1 GHz on 0.762 mm of a PTFE class.
pub fn order() -> Order {
    Order {
        name: "buoy-preselector".into(),
        title: "Receive preselector, mooring-buoy telemetry".into(),
        part_number: "SB-0031".into(),
        contact: "the RF desk".into(),
        paper: Paper::A4,
        acceptance_class: 2,
        revision: "A".into(),
        date: None,
        classes: None,
        filter: Filter {
            family: "edge-coupled".into(),
            response: ResponseShape::EqualRipple { ripple_db: 0.1 },
            band: Band::BandPass { from_hz: 2.9e9, to_hz: 3.1e9 },
            degree: Some(3),
            ports_ohm: [50.0, 50.0],
            own: BTreeMap::new(),
        },
        requirements: vec![Requirement {
            from_hz: 3.4e9,
            to_hz: 4.0e9,
            limits: vec![Limit::RejectionAtLeast { db: 20.0, below_center: false }],
        }],
        laminate: Laminate {
            class: "ceramic-ptfe-3.0".into(),
            about: "ceramic-filled PTFE".into(),
            kind: LaminateKind::Ptfe,
            permittivity: 3.0,
            permittivity_tolerance: 0.04,
            in_plane_permittivity: None,
            loss_tangent: 0.0013,
            thickness_m: 0.762e-3,
            thickness_tolerance_m: 0.038e-3,
            copper: Copper {
                base_m: 18e-6,
                plating_m: 25e-6,
                roughness_m: 1.8e-6,
                roughness_law: RoughnessLaw::HammerstadJensen,
                conductivity_s_per_m: 5.8e7,
            },
            finish: "immersion-silver".into(),
        },
        shop: Shop {
            class: "ordinary".into(),
            about: "ordinary board house".into(),
            line_m: 0.15e-3,
            gap_m: 0.15e-3,
            hole_m: 0.3e-3,
            annular_ring_m: 0.125e-3,
            hole_to_hole_m: 0.3e-3,
            edge_clearance_m: 0.25e-3,
            aspect_ratio: 6.0,
            grid_m: 1e-6,
            registration_m: 0.1e-3,
            line_tolerance_m: 0.02e-3,
            hole_tolerance_m: 0.1e-3,
            outline_tolerance_m: 0.15e-3,
            text_stroke_m: 0.15e-3,
            text_height_m: 1.0e-3,
            mask_dam_m: 0.1e-3,
            mask_clearance_m: 0.075e-3,
            undercut_m: 10e-6,
            compensation: Compensation::ByTheShop,
            panel_m: [0.4, 0.25],
        },
        board: BoardRequest {
            thickness_m: 0.848e-3,
            thickness_tolerance_m: 0.055_2e-3,
            outline_tolerance_m: 0.15e-3,
            grain: Grain::AlongPorts,
            ground: GroundOn::Layer2,
            below: vec![],
            slots: vec![],
            plated_edges: vec![],
            launch: edge_coax(),
            mask: Mask::None,
            size: BoardSize::Margin(8e-3),
            outline: true,
            port_side: [Side::Left, Side::Right],
            port_offset_m: 0.0,
            level: false,
            text: TextOn::Legend,
            mounting_holes: vec![],
            keep_outs: vec![],
        },
        housing: None,
        defaults: vec![],
    }
}
