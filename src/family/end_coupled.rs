//! End-coupled half-wave resonators: strips in one line, each coupled to the next across a gap.
//!
//! # Source
//! Cohn, "Direct-coupled-resonator filters", Proc. IRE 45, 1957, pp. 187-196: admittance inverters from the prototype, a series
//! capacitance for each, and what it takes out of the resonators' lengths.
//!
//! # Valid range
//! Narrow bands: a gap that can be etched makes a small capacitance, so the ends allow some 1 to 3 % of bandwidth on thick laminates of high
//! permittivity and less on others. The second passband lies near twice the centre. The board is n half waves long.

use std::f64::consts::PI;

use super::Family;
use super::Knob;
use super::Moves;
use super::Structure;
use super::feeds;
use super::own;
use crate::base::Dimensionality;
use crate::base::Nm;
use crate::base::Outcome;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::base::bisect;
use crate::dimensions::Dimension;
use crate::dimensions::Dimensions;
use crate::layout::Draft;
use crate::layout::Layout;
use crate::layout::Part;
use crate::layout::Way;
use crate::line::AsBuilt;
use crate::line::C_M_PER_S;
use crate::line::Strip;
use crate::line::gap::unequal_gap;
use crate::line::width_for_impedance;
use crate::order::Band;
use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;
use crate::prototype::ladder;

/// The end-coupled family.
pub struct EndCoupled;

/// Gaps looked for, in dielectric thicknesses: below, the gap is no gap; above, the resonators hardly see each other.
const GAPS: [f64; 2] = [0.01, 5.0];
/// The gap is found to this part of itself, far below what refinement moves it by.
const CLOSE: f64 = 1e-4;

static KEYS: &[Key] = &[
    Key {
        name: "resonator-impedance",
        about: "impedance of the resonators; lower makes wider strips, a greater gap capacitance and less loss",
        kind: OwnKind::Quantity(Dimensionality::Impedance),
        default: Some("50 ohm"),
    },
    Key {
        name: "feed-length",
        about: "straight feed between launch and first gap",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("4 mm"),
    },
];

impl Structure for EndCoupled {
    fn name(&self) -> &'static str {
        "end-coupled"
    }

    fn about(&self) -> &'static str {
        "band-pass, half-wave resonators in one line, coupled across gaps; up to 3 % wide, no vias, long"
    }

    fn keys(&self) -> &'static [Key] {
        KEYS
    }

    fn names(&self, order: &Order, degree: usize) -> Vec<String> {
        names(order, degree)
    }

    fn layout(&self, set: &Dimensions) -> Result<Layout, Vec<Problem>> {
        layout(set).map_err(|problem| vec![problem])
    }
}

impl Family for EndCoupled {
    fn passes(&self) -> Passes {
        Passes::Band
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/end-coupled.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        (1, 9)
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let Band::BandPass { from_hz, to_hz } = order.filter.band else {
            return Err(vec![Problem::error(
                "band-not-of-the-family",
                Place::Key("filter.passband".into()),
                "end-coupled filters pass a band",
                "give passband = [from, to]",
            )]);
        };
        let (center_hz, fraction) = (0.5 * (from_hz + to_hz), 2.0 * (to_hz - from_hz) / (from_hz + to_hz));
        let g = ladder(order.filter.response, degree);
        let inverters: Vec<f64> = (1..=degree + 1).map(|k| inverter(&g, k, fraction)).collect();
        let guess = Guess {
            center_hz,
            inverters,
            resonator_ohm: own::number(order, KEYS, "resonator-impedance"),
            feed_m: own::number(order, KEYS, "feed-length"),
        };
        let list = guess.dimensions(order)?;
        Ok((Dimensions { order: order.clone(), degree, list }, Vec::new()))
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        knobs(set)
    }
}

pub(super) fn gap_name(k: usize) -> String {
    format!("gap {k}")
}

pub(super) fn length_name(j: usize) -> String {
    format!("resonator {j} length")
}

const WIDTH: &str = "resonator width";

/// Names of the dimensions in drawing order.
pub(super) fn names(order: &Order, degree: usize) -> Vec<String> {
    let chain = (1..=degree).flat_map(|j| [gap_name(j), length_name(j)]);
    std::iter::once(WIDTH.to_string()).chain(chain).chain([gap_name(degree + 1)]).chain(feeds::names(order)).collect()
}

