//! A drawn board as a geometry: launches cut off at the reference planes, the rest as drawn.

use super::geometry::{Conductor, Geometry, GeometryPort, PortPlace};
use super::stack::{Dielectric, Stack, Top};
use crate::artwork::Board;
use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::shape::{Region, rectangle};
use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::line::AsBuilt;
use crate::line::Strip;
use crate::line::width_for_impedance;
use crate::order::Order;
use crate::order::Side;

/// Where an order names no housing: walls this many substrate heights from the copper and a lid this many above it. Together they move the effective
/// permittivity of a 50 ohm line by less than 0.1 % (`tests/field`).
pub const FAR_WALL_HEIGHTS: f64 = 24.0;
/// See [`FAR_WALL_HEIGHTS`].
pub const FAR_LID_HEIGHTS: f64 = 30.0;

/// A board's geometry, and what was done to get it.
#[derive(Clone, Debug, PartialEq)]
pub struct BoardGeometry {
    /// What is solved; its reference planes are the board's.
    pub geometry: Geometry,
    /// In words: housing, planes, thickness.
    pub notes: Vec<String>,
}

/// The geometry of a board as ordered.
///
/// The feeds go on straight from the reference planes to walls half a box width away. The copper is thin; each edge is moved so that the feed has the
/// impedance of the thick strip (an isolated edge's correction, at gaps too).
///
/// # Errors
/// `via-not-solved`: plated holes within the circuit; `port-direction`: a feed along no axis; `board-without-copper`.
pub fn from_board(order: &Order, board: &Board) -> Result<BoardGeometry, Vec<Problem>> {
    let one = |problem| Err(vec![problem]);
    let built = AsBuilt::nominal(order);
    let back = (-board.turn_deg).to_radians();
    let (sine, cosine) = back.sin_cos();
    let level = |p: Point| {
        if board.turn_deg.abs() < f64::MIN_POSITIVE {
            return p;
        }
        Point::from_m(cosine * p.x.m() - sine * p.y.m(), sine * p.x.m() + cosine * p.y.m())
    };
    let [low, high] = board.circuit;
    let within = |p: Point| p.x >= low.x && p.x <= high.x && p.y >= low.y && p.y <= high.y;
    if let Some(hole) = board.holes.iter().find(|hole| hole.is_plated() && within(hole.at)) {
        let message = "a plated hole lies within the circuit; vias are not solved".to_string();
        return one(Problem::error("via-not-solved", Place::Board(hole.at), message, "use the network model for this family"));
    }
    let shapes = board.layers.get(&Layer::Copper(1)).map_or(&[][..], Vec::as_slice);
    let circuit = shapes.iter().filter(|shape| matches!(shape.role, Role::Circuit | Role::Launch));
    let copper = circuit.fold(Region::default(), |all, shape| all.union(&Region::from_shape(shape))).mapped(level);
    let Some(bounds) = copper.bounds() else {
        return one(Problem::error("board-without-copper", Place::Whole, "the board has no circuit copper", "draw a circuit"));
    };
    // Where each port is cut, and the way out.
    let mut cuts = Vec::new();
    for port in &board.ports {
        let [left, right, edge] = [level(port.plane.left), level(port.plane.right), level(port.edge.middle())];
        let middle = level(port.plane.middle());
        let upright = (left.x - right.x).abs() <= Nm(2);
        let flat = (left.y - right.y).abs() <= Nm(2);
        let side = match (upright, flat) {
            (true, false) if edge.x <= middle.x => Side::Left,
            (true, false) => Side::Right,
            (false, true) if edge.y <= middle.y => Side::Bottom,
            (false, true) => Side::Top,
            _ => {
                let message = format!("port {}: the feed runs along no axis at its reference plane", port.number);
                return one(Problem::error("port-direction", Place::Board(port.plane.middle()), message, "use the network model"));
            }
        };
        cuts.push((side, left, right));
    }
    let height_m = built.thickness_m;
    let far = Nm::from_m(FAR_WALL_HEIGHTS * height_m);
    let lid_m = built.lid_m.unwrap_or(FAR_LID_HEIGHTS * height_m);
    // Copper between the planes, its bounds, and the box around them across the feeds.
    let mut kept = copper;
    let huge = Nm(4 * (bounds[1].x - bounds[0].x + bounds[1].y - bounds[0].y + Nm(1)).0);
    for &(side, left, _) in &cuts {
        let (x, y) = (left.x, left.y);
        let (a, b) = match side {
            Side::Left => (Point { x: x - huge, y: y - huge }, Point { x, y: y + huge }),
            Side::Right => (Point { x, y: y - huge }, Point { x: x + huge, y: y + huge }),
            Side::Bottom => (Point { x: x - huge, y: y - huge }, Point { x: x + huge, y }),
            Side::Top => (Point { x: x - huge, y }, Point { x: x + huge, y: y + huge }),
        };
        kept = kept.difference(&Region::rectangle(a, b));
    }
    let Some(inner) = kept.bounds() else {
        return one(Problem::error("board-without-copper", Place::Whole, "no copper lies between the reference planes", "draw a circuit"));
    };
    let fed = |side: Side| cuts.iter().any(|cut| cut.0 == side);
    let inside = order.housing.and_then(|housing| housing.inside_m);
    // The ordered walls stand about the middle of the board; they count on the sides without ports.
    let outline = Region::from_shape(&board.outline).mapped(level).bounds().unwrap_or(bounds);
    let walls = |axis: usize| -> [Nm; 2] {
        let of = |p: Point| if axis == 0 { p.x } else { p.y };
        match inside {
            Some(inside) => {
                let middle = Nm((of(outline[0]).0 + of(outline[1]).0) / 2);
                let half = Nm::from_m(0.5 * inside[axis]);
                [middle - half, middle + half]
            }
            None => [of(inner[0]) - far, of(inner[1]) + far],
        }
    };
    let mut box_x = walls(0);
    let mut box_y = walls(1);
    // A feed long enough for the evanescent modes of the box to die out.
    let across = if fed(Side::Left) || fed(Side::Right) { box_y[1] - box_y[0] } else { box_x[1] - box_x[0] };
    let run = Nm::from_m((0.5 * across.m()).max(0.5 * lid_m));
    let mut feeds = Vec::new();
    for &(side, left, right) in &cuts {
        let (a, b) = match side {
            Side::Left | Side::Right => (left.y.min(right.y), left.y.max(right.y)),
            Side::Bottom | Side::Top => (left.x.min(right.x), left.x.max(right.x)),
        };
        match side {
            Side::Left => {
                box_x[0] = left.x - run;
                feeds.push(rectangle(Point { x: box_x[0], y: a }, Point { x: left.x, y: b }));
            }
            Side::Right => {
                box_x[1] = left.x + run;
                feeds.push(rectangle(Point { x: left.x, y: a }, Point { x: box_x[1], y: b }));
            }
            Side::Bottom => {
                box_y[0] = left.y - run;
                feeds.push(rectangle(Point { x: a, y: box_y[0] }, Point { x: b, y: left.y }));
            }
            Side::Top => {
                box_y[1] = left.y + run;
                feeds.push(rectangle(Point { x: a, y: left.y }, Point { x: b, y: box_y[1] }));
            }
        }
    }
    let edge_m = edge_shift_m(&built, cuts.first().map_or(height_m, |(_, l, r)| (l.x - r.x).m().hypot((l.y - r.y).m())));
    let corner = Point { x: box_x[0], y: box_y[0] };
    let size = [box_x[1] - box_x[0], box_y[1] - box_y[0]];
    let whole = Region::rectangle(corner, Point { x: box_x[1], y: box_y[1] });
    let copper = kept.union(&Region::union_of(&feeds)).offset(Nm::from_m(edge_m)).intersection(&whole);
    let ports = cuts
        .iter()
        .zip(order.filter.ports_ohm)
        .map(|(&(side, left, right), reference_ohm)| {
            let at = match side {
                Side::Left | Side::Right => Nm((left.y.0 + right.y.0) / 2) - corner.y,
                Side::Bottom | Side::Top => Nm((left.x.0 + right.x.0) / 2) - corner.x,
            };
            GeometryPort { place: PortPlace::Wall { side, at, plane: run }, reference_ohm }
        })
        .collect();
    let geometry = Geometry {
        stack: Stack {
            below: vec![Dielectric { permittivity: built.permittivity, loss_tangent: built.loss_tangent, thickness_m: height_m }],
            above: vec![Dielectric { permittivity: 1.0, loss_tangent: 0.0, thickness_m: lid_m }],
            top: Top::Lid,
        },
        size,
        copper: copper.mapped(|p| p.shifted(-corner.x, -corner.y)),
        conductor: Some(Conductor {
            conductivity_s_per_m: built.conductivity_s_per_m,
            thickness_m: built.copper_thickness_m,
            roughness_m: built.roughness_m,
        }),
        ports,
    };
    let housing = match (inside, built.lid_m) {
        (None, None) => format!(
            "open board: walls {:.2} mm from the copper and a lid {:.2} mm above it move eps_eff by less than 0.1 %",
            far.mm(),
            lid_m * 1e3
        ),
        _ => format!("housing as ordered across the feeds ({:.2} mm), lid {:.2} mm", across.mm(), lid_m * 1e3),
    };
    let notes = vec![
        housing,
        format!("launches cut at the reference planes; feeds go on {:.2} mm to the wall and are calibrated out", run.mm()),
        format!(
            "copper {:.0} um thick as a thin sheet with every edge moved out by {:.1} um",
            built.copper_thickness_m * 1e6,
            edge_m * 1e6
        ),
    ];
    Ok(BoardGeometry { geometry, notes })
}

/// How far out the edge of a thin strip must lie for it to have the impedance of the thick one; zero where none is found.
fn edge_shift_m(built: &AsBuilt, width_m: f64) -> f64 {
    let thin = AsBuilt { copper_thickness_m: 0.0, undercut_m: 0.0, widening_m: 0.0, ..built.clone() };
    let thick = Strip::new(built, width_m).static_z0_ohm();
    width_for_impedance(&thin, thick, 0.0).map_or(0.0, |found| 0.5 * (found - width_m))
}
