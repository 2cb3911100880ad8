//! Which points of the bare board belong together? `<name>.ipc`, the netlist of the electrical test after IPC-D-356A.
//!
//! Records of 80 columns, one a test point: lands, plated and unplated holes, and two points near the ends of every piece of copper that has
//! neither, so that a resonator is tested end to end and a bridged gap is reported by its name.

use std::collections::BTreeMap;
use std::io;
use std::io::BufWriter;
use std::io::Write;

use crate::artwork::Face;
use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::shape::Region;
use crate::base::Nm;
use crate::base::Point;
use crate::base::spelt_out;
use crate::package::job::Job;
use crate::package::probe;

/// Columns of a record.
const COLUMNS: usize = 80;
/// Longest net name a record holds.
const NET: usize = 14;
/// Coordinates have six digits of a micrometre.
const MAX_COORDINATE: i64 = 999_999;
/// Sizes have four.
const MAX_SIZE: i64 = 9_999;

/// Writes the netlist.
pub fn write(job: &Job, out: &mut dyn Write) -> io::Result<()> {
    let order = job.order();
    let mut out = BufWriter::new(out);
    let line = |keyword: &str, text: &str| {
        let text = format!("P  {keyword:<5} {}", spelt_out(text).0);
        text.chars().take(COLUMNS).collect::<String>().trim_end().to_string()
    };
    writeln!(out, "{}", line("JOB", &order.name))?;
    writeln!(out, "{}", line("CODE", "00"))?;
    writeln!(out, "{}", line("UNITS", "CUST 1"))?;
    writeln!(out, "{}", line("TITLE", &order.title))?;
    writeln!(out, "{}", line("NUM", &order.part_number))?;
    writeln!(out, "{}", line("REV", &order.revision))?;
    writeln!(out, "{}", line("VER", "IPC-D-356A"))?;
    writeln!(out, "P  IMAGE PRIMARY")?;
    if job.breaks_a_rule() {
        writeln!(out, "C  *** A DESIGN RULE IS BROKEN: build only on written consent ***")?;
    }
    writeln!(out, "C  0.001 mm a unit, origin at the lower left board corner, seen from the top")?;
    writeln!(out, "C  Identity of the coordinates {}", job.coordinates)?;
    let points = points(job);
    let mut aliases: BTreeMap<&str, String> = BTreeMap::new();
    for point in &points {
        if point.net.len() > NET || point.net.contains(char::is_whitespace) {
            let next = aliases.len() + 1;
            aliases.entry(point.net.as_str()).or_insert_with(|| format!("NNAME{next}"));
        }
    }
    for (net, alias) in &aliases {
        writeln!(out, "P  {alias} {}", spelt_out(net).0)?;
    }
    for point in &points {
        let net = aliases.get(point.net.as_str()).map_or(point.net.as_str(), String::as_str);
        writeln!(out, "{}", point.record(net)?)?;
    }
    writeln!(out, "999")?;
    out.flush()
}

/// What kind of test point it is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
enum Kind {
    /// A land or a bare place of copper, on copper layer so and so.
    Surface(u8),
    /// A hole through all layers: diameter, plated or not.
    Through(Nm, bool),
}

/// One record.
struct TestPoint {
    kind: Kind,
    net: String,
    reference: String,
    pin: String,
    at: Point,
    size: [Nm; 2],
    /// Whether other points of the net lie beyond this one.
    within: bool,
    mask: u8,
}

