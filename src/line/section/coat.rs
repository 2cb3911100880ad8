//! How much capacitance does a solder-mask coat add?
//!
//! The coat's polarisation is put on its two surfaces as unknown charge beside the metal's, in the same Green function of laminate, lid and walls that
//! the bare strips use; only the difference to the bare strips on the same panels is kept and added to the accurate bare result.
//! On a coat surface with normal n, permittivity p on the side n points to and m on the other: (p - m) E_n + (p + m) q / 2 = 0, with E_n the mean of both sides
//! (R. F. Harrington, K. Pontoppidan, P. Abrahamsen, N. C. Albertsen, "Computation of Laplacian potentials by an equivalent source method",
//! Proc. IEE 116, 1969; in the form with total charge). Free charge of the metal is the permittivity beside it times its total charge.
//!
//! The coat follows the surface: its own thickness on the laminate, its thickness along the normal on top and sides of the copper, outer corners mitred.
//! Its outer surface and its foot on the laminate are followed to where the field is weak, or to the walls.

use crate::base::Problem;

use super::assembly::Square;
use super::elimination::solve_in_place;
use super::geometry::CoatOf;
use super::geometry::CrossSection;
use super::geometry::fault;
use super::geometry::mm;
use super::green::{Kernel, Medium, Table};
use super::panels::{graded, lagrange};
use super::solve::EPSILON_0;

/// Panels along a width on the finer of two grids, for one or two strips, up to four, and more.
const PANELS: [(usize, usize); 3] = [(2, 32), (4, 20), (usize::MAX, 12)];
/// The difference converges as n^-2; a third of the step between the grids is put back.
const RICHARDSON: f64 = 1.0 / 3.0;
/// Share of that step that may still be wrong.
const LEFT_OVER: f64 = 0.5;
/// The coat is followed this many substrate heights beyond the outermost strip.
const REACH: f64 = 12.0;

/// What the coat adds to the capacitance matrix.
pub(super) struct Coated {
    pub(super) added_f_per_m: Vec<Vec<f64>>,
    /// Of the whole capacitance.
    pub(super) error_estimate: f64,
}

#[derive(Clone, Copy, PartialEq)]
enum Kind {
    /// Strip number, permittivity beside the face; zero for a sheet that has laminate below and coat above.
    Metal(usize, f64),
    /// Permittivity on the side of the normal and on the other.
    Coat(f64, f64),
}

/// One panel with its middle.
#[derive(Clone, Copy)]
struct Panel {
    x: f64,
    z: f64,
    along: (f64, f64),
    length: f64,
    normal: (f64, f64),
    kind: Kind,
}

impl Panel {
    fn middle(&self) -> (f64, f64) {
        (self.x + 0.5 * self.length * self.along.0, self.z + 0.5 * self.length * self.along.1)
    }
}

/// Solves bare and coated on two grids.
pub(super) fn coat_adds(section: &CrossSection, coat: CoatOf) -> Result<Coated, Problem> {
    let count = section.strips.len();
    let panels = PANELS.iter().find(|(strips, _)| count <= *strips).map_or(12, |(_, panels)| *panels);
    let (coarse, _) = added(section, coat, panels / 2)?;
    let (fine, bare) = added(section, coat, panels)?;
    let mut out = Coated { added_f_per_m: vec![vec![0.0; count]; count], error_estimate: 0.0 };
    for i in 0..count {
        for j in 0..count {
            let step = |i: usize, j: usize| RICHARDSON * (fine[i][j] - coarse[i][j]);
            let value = 0.5 * (fine[i][j] + step(i, j) + fine[j][i] + step(j, i));
            out.added_f_per_m[i][j] = value * EPSILON_0;
            let left = LEFT_OVER * step(i, j).abs() + 0.5 * (fine[i][j] - fine[j][i]).abs();
            out.error_estimate = out.error_estimate.max(left / bare[i][i].min(bare[j][j]));
        }
    }
    Ok(out)
}

