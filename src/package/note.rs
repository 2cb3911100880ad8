//! What must the board house know that the data cannot say? `<name>-fabrication.txt`: plain ASCII, nothing left open.

use std::collections::BTreeMap;
use std::collections::BTreeSet;
use std::io;
use std::io::Write;

use crate::artwork::Board;
use crate::artwork::Callout;
use crate::artwork::Hole;
use crate::artwork::HoleUse;
use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::shape::bounds;
use crate::base::Nm;
use crate::base::spelt_out;
use crate::network::models;
use crate::order::Compensation;
use crate::order::Laminate;
use crate::order::LaminateKind;
use crate::order::Mask;
use crate::order::Order;
use crate::order::TextOn;
use crate::package::job::Job;
use crate::package::purpose;

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
        note.text("*** A DESIGN RULE IS BROKEN, and these files were written in spite of it. Quote and build only on written consent. ***");
        for finding in job.bundle.findings.iter().filter(|finding| finding.is_error()) {
            note.bullet(&finding.to_string());
        }
    }
    identity(&mut note, job);
    files(&mut note, job);
    outline(&mut note, order, board, job.copper_layers());
    stack(&mut note, order, board);
    laminate(&mut note, &order.laminate);
    finish(&mut note, order);
    acceptance(&mut note, order);
    controlled(&mut note, order, board);
    line_model(&mut note, job);
    compensation(&mut note, order);
    forbidden(&mut note, board);
    holes(&mut note, order, board, job.copper_layers());
    smallest(&mut note, order, board);
    mask_and_legend(&mut note, order);
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

/// Metres as millimetres without needless zeros, three decimals at least.
fn mm(metres: f64) -> String {
    let text = format!("{:.6}", metres * 1e3);
    let kept = text.trim_end_matches('0').len().max(text.len() - 3);
    text[..kept].to_string()
}

fn um(metres: f64) -> String {
    let text = format!("{:.2}", metres * 1e6);
    text.trim_end_matches('0').trim_end_matches('.').to_string()
}

fn size(board: &Board) -> [f64; 2] {
    bounds(board.outline.outer.iter().copied()).map_or([0.0; 2], |[low, high]| [(high.x - low.x).m(), (high.y - low.y).m()])
}

fn identity(note: &mut Note, job: &Job) {
    let order = job.order();
    note.section("IDENTITY");
    note.field("Title", &order.title);
    note.field("Name", &order.name);
    note.field("Part number", order.part_number.as_deref().unwrap_or("none; the name and the revision identify the board"));
    note.field("Revision", &order.revision);
    note.field("Date", order.date.as_deref().unwrap_or("not dated; the revision governs"));
    note.field("Questions to", order.contact.as_deref().unwrap_or("the contact on the purchase order"));
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
        note.lines.push(format!("  {}  ({})", file.file, ascii(&file.about)));
        note.lines.push(format!("    sha-256 {}", file.sha256));
    }
}

fn outline(note: &mut Note, order: &Order, board: &Board, layers: u8) {
    note.section("BOARD");
    let [x, y] = size(board);
    if board.outline_drawn {
        note.field("Size", &format!("{} mm x {} mm, each +/-{} mm, {}", mm(x), mm(y), mm(order.shop.outline_tolerance_m), cut(order)));
    } else {
        note.field(
            "Size",
            &format!("none of its own: the filter lies in a larger board, in a field of {} mm x {} mm; no profile file", mm(x), mm(y)),
        );
    }
    note.field("Copper layers", &layers.to_string());
    if !board.outline_drawn {
        note.field("Delivered", "as part of that board, whose order says how");
        return note.field("Layer order", LAYER_ORDER);
    }
    note.field("Delivered", "as single boards; the board house makes its own panel; all boards of a panel in one direction");
    note.field("Layer order", LAYER_ORDER);
}

/// How this kind of laminate is cut to size.
fn cut(order: &Order) -> &'static str {
    if order.laminate.kind == LaminateKind::Ceramic { "scribed and broken, or cut by laser" } else { "routed" }
}

const LAYER_ORDER: &str = "copper 1 on the top with the filter, dielectric, copper 2 on the bottom as ground plane";

fn stack(note: &mut Note, order: &Order, board: &Board) {
    note.section("STACK, TOP TO BOTTOM");
    let (laminate, copper) = (&order.laminate, &order.laminate.copper);
    let layer = |name: &str| {
        let built = if copper.plating_m > 0.0 {
            format!("{} um foil + {} um plating", um(copper.base_m), um(copper.plating_m))
        } else {
            format!("{} um foil, not plated", um(copper.base_m))
        };
        vec![name.to_string(), format!("{} um finished", um(copper.finished_m())), built]
    };
    note.table(&[
        layer("copper 1, top"),
        vec![
            "dielectric".to_string(),
            format!("{} mm +/-{} mm", mm(laminate.thickness_m), mm(laminate.thickness_tolerance_m)),
            format!("{}, er {} +/-{}", ascii(&laminate.class), laminate.permittivity, laminate.permittivity_tolerance),
        ],
        layer("copper 2, bottom"),
    ]);
    note.bullet("The dielectric thickness and the finished copper thickness govern.");
    note.bullet(&format!(
        "Overall thickness {} mm +/-{} mm: over foil and plating of both sides, without finish, mask and legend; it follows from the rows above.",
        mm(laminate.thickness_m + 2.0 * copper.finished_m()),
        mm(laminate.thickness_tolerance_m)
    ));
    let plated = board.holes.iter().any(Hole::is_plated);
    if copper.plating_m > 0.0 {
        note.bullet(&format!(
            "The filter conductors carry the same {} um of plating as the ground; its thickness enters gaps and widths.",
            um(copper.plating_m)
        ));
    } else if plated {
        note.bullet("Plate the holes and their lands only (button plating); the filter conductors stay foil, without any plating on them.");
    }
    if board.layers.keys().filter(|layer| matches!(layer, Layer::Copper(_))).count() > 2 {
        note.bullet("Inner copper layers: same foil, not plated.");
    }
}

