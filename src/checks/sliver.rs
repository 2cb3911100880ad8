//! Is there a piece of copper, or a hole in it, too thin to survive etching?

use crate::artwork::shape::Ring;
use crate::artwork::shape::doubled_area;
use crate::artwork::shape::edges;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::measure;

pub(super) const RULE: Rule = Rule {
    code: "sliver",
    about: "a piece of copper or a void whose mean width is under half the shop's narrowest line or gap",
    source: "common practice",
    run,
};

/// Mean width that counts as a sliver, as a share of the shop's limit.
const SHARE: f64 = 0.5;

fn run(subject: &Subject) -> Vec<Problem> {
    let shop = &subject.dimensions.order.shop;
    let mut found = Vec::new();
    for (_, shape) in measure::copper(subject.board) {
        let rings =
            std::iter::once((&shape.outer, shop.line_m, "a piece of")).chain(shape.voids.iter().map(|v| (v, shop.gap_m, "a void in")));
        for (ring, limit_m, what) in rings {
            let width_m = mean_width_m(ring);
            if width_m < SHARE * limit_m {
                found.push(Problem::error(
                    RULE.code,
                    Place::Board(ring.first().copied().unwrap_or_default()),
                    format!("{what} {} is {:.4} mm wide on average, less than {:.4} mm", shape.net, width_m * 1e3, SHARE * limit_m * 1e3),
                    "move the parts that leave it between them",
                ));
            }
        }
    }
    found
}

/// Twice the area over the perimeter: the width of a long thin shape.
fn mean_width_m(ring: &Ring) -> f64 {
    let perimeter_m: f64 = edges(std::iter::once(ring)).iter().map(|e| (e.b.x - e.a.x).m().hypot((e.b.y - e.a.y).m())).sum();
    if perimeter_m > 0.0 { doubled_area(ring).abs() as f64 * 1e-18 / perimeter_m } else { 0.0 }
}
