//! One quasi-TEM mode of a line: impedance, effective permittivity, and the losses of its copper and laminate.

use std::f64::consts::PI;

use super::AsBuilt;
use super::C_M_PER_S;
use super::ETA0_OHM;
use super::numerical;
use super::section::ModeLoss;
use super::section::Roughness;
use super::section::Surfaces;
use super::statics::StaticMode;
use super::surface::skin_depth_m;
use super::surface::surface_resistance_ohm;

/// A mode at one frequency.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Mode {
    /// Characteristic impedance; of each strip to ground for the modes of a pair.
    pub z0_ohm: f64,
    /// Effective permittivity: square of the slowing against free space.
    pub eps_eff: f64,
    /// Attenuation by the copper.
    pub conductor_np_per_m: f64,
    /// Attenuation by the laminate.
    pub dielectric_np_per_m: f64,
}

impl Mode {
    /// Whole attenuation.
    pub fn alpha_np_per_m(&self) -> f64 {
        self.conductor_np_per_m + self.dielectric_np_per_m
    }

    /// Phase constant at the frequency the mode was made for.
    pub fn beta_rad_per_m(&self, f_hz: f64) -> f64 {
        2.0 * PI * f_hz * self.eps_eff.sqrt() / C_M_PER_S
    }

    /// Guided wavelength at the frequency the mode was made for.
    pub fn wavelength_m(&self, f_hz: f64) -> f64 {
        C_M_PER_S / (f_hz * self.eps_eff.sqrt())
    }
}

/// What the losses of every mode on a board have in common.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Losses {
    lossless: bool,
    conductivity_s_per_m: f64,
    roughness: Roughness,
    er: f64,
    loss_tangent: f64,
    surfaces: Surfaces,
}

impl Losses {
    pub(super) fn new(board: &AsBuilt) -> Losses {
        Losses {
            lossless: board.lossless,
            conductivity_s_per_m: board.conductivity_s_per_m,
            roughness: board.roughness(),
            er: board.permittivity,
            loss_tangent: board.loss_tangent,
            surfaces: numerical::surfaces(board),
        }
    }

    /// The mode at a frequency; `solved` is the loss of the numerical cross-section, without which the closed forms serve.
    ///
    /// Copper: H. A. Wheeler's incremental-inductance rule ("Formulas for the skin effect", Proc. IRE 30, 1942), alpha = Rs K / (2 Z0 eta0) dZair/dn, all
    /// walls of strip and ground receding; K the roughness factor, taken for the whole surface although only the laminate side is rough, so on the safe side.
    /// Valid where the copper is some skin depths thick; towards zero frequency the loss goes to zero instead of to the direct-current resistance.
    /// Of a solved cross-section each wall has its own surface: roughness on the laminate's side only, plating on top and sides only.
    /// Laminate: alpha = k0 er (eps_eff - 1) tan d / (2 sqrt(eps_eff) (er - 1)), the filling factor of each mode (Matthaei, Young, Jones 1964; any textbook).
    /// Of a solved cross-section the static filling is the solver's, and grows with the frequency as that formula grows.
    pub(super) fn mode(&self, f_hz: f64, statics: &StaticMode, eps_eff: f64, impedance_factor: f64, solved: Option<&ModeLoss>) -> Mode {
        let z0_ohm = statics.z0_ohm() * impedance_factor;
        if self.lossless {
            return Mode { z0_ohm, eps_eff, conductor_np_per_m: 0.0, dielectric_np_per_m: 0.0 };
        }
        if f_hz == 0.0 {
            return Mode { z0_ohm, eps_eff, conductor_np_per_m: 0.0, dielectric_np_per_m: 0.0 };
        }
        if let Some(loss) = solved {
            let share = |eps_eff: f64| (eps_eff - 1.0) / eps_eff;
            let growth = if statics.eps_eff > 1.0 { share(eps_eff) / share(statics.eps_eff) } else { 1.0 };
            return Mode {
                z0_ohm,
                eps_eff,
                conductor_np_per_m: loss.conductor_np_per_m(f_hz, z0_ohm, &self.surfaces),
                dielectric_np_per_m: growth * loss.dielectric_np_per_m(f_hz, eps_eff),
            };
        }
        let resistance_ohm =
            surface_resistance_ohm(f_hz, self.conductivity_s_per_m) * self.roughness.factor(skin_depth_m(f_hz, self.conductivity_s_per_m));
        let k0 = 2.0 * PI * f_hz / C_M_PER_S;
        // The share of the energy in the laminate; at er = 1 the ratio has a limit that no laminate asks for.
        let share = if self.er > 1.0 { self.er * (eps_eff - 1.0) / (self.er - 1.0) } else { 0.0 };
        Mode {
            z0_ohm,
            eps_eff,
            conductor_np_per_m: resistance_ohm * statics.recession_ohm_per_m / (2.0 * z0_ohm * ETA0_OHM),
            dielectric_np_per_m: k0 * share * self.loss_tangent / (2.0 * eps_eff.sqrt()),
        }
    }
}
