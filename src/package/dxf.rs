//! What does the drawing for mechanics and field solvers hold? The only door to the dxf crate.
//!
//! AutoCAD 2000 text format, millimetres, closed polylines with the very vertices of the Gerber files. The crate's own text lacks a
//! `BLOCKS` section, a root dictionary and the handles of its tables, and carries clock values: [`Patch`] mends that line by line.

use std::collections::BTreeMap;
use std::collections::HashMap;
use std::io;
use std::io::BufWriter;
use std::io::Write;
use std::path::Path;

use chrono::Datelike;
use chrono::NaiveDate;
use dxf::Color;
use dxf::Drawing;
use dxf::Handle;
use dxf::LwPolylineVertex;
use dxf::Point as DxfPoint;
use dxf::entities::Circle;
use dxf::entities::Entity;
use dxf::entities::EntityType;
use dxf::entities::Line;
use dxf::entities::LwPolyline;
use dxf::entities::Text;
use dxf::enums::AcadVersion;
use dxf::enums::DrawingUnits;
use dxf::enums::Units;
use dxf::objects::Dictionary;
use dxf::objects::Object;
use dxf::objects::ObjectType;
use dxf::tables::Layer as DxfLayer;

use crate::artwork::Layer;
use crate::artwork::slot_area;
use crate::base::Nm;
use crate::base::Point;
use crate::base::spelt_out;
use crate::package::job::Job;

pub(super) const OUTLINE: &str = "BOARD_OUTLINE";
const PLATED: &str = "DRILL_PTH";
const UNPLATED: &str = "DRILL_NPTH";
const PLATED_SLOT: &str = "SLOT_PTH";
const UNPLATED_SLOT: &str = "SLOT_NPTH";
const NOTES: &str = "NOTES";
/// Notes stand this far above the board, so that no text lies on copper.
const NOTES_ABOVE: Nm = Nm(3_000_000);
const SCALE_BAR: Nm = Nm(10_000_000);
const TEXT_HEIGHT_MM: f64 = 1.5;
/// Drawing weights -1 is "by layer"; the crate's own names for it are swapped.
const LINE_WEIGHT_BY_LAYER: i16 = -1;
/// Handles kept for what [`Patch`] adds: two blocks with their ends, nine table heads.
const SPARE_HANDLES: u64 = 64;
/// 2000-01-01 as the format counts days, for an order without a date: the format wants one, and the clock must not leak in.
const NO_DATE_JULIAN: i64 = 2_451_545;
/// Julian day of 0001-01-01, less one: what `num_days_from_ce` counts from.
const JULIAN_OF_CE: i64 = 1_721_425;

/// Writes copper, voids, edge, holes and notes.
pub fn write(job: &Job, out: &mut dyn Write) -> io::Result<()> {
    let mut sheet = Sheet::new(job);
    for (layer, shapes) in &job.artwork.layers {
        let Layer::Copper(number) = layer else { continue };
        let name = copper_layer(*number, job.copper_layers());
        let void = format!("{name}_VOID");
        for shape in shapes {
            sheet.ring(&name, &shape.outer);
            for ring in &shape.voids {
                sheet.ring(&void, ring);
            }
        }
    }
    if job.artwork.outline_drawn {
        let outline = &job.artwork.outline;
        for ring in std::iter::once(&outline.outer).chain(&outline.voids) {
            sheet.ring(OUTLINE, ring);
        }
    }
    for hole in &job.artwork.holes {
        sheet.circle(if hole.is_plated() { PLATED } else { UNPLATED }, hole.at, hole.diameter);
    }
    for slot in &job.artwork.slots {
        for piece in slot_area(slot, Nm::ZERO).pieces {
            sheet.ring(if slot.plated { PLATED_SLOT } else { UNPLATED_SLOT }, &piece.outer);
        }
    }
    sheet.notes(job);
    sheet.save(job, out)
}

pub(super) fn copper_layer(number: u8, last: u8) -> String {
    match number {
        1 => "L1_TOP_COPPER".to_string(),
        n if n == last => format!("L{n}_BOT_COPPER"),
        n => format!("L{n}_INNER_COPPER"),
    }
}

/// What a drawing holds, as the checks see it.
pub(super) struct Drawn {
    /// Whether the header says so twice.
    pub in_millimetres: bool,
    /// Closed polylines by layer.
    pub rings: BTreeMap<String, Vec<Vec<Point>>>,
    /// The holes: plated or not, centre, diameter.
    pub circles: Vec<(bool, Point, Nm)>,
}

