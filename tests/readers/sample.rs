//! What the readers are tried on: the starter order as `make` makes it, and a board drawn by hand with all that a board can hold.

use std::collections::BTreeMap;

use stripwright::Made;
use stripwright::artwork::*;
use stripwright::base::{Nm, Point};
use stripwright::layout::Node;
use stripwright::order::{Order, Source};
use stripwright::package::Bundle;

/// The starter order.
pub fn order() -> Order {
    let source = Source::from_text("edge-coupled.toml", include_str!("../../templates/orders/edge-coupled.toml"));
    stripwright::order::read(&source, &stripwright::family::keys()).unwrap().0
}

/// All that a package is made from, without findings: what the rules think of it is tested elsewhere.
pub fn made(order: &Order) -> Made {
    let (mut made, _) = stripwright::make(order).unwrap();
    made.findings.clear();
    made
}

/// The same with the board drawn by hand.
pub fn made_by_hand(order: &Order) -> Made {
    Made { board: hand_board(), ..made(order) }
}

pub fn bundle(made: &Made) -> Bundle<'_> {
    Bundle {
        dimensions: &made.dimensions,
        layout: &made.layout,
        board: &made.board,
        response: &made.response,
        figures: &made.figures,
        findings: &made.findings,
    }
}

fn mm(x: f64, y: f64) -> Point {
    Point::from_m(x * 1e-3, y * 1e-3)
}

fn rectangle(x0: f64, y0: f64, x1: f64, y1: f64) -> Vec<Point> {
    vec![mm(x0, y0), mm(x1, y0), mm(x1, y1), mm(x0, y1)]
}

fn shape(outer: Vec<Point>, voids: Vec<Vec<Point>>, role: Role, net: &str) -> Shape {
    // Voids run clockwise.
    let voids = voids.into_iter().map(|mut void| {
        void.reverse();
        void
    });
    Shape { outer, voids: voids.collect(), role, net: net.into() }
}

/// 30 mm by 20 mm: a ground frame on the top with a void, a resonator within it, an inner ground ring with an island of its own, two
/// feeds, text, a bottom ground with a void round a mounting hole, vias of two sizes, two lands.
pub fn hand_board() -> Board {
    let top = vec![
        shape(rectangle(5.0, 9.0, 25.0, 11.0), vec![], Role::Circuit, "RES1"),
        shape(rectangle(0.0, 14.0, 10.0, 15.2), vec![], Role::Circuit, "PORT1"),
        shape(rectangle(20.0, 14.0, 30.0, 15.2), vec![], Role::Circuit, "PORT2"),
        shape(rectangle(3.0, 3.0, 27.0, 13.0), vec![rectangle(4.0, 6.5, 26.0, 12.0), rectangle(18.0, 3.5, 26.0, 6.0)], Role::Ground, "GND"),
        // Lies in the second void of the frame, and has a void with an island itself.
        shape(rectangle(18.5, 3.75, 25.5, 5.75), vec![rectangle(19.0, 4.0, 25.0, 5.5)], Role::Ground, "GND2"),
        shape(rectangle(20.0, 4.5, 24.0, 5.0), vec![], Role::Circuit, "RES2"),
        shape(vec![mm(12.0, 17.0), mm(14.0, 17.0), mm(13.0, 18.123456)], vec![], Role::Text, ""),
    ];
    let bottom = vec![shape(
        rectangle(0.25, 0.25, 29.75, 19.75),
        vec![rectangle(1.0, 16.5, 4.0, 19.5), rectangle(26.0, 16.5, 29.0, 19.5)],
        Role::Ground,
        "GND",
    )];
    let opening = vec![shape(rectangle(0.4, 2.0, 29.6, 16.0), vec![], Role::Opening, "")];
    let via = |x: f64, y: f64, d: i64| Hole { at: mm(x, y), diameter: Nm(d), pad: Nm(2 * d), purpose: HoleUse::Via, net: "GND".into() };
    let hole = |x: f64, y: f64| Hole { at: mm(x, y), diameter: Nm(2_200_000), pad: Nm(0), purpose: HoleUse::Mounting, net: String::new() };
    let land = |x: f64, net: &str, refdes: &str| Land {
        at: mm(x, 14.6),
        size: [Nm(2_000_000), Nm(1_100_000)],
        net: net.into(),
        pin: (refdes.into(), "1".into()),
        fits: Fits::Connector,
    };
    let port = |number: usize, x: f64, plane: f64| Port {
        number,
        edge: Node { left: mm(x, 15.2), right: mm(x, 14.0) },
        plane: Node { left: mm(plane, 15.2), right: mm(plane, 14.0) },
        run: Nm::ZERO,
        net: format!("PORT{number}"),
    };
    let callout = |name: &str, from: Point, to: Point| Callout { dimension: name.into(), from, to };
    Board {
        outline: shape(rectangle(0.0, 0.0, 30.0, 20.0), vec![], Role::Ground, ""),
        outline_drawn: true,
        layers: BTreeMap::from([
            (Layer::Copper(1), top),
            (Layer::Copper(2), bottom),
            (Layer::Mask(Face::Top), opening.clone()),
            (Layer::Mask(Face::Bottom), opening),
            (Layer::Legend(Face::Top), vec![shape(rectangle(14.0, 18.0, 16.0, 18.2), vec![], Role::Text, "")]),
        ]),
        holes: vec![via(3.5, 3.5, 300_000), via(3.5, 12.5, 300_000), via(26.5, 8.0, 400_000), hole(2.5, 18.0), hole(27.5, 18.0)],
        slots: vec![],
        plated_edges: vec![],
        lands: vec![land(1.5, "PORT1", "J1"), land(28.5, "PORT2", "J2")],
        ports: vec![port(1, 0.0, 3.0), port(2, 30.0, 27.0)],
        circuit: [mm(0.0, 4.5), mm(30.0, 15.2)],
        callouts: vec![
            callout("section 1 width", mm(15.0, 9.0), mm(15.0, 11.0)),
            callout("section 1 gap", mm(9.0, 11.0), mm(9.0, 14.0)),
            callout("section 1 length", mm(5.0, 9.0), mm(25.0, 9.0)),
        ],
        turn_deg: 0.0,
        expected_nets: 4,
    }
}
