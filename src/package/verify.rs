//! Is a package what it says it is? Every file there, unchanged, readable, in one unit, aligned, and within the board.

use std::fs;
use std::io;
use std::io::Read;
use std::path::Path;

use crate::artwork::shape::bounds;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::network::touchstone;
use crate::package::contents::CONTENTS;
use crate::package::contents::Contents;
use crate::package::contents::Listed;
use crate::package::dxf;
use crate::package::put::checksum;
use crate::package::put::checksum_of;
use crate::package::read_drill;
use crate::package::read_gerber;
use crate::package::read_gerber::Content;

/// A file larger than this is none of ours, and is not taken into memory.
const MAX_READ_BYTES: u64 = 1 << 30;

/// What was found in a package.
#[derive(Clone, Debug)]
pub struct Checked {
    /// The list of the package.
    pub contents: Contents,
    /// Everything found, in the order of the list.
    pub findings: Vec<Problem>,
}

/// Reads a package back.
///
/// Findings: `file-missing`, `file-changed`, `file-unknown`, `gerber-*`, `drill-*`, `dxf-*`, `touchstone-*`, `zip-differs`,
/// `coordinates-differ`, `profile-missing`, `copper-outside-board`, `hole-outside-board`, `drawing-differs`.
///
/// # Errors
/// `package-unreadable`: the folder or its list cannot be read, so there is nothing to check against.
pub fn verify(folder: &Path) -> Result<Checked, Problem> {
    let unreadable = |what: String| {
        let help = format!("name a folder that `make` or `draw` wrote; it holds a {CONTENTS}");
        Problem::error("package-unreadable", Place::Whole, what, help)
    };
    let list = folder.join(CONTENTS);
    let text = fs::read_to_string(&list).map_err(|error| unreadable(format!("{}: {error}", list.display())))?;
    let contents = Contents::read(&text).map_err(|error| unreadable(format!("{}: {error}", list.display())))?;
    let mut check = Check { folder, findings: Vec::new(), edge: None, coppers: Vec::new(), holes: Vec::new(), coordinates: Vec::new() };
    check.unknown_files(&contents).map_err(|error| unreadable(format!("{}: {error}", folder.display())))?;
    for listed in &contents.files {
        check.file(listed, &contents);
    }
    check.across(&contents);
    let findings = check.findings;
    Ok(Checked { contents, findings })
}

struct Check<'a> {
    folder: &'a Path,
    findings: Vec<Problem>,
    /// Corners of the profile.
    edge: Option<[Point; 2]>,
    /// File, layer, corners.
    coppers: Vec<(String, i32, [Point; 2])>,
    /// File, centre, diameter.
    holes: Vec<(String, Point, Nm)>,
    /// File and identifier.
    coordinates: Vec<(String, Option<String>)>,
}

