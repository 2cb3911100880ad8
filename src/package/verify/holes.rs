//! Does every hole lie where it must: plated ones in their pads, unplated ones clear of copper, none twice?

use crate::artwork::shape::Edge;
use crate::artwork::shape::between_edges;
use crate::artwork::shape::edges;
use crate::base::Nm;
use crate::base::Point;
use crate::package::verify::Findings;
use crate::package::verify::Pack;
use crate::package::verify::copper::Copper;

pub(super) fn check(pack: &Pack, found: &mut Findings) {
    let last = pack.last_layer();
    for (file, drilled) in &pack.drills {
        if drilled.span.is_some_and(|span| span != (1, u8::try_from(last).unwrap_or(0))) {
            found.add("drill-span-differs", file, format!("its holes go through layers {:?}, the board has 1 to {last}", drilled.span));
        }
        let plated = drilled.plated == Some(true);
        for &(at, diameter) in &drilled.holes {
            for copper in &pack.coppers {
                if plated {
                    in_copper(file, copper, at, copper.layer == 1 || copper.layer == last, found);
                } else {
                    clear_of_copper(file, copper, at, diameter, found);
                }
            }
        }
    }
    pairs(pack, found);
}

fn in_copper(file: &str, copper: &Copper, at: Point, is_outer: bool, found: &mut Findings) {
    if copper.island(at).is_none() {
        found.at("hole-off-copper", file, Some(at), format!("a plated hole lies in no copper of layer {}", copper.layer));
    }
    // A pad is a flash, also within a plane; inner layers have none.
    if is_outer && !copper.pads.iter().any(|pad| pad.function == "ViaPad" && pad.at == at) {
        found.at("hole-off-pad", file, Some(at), format!("no pad of layer {} is centred on the plated hole", copper.layer));
    }
}

fn clear_of_copper(file: &str, copper: &Copper, at: Point, diameter: Nm, found: &mut Findings) {
    if copper.island(at).is_some() || nearest_m(copper, at, diameter.m()).is_some_and(|distance| distance < 0.5 * diameter.m()) {
        found.at("hole-cuts-copper", file, Some(at), format!("an unplated hole of {:.3} mm cuts copper {}", diameter.mm(), copper.layer));
    }
}

/// Distance from a point to the nearest edge of copper, where it is within `reach_m`.
pub(super) fn nearest_m(copper: &Copper, at: Point, reach_m: f64) -> Option<f64> {
    let reach = Nm::from_m(reach_m);
    let near = copper.islands.iter().filter(|island| {
        let [low, high] = island.bounds;
        at.x >= low.x - reach && at.x <= high.x + reach && at.y >= low.y - reach && at.y <= high.y + reach
    });
    near.flat_map(|island| edges(std::iter::once(&island.piece.outer).chain(&island.piece.voids)))
        .map(|edge| between_edges(edge, Edge { a: at, b: at }).distance_m)
        .reduce(f64::min)
}

/// Doubled and overlapping holes, and walls between holes thinner than the shop's least.
fn pairs(pack: &Pack, found: &mut Findings) {
    let mut holes: Vec<(Point, Nm, &str)> =
        pack.drills.iter().flat_map(|(file, drilled)| drilled.holes.iter().map(|&(at, diameter)| (at, diameter, file.as_str()))).collect();
    holes.sort();
    let widest = holes.iter().map(|hole| hole.1).max().unwrap_or(Nm::ZERO);
    let wall_m = pack.limits.hole_to_hole_m.unwrap_or(0.0);
    let reach = widest + Nm::from_m(wall_m);
    for (i, &(at, diameter, file)) in holes.iter().enumerate() {
        for &(other, wide, _) in holes[i + 1..].iter().take_while(|(other, ..)| other.x - at.x <= reach) {
            let apart_m = (other.x - at.x).m().hypot((other.y - at.y).m());
            let between_m = apart_m - 0.5 * (diameter + wide).m();
            let place = Some(at);
            if apart_m < 1e-6 {
                found.at("hole-doubled", file, place, "two holes at one place");
            } else if between_m < 0.0 {
                found.at("holes-overlap", file, place, format!("two holes overlap by {:.3} mm", -between_m * 1e3));
            } else if between_m < wall_m - 2e-9 {
                let what = format!("{:.3} mm between two holes, the shop's least is {:.3} mm", between_m * 1e3, wall_m * 1e3);
                found.at("hole-to-hole-below-minimum", file, place, what);
            }
        }
    }
}
