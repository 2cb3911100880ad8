//! From a geometry to a response with its error bar: forecast, two meshes, a rational sweep.

use num_complex::Complex64;

use super::analysis::{Analysis, Mesh};
use super::far::{Modes, Split};
use super::geometry::Geometry;
use super::grid::Unknowns;
use super::structure::Structure;
use super::sweep::{SweepOptions, sweep};
use crate::base::Place;
use crate::base::Problem;
use crate::network::Method;
use crate::network::Response;

/// What may be chosen.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Options {
    /// Density of the finer mesh: 1 is the plain grid, 2 halves every cell.
    pub refine: f64,
    /// Density of the coarser mesh over the finer one.
    pub coarser: f64,
    /// Height of the stairs that replace slants; none chooses a tenth of the substrate height.
    pub stair_m: Option<f64>,
    /// Greatest number of unknowns.
    pub limit: usize,
    /// Accuracy of the rational fit.
    pub sweep: SweepOptions,
    /// Modes of the far part.
    pub split: Split,
}

/// Beyond this the solution of one frequency takes more than half a minute on two cores.
pub const LIMIT: usize = 6000;

impl Default for Options {
    fn default() -> Options {
        Options { refine: 1.0, coarser: 0.7, stair_m: None, limit: LIMIT, sweep: SweepOptions::default(), split: Split::default() }
    }
}

/// What a run will take.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Forecast {
    /// Unknown currents of the finer and of the coarser mesh.
    pub unknowns: [usize; 2],
    /// Peak memory, bytes.
    pub memory_bytes: f64,
    /// Time for one frequency on both meshes, seconds, and for the usual dozen.
    pub seconds: [f64; 2],
}

/// Solves usual for a sweep; see the tests of `sweep`.
const USUAL_SOLVES: f64 = 12.0;
/// Arithmetic rate assumed for the forecast: two cores of the machine this was measured on, complex elimination.
const FLOPS_PER_SECOND: f64 = 4e10;
/// Measured ratio of filling to arithmetic: operations for each entry of the matrix and each mode along one axis.
const FILL_PER_ENTRY: f64 = 4.0;

impl Forecast {
    fn new(structures: [&Structure; 2], has_conductor: bool, highest_hz: f64, split: Split) -> Forecast {
        let mut forecast = Forecast { unknowns: [0; 2], memory_bytes: 0.0, seconds: [0.0; 2] };
        for (unknowns, structure) in forecast.unknowns.iter_mut().zip(structures) {
            let count = Unknowns::new(&structure.patches, structure.size_m);
            let n = count.count() as f64;
            let blocks = [count.cells.size, count.along_x.size, count.along_y.size].map(|s| (s * s) as f64).iter().sum::<f64>();
            let real = structure.stack.is_lossless() && !has_conductor;
            let parts = if real { 1.0 } else { 2.0 };
            // Near part twice, potentials once (each part), the matrix, its copy in complex form, its factors.
            let bytes = 8.0 * (2.0 * blocks + parts * blocks + n * n * if real { 2.0 } else { 2.0 + 2.0 + 2.0 });
            let modes = Modes::new(&structure.stack, structure.size_m, highest_hz, split);
            let elimination = if real { n.powi(3) / 3.0 } else { 8.0 / 3.0 * n.powi(3) };
            let fill = FILL_PER_ENTRY * blocks * modes.count[0].max(modes.count[1]) as f64 * parts;
            *unknowns = count.count();
            forecast.memory_bytes = forecast.memory_bytes.max(bytes);
            forecast.seconds[0] += (elimination + fill) / FLOPS_PER_SECOND;
        }
        forecast.seconds[1] = USUAL_SOLVES * forecast.seconds[0];
        forecast
    }
}

/// Where a run is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Step {
    /// Matrices that do not change with frequency are being built: mesh 1 (finer) or 2 (coarser).
    Preparing(usize),
    /// Frequencies solved so far on a mesh, and how far the fit moved last.
    Solving(usize, usize, f64),
}

/// Two meshes of a geometry, ready to run.
pub struct Plan<'a> {
    geometry: &'a Geometry,
    options: Options,
    highest_hz: f64,
    meshes: [Mesh; 2],
    /// What it will take.
    pub forecast: Forecast,
}

/// A finished run.
#[derive(Clone, Debug, PartialEq)]
pub struct Solution {
    /// S-parameters of the finer mesh.
    pub response: Response,
    /// Those of the coarser mesh.
    pub coarser: Response,
    /// Greatest difference between the two over the sweep, for S11, S21, S12, S22: the error bar of the finer one. (The method is of second order and the
    /// finer mesh has 1.4 times the lines: its own error is about this difference.)
    pub error_bar: [f64; 4],
    /// Frequencies solved on each mesh.
    pub solves: [usize; 2],
    /// Unknowns of each mesh.
    pub unknowns: [usize; 2],
    /// Greatest change of the finer fit in its last step.
    pub fit_change: f64,
    /// Effective permittivity and impedance of each port's line at the middle of the sweep; none for a gap.
    pub lines: Vec<Option<(f64, Complex64)>>,
    /// Greatest distance between a stair and the slant it replaces.
    pub stair_error_m: f64,
}

