//! Each distinct strip, pair and array of a board, computed once however often it is asked for.

use std::cell::RefCell;
use std::collections::BTreeMap;
use std::rc::Rc;

use super::{Array, AsBuilt, Pair, Strip};
use crate::base::Nm;

/// Widths and gaps of an array.
type Sizes = (Vec<Nm>, Vec<Nm>);

/// The strips, pairs and arrays of one board as built, kept by their drawn geometry.
pub struct Book {
    built: AsBuilt,
    strips: RefCell<BTreeMap<Nm, Rc<Strip>>>,
    pairs: RefCell<BTreeMap<(Nm, Nm), Rc<Pair>>>,
    arrays: RefCell<BTreeMap<Sizes, Rc<Array>>>,
}

impl Book {
    /// An empty book for a board.
    pub fn new(built: AsBuilt) -> Book {
        Book { built, strips: RefCell::default(), pairs: RefCell::default(), arrays: RefCell::default() }
    }

    /// The board it is kept for.
    pub fn built(&self) -> &AsBuilt {
        &self.built
    }

    /// The strip of a drawn width.
    pub fn strip(&self, width: Nm) -> Rc<Strip> {
        self.strips.borrow_mut().entry(width).or_insert_with(|| Rc::new(Strip::new(&self.built, width.m()))).clone()
    }

    /// The symmetric pair of a drawn width and gap.
    pub fn pair(&self, width: Nm, gap: Nm) -> Rc<Pair> {
        self.pairs.borrow_mut().entry((width, gap)).or_insert_with(|| Rc::new(Pair::new(&self.built, width.m(), gap.m()))).clone()
    }

    /// Parallel strips of drawn widths, left to right, and the gaps between them.
    pub fn array(&self, widths: &[Nm], gaps: &[Nm]) -> Rc<Array> {
        let metres = |sizes: &[Nm]| sizes.iter().map(|size| size.m()).collect::<Vec<_>>();
        let key = (widths.to_vec(), gaps.to_vec());
        self.arrays.borrow_mut().entry(key).or_insert_with(|| Rc::new(Array::new(&self.built, &metres(widths), &metres(gaps)))).clone()
    }
}
