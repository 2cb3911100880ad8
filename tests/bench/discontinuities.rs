//! How far are the models of discontinuities from the full-wave solution of the same copper? The measured accuracies in their docs.
//! Run: `cargo bench --bench discontinuities`.
#![allow(clippy::unwrap_used, clippy::indexing_slicing, clippy::needless_range_loop, missing_docs)]

use std::f64::consts::TAU;
use std::time::Instant;

use num_complex::Complex64;
use stripwright::artwork::shape::{Region, rectangle};
use stripwright::base::{Nm, Point};
use stripwright::field::{Analysis, Dielectric, Geometry, GeometryPort, Mesh, PortPlace, Split, Stack, Top};
use stripwright::line::{AsBuilt, C_M_PER_S, Corner, Mitre, StaticsModel, Strip, bend, gap, optimum_cut, step, tee};
use stripwright::order::Side;

/// Box in substrate heights: far enough to move eps_eff by less than 0.3 %.
const BOX: f64 = 36.0;
const LID: f64 = 20.0;
const DENSITY: f64 = 2.0;

type Matrix = Vec<Vec<Complex64>>;

fn board(er: f64, h_m: f64) -> AsBuilt {
    AsBuilt {
        permittivity: er,
        in_plane_permittivity: er,
        loss_tangent: 0.0,
        thickness_m: h_m,
        copper_thickness_m: 0.0,
        undercut_m: 0.0,
        roughness_m: 0.0,
        conductivity_s_per_m: 5.8e7,
        plating: None,
        hole_plating_m: 25e-6,
        ten_point_height_m: None,
        lid_m: None,
        widening_m: 0.0,
        lossless: true,
        statics: StaticsModel::Numerical,
    }
}

fn inverse(mut a: Matrix) -> Matrix {
    let n = a.len();
    let mut b: Matrix = (0..n).map(|i| (0..n).map(|j| Complex64::from(f64::from(u8::from(i == j)))).collect()).collect();
    for k in 0..n {
        let pivot = a[k][k].inv();
        for j in 0..n {
            a[k][j] *= pivot;
            b[k][j] *= pivot;
        }
        for i in (0..n).filter(|i| *i != k) {
            let factor = a[i][k];
            for j in 0..n {
                let (x, y) = (a[k][j], b[k][j]);
                a[i][j] -= factor * x;
                b[i][j] -= factor * y;
            }
        }
    }
    b
}

fn product(a: &Matrix, b: &Matrix) -> Matrix {
    let n = a.len();
    (0..n).map(|i| (0..n).map(|j| (0..n).map(|k| a[i][k] * b[k][j]).sum()).collect()).collect()
}

fn plus_identity(a: &Matrix, sign: f64) -> Matrix {
    a.iter().enumerate().map(|(i, row)| row.iter().enumerate().map(|(j, x)| sign * x + f64::from(u8::from(i == j))).collect()).collect()
}

/// Normalised impedances, and scattering back from them.
fn z_of(s: &Matrix) -> Matrix {
    product(&inverse(plus_identity(s, -1.0)), &plus_identity(s, 1.0))
}

fn s_of(z: &Matrix) -> Matrix {
    let minus: Matrix = plus_identity(z, 1.0)
        .iter()
        .enumerate()
        .map(|(i, row)| row.iter().enumerate().map(|(j, x)| x - 2.0 * f64::from(u8::from(i == j))).collect())
        .collect();
    product(&minus, &inverse(plus_identity(z, 1.0)))
}

