//! Which hole is which? `<name>-drillmap.gbr`: the board's edge, a letter at every hole, the drill table above. A drawing, no drill data.

use std::io;
use std::io::Write;

use crate::artwork::Role;
use crate::artwork::Shape;
use crate::artwork::lettering;
use crate::base::Nm;
use crate::base::Point;
use crate::package::facts;
use crate::package::facts::mm;
use crate::package::gerber;
use crate::package::job::Job;

/// Letters of the table.
const TEXT: Nm = Nm(1_500_000);
/// Letters at the holes: as high as the hole, within these.
const LETTER: [Nm; 2] = [Nm(400_000), Nm(2_000_000)];
/// Of a letter's height: the stroke.
const STROKES: i64 = 9;
/// The table stands this far above the board.
const ABOVE: Nm = Nm(4_000_000);

/// Writes the map.
pub fn write(job: &Job, out: &mut dyn Write) -> io::Result<()> {
    let (order, board) = (job.order(), job.bundle.board);
    let kinds = facts::hole_kinds(board);
    let mut shapes = Vec::new();
    let mut put = |text: &str, height: Nm, at: Point, centred: bool| {
        let region = lettering(&[text.to_string()], height, Nm(height.0 / STROKES));
        let shift = match region.bounds() {
            Some([low, high]) if centred => Point::new((low.x + high.x).0 / 2, (low.y + high.y).0 / 2),
            _ => Point::default(),
        };
        shapes.extend(region.pieces.into_iter().map(|piece| {
            let place = |ring: Vec<Point>| ring.into_iter().map(|p| p.shifted(at.x - shift.x, at.y - shift.y)).collect::<Vec<_>>();
            Shape { outer: place(piece.outer), voids: piece.voids.into_iter().map(place).collect(), role: Role::Text, net: String::new() }
        }));
    };
    for kind in &kinds {
        for &at in &kind.at {
            put(&kind.symbol, kind.diameter.max(LETTER[0]).min(LETTER[1]), at, true);
        }
    }
    let top = facts::size(board)[1] + ABOVE;
    let mut lines: Vec<String> = kinds
        .iter()
        .map(|kind| {
            let size = kind.length.map_or(mm(kind.diameter.m()), |length| format!("{} x {}", mm(kind.diameter.m()), mm(length.m())));
            let plated = if kind.plated { "plated" } else { "not plated" };
            let tolerance = mm(order.shop.hole_tolerance_m);
            format!("{}  {size} +/-{tolerance} mm  {plated}  {} pieces  {}", kind.symbol, kind.at.len(), kind.purpose)
        })
        .collect();
    lines.insert(
        0,
        format!("DRILL MAP  {}  REVISION {}  FINISHED SIZES, LAYERS 1 TO {}", order.name, order.revision, order.copper_layers()),
    );
    for (row, line) in lines.iter().rev().enumerate() {
        put(&crate::base::spelt_out(line).0, TEXT, Point { x: Nm::ZERO, y: top + Nm(row as i64 * 2 * TEXT.0) }, false);
    }
    gerber::drawing(job, &shapes, out)
}
