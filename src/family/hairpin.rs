//! Hairpin: half-wave resonators folded into a U, side by side, opening up and down in turn, the first and last one tapped.
//!
//! # Source
//! E. G. Cristal, S. Frankel, "Hairpin-line and hybrid hairpin-line/half-wave parallel-coupled-line filters", IEEE Trans. MTT-20, 1972, pp. 719-728; couplings and
//! external Q from the prototype after J.-S. Hong, M. J. Lancaster, *Microstrip Filters for RF/Microwave Applications*, 2001, section 5.2.3 (from memory): tap at
//! theta from the middle of the U, Qe = pi R / (2 Z sin^2 theta). Spacings come from the program's own network of two resonators.
//!
//! # Valid range
//! About 3 to 25 % wide. All couplings between arms, a resonator's own and those past the neighbour, are in the network; those of the bends and of the bars
//! between them with what lies beside are not. The second passband lies near twice the centre.

use super::Family;
use super::Knob;
use super::Probe;
use super::Structure;
use super::comb;
use super::feeds;
use super::own;
use super::row;
use crate::base::Dimensionality;
use crate::base::Nm;
use crate::base::Outcome;
use crate::base::Place;
use crate::base::Problem;
use crate::dimensions::Dimension;
use crate::dimensions::Dimensions;
use crate::layout::Corner;
use crate::layout::Draft;
use crate::layout::Layout;
use crate::layout::Part;
use crate::layout::Way;
use crate::line::AsBuilt;
use crate::line::Strip;
use crate::line::open_end;
use crate::line::optimum_cut;
use crate::order::Band;
use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;

/// The hairpin family.
pub struct Hairpin;

static KEYS: &[Key] = &[
    Key {
        name: "resonator-impedance",
        about: "impedance of a resonator's strip alone; lower makes wider strips with less loss",
        kind: OwnKind::Quantity(Dimensionality::Impedance),
        default: Some("55 ohm"),
    },
    Key {
        name: "arm-spacing",
        about: "between the two arms of a hairpin; narrower folds tighter and couples the arms to each other",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("2.5 mm"),
    },
    Key {
        name: "corners",
        about: "outside of the two corners of a hairpin; rounded makes a half circle",
        kind: OwnKind::OneOf(&["mitred", "rounded", "square"]),
        default: Some("mitred"),
    },
    Key {
        name: "feed-length",
        about: "straight feed between launch and first resonator",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("4 mm"),
    },
];

/// Distance of the two arms of a resonator.
fn arm_spacing(i: usize) -> String {
    row::resonator(i, "arm gap")
}

impl Structure for Hairpin {
    fn name(&self) -> &'static str {
        "hairpin"
    }

    fn about(&self) -> &'static str {
        "band-pass, half-wave resonators folded into a U, tapped; 3 to 25 % wide, no vias, half as long as edge-coupled"
    }

    fn keys(&self) -> &'static [Key] {
        KEYS
    }

    fn names(&self, order: &Order, degree: usize) -> Vec<String> {
        (1..=degree).map(arm_spacing).chain(row::names(order, degree)).collect()
    }

    fn layout(&self, set: &Dimensions) -> Result<Layout, Vec<Problem>> {
        let all: Vec<usize> = (1..=set.degree).collect();
        drawn(set, &all, true)
    }
}

/// The corner of a hairpin as ordered, for a strip of a width and arms so far apart.
fn corner(order: &Order, width: Nm, spacing: Nm) -> Corner {
    match own::word(order, KEYS, "corners") {
        "rounded" => Corner::Rounded { radius: Nm((spacing.0 + width.0).div_euclid(2)) },
        "square" => Corner::Square,
        _ => {
            // The cut hardly matters to a few per cent: closed forms give it, and it does not move with the search.
            let built = AsBuilt::nominal(order).without_loss().with_statics(crate::line::StaticsModel::ClosedForm);
            let cut = Nm::from_m(2.0 * width.m() * optimum_cut(&Strip::new(&built, width.m())));
            Corner::Mitred { cut: cut.snapped(Nm(2)) }
        }
    }
}

