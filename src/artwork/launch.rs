//! What copper brings a port from the board's edge to the feed: pad, taper, ground pads, via fence, and the bend of a turned circuit.

use crate::artwork::Fits;
use crate::artwork::Hole;
use crate::artwork::HoleUse;
use crate::artwork::Land;
use crate::artwork::frame::Seat;
use crate::artwork::shape::Ring;
use crate::artwork::shape::rectangle;
use crate::base::Nm;
use crate::base::Point;
use crate::layout::Node;
use crate::order::LaunchShape;
use crate::order::Order;
use crate::order::Shop;

/// Vias of a fence along one row; beyond this the pitch is a mistake.
const MAX_FENCE_VIAS: i64 = 500;
/// Ground under a feed that runs to the edge reaches this many laminate thicknesses beyond the strip on either side.
pub(super) const GROUND_REACH_HEIGHTS: f64 = 3.0;

/// A feed's end, square to the board's edge, before the quarter turns; port 1 leaves to the left, port 2 to the right.
#[derive(Clone, Copy, Debug)]
pub(super) struct Mouth {
    /// Lower corner.
    pub low: Point,
    /// Upper corner.
    pub high: Point,
    /// -1 for port 1, which leaves to the left; +1 for port 2.
    pub outward: i64,
}

/// Space a launch takes: from the edge to the feed, and to either side of the feed's middle.
#[derive(Clone, Copy, Debug)]
pub(super) struct Extent {
    /// Edge to feed.
    pub length: Nm,
    /// Feed's middle to the outermost copper.
    pub half_width: Nm,
}

/// The copper of one launch, before the quarter turns.
#[derive(Clone, Debug, Default)]
pub(super) struct Launched {
    /// Signal copper, from the edge to the feed's mouth.
    pub signal: Vec<Ring>,
    /// Ground pads on the top.
    pub ground: Vec<Ring>,
    /// Stretches where the bottom ground reaches nearer to the edge than the shop's clearance.
    pub bottom: Vec<Ring>,
    /// The fence.
    pub holes: Vec<Hole>,
    /// Lands to solder to.
    pub lands: Vec<Land>,
    /// Where the connector touches: lower and upper corner.
    pub touch: [Point; 2],
    /// Across the gap between signal pad and a ground pad, where there is one.
    pub gap: Option<[Point; 2]>,
    /// The whole launch with the gaps, for what must keep clear.
    pub footprint: Ring,
}

impl Mouth {
    /// Width of the feed.
    pub fn width(&self) -> Nm {
        self.high.y - self.low.y
    }

    fn middle_y(&self) -> Nm {
        Nm((self.low.y.0 + self.high.y.0).div_euclid(2))
    }
}

/// The square mouth of a turned feed, and the piece of copper between the two (none for a mouth that is square already).
///
/// The bend is where two strips of the feed's width meet along their bisector: its inner corner is a corner of both mouths, its outer
/// corner is not cut, so that the strip's edges stay straight. The turned mouth remains the reference plane.
pub(super) fn square_mouth(node: Node, outward: i64) -> (Mouth, Option<Ring>) {
    let (low, high) = if node.left.y <= node.right.y { (node.left, node.right) } else { (node.right, node.left) };
    if low.x == high.x {
        return (Mouth { low, high, outward }, None);
    }
    let width = node.width();
    // The corner that lies further out is the inner corner of the bend.
    let low_is_pivot = (low.x.0 - high.x.0) * outward > 0;
    let (pivot, far, up) = if low_is_pivot { (low, high, 1) } else { (high, low, -1) };
    let square = pivot.shifted(Nm::ZERO, Nm(up * width.0));
    // Tilt of the mouth; the strip's edge runs on from the far corner by w tan(tilt / 2) to meet the square strip's edge.
    let tilt_rad = ((far.x - pivot.x).m()).abs().atan2((far.y - pivot.y).m().abs());
    let reach = Nm::from_m(width.m() * (0.5 * tilt_rad).tan() * tilt_rad.cos());
    let apex = Point { x: far.x + Nm(outward * reach.0), y: square.y };
    let mouth = if low_is_pivot { Mouth { low: pivot, high: square, outward } } else { Mouth { low: square, high: pivot, outward } };
    (mouth, Some(vec![pivot, square, apex, far]))
}

/// How far in from the edge the copper of the launch begins.
pub(super) fn pull_back(shape: &LaunchShape, shop: &Shop, outline: bool) -> Nm {
    match *shape {
        LaunchShape::Open => Nm::ZERO,
        LaunchShape::Pads { .. } if outline => Nm::from_m(shop.edge_clearance_m),
        LaunchShape::Pads { .. } => Nm::ZERO,
        LaunchShape::EdgeCoax { pull_back_m, .. } => Nm::from_m(pull_back_m),
    }
}

