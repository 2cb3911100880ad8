//! From response back to dimensions: the network in the loop moves the set until the lossless passband is the prototype's.

mod degree;
mod passband;
mod probe;
mod sensitivity;

use crate::base::Nm;
use crate::base::Place;
use crate::base::Problem;
use crate::base::minimize;
use crate::dimensions::Dimensions;
use crate::family::Family;
use crate::family::Knob;
use crate::family::Moves;
use crate::family::Target;
use crate::line::AsBuilt;
use crate::line::Book;
use crate::network::Circuit;
use crate::network::Planes;
use crate::order::ResponseShape;
pub use degree::{Chosen, synthesize};
use num_complex::Complex64;
pub use passband::{Miss, Passband};
pub use probe::ProbeCurve;
pub use sensitivity::{Sensitivities, Shift, sensitivities};

/// Iterations of the first stage, which fits the characteristic function over the band to the prototype's.
const FIT_ITERATIONS: usize = 25;
/// Iterations of one round of the second stage, which levels the ripple.
const LEVEL_ITERATIONS: usize = 8;
/// Before the stages: the passband is looked for this far to either side of the centre, at so many points (more, up to the greatest number,
/// where a band is so narrow that it would slip between them), and moved so many times.
const ALIGN_REACH: f64 = 0.25;
const ALIGN_POINTS: usize = 201;
const ALIGN_POINTS_PER_BAND: f64 = 4.0;
const ALIGN_POINTS_AT_MOST: usize = 20_001;
const ALIGN_STEPS: usize = 3;
/// Rounds of both stages.
const ROUNDS: usize = 4;
/// Sample points of the first stage per degree, over an eighth of the bandwidth more than the band on each side.
const SAMPLES_PER_DEGREE: usize = 7;
const SAMPLE_REACH: f64 = 0.125;
/// Finite-difference step of a knob: large against the rounding of the layout to 1 nm, small against the curvature.
const KNOB_STEP: f64 = 1e-3;
/// A tenth of what is allowed: nothing that can be etched is gained by more.
const ENOUGH: f64 = 0.1;
/// Reflections of the two ports of a symmetric circuit differ by rounding only.
const ALIKE: f64 = 1e-6;
/// A neighbour on the grid is worth taking from this gain on, in parts of the allowed miss.
const LEAST_GAIN: f64 = 2e-3;
/// Passes over all dimensions that try their neighbours on the grid.
const NEIGHBOUR_PASSES: usize = 3;

/// What refinement reached.
#[derive(Clone, Debug, PartialEq)]
pub struct Refined {
    /// The set on the shop grid, each value with its first guess and corrections.
    pub dimensions: Dimensions,
    /// Distance of the lossless passband from the prototype's before snapping.
    pub before_snapping: Miss,
    /// And after.
    pub after_snapping: Miss,
    /// What the family's probes measured.
    pub curves: Vec<ProbeCurve>,
}

/// Distance of a set's lossless passband from the prototype's.
///
/// # Errors
/// `passband-lost` when the response has no passband near the ordered one; problems of the layout.
pub fn miss(family: &dyn Family, set: &Dimensions) -> Result<Miss, Vec<Problem>> {
    let book = Book::new(AsBuilt::nominal(&set.order).without_loss());
    miss_with(family, set, &family.target(&set.order, set.degree), &book)
}

fn miss_with(family: &dyn Family, set: &Dimensions, goal: &Target, book: &Book) -> Result<Miss, Vec<Problem>> {
    let circuit = circuit(family, set, book)?;
    Passband::of(&circuit, goal).map(|passband| Miss::of(&passband, goal)).ok_or_else(|| vec![passband_lost(goal)])
}

/// The order's key that holds the edges of a target.
fn band_key(goal: &Target) -> Place {
    let key = match (goal.passes_hz.len(), goal.edges_hz.len()) {
        (2.., _) => "stopband",
        (_, 1) => "cutoff",
        _ => "passband",
    };
    Place::Key(format!("filter.{key}"))
}

fn passband_lost(goal: &Target) -> Problem {
    Problem::error(
        "passband-lost",
        band_key(goal),
        "the response of these dimensions has no passband within half a bandwidth of the ordered one",
        "undo the last edit of the dimensions, or order a band this laminate can make",
    )
}

