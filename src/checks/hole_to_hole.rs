//! Does enough laminate stay between holes?

use crate::artwork::Hole;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "hole-to-hole-below-minimum",
    about: "wall between two holes thinner than the shop's least",
    source: "limit of the board house, order key shop",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let limit_m = subject.dimensions.order.shop.hole_to_hole_m;
    let mut holes: Vec<&Hole> = subject.board.holes.iter().collect();
    holes.sort_by_key(|hole| (hole.at, hole.diameter));
    let widest_m = holes.iter().map(|hole| hole.diameter.m()).fold(0.0, f64::max);
    let mut found = Vec::new();
    for (i, one) in holes.iter().enumerate() {
        let near = holes[i + 1..].iter().take_while(|other| (other.at.x - one.at.x).m() < widest_m + limit_m);
        for other in near {
            let wall_m = (other.at.x - one.at.x).m().hypot((other.at.y - one.at.y).m()) - 0.5 * (one.diameter + other.diameter).m();
            // Half a nanometre at each end from rounding the places.
            if wall_m < limit_m - super::measure::ROUNDING_M {
                found.push(Problem::error(
                    RULE.code,
                    Place::Board(one.at),
                    format!("{:.3} mm between the walls of two holes, the shop's least is {:.3} mm", wall_m * 1e3, limit_m * 1e3),
                    "a wider via-pitch in the launch class, or move the mounting hole",
                ));
            }
        }
    }
    found
}
