//! Of what is the space below and above the copper made: dielectric layers, ground, lid or open top.

use num_complex::Complex64;

/// Permittivity of free space, F/m (2018 CODATA).
pub const EPS0: f64 = 8.854_187_812_8e-12;
/// Permeability of free space, H/m (2018 CODATA).
pub const MU0: f64 = 1.256_637_062_12e-6;

/// One dielectric layer.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Dielectric {
    /// Relative permittivity, the same in all directions.
    pub permittivity: f64,
    /// tan d.
    pub loss_tangent: f64,
    /// Thickness.
    pub thickness_m: f64,
}

impl Dielectric {
    /// Complex permittivity, F/m, for the time factor exp(+j w t).
    pub fn permittivity_f_per_m(&self) -> Complex64 {
        Complex64::new(1.0, -self.loss_tangent) * (EPS0 * self.permittivity)
    }
}

/// What ends the uppermost layer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Top {
    /// A perfectly conducting lid.
    Lid,
    /// The uppermost layer goes on without end (the side walls too): waves leave upwards.
    Open,
}

/// Layers from the ground plane up; the copper lies between `below` and `above`.
#[derive(Clone, Debug, PartialEq)]
pub struct Stack {
    /// From the ground up to the copper; at least one.
    pub below: Vec<Dielectric>,
    /// From the copper up; at least one. With an open top the thickness of the last does not count.
    pub above: Vec<Dielectric>,
    /// What ends the last layer above.
    pub top: Top,
}

impl Stack {
    /// Whether no layer loses and nothing leaves: then the moment matrix is real but for a factor.
    pub fn is_lossless(&self) -> bool {
        self.top == Top::Lid && !self.loses()
    }

    /// Whether any layer has a loss tangent.
    pub fn loses(&self) -> bool {
        self.below.iter().chain(&self.above).any(|layer| layer.loss_tangent.abs() >= f64::MIN_POSITIVE)
    }

    /// Thickness from the ground to the copper.
    pub fn below_m(&self) -> f64 {
        self.below.iter().map(|layer| layer.thickness_m).sum()
    }

    /// Thickness from the copper to the lid; infinite with an open top.
    pub fn above_m(&self) -> f64 {
        if self.top == Top::Open { f64::INFINITY } else { self.above.iter().map(|layer| layer.thickness_m).sum() }
    }

    /// Greatest relative permittivity.
    pub fn greatest_permittivity(&self) -> f64 {
        self.below.iter().chain(&self.above).map(|layer| layer.permittivity).fold(1.0, f64::max)
    }

    /// Thickness of the thinner of the two layers touching the copper: the scale of what the far part must carry.
    pub fn nearest_interface_m(&self) -> f64 {
        let below = self.below.last().map_or(f64::INFINITY, |layer| layer.thickness_m);
        let above = match (self.above.first(), self.above.len(), self.top) {
            (Some(_), 1, Top::Open) | (None, _, _) => f64::INFINITY,
            (Some(layer), _, _) => layer.thickness_m,
        };
        below.min(above)
    }
}
