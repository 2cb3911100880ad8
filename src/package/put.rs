//! How does a package come to its place whole, or not at all?
//!
//! Everything is written into a hidden folder beside the target, synced, and put in place by one exchange of names where the system has it,
//! by two renames elsewhere. A lock keeps two runs apart; it falls with the process, so what a killed run left is known to be left over.

use std::fs;
use std::io;
use std::io::BufWriter;
use std::io::Write;
use std::path::Path;
use std::path::PathBuf;
use std::time::Duration;

use sha2::Digest;
use sha2::Sha256;

use crate::base::Place;
use crate::base::Problem;
use crate::package::Bundle;
use crate::package::Job;
use crate::package::WRITERS;
use crate::package::contents::CONTENTS;
use crate::package::contents::Contents;
use crate::package::contents::Listed;

/// A package takes well under a second to write; a run that holds the lock for longer is stuck.
const LOCK_WAIT: Duration = Duration::from_secs(20);
const LOCK_POLL: Duration = Duration::from_millis(10);

/// Writes every file of the package into the job's folder, which must exist; `withheld` leaves out what only the board house needs.
pub fn write_all(job: &mut Job, withheld: bool) -> io::Result<()> {
    let name = job.order().name.clone();
    for writer in WRITERS.iter().filter(|writer| !(withheld && writer.for_board_house)) {
        if !(writer.applies)(job) {
            continue;
        }
        let file = writer.file_name(&name);
        let (bytes, sha256) = write_one(&job.folder.join(&file), |out| (writer.write)(job, out))?;
        job.written.push(Listed { file, about: writer.about.to_string(), for_board_house: writer.for_board_house, bytes, sha256 });
    }
    let contents = Contents::of(job, withheld);
    write_one(&job.folder.join(CONTENTS), |out| contents.write(out))?;
    Ok(())
}

/// Writes one new file; gives its length and checksum.
fn write_one(path: &Path, write: impl FnOnce(&mut dyn Write) -> io::Result<()>) -> io::Result<(u64, String)> {
    let file = fs::File::create_new(path)?;
    let mut counted = Counted { out: BufWriter::new(&file), hash: Sha256::new(), bytes: 0 };
    write(&mut counted)?;
    counted.out.flush()?;
    let (bytes, sha256) = (counted.bytes, hex(&counted.hash.finalize()));
    Ok((bytes, sha256))
}

/// Passes bytes on and remembers their number and checksum.
struct Counted<W: Write> {
    out: W,
    hash: Sha256,
    bytes: u64,
}

impl<W: Write> Write for Counted<W> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        let taken = self.out.write(bytes)?;
        self.hash.update(&bytes[..taken]);
        self.bytes += taken as u64;
        Ok(taken)
    }

    fn flush(&mut self) -> io::Result<()> {
        self.out.flush()
    }
}

fn hex(bytes: &[u8]) -> String {
    bytes.iter().map(|byte| format!("{byte:02x}")).collect()
}

/// What may happen to what is there, and what is left out.
#[derive(Clone, Copy, Debug, Default)]
pub struct How<'a> {
    /// Whether a package that is there is replaced.
    pub replace: bool,
    /// Whether the files for the board house are left out: a design rule is broken.
    pub withhold: bool,
    /// The file the package is made from: it may lie in the replaced package, edited.
    pub source: Option<&'a Path>,
}

/// Makes the whole package and puts it in place, as a folder in `parent` called like the order; gives that folder.
///
/// At any moment, a kill included, the folder is the old package or the new one, whole (where the system cannot exchange two names at once,
/// there is a moment with neither; the next run puts the old one back).
///
/// # Errors
/// `package-exists`, `package-holds-foreign-files`, `package-busy`, `package-not-written`; whatever was there is then untouched.
pub fn put(bundle: &Bundle, parent: &Path, how: How) -> Result<PathBuf, Problem> {
    let name = bundle.dimensions.order.name.as_str();
    let target = parent.join(name);
    let failed = |what: &str, path: &Path, error: &io::Error| not_written(what, path, error);
    fs::create_dir_all(parent).map_err(|error| failed("cannot make the folder", parent, &error))?;
    let lock_path = parent.join(format!(".{name}.lock"));
    let _lock = match Lock::take(&lock_path) {
        Ok(Some(lock)) => lock,
        Ok(None) => {
            return Err(Problem::error(
                "package-busy",
                Place::Whole,
                format!("another run has been writing {} for {} s", target.display(), LOCK_WAIT.as_secs()),
                "wait for it to end, or choose another folder with --out",
            ));
        }
        Err(error) => return Err(failed("cannot write in", parent, &error)),
    };
    let (fresh, aside) = (parent.join(format!(".{name}.new")), parent.join(format!(".{name}.old")));
    tidy(&target, &fresh, &aside).map_err(|error| failed("cannot tidy up after a run that was killed, in", parent, &error))?;
    may_go(name, parent, how)?;

    let made = fs::create_dir(&fresh).and_then(|()| {
        write_all(&mut Job::new(bundle, &fresh), how.withhold)?;
        sync_files(&fresh)
    });
    if let Err(error) = made {
        // What is left, if even this fails, is removed by the next run.
        let _ = fs::remove_dir_all(&fresh);
        return Err(failed("cannot write the package", &target, &error));
    }
    // Again, since writing took a while.
    let moved = may_go(name, parent, how).and_then(|()| {
        let moved = if target.exists() { swap(&fresh, &target, &aside) } else { fs::rename(&fresh, &target) };
        moved.map_err(|error| failed("cannot put the package in place at", &target, &error))
    });
    if moved.is_ok() {
        let _ = sync_folder(parent);
        let _ = fs::remove_dir_all(&aside);
    }
    // Holds the replaced package after an exchange, the new one after a failure.
    let _ = fs::remove_dir_all(&fresh);
    moved.map(|()| target)
}

