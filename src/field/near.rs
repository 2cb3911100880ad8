//! What do close pieces of copper do to each other: the part of the potential integrals with the singularity, once for all frequencies.
//!
//! `1/k = (2/sqrt pi) int exp(-k^2 t^2) dt`, cut at `tc` as in Ewald's split (P. P. Ewald, Ann. Phys. 64, 1921). For `t < tc` the double sum over the
//! box's modes factorises into heat kernels along x and along y, whose overlaps with pulses and triangles are closed forms; no integral over space
//! is ever done by quadrature.

use rayon::prelude::*;

use super::grid::{Family, Patch, Profile};

/// Beyond this many `t` the heat kernel is below exp(-13^2/4) = 4e-19.
const REACH: f64 = 13.0;
/// Gauss points in each panel of `t`; four already give 1e-7 on the S-parameters.
const POINTS: usize = 8;
/// First panel of `t`, as a share of the smallest cell.
const FIRST_PANEL: f64 = 1.0 / 6.0;
/// More panels than this would need cells of 1e-12 of the cut.
const MOST_PANELS: usize = 40;

/// Nodes and weights of the integral over `t`.
#[derive(Clone, Debug)]
pub struct Cut {
    t: Vec<f64>,
    weight: Vec<f64>,
}

impl Cut {
    /// Panels doubling from a share of the smallest cell up to the cut.
    pub fn new(cut_m: f64, smallest_cell_m: f64) -> Cut {
        let mut edges = vec![0.0];
        let mut edge = smallest_cell_m * FIRST_PANEL;
        while edge < 0.8 * cut_m && edges.len() < MOST_PANELS {
            edges.push(edge);
            edge *= 2.0;
        }
        edges.push(cut_m);
        let (x, w) = gauss_legendre();
        let mut cut = Cut { t: Vec::new(), weight: Vec::new() };
        for pair in edges.windows(2) {
            let (middle, half) = (0.5 * (pair[0] + pair[1]), 0.5 * (pair[1] - pair[0]));
            for i in 0..POINTS {
                cut.t.push(middle + half * x[i]);
                cut.weight.push(half * w[i]);
            }
        }
        cut
    }
}

/// Nodes and weights of the eight-point Gauss-Legendre rule on [-1, 1], by Newton's method on the Legendre recurrence.
fn gauss_legendre() -> ([f64; POINTS], [f64; POINTS]) {
    let n = POINTS as f64;
    let (mut x, mut w) = ([0.0; POINTS], [0.0; POINTS]);
    for i in 0..POINTS {
        let mut root = (std::f64::consts::PI * (i as f64 + 0.75) / (n + 0.5)).cos();
        let mut slope = 1.0;
        // Quadratic convergence from an estimate good to 1e-3.
        for _ in 0..8 {
            let (mut before, mut now) = (1.0, root);
            for k in 2..=POINTS {
                let k = k as f64;
                (before, now) = (now, ((2.0 * k - 1.0) * root * now - (k - 1.0) * before) / k);
            }
            slope = n * (root * now - before) / (root * root - 1.0);
            root -= now / slope;
        }
        x[i] = root;
        w[i] = 2.0 / ((1.0 - root * root) * slope * slope);
    }
    (x, w)
}

/// The two frequency-independent matrices of a family, row-major, filled up to the end of each row's own group.
#[derive(Clone, Debug)]
pub struct Near {
    /// Share of `1/k`.
    pub first: Vec<f64>,
    /// Share of `1/k^3`.
    pub third: Vec<f64>,
}

impl Near {
    /// Builds both matrices.
    pub fn new(family: &Family, patches: &[Patch], size_m: [f64; 2], cut: &Cut) -> Near {
        let n = family.size;
        let mut near = Near { first: vec![0.0; n * n], third: vec![0.0; n * n] };
        for p in 0..patches.len() {
            for q in 0..=p {
                let inner = Overlaps::new(&patches[p].x_m, &patches[q].x_m, family.inner, size_m[0], cut);
                let outer = Overlaps::new(&patches[p].y_m, &patches[q].y_m, family.outer, size_m[1], cut);
                let chunks = rows_of_groups(family, &mut near.first).into_iter().zip(rows_of_groups(family, &mut near.third));
                let mine: Vec<_> = family.groups.iter().zip(chunks).filter(|(group, _)| group.patch == p).collect();
                mine.into_par_iter().for_each(|(group, (first, third))| {
                    for other in family.groups.iter().take_while(|other| other.start <= group.start).filter(|other| other.patch == q) {
                        let (y, y_from) = outer.of(group.outer, other.outer);
                        for (row, &a) in group.inner.iter().enumerate() {
                            for (column, &b) in other.inner.iter().enumerate() {
                                let (x, x_from) = inner.of(a, b);
                                let (one, three) = dot(x, y, x_from.max(y_from), cut);
                                first[row * n + other.start + column] = one;
                                third[row * n + other.start + column] = three;
                            }
                        }
                    }
                });
            }
        }
        near
    }
}