/// The space the launch takes.
pub(super) fn extent(shape: &LaunchShape, shop: &Shop, outline: bool, feed_width: Nm) -> Extent {
    let pull_back = pull_back(shape, shop, outline);
    let half = |width_m: f64| Nm(Nm::from_m(width_m).0.max(feed_width.0) / 2 + 1);
    match *shape {
        LaunchShape::Open => Extent { length: Nm::ZERO, half_width: half(0.0) },
        LaunchShape::Pads { pad_length_m, pad_width_m } => {
            Extent { length: pull_back + Nm::from_m(pad_length_m), half_width: half(pad_width_m) }
        }
        LaunchShape::EdgeCoax { pad_length_m, pad_width_m, ground_gap_m, ground_length_m, ground_width_m, taper_length_m, .. } => Extent {
            length: pull_back + Nm::from_m((pad_length_m + taper_length_m).max(ground_length_m)),
            half_width: Nm(half(pad_width_m).0.max(Nm::from_m(0.5 * pad_width_m + ground_gap_m + ground_width_m).0)),
        },
    }
}

/// How far to either side of a port's middle its launch has copper, top or bottom.
pub fn launch_half_width(order: &Order, shape: &LaunchShape, feed_width: Nm) -> Nm {
    let extent = extent(shape, &order.shop, order.board.outline, feed_width);
    match shape {
        LaunchShape::Open => extent.half_width + Nm::from_m(GROUND_REACH_HEIGHTS * order.laminate.thickness_m),
        LaunchShape::Pads { .. } | LaunchShape::EdgeCoax { .. } => extent.half_width,
    }
}

/// Draws the launch between the board's edge at `edge_x` and the feed's mouth.
pub(super) fn draw(shape: &LaunchShape, shop: &Shop, height_m: f64, outline: bool, mouth: Mouth, port: usize, edge_x: Nm) -> Launched {
    let middle = mouth.middle_y();
    // `u` runs inwards from the edge, `v` across.
    let at = |u: Nm, v: Nm| Point { x: edge_x - Nm(mouth.outward * u.0), y: middle + v };
    let block = |u0: Nm, u1: Nm, v0: Nm, v1: Nm| rectangle(at(u0, v0), at(u1, v1));
    let pull_back = pull_back(shape, shop, outline);
    let clearance = Nm::from_m(shop.edge_clearance_m);
    let to_mouth = (mouth.low.x - edge_x).abs();
    let (low, high) = (mouth.low.y - middle, mouth.high.y - middle);
    let extent = extent(shape, shop, outline, mouth.width());
    let reach = Nm::from_m(GROUND_REACH_HEIGHTS * height_m);
    let net = format!("PORT{port}");
    let pin = |pin: usize| (format!("J{port}"), pin.to_string());
    let mut launched = Launched { footprint: block(Nm::ZERO, to_mouth, -extent.half_width, extent.half_width), ..Launched::default() };
    match *shape {
        LaunchShape::Open => {
            launched.signal.push(block(Nm::ZERO, to_mouth, low, high));
            launched.touch = [at(Nm::ZERO, low), at(Nm::ZERO, high)];
            if outline {
                launched.bottom.push(block(Nm::ZERO, clearance + reach, low - reach, high + reach));
            }
        }
        LaunchShape::Pads { pad_length_m, pad_width_m } => {
            let (length, width) = (Nm::from_m(pad_length_m), Nm::from_m(pad_width_m));
            let half = Nm(width.0 / 2);
            launched.signal.push(block(pull_back, pull_back + length, -half, half));
            launched.signal.push(block(pull_back + length, to_mouth, low, high));
            launched.touch = [at(pull_back, -half), at(pull_back, half)];
            launched.lands.push(Land {
                at: at(pull_back + Nm(length.0 / 2), Nm::ZERO),
                size: [Nm(length.0 / 2 * 2), half + half],
                net,
                pin: pin(1),
                fits: Fits::Connector,
            });
        }
        LaunchShape::EdgeCoax {
            pad_length_m,
            pad_width_m,
            ground_gap_m,
            ground_length_m,
            ground_width_m,
            taper_length_m,
            via_hole_m,
            via_pad_m,
            via_pitch_m,
            ..
        } => {
            let half = Nm(Nm::from_m(pad_width_m).0 / 2);
            let pad_end = pull_back + Nm::from_m(pad_length_m);
            let taper_end = pad_end + Nm::from_m(taper_length_m);
            launched.signal.push(vec![
                at(pull_back, -half),
                at(pad_end, -half),
                at(taper_end, low),
                at(to_mouth, low),
                at(to_mouth, high),
                at(taper_end, high),
                at(pad_end, half),
                at(pull_back, half),
            ]);
            launched.touch = [at(pull_back, -half), at(pull_back, half)];
            launched.lands.push(Land {
                at: at(Nm((pull_back.0 + pad_end.0) / 2), Nm::ZERO),
                size: [Nm((pad_end - pull_back).0 / 2 * 2), half + half],
                net,
                pin: pin(1),
                fits: Fits::Connector,
            });
            // Where the taper widens towards the feed, the ground pads end a gap before it begins, so that the gap holds to its corner.
            let widens = mouth.width().0 > 2 * half.0;
            let ground_end =
                pull_back + Nm::from_m(if widens { ground_length_m.min(pad_length_m - ground_gap_m) } else { ground_length_m });
            let (inner, ground_width) = (half + Nm::from_m(ground_gap_m), Nm::from_m(ground_width_m));
            let outer = inner + ground_width;
            let halfway = Nm((pull_back.0 + pad_end.0) / 2);
            launched.gap = Some([at(halfway, half), at(halfway, inner)]);
            let via = (Nm::from_m(via_hole_m), Nm::from_m(via_pad_m));
            let rows = fence_rows(inner, outer, via, Nm::from_m(shop.hole_to_hole_m));
            // Hole walls keep the shop's clearance to the routed edge too.
            let first = Nm((pull_back.0 + via.1.0 / 2).max(clearance.0 + via.0.0 / 2));
            let last = ground_end - Nm(via.1.0 / 2);
            for (side, number) in [(-1, 2), (1, 3)] {
                let across = |v: Nm| Nm(side * v.0);
                launched.ground.push(block(pull_back, ground_end, across(inner), across(outer)));
                launched.lands.push(Land {
                    at: at(Nm((pull_back.0 + ground_end.0) / 2), across(Nm((inner.0 + outer.0) / 2))),
                    size: [Nm((ground_end - pull_back).0 / 2 * 2), Nm(ground_width.0 / 2 * 2)],
                    net: "GND".to_string(),
                    pin: pin(number),
                    fits: Fits::Connector,
                });
                for &row in &rows {
                    for u in fence(first, last, Nm::from_m(via_pitch_m)) {
                        launched.holes.push(Hole {
                            at: at(u, across(row)),
                            diameter: via.0,
                            pad: via.1,
                            purpose: HoleUse::Via,
                            net: "GND".to_string(),
                        });
                    }
                }
            }
            launched.bottom.push(block(pull_back, clearance + reach, -outer, outer));
        }
    }
    launched
}

