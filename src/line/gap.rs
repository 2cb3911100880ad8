//! What is at a gap in a strip: a series capacitance, and one to ground at each end.

use std::cell::RefCell;
use std::collections::BTreeMap;

use super::Strip;
use super::junction_statics::Arm;
use super::junction_statics::FINEST_OF_GAP;
use super::junction_statics::excess_capacitance_f;

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

/// Steps of the kept solutions: gaps a quarter octave apart.
const NODES_PER_FACTOR: f64 = 4.0 / std::f64::consts::LN_2;
/// Solutions kept; then they are dropped.
const KEPT_AT_MOST: usize = 4000;
/// Gap over height inside which the solution is asked; beyond, the nearest gap's value with what remains of the coupling left out.
const SOLVED_GAPS: [f64; 2] = [0.005, 6.0];

/// Bits of permittivities, height and widths, and the number of the gap's node.
type Key = ([u64; 5], i64);

thread_local! {
    /// A solution is the same bits whenever it is made, so this saves time and nothing else.
    static SOLVED: RefCell<BTreeMap<Key, Option<UnequalGap>>> = const { RefCell::new(BTreeMap::new()) };
}

/// A gap of `gap_m` (as drawn) between the ends of two strips on one centre line, whichever is wider.
///
/// From our own static solution, at gaps a quarter octave apart and a smooth curve through them; each pair of widths costs some milliseconds a gap, once.
/// Copper thickness enters by the equivalent width and gap only: the facing ends of thick copper add about eps0 w t/s, which is left out.
///
/// # Valid range
/// Any permittivity and width, gaps from 0.005 to 6 heights (outside, the nearest of these); no lid. Static: the capacitances themselves hold while gap and
/// height are well below a tenth of a guided wavelength.
///
/// # Source
/// Excess charge on panels (Silvester & Benedek 1972, Maeda 1972); if ever that fails, [`published_unequal_gap`].
///
/// # Accuracy
/// 2 % against the same with much finer panels, smooth in the gap. Against another static solution at er 9.6 (good to 2 %): series and shunt within 3 % of
/// their sum. Against our full-wave solver at 4 GHz (`cargo bench --bench discontinuities`), 50-ohm strips, gaps of 0.1 and 0.3 h: series 2 and 3 % high on er
/// 3.0, 0.762 mm (the law of [`gap`], out of its range there, is 30 % low), 6 and 10 % high on er 10.2, 0.635 mm; shunt 2 fF low; their sum within 2 %.
pub fn unequal_gap(one: &Strip, other: &Strip, gap_m: f64) -> UnequalGap {
    solved_gap(one, other, gap_m).unwrap_or_else(|| published_unequal_gap(one, other, gap_m))
}

fn solved_gap(one: &Strip, other: &Strip, gap_m: f64) -> Option<UnequalGap> {
    let board = &one.board;
    let h = board.thickness_m;
    let [low, high] = SOLVED_GAPS;
    let share = (super::statics::built_gap_m(board, gap_m) / h).clamp(low, high);
    let place = share.ln() * NODES_PER_FACTOR;
    let first = place.floor();
    let t = place - first;
    let node = |offset: f64| node(one, other, h * ((first + offset) / NODES_PER_FACTOR).exp(), (first + offset) as i64);
    let nodes = [node(-1.0)?, node(0.0)?, node(1.0)?, node(2.0)?];
    let between = |of: fn(&UnequalGap) -> f64| {
        let [a, b, c, d] = [of(&nodes[0]), of(&nodes[1]), of(&nodes[2]), of(&nodes[3])];
        b + 0.5 * t * (c - a + t * (2.0 * a - 5.0 * b + 4.0 * c - d + t * (3.0 * (b - c) + d - a)))
    };
    Some(UnequalGap {
        shunt_one_f: between(|gap| gap.shunt_one_f),
        shunt_other_f: between(|gap| gap.shunt_other_f),
        series_f: between(|gap| gap.series_f.ln()).exp(),
    })
}

