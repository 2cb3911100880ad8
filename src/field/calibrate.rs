//! What of a port is source and what is line: two standards give the shunt of the delta gap, the line's impedance and its propagation.
//!
//! # Source
//! Two through lines of different length: J. C. Rautio, IEEE Trans. MTT-39, 1991, pp. 2047-2050 ("double delay", from memory). With the shunt `Yp` of
//! the source, `T_line T_thru^-1 = E L(D) E^-1`, `E = [1 0; Yp 1]`, `L(D)` the chain matrix of the extra length.

use num_complex::Complex64;

use super::far::Split;
use super::grid::{Axis, Patch};
use super::stack::{Stack, Top};
use super::structure::{Sheet, Solver, Source, Structure};
use crate::base::Place;
use crate::base::Problem;
use crate::line::C_M_PER_S;

/// Greatest difference between the through standard and the line it should be; above it evanescent box modes reach from port to port.
const GREATEST_RESIDUAL: f64 = 1e-3;

/// Standards stand in a box no wider than this share of half a wavelength; at 0.6 evanescent modes still reach the reference plane with 1e-3.
const NARROW: f64 = 0.5;
/// Nor narrower than the strip and this many substrate heights.
const LEAST_MARGIN_HEIGHTS: f64 = 16.0;

/// A feed line that runs from a wall straight to the reference plane: its lines across (from the box's own corner) and along (from the wall).
#[derive(Clone, Debug, PartialEq)]
pub struct Feed {
    /// Lines across the strip.
    pub across_m: Vec<f64>,
    /// Lines along it, from zero at the wall to the reference plane.
    pub along_m: Vec<f64>,
    /// Inside of the box across the line.
    pub box_across_m: f64,
}

impl Feed {
    /// Distance of the reference plane from the wall.
    pub fn length_m(&self) -> f64 {
        self.along_m.last().copied().unwrap_or(0.0)
    }

    /// The feed in the middle of a narrower box, where its own would let modes of the box through or keep them alive up to the plane.
    fn narrowed(&self, stack: &Stack, highest_hz: f64) -> Feed {
        let layers = || stack.below.iter().chain(&stack.above);
        // An open top is mostly its last layer.
        let mean = match stack.top {
            Top::Open => stack.above.last().map_or(1.0, |l| l.permittivity),
            Top::Lid => layers().map(|l| l.permittivity * l.thickness_m).sum::<f64>() / layers().map(|l| l.thickness_m).sum::<f64>(),
        };
        let cutoff_m = C_M_PER_S / (2.0 * highest_hz * mean.sqrt());
        let (Some(first), Some(last)) = (self.across_m.first(), self.across_m.last()) else { return self.clone() };
        let width = last - first;
        let narrow = (NARROW * cutoff_m).max(width + LEAST_MARGIN_HEIGHTS * stack.below_m());
        if self.box_across_m <= narrow {
            return self.clone();
        }
        let shift = 0.5 * (narrow - width) - first;
        Feed { across_m: self.across_m.iter().map(|y| y + shift).collect(), along_m: self.along_m.clone(), box_across_m: narrow }
    }

    /// Through standard of this feed twice with `extra_m` in the middle.
    fn standard(&self, stack: &Stack, sheet: Option<Sheet>, extra_m: f64) -> Structure {
        let length = 2.0 * self.length_m() + extra_m;
        let mut lines = self.along_m.clone();
        let cell = self.along_m.windows(2).map(|w| w[1] - w[0]).fold(0.0, f64::max);
        if extra_m > 0.0 {
            let count = (extra_m / cell).ceil().max(1.0);
            lines.extend((1..count as usize).map(|i| self.length_m() + extra_m * i as f64 / count));
            lines.push(self.length_m() + extra_m);
        }
        lines.extend(self.along_m.iter().rev().skip(1).map(|x| length - x));
        let last = lines.len() - 1;
        let across = 0..self.across_m.len() - 1;
        let source = |line, reversed| Source { patch: 0, axis: Axis::X, line, across: across.clone(), reversed };
        Structure {
            stack: stack.clone(),
            size_m: [length, self.box_across_m],
            sources: vec![source(0, false), source(last, true)],
            patches: vec![Patch::full(lines, self.across_m.clone())],
            sheet,
        }
    }
}

/// The line a port looks into, at one frequency.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PortLine {
    /// Shunt admittance of the source, siemens.
    pub shunt_s: Complex64,
    /// Propagation constant, 1/m.
    pub gamma_per_m: Complex64,
    /// Characteristic impedance, ohm.
    pub impedance_ohm: Complex64,
    /// How far the through standard, its shunts taken off, is from a line of its length.
    pub residual: f64,
}

