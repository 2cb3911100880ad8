//! Narrow band-stop: a main line with L-shaped half-wave resonators beside it, a quarter wave (or three) from one to the next.
//!
//! One arm of each resonator runs beside the main line, the other leaves it at a right angle; the resonators lie on the two sides in turn,
//! so that neighbours do not see each other.
//!
//! # Source
//! Matthaei, Young, Jones, *Microwave Filters, Impedance-Matching Networks, and Coupling Structures*, 1964, chapter 12: reactance slope of
//! each resonator from the prototype; Hong and Lancaster, *Microstrip Filters for RF/Microwave Applications*, band-stop filters with
//! L resonators (from memory). What slope a coupled arm has is weak-coupling theory: an arm of angle a beside a matched line takes from a
//! half-wave resonator the external Q pi / (c sin a)^2, c the voltage coupling of the pair.
//!
//! # Valid range
//! Stopbands up to some 10 % wide, as the shop's narrowest gap allows; lossless in the prototype, so that a resonator of finite Q stops less
//! than it should and rounds the edges. Left out: what the outside of each corner, one width long, couples beyond its arm, and the coupling
//! of resonators on the same side, half a wave apart.

use std::f64::consts::FRAC_PI_2;
use std::f64::consts::PI;

use super::Family;
use super::Knob;
use super::Moves;
use super::Structure;
use super::Target;
use super::feeds;
use super::own;
use crate::base::Dimensionality;
use crate::base::Nm;
use crate::base::Outcome;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::dimensions::Dimension;
use crate::dimensions::Dimensions;
use crate::layout::Corner;
use crate::layout::Draft;
use crate::layout::Layout;
use crate::layout::Part;
use crate::layout::Turn;
use crate::layout::Way;
use crate::line;
use crate::line::AsBuilt;
use crate::line::C_M_PER_S;
use crate::line::Pair;
use crate::line::Strip;
use crate::line::bend;
use crate::line::open_end;
use crate::line::optimum_cut;
use crate::line::pair_for_impedances;
use crate::line::width_for_impedance;
use crate::order::Band;
use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;
use crate::order::ResponseShape;
use crate::prototype::characteristic;
use crate::prototype::ladder;

/// The family of narrow band-stops.
pub struct CoupledResonatorStop;

/// Angle of the arm beside the main line; the rest of the quarter wave is room for the corner.
const ARM_RAD: f64 = 55.0 / 180.0 * PI;
/// Wider stopbands are another family's: coupling is no longer weak.
const WIDEST: f64 = 0.15;
/// How far the passbands are held, beyond the outermost maximum of the prototype's reflection.
const REACH_BEYOND: f64 = 1.25;

static KEYS: &[Key] = &[
    Key {
        name: "spacing",
        about: "from one resonator to the next: a quarter wave, or three where neighbours must be kept apart",
        kind: OwnKind::OneOf(&["quarter-wave", "three-quarter-wave"]),
        default: Some("quarter-wave"),
    },
    Key {
        name: "feed-length",
        about: "straight feed between launch and first resonator",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("6 mm"),
    },
];

const LINE_WIDTH: &str = "line width";

fn resonator(k: usize, what: &str) -> String {
    format!("resonator {k} {what}")
}

fn line_length(k: usize) -> String {
    format!("line {k} length")
}

/// The words of a resonator's dimensions: strip and gap beside the main line, length of that arm, length of the other, cut of the corner.
const WHAT: [&str; 5] = ["width", "gap", "length", "arm length", "cut"];

impl Structure for CoupledResonatorStop {
    fn name(&self) -> &'static str {
        "coupled-resonator-stop"
    }

    fn about(&self) -> &'static str {
        "band-stop, L-shaped half-wave resonators beside a main line; up to 10 % wide, no vias"
    }

    fn keys(&self) -> &'static [Key] {
        KEYS
    }

    fn names(&self, order: &Order, degree: usize) -> Vec<String> {
        let mut names = vec![LINE_WIDTH.to_string()];
        for k in 1..=degree {
            names.extend(WHAT.map(|what| resonator(k, what)));
            if k < degree {
                names.push(line_length(k));
            }
        }
        names.extend(feeds::names(order));
        names
    }

    fn layout(&self, set: &Dimensions) -> Result<Layout, Vec<Problem>> {
        layout(set).map_err(|problem| vec![problem])
    }
}

