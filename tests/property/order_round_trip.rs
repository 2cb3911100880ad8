//! Random orders and dimension sets are written and read back without losing a bit.

use proptest::prelude::*;
use proptest::sample::select;
use stripwright::base::{Dimensionality, Nm};
use stripwright::dimensions::{self, Dimension, Dimensions};
use stripwright::order::{
    self, Band, Below, BoardSize, Classes, Compensation, FamilyKeys, Filter, Grain, GroundOn, Housing, KeepOut, Key, LaunchShape, Limit,
    Mask, MountingHole, Order, OwnKind, OwnValue, Paper, Passes, PlatedEdgeRequest, Requirement, ResponseShape, RoughnessLaw, Side,
    SlotRequest, Source, StackLayer, TextOn,
};

/// Families of all kinds of band, one with keys of each kind.
const FAMILIES: &[FamilyKeys] = &[
    FamilyKeys { name: "band", passes: Passes::Band, degrees: (1, 12), keys: KEYS },
    FamilyKeys { name: "low", passes: Passes::Low, degrees: (1, 12), keys: &[] },
    FamilyKeys { name: "high", passes: Passes::High, degrees: (1, 12), keys: &[] },
    FamilyKeys { name: "stop", passes: Passes::Stop, degrees: (1, 12), keys: &[] },
];
const KEYS: &[Key] = &[
    Key { name: "tail", about: "a length", kind: OwnKind::Quantity(Dimensionality::Length), default: Some("0.5 mm") },
    Key { name: "folded", about: "a flag", kind: OwnKind::Flag, default: Some("false") },
    Key { name: "end", about: "a word", kind: OwnKind::OneOf(&["open", "shorted"]), default: Some("open") },
];

/// Ordinary text and text that needs care in a file.
fn text() -> impl Strategy<Value = String> {
    select(vec!["plain", "with \"quotes\"", "back\\slash", "# no comment", "'single'", "ünïcödé µ Ω", "[x]", "a = 1"])
        .prop_map(str::to_string)
}

fn filter() -> impl Strategy<Value = Filter> {
    (
        select(vec!["band", "low", "high", "stop"]),
        prop_oneof![Just(ResponseShape::MaximallyFlat), (1e-6..6.0f64).prop_map(|ripple_db| ResponseShape::EqualRipple { ripple_db })],
        (1e6..9e11f64, 1.0001..1.1f64),
        1.0..1000.0f64,
        1.0..1000.0f64,
        (1e-6..1.0f64, any::<bool>(), any::<bool>()),
    )
        .prop_map(|(family, response, (from_hz, ratio), one, two, (tail, folded, shorted))| {
            let to_hz = from_hz * ratio;
            let mut own = std::collections::BTreeMap::new();
            if family == "band" {
                own.insert("tail".to_string(), OwnValue::Number(tail, Dimensionality::Length));
                own.insert("folded".to_string(), OwnValue::Flag(folded));
                own.insert("end".to_string(), OwnValue::Word(if shorted { "shorted" } else { "open" }.to_string()));
            }
            let band = match family {
                "band" => Band::BandPass { from_hz, to_hz },
                "low" => Band::LowPass { cutoff_hz: from_hz },
                "high" => Band::HighPass { from_hz, to_hz },
                _ => Band::BandStop { from_hz, to_hz },
            };
            Filter { family: family.to_string(), response, band, degree: Some(3), ports_ohm: [one, two], own }
        })
}

