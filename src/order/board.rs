//! The keys of the board around the circuit, and of lid and walls.

use super::table::{Size, Table};
use super::types::{BoardRequest, BoardSize, Housing, KeepOut, Launch, Mask, MountingHole, Side, TextOn};

const SIDE: Size = Size::length(1.0, 1000.0, "60 mm");
const MARGIN: Size = Size::length(0.0, 200.0, "8 mm");
const OFFSET: Size = Size::length(-1000.0, 1000.0, "0 mm");
const PLACE: Size = Size::length(0.0, 1000.0, "3 mm");
const HOLE: Size = Size::length(0.1, 20.0, "3.2 mm");
const LID: Size = Size::length(0.05, 500.0, "10 mm");

/// The words of `mask`.
pub const MASKS: &[&str] = &["none", "clear-of-filter"];
/// The words of `text`.
pub const TEXTS: &[&str] = &["legend", "copper", "none"];
/// The words of `outline`.
pub const OUTLINES: &[&str] = &["rectangle", "none"];
/// The words of `port-side`.
pub const SIDES: &[(&str, Side)] = &[("left", Side::Left), ("right", Side::Right), ("bottom", Side::Bottom), ("top", Side::Top)];
/// Margin when neither margin nor size is given, metres: room for text and fence on every class of launch.
const USUAL_MARGIN_M: f64 = 8e-3;

/// Reads `[board]`; the launch was read before.
pub fn read(t: &Table<'_>, launch: Option<Launch>) -> Option<BoardRequest> {
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
    t.finish();
    Some(BoardRequest {
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
