//! Low-pass of open stubs along a line: Richards' transformation and Kuroda's identities.
//!
//! # Source
//! See [`crate::prototype::open_stubs`]; the worked example in D. M. Pozar, *Microwave Engineering*, chapter on filters.
//!
//! # Valid range
//! Cutoff up to about 0.8 of the frequency at which the stubs are a quarter wave; the passband comes again at twice that frequency less the cutoff.

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
use crate::order::Band;
use crate::order::Key;
use crate::order::Limit;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;
use crate::prototype::open_stubs;

/// The open-stub low-pass.
pub struct OpenStub;

static KEYS: &[Key] = &[
    Key {
        name: "length-at-cutoff",
        about: "electrical length of stubs and lines at the cutoff, below 80 deg; shorter ones move the stopband's middle up and ask for more extreme impedances",
        kind: OwnKind::Quantity(Dimensionality::Angle),
        default: Some("45 deg"),
    },
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

fn cutoff_theta(order: &Order) -> f64 {
    own::number(order, KEYS, "length-at-cutoff").to_radians()
}

impl Structure for OpenStub {
    fn name(&self) -> &'static str {
        "open-stub"
    }

    fn about(&self) -> &'static str {
        "low-pass, open stubs along a line; passes again at about three times the cutoff, no vias"
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

impl Family for OpenStub {
    fn passes(&self) -> Passes {
        Passes::Low
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/open-stub.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        (3, 9)
    }

    fn target(&self, order: &Order, degree: usize) -> Target {
        let cutoff_hz = if let Band::LowPass { cutoff_hz } = order.filter.band { cutoff_hz } else { f64::NAN };
        let theta = cutoff_theta(order);
        Target::low_pass(order, degree, cutoff_hz, move |f| (theta * f / cutoff_hz).tan() / theta.tan())
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let Band::LowPass { cutoff_hz } = order.filter.band else { return Err(stub_chain::wrong_band(self.name(), "cutoff")) };
        stub_chain::like_ports(order, self.name())?;
        stub_chain::odd_degree(degree, self.name())?;
        let theta = cutoff_theta(order);
        if !(theta > 0.0 && theta < 80f64.to_radians()) {
            return Err(vec![Problem::error(
                "length-at-cutoff",
                Place::Key("filter.length-at-cutoff".into()),
                format!("stubs of {:.1} deg at the cutoff leave no stopband between the passband and the next one", theta.to_degrees()),
                "give less than 80 deg; 45 deg is usual",
            )]);
        }
        repeats_within_a_requirement(order, cutoff_hz, theta)?;
        let (stubs, lines) = open_stubs(order.filter.response, degree, theta).ok_or_else(Vec::new)?;
        let port_ohm = order.filter.ports_ohm[0];
        let wanted = |z: Vec<f64>| z.into_iter().map(|z| (z * port_ohm, theta)).collect::<Vec<_>>();
        let feed_m = own::number(order, KEYS, "feed-length");
        let list = chain(order, degree).guess(order, cutoff_hz, feed_m, &wanted(lines), &wanted(stubs))?;
        Ok((Dimensions { order: order.clone(), degree, list }, Vec::new()))
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        chain(&set.order, set.degree).knobs(set, false, false)
    }
}

/// The circuit repeats: twice the quarter-wave frequency less the cutoff is a cutoff again, and no rejection can be had above it.
fn repeats_within_a_requirement(order: &Order, cutoff_hz: f64, theta: f64) -> Result<(), Vec<Problem>> {
    let again_hz = cutoff_hz * (2.0 * FRAC_PI_2 / theta - 1.0);
    let rejects = |limits: &[Limit]| limits.iter().any(|l| matches!(l, Limit::RejectionAtLeast { .. }));
    match order.requirements.iter().position(|r| rejects(&r.limits) && r.to_hz > again_hz) {
        None => Ok(()),
        Some(index) => Err(vec![Problem::error(
            "stopband-repeats",
            Place::Key("requirement".into()),
            format!(
                "requirement {} asks for rejection up to {:.4} GHz, but stubs of {:.1} deg at the cutoff pass again from {:.4} GHz",
                index + 1,
                order.requirements[index].to_hz / 1e9,
                theta.to_degrees(),
                again_hz / 1e9
            ),
            "give a smaller filter.length-at-cutoff, or family = \"stepped-impedance\", whose stopband reaches farther up",
        )]),
    }
}
