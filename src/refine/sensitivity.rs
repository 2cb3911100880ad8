//! How far do the tolerances of laminate and etching move the band?

use super::Passband;
use super::circuit;
use super::passband_lost;
use crate::base::Problem;
use crate::dimensions::Dimensions;
use crate::family::Family;
use crate::family::Target;
use crate::line::AsBuilt;
use crate::line::Book;

/// Differences are taken over this part of a tolerance, so that the band stays near enough to be found; halved until it does.
const FIRST_SHARE: f64 = 0.25;
/// At most so many times.
const MOST_HALVINGS: usize = 8;

/// How the band moves when one figure grows by its tolerance, hertz.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Shift {
    /// Of the mean of the edges; of the cutoff where there is one edge.
    pub center_hz: f64,
    /// Of the distance between the edges; zero where there is one edge.
    pub width_hz: f64,
}

/// The same for each tolerance.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sensitivities {
    /// Of the permittivity, in-plane along with normal.
    pub permittivity: Shift,
    /// Of the dielectric's thickness.
    pub thickness: Shift,
    /// Of the width of every strip; gaps become narrower by as much.
    pub line_width: Shift,
}

/// Shifts of the lossless band of a set by the tolerances of its order, by differences of the network on boards built otherwise.
///
/// # Accuracy
/// First order in the tolerance: a shift of more than a bandwidth is an extrapolation.
///
/// # Errors
/// `passband-lost` when the set has no band near the ordered one; problems of the layout.
pub fn sensitivities(family: &dyn Family, set: &Dimensions) -> Result<Sensitivities, Vec<Problem>> {
    let target = family.target(&set.order, set.degree);
    let nominal = AsBuilt::nominal(&set.order).without_loss();
    let laminate = &set.order.laminate;
    let in_plane_ratio = nominal.in_plane_permittivity / nominal.permittivity;
    let permittivity = shift(family, set, &target, |part| {
        let permittivity = nominal.permittivity + part * laminate.permittivity_tolerance;
        AsBuilt { permittivity, in_plane_permittivity: in_plane_ratio * permittivity, ..nominal.clone() }
    })?;
    let thickness = shift(family, set, &target, |part| AsBuilt {
        thickness_m: nominal.thickness_m + part * laminate.thickness_tolerance_m,
        ..nominal.clone()
    })?;
    let line_width = shift(family, set, &target, |part| AsBuilt {
        widening_m: nominal.widening_m + part * set.order.shop.line_tolerance_m,
        ..nominal.clone()
    })?;
    Ok(Sensitivities { permittivity, thickness, line_width })
}

fn shift(family: &dyn Family, set: &Dimensions, target: &Target, built: impl Fn(f64) -> AsBuilt) -> Result<Shift, Vec<Problem>> {
    let edges = |part: f64| -> Result<Option<[f64; 2]>, Vec<Problem>> {
        let circuit = circuit(family, set, &Book::new(built(part)))?;
        Ok(Passband::of(&circuit, target).and_then(|passband| {
            let (low, high) = (*passband.edges_hz.first()?, *passband.edges_hz.last()?);
            Some([0.5 * (low + high), high - low])
        }))
    };
    let mut share = FIRST_SHARE;
    for _ in 0..=MOST_HALVINGS {
        if let (Some(less), Some(more)) = (edges(-share)?, edges(share)?) {
            let per_tolerance = |i: usize| (more[i] - less[i]) / (2.0 * share);
            return Ok(Shift { center_hz: per_tolerance(0), width_hz: per_tolerance(1) });
        }
        share *= 0.5;
    }
    Err(vec![passband_lost(target)])
}
