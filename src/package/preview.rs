//! How do board and response look? `preview.svg`: the artwork at a stated scale, the predicted response with its limits, the figures.

use std::fmt::Write as _;
use std::io;
use std::io::Write;

use crate::artwork::Face;
use crate::artwork::Layer;
use crate::artwork::Role;
use crate::artwork::Shape;
use crate::artwork::shape::bounds;
use crate::artwork::slot_area;
use crate::base::Nm;
use crate::base::Point;
use crate::network::Method;
use crate::network::Verdict;
use crate::network::level_db;
use crate::order::Limit;
use crate::package::job::Job;

const PAPER: &str = "#fdfcf8";
const INK: &str = "#22303c";
const FAINT: &str = "#7c8791";
const RULE: &str = "#d8d6cd";
const LAMINATE: &str = "#efe9d6";
const CIRCUIT: &str = "#b4652b";
const GROUND: &str = "#d9a877";
const LEGEND: &str = "#5d6b77";
const THROUGH: &str = "#12608f";
const REFLECTED: &str = "#a8452a";
const MET: &str = "#2f7d4f";
const MISSED: &str = "#c0202c";

/// Narrowest sheet: the plot and its tables want the room.
const LEAST_WIDTH_MM: f64 = 190.0;
const MARGIN_MM: f64 = 12.0;
/// Scales a small board is shown at, and the greatest height it may then take.
const ENLARGED: [f64; 4] = [10.0, 5.0, 4.0, 2.0];
const ENLARGED_HEIGHT_MM: f64 = 90.0;
const PLOT_HEIGHT_MM: f64 = 82.0;
/// Room for the labels of the level axis.
const AXIS_MM: f64 = 12.0;
/// Thickness of the hatched strip on the forbidden side of a limit.
const STRIP_MM: f64 = 2.6;
/// Distance of the hatch's lines along the axis.
const HATCH_MM: f64 = 1.2;
/// The level axis goes down to the deepest limit and this much below it, within its least and greatest.
const BELOW_LIMITS_DB: f64 = 20.0;
const LEAST_DEPTH_DB: f64 = 60.0;
const GREATEST_DEPTH_DB: f64 = 120.0;
/// The plot reaches from this share of the lowest frequency with a requirement to this multiple of the highest.
const SHOWN_AROUND: [f64; 2] = [0.75, 1.35];
/// Points of a curve closer than this on paper are left out.
const POINT_MM: f64 = 0.05;
/// About this many labelled frequencies.
const FREQUENCY_TICKS: f64 = 8.0;

/// Writes the picture.
pub fn write(job: &Job, out: &mut dyn Write) -> io::Result<()> {
    out.write_all(draw(job).as_bytes())
}

