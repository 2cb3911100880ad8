//! Which Gerber commands say a layer? The only door to gerber-types.
//!
//! Format and order of the commands follow *The Gerber Layer Format Specification*, revision 2024.05: attributes first (5), coordinates in
//! whole nanometres (4.2), one region per polygon with its voids cleared right after it (4.10.5), every pad a flash (6.4).

use std::collections::BTreeMap;
use std::io;
use std::io::BufWriter;
use std::io::Write;

use chrono::DateTime;
use gerber_types::Aperture;
use gerber_types::ApertureAttribute;
use gerber_types::ApertureDefinition;
use gerber_types::ApertureFunction;
use gerber_types::AttributeDeletionCriterion;
use gerber_types::Circle;
use gerber_types::Command;
use gerber_types::CoordinateFormat;
use gerber_types::CoordinateMode;
use gerber_types::CoordinateNumber;
use gerber_types::Coordinates;
use gerber_types::CopperType;
use gerber_types::DCode;
use gerber_types::ExtendedCode;
use gerber_types::ExtendedPosition;
use gerber_types::FileAttribute;
use gerber_types::FileFunction;
use gerber_types::FilePolarity;
use gerber_types::GCode;
use gerber_types::GenerationSoftware;
use gerber_types::GerberCode;
use gerber_types::GerberError;
use gerber_types::Ident;
use gerber_types::InterpolationMode;
use gerber_types::MCode;
use gerber_types::Net;
use gerber_types::ObjectAttribute;
use gerber_types::Operation;
use gerber_types::Part;
use gerber_types::Pin;
use gerber_types::Polarity;
use gerber_types::Position;
use gerber_types::Profile;
use gerber_types::QuadrantMode;
use gerber_types::Rectangular;
use gerber_types::SmdPadType;
use gerber_types::Unit;
use gerber_types::ZeroOmission;

use crate::artwork::Face;
use crate::artwork::Fits;
use crate::artwork::HoleUse;
use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::Shape;
use crate::artwork::shape::bounds;
use crate::base::Nm;
use crate::base::Point;
use crate::package::job::Job;

/// Millimetres with six decimals are whole nanometres; four digits before them reach 10 m.
const FORMAT: CoordinateFormat =
    CoordinateFormat { zero_omission: ZeroOmission::Leading, coordinate_mode: CoordinateMode::Absolute, integer: 4, decimal: 6 };
/// Ten metres in nanometres: where the four digits before the point end.
const MAX_COORDINATE: u64 = 10_000_000_000;
/// Two letters, two signs, twice ten digits, `D01*` and the line's end.
const LONGEST_LINE: usize = 29;
/// Width of the stroke whose centre line is the board's edge.
const PROFILE_STROKE: Nm = Nm(100_000);
/// The first aperture number the format allows.
const FIRST_APERTURE: i32 = 10;
/// Large enough that the disk, not the number of calls, sets the pace.
const BUFFER_BYTES: usize = 1 << 16;

/// Writes copper layer `number` (1 is the top).
pub fn copper(job: &Job, number: u8, out: &mut dyn Write) -> io::Result<()> {
    let last = job.copper_layers();
    let pos = match number {
        1 => ExtendedPosition::Top,
        n if n == last => ExtendedPosition::Bottom,
        _ => ExtendedPosition::Inner,
    };
    let copper_type = if number == 1 { CopperType::Signal } else { CopperType::Plane };
    let function = FileFunction::Copper { layer: i32::from(number), pos, copper_type: Some(copper_type) };
    let mut pen = Pen::begin(job, function, FilePolarity::Positive, out)?;

    // One function, one aperture, even where the shape is the same.
    let outer = number == 1 || number == last;
    let mut apertures: BTreeMap<Pad, i32> = BTreeMap::new();
    if outer {
        for hole in job.artwork.holes.iter().filter(|hole| hole.pad > Nm::ZERO) {
            apertures.entry(Pad::Round(hole.purpose, hole.pad)).or_default();
        }
    }
    if number == 1 {
        for land in &job.artwork.lands {
            apertures.entry(Pad::Land(land.size[0], land.size[1])).or_default();
        }
    }
    for (code, (pad, slot)) in (FIRST_APERTURE..).zip(&mut apertures) {
        *slot = code;
        let (function, aperture) = match *pad {
            Pad::Round(HoleUse::Via, size) => (ApertureFunction::ViaPad, Aperture::Circle(Circle::new(size.mm()))),
            Pad::Round(HoleUse::Mounting, size) => (ApertureFunction::WasherPad, Aperture::Circle(Circle::new(size.mm()))),
            Pad::Land(x, y) => (ApertureFunction::SmdPad(SmdPadType::CopperDefined), Aperture::Rectangle(Rectangular::new(x.mm(), y.mm()))),
        };
        pen.define(code, function, aperture)?;
    }

    pen.shapes(job.artwork.layers.get(&Layer::Copper(number)).map_or(&[], Vec::as_slice), |role| match role {
        Role::Text => ApertureFunction::NonConductor,
        _ => ApertureFunction::Conductor,
    })?;

    if outer {
        for hole in job.artwork.holes.iter().filter(|hole| hole.pad > Nm::ZERO) {
            pen.net(&hole.net)?;
            pen.select(apertures.get(&Pad::Round(hole.purpose, hole.pad)))?;
            pen.flash(hole.at)?;
        }
    }
    if number == 1 {
        for land in &job.artwork.lands {
            pen.net(&land.net)?;
            pen.emit(ExtendedCode::ObjectAttribute(ObjectAttribute::Pin(Pin {
                refdes: field(&land.pin.0),
                name: field(&land.pin.1),
                function: None,
            })))?;
            pen.select(apertures.get(&Pad::Land(land.size[0], land.size[1])))?;
            pen.flash(land.at)?;
            pen.emit(ExtendedCode::DeleteAttribute(AttributeDeletionCriterion::SingleObjectAttribute(".P".into())))?;
        }
    }
    pen.end()
}

