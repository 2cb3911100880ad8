//! What is at a plated hole to ground: an inductance and a resistance.

use std::f64::consts::PI;

use super::AsBuilt;
use super::covered::outside;
use super::surface::skin_depth_m;
use crate::base::Problem;

const SOURCE: &str = "Goldfarb & Pucel 1991";
const MU0_H_PER_M: f64 = 4e-7 * PI;

/// By how much published laws for a via's inductance differ among themselves: take it as this model's error. Some 0.5 % of the centre frequency of a
/// quarter-wave grounded resonator at 2 GHz.
pub const VIA_MODEL_ERROR_H: f64 = 0.03e-9;

/// Plated holes to ground that share one end of a strip.
#[derive(Clone, Debug, PartialEq)]
pub struct ViaHoles {
    /// Diameter of the barrel's outer face, on which the current flows: the drill, not the finished hole.
    pub barrel_diameter_m: f64,
    /// Thickness of the barrel's copper.
    pub plating_m: f64,
    /// How many, in a row.
    pub count: usize,
    /// From centre to centre; no matter for a single one.
    pitch_m: f64,
}

impl ViaHoles {
    /// One hole.
    pub fn single(barrel_diameter_m: f64, plating_m: f64) -> ViaHoles {
        ViaHoles { barrel_diameter_m, plating_m, count: 1, pitch_m: 0.0 }
    }

    /// A row of holes `pitch_m` apart. No holes count as one.
    pub fn row(barrel_diameter_m: f64, plating_m: f64, count: usize, pitch_m: f64) -> ViaHoles {
        ViaHoles { barrel_diameter_m, plating_m, count: count.max(1), pitch_m }
    }
}

/// A via to ground, or several in parallel: `inductance_h` in series with [`Via::resistance_ohm`], from the strip's end at the hole's centre to ground.
#[derive(Clone, Debug, PartialEq)]
pub struct Via {
    /// Inductance; known to [`VIA_MODEL_ERROR_H`].
    pub inductance_h: f64,
    conductivity_s_per_m: f64,
    lossless: bool,
    height_m: f64,
    holes: ViaHoles,
}

/// A via of these holes on a board.
///
/// The pad is left out: its voltage is next to nothing. Holes of a row share the current as their mutual inductances, taken by the same law at their
/// distance, ask for.
///
/// # Valid range
/// 0.2 <= barrel diameter / height <= 1.5, 0.1 <= height <= 3 mm or so; 4 % as claimed against a field solution for one hole at a strip's end; the parallel
/// ones are unverified.
///
/// # Source
/// M. E. Goldfarb, R. A. Pucel, "Modeling via hole grounds in microstrip", IEEE Microwave and Guided Wave Letters 1, 1991, pp. 135-137. The radius is the
/// hole's, not its diameter.
pub fn via(board: &AsBuilt, holes: &ViaHoles) -> Via {
    let h = board.thickness_m;
    let radius_m = 0.5 * holes.barrel_diameter_m;
    Via {
        inductance_h: row_inductance_h(h, radius_m, holes.count, holes.pitch_m),
        conductivity_s_per_m: board.conductivity_s_per_m,
        lossless: board.lossless,
        height_m: h,
        holes: holes.clone(),
    }
}

/// The law: inductance of a post of radius `r_m`, or the mutual one of two posts `r_m` apart, in a substrate of height `h_m`.
pub fn post_inductance_h(h_m: f64, r_m: f64) -> f64 {
    let slant = r_m.hypot(h_m);
    MU0_H_PER_M / (2.0 * PI) * (h_m * ((h_m + slant) / r_m).ln() + 1.5 * (r_m - slant))
}

