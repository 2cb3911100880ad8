//! Filter families, one file each: from the requirement to a first dimension set, and from a dimension set to a layout.

mod comb;
mod combline;
mod coupled_resonator_stop;
mod edge_coupled;
mod end_coupled;
mod feeds;
mod grounds;
mod hairpin;
mod interdigital;
mod open_stub;
mod open_stub_stop;
mod own;
mod probe;
mod quarter_wave_stub;
mod row;
mod shorted_stub;
mod single_resonator;
mod stepped_impedance;
mod stub_chain;
mod taps;
mod target;

pub use probe::{Aim, Drawing, Probe};
pub use target::Target;

use crate::base::Outcome;
use crate::base::Place;
use crate::base::Problem;
use crate::dimensions::Dimensions;
use crate::layout::Layout;
use crate::order::Band;
use crate::order::FamilyKeys;
use crate::order::Key;
use crate::order::Order;
use crate::order::Passes;

/// Whatever can be drawn from a dimension set: filter families and coupons.
pub trait Structure: Sync {
    /// Name as written in an order.
    fn name(&self) -> &'static str;

    /// One line for `list families`.
    fn about(&self) -> &'static str;

    /// Keys of its own under `[filter]`.
    fn keys(&self) -> &'static [Key];

    /// Names of the dimensions it is drawn from, in drawing order.
    fn names(&self, order: &Order, degree: usize) -> Vec<String>;

    /// The dimension set assembled into parts; rounds to 1 nm, never to the shop grid.
    ///
    /// # Errors
    /// Dimensions that are missing or do not make a drawable circuit.
    fn layout(&self, set: &Dimensions) -> Result<Layout, Vec<Problem>>;
}

/// A filter family.
pub trait Family: Structure {
    /// Its kind of band.
    fn passes(&self) -> Passes;

    /// Its commented starter order, an invented scenario.
    fn starter(&self) -> &'static str;

    /// Least and greatest degree it draws.
    fn degrees(&self) -> (usize, usize);

    /// The closed-form dimension set of a degree.
    ///
    /// # Errors
    /// `coupling-out-of-reach`, `impedance-out-of-reach`: no geometry on this laminate gives the impedances.
    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions>;

    /// The lossless response of a degree to which refinement brings the set; for a band-pass, unless the family knows better, the prototype's
    /// run evenly from edge to edge.
    fn target(&self, order: &Order, degree: usize) -> Target {
        match order.filter.band {
            Band::LowPass { cutoff_hz } => Target::low_pass(order, degree, cutoff_hz, move |f| f / cutoff_hz),
            Band::HighPass { from_hz, to_hz } | Band::BandPass { from_hz, to_hz } | Band::BandStop { from_hz, to_hz } => {
                Target::band_pass(order, degree, [from_hz, to_hz])
            }
        }
    }

    /// What is measured on parts of the circuit, in this order, before the whole is refined.
    fn probes(&self, _set: &Dimensions) -> Vec<Probe> {
        Vec::new()
    }

    /// The directions in which refinement moves the set, symmetric partners together.
    fn knobs(&self, set: &Dimensions) -> Vec<Knob>;
}

/// One direction of refinement: a number `x` that moves several dimensions at once.
#[derive(Clone, Debug, PartialEq)]
pub struct Knob {
    /// What it tunes: `coupling 2`, `resonator 1`.
    pub about: String,
    /// Whether it tunes a resonator: all such knobs turned by x together scale the circuit by 1 + x along its resonators.
    pub is_resonator: bool,
    /// Dimension index, and how far it moves.
    pub moves: Vec<(usize, Moves)>,
    /// Greatest |x| of one step of refinement.
    pub greatest_step: f64,
}

/// How a dimension follows a knob.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Moves {
    /// value * exp(rate * x).
    Relative(f64),
    /// value + metres * x.
    Absolute(f64),
}

/// Every family, in the order `list` shows them. The one list: order reading, help, templates and tests follow it.
pub static FAMILIES: &[&dyn Family] = &[
    &edge_coupled::EdgeCoupled,
    &end_coupled::EndCoupled,
    &hairpin::Hairpin,
    &interdigital::Interdigital,
    &combline::Combline,
    &single_resonator::SingleResonator,
    &coupled_resonator_stop::CoupledResonatorStop,
    &stepped_impedance::SteppedImpedance,
    &open_stub::OpenStub,
    &shorted_stub::ShortedStub,
    &quarter_wave_stub::QuarterWaveStub,
    &open_stub_stop::OpenStubStop,
];

/// The family an order names.
///
/// # Errors
/// `family-unknown`; orders read from a file have been checked already.
pub fn of(order: &Order) -> Result<&'static dyn Family, Problem> {
    let name = &order.filter.family;
    FAMILIES.iter().find(|family| family.name() == name).copied().ok_or_else(|| {
        let known: Vec<&str> = FAMILIES.iter().map(|family| family.name()).collect();
        Problem::error(
            "family-unknown",
            Place::Key("filter.family".into()),
            format!("no family is called \"{name}\""),
            format!("known are: {}", known.join(", ")),
        )
    })
}

/// What the order room must know of each family.
pub fn keys() -> Vec<FamilyKeys> {
    FAMILIES.iter().map(|f| FamilyKeys { name: f.name(), passes: f.passes(), degrees: f.degrees(), keys: f.keys() }).collect()
}
