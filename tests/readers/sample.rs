//! Boards and bundles the readers are tried on: one drawn by hand with voids, holes, lands and text, one drawn from a layout.

use std::collections::BTreeMap;

use num_complex::Complex64;
use stripwright::artwork::*;
use stripwright::base::{Nm, Point};
use stripwright::dimensions::{Dimension, Dimensions};
use stripwright::layout::{Layout, Node};
use stripwright::network::{Figures, Method, Response, Verdict};
use stripwright::order::{Limit, Order};
use stripwright::package::Bundle;

#[path = "../artwork/sample.rs"]
mod layouts;

pub use layouts::{degree_3, order};

/// Everything a bundle borrows.
pub struct Sample {
    pub dimensions: Dimensions,
    pub layout: Layout,
    pub board: Board,
    pub response: Response,
    pub figures: Figures,
}

impl Sample {
    pub fn bundle(&self) -> Bundle<'_> {
        Bundle {
            dimensions: &self.dimensions,
            layout: &self.layout,
            board: &self.board,
            response: &self.response,
            figures: &self.figures,
            findings: &[],
        }
    }

    /// A board drawn from a layout, as `make` does it.
    pub fn drawn(order: Order) -> Sample {
        let layout = degree_3();
        let (board, _) = board(&order, &layout).unwrap();
        Sample::of(order, layout, board)
    }

    /// A board drawn by hand.
    pub fn by_hand(order: Order) -> Sample {
        Sample::of(order, degree_3(), hand_board())
    }

    fn of(order: Order, layout: Layout, board: Board) -> Sample {
        let list = board
            .callouts
            .iter()
            .map(|callout| {
                let (dx, dy) = ((callout.to.x - callout.from.x).m(), (callout.to.y - callout.from.y).m());
                let value_m = dx.hypot(dy);
                Dimension {
                    name: callout.dimension.clone(),
                    value_m,
                    first_guess_m: value_m * 1.05,
                    serves: vec![("Z0e ohm".into(), 70.6)],
                    corrections_m: vec![("refined".into(), -0.05 * value_m)],
                }
            })
            .collect();
        Sample { dimensions: Dimensions { order, degree: 3, list }, layout, board, response: response(), figures: figures() }
    }
}

/// An invented third-order response around 3 GHz: enough shape for a plot, nothing to be trusted.
fn response() -> Response {
    let f_hz: Vec<f64> = (0..=400).map(|i| 2.0e9 + 5.0e6 * f64::from(i)).collect();
    let s = f_hz
        .iter()
        .map(|f| {
            let x = 15.0 * (f / 3.0e9 - 3.0e9 / f);
            // Chebyshev polynomial of degree 3, ripple 0.1 dB, with 1 dB of loss.
            let t3 = 4.0 * x.powi(3) - 3.0 * x;
            let through = 1.0 / (1.0 + 0.0233 * t3 * t3).sqrt();
            let (t, r) = (0.89 * through, 0.89 * (1.0 - through * through).sqrt());
            let turn = Complex64::from_polar(1.0, -2.0 * x.atan());
            [turn * r, turn * Complex64::new(0.0, t), turn * Complex64::new(0.0, t), turn * r]
        })
        .collect();
    Response { method: Method::Network, z0_ohm: [50.0, 50.0], f_hz, s }
}

fn figures() -> Figures {
    let verdict = |limit, from_hz: f64, to_hz: f64, found, at_hz, margin| Verdict {
        requirement: 0,
        limit,
        band_hz: [from_hz, to_hz],
        found,
        at_hz,
        margin,
    };
    let rejection = |db, below_center| Limit::RejectionAtLeast { db, below_center };
    Figures {
        center_hz: 3.0e9,
        center_loss_db: 1.01,
        edges_3db_hz: Some([2.87e9, 3.13e9]),
        ripple_edges_hz: Some([2.9e9, 3.1e9]),
        worst_loss_db: 1.15,
        return_loss_db: 16.4,
        group_delay_s: 3.1e-9,
        spurious_hz: Some(5.9e9),
        verdicts: vec![
            verdict(rejection(20.0, false), 3.4e9, 4.0e9, 31.2, 3.4e9, 11.2),
            verdict(Limit::InsertionLossAtMost(2.5), 2.9e9, 3.1e9, 1.15, 2.9e9, 1.35),
            verdict(Limit::ReturnLossAtLeast(14.0), 2.9e9, 3.1e9, 16.4, 3.0e9, 2.4),
            verdict(rejection(45.0, true), 2.4e9, 2.7e9, 24.6, 2.7e9, -20.4),
            verdict(Limit::GroupDelayVariationAtMost(2e-9), 2.95e9, 3.05e9, 0.4e-9, 2.95e9, 1.6e-9),
        ],
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
    let bottom = vec![shape(rectangle(0.25, 0.25, 29.75, 19.75), vec![rectangle(1.0, 17.0, 4.0, 19.0)], Role::Ground, "GND")];
    let opening = vec![shape(rectangle(2.0, 2.0, 28.0, 16.0), vec![], Role::Opening, "")];
    let via = |x: f64, y: f64, d: i64| Hole { at: mm(x, y), diameter: Nm(d), pad: Nm(2 * d), purpose: HoleUse::Via, net: "GND".into() };
    let hole = |x: f64, y: f64| Hole { at: mm(x, y), diameter: Nm(2_200_000), pad: Nm(0), purpose: HoleUse::Mounting, net: String::new() };
    let land = |x: f64, net: &str, refdes: &str| Land {
        at: mm(x, 14.6),
        size: [Nm(2_000_000), Nm(1_100_000)],
        net: net.into(),
        pin: (refdes.into(), "1".into()),
    };
    let port = |number: usize, x: f64, plane: f64| Port {
        number,
        edge: Node { left: mm(x, 15.2), right: mm(x, 14.0) },
        plane: Node { left: mm(plane, 15.2), right: mm(plane, 14.0) },
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
