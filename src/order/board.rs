//! The keys of the board around the circuit, and of lid and walls.

use super::stack::{overall_m, stack};
use super::table::{Size, Table};
use super::types::{
    Below, BoardRequest, BoardSize, Grain, GroundOn, Housing, KeepOut, Laminate, Launch, LaunchShape, Mask, MountingHole,
    PlatedEdgeRequest, Shop, Side, SlotRequest, TextOn,
};
use crate::base::Dimensionality;

const SIDE: Size = Size::length(1.0, 1000.0, "60 mm");
const MARGIN: Size = Size::length(0.0, 200.0, "8 mm");
const OFFSET: Size = Size::length(-1000.0, 1000.0, "0 mm");
const PLACE: Size = Size::length(0.0, 1000.0, "3 mm");
const HOLE: Size = Size::length(0.1, 20.0, "3.2 mm");
const THICKNESS: Size = Size::length(0.001, 200.0, "0.85 mm");
const TOLERANCE: Size = Size::length(0.0, 200.0, "0.15 mm");
const DIELECTRIC: Size = Size::length(0.01, 25.0, "0.4 mm");
const FOIL: Size = Size { kind: Dimensionality::CopperThickness, unit: "um", least: 0.1e-6, greatest: 500e-6, usual: "18 um" };
const SLOT: Size = Size::length(0.3, 50.0, "1 mm");
/// Share of its thickness by which a dielectric below varies, when the order says nothing (common practice, no source).
const BELOW_VARIES_BY: f64 = 0.1;
/// Copper layers a package can hold.
const MOST_COPPER_LAYERS: usize = 4;
const LID: Size = Size::length(0.05, 500.0, "10 mm");

/// The words of `mask`.
pub const MASKS: &[&str] = &["none", "clear-of-filter"];
/// The words of `text`.
pub const TEXTS: &[&str] = &["legend", "copper", "none"];
/// The words of `outline`.
pub const OUTLINES: &[&str] = &["rectangle", "none"];
/// The words of `port-side`.
pub const SIDES: &[(&str, Side)] = &[("left", Side::Left), ("right", Side::Right), ("bottom", Side::Bottom), ("top", Side::Top)];
/// The words of `grain`.
pub const GRAINS: &[(&str, Grain)] = &[("along-ports", Grain::AlongPorts), ("across-ports", Grain::AcrossPorts), ("any", Grain::Any)];
/// The words of `ground`.
pub const GROUNDS: &[(&str, GroundOn)] = &[("layer-2", GroundOn::Layer2), ("carrier", GroundOn::Carrier)];
/// Margin when neither margin nor size is given, metres: room for text and fence on every class of launch.
const USUAL_MARGIN_M: f64 = 8e-3;

