//! Can the board house print or etch the text?

use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::shape::bounds;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::measure;

pub(super) const RULE: Rule = Rule {
    code: "text-below-minimum",
    about: "strokes of text thinner, or text lower, than the shop prints or etches; text reaching over the board's edge",
    source: "limit of the board house, order key shop",
    run,
};

/// Rounded stroke ends are chords at most half a micrometre from the true curve, on either side.
const CHORDS_M: f64 = 1e-6;
/// A round piece measures at least this share of its diameter.
const ROUND: f64 = 0.985;

fn run(subject: &Subject) -> Vec<Problem> {
    let shop = &subject.dimensions.order.shop;
    let mut found = Vec::new();
    for (layer, shapes) in &subject.board.layers {
        let text: Vec<_> = shapes.iter().filter(|shape| shape.role == Role::Text).collect();
        let Some(first) = text.first() else { continue };
        let thinnest = text.iter().filter_map(|shape| measure::narrow(shape, ROUND * shop.text_stroke_m - CHORDS_M).copper);
        if let Some(thin) = thinnest.min_by(|a, b| a.distance_m.total_cmp(&b.distance_m)) {
            found.push(Problem::error(
                RULE.code,
                Place::Board(thin.middle()),
                format!(
                    "a stroke of {:.3} mm on {layer}, the shop's thinnest is {:.3} mm",
                    thin.distance_m * 1e3,
                    shop.text_stroke_m * 1e3
                ),
                "board.text = \"none\", or a shop that prints finer",
            ));
        }
        let height = |shape: &&&crate::artwork::Shape| {
            bounds(shape.outer.iter().copied()).map_or(0, |[low, high]| (high.y - low.y).0.max((high.x - low.x).0))
        };
        let tallest_m = text.iter().map(|shape| height(&shape)).max().unwrap_or(0) as f64 * 1e-9;
        if tallest_m < shop.text_height_m - CHORDS_M {
            found.push(Problem::error(
                RULE.code,
                Place::Board(first.outer.first().copied().unwrap_or_default()),
                format!("text {:.3} mm high on {layer}, the shop's least is {:.3} mm", tallest_m * 1e3, shop.text_height_m * 1e3),
                "board.text = \"none\", or a larger board",
            ));
        }
        if matches!(layer, Layer::Legend(_)) {
            let board = crate::artwork::shape::Region::from_shape(&subject.board.outline);
            if let Some(off) = text.iter().flat_map(|shape| &shape.outer).find(|p| !board.contains(**p)) {
                found.push(Problem::error(RULE.code, Place::Board(*off), "text reaches over the board's edge", "a larger board"));
            }
        }
    }
    found
}
