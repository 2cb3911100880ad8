//! What is written on the board and where there is room for it: single-stroke letters turned into outlines.

use kurbo::BezPath;
use kurbo::PathEl;
use kurbo::Stroke;
use kurbo::StrokeOpts;
use vector_text_core::Renderer;
use vector_text_hershey::HersheyFont;
use vector_text_hershey::HersheyRenderer;

use crate::artwork::shape::CHORD_ERROR;
use crate::artwork::shape::Piece;
use crate::artwork::shape::Region;
use crate::artwork::shape::Ring;
use crate::artwork::shape::bounds;
use crate::artwork::shape::edges;
use crate::artwork::shape::rectangle;
use crate::artwork::shape::turn;
use crate::base::Nm;
use crate::base::Point;

/// Height of a capital in the font's own units (Hershey's simplex roman).
const CAPITAL_UNITS: f64 = 21.0;
/// Free places are looked for on this raster.
const RASTER: Nm = Nm(500_000);
/// On large boards the raster is widened, so that no side has more places than this.
const MAX_PLACES: i64 = 100;
/// Between the lines of a block, as a share of the height.
const LINE_SPACING: f64 = 0.7;

/// Text in letters the font has: Greek, accents and signs spelt out; what is left becomes `?`. Also says which characters became `?`.
pub(super) fn spelt_out(text: &str) -> (String, Vec<char>) {
    let mut lost = Vec::new();
    let mut out = String::new();
    for c in text.chars() {
        let spelling = match c {
            '_' | '\u{2010}'..='\u{2015}' | '\u{2212}' => "-",
            '°' => " deg",
            '±' => "+/-",
            'µ' | 'μ' => "u",
            'Ω' | '\u{2126}' => "ohm",
            'ε' | '\u{3f5}' => "er",
            'λ' => "lambda",
            'φ' | 'Φ' => "phi",
            '×' => "x",
            '·' | '•' => ".",
            '‘' | '’' => "'",
            '“' | '”' => "\"",
            '…' => "...",
            '²' => "2",
            '³' => "3",
            '½' => "1/2",
            '¼' => "1/4",
            'à' | 'á' | 'â' | 'ã' | 'å' => "a",
            'À' | 'Á' | 'Â' | 'Ã' | 'Å' => "A",
            'ä' | 'æ' => "ae",
            'Ä' | 'Æ' => "Ae",
            'ç' => "c",
            'Ç' => "C",
            'è' | 'é' | 'ê' | 'ë' => "e",
            'È' | 'É' | 'Ê' | 'Ë' => "E",
            'ì' | 'í' | 'î' | 'ï' => "i",
            'Ì' | 'Í' | 'Î' | 'Ï' => "I",
            'ñ' => "n",
            'Ñ' => "N",
            'ò' | 'ó' | 'ô' | 'õ' => "o",
            'Ò' | 'Ó' | 'Ô' | 'Õ' => "O",
            'ö' | 'ø' | 'œ' => "oe",
            'Ö' | 'Ø' | 'Œ' => "Oe",
            'ß' => "ss",
            'ù' | 'ú' | 'û' => "u",
            'Ù' | 'Ú' | 'Û' => "U",
            'ü' => "ue",
            'Ü' => "Ue",
            'ý' | 'ÿ' => "y",
            'ł' => "l",
            'Ł' => "L",
            'š' => "s",
            'Š' => "S",
            'ž' => "z",
            'Ž' => "Z",
            'č' | 'ć' => "c",
            'Č' | 'Ć' => "C",
            ' ' => " ",
            c if c.is_whitespace() => " ",
            c if c.is_ascii_graphic() && has_strokes(c) => {
                out.push(c);
                continue;
            }
            c => {
                lost.push(c);
                "?"
            }
        };
        out.push_str(spelling);
    }
    (out.trim().to_string(), lost)
}

fn has_strokes(c: char) -> bool {
    !HersheyRenderer::render_text(c.encode_utf8(&mut [0; 4]), HersheyFont::Romans).is_empty()
}

/// A line of text as area: its capitals `height` high, standing on y = 0, beginning at x = 0. Letters keep a stroke apart.
pub(super) fn line(text: &str, height: Nm, stroke: Nm) -> Region {
    // The strokes' centre lines are drawn smaller by one stroke, so that the letter as a whole has the height.
    let scale = (height - stroke).0 as f64 / CAPITAL_UNITS;
    let mut drawn = Region::default();
    let (mut cursor, mut taken) = (0.0, i64::MIN / 2);
    for c in text.chars() {
        let mut letter = letter(c, scale, stroke);
        letter.shift(Nm((cursor * scale).round() as i64), Nm::ZERO);
        if let Some([low, high]) = letter.bounds() {
            // The font is spaced for thin strokes: where thick ones would meet, the letter and all after it move on.
            let overlap = (taken + stroke.0 - low.x.0).max(0);
            letter.shift(Nm(overlap), Nm::ZERO);
            cursor += overlap as f64 / scale;
            taken = high.x.0 + overlap;
            drawn.pieces.extend(letter.pieces);
        }
        cursor += advance_units(c);
    }
    drawn
}