/// Reads a drawing back; the error says why it cannot be read.
pub(super) fn read(path: &Path) -> Result<Drawn, String> {
    let drawing = Drawing::load_file(path).map_err(|error| error.to_string())?;
    let header = &drawing.header;
    let mut drawn = Drawn {
        in_millimetres: header.default_drawing_units == Units::Millimeters && header.drawing_units == DrawingUnits::Metric,
        rings: BTreeMap::new(),
        circles: Vec::new(),
    };
    let point = |x_mm: f64, y_mm: f64| Point::from_m(x_mm * 1e-3, y_mm * 1e-3);
    for entity in drawing.entities() {
        let layer = &entity.common.layer;
        match &entity.specific {
            EntityType::LwPolyline(polyline) => {
                if !polyline.is_closed() {
                    return Err(format!("an open polyline on layer {layer}"));
                }
                let ring = polyline.vertices.iter().map(|vertex| point(vertex.x, vertex.y)).collect();
                drawn.rings.entry(layer.clone()).or_default().push(ring);
            }
            EntityType::Circle(circle) if layer == PLATED || layer == UNPLATED => {
                drawn.circles.push((layer == PLATED, point(circle.center.x, circle.center.y), Nm::from_m(2e-3 * circle.radius)));
            }
            _ => {}
        }
    }
    Ok(drawn)
}

struct Sheet {
    drawing: Drawing,
    model_space: Handle,
    paper_space: Handle,
    low: [f64; 2],
    high: [f64; 2],
}

impl Sheet {
    fn new(job: &Job) -> Sheet {
        let mut drawing = Drawing::new();
        drawing.header.version = AcadVersion::R2000;
        drawing.header.default_drawing_units = Units::Millimeters;
        drawing.header.drawing_units = DrawingUnits::Metric;
        drawing.header.fingerprint_guid = job.project;
        drawing.header.version_guid = job.coordinates;
        let block = |name: &str| drawing.block_records().find(|record| record.name == name).map_or(Handle(0), |record| record.handle);
        let (model_space, paper_space) = (block("*MODEL_SPACE"), block("*PAPER_SPACE"));
        let last = job.copper_layers();
        let mut layers: Vec<(String, u8)> = Vec::new();
        for number in 1..=last {
            let name = copper_layer(number, last);
            // Colours of the index: red for the strips, blue for what lies under them, dark grey for what is cut out.
            layers.push((name.clone(), if number == 1 { 1 } else { 5 }));
            layers.push((format!("{name}_VOID"), 8));
        }
        layers.extend(
            [(OUTLINE, 7), (PLATED, 3), (UNPLATED, 6), (PLATED_SLOT, 3), (UNPLATED_SLOT, 6), (NOTES, 9)]
                .map(|(name, color)| (name.to_string(), color)),
        );
        for (name, color) in layers {
            let line_weight = dxf::LineWeight::by_block();
            drawing.add_layer(DxfLayer { name, color: Color::from_index(color), line_weight, ..Default::default() });
        }
        Sheet { drawing, model_space, paper_space, low: [f64::INFINITY; 2], high: [f64::NEG_INFINITY; 2] }
    }

    fn add(&mut self, layer: &str, kind: EntityType) {
        let mut entity = Entity::new(kind);
        entity.common.layer = layer.to_string();
        entity.common.lineweight_enum_value = LINE_WEIGHT_BY_LAYER;
        entity.common.__owner_handle = self.model_space;
        self.drawing.add_entity(entity);
    }

    fn reach(&mut self, x: f64, y: f64) {
        self.low = [self.low[0].min(x), self.low[1].min(y)];
        self.high = [self.high[0].max(x), self.high[1].max(y)];
    }

    fn ring(&mut self, layer: &str, ring: &[Point]) {
        let mut polyline = LwPolyline::default();
        polyline.set_is_closed(true);
        for point in ring {
            let (x, y) = (point.x.mm(), point.y.mm());
            self.reach(x, y);
            polyline.vertices.push(LwPolylineVertex { x, y, ..Default::default() });
        }
        self.add(layer, EntityType::LwPolyline(polyline));
    }

    fn circle(&mut self, layer: &str, at: Point, diameter: Nm) {
        let (x, y, radius) = (at.x.mm(), at.y.mm(), diameter.mm() / 2.0);
        self.reach(x - radius, y - radius);
        self.reach(x + radius, y + radius);
        self.add(layer, EntityType::Circle(Circle::new(DxfPoint::new(x, y, 0.0), radius)));
    }

