//! How a layout becomes a board: circuit, launches, grounds, mask, text and outline, put together once.

use std::collections::BTreeMap;

use crate::artwork::Board;
use crate::artwork::Callout;
use crate::artwork::Face;
use crate::artwork::Hole;
use crate::artwork::HoleUse;
use crate::artwork::Layer;
use crate::artwork::Port;
use crate::artwork::Role;
use crate::artwork::Shape;
use crate::artwork::Slot;
use crate::artwork::callout::callouts;
use crate::artwork::copper;
use crate::artwork::frame::Seat;
use crate::artwork::frame::Turn;
use crate::artwork::frame::quarters;
use crate::artwork::ground;
use crate::artwork::launch;
use crate::artwork::launch::Launched;
use crate::artwork::launch::Mouth;
use crate::artwork::legend;
use crate::artwork::mask;
use crate::artwork::nets;
use crate::artwork::outline;
use crate::artwork::shape::Piece;
use crate::artwork::shape::Region;
use crate::artwork::shape::Ring;
use crate::artwork::shape::bounds;
use crate::artwork::shape::disc;
use crate::artwork::shape::rectangle;
use crate::base::Nm;
use crate::base::Outcome;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::layout::Layout;
use crate::layout::Node;
use crate::layout::Part;
use crate::order::LaunchShape;
use crate::order::Mask;
use crate::order::Order;
use crate::order::Side;
use crate::order::TextOn;

/// The circuit in the drawing's frame, level and with square feed ends, before it is seated on the board.
pub(super) struct Placed {
    pub circuit: Region,
    bends: Vec<Ring>,
    planes: [Node; 2],
    pub mouths: [Mouth; 2],
    pub shapes: [LaunchShape; 2],
    holes: Vec<copper::PartHole>,
    turn: Turn,
    angle_deg: f64,
}