type Matrix = Vec<Vec<f64>>;

/// Coated minus bare, and bare, on one grid, in units of eps0.
fn added(section: &CrossSection, coat: CoatOf, count: usize) -> Result<(Matrix, Matrix), Problem> {
    let metal = metal_panels(section, coat, count);
    let mut all = metal.clone();
    all.extend(coat_panels(section, coat, count)?);
    let room = Room::new(section, coat)?;
    let bare = capacitance(&room, &metal, section.strips.len(), 1.0)?;
    let coated = capacitance(&room, &all, section.strips.len(), coat.permittivity)?;
    let difference = coated.iter().zip(&bare).map(|(one, other)| one.iter().zip(other).map(|(a, b)| a - b).collect()).collect();
    Ok((difference, bare))
}

fn push_line(out: &mut Vec<Panel>, from: (f64, f64), to: (f64, f64), nodes: &[f64], normal: (f64, f64), kind: Kind) {
    let length = (to.0 - from.0).hypot(to.1 - from.1);
    let along = ((to.0 - from.0) / length, (to.1 - from.1) / length);
    for pair in nodes.windows(2) {
        let start = length * pair[0];
        out.push(Panel {
            x: from.0 + start * along.0,
            z: from.1 + start * along.1,
            along,
            length: length * (pair[1] - pair[0]),
            normal,
            kind,
        });
    }
}

fn metal_panels(section: &CrossSection, coat: CoatOf, count: usize) -> Vec<Panel> {
    let (thickness, undercut) = (section.copper.thickness_m, section.copper.undercut_m);
    let (wide, tall) = (graded(count, 1.0), graded(count / 2, 1.0));
    let mut out = Vec::new();
    for (index, (left, strip)) in section.left_edges_m().iter().zip(&section.strips).enumerate() {
        let right = left + strip.width_m;
        let foot = if thickness > 0.0 { 1.0 } else { 0.0 };
        push_line(&mut out, (*left, 0.0), (right, 0.0), &wide, (0.0, 1.0), Kind::Metal(index, foot));
        if thickness > 0.0 {
            let covered = Kind::Metal(index, coat.permittivity);
            push_line(&mut out, (*left, 0.0), (left + undercut, thickness), &tall, (-1.0, 0.0), covered);
            push_line(&mut out, (left + undercut, thickness), (right - undercut, thickness), &wide, (0.0, 1.0), covered);
            push_line(&mut out, (right, 0.0), (right - undercut, thickness), &tall, (1.0, 0.0), covered);
        }
    }
    out
}

