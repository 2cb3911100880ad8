//! Gerber files through gerber_parser: areas, extents, nets, pads and the attributes of the header.
//!
//! The image is built here from the crate's commands (regions, dark and clear, in order), not by the program's own reader.

use std::collections::BTreeMap;
use std::fs;
use std::io::BufReader;
use std::path::Path;

use gerber_parser::gerber_types::*;
use stripwright::artwork::shape::{Region, Ring};
use stripwright::artwork::{Board, Face, Layer};
use stripwright::base::{Nm, Point as At};
use stripwright::order::{Compensation, Mask, TextOn};
use stripwright::package::{How, put};

use crate::sample;

/// What one file shows.
#[derive(Default)]
struct Seen {
    dark: Region,
    nets: BTreeMap<String, Region>,
    pads: Vec<(At, String, String)>,
    profile: Vec<At>,
    head: Vec<FileAttribute>,
}

/// Plays a file back. Regions by the even-odd of their contours is not needed: every contour is simple and they do not cross.
fn play(path: &Path) -> Seen {
    let document = gerber_parser::parse(BufReader::new(fs::File::open(path).unwrap())).map_err(|(_, e)| e).unwrap();
    assert!(document.errors().is_empty(), "{}: {:?}", path.display(), document.errors());
    assert_eq!(document.units, Some(Unit::Millimeters));
    let format = document.format_specification.unwrap();
    assert_eq!((format.integer, format.decimal), (4, 6));
    let mut seen = Seen::default();
    let (mut dark, mut region, mut net, mut pin, mut aperture) = (true, None::<Vec<Ring>>, String::new(), String::new(), 0);
    let functions: BTreeMap<i32, String> = functions_of(&document.commands());
    let commands = document.commands();
    let (last, rest) = commands.split_last().unwrap();
    assert_eq!(**last, Command::from(MCode::EndOfFile));
    for command in rest {
        match command {
            Command::ExtendedCode(ExtendedCode::FileAttribute(attribute)) => seen.head.push(attribute.clone()),
            Command::ExtendedCode(ExtendedCode::LoadPolarity(polarity)) => dark = *polarity == Polarity::Dark,
            Command::ExtendedCode(ExtendedCode::ObjectAttribute(ObjectAttribute::Net(found))) => {
                net = if let Net::Connected(names) = found { names.join(",") } else { String::new() };
            }
            Command::ExtendedCode(ExtendedCode::ObjectAttribute(ObjectAttribute::Pin(found))) => {
                pin = format!("{}-{}", found.refdes, found.name)
            }
            Command::ExtendedCode(ExtendedCode::DeleteAttribute(_)) => pin.clear(),
            Command::FunctionCode(FunctionCode::GCode(GCode::RegionMode(true))) => region = Some(Vec::new()),
            Command::FunctionCode(FunctionCode::GCode(GCode::RegionMode(false))) => {
                let rings: Vec<Ring> = region.take().unwrap().into_iter().map(closed).collect();
                let area = Region::union_of(&rings);
                let of_net = seen.nets.entry(net.clone()).or_default();
                if dark {
                    *of_net = of_net.union(&area);
                    seen.dark = seen.dark.union(&area);
                } else {
                    // Clearing erases whatever was drawn before, of any net.
                    seen.nets.values_mut().for_each(|region| *region = region.difference(&area));
                    seen.dark = seen.dark.difference(&area);
                }
            }
            Command::FunctionCode(FunctionCode::DCode(DCode::SelectAperture(code))) => aperture = *code,
            Command::FunctionCode(FunctionCode::DCode(DCode::Operation(operation))) => match (operation, &mut region) {
                (Operation::Move(Some(to)), Some(rings)) => rings.push(vec![at(to)]),
                (Operation::Interpolate(Some(to), None), Some(rings)) => rings.last_mut().unwrap().push(at(to)),
                (Operation::Move(Some(to)) | Operation::Interpolate(Some(to), None), None) => seen.profile.push(at(to)),
                (Operation::Flash(Some(to)), None) => {
                    seen.pads.push((at(to), format!("{net} {pin}").trim().to_string(), functions[&aperture].clone()));
                }
                other => panic!("unexpected {other:?}"),
            },
            _ => {}
        }
    }
    seen
}

