//! A layout's parts as scattering blocks on as-built lines: the network that predicts the response.

use std::rc::Rc;

use num_complex::Complex64;

use super::block::Block;
use super::block::INNER_OHM;
use super::block::gap_s;
use super::block::ground_s;
use super::block::junction_s;
use super::block::ladder_s;
use super::block::line_s;
use super::coupled::array_s;
use super::curve::Curves;
use super::join::JoinPlan;
use super::join::Scratch;
use super::response::Method;
use super::response::Response;
use crate::base::Nm;
use crate::base::Place;
use crate::base::Problem;
use crate::layout::Corner;
use crate::layout::Layout;
use crate::layout::Part;
use crate::line;
use crate::line::Array;
use crate::line::ArrayModes;
use crate::line::Book;
use crate::line::Coplanar;
use crate::line::Cross;
use crate::line::Models;
use crate::line::Pair;
use crate::line::Strip;
use crate::line::Tee;
use crate::line::ViaHoles;

use crate::line::cross;
use crate::line::gap::unequal_gap;
use crate::line::open_end;
use crate::line::step;
use crate::line::tee;
use crate::line::via;
use crate::order::LaunchShape;

/// Straight pieces that stand for a taper; more changes |S11| by less than 1e-4 on the launches of the embedded classes.
const TAPER_PIECES: usize = 6;
/// With fewer frequencies than this the constants are computed at each of them instead of being interpolated.
const INTERPOLATE_FROM: usize = 48;

/// Constants of one strip at one frequency: index, impedance, attenuation, conductance and extension of its open end.
type StripConstants = [f64; 5];
/// Constants of a pair: even index, impedance, attenuation, then odd.
type PairConstants = [f64; 6];

/// All constants at the frequency that is being computed.
struct Now {
    strips: Vec<StripConstants>,
    pairs: Vec<PairConstants>,
    /// Reflection of each strip's open end.
    ends: Vec<Complex64>,
    arrays: Vec<ArrayModes>,
    junctions: Vec<JunctionAt>,
}

/// Where arms meet.
enum Junction {
    Tee(Box<Tee>),
    Cross(Box<Cross>),
}

/// A junction at a frequency: what each arm takes out of its strip's length, its transformer, the susceptance where they meet.
struct JunctionAt {
    arms: usize,
    shifts_m: [f64; 4],
    turns: [f64; 4],
    shunt_s: f64,
}

impl Junction {
    /// Arms in the order of the part's nodes.
    fn at(&self, f_hz: f64) -> JunctionAt {
        match self {
            Junction::Tee(tee) => {
                let at = tee.at(f_hz);
                JunctionAt {
                    arms: 3,
                    shifts_m: [at.shift_1_m, at.shift_2_m, at.shift_side_m, 0.0],
                    turns: [at.turns_1, at.turns_2, 1.0, 1.0],
                    shunt_s: at.shunt_s,
                }
            }
            Junction::Cross(cross) => {
                let at = cross.at(f_hz);
                let [one, side, two, other] = at.shifts_m;
                JunctionAt { arms: 4, shifts_m: [one, two, side, other], turns: [1.0; 4], shunt_s: at.shunt_s }
            }
        }
    }

    fn problems(&self, up_to_hz: f64) -> Vec<Problem> {
        match self {
            Junction::Tee(tee) => tee.problems(up_to_hz),
            Junction::Cross(cross) => cross.problems(up_to_hz),
        }
    }
}

/// The circuit of a layout, ready to be evaluated at any frequency.
pub struct Circuit {
    plan: JoinPlan,
    blocks: Vec<Block>,
    strips: Vec<(Nm, Rc<Strip>)>,
    pairs: Vec<((Nm, Nm), Rc<Pair>)>,
    arrays: Vec<(Vec<Nm>, Vec<Nm>, Rc<Array>)>,
    junctions: Vec<Junction>,
    /// Warnings of models whose range does not depend on frequency.
    range: Vec<Problem>,
    coplanar: Vec<Coplanar>,
    ports_ohm: [f64; 2],
    lossless: bool,
}

/// Whether the launches belong to the response.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Planes {
    /// Reference planes where launch meets feed; launches left out.
    Feed,
    /// Reference planes at the board's edge; each launch is a two-port of its pad and taper.
    Edge,
}

