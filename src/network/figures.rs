//! The figures an engineer reads off a response, and a verdict for each requirement.

use super::response::Response;
use crate::order::Band;
use crate::order::Limit;
use crate::order::Order;
use crate::order::Requirement;
use crate::order::ResponseShape;

/// Figures of a predicted (or solved) response.
#[derive(Clone, Debug, PartialEq)]
pub struct Figures {
    /// Where the loss is read, hertz: the middle of the 3 dB edges of a passband, half the cutoff of a low-pass, half the lower edge of a
    /// stopband.
    pub center_hz: f64,
    /// -|S21| at the centre, dB.
    pub center_loss_db: f64,
    /// Edges 3 dB below the loss at the centre, hertz: two, one of a low-pass, none when not within the sweep.
    pub edges_3db_hz: Vec<f64>,
    /// Equal-ripple edges, hertz (passbands of equal ripple only): going in from the 3 dB edges, where the return loss first reaches the
    /// prototype's. Read off the return loss, since dissipation rounds the edges of |S21|.
    pub ripple_edges_hz: Vec<f64>,
    /// Greatest -|S21| in the ordered passband, dB; below the stopband of a band-stop.
    pub worst_loss_db: f64,
    /// Least return loss of either port there, dB.
    pub return_loss_db: f64,
    /// Group delay at the centre, seconds.
    pub group_delay_s: f64,
    /// Nearest spurious passband above: where -|S21| next falls below 10 dB over the centre loss, hertz; none for a band-stop.
    pub spurious_hz: Option<f64>,
    /// One per limit of each requirement.
    pub verdicts: Vec<Verdict>,
}

/// Whether one limit of one requirement is met.
#[derive(Clone, Debug, PartialEq)]
pub struct Verdict {
    /// Index into the order's requirements.
    pub requirement: usize,
    /// The limit judged.
    pub limit: Limit,
    /// The band it holds over, hertz.
    pub band_hz: [f64; 2],
    /// Worst value found, dB (seconds for group delay).
    pub found: f64,
    /// Where it was found, hertz.
    pub at_hz: f64,
    /// Distance to the limit, positive when met; same unit as `found`.
    pub margin: f64,
}

impl Verdict {
    /// Whether the limit is met.
    pub fn is_met(&self) -> bool {
        self.margin >= 0.0
    }

    /// One clause: what was found, where, against what.
    pub fn describe(&self) -> String {
        let at = format!("at {:.4} GHz", self.at_hz / 1e9);
        match self.limit {
            Limit::InsertionLossAtMost(db) => format!("insertion loss {:.2} dB {at}, at most {db} dB", self.found),
            Limit::ReturnLossAtLeast(db) => format!("return loss {:.2} dB {at}, at least {db} dB", self.found),
            Limit::RejectionAtLeast { db, below_center } => {
                let from = if below_center { " below the centre" } else { "" };
                format!("rejection {:.2} dB{from} {at}, at least {db} dB", self.found)
            }
            Limit::RippleAtMost(db) => format!("ripple {:.2} dB {at}, at most {db} dB", self.found),
            Limit::GroupDelayVariationAtMost(s) => {
                format!("group delay variation {:.3} ns {at}, at most {} ns", self.found * 1e9, s * 1e9)
            }
        }
    }
}

/// Depth below the loss at the centre at which another passband counts as spurious, dB.
const SPURIOUS_DB: f64 = 10.0;

