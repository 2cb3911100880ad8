//! Every output file, written into a folder beside the target, then put in place whole.

use crate::artwork::Board;
use crate::base::Problem;
use crate::dimensions::Dimensions;
use crate::layout::Layout;
use crate::network::{Figures, Response};

/// What the writers read.
pub struct Bundle<'a> {
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
    /// Findings of the checks and warnings of every stage.
    pub findings: &'a [Problem],
}
