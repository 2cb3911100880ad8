//! What is solved: layers, a metal box, copper on grid lines, sources; the moment matrix and its solution at one frequency.
//!
//! Galerkin's method with rooftop currents in mixed-potential form:
//! `Z = j w (Lambda - D Phi D' / w^2) + Zs O`, with `Lambda` and `Phi` the vector and scalar potential integrals, `D` the divergence, `O` the overlap.
//!
//! # Source
//! Rooftops in a box: J. C. Rautio & R. F. Harrington, IEEE Trans. MTT-35, 1987, pp. 726-730; static part taken out once: G. V. Eleftheriades,
//! J. R. Mosig & M. Guglielmi, IEEE Trans. MTT-44, 1996 (both from memory).

use std::f64::consts::PI;

use faer::linalg::solvers::Solve;
use faer::{Mat, MatRef, Side};
use num_complex::Complex64;
use rayon::prelude::*;

use super::far::{Modes, Potential, Split, Transforms, potential};
use super::grid::{Axis, Patch, Unknowns};
use super::kernel::Kernels;
use super::near::{Cut, Near};
use super::stack::{MU0, Stack};
use crate::base::Place;
use crate::base::Problem;
use crate::line::hammerstad_roughness_factor;

/// Thin-sheet surface impedance of the copper.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sheet {
    /// Conductivity, S/m.
    pub conductivity_s_per_m: f64,
    /// Thickness.
    pub thickness_m: f64,
    /// Rq of its surface (Hammerstad & Jensen 1980).
    pub roughness_m: f64,
    /// Factor on the impedance: what the thin sheet does not know of edges and of its two faces.
    pub factor: f64,
}

impl Sheet {
    /// Impedance per square of one face.
    pub fn impedance_ohm(&self, f_hz: f64) -> Complex64 {
        let depth = 1.0 / (PI * f_hz * MU0 * self.conductivity_s_per_m).sqrt();
        let wave = Complex64::new(1.0, 1.0);
        let argument = wave * (self.thickness_m / depth);
        // coth of a thick sheet is one; exp(-2 * 20) is below what a double can tell from it.
        let coth = if argument.re > 20.0 { Complex64::from(1.0) } else { argument.tanh().inv() };
        let rough = hammerstad_roughness_factor(f_hz, self.conductivity_s_per_m, self.roughness_m);
        wave * coth * (self.factor * rough / (self.conductivity_s_per_m * depth))
    }
}

/// A delta gap across a line of the grid: rooftops at `line` of `axis`, over some pulses of the other axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Source {
    /// Index of the patch.
    pub patch: usize,
    /// Direction of the current through the gap.
    pub axis: Axis,
    /// Index of the line.
    pub line: usize,
    /// Pulses across.
    pub across: std::ops::Range<usize>,
    /// Whether positive current runs against the axis (into the circuit from the far wall).
    pub reversed: bool,
}

/// Layers, box, copper and sources.
#[derive(Clone, Debug, PartialEq)]
pub struct Structure {
    /// Layers.
    pub stack: Stack,
    /// Inside of the box along x and y.
    pub size_m: [f64; 2],
    /// Copper.
    pub patches: Vec<Patch>,
    /// Sources, one a port.
    pub sources: Vec<Source>,
    /// Resistance of the copper; none for perfect conductors.
    pub sheet: Option<Sheet>,
}

/// Below this number of unknowns symmetric elimination is the faster on two cores (`cargo bench --bench field`).
const SYMMETRIC_BELOW: usize = 1500;

/// Everything of a structure that does not change with frequency.
pub struct Solver {
    structure: Structure,
    unknowns: Unknowns,
    modes: Modes,
    near: [Near; 3],
    transforms: [Transforms; 3],
    excitation: Vec<Vec<(usize, f64)>>,
}

impl Solver {
    /// Builds the near part and the transforms for frequencies up to `highest_hz`.
    ///
    /// # Errors
    /// `port-on-no-copper`: a source across a line no current crosses.
    pub fn new(structure: Structure, highest_hz: f64, split: Split) -> Result<Solver, Problem> {
        let unknowns = Unknowns::new(&structure.patches, structure.size_m);
        let modes = Modes::new(&structure.stack, structure.size_m, highest_hz, split).prepared();
        let lines = || structure.patches.iter().flat_map(|p| p.x_m.windows(2).chain(p.y_m.windows(2)));
        let smallest = lines().map(|w| w[1] - w[0]).fold(f64::INFINITY, f64::min);
        let cut = Cut::new(modes.cut_m, smallest);
        let families = [&unknowns.cells, &unknowns.along_x, &unknowns.along_y];
        let near = families.map(|family| Near::new(family, &structure.patches, structure.size_m, &cut));
        let transforms = families.map(|family| Transforms::new(family, &structure.patches, &modes));
        let excitation: Vec<Vec<(usize, f64)>> =
            structure.sources.iter().map(|source| excitation(source, &structure.patches, &unknowns)).collect();
        if let Some(index) = excitation.iter().position(Vec::is_empty) {
            let message = format!("no current can flow through port {}", index + 1);
            return Err(Problem::error("port-on-no-copper", Place::Whole, message, "place the port where copper crosses its line"));
        }
        Ok(Solver { structure, unknowns, modes, near, transforms, excitation })
    }