/// Draws the board: everything that can be made, finished size, origin at the lower left corner.
///
/// # Errors
/// `layout-incomplete`, `ports-not-opposite`, `launch-without-edge`, `board-too-small`, `no-room-for-wall`, `housing-too-small`, `hole-off-the-board`,
/// `slot-off-the-board`, `plated-edge-off-the-board`:
/// the order asks for what cannot be drawn. Warnings: text that found no room or no letter.
pub fn board(order: &Order, layout: &Layout) -> Outcome<Board> {
    let mut problems = Vec::new();
    let placed = place(order, layout)?;
    let Some(quarters) = quarters(order.board.port_side) else {
        return Err(vec![Problem::error(
            "ports-not-opposite",
            Place::Key("board.port-side".to_string()),
            "the two ports must leave by opposite edges",
            "port-side = [\"left\", \"right\"]",
        )]);
    };
    if !order.board.outline && placed.shapes.iter().any(|shape| matches!(shape, LaunchShape::EdgeCoax { .. })) {
        return Err(vec![Problem::error(
            "launch-without-edge",
            Place::Key("board.launch".to_string()),
            format!("launch \"{}\" clamps a board's edge, and outline = \"none\" draws no edge", order.board.launch.class),
            "launch = \"open\", or leave board.outline out",
        )]);
    }
    let [low, high] = outline::corners(order, &placed, quarters)?;
    let seat = Seat::new(quarters, low, high);
    let (one, other) = (seat.point(low), seat.point(high));
    let size = Point { x: one.x.max(other.x), y: one.y.max(other.y) };

    let edges = [low.x, high.x];
    let launches: Vec<Launched> = (0..2)
        .map(|i| {
            let (shop, height_m) = (&order.shop, order.laminate.thickness_m);
            launch::draw(&placed.shapes[i], shop, height_m, order.board.outline, placed.mouths[i], i + 1, edges[i]).seated(&seat)
        })
        .collect();

    let circuit = placed.circuit.mapped(|p| seat.point(p));
    let joined: Vec<Ring> = placed.bends.iter().map(|ring| seat.ring(ring)).chain(launches.iter().flat_map(|l| l.signal.clone())).collect();
    let signal = circuit.union(&Region::union_of(&joined));

    let mut holes: Vec<Hole> = launches.iter().flat_map(|launch| launch.holes.iter().cloned()).collect();
    holes.extend(placed.holes.iter().map(|hole| Hole {
        at: seat.point(hole.at),
        diameter: hole.diameter,
        pad: hole.pad,
        purpose: HoleUse::Via,
        net: nets::GROUND.to_string(),
    }));
    holes.extend(mounting_holes(order, size, &mut problems));
    let slots = ground::slots(order);
    problems.extend(slots_off_the_board(order, &slots, size));
    let (plated_edges, edge_copper) = ground::plated_edges(order, size);
    problems.extend(edges_off_the_board(order, size));
    // Joined on every layer: what is plated through.
    let through = ground::slot_rings(order, &slots).union(&edge_copper);
    let clearances = ground::clearances(order, &holes).union(&ground::slot_clearances(order, &slots));
    let keep_outs = Region::union_of(&keep_out_rings(order));
    let pads = Region::union_of(&launches.iter().flat_map(|launch| launch.ground.clone()).collect::<Vec<_>>());
    let mut wall = Region::default();
    if let Some(inside_m) = order.housing.and_then(|housing| housing.inside_m) {
        let inside = inside_m.map(Nm::from_m);
        if let Some(problem) = housing_too_small(&circuit, placed.planes.map(|plane| seat.point(plane.middle())), &seat, inside, size) {
            problems.push(problem);
        }
        let away = Nm::from_m((launch::GROUND_REACH_HEIGHTS * order.laminate.thickness_m).max(order.shop.gap_m));
        wall = ground::wall(order, size, inside)
            .difference(&ground::port_openings(&launches, away))
            .difference(&clearances)
            .difference(&keep_outs);
        let fence = ground::wall_fence(order, size, inside, &wall.union(&pads), &holes);
        holes.extend(fence);
    }
    let mut top_ground = pads.union(&wall).union(&through).difference(&clearances).difference(&keep_outs);
    let plane = ground::bottom(order, size, &launches, &holes)
        .union(&through)
        .difference(&ground::slot_clearances(order, &slots))
        .intersection(&Region::rectangle(Point::default(), size));
    if order.copper_layers() > 2 {
        let top = signal.union(&top_ground).union(&keep_outs);
        let stitches = ground::stitching(order, size, &top, &plane, &holes);
        let lands: Vec<Ring> = stitches.iter().map(|hole| disc(hole.at, Nm(hole.pad.0 / 2))).collect();
        top_ground = top_ground.union(&Region::union_of(&lands));
        holes.extend(stitches);
    }
    holes.sort_by_key(|hole| (hole.purpose, hole.at, hole.diameter, hole.pad));
    if problems.iter().any(Problem::is_error) {
        return Err(problems);
    }

    let plated: Vec<Point> = holes.iter().filter(|hole| hole.is_plated()).map(|hole| hole.at).collect();
    let touch = [0, 1].map(|i| middle(&launches[i].touch));
    let mut strips = nets::named(&signal, &top_ground, &plated, touch);
    let ports = ports(&placed, feed_runs(order, &placed, edges), &launches, &seat, &strips);
    let lands: Vec<_> = launches
        .iter()
        .flat_map(|launch| launch.lands.iter().cloned())
        .map(|mut land| {
            // The land of a port carries the net its copper really has.
            if land.net != nets::GROUND
                && let Some(port) = ports.iter().find(|port| land.net == format!("PORT{}", port.number))
            {
                land.net.clone_from(&port.net);
            }
            land
        })
        .collect();

    let board_area = Region::rectangle(Point::default(), size);
    let mut layers: BTreeMap<Layer, Vec<Shape>> = BTreeMap::new();
    strips.extend(shapes(&top_ground, Role::Ground, nets::GROUND));
    layers.insert(Layer::Copper(1), strips);
    for number in 2..=order.copper_layers() {
        layers.insert(Layer::Copper(number), shapes(&plane, Role::Ground, nets::GROUND));
    }
    let mut openings = [Region::default(), Region::default()];
    if order.board.mask == Mask::ClearOfFilter {
        let corners: Vec<Point> = circuit.rings().flatten().copied().collect();
        openings = [mask::top(order, &board_area, &corners, &lands, &wall, &holes), mask::bottom(order, &board_area, &lands, &holes)];
        layers.insert(Layer::Mask(Face::Top), shapes(&openings[0], Role::Opening, ""));
        // On a carrier the lower face is bare laminate.
        if order.copper_layers() > 1 {
            layers.insert(Layer::Mask(Face::Bottom), shapes(&openings[1], Role::Opening, ""));
        }
    }
    if order.board.text != TextOn::None {
        let mut room = legend::room(order, size, &circuit, &[&signal, &top_ground, &openings[0], &keep_outs], &launches, &holes);
        let (text, warnings) = legend::drawn(order, &mut room, touch);
        problems.extend(warnings);
        let layer = if order.board.text == TextOn::Copper { Layer::Copper(1) } else { Layer::Legend(Face::Top) };
        if !text.pieces.is_empty() {
            layers.entry(layer).or_default().extend(shapes(&text, Role::Text, ""));
        }
    }

    let on_board = |p: Point| seat.point(placed.turn.point(p));
    let mut called: Vec<Callout> =
        callouts(layout).into_iter().map(|c| Callout { from: on_board(c.from), to: on_board(c.to), ..c }).collect();
    called.extend(launch_gaps(layout, &launches));
    Ok((
        Board {
            outline: Shape { outer: rectangle(Point::default(), size), voids: Vec::new(), role: Role::Ground, net: String::new() },
            outline_drawn: order.board.outline,
            layers,
            holes,
            slots,
            plated_edges,
            lands,
            ports,
            circuit: circuit.bounds().unwrap_or_default(),
            callouts: called,
            turn_deg: placed.angle_deg + 90.0 * f64::from(quarters),
            expected_nets: layout.expected_nets,
        },
        problems,
    ))
}

