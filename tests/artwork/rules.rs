//! Rules: quiet on a good board, and each found on a board made to break it.

use std::collections::BTreeSet;

use stripwright::artwork::{Board, Hole, HoleUse, Layer, Role, Shape};
use stripwright::base::{Nm, Place, Point, Problem, Severity};
use stripwright::checks::{RULES, Subject, run};
use stripwright::dimensions::Dimensions;
use stripwright::layout::Layout;
use stripwright::network::{Figures, Method, Response};
use stripwright::order::*;

use crate::sample;
use crate::sample::board;

fn found(order: &Order, layout: &Layout, board: &Board) -> Vec<Problem> {
    found_in(order, &sample::launched(order, layout), board)
}

pub fn found_in(order: &Order, layout: &Layout, board: &Board) -> Vec<Problem> {
    let dimensions = Dimensions { order: order.clone(), degree: 3, list: vec![] };
    let response = Response { method: Method::Network, z0_ohm: [50.0; 2], f_hz: vec![], s: vec![] };
    let figures = Figures {
        center_hz: 3e9,
        center_loss_db: 1.0,
        edges_3db_hz: Vec::new(),
        ripple_edges_hz: Vec::new(),
        worst_loss_db: 1.0,
        return_loss_db: 16.0,
        group_delay_s: 1e-9,
        spurious_hz: None,
        verdicts: vec![],
    };
    run(&Subject { dimensions: &dimensions, layout, board, response: &response, figures: &figures })
}

fn found_on(order: &Order, layout: &Layout) -> Vec<Problem> {
    found(order, layout, &board(order, layout).unwrap().0)
}

/// Asserts that the rule speaks with this severity, and names value, limit and source.
fn fires(problems: &[Problem], code: &str, severity: Severity) {
    let problem = problems.iter().find(|p| p.code == code && p.severity == severity);
    let Some(problem) = problem else { panic!("{code} is silent; found {problems:#?}") };
    assert!(!problem.source.is_empty() && !problem.help.is_empty(), "{problem:?}");
    SEEN.with(|seen| seen.borrow_mut().insert(problem.code));
}

thread_local! {
    static SEEN: std::cell::RefCell<BTreeSet<&'static str>> = const { std::cell::RefCell::new(BTreeSet::new()) };
}

/// An order that breaks nothing: the sample with a pad as wide as its feed.
fn good() -> Order {
    let mut order = sample::order();
    if let LaunchShape::EdgeCoax { pad_width_m, .. } = &mut order.board.launch.shape {
        *pad_width_m = 1.9e-3;
    }
    order
}

#[test]
fn a_good_board_has_no_findings() {
    for level in [false, true] {
        for text in [TextOn::Legend, TextOn::Copper, TextOn::None] {
            for mask in [Mask::None, Mask::ClearOfFilter] {
                let mut order = good();
                (order.board.level, order.board.text, order.board.mask) = (level, text, mask);
                assert_eq!(found_on(&order, &sample::degree_3()), vec![], "level {level} {text:?} {mask:?}");
                assert_eq!(found_on(&order, &sample::degree_7()), vec![], "level {level} {text:?} {mask:?}");
            }
        }
    }
    let mut open = good();
    open.board.launch.shape = LaunchShape::Open;
    assert_eq!(found_on(&open, &sample::degree_3()), vec![]);
    let mut pads = good();
    pads.board.launch.shape = LaunchShape::Pads { pad_length_m: 3e-3, pad_width_m: 2.5e-3 };
    assert_eq!(found_on(&pads, &sample::degree_3()), vec![]);
    let mut housed = good();
    housed.housing = Some(Housing { lid_m: Some(10e-3), inside_m: Some([72e-3, 30e-3]) });
    assert_eq!(found_on(&housed, &sample::degree_3()), vec![]);
}

