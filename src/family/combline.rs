//! Combline: resonators shorter than a quarter wave side by side, all grounded at one end and loaded by a printed patch at the other, the outer two tapped.
//!
//! # Source
//! G. L. Matthaei, "Comb-line band-pass filters of narrow or moderate bandwidth", Microwave Journal 6, 1963, pp. 82-91; taps after E. G. Cristal, IEEE Trans.
//! MTT-23, 1975 (from memory): a strip of angle theta under its load has the susceptance slope Y (theta + sin theta cos theta) / (2 sin^2 theta) at the load.
//! Spacings come from the program's own network of two resonators.
//!
//! # Valid range
//! About 3 to 25 % wide. The load is a wider strip, in steps and as coupled strips in the network; chip capacitors are not offered. All couplings
//! between the strips and between the patches are in the network. The inductance law of the grounding holes is good to 0.03 nH, about 0.5 % of the centre
//! frequency. The second passband lies beyond three times the centre.

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
use crate::base::Place;
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

/// The combline family.
pub struct Combline;

/// Most holes side by side at a resonator's grounded end.
const MOST_HOLES: usize = 4;
/// Electrical length of a strip up to its patch at the centre: some 50 degrees keep the second passband far and the patch short.
const STRIP_RAD: f64 = 0.87;
static KEYS: &[Key] = &[
    Key {
        name: "resonator-impedance",
        about: "impedance of a resonator's strip alone; lower makes wider strips with less loss",
        kind: OwnKind::Quantity(Dimensionality::Impedance),
        default: Some("80 ohm"),
    },
    Key {
        name: "patch-impedance",
        about: "impedance of the loading patch's strip alone; lower makes wider, shorter patches",
        kind: OwnKind::Quantity(Dimensionality::Impedance),
        default: Some("52 ohm"),
    },
    Key {
        name: "feed-length",
        about: "straight feed between launch and first resonator",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("4 mm"),
    },
];

