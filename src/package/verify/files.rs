//! Is every file there, unchanged, and readable?

use std::fs;
use std::io;
use std::io::Read;
use std::path::Path;

use crate::network::touchstone;
use crate::package::contents::CONTENTS;
use crate::package::contents::Listed;
use crate::package::dxf;
use crate::package::netlist;
use crate::package::put::checksum;
use crate::package::put::checksum_of;
use crate::package::read_drill;
use crate::package::read_gerber;
use crate::package::verify::Findings;
use crate::package::verify::Pack;
use crate::package::verify::limits::Limits;

/// A file larger than this is none of ours, and is not taken into memory.
const MAX_READ_BYTES: u64 = 1 << 30;

/// Files in the folder that the list does not know.
pub(super) fn unknown(pack: &Pack, found: &mut Findings) -> io::Result<()> {
    let mut names =
        fs::read_dir(pack.folder)?.map(|entry| Ok(entry?.file_name().to_string_lossy().into_owned())).collect::<io::Result<Vec<_>>>()?;
    names.sort();
    for name in names {
        if name != CONTENTS && !pack.contents.files.iter().any(|file| file.file == name) {
            found.add("file-unknown", &name, format!("is not listed in {CONTENTS}"));
        }
    }
    Ok(())
}

/// Reads one file into the pack.
pub(super) fn read(pack: &mut Pack, listed: &Listed, found: &mut Findings) {
    let name = listed.file.as_str();
    // A list could name files anywhere; only names within the folder are followed.
    if Path::new(name).file_name().is_none_or(|only| only != name) {
        return found.add("file-unknown", name, "is no plain file name");
    }
    let path = pack.folder.join(name);
    match checksum(&path) {
        Err(error) if error.kind() == io::ErrorKind::NotFound => return found.add("file-missing", name, "is listed and not there"),
        Err(error) => return found.add("file-missing", name, format!("cannot be read: {error}")),
        Ok(sum) if sum != (listed.bytes, listed.sha256.clone()) => {
            found.add("file-changed", name, "is not the file that was listed: length or SHA-256 differ");
        }
        Ok(_) => {}
    }
    match fs::metadata(&path) {
        Ok(data) if data.len() <= MAX_READ_BYTES => {}
        _ => return found.add("file-changed", name, "is too large to be read back"),
    }
    let Ok(bytes) = fs::read(&path) else { return found.add("file-missing", name, "cannot be read") };
    let text = || String::from_utf8_lossy(&bytes);
    match name.rsplit('.').next().unwrap_or_default() {
        "gbr" => {
            let (image, faults) = read_gerber::read(&bytes);
            report(name, faults, found);
            pack.gerbers.push((name.to_string(), image));
        }
        "drl" => {
            let (drilled, faults) = read_drill::read(&text());
            report(name, faults, found);
            pack.drills.push((name.to_string(), drilled));
        }
        "ipc" => {
            let (netlist, faults) = netlist::read(&text());
            report(name, faults, found);
            pack.netlist = Some((name.to_string(), netlist));
        }
        "dxf" => {
            if !text().trim_end().ends_with("EOF") {
                found.add("dxf-unreadable", name, "no EOF at the end: the file is cut off");
            }
            match dxf::read(&path) {
                Ok(drawn) => pack.drawing = Some((name.to_string(), drawn)),
                Err(error) => found.add("dxf-unreadable", name, error),
            }
        }
        "gbrjob" => match serde_json::from_slice(&bytes) {
            Ok(value) => pack.job_file = Some((name.to_string(), value)),
            Err(error) => found.add("job-file-unreadable", name, error.to_string()),
        },
        "s2p" => match touchstone::read(&text(), 2) {
            Err(problem) => found.add("touchstone-unreadable", name, problem.message),
            Ok(file) if file.response().is_none() => found.add("touchstone-unreadable", name, "holds no S-parameters of a two-port"),
            Ok(_) => {}
        },
        "pdf" => {
            if let Some(what) = pdf_fault(&bytes) {
                found.add("pdf-unreadable", name, what);
            }
        }
        "svg" if !text().starts_with("<svg") || !text().trim_end().ends_with("</svg>") => {
            found.add("picture-unreadable", name, "does not begin and end as a picture: the file is cut off");
        }
        "toml" => match text().parse::<toml::Table>() {
            Err(error) => found.add("order-unreadable", name, error.message()),
            Ok(table) if name == "order.toml" => match Limits::of(&table) {
                Ok(limits) => pack.limits = limits,
                Err(what) => found.add("order-unreadable", name, what),
            },
            Ok(_) => {}
        },
        "txt" => note(pack, name, &text(), found),
        "zip" => zip(pack, name, &bytes, found),
        _ => {}
    }
}