    fn line(&mut self, from: Point, to: Point) {
        for point in [from, to] {
            self.reach(point.x.mm(), point.y.mm());
        }
        let end = |p: Point| DxfPoint::new(p.x.mm(), p.y.mm(), 0.0);
        self.add(NOTES, EntityType::Line(Line::new(end(from), end(to))));
    }

    fn text(&mut self, x: f64, y: f64, value: String) {
        // A letter of the standard font is about as wide as 0.9 of its height: the extents must hold the text in any reader.
        self.reach(x, y);
        self.reach(x + 0.9 * TEXT_HEIGHT_MM * value.len() as f64, y + TEXT_HEIGHT_MM);
        let location = DxfPoint::new(x, y, 0.0);
        self.add(NOTES, EntityType::Text(Text { location, text_height: TEXT_HEIGHT_MM, value, ..Default::default() }));
    }

    /// Scale bar and what a reader of the drawing must know, above the board.
    fn notes(&mut self, job: &Job) {
        let order = job.order();
        let top = job.artwork.outline.outer.iter().map(|point| point.y).max().unwrap_or(Nm::ZERO);
        let (bar, tick) = (top + NOTES_ABOVE, Nm(500_000));
        let at = |x: Nm, y: Nm| Point { x, y };
        self.line(at(Nm::ZERO, bar), at(SCALE_BAR, bar));
        for x in [Nm::ZERO, SCALE_BAR] {
            self.line(at(x, bar - tick), at(x, bar + tick));
        }
        self.text(SCALE_BAR.mm() + 1.0, bar.mm() - TEXT_HEIGHT_MM / 2.0, "10 mm".to_string());
        let mut lines = vec![
            format!("{} REVISION {}", order.name.to_ascii_uppercase(), plain(&order.revision)),
            "UNITS MILLIMETRES, SCALE 1:1, SEEN FROM THE TOP; BOTTOM COPPER IS NOT MIRRORED".to_string(),
            "LAYERS NAMED _VOID ARE CUT OUT OF THE COPPER LAYER OF THE SAME NAME; CIRCLES ARE FINISHED HOLES".to_string(),
            "FOR REFERENCE: THE GERBER AND DRILL FILES GOVERN".to_string(),
        ];
        if job.breaks_a_rule() {
            lines.push("A DESIGN RULE IS BROKEN: BUILD ONLY ON WRITTEN CONSENT".to_string());
        }
        let compensation = job.compensation_m();
        if compensation > 0.0 {
            lines.insert(3, format!("TOP COPPER IS THE ARTWORK: FINISHED SIZE PLUS {:.4} MM ON EACH EDGE", compensation * 1e3));
        }
        let mut y = bar.mm() + 1.5 * TEXT_HEIGHT_MM;
        for line in lines.into_iter().rev() {
            self.text(0.0, y, line);
            y += 1.6 * TEXT_HEIGHT_MM;
        }
    }

    fn save(mut self, job: &Job, out: &mut dyn Write) -> io::Result<()> {
        self.drawing.header.minimum_drawing_extents = DxfPoint::new(self.low[0], self.low[1], 0.0);
        self.drawing.header.maximum_drawing_extents = DxfPoint::new(self.high[0], self.high[1], 0.0);
        // The root dictionary must be the first object.
        let root = self.drawing.header.next_available_handle;
        let groups = Handle(root.0 + 1);
        let dictionary = Dictionary { value_handles: HashMap::from([("ACAD_GROUP".to_string(), groups)]), ..Default::default() };
        let made = self.drawing.add_object(Object::new(ObjectType::Dictionary(dictionary))).common.handle;
        if made != root {
            return Err(io::Error::other("the drawing's root dictionary has an unexpected handle"));
        }
        let mut group = Object::new(ObjectType::Dictionary(Dictionary::default()));
        group.common.__owner_handle = root;
        self.drawing.add_object(group);
        let spare = self.drawing.header.next_available_handle.0;
        self.drawing.header.next_available_handle = Handle(spare + SPARE_HANDLES);

        let julian = job.order().date.as_deref().and_then(|date| date.parse::<NaiveDate>().ok());
        let julian = julian.map_or(NO_DATE_JULIAN, |date| i64::from(date.num_days_from_ce()) + JULIAN_OF_CE);
        let mut patch = Patch {
            out: BufWriter::new(out),
            line: Vec::new(),
            code: None,
            root,
            spaces: [self.model_space, self.paper_space],
            next_handle: spare,
            julian,
            variable: String::new(),
            kind: String::new(),
            table: String::new(),
            heads: BTreeMap::new(),
        };
        self.drawing.save(&mut patch).map_err(|error| match error {
            dxf::DxfError::IoError(error) => error,
            other => io::Error::new(io::ErrorKind::InvalidData, other.to_string()),
        })?;
        patch.out.flush()
    }
}

