//! The board seen from the top: artwork, outline with dimensions, controlled features called out with their tolerances.

use super::ACCENT;
use super::COPPER;
use super::FAINT;
use super::GROUND;
use super::HAIR;
use super::INK;
use super::LAMINATE;
use super::MARGIN;
use super::PAPER;
use super::TITLE;
use super::sheet::Align;
use super::sheet::Font;
use super::sheet::Sheet;
use super::sheet::text_width;
use crate::artwork::Board;
use crate::artwork::Face;
use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::slot_area;
use crate::base::Nm;
use crate::base::Point;
use crate::package::facts;
use crate::package::facts::Feature;
use crate::package::facts::mm;
use crate::package::job::Job;

/// Scales a drawing may have, largest first.
const SCALES: [(f64, &str); 12] = [
    (20.0, "20:1"),
    (10.0, "10:1"),
    (5.0, "5:1"),
    (4.0, "4:1"),
    (3.0, "3:1"),
    (2.0, "2:1"),
    (1.0, "1:1"),
    (0.5, "1:2"),
    (1.0 / 3.0, "1:3"),
    (0.25, "1:4"),
    (0.2, "1:5"),
    (0.1, "1:10"),
];
/// Room beside the board for dimensions, and above and below it for call-outs.
const BESIDE: f64 = 27.0;
const ABOVE: f64 = 37.0;
const BELOW: f64 = 47.0;
/// Call-outs stand at least this far apart, and at the least of all when there are many.
const APART: [f64; 2] = [7.0, 4.2];
const BALLOON: f64 = 2.3;
/// Points of a ring closer than this on paper are left out.
const POINT: f64 = 0.01;
const ARROW: [f64; 2] = [2.2, 0.7];

struct View<'a> {
    board: &'a Board,
    corner: [f64; 2],
    scale: f64,
}

impl View<'_> {
    fn at(&self, p: Point) -> [f64; 2] {
        [self.corner[0] + self.scale * p.x.mm(), self.corner[1] + self.scale * p.y.mm()]
    }

    fn ring(&self, ring: &[Point]) -> Vec<[f64; 2]> {
        let mut points: Vec<[f64; 2]> = Vec::with_capacity(ring.len());
        for &p in ring {
            let at = self.at(p);
            if points.last().is_none_or(|last: &[f64; 2]| (last[0] - at[0]).hypot(last[1] - at[1]) >= POINT) {
                points.push(at);
            }
        }
        points
    }
}

/// The sheet, and its scale in words.
pub(super) fn draw(job: &Job, size: [f64; 2]) -> (Sheet, String) {
    let board = job.bundle.board;
    let mut sheet = Sheet::new();
    let [x, y] = facts::size(board).map(Nm::mm);
    let (low, high) = ([MARGIN, MARGIN + TITLE], [size[0] - MARGIN, size[1] - MARGIN]);
    let room = [high[0] - low[0] - 2.0 * BESIDE, high[1] - low[1] - ABOVE - BELOW];
    let fits = |scale: f64| scale * x <= room[0] && scale * y <= room[1];
    let (scale, name) = SCALES.into_iter().find(|(scale, _)| fits(*scale)).unwrap_or_else(|| {
        // A board larger than all of them: the sheet is filled, and the scale says so.
        ((room[0] / x).min(room[1] / y), "to fit, see bar")
    });
    let corner = [0.5 * (low[0] + high[0] - scale * x), low[1] + BELOW + 0.5 * (room[1] - scale * y)];
    let view = View { board, corner, scale };
    artwork(&mut sheet, &view, job);
    dimensions(&mut sheet, &view, job);
    let bounds = [corner[1], corner[1] + scale * y];
    call_outs(&mut sheet, &view, job, [low[0] + 8.0, high[0] - 8.0], bounds);
    legend(&mut sheet, job, low, high, scale, name);
    (sheet, name.to_string())
}

