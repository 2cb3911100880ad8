//! How much does the cross-section lose? Resistance by the incremental-inductance rule, wall by wall, and filling factors of the layers.
//!
//! Receding a wall by dn adds mu0 |H|^2 dn to the inductance, H at the wall per unit current (H. A. Wheeler, "Formulas for the skin effect",
//! Proc. IRE 30, 1942, pp. 412-424), so dL/dn is the integral of the squared surface current over that wall. The surface current of
//! the quasi-TEM mode is proportional to the surface charge without dielectric, which the solver has: the shares of ground, lid and side walls
//! are integrals of smooth charges and come out of one solution. For the strips' own contour the whole is a central difference over receded
//! geometry, which converges faster at the corners; the charges only split it among foot, top and sides.
//!
//! What is not modelled: copper thinner than about three skin depths (the rule then gives too little), and the rise of the effective
//! permittivity that rough foil makes on thin laminates (A. F. Horn, J. W. Reynolds, J. C. Rautio, "Conductor profile effects on the propagation
//! constant of microstrip transmission lines", IEEE MTT-S Digest 2010): it needs the foil's measured profile inductance, which a stackup does not state.

use crate::base::Problem;

use super::geometry::CrossSection;
use super::geometry::fault;
use super::panels::Grid;
use super::solve::{EPSILON_0, Mode, Tables, add_coat, charges, solve_fixed};
use super::stackup::{PERMITTIVITY_STEP, Stackup, scale_layer};
use super::surface::Surfaces;
use super::walls::{WallShares, shares_of};

/// Panels that the split among the walls is read off.
const LOSS_GRID: Grid = Grid::new(16);
/// Recession of the difference quotients, in units of the smallest size: truncation falls with its square, and a second, halved one takes that off.
const RECESSION: f64 = 0.02;
/// Error of the quotients' extrapolation and of the solver's slopes, seen against finer grids (see `tests/section`).
const QUOTIENT_ERROR: f64 = 1e-3;

/// Loss of one mode; scales to any frequency.
#[derive(Clone, Debug, PartialEq)]
pub struct ModeLoss {
    /// Shares of the walls.
    pub shares: WallShares,
    /// Layer by layer, then the coat if there is one: d ln C / d ln permittivity.
    pub filling: Vec<f64>,
    /// Loss tangent of each of them.
    pub loss_tangents: Vec<f64>,
    /// Relative error of the sum of the shares that the two grids let expect.
    pub error_estimate: f64,
}

impl ModeLoss {
    /// Series resistance per unit length of one line.
    pub fn resistance_ohm_per_m(&self, frequency_hz: f64, surfaces: &Surfaces) -> f64 {
        let shares = &self.shares;
        shares.foot_per_m * surfaces.foot.resistance_ohm(frequency_hz)
            + shares.top_per_m * surfaces.top.resistance_ohm(frequency_hz)
            + shares.sides_per_m * surfaces.sides.resistance_ohm(frequency_hz)
            + shares.ground_per_m * surfaces.ground.resistance_ohm(frequency_hz)
            + (shares.lid_per_m + shares.walls_per_m) * surfaces.housing.resistance_ohm(frequency_hz)
    }

    /// R / (2 Z0), Z0 with the dielectric.
    pub fn conductor_np_per_m(&self, frequency_hz: f64, z0_ohm: f64, surfaces: &Surfaces) -> f64 {
        self.resistance_ohm_per_m(frequency_hz, surfaces) / (2.0 * z0_ohm)
    }

    /// (omega / 2) sqrt(L C) times the sum of filling and loss tangent, sqrt(L C) = sqrt(eps_eff) / c.
    pub fn dielectric_np_per_m(&self, frequency_hz: f64, eps_eff: f64) -> f64 {
        let tangent: f64 = self.filling.iter().zip(&self.loss_tangents).map(|(filling, tangent)| filling * tangent).sum();
        std::f64::consts::PI * frequency_hz * eps_eff.sqrt() / super::solve::LIGHT * tangent
    }
}

/// Loss of one strip (one mode), or of two equal strips (even, odd).
///
/// # Units
/// Shares in 1/m; multiply by the surface resistance.
/// # Valid range
/// As [`CrossSection::check`], thickness above zero, one strip or two equal strips.
/// # Source
/// See the head of `loss.rs`.
/// # Accuracy
/// `error_estimate`; in the tests within 0.2 % of the solver's own geometry receded by differences.
/// # Errors
/// `loss-of-thin-sheet`, `loss-of-many-strips`, and the codes of [`super::solve`].
pub fn loss(section: &CrossSection) -> Result<Vec<ModeLoss>, Problem> {
    if let Some(problem) = section.check().into_iter().next() {
        return Err(problem);
    }
    let shares = wall_shares(section)?;
    let fillings = filling(section, shares.len())?;
    let coat = section.coat.iter().map(|coat| coat.loss_tangent);
    let loss_tangents: Vec<f64> = section.layers.iter().map(|layer| layer.loss_tangent).chain(coat).collect();
    Ok(shares
        .into_iter()
        .zip(fillings)
        .map(|((shares, error_estimate), filling)| ModeLoss { shares, filling, loss_tangents: loss_tangents.clone(), error_estimate })
        .collect())
}