fn layout(set: &Dimensions) -> Result<Layout, Problem> {
    let value = |name: String| set.value(&name).map(Nm::from_m);
    let main = value(LINE_WIDTH.into())?;
    let mut draft = Draft::default();
    let (start, mut arriving) = feeds::begin(&mut draft, set, Point::default())?;
    for k in 1..=set.degree {
        let part = |what: &str| value(resonator(k, what));
        let (width, gap, length) = (part("width")?, part("gap")?, part("length")?);
        let corner = Corner::Mitred { cut: part("cut")? };
        // The main line's own width begins and ends one gap clear of the resonator, so that it comes no nearer to it.
        let [before, after] = clear_of(width, gap, corner);
        let stepped = draft.step(arriving, width, Way::Right);
        let near = draft.strip(stepped, before, Way::Right, vec![resonator(k, "width")]);
        let ends = draft.node(near);
        let (x, low, high) = (ends.left.x, ends.left.y.min(ends.right.y), ends.left.y.max(ends.right.y));
        let is_above = k % 2 == 1;
        let (from, to) = if is_above { (high + gap, high + gap + width) } else { (low - gap - width, low - gap) };
        let far = mouth(&mut draft, x + length, (low, high), true);
        let beside_near = mouth(&mut draft, x, (from, to), false);
        let beside_far = mouth(&mut draft, x + length, (from, to), true);
        draft.place(
            Part::Lines { widths: vec![width, width], gaps: vec![gap], length },
            vec![near, beside_near, far, beside_far],
            ["width", "gap", "length"].map(|what| resonator(k, what)).to_vec(),
        );
        draft.open(beside_near);
        let turn = if is_above { Turn::Left } else { Turn::Right };
        let (leaving, way) = draft.bend(beside_far, Way::Right, turn, corner);
        let end = draft.strip(leaving, part("arm length")?, way, vec![resonator(k, "arm length")]);
        draft.open(end);
        let clear = draft.strip(far, after, Way::Right, vec![resonator(k, "width")]);
        arriving = if k < set.degree {
            let from = draft.step(clear, main, Way::Right);
            let length = value(line_length(k))?;
            // Shorter, the two steps leave a sliver between them.
            if length.m() < set.order.shop.line_m.max(set.order.shop.gap_m) {
                return Err(no_room(k, length.m()));
            }
            draft.strip(from, length, Way::Right, vec![LINE_WIDTH.into(), line_length(k)])
        } else {
            clear
        };
    }
    let end = feeds::end(&mut draft, set, arriving)?;
    Ok(draft.finish([start, end], set.degree + 1))
}

/// Lengths of main line, as wide as beside the resonator, before it and along its corner.
fn clear_of(width: Nm, gap: Nm, corner: Corner) -> [Nm; 2] {
    [gap, corner.shoulder(width) + width + gap]
}

fn no_room(k: usize, length_m: f64) -> Problem {
    Problem::error(
        "no-room-between-resonators",
        Place::Dimension(line_length(k)),
        format!("between the corner of resonator {k} and the next resonator {:.3} mm of line are left", length_m * 1e3),
        "set filter.spacing = \"three-quarter-wave\", or take a thinner laminate: narrower strips have smaller corners",
    )
}

/// A mouth at `x` from `low` to `high`, looking right or left out of the part that ends there.
fn mouth(draft: &mut Draft, x: Nm, (low, high): (Nm, Nm), looks_right: bool) -> usize {
    let (low, high) = (Point { x, y: low }, Point { x, y: high });
    if looks_right { draft.between(high, low) } else { draft.between(low, high) }
}

