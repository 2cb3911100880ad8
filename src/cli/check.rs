//! `check`: a package read back and verified.

use std::path::PathBuf;

use serde_json::json;

use super::Ending;
use super::Voice;
use super::problems;
use super::results;
use crate::package;

/// Reads a package back: files and checksums, Gerber, drill, DXF and Touchstone syntax, units, alignment, extents
#[derive(clap::Args, Debug)]
pub struct Arguments {
    /// The package's folder, as written by `make` or `draw`
    package: PathBuf,
}

/// Runs the command.
pub fn run(arguments: &Arguments, voice: Voice) -> Ending {
    let checked = match package::verify(&arguments.package) {
        Ok(checked) => checked,
        Err(problem) => {
            problems::print(std::slice::from_ref(&problem), None, voice);
            if voice.json {
                results(&format!("{:#}\n", json!({ "findings": [problems::to_json(&problem, None)] })));
            }
            return Ending::NothingMade;
        }
    };
    problems::print(&checked.findings, None, voice);
    let (contents, count) = (&checked.contents, checked.findings.len());
    let written = if voice.json {
        let findings: Vec<_> = checked.findings.iter().map(|problem| problems::to_json(problem, None)).collect();
        let value = json!({
            "package": arguments.package.display().to_string(),
            "name": contents.name,
            "revision": contents.revision,
            "files": contents.files.len(),
            "withheld": contents.withheld,
            "breaks_a_rule": contents.breaks_a_rule,
            "findings": findings,
        });
        results(&format!("{value:#}\n"))
    } else {
        let mut text = format!("{} revision {}: {} files checked, ", contents.name, contents.revision, contents.files.len());
        text += &match count {
            0 => "nothing found".to_string(),
            1 => "1 finding".to_string(),
            n => format!("{n} findings"),
        };
        if contents.withheld {
            text += "; the files for the board house are withheld: a design rule is broken";
        } else if contents.breaks_a_rule {
            text += "; written despite a broken design rule";
        }
        results(&(text + "\n"))
    };
    match written {
        Ending::Done if count > 0 || contents.breaks_a_rule => Ending::Unmet,
        other => other,
    }
}
