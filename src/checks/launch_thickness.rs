//! Does the connector of the launch clamp a board of this thickness?

use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::order::LaunchShape;

pub(super) const RULE: Rule = Rule {
    code: "launch-thickness-unsuited",
    about: "finished board thickness outside what the launch's connector clamps",
    source: "limit of the launch class, order key board.launch",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let order = &subject.dimensions.order;
    let LaunchShape::EdgeCoax { board_thickness_m: [least_m, greatest_m], .. } = order.board.launch.shape else { return Vec::new() };
    let board_m = order.stack_thickness_m();
    let at = |i: usize| subject.board.ports.get(i).map_or(Place::Whole, |port| Place::Board(port.edge.middle()));
    if board_m >= least_m && board_m <= greatest_m {
        return Vec::new();
    }
    vec![Problem::error(
        RULE.code,
        at(0),
        format!(
            "the board is {:.3} mm thick over copper, launch \"{}\" clamps {:.3} to {:.3} mm",
            board_m * 1e3,
            order.board.launch.class,
            least_m * 1e3,
            greatest_m * 1e3
        ),
        "another launch class, launch = \"pads\", or another laminate thickness",
    )]
}