/// The picture as text, for other files to hold.
pub fn draw(job: &Job) -> String {
    let (order, board) = (job.order(), job.bundle.board);
    let [low, high] = bounds(board.outline.outer.iter().copied()).unwrap_or_default();
    let board_mm = [(high.x - low.x).mm(), (high.y - low.y).mm()];
    let width = LEAST_WIDTH_MM.max(board_mm[0] + 2.0 * MARGIN_MM + 12.0);
    let right = width - MARGIN_MM;

    let mut svg = Svg::default();
    // A bold letter is about 0.62 of its height wide on average; a long title is set smaller.
    let title_size = number((1.6 * (right - MARGIN_MM) / order.title.chars().count().max(1) as f64).min(5.4), 2).parse().unwrap_or(5.4);
    svg.text(MARGIN_MM, 16.0, title_size, INK, "font-weight=\"600\"", &order.title);
    let part = if order.part_number == order.name { String::new() } else { format!("  \u{b7}  {}", order.part_number) };
    let date = order.date.as_ref().map_or(String::new(), |date| format!("  \u{b7}  {date}"));
    let degree = job.bundle.dimensions.degree;
    let sub = format!("{}  \u{b7}  revision {}{part}{date}  \u{b7}  {}, degree {degree}", order.name, order.revision, order.filter.family);
    svg.text(MARGIN_MM, 22.0, fitting(&sub, right - MARGIN_MM), FAINT, "", &sub);
    let stack = format!(
        "{}: permittivity {}, {} mm dielectric, {} \u{b5}m copper",
        order.laminate.class,
        order.laminate.permittivity,
        number(order.laminate.thickness_m * 1e3, 4),
        number(order.laminate.copper.finished_m() * 1e6, 1)
    );
    svg.text(MARGIN_MM, 26.6, fitting(&stack, right - MARGIN_MM), FAINT, "", &stack);
    svg.line([MARGIN_MM, 30.0], [right, 30.0], RULE, 0.25);

    let artwork_top = 37.0;
    // A small board is enlarged, in steps that a ruler can follow.
    let room = [width - 2.0 * MARGIN_MM - 12.0, ENLARGED_HEIGHT_MM];
    let scale = ENLARGED.into_iter().find(|scale| scale * board_mm[0] <= room[0] && scale * board_mm[1] <= room[1]).unwrap_or(1.0);
    artwork(&mut svg, job, [(width - scale * board_mm[0]) / 2.0, artwork_top], low, board_mm, scale);
    let bar_y = artwork_top + scale * board_mm[1] + 6.5;
    scale_bar(
        &mut svg,
        [right, bar_y],
        scale,
        &format!("{} mm \u{d7} {} mm, top side, finished size, {scale}:1", number(board_mm[0], 3), number(board_mm[1], 3)),
    );

    let plot = Plot::new(job, [MARGIN_MM + AXIS_MM, bar_y + 14.0], [right, bar_y + 14.0 + PLOT_HEIGHT_MM]);
    plot.draw(&mut svg, job);
    let mut y = plot.bottom + 20.0;
    y = figures(&mut svg, job, y, right);
    y = verdicts(&mut svg, job, y, right);
    svg.text(MARGIN_MM, y + 3.0, 2.6, FAINT, "", &method(job));

    let height = y + 10.0;
    format!(
        "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{w}mm\" height=\"{h}mm\" viewBox=\"0 0 {w} {h}\" font-family=\"sans-serif\">\n\
         <title>{title}</title>\n\
         <defs>\n\
         <clipPath id=\"plot\"><rect x=\"{x}\" y=\"{t}\" width=\"{pw}\" height=\"{ph}\"/></clipPath>\n\
         </defs>\n\
         <rect width=\"{w}\" height=\"{h}\" fill=\"{PAPER}\"/>\n{body}</svg>\n",
        w = number(width, 3),
        h = number(height, 3),
        title = escaped(&order.title),
        x = number(plot.left, 3),
        t = number(plot.top, 3),
        pw = number(plot.right - plot.left, 3),
        ph = number(plot.bottom - plot.top, 3),
        body = svg.body
    )
}

fn method(job: &Job) -> String {
    let by = match job.bundle.response.method {
        Method::Network => "circuit model of the drawn parts, with loss and dispersion, nominal board",
        Method::FullWave => "field solution of the drawn copper, nominal board",
    };
    format!("Predicted by the {by}. Made by {} {}.", env!("CARGO_PKG_NAME"), env!("CARGO_PKG_VERSION"))
}

/// A number with at most `digits` decimals, without needless zeros.
fn number(value: f64, digits: usize) -> String {
    let text = format!("{value:.digits$}");
    let text = if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.') } else { &text };
    if text == "-0" { "0".to_string() } else { text.to_string() }
}

fn escaped(text: &str) -> String {
    let kept = text.chars().filter(|c| !c.is_control());
    kept.fold(String::new(), |mut out, c| {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            c => out.push(c),
        }
        out
    })
}

#[derive(Default)]
struct Svg {
    body: String,
}

impl Svg {
    fn add(&mut self, text: std::fmt::Arguments) {
        // Writing to a string cannot fail.
        let _ = self.body.write_fmt(text);
        self.body.push('\n');
    }

    fn text(&mut self, x: f64, y: f64, size: f64, color: &str, more: &str, text: &str) {
        let (x, y, text) = (number(x, 3), number(y, 3), escaped(text));
        self.add(format_args!("<text x=\"{x}\" y=\"{y}\" font-size=\"{size}\" fill=\"{color}\" {more}>{text}</text>"));
    }

    fn line(&mut self, from: [f64; 2], to: [f64; 2], color: &str, width: f64) {
        let [x1, y1, x2, y2] = [from[0], from[1], to[0], to[1]].map(|v| number(v, 3));
        self.add(format_args!("<path d=\"M{x1} {y1}L{x2} {y2}\" stroke=\"{color}\" stroke-width=\"{width}\" fill=\"none\"/>"));
    }