fn circuit(family: &dyn Family, set: &Dimensions, book: &Book) -> Result<Circuit, Vec<Problem>> {
    let layout = family.layout(set)?;
    Circuit::new(&layout, book, set.order.filter.ports_ohm, Planes::Feed).map_err(|p| vec![p])
}

/// Moves the set along the family's knobs until its lossless passband is the prototype's, then snaps it to the shop grid.
///
/// # Errors
/// `passband-not-reached` when the goal is missed before snapping: the message says by how much; problems of the layout.
pub fn refine(family: &dyn Family, guess: &Dimensions) -> Result<Refined, Vec<Problem>> {
    let goal = family.target(&guess.order, guess.degree);
    let book = Book::new(AsBuilt::nominal(&guess.order).without_loss());
    let (guess, curves) = probe::spaced(family, guess, &book);
    let guess = &guess;
    let knobs = family.knobs(guess);
    let mut search = Search { family, guess, goal: goal.clone(), book: &book, knobs: &knobs };
    let x = search.run();
    let mut refined = guess.clone();
    apply(&knobs, &x, &mut refined);
    for (moved, start) in refined.list.iter_mut().zip(&guess.list) {
        let amount_m = moved.value_m - start.value_m;
        if amount_m != 0.0 {
            moved.corrections_m.push(("refined".into(), amount_m));
        }
    }
    let before_snapping = miss_with(family, &refined, &goal, &book)?;
    if !before_snapping.is_met() {
        return Err(vec![not_reached(&before_snapping, &goal, &curves)]);
    }
    let dimensions = snap(family, &refined, &goal, &book);
    let after_snapping = miss_with(family, &dimensions, &goal, &book)?;
    Ok(Refined { dimensions, before_snapping, after_snapping, curves })
}

fn not_reached(miss: &Miss, goal: &Target, curves: &[ProbeCurve]) -> Problem {
    // What could not be had by itself is most likely the reason.
    let lacking: Vec<String> =
        curves.iter().filter(|curve| curve.found_m.is_none()).map(|curve| format!("; {}", curve.describe())).collect();
    Problem::error(
        "passband-not-reached",
        band_key(goal),
        format!(
            "the best these dimensions do is {}; allowed are 1 % of the bandwidth or 0.3 % of the frequency ({:.2} MHz) and 0.5 dB{}",
            miss.describe(),
            goal.edges_hz.first().map_or(0.0, |edge| passband::allowed_hz(goal, *edge)) / 1e6,
            lacking.concat(),
        ),
        "make the band narrower, the degree lower or the laminate thinner",
    )
}

fn apply(knobs: &[Knob], x: &[f64], set: &mut Dimensions) {
    for (knob, x) in knobs.iter().zip(x) {
        for (index, moves) in &knob.moves {
            let value_m = &mut set.list[*index].value_m;
            match moves {
                Moves::Relative(rate) => *value_m *= (rate * x).exp(),
                Moves::Absolute(metres) => *value_m += metres * x,
            }
        }
    }
}

struct Search<'a> {
    family: &'a dyn Family,
    guess: &'a Dimensions,
    goal: Target,
    book: &'a Book,
    knobs: &'a [Knob],
}

