//! What are the capacitance and inductance per unit length? Two grids, one Richardson step, and an estimate of what is left.

use crate::base::Problem;

use super::assembly::{Block, Square, add_logarithms, add_remainder, combine};
use super::elimination::solve_in_place;
use super::geometry::CrossSection;
use super::geometry::fault;
use super::geometry::mm;
use super::green::{Kernel, Medium};
use super::panels::{Contour, Grid, Interpolation};
use super::results::Solved;
use super::stackup::{COARSE, COARSE_SHEET, Kernels, Stackup};

/// Permittivity of free space, F/m (CODATA 2018).
pub(super) const EPSILON_0: f64 = 8.854_187_812_8e-12;
/// Speed of light, m/s (exact).
pub(super) const LIGHT: f64 = 299_792_458.0;
/// C on n panels is low by about n^-2.83 (seen over 300 random pairs): this share of the difference to the grid of half as many is put back (Richardson).
const RICHARDSON: f64 = 0.164;
/// Share of that step that may still be missing or too much; twice what was seen (see `tests/section`).
const LEFT_OVER: f64 = 0.4;
/// The same on the coarsest grids, whose difference is not yet all of that order.
const LEFT_OVER_COARSEST: f64 = 0.8;
/// Panels per width from which the difference of the grids is of the order that [`RICHARDSON`] takes.
const FAIR_WIDTH: usize = 8;
/// Rounding and table errors that no grid removes.
const FLOOR: f64 = 2e-6;
/// Grids tried in turn for an accuracy asked for, as panels per width.
const GRIDS: [usize; 7] = [6, 8, 12, 16, 24, 32, 48];
/// Panels of all strips together at most: five matrices of that size take 100 MB.
const UNKNOWNS_AT_MOST: usize = 1600;
/// Coarser of the two grids for more than [`FEW`] strips: C within 0.1 %, and N = 9 in time.
const ARRAY: Grid = Grid::new(6);
/// Strips up to which an array has the panels of the fast pair.
const FEW: usize = 4;
/// An estimate above this says that the panels do not resolve the cross-section at all.
const HOPELESS: f64 = 0.05;

/// Capacitance and inductance matrices, to the relative accuracy asked for.
///
/// # Units
/// `accuracy`: relative error of the capacitances (1e-4 is 0.01 %); from 1e-5 up.
/// # Valid range
/// What [`CrossSection::check`] lets pass.
/// # Accuracy
/// `error_estimate` of the result; the table in [`crate::line::section`]. A coat adds its own error (some 1e-3 and less), which is in the estimate but is not held to
/// the accuracy asked for.
/// # Errors
/// The first problem of [`CrossSection::check`]; `section-not-converged` when the finest grid still misses the accuracy.
pub fn solve(section: &CrossSection, accuracy: f64) -> Result<Solved, Problem> {
    if let Some(problem) = section.check().into_iter().next() {
        return Err(problem);
    }
    if !(accuracy.is_finite() && accuracy >= 1e-5) {
        return Err(fault(
            "accuracy",
            "",
            format!("a relative accuracy of {accuracy:e} was asked for; 1e-5 or more can be had"),
            "ask for 1e-4, say",
        ));
    }
    let mut solved = solve_bare(section, accuracy)?;
    add_coat(section, &mut solved)?;
    Ok(solved)
}

/// Puts on top what the coat adds, and its error.
pub(super) fn add_coat(section: &CrossSection, solved: &mut Solved) -> Result<(), Problem> {
    let Some(coat) = section.coat else { return Ok(()) };
    let coated = super::coat::coat_adds(section, coat)?;
    for (row, added) in solved.capacitance_f_per_m.iter_mut().zip(&coated.added_f_per_m) {
        for (value, added) in row.iter_mut().zip(added) {
            *value += added;
        }
    }
    solved.error_estimate += coated.error_estimate;
    usable(solved.error_estimate).map(|_| ())
}

