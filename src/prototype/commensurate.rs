//! Which impedances do lines of one common length need: Richards' variable, Kuroda's identities, optimum stub high-pass and band-pass?
//!
//! All impedances are over the ports'; `theta` is the electrical length of the common line and `t = tan(theta)` Richards' variable over j.
//!
//! # Source
//! P. I. Richards, "Resistor-transmission-line circuits", Proc. IRE 36, 1948; Kuroda's identities as in Matthaei, Young, Jones 1964 and in H. Ozaki,
//! J. Ishii, "Synthesis of a class of strip-line filters", IRE Trans. CT-5, 1958 (all from memory).

use super::characteristic::chebyshev;
use super::characteristic::edge_height;
use super::ladder;
use crate::base::minimize;
use crate::order::ResponseShape;

/// A part of a chain of commensurate lines, its impedance over the ports'.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Commensurate {
    /// A connecting line.
    UnitElement(f64),
    /// An open stub across the line.
    OpenShunt(f64),
    /// A shorted stub in series with the line.
    ShortedSeries(f64),
    /// A shorted stub across the line.
    ShortedShunt(f64),
}

/// Chain matrix of a lossless two-port: A, B/j, C/j, D.
pub type Chain = [f64; 4];

impl Commensurate {
    /// Its chain matrix.
    pub fn chain(self, theta: f64) -> Chain {
        let (sine, cosine) = theta.sin_cos();
        match self {
            Commensurate::UnitElement(z) => [cosine, z * sine, sine / z, cosine],
            Commensurate::OpenShunt(z) => [1.0, 0.0, sine / cosine / z, 1.0],
            Commensurate::ShortedSeries(z) => [1.0, z * sine / cosine, 0.0, 1.0],
            Commensurate::ShortedShunt(z) => [1.0, 0.0, -cosine / sine / z, 1.0],
        }
    }
}

/// Chain matrix of two-ports one after the other.
pub fn cascade(parts: impl IntoIterator<Item = Chain>) -> Chain {
    parts.into_iter().fold([1.0, 0.0, 0.0, 1.0], |[a, b, c, d], [e, f, g, h]| [a * e - b * g, a * f + b * h, c * e + d * g, d * h - c * f])
}

/// K = S11/S21 between ports of 1 ohm: its part of a symmetric two-port, and the part that only an unsymmetric one has.
pub fn characteristic_of([a, b, c, d]: Chain) -> [f64; 2] {
    [0.5 * (b - c), 0.5 * (a - d)]
}

/// Kuroda's identities: a connecting line and the stub next to it changed over, the same two-port in every frequency; `None` for other pairs.
pub fn kuroda(first: Commensurate, second: Commensurate) -> Option<(Commensurate, Commensurate)> {
    use Commensurate::OpenShunt;
    use Commensurate::ShortedSeries;
    use Commensurate::UnitElement;
    // A series stub z and a line w are a line z + w and a shunt stub w (z + w) / z.
    let to_shunt = |z: f64, w: f64| (UnitElement(z + w), OpenShunt(w * (z + w) / z));
    let to_series = |line: f64, stub: f64| {
        let w = line * stub / (line + stub);
        (ShortedSeries(line - w), UnitElement(w))
    };
    match (first, second) {
        (ShortedSeries(z), UnitElement(w)) => Some(to_shunt(z, w)),
        (UnitElement(w), ShortedSeries(z)) => {
            let (line, stub) = to_shunt(z, w);
            Some((stub, line))
        }
        (UnitElement(line), OpenShunt(stub)) => Some(to_series(line, stub)),
        (OpenShunt(stub), UnitElement(line)) => {
            let (series, w) = to_series(line, stub);
            Some((w, series))
        }
        _ => None,
    }
}

