//! What the laminate and copper really are: the one place where nominal, toleranced and measured boards differ.

use crate::order::Order;

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
    /// Copper conductivity, S/m.
    pub conductivity_s_per_m: f64,
    /// Lid above the laminate surface.
    pub lid_m: Option<f64>,
    /// Added to every strip's drawn width (and taken from every gap): etch error of the batch.
    pub widening_m: f64,
    /// Without loss of any kind (conductor, dielectric, radiation); for synthesis against the lossless prototype.
    pub lossless: bool,
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
            conductivity_s_per_m: laminate.copper.conductivity_s_per_m,
            lid_m: order.housing.and_then(|housing| housing.lid_m),
            widening_m: 0.0,
            lossless: false,
        }
    }

    /// Frequency times dielectric thickness in GHz mm, the measure of dispersion in the published laws.
    pub fn normalised_frequency_ghz_mm(&self, f_hz: f64) -> f64 {
        f_hz * self.thickness_m * 1e-6
    }

    /// The same board without loss.
    pub fn without_loss(&self) -> AsBuilt {
        AsBuilt { lossless: true, ..self.clone() }
    }
}

#[cfg(test)]
impl AsBuilt {
    /// An isotropic board for tests: 0.762 mm, copper of `copper_thickness_m`, square edges, smooth, with loss.
    pub(crate) fn for_tests(permittivity: f64, copper_thickness_m: f64) -> AsBuilt {
        AsBuilt {
            permittivity,
            in_plane_permittivity: permittivity,
            loss_tangent: 1e-3,
            thickness_m: 0.762e-3,
            copper_thickness_m,
            undercut_m: 0.0,
            roughness_m: 0.0,
            conductivity_s_per_m: 5.8e7,
            lid_m: None,
            widening_m: 0.0,
            lossless: false,
        }
    }
}
