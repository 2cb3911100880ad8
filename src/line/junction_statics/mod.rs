//! What excess charge gathers where strips end, face each other or change width: our own static three-dimensional solution.
//!
//! Thin strips on a grounded slab without a lid. Every strip runs off to infinity with the charge of its own cross-section; only what differs from that is
//! sought, on panels near the discontinuity and, growing, out to [`REACH`] heights (excess-charge formulation: P. Silvester, P. Benedek, "Equivalent
//! capacitances of microstrip open circuits", IEEE Trans. MTT-20, 1972, pp. 511-516; "Microstrip discontinuity capacitances for right-angle bends, T junctions,
//! and crossings", MTT-21, 1973, pp. 341-346; gaps: M. Maeda, MTT-20, 1972, pp. 390-396). Panels of constant density, the potential matched at their middles, by
//! the same rows as the cross-section, so that a strip that just goes on has no excess.
//!
//! Uniaxial laminates by the exact transformation of height and permittivity; copper thickness is not in it.

mod kernel;

use super::AsBuilt;
use faer::linalg::solvers::Solve;
use kernel::Kernel;

/// How far panels reach along each strip, in heights; the excess beyond falls with the distance and is some thousandths of the whole.
const REACH: f64 = 60.0;
/// Panels along a strip for each row across it.
const COLUMNS_PER_ROW: f64 = 1.4;
/// Rows across a strip on the coarser and finer mesh, between which the result is carried to the limit.
const ROWS: [usize; 2] = [6, 10];
/// Greatest growth from panel to panel along a strip.
const MOST_GROWTH: f64 = 20.0;

/// Longest first panel at a gap, over the gap.
pub(super) const FINEST_OF_GAP: f64 = 0.1;

const EPS0: f64 = 8.854_187_812_8e-12;

/// A strip that runs from a plane to infinity: along +x when `forward`, else along -x.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Arm {
    /// Width, m.
    pub(super) width_m: f64,
    /// Its end, m.
    pub(super) start_m: f64,
    /// Its centre line, m.
    pub(super) centre_m: f64,
    /// Towards +x.
    pub(super) forward: bool,
    /// Arms of one conductor bear one number, from 0.
    pub(super) conductor: usize,
}

struct Panel {
    x: [f64; 2],
    y: [f64; 2],
    conductor: usize,
}

/// Excess charge (F: per volt) on each conductor for one volt on each: row-major, `conductors` squared; `None` when the sizes are no geometry.
///
/// # Accuracy
/// Carried to the limit from two meshes; see the tests of `gap` and `open_end`: 1 to 2 %.
pub(super) fn excess_capacitance_f(board: &AsBuilt, arms: &[Arm], conductors: usize, finest_m: f64) -> Option<Vec<f64>> {
    let (normal, in_plane) = (board.permittivity, board.in_plane_permittivity);
    let h_m = board.thickness_m * (in_plane / normal).sqrt();
    let er = (normal * in_plane).sqrt();
    let kernel = Kernel::new(er, 4.0 * REACH);
    let [coarse, fine] = ROWS.map(|rows| excess(&kernel, arms, conductors, h_m, finest_m / h_m, rows, REACH));
    let (coarse, fine) = (coarse?, fine?);
    let scale = 2.0 * std::f64::consts::PI * EPS0 * (1.0 + er) * h_m;
    // Rows shrink towards the edges as the inverse square of their number, and with them the error of the edge charge.
    let [a, b] = ROWS.map(|rows| (rows as f64).powi(-2));
    let limit: Vec<f64> = coarse.iter().zip(&fine).map(|(c, f)| scale * (f + (f - c) * b / (a - b))).collect();
    limit.iter().all(|v| v.is_finite()).then_some(limit)
}

