//! Where a lossless response has its passband, and how far that is from the prototype's.

use crate::base::bisect;
use crate::network::Circuit;
use crate::order::ResponseShape;

/// The scan reaches half a bandwidth beyond each edge.
const SCAN_REACH: f64 = 2.0;
/// Scan points per degree: some fifteen on each lobe, so that a parabola through three pins its extremum.
const SCAN_PER_DEGREE: usize = 30;
/// Edges are found to this part of the bandwidth, far below the one percent asked for.
const EDGE_OF_WIDTH: f64 = 1e-7;

/// The passband wanted: edges and the reflection level that bounds it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Goal {
    /// Ordered edges.
    pub edges_hz: [f64; 2],
    /// Degree.
    pub degree: usize,
    /// Shape.
    pub shape: ResponseShape,
}

impl Goal {
    /// |S11|^2 at the edges: the ripple level, or one half for maximally flat.
    pub fn edge_reflection(&self) -> f64 {
        match self.shape {
            ResponseShape::MaximallyFlat => 0.5,
            ResponseShape::EqualRipple { ripple_db } => 1.0 - 10f64.powf(-ripple_db / 10.0),
        }
    }

    /// Band width.
    pub fn width_hz(&self) -> f64 {
        self.edges_hz[1] - self.edges_hz[0]
    }

    /// Frequency of the normalised `x` (-1 and 1 at the edges).
    pub fn frequency_hz(&self, x: f64) -> f64 {
        0.5 * (self.edges_hz[0] + self.edges_hz[1]) + 0.5 * self.width_hz() * x
    }

    /// |S11/S21| at the edges.
    pub fn edge_characteristic(&self) -> f64 {
        let edge = self.edge_reflection();
        (edge / (1.0 - edge)).sqrt()
    }

    /// The prototype's characteristic function at `x`: a power, or a Chebyshev polynomial of the ripple's height.
    pub fn characteristic(&self, x: f64) -> f64 {
        let n = self.degree as f64;
        let shape = match self.shape {
            ResponseShape::MaximallyFlat => x.powi(self.degree as i32),
            ResponseShape::EqualRipple { .. } if x.abs() <= 1.0 => (n * x.acos()).cos(),
            ResponseShape::EqualRipple { .. } => (n * x.abs().acosh()).cosh() * if x < 0.0 && self.degree % 2 == 1 { -1.0 } else { 1.0 },
        };
        self.edge_characteristic() * shape
    }
}

/// The passband a lossless circuit has.
#[derive(Clone, Debug, PartialEq)]
pub struct Passband {
    /// Outermost frequencies at the edge reflection.
    pub edges_hz: [f64; 2],
    /// Greatest |S11|^2 between the edges, both included.
    pub worst_reflection: f64,
    /// Frequencies and |S11|^2 of the minima between the edges, rising.
    pub minima: Vec<(f64, f64)>,
    /// Frequencies and |S11|^2 of the maxima between the minima, rising.
    pub maxima: Vec<(f64, f64)>,
}

impl Passband {
    /// Finds the passband of a lossless circuit near the goal; `None` when there is none within half a bandwidth.
    pub fn of(circuit: &Circuit, goal: &Goal) -> Option<Passband> {
        let level = goal.edge_reflection();
        let at = |f: f64| circuit.sweep(&[f]).s[0][0].norm_sqr();
        let points = SCAN_PER_DEGREE * (goal.degree + 1);
        let f: Vec<f64> = (0..=points).map(|i| goal.frequency_hz(SCAN_REACH * (2.0 * i as f64 / points as f64 - 1.0))).collect();
        let r: Vec<f64> = circuit.sweep(&f).s.iter().map(|s| s[0].norm_sqr()).collect();
        let first = r.iter().position(|r| *r <= level)?;
        let last = r.iter().rposition(|r| *r <= level)?;
        if first == 0 || last == points {
            return None;
        }
        let edge = |a: f64, b: f64| bisect(|f| at(f) - level, a, b, EDGE_OF_WIDTH * goal.width_hz());
        let edges_hz = [edge(f[first - 1], f[first])?, edge(f[last], f[last + 1])?];
        let (mut minima, mut maxima) = (Vec::new(), Vec::new());
        for i in first..=last {
            let (before, after) = (r[i] - r[i - 1], r[i + 1] - r[i]);
            if before.signum() != after.signum() {
                let vertex = f[i] + 0.5 * (f[1] - f[0]) * (before + after) / (before - after);
                (if before < 0.0 { &mut minima } else { &mut maxima }).push((vertex, at(vertex)));
            }
        }
        let worst_reflection = maxima.iter().map(|m| m.1).fold(level, f64::max);
        Some(Passband { edges_hz, worst_reflection, minima, maxima })
    }

    /// Worst return loss between the edges, dB.
    pub fn return_loss_db(&self) -> f64 {
        -10.0 * self.worst_reflection.log10()
    }
}

/// How far a passband is from its goal, against what is asked of refinement.
#[derive(Clone, Debug, PartialEq)]
pub struct Miss {
    /// Edges reached minus edges ordered.
    pub edges_hz: [f64; 2],
    /// Worst return loss reached minus the prototype's, dB; zero for maximally flat, which is held by its edges.
    pub return_loss_db: f64,
    /// Greatest of the misses over its limit; 1 or less meets the goal.
    pub worst_ratio: f64,
}

/// An edge may miss by this part of the bandwidth, or
const EDGE_OF_BANDWIDTH: f64 = 0.01;
/// by this part of its frequency, whichever is smaller.
const EDGE_OF_FREQUENCY: f64 = 0.003;
/// The worst return loss may miss by this, dB.
const RETURN_LOSS_DB: f64 = 0.5;

impl Miss {
    /// Compares a passband with its goal.
    pub fn of(passband: &Passband, goal: &Goal) -> Miss {
        let edges_hz = [passband.edges_hz[0] - goal.edges_hz[0], passband.edges_hz[1] - goal.edges_hz[1]];
        let return_loss_db = match goal.shape {
            ResponseShape::MaximallyFlat => 0.0,
            ResponseShape::EqualRipple { .. } => passband.return_loss_db() + 10.0 * goal.edge_reflection().log10(),
        };
        let edge_ratio = |i: usize| edges_hz[i].abs() / (EDGE_OF_BANDWIDTH * goal.width_hz()).min(EDGE_OF_FREQUENCY * goal.edges_hz[i]);
        let worst_ratio = edge_ratio(0).max(edge_ratio(1)).max(return_loss_db.abs() / RETURN_LOSS_DB);
        Miss { edges_hz, return_loss_db, worst_ratio }
    }

    /// Whether refinement has done what is asked of it.
    pub fn is_met(&self) -> bool {
        self.worst_ratio <= 1.0
    }
}
