//! Which width gives an impedance, and which width and gap give a pair of impedances?
//!
//! On a board whose static constants are solved, the closed form's answer and slopes are where a quasi-Newton search of the solved impedances begins; the slow,
//! sure search in brackets is left for what it cannot reach.

use std::fmt;

use super::AsBuilt;
use super::Pair;
use super::StaticsModel;
use super::Strip;
use super::numerical;
use crate::base::Place;
use crate::base::Problem;
use crate::base::bisect;

/// Widths looked at, over the dielectric thickness: beyond the ends no formula is trusted and no filter is drawn.
pub(super) const WIDTHS: [f64; 2] = [0.01, 60.0];
/// Gaps looked at, over the dielectric thickness.
pub(super) const GAPS: [f64; 2] = [0.005, 20.0];
/// Bracket in ln(size) at which a root is taken as found: below any grid.
const CLOSE: f64 = 1e-11;
/// Newton steps before the slow, sure way is taken; it needs four or five.
const MAX_NEWTON_STEPS: usize = 15;
/// Largest Newton step in ln(size): a factor of 2.2.
const LONGEST_STEP: f64 = 0.8;
/// Difference step for the Newton slopes: balances round-off against curvature.
const SLOPE_STEP: f64 = 1e-5;

/// Quasi-Newton steps on solved impedances; from the closed form four or five are usual.
const MAX_SOLVED_STEPS: usize = 14;
/// Residual (of ln Z, and of the coupling over itself) that counts as reached by them: below any grid, above the solver's rounding.
const REACHED: f64 = 1e-9;
/// Step at which the growth of impedance with frequency is taken from the solved single strip once: the width is then known well enough for it.
const GROWTH_STEP: usize = 2;
/// And again when ln(width) has changed by more than this since: the ratio of the two growths moves a ten-thousandth as much.
const GROWTH_REACH: f64 = 1e-4;
/// Residual that is good enough when no step lessens it any more.
const GOOD: f64 = 1e-7;
/// Bracket in ln(size) of the sure search on solved impedances: what it finds is polished, or only reported.
const SOLVED_CLOSE: f64 = 1e-6;

/// What is out of reach.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum OutOfReach {
    /// The strip would have to be narrower than the narrowest modelled.
    WidthTooSmall,
    /// The strip would have to be wider than the widest modelled.
    WidthTooLarge,
    /// The coupling is tighter than the narrowest gap gives.
    GapTooSmall,
    /// The coupling is weaker than the widest gap gives.
    GapTooLarge,
    /// The wanted numbers are not those of any line: not finite, not positive, or even not above odd.
    NotALine,
}

/// No geometry gives the wanted impedances.
#[derive(Clone, Debug, PartialEq)]
pub struct Unreachable {
    /// Which size, in which direction.
    pub what: OutOfReach,
    /// The size (m) at which the search ended; 0 for [`OutOfReach::NotALine`].
    pub limit_m: f64,
    /// What was wanted: ohm for a width, coupling (Z0e - Z0o)/(Z0e + Z0o) for a gap.
    pub wanted: f64,
    /// What the limit gives, same measure as `wanted`.
    pub reached: f64,
    /// What was wanted and what can be had.
    pub message: String,
    /// What would mend it.
    pub help: String,
}

impl Unreachable {
    pub(super) fn not_a_line(wanted: f64, message: String, help: &str) -> Unreachable {
        Unreachable { what: OutOfReach::NotALine, limit_m: 0.0, wanted, reached: 0.0, message, help: help.into() }
    }

    /// As an error at a place.
    pub fn problem(&self, place: Place) -> Problem {
        Problem::error("geometry-unreachable", place, self.message.clone(), self.help.clone())
    }
}

impl fmt::Display for Unreachable {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}; {}", self.message, self.help)
    }
}