impl Search<'_> {
    fn circuit(&self, x: &[f64]) -> Option<Circuit> {
        let mut set = self.guess.clone();
        apply(self.knobs, x, &mut set);
        circuit(self.family, &set, self.book).ok()
    }

    /// Alternates fitting and levelling until the goal is met with room to spare, and returns the best knobs seen.
    fn run(&mut self) -> Vec<f64> {
        let count = self.knobs.len();
        let steps = vec![KNOB_STEP; count];
        let greatest: Vec<f64> = self.knobs.iter().map(|k| k.greatest_step).collect();
        let mut x = vec![0.0; count];
        let mut best = (f64::INFINITY, x.clone());
        self.align(&mut x);
        let aligned = x.clone();
        let ports = self.guess.order.filter.ports_ohm;
        let mut measure = if ports[0] == ports[1] && self.is_symmetric(&x) { Measure::Signed } else { Measure::Squared };
        let mut is_fresh = true;
        for round in 0..ROUNDS {
            if round == 0 || best.0 > 1.0 {
                // Another measure begins anew; the same one goes on from the best so far.
                if is_fresh {
                    x.copy_from_slice(&aligned);
                } else if best.0.is_finite() {
                    x.copy_from_slice(&best.1);
                }
                is_fresh = measure == Measure::Signed;
                minimize(&mut x, &steps, &greatest, FIT_ITERATIONS, |x| self.fit(x, measure));
                self.keep(&x, &mut best);
                measure = Measure::Squared;
            }
            minimize(&mut x, &steps, &greatest, LEVEL_ITERATIONS, |x| self.level(x));
            self.keep(&x, &mut best);
            if best.0 < ENOUGH {
                break;
            }
        }
        best.1
    }

    /// Whether both ports see the same, so that K has a sign.
    fn is_symmetric(&self, x: &[f64]) -> bool {
        let at_hz: Vec<f64> = self.goal.edges_hz.iter().map(|edge| edge * (1.0 + 1.0 / 64.0)).collect();
        self.circuit(x).is_some_and(|circuit| circuit.sweep(&at_hz).s.iter().all(|[s11, .., s22]| (s11 - s22).norm() < ALIKE))
    }

    fn keep(&self, x: &[f64], best: &mut (f64, Vec<f64>)) {
        let ratio = self.circuit(x).and_then(|c| Passband::of(&c, &self.goal)).map(|p| Miss::of(&p, &self.goal).worst_ratio);
        if let Some(ratio) = ratio.filter(|ratio| *ratio < best.0) {
            *best = (ratio, x.to_vec());
        }
    }

    /// Turns all resonators together until the passband (or the stopband between two) lies about the ordered centre, so that the fit begins
    /// with its samples in the band.
    fn align(&self, x: &mut [f64]) {
        let [from_hz, to_hz] = match self.goal.edges_hz[..] {
            [from_hz, to_hz] if to_hz - from_hz < ALIGN_REACH * (from_hz + to_hz) => [from_hz, to_hz],
            _ => return self.align_edges(x),
        };
        let parameter = if self.goal.passes_hz.len() == 1 { 1 } else { 0 };
        let center_hz = 0.5 * (from_hz + to_hz);
        let wanted = 2.0 * ALIGN_REACH * center_hz / (to_hz - from_hz) * ALIGN_POINTS_PER_BAND;
        let points = (wanted.ceil() as usize).clamp(ALIGN_POINTS, ALIGN_POINTS_AT_MOST);
        let f: Vec<f64> = (0..points).map(|i| center_hz * (1.0 + ALIGN_REACH * (2.0 * i as f64 / (points - 1) as f64 - 1.0))).collect();
        for _ in 0..ALIGN_STEPS {
            let Some(circuit) = self.circuit(x) else { return };
            let weights: Vec<f64> = circuit.sweep(&f).s.iter().map(|s| s[parameter].norm_sqr().powi(2)).collect();
            let found_hz = f.iter().zip(&weights).map(|(f, w)| f * w).sum::<f64>() / weights.iter().sum::<f64>();
            if !found_hz.is_finite() {
                return;
            }
            for (x, _) in x.iter_mut().zip(self.knobs).filter(|(_, knob)| knob.is_resonator) {
                *x += found_hz / center_hz - 1.0;
            }
        }
    }

    /// The same for a target with one edge, or far apart ones: turned by the mean miss of the edges.
    fn align_edges(&self, x: &mut [f64]) {
        for _ in 0..ALIGN_STEPS {
            let Some(passband) = self.circuit(x).and_then(|circuit| Passband::of(&circuit, &self.goal)) else { return };
            let ratios: Vec<f64> =
                passband.edges_hz.iter().zip(&self.goal.edges_hz).map(|(found, ordered)| found / ordered - 1.0).collect();
            let mean = ratios.iter().sum::<f64>() / ratios.len().max(1) as f64;
            for (x, _) in x.iter_mut().zip(self.knobs).filter(|(_, knob)| knob.is_resonator) {
                *x += mean;
            }
        }
    }

    /// First stage: the characteristic function K against the prototype's over the band and a little outside, both compressed by an asinh
    /// that is even-handed within the ripple and counts dB outside.
    fn fit(&self, x: &[f64], measure: Measure) -> Option<Vec<f64>> {
        let points = SAMPLES_PER_DEGREE * self.goal.degree + 11;
        let f: Vec<f64> = self
            .goal
            .passes_hz
            .iter()
            .map(|pass| self.goal.grown(*pass, SAMPLE_REACH))
            .flat_map(|[low, high]| (0..points).map(move |i| low + (high - low) * i as f64 / (points - 1) as f64))
            .collect();
        let ripple = self.goal.edge_characteristic();
        let found: Vec<f64> = self.circuit(x)?.sweep(&f).s.iter().map(|s| characteristic(s) / ripple).collect();
        let wanted: Vec<f64> = f.iter().map(|f| self.goal.characteristic(*f)).collect();
        // The sign of the whole is free; where K is greatest, outside the band, the two must agree.
        let greatest = (0..f.len()).max_by(|a, b| wanted[*a].abs().total_cmp(&wanted[*b].abs()))?;
        let sign = if found[greatest] * wanted[greatest] < 0.0 { -1.0 } else { 1.0 };
        Some(
            found
                .iter()
                .zip(&wanted)
                .map(|(k, w)| match measure {
                    Measure::Signed => (sign * k).asinh() - w.asinh(),
                    Measure::Squared => 0.5 * ((k * k).asinh() - (w * w).asinh()),
                })
                .collect(),
        )
    }

    /// Second stage: edges in place, every ripple maximum at the edge level, every minimum a zero. `None` while the ripple has not its
    /// full count of lobes.
    fn level(&self, x: &[f64]) -> Option<Vec<f64>> {
        let circuit = self.circuit(x)?;
        let passband = Passband::of(&circuit, &self.goal)?;
        let edges =
            passband.edges_hz.iter().zip(&self.goal.edges_hz).map(|(found, ordered)| (found - ordered) / (0.01 * self.goal.width_hz));
        if self.goal.shape == ResponseShape::MaximallyFlat {
            // Flatness is held by the fit; here only the edges are brought in, the rest of the band keeping its weight.
            return Some(edges.chain(self.fit(x, Measure::Squared)?).collect());
        }
        if passband.minima.len() != self.goal.minima || passband.maxima.len() != self.goal.maxima {
            return None;
        }
        let level = self.goal.edge_reflection();
        let heights = passband.maxima.iter().map(|(_, r)| 10.0 * (r / level).ln());
        let zeros: Vec<f64> = passband.minima.iter().map(|(f, _)| *f).collect();
        let depths: Vec<f64> = circuit.sweep(&zeros).s.iter().flat_map(|s| [s[0].re, s[0].im]).map(|v| 3.0 * v / level.sqrt()).collect();
        Some(edges.chain(heights).chain(depths).collect())
    }
}

