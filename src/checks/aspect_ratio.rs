//! Is a plated hole too deep for its width?

use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "aspect-ratio-above-limit",
    about: "board thickness over the diameter of a plated hole above what the shop plates",
    source: "limit of the board house, order key shop",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let order = &subject.dimensions.order;
    let board_m = order.stack_thickness_m();
    let limit = order.shop.aspect_ratio;
    let deep = subject.board.holes.iter().filter(|hole| hole.is_plated() && board_m > limit * hole.diameter.m() * (1.0 + 1e-9));
    deep.map(|hole| {
        Problem::error(
            RULE.code,
            Place::Board(hole.at),
            format!(
                "a plated hole of {:.3} mm through {:.3} mm has an aspect ratio of {:.1}, the shop plates up to {limit:.1}",
                hole.diameter.mm(),
                board_m * 1e3,
                board_m / hole.diameter.m()
            ),
            format!("a hole of at least {:.2} mm in the launch class", board_m / limit * 1e3),
        )
    })
    .collect()
}
