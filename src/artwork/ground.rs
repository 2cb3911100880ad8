//! Where the ground is: the plane on the bottom, and on the top the footprint of a housing's wall with its fence.

use crate::artwork::Hole;
use crate::artwork::HoleUse;
use crate::artwork::Slot;
use crate::artwork::launch::Launched;
use crate::artwork::launch::fence;
use crate::artwork::shape::CHORD_ERROR;
use crate::artwork::shape::Region;
use crate::artwork::shape::Ring;
use crate::artwork::shape::convex_hull;
use crate::artwork::shape::disc;
use crate::artwork::shape::rectangle;
use crate::base::Nm;
use crate::base::Point;
use crate::order::Order;
use crate::order::Side;

/// Width of the wall's footprint on the board.
pub(super) const WALL_WIDTH: Nm = Nm(2_000_000);
/// Ground copper this far in from a plated edge, for the plating to hold on to (common practice, no source).
const PLATED_EDGE_LAND: Nm = Nm(1_000_000);
/// Fence vias are at most this far apart, whatever the frequency.
const MAX_FENCE_PITCH_M: f64 = 2.5e-3;
/// Fence vias are at most this share of a wavelength in the laminate apart (common practice for a wall that is not itself a filter).
const FENCE_WAVELENGTHS: f64 = 0.1;
/// Speed of light, metres per second.
const SPEED_OF_LIGHT: f64 = 299_792_458.0;

/// The bottom ground: the whole board, held back from the edge except where a launch needs it, cut out around mounting holes.
pub(super) fn bottom(order: &Order, size: Point, launches: &[Launched], holes: &[Hole]) -> Region {
    let board = Region::rectangle(Point::default(), size);
    let held_back = if order.board.outline { Nm::from_m(order.shop.edge_clearance_m) } else { Nm::ZERO };
    let plane = board.offset(-held_back);
    let tabs: Vec<Ring> = launches.iter().flat_map(|launch| launch.bottom.iter().cloned()).collect();
    plane.union(&Region::union_of(&tabs)).intersection(&board).difference(&clearances(order, holes))
}

/// The slots as ordered.
pub(super) fn slots(order: &Order) -> Vec<Slot> {
    let at = |p: [f64; 2]| Point::from_m(p[0], p[1]);
    order
        .board
        .slots
        .iter()
        .map(|slot| Slot { from: at(slot.from_m), to: at(slot.to_m), width: Nm::from_m(slot.width_m), plated: slot.plated })
        .collect()
}

/// Ground copper around the walls of plated slots, the same on every layer.
pub(super) fn slot_rings(order: &Order, slots: &[Slot]) -> Region {
    let ring = Nm::from_m(order.shop.annular_ring_m + order.shop.registration_m);
    slots.iter().filter(|slot| slot.plated).fold(Region::default(), |all, slot| all.union(&slot_area(slot, ring)))
}

/// Where no copper may lie around unplated slots.
pub(super) fn slot_clearances(order: &Order, slots: &[Slot]) -> Region {
    let clear = Nm::from_m(order.shop.edge_clearance_m);
    slots.iter().filter(|slot| !slot.plated).fold(Region::default(), |all, slot| all.union(&slot_area(slot, clear)))
}

/// The slot grown by `by`.
pub fn slot_area(slot: &Slot, by: Nm) -> Region {
    let radius = Nm(slot.width.0 / 2) + by;
    let hull = [disc(slot.from, radius), disc(slot.to, radius)].concat();
    Region::union_of(&[convex_hull(&hull)])
}

