//! A geometry file: layers, box or open board, polygons in millimetres, ports, sweep.

use toml::de::DeValue;

use super::board::{FAR_LID_HEIGHTS, FAR_WALL_HEIGHTS};
use super::geometry::{Conductor, Geometry, GeometryPort, PortPlace};
use super::stack::{Dielectric, Stack, Top};
use crate::artwork::shape::{Region, Ring, bounds, rectangle};
use crate::base::Dimensionality;
use crate::base::Nm;
use crate::base::Outcome;
use crate::base::Place;
use crate::base::Point;
use crate::base::Problem;
use crate::order;
use crate::order::Context;
use crate::order::Side;
use crate::order::Size;
use crate::order::Source;
use crate::order::Table;

const LENGTH: Size = Size::length(-1000.0, 1000.0, "10 mm");
const BOX: Size = Size::length(0.5, 1000.0, "40 mm");
const THICKNESS: Size = Size::length(0.005, 50.0, "0.508 mm");
const FOIL: Size = Size { kind: Dimensionality::CopperThickness, unit: "um", least: 0.1e-6, greatest: 500e-6, usual: "35 um" };
const ROUGHNESS: Size = Size { kind: Dimensionality::Length, unit: "um", least: 0.0, greatest: 20e-6, usual: "1.5 um" };
const FREQUENCY: Size = Size { kind: Dimensionality::Frequency, unit: "GHz", least: 1e6, greatest: 1e12, usual: "2 GHz" };
const IMPEDANCE: Size = Size { kind: Dimensionality::Impedance, unit: "ohm", least: 1.0, greatest: 1000.0, usual: "50 ohm" };
/// Largest coordinate, mm.
const GREATEST_MM: f64 = 1000.0;
/// Conductivity of annealed copper, S/m (International Annealed Copper Standard, 20 degrees).
const COPPER_S_PER_M: f64 = 5.8e7;

/// A geometry with the frequencies it is to be solved at.
#[derive(Clone, Debug, PartialEq)]
pub struct GeometryFile {
    /// One line for people.
    pub title: String,
    /// Layers, box, copper, ports.
    pub geometry: Geometry,
    /// Increasing.
    pub f_hz: Vec<f64>,
    /// Whether walls and lid were chosen far away for a board without them.
    pub open_board: bool,
}

/// Whether a file looks like a geometry file.
pub fn is_geometry_file(source: &Source) -> bool {
    let context = Context::default();
    let document = order::parse(source, &context);
    let root = Table::root(document.get_ref(), &context);
    root.has("geometry")
}

/// Reads a geometry file.
///
/// # Errors
/// Every mistake of the file; then those of [`Geometry::problems`]. Own codes: `polygon-wrong`, `copper-short` (polygons of two nets overlap),
/// `box-missing`, `port-place-wrong`.
pub fn read_geometry(source: &Source) -> Outcome<GeometryFile> {
    let context = Context::default();
    let document = order::parse(source, &context);
    let root = Table::root(document.get_ref(), &context);
    let found = file(&root);
    root.finish();
    let (found, warnings) = order::finish(found, context, source)?;
    let problems = found.geometry.problems();
    if problems.is_empty() { Ok((found, warnings)) } else { Err(problems) }
}

fn file(root: &Table<'_>) -> Option<GeometryFile> {
    let head = root.table("geometry");
    if !root.has("geometry") {
        root.missing("geometry", "{ title = \"...\" }");
    }
    let title = head.resolve("title", "\"...\"", None, |t, k| t.line(k, 200));
    head.finish();
    let below: Vec<Option<Dielectric>> = root.tables("below").iter().map(layer).collect();
    if below.is_empty() {
        root.missing("below", "[{ thickness = \"0.508 mm\", permittivity = 3.5 }], from the ground up");
    }
    let above: Vec<Option<Dielectric>> = root.tables("above").iter().map(layer).collect();
    let below = below.into_iter().collect::<Option<Vec<_>>>();
    let above = above.into_iter().collect::<Option<Vec<_>>>();
    let conductor = if root.has("copper") { conductor(&root.table("copper")).map(Some) } else { Some(None) };
    let copper = polygons(root);
    let ports: Vec<Option<GeometryPort>> = root.tables("port").iter().map(port).collect();
    let ports = ports.into_iter().collect::<Option<Vec<_>>>();
    let sweep = root.table("sweep");
    if !root.has("sweep") {
        root.missing("sweep", "{ from = \"1 GHz\", to = \"3 GHz\", points = 501 }");
    }
    let f_hz = frequencies(&sweep);
    sweep.finish();
    let surroundings = surroundings(root);
    let (below, above, copper, ports) = (below?, above?, copper?, ports?);
    let height_m: f64 = below.iter().map(|l| l.thickness_m).sum();
    let above_m: f64 = above.iter().map(|l| l.thickness_m).sum();
    let surroundings = surroundings?;
    let (size, lid_m, offset, open_board) = match surroundings {
        Surroundings::Box { size_m, lid_m } => (size_m.map(Nm::from_m), lid_m, [Nm::ZERO; 2], false),
        Surroundings::OpenBoard => {
            let corners = bounds(copper.rings().flatten().copied())?;
            let margin = |side: Side| {
                let fed = ports.iter().any(|p| matches!(p.place, PortPlace::Wall { side: s, .. } if s == side));
                if fed { Nm::ZERO } else { Nm::from_m(FAR_WALL_HEIGHTS * height_m) }
            };
            let [left, right, bottom, top] = [Side::Left, Side::Right, Side::Bottom, Side::Top].map(margin);
            let size = [corners[1].x - corners[0].x + left + right, corners[1].y - corners[0].y + bottom + top];
            (size, Some(FAR_LID_HEIGHTS * height_m + above_m), [left - corners[0].x, bottom - corners[0].y], true)
        }
    };
    let mut above = above;
    let air = |thickness_m: f64| Dielectric { permittivity: 1.0, loss_tangent: 0.0, thickness_m };
    let top = match lid_m {
        Some(lid_m) if lid_m > above_m + 1e-9 => {
            above.push(air(lid_m - above_m));
            Top::Lid
        }
        Some(lid_m) if above.is_empty() || lid_m < above_m - 1e-9 => {
            root.error("box-missing", "box", format!("the lid at {:.3} mm lies within the layers above", lid_m * 1e3), "raise the lid");
            return None;
        }
        Some(_) => Top::Lid,
        None => {
            above.push(air(1.0));
            Top::Open
        }
    };
    let [dx, dy] = offset;
    let copper = copper.mapped(|p| p.shifted(dx, dy));
    let ports = ports.into_iter().map(|port| GeometryPort { place: moved(port.place, dx, dy), ..port }).collect();
    let geometry = Geometry { stack: Stack { below, above, top }, size, copper, conductor: conductor?, ports };
    Some(GeometryFile { title: title?, geometry, f_hz: f_hz?, open_board })
}

