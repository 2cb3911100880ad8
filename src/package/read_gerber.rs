//! What does a Gerber file say? Its objects, as an independent reader sees them, and what is wrong with them. The only door to gerber_parser.
//!
//! The reader crate knows the syntax and the attributes; contours, apertures, units and the end of the file are judged here
//! (*The Gerber Layer Format Specification*, revision 2024.05, 4.2, 4.3, 4.10, 4.13).

use std::collections::BTreeMap;
use std::io::BufReader;

use gerber_parser::gerber_types::Aperture;
use gerber_parser::gerber_types::ApertureAttribute;
use gerber_parser::gerber_types::ApertureFunction;
use gerber_parser::gerber_types::Command;
use gerber_parser::gerber_types::CoordinateMode;
use gerber_parser::gerber_types::Coordinates;
use gerber_parser::gerber_types::DCode;
use gerber_parser::gerber_types::ExtendedCode;
use gerber_parser::gerber_types::FileAttribute;
use gerber_parser::gerber_types::FileFunction;
use gerber_parser::gerber_types::FunctionCode;
use gerber_parser::gerber_types::GCode;
use gerber_parser::gerber_types::Ident;
use gerber_parser::gerber_types::InterpolationMode;
use gerber_parser::gerber_types::MCode;
use gerber_parser::gerber_types::Net;
use gerber_parser::gerber_types::ObjectAttribute;
use gerber_parser::gerber_types::Operation;
use gerber_parser::gerber_types::Polarity;
use gerber_parser::gerber_types::Unit;
use gerber_parser::gerber_types::ZeroOmission;

use crate::artwork::shape::bounds;
use crate::base::Nm;
use crate::base::Point;

/// What a file is for, as far as the checks care.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Content {
    /// A copper layer.
    Copper(i32),
    /// The board's edge.
    Profile,
    /// Another layer.
    Other,
}

/// What a file holds.
#[derive(Debug, Default)]
pub struct Image {
    /// What it is for; `None` when it does not say.
    pub content: Option<Content>,
    /// Its file attributes as written: name and value.
    pub attributes: BTreeMap<String, String>,
    /// The identifier of its coordinates.
    pub coordinates: Option<String>,
    /// All that is drawn, in order.
    pub objects: Vec<Object>,
    /// Chains of strokes outside regions, as their centre lines.
    pub chains: Vec<Vec<Point>>,
}

/// One contour of a region, or one pad.
#[derive(Clone, Debug)]
pub struct Object {
    /// Dark, or clear: erases what came before.
    pub dark: bool,
    /// Its net; empty when it belongs to none, `None` when the file does not say.
    pub net: Option<String>,
    /// What it is for: the aperture function as written.
    pub function: String,
    /// Its form.
    pub form: Form,
}

/// The form of an object.
#[derive(Clone, Debug)]
pub enum Form {
    /// A closed contour, the first vertex not repeated.
    Contour(Vec<Point>),
    /// A pad: where, half its size, whether it is round.
    Pad(Point, [Nm; 2], bool),
}

impl Image {
    /// Corners of all that is dark; strokes by their centre line.
    pub fn bounds(&self) -> Option<[Point; 2]> {
        let drawn = self.objects.iter().filter(|object| object.dark).flat_map(|object| match &object.form {
            Form::Contour(ring) => ring.clone(),
            Form::Pad(at, [x, y], _) => vec![at.shifted(-*x, -*y), at.shifted(*x, *y)],
        });
        bounds(drawn.chain(self.chains.iter().flatten().copied()))
    }
}

