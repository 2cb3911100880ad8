//! `stripwright line SECTION.toml`: any cross-section from a file, and what it refuses.

use std::path::PathBuf;

use assert_cmd::Command;
use serde_json::Value;

fn run(text: &str, arguments: &[&str]) -> assert_cmd::assert::Assert {
    let folder = tempfile::tempdir().unwrap();
    let path: PathBuf = folder.path().join("section.toml");
    std::fs::write(&path, text).unwrap();
    Command::cargo_bin("stripwright").unwrap().arg("line").arg(&path).args(arguments).assert()
}

fn json(text: &str, arguments: &[&str]) -> Value {
    let done = run(text, &[arguments, &["--json", "--quiet"]].concat()).success();
    serde_json::from_slice(&done.get_output().stdout).unwrap()
}

fn short(arguments: &[&str]) -> Value {
    let done = Command::cargo_bin("stripwright").unwrap().arg("line").args(arguments).args(["--json", "--quiet"]).assert().success();
    serde_json::from_slice(&done.get_output().stdout).unwrap()
}

fn number(json: &Value, path: &str) -> f64 {
    json.pointer(path).and_then(Value::as_f64).unwrap_or_else(|| panic!("{path} missing in {json}"))
}

const BOARD: &str = r#"
[[layer]]
permittivity = 3.0
in-plane-permittivity = 3.2
loss-tangent = 0.0013
thickness = "0.762 mm"

[copper]
thickness = "43 um"
undercut = "8 um"
roughness = "1.2 um"
conductivity = "58 MS/m"

[housing]
lid = "4 mm"
"#;

const SHORT: [&str; 18] = [
    "--laminate",
    "ceramic-ptfe-3.0",
    "--permittivity",
    "3.0",
    "--in-plane-permittivity",
    "3.2",
    "--loss-tangent",
    "0.0013",
    "--thickness",
    "0.762 mm",
    "--copper",
    "43 um",
    "--undercut",
    "8 um",
    "--roughness",
    "1.2 um",
    "--lid",
    "4 mm",
];

#[test]
fn file_and_short_form_agree_on_one_strip() {
    let file = json(&format!("{BOARD}\n[[strip]]\nwidth = \"1.9 mm\"\n"), &["--at", "5 GHz"]);
    let short = short(&[&SHORT[..], &["--width", "1.9 mm", "--at", "5 GHz"]].concat());
    // Both are held to 1e-4 in C (the file by its accuracy, the short form by its table), so Z0 and the permittivity too; the loss's own estimate is 1e-3.
    for (path, tolerance) in [
        ("/z0_ohm", 2e-4),
        ("/eps_eff", 2e-4),
        ("/static_z0_ohm", 2e-4),
        ("/static_eps_eff", 2e-4),
        ("/capacitance_f_per_m/0/0", 2e-4),
        ("/inductance_h_per_m/0/0", 2e-4),
        ("/conductor_loss_db_per_m", 2e-3),
        ("/dielectric_loss_db_per_m", 2e-3),
    ] {
        let (a, b) = (number(&file, path), number(&short, path));
        assert!((a / b - 1.0).abs() < tolerance, "{path}: {a} {b}");
    }
    assert!(number(&file, "/error_estimate") <= 1e-4);
}

#[test]
fn file_and_short_form_agree_on_a_pair() {
    let strips = "\n[[strip]]\nwidth = \"1.5 mm\"\n\n[[strip]]\nwidth = \"1.5 mm\"\ngap-before = \"0.15 mm\"\n";
    let file = json(&format!("{BOARD}{strips}"), &[]);
    let short = short(&[&SHORT[..], &["--width", "1.5 mm", "--gap", "0.15 mm"]].concat());
    for mode in ["even", "odd"] {
        for (key, tolerance) in [("z0_ohm", 3e-4), ("eps_eff", 3e-4), ("conductor_loss_db_per_m", 3e-3), ("dielectric_loss_db_per_m", 3e-3)]
        {
            let path = format!("/{mode}/{key}");
            let (a, b) = (number(&file, &path), number(&short, &path));
            assert!((a / b - 1.0).abs() < tolerance, "{path}: {a} {b}");
        }
    }
    assert!((number(&file, "/coupling") / number(&short, "/coupling") - 1.0).abs() < 5e-3);
    assert!(number(&file, "/capacitance_f_per_m/0/1") < 0.0 && number(&file, "/inductance_h_per_m/0/1") > 0.0);
    assert!((number(&file, "/capacitance_f_per_m/0/1") / number(&short, "/capacitance_f_per_m/0/1") - 1.0).abs() < 5e-3);
}

