//! Where does the current flow? Shares of foot, top, sides, ground, lid and side walls in the resistance, from the charges of one solution.

use super::geometry::CrossSection;
use super::green::GAUSS_8;
use super::panels::{Face, inverse_spread};
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

    pub(super) fn scaled(&self, factor: f64) -> WallShares {
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

/// Foot, top, sides, ground, lid, side walls.
const WALLS: usize = 6;

/// The walls' shares as quadratic forms in the potentials of the strips, N x N row by row, without dielectric.
pub(super) struct WallMatrices {
    count: usize,
    walls: [Vec<f64>; WALLS],
}

impl WallMatrices {
    /// Shares of one mode with these potentials on the strips, in units of eps0 squared times volts squared per metre.
    pub(super) fn shares(&self, potentials: &[f64]) -> WallShares {
        let form = |matrix: &Vec<f64>| -> f64 {
            matrix
                .chunks_exact(self.count)
                .zip(potentials)
                .map(|(row, left)| left * row.iter().zip(potentials).map(|(value, right)| value * right).sum::<f64>())
                .sum()
        };
        let [foot_per_m, top_per_m, sides_per_m, ground_per_m, lid_per_m, walls_per_m] =
            std::array::from_fn(|wall| form(&self.walls[wall]));
        WallShares { foot_per_m, top_per_m, sides_per_m, ground_per_m, lid_per_m, walls_per_m }
    }
}

/// Adds weight times the products of the values.
fn add_products(matrix: &mut [f64], values: &[f64], weight: f64) {
    for (row, left) in matrix.chunks_exact_mut(values.len()).zip(values) {
        for (value, right) in row.iter_mut().zip(values) {
            *value += weight * left * right;
        }
    }
}

/// Reads the walls' currents off the charges for one volt on each strip in turn.
pub(super) fn wall_matrices(section: &CrossSection, solved: &Charges) -> WallMatrices {
    let count = solved.contours.len();
    let mut walls: [Vec<f64>; WALLS] = std::array::from_fn(|_| vec![0.0; count * count]);
    let mut sources = Vec::new();
    let mut first = 0;
    for contour in &solved.contours {
        for side in &contour.sides {
            let wall = match side.face {
                Face::Foot => 0,
                Face::Top => 1,
                Face::Left | Face::Right => 2,
            };
            for ((spread, inverse), panel) in inverse_spread(side.inverse.len(), side.length()).zip(&side.inverse).zip(side.first..) {
                let charges: Vec<f64> = solved.air.iter().map(|vector| vector[first + panel]).collect();
                add_products(&mut walls[wall], &charges, spread);
                let half = if matches!(side.face, Face::Foot | Face::Top) { 0.5 / inverse } else { 0.0 };
                sources.push(Source { charges, x: contour.x[panel], z: contour.z[panel], half });
            }
        }
        first += contour.len();
    }
    let room = Room::new(section);
    let [.., ground, lid, side_walls] = &mut walls;
    room.add_walls(&sources, count, section.is_symmetric(), [ground, lid, side_walls]);
    WallMatrices { count, walls }
}

/// One panel's charge: a flat stretch, or a line for the upright sides, which are short against their distance from every wall.
struct Source {
    /// For one volt on each strip in turn.
    charges: Vec<f64>,
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

    fn add_walls(&self, sources: &[Source], count: usize, symmetric: bool, [ground, lid_share, side_walls]: [&mut Vec<f64>; 3]) {
        let reach = self.wall_x_m.unwrap_or(0.5 * self.span_m + GROUND_REACH * self.height_m);
        let mut density = vec![0.0; count];
        let mut heights = vec![(false, self.height_m)];
        if let Some(lid) = self.lid_m {
            heights.push((true, lid));
        }
        for (is_lid, distance) in heights {
            let share = if is_lid { &mut *lid_share } else { &mut *ground };
            for (x, weight) in graded_points(0.5 * self.span_m, reach, distance.min(self.height_m)) {
                // What reads the same from the right is looked at from there only in the end.
                for side in [1.0, -1.0].into_iter().take(if symmetric { 1 } else { 2 }) {
                    density.fill(0.0);
                    for source in sources {
                        let (a, other) = if is_lid {
                            (distance - source.z, Some(self.height_m + source.z))
                        } else {
                            (distance + source.z, self.lid_m.map(|lid| lid - source.z))
                        };
                        let mut unit = 0.0;
                        for (position, sign) in self.images(source.x) {
                            let offset = side * x - position;
                            unit += sign
                                * if source.half > 0.0 {
                                    (Room::plane_charge(a, other, offset + source.half)
                                        - Room::plane_charge(a, other, offset - source.half))
                                        / (2.0 * source.half)
                                } else {
                                    Room::plane_density(a, other, offset)
                                };
                        }
                        add_scaled(&mut density, &source.charges, unit);
                    }
                    add_products(share, &density, weight);
                }
            }
            if symmetric {
                add_turned(share);
            }
        }
        if let Some(wall) = self.wall_x_m {
            let top = self.lid_m.unwrap_or(GROUND_REACH * (self.height_m + 2.0 * wall));
            let upward = graded_points(2.0 * self.height_m, top, self.height_m);
            let downward = graded_points(self.height_m, self.height_m, self.height_m).into_iter().map(|(depth, weight)| (-depth, weight));
            for (z, weight) in upward.into_iter().chain(downward) {
                for side in [1.0, -1.0].into_iter().take(if symmetric { 1 } else { 2 }) {
                    density.fill(0.0);
                    for source in sources {
                        let mut unit = 0.0;
                        for (position, sign) in self.images(source.x) {
                            unit += sign * self.sideways(side * wall - position, z, source.z);
                        }
                        add_scaled(&mut density, &source.charges, side * unit);
                    }
                    add_products(side_walls, &density, weight);
                }
            }
            if symmetric {
                add_turned(side_walls);
            }
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

/// Adds to a matrix itself with the strips counted from the right.
fn add_turned(matrix: &mut [f64]) {
    let turned: Vec<f64> = matrix.iter().rev().copied().collect();
    add_scaled(matrix, &turned, 1.0);
}

fn add_scaled(sum: &mut [f64], values: &[f64], factor: f64) {
    for (sum, value) in sum.iter_mut().zip(values) {
        *sum += factor * value;
    }
}

/// Points and weights from 0 to `end`: panels of `scale` up to `even` and a little beyond, then growing.
fn graded_points(even: f64, end: f64, scale: f64) -> Vec<(f64, f64)> {
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
    let mut points = Vec::with_capacity(8 * edges.len());
    for pair in edges.windows(2) {
        let (middle, half) = (0.5 * (pair[0] + pair[1]), 0.5 * (pair[1] - pair[0]));
        for (node, weight) in GAUSS_8 {
            points.push((middle - half * node, weight * half));
            points.push((middle + half * node, weight * half));
        }
    }
    points
}