/// The rows of each group of a row-major square matrix.
pub fn rows_of_groups<'a>(family: &Family, matrix: &'a mut [f64]) -> Vec<&'a mut [f64]> {
    let mut rest = matrix;
    let mut chunks = Vec::with_capacity(family.groups.len());
    for group in &family.groups {
        let (chunk, left) = rest.split_at_mut((group.inner.len() * family.size).min(rest.len()));
        chunks.push(chunk);
        rest = left;
    }
    chunks
}

/// `(2/sqrt pi) sum w X Y` and `(4/sqrt pi) sum w t^2 X Y`.
fn dot(x: &[f64], y: &[f64], from: usize, cut: &Cut) -> (f64, f64) {
    let (mut one, mut three) = (0.0, 0.0);
    let t = &cut.t;
    for i in from..t.len() {
        let product = cut.weight[i] * x[i] * y[i];
        one += product;
        three += product * t[i] * t[i];
    }
    let root = 2.0 / std::f64::consts::PI.sqrt();
    (root * one, 2.0 * root * three)
}

/// Heat-kernel overlaps of every function on one set of lines with every function on another, at every `t`.
struct Overlaps {
    values: Vec<f64>,
    from: Vec<u16>,
    columns: usize,
    points: usize,
}

impl Overlaps {
    fn new(a: &[f64], b: &[f64], profile: Profile, length_m: f64, cut: &Cut) -> Overlaps {
        let count = |lines: &[f64]| match profile {
            Profile::Pulse => lines.len() - 1,
            Profile::Triangle => lines.len(),
        };
        let (rows, columns, points) = (count(a), count(b), cut.t.len());
        let sign = match profile {
            // Two integrations by parts for the pulses' jumps, four for the triangles' kinks.
            Profile::Pulse => -1.0,
            Profile::Triangle => 1.0,
        };
        // Half a triangle at a wall reaches, with its mirror image, to both sides of it.
        let ends = |lines: &[f64], i: usize| match profile {
            Profile::Pulse => (lines[i], lines[i + 1]),
            Profile::Triangle if i == 0 => (2.0 * lines[0] - lines[1], lines[1]),
            Profile::Triangle if i + 1 == lines.len() => (lines[i - 1], 2.0 * lines[i] - lines[i - 1]),
            Profile::Triangle => (lines[i - 1], lines[i + 1]),
        };
        let mut overlaps = Overlaps { values: vec![0.0; rows * columns * points], from: vec![0; rows * columns], columns, points };
        let b_nodes: Vec<_> = (0..columns).map(|j| profile.nodes(b, j)).collect();
        let work: Vec<_> = overlaps.values.chunks_mut(columns * points).zip(overlaps.from.chunks_mut(columns)).enumerate().collect();
        work.into_par_iter().for_each(|(i, (values, from))| {
            let (nodes, node_count) = profile.nodes(a, i);
            let (a0, a1) = ends(a, i);
            // First t at which the function, its image in the wall at zero and its image in the far wall are felt.
            let felt: Vec<[usize; 3]> = (0..columns)
                .map(|j| {
                    let (b0, b1) = ends(b, j);
                    [(b0, b1), (-b1, -b0), (2.0 * length_m - b1, 2.0 * length_m - b0)].map(|(c0, c1)| {
                        let apart = (c0 - a1).max(a0 - c1).max(0.0);
                        cut.t.partition_point(|t| t * REACH < apart)
                    })
                })
                .collect();
            for (first, felt) in from.iter_mut().zip(&felt) {
                *first = felt.iter().copied().min().unwrap_or(points) as u16;
            }
            let mut at_lines = vec![0.0; b.len()];
            for image in 0..3 {
                for (k, &t) in cut.t.iter().enumerate() {
                    if felt.iter().all(|f| f[image] > k) {
                        continue;
                    }
                    at_lines.fill(0.0);
                    for &(line, weight) in &nodes[..node_count] {
                        let x = a[line];
                        for (value, &xb) in at_lines.iter_mut().zip(b) {
                            // The walls are mirrors, even for triangles and odd for pulses: kinks and jumps keep their sign.
                            let u = match image {
                                0 => x - xb,
                                1 => x + xb,
                                _ => x - 2.0 * length_m + xb,
                            };
                            *value += weight * antiderivative(profile, u, t);
                        }
                    }
                    for j in (0..columns).filter(|&j| felt[j][image] <= k) {
                        let (nodes, count) = b_nodes[j];
                        values[j * points + k] += sign * nodes[..count].iter().map(|&(line, weight)| weight * at_lines[line]).sum::<f64>();
                    }
                }
            }
        });
        overlaps
    }

