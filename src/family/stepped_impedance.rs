//! Low-pass of short lines of high and low impedance in turn.
//!
//! # Source
//! D. M. Pozar, *Microwave Engineering*, stepped-impedance low-pass: a short line of high impedance is an inductor, of low impedance a capacitor,
//! by the sine of its length (J.-S. Hong and M. J. Lancaster, section 5.1.1); refinement in the network takes the rest.
//!
//! # Valid range
//! Sections below about an eighth of a wave at the cutoff; the stopband is shallow and ends where the sections are half a wave long.

use std::f64::consts::PI;

use super::Family;
use super::Knob;
use super::Moves;
use super::Structure;
use super::feeds;
use super::own;
use super::stub_chain;
use crate::base::Dimensionality;
use crate::base::Nm;
use crate::base::Outcome;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::dimensions::Dimension;
use crate::dimensions::Dimensions;
use crate::layout::Draft;
use crate::layout::Layout;
use crate::layout::Way;
use crate::line::AsBuilt;
use crate::line::C_M_PER_S;
use crate::line::Strip;
use crate::line::width_for_impedance;
use crate::order::Band;
use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;
use crate::prototype::ladder;

/// The stepped-impedance low-pass.
pub struct SteppedImpedance;

/// The narrow sections are drawn this much wider than the shop's narrowest line: etching then still leaves a line.
const OVER_NARROWEST: f64 = 1.35;
/// The wide sections are at most this part of a wave across at the cutoff: a quarter is where a strip is no line any more.
const ACROSS: f64 = 0.12;
/// A section's element, over what its impedance gives, up to which the sine rule holds.
const SINE_REACH: f64 = 0.9;
/// The least ratio of the two impedances that makes a filter worth the name.
const LEAST_RATIO: f64 = 2.5;

static KEYS: &[Key] = &[
    Key {
        name: "first",
        about: "whether the first and last section is the high or the low impedance",
        kind: OwnKind::OneOf(&["high", "low"]),
        default: Some("high"),
    },
    Key {
        name: "narrow-width",
        about: "width of the sections of high impedance; \"0.001 mm\": 1.35 times the shop's narrowest line",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("0.001 mm"),
    },
    Key {
        name: "wide-width",
        about: "width of the sections of low impedance; \"0.001 mm\": 0.12 of a wave at the cutoff",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("0.001 mm"),
    },
    Key {
        name: "feed-length",
        about: "straight feed between launch and first section",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("5 mm"),
    },
];

/// A width not above this is none: the key asks for the family's own choice.
const OWN_CHOICE_M: f64 = 1e-6;

fn section(k: usize, what: &str) -> String {
    format!("section {k} {what}")
}

fn is_high(order: &Order, k: usize) -> bool {
    k.is_multiple_of(2) == (own::word(order, KEYS, "first") == "low")
}

impl Structure for SteppedImpedance {
    fn name(&self) -> &'static str {
        "stepped-impedance"
    }

    fn about(&self) -> &'static str {
        "low-pass, narrow and wide lines in turn; simplest to etch, slow roll-off, no vias"
    }

    fn keys(&self) -> &'static [Key] {
        KEYS
    }

    fn names(&self, order: &Order, degree: usize) -> Vec<String> {
        (1..=degree).flat_map(|k| ["width", "length"].map(|what| section(k, what))).chain(feeds::names(order)).collect()
    }

    fn layout(&self, set: &Dimensions) -> Result<Layout, Vec<Problem>> {
        let one = |problem: Problem| vec![problem];
        let mut draft = Draft::default();
        let (start, mut at) = feeds::begin(&mut draft, set, Point { x: Nm::ZERO, y: Nm::ZERO }).map_err(one)?;
        for k in 1..=set.degree {
            let value = |what: &str| set.value(&section(k, what)).map(Nm::from_m).map_err(one);
            at = draft.step(at, value("width")?, Way::Right);
            at = draft.strip(at, value("length")?, Way::Right, ["width", "length"].map(|what| section(k, what)).to_vec());
        }
        let end = feeds::end(&mut draft, set, at).map_err(one)?;
        Ok(draft.finish([start, end], 1))
    }
}

