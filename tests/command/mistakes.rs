//! Each kind of mistake in an order: its code, its place, and the parts of its message and help.

use crate::{STARTER, changed, read_text};

/// Stretch of the starter, its replacement, the stretch that the message must point at, code, parts of the printed text.
type Case = (&'static str, &'static str, &'static str, &'static str, &'static [&'static str]);

const CASES: &[Case] = &[
    // The hand-off.
    (
        "margin = \"8 mm\"",
        "thickness = \"1.6 mm\"\nmargin = \"8 mm\"",
        "\"1.6 mm\"",
        "thickness-contradicts-stack",
        &["board.thickness", "together are 0.848 mm", "thickness = \"0.848 mm\""],
    ),
    (
        "margin = \"8 mm\"",
        "ground = \"carrier\"\nmargin = \"8 mm\"",
        "\"carrier\"",
        "launch-without-ground",
        &["edge-coax-pin-1.27mm", "launch = \"pads\""],
    ),
    ("margin = \"8 mm\"", "grain = \"sideways\"\nmargin = \"8 mm\"", "\"sideways\"", "word-unknown", &["board.grain", "along-ports"]),
    ("revision = \"A\"", "revision = \"A\"\npaper = \"a3\"", "\"a3\"", "word-unknown", &["order.paper", "letter"]),
    (
        "# [housing]",
        "[[board.slot]]\nfrom = [\"9 mm\", \"3 mm\"]\nto = [\"9 mm\", \"3 mm\"]\nwidth = \"1 mm\"\n# [housing]",
        "[\"9 mm\", \"3 mm\"]\nwidth",
        "edges-reversed",
        &["the slot is a hole"],
    ),
    (
        "# [housing]",
        "[[board.below]]\nmaterial = \"core\"\npermittivity = 4.3\n# [housing]",
        "[[board.below]]",
        "key-missing",
        &["has no key \"thickness\""],
    ),
    // Keys.
    (
        "passband = [",
        "pasband = [",
        "pasband",
        "key-unknown",
        &["filter.pasband", "\"pasband\" is not a key of [filter]", "did you mean \"passband\""],
    ),
    ("[laminate]", "[laminat]", "laminat]", "key-unknown", &["did you mean \"laminate\""]),
    ("ripple = \"0.05 dB\"", "", "[filter]", "key-missing", &["filter.ripple", "has no key \"ripple\"", "ripple = \"0.1 dB\""]),
    ("passband = [\"3.40 GHz\", \"3.80 GHz\"]", "", "[filter]", "key-missing", &["filter.passband"]),
    ("family = \"edge-coupled\"", "", "[filter]", "key-missing", &["filter.family"]),
    ("name = \"snow-depth-preselector\"", "", "[order]", "key-missing", &["order.name"]),
    ("launch = \"edge-coax-pin-1.27mm\"", "", "[board]", "key-missing", &["board.launch"]),
    ("ripple = \"0.05 dB\"", "ripple = \"0.05 dB\"\nripple = \"0.1 dB\"", "ripple = \"0.1", "key-doubled", &["\"ripple\" stands twice"]),
    ("[shop]", "[laminate]\n[shop]", "laminate]\n[shop]", "key-doubled", &["\"laminate\" stands twice"]),
    (
        "passband = [\"3.40",
        "cutoff = \"3 GHz\"\npassband = [\"3.40",
        "\"3 GHz\"\np",
        "key-unfit",
        &["cutoff does not fit the band-pass family", "passband"],
    ),
    // Units.
    (
        "thickness = \"0.762 mm\"  ",
        "thickness = 0.762  ",
        "0.762  ",
        "unit-missing",
        &["laminate.thickness", "0.762, a number without a unit", "write \"0.762 mm\""],
    ),
    ("thickness = \"0.762 mm\"  ", "thickness = \"0.762\"  ", "\"0.762\"", "unit-missing", &["has no unit", "mm, um, mil"]),
    (
        "thickness = \"0.762 mm\"  ",
        "thickness = \"0.762 GHz\"  ",
        "\"0.762 GHz\"",
        "unit-wrong",
        &["unit \"GHz\" does not measure a length"],
    ),
    ("thickness = \"0.762 mm\"  ", "thickness = \"0.762 MM\"  ", "\"0.762 MM\"", "unit-wrong", &["did you mean mm?"]),
    ("thickness = \"0.762 mm\"  ", "thickness = \"thick mm\"  ", "\"thick mm\"", "not-a-quantity", &["is not a number", "0.762 mm"]),
    ("ripple = \"0.05 dB\"", "ripple = \"0.05 mm\"", "\"0.05 mm\"", "unit-wrong", &["filter.ripple", "allowed: dB"]),
    // Sizes.
    ("thickness = \"0.762 mm\"  ", "thickness = \"-0.762 mm\"  ", "\"-0.762 mm\"", "size-not-positive", &["allowed: 0.001 mm to 25 mm"]),
    ("thickness = \"0.762 mm\"  ", "thickness = \"0 mm\"  ", "\"0 mm\"  ", "size-not-positive", &["laminate.thickness"]),
    ("thickness = \"0.762 mm\"  ", "thickness = \"0.762 m\"  ", "\"0.762 m\"", "out-of-range", &["allowed: 0.001 mm to 25 mm"]),
    ("thickness = \"0.762 mm\"  ", "thickness = \"nan mm\"  ", "\"nan mm\"", "not-finite", &["laminate.thickness"]),
    ("thickness = \"0.762 mm\"  ", "thickness = \"inf mm\"  ", "\"inf mm\"", "not-finite", &["laminate.thickness"]),
    ("thickness = \"0.762 mm\"  ", "thickness = nan  ", "nan  ", "not-finite", &["laminate.thickness"]),
    ("thickness = \"0.762 mm\"  ", "thickness = \"1e400 mm\"  ", "\"1e400 mm\"", "not-finite", &["laminate.thickness"]),
    ("# permittivity = 3.00 ", "permittivity = nan ", "nan ", "not-finite", &["laminate.permittivity", "1.0 to 100.0"]),
    ("# permittivity = 3.00 ", "permittivity = inf ", "inf ", "not-finite", &["laminate.permittivity"]),
    ("# permittivity = 3.00 ", "permittivity = -3 ", "-3 ", "size-not-positive", &["laminate.permittivity"]),
    ("# permittivity = 3.00 ", "permittivity = 0.5 ", "0.5 ", "out-of-range", &["allowed: 1.0 to 100.0"]),
    ("# permittivity = 3.00 ", "permittivity = \"3.0\" ", "\"3.0\" ", "wrong-type", &["due is a plain number"]),
    ("# permittivity-tolerance = 0.04", "permittivity-tolerance = 2.5", "2.5", "tolerance-too-large", &["permittivity of 3.0"]),
    ("# thickness-tolerance = \"0.038 mm\"", "thickness-tolerance = \"0.9 mm\"", "\"0.9 mm\"", "tolerance-too-large", &["0.762 mm"]),
    ("# line-tolerance = \"0.025 mm\"", "line-tolerance = \"0.2 mm\"", "\"0.2 mm\"", "tolerance-too-large", &["less than line, 0.15 mm"]),
    // Band and shape.
    (
        "[\"3.40 GHz\", \"3.80 GHz\"]",
        "[\"3.80 GHz\", \"3.40 GHz\"]",
        "[\"3.80 GHz\"",
        "edges-reversed",
        &["filter.passband", "write passband = [\"3.4 GHz\", \"3.8 GHz\"]"],
    ),
    ("[\"3.40 GHz\", \"3.80 GHz\"]", "[\"3.40 GHz\", \"3.40 GHz\"]", "[\"3.40 GHz\"", "band-without-width", &["3.4 GHz"]),
    ("[\"3.40 GHz\", \"3.80 GHz\"]", "[\"3.40 GHz\"]", "[\"3.40 GHz\"", "list-length", &["has 1 entries; allowed: exactly 2"]),
    ("[\"3.40 GHz\", \"3.80 GHz\"]", "\"3.40 GHz\"", "\"3.40 GHz\"", "wrong-type", &["due is a list"]),
    ("[\"3.40 GHz\", \"3.80 GHz\"]", "[\"3.40 THz\", \"3.80 GHz\"]", "\"3.40 THz\"", "unit-wrong", &["filter.passband[1]"]),
    ("[\"3.40 GHz\", \"3.80 GHz\"]", "[\"3.40 kHz\", \"3.80 GHz\"]", "\"3.40 kHz\"", "out-of-range", &["0.001 GHz to 1000 GHz"]),
    ("ripple = \"0.05 dB\"", "ripple = \"0 dB\"", "\"0 dB\"", "size-not-positive", &["filter.ripple"]),
    (
        "ripple = \"0.05 dB\"",
        "ripple = \"0.05 dB\"\nreturn-loss = \"20 dB\"",
        "\"20 dB\"",
        "keys-exclude-each-other",
        &["ripple and return-loss"],
    ),
    (
        "response = \"equal-ripple\"",
        "response = \"maximally-flat\"",
        "\"0.05 dB\"",
        "keys-exclude-each-other",
        &["maximally-flat response has no ripple"],
    ),
    (
        "response = \"equal-ripple\"",
        "response = \"equalripple\"",
        "\"equalripple\"",
        "word-unknown",
        &["equal-ripple, maximally-flat", "write response = \"equal-ripple\""],
    ),
    ("# degree = 5 ", "degree = 0 ", "0 ", "out-of-range", &["filter.degree", "degree is 0; allowed: 1 to 12"]),
    ("# degree = 5 ", "degree = 40 ", "40 ", "out-of-range", &["degree is 40; allowed: 1 to 12"]),
    ("# degree = 5 ", "degree = -1 ", "-1 ", "out-of-range", &["degree is -1"]),
    ("# degree = 5 ", "degree = 5.0 ", "5.0 ", "wrong-type", &["due is a whole number"]),
    ("# degree = 5 ", "degree = 99999999999999999999999999 ", "99999999999999999999999999", "out-of-range", &["allowed: 1 to 12"]),
    ("family = \"edge-coupled\"", "family = \"edge-coupeld\"", "\"edge-coupeld\"", "word-unknown", &["write family = \"edge-coupled\""]),
    (
        "port = \"50 ohm\"",
        "port = \"50 ohm\"\nports = [\"50 ohm\", \"75 ohm\"]",
        "[\"50 ohm\", \"75 ohm\"]",
        "keys-exclude-each-other",
        &["port and ports"],
    ),
    ("port = \"50 ohm\"", "port = \"0 ohm\"", "\"0 ohm\"", "size-not-positive", &["filter.port"]),
    // Names, texts, dates.
    ("snow-depth-preselector", "snow/depth", "\"snow/depth\"", "name-wrong", &["order.name", "write name = \"snow-depth\""]),
    ("snow-depth-preselector", "../snow", "\"../snow\"", "name-wrong", &["write name = \"snow\""]),
    ("snow-depth-preselector", "..", "\"..\"", "name-wrong", &["write name = \"my-filter\""]),
    ("snow-depth-preselector", "Snow-Depth", "\"Snow-Depth\"", "name-wrong", &["write name = \"snow-depth\""]),
    ("snow-depth-preselector", "", "\"\"", "name-wrong", &["name is empty"]),
    ("snow-depth-preselector", "schnee-höhe", "\"schnee-höhe\"", "name-wrong", &["write name = \"schnee-h-he\""]),
    (
        "snow-depth-preselector",
        "a-name-of-more-than-sixty-characters-which-no-folder-needs-to-have",
        "\"a-name",
        "name-wrong",
        &["(66 characters)", "at most 60"],
    ),
    ("title = \"Receive preselector, snow-depth radar (invented demo)\"", "title = 7", "7", "wrong-type", &["order.title"]),
    (
        "title = \"Receive preselector, snow-depth radar (invented demo)\"",
        "title = \"a\\nb\"",
        "\"a\\nb\"",
        "text-not-one-line",
        &["order.title"],
    ),
    ("title = \"Receive preselector, snow-depth radar (invented demo)\"", "title = \"  \"", "\"  \"", "text-length", &["order.title"]),
    ("# date = 2026-05-04 ", "date = \"2026-05-04\" ", "\"2026-05-04\"", "date-wrong", &["order.date", "write date = 2026-05-04"]),
    ("# date = 2026-05-04 ", "date = 2026-05-04T10:00:00Z ", "2026-05-04T", "date-wrong", &["without time"]),
    ("# date = 2026-05-04 ", "date = 1066-10-14 ", "1066-10-14", "date-wrong", &["1980-01-01 to 2099-12-31"]),
    ("# date = 2026-05-04 ", "date = 2026-02-30 ", "2026-02-30", "not-toml", &[]),
    ("# acceptance-class = 2 ", "acceptance-class = 4 ", "4 ", "out-of-range", &["allowed: 1 to 3"]),
    // Requirements.
    (
        "insertion-loss = { at-most = \"3.5 dB\" }\nreturn-loss = { at-least = \"12 dB\" }",
        "",
        "[\"3.45 GHz\"",
        "requirement-without-limit",
        &["requirement[1].band"],
    ),
    (
        "insertion-loss = { at-most = \"3.5 dB\" }",
        "insertion-loss = { at-least = \"3.5 dB\" }",
        "at-least = \"3.5",
        "key-unknown",
        &["did you mean \"at-most\""],
    ),
    ("insertion-loss = { at-most = \"3.5 dB\" }", "insertion-loss = \"3.5 dB\"", "\"3.5 dB\"", "wrong-type", &["due is a table"]),
    (
        "[\"2.70 GHz\", \"3.00 GHz\"]",
        "[\"3.30 GHz\", \"3.50 GHz\"]",
        "{ at-least = \"30 dB\" }      #",
        "requirement-contradicts-band",
        &["requirement[2].rejection", "passes 3.4 GHz to 3.8 GHz"],
    ),
    (
        "[\"3.45 GHz\", \"3.75 GHz\"]",
        "[\"4.45 GHz\", \"4.75 GHz\"]",
        "{ at-most = \"3.5 dB\" }",
        "requirement-contradicts-band",
        &["insertion-loss is asked for"],
    ),
    // Classes.
    (
        "class = \"ceramic-ptfe-3.0\"",
        "class = \"ceramic-ptfe-3\"",
        "\"ceramic-ptfe-3\"",
        "class-unknown",
        &["laminate.class", "did you mean \"ceramic-ptfe-3.0\""],
    ),
    ("class = \"ordinary\"", "class = \"ordinry\"", "\"ordinry\"", "class-unknown", &["did you mean \"ordinary\""]),
    ("launch = \"edge-coax-pin-1.27mm\"", "launch = \"coax\"", "\"coax\"", "class-unknown", &["board.launch", "edge-coax-pin-1.27mm"]),
    ("class = \"ceramic-ptfe-3.0\"", "class = \"own\"", "[laminate]", "key-missing", &["laminate.permittivity"]),
    ("# finish = \"immersion-silver\"", "finish = \"silver\"", "\"silver\"", "word-unknown", &["immersion-silver"]),
    // Board and housing.
    ("mask = \"none\"", "mask = \"green\"", "\"green\"", "word-unknown", &["none, clear-of-filter"]),
    ("margin = \"8 mm\"", "margin = \"8 mm\"\nsize = [\"60 mm\", \"25 mm\"]", "\"8 mm\"", "keys-exclude-each-other", &["margin and size"]),
    ("margin = \"8 mm\"", "size = [\"60 mm\"]", "[\"60 mm\"]", "list-length", &["write size = [\"60 mm\", \"60 mm\"]"]),
    ("margin = \"8 mm\"", "size = [\"60 mm\", \"0 mm\"]", "\"0 mm\"]", "size-not-positive", &["board.size[2]"]),
    (
        "# port-side = [\"left\", \"right\"]",
        "port-side = [\"left\", \"top\"]",
        "[\"left\", \"top\"]",
        "sides-not-opposite",
        &["two opposite ones"],
    ),
    (
        "# port-side = [\"left\", \"right\"]",
        "port-side = [\"left\", \"rihgt\"]",
        "[\"left\", \"rihgt\"]",
        "word-unknown",
        &["left, right, bottom, top"],
    ),
    ("# level = false", "level = \"no\"", "\"no\"", "wrong-type", &["true or false"]),
    ("# compensation = \"by the shop\"", "compensation = \"in the artwork\"", "[shop]", "key-missing", &["shop.compensation-per-edge"]),
    (
        "# compensation-per-edge = \"0.010 mm\"",
        "compensation-per-edge = \"0.010 mm\"",
        "\"0.010 mm\"    # example",
        "keys-exclude-each-other",
        &["by the shop"],
    ),
    (
        "# [[board.mounting-hole]]               # example, unplated\n# at = [\"3.5 mm\", \"3.5 mm\"]             # from the board's lower left corner",
        "[[board.mounting-hole]]\nat = [\"3.5 mm\", \"3.5 mm\"]",
        "[[board.mounting-hole]]",
        "key-missing",
        &["board.mounting-hole[1].diameter"],
    ),
    ("# [housing]    ", "[housing]    ", "[housing]", "housing-empty", &["neither a lid nor an inside"]),
    (
        "# permittivity = 3.00 ",
        "copper = { roughness-law = \"stacked-spheres\" }\n# permittivity = 3.00 ",
        "{ roughness-law",
        "key-missing",
        &["laminate.copper.ten-point-height", "6 um"],
    ),
    (
        "# permittivity = 3.00 ",
        "copper = { ten-point-height = \"6 um\" }\n# permittivity = 3.00 ",
        "\"6 um\"",
        "key-unused",
        &["laminate.copper.ten-point-height", "roughness-law = \"stacked-spheres\""],
    ),
    // Notation.
    ("response = \"equal-ripple\"", "response = ", "response", "not-toml", &[]),
    ("[board]", "[board", "[board", "not-toml", &[]),
];

