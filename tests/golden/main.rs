//! Golden cases, one order each, at least one for every family: an order gives its dimensions again, and its dimensions give its files again, byte for byte.
//!
//! Kept of each case: `tests/golden/<name>/dimensions.toml` and `contents.json`, which holds the sha-256 of every file; of the example in `out/` the whole package.
//! `BLESS=1 cargo test --release --test golden` makes them anew: only when the output was meant to change.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};

use assert_cmd::Command;

/// The case whose whole package stands in `out/`.
const NAME: &str = "buoy-telemetry-preselector";
/// What is kept of the others.
const KEPT: [&str; 2] = ["contents.json", "dimensions.toml"];

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

/// Names of all cases, sorted.
fn cases() -> Vec<String> {
    let files = fs::read_dir(root().join("tests/golden")).unwrap().map(|entry| entry.unwrap().path());
    let mut names: Vec<String> = files
        .filter(|p| p.extension().is_some_and(|e| e == "toml"))
        .map(|p| p.file_stem().unwrap().to_str().unwrap().to_string())
        .collect();
    names.sort();
    assert!(names.contains(&NAME.to_string()));
    names
}

fn order(name: &str) -> PathBuf {
    root().join(format!("tests/golden/{name}.toml"))
}

fn kept(name: &str) -> PathBuf {
    if name == NAME { root().join("out").join(name) } else { root().join("tests/golden").join(name) }
}

/// Makes all cases anew when asked to, once.
fn bless() {
    static ONCE: std::sync::Once = std::sync::Once::new();
    if std::env::var_os("BLESS").is_none() {
        return;
    }
    ONCE.call_once(|| {
        for name in cases() {
            if name == NAME {
                run(&["make", order(&name).to_str().unwrap(), "--replace", "--out", root().join("out").to_str().unwrap()]);
                continue;
            }
            let folder = tempfile::tempdir().unwrap();
            run(&["make", order(&name).to_str().unwrap(), "--out", folder.path().to_str().unwrap()]);
            fs::create_dir_all(kept(&name)).unwrap();
            for file in KEPT {
                fs::copy(folder.path().join(&name).join(file), kept(&name).join(file)).unwrap();
            }
        }
    });
}

fn run(arguments: &[&str]) {
    let output = Command::cargo_bin("stripwright").unwrap().args(arguments).output().unwrap();
    assert!(output.status.success(), "{arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
}

fn files(folder: &Path) -> BTreeMap<String, Vec<u8>> {
    let entries = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap());
    entries.map(|entry| (entry.file_name().into_string().unwrap(), fs::read(entry.path()).unwrap())).collect()
}

fn assert_same_files(made: &Path, kept: &Path) {
    let (made, kept) = (files(made), files(kept));
    assert_eq!(made.keys().collect::<Vec<_>>(), kept.keys().collect::<Vec<_>>());
    for (name, bytes) in &kept {
        assert!(
            made[name] == *bytes,
            "{name} differs; if that was meant: BLESS=1 cargo test --release --test golden, read the diff, say why"
        );
    }
}

fn values(dimensions: &Path) -> BTreeMap<String, f64> {
    let table: toml::Table = fs::read_to_string(dimensions).unwrap().parse().unwrap();
    let list = table["dimension"].as_array().unwrap();
    list.iter()
        .map(|d| {
            let value = d["value"].as_str().unwrap().strip_suffix(" mm").unwrap();
            (d["name"].as_str().unwrap().to_string(), value.parse().unwrap())
        })
        .collect()
}

/// The order's dimensions, to two steps of the grid: refinement ends where nothing that can be etched is gained by more.
#[test]
fn every_order_gives_its_dimensions_again() {
    const STEPS_MM: f64 = 0.002;
    bless();
    for name in cases() {
        let folder = tempfile::tempdir().unwrap();
        let file = folder.path().join("dimensions.toml");
        run(&["dimension", order(&name).to_str().unwrap(), file.to_str().unwrap()]);
        let (made, kept) = (values(&file), values(&kept(&name).join("dimensions.toml")));
        assert_eq!(made.keys().collect::<Vec<_>>(), kept.keys().collect::<Vec<_>>(), "{name}");
        for (dimension, value) in kept {
            assert!((made[&dimension] - value).abs() <= STEPS_MM + 1e-9, "{name}, {dimension}: {} mm, was {value} mm", made[&dimension]);
        }
    }
}

#[test]
fn the_dimensions_of_every_case_give_every_file_again_byte_for_byte() {
    bless();
    for name in cases() {
        let folder = tempfile::tempdir().unwrap();
        run(&["draw", kept(&name).join("dimensions.toml").to_str().unwrap(), "--out", folder.path().to_str().unwrap()]);
        let made = folder.path().join(&name);
        if name == NAME {
            assert_same_files(&made, &kept(&name));
            continue;
        }
        for file in KEPT {
            let (made, kept) = (fs::read_to_string(made.join(file)).unwrap(), fs::read_to_string(kept(&name).join(file)).unwrap());
            assert!(
                made == kept,
                "{name}/{file} differs; if that was meant: BLESS=1 cargo test --release --test golden, read the diff, say why"
            );
        }
    }
}

/// The order as understood is complete: made again, from another folder, it gives the same package.
#[test]
fn the_order_as_understood_gives_the_same_package() {
    bless();
    let folder = tempfile::tempdir().unwrap();
    let copy = folder.path().join("elsewhere.toml");
    fs::copy(kept(NAME).join("order.toml"), &copy).unwrap();
    run(&["make", copy.to_str().unwrap(), "--out", folder.path().to_str().unwrap()]);
    assert_same_files(&folder.path().join(NAME), &kept(NAME));
}
