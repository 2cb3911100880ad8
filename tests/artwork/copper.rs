//! Copper: one sound polygon for each conductor, and nothing touches.

use geo::{Area, Contains, Coord, Distance, Euclidean, LineString, Polygon, Validation};
use stripwright::artwork::shape::{Region, ring_faults};
use stripwright::artwork::{Board, Callout, Face, Layer, Role, Shape, compensated};
use stripwright::base::{Nm, Point};
use stripwright::layout::{Layout, Part};
use stripwright::order::{Compensation, LaunchShape, Mask, Order, TextOn};

use crate::sample;
use crate::sample::board;

/// Nanometres as f64 are exact up to 9 million metres, so `geo` judges the very corners.
fn polygon(shape: &Shape) -> Polygon<f64> {
    let ring = |ring: &Vec<Point>| LineString(ring.iter().map(|p| Coord { x: p.x.0 as f64, y: p.y.0 as f64 }).collect());
    Polygon::new(ring(&shape.outer), shape.voids.iter().map(ring).collect())
}

fn strips(board: &Board) -> Vec<&Shape> {
    board.layers[&Layer::Copper(1)].iter().filter(|s| s.role == Role::Circuit).collect()
}

fn made(order: &Order, layout: &Layout) -> Board {
    let (board, warnings) = board(order, layout).unwrap();
    assert_eq!(warnings, vec![], "a roomy board has nothing to warn of");
    board
}

/// Orders that differ in everything that moves copper.
fn variants() -> Vec<(&'static str, Order)> {
    let plain = sample::order();
    let mut level = sample::order();
    level.board.level = true;
    level.board.mask = Mask::ClearOfFilter;
    let mut etched = sample::order();
    etched.board.text = TextOn::Copper;
    etched.board.port_side = [stripwright::order::Side::Bottom, stripwright::order::Side::Top];
    let mut housed = sample::order();
    housed.housing = Some(stripwright::order::Housing { lid_m: Some(10e-3), inside_m: Some([72e-3, 30e-3]) });
    housed.board.mask = Mask::ClearOfFilter;
    let mut open = sample::order();
    open.board.launch.shape = LaunchShape::Open;
    vec![("plain", plain), ("level", level), ("etched", etched), ("housed", housed), ("open", open)]
}

#[test]
fn every_conductor_is_one_valid_polygon_with_its_own_net() {
    for (name, order) in variants() {
        let board = made(&order, &sample::degree_3());
        let nets: Vec<_> = strips(&board).iter().map(|s| s.net.as_str()).collect();
        assert_eq!(nets, ["PORT1", "RES1", "RES2", "RES3", "PORT2"], "{name}");
        for shape in board.layers.values().flatten() {
            assert!(polygon(shape).is_valid(), "{name}: geo calls a polygon of {:?} {} invalid", shape.role, shape.net);
            for ring in std::iter::once(&shape.outer).chain(&shape.voids) {
                assert_eq!(ring_faults(ring), vec![], "{name}: {:?} {}", shape.role, shape.net);
            }
        }
    }
}

#[test]
fn nothing_comes_nearer_than_the_smallest_gap() {
    for (name, order) in variants() {
        let board = made(&order, &sample::degree_3());
        let strips = strips(&board);
        let mut least = f64::INFINITY;
        for (i, one) in strips.iter().enumerate() {
            for other in &strips[i + 1..] {
                let judged = Euclidean.distance(&polygon(one), &polygon(other)) * 1e-9;
                let ours = Region::from_shape(one).closest_to(&Region::from_shape(other)).unwrap().distance_m;
                // Both are exact up to f64 rounding of nanometres.
                assert!((judged - ours).abs() < 1e-15, "{name}: {} to {}: {judged} {ours}", one.net, other.net);
                least = least.min(judged);
            }
        }
        // The drawn gap is 0.15 mm; a turn rounds each corner by half a nanometre at most.
        assert!((least - 0.15e-3).abs() < 2e-9, "{name}: {least}");
    }
}