impl<'a> Plan<'a> {
    /// Meshes a geometry for a sweep and says what it will take.
    ///
    /// # Errors
    /// Those of [`Mesh::new`]; `ports-not-two`; `mesh-too-large` with the density that would fit; `open-top-cutoffs` when the sweep crosses cut-offs of
    /// the open box and is too long to be solved point by point.
    pub fn new(geometry: &'a Geometry, f_hz: &[f64], options: Options) -> Result<Plan<'a>, Vec<Problem>> {
        let one = |problem| Err(vec![problem]);
        if geometry.ports.len() != 2 {
            let message = format!("{} ports; a response has exactly two", geometry.ports.len());
            return one(Problem::error("ports-not-two", Place::Whole, message, "give two [[port]] tables"));
        }
        let (Some(&lowest_hz), Some(&highest_hz)) = (f_hz.first(), f_hz.last()) else {
            return one(Problem::error("sweep-empty", Place::Whole, "no frequency is asked for", "give the sweep at least one frequency"));
        };
        let cutoffs = geometry.open_cutoffs_hz(lowest_hz, highest_hz);
        if let Some(first) = cutoffs.first()
            && f_hz.len() > MOST_DIRECT
        {
            let message = format!(
                "the box is open and modes of its walls begin to leave at {} frequencies within the sweep, the first at {:.4} GHz: the response is no \
                 rational function there",
                cutoffs.len(),
                first / 1e9
            );
            let help =
                format!("give a lid, make the box smaller, or ask for at most {MOST_DIRECT} points, which are then solved one by one");
            return one(Problem::error("open-top-cutoffs", Place::Whole, message, help));
        }
        let stair_m = options.stair_m.unwrap_or(0.1 * geometry.stack.below_m());
        let finer = Mesh::new(geometry, highest_hz, options.refine, stair_m)?;
        let coarse = Mesh::new(geometry, highest_hz, options.refine * options.coarser, stair_m)?;
        let forecast = Forecast::new([&finer.structure, &coarse.structure], geometry.conductor.is_some(), highest_hz, options.split);
        if forecast.unknowns[0] > options.limit {
            let mut refine = options.refine;
            for _ in 0..8 {
                refine /= 1.25;
                let mesh = Mesh::new(geometry, highest_hz, refine, stair_m)?;
                if Unknowns::new(&mesh.structure.patches, mesh.structure.size_m).count() <= options.limit {
                    break;
                }
            }
            let message = format!(
                "the mesh has {} unknowns ({:.0} MB, some {:.0} s), allowed are {}",
                forecast.unknowns[0],
                forecast.memory_bytes / 1e6,
                forecast.seconds[1],
                options.limit
            );
            let help = format!("a density of {refine:.2} instead of {:.2} would fit; or raise the limit", options.refine);
            return one(Problem::error("mesh-too-large", Place::Whole, message, help));
        }
        Ok(Plan { geometry, options, highest_hz, meshes: [finer, coarse], forecast })
    }

    /// Runs the coarser mesh, then the finer one. `go_on` hears of every step and may stop the work by answering `false`.
    ///
    /// # Errors
    /// Those of [`sweep`] and [`Analysis::at`].
    pub fn run(self, f_hz: &[f64], mut go_on: impl FnMut(Step) -> bool) -> Result<Solution, Vec<Problem>> {
        let stair_error_m = self.meshes[0].stair_error_m;
        let z0_ohm = [self.geometry.ports[0].reference_ohm, self.geometry.ports[1].reference_ohm];
        let direct = !self.geometry.open_cutoffs_hz(f_hz.first().copied().unwrap_or(0.0), self.highest_hz).is_empty();
        let mut runs = Vec::new();
        let mut lines = Vec::new();
        for (index, mesh) in self.meshes.into_iter().enumerate().rev() {
            if !go_on(Step::Preparing(index + 1)) {
                return Err(vec![Problem::error("sweep-interrupted", Place::Whole, "stopped before the first frequency", "run it again")]);
            }
            let analysis = Analysis::new(mesh, self.geometry, self.highest_hz, self.options.split).map_err(|p| vec![p])?;
            let solve = |f: f64| analysis.at(f).map(|solved| solved.s);
            let options = SweepOptions {
                // One by one: every wanted frequency is solved, nothing is fitted.
                most_solves: if direct { usize::MAX } else { self.options.sweep.most_solves },
                // The coarser mesh only says how far off the finer one may be.
                tolerance: if direct { 0.0 } else { self.options.sweep.tolerance * if index == 0 { 1.0 } else { 10.0 } },
            };
            let swept = sweep(f_hz, &options, solve, |done, change| go_on(Step::Solving(index + 1, done, change))).map_err(|p| vec![p])?;
            if index == 0 {
                let middle = f_hz[f_hz.len() / 2];
                let solved = analysis.at(middle).map_err(|p| vec![p])?;
                lines = solved.lines.iter().map(|l| l.map(|l| (l.eps_eff(middle), l.impedance_ohm))).collect();
            }
            // Row-major S11, S12, S21, S22 to the order of a response.
            let s = swept.values.iter().map(|v| [v[0], v[2], v[1], v[3]]).collect();
            let response = Response { method: Method::FullWave, z0_ohm, f_hz: f_hz.to_vec(), s };
            runs.push((response, swept.solved_hz.len(), analysis.count(), swept.change));
        }
        let (Some(finer), Some(coarse)) = (runs.pop(), runs.pop()) else {
            return Err(vec![Problem::error("field-not-solved", Place::Whole, "no mesh was run", "run it again")]);
        };
        let mut error_bar = [0.0f64; 4];
        for (a, b) in finer.0.s.iter().zip(&coarse.0.s) {
            for (bar, (a, b)) in error_bar.iter_mut().zip(a.iter().zip(b)) {
                *bar = bar.max((a - b).norm());
            }
        }
        Ok(Solution {
            error_bar,
            solves: [finer.1, coarse.1],
            unknowns: [finer.2, coarse.2],
            fit_change: finer.3,
            response: finer.0,
            coarser: coarse.0,
            lines,
            stair_error_m,
        })
    }
}

/// So many frequencies may be solved one by one where no fit holds.
pub const MOST_DIRECT: usize = 60;