impl Family for SteppedImpedance {
    fn passes(&self) -> Passes {
        Passes::Low
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/stepped-impedance.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        (3, 15)
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let Band::LowPass { cutoff_hz } = order.filter.band else { return Err(stub_chain::wrong_band(self.name(), "cutoff")) };
        stub_chain::like_ports(order, self.name())?;
        stub_chain::odd_degree(degree, self.name())?;
        let built = AsBuilt::nominal(order).without_loss();
        let port_ohm = order.filter.ports_ohm[0];
        let asked = |key: &str| Some(own::number(order, KEYS, key)).filter(|width| *width > OWN_CHOICE_M);
        let narrow_m = asked("narrow-width").unwrap_or(OVER_NARROWEST * order.shop.line_m);
        if narrow_m < order.shop.line_m {
            return Err(vec![Problem::error(
                "line-below-shop-limit",
                Place::Key("filter.narrow-width".into()),
                format!("narrow-width is {:.3} mm, the shop's narrowest line {:.3} mm", narrow_m * 1e3, order.shop.line_m * 1e3),
                "give a greater width or a finer shop class",
            )]);
        }
        let wave_m = C_M_PER_S / (cutoff_hz * built.permittivity.sqrt());
        let wide_m = match asked("wide-width") {
            Some(width) => width,
            // Not beyond 12 ohm: wider still gains next to nothing.
            None => (ACROSS * wave_m).min(width_for_impedance(&built, 12.0, cutoff_hz).unwrap_or(f64::INFINITY)),
        };
        let strip = |width_m: f64| {
            let mode = Strip::new(&built, width_m).at(cutoff_hz);
            (width_m, mode.z0_ohm, C_M_PER_S / (2.0 * PI * cutoff_hz * mode.eps_eff.sqrt()))
        };
        let (high, low) = (strip(narrow_m), strip(wide_m));
        if high.1 < LEAST_RATIO * low.1 || high.1 <= port_ohm || low.1 >= port_ohm {
            return Err(vec![Problem::error(
                "impedance-out-of-reach",
                Place::Key("filter.family".into()),
                format!(
                    "the narrowest section has {:.1} ohm and the widest {:.1} ohm between ports of {port_ohm} ohm: too alike for a filter",
                    high.1, low.1
                ),
                "take a finer shop class, a thinner laminate for the wide sections, or family = \"open-stub\"",
            )]);
        }
        let g = ladder(order.filter.response, degree);
        let mut list = Vec::new();
        for (k, g) in g.iter().copied().enumerate().skip(1).take(degree) {
            let is_high = is_high(order, k);
            let (width_m, ohm, per_rad_m) = if is_high { high } else { low };
            // What a short line has of reactance is the sine of its length; beyond the sine's reach the length grows half as fast as the element.
            let element = g * if is_high { port_ohm / ohm } else { ohm / port_ohm };
            let theta = if element <= SINE_REACH { element.asin() } else { SINE_REACH.asin() + 0.5 * (element - SINE_REACH) };
            list.push(Dimension::guess(section(k, "width"), width_m, &[("Z0 ohm", ohm)]));
            list.push(Dimension::guess(
                section(k, "length"),
                theta * per_rad_m,
                &[("g", g), ("electrical length deg", theta.to_degrees())],
            ));
        }
        list.extend(feeds::guess(order, &built, own::number(order, KEYS, "feed-length"), cutoff_hz)?);
        Ok((Dimensions { order: order.clone(), degree, list }, Vec::new()))
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        let degree = set.degree;
        let value = |k: usize, what: &str| set.value(&section(k, what)).ok();
        let symmetric = set.order.filter.ports_ohm[0] == set.order.filter.ports_ohm[1]
            && (1..=degree).all(|k| ["width", "length"].iter().all(|what| value(k, what) == value(degree + 1 - k, what)));
        let at = |k: usize| set.list.iter().position(|d| d.name == section(k, "length"));
        let distinct = if symmetric { degree.div_ceil(2) } else { degree };
        (1..=distinct)
            .map(|k| {
                let partners = if symmetric && 2 * k != degree + 1 { vec![k, degree + 1 - k] } else { vec![k] };
                let moves = partners.into_iter().filter_map(at).map(|i| (i, Moves::Absolute(set.list[i].value_m))).collect();
                Knob { about: format!("section {k} length"), is_resonator: true, moves, greatest_step: 0.15 }
            })
            .collect()
    }
}
