//! A feed tapped into the free half of a half-wave resonator: instead of a coupled section whose gap no shop can etch.
//!
//! # Source
//! External Q of a half-wave resonator tapped at an angle from its middle, Qe = (pi/2) (Z0/Zr) / sin^2: J.-S. Hong and M. J. Lancaster,
//! *Microstrip Filters for RF/Microwave Applications*, section on hairpin filters, there as the tap's distance (from memory). A start value:
//! the tee and the resonator's slope are left to refinement.

use std::f64::consts::FRAC_PI_2;

use super::Moves;
use super::feeds;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Problem;
use crate::dimensions::Dimension;
use crate::dimensions::Dimensions;
use crate::layout::Corner;
use crate::layout::Draft;
use crate::layout::Turn;
use crate::layout::Way;
use crate::line::AsBuilt;
use crate::line::Strip;
use crate::line::open_end;
use crate::line::optimum_cut;
use crate::line::width_for_impedance;
use crate::order::Order;

/// Clear of the resonator's free half, the feed runs past it this many dielectric thicknesses away: coupling below some -35 dB.
const CLEAR_HEIGHTS: f64 = 4.0;

fn name(port: usize, what: &str) -> String {
    format!("tap {port} {what}")
}

/// Strip of the free half, its length from the resonator's other half to the tap and from the tap to the open end, the feed's way out, its corner.
const WHAT: [&str; 5] = ["width", "inner length", "outer length", "drop length", "cut"];

/// Names of the dimensions of a tap.
pub fn names(port: usize) -> Vec<String> {
    WHAT.map(|what| name(port, what)).to_vec()
}

/// What a tap's first guess starts from.
#[derive(Clone, Copy, Debug)]
pub struct Tap {
    /// Impedance of the resonator.
    pub resonator_ohm: f64,
    /// External Q wanted.
    pub external_q: f64,
    /// Centre of the band.
    pub center_hz: f64,
}

impl Tap {
    /// The dimensions of the tap of a port.
    ///
    /// # Errors
    /// `impedance-out-of-reach`; `tap-out-of-reach` when even at its open end the resonator is loaded too little.
    pub fn guess(&self, order: &Order, built: &AsBuilt, port: usize) -> Result<Vec<Dimension>, Problem> {
        let width = |ohm: f64, key: &str| {
            width_for_impedance(built, ohm, self.center_hz).map_err(|why| {
                Problem::error(
                    "impedance-out-of-reach",
                    Place::Key(format!("filter.{key}")),
                    format!("no strip of {ohm} ohm: {}", why.message),
                    why.help,
                )
            })
        };
        let port_ohm = order.filter.ports_ohm[port - 1];
        let (width_m, feed_m) = (width(self.resonator_ohm, "resonator-impedance")?, width(port_ohm, "port")?);
        let sine = (FRAC_PI_2 * port_ohm / self.resonator_ohm / self.external_q).sqrt();
        if sine >= 1.0 {
            return Err(Problem::error(
                "tap-out-of-reach",
                Place::Key("filter.input".into()),
                format!("port {port} wants an external Q of {:.2}, less than a tap at the resonator's open end gives", self.external_q),
                "raise filter.resonator-impedance or make the band narrower",
            ));
        }
        let (strip, feed) = (Strip::new(built, width_m), Strip::new(built, feed_m));
        let beta = strip.at(self.center_hz).beta_rad_per_m(self.center_hz);
        let angle = sine.asin();
        let targets = |rad: f64| [("electrical length deg", rad.to_degrees()), ("external Q", self.external_q)];
        let mut outer = Dimension::guess(name(port, "outer length"), (FRAC_PI_2 - angle) / beta, &targets(FRAC_PI_2 - angle));
        outer.correct("open end", -open_end::extension_m(&strip));
        let drop_m = 0.5 * width_m + CLEAR_HEIGHTS * built.thickness_m;
        Ok(vec![
            Dimension::guess(name(port, "width"), width_m, &[("Z0 ohm", self.resonator_ohm)]),
            Dimension::guess(name(port, "inner length"), angle / beta, &targets(angle)),
            outer,
            Dimension::guess(name(port, "drop length"), drop_m, &[]),
            Dimension::guess(name(port, "cut"), 2.0 * feed_m * optimum_cut(&feed), &[]),
        ])
    }
}

