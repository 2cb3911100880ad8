//! What do note, drawing and job file say alike? Holes, controlled features, smallest features, stack, standards, taken once from board and order.

use std::collections::BTreeMap;
use std::collections::BTreeSet;

use crate::artwork::Board;
use crate::artwork::Callout;
use crate::artwork::HoleUse;
use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::shape::bounds;
use crate::base::Nm;
use crate::base::Point;
use crate::order::Grain;
use crate::order::LaminateKind;
use crate::order::Order;
use crate::order::Side;
use crate::package::purpose;

/// Metres as millimetres without needless zeros, three decimals at least.
pub(super) fn mm(metres: f64) -> String {
    let text = format!("{:.6}", metres * 1e3);
    let kept = text.trim_end_matches('0').len().max(text.len() - 3);
    text[..kept].to_string()
}

/// Metres as micrometres, at most two decimals.
pub(super) fn um(metres: f64) -> String {
    let text = format!("{:.2}", metres * 1e6);
    text.trim_end_matches('0').trim_end_matches('.').to_string()
}

/// Length (x) and width (y) of the board.
pub(super) fn size(board: &Board) -> [Nm; 2] {
    bounds(board.outline.outer.iter().copied()).map_or([Nm::ZERO; 2], |[low, high]| [high.x - low.x, high.y - low.y])
}

/// A symbol for each kind of hole: A, B, .. Z, AA ..
fn symbol(index: usize) -> String {
    let letter = char::from(b'A' + (index % 26) as u8);
    if index < 26 { letter.to_string() } else { format!("{}{letter}", symbol(index / 26 - 1)) }
}

/// Holes or slots of one kind: a row of the drill table.
#[derive(Clone, Debug)]
pub(super) struct HoleKind {
    /// Its letter on the drill map.
    pub symbol: String,
    /// Finished diameter, or width of a slot.
    pub diameter: Nm,
    /// From end to end of a slot, round ends included; `None` for a round hole.
    pub length: Option<Nm>,
    /// Pad diameter; zero for none.
    pub pad: Nm,
    /// Whether the wall is plated.
    pub plated: bool,
    /// In words.
    pub purpose: &'static str,
    /// Where: the middle of each.
    pub at: Vec<Point>,
}

/// The rows of the drill table: round holes first, by purpose and size, then slots.
pub(super) fn hole_kinds(board: &Board) -> Vec<HoleKind> {
    let mut round: BTreeMap<(HoleUse, Nm, Nm), Vec<Point>> = BTreeMap::new();
    for hole in &board.holes {
        round.entry((hole.purpose, hole.diameter, hole.pad)).or_default().push(hole.at);
    }
    let mut kinds: Vec<HoleKind> = round
        .into_iter()
        .map(|((of, diameter, pad), at)| HoleKind {
            symbol: String::new(),
            diameter,
            length: None,
            pad,
            plated: of == HoleUse::Via,
            purpose: purpose(of),
            at,
        })
        .collect();
    let mut slots: BTreeMap<(bool, Nm, Nm), Vec<Point>> = BTreeMap::new();
    for slot in &board.slots {
        let run = (slot.to.x - slot.from.x).m().hypot((slot.to.y - slot.from.y).m());
        let middle = Point::new((slot.from.x.0 + slot.to.x.0).div_euclid(2), (slot.from.y.0 + slot.to.y.0).div_euclid(2));
        slots.entry((slot.plated, slot.width, Nm::from_m(run) + slot.width)).or_default().push(middle);
    }
    kinds.extend(slots.into_iter().map(|((plated, diameter, length), at)| HoleKind {
        symbol: String::new(),
        diameter,
        length: Some(length),
        pad: Nm::ZERO,
        plated,
        purpose: if plated { "ground slot" } else { "slot" },
        at,
    }));
    for (index, kind) in kinds.iter_mut().enumerate() {
        kind.symbol = symbol(index);
    }
    kinds
}

/// A controlled feature: a call-out with its number.
#[derive(Clone, Debug)]
pub(super) struct Feature<'a> {
    /// From 1 on.
    pub number: usize,
    /// Name and ends.
    pub callout: &'a Callout,
    /// Distance of the ends, metres.
    pub nominal_m: f64,
    /// `width`, `gap`, `length` or `size`: its name says.
    pub kind: &'static str,
    /// Middle.
    pub at: Point,
}

/// The controlled features, numbered in the board's order.
pub(super) fn features(board: &Board) -> Vec<Feature<'_>> {
    board
        .callouts
        .iter()
        .enumerate()
        .map(|(i, callout)| Feature {
            number: i + 1,
            callout,
            nominal_m: (callout.to.x - callout.from.x).m().hypot((callout.to.y - callout.from.y).m()),
            kind: ["width", "gap", "length"]
                .into_iter()
                .find(|kind| callout.dimension.split(' ').any(|word| word == *kind))
                .unwrap_or("size"),
            at: Point::new((callout.from.x.0 + callout.to.x.0).div_euclid(2), (callout.from.y.0 + callout.to.y.0).div_euclid(2)),
        })
        .collect()
}

