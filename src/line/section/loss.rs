//! How much does the cross-section lose? Resistance by the incremental-inductance rule, wall by wall, and filling factors of the layers.
//!
//! Receding a wall by dn adds mu0 |H|^2 dn to the inductance, H at the wall per unit current (H. A. Wheeler, "Formulas for the skin effect",
//! Proc. IRE 30, 1942, pp. 412-424), so dL/dn is the integral of the squared surface current over that wall. The surface current of
//! the quasi-TEM mode is proportional to the surface charge without dielectric, which the solver has: the shares of ground, lid and side walls
//! are integrals of smooth charges and come out of one solution. For the strips' own contour the whole is a central difference over receded
//! geometry, which converges faster at the corners; the charges only split it among foot, top and sides.
//!
//! What is not modelled: copper thinner than about three skin depths (the rule then gives too little), and the rise of the effective
//! permittivity that rough foil makes on thin laminates (A. F. Horn, J. W. Reynolds, J. C. Rautio, "Conductor profile effects on the propagation
//! constant of microstrip transmission lines", IEEE MTT-S Digest 2010): it needs the foil's measured profile inductance, which a stackup does not state.

use num_complex::Complex64;

use crate::base::Problem;

use super::geometry::CrossSection;
use super::geometry::fault;
use super::green::GAUSS_8;
use super::panels::{Contour, Face, Grid, inverse_spread};
use super::solve::{Charges, EPSILON_0, Mode, Tables, add_coat, charges, solve_fixed};
use super::stackup::{PERMITTIVITY_STEP, Stackup, scale_layer};

/// Permeability of free space, H/m (CODATA 2018).
pub(super) const MU_0: f64 = 1.256_637_062_12e-6;
/// Panels that the split among the walls is read off.
const LOSS_GRID: Grid = Grid::new(16);
/// Recession of the difference quotients, in units of the smallest size: truncation falls with its square, and a second, halved one takes that off.
const RECESSION: f64 = 0.02;
/// Error of the quotients' extrapolation and of the solver's slopes, seen against finer grids (see `tests/section`).
const QUOTIENT_ERROR: f64 = 1e-3;
/// Images kept on each side when there are side walls; alternating, so the rest falls with the square of this.
const WALL_IMAGES: i32 = 40;
/// Ground current beyond this many heights from the strips is below 1e-8 of the whole.
const GROUND_REACH: f64 = 300.0;

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

/// Loss of one mode; scales to any frequency.
#[derive(Clone, Debug, PartialEq)]
pub struct ModeLoss {
    /// Shares of the walls.
    pub shares: WallShares,
    /// Layer by layer, then the coat if there is one: d ln C / d ln permittivity.
    pub filling: Vec<f64>,
    /// Loss tangent of each of them.
    pub loss_tangents: Vec<f64>,
    /// Relative error of the sum of the shares that the two grids let expect.
    pub error_estimate: f64,
}

impl ModeLoss {
    /// Series resistance per unit length of one line.
    pub fn resistance_ohm_per_m(&self, frequency_hz: f64, surfaces: &Surfaces) -> f64 {
        let shares = &self.shares;
        shares.foot_per_m * surfaces.foot.resistance_ohm(frequency_hz)
            + shares.top_per_m * surfaces.top.resistance_ohm(frequency_hz)
            + shares.sides_per_m * surfaces.sides.resistance_ohm(frequency_hz)
            + shares.ground_per_m * surfaces.ground.resistance_ohm(frequency_hz)
            + (shares.lid_per_m + shares.walls_per_m) * surfaces.housing.resistance_ohm(frequency_hz)
    }

    /// R / (2 Z0), Z0 with the dielectric.
    pub fn conductor_np_per_m(&self, frequency_hz: f64, z0_ohm: f64, surfaces: &Surfaces) -> f64 {
        self.resistance_ohm_per_m(frequency_hz, surfaces) / (2.0 * z0_ohm)
    }