/// A fault: its code, and what was found.
pub type Fault = (&'static str, String);

/// Reads a file; what is wrong with it comes beside what could be read.
pub fn read(bytes: &[u8]) -> (Image, Vec<Fault>) {
    let mut faults: Vec<Fault> = Vec::new();
    let document = match gerber_parser::parse(BufReader::new(bytes)) {
        Ok(document) => document,
        Err((document, error)) => {
            faults.push(("gerber-unreadable", error.to_string()));
            document
        }
    };
    // The crate answers Ok with the faults inside.
    faults.extend(document.errors().into_iter().map(|error| ("gerber-unreadable", error.to_string())));
    match document.units {
        Some(Unit::Millimeters) => {}
        Some(Unit::Inches) => faults.push(("gerber-units", "the unit is inches, not millimetres".into())),
        None => faults.push(("gerber-units", "no unit is set".into())),
    }
    match document.format_specification {
        Some(format)
            if format.decimal == 6
                && format.zero_omission == ZeroOmission::Leading
                && format.coordinate_mode == CoordinateMode::Absolute => {}
        Some(format) => {
            let found = format!(
                "{} digits before and {} after the point, {:?} zeros, {:?}",
                format.integer, format.decimal, format.zero_omission, format.coordinate_mode
            );
            faults.push(("gerber-format", format!("{found}; not whole nanometres")));
        }
        None => faults.push(("gerber-format", "no coordinate format is set".into())),
    }
    let apertures =
        document.apertures.iter().map(|(code, aperture)| (*code, (half_size(aperture), matches!(aperture, Aperture::Circle(_)))));
    let mut reader = Reader {
        image: Image { attributes: attributes(bytes), ..Image::default() },
        faults,
        at: Point::default(),
        dark: true,
        region: None,
        aperture: None,
        ended: false,
        apertures: apertures.collect(),
        net: None,
        function: String::new(),
        functions: BTreeMap::new(),
    };
    for command in document.commands() {
        reader.take(command);
    }
    if !reader.ended {
        reader.faults.push(("gerber-end-missing", "no M02 at the end: the file is cut off".into()));
    }
    reader.close();
    (reader.image, reader.faults)
}

/// The file attributes, as the lines of the head say them.
fn attributes(bytes: &[u8]) -> BTreeMap<String, String> {
    let lines = bytes.split(|byte| *byte == b'\n').take_while(|line| !line.starts_with(b"%MO"));
    lines
        .filter_map(|line| {
            let text = String::from_utf8_lossy(line);
            let (name, value) = text.trim().strip_prefix("%TF.")?.strip_suffix("*%")?.split_once(',')?;
            Some((name.to_string(), value.to_string()))
        })
        .collect()
}

fn half_size(aperture: &Aperture) -> [Nm; 2] {
    let half = |mm: f64| Nm::from_m(mm * 1e-3 / 2.0);
    match aperture {
        Aperture::Circle(circle) => [half(circle.diameter); 2],
        Aperture::Rectangle(size) | Aperture::Obround(size) => [half(size.x), half(size.y)],
        Aperture::Polygon(polygon) => [half(polygon.diameter); 2],
        Aperture::Macro(..) => [Nm::ZERO; 2],
    }
}

/// The name of an aperture function, as far as the checks tell them apart.
fn function_name(function: &ApertureFunction) -> String {
    match function {
        ApertureFunction::ViaPad => "ViaPad",
        ApertureFunction::WasherPad => "WasherPad",
        ApertureFunction::SmdPad(_) => "SMDPad",
        ApertureFunction::Conductor => "Conductor",
        ApertureFunction::NonConductor => "NonConductor",
        ApertureFunction::Profile => "Profile",
        ApertureFunction::Material => "Material",
        _ => "other",
    }
    .to_string()
}

struct Reader {
    image: Image,
    faults: Vec<Fault>,
    at: Point,
    dark: bool,
    /// The contour being drawn, when within G36 and G37.
    region: Option<Vec<Point>>,
    aperture: Option<i32>,
    ended: bool,
    /// Half the size, and whether it is round.
    apertures: BTreeMap<i32, ([Nm; 2], bool)>,
    net: Option<String>,
    function: String,
    functions: BTreeMap<i32, String>,
}

impl Reader {
    fn fault(&mut self, code: &'static str, what: impl Into<String>) {
        self.faults.push((code, what.into()));
    }

    fn take(&mut self, command: &Command) {
        if self.ended {
            self.fault("gerber-end-missing", "commands stand after M02");
            self.ended = false;
        }
        match command {
            Command::FunctionCode(FunctionCode::GCode(GCode::RegionMode(true))) => self.region = Some(Vec::new()),
            Command::FunctionCode(FunctionCode::GCode(GCode::RegionMode(false))) => {
                self.contour_done();
                self.region = None;
            }
            Command::FunctionCode(FunctionCode::GCode(GCode::InterpolationMode(mode))) if *mode != InterpolationMode::Linear => {
                self.fault("gerber-arc", "an arc; packages hold straight segments only");
            }
            Command::FunctionCode(FunctionCode::DCode(DCode::SelectAperture(code))) => {
                if !self.apertures.contains_key(code) {
                    self.fault("gerber-aperture-undefined", format!("aperture D{code} is used and not defined"));
                }
                self.aperture = Some(*code);
            }
            Command::FunctionCode(FunctionCode::DCode(DCode::Operation(operation))) => self.operation(operation),
            Command::FunctionCode(FunctionCode::MCode(MCode::EndOfFile)) => self.ended = true,
            Command::ExtendedCode(ExtendedCode::ObjectAttribute(ObjectAttribute::Net(net))) => {
                self.net = Some(match net {
                    Net::Connected(names) => names.join(","),
                    Net::None | Net::NotConnected => String::new(),
                });
            }
            Command::ExtendedCode(ExtendedCode::ApertureAttribute(ApertureAttribute::ApertureFunction(function))) => {
                self.function = function_name(function);
            }
            Command::ExtendedCode(ExtendedCode::ApertureDefinition(definition)) => {
                self.functions.insert(definition.code, self.function.clone());
            }
            Command::ExtendedCode(ExtendedCode::LoadPolarity(polarity)) => {
                if self.region.is_some() {
                    self.fault("gerber-contour-invalid", "the polarity changes within a region");
                }
                self.dark = *polarity == Polarity::Dark;
            }
            Command::ExtendedCode(ExtendedCode::FileAttribute(attribute)) => match attribute {
                FileAttribute::FileFunction(FileFunction::Copper { layer, .. }) => self.image.content = Some(Content::Copper(*layer)),
                FileAttribute::FileFunction(FileFunction::Profile(_)) => self.image.content = Some(Content::Profile),
                FileAttribute::FileFunction(_) => self.image.content = Some(Content::Other),
                FileAttribute::SameCoordinates(Some(Ident::Uuid(ident))) => self.image.coordinates = Some(ident.to_string()),
                FileAttribute::SameCoordinates(Some(Ident::Name(ident))) => self.image.coordinates = Some(ident.clone()),
                _ => {}
            },
            _ => {}
        }
    }

    fn point(&self, coordinates: Option<&Coordinates>) -> Point {
        // Serialized numbers are whole nanometres; the way back is exact below 9 km.
        let nm = |value: f64| Nm((value * 1e6).round() as i64);
        Point {
            x: coordinates.and_then(|c| c.x).map_or(self.at.x, |x| nm(x.into())),
            y: coordinates.and_then(|c| c.y).map_or(self.at.y, |y| nm(y.into())),
        }
    }

    fn operation(&mut self, operation: &Operation) {
        match operation {
            Operation::Move(to) => {
                self.at = self.point(to.as_ref());
                let at = self.at;
                if self.region.is_some() {
                    self.contour_done();
                    self.region = Some(vec![at]);
                } else {
                    self.close();
                    self.image.chains.push(vec![at]);
                }
            }
            Operation::Interpolate(to, offset) => {
                let from = self.at;
                self.at = self.point(to.as_ref());
                let at = self.at;
                if offset.is_some() {
                    self.fault("gerber-arc", "an arc; packages hold straight segments only");
                }
                if at == from {
                    self.fault("gerber-contour-invalid", format!("a segment without length at ({:.6}, {:.6}) mm", at.x.mm(), at.y.mm()));
                }
                match &mut self.region {
                    Some(ring) => {
                        if ring.is_empty() {
                            ring.push(from);
                        }
                        ring.push(at);
                    }
                    None => {
                        if self.aperture.is_none() {
                            self.fault("gerber-aperture-undefined", "a stroke before any aperture is chosen");
                        }
                        match self.image.chains.last_mut() {
                            Some(chain) => chain.push(at),
                            None => self.image.chains.push(vec![from, at]),
                        }
                    }
                }
            }
            Operation::Flash(to) => {
                self.at = self.point(to.as_ref());
                if self.region.is_some() {
                    self.fault("gerber-contour-invalid", "a flash within a region");
                }
                match self.aperture.and_then(|code| self.apertures.get(&code).map(|found| (code, *found))) {
                    Some((code, (half, round))) => self.image.objects.push(Object {
                        dark: self.dark,
                        net: self.net.clone(),
                        function: self.functions.get(&code).cloned().unwrap_or_default(),
                        form: Form::Pad(self.at, half, round),
                    }),
                    None => self.fault("gerber-aperture-undefined", "a flash before any aperture is chosen"),
                }
            }
        }
    }

    fn contour_done(&mut self) {
        let Some(mut ring) = self.region.take() else { return };
        if !ring.is_empty() {
            if ring.len() < 4 || ring.first() != ring.last() {
                let at = ring.first().copied().unwrap_or_default();
                self.fault(
                    "gerber-contour-open",
                    format!("the contour that starts at ({:.6}, {:.6}) mm is not closed", at.x.mm(), at.y.mm()),
                );
            }
            ring.pop();
            self.image.objects.push(Object {
                dark: self.dark,
                net: self.net.clone(),
                function: self.function.clone(),
                form: Form::Contour(ring),
            });
        }
        self.region = Some(Vec::new());
    }

    /// Drops a chain that is a move only; a profile's chain must be closed.
    fn close(&mut self) {
        let open = match self.image.chains.last() {
            Some(chain) if chain.len() < 2 => {
                self.image.chains.pop();
                return;
            }
            Some(chain) => chain.first() != chain.last(),
            None => return,
        };
        if open && self.image.content == Some(Content::Profile) {
            self.fault("gerber-contour-open", "the board's edge is not closed");
        }
    }
}