/// One letter, its left bearing at x = 0.
fn letter(c: char, scale: f64, stroke: Nm) -> Region {
    let half = stroke.0 as f64 * 0.5;
    let mut path = BezPath::new();
    for (i, p) in HersheyRenderer::render_text(c.encode_utf8(&mut [0; 4]), HersheyFont::Romans).iter().enumerate() {
        // The font's y runs down; its capitals stand on y = 9 of a box centred on zero.
        let at = kurbo::Point::new(f64::from(p.x) * scale + half, (BASELINE_UNITS - f64::from(p.y)) * scale + half);
        if p.pen && i > 0 { path.line_to(at) } else { path.move_to(at) }
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

/// Lines set one under the other, left aligned; lower left corner at the origin.
pub(super) fn block(lines: &[String], height: Nm, stroke: Nm) -> Region {
    let pitch = Nm(height.0 + (height.0 as f64 * LINE_SPACING) as i64);
    let mut all = Region::default();
    for (i, text) in lines.iter().rev().enumerate() {
        let up = Nm(pitch.0 * i as i64);
        let mut drawn = line(text, height, stroke);
        drawn.shift(Nm::ZERO, up);
        // Lines do not touch: letters reach at most a third of their height below the line they stand on.
        all.pieces.extend(drawn.pieces);
    }
    let low = all.bounds().map_or(Point::default(), |[low, _]| low);
    all.shift(-low.x, -low.y);
    all
}

/// The block turned a quarter counter-clockwise; lower left corner at the origin.
pub(super) fn upright(block: &Region) -> Region {
    let mut turned = block.mapped(|p| Point { x: -p.y, y: p.x });
    let low = turned.bounds().map_or(Point::default(), |[low, _]| low);
    turned.shift(-low.x, -low.y);
    turned
}

/// The room text may take, and what it must keep clear of.
pub(super) struct Room {
    /// Lower left corner.
    pub low: Point,
    /// Upper right corner.
    pub high: Point,
    obstacles: Vec<(Piece, [Point; 2])>,
}

impl Room {
    /// A room with its obstacles, each already grown by the distance text keeps from it.
    pub fn new(low: Point, high: Point, obstacles: Vec<Piece>) -> Room {
        let obstacles = obstacles.into_iter().filter_map(boxed).collect();
        Room { low, high, obstacles }
    }

    /// Takes up some room.
    pub fn take(&mut self, piece: Piece) {
        self.obstacles.extend(boxed(piece));
    }

    /// The lower left corner of the free place for a block of this size that lies nearest to `target`.
    pub fn place(&self, size: [Nm; 2], target: Point) -> Option<Point> {
        let (last_x, last_y) = (self.high.x - size[0], self.high.y - size[1]);
        let step = |low: Nm, high: Nm| Nm(RASTER.0.max((high - low).0 / MAX_PLACES));
        let (step_x, step_y) = (step(self.low.x, self.high.x), step(self.low.y, self.high.y));
        let mut places: Vec<(i128, Point)> = raster(self.low.y, last_y, step_y)
            .flat_map(|y| raster(self.low.x, last_x, step_x).map(move |x| Point { x, y }))
            .map(|p| {
                let middle = p.shifted(Nm(size[0].0 / 2), Nm(size[1].0 / 2));
                let (dx, dy) = (i128::from((middle.x - target.x).0), i128::from((middle.y - target.y).0));
                (dx * dx + dy * dy, p)
            })
            .collect();
        places.sort();
        places.into_iter().map(|(_, p)| p).find(|&p| self.is_free(p, p.shifted(size[0], size[1])))
    }

    fn is_free(&self, low: Point, high: Point) -> bool {
        self.obstacles.iter().all(|(piece, [from, to])| {
            to.x < low.x || from.x > high.x || to.y < low.y || from.y > high.y || !piece_meets_box(piece, low, high)
        })
    }
}

/// From `first` to `last` in steps, `last` itself included.
fn raster(first: Nm, last: Nm, step: Nm) -> impl Iterator<Item = Nm> {
    let steps = if last < first { -1 } else { (last - first).0 / step.0 };
    let end = (steps >= 0 && (last - first).0 % step.0 != 0).then_some(last);
    (0..=steps).map(move |i| Nm(first.0 + i * step.0)).chain(end)
}

fn boxed(piece: Piece) -> Option<(Piece, [Point; 2])> {
    let corners = bounds(piece.outer.iter().copied())?;
    Some((piece, corners))
}

/// Whether a piece and a box share a point.
fn piece_meets_box(piece: &Piece, low: Point, high: Point) -> bool {
    let corners = rectangle(low, high);
    let rings = std::iter::once(&piece.outer).chain(&piece.voids);
    edges(rings).iter().any(|edge| edge_meets_box(edge.a, edge.b, low, high, &corners)) || piece.contains(low)
}

fn edge_meets_box(a: Point, b: Point, low: Point, high: Point, corners: &Ring) -> bool {
    if a.x.max(b.x) < low.x || a.x.min(b.x) > high.x || a.y.max(b.y) < low.y || a.y.min(b.y) > high.y {
        return false;
    }
    // Apart when all corners lie strictly on one side of the edge's line.
    let sides: Vec<i128> = corners.iter().map(|&c| turn(a, b, c)).collect();
    !(sides.iter().all(|&s| s > 0) || sides.iter().all(|&s| s < 0))
}