/// Scattering of the copper at planes `shifts_m` nearer the junction than the ports' planes, each port on its own line's impedance; and the impedances.
fn solved(
    er: f64,
    h_m: f64,
    rectangles: &[[f64; 4]],
    ports: &[(Side, f64)],
    plane: f64,
    shifts_m: &[f64],
    f_hz: f64,
) -> (Matrix, Vec<f64>, usize) {
    let nm = |heights: f64| Nm::from_m(heights * h_m);
    let rings: Vec<_> =
        rectangles.iter().map(|r| rectangle(Point { x: nm(r[0]), y: nm(r[1]) }, Point { x: nm(r[2]), y: nm(r[3]) })).collect();
    let stack = Stack {
        below: vec![Dielectric { permittivity: er, loss_tangent: 0.0, thickness_m: h_m }],
        above: vec![Dielectric { permittivity: 1.0, loss_tangent: 0.0, thickness_m: LID * h_m }],
        top: Top::Lid,
    };
    let ports: Vec<_> = ports
        .iter()
        .map(|(side, at)| GeometryPort { place: PortPlace::Wall { side: *side, at: nm(*at), plane: nm(plane) }, reference_ohm: 50.0 })
        .collect();
    let geometry = Geometry { stack, size: [nm(BOX), nm(BOX)], copper: Region::union_of(&rings), conductor: None, ports };
    let mesh = Mesh::new(&geometry, f_hz, DENSITY, 0.1 * h_m).unwrap();
    let analysis = Analysis::new(mesh, &geometry, f_hz, Split::default()).unwrap();
    let at = analysis.at(f_hz).unwrap();
    let n = shifts_m.len();
    let lines: Vec<_> = at.lines.iter().map(|line| line.unwrap()).collect();
    let s: Matrix = (0..n).map(|i| (0..n).map(|j| at.s[i * n + j]).collect()).collect();
    let z = z_of(&s);
    let own: Vec<f64> = lines.iter().map(|line| line.impedance_ohm.re).collect();
    let renormalised: Matrix = (0..n).map(|i| (0..n).map(|j| z[i][j] * 50.0 / (own[i] * own[j]).sqrt()).collect()).collect();
    let s = s_of(&renormalised);
    let moved = (0..n)
        .map(|i| (0..n).map(|j| s[i][j] * (lines[i].gamma_per_m * shifts_m[i] + lines[j].gamma_per_m * shifts_m[j]).exp()).collect())
        .collect();
    (moved, own, n)
}

fn db(x: Complex64) -> f64 {
    20.0 * x.norm().log10()
}

/// Scattering of a ladder of series, shunt, series on two line impedances.
fn ladder(first_h: f64, shunt_f: f64, second_h: f64, z: [f64; 2], f_hz: f64) -> Matrix {
    let j = |x: f64| Complex64::new(0.0, x);
    let w = TAU * f_hz;
    let common = j(-1.0 / (w * shunt_f));
    let root = (z[0] * z[1]).sqrt();
    s_of(&vec![vec![(j(w * first_h) + common) / z[0], common / root], vec![common / root, (j(w * second_h) + common) / z[1]]])
}

