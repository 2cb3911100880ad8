//! Each distinct strip and pair of a board, computed once however often it is asked for.

use std::cell::RefCell;
use std::collections::BTreeMap;
use std::rc::Rc;

use super::{AsBuilt, Pair, Strip};
use crate::base::Nm;

/// The strips and pairs of one board as built, kept by their drawn geometry.
pub struct Book {
    built: AsBuilt,
    strips: RefCell<BTreeMap<Nm, Rc<Strip>>>,
    pairs: RefCell<BTreeMap<(Nm, Nm), Rc<Pair>>>,
}

impl Book {
    /// An empty book for a board.
    pub fn new(built: AsBuilt) -> Book {
        Book { built, strips: RefCell::default(), pairs: RefCell::default() }
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
}
