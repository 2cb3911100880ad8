//! Does the hand-off beyond copper and drills say what the board is: job file, netlist, drawing, layers of a multilayer?

use std::fs;
use std::path::Path;

use stripwright::Made;
use stripwright::artwork::{HoleUse, Layer};
use stripwright::base::Nm;
use stripwright::order::{Below, GroundOn, LaunchShape, Order, PlatedEdgeRequest, Side, SlotRequest};
use stripwright::package::{How, put, verify};

use crate::sample;

fn packed(made: &Made, parent: &Path) -> std::path::PathBuf {
    put(&sample::bundle(made), parent, How::default()).unwrap()
}

fn read(folder: &Path, order: &Order, ending: &str) -> Vec<u8> {
    fs::read(folder.join(format!("{}{ending}", order.name))).unwrap()
}

fn holds(bytes: &[u8], part: &[u8]) -> bool {
    bytes.windows(part.len()).any(|window| window == part)
}

fn passes(folder: &Path) {
    let found = verify(folder).unwrap().findings;
    assert!(found.is_empty(), "{found:#?}");
}

/// The fixed columns of IPC-D-356A, on the hand-drawn board: places known by heart.
#[test]
fn netlist_records_stand_in_their_columns() {
    let order = sample::order();
    let parent = tempfile::tempdir().unwrap();
    let folder = packed(&sample::made_by_hand(&order), parent.path());
    let text = String::from_utf8(read(&folder, &order, ".ipc")).unwrap();
    assert!(text.lines().all(|line| line.len() <= 80), "{text}");
    for wanted in [
        "P  UNITS CUST 1",
        "P  IMAGE PRIMARY",
        "327PORT1            J1    -1          A01X+001500Y+014600X2000Y1100     S0",
        "317GND              VIA        MD0300PA00X+003500Y+003500X0600Y0000     S0",
        "367N/C                          D2200UA00X+002500Y+018000X0000Y0000     S3",
        "999",
    ] {
        assert!(text.lines().any(|line| line == wanted), "{wanted}\n{text}");
    }
    // A resonator of 20 mm by 2 mm is probed near both ends, within it.
    let ends: Vec<(f64, f64)> = text
        .lines()
        .filter(|line| line.starts_with("327RES1 "))
        .map(|line| (line[42..49].parse::<f64>().unwrap() / 1e3, line[50..57].parse::<f64>().unwrap() / 1e3))
        .collect();
    assert_eq!(ends.len(), 2, "{text}");
    assert!(
        (ends[0].0 - ends[1].0).abs() > 18.0 && ends.iter().all(|(x, y)| (5.0..=25.0).contains(x) && (9.0..=11.0).contains(y)),
        "{ends:?}"
    );
}

/// A text beyond ASCII as a PDF shows it: hexadecimal digits of Windows code page 1252 (here Latin-1).
fn shown(text: &str) -> Vec<u8> {
    text.chars().map(|c| format!("{:02X}", c as u32)).collect::<String>().into_bytes()
}

/// One gap changed: its call-out and the drawn path change, nothing else is known of it.
#[test]
fn the_drawing_follows_the_board() {
    let order = sample::order();
    let made = sample::made_by_hand(&order);
    let parent = tempfile::tempdir().unwrap();
    let before = read(&packed(&made, parent.path()), &order, "-fabrication.pdf");
    // 3 mm between the hand-drawn resonator and the feed, and what the shop class holds.
    assert!(holds(&before, &shown("gap 3.0000 \u{b1}0.025")));
    let mut other = sample::made_by_hand(&order);
    other.board.callouts[1].from.y = Nm(11_123_400);
    let strip = other.board.layers.get_mut(&Layer::Copper(1)).unwrap().iter_mut().find(|shape| shape.net == "RES1").unwrap();
    strip.outer.iter_mut().filter(|p| p.y == Nm(11_000_000)).for_each(|p| p.y = Nm(11_123_400));
    let folder = tempfile::tempdir().unwrap();
    let after = read(&packed(&other, folder.path()), &order, "-fabrication.pdf");
    assert!(holds(&after, &shown("gap 2.8766 \u{b1}0.025")) && !holds(&after, &shown("gap 3.0000 \u{b1}0.025")));
    let paths =
        |bytes: &[u8]| String::from_utf8_lossy(bytes).lines().filter(|line| line.ends_with(" l")).map(str::to_string).collect::<Vec<_>>();
    assert_ne!(paths(&before), paths(&after));
    // The same board, the same bytes.
    let again = tempfile::tempdir().unwrap();
    assert_eq!(read(&packed(&made, again.path()), &order, "-fabrication.pdf"), before);
}