pub(super) fn solve_bare(section: &CrossSection, accuracy: f64) -> Result<Solved, Problem> {
    let tables = Tables::new(section)?;
    let shared = tables.borrow();
    let mut best: Option<Solved> = None;
    for coarse in GRIDS {
        let unknowns = section.strips.len() * Grid::new(2 * coarse).panels(section.copper.thickness_m > 0.0);
        if best.is_some() && unknowns > UNKNOWNS_AT_MOST {
            break;
        }
        let solved = solve_on(section, &shared, Grid::new(coarse))?;
        let good = solved.error_estimate <= accuracy;
        best = Some(solved);
        if good {
            break;
        }
    }
    match best {
        Some(solved) if solved.error_estimate <= accuracy => Ok(solved),
        Some(solved) => Err(not_converged(solved.error_estimate, accuracy)),
        None => Err(not_converged(f64::INFINITY, accuracy)),
    }
}

/// An estimate that says anything at all.
pub(super) fn usable(estimate: f64) -> Result<f64, Problem> {
    if estimate.is_finite() && estimate < HOPELESS { Ok(estimate) } else { Err(not_converged(estimate, HOPELESS)) }
}

fn not_converged(estimate: f64, accuracy: f64) -> Problem {
    fault(
        "section-not-converged",
        "",
        format!("the cross-section is solved to a relative error of {estimate:.1e} only; {accuracy:.1e} is due"),
        "ask for less accuracy, or look for a gap or thickness that is very small against the widths",
    )
}

/// Tables of one cross-section, made for it alone.
pub(super) struct Tables {
    kernels: Kernels,
    heights: Vec<f64>,
}

/// Tables of one cross-section, its own or a stackup's.
#[derive(Clone, Copy)]
pub(super) struct Shared<'a> {
    kernels: &'a Kernels,
    heights: &'a [f64],
}

impl Tables {
    pub(super) fn new(section: &CrossSection) -> Result<Tables, Problem> {
        let span = section.span_m();
        let walls = section.housing.wall_m.map(|wall| span + 2.0 * wall);
        let thickness = section.copper.thickness_m;
        let dielectric = Medium::new(&section.layers, section.housing.lid_m, walls, thickness);
        let air = Medium::air(&section.layers, section.housing.lid_m, walls, thickness);
        let heights = dielectric.heights_m();
        let reach = walls.unwrap_or(span);
        let octaves = |medium: &Medium| Kernel::octaves_for(medium, reach).ok_or_else(|| too_wide(reach));
        let kernels = Kernels {
            dielectric: Kernel::build(&dielectric, &heights, octaves(&dielectric)?),
            air: Kernel::build(&air, &heights, octaves(&air)?),
        };
        Ok(Tables { kernels, heights })
    }

    pub(super) fn borrow(&self) -> Shared<'_> {
        Shared { kernels: &self.kernels, heights: &self.heights }
    }
}

pub(super) fn too_wide(reach_m: f64) -> Problem {
    fault(
        "section-aspect",
        "",
        format!("a cross-section {} wide needs a larger table than is allowed", mm(reach_m)),
        "leave out far strips or walls, or merge a very thin top layer with its neighbour",
    )
}

fn has_dielectric(section: &CrossSection) -> bool {
    section.layers.iter().any(|layer| layer.permittivity != 1.0 || layer.in_plane_permittivity != 1.0)
}

/// Charges of all panels for given potentials of the strips, on one grid.
pub(super) struct Charges {
    pub(super) contours: Vec<Contour>,
    /// One vector over all panels for each set of potentials, in units of eps0.
    pub(super) dielectric: Vec<Vec<f64>>,
    pub(super) air: Vec<Vec<f64>>,
}

