//! Energy, reciprocity, open ends, box resonances, and the split between near and far.

use stripwright::base::Point;
use stripwright::field::{Axis, GeometryPort, Options, Patch, Plan, PortPlace, Solver, Source, Split, Stack, Structure, Top};
use stripwright::order::Side;

use crate::sample::{analysis, geometry, layer, mm, stack, through, wall};

/// A line with an open stub and a gap-coupled neighbour.
fn stub() -> stripwright::field::Geometry {
    let ports = vec![wall(Side::Left, 6.0, 9.0), wall(Side::Right, 6.0, 9.0)];
    let rectangles = [[0.0, 5.4, 30.0, 6.6], [14.0, 6.6, 15.0, 10.5], [10.0, 4.2, 20.0, 5.2]];
    geometry(stack(3.5, 0.508, 8.0), [30.0, 12.0], &rectangles, ports)
}

#[test]
fn energy_and_reciprocity() {
    let solver = analysis(&stub(), 8e9, 1.0, Split::default());
    for f in [1e9, 3e9, 5.5e9, 7.9e9] {
        let s = solver.at(f).unwrap().s;
        // Lossless: the sums are one to the rounding of the near part's sums, as the matrix is real.
        for (a, b) in [(0, 2), (1, 3)] {
            assert!((s[a].norm_sqr() + s[b].norm_sqr() - 1.0).abs() < 1e-6, "{f}: {s:?}");
        }
        assert!((s[1] - s[2]).norm() < 1e-10, "{f}: {s:?}");
    }
}

#[test]
fn where_near_and_far_part_meet_does_not_matter() {
    let more = Split { layer_decay: 12.0, gaussian: 4.5 };
    let (one, two) = (analysis(&stub(), 8e9, 1.0, Split::default()), analysis(&stub(), 8e9, 1.0, more));
    for f in [2e9, 6e9] {
        let (a, b) = (one.at(f).unwrap().s, two.at(f).unwrap().s);
        for (x, y) in a.iter().zip(&b) {
            // The accuracy the default split claims.
            assert!((x - y).norm() < 1e-6, "{f}: {x} {y}");
        }
    }
}

#[test]
fn a_symmetric_board_turned_upside_down_is_the_same() {
    let mut turned = stub();
    let (a, b) = (turned.size[0], turned.size[1]);
    turned.copper = turned.copper.mapped(|p| Point { x: a - p.x, y: b - p.y });
    let (one, two) = (analysis(&stub(), 6e9, 1.0, Split::default()), analysis(&turned, 6e9, 1.0, Split::default()));
    let (s, t) = (one.at(4e9).unwrap().s, two.at(4e9).unwrap().s);
    // Only the rounding of the mesh differs.
    assert!((s[0] - t[3]).norm() < 1e-6 && (s[3] - t[0]).norm() < 1e-6 && (s[1] - t[2]).norm() < 1e-6);
}

#[test]
fn ports_along_y_equal_ports_along_x() {
    let along_x = stub();
    let mut along_y = along_x.clone();
    along_y.size = [along_x.size[1], along_x.size[0]];
    // A swap of x and y mirrors; the union needs its rings turned round again.
    let rings: Vec<Vec<Point>> = along_x.copper.pieces.iter().map(|p| p.outer.iter().map(|q| Point { x: q.y, y: q.x }).collect()).collect();
    along_y.copper = stripwright::artwork::shape::Region::union_of(&rings);
    along_y.ports = vec![wall(Side::Bottom, 6.0, 9.0), wall(Side::Top, 6.0, 9.0)];
    let (one, two) = (analysis(&along_x, 6e9, 1.0, Split::default()), analysis(&along_y, 6e9, 1.0, Split::default()));
    let (s, t) = (one.at(4e9).unwrap().s, two.at(4e9).unwrap().s);
    for (a, b) in s.iter().zip(&t) {
        assert!((a - b).norm() < 1e-7, "{a} {b}");
    }
}

#[test]
fn an_open_end_is_as_long_as_the_static_solution_says() {
    // Static three-dimensional solutions, good to 1 %: 0.335 h for er 9.8 and 0.411 h for er 2.2, w = h; at 1 GHz dispersion is below 0.2 %.
    for (er, h, exact) in [(9.8, 0.635, 0.335), (2.2, 0.787, 0.411)] {
        let (f, b) = (1e9, 30.0 * h);
        let (low, high) = (0.5 * (b - h), 0.5 * (b + h));
        let (plane, end) = (0.6 * b, 0.9 * b);
        let open = geometry(stack(er, h, 20.0 * h), [1.6 * b, b], &[[0.0, low, end, high]], vec![wall(Side::Left, 0.5 * b, plane)]);
        let extension = [2.0, 4.0].map(|refine| {
            let solved = analysis(&open, f, refine, Split::default()).at(f).unwrap();
            let line = solved.lines[0].unwrap();
            // From the reference impedance to the line's own.
            let z = 50.0 * (1.0 + solved.s[0]) / (1.0 - solved.s[0]) / line.impedance_ohm;
            let reflected = (z - 1.0) / (z + 1.0);
            (-reflected.arg() / (2.0 * line.gamma_per_m.im) * 1e3 - (end - plane)) / h
        });
        println!("open end er {er}: {extension:?} against {exact}");
        assert!((extension[1] / exact - 1.0).abs() < 0.03, "er {er}: {extension:?}");
    }
}

