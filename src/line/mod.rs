//! One strip, coupled strips and discontinuities as built: impedance, effective permittivity, dispersion and loss.

mod as_built;
pub mod section;

pub use as_built::AsBuilt;