/// The circuit of some neighbouring resonators, with its feeds or (to be measured) without: ports then sit at the taps.
fn drawn(set: &Dimensions, which: &[usize], with_feeds: bool) -> Result<Layout, Vec<Problem>> {
    let one = |problem: Problem| vec![problem];
    let value = |name: String| set.value(&name).map(Nm::from_m).map_err(one);
    let widths = which.iter().map(|i| value(row::resonator(*i, "width"))).collect::<Result<Vec<_>, _>>()?;
    let spacings = which.iter().map(|i| value(arm_spacing(*i))).collect::<Result<Vec<_>, _>>()?;
    let gaps = which.windows(2).map(|pair| value(row::gap(pair[0]))).collect::<Result<Vec<_>, _>>()?;
    let lengths = which.iter().map(|i| value(row::resonator(*i, "length"))).collect::<Result<Vec<_>, _>>()?;
    // Bars of both sides stand on two lines, as far apart as the mean arm is long.
    let height = row::mean(&lengths);
    let opens_up = |i: usize| i % 2 == 1;
    let arms: Vec<Nm> = widths.iter().flat_map(|w| [*w, *w]).collect();
    let mut between = Vec::new();
    for (index, spacing) in spacings.iter().enumerate() {
        between.push(*spacing);
        between.extend(gaps.get(index));
    }
    let mut strips = comb::row(Nm::ZERO, &arms, &between, Nm::ZERO, height);
    for ((pair, i), length) in strips.chunks_mut(2).zip(which).zip(&lengths) {
        for strip in pair {
            if opens_up(*i) {
                strip.top = *length;
            } else {
                strip.bottom = height - *length;
            }
        }
    }
    let (mut taps, mut fed) = (Vec::new(), Vec::new());
    for (port, place, side) in [(1, 0, Way::Left), (2, which.len() - 1, Way::Right)] {
        let from_bar = value(row::tap(port))?;
        let feed = feeds::read(set, port).map_err(one)?;
        let strip = if port == 1 { 0 } else { 2 * place + 1 };
        taps.push(comb::Tap { strip, at: if opens_up(which[place]) { from_bar } else { height - from_bar }, width: feed.width, side });
        fed.push((port, feed, side, widths[place]));
        if which.len() == 1 && !with_feeds {
            break;
        }
    }
    let mut draft = Draft::default();
    let mut names: Vec<String> = which.iter().flat_map(|i| [row::resonator(*i, "width"), row::resonator(*i, "width")]).collect();
    for (index, i) in which.iter().enumerate() {
        names.push(arm_spacing(*i));
        names.extend(gaps.get(index).map(|_| row::gap(*i)));
    }
    let ends = comb::draw(&mut draft, &strips, &taps, names).ok_or_else(|| one(row::tap_off(set)))?;
    for (index, i) in which.iter().enumerate() {
        let (left, right) = (2 * index, 2 * index + 1);
        let (bars, opens, way) = if opens_up(*i) { (&ends.bottom, &ends.top, Way::Down) } else { (&ends.top, &ends.bottom, Way::Up) };
        draft.open(opens[left]);
        draft.open(opens[right]);
        let (width, spacing) = (widths[index], spacings[index]);
        let corner = corner(&set.order, width, spacing);
        let turn = if way == Way::Down { crate::layout::Turn::Left } else { crate::layout::Turn::Right };
        let (from, _) = draft.bend(bars[left], way, turn, corner);
        let shoulder = corner.shoulder(width);
        let bar = spacing - shoulder - shoulder;
        if bar < Nm::ZERO {
            return Err(one(Problem::error(
                "arms-too-near",
                Place::Dimension(arm_spacing(*i)),
                format!("arms {:.3} mm apart leave no room for the corners of a strip {:.3} mm wide", spacing.mm(), width.mm()),
                format!("at least {:.3} mm, or corners = \"square\"", (shoulder + shoulder).mm()),
            )));
        }
        let to = if bar > Nm::ZERO { draft.strip(from, bar, Way::Right, vec![]) } else { from };
        draft.place(Part::Bend(corner), vec![to, bars[right]], vec![]);
    }
    let mut ports = ends.taps.clone();
    if with_feeds {
        for ((port, feed, side, width), node) in fed.into_iter().zip(&mut ports) {
            *node = draft.strip(*node, feed.length + Nm(width.0.div_euclid(2)), side, feeds::line_names(port));
            draft.launch(port, *node, feed.launch, feeds::launch_names(&set.order, port));
        }
    }
    // The outer resonators are one with their feeds.
    let mut layout = draft.finish([ports[0], ports[ports.len() - 1]], which.len());
    layout.ports = ports;
    Ok(layout)
}

