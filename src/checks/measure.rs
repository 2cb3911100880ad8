//! What rules measure on the copper: narrow places, notches, and both states of the artwork.

use std::borrow::Cow;

use crate::artwork::Board;
use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::Shape;
use crate::artwork::compensated;
use crate::artwork::shape::Closest;
use crate::artwork::shape::Edge;
use crate::artwork::shape::between_edges;
use crate::artwork::shape::edges;
use crate::base::Nm;
use crate::checks::Subject;
use crate::order::Compensation;

/// Corners are rounded once to 1 nm, so that a turned strip may measure this much less than it was drawn, metres.
pub(super) const ROUNDING_M: f64 = 2e-9;

/// Cosine of the greatest angle between an edge's normal and the way to the edge it faces: 60 degrees.
const FACING: f64 = 0.5;

/// The finished geometry, and the artwork when the order lets it carry the etch compensation; each with what to call it.
pub(super) fn artworks<'a>(subject: &'a Subject) -> Vec<(&'static str, Cow<'a, Board>)> {
    let mut states = vec![("", Cow::Borrowed(subject.board))];
    if let Compensation::InTheArtwork { per_edge_m } = subject.dimensions.order.shop.compensation {
        states.push((" in the compensated artwork", Cow::Owned(compensated(subject.board, Nm::from_m(per_edge_m)))));
    }
    states
}

/// Every copper shape that is not text, with its layer.
pub(super) fn copper(board: &Board) -> impl Iterator<Item = (Layer, &Shape)> {
    board
        .layers
        .iter()
        .filter(|(layer, _)| matches!(layer, Layer::Copper(_)))
        .flat_map(|(&layer, shapes)| shapes.iter().map(move |shape| (layer, shape)))
        .filter(|(_, shape)| shape.role != Role::Text)
}

/// The narrowest place of copper and of the space between two stretches of one shape's own edge.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Narrow {
    /// Copper between two facing edges.
    pub copper: Option<Closest>,
    /// Space between two facing edges: a notch or slot.
    pub space: Option<Closest>,
}

/// Looks only at places narrower than `below_m`.
pub(super) fn narrow(shape: &Shape, below_m: f64) -> Narrow {
    // Edges that meet at a corner are the business of the acute-angle rule.
    let rings = std::iter::once(&shape.outer).chain(&shape.voids);
    let mut sorted = edges(rings);
    sorted.sort_by_key(|edge| (edge.a.x.min(edge.b.x), edge.a, edge.b));
    let mut found = Narrow::default();
    for (i, &one) in sorted.iter().enumerate() {
        let reach = one.a.x.max(one.b.x) + Nm::from_m(below_m);
        for &other in sorted[i + 1..].iter().take_while(|other| other.a.x.min(other.b.x) <= reach) {
            if one.a == other.b || one.b == other.a {
                continue;
            }
            let closest = between_edges(one, other);
            if closest.distance_m >= below_m || closest.distance_m == 0.0 {
                continue;
            }
            let (to_other, to_one) = (facing(one, &closest, 1.0), facing(other, &closest, -1.0));
            let slot = if to_other >= FACING && to_one >= FACING {
                &mut found.copper
            } else if to_other <= -FACING && to_one <= -FACING {
                &mut found.space
            } else {
                continue;
            };
            if slot.is_none_or(|best| closest.distance_m < best.distance_m) {
                *slot = Some(closest);
            }
        }
    }
    found
}

/// Cosine between the edge's normal into the copper and the way along the closest stretch (backwards for `sign` -1).
fn facing(edge: Edge, closest: &Closest, sign: f64) -> f64 {
    let vector = |a: crate::base::Point, b: crate::base::Point| ((b.x - a.x).0 as f64, (b.y - a.y).0 as f64);
    let (ex, ey) = vector(edge.a, edge.b);
    let (wx, wy) = vector(closest.from, closest.to);
    // The copper lies left of an edge.
    sign * (-ey * wx + ex * wy) / (ex.hypot(ey) * wx.hypot(wy)).max(f64::MIN_POSITIVE)
}