/// The drawn width (m) of the strip of impedance `z0_ohm` at `f_hz` (zero: static).
///
/// # Errors
/// [`Unreachable`] when the strip would be narrower than 0.01 or wider than 60 times the dielectric thickness.
pub fn width_for_impedance(board: &AsBuilt, z0_ohm: f64, f_hz: f64) -> Result<f64, Unreachable> {
    if !(z0_ohm > 0.0 && z0_ohm.is_finite() && f_hz >= 0.0 && f_hz.is_finite()) {
        let message = format!("no strip has an impedance of {z0_ohm} ohm at {f_hz} Hz");
        return Err(Unreachable::not_a_line(z0_ohm, message, "ask for a positive impedance"));
    }
    let board = board.without_loss();
    let [low, high] = WIDTHS.map(|u| (u * board.thickness_m).ln());
    let impedance = |ln_w: f64| Strip::new(&board, ln_w.exp()).at(f_hz).z0_ohm;
    let polished = |start: f64| width_by_secants(&board, z0_ohm, f_hz, start, [low, high]);
    let close = match board.statics {
        StaticsModel::ClosedForm => CLOSE,
        StaticsModel::Numerical => {
            let start = width_for_impedance(&board.with_statics(StaticsModel::ClosedForm), z0_ohm, f_hz).ok();
            if let Some(found) = start.and_then(|width_m| polished(width_m.ln())) {
                return Ok(found);
            }
            SOLVED_CLOSE
        }
    };
    let found = bisect(|ln_w| impedance(ln_w) - z0_ohm, low, high, close);
    found.map(|ln_w| if close > CLOSE { polished(ln_w).unwrap_or(ln_w.exp()) } else { ln_w.exp() }).ok_or_else(|| {
        let (highest, lowest) = (impedance(low), impedance(high));
        width_unreachable(&board, "an impedance", z0_ohm, [highest, lowest], z0_ohm > highest)
    })
}

/// Secants from a closed form's answer, the first with the closed form's slope.
fn width_by_secants(board: &AsBuilt, z0_ohm: f64, f_hz: f64, start: f64, [low, high]: [f64; 2]) -> Option<f64> {
    let residual = |board: &AsBuilt, ln_w: f64| (Strip::new(board, ln_w.exp()).at(f_hz).z0_ohm / z0_ohm).ln();
    let closed = board.with_statics(StaticsModel::ClosedForm);
    let mut at = start;
    let mut slope = (residual(&closed, at + SLOPE_STEP) - residual(&closed, at)) / SLOPE_STEP;
    let mut now = residual(board, at);
    for _ in 0..MAX_SOLVED_STEPS {
        if now.abs() < REACHED {
            break;
        }
        let next = at + (-now / slope).clamp(-LONGEST_STEP, LONGEST_STEP);
        if !(low..=high).contains(&next) {
            return None;
        }
        let after = residual(board, next);
        // Impedance falls with the width; a quotient of rounding says nothing.
        let seen = (after - now) / (next - at);
        if seen < 0.5 * slope && seen > 2.0 * slope {
            slope = seen;
        }
        if after.abs() >= now.abs() && now.abs() < GOOD {
            break;
        }
        (at, now) = (next, after);
    }
    (now.abs() < GOOD).then(|| at.exp())
}

fn width_unreachable(board: &AsBuilt, subject: &str, wanted: f64, [highest, lowest]: [f64; 2], narrow: bool) -> Unreachable {
    let (limit_m, reached) = (WIDTHS[usize::from(!narrow)] * board.thickness_m, if narrow { highest } else { lowest });
    let (word, extreme, help) = if narrow {
        ("narrower", "highest", "ask for a lower impedance, or take a laminate of lower permittivity or greater thickness")
    } else {
        ("wider", "lowest", "ask for a higher impedance, or take a laminate of higher permittivity or less thickness")
    };
    Unreachable {
        what: if narrow { OutOfReach::WidthTooSmall } else { OutOfReach::WidthTooLarge },
        limit_m,
        wanted,
        reached,
        message: format!(
            "{subject} of {wanted:.2} ohm needs a strip {word} than {:.4} mm, which is where the models end ({extreme} there: {reached:.2} ohm)",
            limit_m * 1e3
        ),
        help: help.into(),
    }
}

