//! Edge-coupled half-wave resonators: each pair of neighbours side by side over a quarter wave, in a stepped stagger.
//!
//! # Source
//! Cohn, "Parallel-coupled transmission-line-resonator filters", IRE Trans. MTT-6, 1958, pp. 223-231: admittance inverters from the
//! prototype, even and odd impedance of each section from its inverter.
//!
//! # Valid range
//! The closed form is a narrow-band one (errors of the band edges of a few percent of the bandwidth at 20 %); refinement takes the rest.
//! The second passband lies near twice the centre, because even and odd waves travel at different speeds, and the third near three times.

use super::Family;
use super::Knob;
use super::Moves;
use super::Structure;
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
use crate::layout::Draft;
use crate::layout::Layout;
use crate::layout::Part;
use crate::line::AsBuilt;
use crate::line::C_M_PER_S;
use crate::line::Pair;
use crate::line::Strip;
use crate::line::open_end;
use crate::line::pair_for_impedances;
use crate::order::Band;
use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::Passes;
use crate::prototype::ladder;

/// The edge-coupled family.
pub struct EdgeCoupled;

/// Relative step of an inverter value over which width and gap are followed to learn how a coupling knob moves them.
const COUPLING_STEP: f64 = 0.02;

static KEYS: &[Key] = &[
    Key {
        name: "resonator-impedance",
        about: "impedance level of the resonators; higher makes narrower lines and wider gaps at the ends",
        kind: OwnKind::Quantity(Dimensionality::Impedance),
        default: Some("50 ohm"),
    },
    Key {
        name: "feed-length",
        about: "straight feed between launch and first section",
        kind: OwnKind::Quantity(Dimensionality::Length),
        default: Some("4 mm"),
    },
];

impl Structure for EdgeCoupled {
    fn name(&self) -> &'static str {
        "edge-coupled"
    }

    fn about(&self) -> &'static str {
        "band-pass, half-wave resonators side by side over a quarter wave; 3 to 20 % wide, no vias"
    }

    fn keys(&self) -> &'static [Key] {
        KEYS
    }

    fn names(&self, order: &Order, degree: usize) -> Vec<String> {
        let sections = (1..=degree + 1).flat_map(|k| ["width", "gap", "length"].map(|what| section(k, what)));
        sections.chain(feeds::names(order)).collect()
    }

    fn layout(&self, set: &Dimensions) -> Result<Layout, Vec<Problem>> {
        let value = |name: String| set.value(&name).map(Nm::from_m);
        let mut draft = Draft::default();
        let sections = (1..=set.degree + 1)
            .map(|k| Ok([value(section(k, "width"))?, value(section(k, "gap"))?, value(section(k, "length"))?]))
            .collect::<Result<Vec<_>, Problem>>()
            .map_err(|problem| vec![problem])?;
        let feed = |port| feeds::read(set, port).map_err(|problem| vec![problem]);
        let (first_feed, last_feed) = (feed(1)?, feed(2)?);
        let Some(first) = sections.first() else { return Err(Vec::new()) };

        // The feed's upper edge, which faces the first gap, is in line with the first strip's.
        let mut x = Nm::ZERO;
        let mut low = first_feed.width - first[0];
        let start = mouth(&mut draft, x, (Nm::ZERO, first_feed.width), false);
        draft.launch(1, start, first_feed.launch, feeds::launch_names(&set.order, 1));
        x = x + first_feed.length;
        let mut arriving = mouth(&mut draft, x, (Nm::ZERO, first_feed.width), true);
        draft.place(
            Part::Lines { widths: vec![first_feed.width], gaps: vec![], length: first_feed.length },
            vec![start, arriving],
            feeds::line_names(1),
        );
        for (index, [width, gap, length]) in sections.iter().copied().enumerate() {
            let k = index + 1;
            let (lower, upper) = ((low, low + width), (low + width + gap, low + width + gap + width));
            let near = joined(&mut draft, arriving, x, lower);
            let far_x = x + length;
            let open_near = mouth(&mut draft, x, upper, false);
            let open_far = mouth(&mut draft, far_x, lower, true);
            let leaving = mouth(&mut draft, far_x, upper, true);
            draft.place(
                Part::Lines { widths: vec![width, width], gaps: vec![gap], length },
                vec![near, open_near, open_far, leaving],
                ["width", "gap", "length"].map(|what| section(k, what)).to_vec(),
            );
            draft.open(open_near);
            draft.open(open_far);
            // Through a step the next strip keeps in line the edge whose neighbour would otherwise be touched: a wider one grows
            // away from the open end below it, a narrower one leaves the upper edge where the next open end faces it.
            let next = sections.get(k).map_or(last_feed.width, |next| next[0]);
            low = if k == sections.len() || width <= next { upper.0 } else { upper.1 - next };
            (x, arriving) = (far_x, leaving);
        }
        let near = joined(&mut draft, arriving, x, (low, low + last_feed.width));
        let end = mouth(&mut draft, x + last_feed.length, (low, low + last_feed.width), true);
        draft.place(
            Part::Lines { widths: vec![last_feed.width], gaps: vec![], length: last_feed.length },
            vec![near, end],
            feeds::line_names(2),
        );
        draft.launch(2, end, last_feed.launch, feeds::launch_names(&set.order, 2));

        let mut layout = draft.finish([start, end], set.degree + 2);
        if set.order.board.level {
            let (from, to) = (layout.nodes[start].middle(), layout.nodes[end].middle());
            layout.turn_deg = -(to.y - from.y).m().atan2((to.x - from.x).m()).to_degrees();
        }
        Ok(layout)
    }
}

