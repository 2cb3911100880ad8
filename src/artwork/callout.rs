//! Where each dimension lies on the board: two points of the copper for every width, gap and length a part is drawn from.

use std::collections::BTreeSet;

use crate::artwork::Callout;
use crate::base::Nm;
use crate::base::Point;
use crate::layout::Layout;
use crate::layout::Node;
use crate::layout::Part;

/// Widths are called out this far along a section, gaps the rest of the way, so that their arrows do not meet.
const WIDTH_AT: f64 = 0.35;
const GAP_AT: f64 = 0.65;

/// One call-out for each dimension that is a width, a gap or a length of a part, in the order of the parts, each dimension once.
///
/// Which it is, its name says: it holds the word `width`, `gap` or `length`; several of a kind belong to the strips in order.
pub(super) fn callouts(layout: &Layout) -> Vec<Callout> {
    let mut called = BTreeSet::new();
    let mut found = Vec::new();
    for placed in &layout.parts {
        if let (Part::Gap { .. }, Some(name), Some((from, to))) = (&placed.part, placed.serves.first(), between_ends(layout, &placed.nodes))
        {
            if called.insert(name.clone()) {
                found.push(Callout { dimension: name.clone(), from, to });
            }
            continue;
        }
        let Part::Lines { widths, .. } = &placed.part else { continue };
        let strips: Vec<[Side; 2]> = (0..widths.len())
            .filter_map(|i| {
                let near = layout.nodes.get(*placed.nodes.get(i)?)?;
                let far = layout.nodes.get(*placed.nodes.get(i + widths.len())?)?;
                Some(sides(near, far))
            })
            .collect();
        for (word, kind) in [("width", Kind::Width), ("gap", Kind::Gap), ("length", Kind::Length)] {
            let names = placed.serves.iter().filter(|name| name.split(' ').any(|part| part == word));
            for (i, name) in names.enumerate() {
                if let Some((from, to)) = place(kind, &strips, i)
                    && called.insert(name.clone())
                {
                    found.push(Callout { dimension: name.clone(), from, to });
                }
            }
        }
    }
    found
}

#[derive(Clone, Copy)]
enum Kind {
    Width,
    Gap,
    Length,
}

/// A strip's edge from its near to its far end.
type Side = (Point, Point);

fn place(kind: Kind, strips: &[[Side; 2]], i: usize) -> Option<(Point, Point)> {
    match kind {
        Kind::Width => strips.get(i).map(|strip| (along(strip[0], WIDTH_AT), along(strip[1], WIDTH_AT))),
        Kind::Gap => {
            let (one, other) = (strips.get(i)?, strips.get(i + 1)?);
            let pairs = one.iter().flat_map(|a| other.iter().map(move |b| (along(*a, GAP_AT), along(*b, GAP_AT))));
            pairs.min_by_key(|(a, b)| squared(*a, *b))
        }
        Kind::Length => strips.first().map(|strip| strip[0]),
    }
}

/// A gap between two ends that face each other along x or y, at the upper (or right) corner of the narrower one.
fn between_ends(layout: &Layout, nodes: &[usize]) -> Option<(Point, Point)> {
    let (one, other) = (layout.nodes.get(*nodes.first()?)?, layout.nodes.get(*nodes.get(1)?)?);
    let narrow = if one.width() <= other.width() { one } else { other };
    let corner = narrow.left.max(narrow.right);
    Some(if one.left.x == one.right.x {
        (Point { x: one.left.x, y: corner.y }, Point { x: other.left.x, y: corner.y })
    } else {
        (Point { x: corner.x, y: one.left.y }, Point { x: corner.x, y: other.left.y })
    })
}

fn sides(near: &Node, far: &Node) -> [Side; 2] {
    // A mouth may be named from either of its parts, so its left may be this strip's right: the sides of a strip do not cross.
    let straight = squared(near.left, far.left) + squared(near.right, far.right);
    let crossed = squared(near.left, far.right) + squared(near.right, far.left);
    if straight <= crossed { [(near.left, far.left), (near.right, far.right)] } else { [(near.left, far.right), (near.right, far.left)] }
}

fn along(side: Side, share: f64) -> Point {
    let between = |a: Nm, b: Nm| a + Nm(((b - a).0 as f64 * share).round() as i64);
    Point { x: between(side.0.x, side.1.x), y: between(side.0.y, side.1.y) }
}

fn squared(a: Point, b: Point) -> i128 {
    let (dx, dy) = (i128::from((a.x - b.x).0), i128::from((a.y - b.y).0));
    dx * dx + dy * dy
}
