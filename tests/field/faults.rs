//! What cannot be solved is refused by name.

use stripwright::field::{Geometry, Options, Plan, Top, read_geometry};
use stripwright::order::{Side, Source};

use crate::sample::{geometry, stack, through, wall};

const F: [f64; 3] = [1e9, 2e9, 3e9];

fn code(geometry: &Geometry, options: Options) -> &'static str {
    match Plan::new(geometry, &F, options) {
        Ok(_) => "none",
        Err(problems) => problems[0].code,
    }
}

fn ports() -> Vec<stripwright::field::GeometryPort> {
    vec![wall(Side::Left, 8.0, 6.0), wall(Side::Right, 8.0, 6.0)]
}

#[test]
fn copper_that_meets_at_a_corner() {
    let touching = geometry(stack(3.5, 0.5, 8.0), [30.0, 16.0], &[[0.0, 7.5, 15.0, 8.5], [15.0, 8.5, 30.0, 9.5]], ports());
    assert_eq!(code(&touching, Options::default()), "copper-touches");
}

#[test]
fn a_port_on_no_copper() {
    let mut line = through(stack(3.5, 0.5, 8.0), 1.0, 16.0, 30.0);
    line.ports[1] = wall(Side::Right, 3.0, 6.0);
    assert_eq!(code(&line, Options::default()), "port-on-no-copper");
}

#[test]
fn copper_outside_the_box_and_feeds_that_bend() {
    let mut line = through(stack(3.5, 0.5, 8.0), 1.0, 16.0, 30.0);
    line.size[1] = stripwright::base::Nm(8_200_000);
    assert_eq!(code(&line, Options::default()), "copper-outside-box");
    let bent = geometry(stack(3.5, 0.5, 8.0), [30.0, 16.0], &[[0.0, 7.5, 30.0, 8.5], [4.0, 8.5, 5.0, 12.0]], ports());
    assert_eq!(code(&bent, Options::default()), "feed-not-straight");
}

#[test]
fn a_gap_no_mesh_resolves() {
    let narrow = geometry(stack(3.5, 0.5, 8.0), [30.0, 16.0], &[[0.0, 7.5, 30.0, 8.5], [10.0, 8.5005, 20.0, 9.0]], ports());
    assert_eq!(code(&narrow, Options::default()), "gap-not-resolved");
}

#[test]
fn a_mesh_over_the_limit_names_a_density_that_fits() {
    let line = through(stack(3.5, 0.5, 8.0), 1.0, 16.0, 30.0);
    let found = Plan::new(&line, &F, Options { refine: 4.0, limit: 300, ..Options::default() }).err().unwrap();
    assert_eq!(found[0].code, "mesh-too-large");
    let density: f64 = found[0].help.split_whitespace().find_map(|w| w.parse().ok()).unwrap();
    assert!(Plan::new(&line, &F, Options { refine: density - 0.005, limit: 300, ..Options::default() }).is_ok(), "{}", found[0].help);
}

#[test]
fn a_long_sweep_across_cutoffs_of_an_open_box() {
    let mut line = through(stack(3.5, 0.5, 8.0), 1.0, 16.0, 60.0);
    line.stack.top = Top::Open;
    let f: Vec<f64> = (0..301).map(|i| 1e9 + 2e7 * f64::from(i)).collect();
    assert_eq!(Plan::new(&line, &f, Options::default()).err().unwrap()[0].code, "open-top-cutoffs");
}

#[test]
fn nets_that_overlap_in_a_file() {
    let text = |second: &str| {
        format!(
            "[geometry]\ntitle = \"two strips\"\n[box]\nsize = [\"30 mm\", \"16 mm\"]\nlid = \"8 mm\"\n[[below]]\nthickness = \"0.5 mm\"\npermittivity = 3.5\n\
             [[polygon]]\nnet = \"a\"\nrectangle-mm = [[0, 7.5], [30, 8.5]]\n[[polygon]]\nnet = \"b\"\nrectangle-mm = {second}\n\
             [[port]]\nwall = \"left\"\nat = \"8 mm\"\nplane = \"6 mm\"\n[[port]]\nwall = \"right\"\nat = \"8 mm\"\nplane = \"6 mm\"\n\
             [sweep]\nfrom = \"1 GHz\"\nto = \"3 GHz\"\npoints = 11\n"
        )
    };
    let read = |second: &str| read_geometry(&Source::from_text("two.toml", text(second)));
    assert_eq!(read("[[10, 8.4], [20, 9.4]]").unwrap_err()[0].code, "copper-short");
    assert_eq!(read("[[10, 8.4], [20]]").unwrap_err()[0].code, "polygon-wrong");
    let (file, _) = read("[[10, 8.7], [20, 9.4]]").unwrap();
    assert_eq!((file.geometry.copper.pieces.len(), file.f_hz.len()), (2, 11));
}
