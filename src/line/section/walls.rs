//! Where does the current flow? Shares of foot, top, sides, ground, lid and side walls in the resistance, from the charges of one solution.

use super::geometry::CrossSection;
use super::green::GAUSS_8;
use super::panels::{Contour, Face, inverse_spread};
use super::solve::Charges;

/// Images kept on each side when there are side walls; alternating, so the rest falls with the square of this.
const WALL_IMAGES: i32 = 40;
/// Ground current beyond this many heights from the strips is below 1e-8 of the whole.
const GROUND_REACH: f64 = 300.0;

/// (1/mu0) dL/dn of each wall of one mode, per line: the wall's share in the resistance per unit surface resistance, 1/m.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct WallShares {
    /// Foot of the strip.
    pub foot_per_m: f64,
    /// Top of the strip.
    pub top_per_m: f64,
    /// Both sides of the strip.
    pub sides_per_m: f64,
    /// Ground plane.
    pub ground_per_m: f64,
    /// Lid.
    pub lid_per_m: f64,
    /// Side walls.
    pub walls_per_m: f64,
}

impl WallShares {
    /// Sum over all walls: (1/mu0) dL/dn when every wall recedes.
    pub fn total_per_m(&self) -> f64 {
        self.foot_per_m + self.top_per_m + self.sides_per_m + self.ground_per_m + self.lid_per_m + self.walls_per_m
    }

    fn scaled(&self, factor: f64) -> WallShares {
        WallShares {
            foot_per_m: factor * self.foot_per_m,
            top_per_m: factor * self.top_per_m,
            sides_per_m: factor * self.sides_per_m,
            ground_per_m: factor * self.ground_per_m,
            lid_per_m: factor * self.lid_per_m,
            walls_per_m: factor * self.walls_per_m,
        }
    }
}

/// The shares of one mode, each strip charged with its sign.
pub(super) fn shares_of(section: &CrossSection, solved: &Charges, signs: &[f64]) -> WallShares {
    let panels: usize = solved.contours.iter().map(Contour::len).sum();
    let mut charge = vec![0.0; panels];
    for (vector, sign) in solved.air.iter().zip(signs) {
        for (sum, value) in charge.iter_mut().zip(vector) {
            *sum += sign * value;
        }
    }
    let lines = signs.len() as f64;
    let mut shares = WallShares::default();
    let mut current = 0.0;
    let mut first = 0;
    let mut sources = Vec::new();
    for (contour, sign) in solved.contours.iter().zip(signs) {
        for side in &contour.sides {
            let own = &charge[first + side.first..first + side.first + side.inverse.len()];
            let squares: f64 = own.iter().zip(inverse_spread(side.inverse.len(), side.length())).map(|(q, inverse)| q * q * inverse).sum();
            match side.face {
                Face::Foot => shares.foot_per_m += squares,
                Face::Top => shares.top_per_m += squares,
                Face::Left | Face::Right => shares.sides_per_m += squares,
            }
            for ((q, inverse), panel) in own.iter().zip(&side.inverse).zip(side.first..) {
                let half = if matches!(side.face, Face::Foot | Face::Top) { 0.5 / inverse } else { 0.0 };
                sources.push(Source { charge: *q, x: contour.x[panel], z: contour.z[panel], half });
                current += sign * q;
            }
        }
        first += contour.len();
    }
    let room = Room::new(section);
    room.add_walls(&sources, &mut shares);
    // Each line carries current / lines; power is shared among the lines.
    let line_current = current / lines;
    shares.scaled(1.0 / (lines * line_current * line_current))
}

/// One panel's charge: a flat stretch, or a line for the upright sides, which are short against their distance from every wall.
struct Source {
    charge: f64,
    x: f64,
    z: f64,
    half: f64,
}

/// Grounded walls as seen without dielectric.
struct Room {
    height_m: f64,
    lid_m: Option<f64>,
    wall_x_m: Option<f64>,
    span_m: f64,
}

impl Room {
    fn new(section: &CrossSection) -> Room {
        let span_m = section.span_m();
        Room {
            height_m: section.layers.iter().map(|layer| layer.thickness_m).sum(),
            lid_m: section.housing.lid_m,
            wall_x_m: section.housing.wall_m.map(|wall| 0.5 * span_m + wall),
            span_m,
        }
    }

    /// Charge per length that a unit line charge leaves on a plane at distance `a`, the other plane `a_other` on its far side, integrated from 0 to x.
    fn plane_charge(a: f64, other: Option<f64>, x: f64) -> f64 {
        let pi = std::f64::consts::PI;
        match other {
            None => (x / a).atan() / pi,
            Some(other) => {
                let whole = a + other;
                ((0.5 * pi * x / whole).tanh() / (0.5 * pi * a / whole).tan()).atan() / pi
            }
        }
    }