fn coat_panels(section: &CrossSection, coat: CoatOf, count: usize) -> Result<Vec<Panel>, Problem> {
    let (thickness, undercut) = (section.copper.thickness_m, section.copper.undercut_m);
    let (wide, tall) = (graded(count, 1.0), graded(count / 2, 1.0));
    let outward: Vec<f64> = (0..=count).map(|i| (i as f64 / count as f64).powi(3)).collect();
    let inward: Vec<f64> = outward.iter().rev().map(|u| 1.0 - u).collect();
    let height: f64 = section.layers.iter().map(|layer| layer.thickness_m).sum();
    let reach = section.housing.wall_m.unwrap_or(REACH * (height + thickness + coat.on_laminate_m + coat.on_copper_m));
    let half = 0.5 * section.span_m();
    let edges: Vec<(f64, f64)> =
        section.left_edges_m().iter().zip(&section.strips).map(|(left, strip)| (*left, left + strip.width_m)).collect();
    let outer = Kind::Coat(1.0, coat.permittivity);
    let lower = Kind::Coat(coat.permittivity, 1.0);
    let mut out = Vec::new();
    // Foot of the coat on the laminate: outside the strips.
    let flat = |out: &mut Vec<Panel>, z: f64, corners: &[(f64, f64)], kind: Kind| {
        let up = (0.0, 1.0);
        if let (Some(first), Some(last)) = (corners.first(), corners.last()) {
            push_line(out, (-half - reach, z), (first.0, z), &inward, up, kind);
            push_line(out, (last.1, z), (half + reach, z), &outward, up, kind);
        }
        for pair in corners.windows(2) {
            push_line(out, (pair[0].1, z), (pair[1].0, z), &wide, up, kind);
        }
    };
    flat(&mut out, 0.0, &edges, lower);
    let (level, top) = (coat.on_laminate_m, thickness + coat.on_copper_m);
    if level >= top * (1.0 - 1e-9) {
        // The strips are buried: one flat surface, cut above their edges.
        let cuts: Vec<(f64, f64)> = edges.clone();
        flat(&mut out, level, &cuts, outer);
        for (left, right) in &edges {
            push_line(&mut out, (*left, level), (*right, level), &wide, (0.0, 1.0), outer);
        }
        return Ok(out);
    }
    // Sides move out along their normal; a sheet's coat ends in an upright face.
    let (sine, cotangent) = if thickness > 0.0 { (thickness / thickness.hypot(undercut), undercut / thickness) } else { (1.0, 0.0) };
    let side_at = |edge: f64, z: f64, inward: f64| edge + inward * (z * cotangent - coat.on_copper_m / sine);
    let feet: Vec<(f64, f64)> = edges.iter().map(|(left, right)| (side_at(*left, level, 1.0), side_at(*right, level, -1.0))).collect();
    for (index, pair) in feet.windows(2).enumerate() {
        if pair[1].0 <= pair[0].1 {
            return Err(fault(
                "coat-fills-gap",
                &format!("strip[{}].gap-before", index + 1),
                format!("a coat of {} on the copper fills the gap from both sides", mm(coat.on_copper_m)),
                "make the coat thinner or the gap wider; only a coat that leaves the gap open is solved",
            ));
        }
    }
    flat(&mut out, level, &feet, outer);
    for ((left, right), (foot_left, foot_right)) in edges.iter().zip(&feet) {
        let (top_left, top_right) = (side_at(*left, top, 1.0), side_at(*right, top, -1.0));
        let cosine = cotangent * sine;
        push_line(&mut out, (*foot_left, level), (top_left, top), &tall, (-sine, cosine), outer);
        push_line(&mut out, (top_left, top), (top_right, top), &wide, (0.0, 1.0), outer);
        push_line(&mut out, (*foot_right, level), (top_right, top), &tall, (sine, cosine), outer);
    }
    Ok(out)
}

/// The Green function over the whole height of the coat.
struct Room {
    kernel: Kernel,
    heights: Vec<f64>,
    /// Mirror plane, sign, and which table goes with it.
    images: Vec<(Option<f64>, f64, Option<bool>)>,
}

impl Room {
    fn new(section: &CrossSection, coat: CoatOf) -> Result<Room, Problem> {
        let top = coat.on_laminate_m.max(section.copper.thickness_m + coat.on_copper_m);
        let span = section.span_m();
        let walls = section.housing.wall_m.map(|wall| span + 2.0 * wall);
        let medium = Medium::new(&section.layers, section.housing.lid_m, walls, top);
        let heights = medium.heights_m();
        let height: f64 = section.layers.iter().map(|layer| layer.thickness_m).sum();
        let reach = walls.unwrap_or(span + 2.0 * REACH * (height + 2.0 * top));
        let octaves = Kernel::octaves_for(&medium, reach).ok_or_else(|| super::solve::too_wide(reach))?;
        let kernel = Kernel::build(&medium, &heights, octaves);
        let mut images = vec![(None, 1.0, Some(false))];
        if let Some(wall) = section.housing.wall_m {
            let plane = 0.5 * span + wall;
            images.push((Some(-plane), -1.0, Some(true)));
            images.push((Some(plane), -1.0, None));
        }
        Ok(Room { kernel, heights, images })
    }