    /// (omega / 2) sqrt(L C) times the sum of filling and loss tangent, sqrt(L C) = sqrt(eps_eff) / c.
    pub fn dielectric_np_per_m(&self, frequency_hz: f64, eps_eff: f64) -> f64 {
        let tangent: f64 = self.filling.iter().zip(&self.loss_tangents).map(|(filling, tangent)| filling * tangent).sum();
        std::f64::consts::PI * frequency_hz * eps_eff.sqrt() / super::solve::LIGHT * tangent
    }
}

/// Loss of one strip (one mode), or of two equal strips (even, odd).
///
/// # Units
/// Shares in 1/m; multiply by the surface resistance.
/// # Valid range
/// As [`CrossSection::check`], thickness above zero, one strip or two equal strips.
/// # Source
/// See the head of `loss.rs`.
/// # Accuracy
/// `error_estimate`; in the tests within 0.2 % of the solver's own geometry receded by differences.
/// # Errors
/// `loss-of-thin-sheet`, `loss-of-many-strips`, and the codes of [`super::solve`].
pub fn loss(section: &CrossSection) -> Result<Vec<ModeLoss>, Problem> {
    if let Some(problem) = section.check().into_iter().next() {
        return Err(problem);
    }
    let shares = wall_shares(section)?;
    let fillings = filling(section, shares.len())?;
    let coat = section.coat.iter().map(|coat| coat.loss_tangent);
    let loss_tangents: Vec<f64> = section.layers.iter().map(|layer| layer.loss_tangent).chain(coat).collect();
    Ok(shares
        .into_iter()
        .zip(fillings)
        .map(|((shares, error_estimate), filling)| ModeLoss { shares, filling, loss_tangents: loss_tangents.clone(), error_estimate })
        .collect())
}

/// Strip signs of each mode.
fn modes(section: &CrossSection) -> Result<Vec<Vec<f64>>, Problem> {
    match section.strips.as_slice() {
        [_] => Ok(vec![vec![1.0]]),
        [_, _] if section.is_symmetric() => Ok(vec![vec![1.0, 1.0], vec![1.0, -1.0]]),
        _ => Err(fault(
            "loss-of-many-strips",
            "strip",
            "loss is given for one strip or two equal strips".into(),
            "leave out the other strips, or make both equal",
        )),
    }
}

pub(super) fn wall_shares(section: &CrossSection) -> Result<Vec<(WallShares, f64)>, Problem> {
    let modes = modes(section)?;
    if section.copper.thickness_m == 0.0 {
        return Err(fault(
            "loss-of-thin-sheet",
            "copper.thickness",
            "a sheet without thickness has no finite conductor loss".into(),
            "give the copper's real thickness",
        ));
    }
    let mut air = section.clone();
    for layer in &mut air.layers {
        layer.permittivity = 1.0;
        layer.in_plane_permittivity = 1.0;
    }
    air.coat = None;
    let tables = Tables::new(&air)?;
    let solved = charges(&air, &tables.borrow(), LOSS_GRID)?;
    let totals = recession(&air)?;
    let mut out = Vec::new();
    for (signs, total) in modes.iter().zip(totals) {
        // The squared charge at the corners converges slowly (as 1/n): it only splits what the difference quotient says of the strips' whole contour.
        let read = shares_of(&air, &solved, signs);
        let outside = read.ground_per_m + read.lid_per_m + read.walls_per_m;
        let strips = read.foot_per_m + read.top_per_m + read.sides_per_m;
        let factor = (total - outside) / strips;
        let shares = WallShares {
            foot_per_m: factor * read.foot_per_m,
            top_per_m: factor * read.top_per_m,
            sides_per_m: factor * read.sides_per_m,
            ..read
        };
        // Two ways to the same number: far apart means that the panels do not resolve the corners.
        if !(0.8..1.1).contains(&factor) {
            return Err(fault(
                "section-not-converged",
                "",
                format!("conductor loss from charges and from receding walls differ by a factor of {factor:.3}"),
                "look for a gap or thickness that is very small against the widths",
            ));
        }
        out.push((shares, QUOTIENT_ERROR));
    }
    Ok(out)
}

