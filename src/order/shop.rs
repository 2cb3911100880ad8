//! The keys of a board house's limits, in the order and in a class file.

use super::table::{Size, Table};
use super::types::{Compensation, Shop};

/// Lines, gaps, rings, clearances.
const FINE: Size = Size::length(0.001, 10.0, "0.15 mm");
const TOLERANCE: Size = Size::length(0.0, 5.0, "0.02 mm");
const GRID: Size = Size::length(0.000_001, 0.1, "0.001 mm");
const PANEL: Size = Size::length(10.0, 2000.0, "400 mm");
const PER_EDGE: Size = Size::length(0.0001, 0.2, "0.010 mm");

/// The two words of `compensation`.
pub const COMPENSATIONS: &[&str] = &["by the shop", "in the artwork"];

/// Reads the shop's keys; what is not there comes from `class`, and is missing without one.
pub fn read(t: &Table<'_>, name: &str, class: Option<&Shop>) -> Option<Shop> {
    let size = |key, from: fn(&Shop) -> f64, limits: &Size| t.size(key, limits, class.map(from));
    let about = t.resolve("about", "\"one line\"", class.map(|c| c.about.clone()), |t, k| t.line(k, 200));
    let line_m = size("line", |c| c.line_m, &FINE);
    let gap_m = size("gap", |c| c.gap_m, &FINE);
    let hole_m = size("hole", |c| c.hole_m, &FINE);
    let annular_ring_m = size("annular-ring", |c| c.annular_ring_m, &TOLERANCE);
    let hole_to_hole_m = size("hole-to-hole", |c| c.hole_to_hole_m, &FINE);
    let edge_clearance_m = size("edge-clearance", |c| c.edge_clearance_m, &TOLERANCE);
    let aspect_ratio = t.resolve("aspect-ratio", "6.0", class.map(|c| c.aspect_ratio), |t, k| t.number(k, 0.5, 50.0));
    let grid_m = size("grid", |c| c.grid_m, &GRID);
    let registration_m = size("registration", |c| c.registration_m, &TOLERANCE);
    let line_tolerance_m = size("line-tolerance", |c| c.line_tolerance_m, &TOLERANCE);
    let hole_tolerance_m = size("hole-tolerance", |c| c.hole_tolerance_m, &TOLERANCE);
    let outline_tolerance_m = size("outline-tolerance", |c| c.outline_tolerance_m, &TOLERANCE);
    let text_stroke_m = size("text-stroke", |c| c.text_stroke_m, &FINE);
    let text_height_m = size("text-height", |c| c.text_height_m, &FINE);
    let mask_dam_m = size("mask-dam", |c| c.mask_dam_m, &FINE);
    let mask_clearance_m = size("mask-clearance", |c| c.mask_clearance_m, &TOLERANCE);
    let undercut_m = size("undercut", |c| c.undercut_m, &Size::length(0.0, 0.2, "0.010 mm"));
    let compensation = compensation(t, class);
    let panel_m = t.resolve("panel", "[\"400 mm\", \"500 mm\"]", class.map(|c| c.panel_m), |t, k| t.quantities(k, &PANEL));

    smaller(t, ("line-tolerance", line_tolerance_m), ("line", line_m));
    smaller(t, ("hole-tolerance", hole_tolerance_m), ("hole", hole_m));
    smaller(t, ("grid", grid_m), ("line", line_m));
    smaller(t, ("undercut", undercut_m.map(|u| 2.0 * u)), ("line", line_m));
    Some(Shop {
        class: name.to_string(),
        about: about?,
        line_m: line_m?,
        gap_m: gap_m?,
        hole_m: hole_m?,
        annular_ring_m: annular_ring_m?,
        hole_to_hole_m: hole_to_hole_m?,
        edge_clearance_m: edge_clearance_m?,
        aspect_ratio: aspect_ratio?,
        grid_m: grid_m?,
        registration_m: registration_m?,
        line_tolerance_m: line_tolerance_m?,
        hole_tolerance_m: hole_tolerance_m?,
        outline_tolerance_m: outline_tolerance_m?,
        text_stroke_m: text_stroke_m?,
        text_height_m: text_height_m?,
        mask_dam_m: mask_dam_m?,
        mask_clearance_m: mask_clearance_m?,
        undercut_m: undercut_m?,
        compensation: compensation?,
        panel_m: panel_m?,
    })
}

/// Reports a value that must be smaller than another one and is not; the undercut counts on both sides.
fn smaller(t: &Table<'_>, (key, value): (&'static str, Option<f64>), (of, limit): (&'static str, Option<f64>)) {
    let (Some(value), Some(limit)) = (value, limit) else { return };
    if value >= limit {
        let both = if key == "undercut" { " (both sides together)" } else { "" };
        t.error(
            "tolerance-too-large",
            key,
            format!("{key} is {}{both}; allowed: less than {of}, {}", FINE.show(value), FINE.show(limit)),
            format!("write the board house's figure, for example {key} = \"{}\"", FINE.show(limit / 8.0)),
        );
    }
}

/// Who compensates the etch, and by how much.
fn compensation(t: &Table<'_>, class: Option<&Shop>) -> Option<Compensation> {
    const PER_EDGE_KEY: &str = "compensation-per-edge";
    let by_class = class.map(|c| match c.compensation {
        Compensation::ByTheShop => 0,
        Compensation::InTheArtwork { .. } => 1,
    });
    let word = t.resolve("compensation", "\"by the shop\"", by_class, |t, k| t.word(k, COMPENSATIONS));
    let there = t.has(PER_EDGE_KEY);
    match word? {
        0 if there => {
            t.error(
                "keys-exclude-each-other",
                PER_EDGE_KEY,
                "compensation-per-edge is given, but compensation is \"by the shop\"",
                "leave compensation-per-edge out, or write compensation = \"in the artwork\"",
            );
            None
        }
        0 => Some(Compensation::ByTheShop),
        _ => {
            let of_class = class.and_then(|c| match c.compensation {
                Compensation::InTheArtwork { per_edge_m } => Some(per_edge_m),
                Compensation::ByTheShop => None,
            });
            t.size(PER_EDGE_KEY, &PER_EDGE, of_class).map(|per_edge_m| Compensation::InTheArtwork { per_edge_m })
        }
    }
}
