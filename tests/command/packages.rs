//! `make`, `draw`, `predict` and `dimension` as a user meets them: exit codes, what is said, what is there afterwards.

use std::fs;
use std::path::Path;

use assert_cmd::Command;

use crate::{STARTER, changed};

const NAME: &str = "snow-depth-preselector";

struct Ran {
    code: i32,
    out: String,
    err: String,
}

fn run(folder: &Path, order: &str, arguments: &[&str]) -> Ran {
    fs::write(folder.join("order.toml"), order).unwrap();
    let output = Command::cargo_bin("stripwright").unwrap().current_dir(folder).args(arguments).output().unwrap();
    let text = |bytes: &[u8]| String::from_utf8_lossy(bytes).into_owned();
    Ran { code: output.status.code().unwrap(), out: text(&output.stdout), err: text(&output.stderr) }
}

fn made(order: &str, arguments: &[&str]) -> (Ran, tempfile::TempDir) {
    let folder = tempfile::tempdir().unwrap();
    let ran = run(folder.path(), order, &[&["make", "order.toml"], arguments].concat());
    (ran, folder)
}

#[test]
fn the_starter_meets_its_requirements_and_its_rules() {
    let (ran, folder) = made(STARTER, &[]);
    assert_eq!(ran.code, 0, "{}{}", ran.out, ran.err);
    assert!(!ran.out.contains("MISSED") && ran.out.contains("met "), "{}", ran.out);
    assert!(ran.err.contains("degree 4 is the least that meets every requirement"), "{}", ran.err);
    let package = folder.path().join("out").join(NAME);
    for file in [
        "-copper-l1-top.gbr",
        "-profile.gbr",
        "-plated.drl",
        ".dxf",
        ".gbrjob",
        ".ipc",
        "-drillmap.gbr",
        "-fabrication.pdf",
        "-fabrication.txt",
        "-to-board-house.zip",
    ] {
        assert!(package.join(format!("{NAME}{file}")).exists(), "{file}");
    }
    assert_eq!(run(folder.path(), STARTER, &["check", &format!("out/{NAME}")]).code, 0);
    let again = run(folder.path(), STARTER, &["make", "order.toml"]);
    assert_eq!(again.code, 2);
    assert!(again.err.contains("package-exists") && again.err.contains("--replace"), "{}", again.err);
    assert_eq!(run(folder.path(), STARTER, &["make", "order.toml", "--replace"]).code, 0);
}

#[test]
fn a_missed_requirement_is_said_first_and_the_package_is_made() {
    let order = changed("degree = 5", "degree = 3").replace("# degree = 3", "degree = 3");
    let (ran, folder) = made(&order, &[]);
    assert_eq!(ran.code, 1, "{}{}", ran.out, ran.err);
    assert!(ran.out.contains("MISSED") && ran.out.contains("rejection"), "{}", ran.out);
    assert!(folder.path().join(format!("out/{NAME}/{NAME}-to-board-house.zip")).exists());
}

#[test]
fn a_broken_rule_withholds_the_files_for_the_board_house() {
    let order = changed("# gap = \"0.15 mm\"", "gap = \"0.30 mm\"");
    let (ran, folder) = made(&order, &[]);
    assert_eq!(ran.code, 1, "{}{}", ran.out, ran.err);
    assert!(ran.err.contains("gap-below-minimum") && ran.out.contains("withheld"), "{}{}", ran.out, ran.err);
    let package = folder.path().join("out").join(NAME);
    assert!(!package.join(format!("{NAME}-copper-l1-top.gbr")).exists() && package.join("preview.svg").exists());
    let (ran, folder) = made(&order, &["--despite-rules"]);
    assert_eq!(ran.code, 1);
    let note = fs::read_to_string(folder.path().join(format!("out/{NAME}/{NAME}-fabrication.txt"))).unwrap();
    assert!(note.contains("gap-below-minimum"), "the note must carry the mark:\n{note}");
    // Every file for the board house carries the mark, not the note alone.
    for ending in
        ["-copper-l1-top.gbr", "-copper-l2-bottom.gbr", "-profile.gbr", "-plated.drl", ".gbrjob", ".ipc", ".dxf", "-fabrication.pdf"]
    {
        let bytes = fs::read(folder.path().join(format!("out/{NAME}/{NAME}{ending}"))).unwrap();
        let mark = b"DESIGN RULE IS BROKEN";
        assert!(bytes.windows(mark.len()).any(|window| window == mark), "{ending} carries no mark");
    }
}

