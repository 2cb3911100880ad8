//! Do Gerber, drill and DXF files lie on one another, in one frame, within the board?

use std::collections::BTreeMap;

use crate::artwork::shape::Region;
use crate::artwork::shape::bounds;
use crate::base::Nm;
use crate::base::Point;
use crate::package::dxf;
use crate::package::verify::Findings;
use crate::package::verify::Pack;

/// Gerber and DXF hold the same vertices; what differs is the chord of a round pad beyond the copper.
const SAME: Nm = Nm(1_500);
/// Areas agree to this share.
const AREA: f64 = 1e-3;

pub(super) fn check(pack: &Pack, found: &mut Findings) {
    drawing(pack, found);
    let Some([low, high]) = pack.edge() else { return };
    if low != Point::default() {
        let file = pack.gerbers.iter().find(|(name, _)| name.ends_with("-profile.gbr")).map_or("profile", |(name, _)| name.as_str());
        found.at("origin-differs", file, Some(low), "the board's lower left corner is not the origin");
    }
    for copper in &pack.coppers {
        let Some([a, b]) = bounds(copper.islands.iter().flat_map(|island| island.bounds)) else { continue };
        if a.x < low.x || a.y < low.y || b.x > high.x || b.y > high.y {
            found.add("copper-outside-board", &copper.file, format!("copper reaches {}, the board {}", span([a, b]), span([low, high])));
        }
    }
    for (file, drilled) in &pack.drills {
        for &(at, diameter) in &drilled.holes {
            let radius = Nm(diameter.0 / 2);
            let inside = at.x - radius >= low.x && at.x + radius <= high.x && at.y - radius >= low.y && at.y + radius <= high.y;
            if !inside {
                let what =
                    format!("the hole of {:.3} mm at ({:.3}, {:.3}) mm is not within the board", diameter.mm(), at.x.mm(), at.y.mm());
                found.at("hole-outside-board", file, Some(at), what);
            }
        }
    }
}

/// The DXF: millimetres, and the same copper, edge and holes as the Gerber and drill files.
fn drawing(pack: &Pack, found: &mut Findings) {
    let Some((file, drawn)) = &pack.drawing else { return };
    if !drawn.in_millimetres {
        found.add("dxf-units", file, "the unit is not millimetres");
    }
    let last = pack.last_layer();
    for copper in &pack.coppers {
        let (Ok(number), Ok(last)) = (u8::try_from(copper.layer), u8::try_from(last)) else { continue };
        let layer = dxf::copper_layer(number, last);
        same(file, &layer, &copper_of(&drawn.rings, &layer), &copper.region(), found);
    }
    if let Some((_, image)) = pack.gerbers.iter().find(|(name, _)| name.ends_with("-profile.gbr")) {
        let ours = Region::union_of(&image.chains);
        let theirs = Region::union_of(drawn.rings.get(dxf::OUTLINE).map_or(&[][..], Vec::as_slice));
        same(file, dxf::OUTLINE, &theirs, &ours, found);
    }
    let mut drawn_holes = drawn.circles.clone();
    let plated = |file: &str| file.ends_with("-plated.drl");
    let mut drilled: Vec<(bool, Point, Nm)> = pack
        .drills
        .iter()
        .flat_map(|(name, drilled)| drilled.holes.iter().map(|&(at, diameter)| (drilled.plated.unwrap_or(plated(name)), at, diameter)))
        .collect();
    drawn_holes.sort();
    drilled.sort();
    if drawn_holes != drilled {
        let what = format!("{} holes, or others than the {} of the drill files", drawn_holes.len(), drilled.len());
        found.add("drawing-differs", file, what);
    }
}

/// The copper of a DXF layer: larger shapes first, each with its own voids, so that islands within voids survive.
fn copper_of(rings: &BTreeMap<String, Vec<Vec<Point>>>, layer: &str) -> Region {
    let empty = Vec::new();
    let voids = rings.get(&format!("{layer}_VOID")).unwrap_or(&empty);
    let mut outers: Vec<Region> =
        rings.get(layer).unwrap_or(&empty).iter().map(|ring| Region::union_of(std::slice::from_ref(ring))).collect();
    outers.sort_by(|a, b| b.area_m2().total_cmp(&a.area_m2()));
    if voids.is_empty() {
        return Region::union_of(rings.get(layer).unwrap_or(&empty));
    }
    let mut all = Region::default();
    for outer in outers {
        let own: Vec<Vec<Point>> = voids.iter().filter(|void| void.iter().all(|&at| outer.contains(at))).cloned().collect();
        let cut = if own.is_empty() { outer } else { outer.difference(&Region::union_of(&own)) };
        all = all.union(&cut);
    }
    all
}

fn same(file: &str, layer: &str, drawn: &Region, gerber: &Region, found: &mut Findings) {
    let (theirs, ours) = (drawn.area_m2(), gerber.area_m2());
    if (theirs - ours).abs() > AREA * ours.max(1e-12) {
        found.add("area-differs", file, format!("layer {layer} has {:.6} mm2, the Gerber file {:.6} mm2", theirs * 1e6, ours * 1e6));
    }
    let apart = drawn.difference(gerber).union(&gerber.difference(drawn));
    // What is thinner than twice the tolerance vanishes when it is eaten away from all sides.
    let thick = apart.offset(-SAME);
    let exact = bounds(drawn.rings().flatten().copied()) == gerber.bounds() || thick.pieces.is_empty();
    if let Some(at) = thick.pieces.iter().find_map(|piece| piece.outer.first()) {
        found.at("drawing-differs", file, Some(*at), format!("layer {layer} is not the copper or edge of the Gerber file there"));
    } else if !exact {
        found.add("drawing-differs", file, format!("layer {layer} does not reach as far as the Gerber file"));
    }
}

fn span([low, high]: [Point; 2]) -> String {
    format!("from ({:.6}, {:.6}) to ({:.6}, {:.6}) mm", low.x.mm(), low.y.mm(), high.x.mm(), high.y.mm())
}
