//! What can be made: the board in whole nanometres, finished size. Checks and writers know nothing else of the geometry.

mod board;

pub use board::*;
