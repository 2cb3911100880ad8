//! One microstrip line as built: impedance, effective permittivity and loss at any frequency.

use super::AsBuilt;
use super::Mode;
use super::dispersion::Dispersion;
use super::mode::Losses;
use super::statics;
use super::statics::StaticMode;

/// One strip of a drawn width on a board as built.
///
/// # Example
/// ```
/// use stripwright::line::{AsBuilt, Strip};
/// let board = AsBuilt {
///     permittivity: 3.0, in_plane_permittivity: 3.0, loss_tangent: 0.0013, thickness_m: 0.762e-3, copper_thickness_m: 0.0, undercut_m: 0.0,
///     roughness_m: 0.0, conductivity_s_per_m: 5.8e7, lid_m: None, widening_m: 0.0, lossless: true,
/// };
/// let strip = Strip::new(&board, 2.5 * 0.762e-3);
/// assert!((strip.static_z0_ohm() / 50.162 - 1.0).abs() < 0.0012); // exact value of the thin strip
/// ```
#[derive(Clone, Debug, PartialEq)]
pub struct Strip {
    pub(super) board: AsBuilt,
    pub(super) width_m: f64,
    pub(super) built_width_m: f64,
    static_mode: StaticMode,
    dispersion: Dispersion,
    losses: Losses,
}

impl Strip {
    /// A strip drawn `width_m` wide. Any width gives finite numbers; [`Strip::problems`] says which can be trusted.
    pub fn new(board: &AsBuilt, width_m: f64) -> Strip {
        let built_width_m = statics::built_width_m(board, width_m);
        Strip {
            static_mode: statics::strip(board, width_m),
            dispersion: Dispersion::single(built_width_m / board.thickness_m, board.permittivity),
            losses: Losses::new(board),
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
        self.static_mode.z0_ohm()
    }

    /// Effective permittivity at zero frequency.
    pub fn static_eps_eff(&self) -> f64 {
        self.static_mode.eps_eff
    }

    /// The quasi-TEM mode at a frequency (zero allowed).
    pub fn at(&self, f_hz: f64) -> Mode {
        let f_n = self.board.normalised_frequency_ghz_mm(f_hz);
        let eps_eff = self.dispersion.single_eps_eff(f_n, self.static_mode.eps_eff);
        let factor = self.dispersion.impedance_factor(f_n, self.static_mode.eps_eff, eps_eff);
        self.losses.mode(f_hz, &self.static_mode, eps_eff, factor)
    }
}