/// A prototype of odd degree as open stubs with connecting lines between them, all alike in length: stubs and lines over the ports' impedance.
/// The cutoff lies where the lines are `cutoff_theta` (rad, below pi/2) long; a quarter wave stops. `None` for even degrees.
///
/// Lines of the ports' impedance are put in at both ends and brought inwards by Kuroda's identities until one stands between any two stubs.
pub fn open_stubs(shape: ResponseShape, degree: usize, cutoff_theta: f64) -> Option<(Vec<f64>, Vec<f64>)> {
    use Commensurate::OpenShunt;
    use Commensurate::ShortedSeries;
    use Commensurate::UnitElement;
    if degree.is_multiple_of(2) {
        return None;
    }
    let (g, cutoff, half) = (ladder(shape, degree), cutoff_theta.tan(), degree / 2);
    // The middle element must be a shunt one.
    let element = |i: usize| if i.abs_diff(half + 1).is_multiple_of(2) { OpenShunt(cutoff / g[i]) } else { ShortedSeries(g[i] / cutoff) };
    let mut chain: Vec<Commensurate> = (1..=degree).map(element).collect();
    for _ in 0..2 {
        for passes in (1..=half).rev() {
            chain.insert(0, UnitElement(1.0));
            // The lines put in before have stopped farther in.
            for at in 0..passes {
                (chain[at], chain[at + 1]) = kuroda(chain[at], chain[at + 1])?;
            }
        }
        chain.reverse();
    }
    let stubs: Vec<f64> = chain.iter().filter_map(|part| if let OpenShunt(z) = part { Some(*z) } else { None }).collect();
    let lines: Vec<f64> = chain.iter().filter_map(|part| if let UnitElement(z) = part { Some(*z) } else { None }).collect();
    (stubs.len() == degree && lines.len() + 1 == degree).then_some((stubs, lines))
}

/// K over its height at the edge of shorted stubs of length `theta` with `lines` single lengths between neighbours (1 or 2): equal ripple
/// from `cutoff_theta` to pi - `cutoff_theta`.
///
/// # Source
/// R. Levy, "A new class of distributed prototype filters ...", IEEE Trans. MTT-18, 1970, as in J.-S. Hong and M. J. Lancaster, section 6.2 (from memory); M. C.
/// Horton and R. J. Wenzel, "General theory and design of optimum quarter-wave TEM filters", IEEE Trans. MTT-13, 1965.
pub fn shorted_stub_characteristic(stubs: usize, lines: usize, theta: f64, cutoff_theta: f64) -> f64 {
    let (x, cutoff, sine) = (theta.cos(), cutoff_theta.cos(), cutoff_theta.sin());
    let order = (lines * stubs.saturating_sub(1) + 1) as f64;
    let lower = chebyshev((order - 2.0).abs(), x / cutoff);
    ((1.0 + sine) * chebyshev(order, x / cutoff) - (1.0 - sine) * lower) / (2.0 * theta.sin())
}

/// The optimum high-pass: admittances of the shorted stubs and of the lines (twice as long) between them, over the ports'; symmetric.
///
/// Fitted to [`shorted_stub_characteristic`], of which the circuit is an exact realization; 2 to 9 stubs, cutoff from 15 to 60 degrees. `None` when the
/// fit leaves more than 1e-6 of the ripple.
pub fn optimum_high_pass(ripple_db: f64, stubs: usize, cutoff_theta: f64) -> Option<(Vec<f64>, Vec<f64>)> {
    const ITERATIONS: usize = 200;
    const CLOSE: f64 = 1e-12;
    let height = edge_height(ResponseShape::EqualRipple { ripple_db });
    let (stub_count, line_count) = (stubs.div_ceil(2), stubs / 2);
    let unfold = |x: &[f64]| {
        let stub = |k: usize| x[k.min(stubs - 1 - k)].exp();
        let line = |k: usize| x[stub_count + k.min(stubs - 2 - k)].exp();
        ((0..stubs).map(stub).collect::<Vec<f64>>(), (0..stubs - 1).map(line).collect::<Vec<f64>>())
    };
    let points = 8 * stubs + 1;
    let thetas: Vec<f64> =
        (0..points).map(|i| cutoff_theta + (std::f64::consts::FRAC_PI_2 - cutoff_theta) * i as f64 / (points - 1) as f64).collect();
    let residuals = |x: &[f64], sign: f64| -> Option<Vec<f64>> {
        let (y, between) = unfold(x);
        let at = |theta: f64| {
            let mut parts = Vec::with_capacity(2 * stubs);
            for k in 0..stubs {
                parts.push(Commensurate::ShortedShunt(1.0 / y[k]).chain(theta));
                if k + 1 < stubs {
                    parts.push(Commensurate::UnitElement(1.0 / between[k]).chain(2.0 * theta));
                }
            }
            characteristic_of(cascade(parts))[0] / height - sign * shorted_stub_characteristic(stubs, 2, theta, cutoff_theta)
        };
        Some(thetas.iter().map(|theta| at(*theta)).collect())
    };
    // Below the band the stubs are inductors across the line: K is positive there; its sign in the target goes with T(x).
    let start: Vec<f64> = (0..stub_count).map(|_| 0.35f64.ln()).chain((0..line_count).map(|_| 1.05f64.ln())).collect();
    for sign in [1.0, -1.0] {
        let mut x = start.clone();
        let count = x.len();
        let left = minimize(&mut x, &vec![1e-7; count], &vec![0.5; count], ITERATIONS, |x| residuals(x, sign));
        if left < CLOSE {
            return Some(unfold(&x));
        }
    }
    None
}