impl Figures {
    /// Reads the figures of an order's response; the response must cover the ordered band.
    ///
    /// # Units
    /// Hertz, seconds, dB (losses positive).
    ///
    /// # Accuracy
    /// Values between the response's points are interpolated linearly in dB; [`sweep_hz`] spaces the points so that this is below 0.01 dB.
    pub fn of(order: &Order, response: &Response) -> Figures {
        let reader = Reader { response };
        let [from_hz, to_hz] = passes_hz(order)[0];
        let level_over = |f_hz: f64| reader.loss_db(f_hz) + HALF_POWER_DB;
        let edges_3db_hz = match order.filter.band {
            Band::LowPass { cutoff_hz } => Vec::from_iter(reader.rises(0.5 * cutoff_hz, level_over(0.5 * cutoff_hz))),
            Band::BandStop { from_hz, to_hz } => {
                let level_db = level_over(0.5 * from_hz);
                reader.falls(0.5 * (from_hz + to_hz), level_db).map_or_else(Vec::new, Vec::from)
            }
            Band::HighPass { from_hz, to_hz } | Band::BandPass { from_hz, to_hz } => {
                let center_hz = 0.5 * (from_hz + to_hz);
                reader.edges(center_hz, level_over(center_hz)).map_or_else(Vec::new, Vec::from)
            }
        };
        let center_hz = match (order.filter.band, &edges_3db_hz[..]) {
            (Band::LowPass { cutoff_hz }, _) => 0.5 * cutoff_hz,
            (Band::BandStop { from_hz, .. }, _) => 0.5 * from_hz,
            (_, [low, high]) => 0.5 * (low + high),
            _ => 0.5 * (from_hz + to_hz),
        };
        let center_loss_db = reader.loss_db(center_hz);
        let is_pass = matches!(order.filter.band, Band::HighPass { .. } | Band::BandPass { .. });
        let ripple_edges_hz = match (order.filter.response, &edges_3db_hz[..]) {
            (shape @ ResponseShape::EqualRipple { .. }, &[low, high]) if is_pass => {
                reader.return_loss_edges([low, high], shape.return_loss_db()).map_or_else(Vec::new, Vec::from)
            }
            _ => Vec::new(),
        };
        let above_hz = edges_3db_hz.last().copied().filter(|_| !matches!(order.filter.band, Band::BandStop { .. }));
        let verdicts = order.requirements.iter().enumerate().flat_map(|(index, requirement)| {
            let reader = &reader;
            requirement.limits.iter().map(move |limit| reader.verdict(index, requirement, *limit, center_loss_db))
        });
        Figures {
            center_hz,
            center_loss_db,
            ripple_edges_hz,
            worst_loss_db: reader.over(from_hz, to_hz).map(|f| reader.loss_db(f)).fold(0.0, f64::max),
            return_loss_db: reader.over(from_hz, to_hz).map(|f| reader.return_loss_db(f)).fold(f64::INFINITY, f64::min),
            group_delay_s: reader.delay_s(center_hz),
            spurious_hz: above_hz.and_then(|above_hz| reader.spurious_hz(above_hz, center_loss_db + SPURIOUS_DB)),
            edges_3db_hz,
            verdicts: verdicts.collect(),
        }
    }

    /// Whether every requirement is met.
    pub fn all_met(&self) -> bool {
        self.verdicts.iter().all(Verdict::is_met)
    }
}

/// Half power in dB.
const HALF_POWER_DB: f64 = 3.010_299_956_639_812;

/// The band the filter passes, as ordered; a stopband's edges for a band-stop.
pub fn passband_hz(order: &Order) -> [f64; 2] {
    match order.filter.band {
        Band::BandPass { from_hz, to_hz } | Band::HighPass { from_hz, to_hz } | Band::BandStop { from_hz, to_hz } => [from_hz, to_hz],
        Band::LowPass { cutoff_hz } => [0.0, cutoff_hz],
    }
}

/// What the filter passes, as ordered: one interval, two of a band-stop, of which the upper is as wide as the stopband.
pub fn passes_hz(order: &Order) -> Vec<[f64; 2]> {
    match order.filter.band {
        Band::BandPass { from_hz, to_hz } | Band::HighPass { from_hz, to_hz } => vec![[from_hz, to_hz]],
        Band::LowPass { cutoff_hz } => vec![[0.0, cutoff_hz]],
        Band::BandStop { from_hz, to_hz } => vec![[0.0, from_hz], [to_hz, to_hz + (to_hz - from_hz)]],
    }
}

/// Points per bandwidth of the default sweep.
const POINTS_PER_BAND: f64 = 100.0;
/// A wide band is swept in steps of at most this part of its upper edge: its ripples are narrower than the band.
const POINTS_PER_EDGE: f64 = 500.0;
/// Their greatest number.
const MOST_POINTS: usize = 8001;

/// The frequencies at which an order's response is predicted: evenly spaced, on round numbers, from a quarter of the band's lower edge
/// to three and a quarter times its upper one (so that the first two spurious passbands show), and further where a requirement lies outside.
pub fn sweep_hz(order: &Order) -> Vec<f64> {
    let [from_hz, to_hz] = passband_hz(order);
    let low = order.requirements.iter().map(|r| r.from_hz).fold(0.25 * if from_hz > 0.0 { from_hz } else { to_hz }, f64::min);
    let high = order.requirements.iter().map(|r| r.to_hz).fold(3.25 * to_hz, f64::max);
    let finest = ((to_hz - from_hz) / POINTS_PER_BAND).min(to_hz / POINTS_PER_EDGE).max((high - low) / (MOST_POINTS - 3) as f64);
    let decade = 10f64.powf(finest.log10().floor());
    let step = [1.0, 2.0, 5.0].map(|m| m * decade).into_iter().filter(|s| *s <= finest * 1.0001).fold(decade, f64::max);
    let step = if (high - low) / step > (MOST_POINTS - 3) as f64 { step * 2.5 } else { step };
    let first = (low / step).floor().max(1.0) as u64;
    let last = (high / step).ceil() as u64;
    (first..=last).map(|i| i as f64 * step).collect()
}

