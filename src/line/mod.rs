//! One strip, coupled strips and discontinuities as built: impedance, effective permittivity, dispersion and loss.
//!
//! A [`Strip`] or [`Pair`] is made once for a drawn geometry on a board [`AsBuilt`] and then asked for its [`Mode`]s at any frequency; both are smooth in
//! frequency and in their sizes. Every number outside the range of its source is a warning from `problems`.
//!
//! Static constants come from the numerical cross-section [`section`] (thickness, taper, lid, uniaxial laminate); published closed forms are the first guess of
//! the inverse, the check beside it, and what [`StaticsModel::ClosedForm`] asks for. Frequency is added by published dispersion laws in both cases.
//!
//! # Frequency
//! Solved or closed, static values are carried up by M. Kirschning and R. H. Jansen's dispersion laws (1982 single, 1984 coupled): trusted to 39 GHz mm of laminate
//! for one strip and 25 GHz mm for a pair (`trusted_up_to_hz`), outside their sizes with a warning where they move anything. Under a lid the law
//! starts from the lidded static value and runs into the open line's (`statics::lid_factor`), trusted below the first higher mode between ground and lid,
//! c / (2 (lid + h sqrt(er))), where that is lower.
//!
//! # Where the closed forms are off
//! By more than 1 % (`1`) or 3 % (`3`), else `.`; `cargo bench --bench closed_forms` prints both tables from the solver. One strip: impedance, effective
//! permittivity; then the impedance's error in per cent.
//!
//! | er | t/h | w/h 0.05 | 0.1 | 0.5 | 1 | 2.5 | 8 | 20 |
//! |---|---|---|---|---|---|---|---|---|
//! | 2.2 | 0 | .. +0.0 | .. +0.1 | .. +0.1 | .. +0.1 | .. +0.0 | .. +0.0 | .. -0.0 |
//! | 2.2 | 0.02 | .. -0.2 | .. -0.1 | .. +0.1 | .. +0.1 | .. +0.0 | .. +0.0 | .. -0.0 |
//! | 2.2 | 0.1 | 1. +1.3 | .. +0.3 | .. +0.1 | .. +0.0 | .. -0.0 | .. -0.1 | .. -0.1 |
//! | 4.4 | 0 | .. +0.0 | .. +0.0 | .. +0.0 | .. +0.0 | .. +0.0 | .. +0.1 | .. -0.0 |
//! | 4.4 | 0.02 | .. -0.1 | .. -0.1 | .. +0.1 | .. +0.0 | .. +0.0 | .. +0.1 | .. -0.0 |
//! | 4.4 | 0.1 | .1 +0.8 | .. +0.1 | .. +0.1 | .. +0.1 | .. +0.0 | .. +0.0 | .. -0.1 |
//! | 10.2 | 0 | .. -0.0 | .. +0.0 | .. -0.0 | .. -0.0 | .. +0.0 | .. +0.1 | .. -0.0 |
//! | 10.2 | 0.02 | .. -0.2 | .. -0.1 | .. +0.0 | .. -0.0 | .. +0.0 | .. +0.1 | .. -0.0 |
//! | 10.2 | 0.1 | .3 -0.2 | .. -0.3 | .. -0.0 | .. -0.1 | .. -0.0 | .. +0.0 | .. -0.0 |
//!
//! A pair: even and odd impedance, coupling; then the coupling's error in per cent.
//!
//! | er | t/h | w/h | s/h 0.05 | 0.1 | 0.2 | 0.5 | 1 | 2 | 4 |
//! |---|---|---|---|---|---|---|---|---|---|
//! | 2.2 | 0 | 0.1 | ... -1 | ... +0 | ... +1 | ... +0 | ... -1 | ..1 -2 | ..3 -5 |
//! | 2.2 | 0 | 0.5 | ... -1 | ... -0 | ... -0 | ... +0 | ..1 +1 | ..3 +4 | ..1 +3 |
//! | 2.2 | 0 | 1 | ... -0 | ... -0 | ... +0 | ... +0 | ..1 +1 | ..1 +2 | ... -0 |
//! | 2.2 | 0 | 2.5 | .1. -0 | ... +0 | ... +1 | ... +1 | ... +1 | ... -0 | ..3 -6 |
//! | 2.2 | 0 | 8 | .13 -4 | .13 -3 | ..1 -2 | ..1 -2 | ... -0 | ... +1 | ..1 -1 |
//! | 2.2 | 0.02 | 0.1 | 131 +2 | .1. +1 | .11 +1 | ... +0 | ... -1 | ..1 -2 | ..3 -5 |
//! | 2.2 | 0.02 | 0.5 | .33 +3 | .1. +1 | ... -0 | ... -0 | ... +0 | ..1 +2 | ... +1 |
//! | 2.2 | 0.02 | 1 | .33 +4 | .11 +1 | ... +0 | ... -0 | ... +0 | ... +1 | ..1 -2 |
//! | 2.2 | 0.02 | 2.5 | .13 +4 | ..1 +1 | ... +1 | ... +0 | ... +0 | ..1 -1 | ..3 -8 |
//! | 2.2 | 0.02 | 8 | ... -0 | ..1 -2 | ..1 -2 | ..1 -3 | ..1 -1 | ... -0 | ..1 -2 |
//! | 2.2 | 0.1 | 0.1 | 333 +5 | 133 +5 | .11 +1 | ..1 -2 | ..3 -4 | ..3 -6 | ..3 -10 |
//! | 2.2 | 0.1 | 0.5 | 333 +9 | 133 +8 | .33 +3 | ..1 -2 | ..3 -3 | ..3 -4 | ..3 -7 |
//! | 2.2 | 0.1 | 1 | 133 +11 | .33 +9 | .33 +4 | ..1 -1 | ..1 -3 | ..3 -4 | ..3 -9 |
//! | 2.2 | 0.1 | 2.5 | .33 +11 | .33 +9 | .13 +4 | ..1 -1 | ..1 -3 | ..3 -5 | ..3 -12 |
//! | 2.2 | 0.1 | 8 | .33 +8 | .13 +5 | ... +1 | ..3 -4 | ..3 -4 | ..1 -3 | ..3 -5 |
//! | 4.4 | 0 | 0.1 | ... -1 | ... +0 | ... +1 | ... +0 | ..1 -1 | ..3 -4 | ..3 -10 |
//! | 4.4 | 0 | 0.5 | ... -1 | ... -0 | ... -0 | ... +0 | ..1 +1 | ..3 +3 | ..1 +1 |
//! | 4.4 | 0 | 1 | ... -0 | ... -0 | ... +0 | ... +1 | ..1 +1 | ..1 +2 | ..3 -4 |
//! | 4.4 | 0 | 2.5 | ... -0 | ... +0 | ... +1 | ... +1 | ... +1 | ..1 -2 | ..3 -12 |
//! | 4.4 | 0 | 8 | .13 -4 | .13 -3 | ..1 -2 | ..1 -2 | ... -0 | ... -0 | ..1 -3 |
//! | 4.4 | 0.02 | 0.1 | 13. +1 | .1. +0 | .1. +1 | ... -0 | ..1 -1 | ..3 -4 | ..3 -10 |
//! | 4.4 | 0.02 | 0.5 | .31 +2 | ... +0 | ... -0 | ... -0 | ... +0 | ..1 +2 | ..1 -1 |
//! | 4.4 | 0.02 | 1 | .31 +2 | ... +1 | ... +0 | ... -0 | ... +0 | ... +0 | ..3 -6 |
//! | 4.4 | 0.02 | 2.5 | .11 +2 | ... +1 | ... +1 | ... +0 | ... -0 | ..1 -3 | ..3 -13 |
//! | 4.4 | 0.02 | 8 | .11 -2 | .11 -3 | ..1 -3 | ..1 -3 | ..1 -1 | ... -1 | ..3 -4 |
//! | 4.4 | 0.1 | 0.1 | 333 +4 | 133 +4 | ... +0 | ..1 -2 | ..3 -5 | ..3 -8 | ..3 -15 |
//! | 4.4 | 0.1 | 0.5 | 133 +9 | .33 +7 | .11 +1 | ..1 -2 | ..3 -3 | ..3 -5 | ..3 -10 |
//! | 4.4 | 0.1 | 1 | 133 +10 | .33 +7 | .11 +2 | ..1 -2 | ..3 -3 | ..3 -5 | ..3 -13 |
//! | 4.4 | 0.1 | 2.5 | .33 +11 | .33 +8 | ..1 +2 | ..1 -2 | ..3 -3 | ..3 -7 | ..3 -18 |
//! | 4.4 | 0.1 | 8 | .13 +6 | .13 +3 | ..1 -2 | ..3 -5 | ..3 -4 | ..3 -4 | ..3 -7 |
//! | 10.2 | 0 | 0.1 | 1.. -1 | ... -0 | ... +1 | ... -0 | ..1 -2 | ..3 -6 | ..3 -16 |
//! | 10.2 | 0 | 0.5 | ... -1 | ... -1 | ... -0 | ... +0 | ..1 +1 | ..1 +2 | ..1 -3 |
//! | 10.2 | 0 | 1 | ... -0 | ... -0 | ... +0 | ... +1 | ..1 +1 | ... +0 | ..3 -10 |
//! | 10.2 | 0 | 2.5 | ... -0 | ... +0 | ... +1 | ... +1 | ... +1 | ..3 -4 | ..3 -18 |
//! | 10.2 | 0 | 8 | .13 -4 | .13 -3 | ..1 -3 | ..1 -2 | ... -1 | ..1 -1 | ..3 -5 |
//! | 10.2 | 0.02 | 0.1 | 11. +0 | ... +0 | ... +1 | ... -0 | ..1 -2 | ..3 -6 | ..3 -17 |
//! | 10.2 | 0.02 | 0.5 | .11 +1 | ... -0 | ... -0 | ... -0 | ... +0 | ... +0 | ..3 -6 |
//! | 10.2 | 0.02 | 1 | .11 +2 | ... +0 | ... +0 | ... -0 | ... +0 | ..1 -2 | ..3 -12 |
//! | 10.2 | 0.02 | 2.5 | ..1 +1 | ... +1 | ... +0 | ... +0 | ... -0 | ..3 -5 | ..3 -19 |
//! | 10.2 | 0.02 | 8 | .11 -3 | .11 -3 | ..1 -3 | ..1 -3 | ..1 -2 | ..1 -2 | ..3 -6 |
//! | 10.2 | 0.1 | 0.1 | 333 +4 | 131 +3 | ... -0 | 1.1 -2 | 1.3 -5 | 1.3 -10 | ..3 -21 |
//! | 10.2 | 0.1 | 0.5 | 133 +9 | .33 +5 | ... +0 | ..1 -2 | ..3 -4 | ..3 -6 | ..3 -14 |
//! | 10.2 | 0.1 | 1 | .33 +10 | .33 +6 | ... +1 | ..1 -2 | ..3 -3 | ..3 -7 | ..3 -19 |
//! | 10.2 | 0.1 | 2.5 | .33 +10 | .33 +6 | ... +1 | ..1 -2 | ..3 -3 | ..3 -9 | ..3 -24 |
//! | 10.2 | 0.1 | 8 | .13 +4 | ..1 +1 | .13 -3 | ..3 -5 | ..3 -5 | ..3 -6 | ..3 -10 |