fn report(name: &str, faults: Vec<(&'static str, String)>, found: &mut Findings) {
    for (code, what) in faults {
        found.add(code, name, what);
    }
}

/// What keeps a PDF from being opened: head, end, and the place of its table of objects.
fn pdf_fault(bytes: &[u8]) -> Option<&'static str> {
    if !bytes.starts_with(b"%PDF-") {
        return Some("does not begin with %PDF");
    }
    let tail = String::from_utf8_lossy(&bytes[bytes.len().saturating_sub(64)..]).into_owned();
    if !tail.trim_end().ends_with("%%EOF") {
        return Some("no %%EOF at the end: the file is cut off");
    }
    let place = tail.split("startxref").nth(1).and_then(|rest| rest.split_whitespace().next()).and_then(|text| text.parse::<usize>().ok());
    match place.and_then(|place| bytes.get(place..)) {
        Some(table) if table.starts_with(b"xref") => None,
        _ => Some("its table of objects is not where it says: the file was edited by hand"),
    }
}

/// The note ends as written, and lists the checksums the package has.
fn note(pack: &Pack, name: &str, text: &str, found: &mut Findings) {
    if !text.is_ascii() || !text.trim_end().ends_with("End of note.") {
        found.add("note-unreadable", name, "is not plain text to its closing line: the file is cut off");
    }
    let mut last = "";
    for line in text.lines() {
        if let Some(sum) = line.trim().strip_prefix("sha-256 ") {
            let listed = pack.contents.files.iter().find(|file| file.file == last);
            if listed.is_none_or(|file| file.sha256 != sum) {
                found.add("note-checksum-differs", name, format!("the checksum of {last} is not the package's"));
            }
        } else if !line.starts_with("   ") {
            // Lines further in go on with what a file is.
            last = line.split_whitespace().next().unwrap_or_default();
        }
    }
}

/// The archive must hold the listed files for the board house, byte for byte, and nothing else.
fn zip(pack: &Pack, name: &str, bytes: &[u8], found: &mut Findings) {
    let mut archive = match zip::ZipArchive::new(io::Cursor::new(bytes)) {
        Ok(archive) => archive,
        Err(error) => return found.add("zip-unreadable", name, error.to_string()),
    };
    let mut packed = Vec::new();
    for index in 0..archive.len() {
        // Unpacked in pieces, and not without end: an archive can promise any size.
        let read = archive.by_index(index).and_then(|file| Ok((file.name()?.into_owned(), checksum_of(file.take(MAX_READ_BYTES))?.1)));
        match read {
            Ok(entry) => packed.push(entry),
            Err(error) => return found.add("zip-unreadable", name, error.to_string()),
        }
    }
    for listed in pack.contents.files.iter().filter(|file| file.for_board_house && file.file != name) {
        match packed.iter().position(|(packed, _)| *packed == listed.file) {
            None => found.add("zip-differs", name, format!("{} is not in it", listed.file)),
            Some(index) => {
                if packed.swap_remove(index).1 != listed.sha256 {
                    found.add("zip-differs", name, format!("{} is another file in it", listed.file));
                }
            }
        }
    }
    for (extra, _) in packed {
        found.add("zip-differs", name, format!("{extra} is in it and not listed for the board house"));
    }
}