/// One change to a good order, layout or board for each rule; at the end every rule has spoken.
#[test]
fn every_rule_is_found_on_a_board_made_to_break_it() {
    use Severity::{Error, Warning};
    let layout = sample::degree_3();
    let good = good();
    let clean = board(&good, &layout).unwrap().0;
    let ordered = |change: &dyn Fn(&mut Order)| {
        let mut order = good.clone();
        change(&mut order);
        found_on(&order, &layout)
    };
    let drawn = |change: &dyn Fn(&mut Board)| {
        let mut board = clean.clone();
        change(&mut board);
        found(&good, &layout, &board)
    };

    // What the shop can make: the board is good, the shop is not.
    fires(&ordered(&|o| o.shop.line_m = 1.7e-3), "line-below-minimum", Error);
    fires(&ordered(&|o| o.shop.gap_m = 0.16e-3), "gap-below-minimum", Error);
    fires(&ordered(&|o| o.shop.hole_m = 0.5e-3), "hole-below-minimum", Error);
    fires(&ordered(&|o| o.shop.aspect_ratio = 2.0), "aspect-ratio-above-limit", Error);
    fires(&ordered(&|o| o.shop.annular_ring_m = 0.3e-3), "annular-ring-below-minimum", Error);
    fires(&ordered(&|o| o.shop.hole_to_hole_m = 0.9e-3), "hole-to-hole-below-minimum", Error);
    fires(&ordered(&|o| o.shop.panel_m = [70e-3, 70e-3]), "board-above-panel", Error);
    // 0.15 mm is met finished, and missed by an artwork that is 0.01 mm larger all round: the finding says which.
    let compensated = ordered(&|o| o.shop.compensation = Compensation::InTheArtwork { per_edge_m: 0.01e-3 });
    fires(&compensated, "gap-below-minimum", Error);
    assert!(compensated.iter().all(|p| p.message.contains("in the compensated artwork")), "{compensated:#?}");

    // What was drawn.
    let add = |board: &mut Board, layer: Layer, role: Role, net: &str, ring: &[(i64, i64)]| {
        let outer = ring.iter().map(|&(x, y)| Point::new(x, y)).collect();
        board.layers.entry(layer).or_default().push(Shape { outer, voids: vec![], role, net: net.into() });
    };
    let box_ = |x: i64, y: i64, w: i64, h: i64| [(x, y), (x + w, y), (x + w, y + h), (x, y + h)];
    fires(
        &drawn(&|b| add(b, Layer::Copper(1), Role::Circuit, "RES9", &box_(2_000_000, 2_000_000, 1_000_000, 1_000_000))),
        "nets-not-as-expected",
        Error,
    );
    fires(&drawn(&|b| add(b, Layer::Copper(1), Role::Ground, "GND", &box_(2_000_000, 2_000_000, 1_000_000, 50_000))), "sliver", Error);
    fires(
        &drawn(&|b| {
            add(b, Layer::Copper(1), Role::Ground, "GND", &[(2_000_000, 2_000_000), (4_000_000, 2_000_000), (4_000_000, 3_000_000)])
        }),
        "acute-angle",
        Warning,
    );
    fires(
        &drawn(&|b| add(b, Layer::Copper(1), Role::Ground, "GND", &box_(40_000_000, 100_000, 1_000_000, 1_000_000))),
        "copper-too-near-edge",
        Error,
    );
    fires(
        &drawn(&|b| {
            add(
                b,
                Layer::Copper(1),
                Role::Ground,
                "GND",
                &[(2_000_000, 2_000_000), (4_000_000, 4_000_000), (4_000_000, 2_000_000), (2_000_000, 4_000_000)],
            )
        }),
        "polygon-unsound",
        Error,
    );
    fires(
        &drawn(&|b| {
            add(b, Layer::Legend(stripwright::artwork::Face::Top), Role::Text, "", &box_(2_000_000, 2_000_000, 2_000_000, 100_000))
        }),
        "text-below-minimum",
        Error,
    );
    let in_strip = |b: &mut Board| {
        let at = Point { x: b.circuit[0].x + Nm(12_000_000), y: b.circuit[0].y + Nm(900_000) };
        b.holes.push(Hole { at, diameter: Nm(1_000_000), pad: Nm(0), purpose: HoleUse::Mounting, net: String::new() });
    };
    fires(&drawn(&in_strip), "copper-too-near-hole", Error);
    fires(&ordered(&|o| o.board.keep_outs = vec![KeepOut { from_m: [30e-3, 10e-3], to_m: [31e-3, 20e-3] }]), "keep-out-entered", Error);

    // Launches.
    let launch = |change: &dyn Fn(&mut LaunchShape)| ordered(&|o| change(&mut o.board.launch.shape));
    fires(&ordered(&|o| o.laminate.thickness_m = 0.254e-3), "launch-thickness-unsuited", Error);
    let up_to = |f_hz: f64| {
        launch(&move |shape| {
            if let LaunchShape::EdgeCoax { up_to_hz, .. } = shape {
                *up_to_hz = f_hz;
            }
        })
    };
    fires(&up_to(3.5e9), "launch-frequency-exceeded", Warning);
    fires(&up_to(3.0e9), "launch-frequency-exceeded", Error);
    let pad = |width_m: f64| {
        launch(&move |shape| {
            if let LaunchShape::EdgeCoax { pad_width_m, .. } = shape {
                *pad_width_m = width_m;
            }
        })
    };
    fires(&pad(1.0e-3), "launch-misfit", Warning);
    fires(
        &launch(&|shape| {
            if let LaunchShape::EdgeCoax { ground_width_m, .. } = shape {
                *ground_width_m = 0.8e-3;
            }
        }),
        "launch-misfit",
        Error,
    );

    // Microwave sense.
    let short = sample::staircase(1900, &[1600, 1800, 1800, 1600], &[150, 600, 600, 150], 3_000);
    fires(&found_on(&good, &short), "section-shorter-than-wide", Warning);
    let shorter = sample::staircase(1900, &[1600, 1800, 1800, 1600], &[150, 600, 600, 150], 1_500);
    fires(&found_on(&good, &shorter), "section-shorter-than-wide", Error);
    let at = |top_hz: f64, highest_hz: f64| {
        ordered(&move |o| {
            o.filter.band = Band::BandPass { from_hz: 0.95 * top_hz, to_hz: top_hz };
            o.requirements[0].to_hz = highest_hz;
        })
    };
    // The widest strip, 1.9 mm, is half a wave across at c / (sqrt(3) (3.8 + 0.61) mm) = 39.2 GHz, a quarter at 19.6 GHz.
    fires(&at(10e9, 40e9), "transverse-resonance", Warning);
    fires(&at(20e9, 21e9), "transverse-resonance", Error);
    // TM0 on 0.762 mm of er 3: c atan(3) / (sqrt(2) pi h sqrt(2)) = 78.2 GHz; TE1: c / (4 h sqrt(2)) = 69.5 GHz.
    fires(&at(10e9, 70e9), "surface-mode", Warning);
    assert!(!at(10e9, 69e9).iter().any(|p| p.code == "surface-mode"));
    fires(&at(70e9, 71e9), "surface-mode", Error);
    let housed = |lid_mm: f64, inside_mm: [f64; 2]| {
        ordered(&move |o| o.housing = Some(Housing { lid_m: Some(lid_mm * 1e-3), inside_m: Some(inside_mm.map(|v| v * 1e-3)) }))
    };
    fires(&housed(3.0, [72.0, 30.0]), "lid-too-near", Warning);
    fires(&housed(0.5, [72.0, 30.0]), "lid-too-near", Error);
    // The resonators reach over 60 mm of the 70 mm: 1.5 mm is 2 h, 0.5 mm is 0.7 h.
    fires(&housed(10.0, [63.0, 30.0]), "wall-too-near", Warning);
    fires(&housed(10.0, [61.0, 30.0]), "wall-too-near", Error);
    // 110 mm x 50 mm: c / 2 sqrt(1 / 0.11^2 + 1 / 0.05^2) = 3.29 GHz empty, less with laminate: above the band, below 4 GHz.
    fires(&housed(10.0, [110.0, 50.0]), "box-resonance", Warning);
    fires(&housed(10.0, [110.0, 60.0]), "box-resonance", Error);

    let silent: Vec<_> = RULES.iter().map(|r| r.code).filter(|code| SEEN.with(|seen| !seen.borrow().contains(code))).collect();
    assert_eq!(silent, Vec::<&str>::new(), "rules this test does not break");
}