#[test]
fn a_filled_cavity_rings_at_its_own_frequencies() {
    // Exact: f = c/(2 sqrt er) sqrt((m/a)^2 + (n/b)^2 + (p/c)^2), mode (0,1,1), felt by an x-directed dipole. The dipole, a thousandth of the cavity's
    // length cubed, pulls it by some 1e-4.
    let (a, b, c, er) = (30.0, 20.0, 25.0, 2.0f64);
    let exact = 299_792_458.0 / (2.0 * er.sqrt()) * 1e3 * ((1.0f64 / b).powi(2) + (1.0f64 / c).powi(2)).sqrt();
    let filled = Stack { below: vec![layer(er, 0.4 * c)], above: vec![layer(er, 0.6 * c)], top: Top::Lid };
    let x: Vec<f64> = (0..=6).map(|i| (14.0 + 1.5 * f64::from(i) / 6.0) * 1e-3).collect();
    let y: Vec<f64> = (0..=2).map(|i| (8.8 + 0.2 * f64::from(i)) * 1e-3).collect();
    let source = Source { patch: 0, axis: Axis::X, line: 3, across: 0..2, reversed: false };
    let structure =
        Structure { stack: filled, size_m: [a * 1e-3, b * 1e-3], patches: vec![Patch::full(x, y)], sources: vec![source], sheet: None };
    let solver = Solver::new(structure, 1.01 * exact, Split::default()).unwrap();
    // The impedance of the gap runs through infinity at the cavity's resonance: where it is greatest.
    let background = solver.admittance(0.98 * exact).unwrap()[0].inv().im;
    let (found, size) = (0..=400)
        .map(|i| exact * (1.0 + 5e-6 * (f64::from(i) - 200.0)))
        .map(|f| (f, solver.admittance(f).unwrap()[0].inv().im))
        .max_by(|p, q| (p.1 - background).abs().total_cmp(&(q.1 - background).abs()))
        .unwrap();
    assert!((size - background).abs() > 0.02 * background.abs(), "no resonance: {background} {size}");
    assert!((found / exact - 1.0).abs() < 5e-4, "{found} {exact}");
}

#[test]
fn a_gap_port_in_the_middle_of_a_line_is_in_series() {
    // A line shorted at both walls, a gap in its middle: Z = 2 j Z0 tan(beta l/2), and the gap's capacitance in parallel, a small one.
    let (er, b, length, f) = (3.5, 16.0, 20.0, 1e9);
    let low = 0.5 * (b - 1.13);
    let ends = [Point { x: mm(10.0), y: mm(low) }, Point { x: mm(10.0), y: mm(b - low) }];
    let port = GeometryPort { place: PortPlace::Gap { from: ends[0], to: ends[1] }, reference_ohm: 50.0 };
    let shorted = geometry(stack(er, 0.508, 8.0), [length, b], &[[0.0, low, length, b - low]], vec![port]);
    let s = analysis(&shorted, 4e9, 2.0, Split::default()).at(f).unwrap().s[0];
    let z = 50.0 * (1.0 + s) / (1.0 - s);
    let line = crate::sample::line(&through(stack(er, 0.508, 8.0), 1.13, b, length), f, 4e9, 2.0);
    let exact = 2.0 * line.impedance_ohm.re * (line.gamma_per_m.im * 0.5 * length * 1e-3).tan();
    // The gap's capacitance, some 0.05 pF, raises it by w C X = 2 %.
    assert!(z.re.abs() < 1e-6 && (z.im / exact - 1.0).abs() < 0.03, "{z} {exact}");
}

#[test]
fn a_plan_solves_a_sweep_with_its_error_bar() {
    let f: Vec<f64> = (0..201).map(|i| 1e9 + 25e6 * f64::from(i)).collect();
    let through = stub();
    let plan = Plan::new(&through, &f, Options::default()).unwrap();
    let solution = plan.run(&f, |_| true).unwrap();
    // Fitted values against solved ones: the tolerance of the sweep.
    let solver = analysis(&through, 6e9, 1.0, Split::default());
    for i in (3..201).step_by(45) {
        let s = solver.at(f[i]).unwrap().s;
        assert!((s[2] - solution.response.s[i][1]).norm() < 1e-4, "{}", f[i]);
    }
    assert!(solution.error_bar.iter().all(|&bar| bar > 1e-6 && bar < 0.3), "{:?}", solution.error_bar);
    assert!(solution.solves[0] < 40);
}
