//! The example package in `out/`: an order gives its dimensions again, and its dimensions give its files again, byte for byte.
//!
//! `BLESS=1 cargo test --release --test golden` makes the package anew: only when the output was meant to change.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};

use assert_cmd::Command;

const NAME: &str = "buoy-telemetry-preselector";

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn order() -> PathBuf {
    root().join(format!("tests/golden/{NAME}.toml"))
}

fn package() -> PathBuf {
    let package = root().join("out").join(NAME);
    if std::env::var_os("BLESS").is_some() {
        static ONCE: std::sync::Once = std::sync::Once::new();
        ONCE.call_once(|| run(&["make", order().to_str().unwrap(), "--replace", "--out", root().join("out").to_str().unwrap()]));
    }
    package
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
fn the_order_gives_its_dimensions_again() {
    const STEPS_MM: f64 = 0.002;
    let package = package();
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("dimensions.toml");
    run(&["dimension", order().to_str().unwrap(), file.to_str().unwrap()]);
    let (made, kept) = (values(&file), values(&package.join("dimensions.toml")));
    assert_eq!(made.keys().collect::<Vec<_>>(), kept.keys().collect::<Vec<_>>());
    for (name, value) in kept {
        assert!((made[&name] - value).abs() <= STEPS_MM + 1e-9, "{name}: {} mm, was {value} mm", made[&name]);
    }
}

#[test]
fn the_dimensions_give_every_file_again_byte_for_byte() {
    let package = package();
    let folder = tempfile::tempdir().unwrap();
    run(&["draw", package.join("dimensions.toml").to_str().unwrap(), "--out", folder.path().to_str().unwrap()]);
    assert_same_files(&folder.path().join(NAME), &package);
}

/// The order as understood is complete: made again, from another folder, it gives the same package.
#[test]
fn the_order_as_understood_gives_the_same_package() {
    let package = package();
    let folder = tempfile::tempdir().unwrap();
    let copy = folder.path().join("elsewhere.toml");
    fs::copy(package.join("order.toml"), &copy).unwrap();
    run(&["make", copy.to_str().unwrap(), "--out", folder.path().to_str().unwrap()]);
    assert_same_files(&folder.path().join(NAME), &package);
}
