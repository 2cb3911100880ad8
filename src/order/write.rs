//! The complete order as a file: every value with its unit, nothing left to a class or default.

use std::fmt::Write;

use super::board::{GRAINS, GROUNDS, MASKS, OUTLINES, SIDES, TEXTS};
use super::laminate::{KINDS, ROUGHNESS_LAWS};
use super::launch::SHAPES;
use super::read::PAPERS;
use super::shop::COMPENSATIONS;
use super::types::{
    Band, BoardRequest, BoardSize, Compensation, Filter, Housing, Laminate, Launch, LaunchShape, Limit, Mask, Order, OwnValue, Requirement,
    ResponseShape, RoughnessLaw, Shop, Side, TextOn,
};
use crate::base::Dimensionality;
use crate::base::format_quantity;

/// Writes an order so that [`super::read`] gives the same order again, without any class file.
pub fn write(order: &Order) -> String {
    write_with_degree(order, None)
}

/// The same, with the degree that was chosen for a dimension set.
pub(crate) fn write_with_degree(order: &Order, degree: Option<usize>) -> String {
    let mut out = Text(String::new());
    out.comment("The order as understood: every value that a class or a default supplied is written out, and listed under [resolved].");
    head(&mut out, order);
    filter(&mut out, &order.filter);
    for requirement in &order.requirements {
        self::requirement(&mut out, requirement);
    }
    laminate(&mut out, &order.laminate);
    shop(&mut out, &order.shop);
    board(&mut out, &order.board);
    launch(&mut out, &order.board.launch);
    if let Some(housing) = &order.housing {
        self::housing(&mut out, housing);
    }
    out.heading("[resolved]");
    out.comment("Not written by the user. A value that you change here should leave this list.");
    if let Some(degree) = degree {
        out.key("degree", degree);
    }
    if order.defaults.is_empty() {
        out.key("defaults", "[]");
    } else {
        let list: String = order.defaults.iter().map(|d| format!("    {},\n", quoted(d))).collect();
        out.key("defaults", format!("[\n{list}]"));
    }
    out.0
}

/// A file being written.
struct Text(String);

impl Text {
    fn heading(&mut self, heading: &str) {
        // Writing to a string cannot fail.
        let _ = write!(self.0, "\n{heading}\n");
    }

    fn comment(&mut self, text: &str) {
        let _ = writeln!(self.0, "# {text}");
    }

    fn key(&mut self, key: &str, value: impl std::fmt::Display) {
        let _ = writeln!(self.0, "{key} = {value}");
    }

    fn text(&mut self, key: &str, value: &str) {
        self.key(key, quoted(value));
    }

    fn mm(&mut self, key: &str, value_m: f64) {
        self.key(key, mm(value_m));
    }

    fn mm_pair(&mut self, key: &str, [a, b]: [f64; 2]) {
        self.key(key, format!("[{}, {}]", mm(a), mm(b)));
    }
}

/// A TOML string.
pub(crate) fn quoted(text: &str) -> String {
    let mut out = String::from("\"");
    for c in text.chars() {
        match c {
            '"' => out.push_str("\\\""),
            '\\' => out.push_str("\\\\"),
            c if c.is_control() => {
                let _ = write!(out, "\\U{:08x}", c as u32);
            }
            c => out.push(c),
        }
    }
    out.push('"');
    out
}

/// A TOML float that reads back to the same bits.
pub(crate) fn plain_number(value: f64) -> String {
    if value.is_nan() {
        "nan".to_string()
    } else if value.is_infinite() {
        if value > 0.0 { "inf" } else { "-inf" }.to_string()
    } else {
        format!("{value:?}")
    }
}

/// A length in millimetres.
fn mm(value_m: f64) -> String {
    quantity(value_m, Dimensionality::Length, "mm")
}

/// Any quantity.
fn quantity(value: f64, kind: Dimensionality, unit: &str) -> String {
    quoted(&format_quantity(value, kind, unit))
}

/// A pair of frequencies.
fn ghz_pair(from_hz: f64, to_hz: f64) -> String {
    let ghz = |hz| quantity(hz, Dimensionality::Frequency, "GHz");
    format!("[{}, {}]", ghz(from_hz), ghz(to_hz))
}

fn head(out: &mut Text, order: &Order) {
    out.heading("[order]");
    out.text("name", &order.name);
    out.text("title", &order.title);
    out.text("part-number", &order.part_number);
    out.text("contact", &order.contact);
    out.key("acceptance-class", order.acceptance_class);
    out.text("paper", PAPERS.iter().find(|p| p.1 == order.paper).map_or("", |p| p.0));
    out.text("revision", &order.revision);
    if let Some(date) = &order.date {
        out.key("date", date);
    }
    if let Some(classes) = &order.classes {
        out.comment("Not needed any more, since every value is below.");
        out.text("classes", classes);
    }
}

