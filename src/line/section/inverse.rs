//! Which width and gap give the impedances that are wanted?

use crate::base::Problem;

use super::fast::{pair_roughly, single_roughly};
use super::geometry::fault;
use super::results::{Mode, Pair};
use super::stackup::Stackup;

/// Steps on the coarse grid at most; from a fair start four are usual.
const COARSE_STEPS: usize = 40;
/// Steps on both grids at most.
const FINE_STEPS: usize = 12;
/// Residual in ln Z0 at which the coarse search hands over: the coarse grid itself is about this good.
const COARSE_TOLERANCE: f64 = 3e-3;
/// Residual in ln Z0 that counts as reached.
const TOLERANCE: f64 = 2e-5;
/// Residual from which one more step is taken without looking: slopes good to some per cent land within `TOLERANCE`.
const UNCHECKED: f64 = 2e-4;
/// Largest change of ln(width) or ln(gap) in one step.
const STEP_AT_MOST: f64 = 0.8;
/// Step of the slopes in ln(width) and ln(gap).
const SLOPE_STEP: f64 = 0.02;
/// Widths and gaps looked for, in units of the substrate's thickness.
const SIZES: [f64; 2] = [1e-3, 200.0];

type Vector = [f64; 2];
type Slopes = [Vector; 2];

impl Stackup {
    /// Width and gap of two equal strips with these even- and odd-mode impedances (static).
    ///
    /// # Units
    /// Ohm; metres at the foot. `start` is where to begin (width, gap), from a neighbouring answer or a closed form.
    /// # Valid range
    /// Width and gap from 0.001 to 200 substrate thicknesses, Z0e above Z0o.
    /// # Accuracy
    /// Both impedances within 2e-5 of those asked for, as the solver sees them.
    /// # Errors
    /// `impedances-unreachable`.
    pub fn pair_for(&self, even_ohm: f64, odd_ohm: f64, start: Option<(f64, f64)>) -> Result<(f64, f64), Problem> {
        let unreachable = || {
            fault(
                "impedances-unreachable",
                "",
                format!("no width and gap on this stackup gives {even_ohm:.3} ohm even and {odd_ohm:.3} ohm odd"),
                "ask for a weaker coupling, or choose another laminate thickness",
            )
        };
        if !(even_ohm.is_finite() && odd_ohm > 0.0 && even_ohm > odd_ohm) {
            return Err(unreachable());
        }
        let height = self.height_m();
        let residual = |pair: &Pair| [(pair.even.z0_ohm() / even_ohm).ln(), (pair.odd.z0_ohm() / odd_ohm).ln()];
        let rough = |at: Vector| pair_roughly(self, at[0].exp(), at[1].exp()).map(|pair| residual(&pair)).map_err(|_| unreachable());
        let mut at = match start {
            Some((width, gap)) if width > 0.0 && gap > 0.0 => [width.ln(), gap.ln()],
            _ => self.first_guess(even_ohm, odd_ohm),
        };
        let (low, high) = ((SIZES[0] * height).ln(), (SIZES[1] * height).ln());
        let narrowest = low.max((2.0 * self.copper.undercut_m * 1.0001).max(f64::MIN_POSITIVE).ln());
        let clip = |at: Vector| [at[0].clamp(narrowest, high), at[1].clamp(low, high)];
        at = clip(at);
        let mut now = rough(at)?;
        let mut slopes = slopes_at(&rough, at, now)?;
        let mut reached = false;
        for step in 0..COARSE_STEPS {
            if size(now) < COARSE_TOLERANCE {
                reached = true;
                break;
            }
            let mut change = clipped(newton(&slopes, now).ok_or_else(unreachable)?);
            let mut next = clip([at[0] + change[0], at[1] + change[1]]);
            let mut after = rough(next)?;
            if size(after) > 0.9 * size(now) {
                // The slopes have grown old, or the step was too long.
                slopes = slopes_at(&rough, at, now)?;
                change = clipped(newton(&slopes, now).ok_or_else(unreachable)?);
                let shorter = if step > COARSE_STEPS / 2 { 0.5 } else { 1.0 };
                next = clip([at[0] + shorter * change[0], at[1] + shorter * change[1]]);
                after = rough(next)?;
            }
            slopes = broyden(slopes, [next[0] - at[0], next[1] - at[1]], [after[0] - now[0], after[1] - now[1]]);
            (at, now) = (next, after);
        }
        if !reached {
            return Err(unreachable());
        }
        let exact = |at: Vector| self.symmetric_pair(at[0].exp(), at[1].exp()).map(|pair| residual(&pair));
        let mut now = exact(at)?;
        for _ in 0..FINE_STEPS {
            if size(now) < TOLERANCE {
                return Ok((at[0].exp(), at[1].exp()));
            }
            let change = clipped(newton(&slopes, now).ok_or_else(unreachable)?);
            let next = clip([at[0] + change[0], at[1] + change[1]]);
            if size(now) < UNCHECKED {
                return Ok((next[0].exp(), next[1].exp()));
            }
            let after = exact(next)?;
            slopes = broyden(slopes, [next[0] - at[0], next[1] - at[1]], [after[0] - now[0], after[1] - now[1]]);
            (at, now) = (next, after);
        }
        if size(now) < TOLERANCE { Ok((at[0].exp(), at[1].exp())) } else { Err(unreachable()) }
    }