/// How the fit compares characteristic functions.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Measure {
    /// With their sign, which changes at every reflection zero: no fit can then mistake two zeros lost for two zeros met.
    Signed,
    /// By their squares.
    Squared,
}

/// K = S11/S21 of a lossless reciprocal two-port over j: real, and with a sign, where the two-port is symmetric; elsewhere its magnitude counts.
fn characteristic([s11, s21, _, s22]: &[Complex64; 4]) -> f64 {
    let k = if (s11 - s22).norm() < ALIKE { (s11 * s21.conj()).im } else { s11.norm() * s21.norm() };
    k / s21.norm_sqr().max(f64::MIN_POSITIVE)
}

/// Snaps to the shop grid once, then tries each dimension's neighbours on the grid and keeps what lessens the miss.
fn snap(family: &dyn Family, refined: &Dimensions, goal: &Target, book: &Book) -> Dimensions {
    let ratio = |set: &Dimensions| miss_with(family, set, goal, book).map_or(f64::INFINITY, |miss| miss.worst_ratio);
    let mut snapped = refined.on_grid();
    let mut best = ratio(&snapped);
    let grid_m = Nm::from_m(refined.order.shop.grid_m).m();
    for _ in 0..NEIGHBOUR_PASSES {
        if best < ENOUGH {
            break;
        }
        let before = best;
        for index in 0..snapped.list.len() {
            for step_m in [grid_m, -grid_m] {
                let mut neighbour = snapped.clone();
                let value_m = Nm::from_m(neighbour.list[index].value_m + step_m).m();
                let dimension = &mut neighbour.list[index];
                if let Some(grid) = dimension.corrections_m.last_mut() {
                    grid.1 += value_m - dimension.value_m;
                }
                dimension.value_m = value_m;
                let reached = ratio(&neighbour);
                if reached < best - LEAST_GAIN {
                    (best, snapped) = (reached, neighbour);
                    break;
                }
            }
        }
        if best >= before {
            break;
        }
    }
    snapped
}
