//! A second circuit, written apart from `network`: chain matrices of impedance-matrix sections, from the values of a dimension file.
//!
//! It shares with the product only the formulas of a single strip, of a pair, of an open end and of a step; the joining is its own:
//! each section's 4x4 impedance matrix (from even and odd), its two open ends folded in by elimination, then chain matrices.

use num_complex::Complex64 as C;
use stripwright::line::{AsBuilt, C_M_PER_S, Coplanar, Pair, Strip, open_end, step};
use stripwright::order::{LaunchShape, Order};

type Chain = [C; 4];

const ONE: C = C::new(1.0, 0.0);
const ZERO: C = C::new(0.0, 0.0);

fn times(a: Chain, b: Chain) -> Chain {
    [a[0] * b[0] + a[1] * b[2], a[0] * b[1] + a[1] * b[3], a[2] * b[0] + a[3] * b[2], a[2] * b[1] + a[3] * b[3]]
}

fn line(gamma_l: C, z: f64) -> Chain {
    [gamma_l.cosh(), gamma_l.sinh() * z, gamma_l.sinh() / z, gamma_l.cosh()]
}

fn gamma(eps_eff: f64, alpha: f64, f: f64) -> C {
    C::new(alpha, std::f64::consts::TAU * f * eps_eff.sqrt() / C_M_PER_S)
}

fn strip_line(strip: &Strip, f: f64, length_m: f64) -> Chain {
    let mode = strip.at(f);
    line(gamma(mode.eps_eff, mode.alpha_np_per_m(), f) * length_m, mode.z0_ohm)
}

/// Admittance that loads an open end.
fn end_admittance(strip: &Strip, f: f64) -> C {
    let mode = strip.at(f);
    let beta = gamma(mode.eps_eff, 0.0, f).im;
    C::new(open_end::radiation_conductance_s(strip, f), (beta * open_end::extension_m(strip)).tan() / mode.z0_ohm)
}

/// Chain matrix from the near end of the lower strip to the far end of the upper one, the other two ends loaded by `y`.
fn section(pair: &Pair, f: f64, length_m: f64, y: C) -> Chain {
    let mode = |m: stripwright::line::Mode| {
        let gl = gamma(m.eps_eff, m.alpha_np_per_m(), f) * length_m;
        (m.z0_ohm / gl.tanh(), m.z0_ohm / gl.sinh())
    };
    let ((e_own, e_far), (o_own, o_far)) = (mode(pair.even_at(f)), mode(pair.odd_at(f)));
    let (own, side) = (0.5 * (e_own + o_own), 0.5 * (e_own - o_own));
    let (far, across) = (0.5 * (e_far + o_far), 0.5 * (e_far - o_far));
    // Ports: 0 near lower (in), 1 near upper (loaded), 2 far lower (loaded), 3 far upper (out).
    let z = [[own, side, far, across], [side, own, across, far], [far, across, own, side], [across, far, side, own]];
    // V = Z I; at a loaded port I = -y V, so the loaded voltages follow from (1 + Zll y) Vl = Zlp Ip.
    let (l, p) = ([1usize, 2], [0usize, 3]);
    let m = [[ONE + z[1][1] * y, z[1][2] * y], [z[2][1] * y, ONE + z[2][2] * y]];
    let det = m[0][0] * m[1][1] - m[0][1] * m[1][0];
    let mut reduced = [[ZERO; 2]; 2];
    for (j, pj) in p.iter().enumerate() {
        let (r0, r1) = (z[l[0]][*pj], z[l[1]][*pj]);
        let v = [(m[1][1] * r0 - m[0][1] * r1) / det, (m[0][0] * r1 - m[1][0] * r0) / det];
        for (i, pi) in p.iter().enumerate() {
            reduced[i][j] = z[*pi][*pj] - y * (z[*pi][l[0]] * v[0] + z[*pi][l[1]] * v[1]);
        }
    }
    let [[z11, z12], [z21, z22]] = reduced;
    [z11 / z21, (z11 * z22 - z12 * z21) / z21, ONE / z21, z22 / z21]
}