    fn of(&self, i: usize, j: usize) -> (&[f64], usize) {
        let at = i * self.columns + j;
        (&self.values[at * self.points..(at + 1) * self.points], usize::from(self.from[at]))
    }
}

/// Second (pulses) or fourth (triangles) antiderivative of the heat kernel `exp(-u^2/4t^2)/(2 t sqrt pi)`.
fn antiderivative(profile: Profile, u: f64, t: f64) -> f64 {
    let z = u / (2.0 * t);
    // Beyond 6.5 the error function is one and the exponential below 5e-19.
    let (g1, bell) =
        if z.abs() > 6.5 { (0.5f64.copysign(z), 0.0) } else { (0.5 * libm::erf(z), t / std::f64::consts::PI.sqrt() * (-z * z).exp()) };
    let g2 = u * g1 + bell;
    match profile {
        Profile::Pulse => g2,
        Profile::Triangle => {
            let variance = 2.0 * t * t;
            let g3 = 0.5 * (u * g2 + variance * g1);
            (u * g3 + variance * g2) / 3.0
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn overlaps_equal_the_modal_sum() {
        // Against the cosine and sine series of the heat kernel in a box, summed to exp(-(k t)^2) < 1e-20.
        let (length, t) = (3.0, 0.11);
        let (a, b) = ([0.0, 0.2, 0.5, 0.6], [2.5, 2.8, 3.0]);
        let cut = Cut { t: vec![t], weight: vec![1.0] };
        let series = |profile: Profile, one: &[f64], i: usize, other: &[f64], j: usize| -> f64 {
            (0..120)
                .map(|m| {
                    let k = f64::from(m) * std::f64::consts::PI / length;
                    let transform = |lines: &[f64], index: usize| -> f64 {
                        // Simpson's rule on the function itself, no closed form.
                        let steps = 4000;
                        let value = |x: f64| {
                            let p = match profile {
                                Profile::Pulse => f64::from(u8::from(x >= lines[index] && x <= lines[index + 1])),
                                Profile::Triangle => {
                                    let up = if index == 0 { 1.0 } else { (x - lines[index - 1]) / (lines[index] - lines[index - 1]) };
                                    let down = if index + 1 == lines.len() {
                                        1.0
                                    } else {
                                        (lines[index + 1] - x) / (lines[index + 1] - lines[index])
                                    };
                                    up.min(down).clamp(0.0, 1.0)
                                }
                            };
                            p * if profile == Profile::Pulse { (k * x).sin() } else { (k * x).cos() }
                        };
                        let (from, to) = match profile {
                            Profile::Pulse => (lines[index], lines[index + 1]),
                            Profile::Triangle => (lines[index.saturating_sub(1)], lines[(index + 1).min(lines.len() - 1)]),
                        };
                        let h = (to - from) / f64::from(steps);
                        (0..=steps)
                            .map(|s| {
                                let weight = if s == 0 || s == steps { 1.0 } else { f64::from(2 + 2 * (s % 2)) };
                                weight * value(from + h * f64::from(s)) * h / 3.0
                            })
                            .sum()
                    };
                    let norm = if m == 0 { 1.0 / length } else { 2.0 / length };
                    norm * transform(one, i) * transform(other, j) * (-(k * t).powi(2)).exp()
                })
                .sum()
        };
        for (one, other) in [(&a[..], &a[..]), (&a[..], &b[..]), (&b[..], &b[..])] {
            for profile in [Profile::Pulse, Profile::Triangle] {
                let table = Overlaps::new(one, other, profile, length, &cut);
                let count = |lines: &[f64]| if profile == Profile::Pulse { lines.len() - 1 } else { lines.len() };
                // Half a triangle stands at a wall only.
                let stands = |lines: &[f64], i: usize| {
                    profile == Profile::Pulse
                        || (i > 0 && i + 1 < lines.len())
                        || lines[i].abs() < 1e-12
                        || (lines[i] - length).abs() < 1e-12
                };
                for i in (0..count(one)).filter(|&i| stands(one, i)) {
                    for j in (0..count(other)).filter(|&j| stands(other, j)) {
                        let (found, from) = table.of(i, j);
                        let expected = series(profile, one, i, other, j);
                        let found = if from == 0 { found[0] } else { 0.0 };
                        // Simpson's rule errs by 1e-6 at the triangle's kink when it falls between two of its points.
                        assert!((found - expected).abs() < 1e-6, "{profile:?} {i} {j}: {found} {expected}");
                    }
                }
            }
        }
    }

    #[test]
    fn the_rule_integrates_a_polynomial_of_degree_15() {
        let (x, w) = gauss_legendre();
        let sum: f64 = (0..POINTS).map(|i| w[i] * (x[i].powi(14) + x[i].powi(15))).sum();
        assert!((sum - 2.0 / 15.0).abs() < 1e-14);
    }
}
