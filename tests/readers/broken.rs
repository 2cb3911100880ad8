//! Packages broken on purpose, one fault each, checksums, note and archive made to match again: `verify` names every one.
//!
//! The faults are those that stop jobs at board houses (common practice, no single source) and those that make scrap in silence.

use std::collections::BTreeMap;
use std::fs;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::sync::LazyLock;

use sha2::{Digest, Sha256};
use stripwright::artwork::{Fits, Land};
use stripwright::base::{Nm, Point};
use stripwright::package::{How, put, verify};

use crate::sample;

/// The hand-drawn board (vias, lands, resonators, islands within voids), with a mask and a chip's land; made once.
static WHOLE: LazyLock<(tempfile::TempDir, PathBuf, String)> = LazyLock::new(|| {
    let parent = tempfile::tempdir().unwrap();
    let mut order = sample::order();
    order.board.mask = stripwright::order::Mask::ClearOfFilter;
    let mut made = sample::made_by_hand(&order);
    made.board.lands.push(Land {
        at: Point::new(6_000_000, 10_000_000),
        size: [Nm(600_000), Nm(800_000)],
        net: "RES1".into(),
        pin: ("R1".into(), "1".into()),
        fits: Fits::Chip,
    });
    let folder = put(&sample::bundle(&made), parent.path(), How::default()).unwrap();
    (parent, folder, order.name)
});

/// A copy of the package to be broken.
struct Broken {
    parent: tempfile::TempDir,
    name: String,
    removed: bool,
}

impl Broken {
    fn new() -> Broken {
        let (_, folder, name) = &*WHOLE;
        let parent = tempfile::tempdir().unwrap();
        for entry in fs::read_dir(folder).unwrap() {
            let entry = entry.unwrap();
            fs::copy(entry.path(), parent.path().join(entry.file_name())).unwrap();
        }
        Broken { parent, name: name.clone(), removed: false }
    }

    fn folder(&self) -> &Path {
        self.parent.path()
    }

    fn path(&self, ending: &str) -> PathBuf {
        let own = self.folder().join(format!("{}{ending}", self.name));
        if own.exists() { own } else { self.folder().join(ending) }
    }

    fn bytes(&self, ending: &str) -> Vec<u8> {
        fs::read(self.path(ending)).unwrap()
    }

    fn text(&self, ending: &str) -> String {
        String::from_utf8(self.bytes(ending)).unwrap()
    }

    fn replace(&mut self, ending: &str, from: &str, to: &str) {
        let bytes = self.bytes(ending);
        let changed = replaced(&bytes, from.as_bytes(), to.as_bytes());
        assert!(changed != bytes, "\"{from}\" is not in {ending}");
        fs::write(self.path(ending), changed).unwrap();
    }

    fn edit(&mut self, ending: &str, edit: impl Fn(&str) -> String) {
        let (before, after) = (self.text(ending), edit(&self.text(ending)));
        assert_ne!(before, after, "{ending} is not changed");
        fs::write(self.path(ending), after).unwrap();
    }

    fn cut(&mut self, ending: &str, share: f64) {
        let bytes = self.bytes(ending);
        fs::write(self.path(ending), &bytes[..(bytes.len() as f64 * share) as usize]).unwrap();
    }

    fn remove(&mut self, ending: &str) {
        fs::remove_file(self.path(ending)).unwrap();
        self.removed = true;
    }

    /// Makes list, note and archive match the files as they are now.
    fn match_again(&self) {
        let list = self.folder().join("contents.json");
        let mut contents: serde_json::Value = serde_json::from_str(&fs::read_to_string(&list).unwrap()).unwrap();
        let note = format!("{}-fabrication.txt", self.name);
        let archive = format!("{}-to-board-house.zip", self.name);
        let files = contents["files"].as_array_mut().unwrap();
        files.retain(|file| self.folder().join(file["file"].as_str().unwrap()).exists());
        let mut sums = BTreeMap::new();
        for file in files.iter() {
            let bytes = fs::read(self.folder().join(file["file"].as_str().unwrap())).unwrap();
            sums.insert(file["sha256"].as_str().unwrap().to_string(), hex(&bytes));
        }
        let mut text = fs::read_to_string(self.folder().join(&note)).unwrap();
        for (old, new) in &sums {
            text = text.replace(old, new);
        }
        fs::write(self.folder().join(&note), text).unwrap();
        let mut zip = zip::ZipWriter::new(fs::File::create(self.folder().join(&archive)).unwrap());
        for file in files.iter().filter(|file| file["for_board_house"] == true && file["file"] != archive.as_str()) {
            let name = file["file"].as_str().unwrap();
            zip.start_file(name, zip::write::SimpleFileOptions::default()).unwrap();
            zip.write_all(&fs::read(self.folder().join(name)).unwrap()).unwrap();
        }
        zip.finish().unwrap();
        for file in files.iter_mut() {
            let bytes = fs::read(self.folder().join(file["file"].as_str().unwrap())).unwrap();
            file["bytes"] = bytes.len().into();
            file["sha256"] = hex(&bytes).into();
        }
        fs::write(list, serde_json::to_string_pretty(&contents).unwrap()).unwrap();
    }

