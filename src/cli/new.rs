//! `stripwright new`: a commented starter order.

use std::fs::OpenOptions;
use std::io::Write;
use std::path::PathBuf;

use clap::Args;

use super::{Ending, Voice, problems, results};
use crate::base::Place;
use crate::base::Problem;
use crate::family::FAMILIES;
use crate::order::nearest;

/// Writes a commented starter order: an invented scenario that meets its own requirements, to be changed into yours.
#[derive(Args, Debug)]
pub struct New {
    /// Family of the filter; `stripwright list families` names them.
    family: String,
    /// File to write; an existing one is left alone. Without it the order goes to stdout.
    file: Option<PathBuf>,
}

/// Runs the command.
pub fn run(arguments: &New, voice: Voice) -> Ending {
    let refuse = |code, message: String, help: String| {
        problems::print(&[Problem::error(code, Place::Whole, message, help)], None, voice);
        Ending::NothingMade
    };
    let Some(family) = FAMILIES.iter().find(|f| f.name() == arguments.family) else {
        let known = || FAMILIES.iter().map(|f| f.name());
        let help =
            nearest(&arguments.family, known()).map_or("choose one of these".to_string(), |near| format!("did you mean \"{near}\"?"));
        let known: Vec<_> = known().collect();
        return refuse("family-unknown", format!("there is no family \"{}\"; known: {}", arguments.family, known.join(", ")), help);
    };
    let Some(path) = &arguments.file else {
        return results(family.starter());
    };
    // Creating only what is not there yet leaves no moment between asking and writing.
    let mut file = match OpenOptions::new().write(true).create_new(true).open(path) {
        Ok(file) => file,
        Err(error) if error.kind() == std::io::ErrorKind::AlreadyExists => {
            return refuse(
                "file-exists",
                format!("{} is there already and was left alone", path.display()),
                "name another file, or remove it".to_string(),
            );
        }
        Err(error) => {
            let help = "name a file in a folder that exists and can be written to".to_string();
            return refuse("file-unwritable", format!("{} cannot be written: {error}", path.display()), help);
        }
    };
    if let Err(error) = file.write_all(family.starter().as_bytes()) {
        // Half an order is worse than none; this file is ours, it was not there before.
        drop(file);
        let _ = std::fs::remove_file(path);
        let help = "make room on the disk".to_string();
        return refuse("file-unwritable", format!("{} cannot be written: {error}", path.display()), help);
    }
    if voice.json {
        results(&(serde_json::json!({ "family": arguments.family, "file": path.display().to_string() }).to_string() + "\n"))
    } else {
        Ending::Done
    }
}