    /// What is solved.
    pub fn structure(&self) -> &Structure {
        &self.structure
    }

    /// Number of unknown currents.
    pub fn count(&self) -> usize {
        self.unknowns.count()
    }

    /// Number of modes in the far part.
    pub fn mode_count(&self) -> usize {
        self.modes.count[0] * self.modes.count[1]
    }

    /// Whether the matrix is real: no loss, no open top.
    pub fn is_real(&self) -> bool {
        self.structure.stack.is_lossless() && self.structure.sheet.is_none()
    }

    /// The moment matrix over `j w` at a frequency, column-major: real part and imaginary part (empty when there is no loss).
    pub fn matrix(&self, f_hz: f64) -> (Vec<f64>, Vec<f64>) {
        let kernels = Kernels::new(&self.structure.stack, f_hz);
        let lossless = self.structure.stack.is_lossless();
        let [vector, scalar] = self.modes.kernels(&kernels);
        let (l, p) = ([kernels.l1, kernels.l3], [kernels.p1, kernels.p3]);
        let mut phi = potential(&self.unknowns.cells, &self.near[0], &self.transforms[0], &scalar, p, lossless);
        for part in [&mut phi.real, &mut phi.imaginary] {
            if !part.is_empty() {
                mirror(part, self.unknowns.cells.size);
            }
        }
        let along_x = potential(&self.unknowns.along_x, &self.near[1], &self.transforms[1], &vector, l, lossless);
        let along_y = potential(&self.unknowns.along_y, &self.near[2], &self.transforms[2], &vector, l, lossless);
        let part = |which: fn(&Potential) -> &Vec<f64>| self.combined(which(&along_x), which(&along_y), which(&phi), kernels.omega);
        let mut real = part(|p| &p.real);
        let mut imaginary = if lossless { Vec::new() } else { part(|p| &p.imaginary) };
        if let Some(sheet) = &self.structure.sheet {
            if imaginary.is_empty() {
                imaginary = vec![0.0; real.len()];
            }
            let over = sheet.impedance_ohm(f_hz) / Complex64::new(0.0, kernels.omega);
            self.add_overlap(over, &mut real, &mut imaginary);
        }
        (real, imaginary)
    }

    /// `Lambda - D Phi D' / w^2`, both triangles.
    fn combined(&self, along_x: &[f64], along_y: &[f64], phi: &[f64], omega: f64) -> Vec<f64> {
        let (n, nx, ny, cells) = (self.count(), self.unknowns.along_x.size, self.unknowns.along_y.size, self.unknowns.cells.size);
        let rooftops = &self.unknowns.rooftops;
        let mut matrix = vec![0.0; n * n];
        let scale = -1.0 / (omega * omega);
        // Column i down to the diagonal; row-major rows of the potentials run the same way.
        matrix.par_chunks_mut(n).enumerate().for_each_init(
            || vec![0.0; cells],
            |from, (i, column)| {
                from.fill(0.0);
                for &(cell, divergence) in &rooftops[i].cells {
                    if divergence.abs() > 0.0 {
                        let d = divergence * scale;
                        for (value, p) in from.iter_mut().zip(&phi[cell * cells..(cell + 1) * cells]) {
                            *value += d * p;
                        }
                    }
                }
                for (value, other) in column[..=i].iter_mut().zip(rooftops) {
                    let [(a, da), (b, db)] = other.cells;
                    *value = da * from[a] + db * from[b];
                }
                if i < nx {
                    for (value, l) in column[..=i].iter_mut().zip(&along_x[i * nx..]) {
                        *value += l;
                    }
                } else {
                    let k = i - nx;
                    for (value, l) in column[nx..=i].iter_mut().zip(&along_y[k * ny..]) {
                        *value += l;
                    }
                }
            },
        );
        mirror(&mut matrix, n);
        matrix
    }