    fn found(&self) -> Vec<&'static str> {
        verify(self.folder()).unwrap().findings.iter().map(|finding| finding.code).collect()
    }
}

fn hex(bytes: &[u8]) -> String {
    Sha256::digest(bytes).iter().map(|byte| format!("{byte:02x}")).collect()
}

fn replaced(bytes: &[u8], from: &[u8], to: &[u8]) -> Vec<u8> {
    let (mut out, mut rest) = (Vec::new(), bytes);
    while let Some(at) = rest.windows(from.len()).position(|window| window == from) {
        out.extend_from_slice(&rest[..at]);
        out.extend_from_slice(to);
        rest = &rest[at + from.len()..];
    }
    out.extend_from_slice(rest);
    out
}

/// Every Gerber coordinate passed through `map` (nanometres).
fn gerber_moved(text: &str, map: impl Fn(i64, i64) -> (i64, i64)) -> String {
    let moved = |line: &str| {
        let body = line.strip_prefix('X')?;
        let (x, rest) = body.split_once('Y')?;
        let (y, operation) = rest.split_at(rest.find('D')?);
        let (x, y) = map(x.parse().ok()?, y.parse().ok()?);
        Some(format!("X{x}Y{y}{operation}"))
    };
    text.lines().map(|line| moved(line).unwrap_or(line.to_string()) + "\n").collect()
}

/// Every hit of a drill file moved along x, micrometres.
fn drill_moved(text: &str, um: i64) -> String {
    let moved = |line: &str| {
        let (x, y) = line.strip_prefix('X')?.split_once('Y')?;
        let x: f64 = x.parse().ok()?;
        Some(format!("X{:.6}Y{y}", x + um as f64 / 1e3))
    };
    text.lines().map(|line| moved(line).unwrap_or(line.to_string()) + "\n").collect()
}

fn job(broken: &mut Broken, edit: impl Fn(&mut serde_json::Value)) {
    let mut value: serde_json::Value = serde_json::from_str(&broken.text(".gbrjob")).unwrap();
    edit(&mut value);
    fs::write(broken.path(".gbrjob"), serde_json::to_string_pretty(&value).unwrap()).unwrap();
}

/// The record lines of a netlist that begin so, taken out or changed.
fn records(broken: &mut Broken, begins: &str, edit: impl Fn(&str) -> Option<String>) {
    broken.edit(".ipc", |text| {
        let kept = text.lines().filter_map(|line| if line.starts_with(begins) { edit(line) } else { Some(line.to_string()) });
        kept.map(|line| line + "\n").collect()
    });
}

type Case = (&'static str, &'static str, fn(&mut Broken));

const TOP: &str = "-copper-l1-top.gbr";
const BOTTOM: &str = "-copper-l2-bottom.gbr";
const PROFILE: &str = "-profile.gbr";
const PLATED: &str = "-plated.drl";
const UNPLATED: &str = "-unplated.drl";

