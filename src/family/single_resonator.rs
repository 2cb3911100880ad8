//! One half-wave resonator between two gaps, weakly coupled: the board on which a laminate is judged.
//!
//! Where it resonates tells the effective permittivity; how wide the resonance is and how much it passes tells the unloaded Q:
//! QL = f0 / (3 dB width), Qu = QL / (1 - |S21|).
//!
//! # Source
//! Gaps: Cohn, "Direct-coupled-resonator filters", Proc. IRE 45, 1957, at degree 1. Loss at resonance: any textbook (Matthaei, Young,
//! Jones 1964, section 11.02). Unloaded Q: 1/Qu = 1/Qc + 1/Qd + 1/Qr; Belohoubek and Denlinger, "Loss considerations for microstrip
//! resonators", IEEE Trans. MTT-23, 1975; the radiation part after Lewin 1960 (see `line::open_end`).
//!
//! # Valid range
//! Loss at resonance of some 6 to 30 dB; so weak a coupling that the lossless resonance is narrower than the drawing grid can place is
//! refused. Both ends are taken to radiate each for itself, so the radiation Q is a low estimate.

use std::f64::consts::PI;

use super::Family;
use super::Knob;
use super::Structure;
use super::Target;
use super::end_coupled;
use super::own;
use crate::base::Dimensionality;
use crate::base::Outcome;
use crate::base::Place;
use crate::base::Problem;
use crate::dimensions::Dimensions;
use crate::layout::Layout;
use crate::line::AsBuilt;
use crate::line::Strip;
use crate::line::open_end;
use crate::line::width_for_impedance;
use crate::order::Band;
use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;
use crate::prototype::edge_height;

/// The family of one resonator.
pub struct SingleResonator;

/// Half the lossless resonance must be wider than the shift by rounding to the grid, this many times.
const GRID_SHIFTS: f64 = 2.0;

static KEYS: &[Key] = &[
    Key {
        name: "resonance-loss",
        about: "insertion loss at resonance: the more, the weaker the coupling and the nearer the loaded Q is to the unloaded",
        kind: OwnKind::Quantity(Dimensionality::Level),
        default: Some("20 dB"),
    },
    Key {
        name: "resonator-impedance",
        about: "impedance of the resonator, the line whose loss is measured",
        kind: OwnKind::Quantity(Dimensionality::Impedance),
        default: Some("50 ohm"),
    },
    Key {
        name: "feed-length",
        about: "straight feed between launch and gap",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("8 mm"),
    },
];

/// The parts of the unloaded Q of a half-wave resonator.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Quality {
    conductor: f64,
    dielectric: f64,
    radiation: f64,
    half_wave_m: f64,
}

impl Quality {
    fn of(order: &Order, center_hz: f64) -> Option<Quality> {
        let built = AsBuilt::nominal(order);
        let ohm = own::number(order, KEYS, "resonator-impedance");
        let strip = Strip::new(&built, width_for_impedance(&built, ohm, center_hz).ok()?);
        let mode = strip.at(center_hz);
        let beta = mode.beta_rad_per_m(center_hz);
        let end_s = open_end::radiation_conductance_s(&strip, center_hz);
        Some(Quality {
            conductor: beta / (2.0 * mode.conductor_np_per_m),
            dielectric: beta / (2.0 * mode.dielectric_np_per_m),
            // Slope parameter pi/2 of a half wave, a conductance at either end.
            radiation: PI / (4.0 * mode.z0_ohm * end_s),
            half_wave_m: PI / beta,
        })
    }

    fn unloaded(&self) -> f64 {
        1.0 / (1.0 / self.conductor + 1.0 / self.dielectric + 1.0 / self.radiation)
    }
}

/// Q of both ports together, that with the unloaded one makes the loss at resonance: |S21| = 1 / (1 + Qports/Qu).
fn ports_q(unloaded: f64, loss_db: f64) -> f64 {
    unloaded * (10f64.powf(loss_db / 20.0) - 1.0)
}

fn center_hz(order: &Order) -> Option<f64> {
    match order.filter.band {
        Band::BandPass { from_hz, to_hz } => Some(0.5 * (from_hz + to_hz)),
        _ => None,
    }
}

