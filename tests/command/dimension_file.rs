//! A hand-edited dimension set: what is snapped, and what is refused with its line.

use stripwright::base::Problem;
use stripwright::cli::problems::render;
use stripwright::dimensions::{self, Dimension, Dimensions};
use stripwright::family;
use stripwright::order::{self, Source};

const NAMES: [&str; 3] = ["section 1 width", "section 1 gap", "section 1 length"];

/// The file of a set with three dimensions.
fn file() -> String {
    let (order, _) = order::read(&Source::from_text("order.toml", crate::STARTER), &family::keys()).unwrap();
    let list = NAMES
        .iter()
        .zip([1.25e-3, 0.2e-3, 13.5e-3])
        .map(|(name, value_m)| Dimension {
            name: name.to_string(),
            value_m,
            first_guess_m: value_m,
            serves: vec![("Z0e ohm".to_string(), 70.6)],
            corrections_m: vec![("open end".to_string(), -0.031e-3)],
        })
        .collect();
    dimensions::write(&Dimensions { order, degree: 5, list })
}

/// Reads a file: the values in millimetres if it was accepted, the problems, and what would be printed.
fn read(text: &str) -> (Option<Vec<f64>>, Vec<Problem>, String) {
    let source = Source::from_text("dimensions.toml", text);
    let read = dimensions::read(&source, &family::keys(), &|_, degree| {
        assert_eq!(degree, 5);
        NAMES.map(str::to_string).to_vec()
    });
    let (values, problems) = match read {
        Ok((set, problems)) => (Some(set.list.iter().map(|d| d.value_m * 1e3).collect()), problems),
        Err(problems) => (None, problems),
    };
    let printed = problems.iter().map(|p| render(p, Some(&source), false)).collect();
    (values, problems, printed)
}

/// Line of a stretch that stands once, from 1.
fn line_of(text: &str, stretch: &str) -> usize {
    text[..text.find(stretch).unwrap()].matches('\n').count() + 1
}

#[test]
fn a_changed_value_is_read_in_drawing_order() {
    let text = file();
    assert_eq!(read(&text).0, Some(vec![1.25, 0.2, 13.5]));
    let (values, problems, _) = read(&text.replace("value = \"0.2 mm\"", "value = \"0.3 mm\""));
    assert_eq!((values, problems.len()), (Some(vec![1.25, 0.3, 13.5]), 0));
    // The blocks may be moved about; the drawing does not change.
    let (head, blocks) = text.split_once("\n[[dimension]]").unwrap();
    let mut blocks: Vec<_> = blocks.split("\n[[dimension]]").collect();
    blocks.reverse();
    let moved: String = std::iter::once(head.to_string()).chain(blocks.iter().map(|b| format!("\n[[dimension]]{b}"))).collect();
    assert_ne!(moved, text);
    assert_eq!(read(&moved).0, Some(vec![1.25, 0.2, 13.5]));
}

#[test]
fn a_value_off_the_grid_snaps_with_a_warning() {
    let text = file().replace("value = \"0.2 mm\"", "value = \"0.20049 mm\"");
    let (values, problems, printed) = read(&text);
    assert_eq!(values, Some(vec![1.25, 0.2, 13.5]));
    assert_eq!(problems.iter().map(|p| p.code).collect::<Vec<_>>(), ["dimension-off-grid"]);
    assert!(!problems[0].is_error());
    for part in
        ["section 1 gap is 0.20049 mm", "grid of 0.001 mm", "0.2 mm is drawn", &format!("dimensions.toml:{}:9]", line_of(&text, "0.20049"))]
    {
        assert!(printed.contains(part), "{part}: {printed}");
    }
}

#[test]
fn what_cannot_be_drawn_is_refused_with_its_line() {
    let whole = file();
    let gap = {
        let start = whole.find("[[dimension]]\nname = \"section 1 gap\"").unwrap();
        let end = start + whole[start..].find("\n\n").unwrap() + 2;
        whole[start..end].to_string()
    };
    for (text, at, code, part) in [
        (whole.replace(&gap, ""), None, "dimension-missing", "\"section 1 gap\" is missing; a set of degree 5 has 3 dimensions"),
        (whole.clone() + "\n" + &gap.replace("0.2 mm", "0.25 mm"), None, "dimension-doubled", "a second time"),
        (
            whole.replace("\"section 1 gap\"", "\"section 1 gip\""),
            Some("\"section 1 gip\""),
            "dimension-unknown",
            "did you mean \"section 1 gap\"",
        ),
        (whole.replace("value = \"0.2 mm\"", "value = \"0 mm\""), Some("\"0 mm\"\nfirst"), "size-not-positive", "allowed: 0.001 mm"),
        (whole.replace("value = \"0.2 mm\"", "value = \"-1 mm\""), Some("\"-1 mm\""), "size-not-positive", "allowed: 0.001 mm"),
        (whole.replace("value = \"0.2 mm\"", "value = \"2 km\""), Some("\"2 km\""), "unit-wrong", "does not measure a length"),
        (whole.replace("value = \"0.2 mm\"", "value = \"2000 mm\""), Some("\"2000 mm\""), "out-of-range", "to 1000 mm"),
        (whole.replace("value = \"0.2 mm\"", "value = 0.2"), Some("0.2\nfirst"), "unit-missing", "write \"0.2 mm\""),
        (whole.replace("value = \"0.2 mm\"\n", ""), Some("[[dimension]]\nname = \"section 1 gap\""), "key-missing", "value"),
        (whole.replace("degree = 5", "degree = 50"), Some("50\n"), "out-of-range", "1 to 12"),
        (whole.replace("degree = 5\n", ""), Some("[resolved]\n"), "key-missing", "degree"),
        (crate::STARTER.to_string(), None, "key-missing", "stripwright dimension"),
    ] {
        let (values, problems, printed) = read(&text);
        assert_eq!(values, None, "{code}");
        assert!(problems.iter().any(|p| p.code == code && p.is_error()), "{code}: {printed}");
        assert!(printed.contains(part), "{part}: {printed}");
        if let Some(at) = at {
            assert!(printed.contains(&format!("dimensions.toml:{}:", line_of(&text, at))), "{code}: {printed}");
        }
    }
}

#[test]
fn a_dimension_set_is_no_order() {
    let source = Source::from_text("dimensions.toml", file());
    let problems = order::read(&source, &family::keys()).unwrap_err();
    assert!(problems.iter().any(|p| p.code == "not-an-order"), "{problems:#?}");
}
