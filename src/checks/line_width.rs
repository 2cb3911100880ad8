//! Is any copper narrower than the board house can make?

use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::measure;

pub(super) const RULE: Rule = Rule {
    code: "line-below-minimum",
    about: "copper narrower than the shop's narrowest line, measured on the polygons, finished and compensated",
    source: "limit of the board house, order key shop",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let limit_m = subject.dimensions.order.shop.line_m;
    let mut found = Vec::new();
    for (state, board) in measure::artworks(subject) {
        for (_, shape) in measure::copper(&board) {
            if let Some(place) = measure::narrow(shape, limit_m - measure::ROUNDING_M).copper {
                found.push(Problem::error(
                    RULE.code,
                    Place::Board(place.middle()),
                    format!(
                        "{} is {:.3} mm wide{state}, the shop's narrowest line is {:.3} mm",
                        shape.net,
                        place.distance_m * 1e3,
                        limit_m * 1e3
                    ),
                    "a thicker laminate, a lower permittivity or a finer shop class widens the lines",
                ));
            }
        }
    }
    found
}