fn filter(out: &mut Text, filter: &Filter) {
    out.heading("[filter]");
    out.text("family", &filter.family);
    match filter.response {
        ResponseShape::MaximallyFlat => out.text("response", "maximally-flat"),
        ResponseShape::EqualRipple { ripple_db } => {
            out.text("response", "equal-ripple");
            out.key("ripple", quantity(ripple_db, Dimensionality::Level, "dB"));
            out.comment(&format!("is a return loss of {:.2} dB", filter.response.return_loss_db()));
        }
    }
    match filter.band {
        Band::LowPass { cutoff_hz } => out.key("cutoff", quantity(cutoff_hz, Dimensionality::Frequency, "GHz")),
        Band::HighPass { from_hz, to_hz } | Band::BandPass { from_hz, to_hz } => out.key("passband", ghz_pair(from_hz, to_hz)),
        Band::BandStop { from_hz, to_hz } => out.key("stopband", ghz_pair(from_hz, to_hz)),
    }
    match filter.degree {
        Some(degree) => out.key("degree", degree),
        None => out.comment("degree: the least that meets the requirements"),
    }
    let ohm = |value| quantity(value, Dimensionality::Impedance, "ohm");
    out.key("ports", format!("[{}, {}]", ohm(filter.ports_ohm[0]), ohm(filter.ports_ohm[1])));
    for (key, value) in &filter.own {
        match value {
            OwnValue::Number(value, kind) => {
                let unit = kind.units().first().map_or("", |u| u.0);
                out.key(key, quantity(*value, *kind, unit));
            }
            OwnValue::Flag(flag) => out.key(key, flag),
            OwnValue::Word(word) => out.text(key, word),
        }
    }
}

fn requirement(out: &mut Text, requirement: &Requirement) {
    out.heading("[[requirement]]");
    out.key("band", ghz_pair(requirement.from_hz, requirement.to_hz));
    let db = |value| quantity(value, Dimensionality::Level, "dB");
    for limit in &requirement.limits {
        match *limit {
            Limit::InsertionLossAtMost(value) => out.key("insertion-loss", format!("{{ at-most = {} }}", db(value))),
            Limit::ReturnLossAtLeast(value) => out.key("return-loss", format!("{{ at-least = {} }}", db(value))),
            Limit::RejectionAtLeast { db: value, below_center } => {
                let below = if below_center { ", below-center = true" } else { "" };
                out.key("rejection", format!("{{ at-least = {}{below} }}", db(value)));
            }
            Limit::RippleAtMost(value) => out.key("ripple", format!("{{ at-most = {} }}", db(value))),
            Limit::GroupDelayVariationAtMost(value) => {
                out.key("group-delay-variation", format!("{{ at-most = {} }}", quantity(value, Dimensionality::Time, "ns")));
            }
        }
    }
}

fn laminate(out: &mut Text, laminate: &Laminate) {
    out.heading("[laminate]");
    out.text("class", &laminate.class);
    out.text("about", &laminate.about);
    out.text("kind", KINDS.iter().find(|k| k.1 == laminate.kind).map_or("other", |k| k.0));
    out.key("permittivity", plain_number(laminate.permittivity));
    out.key("permittivity-tolerance", plain_number(laminate.permittivity_tolerance));
    if let Some(in_plane) = laminate.in_plane_permittivity {
        out.key("in-plane-permittivity", plain_number(in_plane));
    }
    out.key("loss-tangent", plain_number(laminate.loss_tangent));
    out.mm("thickness", laminate.thickness_m);
    out.mm("thickness-tolerance", laminate.thickness_tolerance_m);
    let copper = &laminate.copper;
    let um = |value| quantity(value, Dimensionality::CopperThickness, "um");
    let conductivity = quantity(copper.conductivity_s_per_m, Dimensionality::Conductivity, "MS/m");
    let law = match copper.roughness_law {
        RoughnessLaw::HammerstadJensen => quoted(ROUGHNESS_LAWS[0]),
        RoughnessLaw::StackedSpheres { ten_point_height_m } => {
            format!("{}, ten-point-height = {}", quoted(ROUGHNESS_LAWS[1]), um(ten_point_height_m))
        }
    };
    out.key(
        "copper",
        format!(
            "{{ base = {}, plating = {}, roughness = {}, roughness-law = {law}, conductivity = {conductivity} }}",
            um(copper.base_m),
            um(copper.plating_m),
            um(copper.roughness_m)
        ),
    );
    out.text("finish", &laminate.finish);
}