/// What was done, the code that must be found, how it is done.
const CASES: &[Case] = &[
    // Units and formats.
    ("unit of the copper flipped", "gerber-units", |b| b.replace(TOP, "%MOMM*%", "%MOIN*%")),
    ("unit of the copper left out", "gerber-units", |b| b.replace(TOP, "%MOMM*%\n", "")),
    ("five decimals", "gerber-format", |b| b.replace(TOP, "%FSLAX46Y46*%", "%FSLAX45Y45*%")),
    ("inches in the drill file", "drill-units", |b| b.replace(PLATED, "METRIC", "INCH")),
    ("inches in the DXF", "dxf-units", |b| b.replace(".dxf", "$INSUNITS\r\n 70\r\n     4\r\n", "$INSUNITS\r\n 70\r\n     1\r\n")),
    ("inches in the netlist", "netlist-units", |b| b.replace(".ipc", "CUST 1", "CUST 0")),
    // Cut off or damaged.
    ("copper without its end", "gerber-end-missing", |b| b.replace(TOP, "M02*\n", "")),
    ("copper cut in the middle", "gerber-end-missing", |b| b.cut(TOP, 0.6)),
    ("drill file without its end", "drill-end-missing", |b| b.replace(PLATED, "M30\n", "")),
    ("drill coordinates without points", "drill-unreadable", |b| b.replace(PLATED, "X3.500000Y3.500000", "X35Y35")),
    ("a tool nobody defined", "drill-unreadable", |b| b.replace(PLATED, "\nT02\n", "\nT09\n")),
    ("DXF cut off", "dxf-unreadable", |b| b.cut(".dxf", 0.9)),
    ("netlist cut off", "netlist-end-missing", |b| b.replace(".ipc", "999\n", "")),
    ("a netlist record garbled", "netlist-unreadable", |b| records(b, "317", |line| Some(line.replace("PA00X+", "PA00X?")))),
    ("drawing cut off", "pdf-unreadable", |b| b.cut("-fabrication.pdf", 0.7)),
    ("note cut off", "note-unreadable", |b| b.replace("-fabrication.txt", "End of note.", "")),
    ("preview cut off", "picture-unreadable", |b| b.cut("preview.svg", 0.5)),
    ("response of another kind", "touchstone-unreadable", |b| b.replace("response.s2p", "# Hz S RI", "# Hz Q RI")),
    ("job file cut off", "job-file-unreadable", |b| b.cut(".gbrjob", 0.5)),
    ("a key the job file cannot have", "job-file-unreadable", |b| job(b, |job| job["Wishes"] = 1.into())),
    ("order no longer an order", "order-unreadable", |b| b.replace("order.toml", "[shop]", "[shop")),
    ("a pad without aperture", "gerber-aperture-undefined", |b| b.replace(TOP, "\nD10*\n", "\nD77*\n")),
    ("a contour left open", "gerber-contour-open", |b| {
        b.replace(TOP, "X5000000Y11000000D01*\nX5000000Y9000000D01*\n", "X5000000Y11000000D01*\n");
    }),
    ("a segment of no length", "gerber-contour-invalid", |b| {
        b.replace(TOP, "X5000000Y11000000D01*\n", "X5000000Y11000000D01*\nX5000000Y11000000D01*\n");
    }),
    ("an arc", "gerber-arc", |b| b.replace(TOP, "G01*\n", "G02*\n")),
    // The outline.
    ("outline missing", "profile-missing", |b| b.remove(PROFILE)),
    ("outline open", "gerber-contour-open", |b| b.replace(PROFILE, "X0Y20000000D01*\nX0Y0D01*\n", "X0Y20000000D01*\n")),
    ("outline crosses itself", "outline-crosses-itself", |b| {
        b.replace(PROFILE, "X30000000Y0D01*\nX30000000Y20000000D01*\n", "X30000000Y20000000D01*\nX30000000Y0D01*\n");
    }),
    ("outline of another board", "size-differs", |b| b.edit(PROFILE, |t| gerber_moved(t, |x, y| (x * 31 / 30, y)))),
    ("another origin", "origin-differs", |b| b.edit(PROFILE, |t| gerber_moved(t, |x, y| (x + 1_000_000, y)))),
    // Files off one another.
    ("plated holes off by 50 um", "hole-off-pad", |b| b.edit(PLATED, |t| drill_moved(t, 50))),
    ("plated holes off by 50 um, against the netlist", "netlist-drill-differs", |b| b.edit(PLATED, |t| drill_moved(t, 50))),
    ("unplated holes off by 50 um", "drawing-differs", |b| b.edit(UNPLATED, |t| drill_moved(t, 50))),
    ("top copper off by 50 um", "drawing-differs", |b| b.edit(TOP, |t| gerber_moved(t, |x, y| (x, y + 50_000)))),
    ("bottom mirrored", "drawing-differs", |b| b.edit(BOTTOM, |t| gerber_moved(t, |x, y| (x, 20_000_000 - y)))),
    ("one resonator corner moved by 50 um in the DXF alone", "drawing-differs", |b| {
        b.edit(".dxf", |t| t.replacen(" 10\r\n25.0\r\n 20\r\n11.0\r\n", " 10\r\n25.0\r\n 20\r\n11.05\r\n", 1));
    }),
    ("one resonator corner moved by 50 um in the Gerber alone", "drawing-differs", |b| {
        b.replace(TOP, "X25000000Y11000000D01*", "X25000000Y11050000D01*");
    }),
    ("a resonator of another width in the DXF", "area-differs", |b| b.replace(".dxf", " 20\r\n11.0\r\n", " 20\r\n10.0\r\n")),
    ("copper beyond the edge", "copper-outside-board", |b| b.replace(TOP, "X30000000Y15200000D01*\n", "X30500000Y15200000D01*\n")),
    ("a hole beyond the edge", "hole-outside-board", |b| b.replace(PLATED, "X3.500000Y3.500000", "X0.100000Y3.500000")),
    // Layers.
    ("wrong layer function", "layer-function-differs", |b| b.replace(TOP, "Copper,L1,Top,Signal", "Copper,L2,Bot,Plane")),
    ("no layer function", "gerber-function-missing", |b| b.replace(TOP, "%TF.FileFunction,Copper,L1,Top,Signal*%\n", "")),
    ("mask as a positive", "polarity-wrong", |b| b.replace("-mask-top.gbr", "FilePolarity,Negative", "FilePolarity,Positive")),
    ("a layer missing", "layer-missing", |b| b.remove(BOTTOM)),
    ("one layer twice", "layer-doubled", |b| {
        let top = b.bytes(TOP);
        fs::write(b.path(BOTTOM), top).unwrap();
    }),
    ("netlist missing", "layer-missing", |b| b.remove(".ipc")),
    ("mask over a land", "land-under-mask", |b| b.edit("-mask-top.gbr", |t| gerber_moved(t, |x, y| (x.max(4_000_000), y)))),
    ("paste beside its land", "paste-off-land", |b| b.edit("-paste-top.gbr", |t| gerber_moved(t, |x, y| (x + 50_000, y)))),
    ("plated file says unplated", "drill-function-differs", |b| b.replace(UNPLATED, "NonPlated,1,2,NPTH", "Plated,1,2,PTH")),
    ("a tool without a function", "drill-function-missing", |b| b.replace(PLATED, "; #@! TA.AperFunction,ViaDrill,None\n", "")),
    ("holes through layers that are not there", "drill-span-differs", |b| b.replace(PLATED, "Plated,1,2,PTH", "Plated,1,4,PTH")),
    // One issue of one project.
    ("bottom copper of another revision", "revision-differs", |b| b.edit(BOTTOM, revised)),
    ("drill file of another revision", "revision-differs", |b| b.edit(PLATED, revised)),
    ("netlist of another revision", "revision-differs", |b| b.replace(".ipc", "P  REV   A", "P  REV   B")),
    ("job file of another revision", "revision-differs", |b| job(b, |job| job["GeneralSpecs"]["ProjectId"]["Revision"] = "B".into())),
    ("note of another revision", "revision-differs", |b| b.replace("-fabrication.txt", "revision A\n", "revision B\n")),
    ("drawing of another revision", "revision-differs", |b| b.replace("-fabrication.pdf", "revision A:", "revision B:")),
    ("order of another revision", "revision-differs", |b| b.replace("order.toml", "revision = \"A\"", "revision = \"B\"")),
    ("coordinates of another run", "coordinates-differ", |b| b.edit(BOTTOM, |t| identified(t, "SameCoordinates,"))),
    ("copper of another project", "project-differs", |b| b.edit(BOTTOM, |t| identified(t, "ProjectId,snow-depth-preselector,"))),
    // The job file.
    ("four layers in the job file", "job-layers-differ", |b| job(b, |job| job["GeneralSpecs"]["LayerNumber"] = 4.into())),
    ("another thickness in the job file", "thickness-differs", |b| job(b, |job| job["GeneralSpecs"]["BoardThickness"] = 1.6.into())),
    ("another size in the job file", "size-differs", |b| job(b, |job| job["GeneralSpecs"]["Size"]["X"] = 300.into())),
    ("job file takes the top for the bottom", "job-files-differ", |b| {
        job(b, |job| job["FilesAttributes"][0]["FileFunction"] = "Copper,L2,Bot".into());
    }),
    // Nets.
    ("a resonator bridged to a feed", "nets-joined", |b| {
        b.edit(TOP, |t| t.replace("X25000000Y11000000", "X25000000Y14500000").replace("X5000000Y11000000", "X5000000Y14500000"));
    }),
    ("a resonator renamed", "netlist-differs", |b| b.replace(TOP, "%TO.N,RES1*%", "%TO.N,RES9*%")),
    ("two pieces under one name", "net-in-pieces", |b| b.replace(TOP, "%TO.N,RES2*%", "%TO.N,RES1*%")),
    ("a resonator without a name", "net-missing", |b| b.replace(TOP, "%TO.N,RES2*%", "%TO.N,*%")),
    ("a resonator tested at one end", "net-untested", |b| records(b, "327RES2             RES2  -1", |_| None)),
    ("a test point beside the copper", "netlist-off-copper", |b| {
        records(b, "327RES2             RES2  -1", |line| Some(format!("{}X+001500Y+001000{}", &line[..41], &line[57..])));
    }),
    ("a via of another size in the netlist", "netlist-drill-differs", |b| b.replace(".ipc", "D0400P", "D0450P")),
    ("a via missing in the netlist", "netlist-drill-differs", |b| records(b, "317GND              VIA        MD0400P", |_| None)),
    ("a plated hole through a resonator", "nets-joined", |b| b.replace(PLATED, "\nT02\n", "\nX15.000000Y10.000000\nT02\n")),
    // Holes.
    ("a hole doubled", "hole-doubled", |b| b.replace(PLATED, "X3.500000Y3.500000\n", "X3.500000Y3.500000\nX3.500000Y3.500000\n")),
    ("holes overlap", "holes-overlap", |b| b.replace(PLATED, "X3.500000Y3.500000\n", "X3.500000Y3.500000\nX3.500000Y3.600000\n")),
    ("a thin wall between holes", "hole-to-hole-below-minimum", |b| {
        b.replace(PLATED, "X3.500000Y3.500000\n", "X3.500000Y3.500000\nX3.500000Y4.000000\n");
    }),
    ("a plated hole in bare laminate", "hole-off-copper", |b| b.replace(PLATED, "X3.500000Y3.500000", "X15.000000Y17.000000")),
    ("a mounting hole over copper", "hole-cuts-copper", |b| b.replace(UNPLATED, "X2.500000Y18.000000", "X5.000000Y18.000000")),
    // The board house's limits.
    ("a ring too small", "ring-below-minimum", |b| b.replace(PLATED, "T01C0.300", "T01C0.900")),
    ("a hole too small", "hole-below-minimum", |b| b.replace(PLATED, "T01C0.300", "T01C0.100")),
    ("a line too narrow", "line-below-minimum", |b| {
        b.edit(TOP, |t| gerber_moved(t, |x, y| (x, if y == 14_000_000 { 15_100_000 } else { y })))
    }),
    ("a gap too narrow", "gap-below-minimum", |b| {
        b.edit(TOP, |t| gerber_moved(t, |x, y| (x, if y == 14_000_000 { 13_050_000 } else { y })))
    }),
];

