//! A drawn strip or pair on a board, put to the numerical cross-section: one set of tables per board, shared by all its strips.

use std::cell::RefCell;
use std::collections::BTreeMap;
use std::rc::Rc;

use super::AsBuilt;
use super::coupled::EvenOdd;
use super::section::CopperOf;
use super::section::LayerOf;
use super::section::MatrixLoss;
use super::section::ModeLoss;
use super::section::Solved;
use super::section::Stackup;
use super::section::StripOf;
use super::section::Surface;
use super::section::Surfaces;
use super::section::{Line, Pair};
use super::statics;
use crate::base::Place;
use crate::base::Problem;

/// Boards whose tables are kept; the one longest not asked for goes. A nominal board, the same with a receded copper and a few toleranced ones.
const STACKUPS_AT_MOST: usize = 8;

/// Arrays kept per board; then they are dropped. A refinement of one filter needs some hundred.
const ARRAYS_AT_MOST: usize = 500;

/// Losses kept per board; then they are dropped. A sweep over one filter needs a dozen.
const LOSSES_AT_MOST: usize = 2000;

/// Tables and losses of one board. Losses depend on geometry and laminate only; frequency and surfaces come on top.
struct Kept {
    stackup: Stackup,
    strips: RefCell<BTreeMap<u64, ModeLoss>>,
    pairs: RefCell<BTreeMap<(u64, u64), EvenOdd<ModeLoss>>>,
    arrays: RefCell<BTreeMap<Vec<u64>, Rc<Solved>>>,
    array_losses: RefCell<BTreeMap<Vec<u64>, Rc<MatrixLoss>>>,
}

/// The exact bits of all that a stackup depends on.
type Key = [u64; 8];

thread_local! {
    /// Least recently asked first. A table is the same bits whenever it is made, so this saves time and nothing else.
    static STACKUPS: RefCell<Vec<(Key, Rc<Kept>)>> = const { RefCell::new(Vec::new()) };
}

fn kept(board: &AsBuilt, copper_thickness_m: f64) -> Result<Rc<Kept>, Problem> {
    let lid_m = board.lid_m;
    let sizes = [
        board.permittivity,
        board.in_plane_permittivity,
        board.loss_tangent,
        board.thickness_m,
        copper_thickness_m,
        board.undercut_m,
        lid_m.unwrap_or(0.0),
    ];
    let mut key: Key = [u64::from(lid_m.is_some()); 8];
    for (bits, size) in key.iter_mut().zip(sizes) {
        *bits = size.to_bits();
    }
    STACKUPS.with_borrow_mut(|all| {
        if let Some(at) = all.iter().position(|(other, _)| *other == key) {
            let found = all.remove(at);
            all.push(found.clone());
            return Ok(found.1);
        }
        let layer = LayerOf {
            permittivity: board.permittivity,
            in_plane_permittivity: board.in_plane_permittivity,
            loss_tangent: board.loss_tangent,
            thickness_m: board.thickness_m,
        };
        let copper = CopperOf { thickness_m: copper_thickness_m, undercut_m: board.undercut_m };
        let stackup = Stackup::new(&[layer], copper, lid_m).map_err(first)?;
        let made = Rc::new(Kept {
            stackup,
            strips: RefCell::default(),
            pairs: RefCell::default(),
            arrays: RefCell::default(),
            array_losses: RefCell::default(),
        });
        if all.len() >= STACKUPS_AT_MOST {
            all.remove(0);
        }
        all.push((key, made.clone()));
        Ok(made)
    })
}

fn first(problems: Vec<Problem>) -> Problem {
    // A refusal always names its reason; said again rather than assumed.
    let nameless = || Problem::error("section-not-converged", Place::Whole, "the cross-section is refused", "look at its sizes");
    problems.into_iter().next().unwrap_or_else(nameless)
}

/// One strip drawn `width_m` wide.
pub(super) fn strip(board: &AsBuilt, width_m: f64) -> Result<Line, Problem> {
    kept(board, board.copper_thickness_m)?.stackup.single(statics::foot_m(board, width_m))
}

/// Two strips drawn `width_m` wide and `gap_m` apart.
pub(super) fn pair(board: &AsBuilt, width_m: f64, gap_m: f64) -> Result<Pair, Problem> {
    kept(board, board.copper_thickness_m)?.stackup.symmetric_pair(statics::foot_m(board, width_m), statics::foot_gap_m(board, gap_m))
}

/// Loss of one strip.
pub(super) fn strip_loss(board: &AsBuilt, width_m: f64) -> Result<ModeLoss, Problem> {
    let kept = kept(board, lossy_thickness_m(board))?;
    let width_m = statics::foot_m(board, width_m);
    remembered(&kept.strips, LOSSES_AT_MOST, width_m.to_bits(), || kept.stackup.single_loss(width_m))
}

/// Loss of two strips.
pub(super) fn pair_loss(board: &AsBuilt, width_m: f64, gap_m: f64) -> Result<EvenOdd<ModeLoss>, Problem> {
    let kept = kept(board, lossy_thickness_m(board))?;
    let (width_m, gap_m) = (statics::foot_m(board, width_m), statics::foot_gap_m(board, gap_m));
    remembered(&kept.pairs, LOSSES_AT_MOST, (width_m.to_bits(), gap_m.to_bits()), || {
        kept.stackup.pair_loss(width_m, gap_m).map(|[even, odd]| EvenOdd { even, odd })
    })
}

