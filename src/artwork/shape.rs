//! What area of the drawing is covered: set operations, offsets and distances on whole-nanometre polygons. The only door to the polygon engine.

use i_overlay::core::fill_rule::FillRule;
use i_overlay::core::overlay::Overlay;
use i_overlay::core::overlay_rule::OverlayRule;
use i_overlay::i_float::int::angle::Angle;
use i_overlay::i_float::int::point::IntPoint;
use i_overlay::mesh::int::outline::offset::IntOutlineOffset;
use i_overlay::mesh::int::style::{IntLineJoin, IntOutlineStyle};

use crate::artwork::Shape;
use crate::base::Nm;
use crate::base::Point;

/// A closed ring of corners; the last is not the first repeated.
pub type Ring = Vec<Point>;

type EnginePoint = IntPoint<i64>;
type EngineShapes = Vec<Vec<Vec<EnginePoint>>>;

/// Greatest distance of a chord from its arc: one for Gerber, DXF and solver alike.
pub const CHORD_ERROR: Nm = Nm(500);

/// Below this inner angle a mitred corner of an offset is cut off instead of drawn out.
const MITRE_DEG: f64 = 20.0;

/// One connected piece of area: outer ring counter-clockwise, voids clockwise.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Piece {
    /// Outer ring.
    pub outer: Ring,
    /// Voids.
    pub voids: Vec<Ring>,
}

/// Covered area: any number of connected pieces, none touching another.
///
/// Every operation gives a union: no self-crossing, no repeated vertex, no collinear vertex; pieces sorted.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Region {
    /// The pieces.
    pub pieces: Vec<Piece>,
}

/// The smallest distance found, and where.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Closest {
    /// Distance in metres.
    pub distance_m: f64,
    /// Place on the first.
    pub from: Point,
    /// Place on the second.
    pub to: Point,
}

impl Closest {
    /// Middle of the closest stretch.
    pub fn middle(&self) -> Point {
        Point { x: Nm((self.from.x.0 + self.to.x.0).div_euclid(2)), y: Nm((self.from.y.0 + self.to.y.0).div_euclid(2)) }
    }
}

impl Region {
    /// The union of simple rings, whatever their direction.
    pub fn union_of(rings: &[Ring]) -> Region {
        let solids: Vec<Vec<EnginePoint>> = rings.iter().map(|ring| to_engine(&counter_clockwise(ring))).collect();
        from_engine(Overlay::from_subj(&solids).overlay(OverlayRule::Subject, FillRule::NonZero))
    }

    /// The union of rings whose direction counts: counter-clockwise adds, clockwise takes away.
    pub fn wound(rings: &[Ring]) -> Region {
        let rings: Vec<Vec<EnginePoint>> = rings.iter().map(|ring| to_engine(ring)).collect();
        from_engine(Overlay::from_subj(&rings).overlay(OverlayRule::Subject, FillRule::NonZero))
    }

    /// Moves the region, exactly.
    pub fn shift(&mut self, dx: Nm, dy: Nm) {
        let rings = self.pieces.iter_mut().flat_map(|piece| std::iter::once(&mut piece.outer).chain(&mut piece.voids));
        rings.flatten().for_each(|p| *p = p.shifted(dx, dy));
    }

    /// The area of a shape of the board.
    pub fn from_shape(shape: &Shape) -> Region {
        Region { pieces: vec![Piece { outer: shape.outer.clone(), voids: shape.voids.clone() }] }
    }

    /// One rectangle between two corners.
    pub fn rectangle(a: Point, b: Point) -> Region {
        Region::union_of(&[rectangle(a, b)])
    }

    /// Covered by either.
    pub fn union(&self, other: &Region) -> Region {
        self.combined(other, OverlayRule::Union)
    }

    /// Covered by this and not by the other.
    pub fn difference(&self, other: &Region) -> Region {
        self.combined(other, OverlayRule::Difference)
    }

