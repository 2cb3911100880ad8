//! Does `verify` pass a good package and name what is wrong with a bad one?

use std::fs;
use std::path::{Path, PathBuf};

use stripwright::package::{How, put, verify};

use crate::sample;

fn package(parent: &Path) -> (PathBuf, String) {
    let mut order = sample::order();
    order.board.mask = stripwright::order::Mask::ClearOfFilter;
    let made = sample::made_by_hand(&order);
    (put(&sample::bundle(&made), parent, How::default()).unwrap(), order.name)
}

fn codes(folder: &Path) -> Vec<&'static str> {
    verify(folder).unwrap().findings.iter().map(|finding| finding.code).collect()
}

#[test]
fn a_package_as_written_passes() {
    let parent = tempfile::tempdir().unwrap();
    assert_eq!(codes(&package(parent.path()).0), [""; 0]);
    // The real board as well, whose polygons are no rectangles.
    let mut order = sample::order();
    order.name = "real".into();
    assert_eq!(codes(&put(&sample::bundle(&sample::made(&order)), parent.path(), How::default()).unwrap()), [""; 0]);
}

#[test]
fn each_fault_is_named() {
    // File ending, what is replaced (all of it), by what, the code that must be found.
    let faults = [
        ("-copper-l1-top.gbr", "%MOMM*%", "%MOIN*%", "gerber-units"),
        ("-copper-l1-top.gbr", "%MOMM*%\n", "", "gerber-units"),
        ("-copper-l1-top.gbr", "%FSLAX46Y46*%", "%FSLAX45Y45*%", "gerber-format"),
        ("-copper-l1-top.gbr", "M02*\n", "", "gerber-end-missing"),
        ("-copper-l1-top.gbr", "\nD10*\n", "\nD77*\n", "gerber-aperture-undefined"),
        ("-copper-l1-top.gbr", "X25000000Y11000000D01*\n", "nonsense\n", "gerber-unreadable"),
        // The last vertex of the resonator is the repeated first one.
        ("-copper-l1-top.gbr", "X5000000Y11000000D01*\nX5000000Y9000000D01*\n", "X5000000Y11000000D01*\n", "gerber-contour-open"),
        ("-copper-l1-top.gbr", "X5000000Y11000000D01*\n", "X5000000Y11000000D01*\nX5000000Y11000000D01*\n", "gerber-contour-invalid"),
        ("-copper-l1-top.gbr", "X30000000Y15200000D01*\n", "X30000001Y15200000D01*\n", "copper-outside-board"),
        ("-copper-l1-top.gbr", "X30000000Y15200000D01*\n", "X30050000Y15200000D01*\n", "drawing-differs"),
        ("-copper-l1-top.gbr", "%TF.FileFunction,Copper,L1,Top,Signal*%\n", "", "gerber-function-missing"),
        ("-copper-l1-top.gbr", "G01*\n", "G02*\n", "gerber-arc"),
        ("-copper-l2-bottom.gbr", "TF.SameCoordinates,", "TF.SameCoordinates,0", "coordinates-differ"),
        ("-profile.gbr", "X0Y20000000D01*\nX0Y0D01*\n", "X0Y20000000D01*\n", "gerber-contour-open"),
        ("-profile.gbr", "X0Y", "X1Y", "copper-outside-board"),
        ("-plated.drl", "METRIC", "INCH", "drill-units"),
        ("-plated.drl", "M30\n", "", "drill-end-missing"),
        ("-plated.drl", "X3.500000Y3.500000", "X35Y35", "drill-unreadable"),
        ("-plated.drl", "\nT02\n", "\nT09\n", "drill-unreadable"),
        ("-plated.drl", "X3.500000Y3.500000", "X0.100000Y3.500000", "hole-outside-board"),
        ("-plated.drl", "X3.500000Y3.500000", "X3.550000Y3.500000", "drawing-differs"),
        ("-unplated.drl", "NonPlated,1,2,NPTH,Drill", "Plated,1,2,PTH,Drill", "drill-function-differs"),
        (".dxf", "$INSUNITS\r\n 70\r\n     4\r\n", "$INSUNITS\r\n 70\r\n     1\r\n", "dxf-units"),
        (".dxf", "EOF", "EOX", "file-changed"),
        ("response.s2p", "# Hz S RI", "# Hz Q RI", "touchstone-unreadable"),
        ("-fabrication.txt", "End of note.", "End.", "file-changed"),
        ("-to-board-house.zip", "-profile.gbr", "-profilf.gbr", "zip-differs"),
    ];
    for (ending, from, to, code) in faults {
        let parent = tempfile::tempdir().unwrap();
        let (folder, name) = package(parent.path());
        let path = folder.join(if ending == "response.s2p" { ending.to_string() } else { format!("{name}{ending}") });
        let bytes = fs::read(&path).unwrap();
        let changed = replaced(&bytes, from.as_bytes(), to.as_bytes());
        assert!(changed != bytes, "\"{from}\" is not in {}", path.display());
        fs::write(&path, changed).unwrap();
        let found = codes(&folder);
        assert!(found.contains(&code) && found.contains(&"file-changed"), "{ending}: \"{from}\" gave {found:?}, not {code}");
    }
}

fn replaced(bytes: &[u8], from: &[u8], to: &[u8]) -> Vec<u8> {
    let mut out = Vec::new();
    let mut rest = bytes;
    while let Some(at) = rest.windows(from.len()).position(|window| window == from) {
        out.extend_from_slice(&rest[..at]);
        out.extend_from_slice(to);
        rest = &rest[at + from.len()..];
    }
    out.extend_from_slice(rest);
    out
}

#[test]
fn missing_unknown_and_unlisted() {
    let parent = tempfile::tempdir().unwrap();
    let (folder, name) = package(parent.path());
    fs::remove_file(folder.join(format!("{name}-profile.gbr"))).unwrap();
    fs::write(folder.join("notes-of-mine.txt"), "keep").unwrap();
    let found = codes(&folder);
    assert!(found.contains(&"file-missing") && found.contains(&"file-unknown") && found.contains(&"profile-missing"), "{found:?}");
    fs::write(folder.join("contents.json"), "{}").unwrap();
    assert_eq!(verify(&folder).unwrap_err().code, "package-unreadable");
    assert_eq!(verify(&parent.path().join("nowhere")).unwrap_err().code, "package-unreadable");
}

#[test]
fn a_list_cannot_point_outside() {
    let parent = tempfile::tempdir().unwrap();
    let (folder, name) = package(parent.path());
    let list = fs::read_to_string(folder.join("contents.json")).unwrap();
    fs::write(folder.join("contents.json"), list.replace(&format!("\"{name}-profile.gbr\""), "\"../../etc/passwd\"")).unwrap();
    assert!(codes(&folder).contains(&"file-unknown"));
}
