//! What is at a tee of strips: lengths to take out of its three arms, transformers, and a shunt susceptance.

use std::f64::consts::PI;

use super::C_M_PER_S;
use super::ETA0_OHM;
use super::Strip;
use super::covered::outside;
use crate::base::Problem;

const SOURCE: &str = "Hammerstad 1981";

/// A tee of two through arms and a side arm.
///
/// Strips are drawn from the centre lines: the through arms up to the side arm's centre line, the side arm from the through strip's centre line (of the wider
/// one when they differ).
#[derive(Clone, Debug, PartialEq)]
pub struct Tee {
    through: [Strip; 2],
    side: Strip,
}

/// A tee at a frequency.
///
/// Circuit: from through arm 1 a transformer `turns_1` : 1 to the common node, from through arm 2 `turns_2` : 1, the side arm on the node, `shunt_s` (a
/// susceptance, S) from the node to ground. With `turns` n, voltage on the arm is n times that of the node.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TeeAt {
    /// Take out of the length of through arm 1; negative: add.
    pub shift_1_m: f64,
    /// Take out of the length of through arm 2.
    pub shift_2_m: f64,
    /// Take out of the length of the side arm.
    pub shift_side_m: f64,
    /// Voltage of arm 1 over the node's.
    pub turns_1: f64,
    /// Voltage of arm 2 over the node's.
    pub turns_2: f64,
    /// Susceptance at the node.
    pub shunt_s: f64,
}

/// A tee of `through_1`, `through_2` and `side`, all on one board.
///
/// # Valid range
/// No range claimed by the source; below half the first transverse resonance of the widest arm, [`Tee::problems`] tells. Through arms of different widths have
/// their step besides.
///
/// # Accuracy
/// Against our full-wave solver at 4 GHz (`cargo bench --bench discontinuities`), 50-ohm through strip, side arm of 1 and 0.4 widths, er 3.0, 0.762 mm and er
/// 10.2, 0.635 mm: no S-parameter off by more than 0.025, where strips joined at their centre lines without a model are off by 0.09 to 0.13. A star of three
/// inductances and a capacitance through the solved values has the side shift 0.27 to 0.49 h longer and the through shift 0.06 to 0.09 h shorter. Through arms
/// of different widths were not compared.
///
/// # Source
/// E. Hammerstad, "Computer-aided design of microstrip couplers with accurate discontinuity models", IEEE MTT-S Digest 1981, pp. 54-56 (from memory).
pub fn tee(through_1: &Strip, through_2: &Strip, side: &Strip) -> Tee {
    Tee { through: [through_1.clone(), through_2.clone()], side: side.clone() }
}

impl Tee {
    /// Its elements at a frequency.
    pub fn at(&self, f_hz: f64) -> TeeAt {
        let h = self.side.board.thickness_m;
        let er = self.side.board.permittivity;
        let arm = |strip: &Strip| {
            let mode = strip.at(f_hz);
            (mode.z0_ohm, ETA0_OHM * h / (mode.z0_ohm * mode.eps_eff.sqrt()), mode.eps_eff.sqrt())
        };
        let [a, b] = [arm(&self.through[0]), arm(&self.through[1])];
        let (side_ohm, side_plate_m, _) = arm(&self.side);
        // Frequency over the first transverse resonance of each through arm, Z/(2 mu0 h).
        let resonance = |z: f64| z * C_M_PER_S / (2.0 * ETA0_OHM * h);
        let (fa, fb) = (f_hz / resonance(a.0), f_hz / resonance(b.0));
        let plate_m = (a.1 * b.1).sqrt();
        let (r, q) = ((a.0 * b.0).sqrt() / side_ohm, fa * fb);
        let through_shift = |z: f64, share: f64| 0.055 * side_plate_m * z / side_ohm * (1.0 - 2.0 * z / side_ohm * share * share);
        let (shift_1_m, shift_2_m) = (through_shift(a.0, fa), through_shift(b.0, fb));
        let shift_side_m = plate_m * (0.5 - r * (0.05 + 0.7 * (-1.6 * r).exp() + 0.25 * r * q - 0.17 * r.ln()));
        let turns = |z: f64, share: f64, plate_m: f64| {
            let squared = 1.0 - PI * share * share * ((z / side_ohm).powi(2) / 12.0 + (0.5 - shift_side_m / plate_m).powi(2));
            // Beyond the range the square goes below zero; `problems` has said so long before.
            squared.max(0.01).sqrt()
        };
        let (turns_1, turns_2) = (turns(a.0, fa, a.1), turns(b.0, fb, b.1));
        let wavelengths = plate_m * f_hz * (a.2 * b.2).sqrt() / C_M_PER_S;
        let level = 1.0 + 0.9 * r.ln() + 4.5 * r * q - 4.4 * (-1.3 * r).exp() - 20.0 * (side_ohm / ETA0_OHM).powi(2);
        let shift_m = (shift_1_m.max(0.0) * shift_2_m.max(0.0)).sqrt();
        let shunt_s = 5.5 * wavelengths * (er + 2.0) / er / (side_ohm * turns_1 * turns_2) * shift_m / side_plate_m * level;
        TeeAt { shift_1_m, shift_2_m, shift_side_m, turns_1, turns_2, shunt_s }
    }

    /// Warnings `discontinuity-out-of-range` for use up to a frequency.
    pub fn problems(&self, up_to_hz: f64) -> Vec<Problem> {
        let h = self.side.board.thickness_m;
        let lowest_ohm = self.through.iter().chain([&self.side]).map(Strip::static_z0_ohm).fold(f64::INFINITY, f64::min);
        let share = up_to_hz * 2.0 * ETA0_OHM * h / (C_M_PER_S * lowest_ohm);
        outside(SOURCE, "frequency over the first transverse resonance of a tee's widest arm", share, 0.0..=0.5).into_iter().collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::line::AsBuilt;

    #[test]
    fn a_vanishing_side_arm_leaves_the_line_alone() {
        let board = AsBuilt::for_tests(3.0, 0.0);
        let through = Strip::new(&board, 1.9e-3);
        let at = |width_m: f64| tee(&through, &through, &Strip::new(&board, width_m)).at(1e9);
        let (narrow, wide) = (at(0.03e-3), at(1.9e-3));
        assert!(narrow.shift_1_m < 0.2 * wide.shift_1_m && narrow.shift_1_m < 0.03 * 0.762e-3, "{narrow:?}");
        // The law leaves half a per cent of the line's admittance at an arm this narrow.
        assert!((narrow.turns_1 - 1.0).abs() < 2e-3 && narrow.shunt_s.abs() * 50.0 < 0.01, "{narrow:?}");
        // The arm then begins at the strip's edge, within its fringe: half the plate width D from the centre line at the most.
        assert!(narrow.shift_side_m > 0.5 * 1.9e-3 && narrow.shift_side_m < 1.9e-3, "{narrow:?}");
    }

    #[test]
    fn arms_change_places() {
        let board = AsBuilt::for_tests(9.8, 0.0);
        let [one, two, side] = [0.8e-3, 0.5e-3, 0.6e-3].map(|w| Strip::new(&board, w));
        let (a, b) = (tee(&one, &two, &side).at(3e9), tee(&two, &one, &side).at(3e9));
        assert_eq!((a.shift_1_m, a.turns_1, a.shift_side_m), (b.shift_2_m, b.turns_2, b.shift_side_m));
        assert_eq!(tee(&one, &two, &side).problems(3e9), vec![]);
        assert_eq!(tee(&one, &two, &side).problems(60e9).len(), 1);
    }
}