/// Feed, gap, resonator, gap and so on, all on one axis.
pub(super) fn layout(set: &Dimensions) -> Result<Layout, Problem> {
    let value = |name: String| set.value(&name).map(Nm::from_m);
    let width = value(WIDTH.into())?;
    let mut draft = Draft::default();
    let (start, mut arriving) = feeds::begin(&mut draft, set, Point::default())?;
    for j in 1..=set.degree {
        let near = across(&mut draft, arriving, gap_name(j), value(gap_name(j))?, width);
        arriving = draft.strip(near, value(length_name(j))?, Way::Right, vec![WIDTH.into(), length_name(j)]);
    }
    let last = set.degree + 1;
    let near = across(&mut draft, arriving, gap_name(last), value(gap_name(last))?, feeds::read(set, 2)?.width);
    let end = feeds::end(&mut draft, set, near)?;
    Ok(draft.finish([start, end], set.degree + 2))
}

/// A gap from the strip that arrives to one of a width; returns where that begins.
fn across(draft: &mut Draft, arriving: usize, name: String, gap: Nm, width: Nm) -> usize {
    let middle = Way::Right.on(draft.node(arriving).middle(), gap);
    let near = draft.mouth(middle, width, Way::Left);
    draft.place(Part::Gap { width: gap }, vec![arriving, near], vec![name]);
    near
}

/// J over the admittance of the lines of inverter k (1 to n+1), Cohn 1957.
pub(super) fn inverter(g: &[f64], k: usize, fraction: f64) -> f64 {
    let (before, after) = (g[k - 1], g[k]);
    let slope = 0.5 * PI * fraction;
    // For even equal ripple g(n+1) is not 1: the last inverter absorbs it, so both ports keep the impedance ordered.
    if k == 1 || k + 1 == g.len() { (slope / (before * after)).sqrt() } else { slope / (before * after).sqrt() }
}

/// What a first guess starts from.
pub(super) struct Guess {
    pub center_hz: f64,
    /// J over Y of each gap, in order.
    pub inverters: Vec<f64>,
    pub resonator_ohm: f64,
    pub feed_m: f64,
}

impl Guess {
    /// The whole list of an order's dimensions.
    pub fn dimensions(&self, order: &Order) -> Result<Vec<Dimension>, Vec<Problem>> {
        let built = AsBuilt::nominal(order).without_loss();
        let ports = feeds::guess(order, &built, self.feed_m, self.center_hz)?;
        let width_m = width_for_impedance(&built, self.resonator_ohm, self.center_hz).map_err(|unreachable| {
            vec![Problem::error(
                "impedance-out-of-reach",
                Place::Key("filter.resonator-impedance".into()),
                format!("no resonator of {} ohm: {}", self.resonator_ohm, unreachable.message),
                unreachable.help,
            )]
        })?;
        let resonator = Strip::new(&built, width_m);
        let feed = |port: usize| {
            let name = feeds::line_names(port);
            let width_m = ports.iter().find(|d| Some(&d.name) == name.first()).map_or(width_m, |d| d.value_m);
            Strip::new(&built, width_m)
        };
        let count = self.inverters.len();
        let mut list = vec![Dimension::guess(WIDTH.into(), width_m, &[("Z0 ohm", self.resonator_ohm)])];
        let mut problems = Vec::new();
        let mut gaps = Vec::new();
        for (index, j) in self.inverters.iter().enumerate() {
            let (k, port_ohm) = (index + 1, order.filter.ports_ohm);
            // The two lines of the gap; between unlike ones the susceptance is counted against the mean admittance.
            let (one, other, level_ohm) = match k {
                1 => (feed(1), resonator.clone(), (port_ohm[0] * self.resonator_ohm).sqrt()),
                k if k == count => (resonator.clone(), feed(2), (port_ohm[1] * self.resonator_ohm).sqrt()),
                _ => (resonator.clone(), resonator.clone(), self.resonator_ohm),
            };
            let susceptance = j / (1.0 - j * j);
            let series_f = susceptance / (level_ohm * 2.0 * PI * self.center_hz);
            match gap_for(&one, &other, series_f, order.shop.gap_m) {
                Ok(gap_m) => gaps.push((gap_m, susceptance, series_f, unequal_gap(&one, &other, gap_m))),
                Err(why) => problems.push(Problem::error(
                    "coupling-out-of-reach",
                    Place::Key("filter.passband".into()),
                    format!("gap {k} wants {:.4} pF between the strips' ends: {why}", series_f * 1e12),
                    mending(*j),
                )),
            }
        }
        if !problems.is_empty() {
            return Err(problems);
        }
        let mode = resonator.at(self.center_hz);
        let beta = mode.beta_rad_per_m(self.center_hz);
        for (index, pair) in gaps.windows(2).enumerate() {
            let (left, right) = (&pair[0], &pair[1]);
            list.push(gap_guess(index + 1, left.0, self.inverters[index], left.1, left.2));
            // Each gap looks from its resonator like a piece of line of half its angle.
            let theta = PI - 0.5 * ((2.0 * left.1).atan() + (2.0 * right.1).atan());
            let mut length = Dimension::guess(length_name(index + 1), theta / beta, &[("electrical length deg", theta.to_degrees())]);
            // Charge on the ends that goes to ground stands for a length of line: c Z C / sqrt(eps_eff).
            let as_length = |farad: f64| farad * mode.z0_ohm * C_M_PER_S / mode.eps_eff.sqrt();
            length.correct("end capacitance to ground, left", -as_length(left.3.shunt_other_f));
            length.correct("end capacitance to ground, right", -as_length(right.3.shunt_one_f));
            list.push(length);
        }
        if let (Some(last), Some(j)) = (gaps.last(), self.inverters.last()) {
            list.push(gap_guess(count, last.0, *j, last.1, last.2));
        }
        list.extend(ports);
        Ok(list)
    }
}

