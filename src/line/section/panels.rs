//! Where do the charges sit? The contour of one strip, cut into panels that shrink towards the corners.
//!
//! Nodes of a side: s(u) = u^3 / (u^3 + (1-u)^3), u equally spaced, so that the charge, which grows like r^(-1/3) at a right-angled corner and
//! like r^(-1/2) at the edge of a sheet, is smooth in u. The numbers of panels are fixed: results are smooth in every size.

use super::green::GAUSS_8;

/// Panels along the width and along the thickness.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct Grid {
    pub(super) width: usize,
    pub(super) thickness: usize,
}

impl Grid {
    pub(super) const fn new(width: usize) -> Grid {
        Grid { width, thickness: width / 2 }
    }

    /// Twice as fine.
    pub(super) const fn doubled(self) -> Grid {
        Grid { width: 2 * self.width, thickness: 2 * self.thickness }
    }

    /// Panels of one strip.
    pub(super) fn panels(self, has_thickness: bool) -> usize {
        if has_thickness { 2 * (self.width + self.thickness) } else { self.width }
    }
}

/// Which face of a strip.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Face {
    Foot,
    Top,
    Left,
    Right,
}

/// One straight side.
pub(super) struct Side {
    pub(super) face: Face,
    /// Start and unit direction.
    pub(super) x: f64,
    pub(super) z: f64,
    pub(super) along_x: f64,
    pub(super) along_z: f64,
    /// Distance of each node from the start.
    pub(super) nodes: Vec<f64>,
    /// 1 / length of each panel.
    pub(super) inverse: Vec<f64>,
    /// Number of the side's first panel on its strip.
    pub(super) first: usize,
}

/// One strip's contour.
pub(super) struct Contour {
    pub(super) sides: Vec<Side>,
    /// Middle of each panel.
    pub(super) x: Vec<f64>,
    pub(super) z: Vec<f64>,
}

/// How points and panels of an upright or slanted side are reached from its points at the tabulated heights.
pub(super) struct Interpolation {
    /// Panel by panel: weight of each height at the panel's middle.
    pub(super) at_middle: Vec<Vec<f64>>,
    /// Panel by panel: mean weight of each height over the panel.
    pub(super) over_panel: Vec<Vec<f64>>,
}

/// s(u) with the smaller of s and 1 - s kept to full digits.
pub(super) fn graded(count: usize, length: f64) -> Vec<f64> {
    (0..=count)
        .map(|i| {
            let (u, v) = (i as f64 / count as f64, (count - i) as f64 / count as f64);
            let (a, b) = (u * u * u, v * v * v);
            if 2 * i <= count { length * (a / (a + b)) } else { length - length * (b / (a + b)) }
        })
        .collect()
}

fn graded_inverse(count: usize, length: f64) -> Vec<f64> {
    // From the smaller end on both halves: differences near the far end would lose digits.
    let from_start = |i: usize| {
        let (u, v) = (i as f64 / count as f64, (count - i) as f64 / count as f64);
        let (a, b) = (u * u * u, v * v * v);
        a / (a + b)
    };
    (0..count)
        .map(|i| {
            let fraction =
                if 2 * i < count { from_start(i + 1) - from_start(i) } else { from_start(count - i) - from_start(count - i - 1) };
            1.0 / (length * fraction)
        })
        .collect()
}

/// 1 / (ds/du du) at the middle of each panel: turns its charge into the density that, squared and summed, integrates the square of a charge like
/// r^(-1/3) by the midpoint rule in u (the panel's mean density would miss a quarter of the corner panel's share).
pub(super) fn inverse_spread(count: usize, length: f64) -> impl Iterator<Item = f64> {
    let step = 1.0 / count as f64;
    (0..count).map(move |i| {
        let (u, v) = ((i as f64 + 0.5) * step, 1.0 - (i as f64 + 0.5) * step);
        let sum = u * u * u + v * v * v;
        sum * sum / (3.0 * u * u * v * v * length * step)
    })
}

impl Side {
    pub(super) fn length(&self) -> f64 {
        self.nodes.last().copied().unwrap_or(0.0)
    }
}

impl Contour {
    /// The contour of a strip whose foot starts at `left_m`.
    pub(super) fn new(left_m: f64, width_m: f64, thickness_m: f64, undercut_m: f64, grid: Grid) -> Contour {
        let right = left_m + width_m;
        let mut contour = Contour { sides: Vec::with_capacity(4), x: Vec::new(), z: Vec::new() };
        contour.push(Face::Foot, left_m, 0.0, (1.0, 0.0), width_m, grid.width);
        if thickness_m > 0.0 {
            let slant = undercut_m.hypot(thickness_m);
            contour.push(Face::Left, left_m, 0.0, (undercut_m / slant, thickness_m / slant), slant, grid.thickness);
            contour.push(Face::Top, left_m + undercut_m, thickness_m, (1.0, 0.0), width_m - 2.0 * undercut_m, grid.width);
            contour.push(Face::Right, right, 0.0, (-undercut_m / slant, thickness_m / slant), slant, grid.thickness);
        }
        contour
    }

    fn push(&mut self, face: Face, x: f64, z: f64, (along_x, along_z): (f64, f64), length: f64, count: usize) {
        let nodes = graded(count, length);
        let first = self.x.len();
        for pair in nodes.windows(2) {
            let middle = 0.5 * (pair[0] + pair[1]);
            self.x.push(x + along_x * middle);
            self.z.push(z + along_z * middle);
        }
        self.sides.push(Side { face, x, z, along_x, along_z, inverse: graded_inverse(count, length), nodes, first });
    }

    /// Panels of this strip.
    pub(super) fn len(&self) -> usize {
        self.x.len()
    }
}

impl Interpolation {
    /// For sides of `count` panels through the tabulated heights.
    pub(super) fn new(heights: &[f64], count: usize) -> Interpolation {
        let top = heights.last().copied().unwrap_or(0.0);
        let nodes = graded(count, top);
        let mut out = Interpolation { at_middle: Vec::new(), over_panel: Vec::new() };
        if top == 0.0 {
            return out;
        }
        for pair in nodes.windows(2) {
            let middle = 0.5 * (pair[0] + pair[1]);
            let half = 0.5 * (pair[1] - pair[0]);
            out.at_middle.push(lagrange(heights, middle));
            // 8 points are exact up to degree 15, the highest that occurs.
            let mut mean = vec![0.0; heights.len()];
            for (node, weight) in GAUSS_8 {
                for z in [middle - half * node, middle + half * node] {
                    for (m, l) in mean.iter_mut().zip(lagrange(heights, z)) {
                        *m += 0.5 * weight * l;
                    }
                }
            }
            out.over_panel.push(mean);
        }
        out
    }
}

pub(super) fn lagrange(nodes: &[f64], z: f64) -> Vec<f64> {
    (0..nodes.len()).map(|i| (0..nodes.len()).filter(|&j| j != i).map(|j| (z - nodes[j]) / (nodes[i] - nodes[j])).product()).collect()
}
