//! Interdigital: quarter-wave resonators side by side, grounded at alternate ends, the first and last one tapped.
//!
//! # Source
//! Couplings and external Q from the prototype: J.-S. Hong, M. J. Lancaster, *Microstrip Filters for RF/Microwave Applications*, 2001, section 5.2.4; the tap of a
//! grounded quarter-wave resonator after E. G. Cristal, "Tapped-line coupled transmission lines with applications to interdigital and combline filters",
//! IEEE Trans. MTT-23, 1975 (from memory): Qe = pi R / (4 Z sin^2 theta), theta from the grounded end to the tap. Spacings come from the program's own network of
//! two resonators.
//!
//! # Valid range
//! Up to about half an octave. All couplings between the strips, neighbours or not, are in the network; those between open ends and the strips beyond are not.
//! The inductance law of the grounding holes is good to 0.03 nH, about 0.5 % of the centre frequency. The second passband lies near three times the centre.

use super::Family;
use super::Knob;
use super::Probe;
use super::Structure;
use super::comb;
use super::feeds;
use super::grounds;
use super::own;
use super::row;
use crate::base::Dimensionality;
use crate::base::Nm;
use crate::base::Outcome;
use crate::base::Problem;
use crate::dimensions::Dimension;
use crate::dimensions::Dimensions;
use crate::layout::Draft;
use crate::layout::Layout;
use crate::layout::Part;
use crate::layout::Way;
use crate::line::AsBuilt;
use crate::line::ViaHoles;
use crate::line::open_end;
use crate::line::via;
use crate::order::Band;
use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;

/// The interdigital family.
pub struct Interdigital;

/// Most holes side by side at a resonator's grounded end.
const MOST_HOLES: usize = 4;
static KEYS: &[Key] = &[
    Key {
        name: "resonator-impedance",
        about: "impedance of a resonator's strip alone; lower makes wider strips with less loss",
        kind: OwnKind::Quantity(Dimensionality::Impedance),
        default: Some("55 ohm"),
    },
    Key {
        name: "feed-length",
        about: "straight feed between launch and first resonator",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("4 mm"),
    },
];

impl Structure for Interdigital {
    fn name(&self) -> &'static str {
        "interdigital"
    }

    fn about(&self) -> &'static str {
        "band-pass, quarter-wave resonators grounded by vias at alternate ends, tapped; 5 to 40 % wide, small"
    }

    fn keys(&self) -> &'static [Key] {
        KEYS
    }

    fn names(&self, order: &Order, degree: usize) -> Vec<String> {
        row::names(order, degree)
    }

    fn layout(&self, set: &Dimensions) -> Result<Layout, Vec<Problem>> {
        let all: Vec<usize> = (1..=set.degree).collect();
        drawn(set, &all, true)
    }
}

/// The circuit of some neighbouring resonators, with its feeds or (to be measured) without: ports then sit at the taps.
fn drawn(set: &Dimensions, which: &[usize], with_feeds: bool) -> Result<Layout, Vec<Problem>> {
    let one = |problem: Problem| vec![problem];
    let value = |name: String| set.value(&name).map(Nm::from_m).map_err(one);
    let widths = which.iter().map(|i| value(row::resonator(*i, "width"))).collect::<Result<Vec<_>, _>>()?;
    let gaps = which.windows(2).map(|pair| value(row::gap(pair[0]))).collect::<Result<Vec<_>, _>>()?;
    let lengths = which.iter().map(|i| value(row::resonator(*i, "length"))).collect::<Result<Vec<_>, _>>()?;
    // The grounded ends of both sides stand on two lines, as far apart as the mean resonator is long.
    let height = row::mean(&lengths);
    let from_below = |i: usize| i % 2 == 1;
    let mut strips = comb::row(Nm::ZERO, &widths, &gaps, Nm::ZERO, height);
    for ((strip, i), length) in strips.iter_mut().zip(which).zip(&lengths) {
        if from_below(*i) {
            strip.top = *length;
        } else {
            strip.bottom = height - *length;
        }
    }
    let mut taps = Vec::new();
    let mut feeds_of = Vec::new();
    for (port, i, strip, side) in [(1, which[0], 0, Way::Left), (2, which[which.len() - 1], which.len() - 1, Way::Right)] {
        // A probe of inner resonators is tapped where the outer ones are.
        let from_ground = value(row::tap(port))?;
        let feed = feeds::read(set, port).map_err(one)?;
        let at = if from_below(i) { from_ground } else { height - from_ground };
        taps.push(comb::Tap { strip, at, width: feed.width, side });
        feeds_of.push((port, feed, side));
        if which.len() == 1 && !with_feeds {
            break;
        }
    }
    let mut draft = Draft::default();
    let names = which.iter().map(|i| row::resonator(*i, "width")).chain(which.windows(2).map(|pair| row::gap(pair[0]))).collect();
    let ends = comb::draw(&mut draft, &strips, &taps, names).ok_or_else(|| one(row::tap_off(set)))?;
    for (index, i) in which.iter().enumerate() {
        let (grounded, open) = if from_below(*i) { (ends.bottom[index], ends.top[index]) } else { (ends.top[index], ends.bottom[index]) };
        draft.ground(grounded, grounds::via(&set.order, widths[index], MOST_HOLES));
        draft.open(open);
    }
    let mut ports = ends.taps.clone();
    if with_feeds {
        for ((port, feed, side), node) in feeds_of.into_iter().zip(&mut ports) {
            let strip = if port == 1 { widths[0] } else { widths[widths.len() - 1] };
            *node = draft.strip(*node, feed.length + Nm(strip.0.div_euclid(2)), side, feeds::line_names(port));
            draft.launch(port, *node, feed.launch, feeds::launch_names(&set.order, port));
        }
    }
    // Every resonator is on ground, and the feeds with the outer ones.
    let mut layout = draft.finish([ports[0], ports[ports.len() - 1]], 1);
    layout.ports = ports;
    Ok(layout)
}