fn gap_guess(k: usize, gap_m: f64, inverter: f64, susceptance: f64, series_f: f64) -> Dimension {
    Dimension::guess(gap_name(k), gap_m, &[("J/Y", inverter), ("B/Y", susceptance), ("C pF", series_f * 1e12)])
}

/// The gap with a series capacitance, or why there is none.
fn gap_for(one: &Strip, other: &Strip, series_f: f64, least_m: f64) -> Result<f64, String> {
    let height_m = one.board().thickness_m;
    let [low, high] = GAPS.map(|share| (share * height_m).ln());
    let miss = |ln_gap: f64| (unequal_gap(one, other, ln_gap.exp()).series_f / series_f).ln();
    let pf = |gap_m: f64| unequal_gap(one, other, gap_m).series_f * 1e12;
    match bisect(miss, low, high, CLOSE) {
        Some(ln_gap) if ln_gap.exp() >= least_m => Ok(ln_gap.exp()),
        Some(ln_gap) => Err(format!(
            "a gap of {:.3} mm, the shop's narrowest is {:.3} mm and makes {:.4} pF",
            ln_gap.exp() * 1e3,
            least_m * 1e3,
            pf(least_m)
        )),
        None if miss(low) < 0.0 => {
            Err(format!("more than any gap makes; the shop's narrowest, {:.3} mm, makes {:.4} pF", least_m * 1e3, pf(least_m)))
        }
        None => Err(format!("less than a gap of {:.1} mm makes", high.exp() * 1e3)),
    }
}

fn mending(inverter: f64) -> String {
    if inverter > 0.02 {
        "this band is too wide for gaps across the ends: take family = \"edge-coupled\", or a narrower band, a thicker laminate, or a shop with finer gaps".into()
    } else {
        "make the band wider, or choose a family for narrower bands".into()
    }
}

/// One knob a coupling, one a resonator; partners move together where the set is symmetric.
pub(super) fn knobs(set: &Dimensions) -> Vec<Knob> {
    let (gaps, resonators) = (set.degree + 1, set.degree);
    let same = |one: &str, other: &str| set.value(one) == set.value(other);
    let symmetric = set.order.filter.ports_ohm[0] == set.order.filter.ports_ohm[1]
        && (1..=gaps).all(|k| same(&gap_name(k), &gap_name(gaps + 1 - k)))
        && (1..=resonators).all(|j| same(&length_name(j), &length_name(resonators + 1 - j)));
    let at = |name: String| set.list.iter().position(|d| d.name == name);
    let mirrored = |k: usize, count: usize| if symmetric && 2 * k != count + 1 { vec![k, count + 1 - k] } else { vec![k] };
    let distinct = |count: usize| if symmetric { count.div_ceil(2) } else { count };
    let couplings = (1..=distinct(gaps)).map(|k| Knob {
        about: format!("coupling {k}"),
        is_resonator: false,
        // The capacitance falls roughly as the gap grows.
        moves: mirrored(k, gaps).into_iter().filter_map(|k| at(gap_name(k))).map(|i| (i, Moves::Relative(-1.0))).collect(),
        greatest_step: 0.2,
    });
    let tunings = (1..=distinct(resonators)).map(|j| Knob {
        about: format!("resonator {j}"),
        is_resonator: true,
        moves: mirrored(j, resonators)
            .into_iter()
            .filter_map(|j| at(length_name(j)))
            .map(|i| (i, Moves::Absolute(set.list[i].value_m)))
            .collect(),
        greatest_step: 0.05,
    });
    couplings.chain(tunings).collect()
}