    /// Covered by both.
    pub fn intersection(&self, other: &Region) -> Region {
        self.combined(other, OverlayRule::Intersect)
    }

    fn combined(&self, other: &Region, rule: OverlayRule) -> Region {
        let (subject, clip) = (self.to_engine(), other.to_engine());
        from_engine(Overlay::from_subj_and_clip(&subject, &clip).overlay(rule, FillRule::NonZero))
    }

    /// Every edge moved outwards by `by` (inwards when negative), corners mitred; exact to 1 nm on straight edges at right angles.
    pub fn offset(&self, by: Nm) -> Region {
        if by == Nm::ZERO || self.pieces.is_empty() {
            return self.clone();
        }
        let join = Angle::from_radians(MITRE_DEG.to_radians()).map_or(IntLineJoin::Bevel, IntLineJoin::Miter);
        let style = IntOutlineStyle::<i64>::new(by.0).line_join(join);
        let shapes: EngineShapes = self.pieces.iter().map(piece_to_engine).collect();
        // The engine refuses only coordinates beyond its range, kilometres at this unit; then the region is given back as it was.
        shapes.outline(&style).map_or_else(|_| self.clone(), from_engine)
    }

    /// Covered area, square metres.
    pub fn area_m2(&self) -> f64 {
        let doubled: i128 = self.rings().map(doubled_area).sum();
        doubled as f64 * 0.5e-18
    }

    /// Every ring, outer rings and voids.
    pub fn rings(&self) -> impl Iterator<Item = &Ring> {
        self.pieces.iter().flat_map(|piece| std::iter::once(&piece.outer).chain(&piece.voids))
    }

    /// Lower left and upper right corner; `None` when empty.
    pub fn bounds(&self) -> Option<[Point; 2]> {
        bounds(self.pieces.iter().flat_map(|piece| piece.outer.iter().copied()))
    }

    /// Whether the point is inside or on the edge.
    pub fn contains(&self, at: Point) -> bool {
        self.pieces.iter().any(|piece| piece.contains(at))
    }

    /// Whether the other lies wholly within this one.
    pub fn covers(&self, other: &Region) -> bool {
        other.difference(self).pieces.is_empty()
    }

    /// The smallest distance to another region, zero when they overlap or touch; `None` when either is empty.
    pub fn closest_to(&self, other: &Region) -> Option<Closest> {
        let (mine, theirs) = (edges(self.rings()), edges(other.rings()));
        let found = closest_edges(&mine, &theirs)?;
        let overlapping = self.pieces.iter().any(|piece| piece.outer.first().is_some_and(|&p| other.contains(p)))
            || other.pieces.iter().any(|piece| piece.outer.first().is_some_and(|&p| self.contains(p)));
        Some(if overlapping { Closest { distance_m: 0.0, ..found } } else { found })
    }

    /// The same region with every corner mapped; the map must keep what is counter-clockwise so.
    pub fn mapped(&self, map: impl Fn(Point) -> Point) -> Region {
        // A map that rounds may bring corners together or into line: the union settles that once.
        Region::wound(&self.rings().map(|ring| ring.iter().map(|&p| map(p)).collect()).collect::<Vec<_>>())
    }

    fn to_engine(&self) -> Vec<Vec<EnginePoint>> {
        self.rings().map(|ring| to_engine(ring)).collect()
    }
}

impl Piece {
    /// Whether the point is inside or on the edge.
    pub fn contains(&self, at: Point) -> bool {
        match side_of_ring(&self.outer, at) {
            Within::Outside => false,
            Within::OnEdge => true,
            Within::Inside => self.voids.iter().all(|void| side_of_ring(void, at) != Within::Inside),
        }
    }

    /// The piece alone as a region.
    pub fn region(&self) -> Region {
        Region { pieces: vec![self.clone()] }
    }
}