/// Writes the openings of the solder mask.
pub fn mask(job: &Job, face: Face, out: &mut dyn Write) -> io::Result<()> {
    let function = FileFunction::SolderMask { pos: position(face), index: None };
    // The image shows where there is no mask.
    let mut pen = Pen::begin(job, function, FilePolarity::Negative, out)?;
    pen.shapes(job.artwork.layers.get(&Layer::Mask(face)).map_or(&[], Vec::as_slice), |_| ApertureFunction::Material)?;
    pen.end()
}

/// Writes the legend.
pub fn legend(job: &Job, face: Face, out: &mut dyn Write) -> io::Result<()> {
    let function = FileFunction::Legend { pos: position(face), index: None };
    let mut pen = Pen::begin(job, function, FilePolarity::Positive, out)?;
    pen.shapes(job.artwork.layers.get(&Layer::Legend(face)).map_or(&[], Vec::as_slice), |_| ApertureFunction::Material)?;
    pen.end()
}

/// Writes the openings of the stencil: the lands of chip parts, one flash each.
pub fn paste(job: &Job, out: &mut dyn Write) -> io::Result<()> {
    let mut pen = Pen::begin(job, FileFunction::Paste(Position::Top), FilePolarity::Positive, out)?;
    let lands = || job.artwork.lands.iter().filter(|land| land.fits == Fits::Chip);
    let mut apertures: BTreeMap<[Nm; 2], i32> = lands().map(|land| (land.size, 0)).collect();
    for (code, (size, slot)) in (FIRST_APERTURE..).zip(&mut apertures) {
        *slot = code;
        pen.define(code, ApertureFunction::Material, Aperture::Rectangle(Rectangular::new(size[0].mm(), size[1].mm())))?;
    }
    for land in lands() {
        pen.select(apertures.get(&land.size))?;
        pen.flash(land.at)?;
    }
    pen.end()
}

/// Writes the drill map: the board's edge and these shapes.
pub fn drawing(job: &Job, shapes: &[Shape], out: &mut dyn Write) -> io::Result<()> {
    let mut pen = Pen::begin(job, FileFunction::DrillMap, FilePolarity::Positive, out)?;
    pen.define(FIRST_APERTURE, ApertureFunction::Other("Edge".to_string()), Aperture::Circle(Circle::new(PROFILE_STROKE.mm())))?;
    pen.select(Some(&FIRST_APERTURE))?;
    pen.contour(&job.artwork.outline.outer)?;
    pen.shapes(shapes, |_| ApertureFunction::Other("Drawing".to_string()))?;
    pen.end()
}

/// Writes the board's edge as a closed chain of strokes; their centre line is the edge.
pub fn profile(job: &Job, out: &mut dyn Write) -> io::Result<()> {
    let edge = if job.artwork.plated_edges.is_empty() { Profile::NonPlated } else { Profile::Plated };
    let mut pen = Pen::begin(job, FileFunction::Profile(Some(edge)), FilePolarity::Positive, out)?;
    pen.define(FIRST_APERTURE, ApertureFunction::Profile, Aperture::Circle(Circle::new(PROFILE_STROKE.mm())))?;
    pen.select(Some(&FIRST_APERTURE))?;
    let outline = &job.artwork.outline;
    for ring in std::iter::once(&outline.outer).chain(&outline.voids) {
        pen.contour(ring)?;
    }
    pen.end()
}

/// What is flashed; the order of the apertures.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Pad {
    Round(HoleUse, Nm),
    Land(Nm, Nm),
}

