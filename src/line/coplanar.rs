//! A pad between ground pads over a ground plane: impedance, effective permittivity and loss of a launch's signal pad.

use super::AsBuilt;
use super::C_M_PER_S;
use super::skin_depth_m;
use super::surface_resistance_ohm;
use crate::base::bisect;

/// Conductor-backed coplanar line, quasi-static.
///
/// # Valid range
/// Side grounds wide against the gap and tied to the bottom ground by vias much closer than a quarter wave; thin copper.
///
/// # Source
/// Ghione and Naldi, "Coplanar waveguides for MMIC applications", IEEE Trans. MTT-35, 1987, pp. 260-267 (conformal mapping, from memory).
///
/// # Accuracy
/// A few percent in impedance at the gaps of connector footprints; enough for pads a small part of a wavelength long.
#[derive(Clone, Debug, PartialEq)]
pub struct Coplanar {
    /// Characteristic impedance.
    pub z0_ohm: f64,
    /// Effective permittivity.
    pub eps_eff: f64,
    width_m: f64,
    built: AsBuilt,
}

impl Coplanar {
    /// The line of a pad `width_m` wide with `gap_m` to the grounds either side.
    pub fn new(built: &AsBuilt, width_m: f64, gap_m: f64) -> Coplanar {
        let (a, b) = (0.5 * width_m, 0.5 * width_m + gap_m);
        let k = a / b;
        let scale = 0.5 * std::f64::consts::PI / built.thickness_m;
        let k3 = (scale * a).tanh() / (scale * b).tanh();
        let (air, backed) = (elliptic_ratio(k), elliptic_ratio(k3));
        let q = backed / air;
        let eps_eff = (1.0 + built.permittivity * q) / (1.0 + q);
        let z0_ohm = 60.0 * std::f64::consts::PI / eps_eff.sqrt() / (air + backed);
        Coplanar { z0_ohm, eps_eff, width_m, built: built.clone() }
    }

    /// The gap to the grounds (m) that gives an impedance, or the nearer end of the allowed range when none does.
    pub fn gap_for_impedance(built: &AsBuilt, width_m: f64, z0_ohm: f64, [least_m, most_m]: [f64; 2]) -> f64 {
        // Impedance grows with the gap.
        let excess = |gap_m: f64| Coplanar::new(built, width_m, gap_m).z0_ohm - z0_ohm;
        bisect(excess, least_m, most_m, 1e-9).unwrap_or(if excess(least_m) > 0.0 { least_m } else { most_m })
    }

    /// Attenuation: dielectric by filling, conductor by a current spread evenly over the pad (Pozar, "Microwave Engineering", the
    /// simple strip estimate), which is on the high side for a pad a few millimetres long.
    pub fn alpha_np_per_m(&self, f_hz: f64) -> f64 {
        let built = &self.built;
        if built.lossless {
            return 0.0;
        }
        let conductor = surface_resistance_ohm(f_hz, built.conductivity_s_per_m)
            * built.roughness().factor(skin_depth_m(f_hz, built.conductivity_s_per_m))
            / (self.z0_ohm * self.width_m);
        let filling = built.permittivity * (self.eps_eff - 1.0) / (self.eps_eff.sqrt() * (built.permittivity - 1.0).max(1e-9));
        conductor + std::f64::consts::PI * f_hz / C_M_PER_S * filling * built.loss_tangent
    }
}

/// K(k)/K(k') by arithmetic-geometric means.
fn elliptic_ratio(k: f64) -> f64 {
    let other = (1.0 - k * k).max(0.0).sqrt();
    mean(1.0, k) / mean(1.0, other)
}

/// Arithmetic-geometric mean; converges quadratically, 40 steps are more than any pair of `f64` needs.
fn mean(mut a: f64, mut b: f64) -> f64 {
    for _ in 0..40 {
        if (a - b).abs() <= 1e-15 * a {
            break;
        }
        (a, b) = (0.5 * (a + b), (a * b).sqrt());
    }
    a
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn elliptic_ratio_is_one_where_the_moduli_are_equal() {
        assert!((elliptic_ratio(0.5f64.sqrt()) - 1.0).abs() < 1e-14);
    }
}