#[test]
fn an_absurd_order_is_refused_for_its_physics() {
    // 38 GHz on 1.6 mm of glass-epoxy: 50 ohm needs about 3 mm, a quarter wave is about 1.1 mm.
    let mut order = good();
    order.filter.band = Band::BandPass { from_hz: 37e9, to_hz: 39e9 };
    order.requirements = vec![];
    order.laminate.kind = LaminateKind::GlassEpoxy;
    order.laminate.permittivity = 4.3;
    order.laminate.thickness_m = 1.6e-3;
    let layout = sample::staircase(3000, &[2600, 2900, 2900, 2600], &[150, 600, 600, 150], 1_050);
    let problems = found_on(&order, &layout);
    for code in ["section-shorter-than-wide", "transverse-resonance", "surface-mode", "launch-frequency-exceeded"] {
        fires(&problems, code, Severity::Error);
    }
}

#[test]
fn findings_say_where() {
    let mut order = good();
    order.shop.gap_m = 0.16e-3;
    let problems = found_on(&order, &sample::degree_3());
    assert_eq!(problems.len(), 2, "the two gaps of 0.15 mm, not those of 0.6 mm: {problems:#?}");
    for problem in &problems {
        let Place::Board(at) = problem.place else { panic!("{problem:?}") };
        assert!(at.x > Nm(0) && at.y > Nm(0));
        assert!(problem.message.contains("0.150 mm") && problem.message.contains("0.160 mm"), "{}", problem.message);
    }
}

#[test]
fn every_rule_has_a_code_of_its_own_a_line_and_a_source() {
    let codes: BTreeSet<_> = RULES.iter().map(|r| r.code).collect();
    assert_eq!(codes.len(), RULES.len());
    assert!(RULES.iter().all(|r| !r.about.is_empty() && !r.source.is_empty()));
}
