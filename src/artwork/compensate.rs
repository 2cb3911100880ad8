//! The artwork that etches to the finished size: every copper edge on the strip side moved outwards.

use crate::artwork::Board;
use crate::artwork::Layer;
use crate::artwork::Shape;
use crate::artwork::shape::Piece;
use crate::artwork::shape::Region;
use crate::base::Nm;

/// A copy of the board whose top copper (strips, launches, ground pads, etched text) is larger by `per_edge` on each side, so that etching
/// brings it back to the finished size. Copper that runs to the board's edge does not grow beyond it; ground on the bottom stays.
///
/// Gaps become smaller by twice `per_edge`; where they close, pieces would join: a design rule looks at this copy too.
pub fn compensated(board: &Board, per_edge: Nm) -> Board {
    let mut copy = board.clone();
    let edge = Region::from_shape(&board.outline);
    if let Some(shapes) = copy.layers.get_mut(&Layer::Copper(1)) {
        *shapes = shapes
            .iter()
            .flat_map(|shape| {
                let grown = Region::from_shape(shape).offset(per_edge).intersection(&edge);
                grown.pieces.into_iter().map(|Piece { outer, voids }| Shape { outer, voids, ..shape.clone() })
            })
            .collect();
    }
    copy
}
