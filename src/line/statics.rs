//! The seam behind which the static constants of a strip or a pair come from: the numerical cross-section or the closed forms, as the board says.
//!
//! Per mode three numbers: the impedance in air (it fixes the inductance), the effective permittivity, and how fast the impedance in air rises when every
//! copper wall recedes (it fixes the conductor loss). Everything above this file works from those.

use super::AsBuilt;
use super::StaticsModel;
use super::coupled::EvenOdd;
use super::coupled::air_impedances_ohm;
use super::coupled::effective_permittivities;
use super::many;
use super::many::Capacitances;
use super::numerical;
use super::section;
use super::single::air_impedance_ohm;
use super::single::effective_permittivity;
use super::single::thickness_widening;
use crate::base::Problem;

/// Narrowest strip and gap the formulas are asked for: keeps a nonsense size finite until its problem is reported.
const SMALLEST_SIZE_M: f64 = 1e-9;
/// Copper assumed at least this thick for its loss: without thickness the edge currents of the recession rule have no limit.
pub(super) const THINNEST_LOSSY_COPPER_M: f64 = 1e-6;
/// Up to this share of the gap, thickness narrows it by the full widening of the strips; beyond it the gap tends to zero without reaching it.
const PLAIN_GAP_SHARE: f64 = 0.6;
/// Far beyond any lid that leaves room for copper.
const LID_FACTOR_AT_MOST: f64 = 10.0;
/// Recession step over the smallest size of the section; a central difference, so its error is the square of this.
const RECESSION_STEP: f64 = 1e-3;

/// Static constants of one mode.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct StaticMode {
    /// Impedance with the laminate taken away, ohm.
    pub(super) air_ohm: f64,
    /// Static effective permittivity.
    pub(super) eps_eff: f64,
    /// d(air_ohm)/dn when every wall recedes by n, ohm per metre: always the closed form's, for where the solver's loss is not to be had.
    pub(super) recession_ohm_per_m: f64,
}

/// Static constants and where they come from.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Statics<T> {
    /// One mode, or even and odd.
    pub(super) modes: T,
    /// The solver's; `None`: these are the closed form's.
    pub(super) error_estimate: Option<f64>,
    /// Why the solver was asked and could not: said by `problems`, never passed over.
    pub(super) not_solved: Option<Problem>,
}

impl<T> Statics<T> {
    fn closed_form(modes: T) -> Statics<T> {
        Statics { modes, error_estimate: None, not_solved: None }
    }
}

impl StaticMode {
    fn with(self, solved: &section::Mode) -> StaticMode {
        StaticMode {
            air_ohm: 1.0 / (super::C_M_PER_S * solved.air_capacitance_f_per_m),
            eps_eff: solved.eps_eff(),
            recession_ohm_per_m: self.recession_ohm_per_m,
        }
    }

    /// Static impedance, ohm.
    pub(super) fn z0_ohm(&self) -> f64 {
        self.air_ohm / self.eps_eff.sqrt()
    }
}

/// The laminate as the formulas take it.
///
/// A uniaxial laminate (axis normal to the board) acts on an infinitely thin strip as an isotropic one of permittivity sqrt(er_in_plane er_normal) and height
/// h sqrt(er_in_plane / er_normal): exact for the capacitance, which is all that is asked of it here (the inductance keeps the true height).
#[derive(Clone, Copy, Debug)]
struct Slab {
    h_m: f64,
    er: f64,
    er_h_m: f64,
}

impl Slab {
    fn new(board: &AsBuilt) -> Slab {
        let h_m = board.thickness_m;
        let (normal, in_plane) = (board.permittivity, board.in_plane_permittivity);
        Slab { h_m, er: (normal * in_plane).sqrt(), er_h_m: h_m * (in_plane / normal).sqrt() }
    }
}

/// Width at the foot of a strip drawn `width_m` wide.
pub(super) fn foot_m(board: &AsBuilt, width_m: f64) -> f64 {
    (width_m + board.widening_m).max(SMALLEST_SIZE_M)
}

/// Gap between the feet of two strips drawn `gap_m` apart.
pub(super) fn foot_gap_m(board: &AsBuilt, gap_m: f64) -> f64 {
    (gap_m - board.widening_m).max(SMALLEST_SIZE_M)
}

