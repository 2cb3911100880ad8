//! Which widths and gaps give N coupled strips the impedances and couplings that are wanted?
//!
//! All sizes at once: the closed form's answer and slopes are where a quasi-Newton search on the board's own model begins (C. G. Broyden, Math. Comp. 19, 1965).

use super::Array;
use super::AsBuilt;
use super::OutOfReach;
use super::StaticsModel;
use super::Unreachable;
use super::inverse::{GAPS, WIDTHS};
use super::width_for_impedance;
use crate::base::solve_in_place;

/// Steps of each of the two searches; from fair starts five to eight are usual.
const MAX_STEPS: usize = 40;
/// Times that the slopes are taken anew on the board's own model: once they were those of a place too far away.
const MAX_RENEWALS: usize = 2;
/// Residual (of ln impedance, of ln coupling) that counts as reached: a size moves as its quantity or more slowly, and a millimetre has 1e6 nanometres.
const REACHED: f64 = 1e-7;
/// A step must lessen the residual to this share, else it is shortened or the slopes are renewed.
const LESSENS: f64 = 0.7;
/// Difference step for slopes in ln(size).
const SLOPE_STEP: f64 = 1e-5;
/// Longest step in ln(size).
const LONGEST_STEP: f64 = 0.6;

/// What N coupled strips shall be, at zero frequency.
///
/// In terms of the characteristic admittance matrix Y of the strips (for lines of one speed that is the capacitance matrix times the speed).
#[derive(Clone, Debug, PartialEq)]
pub struct ArrayTarget {
    /// 1 / Y_ii: impedance of each strip with all others grounded, left to right, ohm.
    pub own_ohm: Vec<f64>,
    /// -Y_ij / sqrt(Y_ii Y_jj) of each pair of neighbours; of an equal pair (Z0e - Z0o) / (Z0e + Z0o).
    pub couplings: Vec<f64>,
}

impl ArrayTarget {
    /// From each strip's admittance to ground and that between neighbours, in siemens: the form in which syntheses of combline and interdigital filters give it
    /// (there as capacitances over the permittivity, C / epsilon = 376.73 Y / sqrt(eps_eff)). Strips farther apart are taken not to see each other.
    pub fn from_admittances(to_ground_siemens: &[f64], between_siemens: &[f64]) -> ArrayTarget {
        let between = |at: Option<usize>| at.and_then(|at| between_siemens.get(at)).copied().unwrap_or(0.0);
        let own: Vec<f64> =
            to_ground_siemens.iter().enumerate().map(|(i, ground)| ground + between(i.checked_sub(1)) + between(Some(i))).collect();
        ArrayTarget {
            couplings: own.windows(2).zip(between_siemens).map(|(own, between)| between / (own[0] * own[1]).sqrt()).collect(),
            own_ohm: own.iter().map(|own| 1.0 / own).collect(),
        }
    }

    /// What an array is.
    pub fn of(array: &Array) -> ArrayTarget {
        let n = array.count();
        let currents = &array.static_modes().currents;
        // Y = I I' of modes of 1 ohm.
        let y = |i: usize, j: usize| -> f64 {
            let row = |i: usize| currents.get(i * n..(i + 1) * n).unwrap_or(&[]);
            row(i).iter().zip(row(j)).map(|(one, other)| one * other).sum()
        };
        ArrayTarget {
            own_ohm: (0..n).map(|i| 1.0 / y(i, i)).collect(),
            couplings: (1..n).map(|i| -y(i - 1, i) / (y(i - 1, i - 1) * y(i, i)).sqrt()).collect(),
        }
    }

    fn logarithms(&self) -> Vec<f64> {
        self.own_ohm.iter().chain(&self.couplings).map(|value| value.ln()).collect()
    }

    fn is_symmetric(&self) -> bool {
        self.own_ohm.iter().eq(self.own_ohm.iter().rev()) && self.couplings.iter().eq(self.couplings.iter().rev())
    }
}

