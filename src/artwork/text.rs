//! What is written on the board and where there is room for it: single-stroke letters turned into outlines.

use std::collections::BTreeMap;

use kurbo::BezPath;
use kurbo::PathEl;
use kurbo::Stroke;
use kurbo::StrokeOpts;
use vector_text_core::Renderer;
use vector_text_hershey::HersheyFont;
use vector_text_hershey::HersheyRenderer;

use crate::artwork::shape::CHORD_ERROR;
use crate::artwork::shape::Region;
use crate::artwork::shape::Ring;
use crate::artwork::shape::bounds;
use crate::base::Nm;
use crate::base::Point;

/// Height of a capital in the font's own units (Hershey's simplex roman).
const CAPITAL_UNITS: f64 = 21.0;
/// Between the lines of a block, as a share of the height.
const LINE_SPACING: f64 = 0.7;

/// A line of text set out: each letter with its place, and the box of the whole.
struct SetLine {
    letters: Vec<(char, Nm)>,
    low: Point,
    high: Point,
}

/// Sets a line whose capitals are `height` high and stand on y = 0. Letters keep a stroke apart.
fn set(text: &str, height: Nm, stroke: Nm) -> SetLine {
    let scale = scale(height, stroke);
    let mut line =
        SetLine { letters: Vec::new(), low: Point::new(i64::MAX / 4, i64::MAX / 4), high: Point::new(i64::MIN / 4, i64::MIN / 4) };
    let mut cursor = 0.0;
    for c in text.chars() {
        let centre = strokes(c, scale, stroke);
        if let Some([low, high]) = bounds(centre.iter().map(|&(_, p)| rounded(p))) {
            let half = Nm(stroke.0 / 2 + 1);
            let mut at = Nm((cursor * scale).round() as i64);
            // The font is spaced for thin strokes: where thick ones would meet, the letter and all after it move on.
            let overlap = if line.letters.is_empty() { 0 } else { (line.high.x + stroke - (low.x - half + at)).0.max(0) };
            at = at + Nm(overlap);
            cursor += overlap as f64 / scale;
            line.letters.push((c, at));
            line.low = Point { x: line.low.x.min(low.x - half + at), y: line.low.y.min(low.y - half) };
            line.high = Point { x: line.high.x.max(high.x + half + at), y: line.high.y.max(high.y + half) };
        }
        cursor += advance_units(c);
    }
    line
}

/// Nanometres of one of the font's units. The strokes' centre lines are drawn smaller by one stroke, so that the letter as a whole has the
/// height.
fn scale(height: Nm, stroke: Nm) -> f64 {
    (height - stroke).0 as f64 / CAPITAL_UNITS
}

/// The centre lines of a letter's strokes: whether the pen is down on the way to the point, and the point.
fn strokes(c: char, scale: f64, stroke: Nm) -> Vec<(bool, kurbo::Point)> {
    let half = stroke.0 as f64 * 0.5;
    // The font's y runs down; its capitals stand on y = 9 of a box centred on zero.
    let at =
        |p: &vector_text_core::Point| kurbo::Point::new(f64::from(p.x) * scale + half, (BASELINE_UNITS - f64::from(p.y)) * scale + half);
    HersheyRenderer::render_text(c.encode_utf8(&mut [0; 4]), HersheyFont::Romans).iter().map(|p| (p.pen, at(p))).collect()
}

/// One letter as area.
fn letter(c: char, height: Nm, stroke: Nm) -> Region {
    let mut path = BezPath::new();
    for (i, (pen, at)) in strokes(c, scale(height, stroke), stroke).into_iter().enumerate() {
        if pen && i > 0 { path.line_to(at) } else { path.move_to(at) }
    }
    let tolerance = CHORD_ERROR.0 as f64;
    let outline = kurbo::stroke(path.iter(), &Stroke::new(stroke.0 as f64), &StrokeOpts::default(), tolerance);
    let mut rings: Vec<Ring> = Vec::new();
    kurbo::flatten(&outline, tolerance, |element| match element {
        PathEl::MoveTo(p) => rings.push(vec![rounded(p)]),
        PathEl::LineTo(p) => {
            if let Some(ring) = rings.last_mut() {
                ring.push(rounded(p));
            }
        }
        _ => {}
    });
    // Windings are kept: a stroke's outline around a counter (the inside of an O) is a void, not a solid.
    Region::wound(&rings)
}

