//! One microstrip line as built: impedance, effective permittivity and loss at any frequency.

use std::sync::OnceLock;

use super::AsBuilt;
use super::Mode;
use super::dispersion::Dispersion;
use super::mode::Losses;
use super::numerical;
use super::section::ModeLoss;
use super::statics;
use super::statics::StaticMode;
use super::statics::Statics;
use crate::base::Problem;

/// One strip of a drawn width on a board as built.
///
/// # Example
/// ```
/// use stripwright::line::{AsBuilt, StaticsModel, Strip};
/// let board = AsBuilt {
///     permittivity: 3.0, in_plane_permittivity: 3.0, loss_tangent: 0.0013, thickness_m: 0.762e-3, copper_thickness_m: 0.0, undercut_m: 0.0,
///     roughness_m: 0.0, ten_point_height_m: None, conductivity_s_per_m: 5.8e7, plating: None, hole_plating_m: 25e-6, lid_m: None, widening_m: 0.0,
///     lossless: true, statics: StaticsModel::Numerical,
/// };
/// let strip = Strip::new(&board, 2.5 * 0.762e-3);
/// assert!((strip.static_z0_ohm() / 50.162 - 1.0).abs() < 1e-4); // exact value of the thin strip
/// ```
#[derive(Clone, Debug)]
pub struct Strip {
    pub(super) board: AsBuilt,
    pub(super) width_m: f64,
    pub(super) built_width_m: f64,
    statics: Statics<StaticMode>,
    dispersion: Dispersion,
    lid_factor: f64,
    losses: Losses,
    /// Asked for once, and only where there is loss: it costs more than all the rest.
    solved_loss: OnceLock<Result<ModeLoss, Problem>>,
}

impl PartialEq for Strip {
    /// Board and width settle everything else.
    fn eq(&self, other: &Strip) -> bool {
        self.width_m == other.width_m && self.board == other.board
    }
}

impl Strip {
    /// A strip drawn `width_m` wide. Any width gives finite numbers; [`Strip::problems`] says which can be trusted.
    pub fn new(board: &AsBuilt, width_m: f64) -> Strip {
        let built_width_m = statics::built_width_m(board, width_m);
        let statics = statics::strip(board, width_m);
        let with_lid = statics.modes.eps_eff;
        let open = statics::opened(board, &statics).map(|open| statics::strip(&open, width_m).modes.eps_eff);
        Strip {
            lid_factor: open.map_or(1.0, |open| statics::lid_factor(board, with_lid, open)),
            statics,
            dispersion: Dispersion::single(built_width_m / board.thickness_m, board.permittivity),
            losses: Losses::new(board),
            solved_loss: OnceLock::new(),
            board: board.clone(),
            width_m,
            built_width_m,
        }
    }

    /// Width as drawn.
    pub fn width_m(&self) -> f64 {
        self.width_m
    }

    /// The board it was made for.
    pub fn board(&self) -> &AsBuilt {
        &self.board
    }

    /// Impedance at zero frequency.
    pub fn static_z0_ohm(&self) -> f64 {
        self.statics.modes.z0_ohm()
    }

    /// Effective permittivity at zero frequency.
    pub fn static_eps_eff(&self) -> f64 {
        self.statics.modes.eps_eff
    }

    /// The quasi-TEM mode at a frequency (zero allowed).
    pub fn at(&self, f_hz: f64) -> Mode {
        let f_n = self.board.normalised_frequency_ghz_mm(f_hz);
        let eps_eff = self.dispersion.single_eps_eff(f_n, self.statics.modes.eps_eff, self.lid_factor);
        let factor = self.dispersion.impedance_factor(f_n, self.statics.modes.eps_eff, eps_eff);
        let solved = self.solved_loss().and_then(|loss| loss.as_ref().ok());
        self.losses.mode(f_hz, &self.statics.modes, eps_eff, factor, solved)
    }

    /// Loss of the solved cross-section; `None` where there is no loss or no solution.
    fn solved_loss(&self) -> Option<&Result<ModeLoss, Problem>> {
        let wanted = !self.board.lossless && self.statics.error_estimate.is_some();
        wanted.then(|| self.solved_loss.get_or_init(|| numerical::strip_loss(&self.board, self.width_m)))
    }

    /// Relative error of the static constants that the solver expects; `None` when they come from the closed form.
    pub fn error_estimate(&self) -> Option<f64> {
        self.statics.error_estimate
    }