fn artwork(sheet: &mut Sheet, view: &View, job: &Job) {
    let board = view.board;
    sheet.area(&[view.ring(&board.outline.outer)], LAMINATE, None);
    for layer in [Layer::Copper(1), Layer::Legend(Face::Top)] {
        for shape in board.layers.get(&layer).into_iter().flatten() {
            let color = match (layer, shape.role) {
                (Layer::Legend(_), _) => HAIR,
                (_, Role::Ground) => GROUND,
                _ => COPPER,
            };
            let rings: Vec<_> = std::iter::once(&shape.outer).chain(&shape.voids).map(|ring| view.ring(ring)).collect();
            sheet.area(&rings, color, None);
        }
    }
    for slot in &board.slots {
        for piece in slot_area(slot, Nm::ZERO).pieces {
            sheet.area(&[view.ring(&piece.outer)], PAPER, Some((0.25, INK)));
        }
    }
    for hole in &board.holes {
        sheet.circle(view.at(hole.at), 0.5 * view.scale * hole.diameter.mm(), PAPER, Some((0.18, INK)));
    }
    let mut edge = view.ring(&board.outline.outer);
    edge.extend(edge.first().copied());
    if board.outline_drawn {
        sheet.line(&edge, 0.5, INK);
    } else {
        sheet.dashed(&edge, 0.35, INK, [3.0, 1.5]);
    }
    for [from, to] in &board.plated_edges {
        sheet.line(&[view.at(*from), view.at(*to)], 1.4, COPPER);
    }
    for area in &job.order().board.keep_outs {
        let corners = [Point::from_m(area.from_m[0], area.from_m[1]), Point::from_m(area.to_m[0], area.to_m[1])].map(|p| view.at(p));
        let ring = [corners[0], [corners[1][0], corners[0][1]], corners[1], [corners[0][0], corners[1][1]], corners[0]];
        sheet.dashed(&ring, 0.25, ACCENT, [1.6, 1.0]);
        sheet.text([corners[0][0] + 1.0, corners[0][1] + 1.2], 1.9, Font::Plain, Align::Left, ACCENT, "keep out");
    }
    // The housing stands in the middle of the board.
    if let Some(inside) = job.order().housing.and_then(|housing| housing.inside_m) {
        let [x, y] = facts::size(board).map(Nm::mm);
        let half = inside.map(|v| 0.5 * v * 1e3);
        let at = |sx: f64, sy: f64| {
            [view.corner[0] + view.scale * (0.5 * x + sx * half[0]), view.corner[1] + view.scale * (0.5 * y + sy * half[1])]
        };
        let ring = [at(-1.0, -1.0), at(1.0, -1.0), at(1.0, 1.0), at(-1.0, 1.0), at(-1.0, -1.0)];
        sheet.dashed(&ring, 0.25, ACCENT, [4.0, 1.0]);
        let text = format!("housing inside {} x {}", mm(inside[0]), mm(inside[1]));
        sheet.text([at(-1.0, -1.0)[0] + 1.0, at(-1.0, -1.0)[1] + 1.2], 1.9, Font::Plain, Align::Left, ACCENT, &text);
    }
    // The letter of each kind of hole, at the one nearest to the middle of the board's lower edge, where there is most room beside it.
    for kind in facts::hole_kinds(board) {
        let inside = 0.5 * view.scale * kind.diameter.mm();
        if inside >= 2.0 {
            for &at in &kind.at {
                let [x, y] = view.at(at);
                sheet.text([x, y - 0.9], 2.6, Font::Bold, Align::Middle, INK, &kind.symbol);
            }
        } else if let Some(&at) = kind.at.iter().min_by_key(|at| (at.y, at.x)) {
            let [x, y] = view.at(at);
            // Towards the middle of the board, so that no label runs into the dimensions beside it.
            let [right, _] = view.at(Point { x: facts::size(board)[0], y: Nm::ZERO });
            let way = if x > 0.5 * (view.corner[0] + right) { -1.0 } else { 1.0 };
            let foot = [x + way * inside * 0.7, y - inside * 0.7];
            let knee = [foot[0] + way * 3.0, foot[1] - 3.0];
            sheet.line(&[foot, knee, [knee[0] + way * 1.5, knee[1]]], 0.18, INK);
            let text = format!("{} ({} x)", kind.symbol, kind.at.len());
            let wide = text_width(&text, 2.4, Font::Bold);
            let left = if way > 0.0 { knee[0] + 2.0 } else { knee[0] - 2.0 - wide };
            sheet.rectangle([left - 0.5, knee[1] - 1.4], [wide + 1.0, 3.0], Some(PAPER), None);
            sheet.text([left, knee[1] - 0.8], 2.4, Font::Bold, Align::Left, INK, &text);
        }
    }
}

fn arrow(sheet: &mut Sheet, tip: [f64; 2], way: [f64; 2]) {
    let base = [tip[0] - way[0] * ARROW[0], tip[1] - way[1] * ARROW[0]];
    let side = [-way[1] * 0.5 * ARROW[1], way[0] * 0.5 * ARROW[1]];
    sheet.area(&[vec![tip, [base[0] + side[0], base[1] + side[1]], [base[0] - side[0], base[1] - side[1]]]], INK, None);
}