impl TestPoint {
    /// The record, its columns as the format counts them.
    fn record(&self, net: &str) -> io::Result<String> {
        let um = |value: Nm| (value.0 + 500).div_euclid(1000);
        let coordinate = |value: Nm| {
            let value = um(value);
            if value.abs() > MAX_COORDINATE {
                return Err(io::Error::new(io::ErrorKind::InvalidData, "a coordinate beyond 999.999 mm; the netlist format ends there"));
            }
            Ok(format!("{}{:06}", if value < 0 { '-' } else { '+' }, value.abs()))
        };
        let size = |value: Nm| um(value).clamp(0, MAX_SIZE);
        let (code, hole, access) = match self.kind {
            Kind::Surface(layer) => ("327", " ".repeat(6), layer),
            Kind::Through(diameter, plated) => {
                (if plated { "317" } else { "367" }, format!("D{:04}{}", size(diameter), if plated { 'P' } else { 'U' }), 0)
            }
        };
        // Columns 1-3 code, 4-17 net, 21-26 reference, 27 -, 28-31 pin, 32 within the net, 33-38 hole, 39-41 access, 42-57 place,
        // 58-67 size, 73-74 mask.
        let record = format!(
            "{code}{net:<14.14}   {reference:<6.6}{dash}{pin:<4.4}{within}{hole}A{access:02}X{x}Y{y}X{sx:04}Y{sy:04}     S{mask}",
            reference = self.reference,
            dash = if self.pin.is_empty() { ' ' } else { '-' },
            pin = self.pin,
            within = if self.within { 'M' } else { ' ' },
            x = coordinate(self.at.x)?,
            y = coordinate(self.at.y)?,
            sx = size(self.size[0]),
            sy = size(self.size[1]),
            mask = self.mask,
        );
        Ok(record.trim_end().to_string())
    }
}

/// All test points: lands, holes, then the copper that has neither.
fn points(job: &Job) -> Vec<TestPoint> {
    let board = job.bundle.board;
    let open = |layer: Layer, at: Point| {
        job.artwork.layers.get(&layer).is_none_or(|shapes| shapes.iter().any(|shape| Region::from_shape(shape).contains(at)))
    };
    // Which faces carry mask over a point: 0 none, 1 top, 2 bottom, 3 both.
    let mask = |at: Point| u8::from(!open(Layer::Mask(Face::Top), at)) + 2 * u8::from(!open(Layer::Mask(Face::Bottom), at));
    let mut points = Vec::new();
    for land in &board.lands {
        points.push(TestPoint {
            kind: Kind::Surface(1),
            net: land.net.clone(),
            reference: land.pin.0.clone(),
            pin: land.pin.1.clone(),
            at: land.at,
            size: land.size,
            within: false,
            mask: mask(land.at),
        });
    }
    for hole in &board.holes {
        let plated = hole.is_plated();
        points.push(TestPoint {
            kind: Kind::Through(hole.diameter, plated),
            net: if plated { hole.net.clone() } else { "N/C".to_string() },
            reference: if plated { "VIA".to_string() } else { String::new() },
            pin: String::new(),
            at: hole.at,
            size: [hole.pad, Nm::ZERO],
            within: plated,
            mask: mask(hole.at),
        });
    }
    for (&layer, shapes) in &board.layers {
        let Layer::Copper(number) = layer else { continue };
        // Inner layers are reached through holes alone.
        if number != 1 && number != job.copper_layers() {
            continue;
        }
        let mut seen: BTreeMap<&str, usize> = BTreeMap::new();
        for shape in shapes.iter().filter(|shape| shape.role != Role::Text && !shape.net.is_empty()) {
            let region = Region::from_shape(shape);
            let land = (number == 1).then(|| board.lands.iter().find(|land| land.net == shape.net && region.contains(land.at))).flatten();
            let has_hole = board.holes.iter().any(|hole| hole.is_plated() && hole.net == shape.net && region.contains(hole.at));
            // Ground that is soldered or plated through is reached there.
            if shape.role == Role::Ground && (land.is_some() || has_hole) {
                continue;
            }
            let Some((ends, diameter)) = probe::ends(shape, land.map(|land| land.at)) else { continue };
            let taken = seen.entry(shape.net.as_str()).or_default();
            for at in ends.into_iter().skip(usize::from(land.is_some())) {
                *taken += 1;
                points.push(TestPoint {
                    kind: Kind::Surface(number),
                    net: shape.net.clone(),
                    reference: reference(&shape.net),
                    pin: taken.to_string(),
                    at,
                    size: [diameter, Nm::ZERO],
                    within: false,
                    mask: mask(at),
                });
            }
        }
    }
    points
}

