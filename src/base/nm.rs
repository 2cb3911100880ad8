//! Whole nanometres: the only unit in which anything is drawn.

use std::ops::{Add, Neg, Sub};

/// A length or coordinate in whole nanometres.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Nm(pub i64);

impl Nm {
    /// Zero length.
    pub const ZERO: Nm = Nm(0);

    /// Rounds a length in metres to the nearest nanometre.
    pub fn from_m(metres: f64) -> Nm {
        Nm((metres * 1e9).round() as i64)
    }

    /// The same length in metres.
    pub fn m(self) -> f64 {
        // A division is rounded once: 762 000 nm is the same double as "0.762 mm" in a file; a product with 1e-9 is not always.
        self.0 as f64 / 1e9
    }

    /// The same length in millimetres.
    pub fn mm(self) -> f64 {
        self.0 as f64 / 1e6
    }

    /// The nearest multiple of `grid`; ties go away from zero. A `grid` of zero or less leaves the value alone.
    pub fn snapped(self, grid: Nm) -> Nm {
        if grid.0 <= 0 {
            return self;
        }
        let half = grid.0 / 2;
        let steps = if self.0 >= 0 { (self.0 + half) / grid.0 } else { (self.0 - half) / grid.0 };
        Nm(steps * grid.0)
    }

    /// The absolute value.
    pub fn abs(self) -> Nm {
        Nm(self.0.abs())
    }
}

impl Add for Nm {
    type Output = Nm;
    fn add(self, other: Nm) -> Nm {
        Nm(self.0 + other.0)
    }
}

impl Sub for Nm {
    type Output = Nm;
    fn sub(self, other: Nm) -> Nm {
        Nm(self.0 - other.0)
    }
}

impl Neg for Nm {
    type Output = Nm;
    fn neg(self) -> Nm {
        Nm(-self.0)
    }
}

/// A point of the drawing, x to the right, y up, seen from the top side.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Point {
    /// To the right.
    pub x: Nm,
    /// Upwards.
    pub y: Nm,
}

impl Point {
    /// A point from whole nanometres.
    pub const fn new(x: i64, y: i64) -> Point {
        Point { x: Nm(x), y: Nm(y) }
    }

    /// Rounds a point given in metres, once.
    pub fn from_m(x_m: f64, y_m: f64) -> Point {
        Point { x: Nm::from_m(x_m), y: Nm::from_m(y_m) }
    }

    /// The point moved by `(dx, dy)`.
    pub fn shifted(self, dx: Nm, dy: Nm) -> Point {
        Point { x: self.x + dx, y: self.y + dy }
    }
}