/// A dimension between two places along x (or y), its line at `line`, its extension lines from `from`.
fn dimension(sheet: &mut Sheet, ends: [f64; 2], from: f64, line: f64, vertical: bool, text: &str) {
    let place = |along: f64, across: f64| if vertical { [across, along] } else { [along, across] };
    let beyond = line + 1.2 * (line - from).signum();
    for end in ends {
        sheet.line(&[place(end, from + 0.8 * (line - from).signum()), place(end, beyond)], 0.13, INK);
    }
    sheet.line(&[place(ends[0], line), place(ends[1], line)], 0.18, INK);
    let long = ends[1] - ends[0] > 3.0 * ARROW[0];
    let out = if long { 1.0 } else { -1.0 };
    arrow(sheet, place(ends[0], line), place(-out, 0.0));
    arrow(sheet, place(ends[1], line), place(out, 0.0));
    let middle = 0.5 * (ends[0] + ends[1]);
    let height = 2.8;
    if vertical {
        sheet.upright([line - 1.0, middle], height, Font::Plain, Align::Middle, INK, text);
    } else {
        sheet.text([middle, line + 1.0], height, Font::Plain, Align::Middle, INK, text);
    }
}

fn dimensions(sheet: &mut Sheet, view: &View, job: &Job) {
    let (order, board) = (job.order(), view.board);
    let [x, y] = facts::size(board);
    let [left, bottom] = view.corner;
    let [right, top] = view.at(Point { x, y });
    let tolerance = if board.outline_drawn { format!(" \u{b1}{}", mm(order.board.outline_tolerance_m)) } else { String::new() };
    dimension(sheet, [left, right], bottom, bottom - 40.0, false, &format!("{}{tolerance}", mm(x.m())));
    dimension(sheet, [bottom, top], left, left - 21.0, true, &format!("{}{tolerance}", mm(y.m())));
    // Where the ports leave, from the nearer reference edge through the origin.
    for port in &board.ports {
        let at = port.edge.middle();
        let [px, py] = view.at(at);
        let (dx, dy) = (px - 0.5 * (left + right), py - 0.5 * (bottom + top));
        let sideways = dx.abs() * (top - bottom) >= dy.abs() * (right - left);
        let label = if sideways {
            let line = if dx < 0.0 { left - 12.0 } else { right + 14.0 };
            let from = if dx < 0.0 { left } else { right };
            dimension(sheet, [bottom, py], from, line, true, &format!("{:.3}", at.y.mm()));
            [if dx < 0.0 { left - 5.0 } else { right + 5.0 }, py]
        } else {
            [px, if dy < 0.0 { bottom - 5.0 } else { top + 5.0 }]
        };
        sheet.circle(label, 2.4, PAPER, Some((0.25, INK)));
        sheet.text([label[0], label[1] - 1.0], 2.8, Font::Bold, Align::Middle, INK, &port.number.to_string());
    }
    // The origin.
    sheet.circle([left, bottom], 0.9, PAPER, Some((0.25, ACCENT)));
    sheet.line(&[[left - 2.0, bottom], [left + 2.0, bottom]], 0.25, ACCENT);
    sheet.line(&[[left, bottom - 2.0], [left, bottom + 2.0]], 0.25, ACCENT);
    sheet.text([left - 2.0, bottom - 4.2], 2.2, Font::Plain, Align::Right, ACCENT, "origin 0, 0");
}

/// Every controlled feature with number, kind, nominal and tolerance, on leaders above and below the board.
fn call_outs(sheet: &mut Sheet, view: &View, job: &Job, across: [f64; 2], [bottom, top]: [f64; 2]) {
    let features = facts::features(view.board);
    let most = 2 * ((across[1] - across[0]) / APART[1]) as usize;
    // Where there are too many, gaps and widths come first: lengths are in the table as well.
    let mut shown: Vec<&Feature> = features.iter().collect();
    if shown.len() > most {
        shown.sort_by_key(|feature| (feature.kind == "length" || feature.kind == "size", feature.number));
        shown.truncate(most);
    }
    shown.sort_by_key(|feature| (feature.at.x, feature.at.y, feature.number));
    let tolerance = mm(job.order().shop.line_tolerance_m);
    for above in [true, false] {
        let row: Vec<&&Feature> = shown.iter().enumerate().filter(|(i, _)| (i % 2 == 0) == above).map(|(_, feature)| feature).collect();
        let apart = ((across[1] - across[0]) / row.len().max(1) as f64).clamp(APART[1], APART[0]);
        let wanted: Vec<f64> = row.iter().map(|feature| view.at(feature.at)[0]).collect();
        let places = spread(&wanted, apart, across);
        for (feature, x) in row.iter().zip(places) {
            let at = view.at(feature.at);
            let outwards = if above { 1.0 } else { -1.0 };
            let edge = if above { top } else { bottom };
            let (knee, centre) = (edge + 4.0 * outwards, edge + (8.0 + BALLOON) * outwards);
            sheet.line(&[at, [at[0], knee], [x, centre - BALLOON * outwards]], 0.13, ACCENT);
            sheet.circle(at, 0.42, ACCENT, None);
            sheet.circle([x, centre], BALLOON, PAPER, Some((0.22, ACCENT)));
            sheet.text([x, centre - 0.85], 2.4, Font::Bold, Align::Middle, ACCENT, &feature.number.to_string());
            let text = format!("{} {:.4} \u{b1}{tolerance}", feature.kind, feature.nominal_m * 1e3);
            let align = if above { Align::Left } else { Align::Right };
            sheet.upright([x + 0.8, centre + (BALLOON + 1.2) * outwards], 2.3, Font::Plain, align, INK, &text);
        }
    }
}

