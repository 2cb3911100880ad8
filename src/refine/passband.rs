//! Where a lossless response passes, and how far that is from the target.

use crate::base::bisect;
use crate::family::Target;
use crate::network::Circuit;
use crate::order::ResponseShape;

/// The scan reaches half an interval beyond each edge.
const SCAN_REACH: f64 = 0.5;
/// Scan points per degree: some fifteen on each lobe, so that a parabola through three pins its extremum.
const SCAN_PER_DEGREE: usize = 30;
/// Edges are found to this part of the bandwidth, far below the one percent asked for.
const EDGE_OF_WIDTH: f64 = 1e-7;

/// The passband (or the passbands about a stopband) a lossless circuit has.
#[derive(Clone, Debug, PartialEq)]
pub struct Passband {
    /// Outermost frequencies at the edge reflection, one for each edge of the target.
    pub edges_hz: Vec<f64>,
    /// Greatest |S11|^2 between the edges, both included.
    pub worst_reflection: f64,
    /// Frequencies and |S11|^2 of the minima between the edges, rising.
    pub minima: Vec<(f64, f64)>,
    /// Frequencies and |S11|^2 of the maxima between the minima, rising.
    pub maxima: Vec<(f64, f64)>,
}

impl Passband {
    /// Finds the passband of a lossless circuit near the target; `None` when there is none within half an interval.
    pub fn of(circuit: &Circuit, target: &Target) -> Option<Passband> {
        let level = target.edge_reflection();
        let at = |f: f64| circuit.sweep(&[f]).s[0][0].norm_sqr();
        let mut found = Passband { edges_hz: Vec::new(), worst_reflection: level, minima: Vec::new(), maxima: Vec::new() };
        for pass in &target.passes_hz {
            let [low, high] = target.grown(*pass, SCAN_REACH);
            let lobes = target.degree.max(target.minima / target.passes_hz.len());
            let points = SCAN_PER_DEGREE * (lobes + 1);
            let f: Vec<f64> = (0..=points).map(|i| low + (high - low) * i as f64 / points as f64).collect();
            let r: Vec<f64> = circuit.sweep(&f).s.iter().map(|s| s[0].norm_sqr()).collect();
            let held = pass.map(|end| target.edges_hz.contains(&end));
            // Inside from the interval's middle outwards: what lies beyond a stopband is another passband.
            let first = if held[0] { r.iter().position(|r| *r <= level)? } else { 0 };
            let last = if held[1] { r.iter().rposition(|r| *r <= level)? } else { points };
            if (held[0] && first == 0) || (held[1] && last == points) {
                return None;
            }
            let edge = |a: f64, b: f64| bisect(|f| at(f) - level, a, b, EDGE_OF_WIDTH * target.width_hz);
            if held[0] {
                found.edges_hz.push(edge(f[first - 1], f[first])?);
            }
            if held[1] {
                found.edges_hz.push(edge(f[last], f[last + 1])?);
            }
            for i in first.max(1)..=last.min(points - 1) {
                let (before, after) = (r[i] - r[i - 1], r[i + 1] - r[i]);
                if before.signum() != after.signum() {
                    let vertex = f[i] + 0.5 * (f[1] - f[0]) * (before + after) / (before - after);
                    (if before < 0.0 { &mut found.minima } else { &mut found.maxima }).push((vertex, at(vertex)));
                }
            }
            found.worst_reflection = found.maxima.iter().map(|m| m.1).fold(found.worst_reflection, f64::max);
        }
        Some(found)
    }

    /// Worst return loss between the edges, dB.
    pub fn return_loss_db(&self) -> f64 {
        -10.0 * self.worst_reflection.log10()
    }
}

/// How far a passband is from its target, against what is asked of refinement.
#[derive(Clone, Debug, PartialEq)]
pub struct Miss {
    /// Edges reached minus edges ordered.
    pub edges_hz: Vec<f64>,
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

/// By how much an edge may miss.
pub fn allowed_hz(target: &Target, edge_hz: f64) -> f64 {
    (EDGE_OF_BANDWIDTH * target.width_hz).min(EDGE_OF_FREQUENCY * edge_hz)
}

impl Miss {
    /// Compares a passband with its target.
    pub fn of(passband: &Passband, target: &Target) -> Miss {
        let edges_hz: Vec<f64> = passband.edges_hz.iter().zip(&target.edges_hz).map(|(found, ordered)| found - ordered).collect();
        let return_loss_db = match target.shape {
            ResponseShape::MaximallyFlat => 0.0,
            ResponseShape::EqualRipple { .. } => passband.return_loss_db() + 10.0 * target.edge_reflection().log10(),
        };
        let edges = edges_hz.iter().zip(&target.edges_hz).map(|(miss, edge)| miss.abs() / allowed_hz(target, *edge));
        let worst_ratio = edges.fold(return_loss_db.abs() / RETURN_LOSS_DB, f64::max);
        Miss { edges_hz, return_loss_db, worst_ratio }
    }

    /// Whether refinement has done what is asked of it.
    pub fn is_met(&self) -> bool {
        self.worst_ratio <= 1.0
    }

    /// The misses as text.
    pub fn describe(&self) -> String {
        // Rounded first: nobody wants to read -0.00.
        let shown = |v: f64| (v * 100.0).round() / 100.0 + 0.0;
        let edges: Vec<String> = self.edges_hz.iter().map(|e| format!("{:+.2}", shown(e / 1e6))).collect();
        let word = if edges.len() == 1 { "edge" } else { "edges" };
        format!("{word} {} MHz, return loss {:+.2} dB from the prototype's", edges.join(" and "), shown(self.return_loss_db))
    }
}
