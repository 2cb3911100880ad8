//! Is a strip, pair or array inside what the sources of its formulas cover?
//!
//! Static values from the numerical cross-section have no range: the solver refuses what it cannot do (`section-not-solved`). What is left is the dispersion
//! law, and that only where it moves anything.

use super::Array;
use super::AsBuilt;
use super::C_M_PER_S;
use super::Pair;
use super::Strip;
use crate::base::Place;
use crate::base::Problem;

const SINGLE_SOURCE: &str = "Hammerstad & Jensen 1980; Kirschning & Jansen 1982";
const SINGLE_DISPERSION_SOURCE: &str = "dispersion: Kirschning & Jansen 1982";
const PAIR_DISPERSION_SOURCE: &str = "dispersion: Kirschning & Jansen 1984";
const PAIR_SOURCE: &str = "Kirschning & Jansen 1984";
/// Height over wavelength up to which the single-strip dispersion is claimed (Kirschning & Jansen 1982).
const SINGLE_HEIGHT_IN_WAVELENGTHS: f64 = 0.13;
/// Frequency times height up to which the coupled dispersion is claimed (Kirschning & Jansen 1984), GHz mm.
const PAIR_GHZ_MM: f64 = 25.0;
/// Thickness over height up to which the single strip was seen within 0.25 % in impedance and 0.5 % in effective permittivity.
const SINGLE_THICKNESS: f64 = 0.1;
/// Thickness over height up to which the pair's coupling was seen within about 2.5 %, gaps from 0.2 heights up.
const PAIR_THICKNESS: f64 = 0.07;
/// Gap over thickness below which side walls facing each other carry a good part of the odd mode, which the effective width does not know.
const PAIR_GAP_IN_THICKNESSES: f64 = 3.0;

/// Rise of the effective permittivity from which the range of the dispersion law matters when the static value is solved: 0.1 % of a frequency.
const DISPERSION_MATTERS: f64 = 2e-3;

impl Strip {
    /// Frequency (Hz) up to which its dispersion is claimed by the source.
    pub fn trusted_up_to_hz(&self) -> f64 {
        under_lid(&self.board, SINGLE_HEIGHT_IN_WAVELENGTHS * C_M_PER_S / self.board.thickness_m)
    }

    /// Warnings (`line-model-range`, `section-not-solved`, `lid-not-modelled`, `strip-top-vanishes`) for use up to a frequency; none inside the range.
    pub fn problems(&self, up_to_hz: f64) -> Vec<Problem> {
        let mut range = Range::new(&self.board, SINGLE_SOURCE);
        let h = self.board.thickness_m;
        range.not_solved(&self.not_solved(), self.error_estimate().is_some());
        if self.error_estimate().is_some() {
            range.source = SINGLE_DISPERSION_SOURCE;
            if self.at(up_to_hz).eps_eff > (1.0 + DISPERSION_MATTERS) * self.static_eps_eff() {
                range.inside("width over thickness of the laminate", self.built_width_m / h, 0.1, 100.0);
                range.inside("permittivity", self.board.permittivity, 1.0, 20.0);
            }
            range.up_to(up_to_hz, self.trusted_up_to_hz());
            return range.problems;
        }
        range.inside("width over thickness of the laminate", self.built_width_m / h, 0.01, 100.0);
        range.inside("permittivity", self.board.permittivity, 1.0, 20.0);
        range.inside("copper thickness over thickness of the laminate", self.board.copper_thickness_m / h, 0.0, SINGLE_THICKNESS);
        range.up_to(up_to_hz, self.trusted_up_to_hz());
        range.board(self.width_m);
        range.problems
    }
}

impl Pair {
    /// Frequency (Hz) up to which its dispersion is claimed by the source.
    pub fn trusted_up_to_hz(&self) -> f64 {
        under_lid(&self.board, PAIR_GHZ_MM * 1e6 / self.board.thickness_m)
    }

