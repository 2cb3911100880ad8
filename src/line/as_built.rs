//! What the laminate and copper really are: the one place where nominal, toleranced and measured boards differ.

use super::section::CoatOf;
use super::section::Plating;
use super::section::Roughness;
use crate::order::Order;

/// Nickel of an electroless-nickel finish on top and sides of the strips. Thickness: middle of the 3 to 6 um of IPC-4552. Conductivity and permeability: what
/// Y. Shlepnev and S. McMorrow found on plated microstrip ("Nickel characterization for interconnect analysis", IEEE EMC Symposium 2011; from memory,
/// rounded); the gold on it is far thinner than a skin depth.
const NICKEL: Plating = Plating { conductivity_s_per_m: 1.4e7, permeability: 5.0, thickness_m: 4.5e-6 };

/// Where the static constants of strips and pairs come from.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum StaticsModel {
    /// Published closed forms: no lid, thickness and taper by effective sizes. A first guess, and a check.
    ClosedForm,
    /// The numerical cross-section [`crate::line::section`]: lid, thickness, taper and uniaxial laminate as they are.
    Numerical,
}

/// Laminate, copper and lid as built, SI.
#[derive(Clone, Debug, PartialEq)]
pub struct AsBuilt {
    /// Relative permittivity normal to the board.
    pub permittivity: f64,
    /// In-plane relative permittivity; equal to `permittivity` when isotropic.
    pub in_plane_permittivity: f64,
    /// tan d.
    pub loss_tangent: f64,
    /// Dielectric thickness.
    pub thickness_m: f64,
    /// Finished copper thickness.
    pub copper_thickness_m: f64,
    /// Per side: how much narrower the strip's top is than its foot.
    pub undercut_m: f64,
    /// Rq of the laminate side of the foil.
    pub roughness_m: f64,
    /// Rz of it, where the law of stacked spheres is asked for instead of Hammerstad and Jensen's.
    pub ten_point_height_m: Option<f64>,
    /// Copper conductivity, S/m.
    pub conductivity_s_per_m: f64,
    /// Metal over the copper that the current feels: the nickel of a finish.
    pub plating: Option<Plating>,
    /// Copper on the wall of plated holes.
    pub hole_plating_m: f64,
    /// Lid above the laminate surface.
    pub lid_m: Option<f64>,
    /// Distance of the housing's side walls from each other, the strips midway; `None` also where they are too far away to matter.
    pub walls_m: Option<f64>,
    /// Solder mask over the strips.
    pub coat: Option<CoatOf>,
    /// Added to every strip's drawn width (and taken from every gap): etch error of the batch.
    pub widening_m: f64,
    /// Without loss of any kind (conductor, dielectric, radiation); for synthesis against the lossless prototype.
    pub lossless: bool,
    /// Where static constants come from.
    pub statics: StaticsModel,
}

impl AsBuilt {
    /// The board exactly as ordered.
    pub fn nominal(order: &Order) -> AsBuilt {
        let laminate = &order.laminate;
        AsBuilt {
            permittivity: laminate.permittivity,
            in_plane_permittivity: laminate.in_plane_permittivity.unwrap_or(laminate.permittivity),
            loss_tangent: laminate.loss_tangent,
            thickness_m: laminate.thickness_m,
            copper_thickness_m: laminate.copper.finished_m(),
            undercut_m: order.shop.undercut_m,
            roughness_m: laminate.copper.roughness_m,
            ten_point_height_m: laminate.copper.ten_point_height_m(),
            conductivity_s_per_m: laminate.copper.conductivity_s_per_m,
            plating: plating_of(&laminate.finish),
            hole_plating_m: order.laminate.copper.plating_m,
            lid_m: order.housing.and_then(|housing| housing.lid_m),
            walls_m: None,
            coat: None,
            widening_m: 0.0,
            lossless: false,
            statics: StaticsModel::Numerical,
        }
    }

    /// Frequency times dielectric thickness in GHz mm, the measure of dispersion in the published laws.
    pub fn normalised_frequency_ghz_mm(&self, f_hz: f64) -> f64 {
        f_hz * self.thickness_m * 1e-6
    }

    /// Roughness of the laminate side by the law that is asked for.
    pub fn roughness(&self) -> Roughness {
        match self.ten_point_height_m {
            Some(rz_m) => Roughness::Cannonball { rz_m },
            None => Roughness::HammerstadJensen { rq_m: self.roughness_m },
        }
    }

    /// The same board without loss.
    pub fn without_loss(&self) -> AsBuilt {
        AsBuilt { lossless: true, ..self.clone() }
    }

    /// The same board with its static constants from another model.
    pub fn with_statics(&self, statics: StaticsModel) -> AsBuilt {
        AsBuilt { statics, ..self.clone() }
    }
}

/// The metal of a finish (a word of [`crate::order::FINISHES`]) that carries current besides the copper; silver, tin and solder on top of copper are either as
/// good or too thin to count.
pub fn plating_of(finish: &str) -> Option<Plating> {
    matches!(finish, "enig" | "enepig").then_some(NICKEL)
}

#[cfg(test)]
impl AsBuilt {
    /// An isotropic board for tests of the closed forms: 0.762 mm, copper of `copper_thickness_m`, square edges, smooth, with loss.
    pub(crate) fn for_tests(permittivity: f64, copper_thickness_m: f64) -> AsBuilt {
        AsBuilt {
            permittivity,
            in_plane_permittivity: permittivity,
            loss_tangent: 1e-3,
            thickness_m: 0.762e-3,
            copper_thickness_m,
            undercut_m: 0.0,
            roughness_m: 0.0,
            ten_point_height_m: None,
            conductivity_s_per_m: 5.8e7,
            plating: None,
            hole_plating_m: 25e-6,
            lid_m: None,
            walls_m: None,
            coat: None,
            widening_m: 0.0,
            lossless: false,
            statics: StaticsModel::ClosedForm,
        }
    }
}
