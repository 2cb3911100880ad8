//! Where do the grid lines go: fine at the edges of the copper, coarse between, every edge on a line.

use std::collections::BTreeMap;

use super::grid::{Patch, SAME_PLACE_M};
use super::outline::{Edge, Outline};

/// How fine the grid is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Meshing {
    /// Greatest cell, a share of the wavelength.
    pub greatest_m: f64,
    /// Density of lines over the plain grid: 1 is plain, 2 halves every cell.
    pub refine: f64,
    /// Height of the stairs that replace slants.
    pub stair_m: f64,
}

/// Cell scale at an edge, as a share of the strip's width.
const EDGE_SHARE: f64 = 0.1;
/// How fast cells grow away from an edge.
const GROWTH: f64 = 2.0;
/// The first cell at an edge of scale `e` is `e (exp(g) - 1)/g` = 3.2 e wide at most; a cell at a gap must not be wider than the gap.
const GAP_SHARE: f64 = 0.31;
/// Rooftops with constant charge in a cell make a strip look narrower by this share of the edge cell (measured for three gradings in the prototype of
/// this method, and again by `tests/field`); its edge lines are moved out by as much.
const EDGE_SHIFT: f64 = 0.125;
/// Where copper begins and ends at one line the line cannot move; cells there are this much smaller.
const TWO_SIDED: f64 = 0.25;
/// Samples of the density between two required lines.
const SAMPLES: usize = 1200;

/// A place where cells are small.
#[derive(Clone, Copy, Debug)]
struct Focus {
    at_m: f64,
    scale_m: f64,
}

/// The grid of a piece among its neighbours; `marks_m` are further lines it must have across x and across y.
pub fn patch(piece: usize, outlines: &[Outline], marks_m: [&[f64]; 2], size_m: [f64; 2], reach_m: f64, meshing: &Meshing) -> Patch {
    let own = &outlines[piece];
    let axes = [0, 1].map(|axis| Lines::new(axis, piece, outlines, marks_m[axis], size_m[axis], reach_m, meshing));
    // Which stretches between required lines hold copper at all.
    let middle = |lines: &[f64]| lines.windows(2).map(|w| 0.5 * (w[0] + w[1])).collect::<Vec<_>>();
    let (mx, my) = (middle(&axes[0].required), middle(&axes[1].required));
    let holds_x: Vec<bool> = mx.iter().map(|&x| my.iter().any(|&y| own.contains([x, y]))).collect();
    let holds_y: Vec<bool> = my.iter().map(|&y| mx.iter().any(|&x| own.contains([x, y]))).collect();
    let mut x_m = axes[0].filled(&holds_x, meshing);
    let mut y_m = axes[1].filled(&holds_y, meshing);
    let (cx, cy) = (middle(&x_m), middle(&y_m));
    let copper = cy.iter().flat_map(|&y| cx.iter().map(move |&x| [x, y])).map(|at| own.contains(at)).collect();
    axes[0].shift(&mut x_m);
    axes[1].shift(&mut y_m);
    Patch { x_m, y_m, copper }
}

/// The required lines across one axis.
struct Lines {
    required: Vec<f64>,
    foci: Vec<Focus>,
    /// Edge lines that move: where, and whether the copper is below.
    moving: Vec<(f64, bool)>,
}

impl Lines {
    fn new(axis: usize, piece: usize, outlines: &[Outline], marks: &[f64], length_m: f64, reach_m: f64, meshing: &Meshing) -> Lines {
        let own = &outlines[piece];
        let at_wall = |x: f64| x.abs() < SAME_PLACE_M || (x - length_m).abs() < SAME_PLACE_M;
        let mut scales: BTreeMap<i64, (f64, bool, bool)> = BTreeMap::new();
        let mut required: Vec<(f64, bool)> = marks.iter().map(|&m| (m, true)).collect();
        for edge in &own.edges[axis] {
            required.push((edge.at_m, true));
            if at_wall(edge.at_m) {
                continue;
            }
            let scale = (own.width_m * EDGE_SHARE).min(clearance(edge, axis, piece, outlines));
            let entry = scales.entry((edge.at_m * 1e9).round() as i64).or_insert((scale, false, false));
            entry.0 = entry.0.min(scale);
            if edge.copper_below {
                entry.1 = true;
            } else {
                entry.2 = true;
            }
        }
        let (mut foci, mut moving) = (Vec::new(), Vec::new());
        for (key, (scale, below, above)) in scales {
            let at_m = key as f64 * 1e-9;
            let two_sided = below && above;
            foci.push(Focus { at_m, scale_m: if two_sided { scale * TWO_SIDED } else { scale } });
            if !two_sided {
                moving.push((at_m, below));
            }
        }
        // The charge near a neighbour's edge changes on the scale of the distance to it.
        let other_axis = 1 - axis;
        for (index, other) in outlines.iter().enumerate() {
            for edge in other.edges[axis].iter().filter(|_| index != piece) {
                let apart = (edge.from_m - own.bounds_m[1][other_axis]).max(own.bounds_m[0][other_axis] - edge.to_m).max(0.0);
                let inside = edge.at_m > own.bounds_m[0][axis] && edge.at_m < own.bounds_m[1][axis];
                if inside && apart < reach_m {
                    foci.push(Focus { at_m: edge.at_m, scale_m: apart.max(own.width_m * EDGE_SHARE) });
                }
            }
        }
        required.extend(own.stairs_m[axis].iter().map(|&s| (s, false)));
        required.sort_by(|a, b| a.0.total_cmp(&b.0));
        // Stairs give way to lines of the drawing; two stairs closer than a third of a step become one.
        let mut kept: Vec<(f64, bool)> = Vec::new();
        for line in required {
            match kept.last_mut() {
                Some(last) if line.0 - last.0 < SAME_PLACE_M => last.1 |= line.1,
                Some(last) if line.0 - last.0 < meshing.stair_m / 3.0 && !(last.1 && line.1) => {
                    if line.1 {
                        *last = line;
                    }
                }
                _ => kept.push(line),
            }
        }
        Lines { required: kept.into_iter().map(|l| l.0).collect(), foci, moving }
    }

