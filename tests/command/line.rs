//! `stripwright line`: analysis, its inverse, and what it refuses.

use assert_cmd::Command;
use serde_json::Value;

fn line(arguments: &[&str]) -> assert_cmd::assert::Assert {
    Command::cargo_bin("stripwright").unwrap().arg("line").args(arguments).assert()
}

fn json(arguments: &[&str]) -> Value {
    let done = line(&[arguments, &["--json", "--quiet"]].concat()).success();
    serde_json::from_slice(&done.get_output().stdout).unwrap()
}

/// A class every installation has, made into the exact board of the published rows.
const THIN: [&str; 8] = ["--laminate", "ceramic-ptfe-3.0", "--permittivity", "3.0", "--thickness", "1 mm", "--copper", "0 um"];

#[test]
fn strip_has_the_exact_static_impedance() {
    // Exact static solution, thin strip, er 3.0, w/h 2.5: 50.162176 ohm, 2.4261309; the solver's own claim is 1e-4 and better for sheets.
    let json = json(&[&THIN[..], &["--width", "2.5 mm"]].concat());
    assert!((json["z0_ohm"].as_f64().unwrap() / 50.162176 - 1.0).abs() < 1e-4, "{json}");
    assert!((json["eps_eff"].as_f64().unwrap() / 2.4261309 - 1.0).abs() < 1e-4, "{json}");
    assert!(json["conductor_loss_db_per_m"].as_f64().unwrap() > 0.0 && json["dielectric_loss_db_per_m"].as_f64().unwrap() > 0.0);
}

#[test]
fn pair_has_the_exact_static_impedances_and_its_inverse_finds_it() {
    // Exact static solution, thin pair, er 3.0, w/h 2.0, s/h 0.2: 70.38658 and 38.86396 ohm; the solver's own claim is 1e-4 and better for sheets.
    let there = json(&[&THIN[..], &["--width", "2 mm", "--gap", "0.2 mm"]].concat());
    let [even, odd] = ["even", "odd"].map(|mode| there[mode]["z0_ohm"].as_f64().unwrap());
    assert!((even / 70.38658 - 1.0).abs() < 1e-4 && (odd / 38.86396 - 1.0).abs() < 1e-4, "{there}");
    assert!((there["coupling"].as_f64().unwrap() - (even - odd) / (even + odd)).abs() < 1e-12);
    let back = json(&[&THIN[..], &["--even", &format!("{even} ohm"), "--odd", &format!("{odd} ohm")]].concat());
    // The inverse stops at 1e-7 of coupling and impedance, and shortest decimals lose nothing.
    assert!((back["width_m"].as_f64().unwrap() / 2e-3 - 1.0).abs() < 1e-6 && (back["gap_m"].as_f64().unwrap() / 0.2e-3 - 1.0).abs() < 1e-6);
}

#[test]
fn impedance_is_found_at_the_frequency_asked_for() {
    let json = json(&["--laminate", "ceramic-ptfe-3.0", "--impedance", "50 ohm", "--at", "10 GHz"]);
    assert!((json["z0_ohm"].as_f64().unwrap() - 50.0).abs() < 1e-6, "{json}");
    assert!(json["static_eps_eff"].as_f64().unwrap() < json["eps_eff"].as_f64().unwrap());
    assert_eq!(json["frequency_hz"], 10e9);
}

#[test]
fn people_read_units_and_models() {
    let done = line(&["--laminate", "ceramic-ptfe-3.0", "--width", "1.9 mm", "--gap", "0.3 mm", "--at", "2.45 GHz"]).success();
    let text = String::from_utf8(done.get_output().stdout.clone()).unwrap();
    for word in [
        "ohm",
        "dB/m",
        "mm",
        "numerical cross-section",
        "closed form differs by",
        "Kirschning & Jansen 1984",
        "2.4500 GHz",
        "coupling",
        "trusted to",
    ] {
        assert!(text.contains(word), "{word} missing in\n{text}");
    }
}

#[test]
fn warns_outside_the_range_of_the_model() {
    // 0.762 mm thick: the dispersion law ends at 0.13 wavelengths, 51 GHz.
    let fast = ["--laminate", "ceramic-ptfe-3.0", "--width", "1.9 mm", "--at", "60 GHz", "--json"];
    let done = line(&fast).success();
    assert!(String::from_utf8_lossy(&done.get_output().stderr).contains("line-model-range"));
    let json: Value = serde_json::from_slice(&done.get_output().stdout).unwrap();
    assert_eq!(json["warnings"][0]["code"], "line-model-range");
}

#[test]
fn refuses_what_no_line_is() {
    let refused = |arguments: &[&str], word: &str| {
        let done = line(&[&["--laminate", "ceramic-ptfe-3.0"], arguments].concat()).code(2);
        let said = String::from_utf8_lossy(&done.get_output().stderr).into_owned();
        assert!(said.contains(word), "{arguments:?}: {word} missing in\n{said}");
        assert!(done.get_output().stdout.is_empty());
    };
    refused(&[], "--width");
    refused(&["--width", "2"], "no unit");
    refused(&["--width", "-2 mm"], "greater than zero");
    refused(&["--width", "NaN mm"], "NaN");
    refused(&["--gap", "0.2 mm"], "--width");
    refused(&["--width", "2 mm", "--impedance", "50 ohm"], "cannot be used with");
    refused(&["--even", "60 ohm"], "--odd");
    refused(&["--even", "40 ohm", "--odd", "60 ohm"], "not above the odd");
    refused(&["--impedance", "400 ohm"], "lower impedance");
    refused(&["--even", "400 ohm", "--odd", "4 ohm"], "coupling");
    refused(&["--width", "2 mm", "--permittivity", "0.5"], "1 or more");
    refused(&["--width", "2 mm", "--at", "0 GHz"], "greater than zero");
    let done = line(&["--laminate", "ceramic-ptfe-3", "--width", "2 mm"]).code(2);
    let said = String::from_utf8_lossy(&done.get_output().stderr).into_owned();
    assert!(said.contains("ceramic-ptfe-3.0"), "the nearest class is named: {said}");
}
