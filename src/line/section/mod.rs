//! What are capacitance, inductance and loss of printed strips as they really are? The numerical quasi-static cross-section.
//!
//! Strips of any number up to [`STRIPS_AT_MOST`] on top of a grounded substrate: copper thickness (0 is a true sheet), trapezoidal profile, layers,
//! uniaxial permittivity, lid, side walls, solder-mask coat. All lengths in metres, results in SI per metre of line.
//!
//! - [`Stackup`]: layers, copper and lid, tabulated once; [`Stackup::symmetric_pair`], [`Stackup::single`], [`Stackup::array`] on fixed panels, so that
//!   results are smooth in every size; [`Stackup::pair_for`] and [`Stackup::width_for`] invert; [`Stackup::pair_loss`], [`Stackup::single_loss`].
//! - [`solve`]: any [`CrossSection`], walls and coat included, to an accuracy asked for.
//! - [`loss`]: conductor loss wall by wall and dielectric filling factors, for one strip or two equal ones.
//!
//! # Method
//! Charge on the strips' contour only, constant on panels that shrink as the cube towards corners, potential matched at panel middles (method of moments:
//! R. F. Harrington, "Field Computation by Moment Methods", 1968). Green function of layers and lid: direct charge and its image in the surface in closed form, the rest
//! tabulated. Two grids and one Richardson step. Quasi-static: dispersion is for the closed forms of the room `line` to add.
//!
//! # Accuracy
//! Fast pair ([`Stackup::symmetric_pair`]) against the solver on up to six times as many panels: largest error of the four capacitances, in per cent; in brackets that of the
//! coupling k, of itself. `cargo bench --bench section` prints the whole table with times.
//!
//! | permittivity | t/h | s/h | w/h 0.5 | 1 | 2.5 | 8 |
//! |---|---|---|---|---|---|---|
//! | 2.2 | 0 | 0.05 | 0.000 (0.000) | 0.000 (0.000) | 0.001 (0.001) | 0.005 (0.010) |
//! | 2.2 | 0.01 | 0.05 | 0.007 (0.003) | 0.010 (0.005) | 0.011 (0.007) | 0.011 (0.015) |
//! | 2.2 | 0.01 | 1 | 0.001 (0.001) | 0.002 (0.002) | 0.003 (0.004) | 0.002 (0.006) |
//! | 2.2 | 0.1 | 0.05 | 0.003 (0.001) | 0.005 (0.002) | 0.007 (0.004) | 0.008 (0.009) |
//! | 2.2 | 0.1 | 1 | 0.000 (0.000) | 0.000 (0.000) | 0.001 (0.003) | 0.003 (0.010) |
//! | 2.2 | 0.5 | 0.05 | 0.011 (0.001) | 0.009 (0.002) | 0.007 (0.002) | 0.003 (0.000) |
//! | 2.2 | 0.5 | 4 | 0.003 (0.000) | 0.001 (0.001) | 0.000 (0.001) | 0.000 (0.000) |
//! | 10.2 | 0 | 0.05 | 0.000 (0.000) | 0.000 (0.000) | 0.001 (0.001) | 0.005 (0.011) |
//! | 10.2 | 0.01 | 0.05 | 0.007 (0.002) | 0.011 (0.003) | 0.012 (0.001) | 0.032 (0.043) |
//! | 10.2 | 0.01 | 0.2 | 0.004 (0.002) | 0.006 (0.003) | 0.008 (0.005) | 0.006 (0.005) |
//! | 10.2 | 0.1 | 0.05 | 0.003 (0.000) | 0.005 (0.001) | 0.010 (0.001) | 0.028 (0.030) |
//! | 10.2 | 0.1 | 1 | 0.000 (0.000) | 0.000 (0.000) | 0.001 (0.002) | 0.003 (0.008) |
//! | 10.2 | 0.5 | 0.05 | 0.011 (0.002) | 0.010 (0.002) | 0.015 (0.005) | 0.025 (0.012) |
//! | 10.2 | 0.5 | 4 | 0.003 (0.000) | 0.001 (0.001) | 0.001 (0.001) | 0.001 (0.000) |
//!
//! So C is within 0.05 % but for strips eight heights wide with a slot a hundredth and less of their width. [`solve`] agrees with elliptic integrals (centred
//! stripline, single and coupled) to 1e-5 and 2e-5, with finite differences to 1e-4 or so on layered, uniaxial, lidded, walled and coated cases (`tests/section`).
//!
//! # Not modelled
//! Dispersion; copper thinner than about three skin depths; the rise of the effective permittivity that rough foil makes on thin laminates
//! (A. F. Horn, J. W. Reynolds, J. C. Rautio, IEEE MTT-S Digest 2010).
//!
//! # Example
//! ```
//! use stripwright::line::section::{CopperOf, LayerOf, Stackup};
//!
//! let layers = [LayerOf::isotropic(3.0, 0.0013, 0.508e-3)];
//! let stackup = Stackup::new(&layers, CopperOf { thickness_m: 35e-6, undercut_m: 0.0 }, None).unwrap();
//! let pair = stackup.symmetric_pair(1.2e-3, 0.13e-3).unwrap();
//! assert!((pair.coupling() - 0.2759).abs() < 1e-4);
//! ```

mod assembly;
mod coat;
mod elimination;
mod fast;
mod geometry;
mod green;
mod inverse;
mod logarithm;
mod loss;
mod modal;
mod panels;
mod results;
mod solve;
mod stackup;
mod surface;
mod walls;

pub use geometry::{CoatOf, CopperOf, CrossSection, HousingOf, LayerOf, STRIPS_AT_MOST, StripOf};
pub use loss::{MatrixLoss, ModeLoss, loss, matrix_loss};
pub use modal::Modes;
pub use results::{Line, Mode, Pair, Solved};
pub use solve::solve;
pub use stackup::Stackup;
pub use surface::{Plating, Roughness, Surface, Surfaces, skin_depth_m};
pub use walls::WallShares;
