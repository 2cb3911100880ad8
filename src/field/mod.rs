//! The drawn copper, solved: a full-wave method of moments in a metal box.

mod analysis;
mod board;
mod calibrate;
mod far;
mod geometry;
mod grid;
mod kernel;
mod mesh;
mod near;
mod outline;
mod read;
mod run;
mod stack;
mod structure;
mod sweep;

pub use analysis::{Analysis, Mesh, Solved};
pub use board::{BoardGeometry, FAR_LID_HEIGHTS, FAR_WALL_HEIGHTS, from_board};
pub use calibrate::{Calibration, Feed, PortLine};
pub use far::Split;
pub use geometry::{Conductor, Geometry, GeometryPort, PortPlace};
pub use grid::{Axis, Patch};
pub use kernel::Kernels;
pub use read::{GeometryFile, is_geometry_file, read_geometry};
pub use run::{Forecast, LIMIT, MOST_DIRECT, Options, Plan, Solution, Step};
pub use stack::{Dielectric, EPS0, MU0, Stack, Top};
pub use structure::{Sheet, Solver, Source, Structure};
pub use sweep::{SweepOptions, Swept, sweep};