/// The plated stretches of the edge as ordered, on the board's outline; and the ground copper along them on every layer.
pub(super) fn plated_edges(order: &Order, size: Point) -> (Vec<[Point; 2]>, Region) {
    let mut rings: Vec<Ring> = Vec::new();
    let ends = order.board.plated_edges.iter().map(|edge| {
        let (from, to) = (Nm::from_m(edge.from_m), Nm::from_m(edge.to_m));
        let along_x = |y: Nm| [Point { x: from, y }, Point { x: to.min(size.x), y }];
        let along_y = |x: Nm| [Point { x, y: from }, Point { x, y: to.min(size.y) }];
        let (ends, inwards) = match edge.side {
            Side::Bottom => (along_x(Nm::ZERO), [Nm::ZERO, PLATED_EDGE_LAND]),
            Side::Top => (along_x(size.y), [Nm::ZERO, -PLATED_EDGE_LAND]),
            Side::Left => (along_y(Nm::ZERO), [PLATED_EDGE_LAND, Nm::ZERO]),
            Side::Right => (along_y(size.x), [-PLATED_EDGE_LAND, Nm::ZERO]),
        };
        rings.push(rectangle(ends[0], ends[1].shifted(inwards[0], inwards[1])));
        ends
    });
    let ends = ends.collect();
    (ends, Region::union_of(&rings))
}

/// Ground vias around the board's rim that stitch the planes of a multilayer together, where there is room beside `taken` holes and
/// `away` from the top's copper.
pub(super) fn stitching(order: &Order, size: Point, top: &Region, plane: &Region, taken: &[Hole]) -> Vec<Hole> {
    let shop = &order.shop;
    let ring = shop.annular_ring_m + shop.registration_m;
    // A hole that the board's thickness allows, in the shop's steps of a twentieth of a millimetre.
    let least_m = shop.hole_m.max(order.stack_thickness_m() / shop.aspect_ratio);
    let diameter = Nm((Nm::from_m(least_m).0 + 49_999) / 50_000 * 50_000);
    let pad = diameter + Nm::from_m(2.0 * ring);
    let wavelength_m = SPEED_OF_LIGHT / (highest_hz(order) * order.laminate.permittivity.sqrt());
    let pitch = Nm::from_m((2.0 * MAX_FENCE_PITCH_M).min(FENCE_WAVELENGTHS * wavelength_m));
    // A round pad's chords lie a little outside its circle.
    let rim = Nm::from_m(shop.edge_clearance_m) + Nm(pad.0 / 2) + CHORD_ERROR + CHORD_ERROR;
    let mut places = Vec::new();
    for x in fence(rim, size.x - rim, pitch) {
        places.extend([Point { x, y: rim }, Point { x, y: size.y - rim }]);
    }
    for y in fence(rim, size.y - rim, pitch) {
        places.extend([Point { x: rim, y }, Point { x: size.x - rim, y }]);
    }
    places.sort();
    places.dedup();
    let away = Nm::from_m((3.0 * order.laminate.thickness_m).max(shop.gap_m)) + Nm(pad.0 / 2);
    let (near, room) = (top.offset(away), plane.offset(-Nm(pad.0 / 2)));
    let mut found: Vec<Hole> = Vec::new();
    for at in places {
        let clear = |other: &Hole| {
            let between_m = (at.x - other.at.x).m().hypot((at.y - other.at.y).m());
            between_m >= (0.5 * (diameter + other.diameter).m() + shop.hole_to_hole_m).max(0.5 * (pad + other.pad).m() + shop.gap_m)
        };
        if !near.contains(at) && room.contains(at) && taken.iter().chain(&found).all(clear) {
            found.push(Hole { at, diameter, pad, purpose: HoleUse::Via, net: "GND".to_string() });
        }
    }
    found
}

/// Discs around the unplated holes where no copper may lie.
pub(super) fn clearances(order: &Order, holes: &[Hole]) -> Region {
    let clear = Nm::from_m(order.shop.edge_clearance_m);
    let discs: Vec<Ring> = holes.iter().filter(|hole| !hole.is_plated()).map(|h| disc(h.at, Nm(h.diameter.0 / 2) + clear)).collect();
    Region::union_of(&discs)
}

