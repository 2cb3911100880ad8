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
use super::geometry::StripOf;
use super::geometry::fault;
use super::modal::Modes;
use super::panels::Grid;
use super::results::{Mode, Solved};
use super::solve::{EPSILON_0, LIGHT, Tables, add_coat, charges, invert, not_solvable, solve_fixed, total};
use super::stackup::{PERMITTIVITY_STEP, Stackup, scale_layer};
use super::surface::Surfaces;
use super::walls::{WallMatrices, WallShares, wall_matrices};

/// Panels that the split among the walls is read off.
const LOSS_GRID: Grid = Grid::new(16);
/// Recession of the difference quotients, in units of the smallest size: truncation falls with its square, and a second, halved one takes that off. Much
/// smaller ones drown in the rounding of copper a thousandth as thick as the strip is wide.
const RECESSION: f64 = 0.05;
/// Error of the quotients' extrapolation and of the solver's slopes, seen against finer grids (see `tests/section`).
const QUOTIENT_ERROR: f64 = 1e-3;
/// Largest error estimate of the resistance that is used.
const HOPELESS: f64 = 0.05;
/// Resistance of the strips' own contour over what the charges say of it: these know corners much smaller than the width only by half.
const PLAUSIBLE: std::ops::Range<f64> = 0.4..1.5;

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
    /// The same loss with its resistance counted for another impedance.
    pub(in crate::line) fn times(self, factor: f64) -> ModeLoss {
        ModeLoss { shares: self.shares.scaled(factor), ..self }
    }

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
    let currents = WallCurrents::of(section)?;
    modes
        .iter()
        .map(|signs| {
            // One ampere on each line, power counted per line.
            let root = (signs.len() as f64).sqrt();
            currents.shares(&signs.iter().map(|sign| sign / root).collect::<Vec<_>>())
        })
        .collect()
}

/// Where the currents of any mode flow.
struct WallCurrents {
    walls: WallMatrices,
    /// Charges without dielectric for one volt on each strip, in units of eps0, inverted: potentials for given charges.
    potentials: Vec<Vec<f64>>,
    /// (1/mu0) dL/dn when every wall recedes.
    recession_per_m: Vec<Vec<f64>>,
    /// What the second step of the quotient changed of it.
    correction_per_m: Vec<Vec<f64>>,
}

impl WallCurrents {
    fn of(section: &CrossSection) -> Result<WallCurrents, Problem> {
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
        let potentials = invert(&total(&solved, &solved.air)).ok_or_else(not_solvable)?;
        let [recession_per_m, correction_per_m] = recession(&air)?;
        Ok(WallCurrents { walls: wall_matrices(&air, &solved), potentials, recession_per_m, correction_per_m })
    }

    /// Shares for these currents on the strips, per ampere squared.
    fn shares(&self, currents: &[f64]) -> Result<(WallShares, f64), Problem> {
        let times = |matrix: &[Vec<f64>]| -> Vec<f64> {
            matrix.iter().map(|row| row.iter().zip(currents).map(|(value, current)| value * current).sum()).collect()
        };
        let read = self.walls.shares(&times(&self.potentials));
        let form = |matrix: &[Vec<f64>]| -> f64 { times(matrix).iter().zip(currents).map(|(flux, current)| flux * current).sum() };
        let total = form(&self.recession_per_m);
        let error_estimate = QUOTIENT_ERROR + (form(&self.correction_per_m) / total).abs();
        // The squared charge at the corners converges slowly (as 1/n): it only splits what the difference quotient says of the strips' whole contour.
        let outside = read.ground_per_m + read.lid_per_m + read.walls_per_m;
        let strips = read.foot_per_m + read.top_per_m + read.sides_per_m;
        let factor = (total - outside) / strips;
        let shares = WallShares {
            foot_per_m: factor * read.foot_per_m,
            top_per_m: factor * read.top_per_m,
            sides_per_m: factor * read.sides_per_m,
            ..read
        };
        // The quotient settles the sum; charges that say something quite different, or steps that do, mean that the panels do not resolve the strips.
        if !(PLAUSIBLE.contains(&factor) && error_estimate < HOPELESS) {
            return Err(fault(
                "section-not-converged",
                "",
                format!(
                    "the conductor loss is known to a relative error of {error_estimate:.1e} only, and charges differ from receding walls by a factor of {factor:.3}"
                ),
                "look for a gap or thickness that is very small against the widths",
            ));
        }
        Ok((shares, error_estimate))
    }
}

/// Loss of N strips, from which that of each mode is read.
pub struct MatrixLoss {
    currents: WallCurrents,
    capacitance_f_per_m: Vec<Vec<f64>>,
    /// dC / d ln permittivity, layer by layer, then of the coat.
    by_permittivity_f_per_m: Vec<Vec<Vec<f64>>>,
    loss_tangents: Vec<f64>,
}