impl Structure for Combline {
    fn name(&self) -> &'static str {
        "combline"
    }

    fn about(&self) -> &'static str {
        "band-pass, short resonators grounded by vias at one end and loaded by patches, tapped; 3 to 25 % wide, far second passband"
    }

    fn keys(&self) -> &'static [Key] {
        KEYS
    }

    fn names(&self, order: &Order, degree: usize) -> Vec<String> {
        ["strip length", "patch width"].map(String::from).into_iter().chain(row::names(order, degree)).collect()
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
    let patch = value("patch width".into())?;
    let strip_top = value("strip length".into())?;
    let row = comb::row(Nm::ZERO, &widths, &gaps, Nm::ZERO, strip_top);
    let mut strips = Vec::new();
    for ((strip, width), length) in row.iter().zip(&widths).zip(&lengths) {
        let left = strip.left - Nm((patch - *width).0.div_euclid(2));
        strips.push(*strip);
        strips.push(comb::Upright { left, width: patch, bottom: strip_top, top: *length });
    }
    if let Some(short) = lengths.iter().find(|length| **length <= strip_top) {
        return Err(one(Problem::error(
            "patch-without-length",
            Place::Dimension("strip length".into()),
            format!("a resonator of {:.3} mm leaves nothing for its patch beyond a strip of {:.3} mm", short.mm(), strip_top.mm()),
            "a shorter strip, or longer resonators",
        )));
    }
    if let Some((i, gap)) = gaps.iter().enumerate().find(|(_, gap)| **gap <= patch - widths[0]) {
        return Err(one(Problem::error(
            "patches-touch",
            Place::Dimension(row::gap(which[i])),
            format!("patches {:.3} mm wide touch over a gap of {:.3} mm between strips", patch.mm(), gap.mm()),
            "raise filter.patch-impedance, or make the band narrower",
        )));
    }
    let mut taps = Vec::new();
    let mut feeds_of = Vec::new();
    for (port, strip, side) in [(1, 0, Way::Left), (2, 2 * (which.len() - 1), Way::Right)] {
        // A probe of inner resonators is tapped where the outer ones are.
        let at = value(row::tap(port))?;
        let feed = feeds::read(set, port).map_err(one)?;
        taps.push(comb::Tap { strip, at, width: feed.width, side });
        feeds_of.push((port, feed, side));
        if which.len() == 1 && !with_feeds {
            break;
        }
    }
    let mut draft = Draft::default();
    let names = which.iter().map(|i| row::resonator(*i, "width")).chain(which.windows(2).map(|pair| row::gap(pair[0]))).collect();
    let ends = comb::draw(&mut draft, &strips, &taps, names).ok_or_else(|| one(row::tap_off(set)))?;
    for (index, width) in widths.iter().enumerate() {
        let (strip, load) = (2 * index, 2 * index + 1);
        draft.ground(ends.bottom[strip], grounds::via(&set.order, *width, MOST_HOLES));
        if patch == *width {
            return Err(one(Problem::error(
                "patch-as-wide-as-its-strip",
                Place::Dimension("patch width".into()),
                "the patch is as wide as its strip and loads nothing",
                "filter.patch-impedance below filter.resonator-impedance",
            )));
        }
        draft.place(Part::Step, vec![ends.top[strip], ends.bottom[load]], vec![]);
        draft.open(ends.top[load]);
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

/// The least gap between strips at which the shop can still etch the one between their patches.
fn least_gap_m(order: &Order, patch_m: f64, width_m: f64) -> f64 {
    order.shop.gap_m + (patch_m - width_m).max(0.0)
}

impl Family for Combline {
    fn passes(&self) -> Passes {
        Passes::Band
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/combline.toml")
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
        let Part::Via { diameter, count, pitch, .. } = grounds::via(order, Nm::from_m(width_m), MOST_HOLES) else { return Err(Vec::new()) };
        let holes = ViaHoles::row(diameter.m() + 2.0 * built.hole_plating_m, built.hole_plating_m, count, pitch.m());
        // An inductance at a grounded end is a line of that reactance.
        let reactance = std::f64::consts::TAU * center_hz * via(&built, &holes).inductance_h;
        let via_m = (reactance / strip.at(center_hz).z0_ohm).atan() / wave;
        let patch_ohm = own::number(order, KEYS, "patch-impedance");
        if patch_ohm >= strip_ohm {
            return Err(vec![Problem::error(
                "patch-as-wide-as-its-strip",
                Place::Key("filter.patch-impedance".into()),
                format!("a patch of {patch_ohm} ohm is no load for a strip of {strip_ohm} ohm"),
                format!("patch-impedance = \"{:.0} ohm\", or a higher resonator-impedance", 0.6 * strip_ohm),
            )]);
        }
        let (patch, patch_wave) = row::strip(&built, "patch-impedance", patch_ohm, center_hz)?;
        let patch_m = patch.width_m();
        let end_m = open_end::extension_m(&patch);
        // At resonance the patch's susceptance tan(theta)/Zp is the strip's cot(theta)/Zr.
        let load_rad = (patch_ohm / (strip_ohm * STRIP_RAD.tan())).atan();
        let mut strip_length =
            Dimension::guess("strip length".into(), STRIP_RAD / wave, &[("electrical length deg", STRIP_RAD.to_degrees())]);
        strip_length.correct("via", -via_m);
        let strip_m = strip_length.value_m;
        let mut list = vec![strip_length, Dimension::guess("patch width".into(), patch_m, &[("Z0 ohm", patch_ohm)])];
        for i in 1..=degree {
            list.push(Dimension::guess(row::resonator(i, "width"), width_m, &[("Z0 ohm", strip_ohm)]));
            let mut length =
                Dimension::guess(row::resonator(i, "length"), strip_m + load_rad / patch_wave, &[("load deg", load_rad.to_degrees())]);
            length.correct("open end", -end_m);
            list.push(length);
        }
        let mut problems = Vec::new();
        let least_gap_m = least_gap_m(order, patch_m, width_m);
        list.extend(row::gap_guesses(order, degree, fraction, least_gap_m));
        let slope_s = (STRIP_RAD + STRIP_RAD.sin() * STRIP_RAD.cos()) / (2.0 * strip_ohm);
        let theta = row::tap_angle(order, degree, fraction, slope_s);
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
        let size = |name: &str| set.value(name).unwrap_or(0.0);
        row::probes(set, least_gap_m(&set.order, size("patch width"), size(&row::resonator(1, "width"))), drawn)
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        row::knobs(set)
    }
}
