//! Is a wall of the housing, or ground copper, so near that it takes part in the filter?

use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::shape::Region;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "wall-too-near",
    about: "housing wall or top ground copper nearer to a resonator than one laminate thickness (error) or three (warning)",
    source: "common practice",
    run,
};

/// Nearer than this the wall detunes a resonator as much as a neighbour would.
const ERROR_HEIGHTS: f64 = 1.0;
/// Beyond this the coupling between strip and wall is below what the line models resolve.
const WARN_HEIGHTS: f64 = 3.0;

fn run(subject: &Subject) -> Vec<Problem> {
    let (board, order) = (subject.board, &subject.dimensions.order);
    let height_m = order.laminate.thickness_m;
    let top = || board.layers.get(&Layer::Copper(1)).into_iter().flatten();
    let mut walls: Vec<Region> = top().filter(|shape| shape.role == Role::Ground).map(Region::from_shape).collect();
    if let Some(inside_m) = order.housing.and_then(|housing| housing.inside_m) {
        // The housing stands in the board's middle; where the board ends before it, there is no copper to measure to.
        let corner = board.outline.outer.iter().max().copied().unwrap_or_default();
        let middle = Point::new(corner.x.0 / 2, corner.y.0 / 2);
        let half = inside_m.map(|v| Nm(Nm::from_m(v).0 / 2));
        let thick = Nm(1_000_000);
        let box_of = |by: Nm| Region::rectangle(middle.shifted(-half[0] - by, -half[1] - by), middle.shifted(half[0] + by, half[1] + by));
        walls.push(box_of(thick).difference(&box_of(Nm::ZERO)));
    }
    let at_port = |net: &str| board.ports.iter().any(|port| port.net == net);
    let mut found = Vec::new();
    // The feeds pass through the wall on purpose.
    for shape in top().filter(|shape| shape.role == Role::Circuit && !at_port(&shape.net) && shape.net != "GND") {
        let strip = Region::from_shape(shape);
        let nearest = walls.iter().filter_map(|wall| strip.closest_to(wall)).min_by(|a, b| a.distance_m.total_cmp(&b.distance_m));
        let Some(closest) = nearest else { continue };
        let heights = closest.distance_m / height_m;
        let message = |limit: f64| {
            format!(
                "{} is {:.3} mm from the nearest wall or ground copper, {heights:.1} h; {limit:.0} h are due",
                shape.net,
                closest.distance_m * 1e3
            )
        };
        let help = "a larger housing.inside, or a longer feed";
        if heights < ERROR_HEIGHTS {
            found.push(Problem::error(RULE.code, Place::Board(closest.middle()), message(ERROR_HEIGHTS), help));
        } else if heights < WARN_HEIGHTS {
            found.push(Problem::warning(RULE.code, Place::Board(closest.middle()), message(WARN_HEIGHTS), help));
        }
    }
    found
}
