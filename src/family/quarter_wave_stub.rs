//! Band-pass of shorted quarter-wave stubs a quarter wave apart: wide bands.
//!
//! # Source
//! See [`crate::prototype::quarter_wave_stubs`] for the first guess and [`crate::prototype::shorted_stub_characteristic`] for the response.
//!
//! # Valid range
//! Bands wider than about a third of their centre: narrower ones ask for stubs of a few ohm. The next passband lies at three times the centre.

use std::f64::consts::FRAC_PI_2;

use super::Family;
use super::Knob;
use super::Structure;
use super::own;
use super::shorted_stub::equal_ripple_only;
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
use crate::order::Band;
use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;
use crate::order::ResponseShape;
use crate::prototype::ladder;
use crate::prototype::quarter_wave_stubs;
use crate::prototype::shorted_stub_characteristic;

/// The quarter-wave-stub band-pass.
pub struct QuarterWaveStub;

/// Stubs below this are nearer to a plate than to a line.
const LEAST_OHM: f64 = 10.0;

static KEYS: &[Key] = &[
    Key {
        name: "stubs",
        about: "where the stubs leave the line; \"both\" halves the width of each",
        kind: OwnKind::OneOf(&["alternating", "one", "both"]),
        default: Some("both"),
    },
    Key {
        name: "feed-length",
        about: "straight feed between launch and first stub",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("8 mm"),
    },
];

fn chain(order: &Order, degree: usize) -> StubChain {
    StubChain { stubs: degree, end: End::Ground, sides: Sides::of(own::word(order, KEYS, "stubs")) }
}

fn frame([from_hz, to_hz]: [f64; 2]) -> (f64, f64) {
    let center_hz = 0.5 * (from_hz + to_hz);
    (center_hz, FRAC_PI_2 * from_hz / center_hz)
}

impl Structure for QuarterWaveStub {
    fn name(&self) -> &'static str {
        "quarter-wave-stub"
    }

    fn about(&self) -> &'static str {
        "band-pass, quarter-wave stubs to ground by vias a quarter wave apart; wider than about a third of the centre"
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

impl Family for QuarterWaveStub {
    fn passes(&self) -> Passes {
        Passes::Band
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/quarter-wave-stub.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        (3, 9)
    }

    fn target(&self, order: &Order, degree: usize) -> Target {
        let edges = if let Band::BandPass { from_hz, to_hz } = order.filter.band { [from_hz, to_hz] } else { [f64::NAN; 2] };
        let (center_hz, theta) = frame(edges);
        Target::new(order, degree, vec![edges], edges.to_vec(), [degree, degree - 1], move |f| {
            shorted_stub_characteristic(degree, 1, FRAC_PI_2 * f / center_hz, theta)
        })
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let Band::BandPass { from_hz, to_hz } = order.filter.band else { return Err(stub_chain::wrong_band(self.name(), "passband")) };
        stub_chain::like_ports(order, self.name())?;
        stub_chain::odd_degree(degree, self.name())?;
        if order.filter.response == ResponseShape::MaximallyFlat {
            return Err(equal_ripple_only(self.name()));
        }
        let (center_hz, theta) = frame([from_hz, to_hz]);
        let (stubs, lines) = quarter_wave_stubs(&ladder(order.filter.response, degree), theta);
        let port_ohm = order.filter.ports_ohm[0];
        let lowest_ohm = port_ohm / stubs.iter().copied().fold(0.0, f64::max);
        if lowest_ohm < LEAST_OHM {
            return Err(vec![Problem::error(
                "passband-too-narrow",
                Place::Key("filter.passband".into()),
                format!(
                    "a band of {:.1} % asks for stubs of {lowest_ohm:.1} ohm; below {LEAST_OHM} ohm they are no lines any more",
                    200.0 * (to_hz - from_hz) / (from_hz + to_hz)
                ),
                "order a wider band, or family = \"interdigital\", or \"edge-coupled\" below 20 %",
            )]);
        }
        let wanted = |y: Vec<f64>| y.into_iter().map(|y| (port_ohm / y, FRAC_PI_2)).collect::<Vec<_>>();
        let feed_m = own::number(order, KEYS, "feed-length");
        let list = chain(order, degree).guess(order, center_hz, feed_m, &wanted(lines), &wanted(stubs))?;
        Ok((Dimensions { order: order.clone(), degree, list }, Vec::new()))
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        chain(&set.order, set.degree).knobs(set, true, true)
    }
}