#[test]
fn a_strip_centred_through_a_width_step_shorts_the_filter_and_is_seen() {
    // The known trap: 0.3 mm wider on both sides of one axis with a gap of 0.15 mm on each side closes the gap by its corner.
    let mut layout = sample::staircase(1900, &[1600, 2400, 2400, 1600], &[150, 600, 600, 150], 15_000);
    let wide =
        layout.parts.iter().position(|p| matches!(&p.part, Part::Lines { widths, .. } if widths.first() == Some(&Nm(2_400_000)))).unwrap();
    for node in [layout.parts[wide].nodes[0], layout.parts[wide].nodes[2]] {
        let down = |p: Point| p.shifted(Nm(0), Nm(-400_000));
        let mouth = layout.nodes[node];
        layout.nodes[node] = stripwright::layout::Node { left: down(mouth.left), right: down(mouth.right) };
    }
    let (board, _) = board(&sample::order(), &layout).unwrap();
    assert!(strips(&board).len() < board.expected_nets, "the feed and the first resonator have joined");
}

#[test]
fn areas_add_up() {
    // Strips of different nets do not overlap, and neighbours of one net share mouths only: the union's area is the sum over the parts.
    let layout = sample::degree_7();
    let mut order = sample::order();
    order.board.launch.shape = LaunchShape::Open;
    order.board.outline = false;
    let board = made(&order, &layout);
    let drawn: f64 = strips(&board).iter().map(|s| polygon(s).unsigned_area()).sum();
    let parts: f64 = layout
        .parts
        .iter()
        .map(|placed| match &placed.part {
            Part::Lines { widths, length, .. } => widths.iter().map(|w| w.0 as f64 * length.0 as f64).sum(),
            // The sample is a staircase of coupled pairs: every other part has no copper of its own here.
            _ => 0.0,
        })
        .sum();
    // Rectangles on whole nanometres: exact; the sum rounds in f64.
    assert!((drawn - parts).abs() < 1e-9 * parts, "{drawn} {parts}");
    // And our own area is that of geo.
    for shape in strips(&board) {
        let ours = Region::from_shape(shape).area_m2();
        assert!((ours - polygon(shape).unsigned_area() * 1e-18).abs() < 1e-12 * ours);
    }
}

#[test]
fn degree_7_has_nine_islands() {
    let board = made(&sample::order(), &sample::degree_7());
    assert_eq!(strips(&board).len(), 9);
    assert_eq!(board.expected_nets, 9);
}

#[test]
fn call_outs_measure_what_the_layout_says() {
    for (name, order) in variants() {
        let layout = sample::degree_3();
        let board = made(&order, &layout);
        let launch_gap = board.callouts.iter().find(|c| c.dimension == "launch 1 ground gap");
        // A feed's width, three dimensions for each of four sections, and the gap of the launch that serves one.
        assert_eq!(board.callouts.len(), 1 + 3 * 4 + usize::from(launch_gap.is_some()), "{name}");
        if let LaunchShape::EdgeCoax { ground_gap_m, .. } = order.board.launch.shape {
            let gap = launch_gap.unwrap();
            let long = ((gap.to.x - gap.from.x).m()).hypot((gap.to.y - gap.from.y).m());
            assert!((long - ground_gap_m).abs() < 2e-9, "{name}: {long}");
        }
        for placed in &layout.parts {
            let Part::Lines { widths, gaps, length } = &placed.part else { continue };
            for dimension in &placed.serves {
                let Callout { from, to, .. } = board.callouts.iter().find(|c| &c.dimension == dimension).unwrap();
                let long = ((to.x - from.x).m()).hypot((to.y - from.y).m());
                let due = if dimension.contains("width") {
                    widths[0]
                } else if dimension.contains("gap") {
                    gaps[0]
                } else {
                    *length
                };
                // Two corners, each rounded to 1 nm.
                assert!((long - due.m()).abs() < 2e-9, "{name}: {dimension} {long} {due:?}");
            }
        }
    }
}

