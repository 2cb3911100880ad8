//! Does the board hold exactly the copper the layout asks for, and do the design rules see what they should?

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

mod sample;

use stripwright::artwork::shape::Region;
use stripwright::artwork::{Layer, Role, board};

#[test]
fn a_degree_3_board_has_five_islands() {
    let (board, warnings) = board(&sample::order(), &sample::degree_3()).unwrap();
    assert_eq!(warnings, vec![]);
    let strips: Vec<_> = board.layers[&Layer::Copper(1)].iter().filter(|s| s.role == Role::Circuit).collect();
    assert_eq!(strips.iter().map(|s| s.net.as_str()).collect::<Vec<_>>(), ["PORT1", "RES1", "RES2", "RES3", "PORT2"]);
    for (i, one) in strips.iter().enumerate() {
        for other in &strips[i + 1..] {
            let closest = Region::from_shape(one).closest_to(&Region::from_shape(other)).unwrap();
            assert!(closest.distance_m >= 0.15e-3 - 2e-9, "{} {} {closest:?}", one.net, other.net);
        }
    }
}