/// Places near the wanted ones (sorted), at least `apart` from each other, within the row where it is long enough.
fn spread(wanted: &[f64], apart: f64, [from, to]: [f64; 2]) -> Vec<f64> {
    // Groups of neighbours that touch share one shift: the mean of what each wants.
    let mut groups: Vec<(f64, usize)> = Vec::new();
    for &x in wanted {
        let mut group = (x.clamp(from, to), 1);
        while let Some(&(centre, count)) = groups.last() {
            let touching = centre + 0.5 * apart * (count + group.1) as f64 > group.0;
            if !touching {
                break;
            }
            groups.pop();
            let total = (count + group.1) as f64;
            group = ((centre * count as f64 + group.0 * group.1 as f64) / total, count + group.1);
            let half = 0.5 * apart * (group.1 - 1) as f64;
            group.0 = group.0.max(from + half).min((to - half).max(from + half));
        }
        groups.push(group);
    }
    groups.into_iter().flat_map(|(centre, count)| (0..count).map(move |i| centre + apart * (i as f64 - 0.5 * (count - 1) as f64))).collect()
}

/// What the view is, its bar, the grain, the area to leave alone.
fn legend(sheet: &mut Sheet, job: &Job, low: [f64; 2], high: [f64; 2], scale: f64, name: &str) {
    let order = job.order();
    sheet.text([low[0] + 4.0, high[1] - 6.0], 3.0, Font::Bold, Align::Left, INK, "COPPER 1, SEEN FROM THE TOP");
    let under = format!("scale {name}, finished size; numbers in circles: controlled features, see table");
    let wide = 6.0 + text_width("COPPER 1, SEEN FROM THE TOP", 3.0, Font::Bold);
    sheet.text([low[0] + 4.0 + wide, high[1] - 6.0], 2.4, Font::Plain, Align::Left, FAINT, &under);
    // A bar of ten millimetres, or of one or a hundred where that is out of proportion.
    let long = [10.0, 1.0, 100.0].into_iter().find(|mm| (6.0..=70.0).contains(&(mm * scale))).unwrap_or(10.0);
    let (x, y) = (high[0] - 6.0 - long * scale, low[1] + 4.0);
    sheet.rectangle([x, y], [0.5 * long * scale, 1.2], Some(INK), Some((0.15, INK)));
    sheet.rectangle([x + 0.5 * long * scale, y], [0.5 * long * scale, 1.2], Some(PAPER), Some((0.15, INK)));
    sheet.text([x - 1.5, y], 2.4, Font::Plain, Align::Right, INK, &format!("{long} mm"));
    let mut x = low[0] + 6.0;
    if let Some(axis) = facts::grain_axis(order) {
        let ends = if axis == 'x' { [[x, y + 0.6], [x + 14.0, y + 0.6]] } else { [[x + 3.0, y - 2.0], [x + 3.0, y + 10.0]] };
        sheet.line(&ends, 0.35, INK);
        let way = if axis == 'x' { [1.0, 0.0] } else { [0.0, 1.0] };
        arrow(sheet, ends[1], way);
        arrow(sheet, ends[0], [-way[0], -way[1]]);
        x += if axis == 'x' { 17.0 } else { 8.0 };
        sheet.text([x, y - 0.2], 2.4, Font::Plain, Align::Left, INK, &format!("grain along {axis}"));
        x += 26.0;
    }
    for (color, text) in [(COPPER, "filter copper"), (GROUND, "ground copper")] {
        sheet.rectangle([x, y - 0.6], [5.0, 2.6], Some(color), None);
        sheet.text([x + 6.5, y - 0.2], 2.4, Font::Plain, Align::Left, INK, text);
        x += 32.0;
    }
}
