//! The plated holes that ground a strip's end, from the shop's limits.

use crate::base::Nm;
use crate::layout::Part;
use crate::order::Order;

/// Hole and pad sizes go up to the next of these: drills come in steps.
const DRILL_STEP: Nm = Nm(50_000);
/// Holes of a row stand this many diameters apart at least: nearer ones hardly lower the inductance.
const LEAST_PITCH: f64 = 2.0;

/// Plated holes for the end of a strip of a width: the smallest the shop drills through the board, as many side by side as the strip holds with
/// their pads, at most `most`; at least one, whose pad may be wider than the strip.
pub fn via(order: &Order, width: Nm, most: usize) -> Part {
    let (diameter, pad) = hole(order);
    let shop = &order.shop;
    let pitch = Nm::from_m((LEAST_PITCH * diameter.m()).max(diameter.m() + shop.hole_to_hole_m)).max(pad);
    let pitch = up(pitch);
    let count = if width <= pad { 1 } else { ((width - pad).0 / pitch.0 + 1).clamp(1, most.max(1) as i64) as usize };
    Part::Via { diameter, pad, count, pitch: if count > 1 { pitch } else { Nm::ZERO } }
}

/// Diameter of the smallest plated hole and of its pad.
pub fn hole(order: &Order) -> (Nm, Nm) {
    let shop = &order.shop;
    let board_m = order.laminate.thickness_m + 2.0 * order.laminate.copper.finished_m();
    let diameter = up(Nm::from_m(shop.hole_m.max(board_m / shop.aspect_ratio)));
    let pad = up(Nm::from_m(diameter.m() + 2.0 * (shop.annular_ring_m + shop.registration_m)));
    (diameter, pad)
}

fn up(value: Nm) -> Nm {
    Nm((value.0 + DRILL_STEP.0 - 1).div_euclid(DRILL_STEP.0) * DRILL_STEP.0)
}
