//! A drawn strip or pair on a board, put to the numerical cross-section: one set of tables per board, shared by all its strips.

use std::cell::RefCell;
use std::rc::Rc;

use super::AsBuilt;
use super::coupled::EvenOdd;
use super::section::CopperOf;
use super::section::LayerOf;
use super::section::ModeLoss;
use super::section::Roughness;
use super::section::Stackup;
use super::section::Surface;
use super::section::Surfaces;
use super::section::{Line, Pair};
use super::statics;
use crate::base::Place;
use crate::base::Problem;

/// Boards whose tables are kept; the one longest not asked for goes. A nominal board, the same with a receded copper and a few toleranced ones.
const STACKUPS_AT_MOST: usize = 8;

/// The exact bits of all that a stackup depends on.
type Key = [u64; 8];

thread_local! {
    /// Least recently asked first. A table is the same bits whenever it is made, so this saves time and nothing else.
    static STACKUPS: RefCell<Vec<(Key, Rc<Stackup>)>> = const { RefCell::new(Vec::new()) };
}

fn stackup(board: &AsBuilt, copper_thickness_m: f64) -> Result<Rc<Stackup>, Problem> {
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
    STACKUPS.with_borrow_mut(|kept| {
        if let Some(at) = kept.iter().position(|(other, _)| *other == key) {
            let found = kept.remove(at);
            kept.push(found.clone());
            return Ok(found.1);
        }
        let layer = LayerOf {
            permittivity: board.permittivity,
            in_plane_permittivity: board.in_plane_permittivity,
            loss_tangent: board.loss_tangent,
            thickness_m: board.thickness_m,
        };
        let copper = CopperOf { thickness_m: copper_thickness_m, undercut_m: board.undercut_m };
        let made = Rc::new(Stackup::new(&[layer], copper, lid_m).map_err(first)?);
        if kept.len() >= STACKUPS_AT_MOST {
            kept.remove(0);
        }
        kept.push((key, made.clone()));
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
    stackup(board, board.copper_thickness_m)?.single(statics::foot_m(board, width_m))
}

/// Two strips drawn `width_m` wide and `gap_m` apart.
pub(super) fn pair(board: &AsBuilt, width_m: f64, gap_m: f64) -> Result<Pair, Problem> {
    stackup(board, board.copper_thickness_m)?.symmetric_pair(statics::foot_m(board, width_m), statics::foot_gap_m(board, gap_m))
}

/// Loss of one strip.
pub(super) fn strip_loss(board: &AsBuilt, width_m: f64) -> Result<ModeLoss, Problem> {
    lossy_stackup(board)?.single_loss(statics::foot_m(board, width_m))
}

/// Loss of two strips.
pub(super) fn pair_loss(board: &AsBuilt, width_m: f64, gap_m: f64) -> Result<EvenOdd<ModeLoss>, Problem> {
    let [even, odd] = lossy_stackup(board)?.pair_loss(statics::foot_m(board, width_m), statics::foot_gap_m(board, gap_m))?;
    Ok(EvenOdd { even, odd })
}

fn lossy_stackup(board: &AsBuilt) -> Result<Rc<Stackup>, Problem> {
    stackup(board, board.copper_thickness_m.max(statics::THINNEST_LOSSY_COPPER_M))
}

/// Rough is the foil's laminate side: foot and ground. Plated are top and sides. The housing is taken as smooth metal of the copper's conductivity.
pub(super) fn surfaces(board: &AsBuilt) -> Surfaces {
    let smooth = Surface::smooth(board.conductivity_s_per_m);
    let laminate_side = Surface { roughness: Roughness::HammerstadJensen { rq_m: board.roughness_m }, ..smooth };
    let outside = Surface { plating: board.plating, ..smooth };
    Surfaces { foot: laminate_side, top: outside, sides: outside, ground: laminate_side, housing: smooth }
}
