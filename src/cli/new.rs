//! `stripwright new`: a commented starter order.

use std::path::PathBuf;

use clap::Args;

use serde_json::json;

use super::{Ending, Voice, fresh_file, problems, results, table};
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
        return if voice.json {
            table::print_json(&json!({ "family": family.name(), "order": family.starter() }))
        } else {
            results(family.starter())
        };
    };
    if let Err(problem) = fresh_file::write(path, family.starter().as_bytes()) {
        problems::print(&[problem], None, voice);
        return Ending::NothingMade;
    }
    if voice.json {
        results(&(serde_json::json!({ "family": arguments.family, "file": path.display().to_string() }).to_string() + "\n"))
    } else {
        Ending::Done
    }
}