/// Printable ASCII only; the format's text has no other letters everywhere.
fn plain(text: &str) -> String {
    spelt_out(text).0
}

/// Takes the crate's text, and passes on what a strict reader accepts.
struct Patch<'w> {
    out: BufWriter<&'w mut dyn Write>,
    line: Vec<u8>,
    code: Option<String>,
    root: Handle,
    spaces: [Handle; 2],
    next_handle: u64,
    julian: i64,
    /// Header variable whose value comes next.
    variable: String,
    /// What began with the last code 0.
    kind: String,
    /// The table that is open.
    table: String,
    heads: BTreeMap<String, String>,
}

impl Write for Patch<'_> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        for line in bytes.split_inclusive(|byte| *byte == b'\n') {
            self.line.extend_from_slice(line);
            if self.line.ends_with(b"\n") {
                let text = String::from_utf8(std::mem::take(&mut self.line)).map_err(io::Error::other)?;
                let text = text.trim_end_matches(['\r', '\n']);
                match self.code.take() {
                    None => self.code = Some(text.trim().to_string()),
                    Some(code) => self.pair(&code, text)?,
                }
            }
        }
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        self.out.flush()
    }
}

impl Patch<'_> {
    fn put(&mut self, code: &str, value: &str) -> io::Result<()> {
        write!(self.out, "{code:>3}\r\n{value}\r\n")
    }

    fn handle(&mut self) -> String {
        self.next_handle += 1;
        format!("{:X}", self.next_handle - 1)
    }

    fn pair(&mut self, code: &str, value: &str) -> io::Result<()> {
        match code {
            "0" => {
                self.kind = value.to_string();
                if value == "ENDTAB" {
                    self.table.clear();
                }
            }
            "9" => self.variable = value.to_string(),
            // Of all header values only these come from the clock.
            "40" if matches!(self.variable.as_str(), "$TDCREATE" | "$TDUCREATE" | "$TDUPDATE" | "$TDUUPDATE") => {
                let day = format!("{}.0", self.julian);
                return self.put(code, &day);
            }
            "2" if self.kind == "SECTION" => {
                self.variable.clear();
                if value == "ENTITIES" {
                    self.blocks()?;
                }
            }
            "2" if self.kind == "TABLE" => {
                self.put(code, value)?;
                let head = self.handle();
                self.put("5", &head)?;
                self.put("330", "0")?;
                self.table = value.to_string();
                self.heads.insert(self.table.clone(), head);
                return Ok(());
            }
            "5" if !self.table.is_empty() && self.kind == self.table => {
                // Only dimension styles carry their handle under another code.
                self.put(if self.table == "DIMSTYLE" { "105" } else { "5" }, value)?;
                let head = self.heads.get(&self.table).cloned().unwrap_or_default();
                return self.put("330", &head);
            }
            "340" | "341" | "342" | "343" | "344" if self.kind == "DIMSTYLE" && value.is_empty() => return Ok(()),
            "5" if self.kind == "DICTIONARY" && value == format!("{:X}", self.root.0) => {
                self.put(code, value)?;
                return self.put("330", "0");
            }
            _ => {}
        }
        self.put(code, value)
    }

    /// Model and paper space as empty blocks, in a section of their own before the one that begins now.
    fn blocks(&mut self) -> io::Result<()> {
        self.put("2", "BLOCKS")?;
        for (name, owner, on_paper) in [("*MODEL_SPACE", self.spaces[0], false), ("*PAPER_SPACE", self.spaces[1], true)] {
            for begins in [true, false] {
                let handle = self.handle();
                self.put("0", if begins { "BLOCK" } else { "ENDBLK" })?;
                self.put("5", &handle)?;
                self.put("330", &format!("{:X}", owner.0))?;
                self.put("100", "AcDbEntity")?;
                if on_paper {
                    self.put("67", "1")?;
                }
                self.put("8", "0")?;
                self.put("100", if begins { "AcDbBlockBegin" } else { "AcDbBlockEnd" })?;
                if begins {
                    for (code, value) in [("2", name), ("70", "0"), ("10", "0.0"), ("20", "0.0"), ("30", "0.0"), ("3", name), ("1", "")] {
                        self.put(code, value)?;
                    }
                }
            }
        }
        self.put("0", "ENDSEC")?;
        self.put("0", "SECTION")
    }
}
