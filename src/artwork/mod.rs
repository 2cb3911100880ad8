//! What can be made: the board in whole nanometres, finished size. Checks and writers know nothing else of the geometry.

mod assemble;
mod board;
mod callout;
mod compensate;
mod copper;
mod frame;
mod ground;
mod launch;
mod legend;
mod mask;
mod nets;
mod outline;
mod room;
pub mod shape;
mod text;

pub use assemble::board;
pub use board::*;
pub use compensate::compensated;
pub use ground::highest_hz;
pub use ground::slot_area;
pub use launch::launch_half_width;
pub use text::lettering;
