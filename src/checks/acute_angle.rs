//! Does copper come to a point, or enclose a corner in which etchant stays?

use crate::artwork::shape::turn;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::measure;

pub(super) const RULE: Rule =
    Rule { code: "acute-angle", about: "a corner of copper, or of a space in copper, under 60 degrees", source: "common practice", run };

/// Corners sharper than this etch back or trap etchant.
const LIMIT_DEG: f64 = 60.0;

fn run(subject: &Subject) -> Vec<Problem> {
    let mut found = Vec::new();
    for (_, shape) in measure::copper(subject.board) {
        for ring in std::iter::once(&shape.outer).chain(&shape.voids) {
            let n = ring.len();
            for i in 0..n {
                let (a, b, c) = (ring[(i + n - 1) % n], ring[i], ring[(i + 1) % n]);
                let angle_deg = between_deg(a, b, c);
                if angle_deg < LIMIT_DEG {
                    let what = if turn(a, b, c) > 0 { "a corner of" } else { "a corner of the space beside" };
                    found.push(Problem::warning(
                        RULE.code,
                        Place::Board(b),
                        format!("{what} {} has {angle_deg:.1} degrees, less than {LIMIT_DEG:.0}", shape.net),
                        "a blunt corner keeps its drawn shape through etching",
                    ));
                }
            }
        }
    }
    found
}

/// Angle at `b` between the ways to `a` and `c`, 0 to 180 degrees.
fn between_deg(a: Point, b: Point, c: Point) -> f64 {
    let (ux, uy) = ((a.x - b.x).m(), (a.y - b.y).m());
    let (vx, vy) = ((c.x - b.x).m(), (c.y - b.y).m());
    (ux * vy - uy * vx).abs().atan2(ux * vx + uy * vy).to_degrees()
}
