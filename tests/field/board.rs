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

#[test]
fn explore() {
    let text = include_str!("../../templates/orders/edge-coupled.toml");
    let (order, _) = order::read(&Source::from_text("edge-coupled.toml", text), &stripwright::family::keys()).unwrap();
    let (made, _) = stripwright::make(&order).unwrap();
    let found = from_board(&order, &made.board).unwrap();
    let f: Vec<f64> = (0..301).map(|i| 2.1e9 + 2e6 * f64::from(i)).collect();
    let t = std::time::Instant::now();
    let plan = stripwright::field::Plan::new(&found.geometry, &f, stripwright::field::Options::default()).unwrap();
    println!("forecast {:?}", plan.forecast);
    let solution = plan.run(&f, |_| true).unwrap();
    println!(
        "{:?} bar {:?} solves {:?} N {:?} lines {:?}",
        t.elapsed(),
        solution.error_bar,
        solution.solves,
        solution.unknowns,
        solution.lines
    );
    let layout = stripwright::family::of(&order).unwrap().layout(&made.dimensions).unwrap();
    let network = stripwright::network::predict_at(&order, &layout, &f).unwrap();
    for i in (0..301).step_by(10) {
        println!(
            "{:.3} field {:.2} / {:.2} network {:.2} / {:.2}",
            f[i] / 1e9,
            solution.response.insertion_loss_db(i),
            solution.response.return_loss_db(i),
            network.insertion_loss_db(i),
            network.return_loss_db(i)
        );
    }
}