    /// Slanted lines in a box; a missed limit's are heavier, so that it shows in grey print as well.
    fn hatch(&mut self, low: [f64; 2], high: [f64; 2], color: &str, is_met: bool) {
        let (height, width) = (high[1] - low[1], if is_met { 0.22 } else { 0.5 });
        let mut d = String::new();
        let lines = ((high[0] - low[0] + height) / HATCH_MM).floor() as usize;
        for i in 1..=lines {
            // Rises to the right from the lower edge; cut at both ends of the box.
            let foot = low[0] - height + HATCH_MM * i as f64;
            let (x1, x2) = (foot.max(low[0]), (foot + height).min(high[0]));
            let [a, b, c, e] = [x1, high[1] - (x1 - foot), x2, high[1] - (x2 - foot)].map(|v| number(v, 2));
            let _ = write!(d, "M{a} {b}L{c} {e}");
        }
        self.add(format_args!("<path d=\"{d}\" stroke=\"{color}\" stroke-width=\"{width}\" fill=\"none\"/>"));
    }

    fn rectangle(&mut self, x: f64, y: f64, size: [f64; 2], fill: &str, more: &str) {
        let [x, y, w, h] = [x, y, size[0], size[1]].map(|v| number(v, 3));
        self.add(format_args!("<rect x=\"{x}\" y=\"{y}\" width=\"{w}\" height=\"{h}\" fill=\"{fill}\" {more}/>"));
    }
}

/// Size of a line of text that fits the width: a letter is about 0.52 of its height wide on average.
fn fitting(text: &str, width: f64) -> f64 {
    number((1.9 * width / text.chars().count().max(1) as f64).min(3.2), 2).parse().unwrap_or(3.2)
}

fn artwork(svg: &mut Svg, job: &Job, corner: [f64; 2], low: Point, size_mm: [f64; 2], scale: f64) {
    let board = job.bundle.board;
    let size = size_mm.map(|v| scale * v);
    // From board coordinates, y up, to the sheet, y down.
    let at = |p: Point| [corner[0] + scale * (p.x - low.x).mm(), corner[1] + size[1] - scale * (p.y - low.y).mm()];
    let path = |shape: &Shape| {
        let mut d = String::new();
        for ring in std::iter::once(&shape.outer).chain(&shape.voids) {
            for (i, p) in ring.iter().enumerate() {
                let [x, y] = at(*p);
                let _ = write!(d, "{}{} {}", if i == 0 { 'M' } else { 'L' }, number(x, 4), number(y, 4));
            }
            d.push('Z');
        }
        d
    };
    let edge = if board.outline_drawn {
        "stroke=\"#a79f84\" stroke-width=\"0.2\""
    } else {
        "stroke=\"#a79f84\" stroke-width=\"0.2\" stroke-dasharray=\"1.5 1\""
    };
    svg.add(format_args!("<path d=\"{}\" fill=\"{LAMINATE}\" {edge}/>", path(&board.outline)));
    for (layer, shapes) in &board.layers {
        for shape in shapes {
            let color = match (layer, shape.role) {
                (Layer::Copper(1), Role::Ground) => GROUND,
                (Layer::Copper(1), _) => CIRCUIT,
                (Layer::Legend(Face::Top), _) => LEGEND,
                _ => continue,
            };
            svg.add(format_args!("<path d=\"{}\" fill=\"{color}\" fill-rule=\"evenodd\"/>", path(shape)));
        }
    }
    for hole in &board.holes {
        let [x, y] = at(hole.at).map(|v| number(v, 4));
        let radius = number(scale * hole.diameter.mm() / 2.0, 4);
        svg.add(format_args!("<circle cx=\"{x}\" cy=\"{y}\" r=\"{radius}\" fill=\"{PAPER}\" stroke=\"#8c6a45\" stroke-width=\"0.08\"/>"));
    }
    for slot in &board.slots {
        for piece in slot_area(slot, Nm::ZERO).pieces {
            let shape = Shape { outer: piece.outer, voids: piece.voids, role: Role::Opening, net: String::new() };
            svg.add(format_args!("<path d=\"{}\" fill=\"{PAPER}\" stroke=\"#8c6a45\" stroke-width=\"0.12\"/>", path(&shape)));
        }
    }
    for [from, to] in &board.plated_edges {
        svg.line(at(*from), at(*to), CIRCUIT, 0.8);
    }
    // What is no copper and yet decides where copper may lie: areas to keep free, the housing in the middle of the board.
    let order = job.order();
    let mut areas: Vec<([Point; 2], &str)> = Vec::new();
    for area in &order.board.keep_outs {
        areas.push(([Point::from_m(area.from_m[0], area.from_m[1]), Point::from_m(area.to_m[0], area.to_m[1])], "keep out"));
    }
    if let Some(inside) = order.housing.and_then(|housing| housing.inside_m) {
        let half = inside.map(|v| 0.5e3 * v);
        let corner = |sign: f64| Point::from_m(5e-4 * size_mm[0] + 1e-3 * sign * half[0], 5e-4 * size_mm[1] + 1e-3 * sign * half[1]);
        areas.push(([corner(-1.0), corner(1.0)].map(|p| p.shifted(low.x, low.y)), "housing wall"));
    }
    for ([from, to], name) in areas {
        let (a, b) = (at(from), at(to));
        let dashes = "stroke=\"#12608f\" stroke-width=\"0.2\" stroke-dasharray=\"1.2 0.8\"";
        svg.rectangle(a[0], b[1], [b[0] - a[0], a[1] - b[1]], "none", dashes);
        svg.text(a[0] + 0.8, a[1] - 0.8, 1.9, THROUGH, "", name);
    }
    for port in &board.ports {
        let [x, y] = at(port.edge.middle());
        let label = port.number.to_string();
        // The label stands outside the edge the port leaves by.
        let (dx, dy) = (x - corner[0] - size[0] / 2.0, y - corner[1] - size[1] / 2.0);
        let (x, y) = if dx.abs() / size[0] >= dy.abs() / size[1] { (x + 3.6 * dx.signum(), y) } else { (x, y + 3.6 * dy.signum()) };
        let (cx, cy) = (number(x, 3), number(y, 3));
        svg.add(format_args!("<circle cx=\"{cx}\" cy=\"{cy}\" r=\"2\" fill=\"none\" stroke=\"{FAINT}\" stroke-width=\"0.2\"/>"));
        svg.text(x, y + 1.05, 3.0, INK, "text-anchor=\"middle\"", &label);
    }
}

