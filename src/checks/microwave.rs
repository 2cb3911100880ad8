//! What the microwave rules share: the top of the band, free-space speed, where a dimension lies.

use crate::base::Place;
use crate::checks::Subject;
use crate::layout::Node;
use crate::order::Band;
use crate::order::Order;

/// Metres per second.
pub(super) const SPEED_OF_LIGHT: f64 = 299_792_458.0;

/// Upper edge of the band the filter is made for, hertz.
pub(super) fn band_top_hz(order: &Order) -> f64 {
    match order.filter.band {
        Band::LowPass { cutoff_hz } => cutoff_hz,
        Band::HighPass { to_hz, .. } | Band::BandPass { to_hz, .. } | Band::BandStop { to_hz, .. } => to_hz,
    }
}

/// The board's place of a dimension, or its name where it has none.
pub(super) fn place_of(subject: &Subject, dimension: &str) -> Place {
    subject
        .board
        .callouts
        .iter()
        .find(|callout| callout.dimension == dimension)
        .map_or_else(|| Place::Dimension(dimension.to_string()), |c| Place::Board(Node { left: c.from, right: c.to }.middle()))
}
