//! Closed form of N coupled strips, put together from single strips and pairs: static capacitances and how the inductance grows when walls recede.

use super::AsBuilt;
use super::C_M_PER_S;
use super::StaticsModel;
use super::coupled::EvenOdd;
use super::statics;
use super::statics::StaticMode;

/// A strip between two near ones keeps at least this share of its capacitance to ground: only for sizes far outside the formulas' range.
const GROUND_SHARE: f64 = 0.05;

/// N x N matrices, row by row.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Capacitances {
    /// With the laminate, F/m.
    pub(super) laminate: Vec<f64>,
    /// Without.
    pub(super) air: Vec<f64>,
    /// d(air)/dn when every wall recedes by n, F/m per metre.
    pub(super) air_recession: Vec<f64>,
}

/// Each strip has the capacitance to ground of a single one, less at each neighbour what the even mode of their pair lacks; between neighbours stands half the
/// difference of odd and even; strips farther apart do not see each other (W. J. Getsinger, "Coupled rectangular bars between parallel plates", IRE Trans. MTT-10,
/// 1962, and E. G. Cristal, IEEE Trans. MTT-12, 1964, for bars; here of microstrip pairs). Exact for one strip and for an equal pair; between unequal neighbours
/// the mean of both widths' pairs. Strips beyond the neighbours make it some per cent wrong.
pub(super) fn closed_form(board: &AsBuilt, widths_m: &[f64], gaps_m: &[f64]) -> Capacitances {
    let board = board.with_statics(StaticsModel::ClosedForm);
    let count = widths_m.len();
    let singles: Vec<[f64; 3]> = widths_m.iter().map(|width_m| capacitances(&statics::strip(&board, *width_m).modes)).collect();
    // Neighbour by neighbour: the pair of the left strip's width, and of the right one's.
    let pair = |width_m: f64, gap_m: f64| {
        let modes = statics::pair(&board, width_m, gap_m).modes;
        EvenOdd { even: capacitances(&modes.even), odd: capacitances(&modes.odd) }
    };
    let pairs: Vec<[EvenOdd<[f64; 3]>; 2]> =
        widths_m.windows(2).zip(gaps_m).map(|(widths, gap_m)| [pair(widths[0], *gap_m), pair(widths[1], *gap_m)]).collect();
    let mut out = [0, 1, 2].map(|_| vec![0.0; count * count]);
    for (part, matrix) in out.iter_mut().enumerate() {
        for (i, single) in singles.iter().enumerate() {
            let left = i.checked_sub(1).and_then(|at| pairs.get(at)).map(|[_, right]| right.even[part] - single[part]);
            let right = pairs.get(i).map(|[left, _]| left.even[part] - single[part]);
            let ground = single[part] + left.unwrap_or(0.0) + right.unwrap_or(0.0);
            matrix[i * count + i] = if part < 2 { ground.max(GROUND_SHARE * single[part]) } else { ground };
        }
        for (i, [left, right]) in pairs.iter().enumerate() {
            let between = 0.25 * (left.odd[part] - left.even[part] + right.odd[part] - right.even[part]);
            let (own, next) = (i * count + i, (i + 1) * count + i + 1);
            matrix[own] += between;
            matrix[next] += between;
            matrix[i * count + i + 1] = -between;
            matrix[(i + 1) * count + i] = -between;
        }
    }
    let [laminate, air, air_recession] = out;
    Capacitances { laminate, air, air_recession }
}

/// Capacitance with laminate and in air, and the slope of the latter as walls recede.
fn capacitances(mode: &StaticMode) -> [f64; 3] {
    let air = 1.0 / (C_M_PER_S * mode.air_ohm);
    [air * mode.eps_eff, air, -air * mode.recession_ohm_per_m / mode.air_ohm]
}