/// The wall's footprint on the top: a ring around the housing's inside, in the board's middle, as far as the board reaches.
pub(super) fn wall(order: &Order, size: Point, inside: [Nm; 2]) -> Region {
    let clearance = if order.board.outline { Nm::from_m(order.shop.edge_clearance_m) } else { Nm::ZERO };
    let about = |half: [Nm; 2]| {
        let middle = Point::new(size.x.0 / 2, size.y.0 / 2);
        Region::rectangle(middle.shifted(-half[0], -half[1]), middle.shifted(half[0], half[1]))
    };
    let inner = inside.map(|v| Nm(v.0 / 2));
    let outer = inner.map(|v| v + WALL_WIDTH);
    let copper = Region::rectangle(Point::default(), size).offset(-clearance);
    about(outer).difference(&about(inner)).intersection(&copper)
}

/// Vias along the middle of the wall's footprint, where the ground copper holds the whole pad and no other hole is near.
pub(super) fn wall_fence(order: &Order, size: Point, inside: [Nm; 2], ground: &Region, taken: &[Hole]) -> Vec<Hole> {
    let shop = &order.shop;
    let up = |value_m: f64| Nm((Nm::from_m(value_m).0 + 49_999) / 50_000 * 50_000);
    let board_m = order.laminate.thickness_m + 2.0 * order.laminate.copper.finished_m();
    let diameter = up(shop.hole_m.max(board_m / shop.aspect_ratio));
    let pad = up(diameter.m() + 2.0 * (shop.annular_ring_m + shop.registration_m));
    let wavelength_m = SPEED_OF_LIGHT / (highest_hz(order) * order.laminate.permittivity.sqrt());
    let pitch = Nm::from_m(MAX_FENCE_PITCH_M.min(FENCE_WAVELENGTHS * wavelength_m));
    let [half_x, half_y] = inside.map(|v| Nm((v + WALL_WIDTH).0 / 2));
    let middle = Point::new(size.x.0 / 2, size.y.0 / 2);
    let mut places = Vec::new();
    for u in fence(-half_x, half_x, pitch) {
        places.extend([middle.shifted(u, -half_y), middle.shifted(u, half_y)]);
    }
    for v in fence(-half_y, half_y, pitch) {
        places.extend([middle.shifted(-half_x, v), middle.shifted(half_x, v)]);
    }
    places.sort();
    places.dedup();
    let room = ground.offset(-Nm(pad.0 / 2));
    let mut found: Vec<Hole> = Vec::new();
    for at in places {
        let clear = |other: &Hole| {
            let between_m = (at.x - other.at.x).m().hypot((at.y - other.at.y).m());
            between_m >= 0.5 * (diameter + other.diameter).m() + shop.hole_to_hole_m
        };
        if room.contains(at) && taken.iter().chain(&found).all(clear) {
            found.push(Hole { at, diameter, pad, purpose: HoleUse::Via, net: "GND".to_string() });
        }
    }
    found
}

/// The highest frequency the order speaks of.
pub fn highest_hz(order: &Order) -> f64 {
    use crate::order::Band;
    let band = match order.filter.band {
        Band::LowPass { cutoff_hz } => cutoff_hz,
        Band::HighPass { to_hz, .. } | Band::BandPass { to_hz, .. } | Band::BandStop { to_hz, .. } => to_hz,
    };
    order.requirements.iter().map(|requirement| requirement.to_hz).fold(band, f64::max)
}

/// The openings in the wall for the ports: the signal copper grown by the distance the wall keeps from it.
pub(super) fn port_openings(launches: &[Launched], away: Nm) -> Region {
    let rings: Vec<Ring> = launches
        .iter()
        .flat_map(|launch| &launch.signal)
        .filter_map(|ring| crate::artwork::shape::bounds(ring.iter().copied()))
        .map(|[low, high]| rectangle(low.shifted(-away, -away), high.shifted(away, away)))
        .collect();
    Region::union_of(&rings)
}