    /// Lines between the required ones by the density of the foci; stretches without copper stay empty.
    fn filled(&self, holds: &[bool], meshing: &Meshing) -> Vec<f64> {
        let mut lines = Vec::new();
        for (pair, &holds) in self.required.windows(2).zip(holds) {
            let (from, to) = (pair[0], pair[1]);
            lines.push(from);
            if !holds {
                continue;
            }
            let density = |x: f64| {
                let scale = self.foci.iter().map(|f| f.scale_m + GROWTH * (x - f.at_m).abs()).fold(meshing.greatest_m, f64::min);
                meshing.refine / scale
            };
            let step = (to - from) / SAMPLES as f64;
            let mut sums = Vec::with_capacity(SAMPLES + 1);
            let mut sum = 0.0;
            sums.push(sum);
            for i in 0..SAMPLES {
                sum += step * density(from + (i as f64 + 0.5) * step);
                sums.push(sum);
            }
            // A hair below a whole number is that number.
            let count = (sum - 0.01).ceil().max(1.0) as usize;
            let mut at = 0;
            for line in 1..count {
                let wanted = sum * line as f64 / count as f64;
                while at + 1 < SAMPLES && sums[at + 1] < wanted {
                    at += 1;
                }
                let share = (wanted - sums[at]) / (sums[at + 1] - sums[at]);
                lines.push(from + step * (at as f64 + share));
            }
        }
        lines.extend(self.required.last());
        lines
    }

    fn shift(&self, lines: &mut [f64]) {
        let before = lines.to_vec();
        for &(at, below) in &self.moving {
            let Some(i) = before.iter().position(|&x| (x - at).abs() < SAME_PLACE_M) else { continue };
            let inner = if below { i.checked_sub(1) } else { Some(i + 1) };
            if let Some(&inner) = inner.and_then(|n| before.get(n)) {
                lines[i] += EDGE_SHIFT * (at - inner);
            }
        }
    }
}

/// Cell scale an edge asks for: a share of the gap outwards and of the local width inwards.
fn clearance(edge: &Edge, axis: usize, piece: usize, outlines: &[Outline]) -> f64 {
    let mut scale = f64::INFINITY;
    for (index, outline) in outlines.iter().enumerate() {
        for other in outline.edges[axis].iter().filter(|other| other.copper_below != edge.copper_below && edge.shared_m(other) > 0.0) {
            let outwards = if edge.copper_below { other.at_m - edge.at_m } else { edge.at_m - other.at_m };
            if outwards > 0.0 {
                scale = scale.min(GAP_SHARE * outwards);
            } else if index == piece && outwards < 0.0 {
                scale = scale.min(-EDGE_SHARE * outwards);
            }
        }
    }
    scale
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::artwork::shape::{Region, rectangle};
    use crate::base::Point;

    #[test]
    fn edges_lie_on_lines_moved_out_by_an_eighth_of_the_cell() {
        let strip = Region::union_of(&[rectangle(Point::new(5_000_000, 4_000_000), Point::new(15_000_000, 5_000_000))]);
        let outline = Outline::new(&strip.pieces[0], 0.1e-3);
        let meshing = Meshing { greatest_m: 2e-3, refine: 1.0, stair_m: 0.1e-3 };
        let patch = patch(0, &[outline], [&[], &[]], [20e-3, 10e-3], 1e-3, &meshing);
        let y = &patch.y_m;
        let drawn_cell = (y[1] - y[0]) / (1.0 + EDGE_SHIFT);
        assert!((y[0] + EDGE_SHIFT * drawn_cell - 4e-3).abs() < 1e-12);
        assert!(y.windows(2).all(|w| w[1] > w[0]) && patch.copper.iter().all(|&c| c));
        assert!((patch.x_m[0] + patch.x_m[patch.columns()] - 20e-3).abs() < 1e-9, "symmetric about the middle");
    }
}
