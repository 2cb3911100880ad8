//! Does a mounting hole come too near to copper?

use crate::artwork::shape::Region;
use crate::artwork::shape::disc;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::measure;

pub(super) const RULE: Rule = Rule {
    code: "copper-too-near-hole",
    about: "copper nearer to the wall of an unplated hole than the shop's clearance to a routed edge",
    source: "limit of the board house, order key shop: an unplated hole is an edge",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let limit_m = subject.dimensions.order.shop.edge_clearance_m;
    let mut found = Vec::new();
    for hole in subject.board.holes.iter().filter(|hole| !hole.is_plated()) {
        let wall = Region::union_of(&[disc(hole.at, Nm(hole.diameter.0 / 2))]);
        for (layer, shape) in measure::copper(subject.board) {
            // The disc lies up to a micrometre outside the true circle.
            let closest = Region::from_shape(shape).closest_to(&wall).filter(|closest| closest.distance_m < limit_m - 1e-6);
            if let Some(closest) = closest {
                found.push(Problem::error(
                    RULE.code,
                    Place::Board(hole.at),
                    format!(
                        "{} on {layer} is {:.3} mm from the wall of the {:.3} mm hole, {:.3} mm are due",
                        shape.net,
                        closest.distance_m * 1e3,
                        hole.diameter.mm(),
                        limit_m * 1e3
                    ),
                    "move the mounting hole",
                ));
            }
        }
    }
    found
}