mod array;
mod array_inverse;
mod as_built;
pub mod bend;
mod book;
mod coplanar;
mod coupled;
mod covered;
mod cross;
mod dispersion;
pub mod gap;
mod inverse;
mod junction_statics;
mod many;
mod mode;
mod models;
mod numerical;
pub mod open_end;
mod pair;
mod radial_stub;
mod range;
pub mod section;
mod single;
mod statics;
mod step;
mod strip;
pub mod stripline;
mod surface;
mod taper;
mod tee;
mod via;

pub use array::{Array, ArrayModes};
pub use array_inverse::{ArrayTarget, array_for};
pub use as_built::{AsBuilt, StaticsModel, plating_of};
pub use bend::{Bend, Corner, Curve, Mitre, bend, curve, optimum_cut, rounded_bend};
pub use book::Book;
pub use coplanar::Coplanar;
pub use coupled::EvenOdd;
pub use cross::{Cross, CrossAt, cross};
pub use inverse::{OutOfReach, Unreachable, pair_for_impedances, width_for_impedance};
pub use mode::Mode;
pub use models::Models;
pub use pair::Pair;
pub use radial_stub::{RadialStub, radial_line_reactance_ohm, radial_stub};
pub use step::{Step, offset_step, step};
pub use strip::Strip;
pub use surface::{hammerstad_roughness_factor, skin_depth_m, sphere_roughness_factor, surface_resistance_ohm};
pub use taper::{Piece, taper};
pub use tee::{Tee, TeeAt, tee};
pub use via::{VIA_MODEL_ERROR_H, Via, ViaHoles, post_inductance_h, via};

/// Speed of light, m/s (exact).
pub const C_M_PER_S: f64 = 299_792_458.0;
/// Wave impedance of free space, ohm.
pub const ETA0_OHM: f64 = 376.730_313_668;
