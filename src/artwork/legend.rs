//! What the board says about itself: title, name, revision, part number, what the artwork was made for, port numbers.

use crate::artwork::Hole;
use crate::artwork::launch::Launched;
use crate::artwork::room::Room;
use crate::artwork::shape::CHORD_ERROR;
use crate::artwork::shape::Piece;
use crate::artwork::shape::Region;
use crate::artwork::shape::Ring;
use crate::artwork::shape::disc;
use crate::artwork::shape::rectangle;
use crate::artwork::text::Block;
use crate::artwork::text::upright;
use crate::artwork::text::wrapped;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::base::spelt_out;
use crate::order::Order;
use crate::order::TextOn;

/// Heights tried from the most readable down; the shop's least comes last.
const HEIGHTS: [Nm; 3] = [Nm(1_800_000), Nm(1_400_000), Nm(1_000_000)];
/// Stroke of a letter as a share of its height.
const STROKE_SHARE: f64 = 0.12;
/// A letter's strokes leave no counters when they are thicker than this share of its height.
const MAX_STROKE_SHARE: f64 = 0.2;
/// Where long lines find no place, they are wrapped at so many letters.
const WRAPS: [usize; 3] = [24, 16, 10];
/// A port's number stands within this distance of the port or not at all.
const PORT_NUMBER_REACH: Nm = Nm(20_000_000);

/// Legend print keeps this far from lands, holes and strips.
const LEGEND_CLEARANCE_M: f64 = 0.3e-3;
/// Text keeps at least this far from the board's edge.
const EDGE_M: f64 = 0.5e-3;
/// Etched text keeps this many laminate thicknesses, and at least this far, from the strips of the circuit.
const ETCHED_TEXT_HEIGHTS: f64 = 3.0;
const ETCHED_TEXT_M: f64 = 1e-3;

/// Where text may stand: clear of the circuit, of `others` (launches, ground, mask openings, keep-outs), of holes and of the edge.
pub(super) fn room(order: &Order, size: Point, circuit: &Region, others: &[&Region], launches: &[Launched], holes: &[Hole]) -> Room {
    let etched = order.board.text == TextOn::Copper;
    let shop = &order.shop;
    let edge = Nm::from_m(shop.edge_clearance_m.max(EDGE_M));
    let clear = Nm::from_m(if etched { shop.gap_m.max(LEGEND_CLEARANCE_M) } else { LEGEND_CLEARANCE_M });
    let etched_clear = Nm::from_m((ETCHED_TEXT_HEIGHTS * order.laminate.thickness_m).max(ETCHED_TEXT_M));
    let mut obstacles = circuit.offset(if etched { etched_clear } else { clear }).pieces;
    obstacles.extend(others.iter().flat_map(|region| region.offset(clear).pieces));
    let mut rings: Vec<Ring> = launches.iter().map(|launch| launch.footprint.clone()).collect();
    rings.extend(holes.iter().map(|hole| disc(hole.at, Nm(hole.diameter.max(hole.pad).0 / 2) + clear)));
    obstacles.extend(rings.into_iter().map(|outer| Piece { outer, voids: Vec::new() }));
    Room::new(Point { x: edge, y: edge }, Point { x: size.x - edge, y: size.y - edge }, &obstacles)
}

/// The lines, most wanted first, spelt in letters the font has.
fn lines(order: &Order, problems: &mut Vec<Problem>) -> Vec<String> {
    let part = if order.part_number == order.name { String::new() } else { format!("  {}", order.part_number) };
    let wanted = [
        format!("{}  rev {}{part}", order.name, order.revision),
        format!("er {}  h {} mm", short(order.laminate.permittivity), short(order.laminate.thickness_m * 1e3)),
        order.title.clone(),
    ];
    let mut lost = Vec::new();
    let lines = wanted
        .iter()
        .map(|line| {
            let (spelt, missing) = spelt_out(line);
            lost.extend(missing);
            spelt
        })
        .filter(|line| !line.is_empty())
        .collect();
    lost.sort_unstable();
    lost.dedup();
    if !lost.is_empty() {
        let shown: Vec<String> = lost.iter().map(|c| format!("'{}'", c.escape_default())).collect();
        problems.push(Problem::warning(
            "text-character-replaced",
            Place::Key("order.title".to_string()),
            format!("the board's lettering has no {}; '?' is drawn instead", shown.join(", ")),
            "write title, revision and part-number in Latin letters",
        ));
    }
    lines
}