/// Whether the package called `name` may be put in place, as far as what is there allows; asked before the work begins as well.
///
/// # Errors
/// `package-exists`, `package-holds-foreign-files`.
pub fn may_go(name: &str, parent: &Path, how: How) -> Result<(), Problem> {
    let target = parent.join(name);
    let Ok(found) = fs::symlink_metadata(&target) else { return Ok(()) };
    if !found.is_dir() {
        let message = format!("{} is there and is no folder", target.display());
        return Err(Problem::error("package-exists", Place::Whole, message, "move it away, or choose another folder with --out"));
    }
    if !how.replace {
        let message = format!("{} is there already", target.display());
        return Err(Problem::error("package-exists", Place::Whole, message, "--replace puts the new package in its place"));
    }
    let foreign = foreign_files(&target, how.source).map_err(|error| not_written("cannot read", &target, &error))?;
    if foreign.is_empty() {
        return Ok(());
    }
    let shown = foreign.iter().take(5).cloned().collect::<Vec<_>>().join(", ");
    let more = if foreign.len() > 5 { format!(" and {} more", foreign.len() - 5) } else { String::new() };
    Err(Problem::error(
        "package-holds-foreign-files",
        Place::Whole,
        format!("{} holds what its {CONTENTS} does not list or what was changed since: {shown}{more}", target.display()),
        "move these files out of the folder; rehow the package would lose them",
    ))
}

/// Files and folders in a package that its list does not know, or that were changed since they were written.
fn foreign_files(folder: &Path, source: Option<&Path>) -> io::Result<Vec<String>> {
    let source = source.and_then(|path| path.canonicalize().ok());
    let listed = fs::read_to_string(folder.join(CONTENTS)).ok().and_then(|text| Contents::read(&text).ok());
    let mut foreign = Vec::new();
    for entry in fs::read_dir(folder)? {
        let entry = entry?;
        let name = entry.file_name().to_string_lossy().into_owned();
        if listed.is_some() && name == CONTENTS {
            continue;
        }
        let known = listed.as_ref().and_then(|contents| contents.files.iter().find(|file| file.file == name));
        let is_source = source.is_some() && entry.path().canonicalize().ok() == source;
        let same = match known {
            Some(file) if entry.file_type()?.is_file() => is_source || checksum(&entry.path())? == (file.bytes, file.sha256.clone()),
            _ => false,
        };
        if !same {
            foreign.push(name);
        }
    }
    foreign.sort();
    Ok(foreign)
}

/// Length and SHA-256 of a file.
pub(super) fn checksum(path: &Path) -> io::Result<(u64, String)> {
    checksum_of(fs::File::open(path)?)
}

/// Length and SHA-256 of what a reader gives.
pub(super) fn checksum_of(mut from: impl io::Read) -> io::Result<(u64, String)> {
    let mut counted = Counted { out: io::sink(), hash: Sha256::new(), bytes: 0 };
    io::copy(&mut from, &mut counted)?;
    Ok((counted.bytes, hex(&counted.hash.finalize())))
}

/// Removes what a killed run left, and puts back a package that it had moved aside.
fn tidy(target: &Path, fresh: &Path, aside: &Path) -> io::Result<()> {
    if aside.exists() && !target.exists() {
        fs::rename(aside, target)?;
    }
    for left_over in [fresh, aside] {
        if left_over.exists() {
            fs::remove_dir_all(left_over)?;
        }
    }
    Ok(())
}

/// Puts `fresh` in the place of `target`, which ends up at `fresh` or at `aside`.
fn swap(fresh: &Path, target: &Path, aside: &Path) -> io::Result<()> {
    if exchange(fresh, target)? {
        return Ok(());
    }
    fs::rename(target, aside)?;
    fs::rename(fresh, target).inspect_err(|_| {
        // The old package goes back; if even that fails, the next run does it.
        let _ = fs::rename(aside, target);
    })
}