/// One unit of potential on each strip in turn.
pub(super) fn charges(section: &CrossSection, shared: &Shared<'_>, grid: Grid) -> Result<Charges, Problem> {
    let copper = section.copper;
    let contours: Vec<Contour> = section
        .left_edges_m()
        .iter()
        .zip(&section.strips)
        .map(|(left, strip)| Contour::new(*left, strip.width_m, copper.thickness_m, copper.undercut_m, grid))
        .collect();
    let size: usize = contours.iter().map(Contour::len).sum();
    let sides = Interpolation::new(shared.heights, grid.thickness);
    let (dielectric, air) = (&shared.kernels.dielectric, &shared.kernels.air);
    let has_dielectric = has_dielectric(section);
    let mut direct = Square::zero(size);
    let wants_image = has_dielectric && copper.thickness_m > 0.0 && dielectric.image_weight != 0.0;
    let mut image = wants_image.then(|| Square::zero(size));
    let mut remainder = Square::zero(size);
    let mut remainder_air = Square::zero(size);
    let wall_planes = section.housing.wall_m.map(|wall| 0.5 * section.span_m() + wall);
    let mut row = 0;
    for (i, field) in contours.iter().enumerate() {
        let mut column = 0;
        for (j, source) in contours.iter().enumerate() {
            let block = Block { row, column, mirror: None, same: i == j, sign: 1.0 };
            add_logarithms(field, source, block, &mut direct, image.as_mut());
            let mut tables = vec![(block, &dielectric.table, &air.table)];
            if let Some(plane) = wall_planes {
                let left = Block { mirror: Some(-plane), same: false, sign: -1.0, ..block };
                let right = Block { mirror: Some(plane), ..left };
                add_logarithms(field, source, left, &mut direct, image.as_mut());
                add_logarithms(field, source, right, &mut direct, image.as_mut());
                if let (Some(one), Some(other)) = (&dielectric.mirror_table, &air.mirror_table) {
                    tables.push((left, one, other));
                }
            }
            for (block, table, table_air) in tables {
                if has_dielectric {
                    add_remainder(field, source, block, table, shared.heights, &sides, &mut remainder);
                }
                add_remainder(field, source, block, table_air, shared.heights, &sides, &mut remainder_air);
            }
            column += source.len();
        }
        row += field.len();
    }
    let potentials = || {
        let mut first = 0;
        contours
            .iter()
            .map(|contour| {
                let mut vector = vec![0.0; size];
                vector[first..first + contour.len()].fill(1.0);
                first += contour.len();
                vector
            })
            .collect::<Vec<_>>()
    };
    let solve_one = |kernel: &Kernel, remainder: Square| {
        let image = image.as_ref().or((kernel.image_weight != 0.0).then_some(&direct));
        let mut matrix = combine(&direct, image, kernel, remainder);
        let mut vectors = potentials();
        if solve_in_place(&mut matrix, &mut vectors) { Ok(vectors) } else { Err(not_solvable()) }
    };
    let air_charges = solve_one(air, remainder_air)?;
    let dielectric_charges = if has_dielectric { solve_one(dielectric, remainder)? } else { air_charges.clone() };
    Ok(Charges { contours, dielectric: dielectric_charges, air: air_charges })
}

pub(super) fn not_solvable() -> Problem {
    fault(
        "section-not-converged",
        "",
        "the charges of this cross-section cannot be told apart in double precision".into(),
        "look for a size that is very small against the others",
    )
}

pub(super) fn total(charges: &Charges, vectors: &[Vec<f64>]) -> Vec<Vec<f64>> {
    let count = charges.contours.len();
    let mut matrix = vec![vec![0.0; count]; count];
    for (j, vector) in vectors.iter().enumerate() {
        let mut first = 0;
        for (i, contour) in charges.contours.iter().enumerate() {
            matrix[i][j] = vector[first..first + contour.len()].iter().sum();
            first += contour.len();
        }
    }
    matrix
}

