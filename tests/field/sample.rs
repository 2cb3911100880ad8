//! Small geometries for the tests, in millimetres.

use stripwright::artwork::shape::{Region, rectangle};
use stripwright::base::{Nm, Point};
use stripwright::field::{Analysis, Calibration, Dielectric, Geometry, GeometryPort, Mesh, PortLine, PortPlace, Split, Stack, Top};
use stripwright::order::Side;

pub fn mm(value: f64) -> Nm {
    Nm::from_m(value * 1e-3)
}

pub fn layer(permittivity: f64, thickness_mm: f64) -> Dielectric {
    Dielectric { permittivity, loss_tangent: 0.0, thickness_m: thickness_mm * 1e-3 }
}

/// One substrate, air to a lid.
pub fn stack(permittivity: f64, height_mm: f64, lid_mm: f64) -> Stack {
    Stack { below: vec![layer(permittivity, height_mm)], above: vec![layer(1.0, lid_mm)], top: Top::Lid }
}

/// Copper rectangles `[x0, y0, x1, y1]`.
pub fn copper(rectangles: &[[f64; 4]]) -> Region {
    let rings: Vec<_> =
        rectangles.iter().map(|r| rectangle(Point { x: mm(r[0]), y: mm(r[1]) }, Point { x: mm(r[2]), y: mm(r[3]) })).collect();
    Region::union_of(&rings)
}

pub fn wall(side: Side, at_mm: f64, plane_mm: f64) -> GeometryPort {
    GeometryPort { place: PortPlace::Wall { side, at: mm(at_mm), plane: mm(plane_mm) }, reference_ohm: 50.0 }
}

pub fn geometry(stack: Stack, size_mm: [f64; 2], rectangles: &[[f64; 4]], ports: Vec<GeometryPort>) -> Geometry {
    Geometry { stack, size: size_mm.map(mm), copper: copper(rectangles), conductor: None, ports }
}

/// A straight line through the middle of a box.
pub fn through(stack: Stack, width_mm: f64, box_mm: f64, length_mm: f64) -> Geometry {
    let (low, high) = (0.5 * (box_mm - width_mm), 0.5 * (box_mm + width_mm));
    let ports = vec![wall(Side::Left, 0.5 * box_mm, 0.45 * length_mm), wall(Side::Right, 0.5 * box_mm, 0.45 * length_mm)];
    geometry(stack, [length_mm, box_mm], &[[0.0, low, length_mm, high]], ports)
}

/// Line constants by the two standards of a port.
pub fn line(geometry: &Geometry, f_hz: f64, highest_hz: f64, refine: f64) -> PortLine {
    let mesh = Mesh::new(geometry, highest_hz, refine, 0.1e-3).unwrap();
    Calibration::new(&mesh.feeds[0], &geometry.stack, None, highest_hz, Split::default()).unwrap().at(f_hz).unwrap()
}

pub fn analysis(geometry: &Geometry, highest_hz: f64, refine: f64, split: Split) -> Analysis {
    let mesh = Mesh::new(geometry, highest_hz, refine, 0.1e-3).unwrap();
    Analysis::new(mesh, geometry, highest_hz, split).unwrap()
}