fn main() {
    let centre = 0.5 * BOX;
    for (er, h_m, w_m, f_hz) in [(3.0, 0.762e-3, 1.91e-3, 4e9), (10.2, 0.635e-3, 0.59e-3, 4e9)] {
        let board = board(er, h_m);
        let strip = Strip::new(&board, w_m);
        let (w, beta) = (w_m / h_m, strip.at(f_hz).beta_rad_per_m(f_hz));
        let z0 = strip.at(f_hz).z0_ohm;
        let plane = 0.4 * BOX;
        println!("er {er}, h {:.3} mm, w {:.3} mm ({z0:.1} ohm), {} GHz", h_m * 1e3, w_m * 1e3, f_hz / 1e9);
        let half = 0.5 * w;
        // Bends: mouths at the corner square's sides.
        for (name, corner) in
            [("square", Corner::Square), ("half cut", Corner::Mitred(Mitre::Cut(0.5))), ("optimum cut", Corner::Mitred(Mitre::Optimum))]
        {
            let time = Instant::now();
            let mut copper = vec![[0.0, centre - half, centre - half, centre + half], [centre - half, centre + half, centre + half, BOX]];
            // The strips' square less the cut, in stairs: outer corner at (+, -); legs twice the cut's share of the width.
            let cut = match corner {
                Corner::Square => 0.0,
                Corner::Mitred(Mitre::Cut(cut)) => cut,
                Corner::Mitred(Mitre::Optimum) => optimum_cut(&strip),
            };
            let (leg, stairs) = (2.0 * cut * w, 24);
            if leg > 0.0 {
                copper.clear();
                let (x0, y0) = (centre + half, centre - half);
                // The whole of both strips within the cut's reach, column by column.
                let reach = leg.max(w);
                for i in 0..stairs {
                    let (a, b) = (reach * f64::from(i) / f64::from(stairs), reach * f64::from(i + 1) / f64::from(stairs));
                    // Column from a to b left of the outer face: copper starts above the cut at the column's middle.
                    let floor = (leg - 0.5 * (a + b)).max(0.0);
                    let top = if b <= w + 1e-9 { BOX } else { y0 + w };
                    let (left, right) = (x0 - b, x0 - a);
                    if a < w - 1e-9 && b > w + 1e-9 {
                        copper.push([x0 - w, y0 + floor, right, BOX]);
                        copper.push([left, y0 + floor, x0 - w, y0 + w]);
                    } else {
                        copper.push([left, y0 + floor, right, top]);
                    }
                }
                copper.push([0.0, centre - half, x0 - reach, centre + half]);
            } else {
                copper.push([centre - half, centre - half, centre + half, centre + half]);
            }
            let inward = (centre - half - plane) * h_m;
            let inward_top = (BOX - (centre + half) - plane) * h_m;
            let ports = [(Side::Left, centre), (Side::Top, centre)];
            let (s, own, _) = solved(er, h_m, &copper, &ports, plane, &[inward, inward_top], f_hz);
            let model = bend(&strip, corner);
            let ours = ladder(model.series_h, model.shunt_f, model.series_h, [z0, z0], f_hz);
            let z = z_of(&s);
            let omega = TAU * f_hz;
            let (l, c) = ((z[0][0] - z[1][0]).im * own[0] / omega, -1.0 / (omega * z[1][0].im * own[0]));
            let difference_m = (ours[1][0].arg() - s[1][0].arg()) / -beta;
            println!(
                "  bend {name}: L {:+.4} nH, solved {:+.4}; C {:.4} pF, solved {:.4}; delay {:+.3} h off; S11 {:.1} dB, solved {:.1} dB; {:.1} s",
                model.series_h * 1e9,
                l * 1e9,
                model.shunt_f * 1e12,
                c * 1e12,
                difference_m / h_m,
                db(ours[0][0]),
                db(s[0][0]),
                time.elapsed().as_secs_f64()
            );
        }
        // Gaps.
        for share in [0.1, 0.3] {
            let g = share;
            let copper = [[0.0, centre - half, centre - 0.5 * g, centre + half], [centre + 0.5 * g, centre - half, BOX, centre + half]];
            let inward = (centre - 0.5 * g - plane) * h_m;
            let (s, own, _) = solved(er, h_m, &copper, &[(Side::Left, centre), (Side::Right, centre)], plane, &[inward, inward], f_hz);
            let y = inverse(z_of(&s));
            let omega = TAU * f_hz * own[0];
            let (series, shunt) = (-y[1][0].im / omega, (y[0][0] + y[1][0]).im / omega);
            let model = gap::unequal_gap(&strip, &strip, g * h_m);
            let published = gap::gap(&strip, g * h_m);
            println!(
                "  gap {share} h: series {:.2} fF, solved {:.2} (published {:.2}); shunt {:.2} fF, solved {:.2} (published {:.2})",
                model.series_f * 1e15,
                series * 1e15,
                published.series_f * 1e15,
                model.shunt_one_f * 1e15,
                shunt * 1e15,
                published.shunt_f * 1e15
            );
        }
        // Steps.
        for ratio in [2.5, 0.35] {
            let other = Strip::new(&board, ratio * w_m);
            let v = 0.5 * ratio * w;
            let copper = [[0.0, centre - half, centre, centre + half], [centre, centre - v, BOX, centre + v]];
            let inward = (centre - plane) * h_m;
            let (s, _, _) = solved(er, h_m, &copper, &[(Side::Left, centre), (Side::Right, centre)], plane, &[inward, inward], f_hz);
            let model = step(&strip, &other);
            let (first, second) = if ratio < 1.0 {
                (model.wide_inductance_h, model.narrow_inductance_h)
            } else {
                (model.narrow_inductance_h, model.wide_inductance_h)
            };
            let zs = [z0, other.at(f_hz).z0_ohm];
            let ours = ladder(first, model.capacitance_f, second, zs, f_hz);
            let bare = (zs[1] - zs[0]) / (zs[1] + zs[0]);
            println!(
                "  step to {ratio} w: S11 {:.3} < {:.2} deg, solved {:.3} < {:.2} deg, without the model {:.3}; S21 phase {:.2}, solved {:.2} deg",
                ours[0][0].norm(),
                ours[0][0].arg().to_degrees(),
                s[0][0].norm(),
                s[0][0].arg().to_degrees(),
                bare,
                ours[1][0].arg().to_degrees(),
                s[1][0].arg().to_degrees()
            );
        }
        // Tees: planes on the centre lines.
        for ratio in [1.0, 0.4] {
            let side = Strip::new(&board, ratio * w_m);
            let v = 0.5 * ratio * w;
            let copper = [[0.0, centre - half, BOX, centre + half], [centre - v, centre + half, centre + v, BOX]];
            let inward = (centre - plane) * h_m;
            let ports = [(Side::Left, centre), (Side::Right, centre), (Side::Top, centre)];
            let (s, own, _) = solved(er, h_m, &copper, &ports, plane, &[inward; 3], f_hz);
            // Shifts of the best star: the ones that leave equal transfer impedances' series parts at zero.
            let z = z_of(&s);
            let raw = |i: usize, j: usize| z[i][j] * (own[i] * own[j]).sqrt();
            let omega = TAU * f_hz;
            let through_h = (raw(0, 0) - raw(0, 1)).im / omega;
            let side_h = (raw(2, 2) - raw(0, 2)).im / omega;
            let per_length = |strip: &Strip| strip.static_z0_ohm() * strip.static_eps_eff().sqrt() / C_M_PER_S;
            let capacitance = -1.0 / (omega * raw(0, 2).im);
            let model = tee(&strip, &strip, &side).at(f_hz);
            // Model: node with susceptance, transformers, lines of negative length.
            let zs = [z0, z0, side.at(f_hz).z0_ohm];
            let turns = [model.turns_1, model.turns_2, 1.0];
            let y: Vec<f64> = (0..3).map(|i| turns[i] * turns[i] / zs[i]).collect();
            let total: Complex64 = Complex64::new(y.iter().sum::<f64>(), model.shunt_s);
            let shift = [model.shift_1_m, model.shift_2_m, model.shift_side_m];
            let betas = [beta, beta, side.at(f_hz).beta_rad_per_m(f_hz)];
            let ours: Matrix = (0..3)
                .map(|i| {
                    (0..3)
                        .map(|j| {
                            let node = 2.0 * (y[i] * y[j]).sqrt() / total - f64::from(u8::from(i == j));
                            node * Complex64::new(0.0, betas[i] * shift[i] + betas[j] * shift[j]).exp()
                        })
                        .collect()
                })
                .collect();
            let bare: f64 = 1.0 / zs[0] * 2.0 + 1.0 / zs[2];
            let worst = |of: &dyn Fn(usize, usize) -> Complex64| {
                let mut worst: f64 = 0.0;
                for i in 0..3 {
                    for j in 0..3 {
                        worst = worst.max((of(i, j) - s[i][j]).norm());
                    }
                }
                worst
            };
            let off = worst(&|i, j| ours[i][j]);
            let without = worst(&|i, j| Complex64::from(2.0 / (zs[i] * zs[j]).sqrt() / bare - f64::from(u8::from(i == j))));
            println!(
                "  tee, side {ratio} w: shift through {:+.3} h, star of the solution {:+.3} h; side {:+.3} h, solved {:+.3} h; C at the node {:+.4} pF; S off by {off:.4}, without a model {without:.4}",
                model.shift_1_m / h_m,
                -through_h / per_length(&strip) / h_m,
                model.shift_side_m / h_m,
                -side_h / per_length(&side) / h_m,
                capacitance * 1e12
            );
        }
    }
}