#[test]
fn modes_of_unequal_strips_have_losses_and_meet_the_equal_pair() {
    let pair =
        |second: &str| format!("{BOARD}\n[[strip]]\nwidth = \"1.5 mm\"\n\n[[strip]]\nwidth = \"{second} mm\"\ngap-before = \"0.15 mm\"\n");
    let (equal, unequal) = (json(&pair("1.5"), &["--at", "5 GHz"]), json(&pair("1.500001"), &["--at", "5 GHz"]));
    assert_eq!(unequal["modes"].as_array().unwrap().len(), 2);
    for (mode, name) in ["even", "odd"].iter().enumerate() {
        // A width changed by 1e-6 moves nothing by more than a few times that; the loss's own estimate is 1e-3.
        for (key, tolerance) in [("eps_eff", 1e-5), ("conductor_loss_db_per_m", 1e-3), ("dielectric_loss_db_per_m", 1e-3)] {
            let (a, b) = (number(&equal, &format!("/{name}/{key}")), number(&unequal, &format!("/modes/{mode}/{key}")));
            assert!((a / b - 1.0).abs() < tolerance, "{name} {key}: {a} {b}");
        }
    }
    // Three strips: the middle one rests in the odd mode; the table names every mode.
    let three = format!("{}\n[[strip]]\nwidth = \"1.5 mm\"\ngap-before = \"0.15 mm\"\n", pair("0.9"));
    let answer = json(&three, &[]);
    assert_eq!(answer["modes"].as_array().unwrap().len(), 3);
    assert_eq!(number(&answer, "/modes/1/voltages/1"), 0.0);
    assert_eq!(number(&answer, "/modes/1/voltages/0"), -number(&answer, "/modes/1/voltages/2"));
    for mode in 0..3 {
        assert!(number(&answer, &format!("/modes/{mode}/conductor_loss_db_per_m")) > 0.0);
    }
    let table = run(&three, &[]).success();
    let table = String::from_utf8_lossy(&table.get_output().stdout).into_owned();
    assert!(table.contains("mode 3 loss") && table.contains("mode 2 voltages") && table.contains("closed form differs by"), "{table}");
}

/// Complete elliptic integral ratio K(k')/K(k) by arithmetic-geometric means (C. F. Gauss; any handbook, for instance Abramowitz & Stegun 17.6).
fn elliptic_ratio(k: f64) -> f64 {
    let mean = |mut a: f64, mut b: f64| {
        for _ in 0..40 {
            (a, b) = (0.5 * (a + b), (a * b).sqrt());
        }
        a
    };
    mean(1.0, (1.0 - k * k).sqrt()) / mean(1.0, k)
}

#[test]
fn coupled_stripline_under_a_lid_is_exact() {
    // S. B. Cohn, "Shielded coupled-strip transmission line", IRE Trans. MTT-3, 1955: zero-thickness strips midway between planes b apart, exact.
    let (w, s, b) = (1.4f64, 0.3f64, 2.0f64);
    let text = format!(
        "[[layer]]\npermittivity = 1.0\nloss-tangent = 0\nthickness = \"1 mm\"\n[copper]\nthickness = \"0 um\"\n[[strip]]\nwidth = \"{w} mm\"\n\
         [[strip]]\nwidth = \"{w} mm\"\ngap-before = \"{s} mm\"\n[housing]\nlid = \"1 mm\"\n"
    );
    let json = json(&text, &["--accuracy", "3e-5"]);
    let half_turn = 0.5 * std::f64::consts::PI / b;
    let (own, both) = ((half_turn * w).tanh(), (half_turn * (w + s)).tanh());
    for (mode, k) in [("even", own * both), ("odd", own / both)] {
        let exact = 376.730_313_668 / 4.0 * elliptic_ratio(k);
        // The accuracy asked for, in both C and C0; twice for the sum of two grids' errors.
        assert!((number(&json, &format!("/{mode}/z0_ohm")) / exact - 1.0).abs() < 6e-5, "{mode} {exact} {json}");
    }
}

