//! Low-pass prototypes: g-values, attenuation and degree, and what they ask of the resonators of a band-pass filter.
//!
//! Convention: `g[0]` is the source, `g[1]..=g[n]` the reactive elements, `g[n + 1]` the load; the source is 1 ohm and the cutoff 1 rad/s. The cutoff of
//! the maximally flat shape is its half-power point (3.0103 dB), that of the equal-ripple shape the end of the ripple.

mod characteristic;
mod commensurate;
mod degree;
mod ladder;
mod resonators;

pub use characteristic::{characteristic, chebyshev, edge_height};
pub use commensurate::{
    Chain, Commensurate, cascade, characteristic_of, kuroda, open_stubs, optimum_high_pass, quarter_wave_stubs, shorted_stub_characteristic,
};
pub use degree::{attenuation_db, exact_degree, least_degree};
pub use ladder::{ladder, load_ratio, return_loss_of_ripple_db, ripple_of_return_loss_db};
pub use resonators::{coupling_coefficients, external_q, loss_at_center_db, normalised_frequency};
