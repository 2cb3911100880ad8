//! The commands that need no filter: `new`, `list`, `completions`.

use assert_cmd::Command;

/// The program, to be run in `folder`.
fn stripwright(folder: &std::path::Path) -> Command {
    let mut command = Command::cargo_bin("stripwright").unwrap();
    command.current_dir(folder);
    command
}

/// Exit code, stdout and stderr of a run.
fn run(arguments: &[&str]) -> (i32, String, String) {
    let output = stripwright(&std::env::temp_dir()).args(arguments).output().unwrap();
    (output.status.code().unwrap(), String::from_utf8(output.stdout).unwrap(), String::from_utf8(output.stderr).unwrap())
}

#[test]
fn new_writes_the_starter_and_leaves_a_file_alone() {
    let folder = tempfile::tempdir().unwrap();
    let new = |file: &str| stripwright(folder.path()).args(["new", "edge-coupled", file]).output().unwrap();
    assert_eq!(new("mine.toml").status.code(), Some(0));
    assert_eq!(std::fs::read_to_string(folder.path().join("mine.toml")).unwrap(), crate::STARTER);
    std::fs::write(folder.path().join("mine.toml"), "mine").unwrap();
    let again = new("mine.toml");
    assert_eq!(again.status.code(), Some(2));
    assert!(String::from_utf8_lossy(&again.stderr).contains("mine.toml is there already"));
    assert_eq!(std::fs::read_to_string(folder.path().join("mine.toml")).unwrap(), "mine");
    assert_eq!(new("no-such-folder/mine.toml").status.code(), Some(2));
}

#[test]
fn new_without_a_file_writes_to_stdout() {
    assert_eq!(run(&["new", "edge-coupled"]), (0, crate::STARTER.to_string(), String::new()));
    let (code, stdout, stderr) = run(&["new", "edge-coupeld"]);
    assert_eq!((code, stdout.as_str()), (2, ""));
    assert!(stderr.contains("did you mean \"edge-coupled\""), "{stderr}");
}

#[test]
fn list_names_everything_one_line_each_and_as_json() {
    for (kind, least) in [("families", 1), ("laminates", 10), ("shops", 3), ("launches", 4), ("rules", 0)] {
        let (code, stdout, stderr) = run(&["list", kind]);
        assert_eq!((code, stderr.as_str()), (0, ""));
        let names: Vec<_> = stdout.lines().map(|l| l.split_whitespace().next().unwrap().to_string()).collect();
        assert!(names.len() >= least, "{kind}: {stdout}");
        let (code, json, _) = run(&["list", kind, "--json"]);
        assert_eq!(code, 0);
        let objects: Vec<serde_json::Value> = serde_json::from_str(&json).unwrap();
        let in_json: Vec<_> = objects.iter().map(|o| o["name"].as_str().unwrap().to_string()).collect();
        assert_eq!(names, in_json, "{kind}");
    }
}

#[test]
fn every_family_has_a_starter_order() {
    for family in stripwright::family::FAMILIES {
        assert_eq!(run(&["new", family.name()]).0, 0, "{}", family.name());
    }
}

#[test]
fn completions_and_wrong_arguments() {
    for shell in ["bash", "zsh", "fish"] {
        let (code, stdout, _) = run(&["completions", shell]);
        assert_eq!(code, 0);
        assert!(stdout.contains("stripwright") && stdout.contains("list"), "{shell}");
    }
    let (code, stdout, stderr) = run(&["lits", "families"]);
    assert_eq!((code, stdout.as_str()), (2, ""));
    assert!(stderr.contains("list"), "{stderr}");
}

#[test]
fn problems_on_a_pipe_carry_no_colour_and_as_json_are_objects() {
    let (_, _, stderr) = run(&["new", "x"]);
    assert!(!stderr.contains('\u{1b}'), "{stderr:?}");
    let (code, _, stderr) = run(&["new", "x", "--json"]);
    assert_eq!(code, 2);
    let problem: serde_json::Value = serde_json::from_str(stderr.lines().next().unwrap()).unwrap();
    assert_eq!(problem["code"], "family-unknown");
    assert_eq!(problem["severity"], "error");
}

#[test]
fn problems_as_json_name_file_line_column_and_key() {
    use stripwright::base::{Place, Problem};
    use stripwright::order::Source;
    let source = Source::from_text("order.toml", "[laminate]\ncopper = { base = \"18 um\" }\n");
    let problem = Problem::error("x", Place::Key("laminate.copper.base".to_string()), "m", "h");
    let json = stripwright::cli::problems::to_json(&problem, Some(&source));
    assert_eq!((&json["file"], &json["line"], &json["column"]), (&"order.toml".into(), &2.into(), &19.into()));
    assert_eq!(json["key"], "laminate.copper.base");
    // A key that is not written is shown at the table around it.
    let problem = Problem::error("x", Place::Key("laminate.copper.plating".to_string()), "m", "h");
    let json = stripwright::cli::problems::to_json(&problem, Some(&source));
    assert_eq!((&json["line"], &json["column"]), (&2.into(), &10.into()));
}