impl Structure for SingleResonator {
    fn name(&self) -> &'static str {
        "single-resonator"
    }

    fn about(&self) -> &'static str {
        "one half-wave resonator between two gaps, weakly coupled: resonance and unloaded Q of a laminate"
    }

    fn keys(&self) -> &'static [Key] {
        KEYS
    }

    fn names(&self, order: &Order, degree: usize) -> Vec<String> {
        end_coupled::names(order, degree)
    }

    fn layout(&self, set: &Dimensions) -> Result<Layout, Vec<Problem>> {
        end_coupled::layout(set).map_err(|problem| vec![problem])
    }
}

impl Family for SingleResonator {
    fn passes(&self) -> Passes {
        Passes::Band
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/single-resonator.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        (1, 1)
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let Some(center_hz) = center_hz(order) else {
            return Err(vec![Problem::error(
                "band-not-of-the-family",
                Place::Key("filter.passband".into()),
                "a resonator passes a band",
                "give passband = [from, to]",
            )]);
        };
        let resonator_ohm = own::number(order, KEYS, "resonator-impedance");
        let loss_db = own::number(order, KEYS, "resonance-loss");
        let quality = Quality::of(order, center_hz).ok_or_else(|| {
            vec![Problem::error(
                "impedance-out-of-reach",
                Place::Key("filter.resonator-impedance".into()),
                format!("no strip of {resonator_ohm} ohm on this laminate"),
                "ask for an impedance nearer to 50 ohm",
            )]
        })?;
        let both = ports_q(quality.unloaded(), loss_db);
        let shift = 0.5 * order.shop.grid_m / quality.half_wave_m;
        if 0.5 / both < GRID_SHIFTS * shift {
            let greatest_db = 20.0 * (1.0 + 0.5 / (GRID_SHIFTS * shift * quality.unloaded())).log10();
            return Err(vec![Problem::error(
                "resonance-below-grid",
                Place::Key("filter.resonance-loss".into()),
                format!(
                    "{loss_db} dB at resonance asks for ports of Q {both:.0}: a resonance of {:.3} MHz without loss, while rounding to the grid moves it by {:.3} MHz",
                    center_hz / both / 1e6,
                    shift * center_hz / 1e6
                ),
                format!("ask for resonance-loss = \"{:.0} dB\" or less, or a finer shop.grid", greatest_db.floor()),
            )]);
        }
        let inverter = (PI / (2.0 * 2.0 * both)).sqrt();
        let guess =
            end_coupled::Guess { center_hz, inverters: vec![inverter; 2], resonator_ohm, feed_m: own::number(order, KEYS, "feed-length") };
        let mut list = guess.dimensions(order)?;
        if let Some(length) = list.iter_mut().find(|d| d.name == end_coupled::length_name(1)) {
            let loaded = 1.0 / (1.0 / both + 1.0 / quality.unloaded());
            let figures = [
                ("unloaded Q", quality.unloaded()),
                ("conductor Q", quality.conductor),
                ("dielectric Q", quality.dielectric),
                ("radiation Q", quality.radiation),
                ("ports Q", both),
                ("loaded Q", loaded),
                ("resonance loss dB", loss_db),
            ];
            length.serves.extend(figures.map(|(what, value)| (what.to_string(), value)));
        }
        Ok((Dimensions { order: order.clone(), degree, list }, Vec::new()))
    }

    /// The resonance that the ports alone would make; the passband of the order gives its centre only.
    fn target(&self, order: &Order, degree: usize) -> Target {
        let from_order = Target::band_pass(order, degree, ordered_edges(order));
        let Some((center_hz, quality)) = center_hz(order).and_then(|f| Quality::of(order, f).map(|q| (f, q))) else { return from_order };
        let both = ports_q(quality.unloaded(), own::number(order, KEYS, "resonance-loss"));
        // The half-power points of K = S11/S21 lie where it is 1; the edges of the shape where it is the height of its ripple.
        let half_hz = edge_height(order.filter.response) * 0.5 * center_hz / both;
        let mut target = Target::band_pass(order, degree, [center_hz - half_hz, center_hz + half_hz]);
        target.width_hz = 2.0 * half_hz;
        target
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        end_coupled::knobs(set)
    }
}

fn ordered_edges(order: &Order) -> [f64; 2] {
    match order.filter.band {
        Band::BandPass { from_hz, to_hz } | Band::HighPass { from_hz, to_hz } | Band::BandStop { from_hz, to_hz } => [from_hz, to_hz],
        Band::LowPass { cutoff_hz } => [0.0, cutoff_hz],
    }
}