    /// Its density at x.
    fn plane_density(a: f64, other: Option<f64>, x: f64) -> f64 {
        let pi = std::f64::consts::PI;
        match other {
            None => a / (pi * (x * x + a * a)),
            Some(other) => {
                let whole = a + other;
                let y = pi * x / whole;
                if y.abs() > 300.0 {
                    return 0.0;
                }
                (pi * a / whole).sin() / (2.0 * whole * (y.cosh() - (pi * a / whole).cos()))
            }
        }
    }

    /// Positions and signs of a source at x and its images in the side walls.
    fn images(&self, x: f64) -> Vec<(f64, f64)> {
        match self.wall_x_m {
            None => vec![(x, 1.0)],
            Some(wall) => (-WALL_IMAGES..=WALL_IMAGES)
                .flat_map(|m| [(x + 4.0 * wall * f64::from(m), 1.0), (2.0 * wall - x + 4.0 * wall * f64::from(m), -1.0)])
                .collect(),
        }
    }

    fn add_walls(&self, sources: &[Source], shares: &mut WallShares) {
        let reach = self.wall_x_m.unwrap_or(0.5 * self.span_m + GROUND_REACH * self.height_m);
        let mut heights = vec![(false, self.height_m)];
        if let Some(lid) = self.lid_m {
            heights.push((true, lid));
        }
        for (is_lid, distance) in heights {
            let density = |x: f64| -> f64 {
                let mut sum = 0.0;
                for source in sources {
                    let (a, other) = if is_lid {
                        (distance - source.z, Some(self.height_m + source.z))
                    } else {
                        (distance + source.z, self.lid_m.map(|lid| lid - source.z))
                    };
                    for (position, sign) in self.images(source.x) {
                        let offset = x - position;
                        sum += sign
                            * source.charge
                            * if source.half > 0.0 {
                                (Room::plane_charge(a, other, offset + source.half) - Room::plane_charge(a, other, offset - source.half))
                                    / (2.0 * source.half)
                            } else {
                                Room::plane_density(a, other, offset)
                            };
                    }
                }
                sum * sum
            };
            // The strips' arrangement is the same from both sides only for one strip or a pair; those are all that come here.
            let value = 2.0 * integrate_graded(density, 0.5 * self.span_m, reach, distance.min(self.height_m));
            if is_lid { shares.lid_per_m += value } else { shares.ground_per_m += value }
        }
        if let Some(wall) = self.wall_x_m {
            let top = self.lid_m.unwrap_or(GROUND_REACH * (self.height_m + 2.0 * wall));
            let density = |z: f64| -> f64 {
                let mut sum = 0.0;
                for source in sources {
                    for (position, sign) in self.images(source.x) {
                        sum += sign * source.charge * self.sideways(wall - position, z, source.z);
                    }
                }
                sum * sum
            };
            let upward = integrate_graded(density, 2.0 * self.height_m, top, self.height_m);
            let downward = integrate_graded(|depth| density(-depth), self.height_m, self.height_m, self.height_m);
            shares.walls_per_m += 2.0 * (upward + downward);
        }
    }

    /// Sideways field of a unit line charge between ground and lid.
    fn sideways(&self, x: f64, z: f64, source_z: f64) -> f64 {
        let pi = std::f64::consts::PI;
        let (delta, sum) = (z - source_z, z + source_z + 2.0 * self.height_m);
        match self.lid_m {
            None => (x / (x * x + delta * delta) - x / (x * x + sum * sum)) / (2.0 * pi),
            Some(lid) => {
                let whole = self.height_m + lid;
                let y = pi * x / whole;
                if y.abs() > 300.0 {
                    return 0.0;
                }
                y.sinh() / (4.0 * whole) * (1.0 / (y.cosh() - (pi * delta / whole).cos()) - 1.0 / (y.cosh() - (pi * sum / whole).cos()))
            }
        }
    }
}

/// Integral from 0 to `end`: panels of `scale` up to `even` and a little beyond, then doubling.
fn integrate_graded(density: impl Fn(f64) -> f64, even: f64, end: f64, scale: f64) -> f64 {
    let mut edges = vec![0.0];
    // At most some thousand panels: `check` bounds the span by the layer.
    let first = (even + 2.0 * scale).min(end);
    let count = (first / (0.75 * scale)).ceil().clamp(1.0, 4000.0);
    for index in 1..=count as usize {
        edges.push(first * index as f64 / count);
    }
    let mut width = scale;
    let mut x = first;
    while x < end {
        x = (x + width).min(end);
        edges.push(x);
        width *= 1.6;
    }
    let mut sum = 0.0;
    for pair in edges.windows(2) {
        let (middle, half) = (0.5 * (pair[0] + pair[1]), 0.5 * (pair[1] - pair[0]));
        for (node, weight) in GAUSS_8 {
            sum += weight * half * (density(middle - half * node) + density(middle + half * node));
        }
    }
    sum
}
