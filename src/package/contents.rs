//! What is in a package? The list `contents.json`: every file with its size and SHA-256.

use std::io;
use std::io::Write;

use serde::Deserialize;
use serde::Serialize;

use crate::package::job::Job;

/// Name of the list.
pub const CONTENTS: &str = "contents.json";

/// One file of a package.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Listed {
    /// File name within the folder.
    pub file: String,
    /// One line: what it is.
    pub about: String,
    /// Whether the board house gets it.
    pub for_board_house: bool,
    /// Length.
    pub bytes: u64,
    /// Checksum, 64 hexadecimal digits.
    pub sha256: String,
}

/// The list as a file.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Contents {
    /// Name of the order.
    pub name: String,
    /// Its revision.
    pub revision: String,
    /// Its date, when it has one.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub date: Option<String>,
    /// What made it.
    pub made_by: String,
    /// The GUID all fabrication files share.
    pub same_coordinates: String,
    /// Whether the files for the board house were left out because a design rule is broken.
    pub withheld: bool,
    /// Whether a design rule is broken.
    pub breaks_a_rule: bool,
    /// Every file but this one.
    pub files: Vec<Listed>,
}

impl Contents {
    /// The list of a package whose files are all written.
    pub fn of(job: &Job, withheld: bool) -> Contents {
        let order = job.order();
        Contents {
            name: order.name.clone(),
            revision: order.revision.clone(),
            date: order.date.clone(),
            made_by: format!("{} {}", env!("CARGO_PKG_NAME"), env!("CARGO_PKG_VERSION")),
            same_coordinates: job.coordinates.to_string(),
            withheld,
            breaks_a_rule: job.breaks_a_rule(),
            files: job.written.clone(),
        }
    }

    /// Writes the list.
    pub fn write(&self, out: &mut dyn Write) -> io::Result<()> {
        serde_json::to_writer_pretty(&mut *out, self)?;
        writeln!(out)
    }

    /// Reads a list; the error says what is wrong with it.
    pub fn read(text: &str) -> Result<Contents, String> {
        serde_json::from_str(text).map_err(|error| error.to_string())
    }
}
