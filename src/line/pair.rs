//! Two equal coupled microstrip lines as built: even and odd mode at any frequency.

use super::AsBuilt;
use super::Mode;
use super::coupled::EvenOdd;
use super::dispersion::Dispersion;
use super::mode::Losses;
use super::statics;
use super::statics::StaticMode;

/// Two equal strips of a drawn width and gap on a board as built.
#[derive(Clone, Debug, PartialEq)]
pub struct Pair {
    pub(super) board: AsBuilt,
    pub(super) width_m: f64,
    pub(super) gap_m: f64,
    pub(super) built_width_m: f64,
    pub(super) built_gap_m: f64,
    static_modes: EvenOdd<StaticMode>,
    single_eps_eff: f64,
    dispersion: Dispersion,
    losses: Losses,
}

impl Pair {
    /// Strips drawn `width_m` wide and `gap_m` apart. Any size gives finite numbers; [`Pair::problems`] says which can be trusted.
    pub fn new(board: &AsBuilt, width_m: f64, gap_m: f64) -> Pair {
        let (built_width_m, built_gap_m) = (statics::built_width_m(board, width_m), statics::built_gap_m(board, gap_m));
        let h = board.thickness_m;
        Pair {
            static_modes: statics::pair(board, width_m, gap_m),
            single_eps_eff: statics::strip_values(board, built_width_m).1,
            dispersion: Dispersion::pair(built_width_m / h, built_gap_m / h, board.permittivity),
            losses: Losses::new(board),
            board: board.clone(),
            width_m,
            gap_m,
            built_width_m,
            built_gap_m,
        }
    }

    /// Width of each strip as drawn.
    pub fn width_m(&self) -> f64 {
        self.width_m
    }

    /// Gap as drawn.
    pub fn gap_m(&self) -> f64 {
        self.gap_m
    }

    /// The board it was made for.
    pub fn board(&self) -> &AsBuilt {
        &self.board
    }

    /// Even and odd impedance at zero frequency, ohm.
    pub fn static_z0_ohm(&self) -> EvenOdd<f64> {
        EvenOdd { even: self.static_modes.even.z0_ohm(), odd: self.static_modes.odd.z0_ohm() }
    }

    /// Even and odd effective permittivity at zero frequency.
    pub fn static_eps_eff(&self) -> EvenOdd<f64> {
        EvenOdd { even: self.static_modes.even.eps_eff, odd: self.static_modes.odd.eps_eff }
    }

    /// Both quasi-TEM modes at a frequency (zero allowed); cheaper than asking for each.
    pub fn at(&self, f_hz: f64) -> EvenOdd<Mode> {
        let f_n = self.board.normalised_frequency_ghz_mm(f_hz);
        let eps = self.dispersion.pair_eps_eff(f_n, self.static_eps_eff());
        let factor = self.impedance_factor(f_n);
        EvenOdd {
            even: self.losses.mode(f_hz, &self.static_modes.even, eps.even, factor),
            odd: self.losses.mode(f_hz, &self.static_modes.odd, eps.odd, factor),
        }
    }

    /// The even mode at a frequency.
    pub fn even_at(&self, f_hz: f64) -> Mode {
        self.at(f_hz).even
    }

    /// The odd mode at a frequency.
    pub fn odd_at(&self, f_hz: f64) -> Mode {
        self.at(f_hz).odd
    }

    /// Even and odd impedance alone, ohm: what the inverse search asks for many times.
    pub(super) fn impedances_ohm(&self, f_hz: f64) -> [f64; 2] {
        let factor = self.impedance_factor(self.board.normalised_frequency_ghz_mm(f_hz));
        [self.static_modes.even.z0_ohm() * factor, self.static_modes.odd.z0_ohm() * factor]
    }

    fn impedance_factor(&self, f_n: f64) -> f64 {
        let eps_eff = self.dispersion.single_eps_eff(f_n, self.single_eps_eff);
        self.dispersion.impedance_factor(f_n, self.single_eps_eff, eps_eff)
    }
}
