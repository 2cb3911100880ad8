//! How does a geometry respond at one frequency: mesh, ports calibrated by their feeds, scattering parameters.

use faer::Mat;
use faer::linalg::solvers::{DenseSolveCore, Solve};
use num_complex::Complex64;

use super::calibrate::{Calibration, Feed, PortLine};
use super::far::Split;
use super::geometry::{Geometry, GeometryPort, PortPlace};
use super::grid::{Axis, Patch, SAME_PLACE_M};
use super::mesh::{Meshing, patch};
use super::outline::Outline;
use super::structure::{Sheet, Solver, Source, Structure};
use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::line::AsBuilt;
use crate::line::C_M_PER_S;
use crate::line::StaticsModel;
use crate::line::Strip;
use crate::order::Side;

/// Cells along a line: at least this many a wavelength on the plain grid.
const CELLS_PER_WAVELENGTH: f64 = 60.0;
/// Copper closer to a piece than this many substrate heights sharpens its charge.
const REACH_HEIGHTS: f64 = 2.0;
/// Narrowest gap a mesh resolves, as a share of the substrate height: below it the near part would need cells a thousandth of its range.
const NARROWEST_GAP: f64 = 2e-3;

/// A geometry on its grid, with what each port looks into.
#[derive(Clone, Debug)]
pub struct Mesh {
    /// Layers, box, copper and sources.
    pub structure: Structure,
    /// The distinct feeds.
    pub feeds: Vec<Feed>,
    /// For each port its feed, none for a gap in a strip.
    pub feed_of_port: Vec<Option<usize>>,
    /// Reference impedance of each port.
    pub reference_ohm: Vec<f64>,
    /// Greatest distance between a stair and the slant it replaces.
    pub stair_error_m: f64,
}

impl Mesh {
    /// The grid of a geometry for frequencies up to `highest_hz`; `refine` 1 is the plain grid, 2 halves every cell.
    ///
    /// # Errors
    /// Those of [`Geometry::problems`], `gap-not-resolved`, `feed-not-straight`.
    pub fn new(geometry: &Geometry, highest_hz: f64, refine: f64, stair_m: f64) -> Result<Mesh, Vec<Problem>> {
        let found = geometry.problems();
        if !found.is_empty() {
            return Err(found);
        }
        let height = geometry.stack.below_m();
        let smallest_gap = narrowest_gap(geometry);
        if let Some((gap_m, at)) = smallest_gap
            && gap_m < NARROWEST_GAP * height
        {
            let message = format!("a gap of {:.4} mm is too narrow for a mesh over {:.3} mm of laminate", gap_m * 1e3, height * 1e3);
            let help = format!("widen it to {:.4} mm, or join the copper", NARROWEST_GAP * height * 1e3);
            return Err(vec![Problem::error("gap-not-resolved", Place::Board(at), message, help)]);
        }
        // Between the mean of substrate and air and the substrate itself: no strip is slower.
        let slowest = 0.25 + 0.75 * geometry.stack.below.iter().map(|l| l.permittivity).fold(1.0, f64::max);
        let meshing = Meshing { greatest_m: C_M_PER_S / (highest_hz * slowest.sqrt() * CELLS_PER_WAVELENGTH), refine, stair_m };
        let outlines: Vec<Outline> = geometry.copper.pieces.iter().map(|piece| Outline::new(piece, stair_m)).collect();
        let size_m = geometry.size_m();
        let mut marks: Vec<[Vec<f64>; 2]> = vec![[Vec::new(), Vec::new()]; outlines.len()];
        for port in &geometry.ports {
            let (at, axis) = mark(geometry, port);
            if let Some(piece) = geometry.piece_at(on_copper(geometry, port)) {
                marks[piece][axis].push(at);
            }
        }
        let patches: Vec<Patch> = (0..outlines.len())
            .map(|i| patch(i, &outlines, [&marks[i][0], &marks[i][1]], size_m, REACH_HEIGHTS * height, &meshing))
            .collect();
        let mut mesh = Mesh {
            structure: Structure { stack: geometry.stack.clone(), size_m, patches, sources: Vec::new(), sheet: None },
            feeds: Vec::new(),
            feed_of_port: Vec::new(),
            reference_ohm: geometry.ports.iter().map(|p| p.reference_ohm).collect(),
            stair_error_m: outlines.iter().map(|o| o.stair_error_m).fold(0.0, f64::max),
        };
        let mut problems = Vec::new();
        for (number, port) in (1..).zip(&geometry.ports) {
            if let Err(problem) = mesh.add_port(geometry, number, port) {
                problems.push(problem);
            }
        }
        if problems.is_empty() { Ok(mesh) } else { Err(problems) }
    }

