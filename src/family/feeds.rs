//! What every family needs at its ports: a feed line of the port's impedance and a launch whose pad is matched to it.

use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::dimensions::Dimension;
use crate::dimensions::Dimensions;
use crate::layout::Draft;
use crate::layout::Way;
use crate::line::AsBuilt;
use crate::line::Coplanar;
use crate::line::width_for_impedance;
use crate::order::LaunchShape;
use crate::order::Order;

/// Feed and launch of one port as drawn.
#[derive(Clone, Debug, PartialEq)]
pub struct Feed {
    /// Width of the feed line.
    pub width: Nm,
    /// Length of the feed line.
    pub length: Nm,
    /// The launch, its gap to the ground pads as in the set.
    pub launch: LaunchShape,
}

fn name(port: usize, what: &str) -> String {
    format!("feed {port} {what}")
}

/// Names of the dimensions a feed line is drawn from.
pub fn line_names(port: usize) -> Vec<String> {
    vec![name(port, "width"), name(port, "length")]
}

/// Names of the dimensions a launch is drawn from.
pub fn launch_names(order: &Order, port: usize) -> Vec<String> {
    match order.board.launch.shape {
        LaunchShape::EdgeCoax { .. } => vec![launch_gap(port)],
        LaunchShape::Open | LaunchShape::Pads { .. } => Vec::new(),
    }
}

/// Names of all dimensions of both ports, in drawing order.
pub fn names(order: &Order) -> Vec<String> {
    [1, 2].into_iter().flat_map(|port| line_names(port).into_iter().chain(launch_names(order, port))).collect()
}

fn launch_gap(port: usize) -> String {
    format!("launch {port} ground gap")
}

/// First guess of both ports' dimensions: feed width from the port's impedance, launch gap from the same, between the shop's narrowest
/// gap and the one of the launch class.
///
/// # Errors
/// `impedance-out-of-reach`.
pub fn guess(order: &Order, built: &AsBuilt, length_m: f64, center_hz: f64) -> Result<Vec<Dimension>, Vec<Problem>> {
    let (mut list, mut problems) = (Vec::new(), Vec::new());
    for (port, z0_ohm) in [1, 2].into_iter().zip(order.filter.ports_ohm) {
        match width_for_impedance(built, z0_ohm, center_hz) {
            Ok(width_m) => {
                list.push(Dimension::guess(name(port, "width"), width_m, &[("Z0 ohm", z0_ohm)]));
                list.push(Dimension::guess(name(port, "length"), length_m, &[]));
            }
            Err(unreachable) => problems.push(Problem::error(
                "impedance-out-of-reach",
                Place::Key("filter.port".into()),
                format!("no feed line of {z0_ohm} ohm: {}", unreachable.message),
                unreachable.help,
            )),
        }
        if let LaunchShape::EdgeCoax { pad_width_m, ground_gap_m, .. } = order.board.launch.shape {
            let widest_m = ground_gap_m.max(order.shop.gap_m);
            let gap_m = Coplanar::gap_for_impedance(built, pad_width_m, z0_ohm, [order.shop.gap_m, widest_m]);
            let reached_ohm = Coplanar::new(built, pad_width_m, gap_m).z0_ohm;
            list.push(Dimension::guess(launch_gap(port), gap_m, &[("Z0 ohm", z0_ohm), ("reached ohm", reached_ohm)]));
        }
    }
    if problems.is_empty() { Ok(list) } else { Err(problems) }
}

/// Feed and launch of a port from the set.
///
/// # Errors
/// `dimension-missing`.
pub fn read(set: &Dimensions, port: usize) -> Result<Feed, Problem> {
    let mut launch = set.order.board.launch.shape;
    if let LaunchShape::EdgeCoax { ground_gap_m, .. } = &mut launch {
        *ground_gap_m = set.value(&launch_gap(port))?;
    }
    let value = |what| set.value(&name(port, what)).map(Nm::from_m);
    Ok(Feed { width: value("width")?, length: value("length")?, launch })
}

/// Draws the launch and feed of port 1, heading right from a point of the feed's axis; returns the port's node and the feed's far end.
pub fn begin(draft: &mut Draft, set: &Dimensions, at: Point) -> Result<(usize, usize), Problem> {
    let feed = read(set, 1)?;
    let port = draft.mouth(at, feed.width, Way::Left);
    draft.launch(1, port, feed.launch, launch_names(&set.order, 1));
    Ok((port, draft.strip(port, feed.length, Way::Right, line_names(1))))
}

/// Draws the feed and launch of port 2 from the node where the circuit ends, heading right, a step included where the widths differ;
/// returns the port's node.
pub fn end(draft: &mut Draft, set: &Dimensions, arriving: usize) -> Result<usize, Problem> {
    let feed = read(set, 2)?;
    let from = draft.step(arriving, feed.width, Way::Right);
    let port = draft.strip(from, feed.length, Way::Right, line_names(2));
    draft.launch(2, port, feed.launch, launch_names(&set.order, 2));
    Ok(port)
}
