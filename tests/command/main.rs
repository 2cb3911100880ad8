//! What a user meets: messages, exit codes, files.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

mod class_file;
mod commands;
mod dimension_file;
mod files;
mod line;
mod mistakes;
mod packages;
mod roughness_law;
mod section_file;

use std::path::Path;

use stripwright::base::Problem;
use stripwright::cli::problems::render;
use stripwright::family;
use stripwright::order::{self, Source};

/// The starter order, the base that every test changes in one place.
pub const STARTER: &str = include_str!("../../templates/orders/edge-coupled.toml");

/// Reads an order file the way every command does: its problems and what would be printed.
pub fn read_file(path: &Path) -> (Vec<Problem>, String) {
    let (problems, source) = match Source::open(path) {
        Ok(source) => match order::read(&source, &family::keys()) {
            Ok((_, warnings)) => (warnings, Some(source)),
            Err(problems) => (problems, Some(source)),
        },
        Err(problems) => (problems, None),
    };
    let text = problems.iter().map(|p| render(p, source.as_ref(), false)).collect();
    (problems, text)
}

/// The same for text that is written to `order.toml` first.
pub fn read_text(text: impl AsRef<[u8]>) -> (Vec<Problem>, String) {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("order.toml");
    std::fs::write(&path, text).unwrap();
    read_file(&path)
}

/// The starter with one stretch replaced; fails when the stretch is not there exactly once.
pub fn changed(from: &str, to: &str) -> String {
    assert_eq!(STARTER.matches(from).count(), 1, "{from:?} must stand once in the starter");
    STARTER.replace(from, to)
}
