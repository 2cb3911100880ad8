//! Every family's starter, as a user meets it: it refines to its target, meets its own requirements, breaks no rule, and its copper is joined as its circuit is.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

use std::collections::BTreeMap;
use std::collections::BTreeSet;

use assert_cmd::Command;
use stripwright::artwork::{Layer, Role};
use stripwright::family::{self, FAMILIES, Family};
use stripwright::layout::{Layout, Part};
use stripwright::order::{self, Order, Source};

fn starter(family: &dyn Family) -> Order {
    let name = format!("{}.toml", family.name());
    order::read(&Source::from_text(&name, family.starter()), &family::keys()).unwrap_or_else(|problems| panic!("{name}: {problems:?}")).0
}

/// What is one conductor in the circuit: nodes joined by strips, steps, corners and junctions; holes join ground. Written without the artwork.
struct Joined {
    parent: Vec<usize>,
}

impl Joined {
    fn of(layout: &Layout) -> Joined {
        let ground = layout.nodes.len();
        let mut joined = Joined { parent: (0..=ground).collect() };
        for placed in &layout.parts {
            let nodes = &placed.nodes;
            match &placed.part {
                Part::Lines { widths, .. } => (0..widths.len()).for_each(|i| joined.join(nodes[i], nodes[i + widths.len()])),
                Part::Step | Part::Bend(_) | Part::Tee | Part::Cross => nodes.windows(2).for_each(|pair| joined.join(pair[0], pair[1])),
                Part::Via { .. } => joined.join(nodes[0], ground),
                Part::Gap { .. } | Part::OpenEnd | Part::Launch { .. } => {}
            }
        }
        joined
    }

    fn root(&self, node: usize) -> usize {
        if self.parent[node] == node { node } else { self.root(self.parent[node]) }
    }

    fn join(&mut self, a: usize, b: usize) {
        let (a, b) = (self.root(a), self.root(b));
        self.parent[a] = b;
    }
}

#[test]
fn every_starter_does_what_it_says() {
    for family in FAMILIES {
        let order = starter(*family);
        let (made, chosen) = stripwright::make(&order).unwrap_or_else(|problems| panic!("{}: {problems:?}", family.name()));
        let name = family.name();
        assert!(chosen.refined.before_snapping.is_met(), "{name}: {:?}", chosen.refined.before_snapping);
        assert!(made.figures.all_met(), "{name}: {:?}", made.figures.verdicts);
        let errors: Vec<_> = made.findings.iter().filter(|problem| problem.is_error()).collect();
        assert!(errors.is_empty(), "{name}: {errors:?}");

        // Nets by geometry (unions of polygons, points in them) against conductors by topology.
        let joined = Joined::of(&made.layout);
        let ground = joined.root(made.layout.nodes.len());
        let used: BTreeSet<usize> =
            made.layout.parts.iter().flat_map(|placed| placed.nodes.iter().map(|node| joined.root(*node))).collect();
        let strips = made.board.layers[&Layer::Copper(1)].iter().filter(|shape| shape.role == Role::Circuit);
        let mut pieces: BTreeMap<&str, usize> = BTreeMap::new();
        strips.for_each(|shape| *pieces.entry(&shape.net).or_default() += 1);
        assert_eq!(pieces.len(), used.len(), "{name}: copper {pieces:?}");
        assert_eq!(pieces.len(), made.board.expected_nets, "{name}");
        for (port, node) in made.board.ports.iter().zip(&made.layout.ports) {
            assert_eq!(port.net == "GND", joined.root(*node) == ground, "{name}: port {} is on {}", port.number, port.net);
        }
        let through = joined.root(made.layout.ports[0]) == joined.root(made.layout.ports[1]);
        assert_eq!(made.board.ports[0].net == made.board.ports[1].net, through, "{name}");
    }
}

#[test]
fn the_package_of_every_starter_passes_its_own_check() {
    for family in FAMILIES {
        let folder = tempfile::tempdir().unwrap();
        let file = folder.path().join("starter.toml");
        std::fs::write(&file, family.starter()).unwrap();
        let name = starter(*family).name;
        let run = |arguments: &[&str]| {
            let output = Command::cargo_bin("stripwright").unwrap().current_dir(folder.path()).args(arguments).output().unwrap();
            let said = String::from_utf8_lossy(&output.stderr).to_string() + &String::from_utf8_lossy(&output.stdout);
            assert_eq!(output.status.code(), Some(0), "{}: {arguments:?}: {said}", family.name());
        };
        run(&["make", "starter.toml"]);
        run(&["check", &format!("out/{name}")]);
    }
}
