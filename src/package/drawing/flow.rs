//! How do tables and notes fill sheets? Two columns a sheet, from the top; what does not fit goes on in the next column.

use super::ACCENT;
use super::FAINT;
use super::HAIR;
use super::INK;
use super::MARGIN;
use super::TITLE;
use super::notes;
use super::sheet::Align;
use super::sheet::Font;
use super::sheet::Sheet;
use super::sheet::text_width;
use super::tables;
use crate::package::job::Job;

/// Between frame and columns, and between the columns.
const GUTTER: f64 = 7.0;
/// Height of text in tables and notes, and from line to line.
pub(super) const TEXT: f64 = 2.5;
pub(super) const LINE: f64 = 3.9;

/// The column being filled.
pub(super) struct Flow {
    sheets: Vec<Sheet>,
    column: usize,
    y: f64,
    size: [f64; 2],
}

/// Section of the stack, drill table, controlled features, smallest features, notes.
pub(super) fn sheets(job: &Job, size: [f64; 2]) -> Vec<Sheet> {
    let mut flow = Flow { sheets: vec![Sheet::new()], column: 0, y: 0.0, size };
    flow.y = flow.top();
    tables::write(job, &mut flow);
    notes::write(job, &mut flow);
    flow.sheets
}

impl Flow {
    fn top(&self) -> f64 {
        self.size[1] - MARGIN - GUTTER
    }

    /// Width of a column.
    pub fn width(&self) -> f64 {
        0.5 * (self.size[0] - 2.0 * MARGIN - 3.0 * GUTTER)
    }

    fn left(&self) -> f64 {
        MARGIN + GUTTER + self.column as f64 * (self.width() + GUTTER)
    }

    /// Makes sure that so much height is left, in this column or the next; says whether it had to go on.
    pub fn room(&mut self, height: f64) -> bool {
        if self.y - height >= MARGIN + TITLE + 3.0 {
            return false;
        }
        self.column += 1;
        if self.column == 2 {
            self.column = 0;
            self.sheets.push(Sheet::new());
        }
        self.y = self.top();
        true
    }

    /// Takes height from the column: its lower left corner, and the sheet to draw on.
    pub fn take(&mut self, height: f64) -> Option<([f64; 2], &mut Sheet)> {
        self.room(height);
        self.y -= height;
        let at = [self.left(), self.y];
        self.sheets.last_mut().map(|sheet| (at, sheet))
    }

    pub fn heading(&mut self, text: &str) {
        // A heading stays with what follows it.
        self.room(20.0);
        let width = self.width();
        if let Some((at, sheet)) = self.take(8.5) {
            sheet.text([at[0], at[1] + 2.6], 3.0, Font::Bold, Align::Left, ACCENT, text);
            sheet.line(&[[at[0], at[1] + 1.2], [at[0] + width, at[1] + 1.2]], 0.3, ACCENT);
        }
    }

    /// A table: the first row is the heading and comes again after a break; numbers to the right in the columns that say so.
    pub fn table(&mut self, rows: &[Vec<String>], right: &[usize]) {
        let Some((head, body)) = rows.split_first() else { return };
        let width = self.width();
        let natural: Vec<f64> = (0..head.len())
            .map(|c| rows.iter().filter_map(|row| row.get(c)).map(|cell| text_width(cell, TEXT, Font::Bold)).fold(0.0, f64::max) + 3.0)
            .collect();
        let total: f64 = natural.iter().sum();
        // Too wide: the letters become smaller, all alike. Narrower: the rest is shared out.
        let (text, stretch) = if total > width { (TEXT * width / total, width / total) } else { (TEXT, (width / total).min(1.6)) };
        let places: Vec<f64> = natural
            .iter()
            .scan(0.0, |x, w| {
                let here = *x;
                *x += w * stretch;
                Some(here)
            })
            .collect();
        let row = |flow: &mut Flow, cells: &[String], font: Font| {
            let Some((at, sheet)) = flow.take(LINE + 0.5) else { return };
            for (c, cell) in cells.iter().enumerate() {
                let (x, w) = (places.get(c).copied().unwrap_or(0.0), natural.get(c).copied().unwrap_or(0.0) * stretch);
                let color = if font == Font::Bold { FAINT } else { INK };
                if right.contains(&c) {
                    sheet.text([at[0] + x + w - 3.0, at[1] + 1.2], text, font, Align::Right, color, cell);
                } else {
                    sheet.text([at[0] + x, at[1] + 1.2], text, font, Align::Left, color, cell);
                }
            }
            sheet.line(&[[at[0], at[1]], [at[0] + width, at[1]]], if font == Font::Bold { 0.25 } else { 0.1 }, HAIR);
        };
        self.room(2.0 * (LINE + 0.5));
        row(self, head, Font::Bold);
        for cells in body {
            if self.room(LINE + 0.5) {
                row(self, head, Font::Bold);
            }
            row(self, cells, Font::Plain);
        }
        self.gap(2.0);
    }

    pub fn gap(&mut self, height: f64) {
        self.y -= height;
    }

    /// A paragraph with a number or name before it.
    pub fn paragraph(&mut self, before: &str, text: &str) {
        let indent = 6.5;
        let mut lines: Vec<String> = Vec::new();
        let mut line = String::new();
        for word in text.split_whitespace() {
            let longer = if line.is_empty() { word.to_string() } else { format!("{line} {word}") };
            if text_width(&longer, TEXT, Font::Plain) > self.width() - indent && !line.is_empty() {
                lines.push(std::mem::replace(&mut line, word.to_string()));
            } else {
                line = longer;
            }
        }
        lines.push(line);
        // Two lines stay together.
        self.room(LINE * lines.len().min(2) as f64);
        for (i, line) in lines.iter().enumerate() {
            let Some((at, sheet)) = self.take(LINE) else { return };
            if i == 0 {
                sheet.text([at[0], at[1] + 1.1], TEXT, Font::Bold, Align::Left, FAINT, before);
            }
            sheet.text([at[0] + indent, at[1] + 1.1], TEXT, Font::Plain, Align::Left, INK, line);
        }
        self.gap(1.1);
    }
}
