//! How fast can one strip and two equal ones be solved? By their symmetry, on a stackup's tables and fixed grids.

use crate::base::Problem;

use super::assembly::{Block, Square, add_logarithms, add_remainder, combine};
use super::elimination::solve_in_place;
use super::geometry::fault;
use super::geometry::mm;
use super::green::Kernel;
use super::panels::{Contour, Grid, Interpolation};
use super::results::{Line, Mode, Pair};
use super::solve::{EPSILON_0, not_solvable, richardson, usable};
use super::stackup::{COARSE, Kernels, Stackup};

fn check_sizes(stackup: &Stackup, width_m: f64, gap_m: Option<f64>) -> Result<(), Problem> {
    if !(width_m.is_finite() && width_m > 0.0) {
        return Err(fault(
            "strip-width",
            "strip.width",
            format!("the strip is {} wide; more than zero is due", mm(width_m)),
            "give the width at the foot",
        ));
    }
    if let Some(gap_m) = gap_m
        && !(gap_m.is_finite() && gap_m > 0.0)
    {
        return Err(fault(
            "strip-overlap",
            "strip.gap-before",
            format!("the gap is {}; the strips overlap or touch", mm(gap_m)),
            "give a gap of more than zero",
        ));
    }
    if stackup.copper.thickness_m > 0.0 && 2.0 * stackup.copper.undercut_m >= width_m {
        return Err(fault(
            "undercut-exceeds-strip",
            "strip.width",
            format!("an undercut of {} per side leaves no top on a strip of {}", mm(stackup.copper.undercut_m), mm(width_m)),
            "make the strip wider than twice the undercut",
        ));
    }
    Ok(())
}

/// Both modes on one grid: C even, C odd, C0 even, C0 odd, in units of eps0.
fn pair_on(stackup: &Stackup, kernels: &Kernels, sides: &Interpolation, width_m: f64, gap_m: f64, grid: Grid) -> Result<[f64; 4], Problem> {
    let copper = stackup.copper;
    let strip = Contour::new(0.5 * gap_m, width_m, copper.thickness_m, copper.undercut_m, grid);
    let size = strip.len();
    let own = Block { row: 0, column: 0, mirror: None, same: true, sign: 1.0 };
    let other = Block { mirror: Some(0.0), same: false, ..own };
    let thick = copper.thickness_m > 0.0 && kernels.dielectric.image_weight != 0.0;
    let parts = |block: Block| {
        let mut direct = Square::zero(size);
        let mut image = thick.then(|| Square::zero(size));
        add_logarithms(&strip, &strip, block, &mut direct, image.as_mut());
        let remainder = |kernel: &Kernel| {
            let mut out = Square::zero(size);
            add_remainder(&strip, &strip, block, &kernel.table, &stackup.heights, sides, &mut out);
            out
        };
        let (dielectric, air) = (remainder(&kernels.dielectric), remainder(&kernels.air));
        let weighted = image.as_ref().unwrap_or(&direct);
        [combine(&direct, Some(weighted), &kernels.dielectric, dielectric), combine(&direct, None, &kernels.air, air)]
    };
    let (own, other) = (parts(own), parts(other));
    let mut out = [0.0; 4];
    for (medium, (own, other)) in own.iter().zip(&other).enumerate() {
        for (mode, sign) in [1.0, -1.0].into_iter().enumerate() {
            let mut matrix = own.clone();
            for (value, other) in matrix.values.iter_mut().zip(&other.values) {
                *value += sign * other;
            }
            let mut vectors = [vec![1.0; size]];
            if !solve_in_place(&mut matrix, &mut vectors) {
                return Err(not_solvable());
            }
            out[2 * medium + mode] = vectors[0].iter().sum();
        }
    }
    Ok(out)
}

