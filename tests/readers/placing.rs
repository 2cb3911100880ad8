//! Is there always a whole package, whatever happens to the run that replaces it? Done for real: kills, full disks, read-only folders.

use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Child, Command, Output, Stdio};
use std::time::{Duration, Instant};

use stripwright::package::{How, put, verify};

use crate::sample;

const BINARY: &str = env!("CARGO_BIN_EXE_stripwright");
/// Rounds of the kill test: enough that kills fall on the writing, the exchange and the tidying up.
const KILLS: u64 = 30;

/// A package of revision A in `parent/packages`, and dimension files of replaced A and B to draw from.
fn scene(parent: &Path) -> (PathBuf, [PathBuf; 2]) {
    let out = parent.join("packages");
    let mut order = sample::order();
    let files = ["A", "B"].map(|revision| {
        order.revision = revision.into();
        let made = sample::made(&order);
        let file = parent.join(format!("{revision}.toml"));
        fs::write(&file, stripwright::dimensions::write(&made.dimensions)).unwrap();
        if revision == "A" {
            put(&sample::bundle(&made), &out, How::default()).unwrap();
        }
        file
    });
    (out, files)
}

fn draw(file: &Path, out: &Path) -> Command {
    let mut command = Command::new(BINARY);
    command.args(["draw", "--quiet", "--replace", "--despite-rules", "--out"]).arg(out).arg(file);
    command.stdout(Stdio::null()).stderr(Stdio::null());
    command
}

/// The revision of a package in which nothing is wrong.
fn whole(out: &Path) -> String {
    let checked = verify(&out.join(sample::order().name)).unwrap();
    assert!(checked.findings.is_empty(), "{:?}", checked.findings);
    checked.contents.revision
}

fn names(folder: &Path) -> Vec<String> {
    let mut names: Vec<String> = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().file_name().into_string().unwrap()).collect();
    names.sort();
    names
}

fn wait_for(child: &mut Child, what: impl Fn() -> bool) {
    let begun = Instant::now();
    while !what() && child.try_wait().unwrap().is_none() && begun.elapsed() < Duration::from_secs(60) {
        std::hint::spin_loop();
    }
}

#[test]
fn a_kill_at_any_moment_leaves_a_whole_package() {
    let parent = tempfile::tempdir().unwrap();
    let (out, files) = scene(parent.path());
    let name = sample::order().name;
    let fresh = out.join(format!(".{name}.new"));
    let contents = fresh.join("contents.json");
    // How long a run that is left alone takes from its first file to its end: the kills are spread over a little more.
    let mut child = draw(&files[1], &out).spawn().unwrap();
    wait_for(&mut child, || fresh.exists());
    let begun = Instant::now();
    assert!(child.wait().unwrap().code().is_some_and(|code| code < 2));
    let writing = begun.elapsed();
    let (mut left_over, mut replaced) = (0, Vec::new());
    for round in 0..KILLS {
        // The other revision than the one that is there, so that it shows which package a kill left.
        let there = whole(&out);
        let mut child = draw(&files[usize::from(there == "A")], &out).spawn().unwrap();
        if round % 3 < 2 {
            wait_for(&mut child, || fresh.exists());
            std::thread::sleep(writing.mul_f64(1.3 * round as f64 / KILLS as f64));
        } else {
            // The last file, the sync and the exchange, a few microseconds apart.
            wait_for(&mut child, || contents.exists());
            std::thread::sleep(Duration::from_micros(20 * round));
        }
        let _ = child.kill();
        child.wait().unwrap();
        if fresh.exists() {
            left_over += 1;
            // Out of the way, so that the next round sees its own run's folder appear and times its kill by that.
            fs::remove_dir_all(&fresh).unwrap();
        }
        replaced.push(whole(&out) != there);
    }
    // Some kills must have come before the exchange and some after it, or the test has tried nothing.
    assert!(left_over > 5, "only {left_over} of {KILLS} kills left something behind");
    assert!(replaced.contains(&true) && replaced.contains(&false), "{replaced:?}");
    // What a kill leaves, the next run tidies up.
    fs::create_dir(&fresh).unwrap();
    fs::write(fresh.join("half-a-file"), "half").unwrap();
    assert!(draw(&files[0], &out).status().unwrap().code().is_some_and(|code| code < 2));
    assert_eq!((whole(&out), names(&out)), ("A".to_string(), vec![name]));
}