/// Reads `[board]`; laminate, shop and launch were read before, and their values are defaults here.
pub fn read(t: &Table<'_>, laminate: Option<&Laminate>, shop: Option<&Shop>, launch: Option<Launch>) -> Option<BoardRequest> {
    let mask = t.resolve("mask", "\"none\"", Some(Mask::None), |t, k| {
        t.word(k, MASKS).map(|i| if i == 0 { Mask::None } else { Mask::ClearOfFilter })
    });
    let size = size(t);
    let outline = t.resolve("outline", "\"rectangle\"", Some(true), |t, k| t.word(k, OUTLINES).map(|i| i == 0));
    let port_side = t.resolve("port-side", "[\"left\", \"right\"]", Some([Side::Left, Side::Right]), port_side);
    let port_offset_m = t.size("port-offset", &OFFSET, Some(0.0));
    let level = t.resolve("level", "false", Some(false), |t, k| t.flag(k));
    let text = t.resolve("text", "\"legend\"", Some(TextOn::Legend), |t, k| {
        t.word(k, TEXTS).map(|i| [TextOn::Legend, TextOn::Copper, TextOn::None].get(i).copied().unwrap_or(TextOn::None))
    });
    let fixed = match size {
        Some(BoardSize::Fixed(size)) => Some(size),
        _ => None,
    };
    let mounting_holes: Vec<_> = t.tables("mounting-hole").iter().map(|h| mounting_hole(h, fixed)).collect();
    let keep_outs: Vec<_> = t.tables("keep-out").iter().map(|k| keep_out(k, fixed)).collect();
    let slots: Vec<_> = t.tables("slot").iter().map(|s| slot(s, fixed)).collect();
    let plated_edges: Vec<_> = t.tables("plated-edge").iter().map(|e| plated_edge(e, fixed)).collect();
    let ground = ground(t, launch.as_ref());
    let below: Option<Vec<Below>> = t.tables("below").iter().map(|b| read_below(b, laminate)).collect();
    if let (Some(GroundOn::Carrier), Some(true)) = (ground, below.as_ref().map(|below| !below.is_empty())) {
        t.error(
            "keys-exclude-each-other",
            "below",
            "below names layers under copper 2, but with ground = \"carrier\" the board has copper 1 alone",
            "leave the tables [[board.below]] out, or write ground = \"layer-2\"",
        );
    }
    if below.as_ref().is_some_and(|below| below.len() + 2 > MOST_COPPER_LAYERS) {
        t.error(
            "list-length",
            "below",
            format!("below makes a board of more than {MOST_COPPER_LAYERS} copper layers; a package holds up to {MOST_COPPER_LAYERS}"),
            format!("at most {} tables [[board.below]]", MOST_COPPER_LAYERS - 2),
        );
    }
    let made_of = laminate.zip(ground).zip(below.as_ref()).map(|((laminate, ground), below)| overall_m(&stack(laminate, ground, below)));
    let thickness_m = made_of.and_then(|[sum, _]| t.size("thickness", &THICKNESS, Some(sum)));
    let thickness_tolerance_m = made_of.and_then(|[_, varies]| t.size("thickness-tolerance", &TOLERANCE, Some(varies)));
    if let (Some([sum, _]), Some(thickness), Some(tolerance)) = (made_of, thickness_m, thickness_tolerance_m)
        && (thickness - sum).abs() > tolerance + 1e-9
    {
        t.error(
            "thickness-contradicts-stack",
            "thickness",
            format!(
                "thickness is {} +/-{}, dielectric and copper together are {}",
                THICKNESS.show(thickness),
                TOLERANCE.show(tolerance),
                THICKNESS.show(sum)
            ),
            format!("write thickness = \"{}\", leave it out, or change laminate.thickness or laminate.copper", THICKNESS.show(sum)),
        );
    }
    let outline_tolerance_m = shop.and_then(|shop| t.size("outline-tolerance", &TOLERANCE, Some(shop.outline_tolerance_m)));
    if let (Some(tolerance), Some(shop)) = (outline_tolerance_m, shop)
        && tolerance < shop.outline_tolerance_m
    {
        t.warning(
            "tolerance-finer-than-shop",
            "outline-tolerance",
            format!(
                "outline-tolerance is {}, the board house holds {}",
                TOLERANCE.show(tolerance),
                TOLERANCE.show(shop.outline_tolerance_m)
            ),
            "ask the board house, and write what it holds as shop.outline-tolerance",
        );
    }
    let grain = t.resolve("grain", "\"along-ports\"", Some(Grain::AlongPorts), |t, k| {
        let words: Vec<&str> = GRAINS.iter().map(|g| g.0).collect();
        t.word(k, &words).and_then(|i| GRAINS.get(i)).map(|g| g.1)
    });
    for key in ["thickness", "thickness-tolerance", "outline-tolerance"] {
        // Known even where the laminate or shop they follow from could not be read.
        t.has(key);
    }
    t.finish();
    Some(BoardRequest {
        thickness_m: thickness_m?,
        thickness_tolerance_m: thickness_tolerance_m?,
        outline_tolerance_m: outline_tolerance_m?,
        grain: grain?,
        ground: ground?,
        below: below?,
        slots: slots.into_iter().collect::<Option<_>>()?,
        plated_edges: plated_edges.into_iter().collect::<Option<_>>()?,
        launch: launch?,
        mask: mask?,
        size: size?,
        outline: outline?,
        port_side: port_side?,
        port_offset_m: port_offset_m?,
        level: level?,
        text: text?,
        mounting_holes: mounting_holes.into_iter().collect::<Option<_>>()?,
        keep_outs: keep_outs.into_iter().collect::<Option<_>>()?,
    })
}