/// The revision of a Gerber or drill file's project, A to B.
fn revised(text: &str) -> String {
    let changed = |line: &str| {
        let (before, after) = line.split_at(line.rfind(",A")?);
        line.contains("TF.ProjectId").then(|| format!("{before},B{}", &after[2..]))
    };
    text.lines().map(|line| changed(line).unwrap_or(line.to_string()) + "\n").collect()
}

/// Another GUID: its first digit, which is hexadecimal, moved on by one.
fn identified(text: &str, before: &str) -> String {
    let at = text.find(before).unwrap() + before.len();
    let digit = u8::from_str_radix(&text[at..=at], 16).unwrap();
    format!("{}{:x}{}", &text[..at], (digit + 1) % 16, &text[at + 1..])
}

#[test]
fn the_untouched_package_passes() {
    assert_eq!(Broken::new().found(), [""; 0]);
    // Matching again changes nothing that is looked at.
    let again = Broken::new();
    again.match_again();
    assert_eq!(again.found(), [""; 0]);
}

#[test]
fn every_fault_is_named_although_all_checksums_match() {
    assert!(CASES.len() >= 70, "{} cases", CASES.len());
    let mut missed = Vec::new();
    for (what, code, break_it) in CASES {
        let mut broken = Broken::new();
        break_it(&mut broken);
        broken.match_again();
        let found = broken.found();
        if !found.contains(code) {
            missed.push(format!("{what}: {code} is not among {found:?}"));
        }
        // Only the fault itself may be found, not traces of the editing.
        if !broken.removed
            && found.iter().any(|code| matches!(*code, "file-changed" | "file-missing" | "zip-differs" | "note-checksum-differs"))
        {
            missed.push(format!("{what}: the checksums do not match: {found:?}"));
        }
    }
    assert!(missed.is_empty(), "{} of {} missed:\n{}", missed.len(), CASES.len(), missed.join("\n"));
}