    /// Adds `over` times the overlap of rooftops in one row or column.
    fn add_overlap(&self, over: Complex64, real: &mut [f64], imaginary: &mut [f64]) {
        let n = self.count();
        let families = [(&self.unknowns.along_x, Axis::X, 0), (&self.unknowns.along_y, Axis::Y, self.unknowns.along_x.size)];
        for (family, axis, offset) in families {
            for group in &family.groups {
                let patch = &self.structure.patches[group.patch];
                for (position, &inner) in group.inner.iter().enumerate() {
                    // The line the current crosses, its width, and the rooftop at the next line.
                    let (line, width, next) = match axis {
                        Axis::X => {
                            (inner, patch.y_m[group.outer + 1] - patch.y_m[group.outer], family.number(group.patch, inner + 1, group.outer))
                        }
                        Axis::Y => {
                            (group.outer, patch.x_m[inner + 1] - patch.x_m[inner], family.number(group.patch, inner, group.outer + 1))
                        }
                    };
                    let at = offset + group.start + position;
                    let mut add = |a: usize, b: usize, value: f64| {
                        real[a * n + b] += over.re * value;
                        imaginary[a * n + b] += over.im * value;
                    };
                    // Integral of a triangle's square: a third of each side's length.
                    let cells = self.unknowns.rooftops[at].cells;
                    let sides: f64 = cells.iter().filter(|c| c.1.abs() > 0.0).map(|c| 1.0 / c.1.abs()).sum();
                    add(at, at, width * sides / 3.0);
                    // Rooftops at two lines share the cell between, if it is copper.
                    if let Some(next) = next.filter(|_| cells[1].1.abs() > 0.0) {
                        let lines = patch.lines(axis);
                        let shared = width * (lines[line + 1] - lines[line]) / 6.0;
                        add(at, offset + next, shared);
                        add(offset + next, at, shared);
                    }
                }
            }
        }
    }

    /// Short-circuit admittance matrix of the sources at a frequency, siemens, row-major.
    ///
    /// # Errors
    /// `field-not-solved`: a frequency on a resonance of the box, or a matrix singular to working precision.
    pub fn admittance(&self, f_hz: f64) -> Result<Vec<Complex64>, Problem> {
        let (n, ports) = (self.count(), self.excitation.len());
        let (real, imaginary) = self.matrix(f_hz);
        let mut right = Mat::<f64>::zeros(n, ports);
        for (port, entries) in self.excitation.iter().enumerate() {
            for &(row, value) in entries {
                right[(row, port)] = value;
            }
        }
        let currents: Mat<Complex64> = if imaginary.is_empty() {
            let matrix = MatRef::from_column_major_slice(&real, n, n);
            // The symmetric elimination does half the work but on one core.
            let solved = if n < SYMMETRIC_BELOW { matrix.lblt(Side::Lower).solve(&right) } else { matrix.partial_piv_lu().solve(&right) };
            Mat::from_fn(n, ports, |i, j| Complex64::from(solved[(i, j)]))
        } else {
            let values: Vec<Complex64> = real.into_par_iter().zip(imaginary).map(|(re, im)| Complex64::new(re, im)).collect();
            let matrix = MatRef::from_column_major_slice(&values, n, n);
            let right = Mat::from_fn(n, ports, |i, j| Complex64::from(right[(i, j)]));
            matrix.partial_piv_lu().solve(&right)
        };
        let over = Complex64::new(0.0, 2.0 * PI * f_hz).inv();
        let mut admittance = Vec::with_capacity(ports * ports);
        for entries in &self.excitation {
            for port in 0..ports {
                admittance.push(entries.iter().map(|&(row, value)| currents[(row, port)] * value).sum::<Complex64>() * over);
            }
        }
        if admittance.iter().all(|y| y.is_finite()) {
            Ok(admittance)
        } else {
            let message = format!("the currents at {} Hz are not finite", f_hz);
            Err(Problem::error(
                "field-not-solved",
                Place::Whole,
                message,
                "a frequency on a resonance of the lossless box: give the copper its loss",
            ))
        }
    }
}

/// Copies `[i n + j]`, `j < i`, to `[j n + i]`, in tiles that fit the cache.
fn mirror(matrix: &mut [f64], n: usize) {
    const TILE: usize = 64;
    for i0 in (0..n).step_by(TILE) {
        for j0 in (0..=i0).step_by(TILE) {
            for i in i0..(i0 + TILE).min(n) {
                for j in j0..(j0 + TILE).min(i) {
                    matrix[j * n + i] = matrix[i * n + j];
                }
            }
        }
    }
}

/// Rooftops a source drives, with the width of each and the sign of its current.
fn excitation(source: &Source, patches: &[Patch], unknowns: &Unknowns) -> Vec<(usize, f64)> {
    let (family, offset) = match source.axis {
        Axis::X => (&unknowns.along_x, 0),
        Axis::Y => (&unknowns.along_y, unknowns.along_x.size),
    };
    let sign = if source.reversed { -1.0 } else { 1.0 };
    let Some(patch) = patches.get(source.patch) else { return Vec::new() };
    let across = if source.axis == Axis::X { &patch.y_m } else { &patch.x_m };
    source
        .across
        .clone()
        .filter_map(|pulse| {
            let (inner, outer) = if source.axis == Axis::X { (source.line, pulse) } else { (pulse, source.line) };
            let number = family.number(source.patch, inner, outer)?;
            Some((offset + number, sign * (across.get(pulse + 1)? - across.get(pulse)?)))
        })
        .collect()
}