impl Family for CoupledResonatorStop {
    fn passes(&self) -> Passes {
        Passes::Stop
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/coupled-resonator-stop.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        (1, 7)
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let (center_hz, fraction) = possible(order, degree)?;
        let built = AsBuilt::nominal(order).without_loss();
        let port_ohm = order.filter.ports_ohm[0];
        let g = ladder(order.filter.response, degree);
        let mut problems = Vec::new();
        let mut list = Vec::new();
        match width_for_impedance(&built, port_ohm, center_hz) {
            Ok(width_m) => list.push(Dimension::guess(LINE_WIDTH.into(), width_m, &[("Z0 ohm", port_ohm)])),
            Err(why) => {
                let message = format!("no main line of {port_ohm} ohm: {}", why.message);
                problems.push(Problem::error("impedance-out-of-reach", Place::Key("filter.port".into()), message, why.help));
            }
        }
        for (k, element) in g.iter().enumerate().take(degree + 1).skip(1) {
            // Reactance slope over Z0 of the branch to ground, and from it what the resonator alone loses to the line.
            let slope = 1.0 / (element * fraction);
            let coupling = (PI / (2.0 * slope)).sqrt() / ARM_RAD.sin();
            match self.resonator(&built, order, k, [slope, coupling], center_hz) {
                Ok(dimensions) => {
                    list.extend(dimensions);
                    if k < degree {
                        let spaced_rad = if own::word(order, KEYS, "spacing") == "quarter-wave" { FRAC_PI_2 } else { 3.0 * FRAC_PI_2 };
                        let theta = spaced_rad - ARM_RAD;
                        let beta =
                            list.first().map_or(0.0, |main| Strip::new(&built, main.value_m).at(center_hz).beta_rad_per_m(center_hz));
                        let targets = [("electrical length deg", theta.to_degrees())];
                        let mut line = Dimension::guess(line_length(k), theta / beta, &targets);
                        line.correct("run along corner and next end", -cleared_m(&list, k));
                        if line.value_m < order.shop.line_m.max(order.shop.gap_m) {
                            problems.push(no_room(k, line.value_m));
                        }
                        list.push(line);
                    }
                }
                Err(why) => problems.push(Problem::error(
                    "coupling-out-of-reach",
                    Place::Key("filter.stopband".into()),
                    format!("resonator {k} wants a coupling of {coupling:.3} to the main line: {why}"),
                    "make the stopband narrower, the laminate thicker, or take family = \"open-stub-stop\" for a wide one",
                )),
            }
        }
        match feeds::guess(order, &built, own::number(order, KEYS, "feed-length"), center_hz) {
            Ok(ports) => list.extend(ports),
            Err(found) => problems.extend(found),
        }
        if problems.is_empty() { Ok((Dimensions { order: order.clone(), degree, list }, problems)) } else { Err(problems) }
    }

    /// The prototype's low-pass through x = (half of the stopband) / (f - f0), near the stopband only: farther away the circuit has the
    /// reflections of its lines.
    fn target(&self, order: &Order, degree: usize) -> Target {
        let Band::BandStop { from_hz, to_hz } = order.filter.band else { return Target::band_pass(order, degree, [0.0, 0.0]) };
        let (center_hz, width_hz) = (0.5 * (from_hz + to_hz), to_hz - from_hz);
        let shape = order.filter.response;
        // The last maximum of the prototype's reflection going away from the stopband lies where x is sin(pi / 2n).
        let outermost = (FRAC_PI_2 / degree as f64).sin();
        let reach_hz = REACH_BEYOND * 0.5 * width_hz / outermost.min(0.5);
        let passes = vec![[center_hz - reach_hz, from_hz], [to_hz, center_hz + reach_hz]];
        let count = 2 * (degree / 2);
        Target::new(order, degree, passes, vec![from_hz, to_hz], [count, count], move |f| {
            characteristic(shape, degree, 0.5 * width_hz / (f - center_hz))
        })
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        let at = |name: String| set.list.iter().position(|d| d.name == name);
        let one = |about: String, is_resonator: bool, name: String, moves: Moves, greatest_step: f64| {
            at(name).map(|index| Knob { about, is_resonator, moves: vec![(index, moves)], greatest_step })
        };
        let couplings =
            (1..=set.degree).filter_map(|k| one(format!("coupling {k}"), false, resonator(k, "gap"), Moves::Relative(-1.0), 0.2));
        let tunings = (1..=set.degree).filter_map(|k| {
            let whole_m = ["length", "arm length"].iter().filter_map(|what| set.value(&resonator(k, what)).ok()).sum();
            one(format!("resonator {k}"), true, resonator(k, "arm length"), Moves::Absolute(whole_m), 0.03)
        });
        let spacings = (1..set.degree).filter_map(|k| {
            let quarter_m = set.value(&resonator(k, "length")).ok()?;
            one(format!("line {k}"), false, line_length(k), Moves::Absolute(quarter_m), 0.1)
        });
        couplings.chain(tunings).chain(spacings).collect()
    }
}

