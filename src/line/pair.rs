//! Two equal coupled microstrip lines as built: even and odd mode at any frequency.

use std::sync::OnceLock;

use super::AsBuilt;
use super::Mode;
use super::coupled::EvenOdd;
use super::dispersion::Dispersion;
use super::mode::Losses;
use super::numerical;
use super::section::ModeLoss;
use super::statics;
use super::statics::StaticMode;
use super::statics::Statics;
use crate::base::Problem;

/// Two equal strips of a drawn width and gap on a board as built.
#[derive(Clone, Debug)]
pub struct Pair {
    pub(super) board: AsBuilt,
    pub(super) width_m: f64,
    pub(super) gap_m: f64,
    pub(super) built_width_m: f64,
    pub(super) built_gap_m: f64,
    statics: Statics<EvenOdd<StaticMode>>,
    single_eps_eff: f64,
    single_lid_factor: f64,
    lid_factors: EvenOdd<f64>,
    dispersion: Dispersion,
    losses: Losses,
    /// Asked for once, and only where there is loss: it costs more than all the rest.
    solved_loss: OnceLock<Result<EvenOdd<ModeLoss>, Problem>>,
}

impl PartialEq for Pair {
    /// Board, width and gap settle everything else.
    fn eq(&self, other: &Pair) -> bool {
        self.width_m == other.width_m && self.gap_m == other.gap_m && self.board == other.board
    }
}