/// Four decimals without trailing zeros.
fn short(value: f64) -> String {
    let text = format!("{value:.4}");
    text.trim_end_matches('0').trim_end_matches('.').to_string()
}

/// The text as area, placed where the room is free; warns when lines had to be left out.
pub(super) fn drawn(order: &Order, room: &mut Room, ports: [Point; 2]) -> (Region, Vec<Problem>) {
    let mut problems = Vec::new();
    let shop = &order.shop;
    // Round ends are chords: a little more keeps every place of a stroke at the shop's least.
    let least_stroke = Nm::from_m(shop.text_stroke_m) + CHORD_ERROR + CHORD_ERROR;
    // The shop's stroke must leave room for counters, so that a coarse stroke asks for a greater height.
    let least_height = Nm::from_m(shop.text_height_m.max(shop.text_stroke_m / MAX_STROKE_SHARE));
    let mut heights: Vec<Nm> = HEIGHTS.into_iter().filter(|&h| h > least_height).collect();
    heights.push(least_height);
    let stroke = |height: Nm| least_stroke.max(Nm((height.0 as f64 * STROKE_SHARE) as i64));
    let mut area = Region::default();
    let mut put = |region: Region, at: Point, size: [Nm; 2], room: &mut Room| {
        let mut region = region;
        region.shift(at.x, at.y);
        area.pieces.extend(region.pieces);
        room.take(&Piece { outer: rectangle(at, at.shifted(size[0], size[1])), voids: Vec::new() });
    };
    let mut missing_ports = Vec::new();
    for (i, &port) in ports.iter().enumerate() {
        let number = (i + 1).to_string();
        let height = heights.first().copied().unwrap_or(least_height);
        let block = Block::new(std::slice::from_ref(&number), height, stroke(height));
        match room.place(block.size(), port).filter(|&at| near(at, port)) {
            Some(at) => put(block.drawn(), at, block.size(), room),
            None => missing_ports.push(number),
        }
    }
    let wanted = lines(order, &mut problems);
    let target = room.corner();
    let mut written = 0;
    'fits: for count in (1..=wanted.len()).rev() {
        // The title stands on top when it is there; the others keep their order.
        let mut lines: Vec<String> = wanted[..count].to_vec();
        if count == 3 {
            lines.rotate_right(1);
        }
        for lines in std::iter::once(lines.clone()).chain(WRAPS.map(|most| wrapped(&lines, most))) {
            for &height in &heights {
                let block = Block::new(&lines, height, stroke(height));
                let [length, width] = block.size();
                // Lying text reads better; on a narrow board it stands.
                if let Some(at) = room.place([length, width], target) {
                    put(block.drawn(), at, [length, width], room);
                } else if let Some(at) = room.place([width, length], target) {
                    put(upright(&block.drawn(), width), at, [width, length], room);
                } else {
                    continue;
                }
                written = count;
                break 'fits;
            }
        }
    }
    let mut left_out: Vec<String> = wanted[written..].iter().map(|line| format!("\"{line}\"")).collect();
    left_out.extend(missing_ports.iter().map(|number| format!("the number of port {number}")));
    if !left_out.is_empty() {
        problems.push(Problem::warning(
            "no-room-for-text",
            Place::Key("board.text".to_string()),
            format!("no place {:.2} mm high is free for {}", least_height.mm(), left_out.join(", ")),
            "raise board.margin or board.size, or set board.text = \"none\"",
        ));
    }
    area.pieces.sort();
    (area, problems)
}

fn near(at: Point, port: Point) -> bool {
    (at.x - port.x).abs() <= PORT_NUMBER_REACH && (at.y - port.y).abs() <= PORT_NUMBER_REACH
}