    fn table(&self, mirror: bool) -> &Table {
        if mirror { self.kernel.mirror_table.as_ref().unwrap_or(&self.kernel.table) } else { &self.kernel.table }
    }

    /// Potential, and field along x and z, at a point, per unit charge of a panel. `own`: the panel the point is the middle of.
    fn at(&self, field: &Field, source: &Panel, source_weights: &[f64], own: bool) -> (f64, f64, f64) {
        let (mut potential, mut field_x, mut field_z) = (0.0, 0.0, 0.0);
        for &(mirror, sign, table) in &self.images {
            let x = mirror.map_or(field.x, |plane| 2.0 * plane - field.x);
            let turn = if mirror.is_some() { -1.0 } else { 1.0 };
            let own = own && mirror.is_none();
            let (p, ex, ez) = segment(x, field.z, (source.x, source.z), source.along, source.length, own);
            potential += sign * p;
            field_x += sign * turn * ex;
            field_z += sign * ez;
            let weight = self.kernel.image_weight;
            if weight != 0.0 {
                let (p, ex, ez) = segment(x, field.z, (source.x, -source.z), (source.along.0, -source.along.1), source.length, false);
                potential += sign * weight * p;
                field_x += sign * weight * turn * ex;
                // A charge on the surface has its image just below itself: half its density points up.
                let ez = if own && field.z == 0.0 { 0.5 / source.length } else { ez };
                field_z += sign * weight * ez;
            }
            if let Some(mirror_table) = table {
                let (p, ex, ez) = self.remainder(self.table(mirror_table), x, field, source, source_weights);
                potential += sign * p;
                field_x += sign * turn * ex;
                field_z += sign * ez;
            }
        }
        (potential, field_x, field_z)
    }

    fn remainder(&self, table: &Table, x: f64, field: &Field, source: &Panel, source_weights: &[f64]) -> (f64, f64, f64) {
        let (mut potential, mut field_x, mut field_z) = (0.0, 0.0, 0.0);
        let (start, end) = (source.x - x, source.x + source.length * source.along.0 - x);
        let flat = source.along.1.abs() < 1e-9;
        let middle = 0.5 * (start + end);
        for (one, (weight, slope)) in field.weights.iter().zip(&field.slopes).enumerate() {
            let (mut value, mut along) = (0.0, 0.0);
            for (other, source_weight) in source_weights.iter().enumerate() {
                // A flat panel at a tabulated height has a single weight that is not zero.
                if *source_weight == 0.0 {
                    continue;
                }
                let pair = table.pair(one, other);
                if flat {
                    value += source_weight * (table.antiderivative(pair, end) - table.antiderivative(pair, start)) / source.length;
                    along += source_weight * (table.value(pair, end) - table.value(pair, start)) / source.length;
                } else {
                    value += source_weight * table.value(pair, middle);
                    along += source_weight * table.slope(pair, middle);
                }
            }
            potential += weight * value;
            // E_x = -dR/dx of the field point = dR/d(source - field).
            field_x += weight * along;
            field_z -= slope * value;
        }
        (potential, field_x, field_z)
    }
}

/// Potential and field of a straight panel of unit charge, in units of eps0.
fn segment(x: f64, z: f64, start: (f64, f64), along: (f64, f64), length: f64, own: bool) -> (f64, f64, f64) {
    let factor = 0.5 / (std::f64::consts::PI * length);
    let (dx, dz) = (start.0 - x, start.1 - z);
    let low = dx * along.0 + dz * along.1;
    let high = low + length;
    let mut across = dx * along.1 - dz * along.0;
    if own || across.abs() < 1e-13 * length {
        across = 0.0;
    }
    let angle = if across == 0.0 { 0.0 } else { (high / across).atan() - (low / across).atan() };
    let logs = |s: f64| 0.5 * (s * s + across * across).max(f64::MIN_POSITIVE).ln();
    let (log_low, log_high) = (logs(low), logs(high));
    let potential = -factor * (high * log_high - low * log_low - length + across * angle);
    let (tangential, normal) = (-factor * (log_high - log_low), -factor * angle);
    (potential, tangential * along.0 + normal * along.1, tangential * along.1 - normal * along.0)
}