/// Ten millimetres of the board that end at `at` (one where it is much enlarged), and what the picture shows to their left.
fn scale_bar(svg: &mut Svg, at: [f64; 2], scale: f64, caption: &str) {
    let [x, y] = at;
    let (shown, name) = if scale > 5.0 { (scale, "1 mm") } else { (10.0 * scale, "10 mm") };
    for i in 0..2 {
        let fill = if i == 0 { INK } else { PAPER };
        svg.rectangle(
            x - shown + 0.5 * shown * f64::from(i),
            y - 0.6,
            [0.5 * shown, 1.2],
            fill,
            &format!("stroke=\"{INK}\" stroke-width=\"0.15\""),
        );
    }
    svg.text(x - shown - 2.0, y + 1.0, 2.9, INK, "text-anchor=\"end\"", name);
    svg.text(MARGIN_MM, y + 1.0, 2.9, FAINT, "", caption);
}

/// The response over frequency.
struct Plot {
    left: f64,
    top: f64,
    right: f64,
    bottom: f64,
    f_hz: [f64; 2],
    depth_db: f64,
}

impl Plot {
    fn new(job: &Job, [left, top]: [f64; 2], [right, bottom]: [f64; 2]) -> Plot {
        let [first, last] = shown_hz(job);
        let levels = job.bundle.figures.verdicts.iter().filter_map(|verdict| level(job, verdict));
        let deepest = levels.map(|(limit_db, _, _)| -limit_db).fold(0.0, f64::max);
        let depth_db = (10.0 * ((deepest + BELOW_LIMITS_DB) / 10.0).ceil()).clamp(LEAST_DEPTH_DB, GREATEST_DEPTH_DB);
        Plot { left, top, right, bottom, f_hz: [first, last], depth_db }
    }

    fn x(&self, f_hz: f64) -> f64 {
        self.left + (self.right - self.left) * (f_hz - self.f_hz[0]) / (self.f_hz[1] - self.f_hz[0])
    }

