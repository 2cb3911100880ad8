//! What must the board house know that the data cannot say? `<name>-fabrication.txt`: plain ASCII, nothing left open.

use std::io;
use std::io::Write;

use crate::artwork::Board;
use crate::artwork::Fits;
use crate::artwork::Hole;
use crate::base::Nm;
use crate::base::spelt_out;
use crate::network::models;
use crate::order::Compensation;
use crate::order::LaminateKind;
use crate::order::Mask;
use crate::order::Order;
use crate::order::StackLayer;
use crate::order::TextOn;
use crate::package::facts;
use crate::package::facts::mm;
use crate::package::facts::um;
use crate::package::job::Job;

/// Widest line.
const WIDTH: usize = 100;
/// Where the value of a field begins.
const VALUE_AT: usize = 24;

/// Writes the note.
pub fn write(job: &Job, out: &mut dyn Write) -> io::Result<()> {
    let (order, board) = (job.order(), job.bundle.board);
    let mut note = Note::default();
    note.lines.push(format!("FABRICATION NOTE   {}   revision {}", order.name, ascii(&order.revision)));
    note.lines.push("=".repeat(WIDTH));
    if job.breaks_a_rule() {
        note.text(facts::DESPITE);
        for finding in job.bundle.findings.iter().filter(|finding| finding.is_error()) {
            note.bullet(&finding.to_string());
        }
    }
    identity(&mut note, job);
    files(&mut note, job);
    outline(&mut note, order, board);
    stack(&mut note, order, board);
    laminate(&mut note, order);
    finish(&mut note, order);
    acceptance(&mut note, order);
    controlled(&mut note, order, board);
    line_model(&mut note, job);
    compensation(&mut note, order);
    forbidden(&mut note, board);
    holes(&mut note, order, board);
    smallest(&mut note, order, board);
    areas(&mut note, order);
    mask_and_legend(&mut note, order, board);
    edges_and_marking(&mut note, order, board);
    test(&mut note, board);
    process(&mut note, order);
    cautions(&mut note, order);
    note.lines.push(String::new());
    note.lines.push("End of note.".to_string());
    for line in note.lines {
        writeln!(out, "{}", line.trim_end())?;
    }
    Ok(())
}

/// Collects lines no wider than [`WIDTH`].
#[derive(Default)]
struct Note {
    lines: Vec<String>,
    sections: usize,
}

impl Note {
    fn section(&mut self, title: &str) {
        self.sections += 1;
        self.lines.push(String::new());
        self.lines.push(format!("{}. {title}", self.sections));
        self.lines.push("-".repeat(WIDTH));
    }

    fn text(&mut self, text: &str) {
        self.wrapped("", "", text);
    }

    fn bullet(&mut self, text: &str) {
        self.wrapped("- ", "  ", text);
    }

    fn field(&mut self, name: &str, value: &str) {
        self.wrapped(&format!("{name:<VALUE_AT$}"), &" ".repeat(VALUE_AT), value);
    }

    fn wrapped(&mut self, first: &str, next: &str, text: &str) {
        let text = ascii(text);
        let mut line = first.to_string();
        let mut empty = true;
        for word in text.split_whitespace() {
            if !empty && line.len() + 1 + word.len() > WIDTH {
                self.lines.push(std::mem::replace(&mut line, next.to_string()));
                empty = true;
            }
            if !empty {
                line.push(' ');
            }
            line.push_str(word);
            empty = false;
        }
        self.lines.push(line);
    }

    /// Columns as wide as their widest cell; the first row is the heading.
    fn table(&mut self, rows: &[Vec<String>]) {
        let columns = rows.iter().map(Vec::len).max().unwrap_or(0);
        let widths: Vec<usize> =
            (0..columns).map(|c| rows.iter().filter_map(|row| row.get(c)).map(String::len).max().unwrap_or(0)).collect();
        for row in rows {
            let cells = row.iter().zip(&widths).map(|(cell, width)| format!("{cell:<width$}"));
            self.lines.push(format!("  {}", cells.collect::<Vec<_>>().join("  ")));
        }
    }
}

fn row(cells: &[&str]) -> Vec<String> {
    cells.iter().map(|cell| (*cell).to_string()).collect()
}

/// The format has no other letters.
fn ascii(text: &str) -> String {
    spelt_out(text).0
}

