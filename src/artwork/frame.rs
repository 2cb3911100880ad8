//! How the circuit lies on the board: the turn of a level staircase, the quarter turns for the port sides, the shift to the board's corner.

use crate::artwork::shape::Ring;
use crate::base::Nm;
use crate::base::Point;
use crate::layout::Node;
use crate::order::Side;

/// The turn of the whole circuit, about the layout's origin; rounds each corner once.
#[derive(Clone, Copy, Debug)]
pub struct Turn {
    cos: f64,
    sin: f64,
    level: bool,
}

impl Turn {
    /// Counter-clockwise by an angle; exactly nothing for zero.
    pub fn by(angle_rad: f64) -> Turn {
        Turn { cos: angle_rad.cos(), sin: angle_rad.sin(), level: angle_rad == 0.0 }
    }

    /// The point turned.
    pub fn point(&self, p: Point) -> Point {
        if self.level {
            return p;
        }
        let (x, y) = (p.x.0 as f64, p.y.0 as f64);
        Point::new((x * self.cos - y * self.sin).round() as i64, (x * self.sin + y * self.cos).round() as i64)
    }

    /// The mouth turned.
    pub fn node(&self, node: Node) -> Node {
        Node { left: self.point(node.left), right: self.point(node.right) }
    }
}

/// Quarter turns counter-clockwise and a shift, both exact.
#[derive(Clone, Copy, Debug)]
pub struct Seat {
    quarters: u8,
    shift: Point,
}

/// Quarter turns that bring port 1 from the left to its side; `None` when the sides are not opposite.
pub fn quarters(sides: [Side; 2]) -> Option<u8> {
    match sides {
        [Side::Left, Side::Right] => Some(0),
        [Side::Bottom, Side::Top] => Some(1),
        [Side::Right, Side::Left] => Some(2),
        [Side::Top, Side::Bottom] => Some(3),
        _ => None,
    }
}

impl Seat {
    /// Turns the box from `low` to `high` and brings its lower left corner to the origin.
    pub fn new(quarters: u8, low: Point, high: Point) -> Seat {
        let bare = Seat { quarters: quarters % 4, shift: Point::default() };
        let (a, b) = (bare.point(low), bare.point(high));
        Seat { shift: Point { x: -a.x.min(b.x), y: -a.y.min(b.y) }, ..bare }
    }

    /// Whether length and width change places.
    pub fn is_upright(&self) -> bool {
        self.quarters % 2 == 1
    }

    /// The point on the board.
    pub fn point(&self, p: Point) -> Point {
        let turned = match self.quarters {
            0 => p,
            1 => Point { x: -p.y, y: p.x },
            2 => Point { x: -p.x, y: -p.y },
            _ => Point { x: p.y, y: -p.x },
        };
        turned.shifted(self.shift.x, self.shift.y)
    }

    /// The mouth on the board.
    pub fn node(&self, node: Node) -> Node {
        Node { left: self.point(node.left), right: self.point(node.right) }
    }

    /// The ring on the board.
    pub fn ring(&self, ring: &Ring) -> Ring {
        ring.iter().map(|&p| self.point(p)).collect()
    }

    /// Sizes along x and y on the board.
    pub fn size(&self, size: [Nm; 2]) -> [Nm; 2] {
        if self.is_upright() { [size[1], size[0]] } else { size }
    }
}
