//! Does the board fit the board house's panel?

use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "board-above-panel",
    about: "the board is larger than the shop's largest panel, either way round",
    source: "limit of the board house, order key shop",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let [length_m, width_m] = subject.dimensions.order.shop.panel_m;
    let corner = subject.board.outline.outer.iter().max().copied().unwrap_or_default();
    let fits = |a: f64, b: f64| corner.x.m() <= a && corner.y.m() <= b;
    if fits(length_m, width_m) || fits(width_m, length_m) {
        return Vec::new();
    }
    vec![Problem::error(
        RULE.code,
        Place::Whole,
        format!(
            "the board is {:.1} mm x {:.1} mm, the shop's panel {:.1} mm x {:.1} mm: too large by {:.1} mm",
            corner.x.mm(),
            corner.y.mm(),
            length_m * 1e3,
            width_m * 1e3,
            // Turned whichever way round is nearer to fitting.
            1e3 * over([length_m, width_m], corner).min(over([width_m, length_m], corner))
        ),
        "a higher permittivity or a lower degree shortens the filter",
    )]
}

/// By how much a board from the origin to a corner goes beyond a panel, in the worse direction.
fn over([along_m, across_m]: [f64; 2], corner: Point) -> f64 {
    (corner.x.m() - along_m).max(corner.y.m() - across_m)
}
