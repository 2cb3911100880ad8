//! High-pass of shorted stubs with lines twice as long between them: the optimum distributed high-pass.
//!
//! # Source
//! See [`crate::prototype::optimum_high_pass`].
//!
//! # Valid range
//! Upper edge 2.6 to 8 times the cutoff; the second stopband lies about the frequency at which the stubs are half a wave.

use std::f64::consts::PI;

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
use crate::order::Band;
use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;
use crate::order::ResponseShape;
use crate::prototype::optimum_high_pass;
use crate::prototype::shorted_stub_characteristic;

/// The shorted-stub high-pass.
pub struct ShortedStub;

/// Lines are so many times as long as stubs.
const LINE_OVER_STUB: usize = 2;
/// Upper edge over cutoff that the circuit makes well: stubs of 50 to 20 deg at the cutoff.
const REACH: [f64; 2] = [2.6, 8.0];

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
    StubChain { stubs: degree, end: End::Ground, sides: Sides::of(own::word(order, KEYS, "stubs")) }
}

/// Length of the stubs at the cutoff, rad: they are a quarter wave in the middle of the passband.
fn cutoff_theta(from_hz: f64, to_hz: f64) -> f64 {
    PI * from_hz / (from_hz + to_hz)
}

impl Structure for ShortedStub {
    fn name(&self) -> &'static str {
        "shorted-stub"
    }

    fn about(&self) -> &'static str {
        "high-pass, stubs to ground by vias along a line; passes up to 3 to 8 times its cutoff"
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

impl Family for ShortedStub {
    fn passes(&self) -> Passes {
        Passes::High
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/shorted-stub.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        (2, 8)
    }

    fn target(&self, order: &Order, degree: usize) -> Target {
        let [from_hz, to_hz] = if let Band::HighPass { from_hz, to_hz } = order.filter.band { [from_hz, to_hz] } else { [f64::NAN; 2] };
        let theta = cutoff_theta(from_hz, to_hz);
        let zeros = LINE_OVER_STUB * (degree - 1) + 1;
        Target::new(order, degree, vec![[from_hz, to_hz]], vec![from_hz, to_hz], [zeros, zeros - 1], move |f| {
            shorted_stub_characteristic(degree, LINE_OVER_STUB, theta * f / from_hz, theta)
        })
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let Band::HighPass { from_hz, to_hz } = order.filter.band else { return Err(stub_chain::wrong_band(self.name(), "passband")) };
        stub_chain::like_ports(order, self.name())?;
        let ResponseShape::EqualRipple { ripple_db } = order.filter.response else { return Err(equal_ripple_only(self.name())) };
        let reach = to_hz / from_hz;
        if !(REACH[0]..=REACH[1]).contains(&reach) {
            return Err(vec![Problem::error(
                "passband-out-of-reach",
                Place::Key("filter.passband".into()),
                format!("the passband's upper edge is {reach:.2} times the lower; shorted stubs make {} to {} times", REACH[0], REACH[1]),
                if reach < REACH[0] {
                    "raise the upper edge, or order the band as a band-pass: family = \"quarter-wave-stub\""
                } else {
                    "lower the upper edge of the passband: above, the stubs short the line again"
                },
            )]);
        }
        let theta = cutoff_theta(from_hz, to_hz);
        let (stubs, lines) = optimum_high_pass(ripple_db, degree, theta).ok_or_else(|| {
            vec![Problem::error(
                "passband-out-of-reach",
                Place::Key("filter.passband".into()),
                format!("no chain of {degree} shorted stubs has {ripple_db:.3} dB ripple over this passband"),
                "order another ripple or passband",
            )]
        })?;
        let port_ohm = order.filter.ports_ohm[0];
        let middle_hz = 0.5 * (from_hz + to_hz);
        let wanted = |y: Vec<f64>, length: f64| y.into_iter().map(|y| (port_ohm / y, 0.5 * PI * length)).collect::<Vec<_>>();
        let feed_m = own::number(order, KEYS, "feed-length");
        let (lines, stubs) = (wanted(lines, LINE_OVER_STUB as f64), wanted(stubs, 1.0));
        let list = chain(order, degree).guess(order, middle_hz, feed_m, &lines, &stubs)?;
        Ok((Dimensions { order: order.clone(), degree, list }, Vec::new()))
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        chain(&set.order, set.degree).knobs(set, true, true)
    }
}

/// The refusal of maximally flat.
pub fn equal_ripple_only(family: &str) -> Vec<Problem> {
    vec![Problem::error(
        "response-not-of-the-family",
        Place::Key("filter.response".into()),
        format!("{family} is synthesized with equal ripple: its optimum response has no maximally flat form here"),
        "write response = \"equal-ripple\" with a ripple",
    )]
}
