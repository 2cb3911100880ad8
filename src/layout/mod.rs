//! The dimension set assembled into parts joined at nodes; neighbours share coordinates.

mod draft;

pub use draft::{Draft, Turn, Way};

use crate::base::Nm;
use crate::base::Point;
use crate::order::LaunchShape;

/// The mouth of a joint: the two corners of the strip's end, rounded once. Seen looking out of the first part that names it,
/// `left` is on the left hand.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Node {
    /// Left corner.
    pub left: Point,
    /// Right corner.
    pub right: Point,
}

impl Node {
    /// Width of the mouth.
    pub fn width(&self) -> Nm {
        let (dx, dy) = ((self.left.x - self.right.x).m(), (self.left.y - self.right.y).m());
        Nm::from_m(dx.hypot(dy))
    }

    /// Middle of the mouth, rounded to 1 nm.
    pub fn middle(&self) -> Point {
        Point { x: Nm((self.left.x.0 + self.right.x.0).div_euclid(2)), y: Nm((self.left.y.0 + self.right.y.0).div_euclid(2)) }
    }
}

/// A part of a layout. A closed set: every stage must answer for each.
#[derive(Clone, Debug, PartialEq)]
pub enum Part {
    /// N >= 1 parallel coupled strips of one length. Nodes: near ends 1..N, then far ends 1..N.
    Lines {
        /// Strip widths, in order across.
        widths: Vec<Nm>,
        /// Gaps between neighbours, N-1 of them.
        gaps: Vec<Nm>,
        /// Common length.
        length: Nm,
    },
    /// An open end; no length, its copper is the strip's. One node.
    OpenEnd,
    /// A step in width; no length. Two nodes, one mouth within the other's.
    Step,
    /// A gap across a strip: two nodes, the ends of two strips that face each other.
    Gap {
        /// Between the two ends.
        width: Nm,
    },
    /// A right-angled corner of one strip. Two nodes, the mouths where its arms begin.
    Bend(Corner),
    /// A strip that leaves another at a right angle; no length. Three nodes: the arms of the through strip, cut where the side strip's
    /// axis crosses it, and the side strip, which begins on the through strip's axis.
    Tee,
    /// Two strips that leave another on opposite sides; no length. Four nodes: the two through arms, then the two side strips.
    Cross,
    /// A strip's end grounded by plated holes side by side across it. One node, the line through the holes' centres.
    Via {
        /// Finished hole.
        diameter: Nm,
        /// Pad around each hole; the strip ends half a pad beyond the centres.
        pad: Nm,
        /// How many.
        count: usize,
        /// From hole to hole; zero for a single one.
        pitch: Nm,
    },
    /// A launch at the board's edge. One node: the reference plane where the feed begins.
    Launch {
        /// 1 or 2.
        port: usize,
        /// Its copper.
        shape: LaunchShape,
        /// Feed between the plane and the launch that a board longer than the circuit adds; zero until the board is known.
        run: Nm,
    },
}

/// The outside of a corner.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Corner {
    /// Left square; the mouths meet at the inner corner.
    Square,
    /// Cut off at 45 degrees by a triangle with legs of this length.
    Mitred {
        /// Leg of the triangle.
        cut: Nm,
    },
    /// An arc about the inner side.
    Rounded {
        /// Of the strip's axis.
        radius: Nm,
    },
}

/// A part with the nodes it joins.
#[derive(Clone, Debug, PartialEq)]
pub struct Placed {
    /// The part.
    pub part: Part,
    /// Node indices, in the part's own order.
    pub nodes: Vec<usize>,
    /// Names of the dimensions it is drawn from.
    pub serves: Vec<String>,
}

/// A circuit assembled from a dimension set, port axes along x, before any turn of the whole.
#[derive(Clone, Debug, PartialEq)]
pub struct Layout {
    /// Joints.
    pub nodes: Vec<Node>,
    /// Parts.
    pub parts: Vec<Placed>,
    /// Nodes of port 1, port 2: where launch meets feed; the reference planes of the response.
    pub ports: Vec<usize>,
    /// Turn of the whole circuit, applied last to the union, degrees counter-clockwise.
    pub turn_deg: f64,
    /// How many nets the copper of the circuit must form, ports included.
    pub expected_nets: usize,
}

impl Layout {
    /// The launch of a port (1 or 2) as drawn.
    pub fn launch(&self, port: usize) -> Option<&LaunchShape> {
        self.parts.iter().find_map(|placed| match &placed.part {
            Part::Launch { port: number, shape, .. } if *number == port => Some(shape),
            _ => None,
        })
    }
}

impl Corner {
    /// How far the mouths lie out from the inner corner, so that a long cut does not reach into the arms.
    pub fn shoulder(self, width: Nm) -> Nm {
        match self {
            Corner::Square => Nm::ZERO,
            Corner::Mitred { cut } => (cut - width).max(Nm::ZERO),
            Corner::Rounded { radius } => radius - Nm(width.0.div_euclid(2)),
        }
    }
}