    fn y(&self, level_db: f64) -> f64 {
        self.top + (self.bottom - self.top) * (-level_db) / self.depth_db
    }

    fn draw(&self, svg: &mut Svg, job: &Job) {
        self.axes(svg);
        svg.add(format_args!("<g clip-path=\"url(#plot)\">"));
        // Met limits first, so that no missed one is hidden.
        let mut limits: Vec<&Verdict> = job.bundle.figures.verdicts.iter().collect();
        limits.sort_by_key(|verdict| !verdict.is_met());
        for verdict in limits {
            self.limit(svg, job, verdict);
        }
        for (index, color, width) in [(0, REFLECTED, 0.4), (1, THROUGH, 0.6)] {
            let mut d = String::new();
            let mut last: Option<[f64; 2]> = None;
            for (f_hz, s) in job.bundle.response.f_hz.iter().zip(&job.bundle.response.s) {
                // Beyond the axis a point says nothing more, but it must stay finite.
                let level = (-level_db(s[index])).clamp(-2.0 * self.depth_db, 3.0);
                let [x, y] = [self.x(*f_hz), self.y(level)];
                let off = x < self.left - 5.0 || x > self.right + 5.0;
                if off || last.is_some_and(|[lx, ly]| (x - lx).abs() < POINT_MM && (y - ly).abs() < POINT_MM) {
                    continue;
                }
                let _ = write!(d, "{}{} {}", if last.is_none() { 'M' } else { 'L' }, number(x, 2), number(y, 2));
                last = Some([x, y]);
            }
            svg.add(format_args!("<path d=\"{d}\" fill=\"none\" stroke=\"{color}\" stroke-width=\"{width}\" stroke-linejoin=\"round\"/>"));
        }
        svg.add(format_args!("</g>"));
        svg.rectangle(
            self.left,
            self.top,
            [self.right - self.left, self.bottom - self.top],
            "none",
            &format!("stroke=\"{INK}\" stroke-width=\"0.25\""),
        );
        self.key(svg);
    }

    fn axes(&self, svg: &mut Svg) {
        svg.rectangle(self.left, self.top, [self.right - self.left, self.bottom - self.top], "#ffffff", "");
        let step_db = if self.depth_db > 80.0 { 20.0 } else { 10.0 };
        let mut level = 0.0;
        while level <= self.depth_db {
            let y = self.y(-level);
            svg.line([self.left, y], [self.right, y], RULE, 0.18);
            svg.text(self.left - 1.5, y + 1.0, 2.9, INK, "text-anchor=\"end\"", &number(-level, 0));
            level += step_db;
        }
        let span_ghz = (self.f_hz[1] - self.f_hz[0]) * 1e-9;
        let raw = span_ghz / FREQUENCY_TICKS;
        let decade = 10f64.powf(raw.log10().floor());
        let step = decade * [1.0, 2.0, 5.0].into_iter().find(|m| raw <= m * decade).unwrap_or(10.0);
        let digits = (-step.log10().floor()).max(0.0) as usize;
        let first = (self.f_hz[0] * 1e-9 / step - 1e-9).ceil() as i64;
        let last = (self.f_hz[1] * 1e-9 / step + 1e-9).floor() as i64;
        for k in first..=last {
            let f_ghz = k as f64 * step;
            let x = self.x(f_ghz * 1e9);
            svg.line([x, self.top], [x, self.bottom], RULE, 0.18);
            svg.text(x, self.bottom + 4.2, 2.9, INK, "text-anchor=\"middle\"", &format!("{f_ghz:.digits$}"));
        }
        svg.text((self.left + self.right) / 2.0, self.bottom + 9.4, 3.1, INK, "text-anchor=\"middle\"", "frequency in GHz");
        let (x, y) = (number(MARGIN_MM + 1.5, 3), number((self.top + self.bottom) / 2.0, 3));
        let turn = format!("text-anchor=\"middle\" transform=\"rotate(-90 {x} {y})\"");
        svg.text(MARGIN_MM + 1.5, (self.top + self.bottom) / 2.0, 3.1, INK, &turn, "level in dB");
    }

