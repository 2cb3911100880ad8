//! Writing one file that is not there yet: nothing of the user's is overwritten, and no half file stays.

use std::fs::OpenOptions;
use std::io::Write;
use std::path::Path;

use crate::base::Place;
use crate::base::Problem;

/// Writes a new file.
///
/// # Errors
/// `file-exists`: left alone; `file-unwritable`: the folder, the rights or the disk.
pub fn write(path: &Path, bytes: &[u8]) -> Result<(), Problem> {
    let unwritable = |error: std::io::Error, help: &str| {
        Problem::error("file-unwritable", Place::Whole, format!("{} cannot be written: {error}", path.display()), help)
    };
    // Creating only what is not there yet leaves no moment between asking and writing.
    let mut file = match OpenOptions::new().write(true).create_new(true).open(path) {
        Ok(file) => file,
        Err(error) if error.kind() == std::io::ErrorKind::AlreadyExists => {
            let message = format!("{} is there already and was left alone", path.display());
            return Err(Problem::error("file-exists", Place::Whole, message, "name another file, or remove it"));
        }
        Err(error) => return Err(unwritable(error, "name a file in a folder that exists and can be written to")),
    };
    file.write_all(bytes).and_then(|()| file.flush()).map_err(|error| {
        // This file is ours, it was not there before.
        let _ = std::fs::remove_file(path);
        unwritable(error, "make room on the disk")
    })
}
