//! The figures an engineer reads off a response, and a verdict for each requirement.

use crate::order::Limit;

/// Figures of a predicted (or solved) response.
#[derive(Clone, Debug, PartialEq)]
pub struct Figures {
    /// Centre of the passband, hertz: middle of the 3 dB edges.
    pub center_hz: f64,
    /// -|S21| at the centre, dB.
    pub center_loss_db: f64,
    /// Edges 3 dB below the loss at the centre, hertz; `None` when not within the sweep.
    pub edges_3db_hz: Option<[f64; 2]>,
    /// Edges where the loss is the ripple above the loss at the best point, hertz (equal ripple only).
    pub ripple_edges_hz: Option<[f64; 2]>,
    /// Greatest -|S21| between the ordered band edges, dB.
    pub worst_loss_db: f64,
    /// Least return loss of either port between the ordered band edges, dB.
    pub return_loss_db: f64,
    /// Group delay at the centre, seconds.
    pub group_delay_s: f64,
    /// Nearest spurious passband above: where -|S21| next falls below 10 dB over the centre loss, hertz.
    pub spurious_hz: Option<f64>,
    /// One per limit of each requirement.
    pub verdicts: Vec<Verdict>,
}

/// Whether one limit of one requirement is met.
#[derive(Clone, Debug, PartialEq)]
pub struct Verdict {
    /// Index into the order's requirements.
    pub requirement: usize,
    /// The limit judged.
    pub limit: Limit,
    /// The band it holds over, hertz.
    pub band_hz: [f64; 2],
    /// Worst value found, dB (seconds for group delay).
    pub found: f64,
    /// Where it was found, hertz.
    pub at_hz: f64,
    /// Distance to the limit, positive when met; same unit as `found`.
    pub margin: f64,
}

impl Verdict {
    /// Whether the limit is met.
    pub fn is_met(&self) -> bool {
        self.margin >= 0.0
    }
}