#[test]
fn where_no_degree_meets_the_requirements_both_limits_are_named_and_nothing_is_made() {
    let (ran, folder) = made(&changed("at-most = \"3.5 dB\"", "at-most = \"0.4 dB\""), &[]);
    assert_eq!(ran.code, 2);
    for part in ["degree-out-of-reach", "degree 3: rejection", "degree 4: insertion loss", "help:"] {
        assert!(ran.err.contains(part), "{part}: {}", ran.err);
    }
    assert!(!folder.path().join("out").join(NAME).exists());
}

#[test]
fn an_absurd_order_is_refused_for_its_physics() {
    let order = "[order]\nname = \"absurd\"\ntitle = \"38 GHz on thick glass-epoxy\"\nrevision = \"A\"\n[filter]\nfamily = \"edge-coupled\"\n\
        response = \"equal-ripple\"\npassband = [\"36 GHz\", \"40 GHz\"]\nripple = \"0.1 dB\"\ndegree = 3\nport = \"50 ohm\"\n\
        [laminate]\nclass = \"glass-epoxy-4.3\"\nthickness = \"1.6 mm\"\n[shop]\nclass = \"ordinary\"\n[board]\nlaunch = \"open\"\n";
    let (ran, folder) = made(order, &[]);
    assert_eq!(ran.code, 2);
    for code in ["section-shorter-than-wide", "transverse-resonance", "surface-mode"] {
        assert!(ran.err.contains(code), "{code}: {}", ran.err);
    }
    assert!(!folder.path().join("out/absurd").exists());
}

#[test]
fn an_edited_dimension_is_drawn_and_predicted() {
    let folder = tempfile::tempdir().unwrap();
    assert_eq!(run(folder.path(), STARTER, &["dimension", "order.toml", "set.toml"]).code, 0);
    let set = fs::read_to_string(folder.path().join("set.toml")).unwrap();
    let at = set.find("name = \"section 3 gap\"").unwrap();
    let value = set[at..].find("value = \"").unwrap() + at + 9;
    let end = set[value..].find('"').unwrap() + value;
    fs::write(folder.path().join("set.toml"), format!("{}2.5 mm{}", &set[..value], &set[end..])).unwrap();
    let ran = run(folder.path(), STARTER, &["--json", "predict", "set.toml"]);
    let json: serde_json::Value = serde_json::from_str(&ran.out).unwrap();
    assert_eq!(ran.code, 1, "a gap nearly three times too wide cannot meet the requirements");
    assert_eq!(json["requirements_met"], false);
    let drawn = run(folder.path(), STARTER, &["draw", "set.toml"]);
    assert_eq!(drawn.code, 1, "{}", drawn.err);
    let note = fs::read_to_string(folder.path().join(format!("out/{NAME}/{NAME}-fabrication.txt"))).unwrap();
    assert!(note.contains("section 3 gap        2.5000"), "{note}");
}

#[test]
fn predict_gives_a_table_and_a_touchstone_file_and_overwrites_nothing() {
    let folder = tempfile::tempdir().unwrap();
    let sweep = ["predict", "order.toml", "--from", "3 GHz", "--to", "4 GHz", "--points", "11", "--touchstone", "r.s2p"];
    let ran = run(folder.path(), STARTER, &sweep);
    assert_eq!(ran.code, 0, "{}", ran.err);
    assert!(ran.out.contains("3.500000"), "{}", ran.out);
    let touchstone = fs::read_to_string(folder.path().join("r.s2p")).unwrap();
    assert_eq!(touchstone.lines().filter(|l| !l.starts_with(['!', '#'])).count(), 11);
    assert!(touchstone.contains("reference planes"));
    assert_eq!(run(folder.path(), STARTER, &sweep).code, 2);
    for bad in [["--from", "3", "--to", "4 GHz"], ["--from", "4 GHz", "--to", "3 GHz"], ["--from", "3 GHz", "--points", "5"]] {
        assert_eq!(run(folder.path(), STARTER, &[&["predict", "order.toml"][..], &bad[..]].concat()).code, 2, "{bad:?}");
    }
}