/// Margin or size.
fn size(t: &Table<'_>) -> Option<BoardSize> {
    if t.has("size") {
        if t.has("margin") {
            t.error(
                "keys-exclude-each-other",
                "margin",
                "margin and size are both given; the board's size follows from one of them",
                "leave one of the two out",
            );
            return None;
        }
        return t.resolve("size", "", None, |t, k| t.quantities(k, &SIDE)).map(BoardSize::Fixed);
    }
    t.size("margin", &MARGIN, Some(USUAL_MARGIN_M)).map(BoardSize::Margin)
}

/// Two opposite edges.
fn port_side(t: &Table<'_>, key: &'static str) -> Option<[Side; 2]> {
    let words = t.strings(key)?;
    let names: Vec<&str> = SIDES.iter().map(|s| s.0).collect();
    let sides: Option<Vec<Side>> = words.iter().map(|w| t.word_of(key, w, &names).and_then(|i| SIDES.get(i)).map(|s| s.1)).collect();
    match sides?.as_slice() {
        [one, two]
            if matches!(
                (one, two),
                (Side::Left, Side::Right) | (Side::Right, Side::Left) | (Side::Bottom, Side::Top) | (Side::Top, Side::Bottom)
            ) =>
        {
            Some([*one, *two])
        }
        other => {
            t.error(
                "sides-not-opposite",
                key,
                format!("{key} names {} edges; allowed: two opposite ones, left and right or bottom and top", other.len()),
                format!("write {key} = [\"left\", \"right\"]"),
            );
            None
        }
    }
}

/// One mounting hole.
fn mounting_hole(t: &Table<'_>, board: Option<[f64; 2]>) -> Option<MountingHole> {
    let at_m = t.resolve("at", "[\"3 mm\", \"3 mm\"]", None, |t, k| t.quantities::<2>(k, &PLACE));
    let diameter_m = t.size("diameter", &HOLE, None);
    t.finish();
    let hole = MountingHole { at_m: at_m?, diameter_m: diameter_m? };
    if let Some(board) = board {
        let radius = hole.diameter_m / 2.0;
        if hole.at_m.iter().zip(board).any(|(at, side)| at - radius <= 0.0 || at + radius >= side) {
            t.error(
                "off-the-board",
                "at",
                format!("the hole does not lie wholly on the board of {} x {}", SIDE.show(board[0]), SIDE.show(board[1])),
                "move the hole, or enlarge board.size",
            );
        }
    }
    Some(hole)
}

/// What the filter's ground is; a connector that clamps the edge needs ground on both faces.
fn ground(t: &Table<'_>, launch: Option<&Launch>) -> Option<GroundOn> {
    let ground = t.resolve("ground", "\"layer-2\"", Some(GroundOn::Layer2), |t, k| {
        let words: Vec<&str> = GROUNDS.iter().map(|g| g.0).collect();
        t.word(k, &words).and_then(|i| GROUNDS.get(i)).map(|g| g.1)
    });
    if ground == Some(GroundOn::Carrier)
        && let Some(Launch { class, shape: LaunchShape::EdgeCoax { .. }, .. }) = launch
    {
        t.error(
            "launch-without-ground",
            "ground",
            format!("launch \"{class}\" is soldered to ground on both faces, and ground = \"carrier\" leaves none on the board"),
            "launch = \"pads\" or \"open\", or ground = \"layer-2\"",
        );
    }
    ground
}

/// One layer below the filter's ground.
fn read_below(t: &Table<'_>, laminate: Option<&Laminate>) -> Option<Below> {
    let material = t.resolve("material", "\"glass-epoxy core and bond ply\"", None, |t, k| t.line(k, 100));
    let permittivity = t.resolve("permittivity", "4.3", None, |t, k| t.number(k, 1.0, 100.0));
    let thickness_m = t.size("thickness", &DIELECTRIC, None);
    let usual = thickness_m.map(|thickness| crate::base::Nm::from_m(BELOW_VARIES_BY * thickness).m());
    let thickness_tolerance_m = thickness_m.and_then(|_| t.size("thickness-tolerance", &TOLERANCE, usual));
    let copper_m = t.size("copper", &FOIL, laminate.map(|laminate| laminate.copper.base_m));
    t.has("thickness-tolerance");
    t.finish();
    Some(Below {
        material: material?,
        permittivity: permittivity?,
        thickness_m: thickness_m?,
        thickness_tolerance_m: thickness_tolerance_m?,
        copper_m: copper_m?,
    })
}

