//! The lossless response to which a family's dimensions are refined.

use std::fmt;
use std::sync::Arc;

use crate::order::Band;
use crate::order::Order;
use crate::order::ResponseShape;
use crate::prototype::characteristic;
use crate::prototype::edge_height;

/// A low-pass is scanned from this part of its cutoff upwards: below, its reflection is a zero that every circuit between equal ports has.
const LOWEST_OF_CUTOFF: f64 = 0.02;

/// A very wide band is grown as if it were no wider than so many times its lower edge.
const LOWEST_REACH: f64 = 1.6;

/// K over its height at the edge, as a function of frequency in hertz.
type Law = Arc<dyn Fn(f64) -> f64 + Send + Sync>;

/// Where a filter passes, where its edges must lie, and the characteristic function it should have.
#[derive(Clone)]
pub struct Target {
    /// Intervals it passes, rising, hertz.
    pub passes_hz: Vec<[f64; 2]>,
    /// Those ends of the intervals that are edges to be held, rising.
    pub edges_hz: Vec<f64>,
    /// What a miss of an edge is measured against: the bandwidth, the cutoff, the width of the stopband.
    pub width_hz: f64,
    /// Frequency of a passband without reflection, or the middle of the one interval.
    pub center_hz: f64,
    /// Degree.
    pub degree: usize,
    /// Shape.
    pub shape: ResponseShape,
    /// Reflection zeros within the intervals.
    pub minima: usize,
    /// Reflection maxima between zeros within the intervals.
    pub maxima: usize,
    law: Law,
}

impl fmt::Debug for Target {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "degree {} passing {:?} Hz", self.degree, self.passes_hz)
    }
}

impl Target {
    /// A target of one's own: `law` is K over its height at the edge.
    pub fn new(
        order: &Order,
        degree: usize,
        passes_hz: Vec<[f64; 2]>,
        edges_hz: Vec<f64>,
        [minima, maxima]: [usize; 2],
        law: impl Fn(f64) -> f64 + Send + Sync + 'static,
    ) -> Target {
        let width_hz = match order.filter.band {
            Band::LowPass { cutoff_hz } => cutoff_hz,
            Band::HighPass { from_hz, to_hz } | Band::BandPass { from_hz, to_hz } | Band::BandStop { from_hz, to_hz } => to_hz - from_hz,
        };
        let [first, last] = [passes_hz.first().map_or(0.0, |p| p[0]), passes_hz.first().map_or(0.0, |p| p[1])];
        let center_hz = 0.5 * (first + last);
        Target { passes_hz, edges_hz, width_hz, center_hz, degree, shape: order.filter.response, minima, maxima, law: Arc::new(law) }
    }

    /// A band-pass whose prototype's frequency runs evenly from edge to edge: narrow bands.
    pub fn band_pass(order: &Order, degree: usize, [from_hz, to_hz]: [f64; 2]) -> Target {
        let shape = order.filter.response;
        let counts = [degree, degree.saturating_sub(1)];
        Target::new(order, degree, vec![[from_hz, to_hz]], vec![from_hz, to_hz], counts, move |f| {
            characteristic(shape, degree, (2.0 * f - from_hz - to_hz) / (to_hz - from_hz))
        })
    }

    /// A low-pass with a cutoff; `x` turns frequency into the prototype's, 1 at the cutoff. For odd degrees between equal ports.
    pub fn low_pass(order: &Order, degree: usize, cutoff_hz: f64, x: impl Fn(f64) -> f64 + Send + Sync + 'static) -> Target {
        let shape = order.filter.response;
        let half = degree / 2;
        let pass = [LOWEST_OF_CUTOFF * cutoff_hz, cutoff_hz];
        Target::new(order, degree, vec![pass], vec![cutoff_hz], [half, half], move |f| characteristic(shape, degree, x(f)))
    }

    /// A band-stop between two passbands, the upper one to `highest_hz`; `x` turns frequency into the low-pass prototype's, 1 in size
    /// at both edges and 0 far from the stopband. For odd degrees between equal ports.
    pub fn band_stop(
        order: &Order,
        degree: usize,
        [from_hz, to_hz]: [f64; 2],
        highest_hz: f64,
        x: impl Fn(f64) -> f64 + Send + Sync + 'static,
    ) -> Target {
        let shape = order.filter.response;
        let passes = vec![[LOWEST_OF_CUTOFF * from_hz, from_hz], [to_hz, highest_hz]];
        let count = 2 * (degree / 2);
        Target::new(order, degree, passes, vec![from_hz, to_hz], [count, count], move |f| characteristic(shape, degree, x(f)))
    }

    /// |S11|^2 at the edges: the ripple level, or one half for maximally flat.
    pub fn edge_reflection(&self) -> f64 {
        match self.shape {
            ResponseShape::MaximallyFlat => 0.5,
            ResponseShape::EqualRipple { ripple_db } => 1.0 - 10f64.powf(-ripple_db / 10.0),
        }
    }

    /// |S11/S21| at the edges.
    pub fn edge_characteristic(&self) -> f64 {
        edge_height(self.shape)
    }

    /// K over its height at the edge.
    pub fn characteristic(&self, f_hz: f64) -> f64 {
        (self.law)(f_hz)
    }

    /// Attenuation of the lossless target, dB.
    pub fn attenuation_db(&self, f_hz: f64) -> f64 {
        let k = self.edge_characteristic() * self.characteristic(f_hz);
        10.0 / std::f64::consts::LN_10 * (k * k).ln_1p()
    }

    /// An interval grown outwards at its edges by a part of itself (or of the stopband, where that is narrower).
    pub fn grown(&self, [from, to]: [f64; 2], part: f64) -> [f64; 2] {
        let held = |end: f64| self.edges_hz.contains(&end);
        // Half of this is still above zero frequency, and below the next passband of a high-pass of stubs, which comes as far above its upper edge as the
        // lower edge is from zero, twice.
        let room = if held(from) { LOWEST_REACH * from } else { f64::INFINITY };
        let reach = part * (to - from).min(self.width_hz).min(room);
        [if held(from) { from - reach } else { from }, if held(to) { to + reach } else { to }]
    }
}