#[test]
fn stripline_of_two_layers_in_a_shut_box_is_homogeneous() {
    // Coat, walls, lid and several strips in one file. Permittivity 1 everywhere: C L c^2 = 1 exactly, whatever the shape.
    let text = r#"
[[layer]]
permittivity = 1
loss-tangent = 0
thickness = "0.3 mm"
[[layer]]
permittivity = 1
loss-tangent = 0
thickness = "0.2 mm"
[copper]
thickness = "35 um"
[[strip]]
width = "0.5 mm"
[[strip]]
width = "0.7 mm"
gap-before = "0.3 mm"
[[strip]]
width = "0.5 mm"
gap-before = "0.2 mm"
[housing]
lid = "2 mm"
wall = "1 mm"
"#;
    let json = json(text, &["--accuracy", "1e-3"]);
    let at = |name: &str, i: usize, j: usize| number(&json, &format!("/{name}/{i}/{j}"));
    for i in 0..3 {
        for j in 0..3 {
            let product: f64 =
                (0..3).map(|k| at("capacitance_f_per_m", i, k) * at("inductance_h_per_m", k, j)).sum::<f64>() * 299_792_458f64.powi(2);
            assert!((product - if i == j { 1.0 } else { 0.0 }).abs() < 1e-6, "{i} {j} {product}");
        }
    }
    assert!(json.get("even").is_none() && json.get("z0_ohm").is_none());
}

#[test]
fn people_read_matrices_models_and_what_was_assumed() {
    let text = "[[layer]]\npermittivity = 3.0\nthickness = \"0.5 mm\"\n[copper]\nthickness = \"35 um\"\n[[strip]]\nwidth = \"1.2 mm\"\n";
    let done = run(text, &[]).success();
    let said = String::from_utf8(done.get_output().stdout.clone()).unwrap();
    for word in ["pF/m", "nH/m", "numerical cross-section", "closed form differs by", "layer 1 without loss", "smooth foil", "trusted to"] {
        assert!(said.contains(word), "{word} missing in\n{said}");
    }
}

#[test]
fn refuses_with_line_and_column() {
    let good = "[[layer]]\npermittivity = 3.0\nloss-tangent = 0.001\nthickness = \"0.5 mm\"\n[copper]\nthickness = \"35 um\"\n[[strip]]\nwidth = \"1.2 mm\"\n\
                [[strip]]\nwidth = \"1.2 mm\"\ngap-before = \"0.2 mm\"\n[housing]\nlid = \"3 mm\"\nwall = \"2 mm\"\n";
    run(good, &[]).success();
    for (from, to, code, place) in [
        ("gap-before = \"0.2 mm\"", "gap-before = \"-0.2 mm\"", "strip-overlap", ":11:14"),
        ("gap-before = \"0.2 mm\"", "gap-before = \"0 mm\"", "strip-overlap", ":11:14"),
        ("gap-before = \"0.2 mm\"", "", "key-missing", ":9:"),
        ("wall = \"2 mm\"", "wall = \"-1 mm\"", "strip-outside-wall", ":14:8"),
        ("lid = \"3 mm\"", "lid = \"30 um\"", "lid-below-strip", ":13:7"),
        ("thickness = \"0.5 mm\"", "thickness = \"0 mm\"", "layer-thickness", ":4:13"),
        ("thickness = \"0.5 mm\"", "thickness = 0.5", "unit-missing", ":4:13"),
        ("permittivity = 3.0", "permittivity = 0.3", "layer-permittivity", ":2:16"),
        ("permittivity = 3.0", "permitivity = 3.0", "key-unknown", ":2:1"),
        ("thickness = \"35 um\"", "thickness = \"-35 um\"", "copper-thickness", ":6:13"),
        ("thickness = \"35 um\"", "thickness = \"35 um\"\nundercut = \"0.7 mm\"", "undercut-exceeds-strip", ":9:9"),
        ("wall = \"2 mm\"", "wall = \"5 m\"", "section-aspect", ""),
        ("[copper]\nthickness = \"35 um\"\n", "", "key-missing", "copper"),
    ] {
        let done = run(&good.replacen(from, to, 1), &[]).code(2);
        let said = String::from_utf8_lossy(&done.get_output().stderr).into_owned();
        assert!(said.contains(code) && said.contains(place), "{to}: {code} {place} missing in\n{said}");
        assert!(done.get_output().stdout.is_empty());
    }
    let done = run("nonsense", &[]).code(2);
    assert!(String::from_utf8_lossy(&done.get_output().stderr).contains("not-toml"));
    run(good, &["--laminate", "ceramic-ptfe-3.0"]).code(2);
    run(good, &["--accuracy", "1e-9"]).code(2);
}