#[test]
fn runs_at_the_same_time_do_not_disturb_each_other() {
    let parent = tempfile::tempdir().unwrap();
    let (out, files) = scene(parent.path());
    let mut children: Vec<Child> = (0..6).map(|i| draw(&files[i % 2], &out).spawn().unwrap()).collect();
    for child in &mut children {
        assert!(child.wait().unwrap().code().is_some_and(|code| code < 2));
    }
    whole(&out);
    assert_eq!(names(&out), [sample::order().name]);
}

/// Runs a script in a shell with the binary as `$stripwright`, the packages as `$out`, the file of revision B as `$b`.
fn shell(script: &str, prefix: &[&str], out: &Path, b: &Path) -> Output {
    let mut words: Vec<&str> = prefix.to_vec();
    words.extend(["sh", "-c", script]);
    Command::new(words[0]).args(&words[1..]).env("stripwright", BINARY).env("out", out).env("b", b).output().unwrap()
}

#[cfg(unix)]
#[test]
fn a_file_that_cannot_be_written_whole_leaves_the_old_package() {
    let parent = tempfile::tempdir().unwrap();
    let (out, files) = scene(parent.path());
    // No file may grow beyond 100 blocks of 512 or 1024 bytes; the response alone takes more. The signal ignored, writing fails.
    let script = "trap '' XFSZ; ulimit -f 100; exec \"$stripwright\" draw --replace --despite-rules --out \"$out\" \"$b\"";
    let output = shell(script, &[], &out, &files[1]);
    let said = String::from_utf8_lossy(&output.stderr);
    assert_eq!(output.status.code(), Some(2), "{said}");
    assert!(said.contains("package-not-written"), "{said}");
    assert_eq!((whole(&out), names(&out)), ("A".to_string(), vec![sample::order().name]));
}

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_and_a_read_only_one_leave_the_old_package() {
    let parent = tempfile::tempdir().unwrap();
    let (out, files) = scene(parent.path());
    // A mount of one's own needs no root where user namespaces are allowed; containers may forbid both.
    let user: &[&str] = &["unshare", "--user", "--map-root-user", "--mount"];
    let root: &[&str] = &["unshare", "--mount"];
    let small = parent.path().join("small");
    fs::create_dir(&small).unwrap();
    let name = sample::order().name;
    // Room for the old package and half a new one.
    let size: u64 = names(&out.join(&name)).iter().map(|file| fs::metadata(out.join(&name).join(file)).unwrap().len()).sum();
    let mount = format!("mount -t tmpfs -o size={} tmpfs '{}'", size * 3 / 2, small.display());
    let Some(prefix) = [user, root].into_iter().find(|prefix| shell(&mount, prefix, &out, &files[1]).status.success()) else {
        eprintln!("no mount of one's own is allowed here: full and read-only disks are not tried");
        return;
    };
    let small = small.display();
    let script = format!(
        "{mount} && cp -r \"$out/{name}\" '{small}' || exit 90
         \"$stripwright\" draw --replace --despite-rules --out '{small}' \"$b\"; echo full $?
         \"$stripwright\" check '{small}/{name}'; echo check $?; ls -A '{small}'
         mount -o remount,ro '{small}' || exit 91
         \"$stripwright\" draw --replace --despite-rules --out '{small}' \"$b\"; echo read-only $?
         \"$stripwright\" draw --despite-rules --out '{small}/new' \"$b\"; echo new $?
         \"$stripwright\" check '{small}/{name}'; echo check $?"
    );
    let output = shell(&script, prefix, &out, &files[1]);
    let (said, told) = (String::from_utf8_lossy(&output.stdout), String::from_utf8_lossy(&output.stderr));
    assert!(output.status.success(), "{said}{told}");
    let lines: Vec<&str> = said.lines().collect();
    for wanted in ["full 2", "read-only 2", "new 2", &name] {
        assert!(lines.contains(&wanted), "no \"{wanted}\" in {said}{told}");
    }
    // The old one, revision A, and no trace of the failed runs.
    assert_eq!(said.matches("revision A").count(), 2, "{said}");
    assert_eq!(said.matches("nothing found").count(), 2, "{said}");
    assert!(!said.contains(&format!(".{name}")), "{said}");
}