    /// Warnings (`line-model-range`, `section-not-solved`, `lid-not-modelled`, `strip-top-vanishes`) for use up to a frequency; none inside the range.
    pub fn problems(&self, up_to_hz: f64) -> Vec<Problem> {
        let mut range = Range::new(&self.board, PAIR_SOURCE);
        let (h, t) = (self.board.thickness_m, self.board.copper_thickness_m);
        range.not_solved(&self.not_solved(), self.error_estimate().is_some());
        if self.error_estimate().is_some() {
            range.source = PAIR_DISPERSION_SOURCE;
            let (modes, statics) = (self.at(up_to_hz), self.static_eps_eff());
            if (modes.even.eps_eff / statics.even).max(modes.odd.eps_eff / statics.odd) > 1.0 + DISPERSION_MATTERS {
                range.inside("width over thickness of the laminate", self.built_width_m / h, 0.1, 10.0);
                range.inside("gap over thickness of the laminate", self.built_gap_m / h, 0.1, 10.0);
                range.inside("permittivity", self.board.permittivity, 1.0, 18.0);
            }
            range.up_to(up_to_hz, self.trusted_up_to_hz());
            return range.problems;
        }
        range.inside("width over thickness of the laminate", self.built_width_m / h, 0.1, 10.0);
        range.inside("gap over thickness of the laminate", self.built_gap_m / h, 0.1, 10.0);
        range.inside("permittivity", self.board.permittivity, 1.0, 18.0);
        range.inside("copper thickness over thickness of the laminate", t / h, 0.0, PAIR_THICKNESS);
        if t > 0.0 {
            range.inside("gap over copper thickness", self.built_gap_m / t, PAIR_GAP_IN_THICKNESSES, f64::INFINITY);
        }
        range.up_to(up_to_hz, self.trusted_up_to_hz());
        range.board(self.width_m);
        range.problems
    }
}

impl Array {
    /// Frequency (Hz) up to which the laws its dispersion is put together from are claimed by their sources.
    pub fn trusted_up_to_hz(&self) -> f64 {
        let open = if self.count() > 1 { PAIR_GHZ_MM * 1e6 } else { SINGLE_HEIGHT_IN_WAVELENGTHS * C_M_PER_S };
        under_lid(&self.board, open / self.board.thickness_m)
    }

    /// Warnings as those of [`Pair::problems`], and the errors `array-gaps` and `array-size`; none inside the range.
    pub fn problems(&self, up_to_hz: f64) -> Vec<Problem> {
        let mut range = Range::new(&self.board, if self.count() > 1 { PAIR_SOURCE } else { SINGLE_SOURCE });
        range.problems.extend(self.mismatch().cloned());
        range.not_solved(&self.not_solved(), self.error_estimate().is_some());
        let h = self.board.thickness_m;
        let solved = self.error_estimate().is_some();
        let mut sizes_matter = true;
        if solved {
            range.source = if self.count() > 1 { PAIR_DISPERSION_SOURCE } else { SINGLE_DISPERSION_SOURCE };
            let statics = &self.static_modes().eps_eff;
            sizes_matter =
                self.at(up_to_hz).index.iter().zip(statics).any(|(index, eps_eff)| index * index > (1.0 + DISPERSION_MATTERS) * eps_eff);
        }
        if sizes_matter {
            let (narrowest, widest) = ends(&self.built_widths_m);
            let widest_allowed = if self.count() > 1 { 10.0 } else { 100.0 };
            range.inside("width over thickness of the laminate", narrowest / h, 0.1, widest_allowed);
            if widest > narrowest {
                range.inside("width over thickness of the laminate", widest / h, 0.1, widest_allowed);
            }
            if let [_, ..] = self.built_gaps_m.as_slice() {
                let (least, most) = ends(&self.built_gaps_m);
                range.inside("gap over thickness of the laminate", least / h, 0.1, 10.0);
                if most > least {
                    range.inside("gap over thickness of the laminate", most / h, 0.1, 10.0);
                }
            }
            range.inside("permittivity", self.board.permittivity, 1.0, if self.count() > 1 { 18.0 } else { 20.0 });
        }
        range.up_to(up_to_hz, self.trusted_up_to_hz());
        if !solved {
            let allowed = if self.count() > 1 { PAIR_THICKNESS } else { SINGLE_THICKNESS };
            range.inside("copper thickness over thickness of the laminate", self.board.copper_thickness_m / h, 0.0, allowed);
            range.board(ends(&self.widths_m).0);
        }
        range.problems
    }
}