    /// A limit as a line with a hatched strip on its forbidden side, in the color of the curve it binds, the hatch green or red.
    fn limit(&self, svg: &mut Svg, job: &Job, verdict: &Verdict) {
        let Some((level_db, above, color)) = level(job, verdict) else { return };
        let band = verdict.band_hz.map(|f_hz| self.x(f_hz.clamp(self.f_hz[0], self.f_hz[1])));
        if band[1] <= band[0] {
            return;
        }
        let y = self.y(level_db);
        // Above 0 dB there is no room; the strip then shows what is left.
        let strip = if above { [(y - STRIP_MM).max(self.top), y] } else { [y, y + STRIP_MM] };
        let tone = if verdict.is_met() { MET } else { MISSED };
        let veil = if above { [self.top, y] } else { [y, self.bottom] };
        svg.rectangle(band[0], veil[0], [band[1] - band[0], veil[1] - veil[0]], tone, "fill-opacity=\"0.05\"");
        svg.hatch([band[0], strip[0]], [band[1], strip[1]], tone, verdict.is_met());
        svg.line([band[0], y], [band[1], y], color, 0.5);
        if !verdict.is_met() {
            let level_db = self.found(job, verdict, color);
            let x = self.x(verdict.at_hz.clamp(self.f_hz[0], self.f_hz[1]));
            let (x, y) = (number(x, 3), number(self.y(level_db), 3));
            svg.add(format_args!("<circle cx=\"{x}\" cy=\"{y}\" r=\"1.4\" fill=\"none\" stroke=\"{MISSED}\" stroke-width=\"0.5\"/>"));
        }
    }

    /// The level of the bound curve where its limit was missed most.
    fn found(&self, job: &Job, verdict: &Verdict, color: &str) -> f64 {
        let response = job.bundle.response;
        let index = response.f_hz.partition_point(|f_hz| *f_hz < verdict.at_hz).min(response.s.len().saturating_sub(1));
        response.s.get(index).map_or(0.0, |s| -level_db(if color == REFLECTED { s[0] } else { s[1] })).clamp(-self.depth_db, 0.0)
    }

    fn key(&self, svg: &mut Svg) {
        let y = self.top - 3.2;
        let mut x = self.left;
        for (color, width, name) in [(THROUGH, 0.6, "|S21|"), (REFLECTED, 0.4, "|S11|")] {
            svg.line([x, y - 1.0], [x + 7.0, y - 1.0], color, width);
            svg.text(x + 8.5, y, 3.0, INK, "", name);
            x += 22.0;
        }
        for (is_met, tone, name) in [(true, MET, "limit, met"), (false, MISSED, "limit, missed")] {
            svg.hatch([x, y - STRIP_MM], [x + 7.0, y], tone, is_met);
            svg.text(x + 8.5, y, 3.0, INK, "", name);
            x += 30.0;
        }
        svg.text(self.right, y, 2.7, FAINT, "text-anchor=\"end\"", "hatched side of a limit is not allowed");
    }
}

/// The stretch of the response around all requirements; the whole response when there are none.
fn shown_hz(job: &Job) -> [f64; 2] {
    let swept = &job.bundle.response.f_hz;
    let first = swept.first().copied().unwrap_or(0.0);
    let last = swept.last().copied().unwrap_or(0.0);
    let bands = || job.bundle.figures.verdicts.iter().map(|verdict| verdict.band_hz);
    let low = bands().map(|band| band[0]).fold(f64::INFINITY, f64::min);
    let high = bands().map(|band| band[1]).fold(0.0, f64::max);
    let shown = [(SHOWN_AROUND[0] * low).max(first), (SHOWN_AROUND[1] * high).min(last)];
    let shown = if high > 0.0 && shown[1] > shown[0] { shown } else { [first, last] };
    if shown[1] > shown[0] { shown } else { [first, first + 1.0] }
}

/// Where a limit lies on the level axis, whether what is above it is forbidden, and the color of its curve; `None` for limits that are
/// no level.
fn level(job: &Job, verdict: &Verdict) -> Option<(f64, bool, &'static str)> {
    match verdict.limit {
        Limit::InsertionLossAtMost(db) => Some((-db, false, THROUGH)),
        Limit::ReturnLossAtLeast(db) => Some((-db, true, REFLECTED)),
        Limit::RejectionAtLeast { db, below_center: false } => Some((-db, true, THROUGH)),
        Limit::RejectionAtLeast { db, below_center: true } => Some((-db - job.bundle.figures.center_loss_db, true, THROUGH)),
        Limit::RippleAtMost(_) | Limit::GroupDelayVariationAtMost(_) => None,
    }
}