/// Distances across at which the fence's rows lie: along the gap, and along the outer edge where a second row fits.
fn fence_rows(inner: Nm, outer: Nm, via: (Nm, Nm), wall: Nm) -> Vec<Nm> {
    let half_pad = Nm(via.1.0 / 2);
    let (near, far) = (inner + half_pad, outer - half_pad);
    if outer - inner < via.1 {
        Vec::new()
    } else if (far - near).0 >= (via.0 + wall).0.max(via.1.0) {
        vec![near, far]
    } else {
        vec![near]
    }
}

/// Places evenly from `first` to `last`, at most `pitch` apart; one in the middle when there is no room for two; none without room.
pub(super) fn fence(first: Nm, last: Nm, pitch: Nm) -> Vec<Nm> {
    let span = (last - first).0;
    if span < 0 || pitch.0 <= 0 {
        return Vec::new();
    }
    let steps = ((span + pitch.0 - 1) / pitch.0).min(MAX_FENCE_VIAS);
    if steps == 0 {
        return vec![Nm((first.0 + last.0) / 2)];
    }
    (0..=steps).map(|i| Nm(first.0 + span * i / steps)).collect()
}

impl Launched {
    /// The launch on the board.
    pub fn seated(self, seat: &Seat) -> Launched {
        let rings = |rings: Vec<Ring>| rings.iter().map(|ring| seat.ring(ring)).collect();
        Launched {
            signal: rings(self.signal),
            ground: rings(self.ground),
            bottom: rings(self.bottom),
            holes: self.holes.into_iter().map(|hole| Hole { at: seat.point(hole.at), ..hole }).collect(),
            lands: self.lands.into_iter().map(|land| Land { at: seat.point(land.at), size: seat.size(land.size), ..land }).collect(),
            touch: self.touch.map(|p| seat.point(p)),
            gap: self.gap.map(|ends| ends.map(|p| seat.point(p))),
            footprint: seat.ring(&self.footprint),
        }
    }
}