impl Family for EdgeCoupled {
    fn passes(&self) -> Passes {
        Passes::Band
    }

    fn starter(&self) -> &'static str {
        include_str!("../../templates/orders/edge-coupled.toml")
    }

    fn degrees(&self) -> (usize, usize) {
        (1, 12)
    }

    fn first_guess(&self, order: &Order, degree: usize) -> Outcome<Dimensions> {
        let Band::BandPass { from_hz, to_hz } = order.filter.band else {
            return Err(vec![Problem::error(
                "band-not-of-the-family",
                Place::Key("filter.passband".into()),
                "edge-coupled filters pass a band",
                "give passband = [from, to]",
            )]);
        };
        let built = AsBuilt::nominal(order).without_loss();
        let (center_hz, fraction) = (0.5 * (from_hz + to_hz), 2.0 * (to_hz - from_hz) / (from_hz + to_hz));
        let g = ladder(order.filter.response, degree);
        let resonator_ohm = own::number(order, KEYS, "resonator-impedance");
        let mut list = Vec::new();
        let mut problems = Vec::new();
        for k in 1..=degree + 1 {
            let inverter = inverter(&g, k, fraction, resonator_ohm, order.filter.ports_ohm);
            let (even_ohm, odd_ohm) = impedances(inverter, resonator_ohm);
            match pair_for_impedances(&built, even_ohm, odd_ohm, center_hz) {
                Ok((width_m, gap_m)) => {
                    list.extend(section_guess(&built, k, [inverter, even_ohm, odd_ohm], [width_m, gap_m], center_hz));
                }
                Err(unreachable) => problems.push(Problem::error(
                    "coupling-out-of-reach",
                    Place::Key("filter.passband".into()),
                    format!("section {k} wants Z0e {even_ohm:.2} ohm and Z0o {odd_ohm:.2} ohm: {}", unreachable.message),
                    mending(inverter),
                )),
            }
        }
        match feeds::guess(order, &built, own::number(order, KEYS, "feed-length"), center_hz) {
            Ok(ports) => list.extend(ports),
            Err(found) => problems.extend(found),
        }
        if problems.is_empty() { Ok((Dimensions { order: order.clone(), degree, list }, problems)) } else { Err(problems) }
    }

    fn knobs(&self, set: &Dimensions) -> Vec<Knob> {
        let sections = set.degree + 1;
        let symmetric = set.order.filter.ports_ohm[0] == set.order.filter.ports_ohm[1]
            && (1..=sections).all(|k| {
                ["width", "gap", "length"].iter().all(|what| set.value(&section(k, what)) == set.value(&section(sections + 1 - k, what)))
            });
        let built = AsBuilt::nominal(&set.order).without_loss();
        let at = |k: usize, what: &str| set.list.iter().position(|d| d.name == section(k, what));
        let mirrored = |k: usize, count: usize| if symmetric && 2 * k != count + 1 { vec![k, count + 1 - k] } else { vec![k] };
        let distinct = |count: usize| if symmetric { count.div_ceil(2) } else { count };
        let mut knobs = Vec::new();
        for k in 1..=distinct(sections) {
            let (width_rate, gap_rate) = coupling_rates(set, &built, k);
            let moves = mirrored(k, sections).into_iter().flat_map(|k| [(at(k, "width"), width_rate), (at(k, "gap"), gap_rate)]);
            let moves = moves.filter_map(|(index, rate)| index.map(|i| (i, Moves::Relative(rate)))).collect();
            knobs.push(Knob { about: format!("coupling {k}"), is_resonator: false, moves, greatest_step: 0.2 });
        }
        for j in 1..=distinct(set.degree) {
            // A section between two resonators is moved half by each, an end section by its only one.
            let share = |k: usize| if k == 1 || k == sections { 1.0 } else { 0.5 };
            let halves =
                mirrored(j, set.degree).into_iter().flat_map(|j| [(at(j, "length"), share(j)), (at(j + 1, "length"), share(j + 1))]);
            let moves = halves.filter_map(|(index, share)| index.map(|i| (i, Moves::Absolute(share * set.list[i].value_m)))).collect();
            knobs.push(Knob { about: format!("resonator {j}"), is_resonator: true, moves, greatest_step: 0.05 });
        }
        knobs
    }
}

