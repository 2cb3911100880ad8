//! Layout and as-built lines to S-parameters, response figures and Touchstone.

mod circuit;
mod curve;
mod figures;
mod join;
mod response;
pub mod touchstone;

pub use circuit::{Circuit, Planes};
pub use figures::{Figures, Verdict, passband_hz, sweep_hz};
pub use response::{Method, Response, level_db};

use crate::base::Problem;
use crate::layout::Layout;
use crate::line::AsBuilt;
use crate::line::Book;
use crate::order::Order;

/// The response of a layout on the board as ordered, at the default frequencies: loss, dispersion, open ends, steps, feeds and launches,
/// planes at the board's edge.
///
/// # Errors
/// Those of [`Circuit::new`].
pub fn predict(order: &Order, layout: &Layout) -> Result<Response, Problem> {
    predict_at(order, layout, &sweep_hz(order))
}

/// The same at frequencies of one's own, increasing and greater than zero.
///
/// # Errors
/// Those of [`Circuit::new`].
pub fn predict_at(order: &Order, layout: &Layout, f_hz: &[f64]) -> Result<Response, Problem> {
    let book = Book::new(AsBuilt::nominal(order));
    let circuit = Circuit::new(layout, &book, order.filter.ports_ohm, Planes::Edge)?;
    Ok(circuit.sweep(f_hz))
}
