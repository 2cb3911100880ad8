//! What is at a step in width: a shunt capacitance and a series inductance on each side.

use super::Strip;

/// Elements of a step, from the wide side to the narrow: `wide_inductance_h`, then `capacitance_f` to ground, then `narrow_inductance_h`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Step {
    /// At the plane of the step.
    pub capacitance_f: f64,
    /// On the side of the wide strip.
    pub wide_inductance_h: f64,
    /// On the side of the narrow strip.
    pub narrow_inductance_h: f64,
}

/// A symmetric step between two strips on the same board, whichever is wider; zero elements when they are equal.
///
/// The capacitance is the open-end extension of the wide strip (Hammerstad's early law) over the width that ends: linear in the difference of widths, so it
/// has a corner, not a jump, where the wide side changes.
///
/// # Valid range
/// Width ratio up to about 3.5 and er up to about 10, as usually stated; quasi-static (the wide strip well below half a guided wavelength).
///
/// # Accuracy
/// None claimed. Against our full-wave solver at 4 GHz (`cargo bench --bench discontinuities`), 50-ohm strips to 2.5 and 0.35 widths on er 3.0, 0.762 mm and er
/// 10.2, 0.635 mm: |S11| within 0.001; phase of S21 1.2 to 2 degrees too far, of S11 up to 8 degrees off.
///
/// # Source
/// K. C. Gupta, R. Garg, I. Bahl, P. Bhartia, *Microstrip Lines and Slotlines*, 2nd ed. 1996, step in width, after E. Hammerstad, 1981 (from memory).
pub fn step(one: &Strip, other: &Strip) -> Step {
    let (wide, narrow) = if one.built_width_m >= other.built_width_m { (one, other) } else { (other, one) };
    let h_um = wide.board.thickness_m * 1e6;
    let (eps_wide, eps_narrow) = (wide.static_eps_eff(), narrow.static_eps_eff());
    let (z_wide, z_narrow) = (wide.static_z0_ohm(), narrow.static_z0_ohm());
    let u = wide.built_width_m / wide.board.thickness_m;
    let ends = 1.0 - narrow.built_width_m / wide.built_width_m;
    let capacitance_pf = 0.00137 * h_um * eps_wide.sqrt() / z_wide * ends * (eps_wide + 0.3) / (eps_wide - 0.258) * (u + 0.264) / (u + 0.8);
    let inductance_nh = 0.000987 * h_um * (1.0 - z_wide / z_narrow * (eps_wide / eps_narrow).sqrt()).powi(2);
    // Shared as the inductances per length of the two lines.
    let (per_length_wide, per_length_narrow) = (z_wide * eps_wide.sqrt(), z_narrow * eps_narrow.sqrt());
    let wide_share = per_length_wide / (per_length_wide + per_length_narrow);
    Step {
        capacitance_f: capacitance_pf * 1e-12,
        wide_inductance_h: inductance_nh * wide_share * 1e-9,
        narrow_inductance_h: inductance_nh * (1.0 - wide_share) * 1e-9,
    }
}

/// A step whose narrow strip lies `offset_m` off the wide one's centre line; [`step`] at no offset.
///
/// The current that comes from one side of the wide strip only has twice the way round: between plates with magnetic side walls a step flush on one side has
/// exactly twice the inductance of the centred one (its own half, by symmetry). Between them it grows with the square of the offset. The capacitance, of the
/// width that ends, stays.
///
/// # Valid range
/// As [`step`], offsets up to flush (beyond, as flush).
///
/// # Source
/// Image argument, exact at both ends of the range for wide strips.
pub fn offset_step(one: &Strip, other: &Strip, offset_m: f64) -> Step {
    let flush_m = 0.5 * (one.built_width_m - other.built_width_m).abs();
    let share = if flush_m > 0.0 { (offset_m.abs() / flush_m).min(1.0) } else { 0.0 };
    let centred = step(one, other);
    let factor = 1.0 + share * share;
    Step { wide_inductance_h: factor * centred.wide_inductance_h, narrow_inductance_h: factor * centred.narrow_inductance_h, ..centred }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::line::AsBuilt;

    #[test]
    fn a_flush_step_has_twice_the_inductance() {
        let board = AsBuilt::for_tests(3.0, 0.0);
        let (wide, narrow) = (Strip::new(&board, 4e-3), Strip::new(&board, 1e-3));
        let centred = step(&wide, &narrow);
        assert_eq!(offset_step(&narrow, &wide, 0.0), centred);
        let flush = offset_step(&wide, &narrow, -1.5e-3);
        assert!(
            (flush.narrow_inductance_h / centred.narrow_inductance_h - 2.0).abs() < 1e-12 && flush.capacitance_f == centred.capacitance_f
        );
        assert_eq!(offset_step(&wide, &wide, 1e-3).capacitance_f, 0.0);
    }
}
