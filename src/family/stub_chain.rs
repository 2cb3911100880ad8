//! What families of stubs along a line share: names, first guesses with their corrections, knobs and the drawing.

use std::f64::consts::PI;

use super::Knob;
use super::Moves;
use super::feeds;
use super::grounds;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::dimensions::Dimension;
use crate::dimensions::Dimensions;
use crate::layout::Draft;
use crate::layout::Layout;
use crate::layout::Part;
use crate::layout::Way;
use crate::line::AsBuilt;
use crate::line::C_M_PER_S;
use crate::line::Strip;
use crate::line::ViaHoles;
use crate::line::open_end;
use crate::line::tee;
use crate::line::via;
use crate::line::width_for_impedance;
use crate::order::Order;

/// Holes side by side at a stub's end, at most: further ones hardly lower the inductance.
const MOST_HOLES: usize = 4;

/// How a stub ends.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum End {
    /// Open.
    Open,
    /// On ground.
    Ground,
}

/// Where the stubs leave.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sides {
    /// Up, down, up and so on.
    Alternating,
    /// All up.
    One,
    /// Each up and down: two strips of twice the impedance.
    Both,
}

impl Sides {
    /// From the word of an order.
    pub fn of(word: &str) -> Sides {
        match word {
            "one" => Sides::One,
            "both" => Sides::Both,
            _ => Sides::Alternating,
        }
    }
}

/// A line with stubs across it; the outer stubs stand at the feeds' ends.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct StubChain {
    /// How many.
    pub stubs: usize,
    /// How each ends.
    pub end: End,
    /// Where they leave.
    pub sides: Sides,
}

