//! What shape has a piece of copper: straight edges along the axes, and slants that become stairs.

use crate::artwork::shape::Piece;

/// An edge along an axis, at `at_m` on one axis, between `from_m` and `to_m` on the other.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Edge {
    /// Where.
    pub at_m: f64,
    /// Start, below `to_m`.
    pub from_m: f64,
    /// End.
    pub to_m: f64,
    /// Whether the copper lies on the side of smaller coordinates.
    pub copper_below: bool,
}

impl Edge {
    /// Length over which two edges run side by side; negative when they are apart.
    pub fn shared_m(&self, other: &Edge) -> f64 {
        self.to_m.min(other.to_m) - self.from_m.max(other.from_m)
    }
}

/// A piece of copper in metres, as the mesh needs it.
#[derive(Clone, Debug, PartialEq)]
pub struct Outline {
    rings: Vec<Vec<[f64; 2]>>,
    /// Edges across x and edges across y.
    pub edges: [Vec<Edge>; 2],
    /// Lines along x and y at which stairs replace slants.
    pub stairs_m: [Vec<f64>; 2],
    /// Greatest distance of a stair from its slant.
    pub stair_error_m: f64,
    /// Twice the area over the length of the edge: the width of a long strip.
    pub width_m: f64,
    /// Lower left and upper right corner.
    pub bounds_m: [[f64; 2]; 2],
}

/// An edge off an axis by less than this is along it.
const STRAIGHT_M: f64 = 1.5e-9;

impl Outline {
    /// The outline of a piece; slants become stairs no higher than `stair_m`.
    pub fn new(piece: &Piece, stair_m: f64) -> Outline {
        let rings: Vec<Vec<[f64; 2]>> =
            std::iter::once(&piece.outer).chain(&piece.voids).map(|ring| ring.iter().map(|p| [p.x.m(), p.y.m()]).collect()).collect();
        let mut outline = Outline {
            edges: [Vec::new(), Vec::new()],
            stairs_m: [Vec::new(), Vec::new()],
            stair_error_m: 0.0,
            width_m: 0.0,
            bounds_m: [[f64::INFINITY; 2], [f64::NEG_INFINITY; 2]],
            rings: Vec::new(),
        };
        let (mut area, mut length) = (0.0, 0.0);
        for ring in &rings {
            let count = ring.len();
            let mut slants: Vec<([f64; 2], [f64; 2])> = Vec::new();
            for (i, a) in ring.iter().enumerate() {
                let b = &ring[(i + 1) % count];
                let [low, high] = &mut outline.bounds_m;
                for ((low, high), at) in low.iter_mut().zip(high).zip(a) {
                    *low = low.min(*at);
                    *high = high.max(*at);
                }
                area += 0.5 * (a[0] * b[1] - b[0] * a[1]);
                length += (b[0] - a[0]).hypot(b[1] - a[1]);
                let upright = (b[0] - a[0]).abs() < STRAIGHT_M;
                let level = (b[1] - a[1]).abs() < STRAIGHT_M;
                let short = (b[0] - a[0]).abs().max((b[1] - a[1]).abs()) < stair_m;
                let before = ring[(i + count - 1) % count];
                let after = ring[(i + 2) % count];
                let slanted = |p: &[f64; 2], q: &[f64; 2]| (q[0] - p[0]).abs() >= STRAIGHT_M && (q[1] - p[1]).abs() >= STRAIGHT_M;
                // A chord of an arc may happen to lie along an axis; it belongs to the arc.
                let of_arc = short && slanted(&before, a) && slanted(b, &after);
                if (upright || level) && !of_arc {
                    // The copper lies left of the way along a ring.
                    let (axis, copper_below) = if upright { (0, b[1] > a[1]) } else { (1, b[0] < a[0]) };
                    let other = 1 - axis;
                    outline.edges[axis].push(Edge {
                        at_m: a[axis],
                        from_m: a[other].min(b[other]),
                        to_m: a[other].max(b[other]),
                        copper_below,
                    });
                } else {
                    slants.push((*a, *b));
                }
            }
            outline.add_stairs(&slants, stair_m);
        }
        outline.width_m = 2.0 * area.abs() / length.max(f64::MIN_POSITIVE);
        outline.rings = rings;
        outline
    }

    /// Joins slants to runs that rise (or fall) all along, and cuts each run into steps whose corners lie on both sides of it.
    fn add_stairs(&mut self, slants: &[([f64; 2], [f64; 2])], stair_m: f64) {
        let sign = |a: &[f64; 2], b: &[f64; 2]| {
            [0, 1].map(|axis| if (b[axis] - a[axis]).abs() < STRAIGHT_M { 0 } else { (b[axis] - a[axis]).signum() as i8 })
        };
        let mut runs: Vec<Vec<[f64; 2]>> = Vec::new();
        for (a, b) in slants {
            let joins = |run: &Vec<[f64; 2]>| match run[..] {
                [first, .., last] => {
                    let (one, two) = (sign(&first, &last), sign(a, b));
                    last == *a && one[0] * two[0] >= 0 && one[1] * two[1] >= 0
                }
                _ => false,
            };
            match runs.last_mut() {
                Some(run) if joins(run) => run.push(*b),
                _ => runs.push(vec![*a, *b]),
            }
        }
        for run in &runs {
            let (Some(first), Some(last)) = (run.first(), run.last()) else { continue };
            let rise = (last[0] - first[0]).abs().min((last[1] - first[1]).abs());
            let steps = (rise / stair_m).ceil().max(1.0) as usize;
            let total: f64 = run.windows(2).map(|w| (w[1][0] - w[0][0]).hypot(w[1][1] - w[0][1])).sum();
            let at = |share: f64| {
                let mut left = share * total;
                for w in run.windows(2) {
                    let length = (w[1][0] - w[0][0]).hypot(w[1][1] - w[0][1]);
                    if left <= length || length <= 0.0 {
                        let u = if length > 0.0 { left / length } else { 0.0 };
                        return [w[0][0] + u * (w[1][0] - w[0][0]), w[0][1] + u * (w[1][1] - w[0][1])];
                    }
                    left -= length;
                }
                *last
            };
            for step in 0..=steps {
                self.stairs_m[0].push(at(step as f64 / steps as f64)[0]);
                if step < steps {
                    self.stairs_m[1].push(at((step as f64 + 0.5) / steps as f64)[1]);
                }
            }
            self.stair_error_m = self.stair_error_m.max(0.5 * rise / steps as f64);
        }
    }

    /// Whether a point off every edge lies in the copper.
    pub fn contains(&self, [x, y]: [f64; 2]) -> bool {
        let mut inside = false;
        for ring in &self.rings {
            for (i, a) in ring.iter().enumerate() {
                let b = ring[(i + 1) % ring.len()];
                if (a[1] > y) != (b[1] > y) && x < a[0] + (y - a[1]) / (b[1] - a[1]) * (b[0] - a[0]) {
                    inside = !inside;
                }
            }
        }
        inside
    }
}
