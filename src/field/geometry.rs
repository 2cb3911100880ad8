//! What is to be solved, as drawn: layers, box, copper polygons, ports.

use super::stack::{Stack, Top};
use crate::artwork::shape::{Piece, Region};
use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::order::Side;

/// The copper's metal.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Conductor {
    /// Conductivity, S/m.
    pub conductivity_s_per_m: f64,
    /// Thickness.
    pub thickness_m: f64,
    /// Rq of the laminate side.
    pub roughness_m: f64,
}

/// Where a port is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum PortPlace {
    /// A strip that runs straight to a wall of the box.
    Wall {
        /// The wall.
        side: Side,
        /// A place along the wall within the strip.
        at: Nm,
        /// Distance of the reference plane from the wall.
        plane: Nm,
    },
    /// A gap of no length across a strip, between two points on its edges; positive current runs along the increasing axis.
    Gap {
        /// One end of the gap.
        from: Point,
        /// Other end, at the same x or the same y.
        to: Point,
    },
}

/// A port.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct GeometryPort {
    /// Where.
    pub place: PortPlace,
    /// Reference impedance, ohm.
    pub reference_ohm: f64,
}

/// Layers, box, copper and ports, origin at the box's lower left corner.
#[derive(Clone, Debug, PartialEq)]
pub struct Geometry {
    /// Layers and top.
    pub stack: Stack,
    /// Inside of the box.
    pub size: [Nm; 2],
    /// Copper.
    pub copper: Region,
    /// Its metal; none for a perfect conductor.
    pub conductor: Option<Conductor>,
    /// Ports, in order.
    pub ports: Vec<GeometryPort>,
}

impl Geometry {
    /// Inside of the box in metres.
    pub fn size_m(&self) -> [f64; 2] {
        self.size.map(Nm::m)
    }

    /// Everything wrong with the drawing that no mesh could mend.
    ///
    /// Codes: `copper-outside-box`, `copper-touches` (two pieces, or one piece with itself, meet at a single point), `port-on-no-copper`,
    /// `port-across-nothing`, `reference-plane-outside`.
    pub fn problems(&self) -> Vec<Problem> {
        let mut found = Vec::new();
        let inside = Region::rectangle(Point::new(0, 0), Point { x: self.size[0], y: self.size[1] });
        for piece in self.copper.difference(&inside).pieces {
            let place = piece.outer.first().map_or(Place::Whole, |&p| Place::Board(p));
            let message = "copper lies outside the box".to_string();
            found.push(Problem::error("copper-outside-box", place, message, "make the box larger, or cut the copper at its wall"));
        }
        let touching = |at: Point| {
            let message = "copper touches copper at a single point: joined or apart?".to_string();
            Problem::error("copper-touches", Place::Board(at), message, "draw a gap, or let the two overlap")
        };
        let mut corners: Vec<Point> = self.copper.rings().flatten().copied().collect();
        corners.sort();
        found.extend(corners.windows(2).filter(|w| w[0] == w[1]).map(|w| touching(w[0])));
        for (i, one) in self.copper.pieces.iter().enumerate() {
            for other in &self.copper.pieces[i + 1..] {
                if let Some(closest) = one.region().closest_to(&other.region())
                    && closest.distance_m <= 0.0
                {
                    found.push(touching(closest.middle()));
                }
            }
        }
        for (number, port) in (1..).zip(&self.ports) {
            found.extend(self.port_problem(number, port));
        }
        found
    }

    fn port_problem(&self, number: usize, port: &GeometryPort) -> Option<Problem> {
        let no_copper = |at: Point| {
            let message = format!("port {number} lies on no copper");
            Problem::error("port-on-no-copper", Place::Board(at), message, "move the port onto a strip")
        };
        match port.place {
            PortPlace::Wall { side, at, plane } => {
                let point = self.at_wall(side, at, Nm::ZERO);
                if !self.copper.contains(point) {
                    return Some(no_copper(point));
                }
                let room = if matches!(side, Side::Left | Side::Right) { self.size[0] } else { self.size[1] };
                (plane <= Nm::ZERO || plane >= room).then(|| {
                    let message =
                        format!("port {number}: the reference plane lies {} mm from the wall of a box {} mm long", plane.mm(), room.mm());
                    Problem::error("reference-plane-outside", Place::Board(point), message, "put it within the box, in the straight feed")
                })
            }
            PortPlace::Gap { from, to } => {
                if (from.x == to.x) == (from.y == to.y) {
                    let message =
                        format!("port {number} runs from ({}, {}) to ({}, {}) mm", from.x.mm(), from.y.mm(), to.x.mm(), to.y.mm());
                    let help = "give two points on the two edges of a strip, with the same x or the same y";
                    return Some(Problem::error("port-across-nothing", Place::Board(from), message, help));
                }
                let middle = Point { x: Nm((from.x.0 + to.x.0) / 2), y: Nm((from.y.0 + to.y.0) / 2) };
                (!self.copper.contains(middle)).then(|| no_copper(middle))
            }
        }
    }

    /// The point at `along` on a wall, `inwards` from it.
    pub fn at_wall(&self, side: Side, along: Nm, inwards: Nm) -> Point {
        match side {
            Side::Left => Point { x: inwards, y: along },
            Side::Right => Point { x: self.size[0] - inwards, y: along },
            Side::Bottom => Point { x: along, y: inwards },
            Side::Top => Point { x: along, y: self.size[1] - inwards },
        }
    }

    /// The piece of copper at a point.
    pub fn piece_at(&self, at: Point) -> Option<usize> {
        self.copper.pieces.iter().position(|piece: &Piece| piece.contains(at))
    }

    /// Lowest frequency at which a mode of the box without a lid begins to leave; the response is no rational function across it.
    ///
    /// A wave along the box between its side walls, in the layer that goes on without end.
    pub fn first_open_cutoff_hz(&self) -> Option<f64> {
        let top = self.stack.above.last().filter(|_| self.stack.top == Top::Open)?;
        let longest = self.size_m()[0].max(self.size_m()[1]);
        Some(crate::line::C_M_PER_S / (2.0 * longest * top.permittivity.sqrt()))
    }

    /// Every cut-off of an open box between two frequencies.
    pub fn open_cutoffs_hz(&self, from_hz: f64, to_hz: f64) -> Vec<f64> {
        let Some(top) = self.stack.above.last().filter(|_| self.stack.top == Top::Open) else { return Vec::new() };
        let [a, b] = self.size_m();
        let scale = crate::line::C_M_PER_S / (2.0 * top.permittivity.sqrt());
        let most = |length: f64| (to_hz * length / scale).floor() as usize;
        let mut found: Vec<f64> = (0..=most(a))
            .flat_map(|m| (0..=most(b)).map(move |n| (m, n)))
            .filter(|&mode| mode != (0, 0))
            .map(|(m, n)| scale * (m as f64 / a).hypot(n as f64 / b))
            .filter(|f| (from_hz..=to_hz).contains(f))
            .collect();
        found.sort_by(f64::total_cmp);
        found
    }
}