/// Function and size of each aperture: an aperture keeps the function that was set when it was defined.
fn functions_of(commands: &[&Command]) -> BTreeMap<i32, String> {
    let mut function = String::new();
    let mut found = BTreeMap::new();
    for command in commands {
        match command {
            Command::ExtendedCode(ExtendedCode::ApertureAttribute(ApertureAttribute::ApertureFunction(set))) => {
                function = format!("{set:?}")
            }
            Command::ExtendedCode(ExtendedCode::ApertureDefinition(definition)) => {
                let size = match &definition.aperture {
                    Aperture::Circle(circle) => format!("{}", circle.diameter),
                    Aperture::Rectangle(rectangle) => format!("{} {}", rectangle.x, rectangle.y),
                    other => panic!("unexpected {other:?}"),
                };
                assert!(found.insert(definition.code, format!("{function} {size}")).is_none(), "aperture defined twice");
            }
            _ => {}
        }
    }
    found
}

fn at(to: &Coordinates) -> At {
    let nm = |value: CoordinateNumber| Nm((f64::from(value) * 1e6).round() as i64);
    At { x: nm(to.x.unwrap()), y: nm(to.y.unwrap()) }
}

/// A contour must come back to its very first vertex.
fn closed(mut ring: Vec<At>) -> Ring {
    assert!(ring.len() > 3 && ring.first() == ring.last(), "an open contour");
    ring.pop();
    ring
}

/// The dark area of a layer of the board.
fn drawn(board: &Board, layer: Layer) -> Region {
    board.layers[&layer].iter().fold(Region::default(), |all, shape| all.union(&Region::from_shape(shape)))
}

fn same(seen: &Region, wanted: &Region) {
    assert_eq!(seen.bounds(), wanted.bounds());
    let (more, less) = (seen.difference(wanted), wanted.difference(seen));
    // Both are whole nanometres and the polygon engine is exact on them: nothing may be left over.
    assert_eq!((more.area_m2(), less.area_m2()), (0.0, 0.0));
    assert!(seen.area_m2() > 0.0);
}

const LAYERS: [(Layer, &str); 5] = [
    (Layer::Copper(1), "-copper-l1-top.gbr"),
    (Layer::Copper(2), "-copper-l2-bottom.gbr"),
    (Layer::Mask(Face::Top), "-mask-top.gbr"),
    (Layer::Mask(Face::Bottom), "-mask-bottom.gbr"),
    (Layer::Legend(Face::Top), "-legend-top.gbr"),
];

#[test]
fn every_layer_reads_back_as_the_board() {
    let mut order = sample::order();
    order.board.mask = Mask::ClearOfFilter;
    order.board.text = TextOn::Legend;
    for made in [sample::made(&order), sample::made_by_hand(&order)] {
        let parent = tempfile::tempdir().unwrap();
        let folder = put(&sample::bundle(&made), parent.path(), How::default()).unwrap();
        for (layer, ending) in LAYERS {
            let seen = play(&folder.join(format!("{}{ending}", order.name)));
            same(&seen.dark, &drawn(&made.board, layer));
            if let Layer::Copper(number) = layer {
                let mut nets: BTreeMap<String, Region> = BTreeMap::new();
                for shape in &made.board.layers[&layer] {
                    let region = nets.entry(shape.net.clone()).or_default();
                    *region = region.union(&Region::from_shape(shape));
                }
                assert_eq!(seen.nets.keys().collect::<Vec<_>>(), nets.keys().collect::<Vec<_>>());
                for (net, region) in &nets {
                    same(&seen.nets[net], region);
                }
                let mut pads: Vec<(At, String, String)> = made
                    .board
                    .holes
                    .iter()
                    .filter(|hole| hole.pad > Nm::ZERO)
                    .map(|hole| (hole.at, hole.net.clone(), format!("ViaPad {}", hole.pad.mm())))
                    .collect();
                if number == 1 {
                    pads.extend(made.board.lands.iter().map(|land| {
                        let net = format!("{} {}-{}", land.net, land.pin.0, land.pin.1);
                        (land.at, net, format!("SmdPad(CopperDefined) {} {}", land.size[0].mm(), land.size[1].mm()))
                    }));
                }
                let mut found = seen.pads;
                pads.sort();
                found.sort();
                assert_eq!(found, pads);
            } else {
                assert!(seen.pads.is_empty() && seen.nets.keys().all(String::is_empty));
            }
        }
        let edge = play(&folder.join(format!("{}-profile.gbr", order.name)));
        let mut ring = made.board.outline.outer.clone();
        ring.push(ring[0]);
        assert_eq!(edge.profile, ring);
    }
}