prop_compose! {
    /// Any order that could have been read; its requirements lie where they make sense for every kind of band.
    fn order()(
        filter in filter(),
        texts in (text(), text(), text()),
        below in prop::collection::vec((text(), 1.0..100.0f64, 1e-5..25e-3f64, 0.0..5e-3f64, 1e-7..5e-4f64), 0..3),
        extras in (any::<bool>(), 0.0..0.5f64, any::<bool>(), any::<bool>()),
        head in (1u8..=3, proptest::option::of(select(vec!["2026-05-04", "2024-02-29"]))),
        classes in (0usize..12, 0usize..3, 0usize..4),
        laminate in (1.5..50.0f64, 0.0..0.4f64, 0.0..0.5f64, 1e-6..25e-3f64, 0.0..0.9f64, proptest::option::of(1.0..100.0f64)),
        copper in (0.1e-6..500e-6f64, 0.0..500e-6f64, 0.0..20e-6f64, 1e6..65e6f64),
        per_edge in proptest::option::of(1e-7..2e-4f64),
        board in (any::<bool>(), 0.0..0.2f64, any::<bool>(), -1.0..1.0f64, any::<bool>()),
        housing in proptest::option::of(5e-5..0.5f64),
        limits in (0.001..200.0f64, 0.001..200.0f64, any::<bool>(), 1e-15..1e-3f64),
    ) -> Order {
        let known = Classes::embedded();
        let mut laminate_class = known.laminates[classes.0].laminate.clone();
        (laminate_class.permittivity, laminate_class.permittivity_tolerance) = (laminate.0, laminate.1);
        (laminate_class.loss_tangent, laminate_class.thickness_m) = (laminate.2, laminate.3);
        (laminate_class.thickness_tolerance_m, laminate_class.in_plane_permittivity) = (laminate.3 * laminate.4, laminate.5);
        let c = &mut laminate_class.copper;
        (c.base_m, c.plating_m, c.roughness_m, c.conductivity_s_per_m) = copper;
        if board.2 {
            c.roughness_law = RoughnessLaw::StackedSpheres { ten_point_height_m: 5.0 * copper.2 };
        }
        let mut shop = known.shops[classes.1].clone();
        shop.compensation = per_edge.map_or(Compensation::ByTheShop, |per_edge_m| Compensation::InTheArtwork { per_edge_m });
        let (from_hz, to_hz) = match filter.band {
            Band::LowPass { cutoff_hz } => (cutoff_hz * 0.5, cutoff_hz * 0.9),
            Band::HighPass { from_hz, to_hz } | Band::BandPass { from_hz, to_hz } => (from_hz, to_hz),
            Band::BandStop { from_hz, .. } => (from_hz * 0.5, from_hz * 0.9),
        };
        let from_hz = from_hz.max(1e6);
        let requirements = if from_hz < to_hz {
            vec![Requirement {
                from_hz,
                to_hz,
                limits: vec![
                    Limit::InsertionLossAtMost(limits.0),
                    Limit::ReturnLossAtLeast(limits.1),
                    Limit::GroupDelayVariationAtMost(limits.3),
                ],
            }]
        } else {
            Vec::new()
        };
        let ground = if below.is_empty() && extras.0 { GroundOn::Carrier } else { GroundOn::Layer2 };
        let below: Vec<Below> = below
            .into_iter()
            .map(|(material, permittivity, thickness_m, thickness_tolerance_m, copper_m)| Below {
                material, permittivity, thickness_m, thickness_tolerance_m, copper_m,
            })
            .collect();
        // A launch that clamps the edge needs a ground on the board.
        let launches: Vec<_> =
            known.launches.iter().filter(|l| ground == GroundOn::Layer2 || !matches!(l.shape, LaunchShape::EdgeCoax { .. })).collect();
        let mut request = order::BoardRequest {
            thickness_m: 0.0,
            thickness_tolerance_m: extras.1 / 10.0,
            outline_tolerance_m: 0.15e-3 + extras.1 / 10.0,
            grain: if extras.2 { Grain::Any } else { Grain::AcrossPorts },
            ground,
            below,
            slots: vec![SlotRequest { from_m: [0.01, 0.02], to_m: [0.03, 0.02 + extras.1 / 10.0], width_m: 1e-3 + extras.1 / 100.0, plated: extras.2 }],
            plated_edges: vec![PlatedEdgeRequest { side: Side::Bottom, from_m: extras.1 / 3.0, to_m: 0.2 }],
            launch: launches[classes.2 % launches.len()].clone(),
            mask: if board.0 { Mask::None } else { Mask::ClearOfFilter },
            size: if board.2 { BoardSize::Fixed([0.5, 0.123_456_789]) } else { BoardSize::Margin(board.1) },
            outline: board.4,
            port_side: if board.0 { [Side::Left, Side::Right] } else { [Side::Top, Side::Bottom] },
            port_offset_m: board.3,
            level: board.2,
            text: if board.0 { TextOn::Copper } else { TextOn::None },
            mounting_holes: Vec::new(),
            keep_outs: Vec::new(),
        };
        if board.4 {
            request.mounting_holes.push(MountingHole { at_m: [0.01 + board.1 / 10.0, 0.02], diameter_m: 3.2e-3 });
            request.keep_outs.push(KeepOut { from_m: [0.0, board.1], to_m: [0.1, 0.3] });
            request.size = BoardSize::Margin(board.1);
        }
        let mut order = Order {
            name: "any-order-2".to_string(),
            title: texts.0,
            part_number: texts.1,
            contact: texts.2,
            acceptance_class: head.0,
            paper: if extras.3 { Paper::A4 } else { Paper::Letter },
            revision: "B".to_string(),
            date: head.1.map(str::to_string),
            classes: None,
            filter,
            requirements,
            laminate: laminate_class,
            shop,
            board: request,
            housing: housing
                .map(|lid| Housing { lid_m: Some(lid), inside_m: (limits.2 && ground == GroundOn::Layer2).then_some([0.07, 0.03]) }),
            defaults: Vec::new(),
        };
        // As near to the stack as its tolerance asks: exactly.
        order.board.thickness_m = order.stack().iter().map(StackLayer::thickness_m).sum();
        order
    }
}