fn identity(note: &mut Note, job: &Job) {
    let order = job.order();
    note.section("IDENTITY");
    note.field("Title", &order.title);
    note.field("Name", &order.name);
    note.field("Part number", &order.part_number);
    note.field("Revision", &order.revision);
    note.field("Date", order.date.as_deref().unwrap_or("not dated; the revision governs"));
    note.field("Questions to", &order.contact);
    note.field("Project GUID", &job.project.to_string());
    note.field("Coordinates GUID", &format!("{}; every Gerber and drill file of this issue carries it", job.coordinates));
    note.field("Made by", &format!("{} {}", env!("CARGO_PKG_NAME"), env!("CARGO_PKG_VERSION")));
}

fn files(note: &mut Note, job: &Job) {
    note.section("FILES AND WHICH OF THEM GOVERN");
    note.text(
        "The Gerber files (X2, millimetres, six decimals) and the drill files (XNC, millimetres) govern, then this note; the DXF file is for \
         reference. All files share one origin at the lower left corner of the board (without an edge of its own: of the field), scale 1:1, seen from the top; none is mirrored.",
    );
    let listed: Vec<_> = job.written.iter().filter(|file| file.for_board_house).collect();
    if listed.is_empty() {
        note.text("The files for the board house were withheld: a design rule is broken. Nothing may be built from this note alone.");
    }
    for file in listed {
        note.wrapped("  ", "      ", &format!("{} ({})", file.file, file.about));
        note.lines.push(format!("    sha-256 {}", file.sha256));
    }
}

fn outline(note: &mut Note, order: &Order, board: &Board) {
    note.section("BOARD");
    let [x, y] = facts::size(board).map(Nm::m);
    if board.outline_drawn {
        let tolerance = mm(order.board.outline_tolerance_m);
        note.field("Size", &format!("{} mm x {} mm, each +/-{tolerance} mm, {}", mm(x), mm(y), facts::cut(order)));
    } else {
        note.field(
            "Size",
            &format!("none of its own: the filter lies in a larger board, in a field of {} mm x {} mm; no profile file", mm(x), mm(y)),
        );
    }
    note.field("Thickness", &format!("{} mm +/-{} mm, see STACK", mm(order.board.thickness_m), mm(order.board.thickness_tolerance_m)));
    note.field("Copper layers", &order.copper_layers().to_string());
    note.field(
        "Delivered",
        if board.outline_drawn {
            "as single boards; the board house makes its own panel; all boards of a panel in one direction"
        } else {
            "as part of that board, whose order says how"
        },
    );
    note.field("Grain direction", &facts::grain(order));
    note.field("Layer order", &facts::layer_order(order));
    for [from, to] in &board.plated_edges {
        note.field(
            "Plated edge",
            &format!(
                "from ({:.3}, {:.3}) to ({:.3}, {:.3}) mm, {} um of copper or more, joined to the ground of every copper layer",
                from.x.mm(),
                from.y.mm(),
                to.x.mm(),
                to.y.mm(),
                um(facts::wall_m(order))
            ),
        );
    }
}

fn stack(note: &mut Note, order: &Order, board: &Board) {
    note.section("STACK, TOP TO BOTTOM");
    let copper = &order.laminate.copper;
    let layers = order.stack();
    let last = order.copper_layers();
    let mut rows = Vec::new();
    for layer in &layers {
        rows.push(match layer {
            StackLayer::Copper { number, base_m, plating_m } => {
                let place = match *number {
                    1 => "top",
                    n if n == last => "bottom",
                    _ => "inner",
                };
                let built = if *plating_m > 0.0 {
                    format!("{} um foil + {} um plating", um(*base_m), um(*plating_m))
                } else {
                    format!("{} um foil, not plated", um(*base_m))
                };
                vec![format!("copper {number}, {place}"), format!("{} um finished", um(layer.thickness_m())), built]
            }
            StackLayer::Dielectric { material, permittivity, thickness_m, thickness_tolerance_m, .. } => {
                let er = if *material == order.laminate.class {
                    format!("{permittivity} +/-{}", order.laminate.permittivity_tolerance)
                } else {
                    permittivity.to_string()
                };
                vec![
                    "dielectric".to_string(),
                    format!("{} mm +/-{} mm", mm(*thickness_m), mm(*thickness_tolerance_m)),
                    format!("{}, er {er}", ascii(material)),
                ]
            }
        });
    }
    note.table(&rows);
    note.bullet(if last > 2 {
        "The dielectric thickness between copper 1 and copper 2 and the finished copper thickness govern; the layers below carry ground only."
    } else {
        "The dielectric thickness and the finished copper thickness govern."
    });
    note.bullet(&format!(
        "Overall thickness {} mm +/-{} mm: over foil and plating, without finish, mask and legend.",
        mm(order.board.thickness_m),
        mm(order.board.thickness_tolerance_m)
    ));
    let plated = board.holes.iter().any(Hole::is_plated) || board.slots.iter().any(|slot| slot.plated);
    if copper.plating_m > 0.0 {
        note.bullet(&format!(
            "The filter conductors carry the same {} um of plating as the ground; its thickness enters gaps and widths.",
            um(copper.plating_m)
        ));
    } else if plated {
        note.bullet("Plate the holes and their lands only (button plating); the filter conductors stay foil, without any plating on them.");
    }
    if last > 2 {
        note.bullet(
            "Inner copper layers are foil, not plated. Plated holes go through all layers and join the grounds; no blind or buried holes.",
        );
    }
    if last == 1 {
        note.bullet("The bottom is bare laminate, free of copper: it lies flat on the carrier.");
    }
}

