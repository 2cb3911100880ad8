//! What are capacitance, inductance and loss of printed strips as they really are? The numerical quasi-static cross-section.

mod assembly;
mod coat;
mod elimination;
mod geometry;
mod green;
mod logarithm;
mod panels;
mod solve;
mod stackup;

pub use geometry::{CoatOf, CopperOf, CrossSection, HousingOf, LayerOf, STRIPS_AT_MOST, StripOf};
pub use solve::{Line, Mode, Pair, Solved, solve};
pub use stackup::Stackup;