/// Line and column, from 1, of a stretch of the replacement, or else of the whole text.
fn place_of(text: &str, from: &str, to: &str, stretch: &str) -> (usize, usize) {
    let changed_at = STARTER.find(from).unwrap();
    let inside = to.find(stretch).map(|i| changed_at + i);
    let at = inside.or_else(|| text.find(stretch)).unwrap_or_else(|| panic!("{stretch:?} is not there"));
    let start = text[..at].rfind('\n').map_or(0, |i| i + 1);
    (text[..at].matches('\n').count() + 1, text[start..at].chars().count() + 1)
}

#[test]
fn each_mistake_is_found_where_it_stands_with_a_help_that_would_mend_it() {
    let mut wrong = Vec::new();
    for (from, to, at, code, parts) in CASES {
        let text = changed(from, to);
        let (problems, printed) = read_text(&text);
        let Some(problem) = problems.iter().find(|p| p.code == *code && p.is_error()) else {
            wrong.push(format!("{to:?}: no {code} among {problems:#?}"));
            continue;
        };
        if problem.help.is_empty() {
            wrong.push(format!("{to:?}: no help"));
        }
        let (line, column) = place_of(&text, from, to, at);
        // An unclosed heading or missing value is noticed at its end: there only the line is fixed.
        let place = if *code == "not-toml" { format!("order.toml:{line}:") } else { format!("order.toml:{line}:{column}]") };
        for part in parts.iter().copied().chain([place.as_str()]) {
            if !printed.contains(part) {
                wrong.push(format!("{to:?}: {part:?} is not in\n{printed}"));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    assert_eq!(CASES.len(), 95, "the number of kinds that ran");
}

#[test]
fn one_mistake_gives_one_error() {
    // A tolerance may break two rules at once; broken notation may be noticed twice; an "own" class lacks many keys.
    let several = ["own", "[board", "[laminat]"];
    for (from, to, _, code, _) in CASES {
        if several.contains(to) || to.contains("\"own\"") {
            continue;
        }
        let (problems, printed) = read_text(changed(from, to));
        let errors = problems.iter().filter(|p| p.is_error()).count();
        let most = if *code == "requirement-contradicts-band" || *code == "not-toml" { 2 } else { 1 };
        assert!((1..=most).contains(&errors), "{to:?} gives {errors} errors:\n{printed}");
    }
}

#[test]
fn all_mistakes_of_a_file_are_found_in_one_run() {
    let text = "
[order]
name = \"a/b\"
date = \"today\"
[filter]
family = \"edge-coupled\"
pasband = [\"1 GHz\", \"2 GHz\"]
ripple = \"0 dB\"
degree = 40
port = 50
[[requirement]]
band = [\"2 GHz\", \"1 GHz\"]
rejection = { at-least = \"-30 dB\" }
[laminate]
class = \"no-such\"
thickness = \"1 GHz\"
copper = { base = \"0 um\", colour = \"red\" }
[shop]
class = \"ordinary\"
line-tolerance = \"1 mm\"
[board]
launch = \"pads\"
mask = 1
size = [\"60 mm\"]
";
    let (problems, printed) = read_text(text);
    let mut codes: Vec<_> = problems.iter().map(|p| p.code).collect();
    codes.sort_unstable();
    let mut due = vec![
        "name-wrong",
        "date-wrong",
        "key-unknown",
        "size-not-positive",
        "out-of-range",
        "unit-missing",
        "edges-reversed",
        "size-not-positive",
        "class-unknown",
        "unit-wrong",
        "size-not-positive",
        "key-unknown",
        "tolerance-too-large",
        "wrong-type",
        "list-length",
    ];
    due.sort_unstable();
    assert_eq!(codes, due, "{printed}");
    // In file order, each with its own line.
    let lines: Vec<usize> =
        printed.lines().filter_map(|l| l.split("order.toml:").nth(1)).map(|l| l.split(':').next().unwrap().parse().unwrap()).collect();
    assert!(lines.is_sorted(), "{lines:?}");
    assert_eq!(lines.len(), due.len());
}

#[test]
fn the_starter_has_no_mistake_and_no_warning() {
    let (problems, printed) = read_text(STARTER);
    assert!(problems.is_empty(), "{printed}");
}

#[test]
fn what_is_doubtful_but_possible_is_a_warning() {
    for (from, to, code, part) in [
        ("thickness = \"0.762 mm\"  ", "thickness = \"0.8 mm\"  ", "thickness-not-usual", "0.762 mm"),
        ("[\"3.45 GHz\", \"3.75 GHz\"]", "[\"3.30 GHz\", \"3.75 GHz\"]", "requirement-across-edge", "3.4 GHz to 3.8 GHz"),
        ("return-loss = { at-least = \"12 dB\" }", "return-loss = { at-least = \"22 dB\" }", "requirement-beyond-shape", "filter.ripple"),
    ] {
        let (problems, printed) = read_text(changed(from, to));
        assert!(problems.iter().any(|p| p.code == code && !p.is_error()), "{to:?}: {printed}");
        assert!(!problems.iter().any(|p| p.is_error()), "{to:?}: {printed}");
        assert!(printed.contains(part), "{to:?}: {printed}");
    }
}

#[test]
fn the_program_ends_with_2_and_says_the_same_on_stderr() {
    let folder = tempfile::tempdir().unwrap();
    for (from, to, _, code, parts) in CASES {
        std::fs::write(folder.path().join("order.toml"), changed(from, to)).unwrap();
        let mut command = assert_cmd::Command::cargo_bin("stripwright").unwrap();
        let output = command.current_dir(folder.path()).args(["dimension", "order.toml"]).output().unwrap();
        let stderr = String::from_utf8(output.stderr).unwrap();
        assert_eq!((output.status.code(), output.stdout.len()), (Some(2), 0), "{to:?}: {stderr}");
        assert!(stderr.contains(&format!("error: {code}")) && stderr.contains("[order.toml:"), "{to:?}: {stderr}");
        for part in *parts {
            assert!(stderr.contains(part), "{part:?}: {stderr}");
        }
    }
}