impl PortLine {
    /// `(c0 beta / w)^2`.
    pub fn eps_eff(&self, f_hz: f64) -> f64 {
        (self.gamma_per_m.im * C_M_PER_S / (2.0 * std::f64::consts::PI * f_hz)).powi(2)
    }
}

/// The two standards of a feed.
pub struct Calibration {
    thru: Solver,
    line: Solver,
    length_m: f64,
    extra_m: f64,
}

impl Calibration {
    /// Standards for a feed; the extra length is 0.3 of the shortest wavelength, so that its phase stays below half a turn.
    ///
    /// # Errors
    /// Those of [`Solver::new`].
    pub fn new(feed: &Feed, stack: &Stack, sheet: Option<Sheet>, highest_hz: f64, split: Split) -> Result<Calibration, Problem> {
        let extra_m = 0.3 * C_M_PER_S / (highest_hz * stack.greatest_permittivity().sqrt());
        let feed = feed.narrowed(stack, highest_hz);
        let solver = |extra| Solver::new(feed.standard(stack, sheet, extra), highest_hz, split);
        Ok(Calibration { thru: solver(0.0)?, line: solver(extra_m)?, length_m: feed.length_m(), extra_m })
    }

    /// Unknowns of the greater standard.
    pub fn count(&self) -> usize {
        self.line.count()
    }

    /// The line at a frequency.
    ///
    /// # Errors
    /// `calibration-inconsistent` when the standards do not fit one line; `field-not-solved`.
    pub fn at(&self, f_hz: f64) -> Result<PortLine, Problem> {
        let found = self.unchecked(f_hz)?;
        if found.residual > GREATEST_RESIDUAL || !found.gamma_per_m.is_finite() {
            let message = format!(
                "at {:.4} GHz the port's two standards differ from one line by {:.1e}, at most {GREATEST_RESIDUAL:.0e} is allowed",
                f_hz / 1e9,
                found.residual
            );
            let help =
                "move the reference plane further from the wall (half the box's width), or make the box narrower than half a wavelength";
            return Err(Problem::error("calibration-inconsistent", Place::Whole, message, help));
        }
        Ok(found)
    }

    /// The same whatever the residual.
    ///
    /// # Errors
    /// `field-not-solved`.
    pub fn unchecked(&self, f_hz: f64) -> Result<PortLine, Problem> {
        let (thru, line) = (self.thru.admittance(f_hz)?, self.line.admittance(f_hz)?);
        let (t, l) = (chain(&thru), chain(&line));
        let m = product(l, inverse(t));
        let one = Complex64::from(1.0);
        let cosh = (m[0] + m[3]) * 0.5;
        let root = (cosh * cosh - one).sqrt();
        // The phase of the extra length is between zero and half a turn: that root, not the greater one.
        let exponential = if (cosh + root).im >= (cosh - root).im { cosh + root } else { cosh - root };
        let gamma_per_m = exponential.ln() / self.extra_m;
        let impedance_ohm = m[1] / ((exponential - exponential.inv()) * 0.5);
        let shunt_s = (m[3] - m[0]) / (m[1] * 2.0);
        // The through standard, shunts off, against the line of its length.
        let off = [one, Complex64::from(0.0), -shunt_s, one];
        let bare = product(off, product(t, off));
        let phase = gamma_per_m * (2.0 * self.length_m);
        let ideal = [phase.cosh(), impedance_ohm * phase.sinh(), phase.sinh() / impedance_ohm, phase.cosh()];
        let weights = [one, impedance_ohm.inv(), impedance_ohm, one];
        let residual = (0..4).map(|i| ((bare[i] - ideal[i]) * weights[i]).norm()).fold(0.0, f64::max);
        Ok(PortLine { shunt_s, gamma_per_m, impedance_ohm, residual })
    }
}

/// Chain matrix `[A, B, C, D]` of a two-port's admittance matrix.
fn chain(y: &[Complex64]) -> [Complex64; 4] {
    let (y11, y12, y21, y22) = (y[0], y[1], y[2], y[3]);
    [-y22 / y21, -y21.inv(), -(y11 * y22 - y12 * y21) / y21, -y11 / y21]
}

fn product(a: [Complex64; 4], b: [Complex64; 4]) -> [Complex64; 4] {
    [a[0] * b[0] + a[1] * b[2], a[0] * b[1] + a[1] * b[3], a[2] * b[0] + a[3] * b[2], a[2] * b[1] + a[3] * b[3]]
}

fn inverse(a: [Complex64; 4]) -> [Complex64; 4] {
    let determinant = a[0] * a[3] - a[1] * a[2];
    [a[3] / determinant, -a[1] / determinant, -a[2] / determinant, a[0] / determinant]
}
