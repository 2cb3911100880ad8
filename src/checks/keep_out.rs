//! Is anything drawn where the order wants the top side left free?

use crate::artwork::Face;
use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::shape::Region;
use crate::artwork::shape::disc;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "keep-out-entered",
    about: "copper, text or a hole within a keep-out of the order",
    source: "the order's own keep-out",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let board = subject.board;
    let mut found = Vec::new();
    for (i, keep_out) in subject.dimensions.order.board.keep_outs.iter().enumerate() {
        let [from, to] = [keep_out.from_m, keep_out.to_m].map(|p| Point::from_m(p[0], p[1]));
        let free = Region::rectangle(from, to);
        let mut enter = |what: String, area: &Region| {
            if let Some([low, high]) = area.intersection(&free).bounds() {
                found.push(Problem::error(
                    RULE.code,
                    Place::Board(low),
                    format!(
                        "{what} reaches into keep-out {i} ({:.3}, {:.3}) to ({:.3}, {:.3}) mm, by {:.3} mm x {:.3} mm",
                        from.x.mm(),
                        from.y.mm(),
                        to.x.mm(),
                        to.y.mm(),
                        (high.x - low.x).mm(),
                        (high.y - low.y).mm()
                    ),
                    "move the keep-out, or the circuit with board.port-offset or board.size",
                ));
            }
        };
        for layer in [Layer::Copper(1), Layer::Legend(Face::Top)] {
            for shape in board.layers.get(&layer).into_iter().flatten() {
                let what = if shape.role == Role::Text { "text".to_string() } else { shape.net.clone() };
                enter(what, &Region::from_shape(shape));
            }
        }
        for hole in &board.holes {
            let radius = Nm(hole.diameter.0.max(hole.pad.0) / 2);
            enter(format!("a hole of {:.3} mm", hole.diameter.mm()), &Region::union_of(&[disc(hole.at, radius)]));
        }
    }
    found
}
