//! One strip, coupled strips and discontinuities as built: impedance, effective permittivity, dispersion and loss.
//!
//! A [`Strip`] or [`Pair`] is made once for a drawn geometry on a board [`AsBuilt`] and then asked for its [`Mode`]s at any frequency; both are smooth in
//! frequency and in their sizes. Every number outside the range of its source is a warning from `problems`.
//!
//! Static constants come from the numerical cross-section [`section`] (thickness, taper, lid, uniaxial laminate); published closed forms are the first guess of
//! the inverse, the check beside it, and what [`StaticsModel::ClosedForm`] asks for. Frequency is added by published dispersion laws in both cases.

mod as_built;
mod book;
mod coplanar;
mod coupled;
mod dispersion;
pub mod gap;
mod inverse;
mod mode;
mod models;
mod numerical;
pub mod open_end;
mod pair;
mod range;
pub mod section;
mod single;
mod statics;
mod step;
mod strip;
pub mod stripline;
mod surface;

pub use as_built::{AsBuilt, StaticsModel, plating_of};
pub use book::Book;
pub use coplanar::Coplanar;
pub use coupled::EvenOdd;
pub use inverse::{OutOfReach, Unreachable, pair_for_impedances, width_for_impedance};
pub use mode::Mode;
pub use models::Models;
pub use pair::Pair;
pub use step::{Step, step};
pub use strip::Strip;
pub use surface::{hammerstad_roughness_factor, skin_depth_m, sphere_roughness_factor, surface_resistance_ohm};

/// Speed of light, m/s (exact).
pub const C_M_PER_S: f64 = 299_792_458.0;
/// Wave impedance of free space, ohm.
pub const ETA0_OHM: f64 = 376.730_313_668;
