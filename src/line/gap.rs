//! What is at a gap in a strip: a series capacitance, and one to ground at each end.

use super::Strip;

/// Width ratio at which the source changes its even-mode fit.
const NARROW_GAP: f64 = 0.3;

/// Elements of a gap: `shunt_f` at either end, `series_f` across.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Gap {
    /// From each end to ground.
    pub shunt_f: f64,
    /// Across the gap.
    pub series_f: f64,
}

/// A gap of `gap_m` (as drawn) in a strip.
///
/// # Valid range
/// 0.5 <= w/h <= 2, 0.1 <= s/w <= 1, 2.5 <= er <= 15: 7 % as claimed; seen: series within 5 % for w/h <= 1, up to 2 times off at w/h = 2 with wide gaps.
/// [`in_range`] tells. The fit has a step of some per cent at s/w = 0.3, where the source changes formulas.
///
/// # Source
/// R. Garg, I. J. Bahl, "Microstrip discontinuities", Int. J. Electronics 45, 1978, pp. 81-87: a fit at er = 9.6, scaled by er^0.8 (odd) and er^0.9 (even).
pub fn gap(strip: &Strip, gap_m: f64) -> Gap {
    let board = &strip.board;
    let w = strip.built_width_m;
    let u = w / board.thickness_m;
    let share = built_share(strip, gap_m);
    let log_u = u.log10();
    let (odd_power, odd_level) = (u * (0.619 * log_u - 0.3853), 4.26 - 1.453 * log_u);
    let (even_power, even_level) =
        if share <= NARROW_GAP { (0.8675, 2.043 * u.powf(0.12)) } else { (1.565 / u.powf(0.16) - 1.0, 1.97 - 0.03 / u) };
    let relative = board.permittivity / 9.6;
    let odd = w * 1e-12 * share.powf(odd_power) * odd_level.exp() * relative.powf(0.8);
    let even = w * 1e-12 * 12.0 * share.powf(even_power) * even_level.exp() * relative.powf(0.9);
    Gap { shunt_f: 0.5 * even, series_f: 0.5 * odd - 0.25 * even }
}

/// Whether the source covers this gap.
pub fn in_range(strip: &Strip, gap_m: f64) -> bool {
    let u = strip.built_width_m / strip.board.thickness_m;
    (0.5..=2.0).contains(&u) && (0.1..=1.0).contains(&built_share(strip, gap_m)) && (2.5..=15.0).contains(&strip.board.permittivity)
}

/// Elements of a gap between strips of different widths.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct UnequalGap {
    /// From the first strip's end to ground.
    pub shunt_one_f: f64,
    /// From the other's.
    pub shunt_other_f: f64,
    /// Across the gap.
    pub series_f: f64,
}

/// A gap of `gap_m` (as drawn) between the ends of two strips on one centre line, whichever is wider.
///
/// # Valid range
/// 6 <= er <= 13, 0.1 <= w/h <= 3, width ratio up to 3, s/h from 0.2 up (from memory). Seen at er 9.6, equal widths: series 10 to 25 % low for s/h from 0.2 to
/// 0.5, shunt within 20 %.
///
/// # Source
/// M. Kirschning, R. H. Jansen, N. H. L. Koster, IEEE MTT-S Digest 1983, pp. 495-497 (from memory; some copies differ in one coefficient of the shunt part).
pub fn unequal_gap(one: &Strip, other: &Strip, gap_m: f64) -> UnequalGap {
    let swapped = other.built_width_m < one.built_width_m;
    let (narrow, wide) = if swapped { (other, one) } else { (one, other) };
    let h = narrow.board.thickness_m;
    let er = narrow.board.permittivity;
    let (u, v) = (narrow.built_width_m / h, wide.built_width_m / h);
    let g = super::statics::built_gap_m(&narrow.board, gap_m) / h;
    let ratio = v / u;
    let q5 = 1.23 / (1.0 + 0.12 * (ratio - 1.0).powf(0.9));
    let q1 = 0.04598 * (0.03 + u.powf(q5)) * (0.272 + 0.07 * er);
    let q2 = 0.107 * (u + 9.0) * g.powf(3.23) + 2.09 * g.powf(1.05) * (1.5 + 0.3 * u) / (1.0 + 0.6 * u);
    let q3 = (-0.5978 * ratio.powf(1.35)).exp() - 0.55;
    let q4 = (-0.5978 * ratio.powf(-1.35)).exp() - 0.55;
    let series_f = 500e-12 * h * (-1.86 * g).exp() * q1 * (1.0 + 4.19 * -(-0.785 * (1.0 / u).sqrt() * ratio).exp_m1());
    let end_f =
        |strip: &Strip| super::open_end::extension_m(strip) * strip.static_eps_eff().sqrt() / (super::C_M_PER_S * strip.static_z0_ohm());
    let narrow_f = end_f(narrow) * (q2 + q3) / (q2 + 1.0);
    let wide_f = end_f(wide) * (q2 + q4) / (q2 + 1.0);
    let (shunt_one_f, shunt_other_f) = if swapped { (wide_f, narrow_f) } else { (narrow_f, wide_f) };
    UnequalGap { shunt_one_f, shunt_other_f, series_f }
}

fn built_share(strip: &Strip, gap_m: f64) -> f64 {
    super::statics::built_gap_m(&strip.board, gap_m) / strip.built_width_m
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::line::AsBuilt;

    #[test]
    fn knows_its_range() {
        let board = AsBuilt::for_tests(10.2, 0.0);
        let strip = Strip::new(&board, 0.762e-3);
        assert!(in_range(&strip, 0.3e-3) && !in_range(&strip, 0.05e-3) && !in_range(&Strip::new(&board, 3e-3), 0.5e-3));
        assert!(gap(&strip, 0.2e-3).series_f > gap(&strip, 0.4e-3).series_f);
    }
}