/// The solution at a node of the gaps.
fn node(one: &Strip, other: &Strip, gap_m: f64, number: i64) -> Option<UnequalGap> {
    let board = &one.board;
    let widths = [one.built_width_m, other.built_width_m];
    let sizes = [board.permittivity, board.in_plane_permittivity, board.thickness_m, widths[0], widths[1]];
    let key = (sizes.map(f64::to_bits), number);
    if let Some(known) = SOLVED.with_borrow(|kept| kept.get(&key).copied()) {
        return known;
    }
    let arm =
        |width_m: f64, sign: f64, conductor| Arm { width_m, start_m: 0.5 * sign * gap_m, centre_m: 0.0, forward: sign > 0.0, conductor };
    let arms = [arm(widths[0], -1.0, 0), arm(widths[1], 1.0, 1)];
    let solved = excess_capacitance_f(board, &arms, 2, FINEST_OF_GAP * gap_m).and_then(|charges| match charges.as_slice() {
        // The two mutual ones differ by what panels matched at their middles leave.
        &[own, back, across, far] if back + across < 0.0 => {
            let series_f = -0.5 * (back + across);
            Some(UnequalGap { shunt_one_f: own - series_f, shunt_other_f: far - series_f, series_f })
        }
        _ => None,
    });
    SOLVED.with_borrow_mut(|kept| {
        if kept.len() >= KEPT_AT_MOST {
            kept.clear();
        }
        kept.insert(key, solved);
    });
    solved
}

/// The published law of [`unequal_gap`].
///
/// # Valid range
/// 6 <= er <= 13, 0.1 <= w/h <= 3, width ratio up to 3, s/h from 0.2 up (from memory). Seen at er 9.6, equal widths: series 10 to 25 % low for s/h from 0.2 to
/// 0.5, shunt within 20 %.
///
/// # Source
/// M. Kirschning, R. H. Jansen, N. H. L. Koster, IEEE MTT-S Digest 1983, pp. 495-497 (from memory; some copies differ in one coefficient of the shunt part).
pub fn published_unequal_gap(one: &Strip, other: &Strip, gap_m: f64) -> UnequalGap {
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
    fn solved_gaps_are_symmetric_and_smooth() {
        let board = AsBuilt::for_tests(2.2, 0.0);
        let (one, other) = (Strip::new(&board, 2.3e-3), Strip::new(&board, 1.2e-3));
        let (a, b) = (unequal_gap(&one, &other, 0.2e-3), unequal_gap(&other, &one, 0.2e-3));
        // The mean of both mutual values either way: only the order of the sums differs.
        assert!((a.series_f / b.series_f - 1.0).abs() < 1e-9 && (a.shunt_one_f / b.shunt_other_f - 1.0).abs() < 1e-7, "{a:?} {b:?}");
        // Falls with the gap, across the places where the curve changes nodes too.
        let series: Vec<f64> = (0..40).map(|i| unequal_gap(&one, &other, 0.1e-3 * 1.05f64.powi(i)).series_f).collect();
        assert!(series.windows(2).all(|w| w[1] < w[0]), "{series:?}");
        let slope = |gap_m: f64| {
            let [low, high] = [1.0 - 1e-6, 1.0 + 1e-6].map(|by| unequal_gap(&one, &other, gap_m * by).series_f);
            (high / low).ln() / 2e-6
        };
        // A slope by small steps is that by large ones: no noise.
        let large =
            (unequal_gap(&one, &other, 0.202e-3).series_f / unequal_gap(&one, &other, 0.198e-3).series_f).ln() / (0.202f64 / 0.198).ln();
        assert!((slope(0.2e-3) / large - 1.0).abs() < 0.02, "{} {large}", slope(0.2e-3));
    }

    #[test]
    fn knows_its_range() {
        let board = AsBuilt::for_tests(10.2, 0.0);
        let strip = Strip::new(&board, 0.762e-3);
        assert!(in_range(&strip, 0.3e-3) && !in_range(&strip, 0.05e-3) && !in_range(&Strip::new(&board, 3e-3), 0.5e-3));
        assert!(gap(&strip, 0.2e-3).series_f > gap(&strip, 0.4e-3).series_f);
    }
}
