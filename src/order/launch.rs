//! The keys of a launch, in the order and in a class file.

use super::table::{Size, Table};
use super::types::{Launch, LaunchShape};
use crate::base::Dimensionality;

const COPPER: Size = Size::length(0.05, 50.0, "3 mm");
const CLEAR: Size = Size::length(0.0, 20.0, "0.3 mm");
const BOARD: Size = Size::length(0.01, 25.0, "1.6 mm");
const UP_TO: Size = Size { kind: Dimensionality::Frequency, unit: "GHz", least: 1e6, greatest: 1e12, usual: "18 GHz" };

/// The words of `shape`.
pub const SHAPES: &[&str] = &["open", "pads", "edge-coax"];

/// Reads the launch's keys; what is not there comes from `class`, and is missing without one (or with one of another shape).
pub fn read(t: &Table<'_>, name: &str, class: Option<&Launch>) -> Option<Launch> {
    let about = t.resolve("about", "\"one line\"", class.map(|c| c.about.clone()), |t, k| t.line(k, 200));
    let shape_of_class = class.map(|c| match c.shape {
        LaunchShape::Open => 0,
        LaunchShape::Pads { .. } => 1,
        LaunchShape::EdgeCoax { .. } => 2,
    });
    let shape = t.resolve("shape", "\"edge-coax\"", shape_of_class, |t, k| t.word(k, SHAPES));
    let shape = match shape? {
        0 => Some(LaunchShape::Open),
        1 => pads(t, class.map(|c| &c.shape)),
        _ => edge_coax(t, class.map(|c| &c.shape)),
    };
    Some(Launch { class: name.to_string(), about: about?, shape: shape? })
}

/// A plain signal pad.
fn pads(t: &Table<'_>, class: Option<&LaunchShape>) -> Option<LaunchShape> {
    let of_class = match class {
        Some(LaunchShape::Pads { pad_length_m, pad_width_m }) => Some((*pad_length_m, *pad_width_m)),
        _ => None,
    };
    let pad_length_m = t.size("pad-length", &COPPER, of_class.map(|c| c.0));
    let pad_width_m = t.size("pad-width", &COPPER, of_class.map(|c| c.1));
    Some(LaunchShape::Pads { pad_length_m: pad_length_m?, pad_width_m: pad_width_m? })
}

/// An edge-mounted coaxial connector.
fn edge_coax(t: &Table<'_>, class: Option<&LaunchShape>) -> Option<LaunchShape> {
    /// Lengths in the order of the keys below.
    const KEYS: [(&str, &Size); 10] = [
        ("pad-length", &COPPER),
        ("pad-width", &COPPER),
        ("pull-back", &CLEAR),
        ("ground-gap", &CLEAR),
        ("ground-length", &COPPER),
        ("ground-width", &COPPER),
        ("taper-length", &CLEAR),
        ("via-hole", &COPPER),
        ("via-pad", &COPPER),
        ("via-pitch", &COPPER),
    ];
    let of_class = class.and_then(|shape| match *shape {
        LaunchShape::EdgeCoax {
            pad_length_m,
            pad_width_m,
            pull_back_m,
            ground_gap_m,
            ground_length_m,
            ground_width_m,
            taper_length_m,
            via_hole_m,
            via_pad_m,
            via_pitch_m,
            board_thickness_m,
            up_to_hz,
        } => Some((
            [
                pad_length_m,
                pad_width_m,
                pull_back_m,
                ground_gap_m,
                ground_length_m,
                ground_width_m,
                taper_length_m,
                via_hole_m,
                via_pad_m,
                via_pitch_m,
            ],
            board_thickness_m,
            up_to_hz,
        )),
        LaunchShape::Open | LaunchShape::Pads { .. } => None,
    });
    let mut lengths = [None; 10];
    for (i, (slot, (key, limits))) in lengths.iter_mut().zip(KEYS).enumerate() {
        *slot = t.size(key, limits, of_class.and_then(|c| c.0.get(i).copied()));
    }
    let board = t.resolve("board-thickness", "[\"0.7 mm\", \"1.7 mm\"]", of_class.map(|c| c.1), |t, k| t.quantities(k, &BOARD));
    let up_to = t.size("up-to", &UP_TO, of_class.map(|c| c.2));
    let [length, width, back, gap, ground_length, ground_width, taper, hole, pad, pitch] = lengths;
    if let Some([least, greatest]) = board
        && least >= greatest
    {
        t.error(
            "edges-reversed",
            "board-thickness",
            format!("board-thickness runs from {} to {}; due are the least and the greatest", BOARD.show(least), BOARD.show(greatest)),
            format!("write board-thickness = [\"{}\", \"{}\"]", BOARD.show(greatest), BOARD.show(least)),
        );
    }
    let must_exceed = |(key, value): (&'static str, Option<f64>), (than, limit): (&str, Option<f64>)| {
        if let (Some(value), Some(limit)) = (value, limit)
            && value <= limit
        {
            t.error(
                "sizes-contradict",
                key,
                format!("{key} is {}; it must be more than {than}, {}", COPPER.show(value), COPPER.show(limit)),
                format!("for example {key} = \"{}\"", COPPER.show(limit * 2.0)),
            );
        }
    };
    must_exceed(("via-pad", pad), ("via-hole", hole));
    must_exceed(("via-pitch", pitch), ("via-hole", hole));
    must_exceed(("pad-length", length), ("pull-back", back));
    Some(LaunchShape::EdgeCoax {
        pad_length_m: length?,
        pad_width_m: width?,
        pull_back_m: back?,
        ground_gap_m: gap?,
        ground_length_m: ground_length?,
        ground_width_m: ground_width?,
        taper_length_m: taper?,
        via_hole_m: hole?,
        via_pad_m: pad?,
        via_pitch_m: pitch?,
        board_thickness_m: board?,
        up_to_hz: up_to?,
    })
}