fn position(face: Face) -> Position {
    match face {
        Face::Top => Position::Top,
        Face::Bottom => Position::Bottom,
    }
}

/// A text as a field of an attribute: its delimiters and all that is not printable ASCII written as `\uXXXX` (3.4.3).
pub(super) fn field(text: &str) -> String {
    let mut escaped = String::with_capacity(text.len());
    let mut units = [0; 2];
    for c in text.chars() {
        if matches!(c, ' '..='~') && !matches!(c, ',' | '\\' | '%' | '*') {
            escaped.push(c);
        } else {
            for unit in c.encode_utf16(&mut units) {
                escaped.push_str(&format!("\\u{unit:04X}"));
            }
        }
    }
    escaped
}

/// Turns commands into text, one at a time, and remembers which attributes are set.
struct Pen<'w> {
    out: BufWriter<&'w mut dyn Write>,
    function: Option<ApertureFunction>,
    net: Option<String>,
    aperture: Option<i32>,
}

impl<'w> Pen<'w> {
    /// Header of every file, in the order the specification lists.
    fn begin(job: &Job, function: FileFunction, polarity: FilePolarity, out: &'w mut dyn Write) -> io::Result<Pen<'w>> {
        let order = job.order();
        let mut pen = Pen { out: BufWriter::with_capacity(BUFFER_BYTES, out), function: None, net: None, aperture: None };
        let tool = env!("CARGO_PKG_NAME");
        pen.emit(FileAttribute::GenerationSoftware(GenerationSoftware::new(tool, tool, Some(env!("CARGO_PKG_VERSION")))))?;
        if let Some(date) = &order.date {
            // Midnight, universal time: an order has a day, not an hour.
            let date = DateTime::parse_from_rfc3339(&format!("{date}T00:00:00Z")).map_err(io::Error::other)?;
            pen.emit(FileAttribute::CreationDate(date))?;
        }
        pen.emit(FileAttribute::ProjectId { id: field(&order.name), uuid: job.project, revision: field(&order.revision) })?;
        pen.emit(FileAttribute::SameCoordinates(Some(Ident::Uuid(job.coordinates))))?;
        pen.emit(FileAttribute::Part(Part::Single))?;
        pen.emit(FileAttribute::FileFunction(function))?;
        pen.emit(FileAttribute::FilePolarity(polarity))?;
        pen.emit(FORMAT)?;
        pen.emit(Unit::Millimeters)?;
        pen.emit(GCode::QuadrantMode(QuadrantMode::Multi))?;
        pen.emit(GCode::InterpolationMode(InterpolationMode::Linear))?;
        pen.emit(Polarity::Dark)?;
        if job.breaks_a_rule() {
            pen.out.write_all(b"G04 A DESIGN RULE IS BROKEN: quote and build only on written consent*\n")?;
        }
        Ok(pen)
    }

    fn emit(&mut self, command: impl Into<Command>) -> io::Result<()> {
        command.into().serialize(&mut self.out).map_err(|error| match error {
            GerberError::IoError(error) => error,
            other => io::Error::new(io::ErrorKind::InvalidData, other.to_string()),
        })
    }

    fn define(&mut self, code: i32, function: ApertureFunction, aperture: Aperture) -> io::Result<()> {
        self.role(function)?;
        self.emit(ApertureDefinition::new(code, aperture))
    }

    /// Sets what the next aperture or region is for.
    fn role(&mut self, function: ApertureFunction) -> io::Result<()> {
        if self.function.as_ref() != Some(&function) {
            self.emit(ApertureAttribute::ApertureFunction(function.clone()))?;
            self.function = Some(function);
        }
        Ok(())
    }

    /// Sets the net of the next objects; an empty name says that there is none.
    fn net(&mut self, name: &str) -> io::Result<()> {
        if self.net.as_deref() != Some(name) {
            let net = if name.is_empty() { Net::None } else { Net::Connected(vec![field(name)]) };
            self.emit(ExtendedCode::ObjectAttribute(ObjectAttribute::Net(net)))?;
            self.net = Some(name.to_string());
        }
        Ok(())
    }

    fn select(&mut self, code: Option<&i32>) -> io::Result<()> {
        let Some(&code) = code else { return Err(io::Error::other("a pad without aperture")) };
        if self.aperture != Some(code) {
            self.emit(DCode::SelectAperture(code))?;
            self.aperture = Some(code);
        }
        Ok(())
    }

    /// Polygons as regions. Shapes with voids come first, the larger before the smaller: a void erases all that was drawn in it before,
    /// so whatever lies in a void must come after it.
    fn shapes(&mut self, shapes: &[Shape], function: impl Fn(Role) -> ApertureFunction) -> io::Result<()> {
        let mut drawn: Vec<&Shape> = shapes.iter().collect();
        drawn.sort_by_cached_key(|shape| if shape.voids.is_empty() { (1, 0) } else { (0, -box_area(&shape.outer)) });
        for shape in drawn {
            self.role(function(shape.role))?;
            if matches!(function(shape.role), ApertureFunction::Conductor | ApertureFunction::NonConductor) {
                self.net(&shape.net)?;
            }
            self.region(std::iter::once(&shape.outer))?;
            if !shape.voids.is_empty() {
                self.emit(Polarity::Clear)?;
                self.region(shape.voids.iter())?;
                self.emit(Polarity::Dark)?;
            }
        }
        Ok(())
    }

    fn region<'s>(&mut self, rings: impl Iterator<Item = &'s Vec<Point>>) -> io::Result<()> {
        self.emit(GCode::RegionMode(true))?;
        for ring in rings {
            self.contour(ring)?;
        }
        self.emit(GCode::RegionMode(false))
    }

