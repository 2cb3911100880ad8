//! How large the board is and where the circuit sits on it.

use crate::artwork::assemble::Placed;
use crate::artwork::ground;
use crate::artwork::launch;
use crate::artwork::launch::Extent;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::order::BoardSize;
use crate::order::Order;

/// A board sized from a margin is rounded up to this.
const SIZE_STEP: Nm = Nm(100_000);

/// Lower left and upper right corner of the board in the drawing's frame.
pub(super) fn corners(order: &Order, placed: &Placed, quarters: u8) -> Result<[Point; 2], Vec<Problem>> {
    let request = &order.board;
    let extents: [Extent; 2] = [0, 1].map(|i| launch::extent(&placed.shapes[i], &order.shop, request.outline, placed.mouths[i].width()));
    let Some([low, high]) = placed.circuit.bounds() else { return Ok([Point::default(); 2]) };
    let clearance = if request.outline { Nm::from_m(order.shop.edge_clearance_m) } else { Nm::ZERO };
    let margin = match request.size {
        BoardSize::Margin(margin_m) => Nm::from_m(margin_m),
        BoardSize::Fixed(_) => clearance,
    };
    // Along the ports: the launches, and whatever of the circuit reaches beyond a feed's end.
    let feeds = [placed.mouths[0].low.x, placed.mouths[1].low.x];
    let beyond = |reach: Nm, launch: Nm| if reach > Nm::ZERO { launch.max(reach + clearance) } else { launch };
    let mut left = feeds[0] - beyond(feeds[0] - low.x, extents[0].length);
    let mut right = feeds[1] + beyond(high.x - feeds[1], extents[1].length);
    // Across: the circuit with its margin, the launches with the clearance to the edge; the middle moved by the port offset.
    let sides = placed.mouths.iter().zip(extents).map(|(mouth, extent)| {
        let middle = Nm((mouth.low.y.0 + mouth.high.y.0) / 2);
        [middle - extent.half_width - clearance, middle + extent.half_width + clearance]
    });
    let (bottom, top) = sides.fold((low.y - margin, high.y + margin), |(b, t), [from, to]| (b.min(from), t.max(to)));
    let sign = if matches!(quarters, 0 | 3) { 1 } else { -1 };
    let middle_y = Nm((low.y.0 + high.y.0).div_euclid(2)) - Nm(sign * Nm::from_m(request.port_offset_m).0);
    let half = (middle_y - bottom).max(top - middle_y);
    let upright = quarters % 2 == 1;
    let needed = [right - left, half + half];
    let on_board = |size: [Nm; 2]| if upright { [size[1], size[0]] } else { size };
    // A wall stands on the board, and the launches reach through it.
    let walled = order.housing.and_then(|housing| housing.inside_m).map(|inside_m| {
        let inside = on_board(inside_m.map(Nm::from_m));
        inside.map(|v| v + ground::WALL_WIDTH + ground::WALL_WIDTH)
    });
    let clear_of_edges = clearance + clearance;
    let size = match request.size {
        BoardSize::Margin(_) => {
            let with_wall =
                walled.map_or(needed, |walled| [needed[0].max(walled[0] + clear_of_edges), needed[1].max(walled[1] + clear_of_edges)]);
            with_wall.map(|v| Nm((v.0 + SIZE_STEP.0 - 1) / SIZE_STEP.0 * SIZE_STEP.0))
        }
        BoardSize::Fixed(size_m) => {
            let size = on_board(size_m.map(Nm::from_m));
            if size[0] < needed[0] || size[1] < needed[1] {
                let up = on_board(needed).map(|v| Nm((v.0 + SIZE_STEP.0 - 1) / SIZE_STEP.0 * SIZE_STEP.0));
                return Err(vec![Problem::error(
                    "board-too-small",
                    Place::Key("board.size".to_string()),
                    format!(
                        "circuit and launches need {:.3} mm x {:.3} mm, the board is {:.3} mm x {:.3} mm",
                        on_board(needed)[0].mm(),
                        on_board(needed)[1].mm(),
                        size_m[0] * 1e3,
                        size_m[1] * 1e3
                    ),
                    format!("size = [\"{:.1} mm\", \"{:.1} mm\"] or larger", up[0].mm(), up[1].mm()),
                )]);
            }
            if let Some(problem) = walled.and_then(|walled| no_room_for_wall(size, walled.map(|v| v + clear_of_edges), &on_board)) {
                return Err(vec![problem]);
            }
            size
        }
    };
    let spare = size[0] - (right - left);
    left = left - Nm(spare.0 / 2);
    right = left + size[0];
    let bottom = middle_y - Nm(size[1].0 / 2);
    Ok([Point { x: left, y: bottom }, Point { x: right, y: bottom + size[1] }])
}

/// An error when the board ends within the wall's footprint; a board that lies wholly within the housing has no footprint and is fine.
fn no_room_for_wall(size: [Nm; 2], walled: [Nm; 2], on_board: &impl Fn([Nm; 2]) -> [Nm; 2]) -> Option<Problem> {
    let inside = walled.map(|v| v - ground::WALL_WIDTH - ground::WALL_WIDTH);
    let cuts = (0..2).any(|i| size[i] > inside[i] && size[i] < walled[i]);
    cuts.then(|| {
        let (walled, inside) = (on_board(walled), on_board(inside));
        Problem::error(
            "no-room-for-wall",
            Place::Key("board.size".to_string()),
            format!(
                "the board ends within the footprint of the housing's wall, which takes {:.2} mm x {:.2} mm with its clearance",
                walled[0].mm(),
                walled[1].mm()
            ),
            format!(
                "a size of at least {:.2} mm x {:.2} mm, or within the housing, up to {:.2} mm x {:.2} mm",
                walled[0].mm(),
                walled[1].mm(),
                inside[0].mm(),
                inside[1].mm()
            ),
        )
    })
}
