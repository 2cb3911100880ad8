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
use crate::base::Nm;
use crate::base::Point;
use crate::checks::Subject;
use crate::order::Compensation;

/// Corners are rounded once to 1 nm, so that a turned strip may measure this much less than it was drawn, metres.
pub(crate) const ROUNDING_M: f64 = 2e-9;

/// Edges whose normals lie within 10 degrees of the way between them face each other: a strip, a taper. On a round piece this measures at
/// least 0.985 of its diameter.
const FACING: f64 = 0.985;
/// Corners across a neck face each other when their edges' normals lie within 60 degrees of the way, and no step along either edge
/// shortens it.
const NECK_FACING: f64 = 0.5;
/// Cosine below which a step along an edge does not shorten the way.
const ACROSS: f64 = 0.05;

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
pub(crate) struct Narrow {
    /// Copper between two facing edges.
    pub copper: Option<Closest>,
    /// Space between two facing edges: a notch or slot.
    pub space: Option<Closest>,
}

/// An edge with the corners before and after it.
#[derive(Clone, Copy)]
struct Known {
    edge: Edge,
    before: Point,
    after: Point,
}

/// Looks only at places narrower than `below_m`.
///
/// Edges that meet at a corner are the business of the acute-angle rule.
pub(crate) fn narrow(shape: &Shape, below_m: f64) -> Narrow {
    let mut sorted: Vec<Known> = std::iter::once(&shape.outer)
        .chain(&shape.voids)
        .flat_map(|ring| {
            let n = ring.len();
            (0..n).map(move |i| Known {
                edge: Edge { a: ring[i], b: ring[(i + 1) % n] },
                before: ring[(i + n - 1) % n],
                after: ring[(i + 2) % n],
            })
        })
        .collect();
    sorted.sort_by_key(|known| (known.edge.a.x.min(known.edge.b.x), known.edge.a, known.edge.b));
    let mut found = Narrow::default();
    for (i, one) in sorted.iter().enumerate() {
        let reach = one.edge.a.x.max(one.edge.b.x) + Nm::from_m(below_m);
        for other in sorted[i + 1..].iter().take_while(|other| other.edge.a.x.min(other.edge.b.x) <= reach) {
            if one.edge.a == other.edge.b || one.edge.b == other.edge.a {
                continue;
            }
            let closest = between_edges(one.edge, other.edge);
            if closest.distance_m >= below_m || closest.distance_m == 0.0 {
                continue;
            }
            let way = vector(closest.from, closest.to);
            let back = (-way.0, -way.1);
            // The copper lies left of an edge: positive when the way runs into copper at both ends.
            let (here, there) = (cosine(normal(one.edge), way), cosine(normal(other.edge), back));
            let inwards = here.signum();
            let weaker = (here * inwards).min(there * inwards);
            let is_neck = || weaker >= NECK_FACING && stands_across(one, closest.from, way) && stands_across(other, closest.to, back);
            if weaker < FACING && !is_neck() {
                continue;
            }
            let slot = if inwards > 0.0 { &mut found.copper } else { &mut found.space };
            if slot.is_none_or(|best| closest.distance_m < best.distance_m) {
                *slot = Some(closest);
            }
        }
    }
    found
}

/// Whether no step from `at` along the ring goes along `way`.
fn stands_across(known: &Known, at: Point, way: (f64, f64)) -> bool {
    let steps = if at == known.edge.a {
        [known.before, known.edge.b]
    } else if at == known.edge.b {
        [known.edge.a, known.after]
    } else {
        return true;
    };
    steps.iter().all(|&to| cosine(vector(at, to), way) <= ACROSS)
}

fn vector(a: Point, b: Point) -> (f64, f64) {
    ((b.x - a.x).0 as f64, (b.y - a.y).0 as f64)
}

/// Normal of an edge into the copper.
fn normal(edge: Edge) -> (f64, f64) {
    let (x, y) = vector(edge.a, edge.b);
    (-y, x)
}

fn cosine(a: (f64, f64), b: (f64, f64)) -> f64 {
    (a.0 * b.0 + a.1 * b.1) / (a.0.hypot(a.1) * b.0.hypot(b.1)).max(f64::MIN_POSITIVE)
}
