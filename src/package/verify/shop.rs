//! Can the board house of the order make the copper and the holes as they were read back?

use crate::artwork::shape::Region;
use crate::base::Nm;
use crate::checks::measure;
use crate::package::verify::Findings;
use crate::package::verify::Pack;
use crate::package::verify::copper::Copper;
use crate::package::verify::copper::Island;
use crate::package::verify::holes::nearest_m;

pub(super) fn check(pack: &Pack, found: &mut Findings) {
    for copper in &pack.coppers {
        if let Some(line_m) = pack.limits.line_m {
            lines(copper, line_m, found);
        }
        if let Some(gap_m) = pack.limits.gap_m {
            gaps(copper, gap_m, found);
        }
    }
    for (file, drilled) in &pack.drills {
        for &(at, diameter) in &drilled.holes {
            if let Some(least_m) = pack.limits.hole_m.filter(|least_m| diameter.m() < least_m - 1e-9) {
                let what = format!("a hole of {:.3} mm, the shop's least is {:.3} mm", diameter.mm(), least_m * 1e3);
                found.at("hole-below-minimum", file, Some(at), what);
            }
            let (Some(ring_m), Some(true)) = (pack.limits.ring_m, drilled.plated) else { continue };
            for copper in &pack.coppers {
                let reach_m = 0.5 * diameter.m() + ring_m;
                let Some(edge_m) = nearest_m(copper, at, reach_m).filter(|_| copper.island(at).is_some()) else { continue };
                // Round pads are polygons here, and may measure so much less.
                if edge_m < reach_m - 2e-6 {
                    let what = format!(
                        "{:.3} mm of copper {} around a plated hole, the shop's least is {:.3} mm",
                        (edge_m - 0.5 * diameter.m()) * 1e3,
                        copper.layer,
                        ring_m * 1e3
                    );
                    found.at("ring-below-minimum", file, Some(at), what);
                }
            }
        }
    }
}

fn lines(copper: &Copper, limit_m: f64, found: &mut Findings) {
    for island in copper.islands.iter().filter(|island| !island.is_text) {
        if let Some(place) = measure::narrow(&island.shape(), limit_m - measure::ROUNDING_M).copper {
            let what =
                format!("{} is {:.4} mm wide, the shop's narrowest line is {:.4} mm", island.name(), place.distance_m * 1e3, limit_m * 1e3);
            found.at("line-below-minimum", &copper.file, Some(place.middle()), what);
        }
    }
}

fn gaps(copper: &Copper, limit_m: f64, found: &mut Findings) {
    let below_m = limit_m - measure::ROUNDING_M;
    let islands = &copper.islands;
    for (i, one) in islands.iter().enumerate() {
        for other in islands[i + 1..].iter().filter(|other| !(one.is_text && other.is_text) && near(one, other, limit_m)) {
            let region = |island: &Island| Region { pieces: vec![island.piece.clone()] };
            if let Some(closest) = region(one).closest_to(&region(other)).filter(|closest| closest.distance_m < below_m) {
                let (distance, names) = (closest.distance_m * 1e3, [one.name(), other.name()]);
                let what =
                    format!("{distance:.4} mm between {} and {}, the shop's narrowest gap is {:.4} mm", names[0], names[1], limit_m * 1e3);
                found.at("gap-below-minimum", &copper.file, Some(closest.middle()), what);
            }
        }
        if !one.is_text
            && let Some(notch) = measure::narrow(&one.shape(), below_m).space
        {
            let what =
                format!("a notch in {} is {:.4} mm wide, the narrowest gap is {:.4} mm", one.name(), notch.distance_m * 1e3, limit_m * 1e3);
            found.at("gap-below-minimum", &copper.file, Some(notch.middle()), what);
        }
    }
}

fn near(one: &Island, other: &Island, reach_m: f64) -> bool {
    let reach = Nm::from_m(reach_m);
    let ([a, b], [c, d]) = (one.bounds, other.bounds);
    c.x <= b.x + reach && a.x <= d.x + reach && c.y <= b.y + reach && a.y <= d.y + reach
}
