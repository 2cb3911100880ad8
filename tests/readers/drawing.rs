//! DXF files through the dxf crate: units, layers, copper with voids, edge and holes. (In `.ci/run` ezdxf audits them as well.)

use std::collections::BTreeMap;
use std::fs;

use dxf::entities::EntityType;
use dxf::enums::{AcadVersion, DrawingUnits, Units};
use stripwright::artwork::Layer;
use stripwright::artwork::shape::Ring;
use stripwright::base::Point;
use stripwright::package::{How, put};

use crate::sample;

#[test]
fn the_drawing_holds_the_board() {
    let order = sample::order();
    for made in [sample::made(&order), sample::made_by_hand(&order)] {
        let parent = tempfile::tempdir().unwrap();
        let folder = put(&sample::bundle(&made), parent.path(), How::default()).unwrap();
        let drawing = dxf::Drawing::load_file(folder.join(format!("{}.dxf", order.name))).unwrap();
        assert_eq!(drawing.header.version, AcadVersion::R2000);
        assert_eq!((drawing.header.default_drawing_units, drawing.header.drawing_units), (Units::Millimeters, DrawingUnits::Metric));
        let mut rings: BTreeMap<String, Vec<Ring>> = BTreeMap::new();
        let mut circles: BTreeMap<String, Vec<(Point, i64)>> = BTreeMap::new();
        let mut texts = Vec::new();
        let nm = |x: f64, y: f64| Point::from_m(x * 1e-3, y * 1e-3);
        for entity in drawing.entities() {
            let layer = entity.common.layer.clone();
            match &entity.specific {
                EntityType::LwPolyline(line) => {
                    assert!(line.is_closed());
                    assert!(line.vertices.iter().all(|v| v.bulge == 0.0));
                    rings.entry(layer).or_default().push(line.vertices.iter().map(|v| nm(v.x, v.y)).collect());
                }
                EntityType::Circle(circle) => {
                    let diameter = (2e6 * circle.radius).round() as i64;
                    circles.entry(layer).or_default().push((nm(circle.center.x, circle.center.y), diameter));
                }
                EntityType::Text(text) => {
                    assert_eq!(layer, "NOTES");
                    texts.push(text.value.clone());
                }
                EntityType::Line(_) => assert_eq!(layer, "NOTES"),
                other => panic!("unexpected {other:?}"),
            }
        }
        let board = &made.board;
        for (number, name) in [(1, "L1_TOP_COPPER"), (2, "L2_BOT_COPPER")] {
            let shapes = &board.layers[&Layer::Copper(number)];
            assert_eq!(rings[name], shapes.iter().map(|shape| shape.outer.clone()).collect::<Vec<_>>());
            let voids: Vec<Ring> = shapes.iter().flat_map(|shape| shape.voids.clone()).collect();
            assert_eq!(rings.get(&format!("{name}_VOID")).cloned().unwrap_or_default(), voids);
        }
        assert_eq!(rings["BOARD_OUTLINE"], std::slice::from_ref(&board.outline.outer));
        for (plated, name) in [(true, "DRILL_PTH"), (false, "DRILL_NPTH")] {
            let wanted: Vec<_> =
                board.holes.iter().filter(|hole| hole.is_plated() == plated).map(|hole| (hole.at, hole.diameter.0)).collect();
            assert_eq!(circles.get(name).cloned().unwrap_or_default(), wanted);
        }
        assert!(texts.iter().any(|text| text == "10 mm"), "a scale bar");
        // Zero-length edges and doubled vertices break cutters and meshers.
        assert!(rings.values().flatten().all(|ring| ring.iter().zip(ring.iter().cycle().skip(1)).all(|(a, b)| a != b)));
    }
}

#[test]
fn the_same_order_gives_the_same_bytes() {
    let made = sample::made_by_hand(&sample::order());
    let (one, other) = (tempfile::tempdir().unwrap(), tempfile::tempdir().unwrap());
    let first = put(&sample::bundle(&made), one.path(), How::default()).unwrap();
    // Longer than a second, so that a clock with whole seconds would show.
    std::thread::sleep(std::time::Duration::from_millis(1100));
    let second = put(&sample::bundle(&made), other.path(), How::default()).unwrap();
    let mut count = 0;
    for entry in fs::read_dir(&first).unwrap() {
        let name = entry.unwrap().file_name();
        assert!(fs::read(first.join(&name)).unwrap() == fs::read(second.join(&name)).unwrap(), "{}", name.display());
        count += 1;
    }
    assert_eq!(count, fs::read_dir(&second).unwrap().count());
    assert!(count >= 16, "{count} files");
}