    fn add_port(&mut self, geometry: &Geometry, number: usize, port: &GeometryPort) -> Result<(), Problem> {
        let at = on_copper(geometry, port);
        let no_copper = || {
            Problem::error("port-on-no-copper", Place::Board(at), format!("port {number} lies on no copper"), "move the port onto a strip")
        };
        let index = geometry.piece_at(at).ok_or_else(no_copper)?;
        let size_m = self.structure.size_m;
        let patch = &self.structure.patches[index];
        match port.place {
            PortPlace::Wall { side, at, plane } => {
                let axis = if matches!(side, Side::Left | Side::Right) { Axis::X } else { Axis::Y };
                let far = matches!(side, Side::Right | Side::Top);
                // As seen from the wall: distance from it along x, place along it along y.
                let turned = if axis == Axis::X { patch.clone() } else { patch.transposed() };
                let (length, across_m) = if axis == Axis::X { (size_m[0], size_m[1]) } else { (size_m[1], size_m[0]) };
                let columns = turned.columns();
                let column = |i: usize| if far { columns - 1 - i } else { i };
                let along_m: Vec<f64> = if far { turned.x_m.iter().rev().map(|x| length - x).collect() } else { turned.x_m.clone() };
                let row = (0..turned.rows()).find(|&j| turned.y_m[j] <= at.m() && at.m() <= turned.y_m[j + 1]).ok_or_else(no_copper)?;
                let run = |i: usize| {
                    let is = |j: usize| turned.is_copper(column(i), j);
                    let first = (0..=row).rev().take_while(|&j| is(j)).last();
                    let last = (row..turned.rows()).take_while(|&j| is(j)).last();
                    first.zip(last).map(|(first, last)| first..last + 1)
                };
                let across = run(0).ok_or_else(no_copper)?;
                let planes = along_m.iter().position(|x| (x - plane.m()).abs() < SAME_PLACE_M);
                let straight = planes.is_some_and(|k| k > 0 && (0..k).all(|i| run(i).as_ref() == Some(&across)));
                let Some(k) = planes.filter(|_| straight && along_m[0].abs() < SAME_PLACE_M) else {
                    let message =
                        format!("port {number}: the strip does not run straight from the wall to its reference plane at {} mm", plane.mm());
                    return Err(Problem::error(
                        "feed-not-straight",
                        Place::Board(on_copper(geometry, port)),
                        message,
                        "shorten `plane`, or lengthen the straight feed",
                    ));
                };
                let feed = Feed {
                    across_m: turned.y_m[across.start..=across.end].to_vec(),
                    along_m: along_m[..=k].to_vec(),
                    box_across_m: across_m,
                };
                let line = if far { columns } else { 0 };
                self.structure.sources.push(Source { patch: index, axis, line, across, reversed: far });
                let known = self.feeds.iter().position(|f| f.same_as(&feed));
                self.feed_of_port.push(Some(known.unwrap_or(self.feeds.len())));
                if known.is_none() {
                    self.feeds.push(feed);
                }
            }
            PortPlace::Gap { from, to } => {
                let axis = if from.x == to.x { Axis::X } else { Axis::Y };
                let (place, ends) = match axis {
                    Axis::X => (from.x.m(), [from.y.m(), to.y.m()]),
                    Axis::Y => (from.y.m(), [from.x.m(), to.x.m()]),
                };
                let (low, high) = (ends[0].min(ends[1]), ends[0].max(ends[1]));
                let (lines, others) = match axis {
                    Axis::X => (&patch.x_m, &patch.y_m),
                    Axis::Y => (&patch.y_m, &patch.x_m),
                };
                let line = lines.iter().position(|x| (x - place).abs() < SAME_PLACE_M).ok_or_else(no_copper)?;
                let across: Vec<usize> = (0..others.len() - 1)
                    .filter(|&j| {
                        let middle = 0.5 * (others[j] + others[j + 1]);
                        low < middle && middle < high
                    })
                    .collect();
                let (Some(&first), Some(&last)) = (across.first(), across.last()) else { return Err(no_copper()) };
                self.structure.sources.push(Source { patch: index, axis, line, across: first..last + 1, reversed: false });
                self.feed_of_port.push(None);
            }
        }
        Ok(())
    }
}

/// The line a port asks for, and across which axis.
fn mark(geometry: &Geometry, port: &GeometryPort) -> (f64, usize) {
    match port.place {
        PortPlace::Wall { side, at, plane } => {
            let point = geometry.at_wall(side, at, plane);
            if matches!(side, Side::Left | Side::Right) { (point.x.m(), 0) } else { (point.y.m(), 1) }
        }
        PortPlace::Gap { from, to } if from.x == to.x => (from.x.m(), 0),
        PortPlace::Gap { from, .. } => (from.y.m(), 1),
    }
}