#[test]
fn the_mask_is_open_over_the_filter_and_keeps_its_dam() {
    let mut order = sample::order();
    order.board.mask = Mask::ClearOfFilter;
    let board = made(&order, &sample::degree_3());
    let openings: Vec<Polygon<f64>> = board.layers[&Layer::Mask(Face::Top)].iter().map(polygon).collect();
    for strip in strips(&board).into_iter().filter(|s| s.net.starts_with("RES")) {
        assert!(openings.iter().any(|o| o.contains(&polygon(strip))), "{} is under mask", strip.net);
        // 2 mm is less than 3 h = 2.286 mm on 0.762 mm: at least 3 h all round, launches excepted.
        let grown = Region::from_shape(strip).offset(Nm(1_600_000));
        assert!(
            openings.iter().any(|o| grown
                .pieces
                .iter()
                .flat_map(|p| &p.outer)
                .all(|p| o.contains(&geo::Point::new(p.x.0 as f64, p.y.0 as f64))))
        );
    }
    for (i, one) in openings.iter().enumerate() {
        for other in &openings[i + 1..] {
            // Mitred corners may round by a nanometre.
            assert!(Euclidean.distance(one, other) >= 0.1e6 - 2.0, "two openings leave less than the dam of 0.1 mm");
        }
    }
    for land in &board.lands {
        let at = geo::Point::new(land.at.x.0 as f64, land.at.y.0 as f64);
        assert!(openings.iter().any(|o| o.contains(&at)), "land {:?} is under mask", land.pin);
    }
    assert!(
        !made(&sample::order(), &sample::degree_3()).layers.keys().any(|l| matches!(l, Layer::Mask(_))),
        "mask = none has no mask layer"
    );
}

#[test]
fn compensation_moves_every_edge_of_a_strip_by_its_amount() {
    let mut order = sample::order();
    order.shop.compensation = Compensation::InTheArtwork { per_edge_m: 20e-6 };
    let board = made(&order, &sample::degree_3());
    let artwork = compensated(&board, Nm(20_000));
    let (finished, grown) = (strips(&board), strips(&artwork));
    assert_eq!(finished.len(), grown.len());
    for (one, other) in finished.iter().zip(&grown) {
        let (a, b) = (Region::from_shape(one).bounds().unwrap(), Region::from_shape(other).bounds().unwrap());
        // Launches stop 0.1 mm before the edge, so that nothing is cut off; offsets are exact to 1 nm.
        for (moved, from) in [(a[0].x - b[0].x, "left"), (a[0].y - b[0].y, "below"), (b[1].x - a[1].x, "right"), (b[1].y - a[1].y, "above")]
        {
            assert!((moved.0 - 20_000).abs() <= 1, "{} {from}: {moved:?}", one.net);
        }
    }
    let gap = Euclidean.distance(&polygon(grown[0]), &polygon(grown[1]));
    assert!((gap - 110_000.0).abs() <= 2.0, "0.15 mm less twice 0.02 mm, not {gap} nm");
}

#[test]
fn ground_lies_under_everything_and_vias_within_ground() {
    for (name, order) in variants() {
        let board = made(&order, &sample::degree_3());
        let bottom: Vec<Polygon<f64>> = board.layers[&Layer::Copper(2)].iter().map(polygon).collect();
        assert_eq!(bottom.len(), 1, "{name}");
        for strip in strips(&board) {
            assert!(bottom[0].contains(&polygon(strip)) || order.board.launch.shape == LaunchShape::Open, "{name}: {}", strip.net);
        }
        let ground: Vec<Region> =
            board.layers[&Layer::Copper(1)].iter().filter(|s| s.role == Role::Ground).map(Region::from_shape).collect();
        for via in board.holes.iter().filter(|h| h.is_plated()) {
            let half = Nm(via.pad.0 / 2);
            let ends = [(half, Nm(0)), (-half, Nm(0)), (Nm(0), half), (Nm(0), -half)];
            let within = |g: &Region| ends.iter().all(|&(dx, dy)| g.contains(via.at.shifted(dx, dy)));
            assert!(ground.iter().any(within), "{name}: the pad of a via at {:?} leaves the ground copper", via.at);
        }
    }
}