fn laminate(note: &mut Note, order: &Order) {
    let laminate = &order.laminate;
    note.section("LAMINATE");
    note.field("Class", &format!("{}: {}", laminate.class, laminate.about));
    note.field(
        "Called out by",
        &format!("{}; no substitution of laminate, thickness or foil without written consent", facts::sheet(order)),
    );
    note.field(
        "Permittivity",
        &format!(
            "{} +/-{} normal to the board, the design value for circuits (not the clamped-stripline value)",
            laminate.permittivity, laminate.permittivity_tolerance
        ),
    );
    if let Some(in_plane) = laminate.in_plane_permittivity {
        note.field("In-plane permittivity", &in_plane.to_string());
    }
    note.field("Loss tangent", &format!("{} or less", laminate.loss_tangent));
    note.field("Foil roughness", &format!("{} um rms or less on the laminate side", um(laminate.copper.roughness_m)));
    note.field("Direction", &facts::grain(order));
}

fn finish(note: &mut Note, order: &Order) {
    note.section("FINISH");
    note.field("Finish", &format!("{}; all copper that no mask covers", facts::finish(order)));
    note.bullet(facts::nickel(order));
}

fn acceptance(note: &mut Note, order: &Order) {
    note.section("ACCEPTANCE");
    note.field(
        "Class",
        &format!("{} class {}; seen by eye per IPC-A-600 of the same class", facts::acceptance(order), order.acceptance_class),
    );
    note.field("Precedence", "where this note is stricter than the standard, this note holds");
}

fn controlled(note: &mut Note, order: &Order, board: &Board) {
    note.section("CONTROLLED FEATURES OF COPPER 1, FINISHED SIZE IN MM");
    if board.callouts.is_empty() {
        note.text("None beyond the minimum line and gap below.");
        return;
    }
    note.text(
        "Measured at the foot of the conductor, after all etching and plating, on the first article and on two boards of each panel. The \
         place is the middle of the feature.",
    );
    let tolerance = format!("+/-{}", mm(order.shop.line_tolerance_m));
    let mut rows = vec![row(&["no.", "feature", "nominal", "tolerance", "kind", "x", "y"])];
    for feature in facts::features(board) {
        rows.push(vec![
            feature.number.to_string(),
            ascii(&feature.callout.dimension),
            format!("{:.4}", feature.nominal_m * 1e3),
            tolerance.clone(),
            feature.kind.to_string(),
            format!("{:.3}", feature.at.x.mm()),
            format!("{:.3}", feature.at.y.mm()),
        ]);
    }
    note.table(&rows);
    note.bullet(&format!(
        "The walls of a strip may lean by {} um per side: the top is narrower than the foot by twice that.",
        um(order.shop.undercut_m)
    ));
    note.bullet("A gap is held by its own tolerance, not by a share of the line width: gaps set the filter's bandwidth.");
}

/// What the widths and gaps rest on.
fn line_model(note: &mut Note, job: &Job) {
    let given = models(job.order(), job.bundle.layout);
    let text = given.map_or_else(|_| "not known".to_string(), |models| models.describe());
    note.text(&format!("Widths and gaps rest on the laminate and copper above by this line model: {text}."));
}

fn compensation(note: &mut Note, order: &Order) {
    note.section("ETCH COMPENSATION");
    match order.shop.compensation {
        Compensation::ByTheShop => note.text(&format!(
            "By the board house. The artwork is the finished size at the foot of the conductor. Enlarge it for your process so that the \
             finished features meet the table above, every region of copper 1 alike, and once only. Ask if the artwork must move by more than \
             {} um on an edge.",
            um(order.shop.undercut_m.max(order.shop.line_tolerance_m))
        )),
        Compensation::InTheArtwork { per_edge_m } => note.text(&format!(
            "In the artwork. Copper 1 is drawn larger than the finished size by {} um on each edge; image it as it is and do not enlarge it \
             again. Copper 2 is drawn at its finished size.",
            um(per_edge_m)
        )),
    }
}

