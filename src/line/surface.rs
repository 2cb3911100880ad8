//! What does a copper surface cost: skin depth, surface resistance, roughness.

use std::f64::consts::PI;

/// Permeability of free space, H/m.
const MU0: f64 = 4e-7 * PI;

/// Skin depth (m) of a good conductor; infinite at zero frequency.
pub fn skin_depth_m(f_hz: f64, conductivity_s_per_m: f64) -> f64 {
    1.0 / (PI * f_hz * MU0 * conductivity_s_per_m).sqrt()
}

/// Surface resistance (ohm per square) of a thick smooth conductor.
pub fn surface_resistance_ohm(f_hz: f64, conductivity_s_per_m: f64) -> f64 {
    (PI * f_hz * MU0 / conductivity_s_per_m).sqrt()
}

/// By which factor roughness of `rms_m` raises the surface resistance; saturates at 2, which understates very rough foil above some 10 GHz.
///
/// # Source
/// Hammerstad & Jensen 1980, eq. 12, after S. P. Morgan, J. Appl. Phys. 20, 1949.
pub fn hammerstad_roughness_factor(f_hz: f64, conductivity_s_per_m: f64, rms_m: f64) -> f64 {
    // (rms / skin depth)^2 without dividing by zero at zero frequency.
    let ratio_squared = rms_m * rms_m * PI * f_hz * MU0 * conductivity_s_per_m;
    1.0 + 2.0 / PI * (1.4 * ratio_squared).atan()
}

/// The same by stacked spheres ("cannonball": 14 equal spheres on a square base), from the ten-point height `rz_m` of the foil; does not saturate at 2.
///
/// # Source
/// P. G. Huray, *The Foundations of Signal Integrity*, 2009, in the reduction to Rz by B. Simonovich: sphere radius 0.06 Rz, base 36 radii squared
/// (from memory).
pub fn sphere_roughness_factor(f_hz: f64, conductivity_s_per_m: f64, rz_m: f64) -> f64 {
    if rz_m <= 0.0 || f_hz <= 0.0 {
        return 1.0;
    }
    let depth_over_radius = skin_depth_m(f_hz, conductivity_s_per_m) / (0.06 * rz_m);
    1.0 + 1.5 * (14.0 * 4.0 * PI / 36.0) / (1.0 + depth_over_radius + 0.5 * depth_over_radius * depth_over_radius)
}
