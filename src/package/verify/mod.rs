//! Is a package what it says it is, and can it be built? Every file read back, and held against every other: its own package, or one a
//! colleague edited.

mod align;
mod copper;
mod files;
mod holes;
mod identity;
mod job_file;
mod layers;
mod limits;
mod nets;
mod shop;

use std::fs;
use std::path::Path;

use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::package::contents::CONTENTS;
use crate::package::contents::Contents;
use crate::package::dxf::Drawn;
use crate::package::netlist::Netlist;
use crate::package::read_drill::Drilled;
use crate::package::read_gerber::Content;
use crate::package::read_gerber::Image;
use copper::Copper;
use limits::Limits;

/// What was found in a package.
#[derive(Clone, Debug)]
pub struct Checked {
    /// The list of the package.
    pub contents: Contents,
    /// Everything found, in the order of the list.
    pub findings: Vec<Problem>,
}

/// A package read back.
struct Pack<'a> {
    folder: &'a Path,
    contents: &'a Contents,
    gerbers: Vec<(String, Image)>,
    drills: Vec<(String, Drilled)>,
    drawing: Option<(String, Drawn)>,
    netlist: Option<(String, Netlist)>,
    job_file: Option<(String, serde_json::Value)>,
    /// What the order says of the shop and the board.
    limits: Limits,
    /// Copper layers, by number.
    coppers: Vec<Copper>,
}

impl Pack<'_> {
    /// Corners of the profile.
    fn edge(&self) -> Option<[Point; 2]> {
        self.gerbers.iter().find(|(_, image)| image.content == Some(Content::Profile)).and_then(|(_, image)| image.bounds())
    }

    /// The number of the lowest copper layer.
    fn last_layer(&self) -> i32 {
        self.coppers.iter().map(|copper| copper.layer).max().unwrap_or(1)
    }
}

/// Findings being collected.
#[derive(Default)]
struct Findings(Vec<Problem>);

impl Findings {
    fn add(&mut self, code: &'static str, file: &str, what: impl AsRef<str>) {
        self.at(code, file, None, what);
    }

    fn at(&mut self, code: &'static str, file: &str, place: Option<Point>, what: impl AsRef<str>) {
        let place = place.map_or(Place::Whole, Place::Board);
        let help = if code.starts_with("file-") { "make the package again, or restore the file" } else { "make the package again" };
        self.0.push(Problem::error(code, place, format!("{file}: {}", what.as_ref()), help));
    }
}

/// What is held against the whole package once all files are read, in this order.
type Rule = fn(&Pack, &mut Findings);
const RULES: &[Rule] = &[identity::check, layers::check, job_file::check, align::check, holes::check, nets::check, shop::check];

/// Reads a package back.
///
/// Findings, by subject:
/// - files: `file-missing`, `file-changed`, `file-unknown`, `zip-unreadable`, `zip-differs`, `note-unreadable`, `note-checksum-differs`,
///   `pdf-unreadable`, `picture-unreadable`, `order-unreadable`, `touchstone-unreadable`;
/// - syntax and units: `gerber-*`, `drill-*`, `dxf-unreadable`, `dxf-units`, `netlist-unreadable`, `netlist-units`, `netlist-end-missing`,
///   `job-file-unreadable`;
/// - identity: `coordinates-differ`, `project-differs`, `revision-differs`;
/// - layers: `layer-missing`, `layer-doubled`, `layer-function-differs`, `polarity-wrong`, `profile-missing`, `outline-crosses-itself`,
///   `land-under-mask`, `paste-off-land`;
/// - job file: `job-files-differ`, `job-layers-differ`, `size-differs`, `thickness-differs`;
/// - alignment: `origin-differs`, `copper-outside-board`, `hole-outside-board`, `drawing-differs`, `area-differs`;
/// - holes: `hole-off-copper`, `hole-off-pad`, `hole-doubled`, `holes-overlap`, `hole-cuts-copper`, `drill-span-differs`;
/// - nets: `nets-joined`, `net-in-pieces`, `net-missing`, `net-untested`, `netlist-off-copper`, `netlist-differs`, `netlist-drill-differs`;
/// - the shop's limits on the copper as read back: `line-below-minimum`, `gap-below-minimum`, `ring-below-minimum`, `hole-below-minimum`,
///   `hole-to-hole-below-minimum`.
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
    let mut findings = Findings::default();
    let mut pack = Pack {
        folder,
        contents: &contents,
        gerbers: Vec::new(),
        drills: Vec::new(),
        drawing: None,
        netlist: None,
        job_file: None,
        limits: Limits::default(),
        coppers: Vec::new(),
    };
    files::unknown(&pack, &mut findings).map_err(|error| unreadable(format!("{}: {error}", folder.display())))?;
    for listed in &contents.files {
        files::read(&mut pack, listed, &mut findings);
    }
    pack.coppers = pack.gerbers.iter().filter_map(|(name, image)| Copper::of(name, image)).collect();
    pack.coppers.sort_by_key(|copper| copper.layer);
    for rule in RULES {
        rule(&pack, &mut findings);
    }
    let findings = findings.0;
    Ok(Checked { contents, findings })
}