/// The drawn widths and gaps (m) of the strips of a target, static.
///
/// A target that reads the same from the right gives sizes that do.
///
/// # Accuracy
/// Impedances and couplings within 1e-7 of those asked for, as [`Array`] gives them.
/// # Errors
/// [`Unreachable`]: numbers that are not those of an array; widths beyond 0.01 to 60 or gaps beyond 0.005 to 20 dielectric thicknesses; no solution found.
pub fn array_for(board: &AsBuilt, target: &ArrayTarget) -> Result<(Vec<f64>, Vec<f64>), Unreachable> {
    let count = target.own_ohm.len();
    let sizes_match = count > 0 && target.couplings.len() + 1 == count;
    let ohms_good = target.own_ohm.iter().all(|ohm| ohm.is_finite() && *ohm > 0.0);
    if !(sizes_match && ohms_good && target.couplings.iter().all(|coupling| *coupling > 0.0 && *coupling < 1.0)) {
        let message = format!("no array has the impedances {:?} ohm and the neighbours' couplings {:?}", target.own_ohm, target.couplings);
        return Err(Unreachable::not_a_line(0.0, message, "give N positive impedances and N - 1 couplings between 0 and 1"));
    }
    let search = Search { board: board.without_loss(), wanted: target.logarithms(), count, symmetric: target.is_symmetric() };
    let start = search.first_guess(target);
    let closed = Search { board: search.board.with_statics(StaticsModel::ClosedForm), ..search.clone() };
    // Where the closed form has no answer, the nearest it came to is still a start.
    let (start, reached) = closed.run(&closed, start)?;
    let found = match board.statics {
        StaticsModel::ClosedForm => (start, reached),
        StaticsModel::Numerical => search.run(&closed, start)?,
    };
    match found {
        (at, true) => Ok(search.sizes(&at)),
        (at, false) => Err(search.unreachable(target, &at)),
    }
}

#[derive(Clone)]
struct Search {
    board: AsBuilt,
    /// Logarithms of impedances, then of couplings.
    wanted: Vec<f64>,
    count: usize,
    symmetric: bool,
}

impl Search {
    /// Each strip alone, a little narrower for its neighbours, and gaps from the exponential fall of coupling.
    fn first_guess(&self, target: &ArrayTarget) -> Vec<f64> {
        let closed = self.board.with_statics(StaticsModel::ClosedForm);
        let h = self.board.thickness_m;
        let beside = |at: Option<usize>| at.and_then(|at| target.couplings.get(at)).copied().unwrap_or(0.0);
        let widths = target.own_ohm.iter().enumerate().map(|(i, ohm)| {
            // Half of the coupling's admittance comes on top of the strip alone, on each side.
            let alone = ohm / (1.0 - 0.5 * (beside(i.checked_sub(1)) + beside(Some(i)))).max(0.2);
            width_for_impedance(&closed, alone, 0.0).unwrap_or(h).ln()
        });
        let gaps = target.couplings.iter().map(|coupling| (h * ((0.5 / coupling).ln() / 1.5).clamp(0.03, 5.0)).ln());
        self.held(widths.chain(gaps).collect())
    }

    /// Within the bounds, and symmetric where the target is.
    fn held(&self, mut at: Vec<f64>) -> Vec<f64> {
        if self.symmetric {
            let (widths, gaps) = at.split_at_mut(self.count);
            for part in [widths, gaps] {
                let turned: Vec<f64> = part.iter().rev().copied().collect();
                part.iter_mut().zip(turned).for_each(|(one, other)| *one = 0.5 * (*one + other));
            }
        }
        for (index, value) in at.iter_mut().enumerate() {
            let [low, high] = self.bounds(index);
            *value = value.clamp(low, high);
        }
        at
    }

    fn bounds(&self, index: usize) -> [f64; 2] {
        let share = if index < self.count { WIDTHS } else { GAPS };
        share.map(|share| (share * self.board.thickness_m).ln())
    }

    fn sizes(&self, at: &[f64]) -> (Vec<f64>, Vec<f64>) {
        let sizes: Vec<f64> = at.iter().map(|value| value.exp()).collect();
        let (widths, gaps) = sizes.split_at(self.count);
        (widths.to_vec(), gaps.to_vec())
    }

    fn residual(&self, at: &[f64]) -> Result<Vec<f64>, Unreachable> {
        let (widths, gaps) = self.sizes(at);
        let array = Array::new(&self.board, &widths, &gaps);
        if self.board.statics == StaticsModel::Numerical && array.error_estimate().is_none() {
            let reason = array.problems(0.0).into_iter().next().map_or_else(String::new, |problem| format!(": {}", problem.message));
            let message = format!("the search came to strips whose cross-section is not solved{reason}");
            return Err(Unreachable::not_a_line(0.0, message, "ask for impedances and couplings nearer to those of usual strips"));
        }
        // A coupling that has vanished is very far from any.
        let given = ArrayTarget::of(&array).logarithms();
        Ok(given.iter().zip(&self.wanted).map(|(given, wanted)| if given.is_finite() { given - wanted } else { -50.0 }).collect())
    }

