//! Writes the hand-drawn board of the reader tests as a package, to be looked at with other readers: `cargo run --example package_by_hand OUT`.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

#[path = "../tests/readers/sample.rs"]
mod sample;

use std::path::Path;

use stripwright::package::{How, put};

fn main() {
    let parent = std::env::args().nth(1).expect("a folder");
    let mut order = sample::order();
    order.date = Some("2026-05-04".into());
    let (parent, how) = (Path::new(&parent), How { replace: true, ..How::default() });
    println!("{}", put(&sample::Sample::by_hand(order.clone()).bundle(), parent, how).unwrap().display());
    order.name = "drawn".into();
    order.board.mask = stripwright::order::Mask::ClearOfFilter;
    order.board.mounting_holes = vec![stripwright::order::MountingHole { at_m: [3.0e-3, 3.0e-3], diameter_m: 2.2e-3 }];
    println!("{}", put(&sample::Sample::drawn(order).bundle(), parent, how).unwrap().display());
}
