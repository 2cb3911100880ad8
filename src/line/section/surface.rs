//! What does a metal surface cost? Surface resistance of copper, rough or plated.

use num_complex::Complex64;

/// Permeability of free space, H/m (CODATA 2018).
const MU_0: f64 = 1.256_637_062_12e-6;

/// How rough a surface is and by which published model its loss grows.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Roughness {
    /// No growth.
    Smooth,
    /// 1 + (2/pi) atan(1.4 (Rq/delta)^2): E. Hammerstad, O. Jensen, "Accurate models for microstrip computer-aided design", IEEE MTT-S Digest 1980,
    /// after S. P. Morgan, J. Appl. Phys. 20, 1949. Saturates at 2.
    HammerstadJensen {
        /// Root-mean-square height.
        rq_m: f64,
    },
    /// Spheres stacked as a pyramid of 14 on a tile: P. G. Huray et al., "Fundamentals of a 3-D snowball model for surface roughness power
    /// losses", IEEE Workshop on Signal Propagation on Interconnects 2007, in the reduction to the foil's own Rz by B. Simonovich (2015): radius 0.06 Rz, tile 36 r^2. From memory.
    Cannonball {
        /// Ten-point height of the foil's matte side.
        rz_m: f64,
    },
}

impl Roughness {
    /// Factor on the surface resistance at a skin depth.
    pub fn factor(&self, skin_depth_m: f64) -> f64 {
        let pi = std::f64::consts::PI;
        match *self {
            Roughness::Smooth => 1.0,
            Roughness::HammerstadJensen { rq_m } => {
                let ratio = rq_m / skin_depth_m;
                1.0 + 2.0 / pi * (1.4 * ratio * ratio).atan()
            }
            Roughness::Cannonball { rz_m } if rz_m > 0.0 => {
                let ratio = skin_depth_m / (0.06 * rz_m);
                1.0 + 1.5 * (14.0 * 4.0 * pi / 36.0) / (1.0 + ratio + 0.5 * ratio * ratio)
            }
            Roughness::Cannonball { .. } => 1.0,
        }
    }
}

/// A metal layer on top of the copper, such as nickel under gold.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Plating {
    /// Conductivity, S/m.
    pub conductivity_s_per_m: f64,
    /// Relative permeability.
    pub permeability: f64,
    /// Thickness.
    pub thickness_m: f64,
}

/// One metal surface.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Surface {
    /// Conductivity of the bulk, S/m.
    pub conductivity_s_per_m: f64,
    /// Roughness of the bulk's surface.
    pub roughness: Roughness,
    /// Plating between the bulk and the field.
    pub plating: Option<Plating>,
}

impl Surface {
    /// A smooth bare surface.
    pub fn smooth(conductivity_s_per_m: f64) -> Surface {
        Surface { conductivity_s_per_m, roughness: Roughness::Smooth, plating: None }
    }

    /// Surface resistance in ohm per square: the real part of the layered surface impedance (plane waves in two metals), times the roughness factor of the
    /// metal that faces the field.
    pub fn resistance_ohm(&self, frequency_hz: f64) -> f64 {
        let bulk = intrinsic(frequency_hz, self.conductivity_s_per_m, 1.0);
        match self.plating {
            Some(plating) if plating.thickness_m > 0.0 => {
                let outer = intrinsic(frequency_hz, plating.conductivity_s_per_m, plating.permeability);
                let depth = skin_depth_m(frequency_hz, plating.conductivity_s_per_m, plating.permeability);
                let turn = Complex64::new(1.0, 1.0) * (plating.thickness_m / depth);
                // tanh of a large argument is one; the quotient of large exponentials would not be.
                let tangent = if turn.re > 20.0 { Complex64::new(1.0, 0.0) } else { turn.tanh() };
                let impedance = outer * (bulk + outer * tangent) / (outer + bulk * tangent);
                impedance.re * self.roughness.factor(depth)
            }
            _ => bulk.re * self.roughness.factor(skin_depth_m(frequency_hz, self.conductivity_s_per_m, 1.0)),
        }
    }
}

/// sqrt(1 / (pi f mu sigma)).
pub fn skin_depth_m(frequency_hz: f64, conductivity_s_per_m: f64, permeability: f64) -> f64 {
    1.0 / (std::f64::consts::PI * frequency_hz * MU_0 * permeability * conductivity_s_per_m).sqrt()
}

fn intrinsic(frequency_hz: f64, conductivity_s_per_m: f64, permeability: f64) -> Complex64 {
    Complex64::new(1.0, 1.0) / (conductivity_s_per_m * skin_depth_m(frequency_hz, conductivity_s_per_m, permeability))
}

/// The surface of each wall.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Surfaces {
    /// Foot of the strips: the foil's laminate side.
    pub foot: Surface,
    /// Top of the strips.
    pub top: Surface,
    /// Sides of the strips.
    pub sides: Surface,
    /// Ground: the foil's laminate side.
    pub ground: Surface,
    /// Lid and side walls.
    pub housing: Surface,
}

impl Surfaces {
    /// The same surface everywhere.
    pub fn uniform(surface: Surface) -> Surfaces {
        Surfaces { foot: surface, top: surface, sides: surface, ground: surface, housing: surface }
    }
}