/// Strip signs of each mode.
fn modes(section: &CrossSection) -> Result<Vec<Vec<f64>>, Problem> {
    match section.strips.as_slice() {
        [_] => Ok(vec![vec![1.0]]),
        [_, _] if section.is_symmetric() => Ok(vec![vec![1.0, 1.0], vec![1.0, -1.0]]),
        _ => Err(fault(
            "loss-of-many-strips",
            "strip",
            "loss is given for one strip or two equal strips".into(),
            "leave out the other strips, or make both equal",
        )),
    }
}

pub(super) fn wall_shares(section: &CrossSection) -> Result<Vec<(WallShares, f64)>, Problem> {
    let modes = modes(section)?;
    if section.copper.thickness_m == 0.0 {
        return Err(fault(
            "loss-of-thin-sheet",
            "copper.thickness",
            "a sheet without thickness has no finite conductor loss".into(),
            "give the copper's real thickness",
        ));
    }
    let mut air = section.clone();
    for layer in &mut air.layers {
        layer.permittivity = 1.0;
        layer.in_plane_permittivity = 1.0;
    }
    air.coat = None;
    let tables = Tables::new(&air)?;
    let solved = charges(&air, &tables.borrow(), LOSS_GRID)?;
    let totals = recession(&air)?;
    let mut out = Vec::new();
    for (signs, total) in modes.iter().zip(totals) {
        // The squared charge at the corners converges slowly (as 1/n): it only splits what the difference quotient says of the strips' whole contour.
        let read = shares_of(&air, &solved, signs);
        let outside = read.ground_per_m + read.lid_per_m + read.walls_per_m;
        let strips = read.foot_per_m + read.top_per_m + read.sides_per_m;
        let factor = (total - outside) / strips;
        let shares = WallShares {
            foot_per_m: factor * read.foot_per_m,
            top_per_m: factor * read.top_per_m,
            sides_per_m: factor * read.sides_per_m,
            ..read
        };
        // Two ways to the same number: far apart means that the panels do not resolve the corners.
        if !(0.8..1.1).contains(&factor) {
            return Err(fault(
                "section-not-converged",
                "",
                format!("conductor loss from charges and from receding walls differ by a factor of {factor:.3}"),
                "look for a gap or thickness that is very small against the widths",
            ));
        }
        out.push((shares, QUOTIENT_ERROR));
    }
    Ok(out)
}

/// (1/mu0) dL/dn of each mode when every wall recedes, by central differences without dielectric.
fn recession(air: &CrossSection) -> Result<Vec<f64>, Problem> {
    let thickness = air.copper.thickness_m;
    let height: f64 = air.layers.iter().map(|layer| layer.thickness_m).sum();
    let mut smallest = thickness.min(height);
    for (index, strip) in air.strips.iter().enumerate() {
        smallest = smallest.min(strip.width_m - 2.0 * air.copper.undercut_m);
        if index > 0 {
            smallest = smallest.min(strip.gap_before_m);
        }
    }
    if let Some(lid) = air.housing.lid_m {
        smallest = smallest.min(lid - thickness);
    }
    if let Some(wall) = air.housing.wall_m {
        smallest = smallest.min(wall);
    }
    let step = RECESSION * smallest;
    let quotient = |step: f64| -> Result<Vec<f64>, Problem> {
        let (back, forth) = (air_inverse_capacitance(&receded(air, step))?, air_inverse_capacitance(&receded(air, -step))?);
        // L = mu0 eps0 / C0.
        Ok(back.iter().zip(forth).map(|(back, forth)| EPSILON_0 * (back - forth) / (2.0 * step)).collect())
    };
    let (whole, half) = (quotient(step)?, quotient(0.5 * step)?);
    Ok(whole.iter().zip(half).map(|(whole, half)| half + (half - whole) / 3.0).collect())
}

/// Every wall moved into the metal by `step`.
fn receded(air: &CrossSection, step: f64) -> CrossSection {
    let copper = air.copper;
    // A slanted side moves along its own normal; its corners follow from where it meets the moved foot and top.
    let slant = copper.thickness_m.hypot(copper.undercut_m);
    let (sine, cotangent) = (copper.thickness_m / slant, copper.undercut_m / copper.thickness_m);
    let at_foot = step / sine + step * cotangent;
    let at_top = step / sine - step * cotangent;
    let mut out = air.clone();
    out.copper.thickness_m -= 2.0 * step;
    out.copper.undercut_m += at_top - at_foot;
    let height: f64 = air.layers.iter().map(|layer| layer.thickness_m).sum();
    for layer in &mut out.layers {
        // The foot rises and the ground sinks; without dielectric only the sum of the layers counts.
        layer.thickness_m *= 1.0 + 2.0 * step / height;
    }
    for strip in &mut out.strips {
        strip.width_m -= 2.0 * at_foot;
        strip.gap_before_m += 2.0 * at_foot;
    }
    // The lid rises as much as the foot: unchanged above the foot's level.
    out.housing.wall_m = air.housing.wall_m.map(|wall| wall + step + at_foot);
    out
}

