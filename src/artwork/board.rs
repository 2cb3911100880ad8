//! The board: shapes per layer with role and net, holes, ports, call-outs, outline.

use std::collections::BTreeMap;
use std::fmt;

use crate::base::{Nm, Point};
use crate::layout::Layout;
use crate::layout::Node;
use crate::layout::Part;

/// The side of the board a layer lies on.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Face {
    /// Component side; strips.
    Top,
    /// Ground side; drawn as seen through the board from the top.
    Bottom,
}

/// A layer of the board.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Layer {
    /// Copper 1 (top) to n (bottom).
    Copper(u8),
    /// Solder mask; shapes are the openings.
    Mask(Face),
    /// Legend print.
    Legend(Face),
}

impl fmt::Display for Layer {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let side = |face: &Face| if *face == Face::Top { "top" } else { "bottom" };
        match self {
            Layer::Copper(number) => write!(f, "copper {number}"),
            Layer::Mask(face) => write!(f, "{} mask", side(face)),
            Layer::Legend(face) => write!(f, "{} legend", side(face)),
        }
    }
}

/// What a shape is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Role {
    /// Resonators and lines of the circuit, feeds included.
    Circuit,
    /// Signal pad and taper of a launch (joined to the circuit's shape by the union).
    Launch,
    /// Ground copper.
    Ground,
    /// Text.
    Text,
    /// Opening in the mask.
    Opening,
}

/// A polygon with voids, outer ring counter-clockwise, voids clockwise, no repeated first vertex.
#[derive(Clone, Debug, PartialEq)]
pub struct Shape {
    /// Outer ring.
    pub outer: Vec<Point>,
    /// Voids.
    pub voids: Vec<Vec<Point>>,
    /// What it is for.
    pub role: Role,
    /// Net name; empty for what is no conductor.
    pub net: String,
}

/// What a hole is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum HoleUse {
    /// Plated via to ground.
    Via,
    /// Unplated mounting hole.
    Mounting,
}

/// A round hole, finished size.
#[derive(Clone, Debug, PartialEq)]
pub struct Hole {
    /// Centre.
    pub at: Point,
    /// Finished diameter.
    pub diameter: Nm,
    /// Pad diameter on both faces; zero for none.
    pub pad: Nm,
    /// What for; vias are plated, mounting holes are not.
    pub purpose: HoleUse,
    /// Net; empty for none.
    pub net: String,
}

impl Hole {
    /// Whether the wall is plated.
    pub fn is_plated(&self) -> bool {
        self.purpose == HoleUse::Via
    }
}

/// A slot with round ends, finished size.
#[derive(Clone, Debug, PartialEq)]
pub struct Slot {
    /// Centre of one end.
    pub from: Point,
    /// Centre of the other end.
    pub to: Point,
    /// Finished width.
    pub width: Nm,
    /// Whether the wall is plated; it is then ground, on every copper layer.
    pub plated: bool,
}

/// A land where a connector or wire is soldered: a flash on top of the copper it lies in.
#[derive(Clone, Debug, PartialEq)]
pub struct Land {
    /// Centre.
    pub at: Point,
    /// Size along x and y.
    pub size: [Nm; 2],
    /// Net.
    pub net: String,
    /// Reference and pin: `J1`, `1`.
    pub pin: (String, String),
    /// What is soldered there.
    pub fits: Fits,
}

/// What a land is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Fits {
    /// A connector, wire or probe, soldered by hand: no paste.
    Connector,
    /// A chip part, placed by machine: solder paste is printed on its land.
    Chip,
}

/// A port: the plane at the connector and the reference plane of the response.
#[derive(Clone, Debug, PartialEq)]
pub struct Port {
    /// 1 or 2.
    pub number: usize,
    /// Where the connector touches.
    pub edge: Node,
    /// Where launch meets feed.
    pub plane: Node,
    /// Feed between reference plane and launch beyond the layout's: what the board's length adds.
    pub run: Nm,
    /// Net of the signal copper.
    pub net: String,
}

/// A dimension as it lies on the board.
#[derive(Clone, Debug, PartialEq)]
pub struct Callout {
    /// Name of the dimension.
    pub dimension: String,
    /// One end.
    pub from: Point,
    /// Other end.
    pub to: Point,
}

/// Everything that can be made, finished size, origin at the board's lower left corner.
#[derive(Clone, Debug, PartialEq)]
pub struct Board {
    /// Board outline (the routed edge).
    pub outline: Shape,
    /// Whether the outline is a real board edge.
    pub outline_drawn: bool,
    /// Shapes per layer: one per conductor and net, sorted.
    pub layers: BTreeMap<Layer, Vec<Shape>>,
    /// Holes, sorted.
    pub holes: Vec<Hole>,
    /// Slots.
    pub slots: Vec<Slot>,
    /// Plated stretches of the outline, from end to end; ground.
    pub plated_edges: Vec<[Point; 2]>,
    /// Solder lands on the top.
    pub lands: Vec<Land>,
    /// Ports.
    pub ports: Vec<Port>,
    /// Corners of the circuit's bounding box, launches not included.
    pub circuit: [Point; 2],
    /// Dimensions to control.
    pub callouts: Vec<Callout>,
    /// Turn of the circuit, degrees counter-clockwise.
    pub turn_deg: f64,
    /// Nets the family expects its circuit to form.
    pub expected_nets: usize,
}

impl Board {
    /// The layout with its feeds run on to the launches as drawn on this board, so that what is predicted is what is drawn.
    pub fn run_on(&self, layout: &Layout) -> Layout {
        let mut layout = layout.clone();
        for placed in &mut layout.parts {
            if let Part::Launch { port, run, .. } = &mut placed.part {
                *run = self.ports.iter().find(|p| p.number == *port).map_or(*run, |p| p.run);
            }
        }
        layout
    }
}
