//! Files that are no orders at all.

use std::path::Path;
use std::time::{Duration, Instant};

use crate::{read_file, read_text};

#[test]
fn an_empty_file_is_refused() {
    for text in ["", "\n\n", "  \t\n", "\u{feff}"] {
        let (problems, printed) = read_text(text);
        assert_eq!(problems[0].code, "file-empty", "{printed}");
        assert!(printed.contains("order.toml") && printed.contains("stripwright new"), "{printed}");
    }
}

#[test]
fn a_file_with_comments_only_lacks_its_tables() {
    let (problems, printed) = read_text("# nothing\n");
    for key in ["order.name", "filter", "laminate", "board"] {
        assert!(printed.contains(&format!("{key}:")), "{key}: {printed}");
    }
    assert!(problems.iter().all(|p| p.code == "key-missing"), "{printed}");
}

#[test]
fn a_file_of_100_mb_is_refused_at_once() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("order.toml");
    std::fs::File::create(&path).unwrap().set_len(100_000_000).unwrap();
    let start = Instant::now();
    let (problems, printed) = read_file(&path);
    assert_eq!(problems[0].code, "file-too-large", "{printed}");
    assert!(printed.contains("4 MiB"), "{printed}");
    // Refused by its length: reading 100 MB would take longer on a busy machine, looking up a length does not.
    assert!(start.elapsed() < Duration::from_secs(2));
}

#[cfg(unix)]
#[test]
fn an_endless_device_is_refused() {
    let (problems, printed) = read_file(Path::new("/dev/zero"));
    assert_eq!(problems[0].code, "file-too-large", "{printed}");
}

#[test]
fn a_binary_file_is_refused() {
    let (problems, printed) = read_text(b"[order]\nname = \"x\"\n\0\0\x7fELF");
    assert_eq!(problems[0].code, "file-binary", "{printed}");
    assert!(printed.contains("order.toml:3"), "{printed}");
}

#[test]
fn text_in_another_encoding_is_refused_with_its_line() {
    let (problems, printed) = read_text(b"[order]\nname = \"x\"\ntitle = \"Schneeh\xf6he\"\n");
    assert_eq!(problems[0].code, "file-not-utf8", "{printed}");
    assert!(printed.contains("order.toml:3") && printed.contains("0xf6"), "{printed}");
}

#[test]
fn a_folder_and_a_missing_file_are_refused() {
    let folder = tempfile::tempdir().unwrap();
    let (problems, printed) = read_file(folder.path());
    assert_eq!(problems[0].code, "file-is-a-folder", "{printed}");
    let (problems, printed) = read_file(&folder.path().join("none.toml"));
    assert_eq!(problems[0].code, "file-missing", "{printed}");
    assert!(printed.contains("none.toml"), "{printed}");
}

#[cfg(unix)]
#[test]
fn an_unreadable_file_is_refused() {
    use std::os::unix::fs::PermissionsExt;
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("order.toml");
    std::fs::write(&path, "x = 1\n").unwrap();
    std::fs::set_permissions(&path, std::fs::Permissions::from_mode(0o000)).unwrap();
    // The superuser may read everything; a path through a file is unreadable for everybody.
    let path = if std::fs::read(&path).is_ok() { path.join("order.toml") } else { path };
    let (problems, printed) = read_file(&path);
    assert_eq!(problems[0].code, "file-unreadable", "{printed}");
}

#[test]
fn windows_line_ends_and_a_byte_order_mark_do_no_harm() {
    let text = format!("\u{feff}{}", crate::STARTER.replace('\n', "\r\n"));
    let (problems, printed) = read_text(text);
    assert!(problems.is_empty(), "{printed}");
}
