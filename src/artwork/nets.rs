//! Which copper is one net: names by what is joined in the final copper, not by what the filter's topology says.

use crate::artwork::Role;
use crate::artwork::Shape;
use crate::artwork::shape::Piece;
use crate::artwork::shape::Region;
use crate::base::Point;

/// Name of the ground net.
pub(super) const GROUND: &str = "GND";

/// The signal copper as shapes with nets, in the order of the circuit from port 1.
///
/// A piece that touches ground copper or a plated hole is `GND`; one that reaches port 1 (whether or not it reaches port 2 as well) is
/// `PORT1`, one that reaches port 2 `PORT2`; the others are `RES1`, `RES2`, .. along the way from port 1 to port 2.
pub(super) fn named(signal: &Region, ground: &Region, plated: &[Point], touch: [Point; 2]) -> Vec<Shape> {
    let away = |piece: &Piece| {
        let along = |p: &Point| {
            let way = (touch[1].x.0 - touch[0].x.0, touch[1].y.0 - touch[0].y.0);
            i128::from(p.x.0 - touch[0].x.0) * i128::from(way.0) + i128::from(p.y.0 - touch[0].y.0) * i128::from(way.1)
        };
        let ends = piece.outer.iter().map(along);
        (ends.clone().min().unwrap_or(0), ends.max().unwrap_or(0))
    };
    let mut pieces: Vec<&Piece> = signal.pieces.iter().collect();
    pieces.sort_by_key(|piece| (away(piece), (*piece).clone()));
    let mut resonators = 0;
    pieces
        .into_iter()
        .map(|piece| {
            let grounded = plated.iter().any(|&at| piece.contains(at))
                || piece.region().closest_to(ground).is_some_and(|closest| closest.distance_m == 0.0);
            let net = if grounded {
                GROUND.to_string()
            } else if piece.contains(touch[0]) {
                "PORT1".to_string()
            } else if piece.contains(touch[1]) {
                "PORT2".to_string()
            } else {
                resonators += 1;
                format!("RES{resonators}")
            };
            Shape { outer: piece.outer.clone(), voids: piece.voids.clone(), role: Role::Circuit, net }
        })
        .collect()
}
