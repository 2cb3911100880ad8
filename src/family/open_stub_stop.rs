//! Band-stop of open stubs a quarter wave apart, the connecting lines part of the synthesis.
//!
//! # Source
//! See [`crate::prototype::open_stubs`]: the open-stub low-pass, read about the frequency at which its stubs are a quarter wave; cf. B. M. Schiffman and G. L.
//! Matthaei, "Exact design of band-stop microwave filters", IEEE Trans. MTT-12, 1964.
//!
//! # Valid range
//! Stopbands wider than about half their centre frequency; narrower ones ask for stubs too narrow to etch.

use std::f64::consts::FRAC_PI_2;

use super::Family;
use super::Knob;
use super::Structure;
use super::own;
use super::stub_chain;
use super::stub_chain::End;
use super::stub_chain::Sides;
use super::stub_chain::StubChain;
use super::target::Target;
use crate::base::Dimensionality;
use crate::base::Outcome;
use crate::base::Place;
use crate::base::Problem;
use crate::dimensions::Dimensions;
use crate::layout::Layout;
use crate::line::AsBuilt;
use crate::line::Strip;
use crate::order::Band;
use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;
use crate::prototype::open_stubs;

/// The open-stub band-stop.
pub struct OpenStubStop;

static KEYS: &[Key] = &[
    Key {
        name: "stubs",
        about: "where the stubs leave the line",
        kind: OwnKind::OneOf(&["alternating", "one", "both"]),
        default: Some("alternating"),
    },
    Key {
        name: "feed-length",
        about: "straight feed between launch and first stub",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("6 mm"),
    },
];

fn chain(order: &Order, degree: usize) -> StubChain {
    StubChain { stubs: degree, end: End::Open, sides: Sides::of(own::word(order, KEYS, "stubs")) }
}

/// Frequency at which the stubs are a quarter wave, and their length at the lower edge (rad).
fn frame([from_hz, to_hz]: [f64; 2]) -> (f64, f64) {
    let center_hz = 0.5 * (from_hz + to_hz);
    (center_hz, FRAC_PI_2 * from_hz / center_hz)
}

impl Structure for OpenStubStop {
    fn name(&self) -> &'static str {
        "open-stub-stop"
    }

    fn about(&self) -> &'static str {
        "band-stop, open stubs a quarter wave apart; stopbands wider than about half their centre frequency, no vias"
    }

    fn keys(&self) -> &'static [Key] {
        KEYS
    }

    fn names(&self, order: &Order, degree: usize) -> Vec<String> {
        chain(order, degree).names(order)
    }

    fn layout(&self, set: &Dimensions) -> Result<Layout, Vec<Problem>> {
        chain(&set.order, set.degree).layout(set)
    }
}

impl Family for OpenStubStop {
    fn passes(&self) -> Passes {
        Passes::Stop
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/open-stub-stop.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        (3, 9)
    }

    fn target(&self, order: &Order, degree: usize) -> Target {
        let edges = if let Band::BandStop { from_hz, to_hz } = order.filter.band { [from_hz, to_hz] } else { [f64::NAN; 2] };
        let (center_hz, theta) = frame(edges);
        // The upper passband is held up to half of its last ripple: at twice the centre lies a zero that the network's dispersion moves about.
        let last = (0.5 * (FRAC_PI_2 / degree as f64).sin() * theta.tan()).atan();
        let highest_hz = center_hz * (2.0 - last / FRAC_PI_2);
        Target::band_stop(order, degree, edges, highest_hz, move |f| (FRAC_PI_2 * f / center_hz).tan() / theta.tan())
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let Band::BandStop { from_hz, to_hz } = order.filter.band else { return Err(stub_chain::wrong_band(self.name(), "stopband")) };
        stub_chain::like_ports(order, self.name())?;
        stub_chain::odd_degree(degree, self.name())?;
        let (center_hz, theta) = frame([from_hz, to_hz]);
        let (stubs, lines) = open_stubs(order.filter.response, degree, theta).ok_or_else(Vec::new)?;
        let port_ohm = order.filter.ports_ohm[0];
        let share = if chain(order, degree).sides == Sides::Both { 2.0 } else { 1.0 };
        let highest = share * stubs.iter().copied().fold(0.0, f64::max) * port_ohm;
        let narrowest_ohm = Strip::new(&AsBuilt::nominal(order).without_loss(), order.shop.line_m).at(center_hz).z0_ohm;
        if highest > narrowest_ohm {
            return Err(vec![Problem::error(
                "stopband-too-narrow",
                Place::Key("filter.stopband".into()),
                format!(
                    "a stopband of {:.0} % asks for stubs of {highest:.0} ohm; the shop's narrowest line has {narrowest_ohm:.0} ohm",
                    200.0 * (to_hz - from_hz) / (from_hz + to_hz)
                ),
                "order a wider stopband, a thicker laminate or a finer shop class, or family = \"coupled-resonator-stop\", which fits narrow stopbands",
            )]);
        }
        let wanted = |z: Vec<f64>| z.into_iter().map(|z| (z * port_ohm, FRAC_PI_2)).collect::<Vec<_>>();
        let feed_m = own::number(order, KEYS, "feed-length");
        let list = chain(order, degree).guess(order, center_hz, feed_m, &wanted(lines), &wanted(stubs))?;
        Ok((Dimensions { order: order.clone(), degree, list }, Vec::new()))
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        chain(&set.order, set.degree).knobs(set, true, true)
    }
}
