//! Where the solder mask is open: over the filter and around it, over lands, the housing's wall and mounting holes.

use crate::artwork::Hole;
use crate::artwork::Land;
use crate::artwork::shape::Region;
use crate::artwork::shape::Ring;
use crate::artwork::shape::disc;
use crate::artwork::shape::grown_hull;
use crate::artwork::shape::rectangle;
use crate::base::Nm;
use crate::base::Point;
use crate::order::Order;

/// The opening reaches at least this far beyond the filter, and at least so many laminate thicknesses.
const REACH_M: f64 = 2e-3;
const REACH_HEIGHTS: f64 = 3.0;

/// Openings on the top. A dam of mask stays between each land and the filter's opening, so that solder does not run on.
pub(super) fn top(order: &Order, board: &Region, circuit: &[Point], lands: &[Land], wall: &Region, holes: &[Hole]) -> Region {
    let shop = &order.shop;
    let reach = Nm::from_m((REACH_HEIGHTS * order.laminate.thickness_m).max(REACH_M));
    let clearance = Nm::from_m(shop.mask_clearance_m);
    let filter = Region::union_of(&[grown_hull(circuit, reach)]).intersection(board);
    let over_lands = land_openings(lands, clearance);
    let others = over_lands.union(&wall.offset(clearance)).union(&hole_openings(holes, clearance)).intersection(board);
    // Whatever is left of the filter's opening beyond a dam is a splinter of the launch's ground, not of the filter: the largest piece stays.
    let kept_back = filter.difference(&over_lands.offset(Nm::from_m(shop.mask_dam_m)));
    let largest = kept_back.pieces.iter().map(|piece| piece.region()).max_by(|a, b| a.area_m2().total_cmp(&b.area_m2()));
    others.union(&largest.unwrap_or_default())
}

/// Openings on the bottom: where the connectors' ground is soldered, and around mounting holes.
pub(super) fn bottom(order: &Order, board: &Region, lands: &[Land], holes: &[Hole]) -> Region {
    let clearance = Nm::from_m(order.shop.mask_clearance_m);
    let grounds: Vec<Land> = lands.iter().filter(|land| land.net == "GND").cloned().collect();
    land_openings(&grounds, clearance).union(&hole_openings(holes, clearance)).intersection(board)
}

fn land_openings(lands: &[Land], clearance: Nm) -> Region {
    let rings: Vec<Ring> = lands.iter().map(|land| land_ring(land, clearance)).collect();
    Region::union_of(&rings)
}

/// The land's rectangle grown by `by`.
pub(super) fn land_ring(land: &Land, by: Nm) -> Ring {
    let half = land.size.map(|v| Nm(v.0 / 2) + by);
    rectangle(land.at.shifted(-half[0], -half[1]), land.at.shifted(half[0], half[1]))
}

fn hole_openings(holes: &[Hole], clearance: Nm) -> Region {
    let rings: Vec<Ring> =
        holes.iter().filter(|hole| !hole.is_plated()).map(|hole| disc(hole.at, Nm(hole.diameter.0 / 2) + clearance)).collect();
    Region::union_of(&rings)
}
