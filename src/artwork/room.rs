//! Where there is room: a raster of the board that knows which cells are taken.

use crate::artwork::shape::Edge;
use crate::artwork::shape::Piece;
use crate::artwork::shape::edges;
use crate::artwork::shape::turn;
use crate::base::Nm;
use crate::base::Point;

/// Side of a cell at least.
const LEAST_CELL: Nm = Nm(250_000);
/// Cells along the longer side at most; larger boards get larger cells.
const MAX_CELLS: i64 = 200;

/// The room text may take, as cells of which each is free or taken.
pub(super) struct Room {
    low: Point,
    cell: i64,
    columns: usize,
    rows: usize,
    taken: Vec<bool>,
    /// Taken cells left of and below each corner of a cell; row by row, one more of each than cells.
    sums: Vec<u32>,
}

impl Room {
    /// A room from `low` to `high` with its obstacles, each already grown by the distance to keep from it.
    pub fn new(low: Point, high: Point, obstacles: &[Piece]) -> Room {
        let (length, width) = ((high.x - low.x).0.max(0), (high.y - low.y).0.max(0));
        let cell = LEAST_CELL.0.max(length.max(width) / MAX_CELLS);
        let (columns, rows) = ((length / cell) as usize, (width / cell) as usize);
        let mut room = Room { low, cell, columns, rows, taken: vec![false; columns * rows], sums: Vec::new() };
        for obstacle in obstacles {
            room.mark(obstacle);
        }
        room.count();
        room
    }

    /// Lower left corner of the room.
    pub fn corner(&self) -> Point {
        self.low
    }

    /// Takes up some room.
    pub fn take(&mut self, piece: &Piece) {
        self.mark(piece);
        self.count();
    }

    /// The lower left corner of the free place for a block of this size whose middle lies nearest to `target`.
    pub fn place(&self, size: [Nm; 2], target: Point) -> Option<Point> {
        let cells = size.map(|v| ((v.0 + self.cell - 1) / self.cell).max(1) as usize);
        if cells[0] > self.columns || cells[1] > self.rows {
            return None;
        }
        let mut best: Option<(i128, Point)> = None;
        for row in 0..=self.rows - cells[1] {
            for column in 0..=self.columns - cells[0] {
                if !self.is_free(column, row, cells) {
                    continue;
                }
                let at = self.low.shifted(Nm(column as i64 * self.cell), Nm(row as i64 * self.cell));
                let (dx, dy) = ((at.x - target.x).0 + size[0].0 / 2, (at.y - target.y).0 + size[1].0 / 2);
                let away = i128::from(dx) * i128::from(dx) + i128::from(dy) * i128::from(dy);
                if best.is_none_or(|found| (away, at) < found) {
                    best = Some((away, at));
                }
            }
        }
        best.map(|(_, at)| at)
    }

    fn is_free(&self, column: usize, row: usize, cells: [usize; 2]) -> bool {
        let sum = |c: usize, r: usize| self.sums[r * (self.columns + 1) + c];
        let (right, top) = (column + cells[0], row + cells[1]);
        sum(right, top) + sum(column, row) == sum(column, top) + sum(right, row)
    }

    fn mark(&mut self, piece: &Piece) {
        let Some([from, to]) = crate::artwork::shape::bounds(piece.outer.iter().copied()) else { return };
        let edges = edges(std::iter::once(&piece.outer).chain(&piece.voids));
        let index = |v: Nm, low: Nm, count: usize| ((v - low).0.div_euclid(self.cell)).clamp(0, count as i64) as usize;
        let columns = index(from.x, self.low.x, self.columns)..(index(to.x, self.low.x, self.columns) + 1).min(self.columns);
        let rows = index(from.y, self.low.y, self.rows)..(index(to.y, self.low.y, self.rows) + 1).min(self.rows);
        for row in rows {
            for column in columns.clone() {
                let low = self.low.shifted(Nm(column as i64 * self.cell), Nm(row as i64 * self.cell));
                let high = low.shifted(Nm(self.cell), Nm(self.cell));
                let known = &mut self.taken[row * self.columns + column];
                *known = *known || edges.iter().any(|&edge| meets_box(edge, low, high)) || piece.contains(low);
            }
        }
    }

    fn count(&mut self) {
        let stride = self.columns + 1;
        self.sums = vec![0; stride * (self.rows + 1)];
        for row in 0..self.rows {
            for column in 0..self.columns {
                let here = u32::from(self.taken[row * self.columns + column]);
                self.sums[(row + 1) * stride + column + 1] =
                    here + self.sums[row * stride + column + 1] + self.sums[(row + 1) * stride + column] - self.sums[row * stride + column];
            }
        }
    }
}

/// Whether an edge and a box share a point.
fn meets_box(edge: Edge, low: Point, high: Point) -> bool {
    let Edge { a, b } = edge;
    if a.x.max(b.x) < low.x || a.x.min(b.x) > high.x || a.y.max(b.y) < low.y || a.y.min(b.y) > high.y {
        return false;
    }
    // Apart when all corners lie strictly on one side of the edge's line.
    let sides = [low, Point { x: high.x, y: low.y }, high, Point { x: low.x, y: high.y }].map(|corner| turn(a, b, corner));
    !(sides.iter().all(|&s| s > 0) || sides.iter().all(|&s| s < 0))
}