impl MatrixLoss {
    /// Loss of a mode: its shares are those of a line of 1 ohm.
    ///
    /// # Errors
    /// `section-not-converged` when the panels do not resolve the strips' corners.
    pub fn of_mode(&self, modes: &Modes, mode: usize) -> Result<ModeLoss, Problem> {
        let (shares, error_estimate) = self.currents.shares(&modes.currents_of(mode))?;
        let voltages = modes.voltages_of(mode);
        let form = |matrix: &[Vec<f64>]| -> f64 {
            matrix
                .iter()
                .zip(&voltages)
                .map(|(row, left)| left * row.iter().zip(&voltages).map(|(value, right)| value * right).sum::<f64>())
                .sum()
        };
        let whole = form(&self.capacitance_f_per_m);
        let filling = self.by_permittivity_f_per_m.iter().map(|matrix| form(matrix) / whole).collect();
        Ok(ModeLoss { shares, filling, loss_tangents: self.loss_tangents.clone(), error_estimate })
    }
}

/// Loss of any number of strips.
///
/// # Valid range
/// As [`loss`], any number and widths of strips.
/// # Errors
/// `loss-of-thin-sheet`, and the codes of [`super::solve`].
pub fn matrix_loss(section: &CrossSection) -> Result<MatrixLoss, Problem> {
    if let Some(problem) = section.check().into_iter().next() {
        return Err(problem);
    }
    let coat = section.coat.iter().map(|coat| coat.loss_tangent);
    let loss_tangents: Vec<f64> = section.layers.iter().map(|layer| layer.loss_tangent).chain(coat).collect();
    let at = |index: usize, factor: f64| {
        let varied = scaled(section, index, factor);
        let mut solved = solve_fixed(&varied)?;
        add_coat(&varied, &mut solved)?;
        Ok(solved)
    };
    let mut whole = solve_fixed(section)?;
    add_coat(section, &mut whole)?;
    matrix_loss_from(section, loss_tangents, whole.capacitance_f_per_m, at)
}

fn matrix_loss_from(
    section: &CrossSection,
    loss_tangents: Vec<f64>,
    capacitance_f_per_m: Vec<Vec<f64>>,
    at: impl Fn(usize, f64) -> Result<Solved, Problem>,
) -> Result<MatrixLoss, Problem> {
    let mut by_permittivity_f_per_m = Vec::with_capacity(loss_tangents.len());
    for index in 0..loss_tangents.len() {
        let (low, high) = (at(index, 1.0 - PERMITTIVITY_STEP)?, at(index, 1.0 + PERMITTIVITY_STEP)?);
        by_permittivity_f_per_m.push(difference(&high.capacitance_f_per_m, &low.capacitance_f_per_m, 0.5 / PERMITTIVITY_STEP));
    }
    Ok(MatrixLoss { currents: WallCurrents::of(section)?, capacitance_f_per_m, by_permittivity_f_per_m, loss_tangents })
}

/// (one - other) times a factor.
fn difference(one: &[Vec<f64>], other: &[Vec<f64>], factor: f64) -> Vec<Vec<f64>> {
    one.iter().zip(other).map(|(one, other)| one.iter().zip(other).map(|(one, other)| factor * (one - other)).collect()).collect()
}

/// (1/mu0) dL/dn when every wall recedes, by central differences without dielectric; and what the halved step corrected.
fn recession(air: &CrossSection) -> Result<[Vec<Vec<f64>>; 2], Problem> {
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
    let quotient = |step: f64| -> Result<Vec<Vec<f64>>, Problem> {
        let (back, forth) = (solve_fixed(&receded(air, step))?, solve_fixed(&receded(air, -step))?);
        // 1/mu0 = eps0 c^2.
        Ok(difference(&back.inductance_h_per_m, &forth.inductance_h_per_m, EPSILON_0 * LIGHT * LIGHT / (2.0 * step)))
    };
    let (whole, half) = (quotient(step)?, quotient(0.5 * step)?);
    let correction = difference(&whole, &half, 1.0 / 3.0);
    Ok([difference(&half, &correction, 1.0), correction])
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

/// d ln C / d ln permittivity of each layer, and of the coat after them, mode by mode. On fixed panels, so that differences are smooth.
fn filling(section: &CrossSection, mode_count: usize) -> Result<Vec<Vec<f64>>, Problem> {
    let layers = section.layers.len();
    let parts = layers + usize::from(section.coat.is_some());
    let mut out = vec![Vec::with_capacity(parts); mode_count];
    for index in 0..parts {
        let at = |factor: f64| -> Result<Vec<f64>, Problem> {
            let varied = scaled(section, index, factor);
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

/// With the permittivity of one layer scaled, or of the coat, which is counted after them.
fn scaled(section: &CrossSection, index: usize, factor: f64) -> CrossSection {
    let mut varied = CrossSection { layers: scale_layer(&section.layers, index, factor), ..section.clone() };
    if index == section.layers.len()
        && let Some(coat) = &mut varied.coat
    {
        coat.permittivity *= factor;
    }
    varied
}

impl Stackup {
    /// Loss of many strips from this stackup's tables.
    ///
    /// # Errors
    /// As [`matrix_loss`].
    pub fn array_loss(&self, strips: &[StripOf]) -> Result<MatrixLoss, Problem> {
        let section = self.section(strips);
        let at = |index: usize, factor: f64| match self.varied().get(index) {
            Some([low, high]) => if factor < 1.0 { low } else { high }.array(strips),
            None => Err(not_solvable()),
        };
        let loss_tangents: Vec<f64> = self.layers.iter().map(|layer| layer.loss_tangent).collect();
        matrix_loss_from(&section, loss_tangents, self.array(strips)?.capacitance_f_per_m, at)
    }

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