    fn slopes(&self, at: &[f64]) -> Result<Vec<f64>, Unreachable> {
        let here = self.residual(at)?;
        let size = at.len();
        let mut slopes = vec![0.0; size * size];
        for column in 0..size {
            let mut beside = at.to_vec();
            beside[column] += SLOPE_STEP;
            for (row, (there, here)) in self.residual(&beside)?.iter().zip(&here).enumerate() {
                slopes[row * size + column] = (there - here) / SLOPE_STEP;
            }
        }
        Ok(slopes)
    }

    /// From a start with the slopes of a cheaper model; the answer, or how near it came.
    fn run(&self, cheap: &Search, start: Vec<f64>) -> Result<(Vec<f64>, bool), Unreachable> {
        let largest = |residual: &[f64]| residual.iter().fold(0.0f64, |largest, value| largest.max(value.abs()));
        let mut at = start;
        let mut slopes = cheap.slopes(&at)?;
        let mut now = self.residual(&at)?;
        let mut renewals = 0;
        for _ in 0..MAX_STEPS {
            if largest(&now) < REACHED {
                return Ok((at, true));
            }
            let mut step: Vec<f64> = now.iter().map(|value| -value).collect();
            let solvable = solve_in_place(&mut slopes.clone(), &mut step) && step.iter().all(|value| value.is_finite());
            let shortening = (LONGEST_STEP / largest(&step)).min(1.0);
            let next = self.held(at.iter().zip(&step).map(|(at, step)| at + shortening * step).collect());
            let moved: Vec<f64> = next.iter().zip(&at).map(|(next, at)| next - at).collect();
            let after = if solvable { self.residual(&next)? } else { now.clone() };
            let lessens = solvable && (largest(&after) < LESSENS * largest(&now) || (shortening < 1.0 && largest(&after) < largest(&now)));
            if !lessens {
                // Slopes of the wrong place, or an end of the sizes.
                if renewals == MAX_RENEWALS || largest(&moved) == 0.0 {
                    return Ok((at, largest(&now) < REACHED));
                }
                renewals += 1;
                if solvable && largest(&after) < largest(&now) {
                    (at, now) = (next, after);
                }
                slopes = self.slopes(&at)?;
                continue;
            }
            let length: f64 = moved.iter().map(|value| value * value).sum();
            for (row, slopes) in slopes.chunks_exact_mut(moved.len()).enumerate() {
                let foretold: f64 = slopes.iter().zip(&moved).map(|(slope, moved)| slope * moved).sum();
                let missing = (after[row] - now[row] - foretold) / length;
                slopes.iter_mut().zip(&moved).for_each(|(slope, moved)| *slope += missing * moved);
            }
            (at, now) = (next, after);
        }
        Ok((at, largest(&now) < REACHED))
    }