#[test]
fn a_file_in_the_way_is_no_folder() {
    let parent = tempfile::tempdir().unwrap();
    let order = sample::order();
    let made = sample::made(&order);
    let file = parent.path().join("file");
    fs::write(&file, "mine").unwrap();
    assert_eq!(put(&sample::bundle(&made), &file, How::default()).unwrap_err().code, "package-not-written");
    fs::write(parent.path().join(&order.name), "mine").unwrap();
    let how = How { replace: true, ..How::default() };
    assert_eq!(put(&sample::bundle(&made), parent.path(), how).unwrap_err().code, "package-exists");
    assert_eq!(fs::read_to_string(parent.path().join(&order.name)).unwrap(), "mine");
}

#[test]
fn what_the_user_added_or_changed_is_not_lost() {
    let parent = tempfile::tempdir().unwrap();
    let order = sample::order();
    let made = sample::made(&order);
    let again = How { replace: true, ..How::default() };
    let folder = put(&sample::bundle(&made), parent.path(), How::default()).unwrap();
    assert_eq!(put(&sample::bundle(&made), parent.path(), How::default()).unwrap_err().code, "package-exists");
    put(&sample::bundle(&made), parent.path(), again).unwrap();

    let refused = |how: How| {
        let problem = put(&sample::bundle(&made), parent.path(), how).unwrap_err();
        assert_eq!(problem.code, "package-holds-foreign-files");
        problem.message
    };
    let mine = folder.join("measured.s2p");
    fs::write(&mine, "mine").unwrap();
    assert!(refused(again).contains("measured.s2p"));
    assert_eq!(fs::read_to_string(&mine).unwrap(), "mine");
    fs::remove_file(&mine).unwrap();
    fs::create_dir(folder.join("photos")).unwrap();
    assert!(refused(again).contains("photos"));
    fs::remove_dir(folder.join("photos")).unwrap();

    // A hand-edited dimension set is lost only to the run that is made from it.
    let edited = folder.join("dimensions.toml");
    let text = fs::read_to_string(&edited).unwrap();
    fs::write(&edited, format!("{text}# my remark\n")).unwrap();
    assert!(refused(again).contains("dimensions.toml"));
    put(&sample::bundle(&made), parent.path(), How { source: Some(&edited), ..again }).unwrap();
    assert_eq!(verify(&folder).unwrap().findings, []);

    // A folder that is no package is nobody's to replace.
    fs::remove_file(folder.join("contents.json")).unwrap();
    refused(again);
}

#[test]
fn withheld_files_are_not_there() {
    let parent = tempfile::tempdir().unwrap();
    let made = sample::made(&sample::order());
    let folder = put(&sample::bundle(&made), parent.path(), How { withhold: true, ..How::default() }).unwrap();
    assert!(names(&folder).iter().all(|file| !file.ends_with(".gbr") && !file.ends_with(".drl") && !file.ends_with(".zip")));
    let checked = verify(&folder).unwrap();
    assert!(checked.contents.withheld && checked.findings.is_empty(), "{:?}", checked.findings);
}