/// The circuit's copper, turned, with its feed ends made square.
fn place(order: &Order, layout: &Layout) -> Result<Placed, Vec<Problem>> {
    let incomplete =
        |what: String| vec![Problem::error("layout-incomplete", Place::Whole, what, "the layout must name its nodes and two ports")];
    let node = |i: usize| layout.nodes.get(i).copied().ok_or_else(|| incomplete(format!("a part names node {i}, and there is none")));
    let mut rings = Vec::new();
    let mut holes = Vec::new();
    for placed in &layout.parts {
        let nodes = placed.nodes.iter().map(|&i| node(i)).collect::<Result<Vec<Node>, _>>()?;
        let drawn = copper::rings(&placed.part, &nodes)
            .ok_or_else(|| incomplete(format!("a part has {} nodes, which is not what it joins: {:?}", nodes.len(), placed.part)))?;
        rings.extend(drawn);
        holes.extend(copper::holes(&placed.part, &nodes));
    }
    let [first, second] = layout.ports[..] else {
        return Err(incomplete(format!("{} ports, not two", layout.ports.len())));
    };
    let nodes = [node(first)?, node(second)?];
    let launch = |port: usize| layout.launch(port).copied().ok_or_else(|| incomplete(format!("port {port} has no launch")));
    let shapes = [launch(1)?, launch(2)?];
    let circuit = Region::union_of(&rings);
    if circuit.pieces.is_empty() {
        return Err(incomplete("no copper at all".to_string()));
    }
    let angle_deg = if layout.turn_deg == 0.0 && order.board.level { level_deg(nodes) } else { layout.turn_deg };
    let turn = Turn::by(angle_deg.to_radians());
    let circuit = if angle_deg == 0.0 { circuit } else { circuit.mapped(|p| turn.point(p)) };
    let holes = holes.into_iter().map(|hole| copper::PartHole { at: turn.point(hole.at), ..hole }).collect();
    let planes = nodes.map(|node| turn.node(node));
    let (one, other) = (launch::square_mouth(planes[0], -1), launch::square_mouth(planes[1], 1));
    Ok(Placed {
        circuit,
        bends: one.1.into_iter().chain(other.1).collect(),
        planes,
        mouths: [one.0, other.0],
        shapes,
        holes,
        turn,
        angle_deg,
    })
}