fn forbidden(note: &mut Note, board: &Board) {
    note.section("NOT ALLOWED");
    let [low, high] = board.circuit;
    note.text(&format!(
        "The filter area on copper 1 is the box from ({:.3}, {:.3}) to ({:.3}, {:.3}) mm. In it and within 2 mm around it:",
        low.x.mm(),
        low.y.mm(),
        high.x.mm(),
        high.y.mm()
    ));
    for item in [
        "no copper balancing (thieving) and no copper of any kind beyond what is drawn",
        "no teardrops, no rounded or trimmed corners, no fillets",
        "no removal, joining or shortening of open ends and of copper that nothing is connected to: these are the resonators",
        "no solder mask, no legend, no maker's mark",
        "no added, moved or resized holes",
        "no repair by welding, soldering or cutting on the filter conductors",
    ] {
        note.bullet(item);
    }
    note.text("On the whole board: no clipping of copper where it is drawn up to the edge, and no thieving inside the edge.");
}

fn holes(note: &mut Note, order: &Order, board: &Board) {
    note.section("HOLES, FINISHED SIZE IN MM");
    let kinds = facts::hole_kinds(board);
    if kinds.is_empty() {
        note.text("No holes; no drill file.");
        return;
    }
    let mut rows = vec![row(&["symbol", "size", "tolerance", "plated", "quantity", "layers", "pad", "for"])];
    for kind in &kinds {
        rows.push(vec![
            kind.symbol.clone(),
            kind.length.map_or(mm(kind.diameter.m()), |length| format!("{} x {}", mm(kind.diameter.m()), mm(length.m()))),
            format!("+/-{}", mm(order.shop.hole_tolerance_m)),
            if kind.plated { "yes" } else { "no" }.to_string(),
            kind.at.len().to_string(),
            format!("1-{}", order.copper_layers()),
            if kind.pad > Nm::ZERO { mm(kind.pad.m()) } else { "none".to_string() },
            kind.purpose.to_string(),
        ]);
    }
    note.table(&rows);
    let slots = match board.slots.len() {
        0 => "no slots".to_string(),
        n => format!("{n} slots (width x length over the round ends), written as routed slots in the drill files"),
    };
    note.field("Total", &format!("{} holes, {slots}; no two at one place", board.holes.len()));
    note.field("Place", &format!("within {} mm of the copper", mm(order.shop.registration_m)));
    if kinds.iter().any(|kind| kind.plated) {
        note.field("Plated walls", &format!("{} um of copper or more; vias neither filled nor capped", um(facts::wall_m(order))));
    }
}

fn smallest(note: &mut Note, order: &Order, board: &Board) {
    note.section("SMALLEST FEATURES USED, IN MM");
    let mut rows = vec![row(&["feature", "used", "your limit as we know it"])];
    for (what, used, limit) in facts::smallest(order, board) {
        rows.push(vec![what.to_string(), used.map_or("none".to_string(), |used| format!("{:.4}", used * 1e3)), mm(limit)]);
    }
    note.table(&rows);
    note.field("Limits of class", &format!("{}: {}", order.shop.class, order.shop.about));
}

/// Rectangles in words, for areas the board house must keep free.
fn areas(note: &mut Note, order: &Order) {
    let inside = order.housing.as_ref().and_then(|housing| housing.inside_m);
    let lid = order.housing.as_ref().and_then(|housing| housing.lid_m);
    if order.board.keep_outs.is_empty() && order.housing.is_none() {
        return;
    }
    note.section("HOUSING AND AREAS TO KEEP FREE");
    if let Some([x, y]) = inside {
        note.bullet(&format!(
            "A housing of {} mm x {} mm inside stands on the ground frame of copper 1, centred on the board: the frame is flat, free of mask and              legend, and its vias are not filled.",
            mm(x),
            mm(y)
        ));
    }
    if let Some(lid) = lid {
        note.bullet(&format!("Its lid is {} mm above the laminate; this is no matter of the bare board.", mm(lid)));
    }
    for area in &order.board.keep_outs {
        note.bullet(&format!(
            "Nothing on the top from ({}, {}) to ({}, {}) mm: no copper, no legend, no mark.",
            mm(area.from_m[0]),
            mm(area.from_m[1]),
            mm(area.to_m[0]),
            mm(area.to_m[1])
        ));
    }
}

