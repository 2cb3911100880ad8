//! Findings on board, layout and response: design rules and microwave sense, one rule a file.

use crate::artwork::Board;
use crate::base::Problem;
use crate::dimensions::Dimensions;
use crate::layout::Layout;
use crate::network::{Figures, Response};

/// What the rules look at.
pub struct Subject<'a> {
    /// Order and numbers.
    pub dimensions: &'a Dimensions,
    /// Parts and nodes.
    pub layout: &'a Layout,
    /// What is made.
    pub board: &'a Board,
    /// The predicted response.
    pub response: &'a Response,
    /// Its figures.
    pub figures: &'a Figures,
}

/// A design rule.
pub struct Rule {
    /// Names the thing found: `gap-below-minimum`.
    pub code: &'static str,
    /// One line for `list rules`.
    pub about: &'static str,
    /// Publication, or "common practice".
    pub source: &'static str,
    /// Looks.
    pub run: fn(&Subject) -> Vec<Problem>,
}

/// Every rule, in the order in which they run.
pub static RULES: &[Rule] = &[];