/// The turn that brings both ports to one height.
fn level_deg(nodes: [Node; 2]) -> f64 {
    let [a, b] = nodes.map(|node| node.middle());
    let (dx, dy) = ((b.x - a.x).m(), (b.y - a.y).m());
    if dy == 0.0 { 0.0 } else { -dy.atan2(dx).to_degrees() }
}

/// How far each feed runs on beyond its layout to reach the launch at the board's edge.
fn feed_runs(order: &Order, placed: &Placed, edges: [Nm; 2]) -> [Nm; 2] {
    [0, 1].map(|i| {
        let mouth = &placed.mouths[i];
        (mouth.low.x - edges[i]).abs() - launch::extent(&placed.shapes[i], &order.shop, order.board.outline, mouth.width()).length
    })
}

/// The mounting holes as ordered; one that is not wholly on the board is an error.
fn mounting_holes(order: &Order, size: Point, problems: &mut Vec<Problem>) -> Vec<Hole> {
    let mut holes = Vec::new();
    for (i, hole) in order.board.mounting_holes.iter().enumerate() {
        let (at, diameter) = (Point::from_m(hole.at_m[0], hole.at_m[1]), Nm::from_m(hole.diameter_m));
        let reach = Nm(diameter.0 / 2) + Nm::from_m(order.shop.edge_clearance_m);
        if at.x < reach || at.y < reach || at.x > size.x - reach || at.y > size.y - reach {
            problems.push(Problem::error(
                "hole-off-the-board",
                Place::Key(format!("board.mounting-hole[{i}]")),
                format!(
                    "the hole of {:.3} mm at ({:.3}, {:.3}) mm does not lie on the board of {:.3} mm x {:.3} mm with {:.3} mm to the edge",
                    diameter.mm(),
                    at.x.mm(),
                    at.y.mm(),
                    size.x.mm(),
                    size.y.mm(),
                    order.shop.edge_clearance_m * 1e3
                ),
                format!(
                    "keep x within {:.3} .. {:.3} mm and y within {:.3} .. {:.3} mm",
                    reach.mm(),
                    (size.x - reach).mm(),
                    reach.mm(),
                    (size.y - reach).mm()
                ),
            ));
        }
        holes.push(Hole { at, diameter, pad: Nm::ZERO, purpose: HoleUse::Mounting, net: String::new() });
    }
    holes
}

/// Slots that do not lie wholly on the board.
fn slots_off_the_board(order: &Order, slots: &[Slot], size: Point) -> Vec<Problem> {
    let off = |slot: &Slot| {
        let reach = Nm(slot.width.0 / 2) + Nm::from_m(order.shop.edge_clearance_m);
        [slot.from, slot.to].iter().any(|at| at.x < reach || at.y < reach || at.x > size.x - reach || at.y > size.y - reach)
    };
    let outside = slots.iter().enumerate().filter(|(_, slot)| off(slot));
    outside
        .map(|(i, slot)| {
            Problem::error(
                "slot-off-the-board",
                Place::Key(format!("board.slot[{i}]")),
                format!(
                    "the slot of {:.3} mm from ({:.3}, {:.3}) to ({:.3}, {:.3}) mm does not lie on the board of {:.3} mm x {:.3} mm with {:.3} mm to the edge",
                    slot.width.mm(),
                    slot.from.x.mm(),
                    slot.from.y.mm(),
                    slot.to.x.mm(),
                    slot.to.y.mm(),
                    size.x.mm(),
                    size.y.mm(),
                    order.shop.edge_clearance_m * 1e3
                ),
                "move the slot inwards, or enlarge the board",
            )
        })
        .collect()
}

/// Plated stretches that reach beyond the end of their edge.
fn edges_off_the_board(order: &Order, size: Point) -> Vec<Problem> {
    let length = |side| if matches!(side, Side::Bottom | Side::Top) { size.x } else { size.y };
    let beyond = order.board.plated_edges.iter().enumerate().filter(|(_, edge)| Nm::from_m(edge.to_m) > length(edge.side));
    beyond
        .map(|(i, edge)| {
            Problem::error(
                "plated-edge-off-the-board",
                Place::Key(format!("board.plated-edge[{i}]")),
                format!("the stretch ends at {:.3} mm, the edge at {:.3} mm", edge.to_m * 1e3, length(edge.side).mm()),
                format!("to = \"{:.3} mm\" or less", length(edge.side).mm()),
            )
        })
        .collect()
}