fn mask_and_legend(note: &mut Note, order: &Order, board: &Board) {
    note.section("SOLDER MASK, PASTE AND LEGEND");
    match order.board.mask {
        Mask::None => note.field("Solder mask", "none on either side; no mask file belongs to this package"),
        Mask::ClearOfFilter => note.field(
            "Solder mask",
            &format!(
                "{}, open over the whole filter and over the lands as drawn; the image shows the openings; thinnest dam {} mm",
                if order.copper_layers() > 1 { "both sides" } else { "top side" },
                mm(order.shop.mask_dam_m)
            ),
        ),
    }
    match board.lands.iter().filter(|land| land.fits == Fits::Chip).count() {
        0 => note.field("Solder paste", "none; no paste file belongs to this package"),
        n => note.field("Solder paste", &format!("top side, over the {n} lands of chip parts, as drawn")),
    }
    match order.board.text {
        TextOn::Legend => note.field("Legend", "top side as drawn, permanent non-conductive ink, outside the filter area"),
        TextOn::Copper => note.field("Legend", "none; the text is etched in copper 1 and belongs to no net"),
        TextOn::None => note.field("Legend", "none on either side"),
    }
}

fn edges_and_marking(note: &mut Note, order: &Order, board: &Board) {
    note.section("EDGES, MARKING, CLEANLINESS, PACKING");
    if board.outline_drawn {
        note.bullet(&format!(
            "Edges {}, +/-{} mm. The edges with connectors are flat, square and free of burrs; no break-away tab within 5 mm of a \
             connector; copper there ends as drawn, without smear over the edge.",
            if order.laminate.kind == LaminateKind::Ceramic { facts::cut(order) } else { "routed, no scoring" },
            mm(order.board.outline_tolerance_m)
        ));
    }
    note.bullet("Marks of the maker, date code and lot on the panel frame or the packing, not on the board.");
    note.bullet("Clean and dry; no fingerprints or residue on the filter; ionic cleanliness as the acceptance class asks.");
    note.bullet("Packed one by one in paper that does not harm the finish, sealed with desiccant, nothing stacked on the conductors.");
}

fn test(note: &mut Note, board: &Board) {
    note.section("ELECTRICAL TEST");
    let nets = facts::nets(board);
    note.text("Every board, all nets, against the bare-board netlist (IPC-D-356A) and the nets named in the Gerber files (attribute .N), which agree:");
    note.field("Nets", &format!("{}: {}", nets.len(), nets.keys().copied().collect::<Vec<_>>().join(", ")));
    note.bullet("Each net is continuous within itself and isolated from every other.");
    let alone: Vec<&str> = nets.iter().filter(|(net, roles)| facts::is_resonator(board, net, roles)).map(|(net, _)| *net).collect();
    if !alone.is_empty() {
        note.bullet(&format!(
            "{} carry no land and no hole by design: they are resonators, and each must be isolated from its neighbours. A bridged gap is a reject.",
            alone.join(", ")
        ));
    }
    note.bullet("Probe on lands and vias; probe marks on resonators only near their ends.");
    note.bullet("With the lot: dimensions of the controlled features, one microsection with dielectric and copper thickness.");
}

fn process(note: &mut Note, order: &Order) {
    note.section("PROCESS");
    note.standing(match order.laminate.kind {
        LaminateKind::Ptfe => "process ptfe",
        LaminateKind::Hydrocarbon => "process hydrocarbon",
        LaminateKind::Ceramic => "process ceramic",
        LaminateKind::GlassEpoxy => "process glass-epoxy",
        LaminateKind::Other => "process other",
    });
}

fn cautions(note: &mut Note, order: &Order) {
    note.section("CAUTIONS");
    if order.laminate.kind == LaminateKind::Ptfe {
        note.standing("cautions ptfe");
    }
    note.standing("cautions");
}

/// The note's standing text, by heading.
const STANDING: &str = include_str!("../../templates/fabrication-note.txt");

impl Note {
    /// Bullets of the standing text under a heading.
    fn standing(&mut self, heading: &str) {
        let heading = format!("[{heading}]");
        let lines = STANDING.lines().skip_while(|line| *line != heading).skip(1).take_while(|line| !line.starts_with('['));
        for line in lines.filter(|line| !line.is_empty()) {
            self.bullet(line);
        }
    }
}
