//! Does the copper form the nets the filter's family expects?

use std::collections::BTreeMap;

use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::Shape;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "nets-not-as-expected",
    about: "strips joined that should be apart, or apart that should be joined: separate pieces of circuit copper against what the family expects",
    source: "The Gerber Layer Format Specification 2024.05, section 6.8.1: nets follow the copper",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let board = subject.board;
    let strips: Vec<&Shape> = board.layers.get(&Layer::Copper(1)).into_iter().flatten().filter(|s| s.role == Role::Circuit).collect();
    let mut found = Vec::new();
    let mut pieces: BTreeMap<&str, Vec<&Shape>> = BTreeMap::new();
    for strip in &strips {
        pieces.entry(&strip.net).or_default().push(strip);
    }
    if pieces.len() != board.expected_nets {
        // The largest piece is where strips have most likely joined.
        let at = strips.iter().max_by_key(|s| s.outer.len()).and_then(|s| s.outer.first()).copied();
        found.push(Problem::error(
            RULE.code,
            Place::Board(at.unwrap_or_default()),
            format!("the circuit's copper forms {} nets, the family expects {}", pieces.len(), board.expected_nets),
            "strips touch or a strip is broken: look at the width steps and gaps of the dimension set",
        ));
    }
    for (net, pieces) in pieces.iter().filter(|(net, pieces)| **net != "GND" && pieces.len() > 1) {
        let at: Point = pieces[1].outer.first().copied().unwrap_or_default();
        found.push(Problem::error(
            RULE.code,
            Place::Board(at),
            format!("net {net} is in {} pieces", pieces.len()),
            "one net is one piece of copper",
        ));
    }
    for port in board.ports.iter().filter(|port| port.net.is_empty()) {
        found.push(Problem::error(
            RULE.code,
            Place::Board(port.edge.middle()),
            format!("port {} touches no copper", port.number),
            "the launch must reach the feed",
        ));
    }
    found
}