fn shop(out: &mut Text, shop: &Shop) {
    out.heading("[shop]");
    out.text("class", &shop.class);
    out.text("about", &shop.about);
    out.mm("line", shop.line_m);
    out.mm("gap", shop.gap_m);
    out.mm("hole", shop.hole_m);
    out.mm("annular-ring", shop.annular_ring_m);
    out.mm("hole-to-hole", shop.hole_to_hole_m);
    out.mm("edge-clearance", shop.edge_clearance_m);
    out.key("aspect-ratio", plain_number(shop.aspect_ratio));
    out.mm("grid", shop.grid_m);
    out.mm("registration", shop.registration_m);
    out.mm("line-tolerance", shop.line_tolerance_m);
    out.mm("hole-tolerance", shop.hole_tolerance_m);
    out.mm("outline-tolerance", shop.outline_tolerance_m);
    out.mm("text-stroke", shop.text_stroke_m);
    out.mm("text-height", shop.text_height_m);
    out.mm("mask-dam", shop.mask_dam_m);
    out.mm("mask-clearance", shop.mask_clearance_m);
    out.mm("undercut", shop.undercut_m);
    match shop.compensation {
        Compensation::ByTheShop => out.text("compensation", COMPENSATIONS[0]),
        Compensation::InTheArtwork { per_edge_m } => {
            out.text("compensation", COMPENSATIONS[1]);
            out.mm("compensation-per-edge", per_edge_m);
        }
    }
    out.mm_pair("panel", shop.panel_m);
}

fn board(out: &mut Text, board: &BoardRequest) {
    out.heading("[board]");
    out.text("launch", &board.launch.class);
    out.text("mask", MASKS[usize::from(board.mask == Mask::ClearOfFilter)]);
    match board.size {
        BoardSize::Margin(margin) => out.mm("margin", margin),
        BoardSize::Fixed(size) => out.mm_pair("size", size),
    }
    out.mm("thickness", board.thickness_m);
    out.mm("thickness-tolerance", board.thickness_tolerance_m);
    out.mm("outline-tolerance", board.outline_tolerance_m);
    out.text("grain", GRAINS.iter().find(|g| g.1 == board.grain).map_or("", |g| g.0));
    out.text("ground", GROUNDS.iter().find(|g| g.1 == board.ground).map_or("", |g| g.0));
    out.text("outline", OUTLINES[usize::from(!board.outline)]);
    let side = |side: Side| quoted(SIDES.iter().find(|s| s.1 == side).map_or("", |s| s.0));
    out.key("port-side", format!("[{}, {}]", side(board.port_side[0]), side(board.port_side[1])));
    out.mm("port-offset", board.port_offset_m);
    out.key("level", board.level);
    out.text(
        "text",
        TEXTS[match board.text {
            TextOn::Legend => 0,
            TextOn::Copper => 1,
            TextOn::None => 2,
        }],
    );
    for hole in &board.mounting_holes {
        out.heading("[[board.mounting-hole]]");
        out.mm_pair("at", hole.at_m);
        out.mm("diameter", hole.diameter_m);
    }
    for slot in &board.slots {
        out.heading("[[board.slot]]");
        out.mm_pair("from", slot.from_m);
        out.mm_pair("to", slot.to_m);
        out.mm("width", slot.width_m);
        out.key("plated", slot.plated);
    }
    for edge in &board.plated_edges {
        out.heading("[[board.plated-edge]]");
        out.key("side", side(edge.side));
        out.mm("from", edge.from_m);
        out.mm("to", edge.to_m);
    }
    for below in &board.below {
        out.heading("[[board.below]]");
        out.text("material", &below.material);
        out.key("permittivity", plain_number(below.permittivity));
        out.mm("thickness", below.thickness_m);
        out.mm("thickness-tolerance", below.thickness_tolerance_m);
        out.key("copper", quantity(below.copper_m, Dimensionality::CopperThickness, "um"));
    }
    for area in &board.keep_outs {
        out.heading("[[board.keep-out]]");
        out.mm_pair("from", area.from_m);
        out.mm_pair("to", area.to_m);
    }
}

fn launch(out: &mut Text, launch: &Launch) {
    out.heading("[launch]");
    out.comment("The copper of the launch named by board.launch.");
    out.text("about", &launch.about);
    match launch.shape {
        LaunchShape::Open => out.text("shape", SHAPES[0]),
        LaunchShape::Pads { pad_length_m, pad_width_m } => {
            out.text("shape", SHAPES[1]);
            out.mm("pad-length", pad_length_m);
            out.mm("pad-width", pad_width_m);
        }
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
        } => {
            out.text("shape", SHAPES[2]);
            out.mm("pad-length", pad_length_m);
            out.mm("pad-width", pad_width_m);
            out.mm("pull-back", pull_back_m);
            out.mm("ground-gap", ground_gap_m);
            out.mm("ground-length", ground_length_m);
            out.mm("ground-width", ground_width_m);
            out.mm("taper-length", taper_length_m);
            out.mm("via-hole", via_hole_m);
            out.mm("via-pad", via_pad_m);
            out.mm("via-pitch", via_pitch_m);
            out.mm_pair("board-thickness", board_thickness_m);
            out.key("up-to", quantity(up_to_hz, Dimensionality::Frequency, "GHz"));
        }
    }
}

fn housing(out: &mut Text, housing: &Housing) {
    out.heading("[housing]");
    if let Some(lid) = housing.lid_m {
        out.mm("lid", lid);
    }
    if let Some(inside) = housing.inside_m {
        out.mm_pair("inside", inside);
    }
}