/// The drawn width and gap (m) of the pair of even and odd impedance `z0e_ohm`, `z0o_ohm` at `f_hz` (zero: static).
///
/// # Errors
/// [`Unreachable`] when the strips would be narrower than 0.01 or wider than 60 times the dielectric thickness, or the gap below 0.005 or above 20 times.
pub fn pair_for_impedances(board: &AsBuilt, z0e_ohm: f64, z0o_ohm: f64, f_hz: f64) -> Result<(f64, f64), Unreachable> {
    if !(z0o_ohm > 0.0 && z0e_ohm.is_finite() && f_hz >= 0.0 && f_hz.is_finite()) {
        let message = format!("no pair has an even impedance of {z0e_ohm} ohm and an odd one of {z0o_ohm} ohm at {f_hz} Hz");
        return Err(Unreachable::not_a_line(0.0, message, "ask for positive impedances"));
    }
    if z0e_ohm <= z0o_ohm {
        let message = format!("the even impedance of {z0e_ohm} ohm is not above the odd impedance of {z0o_ohm} ohm");
        return Err(Unreachable::not_a_line(0.0, message, "for strips side by side ask for an even impedance above the odd one"));
    }
    let search =
        PairSearch { board: board.without_loss(), f_hz, ln_mean: 0.5 * (z0e_ohm * z0o_ohm).ln(), ln_ratio: (z0e_ohm / z0o_ohm).ln() };
    match search.board.statics {
        StaticsModel::ClosedForm => match search.by_newton() {
            Some(found) => Ok(found),
            None => search.nested(CLOSE),
        },
        StaticsModel::Numerical => {
            let closed = PairSearch { board: search.board.with_statics(StaticsModel::ClosedForm), ..search };
            let start = closed.by_newton().or_else(|| closed.nested(CLOSE).ok());
            if let Some(found) = start.and_then(|start| search.by_quasi_newton(&closed, start)) {
                return Ok(found);
            }
            let start = search.nested(SOLVED_CLOSE)?;
            // What the bracket holds may be a closed form's value that stood in; only a solved pair is an answer.
            search.by_quasi_newton(&closed, start).ok_or_else(|| {
                let message = format!("no pair with a solved cross-section is found for {z0e_ohm:.3} ohm even and {z0o_ohm:.3} ohm odd");
                Unreachable::not_a_line(0.0, message, "ask for a stronger coupling, or for impedances nearer to those of usual strips")
            })
        }
    }
}

/// Unknowns ln w and ln s; wanted: the logarithms of the geometric mean (set by the width) and of the ratio (set by the gap) of the two impedances.
struct PairSearch {
    board: AsBuilt,
    f_hz: f64,
    ln_mean: f64,
    ln_ratio: f64,
}

impl PairSearch {
    /// How far the pair is from what is wanted.
    fn residual(&self, ln_w: f64, ln_s: f64) -> [f64; 2] {
        let pair = Pair::new(&self.board, ln_w.exp(), ln_s.exp());
        let is_refused = self.board.statics == StaticsModel::Numerical && pair.error_estimate().is_none();
        if is_refused && ln_s > self.board.thickness_m.ln() {
            // Too far apart to be solved together: two single strips. The closed form, which knows no lid, would bring a coupling back.
            let z0_ohm = Strip::new(&self.board, ln_w.exp()).at(self.f_hz).z0_ohm;
            return [z0_ohm.ln() - self.ln_mean, -self.ln_ratio];
        }
        let [even, odd] = pair.impedances_ohm(self.f_hz);
        [0.5 * (even * odd).ln() - self.ln_mean, (even / odd).ln() - self.ln_ratio]
    }

    fn widths(&self) -> [f64; 2] {
        WIDTHS.map(|u| (u * self.board.thickness_m).ln())
    }

    fn gaps(&self) -> [f64; 2] {
        GAPS.map(|g| (g * self.board.thickness_m).ln())
    }

    fn by_newton(&self) -> Option<(f64, f64)> {
        let ([w_low, w_high], [s_low, s_high]) = (self.widths(), self.gaps());
        let mut ln_w = width_for_impedance(&self.board, self.ln_mean.exp(), self.f_hz).ok()?.ln();
        // Coupling falls roughly as 0.5 exp(-1.5 s/h) over the usual gaps; only a start.
        let coupling = (0.5 * self.ln_ratio).tanh();
        let mut ln_s = (self.board.thickness_m * ((0.5 / coupling).ln() / 1.5).clamp(0.03, 5.0)).ln();
        for _ in 0..MAX_NEWTON_STEPS {
            let here = self.residual(ln_w, ln_s);
            let (by_w, by_s) = (self.residual(ln_w + SLOPE_STEP, ln_s), self.residual(ln_w, ln_s + SLOPE_STEP));
            let [a, c] = [0, 1].map(|i| (by_w[i] - here[i]) / SLOPE_STEP);
            let [b, d] = [0, 1].map(|i| (by_s[i] - here[i]) / SLOPE_STEP);
            let determinant = a * d - b * c;
            let step = [(b * here[1] - d * here[0]) / determinant, (c * here[0] - a * here[1]) / determinant];
            if !(step[0].is_finite() && step[1].is_finite()) {
                return None;
            }
            let shortening = (LONGEST_STEP / step[0].abs().max(step[1].abs())).min(1.0);
            ln_w += shortening * step[0];
            ln_s += shortening * step[1];
            if !(w_low..=w_high).contains(&ln_w) || !(s_low..=s_high).contains(&ln_s) {
                return None;
            }
            // Quadratic convergence: after a step this short the next would be below any grid.
            if step[0].abs().max(step[1].abs()) < 1e-7 {
                return Some((ln_w.exp(), ln_s.exp()));
            }
        }
        None
    }