/// A field point with its weights over the tabulated heights, and their slopes.
struct Field {
    x: f64,
    z: f64,
    weights: Vec<f64>,
    slopes: Vec<f64>,
}

impl Field {
    fn new(panel: &Panel, heights: &[f64]) -> Field {
        let (x, z) = panel.middle();
        let z = z.clamp(0.0, heights.last().copied().unwrap_or(0.0));
        let weights = lagrange(heights, z);
        let slopes = (0..heights.len())
            .map(|i| {
                // d/dz of the product: one factor after the other replaced by its slope.
                (0..heights.len())
                    .filter(|&j| j != i)
                    .map(|j| {
                        let rest: f64 = (0..heights.len())
                            .filter(|&m| m != i && m != j)
                            .map(|m| (z - heights[m]) / (heights[i] - heights[m]))
                            .product();
                        rest / (heights[i] - heights[j])
                    })
                    .sum()
            })
            .collect();
        Field { x, z, weights, slopes }
    }
}

fn capacitance(room: &Room, panels: &[Panel], strips: usize, coat_permittivity: f64) -> Result<Matrix, Problem> {
    let size = panels.len();
    let fields: Vec<Field> = panels.iter().map(|panel| Field::new(panel, &room.heights)).collect();
    let mut matrix = Square::zero(size);
    // Field above a sheet, needed for its free charge.
    let mut above = Vec::new();
    for (row, (panel, field)) in panels.iter().zip(&fields).enumerate() {
        let mut normal_row = vec![0.0; size];
        let target = matrix.row_mut(row, 0, size);
        for (column, source) in panels.iter().enumerate() {
            let (potential, field_x, field_z) = room.at(field, source, &fields[column].weights, row == column);
            let normal = field_x * panel.normal.0 + field_z * panel.normal.1;
            normal_row[column] = normal;
            target[column] = match panel.kind {
                Kind::Metal(..) => potential,
                // Times the length, so that the diagonal is of order one.
                Kind::Coat(front, back) => panel.length * (front - back) * normal + if row == column { 0.5 * (front + back) } else { 0.0 },
            };
        }
        if panel.kind == Kind::Metal(strip_of(panel), 0.0) {
            normal_row[row] += 0.5 / panel.length;
            above.push((row, normal_row));
        }
    }
    let mut vectors: Vec<Vec<f64>> = (0..strips)
        .map(|strip| panels.iter().map(|panel| if matches!(panel.kind, Kind::Metal(own, _) if own == strip) { 1.0 } else { 0.0 }).collect())
        .collect();
    if !solve_in_place(&mut matrix, &mut vectors) {
        return Err(fault(
            "section-not-converged",
            "coat",
            "the charges of the coat cannot be told apart".into(),
            "look for a coat that is very thin against the widths",
        ));
    }
    let mut out = vec![vec![0.0; strips]; strips];
    for (driven, charges) in vectors.iter().enumerate() {
        for (panel, charge) in panels.iter().zip(charges) {
            if let Kind::Metal(strip, beside) = panel.kind {
                // Bare panels carry the coat's permittivity too; without a coat it is one.
                let beside = if beside == 1.0 || beside == 0.0 || coat_permittivity == 1.0 { 1.0 } else { beside };
                out[strip][driven] += beside * charge;
            }
        }
        for (row, normals) in &above {
            let panel = &panels[*row];
            let field: f64 = normals.iter().zip(charges).map(|(normal, charge)| normal * charge).sum();
            out[strip_of(panel)][driven] += (coat_permittivity - 1.0) * field * panel.length;
        }
    }
    Ok(out)
}

fn strip_of(panel: &Panel) -> usize {
    match panel.kind {
        Kind::Metal(strip, _) => strip,
        Kind::Coat(..) => usize::MAX,
    }
}
