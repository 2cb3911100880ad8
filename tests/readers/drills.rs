//! Drill files through a reader of their own: the hole table equals the board's. (In `.ci/run` gerbonara reads them as well.)

use std::collections::BTreeMap;
use std::fs;

use stripwright::package::{How, put};

use crate::sample;

/// Tools and hits of an XNC file as whole nanometres; anything unexpected panics.
fn holes(text: &str) -> Vec<(i64, i64, i64)> {
    let nm = |number: &str| {
        let (whole, part) = number.split_once('.').expect("an explicit decimal point");
        format!("{whole}{part:0<6}").parse::<i64>().unwrap()
    };
    let (head, body) = text.split_once("\n%\n").unwrap();
    assert!(head.starts_with("M48\n") && head.lines().any(|line| line == "METRIC"), "{head}");
    let tools: BTreeMap<&str, i64> = head
        .lines()
        .filter(|line| line.starts_with('T'))
        .map(|line| line.split_once('C').unwrap())
        .map(|(tool, size)| (tool, nm(size)))
        .collect();
    let body = body.strip_prefix("G05\n").unwrap().strip_suffix("M30\n").unwrap();
    let mut tool = 0;
    let mut found = Vec::new();
    for line in body.lines() {
        if line.starts_with('T') {
            tool = tools[line];
        } else {
            let (x, y) = line.strip_prefix('X').unwrap().split_once('Y').unwrap();
            found.push((nm(x), nm(y), tool));
        }
    }
    found.sort_unstable();
    found
}

#[test]
fn the_hole_table_equals_the_boards() {
    let order = sample::order();
    for (made, unplated) in [(sample::made(&order), false), (sample::made_by_hand(&order), true)] {
        let parent = tempfile::tempdir().unwrap();
        let folder = put(&sample::bundle(&made), parent.path(), How::default()).unwrap();
        for plated in [true, false] {
            let path = folder.join(format!("{}-{}.drl", order.name, if plated { "plated" } else { "unplated" }));
            let mut wanted: Vec<_> = made
                .board
                .holes
                .iter()
                .filter(|hole| hole.is_plated() == plated)
                .map(|hole| (hole.at.x.0, hole.at.y.0, hole.diameter.0))
                .collect();
            wanted.sort_unstable();
            if !plated && !unplated {
                assert!(wanted.is_empty() && !path.exists(), "no file without holes");
                continue;
            }
            let text = fs::read_to_string(&path).unwrap();
            assert!(text.contains(if plated { "TF.FileFunction,Plated,1,2,PTH" } else { "TF.FileFunction,NonPlated,1,2,NPTH" }));
            assert_eq!(holes(&text), wanted);
        }
    }
}

#[test]
fn the_note_counts_the_holes() {
    let made = sample::made_by_hand(&sample::order());
    let parent = tempfile::tempdir().unwrap();
    let folder = put(&sample::bundle(&made), parent.path(), How::default()).unwrap();
    let note = fs::read_to_string(folder.join(format!("{}-fabrication.txt", made.dimensions.order.name))).unwrap();
    let row = |symbol: &str| {
        let line = note.lines().find(|line| line.trim_start().starts_with(symbol)).unwrap();
        line.split_whitespace().map(str::to_string).collect::<Vec<_>>()
    };
    // The hand-drawn board: two vias of 0.3 mm, one of 0.4 mm, two mounting holes of 2.2 mm.
    for (symbol, size, plated, count) in [("A ", "0.300", "yes", "2"), ("B ", "0.400", "yes", "1"), ("C ", "2.200", "no", "2")] {
        let cells = row(symbol);
        assert_eq!((&cells[1][..], &cells[3][..], &cells[4][..]), (size, plated, count), "{note}");
    }
    assert!(note.is_ascii() && note.lines().all(|line| line.len() <= 100), "plain and narrow");
    assert_eq!(note.matches("ETCH COMPENSATION").count(), 1);
    // Nothing may be left for later.
    for open in ["TBD", "to be determined", "to be defined", "n/a"] {
        assert!(!note.to_lowercase().contains(&open.to_lowercase()), "{open}");
    }
}
