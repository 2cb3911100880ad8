//! The copper and the holes of each part of a layout, in the layout's own frame.

use std::f64::consts::FRAC_PI_2;

use crate::artwork::shape::Ring;
use crate::artwork::shape::between_mouths;
use crate::base::Nm;
use crate::base::Point;
use crate::layout::Corner;
use crate::layout::Node;
use crate::layout::Part;

/// Greatest distance between an arc and its chords.
const CHORD_ERROR_M: f64 = 0.5e-6;

/// A plated hole of a part, before the layout is turned and seated.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct PartHole {
    pub at: Point,
    pub diameter: Nm,
    pub pad: Nm,
}

/// The rings of a part's copper; parts without length have none of their own, a launch is drawn where the board's edge is known.
/// `None` when the part has not the nodes it must have.
pub(super) fn rings(part: &Part, nodes: &[Node]) -> Option<Vec<Ring>> {
    match part {
        Part::Lines { widths, .. } => {
            let n = widths.len();
            let (near, far) = (nodes.get(..n)?, nodes.get(n..2 * n)?);
            Some(near.iter().zip(far).map(|(a, b)| between_mouths([a.left, a.right], [b.left, b.right])).collect())
        }
        Part::Bend(corner) => Some(vec![bend(*corner, nodes.first()?, nodes.get(1)?)]),
        Part::Via { pad, count, pitch, .. } => Some(vec![via(nodes.first()?, *pad, *count, *pitch)]),
        Part::OpenEnd | Part::Step | Part::Gap { .. } | Part::Tee | Part::Cross | Part::Launch { .. } => Some(Vec::new()),
    }
}

/// The plated holes of a part.
pub(super) fn holes(part: &Part, nodes: &[Node]) -> Vec<PartHole> {
    let (Part::Via { diameter, pad, count, pitch }, Some(node)) = (part, nodes.first()) else { return Vec::new() };
    let (middle, across) = (node.middle(), upright(node));
    (0..*count)
        .map(|i| {
            let off = Nm((2 * i as i64 + 1 - *count as i64) * pitch.0 / 2);
            let at = if across { middle.shifted(Nm::ZERO, off) } else { middle.shifted(off, Nm::ZERO) };
            PartHole { at, diameter: *diameter, pad: *pad }
        })
        .collect()
}

/// Whether the mouth stands along y, so that its strip runs along x.
fn upright(node: &Node) -> bool {
    (node.left.x - node.right.x).abs() <= (node.left.y - node.right.y).abs()
}

fn via(node: &Node, pad: Nm, count: usize, pitch: Nm) -> Ring {
    let middle = node.middle();
    let across = node.width().max(Nm((count.max(1) as i64 - 1) * pitch.0) + pad);
    let (half_across, half_along) = (Nm(across.0.div_euclid(2)), Nm(pad.0.div_euclid(2)));
    let (x, y) = if upright(node) { (half_along, half_across) } else { (half_across, half_along) };
    crate::artwork::shape::rectangle(middle.shifted(-x, -y), middle.shifted(x, y))
}

fn bend(corner: Corner, a: &Node, b: &Node) -> Ring {
    // The arms run along x and y, so the corners of the bend take one coordinate from each mouth.
    let meet = |p: Point, q: Point| if upright(a) { Point { x: q.x, y: p.y } } else { Point { x: p.x, y: q.y } };
    let centre = if upright(a) { Point { x: a.left.x, y: b.left.y } } else { Point { x: b.left.x, y: a.left.y } };
    let from_centre = |p: &Point| (p.x - centre.x).0.abs().max((p.y - centre.y).0.abs());
    let sorted =
        |node: &Node| if from_centre(&node.left) <= from_centre(&node.right) { [node.left, node.right] } else { [node.right, node.left] };
    let ([a_inner, a_outer], [b_inner, b_outer]) = (sorted(a), sorted(b));
    let (inside, outside) = (meet(a_inner, b_inner), meet(a_outer, b_outer));
    match corner {
        Corner::Square => vec![a_inner, a_outer, outside, b_outer, b_inner, inside],
        Corner::Mitred { cut } => {
            let towards = |p: Point| Point {
                x: outside.x + Nm((p.x - outside.x).0.signum() * cut.0),
                y: outside.y + Nm((p.y - outside.y).0.signum() * cut.0),
            };
            vec![a_inner, a_outer, towards(a_outer), towards(b_outer), b_outer, b_inner, inside]
        }
        Corner::Rounded { .. } => {
            let mut ring = arc(centre, a_outer, b_outer);
            ring.extend(arc(centre, b_inner, a_inner));
            ring
        }
    }
}