    /// Width of one strip with this impedance (static).
    ///
    /// # Units
    /// Ohm; metres at the foot.
    /// # Valid range
    /// Width from 0.001 to 200 substrate thicknesses.
    /// # Accuracy
    /// As [`Stackup::pair_for`].
    /// # Errors
    /// `impedances-unreachable`.
    pub fn width_for(&self, z0_ohm: f64, start: Option<f64>) -> Result<f64, Problem> {
        let unreachable = || {
            fault(
                "impedances-unreachable",
                "",
                format!("no width on this stackup gives {z0_ohm:.3} ohm"),
                "choose another impedance or another laminate thickness",
            )
        };
        if !(z0_ohm.is_finite() && z0_ohm > 0.0) {
            return Err(unreachable());
        }
        let height = self.height_m();
        let low = (SIZES[0] * height).max(2.0001 * self.copper.undercut_m).ln();
        let high = (SIZES[1] * height).ln();
        let residual = |mode: &Mode| (mode.z0_ohm() / z0_ohm).ln();
        let mut at = match start {
            Some(width) if width > 0.0 => width.ln(),
            _ => self.first_guess(1.2 * z0_ohm, z0_ohm)[0],
        }
        .clamp(low, high);
        // Secant steps, first on the coarse grid; Z0 falls with the width, slope between -1 and 0.
        let mut slope = -0.6;
        for fine in [false, true] {
            let value_at = |at: f64| {
                if fine { self.single(at.exp()).map(|line| line.mode) } else { single_roughly(self, at.exp()) }.map(|mode| residual(&mode))
            };
            let mut now = value_at(at).map_err(|_| unreachable())?;
            let goal = if fine { TOLERANCE } else { COARSE_TOLERANCE };
            for _ in 0..COARSE_STEPS {
                if now.abs() < goal {
                    break;
                }
                let next = (at - (now / slope).clamp(-1.5, 1.5)).clamp(low, high);
                if next == at {
                    return Err(unreachable());
                }
                let after = value_at(next).map_err(|_| unreachable())?;
                let seen = (after - now) / (next - at);
                if seen.is_finite() && (-1.5..-0.02).contains(&seen) {
                    slope = seen;
                }
                (at, now) = (next, after);
            }
            if now.abs() >= goal {
                return Err(unreachable());
            }
        }
        Ok(at.exp())
    }

    fn height_m(&self) -> f64 {
        self.layers.iter().map(|layer| layer.thickness_m).sum()
    }

    /// Logarithms of width and gap to begin with: a wide strip's width from plate capacitance and fringe, the gap from the exponential fall of coupling.
    fn first_guess(&self, even_ohm: f64, odd_ohm: f64) -> Vector {
        let height = self.height_m();
        // Series of the layers' heights over permittivities.
        let series: f64 = self.layers.iter().map(|layer| layer.thickness_m / layer.permittivity).sum();
        let permittivity = height / series;
        let z0 = (even_ohm * odd_ohm).sqrt();
        let effective = 0.5 * (permittivity + 1.0) + 0.2 * (permittivity - 1.0);
        let air = z0 * effective.sqrt();
        // Z0 of a wide strip: 377 / (w/h + 2.4); of a narrow one 60 ln(8 h/w).
        let wide = 376.73 / air - 2.2;
        let ratio = if wide > 0.7 { wide } else { (8.0 * (-air / 59.96).exp()).max(1e-3) };
        let coupling = (even_ohm - odd_ohm) / (even_ohm + odd_ohm);
        let gap = (0.6 / coupling).ln().max(0.08) * 0.55;
        [(ratio * height).ln(), (gap * height).ln()]
    }
}

fn slopes_at(residual: &impl Fn(Vector) -> Result<Vector, Problem>, at: Vector, now: Vector) -> Result<Slopes, Problem> {
    let wider = residual([at[0] + SLOPE_STEP, at[1]])?;
    let farther = residual([at[0], at[1] + SLOPE_STEP])?;
    let slope = |after: f64, before: f64| (after - before) / SLOPE_STEP;
    Ok([[slope(wider[0], now[0]), slope(farther[0], now[0])], [slope(wider[1], now[1]), slope(farther[1], now[1])]])
}

fn size(residual: Vector) -> f64 {
    residual[0].abs().max(residual[1].abs())
}

fn newton(slopes: &Slopes, now: Vector) -> Option<Vector> {
    let determinant = slopes[0][0] * slopes[1][1] - slopes[0][1] * slopes[1][0];
    let change =
        [(-now[0] * slopes[1][1] + now[1] * slopes[0][1]) / determinant, (-now[1] * slopes[0][0] + now[0] * slopes[1][0]) / determinant];
    change.iter().all(|value| value.is_finite()).then_some(change)
}

fn clipped(change: Vector) -> Vector {
    let longest = size(change);
    let factor = if longest > STEP_AT_MOST { STEP_AT_MOST / longest } else { 1.0 };
    [factor * change[0], factor * change[1]]
}

/// Slopes that explain the last step as well (C. G. Broyden, Math. Comp. 19, 1965).
fn broyden(mut slopes: Slopes, step: Vector, change: Vector) -> Slopes {
    let length = step[0] * step[0] + step[1] * step[1];
    if length > 0.0 {
        for (row, change) in slopes.iter_mut().zip(change) {
            let missing = (change - row[0] * step[0] - row[1] * step[1]) / length;
            row[0] += missing * step[0];
            row[1] += missing * step[1];
        }
    }
    slopes
}