/// Shorted quarter-wave stubs a quarter wave apart: admittances of stubs and lines over the ports', from a prototype of at least degree 2 and the edge
/// of the band at `cutoff_theta`. A close guess for wide bands, the stubs' share of the susceptance put into the lines' sections (h = 2).
///
/// # Source
/// Matthaei, Young, Jones 1964, section 10.03; notation of J.-S. Hong and M. J. Lancaster, section 5.2.7 (from memory).
pub fn quarter_wave_stubs(g: &[f64], cutoff_theta: f64) -> (Vec<f64>, Vec<f64>) {
    const H: f64 = 2.0;
    let n = g.len().saturating_sub(2);
    let tangent = cutoff_theta.tan();
    let inverter = |i: usize| {
        if n == 2 {
            // Between the only two stubs both end rules hold at once.
            return (H * g[0] * g[1] * g[3] / g[2]).sqrt().min(H * g[0] * g[1]);
        }
        match i {
            1 => g[0] * (H * g[1] / g[2]).sqrt(),
            i if i + 1 == n => g[0] * (H * g[1] * g[n + 1] / (g[0] * g[n - 1])).sqrt(),
            i => H * g[0] * g[1] / (g[i] * g[i + 1]).sqrt(),
        }
    };
    let slant = |i: usize| inverter(i).hypot(0.5 * H * g[0] * g[1] * tangent);
    let stubs = (1..=n)
        .map(|i| match i {
            1 => g[0] * (1.0 - 0.5 * H) * g[1] * tangent + slant(1) - inverter(1),
            i if i == n => (g[n] * g[n + 1] - 0.5 * H * g[0] * g[1]) * tangent + slant(n - 1) - inverter(n - 1),
            i => slant(i - 1) + slant(i) - inverter(i - 1) - inverter(i),
        })
        .collect();
    (stubs, (1..n).map(inverter).collect())
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::f64::consts::FRAC_PI_4;

    /// The identities hold in every frequency: exact but for rounding, 1e-12.
    #[test]
    fn kuroda_identities_are_exact() {
        use Commensurate::*;
        for (z, w) in [(0.3, 1.0), (1.7, 0.4), (2.0, 2.0)] {
            for pair in [
                (UnitElement(w), OpenShunt(z)),
                (OpenShunt(z), UnitElement(w)),
                (UnitElement(w), ShortedSeries(z)),
                (ShortedSeries(z), UnitElement(w)),
            ] {
                let other = kuroda(pair.0, pair.1).unwrap();
                for theta in [0.1, 0.7, 1.2, 1.5] {
                    let (one, two) =
                        (cascade([pair.0.chain(theta), pair.1.chain(theta)]), cascade([other.0.chain(theta), other.1.chain(theta)]));
                    assert!(one.iter().zip(two).all(|(a, b)| (a - b).abs() < 1e-12 * (1.0 + a.abs())), "{pair:?} {one:?} {two:?}");
                }
                let back = kuroda(other.0, other.1).unwrap();
                assert!(format!("{back:.12?}") == format!("{:.12?}", pair), "{back:?} {pair:?}");
            }
        }
        assert!(kuroda(UnitElement(1.0), UnitElement(1.0)).is_none());
    }

    /// Open stubs and lines have exactly the prototype's |S21| in tan(theta); 1e-9: rounding of a product of up to 13 matrices.
    #[test]
    fn open_stubs_have_the_prototype_response() {
        for (degree, cutoff) in [(1, 0.5), (3, FRAC_PI_4), (5, 0.6), (7, 1.0)] {
            let shape = ResponseShape::EqualRipple { ripple_db: 0.1 };
            let (stubs, lines) = open_stubs(shape, degree, cutoff).unwrap();
            for theta in [0.05f64, 0.3, 0.55, 0.9, 1.4, 1.9, 2.7] {
                let parts = stubs.iter().enumerate().flat_map(|(k, z)| {
                    let line = lines.get(k).map(|z| Commensurate::UnitElement(*z).chain(theta));
                    std::iter::once(Commensurate::OpenShunt(*z).chain(theta)).chain(line)
                });
                let [k, odd] = characteristic_of(cascade(parts));
                let wanted = edge_height(shape) * chebyshev(degree as f64, theta.tan() / cutoff.tan());
                assert!((k.hypot(odd) / wanted.abs() - 1.0).abs() < 1e-9, "{degree} {theta}: {k} {wanted}");
            }
        }
        assert!(open_stubs(ResponseShape::MaximallyFlat, 4, 0.5).is_none());
    }

    /// D. M. Pozar, *Microwave Engineering*, stub low-pass by Kuroda's identities: 3 dB, N = 3: 64.9, 217.5, 70.3 ohm; recomputed 64.931, 217.437, 70.254.
    /// Tolerance 0.001 ohm: digits recomputed.
    #[test]
    fn pozar_stub_low_pass() {
        let (stubs, lines) = open_stubs(ResponseShape::EqualRipple { ripple_db: 3.0 }, 3, FRAC_PI_4).unwrap();
        let found = [stubs[0], lines[0], stubs[1], lines[1], stubs[2]];
        for (found, wanted) in found.iter().zip([64.931, 217.437, 70.254, 217.437, 64.931]) {
            assert!((50.0 * found - wanted).abs() < 1e-3, "{found}");
        }
    }

    /// J.-S. Hong and M. J. Lancaster, Table 6.1, 0.1 dB (from memory, recomputed to five digits): 2e-5.
    #[test]
    fn optimum_high_pass_table() {
        let rows: [(usize, f64, &[f64], &[f64]); 4] = [
            (2, 30.0, &[0.22070], &[1.11596]),
            (3, 25.0, &[0.19690, 0.18175], &[1.12075]),
            (5, 35.0, &[0.46895, 0.66089, 0.72424], &[1.02790, 0.99884]),
            (6, 33.75, &[0.44653, 0.62699, 0.70782], &[1.03531, 1.00528, 0.99815]),
        ];
        for (n, degrees, stubs, lines) in rows {
            let (y, between) = optimum_high_pass(0.1, n, f64::to_radians(degrees)).unwrap();
            assert!(
                y.iter().zip(stubs).chain(between.iter().zip(lines)).all(|(a, b)| (a - b).abs() < 2e-5),
                "{n} {degrees}: {y:?} {between:?}"
            );
        }
    }

    /// J.-S. Hong and M. J. Lancaster, section 5.2.7: n = 5, 0.1 dB, 2 GHz, 50 %, h = 2 (recomputed): siemens, 1e-6 as printed there.
    #[test]
    fn quarter_wave_stub_example() {
        let g = ladder(ResponseShape::EqualRipple { ripple_db: 0.1 }, 5);
        let (stubs, lines) = quarter_wave_stubs(&g, std::f64::consts::FRAC_PI_2 * 0.75);
        let wanted = [0.035250, 0.069369, 0.068237, 0.069369, 0.035250, 0.025867, 0.027875, 0.027875, 0.025867];
        for (found, wanted) in stubs.iter().chain(&lines).zip(wanted) {
            assert!((0.02 * found - wanted).abs() < 1e-6, "{found} {wanted}");
        }
    }
}