/// (1/mu0) dL/dn of each mode when every wall recedes, by central differences without dielectric.
fn recession(air: &CrossSection) -> Result<Vec<f64>, Problem> {
    let thickness = air.copper.thickness_m;
    let height: f64 = air.layers.iter().map(|layer| layer.thickness_m).sum();
    let mut smallest = thickness.min(height);
    for (index, strip) in air.strips.iter().enumerate() {
        smallest = smallest.min(strip.width_m - 2.0 * air.copper.undercut_m);
        if index > 0 {
            smallest = smallest.min(strip.gap_before_m);
        }
    }
    if let Some(lid) = air.housing.lid_m {
        smallest = smallest.min(lid - thickness);
    }
    if let Some(wall) = air.housing.wall_m {
        smallest = smallest.min(wall);
    }
    let step = RECESSION * smallest;
    let quotient = |step: f64| -> Result<Vec<f64>, Problem> {
        let (back, forth) = (air_inverse_capacitance(&receded(air, step))?, air_inverse_capacitance(&receded(air, -step))?);
        // L = mu0 eps0 / C0.
        Ok(back.iter().zip(forth).map(|(back, forth)| EPSILON_0 * (back - forth) / (2.0 * step)).collect())
    };
    let (whole, half) = (quotient(step)?, quotient(0.5 * step)?);
    Ok(whole.iter().zip(half).map(|(whole, half)| half + (half - whole) / 3.0).collect())
}

/// Every wall moved into the metal by `step`.
fn receded(air: &CrossSection, step: f64) -> CrossSection {
    let copper = air.copper;
    // A slanted side moves along its own normal; its corners follow from where it meets the moved foot and top.
    let slant = copper.thickness_m.hypot(copper.undercut_m);
    let (sine, cotangent) = (copper.thickness_m / slant, copper.undercut_m / copper.thickness_m);
    let at_foot = step / sine + step * cotangent;
    let at_top = step / sine - step * cotangent;
    let mut out = air.clone();
    out.copper.thickness_m -= 2.0 * step;
    out.copper.undercut_m += at_top - at_foot;
    let height: f64 = air.layers.iter().map(|layer| layer.thickness_m).sum();
    for layer in &mut out.layers {
        // The foot rises and the ground sinks; without dielectric only the sum of the layers counts.
        layer.thickness_m *= 1.0 + 2.0 * step / height;
    }
    for strip in &mut out.strips {
        strip.width_m -= 2.0 * at_foot;
        strip.gap_before_m += 2.0 * at_foot;
    }
    // The lid rises as much as the foot: unchanged above the foot's level.
    out.housing.wall_m = air.housing.wall_m.map(|wall| wall + step + at_foot);
    out
}

/// 1 / C0 of each mode on the fixed grids.
fn air_inverse_capacitance(air: &CrossSection) -> Result<Vec<f64>, Problem> {
    let solved = solve_fixed(air)?;
    Ok(match solved.pair() {
        Some(pair) => vec![1.0 / pair.even.air_capacitance_f_per_m, 1.0 / pair.odd.air_capacitance_f_per_m],
        None => solved.single().map(|mode| 1.0 / mode.air_capacitance_f_per_m).into_iter().collect(),
    })
}