/// What is smallest on the board, metres, beside the shop's limit: name, used, limit.
pub(super) fn smallest(order: &Order, board: &Board) -> [(&'static str, Option<f64>, f64); 4] {
    let features = features(board);
    let least = |what: &str| features.iter().filter(|feature| feature.kind == what).map(|feature| feature.nominal_m).reduce(f64::min);
    let ring = board.holes.iter().filter(|hole| hole.is_plated()).map(|hole| (hole.pad - hole.diameter).m() / 2.0).reduce(f64::min);
    let hole = board.holes.iter().map(|hole| hole.diameter.m()).reduce(f64::min);
    let shop = &order.shop;
    [
        ("line, filter", least("width"), shop.line_m),
        ("gap, filter", least("gap"), shop.gap_m),
        ("annular ring", ring, shop.annular_ring_m),
        ("hole", hole, shop.hole_m),
    ]
}

/// The finish in words, with its standard.
pub(super) fn finish(order: &Order) -> &str {
    match order.laminate.finish.as_str() {
        "bare" => "none: bare copper, clean and free of oxide, protected for transport",
        "osp" => "organic solderability preservative per IPC-4555",
        "immersion-silver" => "immersion silver per IPC-4553",
        "immersion-tin" => "immersion tin per IPC-4554",
        "enig" => "electroless nickel and immersion gold per IPC-4552 (nickel 3 to 6 um, gold 0.05 um or more)",
        "enepig" => "electroless nickel, electroless palladium, immersion gold per IPC-4556",
        "hot-air-solder" => "hot-air levelled solder, thin and even, no bridges or icicles in the gaps of the filter",
        other => other,
    }
}

/// What is said about nickel.
pub(super) fn nickel(order: &Order) -> &'static str {
    match order.laminate.finish.as_str() {
        "enig" | "enepig" => "The nickel lies on the filter conductors as well; this loss was accepted with the order.",
        _ => "No nickel on the filter conductors.",
    }
}

/// The standard the bare board is accepted by.
pub(super) fn acceptance(order: &Order) -> &'static str {
    match order.laminate.kind {
        LaminateKind::Ceramic => {
            "the maker's workmanship standard for metallised ceramic, after IPC-6018 (high-frequency boards) as far as it applies,"
        }
        LaminateKind::Ptfe | LaminateKind::Hydrocarbon => "IPC-6018 (high-frequency boards)",
        LaminateKind::GlassEpoxy | LaminateKind::Other => "IPC-6012 (rigid boards)",
    }
}

/// How the laminate's sheet is called out.
pub(super) fn sheet(order: &Order) -> &'static str {
    match order.laminate.kind {
        LaminateKind::GlassEpoxy => "IPC-4101 sheet of this class",
        LaminateKind::Ptfe | LaminateKind::Hydrocarbon => "IPC-4103 sheet of this class",
        LaminateKind::Ceramic | LaminateKind::Other => "customer-specified",
    }
}

/// How this kind of laminate is cut to size.
pub(super) fn cut(order: &Order) -> &'static str {
    if order.laminate.kind == LaminateKind::Ceramic { "scribed and broken, or cut by laser" } else { "routed" }
}

/// Copper that plated walls carry at least, metres.
pub(super) fn wall_m(order: &Order) -> f64 {
    // Unplated filters still have plated holes (button plating); 20 um is the usual average (common practice, no source).
    const BUTTON_PLATING_M: f64 = 20e-6;
    if order.laminate.copper.plating_m > 0.0 { order.laminate.copper.plating_m } else { BUTTON_PLATING_M }
}

/// The board axis the laminate's grain runs along; `None` when any will do.
pub(super) fn grain_axis(order: &Order) -> Option<char> {
    let upright = matches!(order.board.port_side[0], Side::Bottom | Side::Top);
    match order.board.grain {
        Grain::Any => None,
        Grain::AlongPorts => Some(if upright { 'y' } else { 'x' }),
        Grain::AcrossPorts => Some(if upright { 'x' } else { 'y' }),
    }
}

/// The grain direction in words.
pub(super) fn grain(order: &Order) -> String {
    match grain_axis(order) {
        Some(axis) => format!("grain of the sheet along {axis}, on all boards of a panel"),
        None => "any, one direction on all boards of a panel".to_string(),
    }
}

/// Copper layers in words, top to bottom.
pub(super) fn layer_order(order: &Order) -> String {
    match order.copper_layers() {
        1 => "copper 1 on the top with the filter, dielectric; no copper on the bottom: the board lies on a metal carrier, which is its ground"
            .to_string(),
        2 => "copper 1 on the top with the filter, dielectric, copper 2 on the bottom as ground plane".to_string(),
        last => format!(
            "copper 1 on the top with the filter, dielectric, copper 2 as the filter's ground plane, then copper {} below it, ground as well",
            if last == 3 { "3".to_string() } else { format!("3 to {last}") }
        ),
    }
}

/// Nets of the copper with the roles of their shapes.
pub(super) fn nets(board: &Board) -> BTreeMap<&str, BTreeSet<Role>> {
    let mut nets: BTreeMap<&str, BTreeSet<Role>> = BTreeMap::new();
    for shape in board.layers.iter().filter(|(layer, _)| matches!(layer, Layer::Copper(_))).flat_map(|(_, shapes)| shapes) {
        if !shape.net.is_empty() {
            nets.entry(&shape.net).or_default().insert(shape.role);
        }
    }
    nets
}

/// Whether a net is strip copper that neither a land nor a hole touches.
pub(super) fn is_resonator(board: &Board, net: &str, roles: &BTreeSet<Role>) -> bool {
    roles.iter().all(|role| *role == Role::Circuit)
        && !board.lands.iter().any(|land| land.net == net)
        && !board.holes.iter().any(|hole| hole.net == net)
        && !board.ports.iter().any(|port| port.net == net)
}

/// The mark of files that were written in spite of a broken design rule.
pub(super) const DESPITE: &str =
    "*** A DESIGN RULE IS BROKEN, and these files were written in spite of it. Quote and build only on written consent. ***";