/// From one letter to the next in the font's units: how far an `I` moves when the letter stands before it.
fn advance_units(c: char) -> f64 {
    let first = |text: &str| HersheyRenderer::render_text(text, HersheyFont::Romans).last().map_or(0, |p| p.x);
    f64::from(first(&format!("{c}I")) - first("I"))
}

/// Where the capitals of the font stand, in its units.
const BASELINE_UNITS: f64 = 9.0;

fn rounded(p: kurbo::Point) -> Point {
    Point::new(p.x.round() as i64, p.y.round() as i64)
}

/// Lines set one under the other, left aligned, not yet drawn.
pub(super) struct Block {
    lines: Vec<SetLine>,
    height: Nm,
    stroke: Nm,
    low: Point,
    high: Point,
}

impl Block {
    /// Sets the lines, the first on top.
    pub fn new(lines: &[String], height: Nm, stroke: Nm) -> Block {
        let pitch = Nm(height.0 + (height.0 as f64 * LINE_SPACING) as i64);
        let mut block = Block { lines: Vec::new(), height, stroke, low: Point::default(), high: Point::default() };
        let mut corners = Vec::new();
        for (i, text) in lines.iter().rev().enumerate() {
            let mut line = set(text, height, stroke);
            let up = Nm(pitch.0 * i as i64);
            (line.low, line.high) = (line.low.shifted(Nm::ZERO, up), line.high.shifted(Nm::ZERO, up));
            if !line.letters.is_empty() {
                corners.extend([line.low, line.high]);
            }
            block.lines.push(line);
        }
        if let Some([low, high]) = bounds(corners.into_iter()) {
            (block.low, block.high) = (low, high);
        }
        block
    }

    /// Length and height of the block.
    pub fn size(&self) -> [Nm; 2] {
        [self.high.x - self.low.x, self.high.y - self.low.y]
    }

    /// The block as area, its lower left corner at the origin.
    pub fn drawn(&self) -> Region {
        let pitch = Nm(self.height.0 + (self.height.0 as f64 * LINE_SPACING) as i64);
        let mut known: BTreeMap<char, Region> = BTreeMap::new();
        let mut all = Region::default();
        for (i, line) in self.lines.iter().enumerate() {
            let up = Nm(pitch.0 * i as i64);
            for &(c, at) in &line.letters {
                let mut letter = known.entry(c).or_insert_with(|| letter(c, self.height, self.stroke)).clone();
                letter.shift(at - self.low.x, up - self.low.y);
                // Letters keep apart, and so do lines: letters reach at most a third of their height below the line they stand on.
                all.pieces.extend(letter.pieces);
            }
        }
        all
    }
}

/// Lines of text as area for a drawing, the first on top, the lower left corner at the origin.
pub fn lettering(lines: &[String], height: Nm, stroke: Nm) -> Region {
    Block::new(lines, height, stroke).drawn()
}

/// The lines with spaces turned into line ends so that none is longer than `most` letters, where its words allow.
pub(super) fn wrapped(lines: &[String], most: usize) -> Vec<String> {
    let mut out: Vec<String> = Vec::new();
    for line in lines {
        let mut current = String::new();
        for word in line.split_whitespace() {
            if !current.is_empty() && current.chars().count() + 1 + word.chars().count() > most {
                out.push(std::mem::take(&mut current));
            }
            if !current.is_empty() {
                current.push(' ');
            }
            current.push_str(word);
        }
        out.push(current);
    }
    out
}

/// The block of this height turned a quarter counter-clockwise; lower left corner at the origin.
pub(super) fn upright(block: &Region, height: Nm) -> Region {
    block.mapped(|p| Point { x: height - p.y, y: p.x })
}
