//! Is any gap narrower than the board house can etch?

use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::shape::Region;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::measure;

pub(super) const RULE: Rule = Rule {
    code: "gap-below-minimum",
    about: "space between two pieces of copper, or a notch in one, narrower than the shop's narrowest gap, finished and compensated",
    source: "limit of the board house, order key shop",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let limit_m = subject.dimensions.order.shop.gap_m;
    let below_m = limit_m - measure::ROUNDING_M;
    let mut found = Vec::new();
    let mut report = |place, what: String, distance_m: f64, state: &str| {
        found.push(Problem::error(
            RULE.code,
            Place::Board(place),
            format!("{what} is {:.3} mm{state}, the shop's narrowest gap is {:.3} mm", distance_m * 1e3, limit_m * 1e3),
            "a narrower band or a finer shop class widens the gaps",
        ));
    };
    for (state, board) in measure::artworks(subject) {
        for (_, shapes) in board.layers.iter().filter(|(layer, _)| matches!(layer, Layer::Copper(_))) {
            let regions: Vec<Region> = shapes.iter().map(Region::from_shape).collect();
            let boxes: Vec<_> = regions.iter().map(Region::bounds).collect();
            for (i, one) in shapes.iter().enumerate() {
                for (j, other) in shapes.iter().enumerate().skip(i + 1) {
                    // Strokes of letters may come as near to each other as they like: all are one text.
                    if (one.role == Role::Text && other.role == Role::Text) || !near(boxes[i], boxes[j], limit_m) {
                        continue;
                    }
                    if let Some(closest) = regions[i].closest_to(&regions[j]).filter(|closest| closest.distance_m < below_m) {
                        let name =
                            |shape: &crate::artwork::Shape| if shape.role == Role::Text { "text".to_string() } else { shape.net.clone() };
                        report(closest.middle(), format!("the gap between {} and {}", name(one), name(other)), closest.distance_m, state);
                    }
                }
                if one.role != Role::Text
                    && let Some(notch) = measure::narrow(one, below_m).space
                {
                    report(notch.middle(), format!("a notch in {}", one.net), notch.distance_m, state);
                }
            }
        }
    }
    found
}

type Box2 = Option<[crate::base::Point; 2]>;

fn near(one: Box2, other: Box2, reach_m: f64) -> bool {
    let reach = crate::base::Nm::from_m(reach_m);
    match (one, other) {
        (Some([a, b]), Some([c, d])) => c.x <= b.x + reach && a.x <= d.x + reach && c.y <= b.y + reach && a.y <= d.y + reach,
        _ => false,
    }
}