    /// Moves to the first vertex and draws through all others back to it.
    ///
    /// The vertices are written here, not by the crate, which makes a rational number and a string of each coordinate: on a board of a
    /// million vertices that takes nine tenths of the time. A test holds both ways to the same bytes.
    fn contour(&mut self, ring: &[Point]) -> io::Result<()> {
        let Some((&first, rest)) = ring.split_first() else { return Ok(()) };
        self.vertex(first, b"D02*\n")?;
        for &point in rest {
            self.vertex(point, b"D01*\n")?;
        }
        self.vertex(first, b"D01*\n")
    }

    fn vertex(&mut self, at: Point, operation: &[u8; 5]) -> io::Result<()> {
        // Filled from the end: operation, y, x.
        let mut line = [0; LONGEST_LINE];
        let mut begin = LONGEST_LINE - operation.len();
        line[begin..].copy_from_slice(operation);
        for (letter, value) in [(b'Y', at.y), (b'X', at.x)] {
            let mut rest = value.0.unsigned_abs();
            if rest >= MAX_COORDINATE {
                return Err(io::Error::new(
                    io::ErrorKind::InvalidData,
                    format!("a coordinate of {} mm; the format ends at 10 m", value.mm()),
                ));
            }
            loop {
                begin -= 1;
                line[begin] = b'0' + (rest % 10) as u8;
                rest /= 10;
                if rest == 0 {
                    break;
                }
            }
            if value < Nm::ZERO {
                begin -= 1;
                line[begin] = b'-';
            }
            begin -= 1;
            line[begin] = letter;
        }
        self.out.write_all(&line[begin..])
    }

    fn flash(&mut self, at: Point) -> io::Result<()> {
        self.emit(DCode::Operation(Operation::Flash(Some(coordinates(at)))))
    }

    fn end(mut self) -> io::Result<()> {
        self.emit(MCode::EndOfFile)?;
        self.out.flush()
    }
}

fn coordinates(at: Point) -> Coordinates {
    // `new` takes whole nanometres; the conversions from f64 cut instead of rounding.
    Coordinates::new(CoordinateNumber::new(at.x.0), CoordinateNumber::new(at.y.0), FORMAT)
}

fn box_area(ring: &[Point]) -> i128 {
    bounds(ring.iter().copied()).map_or(0, |[low, high]| i128::from((high.x - low.x).0) * i128::from((high.y - low.y).0))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn vertices_are_written_as_the_crate_writes_them() {
        let ends = [0, 1, -1, 10, 123_456_789, -987_654_321, 9_999_999_999, -9_999_999_999];
        for (x, y) in ends.iter().flat_map(|x| ends.map(|y| (*x, y))) {
            let at = Point::new(x, y);
            let (mut own, mut theirs) = (Vec::new(), Vec::new());
            let mut pen = Pen { out: BufWriter::new(&mut own as &mut dyn Write), function: None, net: None, aperture: None };
            pen.contour(&[at, Point::new(1, 2)]).unwrap();
            pen.out.flush().unwrap();
            drop(pen);
            let mut pen = Pen { out: BufWriter::new(&mut theirs as &mut dyn Write), function: None, net: None, aperture: None };
            pen.emit(DCode::Operation(Operation::Move(Some(coordinates(at))))).unwrap();
            for point in [Point::new(1, 2), at] {
                pen.emit(DCode::Operation(Operation::Interpolate(Some(coordinates(point)), None))).unwrap();
            }
            pen.out.flush().unwrap();
            drop(pen);
            assert_eq!(String::from_utf8(own), String::from_utf8(theirs));
        }
    }

    #[test]
    fn a_coordinate_beyond_the_format_is_refused() {
        let mut out = Vec::new();
        let mut pen = Pen { out: BufWriter::new(&mut out as &mut dyn Write), function: None, net: None, aperture: None };
        assert!(pen.contour(&[Point::new(10_000_000_000, 0)]).is_err());
    }
}
