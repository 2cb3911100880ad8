//! What does a copper surface cost: skin depth, surface resistance, roughness. The laws themselves are [`super::section`]'s; here they are put for bare copper.

use super::section;
use super::section::Roughness;
use super::section::Surface;

/// Skin depth (m) of a good conductor; infinite at zero frequency.
pub fn skin_depth_m(f_hz: f64, conductivity_s_per_m: f64) -> f64 {
    section::skin_depth_m(f_hz, conductivity_s_per_m, 1.0)
}

/// Surface resistance (ohm per square) of a thick smooth conductor.
pub fn surface_resistance_ohm(f_hz: f64, conductivity_s_per_m: f64) -> f64 {
    Surface::smooth(conductivity_s_per_m).resistance_ohm(f_hz)
}

/// By which factor roughness of `rms_m` raises the surface resistance; saturates at 2, which understates very rough foil above some 10 GHz.
///
/// # Source
/// [`Roughness::HammerstadJensen`].
pub fn hammerstad_roughness_factor(f_hz: f64, conductivity_s_per_m: f64, rms_m: f64) -> f64 {
    Roughness::HammerstadJensen { rq_m: rms_m }.factor(skin_depth_m(f_hz, conductivity_s_per_m))
}

/// The same by stacked spheres, from the ten-point height `rz_m` of the foil; does not saturate at 2.
///
/// # Source
/// [`Roughness::Cannonball`].
pub fn sphere_roughness_factor(f_hz: f64, conductivity_s_per_m: f64, rz_m: f64) -> f64 {
    Roughness::Cannonball { rz_m }.factor(skin_depth_m(f_hz, conductivity_s_per_m))
}