struct Reader<'a> {
    response: &'a Response,
}

impl Reader<'_> {
    fn f(&self) -> &[f64] {
        &self.response.f_hz
    }

    /// A quantity of the points, interpolated linearly; the end values outside the sweep.
    fn between(&self, f_hz: f64, value: impl Fn(usize) -> f64) -> f64 {
        let f = self.f();
        let above = f.partition_point(|x| *x < f_hz);
        if above == 0 {
            return value(0);
        }
        if above == f.len() {
            return value(f.len() - 1);
        }
        let part = (f_hz - f[above - 1]) / (f[above] - f[above - 1]);
        value(above - 1) * (1.0 - part) + value(above) * part
    }

    fn loss_db(&self, f_hz: f64) -> f64 {
        self.between(f_hz, |i| self.response.insertion_loss_db(i))
    }

    fn return_loss_db(&self, f_hz: f64) -> f64 {
        self.between(f_hz, |i| self.response.return_loss_db(i))
    }

    fn delay_s(&self, f_hz: f64) -> f64 {
        let f = self.f();
        if f.len() < 2 {
            return 0.0;
        }
        // Over each interval the delay is the phase step of S21; it belongs to the interval's middle.
        let interval = |i: usize| {
            let i = i.min(f.len() - 2);
            -(self.response.s[i + 1][1] / self.response.s[i][1]).arg() / (std::f64::consts::TAU * (f[i + 1] - f[i]))
        };
        let step = f[1] - f[0];
        let place = ((f_hz - f[0]) / step - 0.5).max(0.0);
        let (below, part) = (place.floor() as usize, place.fract());
        interval(below) * (1.0 - part) + interval(below + 1) * part
    }

    /// The sweep's points inside a band, and its two ends.
    fn over(&self, from_hz: f64, to_hz: f64) -> impl Iterator<Item = f64> {
        let inside: Vec<f64> = self.f().iter().copied().filter(|f| *f > from_hz && *f < to_hz).collect();
        std::iter::once(from_hz).chain(inside).chain(std::iter::once(to_hz))
    }

    /// Going out from `start_hz`, where the loss first exceeds `level_db` on each side.
    fn edges(&self, start_hz: f64, level_db: f64) -> Option<[f64; 2]> {
        let f = self.f();
        let loss = |i: usize| self.response.insertion_loss_db(i);
        let middle = f.partition_point(|x| *x < start_hz).min(f.len().checked_sub(1)?);
        let cross = |inside: usize, outside: usize| {
            let part = (level_db - loss(inside)) / (loss(outside) - loss(inside));
            f[inside] + part.clamp(0.0, 1.0) * (f[outside] - f[inside])
        };
        let low = (0..middle).rev().find(|i| loss(*i) > level_db).map(|i| cross(i + 1, i))?;
        let high = (middle + 1..f.len()).find(|i| loss(*i) > level_db).map(|i| cross(i - 1, i))?;
        Some([low, high])
    }

    /// Going up from `start_hz`, where the loss first exceeds `level_db`.
    fn rises(&self, start_hz: f64, level_db: f64) -> Option<f64> {
        let f = self.f();
        let loss = |i: usize| self.response.insertion_loss_db(i);
        let start = f.partition_point(|x| *x < start_hz).max(1);
        let outside = (start..f.len()).find(|i| loss(*i) > level_db)?;
        let part = (level_db - loss(outside - 1)) / (loss(outside) - loss(outside - 1));
        Some(f[outside - 1] + part.clamp(0.0, 1.0) * (f[outside] - f[outside - 1]))
    }

    /// Going out from the middle of a stopband, where the loss first falls below `level_db` on each side.
    fn falls(&self, middle_hz: f64, level_db: f64) -> Option<[f64; 2]> {
        let f = self.f();
        let loss = |i: usize| self.response.insertion_loss_db(i);
        let middle = f.partition_point(|x| *x < middle_hz).min(f.len().checked_sub(1)?);
        let cross = |stopped: usize, passed: usize| {
            let part = (loss(stopped) - level_db) / (loss(stopped) - loss(passed));
            f[stopped] + part.clamp(0.0, 1.0) * (f[passed] - f[stopped])
        };
        let low = (0..middle).rev().find(|i| loss(*i) < level_db).map(|i| cross(i + 1, i))?;
        let high = (middle + 1..f.len()).find(|i| loss(*i) < level_db).map(|i| cross(i - 1, i))?;
        Some([low, high])
    }

    /// Going in from `outer_hz` on each side, where the return loss first reaches `level_db`.
    fn return_loss_edges(&self, outer_hz: [f64; 2], level_db: f64) -> Option<[f64; 2]> {
        let f = self.f();
        let reaches = |i: &usize| self.response.return_loss_db(*i) >= level_db;
        let inside = f.partition_point(|x| *x < outer_hz[0])..f.partition_point(|x| *x <= outer_hz[1]);
        let cross = |outside: usize, inside: usize| {
            let (a, b) = (self.response.return_loss_db(outside), self.response.return_loss_db(inside));
            f[outside] + ((level_db - a) / (b - a)).clamp(0.0, 1.0) * (f[inside] - f[outside])
        };
        let (low, high) = (inside.clone().find(reaches)?, inside.rev().find(reaches)?);
        Some([cross(low.checked_sub(1)?, low), if high + 1 < f.len() { cross(high + 1, high) } else { f[high] }])
    }

    fn spurious_hz(&self, above_hz: f64, level_db: f64) -> Option<f64> {
        let f = self.f();
        let start = f.partition_point(|x| *x < above_hz);
        let out = (start..f.len()).find(|i| self.response.insertion_loss_db(*i) > level_db)?;
        (out..f.len()).find(|i| self.response.insertion_loss_db(*i) < level_db).map(|i| f[i])
    }

    fn verdict(&self, requirement: usize, asked: &Requirement, limit: Limit, center_loss_db: f64) -> Verdict {
        let band_hz = [asked.from_hz, asked.to_hz];
        // The least and the greatest of a quantity over the band, with their places.
        let range = |value: &dyn Fn(f64) -> f64| {
            self.over(asked.from_hz, asked.to_hz)
                .map(|f| (f, value(f)))
                .fold(((0.0, f64::INFINITY), (0.0, f64::NEG_INFINITY)), |(least, most), point| {
                    (if point.1 < least.1 { point } else { least }, if point.1 > most.1 { point } else { most })
                })
        };
        let loss = |f: f64| self.loss_db(f);
        let ((at_hz, found), margin) = match limit {
            Limit::InsertionLossAtMost(db) => {
                let (_, most) = range(&loss);
                (most, db - most.1)
            }
            Limit::ReturnLossAtLeast(db) => {
                let (least, _) = range(&|f| self.return_loss_db(f));
                (least, least.1 - db)
            }
            Limit::RejectionAtLeast { db, below_center } => {
                let (least, _) = range(&loss);
                let found = least.1 - if below_center { center_loss_db } else { 0.0 };
                ((least.0, found), found - db)
            }
            Limit::RippleAtMost(db) => {
                let (least, most) = range(&loss);
                ((most.0, most.1 - least.1), db - (most.1 - least.1))
            }
            Limit::GroupDelayVariationAtMost(seconds) => {
                let (least, most) = range(&|f| self.delay_s(f));
                ((most.0, most.1 - least.1), seconds - (most.1 - least.1))
            }
        };
        Verdict { requirement, limit, band_hz, found, at_hz, margin }
    }
}