impl Circuit {
    /// Plans the circuit of a layout on the lines of `book`.
    ///
    /// # Errors
    /// `layout-not-joined` when the parts do not form a two-port; `strips-not-modelled` for coupled strips that are not a symmetric pair.
    pub fn new(layout: &Layout, book: &Book, ports_ohm: [f64; 2], planes: Planes) -> Result<Circuit, Problem> {
        let mut circuit = Circuit {
            plan: JoinPlan::new(&[vec![0, 1]], &[0, 1]).ok_or_else(not_joined)?,
            blocks: Vec::new(),
            strips: Vec::new(),
            pairs: Vec::new(),
            arrays: Vec::new(),
            junctions: Vec::new(),
            range: Vec::new(),
            coplanar: Vec::new(),
            ports_ohm,
            lossless: book.built().lossless,
        };
        let mut joints = Joints { blocks: Vec::new(), nodes: Vec::new(), fresh: layout.nodes.len() };
        let mut external = layout.ports.clone();
        for placed in &layout.parts {
            match &placed.part {
                Part::Launch { port, shape, run } => {
                    if planes == Planes::Edge {
                        let mut end = placed.nodes[0];
                        for piece in circuit.launch(book, shape, *run, layout.nodes[end].width()) {
                            end = joints.onward(end, piece);
                        }
                        if let Some(place) = external.get_mut(port - 1) {
                            *place = end;
                        }
                    }
                }
                part => circuit.part(book, layout, part, &placed.nodes, &mut joints)?,
            }
        }
        for (place, z0_ohm) in external.iter_mut().zip(ports_ohm) {
            if z0_ohm != INNER_OHM {
                let outer = joints.node();
                joints.push(Block::Reference { gamma: (INNER_OHM - z0_ohm) / (INNER_OHM + z0_ohm) }, vec![outer, *place]);
                *place = outer;
            }
        }
        circuit.blocks = joints.blocks;
        circuit.plan = JoinPlan::new(&joints.nodes, &external).ok_or_else(not_joined)?;
        Ok(circuit)
    }

    /// The blocks of a part other than a launch.
    fn part(&mut self, book: &Book, layout: &Layout, part: &Part, nodes: &[usize], joints: &mut Joints) -> Result<(), Problem> {
        let width = |arm: usize| layout.nodes[nodes[arm]].width();
        let block = match part {
            Part::Lines { widths, length, .. } if widths.len() == 1 => {
                Block::Line { strip: self.strip(book, widths[0]), length_m: length.m() }
            }
            Part::Lines { widths, gaps, length } if widths.len() == 2 && widths[0] == widths[1] => {
                Block::Pair { pair: self.pair(book, widths[0], gaps[0]), length_m: length.m() }
            }
            Part::Lines { widths, gaps, length } => Block::Array { array: self.array(book, widths, gaps)?, length_m: length.m() },
            Part::OpenEnd => Block::OpenEnd { strip: self.strip(book, width(0)) },
            Part::Step => step_block(&book.strip(width(0)), &book.strip(width(1))),
            Part::Gap { width: across } => {
                let model = unequal_gap(&book.strip(width(0)), &book.strip(width(1)), across.m());
                let strips = [self.strip(book, width(0)), self.strip(book, width(1))];
                Block::Gap { strips, first_f: model.shunt_one_f, series_f: model.series_f, second_f: model.shunt_other_f }
            }
            Part::Bend(corner) => return self.bend(book, *corner, width(0), nodes, joints),
            Part::Tee => {
                let arms = [0, 1, 2].map(|arm| book.strip(width(arm)));
                return self.junction(book, layout, Junction::Tee(Box::new(tee(&arms[0], &arms[1], &arms[2]))), nodes, joints);
            }
            Part::Cross => {
                // Round the crossing: through, side, through, side.
                let arms = [0, 2, 1, 3].map(|arm| book.strip(width(arm)));
                return self.junction(
                    book,
                    layout,
                    Junction::Cross(Box::new(cross([&arms[0], &arms[1], &arms[2], &arms[3]]))),
                    nodes,
                    joints,
                );
            }
            Part::Via { diameter, count, pitch, .. } => {
                let plating_m = book.built().hole_plating_m;
                let holes = ViaHoles::row(diameter.m() + 2.0 * plating_m, plating_m, *count, pitch.m());
                Block::Ground { via: via(book.built(), &holes) }
            }
            Part::Launch { .. } => return Ok(()),
        };
        joints.push(block, nodes.to_vec());
        Ok(())
    }

