//! How does a line or a word come onto a sheet? The only door to pdf-writer: millimetres from the lower left corner, base fonts, text stays text.

use pdf_writer::Content;
use pdf_writer::Finish;
use pdf_writer::Name;
use pdf_writer::Pdf;
use pdf_writer::Rect;
use pdf_writer::Ref;
use pdf_writer::Str;
use pdf_writer::TextStr;

use crate::base::spelt_out;

/// Points in a millimetre.
const POINTS_PER_MM: f32 = 72.0 / 25.4;
/// Share of its radius by which the control points of a quarter circle stand off.
const QUARTER: f64 = 0.552_284_75;

/// Which of the two base fonts.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Font {
    /// Helvetica.
    Plain,
    /// Helvetica-Bold.
    Bold,
}

/// Where a text stands about its point.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Align {
    Left,
    Middle,
    Right,
}

/// A color, red green blue from 0 to 1.
pub(super) type Color = [f32; 3];

/// One sheet being drawn.
pub(super) struct Sheet {
    content: Content,
}

impl Sheet {
    pub fn new() -> Sheet {
        let mut content = Content::new();
        content.transform([POINTS_PER_MM, 0.0, 0.0, POINTS_PER_MM, 0.0, 0.0]);
        Sheet { content }
    }

    /// A line through points.
    pub fn line(&mut self, points: &[[f64; 2]], width: f64, color: Color) {
        self.path(std::iter::once((points, false)));
        self.content.set_line_width(width as f32).set_stroke_rgb(color[0], color[1], color[2]).stroke();
    }

    /// A dashed line through points.
    pub fn dashed(&mut self, points: &[[f64; 2]], width: f64, color: Color, dash: [f32; 2]) {
        self.content.save_state();
        self.content.set_dash_pattern(dash, 0.0);
        self.line(points, width, color);
        self.content.restore_state();
    }

    /// Closed rings filled together, what lies in two of them left out; with an edge when it has a width.
    pub fn area(&mut self, rings: &[Vec<[f64; 2]>], fill: Color, edge: Option<(f64, Color)>) {
        self.path(rings.iter().map(|ring| (ring.as_slice(), true)));
        self.content.set_fill_rgb(fill[0], fill[1], fill[2]);
        match edge {
            Some((width, color)) => {
                self.content.set_line_width(width as f32).set_stroke_rgb(color[0], color[1], color[2]).fill_even_odd_and_stroke();
            }
            None => {
                self.content.fill_even_odd();
            }
        }
    }

    pub fn rectangle(&mut self, low: [f64; 2], size: [f64; 2], fill: Option<Color>, edge: Option<(f64, Color)>) {
        let ring = vec![low, [low[0] + size[0], low[1]], [low[0] + size[0], low[1] + size[1]], [low[0], low[1] + size[1]]];
        match fill {
            Some(fill) => self.area(&[ring], fill, edge),
            None => {
                let (width, color) = edge.unwrap_or((0.1, [0.0; 3]));
                self.path(std::iter::once((ring.as_slice(), true)));
                self.content.set_line_width(width as f32).set_stroke_rgb(color[0], color[1], color[2]).stroke();
            }
        }
    }

    pub fn circle(&mut self, [x, y]: [f64; 2], radius: f64, fill: Color, edge: Option<(f64, Color)>) {
        let (r, q) = (radius as f32, (radius * QUARTER) as f32);
        let (x, y) = (x as f32, y as f32);
        let c = &mut self.content;
        c.move_to(x + r, y);
        c.cubic_to(x + r, y + q, x + q, y + r, x, y + r);
        c.cubic_to(x - q, y + r, x - r, y + q, x - r, y);
        c.cubic_to(x - r, y - q, x - q, y - r, x, y - r);
        c.cubic_to(x + q, y - r, x + r, y - q, x + r, y).close_path();
        c.set_fill_rgb(fill[0], fill[1], fill[2]);
        match edge {
            Some((width, color)) => {
                c.set_line_width(width as f32).set_stroke_rgb(color[0], color[1], color[2]).fill_even_odd_and_stroke();
            }
            None => {
                c.fill_even_odd();
            }
        }
    }

    /// Text of a height in millimetres (from line to line it wants 1.4 of it).
    pub fn text(&mut self, at: [f64; 2], height: f64, font: Font, align: Align, color: Color, text: &str) {
        let bytes = encoded(text);
        let x = at[0] + shift(&bytes, height, font, align);
        self.show([1.0, 0.0, 0.0, 1.0, x as f32, at[1] as f32], height, font, color, &bytes);
    }

    /// The same turned a quarter counter-clockwise.
    pub fn upright(&mut self, at: [f64; 2], height: f64, font: Font, align: Align, color: Color, text: &str) {
        let bytes = encoded(text);
        let y = at[1] + shift(&bytes, height, font, align);
        self.show([0.0, 1.0, -1.0, 0.0, at[0] as f32, y as f32], height, font, color, &bytes);
    }

    fn show(&mut self, matrix: [f32; 6], height: f64, font: Font, color: Color, bytes: &[u8]) {
        let name = if font == Font::Bold { Name(b"B") } else { Name(b"P") };
        self.content.set_fill_rgb(color[0], color[1], color[2]);
        self.content.begin_text().set_font(name, height as f32).set_text_matrix(matrix).show(Str(bytes)).end_text();
    }

