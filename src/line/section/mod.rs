//! What are capacitance, inductance and loss of printed strips as they really are? The numerical quasi-static cross-section.

mod assembly;
mod coat;
mod elimination;
mod geometry;
mod green;
mod inverse;
mod logarithm;
mod loss;
mod panels;
mod solve;
mod stackup;

pub use geometry::{CoatOf, CopperOf, CrossSection, HousingOf, LayerOf, STRIPS_AT_MOST, StripOf};
pub use loss::{ModeLoss, Plating, Roughness, Surface, Surfaces, WallShares, loss, skin_depth_m};
pub use solve::{Line, Mode, Pair, Solved, solve};
pub use stackup::Stackup;