/// Exchanges two names at once; false where the system or the file system cannot.
#[cfg(target_os = "linux")]
fn exchange(one: &Path, other: &Path) -> io::Result<bool> {
    use rustix::fs::CWD;
    use rustix::fs::RenameFlags;
    use rustix::io::Errno;
    match rustix::fs::renameat_with(CWD, one, CWD, other, RenameFlags::EXCHANGE) {
        Ok(()) => Ok(true),
        Err(Errno::INVAL | Errno::NOSYS | Errno::NOTSUP) => Ok(false),
        Err(error) => Err(error.into()),
    }
}

#[cfg(not(target_os = "linux"))]
fn exchange(_: &Path, _: &Path) -> io::Result<bool> {
    Ok(false)
}

/// Brings a package's files to the disk. All at the end: the first sync mostly carries the others, where one after each file would not.
fn sync_files(folder: &Path) -> io::Result<()> {
    for entry in fs::read_dir(folder)? {
        // Opened for writing: some systems sync only what may be written.
        fs::OpenOptions::new().write(true).open(entry?.path())?.sync_all()?;
    }
    sync_folder(folder)
}

/// Brings a folder's entries to the disk.
fn sync_folder(folder: &Path) -> io::Result<()> {
    if cfg!(unix) { fs::File::open(folder)?.sync_all() } else { Ok(()) }
}

fn not_written(what: &str, path: &Path, error: &io::Error) -> Problem {
    let help = match error.kind() {
        io::ErrorKind::StorageFull | io::ErrorKind::QuotaExceeded => "free some space, or choose a folder on another disk with --out",
        io::ErrorKind::PermissionDenied | io::ErrorKind::ReadOnlyFilesystem | io::ErrorKind::NotADirectory => {
            "choose a folder you may write in with --out"
        }
        io::ErrorKind::InvalidData => "the order asks for what the file format cannot hold",
        _ => "see that the folder can be written, or choose another with --out",
    };
    Problem::error("package-not-written", Place::Whole, format!("{what} {}: {error}", path.display()), help)
}

/// Keeps a second run out; falls with the process.
struct Lock {
    file: fs::File,
    path: PathBuf,
}

impl Lock {
    /// Waits for the lock; `None` when another run holds it for longer than [`LOCK_WAIT`].
    fn take(path: &Path) -> io::Result<Option<Lock>> {
        let rounds = LOCK_WAIT.as_millis() / LOCK_POLL.as_millis();
        for _ in 0..rounds {
            let file = fs::OpenOptions::new().create(true).truncate(false).write(true).open(path)?;
            match file.try_lock() {
                // The run before may have removed the file between our opening and our locking it.
                Ok(()) if is_at(&file, path) => return Ok(Some(Lock { file, path: path.to_path_buf() })),
                Ok(()) => continue,
                Err(fs::TryLockError::WouldBlock) => std::thread::sleep(LOCK_POLL),
                // A file system without locks: better unlocked than not at all.
                Err(fs::TryLockError::Error(error)) if error.kind() == io::ErrorKind::Unsupported => {
                    return Ok(Some(Lock { file, path: path.to_path_buf() }));
                }
                Err(fs::TryLockError::Error(error)) => return Err(error),
            }
        }
        Ok(None)
    }
}

impl Drop for Lock {
    fn drop(&mut self) {
        // Only where a waiting run notices that the file it opened is gone.
        if cfg!(unix) && is_at(&self.file, &self.path) {
            let _ = fs::remove_file(&self.path);
        }
    }
}

/// Whether the open file is the one at `path`.
#[cfg(unix)]
fn is_at(file: &fs::File, path: &Path) -> bool {
    use std::os::unix::fs::MetadataExt;
    match (file.metadata(), fs::metadata(path)) {
        (Ok(open), Ok(there)) => (open.dev(), open.ino()) == (there.dev(), there.ino()),
        _ => false,
    }
}

#[cfg(not(unix))]
fn is_at(_: &fs::File, _: &Path) -> bool {
    true
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn without_an_exchange_the_old_package_comes_back_when_the_new_one_cannot_move() {
        let parent = std::env::temp_dir().join(format!("stripwright-swap-{}", std::process::id()));
        let (fresh, target, aside) = (parent.join("fresh"), parent.join("target"), parent.join("aside"));
        fs::create_dir_all(&target).unwrap();
        fs::write(target.join("old"), "old").unwrap();
        // Nothing to move in: both the exchange and the second rename fail.
        assert!(swap(&fresh, &target, &aside).is_err());
        assert!(target.join("old").exists());
        // What a run killed between two renames leaves is put back.
        fs::rename(&target, &aside).unwrap();
        fs::create_dir_all(&fresh).unwrap();
        tidy(&target, &fresh, &aside).unwrap();
        assert!(target.join("old").exists() && !fresh.exists() && !aside.exists());
        fs::remove_dir_all(&parent).unwrap();
    }
}