/// A quarter circle about a centre from one point to another, both on axes through the centre, as chords.
fn arc(centre: Point, from: Point, to: Point) -> Ring {
    let vector = |p: Point| ((p.x - centre.x).m(), (p.y - centre.y).m());
    let ((fx, fy), (tx, ty)) = (vector(from), vector(to));
    let radius_m = fx.hypot(fy);
    if radius_m <= 0.0 {
        return vec![from];
    }
    let widest = 2.0 * (1.0 - (CHORD_ERROR_M / radius_m).min(1.0)).acos();
    let chords = (FRAC_PI_2 / widest.max(1e-3)).ceil().max(1.0) as usize;
    (0..=chords)
        .map(|i| match i {
            0 => from,
            i if i == chords => to,
            i => {
                let angle = FRAC_PI_2 * i as f64 / chords as f64;
                let (s, c) = (libm::sin(angle), libm::cos(angle));
                Point::from_m(centre.x.m() + c * fx + s * tx, centre.y.m() + c * fy + s * ty)
            }
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::artwork::shape::Region;
    use crate::layout::Draft;
    use crate::layout::Turn;
    use crate::layout::Way;

    /// An L of two 5 mm arms, 1 mm wide, with a corner; its area is known by hand.
    fn area_mm2(corner: Corner, turn: Turn) -> f64 {
        let mut draft = Draft::default();
        let start = draft.mouth(Point::default(), Nm(1_000_000), Way::Right);
        let arriving = draft.strip(start, Nm(5_000_000), Way::Right, vec![]);
        let (leaving, way) = draft.bend(arriving, Way::Right, turn, corner);
        let end = draft.strip(leaving, Nm(5_000_000), way, vec![]);
        let layout = draft.finish([start, end], 1);
        let all: Vec<Ring> = layout
            .parts
            .iter()
            .flat_map(|placed| rings(&placed.part, &placed.nodes.iter().map(|i| layout.nodes[*i]).collect::<Vec<_>>()).unwrap())
            .collect();
        let region = Region::union_of(&all);
        assert_eq!(region.pieces.len(), 1);
        region.area_m2() * 1e6
    }

    #[test]
    fn corners_have_the_area_of_plane_geometry() {
        for turn in [Turn::Left, Turn::Right] {
            assert!((area_mm2(Corner::Square, turn) - 11.0).abs() < 1e-9);
            // Cut within the corner's square: minus a triangle. Beyond it: each arm grows by the shoulder, both outside the inner corner.
            assert!((area_mm2(Corner::Mitred { cut: Nm(800_000) }, turn) - (11.0 - 0.32)).abs() < 1e-9);
            assert!((area_mm2(Corner::Mitred { cut: Nm(1_200_000) }, turn) - (11.0 + 0.4 - 0.72)).abs() < 1e-9);
            // A quarter ring of mean radius 2 mm: pi; chords of 0.5 um stay within 0.05 % of it.
            let ring = area_mm2(Corner::Rounded { radius: Nm(2_000_000) }, turn) - 10.0;
            assert!((ring / std::f64::consts::PI - 1.0).abs() < 5e-4, "{ring}");
        }
    }
}
