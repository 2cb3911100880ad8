//! What does the board house see on paper? `<name>-fabrication.pdf`: the board with its dimensions and controlled features, section of the
//! stack, drill table, notes, on A4 or letter. Every number comes from the board and the order.

mod flow;
mod notes;
mod plan;
mod sheet;
mod tables;

use std::io;
use std::io::Write;

use self::sheet::Align;
use self::sheet::Color;
use self::sheet::Font;
use self::sheet::Sheet;
use crate::order::Order;
use crate::order::Paper;
use crate::package::facts;
use crate::package::facts::mm;
use crate::package::job::Job;

const INK: Color = [0.1, 0.13, 0.17];
const FAINT: Color = [0.42, 0.46, 0.5];
const HAIR: Color = [0.72, 0.74, 0.76];
const PAPER: Color = [1.0, 1.0, 1.0];
const LAMINATE: Color = [0.965, 0.95, 0.9];
const COPPER: Color = [0.76, 0.47, 0.25];
const GROUND: Color = [0.9, 0.76, 0.6];
const ACCENT: Color = [0.05, 0.33, 0.5];
const ALARM: Color = [0.75, 0.1, 0.12];

/// Edge of the sheet to its frame.
const MARGIN: f64 = 8.0;
/// Height of the title block.
const TITLE: f64 = 33.0;

/// Size of the sheet, landscape, millimetres.
fn paper(order: &Order) -> [f64; 2] {
    match order.paper {
        Paper::A4 => [297.0, 210.0],
        Paper::Letter => [279.4, 215.9],
    }
}

/// Writes the drawing.
pub fn write(job: &Job, out: &mut dyn Write) -> io::Result<()> {
    let order = job.order();
    let size = paper(order);
    let (first, scale) = plan::draw(job, size);
    let mut sheets = vec![(first, scale)];
    sheets.extend(flow::sheets(job, size).into_iter().map(|sheet| (sheet, "none".to_string())));
    let count = sheets.len();
    let done: Vec<Sheet> = sheets
        .into_iter()
        .enumerate()
        .map(|(index, (mut sheet, scale))| {
            title_block(&mut sheet, job, size, &scale, index + 1, count);
            sheet
        })
        .collect();
    let title = format!("{} revision {}: fabrication drawing", order.name, order.revision);
    out.write_all(&sheet::document(done, size, &title))
}

/// Frame and title block.
fn title_block(sheet: &mut Sheet, job: &Job, size: [f64; 2], scale: &str, number: usize, count: usize) {
    let order = job.order();
    let (left, right) = (MARGIN, size[0] - MARGIN);
    sheet.rectangle([left, MARGIN], [right - left, size[1] - 2.0 * MARGIN], None, Some((0.5, INK)));
    let top = MARGIN + TITLE;
    sheet.line(&[[left, top], [right, top]], 0.5, INK);

    // A wide cell for what it is, then two rows of small ones.
    let split = left + 0.40 * (right - left);
    sheet.line(&[[split, MARGIN], [split, top]], 0.25, INK);
    fitted(sheet, [left + 4.0, top - 9.0], 5.2, Font::Bold, split - left - 8.0, INK, &order.title);
    fitted(sheet, [left + 4.0, top - 15.5], 3.4, Font::Plain, split - left - 8.0, INK, &order.name);
    let what = "Fabrication drawing of the bare board. The Gerber and drill files govern.";
    fitted(sheet, [left + 4.0, top - 20.6], 2.5, Font::Plain, split - left - 8.0, FAINT, what);
    let how = "Dimensions in millimetres after ISO 129; seen from the top; do not scale.";
    fitted(sheet, [left + 4.0, top - 24.4], 2.5, Font::Plain, split - left - 8.0, FAINT, how);
    let by = format!("Made by {} {}.  Questions to {}", env!("CARGO_PKG_NAME"), env!("CARGO_PKG_VERSION"), order.contact);
    fitted(sheet, [left + 4.0, top - 28.2], 2.5, Font::Plain, split - left - 8.0, FAINT, &by);

    let tolerance = format!("\u{b1}{} outline, \u{b1}{} copper", mm(order.board.outline_tolerance_m), mm(order.shop.line_tolerance_m));
    let thickness = format!("{} \u{b1}{} mm", mm(order.board.thickness_m), mm(order.board.thickness_tolerance_m));
    let grain = facts::grain_axis(order).map_or("any, all alike".to_string(), |axis| format!("along {axis}"));
    let date = order.date.clone().unwrap_or_else(|| "not dated".to_string());
    let rows: [[(&str, String, f64); 4]; 3] = [
        [
            ("PART NUMBER", order.part_number.clone(), 0.42),
            ("REVISION", order.revision.clone(), 0.18),
            ("DATE", date, 0.20),
            ("SHEET", format!("{number} of {count}"), 0.20),
        ],
        [
            ("LAMINATE", format!("{}, {} mm", order.laminate.class, mm(order.laminate.thickness_m)), 0.42),
            ("SCALE", scale.to_string(), 0.18),
            ("UNITS", "mm".to_string(), 0.20),
            ("GRAIN", grain, 0.20),
        ],
        [
            ("GENERAL TOLERANCES", tolerance, 0.42),
            ("LAYERS", order.copper_layers().to_string(), 0.18),
            ("THICKNESS", thickness, 0.20),
            ("FINISH", order.laminate.finish.replace('-', " "), 0.20),
        ],
    ];
    let height = TITLE / 3.0;
    for (row, cells) in rows.iter().enumerate() {
        let y = top - height * row as f64;
        if row > 0 {
            sheet.line(&[[split, y], [right, y]], 0.25, INK);
        }
        let mut x = split;
        for (i, (name, value, share)) in cells.iter().enumerate() {
            if i > 0 {
                sheet.line(&[[x, y - height], [x, y]], 0.25, INK);
            }
            let width = share * (right - split);
            sheet.text([x + 2.0, y - 3.6], 1.9, Font::Plain, Align::Left, FAINT, name);
            fitted(sheet, [x + 2.0, y - 8.4], 3.3, Font::Bold, width - 4.0, INK, value);
            x += width;
        }
    }
    if job.breaks_a_rule() {
        let text = "A DESIGN RULE IS BROKEN: quote and build only on written consent";
        sheet.text([0.5 * size[0], size[1] - MARGIN - 6.0], 4.2, Font::Bold, Align::Middle, ALARM, text);
    }
}

/// Text set smaller when it would be wider than its place; below a readable height it is cut, with three dots.
fn fitted(sheet: &mut Sheet, at: [f64; 2], height: f64, font: Font, width: f64, color: Color, text: &str) {
    const LEAST: f64 = 1.9;
    let natural = sheet::text_width(text, height, font);
    let height = if natural > width { (height * width / natural).max(LEAST) } else { height };
    let mut shown = text.to_string();
    while sheet::text_width(&shown, height, font) > width + 0.01 && !shown.is_empty() {
        let kept: String = shown.trim_end_matches("...").chars().collect();
        let kept: String = kept.chars().take(kept.chars().count().saturating_sub(1)).collect();
        if kept.is_empty() {
            break;
        }
        shown = format!("{kept}...");
    }
    sheet.text(at, height, font, Align::Left, color, &shown);
}