/// A point of the strip a port is on.
fn on_copper(geometry: &Geometry, port: &GeometryPort) -> Point {
    match port.place {
        PortPlace::Wall { side, at, .. } => geometry.at_wall(side, at, Nm::ZERO),
        PortPlace::Gap { from, to } => Point { x: Nm((from.x.0 + to.x.0) / 2), y: Nm((from.y.0 + to.y.0) / 2) },
    }
}

/// The narrowest gap between two pieces.
fn narrowest_gap(geometry: &Geometry) -> Option<(f64, Point)> {
    let pieces = &geometry.copper.pieces;
    let pairs = pieces.iter().enumerate().flat_map(|(i, one)| pieces[i + 1..].iter().map(move |other| (one, other)));
    pairs
        .filter_map(|(one, other)| one.region().closest_to(&other.region()))
        .map(|closest| (closest.distance_m, closest.middle()))
        .min_by(|a, b| a.0.total_cmp(&b.0))
}

/// A mesh with its matrices, ready for any frequency up to the one it was made for.
pub struct Analysis {
    solver: Solver,
    calibrations: Vec<Calibration>,
    mesh: Mesh,
}

/// A solved frequency.
#[derive(Clone, Debug, PartialEq)]
pub struct Solved {
    /// S-parameters, row-major, against the ports' reference impedances at their reference planes.
    pub s: Vec<Complex64>,
    /// What each port looks into; none for a gap.
    pub lines: Vec<Option<PortLine>>,
}

impl Analysis {
    /// Builds all that does not change with frequency. With a conductor the sheet's loss is scaled to the incremental-inductance loss of the first feed.
    ///
    /// # Errors
    /// Those of [`Solver::new`] and [`Calibration::at`].
    pub fn new(mut mesh: Mesh, geometry: &Geometry, highest_hz: f64, split: Split) -> Result<Analysis, Problem> {
        if let Some(conductor) = geometry.conductor {
            let plain = Sheet {
                conductivity_s_per_m: conductor.conductivity_s_per_m,
                thickness_m: conductor.thickness_m,
                roughness_m: 0.0,
                factor: 1.0,
            };
            let factor = match mesh.feeds.first() {
                Some(feed) => sheet_factor(feed, geometry, plain, highest_hz, split)?,
                None => 1.0,
            };
            mesh.structure.sheet = Some(Sheet { factor, roughness_m: conductor.roughness_m, ..plain });
        }
        let (stack, sheet) = (mesh.structure.stack.clone(), mesh.structure.sheet);
        let calibrations =
            mesh.feeds.iter().map(|feed| Calibration::new(feed, &stack, sheet, highest_hz, split)).collect::<Result<Vec<_>, _>>()?;
        let solver = Solver::new(mesh.structure.clone(), highest_hz, split)?;
        Ok(Analysis { solver, calibrations, mesh })
    }

    /// Unknown currents of the geometry itself.
    pub fn count(&self) -> usize {
        self.solver.count()
    }

    /// The mesh.
    pub fn mesh(&self) -> &Mesh {
        &self.mesh
    }

    /// Scattering parameters at a frequency.
    ///
    /// # Errors
    /// `calibration-inconsistent`, `field-not-solved`.
    pub fn at(&self, f_hz: f64) -> Result<Solved, Problem> {
        let feeds = self.calibrations.iter().map(|c| c.at(f_hz)).collect::<Result<Vec<_>, _>>()?;
        let lines: Vec<Option<PortLine>> = self.mesh.feed_of_port.iter().map(|f| f.and_then(|f| feeds.get(f).copied())).collect();
        let ports = lines.len();
        let mut y = self.solver.admittance(f_hz)?;
        // A delta gap across a strip is taken as it is: no shunt, no line.
        let impedance: Vec<Complex64> =
            lines.iter().zip(&self.mesh.reference_ohm).map(|(l, &r)| l.map_or(Complex64::from(r), |l| l.impedance_ohm)).collect();
        for (port, line) in lines.iter().enumerate() {
            if let Some(line) = line {
                y[port * ports + port] -= line.shunt_s;
            }
        }
        let mut s = scattering(&y, &impedance);
        let delay: Vec<Complex64> = lines
            .iter()
            .zip(&self.mesh.feed_of_port)
            .map(|(line, feed)| match (line, feed) {
                (Some(line), Some(feed)) => (line.gamma_per_m * self.mesh.feeds[*feed].length_m()).exp(),
                _ => Complex64::from(1.0),
            })
            .collect();
        for p in 0..ports {
            for q in 0..ports {
                s[p * ports + q] *= delay[p] * delay[q];
            }
        }
        let reference: Vec<Complex64> = self.mesh.reference_ohm.iter().map(|&r| Complex64::from(r)).collect();
        let s = scattering(&admittance(&s, &impedance), &reference);
        if s.iter().all(|v| v.is_finite()) {
            Ok(Solved { s, lines })
        } else {
            let message = format!("the response at {f_hz} Hz is not finite");
            Err(Problem::error(
                "field-not-solved",
                Place::Whole,
                message,
                "give the copper its loss, or move the frequency off a resonance of the box",
            ))
        }
    }
}

