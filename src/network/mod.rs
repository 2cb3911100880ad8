//! Layout and as-built lines to S-parameters, response figures and Touchstone.

mod figures;
mod response;
pub mod touchstone;

pub use figures::{Figures, Verdict};
pub use response::{Method, Response};