    /// A corner: the model between its mouths, and what lies between these and the inner corner of a long cut; an arc is a line.
    fn bend(&mut self, book: &Book, corner: Corner, width: Nm, nodes: &[usize], joints: &mut Joints) -> Result<(), Problem> {
        let strip = self.strip(book, width);
        let shape = match corner {
            Corner::Rounded { radius } => {
                // The little that an arc's impedance differs from the straight strip's is left out; `problems` warns of tight arcs.
                let curve = line::rounded_bend(&book.strip(width), radius.m());
                self.range.extend(curve.problems());
                joints.push(Block::Line { strip, length_m: curve.length_m }, nodes.to_vec());
                return Ok(());
            }
            Corner::Square => line::Corner::Square,
            Corner::Mitred { cut } => line::Corner::Mitred(line::Mitre::Cut(cut.m() / (2.0 * width.m()))),
        };
        let model = line::bend(&book.strip(width), shape);
        self.range.extend(model.problems());
        let (mut near, mut far) = (nodes[0], nodes[1]);
        let shoulder = corner.shoulder(width);
        if shoulder > Nm::ZERO {
            near = joints.onward(near, Block::Line { strip, length_m: shoulder.m() });
            far = joints.onward(far, Block::Line { strip, length_m: shoulder.m() });
        }
        joints.push(Block::Ladder { first_h: model.series_h, shunt_f: model.shunt_f, second_h: model.series_h }, vec![near, far]);
        Ok(())
    }

    /// A tee or a cross: each arm's shift, and the point where they meet.
    fn junction(&mut self, book: &Book, layout: &Layout, model: Junction, nodes: &[usize], joints: &mut Joints) -> Result<(), Problem> {
        let junction = self.junctions.len();
        self.junctions.push(model);
        let inner = nodes
            .iter()
            .enumerate()
            .map(|(arm, node)| {
                let strip = self.strip(book, layout.nodes[*node].width());
                joints.onward(*node, Block::Arm { junction, arm, strip })
            })
            .collect();
        joints.push(Block::Junction { junction }, inner);
        Ok(())
    }

    fn array(&mut self, book: &Book, widths: &[Nm], gaps: &[Nm]) -> Result<usize, Problem> {
        if let Some(known) = self.arrays.iter().position(|(w, g, _)| w == widths && g == gaps) {
            return Ok(known);
        }
        let array = book.array(widths, gaps);
        self.arrays.push((widths.to_vec(), gaps.to_vec(), array));
        Ok(self.arrays.len() - 1)
    }

    fn strip(&mut self, book: &Book, width: Nm) -> usize {
        self.strips.iter().position(|(w, _)| *w == width).unwrap_or_else(|| {
            self.strips.push((width, book.strip(width)));
            self.strips.len() - 1
        })
    }

    fn pair(&mut self, book: &Book, width: Nm, gap: Nm) -> usize {
        self.pairs.iter().position(|(key, _)| *key == (width, gap)).unwrap_or_else(|| {
            self.pairs.push(((width, gap), book.pair(width, gap)));
            self.pairs.len() - 1
        })
    }

    /// The blocks of a launch from the feed's mouth outwards: the feed's run on, the taper, the pad.
    fn launch(&mut self, book: &Book, shape: &LaunchShape, run: Nm, feed: Nm) -> Vec<Block> {
        let mut pieces = Vec::new();
        if run > Nm::ZERO {
            pieces.push(Block::Line { strip: self.strip(book, feed), length_m: run.m() });
        }
        match *shape {
            LaunchShape::Open => {}
            LaunchShape::Pads { pad_length_m, pad_width_m } => {
                pieces.push(Block::Line { strip: self.strip(book, Nm::from_m(pad_width_m)), length_m: pad_length_m });
            }
            LaunchShape::EdgeCoax { pad_length_m, pad_width_m, taper_length_m, ground_gap_m, .. } => {
                for piece in 0..TAPER_PIECES {
                    let along = (piece as f64 + 0.5) / TAPER_PIECES as f64;
                    let width = Nm::from_m(feed.m() + (pad_width_m - feed.m()) * along);
                    pieces.push(Block::Line { strip: self.strip(book, width), length_m: taper_length_m / TAPER_PIECES as f64 });
                }
                self.coplanar.push(Coplanar::new(book.built(), pad_width_m, ground_gap_m));
                pieces.push(Block::Coplanar { line: self.coplanar.len() - 1, length_m: pad_length_m });
            }
        }
        pieces
    }

    /// Which models gave the constants of its strips and pairs.
    pub fn models(&self) -> Models {
        Models::of(self.strips.iter().map(|(_, strip)| &**strip), self.pairs.iter().map(|(_, pair)| &**pair))
            .with_arrays(self.arrays.iter().map(|(_, _, array)| &**array))
    }