enum Surroundings {
    Box { size_m: [f64; 2], lid_m: Option<f64> },
    OpenBoard,
}

fn surroundings(root: &Table<'_>) -> Option<Surroundings> {
    if !root.has("box") {
        root.missing("box", "{ size = [\"60 mm\", \"24 mm\"], lid = \"12 mm\" }");
        return None;
    }
    let t = root.table("box");
    let found = if t.has("open-board") {
        match t.flag("open-board")? {
            true => Some(Surroundings::OpenBoard),
            false => {
                t.error("box-missing", "open-board", "open-board is false: then the box needs its size", "give size and lid instead");
                None
            }
        }
    } else {
        let size_m = t.resolve("size", "[\"60 mm\", \"24 mm\"]", None, |t, k| t.quantities::<2>(k, &BOX));
        let open = t.has("top") && t.word("top", &["open"]).is_some();
        let lid_m = if open { Some(None) } else { t.size("lid", &BOX, None).map(Some) };
        size_m.zip(lid_m).map(|(size_m, lid_m)| Surroundings::Box { size_m, lid_m })
    };
    t.finish();
    found
}

fn layer(t: &Table<'_>) -> Option<Dielectric> {
    let thickness_m = t.size("thickness", &THICKNESS, None);
    let permittivity = t.resolve("permittivity", "3.5", None, |t, k| t.number(k, 1.0, 200.0));
    let loss_tangent = if t.has("loss-tangent") { t.number("loss-tangent", 0.0, 1.0) } else { Some(0.0) };
    t.finish();
    Some(Dielectric { thickness_m: thickness_m?, permittivity: permittivity?, loss_tangent: loss_tangent? })
}

fn conductor(t: &Table<'_>) -> Option<Conductor> {
    let thickness_m = t.size("thickness", &FOIL, None);
    let roughness_m = if t.has("roughness") { t.quantity("roughness", &ROUGHNESS) } else { Some(0.0) };
    let conductivity = if t.has("conductivity-s-per-m") { t.number("conductivity-s-per-m", 1e3, 1e9) } else { Some(COPPER_S_PER_M) };
    t.finish();
    Some(Conductor { conductivity_s_per_m: conductivity?, thickness_m: thickness_m?, roughness_m: roughness_m? })
}

fn frequencies(t: &Table<'_>) -> Option<Vec<f64>> {
    let from = t.size("from", &FREQUENCY, None);
    let to = t.size("to", &FREQUENCY, None);
    let points = t.resolve("points", "501", None, |t, k| t.integer(k, 2, 1_000_000));
    let (from, to, points) = (from?, to?, points?);
    if to <= from {
        t.error("edges-reversed", "to", format!("the sweep runs from {} to {}", FREQUENCY.show(from), FREQUENCY.show(to)), "swap the two");
        return None;
    }
    Some((0..points).map(|i| from + (to - from) * i as f64 / (points - 1) as f64).collect())
}