#[cfg(test)]
mod tests {
    use num_complex::Complex64;

    use super::*;
    use crate::network::Method;

    /// A delayed single resonance with Q = 50 at 1 GHz: |S21|^2 = 1/(1 + x^2), half-power edges f0 (1 +- 1/(2 Q)) to first order.
    fn resonance() -> Response {
        let f_hz: Vec<f64> = (1..=4000).map(|i| i as f64 * 0.5e6).collect();
        let s = f_hz
            .iter()
            .map(|f| {
                let x = 50.0 * (f / 1e9 - 1e9 / f);
                let s21 = Complex64::from_polar(1.0, -std::f64::consts::TAU * f * 1e-9) / Complex64::new(1.0, x);
                let s11 = Complex64::new(1.0, 0.0) - Complex64::new(1.0, x).inv();
                [s11, s21, s21, s11]
            })
            .collect();
        Response { method: Method::Network, z0_ohm: [50.0; 2], f_hz, s }
    }

    #[test]
    fn reads_edges_and_delay_of_an_exact_resonance() {
        let response = resonance();
        let reader = Reader { response: &response };
        let [low, high] = reader.edges(1e9, HALF_POWER_DB).unwrap();
        // Exact edges: f/f0 - f0/f = +-1/Q, so f = f0 (sqrt(1 + 1/(4 Q^2)) +- 1/(2 Q)); 20 kHz is the interpolation between 0.5 MHz points.
        let root = (1.0f64 + 1.0 / 1e4).sqrt();
        assert!((low / 1e9 - (root - 0.01)).abs() < 2e-5 && (high / 1e9 - (root + 0.01)).abs() < 2e-5, "{low} {high}");
        // Exact delay at resonance: 1 ns of line and 2 Q / w0.
        let exact = 1e-9 + 100.0 / (std::f64::consts::TAU * 1e9);
        assert!((reader.delay_s(1e9) / exact - 1.0).abs() < 1e-3);
    }
}