fn section(k: usize, what: &str) -> String {
    format!("section {k} {what}")
}

/// J over the resonators' admittance of inverter k (1 to n+1), Cohn 1958; a port is seen through the quarter wave of the resonator's
/// impedance that belongs to its section, which turns `Zport` into `Zr^2/Zport`.
fn inverter(g: &[f64], k: usize, fraction: f64, resonator_ohm: f64, ports_ohm: [f64; 2]) -> f64 {
    let (before, after) = (g[k - 1], g[k]);
    let end = (std::f64::consts::FRAC_PI_2 * fraction / (before * after)).sqrt();
    // For even equal ripple g(n+1) is not 1: the last inverter absorbs it, so both ports keep the impedance ordered.
    match k {
        1 => end * (ports_ohm[0] / resonator_ohm).sqrt(),
        k if k + 1 == g.len() => end * (ports_ohm[1] / resonator_ohm).sqrt(),
        _ => std::f64::consts::FRAC_PI_2 * fraction / (before * after).sqrt(),
    }
}

fn impedances(inverter: f64, resonator_ohm: f64) -> (f64, f64) {
    (resonator_ohm * (1.0 + inverter + inverter * inverter), resonator_ohm * (1.0 - inverter + inverter * inverter))
}

fn section_guess(
    built: &AsBuilt,
    k: usize,
    [inverter, even_ohm, odd_ohm]: [f64; 3],
    [width_m, gap_m]: [f64; 2],
    center_hz: f64,
) -> [Dimension; 3] {
    let pair = Pair::new(built, width_m, gap_m);
    // A quarter wave of the mean of the two indices: the section's image phase passes 90 degrees there to first order in their difference.
    let index = 0.5 * (pair.even_at(center_hz).eps_eff.sqrt() + pair.odd_at(center_hz).eps_eff.sqrt());
    let quarter_m = C_M_PER_S / (4.0 * center_hz * index);
    let end_m = open_end::extension_m(&Strip::new(built, width_m));
    let mut length = Dimension::guess(section(k, "length"), quarter_m, &[("electrical length deg", 90.0)]);
    length.correct("open end", -end_m);
    let targets = [("J/Y", inverter), ("Z0e ohm", even_ohm), ("Z0o ohm", odd_ohm)];
    [Dimension::guess(section(k, "width"), width_m, &targets), Dimension::guess(section(k, "gap"), gap_m, &targets), length]
}

/// How width and gap of section k follow its inverter value, relative over relative.
fn coupling_rates(set: &Dimensions, built: &AsBuilt, k: usize) -> (f64, f64) {
    const GAP_ONLY: (f64, f64) = (0.0, -1.0);
    let Band::BandPass { from_hz, to_hz } = set.order.filter.band else { return GAP_ONLY };
    let target = set.list.iter().find(|d| d.name == section(k, "gap")).and_then(|d| d.serves.iter().find(|(what, _)| what == "J/Y"));
    let Some((_, inverter)) = target else { return GAP_ONLY };
    let resonator_ohm = own::number(&set.order, KEYS, "resonator-impedance");
    let at = |scale: f64| {
        let (even_ohm, odd_ohm) = impedances(inverter * scale, resonator_ohm);
        pair_for_impedances(built, even_ohm, odd_ohm, 0.5 * (from_hz + to_hz)).ok()
    };
    match (at(1.0 - COUPLING_STEP), at(1.0 + COUPLING_STEP)) {
        (Some(weaker), Some(stronger)) => {
            let span = ((1.0 + COUPLING_STEP) / (1.0 - COUPLING_STEP)).ln();
            ((stronger.0 / weaker.0).ln() / span, (stronger.1 / weaker.1).ln() / span)
        }
        _ => GAP_ONLY,
    }
}

fn mending(inverter: f64) -> String {
    if inverter > 0.2 {
        "make the band narrower, the laminate thicker or of lower permittivity, raise filter.resonator-impedance, or tap the input (another family)".into()
    } else {
        "make the band wider, the laminate thinner or of higher permittivity, or choose a family for narrow bands".into()
    }
}

/// A mouth at `x` from `low` to `high`, looking right or left out of the part that ends there.
fn mouth(draft: &mut Draft, x: Nm, (low, high): (Nm, Nm), looks_right: bool) -> usize {
    let (low, high) = (Point { x, y: low }, Point { x, y: high });
    if looks_right { draft.between(high, low) } else { draft.between(low, high) }
}

/// The node at which a strip from `low` to `high` goes on from `arriving`: the same one, or a new one behind a step.
fn joined(draft: &mut Draft, arriving: usize, x: Nm, (low, high): (Nm, Nm)) -> usize {
    let node = draft.node(arriving);
    if (node.left.y, node.right.y) == (high, low) {
        return arriving;
    }
    let next = mouth(draft, x, (low, high), false);
    draft.place(Part::Step, vec![arriving, next], vec![]);
    next
}
