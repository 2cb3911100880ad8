//! What every room stands on: problems, quantities, whole nanometres, root finding, least squares.

mod least_squares;
mod linear;
mod nm;
mod problem;
mod quantity;
mod root;
mod spelling;

pub use least_squares::minimize;
pub use linear::solve_in_place;
pub use nm::{Nm, Point};
pub use problem::{Outcome, Place, Problem, Severity};
pub use quantity::{Dimensionality, format_quantity, parse_quantity};
pub use root::bisect;
pub use spelling::spelt_out;