/// The ring of a rectangle between two corners, counter-clockwise.
pub fn rectangle(a: Point, b: Point) -> Ring {
    let (x0, x1) = (a.x.min(b.x), a.x.max(b.x));
    let (y0, y1) = (a.y.min(b.y), a.y.max(b.y));
    vec![Point { x: x0, y: y0 }, Point { x: x1, y: y0 }, Point { x: x1, y: y1 }, Point { x: x0, y: y1 }]
}

/// A circle as a ring that nowhere lies inside it and at most twice [`CHORD_ERROR`] outside.
pub fn disc(at: Point, radius: Nm) -> Ring {
    let radius_m = radius.m().max(1e-9);
    let half_angle = (1.0 - (CHORD_ERROR.m() / radius_m).min(0.5)).acos();
    let corners = ((std::f64::consts::PI / half_angle).ceil() as usize).max(8);
    around(at, radius, corners)
}

/// A regular polygon circumscribed about the circle.
fn around(at: Point, radius: Nm, corners: usize) -> Ring {
    let step = std::f64::consts::TAU / corners as f64;
    // One nanometre more than the circumscribed radius, so that rounding of the corners cannot cut the circle.
    let out = radius.m() / (0.5 * step).cos() + 1e-9;
    (0..corners)
        .map(|i| {
            let angle = (i as f64 + 0.5) * step;
            at.shifted(Nm::from_m(out * angle.cos()), Nm::from_m(out * angle.sin()))
        })
        .collect()
}

/// The convex hull of the points grown by at least `by` on all sides (at most 2 % more, at its corners); counter-clockwise.
pub fn grown_hull(points: &[Point], by: Nm) -> Ring {
    // A 16-sided polygon around each point: its corners lie 1/cos(pi/16) = 1.02 of the radius out.
    const SIDES: usize = 16;
    let cloud: Vec<Point> = points.iter().flat_map(|&p| around(p, by, SIDES)).collect();
    hull(cloud)
}

/// The convex hull, counter-clockwise, without collinear corners.
pub fn convex_hull(points: &[Point]) -> Ring {
    hull(points.to_vec())
}

/// Monotone chain.
fn hull(mut points: Vec<Point>) -> Ring {
    points.sort();
    points.dedup();
    if points.len() < 3 {
        return points;
    }
    let half = |points: &mut dyn Iterator<Item = Point>| {
        let mut chain: Ring = Vec::new();
        for p in points {
            while let [.., a, b] = chain[..] {
                if turn(a, b, p) > 0 {
                    break;
                }
                chain.pop();
            }
            chain.push(p);
        }
        chain.pop();
        chain
    };
    let mut ring = half(&mut points.iter().copied());
    ring.extend(half(&mut points.iter().rev().copied()));
    ring
}

/// The quadrilateral between two mouths, corners taken over unchanged, counter-clockwise.
pub fn between_mouths(near: [Point; 2], far: [Point; 2]) -> Ring {
    let plain = vec![near[0], near[1], far[0], far[1]];
    let crossed = vec![near[0], near[1], far[1], far[0]];
    // The order that crosses itself encloses less.
    counter_clockwise(if doubled_area(&plain).abs() >= doubled_area(&crossed).abs() { &plain } else { &crossed })
}

/// Lower left and upper right corner of the points.
pub fn bounds(points: impl Iterator<Item = Point>) -> Option<[Point; 2]> {
    points.fold(None, |found: Option<[Point; 2]>, p| {
        Some(found.map_or([p, p], |[low, high]| {
            [Point { x: low.x.min(p.x), y: low.y.min(p.y) }, Point { x: high.x.max(p.x), y: high.y.max(p.y) }]
        }))
    })
}

/// Twice the signed area, exact; positive for counter-clockwise.
pub fn doubled_area(ring: &Ring) -> i128 {
    ring.iter()
        .zip(ring.iter().cycle().skip(1))
        .map(|(a, b)| i128::from(a.x.0) * i128::from(b.y.0) - i128::from(b.x.0) * i128::from(a.y.0))
        .sum()
}