/// The figures in a row of cells; gives the y below them.
fn figures(svg: &mut Svg, job: &Job, y: f64, right: f64) -> f64 {
    let figures = job.bundle.figures;
    let ghz = |f_hz: f64| format!("{} GHz", number(f_hz * 1e-9, 4));
    let none = || "\u{2013}".to_string();
    let cells = [
        ("centre", ghz(figures.center_hz)),
        (
            if figures.edges_3db_hz.len() == 1 { "3 dB edge" } else { "3 dB bandwidth" },
            match figures.edges_3db_hz[..] {
                [a, b] => format!("{} MHz", number((b - a) * 1e-6, 1)),
                [a] => ghz(a),
                _ => none(),
            },
        ),
        ("loss at centre", format!("{:.2} dB", figures.center_loss_db)),
        ("worst in band", format!("{:.2} dB", figures.worst_loss_db)),
        ("return loss", format!("{:.1} dB", figures.return_loss_db)),
        ("delay at centre", format!("{:.2} ns", figures.group_delay_s * 1e9)),
        ("next passband", figures.spurious_hz.map_or_else(none, ghz)),
    ];
    svg.line([MARGIN_MM, y - 5.0], [right, y - 5.0], RULE, 0.25);
    let step = (right - MARGIN_MM) / cells.len() as f64;
    for (i, (name, value)) in cells.iter().enumerate() {
        let x = MARGIN_MM + step * i as f64;
        svg.text(x, y, 2.6, FAINT, "", name);
        svg.text(x, y + 4.6, 3.4, INK, "font-weight=\"600\"", value);
    }
    svg.line([MARGIN_MM, y + 8.5], [right, y + 8.5], RULE, 0.25);
    y + 14.5
}

/// One line for each limit; gives the y below them.
fn verdicts(svg: &mut Svg, job: &Job, mut y: f64, right: f64) -> f64 {
    for verdict in &job.bundle.figures.verdicts {
        let (tone, word) = if verdict.is_met() { (MET, "met") } else { (MISSED, "missed") };
        svg.rectangle(MARGIN_MM, y - 2.5, [2.6, 2.6], tone, "rx=\"0.5\"");
        let band = verdict.band_hz.map(|f_hz| number(f_hz * 1e-9, 4));
        svg.text(MARGIN_MM + 4.6, y, 2.8, INK, "", &format!("{} to {} GHz", band[0], band[1]));
        svg.text(MARGIN_MM + 36.0, y, 2.8, INK, "", &limit_text(verdict.limit));
        let found = format!("found {} at {} GHz", amount(verdict.limit, verdict.found), number(verdict.at_hz * 1e-9, 4));
        svg.text(MARGIN_MM + 92.0, y, 2.8, INK, "", &found);
        let by = format!("{word} by {}", amount(verdict.limit, verdict.margin.abs()));
        svg.text(right, y, 2.8, tone, "text-anchor=\"end\" font-weight=\"600\"", &by);
        y += 5.2;
    }
    y
}

/// A limit in words.
pub(super) fn limit_text(limit: Limit) -> String {
    match limit {
        Limit::InsertionLossAtMost(db) => format!("insertion loss at most {} dB", number(db, 3)),
        Limit::ReturnLossAtLeast(db) => format!("return loss at least {} dB", number(db, 3)),
        Limit::RejectionAtLeast { db, below_center: false } => format!("rejection at least {} dB", number(db, 3)),
        Limit::RejectionAtLeast { db, below_center: true } => format!("rejection at least {} dB below centre", number(db, 3)),
        Limit::RippleAtMost(db) => format!("ripple at most {} dB", number(db, 3)),
        Limit::GroupDelayVariationAtMost(s) => format!("group delay variation at most {} ns", number(s * 1e9, 4)),
    }
}

/// A value in the unit of its limit.
pub(super) fn amount(limit: Limit, value: f64) -> String {
    match limit {
        Limit::GroupDelayVariationAtMost(_) => format!("{:.3} ns", value * 1e9),
        _ => format!("{value:.2} dB"),
    }
}