#[test]
fn the_header_says_what_the_file_is() {
    let mut order = sample::order();
    order.date = Some("2026-05-04".into());
    order.revision = "B,2*%\u{3a9}".into();
    let made = sample::made_by_hand(&order);
    let parent = tempfile::tempdir().unwrap();
    let folder = put(&sample::bundle(&made), parent.path(), How::default()).unwrap();
    let head = play(&folder.join(format!("{}-copper-l2-bottom.gbr", order.name))).head;
    let text = format!("{head:?}");
    for wanted in
        ["GenerationSoftware", "2026-05-04T00:00:00+00:00", "Copper { layer: 2, pos: Bottom", "FilePolarity(Positive)", "Part(Single)"]
    {
        assert!(text.contains(wanted), "{wanted} is not in {text}");
    }
    // The delimiters of the format and what is not ASCII are escaped (specification 3.4.3).
    let raw = fs::read_to_string(folder.join(format!("{}-profile.gbr", order.name))).unwrap();
    assert!(raw.contains("B\\u002C2\\u002A\\u0025\\u03A9*%"), "{raw}");
    // Version 4 and variant bits of RFC 4122, and the same identifier in every file.
    let ident =
        head.iter().find_map(|a| if let FileAttribute::SameCoordinates(Some(Ident::Uuid(id))) = a { Some(*id) } else { None }).unwrap();
    assert_eq!((ident.get_version_num(), ident.get_variant()), (4, uuid::Variant::RFC4122));
    for entry in fs::read_dir(&folder).unwrap() {
        let path = entry.unwrap().path();
        if path.extension().is_some_and(|e| e == "gbr" || e == "drl") {
            assert!(fs::read_to_string(&path).unwrap().contains(&format!("TF.SameCoordinates,{ident}")), "{}", path.display());
        }
    }
    let mask = play(&folder.join(format!("{}-mask-top.gbr", order.name))).head;
    assert!(format!("{mask:?}").contains("FilePolarity(Negative)"));
}

#[test]
fn compensation_in_the_artwork_grows_the_strips_alone() {
    let mut order = sample::order();
    let plain = sample::made_by_hand(&order);
    order.shop.compensation = Compensation::InTheArtwork { per_edge_m: 20e-6 };
    let made = sample::made_by_hand(&order);
    let parent = tempfile::tempdir().unwrap();
    let folder = put(&sample::bundle(&made), parent.path(), How::default()).unwrap();
    let file = |ending: &str| play(&folder.join(format!("{}{ending}", order.name)));
    let res = &file("-copper-l1-top.gbr").nets["RES1"];
    // The hand-drawn resonator is 20 mm by 2 mm; 20 um on each edge.
    assert_eq!(res.bounds().unwrap(), [At::new(4_980_000, 8_980_000), At::new(25_020_000, 11_020_000)]);
    same(&file("-copper-l2-bottom.gbr").dark, &drawn(&plain.board, Layer::Copper(2)));
    let note = fs::read_to_string(folder.join(format!("{}-fabrication.txt", order.name))).unwrap();
    assert!(note.contains("by 20 um on each edge") && !note.contains("By the board house"), "{note}");
}
