//! What families of resonators in a row have in common: names, knobs, probes, and first guesses of gaps and taps.

use super::Aim;
use super::Knob;
use super::Moves;
use super::Probe;
use super::feeds;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Problem;
use crate::dimensions::Dimension;
use crate::dimensions::Dimensions;
use crate::layout::Layout;
use crate::line::AsBuilt;
use crate::line::C_M_PER_S;
use crate::line::Strip;
use crate::line::width_for_impedance;
use crate::order::Band;
use crate::order::Order;
use crate::prototype::coupling_coefficients;
use crate::prototype::external_q;
use crate::prototype::ladder;

/// Gaps are searched for between the shop's narrowest and so many heights of the laminate: beyond, couplings are a hundredth of a per cent.
const WIDEST_GAP_HEIGHTS: f64 = 8.0;

/// Draws some neighbouring resonators of a set, with feeds or without.
pub type Drawn = fn(&Dimensions, &[usize], bool) -> Result<Layout, Vec<Problem>>;

/// `resonator 2 length`.
pub fn resonator(i: usize, what: &str) -> String {
    format!("resonator {i} {what}")
}

/// The gap after resonator i.
pub fn gap(i: usize) -> String {
    format!("gap {i}")
}

/// Where a port's feed meets its resonator, from the end or the middle that is on ground.
pub fn tap(port: usize) -> String {
    format!("tap {port} height")
}

/// Names of all dimensions, in drawing order.
pub fn names(order: &Order, degree: usize) -> Vec<String> {
    let resonators = (1..=degree).flat_map(|i| ["width", "length"].map(|what| resonator(i, what)));
    resonators.chain((1..degree).map(gap)).chain([1, 2].map(tap)).chain(feeds::names(order)).collect()
}

/// The problem of a tap that does not meet its resonator.
pub fn tap_off(set: &Dimensions) -> Problem {
    Problem::error(
        "tap-off-the-resonator",
        Place::Dimension(tap(1)),
        format!("the tap of a resonator does not lie between its ends ({} resonators)", set.degree),
        "a tap height between 0.2 and 0.8 of the resonator's length",
    )
}

/// The strip of an impedance (ohm) that a key asks for, and its phase constant (rad/m) at a frequency.
///
/// # Errors
/// `impedance-out-of-reach`.
pub fn strip(built: &AsBuilt, key: &str, ohm: f64, at_hz: f64) -> Result<(Strip, f64), Vec<Problem>> {
    let width_m = width_for_impedance(built, ohm, at_hz).map_err(|unreachable| {
        vec![Problem::error(
            "impedance-out-of-reach",
            Place::Key(format!("filter.{key}")),
            format!("no strip of {ohm} ohm: {}", unreachable.message),
            unreachable.help,
        )]
    })?;
    let strip = Strip::new(built, width_m);
    let wave = std::f64::consts::TAU * at_hz * strip.at(at_hz).eps_eff.sqrt() / C_M_PER_S;
    Ok((strip, wave))
}

/// Gaps from coupling coefficients, none below the least: a rough law that the probes replace.
pub fn gap_guesses(order: &Order, degree: usize, fraction: f64, least_m: f64) -> Vec<Dimension> {
    let g = ladder(order.filter.response, degree);
    (1..degree)
        .zip(coupling_coefficients(&g, fraction))
        .map(|(i, k)| {
            // Coupling falls by a decade in about three heights.
            let gap_m = (order.laminate.thickness_m * (-1.3 * (k / 0.35).ln()).max(0.15)).max(least_m);
            Dimension::guess(gap(i), gap_m, &[("k", k)])
        })
        .collect()
}

/// Electrical angle of each port's tap from ground and its external Q: sin^2 = slope^-1 / (R Qe), with the susceptance slope (siemens) at the open end.
pub fn tap_angle(order: &Order, degree: usize, fraction: f64, slope_s: f64) -> [Result<(f64, f64), Problem>; 2] {
    let q = external_q(&ladder(order.filter.response, degree), fraction);
    [0, 1].map(|port| {
        let qe = q[port];
        let sine = (slope_s * order.filter.ports_ohm[port] / qe).sqrt();
        if sine < 1.0 {
            return Ok((sine.asin(), qe));
        }
        Err(Problem::error(
            "coupling-out-of-reach",
            Place::Key("filter.passband".into()),
            format!("the ends want an external Q of {qe:.2}, less than a tap at the resonator's open end gives"),
            "make the band narrower, raise filter.resonator-impedance, or take a family for wide bands",
        ))
    })
}