impl Pair {
    /// Strips drawn `width_m` wide and `gap_m` apart. Any size gives finite numbers; [`Pair::problems`] says which can be trusted.
    pub fn new(board: &AsBuilt, width_m: f64, gap_m: f64) -> Pair {
        let (built_width_m, built_gap_m) = (statics::built_width_m(board, width_m), statics::built_gap_m(board, gap_m));
        let h = board.thickness_m;
        let statics = statics::pair(board, width_m, gap_m);
        let single_eps_eff = statics::strip(board, width_m).modes.eps_eff;
        let (mut single_lid_factor, mut lid_factors) = (1.0, EvenOdd { even: 1.0, odd: 1.0 });
        if let Some(open) = statics::opened(board, &statics) {
            let (with_lid, without) = (&statics.modes, statics::pair(&open, width_m, gap_m).modes);
            single_lid_factor = statics::lid_factor(board, single_eps_eff, statics::strip(&open, width_m).modes.eps_eff);
            lid_factors.even = statics::lid_factor(board, with_lid.even.eps_eff, without.even.eps_eff);
            lid_factors.odd = statics::lid_factor(board, with_lid.odd.eps_eff, without.odd.eps_eff);
        }
        Pair {
            statics,
            single_eps_eff,
            single_lid_factor,
            lid_factors,
            dispersion: Dispersion::pair(built_width_m / h, built_gap_m / h, board.permittivity),
            losses: Losses::new(board),
            solved_loss: OnceLock::new(),
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
        EvenOdd { even: self.statics.modes.even.z0_ohm(), odd: self.statics.modes.odd.z0_ohm() }
    }

    /// Even and odd effective permittivity at zero frequency.
    pub fn static_eps_eff(&self) -> EvenOdd<f64> {
        EvenOdd { even: self.statics.modes.even.eps_eff, odd: self.statics.modes.odd.eps_eff }
    }

    /// Both quasi-TEM modes at a frequency (zero allowed); cheaper than asking for each.
    pub fn at(&self, f_hz: f64) -> EvenOdd<Mode> {
        let f_n = self.board.normalised_frequency_ghz_mm(f_hz);
        let eps = self.dispersion.pair_eps_eff(f_n, self.static_eps_eff(), self.lid_factors);
        let factor = self.impedance_factor(f_n);
        let solved = self.solved_loss().and_then(|loss| loss.as_ref().ok());
        EvenOdd {
            even: self.losses.mode(f_hz, &self.statics.modes.even, eps.even, factor, solved.map(|loss| &loss.even)),
            odd: self.losses.mode(f_hz, &self.statics.modes.odd, eps.odd, factor, solved.map(|loss| &loss.odd)),
        }
    }

    /// Loss of the solved cross-section; `None` where there is no loss or no solution.
    fn solved_loss(&self) -> Option<&Result<EvenOdd<ModeLoss>, Problem>> {
        let wanted = !self.board.lossless && self.statics.error_estimate.is_some();
        wanted.then(|| self.solved_loss.get_or_init(|| numerical::pair_loss(&self.board, self.width_m, self.gap_m)))
    }

    /// Relative error of the static constants that the solver expects; `None` when they come from the closed form.
    pub fn error_estimate(&self) -> Option<f64> {
        self.statics.error_estimate
    }

    /// Why the solver's values are not used although the board asks for them.
    pub(super) fn not_solved(&self) -> Vec<&Problem> {
        self.statics.not_solved.iter().chain(self.solved_loss().and_then(|loss| loss.as_ref().err())).collect()
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
        [self.statics.modes.even.z0_ohm() * factor, self.statics.modes.odd.z0_ohm() * factor]
    }

    fn impedance_factor(&self, f_n: f64) -> f64 {
        let eps_eff = self.dispersion.single_eps_eff(f_n, self.single_eps_eff, self.single_lid_factor);
        self.dispersion.impedance_factor(f_n, self.single_eps_eff, eps_eff)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::line::Strip;

    #[test]
    fn wide_gap_tends_to_the_single_strip() {
        // At 20 heights the coupling of thin pairs is 1e-3 (exact static solutions fall as 1/s^2); 0.5 % for the formulas' own error.
        let board = AsBuilt::for_tests(3.0, 0.0);
        for f in [0.0, 5e9] {
            let (pair, strip) = (Pair::new(&board, 1.9e-3, 20.0 * 0.762e-3).at(f), Strip::new(&board, 1.9e-3).at(f));
            for mode in [pair.even, pair.odd] {
                assert!(
                    (mode.z0_ohm / strip.z0_ohm - 1.0).abs() < 5e-3 && (mode.eps_eff / strip.eps_eff - 1.0).abs() < 5e-3,
                    "{pair:?} {strip:?}"
                );
                assert!((mode.conductor_np_per_m - strip.conductor_np_per_m).abs() <= 0.02 * strip.conductor_np_per_m);
            }
        }
    }

    #[test]
    fn coupling_falls_with_the_gap_whatever_the_copper() {
        for er in [1.0, 2.2, 6.15, 15.0] {
            for t in [0.0, 18e-6, 70e-6] {
                let board = AsBuilt::for_tests(er, t);
                for u in [0.05, 0.3, 1.0, 4.0, 20.0] {
                    let mut last = 1.0;
                    for step in 0..150 {
                        let gap = 0.762e-3 * 0.01 * 1000f64.powf(step as f64 / 149.0);
                        let z = Pair::new(&board, u * 0.762e-3, gap).static_z0_ohm();
                        let coupling = (z.even - z.odd) / (z.even + z.odd);
                        assert!(coupling > 0.0 && coupling < last, "er {er} t {t} u {u} gap {gap}: {coupling} after {last}");
                        last = coupling;
                    }
                }
            }
        }
    }

    #[test]
    fn slopes_have_no_jump() {
        // Across the places where the formulas are continued (thin gaps): the slope in ln s may bend, not jump.
        for t in [0.0, 18e-6, 70e-6] {
            let board = AsBuilt::for_tests(3.0, t);
            let odd = |s: f64| Pair::new(&board, 1.5e-3, s).odd_at(3e9).z0_ohm;
            let slope = |s: f64| (odd(s * 1.0001) - odd(s / 1.0001)) / 2e-4;
            let mut last: Option<f64> = None;
            for step in 0..2000 {
                let here = slope(5e-6 * 400f64.powf(step as f64 / 1999.0));
                // Steps of 0.3 % in s; the slope itself changes by its own size over about a factor of 2.7 in s, so by 0.3 % a step; ten times that is a jump.
                if let Some(last) = last {
                    assert!((here - last).abs() < 0.03 * here.abs().max(1.0), "t {t} step {step}: {last} then {here}");
                }
                last = Some(here);
            }
        }
    }

    #[test]
    fn extremes_stay_finite() {
        for er in [1.0, 1.03, 2.2, 15.0, 100.0] {
            for t in [0.0, 1e-6, 70e-6, 700e-6] {
                for (w, s) in [(0.0, 0.0), (1e-6, 1e-9), (1e-3, -1.0), (1e-3, 1e-6), (1e-3, 0.1e-3), (1.0, 1.0), (1e-5, 1.0), (0.1, 1e-6)] {
                    let pair = Pair::new(&AsBuilt { undercut_m: 0.5 * t, widening_m: 1e-6, ..AsBuilt::for_tests(er, t) }, w, s);
                    for f in [0.0, 1e9, 1e11, 1e14] {
                        let modes = pair.at(f);
                        for mode in [modes.even, modes.odd] {
                            assert!(
                                mode.z0_ohm.is_finite() && mode.z0_ohm > 0.0 && mode.eps_eff.is_finite(),
                                "{er} {t} {w} {s} {f} {mode:?}"
                            );
                            assert!(mode.alpha_np_per_m().is_finite(), "{er} {t} {w} {s} {f} {mode:?}");
                        }
                    }
                }
            }
        }
    }
}
