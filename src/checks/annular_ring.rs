//! Does enough copper stay around every plated hole?

use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "annular-ring-below-minimum",
    about: "copper ring around a plated hole narrower than the shop's least",
    source: "limit of the board house, order key shop",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let limit_m = subject.dimensions.order.shop.annular_ring_m;
    let mut found = Vec::new();
    for hole in subject.board.holes.iter().filter(|hole| hole.is_plated()) {
        let ring_m = 0.5 * (hole.pad.m() - hole.diameter.m());
        if ring_m < limit_m - 1e-12 {
            found.push(Problem::error(
                RULE.code,
                Place::Board(hole.at),
                format!(
                    "the ring around a {:.3} mm hole in a {:.3} mm pad is {:.3} mm, the shop's least is {:.3} mm",
                    hole.diameter.mm(),
                    hole.pad.mm(),
                    ring_m * 1e3,
                    limit_m * 1e3
                ),
                format!("a pad of at least {:.3} mm in the launch class", hole.diameter.mm() + 2e3 * limit_m),
            ));
        }
    }
    found
}
