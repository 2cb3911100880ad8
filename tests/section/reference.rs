//! The slow, plain judge: finite differences on a graded grid over the half-plane right of the middle, nothing in common with the solver.
//!
//! Five-point scheme from the energy of piecewise-constant permittivity (uniaxial: its own value along x and z), conjugate gradients,
//! C from the energy (its error is the square of the potential's, so the gradients stop early). One strip or two equal ones, upright sides, any layers, lid, walls and coat. Error falls with the square of the cell size.

use stripwright::line::section::CrossSection;

/// Potential on the plane of symmetry: free (even mode, one strip) or zero (odd mode).
#[derive(Clone, Copy, PartialEq)]
pub enum Plane {
    Even,
    Odd,
}

/// Open sides end this many heights away; energy beyond falls with the square.
const FAR: f64 = 400.0;

/// Capacitance per line in units of eps0. `cells`: about this many across each feature.
pub fn capacitance(section: &CrossSection, plane: Plane, with_dielectric: bool, cells: f64) -> f64 {
    let coarse = on_grid(section, plane, with_dielectric, cells);
    let fine = on_grid(section, plane, with_dielectric, 2.0 * cells);
    // Second order in the cell size.
    fine + (fine - coarse) / 3.0
}

/// The same on one grid.
pub fn on_grid(section: &CrossSection, plane: Plane, with_dielectric: bool, cells: f64) -> f64 {
    assert_eq!(section.copper.undercut_m, 0.0, "the judge knows upright sides only");
    let thickness = section.copper.thickness_m;
    let strip = section.strips[0];
    let (left, right) = match section.strips.len() {
        1 => (0.0, 0.5 * strip.width_m),
        _ => (0.5 * section.strips[1].gap_before_m, 0.5 * section.strips[1].gap_before_m + strip.width_m),
    };
    let height: f64 = section.layers.iter().map(|layer| layer.thickness_m).sum();
    let scale = height + thickness;
    let far_x = section.housing.wall_m.map_or(right + FAR * scale, |wall| right + wall);
    let far_z = section.housing.lid_m.unwrap_or(FAR * scale);
    let mut breaks_x = vec![0.0, right, far_x];
    if left > 0.0 {
        breaks_x.push(left);
    }
    let mut breaks_z = vec![-height, 0.0, far_z];
    let mut z = -height;
    for layer in &section.layers {
        z += layer.thickness_m;
        if z < -1e-12 {
            breaks_z.push(z);
        }
    }
    if thickness > 0.0 {
        breaks_z.push(thickness);
    }
    if let Some(coat) = section.coat {
        breaks_x.push(right + coat.on_copper_m);
        if left > 0.0 {
            breaks_x.push(left - coat.on_copper_m);
        }
        breaks_z.push(coat.on_laminate_m);
        breaks_z.push(thickness + coat.on_copper_m);
    }
    let xs = graded(&mut breaks_x, cells);
    let zs = graded(&mut breaks_z, cells);
    let (columns, rows) = (xs.len(), zs.len());
    // Permittivity of each cell along x and z.
    let permittivity = |x: f64, z: f64| -> (f64, f64) {
        if !with_dielectric {
            return (1.0, 1.0);
        }
        if z < 0.0 {
            let mut top = -height;
            for layer in &section.layers {
                top += layer.thickness_m;
                if z < top {
                    return (layer.in_plane_permittivity, layer.permittivity);
                }
            }
        }
        if let Some(coat) = section.coat {
            let beside = x > left - coat.on_copper_m && x < right + coat.on_copper_m && z < thickness + coat.on_copper_m;
            if z < coat.on_laminate_m || beside {
                return (coat.permittivity, coat.permittivity);
            }
        }
        (1.0, 1.0)
    };
    let mut east = vec![0.0; columns * rows];
    let mut north = vec![0.0; columns * rows];
    for j in 0..rows - 1 {
        for i in 0..columns - 1 {
            let (dx, dz) = (xs[i + 1] - xs[i], zs[j + 1] - zs[j]);
            let (along, across) = permittivity(0.5 * (xs[i] + xs[i + 1]), 0.5 * (zs[j] + zs[j + 1]));
            east[j * columns + i] += 0.5 * along * dz / dx;
            east[(j + 1) * columns + i] += 0.5 * along * dz / dx;
            north[j * columns + i] += 0.5 * across * dx / dz;
            north[j * columns + i + 1] += 0.5 * across * dx / dz;
        }
    }
    let tiny = 1e-12;
    let fixed = |i: usize, j: usize| -> Option<f64> {
        let (x, z) = (xs[i], zs[j]);
        if x >= left - tiny && x <= right + tiny && z >= -tiny && z <= thickness + tiny {
            return Some(1.0);
        }
        let edge = j == 0 || j + 1 == rows || i + 1 == columns || (i == 0 && plane == Plane::Odd);
        edge.then_some(0.0)
    };
    let mut v: Vec<f64> = (0..columns * rows).map(|n| fixed(n % columns, n / columns).unwrap_or(0.0)).collect();
    let free: Vec<bool> = (0..columns * rows).map(|n| fixed(n % columns, n / columns).is_none()).collect();
    let apply = |v: &[f64], out: &mut [f64]| {
        out.fill(0.0);
        for j in 0..rows {
            for i in 0..columns {
                let n = j * columns + i;
                if i + 1 < columns {
                    let flow = east[n] * (v[n + 1] - v[n]);
                    out[n] -= flow;
                    out[n + 1] += flow;
                }
                if j + 1 < rows {
                    let flow = north[n] * (v[n + columns] - v[n]);
                    out[n] -= flow;
                    out[n + columns] += flow;
                }
            }
        }
    };
    let mut diagonal = vec![0.0; columns * rows];
    for n in 0..columns * rows {
        diagonal[n] += east[n] + north[n];
        if n % columns + 1 < columns {
            diagonal[n + 1] += east[n];
        }
        if n / columns + 1 < rows {
            diagonal[n + columns] += north[n];
        }
    }
    // Conjugate gradients with a symmetric Gauss-Seidel sweep before each step.
    let precondition = |r: &[f64], out: &mut [f64]| {
        for n in 0..r.len() {
            if !free[n] {
                out[n] = 0.0;
                continue;
            }
            let mut sum = r[n];
            if n % columns > 0 && free[n - 1] {
                sum += east[n - 1] * out[n - 1];
            }
            if n >= columns && free[n - columns] {
                sum += north[n - columns] * out[n - columns];
            }
            out[n] = sum / diagonal[n];
        }
        for n in (0..r.len()).rev() {
            if !free[n] {
                continue;
            }
            let mut sum = 0.0;
            if n % columns + 1 < columns && free[n + 1] {
                sum += east[n] * out[n + 1];
            }
            if n / columns + 1 < rows && free[n + columns] {
                sum += north[n] * out[n + columns];
            }
            out[n] += sum / diagonal[n];
        }
    };
    let size = columns * rows;
    let (mut r, mut q, mut y) = (vec![0.0; size], vec![0.0; size], vec![0.0; size]);
    apply(&v, &mut q);
    for n in 0..size {
        r[n] = if free[n] { -q[n] } else { 0.0 };
    }
    precondition(&r, &mut y);
    let mut p = y.clone();
    let dot = |a: &[f64], b: &[f64]| a.iter().zip(b).map(|(a, b)| a * b).sum::<f64>();
    let mut rho = dot(&r, &y);
    let start = rho;
    for step in 0.. {
        assert!(step < 20_000, "the judge's gradients do not converge");
        if rho <= 1e-13 * start {
            break;
        }
        apply(&p, &mut q);
        for n in 0..size {
            if !free[n] {
                q[n] = 0.0;
            }
        }
        let alpha = rho / dot(&p, &q);
        for n in 0..size {
            v[n] += alpha * p[n];
            r[n] -= alpha * q[n];
        }
        precondition(&r, &mut y);
        let next = dot(&r, &y);
        let beta = next / rho;
        for n in 0..size {
            p[n] = y[n] + beta * p[n];
        }
        rho = next;
    }
    apply(&v, &mut q);
    let energy = dot(&v, &q);
    if section.strips.len() == 1 { 2.0 * energy } else { energy }
}

/// Nodes through all breaks, smallest beside each and growing away from it, so that corners and thin layers are resolved.
fn graded(breaks: &mut [f64], cells: f64) -> Vec<f64> {
    breaks.sort_by(f64::total_cmp);
    let mut nodes = vec![breaks[0]];
    for pair in breaks.windows(2) {
        let length = pair[1] - pair[0];
        if length < 1e-12 {
            continue;
        }
        let neighbour = breaks.windows(2).map(|other| other[1] - other[0]).filter(|size| *size > 1e-12).fold(f64::INFINITY, f64::min);
        // Cubic grading within the stretch, with enough cells that the corner cell is small against the smallest feature.
        let count = (cells * (1.0 + 0.35 * (length / neighbour).ln())).ceil().max(2.0) as usize;
        for i in 1..=count {
            let u = i as f64 / count as f64;
            let (a, b) = (u.powi(3), (1.0 - u).powi(3));
            nodes.push(if i == count { pair[1] } else { pair[0] + length * a / (a + b) });
        }
    }
    nodes
}
