//! Does copper come nearer to the routed edge than the board house allows, other than at a launch?

use crate::artwork::Role;
use crate::artwork::launch_half_width;
use crate::artwork::shape::between_edges;
use crate::artwork::shape::edges;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "copper-too-near-edge",
    about: "copper nearer to the routed edge than the shop allows, launches excepted",
    source: "limit of the board house, order key shop",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let (board, order) = (subject.board, &subject.dimensions.order);
    if !board.outline_drawn {
        return Vec::new();
    }
    let limit_m = order.shop.edge_clearance_m;
    let outline = edges(std::iter::once(&board.outline.outer));
    // Copper of a launch is where it must be: along the edge, this far to either side of the port.
    let at_launch = |p: Point| {
        board.ports.iter().any(|port| {
            let middle = port.edge.middle();
            let half = subject.layout.launch(port.number).map_or(Nm::ZERO, |shape| launch_half_width(order, shape, port.plane.width()));
            (p.x - middle.x).abs() <= half && (p.y - middle.y).abs() <= half
        })
    };
    // Along a plated stretch copper runs to the edge on purpose.
    let at_plating = |p: Point| {
        let reach = Nm::from_m(limit_m);
        board.plated_edges.iter().any(|[a, b]| {
            let within = |v: Nm, one: Nm, other: Nm| v >= one.min(other) - reach && v <= one.max(other) + reach;
            within(p.x, a.x, b.x) && within(p.y, a.y, b.y)
        })
    };
    let mut found = Vec::new();
    for (layer, shapes) in board.layers.iter().filter(|(layer, _)| matches!(layer, crate::artwork::Layer::Copper(_))) {
        for shape in shapes {
            let nearest = edges(std::iter::once(&shape.outer))
                .iter()
                .flat_map(|&edge| outline.iter().map(move |&side| between_edges(edge, side)))
                .filter(|closest| {
                    closest.distance_m < limit_m - super::measure::ROUNDING_M && !at_launch(closest.from) && !at_plating(closest.from)
                })
                .min_by(|a, b| a.distance_m.total_cmp(&b.distance_m));
            if let Some(closest) = nearest {
                let what = if shape.role == Role::Text { "text" } else { shape.net.as_str() };
                found.push(Problem::error(
                    RULE.code,
                    Place::Board(closest.from),
                    format!(
                        "{what} on {layer} is {:.3} mm from the edge, the shop asks for {:.3} mm",
                        closest.distance_m * 1e3,
                        limit_m * 1e3
                    ),
                    format!("board.margin of {:.2} mm or more", limit_m * 1e3),
                ));
            }
        }
    }
    found
}