impl Check<'_> {
    fn find(&mut self, code: &'static str, file: &str, what: &str) {
        let help = match code {
            "file-missing" | "file-changed" | "file-unknown" => "make the package again, or restore the file",
            _ => "make the package again",
        };
        self.findings.push(Problem::error(code, Place::Whole, format!("{file}: {what}"), help));
    }

    fn unknown_files(&mut self, contents: &Contents) -> io::Result<()> {
        let mut names = fs::read_dir(self.folder)?
            .map(|entry| Ok(entry?.file_name().to_string_lossy().into_owned()))
            .collect::<io::Result<Vec<_>>>()?;
        names.sort();
        for name in names {
            if name != CONTENTS && !contents.files.iter().any(|file| file.file == name) {
                self.find("file-unknown", &name, &format!("is not listed in {CONTENTS}"));
            }
        }
        Ok(())
    }

    fn file(&mut self, listed: &Listed, contents: &Contents) {
        let name = listed.file.as_str();
        // A list could name files anywhere; only names within the folder are followed.
        if Path::new(name).file_name().is_none_or(|only| only != name) {
            self.find("file-unknown", name, "is no plain file name");
            return;
        }
        let path = self.folder.join(name);
        match checksum(&path) {
            Err(error) if error.kind() == io::ErrorKind::NotFound => return self.find("file-missing", name, "is listed and not there"),
            Err(error) => return self.find("file-missing", name, &format!("cannot be read: {error}")),
            Ok(found) if found != (listed.bytes, listed.sha256.clone()) => {
                self.find("file-changed", name, "is not the file that was listed: length or SHA-256 differ");
            }
            Ok(_) => {}
        }
        match fs::metadata(&path) {
            Ok(data) if data.len() <= MAX_READ_BYTES => {}
            _ => return self.find("file-changed", name, "is too large to be read back"),
        }
        let Ok(bytes) = fs::read(&path) else { return self.find("file-missing", name, "cannot be read") };
        if name.ends_with(".gbr") {
            self.gerber(name, &bytes);
        } else if name.ends_with(".drl") {
            self.drill(name, &bytes);
        } else if name.ends_with(".s2p") {
            let read = touchstone::read(&String::from_utf8_lossy(&bytes), 2);
            match read {
                Err(problem) => self.find("touchstone-unreadable", name, &problem.message),
                Ok(file) if file.response().is_none() => self.find("touchstone-unreadable", name, "holds no S-parameters of a two-port"),
                Ok(_) => {}
            }
        } else if name.ends_with(".zip") {
            self.zip(name, &bytes, contents);
        }
    }

    fn gerber(&mut self, name: &str, bytes: &[u8]) {
        let (image, faults) = read_gerber::read(bytes);
        for (code, what) in faults {
            self.find(code, name, &what);
        }
        self.coordinates.push((name.to_string(), image.coordinates.clone()));
        match (image.content, image.bounds()) {
            (Some(Content::Copper(layer)), Some(corners)) => self.coppers.push((name.to_string(), layer, corners)),
            (Some(Content::Profile), Some(corners)) => self.edge = Some(corners),
            (Some(_), None) => self.find("gerber-empty", name, "holds nothing"),
            (Some(Content::Other), _) => {}
            (None, _) => self.find("gerber-function-missing", name, "does not say which layer it is (.FileFunction)"),
        }
    }

    fn drill(&mut self, name: &str, bytes: &[u8]) {
        let (drilled, faults) = read_drill::read(&String::from_utf8_lossy(bytes));
        for (code, what) in faults {
            self.find(code, name, &what);
        }
        self.coordinates.push((name.to_string(), drilled.coordinates.clone()));
        if drilled.holes.is_empty() {
            self.find("drill-empty", name, "holds no holes");
        }
        if drilled.plated.is_some_and(|plated| plated != name.ends_with("-plated.drl")) {
            self.find("drill-function-differs", name, "its name and its .FileFunction disagree on plating");
        }
        self.holes.extend(drilled.holes.into_iter().map(|(at, diameter)| (name.to_string(), at, diameter)));
    }

    /// The archive must hold the listed files for the board house, byte for byte, and nothing else.
    fn zip(&mut self, name: &str, bytes: &[u8], contents: &Contents) {
        let mut archive = match zip::ZipArchive::new(io::Cursor::new(bytes)) {
            Ok(archive) => archive,
            Err(error) => return self.find("zip-unreadable", name, &error.to_string()),
        };
        let mut packed = Vec::new();
        for index in 0..archive.len() {
            // Unpacked in pieces, and not without end: an archive can promise any size.
            let read = archive.by_index(index).and_then(|file| Ok((file.name()?.into_owned(), checksum_of(file.take(MAX_READ_BYTES))?.1)));
            match read {
                Ok(entry) => packed.push(entry),
                Err(error) => return self.find("zip-unreadable", name, &error.to_string()),
            }
        }
        for listed in contents.files.iter().filter(|file| file.for_board_house && file.file != name) {
            match packed.iter().position(|(packed, _)| *packed == listed.file) {
                None => self.find("zip-differs", name, &format!("{} is not in it", listed.file)),
                Some(index) => {
                    if packed.swap_remove(index).1 != listed.sha256 {
                        self.find("zip-differs", name, &format!("{} is another file in it", listed.file));
                    }
                }
            }
        }
        for (extra, _) in packed {
            self.find("zip-differs", name, &format!("{extra} is in it and not listed for the board house"));
        }
    }

    /// What only several files together show.
    fn across(&mut self, contents: &Contents) {
        for (file, ident) in std::mem::take(&mut self.coordinates) {
            if ident.as_deref() != Some(contents.same_coordinates.as_str()) {
                let found = ident.as_deref().unwrap_or("none");
                self.find(
                    "coordinates-differ",
                    &file,
                    &format!(".SameCoordinates is {found}, the package's is {}", contents.same_coordinates),
                );
            }
        }
        self.drawing(contents);
        let Some([low, high]) = self.edge else {
            let profile = contents.files.iter().any(|file| file.file.ends_with("-profile.gbr"));
            if profile {
                self.find("profile-missing", CONTENTS, "the board's edge cannot be read, so nothing is held against it");
            }
            return;
        };
        for (file, _, corners) in std::mem::take(&mut self.coppers) {
            if corners[0].x < low.x || corners[0].y < low.y || corners[1].x > high.x || corners[1].y > high.y {
                let found = format!("copper reaches {}, the board {}", span(corners), span([low, high]));
                self.find("copper-outside-board", &file, &found);
            }
        }
        for (file, at, diameter) in std::mem::take(&mut self.holes) {
            let radius = Nm(diameter.0 / 2);
            let inside = at.x - radius >= low.x && at.x + radius <= high.x && at.y - radius >= low.y && at.y + radius <= high.y;
            if !inside {
                let found =
                    format!("the hole of {:.3} mm at ({:.3}, {:.3}) mm is not within the board", diameter.mm(), at.x.mm(), at.y.mm());
                self.find("hole-outside-board", &file, &found);
            }
        }
    }

    /// The DXF: readable, millimetres, and the same copper and edge as the Gerber files, to the nanometre.
    fn drawing(&mut self, contents: &Contents) {
        let Some(listed) = contents.files.iter().find(|file| file.file.ends_with(".dxf")) else { return };
        let path = self.folder.join(&listed.file);
        if !path.is_file() {
            return;
        }
        let drawing = match dxf::read(&path) {
            Ok(drawing) => drawing,
            Err(error) => return self.find("dxf-unreadable", &listed.file, &error),
        };
        if !drawing.in_millimetres {
            self.find("dxf-units", &listed.file, "the unit is not millimetres");
        }
        let last = self.coppers.iter().map(|(_, layer, _)| *layer).max().unwrap_or(1);
        let mut expected: Vec<(String, [Point; 2])> = Vec::new();
        for (_, layer, corners) in &self.coppers {
            let (Ok(layer), Ok(last)) = (u8::try_from(*layer), u8::try_from(last)) else { continue };
            expected.push((dxf::copper_layer(layer, last), *corners));
        }
        expected.extend(self.edge.map(|corners| (dxf::OUTLINE.to_string(), corners)));
        for (layer, corners) in expected {
            let drawn = drawing.rings.get(&layer).and_then(|rings| bounds(rings.iter().flatten().copied()));
            if drawn != Some(corners) {
                let found = drawn.map_or("nothing".to_string(), span);
                self.find("drawing-differs", &listed.file, &format!("layer {layer} reaches {found}, the Gerber file {}", span(corners)));
            }
        }
        let mut drawn = drawing.circles;
        let mut drilled: Vec<(Point, Nm)> = self.holes.iter().map(|(_, at, diameter)| (*at, *diameter)).collect();
        drawn.sort();
        drilled.sort();
        if drawn != drilled {
            let found = format!("{} holes, or others than the {} of the drill files", drawn.len(), drilled.len());
            self.find("drawing-differs", &listed.file, &found);
        }
    }
}

fn span([low, high]: [Point; 2]) -> String {
    format!("from ({:.6}, {:.6}) to ({:.6}, {:.6}) mm", low.x.mm(), low.y.mm(), high.x.mm(), high.y.mm())
}