    /// Warnings of the line models where the circuit leaves their ranges up to a frequency, one of each kind.
    pub fn problems(&self, up_to_hz: f64) -> Vec<Problem> {
        let lines =
            self.strips.iter().flat_map(|(_, s)| s.problems(up_to_hz)).chain(self.pairs.iter().flat_map(|(_, p)| p.problems(up_to_hz)));
        let arrays = self.arrays.iter().flat_map(|(_, _, array)| array.problems(up_to_hz));
        let junctions = self.junctions.iter().flat_map(|junction| junction.problems(up_to_hz));
        let vias = self.blocks.iter().flat_map(|block| if let Block::Ground { via } = block { via.problems() } else { Vec::new() });
        let all = lines.chain(arrays).chain(junctions).chain(vias).chain(self.range.iter().cloned());
        let mut kept: Vec<Problem> = Vec::new();
        for problem in all {
            // One size out of range in several strips is said once.
            let kind = |p: &Problem| (p.code, p.message.split(" is ").next().map(str::to_string));
            if !kept.iter().any(|k| kind(k) == kind(&problem)) {
                kept.push(problem);
            }
        }
        kept
    }

    /// S-parameters at the given frequencies (increasing, greater than zero).
    pub fn sweep(&self, f_hz: &[f64]) -> Response {
        let mut scratch = self.plan.scratch();
        let mut result = [Complex64::ZERO; 4];
        let mut s = Vec::with_capacity(f_hz.len());
        let mut now = Now {
            strips: vec![[0.0; 5]; self.strips.len()],
            pairs: vec![[0.0; 6]; self.pairs.len()],
            ends: vec![Complex64::ZERO; self.strips.len()],
            arrays: Vec::new(),
            junctions: Vec::new(),
        };
        let curves = match (f_hz.first(), f_hz.last()) {
            (Some(first), Some(last)) if f_hz.len() >= INTERPOLATE_FROM => Some(self.curves(*first, *last)),
            _ => None,
        };
        for f in f_hz {
            match &curves {
                Some((strip_curves, pair_curves)) => {
                    now.strips.iter_mut().zip(strip_curves).for_each(|(c, curve)| *c = curve.at(*f));
                    now.pairs.iter_mut().zip(pair_curves).for_each(|(c, curve)| *c = curve.at(*f));
                }
                None => {
                    now.strips.iter_mut().zip(&self.strips).for_each(|(c, (_, strip))| *c = strip_constants(strip, *f));
                    now.pairs.iter_mut().zip(&self.pairs).for_each(|(c, (_, pair))| *c = pair_constants(pair, *f));
                }
            }
            now.arrays = self.arrays.iter().map(|(_, _, array)| array.at(*f)).collect();
            now.junctions = self.junctions.iter().map(|junction| junction.at(*f)).collect();
            self.fill(*f, &mut now, &mut scratch);
            self.plan.run(&mut scratch, &mut result);
            s.push([result[0], result[2], result[1], result[3]]);
        }
        Response { method: Method::Network, z0_ohm: self.ports_ohm, f_hz: f_hz.to_vec(), s }
    }

    #[allow(clippy::type_complexity)]
    fn curves(&self, from_hz: f64, to_hz: f64) -> (Vec<Curves<5>>, Vec<Curves<6>>) {
        (
            self.strips.iter().map(|(_, strip)| Curves::fit(from_hz, to_hz, |f| strip_constants(strip, f))).collect(),
            self.pairs.iter().map(|(_, pair)| Curves::fit(from_hz, to_hz, |f| pair_constants(pair, f))).collect(),
        )
    }