    /// From a start with the slopes of the closed form, which then learn from each step (C. G. Broyden, Math. Comp. 19, 1965).
    fn by_quasi_newton(&self, closed: &PairSearch, (width_m, gap_m): (f64, f64)) -> Option<(f64, f64)> {
        let ([w_low, w_high], [s_low, s_high]) = (self.widths(), self.gaps());
        let mut at = [width_m.ln(), gap_m.ln()];
        let here = closed.residual(at[0], at[1]);
        let (by_w, by_s) = (closed.residual(at[0] + SLOPE_STEP, at[1]), closed.residual(at[0], at[1] + SLOPE_STEP));
        let mut slopes = [0, 1].map(|i| [(by_w[i] - here[i]) / SLOPE_STEP, (by_s[i] - here[i]) / SLOPE_STEP]);
        let size = |r: [f64; 2]| r[0].abs().max((r[1] / self.ln_ratio).abs());
        let mut ln_growth = 0.0;
        let mut growth_taken_at = None;
        let mut now = self.solved_residual(closed, at, ln_growth)?;
        for step_number in 0..MAX_SOLVED_STEPS {
            // Once, and again at the end where the width has moved on since.
            let moved = growth_taken_at.is_none_or(|ln_w: f64| (at[0] - ln_w).abs() > GROWTH_REACH);
            if moved && (step_number == GROWTH_STEP || size(now) < REACHED) {
                let [even, odd] = Pair::new(&self.board, at[0].exp(), at[1].exp()).impedances_ohm(self.f_hz);
                let ln_missing = 0.5 * (even * odd).ln() - self.ln_mean - now[0];
                (ln_growth, now[0]) = (ln_growth + ln_missing, now[0] + ln_missing);
                growth_taken_at = Some(at[0]);
            }
            if size(now) < REACHED {
                break;
            }
            let [[a, b], [c, d]] = slopes;
            let determinant = a * d - b * c;
            let mut step = [(b * now[1] - d * now[0]) / determinant, (c * now[0] - a * now[1]) / determinant];
            if !(step[0].is_finite() && step[1].is_finite()) {
                return None;
            }
            let shortening = (LONGEST_STEP / step[0].abs().max(step[1].abs())).min(1.0);
            step = step.map(|s| shortening * s);
            let next = [at[0] + step[0], at[1] + step[1]];
            if !(w_low..=w_high).contains(&next[0]) || !(s_low..=s_high).contains(&next[1]) {
                return None;
            }
            let after = self.solved_residual(closed, next, ln_growth)?;
            if growth_taken_at.is_some() && size(after) >= size(now) && size(now) < GOOD {
                break;
            }
            let length = step[0] * step[0] + step[1] * step[1];
            for (i, row) in slopes.iter_mut().enumerate() {
                let missing = (after[i] - now[i] - row[0] * step[0] - row[1] * step[1]) / length;
                row[0] += missing * step[0];
                row[1] += missing * step[1];
            }
            (at, now) = (next, after);
        }
        (size(now) < GOOD).then(|| (at[0].exp(), at[1].exp()))
    }

    /// How far the solved pair is from what is wanted: the growth of impedance with frequency by the closed form's single strip, times exp(`ln_growth`).
    fn solved_residual(&self, closed: &PairSearch, [ln_w, ln_s]: [f64; 2], ln_growth: f64) -> Option<[f64; 2]> {
        let (width_m, gap_m) = (ln_w.exp(), ln_s.exp());
        let solved = numerical::pair(&self.board, width_m, gap_m).ok()?;
        let guess = Pair::new(&closed.board, width_m, gap_m);
        let growth = guess.impedances_ohm(self.f_hz)[0] / guess.static_z0_ohm().even;
        let (even, odd) = (solved.even.z0_ohm(), solved.odd.z0_ohm());
        Some([0.5 * (even * odd).ln() + growth.ln() + ln_growth - self.ln_mean, (even / odd).ln() - self.ln_ratio])
    }