fn port(t: &Table<'_>) -> Option<GeometryPort> {
    let reference_ohm = t.size("impedance", &IMPEDANCE, Some(50.0));
    let place = if t.has("wall") {
        let side = t.word("wall", &["left", "right", "bottom", "top"]).map(|i| [Side::Left, Side::Right, Side::Bottom, Side::Top][i]);
        let at = t.size("at", &LENGTH, None);
        let plane = t.size("plane", &BOX, None);
        side.zip(at.zip(plane)).map(|(side, (at, plane))| PortPlace::Wall { side, at: Nm::from_m(at), plane: Nm::from_m(plane) })
    } else if t.has("gap-mm") {
        match points(t, "gap-mm")?[..] {
            [from, to] => Some(PortPlace::Gap { from, to }),
            _ => {
                t.error("port-place-wrong", "gap-mm", "gap-mm takes two points, the ends of the gap", "write gap-mm = [[10, 4], [10, 5]]");
                None
            }
        }
    } else {
        t.missing("wall", "\"left\" (with at and plane), or gap-mm = [[10, 4], [10, 5]]");
        None
    };
    t.finish();
    Some(GeometryPort { place: place?, reference_ohm: reference_ohm? })
}

fn moved(place: PortPlace, dx: Nm, dy: Nm) -> PortPlace {
    match place {
        PortPlace::Wall { side, at, plane } => {
            let along = if matches!(side, Side::Left | Side::Right) { dy } else { dx };
            PortPlace::Wall { side, at: at + along, plane }
        }
        PortPlace::Gap { from, to } => PortPlace::Gap { from: from.shifted(dx, dy), to: to.shifted(dx, dy) },
    }
}

/// Every polygon and rectangle; polygons of different nets must not overlap.
fn polygons(root: &Table<'_>) -> Option<Region> {
    let tables = root.tables("polygon");
    if tables.is_empty() {
        root.missing("polygon", "[{ corners-mm = [[0, 9.4], [40, 9.4], [40, 10.6], [0, 10.6]] }]");
    }
    let mut nets: Vec<(Option<String>, Vec<Ring>)> = Vec::new();
    let mut sound = !tables.is_empty();
    for t in &tables {
        let net = if t.has("net") { t.line("net", 60) } else { None };
        let ring = if t.has("rectangle-mm") {
            points(t, "rectangle-mm").and_then(|corners| match corners[..] {
                [a, b] if a.x != b.x && a.y != b.y => Some(rectangle(a, b)),
                _ => {
                    let help = "write rectangle-mm = [[0, 9.4], [40, 10.6]]";
                    t.error("polygon-wrong", "rectangle-mm", "a rectangle takes two opposite corners", help);
                    None
                }
            })
        } else if t.has("corners-mm") {
            points(t, "corners-mm").filter(|ring| {
                let enough = ring.len() >= 3;
                if !enough {
                    t.error("polygon-wrong", "corners-mm", format!("a polygon of {} corners", ring.len()), "give at least three corners");
                }
                enough
            })
        } else {
            t.missing("corners-mm", "[[0, 9.4], [40, 9.4], [40, 10.6], [0, 10.6]], or rectangle-mm");
            None
        };
        t.finish();
        match ring {
            Some(ring) => match nets.iter_mut().find(|n| n.0 == net) {
                Some(n) => n.1.push(ring),
                None => nets.push((net, vec![ring])),
            },
            None => sound = false,
        }
    }
    if !sound {
        return None;
    }
    let regions: Vec<(Option<String>, Region)> = nets.into_iter().map(|(net, rings)| (net, Region::union_of(&rings))).collect();
    for (i, (one, a)) in regions.iter().enumerate() {
        for (other, b) in &regions[i + 1..] {
            let (Some(one), Some(other)) = (one, other) else { continue };
            if let Some(closest) = a.closest_to(b)
                && closest.distance_m <= 0.0
            {
                let message = format!("copper of net \"{one}\" touches copper of net \"{other}\"");
                let place = Place::Board(closest.middle());
                root.context().report(Problem::error("copper-short", place, message, "draw a gap between them, or give both the same net"));
                return None;
            }
        }
    }
    Some(regions.iter().fold(Region::default(), |all, (_, region)| all.union(region)))
}

/// A list of points in millimetres.
fn points(t: &Table<'_>, key: &'static str) -> Option<Vec<Point>> {
    let value = t.entries().find(|(name, _)| *name == key)?.1;
    let number = |value: &DeValue<'_>| match value {
        DeValue::Integer(i) => i.as_str().replace('_', "").parse::<f64>().ok(),
        DeValue::Float(f) => f.as_str().replace('_', "").parse::<f64>().ok(),
        _ => None,
    };
    let point = |value: &DeValue<'_>| match value {
        DeValue::Array(pair) => match pair.iter().map(|v| number(v.get_ref())).collect::<Option<Vec<f64>>>()?[..] {
            [x, y] if x.abs() <= GREATEST_MM && y.abs() <= GREATEST_MM => Some(Point::from_m(x * 1e-3, y * 1e-3)),
            _ => None,
        },
        _ => None,
    };
    let found = match value.get_ref() {
        DeValue::Array(list) => list.iter().map(|v| point(v.get_ref())).collect::<Option<Vec<_>>>(),
        _ => None,
    };
    if found.is_none() {
        let message = format!("{key} is no list of points in millimetres within {GREATEST_MM} mm");
        t.error("polygon-wrong", key, message, format!("write {key} = [[0, 9.4], [40, 9.4]]"));
    }
    found
}
