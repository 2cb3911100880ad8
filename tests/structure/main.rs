//! The house as drawn in `DEVELOPERS.md`: who imports whom, and that every list is complete.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::{Path, PathBuf};

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn rust_files(folder: &Path) -> Vec<PathBuf> {
    let mut files = Vec::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            files.extend(rust_files(&path));
        } else if path.extension().is_some_and(|e| e == "rs") {
            files.push(path);
        }
    }
    files.sort();
    files
}

/// The import table of `DEVELOPERS.md`: rows `| room | answers | may import |`.
fn table() -> BTreeMap<String, BTreeSet<String>> {
    let text = fs::read_to_string(root().join("DEVELOPERS.md")).unwrap();
    let rows = text.lines().skip_while(|l| !l.starts_with("| room | answers | may import |")).skip(2).take_while(|l| l.starts_with('|'));
    rows.map(|row| {
        let cells: Vec<&str> = row.trim_matches('|').split('|').map(str::trim).collect();
        let may = cells[2].split(',').map(|s| s.trim().to_string()).filter(|s| s != "-").collect();
        (cells[0].to_string(), may)
    })
    .collect()
}

#[test]
fn rooms_import_only_what_the_table_allows() {
    let (table, mut faults) = (table(), Vec::new());
    assert!(table.len() >= 12, "the table was not found");
    for folder in fs::read_dir(root().join("src")).unwrap().map(|e| e.unwrap().path()).filter(|p| p.is_dir()) {
        let room = folder.file_name().unwrap().to_str().unwrap().to_string();
        let Some(may) = table.get(&room) else {
            faults.push(format!("{room} is not in the table"));
            continue;
        };
        for file in rust_files(&folder) {
            for (number, line) in fs::read_to_string(&file).unwrap().lines().enumerate() {
                for part in line.split("crate::").skip(1) {
                    let other: String = part.chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect();
                    if table.contains_key(&other) && other != room && !may.contains(&other) && !may.contains("everything") {
                        faults.push(format!("{}:{}: {room} imports {other}", file.display(), number + 1));
                    }
                }
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn the_table_has_no_cycles() {
    let table = table();
    let mut done: BTreeSet<String> = BTreeSet::new();
    for _ in 0..table.len() {
        for (room, may) in &table {
            if may.iter().all(|other| done.contains(other) || other == "everything") {
                done.insert(room.clone());
            }
        }
    }
    let left: Vec<_> = table.keys().filter(|room| !done.contains(*room)).collect();
    assert!(left.is_empty(), "these rooms import each other: {left:?}");
}

#[test]
fn outside_crates_have_one_door_each() {
    let doors =
        [("clap::", "src/cli/"), ("gerber_types::", "src/package/"), ("dxf::", "src/package/"), ("i_overlay::", "src/artwork/shape")];
    let mut faults = Vec::new();
    for file in rust_files(&root().join("src")) {
        let name = file.strip_prefix(root()).unwrap().to_str().unwrap().to_string();
        for line in fs::read_to_string(&file).unwrap().lines().filter(|l| l.trim_start().starts_with("use ")) {
            for (krate, door) in doors {
                if line.trim_start().starts_with(&format!("use {krate}")) && !name.starts_with(door) {
                    faults.push(format!("{name} opens a second door to {krate}"));
                }
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn every_family_has_its_starter_its_golden_case_and_its_published_design() {
    for family in stripwright::family::FAMILIES {
        let template = root().join(format!("templates/orders/{}.toml", family.name()));
        assert!(template.exists(), "{} is missing", template.display());
        assert!(root().join(format!("src/family/{}.rs", family.name().replace('-', "_"))).exists());
        let golden = fs::read_dir(root().join("tests/golden"))
            .unwrap()
            .map(|e| e.unwrap().path())
            .filter(|p| p.extension().is_some_and(|e| e == "toml"));
        let named = format!("family = \"{}\"", family.name());
        assert!(golden.into_iter().any(|p| fs::read_to_string(p).unwrap().contains(&named)), "no golden order says {named}");
        let published: String = rust_files(&root().join("tests/synthesis")).iter().map(|file| fs::read_to_string(file).unwrap()).collect();
        assert!(published.contains(&named.replace('"', "\\\"")), "no published design says {named}");
    }
}

#[test]
fn every_rule_file_is_in_the_list_and_says_what_it_finds() {
    let holds_a_rule = |file: &PathBuf| fs::read_to_string(file).unwrap().contains("const RULE: Rule");
    let files = rust_files(&root().join("src/checks")).into_iter().filter(holds_a_rule).count();
    assert_eq!(files, stripwright::checks::RULES.len(), "a rule file is not in RULES, or one stands there twice");
    let mut codes = BTreeSet::new();
    for rule in stripwright::checks::RULES {
        assert!(codes.insert(rule.code) && !rule.about.is_empty() && !rule.source.is_empty(), "{}", rule.code);
    }
}

#[test]
fn top_level_holds_only_what_the_design_allows() {
    let allowed = ["Cargo.toml", "Cargo.lock", "README.md", "DEVELOPERS.md", "src", "tests", "templates", "out", "target"];
    for entry in fs::read_dir(root()).unwrap() {
        let name = entry.unwrap().file_name().into_string().unwrap();
        assert!(
            allowed.contains(&name.as_str()) || name.starts_with('.') || name.starts_with("LICENSE"),
            "{name} does not belong at the top"
        );
    }
}