pub(super) fn solve_pair(stackup: &Stackup, width_m: f64, gap_m: f64) -> Result<Pair, Problem> {
    check_sizes(stackup, width_m, Some(gap_m))?;
    let kernels = stackup.kernels(2.0 * width_m + gap_m)?;
    let [coarse, fine] = stackup.grids();
    let coarse = pair_on(stackup, kernels, &stackup.coarse, width_m, gap_m, coarse)?;
    let fine = pair_on(stackup, kernels, &stackup.fine, width_m, gap_m, fine)?;
    let mut estimate: f64 = 0.0;
    let mut values = [0.0; 4];
    for ((value, coarse), fine) in values.iter_mut().zip(coarse).zip(fine) {
        let (best, left) = richardson(coarse, fine);
        *value = best;
        estimate = estimate.max(left);
    }
    let [even, odd, even_air, odd_air] = values;
    Ok(Pair {
        even: Mode { capacitance_f_per_m: even, air_capacitance_f_per_m: even_air },
        odd: Mode { capacitance_f_per_m: odd, air_capacitance_f_per_m: odd_air },
        error_estimate: usable(estimate)?,
    })
}

/// The coarse grid alone: good to about one per cent, for slopes.
pub(super) fn pair_roughly(stackup: &Stackup, width_m: f64, gap_m: f64) -> Result<Pair, Problem> {
    check_sizes(stackup, width_m, Some(gap_m))?;
    let kernels = stackup.kernels(2.0 * width_m + gap_m)?;
    let [even, odd, even_air, odd_air] = pair_on(stackup, kernels, &stackup.coarse, width_m, gap_m, COARSE)?.map(|value| value * EPSILON_0);
    Ok(Pair {
        even: Mode { capacitance_f_per_m: even, air_capacitance_f_per_m: even_air },
        odd: Mode { capacitance_f_per_m: odd, air_capacitance_f_per_m: odd_air },
        error_estimate: 0.02,
    })
}

fn single_on(stackup: &Stackup, kernels: &Kernels, sides: &Interpolation, width_m: f64, grid: Grid) -> Result<[f64; 2], Problem> {
    let copper = stackup.copper;
    let strip = Contour::new(-0.5 * width_m, width_m, copper.thickness_m, copper.undercut_m, grid);
    let size = strip.len();
    let block = Block { row: 0, column: 0, mirror: None, same: true, sign: 1.0 };
    let mut direct = Square::zero(size);
    let mut image = (copper.thickness_m > 0.0 && kernels.dielectric.image_weight != 0.0).then(|| Square::zero(size));
    add_logarithms(&strip, &strip, block, &mut direct, image.as_mut());
    let image = image.as_ref().unwrap_or(&direct);
    let mut out = [0.0; 2];
    for (value, kernel) in out.iter_mut().zip([&kernels.dielectric, &kernels.air]) {
        let mut remainder = Square::zero(size);
        add_remainder(&strip, &strip, block, &kernel.table, &stackup.heights, sides, &mut remainder);
        let mut matrix = combine(&direct, Some(image), kernel, remainder);
        let mut vectors = [vec![1.0; size]];
        if !solve_in_place(&mut matrix, &mut vectors) {
            return Err(not_solvable());
        }
        *value = vectors[0].iter().sum();
    }
    Ok(out)
}

pub(super) fn solve_single(stackup: &Stackup, width_m: f64) -> Result<Line, Problem> {
    check_sizes(stackup, width_m, None)?;
    let kernels = stackup.kernels(width_m)?;
    let [coarse, fine] = stackup.grids();
    let coarse = single_on(stackup, kernels, &stackup.coarse, width_m, coarse)?;
    let fine = single_on(stackup, kernels, &stackup.fine, width_m, fine)?;
    let (capacitance, left) = richardson(coarse[0], fine[0]);
    let (air, left_air) = richardson(coarse[1], fine[1]);
    Ok(Line { mode: Mode { capacitance_f_per_m: capacitance, air_capacitance_f_per_m: air }, error_estimate: usable(left.max(left_air))? })
}

/// The coarse grid alone, for one strip.
pub(super) fn single_roughly(stackup: &Stackup, width_m: f64) -> Result<Mode, Problem> {
    check_sizes(stackup, width_m, None)?;
    let kernels = stackup.kernels(width_m)?;
    let [capacitance, air] = single_on(stackup, kernels, &stackup.coarse, width_m, COARSE)?.map(|value| value * EPSILON_0);
    Ok(Mode { capacitance_f_per_m: capacitance, air_capacitance_f_per_m: air })
}