/// Twice the signed area of the triangle: positive when `c` lies left of the way from `a` to `b`.
pub fn turn(a: Point, b: Point, c: Point) -> i128 {
    let d = |p: Nm, q: Nm| i128::from(p.0) - i128::from(q.0);
    d(b.x, a.x) * d(c.y, a.y) - d(b.y, a.y) * d(c.x, a.x)
}

/// The ring counter-clockwise.
pub fn counter_clockwise(ring: &Ring) -> Ring {
    let mut ring = ring.clone();
    if doubled_area(&ring) < 0 {
        ring.reverse();
    }
    ring
}

/// A straight edge of a ring; the area lies on its left.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Edge {
    /// Start.
    pub a: Point,
    /// End.
    pub b: Point,
}

/// Every edge of the rings.
pub fn edges<'a>(rings: impl Iterator<Item = &'a Ring>) -> Vec<Edge> {
    rings.flat_map(|ring| ring.iter().zip(ring.iter().cycle().skip(1)).map(|(&a, &b)| Edge { a, b })).collect()
}

/// The closest two places of two edges.
pub fn between_edges(one: Edge, other: Edge) -> Closest {
    if crosses(one, other) {
        let at = one.a;
        return Closest { distance_m: 0.0, from: at, to: at };
    }
    let candidates = [to_edge(one.a, other), to_edge(one.b, other), swapped(to_edge(other.a, one)), swapped(to_edge(other.b, one))];
    candidates.into_iter().fold(candidates[0], |best, next| if next.distance_m < best.distance_m { next } else { best })
}

fn swapped(closest: Closest) -> Closest {
    Closest { from: closest.to, to: closest.from, ..closest }
}

/// From a point to the closest place of an edge.
fn to_edge(p: Point, edge: Edge) -> Closest {
    let (ax, ay) = ((p.x - edge.a.x).0 as f64, (p.y - edge.a.y).0 as f64);
    let (dx, dy) = ((edge.b.x - edge.a.x).0 as f64, (edge.b.y - edge.a.y).0 as f64);
    let length2 = dx * dx + dy * dy;
    let t = if length2 > 0.0 { ((ax * dx + ay * dy) / length2).clamp(0.0, 1.0) } else { 0.0 };
    let distance_m = (ax - t * dx).hypot(ay - t * dy) * 1e-9;
    Closest { distance_m, from: p, to: edge.a.shifted(Nm((t * dx).round() as i64), Nm((t * dy).round() as i64)) }
}

/// Whether two edges cross properly.
fn crosses(one: Edge, other: Edge) -> bool {
    let s = |e: Edge, p: Point| turn(e.a, e.b, p).signum();
    s(one, other.a) * s(one, other.b) < 0 && s(other, one.a) * s(other, one.b) < 0
}

