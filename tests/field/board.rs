//! A board as drawn for an order becomes a geometry with the board's own reference planes.

use stripwright::field::{Mesh, from_board};
use stripwright::order::{self, Source};

#[test]
fn the_starter_order_of_the_edge_coupled_family() {
    let text = include_str!("../../templates/orders/edge-coupled.toml");
    let (order, _) = order::read(&Source::from_text("edge-coupled.toml", text), &stripwright::family::keys()).unwrap();
    let (made, _) = stripwright::make(&order).unwrap();
    let found = from_board(&order, &made.board).unwrap();
    println!("{:?}", found.notes);
    assert!(found.geometry.problems().is_empty());
    // As many conductors as the family expects, feeds included.
    assert_eq!(found.geometry.copper.pieces.len(), made.board.expected_nets);
    let mesh = Mesh::new(&found.geometry, 3e9, 1.0, 0.1e-3).unwrap();
    assert_eq!((mesh.feed_of_port.len(), mesh.structure.sources.len()), (2, 2));
}