    /// Why the solver's values are not used although the board asks for them.
    pub(super) fn not_solved(&self) -> Vec<&Problem> {
        self.statics.not_solved.iter().chain(self.solved_loss().and_then(|loss| loss.as_ref().err())).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn is_smooth_in_width_and_frequency() {
        let board = AsBuilt::for_tests(3.0, 35e-6);
        let at = |w: f64, f: f64| {
            let mode = Strip::new(&board, w).at(f);
            [mode.z0_ohm, mode.eps_eff, mode.conductor_np_per_m]
        };
        // Slopes by differences on both sides of a point agree: no kinks, no noise above what a refining loop with 1e-6 steps would see.
        for w in [0.1e-3, 0.76e-3, 1.9e-3, 8e-3] {
            for f in [1e8, 2e9, 12e9, 38e9] {
                let (here, by_w, back_w) = (at(w, f), at(w * (1.0 + 1e-6), f), at(w * (1.0 - 1e-6), f));
                let (by_f, back_f) = (at(w, f * (1.0 + 1e-6)), at(w, f * (1.0 - 1e-6)));
                for i in 0..3 {
                    for (ahead, behind) in [(by_w[i], back_w[i]), (by_f[i], back_f[i])] {
                        let bend = (ahead - 2.0 * here[i] + behind).abs();
                        assert!(bend < 1e-10 * here[i], "w {w} f {f} quantity {i}: {bend}");
                    }
                }
            }
        }
    }

    #[test]
    fn extremes_stay_finite() {
        for er in [1.0, 1.03, 1.1, 2.2, 15.0, 100.0] {
            for t in [0.0, 1e-6, 70e-6, 700e-6] {
                for w in [0.0, -1.0, 1e-9, 1e-3, 1.0] {
                    let strip = Strip::new(&AsBuilt { undercut_m: 0.5 * t, ..AsBuilt::for_tests(er, t) }, w);
                    for f in [0.0, 1.0, 1e9, 1e11, 1e14] {
                        let mode = strip.at(f);
                        assert!(mode.z0_ohm.is_finite() && mode.z0_ohm > 0.0 && mode.eps_eff >= 1.0 - 1e-9, "{er} {t} {w} {f} {mode:?}");
                        assert!(mode.alpha_np_per_m().is_finite() && mode.alpha_np_per_m() >= 0.0, "{er} {t} {w} {f} {mode:?}");
                    }
                }
            }
        }
    }

    #[test]
    fn uniaxial_laminate_has_the_capacitance_of_the_transformed_one() {
        // Exact for a thin strip: permittivity sqrt(in-plane normal), height h sqrt(in-plane / normal).
        let board = AsBuilt { in_plane_permittivity: 3.6, ..AsBuilt::for_tests(3.0, 0.0) };
        let transformed = AsBuilt { thickness_m: board.thickness_m * 1.2f64.sqrt(), ..AsBuilt::for_tests(10.8f64.sqrt(), 0.0) };
        let capacitance = |board: &AsBuilt| {
            let strip = Strip::new(board, 1.9e-3);
            strip.static_eps_eff().sqrt() / strip.static_z0_ohm()
        };
        assert!((capacitance(&board) / capacitance(&transformed) - 1.0).abs() < 1e-12);
        assert!(capacitance(&board) > capacitance(&AsBuilt::for_tests(3.0, 0.0)));
    }

    #[test]
    fn air_line_is_not_dispersive() {
        let strip = Strip::new(&AsBuilt::for_tests(1.0, 35e-6), 2e-3);
        for f in [0.0, 1e9, 30e9] {
            assert!((strip.at(f).eps_eff - 1.0).abs() < 1e-12 && (strip.at(f).z0_ohm / strip.static_z0_ohm() - 1.0).abs() < 1e-12);
        }
    }

    #[test]
    fn widening_is_drawn_width_and_lossless_has_no_loss() {
        let board = AsBuilt::for_tests(3.0, 35e-6);
        let wider = Strip::new(&AsBuilt { widening_m: 20e-6, ..board.clone() }, 1e-3);
        assert_eq!(wider.at(3e9), Strip::new(&board, 1.02e-3).at(3e9));
        assert_eq!(Strip::new(&board.without_loss(), 1e-3).at(3e9).alpha_np_per_m(), 0.0);
    }
}