impl Family for Hairpin {
    fn passes(&self) -> Passes {
        Passes::Band
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/hairpin.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        // Twelve arms are what the numerical cross-section takes at once.
        (2, 6)
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let Band::BandPass { from_hz, to_hz } = order.filter.band else { return Err(Vec::new()) };
        let built = AsBuilt::nominal(order).without_loss();
        let (center_hz, fraction) = (0.5 * (from_hz + to_hz), 2.0 * (to_hz - from_hz) / (from_hz + to_hz));
        let strip_ohm = own::number(order, KEYS, "resonator-impedance");
        let spacing_m = own::number(order, KEYS, "arm-spacing");
        let (strip, wave) = row::strip(&built, "resonator-impedance", strip_ohm, center_hz)?;
        let width_m = strip.width_m();
        let quarter_m = std::f64::consts::FRAC_PI_2 / wave;
        // Half of what lies between the arms' ends, corners taken along their middle.
        let half_bar_m = 0.5 * (spacing_m + width_m);
        let (mut list, mut problems) = (Vec::new(), Vec::new());
        for i in 1..=degree {
            list.push(Dimension::guess(arm_spacing(i), spacing_m, &[]));
        }
        for i in 1..=degree {
            list.push(Dimension::guess(row::resonator(i, "width"), width_m, &[("Z0 ohm", strip_ohm)]));
            let mut length = Dimension::guess(row::resonator(i, "length"), quarter_m, &[("electrical length deg", 90.0)]);
            length.correct("open end", -open_end::extension_m(&strip));
            length.correct("half the bar", -half_bar_m);
            list.push(length);
        }
        list.extend(row::gap_guesses(order, degree, fraction, order.shop.gap_m));
        // pi/2 Y is the susceptance slope of a half wave at its open end.
        for (port, theta) in [1, 2].into_iter().zip(row::tap_angle(order, degree, fraction, std::f64::consts::FRAC_PI_2 / strip_ohm)) {
            match theta {
                Ok((theta, qe)) => {
                    let mut height = Dimension::guess(row::tap(port), theta / wave, &[("Qe", qe)]);
                    height.correct("half the bar", -half_bar_m.min(0.9 * height.value_m));
                    list.push(height);
                }
                Err(problem) => problems.push(problem),
            }
        }
        match feeds::guess(order, &built, own::number(order, KEYS, "feed-length"), center_hz) {
            Ok(ports) => list.extend(ports),
            Err(found) => problems.extend(found),
        }
        let length_m = list.iter().find(|d| d.name == row::resonator(1, "length")).map_or(0.0, |d| d.value_m);
        if length_m < width_m {
            problems.push(Problem::error(
                "arms-too-short",
                Place::Key("filter.arm-spacing".into()),
                format!(
                    "arms {:.3} mm apart leave {:.3} mm of a quarter wave of {:.3} mm for themselves",
                    spacing_m * 1e3,
                    length_m * 1e3,
                    quarter_m * 1e3
                ),
                format!("arm-spacing = \"{:.2} mm\", or the edge-coupled family", 0.3 * quarter_m * 1e3),
            ));
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