impl Feed {
    /// Whether two feeds are the same line, one perhaps mirrored in the middle of the box.
    fn same_as(&self, other: &Feed) -> bool {
        let near = |a: &mut dyn Iterator<Item = f64>, b: &[f64]| a.zip(b).all(|(a, b)| (a - b).abs() < SAME_PLACE_M);
        let width = self.box_across_m;
        self.across_m.len() == other.across_m.len()
            && self.along_m.len() == other.along_m.len()
            && (width - other.box_across_m).abs() < SAME_PLACE_M
            && near(&mut self.along_m.iter().copied(), &other.along_m)
            && (near(&mut self.across_m.iter().copied(), &other.across_m)
                || near(&mut self.across_m.iter().rev().map(|y| width - y), &other.across_m))
    }
}

/// Factor on the sheet impedance that gives the feed the conductor loss of the incremental-inductance rule (H. A. Wheeler, Proc. IRE 30, 1942).
///
/// A thin sheet has logarithmically divergent edge loss and does not know its two faces; only the rule's closed form fixes its level. Where that form does
/// not hold (several layers, a lid close by) the factor is that of one face.
fn sheet_factor(feed: &Feed, geometry: &Geometry, plain: Sheet, highest_hz: f64, split: Split) -> Result<f64, Problem> {
    let stack = &geometry.stack;
    let ([below], Some(conductor)) = (&stack.below[..], geometry.conductor) else { return Ok(1.0) };
    if stack.above_m() < 4.0 * below.thickness_m {
        return Ok(1.0);
    }
    let mut lossless = stack.clone();
    for layer in lossless.below.iter_mut().chain(&mut lossless.above) {
        layer.loss_tangent = 0.0;
    }
    let f_hz = highest_hz;
    let line = Calibration::new(feed, &lossless, Some(plain), highest_hz, split)?.at(f_hz)?;
    let (Some(first), Some(last)) = (feed.across_m.first(), feed.across_m.last()) else { return Ok(1.0) };
    let board = AsBuilt {
        permittivity: below.permittivity,
        in_plane_permittivity: below.permittivity,
        loss_tangent: 0.0,
        thickness_m: below.thickness_m,
        copper_thickness_m: conductor.thickness_m,
        undercut_m: 0.0,
        roughness_m: 0.0,
        ten_point_height_m: None,
        walls_m: None,
        coat: None,
        conductivity_s_per_m: conductor.conductivity_s_per_m,
        plating: None,
        hole_plating_m: 25e-6,
        lid_m: None,
        widening_m: 0.0,
        lossless: false,
        // The rule differentiates the closed form of the impedance.
        statics: StaticsModel::ClosedForm,
    };
    let wanted = Strip::new(&board, last - first).at(f_hz).conductor_np_per_m;
    let found = line.gamma_per_m.re;
    Ok(if found > 0.0 && wanted > 0.0 { wanted / found } else { 1.0 })
}

/// `S = (1 - y)(1 + y)^-1` with `y = sqrt(Zp) Y sqrt(Zq)`.
fn scattering(y: &[Complex64], z_ohm: &[Complex64]) -> Vec<Complex64> {
    let n = z_ohm.len();
    let one = |i: usize, j: usize| if i == j { Complex64::from(1.0) } else { Complex64::from(0.0) };
    let normal = |i: usize, j: usize| y[i * n + j] * z_ohm[i].sqrt() * z_ohm[j].sqrt();
    let plus = Mat::from_fn(n, n, |i, j| one(i, j) + normal(i, j));
    let minus = Mat::from_fn(n, n, |i, j| one(i, j) - normal(i, j));
    // (1 - y) and (1 + y)^-1 commute.
    let s = plus.partial_piv_lu().solve(&minus);
    (0..n * n).map(|k| s[(k / n, k % n)]).collect()
}

/// The inverse of [`scattering`].
fn admittance(s: &[Complex64], z_ohm: &[Complex64]) -> Vec<Complex64> {
    let n = z_ohm.len();
    let one = |i: usize, j: usize| if i == j { Complex64::from(1.0) } else { Complex64::from(0.0) };
    let plus = Mat::from_fn(n, n, |i, j| one(i, j) + s[i * n + j]);
    let minus = Mat::from_fn(n, n, |i, j| one(i, j) - s[i * n + j]);
    let y = plus.partial_piv_lu().inverse() * minus;
    (0..n * n).map(|k| y[(k / n, k % n)] / (z_ohm[k / n].sqrt() * z_ohm[k % n].sqrt())).collect()
}