/// Extrapolated, symmetrical matrix in F/m, and the error estimate.
fn extrapolate(coarse: &[Vec<f64>], fine: &[Vec<f64>], left_over: f64) -> (Vec<Vec<f64>>, f64) {
    let count = fine.len();
    let mut out = vec![vec![0.0; count]; count];
    let mut estimate: f64 = 0.0;
    for i in 0..count {
        for j in 0..count {
            let best = |i: usize, j: usize| fine[i][j] + RICHARDSON * (fine[i][j] - coarse[i][j]);
            let (one, other) = (best(i, j), best(j, i));
            out[i][j] = 0.5 * (one + other) * EPSILON_0;
            let scale = fine[i][i].min(fine[j][j]);
            let left = left_over * RICHARDSON * (fine[i][j] - coarse[i][j]).abs() + 0.5 * (one - other).abs();
            estimate = estimate.max(left / scale);
        }
    }
    (out, estimate + FLOOR)
}

fn solve_on(section: &CrossSection, shared: &Shared<'_>, coarse: Grid) -> Result<Solved, Problem> {
    let fine = coarse.doubled();
    let low = charges(section, shared, coarse)?;
    let high = charges(section, shared, fine)?;
    let left_over = if coarse.width < FAIR_WIDTH { LEFT_OVER_COARSEST } else { LEFT_OVER };
    let (capacitance, estimate) = extrapolate(&total(&low, &low.dielectric), &total(&high, &high.dielectric), left_over);
    let (air_capacitance, air_estimate) = extrapolate(&total(&low, &low.air), &total(&high, &high.air), left_over);
    let inductance = invert(&air_capacitance).ok_or_else(not_solvable)?;
    let inductance = inductance.into_iter().map(|row| row.into_iter().map(|value| value / (LIGHT * LIGHT)).collect()).collect();
    Ok(Solved {
        capacitance_f_per_m: capacitance,
        air_capacitance_f_per_m: air_capacitance,
        inductance_h_per_m: inductance,
        error_estimate: estimate.max(air_estimate),
        panels_per_width: fine.width,
    })
}

/// Extrapolated value in F/m, and the relative error to expect.
pub(super) fn richardson(coarse: f64, fine: f64) -> (f64, f64) {
    let step = RICHARDSON * (fine - coarse);
    let value = fine + step;
    (value * EPSILON_0, LEFT_OVER * (step / value).abs() + FLOOR)
}

/// Inverse of a small symmetric positive definite matrix.
pub(super) fn invert(matrix: &[Vec<f64>]) -> Option<Vec<Vec<f64>>> {
    let size = matrix.len();
    // In units that keep the pivots near one.
    let scale = matrix.first()?.first()?;
    let mut square = Square::zero(size);
    for (row, values) in matrix.iter().enumerate() {
        for (target, value) in square.row_mut(row, 0, size).iter_mut().zip(values) {
            *target = value / scale;
        }
    }
    let mut columns: Vec<Vec<f64>> = (0..size).map(|i| (0..size).map(|j| if i == j { 1.0 / scale } else { 0.0 }).collect()).collect();
    if !solve_in_place(&mut square, &mut columns) {
        return None;
    }
    Some((0..size).map(|i| (0..size).map(|j| 0.5 * (columns[j][i] + columns[i][j])).collect()).collect())
}

/// On the fixed grids of the fast path: smooth in every size.
pub(super) fn solve_fixed(section: &CrossSection) -> Result<Solved, Problem> {
    let tables = Tables::new(section)?;
    solve_on(section, &tables.borrow(), array_grid(section))
}

/// Coarser of the two grids of an array.
fn array_grid(section: &CrossSection) -> Grid {
    match (section.strips.len() > FEW, section.copper.thickness_m > 0.0) {
        (false, true) => COARSE,
        (false, false) => COARSE_SHEET,
        (true, true) => ARRAY,
        (true, false) => ARRAY.doubled(),
    }
}

/// Many strips on a stackup's tables, on the fixed grids of an array.
pub(super) fn solve_array(stackup: &Stackup, section: &CrossSection) -> Result<Solved, Problem> {
    if let Some(problem) = section.check().into_iter().next() {
        return Err(problem);
    }
    let shared = Shared { kernels: stackup.kernels(section.span_m())?, heights: &stackup.heights };
    let solved = solve_on(section, &shared, array_grid(section))?;
    usable(solved.error_estimate)?;
    Ok(solved)
}
