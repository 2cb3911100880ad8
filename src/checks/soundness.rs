//! Is every polygon one that has a defined meaning at the board house?

use crate::artwork::shape::doubled_area;
use crate::artwork::shape::ring_faults;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "polygon-unsound",
    about: "a polygon with a repeated or idle corner, an edge of no length, edges that touch or cross, or a ring the wrong way round",
    source: "The Gerber Layer Format Specification 2024.05, section 4.10.3",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let mut found = Vec::new();
    for (layer, shapes) in &subject.board.layers {
        for shape in shapes {
            for (i, ring) in std::iter::once(&shape.outer).chain(&shape.voids).enumerate() {
                let mut faults = ring_faults(ring);
                if (doubled_area(ring) > 0) != (i == 0) {
                    faults.push(("a ring the wrong way round", ring.first().copied().unwrap_or_default()));
                }
                for (fault, at) in faults {
                    found.push(Problem::error(
                        RULE.code,
                        Place::Board(at),
                        format!("a polygon of {:?} on {layer} has {fault}", shape.role),
                        "this is a fault of the program; please report the order",
                    ));
                }
            }
        }
    }
    found
}