fn laminate(note: &mut Note, laminate: &Laminate) {
    note.section("LAMINATE");
    note.field("Class", &format!("{}: {}", laminate.class, laminate.about));
    let sheet = match laminate.kind {
        LaminateKind::GlassEpoxy => "IPC-4101 sheet of this class",
        LaminateKind::Ptfe | LaminateKind::Hydrocarbon => "IPC-4103 sheet of this class",
        LaminateKind::Ceramic | LaminateKind::Other => "customer-specified",
    };
    note.field("Called out by", &format!("{sheet}; no substitution of laminate, thickness or foil without written consent"));
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
    note.field("Direction", "strips along one direction of the sheet on all boards of a panel");
}

fn finish(note: &mut Note, order: &Order) {
    note.section("FINISH");
    let text = match order.laminate.finish.as_str() {
        "bare" => "none: bare copper, clean and free of oxide, protected for transport",
        "osp" => "organic solderability preservative per IPC-4555",
        "immersion-silver" => "immersion silver per IPC-4553",
        "immersion-tin" => "immersion tin per IPC-4554",
        "enig" => "electroless nickel and immersion gold per IPC-4552 (nickel 3 to 6 um, gold 0.05 um or more)",
        "enepig" => "electroless nickel, electroless palladium, immersion gold per IPC-4556",
        "hot-air-solder" => "hot-air levelled solder, thin and even, no bridges or icicles in the gaps of the filter",
        other => other,
    };
    note.field("Finish", &format!("{text}; both sides, all copper that no mask covers"));
    match order.laminate.finish.as_str() {
        "enig" | "enepig" => note.bullet("The nickel lies on the filter conductors as well; this loss was accepted with the order."),
        _ => note.bullet("No nickel on the filter conductors."),
    }
}

fn acceptance(note: &mut Note, order: &Order) {
    note.section("ACCEPTANCE");
    let standard = match order.laminate.kind {
        LaminateKind::Ceramic => {
            "the maker's workmanship standard for metallised ceramic, after IPC-6018 (high-frequency boards) as far as it applies,"
        }
        LaminateKind::Ptfe | LaminateKind::Hydrocarbon => "IPC-6018 (high-frequency boards)",
        LaminateKind::GlassEpoxy | LaminateKind::Other => "IPC-6012 (rigid boards)",
    };
    note.field("Class", &format!("{standard} class {}; seen by eye per IPC-A-600 of the same class", order.acceptance_class));
    note.field("Precedence", "where this note is stricter than the standard, this note holds");
}

/// What kind of dimension a call-out is; its name says.
fn kind(callout: &Callout) -> &'static str {
    ["width", "gap", "length"].into_iter().find(|kind| callout.dimension.split(' ').any(|word| word == *kind)).unwrap_or("size")
}

