//! Whatever a family lays out, whichever way it is placed: sound copper, the nets it expects, and no gap smaller than the one ordered.

use stripwright::artwork::shape::Region;
use stripwright::artwork::{Layer, Role, board};
use stripwright::layout::Part;
use stripwright::order::*;

use crate::rules::found_in;
use crate::sample;

/// Rules about what the program draws, not about what was ordered: none may ever speak.
const OURS: [&str; 9] = [
    "polygon-unsound",
    "nets-not-as-expected",
    "sliver",
    "acute-angle",
    "text-below-minimum",
    "copper-too-near-edge",
    "hole-to-hole-below-minimum",
    "annular-ring-below-minimum",
    "keep-out-entered",
];

#[test]
fn random_orders_give_sound_boards() {
    let mut state = 20_261_201_u64; // The seed; the same orders every time.
    let mut draw = move || {
        state ^= state << 13;
        state ^= state >> 7;
        state ^= state << 17;
        (state >> 11) as f64 / (1u64 << 53) as f64
    };
    let mut made = 0;
    for round in 0..60 {
        let mut order = sample::order();
        let (f0_hz, width) = (1e9 + 11e9 * draw(), 0.03 + 0.17 * draw());
        let degree = 2 + (draw() * 6.0) as usize;
        order.filter.band = Band::BandPass { from_hz: f0_hz * (1.0 - 0.5 * width), to_hz: f0_hz * (1.0 + 0.5 * width) };
        order.filter.degree = Some(degree);
        order.requirements.clear();
        order.laminate.permittivity = 2.2 + 8.0 * draw();
        let pick = |n: usize, x: f64| ((x * n as f64) as usize).min(n - 1);
        order.laminate.thickness_m = [0.254e-3, 0.508e-3, 0.762e-3, 1.524e-3][pick(4, draw())];
        order.board.level = draw() < 0.5;
        order.board.mask = [Mask::None, Mask::ClearOfFilter][pick(2, draw())];
        order.board.text = [TextOn::Legend, TextOn::Copper, TextOn::None][pick(3, draw())];
        order.board.port_side =
            [[Side::Left, Side::Right], [Side::Right, Side::Left], [Side::Top, Side::Bottom], [Side::Bottom, Side::Top]][pick(4, draw())];
        match pick(3, draw()) {
            0 => order.board.launch.shape = LaunchShape::Open,
            1 => order.board.launch.shape = LaunchShape::Pads { pad_length_m: 3e-3, pad_width_m: 2e-3 },
            _ => {}
        }
        let family = stripwright::family::of(&order).unwrap();
        // An order whose geometry does not exist is the family's to refuse.
        let Ok((set, _)) = family.first_guess(&order, degree) else { continue };
        let layout = family.layout(&set).unwrap();
        let (drawn, _) = board(&order, &layout).unwrap();
        made += 1;
        for problem in found_in(&order, &layout, &drawn) {
            assert!(!OURS.contains(&problem.code), "order {round}: {problem}");
        }
        let least = layout.parts.iter().filter_map(|placed| match &placed.part {
            Part::Lines { gaps, .. } => gaps.iter().min(),
            _ => None,
        });
        let least_m = least.min().unwrap().m();
        let strips: Vec<Region> =
            drawn.layers[&Layer::Copper(1)].iter().filter(|s| s.role == Role::Circuit).map(Region::from_shape).collect();
        for (i, one) in strips.iter().enumerate() {
            for other in &strips[i + 1..] {
                // A turn rounds each corner by half a nanometre.
                assert!(one.closest_to(other).unwrap().distance_m >= least_m - 2e-9, "order {round}: strips nearer than the smallest gap");
            }
        }
    }
    // At least half, or the test would say little.
    assert!(made >= 30, "only {made} of 60 orders gave a layout");
}