fn shares_of(section: &CrossSection, solved: &Charges, signs: &[f64]) -> WallShares {
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

/// d ln C / d ln permittivity of each layer, and of the coat after them, mode by mode. On fixed panels, so that differences are smooth.
fn filling(section: &CrossSection, mode_count: usize) -> Result<Vec<Vec<f64>>, Problem> {
    let layers = section.layers.len();
    let parts = layers + usize::from(section.coat.is_some());
    let mut out = vec![Vec::with_capacity(parts); mode_count];
    for index in 0..parts {
        let at = |factor: f64| -> Result<Vec<f64>, Problem> {
            let mut varied = CrossSection { layers: scale_layer(&section.layers, index, factor), ..section.clone() };
            if index == layers
                && let Some(coat) = &mut varied.coat
            {
                coat.permittivity *= factor;
            }
            let mut solved = solve_fixed(&varied)?;
            add_coat(&varied, &mut solved)?;
            Ok(match solved.pair() {
                Some(pair) => vec![pair.even.capacitance_f_per_m, pair.odd.capacitance_f_per_m],
                None => solved.single().map(|mode| mode.capacitance_f_per_m).into_iter().collect(),
            })
        };
        let (low, high) = (at(1.0 - PERMITTIVITY_STEP)?, at(1.0 + PERMITTIVITY_STEP)?);
        for ((filling, low), high) in out.iter_mut().zip(low).zip(high) {
            filling.push((high / low).ln() / (2.0 * PERMITTIVITY_STEP));
        }
    }
    Ok(out)
}

impl Stackup {
    /// Loss of two equal strips, even and odd, from this stackup's tables.
    ///
    /// # Errors
    /// As [`loss`].
    pub fn pair_loss(&self, width_m: f64, gap_m: f64) -> Result<[ModeLoss; 2], Problem> {
        let section = CrossSection::pair(self.layers.clone(), self.copper, width_m, gap_m, self.housing());
        let shares = wall_shares(&section)?;
        let fillings = self.fillings(|stackup| stackup.symmetric_pair(width_m, gap_m).map(|pair| vec![pair.even, pair.odd]))?;
        match self.modes_loss(shares, fillings).try_into() {
            Ok(both) => Ok(both),
            Err(_) => Err(fault(
                "loss-of-many-strips",
                "strip",
                "loss is given for one strip or two equal strips".into(),
                "leave out the other strips",
            )),
        }
    }

    /// Loss of one strip from this stackup's tables.
    ///
    /// # Errors
    /// As [`loss`].
    pub fn single_loss(&self, width_m: f64) -> Result<ModeLoss, Problem> {
        let section = CrossSection::single(self.layers.clone(), self.copper, width_m, self.housing());
        let shares = wall_shares(&section)?;
        let fillings = self.fillings(|stackup| stackup.single(width_m).map(|line| vec![line.mode]))?;
        self.modes_loss(shares, fillings).pop().ok_or_else(|| {
            fault("loss-of-many-strips", "strip", "loss is given for one strip or two equal strips".into(), "leave out the other strips")
        })
    }

    fn modes_loss(&self, shares: Vec<(WallShares, f64)>, fillings: Vec<Vec<f64>>) -> Vec<ModeLoss> {
        let loss_tangents: Vec<f64> = self.layers.iter().map(|layer| layer.loss_tangent).collect();
        let one = |((shares, error_estimate), filling)| ModeLoss { shares, filling, loss_tangents: loss_tangents.clone(), error_estimate };
        shares.into_iter().zip(fillings).map(one).collect()
    }

    fn fillings(&self, solve: impl Fn(&Stackup) -> Result<Vec<Mode>, Problem>) -> Result<Vec<Vec<f64>>, Problem> {
        let mut out: Vec<Vec<f64>> = Vec::new();
        for [low, high] in self.varied() {
            let (low, high) = (solve(low)?, solve(high)?);
            out.resize(low.len(), Vec::new());
            for ((filling, low), high) in out.iter_mut().zip(low).zip(high) {
                filling.push((high.capacitance_f_per_m / low.capacitance_f_per_m).ln() / (2.0 * PERMITTIVITY_STEP));
            }
        }
        Ok(out)
    }
}