proptest! {
    // 300 orders a run take about a second; more of them found nothing further.
    #![proptest_config(ProptestConfig { cases: 300, failure_persistence: None, rng_seed: proptest::test_runner::RngSeed::Fixed(20_261_201), ..ProptestConfig::default() })]

    #[test]
    fn an_order_is_read_back_to_the_last_bit(order in order()) {
        let text = order::write(&order);
        let read = order::read(&Source::from_text("order.toml", text.clone()), FAMILIES);
        let (again, _) = match read {
            Ok(read) => read,
            Err(problems) => return Err(TestCaseError::fail(format!("{problems:#?}\n{text}"))),
        };
        prop_assert_eq!(&again, &order);
        prop_assert_eq!(order::write(&again), text);
    }

    #[test]
    fn a_dimension_set_is_read_back_to_the_last_bit(
        order in order(),
        list in prop::collection::vec((1i64..1_000_000, -1.0..1.0f64, any::<f64>(), -1e-3..1e-3f64), 1..12),
    ) {
        let grid = Nm::from_m(order.shop.grid_m);
        let list: Vec<_> = list.into_iter().enumerate().map(|(i, (steps, guess, target, by))| Dimension {
            name: format!("section {} \"gap\"", i + 1),
            value_m: Nm(steps * grid.0).m(),
            first_guess_m: guess,
            serves: vec![("Z0e ohm".to_string(), if target.is_finite() { target } else { 1.0 }), ("Q=\"e\"".to_string(), 12.5)],
            corrections_m: vec![("open end".to_string(), by), ("snap".to_string(), 0.0)],
        }).collect();
        let names: Vec<_> = list.iter().map(|d| d.name.clone()).collect();
        let set = Dimensions { order, degree: 3, list };
        let text = dimensions::write(&set);
        let read = dimensions::read(&Source::from_text("dimensions.toml", text.clone()), FAMILIES, &|_, _| names.clone());
        let (again, _) = match read {
            Ok(read) => read,
            Err(problems) => return Err(TestCaseError::fail(format!("{problems:#?}\n{text}"))),
        };
        prop_assert_eq!(&again, &set);
        prop_assert_eq!(dimensions::write(&again), text);
    }
}

#[test]
fn defaults_are_remembered_over_any_number_of_rounds() {
    let starter = include_str!("../../templates/orders/edge-coupled.toml");
    let (first, _) = order::read(&Source::from_text("order.toml", starter), &stripwright::family::keys()).unwrap();
    for key in [
        "filter.degree",
        "laminate.permittivity",
        "laminate.copper.base",
        "shop.grid",
        "launch.pad-width",
        "board.text",
        "board.thickness",
        "board.grain",
        "order.contact",
    ] {
        assert!(first.defaults.iter().any(|d| d == key), "{key}");
    }
    assert!(!first.defaults.iter().any(|d| d == "laminate.thickness" || d == "filter.passband"));
    let text = order::write(&first);
    let (second, warnings) = order::read(&Source::from_text("order.toml", text.clone()), &stripwright::family::keys()).unwrap();
    assert_eq!(warnings, []);
    assert_eq!(second, first);
    assert_eq!(order::write(&second), text);
    // A degree that was only chosen is no order for it.
    let chosen = text.replace("[filter]\n", "[filter]\ndegree = 7\n");
    let (third, _) = order::read(&Source::from_text("order.toml", chosen), &stripwright::family::keys()).unwrap();
    assert_eq!(third.filter.degree, None);
    // A changed class beside values that stay is said, and the value in the file counts.
    let other = text.replace("class = \"ceramic-ptfe-3.0\"", "class = \"ptfe-glass-2.2\"");
    let (fourth, warnings) = order::read(&Source::from_text("order.toml", other), &stripwright::family::keys()).unwrap();
    assert!(warnings.iter().any(|w| w.code == "resolved-differs" && w.message.contains("permittivity")), "{warnings:#?}");
    assert_eq!(fourth.laminate.permittivity, 3.0);
    assert!(!fourth.defaults.iter().any(|d| d == "laminate.permittivity"));
}

#[test]
fn the_embedded_classes_have_no_fault() {
    assert_eq!(Classes::embedded_faults(), [] as [String; 0]);
    let classes = Classes::embedded();
    assert!(classes.laminates.len() >= 10 && classes.shops.len() >= 3 && classes.launches.len() >= 4);
    for class in &classes.laminates {
        assert!(class.laminate.about.contains("typical, replace by your supplier's"), "{}", class.laminate.class);
        // Half a micrometre: the class's own thickness is one of those on the shelf, written the same.
        assert!(class.thicknesses_m.iter().any(|t| (t - class.laminate.thickness_m).abs() < 0.5e-6), "{}", class.laminate.class);
    }
}