fn excess(kernel: &Kernel, arms: &[Arm], conductors: usize, h_m: f64, finest: f64, rows: usize, reach: f64) -> Option<Vec<f64>> {
    // A mesh symmetric about the common centre line needs its upper half only.
    let centre = arms.first()?.centre_m;
    let mirrored = arms.iter().all(|arm| arm.centre_m == centre);
    let mut panels = Vec::new();
    let mut tails = Vec::new();
    for arm in arms {
        let width = arm.width_m / h_m;
        let middle = (arm.centre_m - centre) / h_m;
        let edge = |i: usize| middle - 0.5 * width * (std::f64::consts::PI * i as f64 / rows as f64).cos();
        let all: Vec<[f64; 2]> = (0..rows).map(|i| [edge(i), edge(i + 1)]).collect();
        let density = cross_section(kernel, &all)?;
        let used = if mirrored { rows / 2 } else { 0 };
        let start = arm.start_m / h_m;
        let first = (all.first()?[1] - all.first()?[0]).min(finest * 10.0 / rows as f64);
        // As many panels whatever the sizes, growing evenly, so that the result is smooth in them.
        let columns = (COLUMNS_PER_ROW * rows as f64).round() as i32;
        let reached = |growth: f64| first * (growth.powi(columns) - 1.0) / (growth - 1.0) - reach;
        let growth = crate::base::bisect(reached, 1.0 + 1e-9, MOST_GROWTH, 1e-9)?;
        let (mut near, mut cell) = (0.0, first);
        for _ in 0..columns {
            let far = near + cell;
            let x = if arm.forward { [start + near, start + far] } else { [start - far, start - near] };
            for y in all.iter().skip(used) {
                panels.push(Panel { x, y: *y, conductor: arm.conductor });
            }
            (near, cell) = (far, cell * growth);
        }
        tails.push((*arm, start, all, density));
    }
    let n = panels.len();
    if n == 0 || panels.iter().any(|p| !(p.x[1] > p.x[0] && p.y[1] > p.y[0])) {
        return None;
    }
    let mut matrix = faer::Mat::<f64>::zeros(n, n);
    let mut right = faer::Mat::<f64>::zeros(n, conductors);
    for (i, at) in panels.iter().enumerate() {
        let (px, py) = (0.5 * (at.x[0] + at.x[1]), 0.5 * (at.y[0] + at.y[1]));
        for (j, from) in panels.iter().enumerate() {
            let x = [from.x[0] - px, from.x[1] - px];
            let mut value = kernel.rectangle(x, [from.y[0] - py, from.y[1] - py]);
            if mirrored {
                value += kernel.rectangle(x, [-from.y[1] - py, -from.y[0] - py]);
            }
            matrix[(i, j)] = value;
        }
        right[(i, at.conductor)] += 1.0;
        for (arm, start, rows, density) in &tails {
            let from = if arm.forward { start - px } else { px - start };
            let potential: f64 = rows.iter().zip(density).map(|(y, q)| q * kernel.half_strip(from, [y[0] - py, y[1] - py])).sum();
            right[(i, arm.conductor)] -= potential;
        }
    }
    let charge = matrix.partial_piv_lu().solve(&right);
    let mut sums = vec![0.0; conductors * conductors];
    let halves = if mirrored { 2.0 } else { 1.0 };
    for (i, panel) in panels.iter().enumerate() {
        let area = (panel.x[1] - panel.x[0]) * (panel.y[1] - panel.y[0]);
        for driven in 0..conductors {
            if let Some(sum) = sums.get_mut(panel.conductor * conductors + driven) {
                *sum += halves * area * charge[(i, driven)];
            }
        }
    }
    Some(sums)
}

/// Charge density of each row of an infinite strip at unit potential.
fn cross_section(kernel: &Kernel, rows: &[[f64; 2]]) -> Option<Vec<f64>> {
    let n = rows.len();
    let mut matrix = Vec::with_capacity(n * n);
    for at in rows {
        let y = 0.5 * (at[0] + at[1]);
        matrix.extend(rows.iter().map(|from| kernel.whole_strip([from[0] - y, from[1] - y])));
    }
    let mut density = vec![1.0; n];
    crate::base::solve_in_place(&mut matrix, &mut density).then_some(density)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn board(er: f64) -> AsBuilt {
        AsBuilt { thickness_m: 1e-3, ..AsBuilt::for_tests(er, 0.0) }
    }

    #[test]
    fn finer_panels_change_little() {
        // er, w/h, s/w (0: an open end).
        for (er, u, s) in
            [(2.2, 1.0, 0.0), (9.8, 1.0, 0.0), (9.6, 1.0, 0.5), (9.6, 1.0, 0.1), (3.0, 2.5, 0.2), (2.2, 3.0, 0.05), (3.0, 2.5, 1.0)]
        {
            let board = board(er);
            let w = u * 1e-3;
            let end = |sign: f64, number: usize| Arm {
                width_m: w,
                start_m: 0.5 * sign * s * w,
                centre_m: 0.0,
                forward: sign > 0.0,
                conductor: number,
            };
            let arms = [end(-1.0, 0), end(1.0, 1)];
            let (arms, n) = if s == 0.0 { (&arms[..1], 1) } else { (&arms[..], 2) };
            let finest_m = if s == 0.0 { 1e-3 } else { FINEST_OF_GAP * s * w };
            let kernel = Kernel::new(er, 4.0 * REACH);
            let scale = 2.0 * std::f64::consts::PI * EPS0 * (1.0 + er) * 1e-3;
            let fine = excess(&kernel, arms, n, 1e-3, finest_m / 1e-3, 28, 2.0 * REACH).unwrap();
            let time = std::time::Instant::now();
            let ours = excess_capacitance_f(&board, arms, n, finest_m).unwrap();
            println!("er {er} u {u} s/w {s}: {:?}", time.elapsed());
            for (a, b) in ours.iter().zip(&fine) {
                // The accuracy claimed.
                println!("   {:+.2} %", 100.0 * (a / scale / b - 1.0));
                assert!((a / scale / b - 1.0).abs() < 0.02, "{ours:?} {fine:?}");
            }
        }
    }
}
