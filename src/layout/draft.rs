//! How a family writes down its layout: a draft that grows strip by strip, each mouth rounded once.

use super::Corner;
use super::Layout;
use super::Node;
use super::Part;
use super::Placed;
use crate::base::Nm;
use crate::base::Point;
use crate::order::LaunchShape;

/// A direction along an axis.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Way {
    /// Along x.
    Right,
    /// Along y.
    Up,
    /// Against x.
    Left,
    /// Against y.
    Down,
}

/// A right-angled turn, as seen by one who walks along the strip.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Turn {
    /// Counter-clockwise.
    Left,
    /// Clockwise.
    Right,
}

impl Way {
    /// Unit vector.
    pub fn unit(self) -> (i64, i64) {
        match self {
            Way::Right => (1, 0),
            Way::Up => (0, 1),
            Way::Left => (-1, 0),
            Way::Down => (0, -1),
        }
    }

    /// After a turn.
    pub fn turned(self, turn: Turn) -> Way {
        match (self, turn) {
            (Way::Right, Turn::Left) | (Way::Left, Turn::Right) => Way::Up,
            (Way::Up, Turn::Left) | (Way::Down, Turn::Right) => Way::Left,
            (Way::Left, Turn::Left) | (Way::Right, Turn::Right) => Way::Down,
            (Way::Down, Turn::Left) | (Way::Up, Turn::Right) => Way::Right,
        }
    }

    /// The other way.
    pub fn back(self) -> Way {
        self.turned(Turn::Left).turned(Turn::Left)
    }

    /// The point `distance` further on.
    pub fn on(self, from: Point, distance: Nm) -> Point {
        let (x, y) = self.unit();
        from.shifted(Nm(x * distance.0), Nm(y * distance.0))
    }
}

/// A layout that grows: nodes and parts so far.
#[derive(Clone, Debug, Default)]
pub struct Draft {
    nodes: Vec<Node>,
    parts: Vec<Placed>,
}

impl Draft {
    /// A mouth between two corners, `left` on the left hand of one who looks out of the part that ends there.
    pub fn between(&mut self, left: Point, right: Point) -> usize {
        self.nodes.push(Node { left, right });
        self.nodes.len() - 1
    }

    /// A mouth of a width about a point, seen looking `way`. An odd width stands 1 nm further to the left hand.
    pub fn mouth(&mut self, middle: Point, width: Nm, way: Way) -> usize {
        let half = Nm(width.0.div_euclid(2));
        let side = way.turned(Turn::Left);
        self.between(side.on(middle, width - half), side.back().on(middle, half))
    }

    /// The node.
    pub fn node(&self, index: usize) -> Node {
        self.nodes[index]
    }

    /// The same mouth as another node, for another arm of a junction.
    pub fn again(&mut self, index: usize) -> usize {
        self.nodes.push(self.nodes[index]);
        self.nodes.len() - 1
    }

    /// Adds a part.
    pub fn place(&mut self, part: Part, nodes: Vec<usize>, serves: Vec<String>) {
        self.parts.push(Placed { part, nodes, serves });
    }

    /// A single strip of the mouth's width from a node onwards; returns the node at its far end.
    pub fn strip(&mut self, from: usize, length: Nm, way: Way, serves: Vec<String>) -> usize {
        let Node { left, right } = self.nodes[from];
        let width = self.nodes[from].width();
        // The far mouth is seen looking on; the near one may have been named from either of its parts.
        let (x, y) = way.turned(Turn::Left).unit();
        let leftness = |p: Point| p.x.0 * x + p.y.0 * y;
        let (left, right) = if leftness(left) >= leftness(right) { (left, right) } else { (right, left) };
        let far = self.between(way.on(left, length), way.on(right, length));
        self.place(Part::Lines { widths: vec![width], gaps: vec![], length }, vec![from, far], serves);
        far
    }

    /// Goes on from a node with another width about the same axis; the same node where the widths are equal.
    pub fn step(&mut self, from: usize, width: Nm, way: Way) -> usize {
        if self.nodes[from].width() == width {
            return from;
        }
        let next = self.mouth(self.nodes[from].middle(), width, way);
        self.place(Part::Step, vec![from, next], vec![]);
        next
    }

    /// Ends a strip openly.
    pub fn open(&mut self, node: usize) {
        self.place(Part::OpenEnd, vec![node], vec![]);
    }

    /// Ends a strip on ground; the node lies on the holes' centres.
    pub fn ground(&mut self, node: usize, via: Part) {
        self.place(via, vec![node], vec![]);
    }

    /// A launch at a node.
    pub fn launch(&mut self, port: usize, node: usize, shape: LaunchShape, serves: Vec<String>) {
        self.place(Part::Launch { port, shape, run: Nm::ZERO }, vec![node], serves);
    }

    /// A tee at the node where the through strip arrives: returns the node where it goes on with `on_width`, and the side strip's.
    pub fn tee(&mut self, arriving: usize, on_width: Nm, side_width: Nm, way: Way, side: Way) -> (usize, usize) {
        let middle = self.nodes[arriving].middle();
        let on = self.mouth(middle, on_width, way.back());
        let out = self.mouth(middle, side_width, side.back());
        self.place(Part::Tee, vec![arriving, on, out], vec![]);
        (on, out)
    }

    /// A cross at the node where the through strip arrives, side strips to the left hand and the right: returns the node where it goes
    /// on, then the side strips'.
    pub fn cross(&mut self, arriving: usize, on_width: Nm, side_widths: [Nm; 2], way: Way) -> (usize, [usize; 2]) {
        let middle = self.nodes[arriving].middle();
        let on = self.mouth(middle, on_width, way.back());
        let sides = [way.turned(Turn::Left), way.turned(Turn::Right)];
        let out = [0, 1].map(|i| self.mouth(middle, side_widths[i], sides[i].back()));
        self.place(Part::Cross, vec![arriving, on, out[0], out[1]], vec![]);
        (on, out)
    }

    /// A corner at the node where a strip arrives going `way`: returns the node where it goes on and the way there.
    pub fn bend(&mut self, arriving: usize, way: Way, turn: Turn, corner: Corner) -> (usize, Way) {
        let width = self.nodes[arriving].width();
        let next_way = way.turned(turn);
        let middle = self.nodes[arriving].middle();
        let reach = Nm(width.0.div_euclid(2)) + corner.shoulder(width);
        let reach = if let Corner::Rounded { radius } = corner { radius } else { reach };
        let next = self.mouth(next_way.on(way.on(middle, reach), reach), width, next_way.back());
        self.place(Part::Bend(corner), vec![arriving, next], vec![]);
        (next, next_way)
    }

    /// The layout, ports at these nodes.
    pub fn finish(self, ports: [usize; 2], expected_nets: usize) -> Layout {
        Layout { nodes: self.nodes, parts: self.parts, ports: ports.to_vec(), turn_deg: 0.0, expected_nets }
    }
}
