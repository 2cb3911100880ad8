//! What does the board house get in one file? A zip of its files, the same bytes for the same files.

use std::fs;
use std::io;
use std::io::Cursor;
use std::io::Write;

use zip::CompressionMethod;
use zip::DateTime;
use zip::ZipWriter;
use zip::write::SimpleFileOptions;

use crate::package::job::Job;

/// Packs the files written so far that are for the board house.
pub fn write(job: &Job, out: &mut dyn Write) -> io::Result<()> {
    // The clock and the system's access rights must not leak in.
    let options = SimpleFileOptions::default()
        .compression_method(CompressionMethod::Deflated)
        .last_modified_time(DateTime::default())
        .unix_permissions(0o644);
    let mut archive = ZipWriter::new(Cursor::new(Vec::new()));
    for listed in job.written.iter().filter(|file| file.for_board_house) {
        archive.start_file(listed.file.as_str(), options)?;
        io::copy(&mut fs::File::open(job.folder.join(&listed.file))?, &mut archive)?;
    }
    out.write_all(archive.finish()?.get_ref())
}