/// The inductance of `count` equal posts in a row, all at one voltage: the currents follow from the matrix of self and mutual inductances.
fn row_inductance_h(h_m: f64, radius_m: f64, count: usize, pitch_m: f64) -> f64 {
    let own = post_inductance_h(h_m, radius_m);
    if count <= 1 {
        return own;
    }
    let mut matrix: Vec<f64> = (0..count * count)
        .map(|at| {
            let apart = (at / count).abs_diff(at % count);
            if apart == 0 { own } else { post_inductance_h(h_m, (apart as f64 * pitch_m).max(radius_m)) }
        })
        .collect();
    let mut currents = vec![1.0; count];
    let solved = crate::base::solve_in_place(&mut matrix, &mut currents);
    let total: f64 = currents.iter().sum();
    // Posts inside one another make the matrix singular: they are one post.
    if solved && total > 0.0 { 1.0 / total } else { own }
}

impl Via {
    /// Resistance (ohm) at a frequency: the barrel's cross-section at zero, its skin above. Zero on a lossless board.
    ///
    /// # Source
    /// Goldfarb & Pucel 1991: Rdc sqrt(1 + f/fd), fd where the plating is one skin depth thick.
    pub fn resistance_ohm(&self, f_hz: f64) -> f64 {
        if self.lossless {
            return 0.0;
        }
        let outer_m = 0.5 * self.holes.barrel_diameter_m;
        let plating_m = self.holes.plating_m.clamp(0.0, outer_m);
        let section_m2 = PI * (outer_m.powi(2) - (outer_m - plating_m).powi(2));
        let depth_m = skin_depth_m(f_hz, self.conductivity_s_per_m);
        let direct_ohm = self.height_m / (self.conductivity_s_per_m * section_m2 * self.holes.count as f64);
        direct_ohm * (1.0 + (plating_m / depth_m).powi(2)).sqrt()
    }

    /// Warnings `discontinuity-out-of-range`.
    pub fn problems(&self) -> Vec<Problem> {
        let d = self.holes.barrel_diameter_m;
        let mut problems: Vec<Problem> =
            outside(SOURCE, "diameter of a via over the thickness of the laminate", d / self.height_m, 0.2..=1.5).into_iter().collect();
        if self.holes.count > 1 {
            problems.extend(outside(SOURCE, "pitch of vias in a row over their diameter", self.holes.pitch_m / d, 1.2..=f64::INFINITY));
        }
        problems
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn holes_side_by_side_share_the_current() {
        let board = AsBuilt::for_tests(3.0, 0.0);
        let of = |count, pitch_m| via(&board, &ViaHoles::row(0.4e-3, 25e-6, count, pitch_m)).inductance_h;
        let one = of(1, 0.0);
        // Far apart: in parallel; at one place: one hole.
        assert!((of(2, 1.0) / (0.5 * one) - 1.0).abs() < 2e-3 && (of(2, 0.2e-3) / one - 1.0).abs() < 1e-9);
        assert!(of(3, 0.8e-3) < of(2, 0.8e-3) && of(2, 0.8e-3) > 0.5 * one && of(2, 0.8e-3) < one);
    }

    #[test]
    fn resistance_starts_at_the_barrels_and_grows_as_the_root() {
        let board = AsBuilt::for_tests(3.0, 0.0);
        let via = via(&board, &ViaHoles::single(0.4e-3, 25e-6));
        // h / (sigma pi d t), the barrel thin against its diameter within 7 %.
        let thin = 0.762e-3 / (5.8e7 * PI * 0.4e-3 * 25e-6);
        assert!((via.resistance_ohm(0.0) / thin - 1.0).abs() < 0.07);
        assert!((via.resistance_ohm(4e10) / via.resistance_ohm(1e10) - 2.0).abs() < 0.01);
        assert_eq!(super::via(&board.without_loss(), &ViaHoles::single(0.4e-3, 25e-6)).resistance_ohm(1e9), 0.0);
        assert_eq!(via.problems(), vec![]);
        assert_eq!(super::via(&board, &ViaHoles::row(0.1e-3, 25e-6, 2, 0.1e-3)).problems().len(), 2);
    }
}