/// 1 / C0 of each mode on the fixed grids.
fn air_inverse_capacitance(air: &CrossSection) -> Result<Vec<f64>, Problem> {
    let solved = solve_fixed(air)?;
    Ok(match solved.pair() {
        Some(pair) => vec![1.0 / pair.even.air_capacitance_f_per_m, 1.0 / pair.odd.air_capacitance_f_per_m],
        None => solved.single().map(|mode| 1.0 / mode.air_capacitance_f_per_m).into_iter().collect(),
    })
}

/// d ln C / d ln permittivity of each layer, and of the coat after them, mode by mode. On fixed panels, so that differences are smooth.
fn filling(section: &CrossSection, mode_count: usize) -> Result<Vec<Vec<f64>>, Problem> {
    let layers = section.layers.len();
    let parts = layers + usize::from(section.coat.is_some());
    let mut out = vec![Vec::with_capacity(parts); mode_count];
    for index in 0..parts {
        let at = |factor: f64| -> Result<Vec<f64>, Problem> {
            let mut varied = CrossSection { layers: scale_layer(&section.layers, index, factor), ..section.clone() };
            if index == layers
                && let Some(coat) = &mut varied.coat
            {
                coat.permittivity *= factor;
            }
            let mut solved = solve_fixed(&varied)?;
            add_coat(&varied, &mut solved)?;
            Ok(match solved.pair() {
                Some(pair) => vec![pair.even.capacitance_f_per_m, pair.odd.capacitance_f_per_m],
                None => solved.single().map(|mode| mode.capacitance_f_per_m).into_iter().collect(),
            })
        };
        let (low, high) = (at(1.0 - PERMITTIVITY_STEP)?, at(1.0 + PERMITTIVITY_STEP)?);
        for ((filling, low), high) in out.iter_mut().zip(low).zip(high) {
            filling.push((high / low).ln() / (2.0 * PERMITTIVITY_STEP));
        }
    }
    Ok(out)
}

impl Stackup {
    /// Loss of two equal strips, even and odd, from this stackup's tables.
    ///
    /// # Errors
    /// As [`loss`].
    pub fn pair_loss(&self, width_m: f64, gap_m: f64) -> Result<[ModeLoss; 2], Problem> {
        let section = CrossSection::pair(self.layers.clone(), self.copper, width_m, gap_m, self.housing());
        let shares = wall_shares(&section)?;
        let fillings = self.fillings(|stackup| stackup.symmetric_pair(width_m, gap_m).map(|pair| vec![pair.even, pair.odd]))?;
        match self.modes_loss(shares, fillings).try_into() {
            Ok(both) => Ok(both),
            Err(_) => Err(fault(
                "loss-of-many-strips",
                "strip",
                "loss is given for one strip or two equal strips".into(),
                "leave out the other strips",
            )),
        }
    }

    /// Loss of one strip from this stackup's tables.
    ///
    /// # Errors
    /// As [`loss`].
    pub fn single_loss(&self, width_m: f64) -> Result<ModeLoss, Problem> {
        let section = CrossSection::single(self.layers.clone(), self.copper, width_m, self.housing());
        let shares = wall_shares(&section)?;
        let fillings = self.fillings(|stackup| stackup.single(width_m).map(|line| vec![line.mode]))?;
        self.modes_loss(shares, fillings).pop().ok_or_else(|| {
            fault("loss-of-many-strips", "strip", "loss is given for one strip or two equal strips".into(), "leave out the other strips")
        })
    }

    fn modes_loss(&self, shares: Vec<(WallShares, f64)>, fillings: Vec<Vec<f64>>) -> Vec<ModeLoss> {
        let loss_tangents: Vec<f64> = self.layers.iter().map(|layer| layer.loss_tangent).collect();
        let one = |((shares, error_estimate), filling)| ModeLoss { shares, filling, loss_tangents: loss_tangents.clone(), error_estimate };
        shares.into_iter().zip(fillings).map(one).collect()
    }

    fn fillings(&self, solve: impl Fn(&Stackup) -> Result<Vec<Mode>, Problem>) -> Result<Vec<Vec<f64>>, Problem> {
        let mut out: Vec<Vec<f64>> = Vec::new();
        for [low, high] in self.varied() {
            let (low, high) = (solve(low)?, solve(high)?);
            out.resize(low.len(), Vec::new());
            for ((filling, low), high) in out.iter_mut().zip(low).zip(high) {
                filling.push((high.capacitance_f_per_m / low.capacitance_f_per_m).ln() / (2.0 * PERMITTIVITY_STEP));
            }
        }
        Ok(out)
    }
}