/// An error when the circuit does not lie within the housing: across, all of it; along, what is not a feed, since feeds pass the wall.
fn housing_too_small(circuit: &Region, planes: [Point; 2], seat: &Seat, inside: [Nm; 2], size: Point) -> Option<Problem> {
    let fed = |piece: &&Piece| planes.iter().any(|&plane| piece.contains(plane));
    let resonators = bounds(circuit.pieces.iter().filter(|piece| !fed(piece)).flat_map(|piece| piece.outer.iter().copied()));
    let whole = circuit.bounds()?;
    let along = resonators.unwrap_or(whole);
    let (x, y) = if seat.is_upright() { (whole, along) } else { (along, whole) };
    let middle = Point::new(size.x.0 / 2, size.y.0 / 2);
    let needed = [(x[1].x - middle.x).max(middle.x - x[0].x), (y[1].y - middle.y).max(middle.y - y[0].y)].map(|v| v + v);
    (needed[0] > inside[0] || needed[1] > inside[1]).then(|| {
        Problem::error(
            "housing-too-small",
            Place::Key("housing.inside".to_string()),
            format!(
                "the circuit needs {:.3} mm x {:.3} mm, the housing's inside is {:.3} mm x {:.3} mm",
                needed[0].mm(),
                needed[1].mm(),
                inside[0].mm(),
                inside[1].mm()
            ),
            format!("inside = [\"{:.1} mm\", \"{:.1} mm\"] or larger", needed[0].mm() + 0.1, needed[1].mm() + 0.1),
        )
    })
}

/// The keep-outs as rings.
fn keep_out_rings(order: &Order) -> Vec<Ring> {
    order.board.keep_outs.iter().map(|k| rectangle(Point::from_m(k.from_m[0], k.from_m[1]), Point::from_m(k.to_m[0], k.to_m[1]))).collect()
}

/// The gap of each launch whose part is drawn from a dimension named a gap.
fn launch_gaps(layout: &Layout, launches: &[Launched]) -> Vec<Callout> {
    let mut called = Vec::new();
    for placed in &layout.parts {
        let Part::Launch { port, .. } = placed.part else { continue };
        let gap = port.checked_sub(1).and_then(|i| launches.get(i)).and_then(|launch| launch.gap);
        let name = placed.serves.iter().find(|name| name.split(' ').any(|word| word == "gap"));
        if let (Some([from, to]), Some(name)) = (gap, name) {
            called.push(Callout { dimension: name.clone(), from, to });
        }
    }
    called
}

/// The ports on the board, with the net their copper has.
fn ports(placed: &Placed, runs: [Nm; 2], launches: &[Launched], seat: &Seat, strips: &[Shape]) -> Vec<Port> {
    launches
        .iter()
        .enumerate()
        .map(|(i, launch)| {
            let plane = placed.planes[i];
            let left_is_low = plane.left.y <= plane.right.y;
            let [low, high] = launch.touch;
            let edge = if left_is_low { Node { left: low, right: high } } else { Node { left: high, right: low } };
            let at = middle(&launch.touch);
            let net = strips.iter().find(|shape| Region::from_shape(shape).contains(at)).map_or(String::new(), |shape| shape.net.clone());
            Port { number: i + 1, edge, plane: seat.node(plane), run: runs[i], net }
        })
        .collect()
}

fn shapes(region: &Region, role: Role, net: &str) -> Vec<Shape> {
    let shape = |piece: &Piece| Shape { outer: piece.outer.clone(), voids: piece.voids.clone(), role, net: net.to_string() };
    region.pieces.iter().map(shape).collect()
}

fn middle(ends: &[Point; 2]) -> Point {
    Node { left: ends[0], right: ends[1] }.middle()
}