/// The equivalent width of a strip drawn `width_m` wide: etch error added, and a trapezoid taken as the rectangle of its mean width.
pub(super) fn built_width_m(board: &AsBuilt, width_m: f64) -> f64 {
    let foot_m = foot_m(board, width_m);
    // A strip narrower than its own undercut is reported as a problem; here it only has to stay a strip.
    (foot_m - board.undercut_m.min(0.45 * foot_m)).max(SMALLEST_SIZE_M)
}

/// The equivalent gap between two strips drawn `gap_m` apart: what the strips gain in width it loses.
pub(super) fn built_gap_m(board: &AsBuilt, gap_m: f64) -> f64 {
    (gap_m - board.widening_m + board.undercut_m).max(SMALLEST_SIZE_M)
}

/// Static constants of one strip; `width_m` as drawn.
pub(super) fn strip(board: &AsBuilt, width_m: f64) -> Statics<StaticMode> {
    let guess = strip_in_closed_form(board, width_m);
    match board.statics {
        StaticsModel::ClosedForm => Statics::closed_form(guess),
        StaticsModel::Numerical => match numerical::strip(board, width_m) {
            Ok(line) => Statics { modes: guess.with(&line.mode), error_estimate: Some(line.error_estimate), not_solved: None },
            Err(problem) => Statics { not_solved: Some(problem), ..Statics::closed_form(guess) },
        },
    }
}

fn strip_in_closed_form(board: &AsBuilt, width_m: f64) -> StaticMode {
    let w = built_width_m(board, width_m);
    let (h, t) = (board.thickness_m, board.copper_thickness_m);
    let (air_ohm, eps_eff) = strip_values(board, w);
    let recession_ohm_per_m = if board.lossless {
        0.0
    } else {
        let t = t.max(THINNEST_LOSSY_COPPER_M);
        let step = RECESSION_STEP * t.min(w).min(h);
        let receded = |n: f64| strip_in_air(h + 2.0 * n, w - 2.0 * n, t - 2.0 * n);
        (receded(step) - receded(-step)) / (2.0 * step)
    };
    StaticMode { air_ohm, eps_eff, recession_ohm_per_m }
}

/// Impedance in air and effective permittivity of one strip; `w` the built width.
pub(super) fn strip_values(board: &AsBuilt, w: f64) -> (f64, f64) {
    let slab = Slab::new(board);
    let t = board.copper_thickness_m;
    let air_ohm = strip_in_air(slab.h_m, w, t);
    let (u, t_over_h) = (w / slab.er_h_m, t / slab.er_h_m);
    let (in_air, on_slab) = thickness_widening(u, t_over_h, slab.er);
    let reference = air_impedance_ohm(u + on_slab);
    let eps_eff = effective_permittivity(u + on_slab, slab.er) * air_impedance_ohm(u + in_air) * air_ohm / (reference * reference);
    (air_ohm, eps_eff)
}

fn strip_in_air(h: f64, w: f64, t: f64) -> f64 {
    let u = w / h;
    air_impedance_ohm(u + thickness_widening(u, t / h, 1.0).0)
}

/// Static constants of a pair; `width_m` and `gap_m` as drawn.
pub(super) fn pair(board: &AsBuilt, width_m: f64, gap_m: f64) -> Statics<EvenOdd<StaticMode>> {
    let guess = pair_in_closed_form(board, width_m, gap_m);
    match board.statics {
        StaticsModel::ClosedForm => Statics::closed_form(guess),
        StaticsModel::Numerical => match numerical::pair(board, width_m, gap_m) {
            Ok(pair) => Statics {
                modes: EvenOdd { even: guess.even.with(&pair.even), odd: guess.odd.with(&pair.odd) },
                error_estimate: Some(pair.error_estimate),
                not_solved: None,
            },
            Err(problem) => Statics { not_solved: Some(problem), ..Statics::closed_form(guess) },
        },
    }
}

/// How much faster than the open line's law a mode's permittivity rises under a lid: static values with the lid and without it, and the laminate's.
///
/// No published law with a lid was at hand. At high frequency the field draws into the laminate and no longer sees the lid, so the permittivity must run into
/// that of the open line, er - (er - eps)/P: P is to grow as er less the static value does. The static value is the lidded one by itself. (W. J. Getsinger's
/// inflection frequency, IEEE Trans. MTT-21, 1973, falls with the impedance, the same way.)
pub(super) fn lid_factor(board: &AsBuilt, with_lid: f64, open: f64) -> f64 {
    let er = board.permittivity;
    let factor = (er - with_lid) / (er - open);
    // In-plane permittivity or no laminate can leave nothing to rise to.
    if open < er && factor.is_finite() { factor.clamp(1.0, LID_FACTOR_AT_MOST) } else { 1.0 }
}