    /// Writes the block matrices at one frequency into the first slots of the scratch.
    fn fill(&self, f_hz: f64, now: &mut Now, scratch: &mut Scratch) {
        let wave = std::f64::consts::TAU * f_hz / crate::line::C_M_PER_S;
        for (end, [index, z0_ohm, _, conductance_s, extension_m]) in now.ends.iter_mut().zip(&now.strips) {
            let y = Complex64::new(*conductance_s, (wave * index * extension_m).tan() / z0_ohm) * INNER_OHM;
            *end = (1.0 - y) / (1.0 + y);
        }
        for (block, out) in self.blocks.iter().zip(&mut scratch.blocks) {
            match block {
                Block::Line { strip, length_m } => {
                    let [index, z0_ohm, alpha, ..] = now.strips[*strip];
                    let (s11, s21) = line_s(wave * index, alpha, z0_ohm, *length_m);
                    out.copy_from_slice(&[s11, s21, s21, s11]);
                }
                Block::Coplanar { line, length_m } => {
                    let line = &self.coplanar[*line];
                    let alpha = if self.lossless { 0.0 } else { line.alpha_np_per_m(f_hz) };
                    let (s11, s21) = line_s(wave * line.eps_eff.sqrt(), alpha, line.z0_ohm, *length_m);
                    out.copy_from_slice(&[s11, s21, s21, s11]);
                }
                Block::Pair { pair, length_m } => {
                    let [even_index, even_ohm, even_alpha, odd_index, odd_ohm, odd_alpha] = now.pairs[*pair];
                    let (e11, e21) = line_s(wave * even_index, even_alpha, even_ohm, *length_m);
                    let (o11, o21) = line_s(wave * odd_index, odd_alpha, odd_ohm, *length_m);
                    let (own, near, through, across) = (0.5 * (e11 + o11), 0.5 * (e11 - o11), 0.5 * (e21 + o21), 0.5 * (e21 - o21));
                    out.copy_from_slice(&[
                        own, near, through, across, //
                        near, own, across, through, //
                        through, across, own, near, //
                        across, through, near, own,
                    ]);
                }
                Block::OpenEnd { strip } => out[0] = now.ends[*strip],
                Block::Ladder { first_h, shunt_f, second_h } => out.copy_from_slice(&ladder_s([*first_h, *shunt_f, *second_h], f_hz)),
                Block::Gap { strips, first_f, series_f, second_f } => {
                    // An upper estimate: across a narrow gap the facing ends' fields partly cancel.
                    let ends_s = strips.map(|strip| now.strips[strip][3]);
                    out.copy_from_slice(&gap_s([*first_f, *series_f, *second_f], ends_s, f_hz));
                }
                Block::Array { array, length_m } => array_s(&now.arrays[*array], wave, *length_m, out),
                Block::Junction { junction } => {
                    let at = &now.junctions[*junction];
                    junction_s(&at.turns[..at.arms], at.shunt_s, out);
                }
                Block::Arm { junction, arm, strip } => {
                    let [index, z0_ohm, ..] = now.strips[*strip];
                    let (s11, s21) = line_s(wave * index, 0.0, z0_ohm, -now.junctions[*junction].shifts_m[*arm]);
                    out.copy_from_slice(&[s11, s21, s21, s11]);
                }
                Block::Ground { via } => out[0] = ground_s(via.inductance_h, via.resistance_ohm(f_hz), f_hz),
                Block::Reference { gamma } => {
                    let through = Complex64::from((1.0 - gamma * gamma).sqrt());
                    out.copy_from_slice(&[Complex64::from(*gamma), through, through, Complex64::from(-gamma)]);
                }
            }
        }
    }
}

fn not_joined() -> Problem {
    Problem::error(
        "layout-not-joined",
        Place::Whole,
        "the parts of the layout do not form one two-port",
        "this is a fault of the program: please report the order",
    )
}

fn strip_constants(strip: &Strip, f_hz: f64) -> StripConstants {
    let mode = strip.at(f_hz);
    [mode.eps_eff.sqrt(), mode.z0_ohm, mode.alpha_np_per_m(), open_end::radiation_conductance_s(strip, f_hz), open_end::extension_m(strip)]
}

fn pair_constants(pair: &Pair, f_hz: f64) -> PairConstants {
    let (even, odd) = (pair.even_at(f_hz), pair.odd_at(f_hz));
    [even.eps_eff.sqrt(), even.z0_ohm, even.alpha_np_per_m(), odd.eps_eff.sqrt(), odd.z0_ohm, odd.alpha_np_per_m()]
}

/// The blocks so far with the nodes each joins, and the next node that is free.
struct Joints {
    blocks: Vec<Block>,
    nodes: Vec<Vec<usize>>,
    fresh: usize,
}

impl Joints {
    fn node(&mut self) -> usize {
        self.fresh += 1;
        self.fresh - 1
    }

    fn push(&mut self, block: Block, nodes: Vec<usize>) {
        self.blocks.push(block);
        self.nodes.push(nodes);
    }

    /// A two-port from a node to a new one, which is returned.
    fn onward(&mut self, from: usize, block: Block) -> usize {
        let to = self.node();
        self.push(block, vec![from, to]);
        to
    }
}

/// The step from one strip to the next, whichever is wider.
fn step_block(from: &Strip, to: &Strip) -> Block {
    let model = step(from, to);
    let (wide, narrow) = (model.wide_inductance_h, model.narrow_inductance_h);
    let (first_h, second_h) = if from.width_m() >= to.width_m() { (wide, narrow) } else { (narrow, wide) };
    Block::Ladder { first_h, shunt_f: model.capacitance_f, second_h }
}