fn length_m(callout: &Callout) -> f64 {
    (callout.to.x - callout.from.x).m().hypot((callout.to.y - callout.from.y).m())
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
    let mut rows = vec![row(&["feature", "nominal", "tolerance", "kind", "x", "y"])];
    for callout in &board.callouts {
        let middle = |a: Nm, b: Nm| format!("{:.3}", (a.mm() + b.mm()) / 2.0);
        rows.push(vec![
            ascii(&callout.dimension),
            format!("{:.4}", length_m(callout) * 1e3),
            tolerance.clone(),
            kind(callout).to_string(),
            middle(callout.from.x, callout.to.x),
            middle(callout.from.y, callout.to.y),
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

/// A symbol for each kind of hole: A, B, .. Z, AA ..
fn symbol(index: usize) -> String {
    let letter = char::from(b'A' + (index % 26) as u8);
    if index < 26 { letter.to_string() } else { format!("{}{letter}", symbol(index / 26 - 1)) }
}

fn holes(note: &mut Note, order: &Order, board: &Board, layers: u8) {
    note.section("HOLES, FINISHED SIZE IN MM");
    let mut kinds: BTreeMap<(HoleUse, Nm, Nm), usize> = BTreeMap::new();
    for hole in &board.holes {
        *kinds.entry((hole.purpose, hole.diameter, hole.pad)).or_default() += 1;
    }
    if kinds.is_empty() {
        note.text("No holes; no drill file.");
        return;
    }
    let mut rows = vec![row(&["symbol", "diameter", "tolerance", "plated", "quantity", "layers", "pad", "for"])];
    for (index, ((purpose_of, diameter, pad), quantity)) in kinds.iter().enumerate() {
        rows.push(vec![
            symbol(index),
            mm(diameter.m()),
            format!("+/-{}", mm(order.shop.hole_tolerance_m)),
            if *purpose_of == HoleUse::Via { "yes" } else { "no" }.to_string(),
            quantity.to_string(),
            format!("1-{layers}"),
            if *pad > Nm::ZERO { mm(pad.m()) } else { "none".to_string() },
            purpose(*purpose_of).to_string(),
        ]);
    }
    note.table(&rows);
    note.field("Total", &format!("{} holes; no slots; no two at one place", board.holes.len()));
    note.field("Place", &format!("within {} mm of the copper", mm(order.shop.registration_m)));
    if board.holes.iter().any(Hole::is_plated) {
        let wall = if order.laminate.copper.plating_m > 0.0 { order.laminate.copper.plating_m } else { 20e-6 };
        note.field("Plated walls", &format!("{} um of copper or more; vias neither filled nor capped", um(wall)));
    }
}

fn smallest(note: &mut Note, order: &Order, board: &Board) {
    note.section("SMALLEST FEATURES USED, IN MM");
    let least = |what: &str| board.callouts.iter().filter(|callout| kind(callout) == what).map(length_m).reduce(f64::min);
    let ring = board.holes.iter().filter(|hole| hole.is_plated()).map(|hole| (hole.pad - hole.diameter).m() / 2.0).reduce(f64::min);
    let hole = board.holes.iter().map(|hole| hole.diameter.m()).reduce(f64::min);
    let shop = &order.shop;
    let mut rows = vec![row(&["feature", "used", "your limit as we know it"])];
    for (what, used, limit) in [
        ("line, filter", least("width"), shop.line_m),
        ("gap, filter", least("gap"), shop.gap_m),
        ("annular ring", ring, shop.annular_ring_m),
        ("hole", hole, shop.hole_m),
    ] {
        rows.push(vec![what.to_string(), used.map_or("none".to_string(), |used| format!("{:.4}", used * 1e3)), mm(limit)]);
    }
    note.table(&rows);
    note.field("Limits of class", &format!("{}: {}", shop.class, shop.about));
}

fn mask_and_legend(note: &mut Note, order: &Order) {
    note.section("SOLDER MASK AND LEGEND");
    match order.board.mask {
        Mask::None => note.field("Solder mask", "none on either side; no mask file belongs to this package"),
        Mask::ClearOfFilter => note.field(
            "Solder mask",
            &format!(
                "both sides, open over the whole filter and over the lands as drawn; the image shows the openings; thinnest dam {} mm",
                mm(order.shop.mask_dam_m)
            ),
        ),
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
            if order.laminate.kind == LaminateKind::Ceramic { cut(order) } else { "routed, no scoring" },
            mm(order.shop.outline_tolerance_m)
        ));
    }
    note.bullet("Marks of the maker, date code and lot on the panel frame or the packing, not on the board.");
    note.bullet("Clean and dry; no fingerprints or residue on the filter; ionic cleanliness as the acceptance class asks.");
    note.bullet("Packed one by one in paper that does not harm the finish, sealed with desiccant, nothing stacked on the conductors.");
}

fn test(note: &mut Note, board: &Board) {
    note.section("ELECTRICAL TEST");
    let mut nets: BTreeMap<&str, BTreeSet<Role>> = BTreeMap::new();
    for shape in board.layers.iter().filter(|(layer, _)| matches!(layer, Layer::Copper(_))).flat_map(|(_, shapes)| shapes) {
        if !shape.net.is_empty() {
            nets.entry(&shape.net).or_default().insert(shape.role);
        }
    }
    note.text("Every board, all nets, against the nets named in the Gerber files (attribute .N):");
    note.field("Nets", &format!("{}: {}", nets.len(), nets.keys().copied().collect::<Vec<_>>().join(", ")));
    note.bullet("Each net is continuous within itself and isolated from every other.");
    let alone: Vec<&str> = nets.iter().filter(|(net, roles)| is_resonator(board, net, roles)).map(|(net, _)| *net).collect();
    if !alone.is_empty() {
        note.bullet(&format!(
            "{} carry no land and no hole by design: they are resonators, and each must be isolated from its neighbours. A bridged gap is a reject.",
            alone.join(", ")
        ));
    }
    note.bullet("Probe on lands and vias; probe marks on resonators only near their ends.");
    note.bullet("With the lot: dimensions of the controlled features, one microsection with dielectric and copper thickness.");
}

/// Whether a net is strip copper that neither a land nor a hole touches.
fn is_resonator(board: &Board, net: &str, roles: &BTreeSet<Role>) -> bool {
    roles.iter().all(|role| *role == Role::Circuit)
        && !board.lands.iter().any(|land| land.net == net)
        && !board.holes.iter().any(|hole| hole.net == net)
        && !board.ports.iter().any(|port| port.net == net)
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
