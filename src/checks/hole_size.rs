//! Is a hole smaller than the board house drills?

use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "hole-below-minimum",
    about: "a finished hole smaller than the shop's least",
    source: "limit of the board house, order key shop",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let limit_m = subject.dimensions.order.shop.hole_m;
    let small = subject.board.holes.iter().filter(|hole| hole.diameter.m() < limit_m - 1e-12);
    small
        .map(|hole| {
            Problem::error(
                RULE.code,
                Place::Board(hole.at),
                format!("a finished hole of {:.3} mm, the shop's least is {:.3} mm", hole.diameter.mm(), limit_m * 1e3),
                format!("via-hole = \"{:.2} mm\" in the launch class, or a finer shop", limit_m * 1e3),
            )
        })
        .collect()
}
