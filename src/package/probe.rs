//! Where can a test probe touch a piece of copper near both of its ends? Two points as far apart as the way within the copper goes.

use std::collections::VecDeque;

use crate::artwork::Shape;
use crate::artwork::shape::Region;
use crate::base::Nm;
use crate::base::Point;

/// A probe's mark is at most this wide.
const WIDEST: Nm = Nm(500_000);
/// Radius of a mark as a share of the copper's mean width: the rest keeps it off the edges.
const SHARE_OF_WIDTH: f64 = 0.25;
/// Where the copper narrows, the mark is halved at most so often.
const MAX_HALVINGS: usize = 6;
/// Cells of the raster the way is searched on; larger copper gets larger cells.
const MAX_CELLS: i64 = 400_000;
/// Cells across the strip that is left when the marks' radius is taken off its edges.
const CELLS_ACROSS: i64 = 4;

/// Two places for a probe's mark and its diameter; `from` asks for the first one to lie as near as possible to a point.
pub(super) fn ends(shape: &Shape, from: Option<Point>) -> Option<([Point; 2], Nm)> {
    let region = Region::from_shape(shape);
    // Twice the area over the perimeter is the width of a strip, whatever way it takes.
    let perimeter_m: f64 = region
        .rings()
        .flat_map(|ring| ring.iter().zip(ring.iter().cycle().skip(1)))
        .map(|(a, b)| (a.x - b.x).m().hypot((a.y - b.y).m()))
        .sum();
    let width = Nm::from_m(2.0 * region.area_m2() / perimeter_m.max(1e-9));
    let mut radius = Nm((width.0 as f64 * SHARE_OF_WIDTH) as i64).min(Nm(WIDEST.0 / 2));
    let mut inner = region.offset(-radius);
    for _ in 0..MAX_HALVINGS {
        if inner.pieces.len() == 1 || radius.0 < 2 {
            break;
        }
        radius = Nm(radius.0 / 2);
        inner = region.offset(-radius);
    }
    // Whole micrometres, as the netlist counts; a mark that is a little smaller stays within the copper.
    let diameter = Nm((2 * radius.0) / 1000 * 1000);
    let raster = Raster::new(&inner, Nm((width - radius - radius).0 / CELLS_ACROSS))?;
    let start = match from {
        Some(at) => raster.nearest(at)?,
        None => raster.farthest(raster.nearest(inner.bounds()?[0])?),
    };
    Some(([start, raster.farthest(start)].map(|cell| raster.middle(cell)), diameter))
}

/// Which cells of a grid have their middle within the copper.
struct Raster {
    low: Point,
    cell: i64,
    columns: usize,
    rows: usize,
    inside: Vec<bool>,
}

impl Raster {
    fn new(region: &Region, wanted: Nm) -> Option<Raster> {
        let [low, high] = region.bounds()?;
        let (length, width) = ((high.x - low.x).0 + 1, (high.y - low.y).0 + 1);
        let least = ((length as f64 * width as f64 / MAX_CELLS as f64).sqrt().ceil() as i64).max(length.max(width) / MAX_CELLS);
        let cell = wanted.0.max(least).max(1);
        let (columns, rows) = ((length / cell + 1) as usize, (width / cell + 1) as usize);
        let mut raster = Raster { low, cell, columns, rows, inside: vec![false; columns * rows] };
        for row in 0..rows {
            // Where a line through the middles of the row's cells crosses the edges; between the first and the second it is inside.
            let y = raster.middle(row * columns).y.0;
            let mut crossings: Vec<i64> = Vec::new();
            for ring in region.rings() {
                for (a, b) in ring.iter().zip(ring.iter().cycle().skip(1)) {
                    if (a.y.0 <= y) != (b.y.0 <= y) {
                        let along = i128::from(y - a.y.0) * i128::from(b.x.0 - a.x.0) / i128::from(b.y.0 - a.y.0);
                        crossings.push(a.x.0 + along as i64);
                    }
                }
            }
            crossings.sort_unstable();
            for pair in crossings.chunks_exact(2) {
                for column in 0..columns {
                    let x = raster.middle(row * columns + column).x.0;
                    if x >= pair[0] && x <= pair[1] {
                        raster.inside[row * columns + column] = true;
                    }
                }
            }
        }
        raster.inside.contains(&true).then_some(raster)
    }