/// Resonance of one resonator, coupling of each pair of neighbours, external Q of the ends; `drawn` draws some neighbours with or without feeds.
pub fn probes(set: &Dimensions, least_gap_m: f64, drawn: Drawn) -> Vec<Probe> {
    let index = |name: String| set.list.iter().position(|d| d.name == name);
    let serves = |i: usize| set.list[i].serves.first().map_or(f64::NAN, |(_, value)| *value);
    let Band::BandPass { from_hz, to_hz } = set.order.filter.band else { return Vec::new() };
    let mut probes = Vec::new();
    let n = set.degree;
    let height_m = set.order.laminate.thickness_m;
    let lengths: Vec<usize> = (1..=n).filter_map(|i| index(resonator(i, "length"))).collect();
    if let Some(first_m) = lengths.first().map(|i| set.list[*i].value_m) {
        probes.push(Probe {
            about: "resonance".into(),
            aim: Aim::Resonance(0.5 * (from_hz + to_hz)),
            moves: lengths,
            between_m: [0.8 * first_m, 1.2 * first_m],
            layout: Box::new(move |set| drawn(set, &[1], false)),
        });
    }
    for i in 1..n {
        let (Some(at), Some(mirror)) = (index(gap(i)), index(gap(n - i))) else { continue };
        if mirror < at {
            continue;
        }
        probes.push(Probe {
            about: format!("coupling {i}"),
            aim: Aim::Coupling(serves(at)),
            moves: if mirror == at { vec![at] } else { vec![at, mirror] },
            between_m: [least_gap_m, WIDEST_GAP_HEIGHTS * height_m],
            layout: Box::new(move |set| drawn(set, &[i, i + 1], false)),
        });
    }
    if let (Some(one), Some(other)) = (index(tap(1)), index(tap(2))) {
        let length_m = set.value(&resonator(1, "length")).unwrap_or(f64::NAN);
        let equal = set.order.filter.ports_ohm[0] == set.order.filter.ports_ohm[1];
        probes.push(Probe {
            about: "external Q 1".into(),
            aim: Aim::ExternalQ(serves(one)),
            moves: if equal { vec![one, other] } else { vec![one] },
            between_m: [0.05 * length_m, 0.95 * length_m],
            layout: Box::new(move |set| drawn(set, &[1], false)),
        });
    }
    probes
}

/// Gaps, lengths and taps, symmetric partners together where the ports are equal.
pub fn knobs(set: &Dimensions) -> Vec<Knob> {
    let n = set.degree;
    let index = |name: String| set.list.iter().position(|d| d.name == name);
    let symmetric = set.order.filter.ports_ohm[0] == set.order.filter.ports_ohm[1];
    let together = |i: usize, count: usize, name: &dyn Fn(usize) -> String| -> Vec<usize> {
        let mirror = count + 1 - i;
        let places = if symmetric && mirror != i { vec![i, mirror] } else { vec![i] };
        places.into_iter().filter_map(|i| index(name(i))).collect()
    };
    let distinct = |count: usize| if symmetric { count.div_ceil(2) } else { count };
    let mut knobs = Vec::new();
    for i in 1..=distinct(n - 1) {
        let moves = together(i, n - 1, &gap).into_iter().map(|i| (i, Moves::Relative(-1.0))).collect();
        knobs.push(Knob { about: format!("coupling {i}"), is_resonator: false, moves, greatest_step: 0.15 });
    }
    for i in 1..=distinct(n) {
        let lengths = together(i, n, &|i| resonator(i, "length"));
        let moves = lengths.into_iter().map(|i| (i, Moves::Absolute(set.list[i].value_m))).collect();
        knobs.push(Knob { about: format!("resonator {i}"), is_resonator: true, moves, greatest_step: 0.04 });
    }
    for port in 1..=distinct(2) {
        let moves = together(port, 2, &tap).into_iter().map(|i| (i, Moves::Relative(1.0))).collect();
        knobs.push(Knob { about: format!("external Q {port}"), is_resonator: false, moves, greatest_step: 0.1 });
    }
    knobs
}

/// Mean length of resonators: what stands opposite is as far away.
pub fn mean(lengths: &[Nm]) -> Nm {
    Nm(lengths.iter().map(|l| l.0).sum::<i64>() / lengths.len().max(1) as i64)
}