/// A lid adds the first higher mode between ground and lid, above which nothing here holds.
fn under_lid(board: &AsBuilt, open_hz: f64) -> f64 {
    board.lid_m.map_or(open_hz, |lid_m| open_hz.min(C_M_PER_S / (2.0 * (lid_m + board.thickness_m * board.permittivity.sqrt()))))
}

/// Least and greatest.
fn ends(sizes: &[f64]) -> (f64, f64) {
    sizes.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), size| (low.min(*size), high.max(*size)))
}

struct Range<'a> {
    board: &'a AsBuilt,
    source: &'static str,
    problems: Vec<Problem>,
}

impl Range<'_> {
    fn new<'a>(board: &'a AsBuilt, source: &'static str) -> Range<'a> {
        Range { board, source, problems: Vec::new() }
    }

    fn warn(&mut self, code: &'static str, message: String, help: &str) {
        self.problems.push(Problem::warning(code, Place::Whole, message, help).with_source(self.source));
    }

    /// The solver was to give these numbers and did not: the closed form stands in.
    fn not_solved(&mut self, reasons: &[&Problem], statics_solved: bool) {
        for reason in reasons {
            let what = if statics_solved { "the conductor loss of the cross-section" } else { "the cross-section" };
            let message = format!("{what} is not solved, the closed form stands in: {} ({})", reason.message, reason.code);
            self.warn("section-not-solved", message, &reason.help);
        }
    }

    fn inside(&mut self, what: &str, value: f64, low: f64, high: f64) {
        // Not "value < low || value > high": not-a-number must be reported too.
        if !(low..=high).contains(&value) {
            let allowed = if high.is_finite() { format!("{low} to {high}") } else { format!("{low} or more") };
            self.warn(
                "line-model-range",
                format!("{what} is {value:.4}; the model covers {allowed}"),
                "trust it less: measure a test board, or choose another laminate or size",
            );
        }
    }

    fn up_to(&mut self, up_to_hz: f64, trusted_hz: f64) {
        if up_to_hz > trusted_hz {
            let message = format!(
                "used up to {:.4} GHz; on this laminate the dispersion is covered up to {:.4} GHz",
                up_to_hz * 1e-9,
                trusted_hz * 1e-9
            );
            self.warn("line-model-range", message, "take a thinner laminate");
        }
    }

    fn board(&mut self, width_m: f64) {
        if let Some(lid_m) = self.board.lid_m {
            let message =
                format!("the lid {:.3} mm above the laminate is not in this model; it lowers impedances and weak couplings", lid_m * 1e3);
            self.warn("lid-not-modelled", message, "keep the lid ten or more laminate thicknesses away");
        }
        let foot_m = width_m + self.board.widening_m;
        if foot_m <= 2.0 * self.board.undercut_m {
            let message = format!(
                "a strip {:.4} mm wide at its foot has no top left: the etch undercuts each side by {:.4} mm",
                foot_m * 1e3,
                self.board.undercut_m * 1e3
            );
            self.warn("strip-top-vanishes", message, "draw it wider, or take thinner copper");
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn warns_outside_only() {
        let board = AsBuilt::for_tests(3.0, 35e-6);
        assert_eq!(Strip::new(&board, 1.9e-3).problems(10e9), vec![]);
        assert_eq!(Pair::new(&board, 1.9e-3, 0.3e-3).problems(10e9), vec![]);
        let codes = |problems: Vec<Problem>| problems.iter().map(|p| p.code).collect::<Vec<_>>();
        assert_eq!(codes(Strip::new(&board, 0.1).problems(60e9)), ["line-model-range", "line-model-range"]);
        let lid = AsBuilt { lid_m: Some(3e-3), undercut_m: 20e-6, ..board };
        assert_eq!(codes(Strip::new(&lid, 30e-6).problems(1e9)), ["lid-not-modelled", "strip-top-vanishes"]);
        // Gap below a tenth of the height and below three copper thicknesses.
        assert_eq!(
            codes(Pair::new(&AsBuilt::for_tests(3.0, 35e-6), 1.9e-3, 0.05e-3).problems(1e9)),
            ["line-model-range", "line-model-range"]
        );
        assert_eq!(codes(Pair::new(&AsBuilt::for_tests(3.0, 35e-6), f64::NAN, 0.3e-3).problems(1e9)).len(), 1);
    }
}