/// Three strips or more, or two unequal ones: strips of these drawn widths, these gaps between them.
pub(super) fn array(board: &AsBuilt, widths_m: &[f64], gaps_m: &[f64]) -> Result<Rc<Solved>, Problem> {
    let kept = kept(board, board.copper_thickness_m)?;
    let strips = strips(board, widths_m, gaps_m);
    remembered(&kept.arrays, ARRAYS_AT_MOST, bits(&strips), || kept.stackup.array(&strips).map(Rc::new))
}

/// Loss of many strips.
pub(super) fn array_loss(board: &AsBuilt, widths_m: &[f64], gaps_m: &[f64]) -> Result<Rc<MatrixLoss>, Problem> {
    let kept = kept(board, lossy_thickness_m(board))?;
    let strips = strips(board, widths_m, gaps_m);
    remembered(&kept.array_losses, ARRAYS_AT_MOST, bits(&strips), || kept.stackup.array_loss(&strips).map(Rc::new))
}

fn strips(board: &AsBuilt, widths_m: &[f64], gaps_m: &[f64]) -> Vec<StripOf> {
    let gaps = std::iter::once(0.0).chain(gaps_m.iter().map(|gap_m| statics::foot_gap_m(board, *gap_m)));
    widths_m.iter().zip(gaps).map(|(width_m, gap_before_m)| StripOf { width_m: statics::foot_m(board, *width_m), gap_before_m }).collect()
}

fn bits(strips: &[StripOf]) -> Vec<u64> {
    strips.iter().flat_map(|strip| [strip.width_m.to_bits(), strip.gap_before_m.to_bits()]).collect()
}

fn remembered<K: Ord, V: Clone>(
    cache: &RefCell<BTreeMap<K, V>>,
    at_most: usize,
    key: K,
    solve: impl FnOnce() -> Result<V, Problem>,
) -> Result<V, Problem> {
    if let Some(found) = cache.borrow().get(&key) {
        return Ok(found.clone());
    }
    let value = solve()?;
    let mut cache = cache.borrow_mut();
    if cache.len() >= at_most {
        cache.clear();
    }
    cache.insert(key, value.clone());
    Ok(value)
}

fn lossy_thickness_m(board: &AsBuilt) -> f64 {
    board.copper_thickness_m.max(statics::THINNEST_LOSSY_COPPER_M)
}

/// Rough is the foil's laminate side: foot and ground. Plated are top and sides. The housing is taken as smooth metal of the copper's conductivity.
pub(super) fn surfaces(board: &AsBuilt) -> Surfaces {
    let smooth = Surface::smooth(board.conductivity_s_per_m);
    let laminate_side = Surface { roughness: board.roughness(), ..smooth };
    let outside = Surface { plating: board.plating, ..smooth };
    Surfaces { foot: laminate_side, top: outside, sides: outside, ground: laminate_side, housing: smooth }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::line::StaticsModel;
    use crate::line::Strip;

    fn board() -> AsBuilt {
        AsBuilt { statics: StaticsModel::Numerical, undercut_m: 8e-6, lid_m: Some(5e-3), ..AsBuilt::for_tests(3.0, 43e-6) }
    }

    #[test]
    fn what_was_asked_before_changes_no_bit() {
        let first = Strip::new(&board(), 1.9e-3).at(3e9);
        // More boards than are kept, so that the tables are made anew.
        for i in 0..=STACKUPS_AT_MOST {
            let other = AsBuilt { permittivity: 3.0 + 0.01 * (i + 1) as f64, ..board() };
            assert!(Strip::new(&other, 1.9e-3).at(3e9).eps_eff > first.eps_eff);
        }
        assert_eq!(Strip::new(&board(), 1.9e-3).at(3e9), first);
    }

    #[test]
    fn etch_error_is_drawn_width() {
        let wider = AsBuilt { widening_m: 20e-6, ..board() };
        assert_eq!(Strip::new(&wider, 1e-3).at(3e9), Strip::new(&board(), 1.02e-3).at(3e9));
    }

    #[test]
    fn nickel_costs_and_silver_does_not() {
        let loss =
            |finish: &str| Strip::new(&AsBuilt { plating: crate::line::plating_of(finish), ..board() }, 1.9e-3).at(5e9).conductor_np_per_m;
        // Common knowledge, no figure confirmed: tens of per cent above 1 to 2 GHz. The foot and the ground carry most of it and stay copper.
        assert!(loss("enig") > 1.1 * loss("immersion-silver") && loss("enig") < 2.5 * loss("immersion-silver"));
    }

    #[test]
    fn what_is_refused_is_said_and_the_closed_form_stands_in() {
        let lid_in_the_copper = AsBuilt { lid_m: Some(20e-6), ..board() };
        let strip = Strip::new(&lid_in_the_copper, 1.9e-3);
        assert_eq!(strip.error_estimate(), None);
        let problems = strip.problems(1e9);
        assert!(problems.iter().any(|p| p.code == "section-not-solved" && p.message.contains("lid-below-strip")), "{problems:?}");
        assert!(problems.iter().any(|p| p.code == "lid-not-modelled"));
        assert_eq!(Strip::new(&board(), 1.9e-3).problems(1e9), vec![]);
    }
}