fn step_chain(built: &AsBuilt, w1: f64, w2: f64, f: f64) -> Chain {
    if w1 == w2 {
        return [ONE, ZERO, ZERO, ONE];
    }
    let model = step(&Strip::new(built, w1), &Strip::new(built, w2));
    let w = std::f64::consts::TAU * f;
    let series = |l: f64| [ONE, C::new(0.0, w * l), ZERO, ONE];
    let shunt = [ONE, ZERO, C::new(0.0, w * model.capacitance_f), ONE];
    let [first, second] =
        if w1 > w2 { [model.wide_inductance_h, model.narrow_inductance_h] } else { [model.narrow_inductance_h, model.wide_inductance_h] };
    times(times(series(first), shunt), series(second))
}

/// The values of a dimension file, by name.
pub fn value(text: &toml::Table, name: &str) -> f64 {
    let entry = text["dimension"].as_array().unwrap().iter().find(|d| d["name"].as_str() == Some(name)).unwrap();
    let text = entry["value"].as_str().unwrap();
    let (number, unit) = text.split_once(' ').unwrap();
    assert_eq!(unit, "mm");
    number.parse::<f64>().unwrap() * 1e-3
}

/// S11 and S21 at `f`, planes at the board's edge, of an edge-coupled filter given by its dimension file.
pub fn response(order: &Order, text: &toml::Table, degree: usize, f: f64) -> (C, C) {
    let built = AsBuilt::nominal(order);
    // Drawn lengths are whole nanometres.
    let value = |name: String| (value(text, &name) * 1e9).round() * 1e-9;
    let width = |k: usize| value(format!("section {k} width"));
    let mut chain = [ONE, ZERO, ZERO, ONE];
    let launch = |port: usize, feed_m: f64, outwards: bool| {
        let mut pieces: Vec<Chain> = Vec::new();
        if let LaunchShape::EdgeCoax { pad_length_m, pad_width_m, taper_length_m, .. } = order.board.launch.shape {
            const PIECES: usize = 60;
            for i in 0..PIECES {
                let w = feed_m + (pad_width_m - feed_m) * (i as f64 + 0.5) / PIECES as f64;
                pieces.push(strip_line(&Strip::new(&built, w), f, taper_length_m / PIECES as f64));
            }
            let pad = Coplanar::new(&built, pad_width_m, value(format!("launch {port} ground gap")));
            pieces.push(line(gamma(pad.eps_eff, pad.alpha_np_per_m(f), f) * pad_length_m, pad.z0_ohm));
        }
        if !outwards {
            pieces.reverse();
        }
        pieces.into_iter().fold([ONE, ZERO, ZERO, ONE], times)
    };
    let feeds = [1, 2].map(|port| (value(format!("feed {port} width")), value(format!("feed {port} length"))));
    chain = times(chain, launch(1, feeds[0].0, false));
    chain = times(chain, strip_line(&Strip::new(&built, feeds[0].0), f, feeds[0].1));
    let mut arriving = feeds[0].0;
    for k in 1..=degree + 1 {
        chain = times(chain, step_chain(&built, arriving, width(k), f));
        let pair = Pair::new(&built, width(k), value(format!("section {k} gap")));
        let end = end_admittance(&Strip::new(&built, width(k)), f);
        chain = times(chain, section(&pair, f, value(format!("section {k} length")), end));
        arriving = width(k);
    }
    chain = times(chain, step_chain(&built, arriving, feeds[1].0, f));
    chain = times(chain, strip_line(&Strip::new(&built, feeds[1].0), f, feeds[1].1));
    chain = times(chain, launch(2, feeds[1].0, true));
    let [z1, z2] = order.filter.ports_ohm;
    let [a, b, c, d] = chain;
    let all = a * z2 + b + c * z1 * z2 + d * z1;
    ((a * z2 + b - c * z1 * z2 - d * z1) / all, 2.0 * (z1 * z2).sqrt() / all)
}