    fn unreachable(&self, target: &ArrayTarget, at: &[f64]) -> Unreachable {
        let (widths, gaps) = self.sizes(at);
        let given = ArrayTarget::of(&Array::new(&self.board, &widths, &gaps));
        let pairs = target.own_ohm.iter().chain(&target.couplings).zip(given.own_ohm.iter().chain(&given.couplings));
        // A size at its end first, else the quantity that is farthest off.
        let at_end = at.iter().enumerate().find_map(|(index, value)| {
            let [low, high] = self.bounds(index);
            if *value <= low { Some((index, true)) } else { (*value >= high).then_some((index, false)) }
        });
        let off = |(wanted, given): (&f64, &f64)| (given / wanted).ln().abs();
        let worst = pairs.clone().map(off).enumerate().fold((0, 0.0), |worst, now| if now.1 > worst.1 { now } else { worst }).0;
        let (index, what, limit_m) = match at_end {
            Some((index, low)) if index < self.count => {
                (index, if low { OutOfReach::WidthTooSmall } else { OutOfReach::WidthTooLarge }, at[index].exp())
            }
            Some((index, low)) => (index, if low { OutOfReach::GapTooSmall } else { OutOfReach::GapTooLarge }, at[index].exp()),
            None => (worst, OutOfReach::NotALine, 0.0),
        };
        let (wanted, reached) = pairs.clone().nth(index).map_or((0.0, 0.0), |(wanted, given)| (*wanted, *given));
        let subject = if index < self.count {
            format!("an impedance of {wanted:.3} ohm of strip {} among its neighbours", index + 1)
        } else {
            format!("a coupling of {wanted:.5} of strips {} and {}", index - self.count + 1, index - self.count + 2)
        };
        let reason = if limit_m > 0.0 { format!("; the search ended at {:.4} mm", limit_m * 1e3) } else { String::new() };
        Unreachable {
            what,
            limit_m,
            wanted,
            reached,
            message: format!("no widths and gaps give {subject} with all the rest{reason} (nearest: {reached:.5})"),
            help: "ask for other impedances or couplings, or take another laminate thickness".into(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn boards() -> [AsBuilt; 3] {
        let board = AsBuilt { undercut_m: 5e-6, ..AsBuilt::for_tests(3.66, 35e-6) }.without_loss();
        let lid = AsBuilt { lid_m: Some(3e-3), ..board.with_statics(StaticsModel::Numerical) };
        [board.clone(), board.with_statics(StaticsModel::Numerical), lid]
    }

    #[test]
    fn sizes_are_found_again() {
        for board in boards() {
            let cases: [(&[f64], &[f64]); 4] = [
                (&[1.2e-3], &[]),
                (&[1.2e-3, 1.2e-3], &[0.2e-3]),
                (&[0.4e-3, 1.5e-3, 0.9e-3], &[0.15e-3, 1.1e-3]),
                (&[0.6e-3, 1.0e-3, 0.9e-3, 1.0e-3, 0.6e-3], &[0.2e-3, 0.6e-3, 0.6e-3, 0.2e-3]),
            ];
            for (widths, gaps) in cases {
                let target = ArrayTarget::of(&Array::new(&board, widths, gaps));
                let (found_widths, found_gaps) = array_for(&board, &target).unwrap();
                for (found, size) in found_widths.iter().zip(widths).chain(found_gaps.iter().zip(gaps)) {
                    // Quantities are met to 1e-7; a gap of weak coupling moves about as much, a narrow one's coupling three times less.
                    assert!((found / size - 1.0).abs() < 1e-6, "{widths:?} {gaps:?}: {found_widths:?} {found_gaps:?}");
                }
                if target.is_symmetric() {
                    assert!(found_widths.iter().eq(found_widths.iter().rev()));
                }
            }
        }
    }

    #[test]
    fn an_equal_pair_is_that_of_its_even_and_odd_impedance() {
        for board in boards() {
            let (even, odd): (f64, f64) = (60.0, 42.0);
            let target = ArrayTarget { own_ohm: vec![2.0 * even * odd / (even + odd); 2], couplings: vec![(even - odd) / (even + odd)] };
            let (widths, gaps) = array_for(&board, &target).unwrap();
            let (width, gap) = super::super::pair_for_impedances(&board, even, odd, 0.0).unwrap();
            assert!((widths[0] / width - 1.0).abs() < 1e-6 && widths[0] == widths[1] && (gaps[0] / gap - 1.0).abs() < 1e-6);
        }
    }

    #[test]
    fn says_what_is_out_of_reach() {
        for board in boards() {
            let fail = |own_ohm: &[f64], couplings: &[f64]| {
                array_for(&board, &ArrayTarget { own_ohm: own_ohm.to_vec(), couplings: couplings.to_vec() }).map_err(|error| error.what)
            };
            assert_eq!(fail(&[50.0, 50.0, 50.0], &[0.1]), Err(OutOfReach::NotALine));
            assert_eq!(fail(&[50.0, f64::NAN], &[0.1]), Err(OutOfReach::NotALine));
            assert!(matches!(fail(&[50.0, 50.0], &[0.9]), Err(OutOfReach::GapTooSmall | OutOfReach::NotALine)));
            assert!(fail(&[400.0, 50.0], &[0.05]).is_err());
        }
    }

    #[test]
    fn ground_and_mutual_admittances_are_the_same_target() {
        let target = ArrayTarget::from_admittances(&[0.015, 0.012, 0.015], &[0.004, 0.004]);
        assert!((target.own_ohm[0] - 1.0 / 0.019).abs() < 1e-12 && (target.own_ohm[1] - 50.0).abs() < 1e-12);
        assert!((target.couplings[0] - 0.004 / (0.019f64 * 0.02).sqrt()).abs() < 1e-15);
        let board = &boards()[1];
        let (widths, gaps) = array_for(board, &target).unwrap();
        let given = ArrayTarget::of(&Array::new(board, &widths, &gaps));
        for (given, wanted) in given.own_ohm.iter().chain(&given.couplings).zip(target.own_ohm.iter().chain(&target.couplings)) {
            assert!((given / wanted - 1.0).abs() < 2e-7);
        }
    }
}