/// One slot.
fn slot(t: &Table<'_>, board: Option<[f64; 2]>) -> Option<SlotRequest> {
    let end = |key, example| t.resolve(key, example, None, |t, k| t.quantities::<2>(k, &PLACE));
    let (from_m, to_m) = (end("from", "[\"10 mm\", \"3 mm\"]"), end("to", "[\"14 mm\", \"3 mm\"]"));
    let width_m = t.size("width", &SLOT, None);
    let plated = t.resolve("plated", "false", Some(false), |t, k| t.flag(k));
    t.finish();
    let slot = SlotRequest { from_m: from_m?, to_m: to_m?, width_m: width_m?, plated: plated? };
    if slot.from_m == slot.to_m {
        t.error(
            "edges-reversed",
            "to",
            "from and to are the same point, so the slot is a hole",
            "give two ends, or a [[board.mounting-hole]]",
        );
    }
    let radius = slot.width_m / 2.0;
    let off = |board: [f64; 2]| {
        [slot.from_m, slot.to_m].iter().any(|end| end.iter().zip(board).any(|(at, side)| at - radius <= 0.0 || at + radius >= side))
    };
    if let Some(board) = board.filter(|&board| off(board)) {
        t.error(
            "off-the-board",
            "from",
            format!("the slot does not lie wholly on the board of {} x {}", SIDE.show(board[0]), SIDE.show(board[1])),
            "move the slot, or enlarge board.size",
        );
    }
    Some(slot)
}

/// One plated stretch of an edge.
fn plated_edge(t: &Table<'_>, board: Option<[f64; 2]>) -> Option<PlatedEdgeRequest> {
    let names: Vec<&str> = SIDES.iter().map(|s| s.0).collect();
    let side = t.resolve("side", "\"top\"", None, |t, k| t.word(k, &names).and_then(|i| SIDES.get(i)).map(|s| s.1));
    let (from_m, to_m) = (t.size("from", &PLACE, None), t.size("to", &PLACE, None));
    t.finish();
    let edge = PlatedEdgeRequest { side: side?, from_m: from_m?, to_m: to_m? };
    if edge.from_m >= edge.to_m {
        t.error(
            "edges-reversed",
            "to",
            "to is not beyond from, so the stretch has no length",
            "give from as the end nearer to the lower left corner",
        );
    }
    if let Some(board) = board {
        let length = board[usize::from(matches!(edge.side, Side::Left | Side::Right))];
        if edge.to_m > length {
            t.error(
                "off-the-board",
                "to",
                format!("the stretch ends at {}, the edge at {}", PLACE.show(edge.to_m), PLACE.show(length)),
                "shorten the stretch, or enlarge board.size",
            );
        }
    }
    Some(edge)
}

/// One keep-out.
fn keep_out(t: &Table<'_>, board: Option<[f64; 2]>) -> Option<KeepOut> {
    let from_m = t.resolve("from", "[\"0 mm\", \"0 mm\"]", None, |t, k| t.quantities::<2>(k, &PLACE));
    let to_m = t.resolve("to", "[\"5 mm\", \"5 mm\"]", None, |t, k| t.quantities::<2>(k, &PLACE));
    t.finish();
    let area = KeepOut { from_m: from_m?, to_m: to_m? };
    if area.from_m.iter().zip(area.to_m).any(|(from, to)| *from >= to) {
        t.error(
            "edges-reversed",
            "to",
            "to is not above and to the right of from, so the rectangle has no area",
            "give the lower left corner as from and the upper right corner as to",
        );
    }
    if let Some(board) = board
        && area.from_m.iter().zip(board).any(|(from, side)| *from >= side)
    {
        t.error(
            "off-the-board",
            "from",
            format!("the keep-out lies beside the board of {} x {}", SIDE.show(board[0]), SIDE.show(board[1])),
            "move the rectangle, or enlarge board.size",
        );
    }
    Some(area)
}

/// Reads `[housing]`.
pub fn read_housing(t: &Table<'_>) -> Option<Housing> {
    let lid_m = t.quantity("lid", &LID);
    let inside_m = t.quantities::<2>("inside", &SIDE);
    if !t.has("lid") && !t.has("inside") {
        t.error(
            "housing-empty",
            "lid",
            "[housing] names neither a lid nor an inside",
            "add lid = \"10 mm\" or inside = [\"70 mm\", \"30 mm\"], or leave [housing] out",
        );
    }
    t.finish();
    Some(Housing { lid_m, inside_m })
}