    /// For each gap the width that gives the mean; then the gap that gives the ratio.
    fn nested(&self, close: f64) -> Result<(f64, f64), Unreachable> {
        let ([w_low, w_high], [s_low, s_high]) = (self.widths(), self.gaps());
        let mean_at = |ln_w: f64, ln_s: f64| (self.residual(ln_w, ln_s)[0] + self.ln_mean).exp();
        // A wide gap leaves the mean highest, a narrow one lowest.
        let (wanted, ends) = (self.ln_mean.exp(), [mean_at(w_low, s_high), mean_at(w_high, s_low)]);
        let mean_unreachable =
            |ends: [f64; 2]| width_unreachable(&self.board, "a mean impedance sqrt(Z0e Z0o)", wanted, ends, wanted > ends[0]);
        if wanted > ends[0] || wanted < ends[1] {
            return Err(mean_unreachable(ends));
        }
        let width_at = |ln_s: f64| bisect(|ln_w| self.residual(ln_w, ln_s)[0], w_low, w_high, close);
        // Where no width gives the mean, the nearest end of the widths stands in, so that the search in the gap stays continuous.
        let nearest = |ln_s: f64| width_at(ln_s).unwrap_or(if self.residual(w_low, ln_s)[0] < 0.0 { w_low } else { w_high });
        let ratio = |ln_s: f64| self.residual(nearest(ln_s), ln_s)[1];
        let Some(ln_s) = bisect(ratio, s_low, s_high, close) else {
            return Err(self.gap_unreachable(ratio(s_low), ratio(s_high)));
        };
        match width_at(ln_s) {
            Some(ln_w) => Ok((ln_w.exp(), ln_s.exp())),
            None => Err(mean_unreachable([mean_at(w_low, ln_s), mean_at(w_high, ln_s)])),
        }
    }