/// The same board without its lid, where the values under it are solved.
pub(super) fn opened<T>(board: &AsBuilt, statics: &Statics<T>) -> Option<AsBuilt> {
    (board.lid_m.is_some() && statics.error_estimate.is_some()).then(|| AsBuilt { lid_m: None, ..board.clone() })
}

/// Static capacitances of N strips; sizes as drawn. The receding walls' part is the closed form's.
pub(super) fn array(board: &AsBuilt, widths_m: &[f64], gaps_m: &[f64]) -> Statics<Capacitances> {
    let guess = many::closed_form(board, widths_m, gaps_m);
    match board.statics {
        StaticsModel::ClosedForm => Statics::closed_form(guess),
        StaticsModel::Numerical => match numerical::array(board, widths_m, gaps_m) {
            Ok(solved) => Statics {
                modes: Capacitances {
                    laminate: solved.capacitance_f_per_m.concat(),
                    air: solved.air_capacitance_f_per_m.concat(),
                    air_recession: guess.air_recession,
                },
                error_estimate: Some(solved.error_estimate),
                not_solved: None,
            },
            Err(problem) => Statics { not_solved: Some(problem), ..Statics::closed_form(guess) },
        },
    }
}

fn pair_in_closed_form(board: &AsBuilt, width_m: f64, gap_m: f64) -> EvenOdd<StaticMode> {
    let (w, s) = (built_width_m(board, width_m), built_gap_m(board, gap_m));
    let values = pair_values(board, w, s);
    let recession = if board.lossless {
        EvenOdd { even: 0.0, odd: 0.0 }
    } else {
        let (h, t) = (board.thickness_m, board.copper_thickness_m.max(THINNEST_LOSSY_COPPER_M));
        let step = RECESSION_STEP * t.min(w).min(s).min(h);
        let receded = |n: f64| pair_in_air(h + 2.0 * n, w - 2.0 * n, s + 2.0 * n, t - 2.0 * n);
        let (out, back) = (receded(step), receded(-step));
        EvenOdd { even: (out.even - back.even) / (2.0 * step), odd: (out.odd - back.odd) / (2.0 * step) }
    };
    let mode = |(air_ohm, eps_eff): (f64, f64), recession_ohm_per_m| StaticMode { air_ohm, eps_eff, recession_ohm_per_m };
    EvenOdd { even: mode(values.even, recession.even), odd: mode(values.odd, recession.odd) }
}

/// Impedance in air and effective permittivity of both modes; `w` and `s` the built width and gap.
pub(super) fn pair_values(board: &AsBuilt, w: f64, s: f64) -> EvenOdd<(f64, f64)> {
    let slab = Slab::new(board);
    let t = board.copper_thickness_m;
    let air = pair_in_air(slab.h_m, w, s, t);
    let (u, g, t_over_h) = (w / slab.er_h_m, s / slab.er_h_m, t / slab.er_h_m);
    let (in_air, on_slab) = thickness_widening(u, t_over_h, slab.er);
    let (u_slab, g_slab) = (u + on_slab, narrowed(g, on_slab));
    let eps = effective_permittivities(u_slab, g_slab, slab.er);
    let reference = air_impedances_ohm(u_slab, g_slab);
    let thick = if t_over_h > 0.0 { air_impedances_ohm(u + in_air, narrowed(g, in_air)) } else { reference };
    EvenOdd {
        even: (air.even, eps.even * thick.even * air.even / (reference.even * reference.even)),
        odd: (air.odd, eps.odd * thick.odd * air.odd / (reference.odd * reference.odd)),
    }
}

fn pair_in_air(h: f64, w: f64, s: f64, t: f64) -> EvenOdd<f64> {
    let (u, g) = (w / h, s / h);
    let in_air = thickness_widening(u, t / h, 1.0).0;
    air_impedances_ohm(u + in_air, narrowed(g, in_air))
}

/// The gap less the widening of the strips, never zero, with a continuous slope.
fn narrowed(gap: f64, widening: f64) -> f64 {
    let share = widening / gap;
    if share <= PLAIN_GAP_SHARE {
        gap - widening
    } else {
        let rest = 1.0 - PLAIN_GAP_SHARE;
        gap * rest * (-(share - PLAIN_GAP_SHARE) / rest).exp()
    }
}