/// The strips of one kind: their dimensions' names, how many, what they are called, whether their widths are knobs.
type Kind = (fn(usize, &str) -> String, usize, &'static str, bool);

/// Impedance (ohm) of a strip and its length (rad) at the frequency of the guess.
pub type Wanted = (f64, f64);

pub fn line(k: usize, what: &str) -> String {
    format!("line {k} {what}")
}

pub fn stub(k: usize, what: &str) -> String {
    format!("stub {k} {what}")
}

impl StubChain {
    /// Sections of the line.
    pub fn lines(&self) -> usize {
        self.stubs.saturating_sub(1)
    }

    /// Names of its dimensions, in drawing order.
    pub fn names(&self, order: &Order) -> Vec<String> {
        let pair = |name: fn(usize, &str) -> String, k: usize| ["width", "length"].map(|what| name(k, what));
        let lines = (1..=self.lines()).flat_map(|k| pair(line, k));
        let stubs = (1..=self.stubs).flat_map(|k| pair(stub, k));
        lines.chain(stubs).chain(feeds::names(order)).collect()
    }

    /// First guess: the widths from the impedances, the lengths with what tees, open ends and vias add or take.
    ///
    /// # Errors
    /// `impedance-out-of-reach` and `line-below-shop-limit`.
    pub fn guess(
        &self,
        order: &Order,
        at_hz: f64,
        feed_m: f64,
        lines: &[Wanted],
        stubs: &[Wanted],
    ) -> Result<Vec<Dimension>, Vec<Problem>> {
        let built = AsBuilt::nominal(order).without_loss();
        let mut problems = Vec::new();
        let mut sized = |name: fn(usize, &str) -> String, wanted: &[Wanted]| -> Vec<Sized> {
            let each = wanted.iter().enumerate().filter_map(|(index, (ohm, theta))| {
                sized_strip(order, &built, at_hz, &name(index + 1, ""), *ohm, *theta).map_err(|problem| problems.push(problem)).ok()
            });
            each.collect()
        };
        // A stub on both sides is two strips side by side.
        let share = if self.sides == Sides::Both { 2.0 } else { 1.0 };
        let stubs: Vec<Wanted> = stubs.iter().map(|(ohm, theta)| (share * ohm, *theta)).collect();
        let (lines, stubs) = (sized(line, lines), sized(stub, &stubs));
        let ports = feeds::guess(order, &built, feed_m, at_hz).map_err(|found| problems.extend(found)).unwrap_or_default();
        if !problems.is_empty() {
            return Err(problems);
        }
        let feed = |port: usize| ports.iter().find(|d| d.name == format!("feed {port} width")).map(|d| Strip::new(&built, d.value_m));
        let (Some(first), Some(last)) = (feed(1), feed(2)) else { return Err(problems) };
        let before = |k: usize| k.checked_sub(1).and_then(|i| lines.get(i));
        let mut along: Vec<Dimension> = Vec::new();
        let mut tees = Vec::new();
        for (k, stub) in stubs.iter().enumerate() {
            let arm = |section: Option<&Sized>, feed: &Strip| section.map_or_else(|| feed.clone(), |s| s.strip.clone());
            tees.push(tee(&arm(before(k), &first), &arm(lines.get(k), &last), &stub.strip).at(at_hz));
        }
        for (i, section) in lines.iter().enumerate() {
            let [width, mut length] = section.dimensions(line, i + 1);
            let (left, right) = (tees.get(i), tees.get(i + 1));
            length.correct("tees", left.map_or(0.0, |t| t.shift_2_m) + right.map_or(0.0, |t| t.shift_1_m));
            along.extend([width, length]);
        }
        for (k, section) in stubs.iter().enumerate() {
            let [width, mut length] = section.dimensions(stub, k + 1);
            length.correct("tee", tees[k].shift_side_m);
            section.end(self.end, order, &built, at_hz, &mut length);
            along.extend([width, length]);
        }
        along.extend(ports);
        Ok(along)
    }

    /// One knob for each length, and for each width where `widths` says so; symmetric partners together.
    pub fn knobs(&self, set: &Dimensions, line_widths: bool, stub_widths: bool) -> Vec<Knob> {
        let at = |name: &str| set.list.iter().position(|d| d.name == name);
        let value = |name: &str| set.value(name).ok();
        let kinds: [Kind; 2] = [(stub, self.stubs, "stub", stub_widths), (line, self.lines(), "line", line_widths)];
        let mirrored = |(name, count, ..): &Kind| {
            (1..=*count).all(|k| ["width", "length"].iter().all(|what| value(&name(k, what)) == value(&name(count + 1 - k, what))))
        };
        let symmetric = set.order.filter.ports_ohm[0] == set.order.filter.ports_ohm[1] && kinds.iter().all(mirrored);
        let mut knobs = Vec::new();
        for (name, count, word, widths) in kinds {
            let distinct = if symmetric { count.div_ceil(2) } else { count };
            for k in 1..=distinct {
                let partners: Vec<usize> = if symmetric && 2 * k != count + 1 { vec![k, count + 1 - k] } else { vec![k] };
                let mut push = |what: &str, moves: &dyn Fn(f64) -> Moves, is_resonator: bool| {
                    let all = partners.iter().filter_map(|p| at(&name(*p, what))).map(|i| (i, moves(set.list[i].value_m))).collect();
                    knobs.push(Knob { about: format!("{word} {k} {what}"), is_resonator, moves: all, greatest_step: 0.1 });
                };
                push("length", &Moves::Absolute, true);
                if widths {
                    push("width", &|_| Moves::Relative(1.0), false);
                }
            }
        }
        knobs
    }

    /// The drawing: along x from port 1 to port 2, stubs along y.
    ///
    /// # Errors
    /// `dimension-missing`; `stubs-too-near` and `stub-too-short` when the copper would touch itself.
    pub fn layout(&self, set: &Dimensions) -> Result<Layout, Vec<Problem>> {
        let one = |problem: Problem| vec![problem];
        let value = |name: String| set.value(&name).map(Nm::from_m).map_err(one);
        let mut draft = Draft::default();
        let (start, mut at) = feeds::begin(&mut draft, set, Point { x: Nm::ZERO, y: Nm::ZERO }).map_err(one)?;
        let end_width = value("feed 2 width".into())?;
        let mut next = 1;
        let names = |name: fn(usize, &str) -> String, k: usize| ["width", "length"].map(|what| name(k, what)).to_vec();
        let mut drawn: Vec<(Way, [Nm; 2], usize)> = Vec::new();
        for k in 1..=self.stubs {
            let on_width = if next <= self.lines() { value(line(next, "width"))? } else { end_width };
            let width = value(stub(k, "width"))?;
            let ways: &[Way] = match self.sides {
                Sides::Both => &[Way::Up, Way::Down],
                Sides::Alternating if k.is_multiple_of(2) => &[Way::Down],
                Sides::Alternating | Sides::One => &[Way::Up],
            };
            let (through, axis) = (draft.node(at).width().max(on_width), draft.node(at).middle());
            let (on, out) = match ways {
                [way] => {
                    let (on, out) = draft.tee(at, on_width, width, Way::Right, *way);
                    (on, vec![out])
                }
                _ => {
                    let (on, out) = draft.cross(at, on_width, [width; 2], Way::Right);
                    (on, out.to_vec())
                }
            };
            let mut widest = width;
            let length = value(stub(k, "length"))?;
            if length.0 <= through.0 / 2 + through.0 / 20 {
                return Err(vec![Problem::error(
                    "stub-too-short",
                    Place::Dimension(stub(k, "length")),
                    format!("stub {k} is {:.3} mm long from the line's axis, and the line is {:.3} mm wide", length.mm(), through.mm()),
                    "take a thinner laminate, a higher impedance of the line or a lower frequency",
                )]);
            }
            for (way, out) in ways.iter().zip(out) {
                let end = draft.strip(out, length, *way, names(stub, k));
                match self.end {
                    End::Open => draft.open(end),
                    End::Ground => {
                        let via = grounds::via(&set.order, width, MOST_HOLES);
                        if let Part::Via { pad, count, pitch, .. } = &via {
                            widest = widest.max(*pad + Nm(pitch.0 * (*count as i64 - 1)));
                        }
                        draft.ground(end, via);
                    }
                }
            }
            for way in ways {
                let half = Nm(widest.0 / 2);
                let reach = [axis.x - half, axis.x + half];
                let neighbour = drawn.iter().rev().find(|(side, ..)| side == way);
                if let Some((_, before, other)) = neighbour
                    && reach[0] - before[1] < Nm::from_m(set.order.shop.gap_m)
                {
                    return Err(vec![too_near(*other, k, reach[0] - before[1], &set.order)]);
                }
                drawn.push((*way, reach, k));
            }
            at = on;
            if next <= self.lines() {
                at = draft.strip(at, value(line(next, "length"))?, Way::Right, names(line, next));
                next += 1;
            }
        }
        let end = feeds::end(&mut draft, set, at).map_err(one)?;
        Ok(draft.finish([start, end], 1))
    }
}

fn too_near(one: usize, other: usize, gap: Nm, order: &Order) -> Problem {
    Problem::error(
        "stubs-too-near",
        Place::Dimension(stub(other, "width")),
        format!(
            "stubs {one} and {other} leave on the same side with {:.3} mm between them; the shop's narrowest gap is {:.3} mm",
            gap.mm(),
            order.shop.gap_m * 1e3
        ),
        "let the stubs alternate (filter.stubs = \"alternating\"), or take a thinner laminate: strips become narrower in proportion",
    )
}

/// A strip of the guess.
struct Sized {
    strip: Strip,
    ohm: f64,
    theta: f64,
    /// Length over phase, metres per radian.
    per_rad_m: f64,
}

impl Sized {
    fn dimensions(&self, name: fn(usize, &str) -> String, k: usize) -> [Dimension; 2] {
        [
            Dimension::guess(name(k, "width"), self.strip.width_m(), &[("Z0 ohm", self.ohm)]),
            Dimension::guess(name(k, "length"), self.theta * self.per_rad_m, &[("electrical length deg", self.theta.to_degrees())]),
        ]
    }

    fn end(&self, end: End, order: &Order, built: &AsBuilt, at_hz: f64, length: &mut Dimension) {
        match end {
            End::Open => length.correct("open end", -open_end::extension_m(&self.strip)),
            End::Ground => {
                if let Part::Via { diameter, count, pitch, .. } = grounds::via(order, Nm::from_m(self.strip.width_m()), MOST_HOLES) {
                    let holes = ViaHoles::row(diameter.m() + 2.0 * built.hole_plating_m, built.hole_plating_m, count, pitch.m());
                    let reactance_ohm = 2.0 * PI * at_hz * via(built, &holes).inductance_h;
                    length.correct("via", -(reactance_ohm / self.ohm).atan() * self.per_rad_m);
                }
            }
        }
    }
}

fn sized_strip(order: &Order, built: &AsBuilt, at_hz: f64, name: &str, ohm: f64, theta: f64) -> Result<Sized, Problem> {
    let name = name.trim();
    let width_m = width_for_impedance(built, ohm, at_hz).map_err(|unreachable| {
        Problem::error("impedance-out-of-reach", Place::Key("filter".into()), format!("{name}: {}", unreachable.message), unreachable.help)
    })?;
    if width_m < order.shop.line_m {
        let narrowest_ohm = Strip::new(built, order.shop.line_m).at(at_hz).z0_ohm;
        return Err(Problem::error(
            "line-below-shop-limit",
            Place::Key("shop.line".into()),
            format!(
                "{name} wants {ohm:.1} ohm, a strip of {:.3} mm; the shop's narrowest line, {:.3} mm, has {narrowest_ohm:.1} ohm",
                width_m * 1e3,
                order.shop.line_m * 1e3
            ),
            "take a finer shop class, a thicker laminate or one of lower permittivity, or a wider band",
        ));
    }
    let strip = Strip::new(built, width_m);
    let mode = strip.at(at_hz);
    let per_rad_m = C_M_PER_S / (2.0 * PI * at_hz * mode.eps_eff.sqrt());
    Ok(Sized { strip, ohm, theta, per_rad_m })
}

/// The refusal of an order whose band is not of the family's kind: reading an order has sorted these out before.
pub fn wrong_band(family: &str, due: &str) -> Vec<Problem> {
    vec![Problem::error(
        "band-not-of-the-family",
        Place::Key("filter.family".into()),
        format!("{family} does not make the ordered kind of band"),
        format!("give {due}, or choose another family"),
    )]
}

/// The refusal of unlike ports.
///
/// # Errors
/// `ports-unlike`.
pub fn like_ports(order: &Order, family: &str) -> Result<(), Vec<Problem>> {
    let [one, two] = order.filter.ports_ohm;
    if one == two {
        return Ok(());
    }
    Err(vec![Problem::error(
        "ports-unlike",
        Place::Key("filter.ports".into()),
        format!("{family} is drawn between equal ports here; ordered are {one} ohm and {two} ohm"),
        "order equal ports, or a band-pass by coupled resonators (edge-coupled), which transforms impedances",
    )])
}

/// The refusal of even degrees, which equal ports do not allow with equal ripple and for which a chain of stubs has no middle.
///
/// # Errors
/// `degree-even`.
pub fn odd_degree(degree: usize, family: &str) -> Result<(), Vec<Problem>> {
    if !degree.is_multiple_of(2) {
        return Ok(());
    }
    Err(vec![Problem::error(
        "degree-even",
        Place::Key("filter.degree".into()),
        format!(
            "degree {degree} is even: a low-pass of even degree with equal ripple does not exist between equal ports, and {family} is drawn symmetric"
        ),
        format!("write degree = {} or {}", degree.saturating_sub(1).max(3), degree + 1),
    )])
}