/// The closest places of two sets of edges; `None` when either is empty. Sorted along x, so that only near pairs are looked at.
pub fn closest_edges(mine: &[Edge], theirs: &[Edge]) -> Option<Closest> {
    let mut best: Option<Closest> = None;
    let mut sorted: Vec<(i64, i64, Edge)> = theirs.iter().map(|&e| (e.a.x.0.min(e.b.x.0), e.a.x.0.max(e.b.x.0), e)).collect();
    sorted.sort_by_key(|&(low, high, e)| (low, high, e.a, e.b));
    let longest = sorted.iter().map(|&(low, high, _)| high - low).max()?;
    for &edge in mine {
        let (low, high) = (edge.a.x.0.min(edge.b.x.0), edge.a.x.0.max(edge.b.x.0));
        let (bottom, top) = (edge.a.y.0.min(edge.b.y.0), edge.a.y.0.max(edge.b.y.0));
        let reach = |best: &Option<Closest>| best.map_or(i64::MAX / 4, |b| (b.distance_m * 1e9).ceil() as i64);
        let first = sorted.partition_point(|&(other_low, _, _)| other_low < low.saturating_sub(reach(&best)).saturating_sub(longest));
        for &(other_low, other_high, other) in &sorted[first..] {
            let reach = reach(&best);
            if other_low > high.saturating_add(reach) {
                break;
            }
            if other_high < low.saturating_sub(reach)
                || other.a.y.0.min(other.b.y.0) > top.saturating_add(reach)
                || other.a.y.0.max(other.b.y.0) < bottom.saturating_sub(reach)
            {
                continue;
            }
            let found = between_edges(edge, other);
            if best.is_none_or(|b| found.distance_m < b.distance_m) {
                best = Some(found);
            }
        }
    }
    best
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Within {
    Inside,
    OnEdge,
    Outside,
}

fn side_of_ring(ring: &Ring, at: Point) -> Within {
    let mut inside = false;
    for (&a, &b) in ring.iter().zip(ring.iter().cycle().skip(1)) {
        let side = turn(a, b, at);
        if side == 0 && at.x >= a.x.min(b.x) && at.x <= a.x.max(b.x) && at.y >= a.y.min(b.y) && at.y <= a.y.max(b.y) {
            return Within::OnEdge;
        }
        if (a.y <= at.y) != (b.y <= at.y) && (side > 0) == (b.y > a.y) {
            inside = !inside;
        }
    }
    if inside { Within::Inside } else { Within::Outside }
}

/// Why a ring must not be handed to a board house; empty when it is sound.
///
/// Looks for fewer than three corners, repeated neighbours, corners in line with both neighbours, and edges that touch or cross.
pub fn ring_faults(ring: &Ring) -> Vec<(&'static str, Point)> {
    let n = ring.len();
    let mut faults = Vec::new();
    if n < 3 {
        faults.push(("fewer than three corners", ring.first().copied().unwrap_or_default()));
        return faults;
    }
    for i in 0..n {
        let (a, b, c) = (ring[i], ring[(i + 1) % n], ring[(i + 2) % n]);
        if a == b {
            faults.push(("an edge of no length", a));
        } else if turn(a, b, c) == 0 {
            faults.push(("a corner in line with its neighbours", b));
        }
    }
    let all = edges(std::iter::once(ring));
    let mut order: Vec<usize> = (0..n).collect();
    let low = |i: usize| all[i].a.x.min(all[i].b.x);
    let high = |i: usize| all[i].a.x.max(all[i].b.x);
    order.sort_by_key(|&i| (low(i), i));
    for (k, &i) in order.iter().enumerate() {
        for &j in order[k + 1..].iter().take_while(|&&j| low(j) <= high(i)) {
            let neighbours = (i + 1) % n == j || (j + 1) % n == i;
            if !neighbours && between_edges(all[i], all[j]).distance_m == 0.0 {
                faults.push(("edges that touch or cross", all[i].a));
            }
        }
    }
    faults
}

fn to_engine(ring: &[Point]) -> Vec<EnginePoint> {
    ring.iter().map(|p| EnginePoint::new(p.x.0, p.y.0)).collect()
}

fn piece_to_engine(piece: &Piece) -> Vec<Vec<EnginePoint>> {
    std::iter::once(&piece.outer).chain(&piece.voids).map(|ring| to_engine(ring)).collect()
}

/// Rings start at their lowest-left corner, so that the same area always gives the same bytes.
fn from_engine(shapes: EngineShapes) -> Region {
    let ring = |points: &Vec<EnginePoint>| -> Ring {
        let mut ring: Ring = points.iter().map(|p| Point::new(p.x, p.y)).collect();
        if let Some(first) = ring.iter().enumerate().min_by_key(|&(_, p)| *p).map(|(i, _)| i) {
            ring.rotate_left(first);
        }
        ring
    };
    let mut pieces: Vec<Piece> = shapes
        .iter()
        .filter_map(|rings| {
            let (outer, voids) = rings.split_first()?;
            let mut voids: Vec<Ring> = voids.iter().map(ring).collect();
            voids.sort();
            Some(Piece { outer: ring(outer), voids })
        })
        .collect();
    pieces.sort();
    Region { pieces }
}