impl Family for Interdigital {
    fn passes(&self) -> Passes {
        Passes::Band
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/interdigital.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        (2, 11)
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let Band::BandPass { from_hz, to_hz } = order.filter.band else { return Err(Vec::new()) };
        let built = AsBuilt::nominal(order).without_loss();
        let (center_hz, fraction) = (0.5 * (from_hz + to_hz), 2.0 * (to_hz - from_hz) / (from_hz + to_hz));
        let strip_ohm = own::number(order, KEYS, "resonator-impedance");
        let (strip, wave) = row::strip(&built, "resonator-impedance", strip_ohm, center_hz)?;
        let width_m = strip.width_m();
        let end_m = open_end::extension_m(&strip);
        let Part::Via { diameter, count, pitch, .. } = grounds::via(order, Nm::from_m(width_m), MOST_HOLES) else { return Err(Vec::new()) };
        let holes = ViaHoles::row(diameter.m() + 2.0 * built.hole_plating_m, built.hole_plating_m, count, pitch.m());
        // An inductance at a grounded end is a line of that reactance.
        let reactance = std::f64::consts::TAU * center_hz * via(&built, &holes).inductance_h;
        let via_m = (reactance / strip.at(center_hz).z0_ohm).atan() / wave;
        let quarter_m = std::f64::consts::FRAC_PI_2 / wave;
        let mut list = Vec::new();
        for i in 1..=degree {
            list.push(Dimension::guess(row::resonator(i, "width"), width_m, &[("Z0 ohm", strip_ohm)]));
            let mut length = Dimension::guess(row::resonator(i, "length"), quarter_m, &[("electrical length deg", 90.0)]);
            length.correct("open end", -end_m);
            length.correct("via", -via_m);
            list.push(length);
        }
        let mut problems = Vec::new();
        list.extend(row::gap_guesses(order, degree, fraction, order.shop.gap_m));
        // At a grounded quarter wave; pi/4 Y is its susceptance slope at the open end.
        let theta = row::tap_angle(order, degree, fraction, std::f64::consts::FRAC_PI_4 / strip_ohm);
        for (port, theta) in [1, 2].into_iter().zip(theta) {
            match theta {
                Ok((theta, qe)) => {
                    let mut height = Dimension::guess(row::tap(port), theta / wave, &[("Qe", qe)]);
                    height.correct("via", -via_m.min(0.5 * height.value_m));
                    list.push(height);
                }
                Err(problem) => problems.push(problem),
            }
        }
        match feeds::guess(order, &built, own::number(order, KEYS, "feed-length"), center_hz) {
            Ok(ports) => list.extend(ports),
            Err(found) => problems.extend(found),
        }
        if problems.is_empty() { Ok((Dimensions { order: order.clone(), degree, list }, problems)) } else { Err(problems) }
    }

    fn probes(&self, set: &Dimensions) -> Vec<Probe> {
        row::probes(set, set.order.shop.gap_m, drawn)
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        row::knobs(set)
    }
}