/// A net's own name as reference, in the six letters there are.
fn reference(net: &str) -> String {
    net.chars().filter(char::is_ascii_alphanumeric).take(6).collect()
}

/// One test point read back.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Tested {
    /// Net.
    pub net: String,
    /// Copper layer it is reached on; 0 for a hole through all.
    pub access: u8,
    /// Diameter of the hole, and whether it is plated.
    pub hole: Option<(Nm, bool)>,
    /// Where.
    pub at: Point,
}

/// A netlist read back.
#[derive(Clone, Debug, Default)]
pub(super) struct Netlist {
    /// Revision its header states.
    pub revision: Option<String>,
    /// The test points.
    pub points: Vec<Tested>,
    /// The identifier of its coordinates.
    pub coordinates: Option<String>,
}

/// Reads a netlist; what is wrong with it comes beside what could be read.
pub(super) fn read(text: &str) -> (Netlist, Vec<(&'static str, String)>) {
    let (mut netlist, mut faults) = (Netlist::default(), Vec::new());
    let (mut metric, mut ended, mut aliases) = (false, false, BTreeMap::new());
    for (number, line) in (1..).zip(text.lines()) {
        let mut bad = |what: &str| faults.push(("netlist-unreadable", format!("line {number}: {what}: \"{}\"", line.escape_default())));
        if ended {
            bad("text after the end record");
            break;
        }
        if !line.is_ascii() || line.len() > COLUMNS {
            bad("not ASCII, or wider than 80 columns");
            continue;
        }
        if let Some(header) = line.strip_prefix("P  ") {
            let (keyword, value) = header.split_once(' ').unwrap_or((header, ""));
            let value = value.trim();
            match keyword {
                "UNITS" if value == "CUST 1" || value == "SI" => metric = true,
                "UNITS" => faults.push(("netlist-units", format!("UNITS {value} is not millimetres"))),
                "REV" => netlist.revision = Some(value.to_string()),
                _ if keyword.starts_with("NNAME") => {
                    aliases.insert(keyword.to_string(), value.to_string());
                }
                _ => {}
            }
        } else if let Some(comment) = line.strip_prefix('C') {
            if let Some(ident) = comment.trim().strip_prefix("Identity of the coordinates ") {
                netlist.coordinates = Some(ident.to_string());
            }
        } else if line == "999" {
            ended = true;
        } else {
            match tested(line) {
                Some(point) => netlist.points.push(point),
                None => bad("not a test record"),
            }
        }
    }
    if !metric && faults.iter().all(|(code, _)| *code != "netlist-units") {
        faults.push(("netlist-units", "no unit is stated".to_string()));
    }
    if !ended {
        faults.push(("netlist-end-missing", "no end record 999: the file is cut off".to_string()));
    }
    for point in &mut netlist.points {
        if let Some(name) = aliases.get(&point.net) {
            point.net.clone_from(name);
        }
    }
    (netlist, faults)
}

/// One record by its columns.
fn tested(line: &str) -> Option<Tested> {
    let columns = |from: usize, to: usize| line.get(from - 1..to.min(line.len()));
    let number = |from: usize, to: usize| columns(from, to)?.parse::<i64>().ok();
    let hole = match columns(1, 3)? {
        "317" | "367" => Some((
            Nm(number(34, 37)? * 1000),
            match columns(38, 38)? {
                "P" => true,
                "U" => false,
                _ => return None,
            },
        )),
        "327" => None,
        _ => return None,
    };
    if columns(39, 39)? != "A" || columns(42, 42)? != "X" || columns(50, 50)? != "Y" {
        return None;
    }
    let access = u8::try_from(number(40, 41)?).ok()?;
    let at = Point::new(number(43, 49)? * 1000, number(51, 57)? * 1000);
    Some(Tested { net: columns(4, 17)?.trim().to_string(), access, hole, at })
}
