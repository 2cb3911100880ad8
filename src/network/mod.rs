//! Layout and as-built lines to S-parameters, response figures and Touchstone.

mod block;
mod circuit;
mod coupled;
mod curve;
mod figures;
mod join;
mod response;
pub mod touchstone;

pub use circuit::{Circuit, Planes};
pub use figures::{Figures, Verdict, passband_hz, passes_hz, sweep_hz};
pub use response::{Method, Response, level_db};

use crate::base::Outcome;
use crate::base::Problem;
use crate::layout::Layout;
use crate::line::AsBuilt;
use crate::line::Book;
use crate::line::Models;
use crate::order::Order;

/// The response of a layout on the board as ordered, at the default frequencies: loss, dispersion, open ends, steps, feeds and launches,
/// planes at the board's edge; with the warnings of line models used outside their range up to the highest frequency that matters.
///
/// # Errors
/// Those of [`Circuit::new`].
pub fn predict(order: &Order, layout: &Layout) -> Outcome<Response> {
    let highest_hz = order.requirements.iter().map(|r| r.to_hz).fold(passband_hz(order)[1], f64::max);
    respond(order, layout, &sweep_hz(order), highest_hz)
}

/// Which line models the response of a layout comes from, and how far the closed forms are from them.
///
/// # Errors
/// Those of [`Circuit::new`].
pub fn models(order: &Order, layout: &Layout) -> Result<Models, Vec<Problem>> {
    // Static constants are the same without loss, and sooner there.
    let book = Book::new(AsBuilt::nominal(order).without_loss());
    Circuit::new(layout, &book, order.filter.ports_ohm, Planes::Edge).map(|circuit| circuit.models()).map_err(|problem| vec![problem])
}

/// The response at frequencies of one's own, increasing and greater than zero; warned of up to the last.
///
/// # Errors
/// Those of [`Circuit::new`].
pub fn predict_at(order: &Order, layout: &Layout, f_hz: &[f64]) -> Outcome<Response> {
    respond(order, layout, f_hz, f_hz.last().copied().unwrap_or(0.0))
}

fn respond(order: &Order, layout: &Layout, f_hz: &[f64], trusted_to_hz: f64) -> Outcome<Response> {
    let book = Book::new(AsBuilt::nominal(order));
    let circuit = Circuit::new(layout, &book, order.filter.ports_ohm, Planes::Edge).map_err(|problem| vec![problem])?;
    Ok((circuit.sweep(f_hz), circuit.problems(trusted_to_hz)))
}