    fn middle(&self, cell: usize) -> Point {
        let (row, column) = ((cell / self.columns) as i64, (cell % self.columns) as i64);
        let half = self.cell / 2;
        // Whole micrometres: what the netlist can say.
        let whole = |v: i64| Nm((v + 500).div_euclid(1000) * 1000);
        Point { x: whole(self.low.x.0 + column * self.cell + half), y: whole(self.low.y.0 + row * self.cell + half) }
    }

    fn nearest(&self, at: Point) -> Option<usize> {
        let away = |cell: &usize| {
            let middle = self.middle(*cell);
            let (dx, dy) = ((middle.x - at.x).0, (middle.y - at.y).0);
            i128::from(dx) * i128::from(dx) + i128::from(dy) * i128::from(dy)
        };
        (0..self.inside.len()).filter(|&cell| self.inside[cell]).min_by_key(away)
    }

    /// The cell with the longest way from `start` within the copper: the last one a flood reaches.
    fn farthest(&self, start: usize) -> usize {
        let mut seen = vec![false; self.inside.len()];
        seen[start] = true;
        let mut queue = VecDeque::from([start]);
        let mut last = start;
        while let Some(cell) = queue.pop_front() {
            last = cell;
            let (row, column) = (cell / self.columns, cell % self.columns);
            let neighbours = [
                (column > 0).then(|| cell - 1),
                (column + 1 < self.columns).then(|| cell + 1),
                (row > 0).then(|| cell - self.columns),
                (row + 1 < self.rows).then(|| cell + self.columns),
            ];
            for next in neighbours.into_iter().flatten() {
                if self.inside[next] && !seen[next] {
                    seen[next] = true;
                    queue.push_back(next);
                }
            }
        }
        last
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::artwork::Role;

    fn strip(outer: Vec<Point>) -> Shape {
        Shape { outer, voids: Vec::new(), role: Role::Circuit, net: "RES1".to_string() }
    }

    fn near(found: Point, x_mm: f64, y_mm: f64) {
        // Half a strip's width: on the end, off its edges.
        assert!((found.x.mm() - x_mm).abs() < 0.3 && (found.y.mm() - y_mm).abs() < 0.3, "{found:?}");
    }

    #[test]
    fn a_straight_strip_is_probed_at_its_ends() {
        let mm = |x: f64, y: f64| Point::from_m(x * 1e-3, y * 1e-3);
        let (ends, diameter) = ends(&strip(vec![mm(5.0, 9.0), mm(25.0, 9.0), mm(25.0, 9.4), mm(5.0, 9.4)]), None).unwrap();
        let mut ends = ends;
        ends.sort();
        near(ends[0], 5.15, 9.2);
        near(ends[1], 24.85, 9.2);
        assert!(diameter >= Nm(150_000) && diameter <= Nm(250_000), "{diameter:?}");
    }

    #[test]
    fn a_hairpin_is_probed_at_its_open_ends_not_at_its_bend() {
        let mm = |x: f64, y: f64| Point::from_m(x * 1e-3, y * 1e-3);
        let u = [(0.0, 0.0), (10.0, 0.0), (10.0, 3.0), (0.0, 3.0), (0.0, 2.6), (9.6, 2.6), (9.6, 0.4), (0.0, 0.4)];
        let (mut ends, _) = ends(&strip(u.iter().map(|&(x, y)| mm(x, y)).collect()), None).unwrap();
        ends.sort_by_key(|p| p.y);
        near(ends[0], 0.15, 0.2);
        near(ends[1], 0.15, 2.8);
    }

    #[test]
    fn the_way_can_begin_at_a_point() {
        let mm = |x: f64, y: f64| Point::from_m(x * 1e-3, y * 1e-3);
        let (ends, _) = ends(&strip(vec![mm(0.0, 0.0), mm(10.0, 0.0), mm(10.0, 1.0), mm(0.0, 1.0)]), Some(mm(10.0, 0.5))).unwrap();
        near(ends[0], 9.75, 0.5);
        near(ends[1], 0.25, ends[1].y.mm());
    }
}