/// A filter on the top of a multilayer, with slots and a plated edge: every layer, span and stack right, and the package passes.
#[test]
fn four_layers_with_slots_and_a_plated_edge() {
    let mut order = sample::order();
    let below = |thickness_m: f64| Below {
        material: "glass-epoxy core and bond ply".into(),
        permittivity: 4.3,
        thickness_m,
        thickness_tolerance_m: 0.02e-3,
        copper_m: 18e-6,
    };
    order.board.below = vec![below(0.2e-3), below(0.15e-3)];
    order.board.thickness_m = order.stack_thickness_m();
    let slot = |from: f64, plated| SlotRequest { from_m: [from, 3e-3], to_m: [from + 4e-3, 3e-3], width_m: 1.2e-3, plated };
    order.board.slots = vec![slot(20e-3, false), slot(30e-3, true)];
    order.board.plated_edges = vec![PlatedEdgeRequest { side: Side::Top, from_m: 20e-3, to_m: 60e-3 }];
    let made = sample::made(&order);
    let parent = tempfile::tempdir().unwrap();
    let folder = packed(&made, parent.path());
    passes(&folder);
    for ending in ["-copper-l1-top.gbr", "-copper-l2-inner.gbr", "-copper-l3-inner.gbr", "-copper-l4-bottom.gbr"] {
        assert!(folder.join(format!("{}{ending}", order.name)).exists(), "{ending}");
    }
    let job: serde_json::Value = serde_json::from_slice(&read(&folder, &order, ".gbrjob")).unwrap();
    assert_eq!(job["GeneralSpecs"]["LayerNumber"], 4);
    assert_eq!(job["GeneralSpecs"]["EdgePlating"], true);
    let stack: Vec<&str> = job["MaterialStackup"].as_array().unwrap().iter().map(|layer| layer["Type"].as_str().unwrap()).collect();
    assert_eq!(stack, ["Legend", "Copper", "Dielectric", "Copper", "Dielectric", "Copper", "Dielectric", "Copper"]);
    assert!(holds(&read(&folder, &order, "-profile.gbr"), b"Profile,P*"));
    let drill = String::from_utf8(read(&folder, &order, "-plated.drl")).unwrap();
    assert!(
        drill.contains("Plated,1,4,PTH,Mixed") && drill.contains("G00X30.000000Y3.000000\nM15\nG01X34.000000Y3.000000\nM16\n"),
        "{drill}"
    );
    // More vias than the launches' own stitch the planes.
    let plain = sample::made(&sample::order());
    let vias = |made: &Made| made.board.holes.iter().filter(|hole| hole.purpose == HoleUse::Via).count();
    assert!(vias(&made) > vias(&plain) + 20, "{} and {}", vias(&made), vias(&plain));
    // The filter itself does not move.
    assert_eq!(made.board.callouts, plain.board.callouts);
}

/// Copper on the top alone, the board on a metal carrier.
#[test]
fn one_layer_on_a_carrier() {
    let mut order = sample::order();
    order.board.ground = GroundOn::Carrier;
    order.board.launch.shape = LaunchShape::Pads { pad_length_m: 3e-3, pad_width_m: 2e-3 };
    order.board.thickness_m = order.stack_thickness_m();
    let parent = tempfile::tempdir().unwrap();
    let folder = packed(&sample::made(&order), parent.path());
    passes(&folder);
    let note = String::from_utf8(read(&folder, &order, "-fabrication.txt")).unwrap();
    assert!(note.contains("Copper layers           1") && note.contains("metal carrier"), "{note}");
    assert!(!folder.join(format!("{}-plated.drl", order.name)).exists());
}