    fn path<'p>(&mut self, chains: impl Iterator<Item = (&'p [[f64; 2]], bool)>) {
        for (points, closed) in chains {
            for (i, p) in points.iter().enumerate() {
                if i == 0 {
                    self.content.move_to(p[0] as f32, p[1] as f32);
                } else {
                    self.content.line_to(p[0] as f32, p[1] as f32);
                }
            }
            if closed {
                self.content.close_path();
            }
        }
    }
}

/// The sheets as one document of this size and title; the same sheets, the same bytes.
pub(super) fn document(sheets: Vec<Sheet>, size: [f64; 2], title: &str) -> Vec<u8> {
    let (catalog, pages, plain, bold, info) = (Ref::new(1), Ref::new(2), Ref::new(3), Ref::new(4), Ref::new(5));
    let first = 6;
    let kids: Vec<(Ref, Ref)> = (0..sheets.len() as i32).map(|i| (Ref::new(first + 2 * i), Ref::new(first + 2 * i + 1))).collect();
    let mut pdf = Pdf::new();
    pdf.catalog(catalog).pages(pages);
    pdf.pages(pages).kids(kids.iter().map(|kid| kid.0)).count(kids.len() as i32);
    for (font, name) in [(plain, &b"Helvetica"[..]), (bold, &b"Helvetica-Bold"[..])] {
        pdf.type1_font(font).base_font(Name(name)).encoding_predefined(Name(b"WinAnsiEncoding"));
    }
    pdf.document_info(info).title(TextStr(title)).creator(TextStr(concat!(env!("CARGO_PKG_NAME"), " ", env!("CARGO_PKG_VERSION"))));
    let [width, height] = size.map(|mm| mm as f32 * POINTS_PER_MM);
    for (sheet, (page, content)) in sheets.into_iter().zip(kids) {
        let mut dictionary = pdf.page(page);
        dictionary.media_box(Rect::new(0.0, 0.0, width, height)).parent(pages).contents(content);
        dictionary.resources().fonts().pair(Name(b"P"), plain).pair(Name(b"B"), bold);
        dictionary.finish();
        pdf.stream(content, &sheet.content.finish());
    }
    pdf.finish()
}

/// The base fonts' letters (Windows code page 1252); what they lack is spelt out.
fn encoded(text: &str) -> Vec<u8> {
    let mut bytes = Vec::new();
    for c in text.chars() {
        match c {
            ' '..='~' => bytes.push(c as u8),
            '\u{a1}'..='\u{ff}' => bytes.push(c as u32 as u8),
            '\u{2013}' => bytes.push(0x96),
            other => bytes.extend(spelt_out(&other.to_string()).0.bytes()),
        }
    }
    bytes
}

/// Width of a text, millimetres.
pub(super) fn text_width(text: &str, height: f64, font: Font) -> f64 {
    width_of(&encoded(text), height, font)
}

/// From the point a text is aligned to, to where it begins.
fn shift(bytes: &[u8], height: f64, font: Font, align: Align) -> f64 {
    match align {
        Align::Left => 0.0,
        Align::Middle => -0.5 * width_of(bytes, height, font),
        Align::Right => -width_of(bytes, height, font),
    }
}

fn width_of(bytes: &[u8], height: f64, font: Font) -> f64 {
    bytes.iter().map(|&byte| f64::from(advance(byte, font))).sum::<f64>() * height / 1000.0
}

/// Widths of the letters from the space on, thousandths of the font's size, as the metrics files of the base fonts list them.
const PLAIN: [u16; 95] = [
    278, 278, 355, 556, 556, 889, 667, 191, 333, 333, 389, 584, 278, 333, 278, 278, 556, 556, 556, 556, 556, 556, 556, 556, 556, 556, 278,
    278, 584, 584, 584, 556, 1015, 667, 667, 722, 722, 667, 611, 778, 722, 278, 500, 667, 556, 833, 722, 778, 667, 778, 722, 667, 611, 722,
    667, 944, 667, 667, 611, 278, 278, 278, 469, 556, 333, 556, 556, 500, 556, 556, 278, 556, 556, 222, 222, 500, 222, 833, 556, 556, 556,
    556, 333, 500, 278, 556, 500, 722, 500, 500, 500, 334, 260, 334, 584,
];
const BOLD: [u16; 95] = [
    278, 333, 474, 556, 556, 889, 722, 238, 333, 333, 389, 584, 278, 333, 278, 278, 556, 556, 556, 556, 556, 556, 556, 556, 556, 556, 333,
    333, 584, 584, 584, 611, 975, 722, 722, 722, 722, 667, 611, 778, 722, 278, 556, 722, 611, 833, 722, 778, 667, 778, 722, 667, 611, 722,
    667, 944, 667, 667, 611, 333, 278, 333, 584, 556, 333, 556, 611, 556, 611, 556, 333, 611, 611, 278, 278, 556, 278, 889, 611, 611, 611,
    611, 389, 556, 333, 611, 556, 778, 556, 556, 500, 389, 280, 389, 584,
];

fn advance(byte: u8, font: Font) -> u16 {
    let table = if font == Font::Bold { &BOLD } else { &PLAIN };
    match byte {
        32..=126 => table[usize::from(byte - 32)],
        0xb0 => 400,
        0xb1 | 0xd7 | 0xf7 => 584,
        0xb7 => 278,
        // Letters with accents are about as wide as most capitals and small letters.
        0xc0..=0xde => 722,
        _ => 556,
    }
}