impl CoupledResonatorStop {
    fn resonator(
        &self,
        built: &AsBuilt,
        order: &Order,
        k: usize,
        [slope, coupling]: [f64; 2],
        center_hz: f64,
    ) -> Result<Vec<Dimension>, String> {
        if coupling >= 1.0 {
            return Err("more than all".into());
        }
        // The line beside its resonator keeps its impedance: Z0e Z0o = Z0^2.
        let ratio = ((1.0 + coupling) / (1.0 - coupling)).sqrt();
        let (even_ohm, odd_ohm) = (order.filter.ports_ohm[0] * ratio, order.filter.ports_ohm[0] / ratio);
        let (width_m, gap_m) = pair_for_impedances(built, even_ohm, odd_ohm, center_hz).map_err(|why| why.message)?;
        if gap_m < order.shop.gap_m {
            return Err(format!("a gap of {:.3} mm, the shop's narrowest is {:.3} mm", gap_m * 1e3, order.shop.gap_m * 1e3));
        }
        let (pair, strip) = (Pair::new(built, width_m, gap_m), Strip::new(built, width_m));
        let index = 0.5 * (pair.even_at(center_hz).eps_eff.sqrt() + pair.odd_at(center_hz).eps_eff.sqrt());
        let beside_m = ARM_RAD * C_M_PER_S / (2.0 * PI * center_hz * index);
        let cut_m = 2.0 * width_m * optimum_cut(&strip);
        let corner = bend(&strip, line::Corner::Mitred(line::Mitre::Cut(0.5 * cut_m / width_m)));
        let beta = strip.at(center_hz).beta_rad_per_m(center_hz);
        let end_m = open_end::extension_m(&strip);
        let targets = [("x/Z0", slope), ("coupling", coupling), ("Z0e ohm", even_ohm), ("Z0o ohm", odd_ohm)];
        let mut arm =
            Dimension::guess(resonator(k, "arm length"), (PI - ARM_RAD) / beta, &[("electrical length deg", 180.0 - ARM_RAD.to_degrees())]);
        arm.correct("open ends", -2.0 * end_m);
        arm.correct("corner", -corner.delay_length_m(&strip) - 2.0 * (cut_m - width_m).max(0.0));
        Ok(vec![
            Dimension::guess(resonator(k, "width"), width_m, &targets),
            Dimension::guess(resonator(k, "gap"), gap_m, &targets),
            Dimension::guess(resonator(k, "length"), beside_m, &[("electrical length deg", ARM_RAD.to_degrees())]),
            arm,
            Dimension::guess(resonator(k, "cut"), cut_m, &[]),
        ])
    }
}

/// What the runs of the main line beside resonator k take out of the line to the next one; the next has about the same gap.
fn cleared_m(list: &[Dimension], k: usize) -> f64 {
    let value = |what: &str| list.iter().find(|d| d.name == resonator(k, what)).map_or(Nm::ZERO, |d| Nm::from_m(d.value_m));
    clear_of(value("width"), value("gap"), Corner::Mitred { cut: value("cut") }).iter().map(|run| run.m()).sum()
}

/// Centre and relative width of an order this family can serve at a degree.
fn possible(order: &Order, degree: usize) -> Result<(f64, f64), Vec<Problem>> {
    let refuse = |code: &'static str, key: &str, message: String, help: &str| {
        Err(vec![Problem::error(code, Place::Key(format!("filter.{key}")), message, help)])
    };
    let Band::BandStop { from_hz, to_hz } = order.filter.band else {
        return refuse("band-not-of-the-family", "stopband", "these filters stop a band".into(), "give stopband = [from, to]");
    };
    let fraction = 2.0 * (to_hz - from_hz) / (from_hz + to_hz);
    if order.filter.ports_ohm[0] != order.filter.ports_ohm[1] {
        let [one, other] = order.filter.ports_ohm;
        let message = format!("one main line runs from port to port, but these are of {one} and {other} ohm");
        return refuse("ports-unlike", "ports", message, "give both ports the same impedance, port = \"50 ohm\"");
    }
    if fraction > WIDEST {
        let message =
            format!("the stopband is {:.1} % wide; resonators beside a line stop up to {:.0} %", 100.0 * fraction, 100.0 * WIDEST);
        return refuse("band-too-wide", "stopband", message, "family = \"open-stub-stop\" stops wide bands");
    }
    if degree.is_multiple_of(2) && matches!(order.filter.response, ResponseShape::EqualRipple { .. }) {
        let message =
            format!("equal ripple of degree {degree} reflects far from the stopband, which a plain line between equal ports does not");
        return refuse("even-degree-between-equal-ports", "degree", message, "take an odd degree, or response = \"maximally-flat\"");
    }
    Ok((0.5 * (from_hz + to_hz), fraction))
}