    fn gap_unreachable(&self, at_narrowest: f64, at_widest: f64) -> Unreachable {
        let coupling = |excess: f64| (0.5 * (excess + self.ln_ratio)).tanh();
        let wanted = coupling(0.0);
        let tight = at_narrowest < 0.0;
        let (what, share, reached) = if tight {
            (OutOfReach::GapTooSmall, GAPS[0], coupling(at_narrowest))
        } else {
            (OutOfReach::GapTooLarge, GAPS[1], coupling(at_widest))
        };
        let limit_m = share * self.board.thickness_m;
        let (word, extreme, help) = if tight {
            (
                "below",
                "tightest",
                "ask for a narrower band, or take a family that couples more tightly, a thicker laminate or a lower permittivity",
            )
        } else {
            (
                "above",
                "weakest",
                "ask for a wider band, or take a family that couples more weakly, a thinner laminate or a higher permittivity",
            )
        };
        Unreachable {
            what,
            limit_m,
            wanted,
            reached,
            message: format!(
                "a coupling of {wanted:.5} needs a gap {word} {:.4} mm, which is where the models end ({extreme} there: {reached:.5})",
                limit_m * 1e3
            ),
            help: help.into(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pair_of_any_usual_geometry_is_found_again() {
        for er in [1.0, 2.2, 4.4, 15.0] {
            for t in [0.0, 43e-6] {
                let board = AsBuilt::for_tests(er, t).without_loss();
                for (i, j) in (0..9).flat_map(|i| (0..9).map(move |j| (i, j))) {
                    let w = board.thickness_m * 0.05 * 400f64.powf(i as f64 / 8.0);
                    let s = board.thickness_m * 0.01 * 1000f64.powf(j as f64 / 8.0);
                    let wanted = Pair::new(&board, w, s).at(5e9);
                    let (found_w, found_s) = pair_for_impedances(&board, wanted.even.z0_ohm, wanted.odd.z0_ohm, 5e9).unwrap();
                    // Weak couplings: k = 5e-4 known to 1e-12 gives s to some 1e-9.
                    assert!(
                        (found_w / w - 1.0).abs() < 1e-7 && (found_s / s - 1.0).abs() < 1e-6,
                        "er {er} t {t} w {w} s {s}: {found_w} {found_s}"
                    );
                }
            }
        }
    }

    #[test]
    fn solved_geometry_is_found_again_under_a_lid_too() {
        for (er, lid_h) in [(2.2, None), (10.2, Some(3.0)), (3.0, Some(1.2))] {
            let board = AsBuilt::for_tests(er, 43e-6).without_loss().with_statics(StaticsModel::Numerical);
            let h = board.thickness_m;
            let board = AsBuilt {
                lid_m: lid_h.map(|lid_h| lid_h * h),
                undercut_m: 8e-6,
                widening_m: 5e-6,
                in_plane_permittivity: 1.1 * er,
                ..board
            };
            for (w, s) in [(0.3, 0.06), (0.3, 2.0), (1.0, 0.2), (2.5, 0.1), (2.5, 4.0), (8.0, 0.5)] {
                let (w, s) = (w * h, s * h);
                let wanted = Pair::new(&board, w, s);
                assert!(wanted.error_estimate().is_some());
                let wanted = wanted.at(5e9);
                let (found_w, found_s) = pair_for_impedances(&board, wanted.even.z0_ohm, wanted.odd.z0_ohm, 5e9).unwrap();
                // Coupling and impedance are met to 1e-7, and a size moves as its quantity or more slowly, but for weak couplings under a near lid.
                assert!(
                    (found_w / w - 1.0).abs() < 1e-6 && (found_s / s - 1.0).abs() < 1e-5,
                    "er {er} lid {lid_h:?} w {w} s {s}: {found_w} {found_s}"
                );
                let z0_ohm = Strip::new(&board, w).at(5e9).z0_ohm;
                let found = width_for_impedance(&board, z0_ohm, 5e9).unwrap();
                assert!((found / w - 1.0).abs() < 1e-6, "er {er} lid {lid_h:?} w {w}: {found}");
            }
        }
    }

    #[test]
    fn says_what_is_out_of_reach_of_the_solver() {
        let board = AsBuilt::for_tests(3.0, 35e-6).with_statics(StaticsModel::Numerical);
        let pair = |even, odd| pair_for_impedances(&board, even, odd, 2e9).map_err(|e| e.what);
        assert_eq!(width_for_impedance(&board, 400.0, 2e9).map_err(|e| e.what), Err(OutOfReach::WidthTooSmall));
        assert_eq!(pair(300.0, 5.0), Err(OutOfReach::GapTooSmall));
        assert_eq!(pair(50.0001, 49.9999), Err(OutOfReach::GapTooLarge));
    }

    #[test]
    fn width_is_found_again() {
        for er in [1.0, 3.0, 10.2] {
            let board = AsBuilt::for_tests(er, 35e-6);
            for w in [0.05e-3, 0.5e-3, 2e-3, 20e-3] {
                let z0_ohm = Strip::new(&board, w).at(8e9).z0_ohm;
                assert!((width_for_impedance(&board, z0_ohm, 8e9).unwrap() / w - 1.0).abs() < 1e-9);
            }
        }
    }

    #[test]
    fn says_what_is_out_of_reach() {
        let board = AsBuilt::for_tests(3.0, 35e-6);
        let pair = |even, odd| pair_for_impedances(&board, even, odd, 2e9).map_err(|e| e.what);
        assert_eq!(width_for_impedance(&board, 400.0, 2e9).map_err(|e| e.what), Err(OutOfReach::WidthTooSmall));
        assert_eq!(width_for_impedance(&board, 1.0, 2e9).map_err(|e| e.what), Err(OutOfReach::WidthTooLarge));
        assert_eq!(width_for_impedance(&board, f64::NAN, 2e9).map_err(|e| e.what), Err(OutOfReach::NotALine));
        assert_eq!(pair(300.0, 5.0), Err(OutOfReach::GapTooSmall));
        assert_eq!(pair(50.0001, 49.9999), Err(OutOfReach::GapTooLarge));
        assert_eq!(pair(900.0, 700.0), Err(OutOfReach::WidthTooSmall));
        assert_eq!(pair(1.1, 1.0), Err(OutOfReach::WidthTooLarge));
        assert_eq!(pair(40.0, 60.0), Err(OutOfReach::NotALine));
        assert_eq!(pair(f64::INFINITY, 60.0), Err(OutOfReach::NotALine));
        let problem = pair_for_impedances(&board, 300.0, 5.0, 2e9).unwrap_err().problem(Place::Dimension("gap 1".into()));
        assert!(problem.is_error() && problem.message.contains("coupling") && !problem.help.is_empty(), "{problem}");
    }
}