/// The width of a port's free half.
pub fn width(set: &Dimensions, port: usize) -> Result<Nm, Problem> {
    set.value(&name(port, "width")).map(Nm::from_m)
}

/// Draws the free half of the first resonator from its open end at `open`, heading right, and the feed of port 1 below it; returns the port's
/// node and the one where the resonator goes on.
pub fn begin(draft: &mut Draft, set: &Dimensions, open: usize) -> Result<(usize, usize), Problem> {
    let value = |what: &str| set.value(&name(1, what)).map(Nm::from_m);
    let feed = feeds::read(set, 1)?;
    draft.open(open);
    let arriving = draft.strip(open, value("outer length")?, Way::Right, vec![name(1, "width"), name(1, "outer length")]);
    let (on, side) = draft.tee(arriving, width(set, 1)?, feed.width, Way::Right, Way::Down);
    let far = draft.strip(on, value("inner length")?, Way::Right, vec![name(1, "width"), name(1, "inner length")]);
    Ok((out(draft, set, 1, side, (Way::Down, Turn::Right))?, far))
}

/// Draws the free half of the last resonator from where it begins, heading right, and the feed of port 2 above it; returns the port's node.
pub fn end(draft: &mut Draft, set: &Dimensions, from: usize) -> Result<usize, Problem> {
    let value = |what: &str| set.value(&name(2, what)).map(Nm::from_m);
    let feed = feeds::read(set, 2)?;
    let arriving = draft.strip(from, value("inner length")?, Way::Right, vec![name(2, "width"), name(2, "inner length")]);
    let (on, side) = draft.tee(arriving, width(set, 2)?, feed.width, Way::Right, Way::Up);
    let open = draft.strip(on, value("outer length")?, Way::Right, vec![name(2, "width"), name(2, "outer length")]);
    draft.open(open);
    out(draft, set, 2, side, (Way::Up, Turn::Right))
}

/// The feed from the tap away from the resonator, round a corner and along to its launch.
fn out(draft: &mut Draft, set: &Dimensions, port: usize, side: usize, (way, turn): (Way, Turn)) -> Result<usize, Problem> {
    let value = |what: &str| set.value(&name(port, what)).map(Nm::from_m);
    let feed = feeds::read(set, port)?;
    let dropped = draft.strip(side, value("drop length")?, way, vec![name(port, "drop length")]);
    let (turned, along) = draft.bend(dropped, way, turn, Corner::Mitred { cut: value("cut")? });
    let end = draft.strip(turned, feed.length, along, feeds::line_names(port));
    draft.launch(port, end, feed.launch, feeds::launch_names(&set.order, port));
    Ok(end)
}

/// How a tap's place follows its coupling, the resonator's length kept: dimension index and move for x = 1.
pub fn coupling_moves(set: &Dimensions, port: usize) -> Vec<(usize, Moves)> {
    let at = |what: &str| set.list.iter().position(|d| d.name == name(port, what));
    let (Some(inner), Some(outer)) = (at("inner length"), at("outer length")) else { return Vec::new() };
    let inner_m = set.list[inner].value_m;
    vec![(inner, Moves::Absolute(inner_m)), (outer, Moves::Absolute(-inner_m))]
}

/// How a tap's free half follows its resonator.
pub fn tuning_move(set: &Dimensions, port: usize) -> Option<(usize, Moves)> {
    let outer = set.list.iter().position(|d| d.name == name(port, "outer length"))?;
    let free_m: f64 = ["inner length", "outer length"].iter().filter_map(|what| set.value(&name(port, what)).ok()).sum();
    Some((outer, Moves::Absolute(free_m)))
}

/// Whether both taps are the same.
pub fn alike(set: &Dimensions) -> bool {
    WHAT.iter().all(|what| set.value(&name(1, what)) == set.value(&name(2, what)))
}
