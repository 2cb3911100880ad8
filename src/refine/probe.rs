//! Couplings, external Q and resonances measured on parts of the circuit by its own network, and inverted by a bracketed search.
//!
//! # Source
//! Split resonance and reflection group delay: J.-S. Hong, M. J. Lancaster, *Microstrip Filters for RF/Microwave Applications*, 2001, chapter 8 (from memory).

use std::f64::consts::TAU;

use num_complex::Complex64;

use crate::base::bisect;
use crate::dimensions::Dimensions;
use crate::family::Aim;
use crate::family::Family;
use crate::family::Probe;
use crate::line::Book;
use crate::network::Circuit;
use crate::network::Planes;

/// Natural frequencies are looked for within this part of the centre to either side, at so many points.
const REACH: f64 = 0.35;
const POINTS: usize = 281;
/// A natural frequency is found to this part of itself; a coupling of 0.01 is then good to a thousandth.
const FREQUENCY_ACCURACY: f64 = 1e-7;
/// Half the step over which the slope of the reflection's phase is taken, in parts of the frequency.
const PHASE_STEP: f64 = 1e-4;
/// Points of the curve over the search range, and the accuracy of the value found, in parts of the range.
const CURVE_POINTS: usize = 9;
const VALUE_ACCURACY: f64 = 1e-4;

/// What a probe measured over its dimension, and where it ended.
#[derive(Clone, Debug, PartialEq)]
pub struct ProbeCurve {
    /// `coupling 2`.
    pub about: String,
    /// Name of the dimension moved.
    pub dimension: String,
    /// Value of the dimension (metres) and what was measured there (hertz for a resonance), rising in the value.
    pub points: Vec<(f64, f64)>,
    /// What was aimed at.
    pub aim: f64,
    /// The value found; `None` when the aim lies outside the curve and the first guess stays.
    pub found_m: Option<f64>,
}

impl ProbeCurve {
    /// One line: what was aimed at, over which range it was measured, where it was found.
    pub fn describe(&self) -> String {
        let shown = |v: f64| if v.abs() > 1e6 { format!("{:.4} GHz", v * 1e-9) } else { format!("{v:.4}") };
        let range = match (self.points.first(), self.points.last()) {
            (Some(first), Some(last)) => {
                format!("{} to {} over {:.3} to {:.3} mm", shown(first.1), shown(last.1), first.0 * 1e3, last.0 * 1e3)
            }
            _ => "nothing".into(),
        };
        let found = self.found_m.map_or_else(|| "not within it: the first guess stays".into(), |m| format!("found at {:.4} mm", m * 1e3));
        format!("{} by {}: {} wanted, measured {range}, {found}", self.about, self.dimension, shown(self.aim))
    }
}

/// Moves the set's dimensions by its family's probes, one after the other.
pub fn spaced(family: &dyn Family, guess: &Dimensions, book: &Book) -> (Dimensions, Vec<ProbeCurve>) {
    let mut set = guess.clone();
    let mut curves = Vec::new();
    for probe in family.probes(guess) {
        let (low, high) = (probe.between_m[0], probe.between_m[1]);
        let at = |value_m: f64| measured(&probe, &moved(&set, &probe, value_m), book);
        let aim = match probe.aim {
            Aim::Resonance(v) | Aim::Coupling(v) | Aim::ExternalQ(v) => v,
        };
        let points: Vec<(f64, f64)> = (0..CURVE_POINTS)
            .map(|i| low + (high - low) * i as f64 / (CURVE_POINTS - 1) as f64)
            .filter_map(|value_m| at(value_m).map(|v| (value_m, v)))
            .collect();
        // Couplings and Q run over decades: the search goes by their logarithm.
        let miss = |value: f64| (value / aim).ln();
        let crossing = points.windows(2).find(|pair| miss(pair[0].1) * miss(pair[1].1) <= 0.0);
        let found_m = crossing
            .and_then(|pair| bisect(|value_m| at(value_m).map_or(f64::NAN, miss), pair[0].0, pair[1].0, VALUE_ACCURACY * (high - low)));
        let dimension = probe.moves.first().and_then(|i| set.list.get(*i)).map_or_else(String::new, |d| d.name.clone());
        if let Some(found_m) = found_m {
            for index in &probe.moves {
                if let Some(dimension) = set.list.get_mut(*index) {
                    let by_m = found_m - dimension.value_m;
                    dimension.correct(&probe.about, by_m);
                }
            }
        }
        curves.push(ProbeCurve { about: probe.about.clone(), dimension, points, aim, found_m });
    }
    (set, curves)
}

