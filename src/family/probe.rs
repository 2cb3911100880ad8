//! What a family asks to have measured on parts of its circuit before the whole is refined: couplings, external Q, resonances.

use std::fmt;

use crate::base::Problem;
use crate::dimensions::Dimensions;
use crate::layout::Layout;

/// What a probe brings about.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Aim {
    /// The layout's resonator, port open, resonates here (hertz).
    Resonance(f64),
    /// The two resonators of the layout, ports open, have this coupling coefficient: k = (f2^2 - f1^2)/(f2^2 + f1^2) of the split resonance.
    Coupling(f64),
    /// The layout's resonator with its port has this external Q: a quarter of the reflection's group delay times the angular frequency.
    ExternalQ(f64),
}

/// Draws the layout that is measured from a set.
pub type Drawing = Box<dyn Fn(&Dimensions) -> Result<Layout, Vec<Problem>>>;

/// One dimension, moved until a part of the circuit has what the prototype asks for.
pub struct Probe {
    /// `coupling 2`, `external Q 1`.
    pub about: String,
    /// What is aimed at.
    pub aim: Aim,
    /// The dimensions that are moved together, by index into the set: the one searched for and its symmetric partners.
    pub moves: Vec<usize>,
    /// Search range of the value, metres.
    pub between_m: [f64; 2],
    /// The layout that is measured.
    pub layout: Drawing,
}

impl fmt::Debug for Probe {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}: {:?} by {:?} between {:?} m", self.about, self.aim, self.moves, self.between_m)
    }
}