fn moved(set: &Dimensions, probe: &Probe, value_m: f64) -> Dimensions {
    let mut set = set.clone();
    for index in &probe.moves {
        if let Some(dimension) = set.list.get_mut(*index) {
            dimension.value_m = value_m;
        }
    }
    set
}

fn measured(probe: &Probe, set: &Dimensions, book: &Book) -> Option<f64> {
    let layout = (probe.layout)(set).ok()?;
    let center_hz = crate::network::passband_hz(&set.order).iter().sum::<f64>() / 2.0;
    let circuit = Circuit::new(&layout, book, set.order.filter.ports_ohm, Planes::Feed).ok()?;
    let natural = natural_hz(&circuit, layout.ports.len(), center_hz);
    let nearest = || natural.iter().copied().min_by(|a, b| (a - center_hz).abs().total_cmp(&(b - center_hz).abs()));
    match probe.aim {
        Aim::Resonance(_) => nearest(),
        Aim::ExternalQ(_) => {
            let f = nearest()?;
            let reflection = |f: f64| circuit.sweep(&[f]).s[0][0];
            let turned = (reflection(f * (1.0 + PHASE_STEP)) / reflection(f * (1.0 - PHASE_STEP))).arg();
            Some(0.25 * TAU * f * -turned / (TAU * f * 2.0 * PHASE_STEP))
        }
        Aim::Coupling(_) => {
            let mut near = natural;
            near.sort_by(|a, b| (a - center_hz).abs().total_cmp(&(b - center_hz).abs()));
            let [a, b, ..] = near[..] else { return None };
            let (a, b) = (a * a, b * b);
            Some((a - b).abs() / (a + b))
        }
    }
}

/// Natural frequencies of a lossless circuit with its ports open, about a frequency.
///
/// Where all ports are open the admittance j B of the ports is singular. With S unitary, det(B) is real and changes sign there; at its poles it does too,
/// which is told by its size.
fn natural_hz(circuit: &Circuit, ports: usize, about_hz: f64) -> Vec<f64> {
    let f: Vec<f64> = (0..POINTS).map(|i| about_hz * (1.0 + REACH * (2.0 * i as f64 / (POINTS - 1) as f64 - 1.0))).collect();
    let determinant = |s: &[Complex64; 4]| {
        let one = Complex64::ONE;
        if ports == 1 {
            // B R = -j (1 - S)/(1 + S)
            return ((one - s[0]) / (one + s[0])).im;
        }
        // Of (1 - S)(1 + S)^-1: the quotient of the determinants; S11, S21, S12, S22.
        let minus = (one - s[0]) * (one - s[3]) - s[1] * s[2];
        let plus = (one + s[0]) * (one + s[3]) - s[1] * s[2];
        (minus / plus).re
    };
    let values: Vec<f64> = circuit.sweep(&f).s.iter().map(&determinant).collect();
    let at = |f: f64| determinant(&circuit.sweep(&[f]).s[0]);
    (1..POINTS)
        .filter(|i| values[i - 1].signum() != values[*i].signum())
        .filter_map(|i| {
            let root = bisect(at, f[i - 1], f[i], FREQUENCY_ACCURACY * about_hz)?;
            // Towards a zero the value shrinks, towards a pole it grows.
            (at(root).abs() < values[i - 1].abs().max(values[i].abs())).then_some(root)
        })
        .collect()
}
